package study

import (
	"slices"
	"strings"

	"arrowroot/compile/formula"
)

// renameVariable carries a new name everywhere. The ledger of s has the new
// name already; slices of s are replaced, never written to.
func renameVariable(s *Study, old, new string) {
	one := func(id string) string {
		if id == old {
			return new
		}
		return id
	}
	known := make(map[string]bool)
	for _, v := range s.Variables {
		if v.ID != new {
			known[v.ID] = true
		}
	}
	for _, p := range s.Plates {
		known[p.Name] = true
	}
	known[old] = true
	r := renamer{variable: one, parameter: func(id, of string) string { return renameParameter(id, of, one, known) }}
	s.Variables = mapped(s.Variables, func(v *Variable) *Variable {
		next := *v
		next.Computed = r.text(v.Computed, v.ID)
		next.Records, next.Answers = one(v.Records), one(v.Answers)
		return kept(v, next, next.Computed == v.Computed && next.Records == v.Records && next.Answers == v.Answers)
	})
	r.rivals(s)
	s.Questions = mapped(s.Questions, func(q *Question) *Question {
		if !q.names(old) {
			return q
		}
		next := copyQuestion(*q)
		next.Exposure, next.Outcome = one(q.Exposure), one(q.Outcome)
		for i, h := range q.Held {
			next.Held[i] = one(h)
		}
		for i, f := range q.Fixed {
			next.Fixed[i].Variable = one(f.Variable)
		}
		for i, c := range q.Where {
			next.Where[i].Variable = one(c.Variable)
		}
		return &next
	})
	s.Data = mapped(s.Data, func(d *Data) *Data {
		next, same := copyData(*d), true
		for i, c := range d.Keep {
			next.Keep[i].Variable = one(c.Variable)
			same = same && c.Variable != old
		}
		return kept(d, next, same)
	})
	s.Dismissed = mapped(s.Dismissed, func(d *Dismissal) *Dismissal {
		next := *d
		next.Key = strings.Join(eachWord(strings.Split(d.Key, " "), one), " ")
		return kept(d, next, next.Key == d.Key)
	})
}

// renamePlate carries a plate's new name everywhere.
func renamePlate(s *Study, old, new string) {
	one := func(name string) string {
		if name == old {
			return new
		}
		return name
	}
	s.Plates = mapped(s.Plates, func(p *Plate) *Plate {
		next := *p
		next.Within = one(p.Within)
		return kept(p, next, next.Within == p.Within)
	})
	eachPlateList(s, func(plates []string) []string { return eachWord(plates, one) })
	known := make(map[string]bool)
	for _, v := range s.Variables {
		known[v.ID] = true
	}
	for _, p := range s.Plates {
		if p.Name != new {
			known[p.Name] = true
		}
	}
	isVariable := s.Variable(old) != nil
	known[old] = true
	if !isVariable { // else a held name is that of the variable
		s.Questions = mapped(s.Questions, func(q *Question) *Question {
			next := *q
			next.Held = eachWord(q.Held, one)
			return kept(q, next, slices.Equal(next.Held, q.Held))
		})
	}
	r := renamer{plate: one, parameter: func(id, of string) string {
		if isVariable {
			return id // tau_farm could be of either; leave it
		}
		return renameParameter(id, of, one, known)
	}}
	r.rivals(s)
}

// A renamer rewrites the texts and names of rivals. Nil functions change
// nothing.
type renamer struct {
	variable, plate func(string) string
	parameter       func(id, of string) string // of: the variable whose law it is in
}

func (r renamer) names(of string) func(string) string {
	return func(id string) string {
		if r.variable != nil {
			if to := r.variable(id); to != id {
				return to
			}
		}
		return r.parameter(id, of)
	}
}

func (r renamer) text(text, of string) string {
	if text == "" {
		return text
	}
	return formula.Replace(text, r.names(of), r.plate)
}

func (r renamer) phrase(text, of string) string {
	if text == "" {
		return text
	}
	return formula.ReplacePhrase(text, r.names(of), r.plate)
}

func (r renamer) rivals(s *Study) {
	one := r.variable
	if one == nil {
		one = func(id string) string { return id }
	}
	s.Rivals = mapped(s.Rivals, func(rival *Rival) *Rival {
		d := *rival.Diagram
		d.Nodes = mapped(d.Nodes, func(n *Node) *Node {
			next := *n
			next.Variable = one(n.Variable)
			next.Law = r.law(n.Law, n.Variable)
			return kept(n, next, next == *n)
		})
		d.Arrows = mapped(d.Arrows, func(a *Arrow) *Arrow {
			next := *a
			next.From, next.To = one(a.From), one(a.To)
			next.With = eachWord(a.With, one)
			next.Prior = r.phrase(a.Prior, a.To)
			same := next.From == a.From && next.To == a.To && next.Prior == a.Prior && slices.Equal(next.With, a.With)
			return kept(a, next, same)
		})
		d.Arcs = mapped(d.Arcs, func(a *Arc) *Arc {
			next := *a
			next.A, next.B = one(a.A), one(a.B)
			return kept(a, next, next.A == a.A && next.B == a.B)
		})
		d.Absent = mapped(d.Absent, func(a *Absent) *Absent {
			next := *a
			next.From, next.To = one(a.From), one(a.To)
			return kept(a, next, next.From == a.From && next.To == a.To)
		})
		next := *rival
		if !sameSlice(d.Nodes, rival.Diagram.Nodes) || !sameSlice(d.Arrows, rival.Diagram.Arrows) ||
			!sameSlice(d.Arcs, rival.Diagram.Arcs) || !sameSlice(d.Absent, rival.Diagram.Absent) {
			next.Diagram = &d
		}
		next.Layout = rival.Layout.renamed(one)
		return kept(rival, next, next == *rival)
	})
}

// renamed gives the layout with places under other names, the same layout if
// no name changes.
func (l *Layout) renamed(one func(string) string) *Layout {
	at, same := make(map[string]Point, len(l.At)), true
	for id, p := range l.At {
		at[one(id)] = p
		same = same && one(id) == id
	}
	if same {
		return l
	}
	return &Layout{At: at, Notes: l.Notes}
}

func (r renamer) law(l *Law, of string) *Law {
	if l == nil {
		return nil
	}
	next := *copyLaw(l)
	next.Formula = r.text(l.Formula, of)
	same := next.Formula == l.Formula
	for i, a := range next.Arguments {
		next.Arguments[i].Text = r.text(a.Text, of)
		same = same && next.Arguments[i] == a
	}
	for i, p := range next.Priors {
		next.Priors[i].Parameter = r.names(of)(formula.Canonical(p.Parameter))
		if next.Priors[i].Parameter == formula.Canonical(p.Parameter) {
			next.Priors[i].Parameter = p.Parameter
		}
		next.Priors[i].Text = r.phrase(p.Text, of)
		same = same && next.Priors[i] == p
	}
	return kept(l, next, same)
}

// kept gives the old part if nothing changed.
func kept[T any](old *T, next T, same bool) *T {
	if same {
		return old
	}
	return &next
}

func sameSlice[T any](a, b []T) bool {
	return len(a) == len(b) && (len(a) == 0 || &a[0] == &b[0])
}

// eachWord gives the words changed one by one, the same slice if none changes.
func eachWord(words []string, one func(string) string) []string {
	next := words
	for i, w := range words {
		if to := one(w); to != w {
			if &next[0] == &words[0] {
				next = slices.Clone(words)
			}
			next[i] = to
		}
	}
	return next
}

// renameParameter changes the typed name of a parameter, such as
// beta_hedge_bees, if it is made of a stem and known names of which one gets
// another name. IDs can hold underscores, so a name may fall apart in more than
// one way; the way that ends in the variable whose law it is comes first.
func renameParameter(id, of string, one func(string) string, known map[string]bool) string {
	stem, rest, long := strings.Cut(id, "_")
	if !long || known[id] {
		return id
	}
	parts := []string{rest}
	if rest != of {
		parts = nil
		if before, ok := strings.CutSuffix(rest, "_"+of); ok {
			if parts = knownParts(before, known); parts != nil {
				parts = append(parts, of)
			}
		}
		if parts == nil {
			parts = knownParts(rest, known)
		}
	}
	if parts == nil {
		return id
	}
	return stem + "_" + strings.Join(eachWord(parts, one), "_")
}

// knownParts cuts text at underscores into known names, the longest first;
// nil if that cannot be done.
func knownParts(text string, known map[string]bool) []string {
	for end := len(text); end > 0; end = strings.LastIndexByte(text[:end], '_') {
		if !known[text[:end]] {
			continue
		}
		if end == len(text) {
			return []string{text}
		}
		if rest := knownParts(text[end+1:], known); rest != nil {
			return append([]string{text[:end]}, rest...)
		}
	}
	return nil
}

// eachPlateList changes every list of plates in the study.
func eachPlateList(s *Study, change func([]string) []string) {
	s.Variables = mapped(s.Variables, func(v *Variable) *Variable {
		next := *v
		next.Plates = change(v.Plates)
		return kept(v, next, slices.Equal(next.Plates, v.Plates))
	})
	s.Rivals = mapped(s.Rivals, func(r *Rival) *Rival {
		d := *r.Diagram
		d.Nodes = mapped(d.Nodes, func(n *Node) *Node {
			if n.Law == nil {
				return n
			}
			law := *n.Law
			law.VariesBy = change(law.VariesBy)
			next := *n
			next.Law = copyLaw(&law)
			return kept(n, next, slices.Equal(law.VariesBy, n.Law.VariesBy))
		})
		d.Arrows = mapped(d.Arrows, func(a *Arrow) *Arrow {
			next := *a
			next.VariesBy = change(a.VariesBy)
			return kept(a, next, slices.Equal(next.VariesBy, a.VariesBy))
		})
		d.Arcs = mapped(d.Arcs, func(a *Arc) *Arc {
			next := *a
			next.Plates = change(a.Plates)
			return kept(a, next, slices.Equal(next.Plates, a.Plates))
		})
		if sameSlice(d.Nodes, r.Diagram.Nodes) && sameSlice(d.Arrows, r.Diagram.Arrows) && sameSlice(d.Arcs, r.Diagram.Arcs) {
			return r
		}
		next := *r
		next.Diagram = &d
		return &next
	})
}
