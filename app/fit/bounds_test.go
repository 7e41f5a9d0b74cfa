package fit

import (
	"context"
	"encoding/csv"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// oneParent is a study of y on x with the columns of a CSV.
func oneParent(text, family string, scale study.Scale, span study.Range, arguments ...study.Argument) *study.Study {
	header, _ := csv.NewReader(strings.NewReader(text)).Read()
	doc := &study.Study{
		Data: []*study.Data{{Name: "rows", Text: text}},
		Rivals: []*study.Rival{{Name: "one", Layout: &study.Layout{}, Diagram: &study.Diagram{
			Nodes:  []*study.Node{{Variable: "x"}, {Variable: "y", Law: &study.Law{Family: family, Arguments: arguments}}},
			Arrows: []*study.Arrow{{From: "x", To: "y"}}}}},
	}
	for _, name := range header {
		v := &study.Variable{ID: name, Column: name, Scale: study.Real}
		switch name {
		case "x":
			v.Range = &study.Range{Low: -2, High: 2}
		case "y":
			v.Scale, v.Range = scale, &span
		}
		doc.Variables = append(doc.Variables, v)
	}
	return doc
}

func fitOne(t *testing.T, doc *study.Study, draws int) (*Result, error) {
	t.Helper()
	data, err := table.Read("rows", strings.NewReader(doc.Data[0].Text), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return Run(context.Background(), Request{Study: doc, Rival: "one", Table: data, Seed: 1, Draws: draws, NoEffects: true, NoPaint: true}, nil)
}

// Values known only within bounds: with the bounds in the law the slope .6 comes
// back; with bounds taken for values it does not. Source of the claim: Tobin
// (1958) for limits, Kalbfleisch & Prentice (2002) for time; the numbers are
// simulated here.
func TestBoundsAreHonoured(t *testing.T) {
	long(t)
	const rows, slope = 600, 0.6
	r := rand.New(rand.NewPCG(7, 9))
	var limited, time, ends, cut strings.Builder
	limited.WriteString("x,y\n")
	time.WriteString("x,y,seen\n")
	ends.WriteString("x,y,upper\n")
	cut.WriteString("x,y\n")
	for range rows {
		x, e := r.NormFloat64(), r.NormFloat64()
		y := 0.3 + slope*x + 0.8*e
		fmt.Fprintf(&limited, "%v,%v\n", x, max(y, 0))
		scale := math.Exp(0.3 + slope*x)
		event, stop := scale*math.Pow(r.ExpFloat64(), 1/1.5), 3*r.Float64()
		seen := 0
		if event <= stop {
			seen = 1
		}
		fmt.Fprintf(&time, "%v,%v,%d\n", x, min(event, stop), seen)
		fmt.Fprintf(&ends, "%v,%v,%v\n", x, math.Floor(y), math.Floor(y)+1)
		if y > 0 {
			fmt.Fprintf(&cut, "%v,%v\n", x, y)
		}
	}
	number := func(name, text string) study.Argument { return study.Argument{Name: name, Text: text} }
	for _, c := range []struct {
		name        string
		with, naive *study.Study // naive: the bounds taken for values; nil = there is no such law
		alsoTrue    string
		alsoIs      float64
	}{
		{"detection limit", oneParent(limited.String(), "left-censored normal", study.Real, study.Range{Low: -2, High: 3}, number("low", "0")),
			oneParent(limited.String(), "normal", study.Real, study.Range{Low: -2, High: 3}), "sigma_y", 0.8},
		{"follow-up", oneParent(time.String(), "censored Weibull", study.Positive, study.Range{Low: 0.1, High: 10}, number("seen", "seen")),
			oneParent(time.String(), "Weibull", study.Positive, study.Range{Low: 0.1, High: 10}), "shape_y", 1.5},
		{"intervals", oneParent(ends.String(), "interval-censored normal", study.Real, study.Range{Low: -2, High: 3}, number("upper", "upper")), nil, "sigma_y", 0.8},
		{"truncation", oneParent(cut.String(), "truncated normal", study.Real, study.Range{Low: -2, High: 3}, number("low", "0"), number("high", "100")),
			oneParent(cut.String(), "normal", study.Real, study.Range{Low: -2, High: 3}), "sigma_y", 0.8},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := func(doc *study.Study, name string) (centre, spread float64) {
				res, err := fitOne(t, doc, 400)
				if err != nil {
					t.Fatal(err)
				}
				for _, q := range res.Full.Quantities {
					if q.Name == name {
						return q.Centre, q.Spread
					}
				}
				t.Fatalf("no %s", name)
				return 0, 0
			}
			if m, s := got(c.with, "beta_x_y"); math.Abs(m-slope) > 3.5*s {
				t.Errorf("slope %.3f (sd %.3f), the truth %.2f", m, s, slope)
			}
			if m, s := got(c.with, c.alsoTrue); math.Abs(m-c.alsoIs) > 3.5*s {
				t.Errorf("%s %.3f (sd %.3f), the truth %.2f", c.alsoTrue, m, s, c.alsoIs)
			}
			if c.naive != nil {
				if m, s := got(c.naive, "beta_x_y"); math.Abs(m-slope) < 3.5*s {
					t.Errorf("bounds taken for values give the slope %.3f (sd %.3f) too", m, s)
				}
			}
		})
	}
}

// A law that lacks a bound, or has one that cannot be, says so by name.
func TestBoundsThatCannotBe(t *testing.T) {
	text := "x,y,seen\n0,1,1\n1,2,0\n2,3,2\n"
	for _, c := range []struct {
		family string
		args   []study.Argument
		want   string
	}{
		{"censored Weibull", nil, "what is its *seen*"},
		{"censored Weibull", []study.Argument{{Name: "seen", Text: "seen"}}, "in row 3 the *seen* (seen) is 2"},
		{"interval-censored Weibull", []study.Argument{{Name: "upper", Text: "seen"}}, "in row 2 the *upper* (seen) is 0"},
	} {
		_, err := fitOne(t, oneParent(text, c.family, study.Positive, study.Range{Low: 0.1, High: 10}, c.args...), 50)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %v, want %q", c.family, err, c.want)
		}
	}
}
