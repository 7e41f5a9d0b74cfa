package words

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/mistake"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A Coefficient is what one parameter of a fitted model may be read as.
type Coefficient struct {
	Words   string // "total effect of hedge on bees"
	Control bool   // it is not the exposure's in the law of the outcome, so that tables leave it out at first
}

// Coefficients labels the parameters that are coefficients of variables, by
// their place in the model's parameters; baselines, spreads and the like have
// no label. A study whose rival has no graph gets none.
func Coefficients(s *study.Study, m *model.Model) map[int]Coefficient {
	g, err := s.Graph(m.Rival)
	if err != nil {
		return nil
	}
	at := func(v int) int { return g.Index(m.Variables[v].ID) }
	labels := make(map[int]Coefficient)
	for _, l := range m.Laws {
		child := at(l.Variable)
		var given []int
		for _, v := range l.Drawn {
			given = append(given, at(v))
		}
		for _, c := range l.Carried {
			given = append(given, at(c.Variable))
		}
		if child < 0 || slices.Contains(given, -1) {
			continue
		}
		read := make(map[int]mistake.Coefficient) // by variable of the model
		of := func(v int) mistake.Coefficient {
			r, known := read[v]
			if !known {
				r = mistake.ReadCoefficient(g, g.Index(m.Exposure), g.Index(m.Outcome), at(v), child, given)
				read[v] = r
			}
			return r
		}
		label := func(parameter int, c Coefficient) {
			labels[parameter] = c
			if mean := m.Parameters[parameter].Mean; mean != "" {
				if _, i := m.Name(mean); i >= 0 {
					labels[i] = c
				}
			}
		}
		for _, t := range l.Terms {
			for _, p := range t.Parameters {
				if slices.Contains(t.Inner, p) { // where it acts, and not how much
					continue
				}
				switch t.Kind {
				case model.Slope, model.Steps, model.Log, model.OneWay, model.Threshold, model.Saturating:
					r := of(t.Variable)
					label(p, Coefficient{r.Words, r.Control})
				case model.Product:
					label(p, Coefficient{fmt.Sprintf("how %s and %s act together on %s, no effect by itself", m.Variables[t.Variable].ID, m.Variables[t.With].ID, m.Variables[l.Variable].ID), true})
				case model.GroupMean:
					label(p, Coefficient{fmt.Sprintf("how groups differ in %s, no effect", m.Variables[t.Variable].ID), true})
				}
			}
		}
		if len(l.Terms) > 0 {
			continue
		}
		for i, p := range m.Parameters { // of a typed predictor, by their names
			if v := parentNamed(m, l, p); p.Of == l.Variable && v >= 0 {
				r := of(v)
				labels[i] = Coefficient{r.Words, r.Control}
			}
		}
	}
	return labels
}

// parentNamed finds the variable whose slope or steps a parameter of a typed
// predictor is, by the canonical name; -1 if it is neither.
func parentNamed(m *model.Model, l *model.Law, p *model.Parameter) int {
	parents := append([]int(nil), l.Drawn...)
	for _, c := range l.Carried {
		parents = append(parents, c.Variable)
	}
	for _, v := range parents {
		for _, stem := range [2]string{"beta_", "step_"} {
			name := stem + m.Variables[v].ID + "_" + m.Variables[l.Variable].ID
			if p.Name == name || strings.HasPrefix(p.Name, name+"_") {
				return v
			}
		}
	}
	return -1
}
