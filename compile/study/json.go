package study

import (
	"fmt"
	"strconv"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// A FileError says where a file is at fault and why. Line counts from 1; 0
// means the file as a whole.
type FileError struct {
	Name   string // of the file, without its folder
	Line   int
	Reason string // no full stop at the end
}

func (e *FileError) Error() string {
	where := e.Name
	if e.Line > 0 {
		where = fmt.Sprintf("%s, line %d", e.Name, e.Line)
	}
	return where + ": " + e.Reason + ". The file was not opened and not changed."
}

// A value is a piece of JSON that knows its line. The parser is our own for
// the sake of errors that a person can act on: the standard decoder tells no
// lines, takes duplicate keys in silence and mends bad UTF-8 unasked.
type value struct {
	kind    valueKind
	line    int
	text    string // of a string; of a number as it is written; "true" or "false"
	items   []*value
	members []member
}

type member struct {
	key   string
	line  int
	value *value
}

type valueKind int

const (
	nullValue valueKind = iota
	boolValue
	numberValue
	textValue
	listValue
	objectValue
)

// deepest bounds nesting. The format itself goes 7 deep.
const deepest = 64

type jsonParser struct {
	text  string
	at    int
	line  int
	depth int
}

// parseJSON reads one JSON text. Its error is a *FileError without a name.
func parseJSON(text string) (v *value, err error) {
	p := &jsonParser{text: text, line: 1}
	defer door(&err)
	p.space()
	if p.at == len(p.text) {
		panic(&FileError{Reason: "the file is empty"})
	}
	v = p.value()
	p.space()
	if p.at < len(p.text) {
		p.fail("something follows the end of the study")
	}
	return v, nil
}

// door turns a panic with a *FileError into that error.
func door(err *error) {
	switch r := recover().(type) {
	case nil:
	case *FileError:
		*err = r
	default:
		panic(r)
	}
}

func (p *jsonParser) fail(format string, args ...any) {
	failAt(p.line, format, args...)
}

func failAt(line int, format string, args ...any) {
	for i, a := range args {
		if text, ok := a.(string); ok {
			args[i] = clip(text)
		}
	}
	panic(&FileError{Line: line, Reason: fmt.Sprintf(format, args...)})
}

// clip keeps what a file says from filling the screen.
func clip(text string) string {
	const most = 300
	if len(text) <= most {
		return text
	}
	return strings.ToValidUTF8(text[:most], "") + "…"
}

func (p *jsonParser) space() {
	for p.at < len(p.text) {
		switch p.text[p.at] {
		case '\n':
			p.line++
		case ' ', '\t', '\r':
		default:
			return
		}
		p.at++
	}
}

// peek skips space and gives the coming byte, 0 at the end.
func (p *jsonParser) peek() byte {
	p.space()
	if p.at == len(p.text) {
		return 0
	}
	return p.text[p.at]
}

func (p *jsonParser) value() *value {
	if p.depth++; p.depth > deepest {
		p.fail("this is nested more than %d deep", deepest)
	}
	defer func() { p.depth-- }()
	v := &value{line: p.line}
	switch c := p.peek(); {
	case c == 0:
		p.fail("the file ends too early")
	case c == '{':
		v.kind = objectValue
		p.object(v)
	case c == '[':
		v.kind = listValue
		p.list(v)
	case c == '"':
		v.line = p.line
		v.kind, v.text = textValue, p.string()
	case c == '-' || '0' <= c && c <= '9':
		v.line = p.line
		v.kind, v.text = numberValue, p.number()
	default:
		v.line = p.line
		v.kind, v.text = p.word()
	}
	return v
}

func (p *jsonParser) object(v *value) {
	v.line = p.line
	p.at++
	lines := make(map[string]int) // of the keys
	for first := true; ; first = false {
		switch c := p.peek(); {
		case c == '}':
			if !first {
				p.fail("a comma stands before }, where nothing follows")
			}
			p.at++
			return
		case c == 0:
			p.fail("the file ends before the { of line %d is closed", v.line)
		case c != '"':
			p.fail("a key in quotes should stand here, not %s", p.seen())
		}
		m := member{line: p.line, key: p.string()}
		if first, twice := lines[m.key]; twice {
			failAt(m.line, "%s is here twice; the first is in line %d", quote(m.key), first)
		}
		lines[m.key] = m.line
		if p.peek() != ':' {
			p.fail("a colon is missing after %s", quote(m.key))
		}
		p.at++
		m.value = p.value()
		v.members = append(v.members, m)
		if p.next('}', v.line) {
			return
		}
	}
}

func (p *jsonParser) list(v *value) {
	v.line = p.line
	p.at++
	if p.peek() == ']' {
		p.at++
		return
	}
	for {
		if p.peek() == ']' {
			p.fail("a comma stands before ], where nothing follows")
		}
		v.items = append(v.items, p.value())
		if p.next(']', v.line) {
			return
		}
	}
}

// next takes a comma or the closing bracket; it reports whether it was the
// bracket.
func (p *jsonParser) next(closing byte, opened int) bool {
	line := p.line
	switch c := p.peek(); c {
	case closing:
		p.at++
		return true
	case ',':
		p.at++
		return false
	case 0:
		p.fail("the file ends before the %c of line %d is closed", map[byte]byte{'}': '{', ']': '['}[closing], opened)
	default:
		failAt(line, "a comma or a %c is missing before %s", closing, p.seen())
	}
	return false
}

// seen shows what stands at the place, for messages.
func (p *jsonParser) seen() string {
	rest := p.text[p.at:]
	if end := strings.IndexAny(rest, " \t\r\n,:{}[]"); end > 0 {
		rest = rest[:end]
	}
	if len(rest) > 24 {
		rest = rest[:24]
		for !utf8.ValidString(rest) && len(rest) > 20 {
			rest = rest[:len(rest)-1]
		}
	}
	if rest != "" && strings.ContainsRune(",:{}[]", rune(rest[0])) {
		rest = rest[:1]
	}
	return rest
}

func (p *jsonParser) word() (valueKind, string) {
	for _, w := range [...]struct {
		text string
		kind valueKind
	}{{"null", nullValue}, {"true", boolValue}, {"false", boolValue}} {
		if p.seen() == w.text {
			p.at += len(w.text)
			return w.kind, w.text
		}
	}
	p.fail("%s is no value; text needs double quotes", p.seen())
	return nullValue, ""
}

// number reads a number by the grammar of RFC 8259, section 6.
func (p *jsonParser) number() string {
	start := p.at
	digits := func() bool {
		from := p.at
		for p.at < len(p.text) && '0' <= p.text[p.at] && p.text[p.at] <= '9' {
			p.at++
		}
		return p.at > from
	}
	is := func(any string) bool {
		return p.at < len(p.text) && strings.IndexByte(any, p.text[p.at]) >= 0
	}
	if is("-") {
		p.at++
	}
	first := p.at
	ok := digits() && (p.text[first] != '0' || p.at == first+1)
	if ok && is(".") {
		p.at++
		ok = digits()
	}
	if ok && is("eE") {
		p.at++
		if is("+-") {
			p.at++
		}
		ok = digits()
	}
	text := p.text[start:p.at]
	if !ok || is(".0123456789eE+-") {
		p.at = start
		p.fail("%s is not a number as JSON writes them", p.seen())
	}
	if _, err := strconv.ParseFloat(text, 64); err != nil {
		p.fail("%s is too large a number", text)
	}
	return text
}

func (p *jsonParser) string() string {
	p.at++
	var b strings.Builder
	for p.at < len(p.text) {
		c := p.text[p.at]
		switch {
		case c == '"':
			p.at++
			return b.String()
		case c == '\\':
			p.escape(&b)
		case c == '\n':
			p.fail("a text in quotes does not end in its line")
		case c < ' ':
			p.fail("a control character stands inside a text; write it as \\u%04x", c)
		default:
			r, size := utf8.DecodeRuneInString(p.text[p.at:])
			if r == utf8.RuneError && size == 1 {
				p.fail("a byte (%#02x) is not UTF-8; save the file as UTF-8", c)
			}
			b.WriteString(p.text[p.at : p.at+size])
			p.at += size
		}
	}
	p.fail("the file ends inside a text in quotes")
	return ""
}

func (p *jsonParser) escape(b *strings.Builder) {
	if p.at+1 == len(p.text) {
		p.fail("the file ends inside a text in quotes")
	}
	c := p.text[p.at+1]
	if i := strings.IndexByte(`"\/bfnrt`, c); i >= 0 {
		b.WriteByte("\"\\/\b\f\n\r\t"[i])
		p.at += 2
		return
	}
	if c != 'u' {
		p.fail("\\%c means nothing inside a text; a backslash itself is written \\\\", c)
	}
	r := p.unicode()
	if utf16.IsSurrogate(r) {
		second := rune(0)
		if strings.HasPrefix(p.text[p.at:], `\u`) {
			second = p.unicode()
		}
		if r = utf16.DecodeRune(r, second); r == utf8.RuneError {
			p.fail("half of a surrogate pair stands alone")
		}
	}
	b.WriteRune(r)
}

func (p *jsonParser) unicode() rune {
	end := p.at + 6
	if end > len(p.text) {
		p.fail("\\u needs four hexadecimal digits")
	}
	n, err := strconv.ParseUint(p.text[p.at+2:end], 16, 32)
	if err != nil {
		p.fail("\\u needs four hexadecimal digits")
	}
	p.at = end
	return rune(n)
}
