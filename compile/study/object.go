package study

import (
	"slices"
	"strconv"
	"strings"
)

// An object is a JSON object while it is read. Every key that is asked for
// counts as known; finish reports those that nobody asked for.
type object struct {
	what  string // "a variable", for messages
	value *value
	known []string
}

func newObject(v *value, what string) *object {
	if v.kind != objectValue {
		failAt(v.line, "%s should stand here, in braces {}, not %s", what, v.show())
	}
	return &object{what: what, value: v}
}

// show gives a short picture of a value, for messages.
func (v *value) show() string {
	switch v.kind {
	case nullValue:
		return "null"
	case textValue:
		return quote(v.text)
	case listValue:
		return "a list"
	case objectValue:
		return "an object"
	}
	return v.text
}

// get gives the value of a key; nil if it is absent or null.
func (o *object) get(key string) *value {
	if !slices.Contains(o.known, key) {
		o.known = append(o.known, key)
	}
	for _, m := range o.value.members {
		if m.key == key && m.value.kind != nullValue {
			return m.value
		}
	}
	return nil
}

// need is get for a key that must be there.
func (o *object) need(key string) *value {
	v := o.get(key)
	if v == nil {
		failAt(o.value.line, "%s has no %s", o.what, quote(key))
	}
	return v
}

// finish refuses keys that are not known.
func (o *object) finish() {
	for _, m := range o.value.members {
		if !slices.Contains(o.known, m.key) {
			hint := ""
			if near := nearest(m.key, o.known); near != "" {
				hint = "; perhaps " + quote(near) + " is meant"
			}
			failAt(m.line, "%s is not a key of %s (%s)%s", quote(m.key), o.what, strings.Join(o.known, ", "), hint)
		}
	}
}

func wrong(key string, v *value, should string) {
	failAt(v.line, "%s: %s should be %s", quote(key), v.show(), should)
}

func (o *object) text(key string) string { return textOf(key, o.get(key)) }

func (o *object) needText(key string) string { return textOf(key, o.need(key)) }

func textOf(key string, v *value) string {
	if v == nil {
		return ""
	}
	if v.kind != textValue {
		wrong(key, v, "text in quotes")
	}
	return v.text
}

// oneOf reads one of a few words. Capitals do not matter.
func (o *object) oneOf(key, what string, words ...string) string {
	v := o.get(key)
	text := textOf(key, v)
	if text == "" {
		return ""
	}
	for _, w := range words {
		if strings.EqualFold(strings.TrimSpace(text), w) {
			return w
		}
	}
	failAt(v.line, "%s: %s is not %s this version knows (%s)", quote(key), quote(text), what, strings.Join(words, ", "))
	return ""
}

func (o *object) number(key string) float64 {
	v := o.get(key)
	if v == nil {
		return 0
	}
	return numberOf(key, v)
}

func numberOf(key string, v *value) float64 {
	if v.kind != numberValue {
		wrong(key, v, "a number")
	}
	f, _ := strconv.ParseFloat(v.text, 64) // the parser has seen to the range
	return f
}

func (o *object) whole(key string) int {
	f := o.number(key)
	if n := int(f); float64(n) == f && f > -1<<52 && f < 1<<52 {
		return n
	}
	wrong(key, o.get(key), "a whole number")
	return 0
}

func (o *object) flag(key string) bool {
	v := o.get(key)
	if v == nil {
		return false
	}
	if v.kind != boolValue {
		wrong(key, v, "true or false")
	}
	return v.text == "true"
}

// pair reads a list of two numbers.
func (o *object) pair(key string) (a, b float64, given bool) {
	v := o.get(key)
	if v == nil {
		return 0, 0, false
	}
	if v.kind != listValue || len(v.items) != 2 {
		wrong(key, v, "a list of two numbers")
	}
	return numberOf(key, v.items[0]), numberOf(key, v.items[1]), true
}

// texts reads a list of texts; a single text is a list of one, and a number in
// it is the text it is written as. An empty list is nil.
func (o *object) texts(key string) []string {
	v := o.get(key)
	if v == nil {
		return nil
	}
	items := v.items
	if v.kind != listValue {
		items = []*value{v}
	}
	var texts []string
	for _, item := range items {
		texts = append(texts, wordOf(key, item))
	}
	return texts
}

// wordOf reads a text, or a number as the text it is written as.
func wordOf(key string, v *value) string {
	if v.kind != textValue && v.kind != numberValue {
		wrong(key, v, "text in quotes")
	}
	return v.text
}

// named reads an object whose keys are free names and whose values are texts
// or numbers.
func (o *object) named(key string, add func(name, text string)) {
	v := o.get(key)
	if v == nil {
		return
	}
	if v.kind != objectValue {
		wrong(key, v, "an object in braces {}, with a name and a text in each entry")
	}
	for _, m := range v.members {
		add(m.key, wordOf(m.key, m.value))
	}
}

// list calls read for each item of a list of objects.
func (o *object) list(key, what string, read func(*object)) {
	v := o.get(key)
	if v == nil {
		return
	}
	if v.kind != listValue {
		wrong(key, v, "a list in brackets []")
	}
	for _, item := range v.items {
		part := newObject(item, what)
		read(part)
		part.finish()
	}
}

// nearest finds a known word that a slip of the keyboard could have turned
// into this one: at most two letters put in, left out or exchanged.
func nearest(word string, known []string) string {
	best, least := "", min(3, max(len(word)/2, 1)+1)
	for _, k := range known {
		if d := distance(strings.ToLower(word), k); d < least {
			best, least = k, d
		}
	}
	return best
}

// distance is the edit distance of Levenshtein (1966), by bytes.
func distance(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		corner := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := corner
			if a[i] != b[j] {
				cost = 1 + min(corner, row[j], row[j+1])
			}
			corner, row[j+1] = row[j+1], cost
		}
	}
	return row[len(b)]
}
