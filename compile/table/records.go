package table

import (
	"fmt"
	"strings"
)

// A span is a field's place in the text, quotes left out. The highest bit of
// end says that quotes inside are doubled.
type span struct {
	start, end uint32
}

const doubled = 1 << 31

func (s span) in(text string) string {
	field := text[s.start : s.end&^doubled]
	if s.end&doubled != 0 {
		field = strings.ReplaceAll(field, `""`, `"`)
	}
	return strings.TrimSpace(field)
}

// scan cuts text into records of fields (RFC 4180; a quote inside an unquoted
// field is a character like others; lines end in \n, \r\n or \r) and calls
// visit with each and the line it begins in. The fields are valid during the
// call; scanning ends where visit gives false. Lines that are empty or hold
// white space alone are records of a single empty field.
func scan(text string, separator byte, visit func(line int, fields []span) bool) *Error {
	var fields []span
	line, begun := 1, 1
	for at := 0; at < len(text); {
		f, next, lines, fault := field(text, at, separator)
		if fault != "" {
			return &Error{Line: line + lines, Reason: fault}
		}
		fields = append(fields, f)
		at = next
		line += lines
		if at < len(text) && text[at] == separator {
			at++
			if at < len(text) {
				continue
			}
			fields = append(fields, span{uint32(at), uint32(at)})
		}
		if strings.HasPrefix(text[at:], "\r\n") {
			at++
		}
		at++ // the line's end, or past the text's
		line++
		if !visit(begun, fields) {
			return nil
		}
		fields, begun = fields[:0], line
	}
	return nil
}

// field reads the field that begins at a place; next is the place of the
// separator or line end after it, lines the line ends inside it.
func field(text string, at int, separator byte) (f span, next, lines int, fault string) {
	open := at
	for open < len(text) && text[open] == ' ' {
		open++
	}
	if open == len(text) || text[open] != '"' {
		end := at
		for end < len(text) && text[end] != separator && text[end] != '\n' && text[end] != '\r' {
			end++
		}
		return span{uint32(at), uint32(end)}, end, 0, ""
	}
	f.start = uint32(open + 1)
	for end := open + 1; ; end++ {
		quote := strings.IndexByte(text[end:], '"')
		if quote < 0 {
			return f, 0, 0, "a quoted entry begins here and never ends"
		}
		lines += lineEnds(text[end : end+quote])
		end += quote
		if end+1 < len(text) && text[end+1] == '"' {
			f.end = doubled
			end++
			continue
		}
		f.end |= uint32(end)
		next = end + 1
		break
	}
	for next < len(text) && text[next] == ' ' {
		next++
	}
	if next < len(text) && text[next] != separator && text[next] != '\n' && text[next] != '\r' {
		return f, 0, lines, "text follows a closing quote; a quote inside a quoted entry is written twice"
	}
	return f, next, lines, ""
}

func lineEnds(text string) int {
	n := strings.Count(text, "\n")
	if strings.IndexByte(text, '\r') >= 0 {
		n += strings.Count(text, "\r") - strings.Count(text, "\r\n")
	}
	return n
}

// separators in the order of preference between equals.
var separators = [...]byte{'\t', ';', ',', '|'}

// separatorOf finds the separator, if it is not given, as the one that cuts
// the first records most evenly into most fields. A first line "sep=;", which
// spreadsheets write, is obeyed and left out.
func separatorOf(text string, given byte) (rest string, separator byte) {
	if strings.HasPrefix(text, "sep=") && len(text) > 5 && (text[5] == '\n' || text[5] == '\r') {
		if given == 0 {
			given = text[4]
		}
		text = strings.TrimPrefix(strings.TrimPrefix(text[5:], "\r"), "\n")
	}
	if given != 0 {
		return text, given
	}
	sample := text
	if len(sample) > 1<<16 {
		sample = sample[:1<<16]
	}
	best, evenest, most := byte(0), 0.0, 1
	for _, c := range separators {
		even, fields := evenness(sample, c)
		if fields > 1 && (even > evenest || even == evenest && fields > most) {
			best, evenest, most = c, even, fields
		}
	}
	if best != 0 {
		return text, best
	}
	// The first line has one name: commas further down are decimal or prose.
	for _, c := range [...]byte{',', ';', '|', '\t'} {
		if strings.IndexByte(sample, c) < 0 {
			return text, c
		}
	}
	return text, ','
}

// evenness is the share of the first 200 records that have as many fields as
// the first, and that number.
func evenness(sample string, separator byte) (share float64, fields int) {
	records, same := 0, 0
	last := false // of the last record
	scan(sample, separator, func(_ int, f []span) bool {
		if len(f) == 1 && f[0].in(sample) == "" {
			return true
		}
		if fields == 0 {
			fields = len(f)
		}
		records++
		if last = len(f) == fields; last {
			same++
		}
		return records < 200
	})
	if records > 1 && !last && len(sample) == 1<<16 { // it may have been cut
		records--
	}
	return float64(same) / float64(max(records, 1)), fields
}

// readFields gives the names of the columns and the fields of each column.
// Empty lines are skipped, but inside a table of one column they are entries.
func readFields(text string, separator byte) (names []string, columns [][]span, fault *Error) {
	var wrong *Error
	empty := 0 // lines of a single column waiting for a line that is not
	fault = scan(text, separator, func(line int, fields []span) bool {
		if len(fields) == 1 && fields[0].in(text) == "" {
			empty++
			return true
		}
		if names == nil {
			for _, f := range fields {
				names = append(names, cleanName(f.in(text)))
			}
			columns = make([][]span, len(names))
			guess := strings.Count(text[:min(len(text), 1<<16)], "\n") // rows in the first 64 KB
			guess = int(int64(guess) * int64(len(text)) / int64(max(min(len(text), 1<<16), 1)))
			for i := range columns {
				columns[i] = make([]span, 0, guess+guess/16)
			}
			empty = 0
			return true
		}
		if len(fields) != len(names) {
			wrong = &Error{Line: line, Reason: ragged(fields, names, text)}
			return false
		}
		if len(names) == 1 {
			for ; empty > 0; empty-- {
				columns[0] = append(columns[0], span{})
			}
		}
		empty = 0
		for i, f := range fields {
			columns[i] = append(columns[i], f)
		}
		return true
	})
	if fault == nil {
		fault = wrong
	}
	if fault == nil && names == nil {
		fault = &Error{Reason: nothing}
	}
	return names, columns, fault
}

func ragged(fields []span, names []string, text string) string {
	what := fmt.Sprintf("the line has %d entries", len(fields))
	if len(fields) == 1 {
		what = "the line has one entry"
	}
	if len(fields) > len(names) {
		return fmt.Sprintf("%s, the heading %d; the first too many is “%s”", what, len(names), short(fields[len(names)].in(text)))
	}
	return fmt.Sprintf("%s, the heading %d; “%s” is the first without one", what, len(names), short(names[len(fields)]))
}

func short(text string) string {
	if r := []rune(text); len(r) > 30 {
		return string(r[:30]) + "…"
	}
	return text
}
