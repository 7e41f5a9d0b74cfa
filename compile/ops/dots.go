package ops

// Sums and dot products. Each is taken in two or four strands, whose additions
// do not wait for one another; the strands are joined at the end of the block,
// so the order is always the same.

func sum(x []float64) float64 {
	var s0, s1, s2, s3 float64
	for ; len(x) >= 4; x = x[4:] {
		s0 += x[0]
		s1 += x[1]
		s2 += x[2]
		s3 += x[3]
	}
	for _, v := range x {
		s0 += v
	}
	return (s0 + s1) + (s2 + s3)
}

func dot(x, y []float64) float64 {
	y = y[:len(x)]
	var s0, s1, s2, s3 float64
	for ; len(x) >= 4 && len(y) >= 4; x, y = x[4:], y[4:] {
		s0 += x[0] * y[0]
		s1 += x[1] * y[1]
		s2 += x[2] * y[2]
		s3 += x[3] * y[3]
	}
	for i, v := range x {
		s0 += v * y[i]
	}
	return (s0 + s1) + (s2 + s3)
}

// sumAndDots2 gives the sum of x and its products with two columns.
func sumAndDots2(x, a, b []float64) (s, sa, sb float64) {
	a, b = a[:len(x)], b[:len(x)]
	var s1, a1, b1 float64
	i := 0
	for ; i+1 < len(x); i += 2 {
		v, w := x[i], x[i+1]
		s += v
		sa += v * a[i]
		sb += v * b[i]
		s1 += w
		a1 += w * a[i+1]
		b1 += w * b[i+1]
	}
	if i < len(x) {
		s += x[i]
		sa += x[i] * a[i]
		sb += x[i] * b[i]
	}
	return s + s1, sa + a1, sb + b1
}

// dots3 gives the products of x with three columns.
func dots3(x, a, b, c []float64) (sa, sb, sc float64) {
	a, b, c = a[:len(x)], b[:len(x)], c[:len(x)]
	var a1, b1, c1 float64
	i := 0
	for ; i+1 < len(x); i += 2 {
		v, w := x[i], x[i+1]
		sa += v * a[i]
		sb += v * b[i]
		sc += v * c[i]
		a1 += w * a[i+1]
		b1 += w * b[i+1]
		c1 += w * c[i+1]
	}
	if i < len(x) {
		sa += x[i] * a[i]
		sb += x[i] * b[i]
		sc += x[i] * c[i]
	}
	return sa + a1, sb + b1, sc + c1
}

// runDots is several Sum and Dot of one column in one instruction: the column
// is read once for two or three of them.
func runDots(f *frame, in *instr) {
	x := f.at(in.args[0])
	dots, sums := in.shared, in.sums
	switch {
	case !in.hasSum:
	case len(dots) >= 3:
		s, a, b := sumAndDots2(x, f.at(dots[1]), f.at(dots[2]))
		f.all(sums[0])[0] += s
		f.all(sums[1])[0] += a
		f.all(sums[2])[0] += b
		dots, sums = dots[3:], sums[3:]
	default:
		f.all(sums[0])[0] += sum(x)
		dots, sums = dots[1:], sums[1:]
	}
	for len(dots) > 0 {
		if len(dots) >= 3 {
			a, b, c := dots3(x, f.at(dots[0]), f.at(dots[1]), f.at(dots[2]))
			f.all(sums[0])[0] += a
			f.all(sums[1])[0] += b
			f.all(sums[2])[0] += c
			dots, sums = dots[3:], sums[3:]
			continue
		}
		f.all(sums[0])[0] += dot(x, f.at(dots[0]))
		dots, sums = dots[1:], sums[1:]
	}
}
