package model

import (
	"fmt"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// BenchmarkProblems is what happens at every stroke while a large diagram is
// drawn: 28 variables, 99 arrows, 1,000 rows.
func BenchmarkProblems(b *testing.B) {
	const n = 28
	tab := newTable("t", 1000)
	var variables []*study.Variable
	var arrows []string
	for i := range n {
		v := &study.Variable{ID: fmt.Sprintf("v%d", i), Scale: study.Real}
		v.Column = v.ID
		values := make([]float64, 1000)
		for r := range values {
			values[r] = float64(r * (i + 3) % 101)
		}
		numbers(tab, v.ID, values...)
		variables = append(variables, v)
		for j := i - 4; j < i; j++ {
			if j >= 0 && len(arrows) < 99 {
				arrows = append(arrows, fmt.Sprintf("v%d -> v%d", j, i))
			}
		}
	}
	s := sheet(variables, strings.Join(arrows, ";"), nil)
	q := study.Question{Exposure: "v0", Outcome: "v27"}
	for b.Loop() {
		if problems := Problems(s, "R", q, tab); len(problems) > 0 {
			b.Fatal(messages(problems))
		}
	}
}
