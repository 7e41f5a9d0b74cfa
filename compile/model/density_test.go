package model_test

import (
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"

	"arrowroot/compile/density"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
)

// A reading of a statement: what its typed form says, parsed from the text
// alone, evaluated with distributions of gonum and not our own.
type reading struct {
	m      *model.Model
	values map[string]float64 // natural parameters: "beta_hedge_bees", "alpha_bees by farm[2]"
	laws   []lawText
	priors []priorText
}

type lawText struct {
	variable string
	phrase   *formula.Phrase
	subject  string
	link     string
	right    formula.Expr
}

type priorText struct {
	left   string
	phrase *formula.Phrase
	about  formula.Expr
	sum0   bool
	rising bool
	plate  string
}

// read parses a typed statement. It fails on laws that cannot be typed
// (comments in place of formulas).
func read(t interface{ Fatalf(string, ...any) }, m *model.Model) (*reading, bool) {
	r := &reading{m: m}
	isVariable := func(id string) bool { v, _ := m.Name(id); return v >= 0 }
	for _, line := range m.Statement().Typed {
		code, comment, _ := strings.Cut(line, "#")
		code = strings.TrimSpace(code)
		if code == "" {
			return nil, false
		}
		left, right, tilde := strings.Cut(code, "~")
		if !tilde { // a formula, or a computed variable's
			p, err := formula.Parse(code)
			if err != nil {
				t.Fatalf("%s: %v", code, err)
			}
			if last := len(r.laws) - 1; !isVariable(p.Subject) && last >= 0 && r.laws[last].right == nil {
				r.laws[last].subject, r.laws[last].link, r.laws[last].right = p.Subject, p.Link, p.Right
			}
			continue
		}
		phrase, err := formula.ParsePhrase(strings.TrimSpace(right))
		if err != nil {
			t.Fatalf("%s: %v", code, err)
		}
		left = strings.TrimSpace(left)
		if isVariable(left) {
			r.laws = append(r.laws, lawText{variable: left, phrase: phrase})
			continue
		}
		p := priorText{left: left, phrase: phrase, sum0: strings.Contains(comment, "sum to 0"), rising: strings.Contains(comment, "rising order")}
		if _, plate, by := strings.Cut(left, " by "); by {
			p.plate = plate
		}
		if p.about, err = formula.ParseExpr(left); err != nil {
			t.Fatalf("%s: %v", left, err)
		}
		r.priors = append(r.priors, p)
	}
	return r, true
}

// value looks a name up for one unit of a plate (-1 = row).
func (r *reading) value(plate, unit int) func(formula.Expr) float64 {
	level := func(of int) int {
		if of == plate || of < 0 {
			return unit
		}
		index, _ := r.m.LevelOf(plate, of)
		return int(index[unit])
	}
	data := func(id string) (float64, bool) {
		v, _ := r.m.Name(id)
		if v < 0 {
			return 0, false
		}
		return r.m.Variables[v].Values[level(r.m.Variables[v].Plate)], true
	}
	return func(e formula.Expr) float64 {
		switch e := e.(type) {
		case *formula.Name:
			if x, ok := data(e.ID); ok {
				return x
			}
			if x, ok := r.values[e.ID]; ok {
				return x
			}
		case *formula.By:
			for i, p := range r.m.Plates {
				if p.Name == e.Plates[0] {
					return r.values[entry(e.Name.ID+" by "+p.Name, level(i))]
				}
			}
		case *formula.Of:
			x, _ := data(e.Variable.ID)
			return r.values[entry(e.Vector.ID, int(x))]
		}
		return math.NaN()
	}
}

func entry(name string, at int) string { return name + "[" + strconv.Itoa(at) + "]" }

// logDensity adds up what the statement says, on the natural scale.
func (r *reading) logDensity() float64 {
	total := 0.0
	for _, l := range r.laws {
		i, _ := r.m.Name(l.variable)
		v := r.m.Variables[i]
		for unit, y := range v.Values {
			value := r.value(v.Plate, unit)
			args := make(map[string]float64)
			for _, a := range l.phrase.Arguments {
				if n, ok := a.Value.(*formula.Name); ok && n.ID == l.subject && l.right != nil {
					eta := model.Evaluate(l.right, value)
					switch l.link {
					case "log":
						eta = math.Exp(eta)
					case "logit":
						eta = 1 / (1 + math.Exp(-eta))
					}
					args[a.Name] = eta
					continue
				}
				args[a.Name] = model.Evaluate(a.Value, value)
			}
			total += logPDF(l.phrase.Family, y, args)
		}
	}
	for _, p := range r.priors {
		value := r.value(-1, 0)
		args := make(map[string]float64)
		for _, a := range p.phrase.Arguments {
			args[a.Name] = model.Evaluate(a.Value, value)
		}
		switch {
		case p.plate != "":
			for i := 0; ; i++ {
				x, ok := r.values[entry(p.left, i)]
				if !ok {
					break
				}
				total += logPDF(p.phrase.Family, x, args)
			}
		case p.rising: // those between the first and the last
			for i := 1; ; i++ {
				if _, more := r.values[entry(p.left, i+1)]; !more {
					break
				}
				total += logPDF(p.phrase.Family, r.values[entry(p.left, i)], args)
			}
		case p.sum0: // differences have sd s: entries = B z, z ~ normal(0, s/√2)
			for i := 0; ; i++ {
				x, ok := r.values[entry(p.left, i)]
				if !ok {
					break
				}
				total -= x * x / (args["sd"] * args["sd"])
			}
		default:
			// The density of what the prior is about, times its derivative.
			name := formula.Names(p.about)[0]
			at := func(x float64) float64 {
				return model.Evaluate(p.about, func(formula.Expr) float64 { return x })
			}
			x := r.values[name]
			h := 1e-5 * math.Max(math.Abs(x), 1e-3)
			total += logPDF(p.phrase.Family, at(x), args) + math.Log(math.Abs(at(x+h)-at(x-h))/(2*h))
		}
	}
	return total
}

// logPDF is from gonum's distuv, and for the negative binomial from its
// textbook form with variance mean + mean²/k.
func logPDF(family string, y float64, a map[string]float64) float64 {
	lgamma := func(x float64) float64 { v, _ := math.Lgamma(x); return v }
	switch family {
	case "normal":
		return distuv.Normal{Mu: a["mean"], Sigma: a["sd"]}.LogProb(y)
	case "half-normal":
		return distuv.Normal{Sigma: a["scale"]}.LogProb(y)
	case "half-t":
		return distuv.StudentsT{Sigma: a["scale"], Nu: a["degrees of freedom"]}.LogProb(y)
	case "Student t":
		return distuv.StudentsT{Mu: a["mean"], Sigma: a["scale"], Nu: a["degrees of freedom"]}.LogProb(y)
	case "uniform":
		return distuv.Uniform{Min: a["low"], Max: a["high"]}.LogProb(y)
	case "gamma":
		return distuv.Gamma{Alpha: a["shape"], Beta: a["shape"] / a["mean"]}.LogProb(y)
	case "beta":
		return distuv.Beta{Alpha: a["mean"] * a["precision"], Beta: (1 - a["mean"]) * a["precision"]}.LogProb(y)
	case "Bernoulli":
		return distuv.Bernoulli{P: a["probability"]}.LogProb(y)
	case "binomial":
		return distuv.Binomial{N: a["trials"], P: a["probability"]}.LogProb(y)
	case "negative binomial":
		m, k := a["mean"], a["overdispersion"]
		return lgamma(y+k) - lgamma(k) - lgamma(y+1) + k*math.Log(k/(k+m)) + y*math.Log(m/(k+m))
	}
	return math.NaN()
}

// natural puts a block's natural values under the names of the typed form.
func (r *reading) natural(d *density.Density, b *density.Block, q []float64) []float64 {
	x := make([]float64, len(b.Quantities))
	b.Natural(x, q)
	for i, at := range b.Quantities {
		quantity := d.Quantities[at]
		p := r.m.Parameters[quantity.Parameter]
		switch p.Shape {
		case model.Scalar:
			r.values[p.Name] = x[i]
		case model.ByPlate:
			r.values[entry(p.Stem+" by "+r.m.Plates[p.Plate].Name, quantity.At)] = x[i]
		default:
			r.values[entry(p.Name, quantity.At)] = x[i]
		}
	}
	return x
}

// free picks the entries of a block that its coordinates determine one to one:
// all but the last of a vector that sums to zero, and of what rises from 0 to 1
// those between.
func free(m *model.Model, d *density.Density, b *density.Block) []int {
	var keep []int
	for i, at := range b.Quantities {
		q := d.Quantities[at]
		p := m.Parameters[q.Parameter]
		if !(p.Shape == model.ZeroSum && q.At == p.Size-1 || p.Shape == model.Rising && (q.At == 0 || q.At == p.Size-1)) {
			keep = append(keep, i)
		}
	}
	return keep
}

// logJacobian is log |d natural / d coordinates| by central differences.
func (r *reading) logJacobian(d *density.Density, b *density.Block, q []float64) float64 {
	keep, n := free(r.m, d, b), b.Dim()
	j := mat.NewDense(n, n, nil)
	at := append([]float64(nil), q...)
	up, down := make([]float64, len(b.Quantities)), make([]float64, len(b.Quantities))
	for c := range n {
		const h = 1e-5
		at[c] = q[c] + h
		b.Natural(up, at)
		at[c] = q[c] - h
		b.Natural(down, at)
		at[c] = q[c]
		for row, i := range keep {
			j.Set(row, c, (up[i]-down[i])/(2*h))
		}
	}
	var lu mat.LU
	lu.Factorize(j)
	det, _ := lu.LogDet()
	return det
}

// The printed statement and the log density that is sampled describe the same
// model: at random points, the density of the typed text
// and the lowered density differ by one constant, the Jacobian counted.
func agree(t interface {
	Fatalf(string, ...any)
}, m *model.Model, seed uint64) bool {
	r, ok := read(t, m)
	if !ok {
		return false
	}
	d, err := density.Lower(m)
	if err != nil {
		t.Fatalf("%v", err)
	}
	src := rand.New(rand.NewPCG(seed, 5))
	first := math.NaN()
	for range 3 {
		r.values = make(map[string]float64)
		lowered, jacobian := 0.0, 0.0
		for _, b := range d.Blocks {
			q := make([]float64, b.Dim())
			for i := range q {
				q[i] = src.Float64()*1.2 - 0.6
			}
			r.natural(d, b, q)
			jacobian += r.logJacobian(d, b, q)
			lowered += b.Evaluator().LogDensity(make([]float64, b.Dim()), q)
		}
		typed := r.logDensity()
		difference := lowered - typed - jacobian
		if math.IsNaN(first) {
			first = difference
		}
		// Central differences of the Jacobian leave about 1e-8 a coordinate.
		if math.IsNaN(difference) || math.Abs(difference-first) > 1e-5*math.Max(1, math.Abs(typed)/100) {
			t.Fatalf("lowered %v, statement %v with Jacobian %v: off by %v\n%s", lowered, typed, jacobian, difference-first, m.Statement())
		}
	}
	return true
}

func TestStatementIsTheDensity(t *testing.T) {
	checked := 0
	for name, m := range model.Specimens(t) {
		t.Run(name, func(t *testing.T) {
			if agree(t, m, 1) {
				checked++
			}
		})
	}
	if checked < 6 {
		t.Errorf("only %d statements could be read", checked)
	}
}

func TestAnyStatementIsTheDensity(t *testing.T) {
	checked := 0
	rapid.Check(t, func(t *rapid.T) {
		s, tab, q := model.AnyStudy(t)
		for _, kind := range []model.Kind{model.Full, model.Held} {
			m, _ := model.Build(s, "R", q, tab, kind)
			if m != nil && agree(t, m, 2) {
				checked++
			}
		}
	})
	t.Logf("%d statements", checked)
}
