package sensitivity

import (
	"cmp"
	"fmt"
	"math"
	"strconv"
	"strings"
)

// say puts values and benchmarks into sentences; a value never stands alone.
func (r *Result) say() []string {
	in := r.Input
	var lines []string
	compared := r.NoBenchmarks
	if len(r.Benchmarks) == 0 {
		compared = "There is nothing to compare that with: " + r.NoBenchmarks + "."
	}
	if b := r.Robustness; b != nil {
		interval := fmt.Sprintf("; %s of each would bring the %s interval to it", percent(b.Limit), percent(in.Level))
		if b.Limit == 0 {
			interval = fmt.Sprintf("; the %s interval holds no effect as it is", percent(in.Level))
		}
		line := fmt.Sprintf("An unmeasured cause that explained %s of what is left of %s and of %s would leave no effect%s (robustness value, Cinelli & Hazlett 2020).",
			percent(b.Value), in.ExposureName, in.OutcomeName, interval)
		lines = append(lines, line, cmp.Or(r.compareShares(), compared))
	}
	if e := r.E; e != nil {
		how := ""
		if e.Conversion != "" {
			how = ", " + e.Conversion
		}
		limit := fmt.Sprintf("%s for the interval", ratio(e.Limit))
		if e.Limit == 1 {
			limit = "none for the interval, which holds 1"
		}
		line := fmt.Sprintf("As ratios: it would have to go with %s and with %s by ×%s each, %s (E-value, VanderWeele & Ding 2017%s).",
			in.ExposureName, in.OutcomeName, ratio(e.Value), limit, how)
		lines = append(lines, line)
		if s := r.compareRatios(); s != "" {
			lines = append(lines, s)
		} else if r.Robustness == nil {
			lines = append(lines, compared)
		}
	}
	if len(lines) > 0 && len(in.NotCompared) > 0 {
		lines = append(lines, "Not compared: "+strings.Join(in.NotCompared, ", ")+".")
	}
	if len(lines) == 0 {
		lines = append(lines, fmt.Sprintf("How wrong it could be is not said: %s.", cmp.Or(r.NoRobustness, r.NoE)))
	}
	return lines
}

// compareShares says what a cause as strong as each held variable would leave.
func (r *Result) compareShares() string {
	var parts []string
	for _, b := range r.Benchmarks {
		once := b.Times[0]
		what := fmt.Sprintf("as strong as %s (%s of %s, %s of %s)", b.Name, percent(b.OfExposure), r.Input.ExposureName, percent(b.OfOutcome), r.Input.OutcomeName)
		switch {
		case once.Impossible:
			parts = append(parts, what+" it cannot be, since that would explain all of "+r.Input.ExposureName)
		case !math.IsNaN(once.Adjusted):
			text := fmt.Sprintf("%s it would leave %s of %s", what, number(once.Adjusted), number(r.Input.Estimate))
			if r.Input.onAddingScale(once.Adjusted)*r.Input.onAddingScale(r.Input.Estimate) <= 0 {
				text += ", nothing or the reverse"
			} else if k := r.enough(b); k > 0 {
				text += fmt.Sprintf(", %s times as strong nothing or the reverse", strconv.FormatFloat(k, 'g', 3, 64))
			}
			parts = append(parts, text)
		}
	}
	if len(parts) == 0 {
		return ""
	}
	return "Beside what is held: " + strings.Join(parts, "; ") + "."
}

// enough is the least of the shown multiples that takes the effect away; 0 if
// none does.
func (r *Result) enough(b Benchmark) float64 {
	estimate := r.Input.onAddingScale(r.Input.Estimate)
	for _, t := range b.Times[1:] {
		if left := r.Input.onAddingScale(t.Adjusted); !t.Impossible && left*estimate <= 0 {
			return t.K
		}
	}
	return 0
}

// compareRatios says by what ratios the held variables go with both ends.
func (r *Result) compareRatios() string {
	var parts []string
	for _, b := range r.Benchmarks {
		parts = append(parts, fmt.Sprintf("%s goes with them by about ×%s and ×%s and can move the ratio by ×%s at most", b.Name, ratio(b.RatioExposure), ratio(b.RatioOutcome), ratio(b.Factor)))
	}
	if len(parts) == 0 {
		return ""
	}
	return "Beside what is held: " + strings.Join(parts, "; ") + "."
}

// percent is a share for people: two digits that count.
func percent(x float64) string {
	digits := 0
	if p := 100 * math.Abs(x); p < 10 && p > 0 {
		digits = 1
	}
	return strings.TrimSuffix(strconv.FormatFloat(100*x, 'f', digits, 64), ".0") + " %"
}

func ratio(x float64) string { return strconv.FormatFloat(x, 'f', 2, 64) }

// number has three digits that count and a true minus sign.
func number(x float64) string {
	digits := 2
	if x != 0 {
		digits = max(0, 2-int(math.Floor(math.Log10(math.Abs(x)))))
	}
	return strings.Replace(strconv.FormatFloat(x, 'f', min(digits, 8), 64), "-", "−", 1)
}
