package scene

// PaintKind names a posterior summary that colours the sheet.
type PaintKind string

// The paints.
const (
	EffectPaint  PaintKind = "effect"
	LearnedPaint PaintKind = "learned"
	FitPaint     PaintKind = "fit"
	TrustPaint   PaintKind = "trust"
)

// Paint colours nodes and arrows by a result.
type Paint struct {
	Kind   PaintKind
	Nodes  map[string]NodePaint
	Arrows map[[2]string]ArrowPaint
	Stale  bool // the study has changed since: colours dim, they do not vanish
}

// NodePaint is the paint of one node.
type NodePaint struct {
	Bin     int    // effect −2…2; learned, fit and trust 0…3
	Sign    string // "+", "−", "±" or "": printed beside the name
	Hatched bool   // too unsure to say
	Plain   bool   // does not descend from the exposure: no colour at all
	Words   string // shown on hover and selection
}

// ArrowPaint is the paint of one arrow.
type ArrowPaint struct {
	Bin         int
	Width       float64 // in dips at zoom 1; 0 = as unpainted
	Hatched     bool    // too unsure to say: drawn in grey
	Association bool    // not an effect: no arrow colour, words say so
	Words       string
}
