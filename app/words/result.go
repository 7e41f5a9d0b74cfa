package words

import (
	"cmp"
	"fmt"
	"math"
	"strings"

	"arrowroot/app/fit"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/infer/summary"
)

// Caution stands wherever a conclusion does.
const Caution = "A causal conclusion is only as good as the arrows drawn and not drawn. Decisions about health, safety, medicine or policy need qualified statistical and domain review under local rules."

// Question names a contrast: "hedge on bees, 40 → 90 m/ha, these rows".
func Question(s *study.Study, q *study.Question) string {
	if q == nil {
		return "no question yet"
	}
	parts := []string{fmt.Sprintf("%s on %s", blank(q.Exposure), blank(q.Outcome))}
	if c := Change(s, q); c != "" {
		parts = append(parts, c)
	}
	parts = append(parts, cmp.Or(q.Over, study.TheseRows))
	return strings.Join(append(parts, Asides(s, q)...), ", ")
}

// Change is the two settings compared, with the unit.
func Change(s *study.Study, q *study.Question) string {
	unit := ""
	if v := s.Variable(q.Exposure); v != nil && v.Unit != "" {
		unit = " " + v.Unit
	}
	switch {
	case q.From != nil && q.To != nil:
		return setting(q.From) + " → " + setting(q.To) + unit
	case q.From != nil:
		return setting(q.From) + unit + " → as it is"
	case q.To != nil:
		return "as it is → " + setting(q.To) + unit
	case q.Shift != 0:
		sign := "+"
		if q.Shift < 0 {
			sign = ""
		}
		return sign + Given(q.Shift) + unit
	}
	return ""
}

func setting(s *study.Setting) string {
	if s.Word != "" {
		return s.Word
	}
	return Given(s.Number)
}

func blank(id string) string { return cmp.Or(id, "▢") }

// Rows says how many rows a model used and what lost the others.
func Rows(r model.Rows) string {
	if r.Used == r.Read {
		return "all " + Plural(r.Read, "row")
	}
	text := fmt.Sprintf("%s of %s", Whole(float64(r.Used)), Plural(r.Read, "row"))
	var lost []string
	if r.Filtered > 0 {
		lost = append(lost, Whole(float64(r.Filtered))+" outside the row filter")
	}
	for _, l := range r.Lost {
		lost = append(lost, fmt.Sprintf("%s lack %s", Whole(float64(l.Rows)), l.Variable))
	}
	if len(lost) > 0 {
		text += " (" + strings.Join(lost, ", ") + ")"
	}
	return text
}

// trust is the verdict with what it stands on.
func trust(t summary.Trust, s summary.Summary, sampling summary.Sampling) string {
	if len(t.Reasons) > 0 {
		return Upper(t.Verdict.String()) + ": " + strings.Join(t.Reasons, "; ")
	}
	if s.Constant {
		return Upper(t.Verdict.String()) + ": the same in every draw"
	}
	divergences := "no divergences"
	if sampling.Divergent > 0 {
		divergences = Plural(sampling.Divergent, "divergence")
	}
	return fmt.Sprintf("%s: R-hat %.2f, ESS %s, %s", Upper(t.Verdict.String()), s.RHat, Whole(math.Min(s.BulkESS, s.TailESS)), divergences)
}

// Effect says what a result answers to its question, a sentence a line: the
// headline, the numbers side by side, what they rest on.
func Effect(s *study.Study, r *fit.Result) []string {
	e, q := r.Effect, r.Question
	switch {
	case r.Unanswered != nil:
		return []string{r.Unanswered.Error()}
	case e == nil || q == nil:
		return []string{"Ask a question to see an effect: an exposure, an outcome and two values to compare."}
	}
	var lines []string
	head := e.Headline()
	switch {
	case e.Cut:
		lines = append(lines, "The run was stopped before the numbers could be set beside each other: none of them is the answer yet.")
	case e.None && e.LawsDisagree:
		lines = append(lines, fmt.Sprintf("No arrows lead from %s to %s%s, yet holding %s they go together (%s): an arrow or an unmeasured cause of both is missing, or a law is wrong.",
			q.Exposure, q.Outcome, around(q), List(e.Held), Value(q, e.Adjusted)))
	case e.None && head != nil:
		lines = append(lines, fmt.Sprintf("No arrows lead from %s to %s%s: this diagram says that %s changes nothing in it, whatever the data.", q.Exposure, q.Outcome, around(q), act(s, q)))
	case head != nil:
		lines = append(lines, headline(s, q, head))
	case e.LawsDisagree:
		lines = append(lines, fmt.Sprintf("Laws disagree: holding %s gives %s, the full model %s. Neither is the answer before one of the laws on the way from %s to %s is mended.",
			List(e.Held), Value(q, e.Adjusted), Value(q, e.Full), q.Exposure, q.Outcome))
	case !e.Identified && e.Crude != nil:
		lines = append(lines, fmt.Sprintf("%s The association is %s.", sentence(e.Refusal), Value(q, e.Crude)))
	case e.Refusal != "":
		lines = append(lines, sentence(e.Refusal))
	default:
		lines = append(lines, sentence("the computation cannot be trusted, and no number is given as the answer: "+strings.Join(unusableReasons(e), "; ")))
	}
	lines = append(lines, beside(q, e))
	for _, missing := range []struct {
		name   string
		reason string
	}{{"Crude", e.CrudeRefusal}, {"Held", e.AdjustedRefusal}, {"Full model", e.Refusal}} {
		if missing.reason != "" && !e.Cut && (head != nil || missing.name != "Full model") {
			lines = append(lines, missing.name+": "+strings.TrimSuffix(missing.reason, ".")+".")
		}
	}
	if !e.Cut {
		for _, note := range e.Notes {
			lines = append(lines, sentenceOf(s, note))
		}
	}
	if head != nil && !e.None {
		lines = append(lines, trust(head.Trust, head.Summary, r.Full.Sampling)+".")
	}
	return lines
}

// unusableReasons says why the number that would be the answer is not.
func unusableReasons(e *fit.Effect) []string {
	if e.Full != nil {
		return e.Full.Trust.Reasons
	}
	if e.Adjusted != nil {
		return e.Adjusted.Trust.Reasons
	}
	return nil
}

// sentenceOf is sentence, but for a name of the user's that it begins with:
// that stays as it is.
func sentenceOf(s *study.Study, text string) string {
	if first, rest, _ := strings.Cut(text, " "); s.Variable(first) != nil {
		return first + " " + strings.TrimSuffix(rest, ".") + "."
	}
	return sentence(text)
}

func sentence(s string) string {
	if s == "" {
		return s
	}
	s = Upper(s)
	if !strings.HasSuffix(s, ".") {
		s += "."
	}
	return s
}

// act names the intervention: "setting hedge 40 → 90 m/ha with flowers kept at
// 0.3".
func act(s *study.Study, q *study.Question) string {
	kept := ""
	if q.Effect == study.DirectEffect {
		var at []string
		for _, f := range q.Fixed {
			text := f.Variable + " kept at " + setting(&f.At)
			if v := s.Variable(f.Variable); v != nil && v.Unit != "" {
				text += " " + v.Unit
			}
			at = append(at, text)
		}
		kept = " with " + List(at)
	}
	if q.From == nil && q.To == nil {
		return "shifting " + q.Exposure + " by " + Change(s, q) + kept
	}
	return "setting " + q.Exposure + " " + Change(s, q) + kept
}

// around names what a direct effect's arrows must not pass.
func around(q *study.Question) string {
	if q.Effect != study.DirectEffect {
		return ""
	}
	var fixed []string
	for _, f := range q.Fixed {
		fixed = append(fixed, f.Variable)
	}
	return " around " + List(fixed)
}

func headline(s *study.Study, q *study.Question, n *fit.Number) string {
	name, unit := q.Outcome, ""
	if v := s.Variable(q.Outcome); v != nil {
		name, unit = v.Name(), v.Unit
	}
	what := "expected " + name
	if len(q.OutcomeLevels) > 0 {
		what = "the probability that " + name + " is " + strings.Join(q.OutcomeLevels, " or ")
	}
	doing := Upper(act(s, q))
	interval := fmt.Sprintf("(%s %s to %s)", Percent(n.Level), Number(n.Low), Number(n.High))
	over := ""
	if n.Words != "" {
		over = ", " + n.Words
	}
	if q.As == study.Ratio {
		return fmt.Sprintf("%s multiplies %s by %s %s%s.", doing, what, Number(n.Centre), interval, over)
	}
	if unit != "" {
		unit = " " + unit
	}
	return fmt.Sprintf("%s changes %s by %s%s %s%s.", doing, what, Number(n.Centre), unit, interval, over)
}

// Value is one number with its interval.
func Value(_ *study.Question, n *fit.Number) string {
	if n == nil {
		return "–"
	}
	return fmt.Sprintf("%s, %s %s to %s", Number(n.Centre), Percent(n.Level), Number(n.Low), Number(n.High))
}

func beside(q *study.Question, e *fit.Effect) string {
	parts := []string{"Crude " + Value(q, e.Crude)}
	held := "holding " + List(e.Held)
	if e.HeldProposed {
		held += " (proposed)"
	}
	if !e.HeldValid {
		held += " (not to be read as an effect)"
	}
	parts = append(parts, held+" "+Value(q, e.Adjusted))
	if e.Full != nil {
		parts = append(parts, "full model "+Value(q, e.Full))
	} else {
		parts = append(parts, "full model: none")
	}
	return strings.Join(parts, " · ")
}
