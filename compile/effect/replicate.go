package effect

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"sync"

	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
)

// mostUnits is how many units of a variable are replicated; of more, so many
// evenly spaced ones are.
const mostUnits = 10000

// A Replica is one variable as its fitted law would have given it, over and
// over: at the units' own values of what the law reads, one set of values for
// each draw. Entries that are missing are neither observed nor replicated.
type Replica struct {
	Variable int
	Rows     []int       // the used row of each unit; of a coarser level its first row
	Observed []float64   // per unit
	Values   [][]float64 // per draw, per unit
	Trials   []float64   // per unit, where the law counts successes; nil otherwise
	Reads    []int       // the variables that the law reads
	Units    int         // observed units, of which Rows are all or an even selection
}

// Replicate draws a variable's values from its law, once for each draw. The
// same source gives the same values, on any number of cores. Units for which a
// draw gives no value are left out.
func Replicate(ctx context.Context, m *model.Model, variable int, draws [][]float64, src rand.Source, opt Options) (*Replica, error) {
	p, err := newPlanner(m)
	if err != nil {
		return nil, err
	}
	v, l := m.Variables[variable], p.laws[variable]
	if l == nil {
		return nil, fmt.Errorf("%s has no law in this fit", v.ID)
	}
	if err := replicable(l, v.ID); err != nil {
		return nil, err
	}
	if len(draws) == 0 {
		return nil, fmt.Errorf("there are no draws to replicate %s from", v.ID)
	}
	out := &Replica{Variable: variable, Reads: l.reads, Values: make([][]float64, len(draws))}
	pick := observedRows(m, v)
	out.Units = len(pick)
	pick = evenly(pick, fewerUnits(l, len(draws), opt.Budget))
	if len(pick) == 0 {
		return nil, fmt.Errorf("%s has no observed entries in the rows used", v.ID)
	}
	rows := rowsAt(m, pick)
	unknowns := rows.unknowns(p.resolver)
	seeds := make([]uint64, len(draws))
	for i := range seeds {
		seeds[i] = src.Uint64()
	}
	clock := progress{tell: opt.Progress, of: len(draws)}
	workers := min(runtime.GOMAXPROCS(0), len(draws))
	var wait sync.WaitGroup
	for g := range workers {
		wait.Go(func() {
			w := newWorker(rows.own(unknowns), p.slots)
			for i := g; i < len(draws); i += workers {
				if ctx.Err() != nil {
					return
				}
				w.draw = draws[i]
				w.rows.fill(unknowns, w.draw)
				copy(w.columns, w.rows.columns)
				out.Values[i] = w.replicate(l, rand.New(rand.NewPCG(seeds[i], 0)))
				clock.tick()
			}
		})
	}
	wait.Wait()
	if ctx.Err() != nil {
		return nil, ctx.Err()
	}
	out.Rows, out.Observed = pick, make([]float64, len(pick))
	w := newWorker(rows.own(unknowns), p.slots)
	w.draw = draws[0]
	w.rows.fill(unknowns, w.draw)
	copy(w.columns, w.rows.columns)
	e := w.natural(l)
	for i, x := range rows.columns[variable] {
		out.Observed[i] = recorded(l, x, w.row(&e, i))
	}
	if l.Family.Support == catalog.UpTo {
		out.Trials = p.trials(rows, l, draws[0])
	}
	out.dropNaN()
	return out, ctx.Err()
}

// replicate draws a value for every row, each from a uniform of its own.
func (w *worker) replicate(l *law, rng *rand.Rand) []float64 {
	e := w.natural(l)
	out := make([]float64, w.rows.n)
	for i := range out {
		args := w.row(&e, i)
		out[i] = recorded(l, quantileOf(l, open(rng), args), args)
	}
	return out
}

// recorded is a value as it would have been written down: the limit where it
// is known only to lie beyond it.
func recorded(l *law, x float64, args []float64) float64 {
	switch {
	case strings.HasPrefix(l.Family.Name, leftCensored):
		return math.Max(x, args[len(args)-1])
	case strings.HasPrefix(l.Family.Name, rightCensored):
		return math.Min(x, args[len(args)-1])
	}
	return x
}

// Families of values that are known within bounds begin so (catalog.Bounded).
const (
	leftCensored     = "left-censored "
	rightCensored    = "right-censored "
	stopped          = "censored "
	intervalCensored = "interval-censored "
)

// NotReplicated says why a variable's values cannot be drawn as they would have
// been recorded.
type NotReplicated struct{ Reason string }

func (e *NotReplicated) Error() string { return e.Reason }

// replicable refuses laws whose values were recorded in a way that the law does
// not tell.
func replicable(l *law, id string) error {
	switch {
	case strings.HasPrefix(l.Family.Name, stopped):
		return &NotReplicated{"when " + id + " would have stopped being observed is not known for rows where it was seen to the end"}
	case strings.HasPrefix(l.Family.Name, intervalCensored):
		return &NotReplicated{id + " is known only to lie between two columns, and a replicate has no such interval"}
	}
	return nil
}

// observedRows gives one used row for each unit whose entry was observed.
func observedRows(m *model.Model, v *model.Variable) []int {
	missing := make(map[int]bool, len(v.Missing))
	for _, unit := range v.Missing {
		missing[int(unit)] = true
	}
	var out []int
	seen := make(map[int]bool)
	for row := range m.Rows.Used {
		unit := row
		if v.Plate >= 0 {
			unit = int(m.Plates[v.Plate].Of[row])
			if seen[unit] {
				continue
			}
			seen[unit] = true
		}
		if !missing[unit] && unit < len(v.Values) && !math.IsNaN(v.Values[unit]) {
			out = append(out, row)
		}
	}
	return out
}

// fewerUnits is how many units a budget of law evaluations affords.
func fewerUnits(l *law, draws int, budget float64) int {
	if budget <= 0 {
		budget = defaultBudget
	}
	work := (1 + quantileWork[l.Family.Name]) * float64(draws)
	return min(mostUnits, max(1, int(2*budget/work)))
}

// evenly is an evenly spaced selection of at most n.
func evenly(all []int, n int) []int {
	if len(all) <= n {
		return all
	}
	out := make([]int, n)
	for i := range out {
		out[i] = all[int(int64(i)*int64(len(all))/int64(n))]
	}
	return out
}

// trials evaluates the number of trials of each row, which no draw changes.
func (p *planner) trials(rows *rowset, l *law, draw []float64) []float64 {
	k := l.Family.Argument("trials")
	if k < 0 || l.arguments[k] == nil {
		return nil
	}
	w := newWorker(rows, p.slots)
	w.draw = draw
	values := w.eval(l.arguments[k])
	out := make([]float64, rows.n)
	for i := range out {
		out[i] = at(values, i)
	}
	return out
}

// dropNaN leaves out units without a value in some draw.
func (r *Replica) dropNaN() {
	kept := 0
	for i := range r.Rows {
		whole := true
		for _, values := range r.Values {
			whole = whole && !math.IsNaN(values[i])
		}
		if !whole {
			continue
		}
		r.Rows[kept], r.Observed[kept] = r.Rows[i], r.Observed[i]
		if r.Trials != nil {
			r.Trials[kept] = r.Trials[i]
		}
		for _, values := range r.Values {
			values[kept] = values[i]
		}
		kept++
	}
	r.Rows, r.Observed = r.Rows[:kept], r.Observed[:kept]
	if r.Trials != nil {
		r.Trials = r.Trials[:kept]
	}
	for d := range r.Values {
		r.Values[d] = r.Values[d][:kept]
	}
}
