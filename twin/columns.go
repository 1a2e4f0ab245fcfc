package twin

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// aliasTolerance is the share of a covariate's deviation that must be left
// once the covariates before it are taken out; below it the covariate says
// nothing of its own.
const aliasTolerance = 1e-7

// columns are a variable and its covariates as the likelihood sees them: the
// variable less its least-squares fit, in units of the deviation that is left;
// a constant; and covariates that are centred, orthogonal and of unit variance.
// None of this changes the likelihood but by a known constant, and all of it
// keeps digits.
type columns struct {
	rows  []float64 // people x (2 + kept covariates): y, 1, covariates
	width int
	scale float64 // deviation of the variable that is left over

	names []string // all covariates
	kept  []int    // those that are no combination of earlier ones
	notes []string // per covariate: why it was dropped, "" when kept

	mean   []float64 // of the kept covariates
	factor []float64 // kept x kept, upper: covariate less mean = orthogonal columns x factor
	center float64   // mean of the variable
	slopes []float64 // least-squares slopes on the orthogonal columns, own units of the variable
}

// newColumns checks and prepares a variable (n values) and its covariates
// (n x q, or nil).
func newColumns(y []float64, covariates *mat.Dense, names []string) (*columns, error) {
	n, q := len(y), 0
	if covariates != nil {
		var r int
		if r, q = covariates.Dims(); r != n {
			panic(fmt.Sprintf("twin: %d rows of covariates for %d people", r, n))
		}
	}
	if len(names) != q {
		panic(fmt.Sprintf("twin: %d names for %d covariates", len(names), q))
	}
	for i, v := range y {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, &NotFiniteError{Row: i}
		}
	}
	c := &columns{names: append([]string(nil), names...), notes: make([]string, q)}
	var basis [][]float64
	for j := range q {
		x := mat.Col(nil, j, covariates)
		for i, v := range x {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				return nil, &NotFiniteError{Column: names[j], Row: i}
			}
		}
		mean, spread := centre(x)
		if !(spread > 1e-12*math.Abs(mean)) {
			c.notes[j] = "constant"
			continue
		}
		onto := project(x, basis)
		_, left := centre(x)
		if !(left > aliasTolerance*spread) {
			c.notes[j] = "a combination of the constant and earlier covariates"
			continue
		}
		for i := range x {
			x[i] /= left
		}
		c.kept = append(c.kept, j)
		c.mean = append(c.mean, mean)
		c.factor = append(c.factor, append(onto, left)...) // packed by column for now
		basis = append(basis, x)
	}
	c.factor = squareUpper(c.factor, len(c.kept))

	rest := append([]float64(nil), y...)
	mean, spread := centre(rest)
	c.center = mean
	c.slopes = project(rest, basis)
	_, c.scale = centre(rest)
	if !(spread > 1e-13*math.Abs(mean)) || !(c.scale > 1e-10*spread) {
		return nil, ErrNoVariance
	}
	c.width = 2 + len(basis)
	c.rows = make([]float64, n*c.width)
	for i := range n {
		row := c.rows[i*c.width:]
		row[0], row[1] = rest[i]/c.scale, 1
		for j, x := range basis {
			row[2+j] = x[i]
		}
	}
	return c, nil
}

// centre takes the mean out of x and returns it with the deviation (divisor n)
// that is left. The mean is taken twice, which mends the rounding of large ones.
func centre(x []float64) (mean, deviation float64) {
	n := float64(len(x))
	for range 2 {
		var t float64
		for _, v := range x {
			t += v
		}
		t /= n
		for i := range x {
			x[i] -= t
		}
		mean += t
	}
	var ss float64
	for _, v := range x {
		ss += v * v
	}
	return mean, math.Sqrt(ss / n)
}

// project takes out of x what the basis (orthogonal, unit variance, centred)
// explains and returns the slopes. It is done twice for full accuracy.
func project(x []float64, basis [][]float64) []float64 {
	slopes := make([]float64, len(basis))
	n := float64(len(x))
	for range 2 {
		for k, b := range basis {
			var t float64
			for i, v := range x {
				t += v * b[i]
			}
			t /= n
			for i := range x {
				x[i] -= t * b[i]
			}
			slopes[k] += t
		}
	}
	return slopes
}

// squareUpper lays columns of 1, 2, ... k entries out as a k x k upper
// triangle.
func squareUpper(byColumn []float64, k int) []float64 {
	upper := make([]float64, k*k)
	at := 0
	for b := range k {
		for a := 0; a <= b; a++ {
			upper[a*k+b] = byColumn[at]
			at++
		}
	}
	return upper
}

// logDet is ln|det| of the map from own covariates to the likelihood's.
func (c *columns) logDet() float64 {
	var t float64
	k := len(c.kept)
	for a := range k {
		t += math.Log(c.factor[a*k+a])
	}
	return t
}

// FixedEffect is one coefficient of the mean.
type FixedEffect struct {
	Term string // "intercept" or the name of a covariate
	// Estimate is in units of the variable per unit of the covariate; the
	// intercept is the mean where all covariates are 0. NaN when dropped.
	Estimate float64
	SE       float64 // generalised least squares at the estimated variances; NaN when dropped
	// Dropped says why a covariate has no coefficient ("constant", ...); it is
	// empty for the others.
	Dropped string
}

// effects returns the fixed effects on their own scale. beta are coefficients
// of the likelihood's columns, factor is the Cholesky factor of X'V^-1 X, and
// s2 the variance, in the likelihood's units.
func (c *columns) effects(beta, factor []float64, s2 float64) []FixedEffect {
	k := len(c.kept)
	q := k + 1
	// Rows of map: own coefficients as combinations of the likelihood's
	// constant and orthogonal slopes.
	to := make([]float64, q*q)
	to[0] = 1
	for b := range k {
		// Solve factor x = unit vector b from below: column b of its inverse.
		x := to[0:]
		for a := b; a >= 0; a-- {
			t := 0.0
			if a == b {
				t = 1
			}
			for s := a + 1; s <= b; s++ {
				t -= c.factor[a*k+s] * x[(1+s)*q+1+b]
			}
			x[(1+a)*q+1+b] = t / c.factor[a*k+a]
			to[1+b] -= c.mean[a] * x[(1+a)*q+1+b]
		}
	}
	inner := make([]float64, q)
	inner[0] = c.center + c.scale*beta[0]
	for a := range k {
		inner[1+a] = c.slopes[a] + c.scale*beta[1+a]
	}
	all := make([]FixedEffect, 1+len(c.names))
	all[0].Term = "intercept"
	for j, name := range c.names {
		all[1+j] = FixedEffect{Term: name, Estimate: math.NaN(), SE: math.NaN(), Dropped: c.notes[j]}
	}
	row := make([]float64, q)
	for r := range q {
		copy(row, to[r*q:(r+1)*q])
		e := &all[0]
		if r > 0 {
			e = &all[1+c.kept[r-1]]
		}
		e.Estimate = 0
		for a, t := range row {
			e.Estimate += t * inner[a]
		}
		solved := append([]float64(nil), row...)
		solve(factor, solved, q)
		var v float64
		for a, t := range row {
			v += t * solved[a]
		}
		e.SE = c.scale * math.Sqrt(s2*v)
	}
	return all
}
