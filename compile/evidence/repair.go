package evidence

import (
	"fmt"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

// mend finds for each contradicted independence the arrow that takes it away.
// Its own two variables are always a candidate; those of another contradicted
// one are where a single arrow takes away both: without x → y, whatever acts on
// x is promised to be unrelated to y as well.
func (b *bench) mend(all []Finding) {
	var wrong []int
	for i := range all {
		if all[i].Verdict == Contradicted {
			wrong = append(wrong, i)
		}
	}
	slices.SortStableFunc(wrong, func(i, j int) int { return worse(all[i], all[j]) })
	type candidate struct {
		repair *Repair
		mends  []int
	}
	var candidates []candidate
	own := make(map[int]int)
	for _, i := range wrong {
		r, g := b.join(all[i].A[0], all[i].B[0])
		if r == nil {
			continue
		}
		c := candidate{repair: r}
		for _, j := range wrong {
			if f := &all[j]; !causal.Separated(g, f.A, f.B, f.Given) {
				c.mends = append(c.mends, j)
			}
		}
		r.Mends = len(c.mends)
		own[i] = len(candidates)
		candidates = append(candidates, c)
	}
	for _, i := range wrong {
		best := -1
		if at, ok := own[i]; ok && slices.Contains(candidates[at].mends, i) {
			best = at
		}
		for at, c := range candidates { // worst first, so that of equals the surest is taken
			if slices.Contains(c.mends, i) && (best < 0 || c.repair.Mends > candidates[best].repair.Mends) {
				best = at
			}
		}
		if best >= 0 {
			r := *candidates[best].repair
			all[i].Repair = &r
		}
	}
}

// join draws the arrow between two variables that breaks no tier and closes no
// cycle, in the likelier direction if that will do. Where neither will it draws
// an unnamed common cause. The graph is that with it.
func (b *bench) join(x, y int) (*Repair, *graph.Graph) {
	likelier := b.direction(x, y)
	for _, ends := range [][2]int{likelier, {likelier[1], likelier[0]}} {
		from, to := ends[0], ends[1]
		if b.backInTime(from, to) || b.g.Descendants(to)[from] {
			continue
		}
		r := &Repair{From: b.g.Names[from], To: b.g.Names[to]}
		r.Edit = study.AddArrow{Rival: b.req.Rival, Arrow: study.Arrow{From: r.From, To: r.To}}
		r.Sentence = fmt.Sprintf("An arrow %s → %s, or an unmeasured cause of both, would account for it.", r.From, r.To)
		if d := b.diagram(); d != nil {
			if note := d.AbsentArrow(r.From, r.To); note != nil && note.Why != "" {
				r.Sentence = fmt.Sprintf("An arrow %s → %s, or an unmeasured cause of both, would account for it; you left it out because: %s.", r.From, r.To, note.Why)
			}
		}
		return r, extend(b.g, &[2]int{from, to}, nil)
	}
	r := &Repair{From: b.g.Names[x], To: b.g.Names[y], Arc: true}
	r.Edit = study.AddArc{Rival: b.req.Rival, Arc: study.Arc{A: r.From, B: r.To}}
	r.Sentence = fmt.Sprintf("An unmeasured cause of %s and %s would account for it; an arrow would close a cycle or run back in time.", r.From, r.To)
	return r, extend(b.g, nil, &[2]int{x, y})
}

func (b *bench) diagram() *study.Diagram {
	if r := b.req.Study.Rival(b.req.Rival); r != nil {
		return r.Diagram
	}
	return nil
}

// direction puts the end first that the arrow should leave: the earlier tier,
// else as another rival draws it, else away from the outcome that is asked
// about, else along the order of the sheet.
func (b *bench) direction(x, y int) [2]int {
	tierX, tierY := b.tier(x), b.tier(y)
	forth, back := b.drawnElsewhere(x, y), b.drawnElsewhere(y, x)
	turn := slices.Index(b.g.Order, x) > slices.Index(b.g.Order, y)
	switch q := b.req.Question; {
	case tierX > 0 && tierY > 0 && tierX != tierY:
		turn = tierX > tierY
	case forth != back:
		turn = back
	case q != nil && (b.g.Names[x] == q.Outcome || b.g.Names[y] == q.Outcome):
		turn = b.g.Names[x] == q.Outcome
	}
	if turn {
		x, y = y, x
	}
	return [2]int{x, y}
}

// drawnElsewhere reports whether another rival has this arrow.
func (b *bench) drawnElsewhere(from, to int) bool {
	return slices.ContainsFunc(b.req.Study.Rivals, func(r *study.Rival) bool {
		return r.Diagram != nil && r.Diagram.Arrow(b.g.Names[from], b.g.Names[to]) != nil
	})
}

func (b *bench) tier(v int) int {
	if x := b.req.Study.Variable(b.g.Names[v]); x != nil {
		return x.Tier
	}
	return 0
}

func (b *bench) backInTime(from, to int) bool {
	return b.tier(from) > 0 && b.tier(to) > 0 && b.tier(from) > b.tier(to)
}

// extend is a graph with one arrow or arc more, which must close no cycle.
func extend(g *graph.Graph, arrow, arc *[2]int) *graph.Graph {
	spec := specOf(g)
	if arrow != nil {
		spec.Arrows = append(slices.Clone(g.Arrows), *arrow)
	}
	if arc != nil {
		spec.Arcs = append(slices.Clone(g.Arcs), *arc)
	}
	out, err := graph.New(spec)
	if err != nil {
		panic(err) // whoever asks has looked for a cycle
	}
	return out
}

func specOf(g *graph.Graph) graph.Spec {
	spec := graph.Spec{Names: g.Names, Arrows: g.Arrows, Arcs: g.Arcs}
	for v := range g.Len() {
		if !g.Measured[v] {
			spec.Unmeasured = append(spec.Unmeasured, v)
		}
		if g.Computed[v] {
			spec.Computed = append(spec.Computed, v)
		}
	}
	return spec
}
