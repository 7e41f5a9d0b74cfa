package ui

import (
	"fmt"
	"strings"
	"testing"

	"arrowroot/compile/study"
)

// BenchmarkHand times what a hand feels on a sheet of 28 variables and 99
// arrows: a node moved and a variable held, until every panel shows it. The
// aim is 100 ms; the session gives reading and model 40 ms each before it
// shows without them.
func BenchmarkHand(b *testing.B) {
	w := newBench(b)
	var lines []string
	n := 0
	for i := range 28 {
		for j := i + 1; j < 28 && j <= i+4 && n < 99; j++ {
			lines = append(lines, fmt.Sprintf("v%d -> v%d", i, j))
			n++
		}
	}
	w.do(study.TypeArrows{Rival: w.rival(), Text: strings.Join(lines, "\n")})
	w.setExposure("v3")
	w.setOutcome("v27")
	w.wait("the reading", func() bool { return w.view.Reading != nil })
	w.choose(pickNode("v9"))
	b.Run("move a node", func(b *testing.B) {
		for i := 0; b.Loop(); i++ {
			w.do(study.MoveNodes{Rival: w.rival(), To: map[string]study.Point{"v9": {X: float64(10 * i), Y: 3}}})
			w.queue.drain()
		}
	})
	b.Run("hold a variable", func(b *testing.B) {
		for i := 0; b.Loop(); i++ {
			w.hold("v9", i%2 == 0)
			w.queue.drain()
		}
	})
}
