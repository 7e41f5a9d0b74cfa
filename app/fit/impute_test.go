package fit

import (
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/compile/table"
	"arrowroot/infer/summary"
)

// ponds simulates 300 invented ponds: shade and depth share a cause that nobody
// measured; depth raises newts by 1.00 and shade lowers them by 1.50. Depth was
// not recorded in about half of the ponds, more often in shady ones, and newts
// not in a few.
func ponds(seed uint64) string {
	rng := rand.New(rand.NewPCG(seed, 0))
	var b strings.Builder
	b.WriteString("shade,depth,newts\n")
	for range 300 {
		cause := rng.NormFloat64()
		shade := cause + 0.5*rng.NormFloat64()
		depth := cause + 0.5*rng.NormFloat64()
		newts := depth - 1.5*shade + rng.NormFloat64()
		fmt.Fprintf(&b, "%.4f,", shade)
		if rng.NormFloat64() < 0.5*shade {
			b.WriteString("NA,")
		} else {
			fmt.Fprintf(&b, "%.4f,", depth)
		}
		if rng.Float64() < 0.1 {
			b.WriteString("NA\n")
		} else {
			fmt.Fprintf(&b, "%.4f\n", newts)
		}
	}
	return b.String()
}

const pondTruth = 1.0

// SEMANTICS A2: missing entries of a root that shares a cause are imputed from
// its carriers. A marginal law of it, which the rival without the shared cause
// implies, is confidently wrong.
func TestImputedFromCarriers(t *testing.T) {
	t.Parallel()
	text, err := os.ReadFile(filepath.Join(studies, "ponds.csv"))
	if err != nil {
		t.Fatal(err)
	}
	if string(text) != ponds(1) {
		t.Errorf("ponds.csv is not what its simulation gives")
	}
	req := request(t, "ponds")
	req.Draws, req.NoPaint = 500, true
	r := run(t, req)
	n := r.Effect.Full
	if rows := r.Full.Model.Rows; rows.Used != 300 || len(rows.Lost) != 0 {
		t.Errorf("rows used %d of %d, lost %v", rows.Used, rows.Read, rows.Lost)
	}
	within(t, "imputed from carriers", n.Centre, pondTruth, 3*n.Spread)
	if n.Trust.Verdict >= summary.Unusable {
		t.Errorf("trust: %v", n.Trust)
	}
	req.Rival = "Nothing shared"
	wrong := run(t, req).Effect.Full
	if covers(wrong, pondTruth) {
		t.Errorf("imputed from a marginal law: %.3f (%.3f to %.3f), which should miss 1.00", wrong.Centre, wrong.Low, wrong.High)
	}
	t.Logf("from carriers %.3f (%.3f to %.3f), from a marginal law %.3f (%.3f to %.3f)", n.Centre, n.Low, n.High, wrong.Centre, wrong.Low, wrong.High)
}

// Coverage at 90 % and the average of the estimates over repeated simulations.
func TestImputedRepeated(t *testing.T) {
	if os.Getenv("ARROWROOT_LONG") == "" {
		t.Skip("takes minutes; ARROWROOT_LONG=1 runs it")
	}
	const times = 30
	mean, covered := 0.0, 0
	for seed := range uint64(times) {
		req := request(t, "ponds")
		data, err := table.Read("ponds", strings.NewReader(ponds(seed+10)), table.Options{})
		if err != nil {
			t.Fatal(err)
		}
		req.Table, req.Draws, req.NoPaint = data, 300, true
		n := run(t, req).Effect.Full
		mean += n.Centre / times
		if covers(n, pondTruth) {
			covered++
		}
	}
	t.Logf("mean %.3f, covered %d of %d", mean, covered, times)
	if mean < 0.95 || mean > 1.05 || covered < 23 {
		t.Errorf("mean %.3f, covered %d of %d", mean, covered, times)
	}
}
