package evidence

import (
	"context"
	"fmt"
	"math"
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
)

const mostTetrads = 200

// tetrads tests the tetrads of a rival whose variables are numbers. They are
// compared in their own units: a tetrad binds linear laws alone.
func (b *bench) tetrads(ctx context.Context) ([]Tetrad, error) {
	list, _ := causal.Tetrads(b.g, mostTetrads)
	var all []Tetrad
	var p []float64
	for _, t := range list {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		nodes := []int{t.A, t.B, t.C, t.D}
		if slices.ContainsFunc(nodes, func(v int) bool { return b.data.of[v] == nil || !isNumber(b.data.of[v].scale) }) || len(b.req.Selected) > 0 {
			continue
		}
		rows := b.rows(b.gapKey(nodes))
		var x [4][]float64
		constant := false
		for i, v := range nodes {
			x[i] = pick(b.data.of[v].values, rows)
			constant = constant || len(rows) == 0 || !standardise(x[i])
		}
		found := Tetrad{Tetrad: t, P: math.NaN(), Adjusted: math.NaN(), Rows: len(rows), Verdict: TooFew, Short: "too few rows to say"}
		found.Effect = Effect{Value: math.NaN(), Low: math.NaN(), High: math.NaN(), Signed: true}
		if !constant && len(rows) >= 30 {
			schemes := []scheme{{units: len(rows), rank: 1}}
			for _, g := range b.groups {
				if of, n := renumber(g.of, rows); n >= fewGroups && n < len(rows) {
					schemes = append(schemes, scheme{plate: g.name, of: of, units: n, rank: 1})
				}
			}
			found.Effect, found.P = tetradDifference(x, schemes, b.req.Level)
			found.Verdict = Undecided
		}
		all, p = append(all, found), append(p, found.P)
	}
	for i, adjusted := range holm(p) {
		t := &all[i]
		t.Adjusted = adjusted
		if t.Verdict != TooFew {
			t.Verdict, t.Short = verdict(t.Effect, adjusted)
		}
		t.Sentence = t.Tetrad.Sentence(b.g) + " " + b.constraintShown(t.Verdict, t.Effect, t.Short, "difference of the products of correlations", "If the arrows are right, some law bends.")
	}
	slices.SortStableFunc(all, func(x, y Tetrad) int {
		return worse(Finding{Verdict: x.Verdict, Effect: x.Effect, P: x.P}, Finding{Verdict: y.Verdict, Effect: y.Effect, P: y.P})
	})
	return all, nil
}

// constraintShown says what the data show of a constraint that is no
// independence.
func (b *bench) constraintShown(v Verdict, e Effect, short, what, otherwise string) string {
	size := fmt.Sprintf("%s %s, %s %s to %s", what, number(e.Value), percent(b.req.Level), number(e.Low), number(e.High))
	switch v {
	case Contradicted:
		text := fmt.Sprintf("In these data it is not so (%s).", size)
		if otherwise != "" {
			text += " " + otherwise
		}
		return text
	case Doubtful:
		return fmt.Sprintf("These data speak against it (%s), but chance could do that, all tests counted.", size)
	case Trifling:
		return fmt.Sprintf("In these data it is not quite so (%s), by too little to matter for most purposes.", size)
	case Holds:
		return fmt.Sprintf("In these data that %s (%s).", short, size)
	case Undecided:
		return fmt.Sprintf("These data neither refuse it nor show that it holds (%s).", size)
	}
	return "These data have too few rows to say."
}

func isNumber(s study.Scale) bool {
	return s == "" || s == study.Real || s == study.Positive || s == study.Proportion || s == study.Count
}

// tetradDifference gives r_ac r_bd − r_ad r_bc of standardised a, b, c, d, with
// the spread of its influence function: the distribution-free test of Bollen
// (1990), which on normal data agrees with Wishart's (1928).
func tetradDifference(x [4][]float64, schemes []scheme, level float64) (Effect, float64) {
	a, b, c, d := x[0], x[1], x[2], x[3]
	n := float64(len(a))
	ac, bd, ad, bc := dot(a, c)/n, dot(b, d)/n, dot(a, d)/n, dot(b, c)/n
	influence := make([]float64, len(a))
	for i := range influence {
		of := func(x, y, r float64) float64 { return x*y - r*(x*x+y*y)/2 }
		influence[i] = bd*of(a[i], c[i], ac) + ac*of(b[i], d[i], bd) - bc*of(a[i], d[i], ad) - ad*of(b[i], c[i], bc)
	}
	e := Effect{Value: ac*bd - ad*bc, Signed: true, Low: math.Inf(1), High: math.Inf(-1)}
	p := 0.0
	for i := range schemes {
		s := &schemes[i]
		df := s.freedom()
		spread := math.Sqrt(sumOfSquares(influence, s.of, s.units)*float64(s.units)/df) / n
		width := spread * quantileT((1+level)/2, df)
		e.Low, e.High = math.Min(e.Low, e.Value-width), math.Max(e.High, e.Value+width)
		t := e.Value / spread
		p = math.Max(p, tailF(t*t, 1, df))
	}
	return e, p
}
