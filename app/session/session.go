// Package session owns the live document: its history, what is out of date,
// and the work that goes on behind the window. Everything here is called on
// one goroutine, the window's; workers get immutable values and hand one back
// through post.
//
// Read session.go (edits and history), derive.go (what follows from the
// document), reading.go (what follows from the arrows alone), evidence.go (what
// the data say of it), mistakes.go (what may be wrong in the drawing), run.go
// (fits), stale.go (which of them are out of date), checks.go (can a fit
// reproduce its data?), compare.go (which rival predicts better?), files.go
// (open, save, recover).
package session

import (
	"context"
	"maps"
	"path/filepath"

	"arrowroot/app/findings"
	"arrowroot/app/fit"
	"arrowroot/compile/causal"
	"arrowroot/compile/evidence"
	"arrowroot/compile/graph"
	"arrowroot/compile/mistake"
	"arrowroot/compile/model"
	"arrowroot/compile/replicate"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
)

// A View is what the window shows: one moment of the session, never changed.
type View struct {
	Rev   int
	Study *study.Study
	Path  string // "" = never saved
	Dirty bool
	Undo  string // label of what Undo would take back; "" = nothing
	Redo  string

	Rival      *study.Rival
	Question   *study.Question // nil = none yet
	QuestionAt int

	Graph      *graph.Graph // nil with GraphError
	GraphError error
	Reading    *causal.Reading    // nil while it is being computed
	Findings   *findings.Findings // all that has been read so far; nil as Reading
	Evidence   *evidence.Evidence // what the data say of it; nil without data, and until it is known
	Considered string             // label of the edit that a hand is about to make: Graph, Reading and Findings are as after it; "" = none
	Mistakes   []mistake.Mistake  // of this rival and question, the gravest first, but for those set aside
	Aside      []mistake.Mistake  // those set aside, with the reason
	Table      *table.Table       // of the present rival; nil = none, or still being read
	DataError  error
	Model      *model.Model // nil where problems do not allow one
	Problems   []model.Problem
	Statement  *model.Statement

	Running      bool
	Progress     infer.Progress
	Result       *fit.Result // of this rival and question; nil = not fitted
	Stale        bool        // Result belongs to an earlier version
	FitError     error
	Checks       *replicate.Checks // whether Result can reproduce its data; nil = not known
	Checking     bool              // that is being found out
	ChecksDone   float64           // share of it
	ChecksError  error
	Results      map[string]*fit.Result // last result of each rival
	StaleResults map[string]bool        // those of Results that belong to an earlier version
	Prediction   Prediction             // of the rivals, by the question's outcome

	Recovered *study.Study // work that an earlier session left unsaved; nil = none
	Notice    string       // one sentence about what just happened; "" = nothing
}

// A Session is one open document.
type Session struct {
	post      func(func())
	listeners []func(*View)
	view      *View
	rev       int

	study    *study.Study
	saved    *study.Study
	path     string
	history  []moment
	future   []moment
	rival    string
	question int

	derived   derived
	consider  *considered
	tables    map[string]*loaded
	results   map[string]*fit.Result
	standings map[string]*standing // of fitted rivals that are not on the sheet
	checkers  map[string]*checker  // of fitted rivals
	contest   *contest             // of the rivals; nil = none yet
	running   context.CancelFunc
	run       int
	progress  infer.Progress
	fitError  error

	recovered *study.Study
	recovery  *recovery
	notice    string
}

// A moment is a study on the way, with the edit that left it.
type moment struct {
	study *study.Study
	edit  study.Edit
	rival string
	asked int
}

// New starts a session on an empty study. post runs a function on the
// window's goroutine.
func New(post func(func())) *Session {
	s := &Session{post: post, tables: make(map[string]*loaded), results: make(map[string]*fit.Result)}
	s.recovery = newRecovery()
	s.replace(study.New(), "")
	return s
}

// Close stops what still goes on behind the window.
func (s *Session) Close() {
	s.Cancel()
	s.contest.stop()
	s.stopCheckers()
	s.derived.reader.stop()
	s.derived.tester.stop()
	s.consider.drop()
	s.recovery.stop()
}

// Subscribe calls f with every new view, on the window's goroutine, and once
// at once.
func (s *Session) Subscribe(f func(*View)) {
	s.listeners = append(s.listeners, f)
	f(s.View())
}

// View is the present moment.
func (s *Session) View() *View { return s.view }

// Do applies an edit. On an error nothing has changed.
func (s *Session) Do(e study.Edit) error {
	next, err := e.Apply(s.study)
	if err != nil {
		return err
	}
	if next == s.study {
		return nil
	}
	if e, ok := e.(study.RenameRival); ok && s.results[e.Old] != nil {
		s.results = maps.Clone(s.results) // views keep theirs; the old name stays for undo
		s.results[e.New] = s.results[e.Old]
	}
	if n := len(s.history); n > 0 && len(s.future) == 0 {
		if m, ok := s.history[n-1].edit.(study.Merger); ok {
			if joined, ok := m.Merge(e); ok {
				s.history[n-1].edit = joined
				s.become(next)
				return nil
			}
		}
	}
	s.history = append(s.history, moment{s.study, e, s.rival, s.question})
	s.future = nil
	if e, ok := e.(study.RenameRival); ok && s.rival == e.Old {
		s.rival = e.New
	}
	s.become(next)
	return nil
}

// EndGesture keeps the next edit from merging with the last: a drag is over.
func (s *Session) EndGesture() {
	if n := len(s.history); n > 0 {
		s.history[n-1].edit = labelled{s.history[n-1].edit}
	}
}

// labelled hides Merge.
type labelled struct{ study.Edit }

// Undo takes the last edit back.
func (s *Session) Undo() { s.travel(&s.history, &s.future) }

// Redo does again what Undo took back.
func (s *Session) Redo() { s.travel(&s.future, &s.history) }

func (s *Session) travel(from, to *[]moment) {
	n := len(*from)
	if n == 0 {
		return
	}
	m := (*from)[n-1]
	*from = (*from)[:n-1]
	*to = append(*to, moment{s.study, m.edit, s.rival, s.question})
	s.rival, s.question = m.rival, m.asked
	s.become(m.study)
}

// ShowRival turns to another rival.
func (s *Session) ShowRival(name string) {
	s.rival = name
	s.become(s.study)
}

// SetQuestion changes the present question, or adds the first one.
func (s *Session) SetQuestion(q study.Question) error {
	if len(s.study.Questions) == 0 {
		return s.Do(study.AddQuestion{Question: q})
	}
	return s.Do(study.ChangeQuestion{At: s.question, To: q})
}

// replace puts another document in place of this one; its history is its own.
// Work on it that was never saved is offered.
func (s *Session) replace(doc *study.Study, path string) {
	s.Cancel()
	s.contest.stop()
	s.contest = nil
	s.run++ // a fit still on its way belongs to the old document
	s.running = nil
	s.history, s.future = nil, nil
	s.stopCheckers()
	s.results, s.standings = make(map[string]*fit.Result), make(map[string]*standing)
	s.fitError, s.notice = nil, ""
	s.recovered = s.recovery.find(path, doc)
	s.saved, s.path = doc, path
	s.rival, s.question = "", 0
	s.become(doc)
}

// become makes a study the present one and derives what follows from it.
func (s *Session) become(doc *study.Study) {
	s.study = doc
	if s.study.Rival(s.rival) == nil && len(doc.Rivals) > 0 {
		s.rival = doc.Rivals[0].Name
	}
	s.question = min(max(s.question, 0), max(len(doc.Questions)-1, 0))
	s.recovery.note(s)
	s.consider.drop()
	s.consider = nil
	s.derive()
	s.show()
}

// asked is the present question; nil if there is none.
func (s *Session) asked() *study.Question {
	if s.question < len(s.study.Questions) {
		return s.study.Questions[s.question]
	}
	return nil
}

// show makes a new view and tells everyone.
func (s *Session) show() {
	s.rev++
	v := &View{
		Rev: s.rev, Study: s.study, Path: s.path, Dirty: s.study != s.saved,
		Rival: s.study.Rival(s.rival), Question: s.asked(), QuestionAt: s.question,
		Graph: s.derived.graph, GraphError: s.derived.graphError,
		Model: s.derived.model, Problems: s.derived.problems, Statement: s.derived.statement,
		Running: s.running != nil, Progress: s.progress, FitError: s.fitError,
		Results: s.results, Recovered: s.recovered, Notice: s.notice,
	}
	s.showReading(v)
	s.showMistakes(v)
	s.showPrediction(v)
	if t := s.table(); t != nil {
		v.Table, v.DataError = t.table, t.err
	}
	if n := len(s.history); n > 0 {
		v.Undo = s.history[n-1].edit.Label()
	}
	if n := len(s.future); n > 0 {
		v.Redo = s.future[n-1].edit.Label()
	}
	v.StaleResults = s.staleResults()
	v.Result, v.Stale = s.results[s.rival], v.StaleResults[s.rival]
	s.showChecks(v)
	s.view = v
	for _, f := range s.listeners {
		f(v)
	}
}

// folder is where relative data files are looked for.
func (s *Session) folder() string {
	if s.path == "" {
		return ""
	}
	return filepath.Dir(s.path)
}
