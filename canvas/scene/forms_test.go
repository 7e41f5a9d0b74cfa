package scene

import (
	"bytes"
	"testing"

	"arrowroot/canvas/draw"
	"arrowroot/compile/study"
)

// Every form but the slope has a mark on its arrow, and no two have the same.
func TestFormMarks(t *testing.T) {
	seen := make(map[string]string)
	for _, form := range []string{study.Slope, study.Log, study.Steps, study.OneWay, study.Threshold, study.Saturating, study.Offset} {
		in := hedgeInput(Light())
		arrow(in.Rival, "hedge", "bees").Form = form
		l, _ := Build(in)
		var b bytes.Buffer
		if err := draw.WriteSVG(&b, l); err != nil {
			t.Fatal(err)
		}
		if other, same := seen[b.String()]; same {
			t.Errorf("%s is drawn like %s", form, other)
		}
		seen[b.String()] = form
	}
}
