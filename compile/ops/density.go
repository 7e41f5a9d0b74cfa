package ops

// A call holds the argument lists of one density instruction, so that they
// need not be made for every block. Entry 0 is y, the others are the arguments.
type call struct {
	values, slopes [][]float64
}

func runDensity(f *frame, in *instr) {
	c := &f.calls[in.call]
	for i, a := range in.args {
		c.values[i] = f.at(a)
		if p := in.partials[i]; p >= 0 {
			c.slopes[i] = f.at(p)
			if !in.added[i] {
				clear(c.slopes[i]) // the kernel adds, and this block is used anew
			}
		}
	}
	aux := in.aux
	if in.auxByRow {
		aux = aux[f.lo : f.lo+f.n]
	}
	f.all(in.dst)[0] += in.node.kernel.Block(f.n, c.values[0], c.values[1:], c.slopes[0], c.slopes[1:], aux, f.scratch)
}
