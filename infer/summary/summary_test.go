package summary

import (
	"encoding/csv"
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"
)

const fixtures = "../../testdata/numeric/diagnostics"

func columns(t *testing.T, name string) [][]float64 {
	t.Helper()
	f, err := os.Open(filepath.Join(fixtures, name))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	out := make([][]float64, len(rows[0]))
	for _, row := range rows[1:] {
		for i, s := range row {
			x, err := strconv.ParseFloat(s, 64)
			if err != nil {
				t.Fatal(err)
			}
			out[i] = append(out[i], x)
		}
	}
	return out
}

// Source: testdata/numeric/diagnostics/SOURCE.md.
func TestFixtures(t *testing.T) {
	text, err := os.ReadFile(filepath.Join(fixtures, "diagnostics.json"))
	if err != nil {
		t.Fatal(err)
	}
	var want struct {
		Fixtures map[string]struct {
			Reported    float64 `json:"reported"`
			Bulk        float64 `json:"bulk"`
			Tail        float64 `json:"tail"`
			ESSMean     float64 `json:"ess_mean"`
			Mean        float64 `json:"mean"`
			SD          float64 `json:"sd"`
			ErrorOfMean float64 `json:"error_of_mean"`
		} `json:"fixtures"`
		EBFMI []struct {
			File  string  `json:"file"`
			Value float64 `json:"value"`
		} `json:"ebfmi"`
	}
	if err := json.Unmarshal(text, &want); err != nil {
		t.Fatal(err)
	}
	close := func(name, what string, got, want float64) {
		t.Helper()
		if !(math.Abs(got/want-1) < 1e-6) {
			t.Errorf("%s %s: %.10g, want %.10g", name, what, got, want)
		}
	}
	if len(want.Fixtures) < 6 || len(want.EBFMI) < 2 {
		t.Fatal("fixtures are missing")
	}
	for name, w := range want.Fixtures {
		chains := columns(t, "chain_"+name+".csv")
		s := Of(chains, 0.9)
		close(name, "R-hat", s.RHat, w.Reported)
		close(name, "bulk ESS", s.BulkESS, w.Bulk)
		close(name, "tail ESS", s.TailESS, w.Tail)
		close(name, "ESS of the mean", MeanESS(chains), w.ESSMean)
		close(name, "mean", s.Centre, w.Mean)
		close(name, "sd", s.Spread, w.SD)
		close(name, "MCSE", s.MeanError, w.ErrorOfMean)
	}
	for _, w := range want.EBFMI {
		close(w.File, "E-BFMI", EBFMI(columns(t, w.File)[0]), w.Value)
	}
}

// Closed form: an AR(1) process has (1−φ)/(1+φ) effective draws a draw.
func TestAutoregressiveTruth(t *testing.T) {
	for _, c := range []struct{ phi, tolerance float64 }{{-0.5, 0.1}, {0, 0.1}, {0.5, 0.1}, {0.9, 0.15}} {
		inside := 0
		for rep := range 20 {
			r := rand.New(rand.NewPCG(uint64(rep), 5))
			chains := make([][]float64, 4)
			for m := range chains {
				x := r.NormFloat64()
				for range 10000 {
					chains[m] = append(chains[m], x)
					x = c.phi*x + math.Sqrt(1-c.phi*c.phi)*r.NormFloat64()
				}
			}
			truth := (1 - c.phi) / (1 + c.phi)
			if math.Abs(40000*truth/MeanESS(chains)-1) < c.tolerance {
				inside++
			}
		}
		if inside < 19 {
			t.Errorf("φ = %g: %d of 20 within %g of the truth", c.phi, inside, c.tolerance)
		}
	}
}

func TestVerdicts(t *testing.T) {
	good := Summary{RHat: 1.001, BulkESS: 900, TailESS: 700}
	fine := Sampling{Chains: 4, Draws: 4000, WorstEBFMI: 1}
	for _, c := range []struct {
		name string
		q    func(*Summary)
		s    func(*Sampling)
		want Verdict
	}{
		{"sound", nil, nil, Sound},
		{"three chains", nil, func(s *Sampling) { s.Chains = 3 }, Caution},
		{"one divergence", nil, func(s *Sampling) { s.Divergent = 1 }, Caution},
		{"many divergences", nil, func(s *Sampling) { s.Divergent = 21 }, Unusable},
		{"slow energy", nil, func(s *Sampling) { s.WorstEBFMI = 0.29 }, Caution},
		{"depth limit", nil, func(s *Sampling) { s.AtLimit = 40 }, Caution},
		{"R-hat 1.02", func(q *Summary) { q.RHat = 1.02 }, nil, Caution},
		{"R-hat 1.05", func(q *Summary) { q.RHat = 1.05 }, nil, Unusable},
		{"tail ESS 399", func(q *Summary) { q.TailESS = 399 }, nil, Caution},
		{"bulk ESS 99", func(q *Summary) { q.BulkESS = 99 }, nil, Unusable},
		{"undefined R-hat", func(q *Summary) { q.RHat = math.NaN() }, nil, Unusable},
		{"constant", func(q *Summary) { q.Constant, q.RHat, q.BulkESS = true, math.NaN(), math.NaN() }, nil, Sound},
		{"no draws", nil, func(s *Sampling) { s.Draws = 0 }, Unusable},
	} {
		q, s := good, fine
		if c.q != nil {
			c.q(&q)
		}
		if c.s != nil {
			c.s(&s)
		}
		if got := Judge(q, s); got.Verdict != c.want || (len(got.Reasons) == 0) != (c.want == Sound) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

// chainsOf gives chains of independent normal draws.
func chainsOf(chains, draws int) [][]float64 {
	rng := rand.New(rand.NewPCG(1, 2))
	out := make([][]float64, chains)
	for c := range out {
		for range draws {
			out[c] = append(out[c], rng.NormFloat64())
		}
	}
	return out
}

// A draw that is no finite number makes the quantity unusable, and nothing
// loops for ever on it.
func TestNotANumber(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		chains := chainsOf(4, 500)
		chains[2][17] = bad
		s := Of(chains, 0.9)
		trust := Judge(s, Sampling{Chains: 4, Draws: 2000, WorstEBFMI: 1})
		if s.NotFinite != 1 || !math.IsNaN(s.Centre) || trust.Verdict != Unusable || trust.Reasons[0] != "1 of 2000 draws are not a finite number" {
			t.Errorf("%v: %+v, %v", bad, s, trust)
		}
		RHat(chains)
		BulkESS(chains)
		TailESS(chains)
	}
}

// Too few draws are no constant and cannot be judged; the reason names no NaN.
func TestFewDraws(t *testing.T) {
	for draws := 1; draws < 25; draws++ {
		chains := chainsOf(4, draws)
		trust := Judge(Of(chains, 0.9), Sampling{Chains: 4, Draws: 4 * draws, WorstEBFMI: 1})
		if trust.Verdict != Unusable || strings.Contains(trust.String(), "NaN") {
			t.Errorf("%d draws: %v", draws, trust)
		}
		if few := draws < 8; few != (trust.String() == "unusable: too few draws to judge") {
			t.Errorf("%d draws: %v", draws, trust)
		}
	}
	if s := Of([][]float64{{3}}, 0.9); s.Constant {
		t.Error("one draw is no constant")
	}
	same := make([][]float64, 4)
	for c := range same {
		same[c] = make([]float64, 250)
	}
	if s := Of(same, 0.9); !s.Constant || Judge(s, Sampling{Chains: 4, Draws: 1000, WorstEBFMI: 1}).Verdict != Sound {
		t.Errorf("a constant of 1,000 draws: %+v", s)
	}
	same[1] = []float64{1}
	for len(same[1]) < 250 {
		same[1] = append(same[1], 1)
	}
	if trust := Judge(Of(same, 0.9), Sampling{Chains: 4, Draws: 1000, WorstEBFMI: 1}); trust.Verdict != Unusable || strings.Contains(trust.String(), "Inf") || strings.Contains(trust.String(), "NaN") {
		t.Errorf("chains that do not move: %v", trust)
	}
}

// Lags summed one by one and lags from the transform are the same numbers.
func TestAutocovarianceBothWays(t *testing.T) {
	chains := chainsOf(3, 101)
	for _, c := range chains {
		for i := 1; i < len(c); i++ {
			c[i] += 0.9 * c[i-1]
		}
	}
	a := newAutocovariance(chains)
	a.transform()
	for lag := range directLags {
		if x, y := a.at(lag), a.all[lag]; !(math.Abs(x-y) < 1e-12*a.all[0]) {
			t.Errorf("lag %d: %v and %v", lag, x, y)
		}
	}
}
