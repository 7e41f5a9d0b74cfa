package draw

// A Thumb is a diagram reduced to boxes and lines, places in any unit.
type Thumb struct {
	Nodes  []ThumbNode
	Arrows [][2]int
	Arcs   [][2]int
}

// A ThumbNode is one box of a Thumb.
type ThumbNode struct {
	At         Point
	Unmeasured bool
	Marked     bool // drawn filled, for exposure and outcome
}

// Thumbnail draws a small diagram that fills its size.
func Thumbnail(width, height float64, t Thumb, s Style) *List {
	return &List{Width: width, Height: height}
}
