package formula

import (
	"math"
	"strconv"
	"strings"
)

// Levels of binding, loosest first.
const (
	sumLevel = iota
	productLevel
	unaryLevel
	wordsLevel // "alpha by farm", "log rate": bound by words, bracketed under ^
	powerLevel
	atomLevel
)

// Format gives the typed form of an expression. Parsing it gives the same tree
// again, but for Element, which cannot be typed, and numbers that are not
// finite.
func Format(e Expr) string { return formatAt(e, sumLevel) }

// formatAt puts brackets around what binds more loosely than least.
func formatAt(e Expr, least int) string {
	text := format(e)
	if level(e) < least {
		return "(" + text + ")"
	}
	return text
}

func level(e Expr) int {
	switch e := e.(type) {
	case *Number:
		if math.Signbit(e.Value) {
			return unaryLevel
		}
	case *Unary:
		return unaryLevel
	case *Binary:
		switch e.Op {
		case '+', '-':
			return sumLevel
		case '*', '/':
			return productLevel
		}
		return powerLevel
	case *By, *Of:
		return wordsLevel
	case *Call:
		if withoutBracket(e) {
			return wordsLevel
		}
	}
	return atomLevel
}

func withoutBracket(c *Call) bool {
	if len(c.Args) != 1 || !isBare(c.Function) {
		return false
	}
	_, name := c.Args[0].(*Name)
	return name
}

func format(e Expr) string {
	switch e := e.(type) {
	case *Number:
		return FormatNumber(e.Value)
	case *Name:
		return e.ID
	case *By:
		return e.Name.ID + " by " + strings.Join(e.Plates, " and ")
	case *Of:
		return e.Vector.ID + " of " + e.Variable.ID
	case *Element:
		return formatAt(e.Vector, atomLevel) + "[" + strconv.Itoa(e.At) + "]"
	case *Unary:
		return "-" + formatAt(e.X, unaryLevel)
	case *Binary:
		x, y := operands(e)
		if e.Op == '^' {
			return bracketIf(x, format) + "^" + bracketIf(y, format)
		}
		return bracketIf(x, format) + " " + string(e.Op) + " " + bracketIf(y, format)
	case *Call:
		if withoutBracket(e) {
			return e.Function + " " + format(e.Args[0])
		}
		args := make([]string, len(e.Args))
		for i, a := range e.Args {
			args[i] = Format(a)
		}
		return e.Function + "(" + strings.Join(args, ", ") + ")"
	}
	panic("formula: an expression of no known kind")
}

// An operand of a Binary, and whether it needs a bracket there.
type operand struct {
	expr    Expr
	bracket bool
}

func operands(b *Binary) (x, y operand) {
	x.expr, y.expr = b.X, b.Y
	switch own := level(b); own {
	case powerLevel:
		x.bracket = level(b.X) < atomLevel
		y.bracket = level(b.Y) < unaryLevel || level(b.Y) == wordsLevel
	default:
		x.bracket = level(b.X) < own
		y.bracket = level(b.Y) <= own
	}
	return x, y
}

func bracketIf(o operand, write func(Expr) string) string {
	if o.bracket {
		return "(" + write(o.expr) + ")"
	}
	return write(o.expr)
}

// FormatNumber writes a number as people type it: shortest digits that give
// the same number back, an exponent only where zeros would pile up.
func FormatNumber(v float64) string {
	if a := math.Abs(v); a != 0 && (a < 1e-5 || a >= 1e15) {
		text := strconv.FormatFloat(v, 'e', -1, 64)
		text = strings.Replace(text, "e-0", "e-", 1)
		return strings.Replace(text, "e+", "e", 1)
	}
	return strconv.FormatFloat(v, 'f', -1, 64)
}

// String is the typed form of the whole line.
func (p *Predictor) String() string {
	right := Format(p.Right)
	switch {
	case p.Subject == "":
		return right
	case p.Link == "":
		return p.Subject + " = " + right
	}
	return p.Link + " " + p.Subject + " = " + right
}

// String is the typed form of the phrase.
func (p *Phrase) String() string {
	var b strings.Builder
	b.WriteString(p.Family)
	for i, a := range p.Arguments {
		if i == 0 {
			b.WriteString(" with ")
		} else {
			b.WriteString(", ")
		}
		b.WriteString(a.Name + " " + Format(a.Value))
	}
	return b.String()
}

// String is the typed form of the sentence.
func (s *Sentence) String() string { return s.Variable.ID + " ~ " + s.Law.String() }
