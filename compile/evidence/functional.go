package evidence

import "context"

// functionals tests functional constraints.
func (b *bench) functionals(context.Context) ([]Functional, error) { return nil, nil }
