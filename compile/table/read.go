package table

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
)

// Options say how text is to be read. The zero value finds everything out.
type Options struct {
	Separator byte     // between fields; 0 = found: tab, semicolon, comma or |
	Decimal   byte     // '.' or ','; 0 = found, column by column
	Missing   []string // spellings of a missing entry, capitals ignored; nil = the usual ones
}

// An Error says where a data file is at fault and why. Line counts from 1; 0
// means the file as a whole.
type Error struct {
	Name   string
	Line   int
	Reason string
}

func (e *Error) Error() string {
	if e.Line == 0 {
		return e.Name + ": " + e.Reason
	}
	return fmt.Sprintf("%s, line %d: %s", e.Name, e.Line, e.Reason)
}

const (
	nothing  = "there is nothing in it"
	tooLarge = "it is larger than 2 GB"
)

// largest is the number of bytes up to which a file is read: places of fields
// are held in 31 bits.
const largest = 1<<31 - 1

// ReadFile reads a data file with the zero Options. Its table is named by the
// file without its folder. The error is an *Error.
func ReadFile(path string) (*Table, error) {
	name := filepath.Base(path)
	f, err := os.Open(path)
	if err != nil {
		return nil, &Error{Name: name, Reason: "it could not be opened: " + plain(err)}
	}
	defer f.Close()
	return Read(name, f, Options{})
}

// plain is a system's error without the path.
func plain(err error) string {
	var path *fs.PathError
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return "there is no such file"
	case errors.Is(err, fs.ErrPermission):
		return "permission is denied"
	case errors.As(err, &path):
		return path.Err.Error()
	}
	return err.Error()
}

// Read reads separated values with the names of the columns in the first line:
// RFC 4180 with any of four separators, quoted line ends, either kind of
// decimal mark, UTF-8 with or without byte-order mark, UTF-16 with one, and
// failing those Windows-1252. The error is an *Error.
func Read(name string, r io.Reader, opt Options) (*Table, error) {
	data, err := io.ReadAll(io.LimitReader(r, largest+1))
	if err != nil {
		return nil, &Error{Name: name, Reason: "it could not be read: " + plain(err)}
	}
	t := &Table{Name: name}
	if fault := t.read(data, opt); fault != nil {
		fault.Name = name
		return nil, fault
	}
	return t, nil
}

func (t *Table) read(data []byte, opt Options) *Error {
	if len(data) > largest {
		return &Error{Reason: tooLarge}
	}
	sum := sha256.Sum256(data)
	t.SHA256 = hex.EncodeToString(sum[:])
	text, note, fault := decode(data)
	if fault != nil {
		return fault
	}
	if len(text) > largest {
		return &Error{Reason: tooLarge}
	}
	if note != "" {
		t.note("%s", note)
	}
	text, separator := separatorOf(text, opt.Separator)
	names, fields, fault := readFields(text, separator)
	if fault != nil {
		return fault
	}
	if len(fields) > 0 {
		t.Rows = len(fields[0])
	}
	t.columns(names, fields, reader{
		text:      text,
		separator: separator,
		decimal:   opt.Decimal,
		missing:   newSpellings(opt.Missing),
	})
	if len(t.Columns) == 0 {
		return &Error{Reason: nothing}
	}
	return nil
}

func (t *Table) note(format string, args ...any) {
	t.Notes = append(t.Notes, fmt.Sprintf(format, args...))
}

// columns reads the columns side by side, each by itself.
func (t *Table) columns(names []string, fields [][]span, r reader) {
	all := make([]*Column, len(fields))
	var wait sync.WaitGroup
	work := make(chan int)
	for range min(runtime.GOMAXPROCS(0), len(fields)) {
		wait.Go(func() {
			for i := range work {
				all[i] = r.column(fields[i])
			}
		})
	}
	for i := range fields {
		work <- i
	}
	close(work)
	wait.Wait()
	t.name(names, all)
}

// name gives the columns their names, each once, and leaves out a column that
// has neither name nor entries: spreadsheets write those.
func (t *Table) name(names []string, columns []*Column) {
	taken := make(map[string]bool, len(names))
	for _, n := range names {
		taken[n] = true
	}
	used := make(map[string]bool, len(names))
	for i, c := range columns {
		c.Name = names[i]
		switch {
		case c.Name == "" && c.Missing == t.Rows && len(columns) > 1:
			continue
		case c.Name == "":
			c.Name = free(fmt.Sprintf("column %d", i+1), taken)
			t.note("column %d has no name; it is now called “%s”", i+1, c.Name)
		case used[c.Name]:
			c.Name = free(c.Name, taken)
			t.note("more than one column is named “%s”; column %d is now called “%s”", names[i], i+1, c.Name)
		}
		taken[c.Name], used[c.Name] = true, true
		t.Columns = append(t.Columns, c)
	}
}

func free(name string, taken map[string]bool) string {
	next := name
	for n := 2; taken[next]; n++ {
		next = fmt.Sprintf("%s (%d)", name, n)
	}
	return next
}

// cleanName makes one line of a heading.
func cleanName(text string) string {
	return strings.Clone(strings.Join(strings.Fields(text), " ")) // lets go of the file's text
}
