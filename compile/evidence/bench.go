package evidence

import (
	"context"
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"
	"sync"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// A bench is where statements are tested: data read once, scores kept.
type bench struct {
	req    *Request
	g      *graph.Graph
	data   *columns
	groups []grouping

	lock   sync.Mutex
	subset map[string][]int         // rows without the gaps of a key's variables
	scores map[string]*keptScores   // by node and subset
	given  map[string]*sharedDesign // by given set and subset
}

// keptScores are one variable in the rows of one gap key, reckoned once.
type keptScores struct {
	once   sync.Once
	values []float64
	scores [][]float64
	square []float64 // of the scores, where they take many values
	others int       // rows that do not have the most frequent value
}

func newBench(req *Request, g *graph.Graph) *bench {
	return &bench{
		req: req, g: g, data: readColumns(req.Study, req.Rival, req.Table, g), groups: groupings(req.Study, req.Table),
		subset: map[string][]int{}, scores: map[string]*keptScores{}, given: map[string]*sharedDesign{},
	}
}

// selected reports whether the rows were chosen by a node.
func (b *bench) selected(v int) bool { return slices.Contains(b.req.Selected, v) }

// run tests statements side by side; results are in their order whatever the
// order of work.
func (b *bench) run(ctx context.Context, all []causal.Independence, watch func(done, total int)) ([]Finding, error) {
	found := make([]Finding, len(all))
	// Statements that share given variables stand together, so that few
	// regressions are in memory at a time.
	var order []string
	byGiven := make(map[string][]int)
	for i, s := range all {
		key := fmt.Sprint(s.Given)
		if byGiven[key] == nil {
			order = append(order, key)
		}
		byGiven[key] = append(byGiven[key], i)
	}
	work := make(chan []int)
	done := 0
	var workers sync.WaitGroup
	for range runtime.GOMAXPROCS(0) {
		workers.Go(func() {
			for batch := range work {
				for _, i := range batch {
					if ctx.Err() != nil {
						continue
					}
					found[i] = b.one(all[i])
					b.lock.Lock()
					done++
					if watch != nil {
						watch(done, len(all))
					}
					b.lock.Unlock()
				}
				b.forget(all[batch[0]].Given)
			}
		})
	}
	for _, key := range order {
		work <- byGiven[key]
	}
	close(work)
	workers.Wait()
	return found, ctx.Err()
}

// one tests one statement.
func (b *bench) one(s causal.Independence) Finding {
	f := Finding{Independence: s, Key: b.key(s), Claim: s.Sentence(b.g), P: math.NaN(), Adjusted: math.NaN(), Read: len(b.data.rows)}
	f.Effect = Effect{Value: math.NaN(), Low: math.NaN(), High: math.NaN()}
	nodes := slices.Concat(s.A, s.B, s.Given)
	for _, v := range nodes {
		if n := b.data.of[v].gaps; n > 0 {
			f.Lost = append(f.Lost, Loss{b.g.Names[v], n})
		}
	}
	gaps := b.gapKey(nodes)
	rows := b.rows(gaps)
	f.Rows = len(rows)
	f.Verdict = TooFew
	f.Short = "too few rows to say"
	if len(rows) < leastFreedom+2 {
		return f
	}
	left, right := b.scored(s.A[0], gaps), b.scored(s.B[0], gaps)
	for _, side := range []struct {
		node int
		kept *keptScores
	}{{s.A[0], left}, {s.B[0], right}} {
		switch {
		case len(side.kept.scores) == 0:
			f.Short = fmt.Sprintf("%s is the same in all these rows", b.g.Names[side.node])
			return f
		case side.kept.others < fewestOfLevel:
			f.Short = fmt.Sprintf("%s is the same in nearly all these rows", b.g.Names[side.node])
			return f
		}
	}
	d := b.design(s.Given, gaps, rows)
	residuals := func(scores [][]float64) [][]float64 {
		out := make([][]float64, len(scores))
		for i, x := range scores {
			out[i] = d.design.residual(x)
		}
		return out
	}
	x, y := residuals(left.scores), residuals(right.scores)
	a, why := associate(x, y, d.schemes, b.req.Level)
	switch why {
	case "left", "right":
		node := s.A[0]
		if why == "right" {
			node = s.B[0]
		}
		f.Short = fmt.Sprintf("%s does not vary once the others are known", b.g.Names[node])
		return f
	case "few":
		return f
	}
	f.Effect, f.P, f.Groups, f.Plate = a.Effect, a.p, a.groups, a.plate
	if a.Signed {
		square := func(kept *keptScores) []float64 {
			if kept.square == nil {
				return nil
			}
			return d.design.residual(kept.square)
		}
		bent, ok := associateBent(x[0], y[0], square(left), square(right), d.schemes, b.req.Level)
		if ok {
			// Two looks at one promise (Bonferroni); the one that sees more speaks.
			if f.Bent = bent.p < min(f.P, bentAt); f.Bent {
				f.Effect, f.P = bent.Effect, bent.p
			}
			f.P = math.Min(1, 2*f.P)
		}
	}
	f.Verdict = Undecided
	return f
}

// gapKey names the variables, of some, that have missing entries.
func (b *bench) gapKey(nodes []int) string {
	var with []int
	for _, v := range nodes {
		if b.data.of[v].gaps > 0 {
			with = append(with, v)
		}
	}
	slices.Sort(with)
	return fmt.Sprint(with)
}

// rows are those of the table in which no variable of a gap key is missing.
func (b *bench) rows(gaps string) []int {
	b.lock.Lock()
	defer b.lock.Unlock()
	if rows, ok := b.subset[gaps]; ok {
		return rows
	}
	var with []int
	for _, word := range strings.Fields(strings.Trim(gaps, "[]")) {
		v := 0
		fmt.Sscan(word, &v)
		with = append(with, v)
	}
	var rows []int
	for _, i := range b.data.rows {
		if !slices.ContainsFunc(with, func(v int) bool { return math.IsNaN(b.data.of[v].values[i]) }) {
			rows = append(rows, i)
		}
	}
	b.subset[gaps] = rows
	return rows
}

// scored gives a variable's values and scores in the rows of a gap key.
func (b *bench) scored(node int, gaps string) *keptScores {
	rows := b.rows(gaps)
	key := fmt.Sprint(node, gaps)
	b.lock.Lock()
	kept := b.scores[key]
	if kept == nil {
		kept = &keptScores{}
		b.scores[key] = kept
	}
	b.lock.Unlock()
	kept.once.Do(func() {
		kept.values = pick(b.data.of[node].values, rows)
		kept.scores, kept.others = scoresOf(b.data.of[node], kept.values), minority(kept.values)
		if len(kept.scores) == 1 && distinct(kept.values, fewValues) > fewValues {
			kept.square = make([]float64, len(rows))
			for i, x := range kept.scores[0] {
				kept.square[i] = x * x
			}
			standardise(kept.square)
		}
	})
	return kept
}

func pick(values []float64, rows []int) []float64 {
	out := make([]float64, len(rows))
	for i, r := range rows {
		out[i] = values[r]
	}
	return out
}

// bentAt is the p under which an association that bends back is what is shown
// instead of one that rises or falls.
const bentAt = 0.01
