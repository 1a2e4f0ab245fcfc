package predict

import (
	"context"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/mat"
)

// A Fit holds what a Design says of observed traits: predictions of held-out
// people, the penalties chosen, scores and weights.
type Fit struct {
	// Repeats holds the predictions and choices of each repeat.
	Repeats []Repeat
	// Scores[trait] are all scores that the folds allow.
	Scores [][]Score
	fits   []outerFit
}

// Repeat is one repeat of the folds. Rows of the matrices (n x t) are people,
// each predicted by the fit that did not see it; all are in the units of the
// trait.
type Repeat struct {
	// Observed is the trait. Baseline is what the training coefficients of a
	// constant and the confounds make of the held-out confounds, Target is
	// Observed - Baseline: without confounds, the trait less its training mean.
	Observed, Baseline, Target *mat.Dense
	// Predicted is the prediction of Target.
	Predicted *mat.Dense
	// Mean[outer fold][trait] is the training mean of the trait.
	Mean [][]float64
	// Choices[outer fold][trait] says which penalty was taken.
	Choices [][]Choice
}

// Choice is the penalty of one outer fold.
type Choice struct {
	Penalty float64
	// InnerMSE is the mean, over inner folds, of the mean squared error of the
	// target at this penalty; NaN when a single penalty was given and there are
	// no inner folds.
	InnerMSE float64
	// End says whether the penalty is an end of the grid.
	End End
}

// End says where a chosen penalty lies in the grid.
type End int

const (
	Inside  End = iota // neither end, or the only penalty there is
	LowEnd             // the lowest: lower ones might be better
	HighEnd            // the highest: the usual answer for an unpredictable trait
)

// String returns "", "low" or "high".
func (e End) String() string { return [...]string{"", "low", "high"}[e] }

// Fit predicts every trait (n x t, people in the order of the design) for
// held-out people. Errors: a shape that does not fit, values that are not
// finite, and that of a cancelled ctx.
func (d *Design) Fit(ctx context.Context, traits *mat.Dense) (*Fit, error) {
	if err := d.checkTraits(traits); err != nil {
		return nil, err
	}
	r := d.newRecorder(traits)
	search := true // for the errors, even of a single penalty
	for _, l := range d.layouts {
		search = search && len(l.inner[0]) > 0
	}
	if err := d.run(ctx, r, search, r, nil); err != nil {
		return nil, err
	}
	r.fit.Scores = d.scoreAll(r.fit)
	return r.fit, nil
}

// recorder is the visitor that fills a Fit. Columns are the traits.
type recorder struct {
	standardised
	d   *Design
	fit *Fit
	at  map[[2]int]int // (repeat, outer fold) -> place in fits
}

func (d *Design) newRecorder(traits *mat.Dense) *recorder {
	n, t := traits.Dims()
	r := &recorder{standardised: standardColumns(traits), d: d, fit: &Fit{}, at: map[[2]int]int{}}
	for i, l := range d.layouts {
		repeat := Repeat{
			Observed: mat.DenseCopyOf(traits), Baseline: mat.NewDense(n, t, nil),
			Target: mat.NewDense(n, t, nil), Predicted: mat.NewDense(n, t, nil),
			Mean: make([][]float64, l.outerCount()), Choices: make([][]Choice, l.outerCount()),
		}
		for o := range l.outerCount() {
			repeat.Mean[o], repeat.Choices[o] = make([]float64, t), make([]Choice, t)
			r.at[[2]int{i, o}] = len(r.fit.fits)
			r.fit.fits = append(r.fit.fits, outerFit{
				weight: newTable(d.source.p, t), pattern: newTable(d.source.p, t), sd: make([]float64, d.source.p),
			})
		}
		r.fit.Repeats = append(r.fit.Repeats, repeat)
	}
	return r
}

func (r *recorder) count() int { return r.values.Cols }

func (r *recorder) fillTo(dst blas64.General, first int, order []int) {
	for i, person := range order {
		copy(row(dst, i), row(r.values, person)[first:])
	}
}

func (r *recorder) fold(b *block, _ int, f *fold) {
	to := &r.fit.Repeats[b.l.repeat]
	held := b.predict(f)
	train := float64(len(f.split.train))
	for c := range b.width {
		trait, mean, scale := b.first+c, r.mean[b.first+c], r.scale[b.first+c]
		for i := range held.target.Rows {
			person, at := b.l.order[f.from+i], i*b.width+c
			to.Baseline.Set(person, trait, mean+scale*held.baseline.Data[at])
			to.Target.Set(person, trait, scale*held.target.Data[at])
			to.Predicted.Set(person, trait, scale*held.predicted.Data[at])
		}
		// Columns are about 0 over all people: the training sum is what the
		// held-out people leave.
		to.Mean[f.outer][trait] = mean - scale*b.out.sum[c]/train
		to.Choices[f.outer][trait] = r.d.choice(b.out.choice[c], scale*scale*b.out.mse[c])
	}
	r.d.weightsTo(&r.fit.fits[r.at[[2]int{b.l.repeat, f.outer}]], b, f, r.scale)
}

func (d *Design) choice(at int, mse float64) Choice {
	c := Choice{Penalty: d.opt.Penalties[at], InnerMSE: max(mse, 0)} // rounding may leave a little less than 0
	switch {
	case len(d.opt.Penalties) == 1:
	case at == 0:
		c.End = LowEnd
	case at == len(d.opt.Penalties)-1:
		c.End = HighEnd
	}
	return c
}

func (r *recorder) done(*block)  {}
func (r *recorder) repeated(int) {}
