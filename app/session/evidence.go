package session

import (
	"context"

	"arrowroot/compile/causal"
	"arrowroot/compile/evidence"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A tester holds what the arrows promise against the data, once all of it has
// been read.
type tester struct {
	of       *reader
	diagram  *study.Diagram
	table    *table.Table
	cancel   context.CancelFunc
	evidence *evidence.Evidence // nil = still testing, or nothing could be tested
}

func (t *tester) stop() {
	if t != nil {
		t.cancel()
	}
}

// deriveEvidence sends out a test where what the arrows promise is known and
// there are data. What an earlier test of the same arrows found stays until
// the new one is done.
func (s *Session) deriveEvidence() {
	d := &s.derived
	was, r, data := d.tester, d.reader, s.openTable()
	if r == nil || data == nil || r.now == nil || !r.now.findings.Done {
		if was != nil && (r == nil || data == nil || was.diagram != d.diagram) {
			was.stop()
			d.tester = nil
		}
		return
	}
	if was != nil && was.of == r && was.table == data {
		return
	}
	was.stop()
	ctx, cancel := context.WithCancel(context.Background())
	t := &tester{of: r, diagram: d.diagram, table: data, cancel: cancel}
	if was != nil && was.diagram == t.diagram && was.table == t.table {
		t.evidence = was.evidence
	}
	d.tester = t
	f := r.now.findings
	promised := f.Contradictions
	if promised == nil || promised.Basis == nil && promised.LeftOut != "" {
		cancel()
		return // too many variables to say what is promised
	}
	request := evidence.Request{
		Study: s.study, Rival: s.rival, Table: data, Graph: f.Graph, Selected: f.Selected,
		Statements: append([]causal.Independence{}, causal.Pairwise(promised.Basis)...), Question: s.asked(),
	}
	go func() {
		defer cancel()
		found, err := evidence.Test(ctx, request, nil)
		if err != nil || ctx.Err() != nil {
			return
		}
		s.post(func() {
			if s.derived.tester == t {
				t.evidence = found
				s.show()
			}
		})
	}()
}
