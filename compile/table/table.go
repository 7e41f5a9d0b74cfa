// Package table holds data as typed columns. A Table never changes once read.
//
// Read the files in this order: table.go (the types), read.go (bytes to table),
// decode.go (bytes to text), records.go (text to fields), column.go (fields to
// numbers or words), missing.go, propose.go (what a column might measure) and
// quantile.go.
package table

// A Table is a rectangle of observations.
type Table struct {
	Name    string
	Rows    int
	Columns []*Column
	SHA256  string   // of the bytes it was read from, hexadecimal
	Notes   []string // what reading took upon itself, a sentence each: "two columns were named bees; the second is now “bees (2)”"
}

// Kind is how a column is stored.
type Kind int

// The kinds of column.
const (
	Numeric Kind = iota // Numbers is set
	Words               // Codes and Levels are set
)

// A Column is one named column. Missing entries are NaN in Numbers and -1 in
// Codes. Every numeric column can also be read as words, and keeps the words
// that were not numbers in Strange.
type Column struct {
	Name    string
	Kind    Kind
	Numbers []float64 // Numeric
	Codes   []int32   // Words: place in Levels
	Levels  []string  // Words: in order of first appearance
	Missing int
	Percent bool      // Numeric: the entries carried a percent sign, which is left out
	Strange []Strange // entries of a mostly numeric column that are not numbers; NaN in Numbers
}

// A Strange entry is text where a number was expected.
type Strange struct {
	Row  int // counted from 0, header excluded
	Text string
}

// Column finds a column by name; nil if there is none.
func (t *Table) Column(name string) *Column {
	if t == nil {
		return nil
	}
	for _, c := range t.Columns {
		if c.Name == name {
			return c
		}
	}
	return nil
}
