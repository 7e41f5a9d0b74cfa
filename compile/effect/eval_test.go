package effect

import (
	"math"
	"math/rand/v2"
	"testing"

	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// Laws are evaluated over rows as model.Evaluate does it one row at a time.
func TestEvalAgainstOneRowAtATime(t *testing.T) {
	s := newSketch(t, 5)
	s.plate("farm", 3, []int32{0, 2, 1, 1, 0})
	s.variable("x", study.Real, []float64{0.3, -1, 2, 0.1, 1.5})
	s.variable("size", study.Real, []float64{1, 0.5, -1}).Plate = 0
	s.variable("soil", study.Category, []float64{2, 0, 1, 1, 2})
	s.parameter("a", 0.7)
	s.vector("step", model.ZeroSum, 0.5, -1.5, 1)
	s.vector("b_farm", model.ByPlate, 0.2, 0.4, -0.3)
	s.parameter("d", -1.2)
	texts := []string{
		"a", "x", "size", "3", "step of soil", "b_farm by farm",
		"a + d * (x - 0.5) - size / 2", "(b_farm by farm) * x + step of soil",
		"exp(a) ^ 2 * x", "min(x, size) + max(x, a)", "-abs(x) ^ 1.5 + sqrt(size ^ 2)",
		"inverse logit(log(2) * x + logit(0.3))", "(x - (size - (a - d))) / (1 + x ^ 2)",
	}
	r := newResolver(s.m)
	rows := rowsOf(s.m, nil, 0)
	for _, text := range texts {
		e := s.parse(text)
		n, err := r.expr(e)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		w := newWorker(rows, r.slots)
		w.draw = s.draw
		got := w.eval(n)
		for row := range 5 {
			want := model.Evaluate(e, func(e formula.Expr) float64 { return look(s, e, row) })
			if x := at(got, row); math.Abs(x-want) > 1e-14*(1+math.Abs(want)) && !(math.IsNaN(x) && math.IsNaN(want)) {
				t.Errorf("%s at row %d: %v, want %v", text, row, x, want)
			}
		}
	}
	if _, err := r.expr(s.parse("a + hedges")); err == nil || err.Error() != "there is nothing named hedges" {
		t.Errorf("an unknown name: %v", err)
	}
}

func look(s *sketch, e formula.Expr, row int) float64 {
	value := func(id string, entry int) float64 {
		at := 0
		for _, p := range s.m.Parameters {
			if p.Name == id {
				return s.draw[at+entry]
			}
			at += p.Size
		}
		v, _ := s.m.Name(id)
		if s.m.Variables[v].Plate >= 0 {
			row = int(s.m.Plates[0].Of[row])
		}
		return s.m.Variables[v].Values[row]
	}
	switch e := e.(type) {
	case *formula.By:
		return value(e.Name.ID, int(s.m.Plates[0].Of[row]))
	case *formula.Of:
		return value(e.Vector.ID, int(value(e.Variable.ID, 0)))
	}
	return value(e.(*formula.Name).ID, 0)
}

// A simulated variable has its law's distribution: means and sds over an even
// grid of uniforms equal those of the catalogue.
func TestSimulateFollowsTheLaw(t *testing.T) {
	const n = 20000
	u := spreadOut(n, 0, 1)
	s := newSketch(t, n)
	s.variable("y", study.Real, u)
	for _, c := range []struct {
		family, predictor string
		more              []string
		natural           []float64
	}{
		{"normal", "1.5", []string{"2"}, []float64{1.5, 2}},
		{"gamma", "0.5", []string{"3"}, []float64{math.Exp(0.5), 3}},
		{"log-normal", "0.2", []string{"0.4"}, []float64{math.Exp(0.2), 0.4}},
		{"beta", "-0.4", []string{"7"}, []float64{logistic(-0.4), 7}},
		{"Bernoulli", "0.3", nil, []float64{logistic(0.3)}},
		{"Poisson", "1.2", nil, []float64{math.Exp(1.2)}},
		{"negative binomial", "1.2", []string{"2.5"}, []float64{math.Exp(1.2), 2.5}},
		{"binomial", "0.6", []string{"12"}, []float64{logistic(0.6), 12}},
	} {
		s.m.Laws = nil
		l := s.law("y", c.family, c.predictor, c.more...)
		r := newResolver(s.m)
		resolved, err := r.resolveLaw(l)
		if err != nil {
			t.Fatal(err)
		}
		w := newWorker(rowsOf(s.m, nil, 0), r.slots)
		y, m, sd := make([]float64, n), 0.0, 0.0
		shuffled := rand.New(rand.NewPCG(1, 1)).Perm(n)
		mixed := make([]float64, n)
		for i, j := range shuffled {
			mixed[i] = u[j]
		}
		w.simulate(y, resolved, mixed, true)
		for _, v := range y {
			m += v / n
		}
		for _, v := range y {
			sd += (v - m) * (v - m) / n
		}
		near(t, c.family+" mean", m, l.Family.Mean(c.natural), 2e-3*(1+math.Abs(m)))
		near(t, c.family+" sd", math.Sqrt(sd)/l.Family.SD(c.natural), 1, 5e-3)
	}
}

// Draws far out round a probability to 1 or a rate to infinity; simulating
// from such a law must give a number or NaN, never a crash.
func TestExtremeDraws(t *testing.T) {
	for _, family := range []string{"beta", "Bernoulli", "Poisson", "negative binomial", "gamma", "log-normal", "binomial", "exponential"} {
		for _, eta := range []string{"900", "-900", "log(-1)", "40"} {
			s := newSketch(t, 3)
			s.variable("y", study.Real, []float64{0, 1, 1})
			l := s.law("y", family, eta, "3")
			l.Arguments = l.Arguments[:len(l.Family.Arguments)]
			r := newResolver(s.m)
			resolved, err := r.resolveLaw(l)
			if err != nil {
				t.Fatal(err)
			}
			w := newWorker(rowsOf(s.m, nil, 0), r.slots)
			w.simulate(make([]float64, 3), resolved, []float64{1e-9, 0.5, 1 - 1e-9}, false)
		}
	}
}

func logistic(x float64) float64 { return 1 / (1 + math.Exp(-x)) }
