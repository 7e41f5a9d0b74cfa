package causal

import "arrowroot/compile/graph"

// Read reads a query off a graph.
func Read(g *graph.Graph, q Query) *Reading {
	return &Reading{Graph: g, Query: q, Precise: -1}
}

// Separated reports whether given d-separates every node of a from every node of b.
func Separated(g *graph.Graph, a, b []int, given []int) bool { return false }

// Minimal lists the minimal adjustment sets that contain forced.
func Minimal(g *graph.Graph, x, y int, forced []int, max int) (sets [][]int, more bool) {
	return nil, false
}

// MinimalSeparators lists the minimal sets of measured nodes that contain forced and separate x and y.
func MinimalSeparators(g *graph.Graph, x, y int, forced []int, max int) (sets [][]int, more bool) {
	return nil, false
}

// ValidAdjustment reports whether holding z makes the total effect of x on y readable.
func ValidAdjustment(g *graph.Graph, x, y int, z []int) bool { return false }

// Identifiable reports whether the effect of x on y follows from the measured variables.
func Identifiable(g *graph.Graph, x, y int) bool { return false }

// A Fitted law conditions on the drawn measured parents and on what is carried.
type Fitted struct {
	Node    int
	Parents []int // drawn and measured
	Carried []Carried
}

// Carried is a term that enters a fitted law for the sake of what was left out.
type Carried struct {
	Node int
	For  []int // unmeasured nodes; -1 = an arc
}

// Carriers gives the fitted laws in fitting order (SEMANTICS A1).
func Carriers(g *graph.Graph, exposure int) []Fitted { return nil }

// CarriersFor is Carriers with the ancestors of the outcome first, which rule B2 needs.
func CarriersFor(g *graph.Graph, exposure, outcome int) []Fitted { return nil }

// Districts groups the measured nodes that unmeasured causes join.
func Districts(g *graph.Graph) [][]int { return nil }

// Case says how an effect may be simulated (SEMANTICS B2).
type Case int

// The cases.
const (
	PinAndSimulate      Case = iota // (a)
	ObservedForDistrict             // (b)
	NotSimulated                    // (c)
)

// InterventionCase decides the case.
func InterventionCase(g *graph.Graph, exposure, outcome int) (c Case, districtMembers []int, reason string) {
	return NotSimulated, nil, ""
}

// Difference is what one graph draws and the other does not, by name.
type Difference struct {
	OnlyA, OnlyB         [][2]string // arrows, from and to
	ArcsOnlyA, ArcsOnlyB [][2]string
	NodesOnlyA           []string
	NodesOnlyB           []string
	Reversed             [][2]string // as in a; also listed in OnlyA and OnlyB
}

// Compare matches nodes by name.
func Compare(a, b *graph.Graph) Difference { return Difference{} }
