package predict

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// Ridge is one set of standardised measures decomposed: ridge regressions on
// it at any penalty, of any trait, are then a few products. It is the plain
// method, without confounds, folds or choice of a penalty; Design has those.
//
// For a trait y it minimises
//
//	sum (y - b0 - X b)^2 + penalty * sum b^2 ,
//
// sums and not means, X with mean 0 and standard deviation 1 (divisor n), the
// intercept b0 free: it is the mean of y. With X = U diag(s) V',
// b = V diag(s / (s^2 + penalty)) U' y.
type Ridge struct {
	mean, sd []float64
	u, v     mat.Dense
	s        []float64
}

// RidgeFit is a ridge regression at one penalty.
type RidgeFit struct {
	// Penalty is the multiplier of the sum of squared weights.
	Penalty float64
	// Weights (p x t) are per standard deviation of the measure, in units of
	// the trait; 0 for a constant measure.
	Weights *mat.Dense
	// Intercepts hold b0, one a trait: the prediction at the mean measures.
	Intercepts []float64
	// DegreesOfFreedom is the sum of s^2 / (s^2 + penalty), the intercept not
	// counted.
	DegreesOfFreedom float64

	ridge *Ridge
}

// NewRidge decomposes measures (n x p, rows are people, n at least 2). Values
// that are not finite are an error.
func NewRidge(measures *mat.Dense) (*Ridge, error) {
	if measures == nil || measures.IsEmpty() {
		return nil, errors.New("predict: no measures")
	}
	n, p := measures.Dims()
	if n < 2 {
		return nil, errors.New("predict: a ridge regression needs two people")
	}
	if err := checkFinite("measure", measures, false); err != nil {
		return nil, err
	}
	columns := standardColumns(measures)
	r := &Ridge{mean: columns.mean, sd: columns.scale}
	var svd mat.SVD
	if !svd.Factorize(mat.NewDense(n, p, columns.values.Data), mat.SVDThin) {
		return nil, errors.New("predict: the singular values of the measures were not found")
	}
	r.s = svd.Values(nil)
	svd.UTo(&r.u)
	svd.VTo(&r.v)
	return r, nil
}

// Fit regresses every trait (n x t) at the penalty: 0 or more, and 0 only if
// no measure is constant or follows from the others. Other penalties, values
// that are not finite and a wrong number of people are errors.
func (r *Ridge) Fit(traits *mat.Dense, penalty float64) (*RidgeFit, error) {
	n, _ := r.u.Dims()
	p, _ := r.v.Dims()
	rows, t := traits.Dims()
	if rows != n {
		return nil, fmt.Errorf("predict: traits of %d people, measures of %d", rows, n)
	}
	if err := checkFinite("trait", traits, false); err != nil {
		return nil, err
	}
	if !(penalty >= 0) || math.IsInf(penalty, 0) {
		return nil, fmt.Errorf("predict: penalty %v", penalty)
	}
	if least := r.s[len(r.s)-1]; penalty == 0 && (n <= p || least <= 1e-13*r.s[0]) {
		return nil, errors.New("predict: without a penalty the weights of dependent measures are not defined")
	}
	f := &RidgeFit{Penalty: penalty, Weights: mat.NewDense(p, t, nil), Intercepts: make([]float64, t), ridge: r}
	centred := mat.NewDense(n, t, nil)
	for j := range t {
		mean, _, _ := aboutMean(mat.Col(nil, j, traits))
		f.Intercepts[j] = mean
		for i := range n {
			centred.Set(i, j, traits.At(i, j)-mean)
		}
	}
	var directions mat.Dense
	directions.Mul(r.u.T(), centred)
	for i, s := range r.s {
		shrink := s / (s*s + penalty)
		f.DegreesOfFreedom += s * shrink
		for j := range t {
			directions.Set(i, j, directions.At(i, j)*shrink)
		}
	}
	f.Weights.Mul(&r.v, &directions)
	return f, nil
}

// Predict returns the predictions (m x t) of m people from their measures
// (m x p).
func (f *RidgeFit) Predict(measures *mat.Dense) (*mat.Dense, error) {
	rows, cols := measures.Dims()
	p, t := f.Weights.Dims()
	if cols != p {
		return nil, fmt.Errorf("predict: %d measures, %d are expected", cols, p)
	}
	if err := checkFinite("measure", measures, false); err != nil {
		return nil, err
	}
	x := mat.NewDense(rows, p, nil)
	for i := range rows {
		for j, sd := range f.ridge.sd {
			if sd > 0 {
				x.Set(i, j, (measures.At(i, j)-f.ridge.mean[j])/sd)
			}
		}
	}
	predicted := mat.NewDense(rows, t, nil)
	predicted.Mul(x, f.Weights)
	for i := range rows {
		for j, b0 := range f.Intercepts {
			predicted.Set(i, j, predicted.At(i, j)+b0)
		}
	}
	return predicted, nil
}
