// Package mistake catches what published guidance calls mistakes while a rival
// is being drawn and a question asked of it: a held mediator, rows chosen by an
// effect of the outcome, an arrow against time. Each is one sentence with the
// user's own names, the path that makes it one, repairs as edits, and a key
// under which it can be set aside with a reason. On a sound diagram with a
// sound question it is silent.
//
// Read the files in this order: mistake.go (what is handed over), look.go (what
// is looked at), then a file for each kind of mistake: held.go (M1, M2),
// rows.go (M3), time.go (M4, M19), instrument.go (M5), doubt.go (M6),
// contrast.go (M7), reason.go (M8), record.go (M17). Beside them stand
// coefficient.go (M9: what each coefficient of a law may be read as) and
// unroll.go (a refused cycle drawn as a chain in time).
//
// What the arrows say is package causal's to find; nothing here decides it.
package mistake

import (
	"slices"

	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A Code names a kind of mistake for good. Codes are never given another
// meaning.
type Code string

// The kinds of mistake.
const (
	HeldMediator     Code = "M1"
	HeldCollider     Code = "M2"
	ChosenRows       Code = "M3"
	AfterExposure    Code = "M4"
	HeldInstrument   Code = "M5"
	NothingHidden    Code = "M6"
	NoContrast       Code = "M7"
	HeldForNoReason  Code = "M8"
	RecordTakenExact Code = "M17"
	AgainstTime      Code = "M19"
)

// Severity says how loudly a mistake is told.
type Severity int

// The severities, the gravest first.
const (
	StopAndAsk Severity = iota // the conclusion would be wrong: ask before a fit
	Warn
	Note
)

// A Mistake is one finding. Variables are named by ID throughout.
type Mistake struct {
	Code     Code
	Severity Severity
	Key      string   // code and variables, parted by spaces; study.Dismissal refers to it
	Sentence string   // what is wrong
	Why      string   // the reason in a sentence
	Path     []string // the path on the sheet that makes it one; nil = none
	Nodes    []string // the variables that it is about
	Repairs  []Repair // each can be applied to the study that was looked at
	Aside    string   // the user's reason for setting it aside; only from SetAside
}

// A Repair is one click: words for it and the edit that it makes.
type Repair struct {
	Words string
	Edit  study.Edit
}

// Find gives the mistakes of one rival under a question, the gravest first, but
// for those that the user has set aside. A nil question leaves what the arrows
// alone can tell. Reading may be one of the same rival and question that is at
// hand, t the data that the rival is fitted to; both may be nil.
func Find(s *study.Study, rival string, q *study.Question, reading *causal.Reading, t *table.Table) []Mistake {
	return slices.DeleteFunc(All(s, rival, q, reading, t), func(m Mistake) bool {
		return s.Dismissal(rival, m.Key) != nil
	})
}

// SetAside gives those mistakes that the user has set aside, each with the
// reason given. It takes what Find takes.
func SetAside(s *study.Study, rival string, q *study.Question, reading *causal.Reading, t *table.Table) []Mistake {
	var aside []Mistake
	for _, m := range All(s, rival, q, reading, t) {
		if d := s.Dismissal(rival, m.Key); d != nil {
			m.Aside = d.Why
			aside = append(aside, m)
		}
	}
	return aside
}

// All gives every mistake, whether it was set aside or not, the gravest first.
func All(s *study.Study, rival string, q *study.Question, reading *causal.Reading, t *table.Table) []Mistake {
	l := newLook(s, rival, q, reading, t)
	if l == nil {
		return nil
	}
	var all []Mistake
	for _, find := range finders {
		all = append(all, find(l)...)
	}
	for i := range all {
		all[i].Repairs = slices.DeleteFunc(all[i].Repairs, func(r Repair) bool {
			next, err := r.Edit.Apply(s)
			return err != nil || next == s
		})
	}
	slices.SortStableFunc(all, func(a, b Mistake) int { return int(a.Severity) - int(b.Severity) })
	return all
}

// finders look for one kind of mistake each. Among mistakes of one severity
// those of earlier finders come first.
var finders = [...]func(*look) []Mistake{
	againstTime, heldMistakes, chosenRows, afterExposure, heldInstruments, noContrast, recordsTakenExact, heldForNoReason, nothingHidden,
}

// String is a word or three for the severity.
func (s Severity) String() string { return [...]string{"stop and ask", "warning", "note"}[s] }
