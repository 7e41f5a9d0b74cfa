package table

import "strings"

// usual lists spellings of a missing entry, in small letters. They are common
// practice, no source. "none" and "unknown" are left out: they are answers.
var usual = [...]string{"", "na", "n/a", "n.a.", "nan", "null", "nil", "missing", "#n/a", "#na", ".", "-", "--", "–", "—", "?"}

// spellings is a set of spellings by length, for a quick no.
type spellings struct {
	words   map[string]bool
	longest int
	numbers bool // some spelling may be a number, such as -99
}

func newSpellings(given []string) spellings {
	s := spellings{words: map[string]bool{"": true}, numbers: given != nil}
	if given == nil {
		given = usual[:]
	}
	for _, g := range given {
		g = strings.ToLower(strings.TrimSpace(g))
		s.words[g] = true
		s.longest = max(s.longest, len(g))
	}
	return s
}

func (s spellings) has(text string) bool {
	if text == "" {
		return true
	}
	return len(text) <= s.longest && s.words[strings.ToLower(text)]
}
