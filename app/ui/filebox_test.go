package ui

import (
	"os"
	"path/filepath"
	"testing"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/test"
)

func newFileBox(b *bench, opening bool, name string, endings []string) (*fileBox, *string) {
	got := new(string)
	f := b.askFile("", "Take", opening, name, endings, func(path string) { *got = path })
	return f, got
}

func TestFileBoxWalksAndFilters(t *testing.T) {
	b := newBench(t)
	folder := t.TempDir()
	if err := os.Mkdir(filepath.Join(folder, "deep"), 0o700); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"traps.csv", "notes.md", "deep/more.csv"} {
		if err := os.WriteFile(filepath.Join(folder, name), []byte("a\n1\n"), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	f, got := newFileBox(b, true, "", []string{".csv"})
	f.entry.SetText("")
	test.Type(f.entry, "/somewhere//"+folder[1:]+"/")
	var names []string
	for _, r := range f.rows {
		names = append(names, r.name)
	}
	if len(names) != 3 || names[0] != ".." || names[1] != "deep" || names[2] != "traps.csv" {
		t.Fatalf("lists %v", names)
	}
	press := func(key fyne.KeyName) { f.entry.TypedKey(&fyne.KeyEvent{Name: key}); b.queue.drain() }
	press(fyne.KeyDown)
	press(fyne.KeyDown)
	press(fyne.KeyReturn) // into deep
	if f.path() != filepath.Join(folder, "deep")+"/" {
		t.Fatalf("in %q", f.path())
	}
	test.Type(f.entry, "mo")
	press(fyne.KeyReturn) // "mo" is no file
	if *got != "" {
		t.Fatalf("took %q", *got)
	}
	press(fyne.KeyDown)
	press(fyne.KeyReturn)
	if *got != filepath.Join(folder, "deep", "more.csv") {
		t.Fatalf("took %q", *got)
	}
	if b.lastFolder != filepath.Join(folder, "deep") {
		t.Errorf("remembers %q", b.lastFolder)
	}
}

func TestFileBoxAsksBeforeReplacing(t *testing.T) {
	b := newBench(t)
	path := filepath.Join(t.TempDir(), "study.arrowroot")
	if err := os.WriteFile(path, []byte("old"), 0o600); err != nil {
		t.Fatal(err)
	}
	f, got := newFileBox(b, false, "x", nil)
	f.entry.SetText(path)
	f.submit()
	b.queue.drain()
	if *got != "" {
		t.Fatal("a file that is there was taken at once")
	}
	f.submit()
	b.queue.drain()
	if *got != path {
		t.Fatalf("took %q", *got)
	}
}
