package ui

import (
	"errors"
	"slices"
	"strings"

	"fyne.io/fyne/v2"

	"arrowroot/app/session"
	"arrowroot/canvas"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// A desk is what the panels work at: the session with its latest view, what is
// picked, and the few things that one panel asks of another. It holds window
// state only; everything about the study is in the view.
type desk struct {
	*kit
	app      fyne.App
	win      fyne.Window
	session  *session.Session
	view     *session.View
	editor   *canvas.Editor
	commands commandTable

	pick       scene.Selection
	paint      scene.PaintKind   // "" = none
	dismissed  map[string]bool   // problems that the user has read and put away
	complaint  string            // why the last thing could not be done; "" = nothing
	cycle      *study.CycleError // what the complaint is about, if it is an arrow that would close a cycle
	doubt      string            // the mistake that a fit was asked for in spite of; "" = none
	agreedTo   map[string]bool   // the mistakes that the user fitted in spite of
	loss       string            // rows that a fit would lose and that the user is being asked about; "" = not asking
	agreed     string            // the loss that the user agreed to
	lastFolder string            // where a file was last opened or saved
	fitNext    bool              // the next view is of another study: show its whole sheet

	frame   *frame
	drawer  *drawer
	status  *status
	capsule fyne.CanvasObject // what the question's popover hangs from
	painter fyne.CanvasObject // what the paint menu hangs from
	panels  []panel
	strips  stripCache
	labels  []coefficientReading // the newest last
	showing bool                 // the editor is being given something else to show
	trace   *trace
}

// A panel shows a part of the view.
type panel interface{ update() }

// refresh brings every panel up to date.
func (d *desk) refresh() {
	for _, p := range d.panels {
		p.update()
	}
	d.trace.note(d)
}

// notice says in the status line what has just happened.
func (d *desk) notice(text string) {
	d.status.notice = text
	d.status.update()
}

// do makes an edit; a refusal goes to the banner.
func (d *desk) do(e study.Edit) bool {
	if e == nil {
		return false
	}
	if err := d.session.Do(e); err != nil {
		var cycle *study.CycleError
		errors.As(err, &cycle)
		d.refuseCycle(err.Error(), cycle)
		return false
	}
	d.settle()
	return true
}

// refuseCycle complains; if it is about a cycle, the banner offers a way out.
func (d *desk) refuseCycle(why string, cycle *study.CycleError) {
	d.cycle = cycle
	d.complaint = why
	d.refresh()
}

// complain shows why something could not be done.
func (d *desk) complain(why string) { d.refuseCycle(why, nil) }

// settle forgets the last complaint: something else has been done since.
func (d *desk) settle() {
	if d.complaint != "" {
		d.complaint, d.cycle = "", nil
		d.refresh()
	}
}

// choose picks something, on the sheet too.
func (d *desk) choose(s scene.Selection) {
	d.pick = s
	d.editor.Select(s)
	d.refresh()
}

// picked is the one variable that is picked; "" if it is not one.
func (d *desk) picked() string {
	p := d.pick
	if len(p.Nodes) == 1 && len(p.Arrows) == 0 && len(p.Arcs) == 0 && p.Plate == "" && len(p.Notes) == 0 {
		return p.Nodes[0]
	}
	return ""
}

// prune drops from the selection what the study no longer has.
func (d *desk) prune() {
	s := d.view.Study
	diagram := d.view.Rival.Diagram
	d.pick.Nodes = slices.DeleteFunc(slices.Clone(d.pick.Nodes), func(id string) bool { return s.Variable(id) == nil })
	d.pick.Arrows = slices.DeleteFunc(slices.Clone(d.pick.Arrows), func(a [2]string) bool { return diagram.Arrow(a[0], a[1]) == nil })
	d.pick.Arcs = slices.DeleteFunc(slices.Clone(d.pick.Arcs), func(a [2]string) bool {
		return !slices.ContainsFunc(diagram.Arcs, func(c *study.Arc) bool { return c.A == a[0] && c.B == a[1] })
	})
	d.pick.Notes = slices.DeleteFunc(slices.Clone(d.pick.Notes), func(i int) bool { return i >= len(d.view.Rival.Layout.Notes) })
	if d.pick.Plate != "" && s.Plate(d.pick.Plate) == nil {
		d.pick.Plate = ""
	}
}

// rival is the name of the rival on the sheet.
func (d *desk) rival() string { return d.view.Rival.Name }

// onSheet reports whether a variable stands on the sheet.
func (d *desk) onSheet(id string) bool { return d.view.Rival.Diagram.Node(id) != nil }

// changeVariable edits a copy of a variable.
func (d *desk) changeVariable(id string, change func(*study.Variable)) bool {
	v := d.view.Study.Variable(id)
	if v == nil {
		return false
	}
	to := *v
	change(&to)
	return d.do(study.ChangeVariable{ID: id, To: to})
}

// changeLaw edits a copy of a node's law; one that says nothing goes away.
func (d *desk) changeLaw(id string, change func(*study.Law)) bool {
	n := d.view.Rival.Diagram.Node(id)
	if n == nil {
		return false
	}
	var to study.Law
	if n.Law != nil {
		to = *n.Law
	}
	change(&to)
	law := &to
	if to.Family == "" && len(to.Arguments) == 0 && to.Formula == "" && len(to.VariesBy) == 0 && len(to.Priors) == 0 && to.Treat == "" && to.Note == "" {
		law = nil
	}
	return d.do(study.ChangeLaw{Rival: d.rival(), Variable: id, Law: law})
}

// changeArrow edits a copy of an arrow.
func (d *desk) changeArrow(from, to string, change func(*study.Arrow)) bool {
	a := d.view.Rival.Diagram.Arrow(from, to)
	if a == nil {
		return false
	}
	next := *a
	change(&next)
	return d.do(study.ChangeArrow{Rival: d.rival(), From: from, To: to, Arrow: next})
}

// changeQuestion edits a copy of the question that is asked, or asks a first
// one.
func (d *desk) changeQuestion(change func(*study.Question)) bool {
	var q study.Question
	if d.view.Question != nil {
		q = *d.view.Question
	}
	change(&q)
	if err := d.session.SetQuestion(q); err != nil {
		d.complain(err.Error())
		return false
	}
	d.settle()
	return true
}

// hold keeps a variable fixed, or leaves it free.
func (d *desk) hold(id string, on bool) bool {
	if d.view.Question == nil {
		d.complain("Say first which effect you are after: pick a variable and press X for the exposure, another and Y for the outcome.")
		return false
	}
	return d.do(study.Hold{At: d.view.QuestionAt, Variable: id, On: on})
}

// holdAll holds exactly these.
func (d *desk) holdAll(ids []string) bool {
	return d.changeQuestion(func(q *study.Question) { q.Held = append([]string{}, ids...) })
}

// held reports whether a variable is held in the question.
func (d *desk) held(id string) bool {
	return d.view.Question != nil && slices.Contains(d.view.Question.Held, id)
}

// names turns node numbers of the reading into names.
func (d *desk) names(nodes []int) []string {
	var out []string
	for _, v := range nodes {
		out = append(out, d.view.Graph.Names[v])
	}
	return out
}

// lower is a sentence's start in the middle of another.
func lower(s string) string {
	if s == "" {
		return s
	}
	return strings.ToLower(s[:1]) + s[1:]
}
