package evidence

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strings"

	"arrowroot/compile/causal"
)

// A Verdict is what the data say of one promise of the arrows.
type Verdict int

// The verdicts, in the order in which findings are listed.
const (
	Contradicted Verdict = iota // the data refuse it, all tests counted, and not by a trifle
	Doubtful                    // the interval holds no 0, but so many were tested that chance may do that
	Trifling                    // refused, all tests counted, yet too weak to matter
	Undecided                   // neither refused nor shown to hold
	Holds                       // the interval keeps close to none
	TooFew                      // too few rows to say
)

// String is a word or two for the verdict.
func (v Verdict) String() string {
	return [...]string{"contradicted", "in doubt", "a trifle", "undecided", "holds", "too few rows"}[v]
}

const (
	// falseAlarm is the chance that a right diagram has any contradicted
	// independence at all: "common practice, no source".
	falseAlarm = 0.05
	// trifle is the association under which a promise is as good as kept: it
	// explains 1 % of what is left to explain (Cohen 1988 calls 0.1 small).
	trifle = 0.1
)

// judge adjusts p for the number of tests and gives verdicts.
func (b *bench) judge(all []Finding) {
	p := make([]float64, len(all))
	for i := range all {
		p[i] = all[i].P
	}
	for i, adjusted := range holm(p) {
		f := &all[i]
		f.Adjusted = adjusted
		if f.Verdict != TooFew {
			f.Verdict, f.Short = verdict(f.Effect, adjusted)
		}
	}
}

// verdict weighs size and adjusted p.
func verdict(e Effect, adjusted float64) (Verdict, string) {
	reach := math.Max(math.Abs(e.Low), math.Abs(e.High))
	switch {
	case adjusted <= falseAlarm && reach > trifle:
		return Contradicted, "contradicted"
	case adjusted <= falseAlarm:
		return Trifling, "a trace, within " + bound(reach, e.Signed)
	case sure(e) > 0 && reach > trifle:
		return Doubtful, fmt.Sprintf("in doubt: %s to %s", number(e.Low), number(e.High))
	case reach <= trifle:
		return Holds, "holds within " + bound(reach, e.Signed)
	}
	return Undecided, fmt.Sprintf("cannot say: %s to %s", number(e.Low), number(e.High))
}

// holm adjusts p values so that the chance of any false alarm keeps to the
// level whatever the tests have to do with each other (Holm 1979). What is NaN
// is no test.
func holm(p []float64) []float64 {
	out := slices.Repeat([]float64{math.NaN()}, len(p))
	var order []int
	for i, x := range p {
		if !math.IsNaN(x) {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(i, j int) int { return cmp.Compare(p[i], p[j]) })
	least := 0.0
	for k, i := range order {
		least = math.Max(least, math.Min(1, float64(len(order)-k)*p[i]))
		out[i] = least
	}
	return out
}

// sure is the size that the interval is sure of: its end next to none, 0 if it
// holds none.
func sure(e Effect) float64 {
	if e.Low > 0 {
		return e.Low
	}
	return math.Max(0, -e.High)
}

// worse sorts by how badly a promise fails: verdict, the size that is sure,
// size, p.
func worse(x, y Finding) int {
	return cmp.Or(
		cmp.Compare(x.Verdict, y.Verdict),
		cmp.Compare(sure(y.Effect), sure(x.Effect)),
		cmp.Compare(math.Abs(y.Value), math.Abs(x.Value)),
		cmp.Compare(x.P, y.P),
	)
}

// say writes the sentence of a finding.
func (b *bench) say(f *Finding) {
	f.Sentence = f.Claim + " " + b.shown(f)
	if f.Repair != nil {
		f.Sentence += " " + f.Repair.Sentence
		if n := f.Repair.Mends - 1; n > 0 {
			f.Sentence = strings.TrimSuffix(f.Sentence, ".") + fmt.Sprintf(" and for %s.", more(n))
		}
	}
}

func more(n int) string {
	if n == 1 {
		return "one other that fails"
	}
	return fmt.Sprintf("%d others that fail", n)
}

// shown says what the data show of a promise.
func (b *bench) shown(f *Finding) string {
	kind := kindOf(f.Effect)
	if f.Bent {
		kind = "an association that bends back, between 0 and 1:"
	}
	size := fmt.Sprintf("%s %s, %s %s to %s", kind, number(f.Value), percent(b.req.Level), number(f.Low), number(f.High))
	switch f.Verdict {
	case Contradicted:
		are := "they are not"
		if len(f.A) == 1 && len(f.B) > 1 {
			are = "it is not"
		}
		return fmt.Sprintf("In these data %s (%s).", are, size)
	case Doubtful:
		return fmt.Sprintf("These data speak against it (%s), but chance could do that, all tests counted.", size)
	case Trifling:
		return fmt.Sprintf("In these data a trace of association is left (%s), too weak to matter for most purposes.", size)
	case Holds:
		return fmt.Sprintf("In these data that %s (%s).", f.Short, size)
	case Undecided:
		return fmt.Sprintf("These data neither refuse it nor show that it holds (%s).", size)
	}
	if f.Short != "too few rows to say" {
		return fmt.Sprintf("These data cannot say: %s.", f.Short)
	}
	if f.Groups > 0 {
		return fmt.Sprintf("%s in %s are too few to say.", plural(f.Rows, "row"), plural(f.Groups, f.Plate))
	}
	return fmt.Sprintf("These data have too few rows to say (%d of %d can be used).", f.Rows, f.Read)
}

// kindOf names the size as people read it.
func kindOf(e Effect) string {
	if e.Signed {
		return "partial association"
	}
	return "association between 0 and 1:"
}

// summary says what the findings come to.
func (b *bench) summary(e *Evidence) string {
	n := make(map[Verdict]int)
	for i := range e.Findings {
		n[e.Findings[i].Verdict]++
	}
	total := len(e.Findings)
	switch {
	case total == 0 && len(e.Untested) == 0:
		return "These arrows imply no independence between measured variables: the data cannot contradict them."
	case total == 0:
		return "None of the independences that these arrows imply can be tested with these data."
	case n[TooFew] == total:
		return fmt.Sprintf("These arrows imply %s that the data could contradict, but there are too few rows to say.", plural(total, "independence"))
	}
	parts := []string{are(n[Contradicted], "contradicted")}
	if k := n[Doubtful]; k > 0 {
		parts = append(parts, are(k, "in doubt"))
	}
	if k := n[Holds] + n[Trifling]; k > 0 {
		parts = append(parts, hold(k))
	}
	if k := n[Undecided] + n[TooFew]; k > 0 {
		parts = append(parts, stay(k))
	}
	text := fmt.Sprintf("Of %s that these arrows imply and the data could contradict, %s", plural(total, "independence"), strings.Join(parts, ", "))
	if total == 1 {
		text = "The one independence that these arrows imply and the data could contradict is " + map[Verdict]string{
			Contradicted: "contradicted", Doubtful: "in doubt", Trifling: "kept but for a trace", Holds: "kept", Undecided: "left undecided",
		}[e.Findings[0].Verdict]
	}
	return text + "."
}

func are(n int, what string) string {
	switch n {
	case 0:
		return "none is " + what
	case 1:
		return "1 is " + what
	}
	return fmt.Sprintf("%d are %s", n, what)
}

func hold(n int) string {
	if n == 1 {
		return fmt.Sprintf("1 holds within ±%s or nearly so", number(trifle))
	}
	return fmt.Sprintf("%d hold within ±%s or nearly so", n, number(trifle))
}

func stay(n int) string {
	if n == 1 {
		return "1 stays undecided"
	}
	return fmt.Sprintf("%d stay undecided", n)
}

// method says how it was tested, for a methods section.
func (b *bench) method(e *Evidence) string {
	text := "Both variables are compared by normal scores (a category by its levels) after the given ones are taken out by regression on splines of their scores, or cell by cell where they have few values " +
		"(generalised covariance measure, Shah & Peters 2020); numbers are also compared with each other's squared scores, which sees what rises and falls again. " +
		fmt.Sprintf("P values are adjusted for all tests together (Holm 1979): of diagrams that are right, at most %s show a contradicted independence.", percent(falseAlarm))
	var plates []string
	for i := range e.Findings {
		if p := e.Findings[i].Plate; p != "" && !slices.Contains(plates, p) {
			plates = append(plates, p)
		}
	}
	if len(plates) > 0 {
		slices.Sort(plates)
		text += fmt.Sprintf(" Intervals let rows of one %s depend on each other (Liang & Zeger 1986).", strings.Join(plates, " or one "))
	}
	return text
}

// key names a statement by its variables, whatever their order.
func (b *bench) key(s causal.Independence) string {
	list := func(nodes []int) string {
		words := b.g.NamesOf(nodes)
		slices.Sort(words)
		return strings.Join(words, ", ")
	}
	ends := []string{list(s.A), list(s.B)}
	slices.Sort(ends)
	return strings.Join(append(ends, list(s.Given)), " | ")
}

// number is a size for people, with a true minus sign.
func number(x float64) string {
	text := fmt.Sprintf("%.2f", x)
	if text == "-0.00" {
		return "0.00"
	}
	return strings.Replace(text, "-", "−", 1)
}

// bound rounds outwards.
func bound(reach float64, signed bool) string {
	text := number(math.Ceil(100*reach) / 100)
	if signed {
		return "±" + text
	}
	return text
}

func percent(level float64) string {
	return strings.TrimSuffix(strings.TrimRight(fmt.Sprintf("%.1f", 100*level), "0"), ".") + " %"
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
