package ui

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A wrong file is named once and the consequence told once.
func TestWrongFileIsToldOnce(t *testing.T) {
	b := newBench(t)
	folder := t.TempDir()
	for name, text := range map[string]string{"notes.txt": "hello there\n", "bad.arrowroot": `{"arrowroot": 1, "variables": [ }`, "traps.csv": "a,b\x00\n"} {
		path := filepath.Join(folder, name)
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		if strings.HasSuffix(name, ".csv") {
			b.loadData(path)
		} else {
			b.open(path)
		}
		b.wait("a complaint about "+name, func() bool { return strings.Contains(b.banner(), name) })
		if told := b.banner(); strings.Count(told, name) != 1 || strings.Count(told, "not opened") > 1 {
			t.Errorf("of %s the banner says %q", name, told)
		}
	}
}

// The dialog of columns offers the heading that a name probably means.
func TestLikelyColumnIsOffered(t *testing.T) {
	b := newBench(t)
	b.say("rain -> yield")
	path := filepath.Join(t.TempDir(), "maize.csv")
	if err := os.WriteFile(path, []byte("field,rain_mm,yield_t_ha\na,600,5.1\nb,580,4.7\nc,611,5.4\nd,630,5.2\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	b.loadData(path)
	b.wait("an offer", func() bool { return b.likelyColumn("yield") != nil })
	if r := b.likelyColumn("yield"); r.Label != "Bind it to yield_t_ha" {
		t.Errorf("offered: %s", r.Label)
	}
	b.do(b.likelyColumn("rain").Edit)
	if v := b.view.Study.Variable("rain"); v.Column != "rain_mm" || v.Scale == "" {
		t.Errorf("rain is bound to %q as %q", v.Column, v.Scale)
	}
}
