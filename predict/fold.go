package predict

import (
	"gonum.org/v1/gonum/blas/blas64"
)

// fold is one outer fold ready for any number of trait columns.
type fold struct {
	outer     int
	from, to  int // its rows in the layout
	split     split
	fit       *spectrum
	inner     []innerFold
	active    []int     // measures with a weight
	sd        []float64 // and their training deviations
	unit      []float64 // in these of the measures' own units
	innerHeld []float64 // per row: 1 / people of its inner fold, 0 for those held out

	zeroOuter, zeroInner []int // measures, one entry a training set: constant
	goneOuter, goneInner []int // measures: explained by the confounds
}

// innerFold is one inner fold.
type innerFold struct {
	*spectrum
	split split
	cell  int            // its fold number, the cell it is made of
	x     blas64.General // sources of its people, where no cells are used
}

// newFold looks at all training sets of outer fold o, and decomposes them if
// asked.
func (d *Design) newFold(s *sources, l *layout, o int, decompose bool) (*fold, error) {
	outer, inner := l.splits(o)
	f := &fold{outer: o, from: l.start[o], to: l.start[o+1], split: outer}
	g, err := s.measure(&outer)
	if err != nil {
		return nil, err
	}
	f.active, f.sd, f.unit = g.active, g.sd, g.unit
	f.zeroOuter, f.goneOuter = g.constant, g.explained
	if decompose {
		if f.fit, err = s.decompose(g, d.rows, d.opt.Penalties, true); err != nil {
			return nil, err
		}
		f.innerHeld = make([]float64, l.people())
	}
	for i := range inner {
		g, err := s.measure(&inner[i])
		if err != nil {
			return nil, err
		}
		f.zeroInner = append(f.zeroInner, g.constant...)
		f.goneInner = append(f.goneInner, g.explained...)
		if !decompose {
			continue
		}
		in := innerFold{split: inner[i], cell: inner[i].inner}
		if in.spectrum, err = s.decompose(g, d.rows, d.opt.Penalties, false); err != nil {
			return nil, err
		}
		if l.cells == nil && !d.rows {
			in.x = newTable(len(in.split.held), s.all.Cols)
			gatherTo(in.x, s.all, in.split.held)
		}
		for _, r := range in.split.held {
			f.innerHeld[r] = 1 / in.people
		}
		f.inner = append(f.inner, in)
	}
	return f, nil
}

// countZeroWeights adds the training sets in which measures have no weight.
func (f *fold) countZeroWeights(zero []ZeroWeight) {
	for _, j := range f.zeroOuter {
		zero[j].ConstantOuter++
	}
	for _, j := range f.zeroInner {
		zero[j].ConstantInner++
	}
	for _, j := range f.goneOuter {
		zero[j].ExplainedOuter++
	}
	for _, j := range f.goneInner {
		zero[j].ExplainedInner++
	}
}
