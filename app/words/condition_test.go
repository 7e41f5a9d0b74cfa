package words

import (
	"testing"

	"arrowroot/compile/study"
)

func TestQuestionsSayWhatTheyAreAbout(t *testing.T) {
	s := study.New()
	s.Variables = []*study.Variable{{ID: "hedge", Unit: "m/ha"}, {ID: "bees"}, {ID: "soil"}, {ID: "temp", Unit: "°C"}, {ID: "flowers"}}
	low, high := 12.5, 20.0
	q := &study.Question{Exposure: "hedge", Outcome: "bees", From: &study.Setting{Number: 40}, To: &study.Setting{Number: 90}}
	for _, c := range []struct {
		change func(q *study.Question)
		want   string
	}{
		{func(*study.Question) {}, "hedge on bees, 40 → 90 m/ha, these rows"},
		{func(q *study.Question) {
			q.Where = []study.Condition{{Variable: "soil", Words: []string{"clay", "loam"}}, {Variable: "temp", Low: &low, High: &high}}
		}, "hedge on bees, 40 → 90 m/ha, these rows, where soil is clay or loam and temp is from 12.5 to 20 °C"},
		{func(q *study.Question) { q.Where = []study.Condition{{Variable: "temp", Low: &low}} }, "hedge on bees, 40 → 90 m/ha, these rows, where temp is at least 12.5 °C"},
		{func(q *study.Question) { q.Where = []study.Condition{{Variable: "temp", Low: &low, High: &low}} }, "hedge on bees, 40 → 90 m/ha, these rows, where temp is 12.5 °C"},
		{func(q *study.Question) {
			q.Effect, q.Fixed = study.DirectEffect, []study.Fix{{Variable: "flowers", At: study.Setting{Number: 0.3}}}
			q.Groups, q.Weigh, q.Over = study.NewGroups, study.ByGroups, study.PopulationAlike
		}, "hedge on bees, 40 → 90 m/ha, a population like these, fixing flowers at 0.3, new groups, every group counting the same"},
	} {
		one := *q
		c.change(&one)
		if got := Question(s, &one); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
}
