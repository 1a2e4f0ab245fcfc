package predict

import (
	"fmt"
	"math"

	"github.com/sajari/regression"
	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/lapack/lapack64"
	"gonum.org/v1/gonum/mat"
)

const (
	// dependentConfound is the length of a centred confound of length 1, after
	// the confounds before it are taken out, below which nothing of its own is
	// left: about the rounding of its digits.
	dependentConfound = 1e-12
	// emptyTraining is the share of a confound's own part that a training set
	// must hold for its coefficient to be learnt there.
	emptyTraining = 1e-8
	// explained is the share of the deviation below which a column counts as
	// a linear function of the confounds.
	explained = 1e-10
)

// A ConfoundError says that the coefficient of a confound cannot be learnt in
// one training set although the held-out people may need it: there the
// confound is constant or follows from the confounds before it, while among
// all people it does not. A level held by one family only is the usual cause.
type ConfoundError struct {
	Confound             int // column, from 0
	Repeat, Outer, Inner int // from 0; Inner is -1 for the training set of the whole outer fold
}

func (e *ConfoundError) Error() string {
	return fmt.Sprintf("predict: confound %d is constant, or follows from the confounds before it, among the training people of %s, but not among all people; give folds that keep it in every training set, or leave it out", e.Confound, place(e.Repeat, e.Outer, e.Inner))
}

// place names a training set; inner is -1 for that of the whole outer fold.
func place(repeat, outer, inner int) string {
	if inner < 0 {
		return fmt.Sprintf("repeat %d, outer fold %d", repeat, outer)
	}
	return fmt.Sprintf("repeat %d, outer fold %d, inner fold %d", repeat, outer, inner)
}

// Residuals returns the residuals of every trait (n x t) on a constant and the
// confounds (n x c, or nil for the constant alone) over all people: least
// squares by QR on centred and scaled columns. A confound that follows from
// those before it changes nothing and is passed over. A trait of which less
// than 1e-10 of its deviation is left, being a linear function of the
// confounds, has residuals of exactly 0.
//
// NaN and infinite values, and matrices of different height, are errors.
func Residuals(traits, confounds *mat.Dense) (*mat.Dense, error) {
	if err := checkTraits(traits, confounds); err != nil {
		return nil, err
	}
	n, t := traits.Dims()
	basis, _ := confoundBasis(confounds, n)
	left := standardColumns(traits)
	for j, empty := range residualise(left.values, basis) {
		if !empty { // otherwise the column is 0
			scaleColumn(left.values, j, left.scale[j])
		}
	}
	return mat.NewDense(n, t, left.values.Data), nil
}

// ExplainedShare returns, for each trait, the share of its variance that an
// ordinary least-squares regression on the confounds explains in the people it
// is fitted on (R squared, 0 to 1): no prediction of new people, and never
// below 0. A constant trait has NaN. Shapes and errors are those of Residuals.
func ExplainedShare(traits, confounds *mat.Dense) ([]float64, error) {
	if err := checkTraits(traits, confounds); err != nil {
		return nil, err
	}
	n, t := traits.Dims()
	basis, _ := confoundBasis(confounds, n)
	values := standardColumns(traits)
	shares := make([]float64, t)
	if reportable(n, t, basis.Cols-1) {
		for j := range shares {
			share, err := reportedShare(column(values.values, j), basis)
			if err != nil {
				return nil, err
			}
			shares[j] = share
		}
	} else {
		residualise(values.values, basis)
		for j := range shares {
			left := column(values.values, j)
			shares[j] = 1 - blas64.Dot(left, left)/float64(n)
		}
	}
	for j := range shares {
		if values.scale[j] == 0 {
			shares[j] = math.NaN()
			continue
		}
		shares[j] = min(1, max(0, shares[j]))
	}
	return shares, nil
}

// reportable says whether the regression report is safe and affordable: it
// needs independent columns, as those of a basis are, and holds an n x n matrix
// a trait.
func reportable(n, traits, columns int) bool {
	return columns > 0 && n > columns+2 && n <= 4000 && n*n*traits <= 4000*4000
}

// reportedShare regresses one standardised trait on the confounds.
func reportedShare(trait blas64.Vector, basis blas64.General) (float64, error) {
	report := new(regression.Regression)
	for i := range basis.Rows {
		report.Train(regression.DataPoint(trait.Data[i*trait.Inc], row(basis, i)[1:]))
	}
	if err := report.Run(); err != nil {
		return 0, fmt.Errorf("predict: regression on the confounds: %w", err)
	}
	return report.R2, nil
}

func column(a blas64.General, j int) blas64.Vector {
	return blas64.Vector{N: a.Rows, Inc: a.Stride, Data: a.Data[j:]}
}

func checkTraits(traits, confounds *mat.Dense) error {
	n, _ := traits.Dims()
	if n == 0 {
		return fmt.Errorf("predict: no people")
	}
	if err := checkFinite("trait", traits, false); err != nil {
		return err
	}
	return checkConfounds(confounds, n)
}

func checkConfounds(confounds *mat.Dense, people int) error {
	if confounds == nil {
		return nil
	}
	n, c := confounds.Dims()
	if n != people {
		return fmt.Errorf("predict: confounds of %d people, %d are expected", n, people)
	}
	if c+2 > people {
		return fmt.Errorf("predict: %d confounds are too many for %d people", c, people)
	}
	return checkFinite("confound", confounds, false)
}

// standardised holds columns about 0 with mean square 1 over all people, and
// what leads back: value = mean + scale * standardised. A constant column is
// 0 with scale 0.
//
// Shifting and scaling over all people changes no result, for the confounds
// hold a constant and measures are standardised in each training set; it
// keeps digits where sums of squares are subtracted.
type standardised struct {
	values      blas64.General
	mean, scale []float64
	grain       []float64 // the deviation that rounding of the values alone can make, on the new scale
}

// standardColumns passes over NaN, which it leaves as it is.
func standardColumns(a *mat.Dense) standardised {
	n, cols := a.Dims()
	s := standardised{newTable(n, cols), make([]float64, cols), make([]float64, cols), make([]float64, cols)}
	for j := range cols {
		count, sum, largest := 0, 0.0, 0.0
		first, constant := math.NaN(), true
		for i := range n {
			v := a.At(i, j)
			if math.IsNaN(v) {
				continue
			}
			if count == 0 {
				first = v
			}
			constant = constant && v == first
			largest = max(largest, math.Abs(v))
			count++
			sum += v
		}
		if count == 0 || constant {
			s.mean[j] = first
			for i := range n {
				s.values.Data[i*s.values.Stride+j] = a.At(i, j) - first // 0 or NaN
			}
			continue
		}
		mean := sum / float64(count)
		extra, square := 0.0, 0.0
		for i := range n {
			if v := a.At(i, j); !math.IsNaN(v) {
				extra += v - mean
			}
		}
		mean += extra / float64(count)
		for i := range n {
			if v := a.At(i, j); !math.IsNaN(v) {
				square += (v - mean) * (v - mean)
			}
		}
		scale := math.Sqrt(square / float64(count))
		if rounding := 4 * 0x1p-52 * largest; scale <= rounding {
			scale = 0
		} else {
			s.grain[j] = rounding / scale
		}
		s.mean[j], s.scale[j] = mean, scale
		for i := range n {
			v := a.At(i, j)
			switch {
			case math.IsNaN(v):
			case scale == 0:
				v = 0
			default:
				v = (v - mean) / scale
			}
			s.values.Data[i*s.values.Stride+j] = v
		}
	}
	return s
}

// confoundBasis returns a basis (people x k) of the constant and the confounds
// with Q'Q = people * I, the constant 1 first and every other column about 0.
// Column j+1 is what confound kept[j] adds to those before it; confounds that
// are constant or add nothing are not among those kept.
func confoundBasis(confounds *mat.Dense, people int) (basis blas64.General, kept []int) {
	var columns standardised
	if confounds != nil {
		columns = standardColumns(confounds)
		for j, scale := range columns.scale {
			if scale > 0 {
				kept = append(kept, j)
			}
		}
	}
	var q blas64.General
	for {
		q = newTable(people, len(kept))
		for i := range people {
			for c, j := range kept {
				q.Data[i*q.Stride+c] = columns.values.Data[i*columns.values.Stride+j]
			}
		}
		empty := orthonormalise(q)
		if empty < 0 {
			break
		}
		kept = append(kept[:empty:empty], kept[empty+1:]...)
	}
	basis = newTable(people, len(kept)+1)
	root := math.Sqrt(float64(people))
	for i := range people {
		to := row(basis, i)
		to[0] = 1
		for c, v := range row(q, i) {
			to[c+1] = v * root
		}
	}
	return basis, kept
}

// orthonormalise replaces the columns of a, all of equal length, by an
// orthonormal basis in which column j spans with those before it what it
// spanned in a. It returns the first column that follows from those before
// it, or -1; a is then undefined.
func orthonormalise(a blas64.General) (empty int) {
	if a.Cols == 0 {
		return -1
	}
	length := math.Sqrt(float64(a.Rows))
	tau := make([]float64, a.Cols)
	work := make([]float64, 1)
	lapack64.Geqrf(a, tau, work, -1)
	work = make([]float64, max(int(work[0]), a.Cols))
	lapack64.Geqrf(a, tau, work, len(work))
	for j := range a.Cols {
		if math.Abs(a.Data[j*a.Stride+j]) < dependentConfound*length {
			return j
		}
	}
	lapack64.Orgqr(a, tau, work, len(work))
	return -1
}

// residualise takes the basis (Q'Q = rows * I) out of every column of a and
// tells which columns it explains: these become exactly 0. The second pass
// removes what rounding left in the first.
func residualise(a, basis blas64.General) (empty []bool) {
	before := squares(a)
	for range 2 {
		coefficients := product(turned, basis, plain, a)
		multiplyTo(a, -1/float64(basis.Rows), plain, basis, plain, coefficients, 1)
	}
	empty = make([]bool, a.Cols)
	for j, after := range squares(a) {
		if empty[j] = after <= explained*explained*before[j]; empty[j] {
			for i := range a.Rows {
				a.Data[i*a.Stride+j] = 0
			}
		}
	}
	return empty
}

// squares returns the sum of squares of every column.
func squares(a blas64.General) []float64 {
	sums := make([]float64, a.Cols)
	for i := range a.Rows {
		for j, v := range row(a, i) {
			sums[j] += v * v
		}
	}
	return sums
}
