package causal

import (
	"slices"
	"strings"
	"testing"
)

// Four invented studies. Their answers were found before this package was
// written, by brute-force d-separation over all sets.
func TestStories(t *testing.T) {
	for _, c := range []struct {
		name, sheet, ask string
		sets             []string
		forbidden        string // at least these
		valid, invalid   []string
		frontDoor        string
		instruments      string
	}{
		{
			name:      "hedgerows and wild bees",
			sheet:     "L -> H, L -> P, P -> B, S -> H, S -> F, (U) -> H, U -> P, H -> F -> B, H -> B -> O, W -> O, E -> O",
			ask:       "H B",
			sets:      []string{"{P S}"},
			forbidden: "F O B",
			invalid:   []string{"L S", "P S F"},
		},
		{
			name:      "smoking and birth weight",
			sheet:     "X -> M -> Y, X -> Y, (U) -> M, U -> Y, C -> X, C -> Y, A -> X, A -> Y, P -> M, C -> RM",
			ask:       "X Y",
			sets:      []string{"{A C}"},
			forbidden: "M Y",
			valid:     []string{"A C P", "A C RM"},
			invalid:   []string{"A C M", "A RM"},
		},
		{
			name:      "scholarship and final mark",
			sheet:     "(U) -> Z -> T, U -> Y, I -> T, I -> Y, T -> M -> Y, T -> Y -> R, T -> R, I -> R",
			ask:       "T Y",
			sets:      []string{"{I Z}"},
			forbidden: "M R Y",
			invalid:   []string{"I Z R", "I Z M"},
		},
		{
			name:        "cover crop and yield",
			sheet:       "K -> N -> Y, K -> W -> Y, R -> W, R -> Y, G -> K, G -> W, (U) -> K, U -> Y, Z -> K",
			ask:         "K Y",
			forbidden:   "N W Y",
			invalid:     []string{"Z", "G R Z", ""},
			frontDoor:   "N W given R G",
			instruments: "Z",
		},
	} {
		g := sheet(t, c.sheet)
		ask := numbers(g, strings.Fields(c.ask))
		r := Read(g, Query{Exposure: ask[0], Outcome: ask[1]})
		if got := spelled(g, r.Sets); !slices.Equal(got, c.sets) && len(got)+len(c.sets) > 0 {
			t.Errorf("%s: sets %v, want %v", c.name, got, c.sets)
		}
		for _, s := range strings.Fields(c.forbidden) {
			if !slices.ContainsFunc(r.Forbidden, func(f Forbidden) bool { return g.Names[f.Node] == s }) {
				t.Errorf("%s: %s is not forbidden", c.name, s)
			}
		}
		for _, z := range c.valid {
			if !ValidAdjustment(g, ask[0], ask[1], numbers(g, strings.Fields(z))) {
				t.Errorf("%s: %s is not valid", c.name, z)
			}
		}
		for _, z := range c.invalid {
			if ValidAdjustment(g, ask[0], ask[1], numbers(g, strings.Fields(z))) {
				t.Errorf("%s: %s is valid", c.name, z)
			}
		}
		door := ""
		if f := r.FrontDoor; f != nil {
			var words []string
			for _, v := range f.Through {
				words = append(words, g.Names[v])
			}
			words = append(words, "given")
			for _, v := range f.Given {
				words = append(words, g.Names[v])
			}
			door = strings.Join(words, " ")
		}
		if door != c.frontDoor {
			t.Errorf("%s: front door %q, want %q", c.name, door, c.frontDoor)
		}
		// What carries nothing of the effect is given, and no part of a front door.
		if doors, more := FrontDoors(g, ask[0], ask[1], 0); more || (len(doors) == 1) != (c.frontDoor != "") || len(doors) > 1 {
			t.Errorf("%s: front doors %v", c.name, doors)
		}
		var instruments []string
		for _, z := range r.Instruments {
			instruments = append(instruments, g.Names[z.Node])
		}
		if got := strings.Join(instruments, " "); got != c.instruments {
			t.Errorf("%s: instruments %q, want %q", c.name, got, c.instruments)
		}
		t.Log(r.Verdict.Sentence, r.Verdict.Way)
	}
	// Conditioned on slope and rain alone, the front door fails without slope.
	g := sheet(t, "K -> N -> Y, K -> W -> Y, R -> W, R -> Y, G -> K, G -> W, (U) -> K, U -> Y, Z -> K")
	pair := newComparison(g, numbers(g, []string{"K"}), numbers(g, []string{"Y"}))
	for given, want := range map[string]bool{"": false, "R": false, "G R": true} {
		if got := pair.isFrontDoor(numbers(g, []string{"N", "W"}), numbers(g, strings.Fields(given))); got != want {
			t.Errorf("front door given %q: %v", given, got)
		}
	}
}
