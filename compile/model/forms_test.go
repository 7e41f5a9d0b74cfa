package model

import (
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// bentBees has an arrow of every form.
func bentBees() *study.Study {
	s := hedgerows()
	s.Variable("soil").Scale = study.Ordered
	d := s.Rivals[0].Diagram
	for _, a := range d.Arrows {
		switch a.From + " " + a.To {
		case "hedge bees":
			a.Form, a.VariesBy = study.Threshold, []string{"farm"}
		case "temp bees":
			a.Form = study.Log
		case "hours bees":
			a.Form = study.Saturating
		case "soil flowers":
			a.Form = study.OneWay
		}
	}
	return s
}

// one is a study of a single arrow x → y with a form; y is real on 0 to 10.
func one(form string, x study.Variable) *study.Study {
	x.ID = "x"
	s := sheet([]*study.Variable{&x, {ID: "y", Scale: study.Real, Range: &study.Range{Low: 0, High: 10}}}, "x -> y", nil)
	s.Rivals[0].Diagram.Arrows[0].Form = form
	return s
}

// stated builds a study without data, which has a statement and no fit.
func stated(t *testing.T, s *study.Study) *Model {
	t.Helper()
	m, problems := Build(s, "R", study.Question{}, nil, Full)
	if m == nil {
		t.Fatal(problems)
	}
	return m
}

func ranged(scale study.Scale, low, high float64) study.Variable {
	return study.Variable{Scale: scale, Range: &study.Range{Low: low, High: high}}
}

// The bent forms as they are printed and typed, with what is said of priors.
// The sds are worked out by hand from SEMANTICS C3 with W = 10, k = 1.
func TestForms(t *testing.T) {
	sd := 10 / 1.96
	for _, c := range []struct {
		form      string
		x         study.Variable
		predictor string
		sd        float64
		why       string
	}{
		{study.Log, ranged(study.Positive, 4, 100), "alpha_y + beta_x_y * log(x / 20)", sd / math.Log(25), "1 parent; range of y 0–10; range of x 4–100 on the log scale"},
		{study.Log, ranged(study.Positive, 0, 100), "alpha_y + beta_x_y * log(x / 10)", sd / math.Log(100), "1 parent; range of y 0–10; range of x 0–100 read as 1–100 on the log scale"},
		{study.Threshold, ranged(study.Real, -2, 8), "alpha_y + beta_x_y * (max(0, x - theta_x_y) - max(0, 3 - theta_x_y))", sd * math.Sqrt(3) / 10, "1 parent; range of y 0–10; the threshold lies anywhere in the range of x"},
		{study.Saturating, ranged(study.Count, 0, 8), "alpha_y + beta_x_y * (x / (x + half_x_y) - 4 / (4 + half_x_y))", sd * math.Sqrt2, "1 parent; range of y 0–10; half of it is reached anywhere in the range of x"},
		{study.OneWay, study.Variable{Scale: study.Ordered, Levels: []string{"low", "middle", "high"}}, "alpha_y + beta_x_y * (share_x_y of x - 0.5)", sd, "1 parent; range of y 0–10; of the change from the first level of x to the last"},
	} {
		m := stated(t, one(c.form, c.x))
		if got := formula.Format(m.Laws[0].Predictors[0]); got != c.predictor {
			t.Errorf("%s: %s, want %s", c.form, got, c.predictor)
		}
		beta := parameter(t, m, "beta_x_y")
		near4(t, c.form, arg(t, beta, 1), c.sd)
		if beta.Why != c.why {
			t.Errorf("%s: why %q, want %q", c.form, beta.Why, c.why)
		}
	}
}

// SEMANTICS C3 by prior simulation: for each form, as the parent crosses its
// plausible range the predictor moves with sd W/(1.96 √k), whatever the range.
// 40,000 draws leave 0.4 % of an sd (0.6 % for the heavier tails of a product);
// the tolerance is 2 %.
func TestFormsMoveByTheRule(t *testing.T) {
	levels := study.Variable{Scale: study.Ordered, Levels: []string{"none", "little", "some", "much"}}
	for _, c := range []struct {
		form      string
		x         study.Variable
		low, high float64
	}{
		{study.Slope, ranged(study.Real, -2, 8), -2, 8},
		{study.Log, ranged(study.Positive, 4, 100), 4, 100},
		{study.Log, ranged(study.Positive, 0, 50), 0.5, 50},
		{study.Threshold, ranged(study.Real, -2, 8), -2, 8},
		{study.Saturating, ranged(study.Positive, 0, 8), 0, 8},
		{study.Saturating, ranged(study.Positive, 5, 80), 5, 80},
		{study.OneWay, levels, 0, 3},
	} {
		s := one(c.form, c.x)
		s.Variables = append(s.Variables, &study.Variable{ID: "z", Scale: study.Binary, Levels: []string{"no", "yes"}})
		d := s.Rivals[0].Diagram
		d.Nodes = append(d.Nodes, &study.Node{Variable: "z"})
		d.Arrows = append(d.Arrows, &study.Arrow{From: "z", To: "y"})
		m := stated(t, s)
		term := m.Laws[0].Terms[1]
		if m.Variables[term.Variable].ID != "x" {
			t.Fatal("the second term is not of x")
		}
		src := rand.New(rand.NewPCG(11, 3))
		const n = 40000
		total := 0.0
		for range n {
			values := priorDraw(t, m, term, src)
			at := func(x float64) float64 { return Evaluate(term.Part, values(x)) }
			move := at(c.high) - at(c.low)
			total += move * move
		}
		want := 10 / (1.96 * math.Sqrt2)
		if got := math.Sqrt(total / n); math.Abs(got/want-1) > 0.02 {
			t.Errorf("%s over %v to %v moves y with sd %.3f, want %.3f", c.form, c.low, c.high, got, want)
		}
		if mid := Evaluate(term.Part, priorDraw(t, m, term, src)(term.Center)); c.form != study.OneWay && math.Abs(mid) > 1e-12 {
			t.Errorf("%s is %v at the middle, %v, not 0", c.form, mid, term.Center)
		}
	}
}

// priorDraw draws a term's parameters from their priors, which are normal or
// uniform, or shares that rise from 0 to 1: sorted uniform numbers.
func priorDraw(t *testing.T, m *Model, term Term, src *rand.Rand) func(x float64) func(formula.Expr) float64 {
	scalars, vectors := make(map[string]float64), make(map[string][]float64)
	for _, i := range term.Parameters {
		p := m.Parameters[i]
		switch {
		case p.Shape == Rising:
			v := make([]float64, p.Size)
			for k := 1; k < p.Size-1; k++ {
				v[k] = src.Float64()
			}
			v[p.Size-1] = 1
			slices.Sort(v)
			vectors[p.Name] = v
		case p.Prior.Family.Name == "uniform":
			scalars[p.Name] = arg(t, p, 0) + (arg(t, p, 1)-arg(t, p, 0))*src.Float64()
		default:
			scalars[p.Name] = arg(t, p, 0) + arg(t, p, 1)*src.NormFloat64()
		}
	}
	return func(x float64) func(formula.Expr) float64 {
		return func(e formula.Expr) float64 {
			switch e := e.(type) {
			case *formula.Of:
				return vectors[e.Vector.ID][int(x)]
			case *formula.Name:
				if v, ok := scalars[e.ID]; ok {
					return v
				}
				return x
			}
			return math.NaN()
		}
	}
}

// The shares' prior is the one of SEMANTICS C4: Dirichlet(1) shares of the rise.
// The j-th of the sorted uniforms then has mean j/(K − 1); Bürkner & Charpentier
// 2020, Br. J. Math. Stat. Psychol. 73, 420–451, section 2, from memory.
func TestSharesOfARise(t *testing.T) {
	m := stated(t, one(study.OneWay, study.Variable{Scale: study.Ordered, Levels: []string{"a", "b", "c", "d"}}))
	p := parameter(t, m, "share_x_y")
	if p.Shape != Rising || p.Size != 4 || p.Prior.Family != nil || p.Symbol != "share_x→y" {
		t.Errorf("%+v", p)
	}
	var line string
	for _, l := range m.Statement().Lines {
		if l.Parameter == "share_x_y" {
			line = l.Right
		}
	}
	if line != "from 0 at a to 1 at d, the rises between levels Dirichlet, all 1" {
		t.Errorf("the statement says %q", line)
	}
}

// A form that a parent cannot take is refused with the reason, and the repair
// gives a model.
func TestFormsRefused(t *testing.T) {
	positive := ranged(study.Positive, 0, 10)
	ordered := study.Variable{Scale: study.Ordered, Levels: []string{"a", "b", "c"}}
	category := study.Variable{Scale: study.Category, Levels: []string{"a", "b", "c"}}
	binary := study.Variable{Scale: study.Binary, Levels: []string{"no", "yes"}}
	for _, c := range []struct {
		form  string
		x     study.Variable
		says  string
		first string // label of the first repair
	}{
		{study.Log, ranged(study.Real, -1, 10), "x → y: the log of x exists only where x is positive, but its plausible range is −1 to 10.", "Use a slope"},
		{study.Log, ranged(study.Count, 0, 10), "x → y: the log of x exists only where x is positive, but its plausible range is 0–10.", "Use a slope"},
		{study.Log, ordered, "x → y: the form “log” needs a number, and x is ordered.", "Use a slope"},
		{study.Saturating, ranged(study.Real, -1, 10), "x → y: the form “saturating” needs x to be 0 or more, but its plausible range is −1 to 10.", "Use a slope"},
		{study.Threshold, binary, "x → y: the form “threshold” needs a number, and x is binary.", "Use a slope"},
		{study.OneWay, positive, "x → y: one-way steps need ordered levels, and x is a positive number.", "Use a slope"},
		{study.OneWay, binary, "x → y: x has two levels, so that one-way steps are a plain slope.", "Use a slope"},
		{study.OneWay, category, "x → y: one-way steps need ordered levels, and x is a category.", "Use plain steps"},
		{study.Log, category, "x → y: x is a category and acts by steps, not by the form “log”.", "Use plain steps"},
	} {
		s := one(c.form, c.x)
		m, problems := Build(s, "R", study.Question{}, nil, Full)
		i := slices.IndexFunc(problems, func(p Problem) bool { return p.Code == "form" })
		if i < 0 || !Stops(problems) {
			t.Errorf("%s of %s: no problem, model %v", c.form, c.x.Scale, m != nil)
			continue
		}
		p := problems[i]
		if p.Message != c.says {
			t.Errorf("%s of %s: %q, want %q", c.form, c.x.Scale, p.Message, c.says)
		}
		if p.Repairs[0].Label != c.first {
			t.Errorf("%s of %s: repair %q, want %q", c.form, c.x.Scale, p.Repairs[0].Label, c.first)
		}
		next, err := p.Repairs[0].Edit.Apply(s)
		if err != nil {
			t.Fatal(err)
		}
		stated(t, next)
	}
}

// What data and laws say of a parent counts like its range.
func TestLogOfWhatCanBeZero(t *testing.T) {
	says := func(s *study.Study, tab *table.Table) string {
		_, problems := Build(s, "R", study.Question{}, tab, Full)
		for _, p := range problems {
			if p.Code == "form" {
				return p.Message
			}
		}
		return ""
	}
	s := one(study.Log, study.Variable{Scale: study.Real, Column: "x", Range: &study.Range{Low: 1, High: 9}})
	s.Variable("y").Column = "y"
	tab := newTable("d", 4)
	numbers(tab, "x", 2, 4, 0, 8)
	numbers(tab, "y", 1, 3, 2, 5)
	if got, want := says(s, tab), "x → y: the log of x exists only where x is positive, but its smallest value is 0 (row 3)."; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	set(tab, "x", 2, 3)
	if got := says(s, tab); got != "" {
		t.Errorf("refused: %s", got)
	}
	// With a law of its own x can be simulated, and a normal law gives anything.
	s.Variables = append(s.Variables, &study.Variable{ID: "z", Scale: study.Real, Range: &study.Range{Low: 0, High: 1}, Column: "y"})
	d := s.Rivals[0].Diagram
	d.Nodes = append(d.Nodes, &study.Node{Variable: "z"})
	d.Arrows = append(d.Arrows, &study.Arrow{From: "z", To: "x"})
	if got, want := says(s, tab), "x → y: the log of x exists only where x is positive, but its law, normal, can give 0 or less."; got != want {
		t.Errorf("%q, want %q", got, want)
	}
	_, problems := Build(s, "R", study.Question{}, tab, Full)
	s, err := problems[slices.IndexFunc(problems, func(p Problem) bool { return p.Code == "form" })].Repairs[1].Edit.Apply(s)
	if err != nil || s.Variable("x").Scale != study.Positive {
		t.Fatalf("not taken as positive: %v", err)
	}
	if got := says(s, tab); got != "" {
		t.Errorf("refused: %s", got)
	}
}

// Group means close paths for slopes and steps; a law that compares within
// farms refuses what they are not known to close.
func TestFormsWithinGroups(t *testing.T) {
	s := hedgerows()
	s.Rivals[0].Diagram.Arrow("temp", "bees").Form = study.Log
	q := withinFarms()
	q.Held = append(q.Held, "temp")
	_, problems := Build(s, "R", q, traps(), Held)
	want := "temp → bees: the law of bees compares within groups by group means, which this version knows for slopes and steps, not for the form “log”."
	i := slices.IndexFunc(problems, func(p Problem) bool { return p.Message == want })
	if i < 0 {
		t.Fatalf("not refused: %v", problems)
	}
	next, err := problems[i].Repairs[0].Edit.Apply(s)
	if err != nil {
		t.Fatal(err)
	}
	build(t, next, q, traps(), Held)
}

// A question cannot set what a log reads to 0.
func TestLogOfASetting(t *testing.T) {
	s := one(study.Log, study.Variable{Scale: study.Positive, Column: "x", Range: &study.Range{Low: 0, High: 9}})
	s.Variable("y").Column = "y"
	tab := newTable("d", 4)
	numbers(tab, "x", 2, 4, 1, 8)
	numbers(tab, "y", 1, 3, 2, 5)
	_, problems := Build(s, "R", study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{}, To: &study.Setting{Number: 4}}, tab, Full)
	if i := slices.IndexFunc(problems, func(p Problem) bool { return p.Message == "x cannot be 0: y reads its log." }); i < 0 {
		t.Errorf("not said: %v", problems)
	}
}

// SEMANTICS H: the typed form of a law with every form, typed as its formula, is
// the same model; and so is what "Add the term" types, up to its centring.
func TestFormsRoundTrip(t *testing.T) {
	s := bentBees()
	m := build(t, s, beesQuestion(), traps(), Full)
	for _, id := range []string{"bees", "flowers"} {
		typed := typedFormula(t, m, id)
		next := bentBees()
		node := next.Rivals[0].Diagram.Node(id)
		own := study.Law{}
		if node.Law != nil {
			own = *node.Law
		}
		own.Formula = typed
		node.Law = &own
		again := build(t, next, beesQuestion(), traps(), Full)
		if got := typedFormula(t, again, id); got != typed {
			t.Errorf("%s: typed %s\ngives %s", id, typed, got)
		}
		for _, p := range m.Parameters {
			q := parameter(t, again, p.Name)
			if p.Prior.Family != nil && (q.Prior.Family != p.Prior.Family || formula.Format(q.Prior.Arguments[0]) != formula.Format(p.Prior.Arguments[0]) || formula.Format(q.Prior.Arguments[len(q.Prior.Arguments)-1]) != formula.Format(p.Prior.Arguments[len(p.Prior.Arguments)-1])) {
				t.Errorf("%s: the prior of %s differs once typed", id, p.Name)
			}
		}
	}
	law(s, "bees").Formula = "log rate = alpha_bees by farm"
	law(s, "flowers").Formula = "logit mu = alpha_flowers + beta_hedge_flowers * hedge"
	for range 6 {
		_, problems := Build(s, "R", beesQuestion(), traps(), Full)
		i := slices.IndexFunc(problems, func(p Problem) bool { return p.Code == "unused-arrow" })
		if i < 0 {
			break
		}
		next, err := problems[i].Repairs[0].Edit.Apply(s)
		if err != nil {
			t.Fatal(err)
		}
		s = next
	}
	got := typedFormula(t, build(t, s, beesQuestion(), traps(), Full), "bees")
	for _, part := range []string{"beta_hedge_bees * max(0, hedge - theta_hedge_bees)", "beta_temp_bees * log temp", "beta_hours_bees * hours / (hours + half_hours_bees)"} {
		if !strings.Contains(got, part) {
			t.Errorf("%s\nlacks %s", got, part)
		}
	}
	if got := law(s, "flowers").Formula; !strings.Contains(got, "beta_soil_flowers * (share_soil_flowers of soil - 0.5)") {
		t.Errorf("flowers: %s", got)
	}
}

// typedFormula is the formula of one law in the typed statement.
func typedFormula(t *testing.T, m *Model, id string) string {
	t.Helper()
	lines := m.Statement().Typed
	for i, line := range lines {
		if strings.HasPrefix(line, id+" ~ ") {
			return lines[i+1]
		}
	}
	t.Fatalf("no law of %s", id)
	return ""
}

// A product takes a log as it is, and is refused for what has parameters inside.
func TestProductsOfForms(t *testing.T) {
	s := bentBees()
	a := s.Rivals[0].Diagram.Arrow("temp", "bees")
	a.With = []string{"flowers"}
	m := build(t, s, beesQuestion(), traps(), Full)
	if got := typedFormula(t, m, "bees"); !strings.Contains(got, "beta_temp_flowers_bees * log(temp / 16.12) * (flowers - 0.3)") {
		t.Errorf("%s", got)
	}
	a.With = []string{"hedge"}
	_, problems := Build(s, "R", beesQuestion(), traps(), Full)
	if i := slices.IndexFunc(problems, func(p Problem) bool {
		return p.Message == "hedge → bees is of the form “threshold”, of which this version knows no product."
	}); i < 0 {
		t.Errorf("not refused: %v", problems)
	}
}

// The band of a term's prior against closed forms: a slope is normal around 0;
// of one-way steps the middle level of three is 2u − 1 halves of a normal.
// 20,000 draws leave about 1 % of the interval's width.
func TestPriorBand(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	const draws = 20000
	m := stated(t, one(study.Slope, ranged(study.Real, 0, 4)))
	term := m.Laws[0].Terms[1]
	values, ok := m.PriorValues(term, draws, rng)
	if !ok {
		t.Fatal("no draws")
	}
	b, ok := m.Band(term, m.Places(term, 5), 0.9, draws, values)
	if !ok || len(b.X) != 5 || b.X[4] != 4 {
		t.Fatalf("%+v", b)
	}
	half := 1.6449 * 10 / 1.96 / 2 // at either end, 2 from the middle of 4
	for i, want := range []float64{half, half / 2, 0, half / 2, half} {
		if math.Abs(b.High[i]-want) > 0.1 || math.Abs(b.Low[i]+want) > 0.1 || math.Abs(b.Middle[i]) > 0.1 {
			t.Errorf("at %v: %.2f to %.2f, want ±%.2f", b.X[i], b.Low[i], b.High[i], want)
		}
	}
	m = stated(t, one(study.OneWay, study.Variable{Scale: study.Ordered, Levels: []string{"a", "b", "c"}}))
	term = m.Laws[0].Terms[1]
	values, _ = m.PriorValues(term, draws, rng)
	b, _ = m.Band(term, m.Places(term, 50), 0.9, draws, values)
	if len(b.X) != 3 || math.Abs(b.High[2]-half) > 0.1 || b.High[1] > 0.8*b.High[2] {
		t.Errorf("%+v", b)
	}
	m = stated(t, one(study.Log, ranged(study.Positive, 0, 100)))
	if x := m.Places(m.Laws[0].Terms[1], 40); x[0] != 1 || x[len(x)-1] != 100 {
		t.Errorf("a log is shown over %v", x)
	}
}
