package scene

import "arrowroot/canvas/draw"

// A Map knows what stands where in a picture that Build made.
type Map struct{}

// Hit says what is at a place of the widget.
func (m *Map) Hit(p draw.Point) Target { return Target{} }

// Bounds is the rectangle that everything on the sheet fills, in dips of the
// widget; ok is false for an empty sheet.
func (m *Map) Bounds() (r draw.Rect, ok bool) { return draw.Rect{}, false }

// NodeRect is where a node stands, in dips of the widget.
func (m *Map) NodeRect(id string) (r draw.Rect, ok bool) { return draw.Rect{}, false }
