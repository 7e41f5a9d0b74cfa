package model

import "testing"

func TestShow(t *testing.T) {
	for _, k := range []Kind{Full, Held, Crude} {
		m := build(t, hedgerows(), beesQuestion(), traps(), k)
		s := m.Statement()
		t.Log("\n" + s.String())
		for _, l := range s.Typed {
			t.Log(l)
		}
		t.Logf("%+v", m.Rows.Lost)
	}
}
