package session

import (
	"context"
	"errors"
	"maps"

	"arrowroot/app/fit"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// Prediction is how well the rivals predict: being found out, or found.
type Prediction struct {
	Running    bool
	Progress   fit.ComparingProgress
	Comparison *fit.Comparison // the last; nil = none yet
	Stale      bool            // it belongs to an earlier version
	Error      error           // why there is none: of an *fit.Incomparable the reasons
}

// A contest is a comparison of the rivals, on its way or over.
type contest struct {
	study      *study.Study
	question   *study.Question
	table      *table.Table
	cancel     context.CancelFunc
	running    bool
	progress   fit.ComparingProgress
	comparison *fit.Comparison
	last       *contest // what is shown until this one is over
	err        error
}

func (c *contest) stop() {
	if c != nil && c.running {
		c.cancel()
		c.running = false
	}
}

// Compare scores rivals, all of them where none is named, by how well they
// predict the question's outcome, behind the window. A comparison that is going on goes on. Fits that the
// window has made are not made again where nothing has changed.
func (s *Session) Compare(rivals ...string) {
	if s.contest != nil && s.contest.running {
		return
	}
	ctx, cancel := context.WithCancel(context.Background())
	c := &contest{study: s.study, question: s.asked(), table: s.openTable(), cancel: cancel, running: true, last: s.contest.shown()}
	req := fit.CompareRequest{Study: c.study, Rivals: rivals, Question: c.question, Table: c.table, Seed: Seed, Have: maps.Clone(s.results)}
	s.contest = c
	mine := func() bool { return s.contest == c && c.running }
	go func() {
		found, err := fit.Compare(ctx, req, func(p fit.ComparingProgress) {
			s.post(func() {
				if mine() {
					c.progress = p
					s.show()
				}
			})
		})
		s.post(func() {
			cancel()
			if !mine() {
				return
			}
			c.running, c.comparison = false, found
			if !errors.Is(err, context.Canceled) {
				c.err, c.last = err, nil
			}
			s.show()
		})
	}()
	s.show()
}

// StopCompare stops the comparison: it leaves nothing.
func (s *Session) StopCompare() {
	s.contest.stop()
	s.show()
}

// shown is the contest whose comparison is to be seen; nil if there is none.
func (c *contest) shown() *contest {
	switch {
	case c == nil:
		return nil
	case c.comparison != nil || c.err != nil:
		return c
	}
	return c.last
}

// showPrediction puts the comparison into a view.
func (s *Session) showPrediction(v *View) {
	c := s.contest
	if c == nil {
		return
	}
	v.Prediction.Running, v.Prediction.Progress = c.running, c.progress
	if c = c.shown(); c != nil {
		v.Prediction.Comparison, v.Prediction.Error, v.Prediction.Stale = c.comparison, c.err, s.outdated(c)
	}
}

// outdated reports whether something that a comparison was made from has
// changed since: where nodes stand has no part in it.
func (s *Session) outdated(c *contest) bool {
	if c.table != s.openTable() || !sameQuestion(c.question, s.asked()) || len(c.study.Rivals) != len(s.study.Rivals) ||
		!samePointers(c.study.Variables, s.study.Variables) || !samePointers(c.study.Plates, s.study.Plates) || !samePointers(c.study.Data, s.study.Data) {
		return true
	}
	for _, was := range c.study.Rivals {
		if now := s.study.Rival(was.Name); now == nil || now.Diagram != was.Diagram {
			return true
		}
	}
	return false
}
