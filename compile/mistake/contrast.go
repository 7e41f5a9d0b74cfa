package mistake

import (
	"fmt"
	"math"
	"strconv"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// noContrast finds a question that names exposure and outcome but nothing to
// compare (M7): an effect is one of two settings (Lundberg, Johnson & Stewart
// 2021 ask for the estimand first).
func noContrast(l *look) []Mistake {
	q := l.ask
	if !l.asked() || q.Shift != 0 || q.From != nil && q.To != nil {
		return nil
	}
	x, y := l.g.Names[l.x], l.g.Names[l.y]
	m := Mistake{
		Code: NoContrast, Severity: Warn, Key: key(NoContrast, x, y), Nodes: []string{x},
		Sentence: fmt.Sprintf("The question compares no values of %s: say from which to which.", x),
		Why:      fmt.Sprintf("The effect on %s is that of moving %s from one value to another; without them there is no number to give.", y, x),
	}
	if from, to := Contrast(l.variable(l.x), l.table); from != nil && l.at >= 0 {
		ask := *q
		ask.From, ask.To = from, to
		m.Repairs = []Repair{{fmt.Sprintf("Compare %s → %s", settingWords(*from), settingWords(*to)), study.ChangeQuestion{At: l.at, To: ask}}}
	}
	return []Mistake{m}
}

// Contrast is a first pair of values of an exposure to compare, until the user
// says others: the ends of its levels, the outer eighths of its data, or the
// outer eighths of its plausible range. Both are nil where nothing is known.
func Contrast(v *study.Variable, t *table.Table) (from, to *study.Setting) {
	pair := func(a, b study.Setting) (*study.Setting, *study.Setting) { return &a, &b }
	switch {
	case v == nil || v.Unmeasured:
		return nil, nil
	case len(v.Levels) > 1:
		return pair(study.Setting{Word: v.Levels[0]}, study.Setting{Word: v.Levels[len(v.Levels)-1]})
	case v.Scale == study.Binary:
		return pair(study.Setting{Number: 0}, study.Setting{Number: 1})
	}
	low, high := math.NaN(), math.NaN()
	if q := table.Quantiles(numbers(v, t), 4); len(q) == 4 { // at 1/8, 3/8, 5/8 and 7/8
		low, high = q[0], q[3]
	} else if v.Range != nil {
		width := v.Range.High - v.Range.Low
		low, high = v.Range.Low+width/8, v.Range.High-width/8
	}
	if !(low < high) {
		return nil, nil
	}
	return pair(study.Setting{Number: short(low, high-low)}, study.Setting{Number: short(high, high-low)})
}

// numbers are the values of a variable in the data, in its own unit; nil
// without any.
func numbers(v *study.Variable, t *table.Table) []float64 {
	if t == nil || v.Column == "" {
		return nil
	}
	c := t.Column(v.Column)
	if c == nil || c.Kind != table.Numeric {
		return nil
	}
	if v.Divide == 0 || v.Divide == 1 {
		return c.Numbers
	}
	values := make([]float64, len(c.Numbers))
	for i, x := range c.Numbers {
		values[i] = x / v.Divide
	}
	return values
}

func spread(values []float64) float64 {
	q := table.Quantiles(values, 4)
	if len(q) < 4 {
		return 0
	}
	return q[3] - q[0]
}

// short cuts x to a tenth of the order of size: 43.7 of a width of 20 is 44.
func short(x, size float64) float64 {
	if !(size > 0) || math.IsInf(size, 0) {
		return x
	}
	unit := math.Pow(10, math.Floor(math.Log10(size))-1)
	text := strconv.FormatFloat(math.Round(x/unit)*unit, 'g', 6, 64) // 0.30000000000000004 is 0.3
	r, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return x
	}
	return r
}

func settingWords(s study.Setting) string {
	if s.Word != "" {
		return s.Word
	}
	return strconv.FormatFloat(s.Number, 'g', 6, 64)
}
