package scene

import (
	"math"
	"strconv"

	"arrowroot/canvas/draw"
)

// mix is the colour at a share of the way from a to b.
func mix(a, b draw.Color, share float64) draw.Color {
	part := func(x, y uint8) uint8 { return uint8(float64(x) + (float64(y)-float64(x))*share + 0.5) }
	return draw.Color{R: part(a.R, b.R), G: part(a.G, b.G), B: part(a.B, b.B), A: part(a.A, b.A)}
}

// contrast is the contrast ratio of two opaque colours, from 1 to 21 (WCAG
// 2.2, "contrast ratio" and "relative luminance").
func contrast(a, b draw.Color) float64 {
	x, y := luminance(a)+0.05, luminance(b)+0.05
	return max(x, y) / min(x, y)
}

func luminance(c draw.Color) float64 {
	linear := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	return 0.2126*linear(c.R) + 0.7152*linear(c.G) + 0.0722*linear(c.B)
}

// readable picks whichever of two inks reads better on a ground.
func readable(ground, one, other draw.Color) draw.Color {
	if contrast(ground, one) >= contrast(ground, other) {
		return one
	}
	return other
}

// percent writes a share: "6 %", "<1 %".
func percent(share float64) string {
	v := 100 * share
	if v < 1 {
		return "<1 %"
	}
	return strconv.Itoa(int(math.Round(v))) + " %"
}
