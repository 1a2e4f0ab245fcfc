package predict

import (
	"context"
	"errors"
	"fmt"
	"slices"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/internal/parallel"
)

// keepBytes bounds the decompositions that a Design keeps, and about those that
// are in memory at once when it keeps none.
const keepBytes = 48 << 20

// A Design is a set of measures and confounds of the same people, with the
// folds and penalties by which any trait of these people is predicted. All
// that does not depend on a trait is computed once. It is safe for use by
// several goroutines.
type Design struct {
	opt       Options
	keepBytes int
	people    int
	perFamily bool
	source    *sources
	layouts   []*layout
	rows      bool    // work on the rows of traits, not on cross-products
	stages    []stage // what is decomposed at once, repeat by repeat
	kept      [][]*fold
	notes     Notes
	sizes     foldSizes
}

// Notes are what a careful reader of the results should know of a Design.
type Notes struct {
	// ZeroWeights are the measures that got weight 0 in some training set.
	ZeroWeights []ZeroWeight
	// PassedOver are the confounds that are constant among all people or
	// follow from those before them; leaving them out changes nothing.
	PassedOver []int
	// IllConditioned is true when the lowest penalty is below 1e-10 times
	// people times measures: with collinear measures, predictions at such
	// penalties keep fewer than about six digits.
	IllConditioned bool
	// SmallFolds counts outer folds of fewer than 3 people, in which there is
	// no correlation: r_by_fold is then not available.
	SmallFolds int
}

// ZeroWeight says in how many training sets a measure got weight 0, and why:
// it was constant there, or less than 1e-10 of its deviation was left after
// the confounds. Outer counts training sets of outer folds, Inner those of
// inner folds.
type ZeroWeight struct {
	Measure                        int
	ConstantOuter, ConstantInner   int
	ExplainedOuter, ExplainedInner int
}

// stage is a run of outer folds of one repeat.
type stage struct{ repeat, from, to int }

// foldSizes are mean people a fold over all outer folds.
type foldSizes struct {
	folds       int
	test, train float64
	least       int
}

// NewDesign checks and prepares measures (n x p), confounds (n x c, or nil for
// none; a constant is always among them), folds of the n people and options.
// Rows are people, in one order everywhere.
//
// Errors: values that are not finite (by person and column), shapes that do
// not fit, folds that are no partition, a training set too small for the
// confounds, a confound that cannot be learnt in a training set
// (*ConfoundError), a measure missing in more than a fifth of the people, and
// a metric that the folds do not allow.
func NewDesign(measures, confounds *mat.Dense, folds *crossval.Folds, opt Options) (*Design, error) {
	return newDesign(measures, nil, confounds, folds, opt, keepBytes)
}

// NewLearnedDesign is NewDesign for measures that each training set learns
// anew. It costs about as many times more as a training set has people for a
// measure.
func NewLearnedDesign(learner Learner, confounds *mat.Dense, folds *crossval.Folds, opt Options) (*Design, error) {
	if learner == nil || learner.Count() < 1 {
		return nil, errors.New("predict: no measures")
	}
	return newDesign(nil, learner, confounds, folds, opt, keepBytes)
}

func newDesign(measures *mat.Dense, learner Learner, confounds *mat.Dense, folds *crossval.Folds, opt Options, keepBytes int) (*Design, error) {
	if err := opt.Validate(); err != nil {
		return nil, err
	}
	if folds == nil || len(folds.Repeats) == 0 {
		return nil, errors.New("predict: no folds")
	}
	n, p := folds.People(), 0
	if learner == nil {
		if measures == nil || measures.IsEmpty() {
			return nil, errors.New("predict: no measures")
		}
		n, p = measures.Dims()
		if err := checkFinite("measure", measures, opt.FillMissing); err != nil {
			return nil, err
		}
	} else {
		p = learner.Count()
	}
	if err := opt.checkScalers(p); err != nil {
		return nil, err
	}
	if opt.scaled() {
		if learner == nil {
			learner = asTheyAre{measures}
		}
		learner = rescaled{learner, slices.Clone(opt.Scalers)}
	}
	if err := checkConfounds(confounds, n); err != nil {
		return nil, err
	}
	layouts, err := newLayouts(folds, n, len(opt.Penalties) > 1)
	if err != nil {
		return nil, err
	}
	d := &Design{opt: opt.filled(), keepBytes: keepBytes, people: n, perFamily: folds.PerFamily, layouts: layouts}
	d.measureFolds()
	if err := d.checkMetric(); err != nil {
		return nil, err
	}
	if d.source, err = newSources(measures, learner, confounds, n, opt.FillMissing); err != nil {
		return nil, err
	}
	if confounds != nil {
		_, c := confounds.Dims()
		for j := range c {
			if !slices.Contains(d.source.confound, j) {
				d.notes.PassedOver = append(d.notes.PassedOver, j)
			}
		}
	}
	d.rows = learner != nil || d.source.p > d.smallestTraining()
	d.plan()
	if err := d.prepare(); err != nil {
		return nil, err
	}
	return d, nil
}

// Notes returns what should be known of the design.
func (d *Design) Notes() Notes { return d.notes }

func (d *Design) measureFolds() {
	d.sizes.least = d.people
	for _, l := range d.layouts {
		for o := range l.outerCount() {
			size := l.start[o+1] - l.start[o]
			d.sizes.folds++
			d.sizes.least = min(d.sizes.least, size)
			if size < 3 {
				d.notes.SmallFolds++
			}
			d.sizes.test += float64(size)
			d.sizes.train += float64(d.people - size)
		}
	}
	d.sizes.test /= float64(d.sizes.folds)
	d.sizes.train /= float64(d.sizes.folds)
}

func (d *Design) checkMetric() error {
	if d.opt.Metric != RByFold {
		return nil
	}
	if d.perFamily {
		return errors.New("predict: r_by_fold is not defined where each family is a fold of its own; use r2")
	}
	if d.sizes.least < 3 {
		return fmt.Errorf("predict: r_by_fold needs 3 people in every outer fold; the smallest has %d", d.sizes.least)
	}
	return nil
}

// smallestTraining returns the size of the smallest training set.
func (d *Design) smallestTraining() int {
	least := d.people
	for _, l := range d.layouts {
		for o := range l.outerCount() {
			train := d.people - (l.start[o+1] - l.start[o])
			least = min(least, train)
			for _, f := range l.inner[o] {
				least = min(least, train-len(f.rows))
			}
		}
	}
	return least
}

// plan cuts each repeat into stages of about keepBytes of decompositions.
func (d *Design) plan() {
	whole := d.opt.Metric == Rho // ranks need all folds of a repeat together
	for r, l := range d.layouts {
		from, bytes := 0, 0
		for o := range l.outerCount() {
			next := d.foldBytes(l, o)
			if o > from && bytes+next > d.keepBytes && !whole {
				d.stages = append(d.stages, stage{r, from, o})
				from, bytes = o, 0
			}
			bytes += next
		}
		d.stages = append(d.stages, stage{r, from, l.outerCount()})
	}
}

// foldBytes is about what the decompositions of one outer fold take.
func (d *Design) foldBytes(l *layout, o int) int {
	held := l.start[o+1] - l.start[o]
	train, m := d.people-held, d.source.all.Cols
	one := func(train, held int) int {
		r := min(d.source.p, train)
		if d.rows {
			return (r + d.source.k) * (2*train + held)
		}
		return (r + d.source.k) * 3 * m
	}
	numbers := one(train, held) + held*d.source.p + d.source.p*d.source.p
	for _, f := range l.inner[o] {
		numbers += one(train-len(f.rows), len(f.rows)) + len(d.opt.Penalties)*2*d.source.p
		if l.cells == nil && !d.rows {
			numbers += len(f.rows) * m
		}
	}
	return 8 * numbers
}

// prepare looks at every training set once, for errors and notes, and keeps
// the decompositions when all of them fit into keepBytes.
func (d *Design) prepare() error {
	bytes := 0
	for _, l := range d.layouts {
		for o := range l.outerCount() {
			bytes += d.foldBytes(l, o)
		}
	}
	keep := bytes <= d.keepBytes
	zero := make([]ZeroWeight, d.source.p)
	for j := range zero {
		zero[j].Measure = j
	}
	for _, s := range d.stages {
		folds, err := d.build(context.Background(), s, keep)
		if err != nil {
			return err
		}
		for _, f := range folds {
			f.countZeroWeights(zero)
		}
		if keep {
			d.kept = append(d.kept, folds)
		}
	}
	for _, z := range zero {
		if z.ConstantOuter+z.ConstantInner+z.ExplainedOuter+z.ExplainedInner > 0 {
			d.notes.ZeroWeights = append(d.notes.ZeroWeights, z)
		}
	}
	d.notes.IllConditioned = d.opt.Penalties[0] < 1e-10*float64(d.people)*float64(d.source.p)
	return nil
}

// folds returns the decompositions of stage i.
func (d *Design) folds(ctx context.Context, i int) ([]*fold, error) {
	if d.kept != nil {
		return d.kept[i], nil
	}
	return d.build(ctx, d.stages[i], true)
}

// build looks at every training set of a stage, and decomposes it if asked.
func (d *Design) build(ctx context.Context, s stage, decompose bool) ([]*fold, error) {
	l := d.layouts[s.repeat]
	ordered := d.source.inOrder(l)
	folds := make([]*fold, s.to-s.from)
	err := parallel.Do(ctx, d.opt.Workers, len(folds), func(i, _ int) error {
		f, err := d.newFold(ordered, l, s.from+i, decompose)
		folds[i] = f
		return err
	})
	return folds, err
}
