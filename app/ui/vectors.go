package ui

import (
	"math"
	"slices"

	"arrowroot/app/words"
	"arrowroot/canvas"
	"arrowroot/canvas/draw"
	"arrowroot/compile/catalog"
	"arrowroot/compile/model"
)

// mostEntries is how many entries of a vector are shown one by one.
const mostEntries = 14

// vector shows a parameter of several entries: the prior of each and its
// posterior once fitted; of very many, how they lie.
func (x *details) vector(s *sheaf, m *model.Model, p *model.Parameter) {
	d := x.d
	level := 0.9
	if q := d.view.Question; q != nil {
		level = orLevel(q.Level)
	}
	rows := make([]draw.Interval, p.Size)
	centres := make([]float64, 0, p.Size)
	known := false
	for i := range rows {
		r := &rows[i]
		if i < len(p.Entries) {
			r.Label = p.Entries[i]
		}
		r.Mid, r.Low, r.High = math.NaN(), math.NaN(), math.NaN()
		r.PriorLow, r.PriorHigh = entryRange(m, p, i, level)
		known = known || r.PriorLow < r.PriorHigh
	}
	trust, rank := "", -1
	if f := d.view.Result; f != nil && f.Full != nil {
		for i, q := range f.Full.Density.Quantities {
			if q.At >= p.Size || i >= len(f.Full.Quantities) || f.Full.Density.Model.Parameters[q.Parameter].Name != p.Name {
				continue
			}
			n := f.Full.Quantities[i]
			r := &rows[q.At]
			r.Mid, r.Low, r.High, r.Words = n.Centre, n.Low, n.High, words.Number(n.Centre)
			centres = append(centres, n.Centre)
			if v := int(n.Trust.Verdict); v > rank {
				rank, trust = v, n.Trust.Verdict.String()
			}
		}
	}
	if !known && len(centres) == 0 {
		return
	}
	frame := bordered(tokenCard, tokenHairline, 5)
	says := "each entry's " + words.Percent(level)
	if p.Size <= mostEntries {
		height := float32(draw.IntervalsHeight(p.Size))
		zero := 0.0
		mark := &zero
		if p.Shape == model.Simplex || p.Shape == model.Rising {
			mark = nil
		}
		s.add(stack(frame, canvas.NewPicture(120, height, func(w, h float64) *draw.List {
			return draw.Intervals(w, h, rows, mark, d.style())
		})))
	} else {
		prior := spreadCurve(m, p)
		s.add(stack(frame, canvas.NewPicture(120, 104, func(w, h float64) *draw.List {
			return draw.DensityPlot(w, h, draw.Density{Prior: prior, Posterior: draw.KDE(centres, 160)}, d.style())
		})))
		says = "where one of the " + count(p.Size) + " entries may lie"
	}
	spans := []span{{text: "prior ┄  ", token: tokenMuted}}
	if len(centres) > 0 {
		spans = append(spans, span{text: "posterior ", token: tokenConfound})
	}
	spans = append(spans, span{text: " " + says, token: tokenMuted})
	if trust != "" && trust != "sound" {
		spans = append(spans, span{text: " · " + trust, token: tokenConfound})
	}
	if len(centres) > 0 && d.view.Stale {
		spans = append(spans, span{text: " · of an earlier version", token: tokenMuted})
	}
	s.add(newProse(sizeSmall, spans...))
}

// entryRange is the central interval of the prior of one entry of a vector,
// zeros where it cannot be said in numbers.
func entryRange(m *model.Model, p *model.Parameter, at int, level float64) (low, high float64) {
	quantile := entryQuantile(m, p, at)
	if quantile == nil {
		return 0, 0
	}
	return quantile((1 - level) / 2), quantile((1 + level) / 2)
}

// entryQuantile is the quantile function of an entry's prior; nil where it
// cannot be said in numbers.
func entryQuantile(m *model.Model, p *model.Parameter, at int) func(float64) float64 {
	k := float64(p.Size)
	switch p.Shape {
	case model.ZeroSum:
		// The prior is of the difference of two entries; an entry itself has
		// variance sd²/2 · (1 − 1/K): see model.ZeroSum.
		sd, ok := constants(p.Prior.Arguments)
		if !ok || p.Prior.Family == nil || p.Prior.Family.SD == nil {
			return nil
		}
		own := p.Prior.Family.SD(sd) / math.Sqrt2 * math.Sqrt(1-1/k)
		return func(u float64) float64 { return own * normalQuantile(u) }
	case model.Vector:
		args, ok := constants(p.Prior.Arguments)
		if !ok || p.Prior.Family == nil || p.Prior.Family.Quantile == nil || p.Prior.On != model.Itself {
			return nil
		}
		return func(u float64) float64 { return p.Prior.Family.Quantile(u, args) }
	case model.Simplex:
		return func(u float64) float64 { return 1 - math.Pow(1-u, 1/(k-1)) } // a share of Dirichlet(1) is beta(1, K − 1)
	case model.Rising:
		if at == 0 || at == p.Size-1 {
			return nil
		}
		// One of K − 2 sorted uniform numbers is beta(j, K − 1 − j).
		beta := catalog.FamilyByName("beta")
		if beta == nil || beta.Quantile == nil {
			return nil
		}
		share := float64(at) / (k - 1)
		return func(u float64) float64 { return beta.Quantile(u, []float64{share, k - 1}) }
	case model.Cuts:
		// The share up to a cut point is beta(j, K − j) where the K shares are
		// Dirichlet(1); the cut is its logit, or its probit.
		beta, levels := catalog.FamilyByName("beta"), k+1
		if beta == nil || beta.Quantile == nil {
			return nil
		}
		share := (float64(at) + 1) / levels
		link := linkOf(m, p)
		return func(u float64) float64 { return link(beta.Quantile(u, []float64{share, levels})) }
	case model.ByPlate:
		draws := plateDraws(m, p)
		if len(draws) == 0 {
			return nil
		}
		return func(u float64) float64 { return draws[min(int(u*float64(len(draws))), len(draws)-1)] }
	}
	return nil
}

// linkOf is how cut points are made of shares in the law that a parameter
// belongs to.
func linkOf(m *model.Model, p *model.Parameter) func(float64) float64 {
	for _, law := range m.Laws {
		if law.Variable == p.Of && law.Family != nil && law.Family.Link == catalog.Probit {
			return normalQuantile
		}
	}
	return func(u float64) float64 { return math.Log(u / (1 - u)) }
}

func normalQuantile(u float64) float64 { return math.Sqrt2 * math.Erfinv(2*u-1) }

// plateDraws are values of an entry that varies by a plate, under the priors of
// its mean and spread, in rising order: a grid of quantiles of the three, so
// that the picture is the same every time.
func plateDraws(m *model.Model, p *model.Parameter) []float64 {
	const n = 15
	mean, spread := []float64{0}, scalarGrid(m, p.SD, n)
	if p.Mean != "" {
		mean = scalarGrid(m, p.Mean, n)
	}
	var out []float64
	for _, mu := range mean {
		for _, sd := range spread {
			for i := range n {
				out = append(out, mu+sd*normalQuantile((float64(i)+0.5)/n))
			}
		}
	}
	slices.Sort(out)
	return out
}

// scalarGrid are evenly spaced quantiles of a scalar parameter's prior; nil
// where it cannot be said in numbers.
func scalarGrid(m *model.Model, name string, n int) []float64 {
	for _, p := range m.Parameters {
		if p.Name != name || p.Shape != model.Scalar || p.Prior.Family == nil || p.Prior.Family.Quantile == nil || p.Prior.On != model.Itself {
			continue
		}
		args, ok := constants(p.Prior.Arguments)
		if !ok {
			return nil
		}
		out := make([]float64, n)
		for i := range out {
			out[i] = p.Prior.Family.Quantile((float64(i)+0.5)/float64(n), args)
		}
		return out
	}
	return nil
}

// spreadCurve is the density of one entry's prior, from its quantiles.
func spreadCurve(m *model.Model, p *model.Parameter) draw.Curve {
	quantile := entryQuantile(m, p, 0)
	if quantile == nil {
		return draw.Curve{}
	}
	const n = 400
	values := make([]float64, n)
	for i := range values {
		values[i] = quantile((float64(i) + 0.5) / n)
	}
	return draw.KDE(values, 160)
}
