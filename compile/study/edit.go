package study

// An Edit is one change, as a value. Apply never changes its argument: it
// gives a new study or an error that says why not.
type Edit interface {
	Apply(*Study) (*Study, error)
	Label() string // for the Edit menu: "Draw hedge → bees"
}
