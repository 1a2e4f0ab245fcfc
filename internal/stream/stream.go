package stream

import (
	"crypto/sha256"
	"encoding/binary"
	"math"
	"math/bits"
	"math/rand/v2"
)

// Stream is one reproducible sequence of random numbers. It is not safe for
// use by several goroutines at once; give each piece of work its own.
type Stream struct {
	source *rand.ChaCha8
	spare  float64 // second normal deviate of the last pair
	hasOne bool
}

// New returns the stream named by (seed, purpose, index...). Equal names give
// equal streams; names that differ anywhere, or have another number of
// indices, give unrelated ones: the key is the SHA-256 of the length-prefixed
// name.
func New(seed uint64, purpose string, index ...uint64) *Stream {
	name := make([]byte, 0, 24+len(purpose)+8*len(index))
	name = binary.LittleEndian.AppendUint64(name, seed)
	name = binary.LittleEndian.AppendUint64(name, uint64(len(purpose)))
	name = append(name, purpose...)
	for _, i := range index {
		name = binary.LittleEndian.AppendUint64(name, i)
	}
	return &Stream{source: rand.NewChaCha8(sha256.Sum256(name))}
}

// Uint64 returns 64 uniform random bits.
func (s *Stream) Uint64() uint64 { return s.source.Uint64() }

// IntN returns a uniform integer in [0, n) without bias (multiplication with
// rejection, Lemire 2019). It panics when n is not positive.
func (s *Stream) IntN(n int) int {
	if n <= 0 {
		panic("stream: IntN needs n > 0")
	}
	bound := uint64(n)
	high, low := bits.Mul64(s.Uint64(), bound)
	if low < bound {
		threshold := -bound % bound
		for low < threshold {
			high, low = bits.Mul64(s.Uint64(), bound)
		}
	}
	return int(high)
}

// Float64 returns a uniform number in [0, 1) on a grid of 2^-53.
func (s *Stream) Float64() float64 { return float64(s.Uint64()>>11) * 0x1p-53 }

// Norm returns a standard normal deviate (polar method, Marsaglia & Bray
// 1964). Its last bits depend on the machine's logarithm.
func (s *Stream) Norm() float64 {
	if s.hasOne {
		s.hasOne = false
		return s.spare
	}
	for {
		u, v := 2*s.Float64()-1, 2*s.Float64()-1
		q := u*u + v*v
		if q == 0 || q >= 1 {
			continue
		}
		f := math.Sqrt(-2 * math.Log(q) / q)
		s.spare, s.hasOne = v*f, true
		return u * f
	}
}

// PermTo fills dst with a uniform random arrangement of 0..len(dst)-1.
func (s *Stream) PermTo(dst []int) {
	for i := range dst {
		dst[i] = i
	}
	s.ShuffleTo(dst)
}

// ShuffleTo puts the elements of dst into a uniform random order
// (Fisher-Yates, from the end).
func (s *Stream) ShuffleTo(dst []int) {
	for i := len(dst) - 1; i > 0; i-- {
		j := s.IntN(i + 1)
		dst[i], dst[j] = dst[j], dst[i]
	}
}
