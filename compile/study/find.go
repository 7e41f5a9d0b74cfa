package study

import "slices"

// New is the study that a new window shows: one empty rival.
func New() *Study {
	return &Study{Rivals: []*Rival{{Name: "Rival 1", Layout: &Layout{}, Diagram: &Diagram{}}}}
}

// Variable finds a line of the ledger; nil if there is none.
func (s *Study) Variable(id string) *Variable { return find(s.Variables, byID(id)) }

// Rival finds an explanation; nil if there is none.
func (s *Study) Rival(name string) *Rival { return find(s.Rivals, byRivalName(name)) }

// Plate finds a plate; nil if there is none.
func (s *Study) Plate(name string) *Plate { return find(s.Plates, byPlateName(name)) }

// Table finds the data of that name, the first for ""; nil if there is none.
func (s *Study) Table(name string) *Data {
	if name == "" && len(s.Data) > 0 {
		return s.Data[0]
	}
	return find(s.Data, byDataName(name))
}

// DataOf is the table that a rival is fitted to: the one its first bound
// variable is in, the first of the study if none is bound; nil without data.
func (s *Study) DataOf(rival string) *Data {
	if r := s.Rival(rival); r != nil {
		for _, n := range r.Diagram.Nodes {
			if v := s.Variable(n.Variable); v != nil && v.Column != "" && !v.Unmeasured {
				return s.Table(v.Data)
			}
		}
	}
	return s.Table("")
}

// Node finds a variable on the sheet; nil if it is not there.
func (d *Diagram) Node(variable string) *Node { return find(d.Nodes, byVariable(variable)) }

// Arrow finds an arrow; nil if it is not drawn.
func (d *Diagram) Arrow(from, to string) *Arrow { return find(d.Arrows, byEnds(from, to)) }

// Arc finds an arc, its ends in either order; nil if it is not drawn.
func (d *Diagram) Arc(a, b string) *Arc { return find(d.Arcs, byPair(a, b)) }

// AbsentArrow finds the note on an omitted arrow; nil if there is none.
func (d *Diagram) AbsentArrow(from, to string) *Absent {
	return find(d.Absent, byAbsentEnds(from, to))
}

// Parents lists the drawn parents of a variable in the order of their arrows.
func (d *Diagram) Parents(variable string) []string {
	var parents []string
	for _, a := range d.Arrows {
		if a.To == variable {
			parents = append(parents, a.From)
		}
	}
	return parents
}

func byID(id string) func(*Variable) bool { return func(v *Variable) bool { return v.ID == id } }

func byRivalName(n string) func(*Rival) bool { return func(r *Rival) bool { return r.Name == n } }

func byPlateName(n string) func(*Plate) bool { return func(p *Plate) bool { return p.Name == n } }

func byDataName(n string) func(*Data) bool { return func(d *Data) bool { return d.Name == n } }

func byVariable(id string) func(*Node) bool { return func(n *Node) bool { return n.Variable == id } }

func byEnds(from, to string) func(*Arrow) bool {
	return func(a *Arrow) bool { return a.From == from && a.To == to }
}

func byPair(a, b string) func(*Arc) bool {
	return func(c *Arc) bool { return c.A == a && c.B == b || c.A == b && c.B == a }
}

func byAbsentEnds(from, to string) func(*Absent) bool {
	return func(a *Absent) bool { return a.From == from && a.To == to }
}

func find[T any](parts []*T, is func(*T) bool) *T {
	if i := slices.IndexFunc(parts, is); i >= 0 {
		return parts[i]
	}
	return nil
}
