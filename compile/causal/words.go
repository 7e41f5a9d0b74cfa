package causal

import (
	"fmt"
	"strings"

	"arrowroot/compile/graph"
)

// names writes a set of nodes as "a", "a and b" or "a, b and c".
func names(g *graph.Graph, nodes []int) string {
	return series(g.NamesOf(nodes), "and")
}

func series(words []string, last string) string {
	switch n := len(words); n {
	case 0:
		return "nothing"
	case 1:
		return words[0]
	default:
		return strings.Join(words[:n-1], ", ") + " " + last + " " + words[n-1]
	}
}

func arrowText(g *graph.Graph, nodes []int) string {
	return strings.Join(g.NamesOf(nodes), " → ")
}

// count writes "1 open path", "3 open paths".
func count(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// String is the word for the kind: "causal", "back-door" or "non-causal".
func (k PathKind) String() string {
	return [...]string{"causal", "back-door", "non-causal"}[k]
}

// String is "chain", "fork" or "collider".
func (r Role) String() string { return [...]string{"chain", "fork", "collider"}[r] }

// String is a word for the kind: "incomplete", "confounded", "readable",
// "over-held", "no set" or "no effect".
func (k VerdictKind) String() string {
	return [...]string{"incomplete", "confounded", "readable", "over-held", "no set", "no effect"}[k]
}
