package study

import (
	"errors"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
)

// version of the file format that this program writes.
const version = 1

// Read reads the text of an .arrowroot file; name is for messages. The error
// is always a *FileError. What Read gives passes Check.
func Read(name string, text []byte) (*Study, error) {
	s, err := read(strings.TrimPrefix(string(text), "\ufeff"))
	var file *FileError
	if errors.As(err, &file) {
		file.Name = filepath.Base(name)
		return nil, file
	}
	return s, nil
}

func read(text string) (s *Study, err error) {
	v, err := parseJSON(text)
	if err != nil {
		return nil, err
	}
	defer door(&err)
	r := reader{study: &Study{}, lines: make(map[any]int)}
	r.top(v)
	var fault *Fault
	if errors.As(Check(r.study), &fault) {
		failAt(r.lines[fault.Part], "%s", fault.Reason)
	}
	return r.study, nil
}

// A reader makes a study and remembers in which line each part began.
type reader struct {
	study *Study
	lines map[any]int
}

func (r *reader) top(v *value) {
	if v.kind != objectValue {
		failAt(v.line, "a study is one object in braces {}, not %s", v.show())
	}
	o := newObject(v, "a study")
	r.version(o)
	o.get("$schema") // for editors; it says nothing that we do not know
	s := r.study
	s.Title, s.Note = o.text("title"), o.text("note")
	o.list("data", "a data table", r.data)
	o.list("variables", "a variable", r.variable)
	o.list("plates", "a plate", r.plate)
	o.list("rivals", "a rival", r.rival)
	o.list("questions", "a question", r.question)
	o.list("dismissed", "a finding that was set aside", func(o *object) {
		d := &Dismissal{Rival: o.needText("rival"), Key: o.needText("finding"), Why: o.text("why")}
		r.lines[d] = o.value.line
		s.Dismissed = append(s.Dismissed, d)
	})
	o.finish()
}

func (r *reader) version(o *object) {
	v := o.get("arrowroot")
	switch {
	case v == nil:
		failAt(0, `"arrowroot", the version of the format, is missing; is this a study?`)
	case v.kind != numberValue:
		wrong("arrowroot", v, "the number of a format version")
	}
	switch n := numberOf("arrowroot", v); {
	case n > version:
		failAt(v.line, `"arrowroot": %s is a format that a later version writes; this version knows format %d`, v.text, version)
	case n != version:
		failAt(v.line, `"arrowroot": %s is no version of the format; this version knows format %d`, v.text, version)
	}
}

func (r *reader) data(o *object) {
	d := &Data{Name: o.text("name"), File: o.text("file"), SHA256: o.text("sha256"), Rows: o.whole("rows")}
	if v := o.get("text"); v != nil {
		d.Text = strings.Join(o.texts("text"), "\n")
	}
	d.Keep = readConditions(o, "keep")
	if d.Name == "" {
		base := filepath.Base(filepath.FromSlash(d.File))
		d.Name = strings.TrimSuffix(base, filepath.Ext(base))
	}
	r.lines[d] = o.value.line
	r.study.Data = append(r.study.Data, d)
}

func (r *reader) variable(o *object) {
	words := make([]string, len(Scales))
	for i, s := range Scales {
		words[i] = string(s)
	}
	v := &Variable{
		ID:         o.needText("id"),
		Label:      o.text("label"),
		Unit:       o.text("unit"),
		Scale:      Scale(o.oneOf("scale", "a scale", words...)),
		Levels:     o.texts("levels"),
		Unmeasured: o.flag("unmeasured"),
		Data:       o.text("data"),
		Column:     o.text("column"),
		Divide:     o.number("divide"),
		Missing:    o.texts("missing"),
		Nudge:      o.number("nudge"),
		Computed:   o.text("computed"),
	}
	if low, high, given := o.pair("range"); given {
		v.Range = &Range{low, high}
	}
	v.Plates, v.Tier, v.Note = o.texts("plates"), o.whole("tier"), o.text("note")
	v.Records, v.Answers, v.Cost = o.text("records"), o.text("answers"), o.number("cost")
	r.lines[v] = o.value.line
	r.study.Variables = append(r.study.Variables, v)
}

func (r *reader) plate(o *object) {
	p := &Plate{Name: o.needText("name"), Column: o.text("column"), Within: o.text("within")}
	r.lines[p] = o.value.line
	r.study.Plates = append(r.study.Plates, p)
}

func (r *reader) rival(o *object) {
	rival := &Rival{Name: o.text("name"), Note: o.text("note"), Layout: &Layout{}, Diagram: &Diagram{}}
	if rival.Name == "" {
		rival.Name = "Rival " + strconv.Itoa(len(r.study.Rivals)+1)
	}
	r.lines[rival] = o.value.line
	d := rival.Diagram
	named := o.get("nodes") == nil // then the arrows and arcs say what is on the sheet
	o.list("nodes", "a node", func(o *object) { r.node(rival, o) })
	seen := make(map[string]bool)
	mention := func(id string, line int) {
		if named && !seen[id] {
			seen[id] = true
			n := &Node{Variable: id}
			r.lines[n] = line
			d.Nodes = append(d.Nodes, n)
		}
	}
	o.list("arrows", "an arrow", func(o *object) {
		a := r.arrow(o)
		mention(a.From, o.value.line)
		mention(a.To, o.value.line)
		d.Arrows = append(d.Arrows, a)
	})
	o.list("arcs", "an arc", func(o *object) {
		v := o.need("between")
		ends := o.texts("between")
		if len(ends) != 2 {
			wrong("between", v, "a list of two variables")
		}
		a := &Arc{A: ends[0], B: ends[1], Plates: o.texts("plates"), Why: o.text("why"), References: o.texts("references")}
		r.lines[a] = o.value.line
		mention(a.A, o.value.line)
		mention(a.B, o.value.line)
		d.Arcs = append(d.Arcs, a)
	})
	o.list("absent", "an absent arrow", func(o *object) {
		a := &Absent{From: o.needText("from"), To: o.needText("to"), Why: o.text("why"), References: o.texts("references")}
		r.lines[a] = o.value.line
		d.Absent = append(d.Absent, a)
	})
	o.list("notes", "a note", func(o *object) {
		n := &Note{Text: o.needText("text")}
		n.At.X, n.At.Y, _ = o.pair("at")
		r.lines[n] = o.value.line
		rival.Layout.Notes = append(rival.Layout.Notes, n)
	})
	r.study.Rivals = append(r.study.Rivals, rival)
}

func (r *reader) node(rival *Rival, o *object) {
	n := &Node{Variable: o.needText("variable"), Limits: o.flag("limits")}
	if x, y, given := o.pair("at"); given {
		if rival.Layout.At == nil {
			rival.Layout.At = make(map[string]Point)
		}
		rival.Layout.At[n.Variable] = Point{x, y}
	}
	if v := o.get("law"); v != nil {
		law := newObject(v, "a law")
		n.Law = readLaw(law)
		law.finish()
	}
	r.lines[n] = o.value.line
	rival.Diagram.Nodes = append(rival.Diagram.Nodes, n)
}

func readLaw(o *object) *Law {
	l := &Law{Family: o.text("family"), Formula: o.text("formula"), VariesBy: o.texts("baseline varies by")}
	o.named("arguments", func(name, text string) {
		l.Arguments = append(l.Arguments, Argument{name, text})
	})
	o.named("priors", func(name, text string) {
		l.Priors = append(l.Priors, Prior{name, text})
	})
	l.Treat = o.oneOf("treat", "a treatment", Given, Modelled, Imputed)
	l.Note = o.text("note")
	return copyLaw(l)
}

func (r *reader) arrow(o *object) *Arrow {
	a := &Arrow{
		From:       o.needText("from"),
		To:         o.needText("to"),
		Form:       o.oneOf("form", "a form", forms[:]...),
		With:       o.texts("product with"),
		VariesBy:   o.texts("varies by"),
		Prior:      o.text("prior"),
		Why:        o.text("why"),
		References: o.texts("references"),
	}
	r.lines[a] = o.value.line
	return a
}

func (r *reader) question(o *object) {
	q := &Question{
		Exposure: o.text("exposure"),
		Outcome:  o.text("outcome"),
		Effect:   o.oneOf("effect", "an effect", TotalEffect, DirectEffect),
	}
	exposure := r.study.Variable(q.Exposure)
	q.From, q.To = readSetting(o, "from", exposure), readSetting(o, "to", exposure)
	q.Shift = o.number("shift")
	o.list("fixed", "a variable that is fixed", func(o *object) {
		f := Fix{Variable: o.needText("variable")}
		o.need("at")
		f.At = *readSetting(o, "at", r.study.Variable(f.Variable))
		q.Fixed = append(q.Fixed, f)
	})
	if o.get("held") != nil {
		q.Held = append([]string{}, o.texts("held")...)
	}
	q.Where = readConditions(o, "where")
	q.Over = o.oneOf("over", "a population", TheseRows, PopulationAlike)
	q.Groups = o.oneOf("groups", "a choice of groups", TheseGroups, NewGroups)
	q.Weigh = o.oneOf("weigh", "a way to weigh", ByRows, ByGroups)
	q.As = o.oneOf("as", "a way to compare", Difference, Ratio)
	q.OutcomeLevels = o.texts("outcome levels")
	q.Level = o.number("level")
	r.lines[q] = o.value.line
	r.study.Questions = append(r.study.Questions, q)
}

// readConditions reads what is asked of rows.
func readConditions(o *object, key string) []Condition {
	var out []Condition
	o.list(key, "a condition", func(o *object) {
		c := Condition{Variable: o.needText("variable"), Words: o.texts("words")}
		for _, bound := range [...]struct {
			key string
			to  **float64
		}{{"low", &c.Low}, {"high", &c.High}} {
			if v := o.get(bound.key); v != nil {
				n := numberOf(bound.key, v)
				*bound.to = &n
			}
		}
		out = append(out, c)
	})
	return out
}

// readSetting reads a number or a word. A number in quotes is a number, and a
// number without is a word, where the exposure's scale leaves no doubt.
func readSetting(o *object, key string, exposure *Variable) *Setting {
	v := o.get(key)
	if v == nil {
		return nil
	}
	text := v.text
	if text == "" || v.kind != textValue && v.kind != numberValue {
		wrong(key, v, "a number or a level's word")
	}
	number, err := strconv.ParseFloat(text, 64)
	switch {
	case words(exposure) && (v.kind == textValue || exposure.Scale != Binary || slices.Contains(exposure.Levels, text)):
		return &Setting{Word: text}
	case v.kind == numberValue || err == nil && exposure != nil:
		return &Setting{Number: number}
	}
	return &Setting{Word: text}
}

// words reports whether values of a variable are words.
func words(v *Variable) bool {
	return v != nil && (v.Scale == Category || v.Scale == Ordered || len(v.Levels) > 0)
}
