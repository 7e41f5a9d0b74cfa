package ops

import (
	"fmt"
	"strconv"
	"strings"
	"unsafe"
)

// text is the graph as text, one node to a line:
//
//	v7 rows = Gather v3 by i0
//
// with v7 the node, rows its plate (left out for scalars), and the attributes
// after the arguments. Columns d0, d1, … and indices i0, i1, … are numbered as
// they come. It tells graphs apart exactly.
func (g *graph) text() string {
	var w strings.Builder
	names := namer{}
	for i := 1; i < len(g.nodes); i++ {
		g.line(&w, id(i), names)
		w.WriteByte('\n')
	}
	return w.String()
}

// A namer numbers columns and indices by identity.
type namer map[any]string

func (m namer) name(letter string, of any) string {
	if m[of] == "" {
		n := 0
		for _, known := range m {
			if strings.HasPrefix(known, letter) {
				n++
			}
		}
		m[of] = letter + strconv.Itoa(n)
	}
	return m[of]
}

func (g *graph) line(w *strings.Builder, i id, names namer) {
	n := &g.nodes[i]
	fmt.Fprintf(w, "v%d ", i)
	if n.plate != Scalar {
		w.WriteString(g.plates[n.plate].name + " ")
	}
	w.WriteString("= " + table[n.op].name)
	if n.op == opAffine {
		g.termsText(w, n, names)
		return
	}
	for _, a := range n.args {
		fmt.Fprintf(w, " v%d", a)
	}
	switch n.op {
	case opConst:
		w.WriteString(" " + strconv.FormatFloat(n.c, 'g', -1, 64))
	case opParameter:
		if n.plate == Scalar {
			fmt.Fprintf(w, " q[%d]", n.at)
		} else {
			fmt.Fprintf(w, " q[%d:%d]", n.at, n.at+g.rows(n.plate))
		}
	case opElement, opPlace, opPartial, opLinear, opCumSum:
		fmt.Fprintf(w, " at %d", n.at)
	case opDensity:
		w.WriteString(" of " + n.kernel.Name)
	}
	if n.data != nil {
		w.WriteString(" " + names.name("d", unsafe.SliceData(n.data)))
	}
	if n.index != nil {
		w.WriteString(" by " + names.name("i", n.index))
	}
}

func (g *graph) termsText(w *strings.Builder, n *node, names namer) {
	for i, t := range n.terms {
		if i > 0 {
			w.WriteString(" +")
		}
		var factors []string
		if t.scale >= 0 {
			factors = append(factors, fmt.Sprintf("v%d", n.args[t.scale]))
		}
		if t.x >= 0 {
			x := fmt.Sprintf("v%d", n.args[t.x])
			if t.index != nil {
				x += "[" + names.name("i", t.index) + "]"
			}
			factors = append(factors, x)
		}
		if t.w >= 0 {
			factors = append(factors, fmt.Sprintf("v%d", n.args[t.w]))
		}
		w.WriteString(" " + strings.Join(factors, " "))
	}
}

// text is the schedule: its stages with their instructions, each with the slot
// of its result and, after semicolons, what else it gives in the same go.
func (s *schedule) text() string {
	var w strings.Builder
	names := namer{}
	for i := range s.g.nodes {
		if n := &s.g.nodes[i]; n.op == opParameter || n.op == opConst || n.op == opData {
			s.g.line(&w, id(i), names)
			w.WriteByte('\n')
		}
	}
	for i := range s.stages {
		st := &s.stages[i]
		if st.plate == Scalar {
			fmt.Fprintf(&w, "stage %d: whole\n", st.level)
		} else {
			fmt.Fprintf(&w, "stage %d: blocks of %s, %d rows\n", st.level, s.g.plates[st.plate].name, st.rows)
		}
		for j := range st.instrs {
			in := &st.instrs[j]
			w.WriteString("  ")
			s.g.line(&w, in.id, names)
			fmt.Fprintf(&w, " -> s%d", in.dst)
			for _, v := range in.more {
				w.WriteString("; ")
				s.g.line(&w, v, names)
			}
			w.WriteByte('\n')
		}
	}
	return w.String()
}
