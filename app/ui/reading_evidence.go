package ui

import (
	"fmt"

	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/evidence"
	"arrowroot/compile/graph"
)

// evidenceLines are the promises of the arrows with what the data say of them,
// the worst first; then negative controls, constraints that are no
// independences, and what these data cannot show.
func evidenceLines(d *desk) []readingLine {
	e := d.view.Evidence
	var out []readingLine
	for i := range e.Findings {
		out = append(out, d.promiseLine(e.Graph, &e.Findings[i]))
	}
	for i := range e.Controls {
		c := &e.Controls[i]
		l := testedLine("control "+c.Key, "negative control", c.Sentence, c.Verdict)
		l.marks = func() *scene.Mark { return apart(e.Graph, &c.Independence) }
		out = append(out, l)
	}
	for i := range e.Functionals {
		f := &e.Functionals[i]
		l := testedLine(fmt.Sprint("functional ", f.Node, " ", f.FreeOf), "functional", f.Sentence, f.Verdict)
		l.marks = func() *scene.Mark {
			ends := e.Graph.NamesOf([]int{f.FreeOf, f.Node})
			return &scene.Mark{Ring: ends, Apart: [][2]string{{ends[0], ends[1]}}}
		}
		out = append(out, l)
	}
	for i := range e.Tetrads {
		t := &e.Tetrads[i]
		l := testedLine(fmt.Sprint("tetrad ", t.A, " ", t.B, " ", t.C, " ", t.D), "tetrad", t.Sentence, t.Verdict)
		l.marks = func() *scene.Mark { return &scene.Mark{Ring: e.Graph.NamesOf([]int{t.A, t.B, t.C, t.D})} }
		out = append(out, l)
	}
	for i := range e.Untested {
		u := &e.Untested[i]
		l := readingLine{key: fmt.Sprint("untested ", i), kind: "not tested", text: u.Sentence, tone: quietTone}
		if len(u.A)+len(u.B) > 0 {
			l.marks = func() *scene.Mark { return apart(e.Graph, &u.Independence) }
		}
		out = append(out, l)
	}
	return out
}

// promiseLine is one independence; where the data refuse it, the arrow that
// would repair the diagram is a click away and shows on the sheet.
func (d *desk) promiseLine(g *graph.Graph, x *evidence.Finding) readingLine {
	l := testedLine("promise "+x.Key, x.Verdict.String(), x.Sentence, x.Verdict)
	l.marks = func() *scene.Mark { return apart(g, &x.Independence) }
	if r := x.Repair; r != nil && r.Edit != nil {
		l.does, l.act = "Draw it", func() { d.do(r.Edit) }
		l.marks = func() *scene.Mark {
			m := apart(g, &x.Independence)
			if !r.Arc {
				m.Apart, m.Offer = nil, [][2]string{{r.From, r.To}}
			}
			return m
		}
	}
	return l
}

// testedLine is a row of something that the data were asked about.
func testedLine(key, kind, sentence string, v evidence.Verdict) readingLine {
	l := readingLine{key: key, kind: kind, text: sentence}
	switch v {
	case evidence.Contradicted:
		l.tone = badTone
	case evidence.Holds:
		l.tone = goodTone
	default:
		l.tone = quietTone
	}
	return l
}

// apart marks a pair that no arrow joins, and what is known of it.
func apart(g *graph.Graph, x *causal.Independence) *scene.Mark {
	a, b := g.NamesOf(x.A), g.NamesOf(x.B)
	m := &scene.Mark{Ring: append(a, b...), Box: g.NamesOf(x.Given)}
	if len(a) == 1 && len(b) == 1 {
		m.Apart = [][2]string{{a[0], b[0]}}
	}
	return m
}
