package study

import (
	"strconv"
	"strings"
	"unicode"

	"arrowroot/compile/formula"
)

// IDOf is the ID of a variable or plate that typed text stands for, whether or
// not one has it already: the text itself where it can be a name, else what
// FreeID would make of it were the ledger empty; "" where it holds no letter or
// digit.
func IDOf(text string) string {
	if id := formula.Canonical(text); formula.IsName(id) {
		return id
	}
	if !strings.ContainsFunc(text, func(r rune) bool { return unicode.IsLetter(r) || unicode.IsDigit(r) }) {
		return ""
	}
	return freeName(text, func(string) bool { return false })
}

// FreeID makes an ID of any text, such as a heading or what somebody typed on
// the sheet: one that can name a variable and that none has yet. "Hedge
// density (m/ha)" gives Hedge_density_m_ha, "log" gives log_1.
func (s *Study) FreeID(text string) string {
	return freeName(text, func(id string) bool { return s.Variable(id) != nil })
}

func freeName(text string, taken func(string) bool) string {
	var b strings.Builder
	gap := false
	for _, r := range text {
		switch {
		case unicode.IsLetter(r) || b.Len() > 0 && (unicode.IsDigit(r) || unicode.Is(unicode.M, r)):
			if gap && b.Len() > 0 {
				b.WriteByte('_')
			}
			b.WriteRune(r)
			gap = false
		case unicode.IsDigit(r):
			b.WriteString("v" + string(r)) // a name begins with a letter
		default:
			gap = true
		}
	}
	base := formula.Canonical(b.String())
	if base == "" {
		base = "v"
	}
	id := base
	for n := 1; !formula.IsName(id) || taken(id); n++ {
		id = base + "_" + strconv.Itoa(n)
	}
	return id
}
