package formula

// Walk calls visit for e and then for each part below it, in the order of the
// text. Where visit gives false, the parts below are left out. The plates of a
// By are no parts.
func Walk(e Expr, visit func(Expr) bool) {
	if !visit(e) {
		return
	}
	switch e := e.(type) {
	case *By:
		Walk(e.Name, visit)
	case *Of:
		Walk(e.Vector, visit)
		Walk(e.Variable, visit)
	case *Element:
		Walk(e.Vector, visit)
	case *Unary:
		Walk(e.X, visit)
	case *Binary:
		Walk(e.X, visit)
		Walk(e.Y, visit)
	case *Call:
		for _, a := range e.Args {
			Walk(a, visit)
		}
	}
}

// Names lists the variables and parameters that e mentions, each once, in the
// order of the text. Plates and functions are not among them.
func Names(e Expr) []string {
	var names []string
	seen := make(map[string]bool)
	Walk(e, func(e Expr) bool {
		if n, ok := e.(*Name); ok && !seen[n.ID] {
			seen[n.ID] = true
			names = append(names, n.ID)
		}
		return true
	})
	return names
}
