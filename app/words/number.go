// Package words says results in sentences with the user's own names, the same
// in the window, the report and the batch program.
//
// Read number.go (how numbers are written), condition.go (what a question asks
// about), result.go (the answer), then coefficient.go, howwrong.go and checks.go.
package words

import (
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Percent is a level for people: "90 %".
func Percent(level float64) string { return Given(math.Round(1000*level)/10) + " %" }

// Number is a number for people: three significant digits, a true minus sign.
func Number(x float64) string {
	switch {
	case math.IsNaN(x):
		return "–"
	case math.IsInf(x, 0):
		return minus(strconv.FormatFloat(x, 'g', -1, 64))
	case x == 0:
		return "0"
	}
	digits := 2 - int(math.Floor(math.Log10(math.Abs(x))))
	switch {
	case digits > 8 || digits < -5:
		return minus(strconv.FormatFloat(x, 'g', 3, 64))
	case digits <= 0:
		return minus(strconv.FormatFloat(x, 'f', 0, 64))
	}
	return minus(strconv.FormatFloat(x, 'f', digits, 64))
}

// Whole is a count in groups of three: "12,000".
func Whole(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return "–"
	}
	text := strconv.FormatFloat(math.Round(x), 'f', 0, 64)
	for i := len(text) - 3; i > 0 && text[i-1] != '-'; i -= 3 {
		text = text[:i] + "," + text[i:]
	}
	return minus(text)
}

// Given is a number the user typed: all its digits.
func Given(x float64) string { return minus(strconv.FormatFloat(x, 'g', -1, 64)) }

func minus(s string) string { return strings.Replace(s, "-", "−", 1) }

// List joins names: "a, b and c".
func List(names []string) string {
	switch len(names) {
	case 0:
		return "nothing"
	case 1:
		return names[0]
	}
	return strings.Join(names[:len(names)-1], ", ") + " and " + names[len(names)-1]
}

// Plural is "1 row" or "3 rows".
func Plural(n int, one string) string {
	if n == 1 {
		return "1 " + one
	}
	return Whole(float64(n)) + " " + one + "s"
}

// Upper begins a sentence.
func Upper(s string) string {
	if s == "" {
		return ""
	}
	first, size := utf8.DecodeRuneInString(s)
	return string(unicode.ToUpper(first)) + s[size:]
}
