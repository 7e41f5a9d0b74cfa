package ui

import (
	"path/filepath"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"

	"arrowroot/app/session"
	"arrowroot/canvas"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Names under which the window remembers itself between runs.
const (
	prefShade  = "shade"
	prefLeft   = "frame.left"
	prefRight  = "frame.right"
	prefDrawer = "frame.drawer"
)

// dotCount is how many quantiles a dot strip shows.
const dotCount = 20

// A Window is the program's one window.
type Window struct {
	desk  *desk
	menu  *fyne.MainMenu
	items map[*fyne.MenuItem]*command
}

// New makes the window on a session; post runs a function on the window's
// goroutine. Open something and then Show it.
func New(app fyne.App, s *session.Session, post func(func())) *Window {
	app.Settings().SetTheme(Theme{Shade: Shade(app.Preferences().String(prefShade))})
	d := &desk{
		kit: newKit(post), app: app, session: s, dismissed: make(map[string]bool), agreedTo: make(map[string]bool), fitNext: true,
		win: app.NewWindow("Arrowroot"), editor: canvas.NewEditor(post), trace: newTrace(),
	}
	d.onPopover = func() { d.trace.note(d) }
	d.onKey = func(key fyne.KeyName) {
		if d.win.Canvas().Overlays().Top() == nil { // a letter means the same on a button as on the sheet
			d.key(string(key))
		}
	}
	d.commands = commandsOf(d)
	w := &Window{desk: d}
	d.view = s.View()

	strip := newStrip(d)
	ledger, rivals := newLedger(d), newRivals(d)
	details := newDetails(d)
	banner, empty, dock := newBanner(d), newEmpty(d), newDock(d)
	d.status = newStatus(d)
	ground := filled(tokenSheet)
	sheet := container.New(&sheetLayout{d.editor, ground, dock.object, banner.object, empty.object}, ground, d.editor, empty.object, dock.object, banner.object)
	left := container.New(&railLayout{share: 0.62}, ledger.object, hairline(), rivals.pane)
	d.drawer = newDrawer(d)
	d.frame = newFrame(d.kit, strip.object, left, sheet, d.status.object, details.pane, d.drawer.object, remembered(app.Preferences()))
	d.frame.onChange = func(a arrangement) { remember(app.Preferences(), a) }
	d.panels = []panel{strip, ledger, rivals, details, d.drawer, banner, empty, dock, sheetPanel{d, sheet}, d.status, titlePanel{w}}

	w.wireSheet()
	w.makeMenu()
	d.win.SetContent(container.NewStack(d.frame, d.tips.layer))
	d.win.SetPadded(false)
	d.win.Resize(fyne.NewSize(1366, 740))
	d.win.SetMaster()
	d.win.SetCloseIntercept(func() { d.orSaved(d.win.Close) })
	d.win.SetOnDropped(func(at fyne.Position, dropped []fyne.URI) { w.dropped(dropped) })
	d.win.Canvas().SetOnTypedKey(func(e *fyne.KeyEvent) {
		if e.Name == fyne.KeyEscape {
			d.closeTop()
			return
		}
		d.onKey(e.Name)
	})
	app.Settings().AddListener(func(fyne.Settings) { d.repaint() })
	s.Subscribe(w.show)
	return w
}

// Open puts the study at path in place; a problem stands in the banner.
func (w *Window) Open(path string) { w.desk.open(path) }

// OpenExample puts the built-in study in place.
func (w *Window) OpenExample() {
	if err := w.desk.showExample(); err != nil {
		w.desk.complain(err.Error())
	}
}

// ShowAndRun shows the window until it is closed.
func (w *Window) ShowAndRun() {
	w.desk.win.Show()
	w.desk.refresh()
	w.desk.app.Run()
}

// show takes a new view to every panel.
func (w *Window) show(v *session.View) {
	d := w.desk
	before := d.view
	d.view = v
	d.prune()
	if before != v {
		d.status.refused = ""
		if v.Study != before.Study || v.Notice != before.Notice {
			d.status.notice = ""
		}
	}
	if v.Rival.Name != before.Rival.Name {
		d.status.hint = "" // the editor forgets its hover, too
	}
	if v.Result != nil && v.Result != before.Result && before.Running && d.paint == "" {
		d.paint = scene.EffectPaint
	}
	if before.Running && !v.Running && v.Result != nil && v.Result.Effect != nil && d.drawer.page() == "Fit" && v.FitError == nil {
		d.drawer.show("Effect")
	}
	d.refresh()
	if d.fitNext {
		d.fitNext = false
		if len(v.Rival.Diagram.Nodes) > 0 {
			d.post(d.editor.ZoomFit)
		}
	}
}

// wireSheet ties what happens on the sheet to the session.
func (w *Window) wireSheet() {
	d := w.desk
	e := d.editor
	e.OnEdit = func(x study.Edit) { d.do(x) }
	e.OnSelect = func(s scene.Selection) {
		if !d.showing { // else it is only the editor dropping what the new input lacks
			d.pick = s
			d.refresh()
		}
	}
	e.OnKey = d.key
	e.OnMenu = d.sheetMenu
	e.OnOpen = func(t scene.Target) {
		if t.Kind == scene.OnNode || t.Kind == scene.OnEdge || t.Kind == scene.OnArrow {
			d.frame.unfold("right")
		}
	}
	e.OnView = func(scene.View) { d.status.update(); d.trace.note(d) }
	e.OnNaming = func() { d.trace.note(d) }
	e.OnTool = func(scene.Tool) { d.refresh() }
	e.OnRefuse = d.status.refuse
	e.OnCycle = func(c *study.CycleError) { d.refuseCycle(c.Error(), c) }
	e.OnDraft = d.session.Consider
	e.OnHover = func(t scene.Target) { d.hover(t) }
}

// hover says in the status line what the pointer is over.
func (d *desk) hover(t scene.Target) {
	hint := ""
	switch t.Kind {
	case scene.OnArrow:
		hint = d.arrowWords(t.Pair[0], t.Pair[1])
		if a := d.view.Rival.Diagram.Arrow(t.Pair[0], t.Pair[1]); hint == "" && a != nil {
			hint = a.Why
		}
		if hint != "" {
			hint = t.Pair[0] + " → " + t.Pair[1] + ": " + hint
		}
	case scene.OnNode, scene.OnEdge:
		if v := d.view.Study.Variable(t.Node); v != nil {
			hint = v.Name()
			if v.Unit != "" {
				hint += ", " + v.Unit
			}
			if p := d.painting(); p != nil && p.Nodes[t.Node].Words != "" {
				hint += " · " + p.Nodes[t.Node].Words
			}
		}
	}
	if d.status.hint != hint {
		d.status.hint = hint
		d.status.update()
	}
}

// dropped opens the first of the files that were dropped on the window.
func (w *Window) dropped(files []fyne.URI) {
	switch {
	case len(files) == 0:
	case files[0].Extension() == ".arrowroot":
		w.desk.orSaved(func() { w.desk.open(files[0].Path()) })
	default:
		w.desk.loadData(files[0].Path())
	}
}

// sheetPanel gives the editor what to show.
type sheetPanel struct {
	d   *desk
	box *fyne.Container
}

func (p sheetPanel) update() {
	d, v := p.d, p.d.view
	in := scene.Input{
		Study: v.Study, Rival: v.Rival, Question: v.Question, Reading: v.Reading,
		Palette: d.palette(), LitPath: scene.NoPath,
		Dots: d.dots(), PlateCounts: d.plateCounts(), Missing: make(map[string]float64), Findings: make(map[string]string), ArrowFindings: make(map[[2]string]string),
	}
	if v.Table != nil && v.Table.Rows > 0 {
		for _, x := range v.Study.Variables {
			if c := v.Table.Column(x.Column); x.Column != "" && c != nil && c.Missing > 0 {
				in.Missing[x.ID] = float64(c.Missing) / float64(v.Table.Rows)
			}
		}
	}
	for i := range v.Problems {
		if x := &v.Problems[i]; x.Variable != "" && in.Findings[x.Variable] == "" && !d.early(x) {
			in.Findings[x.Variable] = x.Message
		}
	}
	d.markMistakes(&in)
	in.Paint = d.painting()
	d.showing = true
	d.editor.SetInput(in)
	d.editor.Select(d.pick)
	d.showing = false
	p.box.Layout.Layout(p.box.Objects, p.box.Size())
}

// dots are quantiles of every bound numeric column, made once per table and
// binding.
func (d *desk) dots() map[string][]float64 {
	t := d.view.Table
	if t == nil {
		return nil
	}
	if d.strips.table == t && d.strips.study == d.view.Study {
		return d.strips.dots
	}
	old := d.strips
	d.strips = stripCache{table: t, study: d.view.Study, dots: make(map[string][]float64)}
	for _, v := range d.view.Study.Variables {
		c := t.Column(v.Column)
		if v.Column == "" || c == nil {
			continue
		}
		if old.table == t && old.study.Variable(v.ID) == v && old.dots[v.ID] != nil {
			d.strips.dots[v.ID] = old.dots[v.ID]
			continue
		}
		if c.Kind == table.Numeric {
			d.strips.dots[v.ID] = table.Quantiles(divided(c.Numbers, v.Divide), dotCount)
		} else {
			d.strips.dots[v.ID] = table.Quantiles(codes(c.Codes), dotCount)
		}
	}
	return d.strips.dots
}

// stripCache keeps quantiles: a million rows are not sorted for every edit.
type stripCache struct {
	table *table.Table
	study *study.Study
	dots  map[string][]float64
}

// codes are the places of levels as numbers, missing ones left out.
func codes(of []int32) []float64 {
	var out []float64
	for _, c := range of {
		if c >= 0 {
			out = append(out, float64(c))
		}
	}
	return out
}

// plateCounts are the levels found in the rows that are used.
func (d *desk) plateCounts() map[string]int {
	counts := make(map[string]int)
	if m := d.view.Model; m != nil {
		for _, p := range m.Plates {
			counts[p.Name] = len(p.Levels)
		}
	}
	return counts
}

// titlePanel keeps the title and the menus' labels.
type titlePanel struct{ w *Window }

func (p titlePanel) update() {
	d := p.w.desk
	name := "untitled"
	if d.view.Path != "" {
		name = filepath.Base(d.view.Path)
	} else if d.view.Study.Title != "" {
		name = d.view.Study.Title
	}
	if d.view.Dirty {
		name += " — edited"
	}
	d.win.SetTitle("Arrowroot — " + name)
	p.w.refreshMenu()
}

// repaint draws everything again in other colours.
func (d *desk) repaint() {
	d.editor.SetPalette(d.palette())
	d.refresh()
	d.frame.Refresh()
}

// makeMenu builds the menus from the table of commands.
func (w *Window) makeMenu() {
	d := w.desk
	w.items = make(map[*fyne.MenuItem]*command)
	var menus []*fyne.Menu
	var at *fyne.Menu
	for _, c := range d.commands {
		if c.menu == "" {
			continue
		}
		if at == nil || at.Label != c.menu {
			at = fyne.NewMenu(c.menu)
			menus = append(menus, at)
		}
		if c.parted && len(at.Items) > 0 {
			at.Items = append(at.Items, fyne.NewMenuItemSeparator())
		}
		item := fyne.NewMenuItem(c.label, func() {
			if c.ready() {
				c.run()
			}
		})
		item.Shortcut = c.shortcut()
		item.IsQuit = c.id == "quit" // else Fyne adds one that does not ask about unsaved work
		w.items[item] = c
		at.Items = append(at.Items, item)
	}
	w.menu = fyne.NewMainMenu(menus...)
	d.win.SetMainMenu(w.menu)
	w.refreshMenu()
}

// refreshMenu brings labels and states up to date; the bar is drawn again only
// when something has changed.
func (w *Window) refreshMenu() {
	changed := false
	for item, c := range w.items {
		if text := c.text(); item.Label != text {
			item.Label, changed = text, true
		}
		if off := !c.ready(); item.Disabled != off {
			item.Disabled, changed = off, true
		}
	}
	if changed {
		w.menu.Refresh()
	}
}

// railLayout gives the ledger a share of the rail's height and the rivals the
// rest.
type railLayout struct{ share float32 }

func (l *railLayout) Layout(o []fyne.CanvasObject, s fyne.Size) {
	h := s.Height * l.share
	place(o[0], 0, 0, s.Width, h)
	place(o[1], 0, h, s.Width, 1)
	place(o[2], 0, h+1, s.Width, s.Height-h-1)
}

func (l *railLayout) MinSize([]fyne.CanvasObject) fyne.Size { return fyne.NewSize(80, 80) }

// remembered reads the sizes of the last run; a folded part is kept as a
// negative size.
func remembered(p fyne.Preferences) arrangement {
	a := firstArrangement
	read := func(key string, size *float32, folded *bool) {
		x := float32(p.FloatWithFallback(key, float64(*size)))
		*folded = x < 0
		if x < 0 {
			x = -x
		}
		*size = x
	}
	read(prefLeft, &a.Left, &a.LeftFolded)
	read(prefRight, &a.Right, &a.RightFolded)
	read(prefDrawer, &a.Drawer, &a.DrawerFolded)
	return a
}

func remember(p fyne.Preferences, a arrangement) {
	write := func(key string, size float32, folded bool) {
		if folded {
			size = -size
		}
		p.SetFloat(key, float64(size))
	}
	write(prefLeft, a.Left, a.LeftFolded)
	write(prefRight, a.Right, a.RightFolded)
	write(prefDrawer, a.Drawer, a.DrawerFolded)
}
