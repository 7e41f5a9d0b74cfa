package scene

import (
	"math"
	"testing"

	"arrowroot/canvas/draw"
)

// Text has a contrast of 4.5:1 or more on its ground, marks 3:1 (WCAG 2.2,
// 1.4.3 and 1.4.11).
func TestContrast(t *testing.T) {
	for name, p := range map[string]Palette{"light": Light(), "dark": Dark()} {
		check := func(what string, a, b draw.Color, least float64) {
			if c := contrast(a, b); c < least {
				t.Errorf("%s: %s has a contrast of %.2f, want %.1f", name, what, c, least)
			}
		}
		check("ink on sheet", p.Ink, p.Sheet, 4.5)
		check("ink on card", p.Ink, p.Card, 4.5)
		check("muted on sheet", p.Muted, p.Sheet, 4.5)
		check("action on sheet", p.Action, p.Sheet, 3)
		check("text on action", p.OnAction, p.Action, 4.5)
		check("confounding words on sheet", p.Confounding, p.Sheet, 4.5)
		check("role on its tab", p.Sheet, p.Ink, 4.5)
		check("plate's words on its tab", p.Ink, mix(p.Sheet, p.Hairline, 0.7), 4.5)
		check("frame of a plate on sheet", p.Border, p.Sheet, 3)
		edge := mix(p.Sheet, draw.Alpha(p.HaloEdge, 1), float64(p.HaloEdge.A)/255)
		check("edge of the halo on sheet", edge, p.Sheet, 3)
		for _, c := range append(p.Effect[:], p.Learned[:]...) {
			check("a name on paint", readable(c, p.Ink, p.Sheet), c, 4.5)
		}
	}
}

// Neighbouring bins stay apart under simulated colour blindness, and the
// sequential ramp falls steadily in lightness, also in greyscale. Simulation:
// Machado, Oliveira & Fernandes (2009), severity 1, matrices from memory;
// distance: CIE76 ΔE in CIELAB.
func TestColourVision(t *testing.T) {
	kinds := map[string][9]float64{
		"normal": {1, 0, 0, 0, 1, 0, 0, 0, 1},
		"protan": {0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998},
		"deutan": {0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.011820, 0.042940, 0.968881},
		"tritan": {1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.303900},
	}
	for palette, p := range map[string]Palette{"light": Light(), "dark": Dark()} {
		for kind, m := range kinds {
			for ramp, colors := range map[string][]draw.Color{"effect": p.Effect[:], "learned": p.Learned[:]} {
				for i := 1; i < len(colors); i++ {
					if d := distanceLab(seen(colors[i-1], m), seen(colors[i], m)); d < 8 {
						t.Errorf("%s %s, %s: bins %d and %d differ by ΔE %.1f", palette, ramp, kind, i-1, i, d)
					}
				}
			}
		}
		rising := palette == "dark"
		for i := 1; i < len(p.Learned); i++ {
			if (luminance(p.Learned[i]) > luminance(p.Learned[i-1])) != rising {
				t.Errorf("%s learned: lightness does not go one way at bin %d", palette, i)
			}
		}
	}
}

func seen(c draw.Color, m [9]float64) [3]float64 {
	linear := [3]float64{channel(c.R), channel(c.G), channel(c.B)}
	var out [3]float64
	for i := range out {
		for k := range linear {
			out[i] += m[3*i+k] * linear[k]
		}
		out[i] = min(max(out[i], 0), 1)
	}
	return out
}

func channel(v uint8) float64 {
	x := float64(v) / 255
	if x <= 0.04045 {
		return x / 12.92
	}
	return math.Pow((x+0.055)/1.055, 2.4)
}

// distanceLab is CIE76 ΔE of two linear sRGB colours under D65.
func distanceLab(a, b [3]float64) float64 {
	lab := func(c [3]float64) [3]float64 {
		x := (0.4124*c[0] + 0.3576*c[1] + 0.1805*c[2]) / 0.9505
		y := 0.2126*c[0] + 0.7152*c[1] + 0.0722*c[2]
		z := (0.0193*c[0] + 0.1192*c[1] + 0.9505*c[2]) / 1.089
		f := func(t float64) float64 {
			if t > 216./24389 {
				return math.Cbrt(t)
			}
			return (24389./27*t + 16) / 116
		}
		return [3]float64{116*f(y) - 16, 500 * (f(x) - f(y)), 200 * (f(y) - f(z))}
	}
	p, q := lab(a), lab(b)
	return math.Sqrt((p[0]-q[0])*(p[0]-q[0]) + (p[1]-q[1])*(p[1]-q[1]) + (p[2]-q[2])*(p[2]-q[2]))
}
