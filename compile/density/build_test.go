package density

import (
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A sketch builds small models by hand.
type sketch struct {
	t testing.TB
	m *model.Model
}

func newSketch(t testing.TB, rows int) *sketch {
	return &sketch{t: t, m: &model.Model{Rows: model.Rows{Read: rows, Used: rows}}}
}

func (s *sketch) parse(text string) formula.Expr {
	s.t.Helper()
	e, err := formula.ParseExpr(text)
	if err != nil {
		s.t.Fatalf("%s: %v", text, err)
	}
	return e
}

func (s *sketch) exprs(texts ...string) []formula.Expr {
	s.t.Helper()
	var out []formula.Expr
	for _, text := range texts {
		out = append(out, s.parse(text))
	}
	return out
}

func (s *sketch) plate(name string, of []int32, levels ...string) int {
	s.m.Plates = append(s.m.Plates, &model.Plate{Name: name, Levels: levels, Of: of})
	return len(s.m.Plates) - 1
}

func (s *sketch) variable(id string, scale study.Scale, plate int, values ...float64) *model.Variable {
	v := &model.Variable{ID: id, Scale: scale, Plate: plate, Values: values}
	s.m.Variables = append(s.m.Variables, v)
	return v
}

// parameter adds a scalar with a prior.
func (s *sketch) parameter(name string, support catalog.Support, family string, arguments ...string) *model.Parameter {
	s.t.Helper()
	p := &model.Parameter{Name: name, Symbol: name, Size: 1, Support: support, Of: -1}
	p.Prior = model.Prior{Family: catalog.FamilyByName(family), Arguments: s.exprs(arguments...)}
	s.m.Parameters = append(s.m.Parameters, p)
	return p
}

// vector adds a parameter of several entries, with a prior if a family is named.
func (s *sketch) vector(name string, shape model.Shape, size int, family string, arguments ...string) *model.Parameter {
	s.t.Helper()
	p := &model.Parameter{Name: name, Symbol: name, Size: size, Shape: shape, Of: -1}
	if family != "" {
		p.Prior = model.Prior{Family: catalog.FamilyByName(family), Arguments: s.exprs(arguments...)}
	}
	s.m.Parameters = append(s.m.Parameters, p)
	return p
}

// byPlate adds a parameter that varies by a plate.
func (s *sketch) byPlate(name string, plate int, mean, sd string, centred bool) {
	n := len(s.m.Plates[plate].Levels)
	s.m.Parameters = append(s.m.Parameters, &model.Parameter{
		Name: name, Symbol: name, Size: n, Shape: model.ByPlate, Plate: plate, Mean: mean, SD: sd, Centred: centred, Of: -1,
	})
}

// law adds a law with predictors on the link scale; the other arguments
// follow in the family's order.
func (s *sketch) law(id, family string, predictors []string, arguments ...string) *model.Law {
	s.t.Helper()
	v, _ := s.m.Name(id)
	l := &model.Law{Variable: v, Family: catalog.FamilyByName(family), Plate: s.m.Variables[v].Plate}
	l.Predictors = s.exprs(predictors...)
	if l.Family.Predicted >= 0 && len(predictors) > 0 {
		l.Arguments = append(l.Arguments, nil)
	}
	l.Arguments = append(l.Arguments, s.exprs(arguments...)...)
	for _, p := range s.m.Parameters {
		for _, e := range append(l.Predictors, l.Arguments...) {
			if e == nil {
				continue
			}
			for _, name := range formula.Names(e) {
				if name == p.Name {
					p.Of = v
				}
			}
		}
	}
	s.m.Laws = append(s.m.Laws, l)
	return l
}
