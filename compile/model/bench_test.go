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

// BenchmarkRows builds a small model of a large table.
func BenchmarkRows(b *testing.B) {
	const rows = 1_000_000
	tab := newTable("t", rows)
	var variables []*study.Variable
	for i := range 5 {
		v := &study.Variable{ID: fmt.Sprintf("v%d", i), Scale: study.Real}
		v.Column = v.ID
		values := make([]float64, rows)
		for r := range values {
			values[r] = float64(r * (i + 3) % 101)
		}
		numbers(tab, v.ID, values...)
		variables = append(variables, v)
	}
	farm := make([]int32, rows)
	names := make([]string, 100)
	for i := range farm {
		farm[i] = int32(i % 100)
	}
	for i := range names {
		names[i] = fmt.Sprint("farm ", i)
	}
	words(tab, "farm", farm, names...)
	s := sheet(variables, "v0 -> v1; v0 -> v4; v1 -> v4; v2 -> v4; v3 -> v4", map[string]*study.Law{"v4": {VariesBy: []string{"farm"}}})
	for b.Loop() {
		if m, problems := Build(s, "R", study.Question{Exposure: "v0", Outcome: "v4"}, tab, Full); m == nil {
			b.Fatal(messages(problems))
		}
	}
}
