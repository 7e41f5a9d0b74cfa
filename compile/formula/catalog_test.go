package formula_test

import (
	"testing"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
)

// The language must be able to say whatever the catalogue has: each function
// with bracket and, if it takes one argument, without; each family with each of
// its arguments; each link before "=".
func TestTheCatalogueCanBeTyped(t *testing.T) {
	for _, f := range catalog.Functions() {
		texts := []string{f.Name + "(x, y)"}
		if f.Args == 1 {
			texts = []string{f.Name + " x", f.Name + "(x + 1)"}
		}
		for _, text := range texts {
			e, err := formula.ParseExpr(text)
			if err != nil {
				t.Errorf("%s: %v", text, err)
				continue
			}
			if c, ok := e.(*formula.Call); !ok || c.Function != f.Name || len(c.Args) != f.Args {
				t.Errorf("%s is parsed as %s", text, formula.Format(e))
			}
		}
	}
	for _, f := range catalog.Families() {
		text := f.Name
		for i, a := range f.Arguments {
			switch i {
			case 0:
				text += " with "
			default:
				text += ", "
			}
			text += a.Name + " " + a.Greek + "_bees"
		}
		p, err := formula.ParsePhrase(text)
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		if p.Family != f.Name || len(p.Arguments) != len(f.Arguments) || p.String() != text {
			t.Errorf("%s is parsed as %s", text, p)
			continue
		}
		for i, a := range f.Arguments {
			if p.Arguments[i].Name != a.Name {
				t.Errorf("%s: %s is parsed as %s", text, a.Name, p.Arguments[i].Name)
			}
		}
		if f.Link == catalog.Identity {
			continue
		}
		line := string(f.Link) + " p = a + b * x"
		if q, err := formula.Parse(line); err != nil || q.Link != string(f.Link) || q.Subject != "p" {
			t.Errorf("%s: %+v, %v", line, q, err)
		}
	}
}
