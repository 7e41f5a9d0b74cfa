package study

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/formula"
)

// Typed is what arrows as text say, each thing once, in the order of the text.
type Typed struct {
	Variables []string
	Arrows    [][2]string // from, to
	Arcs      [][2]string
}

// ParseArrows reads arrows as text, a chain to a line: "hedge -> flowers ->
// bees". Commas make lists ("hedge, soil -> bees" is two arrows), arrows may
// point either way and be → or ←. A question mark as the cause joins what it
// points to by arcs: "? -> hedge, pesticide"; ↔ does as well. A line
// with a single name only mentions a variable. Empty lines, and what follows
// "#", are skipped.
func ParseArrows(text string) (*Typed, error) {
	t := &Typed{}
	for i, line := range strings.Split(text, "\n") {
		line, _, _ = strings.Cut(line, "#")
		if strings.TrimSpace(line) == "" {
			continue
		}
		if err := t.line(line); err != nil {
			if strings.Contains(strings.TrimSpace(text), "\n") {
				return nil, fmt.Errorf("line %d: %w", i+1, err)
			}
			return nil, err
		}
	}
	return t, nil
}

// links are what may stand between two names.
var links = [...]struct{ text, means string }{
	{"↔", "arc"}, {"->", "right"}, {"→", "right"}, {"<-", "left"}, {"←", "left"},
}

func (t *Typed) line(line string) error {
	var left []string
	link := ""
	for first := true; ; first = false {
		at, next, size := len(line), "", 0
		for _, l := range links {
			if i := strings.Index(line, l.text); i >= 0 && i < at {
				at, next, size = i, l.means, len(l.text)
			}
		}
		right, err := t.names(line[:at])
		if err != nil {
			return err
		}
		if !first {
			if err := t.join(left, link, right); err != nil {
				return err
			}
		}
		if next == "" {
			if first && slices.Contains(right, "?") {
				return fmt.Errorf("an unnamed common cause points at two variables or more, as in “? -> hedge, pesticide”")
			}
			return nil
		}
		left, link, line = right, next, line[at+size:]
	}
}

func (t *Typed) names(list string) ([]string, error) {
	var names []string
	for _, name := range strings.Split(list, ",") {
		name = formula.Canonical(strings.TrimSpace(name))
		switch {
		case name == "":
			return nil, fmt.Errorf("a name is missing beside an arrow or a comma")
		case name != "?" && formula.Reserved(name):
			return nil, fmt.Errorf("“%s” cannot name a variable: it has a meaning in formulas", name)
		case name != "?" && !formula.IsName(name):
			return nil, fmt.Errorf("“%s” cannot name a variable: a name is a letter followed by letters, digits and underscores", name)
		}
		names = append(names, name)
		if name != "?" && !slices.Contains(t.Variables, name) {
			t.Variables = append(t.Variables, name)
		}
	}
	return names, nil
}

func (t *Typed) join(left []string, link string, right []string) error {
	if link == "left" {
		left, right = right, left
	}
	unnamed := slices.Contains(left, "?")
	switch {
	case slices.Contains(right, "?"):
		return fmt.Errorf("nothing can point at an unnamed common cause")
	case unnamed && (len(left) > 1 || link == "arc"):
		return fmt.Errorf("an unnamed common cause stands alone before its arrow")
	case unnamed && len(right) < 2:
		return fmt.Errorf("an unnamed common cause points at two variables or more, as in “? -> hedge, pesticide”")
	case unnamed:
		for i, a := range right {
			for _, b := range right[i+1:] {
				t.arc(a, b)
			}
		}
		return nil
	}
	for _, a := range left {
		for _, b := range right {
			if link == "arc" {
				t.arc(a, b)
			} else if pair := [2]string{a, b}; !slices.Contains(t.Arrows, pair) {
				t.Arrows = append(t.Arrows, pair)
			}
		}
	}
	return nil
}

func (t *Typed) arc(a, b string) {
	if !slices.Contains(t.Arcs, [2]string{a, b}) && !slices.Contains(t.Arcs, [2]string{b, a}) {
		t.Arcs = append(t.Arcs, [2]string{a, b})
	}
}

// TypeArrows draws what arrows as text say. Variables that are not in the
// ledger are added to it, nodes that are not on the sheet are put there; what
// is drawn already stays as it is.
type TypeArrows struct {
	Rival, Text string
}

// Apply refuses text that ParseArrows refuses and arrows that AddArrow refuses.
func (e TypeArrows) Apply(s *Study) (*Study, error) {
	t, err := ParseArrows(e.Text)
	if err != nil {
		return nil, err
	}
	r := s.Rival(e.Rival)
	if r == nil {
		return nil, noRival(e.Rival)
	}
	if s, err = changed(s, func(s *Study) {
		for _, id := range t.Variables {
			if s.Variable(id) == nil {
				s.Variables = and(s.Variables, &Variable{ID: id})
			}
		}
	}); err != nil {
		return nil, err
	}
	return onSheet(s, e.Rival, t.draw)
}

// draw puts on a sheet what is not there yet: all at once, because a cycle is
// looked for once and not for every arrow.
func (t *Typed) draw(r *Rival) error {
	d := r.Diagram
	for _, id := range t.Variables {
		if d.Node(id) == nil {
			d.Nodes = and(d.Nodes, &Node{Variable: id})
		}
	}
	for _, a := range t.Arrows {
		if d.Arrow(a[0], a[1]) == nil {
			d.Arrows = and(d.Arrows, &Arrow{From: a[0], To: a[1]})
			d.Absent = without(d.Absent, byAbsentEnds(a[0], a[1]))
		}
	}
	for _, a := range t.Arcs {
		if d.Arc(a[0], a[1]) == nil {
			d.Arcs = and(d.Arcs, &Arc{A: a[0], B: a[1]})
		}
	}
	if cyclic(d) {
		a, cycle := closing(d)
		return &CycleError{From: a.From, To: a.To, Cycle: cycle}
	}
	return nil
}

// Label names the edit.
func (e TypeArrows) Label() string { return "Draw typed arrows" }
