package effect

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// words says over what a simulation averaged.
func (s *simulation) words() string {
	rows := fmt.Sprintf("these %s rows", grouped(s.rows.n))
	if s.rows.n == 1 {
		rows = "this row"
	}
	if s.rows.n < s.m.Rows.Used {
		rows = fmt.Sprintf("%s of these %s rows, evenly spaced", grouped(s.rows.n), grouped(s.m.Rows.Used))
	}
	each := "row"
	if plate := s.m.Variables[s.plan.targets[0].variable].Plate; plate >= 0 {
		each = s.m.Plates[plate].Name
		rows = fmt.Sprintf("the %s levels of %s in %s", grouped(s.rows.units(plate)), each, rows)
	}
	if !s.bootstrap {
		return "over " + rows + ", each " + each + " alike"
	}
	var groups []string
	for _, p := range s.outer {
		groups = append(groups, fmt.Sprintf("%s (%s)", s.m.Plates[p].Name, grouped(len(s.m.Plates[p].Levels))))
	}
	if len(groups) == 0 {
		return "over a population like " + rows + ", weighed by " + each
	}
	return "over a population like " + rows + ", weighed by group: " + strings.Join(groups, ", ")
}

// grouped writes a whole number with thin groups of three digits: 12,000.
func grouped(n int) string {
	s := strconv.Itoa(n)
	for i := len(s) - 3; i > 0; i -= 3 {
		s = s[:i] + "," + s[i:]
	}
	return s
}

// digits writes a number with three digits that count, and a true minus sign.
func digits(x float64) string {
	s := strconv.FormatFloat(x, 'g', 3, 64)
	if a := math.Abs(x); a >= 0.001 && a < 1e6 {
		s = strconv.FormatFloat(x, 'f', max(0, 2-int(math.Floor(math.Log10(a)))), 64)
	}
	return strings.Replace(s, "-", "−", 1)
}

// short is digits without zeros at the end of a fraction.
func short(x float64) string {
	s := digits(x)
	if strings.Contains(s, ".") && !strings.Contains(s, "e") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}

// signed is short with a plus sign before what is not negative.
func signed(x float64) string {
	if x >= 0 {
		return "+" + short(x)
	}
	return short(x)
}

// between gives the middle and the central part of values.
func between(values []float64, level float64) (low, middle, high float64) {
	sorted := slices.Clone(values)
	slices.Sort(sorted)
	return quantile(sorted, (1-level)/2), quantile(sorted, 0.5), quantile(sorted, (1+level)/2)
}

// quantile of sorted values, interpolated between neighbours (Hyndman & Fan
// 1996, type 7).
func quantile(sorted []float64, p float64) float64 {
	if len(sorted) == 0 {
		return math.NaN()
	}
	at := p * float64(len(sorted)-1)
	i := min(int(at), len(sorted)-1)
	j := min(i+1, len(sorted)-1)
	return sorted[i] + (at-float64(i))*(sorted[j]-sorted[i])
}

// niceStep is 1, 2 or 5 times a power of ten, near a tenth of a range.
func niceStep(width float64) float64 {
	if !(width > 0) || math.IsInf(width, 0) {
		return 1
	}
	x := width / 10
	scale := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 2, 5} {
		if x/scale < m*1.5 {
			return m * scale
		}
	}
	return 10 * scale
}

// amountWords is "×1.02 (90 %: 1.00 to 1.04)" or "+2.5 (90 %: +1 to +4)".
func amountWords(values []float64, ratio bool, level float64) string {
	low, middle, high := between(values, level)
	write, mark := signed, ""
	if ratio {
		write, mark = digits, "×"
	}
	return fmt.Sprintf("%s%s (%s %%: %s to %s)", mark, write(middle), short(100*level), write(low), write(high))
}
