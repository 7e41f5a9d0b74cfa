package words

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"arrowroot/app/fit"
	"arrowroot/infer/summary"
)

// NotCause stands beside every score.
const NotCause = "To predict better is not to be right about causes: a score says whose laws foretell values like these, not what would happen if something were changed."

// Comparison says how well rivals predict, a sentence a line.
func Comparison(c *fit.Comparison) []string {
	lines := []string{Task(c)}
	for _, s := range c.Rivals {
		lines = append(lines, scored(c, s))
	}
	for _, p := range c.Pairs {
		lines = append(lines, Difference(p))
	}
	lines = append(lines, BetterPredictor(c), PredictionWeights(c), NotCause)
	return lines
}

// Task says what the rivals had to predict.
func Task(c *fit.Comparison) string {
	n := len(c.Units)
	switch {
	case c.Plate != "":
		text := fmt.Sprintf("Each rival predicted %s (%s) of one %s after the other, %d in all, without having seen that %s", c.Outcome, Plural(c.Entries, "entry"), c.Plate, n, c.Plate)
		if most := mostReplicates(c); most > 0 {
			text += fmt.Sprintf(", its group effects drawn anew %s times", Whole(float64(most)))
		}
		return strings.Replace(text, "entrys", "entries", 1) + "."
	case c.KnownOnly:
		return fmt.Sprintf("Each rival predicted %s of one row after the other, %s in all, without having seen it, as a new row of a group that is known.", c.Outcome, Whole(float64(n)))
	}
	return fmt.Sprintf("Each rival predicted %s of one row after the other, %s in all, without having seen it.", c.Outcome, Whole(float64(n)))
}

func mostReplicates(c *fit.Comparison) int {
	most := 0
	for _, s := range c.Rivals {
		most = max(most, s.Replicates)
	}
	return most
}

// scored is one rival's score with what stands beside it.
func scored(c *fit.Comparison, s *fit.Scored) string {
	standing := Standing(c, s)
	if s.Withheld != "" {
		return fmt.Sprintf("%s: no score, since %s; %s.", s.Rival, s.Withheld, standing)
	}
	text := fmt.Sprintf("%s: score %s, standard error %s, %s effective parameters; %s", s.Rival, Score(s.Score), Score(s.Error), Score(s.Parameters), standing)
	if s.Trust.Verdict != summary.Sound {
		text += "; trust in the fit: " + s.Trust.Verdict.String()
	}
	return text + "." + Exactly(c, s) + " " + Wide(s)
}

// Wide is the score by a criterion that needs no reweighting, for reference.
func Wide(s *fit.Scored) string {
	text := "By the widely applicable information criterion, for reference: " + Score(s.WideScore)
	if s.WideShaky > 0 {
		text += ", with " + Plural(s.WideShaky, "unit") + " for which it is not to be trusted"
	}
	return text + "."
}

// Exactly says which units were left out for true; empty if none was.
func Exactly(c *fit.Comparison, s *fit.Scored) string {
	if len(s.Refitted) == 0 {
		return ""
	}
	units := List(s.Refitted)
	if c.Plate != "" {
		units = c.Plate + " " + units
	}
	return fmt.Sprintf(" It was fitted again without %s, which reweighting could not leave out.", units)
}

// Standing says whether a rival's arrows answer the question at all, which a
// score does not say.
func Standing(c *fit.Comparison, s *fit.Scored) string {
	switch {
	case c.Question.Exposure == "":
		return "no effect is asked for"
	case s.None:
		return "it draws no effect of " + c.Question.Exposure
	case !s.Identified:
		return "the effect is not identified"
	case len(c.Question.Held) > 0 && !s.HeldEnough:
		return "the effect is identified, but not by holding " + List(c.Question.Held)
	}
	return "the effect is identified"
}

// Difference says by how much one rival predicts better than another, or that
// nobody can say.
func Difference(p fit.Pair) string {
	text := fmt.Sprintf("%s scores %s above %s, standard error %s", p.Higher, Score(p.Difference), p.Lower, Score(p.Error))
	switch {
	case p.Difference == 0 && p.Error == 0:
		text = fmt.Sprintf("%s and %s predict the same", p.Higher, p.Lower)
	case p.Undecided != "":
		text += ": " + p.Undecided
	}
	if p.ByLaws {
		text += "; both imply the same independences, so that they differ by laws, not by arrows"
	}
	return text + "."
}

// BetterPredictor names the rival that predicts best, or says why none is named.
func BetterPredictor(c *fit.Comparison) string {
	if c.Better == "" {
		return "No rival is named as the better predictor: " + strings.Join(c.NoBetter, "; ") + "."
	}
	others := "every other rival"
	if len(c.Rivals) == 2 {
		i := slices.IndexFunc(c.Rivals, func(s *fit.Scored) bool { return s.Rival != c.Better })
		others = c.Rivals[i].Rival
	}
	return fmt.Sprintf("%s predicts %s better than %s.", c.Better, c.Outcome, others)
}

// PredictionWeights says how the rivals' predictions would be mixed.
func PredictionWeights(c *fit.Comparison) string {
	if c.Weights == nil {
		return "No weights are given: " + c.NoWeights + "."
	}
	var parts []string
	for i, w := range c.Weights {
		parts = append(parts, fmt.Sprintf("%s by %s %%", c.Rivals[i].Rival, strconv.Itoa(int(math.Round(100*w)))))
	}
	return "The mixture that would have predicted best weighs " + List(parts) + "; that is no probability of being right."
}

// Score is a score or its error: one decimal is more than its error supports.
func Score(x float64) string {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return "–"
	}
	return minus(strconv.FormatFloat(x+0, 'f', 1, 64))
}
