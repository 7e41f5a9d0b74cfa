package evidence

import (
	"context"
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/causal"
)

const (
	mostCells      = 256  // of the cross table of all variables that a constraint names
	mostLevels     = 6    // of one of them
	mostDifference = 128  // differences that have to be 0
	countStep      = 1e-4 // for derivatives, in rows
)

// functionals tests functional constraints (Verma & Pearl 1990). Of variables
// with few values the formula is evaluated on the cross table, and all
// differences that its free variable makes are held against 0 together, by a
// Wald test whose spreads are those of sums over groups (the delta method, its
// derivatives by differences). Of others, rows are weighted (weights.go).
func (b *bench) functionals(ctx context.Context) ([]Functional, []Untested, error) {
	if len(b.req.Selected) > 0 {
		return nil, nil, nil
	}
	list, _ := causal.Functionals(b.g)
	var all []Functional
	var not []Untested
	var p []float64
	for _, f := range list {
		if err := ctx.Err(); err != nil {
			return nil, nil, err
		}
		nodes := mentioned(f.Formula)
		reason := ""
		for _, v := range nodes {
			if reason == "" && b.data.of[v] == nil {
				reason = b.data.lacks[v]
			}
		}
		few := reason == "" && b.fewCells(nodes)
		if reason == "" && !few {
			reason = b.cannotWeigh(f)
		}
		if reason != "" {
			not = append(not, Untested{Sentence: fmt.Sprintf("%s That is not tested: %s.", f.Sentence(b.g), reason), Reason: reason})
			continue
		}
		found := b.functional
		if !few {
			found = b.weighted
		}
		one := found(f, nodes)
		all, p = append(all, one), append(p, one.P)
	}
	for i, adjusted := range holm(p) {
		f := &all[i]
		f.Adjusted = adjusted
		if f.Verdict != TooFew {
			f.Verdict, f.Short = verdict(f.Effect, adjusted)
		}
		otherwise := fmt.Sprintf("An arrow %s → %s would account for it.", b.g.Names[f.FreeOf], b.g.Names[f.Node])
		what := "typical difference of the probability"
		if f.Weighted {
			what = kindOf(f.Effect)
		}
		f.Sentence = f.Functional.Sentence(b.g) + " " + b.constraintShown(f.Verdict, f.Effect, f.Short, what, otherwise)
		if f.Verdict == TooFew && f.Short != "too few rows to say" {
			f.Sentence = fmt.Sprintf("%s These data cannot say: %s.", f.Functional.Sentence(b.g), f.Short)
		} else if f.Weighted {
			f.Sentence += fmt.Sprintf(" Its %s are weighted and count as %d.", plural(f.Rows, "row"), f.Effective)
		}
	}
	slices.SortStableFunc(all, func(x, y Functional) int {
		return worse(Finding{Verdict: x.Verdict, Effect: x.Effect, P: x.P}, Finding{Verdict: y.Verdict, Effect: y.Effect, P: y.P})
	})
	return all, not, nil
}

// fewCells reports whether a cross table of nodes is small enough.
func (b *bench) fewCells(nodes []int) bool {
	cells, rows := 1, b.rows(b.gapKey(nodes))
	for _, v := range nodes {
		levels := distinct(pick(b.data.of[v].values, rows), mostLevels+1)
		cells *= max(1, levels)
		if levels > mostLevels || cells > mostCells {
			return false
		}
	}
	return true
}

func (b *bench) functional(f causal.Functional, nodes []int) Functional {
	out := Functional{Functional: f, P: math.NaN(), Adjusted: math.NaN(), Verdict: TooFew, Short: "too few rows to say"}
	out.Effect = Effect{Value: math.NaN(), Low: math.NaN(), High: math.NaN()}
	rows := b.rows(b.gapKey(nodes))
	out.Rows = len(rows)
	t := newCrossTable(nodes, func(v int) []float64 { return pick(b.data.of[v].values, rows) })
	if t == nil {
		return out
	}
	base := t.differences(f)
	if len(base) == 0 || len(base) > mostDifference || slices.ContainsFunc(base, func(x float64) bool { return math.IsNaN(x) || math.IsInf(x, 0) }) {
		return out
	}
	// What one row more in a cell adds to each difference.
	influence := make([][]float64, len(t.counts))
	for cell, n := range t.counts {
		if n == 0 {
			continue
		}
		moved := t.with(cell, countStep).differences(f)
		influence[cell] = make([]float64, len(base))
		for k := range base {
			influence[cell][k] = (moved[k] - base[k]) / countStep
		}
	}
	schemes := []scheme{{units: len(rows), rank: 1}}
	for _, g := range b.groups {
		if of, n := renumber(g.of, rows); n >= fewGroups && n < len(rows) {
			schemes = append(schemes, scheme{of: of, units: n, rank: 1})
		}
	}
	for i := range schemes {
		e, p, ok := t.wald(base, influence, &schemes[i], b.req.Level)
		if !ok {
			return out
		}
		if i == 0 || p > out.P {
			out.Effect, out.P = e, p
		}
	}
	out.Verdict = Undecided
	return out
}

// wald holds differences against 0. Those that follow from others, as the
// probabilities of all values of a variable add up to 1, are left out.
func (t *crossTable) wald(base []float64, influence [][]float64, s *scheme, level float64) (Effect, float64, bool) {
	sums := make([][]float64, len(base))
	for k := range sums {
		sums[k] = make([]float64, s.units)
	}
	for i, cell := range t.cell {
		unit := i
		if s.of != nil {
			unit = s.of[i]
		}
		for k, x := range influence[cell] {
			sums[k][unit] += x
		}
	}
	omega := crossProducts(sums)
	total, rank := pseudoQuadratic(omega, base)
	df := s.freedom()
	if rank == 0 || df < float64(rank)+leastFreedom {
		return Effect{}, 0, false
	}
	k := float64(rank)
	total *= (df - k + 1) / float64(s.units)
	var size float64
	for _, x := range base {
		size += x * x
	}
	size = math.Sqrt(size / float64(len(base)))
	e := Effect{}
	if total > 0 {
		each, tail := size/math.Sqrt(total), (1-level)/2
		e.Value = each * math.Sqrt(math.Max(0, total-k))
		e.Low = each * math.Sqrt(noncentrality(total, k, 1-tail))
		e.High = each * math.Sqrt(noncentrality(total, k, tail))
	}
	return e, tailF(total/k, k, df-k+1), true
}

// pseudoQuadratic is quadratic over as many components as are not determined by
// those before.
func pseudoQuadratic(omega [][]float64, c []float64) (total float64, rank int) {
	dropped := make([]bool, len(c))
	y := make([]float64, len(c))
	for j := range c {
		l := omega[j]
		whole := l[j]
		for k := range j {
			if dropped[k] {
				l[k] = 0
				continue
			}
			for m := range k {
				l[k] -= l[m] * omega[k][m]
			}
			l[k] /= omega[k][k]
		}
		rest, s := whole, c[j]
		for k := range j {
			rest -= l[k] * l[k]
			s -= l[k] * y[k]
		}
		if !(rest > 1e-6*whole) || whole == 0 {
			dropped[j] = true
			clear(l)
			continue
		}
		l[j] = math.Sqrt(rest)
		y[j] = s / l[j]
		total += y[j] * y[j]
		rank++
	}
	return total, rank
}

// A crossTable counts rows by the values of a few variables.
type crossTable struct {
	nodes  []int
	levels []int // of each node
	cell   []int // of each row
	counts []float64
	total  float64

	margins map[string][]float64 // by the nodes that are kept, over all cells
}

// newCrossTable counts; nil where a variable has a single value.
func newCrossTable(nodes []int, values func(node int) []float64) *crossTable {
	t := &crossTable{nodes: nodes, margins: map[string][]float64{}}
	cells := 1
	for _, v := range nodes {
		x := values(v)
		if t.cell == nil {
			t.cell = make([]int, len(x))
		}
		seen := slices.Clone(x)
		slices.Sort(seen)
		seen = slices.Compact(seen)
		if len(seen) < 2 {
			return nil
		}
		for i, value := range x {
			at, _ := slices.BinarySearch(seen, value)
			t.cell[i] = t.cell[i]*len(seen) + at
		}
		t.levels = append(t.levels, len(seen))
		cells *= len(seen)
	}
	t.counts = make([]float64, cells)
	for _, c := range t.cell {
		t.counts[c]++
	}
	t.total = float64(len(t.cell))
	return t
}

// with is the table with some rows more in a cell.
func (t *crossTable) with(cell int, rows float64) *crossTable {
	out := &crossTable{nodes: t.nodes, levels: t.levels, counts: slices.Clone(t.counts), total: t.total + rows, margins: map[string][]float64{}}
	out.counts[cell] += rows
	return out
}

// differences gives, for each value of the other free variables, what every
// value of FreeOf but its first changes in the formula.
func (t *crossTable) differences(f causal.Functional) []float64 {
	var others []int
	for _, v := range causal.Free(f.Formula) {
		if v != f.FreeOf {
			others = append(others, v)
		}
	}
	at := make(map[int]int)
	var out []float64
	t.each(others, at, func() {
		at[f.FreeOf] = 0
		first := t.value(f.Formula, at)
		for u := 1; u < t.levelsOf(f.FreeOf); u++ {
			at[f.FreeOf] = u
			out = append(out, t.value(f.Formula, at)-first)
		}
	})
	return out
}

func (t *crossTable) levelsOf(node int) int { return t.levels[slices.Index(t.nodes, node)] }

// each walks over all values of some nodes.
func (t *crossTable) each(nodes []int, at map[int]int, visit func()) {
	if len(nodes) == 0 {
		visit()
		return
	}
	for k := range t.levelsOf(nodes[0]) {
		at[nodes[0]] = k
		t.each(nodes[1:], at, visit)
	}
}

// value evaluates an estimand where nodes have these values.
func (t *crossTable) value(e causal.Estimand, at map[int]int) float64 {
	switch e := e.(type) {
	case causal.Probability:
		given := t.count(e.Given, at)
		return t.count(slices.Concat(e.Of, e.Given), at) / given
	case causal.Product:
		x := 1.0
		for _, f := range e.Factors {
			x *= t.value(f, at)
		}
		return x
	case causal.Quotient:
		return t.value(e.Above, at) / t.value(e.Below, at)
	case causal.Sum:
		inner := make(map[int]int, len(at))
		for k, v := range at {
			inner[k] = v
		}
		x := 0.0
		t.each(e.Over, inner, func() { x += t.value(e.Body, inner) })
		return x
	}
	return math.NaN()
}

// count is the number of rows in which nodes have these values.
func (t *crossTable) count(nodes []int, at map[int]int) float64 {
	if len(nodes) == 0 {
		return t.total
	}
	kept := make([]bool, len(t.nodes))
	place := 0
	key := make([]byte, len(t.nodes))
	for i, v := range t.nodes {
		kept[i] = slices.Contains(nodes, v)
		key[i] = '0'
		if kept[i] {
			key[i] = '1'
			place = place*t.levels[i] + at[v]
		}
	}
	margin, ok := t.margins[string(key)]
	if !ok {
		size := 1
		for i, k := range kept {
			if k {
				size *= t.levels[i]
			}
		}
		margin = make([]float64, size)
		for cell, n := range t.counts {
			to, rest, scale := 0, cell, 1
			for i := len(kept) - 1; i >= 0; i-- {
				level := rest % t.levels[i]
				rest /= t.levels[i]
				if kept[i] {
					to += level * scale
					scale *= t.levels[i]
				}
			}
			margin[to] += n
		}
		t.margins[string(key)] = margin
	}
	return margin[place]
}

// mentioned lists the nodes of an estimand, bound ones too.
func mentioned(e causal.Estimand) []int {
	var all []int
	switch e := e.(type) {
	case causal.Probability:
		all = slices.Concat(e.Of, e.Given)
	case causal.Product:
		for _, f := range e.Factors {
			all = append(all, mentioned(f)...)
		}
	case causal.Quotient:
		all = slices.Concat(mentioned(e.Above), mentioned(e.Below))
	case causal.Sum:
		all = slices.Concat(e.Over, mentioned(e.Body))
	}
	slices.Sort(all)
	return slices.Compact(all)
}
