package density

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"sync"

	"arrowroot/compile/model"
	"arrowroot/compile/ops"
)

// A Block is a set of parameters that share no factor with any other
// (SEMANTICS A9), with its own log density over unconstrained coordinates. It
// never changes and can be shared by goroutines.
type Block struct {
	Name       string   // the variables whose laws it holds, "flowers, bees"; its parameters if it has priors only
	Names      []string // its parameters' typed names, sorted: part of the seed key
	Quantities []int    // indices in Density.Quantities, in order

	density *ops.Program // log density
	natural *ops.Program // natural values of Quantities as outputs
	where   []string     // of each coordinate: its parameter and variable
	spare   sync.Pool    // of *ops.Evaluator for natural
	suspect              // what Blame looks at
}

// Lower makes the density of a checked model. An error is a fault that the
// model let through; it names the variable or the parameter.
func Lower(m *model.Model) (*Density, error) {
	d := &Density{Model: m}
	first := make([]int, len(m.Parameters)) // first quantity of each parameter
	for i, p := range m.Parameters {
		first[i] = len(d.Quantities)
		d.Quantities = append(d.Quantities, quantities(m, i, p)...)
	}
	r := newResolver(m)
	groups, err := groups(m, r)
	if err != nil {
		return nil, err
	}
	for _, g := range groups {
		b, err := lower(r, g)
		if err != nil {
			return nil, err
		}
		if b.Dim() == 0 { // constants only; nothing to draw
			continue
		}
		for _, i := range g.parameters {
			for at := range entries(m, m.Parameters[i]) {
				if q := first[i] + at; !d.Quantities[q].Constant {
					d.Quantities[q].Block = len(d.Blocks)
				}
				b.Quantities = append(b.Quantities, first[i]+at)
			}
		}
		d.Blocks = append(d.Blocks, b)
	}
	return d, nil
}

// quantities describes the entries of parameter i.
func quantities(m *model.Model, i int, p *model.Parameter) []Quantity {
	names := p.Entries
	if len(names) == 0 && p.Shape == model.ByPlate {
		names = m.Plates[p.Plate].Levels
	}
	out := make([]Quantity, entries(m, p))
	for at := range out {
		q := Quantity{Name: p.Name, Symbol: p.Symbol, Parameter: i, At: at, Block: -1, Constant: coordinates(m, p) == 0}
		if p.Shape == model.Rising && (at == 0 || at == len(out)-1) {
			q.Constant = true
		}
		if p.Shape != model.Scalar {
			q.Entry = fmt.Sprint(at + 1)
			if at < len(names) {
				q.Entry = names[at]
			}
			q.Name += "[" + q.Entry + "]"
			q.Symbol += "[" + q.Entry + "]"
		}
		out[at] = q
	}
	return out
}

// lower makes one block.
func lower(r *resolver, g group) (*Block, error) {
	l := &lowering{
		resolver: r,
		b:        ops.NewBuilder(),
		plates:   make(map[level]ops.Plate),
		columns:  make(map[int]ops.Value),
		natural:  make(map[int]ops.Value),
	}
	b := &Block{suspect: suspect{m: r.m, builder: l.b}}
	for _, i := range g.parameters {
		p := r.m.Parameters[i]
		b.Names = append(b.Names, p.Name)
		for range coordinates(r.m, p) {
			b.where = append(b.where, parameterOf(r.m, p))
		}
	}
	factors, err := l.placeAll(g.parameters)
	if err != nil {
		return nil, err
	}
	for _, i := range g.laws {
		f, err := l.law(r.m.Laws[i])
		if err != nil {
			return nil, err
		}
		factors = append(factors, f)
	}
	return b, b.compile(l, g, factors)
}

// placeAll places parameters in an order in which each comes after those that
// its prior reads, with coordinates in the order given.
func (l *lowering) placeAll(parameters []int) ([]factor, error) {
	offset := make(map[int]int)
	n := 0
	for _, i := range parameters {
		offset[i] = n
		n += coordinates(l.m, l.m.Parameters[i])
	}
	const open, done = 1, 2
	state := make(map[int]int)
	var factors []factor
	var visit func(i int) error
	visit = func(i int) error {
		p := l.m.Parameters[i]
		switch state[i] {
		case done:
			return nil
		case open:
			return &priorError{p.Name, fmt.Errorf("it depends on itself")}
		}
		state[i] = open
		reads, err := l.priorReads(p)
		if err != nil {
			return err
		}
		for _, j := range reads {
			if err := visit(j); err != nil {
				return err
			}
		}
		v, err := l.place(i, offset[i])
		if err != nil {
			return err
		}
		state[i] = done
		factors = append(factors, factor{what: "the prior of " + parameterOf(l.m, p), value: v})
		return nil
	}
	for _, i := range parameters {
		if err := visit(i); err != nil {
			return nil, err
		}
	}
	return factors, nil
}

// parameterOf names a parameter with the variable whose law it belongs to.
func parameterOf(m *model.Model, p *model.Parameter) string {
	if p.Of >= 0 && p.Of < len(m.Variables) {
		return p.Name + " in the law of " + m.Variables[p.Of].ID
	}
	return p.Name
}

func (b *Block) compile(l *lowering, g group, factors []factor) error {
	slices.Sort(b.Names)
	var variables []string
	for _, i := range g.laws {
		variables = append(variables, l.m.Variables[l.m.Laws[i].Variable].ID)
	}
	if len(variables) == 0 { // priors only
		variables = b.Names
	}
	b.Name = strings.Join(variables, ", ")

	total := l.b.Const(0)
	b.factors = factors
	for _, f := range factors {
		total = l.b.Add(total, f.value)
	}
	var natural []ops.Value
	for _, i := range g.parameters {
		natural = append(natural, l.natural[i])
	}
	var err error
	if b.density, err = l.b.Program(total); err != nil {
		return fmt.Errorf("density: %s: %w", b.Name, err)
	}
	if b.natural, err = l.b.Program(l.b.Const(0), natural...); err != nil {
		return fmt.Errorf("density: %s: %w", b.Name, err)
	}
	return nil
}

// Dim is the number of unconstrained coordinates.
func (b *Block) Dim() int { return len(b.where) }

// Natural writes the natural values of b.Quantities at the point q; dst has
// len(b.Quantities). It runs the very operations that the log density runs.
func (b *Block) Natural(dst, q []float64) {
	e, ok := b.spare.Get().(*ops.Evaluator)
	if !ok {
		e = b.natural.NewEvaluator()
	}
	e.Outputs(dst, q)
	b.spare.Put(e)
}

// Evaluator makes the work space of one goroutine.
func (b *Block) Evaluator() *Evaluator {
	return &Evaluator{program: b.density.NewEvaluator(), dim: b.Dim()}
}

// An Evaluator evaluates one block's log density; it satisfies infer.Target.
// It is for one goroutine at a time.
type Evaluator struct {
	program *ops.Evaluator
	dim     int
}

// Dim is the number of unconstrained coordinates.
func (e *Evaluator) Dim() int { return e.dim }

// LogDensity writes the gradient and returns the log density at q, Jacobian
// included; −Inf where it is not a number or infinite. It does not allocate.
func (e *Evaluator) LogDensity(grad, q []float64) float64 {
	v := e.program.LogDensity(grad, q)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return math.Inf(-1)
	}
	return v
}
