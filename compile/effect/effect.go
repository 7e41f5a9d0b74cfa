// Package effect turns draws into answers: contrasts between interventions
// (SEMANTICS B), and the change along each arrow and at each node that paints
// the sheet (SEMANTICS G). Read the files in this order: effect.go (what comes
// out), resolve.go, eval.go and expect.go (laws evaluated over rows, draw by
// draw), arm.go (who moves when something is set), districts.go (what may be
// set), contrast.go, simulation.go and round.go (many draws, few replicates),
// population.go (weights), groups.go (new ones), unknowns.go (missing entries),
// arrows.go, nodes.go, words.go; replicate.go (a law's own values over and over),
// predict.go (how well it predicts).
//
// A draw is the natural values of all parameters, in the order of
// Model.Parameters, entries of vectors side by side (density.Quantities).
package effect

// A Contrast compares expected outcomes under two settings of the exposure.
type Contrast struct {
	Expected struct {
		From, To []float64 // per draw, averaged over the rows
	}
	Values []float64 // per draw: To − From, or To / From
	Draws  []int     // which draws were used; all of them unless thinned
	Rows   int       // rows averaged over
	Words  string    // what was averaged over what: "over these 237 rows"
	New    []string  // the plates whose levels were drawn anew; nil = none, or none on the way
	Exact  bool      // no change, whatever the draws: no arrows lead from exposure to outcome
	Error  float64   // simulation error of one draw's value (standard deviation); 0 = none was simulated
}

// NotSimulated says that a fit with variables left out must not be simulated
// for this contrast (SEMANTICS B2 c).
type NotSimulated struct {
	Exposure, Outcome string
}

func (e *NotSimulated) Error() string {
	return "the effect of " + e.Exposure + " on " + e.Outcome + " cannot be had by simulating this fit: an unmeasured cause joins " + e.Exposure + " to what it acts on"
}

// defaultLevel is the credible level where nobody asked for another.
const defaultLevel = 0.9

// Options of the functions that can take long. The zero value is usable.
type Options struct {
	Progress func(done, of int) // called between draws, from one goroutine at a time
	Budget   float64            // law evaluations (rows × draws × arms) before draws and then rows are thinned; 0 = 5e7
	Level    float64            // credible level of intervals in words; 0 = 0.9
}

// An ArrowEffect is the change of a child's expectation as one drawn parent
// moves over its central 80 %, other variables at row values.
type ArrowEffect struct {
	From, To  string    // variable IDs
	Values    []float64 // per draw, in plausible widths of the child
	Unsigned  bool      // a total variation, not a direction: category children
	Low, High float64   // the parent's two values, or codes of its two levels
	Per       float64   // natural step of the parent for PerUnit; 0 = none
	PerUnit   []float64 // per draw: expectation's ratio (if Ratio) or difference per step
	Ratio     bool
	Words     string // "×1.02 per 10 m/ha", from the median of PerUnit; "+3.4 from 5 to 50 m/ha" for a form that is no straight line
}

// A NodeEffect is the change of one variable under the question's
// intervention, in its own plausible widths.
type NodeEffect struct {
	Variable string
	Values   []float64 // per draw; nil if Plain or Refused
	Unsigned bool
	Plain    bool // does not descend from the exposure: nothing to show, which is not zero
	Refused  bool // not to be had by simulation (SEMANTICS B2 c)
}
