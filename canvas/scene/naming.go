package scene

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/study"
)

// A Naming waits for a typed name: of a new variable (the zero value with At),
// of a variable at the end of a new arrow (From), of one that is there
// (Variable), or of a plate around some (Members); or for the words of a note
// (Note).
type Naming struct {
	At       study.Point
	From     string
	Variable string
	Members  []string

	Note  bool
	Which int    // the note that is there; -1 = a new one
	Was   string // its words
}

// Text is what the entry shows at first.
func (n Naming) Text() string {
	if n.Note {
		return n.Was
	}
	return n.Variable
}

// Hint is what the empty entry says.
func (n Naming) Hint() string {
	switch {
	case n.Note:
		return "a note; Shift+Return for a new line"
	case len(n.Members) > 0:
		return "one for each …"
	}
	return "name"
}

// Edit is what a typed name comes to; nil if it changes nothing.
func (n Naming) Edit(in *Input, text string) (study.Edit, error) {
	id, label := Identifier(text)
	switch {
	case in.Rival == nil || in.Study == nil:
		return nil, nil
	case n.Note:
		return n.write(in.Rival.Name, text), nil
	case id == "":
		return nil, errors.New("a name needs at least one letter or digit")
	case n.Variable != "":
		return n.rename(in, id, label)
	case len(n.Members) > 0:
		return n.frame(in, id)
	}
	return n.add(in, id, label)
}

func (n Naming) rename(in *Input, id, label string) (study.Edit, error) {
	v := in.Study.Variable(n.Variable)
	if v == nil || id == n.Variable {
		return nil, nil
	}
	if in.Study.Variable(id) != nil {
		return nil, fmt.Errorf("there is a variable %s already", id)
	}
	to := *v
	to.ID = id
	if v.Label == "" {
		to.Label = label
	}
	return study.ChangeVariable{ID: n.Variable, To: to}, nil
}

// add puts a variable on the sheet: one of the ledger if the name is known.
func (n Naming) add(in *Input, id, label string) (study.Edit, error) {
	rival := in.Rival.Name
	if in.Rival.Diagram.Node(id) != nil {
		if n.From == "" || n.From == id {
			return nil, fmt.Errorf("%s is on the sheet already", id)
		}
		return study.AddArrow{Rival: rival, Arrow: study.Arrow{From: n.From, To: id}}, nil
	}
	at := n.At
	edits := []study.Edit{}
	if in.Study.Variable(id) == nil {
		edits = append(edits, study.AddVariable{Variable: study.Variable{ID: id, Label: label}})
	}
	edits = append(edits, study.AddNode{Rival: rival, Variable: id, At: &at})
	name := "Add " + id
	if n.From != "" {
		edits = append(edits, study.AddArrow{Rival: rival, Arrow: study.Arrow{From: n.From, To: id}})
		name = "Draw " + n.From + " → " + id
	}
	return nailed(in, study.Several{Name: name, Edits: edits}), nil
}

// frame makes the members' level a plate, a new one unless the name is known.
func (n Naming) frame(in *Input, name string) (study.Edit, error) {
	var edits []study.Edit
	if in.Study.Plate(name) == nil {
		edits = append(edits, study.AddPlate{Plate: study.Plate{Name: name}})
	}
	for _, id := range n.Members {
		v := in.Study.Variable(id)
		if v == nil || slices.Equal(v.Plates, []string{name}) {
			continue
		}
		to := *v
		to.Plates = []string{name}
		edits = append(edits, study.ChangeVariable{ID: id, To: to})
	}
	if len(edits) == 0 {
		return nil, nil
	}
	return study.Several{Name: "Draw a plate for each " + name, Edits: edits}, nil
}

// Identifier turns typed text into the ID that study.IDOf gives it and, where
// they differ, the label that keeps the text: "farm size" gives farm_size and
// "farm size".
func Identifier(text string) (id, label string) {
	text = strings.Join(strings.Fields(text), " ")
	id = study.IDOf(text)
	if id == "" || id == text {
		return id, ""
	}
	return id, text
}

// Free is a place near the middle of what is seen where a new node covers no
// other.
func Free(in *Input) study.Point {
	middle := Snapped(in.View.In(in.middle()))
	places := in.layout()
	clear := func(p study.Point) bool {
		for _, q := range places {
			if math.Abs(p.X-q.X) < 120 && math.Abs(p.Y-q.Y) < 72 {
				return false
			}
		}
		return true
	}
	for ring := range 12 {
		for dy := -ring; dy <= ring; dy++ {
			for dx := -ring; dx <= ring; dx++ {
				if max(dx, -dx, dy, -dy) != ring {
					continue
				}
				if p := (study.Point{X: middle.X + float64(dx)*64, Y: middle.Y + float64(dy)*40}); clear(p) {
					return p
				}
			}
		}
	}
	return middle
}
