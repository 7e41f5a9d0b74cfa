package ui

import (
	"image/color"

	"fyne.io/fyne/v2"
)

// Names of the colours of our own controls. They go through the theme like
// Fyne's own names, so that a change of theme reaches everything.
const (
	tokenSheet     fyne.ThemeColorName = "sheet"
	tokenPanel     fyne.ThemeColorName = "panel"
	tokenCard      fyne.ThemeColorName = "card"
	tokenHairline  fyne.ThemeColorName = "hairline"
	tokenBorder    fyne.ThemeColorName = "border"
	tokenInk       fyne.ThemeColorName = "ink"
	tokenMuted     fyne.ThemeColorName = "muted"
	tokenFaint     fyne.ThemeColorName = "faint" // disabled words only: below the contrast that text needs
	tokenAction    fyne.ThemeColorName = "action"
	tokenOnAction  fyne.ThemeColorName = "onAction"
	tokenTint      fyne.ThemeColorName = "tint"     // the action colour as a background
	tokenConfound  fyne.ThemeColorName = "confound" // words about open back-door paths
	tokenAmberTint fyne.ThemeColorName = "amberTint"
	tokenFault     fyne.ThemeColorName = "fault" // words about what stops a fit
	tokenHover     fyne.ThemeColorName = "hoverWash"
	tokenPressed   fyne.ThemeColorName = "pressedWash"
	tokenFocus     fyne.ThemeColorName = "focusWash" // of stock widgets; ours have a ring
	tokenNone      fyne.ThemeColorName = "none"
)

// tokens is one column of the table of colours.
type tokens map[fyne.ThemeColorName]color.NRGBA

// Text on every background it is used on has a contrast of 4.5:1 or more,
// marks 3:1 or more; TestContrast computes it.
var lightTokens = tokens{
	tokenSheet:     rgb(0xFBFAF6),
	tokenPanel:     rgb(0xF2EFE8),
	tokenCard:      rgb(0xFFFFFF),
	tokenHairline:  rgb(0xDAD5C9),
	tokenBorder:    rgb(0x87827A),
	tokenInk:       rgb(0x232730),
	tokenMuted:     rgb(0x656972),
	tokenFaint:     rgb(0xA6A297),
	tokenAction:    rgb(0x0E6B68),
	tokenOnAction:  rgb(0xFFFFFF),
	tokenTint:      rgb(0xE1EDEA),
	tokenConfound:  rgb(0x8F4E00),
	tokenAmberTint: rgb(0xFDF3E2),
	tokenFault:     rgb(0xA1261B),
	tokenHover:     {0x23, 0x27, 0x30, 0x12},
	tokenPressed:   {0x23, 0x27, 0x30, 0x24},
	tokenFocus:     {0x0E, 0x6B, 0x68, 0x38},
	tokenNone:      {},
}

var darkTokens = tokens{
	tokenSheet:     rgb(0x1B1D21),
	tokenPanel:     rgb(0x22252A),
	tokenCard:      rgb(0x2A2E34),
	tokenHairline:  rgb(0x3A3F47),
	tokenBorder:    rgb(0x737985),
	tokenInk:       rgb(0xECE9E2),
	tokenMuted:     rgb(0xA3A7B0),
	tokenFaint:     rgb(0x666B75),
	tokenAction:    rgb(0x5CC2BC),
	tokenOnAction:  rgb(0x1B1D21),
	tokenTint:      rgb(0x24403F),
	tokenConfound:  rgb(0xEBC25A),
	tokenAmberTint: rgb(0x3B3220),
	tokenFault:     rgb(0xFF9A8C),
	tokenHover:     {0xEC, 0xE9, 0xE2, 0x14},
	tokenPressed:   {0xEC, 0xE9, 0xE2, 0x28},
	tokenFocus:     {0x5C, 0xC2, 0xBC, 0x48},
	tokenNone:      {},
}

func rgb(hex uint32) color.NRGBA {
	return color.NRGBA{uint8(hex >> 16), uint8(hex >> 8), uint8(hex), 0xFF}
}
