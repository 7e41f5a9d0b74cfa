package effect

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"arrowroot/compile/catalog"
)

// words says over what a simulation averaged.
func (s *simulation) words() string {
	out := s.rowWords()
	each := "row"
	if plate := s.m.Variables[s.plan.targets[0].variable].Plate; plate >= 0 {
		each = s.m.Plates[plate].Name
		out = fmt.Sprintf("the %s levels of %s in %s", grouped(s.rows.units(plate)), each, out)
	}
	switch {
	case s.bootstrap && len(s.outer) == 0:
		out = "over a population like " + out + ", weighed by " + each
	case s.bootstrap:
		var groups []string
		for _, p := range s.outer {
			groups = append(groups, fmt.Sprintf("%s (%s)", s.m.Plates[p].Name, grouped(s.rows.units(p))))
		}
		out = "over a population like " + out + ", weighed by group: " + strings.Join(groups, ", ")
		if s.byGroups {
			out += ", each drawn alike however many rows it has"
		}
	case s.byGroups:
		outer := s.outer[0]
		out = fmt.Sprintf("over %s, each %s counts once (%s)", out, s.m.Plates[outer].Name, grouped(s.rows.units(outer)))
	default:
		out = "over " + out + ", each " + each + " alike"
	}
	if plates := s.freshPlates(); len(plates) > 0 {
		out += ", averaged over new levels of " + strings.Join(plates, " and ")
	}
	if what := s.averaged(); what != "" {
		out = what + ", " + out
	}
	return out
}

// averaged says what stands in for the expected value; "" = nothing does.
func (s *simulation) averaged() string {
	t := s.plan.targets[0]
	switch {
	case t.law == nil || t.scale.levels > 0 || t.scale.event != nil:
		return ""
	case t.scale.trials >= 0:
		return "as the probability in one trial"
	case t.law.Family.Name == "Cauchy":
		return "as its centre, since a Cauchy law has no expected value"
	case t.law.Family.Support == catalog.Turn:
		return "as its mean direction"
	}
	return ""
}

// rowWords names the rows that are averaged over.
func (s *simulation) rowWords() string {
	all, rows := s.m.Rows.Used, fmt.Sprintf("these %s rows", grouped(s.m.Rows.Used))
	if s.m.Rows.Used == 1 {
		rows = "this row"
	}
	if asked := s.asked(); asked != nil {
		all = len(asked.Rows)
		rows = fmt.Sprintf("the %s of %s rows where %s", grouped(all), grouped(s.m.Rows.Used), asked.Words)
	}
	if s.rows.n < all {
		return fmt.Sprintf("%s of %s, evenly spaced", grouped(s.rows.n), rows)
	}
	return rows
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
