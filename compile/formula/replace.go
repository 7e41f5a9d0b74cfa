package formula

import "strings"

// Replace renames wherever the text of a predictor or an expression mentions a
// name, and leaves everything else as it was typed: name gets each variable or
// parameter, plate each plate, in its typed form; what they give comes in its
// place. A nil function changes nothing. The name of what is predicted, left
// of "=", belongs to the family and stays. The text need not be complete.
func Replace(text string, name, plate func(id string) string) string {
	right := 0
	for _, t := range scan(text) {
		if t.is("=") {
			right = t.span.End
			break
		}
	}
	return replaceIn(text, []Span{{right, len(text)}}, name, plate)
}

// ReplacePhrase is Replace for a distribution phrase: the names of families
// and arguments stay. A phrase that cannot be parsed stays as it is.
func ReplacePhrase(text string, name, plate func(id string) string) string {
	p, err := ParsePhrase(text)
	if err != nil {
		return text
	}
	values := make([]Span, len(p.Arguments))
	for i, a := range p.Arguments {
		values[i] = a.Value.Where()
	}
	return replaceIn(text, values, name, plate)
}

// replaceIn changes the names within the given spans, which are in order.
// Reserved words and names of functions are no such names; a name behind "by",
// or behind "and" after one, is a plate.
func replaceIn(text string, within []Span, name, plate func(id string) string) string {
	var b strings.Builder
	done := 0
	tokens := scan(text)
	plates := false
	for i, t := range tokens {
		if t.kind != nameToken || Reserved(t.id) {
			plates = t.isWord("by") || plates && t.isWord("and")
			continue
		}
		for len(within) > 0 && within[0].End < t.span.End {
			within = within[1:]
		}
		change := name
		if plates {
			change = plate
		}
		plates = plates && tokens[i+1].isWord("and")
		if len(within) == 0 || t.span.Start < within[0].Start || change == nil || tokens[i+1].is("(") {
			continue
		}
		if to := change(t.id); to != t.id {
			b.WriteString(text[done:t.span.Start])
			b.WriteString(to)
			done = t.span.End
		}
	}
	if done == 0 {
		return text
	}
	b.WriteString(text[done:])
	return b.String()
}
