package predict

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack"
	"gonum.org/v1/gonum/lapack/lapack64"
)

// closeEigenvalues is the gap of two eigenvalues, relative to their sum and
// the least penalty, below which partial fractions would lose digits.
const closeEigenvalues = 1e-6

// A spectrum is one training set decomposed: what turns sums over people into
// the squared errors of every penalty, for any number of trait columns at once.
//
// With X the standardised training measures, X'X = V diag(mu) V', z = V'X'y,
// g(l) = 1/(mu + l) and P the held-out measures times V, the prediction at
// penalty l is P (g(l) * z). With t the held-out target, w = P't and H = P'P,
// its squared error is
//
//	t't - 2 sum_i g_i z_i w_i + sum_ij g_i g_j z_i z_j H_ij ,
//
// and since g_i g_j = (g_i - g_j) / (mu_j - mu_i), for all penalties at once
//
//	t't + sum_i g_i z_i v_i + sum_i g_i^2 z_i u_i ,
//	v = 2 (G z - w),  G_ij = H_ij / (mu_j - mu_i),  u_i = H_ii z_i .
//
// A close pair (closeEigenvalues) is left out of G and put into u, with
// (g_i^2 + g_j^2) / 2 for g_i g_j: an error of half the squared gap.
//
// z, v and the coefficients of the confounds are linear in sums over people,
// so that each is one matrix times the columns. The sums are of two kinds:
// cross-products of the sources with the traits (fewer measures than training
// people), or the rows of the traits themselves (rows is true), where X'X is
// replaced by XX' = U diag(mu) U', z = U'y and P = held X' U.
type spectrum struct {
	rows bool
	r, k int            // directions, basis columns
	mu   []float64      // eigenvalues, ascending
	z    blas64.General // r + k rows: z and the coefficients c, of the training sums
	v    blas64.General // r + k rows, of the held-out sums and then the training sums

	// An inner fold also has:
	people float64        // held out
	sum    blas64.General // L x (2r + k): the penalties' weights of the products of z, v and u
	u      blas64.General // H_ij of the close pairs and the diagonal, r x r; or 0 x 0 and
	diag   []float64      // H_ii with
	pairs  []closePair    // the close pairs, when they are few

	// An outer fold also has:
	directions blas64.General // V', r x active measures; not kept when V is X'U
	p          blas64.General // held-out rows x r
	cHeld      blas64.General // held-out rows x k
	h          blas64.General // r x r
	total      []float64      // sum of p's rows
	shrink     []float64      // r x L, g of every direction and penalty
	within     blas64.General // C'C of the training people
}

type closePair struct {
	i, j int
	h    float64
}

// decompose makes the spectrum of a geometry, of an outer fold or an inner
// one. Sums are rows of traits, or cross-products of the sources; the latter
// needs at least as many training people as measures.
func (s *sources) decompose(g *geometry, rows bool, penalties []float64, outer bool) (*spectrum, error) {
	sp := &spectrum{rows: rows, k: s.k, people: float64(g.held.Rows)}
	var err error
	var toZ, toC, heldW, heldC blas64.General // see assemble
	dual := g.x.Cols > g.x.Rows
	if dual {
		if sp.mu, toZ, err = eigen(product(plain, g.x, turned, g.x)); err != nil {
			return nil, err
		}
		sp.p = product(plain, product(plain, g.held, turned, g.x), turned, toZ)
	} else {
		var v blas64.General // V', a direction a row
		if sp.mu, v, err = eigen(product(turned, g.x, plain, g.x)); err != nil {
			return nil, err
		}
		sp.p = product(plain, g.held, turned, v)
		sp.directions = v
		if rows {
			toZ = product(plain, v, turned, g.x)
		} else {
			toZ = s.throughSources(g, v)
		}
	}
	sp.r = len(sp.mu)
	if rows {
		toC = product(plain, g.inverse, turned, g.c)
		heldW, heldC = transposed(sp.p), transposed(g.cHeld)
	} else {
		toC, heldC = newTable(s.k, s.all.Cols), newTable(s.k, s.all.Cols)
		for i := range s.k {
			copy(row(toC, i), row(g.inverse, i))
			heldC.Data[i*heldC.Stride+i] = 1
		}
		heldW = toZ
	}
	sp.h = product(turned, sp.p, plain, sp.p)
	sp.assemble(g, toZ, toC, heldW, heldC, penalties, outer)
	if outer {
		sp.keepOuter(g, penalties)
	} else {
		sp.p, sp.h, sp.directions = blas64.General{}, blas64.General{}, blas64.General{}
	}
	return sp, nil
}

// throughSources returns the r x m matrix that turns cross-products of the
// sources with a trait, summed over any people, into those of the
// standardised measures in the directions v.
func (s *sources) throughSources(g *geometry, v blas64.General) blas64.General {
	scaled := newTable(v.Rows, v.Cols)
	for i := range v.Rows {
		from, to := row(v, i), row(scaled, i)
		for a := range to {
			to[a] = from[a] / g.sd[a]
		}
	}
	m := newTable(v.Rows, s.all.Cols)
	multiplyTo(columnsOf(m, 0, s.k), -1, plain, scaled, turned, g.coefficient, 0)
	for i := range v.Rows {
		from, to := row(scaled, i), row(m, i)[s.k:]
		for a, j := range g.active {
			to[j] = from[a]
			if marker := s.fixed.markerOf[j]; marker >= 0 {
				to[s.p+marker] = from[a] * g.fill[a]
			}
		}
	}
	return m
}

// assemble makes z (r + k rows: z and the confounds' coefficients c, of the
// training sums) and v (of the held-out sums, then the training sums). Its
// last k rows are such that sum_j c_j v_j is the part of t't without y'y.
//
// toZ and toC give z and c from training sums; heldW and heldC give P'y and
// C'y of the held-out people from their sums.
func (sp *spectrum) assemble(g *geometry, toZ, toC, heldW, heldC blas64.General, penalties []float64, outer bool) {
	r, k := sp.r, sp.k
	train, held := toC.Cols, heldC.Cols
	sp.z = newTable(r+k, train)
	for i := range r {
		copy(row(sp.z, i), row(toZ, i))
	}
	for i := range k {
		copy(row(sp.z, r+i), row(toC, i))
	}
	pc := product(turned, sp.p, plain, g.cHeld)
	sp.v = newTable(r+k, held+train)
	ofHeld, ofTrain := columnsOf(sp.v, 0, held), columnsOf(sp.v, held, held+train)
	factor := -2.0
	if outer {
		factor = 1 // w itself
	} else {
		fractions := sp.partialFractions(penalties)
		multiplyTo(rowsOf(ofTrain, 0, r), 2, plain, fractions, plain, rowsOf(sp.z, 0, r), 0)
	}
	for i := range r {
		from, to := row(heldW, i), row(ofHeld, i)
		for j, v := range from {
			to[j] = factor * v
		}
	}
	multiplyTo(rowsOf(ofTrain, 0, r), -factor, plain, pc, plain, toC, 1)
	for i := range k {
		from, to := row(heldC, i), row(ofHeld, r+i)
		for j, v := range from {
			to[j] = -2 * v
		}
	}
	multiplyTo(rowsOf(ofTrain, r, r+k), 1, plain, product(turned, g.cHeld, plain, g.cHeld), plain, toC, 0)
}

// partialFractions returns G and sets diag, the close pairs and the weights
// of the sums for every penalty.
func (sp *spectrum) partialFractions(penalties []float64) blas64.General {
	r := sp.r
	fractions := newTable(r, r)
	sp.diag = make([]float64, r)
	for i := range r {
		sp.diag[i] = sp.h.Data[i*sp.h.Stride+i]
		for j := i + 1; j < r; j++ {
			h, gap := sp.h.Data[i*sp.h.Stride+j], sp.mu[j]-sp.mu[i]
			if gap < closeEigenvalues*(sp.mu[i]+sp.mu[j]+penalties[0]) {
				sp.pairs = append(sp.pairs, closePair{i, j, h})
				continue
			}
			fractions.Data[i*r+j], fractions.Data[j*r+i] = h/gap, -h/gap
		}
	}
	if len(sp.pairs) > 2*r {
		sp.u = newTable(r, r)
		for i, h := range sp.diag {
			sp.u.Data[i*r+i] = h
		}
		for _, c := range sp.pairs {
			sp.u.Data[c.i*r+c.j], sp.u.Data[c.j*r+c.i] = c.h, c.h
		}
		sp.pairs = nil
	}
	sp.sum = newTable(len(penalties), 2*r+sp.k)
	for l, penalty := range penalties {
		to := row(sp.sum, l)
		for i, mu := range sp.mu {
			g := 1 / (mu + penalty)
			to[i], to[r+sp.k+i] = g/sp.people, g*g/sp.people
		}
		for j := range sp.k {
			to[r+j] = 1 / sp.people
		}
	}
	return fractions
}

func (sp *spectrum) keepOuter(g *geometry, penalties []float64) {
	for _, mu := range sp.mu {
		for _, penalty := range penalties {
			sp.shrink = append(sp.shrink, 1/(mu+penalty))
		}
	}
	sp.cHeld = g.cHeld
	sp.total = make([]float64, sp.r)
	for i := range sp.p.Rows {
		for j, v := range row(sp.p, i) {
			sp.total[j] += v
		}
	}
	sp.within = product(turned, g.c, plain, g.c)
}

// eigen returns the eigenvalues of the symmetric a, ascending, those below 0
// by rounding set to 0, and the eigenvectors as rows. It destroys a.
func eigen(a blas64.General) (values []float64, vectors blas64.General, err error) {
	n := a.Rows
	values = make([]float64, n)
	if n == 0 {
		return values, newTable(0, 0), nil
	}
	symmetric := blas64.Symmetric{N: n, Stride: a.Stride, Data: a.Data, Uplo: blas.Upper}
	work := make([]float64, 1)
	lapack64.Syev(lapack.EVCompute, symmetric, values, work, -1)
	work = make([]float64, int(work[0]))
	if ok := lapack64.Syev(lapack.EVCompute, symmetric, values, work, len(work)); !ok {
		return nil, a, fmt.Errorf("predict: the eigenvalues of a training set of %d columns were not found", n)
	}
	for i := range values {
		values[i] = math.Max(values[i], 0)
	}
	return values, transposed(a), nil
}

func transposed(a blas64.General) blas64.General {
	b := newTable(a.Cols, a.Rows)
	for i := range a.Rows {
		for j, v := range row(a, i) {
			b.Data[j*b.Stride+i] = v
		}
	}
	return b
}
