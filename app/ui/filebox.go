package ui

import (
	"os"
	"path/filepath"
	"slices"
	"strings"

	"fyne.io/fyne/v2"
)

// fileBox asks for a place in the file system. It is a path to type, with a
// list of what is in its folder: arrow keys walk the list, Return enters a
// folder or takes a file, Escape closes. Everything works without a mouse.
type fileBox struct {
	d       *desk
	opening bool
	endings []string // what is listed besides folders; nil = everything
	use     func(path string)

	pop     *popover
	entry   *field
	list    *pane
	note    *prose
	take    *press
	rows    []fileRow
	at      int    // in rows; -1 = the path as typed
	replace string // the file that a second Return would replace
}

type fileRow struct {
	name   string
	folder bool
}

const fileRows = 11

// askFile opens the box: name is proposed for saving.
func (d *desk) askFile(title, verb string, opening bool, name string, endings []string, use func(path string)) *fileBox {
	f := &fileBox{d: d, opening: opening, endings: endings, use: use, list: newPane(0, 0, 0), note: newProse(sizeSmall)}
	f.entry = d.field(f.folder()+string(filepath.Separator)+name, "", nil)
	f.entry.typing = func(string) { f.search() }
	f.entry.OnSubmitted = func(string) { f.submit() }
	f.entry.escape = func() { f.pop.close() }
	f.entry.handled = func(e *fyne.KeyEvent) bool {
		switch e.Name {
		case fyne.KeyDown:
			f.move(1)
		case fyne.KeyUp:
			f.move(-1)
		default:
			return false
		}
		return true
	}
	f.take = d.primary(verb, f.submit)
	const width = 560
	content := column(8,
		bold(title),
		f.entry,
		fixed(0, fileRows*24, f.list),
		row(8, stretch(f.note), d.plain("Cancel", func() { f.pop.close() }), f.take))
	area := d.win.Canvas().Size()
	f.pop = d.kit.pop(d.win.Canvas(), content, fyne.NewPos((area.Width-width)/2, 64), width)
	f.search()
	d.win.Canvas().Focus(f.entry)
	f.entry.CursorColumn = len([]rune(f.entry.Text))
	f.entry.Refresh()
	return f
}

// folder is where the asking starts: beside the study, or where the program
// was started.
func (f *fileBox) folder() string {
	if p := f.d.view.Path; p != "" {
		return filepath.Dir(p)
	}
	if f.d.lastFolder != "" {
		return f.d.lastFolder
	}
	if here, err := os.Getwd(); err == nil && here != "/" {
		return here
	}
	home, _ := os.UserHomeDir()
	return home
}

// search lists what the path as typed could mean.
func (f *fileBox) search() {
	f.at, f.replace = -1, ""
	folder, part := filepath.Split(f.path())
	f.rows = f.rows[:0]
	f.note.set()
	entries, err := os.ReadDir(or(folder, "."))
	if err != nil {
		f.note.set(span{text: "There is no folder " + folder, token: tokenFault})
	}
	if parent := filepath.Dir(filepath.Clean(folder)); part == "" && parent != filepath.Clean(folder) {
		f.rows = append(f.rows, fileRow{"..", true})
	}
	if !f.opening {
		part = "" // a new name is no search
	}
	for _, folders := range []bool{true, false} {
		for _, e := range entries {
			name := e.Name()
			if e.IsDir() != folders || strings.HasPrefix(name, ".") && !strings.HasPrefix(part, ".") ||
				!strings.HasPrefix(strings.ToLower(name), strings.ToLower(part)) {
				continue
			}
			if !folders && f.endings != nil && !slices.Contains(f.endings, strings.ToLower(filepath.Ext(name))) {
				continue
			}
			f.rows = append(f.rows, fileRow{name, folders})
		}
	}
	f.show()
}

func (f *fileBox) show() {
	var objects []fyne.CanvasObject
	for i, r := range f.rows {
		if i == 400 {
			objects = append(objects, small("and more: type the beginning of the name"))
			break
		}
		token, name := tokenInk, r.name
		if r.folder {
			token, name = tokenMuted, r.name+string(filepath.Separator)
		}
		p := f.d.press(newLabel(name, sizeBody, token, fyne.TextStyle{}).shrinkTo(60), func(p *press) skin {
			if p.selected {
				return skin{fill: tokenTint, radius: 4}
			}
			return skin{radius: 4}
		}, func() { f.pick(r) })
		p.padX, p.padY, p.minH = 8, 2, 24
		p.selected = i == f.at
		objects = append(objects, p)
	}
	if len(objects) == 0 {
		objects = append(objects, padded(8, 6, 0, para("Nothing here that could be opened.", tokenMuted)))
	}
	f.list.fill(nil, objects...)
}

func (f *fileBox) move(by int) {
	f.at = min(max(f.at+by, -1), len(f.rows)-1)
	f.show()
	f.list.scroll.ScrollToOffset(fyne.NewPos(0, max(0, float32(f.at-fileRows+2)*24)))
}

// path is what is typed. Since the entry starts with a folder, a second root
// ("//", or "/~") begins a path of its own.
func (f *fileBox) path() string {
	text := f.entry.Text
	if i := max(strings.LastIndex(text, "//"), strings.LastIndex(text, "/~")); i >= 0 {
		text = text[i+1:]
	}
	return f.d.path(text)
}

// pick enters a folder or takes a file.
func (f *fileBox) pick(r fileRow) {
	folder := filepath.Dir(f.path() + "x")
	full := filepath.Join(folder, r.name)
	if r.folder {
		full += string(filepath.Separator)
	}
	f.entry.SetText(full)
	f.entry.CursorColumn = len([]rune(full))
	f.d.win.Canvas().Focus(f.entry)
	f.search()
	if !r.folder && f.opening {
		f.submit()
	}
}

func (f *fileBox) submit() {
	if f.at >= 0 && f.at < len(f.rows) {
		f.pick(f.rows[f.at])
		return
	}
	path := f.path()
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir():
		if !strings.HasSuffix(path, string(filepath.Separator)) {
			path += string(filepath.Separator)
		}
		f.entry.SetText(path)
		f.entry.CursorColumn = len([]rune(path))
		f.search()
		return
	case f.opening && err != nil:
		f.note.set(span{text: "There is no file " + filepath.Base(path), token: tokenFault})
		return
	case !f.opening && err == nil && f.replace != path:
		f.replace = path
		f.note.set(span{text: filepath.Base(path) + " is there already: once more to replace it", token: tokenConfound})
		return
	}
	f.d.lastFolder = filepath.Dir(path)
	f.pop.close()
	f.d.post(func() { f.use(path) })
}
