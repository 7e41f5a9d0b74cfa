package model

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"arrowroot/compile/formula"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// anyStudy draws a rival over up to seven variables of any scale, with arcs,
// unmeasured variables, forms, products and plates, and a table that suits it.
func anyStudy(t *rapid.T) (*study.Study, *table.Table, study.Question) {
	n := rapid.IntRange(2, 7).Draw(t, "variables")
	rows := rapid.IntRange(12, 30).Draw(t, "rows")
	tab := newTable("t", rows)
	farm := make([]int32, rows)
	for i := range farm {
		farm[i] = int32(i % 4)
	}
	words(tab, "farm", farm, "A", "B", "C", "D")
	var variables []*study.Variable
	for i := range n {
		v := &study.Variable{ID: fmt.Sprintf("v%d", i), Scale: rapid.SampledFrom(study.Scales[:]).Draw(t, "scale")}
		v.Column = v.ID
		if rapid.IntRange(0, 2).Draw(t, "range") == 0 {
			v.Range = &study.Range{Low: 0, High: 12}
			if v.Scale == study.Proportion {
				v.Range.High = 1
			}
		}
		v.Unmeasured = i > 0 && i < n-1 && rapid.IntRange(0, 4).Draw(t, "unmeasured") == 0
		if rapid.Bool().Draw(t, "unit") {
			v.Unit = "kg"
		}
		perFarm := !v.Unmeasured && rapid.IntRange(0, 4).Draw(t, "level") == 0 && i == 0
		if perFarm {
			v.Plates = []string{"farm"}
		}
		values := make([]float64, rows)
		for r := range values {
			at := r
			if perFarm {
				at = r % 4
			}
			x := float64((at*(7+2*i) + i) % 11) // 0 … 10, no value for all rows
			switch v.Scale {
			case study.Positive:
				x++
			case study.Proportion:
				x = (x + 1) / 12
			case study.Binary:
				x = math.Mod(x, 2)
			case study.Category, study.Ordered:
				x = math.Mod(x, 3)
			}
			values[r] = x
		}
		if v.Unmeasured {
			v.Column = ""
		} else {
			numbers(tab, v.ID, values...)
		}
		variables = append(variables, v)
	}
	var arrows []string
	for j := 1; j < n; j++ {
		for i := range j {
			if rapid.IntRange(0, 2).Draw(t, "arrow") == 0 {
				arrows = append(arrows, fmt.Sprintf("v%d -> v%d", i, j))
			}
		}
	}
	s := sheet(variables, strings.Join(arrows, ";"), nil)
	d := s.Rivals[0].Diagram
	for _, a := range d.Arrows {
		from, to := s.Variable(a.From), s.Variable(a.To)
		numeric := from.Scale != study.Category && from.Scale != study.Ordered && !from.Unmeasured
		simple := to.Scale != study.Category
		switch rapid.IntRange(0, 6).Draw(t, "form") {
		case 0:
			if numeric && simple && len(from.Plates) == 0 {
				a.VariesBy = []string{"farm"}
			}
		case 1:
			if from.Scale == study.Positive && (to.Scale == study.Count || to.Scale == study.Positive) {
				a.Form = "offset"
			}
		case 3:
			a.Form = rapid.SampledFrom([]string{study.Log, study.OneWay, study.Threshold, study.Saturating}).Draw(t, "bent")
			if numeric && simple && len(from.Plates) == 0 && rapid.Bool().Draw(t, "bent varies") {
				a.VariesBy = []string{"farm"}
			}
		case 2:
			for _, o := range d.Arrows {
				if w := s.Variable(o.From); o.To == a.To && o.From != a.From && numeric && w.Scale != study.Category && w.Scale != study.Ordered && o.Form == "" && !w.Unmeasured {
					a.With = []string{o.From}
				}
			}
		}
	}
	for _, node := range d.Nodes {
		v := s.Variable(node.Variable)
		if !v.Unmeasured && v.Scale != study.Category && len(v.Plates) == 0 && hasParent(d, v.ID) && rapid.IntRange(0, 3).Draw(t, "varies") == 0 {
			node.Law = &study.Law{VariesBy: []string{"farm"}}
		}
	}
	if rapid.IntRange(0, 3).Draw(t, "arc") == 0 && !variables[0].Unmeasured && !variables[n-1].Unmeasured {
		d.Arcs = append(d.Arcs, &study.Arc{A: "v0", B: fmt.Sprintf("v%d", n-1)})
	}
	return s, tab, study.Question{Exposure: "v0", Outcome: fmt.Sprintf("v%d", n-1)}
}

func hasParent(d *study.Diagram, id string) bool {
	return slices.ContainsFunc(d.Arrows, func(a *study.Arrow) bool { return a.To == id })
}

// For any study that builds: every free parameter stands exactly once in the
// statement with its prior; every name in every expression resolves, to a
// variable or parameter of the right shape; what a law reads is constant
// within its units; repairs apply; the fingerprint does not depend on chance.
func TestAnyStudy(t *testing.T) {
	built := 0
	rapid.Check(t, func(t *rapid.T) {
		s, tab, q := anyStudy(t)
		for _, kind := range []Kind{Full, Held, Crude} {
			m, problems := Build(s, "R", q, tab, kind)
			for _, p := range problems {
				if p.Message == "" || p.Code == "" {
					t.Fatalf("a problem without words: %+v", p)
				}
				for _, r := range p.Repairs {
					if _, err := r.Edit.Apply(s); err != nil {
						t.Fatalf("%s: repair %q: %v", p.Message, r.Label, err)
					}
				}
			}
			if m == nil {
				if !Stops(problems) {
					t.Fatal("no model and nothing that stops it")
				}
				continue
			}
			built++
			checkStatement(t, m)
			checkNames(t, m)
			again, _ := Build(s, "R", q, tab, kind)
			if again.Fingerprint() != m.Fingerprint() {
				t.Fatal("two builds of the same study differ")
			}
		}
	})
	if built == 0 {
		t.Error("no study built")
	}
	t.Logf("%d models", built)
}

func checkStatement(t *rapid.T, m *Model) {
	lines := m.Statement().Lines
	for _, p := range m.Parameters {
		n := 0
		for _, l := range lines {
			if l.Parameter == p.Name {
				n++
				if l.Right == "" || l.Left == "" {
					t.Fatalf("%s has an empty line", p.Name)
				}
				if l.Kind == PriorLine && l.Reason == "" {
					t.Fatalf("%s has a prior without a reason", p.Name)
				}
			}
		}
		if n != 1 {
			t.Fatalf("%s stands %d times in the statement:\n%s", p.Name, n, m.Statement())
		}
		if (p.Prior.Family == nil) != (p.Shape == ByPlate || p.Shape == Cuts || p.Shape == Rising) {
			t.Fatalf("%s (shape %d) has prior %v", p.Name, p.Shape, p.Prior.Family)
		}
		for i, a := range p.Prior.Arguments {
			x, ok := a.(*formula.Number)
			if !ok || math.IsNaN(x.Value) || math.IsInf(x.Value, 0) || p.Prior.Family.Arguments[i].Name == "sd" && x.Value <= 0 {
				t.Fatalf("%s: argument %d of its prior is %s", p.Name, i, formula.Format(a))
			}
		}
		if p.Prior.FromData != strings.Contains(p.Why, "seen in the data") {
			t.Fatalf("%s: from data %v, but its reason is %q", p.Name, p.Prior.FromData, p.Why)
		}
		if p.Size != max(len(p.Entries), 1) && p.Shape != Scalar {
			t.Fatalf("%s has size %d and entries %v", p.Name, p.Size, p.Entries)
		}
	}
	symbols := make(map[string]string)
	for _, p := range m.Parameters {
		if other, twice := symbols[p.Symbol]; twice {
			t.Fatalf("%s and %s are both printed %s", other, p.Name, p.Symbol)
		}
		symbols[p.Symbol] = p.Name
	}
}

func checkNames(t *rapid.T, m *Model) {
	seen := make(map[int]bool)
	used := make(map[string]bool)
	for _, l := range m.Laws {
		for _, c := range l.Carried {
			if !seen[c.Variable] && slices.ContainsFunc(m.Laws, func(o *Law) bool { return o.Variable == c.Variable }) {
				t.Fatal("a law carries a variable whose law comes later")
			}
		}
		for _, v := range l.Drawn {
			if !seen[v] && slices.ContainsFunc(m.Laws, func(o *Law) bool { return o.Variable == v }) {
				t.Fatal("a law comes before its parent's")
			}
		}
		seen[l.Variable] = true
		for _, e := range append(slices.Clone(l.Predictors), l.Arguments...) {
			if e == nil {
				continue
			}
			formula.Walk(e, func(e formula.Expr) bool {
				switch e := e.(type) {
				case *formula.Name:
					v, p := m.Name(e.ID)
					if (v < 0) == (p < 0) {
						t.Fatalf("%s means %d and %d", e.ID, v, p)
					}
					if p >= 0 && m.Parameters[p].Shape != Scalar {
						t.Fatalf("%s is no scalar", e.ID)
					}
					if v >= 0 && m.Variables[v].Plate >= 0 {
						if _, ok := m.LevelOf(l.Plate, m.Variables[v].Plate); !ok {
							t.Fatalf("%s changes within the units of its child", e.ID)
						}
					}
					used[e.ID] = true
				case *formula.By:
					_, p := m.Name(e.Name.ID)
					if p < 0 || m.Parameters[p].Shape != ByPlate || m.Plates[m.Parameters[p].Plate].Name != e.Plates[0] || len(e.Plates) != 1 {
						t.Fatalf("%s does not resolve", formula.Format(e))
					}
					used[e.Name.ID], used[m.Parameters[p].Mean], used[m.Parameters[p].SD] = true, true, true
					return false
				case *formula.Of:
					v, _ := m.Name(e.Variable.ID)
					_, p := m.Name(e.Vector.ID)
					if v < 0 || p < 0 || m.Parameters[p].Shape != ZeroSum && m.Parameters[p].Shape != Rising || m.Parameters[p].Size != len(m.Variables[v].Levels) {
						t.Fatalf("%s does not resolve", formula.Format(e))
					}
					used[e.Vector.ID] = true
					return false
				case *formula.Element:
					n := e.Vector.(*formula.Name)
					_, p := m.Name(n.ID)
					if p < 0 || m.Parameters[p].Shape != ZeroSum || e.At >= m.Parameters[p].Size {
						t.Fatalf("%s does not resolve", formula.Format(e))
					}
					used[n.ID] = true
					return false
				}
				return true
			})
		}
		used[l.Cutpoints] = true
	}
	for _, p := range m.Parameters {
		if !used[p.Name] {
			t.Fatalf("%s is in the model, but no law uses it", p.Name)
		}
	}
}
