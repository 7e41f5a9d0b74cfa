package infer

import (
	"crypto/sha256"
	"encoding/binary"
	"math"
	"math/rand/v2"
)

// A random is a generator whose draws are fixed by its key for good: ChaCha8
// for bits, and uniforms and normals made here, so that a Go release cannot
// change what a seed gives.
type random struct {
	source rand.ChaCha8
	spare  float64
	kept   bool
}

// newRandom keys a generator by (seed, chain, purpose, name).
func newRandom(seed uint64, chain int, purpose, name string) *random {
	return &random{source: *rand.NewChaCha8(Key(seed, chain, purpose, name))}
}

// Key is the seed key of SEMANTICS F: the SHA-256 of seed, chain, purpose and
// name, each ended so that no two keys run together.
func Key(seed uint64, chain int, purpose, name string) [32]byte {
	text := binary.LittleEndian.AppendUint64(nil, seed)
	text = binary.LittleEndian.AppendUint64(text, uint64(chain))
	text = append(text, purpose...)
	text = append(text, 0)
	text = append(text, name...)
	return sha256.Sum256(text)
}

// uniform is in [0, 1) with 53 bits.
func (r *random) uniform() float64 { return float64(r.source.Uint64()>>11) * 0x1p-53 }

// normal is standard normal by the polar method (Marsaglia & Bray 1964).
func (r *random) normal() float64 {
	if r.kept {
		r.kept = false
		return r.spare
	}
	for {
		u, v := 2*r.uniform()-1, 2*r.uniform()-1
		s := u*u + v*v
		if s >= 1 || s == 0 {
			continue
		}
		f := math.Sqrt(-2 * math.Log(s) / s)
		r.spare, r.kept = v*f, true
		return u * f
	}
}
