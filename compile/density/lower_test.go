package density

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/diff/fd"
	"gonum.org/v1/gonum/mat"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// cases are small models that together have every family, shape, level and
// transform.
func cases(t *testing.T) map[string]*model.Model {
	one := func(family string, scale study.Scale, values []float64, predictor string, more ...func(*sketch) string) *model.Model {
		s := newSketch(t, len(values))
		s.variable("x", study.Real, -1, 1, -0.5, 0.25, 2, -1, 0.5)
		s.variable("y", scale, -1, values...)
		s.variable("n", study.Count, -1, 9, 4, 12, 5, 7, 8)
		s.parameter("alpha_y", catalog.Reals, "normal", "0.5", "2")
		s.parameter("beta_x_y", catalog.Reals, "normal", "0", "0.1")
		var args []string
		for _, f := range more {
			args = append(args, f(s))
		}
		s.law("y", family, []string{predictor}, args...)
		return s.m
	}
	line := "alpha_y + beta_x_y * (x - 0.5)"
	spread := func(s *sketch) string {
		s.parameter("sigma_y", catalog.Positives, "half-normal", "3")
		return "sigma_y"
	}
	inverse := func(s *sketch) string {
		s.parameter("k_y", catalog.Positives, "half-normal", "1").Prior.On = model.InverseRoot
		return "k_y"
	}
	precision := func(s *sketch) string {
		s.parameter("kappa_y", catalog.Positives, "uniform", "0", "1").Prior.On = model.InverseRootPlus
		return "kappa_y"
	}
	reals, positives := []float64{0.3, -1, 2, 0.1, 1.5, -0.7}, []float64{0.3, 1, 2, 0.1, 1.5, 4}
	shares, counts, bits := []float64{0.3, 0.1, 0.9, 0.5, 0.02, 0.7}, []float64{0, 4, 2, 1, 7, 3}, []float64{0, 1, 1, 0, 1, 0}
	out := map[string]*model.Model{
		"normal": one("normal", study.Real, reals, line, spread),
		"student": one("Student t", study.Real, reals, line, spread, func(s *sketch) string {
			s.parameter("nu_y", catalog.Positives, "gamma", "20", "2")
			return "nu_y"
		}),
		"log-normal":  one("log-normal", study.Positive, positives, line, spread),
		"gamma":       one("gamma", study.Positive, positives, line, inverse),
		"exponential": one("exponential", study.Positive, positives, line),
		"beta":        one("beta", study.Proportion, shares, line, precision),
		"Bernoulli":   one("Bernoulli", study.Binary, bits, line),
		"binomial":    one("binomial", study.Count, counts, line, func(*sketch) string { return "n" }),
		"Poisson":     one("Poisson", study.Count, counts, line+" + log n"),
		"negative binomial": one("negative binomial", study.Count, counts, line+" + log n",
			inverse),
		"typed": one("normal", study.Real, reals, "alpha_y * exp(-beta_x_y * x) + sqrt n / 3 - abs(x)^1.5 + min(x, 1) * inverse logit(alpha_y)",
			spread),
		"data-dependent sd": one("normal", study.Real, reals, line, func(*sketch) string { return "n / 4" }),
	}

	s := newSketch(t, 4)
	s.variable("y", study.Positive, -1, 0.5, 2, 1, 0.1)
	s.parameter("scale", catalog.Positives, "half-t", "2", "4")
	s.law("y", "half-normal", nil, "scale")
	out["half-normal law"] = s.m

	s = newSketch(t, 4)
	s.variable("y", study.Positive, -1, 0.5, 2, 1, 0.1)
	s.parameter("top", catalog.Positives, "exponential", "3")
	s.law("y", "uniform", nil, "-1", "2.5 + top")
	out["uniform law"] = s.m

	s = newSketch(t, 6)
	s.variable("x", study.Real, -1, reals...)
	s.variable("crop", study.Category, -1, 0, 1, 2, 2, 1, 0)
	s.vector("alpha_crop", model.ZeroSum, 3, "normal", "0", "1.5")
	s.vector("beta_x_crop", model.ZeroSum, 3, "normal", "0", "0.4")
	var predictors []formula.Expr
	for k := range 3 {
		entry := func(name string) formula.Expr {
			return &formula.Element{Vector: &formula.Name{ID: name}, At: k}
		}
		predictors = append(predictors, &formula.Binary{Op: '+', X: entry("alpha_crop"),
			Y: &formula.Binary{Op: '*', X: entry("beta_x_crop"), Y: &formula.Name{ID: "x"}}})
	}
	s.law("crop", "categorical", nil).Predictors = predictors
	out["categorical"] = s.m

	s = newSketch(t, 6)
	s.variable("x", study.Real, -1, reals...)
	s.variable("soil", study.Category, -1, 0, 1, 2, 2, 1, 0)
	s.variable("grade", study.Ordered, -1, 0, 1, 3, 2, 1, 0)
	s.vector("cut_grade", model.Cuts, 3, "")
	s.parameter("beta_x_grade", catalog.Reals, "normal", "0", "1")
	s.vector("step_soil_grade", model.ZeroSum, 3, "Student t", "0", "0.7", "5")
	s.law("grade", "ordered", []string{"beta_x_grade * x + step_soil_grade of soil"}).Cutpoints = "cut_grade"
	out["ordered"] = s.m

	s = newSketch(t, 6)
	s.variable("dose", study.Ordered, -1, 0, 1, 2, 2, 1, 0)
	s.variable("y", study.Real, -1, reals...)
	s.parameter("rise", catalog.Reals, "normal", "0", "2")
	s.vector("share", model.Simplex, 3, "")
	s.parameter("p", catalog.Unit, "beta", "0.3", "5")
	s.parameter("w", catalog.Reals, "uniform", "-2", "5")
	s.parameter("lift", catalog.Positives, "normal", "1", "2")
	s.vector("free", model.Vector, 3, "log-normal", "1.5", "0.5")
	s.law("y", "normal", []string{"rise * (share of dose) + p * w + free of dose"}, "lift")
	out["other shapes"] = s.m

	s = newSketch(t, 6)
	s.variable("size", study.Ordered, -1, 0, 1, 2, 3, 1, 0)
	s.variable("dose", study.Ordered, -1, 0, 1, 2, 2, 1, 0)
	s.variable("sex", study.Ordered, -1, 0, 1, 0, 1, 1, 0)
	s.variable("x", study.Positive, -1, 0.5, 1, 2, 2.5, 4, 8)
	s.variable("y", study.Real, -1, reals...)
	for _, name := range []string{"a", "b", "c", "d", "e"} {
		s.parameter(name, catalog.Reals, "normal", "0", "2")
	}
	s.vector("share_size", model.Rising, 4, "")
	s.vector("share_dose", model.Rising, 3, "")
	s.vector("share_sex", model.Rising, 2, "")
	s.parameter("theta", catalog.Reals, "uniform", "0.5", "8")
	s.parameter("half", catalog.Positives, "uniform", "0", "8")
	s.parameter("sigma", catalog.Positives, "half-normal", "2")
	s.law("y", "normal", []string{"a * (share_size of size - 0.5) + b * (share_dose of dose - 0.5) + c * (share_sex of sex) + " +
		"d * (max(0, x - theta) - max(0, 4 - theta)) + e * (x / (x + half) - 4 / (4 + half)) + a * log(x / 2)"}, "sigma")
	out["bent forms"] = s.m

	incomplete(t, out)
	for name, centred := range map[string]bool{"by farm": false, "by farm, centred": true} {
		s = newSketch(t, 6)
		farm := s.plate("farm", []int32{0, 0, 1, 1, 2, 2}, "north", "south", "west")
		region := s.plate("region", []int32{0, 0, 0, 0, 1, 1}, "hill", "vale")
		s.variable("x", study.Real, -1, reals...)
		s.variable("size", study.Positive, farm, 12, 30, 7)
		s.variable("rain", study.Real, region, 0.3, -0.2)
		s.variable("bees", study.Count, -1, counts...)
		s.parameter("alpha_bees", catalog.Reals, "normal", "1", "1")
		s.parameter("tau_bees_farm", catalog.Positives, "half-normal", "0.5")
		s.byPlate("alpha_bees_farm", farm, "alpha_bees", "tau_bees_farm", centred)
		s.parameter("beta_x_bees", catalog.Reals, "normal", "0", "0.2")
		s.parameter("tau_x_bees_region", catalog.Positives, "half-normal", "0.1")
		s.byPlate("beta_x_bees_region", region, "beta_x_bees", "tau_x_bees_region", !centred)
		s.byPlate("alpha_bees_region", region, "", "tau_x_bees_region", centred)
		s.law("bees", "Poisson", []string{
			"alpha_bees_farm by farm + alpha_bees_region by region + (beta_x_bees_region by region) * (x - 0.2) + 0.01 * size"})
		// a law at the level of farms reads a coarser variable
		s.parameter("alpha_size", catalog.Reals, "normal", "2", "1")
		s.parameter("beta_rain_size", catalog.Reals, "normal", "0", "1")
		s.parameter("shape_size", catalog.Positives, "half-normal", "1").Prior.On = model.InverseRoot
		s.law("size", "gamma", []string{"alpha_size + beta_rain_size * rain"}, "shape_size")
		// priors that read parameters
		s.parameter("mu", catalog.Reals, "normal", "0", "tau")
		s.parameter("tau", catalog.Positives, "gamma", "1", "2 + 1")
		s.parameter("phi", catalog.Reals, "normal", "mu / 2", "tau")
		out[name] = s.m
	}
	return out
}

// point gives a position of a block that is neither tame nor wild.
func point(rng *rand.Rand, n int) []float64 {
	q := make([]float64, n)
	for i := range q {
		q[i] = 0.7 * rng.NormFloat64()
	}
	return q
}

// The gradient equals finite differences (central, step 1e-5: about 1e-9
// relative), and nothing is allocated.
func TestGradient(t *testing.T) {
	for name, m := range cases(t) {
		d, err := Lower(m)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		rng := rand.New(rand.NewPCG(1, 2))
		for _, b := range d.Blocks {
			e := b.Evaluator()
			for range 3 {
				q := point(rng, b.Dim())
				grad := make([]float64, b.Dim())
				v := e.LogDensity(grad, q)
				if math.IsInf(v, 0) {
					t.Errorf("%s, %s: log density %v (%s)", name, b.Name, v, b.Blame(q))
					continue
				}
				want := fd.Gradient(nil, func(x []float64) float64 { return e.LogDensity(make([]float64, len(x)), x) }, q,
					&fd.Settings{Formula: fd.Central, Step: 1e-5})
				for i := range grad {
					if math.Abs(grad[i]-want[i]) > 2e-6*(1+math.Abs(want[i])) {
						t.Errorf("%s, %s: slope along %s is %.9g, by differences %.9g", name, b.Name, b.where[i], grad[i], want[i])
					}
				}
			}
			q, grad := point(rng, b.Dim()), make([]float64, b.Dim())
			e.LogDensity(grad, q)
			if n := testing.AllocsPerRun(20, func() { e.LogDensity(grad, q) }); n != 0 {
				t.Errorf("%s, %s: %v allocations per evaluation", name, b.Name, n)
			}
		}
	}
}

// The log density equals a plain evaluation of the model: natural kernels of
// laws and priors, row by row, without any transform, plus the Jacobian of the
// measure that the priors are about, found numerically.
func TestAgainstPlainEvaluation(t *testing.T) {
	for name, m := range cases(t) {
		d, err := Lower(m)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		rng := rand.New(rand.NewPCG(3, 4))
		for range 3 {
			draw := make([]float64, len(d.Quantities))
			var qs [][]float64
			got := 0.0
			for _, b := range d.Blocks {
				q := point(rng, b.Dim())
				qs = append(qs, q)
				got += b.Evaluator().LogDensity(make([]float64, len(q)), q)
				natural := make([]float64, len(b.Quantities))
				b.Natural(natural, q)
				for i, at := range b.Quantities {
					draw[at] = natural[i]
				}
			}
			want := plain(m, draw)
			for i, b := range d.Blocks {
				want += jacobian(m, d, b, qs[i], draw)
			}
			if !(math.Abs(got-want) <= 1e-6*(1+math.Abs(want))) {
				t.Errorf("%s: log density %.9g, plain evaluation %.9g", name, got, want)
			}
		}
	}
}

// An environment gives names their values in one draw, at one unit.
type environment struct {
	m      *model.Model
	draw   []float64
	offset map[string]int
	row    int
}

func newEnvironment(m *model.Model, draw []float64) *environment {
	e := &environment{m: m, draw: draw, offset: make(map[string]int)}
	at := 0
	for _, p := range m.Parameters {
		e.offset[p.Name] = at
		at += p.Size
	}
	return e
}

func (e *environment) parameter(name string) (*model.Parameter, []float64) {
	for _, p := range e.m.Parameters {
		if p.Name == name {
			at := e.offset[name]
			return p, e.draw[at : at+p.Size]
		}
	}
	return nil, nil
}

func (e *environment) variable(name string) float64 {
	for i, v := range e.m.Variables {
		if v.ID != name {
			continue
		}
		unit := int32(e.row)
		if v.Plate >= 0 {
			unit = e.m.Plates[v.Plate].Of[e.row]
		}
		if p := e.m.Unknowns(i); p >= 0 && slices.Contains(v.Missing, unit) {
			_, values := e.parameter(e.m.Parameters[p].Name)
			return values[slices.Index(v.Missing, unit)]
		}
		return v.Values[unit]
	}
	return math.NaN()
}

func (e *environment) value(x formula.Expr) float64 {
	switch x := x.(type) {
	case *formula.Number:
		return x.Value
	case *formula.Name:
		if p, values := e.parameter(x.ID); p != nil {
			return values[0]
		}
		return e.variable(x.ID)
	case *formula.By:
		p, values := e.parameter(x.Name.ID)
		return values[e.m.Plates[p.Plate].Of[e.row]]
	case *formula.Of:
		_, values := e.parameter(x.Vector.ID)
		return values[int(e.variable(x.Variable.ID))]
	case *formula.Element:
		_, values := e.parameter(x.Vector.(*formula.Name).ID)
		return values[x.At]
	case *formula.Unary:
		return -e.value(x.X)
	case *formula.Binary:
		a, b := e.value(x.X), e.value(x.Y)
		return map[byte]float64{'+': a + b, '-': a - b, '*': a * b, '/': a / b, '^': math.Pow(a, b)}[x.Op]
	case *formula.Call:
		var args []float64
		for _, a := range x.Args {
			args = append(args, e.value(a))
		}
		return catalog.FunctionByName(x.Function).Value(args)
	}
	return math.NaN()
}

// log is a family's natural log density at one value.
func log(f *catalog.Family, y float64, args []float64) float64 {
	var columns [][]float64
	for _, a := range args {
		columns = append(columns, []float64{a})
	}
	return f.Natural.Block(1, []float64{y}, columns, nil, make([][]float64, len(args)), nil, make([]float64, 4096))
}

// plain is the log density of a draw on natural scales: Σ laws + Σ priors of
// what they are about.
func plain(m *model.Model, draw []float64) float64 {
	e := newEnvironment(m, draw)
	total := 0.0
	for _, p := range m.Parameters {
		_, values := e.parameter(p.Name)
		total += plainPrior(m, e, p, values)
	}
	for _, l := range m.Laws {
		v := m.Variables[l.Variable]
		done := make(map[int32]bool)
		for row := range m.Rows.Used {
			e.row = row
			y := e.variable(v.ID)
			if l.Plate >= 0 {
				unit := m.Plates[l.Plate].Of[row]
				if done[unit] {
					continue
				}
				done[unit] = true
			} else if m.Unknowns(l.Variable) < 0 && slices.Contains(v.Missing, int32(row)) {
				continue
			}
			total += log(l.Family, y, plainArguments(m, e, l))
		}
	}
	return total
}

func plainArguments(m *model.Model, e *environment, l *model.Law) []float64 {
	var args []float64
	logistic := func(x float64) float64 { return 1 / (1 + math.Exp(-x)) }
	switch l.Family.Link {
	case catalog.Softmax:
		total := 0.0
		for _, x := range l.Predictors {
			args = append(args, math.Exp(e.value(x)))
			total += args[len(args)-1]
		}
		for k := range args {
			args[k] /= total
		}
		return args
	case catalog.Cumulate:
		_, cuts := e.parameter(l.Cutpoints)
		below := 0.0
		for _, c := range cuts {
			p := logistic(c - e.value(l.Predictors[0]))
			args = append(args, p-below)
			below = p
		}
		return append(args, 1-below)
	}
	for i := range l.Family.Arguments {
		if len(l.Predictors) == 0 || i != l.Family.Predicted {
			args = append(args, e.value(l.Arguments[i]))
			continue
		}
		eta := e.value(l.Predictors[0])
		switch l.Family.Link {
		case catalog.Log:
			eta = math.Exp(eta)
		case catalog.Logit:
			eta = logistic(eta)
		}
		args = append(args, eta)
	}
	return args
}

func plainPrior(m *model.Model, e *environment, p *model.Parameter, values []float64) float64 {
	var args []float64
	for _, a := range p.Prior.Arguments {
		args = append(args, e.value(a))
	}
	total := 0.0
	switch p.Shape {
	case model.ByPlate:
		mean := 0.0
		if p.Mean != "" {
			_, v := e.parameter(p.Mean)
			mean = v[0]
		}
		_, sd := e.parameter(p.SD)
		for _, x := range values {
			total += log(catalog.FamilyByName("normal"), x, []float64{mean, sd[0]})
		}
		return total
	case model.Unrecorded: // its law is counted with the laws
		return 0
	case model.Simplex:
		total, _ = math.Lgamma(float64(p.Size))
		return total
	case model.Rising: // as many uniform numbers as lie between 0 and 1, in order
		total, _ = math.Lgamma(float64(p.Size - 1))
		return total
	case model.Cuts:
		total, _ = math.Lgamma(float64(p.Size + 1))
		return total
	case model.ZeroSum:
		for _, x := range about(p, values) {
			total += log(p.Prior.Family, x, args)
		}
		return total
	}
	for _, x := range about(p, values) {
		total += log(p.Prior.Family, x, args)
	}
	return total
}

// about is what a prior looks at: functions of the natural values whose
// Lebesgue measure its density refers to.
func about(p *model.Parameter, values []float64) []float64 {
	var out []float64
	switch {
	case p.Shape == model.Simplex:
		return values[:len(values)-1]
	case p.Shape == model.Rising:
		return values[1 : len(values)-1]
	case p.Shape == model.Cuts:
		below := 0.0
		for _, c := range values {
			at := 1 / (1 + math.Exp(-c))
			out = append(out, at-below)
			below = at
		}
		return out
	case p.Shape == model.ZeroSum:
		// √2 times the coordinates by Gram–Schmidt of e1 − e2, e1 + e2 − 2 e3, …
		for j := 1; j < len(values); j++ {
			x := -float64(j) * values[j]
			for i := range j {
				x += values[i]
			}
			out = append(out, math.Sqrt2*x/math.Sqrt(float64(j*(j+1))))
		}
		return out
	}
	for _, x := range values {
		switch p.Prior.On {
		case model.InverseRoot:
			x = 1 / math.Sqrt(x)
		case model.InverseRootPlus:
			x = 1 / math.Sqrt(1+x)
		}
		out = append(out, x)
	}
	return out
}

// jacobian is log |det d about / d q| of a block, by central differences.
func jacobian(m *model.Model, d *Density, b *Block, q, draw []float64) float64 {
	f := func(to, x []float64) {
		natural := make([]float64, len(b.Quantities))
		b.Natural(natural, x)
		full := append([]float64(nil), draw...)
		for i, at := range b.Quantities {
			full[at] = natural[i]
		}
		e := newEnvironment(m, full)
		var all []float64
		for i, p := range m.Parameters {
			if d.Quantities[e.offset[p.Name]].Block == indexOf(d, b) && coordinates(m, m.Parameters[i]) > 0 {
				_, values := e.parameter(p.Name)
				all = append(all, about(p, values)...)
			}
		}
		copy(to, all)
	}
	j := mat.NewDense(b.Dim(), b.Dim(), nil)
	fd.Jacobian(j, f, q, &fd.JacobianSettings{Formula: fd.Central, Step: 1e-5})
	v, _ := mat.LogDet(j)
	return v
}

func indexOf(d *Density, b *Block) int {
	for i := range d.Blocks {
		if d.Blocks[i] == b {
			return i
		}
	}
	return -1
}

// Two laws without a shared parameter are two blocks; a prior that reads
// another parameter joins.
func TestBlocks(t *testing.T) {
	d, err := Lower(cases(t)["by farm"])
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, b := range d.Blocks {
		names = append(names, strings.Join(b.Names, " "))
	}
	want := []string{
		"alpha_bees alpha_bees_farm alpha_bees_region beta_x_bees beta_x_bees_region tau_bees_farm tau_x_bees_region",
		"alpha_size beta_rain_size shape_size",
		"mu phi tau",
	}
	if strings.Join(names, "\n") != strings.Join(want, "\n") {
		t.Errorf("blocks:\n%s", strings.Join(names, "\n"))
	}
	if d.Blocks[0].Name != "bees" || d.Blocks[1].Name != "size" {
		t.Errorf("block names %q and %q", d.Blocks[0].Name, d.Blocks[1].Name)
	}
	if q := d.Quantities[2]; q.Name != "alpha_bees_farm[north]" || q.Entry != "north" || q.Parameter != 2 || q.Block != 0 {
		t.Errorf("quantity: %+v", q)
	}
}

func TestConstants(t *testing.T) {
	s := newSketch(t, 2)
	s.variable("soil", study.Category, -1, 0, 0)
	s.variable("y", study.Real, -1, 1, 2)
	s.vector("step_soil_y", model.ZeroSum, 1, "normal", "0", "1")
	s.parameter("alpha_y", catalog.Reals, "normal", "0", "1")
	s.law("y", "normal", []string{"alpha_y + step_soil_y of soil"}, "1")
	d, err := Lower(s.m)
	if err != nil {
		t.Fatal(err)
	}
	if !d.Quantities[0].Constant || d.Quantities[1].Constant || len(d.Blocks) != 1 || d.Blocks[0].Dim() != 1 {
		t.Errorf("quantities %+v, blocks %d", d.Quantities, len(d.Blocks))
	}
	natural := []float64{9, 9}
	d.Blocks[0].Natural(natural, []float64{0.5})
	if natural[0] != 0 || natural[1] != 0.5 {
		t.Errorf("natural values %v", natural)
	}
}

func TestBlame(t *testing.T) {
	s := newSketch(t, 3)
	s.variable("x", study.Real, -1, 1, 2, 3)
	s.variable("bees", study.Count, -1, 4, 3.5, 1)
	s.parameter("alpha_bees", catalog.Reals, "normal", "0", "1")
	s.law("bees", "Poisson", []string{"alpha_bees"})
	d, err := Lower(s.m)
	if err != nil {
		t.Fatal(err)
	}
	b := d.Blocks[0]
	if got := b.Blame([]float64{0}); got != "the law of bees gives no probability at row 2, where bees is 3.5" {
		t.Errorf("blamed %q", got)
	}
	if v := b.Evaluator().LogDensity(make([]float64, 1), []float64{0}); !math.IsInf(v, -1) {
		t.Errorf("log density %v of an impossible count", v)
	}
	s.m.Variables[1].Values[1] = 3
	if d, err = Lower(s.m); err != nil {
		t.Fatal(err)
	}
	if got := d.Blocks[0].Blame([]float64{0}); got != "" {
		t.Errorf("blamed %q where nothing is wrong", got)
	}
	if v := d.Blocks[0].Evaluator().LogDensity(make([]float64, 1), []float64{math.NaN()}); !math.IsInf(v, -1) {
		t.Errorf("log density %v at NaN", v)
	}
}

func TestFaultsNameTheirPlace(t *testing.T) {
	s := newSketch(t, 2)
	s.variable("y", study.Real, -1, 1, 2)
	s.parameter("sd", catalog.Positives, "normal", "0", "tau")
	s.parameter("tau", catalog.Positives, "exponential", "1")
	s.law("y", "normal", []string{"0"}, "sd")
	if _, err := Lower(s.m); err == nil || !strings.Contains(err.Error(), "sd") || !strings.Contains(err.Error(), "normal reaches beyond") {
		t.Errorf("a cut-off prior with moving arguments: %v", err)
	}
	s = newSketch(t, 2)
	s.variable("y", study.Real, -1, 1, 2)
	s.law("y", "normal", []string{"hedges"}, "1")
	if _, err := Lower(s.m); err == nil || !strings.Contains(err.Error(), "the law of y: there is nothing named hedges") {
		t.Errorf("an unknown name: %v", err)
	}
	s = newSketch(t, 4)
	farm := s.plate("farm", []int32{0, 0, 1, 1}, "north", "south")
	s.variable("size", study.Positive, farm, 1, 0)
	s.variable("x", study.Real, -1, 1, 2, 3, 4)
	s.variable("soil", study.Category, farm, 0, 2)
	s.vector("step", model.ZeroSum, 2, "normal", "0", "1")
	s.parameter("a", catalog.Reals, "normal", "0", "1")
	for predictor, want := range map[string]string{
		"a + x":            "the law of size: a value that differs by row cannot serve each farm",
		"a + step of soil": "the law of size: soil has level 2, but there are 2 entries",
		"a + step":         "the law of size: step has several entries; say which",
		"a by farm":        "the law of size: a does not vary by farm",
		"a + x of soil":    "the law of size: x has no entry for each level of soil",
	} {
		s.m.Laws = nil
		s.law("size", "gamma", []string{predictor}, "2")
		if _, err := Lower(s.m); err == nil || err.Error() != want {
			t.Errorf("%s: %v", predictor, err)
		}
	}
	s.m.Laws = nil
	s.law("size", "gamma", []string{"a"}, "2")
	d, err := Lower(s.m)
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range d.Blocks {
		if b.Name != "size" {
			continue
		}
		if got := b.Blame(make([]float64, b.Dim())); got != "the law of size gives no probability at farm south, where size is 0" {
			t.Errorf("blamed %q", got)
		}
	}

	s = newSketch(t, 2)
	s.parameter("a", catalog.Reals, "normal", "b", "1")
	s.parameter("b", catalog.Reals, "normal", "a", "1")
	if _, err := Lower(s.m); err == nil || !strings.Contains(err.Error(), "depends on itself") {
		t.Errorf("a circle of priors: %v", err)
	}
}
