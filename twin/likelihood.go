package twin

import (
	"math"

	"kindwell/internal/dense"

	"gonum.org/v1/gonum/blas"
)

// leastPivot is the smallest pivot of a covariance matrix of unit variances
// that still counts as positive definite.
const leastPivot = 1e-12

// likelihood evaluates the deviance of
//
//	V = s2 (I + sum over k of theta_k B_k)
//
// with s2 and the fixed effects at their best for given theta, where B_k is the
// k-th of the chosen component matrices less the identity. It is a pure
// function of theta with room to work in; one goroutine may use it at a time.
type likelihood struct {
	*moments
	use       []int // which entries of the layout's kinds are B_1, B_2, ...
	criterion Criterion

	evaluations int
	pivot       float64 // smallest pivot of the last evaluation

	// room to work in
	scratch              []float64
	value                []float64 // per kind: sum of theta_k times its entry
	v, b                 []float64 // size x size
	pb, d                [][]float64
	logDet               float64
	logDet1              []float64
	logDet2              []float64
	cross                []float64   // packed: Z'V^-1 Z
	cross1, cross2       [][]float64 // its derivatives
	factor, solved, work []float64
	beta                 []float64
}

// point is the likelihood at one theta. Derivatives are with respect to theta
// and include the movement of s2 and the fixed effects.
type point struct {
	deviance float64   // -2 ln likelihood, up to constants of data and model
	s2       float64   // variance at theta
	gradient []float64 // m
	hessian  []float64 // m x m
}

func newLikelihood(m *moments, use []int, criterion Criterion) *likelihood {
	k := 0
	for _, s := range m.structures {
		k = max(k, s.size)
	}
	n, w, q := len(use), packed(m.columns), m.columns-1
	l := &likelihood{
		moments: m, use: use, criterion: criterion,
		scratch: m.scratch(),
		value:   make([]float64, len(m.kinds)),
		v:       make([]float64, k*k),
		b:       make([]float64, k*k),
		logDet1: make([]float64, n),
		logDet2: make([]float64, n*n),
		cross:   make([]float64, w),
		factor:  make([]float64, q*q),
		solved:  make([]float64, n*q),
		work:    make([]float64, (n+1)*q*q),
		beta:    make([]float64, q),
	}
	for range use {
		l.pb = append(l.pb, make([]float64, k*k))
		l.d = append(l.d, make([]float64, k*k))
		l.cross1 = append(l.cross1, make([]float64, w))
	}
	for range packed(n) {
		l.cross2 = append(l.cross2, make([]float64, w))
	}
	return l
}

// newPoint returns room for a point.
func (l *likelihood) newPoint() *point {
	m := len(l.use)
	return &point{gradient: make([]float64, m), hessian: make([]float64, m*m)}
}

// at evaluates deviance, gradient and Hessian into p. It reports false, and
// leaves p undefined, when V is not positive definite in every structure.
func (l *likelihood) at(theta []float64, p *point) bool {
	l.evaluations++
	if !l.accumulate(theta) {
		return false
	}
	return l.profile(p)
}

// accumulate sums the log-determinants and the cross-products in the metric of
// V^-1, with their derivatives, over the structures.
func (l *likelihood) accumulate(theta []float64) bool {
	m, w := len(l.use), packed(l.columns)
	for c := range l.kinds {
		l.value[c] = 0
		for k, u := range l.use {
			l.value[c] += theta[k] * l.kinds[c][u]
		}
	}
	l.logDet = 0
	clear(l.logDet1)
	clear(l.logDet2)
	clear(l.cross)
	for k := range m {
		clear(l.cross1[k])
	}
	for k := range l.cross2 {
		clear(l.cross2[k])
	}
	l.pivot = math.Inf(1)
	for i, s := range l.structures {
		size, blocks := s.size, float64(s.blocks())
		v := l.v[:size*size]
		for at, c := range s.kind {
			v[at] = l.value[c]
		}
		for at := 0; at < len(v); at += size + 1 {
			v[at]++
		}
		logDet, pivot := invert(v, size)
		l.pivot = min(l.pivot, pivot)
		if !(pivot > leastPivot) {
			return false
		}
		l.logDet += blocks * logDet
		for k, u := range l.use {
			b := l.b[:size*size]
			for at, c := range s.kind {
				b[at] = l.kinds[c][u]
			}
			multiply(l.pb[k], v, b, size)      // V^-1 B
			multiply(l.d[k], l.pb[k], v, size) // V^-1 B V^-1
			l.logDet1[k] += blocks * trace(l.pb[k], size)
			for j := range k + 1 {
				l.logDet2[k*m+j] -= blocks * traceOfProduct(l.pb[k], l.pb[j], size)
			}
		}
		sums := l.moments.of(i, l.scratch)
		for o, ij := range s.pair {
			at := ij[0]*size + ij[1]
			sum := sums[o*w : (o+1)*w]
			addScaled(l.cross, v[at], sum)
			for k := range m {
				addScaled(l.cross1[k], -l.d[k][at], sum)
			}
		}
		next := 0
		for k := range m {
			for j := range k + 1 {
				l.addSecond(l.cross2[next], k, j, s, sums)
				next++
			}
		}
	}
	return true
}

// manyOrbits is the size from which the products of a structure with many
// orbits are made whole, by a fast product of matrices.
const manyOrbits = 16

// addSecond adds the second derivative of the cross-products by components k
// and j, V^-1 B_k V^-1 B_j V^-1 and its mirror image, over the orbits of s.
func (l *likelihood) addSecond(dst []float64, k, j int, s *structure, sums []float64) {
	size, w := s.size, len(dst)
	whole := size >= manyOrbits && len(s.pair) > size
	if whole {
		multiply(l.b[:size*size], l.pb[k], l.d[j], size)
	}
	for o, ij := range s.pair {
		var second float64
		if whole {
			second = l.b[ij[0]*size+ij[1]] + l.b[ij[1]*size+ij[0]]
		} else {
			second = rowTimesColumn(l.pb[k], l.d[j], ij, size) + rowTimesColumn(l.pb[j], l.d[k], ij, size)
		}
		addScaled(dst, second, sums[o*w:(o+1)*w])
	}
}

// profile turns the sums of accumulate into deviance, gradient and Hessian,
// at the best fixed effects and s2. The first column of the sums is y.
func (l *likelihood) profile(p *point) bool {
	m, q := len(l.use), l.columns-1
	unpackTo(l.factor, l.cross, q)
	if !cholesky(l.factor, q) {
		return false
	}
	copy(l.beta, l.cross[1:1+q])
	solve(l.factor, l.beta, q)
	rss := quadratic(l.cross, l.beta)
	n := float64(l.people)
	if l.criterion == REML {
		n -= float64(q)
	}
	if !(rss > 0) {
		return false
	}
	p.s2 = rss / n
	p.deviance = n*math.Log(p.s2) + l.logDet
	for k := range m {
		// Derivative of X'V^-1 r, and its solution against X'V^-1 X.
		g := l.work[k*q : (k+1)*q]
		crossResidual(g, l.cross1[k], l.beta)
		h := l.solved[k*q : (k+1)*q]
		copy(h, g)
		solve(l.factor, h, q)
		p.gradient[k] = quadratic(l.cross1[k], l.beta)
	}
	next := 0
	for k := range m {
		for j := range k + 1 {
			second := quadratic(l.cross2[next], l.beta)
			for a := range q {
				second -= 2 * l.work[k*q+a] * l.solved[j*q+a]
			}
			h := n*(second/rss-p.gradient[k]*p.gradient[j]/(rss*rss)) + l.logDet2[k*m+j]
			p.hessian[k*m+j], p.hessian[j*m+k] = h, h
			next++
		}
	}
	for k := range m {
		p.gradient[k] = n*p.gradient[k]/rss + l.logDet1[k]
	}
	if l.criterion == REML {
		l.restrict(p)
	}
	return true
}

// restrict adds ln|X'V^-1 X| and its derivatives.
func (l *likelihood) restrict(p *point) {
	m, q := len(l.use), l.columns-1
	for a := range q {
		p.deviance += 2 * math.Log(l.factor[a*q+a])
	}
	first := func(k int) []float64 { return l.work[k*q*q : (k+1)*q*q] }
	for k := range m {
		solveMatrix(first(k), l.factor, l.cross1[k], q)
		p.gradient[k] += trace(first(k), q)
	}
	next := 0
	second := l.work[m*q*q:]
	for k := range m {
		for j := range k + 1 {
			solveMatrix(second, l.factor, l.cross2[next], q)
			h := trace(second, q) - traceOfProduct(first(k), first(j), q)
			p.hessian[k*m+j] += h
			if j != k {
				p.hessian[j*m+k] += h
			}
			next++
		}
	}
}

// invert replaces the symmetric v by its inverse and returns the logarithm of
// its determinant and its smallest pivot; v is destroyed when that pivot is
// not positive.
func invert(v []float64, k int) (logDet, pivot float64) {
	pivot = math.Inf(1)
	for p := range k {
		d := v[p*k+p]
		pivot = min(pivot, d)
		if !(d > leastPivot) {
			return 0, min(pivot, 0)
		}
		logDet += math.Log(d)
		d = 1 / d
		row := v[p*k : (p+1)*k]
		row[p] = 1
		for j := range row {
			row[j] *= d
		}
		for i := range k {
			if i == p {
				continue
			}
			f := v[i*k+p]
			if f == 0 {
				continue
			}
			other := v[i*k : (i+1)*k]
			other[p] = 0
			for j, x := range row {
				other[j] -= f * x
			}
		}
	}
	return logDet, pivot
}

// largestLoop is the size up to which plain loops beat a call of the dense
// kernels.
const largestLoop = 24

// multiply sets dst to x times y, all k x k.
func multiply(dst, x, y []float64, k int) {
	if k > largestLoop {
		dense.Default().Dgemm(blas.NoTrans, blas.NoTrans, k, k, k, 1, x, k, y, k, 0, dst, k)
		return
	}
	for i := range k {
		row := dst[i*k : (i+1)*k]
		clear(row)
		for t, f := range x[i*k : (i+1)*k] {
			if f == 0 {
				continue
			}
			for j, g := range y[t*k : (t+1)*k] {
				row[j] += f * g
			}
		}
	}
}

func trace(x []float64, k int) float64 {
	var t float64
	for i := range k {
		t += x[i*k+i]
	}
	return t
}

func traceOfProduct(x, y []float64, k int) float64 {
	var t float64
	for i := range k {
		for j, f := range x[i*k : (i+1)*k] {
			t += f * y[j*k+i]
		}
	}
	return t
}

// rowTimesColumn is entry ij of x times y.
func rowTimesColumn(x, y []float64, ij [2]int, k int) float64 {
	var t float64
	for s, f := range x[ij[0]*k : (ij[0]+1)*k] {
		t += f * y[s*k+ij[1]]
	}
	return t
}

func addScaled(dst []float64, f float64, x []float64) {
	if f == 0 {
		return
	}
	for i, v := range x {
		dst[i] += f * v
	}
}
