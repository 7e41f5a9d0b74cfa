package session

import (
	"context"
	"errors"

	"arrowroot/app/fit"
	"arrowroot/compile/study"
	"arrowroot/infer"
)

// Seed is used for every fit of the window, so that a study gives the same
// draws to everyone who opens it.
const Seed = 1

// Fit fits the present rival for the present question behind the window. A fit
// that is already going on goes on.
func (s *Session) Fit() {
	if s.running != nil {
		return
	}
	var q *study.Question
	if a := s.asked(); a != nil {
		copied := *a
		q = &copied
	}
	req := fit.Request{Study: s.study, Rival: s.rival, Question: q, Seed: Seed}
	if l := s.table(); l != nil {
		req.Table = l.table
	}
	ctx, cancel := context.WithCancel(context.Background())
	s.run++
	run, rival := s.run, s.rival
	s.running, s.fitError, s.progress = cancel, nil, infer.Progress{Warming: true}
	go func() {
		result, err := fit.Run(ctx, req, func(p infer.Progress) {
			s.post(func() {
				if s.run == run && s.running != nil {
					p.Cancelling = ctx.Err() != nil
					s.progress = p
					s.show()
				}
			})
		})
		s.post(func() {
			cancel()
			if s.run != run {
				return
			}
			s.running = nil
			if err != nil && !errors.Is(err, context.Canceled) {
				s.fitError = err
			}
			if result != nil {
				results := make(map[string]*fit.Result, len(s.results)+1)
				for k, v := range s.results {
					results[k] = v
				}
				results[rival] = result
				s.results = results
				s.deriveStandings()
				s.check(rival)
			}
			s.show()
		})
	}()
	s.show()
}

// Cancel stops the fit; the draws it has are kept.
func (s *Session) Cancel() {
	if s.running != nil {
		s.running()
		s.progress.Cancelling = true
	}
}
