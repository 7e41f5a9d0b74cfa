package session

import "arrowroot/compile/study"

// ShowQuestion turns to another question of the study, counted from 0.
func (s *Session) ShowQuestion(at int) {
	s.question = at
	s.become(s.study)
}

// AskAnother adds a question to the study and turns to it.
func (s *Session) AskAnother(q study.Question) error {
	if err := s.Do(study.AddQuestion{Question: q}); err != nil {
		return err
	}
	s.ShowQuestion(len(s.study.Questions) - 1)
	return nil
}
