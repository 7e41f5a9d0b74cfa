package findings

import (
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// lower goes on with a sentence.
func lower(s string) string {
	first, size := utf8.DecodeRuneInString(s)
	return string(unicode.ToLower(first)) + s[size:]
}

// joined makes a key of names, whatever their order.
func joined(names []string) string {
	sorted := slices.Clone(names)
	slices.Sort(sorted)
	return strings.Join(sorted, ", ")
}

func quoted(name string) string { return "“" + name + "”" }
