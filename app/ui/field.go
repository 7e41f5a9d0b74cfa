package ui

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A field is an entry that hands over its text when the user is done with it:
// on Return, or as the focus leaves. Escape puts the old text back.
type field struct {
	widget.Entry
	kit      *kit
	was      string
	commit   func(string)
	escape   func()
	typing   func(string)
	handled  func(*fyne.KeyEvent) bool // keys that do not reach the text
	minWidth float32
	pasting  func(string) string // what becomes of pasted text; nil = nothing
}

func (k *kit) field(text, hint string, commit func(string)) *field {
	f := &field{kit: k, was: text, commit: commit}
	f.ExtendBaseWidget(f)
	f.Text = text
	f.PlaceHolder = hint
	f.Wrapping = fyne.TextWrapOff
	f.Scroll = fyne.ScrollNone
	f.minWidth = 48
	f.OnChanged = func(s string) {
		f.fit()
		if f.typing != nil {
			f.typing(s)
		}
	}
	f.OnSubmitted = func(string) { f.done() }
	return f
}

// Resize implements fyne.CanvasObject.
func (f *field) Resize(size fyne.Size) {
	f.Entry.Resize(size)
	f.fit()
}

// fit lets a text scroll that is longer than its line, which else would be
// drawn beyond it. Every other field leaves the wheel to the pane it stands in.
func (f *field) fit() {
	if f.MultiLine || f.Size().Width <= 0 {
		return
	}
	scroll := fyne.ScrollNone
	if fyne.MeasureText(f.Text, theme.TextSize(), f.TextStyle).Width+2*theme.InnerPadding() > f.Size().Width {
		scroll = fyne.ScrollHorizontalOnly
	}
	if f.Scroll != scroll {
		f.Scroll = scroll
		f.Refresh()
	}
}

// note is a field of several lines; Return makes a new line.
func (k *kit) note(text, hint string, commit func(string)) *field {
	f := k.field(text, hint, commit)
	f.MultiLine = true
	f.Wrapping = fyne.TextWrapWord
	f.SetMinRowsVisible(4)
	return f
}

// done hands a changed text over. It is posted: the focus must have settled
// before a panel is rebuilt.
func (f *field) done() {
	text := strings.TrimSpace(f.Text)
	if text == f.was || f.commit == nil {
		return
	}
	f.was = text
	f.kit.post(func() { f.commit(text) })
}

func (f *field) FocusLost() {
	f.wrap(fyne.TextWrapWord)
	f.Entry.FocusLost()
	f.done()
}

func (f *field) FocusGained() {
	f.wrap(fyne.TextWrapBreak)
	f.Entry.FocusGained()
	reveal(f)
}

// wrap breaks the lines of a note at words while it is read and at letters
// while it is typed: wrapped at words, Fyne 2.8 loses a space that is typed at
// the end of a line.
func (f *field) wrap(how fyne.TextWrap) {
	if f.MultiLine && f.Wrapping != how {
		f.Wrapping = how
		f.Refresh()
	}
}

func (f *field) TypedKey(e *fyne.KeyEvent) {
	if f.handled != nil && f.handled(e) {
		return
	}
	if e.Name == fyne.KeyEscape {
		if f.Text != f.was {
			f.SetText(f.was)
		}
		if f.escape != nil {
			f.escape()
		} else {
			f.kit.closeTop()
		}
		return
	}
	f.Entry.TypedKey(e)
}

// TypedShortcut lets pasted text be changed on its way in.
func (f *field) TypedShortcut(s fyne.Shortcut) {
	if p, ok := s.(*fyne.ShortcutPaste); ok && f.pasting != nil {
		s = &fyne.ShortcutPaste{Clipboard: oneTime(f.pasting(p.Clipboard.Content()))}
	}
	f.Entry.TypedShortcut(s)
}

// oneTime is a clipboard that holds one text.
type oneTime string

func (t oneTime) Content() string   { return string(t) }
func (t oneTime) SetContent(string) {}

func (f *field) MinSize() fyne.Size {
	m := f.Entry.MinSize()
	m.Width = f.minWidth // a hint may be longer than the place it stands in
	return m
}

// A chooser is a list to pick one word from; Escape closes the popover it
// stands in.
type chooser struct {
	widget.Select
	kit *kit
}

func (k *kit) choice(options []string, chosen string, pick func(string)) *chooser {
	s := &chooser{kit: k}
	s.ExtendBaseWidget(s)
	s.Options = options
	s.Selected = chosen
	s.PlaceHolder = "choose"
	s.OnChanged = func(word string) {
		k.post(func() { pick(word) })
	}
	return s
}

func (s *chooser) TypedKey(e *fyne.KeyEvent) {
	if e.Name == fyne.KeyEscape {
		s.kit.closeTop()
		return
	}
	s.Select.TypedKey(e)
}

func (s *chooser) FocusGained() {
	s.Select.FocusGained()
	reveal(s)
}

func (s *chooser) MinSize() fyne.Size { return fyne.NewSize(48, s.Select.MinSize().Height) }
