package fit

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// gappy simulates 400 rows of z → x → y ← z, with slopes .7, .5 and .8, in which
// z goes missing the more often the higher by is: y or x.
func gappy(by string) string {
	rng := rand.New(rand.NewPCG(18, 34))
	var b strings.Builder
	b.WriteString("z,x,y,seen\n")
	for range 400 {
		z := rng.NormFloat64()
		x := 0.7*z + 0.7*rng.NormFloat64()
		y := 0.5*x + 0.8*z + 0.6*rng.NormFloat64()
		chance := map[string]float64{"y": y, "x": x}[by]
		if rng.Float64() < 1/(1+math.Exp(1-2*chance)) {
			fmt.Fprintf(&b, ",%.4f,%.4f,0\n", x, y)
		} else {
			fmt.Fprintf(&b, "%.4f,%.4f,%.4f,1\n", z, x, y)
		}
	}
	return b.String()
}

// SEMANTICS A7: complete rows are rows chosen by what says where an entry is.
// Where that is an effect of the outcome nothing is claimed from them, while the
// full model that imputes has the truth; where it is one of the exposure, which
// every law on the way reads, they do.
func TestCompleteRowsAreChosenRows(t *testing.T) {
	t.Parallel()
	ask := func(by, treat string) *Effect {
		text := gappy(by)
		real := func(id string) *study.Variable {
			return &study.Variable{ID: id, Column: id, Scale: study.Real, Range: &study.Range{Low: -4, High: 4}}
		}
		doc := &study.Study{
			Data:      []*study.Data{{Name: "rows", Text: text}},
			Variables: []*study.Variable{real("z"), real("x"), real("y"), {ID: "seen", Column: "seen", Scale: study.Binary, Answers: "z"}},
			Rivals: []*study.Rival{{Name: "one", Layout: &study.Layout{}, Diagram: &study.Diagram{
				Nodes:  []*study.Node{{Variable: "z"}, {Variable: "x"}, {Variable: "y"}, {Variable: "seen"}},
				Arrows: []*study.Arrow{{From: "z", To: "x"}, {From: "z", To: "y"}, {From: "x", To: "y"}, {From: by, To: "seen"}},
			}}},
		}
		if treat != "" {
			doc.Rivals[0].Diagram.Nodes[0].Law = &study.Law{Treat: treat}
		}
		data, err := table.Read("rows", strings.NewReader(text), table.Options{})
		if err != nil {
			t.Fatal(err)
		}
		q := &study.Question{Exposure: "x", Outcome: "y", From: &study.Setting{Number: 0}, To: &study.Setting{Number: 1}}
		res, err := Run(context.Background(), Request{Study: doc, Rival: "one", Question: q, Table: data, Seed: 1, Draws: 300, NoPaint: true}, nil)
		if err != nil {
			t.Fatal(err)
		}
		return res.Effect
	}

	e := ask("y", "")
	if e.Identified || e.Full != nil || e.HeldValid || !e.Adjusted.Association || !strings.Contains(e.Refusal, "rows in which z is missing were left out: the rows were chosen by seen") {
		t.Errorf("missing by the outcome, complete rows: identified %v, held an effect %v, full: %q", e.Identified, e.HeldValid, e.Refusal)
	}
	e = ask("y", study.Imputed)
	if !e.Identified || e.HeldValid || e.Full == nil {
		t.Fatalf("missing by the outcome, imputed: identified %v, held an effect %v, full: %q", e.Identified, e.HeldValid, e.Refusal)
	}
	within(t, "imputed", e.Full.Centre, 0.5, 3*e.Full.Spread)
	e = ask("x", "")
	if !e.Identified || !e.HeldValid || e.Full == nil {
		t.Fatalf("missing by the exposure: identified %v, held an effect %v, full: %q", e.Identified, e.HeldValid, e.Refusal)
	}
	within(t, "complete rows", e.Full.Centre, 0.5, 3*e.Full.Spread)
}
