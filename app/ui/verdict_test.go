package ui

import (
	"testing"

	"arrowroot/app/findings"
)

// Where no set will do, the strip leads on to what else may give the effect.
func TestStripLeadsBeyondAdjustment(t *testing.T) {
	b := newBench(t)
	p := b.ask(coverCrop, "cover", "crop")
	s := b.strip()
	if !s.action.Visible() || s.label.text != "Other ways" {
		t.Fatalf("under %q the strip offers %q", b.verdict(), s.label.text)
	}
	s.action.onTap()
	b.queue.drain()
	if b.drawer.page() != "Reading" || p.chosen != findings.BeyondSection || len(p.lines) == 0 {
		t.Errorf("it shows %s, %s, %d lines", b.drawer.page(), p.chosen, len(p.lines))
	}
}
