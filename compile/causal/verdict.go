package causal

import (
	"fmt"
	"strings"
)

// VerdictKind sorts verdicts by what the user can do next.
type VerdictKind int

// The kinds of verdict.
const (
	Incomplete VerdictKind = iota // no exposure or no outcome yet
	Confounded                    // hold the proposed set
	Readable                      // the held set is valid
	OverHeld                      // something held must be left free
	NoSet                         // no set of measured variables works
	NoEffect                      // no causal path is drawn
)

// A Verdict is the reading in a sentence or two.
type Verdict struct {
	Kind          VerdictKind
	Sentence      string
	Propose       []int // the set to hold instead of the present one …
	ProposeWithin []int // … and the plates
	HasProposal   bool
	Way           string // what else there is to say or do; "" = nothing
}

func (r *Reading) incomplete() Verdict {
	x, y := r.Query.Exposure, r.Query.Outcome
	v := Verdict{Kind: Incomplete}
	switch {
	case x < 0 && y < 0:
		v.Sentence = "Nothing is asked yet: name an exposure and an outcome."
	case x < 0:
		v.Sentence = fmt.Sprintf("The effect of what on %s? Name an exposure.", r.Graph.Names[y])
	case y < 0:
		v.Sentence = fmt.Sprintf("The effect of %s on what? Name an outcome.", r.Graph.Names[x])
	default:
		v.Sentence = fmt.Sprintf("%s is both exposure and outcome. Name another outcome.", r.Graph.Names[x])
	}
	return v
}

func (r *Reading) verdict(c *comparison) Verdict {
	g, q := r.Graph, r.Query
	pair := g.Names[q.Exposure] + " → " + g.Names[q.Outcome]
	switch {
	case !r.Effect:
		return r.noEffect(c)
	case !g.Measured[q.Exposure] || !g.Measured[q.Outcome]:
		missing := q.Exposure
		if g.Measured[missing] {
			missing = q.Outcome
		}
		return Verdict{
			Kind:     NoSet,
			Sentence: fmt.Sprintf("%s cannot be read: %s was not measured.", pair, g.Names[missing]),
			Way:      "Give it a data column, or ask about something that it acts on.",
		}
	case r.Sets == nil:
		return r.noSet()
	case r.HeldValid:
		return Verdict{
			Kind:     Readable,
			Sentence: fmt.Sprintf("%s can be read from these data, holding %s, if the arrows drawn and not drawn are right.", pair, names(g, q.Held)),
			Way:      r.aboutRows(r.costly(c)),
		}
	case len(r.HeldFaults) > 0:
		return r.overHeld(c)
	}
	v := Verdict{Kind: Confounded, HasProposal: true, Propose: r.proposal(c, q.Held)}
	open := r.openPaths()
	v.Sentence = fmt.Sprintf("%s is confounded along %s. Hold %s.", pair, open, names(g, v.Propose))
	if len(q.Held) > 0 && within(q.Held, v.Propose) {
		v.Sentence = fmt.Sprintf("Holding %s is not enough: %s is confounded along %s. Hold %s as well.",
			names(g, q.Held), pair, open, names(g, minus(v.Propose, q.Held)))
	}
	if n := len(r.Sets); n > 1 {
		v.Way = fmt.Sprintf("%d minimal sets would do.", n)
		if r.MoreSets {
			v.Way = fmt.Sprintf("At least %d minimal sets would do.", n)
		}
	}
	return v
}

// aboutRows adds what the rows that were kept show.
func (r *Reading) aboutRows(text string) string {
	switch {
	case r.Kept == nil:
		return text
	case text == "":
		return r.Kept.Sentence
	}
	return text + " " + r.Kept.Sentence
}

// costly names the held variables that only cost precision: the set is valid
// without them, and they say something about the exposure but nothing more
// about the outcome.
func (r *Reading) costly(c *comparison) string {
	var idle []int
	for _, v := range r.Query.Held {
		rest := minus(r.Query.Held, []int{v})
		if c.valid(rest) && c.asPrecise(rest, r.Query.Held) && !c.asPrecise(r.Query.Held, rest) {
			idle = append(idle, v)
		}
	}
	if len(idle) == 0 {
		return ""
	}
	what := "it needs no holding, and leaving it free"
	if len(idle) > 1 {
		what = "any one of them needs no holding, and leaving it free"
	}
	return fmt.Sprintf("Holding %s costs precision: %s narrows the answer.", names(r.Graph, idle), what)
}

// proposal is the set to offer: it keeps what is usefully held, and is the most
// precise where that is known.
func (r *Reading) proposal(c *comparison, keep []int) []int {
	if len(keep) > 0 {
		if sets, more := c.minimal(keep, r.Query.MaxSets); sets != nil {
			if i := c.best(sets); i >= 0 && !more {
				return sets[i]
			}
			return sets[0]
		}
	}
	switch {
	case r.Precise >= 0:
		return r.Sets[r.Precise]
	case r.MoreSets && r.Optimal != nil:
		return r.Optimal
	}
	return r.Sets[0]
}

// openPaths counts the open paths that are not causal.
func (r *Reading) openPaths() string {
	backDoor, other := 0, 0
	for i := range r.Paths {
		switch p := &r.Paths[i]; {
		case !p.Open || p.Kind == Causal:
		case p.Kind == BackDoor:
			backDoor++
		default:
			other++
		}
	}
	var words string
	switch {
	case backDoor+other == 0:
		return "open paths longer than those listed"
	case other == 0:
		words = count(backDoor, "open back-door path")
	case backDoor == 0:
		words = count(other, "open path")
	default:
		words = count(backDoor+other, "open path")
	}
	if r.MorePaths {
		words = "at least " + words
	}
	return words
}

func (r *Reading) overHeld(c *comparison) Verdict {
	g, q := r.Graph, r.Query
	v := Verdict{Kind: OverHeld, HasProposal: true}
	var wrong []int
	for _, f := range r.HeldFaults {
		wrong = append(wrong, f.Node)
	}
	keep := minus(q.Held, wrong)
	v.Propose = r.proposal(c, keep)
	f := r.HeldFaults[0]
	name := g.Names[f.Node]
	switch {
	case f.Node == q.Exposure || f.Node == q.Outcome:
		v.Sentence = fmt.Sprintf("%s cannot be held: it is part of the question.", name)
	case f.Path == nil:
		v.Sentence = fmt.Sprintf("%s cannot be held: %s.", name, f.Reason)
	case c.causal[f.Node]:
		v.Sentence = fmt.Sprintf("Holding %s would hide part of the effect: %s.", name, f.Reason)
		v.Way = "Ask for the direct effect instead, or leave it free."
	case c.forbidden[f.Node]:
		v.Sentence = fmt.Sprintf("Holding %s would distort the effect: %s.", name, f.Reason)
	default:
		v.Sentence = fmt.Sprintf("Holding %s makes the comparison misleading: %s.", name, f.Reason)
	}
	if others := minus(tidy(wrong), []int{f.Node}); len(others) > 0 {
		v.Sentence += fmt.Sprintf(" Leave %s free too.", names(g, others))
	}
	if v.Way == "" {
		v.Way = fmt.Sprintf("Leave %s free", names(g, tidy(wrong)))
		if more := minus(v.Propose, q.Held); len(more) > 0 {
			v.Way += ", and hold " + names(g, v.Propose)
		}
		v.Way += "."
	}
	return v
}

func (r *Reading) noEffect(c *comparison) Verdict {
	g, q := r.Graph, r.Query
	x, y := g.Names[q.Exposure], g.Names[q.Outcome]
	v := Verdict{Kind: NoEffect, Sentence: fmt.Sprintf("No arrows lead from %s to %s: this diagram says that it has no effect.", x, y)}
	switch {
	case g.Descendants(q.Outcome)[q.Exposure]:
		v.Sentence = fmt.Sprintf("No arrows lead from %s to %s, but some lead the other way: this diagram says that it has no effect.", x, y)
		v.Way = fmt.Sprintf("To ask what %s does to %s, make %s the exposure.", y, x, y)
	case r.HeldValid && len(q.Held) == 0:
		v.Way = fmt.Sprintf("It also says that %s and %s are unrelated, which the data can contradict.", x, y)
	case r.HeldValid:
		v.Way = fmt.Sprintf("It also says that they are unrelated once %s %s held, which the data can contradict.", names(g, q.Held), be(len(q.Held)))
	case r.Sets != nil:
		v.HasProposal, v.Propose = true, r.proposal(c, nil)
		v.Way = fmt.Sprintf("Any relation in the data runs along %s. Hold %s to see whether the data agree.", r.openPaths(), names(g, v.Propose))
	default:
		v.Way = fmt.Sprintf("They may be related all the same, along %s.", r.openPaths())
	}
	return v
}

func (r *Reading) noSet() Verdict {
	if r.Kept != nil {
		if whole := newComparison(r.Graph, []int{r.Query.Exposure}, []int{r.Query.Outcome}); whole.exists(nil) {
			return Verdict{Kind: NoSet, Sentence: r.Kept.Sentence, Way: "With all rows it could be read: find out what the rows that were left out were like."}
		}
	}
	g, q := r.Graph, r.Query
	v := Verdict{Kind: NoSet}
	v.Sentence = fmt.Sprintf("No set of measured variables closes every back-door path from %s to %s", g.Names[q.Exposure], g.Names[q.Outcome])
	if why := r.whyNoSet(); why != "" {
		v.Sentence += ": " + why
	}
	v.Sentence += "."

	var words []string
	switch c, _, _ := InterventionCase(g, q.Exposure, q.Outcome); {
	case !r.Identifiable && r.Kept != nil:
		words = append(words, fmt.Sprintf("Rows were kept by %s, and no other way to the effect was looked for: what these rows show is an association.", names(g, q.Selected)))
	case !r.Identifiable:
		words = append(words, "The effect is not identified: what the data show is an association.")
	case c != NotSimulated:
		words = append(words, "The effect is identified all the same: the full model can be simulated under the intervention.")
	default:
		words = append(words, "The effect is identified all the same; not computed by this version.")
	}
	others := r.otherWays()
	if others != "" {
		words = append(words, others)
	}
	if wish := r.wish(); wish != "" {
		also := ""
		if others != "" {
			also = "also "
		}
		words = append(words, fmt.Sprintf("Measuring %s would %sdo.", wish, also))
	}
	v.Way = strings.Join(words, " ")
	return v
}

// whyNoSet says what stands in the way.
func (r *Reading) whyNoSet() string {
	g, q := r.Graph, r.Query
	var reasons []string
	for _, u := range r.Culprits {
		below := g.Descendants(u)
		ends := ""
		if below[q.Exposure] && below[q.Outcome] && !throughExposure(r, u) {
			ends = " and affects both"
		}
		reasons = append(reasons, fmt.Sprintf("%s is unmeasured%s", g.Names[u], ends))
	}
	for _, a := range r.CulpritArcs {
		reasons = append(reasons, fmt.Sprintf("%s and %s share an unmeasured cause", g.Names[a[0]], g.Names[a[1]]))
	}
	if g.Computed[q.Exposure] && reasons == nil {
		x := g.Names[q.Exposure]
		reasons = []string{fmt.Sprintf("%s is computed from %s, so the data never show it apart", x, names(g, g.Parents[q.Exposure]))}
	}
	if len(reasons) == 0 || len(reasons) > 3 {
		return ""
	}
	return series(reasons, "and")
}

// throughExposure reports whether u reaches the outcome only by way of the exposure.
func throughExposure(r *Reading, u int) bool {
	around := r.Graph.Keep(func(from, _ int) bool { return from != r.Query.Exposure }, nil)
	return !around.Descendants(u)[r.Query.Outcome]
}

// wish says what to measure.
func (r *Reading) wish() string {
	var words []string
	for _, v := range r.Culprits {
		words = append(words, r.Graph.Names[v])
	}
	for _, a := range r.CulpritArcs {
		words = append(words, fmt.Sprintf("the common cause of %s and %s", r.Graph.Names[a[0]], r.Graph.Names[a[1]]))
	}
	switch {
	case len(words) == 0:
		return ""
	case r.CulpritsAll:
		return series(words, "and")
	}
	return series(words, "or")
}

func be(n int) string {
	if n == 1 {
		return "is"
	}
	return "are"
}
