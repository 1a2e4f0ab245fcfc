package predict

import (
	"context"
	"errors"
	"fmt"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/mat"
)

// Arrangements are rearrangements of people, in any order and from any
// goroutine: At fills dst (one entry a person) so that place i receives the
// value of person dst[i], for arrangement 0..Len()-1.
type Arrangements interface {
	Len() int
	At(i int, dst []int)
}

// Null returns the statistic Options.Metric of every trait and arrangement,
// null[trait][arrangement]: the residuals of the trait over all people (n x t,
// see Residuals) are rearranged, and the whole nested procedure, confounds,
// standardising and choice of the penalty included, is repeated on the same
// folds and repeats (Freedman & Lane 1983, in folds). It is what Fit would
// report for the rearranged column.
//
// progress, if not nil, is called with the number of arrangements done so far,
// a share of the work in truth, from one goroutine at a time. Cancelling ctx
// stops the work with its error.
func (d *Design) Null(ctx context.Context, residuals *mat.Dense, arrangements Arrangements, progress func(done int)) ([][]float64, error) {
	if err := d.checkTraits(residuals); err != nil {
		return nil, err
	}
	if arrangements == nil || arrangements.Len() == 0 {
		return nil, errors.New("predict: no arrangements")
	}
	cols := &rearranged{standardised: standardColumns(residuals), arrangements: arrangements}
	count := arrangements.Len()
	t := newTally(d, cols)
	var share func(float64)
	if progress != nil {
		last := 0
		share = func(done float64) {
			if now := int(done * float64(count)); now > last {
				last = now
				progress(now)
			}
		}
	}
	if err := d.run(ctx, cols, len(d.opt.Penalties) > 1, t, share); err != nil {
		return nil, err
	}
	statistics := t.statistics()
	null := make([][]float64, cols.values.Cols)
	for j := range null {
		null[j] = make([]float64, count)
		for a := range null[j] {
			null[j][a] = statistics[a*len(null)+j]
		}
	}
	return null, nil
}

func (d *Design) checkTraits(traits *mat.Dense) error {
	if traits == nil || traits.IsEmpty() {
		return errors.New("predict: no traits")
	}
	if n, _ := traits.Dims(); n != d.people {
		return fmt.Errorf("predict: traits of %d people, the design has %d", n, d.people)
	}
	return checkFinite("trait", traits, false)
}

// rearranged are the columns (arrangement, trait), traits fastest.
type rearranged struct {
	standardised
	arrangements Arrangements
}

func (r *rearranged) count() int { return r.values.Cols * r.arrangements.Len() }

func (r *rearranged) fillTo(dst blas64.General, first int, order []int) {
	traits := r.values.Cols
	comes := make([]int, len(order))
	for c := 0; c < dst.Cols; {
		arrangement, trait := (first+c)/traits, (first+c)%traits
		r.arrangements.At(arrangement, comes)
		width := min(dst.Cols-c, traits-trait)
		for i, person := range order {
			from := comes[person]*r.values.Stride + trait
			copy(dst.Data[i*dst.Stride+c:i*dst.Stride+c+width], r.values.Data[from:from+width])
		}
		c += width
	}
}
