package draw

import (
	"sync"

	"codeberg.org/go-fonts/dejavu/dejavusanscondensed"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedbold"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedboldoblique"
	"codeberg.org/go-fonts/dejavu/dejavusanscondensedoblique"
	"golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
)

// A Face is a cut of the one family that everything is set in: DejaVu Sans
// Condensed, which has the Greek, the arrows and the mathematical signs that
// our words are full of.
type Face uint8

// The faces.
const (
	Regular Face = iota
	Bold
	Italic
	BoldItalic
	faces
)

// fontBytes is the TrueType file of a face.
func fontBytes(f Face) []byte {
	return [faces][]byte{
		dejavusanscondensed.TTF,
		dejavusanscondensedbold.TTF,
		dejavusanscondensedoblique.TTF,
		dejavusanscondensedboldoblique.TTF,
	}[f]
}

// A glyph is a character's picture and how far it moves the pen.
type glyph struct {
	id      sfnt.GlyphIndex
	advance float32 // in ems
}

// known is how many code points have their glyph looked up in advance: Latin,
// Greek, punctuation, arrows, mathematics, shapes. Others cost a search.
const known = 0x2800

// A typeface is a face ready for use. It never changes once made.
type typeface struct {
	font   *sfnt.Font
	perEm  fixed.Int26_6
	glyphs [known]glyph
}

// typefaces parses each face once, when first used.
var typefaces = [faces]func() *typeface{
	sync.OnceValue(func() *typeface { return newTypeface(Regular) }),
	sync.OnceValue(func() *typeface { return newTypeface(Bold) }),
	sync.OnceValue(func() *typeface { return newTypeface(Italic) }),
	sync.OnceValue(func() *typeface { return newTypeface(BoldItalic) }),
}

func newTypeface(f Face) *typeface {
	parsed, err := sfnt.Parse(fontBytes(f))
	if err != nil {
		panic("draw: an embedded font is damaged: " + err.Error())
	}
	t := &typeface{font: parsed, perEm: fixed.I(int(parsed.UnitsPerEm()))}
	var buffer sfnt.Buffer
	for r := range rune(known) {
		t.glyphs[r] = t.find(r, &buffer)
	}
	return t
}

// find looks a character up; one that the font lacks becomes its empty box.
func (t *typeface) find(r rune, buffer *sfnt.Buffer) glyph {
	var g glyph
	if id, err := t.font.GlyphIndex(buffer, r); err == nil {
		g.id = id
	}
	if a, err := t.font.GlyphAdvance(buffer, g.id, t.perEm, font.HintingNone); err == nil {
		g.advance = float32(a) / float32(t.perEm)
	}
	return g
}

// glyph looks one character up.
func (t *typeface) glyph(r rune) glyph {
	if r >= 0 && r < known {
		return t.glyphs[r]
	}
	var buffer sfnt.Buffer
	return t.find(r, &buffer)
}
