package ui

import (
	"os"
	"path/filepath"
	"strings"

	"arrowroot/app/words"
	"arrowroot/canvas/scene"
	"arrowroot/compile/study"
)

// sentenceOf reads a line typed into the finder: arrows, or a verb with names.
func (d *desk) sentenceOf(typed string) sentence {
	text := strings.TrimSpace(typed)
	if text == "" {
		return sentence{}
	}
	if isArrows(text) {
		lines := strings.ReplaceAll(text, ";", "\n")
		if _, err := study.ParseArrows(lines); err != nil {
			return sentence{wrong: words.Upper(err.Error())}
		}
		return sentence{does: "Draw " + strings.ReplaceAll(text, "->", "→"), run: func() {
			first := len(d.view.Rival.Diagram.Nodes) == 0
			if d.do(study.TypeArrows{Rival: d.rival(), Text: lines}) {
				if first {
					d.editor.ZoomFit()
				}
				d.showAll()
			}
		}}
	}
	verb, rest, ok := strings.Cut(text, " ")
	rest = strings.TrimSpace(rest)
	if !ok || rest == "" {
		return sentence{}
	}
	if s, ok := d.fileSentence(verb, rest); ok {
		return s
	}
	return d.variableSentence(verb, rest)
}

func isArrows(text string) bool {
	for _, mark := range []string{"->", "→", "<-", "←", "↔"} {
		if strings.Contains(text, mark) {
			return true
		}
	}
	return false
}

// fileSentence reads "data traps.csv", "open …", "save …", "svg …", "report …".
func (d *desk) fileSentence(verb, rest string) (sentence, bool) {
	path := d.path(rest)
	switch verb {
	case "data":
		return sentence{does: "Open data " + rest, run: func() { d.loadData(path) }}, true
	case "open":
		return sentence{does: "Open " + rest, run: func() { d.orSaved(func() { d.open(path) }) }}, true
	case "save":
		if strings.HasPrefix("as", rest) || strings.HasPrefix("the sheet as svg a report", rest) || strings.HasPrefix("the arrow table", rest) {
			return sentence{}, false
		}
		return sentence{does: "Save as " + rest, run: func() { d.saveTo(path, func() {}) }}, true
	case "svg":
		return sentence{does: "Save the sheet as " + rest, run: func() { d.saveSVG(path) }}, true
	case "arrows":
		return sentence{does: "Save the arrow table as " + rest, run: func() { d.saveArrows(path) }}, true
	case "report":
		return sentence{does: "Save a report as " + rest, run: func() { d.saveReport(path) }}, true
	}
	return sentence{}, false
}

// path reads a file's place: from the home folder, or from the study's.
func (d *desk) path(text string) string {
	text = strings.Trim(text, `"'`)
	if home, err := os.UserHomeDir(); err == nil && strings.HasPrefix(text, "~/") {
		return filepath.Join(home, text[2:])
	}
	if filepath.IsAbs(text) || d.view.Path == "" {
		return text
	}
	return filepath.Join(filepath.Dir(d.view.Path), text)
}

// variableSentence reads a verb with the names of variables: "hold soil,
// pesticide", "exposure hedge", "bind bees bees_per_trap", "compare 40 to 90".
func (d *desk) variableSentence(verb, rest string) sentence {
	names := splitList(strings.ReplaceAll(rest, " and ", ", "))
	known := func() (string, bool) {
		for _, n := range names {
			if d.view.Study.Variable(n) == nil {
				return n, false
			}
		}
		return "", true
	}
	each := func(does string, run func(id string)) sentence {
		if who, ok := known(); !ok {
			return sentence{wrong: "There is no variable " + who + "."}
		}
		return sentence{does: does + " " + orNone(names), run: func() {
			for _, n := range names {
				run(n)
			}
		}}
	}
	switch verb {
	case "hold":
		if _, ok := known(); !ok {
			return sentence{} // "Hold what the reading says" is a command
		}
		return each("Hold", func(id string) { d.hold(id, true) })
	case "free":
		return each("Leave free", func(id string) { d.hold(id, false) })
	case "exposure":
		return each("Make the exposure", d.setExposure)
	case "outcome":
		return each("Make the outcome", d.setOutcome)
	case "select", "show":
		if _, ok := known(); !ok {
			return sentence{}
		}
		return sentence{does: "Pick " + orNone(names), run: func() {
			d.choose(scene.Selection{Nodes: names})
			d.editor.Reveal(names[0])
		}}
	case "unmeasured", "measured":
		return each("Mark as "+verb, func(id string) {
			d.changeVariable(id, func(v *study.Variable) { v.Unmeasured = verb == "unmeasured" })
		})
	case "variable":
		return sentence{does: "Add " + orNone(names), run: func() {
			if d.do(study.TypeArrows{Rival: d.rival(), Text: strings.Join(names, "\n")}) {
				d.showAll()
			}
		}}
	case "compare":
		from, to, ok := strings.Cut(rest, " to ")
		if !ok {
			return sentence{wrong: "Say two values: compare 40 to 90"}
		}
		return sentence{does: "Compare " + from + " → " + to, run: func() { d.contrast(from, to) }}
	case "as":
		for _, as := range []string{study.Difference, study.Ratio} {
			if rest == as {
				return sentence{does: "Ask for the " + as, run: func() { d.changeQuestion(func(q *study.Question) { q.As = as }) }}
			}
		}
	case "bind":
		id, col, ok := strings.Cut(rest, " ")
		if !ok || d.view.Study.Variable(id) == nil {
			return sentence{wrong: "Say a variable and a column: bind bees bees_per_trap"}
		}
		return sentence{does: "Bind " + id + " to " + col, run: func() { d.bind(id, strings.TrimSpace(strings.TrimPrefix(strings.TrimSpace(col), "to "))) }}
	case "rival":
		if r := d.view.Study.Rival(rest); r != nil {
			return sentence{does: "Show " + rest, run: func() { d.session.ShowRival(rest) }}
		}
	case "paint":
		for _, k := range []scene.PaintKind{scene.EffectPaint, scene.LearnedPaint, scene.FitPaint, scene.TrustPaint} {
			if strings.HasSuffix(rest, string(k)) && d.view.Result != nil {
				return sentence{does: "Paint " + string(k), run: func() { d.setPaint(k) }}
			}
		}
	}
	return sentence{}
}

// find opens the finder.
func (d *desk) find() { d.kit.finder(d.win.Canvas(), d.commands, d.sentenceOf, d.places) }

// mostPlaces is how many variables the finder offers at once.
const mostPlaces = 6

// places are the variables whose name or label has a word that begins as typed;
// running one picks it and brings it into view.
func (d *desk) places(typed string) []finding {
	want := strings.ToLower(strings.TrimSpace(typed))
	if want == "" {
		return nil
	}
	var out []finding
	for _, v := range d.view.Study.Variables {
		words := strings.FieldsFunc(strings.ToLower(v.ID+" "+v.Label), func(r rune) bool { return r == ' ' || r == '_' })
		begins := strings.HasPrefix(strings.ToLower(v.ID), want) || strings.HasPrefix(strings.ToLower(v.Label), want)
		for _, w := range words {
			begins = begins || strings.HasPrefix(w, want)
		}
		if !begins {
			continue
		}
		label := "Go to " + v.ID
		if v.Label != "" && v.Label != v.ID {
			label += ", " + v.Label
		}
		out = append(out, finding{label: label, run: func() {
			d.frame.unfold("right")
			d.choose(pickNode(v.ID))
			d.editor.Reveal(v.ID)
			d.win.Canvas().Focus(d.editor)
		}})
		if len(out) == mostPlaces {
			break
		}
	}
	return out
}
