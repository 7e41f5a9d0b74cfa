package session

import (
	"context"
	"sync"

	"arrowroot/app/findings"
	"arrowroot/app/fit"
	"arrowroot/compile/causal"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A reader reads the arrows of one rival behind the window and hands over what
// is ready first: paths and verdict at once, section after section later. A
// newer one stops it.
type reader struct {
	cancel  context.CancelFunc
	stopped bool          // by the window
	first   chan struct{} // something is ready

	mu   sync.Mutex
	next *read // ready and not yet taken
	sent bool  // the window has been told

	now *read // what the window has; nil = nothing yet
}

// A read is one stage of a reading: how far it has come.
type read struct {
	findings *findings.Findings
	reading  *causal.Reading
}

// readSources is everything that a reading is made from.
type readSources struct {
	diagram  *study.Diagram
	study    *study.Study // see readStudy
	question *study.Question
	table    *table.Table
}

// look starts a reader. shows is called on the window's goroutine when there is
// more, unless the reader was stopped.
func (s *Session) look(doc *study.Study, rival string, q *study.Question, t *table.Table, shows func()) *reader {
	ctx, cancel := context.WithCancel(context.Background())
	r := &reader{cancel: cancel, first: make(chan struct{}, 1)}
	ask := findings.AskOf(q)
	go func() {
		defer cancel()
		ask.Incomplete = incomplete(doc, t)
		var reading *causal.Reading
		each := func(f *findings.Findings) {
			if ctx.Err() != nil {
				return
			}
			if reading == nil {
				reading = readingOf(f, q)
			}
			r.put(&read{f, reading}, func() {
				s.post(func() {
					if !r.stopped && r.take() {
						shows()
					}
				})
			})
		}
		f, err := findings.Stream(ctx, doc, rival, ask, findings.Limits{}, each)
		if err == nil && f != nil {
			each(f)
		}
	}()
	return r
}

// stop keeps a reader from showing anything more; nil is no reader.
func (r *reader) stop() {
	if r != nil {
		r.stopped = true
		r.cancel()
	}
}

// readingOf is what the verdict strip and the sheet's marks show of findings.
func readingOf(f *findings.Findings, q *study.Question) *causal.Reading {
	if f.Reading == nil {
		return fit.Read(f.Graph, q, 0, 0)
	}
	r := *f.Reading
	r.Verdict = f.Verdict
	return &r
}

// put keeps the newest stage; tell is called unless the window knows already
// that something waits.
func (r *reader) put(stage *read, tell func()) {
	r.mu.Lock()
	told := r.sent
	r.next, r.sent = stage, true
	r.mu.Unlock()
	select {
	case r.first <- struct{}{}:
	default:
	}
	if !told {
		tell()
	}
}

// take makes the newest stage the present one; false if there is none newer.
func (r *reader) take() bool {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.sent = false
	if r.next == nil {
		return false
	}
	r.now, r.next = r.next, nil
	return true
}

// incomplete lists the variables of which the table lacks entries.
func incomplete(doc *study.Study, t *table.Table) []string {
	var ids []string
	for _, v := range doc.Variables {
		if c := t.Column(v.Column); v.Column != "" && c != nil && c.Missing > 0 {
			ids = append(ids, v.ID)
		}
	}
	return ids
}

// readStudy gives last where doc differs from it only in what no reading
// depends on: where nodes stand, laws of other rivals, questions, notes.
func readStudy(doc, last *study.Study) *study.Study {
	if last == nil || last == doc || len(doc.Rivals) != len(last.Rivals) ||
		!samePointers(doc.Variables, last.Variables) || !samePointers(doc.Data, last.Data) || !samePointers(doc.Plates, last.Plates) {
		return doc
	}
	for i, r := range doc.Rivals {
		if was := last.Rivals[i]; r.Name != was.Name || r.Diagram != was.Diagram {
			return doc
		}
	}
	return last
}

// considered is an edit that a hand is about to make, and what the arrows would
// say after it.
type considered struct {
	edit   study.Edit
	reader *reader
}

func (c *considered) drop() {
	if c != nil {
		c.reader.stop()
	}
}

// Consider reads the rival as it would be after an edit that is not made yet;
// an edit of nil, or one that would be refused, goes back to the rival as it
// is. Until the reading is there the view keeps what it shows.
func (s *Session) Consider(e study.Edit) {
	was := s.consider
	was.drop()
	s.consider = nil
	if e != nil {
		if doc, err := e.Apply(s.study); err == nil && doc != s.study {
			s.consider = &considered{edit: e, reader: s.look(doc, s.rival, s.asked(), s.openTable(), s.show)}
			return
		}
	}
	if was != nil && was.reader.now != nil {
		s.show()
	}
}

// showReading puts into a view what the arrows say.
func (s *Session) showReading(v *View) {
	r := s.derived.reader
	if c := s.consider; c != nil && c.reader.now != nil {
		r, v.Considered = c.reader, c.edit.Label()
	}
	if t := s.derived.tester; t != nil && v.Considered == "" {
		v.Evidence = t.evidence
	}
	if r == nil || r.now == nil {
		return
	}
	v.Findings, v.Reading = r.now.findings, r.now.reading
	v.Graph, v.GraphError = v.Findings.Graph, nil
}
