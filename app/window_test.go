package main

import (
	"bufio"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	"arrowroot/app/ui"
)

// A line of the window's trace, as far as this test reads it: see app/ui/trace.go.
type said struct {
	Verdict, Kind  string
	Held, Propose  []string
	Question, Rows string
	Trust, Paint   string
	Effect, Rivals []string
	Page           string
	Running, Stale bool
	FitError       string
	Popover, Dirty bool
	Left           bool // more is being read
	Subject        string
	Lines          []string
	Focus          string
	Banner         string
	Selected       []string
	Path, Undo     string
	Table          int
	Notes          []string
	Nodes, Buttons map[string][2]int
}

// A hand drives a real window on a display without a screen, with mouse and
// keyboard only.
type hand struct {
	*testing.T
	env    []string
	window string
	trace  string
	shots  string
}

// TestWindow does the main job as a user would: start empty, draw five
// variables and their arrows, bind a CSV, ask, read, hold, fit, wait for paint,
// undo, save and reopen.
func TestWindow(t *testing.T) {
	if os.Getenv("ARROWROOT_WINDOW") == "" {
		t.Skip("set ARROWROOT_WINDOW=1 (make test does) to drive a real window under Xvfb")
	}
	folder := t.TempDir()
	data := filepath.Join(folder, "fields.csv")
	writeFields(t, data)
	h := openWindow(t, folder)

	h.key("ctrl+n")
	h.until("an empty sheet", func(s said) bool { return len(s.Nodes) == 0 })

	// Five variables: double-click empty sheet, type a name.
	middle := h.last().Buttons["sheet"]
	places := map[string][2]int{"rain": {-300, -90}, "slope": {-300, 60}, "cover": {-60, 60}, "soil": {120, -90}, "crop": {300, 60}}
	for _, name := range []string{"rain", "slope", "cover", "soil", "crop"} {
		at := places[name]
		h.nameAt(middle[0]+at[0], middle[1]+at[1])
		h.typed(name)
		h.key("Return")
		h.until("variable "+name, func(s said) bool { _, ok := s.Nodes[name]; return ok })
	}
	h.key("Escape")
	h.shot("1-variables")

	// Arrows: with the arrow tool, drag from node to node.
	h.key("a")
	arrows := [][2]string{{"rain", "cover"}, {"rain", "crop"}, {"slope", "cover"}, {"cover", "soil"}, {"soil", "crop"}, {"cover", "crop"}}
	for _, a := range arrows {
		nodes := h.last().Nodes
		h.drag(nodes[a[0]], nodes[a[1]])
		h.until("arrow "+a[0]+" → "+a[1], func(s said) bool { return strings.Contains(s.Undo, a[0]+" → "+a[1]) })
	}
	h.key("Escape")

	// A note beside them, with its tool.
	h.key("n")
	h.click([2]int{middle[0] - 60, middle[1] + 130})
	h.until("the entry of a note", func(s said) bool { return s.Focus == "entry" })
	h.typed("plots were chosen by lot")
	h.key("Return")
	h.until("a note", func(s said) bool { return slices.Equal(s.Notes, []string{"plots were chosen by lot"}) })
	h.key("Escape")
	h.key("s")
	h.shot("2-arrows")

	// Data, typed into the finder: columns bind themselves by name.
	h.find("data " + data)
	h.until("the table", func(s said) bool { return s.Table == 300 })
	h.key("Escape") // what the window shows of its columns
	h.until("nothing over the window", func(s said) bool { return !s.Popover })

	// The question, by picking nodes and pressing X and Y.
	h.pick("cover")
	h.key("x")
	h.pick("crop")
	h.key("y")
	h.find("compare 0 to 1")
	h.until("a verdict", func(s said) bool { return s.Kind == "confounded" })
	s := h.last()
	if !strings.Contains(s.Verdict, "cover → crop is confounded") || !slices.Equal(s.Propose, []string{"rain"}) {
		t.Fatalf("the verdict is %q, proposing %v", s.Verdict, s.Propose)
	}
	h.shot("3-verdict")

	// A bad control is named, and freed again.
	h.pick("soil")
	h.key("h")
	s = h.until("a warning about soil", func(s said) bool { return s.Kind == "over-held" })
	if !strings.Contains(s.Verdict, "soil") {
		t.Errorf("holding soil, the verdict is %q", s.Verdict)
	}
	h.key("h")
	h.until("the first verdict", func(s said) bool { return s.Kind == "confounded" })

	// The Reading drawer has a set to hold, too.
	h.until("everything read", func(s said) bool { return !s.Left })
	h.click(h.last().Buttons["read adjustment"])
	h.until("a set in the drawer", func(s said) bool {
		return s.Subject == "adjustment" && slices.ContainsFunc(s.Lines, func(line string) bool { return strings.Contains(line, "Holding rain") })
	})
	h.shot("3-reading")

	// Hold what it says.
	h.click(h.last().Buttons["hold them"])
	h.until("a readable effect", func(s said) bool { return s.Kind == "readable" && slices.Equal(s.Held, []string{"rain"}) })

	// Fit; five rows lack a crop, so it asks first.
	h.click(h.last().Buttons["fit"])
	asks := func(s said) bool { _, ok := s.Buttons["banner Fit on 295 rows"]; return ok }
	s = h.until("a question about rows, or a run", func(s said) bool { return s.Running || asks(s) })
	if !s.Running {
		if !strings.Contains(s.Rows, "295 of 300") {
			t.Errorf("rows: %q", s.Rows)
		}
		h.shot("4-rows")
		h.click(s.Buttons["banner Fit on 295 rows"])
	}
	h.until("the run", func(s said) bool { return s.Running || s.Trust != "" })
	s = h.until("paint", func(s said) bool { return !s.Running && s.Paint == "effect" && s.Trust != "" })
	if s.FitError != "" || s.Trust != "sound" || s.Stale {
		t.Errorf("trust %q, stale %v, error %q", s.Trust, s.Stale, s.FitError)
	}
	if text := strings.Join(s.Effect, " "); !strings.Contains(text, "Crude") || !strings.Contains(text, "holding rain") || !strings.Contains(text, "full model") {
		t.Errorf("the effect says %q", text)
	}
	h.shot("5-painted")

	// An edit makes the result stale; undo takes the edit back.
	h.pick("slope")
	h.key("Delete")
	h.until("slope gone", func(s said) bool { _, ok := s.Nodes["slope"]; return !ok })
	h.key("ctrl+z")
	h.until("slope back and the result fresh", func(s said) bool { _, ok := s.Nodes["slope"]; return ok && !s.Stale })

	// A copy predicts what the rival does: nobody is named.
	h.key("ctrl+r")
	h.until("a copy", func(s said) bool { return strings.Contains(s.Undo, "Copy") || strings.Contains(s.Undo, "copy") })
	h.find("which rival predicts better")
	s = h.until("a comparison", func(s said) bool { return len(s.Rivals) > 0 })
	if text := strings.Join(s.Rivals, " "); !strings.Contains(text, "predict the same") || !strings.Contains(text, "No rival is named") || s.Page != "Rivals" {
		t.Errorf("on page %q the comparison says %q", s.Page, text)
	}
	h.shot("5-compared")
	h.key("ctrl+z")
	h.until("one rival", func(s said) bool { return !strings.Contains(strings.ToLower(s.Undo), "copy") })

	// Save, change, reopen.
	file := filepath.Join(folder, "fields.arrowroot")
	h.find("save " + file)
	h.until("the saved file", func(s said) bool { return s.Path == file && !s.Dirty })
	before, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	checkFile(t, before, arrows)
	h.pick("slope")
	h.key("Delete")
	h.until("an unsaved change", func(s said) bool { return s.Dirty })
	h.key("ctrl+z")
	h.until("no change", func(s said) bool { return !s.Dirty })
	h.find("open " + file)
	s = h.until("the study again", func(s said) bool { return s.Path == file && s.Table == 300 && s.Undo == "" && len(s.Nodes) == 5 })
	if !slices.Equal(s.Held, []string{"rain"}) || s.Kind != "readable" {
		t.Errorf("reopened, it holds %v and is %q", s.Held, s.Kind)
	}
	after, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if string(before) != string(after) {
		t.Error("reopening changed the file")
	}
	h.shot("6-reopened")
}

// checkFile asserts what must stand in the saved study.
func checkFile(t *testing.T, text []byte, arrows [][2]string) {
	t.Helper()
	var doc struct {
		Arrowroot int
		Data      []struct{ File string }
		Variables []struct{ ID, Column string }
		Rivals    []struct {
			Arrows []struct{ From, To string }
			Notes  []struct{ Text string }
		}
		Questions []struct {
			Exposure, Outcome string
			From, To          float64
			Held              []string
		}
	}
	if err := json.Unmarshal(text, &doc); err != nil {
		t.Fatalf("the saved study is no JSON: %v", err)
	}
	if doc.Arrowroot != 1 || len(doc.Data) != 1 || doc.Data[0].File != "fields.csv" || len(doc.Variables) != 5 || len(doc.Rivals) != 1 {
		t.Errorf("the saved study is not what was drawn:\n%s", text)
		return
	}
	for _, v := range doc.Variables {
		if v.Column != v.ID {
			t.Errorf("%s is bound to %q", v.ID, v.Column)
		}
	}
	var drawn [][2]string
	for _, a := range doc.Rivals[0].Arrows {
		drawn = append(drawn, [2]string{a.From, a.To})
	}
	if !slices.Equal(drawn, arrows) {
		t.Errorf("saved arrows %v, drawn %v", drawn, arrows)
	}
	if n := doc.Rivals[0].Notes; len(n) != 1 || n[0].Text != "plots were chosen by lot" {
		t.Errorf("saved notes %v", n)
	}
	if len(doc.Questions) != 1 {
		t.Fatalf("%d questions", len(doc.Questions))
	}
	if q := doc.Questions[0]; q.Exposure != "cover" || q.Outcome != "crop" || q.From != 0 || q.To != 1 || !slices.Equal(q.Held, []string{"rain"}) {
		t.Errorf("the saved question is %+v", q)
	}
}

// writeFields invents a field trial: rain moves cover and crop.
func writeFields(t *testing.T, path string) {
	t.Helper()
	r := rand.New(rand.NewPCG(3, 4))
	var b strings.Builder
	fmt.Fprintln(&b, "field,rain,slope,cover,soil,crop")
	for i := range 300 {
		rain, slope := r.NormFloat64(), r.NormFloat64()
		cover := 0.7*rain - 0.4*slope + r.NormFloat64()
		soil := 0.5*cover + r.NormFloat64()
		crop := strconv.FormatFloat(0.3*cover+0.4*soil+0.8*rain+r.NormFloat64(), 'f', 3, 64)
		if i%60 == 7 {
			crop = "NA"
		}
		fmt.Fprintf(&b, "%d,%.3f,%.3f,%.3f,%.3f,%s\n", i+1, rain, slope, cover, soil, crop)
	}
	if err := os.WriteFile(path, []byte(b.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}

// openWindow builds the program and opens it on a display of its own.
func openWindow(t *testing.T, folder string) *hand {
	t.Helper()
	program := filepath.Join(folder, "arrowroot")
	if out, err := exec.Command("go", "build", "-tags", "migrated_fynedo", "-o", program, ".").CombinedOutput(); err != nil {
		t.Fatalf("building: %v\n%s", err, out)
	}
	h := &hand{T: t, trace: filepath.Join(folder, "trace.jsonl"), shots: os.Getenv("ARROWROOT_SHOTS")}
	display := h.display()
	h.env = append(os.Environ(),
		"DISPLAY="+display, "WAYLAND_DISPLAY=", "LANG=C.UTF-8", "FYNE_THEME=light", "FYNE_SCALE=1",
		"HOME="+folder, "XDG_CONFIG_HOME="+filepath.Join(folder, "config"), "XDG_CACHE_HOME="+filepath.Join(folder, "cache"),
		ui.TraceVariable+"="+h.trace)
	h.start(exec.Command("openbox"))
	time.Sleep(time.Second)
	h.start(exec.Command(program))
	h.until("the example's verdict", func(s said) bool { return s.Kind == "confounded" && len(s.Nodes) == 9 })
	out := h.command("xdotool", "search", "--onlyvisible", "--name", "Arrowroot")
	h.window, _, _ = strings.Cut(strings.TrimSpace(out), "\n")
	if h.window == "" {
		t.Fatal("no window is named Arrowroot")
	}
	h.command("xdotool", "windowfocus", "--sync", h.window)
	return h
}

// display starts a virtual one and gives its name.
func (h *hand) display() string {
	h.Helper()
	read, write, err := os.Pipe()
	if err != nil {
		h.Fatal(err)
	}
	defer read.Close()
	server := exec.Command("Xvfb", "-displayfd", "3", "-screen", "0", "1366x768x24", "-nolisten", "tcp")
	server.ExtraFiles = []*os.File{write}
	h.start(server)
	write.Close()
	line, err := bufio.NewReader(read).ReadString('\n')
	if err != nil && err != io.EOF {
		h.Fatal(err)
	}
	if line = strings.TrimSpace(line); line == "" {
		h.Fatal("Xvfb gave no display")
	}
	return ":" + line
}

// start runs a program until the test ends.
func (h *hand) start(c *exec.Cmd) {
	h.Helper()
	if c.Env == nil {
		c.Env = h.env
	}
	if err := c.Start(); err != nil {
		h.Fatal(err)
	}
	h.Cleanup(func() {
		_ = c.Process.Signal(syscall.SIGTERM)
		done := make(chan struct{})
		go func() { _ = c.Wait(); close(done) }()
		select {
		case <-done:
		case <-time.After(3 * time.Second):
			_ = c.Process.Kill()
			<-done
		}
	})
}

func (h *hand) command(name string, args ...string) string {
	h.Helper()
	c := exec.Command(name, args...)
	c.Env = h.env
	out, err := c.CombinedOutput()
	if err != nil {
		h.shot("failed")
		h.Fatalf("%s %v: %v\n%s", name, args, err, out)
	}
	return string(out)
}

// last is the newest line of the trace.
func (h *hand) last() said {
	h.Helper()
	text, err := os.ReadFile(h.trace)
	if err != nil {
		return said{}
	}
	text = []byte(strings.TrimRight(string(text), "\n"))
	var s said
	if at := strings.LastIndexByte(string(text), '\n'); json.Unmarshal(text[at+1:], &s) != nil {
		return said{}
	}
	return s
}

// patience is generous: shared machines stall.
const patience = 4 * time.Minute

// until waits for the window to say something, and gives what it says.
func (h *hand) until(what string, ok func(said) bool) said {
	h.Helper()
	for deadline := time.Now().Add(patience); ; time.Sleep(50 * time.Millisecond) {
		if s := h.last(); ok(s) {
			return s
		}
		if time.Now().After(deadline) {
			h.shot("failed")
			text, _ := json.Marshal(h.last())
			h.Fatalf("waited in vain for %s; the window says %s", what, text)
		}
	}
}

func (h *hand) at(x, y int) {
	h.Helper()
	h.command("xdotool", "mousemove", "--window", h.window, strconv.Itoa(x), strconv.Itoa(y))
	time.Sleep(120 * time.Millisecond)
}

func (h *hand) click(p [2]int) {
	h.Helper()
	h.at(p[0], p[1])
	h.command("xdotool", "click", "1")
	time.Sleep(400 * time.Millisecond) // longer than a double click
}

func (h *hand) doubleClick(x, y int) {
	h.Helper()
	h.at(x, y)
	h.command("xdotool", "click", "--repeat", "2", "--delay", "80", "1")
	time.Sleep(400 * time.Millisecond)
}

// nameAt double-clicks until the sheet asks for a name: on a busy machine two
// clicks can come too far apart to be one gesture, as a hand knows.
func (h *hand) nameAt(x, y int) {
	h.Helper()
	for range 8 {
		h.doubleClick(x, y)
		for range 40 {
			if h.last().Focus == "entry" {
				return
			}
			time.Sleep(50 * time.Millisecond)
		}
	}
	h.shot("failed")
	h.Fatal("double-clicking the sheet asks for no name")
}

func (h *hand) drag(from, to [2]int) {
	h.Helper()
	h.at(from[0], from[1])
	h.command("xdotool", "mousedown", "1")
	const steps = 8
	for i := 1; i <= steps; i++ {
		share := float64(i) / steps
		h.at(from[0]+int(math.Round(share*float64(to[0]-from[0]))), from[1]+int(math.Round(share*float64(to[1]-from[1]))))
	}
	h.command("xdotool", "mouseup", "1")
	time.Sleep(300 * time.Millisecond)
}

func (h *hand) key(name string) {
	h.Helper()
	h.command("xdotool", "key", "--clearmodifiers", name)
	time.Sleep(250 * time.Millisecond)
}

func (h *hand) typed(text string) {
	h.Helper()
	h.command("xdotool", "type", "--delay", "40", text)
	time.Sleep(150 * time.Millisecond)
}

// pick clicks a node.
func (h *hand) pick(node string) {
	h.Helper()
	h.click(h.last().Nodes[node])
	h.until(node+" picked", func(s said) bool { return slices.Equal(s.Selected, []string{node}) })
}

// find types a line into the command finder.
func (h *hand) find(line string) {
	h.Helper()
	h.key("ctrl+k")
	h.typed(line)
	h.key("Return")
}

// shot keeps a picture where ARROWROOT_SHOTS names a folder.
func (h *hand) shot(name string) {
	if h.shots == "" {
		return
	}
	_ = os.MkdirAll(h.shots, 0o755)
	c := exec.Command("import", "-window", "root", filepath.Join(h.shots, name+".png"))
	c.Env = h.env
	if out, err := c.CombinedOutput(); err != nil {
		h.Logf("no picture %s: %v %s", name, err, out)
	}
}
