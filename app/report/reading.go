package report

import (
	"strings"

	"arrowroot/app/findings"
	"arrowroot/compile/evidence"
)

// A section is one subject of the reading.
type section struct {
	Name, Summary, LeftOut string
	Shown                  []line // what the summary rests on
	Folded                 []line // long lists
	Aside                  []line // set aside, with the reason
}

// A line is one finding.
type line struct{ Sentence, Why string }

const shownLines = 12 // of a section; the rest is folded away

// kindsShown are findings that a reader should not have to unfold.
var kindsShown = map[string]bool{
	"set": true, "most precise": true, "cheapest": true, "would help": true, "within groups": true, "good": true, "good with others": true, "bad": true,
	"identified by holding": true, "identified": true, "not identified": true, "front door": true, "instrument": true, "law with carried terms": true,
	"law with carried groups": true, "law of kept rows": true, "reversible": true, "not told apart": true, "told apart": true, "functional": true,
}

// sectionsOf is the reading as the report shows it. Paths have a table of their
// own.
func sectionsOf(f *findings.Findings) []section {
	var all []section
	for _, s := range f.Sections() {
		if s.Name == findings.PathSection {
			continue
		}
		one := section{Name: s.Name, Summary: s.Summary, LeftOut: s.LeftOut}
		for _, finding := range s.Findings {
			switch l := (line{finding.Sentence, finding.Why}); {
			case finding.Dismissed != "":
				one.Aside = append(one.Aside, line{finding.Sentence, finding.Dismissed})
			case finding.Why == "" && strings.Contains(s.Summary, finding.Sentence): // it has been said
			case len(one.Shown) < shownLines && (kindsShown[finding.Kind] || s.Name == findings.RowSection):
				one.Shown = append(one.Shown, l)
			default:
				one.Folded = append(one.Folded, l)
			}
		}
		all = append(all, one)
	}
	return all
}

// evidenceOf is what the data say of the arrows: what they contradict first,
// the rest folded away.
func evidenceOf(e *evidence.Evidence) *section {
	if e == nil {
		return nil
	}
	s := &section{Name: "the arrows against the data", Summary: e.Summary, LeftOut: e.LeftOut}
	for _, f := range e.Findings {
		if f.Verdict == evidence.Contradicted {
			s.Shown = append(s.Shown, line{f.Sentence, ""})
		} else {
			s.Folded = append(s.Folded, line{f.Sentence, ""})
		}
	}
	for _, c := range e.Controls {
		s.Folded = append(s.Folded, line{c.Offer, c.Expected + " " + c.Sentence})
	}
	for _, u := range e.Untested {
		s.Folded = append(s.Folded, line{u.Sentence, u.Reason})
	}
	if e.Method != "" {
		s.Folded = append(s.Folded, line{"How it was tested.", e.Method})
	}
	return s
}
