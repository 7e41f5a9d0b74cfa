package study

import (
	"bytes"
	"encoding/json"
	"flag"
	"os"
	"reflect"
	"strconv"
	"strings"
	"testing"
)

// Property tests are the same in every run, unless a flag says otherwise, and
// leave no files.
func TestMain(m *testing.M) {
	for name, value := range map[string]string{"rapid.seed": "1", "rapid.nofailfile": "true"} {
		if err := flag.Set(name, value); err != nil {
			panic(err)
		}
	}
	os.Exit(m.Run())
}

// FuzzRead checks that a study that can be read is sound and survives writing
// and reading; that an error names a line of the file; and that JSON is what
// encoding/json of the Go distribution takes it for.
func FuzzRead(f *testing.F) {
	f.Add(string(example(f)))
	for _, s := range []string{
		"", "{}", `{"arrowroot": 1}`, "\ufeff{\"arrowroot\": 1.0e0, \"title\": \"\\ud83d\\ude00 \\u00e9\\n\"}",
		`{"arrowroot": 1, "variables": [{"id": "a", "scale": "Count", "levels": [1, "2"], "range": [1e-3, 2E2]}], "rivals": [{"nodes": []}]}`,
		`{"arrowroot": 1, "variables": [{"id": "a"}, {"id": "b"}], "rivals": [{"arrows": [{"from": "a", "to": "b"}, {"from": "b", "to": "a"}]}]}`,
		`{"arrowroot": 1, "data": [{"file": "x/y.csv"}, {"text": ["a", "1", ""], "name": "t"}], "questions": [{"from": "3", "held": []}, {"shift": -1}]}`,
		`{"arrowroot": 1, "variables": [{"id": "a", "records": "b"}, {"id": "b", "scale": "binary", "cost": 3}], "questions": [{"effect": "Controlled direct", "fixed": [{"variable": "b", "at": "1"}], "where": [{"variable": "a", "low": 1}], "groups": "new groups"}]}`,
		`{"arrowroot": 1, "arrowroot": 1}`, `{"arrowroot": 01}`, "[[[[", `{"a": -0.5e+3, "b": [true, null]}`,
	} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		compareJSON(t, text)
		s, err := Read("x.arrowroot", []byte(text))
		if err != nil {
			fault, ok := err.(*FileError)
			if !ok || fault.Reason == "" || fault.Line < 0 || fault.Line > 1+strings.Count(text, "\n") {
				t.Fatalf("%q: %#v", text, err)
			}
			return
		}
		if err := Check(s); err != nil {
			t.Fatalf("%q was read, but %v", text, err)
		}
		written := Write(s)
		again, err := Read("x.arrowroot", written)
		if err != nil {
			t.Fatalf("%q was written as\n%s, which fails: %v", text, written, err)
		}
		if !bytes.Equal(Write(again), written) {
			t.Fatalf("%q was written as\n%sand then as\n%s", text, written, Write(again))
		}
		if err := same(again, s); err != nil {
			t.Fatalf("%q: %v", text, err)
		}
	})
}

// compareJSON checks the parser against encoding/json. Keys that are there
// twice, bad UTF-8, lone surrogates and deep nesting are refused here alone.
func compareJSON(t *testing.T, text string) {
	v, err := parseJSON(text)
	if err != nil {
		refused := err.(*FileError).Reason
		for _, own := range []string{"is here twice", "is not UTF-8", "surrogate", "nested more than", "too large a number"} {
			if strings.Contains(refused, own) {
				return
			}
		}
		if json.Valid([]byte(text)) {
			t.Fatalf("%q is JSON, but: %v", text, err)
		}
		return
	}
	var want any
	if err := json.Unmarshal([]byte(text), &want); err != nil {
		t.Fatalf("%q is no JSON (%v), but was parsed", text, err)
	}
	if got := plain(v); !reflect.DeepEqual(got, want) {
		t.Fatalf("%q is %v, want %v", text, got, want)
	}
}

// plain gives a value as encoding/json would.
func plain(v *value) any {
	switch v.kind {
	case boolValue:
		return v.text == "true"
	case numberValue:
		f, err := strconv.ParseFloat(v.text, 64)
		if err != nil {
			panic(err)
		}
		return f
	case textValue:
		return v.text
	case listValue:
		list := []any{}
		for _, item := range v.items {
			list = append(list, plain(item))
		}
		return list
	case objectValue:
		object := map[string]any{}
		for _, m := range v.members {
			object[m.key] = plain(m.value)
		}
		return object
	}
	return nil
}
