package scene

import (
	"fmt"
	"math"
	"reflect"
	"testing"

	"arrowroot/compile/study"
	"pgregory.net/rapid"
)

// On any acyclic diagram arrows point to the right, no two nodes overlap, every
// place is on the grid, and the same diagram gives the same layout.
func TestArrangeHolds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 30).Draw(t, "nodes")
		s := &study.Study{}
		r := &study.Rival{Name: "r", Diagram: &study.Diagram{}}
		for i := range n {
			id := fmt.Sprintf("v%d", i)
			s.Variables = append(s.Variables, &study.Variable{ID: id})
			r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: id})
		}
		if n > 1 {
			for range rapid.IntRange(0, 3*n).Draw(t, "arrows") {
				i := rapid.IntRange(0, n-2).Draw(t, "from")
				j := rapid.IntRange(i+1, n-1).Draw(t, "to")
				if arrow(r, s.Variables[i].ID, s.Variables[j].ID) == nil {
					r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: s.Variables[i].ID, To: s.Variables[j].ID})
				}
			}
		}
		s.Rivals = []*study.Rival{r}
		at := Arrange(s, r, false)
		checkLayout(t, r, at)
		if again := Arrange(s, r, false); !reflect.DeepEqual(at, again) {
			t.Fatal("two layouts of one diagram")
		}
	})
}

type fataler interface{ Fatalf(string, ...any) }

func checkLayout(t fataler, r *study.Rival, at map[string]study.Point) {
	if len(at) != len(r.Diagram.Nodes) {
		t.Fatalf("%d places for %d nodes", len(at), len(r.Diagram.Nodes))
	}
	for id, p := range at {
		if math.Mod(p.X, unit) != 0 || math.Mod(p.Y, unit) != 0 {
			t.Fatalf("%s is off the grid at %v", id, p)
		}
		for other, q := range at {
			if id != other && math.Abs(p.X-q.X) < nodeMin && math.Abs(p.Y-q.Y) < nodeHeight {
				t.Fatalf("%s at %v covers %s at %v", id, p, other, q)
			}
		}
	}
	for _, a := range r.Diagram.Arrows {
		if at[a.From].X >= at[a.To].X {
			t.Fatalf("%s → %s points to the left: %v, %v", a.From, a.To, at[a.From], at[a.To])
		}
	}
}

// The outcome stands to the right of all that it does not cause.
func TestArrangeOutcomeLast(t *testing.T) {
	s := hedgerows()
	s.Variables = append(s.Variables, &study.Variable{ID: "birds"})
	r := s.Rivals[0]
	r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: "birds"})
	r.Diagram.Arrows = append(r.Diagram.Arrows, &study.Arrow{From: "hedge", To: "birds"})
	r.Layout = nil
	at := ArrangeFor(s, r, s.Questions[0], false)
	checkLayout(t, r, at)
	for id, p := range at {
		if id != "bees" && p.X >= at["bees"].X {
			t.Errorf("%s at %v is not left of bees at %v", id, p, at["bees"])
		}
	}
}

// Nodes placed by hand stay, others find a free place beside them.
func TestArrangeKeepsPlaced(t *testing.T) {
	s := hedgerows()
	r := s.Rivals[0]
	delete(r.Layout.At, "flowers")
	delete(r.Layout.At, "arable")
	at := Arrange(s, r, true)
	for id, p := range r.Layout.At {
		if at[id] != p {
			t.Errorf("%s moved from %v to %v", id, p, at[id])
		}
	}
	if p := at["flowers"]; p.X <= at["hedge"].X || p.X >= at["bees"].X {
		t.Errorf("flowers at %v is not between hedge and bees", p)
	}
	for id, p := range at {
		for other, q := range at {
			if id != other && math.Abs(p.X-q.X) < nodeMin && math.Abs(p.Y-q.Y) < nodeHeight {
				t.Errorf("%s at %v covers %s at %v", id, p, other, q)
			}
		}
	}
}

// No frame encloses a variable that its plate does not hold.
func TestArrangePlates(t *testing.T) {
	in := plates()
	in.View = View{}
	_, m := Build(in)
	for _, f := range m.plates {
		for _, n := range m.nodes {
			if inside := f.box.Contains(n.at); inside != holds(in.Study, f.plate.Name, n.variable) {
				t.Errorf("frame of %s, %s inside: %v", f.plate.Name, n.id, inside)
			}
		}
	}
}

// Shown whole, names on the largest sheets do not cover one another.
func TestArrangeBigReadable(t *testing.T) {
	_, m := Build(fitted(bigInput()))
	for i, n := range m.nodes {
		for _, o := range m.nodes[:i] {
			if n.rect().Meets(o.rect()) {
				t.Errorf("%s covers %s", n.id, o.id)
			}
		}
	}
}

// Sweeps and exchanges at least halve the crossings of a large diagram.
func TestArrangeBigCrossings(t *testing.T) {
	in := bigInput()
	a := newArranger(in.Study, in.Rival, in.Question)
	a.layer()
	a.dummies()
	before := a.crossings()
	a.uncross()
	if after := a.crossings(); after > before/2 {
		t.Errorf("%d crossings, %d before", after, before)
	}
}
