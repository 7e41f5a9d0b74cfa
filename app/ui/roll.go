package ui

import (
	"sort"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A roll is a scrolling column whose rows are made only as they come into view,
// so that a thousand cost no more than a screenful. Up, Down, Home, End and the
// page keys walk from row to row. Rebuilt, it keeps its scroll position, and
// the keyboard stays with the row of the same key.
//
// To measure a thousand sentences takes longer than a hand waits, so rows are
// as high as they are guessed to be until they are made.
type roll struct {
	widget.BaseWidget
	padX, padY, gap float32
	onLeft          func() // Left in a row
	scroll          *container.Scroll
	content         *fyne.Container
	rows            []rollRow
	tops            []float32                 // of each row, then the end
	live            map[int]fyne.CanvasObject // rows that are made
	width           float32                   // that tops are for
}

// A rollRow is a row before it is made.
type rollRow struct {
	key   string                      // of a row that takes the keyboard; "" = it does not
	guess func(width float32) float32 // of its height
	build func() fyne.CanvasObject
}

func newRoll(padX, padY, gap float32) *roll {
	r := &roll{padX: padX, padY: padY, gap: gap, live: make(map[int]fyne.CanvasObject)}
	r.content = container.New(rollLayout{r})
	r.scroll = container.NewVScroll(r.content)
	r.scroll.OnScrolled = func(fyne.Position) { r.show() }
	r.ExtendBaseWidget(r)
	return r
}

// still is a row of something that is made already and takes no keyboard.
func still(o fyne.CanvasObject) rollRow {
	return rollRow{guess: func(w float32) float32 { return heightFor(o, w) }, build: func() fyne.CanvasObject { return o }}
}

// fill replaces the rows.
func (r *roll) fill(rows ...rollRow) {
	focused := ""
	c := fyne.CurrentApp().Driver().CanvasForObject(r)
	if c != nil {
		for i, o := range r.live {
			if f, ok := o.(fyne.Focusable); ok && c.Focused() == f {
				focused = r.rows[i].key
			}
		}
	}
	r.rows = rows
	clear(r.live)
	r.content.Objects = nil
	r.width = 0
	r.arrange()
	if focused == "" {
		return
	}
	if i := r.find(focused); i >= 0 {
		o := r.make(i)
		if p, ok := o.(*press); ok {
			p.byMouse = true // it had its ring, or not, before; a rebuild does not add one
		}
		c.Focus(o.(fyne.Focusable))
		r.show()
	} else {
		c.Unfocus()
	}
}

func (r *roll) find(key string) int {
	for i := range r.rows {
		if key != "" && r.rows[i].key == key {
			return i
		}
	}
	return -1
}

// focus gives the keyboard to the row of a key, or to the first that takes it
// where there is no such row.
func (r *roll) focus(key string) bool {
	i := r.find(key)
	for j := 0; i < 0 && j < len(r.rows); j++ {
		if r.rows[j].key != "" {
			i = j
		}
	}
	return i >= 0 && r.focusRow(i)
}

func (r *roll) focusRow(i int) bool {
	c := fyne.CurrentApp().Driver().CanvasForObject(r)
	f, ok := r.make(i).(fyne.Focusable)
	if !ok || c == nil {
		return false
	}
	r.bring(i)
	c.Focus(f)
	return true
}

// step moves the keyboard from a row by so many rows that take it.
func (r *roll) step(from, by int) {
	to, way := from, 1
	if by < 0 {
		way = -1
	}
	for i := from + way; i >= 0 && i < len(r.rows) && by != 0; i += way {
		if r.rows[i].key != "" {
			to, by = i, by-way
		}
	}
	if to != from {
		r.focusRow(to)
	} else if way < 0 {
		r.scroll.ScrollToTop() // what stands above the first row
		r.show()
	}
}

// key walks the rows; it reports whether it took the key.
func (r *roll) key(at int, key fyne.KeyName) bool {
	page := 1
	if n := len(r.live); n > 3 {
		page = n - 2
	}
	switch key {
	case fyne.KeyUp:
		r.step(at, -1)
	case fyne.KeyDown:
		r.step(at, 1)
	case fyne.KeyPageUp:
		r.step(at, -page)
	case fyne.KeyPageDown:
		r.step(at, page)
	case fyne.KeyHome:
		r.step(at, -len(r.rows))
	case fyne.KeyEnd:
		r.step(at, len(r.rows))
	case fyne.KeyLeft:
		if r.onLeft == nil {
			return false
		}
		r.onLeft()
	default:
		return false
	}
	return true
}

// make gives the object of a row.
func (r *roll) make(i int) fyne.CanvasObject {
	if o := r.live[i]; o != nil {
		return o
	}
	o := r.rows[i].build()
	if p, ok := o.(*press); ok && r.rows[i].key != "" {
		keys, hover := p.onKey, p.onHover
		p.onKey = func(key fyne.KeyName) bool { return keys != nil && keys(key) || r.key(i, key) }
		p.onHover = func(in bool) {
			if in && p.focused && !p.byMouse {
				r.bring(i)
			}
			if hover != nil {
				hover(in)
			}
		}
	}
	r.live[i] = o
	r.put(i, o)
	r.content.Objects = append(r.content.Objects, o)
	return o
}

// sort puts the objects in the order in which Tab walks.
func (r *roll) sort() {
	at := make(map[fyne.CanvasObject]int, len(r.live))
	for i, o := range r.live {
		at[o] = i
	}
	sort.Slice(r.content.Objects, func(a, b int) bool { return at[r.content.Objects[a]] < at[r.content.Objects[b]] })
}

func (r *roll) put(i int, o fyne.CanvasObject) {
	place(o, r.padX, r.tops[i], r.Size().Width-2*r.padX, r.tops[i+1]-r.tops[i]-r.gap)
}

// bring scrolls a row into view.
func (r *roll) bring(i int) {
	y, h := r.scroll.Offset.Y, r.Size().Height
	switch {
	case r.tops[i] < y+r.padY:
		r.scroll.ScrollToOffset(fyne.NewPos(0, max(0, r.tops[i]-r.padY)))
	case r.tops[i+1] > y+h-r.padY:
		r.scroll.ScrollToOffset(fyne.NewPos(0, min(r.tops[i], r.tops[i+1]+r.padY-h)))
	}
	r.show()
}

// arrange measures every row and shows those in view.
func (r *roll) arrange() {
	s := r.Size()
	if s.Width <= 0 {
		return
	}
	if r.width != s.Width || len(r.tops) != len(r.rows)+1 {
		r.width = s.Width
		r.tops = r.tops[:0]
		y := r.padY
		for i := range r.rows {
			r.tops = append(r.tops, y)
			y += r.rows[i].guess(s.Width-2*r.padX) + r.gap
		}
		r.tops = append(r.tops, y)
		for i, o := range r.live {
			r.fit(i, o)
		}
		for i, o := range r.live {
			r.put(i, o)
		}
	}
	r.grow()
	r.show()
}

// fit gives a row that is made the height that it needs; it reports whether
// those below had to move.
func (r *roll) fit(i int, o fyne.CanvasObject) bool {
	more := heightFor(o, r.width-2*r.padX) + r.gap - (r.tops[i+1] - r.tops[i])
	if more > -0.5 && more < 0.5 {
		return false
	}
	for j := i + 1; j < len(r.tops); j++ {
		r.tops[j] += more
	}
	if r.tops[i] < r.scroll.Offset.Y { // what is seen stays where it is
		r.scroll.Offset.Y = max(0, r.scroll.Offset.Y+more)
	}
	return true
}

// grow makes the content as high as its rows.
func (r *roll) grow() {
	s := r.Size()
	h := max(r.tops[len(r.rows)]-r.gap+r.padY, s.Height)
	r.content.Resize(fyne.NewSize(s.Width, h))
	if limit := h - s.Height; r.scroll.Offset.Y > limit {
		r.scroll.ScrollToOffset(fyne.NewPos(0, limit))
	}
}

// show makes the rows in view, and forgets those far from it but the one with
// the keyboard.
func (r *roll) show() {
	h := r.Size().Height
	if len(r.tops) != len(r.rows)+1 || r.width <= 0 {
		return
	}
	first, last := r.near(h)
	for range 3 { // rows that turn out lower let others come into view
		moved := false
		for i := first; i < last; i++ {
			made := r.live[i] == nil
			moved = made && r.fit(i, r.make(i)) || moved
		}
		if !moved {
			break
		}
		for i, o := range r.live {
			r.put(i, o)
		}
		r.grow()
		r.scroll.Refresh()
		first, last = r.near(h)
	}
	c := fyne.CurrentApp().Driver().CanvasForObject(r)
	kept := r.content.Objects[:0:0]
	for i, o := range r.live {
		f, ok := o.(fyne.Focusable)
		if (i < first || i >= last) && !(ok && c != nil && c.Focused() == f) {
			delete(r.live, i)
			continue
		}
		kept = append(kept, o)
	}
	r.content.Objects = kept
	r.sort()
	r.content.Refresh()
}

// near gives the rows in view and half a screen around.
func (r *roll) near(h float32) (first, last int) {
	top, bottom := r.scroll.Offset.Y-h/2, r.scroll.Offset.Y+1.5*h
	first = sort.Search(len(r.rows), func(i int) bool { return r.tops[i+1] > top })
	return first, sort.Search(len(r.rows), func(i int) bool { return r.tops[i] > bottom })
}

func (r *roll) Resize(s fyne.Size) {
	r.BaseWidget.Resize(s)
	r.arrange()
}

func (r *roll) MinSize() fyne.Size { return fyne.NewSize(40, 24) }

func (r *roll) CreateRenderer() fyne.WidgetRenderer { return &rollRenderer{r} }

type rollRenderer struct{ r *roll }

func (x *rollRenderer) Layout(s fyne.Size) {
	x.r.scroll.Resize(s)
	x.r.arrange()
}
func (x *rollRenderer) MinSize() fyne.Size           { return x.r.MinSize() }
func (x *rollRenderer) Refresh()                     { x.r.arrange(); x.r.scroll.Refresh() }
func (x *rollRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{x.r.scroll} }
func (x *rollRenderer) Destroy()                     {}

// rollLayout leaves the rows where the roll puts them.
type rollLayout struct{ r *roll }

func (l rollLayout) Layout([]fyne.CanvasObject, fyne.Size) {}
func (l rollLayout) MinSize([]fyne.CanvasObject) fyne.Size {
	h := float32(0)
	if n := len(l.r.tops); n > 0 {
		h = l.r.tops[n-1] - l.r.gap + l.r.padY
	}
	return fyne.NewSize(0, h)
}
