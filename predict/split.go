package predict

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// split is one pair of a training set and the people held out of it: an outer
// fold, or an inner fold of one. Both are row numbers of the sources.
type split struct {
	repeat, outer, inner int // inner is -1 for an outer fold
	train, held          []int
}

// geometry is what one training set makes of the measures: filled, residuals
// on the confounds, standardised, and the same map on the held-out people.
type geometry struct {
	x, held     blas64.General // training and held-out rows x active measures
	active      []int          // measures with a weight; the others have 0
	coefficient blas64.General // k x active: of the basis, before standardising
	sd          []float64      // active: after the confounds, divisor n
	fill        []float64      // active: training mean of those who have the measure
	unit        []float64      // active: what 1 of x's sources is in the measure's own units
	inverse     blas64.General // k x k: (C'C)^-1 over the training people
	c, cHeld    blas64.General // basis of the training and the held-out people
	constant    []int          // measures that were constant before the confounds
	explained   []int          // measures of which the confounds left nothing
}

// measure makes the geometry of one split.
func (s *sources) measure(sp *split) (*geometry, error) {
	g := &geometry{c: newTable(len(sp.train), s.k), cHeld: newTable(len(sp.held), s.k)}
	gatherTo(g.c, columnsOf(s.all, 0, s.k), sp.train)
	gatherTo(g.cHeld, columnsOf(s.all, 0, s.k), sp.held)
	triangle, tau, err := s.factor(g.c, sp)
	if err != nil {
		return nil, err
	}
	g.inverse = invertSquare(triangle)

	m, err := s.of(sp)
	if err != nil {
		return nil, err
	}
	before := m.fillActive(g, sp)
	g.coefficient = regressOut(g.x, g.c, triangle, tau)
	multiplyTo(g.held, -1, plain, g.cHeld, plain, g.coefficient, 1)
	g.standardise(before)
	return g, nil
}

// factor returns the QR factors of the basis over the training people.
func (s *sources) factor(c blas64.General, sp *split) (triangle blas64.General, tau []float64, err error) {
	if c.Rows <= s.k {
		return triangle, nil, fmt.Errorf("predict: %d training people in %s are too few for a constant and %d confounds", c.Rows, place(sp.repeat, sp.outer, sp.inner), s.k-1)
	}
	triangle = newTable(c.Rows, s.k)
	copy(triangle.Data, c.Data)
	tau = make([]float64, s.k)
	work := make([]float64, 1)
	lapack64.Geqrf(triangle, tau, work, -1)
	work = make([]float64, max(int(work[0]), s.k))
	lapack64.Geqrf(triangle, tau, work, len(work))
	whole := math.Sqrt(float64(s.all.Rows))
	for j := range s.k {
		if math.Abs(triangle.Data[j*triangle.Stride+j]) < emptyTraining*whole {
			return triangle, nil, &ConfoundError{Confound: s.confound[j-1], Repeat: sp.repeat, Outer: sp.outer, Inner: sp.inner}
		}
	}
	return triangle, tau, nil
}

// fillActive copies the measures of both sides of the split, missing values
// filled, without those that are constant in the training set. It returns
// each one's sum of squares about the training mean.
func (m *measured) fillActive(g *geometry, sp *split) (before []float64) {
	fill, squares := m.inTraining(sp.train)
	for j, square := range squares {
		if square <= m.grain[j]*m.grain[j]*float64(len(sp.train)) {
			g.constant = append(g.constant, j)
			continue
		}
		before = append(before, square)
		g.active = append(g.active, j)
		g.fill, g.unit = append(g.fill, fill[j]), append(g.unit, m.scale[j])
	}
	take := func(rows []int) blas64.General {
		x := newTable(len(rows), len(g.active))
		for i, r := range rows {
			to := row(x, i)
			for a, j := range g.active {
				v, missing := m.at(r, j)
				if to[a] = v; missing {
					to[a] = fill[j]
				}
			}
		}
		return x
	}
	g.x, g.held = take(sp.train), take(sp.held)
	return before
}

// inTraining returns the mean of every measure over the training people who
// have it, and their sum of squares about it: exactly 0 when all values are
// equal.
func (m *measured) inTraining(train []int) (means, squares []float64) {
	p := len(m.markerOf)
	means, squares = make([]float64, p), make([]float64, p)
	first, count := make([]float64, p), make([]float64, p)
	varies := make([]bool, p)
	each := func(visit func(j int, v float64)) {
		for _, r := range train {
			for j := range p {
				if v, missing := m.at(r, j); !missing {
					visit(j, v)
				}
			}
		}
	}
	each(func(j int, v float64) {
		if count[j] == 0 {
			first[j] = v
		}
		varies[j] = varies[j] || v != first[j]
		count[j]++
		means[j] += v
	})
	for j := range means {
		if means[j] /= count[j]; !varies[j] {
			means[j] = first[j]
		}
	}
	each(func(j int, v float64) { squares[j] += (v - means[j]) * (v - means[j]) })
	return means, squares
}

// regressOut replaces x by its residuals on c, whose QR factors are given, and
// returns the coefficients. A second pass takes out what rounding left in the
// first.
func regressOut(x, c, triangle blas64.General, tau []float64) blas64.General {
	k := c.Cols
	total := newTable(k, x.Cols)
	if x.Cols == 0 {
		return total
	}
	right := newTable(x.Rows, x.Cols)
	work := make([]float64, 1)
	lapack64.Ormqr(blas.Left, blas.Trans, triangle, tau, right, work, -1)
	work = make([]float64, max(int(work[0]), x.Cols))
	for range 2 {
		copy(right.Data, x.Data)
		lapack64.Ormqr(blas.Left, blas.Trans, triangle, tau, right, work, len(work))
		step := rowsOf(right, 0, k)
		lapack64.Trtrs(blas.NoTrans, upper(triangle), step)
		multiplyTo(x, -1, plain, c, plain, step, 1)
		for i, v := range step.Data[:k*step.Stride] {
			total.Data[i] += v
		}
	}
	return total
}

func upper(triangle blas64.General) blas64.Triangular {
	return blas64.Triangular{N: triangle.Cols, Stride: triangle.Stride, Data: triangle.Data, Uplo: blas.Upper, Diag: blas.NonUnit}
}

// invertSquare returns (R'R)^-1 of the upper triangle R.
func invertSquare(triangle blas64.General) blas64.General {
	k := triangle.Cols
	inverse := newTable(k, k)
	for i := range k {
		inverse.Data[i*k+i] = 1
	}
	lapack64.Trtrs(blas.Trans, upper(triangle), inverse)
	lapack64.Trtrs(blas.NoTrans, upper(triangle), inverse)
	return inverse
}

// standardise divides by the training deviations and drops the measures of
// which the confounds left nothing.
func (g *geometry) standardise(before []float64) {
	n := float64(g.x.Rows)
	after := squares(g.x)
	var keep []int
	for a := range g.active {
		if after[a] < explained*explained*before[a] {
			g.explained = append(g.explained, g.active[a])
		} else {
			keep = append(keep, a)
		}
	}
	g.x, g.held, g.coefficient = pick(g.x, keep), pick(g.held, keep), pick(g.coefficient, keep)
	g.active, g.fill, g.unit = choose(g.active, keep), choose(g.fill, keep), choose(g.unit, keep)
	g.sd = make([]float64, len(keep))
	for a, from := range keep {
		g.sd[a] = math.Sqrt(after[from] / n)
		scaleColumn(g.x, a, 1/g.sd[a])
		scaleColumn(g.held, a, 1/g.sd[a])
	}
}

// pick returns the named columns, a itself when they are all.
func pick(a blas64.General, columns []int) blas64.General {
	if len(columns) == a.Cols {
		return a
	}
	b := newTable(a.Rows, len(columns))
	for i := range a.Rows {
		from, to := row(a, i), row(b, i)
		for c, j := range columns {
			to[c] = from[j]
		}
	}
	return b
}

func choose[T any](a []T, at []int) []T {
	b := make([]T, len(at))
	for i, j := range at {
		b[i] = a[j]
	}
	return b
}
