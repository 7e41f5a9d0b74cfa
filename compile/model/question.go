package model

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Mistakes of a question leave the rival's own fit alone: their codes begin
// with "question-", and they do not stop. Only the effect has to be refused.
const questionCode = "question-"

// Apart separates the problems of the fit from those that keep only the
// question from an answer, though the rival may be fitted.
func Apart(problems []Problem) (fit, question []Problem) {
	for _, p := range problems {
		if strings.HasPrefix(p.Code, questionCode) {
			question = append(question, p)
		} else {
			fit = append(fit, p)
		}
	}
	return fit, question
}

// HalfAsked says what a question that is still being asked lacks: while it is
// typed that is no mistake, but there is no answer either.
func HalfAsked(q study.Question) []Problem {
	for _, end := range []struct{ role, id string }{{"exposure", q.Exposure}, {"outcome", q.Outcome}} {
		if end.id == "" {
			return []Problem{{Code: questionCode + "ends", Place: "question", Message: fmt.Sprintf("The question has no %s yet: say which variable it is.", end.role)}}
		}
	}
	return nil
}

// asks reports a mistake of the question.
func (b *builder) asks(code, variable, message string, repairs ...Repair) {
	b.report(Problem{Code: questionCode + code, Variable: variable, Place: "question", Message: message, Repairs: repairs})
}

// reask is the repair that changes the question; nothing where the study does
// not hold it.
func (b *builder) reask(label string, change func(q *study.Question)) []Repair {
	at := b.questionAt()
	if at < 0 {
		return nil
	}
	to := b.question
	change(&to)
	return []Repair{{Label: label, Edit: study.ChangeQuestion{At: at, To: to}}}
}

// whole reports whether the question names both of its ends; what is only
// half asked yet is no mistake.
func (b *builder) whole() bool { return b.question.Exposure != "" && b.question.Outcome != "" }

// ends looks for the question's variables on the sheet.
func (b *builder) ends(string) {
	if b.kind != Full || !b.whole() {
		return
	}
	q := b.question
	for _, end := range []struct{ what, id string }{{"exposure", q.Exposure}, {"outcome", q.Outcome}} {
		b.end(end.what, end.id)
	}
	if q.Exposure == q.Outcome {
		b.asks("same", q.Exposure, fmt.Sprintf("%s is both exposure and outcome of the question.", q.Exposure))
	}
	for _, id := range q.Held {
		if id != q.Exposure && id != q.Outcome && !b.study.HoldsPlate(id) {
			b.end("held", id)
		}
	}
	for _, f := range q.Fixed {
		b.end("fixed", f.Variable)
	}
	for _, c := range q.Where {
		b.asked(c)
	}
}

// end looks at one variable that a question names.
func (b *builder) end(what, id string) {
	role := fmt.Sprintf("%s is the %s of the question", id, what)
	var repairs []Repair
	if what == "held" {
		role = id + " is held"
		repairs = b.reask("Do not hold "+id, func(q *study.Question) {
			q.Held = slices.DeleteFunc(append([]string{}, q.Held...), func(h string) bool { return h == id })
		})
	}
	if what == "fixed" {
		role = id + " is fixed"
		repairs = b.reask("Do not fix "+id, func(q *study.Question) {
			q.Fixed = slices.DeleteFunc(slices.Clone(q.Fixed), func(f study.Fix) bool { return f.Variable == id })
		})
	}
	switch v := b.variable(id); {
	case v == nil:
		message := role + ", but the study has no such variable"
		if near := nearest(id, b.graph.Names); near != "" {
			message += fmt.Sprintf("; did you mean %s?", near)
			b.asks("unknown", id, message, append(b.reask("Ask for "+near, func(q *study.Question) {
				for _, end := range []*string{&q.Exposure, &q.Outcome} {
					if *end == id {
						*end = near
					}
				}
				q.Held = append([]string(nil), q.Held...)
				for i, h := range q.Held {
					if h == id {
						q.Held[i] = near
					}
				}
			}), repairs...)...)
			return
		}
		b.asks("unknown", id, message+".", repairs...)
	case !b.onSheet(id):
		put := Repair{Label: "Put " + id + " on the sheet", Edit: study.AddNode{Rival: b.rival.Name, Variable: id}}
		b.asks("sheet", id, fmt.Sprintf("%s, but does not stand on the sheet of %s.", role, b.rival.Name), append([]Repair{put}, repairs...)...)
	case v.Unmeasured && what == "held":
		b.asks("unmeasured", id, fmt.Sprintf("%s, but was not measured: only what was measured can be held.", role), repairs...)
	case v.Unmeasured:
		b.asks("unmeasured", id, fmt.Sprintf("%s, but was not measured.", role), repairs...)
	}
}

// compared looks at the values that the question compares and at how.
func (b *builder) compared(string) {
	b.subset()
	if b.kind != Full || !b.whole() || b.table == nil {
		return
	}
	q := b.question
	x, _ := b.model.Name(q.Exposure)
	y, _ := b.model.Name(q.Outcome)
	switch {
	case x >= 0 && b.model.Variables[x].Values != nil:
		b.exposureValues(b.model.Variables[x])
	case q.From == nil && q.To == nil && q.Shift == 0: // no law reads it
		b.asks("values", q.Exposure, fmt.Sprintf("The question names no values of %s: say two values to compare.", q.Exposure))
	}
	if y >= 0 && b.model.Variables[y].Values != nil {
		b.outcomeAsked(b.model.Variables[y])
	}
	b.fixedAsked()
	b.groupsAsked()
}

func (b *builder) exposureValues(v *Variable) {
	q := b.question
	switch {
	case q.From == nil && q.To == nil && q.Shift != 0:
		b.shifted(v)
		return
	case q.From == nil && q.To == nil:
		b.asks("values", v.ID, fmt.Sprintf("The question names no values of %s: say two values to compare.", v.ID), b.seenValues(v)...)
		return
	case q.From == nil || q.To == nil:
		have, want := "from", "to"
		if q.From == nil {
			have, want = want, have
		}
		b.asks("values", v.ID, fmt.Sprintf("The question names %s, but not %s: say both values of %s to compare.", have, want, v.ID), b.seenValues(v)...)
		return
	}
	var at [2]float64
	for i, s := range []*study.Setting{q.From, q.To} {
		x, ok := b.setting(v, s, b.seenValues(v))
		if !ok {
			return
		}
		at[i] = x
	}
	if at[0] == at[1] {
		b.asks("values", v.ID, fmt.Sprintf("The question compares %s %s with itself.", v.ID, settingWords(v, at[0])), b.seenValues(v)...)
		return
	}
	for _, x := range at {
		b.overlap(v, x, b.seenValues(v))
	}
}

// setting reads one value of a variable that is set and reports it where it
// cannot be.
func (b *builder) setting(v *Variable, s *study.Setting, repairs []Repair) (float64, bool) {
	impossible := func(format string, args ...any) (float64, bool) {
		b.asks("value", v.ID, fmt.Sprintf(format, args...), repairs...)
		return 0, false
	}
	levelled := v.Scale == study.Category || v.Scale == study.Ordered
	switch {
	case s.Word != "" && len(v.Levels) > 0:
		at := slices.Index(v.Levels, s.Word)
		if at < 0 {
			return impossible("%s has no level “%s”; it has %s.", v.ID, s.Word, list(quoted(v.Levels)))
		}
		return float64(at), true
	case s.Word != "":
		return impossible("“%s” is no value of %s, which is %s.", s.Word, v.ID, a(v.Scale))
	case levelled:
		return impossible("%s has levels: say one of %s, not %s.", v.ID, list(quoted(v.Levels)), short(s.Number))
	}
	x := s.Number
	if reason := b.impossible(v, x); reason != "" {
		return impossible("%s cannot be %s: %s.", v.ID, short(x), reason)
	}
	return x, true
}

// impossible says why a number is no value of a variable; "" if it may be one.
func (b *builder) impossible(v *Variable, x float64) string {
	low, _ := extent(v.Values)
	switch v.Scale {
	case study.Binary:
		if x != 0 && x != 1 {
			return "it is binary, 0 or 1"
		}
	case study.Positive:
		if x < 0 || x == 0 && low > 0 && (!v.RangeGiven || v.Low > 0) {
			return "it is positive"
		}
	case study.Proportion:
		if x < 0 || x > 1 {
			if u := b.variable(v.ID); u.Divide > 1 {
				return fmt.Sprintf("it is a proportion, between 0 and 1 (its column is divided by %s)", short(u.Divide))
			}
			return "it is a proportion, between 0 and 1"
		}
	case study.Count:
		if x < 0 || x != math.Trunc(x) {
			return "it is a count"
		}
	}
	return b.formNeeds(v, x)
}

// shifted looks at a question that moves every row.
func (b *builder) shifted(v *Variable) {
	by := short(b.question.Shift)
	if len(v.Levels) > 0 {
		b.asks("shift", v.ID, fmt.Sprintf("%s has levels and cannot be shifted by %s: say two of %s to compare.", v.ID, by, list(quoted(v.Levels))), b.seenValues(v)...)
		return
	}
	out, first := 0, -1
	beyond := 0
	low, high := extent(v.Values)
	for i, x := range v.Values {
		x += b.question.Shift
		if b.impossible(v, x) != "" {
			if out++; first < 0 {
				first = i
			}
		}
		if x < low || x > high {
			beyond++
		}
	}
	n := len(v.Values)
	switch {
	case out > 0:
		x := v.Values[first]
		b.asks("shift", v.ID, fmt.Sprintf("A shift by %s takes %s where it cannot be in %d of %d rows, in row %d from %s to %s: %s.",
			by, v.ID, out, n, b.rowOf(v, first)+1, short(x), short(x+b.question.Shift), b.impossible(v, x+b.question.Shift)), b.seenValues(v)...)
	case 2*beyond > n:
		b.report(Problem{Code: "overlap", Variable: v.ID, Place: "question",
			Message: fmt.Sprintf("A shift by %s takes %s beyond the %s that was seen in %d %% of the rows: the effect rests on the form of the laws there.", by, v.ID, span(low, high), percent(beyond, n))})
	}
}

// farOutside is the part of the range seen by which a value may lie beyond it
// without a word. Common practice, no source.
const farOutside = 0.25

// overlap notes a value at which there are no data.
func (b *builder) overlap(v *Variable, x float64, repairs []Repair) {
	low, high := extent(v.Values)
	note := func(message string) {
		b.report(Problem{Code: "overlap", Variable: v.ID, Place: "question", Message: message, Repairs: repairs})
	}
	if len(v.Levels) > 0 {
		if !slices.Contains(v.Values, x) {
			note(fmt.Sprintf("No used row has %s %s: what is said of it rests on the priors alone.", v.ID, settingWords(v, x)))
		}
		return
	}
	margin := farOutside * (high - low)
	if low == high || x >= low-margin && x <= high+margin { // of an exposure that never moves, examine speaks
		return
	}
	near := 0
	for _, own := range v.Values {
		if math.Abs(own-x) <= margin {
			near++
		}
	}
	note(fmt.Sprintf("%s %s lies far beyond the %s that was seen, with %d %% of the rows near it: no overlap, so the effect rests on the form of the laws there.", v.ID, short(x), span(low, high), percent(near, len(v.Values))))
}

func percent(part, of int) int { return int(math.Round(100 * float64(part) / float64(max(of, 1)))) }

func settingWords(v *Variable, x float64) string {
	if i := int(x); len(v.Levels) > 0 && i >= 0 && i < len(v.Levels) && (v.Scale != study.Binary || !zeroOne(v.Levels)) {
		return "“" + v.Levels[i] + "”"
	}
	return short(x)
}

// seenValues offers two values that the data hold: the quartiles of a number,
// the two of a binary variable, the outermost levels of others.
func (b *builder) seenValues(v *Variable) []Repair {
	low, high := extent(v.Values)
	set := func(x float64) *study.Setting {
		if len(v.Levels) > 0 && !(v.Scale == study.Binary && zeroOne(v.Levels)) {
			return &study.Setting{Word: v.Levels[int(x)]}
		}
		return &study.Setting{Number: x}
	}
	label := "Compare %s with %s"
	if len(v.Levels) == 0 {
		label = "Compare the quartiles, %s and %s"
		round := func(x float64) float64 { return roundTo(x, high-low) }
		if v.Scale == study.Count {
			round = math.Round
		}
		q := table.Quantiles(v.Values, 2) // at 1/4 and 3/4
		if from, to := round(q[0]), round(q[1]); from < to {
			low, high = from, to
		}
	}
	if !(low < high) {
		return nil
	}
	return b.reask(fmt.Sprintf(label, settingWords(v, low), settingWords(v, high)), func(q *study.Question) {
		q.From, q.To, q.Shift = set(low), set(high), 0
	})
}

// outcomeAsked looks at the outcome's levels and at ratios.
func (b *builder) outcomeAsked(v *Variable) {
	q := b.question
	levelled := v.Scale == study.Category || v.Scale == study.Ordered
	switch {
	case len(q.OutcomeLevels) == 0 && levelled:
		var repairs []Repair
		for _, l := range first(v.Levels, 4) {
			repairs = append(repairs, b.reask("Ask for “"+l+"”", func(q *study.Question) { q.OutcomeLevels = []string{l} })...)
		}
		b.asks("levels", v.ID, fmt.Sprintf("%s is %s: say the probability of which of its levels is asked for, of %s.", v.ID, a(v.Scale), list(quoted(v.Levels))), repairs...)
		return
	case len(q.OutcomeLevels) > 0 && len(v.Levels) == 0:
		b.asks("levels", v.ID, fmt.Sprintf("%s is %s and has no levels to ask for, such as “%s”.", v.ID, a(v.Scale), q.OutcomeLevels[0]),
			b.reask("Ask for its expectation", func(q *study.Question) { q.OutcomeLevels = nil })...)
		return
	}
	for _, l := range q.OutcomeLevels {
		if !slices.Contains(v.Levels, l) {
			b.asks("levels", v.ID, fmt.Sprintf("%s has no level “%s”; it has %s.", v.ID, l, list(quoted(v.Levels))),
				b.reask("Do not ask for “"+l+"”", func(q *study.Question) {
					q.OutcomeLevels = slices.DeleteFunc(append([]string(nil), q.OutcomeLevels...), func(have string) bool { return have == l })
				})...)
			return
		}
	}
	if len(q.OutcomeLevels) > 0 && subset(v.Levels, q.OutcomeLevels) {
		b.asks("levels", v.ID, fmt.Sprintf("The question asks for every level of %s, whose probability is always 1.", v.ID))
	}
	b.ratio(v)
}

// ratio warns of a ratio of averages that may be 0 or below. The effect itself
// is refused where the expected outcome is not clear of 0, which only the fit
// can tell.
func (b *builder) ratio(v *Variable) {
	d := b.draftOf(v.ID)
	if b.question.As != study.Ratio || v.Scale != study.Real || d != nil && d.family.Support != catalog.Reals {
		return
	}
	low, _ := extent(v.Values)
	if low > 0 && (!v.RangeGiven || v.Low > 0) {
		return
	}
	b.report(Problem{Code: "ratio", Variable: v.ID, Place: "question",
		Message: fmt.Sprintf("%s is a real number that can be 0 or below: a ratio of its averages depends on where 0 lies, and says nothing near it. Ask for a difference.", v.ID),
		Repairs: b.reask("Ask for the difference", func(q *study.Question) { q.As = study.Difference })})
}
