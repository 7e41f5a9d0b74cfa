package study

import (
	"bytes"
	"encoding/json"
	"strconv"
	"strings"

	"arrowroot/compile/formula"
)

// Write gives the text of an .arrowroot file: keys in a fixed order, what is
// empty left out, one variable, node, arrow or question to a line, so that a
// change of one is a change of a line or two. Read gives an equal study back.
func Write(s *Study) []byte {
	var w writer
	w.raw("{\n \"arrowroot\": " + strconv.Itoa(version))
	if s.Title != "" {
		w.raw(",\n \"title\": " + quote(s.Title))
	}
	if s.Note != "" {
		w.raw(",\n \"note\": " + quote(s.Note))
	}
	section(&w, "data", s.Data, writeData)
	section(&w, "variables", s.Variables, writeVariable)
	section(&w, "plates", s.Plates, func(p *Plate) string {
		var f fields
		f.text("name", p.Name)
		f.text("column", p.Column)
		f.text("within", p.Within)
		return f.String()
	})
	section(&w, "rivals", s.Rivals, writeRival)
	section(&w, "questions", s.Questions, writeQuestion)
	section(&w, "dismissed", s.Dismissed, func(d *Dismissal) string {
		var f fields
		f.text("rival", d.Rival)
		f.text("finding", d.Key)
		f.text("why", d.Why)
		return f.String()
	})
	w.raw("\n}\n")
	return w.Bytes()
}

type writer struct{ bytes.Buffer }

func (w *writer) raw(text string) { w.WriteString(text) }

// section writes a list of the study, each part on its line.
func section[T any](w *writer, key string, parts []*T, write func(*T) string) {
	if len(parts) == 0 {
		return
	}
	w.raw(",\n " + quote(key) + ": " + lines(parts, write, "  "))
}

// lines writes a list with each part on its line behind an indent.
func lines[T any](parts []*T, write func(*T) string, indent string) string {
	var b strings.Builder
	b.WriteString("[\n")
	for i, p := range parts {
		b.WriteString(indent + write(p))
		if i < len(parts)-1 {
			b.WriteByte(',')
		}
		b.WriteByte('\n')
	}
	b.WriteString(indent[:len(indent)-1] + "]")
	return b.String()
}

// fields writes an object in one line.
type fields struct{ strings.Builder }

func (f *fields) raw(key, value string) {
	if f.Len() > 0 {
		f.WriteString(", ")
	}
	f.WriteString(quote(key) + ": " + value)
}

func (f *fields) text(key, value string) {
	if value != "" {
		f.raw(key, quote(value))
	}
}

func (f *fields) number(key string, value float64) {
	if value != 0 {
		f.raw(key, formula.FormatNumber(value))
	}
}

func (f *fields) texts(key string, values []string) {
	if len(values) > 0 {
		f.raw(key, textList(values))
	}
}

func (f *fields) setting(key string, value Setting) {
	if value.Word != "" {
		f.raw(key, quote(value.Word))
		return
	}
	f.raw(key, formula.FormatNumber(value.Number))
}

func (f *fields) conditions(key string, conditions []Condition) {
	if len(conditions) == 0 {
		return
	}
	written := make([]string, len(conditions))
	for i, c := range conditions {
		var f fields
		f.text("variable", c.Variable)
		f.texts("words", c.Words)
		if c.Low != nil {
			f.raw("low", formula.FormatNumber(*c.Low))
		}
		if c.High != nil {
			f.raw("high", formula.FormatNumber(*c.High))
		}
		written[i] = f.String()
	}
	f.raw(key, "["+strings.Join(written, ", ")+"]")
}

func (f *fields) String() string { return "{" + f.Builder.String() + "}" }

func textList(values []string) string {
	quoted := make([]string, len(values))
	for i, v := range values {
		quoted[i] = quote(v)
	}
	return "[" + strings.Join(quoted, ", ") + "]"
}

// quote writes a JSON string. Bytes that are not UTF-8 become U+FFFD.
func quote(text string) string {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(text); err != nil {
		panic(err) // a string always encodes
	}
	return strings.TrimSuffix(b.String(), "\n")
}

// writeData writes embedded text as a list of its lines.
func writeData(d *Data) string {
	var f fields
	f.text("name", d.Name)
	f.text("file", d.File)
	if rows := strings.Split(d.Text, "\n"); len(rows) > 1 {
		parts := make([]*string, len(rows))
		for i := range rows {
			parts[i] = &rows[i]
		}
		f.raw("text", lines(parts, func(row *string) string { return quote(*row) }, "    "))
	} else {
		f.text("text", d.Text)
	}
	f.text("sha256", d.SHA256)
	f.number("rows", float64(d.Rows))
	f.conditions("keep", d.Keep)
	return f.String()
}

func writeVariable(v *Variable) string {
	var f fields
	f.text("id", v.ID)
	f.text("label", v.Label)
	f.text("unit", v.Unit)
	f.text("scale", string(v.Scale))
	f.texts("levels", v.Levels)
	if v.Unmeasured {
		f.raw("unmeasured", "true")
	}
	f.text("data", v.Data)
	f.text("column", v.Column)
	f.number("divide", v.Divide)
	f.texts("missing", v.Missing)
	f.number("nudge", v.Nudge)
	f.text("computed", v.Computed)
	if r := v.Range; r != nil {
		f.raw("range", pair(r.Low, r.High))
	}
	f.texts("plates", v.Plates)
	f.number("tier", float64(v.Tier))
	f.text("note", v.Note)
	f.text("records", v.Records)
	f.text("answers", v.Answers)
	f.number("cost", v.Cost)
	return f.String()
}

func pair(a, b float64) string {
	return "[" + formula.FormatNumber(a) + ", " + formula.FormatNumber(b) + "]"
}

func writeRival(r *Rival) string {
	var f fields
	f.text("name", r.Name)
	f.text("note", r.Note)
	d := r.Diagram
	if len(d.Nodes) == 0 {
		f.raw("nodes", "[]")
	} else {
		f.raw("nodes", lines(d.Nodes, func(n *Node) string { return writeNode(n, r.Layout) }, "    "))
	}
	if len(d.Arrows) > 0 {
		f.raw("arrows", lines(d.Arrows, writeArrow, "    "))
	}
	if len(d.Arcs) > 0 {
		f.raw("arcs", lines(d.Arcs, func(a *Arc) string {
			var f fields
			f.raw("between", textList([]string{a.A, a.B}))
			f.texts("plates", a.Plates)
			f.text("why", a.Why)
			f.texts("references", a.References)
			return f.String()
		}, "    "))
	}
	if len(d.Absent) > 0 {
		f.raw("absent", lines(d.Absent, func(a *Absent) string {
			var f fields
			f.text("from", a.From)
			f.text("to", a.To)
			f.text("why", a.Why)
			f.texts("references", a.References)
			return f.String()
		}, "    "))
	}
	if notes := r.Layout.Notes; len(notes) > 0 {
		f.raw("notes", lines(notes, func(n *Note) string {
			var f fields
			f.raw("at", pair(n.At.X, n.At.Y))
			f.text("text", n.Text)
			return f.String()
		}, "    "))
	}
	return f.String()
}

func writeNode(n *Node, layout *Layout) string {
	var f fields
	f.text("variable", n.Variable)
	if at, placed := layout.At[n.Variable]; placed {
		f.raw("at", pair(at.X, at.Y))
	}
	if n.Law != nil {
		f.raw("law", writeLaw(n.Law))
	}
	if n.Limits {
		f.raw("limits", "true")
	}
	return f.String()
}

func writeLaw(l *Law) string {
	var f, arguments, priors fields
	f.text("family", l.Family)
	for _, a := range l.Arguments {
		arguments.raw(a.Name, quote(a.Text))
	}
	if len(l.Arguments) > 0 {
		f.raw("arguments", arguments.String())
	}
	f.text("formula", l.Formula)
	f.texts("baseline varies by", l.VariesBy)
	for _, p := range l.Priors {
		priors.raw(p.Parameter, quote(p.Text))
	}
	if len(l.Priors) > 0 {
		f.raw("priors", priors.String())
	}
	f.text("treat", l.Treat)
	f.text("note", l.Note)
	return f.String()
}

func writeArrow(a *Arrow) string {
	var f fields
	f.text("from", a.From)
	f.text("to", a.To)
	f.text("form", a.Form)
	f.texts("product with", a.With)
	f.texts("varies by", a.VariesBy)
	f.text("prior", a.Prior)
	f.text("why", a.Why)
	f.texts("references", a.References)
	return f.String()
}

func writeQuestion(q *Question) string {
	var f fields
	f.text("exposure", q.Exposure)
	f.text("outcome", q.Outcome)
	f.text("effect", q.Effect)
	for _, set := range [...]struct {
		key   string
		value *Setting
	}{{"from", q.From}, {"to", q.To}} {
		if set.value != nil {
			f.setting(set.key, *set.value)
		}
	}
	f.number("shift", q.Shift)
	if len(q.Fixed) > 0 {
		fixed := make([]string, len(q.Fixed))
		for i, one := range q.Fixed {
			var f fields
			f.text("variable", one.Variable)
			f.setting("at", one.At)
			fixed[i] = f.String()
		}
		f.raw("fixed", "["+strings.Join(fixed, ", ")+"]")
	}
	if q.Held != nil {
		f.raw("held", textList(q.Held))
	}
	f.conditions("where", q.Where)
	f.text("over", q.Over)
	f.text("groups", q.Groups)
	f.text("weigh", q.Weigh)
	f.text("as", q.As)
	f.texts("outcome levels", q.OutcomeLevels)
	f.number("level", q.Level)
	return f.String()
}
