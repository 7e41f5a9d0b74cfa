package ops

import "encoding/binary"

// A term of an Affine node is a product. Its factors are positions in the
// node's arguments, -1 for none.
type term struct {
	scale int    // a scalar
	x     int    // a column, or with an index one that is gathered
	index *index // gathers x
	w     int    // a second column
}

func packedTerms(terms []term) string {
	var buf []byte
	for _, t := range terms {
		buf = binary.AppendVarint(buf, int64(t.scale))
		buf = binary.AppendVarint(buf, int64(t.x))
		buf = binary.AppendVarint(buf, int64(t.w))
		buf = append(buf, 0)
		if t.index != nil {
			buf[len(buf)-1] = 1
		}
	}
	return string(buf)
}

// runAffine adds plain scaled columns up four at a time, which saves going
// through the result once for each, then the terms of other kinds.
func runAffine(f *frame, in *instr) {
	dst := f.at(in.dst)
	var c float64
	for _, s := range in.affine.scalars {
		c += f.all(s)[0]
	}
	plain := in.affine.plain
	if len(plain) == 0 {
		for i := range dst {
			dst[i] = c
		}
	}
	for first := true; len(plain) > 0; first = false {
		switch {
		case len(plain) >= 4:
			f.scaled4(dst, plain, c, first)
			plain = plain[4:]
		case len(plain) == 3:
			f.scaled3(dst, plain, c, first)
			plain = plain[3:]
		case len(plain) == 2:
			f.scaled2(dst, plain, c, first)
			plain = plain[2:]
		default:
			f.scaled1(dst, plain, c, first)
			plain = plain[1:]
		}
	}
	for i := range in.affine.others {
		f.addProduct(dst, &in.affine.others[i])
	}
}

// An affinePlan is an Affine node with its arguments resolved to slots.
type affinePlan struct {
	scalars []int32
	plain   []factorPair
	others  []product
}

// A factorPair is scale times x; scale -1 stands for one.
type factorPair struct{ scale, x int32 }

// A product is scale times x, gathered if index is not nil, times w.
type product struct {
	scale, x, w int32
	index       *index
}

func (f *frame) scale(s int32) float64 {
	if s < 0 {
		return 1
	}
	return f.all(s)[0]
}

func (f *frame) scaled1(dst []float64, t []factorPair, c float64, first bool) {
	a, x := f.scale(t[0].scale), f.at(t[0].x)[:len(dst)]
	if first {
		for i := range dst {
			dst[i] = c + a*x[i]
		}
		return
	}
	for i := range dst {
		dst[i] += a * x[i]
	}
}

func (f *frame) scaled2(dst []float64, t []factorPair, c float64, first bool) {
	a0, x0 := f.scale(t[0].scale), f.at(t[0].x)[:len(dst)]
	a1, x1 := f.scale(t[1].scale), f.at(t[1].x)[:len(dst)]
	if first {
		for i := range dst {
			dst[i] = c + (a0*x0[i] + a1*x1[i])
		}
		return
	}
	for i := range dst {
		dst[i] += a0*x0[i] + a1*x1[i]
	}
}

func (f *frame) scaled3(dst []float64, t []factorPair, c float64, first bool) {
	a0, x0 := f.scale(t[0].scale), f.at(t[0].x)[:len(dst)]
	a1, x1 := f.scale(t[1].scale), f.at(t[1].x)[:len(dst)]
	a2, x2 := f.scale(t[2].scale), f.at(t[2].x)[:len(dst)]
	if first {
		for i := range dst {
			dst[i] = (c + a0*x0[i]) + (a1*x1[i] + a2*x2[i])
		}
		return
	}
	for i := range dst {
		dst[i] += a0*x0[i] + (a1*x1[i] + a2*x2[i])
	}
}

func (f *frame) scaled4(dst []float64, t []factorPair, c float64, first bool) {
	a0, x0 := f.scale(t[0].scale), f.at(t[0].x)[:len(dst)]
	a1, x1 := f.scale(t[1].scale), f.at(t[1].x)[:len(dst)]
	a2, x2 := f.scale(t[2].scale), f.at(t[2].x)[:len(dst)]
	a3, x3 := f.scale(t[3].scale), f.at(t[3].x)[:len(dst)]
	if first {
		for i := range dst {
			dst[i] = c + ((a0*x0[i] + a1*x1[i]) + (a2*x2[i] + a3*x3[i]))
		}
		return
	}
	for i := range dst {
		dst[i] += (a0*x0[i] + a1*x1[i]) + (a2*x2[i] + a3*x3[i])
	}
}

func (f *frame) addProduct(dst []float64, p *product) {
	s := f.scale(p.scale)
	var w []float64
	if p.w >= 0 {
		w = f.at(p.w)[:len(dst)]
	}
	if p.index == nil {
		x := f.at(p.x)[:len(dst)]
		for i := range dst {
			dst[i] += s * x[i] * w[i]
		}
		return
	}
	x := f.all(p.x)
	to := p.index.to[f.lo : f.lo+len(dst)]
	switch {
	case w == nil && s == 1:
		for i, j := range to {
			dst[i] += x[j]
		}
	case w == nil:
		for i, j := range to {
			dst[i] += s * x[j]
		}
	default:
		for i, j := range to {
			dst[i] += s * x[j] * w[i]
		}
	}
}
