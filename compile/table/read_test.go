package table

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

func mustRead(t testing.TB, text string) *Table {
	t.Helper()
	table, err := Read("traps.csv", strings.NewReader(text), Options{})
	if err != nil {
		t.Fatalf("%q: %v", text, err)
	}
	return table
}

// picture prints a table so that one line shows all of it: missing entries as
// ·, strange ones behind !.
func picture(t *Table) string {
	var columns []string
	for _, c := range t.Columns {
		var entries []string
		for row := range t.Rows {
			switch {
			case c.Kind == Words && c.Codes[row] < 0, c.Kind == Numeric && math.IsNaN(c.Numbers[row]):
				entry := "·"
				for _, s := range c.Strange {
					if s.Row == row {
						entry = "!" + s.Text
					}
				}
				entries = append(entries, entry)
			case c.Kind == Words:
				entries = append(entries, fmt.Sprintf("%q", c.Levels[c.Codes[row]]))
			default:
				entries = append(entries, fmt.Sprint(c.Numbers[row]))
			}
		}
		name := c.Name
		if c.Percent {
			name += " %"
		}
		columns = append(columns, name+": "+strings.Join(entries, " "))
	}
	return strings.Join(columns, "; ")
}

func TestRead(t *testing.T) {
	for _, c := range []struct{ what, text, want string }{
		{"plain", "a,b\n1,2\n3,4\n", "a: 1 3; b: 2 4"},
		{"no line end at the end", "a,b\n1,2\n3,4", "a: 1 3; b: 2 4"},
		{"empty last field at the end", "a,b\n1,2\n3,", "a: 1 3; b: 2 ·"},
		{"byte-order mark and other line ends", "\ufeffa,b\r\n1,2\r\n", "a: 1; b: 2"},
		{"line ends of old", "a,b\r1,2\r3,4", "a: 1 3; b: 2 4"},
		{"tabs", "a\tb\n1\t2,5\n", "a: 1; b: 2.5"},
		{"semicolons and decimal commas", "a;b\n1,5;x\n−2;y\n", `a: 1.5 -2; b: "x" "y"`},
		{"semicolons and decimal points", "a;b\n1.5;2\n", "a: 1.5; b: 2"},
		{"bars", "a|b\n1|2\n", "a: 1; b: 2"},
		{"a separator the first line names", "sep=;\na;b\n1;2\n", "a: 1; b: 2"},
		{"commas for thousands are no decimal commas", "a\tb\n1,234\t1\n2,345\t2\n", `a: "1,234" "2,345"; b: 1 2`},
		{"a decimal comma in quotes", "a,b\n\"1,5\",2\n\"2,25\",3\n", "a: 1.5 2.25; b: 2 3"},
		{"quoted line ends, separators and quotes", "a,b\n\"x\ny\",1\n\"p, \"\"q\"\"\",2\n", `a: "x\ny" "p, \"q\""; b: 1 2`},
		{"quotes in the middle are characters", "a,b\n6\" pot,1\n", `a: "6\" pot"; b: 1`},
		{"spaces around", " a , b \n 1 , \"x\" \n", `a: 1; b: "x"`},
		{"missing entries", "a,b\n1,x\nNA,n/a\n,\nNaN,missing\n.,null\n-,?\n2,y\n", `a: 1 · · · · · 2; b: "x" · · · · · "y"`},
		{"a test's outcome", "a,b\n1,+\n2,-\n3,NA\n", `a: 1 2 3; b: "+" "-" ·`},
		{"mostly numbers", "a,b\n1,1\n2,1\nsix,1\n4,1\n5,1\n", "a: 1 2 !six 4 5; b: 1 1 1 1 1"},
		{"mostly words", "a,b\n1,1\n2b,1\n3c,1\n", `a: "1" "2b" "3c"; b: 1 1 1`},
		{"numbers in every form", "a,b\n+1.50e2,1\n.5,1\n5.,1\n-0.25E-1,1\n12345678901234567890,1\n", "a: 150 0.5 5 -0.025 1.2345678901234567e+19; b: 1 1 1 1 1"},
		{"what only looks like numbers", "a,b\n0x10,1\nInf,1\n1_000,1\n1e999,1\n", `a: "0x10" "Inf" "1_000" "1e999"; b: 1 1 1 1`},
		{"codes with leading zeros", "a,b\n007,1\n012,2\n", `a: "007" "012"; b: 1 2`},
		{"percent signs", "a,b\n10%,1\n20 %,1\n30,1\n40%,1\n", "a %: 10 20 !30 40; b: 1 1 1 1"},
		{"a stray percent sign", "a,b\n10,1\n20%,1\n30,1\n40,1\n", "a: 10 !20% 30 40; b: 1 1 1 1"},
		{"percent signs by chance", "a,b\n10%,1\n20,1\n30%,1\n", `a: "10%" "20" "30%"; b: 1 1 1`},
		{"empty lines", "a,b\n\n1,2\n\n", "a: 1; b: 2"},
		{"one column with an empty entry inside", "a\n1\n\n3\n\n", "a: 1 · 3"},
		{"one column with decimal commas", "a\n1,5\n2,25\n", "a: 1.5 2.25"},
		{"one column with commas in prose", "who\nTarn, Ida\nOtt, Per\n", `who: "Tarn, Ida" "Ott, Per"`},
		{"no rows", "a,b\n", "a: ; b: "},
		{"names twice", "a,a,b\n1,2,3\n", "a: 1; a (2): 2; b: 3"},
		{"no name", ",b\n1,2\n", "column 1: 1; b: 2"},
		{"neither name nor entries", "a,b,\n1,2,\n3,4,\n", "a: 1 3; b: 2 4"},
		{"names that are numbers", "2001,2002\n1,2\n", "2001: 1; 2002: 2"},
		{"Windows-1252", "a,b\ncaf\xe9,1\n\x80 5,2\n", `a: "café" "€ 5"; b: 1 2`},
		{"UTF-8 with damage", "a,b\né,\xe9\nü,x\n", `a: "é" "ü"; b: "�" "x"`},
		{"UTF-16", "\xff\xfea\x00,\x00b\x00\n\x001\x00,\x00\xe9\x00\n\x00", `a: 1; b: "é"`},
	} {
		if got := picture(mustRead(t, c.text)); got != c.want {
			t.Errorf("%s: %q\ngives %s\nwant  %s", c.what, c.text, got, c.want)
		}
	}
}

func TestReadCountsWhatIsMissing(t *testing.T) {
	table := mustRead(t, "a,b\n1,x\nNA,\n3,y\n")
	if a, b := table.Column("a").Missing, table.Column("b").Missing; a != 1 || b != 1 || table.Rows != 3 {
		t.Errorf("missing %d and %d of %d rows", a, b, table.Rows)
	}
}

func TestReadSays(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", "traps.csv: there is nothing in it"},
		{",\n,", "traps.csv: there is nothing in it"},
		{"\n \n", "traps.csv: there is nothing in it"},
		{"a,b,c\n1,2,3\n\n1,2\n", "traps.csv, line 4: the line has 2 entries, the heading 3; “c” is the first without one"},
		{"a,b\n1,2\n1,2,extra\n", "traps.csv, line 3: the line has 3 entries, the heading 2; the first too many is “extra”"},
		{"a,b\n\"x\ny\",2\n1\n", "traps.csv, line 4: the line has one entry"},
		{"a,b\n1,\"open\n2,3\n", "traps.csv, line 2: a quoted entry begins here and never ends"},
		{"a,b\n1,\"x\"y\n", "traps.csv, line 2: text follows a closing quote"},
		{"a,b\n1,2\x00\n", "traps.csv, line 2: there is a zero byte"},
	} {
		_, err := Read("traps.csv", strings.NewReader(c.text), Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q gives %v\nwant %s", c.text, err, c.want)
		}
	}
	if _, err := ReadFile(filepath.Join(t.TempDir(), "gone.csv")); err == nil || err.Error() != "gone.csv: it could not be opened: there is no such file" {
		t.Errorf("got %v", err)
	}
}

func TestReadWithOptions(t *testing.T) {
	table, err := Read("x", strings.NewReader("a;b\n-99;1,5\n3;2.5\n4;1\n"), Options{Separator: ';', Decimal: '.', Missing: []string{"-99"}})
	if err != nil {
		t.Fatal(err)
	}
	if got := picture(table); got != `a: · 3 4; b: "1,5" "2.5" "1"` {
		t.Error(got)
	}
}

// The sum is that of the two letters and the line end, by sha256sum.
func TestSum(t *testing.T) {
	path := filepath.Join(t.TempDir(), "x.csv")
	if err := os.WriteFile(path, []byte("ab\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	table, err := ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if want := "a63d8014dba891345b30174df2b2a57efbb65b4f9f09b98f245d1b3192277ece"; table.SHA256 != want || table.Name != "x.csv" {
		t.Errorf("%s: %s", table.Name, table.SHA256)
	}
}

func TestAsWords(t *testing.T) {
	c := mustRead(t, "a,b\n10,1\n2.5,1\nsix,1\nNA,1\n10,1\n1,1\n").Column("a")
	if c.Kind != Numeric {
		t.Fatal("not numeric")
	}
	w := c.AsWords()
	if !slices.Equal(w.Levels, []string{"10", "2.5", "six", "1"}) || !slices.Equal(w.Codes, []int32{0, 1, 2, -1, 0, 3}) || w.Missing != 1 {
		t.Errorf("%q %v", w.Levels, w.Codes)
	}
}

// long makes a table with numbers, words and gaps.
func long(rows int) []byte {
	var b bytes.Buffer
	b.WriteString("site,day,temp,count,share,note\n")
	for i := range rows {
		fmt.Fprintf(&b, "site %d,%d,%.2f,%d,%.4f,", i%250, i%365, float64(i%4000)/100-5, i%97, float64(i%9999)/9999)
		if i%10 == 0 {
			b.WriteString("NA\n")
		} else {
			b.WriteString("\"seen, twice\"\n")
		}
	}
	return b.Bytes()
}

// A hundred thousand rows, a million with ARROWROOT_LONG=1; the benchmark says
// how long they take.
func TestManyRows(t *testing.T) {
	rows := 100_000
	if os.Getenv("ARROWROOT_LONG") == "1" {
		rows = 1_000_000
	}
	text := long(rows)
	table, err := Read("big.csv", bytes.NewReader(text), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if table.Rows != rows || len(table.Column("site").Levels) != 250 || table.Column("note").Missing != rows/10 {
		t.Error("the table is not what was written")
	}
}

func BenchmarkMillionRows(b *testing.B) {
	text := long(1_000_000)
	b.SetBytes(int64(len(text)))
	for b.Loop() {
		if _, err := Read("big.csv", bytes.NewReader(text), Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
