package ui

import (
	"strconv"
	"strings"

	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// recording is what there is to say of how a variable was recorded: with error,
// with gaps, and only in some rows.
func (x *details) recording(s *sheaf, v *study.Variable) {
	d := x.d
	s.section("How it was recorded")
	if n := d.view.Rival.Diagram.Node(v.ID); n != nil {
		s.toggles("rows", "Rows hold", []string{"all its values", "one value"}, func(w string) bool { return (w == "one value") == n.Limits }, func(w string, _ bool) {
			d.do(study.LimitRows{Rival: d.rival(), Variable: v.ID, On: w == "one value"})
		})
		if n.Limits {
			s.add(newProse(sizeSmall, span{text: v.ID + " limits the rows: only those with one value of it are in the data, so paths through it are as if it were held.", token: tokenMuted}))
		}
	}
	switch {
	case v.Records != "":
		b := d.quiet("Take it as exact", func() { d.changeVariable(v.ID, func(v *study.Variable) { v.Records = "" }) })
		s.keys["exact"] = b
		s.add(newProse(sizeBody, span{text: "A record of " + v.Records + ", with error. ", token: tokenMuted}, span{object: b}))
	case d.canRecordID(v.ID):
		b := d.quiet("Measured with error …", func() { d.drawTruth(v.ID) })
		b.tip = "Draws what it is a record of behind it: unmeasured, with its arrows"
		s.keys["truth"] = b
		s.add(row(0, b))
	}
	switch of := d.indicatorOf(v.ID); {
	case v.Answers != "":
		b := d.quiet("It does not", func() { d.changeVariable(v.ID, func(v *study.Variable) { v.Answers = "" }) })
		s.keys["unanswer"] = b
		s.add(newProse(sizeBody, span{text: "It says in which rows " + v.Answers + " is recorded. ", token: tokenMuted}, span{object: b}))
	case of != "":
		s.text(of+" says in which rows "+v.ID+" is recorded.", tokenMuted)
	case d.canIndicateID(v.ID):
		b := d.quiet("Response indicator …", func() { d.drawIndicator(v.ID) })
		b.tip = "Draws a variable that is yes where " + v.ID + " is recorded: what acts on it is why entries are missing"
		s.keys["indicator"] = b
		s.add(row(0, b))
	}
}

// plan is when a variable comes about and what measuring it costs.
func (x *details) plan(s *sheaf, v *study.Variable) {
	d := x.d
	tier, cost := "", ""
	if v.Tier != 0 {
		tier = strconv.Itoa(v.Tier)
	}
	if v.Cost != 0 {
		cost = boundText(&v.Cost)
	}
	s.field("tier", "Time tier", tier, "1 = first", func(text string) {
		n, err := strconv.Atoi(text)
		if text != "" && (err != nil || n < 1) {
			d.complain("A time tier is a whole number from 1 on: what comes earlier has the lower one.")
			return
		}
		d.changeVariable(v.ID, func(v *study.Variable) { v.Tier = n })
	})
	s.field("cost", "Cost", cost, "of measuring it", func(text string) {
		c, ok := number(text)
		if text != "" && (!ok || c < 0) {
			d.complain("The cost of measuring " + v.ID + " is a number that is not negative.")
			return
		}
		d.changeVariable(v.ID, func(v *study.Variable) { v.Cost = c })
	})
}

// absent is why there is no arrow between two variables, either way.
func (x *details) absent(s *sheaf, a, b string) {
	d := x.d
	diagram := d.view.Rival.Diagram
	for _, pair := range [][2]string{{a, b}, {b, a}} {
		from, to := pair[0], pair[1]
		if diagram.Arrow(from, to) != nil || d.acts(to, from) {
			continue // drawn, or it would close a cycle: nothing to argue
		}
		have := diagram.AbsentArrow(from, to)
		var now study.Absent
		if have != nil {
			now = *have
		}
		now.From, now.To = from, to
		change := func(f func(*study.Absent)) {
			next := now
			f(&next)
			if strings.TrimSpace(next.Why) == "" && len(next.References) == 0 {
				d.do(study.RemoveAbsent{Rival: d.rival(), From: from, To: to})
				return
			}
			d.do(study.AddAbsent{Rival: d.rival(), Absent: next})
		}
		s.section("No arrow " + from + " → " + to)
		why := d.kit.note(now.Why, "Why does "+from+" not act on "+to+"?", func(text string) {
			change(func(a *study.Absent) { a.Why = text })
		})
		why.SetMinRowsVisible(2)
		s.keys["absent "+from+" "+to] = why
		s.add(why)
		if have != nil {
			x.references(s, now.References, func(refs []string) { change(func(a *study.Absent) { a.References = refs }) })
		}
	}
}

// acts reports whether a variable acts on another, by any way of drawn arrows.
func (d *desk) acts(from, to string) bool {
	g := d.view.Graph
	if g == nil {
		return false
	}
	x, y := g.Index(from), g.Index(to)
	return x >= 0 && y >= 0 && g.Descendants(x)[y]
}

func (d *desk) canRecord() bool { return d.canRecordID(d.picked()) }

// canRecordID reports whether a variable can be a record with error: it was
// measured, and is not said to be one yet.
func (d *desk) canRecordID(id string) bool {
	v := d.view.Study.Variable(id)
	return v != nil && d.onSheet(id) && !v.Unmeasured && v.Computed == "" && v.Records == "" && v.Answers == ""
}

// drawTruth draws the unmeasured variable that another is a record of, in one
// step.
func (d *desk) drawTruth(id string) {
	if !d.canRecordID(id) {
		return
	}
	truth := d.view.Study.FreeID("true_" + id)
	if !d.do(study.DrawTruth{Rival: d.rival(), Record: id, Truth: truth}) {
		return
	}
	d.choose(pickNode(truth))
	d.editor.Reveal(id)
	if q := d.view.Question; q != nil && (q.Exposure == id || q.Outcome == id) {
		d.notice("The question is still about the record " + id + ": X or Y on " + truth + " asks about the thing itself")
	}
}

func (d *desk) canIndicate() bool { return d.canIndicateID(d.picked()) }

// canIndicateID reports whether a variable has missing entries and nothing on
// the sheet yet that says where.
func (d *desk) canIndicateID(id string) bool {
	v := d.view.Study.Variable(id)
	if v == nil || v.Unmeasured || v.Column == "" || d.indicatorOf(id) != "" {
		return false
	}
	c := d.view.Table.Column(v.Column)
	return c != nil && c.Missing > 0
}

// indicatorOf is the variable that says where another is recorded; "" without.
func (d *desk) indicatorOf(id string) string {
	for _, v := range d.view.Study.Variables {
		if v.Answers == id {
			return v.ID
		}
	}
	return ""
}

// drawIndicator draws a variable that is yes where another is recorded.
func (d *desk) drawIndicator(id string) {
	v := d.view.Study.Variable(id)
	if v == nil || !d.canIndicateID(id) {
		return
	}
	name := d.view.Study.FreeID(id + "_recorded")
	add := study.AddNode{Rival: d.rival(), Variable: name}
	if at, placed := d.editor.Input().At[id]; placed {
		add.At = &study.Point{X: at.X, Y: at.Y + 88}
	}
	edits := []study.Edit{
		study.AddVariable{Variable: study.Variable{ID: name, Label: v.Name() + " recorded", Scale: study.Binary, Levels: []string{"no", "yes"}, Plates: v.Plates, Answers: id}},
		add,
	}
	if d.do(study.Several{Name: "Draw where " + id + " is recorded", Edits: edits}) {
		d.choose(scene.Selection{Nodes: []string{name}})
		d.editor.Reveal(name)
		d.notice("Draw arrows to " + name + " from what makes entries of " + id + " missing")
	}
}

// limitRows marks a node as what limits the rows, or takes the mark away.
func (d *desk) limitRows(id string) {
	if n := d.view.Rival.Diagram.Node(id); n != nil {
		d.do(study.LimitRows{Rival: d.rival(), Variable: id, On: !n.Limits})
	}
}
