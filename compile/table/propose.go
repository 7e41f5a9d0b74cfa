package table

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// A Proposal says what a column might measure. It is for a person to accept.
type Proposal struct {
	Scale     string   // real, positive, proportion, count, binary, category, ordered
	Levels    []string // of words: in the order proposed; the first of two means 0
	Low, High float64  // least and greatest number, as they stand in the column
	Percent   bool     // divide by 100 to get a proportion
	Words     string   // why, in words: "whole numbers from 0 to 87"
}

// Propose proposes a scale for a column from its entries, and for percent from
// its name.
func Propose(c *Column) Proposal {
	if c.Kind == Words {
		return proposeWords(c)
	}
	return proposeNumbers(c)
}

// facts about the numbers of a column.
type facts struct {
	n, zeros, ones int
	low, high      float64
	whole          bool
}

func factsOf(values []float64) facts {
	f := facts{low: math.Inf(1), high: math.Inf(-1), whole: true}
	for _, v := range values {
		if math.IsNaN(v) {
			continue
		}
		f.n++
		f.low, f.high = min(f.low, v), max(f.high, v)
		switch v {
		case 0:
			f.zeros++
		case 1:
			f.ones++
		}
		f.whole = f.whole && v == math.Trunc(v)
	}
	return f
}

func proposeNumbers(c *Column) Proposal {
	f := factsOf(c.Numbers)
	if f.n == 0 {
		return Proposal{Scale: "real", Words: "no entries"}
	}
	p := Proposal{Low: f.low, High: f.high}
	from := fmt.Sprintf("from %s to %s", show(f.low), show(f.high))
	set := func(scale, format string, args ...any) Proposal {
		p.Scale, p.Words = scale, fmt.Sprintf(format, args...)
		return p
	}
	percent := f.low >= 0 && f.high <= 100 && (c.Percent || f.high > 1 && namesPercent(c.Name))
	switch {
	case f.low == f.high:
		return set(constantScale(f), "always %s", show(f.low))
	case percent:
		p.Percent = true
		return set("proportion", "percent %s%s", from, edges(f.zeros, hundreds(c.Numbers), "0", "100"))
	case f.zeros+f.ones == f.n:
		return set("binary", "0 and 1")
	case f.whole && f.low >= 1 && f.high <= 10 && f.high-f.low >= 2 && f.n >= 20:
		return set("count", "whole numbers %s: a count, or steps of an ordered scale", from)
	case f.whole && f.low == 1 && f.high == 2:
		return set("count", "1 and 2: a count, or a code for two groups")
	case f.whole && f.low >= 1500 && f.high <= 2200:
		return set("real", "whole numbers %s, perhaps years", from)
	case f.whole && f.low >= 0 && f.low <= 10:
		// Counts come near 0. Whole numbers that stay away from it are more
		// often measurements without decimals.
		return set("count", "whole numbers %s", from)
	case f.low >= 0 && f.high <= 1:
		return set("proportion", "numbers %s%s", from, edges(f.zeros, f.ones, "0", "1"))
	case f.low > 0:
		return set("positive", "numbers %s", from)
	case f.low == 0:
		return set("real", "numbers %s; %s would not suit a positive scale", from, times(f.zeros, "0"))
	}
	return set("real", "numbers %s", from)
}

func constantScale(f facts) string {
	switch {
	case f.zeros+f.ones == f.n:
		return "binary"
	case f.low > 0:
		return "positive"
	}
	return "real"
}

// edges mentions exact bounds of a proportion, which a beta law cannot take.
func edges(low, high int, lowWord, highWord string) string {
	switch {
	case low > 0 && high > 0:
		return fmt.Sprintf("; %s, %s", times(low, lowWord), times(high, highWord))
	case low > 0:
		return "; " + times(low, lowWord)
	case high > 0:
		return "; " + times(high, highWord)
	}
	return ""
}

func times(n int, value string) string {
	if n == 1 {
		return "1 entry is exactly " + value
	}
	return fmt.Sprintf("%d entries are exactly %s", n, value)
}

func hundreds(values []float64) int {
	n := 0
	for _, v := range values {
		if v == 100 {
			n++
		}
	}
	return n
}

func show(v float64) string {
	return strings.Replace(strconv.FormatFloat(v, 'g', 6, 64), "-", "−", 1)
}

// namesPercent reports whether a column's name speaks of percent.
func namesPercent(name string) bool {
	name = strings.ToLower(name)
	if strings.Contains(name, "%") || strings.Contains(name, "percent") || strings.Contains(name, "prozent") {
		return true
	}
	for _, part := range strings.FieldsFunc(name, func(r rune) bool { return strings.ContainsRune("_ .-/()[]", r) }) {
		if part == "pct" || part == "perc" || part == "pc" {
			return true
		}
	}
	return false
}

// pairs lists words for no and yes; common practice, no source.
var pairs = [...][2]string{
	{"no", "yes"}, {"n", "y"}, {"false", "true"}, {"f", "t"}, {"absent", "present"}, {"-", "+"},
	{"negative", "positive"}, {"neg", "pos"}, {"control", "treated"}, {"control", "treatment"}, {"control", "case"},
	{"unexposed", "exposed"}, {"untreated", "treated"}, {"off", "on"}, {"low", "high"}, {"before", "after"},
	{"alive", "dead"}, {"fail", "pass"}, {"failure", "success"}, {"nein", "ja"}, {"non", "oui"},
}

// orders lists words that come in an order; common practice, no source.
var orders = [...][]string{
	{"none", "very low", "low", "medium", "moderate", "middle", "mid", "average", "high", "very high"},
	{"none", "very mild", "mild", "moderate", "severe", "very severe"},
	{"never", "rarely", "seldom", "sometimes", "often", "usually", "always"},
	{"strongly disagree", "disagree", "somewhat disagree", "neutral", "neither", "neither agree nor disagree", "somewhat agree", "agree", "strongly agree"},
	{"very poor", "poor", "fair", "average", "good", "very good", "excellent"},
	{"very bad", "bad", "average", "good", "very good"},
	{"tiny", "very small", "small", "medium", "large", "very large", "huge"},
	{"short", "medium", "tall", "long"},
	{"young", "middle", "old"},
	{"cold", "cool", "mild", "warm", "hot"},
	{"dry", "moist", "wet"},
	{"early", "mid", "late"},
	{"l", "m", "h"},
	{"primary", "secondary", "tertiary"},
}

func proposeWords(c *Column) Proposal {
	switch n := len(c.Levels); {
	case n == 0:
		return Proposal{Scale: "category", Words: "no entries"}
	case n == 1:
		return Proposal{Scale: "category", Levels: slices.Clone(c.Levels), Words: "always “" + c.Levels[0] + "”"}
	case n == 2:
		levels := slices.Sorted(slices.Values(c.Levels))
		for _, p := range pairs {
			if strings.EqualFold(levels[0], p[1]) && strings.EqualFold(levels[1], p[0]) {
				slices.Reverse(levels)
				break
			}
		}
		return Proposal{Scale: "binary", Levels: levels, Words: "two words, “" + levels[0] + "” and “" + levels[1] + "”"}
	}
	if allDates(c.Levels) {
		return Proposal{Scale: "category", Levels: slices.Sorted(slices.Values(c.Levels)), Words: fmt.Sprintf("%d different dates; a trend needs a column of days or years as numbers", len(c.Levels))}
	}
	for _, order := range orders {
		if levels := inOrder(c.Levels, order); levels != nil {
			return Proposal{Scale: "ordered", Levels: levels, Words: "words in an order, " + strings.Join(levels, " < ")}
		}
	}
	if levels := numbered(c.Levels); levels != nil {
		return Proposal{Scale: "ordered", Levels: levels, Words: "words that begin with numbers, " + levels[0] + " … " + levels[len(levels)-1]}
	}
	p := Proposal{Scale: "category", Levels: slices.Sorted(slices.Values(c.Levels))}
	p.Words = fmt.Sprintf("%d different words", len(c.Levels))
	if present := len(c.Codes) - c.Missing; len(c.Levels) > 12 && present > len(c.Levels) {
		p.Words += ", perhaps the names of groups"
	} else if present == len(c.Levels) && present > 12 {
		p.Words += ", another one in each row"
	}
	return p
}

// allDates reports whether all levels look like dates: three numbers joined by
// the same -, / or ., or the first part of ISO 8601 before a T.
func allDates(levels []string) bool {
	for _, l := range levels {
		day, _, _ := strings.Cut(strings.ReplaceAll(l, "T", " "), " ")
		mark := strings.Trim(day, "0123456789")
		if mark == "" || !strings.ContainsRune("-/.", rune(mark[0])) {
			return false
		}
		parts := strings.Split(day, mark[:1])
		if len(parts) != 3 || strings.Trim(strings.Join(parts, ""), "0123456789") != "" || len(day) < 8 || len(day) > 10 {
			return false
		}
	}
	return true
}

// inOrder gives the levels as the order has them; nil if one is not in it.
func inOrder(levels, order []string) []string {
	place := func(level string) int {
		return slices.IndexFunc(order, func(w string) bool { return strings.EqualFold(w, level) })
	}
	for _, l := range levels {
		if place(l) < 0 {
			return nil
		}
	}
	sorted := slices.Clone(levels)
	slices.SortStableFunc(sorted, func(a, b string) int { return place(a) - place(b) })
	return sorted
}

// numbered gives levels such as "1 low", "2 mid" or "18-25", "26-40" by the
// number that each begins with; nil unless there are few, all begin with a
// number, no two with the same, and in some a word follows.
func numbered(levels []string) []string {
	if len(levels) > 12 {
		return nil
	}
	first := make(map[string]float64)
	seen := make(map[float64]bool)
	follows := false
	for _, l := range levels {
		end := 0
		for end < len(l) && ('0' <= l[end] && l[end] <= '9' || end > 0 && l[end] == '.') {
			end++
		}
		v, err := strconv.ParseFloat(strings.TrimRight(l[:end], "."), 64)
		if err != nil || seen[v] {
			return nil
		}
		first[l], seen[v] = v, true
		follows = follows || end < len(l)
	}
	if !follows {
		return nil
	}
	sorted := slices.Clone(levels)
	slices.SortFunc(sorted, func(a, b string) int {
		if first[a] < first[b] {
			return -1
		}
		return 1
	})
	return sorted
}
