package formula

import (
	"reflect"
	"strings"
	"testing"
	"unicode/utf8"
)

var seeds = []string{
	"log rate = alpha_bees by farm + beta_hedge_bees * (hedge - 90) + log hours",
	"α + β_hedge→bees (hedge − 90)", "logit(mu) = -x^-2^y", "(-3)^2 - --3", "step_soil_flowers of soil",
	"a by farm and year ^ 2", "inverse logit x / max(1, 2e-3, log(rate + 1))", "3x", "log x^2", "a = b = c", "x²·y",
	"normal with mean 0, sd 1", "half-normal with sd 0.5 and shape log x", "student t, degrees of freedom 4, mean a by farm and b",
	"bees ~ negative binomial with mean rate, overdispersion k_bees", "1..2e", "# only a remark", "a #b\n+ c", "->", "β->", "(((", "log log", "by",
}

// FuzzParse checks that whatever parses is printed in a form that parses to
// the same tree, that errors point into the text, and that nothing panics.
func FuzzParse(f *testing.F) {
	for _, s := range seeds {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := Parse(text)
		checkError(t, text, err)
		if err == nil {
			again, err := Parse(p.String())
			if err != nil {
				t.Fatalf("%q is printed %q, which fails: %v", text, p.String(), err)
			}
			if !sameTree(p, again) {
				t.Fatalf("%q is printed %q, which is another tree", text, p.String())
			}
			Pretty(p.Right, nil)
			Names(p.Right)
		}
		ph, err := ParsePhrase(text)
		checkError(t, text, err)
		if err == nil {
			again, err := ParsePhrase(ph.String())
			if err != nil {
				t.Fatalf("%q is printed %q, which fails: %v", text, ph.String(), err)
			}
			if !sameTree(ph, again) {
				t.Fatalf("%q is printed %q, which is another phrase", text, ph.String())
			}
		}
		_, err = ParseSentence(text)
		checkError(t, text, err)
		if same := renamed(text, "a", "a"); same != text {
			t.Fatalf("renaming a to itself changed %q to %q", text, same)
		}
		if there := renamed(text, "a", "zz9"); !strings.Contains(text, "zz9") {
			if back := renamed(there, "zz9", "a"); back != text {
				t.Fatalf("%q renamed is %q, and back %q", text, there, back)
			}
			if p, err := Parse(text); err == nil {
				q, err := Parse(there)
				if err != nil {
					t.Fatalf("%q renamed is %q, which fails: %v", text, there, err)
				}
				if len(Names(q.Right)) != len(Names(p.Right)) {
					t.Fatalf("%q renamed is %q", text, there)
				}
			}
		}
	})
}

func checkError(t *testing.T, text string, err error) {
	if err == nil {
		return
	}
	e := err.(*Error)
	if e.Message == "" || e.Span.Start < 0 || e.Span.End < e.Span.Start || e.Span.End > len(text) {
		t.Fatalf("%q: bad error %+v", text, e)
	}
	if utf8.ValidString(text) && strings.Count(Caret(text, e), "\n") != 1 {
		t.Fatalf("%q: the caret display has not two lines:\n%s", text, Caret(text, e))
	}
}

// sameTree compares trees without their spans.
func sameTree(a, b any) bool {
	return reflect.DeepEqual(bareTree(reflect.ValueOf(a)), bareTree(reflect.ValueOf(b)))
}

func bareTree(v reflect.Value) any {
	switch v.Kind() {
	case reflect.Pointer, reflect.Interface:
		if v.IsNil() {
			return nil
		}
		return bareTree(v.Elem())
	case reflect.Struct:
		fields := []any{v.Type().Name()}
		for i := range v.NumField() {
			if v.Type().Field(i).Name != "Span" {
				fields = append(fields, bareTree(v.Field(i)))
			}
		}
		return fields
	case reflect.Slice:
		var parts []any
		for i := range v.Len() {
			parts = append(parts, bareTree(v.Index(i)))
		}
		return parts
	}
	return v.Interface()
}
