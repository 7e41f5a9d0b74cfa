package causal

import (
	"math/bits"
	"strings"
)

// A bitset is a set of small numbers; sets that meet have the same length.
type bitset []uint64

func newBitset(n int) bitset { return make(bitset, (n+63)/64) }

func (s bitset) add(v int)      { s[v/64] |= 1 << (v % 64) }
func (s bitset) drop(v int)     { s[v/64] &^= 1 << (v % 64) }
func (s bitset) has(v int) bool { return s[v/64]>>(v%64)&1 == 1 }

func (s bitset) and(t bitset) bitset { return s.each(t, func(a, b uint64) uint64 { return a & b }) }
func (s bitset) or(t bitset) bitset  { return s.each(t, func(a, b uint64) uint64 { return a | b }) }
func (s bitset) without(t bitset) bitset {
	return s.each(t, func(a, b uint64) uint64 { return a &^ b })
}

func (s bitset) each(t bitset, f func(a, b uint64) uint64) bitset {
	r := make(bitset, len(s))
	for i := range s {
		r[i] = f(s[i], t[i])
	}
	return r
}

func (s bitset) empty() bool { return s.count() == 0 }

func (s bitset) count() int {
	n := 0
	for _, word := range s {
		n += bits.OnesCount64(word)
	}
	return n
}

// members gives the numbers in order; never nil.
func (s bitset) members() []int {
	all := make([]int, 0, 8)
	for i, word := range s {
		for ; word != 0; word &= word - 1 {
			all = append(all, 64*i+bits.TrailingZeros64(word))
		}
	}
	return all
}

// key makes the set comparable.
func (s bitset) key() string {
	var b strings.Builder
	for _, word := range s {
		for shift := 0; shift < 64; shift += 8 {
			b.WriteByte(byte(word >> shift))
		}
	}
	return b.String()
}
