package density

import (
	"fmt"
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/kernel"
	"arrowroot/compile/model"
)

// A resolver knows what typed names mean and how the rows of a model hang
// together. It is shared by the blocks so that equal index columns are the
// same slice.
type resolver struct {
	m         *model.Model
	normal    *kernel.Density // of what varies by a plate
	variables map[string]int
	params    map[string]int
	codes     map[int][]int32    // of a category or ordered variable, at its own level
	unknowns  map[int]int        // parameter that a variable's missing entries are
	nests     map[[2]int][]int32 // level of the coarse plate for each level of the fine one
}

func newResolver(m *model.Model) *resolver {
	r := &resolver{
		m:         m,
		normal:    catalog.FamilyByName("normal").Natural,
		variables: make(map[string]int),
		params:    make(map[string]int),
		codes:     make(map[int][]int32),
		unknowns:  make(map[int]int),
		nests:     make(map[[2]int][]int32),
	}
	for i, v := range m.Variables {
		r.variables[v.ID] = i
	}
	for i, p := range m.Parameters {
		r.params[p.Name] = i
		if p.Shape == model.Unrecorded {
			r.unknowns[p.Of] = i
		}
	}
	return r
}

// What a name can be.
type what int

const (
	isNothing what = iota
	isVariable
	isParameter
)

func (r *resolver) name(id string) (what, int, error) {
	if i, ok := r.variables[id]; ok {
		return isVariable, i, nil
	}
	if i, ok := r.params[id]; ok {
		return isParameter, i, nil
	}
	return isNothing, -1, fmt.Errorf("there is nothing named %s", id)
}

// by finds the vector that "alpha_bees_farm by farm" means; a variable has its
// own level and is itself.
func (r *resolver) by(e *formula.By) (what, int, error) {
	kind, i, err := r.name(e.Name.ID)
	if kind != isParameter {
		return kind, i, err
	}
	if p := r.m.Parameters[i]; p.Shape != model.ByPlate || r.m.Plates[p.Plate].Name != e.Plates[0] {
		return isNothing, -1, fmt.Errorf("%s does not vary by %s", e.Name.ID, strings.Join(e.Plates, " and "))
	}
	return kind, i, nil
}

// codesOf gives the levels of a category or ordered variable as indices into a
// vector of the given size.
func (r *resolver) codesOf(variable, size int) ([]int32, error) {
	codes, ok := r.codes[variable]
	v := r.m.Variables[variable]
	if !ok {
		codes = make([]int32, len(v.Values))
		for i, x := range v.Values {
			if x != float64(int32(x)) {
				return nil, fmt.Errorf("%s is %v, which is no level", v.ID, x)
			}
			codes[i] = int32(x)
		}
		r.codes[variable] = codes
	}
	for _, c := range codes {
		if c < 0 || int(c) >= size {
			return nil, fmt.Errorf("%s has level %d, but there are %d entries", v.ID, c, size)
		}
	}
	return codes, nil
}

// nest gives for each level of the plate fine the level of the plate coarse
// that all its rows share; false if they do not.
func (r *resolver) nest(fine, coarse int) ([]int32, bool) {
	key := [2]int{fine, coarse}
	if index, ok := r.nests[key]; ok {
		return index, index != nil
	}
	f, c := r.m.Plates[fine], r.m.Plates[coarse]
	index := make([]int32, len(f.Levels))
	for i := range index {
		index[i] = -1
	}
	for row, level := range f.Of {
		switch at := index[level]; {
		case at < 0:
			index[level] = c.Of[row]
		case at != c.Of[row]:
			r.nests[key] = nil
			return nil, false
		}
	}
	r.nests[key] = index
	return index, true
}

// A lawError is a fault in a law, by its variable.
type lawError struct {
	variable string
	err      error
}

func (e *lawError) Error() string { return "the law of " + e.variable + ": " + e.err.Error() }
func (e *lawError) Unwrap() error { return e.err }

// A priorError is a fault in a prior, by its parameter.
type priorError struct {
	parameter string
	err       error
}

func (e *priorError) Error() string { return "the prior of " + e.parameter + ": " + e.err.Error() }
func (e *priorError) Unwrap() error { return e.err }
