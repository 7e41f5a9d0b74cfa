package paint

import (
	"fmt"
	"math"

	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/canvas/draw"
)

// Differences draws by how much rivals outscore each other, with two standard
// errors to each side; what decides nothing is faint.
func Differences(width, height float64, c *fit.Comparison, s draw.Style) *draw.List {
	none, zero := math.NaN(), 0.0
	var rows []draw.Interval
	for _, p := range c.Pairs {
		rows = append(rows, draw.Interval{
			Label: p.Higher + " above " + p.Lower, Mid: p.Difference, Low: p.Difference - 2*p.Error, High: p.Difference + 2*p.Error,
			InnerLow: none, InnerHigh: none, PriorLow: none, PriorHigh: none,
			Words: fmt.Sprintf("%s, error %s", words.Score(p.Difference), words.Score(p.Error)), Faint: p.Undecided != "",
		})
	}
	return draw.Intervals(width, height, rows, &zero, s)
}

// DifferencesHeight is the height that Differences needs.
func DifferencesHeight(c *fit.Comparison) float64 { return draw.IntervalsHeight(len(c.Pairs)) }
