package study

import (
	"fmt"
	"strings"
	"testing"
)

// show prints what arrows as text say in one line.
func (t *Typed) show() string {
	var parts []string
	for _, a := range t.Arrows {
		parts = append(parts, a[0]+"→"+a[1])
	}
	for _, a := range t.Arcs {
		parts = append(parts, a[0]+"↔"+a[1])
	}
	return fmt.Sprintf("%s: %s", strings.Join(t.Variables, " "), strings.Join(parts, " "))
}

func TestParseArrows(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"hedge -> flowers -> bees", "hedge flowers bees: hedge→flowers flowers→bees"},
		{"hedge→flowers\n\n# why not\nsoil → flowers # a reason", "hedge flowers soil: hedge→flowers soil→flowers"},
		{"a, b -> c, d", "a b c d: a→c a→d b→c b→d"},
		{"a -> b <- c", "a b c: a→b c→b"},
		{"a ↔ b ↔ c", "a b c: a↔b b↔c"},
		{"? -> hedge, pesticide", "hedge pesticide: hedge↔pesticide"},
		{"a, b, c <- ?", "a b c: a↔b a↔c b↔c"},
		{"a", "a: "},
		{"a -> b\na -> b\n? -> b, a\na ↔ b", "a b: a→b b↔a"},
		{"α -> β_x", "alpha beta_x: alpha→beta_x"},
		{"", ": "},
	} {
		typed, err := ParseArrows(c.text)
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
		} else if got := typed.show(); got != c.want {
			t.Errorf("%q is %s, want %s", c.text, got, c.want)
		}
	}
	for _, c := range []struct{ text, want string }{
		{"a ->", "a name is missing beside an arrow or a comma"},
		{"a -> b\na -> , b", "line 2: a name is missing"},
		{"a b -> c", "“a b” cannot name a variable: a name is a letter"},
		{"log -> c", "“log” cannot name a variable: it has a meaning in formulas"},
		{"? -> a", "an unnamed common cause points at two variables or more"},
		{"?", "an unnamed common cause points at two variables or more"},
		{"a -> ?", "nothing can point at an unnamed common cause"},
		{"?, a -> b, c", "an unnamed common cause stands alone before its arrow"},
	} {
		if typed, err := ParseArrows(c.text); err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("%q: %v, %v; want %s", c.text, typed, err, c.want)
		}
	}
}

func TestTypeArrows(t *testing.T) {
	s := apply(t, New(), TypeArrows{"Rival 1", "hedge -> flowers -> bees\n? -> hedge, bees"})
	if got := string(Write(s)); !strings.Contains(got, `{"from": "flowers", "to": "bees"}`) || len(s.Variables) != 3 || len(s.Rivals[0].Diagram.Arcs) != 1 {
		t.Error(got)
	}
	if _, err := (TypeArrows{"Rival 1", "bees -> hedge"}).Apply(s); err == nil || !strings.Contains(err.Error(), "would close a cycle") {
		t.Error(err)
	}
}

// BenchmarkMove is a step of a drag on a sheet of 100 nodes and 300 arrows.
func BenchmarkMove(b *testing.B) {
	s := apply(b, New(), chain(100))
	b.ReportAllocs()
	x := 0.0
	for b.Loop() {
		x++
		next, err := MoveNodes{Rival: "Rival 1", To: map[string]Point{"v50": {x, 0}}}.Apply(s)
		if err != nil {
			b.Fatal(err)
		}
		s = next
	}
}

// chain draws n nodes, each with arrows to the next three.
func chain(n int) Edit {
	var lines []string
	for i := range n - 3 {
		lines = append(lines, fmt.Sprintf("v%d -> v%d, v%d, v%d", i, i+1, i+2, i+3))
	}
	return TypeArrows{"Rival 1", strings.Join(lines, "\n")}
}
