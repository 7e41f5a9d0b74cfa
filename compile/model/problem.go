package model

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"arrowroot/compile/formula"
)

// report adds a problem that a model can come along with.
func (b *builder) report(p Problem) { b.problems = append(b.problems, p.placed()) }

// stop adds a problem that leaves no model.
func (b *builder) stop(p Problem) {
	p.Stops = true
	b.report(p)
	b.broken = true
}

// placed puts variable and place before a message about typed text: the text
// is not always shown beside it.
func (p Problem) placed() Problem {
	if p.Text == "" || p.Variable == "" {
		return p
	}
	part := p.part
	if part == "" {
		part = p.Place
	}
	p.bare = p.Message
	p.Message = fmt.Sprintf("%s, %s: %s", p.Variable, part, p.Message)
	return p
}

// Display is the message with the text it is about, a caret under the place,
// for text of fixed width; the message alone where there is no text.
func (p *Problem) Display() string {
	if p.Text == "" {
		return p.Message
	}
	message := p.bare
	if message == "" {
		message = p.Message
	}
	return formula.Caret(p.Text, &formula.Error{Span: p.Span, Message: message})
}

func capital(s string) string {
	r, n := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(r)) + s[n:]
}

// list writes "a", "a and b", "a, b and c".
func list(words []string) string {
	switch n := len(words); n {
	case 0:
		return ""
	case 1:
		return words[0]
	default:
		return strings.Join(words[:n-1], ", ") + " and " + words[n-1]
	}
}

// nearest finds the name that a typing error most likely meant: at most a
// third of the letters wrong; "" if there is none.
func nearest(word string, names []string) string {
	best, least := "", len([]rune(word))/3+1
	for _, n := range names {
		if d := distance(strings.ToLower(word), strings.ToLower(n)); d < least || d == least && best == "" && d <= len([]rune(word))/3 {
			best, least = n, d
		}
	}
	return best
}

// distance counts the letters to put in, take out, replace or swap with their
// neighbour (optimal string alignment; Damerau 1964).
func distance(a, b string) int {
	x, y := []rune(a), []rune(b)
	rows := make([][]int, len(x)+1)
	for i := range rows {
		rows[i] = make([]int, len(y)+1)
		rows[i][0] = i
	}
	for j := range y {
		rows[0][j+1] = j + 1
	}
	for i := range x {
		for j := range y {
			cost := 1
			if x[i] == y[j] {
				cost = 0
			}
			d := min(rows[i][j]+cost, rows[i][j+1]+1, rows[i+1][j]+1)
			if i > 0 && j > 0 && x[i] == y[j-1] && x[i-1] == y[j] {
				d = min(d, rows[i-1][j-1]+1)
			}
			rows[i+1][j+1] = d
		}
	}
	return rows[len(x)][len(y)]
}
