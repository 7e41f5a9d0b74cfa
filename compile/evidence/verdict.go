package evidence

// A Verdict is what the data say of one promise of the arrows.
type Verdict int

// The verdicts, in the order in which findings are listed.
const (
	Contradicted Verdict = iota // the data refuse it, all tests counted, and not by a trifle
	Trifling                    // refused, all tests counted, yet too weak to matter
	Undecided                   // neither refused nor shown to hold
	Holds                       // the interval keeps close to none
	TooFew                      // too few rows to say
)

// String is a word or two for the verdict.
func (v Verdict) String() string {
	return [...]string{"contradicted", "a trifle", "undecided", "holds", "too few rows"}[v]
}
