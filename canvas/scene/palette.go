package scene

import "arrowroot/canvas/draw"

// A Palette is the colours of the sheet. Text on its ground has a contrast of
// 4.5:1 or more, marks 3:1 or more.
type Palette struct {
	Sheet, Panel, Card draw.Color
	Hairline, Border   draw.Color
	Ink, Muted         draw.Color
	Action, OnAction   draw.Color
	Confounding        draw.Color    // as text
	Halo, HaloEdge     draw.Color    // under the arrows of an open confounding path; the edge carries the contrast
	Effect             [5]draw.Color // from − to +
	Learned            [4]draw.Color // little to much
}

// Light is the palette for a light window and for paper.
func Light() Palette {
	return Palette{
		Sheet: draw.Hex("#FBFAF6"), Panel: draw.Hex("#F2EFE8"), Card: draw.Hex("#FFFFFF"),
		Hairline: draw.Hex("#DAD5C9"), Border: draw.Hex("#87827A"),
		Ink: draw.Hex("#232730"), Muted: draw.Hex("#656972"),
		Action: draw.Hex("#0E6B68"), OnAction: draw.Hex("#FFFFFF"),
		Confounding: draw.Hex("#8F4E00"),
		Halo:        draw.Alpha(draw.Hex("#C27A12"), 0.30),
		HaloEdge:    draw.Alpha(draw.Hex("#C27A12"), 0.95),
		Effect:      [5]draw.Color{draw.Hex("#2A609C"), draw.Hex("#93ADD6"), draw.Hex("#E9E5DE"), draw.Hex("#F6BF8B"), draw.Hex("#D57939")},
		Learned:     [4]draw.Color{draw.Hex("#E9E5DE"), draw.Hex("#C8BBDF"), draw.Hex("#A08CCA"), draw.Hex("#674B95")},
	}
}

// Dark is the palette for a dark window.
func Dark() Palette {
	return Palette{
		Sheet: draw.Hex("#1B1D21"), Panel: draw.Hex("#22252A"), Card: draw.Hex("#2A2E34"),
		Hairline: draw.Hex("#3A3F47"), Border: draw.Hex("#737985"),
		Ink: draw.Hex("#ECE9E2"), Muted: draw.Hex("#A3A7B0"),
		Action: draw.Hex("#5CC2BC"), OnAction: draw.Hex("#1B1D21"),
		Confounding: draw.Hex("#EBC25A"),
		Halo:        draw.Alpha(draw.Hex("#C27A12"), 0.35),
		HaloEdge:    draw.Alpha(draw.Hex("#C27A12"), 0.75),
		Effect:      [5]draw.Color{draw.Hex("#A0BDEB"), draw.Hex("#4C6690"), draw.Hex("#393732"), draw.Hex("#793D29"), draw.Hex("#EC6845")},
		Learned:     [4]draw.Color{draw.Hex("#393732"), draw.Hex("#564A6D"), draw.Hex("#9681C2"), draw.Hex("#C5B3E9")},
	}
}
