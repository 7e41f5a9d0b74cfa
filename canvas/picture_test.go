package canvas

import (
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"

	"arrowroot/canvas/draw"
)

// A picture asks its maker for the size it has, and shows what it makes.
func TestPicture(t *testing.T) {
	test.NewTempApp(t)
	var asked [2]float64
	p := NewPicture(40, 20, func(w, h float64) *draw.List {
		asked = [2]float64{w, h}
		l := &draw.List{Width: w, Height: h, Background: draw.Hex("#FFFFFF")}
		l.Add(&draw.Shape{Path: draw.RoundRect(draw.Rect{W: w / 2, H: h}, 0), Fill: draw.Hex("#FF0000")})
		return l
	})
	if p.MinSize() != fyne.NewSize(40, 20) {
		t.Error(p.MinSize())
	}
	w := test.NewTempWindow(t, p)
	w.SetPadded(false)
	w.Resize(fyne.NewSize(100, 60))
	c := w.Canvas().Capture()
	if asked != [2]float64{100, 60} {
		t.Errorf("the maker was asked for %v", asked)
	}
	size := c.Bounds().Size()
	for x, want := range map[int]uint32{size.X / 4: 0, 3 * size.X / 4: 0xFF} {
		if _, g, _, _ := c.At(x, size.Y/2).RGBA(); g>>8 != want {
			t.Errorf("column %d: green is %x, want %x", x, g>>8, want)
		}
	}
	empty := NewPicture(10, 10, nil)
	empty.Resize(fyne.NewSize(10, 10))
	empty.paint(10, 10)
}
