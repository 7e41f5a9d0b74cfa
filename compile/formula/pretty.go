package formula

import "strings"

// Pretty gives the form a methods section would print: products without a
// sign, a true minus, superscripts. The function symbol says how a name is
// printed: it gets an ID, or for a name at the level of plates its typed form,
// "alpha_bees by farm". A nil symbol means Symbol.
func Pretty(e Expr, symbol func(id string) string) string {
	if symbol == nil {
		symbol = Symbol
	}
	return printer(symbol).print(e)
}

type printer func(id string) string

func (p printer) print(e Expr) string {
	switch e := e.(type) {
	case *Number:
		return prettyNumber(e.Value)
	case *Name:
		return p(e.ID)
	case *By:
		return p(format(e))
	case *Of:
		return p(e.Vector.ID) + "(" + p(e.Variable.ID) + ")"
	case *Element:
		return p.print(e.Vector) + "[" + FormatNumber(float64(e.At)) + "]"
	case *Unary:
		return "−" + p.bracketed(e.X, unaryLevel)
	case *Binary:
		return p.binary(e)
	case *Call:
		if len(e.Args) == 1 && isBare(e.Function) {
			switch e.Args[0].(type) {
			case *Name, *By, *Of:
				return e.Function + " " + p.print(e.Args[0])
			}
		}
		args := make([]string, len(e.Args))
		for i, a := range e.Args {
			args[i] = p.print(a)
		}
		return e.Function + "(" + strings.Join(args, ", ") + ")"
	}
	panic("formula: an expression of no known kind")
}

func (p printer) bracketed(e Expr, least int) string {
	if level(e) < least {
		return "(" + p.print(e) + ")"
	}
	return p.print(e)
}

func (p printer) binary(e *Binary) string {
	x, y := operands(e)
	left, right := bracketIf(x, p.print), bracketIf(y, p.print)
	switch e.Op {
	case '*':
		if p.beside(e.X, y) {
			return left + " " + right
		}
		return left + " · " + right
	case '^':
		if n, ok := e.Y.(*Number); ok && n.Value >= 0 {
			if s, ok := superscript(FormatNumber(n.Value)); ok {
				return left + s
			}
		}
		return left + "^" + right
	case '-':
		return left + " − " + right
	}
	return left + " " + string(e.Op) + " " + right
}

// beside reports whether a product can go without a sign: the right factor
// must be a name or a bracket, the left must not end in words that would take
// it in ("log x (y)").
func (p printer) beside(x Expr, y operand) bool {
	switch x := x.(type) {
	case *Number, *By:
	case *Name:
		// "f (x)" reads as a function if f is one.
		if y.bracket && Reserved(x.ID) {
			return false
		}
	case *Binary:
		if x.Op != '*' {
			return false
		}
		if _, number := x.Y.(*Number); number {
			return false
		}
		if level(x.Y) == wordsLevel {
			return false
		}
	default:
		return false
	}
	if y.bracket {
		return true
	}
	switch y.expr.(type) {
	case *Name, *By:
		return true
	}
	return false
}

func prettyNumber(v float64) string {
	text := FormatNumber(v)
	if mantissa, power, ok := strings.Cut(text, "e"); ok {
		if s, ok := superscript(power); ok {
			text = mantissa + "·10" + s
		}
	}
	return strings.ReplaceAll(text, "-", "−")
}

func superscript(digits string) (string, bool) {
	var b strings.Builder
	for i, r := range digits {
		switch {
		case '0' <= r && r <= '9':
			b.WriteRune([]rune("⁰¹²³⁴⁵⁶⁷⁸⁹")[r-'0'])
		case r == '-' && i == 0:
			b.WriteRune('⁻')
		default:
			return "", false
		}
	}
	return b.String(), true
}
