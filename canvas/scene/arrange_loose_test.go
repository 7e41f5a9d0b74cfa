package scene

import (
	"fmt"
	"testing"

	"arrowroot/compile/study"
)

// Variables without arrows, as a data file brings them, fill a block and not a
// column; an outcome among them stands to the right of the others.
func TestArrangeSpreadsLooseNodes(t *testing.T) {
	s := &study.Study{}
	r := &study.Rival{Name: "r", Diagram: &study.Diagram{}}
	for i := range 10 {
		id := fmt.Sprintf("v%d", i)
		s.Variables = append(s.Variables, &study.Variable{ID: id})
		r.Diagram.Nodes = append(r.Diagram.Nodes, &study.Node{Variable: id})
	}
	s.Rivals = []*study.Rival{r}
	at := Arrange(s, r, false)
	checkLayout(t, r, at)
	columns := make(map[float64]int)
	for _, p := range at {
		columns[p.X]++
	}
	if len(columns) != 4 {
		t.Errorf("10 variables without arrows stand in columns of %v", columns)
	}
	at = ArrangeFor(s, r, &study.Question{Exposure: "v1", Outcome: "v0"}, false)
	checkLayout(t, r, at)
	for id, p := range at {
		if id != "v0" && p.X >= at["v0"].X {
			t.Errorf("%s at %v is not left of the outcome at %v", id, p, at["v0"])
		}
	}
}
