package predict

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/blas/blas64"
)

// Weight is what the outer fits of one trait say of one measure, over all
// repeats.
type Weight struct {
	// Weight is the mean of the weights, per training deviation of the measure
	// after the confounds, in units of the trait; inside a composition, per
	// unit of the measure less the mean of its parts. 0 where the measure had
	// no weight.
	Weight float64
	// SD is the standard deviation (divisor fits - 1) of the weights. The fits
	// share most of their people: it is no standard error. NaN for one fit.
	SD float64
	// SignAgreement is the share of fits whose weight has the sign of Weight;
	// NaN when Weight is 0.
	SignAgreement float64
	// Pattern is the mean over fits of the covariance (divisor n), in the
	// training set, of the measure after the confounds with the prediction, in
	// units of the measure times units of the trait (Haufe et al. 2014): where
	// weights say how to read the trait off, the pattern says what goes with it.
	Pattern float64
	// MeasureSD is the mean training deviation of the measure after the
	// confounds, in its own units, over the fits in which it has a weight; 0
	// when there is none. Weight per unit is about Weight / MeasureSD.
	MeasureSD float64
}

// outerFit holds the weights of one outer fold, measures x traits.
type outerFit struct {
	weight, pattern blas64.General
	sd              []float64 // 0 without weight
}

// Weights summarises the weights of the outer fits, [trait][measure].
//
// Each composition, if any, names the measures that are the log-ratio parts
// (clr) of one whole. Such measures add to 0 in every person, so that any
// constant added to their weights per unit changes no prediction; the weights
// returned are per unit of the log part, less their mean over the parts: they
// add to 0 and do not depend on how the parts were scaled. A composition of
// fewer than two measures, one that does not exist or that is named twice is
// an error.
func (f *Fit) Weights(compositions ...[]int) ([][]Weight, error) {
	measures, traits := f.fits[0].weight.Rows, f.fits[0].weight.Cols
	if err := checkCompositions(compositions, measures); err != nil {
		return nil, err
	}
	weights := make([][]Weight, traits)
	values := make([][]float64, measures)
	for j := range values {
		values[j] = make([]float64, len(f.fits))
	}
	for t := range weights {
		for i, fit := range f.fits {
			for j := range values {
				values[j][i] = fit.weight.Data[j*traits+t]
			}
			for _, parts := range compositions {
				fit.aboutMean(values, i, parts)
			}
		}
		weights[t] = make([]Weight, measures)
		for j := range values {
			w := summarise(values[j])
			weighted := 0.0
			for _, fit := range f.fits {
				w.Pattern += fit.pattern.Data[j*traits+t] / float64(len(f.fits))
				if fit.sd[j] > 0 {
					w.MeasureSD += fit.sd[j]
					weighted++
				}
			}
			w.MeasureSD /= max(weighted, 1)
			weights[t][j] = w
		}
	}
	return weights, nil
}

// aboutMean turns the weights of fit i into weights per unit about their mean
// over the parts.
func (fit *outerFit) aboutMean(values [][]float64, i int, parts []int) {
	mean := 0.0
	for _, j := range parts {
		if fit.sd[j] > 0 {
			values[j][i] /= fit.sd[j]
		}
		mean += values[j][i] / float64(len(parts))
	}
	for _, j := range parts {
		values[j][i] -= mean
	}
}

func checkCompositions(compositions [][]int, measures int) error {
	used := make([]bool, measures)
	for _, parts := range compositions {
		if len(parts) < 2 {
			return errors.New("predict: a composition has two parts or more")
		}
		for _, j := range parts {
			if j < 0 || j >= measures {
				return fmt.Errorf("predict: composition with measure %d of %d", j, measures)
			}
			if used[j] {
				return fmt.Errorf("predict: measure %d is named twice among the compositions", j)
			}
			used[j] = true
		}
	}
	return nil
}

func summarise(values []float64) Weight {
	count := float64(len(values))
	w := Weight{SD: math.NaN(), SignAgreement: math.NaN()}
	for _, v := range values {
		w.Weight += v / count
	}
	if len(values) > 1 {
		squares := 0.0
		for _, v := range values {
			squares += (v - w.Weight) * (v - w.Weight)
		}
		w.SD = math.Sqrt(squares / (count - 1))
	}
	if w.Weight != 0 {
		agree := 0
		for _, v := range values {
			if v*w.Weight > 0 {
				agree++
			}
		}
		w.SignAgreement = float64(agree) / count
	}
	return w
}

// weightsTo fills the columns of the block into fit.
//
// With b the weights of the directions, the prediction in training is
// X V b = X w, and its covariances with X are X'X V b / n = V (mu b) / n.
func (d *Design) weightsTo(fit *outerFit, b *block, f *fold, scale []float64) {
	n := float64(len(f.split.train))
	scaled := newTable(f.fit.r, b.width)
	for i, mu := range f.fit.mu {
		for c, v := range row(b.out.b, i) {
			scaled.Data[i*b.width+c] = v * mu
		}
	}
	weights, covariances := b.fromDirections(f, b.out.b), b.fromDirections(f, scaled)
	for a, j := range f.active {
		sd := f.sd[a] * f.unit[a]
		for c := range b.width {
			at, unit := j*fit.weight.Cols+b.first+c, scale[b.first+c]
			fit.weight.Data[at] = unit * weights.Data[a*b.width+c]
			fit.pattern.Data[at] = unit * sd * covariances.Data[a*b.width+c] / n
		}
		if b.first == 0 {
			fit.sd[j] = sd
		}
	}
}

// fromDirections returns V b, active measures x columns.
func (b *block) fromDirections(f *fold, weights blas64.General) blas64.General {
	if f.fit.directions.Rows == f.fit.r {
		return product(turned, f.fit.directions, plain, weights)
	}
	// V is X'U, and U' the first rows of z. X is large and made anew; the split
	// was measured before, without error.
	g, err := b.sources.measure(&f.split)
	if err != nil {
		panic("predict: a training set changed: " + err.Error())
	}
	return product(turned, g.x, plain, product(turned, rowsOf(f.fit.z, 0, f.fit.r), plain, weights))
}
