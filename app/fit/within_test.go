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

// orchards simulates 80 invented orchards of 5 rows: care, which nobody
// measured, is the same throughout an orchard and raises pruning by 1 and yield
// by .50; pruning raises yield by .50.
func orchards(seed uint64) string {
	rng := rand.New(rand.NewPCG(seed, 0))
	var b strings.Builder
	b.WriteString("orchard,pruning,yield\n")
	for j := range 80 {
		care := rng.NormFloat64()
		for range 5 {
			pruning := care + 0.6*rng.NormFloat64()
			yield := 0.5*pruning + 0.5*care + rng.NormFloat64()
			fmt.Fprintf(&b, "o%d,%.4f,%.4f\n", j+1, pruning, yield)
		}
	}
	return b.String()
}

const orchardTruth = 0.5

// SEMANTICS A6: a baseline that varies by the plate closes no path; the means
// within it do. The full model of the rival that draws the cause and the held
// number that compares within orchards are right, the rival in which orchards
// merely differ is confidently wrong.
func TestCauseOfAPlate(t *testing.T) {
	t.Parallel()
	text, err := os.ReadFile(filepath.Join(studies, "orchards.csv"))
	if err != nil {
		t.Fatal(err)
	}
	if string(text) != orchards(1) {
		t.Errorf("orchards.csv is not what its simulation gives")
	}
	req := request(t, "orchards")
	req.Draws, req.NoPaint = 500, true
	e := run(t, req).Effect
	if e.Full == nil || e.Adjusted == nil {
		t.Fatalf("no number: %q, %q", e.Refusal, e.AdjustedRefusal)
	}
	if !e.HeldProposed || !e.HeldValid || fmt.Sprint(e.Held) != "[orchard]" || e.LawsDisagree || e.Headline() != e.Full {
		t.Errorf("held %v, proposed %v, valid %v", e.Held, e.HeldProposed, e.HeldValid)
	}
	for name, n := range map[string]*Number{"full": e.Full, "held": e.Adjusted} {
		within(t, name, n.Centre, orchardTruth, 3*n.Spread)
		if n.Trust.Verdict >= summary.Unusable {
			t.Errorf("%s: %v", name, n.Trust)
		}
	}
	wrong := request(t, "orchards")
	wrong.Rival, wrong.Draws, wrong.NoPaint = "Orchards merely differ", 500, true
	w := run(t, wrong).Effect
	if w.Full.Low < orchardTruth+0.2 {
		t.Errorf("a varying baseline alone: %.3f (%.3f to %.3f), which should be far above .50", w.Full.Centre, w.Full.Low, w.Full.High)
	}
}

// The bracket of A6 over repeated simulations: coverage at 90 %, and the
// average of the estimates.
func TestCauseOfAPlateRepeated(t *testing.T) {
	if os.Getenv("ARROWROOT_LONG") == "" {
		t.Skip("takes a minute; ARROWROOT_LONG=1 runs it")
	}
	const times = 40
	for _, rival := range []string{"Care of the orchard", "Orchards merely differ"} {
		mean, covered := 0.0, 0
		for seed := range uint64(times) {
			req := request(t, "orchards")
			data, err := table.Read("orchards", strings.NewReader(orchards(seed+10)), table.Options{})
			if err != nil {
				t.Fatal(err)
			}
			q := *req.Question
			q.Held = []string{"orchard"}
			if rival != req.Rival {
				q.Held = []string{}
			}
			req.Rival, req.Question, req.Table, req.Draws, req.NoPaint = rival, &q, data, 300, true
			n := run(t, req).Effect.Full
			mean += n.Centre / times
			if covers(n, orchardTruth) {
				covered++
			}
		}
		t.Logf("%s: mean %.3f, covered %d of %d", rival, mean, covered, times)
		switch {
		case rival == "Care of the orchard" && (mean < 0.47 || mean > 0.53 || covered < 30):
			t.Errorf("%s: mean %.3f, covered %d of %d", rival, mean, covered, times)
		case rival != "Care of the orchard" && covered > 0:
			t.Errorf("%s: covered %d of %d", rival, covered, times)
		}
	}
}
