package model

import "testing"

// Specimens builds the studies of the goldens, for tests that see the package
// from outside.
func Specimens(t *testing.T) map[string]*Model {
	out := make(map[string]*Model)
	for _, c := range specimens() {
		if c.table != nil {
			out[c.name] = buildSpecimen(t, c)
		}
	}
	return out
}

// AnyStudy draws the random studies of TestAnyStudy.
var AnyStudy = anyStudy
