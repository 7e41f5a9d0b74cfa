package effect

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

func replicated(t *testing.T, s *sketch, id string, draws [][]float64, opt Options) *Replica {
	t.Helper()
	v, _ := s.m.Name(id)
	r, err := Replicate(context.Background(), s.m, v, draws, rand.NewPCG(1, 2), opt)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// Replicates of a normal law have its mean and sd at each row: over 4,000 draws
// within four standard errors.
func TestReplicatesFollowTheLaw(t *testing.T) {
	s := newSketch(t, 3)
	s.variable("x", study.Real, []float64{-1, 0, 2})
	s.variable("y", study.Real, []float64{9, 9, 9})
	s.parameter("a", 1)
	s.parameter("b", 3)
	s.parameter("s", 2)
	s.law("y", "normal", "a + b * x", "s")
	const n = 4000
	r := replicated(t, s, "y", s.draws(n), Options{})
	for i, want := range []float64{-2, 1, 7} {
		sum, squares := 0.0, 0.0
		for _, values := range r.Values {
			sum += values[i] / n
			squares += (values[i] - want) * (values[i] - want) / n
		}
		if math.Abs(sum-want) > 4*2/math.Sqrt(n) || math.Abs(squares-4) > 4*4*math.Sqrt(2.0/n) {
			t.Errorf("row %d: mean %.3f, variance %.3f, not %v and 4", i, sum, squares, want)
		}
	}
	if !slices.Equal(r.Reads, []int{0}) || !slices.Equal(r.Observed, []float64{9, 9, 9}) {
		t.Errorf("it reads %v and has observed %v", r.Reads, r.Observed)
	}
}

// The same source gives the same values; another does not.
func TestReplicatesAreTheSourcesAlone(t *testing.T) {
	s := newSketch(t, 40)
	s.variable("y", study.Count, spreadOut(40, 0, 9))
	s.parameter("a", 1.5)
	s.law("y", "Poisson", "a")
	first, again := replicated(t, s, "y", s.draws(50), Options{}), replicated(t, s, "y", s.draws(50), Options{})
	for d := range first.Values {
		if !slices.Equal(first.Values[d], again.Values[d]) {
			t.Fatalf("draw %d differs", d)
		}
	}
	if slices.Equal(first.Values[0], first.Values[1]) {
		t.Error("two draws have the same values")
	}
}

// A variable of a coarser level has one value for each level, missing entries
// have none, and a small budget takes fewer units.
func TestReplicatedUnits(t *testing.T) {
	s := newSketch(t, 6)
	s.plate("farm", 3, []int32{0, 0, 1, 1, 2, 2})
	farm := s.variable("size", study.Real, []float64{1, 2, 3})
	farm.Plate = 0
	y := s.variable("y", study.Real, []float64{1, 2, 3, 4, 5, 6})
	y.Missing = []int32{4}
	s.parameter("a", 1)
	s.parameter("s", 1)
	s.law("size", "normal", "a", "s")
	s.law("y", "normal", "a + size", "s")
	s.vector("y_missing", model.Unrecorded, 5)
	s.m.Parameters[2].Of = 1
	if r := replicated(t, s, "size", s.draws(4), Options{}); !slices.Equal(r.Observed, []float64{1, 2, 3}) || !slices.Equal(r.Rows, []int{0, 2, 4}) {
		t.Errorf("sizes %v of rows %v", r.Observed, r.Rows)
	}
	r := replicated(t, s, "y", s.draws(4), Options{})
	if !slices.Equal(r.Rows, []int{0, 1, 2, 3, 5}) || r.Units != 5 {
		t.Errorf("rows %v of %d", r.Rows, r.Units)
	}
	if r = replicated(t, s, "y", s.draws(4), Options{Budget: 6}); len(r.Rows) != 3 || r.Units != 5 {
		t.Errorf("rows %v of %d with a small budget", r.Rows, r.Units)
	}
}

// What is known only to lie beyond a limit is replicated as it would have been
// written down: at the limit. What has no such limit in its law is refused.
func TestReplicatesOfCensoredValues(t *testing.T) {
	s := newSketch(t, 5)
	s.variable("y", study.Real, []float64{0, 0, 1, 2, -1})
	s.parameter("a", 0)
	s.parameter("s", 1)
	l := s.law("y", "normal", "a", "s")
	for _, f := range catalog.Bounded(l.Family) {
		switch f.Name {
		case "left-censored normal":
			bounded := *l
			bounded.Family, bounded.Arguments = f, append(slices.Clone(l.Arguments), formula.Expr(&formula.Number{Value: 0}))
			s.m.Laws = []*model.Law{&bounded}
			r := replicated(t, s, "y", s.draws(200), Options{})
			at := 0
			for _, values := range r.Values {
				for _, x := range values {
					if x < 0 {
						t.Fatalf("%v lies below the limit", x)
					}
					if x == 0 {
						at++
					}
				}
			}
			if share := float64(at) / 1000; math.Abs(share-0.5) > 0.07 { // four standard errors
				t.Errorf("%.2f of the values lie at the limit, not half of them", share)
			}
			if r.Observed[4] != 0 {
				t.Errorf("a value below the limit stays %v", r.Observed[4])
			}
		case "interval-censored normal":
			bounded := *l
			bounded.Family, bounded.Arguments = f, append(slices.Clone(l.Arguments), formula.Expr(&formula.Number{Value: 3}))
			s.m.Laws = []*model.Law{&bounded}
			_, err := Replicate(context.Background(), s.m, 0, s.draws(3), rand.NewPCG(1, 1), Options{})
			if refused := new(NotReplicated); !errors.As(err, &refused) {
				t.Errorf("an interval is replicated: %v", err)
			}
		}
	}
}

func TestReplicateStops(t *testing.T) {
	s := newSketch(t, 5)
	s.variable("y", study.Real, []float64{0, 0, 1, 2, 3})
	s.parameter("a", 0)
	s.parameter("s", 1)
	s.law("y", "normal", "a", "s")
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Replicate(ctx, s.m, 0, s.draws(10), rand.NewPCG(1, 1), Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("not stopped: %v", err)
	}
}
