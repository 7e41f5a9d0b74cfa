package ui

import (
	"arrowroot/canvas/scene"
	"arrowroot/compile/evidence"
	"arrowroot/compile/graph"
)

// evidenceLines are the promises of the arrows with what the data say of them,
// the worst first, then constraints that are no independences and negative
// controls.
func evidenceLines(d *desk) []readingLine {
	e := d.view.Evidence
	var out []readingLine
	for i := range e.Findings {
		x := &e.Findings[i]
		l := d.tested(e.Graph, x.Verdict, x.Sentence)
		l.key = "promise " + x.Key
		l.marks = func() *scene.Mark { return apart(e.Graph, x) }
		if r := x.Repair; r != nil {
			l.why = r.Sentence
			l.does, l.act = "Draw it", func() { d.do(r.Edit) }
			l.marks = func() *scene.Mark {
				m := apart(e.Graph, x)
				m.Apart, m.Offer = nil, [][2]string{{r.From, r.To}}
				return m
			}
		}
		out = append(out, l)
	}
	return out
}

// tested is a row of something that the data were asked about.
func (d *desk) tested(g *graph.Graph, v evidence.Verdict, sentence string) readingLine {
	l := readingLine{kind: v.String(), text: sentence}
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

// apart marks the pair that no arrow joins, and what is known.
func apart(g *graph.Graph, x *evidence.Finding) *scene.Mark {
	a, b := namesIn(g, x.A), namesIn(g, x.B)
	m := &scene.Mark{Ring: append(a, b...), Box: namesIn(g, x.Given)}
	if len(x.A) == 1 && len(x.B) == 1 {
		m.Apart = [][2]string{{a[0], b[0]}}
	}
	return m
}
