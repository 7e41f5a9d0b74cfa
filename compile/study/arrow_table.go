package study

import (
	"strconv"
	"strings"
)

// ArrowTable is what a rival supposes as a table for a supplement: a heading,
// then a row for every arrow, common cause and argued absence, in the order of
// the diagram. Nil for an unknown rival.
//
// The columns are: from; to; kind (arrow, common cause, no arrow); form, with
// the parents of a product behind "×"; the plates by which the arrow varies, or
// at which the cause lives; why; references; the tiers of both ends, empty
// where nobody said one. Several entries of one cell are parted by "; ".
func (s *Study) ArrowTable(rival string) [][]string {
	r := s.Rival(rival)
	if r == nil {
		return nil
	}
	table := [][]string{{"from", "to", "kind", "form", "varies by", "why", "references", "tier from", "tier to"}}
	add := func(from, to, kind, form string, plates []string, why string, references []string) {
		table = append(table, []string{from, to, kind, form, several(plates), why, several(references), s.tier(from), s.tier(to)})
	}
	for _, a := range r.Diagram.Arrows {
		add(a.From, a.To, "arrow", s.formOf(a), a.VariesBy, a.Why, a.References)
	}
	for _, a := range r.Diagram.Arcs {
		add(a.A, a.B, "common cause", "", a.Plates, a.Why, a.References)
	}
	for _, a := range r.Diagram.Absent {
		add(a.From, a.To, "no arrow", "", nil, a.Why, a.References)
	}
	return table
}

func several(words []string) string { return strings.Join(words, "; ") }

func (s *Study) tier(id string) string {
	if v := s.Variable(id); v != nil && v.Tier != 0 {
		return strconv.Itoa(v.Tier)
	}
	return ""
}

// formOf names an arrow's form, the default one where nothing is said.
func (s *Study) formOf(a *Arrow) string {
	form := a.Form
	if form == "" {
		form = Slope
		if v := s.Variable(a.From); v != nil && (v.Scale == Category || v.Scale == Ordered) {
			form = Steps
		}
	}
	for _, w := range a.With {
		form += " × " + w
	}
	return form
}
