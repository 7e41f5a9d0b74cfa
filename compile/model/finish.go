package model

import (
	"strings"

	"arrowroot/compile/catalog"
	"arrowroot/compile/formula"
	"arrowroot/compile/study"
)

// finish shortens symbols that stay clear, chooses how group effects are
// sampled, and lists what is given.
func (b *builder) finish(string) {
	m := b.model
	b.shorten()
	for _, l := range m.Laws {
		b.centre(l)
	}
	explained := make([]bool, len(m.Variables))
	for _, l := range m.Laws {
		explained[l.Variable] = true
	}
	for i, v := range m.Variables {
		if !explained[i] && v.Computed == nil && v.MeanOf == "" {
			m.Given = append(m.Given, v.ID)
		}
	}
}

// shorten drops the child from symbols of group effects where only one law has
// them: α_farm instead of α_bees,farm.
func (b *builder) shorten() {
	short := make(map[string]int)
	brief := func(p *Parameter) string {
		stem, rest, ok := strings.Cut(p.Symbol, "_")
		_, plate, also := cutLast(rest, ",")
		if !ok || !also || strings.Contains(rest, "→") {
			return p.Symbol
		}
		return stem + "_" + plate
	}
	for _, p := range b.model.Parameters {
		short[brief(p)]++
	}
	for _, p := range b.model.Parameters {
		if s := brief(p); short[s] == 1 {
			p.Symbol = s
		}
	}
}

func cutLast(s, sep string) (before, after string, ok bool) {
	i := strings.LastIndex(s, sep)
	if i < 0 {
		return s, "", false
	}
	return s[:i], s[i+len(sep):], true
}

// informative is the information about one group effect, in units of its
// prior's, from which on the effects themselves are better coordinates than
// their standard scores. Measured: a logistic law with 20 rows per
// group favours scores, with 100 rows the effects.
const informative = 20

// centre chooses centred coordinates for group effects about which each group
// has much to say: rows per group × information of a row × the spread that the
// prior expects, squared. It looks at counts of rows and at the outcome's
// general level only.
func (b *builder) centre(l *Law) {
	m := b.model
	v := m.Variables[l.Variable]
	d := b.draftOf(v.ID)
	if len(v.Values) == 0 {
		return
	}
	used := make(map[string]bool)
	for _, e := range append(append([]formula.Expr(nil), l.Predictors...), l.Arguments...) {
		if e != nil {
			for _, n := range formula.Names(e) {
				used[n] = true
			}
		}
	}
	for _, p := range m.Parameters {
		if p.Shape != ByPlate || !used[p.Name] || p.Size == 0 {
			continue
		}
		perGroup := float64(len(v.Values)) / float64(p.Size)
		spread := d.span.width() / 8
		if b.scope[p.Name].role != baselineBy {
			spread /= 2 // a slope over half of its parent's range
		}
		p.Centred = perGroup*rowInformation(l.Family, v)*spread*spread > informative
	}
}

// rowInformation is about the Fisher information of one row on the predictor,
// at the outcome's general level.
func rowInformation(f *catalog.Family, v *Variable) float64 {
	mean, variance := moments(v.Values)
	switch f.Link {
	case catalog.Log:
		if f.Discrete {
			return mean / (1 + mean)
		}
		return 1
	case catalog.Identity:
		if variance > 0 {
			return 1 / variance
		}
		return 0
	}
	if v.Scale == study.Binary {
		return mean * (1 - mean)
	}
	return 0.2
}

func moments(values []float64) (mean, variance float64) {
	n := float64(len(values))
	for _, x := range values {
		mean += x / n
	}
	for _, x := range values {
		variance += (x - mean) * (x - mean) / n
	}
	return mean, variance
}
