package main

import (
	"encoding/json"
	"errors"
	"io"
	"os/exec"
	"slices"
	"strings"
	"testing"
)

// layers is the import policy: what each package may import of ours. A package
// marked ! must not reach Fyne, even indirectly. It stands in DEVELOPERS.md too.
const layers = `
!compile/graph !compile/formula !compile/table !compile/kernel !infer !assets :
!canvas/draw !canvas/internal/golden :
!compile/study    : compile/graph compile/formula
!compile/causal   : compile/graph
!compile/ops      : compile/kernel
!compile/catalog  : compile/kernel
!infer/summary    : infer
!infer/score      :
!compile/model    : compile/study compile/graph compile/formula compile/table compile/catalog compile/causal compile/kernel
!compile/density  : compile/ops compile/kernel compile/catalog compile/formula compile/model
!compile/effect   : compile/kernel compile/catalog compile/formula compile/model compile/graph compile/causal compile/study
!compile/replicate : compile/effect compile/model compile/study compile/catalog
!compile/evidence : compile/study compile/graph compile/table compile/causal compile/formula compile/model
!compile/sensitivity : compile/study compile/graph compile/table compile/causal compile/kernel
!compile/mistake  : compile/study compile/graph compile/table compile/causal
!canvas/scene     : canvas/draw compile/study compile/graph compile/causal
canvas            : canvas/draw canvas/scene compile/study compile/graph compile/causal
!app/fit          : compile/* infer infer/summary infer/score
!app/findings     : app/fit app/words compile/*
!app/session      : app/fit app/findings compile/* infer
!app/words        : app/fit compile/mistake compile/model compile/replicate compile/study infer/summary
!app/paint        : app/fit app/words canvas/draw canvas/scene compile/replicate compile/sensitivity infer/summary
!app/report       : app/fit app/findings app/paint app/words canvas/draw canvas/scene compile/*
!app/batch        : app/fit app/findings app/report app/session app/words compile/* infer infer/summary
app/ui            : app/fit app/findings app/paint app/words app/report app/session canvas canvas/* compile/* infer infer/summary assets
app               : app/session app/ui assets
!assets/examples/generate :
`

type listed struct {
	ImportPath string
	Imports    []string
	Deps       []string
}

func TestImportPolicy(t *testing.T) {
	allowed, pure := policy(t)
	command := exec.Command("go", "list", "-json=ImportPath,Imports,Deps", "arrowroot/...")
	out, err := command.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := command.Start(); err != nil {
		t.Fatal(err)
	}
	seen := 0
	for d := json.NewDecoder(out); ; {
		var p listed
		if err := d.Decode(&p); errors.Is(err, io.EOF) {
			break
		} else if err != nil {
			t.Fatal(err)
		}
		seen++
		name := strings.TrimPrefix(p.ImportPath, "arrowroot/")
		rules, known := allowed[name]
		if !known {
			t.Errorf("%s has no line in the import policy", name)
			continue
		}
		for _, path := range p.Imports {
			of, ours := strings.CutPrefix(path, "arrowroot/")
			if ours && !permitted(rules, of) {
				t.Errorf("%s imports %s, which the policy does not allow", name, of)
			}
		}
		if pure[name] && slices.ContainsFunc(p.Deps, func(s string) bool { return strings.HasPrefix(s, "fyne.io/") }) {
			t.Errorf("%s reaches Fyne", name)
		}
	}
	if err := command.Wait(); err != nil {
		t.Fatal(err)
	}
	if seen < 15 {
		t.Errorf("only %d packages were listed", seen)
	}
}

func policy(t *testing.T) (allowed map[string][]string, pure map[string]bool) {
	allowed, pure = make(map[string][]string), make(map[string]bool)
	for line := range strings.Lines(strings.TrimSpace(layers)) {
		left, right, ok := strings.Cut(line, ":")
		if !ok {
			t.Fatalf("no colon in %q", line)
		}
		for _, name := range strings.Fields(left) {
			bare := strings.TrimPrefix(name, "!")
			pure[bare] = bare != name
			allowed[bare] = strings.Fields(right)
		}
	}
	return allowed, pure
}

func permitted(rules []string, name string) bool {
	for _, r := range rules {
		if r == name {
			return true
		}
		if folder, ok := strings.CutSuffix(r, "/*"); ok && strings.HasPrefix(name, folder+"/") {
			return true
		}
	}
	return false
}
