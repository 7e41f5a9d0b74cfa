package ui

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// The Checks page lists what a fit does not reproduce, shows the node on the
// sheet, and the paint follows.
func TestChecksPage(t *testing.T) {
	b := newBench(t)
	var rows strings.Builder
	fmt.Fprintln(&rows, "rain,flowers,bees")
	for i := range 60 { // bees come in swarms: no Poisson law does that
		fmt.Fprintf(&rows, "%d,%d,%d\n", i%7, i%7+i%5, 1+i%7+25*(i%11/10))
	}
	path := filepath.Join(t.TempDir(), "swarms.csv")
	if err := os.WriteFile(path, []byte(rows.String()), 0o644); err != nil {
		t.Fatal(err)
	}
	b.say("rain -> flowers -> bees")
	b.say("data " + path)
	b.wait("the table", func() bool { return b.view.Table != nil })
	b.closeTop() // what the window shows of its columns, if it does
	b.changeVariable("bees", func(v *study.Variable) { v.Scale = study.Count })
	b.changeVariable("flowers", func(v *study.Variable) { v.Scale = study.Real })
	b.changeLaw("bees", func(l *study.Law) { l.Family = "Poisson" })
	b.drawer.show("Checks")
	b.wait("a model", b.canFit)
	b.fit(true)
	b.wait("a result", func() bool { return b.view.Result != nil && !b.view.Running })
	b.wait("checks", func() bool { return b.view.Checks != nil })
	b.drawer.show("Checks")
	p := b.drawer.pages[b.drawer.tabs.chosen].(*checksPage)
	if p.at != (checked{"bees", 0}) {
		t.Errorf("the worst is %v", p.at)
	}
	if said := strings.Join(b.said().Checks, " "); !strings.Contains(said, "does not reproduce bees") {
		t.Errorf("it says %q", said)
	}
	if bees := variableOf(b.view.Checks, "bees"); bees == nil || !bees.Failed() || len(p.list.rows) < 2+3 {
		t.Errorf("%d rows are listed", len(p.list.rows))
	}
	p.turn(checked{"bees", 1})
	if b.picked() != "bees" {
		t.Errorf("%q is picked on the sheet", b.picked())
	}
	b.choose(scene.Selection{Nodes: []string{"flowers"}})
	if p.at.variable != "flowers" {
		t.Errorf("flowers was picked on the sheet, and the page shows %v", p.at)
	}
	b.setPaint(scene.FitPaint)
	in := b.editor.Input()
	if in.Paint == nil || in.Paint.Nodes["bees"].Bin < 2 || in.Paint.Nodes["flowers"].Bin > 1 {
		t.Errorf("the paint is %+v", in.Paint)
	}
}
