package draw

import "strings"

// Measure is the width of a line of text in dips.
func Measure(text string, face Face, size float64) float64 {
	t := typefaces[face]()
	width := 0.0
	for _, r := range text {
		width += float64(t.glyph(r).advance)
	}
	return width * size
}

// Shorten cuts text so that it fits a width, with an ellipsis where it was cut.
func Shorten(text string, face Face, size, width float64) string {
	if Measure(text, face, size) <= width {
		return text
	}
	room := width - Measure("…", face, size)
	t := typefaces[face]()
	used, end := 0.0, 0
	for i, r := range text {
		used += float64(t.glyph(r).advance) * size
		if used > room {
			break
		}
		end = i + len(string(r))
	}
	return text[:end] + "…"
}

// Drop is how far the baseline lies below the middle line of a name, so that
// mostly lower-case words look centred.
func Drop(size float64) float64 { return size * 0.34 }

// Wrap breaks text into lines that fit a width, at spaces; a word that is too
// long is cut. What does not fit in most lines ends in an ellipsis.
func Wrap(text string, face Face, size, width float64, most int) []string {
	var lines []string
	now := ""
	words := strings.Fields(text)
	for i, word := range words {
		longer := word
		if now != "" {
			longer = now + " " + word
		}
		if now == "" || Measure(longer, face, size) <= width {
			now = longer
			continue
		}
		if len(lines) == most-1 {
			now += " " + strings.Join(words[i:], " ")
			break
		}
		lines = append(lines, Shorten(now, face, size, width))
		now = word
	}
	if now != "" {
		lines = append(lines, Shorten(now, face, size, width))
	}
	return lines
}
