package words

import (
	"math"
	"strings"
	"testing"

	"arrowroot/app/fit"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/infer/summary"
)

func TestNumbersForPeople(t *testing.T) {
	for _, c := range []struct {
		got, want string
	}{
		{Number(1.17352), "1.17"}, {Number(-0.045714), "−0.0457"}, {Number(0), "0"}, {Number(1234.5), "1234"}, {Number(99.96), "100.0"},
		{Number(1e-12), "1e−12"}, {Number(math.NaN()), "–"}, {Number(math.Inf(-1)), "−Inf"},
		{Percent(0.9), "90 %"}, {Percent(0.975), "97.5 %"},
		{Whole(1234567.2), "1,234,567"}, {Whole(-1234), "−1,234"}, {Whole(12), "12"},
		{List(nil), "nothing"}, {List([]string{"a"}), "a"}, {List([]string{"a", "b", "c"}), "a, b and c"},
		{Rows(model.Rows{Read: 252, Used: 252}), "all 252 rows"},
		{Rows(model.Rows{Read: 252, Used: 237, Lost: []model.Loss{{Variable: "bees", Rows: 15}}}), "237 of 252 rows (15 lack bees)"},
		{Rows(model.Rows{Read: 252, Used: 190, Filtered: 47, Lost: []model.Loss{{Variable: "bees", Rows: 15}}}), "190 of 252 rows (47 outside the row filter, 15 lack bees)"},
	} {
		if c.got != c.want {
			t.Errorf("%q, want %q", c.got, c.want)
		}
	}
}

// A controlled direct effect says what is kept, and around what its arrows lead.
func TestDirectEffectsInWords(t *testing.T) {
	s := study.New()
	s.Variables = []*study.Variable{{ID: "hedge", Unit: "m/ha"}, {ID: "bees"}, {ID: "temp", Unit: "°C"}, {ID: "soil"}}
	q := &study.Question{Exposure: "hedge", Outcome: "bees", From: &study.Setting{Number: 40}, To: &study.Setting{Number: 90}, Effect: study.DirectEffect,
		Fixed: []study.Fix{{Variable: "temp", At: study.Setting{Number: 18}}, {Variable: "soil", At: study.Setting{Word: "clay"}}}}
	number := &fit.Number{Summary: summary.Summary{Centre: 1.42, Low: 1.2, High: 1.7, Level: 0.9, RHat: 1, BulkESS: 900, TailESS: 800}}
	for want, e := range map[string]*fit.Effect{
		"Setting hedge 40 → 90 m/ha with temp kept at 18 °C and soil kept at clay changes expected bees by 1.42 (90 % 1.20 to 1.70).":                {Identified: true, Full: number},
		"No arrows lead from hedge to bees around temp and soil: this diagram says that setting hedge 40 → 90 m/ha with temp kept at 18 °C and soil": {Identified: true, None: true, Full: number},
	} {
		if got := Effect(s, &fit.Result{Question: q, Full: &fit.Fitted{}, Effect: e})[0]; !strings.HasPrefix(got, want) {
			t.Errorf("%s\nwant %s", got, want)
		}
	}
}

// Answers that are no number say why, and no sentence holds a NaN.
func TestAnswersWithoutANumber(t *testing.T) {
	s := study.New()
	q := &study.Question{Exposure: "hedge", Outcome: "bees", From: &study.Setting{Number: 40}, To: &study.Setting{Number: 90}}
	number := &fit.Number{Summary: summary.Summary{Centre: 1.42, Low: 1.2, High: 1.7, Level: 0.9, RHat: 1, BulkESS: 900, TailESS: 800}}
	same := &fit.Number{Summary: summary.Summary{Constant: true, Level: 0.9, RHat: math.NaN(), BulkESS: math.NaN(), TailESS: math.NaN()}}
	for _, c := range []struct {
		name   string
		result *fit.Result
		starts string
		says   string
	}{
		{"a question that lacks something", &fit.Result{Unanswered: &fit.Blocked{Problems: []model.Problem{{Message: "ähre has no values to compare.", Stops: true}}}}, "ähre has no values", ""},
		{"no effect drawn", &fit.Result{Effect: &fit.Effect{None: true, Identified: true, Crude: number, Adjusted: number, Full: same}},
			"No arrows lead from hedge to bees: this diagram says that setting hedge 40 → 90 changes nothing in it", "Crude 1.42"},
		{"stopped", &fit.Result{Effect: &fit.Effect{Cut: true, Identified: true, Full: number}}, "The run was stopped", "full model 1.42"},
		{"not identified", &fit.Result{Effect: &fit.Effect{Crude: number, Adjusted: number, Refusal: "not identified: attitude was not measured. Measuring it would do."}},
			"Not identified: attitude was not measured. Measuring it would do. The association is 1.42, 90 % 1.20 to 1.70.", ""},
		{"no crude number", &fit.Result{Effect: &fit.Effect{Identified: true, Full: number, CrudeRefusal: "margin is computed from yield and rain"}},
			"Setting hedge 40 → 90 changes expected bees by 1.42", "Crude: margin is computed from yield and rain."},
		{"a constant", &fit.Result{Effect: &fit.Effect{Identified: true, Full: same}}, "Setting hedge", "the same in every draw"},
	} {
		c.result.Question, c.result.Full = q, &fit.Fitted{}
		text := strings.Join(Effect(s, c.result), "\n")
		if !strings.HasPrefix(text, c.starts) || !strings.Contains(text, c.says) || strings.Contains(text, "NaN") {
			t.Errorf("%s:\n%s", c.name, text)
		}
	}
}

// A name of the user's that a note begins with keeps its small letter.
func TestNotesKeepNames(t *testing.T) {
	s := &study.Study{Variables: []*study.Variable{{ID: "dose"}}}
	for in, want := range map[string]string{
		"dose 90 lies far beyond what was seen": "dose 90 lies far beyond what was seen.",
		"doses were rounded.":                   "Doses were rounded.",
	} {
		if got := sentenceOf(s, in); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}
