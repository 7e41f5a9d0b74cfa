package ui

import (
	"math"
	"strconv"
	"strings"

	"arrowroot/app/words"
)

// number reads what people type: a comma or a point, either minus sign.
func number(text string) (float64, bool) {
	text = strings.NewReplacer("−", "-", ",", ".", " ", "").Replace(strings.TrimSpace(text))
	x, err := strconv.ParseFloat(text, 64)
	return x, err == nil && !math.IsNaN(x) && !math.IsInf(x, 0)
}

// percent prints a share to the nearest percent.
func percent(share float64) string {
	if p := 100 * share; p > 0 && p < 1 {
		return "<1 %"
	}
	return strconv.FormatFloat(100*share, 'f', 0, 64) + " %"
}

// count prints a whole number.
func count(n int) string { return words.Whole(float64(n)) }

// times is "1 row" or "3 rows", for words whose plural is not just an s.
func times(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return count(n) + " " + many
}

// orNone joins names; no names are "nothing".
func orNone(names []string) string { return words.List(names) }
