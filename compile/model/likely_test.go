package model

import (
	"testing"

	"arrowroot/compile/study"
)

// A heading that adds a unit to a variable's name is offered before one that
// is merely spelled alike; two of them are no answer.
func TestLikelyColumn(t *testing.T) {
	columns := []string{"field", "rain_mm", "Yield (t/ha)", "soil_n", "soil_w", "rainy", "tmep"}
	for id, want := range map[string]string{"yield": "Yield (t/ha)", "rain": "rain_mm", "soil": "", "temp": "tmep", "skill": ""} {
		if got := likely(&study.Variable{ID: id}, columns); got != want {
			t.Errorf("%s: %q, want %q", id, got, want)
		}
	}
}
