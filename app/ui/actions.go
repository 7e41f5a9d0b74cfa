package ui

import (
	"fmt"
	"slices"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"

	"arrowroot/app/paint"
	"arrowroot/app/session"
	"arrowroot/canvas/draw"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

func pickNode(id string) scene.Selection { return scene.Selection{Nodes: []string{id}} }

// offSheet lists the variables that this rival does not show.
func (d *desk) offSheet() []string {
	var out []string
	for _, v := range d.view.Study.Variables {
		if !d.onSheet(v.ID) {
			out = append(out, v.ID)
		}
	}
	return out
}

func (d *desk) placeAll() {
	var edits []study.Edit
	for _, id := range d.offSheet() {
		edits = append(edits, study.AddNode{Rival: d.rival(), Variable: id})
	}
	d.do(study.Several{Name: "Place all variables", Edits: edits})
	d.editor.ZoomFit()
}

// dropVariable puts a variable where it was dropped, at a place of the window.
func (d *desk) dropVariable(id string, at fyne.Position) {
	p, ok := d.sheetPoint(at)
	if !ok {
		return
	}
	if d.do(study.AddNode{Rival: d.rival(), Variable: id, At: &p}) {
		d.choose(pickNode(id))
	}
}

// sheetPoint is the point of the sheet at a place of the window; ok is false
// off the sheet.
func (d *desk) sheetPoint(at fyne.Position) (p study.Point, ok bool) {
	in := at.Subtract(fyne.CurrentApp().Driver().AbsolutePositionForObject(d.editor))
	s := d.editor.Size()
	if in.X < 0 || in.Y < 0 || in.X > s.Width || in.Y > s.Height {
		return p, false
	}
	return d.editor.View().In(draw.Point{X: float64(in.X), Y: float64(in.Y)}), true
}

// showAll zooms out if something stands outside what is seen.
func (d *desk) showAll() {
	s := d.editor.Size()
	const margin = 50
	for _, at := range d.editor.Input().At {
		p := d.editor.View().Out(at)
		if p.X < margin || p.Y < margin/2 || p.X > float64(s.Width)-margin || p.Y > float64(s.Height)-margin {
			d.editor.ZoomFit()
			return
		}
	}
}

func (d *desk) newVariable() {
	d.win.Canvas().Focus(d.editor)
	d.editor.StartNaming()
}

func (d *desk) arrange() {
	at := scene.ArrangeFor(d.view.Study, d.view.Rival, d.view.Question, false)
	if d.do(study.MoveNodes{Rival: d.rival(), To: at}) {
		d.session.EndGesture()
		d.editor.ZoomFit()
	}
}

func (d *desk) selectAll() {
	var s scene.Selection
	for _, n := range d.view.Rival.Diagram.Nodes {
		s.Nodes = append(s.Nodes, n.Variable)
	}
	for i := range d.view.Rival.Layout.Notes {
		s.Notes = append(s.Notes, i)
	}
	d.choose(s)
}

// deletePicked takes what is picked off the sheet.
func (d *desk) deletePicked() {
	p := d.pick
	var edits []study.Edit
	for _, a := range p.Arrows {
		edits = append(edits, study.RemoveArrow{Rival: d.rival(), From: a[0], To: a[1]})
	}
	for _, a := range p.Arcs {
		edits = append(edits, study.RemoveArc{Rival: d.rival(), A: a[0], B: a[1]})
	}
	var nodes []string
	for _, id := range p.Nodes {
		if d.onSheet(id) {
			nodes = append(nodes, id)
		}
	}
	if len(nodes) > 0 {
		edits = append(edits, study.RemoveNodes{Rival: d.rival(), Variables: nodes})
	}
	if p.Plate != "" {
		edits = append(edits, study.RemovePlate{Name: p.Plate})
	}
	if len(p.Notes) > 0 {
		edits = append(edits, study.RemoveNotes{Rival: d.rival(), Notes: p.Notes})
	}
	switch len(edits) {
	case 0:
	case 1:
		d.do(edits[0])
	default:
		d.do(study.Several{Name: "Take several things off the sheet", Edits: edits})
	}
}

// copyArrows puts what is picked on the clipboard as arrows in text.
func (d *desk) copyArrows() {
	var lines []string
	for _, a := range d.view.Rival.Diagram.Arrows {
		if d.pick.HasArrow(a.From, a.To) || d.pick.HasNode(a.From) && d.pick.HasNode(a.To) {
			lines = append(lines, a.From+" -> "+a.To)
		}
	}
	for _, a := range d.view.Rival.Diagram.Arcs {
		if d.pick.HasArc(a.A, a.B) || d.pick.HasNode(a.A) && d.pick.HasNode(a.B) {
			lines = append(lines, "? -> "+a.A+", "+a.B)
		}
	}
	if len(lines) == 0 {
		lines = d.pick.Nodes
	}
	if len(lines) > 0 {
		d.app.Clipboard().SetContent(strings.Join(lines, "\n"))
	}
}

// pasteArrows draws arrows that are on the clipboard as text.
func (d *desk) pasteArrows() {
	text := d.app.Clipboard().Content()
	if strings.TrimSpace(text) == "" {
		return
	}
	if _, err := study.ParseArrows(text); err != nil {
		d.complain("What is on the clipboard are no arrows: " + err.Error())
		return
	}
	if d.do(study.TypeArrows{Rival: d.rival(), Text: text}) {
		d.showAll()
	}
}

// Rivals.

func (d *desk) copyRival() {
	name := d.freeName(d.rival())
	if d.do(study.CopyRival{From: d.rival(), Name: name}) {
		d.session.ShowRival(name)
		d.choose(scene.Selection{})
		d.notice("This is a copy: change what the other explanation would draw differently")
	}
}

func (d *desk) newRival() {
	name := d.freeName("Rival")
	if d.do(study.AddRival{Rival: study.Rival{Name: name, Layout: &study.Layout{}, Diagram: &study.Diagram{}}}) {
		d.session.ShowRival(name)
		d.choose(scene.Selection{})
	}
}

// freeName is a name that no rival has yet.
func (d *desk) freeName(like string) string {
	base := strings.TrimRight(strings.TrimRight(like, "0123456789"), " ")
	for i := 2; ; i++ {
		if name := fmt.Sprintf("%s %d", base, i); d.view.Study.Rival(name) == nil {
			return name
		}
	}
}

func (d *desk) nextRival() {
	all := d.view.Study.Rivals
	i := slices.Index(all, d.view.Rival)
	d.session.ShowRival(all[(i+1)%len(all)].Name)
}

// Fitting.

// canFit reports whether nothing stops a fit.
func (d *desk) canFit() bool {
	if d.view.Model == nil || d.view.Running || d.view.Table == nil {
		return false
	}
	for _, p := range d.view.Problems {
		if p.Stops {
			return false
		}
	}
	return true
}

// fit starts a fit. It asks first if a grave mistake stands, and if rows would
// be lost, once for each way of losing them.
func (d *desk) fit(sure bool) {
	if !d.canFit() || d.doubts() {
		return
	}
	if q := d.view.Question; q != nil && q.Exposure != "" && q.From == nil && q.To == nil && q.Shift == 0 {
		if from, to := d.usualContrast(q.Exposure); from != nil {
			d.changeQuestion(func(q *study.Question) { q.From, q.To = from, to })
		}
	}
	rows := d.view.Model.Rows
	key := fmt.Sprint(rows.Read, rows.Used, rows.Lost)
	if rows.Used < rows.Read-rows.Filtered && !sure && d.agreed != key {
		d.loss = key
		d.refresh()
		return
	}
	d.agreed, d.loss = key, ""
	d.session.Fit()
	d.drawer.show("Fit")
	d.refresh()
}

// setPaint paints the sheet by another summary; "" takes the paint off.
func (d *desk) setPaint(kind scene.PaintKind) {
	d.paint = kind
	d.refresh()
}

// painting colours the sheet as was chosen; nil without a result.
func (d *desk) painting() *scene.Paint {
	v := d.view
	switch {
	case v.Result == nil || d.paint == "":
		return nil
	case d.paint == scene.FitPaint:
		return paint.Fit(v.Checks, v.Stale)
	}
	return paint.Of(v.Result, d.paint, v.Stale)
}

func (d *desk) paintMenu() {
	item := func(label string, kind scene.PaintKind) *fyne.MenuItem {
		m := fyne.NewMenuItem(label, func() { d.setPaint(kind) })
		m.Checked = d.paint == kind
		return m
	}
	menu := fyne.NewMenu("", item("Effect", scene.EffectPaint), item("Learned", scene.LearnedPaint), item("Fit", scene.FitPaint), item("Trust", scene.TrustPaint), item("None", ""))
	up := widget.NewPopUpMenu(menu, d.win.Canvas())
	at := below(d.painter)
	up.ShowAtPosition(at.SubtractXY(max(0, up.MinSize().Width-d.painter.Size().Width), 0)) // flush right, within the window
}

// Menus of the right button hold only what fits the thing.

func (d *desk) menuAt(at fyne.Position, ids ...string) {
	var items []*fyne.MenuItem
	for _, id := range ids {
		c := d.commands.find(id)
		m := fyne.NewMenuItem(c.text(), c.run)
		m.Disabled = !c.ready()
		items = append(items, m)
	}
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", items...), d.win.Canvas(), at)
}

func (d *desk) sheetMenu(t scene.Target, at fyne.Position) {
	switch t.Kind {
	case scene.OnNode, scene.OnEdge:
		d.choose(pickNode(t.Node))
		d.menuAt(at, d.nodeCommands()...)
	case scene.OnArrow:
		d.chooseArrow(t.Pair[0], t.Pair[1])
		d.menuAt(at, "delete")
	case scene.OnArc:
		d.choose(scene.Selection{Arcs: [][2]string{t.Pair}})
		d.menuAt(at, "delete")
	case scene.OnPlate:
		d.choose(scene.Selection{Plate: t.Plate})
		d.menuAt(at, "delete")
	case scene.OnNote:
		d.choose(scene.Selection{Notes: []int{t.Note}})
		d.menuAt(at, "rename", "delete")
	default:
		d.menuAt(at, "variable", "place-all", "arrange", "paste", "zoom-fit")
	}
}

// nodeCommands are those that fit the node that is picked.
func (d *desk) nodeCommands() []string {
	ids := []string{"exposure", "outcome", "hold", "unmeasured", "limits"}
	for _, id := range []string{"truth", "indicator"} {
		if d.commands.find(id).ready() {
			ids = append(ids, id)
		}
	}
	return append(ids, "rename", "delete")
}

func (d *desk) variableMenu(id string, at fyne.Position) {
	d.choose(pickNode(id))
	if d.onSheet(id) {
		d.menuAt(at, d.nodeCommands()...)
		return
	}
	menu := fyne.NewMenu("",
		fyne.NewMenuItem("Put it on the sheet", func() { d.do(study.AddNode{Rival: d.rival(), Variable: id}) }),
		fyne.NewMenuItem("Remove from the study", func() { d.do(study.RemoveVariable{ID: id}) }))
	widget.ShowPopUpMenuAtPosition(menu, d.win.Canvas(), at)
}

func (d *desk) rivalMenu(name string, at fyne.Position) {
	d.session.ShowRival(name)
	d.menuAt(at, "copy-rival", "page-rivals")
}

// variableKey answers the sheet's keys in the ledger too.
func (d *desk) variableKey(id string, key fyne.KeyName) bool {
	c := d.commands.byKey(string(key))
	if c == nil || d.picked() != id {
		return false
	}
	if c.ready() {
		c.run()
	}
	return true
}

// key runs the command of a key pressed on the sheet.
func (d *desk) key(name string) bool {
	c := d.commands.byKey(name)
	if c == nil {
		for _, x := range d.commands {
			if x.keys == name {
				c = x
			}
		}
	}
	if c == nil {
		return false
	}
	if c.ready() {
		c.run()
	}
	return true
}

// adoptColumns makes a variable of every column that none is bound to.
func (d *desk) adoptColumns() {
	var edits []study.Edit
	for _, c := range d.freeColumns() {
		id := d.freeID(c.Name, edits)
		v := session.Bound(study.Variable{ID: id}, c)
		if v.ID != c.Name {
			v.Label = c.Name
		}
		edits = append(edits, study.AddVariable{Variable: v}, study.AddNode{Rival: d.rival(), Variable: id})
	}
	d.do(study.Several{Name: "Make variables of all columns", Edits: edits})
	d.editor.ZoomFit()
}
