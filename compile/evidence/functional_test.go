package evidence

import (
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// The diagram of Verma & Pearl (1990): a → b → c → d with a hidden cause of b and
// d. Its constraint holds in its own data as often as it should, fails where a
// acts on d, and no independence sees that.
func TestVermaConstraint(t *testing.T) {
	for _, wrong := range []bool{false, true} {
		rng := rand.New(rand.NewPCG(7, 3))
		reps, flagged := 200, 0
		if wrong {
			reps = 1
		}
		for range reps {
			w := newWorld("a -> b\nb -> c\nc -> d\n? -> b, d")
			flip := func(p float64) float64 {
				if rng.Float64() < p {
					return 1
				}
				return 0
			}
			data := map[string][]float64{}
			for range 1500 {
				u, a := flip(0.5), flip(0.5)
				b := flip(0.15 + 0.3*a + 0.4*u)
				c := flip(0.2 + 0.5*b)
				p := 0.1 + 0.35*c + 0.35*u
				if wrong {
					p += 0.18 * a
				}
				for id, x := range map[string]float64{"a": a, "b": b, "c": c, "d": flip(p)} {
					data[id] = append(data[id], x)
				}
			}
			for id, x := range data {
				w.numbers(id, study.Binary, x)
			}
			e := tested(t, w.request(t))
			if len(e.Functionals) != 1 {
				t.Fatalf("%d constraints", len(e.Functionals))
			}
			f := e.Functionals[0]
			if f.P < 0.05 {
				flagged++
			}
			if wrong && (f.Verdict != Contradicted || !strings.Contains(f.Sentence, "arrow a → d would account for it")) {
				t.Error(f.Sentence)
			}
			if strings.Contains(f.Sentence, "NaN") {
				t.Fatal(f.Sentence)
			}
		}
		if rate := float64(flagged) / float64(reps); !wrong && (rate > 0.05+0.046+0.01 || rate == 0) { // 3 sds of 200
			t.Errorf("flagged in %.3f", rate)
		}
	}
}

// Missing entries are no levels: their rows are left out, and the cross table
// stays as small as it is.
func TestConstraintWithGaps(t *testing.T) {
	m := square(study.Binary, study.Binary, study.Binary, study.Binary)
	w := m.drawn(rand.New(rand.NewPCG(7, 5)), 500, 0.5, 0)
	for i := range 40 {
		w.columns["b"][i] = ""
	}
	f := m.theOne(t, tested(t, w.request(t)))
	if f.Weighted || f.Rows != 460 {
		t.Errorf("%d rows, weighted %v", f.Rows, f.Weighted)
	}
	w = square(study.Real, study.Count, study.Real, study.Real).drawn(rand.New(rand.NewPCG(7, 6)), 500, 0.5, 0)
	for i := range 40 {
		w.columns["c"][i] = ""
	}
	f = m.theOne(t, tested(t, w.request(t)))
	if !f.Weighted || f.Rows != 460 || f.Verdict == TooFew || strings.Contains(f.Sentence, "NaN") {
		t.Error(f.Rows, f.Sentence)
	}
}
