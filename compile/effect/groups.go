package effect

import (
	"fmt"
	"math"

	"arrowroot/compile/model"
)

// A freshVector holds one entry per level of a plate: baselines or slopes that
// are drawn anew where a question is about new groups (SEMANTICS B5). In the
// draw, entries lie around the mean with the sd.
type freshVector struct {
	plate    int
	at, size int
	mean, sd int // places in the draw; mean -1 = zero
}

// freshOf lists the vectors that a plan reads and that vary by a plate.
func (p *planner) freshOf(plan *plan) ([]freshVector, error) {
	var laws []*law
	for _, st := range plan.steps {
		laws = append(laws, st.law)
	}
	for _, t := range plan.targets {
		laws = append(laws, t.law)
	}
	return p.vectorsOf(laws...)
}

// vectorsOf lists the vectors that laws read and that vary by a plate; a nil
// law reads none.
func (p *planner) vectorsOf(laws ...*law) ([]freshVector, error) {
	read := make(map[int]bool) // places in the draw
	for _, l := range laws {
		if l == nil {
			continue
		}
		for _, n := range l.predictors {
			n.vectors(read)
		}
		for _, n := range l.arguments {
			n.vectors(read)
		}
	}
	var out []freshVector
	for i, q := range p.m.Parameters {
		if q.Shape != model.ByPlate || !read[p.offset[i]] {
			continue
		}
		f := freshVector{plate: q.Plate, at: p.offset[i], size: len(p.m.Plates[q.Plate].Levels), mean: -1}
		sd, ok := p.params[q.SD]
		if !ok {
			return nil, fmt.Errorf("nothing says how far the levels of %s lie apart in %s", p.m.Plates[q.Plate].Name, q.Name)
		}
		f.sd = p.offset[sd]
		if mean, ok := p.params[q.Mean]; ok {
			f.mean = p.offset[mean]
		}
		out = append(out, f)
	}
	return out, nil
}

// vectors marks the places of the by-plate vectors that an expression reads.
func (n *node) vectors(read map[int]bool) {
	if n == nil {
		return
	}
	if n.code == byRow {
		read[n.at] = true
	}
	for _, a := range n.args {
		a.vectors(read)
	}
}

// replicatesOfGroups is how many values of each group's effects a round with
// new groups averages over: stratified, their error falls much faster with their
// number than that of independent ones, and eight are cheap.
const replicatesOfGroups = 8

// replicates is how many sets of uniforms a round has.
func (s *simulation) replicates() int {
	if len(s.fresh) > 0 {
		return replicatesOfGroups
	}
	return 1
}

// regroup puts fresh groups into the draw: normal quantiles of one replicate's
// uniforms, the same under every arm. There are as many as in the data, so
// that rows of one group go on sharing its effects.
func (b *bench) regroup(replicate int, mirrored bool) {
	if b.drawn == nil {
		b.drawn = make([]float64, len(b.fitted))
	}
	b.w.draw = b.drawn
	copy(b.drawn, b.fitted)
	for k, f := range b.fresh {
		mean := 0.0
		if f.mean >= 0 {
			mean = b.fitted[f.mean]
		}
		for j := range f.size {
			z := math.Sqrt2 * math.Erfinv(2*b.groups[k][j*replicatesOfGroups+replicate]-1)
			if mirrored {
				z = -z
			}
			b.drawn[f.at+j] = mean + b.fitted[f.sd]*z
		}
	}
}

// freshPlates names the plates whose levels are new ones, in order.
func (s *simulation) freshPlates() []string {
	var out []string
	seen := make(map[int]bool)
	for _, f := range s.fresh {
		if !seen[f.plate] {
			seen[f.plate] = true
			out = append(out, s.m.Plates[f.plate].Name)
		}
	}
	return out
}
