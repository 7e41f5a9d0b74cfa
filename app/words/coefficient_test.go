package words

import (
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// TestCoefficients labels the table of the scholarship study: of its rows only
// the award's in the law of the mark is what the question asks for, and the
// income's there is not the total effect of income (REQUIREMENTS row 40: .20
// against .40).
func TestCoefficients(t *testing.T) {
	folder := filepath.Join("..", "..", "testdata", "studies")
	s, err := study.Load(filepath.Join(folder, "scholarship.arrowroot"))
	if err != nil {
		t.Fatal(err)
	}
	data, err := table.ReadFile(filepath.Join(folder, s.Data[0].File))
	if err != nil {
		t.Fatal(err)
	}
	m, problems := model.Build(s, s.Rivals[0].Name, *s.Questions[0], data, model.Full)
	if m == nil {
		t.Fatal(problems)
	}
	labels := Coefficients(s, m)
	x, y := s.Questions[0].Exposure, s.Questions[0].Outcome
	shown := 0
	for i, p := range m.Parameters {
		c, labelled := labels[i]
		t.Logf("%s: %q, control %v", p.Name, c.Words, c.Control)
		isCoefficient := strings.HasPrefix(p.Name, "beta_") || strings.HasPrefix(p.Name, "step_")
		if labelled != isCoefficient {
			t.Errorf("%s is labelled %q", p.Name, c.Words)
		}
		if labelled && !c.Control {
			shown++
			if p.Name != "beta_"+x+"_"+y {
				t.Errorf("%s is no control", p.Name)
			}
		}
		if strings.HasSuffix(p.Name, "_income_"+y) && strings.HasPrefix(c.Words, "total effect") {
			t.Errorf("%s is said to be a %s", p.Name, c.Words)
		}
	}
	if shown != 1 {
		t.Errorf("%d coefficients are shown", shown)
	}
}
