package model

import (
	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"math"
)

// Constructors of expressions. Spans are empty: nobody typed these.

func number(v float64) formula.Expr { return &formula.Number{Value: v} }

func named(id string) *formula.Name { return &formula.Name{ID: id} }

func by(id, plate string) formula.Expr {
	return &formula.By{Name: named(id), Plates: []string{plate}}
}

func of(vector, variable string) formula.Expr {
	return &formula.Of{Vector: named(vector), Variable: named(variable)}
}

func times(x, y formula.Expr) formula.Expr { return &formula.Binary{Op: '*', X: x, Y: y} }

func call(function string, arg formula.Expr) formula.Expr {
	return &formula.Call{Function: function, Args: []formula.Expr{arg}}
}

// centred is x − c, read as people write it: x where c is 0, x + 3 for −3.
func centred(id string, c float64) formula.Expr {
	switch {
	case c == 0:
		return named(id)
	case c < 0:
		return &formula.Binary{Op: '+', X: named(id), Y: number(-c)}
	}
	return &formula.Binary{Op: '-', X: named(id), Y: number(c)}
}

// sum adds up terms from the left; 0 if there are none.
func sum(terms []formula.Expr) formula.Expr {
	if len(terms) == 0 {
		return number(0)
	}
	e := terms[0]
	for _, t := range terms[1:] {
		e = &formula.Binary{Op: '+', X: e, Y: t}
	}
	return e
}

// Evaluate gives the value of an expression: value tells what a name means,
// and for "vector of variable" and "name by plate" gets the whole node. It is
// NaN where value is or where the catalogue has no such function.
func Evaluate(e formula.Expr, value func(formula.Expr) float64) float64 {
	switch e := e.(type) {
	case *formula.Number:
		return e.Value
	case *formula.Unary:
		return -Evaluate(e.X, value)
	case *formula.Binary:
		x, y := Evaluate(e.X, value), Evaluate(e.Y, value)
		switch e.Op {
		case '+':
			return x + y
		case '-':
			return x - y
		case '*':
			return x * y
		case '/':
			return x / y
		case '^':
			return math.Pow(x, y)
		}
	case *formula.Call:
		f := catalog.FunctionByName(e.Function)
		if f == nil || f.Args >= 0 && f.Args != len(e.Args) {
			return math.NaN()
		}
		args := make([]float64, len(e.Args))
		for i, a := range e.Args {
			args[i] = Evaluate(a, value)
		}
		return f.Value(args)
	case *formula.Name, *formula.By, *formula.Of, *formula.Element:
		return value(e)
	}
	return math.NaN()
}
