package causal

import (
	"bytes"
	"encoding/json"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"strconv"
	"testing"
	"time"

	"arrowroot/compile/graph"
)

// TestBesideNetworkx asks networkx (a general graph library for Python) the same
// questions of d-separation as this package, on the same random graphs in one
// run, compares the answers and prints how much longer it takes. Both build
// their graphs before the clock starts. The goal is 100 times.
func TestBesideNetworkx(t *testing.T) {
	if os.Getenv("ARROWROOT_REFERENCE") == "" {
		t.Skip("make bench-reference runs this")
	}
	type asked struct {
		Nodes     int      `json:"nodes"`
		Arrows    [][2]int `json:"arrows"`
		Questions [][3]any `json:"questions"`
	}
	const passes = 5 // of each the fastest counts: other programs may be busy
	r := rand.New(rand.NewPCG(3, 2026))
	for _, size := range []struct{ nodes, arrows, graphs, questions int }{
		{10, 15, 40, 50}, {28, 99, 20, 50}, {100, 300, 10, 40}, {1000, 3000, 4, 15}, {10_000, 40_000, 1, 6},
	} {
		var cases []asked
		var graphs []*graph.Graph
		for i := range size.graphs {
			g := scattered(t, size.nodes, size.arrows, uint64(100+i), nil)
			c := asked{Nodes: size.nodes, Arrows: g.Arrows}
			for range size.questions {
				at := r.Perm(size.nodes)
				c.Questions = append(c.Questions, [3]any{at[0], at[1], at[2 : 2+min(size.nodes/5, 20)]})
			}
			cases, graphs = append(cases, c), append(graphs, g)
		}
		var ours []bool
		seconds := math.Inf(1)
		for range passes {
			ours = ours[:0]
			start := time.Now()
			for i, g := range graphs {
				for _, q := range cases[i].Questions {
					ours = append(ours, Separated(g, []int{q[0].(int)}, []int{q[1].(int)}, q[2].([]int)))
				}
			}
			seconds = min(seconds, time.Since(start).Seconds())
		}

		in, err := json.Marshal(cases)
		if err != nil {
			t.Fatal(err)
		}
		run := exec.Command("python3", "testdata/separation.py", strconv.Itoa(passes))
		run.Stdin, run.Stderr = bytes.NewReader(in), os.Stderr
		out, err := run.Output()
		if err != nil {
			t.Fatalf("networkx did not answer: %v", err)
		}
		var theirs struct {
			Version string
			Answers []bool
			Seconds float64
		}
		if err := json.Unmarshal(out, &theirs); err != nil {
			t.Fatal(err)
		}
		apart := 0
		for i := range ours {
			if ours[i] != theirs.Answers[i] {
				t.Fatalf("%d nodes, question %d: separated %v, networkx says %v", size.nodes, i, ours[i], theirs.Answers[i])
			}
			if ours[i] {
				apart++
			}
		}
		n := float64(len(ours))
		t.Logf("%d nodes, %d arrows, %d questions, %d separated: ours %.4f ms, networkx %s %.2f ms, %.0f times as long",
			size.nodes, size.arrows, len(ours), apart, 1e3*seconds/n, theirs.Version, 1e3*theirs.Seconds/n, theirs.Seconds/seconds)
	}
}
