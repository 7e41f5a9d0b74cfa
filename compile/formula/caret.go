package formula

import (
	"strings"
	"unicode"
)

// Caret shows a mistake in two lines, for text of fixed width: the text, and
// carets under the place with the message behind them.
func Caret(text string, e *Error) string {
	start := min(max(e.Span.Start, 0), len(text))
	end := min(max(e.Span.End, start), len(text))
	line := strings.Map(func(r rune) rune {
		if unicode.IsSpace(r) {
			return ' '
		}
		return r
	}, text)
	return line + "\n" + strings.Repeat(" ", columns(text[:start])) +
		strings.Repeat("^", max(columns(text[start:end]), 1)) + " " + e.Message
}

// columns counts what takes a place of its own in a line.
func columns(text string) int {
	n := 0
	for _, r := range text {
		if !unicode.Is(unicode.Mn, r) {
			n++
		}
	}
	return n
}
