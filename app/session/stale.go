package session

import (
	"arrowroot/app/fit"
	"arrowroot/compile/model"
	"arrowroot/compile/study"
)

// A standing is the model that a rival would be fitted by now, for a rival that
// has a result and is not on the sheet.
type standing struct {
	of          modelSources
	fingerprint string // "" = there is no such model
	checking    bool   // it is on its way
	rev         int
}

// deriveStandings checks the models of fitted rivals that are not on the sheet
// behind the window, where one of their sources is another.
func (s *Session) deriveStandings() {
	for name, r := range s.results {
		rival := s.study.Rival(name)
		if name == s.rival || rival == nil || !sameQuestion(r.Question, s.asked()) {
			continue // the sheet's own is derived; an answer to another question is stale as it is
		}
		at := s.standings[name]
		if at == nil {
			at = &standing{}
			s.standings[name] = at
		}
		sources := modelSources{diagram: rival.Diagram, study: modelStudy(s.study, name, at.of.study), question: s.asked()}
		if data := s.study.DataOf(name); data != nil {
			l := s.tables[data.Name]
			if l == nil || l.table == nil && l.err == nil {
				continue // still being read: derive comes again
			}
			sources.table = l.table
		}
		if sources == at.of {
			continue
		}
		at.of, at.checking = sources, true
		at.rev++
		rev, doc := at.rev, s.study
		var q study.Question
		if sources.question != nil {
			q = *sources.question
		}
		go func() {
			fingerprint := ""
			if m, _ := model.Build(doc, name, q, sources.table, model.Full); m != nil {
				fingerprint = m.Fingerprint()
			}
			s.post(func() {
				if s.standings[name] == at && at.rev == rev {
					at.fingerprint, at.checking = fingerprint, false
					s.show()
				}
			})
		}()
	}
}

// staleResults names the rivals whose last result is not what their present
// model and question would give. Until a model is checked nobody knows.
func (s *Session) staleResults() map[string]bool {
	stale := make(map[string]bool)
	for name, r := range s.results {
		switch at := s.standings[name]; {
		case !sameQuestion(r.Question, s.asked()):
			stale[name] = true
		case name == s.rival:
			stale[name] = s.derived.modelIsOther(r)
		case at != nil:
			stale[name] = !at.checking && at.fingerprint != r.Fingerprint
		}
	}
	return stale
}

// modelIsOther reports whether a result is not of the model of the present
// rival.
func (d *derived) modelIsOther(r *fit.Result) bool {
	return !d.checking && d.fingerprint != r.Fingerprint
}
