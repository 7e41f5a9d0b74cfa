package report

import (
	"bytes"
	"context"
	"html"
	"strings"
	"testing"

	"arrowroot/app/findings"
	"arrowroot/app/fit"
	"arrowroot/canvas/draw"
	"arrowroot/compile/evidence"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

func TestReportSaysEverything(t *testing.T) {
	doc, err := study.Load("../../assets/examples/hedgerows.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.ReadFile("../../assets/examples/hedgerows.csv")
	if err != nil {
		t.Fatal(err)
	}
	rival, q := doc.Rivals[0].Name, doc.Questions[0]
	g, err := doc.Graph(rival)
	if err != nil {
		t.Fatal(err)
	}
	// 60 draws are few on purpose: the verdict must travel with the numbers.
	r, err := fit.Run(context.Background(), fit.Request{Study: doc, Rival: rival, Question: q, Table: data, Seed: 1, Draws: 60}, nil)
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	if err := WriteHTML(&out, Input{Study: doc, Rival: rival, Question: q, Graph: g, Reading: fit.Read(g, q, 0, 0), Result: r}); err != nil {
		t.Fatal(err)
	}
	text := out.String()
	for _, want := range []string{
		"Hedgerows and wild bees", "Nest and feed", "confounded along 3 open back-door paths", "<svg",
		"negative binomial", "given, not modelled", "237 of 252 rows (15 lack bees)",
		"holding pesticide and soil (proposed)", "90 %", "Trust:</b> " + r.Trust().Verdict.String(),
		"hedge ← attitude → pesticide → bees", "qualified statistical and domain review",
		"Whether the model can reproduce the data was not checked.",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the report does not say %q", want)
		}
	}
	// Controls are folded away, and no row stands without what it may be read as.
	shown, folded, ok := strings.Cut(text, "<details><summary>")
	if !ok || !strings.Contains(shown, "<td>not a total effect: what hedge does to bees directly, with") ||
		strings.Contains(shown, "β_temp→bees</td>") || !strings.Contains(folded, "β_temp→bees</td>") || !strings.Contains(folded, "<td>total effect of temp on bees</td>") {
		t.Error("the table of quantities can be misread")
	}
	if strings.Contains(text, "Mistakes to look at") {
		t.Error("a sound study is accused")
	}
	if strings.Contains(text, "ZgotmplZ") || strings.Contains(text, "%!") {
		t.Error("the report has a formatting fault")
	}
}

func TestReportWithoutAFit(t *testing.T) {
	doc := study.New()
	var out bytes.Buffer
	if err := WriteHTML(&out, Input{Study: doc, Rival: doc.Rivals[0].Name}); err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(out.String(), "Untitled study") || strings.Contains(out.String(), "Result</h2>") {
		t.Error("a report on an empty study is wrong")
	}
}

// What was set aside stands in the report with its reason, and what was not
// stands there too.
func TestReportTellsMistakes(t *testing.T) {
	doc, err := study.Load("../../assets/examples/hedgerows.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	rival, q := doc.Rivals[0].Name, *doc.Questions[0]
	q.Held = []string{"pesticide", "soil", "flowers"}
	for _, aside := range []bool{false, true} {
		var e study.Edit = study.ChangeQuestion{To: q}
		if aside {
			e = study.Dismiss{Dismissal: study.Dismissal{Rival: rival, Key: "M1 hedge bees flowers", Why: "the landowners asked"}}
		}
		if doc, err = e.Apply(doc); err != nil {
			t.Fatal(err)
		}
		var out bytes.Buffer
		if err := WriteHTML(&out, Input{Study: doc, Rival: rival, Question: doc.Questions[0]}); err != nil {
			t.Fatal(err)
		}
		text := out.String()
		if !strings.Contains(text, "Holding flowers would hide part of the effect") || strings.Contains(text, "Because: the landowners asked") != aside {
			t.Errorf("set aside %v, the report does not say so", aside)
		}
	}
}

// The reading stands in the report with its estimand, the independences that
// the data could contradict, what was set aside with the reason, and what is
// assumed with notes and references.
func TestReportOnTheReading(t *testing.T) {
	doc, err := study.Load("../../assets/examples/hedgerows.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	rival, q := doc.Rivals[0].Name, doc.Questions[0]
	doc, err = study.Dismiss{Dismissal: study.Dismissal{Rival: rival, Key: "instrument arable", Why: "no law here is linear"}}.Apply(doc)
	if err != nil {
		t.Fatal(err)
	}
	read, err := findings.Read(context.Background(), doc, rival, findings.AskOf(q), findings.Limits{})
	if err != nil {
		t.Fatal(err)
	}
	data := &evidence.Evidence{Summary: "Of 17 independences 1 is contradicted.", Findings: []evidence.Finding{{Verdict: evidence.Contradicted, Sentence: "In these data they are not."}}}
	var out bytes.Buffer
	if err := WriteHTML(&out, Input{Study: doc, Rival: rival, Question: q, Graph: read.Graph, Reading: read.Reading, Findings: read, Evidence: data}); err != nil {
		t.Fatal(err)
	}
	text := out.String()
	for _, want := range []string{
		"confounded along 3 open back-door paths. Hold pesticide and soil.", "5 paths lead from hedge to bees",
		"∑{pesticide, soil} [P(bees | pesticide, hedge, soil) P(pesticide, soil)]", "Leave flowers free: it lies on hedge → flowers → bees.",
		"carries pesticide, because attitude was left out", "Your arrows say that flowers and arable are unrelated once hedge and soil are known.",
		"Set aside: arable, given pesticide,", "Because: no law here is linear", "In these data they are not.", "one season only", "large fields lost their hedges", "no arrow",
	} {
		if !strings.Contains(html.UnescapeString(text), want) {
			t.Errorf("the report does not say %q", want)
		}
	}
}

// With several rivals the report says which predicts better, or that they were
// not compared.
func TestReportOnPrediction(t *testing.T) {
	s, err := (study.AddRival{Rival: study.Rival{Name: "Feed only"}}).Apply(study.New())
	if err != nil {
		t.Fatal(err)
	}
	in := Input{Study: s, Rival: "Feed only"}
	var page bytes.Buffer
	if err := WriteHTML(&page, in); err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(page.String(), "Not done: the rivals were not compared") {
		t.Error("a comparison that was not made is not missed")
	}
	in.Rivals = &fit.Comparison{
		Question: study.Question{Exposure: "hedge", Outcome: "bees"}, Outcome: "bees", Units: make([]string, 120), Entries: 120, Better: "Nest and feed",
		Rivals: []*fit.Scored{{Rival: "Feed only", Score: -310, Error: 9, Identified: true}, {Rival: "Nest and feed", Score: -290, Error: 9}},
		Pairs:  []fit.Pair{{Higher: "Nest and feed", Lower: "Feed only", Difference: 20, Error: 5}},
	}
	page.Reset()
	if err := WriteHTML(&page, in); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"Which rival predicts better?", "Nest and feed predicts bees better than Feed only.", "the effect is not identified", "20.0, error 5.0", "To predict better is not to be right about causes"} {
		if !strings.Contains(page.String(), want) {
			t.Errorf("the report does not say %q", want)
		}
	}
}

// The caption of the plot of strengths speaks of discs only where there are any.
func TestStrengthCaption(t *testing.T) {
	none, some := draw.Trail{Label: "z"}, draw.Trail{Label: "w", Points: []draw.Point{{X: 0.1, Y: 0.2}}}
	for _, c := range []struct {
		trails []draw.Trail
		want   string
	}{{nil, "Nothing is held"}, {[]draw.Trail{none}, "No held variable is drawn"}, {[]draw.Trail{none, some}, "Discs"}} {
		if got := strengthSays(draw.Strength{Trails: c.trails}); !strings.HasPrefix(got, c.want) {
			t.Errorf("%d trails: %q", len(c.trails), got)
		}
	}
}
