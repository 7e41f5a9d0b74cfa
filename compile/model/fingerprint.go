package model

import (
	"crypto/sha256"
	"encoding/binary"
	"encoding/hex"
	"math"
)

// Fingerprint is a hash of the statement and the data used: two fits with the
// same fingerprint are fits of the same thing.
func (m *Model) Fingerprint() string {
	h := sha256.New()
	text := func(s string) {
		var n [8]byte
		binary.LittleEndian.PutUint64(n[:], uint64(len(s)))
		h.Write(n[:])
		h.Write([]byte(s))
	}
	s := m.Statement()
	for _, l := range s.Lines {
		text(l.Left)
		text(l.Sign)
		text(l.Right)
	}
	for _, l := range s.Typed {
		text(l)
	}
	var buffer []byte
	for _, v := range m.Variables {
		text(v.ID)
		for _, l := range v.Levels {
			text(l)
		}
		buffer = buffer[:0]
		for _, x := range v.Values {
			buffer = binary.LittleEndian.AppendUint64(buffer, math.Float64bits(x))
		}
		for _, i := range v.Missing {
			buffer = binary.LittleEndian.AppendUint32(buffer, uint32(i))
		}
		h.Write(buffer)
	}
	for _, p := range m.Plates {
		text(p.Name)
		for _, l := range p.Levels {
			text(l)
		}
		buffer = buffer[:0]
		for _, l := range p.Of {
			buffer = binary.LittleEndian.AppendUint32(buffer, uint32(l))
		}
		h.Write(buffer)
	}
	return hex.EncodeToString(h.Sum(nil))
}
