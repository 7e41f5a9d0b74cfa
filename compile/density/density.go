// Package density lowers a checked model to log densities that a sampler can
// draw from. Read the files in this order: density.go and block.go (what comes
// out), blocks.go (which parameters are drawn apart), resolve.go (what names
// mean), express.go (formulas), transform.go (from the line of reals to natural
// values), missing.go (missing entries that are unknowns), prior.go and law.go
// (the factors), blame.go (who is at fault where a density is not finite).
package density

import "arrowroot/compile/model"

// A Density is a model lowered to one program per independent block. It never
// changes and can be shared by goroutines.
type Density struct {
	Model      *model.Model
	Blocks     []*Block
	Quantities []Quantity // every parameter entry, in the order of Model.Parameters
}

// A Quantity is one entry of a parameter, on its natural scale.
type Quantity struct {
	Name      string // typed: "beta_hedge_bees", "step_soil_flowers[clay]"
	Symbol    string // for people: "β_hedge→bees"
	Entry     string // name of the entry of a vector; "" for a scalar
	Parameter int    // index in Model.Parameters
	At        int    // entry of that parameter
	Block     int    // index in Density.Blocks; -1 for a constant
	Constant  bool   // cannot move: an entry of a vector that has only one value, or the first or last of a rise
}
