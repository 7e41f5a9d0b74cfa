package table

import (
	"math"
	"strconv"
	"strings"
)

// A reader turns the fields of a column into numbers or words.
type reader struct {
	text      string
	separator byte
	decimal   byte // 0 = to be found
	missing   spellings
}

// mostly is the share of numbers among its entries from which on a column is
// numeric and its other entries are strange.
const mostly = 0.75

// column reads one column: numbers if enough of its entries are, else words.
func (r reader) column(fields []span) *Column {
	decimal := r.decimal
	if decimal == 0 {
		decimal = r.findDecimal(fields)
	}
	c := &Column{Kind: Numeric, Numbers: make([]float64, len(fields))}
	numbers, signs, codes := 0, 0, 0
	for i, f := range fields {
		text := f.in(r.text)
		c.Numbers[i] = math.NaN()
		if v, percent, ok := number(text, decimal); ok && !(r.missing.numbers && r.missing.has(text)) {
			c.Numbers[i] = v
			numbers++
			if percent {
				signs++
			}
			if padded(text) {
				codes++
			}
			continue
		}
		if r.missing.has(text) {
			c.Missing++
			continue
		}
		c.Strange = append(c.Strange, Strange{Row: i, Text: text})
		if len(c.Strange) > 1000 && float64(len(c.Strange)) > (1-mostly)*float64(len(fields)) {
			return r.words(fields) // already too many, whatever follows
		}
	}
	if codes >= 2 && 100*codes >= numbers {
		return r.words(fields) // 007 is nobody's measurement
	}
	if !c.mostlyNumbers() {
		return r.words(fields)
	}
	switch {
	case signs == 0:
	case 2*signs >= numbers:
		c.Percent = true
		r.strangeWhere(c, fields, func(text string) bool { return !strings.HasSuffix(text, "%") })
	default:
		r.strangeWhere(c, fields, func(text string) bool { return strings.HasSuffix(text, "%") })
	}
	if signs > 0 && !c.mostlyNumbers() {
		return r.words(fields)
	}
	for i := range c.Strange {
		c.Strange[i].Text = strings.Clone(c.Strange[i].Text) // lets go of the file's text
	}
	return c
}

// mostlyNumbers reports whether few enough entries are strange. A column
// without entries counts as numbers.
func (c *Column) mostlyNumbers() bool {
	entries := len(c.Numbers) - c.Missing
	return float64(entries-len(c.Strange)) >= mostly*float64(entries)
}

// padded reports whether digits alone begin with a zero, as numbers of houses,
// sites or persons do.
func padded(text string) bool {
	return len(text) > 1 && text[0] == '0' && strings.Trim(text, "0123456789") == ""
}

// strangeWhere makes strange those numbers whose text is of the odd kind.
func (r reader) strangeWhere(c *Column, fields []span, odd func(string) bool) {
	c.Strange = nil
	for i, f := range fields {
		text := f.in(r.text)
		isNumber := !math.IsNaN(c.Numbers[i])
		if isNumber && !odd(text) || !isNumber && r.missing.has(text) {
			continue
		}
		c.Numbers[i] = math.NaN()
		c.Strange = append(c.Strange, Strange{Row: i, Text: text})
	}
}

// findDecimal finds the decimal mark of a column: a comma if more numbers have
// a comma than a point, and the commas cannot be there for thousands, which
// between semicolons nobody writes.
func (r reader) findDecimal(fields []span) byte {
	commas, points, certain := 0, 0, r.separator == ';'
	for _, f := range fields {
		text := r.text[f.start : f.end&^doubled]
		comma := strings.IndexByte(text, ',')
		if comma < 0 {
			if strings.IndexByte(text, '.') >= 0 {
				points++
			}
			continue
		}
		text = strings.TrimSpace(text)
		if _, _, ok := number(text, ','); ok {
			commas++
			certain = certain || !thousands(strings.TrimLeft(text, "+-−"))
		}
	}
	if certain && commas > points {
		return ','
	}
	return '.'
}

// thousands reports whether commas stand where they group digits by three.
func thousands(text string) bool {
	groups := strings.Split(text, ",")
	for i, g := range groups {
		if i > 0 && len(g) != 3 || i == 0 && (len(g) == 0 || len(g) > 3 || g == "0") {
			return false
		}
	}
	return true
}

// number reads a decimal number; a percent sign may follow. It is stricter than
// strconv.ParseFloat, which takes hexadecimal digits, underscores and words.
func number(text string, decimal byte) (v float64, percent, ok bool) {
	if text == "" {
		return 0, false, false
	}
	if rest, found := strings.CutSuffix(text, "%"); found {
		text, percent = strings.TrimRight(rest, " "), true
	}
	if rest, found := strings.CutPrefix(text, "−"); found {
		text = "-" + rest
	}
	at, mark := 0, -1
	if at < len(text) && (text[at] == '-' || text[at] == '+') {
		at++
	}
	negative := at == 1 && text[0] == '-'
	digits := 0
	var mantissa uint64
	for ; at < len(text); at++ {
		switch c := text[at]; {
		case '0' <= c && c <= '9':
			digits++
			mantissa = mantissa*10 + uint64(c-'0')
			continue
		case c == decimal && mark < 0:
			mark = at
			continue
		}
		break
	}
	if digits == 0 {
		return 0, false, false
	}
	if at == len(text) && digits <= 15 {
		// Up to 15 digits and a power of ten up to 10^22 are exact, so that
		// one division rounds correctly (Clinger 1990).
		v = float64(mantissa)
		if mark >= 0 {
			v /= tens[at-mark-1]
		}
		if negative {
			v = -v
		}
		return v, percent, true
	}
	if at < len(text) && !exponent(text[at:]) {
		return 0, false, false
	}
	if decimal == ',' {
		text = strings.Replace(text, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(text, 64)
	return v, percent, err == nil
}

var tens = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// exponent reports whether text is e or E, a sign or none, and digits.
func exponent(text string) bool {
	if text[0] != 'e' && text[0] != 'E' {
		return false
	}
	text = text[1:]
	if text != "" && (text[0] == '-' || text[0] == '+') {
		text = text[1:]
	}
	return text != "" && strings.Trim(text, "0123456789") == ""
}

func (r reader) words(fields []span) *Column {
	texts := func(i int) string { return fields[i].in(r.text) }
	missing := r.missing.has
	if r.signs(fields) {
		missing = func(text string) bool { return text != "-" && r.missing.has(text) }
	}
	return wordColumn(len(fields), texts, missing)
}

// signs reports whether a column's words are + and −, as of a test's outcome:
// then - is no missing entry.
func (r reader) signs(fields []span) bool {
	plus := false
	for _, f := range fields {
		switch text := f.in(r.text); {
		case text == "+":
			plus = true
		case text == "-" || r.missing.has(text):
		default:
			return false
		}
	}
	return plus
}

func wordColumn(rows int, text func(int) string, missing func(string) bool) *Column {
	c := &Column{Kind: Words, Codes: make([]int32, rows)}
	codes := make(map[string]int32)
	for i := range rows {
		word := text(i)
		if missing(word) {
			c.Codes[i] = -1
			c.Missing++
			continue
		}
		code, seen := codes[word]
		if !seen {
			code = int32(len(c.Levels))
			word = strings.Clone(word)
			codes[word] = code
			c.Levels = append(c.Levels, word)
		}
		c.Codes[i] = code
	}
	return c
}

// AsWords reads a numeric column as words, its strange entries among them; a
// column of words is given back as it is. Levels are in the order of first
// appearance.
func (c *Column) AsWords() *Column {
	if c.Kind == Words {
		return c
	}
	strange := make(map[int]string, len(c.Strange))
	for _, s := range c.Strange {
		strange[s.Row] = s.Text
	}
	w := wordColumn(len(c.Numbers), func(i int) string {
		if v := c.Numbers[i]; !math.IsNaN(v) {
			return strconv.FormatFloat(v, 'f', -1, 64)
		}
		return strange[i]
	}, func(text string) bool { return text == "" })
	w.Name = c.Name
	return w
}
