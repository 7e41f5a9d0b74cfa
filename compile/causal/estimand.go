package causal

import (
	"fmt"
	"slices"
	"strings"

	"arrowroot/compile/graph"
)

// An Estimand is a formula that computes an interventional distribution from
// the joint distribution of measured variables: a Probability, a Product, a
// Quotient or a Sum. Nodes that no Sum around them binds stand for the values
// that are asked about. An estimand never changes.
type Estimand interface{ estimand() }

// A Probability is that of some nodes given others, in the data.
type Probability struct {
	Of, Given []int
}

// A Product multiplies; without factors it is one.
type Product struct{ Factors []Estimand }

// A Quotient divides.
type Quotient struct{ Above, Below Estimand }

// A Sum adds the body over all values of some nodes, whatever values the same
// nodes have outside.
type Sum struct {
	Over []int
	Body Estimand
}

func (Probability) estimand() {}
func (Product) estimand()     {}
func (Quotient) estimand()    {}
func (Sum) estimand()         {}

// Free lists the nodes whose values an estimand depends on.
func Free(e Estimand) []int {
	switch e := e.(type) {
	case Probability:
		return union(e.Of, e.Given)
	case Product:
		all := []int{}
		for _, f := range e.Factors {
			all = union(all, Free(f))
		}
		return all
	case Quotient:
		return union(Free(e.Above), Free(e.Below))
	case Sum:
		return minus(Free(e.Body), e.Over)
	}
	panic(fmt.Sprintf("causal: estimand %T", e))
}

// key makes estimands comparable.
func key(e Estimand) string { return fmt.Sprintf("%#v", e) }

// product multiplies, laying nested products flat.
func product(factors ...Estimand) Estimand {
	var flat []Estimand
	for _, f := range factors {
		if p, ok := f.(Product); ok {
			flat = append(flat, p.Factors...)
		} else {
			flat = append(flat, f)
		}
	}
	if len(flat) == 1 {
		return flat[0]
	}
	return Product{flat}
}

// factors is what an estimand multiplies.
func factors(e Estimand) []Estimand {
	if p, ok := e.(Product); ok {
		return p.Factors
	}
	return []Estimand{e}
}

// sum adds over nodes, each of which must be free in the body. What sums to
// one is dropped and what does not vary is taken out.
func sum(over []int, body Estimand) Estimand {
	over = tidy(over)
	if s, ok := body.(Sum); ok && len(minus(over, s.Over)) == len(over) {
		return sum(union(over, s.Over), s.Body)
	}
	parts := slices.Clone(factors(body))
	for again := true; again; {
		again = false
		for _, v := range over {
			has := func(f Estimand) bool { return slices.Contains(Free(f), v) }
			at := slices.IndexFunc(parts, has)
			if at < 0 || slices.ContainsFunc(parts[at+1:], has) {
				continue
			}
			switch f := parts[at].(type) {
			case Probability:
				if !slices.Contains(f.Of, v) {
					continue
				}
				parts = slices.Delete(parts, at, at+1)
				if rest := minus(f.Of, []int{v}); len(rest) > 0 {
					parts = slices.Insert(parts, at, Estimand(Probability{rest, f.Given}))
				}
			default:
				continue
			}
			over, again = minus(over, []int{v}), true
			break
		}
	}
	if len(over) == 0 {
		return product(parts...)
	}
	var out, in []Estimand
	for _, f := range parts {
		if len(minus(over, Free(f))) == len(over) {
			out = append(out, f)
		} else {
			in = append(in, f)
		}
	}
	if len(out) > 0 {
		return product(append(out, sum(over, product(in...)))...)
	}
	return Sum{over, product(in...)}
}

// quotient divides, cancelling equal factors.
func quotient(above, below Estimand) Estimand {
	top, bottom := slices.Clone(factors(above)), []Estimand{}
	for _, f := range factors(below) {
		k := key(f)
		if at := slices.IndexFunc(top, func(t Estimand) bool { return key(t) == k }); at >= 0 {
			top = slices.Delete(top, at, at+1)
		} else {
			bottom = append(bottom, f)
		}
	}
	if len(bottom) == 0 {
		return product(top...)
	}
	return Quotient{product(top...), product(bottom...)}
}

// symbols writes an estimand with the names of g. A node that a sum binds while
// it already has a value outside gets a prime for each such value.
func symbols(g *graph.Graph, e Estimand, primes map[int]int) string {
	name := func(v int) string { return g.Names[v] + strings.Repeat("′", max(0, primes[v]-1)) }
	nodes := func(of []int) string {
		words := make([]string, len(of))
		for i, v := range of {
			words[i] = name(v)
		}
		return strings.Join(words, ", ")
	}
	switch e := e.(type) {
	case Probability:
		if len(e.Given) == 0 {
			return "P(" + nodes(e.Of) + ")"
		}
		return "P(" + nodes(e.Of) + " | " + nodes(e.Given) + ")"
	case Product:
		if len(e.Factors) == 0 {
			return "1"
		}
		words := make([]string, len(e.Factors))
		for i, f := range e.Factors {
			words[i] = symbols(g, f, primes)
		}
		return strings.Join(words, " ")
	case Quotient:
		return "(" + symbols(g, e.Above, primes) + " / " + bracketed(symbols(g, e.Below, primes), e.Below) + ")"
	case Sum:
		primes = deeper(primes, e.Over)
		return "∑{" + nodes(e.Over) + "} [" + symbols(g, e.Body, primes) + "]"
	}
	panic(fmt.Sprintf("causal: estimand %T", e))
}

func bracketed(text string, e Estimand) string {
	if p, ok := e.(Product); ok && len(p.Factors) > 1 {
		return "[" + text + "]"
	}
	return text
}

// deeper counts one more value in scope for each node bound.
func deeper(primes map[int]int, over []int) map[int]int {
	next := map[int]int{}
	for v, n := range primes {
		next[v] = n
	}
	for _, v := range over {
		next[v]++
	}
	return next
}

// words says an estimand in words, with the primes of symbols.
func words(g *graph.Graph, e Estimand, primes map[int]int) string {
	named := func(of []int) string {
		all := make([]string, len(of))
		for i, v := range of {
			all[i] = g.Names[v] + strings.Repeat("′", max(0, primes[v]-1))
		}
		return series(all, "and")
	}
	switch e := e.(type) {
	case Probability:
		if len(e.Given) == 0 {
			return "the chance of " + named(e.Of)
		}
		return "the chance of " + named(e.Of) + " given " + named(e.Given)
	case Product:
		if len(e.Factors) == 0 {
			return "one"
		}
		all := make([]string, len(e.Factors))
		for i, f := range e.Factors {
			all[i] = words(g, f, primes)
		}
		return strings.Join(all, ", times ")
	case Quotient:
		return "(" + words(g, e.Above, primes) + "), divided by (" + words(g, e.Below, primes) + ")"
	case Sum:
		primes = deeper(primes, e.Over)
		return "the sum over " + named(e.Over) + " of (" + words(g, e.Body, primes) + ")"
	}
	panic(fmt.Sprintf("causal: estimand %T", e))
}
