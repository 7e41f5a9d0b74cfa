package model

import (
	"fmt"
	"math"
	"sort"
	"strconv"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/study"
)

// A linkRange is a child's plausible range on the scale of its predictor
// (SEMANTICS C2).
type linkRange struct {
	low, high float64 // on the link scale
	words     string  // "range of bees 0–120 read as ½–120 on the log scale"
	fromData  bool
}

func (r linkRange) width() float64  { return r.high - r.low }
func (r linkRange) middle() float64 { return (r.low + r.high) / 2 }

// Bounds of SEMANTICS C2.
const (
	leastProbability = 0.02
	probitEdge       = 2.0537489106318225 // Φ of it is mostProbability
	mostProbability  = 0.98
	leastCount       = 0.5
	leastOfHigh      = 0.01 // of the high end, for positive variables
)

// onLink reads a child's range on the scale of its law's predictor. low and
// high are on the variable's own scale, shares of the trials for a binomial.
func onLink(v *Variable, f *catalog.Family, low, high float64, shares bool) linkRange {
	r := linkRange{fromData: !v.RangeGiven}
	what, seen := "range of "+v.ID, ""
	if r.fromData {
		seen = " seen in the data"
	}
	stated := fmt.Sprintf("%s %s%s", what, between(edge(low), edge(high)), seen)
	readAs := func(l, h float64, scale string) {
		if l == low && h == high {
			r.words = stated + ", on the " + scale
		} else {
			r.words = fmt.Sprintf("%s read as %s on the %s", stated, between(edge(l), edge(h)), scale)
		}
	}
	switch {
	case f.Link == catalog.Softmax || f.Link.Cumulative() || v.Scale == study.Binary && f.Link == catalog.Logit:
		r.low, r.high = logit(leastProbability), logit(mostProbability)
		scale := "log-odds"
		if f.Link == catalog.Probit {
			r.low, r.high = -probitEdge, probitEdge
			scale = "probit"
		}
		r.fromData = false
		r.words = fmt.Sprintf("probabilities of %s read as .02–.98 on the %s scale", v.ID, scale)
	case f.Link == catalog.Logit:
		l := math.Min(math.Max(low, leastProbability), mostProbability)
		h := math.Max(math.Min(high, mostProbability), leastProbability)
		if h-l < 1e-9 { // one share only, or all beyond the same bound
			l, h = leastProbability, mostProbability
		}
		r.low, r.high = logit(l), logit(h)
		if shares {
			stated = fmt.Sprintf("share of %s in its trials %s%s", v.ID, between(edge(low), edge(high)), seen)
		}
		readAs(l, h, "log-odds scale")
	case onLogScale(f):
		l, h := low, high
		if f.Discrete {
			l = math.Max(l, leastCount)
			h = math.Max(h, 1)
		} else {
			l = math.Max(l, leastOfHigh*high)
		}
		r.low, r.high = math.Log(l), math.Log(h)
		readAs(l, h, "log scale")
	default:
		r.low, r.high = low, high
		r.words = stated
	}
	return r
}

// onLogScale reports whether a family's predictor is on the log scale: by its
// link, or because the predicted argument is itself the mean of the log.
func onLogScale(f *catalog.Family) bool {
	return f.Link == catalog.Log || f.Name == "log-normal"
}

func logit(p float64) float64 { return math.Log(p / (1 - p)) }

// round keeps four digits: what a statement prints is then exactly what is
// used, and no prior is meant more finely.
func round(v float64) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 4, 64), 64)
	if err != nil {
		return v
	}
	return r
}

// roundTo rounds v to a thousandth of a width, for centres and middles, where
// digits count from the width and not from zero.
func roundTo(v, width float64) float64 {
	if width <= 0 || math.IsInf(width, 0) || math.IsNaN(width) {
		return v
	}
	places := 3 - int(math.Floor(math.Log10(width)))
	if places < 0 {
		unit := math.Pow(10, float64(-places))
		return math.Round(v/unit) * unit
	}
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'f', min(places, 300), 64), 64)
	if err != nil {
		return v
	}
	return r + 0 // −0 prints as 0
}

// span writes a range: 0–120, but −5 to 5, since a dash beside a minus reads
// as another minus.
func span(low, high float64) string { return between(short(low), short(high)) }

func between(low, high string) string {
	if strings.Contains(low+high, "−") {
		return low + " to " + high
	}
	return low + "–" + high
}

// edge writes an end of a range: ½ where C2 puts it.
func edge(v float64) string {
	if v == leastCount {
		return "½"
	}
	return short(v)
}

// short writes a number for people, in four digits, without an exponent where
// it is not tiny.
func short(v float64) string {
	s := strconv.FormatFloat(v, 'g', 4, 64)
	if f, err := strconv.ParseFloat(s, 64); err == nil {
		if a := math.Abs(f); a == 0 || a >= 1e-4 && a < 1e15 {
			s = strconv.FormatFloat(f, 'f', -1, 64)
		}
	}
	return strings.ReplaceAll(s, "-", "−")
}

// extent gives the least and greatest number, NaN left out; NaN if there is none.
func extent(values []float64) (low, high float64) {
	low, high = math.NaN(), math.NaN()
	for _, v := range values {
		if math.IsNaN(v) {
			continue
		}
		if !(v >= low) {
			low = v
		}
		if !(v <= high) {
			high = v
		}
	}
	return low, high
}

// median of the numbers that are there; NaN if there is none.
func median(values []float64) float64 {
	var s []float64
	for _, v := range values {
		if !math.IsNaN(v) {
			s = append(s, v)
		}
	}
	if len(s) == 0 {
		return math.NaN()
	}
	sort.Float64s(s)
	return (s[(len(s)-1)/2] + s[len(s)/2]) / 2
}
