package effect

import (
	"slices"
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A sketch builds small models by hand.
type sketch struct {
	t    *testing.T
	m    *model.Model
	draw []float64
}

func newSketch(t *testing.T, rows int) *sketch {
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

func (s *sketch) plate(name string, levels int, of []int32) {
	p := &model.Plate{Name: name, Levels: make([]string, levels), Of: of}
	s.m.Plates = append(s.m.Plates, p)
}

func (s *sketch) variable(id string, scale study.Scale, values []float64) *model.Variable {
	v := &model.Variable{ID: id, Scale: scale, Plate: -1, Values: values, Low: slices.Min(values), High: slices.Max(values)}
	s.m.Variables = append(s.m.Variables, v)
	return v
}

// parameter adds a scalar with its value in the draw.
func (s *sketch) parameter(name string, value float64) {
	s.m.Parameters = append(s.m.Parameters, &model.Parameter{Name: name, Size: 1})
	s.draw = append(s.draw, value)
}

func (s *sketch) vector(name string, shape model.Shape, values ...float64) *model.Parameter {
	p := &model.Parameter{Name: name, Size: len(values), Shape: shape}
	s.m.Parameters = append(s.m.Parameters, p)
	s.draw = append(s.draw, values...)
	return p
}

// law adds a law: one predictor on the link scale, other arguments as text.
func (s *sketch) law(id, family, predictor string, arguments ...string) *model.Law {
	s.t.Helper()
	v, _ := s.m.Name(id)
	l := &model.Law{Variable: v, Family: catalog.FamilyByName(family), Plate: s.m.Variables[v].Plate}
	l.Predictors = []formula.Expr{s.parse(predictor)}
	l.Arguments = []formula.Expr{nil}
	for _, a := range arguments {
		l.Arguments = append(l.Arguments, s.parse(a))
	}
	seen := make(map[int]bool)
	for _, name := range formula.Names(l.Predictors[0]) {
		if d, _ := s.m.Name(name); d >= 0 && !seen[d] {
			seen[d] = true
			l.Drawn = append(l.Drawn, d)
		}
	}
	s.m.Laws = append(s.m.Laws, l)
	return l
}

// draws repeats the one draw.
func (s *sketch) draws(n int) [][]float64 {
	out := make([][]float64, n)
	for i := range out {
		out[i] = s.draw
	}
	return out
}

func ask(exposure, outcome string, from, to float64) study.Question {
	return study.Question{Exposure: exposure, Outcome: outcome, From: &study.Setting{Number: from}, To: &study.Setting{Number: to}}
}

func mean(values []float64) float64 {
	sum := 0.0
	for _, v := range values {
		sum += v
	}
	return sum / float64(len(values))
}

// spreadOut is n values evenly over an interval.
func spreadOut(n int, low, high float64) []float64 {
	out := make([]float64, n)
	for i := range out {
		out[i] = low + (high-low)*(float64(i)+0.5)/float64(n)
	}
	return out
}
