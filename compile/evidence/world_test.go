package evidence

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A world is a study with data from known laws.
type world struct {
	arrows     string // as typed: "a -> b"
	unmeasured []string
	scales     map[string]study.Scale
	levels     map[string][]string
	plate      string // a column of this name holds groups
	columns    map[string][]string
}

func newWorld(arrows string) *world {
	return &world{arrows: arrows, scales: map[string]study.Scale{}, levels: map[string][]string{}, columns: map[string][]string{}}
}

func (w *world) numbers(id string, scale study.Scale, values []float64) {
	w.scales[id] = scale
	for _, x := range values {
		text := ""
		if !math.IsNaN(x) {
			text = strconv.FormatFloat(x, 'g', -1, 64)
		}
		w.columns[id] = append(w.columns[id], text)
	}
}

func (w *world) words(id string, scale study.Scale, levels []string, codes []float64) {
	w.scales[id], w.levels[id] = scale, levels
	for _, c := range codes {
		w.columns[id] = append(w.columns[id], levels[int(c)])
	}
}

// request makes a request about the one rival, "drawn".
func (w *world) request(t testing.TB) Request {
	t.Helper()
	s, err := study.Several{Name: "world", Edits: []study.Edit{
		study.RemoveRival{Name: study.New().Rivals[0].Name}, study.AddRival{Rival: study.Rival{Name: "drawn"}},
		study.TypeArrows{Rival: "drawn", Text: w.arrows},
	}}.Apply(study.New())
	if err != nil {
		t.Fatal(err)
	}
	var header []string
	for _, v := range s.Variables {
		to := *v
		if scale, ok := w.scales[v.ID]; ok {
			to.Scale, to.Levels, to.Column = scale, w.levels[v.ID], v.ID
			header = append(header, v.ID)
		}
		for _, u := range w.unmeasured {
			to.Unmeasured = to.Unmeasured || u == v.ID
		}
		if s, err = (study.ChangeVariable{ID: v.ID, To: to}).Apply(s); err != nil {
			t.Fatal(err)
		}
	}
	if w.plate != "" {
		header = append(header, w.plate)
		if s, err = (study.AddPlate{Plate: study.Plate{Name: w.plate}}).Apply(s); err != nil {
			t.Fatal(err)
		}
	}
	var text strings.Builder
	fmt.Fprintln(&text, strings.Join(header, ","))
	for i := range w.columns[header[0]] {
		for j, id := range header {
			if j > 0 {
				text.WriteByte(',')
			}
			text.WriteString(w.columns[id][i])
		}
		text.WriteByte('\n')
	}
	data, err := table.Read("world.csv", strings.NewReader(text.String()), table.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return Request{Study: s, Rival: "drawn", Table: data}
}

// draw gives a value of a scale whose place on it follows a standard normal
// number plus a shift.
func draw(rng *rand.Rand, scale study.Scale, shift float64) float64 {
	switch scale {
	case study.Positive:
		return math.Exp(shift + rng.NormFloat64())
	case study.Proportion:
		return 1 / (1 + math.Exp(-shift-rng.NormFloat64()))
	case study.Count: // skewed: a Poisson count with a gamma rate
		return poisson(rng, math.Exp(0.3+0.7*shift)*rng.ExpFloat64())
	case study.Binary:
		if shift+rng.NormFloat64() > 0.8 {
			return 1
		}
		return 0
	case study.Ordered:
		x := shift + rng.NormFloat64()
		switch {
		case x < -0.5:
			return 0
		case x < 0.4:
			return 1
		case x < 1.2:
			return 2
		}
		return 3
	case study.Category:
		best, at := math.Inf(-1), 0
		for k, tilt := range []float64{0, 1, -0.6} {
			if g := tilt*shift - math.Log(rng.ExpFloat64()); g > best {
				best, at = g, k
			}
		}
		return float64(at)
	}
	return shift + rng.NormFloat64()
}

func poisson(rng *rand.Rand, rate float64) float64 {
	n, limit, p := 0.0, math.Exp(-rate), rng.Float64()
	for p > limit {
		n++
		p *= rng.Float64()
	}
	return n
}

func (w *world) add(id string, scale study.Scale, values []float64) {
	switch scale {
	case study.Category:
		w.words(id, scale, []string{"clay", "loam", "sand"}, values)
	case study.Ordered:
		w.words(id, scale, []string{"none", "some", "much", "full"}, values)
	default:
		w.numbers(id, scale, values)
	}
}
