package fit

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// simulated are the true arguments of each family that can be a law, beside
// the predicted one; a family without a row here fails the test.
var simulated = map[string][]float64{
	"normal": {0.7}, "Student t": {0.6, 4}, "Laplace": {0.5}, "logistic": {0.4}, "skew normal": {1, 3}, "Gumbel": {0.5}, "Cauchy": {0.3}, "von Mises": {6},
	"gamma": {3}, "log-normal": {0.5}, "Weibull": {2}, "exponential": {}, "beta": {12},
	"negative binomial": {3}, "Poisson": {}, "geometric": {}, "binomial": {10}, "beta-binomial": {8, 10}, "Bernoulli": {},
	"zero-inflated Poisson": {0.3}, "zero-inflated negative binomial": {3, 0.3}, "zero-inflated binomial": {10, 0.3},
	"hurdle Poisson": {0.3}, "hurdle negative binomial": {3, 0.3}, "hurdle gamma": {3, 0.3}, "hurdle log-normal": {0.5, 0.3},
	"categorical": nil, "ordered": nil, "ordered probit": nil,
}

// Every family that can be a law, fitted to 400 rows that it made itself, gives
// back slope and arguments: each truth within 4 posterior sds.
func TestFamiliesAreRecovered(t *testing.T) {
	long(t)
	const rows, slope, baseline = 400, 0.6, 0.3
	for _, f := range catalog.Families() {
		if f.Predicted < 0 {
			continue
		}
		others, ok := simulated[f.Name]
		if !ok {
			t.Errorf("%s has no true arguments in this test", f.Name)
		}
		t.Run(f.Name, func(t *testing.T) {
			r := rand.New(rand.NewPCG(3, 5))
			var csv strings.Builder
			csv.WriteString("x,y,n\n")
			for range rows {
				x := r.NormFloat64()
				eta := baseline + slope*x
				var y float64
				switch {
				case f.Link == catalog.Softmax: // against the first of three levels, halves of the slope up and down
					y = f.Quantile(r.Float64(), softmax(0, slope*x, -slope*x))
				case f.Link.Cumulative():
					low, high := f.Link.Inverse(-0.5-slope*x), f.Link.Inverse(0.8-slope*x)
					y = f.Quantile(r.Float64(), []float64{low, high - low, 1 - high})
				default:
					args := append([]float64{f.Link.Inverse(eta)}, others...)
					y = f.Quantile(r.Float64(), args)
				}
				value := fmt.Sprint(y)
				if f.Support == catalog.Levels {
					value = [3]string{"low", "mid", "top"}[int(y)]
				}
				fmt.Fprintf(&csv, "%v,%s,10\n", x, value)
			}
			y := &study.Variable{ID: "y", Column: "y", Range: &study.Range{Low: -3, High: 4}}
			law := &study.Law{Family: f.Name}
			switch f.Support {
			case catalog.Reals, catalog.Turn:
				y.Scale = study.Real
			case catalog.Positives, catalog.NonNegatives:
				y.Scale, y.Range = study.Positive, &study.Range{Low: 0.1, High: 10}
			case catalog.Unit:
				y.Scale, y.Range = study.Proportion, nil
			case catalog.Counts:
				y.Scale, y.Range = study.Count, &study.Range{Low: 0, High: 10}
			case catalog.UpTo:
				y.Scale, y.Range = study.Count, nil
				law.Arguments = []study.Argument{{Name: "trials", Text: "n"}}
			case catalog.ZeroOne:
				y.Scale, y.Range = study.Binary, nil
			case catalog.Levels:
				y.Scale, y.Range, y.Levels = study.Ordered, nil, []string{"low", "mid", "top"}
				if f.Link == catalog.Softmax {
					y.Scale = study.Category
				}
			}
			doc := &study.Study{
				Data:      []*study.Data{{Name: "rows", Text: csv.String()}},
				Variables: []*study.Variable{{ID: "x", Column: "x", Scale: study.Real, Range: &study.Range{Low: -2, High: 2}}, y},
				Rivals: []*study.Rival{{Name: "one", Layout: &study.Layout{}, Diagram: &study.Diagram{
					Nodes: []*study.Node{{Variable: "x"}, {Variable: "y", Law: law}}, Arrows: []*study.Arrow{{From: "x", To: "y"}}}}},
			}
			if f.Support == catalog.UpTo {
				doc.Variables = append(doc.Variables, &study.Variable{ID: "n", Column: "n", Scale: study.Count})
			}
			data, err := table.Read("rows", strings.NewReader(csv.String()), table.Options{})
			if err != nil {
				t.Fatal(err)
			}
			res, err := Run(context.Background(), Request{Study: doc, Rival: "one", Table: data, Seed: 1, Draws: 400, NoEffects: true, NoPaint: true}, nil)
			if err != nil {
				t.Fatal(err)
			}
			truth := map[string]float64{}
			for i, a := range f.Arguments {
				if i != f.Predicted && f.Support != catalog.Levels && a.Name != "trials" {
					at := i
					if f.Predicted < i {
						at--
					}
					truth[a.Greek+"_y"] = others[at]
				}
			}
			truth["beta_x_y"] = slope
			seen := 0
			for _, q := range res.Full.Quantities {
				want, ok := truth[q.Name]
				if !ok {
					continue
				}
				seen++
				if f.Link == catalog.Softmax {
					continue
				}
				if math.Abs(q.Centre-want) > 4*q.Spread {
					t.Errorf("%s is %.3g (sd %.2g), the truth %.3g", q.Name, q.Centre, q.Spread, want)
				}
			}
			if f.Link != catalog.Softmax && seen != len(truth) {
				t.Errorf("of %d truths %d came back", len(truth), seen)
			}
		})
	}
}

func softmax(eta ...float64) []float64 {
	out, sum := make([]float64, len(eta)), 0.0
	for i, e := range eta {
		out[i] = math.Exp(e)
		sum += out[i]
	}
	for i := range out {
		out[i] /= sum
	}
	return out
}
