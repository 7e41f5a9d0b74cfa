package study

import (
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"sort"
	"strings"
	"testing"
)

func readSchema(t *testing.T) map[string]any {
	t.Helper()
	text, err := os.ReadFile("../../assets/study.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	var schema map[string]any
	if err := json.Unmarshal(text, &schema); err != nil {
		t.Fatal(err)
	}
	return schema
}

// The schema and the reader must know the same keys. The reader tells its keys
// when it meets one that it does not know.
func TestSchemaKnowsTheKeysOfTheReader(t *testing.T) {
	schema := readSchema(t)
	list := regexp.MustCompile(` is not a key of [a-z ]+ \((.*)\)`)
	at := func(place string) []string {
		part := schema
		for _, key := range strings.Fields(place) {
			part = part["properties"].(map[string]any)[key].(map[string]any)
			if items, ok := part["items"].(map[string]any); ok {
				part = items
			}
			if part["$ref"] == "#/$defs/condition" {
				part = schema["$defs"].(map[string]any)["condition"].(map[string]any)
			}
		}
		var keys []string
		for key, p := range part["properties"].(map[string]any) {
			if p.(map[string]any)["description"] == nil {
				t.Errorf("%s: %s is not described", place, key)
			}
			keys = append(keys, key)
		}
		if part["additionalProperties"] != false {
			t.Errorf("%s takes other keys", place)
		}
		sort.Strings(keys)
		return keys
	}
	for place, text := range map[string]string{
		"":                 `{"arrowroot": 1, "x": 1}`,
		"data":             `{"arrowroot": 1, "data": [{"x": 1}]}`,
		"variables":        `{"arrowroot": 1, "variables": [{"id": "a", "x": 1}]}`,
		"plates":           `{"arrowroot": 1, "plates": [{"name": "a", "x": 1}]}`,
		"rivals":           `{"arrowroot": 1, "rivals": [{"x": 1}]}`,
		"rivals nodes":     `{"arrowroot": 1, "rivals": [{"nodes": [{"variable": "a", "x": 1}]}]}`,
		"rivals nodes law": `{"arrowroot": 1, "rivals": [{"nodes": [{"variable": "a", "law": {"x": 1}}]}]}`,
		"rivals arrows":    `{"arrowroot": 1, "rivals": [{"arrows": [{"from": "a", "to": "b", "x": 1}]}]}`,
		"rivals arcs":      `{"arrowroot": 1, "rivals": [{"arcs": [{"between": ["a", "b"], "x": 1}]}]}`,
		"rivals absent":    `{"arrowroot": 1, "rivals": [{"absent": [{"from": "a", "to": "b", "x": 1}]}]}`,
		"rivals notes":     `{"arrowroot": 1, "rivals": [{"notes": [{"text": "a", "x": 1}]}]}`,
		"questions":        `{"arrowroot": 1, "questions": [{"x": 1}]}`,
		"questions fixed":  `{"arrowroot": 1, "questions": [{"fixed": [{"variable": "a", "at": 1, "x": 1}]}]}`,
		"questions where":  `{"arrowroot": 1, "questions": [{"where": [{"variable": "a", "x": 1}]}]}`,
		"data keep":        `{"arrowroot": 1, "data": [{"keep": [{"variable": "a", "x": 1}]}]}`,
		"dismissed":        `{"arrowroot": 1, "dismissed": [{"rival": "a", "finding": "b", "x": 1}]}`,
	} {
		_, err := Read("x", []byte(text))
		if err == nil {
			t.Errorf("%s was read", text)
			continue
		}
		found := list.FindStringSubmatch(err.Error())
		if found == nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		known := strings.Split(found[1], ", ")
		sort.Strings(known)
		if keys := at(place); !slices.Equal(keys, known) {
			t.Errorf("%s: the schema knows %q, the reader %q", place, keys, known)
		}
	}
}

// Every study that ships must fit the schema, and what the schema must refuse,
// it refuses.
func TestStudiesFitTheSchema(t *testing.T) {
	schema := readSchema(t)
	files, err := filepath.Glob("../../*/*/*.arrowroot")
	if err != nil {
		t.Fatal(err)
	}
	files = append(files, "testdata/hedge.arrowroot")
	for _, file := range files {
		text, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		var v any
		if err := json.Unmarshal(text, &v); err != nil {
			t.Fatal(err)
		}
		if err := (validator{schema}).check(schema, v, ""); err != nil {
			t.Errorf("%s: %v", file, err)
		}
		if s, err := Read(file, text); err != nil {
			t.Error(err)
		} else if again := mustRead(t, Write(s)); string(Write(again)) != string(Write(s)) {
			t.Errorf("%s is not written the same twice", file)
		}
	}
	for _, text := range []string{
		`{}`, `{"arrowroot": 2}`, `{"arrowroot": 1, "titel": ""}`, `{"arrowroot": 1, "variables": [{"id": "log"}]}`,
		`{"arrowroot": 1, "variables": [{"id": "a b"}]}`, `{"arrowroot": 1, "variables": [{"id": "a", "range": [1]}]}`,
		`{"arrowroot": 1, "rivals": [{"arrows": [{"from": "a", "to": "b", "form": "spiral"}]}]}`,
	} {
		var v any
		if err := json.Unmarshal([]byte(text), &v); err != nil {
			t.Fatal(err)
		}
		if (validator{schema}).check(schema, v, "") == nil {
			t.Errorf("the schema takes %s", text)
		}
		if _, err := Read("x", []byte(text)); err == nil {
			t.Errorf("the reader takes %s", text)
		}
	}
}

// A validator knows the part of JSON Schema (draft 2020-12) that our schema
// uses, and fails on keywords it does not know.
type validator struct{ root map[string]any }

func (w validator) check(schema map[string]any, v any, at string) error {
	object, _ := v.(map[string]any)
	list, isList := v.([]any)
	number, _ := v.(float64)
	text, _ := v.(string)
	for keyword, rule := range schema {
		ok := true
		switch keyword {
		case "description", "title", "$schema", "$defs", "examples", "default":
		case "$ref":
			name := strings.TrimPrefix(rule.(string), "#/$defs/")
			if err := w.check(w.root["$defs"].(map[string]any)[name].(map[string]any), v, at); err != nil {
				return err
			}
		case "type":
			if kinds, many := rule.([]any); many {
				ok = slices.ContainsFunc(kinds, func(k any) bool { return isKind(v, k.(string)) })
			} else {
				ok = isKind(v, rule.(string))
			}
		case "const":
			ok = v == rule
		case "enum":
			ok = slices.Contains(rule.([]any), v)
		case "not":
			ok = w.check(rule.(map[string]any), v, at) != nil
		case "anyOf":
			ok = slices.ContainsFunc(rule.([]any), func(r any) bool { return w.check(r.(map[string]any), v, at) == nil })
		case "pattern":
			ok = regexp.MustCompile(rule.(string)).MatchString(text)
		case "minimum":
			ok = number >= rule.(float64)
		case "exclusiveMinimum":
			ok = number > rule.(float64)
		case "exclusiveMaximum":
			ok = number < rule.(float64)
		case "minItems":
			ok = !isList || float64(len(list)) >= rule.(float64)
		case "maxItems":
			ok = !isList || float64(len(list)) <= rule.(float64)
		case "required":
			for _, key := range rule.([]any) {
				if _, there := object[key.(string)]; !there && object != nil {
					return fmt.Errorf("%s: %s is missing", at, key)
				}
			}
		case "items":
			for i, item := range list {
				if err := w.check(rule.(map[string]any), item, fmt.Sprintf("%s/%d", at, i)); err != nil {
					return err
				}
			}
		case "properties":
			for key, part := range rule.(map[string]any) {
				if value, there := object[key]; there {
					if err := w.check(part.(map[string]any), value, at+"/"+key); err != nil {
						return err
					}
				}
			}
		case "additionalProperties":
			known, _ := schema["properties"].(map[string]any)
			for key, value := range object {
				if _, is := known[key]; is {
					continue
				}
				if rule == false {
					return fmt.Errorf("%s: %s is not known", at, key)
				}
				if err := w.check(rule.(map[string]any), value, at+"/"+key); err != nil {
					return err
				}
			}
		default:
			return fmt.Errorf("the test does not know the keyword %s", keyword)
		}
		if !ok {
			return fmt.Errorf("%s: %v against %s %v", at, v, keyword, rule)
		}
	}
	return nil
}

func isKind(v any, kind string) bool {
	switch v := v.(type) {
	case string:
		return kind == "string"
	case bool:
		return kind == "boolean"
	case []any:
		return kind == "array"
	case map[string]any:
		return kind == "object"
	case float64:
		return kind == "number" || kind == "integer" && v == float64(int(v))
	}
	return false
}
