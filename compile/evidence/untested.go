package evidence

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/causal"
	"arrowroot/compile/graph"
)

// mostUnmeasured bounds the list of independences with unmeasured variables.
const mostUnmeasured = 500

// untestable says why a statement cannot be tested; "" if it can.
func (b *bench) untestable(s causal.Independence) string {
	for _, v := range slices.Concat(s.A, s.B, s.Given) {
		if b.data.of[v] == nil {
			return b.data.lacks[v]
		}
	}
	for _, v := range slices.Concat(s.A, s.B) {
		if b.data.constant(v) {
			return fmt.Sprintf("%s is the same in all rows that are used", b.g.Names[v])
		}
	}
	if len(b.req.Selected) > 0 {
		// Chosen rows show what is left once the choice is known.
		if known := union(s.Given, b.req.Selected); !causal.Separated(b.g, s.A, s.B, known) {
			return fmt.Sprintf("the rows were chosen by %s, which ties the two together", b.list(b.req.Selected))
		}
	}
	return ""
}

func (b *bench) untested(s causal.Independence, reason string) Untested {
	return Untested{
		Independence: s, Reason: reason,
		Sentence: fmt.Sprintf("%s That is not tested: %s.", s.Sentence(b.g), reason),
	}
}

// unmeasured lists what the arrows promise of unmeasured variables, which no
// data of this kind can contradict.
func (b *bench) unmeasured() []Untested {
	spec := specOf(b.g)
	if len(spec.Unmeasured) == 0 {
		return nil
	}
	hidden := spec.Unmeasured
	spec.Unmeasured = nil
	g, err := graph.New(spec)
	if err != nil {
		return nil
	}
	basis, _ := causal.Basis(g)
	var all []Untested
	for _, s := range causal.Pairwise(basis) {
		var with []int
		for _, v := range slices.Concat(s.A, s.B, s.Given) {
			if slices.Contains(hidden, v) {
				with = append(with, v)
			}
		}
		if len(with) == 0 || slices.ContainsFunc(slices.Concat(s.A, s.B), b.selected) {
			continue
		}
		s.Given = slices.DeleteFunc(slices.Clone(s.Given), b.selected)
		if len(all) == mostUnmeasured {
			break
		}
		was := "was"
		if len(with) > 1 {
			was = "were"
		}
		all = append(all, b.untested(s, fmt.Sprintf("%s %s not measured", b.list(with), was)))
	}
	return all
}

func (b *bench) list(nodes []int) string {
	words := b.g.NamesOf(nodes)
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

func union(a, b []int) []int {
	all := slices.Concat(a, b)
	slices.Sort(all)
	return slices.Compact(all)
}
