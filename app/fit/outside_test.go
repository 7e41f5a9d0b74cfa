package fit

import (
	"context"
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer/summary"
)

// Studies of testdata/studies are fitted here as a user's would be, and what
// comes out is held against values from outside the project. Where they come
// from stands in testdata/studies/SOURCE.md.

const studies = "../../testdata/studies"

// request opens a study of testdata/studies with its table, for its first
// rival and its first question.
func request(t *testing.T, name string) Request {
	t.Helper()
	return requestIn(t, studies, name)
}

func requestIn(t *testing.T, folder, name string) Request {
	t.Helper()
	s, err := study.Load(filepath.Join(folder, name+".arrowroot"))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.ReadFile(filepath.Join(folder, s.Data[0].File))
	if err != nil {
		t.Fatal(err)
	}
	if data.Rows != s.Data[0].Rows {
		t.Fatalf("%s has %d rows, the study says %d", s.Data[0].File, data.Rows, s.Data[0].Rows)
	}
	req := Request{Study: s, Rival: s.Rivals[0].Name, Table: data, Seed: 1}
	if len(s.Questions) > 0 {
		req.Question = s.Questions[0]
	}
	return req
}

// long leaves a test out of -short: with the race detector it takes minutes,
// and what runs side by side is tested by TestSameSeedSameDraws.
func long(t *testing.T) {
	t.Helper()
	if testing.Short() {
		t.Skip("takes seconds")
	}
}

func run(t *testing.T, req Request) *Result {
	t.Helper()
	r, err := Run(context.Background(), req, nil)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// readJSON reads a file of testdata/studies.
func readJSON(t *testing.T, name string, into any) {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(studies, name))
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, into); err != nil {
		t.Fatal(err)
	}
}

// fromJSON reads one entry of testdata/studies/expected.json.
func fromJSON(t *testing.T, key string, into any) {
	t.Helper()
	var all map[string]json.RawMessage
	readJSON(t, "expected.json", &all)
	if err := json.Unmarshal(all[key], into); err != nil {
		t.Fatalf("%s: %v", key, err)
	}
}

// A moment is what is known of one posterior quantity.
type moment struct {
	Mean, SD float64
	Error    float64 // Monte Carlo error of Mean; 0 = exact
}

// A value is a function of the parameters by typed name.
type value func(p func(name string) float64) float64

func parameter(name string) value {
	return func(p func(string) float64) float64 { return p(name) }
}

// entry is one entry of a vector, as Quantity.Name has it.
func entry(name, of string) value { return parameter(name + "[" + of + "]") }

// of evaluates a function of the parameters, chain by chain.
func (f *Fitted) of(t *testing.T, v value) [][]float64 {
	t.Helper()
	at := make(map[string]int)
	for i, q := range f.Density.Quantities {
		at[q.Name] = i
	}
	out := make([][]float64, len(f.Chains))
	for c, rows := range f.Chains {
		for _, row := range rows {
			out[c] = append(out[c], v(func(name string) float64 {
				i, ok := at[name]
				if !ok {
					t.Fatalf("there is no quantity %q among %v", name, at)
				}
				return row[i]
			}))
		}
	}
	return out
}

// Tolerances of the checks: the mean within 4 Monte Carlo errors, ours and
// theirs combined; the sd within 3 %, which needs an effective sample size
// that makes this more than chance.
const (
	errorsAllowed = 4
	spreadAllowed = 0.03
	enoughESS     = 4000
)

// check compares a quantity's posterior with what is known of it.
func check(t *testing.T, name string, chains [][]float64, want moment) {
	t.Helper()
	s := summary.Of(chains, 0.9)
	size := math.Min(s.BulkESS, summary.MeanESS(chains))
	if size < enoughESS {
		t.Errorf("%s: effective sample size %.0f of %d draws, too few to tell", name, size, len(chains)*len(chains[0]))
	}
	allowed := errorsAllowed * math.Hypot(s.Spread/math.Sqrt(size), want.Error)
	if gap := s.Centre - want.Mean; !(math.Abs(gap) <= allowed) {
		t.Errorf("%s: mean %.6g, not %.6g (%.1f times the Monte Carlo error)", name, s.Centre, want.Mean, gap/allowed*errorsAllowed)
	}
	if ratio := s.Spread / want.SD; !(math.Abs(ratio-1) <= spreadAllowed) {
		t.Errorf("%s: sd %.6g, not %.6g (ratio %.3f)", name, s.Spread, want.SD, ratio)
	}
	if testing.Verbose() {
		t.Logf("%-28s mean %.5g (%+.1f errors), sd ratio %.3f, ess %.0f", name, s.Centre, (s.Centre-want.Mean)/allowed*errorsAllowed, s.Spread/want.SD, size)
	}
}
