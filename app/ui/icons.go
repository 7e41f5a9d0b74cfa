package ui

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
)

// glyph makes an icon of a 24×24 drawing that follows the theme's ink. Every
// one is our own drawing of the thing the tool makes.
func glyph(name, drawing string) fyne.Resource {
	return colored(theme.ColorNameForeground, name, drawing)
}

func colored(token fyne.ThemeColorName, name, drawing string) fyne.Resource {
	svg := fmt.Sprintf(`<svg xmlns="http://www.w3.org/2000/svg" width="24" height="24" viewBox="0 0 24 24">%s</svg>`, drawing)
	return theme.NewColoredResource(fyne.NewStaticResource("arrowroot-"+name+".svg", []byte(svg)), token)
}

const thin = `fill="none" stroke="#000000" stroke-width="1.6" stroke-linecap="round" stroke-linejoin="round"`

var (
	iconSelect   = glyph("select", `<path fill="#000000" d="M6 3 L18.5 13.2 L12.6 13.9 L16 20.4 L13.4 21.6 L10.2 15 L6 19 Z"/>`)
	iconVariable = glyph("variable", `<path `+thin+` d="M7.5 7 H16.5 A5 5 0 0 1 16.5 17 H7.5 A5 5 0 0 1 7.5 7 Z"/>`)
	iconArrow    = glyph("arrow", `<path `+thin+` d="M4 19.5 L15 9"/><path fill="#000000" d="M20 4.5 L17.6 12 L12.4 6.6 Z"/>`)
	iconArc      = glyph("arc", `<path `+thin+` d="M5 15 C5.4 12.6 6.2 11 7.4 9.6 M9.6 7.9 C11.2 7.1 12.8 7.1 14.4 7.9 M16.6 9.6 C17.8 11 18.6 12.6 19 15"/><path fill="#000000" d="M4.4 19.4 L2.2 13.8 L7.8 14.2 Z"/><path fill="#000000" d="M19.6 19.4 L16.2 14.2 L21.8 13.8 Z"/>`)
	iconPlate    = glyph("plate", `<path `+thin+` d="M4 4 H17 V17 H4 Z"/><path `+thin+` d="M7.5 20.5 H20.5 V7.5"/>`)
	iconFoldL    = glyph("fold-left", `<path `+thin+` d="M14.5 6 L8.5 12 L14.5 18"/>`)
	iconFoldR    = glyph("fold-right", `<path `+thin+` d="M9.5 6 L15.5 12 L9.5 18"/>`)
	iconFoldD    = glyph("fold-down", `<path `+thin+` d="M6 9.5 L12 15.5 L18 9.5"/>`)
	iconFoldU    = glyph("fold-up", `<path `+thin+` d="M6 14.5 L12 8.5 L18 14.5"/>`)
	iconClose    = glyph("close", `<path `+thin+` d="M7 7 L17 17 M17 7 L7 17"/>`)
	iconWarn     = colored(tokenConfound, "warn", `<path `+thin+` d="M12 4 L20.5 19.5 H3.5 Z"/><path `+thin+` d="M12 10 V14.2"/><path `+thin+` d="M12 16.8 V16.9"/>`)
	iconGood     = colored(tokenAction, "good", `<path `+thin+` d="M5 12.5 L10 17.5 L19 7"/>`)
	iconAsk      = glyph("ask", `<path `+thin+` d="M4 12 H13"/><path fill="#000000" d="M20 12 L13 8.4 V15.6 Z"/>`)
	iconRing     = glyph("ring", `<circle cx="12" cy="12" r="8" fill="none" stroke="#000000" stroke-width="1.9" stroke-dasharray="3.6 2.7"/>`)
	iconStop     = glyph("stop", `<path `+thin+` d="M6 6 L18 18 M18 6 L6 18"/>`)
)
