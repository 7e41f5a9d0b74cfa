package ui

import (
	"errors"
	"path/filepath"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// loadData opens a table; variables whose name is a column's are bound by the
// session, the rest are offered.
func (d *desk) loadData(path string) {
	d.session.LoadData(path, func(t *table.Table, err error) {
		if err != nil {
			d.complain(unread(path, err))
			return
		}
		d.settle()
		if len(d.view.Study.Variables) == 0 {
			d.adoptColumns()
			return
		}
		if len(d.unbound()) > 0 {
			d.bindDialog()
		}
	})
}

// freeColumns are the columns that no variable or plate uses.
func (d *desk) freeColumns() []*table.Column {
	t := d.view.Table
	if t == nil {
		return nil
	}
	used := make(map[string]bool)
	for _, v := range d.view.Study.Variables {
		used[v.Column] = true
	}
	for _, p := range d.view.Study.Plates {
		used[or(p.Column, p.Name)] = true
	}
	var out []*table.Column
	for _, c := range t.Columns {
		if !used[c.Name] {
			out = append(out, c)
		}
	}
	return out
}

// unbound are the measured variables without a column.
func (d *desk) unbound() []*study.Variable {
	var out []*study.Variable
	for _, v := range d.view.Study.Variables {
		if !v.Unmeasured && v.Computed == "" && v.Column == "" && v.Answers == "" {
			out = append(out, v)
		}
	}
	return out
}

// freeID makes an identifier of a column's name that neither the study nor the
// edits to come have.
func (d *desk) freeID(name string, edits []study.Edit) string {
	doc, err := study.Several{Edits: edits}.Apply(d.view.Study)
	if err != nil { // they will be refused as a whole, and say why
		doc = d.view.Study
	}
	if id := doc.FreeID(name); id != "" {
		return id
	}
	return doc.FreeID("v")
}

// boundNumbersAndWords are the variables that have a column to choose rows by.
func (d *desk) boundNumbersAndWords() []string {
	var out []string
	for _, v := range d.view.Study.Variables {
		if v.Column != "" && !v.Unmeasured && d.view.Table.Column(v.Column) != nil {
			out = append(out, v.ID)
		}
	}
	return out
}

// keepRows uses only the rows of a table that meet all conditions.
func (d *desk) keepRows(name string, conditions []study.Condition) {
	data := d.view.Study.Table(name)
	if data == nil {
		return
	}
	to := *data
	to.Keep = conditions
	d.do(study.Several{Name: "Choose the rows of " + name, Edits: []study.Edit{study.ChangeData{Name: name, To: to}}})
}

// bindDialog is the small table that ties variables to columns by hand.
func (d *desk) bindDialog() {
	t := d.view.Table
	if t == nil || d.view.Study.DataOf(d.rival()) == nil {
		return
	}
	const width = 520
	body := column(6)
	var p *popover
	fill := func() {}
	data := d.view.Study.DataOf(d.rival())
	kept := d.pickRows(data.Keep, func() { fill() })
	wrong := ""
	done := func() {
		conditions, fault := kept.conditions()
		if wrong = fault; fault != "" {
			fill()
			return
		}
		p.close()
		d.keepRows(data.Name, conditions)
	}
	kept.done = done
	fill = func() {
		objects := []fyne.CanvasObject{
			row(8, bold("Columns of "+t.Name), space(), small(times(t.Rows, "row", "rows")+", "+times(len(t.Columns), "column", "columns"))),
			para("Variables of the same name are bound already. Choose the column of the others, or say that they were not measured.", tokenMuted),
		}
		list := newPane(0, 0, 4)
		var lines []fyne.CanvasObject
		options := []string{notBound}
		for _, c := range t.Columns {
			options = append(options, c.Name)
		}
		for _, v := range d.view.Study.Variables {
			chosen := or(v.Column, notBound)
			said := ""
			if c := t.Column(v.Column); c != nil && v.Column != "" {
				said = string(v.Scale)
				if c.Missing > 0 {
					said = strings.TrimPrefix(said+", ", ", ") + percent(float64(c.Missing)/float64(t.Rows)) + " missing"
				}
			}
			if v.Unmeasured {
				said = "unmeasured"
			}
			line := row(8,
				fixed(130, 0, newLabel(v.ID, sizeBody, tokenInk, fyne.TextStyle{Bold: true, Italic: v.Unmeasured}).shrinkTo(30)),
				fixed(180, 0, d.choice(options, chosen, func(w string) { kept.read(); d.bind(v.ID, w); fill() })),
				stretch(small(said).shrinkTo(20)))
			if r := d.likelyColumn(v.ID); r != nil && v.Column == "" && !v.Unmeasured {
				line.Add(d.chip(r.Label, false, func() { kept.read(); d.do(r.Edit); fill() }))
			}
			lines = append(lines, line)
		}
		list.fill(nil, lines...)
		h := min(float32(len(lines))*30+8, 340)
		objects = append(objects, fixed(0, h, list))
		if n := len(d.freeColumns()); n > 0 {
			objects = append(objects, row(0, d.quiet("Make variables of the other "+strings.TrimPrefix(times(n, "column", "columns"), "1 "), func() { p.close(); d.adoptColumns() })))
		}
		rows := &sheaf{d: d, keys: make(map[string]fyne.Focusable)}
		rows.add(hairline(), muted("Rows that are used"))
		kept.among = d.boundNumbersAndWords()
		kept.add(rows, "keep")
		if wrong != "" {
			rows.text(wrong, tokenFault)
		}
		objects = append(objects, rows.objects...)
		objects = append(objects, row(8, space(), d.primary("Done", done)))
		body.Objects = objects
		if p != nil {
			p.resize()
		}
	}
	fill()
	area := d.win.Canvas().Size()
	p = d.kit.pop(d.win.Canvas(), body, fyne.NewPos((area.Width-width)/2, 70), width)
}

// likelyColumn is the repair that binds a variable to the column it probably
// means; nil if there is none.
func (d *desk) likelyColumn(id string) *model.Repair {
	for _, p := range d.view.Problems {
		if p.Variable != id || p.Code != "unbound" {
			continue
		}
		for i, r := range p.Repairs {
			if strings.HasPrefix(r.Label, "Bind") {
				return &p.Repairs[i]
			}
		}
	}
	return nil
}

// unread says why a file of data was not read, with its name once.
func unread(path string, err error) string {
	var fault *table.Error
	if errors.As(err, &fault) {
		return strings.TrimSuffix(err.Error(), ".") + "."
	}
	return filepath.Base(path) + ": " + strings.TrimPrefix(err.Error(), path+": ")
}
