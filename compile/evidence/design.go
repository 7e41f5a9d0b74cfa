package evidence

import (
	"fmt"
	"strings"
	"sync"

	"arrowroot/compile/study"
)

// fewGroups is under how many groups a plate is adjusted for, being too few to
// take as independent pieces.
const fewGroups = 8

// A sharedDesign is the regression on a given set, reckoned once for all pairs
// that it is given to.
type sharedDesign struct {
	once    sync.Once
	design  *design
	schemes []scheme
}

// design gives the regression on a given set, and who depends on whom in it.
func (b *bench) design(given []int, gaps string, rows []int) *sharedDesign {
	key := fmt.Sprint(given) + gaps
	b.lock.Lock()
	kept := b.given[key]
	if kept == nil {
		kept = &sharedDesign{}
		b.given[key] = kept
	}
	b.lock.Unlock()
	kept.once.Do(func() {
		var with []*column
		var values [][]float64
		for _, v := range given {
			with, values = append(with, b.data.of[v]), append(values, b.scored(v, gaps).values)
		}
		units := len(rows)
		schemes := []scheme{{units: len(rows)}}
		for _, p := range b.groups {
			of, n := renumber(p.of, rows)
			switch {
			case n == len(rows) || n < 2:
				continue
			case n < fewGroups:
				fixed := make([]float64, len(of))
				for i, g := range of {
					fixed[i] = float64(g)
				}
				with, values = append(with, &column{scale: study.Category}), append(values, fixed)
				continue
			}
			schemes = append(schemes, scheme{plate: p.name, of: of, units: n})
			for _, v := range values {
				if constantWithin(v, of, n) {
					units = min(units, n)
				}
			}
		}
		kept.design = newDesign(with, values, len(rows), units)
		for i := range schemes {
			schemes[i].rank = kept.design.rankOf(&schemes[i])
		}
		kept.schemes = schemes
	})
	return kept
}

// forget lets the regressions on a given set go.
func (b *bench) forget(given []int) {
	prefix := fmt.Sprint(given) + "["
	b.lock.Lock()
	defer b.lock.Unlock()
	for key := range b.given {
		if strings.HasPrefix(key, prefix) {
			delete(b.given, key)
		}
	}
}

// rankOf counts the parameters that tell a scheme's units apart: of groups,
// what is the same within each.
func (d *design) rankOf(s *scheme) int {
	if s.of == nil {
		return d.rank
	}
	if d.cell != nil {
		cell := make([]float64, len(d.cell))
		for i, c := range d.cell {
			cell[i] = float64(c)
		}
		if constantWithin(cell, s.of, s.units) {
			return d.rank
		}
		return 1
	}
	rank := 1
	for j, x := range d.columns {
		if !d.dropped[j] && constantWithin(x, s.of, s.units) {
			rank++
		}
	}
	return rank
}

// renumber gives the groups of some rows as 0 … n−1.
func renumber(of []int, rows []int) ([]int, int) {
	place := make(map[int]int)
	out := make([]int, len(rows))
	for i, r := range rows {
		at, ok := place[of[r]]
		if !ok {
			at = len(place)
			place[of[r]] = at
		}
		out[i] = at
	}
	return out, len(place)
}

func constantWithin(x []float64, of []int, groups int) bool {
	first := make([]float64, groups)
	seen := make([]bool, groups)
	for i, g := range of {
		if !seen[g] {
			first[g], seen[g] = x[i], true
		} else if first[g] != x[i] {
			return false
		}
	}
	return true
}
