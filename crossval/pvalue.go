package crossval

import "math"

// Tail says which values of a statistic speak against the null hypothesis.
type Tail int

// The tails of a test.
const (
	Upper    Tail = iota // large values
	Lower                // small values
	TwoSided             // values far from 0
)

// String returns the name of the tail in result tables.
func (t Tail) String() string {
	switch t {
	case Upper:
		return "upper"
	case Lower:
		return "lower"
	case TwoSided:
		return "two_sided"
	}
	panic("crossval: unknown tail")
}

// tie is how far below the observed value, in shares of it, another still
// counts as reaching it: sums in another order differ by rounding alone.
const tie = 1e-12

// extremity turns a statistic so that large values speak against the null.
// NaN, a statistic that could not be computed, is beyond every value.
func (t Tail) extremity(value float64) float64 {
	switch t {
	case Lower:
		value = -value
	case TwoSided:
		value = math.Abs(value)
	case Upper:
	default:
		panic("crossval: unknown tail")
	}
	if math.IsNaN(value) {
		return math.Inf(1)
	}
	return value
}

// threshold is the least extremity that counts as reaching an observed one.
func threshold(extremity float64) float64 {
	if math.IsInf(extremity, 0) {
		return extremity
	}
	return extremity - tie*math.Abs(extremity)
}

// PValue returns the share of arrangements, the observed one included, whose
// statistic is at least as extreme as the observed,
//
//	p = (b + 1) / (m + 1),
//
// with b of the m values of null reaching it (Phipson & Smyth 2010). It is
// never 0. For a series of all arrangements, whose null leaves the identity
// out, it is the exact count / M. A value within 1e-12 of the observed,
// relative to it, reaches it.
//
// p is NaN when null is empty or observed is NaN. A NaN in null counts as
// reaching: what could not be computed never makes p smaller.
func PValue(observed float64, null []float64, tail Tail) float64 {
	if len(null) == 0 || math.IsNaN(observed) {
		return math.NaN()
	}
	least := threshold(tail.extremity(observed))
	count := 1
	for _, value := range null {
		if tail.extremity(value) >= least {
			count++
		}
	}
	return float64(count) / float64(len(null)+1)
}
