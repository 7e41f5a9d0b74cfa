package session

import (
	"context"
	"reflect"
	"time"

	"arrowroot/compile/graph"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// derived is what follows from the document, with what it was made from: a
// part is made again only if one of its sources is another pointer.
type derived struct {
	diagram   *study.Diagram
	variables []*study.Variable

	graph      *graph.Graph
	graphError error
	reader     *reader // of the present sources; nil without a graph
	readOf     readSources
	tester     *tester // of what it found; nil without data
	critic     *critic // of the present sources; nil without a graph

	model       *model.Model
	problems    []model.Problem
	statement   *model.Statement
	fingerprint string
	modelOf     modelSources
	checking    bool // the model of the present document is on its way

	modelRev int // of the newest work sent out
}

// modelSources is everything that a checked model is made from.
type modelSources struct {
	diagram  *study.Diagram
	study    *study.Study // see modelStudy
	question *study.Question
	table    *table.Table
}

// patience is how long an edit waits for all that it changes before showing
// without it: shorter than a hand can feel.
const patience = 40 * time.Millisecond

func (s *Session) derive() {
	d := &s.derived
	r := s.study.Rival(s.rival)
	if r == nil {
		d.reader.stop()
		d.tester.stop()
		*d = derived{modelRev: d.modelRev + 1}
		return
	}
	if d.diagram != r.Diagram || !samePointers(d.variables, s.study.Variables) {
		d.diagram, d.variables = r.Diagram, s.study.Variables
		d.graph, d.graphError = s.study.Graph(s.rival)
	}
	late, cancel := context.WithTimeout(context.Background(), patience)
	defer cancel()
	s.deriveReading()
	s.deriveModel(late)
	if r := d.reader; r != nil && r.now == nil {
		select {
		case <-r.first:
		case <-late.Done():
		}
		r.take()
	}
	s.deriveMistakes(late)
	s.deriveEvidence()
	s.deriveStandings()
}

// readMore shows that the reading has come further.
func (s *Session) readMore() {
	late, cancel := context.WithTimeout(context.Background(), patience)
	defer cancel()
	s.deriveMistakes(late)
	s.deriveEvidence()
	s.show()
}

// deriveReading sends out a reading of the present sources.
func (s *Session) deriveReading() {
	d := &s.derived
	sources := readSources{diagram: d.diagram, study: readStudy(s.study, d.readOf.study), question: s.asked(), table: s.openTable()}
	if d.reader != nil && sources == d.readOf {
		return
	}
	d.reader.stop()
	d.reader, d.readOf = nil, sources
	if d.graph != nil {
		d.reader = s.look(s.study, s.rival, sources.question, sources.table, s.readMore)
	}
}

// checked is what a background check of the model gives.
type checked struct {
	model       *model.Model
	problems    []model.Problem
	statement   *model.Statement
	fingerprint string
}

func (s *Session) deriveModel(late context.Context) {
	d := &s.derived
	t := s.openTable()
	if l := s.table(); l != nil && t == nil && l.err == nil {
		return // still being read: derive comes again
	}
	sources := modelSources{diagram: d.diagram, study: modelStudy(s.study, s.rival, d.modelOf.study), question: s.asked(), table: t}
	if sources == d.modelOf {
		return
	}
	d.modelOf = sources
	d.checking = true
	d.modelRev++
	rev, doc, rival := d.modelRev, s.study, s.rival
	var q study.Question
	if sources.question != nil {
		q = *sources.question
	}
	out := make(chan checked, 1)
	go func() {
		var c checked
		c.model, c.problems = model.Build(doc, rival, q, t, model.Full)
		if c.model != nil {
			c.statement = c.model.Statement()
			c.fingerprint = c.model.Fingerprint()
		}
		out <- c
	}()
	wait(s, late, out, func(c checked) bool {
		if s.derived.modelRev != rev {
			return false
		}
		s.derived.checking = false
		s.derived.model, s.derived.problems = c.model, c.problems
		s.derived.statement, s.derived.fingerprint = c.statement, c.fingerprint
		return true
	})
}

// openTable is the present rival's table; nil while there is none.
func (s *Session) openTable() *table.Table {
	if l := s.table(); l != nil {
		return l.table
	}
	return nil
}

// modelStudy gives last where doc differs from it only in what no model reads:
// where nodes stand, other rivals, questions.
func modelStudy(doc *study.Study, rival string, last *study.Study) *study.Study {
	if last == nil || last == doc {
		return doc
	}
	a, b := doc.Rival(rival), last.Rival(rival)
	if a != nil && b != nil && a.Diagram == b.Diagram && samePointers(doc.Variables, last.Variables) && samePointers(doc.Plates, last.Plates) && samePointers(doc.Data, last.Data) {
		return last
	}
	return doc
}

// wait gives quick work a moment to arrive before the view is shown; slow work
// comes through post and shows itself. keep stores the value and reports
// whether it is still wanted.
func wait[T any](s *Session, late context.Context, out <-chan T, keep func(T) bool) {
	select {
	case v := <-out:
		keep(v)
	case <-late.Done():
		go func() {
			v := <-out
			s.post(func() {
				if keep(v) {
					s.show()
				}
			})
		}()
	}
}

func samePointers[T any](a, b []*T) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

func sameQuestion(a, b *study.Question) bool {
	return a == b || a != nil && b != nil && reflect.DeepEqual(*a, *b)
}
