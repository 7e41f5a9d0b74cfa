package evidence

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"
	"sync"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
	"arrowroot/compile/study"
)

const (
	defaultLevel = 0.9
	defaultMost  = 2000
)

// errNoData is a request without a table.
var errNoData = errors.New("there are no data to test the arrows against: open a table and bind its columns to the variables")

func test(ctx context.Context, req Request, watch func(done, total int)) (*Evidence, error) {
	g := req.Graph
	if g == nil {
		var err error
		if g, req.Selected, err = chosen(&req); err != nil {
			return nil, err
		}
	}
	if req.Table == nil || req.Table.Rows == 0 {
		return nil, errNoData
	}
	if !(req.Level > 0 && req.Level < 1) {
		req.Level = defaultLevel
	}
	b := newBench(&req, g)
	e := &Evidence{Rival: req.Rival, Graph: g, Level: req.Level, Rows: len(b.data.rows)}

	statements, more := req.Statements, false
	if statements == nil {
		var basis []causal.Independence
		basis, more = causal.Basis(g)
		statements = causal.Pairwise(basis)
	}
	if most := cmp.Or(req.Most, defaultMost); len(statements) > most {
		e.LeftOut = fmt.Sprintf("The arrows imply %d independences; the first %d were tested.", len(statements), most)
		statements = statements[:most]
	} else if more {
		e.LeftOut = "Unmeasured causes tie so many variables together that more independences may follow than were tested."
	}
	var testable []causal.Independence
	for _, s := range statements {
		if slices.ContainsFunc(slices.Concat(s.A, s.B), b.selected) {
			continue // the same in all rows
		}
		s.Given = slices.DeleteFunc(slices.Clone(s.Given), b.selected)
		if reason := b.untestable(s); reason != "" {
			e.Untested = append(e.Untested, b.untested(s, reason))
		} else {
			testable = append(testable, s)
		}
	}
	controls := b.controls()
	all := slices.Clone(testable)
	for _, c := range controls {
		all = append(all, c.Independence)
	}
	found, err := b.run(ctx, all, watch)
	if err != nil {
		return nil, err
	}
	e.Findings = found[:len(testable):len(testable)]
	b.judge(e.Findings)
	b.mend(e.Findings)
	for i := range controls {
		controls[i].Finding = found[len(testable)+i]
	}
	e.Controls = b.judgeControls(controls)
	e.Untested = append(e.Untested, b.unmeasured()...)
	if e.Tetrads, err = b.tetrads(ctx); err != nil {
		return nil, err
	}
	var not []Untested
	if e.Functionals, not, err = b.functionals(ctx); err != nil {
		return nil, err
	}
	e.Untested = append(e.Untested, not...)
	for i := range e.Findings {
		b.say(&e.Findings[i])
		if e.Findings[i].Verdict == Contradicted {
			e.Contradicted++
		}
	}
	slices.SortStableFunc(e.Findings, worse)
	e.Summary, e.Method = b.summary(e), b.method(e)
	return e, nil
}

// chosen is the graph of a rival with what its rows were chosen by: nodes that
// limit them, and a node behind those of the sheet for each variable on which
// the data are filtered.
func chosen(req *Request) (*graph.Graph, []int, error) {
	g, err := req.Study.Graph(req.Rival)
	if err != nil {
		return nil, nil, err
	}
	var selected []int
	for _, n := range req.Study.Rival(req.Rival).Diagram.Nodes {
		if n.Limits {
			selected = append(selected, g.Index(n.Variable))
		}
	}
	data := req.Study.DataOf(req.Rival)
	if data == nil || len(data.Keep) == 0 {
		return g, selected, nil
	}
	spec := specOf(g)
	spec.Names = slices.Clone(spec.Names)
	spec.Arrows = slices.Clone(spec.Arrows)
	for _, k := range data.Keep {
		if v := g.Index(k.Variable); v >= 0 {
			selected = append(selected, len(spec.Names))
			spec.Arrows = append(spec.Arrows, [2]int{v, len(spec.Names)})
			spec.Names = append(spec.Names, "the filter on "+k.Variable)
		}
	}
	g, err = graph.New(spec)
	return g, selected, err
}

// selected reports whether the rows were chosen by a node.
func (b *bench) selected(v int) bool { return slices.Contains(b.req.Selected, v) }

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

type keptScores struct {
	once   sync.Once
	values []float64
	scores [][]float64
	square []float64 // of the scores, where they take many values
	others int       // rows that do not have the most frequent value
}

type sharedDesign struct {
	once    sync.Once
	design  *design
	schemes []scheme
}

func newBench(req *Request, g *graph.Graph) *bench {
	return &bench{
		req: req, g: g, data: readColumns(req.Study, req.Rival, req.Table, g), groups: groupings(req.Study, req.Table),
		subset: map[string][]int{}, scores: map[string]*keptScores{}, given: map[string]*sharedDesign{},
	}
}

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

// fewGroups is under how many groups a plate is adjusted for, being too few to
// take as independent pieces.
const fewGroups = 8

// design gives the regression on a given set, and who depends on whom in it.
func (b *bench) design(given []int, gaps string, rows []int) *sharedDesign {
	key := fmt.Sprint(given) + gaps
	b.lock.Lock()
	kept := b.given[key]
	if kept == nil {
		kept = &sharedDesign{}
		b.given[key] = kept
	}
	b.lock.Unlock()
	kept.once.Do(func() {
		var with []*column
		var values [][]float64
		for _, v := range given {
			with, values = append(with, b.data.of[v]), append(values, b.scored(v, gaps).values)
		}
		units := len(rows)
		schemes := []scheme{{units: len(rows)}}
		for _, p := range b.groups {
			of, n := renumber(p.of, rows)
			switch {
			case n == len(rows) || n < 2:
				continue
			case n < fewGroups:
				fixed := make([]float64, len(of))
				for i, g := range of {
					fixed[i] = float64(g)
				}
				with, values = append(with, &column{scale: study.Category}), append(values, fixed)
				continue
			}
			schemes = append(schemes, scheme{plate: p.name, of: of, units: n})
			for _, v := range values {
				if constantWithin(v, of, n) {
					units = min(units, n)
				}
			}
		}
		kept.design = newDesign(with, values, len(rows), units)
		for i := range schemes {
			schemes[i].rank = kept.design.rankOf(&schemes[i])
		}
		kept.schemes = schemes
	})
	return kept
}

// forget lets the regressions on a given set go.
func (b *bench) forget(given []int) {
	prefix := fmt.Sprint(given) + "["
	b.lock.Lock()
	defer b.lock.Unlock()
	for key := range b.given {
		if strings.HasPrefix(key, prefix) {
			delete(b.given, key)
		}
	}
}

// rankOf counts the parameters that tell a scheme's units apart: of groups,
// what is the same within each.
func (d *design) rankOf(s *scheme) int {
	if s.of == nil {
		return d.rank
	}
	if d.cell != nil {
		cell := make([]float64, len(d.cell))
		for i, c := range d.cell {
			cell[i] = float64(c)
		}
		if constantWithin(cell, s.of, s.units) {
			return d.rank
		}
		return 1
	}
	rank := 1
	for j, x := range d.columns {
		if !d.dropped[j] && constantWithin(x, s.of, s.units) {
			rank++
		}
	}
	return rank
}

// renumber gives the groups of some rows as 0 … n−1.
func renumber(of []int, rows []int) ([]int, int) {
	place := make(map[int]int)
	out := make([]int, len(rows))
	for i, r := range rows {
		at, ok := place[of[r]]
		if !ok {
			at = len(place)
			place[of[r]] = at
		}
		out[i] = at
	}
	return out, len(place)
}

func constantWithin(x []float64, of []int, groups int) bool {
	first := make([]float64, groups)
	seen := make([]bool, groups)
	for i, g := range of {
		if !seen[g] {
			first[g], seen[g] = x[i], true
		} else if first[g] != x[i] {
			return false
		}
	}
	return true
}
