package twin

import (
	"math"
)

// normalUpper is the upper tail of the standard normal distribution. It keeps
// its digits far out, unlike one minus the distribution function.
func normalUpper(z float64) float64 { return math.Erfc(z/math.Sqrt2) / 2 }

// Mixture holds the weights of chi-square distributions with 0, 1 and 2
// degrees of freedom, as they arise when the null hypothesis puts variances at
// their bound of 0 (Self & Liang 1987).
type Mixture [3]float64

// Tail is the probability of a statistic of x or more. The chi-square with no
// degrees of freedom is the constant 0, so that Tail(0) is 1.
func (m Mixture) Tail(x float64) float64 {
	if x <= 0 {
		return 1
	}
	return m[1]*math.Erfc(math.Sqrt(x/2)) + m[2]*math.Exp(-x/2)
}

// Critical is the value that the statistic reaches or exceeds with probability
// p. It is 0 when p is at least the probability of more than 0.
func (m Mixture) Critical(p float64) float64 {
	if !(p > 0) {
		panic("twin: no critical value of a probability that is not positive")
	}
	if p >= m[1]+m[2] {
		return 0
	}
	high := 1.0
	for m.Tail(high) > p {
		high *= 2
	}
	x, _ := brent(func(x float64) (float64, error) { return math.Log(m.positive(x) / p), nil },
		0, math.Log(m.positive(0)/p), high, math.Log(m.positive(high)/p), 1e-12)
	return x
}

// positive is Tail, continuous at 0 from above.
func (m Mixture) positive(x float64) float64 {
	return m[1]*math.Erfc(math.Sqrt(x/2)) + m[2]*math.Exp(-x/2)
}

// halfHalf is the null distribution for one variance at its bound.
var halfHalf = Mixture{0.5, 0.5, 0}

// mixture returns the null distribution of the likelihood ratio of E against a
// model with one or two further components on this sample.
//
// At E the estimates are normal with the efficient information
// I_kl = tr(B_k B_l)/2 of the sample's pairs; bounded at 0 they are its
// projection on the quadrant of non-negative variances. The quadrant's angle in
// that metric, arccos of I_kl scaled to a correlation, over 2 pi is the weight
// of two degrees of freedom; that of one is a half.
func mixture(lik *likelihood) Mixture {
	m := len(lik.use)
	if m == 1 {
		return halfHalf
	}
	if m != 2 {
		panic("twin: mixture weights are known for one and two components")
	}
	lik.accumulate(make([]float64, m))
	n := float64(lik.people)
	information := func(j, k int) float64 {
		// The total variance, profiled out, takes its part of the diagonal.
		return -lik.logDet2[max(j, k)*m+min(j, k)] - lik.logDet1[j]*lik.logDet1[k]/n
	}
	rho := information(0, 1) / math.Sqrt(information(0, 0)*information(1, 1))
	w := math.Acos(max(-1, min(1, rho))) / (2 * math.Pi)
	return Mixture{0.5 - w, 0.5, w}
}
