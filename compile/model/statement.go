package model

import (
	"fmt"
	"slices"
	"strings"
	"unicode/utf8"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// A Statement is a model in words and mathematical notation, as a methods
// section would print it, beside the form that can be typed.
type Statement struct {
	Lines []Line
	Typed []string // laws, formulas and priors in the language of formulas
}

// LineKind says what a line of a statement is.
type LineKind int

// The kinds of line.
const (
	Heading      LineKind = iota // "for each row i, of farm f:", "priors:"
	LawLine                      // bees_i ~ negative binomial, mean λ_i, overdispersion k_bees
	LinkLine                     // log λ_i = α_f + …
	GroupLine                    // α_f ~ normal, mean α_bees, sd τ_farm
	ComputedLine                 // ratio_i = a_i / b_i
	PriorLine                    // β_hedge→bees ~ normal, mean 0, sd 0.0078 per m/ha
	CarriedLine                  // carried terms (for attitude, left out): …
	GivenLine                    // given, not modelled: …
	NoteLine                     // exact 0 read as 0.001: flowers (2 rows)
)

// A Line of a statement.
type Line struct {
	Kind      LineKind
	Left      string // what stands before the sign; "" for headings and notes
	Sign      string // "~", "=", or ""
	Right     string // the rest; for headings and notes all of it
	Reason    string // priors: how they came about
	Variable  string // ID of the variable it belongs to, "" if none
	Parameter string // typed name of the parameter, "" if none
}

// String is the statement as plain text, signs and reasons in line.
func (s *Statement) String() string {
	left, right := 0, 0
	for _, l := range s.Lines {
		if l.Sign != "" {
			left = max(left, utf8.RuneCountInString(l.Left))
		}
		if l.Kind == PriorLine {
			right = max(right, utf8.RuneCountInString(l.Right))
		}
	}
	var b strings.Builder
	for _, l := range s.Lines {
		switch {
		case l.Sign == "":
			b.WriteString(l.Right)
		case l.Reason == "":
			fmt.Fprintf(&b, "  %s %s %s", pad(l.Left, left), l.Sign, l.Right)
		default:
			fmt.Fprintf(&b, "  %s %s %s     %s", pad(l.Left, left), l.Sign, pad(l.Right, right), l.Reason)
		}
		b.WriteByte('\n')
	}
	return b.String()
}

func pad(s string, width int) string {
	return s + strings.Repeat(" ", max(width-utf8.RuneCountInString(s), 0))
}

// Statement prints the model from the model alone.
func (m *Model) Statement() *Statement {
	w := &writer{m: m, letters: m.letters()}
	w.groups()
	w.priors()
	w.notes()
	w.typed()
	return &w.out
}

// A writer prints one model.
type writer struct {
	m       *Model
	letters []string // of each plate
	out     Statement
}

func (w *writer) line(l Line) { w.out.Lines = append(w.out.Lines, l) }

func (w *writer) heading(text string) { w.line(Line{Kind: Heading, Right: text}) }

// letters gives each plate a letter of its name; i is the row's.
func (m *Model) letters() []string {
	taken := map[string]bool{"i": true}
	out := make([]string, len(m.Plates))
	for n, p := range m.Plates {
		candidates := strings.ToLower(p.Name) + "jklmnpqrstuvwxyzabcdefgh"
		for _, r := range candidates {
			if s := string(r); !taken[s] && ('a' <= r && r <= 'z' || r > 127) {
				out[n] = s
				taken[s] = true
				break
			}
		}
		if out[n] == "" {
			out[n] = fmt.Sprintf("g%d", n+1)
		}
	}
	return out
}

func (w *writer) index(plate int) string {
	if plate < 0 {
		return "i"
	}
	return w.letters[plate]
}

// groups prints laws level by level, rows first, what comes last in the causal
// order first; then what varies by each plate.
func (w *writer) groups() {
	m := w.m
	for plate := -1; plate < len(m.Plates); plate++ {
		var laws []*Law
		for _, l := range slices.Backward(m.Laws) {
			if l.Plate == plate {
				laws = append(laws, l)
			}
		}
		var computed []*Variable
		for _, v := range m.Variables {
			if v.Computed != nil && v.Plate == plate {
				computed = append(computed, v)
			}
		}
		var groups []*Parameter
		for _, p := range m.Parameters {
			if p.Shape == ByPlate && p.Plate == plate && plate >= 0 {
				groups = append(groups, p)
			}
		}
		if len(laws)+len(computed)+len(groups) == 0 {
			continue
		}
		w.heading(w.forEach(plate, laws))
		for _, l := range laws {
			w.law(l)
		}
		for _, v := range computed {
			w.line(Line{Kind: ComputedLine, Left: w.variable(v), Sign: "=", Right: w.expr(v.Computed), Variable: v.ID})
		}
		for _, p := range groups {
			mean := "0"
			if p.Mean != "" {
				mean = w.parameter(p.Mean)
			}
			w.line(Line{Kind: GroupLine, Left: w.symbol(p), Sign: "~", Parameter: p.Name, Variable: w.owner(p),
				Right: fmt.Sprintf("normal, mean %s, sd %s", mean, w.parameter(p.SD))})
		}
	}
}

// forEach is "for each row i, of farm f:", with the plates that its laws read.
func (w *writer) forEach(plate int, laws []*Law) string {
	what := "row"
	if plate >= 0 {
		what = w.m.Plates[plate].Name
	}
	text := fmt.Sprintf("for each %s %s", what, w.index(plate))
	var of []string
	for n, p := range w.m.Plates {
		if n == plate {
			continue
		}
		for _, l := range laws {
			if w.reads(l, n) {
				of = append(of, p.Name+" "+w.letters[n])
				break
			}
		}
	}
	if len(of) > 0 {
		text += ", of " + list(of)
	}
	return text + ":"
}

// reads reports whether a law reads something that lives at a plate's level.
func (w *writer) reads(l *Law, plate int) bool {
	found := false
	for _, e := range append(append([]formula.Expr(nil), l.Predictors...), l.Arguments...) {
		if e == nil {
			continue
		}
		for _, id := range formula.Names(e) {
			v, p := w.m.Name(id)
			found = found || v >= 0 && w.m.Variables[v].Plate == plate || p >= 0 && w.m.Parameters[p].Shape == ByPlate && w.m.Parameters[p].Plate == plate
		}
	}
	return found
}

// law prints a law with its link lines.
func (w *writer) law(l *Law) {
	m := w.m
	v := m.Variables[l.Variable]
	right := l.Family.Name
	if l.Family.Link == catalog.Softmax {
		w.line(Line{Kind: LawLine, Left: w.variable(v), Sign: "~", Right: fmt.Sprintf("%s, %s in proportion to exp %s", right, l.Family.Arguments[0].Name, w.predicted(l)), Variable: v.ID})
		for k, e := range l.Predictors {
			w.line(Line{Kind: LinkLine, Left: fmt.Sprintf("%s[%s]", w.predicted(l), v.Levels[k]), Sign: "=", Right: w.expr(e), Variable: v.ID})
		}
		return
	}
	for i, a := range l.Family.Arguments {
		switch {
		case i == l.Family.Predicted && len(l.Predictors) > 0:
			right += fmt.Sprintf(", %s %s", a.Name, w.predicted(l))
		case i < len(l.Arguments) && l.Arguments[i] != nil:
			right += fmt.Sprintf(", %s %s", a.Name, w.expr(l.Arguments[i]))
		case l.Cutpoints != "":
			right += fmt.Sprintf(", %s %s", a.Name, w.parameter(l.Cutpoints))
		}
	}
	w.line(Line{Kind: LawLine, Left: w.variable(v), Sign: "~", Right: right, Variable: v.ID})
	for _, e := range l.Predictors {
		left := w.predicted(l)
		if l.Family.Link == catalog.Log || l.Family.Link == catalog.Logit {
			left = string(l.Family.Link) + " " + left
		}
		w.line(Line{Kind: LinkLine, Left: left, Sign: "=", Right: w.expr(e), Variable: v.ID})
	}
}

// predicted is the symbol of what a law's predictor gives: λ_i, or μ_flowers,i
// where two laws of the model would share it.
func (w *writer) predicted(l *Law) string {
	stem := func(l *Law) string {
		if l.Family.Link == catalog.Softmax {
			return "η"
		}
		return formula.Symbol(l.Family.Arguments[l.Family.Predicted].Greek)
	}
	same := 0
	for _, o := range w.m.Laws {
		if len(o.Predictors) > 0 && stem(o) == stem(l) {
			same++
		}
	}
	if same > 1 {
		return fmt.Sprintf("%s_%s,%s", stem(l), w.m.Variables[l.Variable].ID, w.index(l.Plate))
	}
	return stem(l) + "_" + w.index(l.Plate)
}

func (w *writer) variable(v *Variable) string {
	switch {
	case v.ShareOf != "":
		return fmt.Sprintf("share %s of %s_%s", v.ShareOf, v.MeanOf, w.index(v.Plate))
	case v.MeanOf != "":
		return fmt.Sprintf("mean %s_%s", v.MeanOf, w.index(v.Plate))
	}
	return v.ID + "_" + w.index(v.Plate)
}

// parameter prints a parameter by its typed name.
func (w *writer) parameter(id string) string {
	if _, i := w.m.Name(id); i >= 0 {
		return w.symbol(w.m.Parameters[i])
	}
	return id
}

// symbol is a parameter's, with the plate's letter for what varies by it: α_f.
func (w *writer) symbol(p *Parameter) string {
	if p.Shape != ByPlate || p.Plate < 0 {
		return p.Symbol
	}
	return strings.TrimSuffix(p.Symbol, w.m.Plates[p.Plate].Name) + w.letters[p.Plate]
}

// expr prints an expression with the symbols of the model.
func (w *writer) expr(e formula.Expr) string {
	return formula.Pretty(rewrite(e, func(e formula.Expr) formula.Expr {
		switch e := e.(type) {
		case *formula.Name:
			if v, _ := w.m.Name(e.ID); v >= 0 {
				return named(w.variable(w.m.Variables[v]))
			}
			return named(w.parameter(e.ID))
		case *formula.By:
			return named(w.parameter(e.Name.ID))
		case *formula.Of:
			v, _ := w.m.Name(e.Variable.ID)
			return named(fmt.Sprintf("%s(%s)", w.parameter(e.Vector.ID), w.variable(w.m.Variables[v])))
		case *formula.Element:
			return named(w.element(e, w.parameter))
		}
		return nil
	}), func(id string) string { return id })
}

// element prints one entry of a vector by its name: α_soil[clay].
func (w *writer) element(e *formula.Element, show func(id string) string) string {
	n, ok := e.Vector.(*formula.Name)
	if !ok {
		return formula.Format(e)
	}
	entry := fmt.Sprint(e.At)
	if _, i := w.m.Name(n.ID); i >= 0 && e.At < len(w.m.Parameters[i].Entries) {
		entry = w.m.Parameters[i].Entries[e.At]
	}
	return fmt.Sprintf("%s[%s]", show(n.ID), entry)
}

// rewrite copies an expression with some parts replaced: where leaf gives nil
// the part is copied and its own parts are looked at.
func rewrite(e formula.Expr, leaf func(formula.Expr) formula.Expr) formula.Expr {
	if x := leaf(e); x != nil {
		return x
	}
	switch e := e.(type) {
	case *formula.Unary:
		return &formula.Unary{Op: e.Op, X: rewrite(e.X, leaf)}
	case *formula.Binary:
		return &formula.Binary{Op: e.Op, X: rewrite(e.X, leaf), Y: rewrite(e.Y, leaf)}
	case *formula.Call:
		out := &formula.Call{Function: e.Function}
		for _, a := range e.Args {
			out.Args = append(out.Args, rewrite(a, leaf))
		}
		return out
	}
	return e
}

func (w *writer) owner(p *Parameter) string {
	if p.Of < 0 {
		return ""
	}
	return w.m.Variables[p.Of].ID
}

// priors prints one line for each parameter that is no group effect.
func (w *writer) priors() {
	first := true
	for _, p := range w.m.Parameters {
		if p.Shape == ByPlate || p.Shape == Unrecorded {
			continue
		}
		if first {
			w.heading("priors:")
			first = false
		}
		l := Line{Kind: PriorLine, Left: p.Symbol, Sign: "~", Reason: p.Why, Parameter: p.Name, Variable: w.owner(p)}
		switch p.Prior.On {
		case InverseRoot:
			l.Left = "1/√" + p.Symbol
		case InverseRootPlus:
			l.Left = "1/√(1 + " + p.Symbol + ")"
		}
		switch p.Shape {
		case Cuts:
			l.Right = "log odds of the running sums of the levels' shares, which are Dirichlet, all 1"
		case Rising:
			l.Right = "from 0 at " + p.Entries[0] + " to 1 at " + p.Entries[len(p.Entries)-1] + ", the rises between levels Dirichlet, all 1"
		case ZeroSum:
			l.Right = "summing to 0, differences " + w.prior(p)
		default:
			l.Right = w.prior(p)
		}
		if p.Prior.FromUser {
			l.Reason = "stated in the study"
		}
		w.line(l)
	}
}

// prior prints a distribution with its unit: "normal, mean 0, sd 0.0078 per m/ha".
func (w *writer) prior(p *Parameter) string {
	text := p.Prior.Family.Name
	for i, a := range p.Prior.Family.Arguments {
		text += fmt.Sprintf(", %s %s", a.Name, w.expr(p.Prior.Arguments[i]))
	}
	unit, _, _ := strings.Cut(p.Unit, ", ")
	if unit != "" && unit != "log scale" && unit != "log-odds" && p.Prior.On == Itself {
		switch p.Prior.Family.Arguments[len(p.Prior.Family.Arguments)-1].Name {
		case "sd", "scale", "mean", "high":
			text += " " + unit
		default: // the last argument has no unit
			text += " (" + unit + ")"
		}
	}
	if p.Prior.Family.Support == catalog.Reals && p.Support == catalog.Positives {
		text += ", kept positive"
	}
	return text
}

// within prints that a law compares within the groups of a plate, and what its
// baselines and group means are for.
func (w *writer) within(l *Law, p Within) {
	id, plate := w.m.Variables[l.Variable].ID, w.m.Plates[p.Plate].Name
	terms := []string{"a baseline that varies by " + plate}
	for _, i := range p.Means {
		terms = append(terms, w.m.Variables[i].Label)
	}
	if p.For == nil {
		w.line(Line{Kind: NoteLine, Variable: id, Right: fmt.Sprintf("%s is compared within each %s: its law has %s.", id, plate, list(terms))})
		return
	}
	w.line(Line{Kind: CarriedLine, Variable: id,
		Right: fmt.Sprintf("carried terms (for %s, at %s, left out): %s in the law of %s.", list(p.For), plate, list(terms), id)})
}

// notes prints what the laws carry for the sake of what was left out, and what
// is given.
func (w *writer) notes() {
	for _, l := range slices.Backward(w.m.Laws) {
		bySake := make(map[string][]string)
		var sakes []string
		for _, c := range l.Carried {
			s := list(c.For)
			if bySake[s] == nil {
				sakes = append(sakes, s)
			}
			bySake[s] = append(bySake[s], w.m.Variables[c.Variable].ID)
		}
		for _, s := range sakes {
			id := w.m.Variables[l.Variable].ID
			w.line(Line{Kind: CarriedLine, Variable: id,
				Right: fmt.Sprintf("carried terms (for %s, left out): %s in the law of %s.", s, list(bySake[s]), id)})
		}
	}
	for _, l := range slices.Backward(w.m.Laws) {
		for _, p := range l.Within {
			w.within(l, p)
		}
	}
	for i, v := range w.m.Variables {
		if n := len(v.Missing); n > 0 {
			w.line(Line{Kind: NoteLine, Variable: v.ID, Right: w.m.missing(i, n)})
		}
	}
	for _, v := range w.m.Variables {
		if v.Nudged > 0 {
			w.line(Line{Kind: NoteLine, Variable: v.ID, Right: fmt.Sprintf("%s: %s at the exact end of its scale, moved inwards by %s.", v.ID, rows(v.Nudged), short(v.Nudge))})
		}
	}
	for _, v := range w.m.Variables {
		if v.Scale == study.Binary && len(v.Levels) == 2 && !zeroOne(v.Levels) {
			w.line(Line{Kind: NoteLine, Variable: v.ID, Right: fmt.Sprintf("%s: “%s” counts as 1, “%s” as 0.", v.ID, v.Levels[1], v.Levels[0])})
		}
	}
	if len(w.m.Given) > 0 {
		w.line(Line{Kind: GivenLine, Right: "given, not modelled: " + strings.Join(w.m.Given, ", ") + "."})
	}
}
