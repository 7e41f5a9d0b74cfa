package density

import (
	"slices"

	"arrowroot/compile/formula"
	"arrowroot/compile/model"
)

// A group is the parameters and laws of one block, by index, sorted.
type group struct {
	parameters []int
	laws       []int
}

// groups finds the connected components of parameters joined by laws and by
// priors that read other parameters (SEMANTICS A9). All entries of a parameter
// are kept together. Components come in the order of their first parameter;
// laws without an unknown are constants and belong to none.
func groups(m *model.Model, r *resolver) ([]group, error) {
	parent := make([]int, len(m.Parameters))
	for i := range parent {
		parent[i] = i
	}
	var root func(i int) int
	root = func(i int) int {
		if parent[i] != i {
			parent[i] = root(parent[i])
		}
		return parent[i]
	}
	join := func(a, b int) {
		a, b = root(a), root(b)
		parent[max(a, b)] = min(a, b)
	}
	for i, p := range m.Parameters {
		reads, err := r.priorReads(p)
		if err != nil {
			return nil, err
		}
		for _, j := range reads {
			join(i, j)
		}
	}
	first := make([]int, len(m.Laws)) // a parameter of each law, -1 if it has none
	for i, l := range m.Laws {
		reads, err := r.lawReads(l)
		if err != nil {
			return nil, err
		}
		first[i] = -1
		for _, j := range reads {
			if first[i] < 0 {
				first[i] = j
			}
			join(first[i], j)
		}
	}
	var out []group
	place := make(map[int]int)
	for i := range m.Parameters {
		at, ok := place[root(i)]
		if !ok {
			at = len(out)
			place[root(i)] = at
			out = append(out, group{})
		}
		out[at].parameters = append(out[at].parameters, i)
	}
	for i, j := range first {
		if j >= 0 {
			at := place[root(j)]
			out[at].laws = append(out[at].laws, i)
		}
	}
	return out, nil
}

// priorReads gives the parameters that the prior of p reads.
func (r *resolver) priorReads(p *model.Parameter) ([]int, error) {
	exprs := slices.Clone(p.Prior.Arguments)
	for _, name := range []string{p.Mean, p.SD} {
		if p.Shape == model.ByPlate && name != "" {
			exprs = append(exprs, &formula.Name{ID: name})
		}
	}
	reads, err := r.reads(nil, exprs...)
	if err != nil {
		return nil, &priorError{p.Name, err}
	}
	return reads, nil
}

// lawReads gives the parameters that a law reads.
func (r *resolver) lawReads(l *model.Law) ([]int, error) {
	exprs := slices.Concat(l.Predictors, l.Arguments)
	exprs = append(exprs, &formula.Name{ID: r.m.Variables[l.Variable].ID})
	reads, err := r.reads(nil, exprs...)
	if err == nil && l.Cutpoints != "" {
		reads, err = r.reads(reads, &formula.Name{ID: l.Cutpoints})
	}
	if err != nil {
		return nil, &lawError{r.m.Variables[l.Variable].ID, err}
	}
	return reads, nil
}

// reads adds the parameters that expressions read.
func (r *resolver) reads(to []int, exprs ...formula.Expr) ([]int, error) {
	for _, e := range exprs {
		var err error
		switch e := e.(type) {
		case nil, *formula.Number:
		case *formula.Name:
			to, err = r.readsName(to, e.ID)
		case *formula.By:
			to, err = r.readsBy(to, e)
		case *formula.Of:
			to, err = r.reads(to, e.Vector)
		case *formula.Element:
			to, err = r.reads(to, e.Vector)
		case *formula.Unary:
			to, err = r.reads(to, e.X)
		case *formula.Binary:
			to, err = r.reads(to, e.X, e.Y)
		case *formula.Call:
			to, err = r.reads(to, e.Args...)
		}
		if err != nil {
			return nil, err
		}
	}
	return to, nil
}

func (r *resolver) readsName(to []int, id string) ([]int, error) {
	kind, i, err := r.name(id)
	if p, missing := r.unknowns[i]; missing && kind == isVariable { // a column with unknowns in it
		kind, i = isParameter, p
	}
	if kind == isParameter {
		to = append(to, i)
	}
	return to, err
}

func (r *resolver) readsBy(to []int, e *formula.By) ([]int, error) {
	kind, i, err := r.by(e)
	if kind == isParameter {
		to = append(to, i)
	}
	return to, err
}
