package formula

import (
	"fmt"
	"math"
	"strings"
)

// deepest bounds nesting, so that hostile text cannot exhaust the stack.
const deepest = 200

type parser struct {
	text   string
	tokens []token
	at     int
	depth  int
}

// Parse reads "log rate = …" or a bare right-hand side. Its error is always an
// *Error.
func Parse(text string) (p *Predictor, err error) {
	in := &parser{text: text, tokens: scan(text)}
	defer in.door(&err)
	p = &Predictor{}
	for _, t := range in.tokens {
		if t.is("=") {
			p.Link, p.Subject = in.left()
			break
		}
	}
	p.Right = in.expr()
	in.end()
	return p, nil
}

// ParseExpr reads an expression. Its error is always an *Error.
func ParseExpr(text string) (e Expr, err error) {
	in := &parser{text: text, tokens: scan(text)}
	defer in.door(&err)
	e = in.expr()
	in.end()
	return e, nil
}

// door turns the parser's own panic into the error it carries.
func (p *parser) door(err *error) {
	switch r := recover().(type) {
	case nil:
	case *Error:
		*err = r
	default:
		panic(r)
	}
}

func (t token) is(sign string) bool { return t.kind == signToken && t.text == sign }

func (t token) isWord(word string) bool { return t.kind == nameToken && t.id == word }

func (t token) startsOperand() bool {
	return t.kind == numberToken || t.is("(") || t.kind == nameToken && !isKeyword(t.id)
}

func (p *parser) peek() token { return p.tokens[p.at] }

func (p *parser) take() token {
	t := p.tokens[p.at]
	if t.kind != endToken {
		p.at++
	}
	return t
}

func (p *parser) source(s Span) string { return p.text[s.Start:s.End] }

func (p *parser) fail(at Span, repair, format string, args ...any) {
	panic(&Error{Span: at, Message: fmt.Sprintf(format, args...), Repair: repair})
}

// left reads the left side and its "=".
func (p *parser) left() (link, subject string) {
	start := p.peek()
	for _, l := range links {
		if words, ok := p.words(l); ok && !p.tokens[p.at+words].is("=") {
			p.at += words
			link = l
			break
		}
	}
	bracket := link != "" && p.peek().is("(")
	if bracket {
		p.take()
	}
	t := p.take()
	if t.kind != nameToken || isKeyword(t.id) {
		p.fail(t.span, "", "the name of what is predicted is missing before =, as in “log rate = …”")
	}
	if bracket && !p.take().is(")") {
		p.fail(Span{start.span.Start, t.span.End}, "", "the bracket before = is not closed")
	}
	if next := p.peek(); !next.is("=") {
		if next.kind == nameToken && link == "" {
			p.fail(t.span, "", "“%s” cannot stand before =; what can is a name, log or logit", p.source(t.span))
		}
		p.fail(next.span, "", "only a name, or log or logit of it, can stand before =")
	}
	p.take()
	return link, t.id
}

// words reports whether the coming tokens spell the words of name, and how
// many those are.
func (p *parser) words(name string) (int, bool) {
	n, start := 0, 0
	for i := 0; i <= len(name); i++ {
		if i == len(name) || name[i] == ' ' {
			if !p.tokens[p.at+n].isWord(name[start:i]) {
				return 0, false
			}
			n, start = n+1, i+1
		}
	}
	return n, true
}

// end insists that nothing is left over, and says what was meant if it is.
func (p *parser) end() {
	switch t := p.peek(); {
	case t.kind == endToken:
	case t.startsOperand():
		p.fail(t.span, "* "+p.source(t.span), "a sign is missing before “%s”; a product is written with *", p.source(t.span))
	case t.is(")"):
		p.fail(t.span, "", "this bracket closes nothing")
	case t.is(","):
		p.fail(t.span, ".", "a comma stands only between the arguments of a function; a decimal takes a point")
	case t.is("="):
		p.fail(t.span, "", "there is a second =")
	case t.is("~"):
		p.fail(t.span, "", "~ joins a variable to its distribution; a formula takes =")
	case t.isWord("by"), t.isWord("of"):
		p.fail(t.span, "", "“%s” can only follow a name", t.id)
	case t.kind == nameToken:
		p.fail(t.span, "", "“%s” has no place here", t.id)
	case t.kind == badToken:
		p.bad(t)
	default:
		p.fail(t.span, "", "“%s” has no place here", p.source(t.span))
	}
}

// bad reports a token that is no part of the language.
func (p *parser) bad(t token) {
	text := p.source(t.span)
	switch {
	case isDigit(text, 0):
		p.fail(t.span, "", "%s is too large a number", text)
	case text == "[" || text == "{":
		p.fail(t.span, "(", "brackets are round here")
	case text == "]" || text == "}":
		p.fail(t.span, ")", "brackets are round here")
	default:
		p.fail(t.span, "", "%q has no meaning in a formula", text)
	}
}

func (p *parser) deeper() {
	if p.depth++; p.depth > deepest {
		p.fail(p.peek().span, "", "this is nested more than %d deep", deepest)
	}
}

func (p *parser) expr() Expr {
	p.deeper()
	defer func() { p.depth-- }()
	x := p.product()
	for p.peek().is("+") || p.peek().is("-") {
		op := p.take()
		x = join(x, op.text[0], p.product())
	}
	return x
}

func (p *parser) product() Expr {
	x := p.unary()
	for p.peek().is("*") || p.peek().is("/") {
		op := p.take()
		if again := p.peek(); op.is("*") && again.is("*") && again.span.Start == op.span.End {
			p.fail(Span{op.span.Start, again.span.End}, "^", "a power is written with ^, as in x^2")
		}
		x = join(x, op.text[0], p.unary())
	}
	return x
}

func join(x Expr, op byte, y Expr) Expr {
	return &Binary{Span: Span{x.Where().Start, y.Where().End}, Op: op, X: x, Y: y}
}

func (p *parser) unary() Expr {
	if !p.peek().is("-") {
		return p.power()
	}
	p.deeper()
	defer func() { p.depth-- }()
	minus := p.take()
	x := p.unary()
	span := Span{minus.span.Start, x.Where().End}
	// A number takes its sign in, so that -3 is one number wherever it stands.
	if n, ok := x.(*Number); ok && !math.Signbit(n.Value) {
		return &Number{Span: span, Value: -n.Value}
	}
	return &Unary{Span: span, Op: '-', X: x}
}

func (p *parser) power() Expr {
	start := p.at
	x := p.operand()
	t := p.peek()
	if !t.is("^") && t.kind != powerToken {
		return x
	}
	y := p.exponent()
	if call, ok := x.(*Call); ok && p.unbracketed(start, call) {
		span := Span{x.Where().Start, y.Where().End}
		inner := Format(&Call{Function: call.Function, Args: []Expr{&Binary{Op: '^', X: call.Args[0], Y: y}}})
		p.fail(span, inner, "this can be read in two ways: write %s or (%s)^%s", inner, Format(call), formatAt(y, unaryLevel))
	}
	return join(x, '^', y)
}

func (p *parser) exponent() Expr {
	t := p.take()
	if t.kind == powerToken {
		return &Number{Span: t.span, Value: t.value}
	}
	return p.unary()
}

// unbracketed reports whether the call whose first token is at start took its
// argument without a bracket around it or around the call.
func (p *parser) unbracketed(start int, call *Call) bool {
	if p.tokens[start].is("(") {
		return false
	}
	p2 := &parser{text: p.text, tokens: p.tokens, at: start}
	words, ok := p2.words(call.Function)
	return ok && !p.tokens[start+words].is("(")
}

func (p *parser) operand() Expr {
	switch t := p.peek(); {
	case t.kind == numberToken:
		p.take()
		return &Number{Span: t.span, Value: t.value}
	case t.is("("):
		return p.bracket()
	case t.kind == nameToken && !isKeyword(t.id):
		if call := p.call(); call != nil {
			return call
		}
		return p.named()
	case t.kind == badToken:
		p.bad(t)
	case t.kind == nameToken:
		p.fail(t.span, "", "“%s” joins words and cannot stand for a value", t.id)
	}
	p.missing()
	return nil
}

// missing says that an operand should stand before the coming token.
func (p *parser) missing() {
	t := p.peek()
	switch {
	case p.at == 0 && t.kind == endToken:
		p.fail(t.span, "", "there is no formula yet")
	case p.at == 0:
		p.fail(t.span, "", "a name or a number is missing before “%s”", p.source(t.span))
	}
	before := p.tokens[p.at-1]
	p.fail(before.span, "", "a name or a number is missing after “%s”", p.source(before.span))
}

func (p *parser) bracket() Expr {
	open := p.take()
	x := p.expr()
	p.closeBracket(open)
	return x
}

func (p *parser) closeBracket(open token) {
	switch t := p.peek(); {
	case t.is(")"):
		p.take()
	case t.kind == endToken:
		p.fail(open.span, "", "this bracket is not closed")
	default:
		p.end()
	}
}

// call reads a function and its arguments; nil if no function stands here.
func (p *parser) call() Expr {
	start := p.peek()
	for _, f := range bare {
		words, ok := p.words(f)
		if !ok {
			continue
		}
		after := p.tokens[p.at+words]
		if !after.startsOperand() {
			p.fail(Span{start.span.Start, p.tokens[p.at+words-1].span.End}, "", "%s needs a name or a bracket behind it, as in %s(x)", f, f)
		}
		p.at += words
		if after.is("(") {
			return p.arguments(start, f)
		}
		p.deeper()
		defer func() { p.depth-- }()
		var x Expr
		if after.kind == numberToken {
			p.take()
			x = &Number{Span: after.span, Value: after.value}
		} else if x = p.call(); x == nil {
			x = p.named()
		}
		return &Call{Span: Span{start.span.Start, x.Where().End}, Function: f, Args: []Expr{x}}
	}
	if bracket := p.tokens[p.at+1]; bracket.is("(") {
		if strings.Contains(start.id, "_") { // functions have no such names
			p.fail(bracket.span, "* (", "a sign is missing before “(”; a product is written with *")
		}
		p.take()
		return p.arguments(start, start.id)
	}
	return nil
}

func (p *parser) arguments(start token, function string) Expr {
	open := p.take()
	call := &Call{Function: function}
	for {
		call.Args = append(call.Args, p.expr())
		if !p.peek().is(",") {
			break
		}
		p.take()
	}
	end := p.peek().span.End
	p.closeBracket(open)
	call.Span = Span{start.span.Start, end}
	return call
}

func (p *parser) name(after string) *Name {
	t := p.peek()
	if t.kind != nameToken || isKeyword(t.id) {
		before := p.tokens[p.at-1]
		p.fail(before.span, "", "a name is missing after “%s”", after)
	}
	p.take()
	return &Name{Span: t.span, ID: t.id}
}

func (p *parser) named() Expr {
	t := p.take()
	name := &Name{Span: t.span, ID: t.id}
	switch {
	case p.peek().isWord("of"):
		p.take()
		variable := p.name("of")
		return &Of{Span: Span{t.span.Start, variable.Span.End}, Vector: name, Variable: variable}
	case p.peek().isWord("by"):
		p.take()
		plate := p.name("by")
		by := &By{Name: name, Plates: []string{plate.ID}}
		for p.peek().isWord("and") && p.plateFollows() {
			p.take()
			plate = p.name("and")
			by.Plates = append(by.Plates, plate.ID)
		}
		by.Span = Span{t.span.Start, plate.Span.End}
		return by
	}
	return name
}

// plateFollows tells "by farm and year" from "by farm and sd 1": after a plate
// nothing can follow that begins a value.
func (p *parser) plateFollows() bool {
	name := p.tokens[p.at+1]
	if name.kind != nameToken {
		return true // an error either way; "a name is missing after and" says it best
	}
	after := p.tokens[p.at+2]
	return !after.startsOperand() && !after.isWord("of")
}
