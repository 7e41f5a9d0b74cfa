package formula

import (
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

type tokenKind int

const (
	endToken    tokenKind = iota
	numberToken           // value is set
	nameToken             // id is set, canonical
	signToken             // text is one of + - * / ^ ( ) , = ~
	powerToken            // a superscript: value is the exponent
	badToken              // text is not part of the language
)

type token struct {
	kind  tokenKind
	span  Span
	text  string // of a sign, in ASCII
	id    string
	value float64
}

// scan cuts text into tokens; the last one is an endToken. It never fails:
// what does not belong becomes a badToken for the parser to report in context.
func scan(text string) []token {
	tokens := make([]token, 0, len(text)/3+2)
	for at := 0; ; {
		at = skipSpace(text, at)
		if at == len(text) {
			return append(tokens, token{kind: endToken, span: Span{at, at}})
		}
		t := next(text, at)
		tokens = append(tokens, t)
		at = t.span.End
	}
}

func skipSpace(text string, at int) int {
	for at < len(text) {
		r, size := utf8.DecodeRuneInString(text[at:])
		switch {
		case unicode.IsSpace(r):
			at += size
		case r == '#':
			if line := strings.IndexByte(text[at:], '\n'); line >= 0 {
				at += line
			} else {
				at = len(text)
			}
		default:
			return at
		}
	}
	return at
}

func next(text string, at int) token {
	r, size := utf8.DecodeRuneInString(text[at:])
	sign := func(ascii string) token {
		return token{kind: signToken, span: Span{at, at + size}, text: ascii}
	}
	switch {
	case isDigit(text, at) || r == '.' && isDigit(text, at+1):
		return number(text, at)
	case unicode.IsLetter(r):
		end := nameEnd(text, at)
		return token{kind: nameToken, span: Span{at, end}, id: Canonical(text[at:end])}
	}
	switch r {
	case '+', '-', '*', '/', '^', '(', ')', ',', '=', '~':
		return sign(string(r))
	case '−':
		return sign("-")
	case '×', '·':
		return sign("*")
	case '÷':
		return sign("/")
	case '²':
		return token{kind: powerToken, span: Span{at, at + size}, value: 2}
	case '³':
		return token{kind: powerToken, span: Span{at, at + size}, value: 3}
	}
	return token{kind: badToken, span: Span{at, at + size}, text: text[at : at+size]}
}

func number(text string, start int) token {
	at := start
	digits := func() {
		for isDigit(text, at) {
			at++
		}
	}
	digits()
	if at < len(text) && text[at] == '.' {
		at++
		digits()
	}
	if at < len(text) && (text[at] == 'e' || text[at] == 'E') {
		mantissa := at
		at++
		if at < len(text) && (text[at] == '+' || text[at] == '-') {
			at++
		}
		if isDigit(text, at) {
			digits()
		} else {
			at = mantissa // "2e" is 2 and then a name
		}
	}
	t := token{kind: numberToken, span: Span{start, at}}
	value, err := strconv.ParseFloat(text[start:at], 64)
	if err != nil { // only possible by size
		t.kind, t.text = badToken, text[start:at]
	}
	t.value = value
	return t
}

func isDigit(text string, at int) bool {
	return at < len(text) && '0' <= text[at] && text[at] <= '9'
}

// nameEnd finds the end of the name that begins at start. An arrow belongs to
// it only if a letter follows at once: β_hedge→bees.
func nameEnd(text string, start int) int {
	at := start
	for at < len(text) {
		r, size := utf8.DecodeRuneInString(text[at:])
		if nameRune(r) {
			at += size
			continue
		}
		arrow := 0
		switch rest := text[at:]; {
		case strings.HasPrefix(rest, "→"):
			arrow = len("→")
		case strings.HasPrefix(rest, "->"):
			arrow = len("->")
		}
		after, size := utf8.DecodeRuneInString(text[at+arrow:])
		if arrow == 0 || !unicode.IsLetter(after) {
			break
		}
		at += arrow + size
	}
	return at
}
