package formula

import "strings"

// Rename gives a variable, parameter or plate another name wherever the text
// of a predictor or an expression mentions it, and leaves everything else as
// it was typed. The name of what is predicted, left of "=", belongs to the
// family and stays. The text need not be complete.
func Rename(text, old, new string) string {
	old = Canonical(old)
	return Replace(text, func(id string) string {
		if id == old {
			return new
		}
		return id
	})
}

// Replace is Rename by a function: it gets each mentioned name in its typed
// form and gives the name to stand there, the same for no change.
func Replace(text string, name func(id string) string) string {
	right := 0
	for _, t := range scan(text) {
		if t.is("=") {
			right = t.span.End
			break
		}
	}
	return replaceIn(text, []Span{{right, len(text)}}, name)
}

// ReplacePhrase is Replace for a distribution phrase: the names of families
// and arguments stay. A phrase that cannot be parsed stays as it is.
func ReplacePhrase(text string, name func(id string) string) string {
	p, err := ParsePhrase(text)
	if err != nil {
		return text
	}
	values := make([]Span, len(p.Arguments))
	for i, a := range p.Arguments {
		values[i] = a.Value.Where()
	}
	return replaceIn(text, values, name)
}

// replaceIn changes the names within the given spans, which are in order.
// Reserved words and names of functions are no such names.
func replaceIn(text string, within []Span, name func(id string) string) string {
	var b strings.Builder
	done := 0
	tokens := scan(text)
	for i, t := range tokens {
		for len(within) > 0 && within[0].End < t.span.End {
			within = within[1:]
		}
		if len(within) == 0 {
			break
		}
		if t.kind != nameToken || t.span.Start < within[0].Start || Reserved(t.id) || tokens[i+1].is("(") {
			continue
		}
		if to := name(t.id); to != t.id {
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
