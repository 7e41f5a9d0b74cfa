package causal

import (
	"encoding/json"
	"fmt"
	"os"
	"reflect"
	"slices"
	"strings"
	"testing"

	"arrowroot/compile/graph"
)

// Source of the files read here: testdata/causal/SOURCE.md.

type reference struct {
	ID          string
	Nodes       []string
	Edges       [][2]string
	Bidirected  [][2]string
	Latent      []string
	Exposure    []string
	Outcome     []string
	Conditioned []string
	Question    struct {
		Type    string
		Z       string
		Sets    [][]string
		Queries [][][]string
		Given   []string
		Other   struct {
			Nodes []string
			Edges [][2]string
		}
		Directed, Undirected [][2]string
		S                    string
		Equations            map[string]map[string]string
		Spreads              json.RawMessage `json:"error_variances"`
		Table                map[string]json.RawMessage
		External             []string
		Partial              []string
	}
	Answer  json.RawMessage
	Answers struct {
		Dsep  [][]any
		Paths *struct {
			Total, Open, Causal, Backdoor int
			OpenNonCausal                 int `json:"open_noncausal"`
			List                          []referencePath
		} `json:"paths_given_conditioned"`
		Forbidden  []string
		Adjustment struct {
			Exists               bool
			Minimal              [][]string
			Minimum              [][]string
			BackDoor             [][]string `json:"minimal_backdoor"`
			Valid                *int       `json:"n_valid"`
			MinimalWithCondition [][]string `json:"minimal_containing_conditioned"`
		}
		Separators  [][]string `json:"separators_minimal"`
		FrontDoor   [][]string `json:"frontdoor_minimal"`
		Instruments struct {
			Total     [][2]any
			Edge      []json.RawMessage
			Ancestral []json.RawMessage `json:"ancestral_edge"`
		}
		Identifiable      bool
		Estimand          string
		EstimandGiven     string `json:"estimand_given_conditioned"`
		Hedge             map[string][]string
		Local             [][]json.RawMessage `json:"local_markov"`
		IdentifiableGiven *bool               `json:"identifiable_given_conditioned"`
		Cpdag             *classAnswer
		Implied           [][]json.RawMessage `json:"implied_independences"`
		OSet              *[]string           `json:"o_set"`
		Best              [][]string          `json:"best_minimal_by_graph"`
	}
}

type referencePath struct {
	Path      string
	Kind      string
	Open      bool
	BlockedAt [][2]string `json:"blocked_at"`
}

func readReference(t testing.TB, name string) []reference {
	t.Helper()
	text, err := os.ReadFile("../../testdata/causal/" + name)
	if err != nil {
		t.Fatal(err)
	}
	var all []reference
	if err := json.Unmarshal(text, &all); err != nil {
		t.Fatal(err)
	}
	if len(all) == 0 {
		t.Fatal("no cases")
	}
	return all
}

func (c *reference) graph(t testing.TB) *graph.Graph {
	t.Helper()
	at := map[string]int{}
	for i, s := range c.Nodes {
		at[s] = i
	}
	spec := graph.Spec{Names: c.Nodes}
	for _, e := range c.Edges {
		spec.Arrows = append(spec.Arrows, [2]int{at[e[0]], at[e[1]]})
	}
	for _, e := range c.Bidirected {
		spec.Arcs = append(spec.Arcs, [2]int{at[e[0]], at[e[1]]})
	}
	for _, s := range c.Latent {
		spec.Unmeasured = append(spec.Unmeasured, at[s])
	}
	g, err := graph.New(spec)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func numbers(g *graph.Graph, names []string) []int {
	nodes := make([]int, len(names))
	for i, s := range names {
		nodes[i] = g.Index(s)
	}
	return nodes
}

// spelled writes sets of nodes as sorted text, for comparison as sets of sets.
func spelled(g *graph.Graph, sets [][]int) []string {
	texts := []string{}
	for _, z := range sets {
		words := make([]string, len(z))
		for i, v := range z {
			words[i] = g.Names[v]
		}
		slices.Sort(words)
		texts = append(texts, "{"+strings.Join(words, " ")+"}")
	}
	slices.Sort(texts)
	return texts
}

func spelledNames(sets [][]string) []string {
	texts := []string{}
	for _, z := range sets {
		z = slices.Clone(z)
		slices.Sort(z)
		texts = append(texts, "{"+strings.Join(z, " ")+"}")
	}
	slices.Sort(texts)
	return texts
}

// inTheirWords writes a path as the reference files do.
func inTheirWords(g *graph.Graph, p *Path) referencePath {
	arrows := strings.NewReplacer("→", "->", "←", "<-", "↔", "<->")
	r := referencePath{
		Path:      arrows.Replace(p.Text(g)),
		Kind:      [...]string{"causal", "back-door", "non-causal, leaves x"}[p.Kind],
		Open:      p.Open,
		BlockedAt: [][2]string{},
	}
	for _, s := range p.ClosedAt {
		why := [...]string{"chain, conditioned", "fork, conditioned", "collider, neither it nor a descendant conditioned"}[s.Role]
		r.BlockedAt = append(r.BlockedAt, [2]string{g.Names[s.Node], why})
	}
	return r
}

func comparePaths(t *testing.T, id string, g *graph.Graph, got []Path, want []referencePath) {
	t.Helper()
	texts := func(paths []referencePath) []string {
		var all []string
		for _, p := range paths {
			all = append(all, fmt.Sprint(p))
		}
		slices.Sort(all)
		return all
	}
	var ours []referencePath
	for i := range got {
		ours = append(ours, inTheirWords(g, &got[i]))
	}
	if a, b := texts(ours), texts(want); !reflect.DeepEqual(a, b) {
		t.Errorf("%s: paths\n got %v\nwant %v", id, a, b)
	}
	for i := 1; i < len(got); i++ {
		if len(got[i].Nodes) < len(got[i-1].Nodes) {
			t.Errorf("%s: path %d is shorter than the one before", id, i)
		}
	}
}

func compareSets(t *testing.T, id, what string, g *graph.Graph, got [][]int, want [][]string) {
	t.Helper()
	if a, b := spelled(g, got), spelledNames(want); !slices.Equal(a, b) {
		t.Errorf("%s: %s: got %v, want %v", id, what, a, b)
	}
}

func TestRandomReference(t *testing.T) {
	for _, c := range readReference(t, "random.json") {
		g := c.graph(t)
		x, y := numbers(g, c.Exposure), numbers(g, c.Outcome)
		held := numbers(g, c.Conditioned)
		a := c.Answers

		for _, q := range a.Dsep {
			var given []int
			for _, s := range q[2].([]any) {
				given = append(given, g.Index(s.(string)))
			}
			from, to := g.Index(q[0].(string)), g.Index(q[1].(string))
			for _, pair := range [][2]int{{from, to}, {to, from}} {
				if got := Separated(g, pair[:1], pair[1:], given); got != q[3].(bool) {
					t.Errorf("%s: %v separated by %v: got %v", c.ID, q[:2], q[2], got)
				}
			}
		}

		pair := newComparison(g, x, y)
		compareSets(t, c.ID, "forbidden", g, [][]int{list(pair.forbidden)}, [][]string{a.Forbidden})
		sets, _ := pair.minimal(nil, 1e4)
		compareSets(t, c.ID, "minimal sets", g, sets, a.Adjustment.Minimal)
		if got := pair.exists(nil); got != a.Adjustment.Exists {
			t.Errorf("%s: a set exists: got %v", c.ID, got)
		}
		forced, _ := pair.minimal(held, 1e4)
		compareSets(t, c.ID, "minimal sets with the conditioned", g, forced, a.Adjustment.MinimalWithCondition)
		if got := pair.exists(held); got != (len(forced) > 0) {
			t.Errorf("%s: a set with the conditioned exists: got %v", c.ID, got)
		}
		if got := identifiable(g, x, y); got != a.Identifiable {
			t.Errorf("%s: identifiable: got %v, want %v", c.ID, got, a.Identifiable)
		}
		if a.IdentifiableGiven != nil {
			if got := identifiableGiven(g, x, y, held); got != *a.IdentifiableGiven {
				t.Errorf("%s: identifiable given the conditioned: got %v", c.ID, got)
			}
		}
		checkWays(t, &c, g, pair)
		optimal, ok := pair.optimal()
		switch {
		case ok != (a.OSet != nil):
			t.Errorf("%s: O-set: got %v %v, want %v", c.ID, optimal, ok, a.OSet)
		case ok:
			compareSets(t, c.ID, "O-set", g, [][]int{optimal}, [][]string{*a.OSet})
		}
		if len(x) > 1 || len(y) > 1 {
			continue // a Reading is of one exposure and one outcome
		}

		r := Read(g, Query{Exposure: x[0], Outcome: y[0], Held: held, MaxPaths: 1e6, MaxSets: 1e4})
		if a.Paths.List != nil {
			comparePaths(t, c.ID, g, r.Paths, a.Paths.List)
		}
		var open, causal, backDoor int
		for _, p := range r.Paths {
			if p.Open {
				open++
			}
			switch p.Kind {
			case Causal:
				causal++
			case BackDoor:
				backDoor++
			}
		}
		got, want := []int{len(r.Paths), open, causal, backDoor}, []int{a.Paths.Total, a.Paths.Open, a.Paths.Causal, a.Paths.Backdoor}
		if !slices.Equal(got, want) {
			t.Errorf("%s: paths in all, open, causal, back-door: got %v, want %v", c.ID, got, want)
		}
		var forbidden []int
		for _, f := range r.Forbidden {
			forbidden = append(forbidden, f.Node)
		}
		compareSets(t, c.ID, "forbidden", g, [][]int{forbidden}, [][]string{a.Forbidden})
		compareSets(t, c.ID, "minimal sets", g, r.Sets, a.Adjustment.Minimal)
		if (r.Sets != nil) != a.Adjustment.Exists {
			t.Errorf("%s: a set exists: got %v", c.ID, r.Sets)
		}
		if r.Precise >= 0 {
			if best := spelled(g, r.Sets[r.Precise:r.Precise+1])[0]; !slices.Contains(spelledNames(a.Best), best) {
				t.Errorf("%s: most precise: got %v, want one of %v", c.ID, best, a.Best)
			}
		} else if len(a.Best) > 0 {
			t.Errorf("%s: most precise: got none, want one of %v", c.ID, a.Best)
		}
		separators, _ := MinimalSeparators(g, x[0], y[0], nil, 1e4)
		compareSets(t, c.ID, "separators", g, separators, a.Separators)
	}
}

func checkWays(t *testing.T, c *reference, g *graph.Graph, pair *comparison) {
	t.Helper()
	var candidates []int
	for v := range g.Len() {
		if g.Measured[v] && !slices.Contains(pair.x, v) && !slices.Contains(pair.y, v) {
			candidates = append(candidates, v)
		}
	}
	if len(pair.x) == 1 {
		doors := oracleMinimal(candidates, nil, func(m []int) bool { return pair.isFrontDoor(m, nil) })
		compareSets(t, c.ID, "front doors", g, doors, c.Answers.FrontDoor)
		want := map[string]bool{}
		for _, z := range c.Answers.Instruments.Total {
			want[z[0].(string)] = true
		}
		var got []Instrument
		if pair.effect() { // the file names none otherwise
			got = pair.instruments()
		}
		for _, z := range got {
			if !want[g.Names[z.Node]] {
				t.Errorf("%s: %s is no instrument", c.ID, g.Names[z.Node])
			}
		}
		if len(got) == 0 && len(want) > 0 {
			t.Errorf("%s: no instrument found, want %v", c.ID, want)
		}
	}
}

func TestWorkedCases(t *testing.T) {
	for _, c := range readReference(t, "cases.json") {
		g := c.graph(t)
		x, y, held := numbers(g, c.Exposure), numbers(g, c.Outcome), numbers(g, c.Conditioned)
		pair := newComparison(g, x, y)
		switch c.Question.Type {
		case "dsep":
			var want struct{ Results []bool }
			c.answer(t, &want)
			for i, q := range c.Question.Queries {
				if got := Separated(g, numbers(g, q[0]), numbers(g, q[1]), numbers(g, q[2])); got != want.Results[i] {
					t.Errorf("%s: %v: got %v", c.ID, q, got)
				}
			}
		case "paths":
			var want struct{ Paths []referencePath }
			c.answer(t, &want)
			r := Read(g, Query{Exposure: x[0], Outcome: y[0], Held: held})
			comparePaths(t, c.ID, g, r.Paths, want.Paths)
		case "adjust":
			var want struct {
				Exists      bool
				Minimal     [][]string
				Forbidden   []string
				MinimumSize *int `json:"minimum_size"`
			}
			c.answer(t, &want)
			sets, more := pair.minimal(held, 1e4)
			if more || (sets != nil) != want.Exists {
				t.Errorf("%s: sets %v, more %v", c.ID, sets, more)
			}
			compareSets(t, c.ID, "minimal sets", g, sets, want.Minimal)
			if want.MinimumSize != nil && len(sets[0]) != *want.MinimumSize {
				t.Errorf("%s: smallest set %v, want size %d", c.ID, sets[0], *want.MinimumSize)
			}
			compareSets(t, c.ID, "forbidden", g, [][]int{list(pair.forbidden)}, [][]string{want.Forbidden})
		case "valid":
			var want struct{ Results []bool }
			c.answer(t, &want)
			for i, z := range c.Question.Sets {
				// The file tries unmeasured nodes too: with them measured.
				all := *g
				all.Measured = slices.Repeat([]bool{true}, g.Len())
				if got := newComparison(&all, x, y).valid(numbers(g, z)); got != want.Results[i] {
					t.Errorf("%s: %v valid: got %v", c.ID, z, got)
				}
			}
		case "control":
			var want struct {
				Without   bool `json:"valid_without"`
				With      bool `json:"valid_with"`
				Precision string
			}
			c.answer(t, &want)
			with := union(held, []int{g.Index(c.Question.Z)})
			if a, b := pair.valid(held), pair.valid(with); a != want.Without || b != want.With {
				t.Errorf("%s: valid without %v, with %v", c.ID, a, b)
			}
			if want.Precision != "" {
				better, worse := pair.asPrecise(with, held), pair.asPrecise(held, with)
				got := ""
				switch {
				case better && !worse:
					got = "can improve, never worsens"
				case worse && !better:
					got = "can worsen, never improves"
				}
				if got != want.Precision {
					t.Errorf("%s: precision %q, want %q", c.ID, got, want.Precision)
				}
			}
		case "identify":
			var want struct{ Identifiable bool }
			c.answer(t, &want)
			if got := identifiableGiven(g, x, y, numbers(g, c.Question.Given)); got != want.Identifiable {
				t.Errorf("%s: identifiable: got %v", c.ID, got)
			}
		case "separators":
			var want struct{ Minimal [][]string }
			c.answer(t, &want)
			got, _ := MinimalSeparators(g, x[0], y[0], held, 0)
			compareSets(t, c.ID, "separators", g, got, want.Minimal)
		case "oset":
			var want struct {
				OSet  *[]string  `json:"o_set"`
				Valid bool       `json:"o_set_valid"`
				Best  [][]string `json:"graphically_best_among_minimal"`
			}
			c.answer(t, &want)
			got, ok := pair.optimal()
			if ok != want.Valid {
				t.Errorf("%s: O-set %v, valid %v", c.ID, got, ok)
			} else if ok {
				compareSets(t, c.ID, "O-set", g, [][]int{got}, [][]string{*want.OSet})
			}
			sets, _ := pair.minimal(nil, 100)
			best := pair.best(sets)
			switch {
			case best < 0 && len(want.Best) > 0:
				t.Errorf("%s: no best set, want %v", c.ID, want.Best)
			case best >= 0 && !slices.Contains(spelledNames(want.Best), spelled(g, sets[best:best+1])[0]):
				t.Errorf("%s: best set %v, want %v", c.ID, sets[best], want.Best)
			}
		default:
			t.Errorf("%s: question %q", c.ID, c.Question.Type)
		}
	}
}

func (c *reference) answer(t *testing.T, into any) {
	t.Helper()
	if err := json.Unmarshal(c.Answer, into); err != nil {
		t.Fatalf("%s: %v", c.ID, err)
	}
}
