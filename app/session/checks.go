package session

import (
	"context"
	"time"

	"arrowroot/app/fit"
	"arrowroot/compile/replicate"
)

// A checker holds whether a result can reproduce its data: being found out, or
// found.
type checker struct {
	of      *fit.Result
	cancel  context.CancelFunc
	checks  *replicate.Checks // nil = not yet, or stopped
	err     error
	running bool
	share   float64 // done
}

func (c *checker) stop() {
	if c != nil && c.running {
		c.cancel()
		c.running = false
	}
}

// tellChecks is how often progress is told at most.
const tellChecks = 100 * time.Millisecond

// Check checks the present rival's result behind the window; a check that is
// already going on goes on. A fit that has finished is checked by itself.
func (s *Session) Check() { s.check(s.rival) }

func (s *Session) check(rival string) {
	r, was := s.results[rival], s.checkers[rival]
	if r == nil || was != nil && was.of == r && (was.running || was.checks != nil) {
		return
	}
	was.stop()
	ctx, cancel := context.WithCancel(context.Background())
	c := &checker{of: r, cancel: cancel, running: true}
	s.checkers[rival] = c
	mine := func() bool { return s.checkers[rival] == c && c.running }
	go func() {
		told := time.Now()
		found, err := r.Full.Replicate(ctx, r.Seed, func(done, of int) {
			if now := time.Now(); now.Sub(told) > tellChecks {
				told = now
				s.post(func() {
					if mine() {
						c.share = float64(done) / float64(max(of, 1))
						s.show()
					}
				})
			}
		})
		s.post(func() {
			cancel()
			if mine() {
				c.checks, c.err, c.running = found, err, false
				s.show()
			}
		})
	}()
	s.show()
}

// StopChecks stops the check of the present rival's result.
func (s *Session) StopChecks() {
	s.checkers[s.rival].stop()
	s.show()
}

// stopCheckers stops and forgets all of them.
func (s *Session) stopCheckers() {
	for _, c := range s.checkers {
		c.stop()
	}
	s.checkers = make(map[string]*checker)
}

// showChecks tells what is known of the result that is shown.
func (s *Session) showChecks(v *View) {
	if c := s.checkers[s.rival]; c != nil && c.of == v.Result {
		v.Checks, v.Checking, v.ChecksDone, v.ChecksError = c.checks, c.running, c.share, c.err
	}
}
