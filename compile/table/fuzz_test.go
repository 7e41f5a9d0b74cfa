package table

import (
	"encoding/csv"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
	"unicode/utf8"
)

// FuzzRead checks three things: nothing panics and tables hang together; text
// that encoding/csv of the Go distribution takes for comma-separated values is
// cut into the same fields here; and a table written out and read again is the
// same table.
func FuzzRead(f *testing.F) {
	for _, s := range []string{
		"a,b\n1,2\n3,x\n", "\ufeffa;b\r\n1,5;\"x;\ny\"\r\n", "a\tb\n1,234\t−2%\n", "a,a,\n,NA,-\n+,.,1e5\n",
		"sep=|\na|b\n\"p \"\"q\"\"\"|2\n", "\xff\xfea\x00\n\x001\x00", "a\n\n1\n", "\"a", "a,b\n1\n", "a,b\n+,1\n-,2\n",
		"x\n10%\n20%\n30\n40%\n", "caf\xe9\n1\n", "a,b\n12345678901234567890,0x1\n1e999,Inf\n",
	} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		table, err := Read("t", strings.NewReader(text), Options{})
		if err != nil {
			if _, ok := err.(*Error); !ok {
				t.Fatalf("%q gives an error of another kind: %v", text, err)
			}
		} else {
			checkTable(t, table)
			again, err := Read("t", strings.NewReader(write(table)), Options{Separator: ',', Decimal: '.'})
			if err != nil {
				t.Fatalf("%q was written as %q, which fails: %v", text, write(table), err)
			}
			if was, is := picture(table), picture(again); was != is {
				t.Fatalf("%q\nwas written as %q\nread as %s\nbefore  %s", text, write(table), is, was)
			}
		}
		compareFields(t, text)
	})
}

func checkTable(t *testing.T, table *Table) {
	names := make(map[string]bool)
	for _, c := range table.Columns {
		if names[c.Name] {
			t.Fatalf("two columns are named %q", c.Name)
		}
		names[c.Name] = true
		gaps, n := 0, 0
		if c.Kind == Words {
			n = len(c.Codes)
			for _, code := range c.Codes {
				if code < 0 {
					gaps++
				} else if int(code) >= len(c.Levels) {
					t.Fatalf("code %d of %d levels", code, len(c.Levels))
				}
			}
		} else {
			n = len(c.Numbers)
			for _, v := range c.Numbers {
				if math.IsNaN(v) {
					gaps++
				}
			}
			gaps -= len(c.Strange)
		}
		if n != table.Rows || gaps != c.Missing {
			t.Fatalf("%q has %d of %d rows, %d missing, %d counted", c.Name, n, table.Rows, gaps, c.Missing)
		}
		Propose(c)
		Quantiles(c.Numbers, 20)
		if w := c.AsWords(); w.Missing != c.Missing || len(w.Codes) != table.Rows {
			t.Fatalf("%q as words has %d missing, not %d", c.Name, w.Missing, c.Missing)
		}
	}
}

// write gives the table as comma-separated values with everything in quotes.
func write(table *Table) string {
	var b strings.Builder
	for i, c := range table.Columns {
		if i > 0 {
			b.WriteByte(',')
		}
		b.WriteString(`"` + strings.ReplaceAll(c.Name, `"`, `""`) + `"`)
	}
	for row := range table.Rows {
		b.WriteByte('\n')
		for i, c := range table.Columns {
			text := "NA"
			if c.Kind == Words {
				if c.Codes[row] >= 0 {
					text = c.Levels[c.Codes[row]]
				}
			} else if v := c.Numbers[row]; !math.IsNaN(v) {
				text = fmt.Sprint(v)
				if c.Percent {
					text += "%"
				}
			} else if at := slices.IndexFunc(c.Strange, func(s Strange) bool { return s.Row == row }); at >= 0 {
				text = c.Strange[at].Text
			}
			if i > 0 {
				b.WriteByte(',')
			}
			b.WriteString(`"` + strings.ReplaceAll(text, `"`, `""`) + `"`)
		}
	}
	return b.String()
}

func compareFields(t *testing.T, text string) {
	if !utf8.ValidString(text) || strings.Contains(text, "\r") {
		return // encoding/csv has other rules for \r
	}
	r := csv.NewReader(strings.NewReader(text))
	r.FieldsPerRecord = -1
	want, err := r.ReadAll()
	if err != nil {
		return
	}
	var got [][]string
	fault := scan(text, ',', func(_ int, fields []span) bool {
		record := make([]string, len(fields))
		for i, f := range fields {
			record[i] = f.in(text)
		}
		got = append(got, record)
		return true
	})
	if fault != nil {
		t.Fatalf("%q is well-formed, but: %v", text, fault)
	}
	blank := func(record []string) bool { return len(record) == 1 && strings.TrimSpace(record[0]) == "" }
	got, want = slices.DeleteFunc(got, blank), slices.DeleteFunc(want, blank)
	for _, record := range want {
		for i := range record {
			record[i] = strings.TrimSpace(record[i])
		}
	}
	if !slices.EqualFunc(got, want, slices.Equal) {
		t.Fatalf("%q is cut into %q, want %q", text, got, want)
	}
}
