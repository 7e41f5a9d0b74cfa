package scene

import "arrowroot/canvas/draw"

// Build makes the picture of the sheet and the map of what stands where.
func Build(in Input) (*draw.List, *Map) { return &draw.List{Background: in.Palette.Sheet}, &Map{} }
