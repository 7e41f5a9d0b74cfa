package fit

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/infer/summary"
)

// A Quantity is one entry of a parameter with what is said of it.
type Quantity struct {
	Name      string // typed
	Symbol    string
	Parameter int // index in the model's parameters
	summary.Summary
	Trust   summary.Trust
	PriorSD float64 // NaN where the prior leans on other parameters
}

// summarise fills in Quantities, Sampling and Trust.
func (f *Fitted) summarise(level float64, runs []*blockRun) {
	steps, chains := f.Steps(), len(f.Chains)
	f.Sampling = summary.Sampling{Chains: chains, Draws: steps * chains, WorstEBFMI: math.NaN()}
	byBlock := make([]summary.Sampling, len(runs))
	for i, r := range runs {
		s := summary.SamplingOf(r.draws)
		byBlock[i] = s
		f.Sampling.Divergent += s.Divergent
		f.Sampling.AtLimit += s.AtLimit
		if !(f.Sampling.WorstEBFMI <= s.WorstEBFMI) {
			f.Sampling.WorstEBFMI = s.WorstEBFMI
		}
	}
	var trusts []summary.Trust
	for i, q := range f.Density.Quantities {
		s := summary.Of(f.series(i), level)
		sampling := f.Sampling
		if q.Block >= 0 {
			sampling = byBlock[q.Block]
		}
		s.Constant = s.Constant || q.Constant
		out := Quantity{
			Name: q.Name, Symbol: q.Symbol, Parameter: q.Parameter, Summary: s,
			Trust: summary.Judge(s, sampling), PriorSD: priorSD(f.Model.Parameters[q.Parameter]),
		}
		f.Quantities = append(f.Quantities, out)
		trusts = append(trusts, out.Trust)
	}
	f.Trust = worstQuantity(f.Quantities, trusts)
	if len(f.Quantities) == 0 {
		f.Trust = summary.Judge(summary.Summary{Constant: true}, f.Sampling)
	}
}

// namedReasons is how many quantities a joined verdict names; the others are
// counted.
const namedReasons = 3

// worstQuantity joins the verdicts on quantities. Reasons that all of those
// that are not sound share are said once; beyond them each parameter speaks
// through its worst entry, since a hundred group effects with few draws are
// one reason, and the worst three are named.
func worstQuantity(all []Quantity, trusts []summary.Trust) summary.Trust {
	var t summary.Trust
	times := make(map[string]int)
	worst := make(map[int]int) // by parameter: place in all
	faults := 0
	for i, x := range trusts {
		t.Verdict = max(t.Verdict, x.Verdict)
		if x.Verdict == summary.Sound {
			continue
		}
		faults++
		for _, r := range x.Reasons {
			times[r]++
		}
		at, known := worst[all[i].Parameter]
		if !known || x.Verdict > trusts[at].Verdict || x.Verdict == trusts[at].Verdict && weaker(all[i].Summary, all[at].Summary) {
			worst[all[i].Parameter] = i
		}
	}
	places := slices.SortedFunc(maps.Values(worst), func(a, b int) int {
		switch {
		case trusts[a].Verdict != trusts[b].Verdict:
			return int(trusts[b].Verdict - trusts[a].Verdict)
		case weaker(all[a].Summary, all[b].Summary):
			return -1
		case weaker(all[b].Summary, all[a].Summary):
			return 1
		}
		return a - b
	})
	shared := func(reason string) bool { return faults > 1 && times[reason] == faults }
	named, more := []string(nil), 0
	for k, at := range places {
		var own []string
		for _, r := range trusts[at].Reasons {
			if !shared(r) {
				own = append(own, r)
			} else if k == 0 {
				t.Reasons = append(t.Reasons, r)
			}
		}
		switch {
		case len(own) == 0:
		case len(named) < namedReasons:
			named = append(named, all[at].Symbol+": "+strings.Join(own, ", "))
		default:
			more++
		}
	}
	if more > 0 {
		named = append(named, fmt.Sprintf("and %d more", more))
	}
	t.Reasons = append(t.Reasons, named...)
	return t
}

// weaker reports whether a has fewer effective draws; unknown is fewest.
func weaker(a, b summary.Summary) bool {
	if x, y := math.IsNaN(a.BulkESS+a.TailESS), math.IsNaN(b.BulkESS+b.TailESS); x || y {
		return x && !y
	}
	return math.Min(a.BulkESS, a.TailESS) < math.Min(b.BulkESS, b.TailESS)
}

// series is one quantity, chain by chain.
func (f *Fitted) series(q int) [][]float64 {
	out := make([][]float64, len(f.Chains))
	for c, rows := range f.Chains {
		out[c] = make([]float64, len(rows))
		for i, row := range rows {
			out[c][i] = row[q]
		}
	}
	return out
}

// Draws of one quantity by typed name, chain after chain; nil if there is none.
func (f *Fitted) Draws(name string) []float64 {
	for i, q := range f.Density.Quantities {
		if q.Name == name {
			var all []float64
			for _, c := range f.series(i) {
				all = append(all, c...)
			}
			return all
		}
	}
	return nil
}

func priorSD(p *model.Parameter) float64 {
	args, ok := numbers(p.Prior.Arguments)
	if !ok || p.Prior.Family == nil || p.Prior.On != model.Itself || p.Prior.Family.SD == nil || p.Shape == model.ByPlate || p.Shape == model.Cuts {
		return math.NaN()
	}
	return p.Prior.Family.SD(args)
}

func numbers(exprs []formula.Expr) ([]float64, bool) {
	out := make([]float64, len(exprs))
	for i, e := range exprs {
		x, ok := constant(e)
		if !ok {
			return nil, false
		}
		out[i] = x
	}
	return out, true
}

func constant(e formula.Expr) (float64, bool) {
	switch e := e.(type) {
	case *formula.Number:
		return e.Value, true
	case *formula.Unary:
		x, ok := constant(e.X)
		return -x, ok
	case *formula.Call:
		args := make([]float64, len(e.Args))
		for i, a := range e.Args {
			x, ok := constant(a)
			if !ok {
				return 0, false
			}
			args[i] = x
		}
		f := catalog.FunctionByName(e.Function)
		if f == nil {
			return 0, false
		}
		return f.Value(args), true
	case *formula.Binary:
		x, okX := constant(e.X)
		y, okY := constant(e.Y)
		switch e.Op {
		case '+':
			return x + y, okX && okY
		case '-':
			return x - y, okX && okY
		case '*':
			return x * y, okX && okY
		case '/':
			return x / y, okX && okY
		case '^':
			return math.Pow(x, y), okX && okY
		}
	}
	return 0, false
}
