package fit

import (
	"context"
	"math"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/effect"
	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/infer/summary"
)

// An ArrowPaint is what a fit says of one drawn arrow (SEMANTICS G).
type ArrowPaint struct {
	From, To        string
	summary.Summary         // change in plausible widths of the child
	Unsigned        bool    // a distance: category children
	Association     bool    // not causal: an unmeasured cause joins both ends
	Words           string  // "×1.02 (90 %: 0.99 to 1.05) per 10 m/ha"
	Learned         float64 // 0 nothing … 1 everything; NaN where it cannot be said
	Trust           summary.Trust
}

// A NodePaint is what a fit says of one variable.
type NodePaint struct {
	Variable        string
	summary.Summary // change under the question's intervention, in plausible widths
	Unsigned        bool
	Plain           bool // does not descend from the exposure, or nothing was asked
	Refused         bool // its change is not to be had from this fit
	Learned         float64
	Trust           summary.Trust
	Modelled        bool
}

// paint fills in Arrows and Nodes. After a cancel it has a second for it; what
// is not there by then stays unpainted.
func (r *Result) paint(ctx context.Context, req *Request, g *graph.Graph) error {
	late, cancel := grace(ctx, req.afterCancel())
	defer cancel()
	err := r.paintArrows(late, req, g)
	if err == nil {
		err = r.paintNodes(late, req, g)
	}
	if late.Err() != nil {
		return nil
	}
	return err
}

func (r *Result) paintArrows(ctx context.Context, req *Request, g *graph.Graph) error {
	f, level := r.Full, req.Level()
	arrows, err := effect.Arrows(ctx, f.Model, f.Pooled(), options(req))
	if err != nil {
		return err
	}
	siblings := confounded(g)
	for _, a := range arrows {
		p := ArrowPaint{From: a.From, To: a.To, Unsigned: a.Unsigned, Words: a.Words,
			Association: siblings[[2]string{a.From, a.To}]}
		p.Summary = f.ofPooled(a.Values, level)
		p.Learned, p.Trust = f.learned(arrowParameters(f.Model, a.From, a.To))
		p.Trust = summary.Worst(p.Trust, summary.Judge(p.Summary, f.Sampling))
		r.Arrows = append(r.Arrows, p)
	}
	return nil
}

// paintNodes gives every node what the data taught of it and, where a question
// was asked that is complete, its change under the intervention.
func (r *Result) paintNodes(ctx context.Context, req *Request, g *graph.Graph) error {
	f, level := r.Full, req.Level()
	var nodes []effect.NodeEffect
	if req.Question != nil && r.Unanswered == nil {
		var err error
		if nodes, err = effect.Nodes(ctx, f.Model, g, *req.Question, f.Pooled(), source(req, "nodes"), options(req)); err != nil {
			return err
		}
	}
	byName := make(map[string]effect.NodeEffect)
	for _, n := range nodes {
		byName[n.Variable] = n
	}
	modelled := make(map[int]bool)
	for _, law := range f.Model.Laws {
		modelled[law.Variable] = true
	}
	for i, v := range f.Model.Variables {
		p := NodePaint{Variable: v.ID, Plain: true, Modelled: modelled[i]}
		if n, ok := byName[v.ID]; ok {
			p.Plain, p.Refused, p.Unsigned = n.Plain, n.Refused, n.Unsigned
			if !n.Plain && !n.Refused {
				p.Summary = f.ofPooled(n.Values, level)
			}
		}
		p.Learned, p.Trust = f.learned(func(k int) bool { return f.Model.Parameters[k].Of == i })
		r.Nodes = append(r.Nodes, p)
	}
	return nil
}

// ofPooled summarises values of pooled draws; a thinned set of them is taken
// as evenly spread over the chains.
func (f *Fitted) ofPooled(values []float64, level float64) summary.Summary {
	chains := make([][]float64, len(f.Chains))
	n := len(values) / len(chains)
	for c := range chains {
		chains[c] = values[c*n : (c+1)*n]
	}
	return summary.Of(chains, level)
}

// learned is one minus the ratio of posterior to prior sd, averaged over the
// chosen parameters whose prior stands by itself, with the worst verdict.
func (f *Fitted) learned(chosen func(parameter int) bool) (float64, summary.Trust) {
	sum, n := 0.0, 0.0
	var all []Quantity
	var trusts []summary.Trust
	for _, q := range f.Quantities {
		if !chosen(q.Parameter) {
			continue
		}
		all = append(all, q)
		trusts = append(trusts, q.Trust)
		if q.PriorSD > 0 && !math.IsInf(q.PriorSD, 0) {
			sum += math.Max(0, 1-q.Spread/q.PriorSD)
			n++
		}
	}
	learned := math.NaN()
	if n > 0 {
		learned = sum / n
	}
	return learned, worstQuantity(all, trusts)
}

// arrowParameters chooses the parameters of the terms that an arrow makes.
func arrowParameters(m *model.Model, from, to string) func(int) bool {
	child, _ := m.Name(to)
	parent, _ := m.Name(from)
	chosen := make(map[int]bool)
	for _, law := range m.Laws {
		if law.Variable != child {
			continue
		}
		for _, t := range law.Terms {
			if t.Variable == parent || t.With == parent && t.With >= 0 {
				for _, k := range t.Parameters {
					chosen[k] = true
				}
			}
		}
	}
	return func(k int) bool { return chosen[k] }
}

// confounded marks the drawn arrows whose ends share an unmeasured cause, near
// or far: what is fitted along them is an association.
func confounded(g *graph.Graph) map[[2]string]bool {
	measured := causal.Project(g).Graph
	out := make(map[[2]string]bool)
	for _, a := range measured.Arrows {
		if slices.Contains(measured.Siblings[a[0]], a[1]) {
			out[[2]string{measured.Names[a[0]], measured.Names[a[1]]}] = true
		}
	}
	return out
}
