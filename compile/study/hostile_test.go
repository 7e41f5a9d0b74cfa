package study

import (
	"fmt"
	"strings"
	"testing"
)

// Files that are large where nobody expects it are read or refused, in few
// words. What is worse than linear in them would outlast the test's deadline.
func TestHostileFiles(t *testing.T) {
	many := func(n int, item string) string {
		items := make([]string, n)
		for i := range items {
			items[i] = strings.ReplaceAll(item, "#", fmt.Sprint(i))
		}
		return strings.Join(items, ",\n")
	}
	const n = 20_000
	for what, text := range map[string]string{
		"keys":   `{"arrowroot": 1, ` + many(n, `"k#": 0`) + `}`,
		"levels": `{"arrowroot": 1, "variables": [{"id": "a", "levels": [` + many(n, `"#"`) + `]}]}`,
		"plates": `{"arrowroot": 1, "plates": [{"name": "p"}, ` + many(n, `{"name": "p#", "within": "p"}`) + `]}`,
		"arrows": `{"arrowroot": 1, "variables": [{"id": "v"}, ` + many(n, `{"id": "v#"}`) + `], "rivals": [{"arrows": [` + many(n, `{"from": "v", "to": "v#"}`) + `], "arcs": [` + many(n, `{"between": ["v", "v#"]}`) + `]}]}`,
		"depth":  strings.Repeat(`{"a":`, 1_000_000),
		"number": `{"arrowroot": ` + strings.Repeat("1", 1_000_000) + `}`,
		"text":   `{"arrowroot": 1, "title": "` + strings.Repeat(`\u0000`, 200_000) + `"}`,
	} {
		s, err := Read("x", []byte(text))
		if err == nil {
			Write(s)
		}
		if err != nil && len(err.Error()) > 2000 {
			t.Errorf("%s: an error of %d bytes", what, len(err.Error()))
		}
	}
}
