package effect

import (
	"context"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func expit(x float64) float64 { return 1 / (1 + math.Exp(-x)) }

// overNew is the expectation of expit over a normal baseline, integrated
// numerically by gonum (Gauss–Legendre over ten sds).
func overNew(mean, sd float64) float64 {
	return quad.Fixed(func(z float64) float64 {
		return expit(mean+sd*z) * math.Exp(-z*z/2) / math.Sqrt(2*math.Pi)
	}, -10, 10, 400, quad.Legendre{}, 0)
}

// farms is a logistic law whose baseline varies by farm: four rows on each, of
// which half have an exposure.
func farms(t *testing.T, count int, effects func(i int) float64) *sketch {
	rows := 4 * count
	s := newSketch(t, rows)
	of := make([]int32, rows)
	x, y := make([]float64, rows), make([]float64, rows)
	for i := range of {
		of[i], x[i] = int32(i/4), float64(i%2)
	}
	y[0] = 1
	s.plate("farm", count, of)
	s.variable("x", study.Binary, x)
	s.variable("y", study.Binary, y)
	s.parameter("alpha", 0)
	s.parameter("sd", 1.5)
	s.parameter("beta", 1)
	entries := make([]float64, count)
	for i := range entries {
		entries[i] = effects(i)
	}
	p := s.vector("alpha_y_farm", model.ByPlate, entries...)
	p.Mean, p.SD, p.Plate = "alpha", "sd", 0
	s.law("y", "Bernoulli", "alpha_y_farm by farm + beta * x")
	return s
}

// SEMANTICS B5, its bracket: on the logit scale with sd 1.5 the difference
// averaged over new groups is .171, and .231 at zero. The oracle integrates by
// another library.
func TestNewGroupsAreIntegrated(t *testing.T) {
	near(t, "averaged", overNew(1, 1.5)-overNew(0, 1.5), 0.171, 0.0005)
	near(t, "at zero", expit(1)-expit(0), 0.231, 0.0005)
	truth := func(d []float64) float64 { return overNew(d[0]+d[2], d[1]) - overNew(d[0], d[1]) }
	rng := rand.New(source())
	for _, count := range []int{30, 6} {
		s := farms(t, count, func(i int) float64 { return 2 + float64(i%3) }) // far from the mean: fitted effects must not count
		draws := make([][]float64, 400)
		for i := range draws { // a posterior with sds .3, .2 and .2, to be precise against
			draws[i] = append([]float64(nil), s.draw...)
			draws[i][0] += 0.3 * rng.NormFloat64()
			draws[i][1] *= math.Exp(0.2 * rng.NormFloat64())
			draws[i][2] += 0.2 * rng.NormFloat64()
		}
		average := 0.0
		for _, d := range draws {
			average += truth(d) / float64(len(draws))
		}
		q := ask("x", "y", 0, 1)
		q.Groups = study.NewGroups
		got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws, source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "difference over new farms", mean(got.Values), average, 0.001)
		error, sd := 0.0, 0.0
		for i, d := range draws {
			error += (got.Values[i] - truth(d)) * (got.Values[i] - truth(d))
			sd += (truth(d) - average) * (truth(d) - average)
		}
		// B1: the simulation error stays below 5 % of the posterior sd, give or
		// take what a pilot can tell.
		if ratio := math.Sqrt(error / sd); ratio > 0.07 {
			t.Errorf("simulation error is %.3f of the posterior sd", ratio)
		}
		if !strings.HasSuffix(got.Words, "averaged over new levels of farm") || len(got.New) != 1 || got.New[0] != "farm" {
			t.Errorf("words %q, new %v", got.Words, got.New)
		}
		again, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws, source(), Options{})
		if err != nil || again.Values[7] != got.Values[7] {
			t.Errorf("the same source gives other values (%v)", err)
		}
		q.Groups = study.TheseGroups
		these, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws[:1], source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		fitted := 0.0
		for i := range count {
			a := 2 + float64(i%3)
			fitted += (expit(a+draws[0][2]) - expit(a)) / float64(count)
		}
		near(t, "difference in these farms", these.Values[0], fitted, 1e-12)
	}
}

// In a linear law new farms leave the effect as it is; where its slope varies,
// the effect in new farms is the mean slope, whatever the fitted ones are.
func TestNewGroupsOfALinearLaw(t *testing.T) {
	s := newSketch(t, 6)
	s.plate("farm", 3, []int32{0, 0, 1, 1, 2, 2})
	s.variable("x", study.Real, []float64{0, 1, 2, 3, 4, 5})
	s.variable("y", study.Real, []float64{0, 1, 0, 1, 0, 1})
	s.parameter("beta", 0.7)
	s.parameter("spread", 0.4)
	p := s.vector("beta_x_y_farm", model.ByPlate, 2, 3, 4)
	p.Mean, p.SD, p.Plate = "beta", "spread", 0
	s.law("y", "normal", "(beta_x_y_farm by farm) * x", "1")
	q := ask("x", "y", 1, 3)
	for groups, want := range map[string]float64{"": 6, study.NewGroups: 1.4} {
		q.Groups = groups
		got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(20), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "effect with groups "+groups, mean(got.Values), want, 1e-9)
	}
}

// Farms with many rows count as much as those with few; a farm's fields share
// what it gets; the rows of a subset are those that are averaged over.
func TestWeightsAndSubsets(t *testing.T) {
	s := newSketch(t, 6)
	s.plate("farm", 2, []int32{0, 0, 0, 0, 1, 1})
	s.plate("field", 3, []int32{0, 0, 0, 1, 2, 2})
	z := s.variable("z", study.Real, []float64{1, 2, 3, 4, 10, 20})
	s.variable("x", study.Real, []float64{0, 0, 0, 0, 0, 1})
	s.variable("y", study.Real, []float64{0, 0, 0, 0, 0, 1})
	s.law("y", "normal", "x * z", "1")
	q := ask("x", "y", 0, 1)
	value := func(q study.Question) *Contrast {
		t.Helper()
		got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(2), source(), Options{})
		if err != nil {
			t.Fatal(err)
		}
		return got
	}
	near(t, "by rows", value(q).Values[0], 40.0/6, 1e-12)
	q.Weigh = study.ByGroups
	near(t, "by farms", value(q).Values[0], (2.5+15)/2, 1e-12)
	if got := value(q).Words; got != "over these 6 rows, each farm counts once (2)" {
		t.Error(got)
	}
	s.m.Asked = &model.Subset{Rows: []int{0, 1, 5}, Words: "z is 1 or 2 or 20"}
	near(t, "by farms, of a subset", value(q).Values[0], (1.5+20)/2, 1e-12)
	q.Weigh = ""
	near(t, "by rows, of a subset", value(q).Values[0], 23.0/3, 1e-12)
	if got := value(q); got.Words != "over the 3 of 6 rows where z is 1 or 2 or 20, each row alike" || got.Rows != 3 {
		t.Errorf("%s, %d rows", got.Words, got.Rows)
	}

	// An outcome that fields have: farm 1 has two of them, farm 2 one.
	s.m.Asked = nil
	z.Plate, z.Values = 1, []float64{1, 4, 10}
	y := s.m.Variables[2]
	y.Plate, y.Values = 1, []float64{0, 0, 1}
	s.m.Laws[0].Plate = 1
	near(t, "by fields", value(q).Values[0], 5, 1e-12)
	q.Weigh = study.ByGroups
	near(t, "by farms, of fields", value(q).Values[0], (2.5+10)/2, 1e-12)
	q.Over = study.PopulationAlike
	draws := s.draws(4000)
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws, source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	// Two Dirichlet weights are uniform: mean ½, sd 1/√12, times 7.5 apart;
	// 4,000 draws know the mean to .034.
	near(t, "by farms, a population alike", mean(got.Values), 6.25, 0.11)
	s.plate("year", 2, []int32{0, 1, 0, 1, 0, 1})
	if _, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, draws[:2], source(), Options{}); err == nil {
		t.Error("crossed plates make no groups that could count once each")
	}
}

// Story S2's shape: x → m → y and x → y, and a confounder of m and y that x
// acts on. The direct effect with m fixed needs the confounder simulated and m
// set; holding m would not give it. Linear closed form: b_xy + b_xl·b_ly.
func TestDirectEffectWithAConfounderOnTheWay(t *testing.T) {
	s := newSketch(t, 50)
	for _, id := range []string{"x", "l", "m", "y"} {
		s.variable(id, study.Real, spreadOut(50, -1, 1))
	}
	s.law("l", "normal", "0.5 * x", "1")
	s.law("m", "normal", "0.8 * x + 0.6 * l", "1")
	s.law("y", "normal", "0.3 * x + 0.4 * m + 0.7 * l", "1")
	q := ask("x", "y", 0, 2)
	q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: "m", At: study.Setting{Number: 1}}}
	got, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(3), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "direct effect", got.Values[1], 2*(0.3+0.5*0.7), 1e-9)
	near(t, "expected outcome with m at 1 and x at 0", got.Expected.From[0], 0.4, 1e-9)
	q.Fixed[0].At = study.Setting{Word: "high"}
	if _, err := Simulate(context.Background(), s.m, causal.PinAndSimulate, nil, q, s.draws(3), source(), Options{}); err == nil || err.Error() != `m has no level "high"` {
		t.Errorf("an unknown level: %v", err)
	}
}

// Under a controlled direct effect the sheet shows nothing at what is fixed or
// moves through it alone, and the direct change elsewhere.
func TestNodesUnderADirectEffect(t *testing.T) {
	s := newSketch(t, 30)
	for _, id := range []string{"x", "m", "k", "y"} {
		v := s.variable(id, study.Real, spreadOut(30, -1, 1))
		v.Low, v.High = 0, 1
	}
	s.law("m", "normal", "0.8 * x", "1")
	s.law("k", "normal", "0.5 * m", "1")
	s.law("y", "normal", "0.3 * x + 0.4 * m + 0.7 * k", "1")
	g, err := graph.New(graph.Spec{Names: []string{"x", "m", "k", "y"}, Arrows: [][2]int{{0, 1}, {1, 2}, {0, 3}, {1, 3}, {2, 3}}})
	if err != nil {
		t.Fatal(err)
	}
	q := ask("x", "y", 0, 1)
	q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: "m", At: study.Setting{Number: 2}}}
	nodes, err := Nodes(context.Background(), s.m, g, q, s.draws(2), source(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !nodes[0].Plain || !nodes[1].Plain || nodes[2].Plain {
		t.Fatalf("%+v", nodes)
	}
	near(t, "y", nodes[2].Values[0], 0.3, 1e-9)
}
