package session

import (
	"context"

	"arrowroot/compile/mistake"
)

// A critic holds the mistakes of the present rival and question, whether set
// aside or not.
type critic struct {
	of    readSources
	found []mistake.Mistake // nil until it is done
}

// deriveMistakes looks for mistakes once the arrows have been read, and gives
// that a moment before the view is shown without them.
func (s *Session) deriveMistakes(late context.Context) {
	d := &s.derived
	r := d.reader
	if r == nil {
		d.critic = nil
		return
	}
	if r.now == nil || d.critic != nil && d.critic.of == d.readOf {
		return
	}
	c := &critic{of: d.readOf}
	d.critic = c
	doc, rival, q, t, reading := s.study, s.rival, s.asked(), s.openTable(), r.now.reading
	out := make(chan []mistake.Mistake, 1)
	go func() { out <- mistake.All(doc, rival, q, reading, t) }()
	select {
	case c.found = <-out:
	case <-late.Done():
		go func() {
			found := <-out
			s.post(func() {
				if s.derived.critic == c {
					c.found = found
					s.show()
				}
			})
		}()
	}
}

// showMistakes puts into a view the mistakes that stand and those set aside.
func (s *Session) showMistakes(v *View) {
	c := s.derived.critic
	if c == nil {
		return
	}
	for _, m := range c.found {
		if d := s.study.Dismissal(s.rival, m.Key); d != nil {
			m.Aside = d.Why
			v.Aside = append(v.Aside, m)
		} else {
			v.Mistakes = append(v.Mistakes, m)
		}
	}
}
