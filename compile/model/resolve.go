package model

import "arrowroot/compile/formula"

// resolve rewrites typed text into the form that Law.Predictors promises:
// every parameter made, every "by" one plate of one vector.
func (b *builder) resolve(d *draft, e formula.Expr) formula.Expr {
	switch e := e.(type) {
	case *formula.Name:
		if _, variable := b.at[e.ID]; !variable {
			b.use(d, e.ID)
		}
	case *formula.By:
		var terms []formula.Expr
		for _, plate := range e.Plates {
			terms = append(terms, b.resolveBy(d, e.Name.ID, plate))
		}
		return sum(terms)
	case *formula.Of:
		b.useVector(d, e.Vector.ID, e.Variable.ID)
	case *formula.Unary:
		return &formula.Unary{Span: e.Span, Op: e.Op, X: b.resolve(d, e.X)}
	case *formula.Binary:
		return &formula.Binary{Span: e.Span, Op: e.Op, X: b.resolve(d, e.X), Y: b.resolve(d, e.Y)}
	case *formula.Call:
		out := &formula.Call{Span: e.Span, Function: e.Function}
		for _, a := range e.Args {
			out.Args = append(out.Args, b.resolve(d, a))
		}
		return out
	}
	return e
}

func (b *builder) resolveBy(d *draft, id, plate string) formula.Expr {
	m, canonical := b.scope[id]
	switch {
	case canonical && m.role == baseline:
		m.role, m.plate = baselineBy, plate
	case canonical && m.role == slope:
		m.role, m.plate = slopeBy, plate
	case canonical: // "alpha_bees_year by year": deviations around 0
		d.around0 = append(d.around0, m)
	default:
		m = meaning{role: freeBy, name: id, plate: plate}
	}
	return by(b.model.Parameters[b.parameter(m)].Name, plate)
}

// use makes the scalar parameter that a name means.
func (b *builder) use(d *draft, id string) {
	if m, ok := b.scope[id]; ok {
		b.parameter(m)
		return
	}
	b.parameter(meaning{role: free, name: id})
}

// useVector makes the steps that "vector of variable" reads.
func (b *builder) useVector(d *draft, id, variable string) {
	if m, ok := b.scope[id]; ok {
		b.parameter(m)
		return
	}
	b.parameter(meaning{role: free, name: id, parent: variable})
}
