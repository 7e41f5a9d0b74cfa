package main

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

// FIELDS.md names every field that is printed.
func TestFieldsAreDocumented(t *testing.T) {
	text, err := os.ReadFile("FIELDS.md")
	if err != nil {
		t.Fatal(err)
	}
	files, err := filepath.Glob("*.go")
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	for _, name := range files {
		if strings.HasSuffix(name, "_test.go") {
			continue
		}
		file, err := parser.ParseFile(token.NewFileSet(), name, nil, parser.SkipObjectResolution)
		if err != nil {
			t.Fatal(err)
		}
		ast.Inspect(file, func(n ast.Node) bool {
			f, ok := n.(*ast.Field)
			if !ok || f.Tag == nil {
				return true
			}
			field, _, _ := strings.Cut(reflect.StructTag(strings.Trim(f.Tag.Value, "`")).Get("json"), ",")
			if field == "" {
				return true
			}
			seen++
			if !strings.Contains(string(text), "`"+field+"`") {
				t.Errorf("%s: %s is not documented", name, field)
			}
			return true
		})
	}
	if seen < 100 {
		t.Errorf("only %d fields were found", seen)
	}
}
