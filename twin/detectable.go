package twin

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// DetectableA2 returns the smallest share a2 that a one-sided test of A given C
// at level alpha finds with the given power in so many complete pairs, when
// there is no C: r_mz = a2 and r_dz = a2/2. It is NaN when there are no pairs
// of a zygosity.
//
// The non-centrality of the likelihood ratio of CE against ACE is, with N pairs,
// share p of them MZ, and m = p r_mz + (1-p) r_dz,
//
//	N ( ln(1 - m^2) - p ln(1 - r_mz^2) - (1-p) ln(1 - r_dz^2) )
//
// exact for two groups with equal variances (compare Visscher 2004, Twin
// Research 7:505); its root is the mean of the signed root of the ratio, whose
// standard deviation is 1. Only pairs count: siblings and single twins add to
// what this says.
func DetectableA2(mzPairs, dzPairs int, alpha, power float64) float64 {
	if mzPairs == 0 || dzPairs == 0 {
		return math.NaN()
	}
	wanted := distuv.UnitNormal.Quantile(1-alpha) + distuv.UnitNormal.Quantile(power)
	low, high := 0.0, 1.0
	for range 60 {
		a2 := (low + high) / 2
		if pairNonCentrality(float64(mzPairs), float64(dzPairs), a2, a2/2) < wanted*wanted {
			low = a2
		} else {
			high = a2
		}
	}
	return high
}

// pairNonCentrality is the non-centrality of CE against ACE.
func pairNonCentrality(mz, dz, rMZ, rDZ float64) float64 {
	n := mz + dz
	mean := (mz*rMZ + dz*rDZ) / n
	return n*math.Log1p(-mean*mean) - mz*math.Log1p(-rMZ*rMZ) - dz*math.Log1p(-rDZ*rDZ)
}

// sameInTwins is the share of equal pairs from which a variable counts as one
// that twins cannot differ in.
const sameInTwins = 0.95

// SameInTwins says whether a variable is equal in both twins of 95 % or more of
// the complete pairs of a zygosity, as age and birth year are. The likelihood
// of a variance model then has no maximum. values holds one number a person,
// NaN where missing; pairs holds the twin pairs of one zygosity. Without a
// complete pair the answer is no.
func SameInTwins(values []float64, pairs [][2]int) bool {
	complete, equal := 0, 0
	for _, p := range pairs {
		a, b := values[p[0]], values[p[1]]
		if math.IsNaN(a) || math.IsNaN(b) {
			continue
		}
		complete++
		if a == b {
			equal++
		}
	}
	return complete > 0 && float64(equal) >= sameInTwins*float64(complete)
}
