package formula

import "strings"

// ParsePhrase reads "normal with mean 0, sd 1". Its error is always an *Error.
func ParsePhrase(text string) (p *Phrase, err error) {
	in := &parser{text: text, tokens: scan(text)}
	defer in.door(&err)
	p = in.phrase()
	in.end()
	return p, nil
}

// ParseSentence reads "bees ~ negative binomial with mean rate, overdispersion
// k_bees". Its error is always an *Error.
func ParseSentence(text string) (s *Sentence, err error) {
	in := &parser{text: text, tokens: scan(text)}
	defer in.door(&err)
	t := in.take()
	if t.kind != nameToken || isKeyword(t.id) {
		in.fail(t.span, "", "a law begins with a variable, as in “bees ~ Poisson with rate r”")
	}
	s = &Sentence{Variable: &Name{Span: t.span, ID: t.id}}
	if tilde := in.take(); !tilde.is("~") {
		in.fail(tilde.span, "", "~ is missing between %s and its distribution", t.id)
	}
	s.Law = in.phrase()
	in.end()
	return s, nil
}

func (p *parser) phrase() *Phrase {
	start := p.peek().span.Start
	ph := &Phrase{Family: p.family()}
	if p.peek().isWord("with") || p.peek().is(",") {
		p.take()
		ph.Arguments = append(ph.Arguments, p.argument())
		for p.peek().is(",") || p.peek().isWord("and") {
			p.take()
			ph.Arguments = append(ph.Arguments, p.argument())
		}
	}
	ph.Span = Span{start, p.tokens[max(p.at-1, 0)].span.End}
	return ph
}

// family reads the words of a family's name, hyphens included.
func (p *parser) family() string {
	var b strings.Builder
	for {
		t := p.peek()
		if t.kind != nameToken || isKeyword(t.id) {
			if b.Len() == 0 {
				p.fail(t.span, "", "the name of a distribution is missing, as in “normal with mean 0, sd 1”")
			}
			if t.startsOperand() {
				p.fail(t.span, "with "+p.source(t.span), "“with” is missing between the distribution and its arguments")
			}
			return b.String()
		}
		if b.Len() > 0 && !p.tokens[p.at-1].is("-") {
			b.WriteByte(' ')
		}
		p.take()
		b.WriteString(p.source(t.span))
		if p.peek().is("-") && p.tokens[p.at+1].kind == nameToken {
			p.take()
			b.WriteByte('-')
		}
	}
}

// argument reads an argument's words and its value. Which words are the name
// is found without a catalogue: the fewest that leave an expression.
func (p *parser) argument() PhraseArgument {
	start := p.at
	var first *Error
	for words := 1; p.tokens[start+words-1].kind == nameToken; words++ {
		last := p.tokens[start+words-1]
		if last.isWord("of") || last.isWord("and") {
			continue
		}
		if last.isWord("with") || words == 1 && isKeyword(last.id) {
			break
		}
		p.at = start + words
		value, err := p.value()
		if err == nil {
			return PhraseArgument{
				Span:  Span{p.tokens[start].span.Start, value.Where().End},
				Name:  p.spelled(start, start+words),
				Value: value,
			}
		}
		if first == nil || err.Span.Start > first.Span.Start {
			first = err
		}
	}
	if first == nil {
		p.fail(p.tokens[start].span, "", "the name of an argument is missing, as in “mean 0”")
	}
	panic(first)
}

// value tries an expression that reaches to the next argument or the end.
func (p *parser) value() (e Expr, failed *Error) {
	depth := p.depth
	defer func() {
		switch r := recover().(type) {
		case nil:
		case *Error:
			p.depth, failed = depth, r
		default:
			panic(r)
		}
	}()
	e = p.expr()
	if !p.peek().is(",") && !p.peek().isWord("and") {
		p.end()
	}
	return e, nil
}

func (p *parser) spelled(from, to int) string {
	words := make([]string, 0, 3)
	for _, t := range p.tokens[from:to] {
		words = append(words, p.source(t.span))
	}
	return strings.Join(words, " ")
}
