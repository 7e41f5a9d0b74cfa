package ui

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/app/words"
	"arrowroot/compile/mistake"
	"arrowroot/compile/study"
)

// asker is the popover in which a question is put together. It edits a draft
// and asks it on Return or with its button.
type asker struct {
	d     *desk
	pop   *popover
	draft study.Question
	body  *fyne.Container
	from  *field
	to    *field
	shift *field
	where *rowPicker
	fixed map[string]*field // values of what is fixed, by variable
	more  bool              // the parts that most questions do without are shown
	added bool              // it will be one more question of the study
	wrong string            // why it cannot be asked so
	focus fyne.Focusable    // where the typing starts
	keys  map[string]fyne.Focusable
}

func (d *desk) askQuestion(under fyne.CanvasObject) *asker {
	return d.openAsker(under, false)
}

// askAnother puts one more question together.
func (d *desk) askAnother(under fyne.CanvasObject) *asker {
	return d.openAsker(under, true)
}

func (d *desk) nextQuestion() {
	d.session.ShowQuestion((d.view.QuestionAt + 1) % len(d.view.Study.Questions))
}

func (d *desk) openAsker(under fyne.CanvasObject, added bool) *asker {
	a := &asker{d: d, body: column(8), added: added}
	a.start()
	at := below(under)
	a.pop = d.kit.pop(d.win.Canvas(), a.body, at, 430)
	d.win.Canvas().Focus(a.focus)
	return a
}

// start begins with the present question, or with none where one is added.
func (a *asker) start() {
	a.draft = study.Question{}
	if q := a.d.view.Question; q != nil && !a.added {
		a.draft = *q
		a.draft.Held = slices.Clone(q.Held)
	}
	q := &a.draft
	a.more = q.Effect == study.DirectEffect || len(q.Where) > 0 || q.Groups == study.NewGroups || q.Weigh == study.ByGroups
	a.where = a.d.pickRows(q.Where, a.again)
	a.where.done = a.ask
	a.fill()
}

// which lets people turn to another question of the study.
func (a *asker) which(s *sheaf) {
	questions := a.d.view.Study.Questions
	if a.added || len(questions) < 2 {
		return
	}
	var names []string
	for i, q := range questions {
		names = append(names, strconv.Itoa(i+1)+"  "+q.Exposure+" → "+q.Outcome)
	}
	s.choice("which", "of "+strconv.Itoa(len(names)), names, names[a.d.view.QuestionAt], func(w string) {
		a.d.session.ShowQuestion(slices.Index(names, w))
		a.start()
		a.pop.resize()
	})
}

func (a *asker) fill() {
	d, q := a.d, &a.draft
	var ids []string
	for _, n := range d.view.Rival.Diagram.Nodes {
		ids = append(ids, n.Variable)
	}
	slices.Sort(ids)
	s := &sheaf{d: d, keys: make(map[string]fyne.Focusable)}
	again := a.again
	if a.added {
		s.add(caption("Another question"))
	} else {
		s.add(caption("Question"))
	}
	a.which(s)
	s.choice("exposure", "Effect of", ids, q.Exposure, func(w string) {
		a.read()
		q.Exposure = w
		q.From, q.To = d.usualContrast(w)
		a.from = nil
		a.tidy()
		again()
	})
	s.choice("outcome", "on", ids, q.Outcome, func(w string) { a.read(); q.Outcome = w; a.tidy(); again() })
	a.from, a.to, a.shift = nil, nil, nil
	x := d.view.Study.Variable(q.Exposure)
	if x != nil {
		if len(x.Levels) > 0 && (x.Scale == study.Category || x.Scale == study.Ordered || x.Scale == study.Binary) {
			s.choice("from", "from", x.Levels, word(q.From), func(w string) { q.From = &study.Setting{Word: w} })
			s.choice("to", "to", x.Levels, word(q.To), func(w string) { q.To = &study.Setting{Word: w} })
		} else {
			a.from = d.field(settingText(q.From), "", nil)
			a.to = d.field(settingText(q.To), "", nil)
			a.shift = d.field(shiftText(q), "", nil)
			for _, f := range []*field{a.from, a.to, a.shift} {
				f.OnSubmitted = func(string) { a.ask() }
				f.escape = func() { a.pop.close() }
				f.commit = nil
			}
			values, shift := row(6, stretch(a.from), muted("to"), stretch(a.to)), row(6, stretch(a.shift))
			if x.Unit != "" {
				values.Add(muted(x.Unit))
				shift.Add(muted(x.Unit))
			}
			s.add(labelled("from", values), labelled("or shift by", shift))
		}
	}
	if y := d.view.Study.Variable(q.Outcome); y != nil && (y.Scale == study.Category || y.Scale == study.Ordered) && len(y.Levels) > 0 {
		s.toggles("levels", "P(level)", y.Levels, func(w string) bool { return slices.Contains(q.OutcomeLevels, w) }, func(w string, on bool) {
			a.read()
			q.OutcomeLevels = with(q.OutcomeLevels, w, on)
			again()
		})
	}
	var free []string
	for _, id := range ids {
		if v := d.view.Study.Variable(id); id != q.Exposure && id != q.Outcome && v != nil && !v.Unmeasured {
			free = append(free, id)
		}
	}
	fixing := func(id string) bool {
		return slices.ContainsFunc(q.Fixed, func(f study.Fix) bool { return f.Variable == id })
	}
	free = slices.DeleteFunc(free, fixing)
	for _, p := range d.view.Study.Plates {
		if d.view.Study.Variable(p.Name) == nil { // else the name means the variable
			free = append(free, heldPlate+p.Name)
		}
	}
	if len(free) > 0 {
		s.toggles("held", "Holding", free, func(w string) bool { return slices.Contains(q.Held, strings.TrimPrefix(w, heldPlate)) }, func(w string, on bool) {
			a.read()
			w = strings.TrimPrefix(w, heldPlate)
			q.Held = with(q.Held, w, on)
			if q.Held == nil {
				q.Held = []string{}
			}
			again()
		})
	}
	over := q.Over
	if over == "" {
		over = study.TheseRows
	}
	s.choice("over", "over", []string{study.TheseRows, study.PopulationAlike}, over, func(w string) { q.Over = w })
	as := q.As
	if as == "" {
		as = study.Difference
	}
	s.choice("as", "as", []string{study.Difference, study.Ratio}, as, func(w string) { q.As = w })
	levels := []string{"50 %", "80 %", "90 %", "95 %"}
	level := words.Percent(orLevel(q.Level))
	if !slices.Contains(levels, level) {
		levels = append(levels, level)
	}
	s.choice("level", "interval", levels, level, func(w string) {
		if x, ok := number(strings.TrimSuffix(w, " %")); ok {
			q.Level = x / 100
		}
	})
	a.asides(s)
	if a.wrong != "" {
		s.text(a.wrong, tokenFault)
	}
	ask := d.primary("Ask", a.ask)
	cancel := d.plain("Cancel", func() { a.pop.close() })
	s.add(gapOf(1, 2), row(8, space(), cancel, ask))
	a.body.Objects = s.objects
	a.keys, a.focus = s.keys, s.keys["exposure"]
}

// read takes over what was typed.
func (a *asker) read() {
	a.wrong = a.where.read()
	for i := range a.draft.Fixed {
		if f := a.fixed[a.draft.Fixed[i].Variable]; f != nil {
			x, ok := number(f.Text)
			if !ok {
				a.wrong = "Say a number at which " + a.draft.Fixed[i].Variable + " is fixed."
				continue
			}
			a.draft.Fixed[i].At = study.Setting{Number: x}
		}
	}
	if a.from == nil {
		return
	}
	x, okX := number(a.from.Text)
	y, okY := number(a.to.Text)
	if okX && okY {
		a.draft.From, a.draft.To, a.draft.Shift = &study.Setting{Number: x}, &study.Setting{Number: y}, 0
		return
	}
	a.draft.From, a.draft.To = nil, nil
	a.draft.Shift, _ = number(a.shift.Text)
}

func (a *asker) ask() {
	a.read()
	if a.wrong != "" {
		wrong := a.wrong
		a.fill()
		a.wrong = wrong
		a.pop.resize()
		return
	}
	a.draft.Where, _ = a.where.conditions()
	a.pop.close()
	if a.draft.Exposure == "" && a.draft.Outcome == "" {
		return
	}
	if a.added {
		if err := a.d.session.AskAnother(a.draft); err != nil {
			a.d.complain(err.Error())
		}
		return
	}
	a.d.changeQuestion(func(q *study.Question) { *q = a.draft })
}

// orLevel is the level of intervals when the question names none.
func orLevel(level float64) float64 {
	if level == 0 {
		return 0.9
	}
	return level
}

func word(s *study.Setting) string {
	if s == nil {
		return ""
	}
	return s.Word
}

func settingText(s *study.Setting) string {
	if s == nil {
		return ""
	}
	return settingWords(s)
}

func shiftText(q *study.Question) string {
	if q.Shift == 0 {
		return ""
	}
	return words.Given(q.Shift)
}

// setExposure makes a variable the exposure; the one that was the outcome
// stays, unless it is the same.
func (d *desk) setExposure(id string) {
	d.changeQuestion(func(q *study.Question) {
		q.Exposure, q.Shift = id, 0
		q.From, q.To = d.usualContrast(id)
		if q.Outcome == id {
			q.Outcome = ""
		}
		q.Held = drop(q.Held, id)
	})
}

// usualContrast is a first pair of values to compare, until the user says
// others: that which a question without any is offered.
func (d *desk) usualContrast(id string) (from, to *study.Setting) {
	return mistake.Contrast(d.view.Study.Variable(id), d.view.Table)
}

// rounded cuts x to a tenth of the order of size: 43.7 of a width of 20 is 44.
func rounded(x, size float64) float64 {
	unit := math.Pow(10, math.Floor(math.Log10(size))-1)
	r := math.Round(x/unit) * unit
	if short, err := strconv.ParseFloat(strconv.FormatFloat(r, 'g', 6, 64), 64); err == nil {
		return short // 0.30000000000000004 is 0.3
	}
	return r
}

func (d *desk) setOutcome(id string) {
	d.changeQuestion(func(q *study.Question) {
		q.Outcome, q.OutcomeLevels = id, nil
		if q.Exposure == id {
			q.Exposure = ""
		}
		q.Held = drop(q.Held, id)
	})
}

// drop takes a word out; an absent list stays absent.
func drop(set []string, word string) []string {
	if set == nil {
		return nil
	}
	return append([]string{}, slices.DeleteFunc(slices.Clone(set), func(w string) bool { return w == word })...)
}

// compare sets the two values of the exposure from words: "40", "low".
func (d *desk) contrast(from, to string) {
	d.changeQuestion(func(q *study.Question) {
		q.From, q.To, q.Shift = d.setting(q.Exposure, from), d.setting(q.Exposure, to), 0
	})
}

func (d *desk) setting(id, text string) *study.Setting {
	text = strings.TrimSpace(text)
	if v := d.view.Study.Variable(id); v != nil && slices.Contains(v.Levels, text) {
		return &study.Setting{Word: text}
	}
	if x, ok := number(text); ok {
		return &study.Setting{Number: x}
	}
	return &study.Setting{Word: text}
}
