package model

import (
	"testing"

	"arrowroot/compile/study"
)

// Messages about typed text are also read where the text is not shown: each
// names the variable and the place.
func TestMessagesNameVariableAndPlace(t *testing.T) {
	for _, c := range []struct {
		name  string
		study func(s *study.Study)
		code  string
		want  string
	}{
		{"formula", func(s *study.Study) { law(s, "bees").Formula = "log rate = (alpha_bees" }, "formula",
			"bees, formula: this bracket is not closed"},
		{"power", func(s *study.Study) { law(s, "bees").Formula = "log rate = alpha_bees + g * (temp - 18)**2" }, "formula",
			"bees, formula: a power is written with ^, as in x^2"},
		{"family", func(s *study.Study) { law(s, "bees").Family = "poison" }, "unknown-family",
			"bees, distribution: there is no distribution *poison*; did you mean *Poisson*?"},
		{"argument", func(s *study.Study) {
			law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "2 +"}}
		}, "formula", "hedge, sd: a name or a number is missing after “+”"},
		{"prior that does not parse", func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "normal with mean 0 sd 1" }, "formula",
			"bees, prior of beta_hedge_bees: a sign is missing before “sd”; a product is written with *"},
		{"prior", func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "spiky with mean 0" }, "prior",
			"bees, prior of beta_hedge_bees: there is no distribution *spiky*"},
		{"computed", func(s *study.Study) { compute(s, "care", "hedge +") }, "formula",
			"care, computed: a name or a number is missing after “+”"},
		{"unknown name in computed", func(s *study.Study) { compute(s, "care", "2 * hedges") }, "unknown-name",
			"care, computed: care cannot be computed from *hedges*: there is no other variable of this name; did you mean *hedge*?"},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := hedgerows()
			c.study(s)
			p := find(Problems(s, "R", beesQuestion(), traps()), c.code)
			if p == nil || p.Message != c.want {
				t.Fatalf("says %+v, not %q", p, c.want)
			}
			if len(p.Repairs) == 0 {
				t.Error("offers no repair")
			}
		})
	}
}

// compute adds a computed variable that depends on hedge and acts on flowers.
func compute(s *study.Study, id, text string) {
	s.Variables = append(s.Variables, &study.Variable{ID: id, Scale: study.Real, Computed: text})
	d := s.Rivals[0].Diagram
	d.Nodes = append(d.Nodes, &study.Node{Variable: id})
	d.Arrows = append(d.Arrows, &study.Arrow{From: "hedge", To: id}, &study.Arrow{From: id, To: "flowers"})
}
