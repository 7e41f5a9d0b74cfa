// Package report writes one HTML file in which nothing can disagree: verdict,
// figure, statement and result all come from the same study and the same fit.
//
// Read report.go (what the page holds), reading.go and checks.go (two of its
// parts), page.html (how it looks).
package report

import (
	"bytes"
	_ "embed"
	"fmt"
	"html/template"
	"io"
	"math"
	"slices"

	"arrowroot/app/findings"
	"arrowroot/app/fit"
	"arrowroot/app/paint"
	"arrowroot/app/words"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/evidence"
	"arrowroot/compile/graph"
	"arrowroot/compile/mistake"
	"arrowroot/compile/model"
	"arrowroot/compile/replicate"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Input is what a report is about. Result may be nil: a report on the arrows
// alone.
type Input struct {
	Study    *study.Study
	Rival    string
	Question *study.Question
	Graph    *graph.Graph
	Reading  *causal.Reading
	Findings *findings.Findings // nil = the reading alone
	Evidence *evidence.Evidence // nil = the arrows were not held against data
	Result   *fit.Result
	Checks   *replicate.Checks // of Result; nil = none were made, and the report says so
	Rivals   *fit.Comparison   // by prediction; nil = they were not compared, and the report says so
}

//go:embed page.html
var page string

// A row of the table of quantities or of paths.
type row struct{ Cells []string }

type content struct {
	Title, Rival, Question string
	Verdict, Way           string
	Figure                 template.HTML
	Answer                 []string
	HowWrong               []string
	Strength               template.HTML
	StrengthSays           string
	Plots                  template.HTML
	Checks                 []string
	CheckPlots             template.HTML
	Prediction             []string
	Differences            template.HTML
	Statement              []statementLine
	Quantities             []row
	Controls               []row // coefficients that the question does not ask about
	Groups                 []row // entries of vectors that vary by a plate
	Trust                  string
	Rows                   string
	Paths                  []row
	MorePaths              bool
	Sets                   []string
	Forbidden              []string
	Counted                string // how many paths there are
	Sections               []section
	Evidence               *section
	Assumed                [][]string        // the arrow table, headings first
	Mistakes               []mistake.Mistake // that stand
	Aside                  []mistake.Mistake // that were set aside, with the reason
	Caution                string
	Seed                   uint64
	Fitted                 bool
}

type statementLine struct{ Class, Text, Reason string }

// WriteHTML writes the whole report.
func WriteHTML(w io.Writer, in Input) error {
	t, err := template.New("page").Parse(page)
	if err != nil {
		return err
	}
	c, err := contentOf(in)
	if err != nil {
		return err
	}
	return t.Execute(w, c)
}

func contentOf(in Input) (*content, error) {
	title := in.Study.Title
	if title == "" {
		title = "Untitled study"
	}
	c := &content{
		Title: title, Rival: in.Rival, Question: "Effect of " + words.Question(in.Study, in.Question),
		Caution: words.Caution,
	}
	if r := in.Reading; r != nil {
		c.Verdict, c.Way = r.Verdict.Sentence, r.Verdict.Way
		c.MorePaths = r.MorePaths
		for i := range r.Paths {
			c.Paths = append(c.Paths, pathRow(in.Graph, &r.Paths[i]))
		}
		for _, s := range r.Sets {
			c.Sets = append(c.Sets, words.List(in.Graph.NamesOf(s)))
		}
		for _, f := range r.Forbidden {
			c.Forbidden = append(c.Forbidden, in.Graph.Names[f.Node]+": "+f.Reason)
		}
	}
	if f := in.Findings; f != nil {
		c.Verdict, c.Way = f.Verdict.Sentence, f.Verdict.Way
		c.Sections = sectionsOf(f)
		if f.Paths != nil {
			c.Counted = f.Paths.Summary
		}
	}
	c.Evidence = evidenceOf(in.Evidence)
	if in.Study.Rival(in.Rival) != nil {
		if c.Assumed = in.Study.ArrowTable(in.Rival); len(c.Assumed) < 2 {
			c.Assumed = nil
		}
	}
	c.Mistakes = mistake.Find(in.Study, in.Rival, in.Question, in.Reading, nil)
	c.Aside = mistake.SetAside(in.Study, in.Rival, in.Question, in.Reading, nil)
	figure, err := figureOf(in)
	if err != nil {
		return nil, err
	}
	c.Figure = figure
	if r := in.Result; r != nil {
		c.Fitted, c.Seed = true, r.Seed
		c.Answer = words.Effect(in.Study, r)
		c.HowWrong = words.HowWrong(r.Effect)
		if e := r.Effect; e != nil && e.Sensitivity != nil && e.Sensitivity.Robustness != nil {
			strength := paint.Strength(e.Sensitivity)
			if c.Strength, err = svg(draw.StrengthPlot(420, 260, strength, plotStyle(scene.Light()))); err != nil {
				return nil, err
			}
			c.StrengthSays = strengthSays(strength)
		}
		c.Trust = r.Trust().String()
		c.Rows = words.Rows(r.Full.Model.Rows)
		c.Statement = statementOf(r.Full.Model)
		labels := words.Coefficients(in.Study, r.Full.Model)
		for _, q := range r.Full.Quantities {
			label := labels[q.Parameter]
			line := row{[]string{
				q.Symbol, words.Number(q.Centre), words.Number(q.Spread), words.Number(q.Low) + " to " + words.Number(q.High), words.Percent(q.Level),
				ratio(q.RHat), words.Whole(math.Min(q.BulkESS, q.TailESS)), q.Trust.Verdict.String(), label.Words,
			}}
			switch {
			case r.Full.Model.Parameters[q.Parameter].Shape == model.ByPlate, r.Full.Model.Parameters[q.Parameter].Shape == model.Unrecorded:
				c.Groups = append(c.Groups, line)
			case label.Control:
				c.Controls = append(c.Controls, line)
			default:
				c.Quantities = append(c.Quantities, line)
			}
		}
		if c.Plots, err = plotsOf(r); err != nil {
			return nil, err
		}
		c.Checks = words.Checks(in.Checks)
		if c.CheckPlots, err = checkPlots(in.Checks); err != nil {
			return nil, err
		}
	}
	return c, predicted(c, &in)
}

// predicted says which of several rivals predicts better, or that nobody asked.
func predicted(c *content, in *Input) error {
	if len(in.Study.Rivals) < 2 {
		return nil
	}
	if in.Rivals == nil {
		c.Prediction = []string{"Not done: the rivals were not compared by how well they predict."}
		return nil
	}
	c.Prediction = words.Comparison(in.Rivals)
	if len(in.Rivals.Pairs) == 0 {
		return nil
	}
	var err error
	c.Differences, err = svg(paint.Differences(640, paint.DifferencesHeight(in.Rivals), in.Rivals, plotStyle(scene.Light())))
	return err
}

func ratio(x float64) string {
	if math.IsNaN(x) {
		return "–"
	}
	return fmt.Sprintf("%.3f", x)
}

func pathRow(g *graph.Graph, p *causal.Path) row {
	kind := map[causal.PathKind]string{causal.Causal: "causal", causal.BackDoor: "back-door", causal.NonCausal: "non-causal"}[p.Kind]
	state := "open"
	if !p.Open {
		state = "closed"
		for _, s := range p.ClosedAt {
			state += " at " + g.Names[s.Node] + " (" + s.Reason + ")"
		}
	}
	return row{[]string{kind, p.Text(g), state}}
}

var lineClasses = map[model.LineKind]string{
	model.Heading: "heading", model.LawLine: "law", model.LinkLine: "law", model.GroupLine: "law", model.ComputedLine: "law", model.PriorLine: "prior", model.CarriedLine: "note", model.GivenLine: "note",
}

func statementOf(m *model.Model) []statementLine {
	var out []statementLine
	for _, l := range m.Statement().Lines {
		text := l.Right
		if l.Left != "" {
			text = l.Left + " " + l.Sign + " " + l.Right
		}
		out = append(out, statementLine{lineClasses[l.Kind], text, l.Reason})
	}
	return out
}

// The figure's size, in dips.
const (
	figureWidth  = 960
	figureHeight = 560
)

// dots is how many quantile dots stand under a node.
const dots = 20

// Sheet is the picture of a rival on paper.
func Sheet(in Input) *draw.List {
	rival := in.Study.Rival(in.Rival)
	input := scene.Input{
		Study: in.Study, Rival: rival, Question: in.Question, Reading: in.Reading,
		LitPath: scene.NoPath, Palette: scene.Light(), Width: figureWidth, Height: figureHeight,
	}
	if r := in.Result; r != nil {
		input.Paint = paint.Of(r, scene.EffectPaint, false)
		input.PlateCounts = make(map[string]int)
		for _, p := range r.Full.Model.Plates {
			input.PlateCounts[p.Name] = len(p.Levels)
		}
		input.Dots = make(map[string][]float64)
		for _, v := range r.Full.Model.Variables {
			input.Dots[v.ID] = table.Quantiles(v.Values, dots)
		}
	}
	input.View = scene.Fit(input)
	list, _ := scene.Build(input)
	return list
}

func figureOf(in Input) (template.HTML, error) {
	if in.Study.Rival(in.Rival) == nil {
		return "", nil
	}
	return svg(Sheet(in))
}

func plotsOf(r *fit.Result) (template.HTML, error) {
	if r.Effect == nil {
		return "", nil
	}
	var all template.HTML
	for _, n := range []struct {
		name string
		of   *fit.Number
	}{{"crude", r.Effect.Crude}, {"held", r.Effect.Adjusted}, {"full model", r.Effect.Full}} {
		if n.of == nil {
			continue
		}
		none := 0.0
		if r.Question.As == study.Ratio {
			none = 1
		}
		picture, err := svg(draw.DensityPlot(280, 110, draw.Density{
			Posterior: draw.KDE(n.of.Draws, 200), Low: n.of.Low, High: n.of.High, Mark: &none,
		}, plotStyle(scene.Light())))
		if err != nil {
			return "", err
		}
		caption := fmt.Sprintf("%s: %s, %s", n.name, words.Value(r.Question, n.of), n.of.Trust.Verdict)
		if n.of.Association {
			caption += ", an association"
		}
		all += template.HTML("<figure>") + picture + template.HTML("<figcaption>"+template.HTMLEscapeString(caption)+"</figcaption></figure>")
	}
	return all, nil
}

// plotStyle draws plots in a palette's colours.
func plotStyle(p scene.Palette) draw.Style {
	return draw.Style{Ground: p.Card, Ink: p.Ink, Muted: p.Muted, Hairline: p.Hairline, Accent: p.Effect[4], Soft: p.Effect[3]}
}

func svg(l *draw.List) (template.HTML, error) {
	var b bytes.Buffer
	if err := draw.WriteSVG(&b, l); err != nil {
		return "", err
	}
	return template.HTML(b.String()), nil
}

// strengthSays is the caption of the plot of strengths. A cause as strong as a
// held variable that explains too much of the exposure cannot be, and is not
// drawn.
func strengthSays(s draw.Strength) string {
	if slices.ContainsFunc(s.Trails, func(t draw.Trail) bool { return len(t.Points) > 0 }) {
		return "Discs: each held variable, and a cause two and three times as strong"
	}
	if len(s.Trails) == 0 {
		return "Nothing is held to measure such a cause by"
	}
	return "No held variable is drawn: an unmeasured cause cannot be as strong as these"
}
