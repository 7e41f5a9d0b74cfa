package ui

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"

	"arrowroot/canvas/scene"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

// commandsOf is the table of everything the window can be told to do.
func commandsOf(d *desk) commandTable {
	pickedNode := func() bool { return d.picked() != "" }
	onSheet := func() bool { return d.picked() != "" && d.onSheet(d.picked()) }
	oneNote := func() bool { return len(d.pick.Nodes) == 0 && len(d.pick.Notes) == 1 }
	hasPick := func() bool { return !d.pick.Empty() }
	fitted := func() bool { return d.view.Result != nil }
	tool := func(t scene.Tool) func() {
		return func() {
			d.editor.SetTool(t)
			d.win.Canvas().Focus(d.editor) // Escape leaves the tool
			d.refresh()
		}
	}
	page := func(name string) func() { return func() { d.drawer.show(name) } }
	paint := func(kind scene.PaintKind) func() { return func() { d.setPaint(kind) } }
	return commandTable{
		{id: "new", menu: "Study", label: "New", keys: "Ctrl+N", run: d.newStudy},
		{id: "open", menu: "Study", label: "Open …", keys: "Ctrl+O", run: d.openDialog},
		{id: "example", menu: "Study", label: "Open the example", run: d.openExample},
		{id: "save", menu: "Study", label: "Save", keys: "Ctrl+S", run: d.save, parted: true},
		{id: "save-as", menu: "Study", label: "Save as …", keys: "Ctrl+Shift+S", run: d.saveDialog},
		{id: "quit", menu: "Study", label: "Quit", keys: "Ctrl+Q", run: func() { d.orSaved(d.app.Quit) }, parted: true},

		{id: "undo", menu: "Edit", label: "Undo", keys: "Ctrl+Z", live: func() string { return withLabel("Undo", d.view.Undo) },
			on: func() bool { return d.view.Undo != "" || d.typing() }, run: func() { d.orText(&fyne.ShortcutUndo{}, d.session.Undo) }},
		{id: "redo", menu: "Edit", label: "Redo", keys: "Ctrl+Shift+Z", live: func() string { return withLabel("Redo", d.view.Redo) },
			on: func() bool { return d.view.Redo != "" || d.typing() }, run: func() { d.orText(&fyne.ShortcutRedo{}, d.session.Redo) }},
		{id: "copy", menu: "Edit", label: "Copy", keys: "Ctrl+C", parted: true, run: func() { d.orText(&fyne.ShortcutCopy{Clipboard: d.app.Clipboard()}, d.copyArrows) }},
		{id: "cut", menu: "Edit", label: "Cut", keys: "Ctrl+X", run: func() {
			d.orText(&fyne.ShortcutCut{Clipboard: d.app.Clipboard()}, func() { d.copyArrows(); d.deletePicked() })
		}},
		{id: "paste", menu: "Edit", label: "Paste", keys: "Ctrl+V", run: func() { d.orText(&fyne.ShortcutPaste{Clipboard: d.app.Clipboard()}, d.pasteArrows) }},
		{id: "select-all", menu: "Edit", label: "Select all", keys: "Ctrl+A", run: func() { d.orText(&fyne.ShortcutSelectAll{}, d.selectAll) }},
		{id: "delete", menu: "Edit", label: "Take off the sheet", keys: "Delete", on: hasPick, run: d.deletePicked},
		{id: "rename", menu: "Edit", label: "Rename", keys: "F2", on: func() bool { return onSheet() || oneNote() }, live: func() string {
			if oneNote() {
				return "Change the note"
			}
			return "Rename"
		}, run: func() {
			if oneNote() {
				d.editor.StartNote(d.pick.Notes[0])
				return
			}
			d.editor.StartRename(d.picked())
		}},
		{id: "finder", menu: "Edit", label: "Type a command …", keys: "Ctrl+K", parted: true, run: d.find},

		{id: "find", menu: "Edit", label: "Find a variable …", keys: "Ctrl+F", run: d.find},

		{id: "variable", menu: "Sheet", label: "New variable", keys: "Ctrl+Shift+V", run: d.newVariable},
		{id: "place-all", menu: "Sheet", label: "Place all variables", on: func() bool { return len(d.offSheet()) > 0 }, run: d.placeAll},
		{id: "arrange", menu: "Sheet", label: "Arrange anew", keys: "Ctrl+L", run: d.arrange},
		{id: "tool-select", menu: "Sheet", label: "Select", keys: "S", run: tool(scene.SelectTool), parted: true},
		{id: "tool-variable", menu: "Sheet", label: "Draw variables", keys: "V", run: tool(scene.VariableTool)},
		{id: "tool-arrow", menu: "Sheet", label: "Draw arrows", keys: "A", run: tool(scene.ArrowTool)},
		{id: "tool-cause", menu: "Sheet", label: "Draw common causes", keys: "C", run: tool(scene.CauseTool)},
		{id: "tool-plate", menu: "Sheet", label: "Draw plates", keys: "P", run: tool(scene.PlateTool)},
		{id: "tool-note", menu: "Sheet", label: "Write notes", keys: "N", run: tool(scene.NoteTool)},
		{id: "zoom-fit", menu: "Sheet", label: "Show all", keys: "Ctrl+1", parted: true, run: func() { d.editor.ZoomFit() }},
		{id: "zoom-reset", menu: "Sheet", label: "Zoom to 100 %", keys: "Ctrl+0", run: func() { d.editor.ZoomReset() }},
		{id: "zoom-in", menu: "Sheet", label: "Zoom in", keys: "Ctrl++", run: func() { d.editor.ZoomBy(1.25) }},
		{id: "zoom-out", menu: "Sheet", label: "Zoom out", keys: "Ctrl+−", run: func() { d.editor.ZoomBy(0.8) }},
		{id: "left", menu: "Sheet", label: "Ledger and rivals", keys: "Ctrl+B", parted: true, run: func() { d.frame.fold("left") }},
		{id: "right", menu: "Sheet", label: "Details", keys: "Ctrl+D", run: func() { d.frame.fold("right") }},
		{id: "drawer", menu: "Sheet", label: "Drawer", keys: "Ctrl+J", run: func() { d.frame.fold("drawer"); d.drawer.update() }},
		{id: "shade", menu: "Sheet", label: "Dark colours", live: func() string {
			if d.dark() {
				return "Light colours"
			}
			return "Dark colours"
		}, run: d.turnShade},

		{id: "data", menu: "Data", label: "Open data …", keys: "Ctrl+Shift+O", run: d.dataDialog},
		{id: "bind", menu: "Data", label: "Bind columns …", on: func() bool { return d.view.Table != nil }, run: d.bindDialog},
		{id: "columns", menu: "Data", label: "Make variables of all columns", on: func() bool { return len(d.freeColumns()) > 0 }, run: d.adoptColumns},
		{id: "remove-data", menu: "Data", label: "Remove the table", on: func() bool { return d.data() != nil }, live: func() string {
			if t := d.data(); t != nil {
				return "Remove " + t.Name
			}
			return "Remove the table"
		}, run: func() { d.do(study.RemoveData{Name: d.data().Name}) }},
		{id: "unmeasured", menu: "Data", label: "Measured or not", keys: "M", on: pickedNode, parted: true, run: func() {
			id := d.picked()
			d.changeVariable(id, func(v *study.Variable) { v.Unmeasured = !v.Unmeasured })
		}},

		{id: "truth", menu: "Data", label: "Measured with error", on: d.canRecord, run: func() { d.drawTruth(d.picked()) }},
		{id: "indicator", menu: "Data", label: "Response indicator", on: d.canIndicate, run: func() { d.drawIndicator(d.picked()) }},
		{id: "limits", menu: "Data", label: "Limits the rows, or not", keys: "L", on: onSheet, run: func() { d.limitRows(d.picked()) }},

		{id: "question", menu: "Reading", label: "Ask …", keys: "Ctrl+E", run: func() { d.askQuestion(d.capsule) }},
		{id: "another-question", menu: "Reading", label: "Ask another question …", on: func() bool { return d.view.Question != nil }, run: func() { d.askAnother(d.capsule) }},
		{id: "next-question", menu: "Reading", label: "Next question", keys: "Ctrl+Shift+E", on: func() bool { return len(d.view.Study.Questions) > 1 }, run: d.nextQuestion},
		{id: "remove-question", menu: "Reading", label: "Remove this question", on: func() bool { return d.view.Question != nil }, run: func() {
			d.do(study.RemoveQuestion{At: d.view.QuestionAt})
		}},
		{id: "exposure", menu: "Reading", label: "Make it the exposure", keys: "X", on: onSheet, run: func() { d.setExposure(d.picked()) }},
		{id: "outcome", menu: "Reading", label: "Make it the outcome", keys: "Y", on: onSheet, run: func() { d.setOutcome(d.picked()) }},
		{id: "hold", menu: "Reading", label: "Hold, or leave free", keys: "H", on: onSheet, run: func() { d.hold(d.picked(), !d.held(d.picked())) }},
		{id: "hold-them", menu: "Reading", label: "Hold what the reading says", on: d.proposes, run: func() { d.holdAll(d.names(d.view.Reading.Verdict.Propose)) }},
		{id: "hold-none", menu: "Reading", label: "Leave all free", on: func() bool { return d.view.Question != nil && len(d.view.Question.Held) > 0 }, run: func() { d.holdAll(nil) }},
		{id: "aside", menu: "Reading", label: "Findings set aside …", on: d.hasAside, run: d.showAside},
		{id: "page-reading", menu: "Reading", label: "Reading", keys: "Alt+1", run: page("Reading"), parted: true},
		{id: "page-statement", menu: "Reading", label: "Statement", keys: "Alt+2", run: page("Statement")},

		{id: "fit", menu: "Fit", label: "Fit", live: func() string {
			switch {
			case d.view.Running:
				return "Stop the fit"
			case d.view.Result != nil:
				return "Fit again"
			}
			return "Fit"
		}, keys: "Ctrl+Return", on: func() bool { return d.view.Running || d.canFit() }, run: func() {
			if d.view.Running {
				d.session.Cancel()
				return
			}
			d.fit(false)
		}},
		{id: "stop", menu: "Fit", label: "Stop and keep the draws", keys: "Ctrl+.", on: func() bool { return d.view.Running }, run: d.session.Cancel},
		{id: "paint", menu: "", label: "Paint …", on: fitted, run: d.paintMenu},
		{id: "paint-effect", menu: "Fit", label: "Paint the effect", on: fitted, run: paint(scene.EffectPaint), parted: true},
		{id: "paint-learned", menu: "Fit", label: "Paint what was learned", on: fitted, run: paint(scene.LearnedPaint)},
		{id: "paint-fit", menu: "Fit", label: "Paint what the model reproduces", on: fitted, run: paint(scene.FitPaint)},
		{id: "paint-trust", menu: "Fit", label: "Paint the trust", on: fitted, run: paint(scene.TrustPaint)},
		{id: "paint-none", menu: "Fit", label: "Paint nothing", on: fitted, run: paint("")},
		{id: "page-fit", menu: "Fit", label: "Fit page", keys: "Alt+3", run: page("Fit"), parted: true},
		{id: "page-checks", menu: "Fit", label: "Checks", keys: "Alt+4", run: page("Checks")},
		{id: "page-effect", menu: "Fit", label: "Effect", keys: "Alt+5", run: page("Effect")},

		{id: "copy-rival", menu: "Rivals", label: "Copy as a rival", keys: "Ctrl+R", run: d.copyRival},
		{id: "new-rival", menu: "Rivals", label: "New empty rival", run: d.newRival},
		{id: "next-rival", menu: "Rivals", label: "Next rival", keys: "Ctrl+PageDown", on: func() bool { return len(d.view.Study.Rivals) > 1 }, run: d.nextRival},
		{id: "page-rivals", menu: "Rivals", label: "Rivals side by side", keys: "Alt+6", run: page("Rivals"), parted: true},
		{id: "compare", menu: "Rivals", label: "Which rival predicts better?", on: func() bool { return d.canCompare() && !d.view.Prediction.Running }, run: func() { d.drawer.show("Rivals"); d.session.Compare() }},

		{id: "svg", menu: "Share", label: "Save the sheet as SVG …", run: d.svgDialog},
		{id: "arrow-table", menu: "Share", label: "Save the arrow table …", run: d.arrowsDialog},
		{id: "report", menu: "Share", label: "Save a report …", run: d.reportDialog},
		{id: "copy-statement", menu: "Share", label: "Copy the statement", on: func() bool { return d.view.Statement != nil }, run: d.copyStatement},

		{id: "keys", menu: "Help", label: "Keys", keys: "F1", run: d.showKeys},
		{id: "about", menu: "Help", label: "About Arrowroot", run: d.about},
	}
}

func withLabel(verb, label string) string {
	if label == "" {
		return verb
	}
	return verb + " " + lower(label)
}

// data is the table of the present rival; nil = none.
func (d *desk) data() *study.Data { return d.view.Study.DataOf(d.rival()) }

// proposes reports whether the reading has a set to hold.
func (d *desk) proposes() bool {
	return d.view.Reading != nil && d.view.Reading.Verdict.HasProposal && d.view.Reading.Verdict.Kind != causal.Incomplete
}

// typing reports whether the focus is in a text.
func (d *desk) typing() bool { return d.entry() != nil }

func (d *desk) entry() fyne.Shortcutable {
	switch e := d.win.Canvas().Focused().(type) {
	case *field:
		return e
	case *widget.Entry:
		return e
	case interface {
		fyne.Shortcutable
		SelectedText() string
	}:
		return e
	}
	return nil
}

// orText gives a shortcut to the text that has the focus, else does it to the
// study: menu shortcuts come before the entry that has the focus.
func (d *desk) orText(s fyne.Shortcut, otherwise func()) {
	if e := d.entry(); e != nil {
		e.TypedShortcut(s)
		return
	}
	otherwise()
}
