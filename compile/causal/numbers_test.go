package causal

import (
	"encoding/json"
	"maps"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"
	"unicode"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.

// A formulaReader reads the formulas of the reference files:
//
//	sum_{A,B'} [P(Y|A,B') (P(A) / P(C))]
//
// and works them out at once, on a distribution of binary nodes. A primed name
// is a value of the same node that a sum binds.
type formulaReader struct {
	text   string
	g      *graph.Graph
	seen   joint
	values map[string]int
}

func (f *formulaReader) eat(word string) bool {
	f.text = strings.TrimLeft(f.text, " ")
	if !strings.HasPrefix(f.text, word) {
		return false
	}
	f.text = f.text[len(word):]
	return true
}

func (f *formulaReader) list(end string) []string {
	at := strings.Index(f.text, end)
	names := strings.Split(f.text[:at], ",")
	f.text = f.text[at+len(end):]
	return names
}

// product multiplies factors until there are no more.
func (f *formulaReader) product() float64 {
	all := 1.0
	for {
		switch {
		case f.eat("sum_{"):
			over := f.list("}")
			f.eat("[")
			body, total := f.text, 0.0
			before := map[string]int{}
			for _, v := range over {
				before[v] = f.values[v]
			}
			for at := range 1 << len(over) {
				for i, v := range over {
					f.values[v] = at >> i & 1
				}
				f.text = body
				total += f.product()
			}
			for v, value := range before {
				f.values[v] = value
			}
			f.eat("]")
			all *= total
		case f.eat("P("):
			at := strings.Index(f.text, ")")
			of, given, _ := strings.Cut(f.text[:at], "|")
			f.text = f.text[at+1:]
			state := 0
			nodes := func(text string) (all []int) {
				if text == "" {
					return nil
				}
				for name := range strings.SplitSeq(text, ",") {
					v := f.g.Index(strings.TrimRight(name, "'"))
					state |= f.values[name] << v
					all = append(all, v)
				}
				return all
			}
			o, z := nodes(of), nodes(given)
			all *= f.seen.given(o, z, state)
		case f.eat("("):
			above := f.product()
			if f.eat("/") {
				above /= f.product()
			}
			f.eat(")")
			all *= above
		default:
			return all
		}
	}
}

// The estimands of the reference files and ours have the same values.
func TestEstimandsOfReference(t *testing.T) {
	r := rand.New(rand.NewPCG(34, 2026))
	compared := 0
	compare := func(id string, g *graph.Graph, x, y, given []int, text string) {
		f := Identify(g, x, y, given)
		if !f.Identified {
			t.Errorf("%s: not identified", id)
			return
		}
		if g.Len()+len(g.Arcs) > 13 {
			return // the exact model would not fit in the time
		}
		compared++
		m := newBinaryModel(g, r)
		for range 4 {
			state := r.IntN(1 << g.Len())
			values := map[string]int{}
			for v, name := range g.Names {
				values[name] = state >> v & 1
			}
			theirs := &formulaReader{text: text, g: g, seen: m.seen, values: values}
			want := theirs.product()
			if theirs.eat("/") { // a conditional one is a quotient as a whole
				want /= theirs.product()
			}
			if got := m.seen.value(f.Estimand, state, m.cache); theirs.text != "" || !(math.Abs(got-want) <= 1e-9) {
				t.Errorf("%s: %s is %.12f, reference %.12f (left to read: %q)", id, f.Query(), got, want, theirs.text)
				return
			}
		}
	}
	for _, c := range readReference(t, "random.json") {
		g := c.graph(t)
		x, y := numbers(g, c.Exposure), numbers(g, c.Outcome)
		if c.Answers.Estimand != "" {
			compare(c.ID, g, x, y, nil, c.Answers.Estimand)
		}
		if c.Answers.EstimandGiven != "" {
			compare(c.ID, g, x, y, numbers(g, c.Conditioned), c.Answers.EstimandGiven)
		}
	}
	if compared < 200 {
		t.Errorf("only %d compared", compared)
	}
}

// What TestRandomReference leaves out: every field of the random graphs that
// says how many, smallest, stricter or where.
func TestRestOfRandomReference(t *testing.T) {
	fields := map[string]int{}
	for _, c := range readReference(t, "random.json") {
		g, a := c.graph(t), c.Answers
		x, y := numbers(g, c.Exposure), numbers(g, c.Outcome)

		valid := brute(g, Aim{Exposures: x, Outcomes: y})
		if a.Adjustment.Valid != nil {
			fields["n_valid"]++
			if len(valid) != *a.Adjustment.Valid {
				t.Errorf("%s: %d valid sets, want %d", c.ID, len(valid), *a.Adjustment.Valid)
			}
		}
		sets := Adjust(g, Aim{Exposures: x, Outcomes: y, MaxSets: 1e4}).Sets
		fields["minimum"]++
		smallest := slices.DeleteFunc(slices.Clone(sets), func(z []int) bool { return len(z) > len(sets[0]) })
		compareSets(t, c.ID, "smallest sets", g, smallest, a.Adjustment.Minimum)
		if len(x)+len(y) == 2 && a.Adjustment.BackDoor != nil {
			fields["minimal_backdoor"]++
			got, _ := BackDoorSets(g, x[0], y[0], nil, 1e4)
			compareSets(t, c.ID, "back-door sets", g, got, a.Adjustment.BackDoor)
		}
		if a.Paths != nil {
			fields["open_noncausal"]++
			open := 0
			list, _ := Between(g, x, y, numbers(g, c.Conditioned), 1e6)
			for _, p := range list {
				if p.Open && p.Kind != Causal {
					open++
				}
			}
			if open != a.Paths.OpenNonCausal {
				t.Errorf("%s: %d open paths that are not causal, want %d", c.ID, open, a.Paths.OpenNonCausal)
			}
		}
		if a.Instruments.Ancestral != nil && len(x)+len(y) == 2 {
			fields["ancestral_edge"]++
			cut := g.Keep(func(from, to int) bool { return from != x[0] || to != y[0] }, nil)
			got := ArrowInstruments(g, x[0], y[0])
			for i := range got {
				above := cut.Ancestors(y[0], got[i].Node)
				got[i].Given = slices.DeleteFunc(got[i].Given, func(w []int) bool {
					return slices.ContainsFunc(w, func(v int) bool { return !above[v] })
				})
			}
			got = slices.DeleteFunc(got, func(z InstrumentSets) bool { return len(z.Given) == 0 })
			compareInstruments(t, &c, "ancestral", got, instrumentList(t, a.Instruments.Ancestral))
		}
		for _, raw := range a.Local {
			fields["local_markov"]++
			var v string
			var others, parents []string
			if json.Unmarshal(raw[0], &v) != nil || json.Unmarshal(raw[1], &others) != nil || json.Unmarshal(raw[2], &parents) != nil {
				t.Fatal(c.ID)
			}
			if !Separated(g, numbers(g, []string{v}), numbers(g, others), numbers(g, parents)) {
				t.Errorf("%s: %s is not separated from %v by its parents", c.ID, v, others)
			}
		}
		if a.Hedge != nil {
			fields["hedge"]++
			f := Identify(g, x, y, nil)
			compareSets(t, c.ID, "failing pair", g, [][]int{f.Whole, f.Part}, [][]string{a.Hedge["F"], a.Hedge["F'"]})
		}
	}
	if len(fields) != 7 {
		t.Errorf("fields met: %v", fields)
	}
}

// arithmetic works out "a*b + c**2/(1-d^2)" with values for the letters.
type arithmetic struct {
	text   string
	values map[string]float64
}

func (a *arithmetic) next() byte {
	a.text = strings.TrimLeft(a.text, " ")
	if a.text == "" {
		return 0
	}
	return a.text[0]
}

func (a *arithmetic) sum() float64 {
	total := a.product()
	for {
		switch a.next() {
		case '+':
			a.text = a.text[1:]
			total += a.product()
		case '-':
			a.text = a.text[1:]
			total -= a.product()
		default:
			return total
		}
	}
}

func (a *arithmetic) product() float64 {
	all := a.power()
	for {
		switch {
		case a.next() == '*':
			a.text = a.text[1:]
			all *= a.power()
		case a.next() == '/':
			a.text = a.text[1:]
			all /= a.power()
		default:
			return all
		}
	}
}

func (a *arithmetic) power() float64 {
	if a.next() == '-' {
		a.text = a.text[1:]
		return -a.power()
	}
	base := a.atom()
	for _, sign := range []string{"**", "^"} {
		if a.next(); strings.HasPrefix(a.text, sign) {
			a.text = a.text[len(sign):]
			return math.Pow(base, a.atom())
		}
	}
	return base
}

func (a *arithmetic) atom() float64 {
	if a.next() == '(' {
		a.text = a.text[1:]
		v := a.sum()
		a.next()
		a.text = a.text[1:]
		return v
	}
	end := strings.IndexFunc(a.text, func(r rune) bool { return !unicode.IsLetter(r) && !unicode.IsDigit(r) && r != '.' && r != '_' })
	if end < 0 {
		end = len(a.text)
	}
	word := a.text[:end]
	a.text = a.text[end:]
	if v, err := strconv.ParseFloat(word, 64); err == nil {
		return v
	}
	v, known := a.values[word]
	if !known {
		panic("no value for " + word)
	}
	return v
}

// structural is the linear model with the coefficients of a case. Where errors
// are chosen so that every variance is one, variances are set to one.
func structural(g *graph.Graph, equations map[string]map[string]string, spreads map[string]string, values map[string]float64) *linear {
	n := g.Len()
	m := &linear{total: make([][]float64, n), cov: make([][]float64, n)}
	for v := range n {
		m.total[v], m.cov[v] = make([]float64, n), make([]float64, n)
	}
	work := func(text string) float64 { return (&arithmetic{text, values}).sum() }
	var earlier []int
	for _, v := range g.Order {
		m.total[v][v] = 1
		for from, text := range equations[g.Names[v]] {
			p, b := g.Index(from), work(text)
			for w, t := range m.total[p] {
				m.total[v][w] += b * t
			}
			for _, w := range earlier {
				m.cov[v][w] += b * m.cov[p][w]
			}
		}
		for _, w := range earlier {
			m.cov[w][v] = m.cov[v][w]
		}
		text, own := spreads[g.Names[v]], 1.0
		if text != "" && !strings.ContainsAny(text, "abcdefghijklmnopqrstuvwxyz ") || text == "s2" {
			own = work(text)
		}
		m.cov[v][v] = own
		if spreads["all"] == "" && !strings.Contains(spreads["Y"], "makes") {
			for from, text := range equations[g.Names[v]] {
				m.cov[v][v] += work(text) * m.cov[v][g.Index(from)]
			}
		}
		earlier = append(earlier, v)
	}
	return m
}

// Every formula of the linear cases, by its name: worked out from the printed
// formula, from the covariances of the model, and as printed in figures. What
// this package says of the set must agree with the bias.
func TestLinearCases(t *testing.T) {
	formulas := 0
	for _, c := range readReference(t, "numbers.json") {
		if c.Question.Type != "linear" {
			continue
		}
		g := c.graph(t)
		x, y := g.Index(c.Exposure[0]), g.Index(c.Outcome[0])
		var raw map[string]json.RawMessage
		c.answer(t, &raw)
		var example struct{ Coefficients map[string]float64 }
		var figures map[string]json.RawMessage
		if json.Unmarshal(raw["numeric_example"], &example) != nil || json.Unmarshal(raw["numeric_example"], &figures) != nil {
			t.Fatal(c.ID)
		}
		spreads := map[string]string{}
		_ = json.Unmarshal(c.Question.Spreads, &spreads) // else they are all one
		m := structural(g, c.Question.Equations, spreads, example.Coefficients)
		slope := func(v, on int, held ...int) float64 { return m.regress(v, append([]int{on}, held...))[0] }
		bias := func(held ...int) float64 { return slope(y, x, held...) - m.total[y][x] }
		for name, text := range raw {
			var formula string
			if name == "numeric_example" || json.Unmarshal(text, &formula) != nil {
				continue
			}
			var held []int
			if _, given, ok := strings.Cut(name, "given_"); ok {
				for s := range strings.SplitSeq(given, "_") {
					if s == "proxy" {
						s = "Zs"
					}
					held = append(held, g.Index(s))
				}
			}
			var got float64
			switch name {
			case "total_effect":
				got = m.total[y][x]
			case "coef_Y_on_X", "coef_unadjusted", "coef_Y_on_X_given_M", "coef_given_Z", "coef_given_M1", "coef_given_M1_M2", "coef_given_M", "coef_given_M_L":
				got = slope(y, x, held...)
			case "bias", "bias_unadjusted", "bias_given_Z", "bias_given_M", "bias_given_proxy":
				got = bias(held...)
				all := *g
				all.Measured = slices.Repeat([]bool{true}, g.Len())
				if valid := ValidAdjustment(&all, x, y, held); valid != (math.Abs(got) < 1e-12) {
					t.Errorf("%s: %s is %g, yet valid is %v", c.ID, name, got, valid)
				}
			case "ratio":
				got = bias(g.Index("Zs")) / bias()
			case "coef_M_on_X":
				got = slope(g.Index("M"), x)
			case "coef_Y_on_M_given_X":
				got = slope(y, g.Index("M"), x)
			case "iv_ratio", "iv_ratio_without_W":
				got = m.cov[g.Index("Z")][y] / m.cov[g.Index("Z")][x]
			case "iv_ratio_given_W":
				z := g.Index("Z")
				got = slope(y, z, held...) / slope(x, z, held...)
				if found := TotalInstruments(g, x, y); len(found) != 1 || found[0].Node != z || !slices.Equal(found[0].Given[0], held) {
					t.Errorf("%s: instruments %v", c.ID, found)
				}
			case "cov_XY", "cov_ZY", "cov_ZX":
				got = m.cov[g.Index(name[4:5])][g.Index(name[5:6])]
			case "rho_XY_standardised":
				got = m.cov[x][y]
			case "controlled_direct_effect_do_m": // what is left with the arrows into M cut
				cut := map[string]map[string]string{}
				for v, e := range c.Question.Equations {
					if cut[v] = e; v == "M" {
						cut[v] = nil
					}
				}
				got = structural(g, cut, spreads, example.Coefficients).total[y][x]
				if d := ReadDirect(g, x, y, []int{g.Index("M")}); !d.Identification.Identified || d.Adjustment.Sets != nil {
					t.Errorf("%s: %s", c.ID, d.Sentence)
				}
			case "avar_unadjusted":
				got = m.spread(x, y, nil)
			case "avar_given_C", "avar_given_Z":
				got = m.spread(x, y, held)
				pair := newComparison(g, []int{x}, []int{y})
				if better := got < m.spread(x, y, nil); pair.asPrecise(held, nil) != better || pair.asPrecise(nil, held) == better {
					t.Errorf("%s: holding %v is more precise: %v", c.ID, held, better)
				}
			default:
				t.Errorf("%s: %s is not tested", c.ID, name)
				continue
			}
			formulas++
			if want := (&arithmetic{formula, example.Coefficients}).sum(); math.Abs(got-want) > 1e-9*(1+math.Abs(want)) {
				t.Errorf("%s: %s = %s: got %.12f, want %.12f", c.ID, name, formula, got, want)
			}
			var figure float64
			if json.Unmarshal(figures[name], &figure) != nil || math.Abs(got-figure) > 1e-9*(1+math.Abs(figure)) {
				t.Errorf("%s: %s: got %.12f, in figures %s", c.ID, name, got, figures[name])
			}
		}
	}
	if formulas < 45 {
		t.Errorf("only %d formulas", formulas)
	}
	t.Logf("%d formulas", formulas)
}

// share reads "81/87" or .95.
func share(t *testing.T, c *reference, cell string) float64 {
	t.Helper()
	var text string
	var value float64
	if json.Unmarshal(c.Question.Table[cell], &text) == nil {
		return (&arithmetic{text: text}).sum()
	}
	if err := json.Unmarshal(c.Question.Table[cell], &value); err != nil {
		t.Fatalf("%s: %s: %v", c.ID, cell, err)
	}
	return value
}

// The cases with a table: our estimand, worked out on it.
func TestTablesOfReference(t *testing.T) {
	tested := 0
	for _, c := range readReference(t, "numbers.json") {
		if c.Question.Type != "numeric" {
			continue
		}
		tested++
		var want map[string]any
		c.answer(t, &want)
		g := c.graph(t)
		at := func(name string) int { return g.Index(name) }
		same := func(what string, got float64) {
			t.Helper()
			if math.Abs(got-want[what].(float64)) > 1e-12 {
				t.Errorf("%s: %s: got %.12f, want %.12f", c.ID, what, got, want[what])
			}
		}
		// doing is the probability that y is 1 with x set, and crude with x seen.
		doing := func(p joint, x, y, value int) (set, crude float64) {
			f := Identify(g, []int{x}, []int{y}, nil)
			if !f.Identified {
				t.Fatalf("%s: %s", c.ID, f.Sentence)
			}
			state := value<<x | 1<<y
			return p.value(f.Estimand, state, map[string]float64{}), p.given([]int{y}, []int{x}, state)
		}
		switch c.ID {
		case "simpson-numeric", "hr-7-table":
			x, y, z := at(c.Exposure[0]), at(c.Outcome[0]), 0 // Z or L stands first
			cells := map[string][2]int{"treated men": {1, 0}, "treated women": {1, 1}, "untreated men": {0, 0}, "untreated women": {0, 1}}
			if c.ID == "hr-7-table" {
				cells = map[string][2]int{"L=1,A=1": {1, 1}, "L=1,A=0": {0, 1}, "L=0,A=1": {1, 0}, "L=0,A=0": {0, 0}}
			}
			p, all := make(joint, 8), 0.0
			for cell, value := range cells {
				var text string
				if err := json.Unmarshal(c.Question.Table[cell], &text); err != nil {
					t.Fatal(err)
				}
				above, below, _ := strings.Cut(text, "/")
				yes, _ := strconv.ParseFloat(above, 64)
				of, _ := strconv.ParseFloat(below, 64)
				state := value[0]<<x | value[1]<<z
				p[state|1<<y], p[state] = yes, of-yes
				all += of
			}
			for i := range p {
				p[i] /= all
			}
			set1, crude1 := doing(p, x, y, 1)
			set0, crude0 := doing(p, x, y, 0)
			if c.ID == "hr-7-table" {
				same("crude_difference", crude1-crude0)
				same("standardised_difference", set1-set0)
				break
			}
			same("do1", set1)
			same("do0", set0)
			same("difference", set1-set0)
			same("crude1", crude1)
			same("crude0", crude0)
		case "frontdoor-numeric":
			x, z, y := at("X"), at("Z"), at("Y")
			tar := [2]float64{share(t, &c, "P(tar|nonsmoker)"), share(t, &c, "P(tar|smoker)")}
			cancer := map[[2]int]float64{
				{1, 1}: share(t, &c, "P(cancer|smoker,tar)"), {1, 0}: share(t, &c, "P(cancer|smoker,no tar)"),
				{0, 1}: share(t, &c, "P(cancer|nonsmoker,tar)"), {0, 0}: share(t, &c, "P(cancer|nonsmoker,no tar)"),
			}
			p := make(joint, 8)
			for cell, ill := range cancer {
				w := share(t, &c, "P(x=1)") // a half
				if cell[1] == 1 {
					w *= tar[cell[0]]
				} else {
					w *= 1 - tar[cell[0]]
				}
				state := cell[0]<<x | cell[1]<<z
				p[state|1<<y], p[state] = w*ill, w*(1-ill)
			}
			set1, crude1 := doing(p, x, y, 1)
			set0, crude0 := doing(p, x, y, 0)
			same("do1", set1)
			same("do0", set0)
			same("crude1", crude1)
			same("crude0", crude0)
		case "hr-wasabi":
			among := share(t, &c, "deaths") / share(t, &c, "uncensored A=1") / (share(t, &c, "deaths0") / share(t, &c, "uncensored A=0"))
			same("rr_uncensored", among)
			k := ReadKept(g, at("A"), at("Y"), nil, numbers(g, c.Conditioned))
			if newComparison(g, []int{at("A")}, []int{at("Y")}).effect() || k.Among != NotValid || k.All != NotValid {
				t.Errorf("%s: %+v", c.ID, k) // the true ratio is 1: nothing leads from A to Y
			}
			if k := ReadKept(g, at("A"), at("Y"), []int{at("L")}, numbers(g, c.Conditioned)); k.Among != Valid {
				t.Errorf("%s: with L held %+v", c.ID, k)
			}
		case "rs-hidden-num":
			pair := newComparison(g, []int{at("X")}, []int{at("Y")})
			both := tidy([]int{at("F"), at("T")})
			better, worse := false, false
			r := rand.New(rand.NewPCG(35, 2026))
			for range 400 {
				m := drawLinear(g, r)
				with, without := m.spread(at("X"), at("Y"), both), m.spread(at("X"), at("Y"), nil)
				better, worse = better || with < without, worse || with > without
			}
			if better != want["FT_sometimes_better"] || worse != want["FT_sometimes_worse"] || pair.asPrecise(both, nil) || pair.asPrecise(nil, both) {
				t.Errorf("%s: better %v, worse %v", c.ID, better, worse)
			}
		case "mec-count": // the classes are counted in TestClassCounts
			for i, count := range want["dags"].([]any) {
				n := 0
				allDAGs(t, i+1, func(*graph.Graph) { n++ })
				if float64(n) != count {
					t.Errorf("%s: %d diagrams of %d nodes, want %v", c.ID, n, i+1, count)
				}
			}
		default:
			t.Errorf("%s is not tested", c.ID)
		}
	}
	if tested != 6 {
		t.Errorf("%d cases", tested)
	}
}

// The 175 cases by type of question. Every type has a test: in this package,
// and sensitivity in compile/sensitivity.
func TestNoCaseIsLeftOut(t *testing.T) {
	want := map[string]int{
		"dsep": 12, "paths": 6, "adjust": 28, "valid": 8, "control": 14, "separators": 2, "oset": 7, "identify": 27, // cases.json
		"frontdoor": 3, "instruments": 8, "pairs": 5, "basis": 2, "verma": 3, "tetrads": 5, "cpdag": 7, "equivalent": 3,
		"meek": 1, "count": 1, "selection": 4, "missing": 6, // beyond.json
		"linear": 15, "numeric": 6, // numbers.json
	}
	got, all := map[string]int{}, 0
	for _, name := range []string{"cases.json", "beyond.json", "numbers.json"} {
		for _, c := range readReference(t, name) {
			got[c.Question.Type]++
			all++
		}
	}
	if !maps.Equal(got, want) || all != 173 { // and two of sensitivity
		t.Errorf("%d cases: %v", all, got)
	}
	if n := len(readReference(t, "random.json")); n != 210 {
		t.Errorf("%d random graphs", n)
	}
}
