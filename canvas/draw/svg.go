package draw

import (
	"bufio"
	"encoding/xml"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// WriteSVG writes the list as an SVG 1.1 picture of its own size, one item to
// a line. Text stays text; each line carries its measured width, so that a
// viewer with another font keeps the layout.
func WriteSVG(w io.Writer, l *List) error {
	b := bufio.NewWriter(w)
	s := svg{w: b}
	s.printf("<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"%s\" height=\"%s\" viewBox=\"0 0 %s %s\"",
		number(l.Width), number(l.Height), number(l.Width), number(l.Height))
	s.printf(" font-family=\"'DejaVu Sans Condensed','DejaVu Sans',sans-serif\">\n")
	if l.Background.A != 0 {
		s.printf("<rect width=\"%s\" height=\"%s\"%s/>\n", number(l.Width), number(l.Height), paint("fill", l.Background))
	}
	for i, item := range l.Items {
		switch it := item.(type) {
		case *Shape:
			s.shape(it)
		case *Text:
			s.text(it)
		case *Discs:
			s.discs(it)
		case *Grid:
			s.grid(it, i)
		}
	}
	s.printf("</svg>\n")
	if s.err != nil {
		return s.err
	}
	return b.Flush()
}

// svg writes until the first error.
type svg struct {
	w   io.Writer
	err error
}

func (s *svg) printf(format string, args ...any) {
	if s.err == nil {
		_, s.err = fmt.Fprintf(s.w, format, args...)
	}
}

func (s *svg) shape(it *Shape) {
	if it.Path.Empty() || (it.Fill.A == 0 && it.Stroke.A == 0) {
		return
	}
	s.printf("<path d=\"%s\"%s", pathData(&it.Path), paint("fill", it.Fill))
	if it.Stroke.A != 0 {
		width := it.Width
		if width == 0 {
			width = 1
		}
		s.printf("%s stroke-width=\"%s\"", paint("stroke", it.Stroke), number(width))
		if len(it.Dash) > 0 {
			parts := make([]string, len(it.Dash))
			for i, d := range it.Dash {
				parts[i] = number(d)
			}
			s.printf(" stroke-dasharray=\"%s\"", strings.Join(parts, " "))
		}
		if it.Round {
			s.printf(" stroke-linecap=\"round\"")
		}
	}
	s.printf("/>\n")
}

func (s *svg) text(it *Text) {
	if it.Text == "" || it.Color.A == 0 {
		return
	}
	s.printf("<text x=\"%s\" y=\"%s\" font-size=\"%s\"", number(it.At.X), number(it.At.Y), number(it.Size))
	if it.Face == Bold || it.Face == BoldItalic {
		s.printf(" font-weight=\"bold\"")
	}
	if it.Face == Italic || it.Face == BoldItalic {
		s.printf(" font-style=\"italic\"")
	}
	if it.Anchor != Start {
		s.printf(" text-anchor=\"%s\"", [...]string{"start", "middle", "end"}[it.Anchor])
	}
	s.printf("%s textLength=\"%s\" lengthAdjust=\"spacingAndGlyphs\">", paint("fill", it.Color), number(Measure(it.Text, it.Face, it.Size)))
	if s.err == nil {
		s.err = xml.EscapeText(s.w, []byte(it.Text))
	}
	s.printf("</text>\n")
}

func (s *svg) discs(it *Discs) {
	if len(it.Centres) == 0 || it.Color.A == 0 {
		return
	}
	s.printf("<g%s>", paint("fill", it.Color))
	for _, c := range it.Centres {
		s.printf("<circle cx=\"%s\" cy=\"%s\" r=\"%s\"/>", number(c.X), number(c.Y), number(it.Radius))
	}
	s.printf("</g>\n")
}

func (s *svg) grid(it *Grid, i int) {
	s.printf("<pattern id=\"grid%d\" x=\"%s\" y=\"%s\" width=\"%s\" height=\"%s\" patternUnits=\"userSpaceOnUse\">",
		i, number(it.Origin.X), number(it.Origin.Y), number(it.Step), number(it.Step))
	s.printf("<rect width=\"%s\" height=\"%s\"%s/></pattern>\n", number(it.Size), number(it.Size), paint("fill", it.Color))
	s.printf("<rect x=\"%s\" y=\"%s\" width=\"%s\" height=\"%s\" fill=\"url(#grid%d)\"/>\n",
		number(it.Within.X), number(it.Within.Y), number(it.Within.W), number(it.Within.H), i)
}

func pathData(p *Path) string {
	var b strings.Builder
	i := 0
	put := func(letter byte, n int) {
		b.WriteByte(letter)
		for k := range n {
			if k > 0 {
				b.WriteByte(' ')
			}
			b.WriteString(number(p.points[i+k].X))
			b.WriteByte(' ')
			b.WriteString(number(p.points[i+k].Y))
		}
		i += n
	}
	for _, o := range p.ops {
		switch o {
		case opMove:
			put('M', 1)
		case opLine:
			put('L', 1)
		case opCubic:
			put('C', 3)
		case opClose:
			b.WriteByte('Z')
		}
	}
	return b.String()
}

// paint is an attribute for a colour, with its opacity.
func paint(name string, c Color) string {
	if c.A == 0 {
		return fmt.Sprintf(" %s=\"none\"", name)
	}
	s := fmt.Sprintf(" %s=\"#%02x%02x%02x\"", name, c.R, c.G, c.B)
	if c.A != 255 {
		s += fmt.Sprintf(" %s-opacity=\"%s\"", name, number(float64(c.A)/255))
	}
	return s
}

// number writes a length with at most two decimals.
func number(v float64) string {
	s := strconv.FormatFloat(v, 'f', 2, 64)
	s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	if s == "-0" {
		return "0"
	}
	return s
}
