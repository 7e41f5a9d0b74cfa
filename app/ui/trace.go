package ui

import (
	"encoding/json"
	"os"
	"slices"
	"time"

	"fyne.io/fyne/v2"

	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
)

// TraceVariable names the environment variable that turns the trace on: the
// file it names gets a line of JSON whenever what the window says has changed.
// It is a seam for the scripted test of the real window, which has no other
// way to read words off the screen; nothing in the program reads it.
const TraceVariable = "ARROWROOT_TRACE"

// A trace appends to a file; nil is no trace.
type trace struct {
	file    *os.File
	last    string
	pending bool
	waited  int // for frames
}

// traceDelay lets a frame be painted first: Fyne knows the place of a new
// control only then.
const traceDelay = 80 * time.Millisecond

func newTrace() *trace {
	path := os.Getenv(TraceVariable)
	if path == "" {
		return nil
	}
	f, err := os.OpenFile(path, os.O_APPEND|os.O_CREATE|os.O_WRONLY, 0o644)
	if err != nil {
		return nil
	}
	return &trace{file: f}
}

// said is one line: what the window says, and where to click.
type said struct {
	Verdict  string            `json:"verdict"`            // the sentence of the verdict strip
	Kind     string            `json:"kind"`               // confounded, readable, over-held, no set, no effect, incomplete
	Propose  []string          `json:"propose,omitempty"`  // what the sentence's button would hold
	Question string            `json:"question,omitempty"` // "hedge on bees, 40 → 90 m/ha, these rows"
	Held     []string          `json:"held"`
	Rows     string            `json:"rows,omitempty"`   // "237 of 252 rows …"
	Trust    string            `json:"trust,omitempty"`  // sound, caution, unusable
	Stale    bool              `json:"stale,omitempty"`  // the result belongs to an earlier version
	Effect   []string          `json:"effect,omitempty"` // the sentences of the Effect page
	Checks   []string          `json:"checks,omitempty"` // whether the fit reproduces its data, in sentences
	Rivals   []string          `json:"rivals,omitempty"` // which predicts better, in sentences, or why that cannot be said
	Paint    string            `json:"paint,omitempty"`
	Running  bool              `json:"running,omitempty"`
	FitError string            `json:"fitError,omitempty"`
	Status   string            `json:"status,omitempty"`
	Focus    string            `json:"focus,omitempty"`   // what the keyboard talks to: sheet, entry, or the control's words
	Popover  bool              `json:"popover,omitempty"` // something lies over the window: Escape closes it
	Banner   string            `json:"banner,omitempty"`
	Selected []string          `json:"selected,omitempty"`
	Rival    string            `json:"rival"`
	Page     string            `json:"page"`                 // of the drawer
	Subject  string            `json:"subject,omitempty"`    // of the Reading page
	Lines    []string          `json:"lines,omitempty"`      // the sentences that it lists, the first few
	Left     bool              `json:"left,omitempty"`       // more is being read
	InHand   string            `json:"considered,omitempty"` // what letting go of the arrow in the hand would draw
	Path     string            `json:"path,omitempty"`
	Dirty    bool              `json:"dirty,omitempty"`
	Undo     string            `json:"undo,omitempty"`
	Table    int               `json:"table,omitempty"` // rows of the open table
	Notes    []string          `json:"notes,omitempty"` // what is written on the sheet
	Nodes    map[string][2]int `json:"nodes"`           // centres in pixels of the window
	Buttons  map[string][2]int `json:"buttons"`         // centres of a few controls, same
}

var kindWords = []string{"incomplete", "confounded", "readable", "over-held", "no set", "no effect"}

// note writes a line in a moment, if anything has changed by then.
func (t *trace) note(d *desk) {
	if t == nil || t.pending {
		return
	}
	t.pending = true
	time.AfterFunc(traceDelay, func() {
		d.post(func() {
			t.pending = false
			for _, o := range d.marks() {
				if o.Visible() && fyne.CurrentApp().Driver().CanvasForObject(o) == nil && t.waited < 20 {
					t.waited++ // not painted yet: its place is not known
					t.note(d)
					return
				}
			}
			t.waited = 0
			t.write(d)
		})
	})
}

func (t *trace) write(d *desk) {
	line, err := json.Marshal(d.said())
	if err != nil || string(line) == t.last {
		return
	}
	t.last = string(line)
	_, _ = t.file.Write(append(line, '\n'))
}

// said is what the window says at this moment.
func (d *desk) said() said {
	v := d.view
	s := said{
		Status: d.status.says.text, Running: v.Running, Stale: v.Stale, Paint: string(d.paint),
		Rival: v.Rival.Name, Page: d.drawer.page(), Path: v.Path, Dirty: v.Dirty, Undo: v.Undo,
		Selected: slices.Clone(d.pick.Nodes), Popover: d.win.Canvas().Overlays().Top() != nil, Focus: d.focus(), Held: []string{},
		Nodes: make(map[string][2]int), Buttons: make(map[string][2]int),
	}
	if p, ok := d.drawer.pages[0].(*readingPage); ok {
		s.Subject, s.InHand, s.Left = p.chosen, v.Considered, v.Findings == nil || !v.Findings.Done
		for i := range p.lines[:min(len(p.lines), 12)] {
			s.Lines = append(s.Lines, p.lines[i].text)
		}
	}
	for _, a := range d.pick.Arrows {
		s.Selected = append(s.Selected, a[0]+" → "+a[1])
	}
	if v.Question != nil {
		s.Question = words.Question(v.Study, v.Question)
		s.Held = append(s.Held, v.Question.Held...)
	}
	if v.Reading != nil {
		s.Verdict, s.Kind = v.Reading.Verdict.Sentence, kindWords[v.Reading.Verdict.Kind]
		if v.Reading.Verdict.HasProposal {
			s.Propose = d.names(v.Reading.Verdict.Propose)
		}
	}
	if v.Model != nil && v.Model.Rows.Read > 0 {
		s.Rows = words.Rows(v.Model.Rows)
	}
	if v.Table != nil {
		s.Table = v.Table.Rows
	}
	if r := v.Result; r != nil {
		s.Trust = r.Trust().Verdict.String()
		if r.Effect != nil {
			s.Effect = words.Effect(v.Study, r)
		}
	}
	if v.Checks != nil {
		s.Checks = words.Checks(v.Checks)
	}
	s.Rivals = d.predictionSaid()
	if v.FitError != nil {
		s.FitError = v.FitError.Error()
	}
	for _, p := range d.panels {
		if b, ok := p.(*banner); ok {
			s.Banner = b.text
		}
	}
	for _, n := range v.Rival.Layout.Notes {
		s.Notes = append(s.Notes, n.Text)
	}
	scale := d.win.Canvas().Scale()
	driver := fyne.CurrentApp().Driver()
	origin := driver.AbsolutePositionForObject(d.editor)
	for id, at := range d.editor.Input().At {
		s.Nodes[id] = pixels(origin, d.editor.View().Out(at), scale)
	}
	for name, o := range d.marks() {
		if o.Visible() && driver.CanvasForObject(o) != nil {
			at, size := driver.AbsolutePositionForObject(o), o.Size()
			s.Buttons[name] = pixels(at, draw.Point{X: float64(size.Width / 2), Y: float64(size.Height / 2)}, scale)
		}
	}
	size := d.editor.Size()
	s.Buttons["sheet"] = pixels(origin, draw.Point{X: float64(size.Width / 2), Y: float64(size.Height / 2)}, scale)
	return s
}

// focus names what has the keyboard.
func (d *desk) focus() string {
	switch f := d.win.Canvas().Focused().(type) {
	case nil:
		return ""
	case *canvas.Editor:
		return "sheet"
	case *press:
		if l, ok := f.content.(*label); ok {
			return l.text
		}
		return or(f.key, f.tip)
	default:
		return "entry"
	}
}

func pixels(origin fyne.Position, p draw.Point, scale float32) [2]int {
	return [2]int{int((origin.X + float32(p.X)) * scale), int((origin.Y + float32(p.Y)) * scale)}
}

// marks are the controls whose places the trace tells.
func (d *desk) marks() map[string]fyne.CanvasObject {
	m := map[string]fyne.CanvasObject{"question": d.capsule, "paint": d.painter}
	for _, p := range d.panels {
		switch p := p.(type) {
		case *strip:
			m["fit"] = p.fit
			m["hold them"] = p.action
		case *banner:
			for _, x := range p.says.spans {
				if b, ok := x.object.(*press); ok && p.object.Visible() {
					if l, ok := b.content.(*label); ok {
						m["banner "+l.text] = b
					}
				}
			}
		case *drawer:
			for i, t := range p.tabs.items {
				m["tab "+p.pages[i].name()] = t
			}
			for _, x := range p.pages {
				if c, ok := x.(*checksPage); ok && p.page() == c.name() {
					for i, o := range c.list.live {
						m[c.list.rows[i].key] = o
					}
				}
			}
			for _, x := range p.pages {
				if c, ok := x.(*rivalsPage); ok && p.page() == c.name() {
					if b, ok := c.pane.keys["compare"].(*press); ok {
						m["compare"] = b
					}
				}
			}
			if r, ok := p.pages[0].(*readingPage); ok && p.page() == r.name() {
				for i, o := range r.nav.live {
					m["read "+r.nav.rows[i].key] = o
				}
			}
		}
	}
	return m
}
