package ui

import (
	"image/color"

	"codeberg.org/go-fonts/dejavu/dejavusanscondensed"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedbold"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedboldoblique"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedoblique"
	"codeberg.org/go-fonts/dejavu/dejavusansmono"
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
)

// Sizes in device-independent pixels, on a grid of 8.
const (
	sizeBody    float32 = 12.5
	sizeCaption float32 = 10.5
	sizeSmall   float32 = 11.5 // second lines and units
	sizeTitle   float32 = 15
	unit        float32 = 8
)

// Shade says which of the two sets of colours is shown.
type Shade string

// The shades.
const (
	FollowSystem Shade = ""
	Light        Shade = "light"
	Dark         Shade = "dark"
)

// A Theme carries our tokens through Fyne's theme mechanism, so that stock
// widgets follow them. The zero value follows the system.
type Theme struct {
	Shade Shade
}

var _ fyne.Theme = Theme{}

// Dark reports whether the dark set is shown when the system asks for variant.
func (t Theme) Dark(variant fyne.ThemeVariant) bool {
	if t.Shade == FollowSystem {
		return variant == theme.VariantDark
	}
	return t.Shade == Dark
}

// stockColors says which token each of Fyne's colours is.
var stockColors = map[fyne.ThemeColorName]fyne.ThemeColorName{
	theme.ColorNameBackground:          tokenPanel,
	theme.ColorNameButton:              tokenCard,
	theme.ColorNameDisabledButton:      tokenPanel,
	theme.ColorNameDisabled:            tokenFaint,
	theme.ColorNameError:               tokenFault,
	theme.ColorNameFocus:               tokenFocus,
	theme.ColorNameForeground:          tokenInk,
	theme.ColorNameForegroundOnError:   tokenCard,
	theme.ColorNameForegroundOnPrimary: tokenOnAction,
	theme.ColorNameForegroundOnSuccess: tokenOnAction,
	theme.ColorNameForegroundOnWarning: tokenCard,
	theme.ColorNameHeaderBackground:    tokenPanel,
	theme.ColorNameHover:               tokenHover,
	theme.ColorNameHyperlink:           tokenAction,
	theme.ColorNameInputBackground:     tokenCard,
	theme.ColorNameInputBorder:         tokenBorder,
	theme.ColorNameMenuBackground:      tokenCard,
	theme.ColorNameOverlayBackground:   tokenPanel,
	theme.ColorNamePlaceHolder:         tokenMuted,
	theme.ColorNamePressed:             tokenPressed,
	theme.ColorNamePrimary:             tokenAction,
	theme.ColorNameScrollBar:           tokenBorder,
	theme.ColorNameScrollBarBackground: tokenNone,
	theme.ColorNameSeparator:           tokenHairline,
	theme.ColorNameSuccess:             tokenAction,
	theme.ColorNameWarning:             tokenConfound,
}

// Color gives one of Fyne's colours or one of ours.
func (t Theme) Color(name fyne.ThemeColorName, variant fyne.ThemeVariant) color.Color {
	set := lightTokens
	if t.Dark(variant) {
		set = darkTokens
	}
	if token, stock := stockColors[name]; stock {
		name = token
	}
	switch name {
	case theme.ColorNameSelection:
		c := set[tokenAction]
		c.A = 0x40
		return c
	case theme.ColorNameShadow:
		return color.NRGBA{0, 0, 0, 0x38}
	}
	if c, ours := set[name]; ours {
		return c
	}
	return theme.DefaultTheme().Color(name, variant)
}

// Size gives compact sizes: a desktop window at 1366×768 has no room to spare.
func (t Theme) Size(name fyne.ThemeSizeName) float32 {
	switch name {
	case theme.SizeNameText:
		return sizeBody
	case theme.SizeNameCaptionText:
		return sizeCaption
	case theme.SizeNameSubHeadingText:
		return sizeTitle
	case theme.SizeNameHeadingText:
		return 18
	case theme.SizeNamePadding:
		return 4
	case theme.SizeNameInnerPadding:
		return 6
	case theme.SizeNameLineSpacing:
		return 3
	case theme.SizeNameInlineIcon:
		return 16
	case theme.SizeNameScrollBar:
		return 9
	case theme.SizeNameScrollBarSmall:
		return 4
	case theme.SizeNameInputRadius, theme.SizeNameSelectionRadius:
		return 4
	}
	return theme.DefaultTheme().Size(name)
}

// The one family of the window and the sheet. It has the arrows and the Greek
// that our sentences are full of; the condensed cut keeps them short.
var (
	fontRegular    = fyne.NewStaticResource("DejaVuSansCondensed.ttf", dejavusanscondensed.TTF)
	fontBold       = fyne.NewStaticResource("DejaVuSansCondensed-Bold.ttf", dejavusanscondensedbold.TTF)
	fontItalic     = fyne.NewStaticResource("DejaVuSansCondensed-Oblique.ttf", dejavusanscondensedoblique.TTF)
	fontBoldItalic = fyne.NewStaticResource("DejaVuSansCondensed-BoldOblique.ttf", dejavusanscondensedboldoblique.TTF)
	fontMono       = fyne.NewStaticResource("DejaVuSansMono.ttf", dejavusansmono.TTF)
)

// Font gives the face for a style.
func (t Theme) Font(style fyne.TextStyle) fyne.Resource {
	switch {
	case style.Symbol:
		return theme.DefaultTheme().Font(style)
	case style.Monospace:
		return fontMono
	case style.Bold && style.Italic:
		return fontBoldItalic
	case style.Bold:
		return fontBold
	case style.Italic:
		return fontItalic
	}
	return fontRegular
}

// Icon gives Fyne's icons; ours are in icons.go.
func (t Theme) Icon(name fyne.ThemeIconName) fyne.Resource {
	return theme.DefaultTheme().Icon(name)
}
