package predict

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// The nested procedure as a textbook has it: every split by its rows, every
// penalty by its own normal equations, nothing shared. It is the second route
// to everything that Fit and Null compute.
type textbook struct {
	measures, confounds *mat.Dense
	penalties           []float64
	learner             Learner  // instead of measures
	scalers             []Scaler // nil: measures as they are
}

type textbookFit struct {
	baseline, target, predicted []float64
	penalty, mse                []float64   // per outer fold
	weights, patterns           [][]float64 // per outer fold, per measure
	sd                          [][]float64
}

// split returns the target and the predictions at each penalty of the held-out
// rows, learnt on the training rows.
type textbookSplit struct {
	baseline, target []float64
	predicted        [][]float64 // per penalty
	weights          [][]float64 // per penalty, per training deviation
	patterns         [][]float64
	sd               []float64
}

func at(values []float64, rows []int) []float64 {
	out := make([]float64, len(rows))
	for i, r := range rows {
		out[i] = values[r]
	}
	return out
}

func (b textbook) split(y []float64, train, held []int) textbookSplit {
	c := 0
	if b.confounds != nil {
		_, c = b.confounds.Dims()
	}
	if b.learner != nil {
		b.measures, _ = b.learner.Learn(train)
	}
	_, p := b.measures.Dims()
	design := func(rows []int) *mat.Dense {
		d := mat.NewDense(len(rows), c+1, nil)
		for i, r := range rows {
			d.Set(i, 0, 1)
			for j := range c {
				d.Set(i, j+1, b.confounds.At(r, j))
			}
		}
		return d
	}
	take := func(rows []int, fill []float64) *mat.Dense {
		x := mat.NewDense(len(rows), p, nil)
		for i, r := range rows {
			for j := range p {
				v := b.measures.At(r, j)
				if math.IsNaN(v) {
					v = fill[j]
				}
				x.Set(i, j, v)
			}
		}
		return x
	}
	fill := make([]float64, p)
	for j := range p {
		sum, count := 0.0, 0.0
		for _, r := range train {
			if v := b.measures.At(r, j); !math.IsNaN(v) {
				sum, count = sum+v, count+1
			}
		}
		fill[j] = sum / count
	}
	ca, cb := design(train), design(held)
	xa, xb := take(train, fill), take(held, fill)
	for j, scaler := range b.scalers {
		if scaler == nil {
			continue
		}
		raw := mat.Col(nil, j, b.measures)
		onTraining, onHeld := scaler(at(raw, train), at(raw, held))
		sum, count := 0.0, 0.0
		for _, v := range onTraining {
			if !math.IsNaN(v) {
				sum, count = sum+v, count+1
			}
		}
		for i, v := range onTraining {
			if math.IsNaN(v) {
				v = sum / count
			}
			xa.Set(i, j, v)
		}
		for i, v := range onHeld {
			if math.IsNaN(v) {
				v = sum / count
			}
			xb.Set(i, j, v)
		}
	}
	ya := mat.NewDense(len(train), 1, nil)
	for i, r := range train {
		ya.Set(i, 0, y[r])
	}

	before := deviations(xa)
	var coefficients, fitted mat.Dense
	leastSquares(&coefficients, ca, xa)
	fitted.Mul(ca, &coefficients)
	xa.Sub(xa, &fitted)
	fitted.Reset()
	fitted.Mul(cb, &coefficients)
	xb.Sub(xb, &fitted)
	sd := deviations(xa)
	for j := range p {
		if before[j] == 0 || sd[j] < 1e-10*before[j] {
			sd[j] = 0
		}
		for _, x := range []*mat.Dense{xa, xb} {
			rows, _ := x.Dims()
			for i := range rows {
				if sd[j] == 0 {
					x.Set(i, j, 0)
				} else {
					x.Set(i, j, x.At(i, j)/sd[j])
				}
			}
		}
	}
	coefficients.Reset()
	fitted.Reset()
	leastSquares(&coefficients, ca, ya)
	fitted.Mul(ca, &coefficients)
	ya.Sub(ya, &fitted)
	fitted.Reset()
	fitted.Mul(cb, &coefficients)
	s := textbookSplit{sd: sd}
	for i, r := range held {
		s.baseline = append(s.baseline, fitted.At(i, 0))
		s.target = append(s.target, y[r]-fitted.At(i, 0))
	}
	for _, penalty := range b.penalties {
		w := ridgeByNormalEquations(xa, ya, penalty)
		var predicted, training, pattern mat.Dense
		predicted.Mul(xb, w)
		training.Mul(xa, w)
		pattern.Mul(xa.T(), &training)
		s.predicted = append(s.predicted, mat.Col(nil, 0, &predicted))
		s.weights = append(s.weights, mat.Col(nil, 0, w))
		patterns := mat.Col(nil, 0, &pattern)
		for j := range patterns {
			patterns[j] *= sd[j] / float64(len(train))
		}
		s.patterns = append(s.patterns, patterns)
	}
	return s
}

// fit runs the whole procedure on one repeat.
func (b textbook) fit(y []float64, r *crossval.Repeat) textbookFit {
	n := len(y)
	f := textbookFit{baseline: make([]float64, n), target: make([]float64, n), predicted: make([]float64, n)}
	for o := range r.OuterCount {
		var train, held []int
		for i := range n {
			if r.Outer[i] == o {
				held = append(held, i)
			} else {
				train = append(train, i)
			}
		}
		mse := make([]float64, len(b.penalties))
		used := 0.0
		for fold := range r.InnerCount[o] {
			var in, out []int
			for _, i := range train {
				if r.Inner[o][i] == fold {
					out = append(out, i)
				} else {
					in = append(in, i)
				}
			}
			if len(out) == 0 {
				continue
			}
			used++
			s := b.split(y, in, out)
			for l := range b.penalties {
				sum := 0.0
				for i, t := range s.target {
					sum += (t - s.predicted[l][i]) * (t - s.predicted[l][i])
				}
				mse[l] += sum / float64(len(out))
			}
		}
		best := 0
		for l := range mse {
			mse[l] /= used
			if mse[l] < mse[best] {
				best = l
			}
		}
		for l := range mse {
			if mse[l] <= mse[best]*(1+1e-12) {
				best = max(best, l)
			}
		}
		s := b.split(y, train, held)
		for i, person := range held {
			f.baseline[person], f.target[person], f.predicted[person] = s.baseline[i], s.target[i], s.predicted[best][i]
		}
		f.penalty, f.mse = append(f.penalty, b.penalties[best]), append(f.mse, mse[best])
		f.weights, f.patterns, f.sd = append(f.weights, s.weights[best]), append(f.patterns, s.patterns[best]), append(f.sd, s.sd)
	}
	return f
}

// leastSquares solves by the pseudoinverse, so that dependent confounds do no
// harm.
func leastSquares(dst *mat.Dense, a, b *mat.Dense) {
	var svd mat.SVD
	if !svd.Factorize(a, mat.SVDThin) {
		panic("no singular values")
	}
	svd.SolveTo(dst, b, svd.Rank(1e-12))
}

func ridgeByNormalEquations(x, y *mat.Dense, penalty float64) *mat.Dense {
	_, p := x.Dims()
	var gram mat.SymDense
	gram.SymOuterK(1, x.T())
	for j := range p {
		gram.SetSym(j, j, gram.At(j, j)+penalty)
	}
	var right mat.Dense
	right.Mul(x.T(), y)
	var factor mat.Cholesky
	if !factor.Factorize(&gram) {
		panic("not positive definite")
	}
	w := new(mat.Dense)
	if err := factor.SolveTo(w, &right); err != nil {
		panic(err)
	}
	return w
}

// deviations are population standard deviations of the columns, exactly 0 for
// constant ones.
func deviations(x *mat.Dense) []float64 {
	rows, cols := x.Dims()
	sd := make([]float64, cols)
	for j := range cols {
		constant, mean := true, 0.0
		for i := range rows {
			constant = constant && x.At(i, j) == x.At(0, j)
			mean += x.At(i, j) / float64(rows)
		}
		for i := range rows {
			sd[j] += (x.At(i, j) - mean) * (x.At(i, j) - mean) / float64(rows)
		}
		sd[j] = math.Sqrt(sd[j])
		if constant {
			sd[j] = 0
		}
	}
	return sd
}

// A problem is an invented data set with folds.
type problem struct {
	measures, confounds, traits *mat.Dense
	folds                       *crossval.Folds
	penalties                   []float64
}

// shape says what to invent.
type shape struct {
	people, measures, confounds, traits int
	repeats, outer, inner               int
	cells                               bool
	collinear, constant                 bool
	missing                             bool
}

func invent(s shape, seed uint64) problem {
	st := stream.New(seed, "test problem")
	normal := func(rows, cols int) *mat.Dense {
		if cols == 0 {
			return nil
		}
		a := mat.NewDense(rows, cols, nil)
		for i := range rows {
			for j := range cols {
				a.Set(i, j, st.Norm())
			}
		}
		return a
	}
	q := problem{measures: normal(s.people, s.measures), confounds: normal(s.people, s.confounds), traits: normal(s.people, s.traits)}
	for i := range s.people {
		for j := range s.measures {
			v := q.measures.At(i, j)*math.Exp(float64(j%5)-2) + 3*float64(j%3)
			if s.confounds > 0 {
				v += 0.4 * q.confounds.At(i, j%s.confounds)
			}
			q.measures.Set(i, j, v)
		}
		for t := range s.traits {
			v := 20 + float64(t+1)*q.traits.At(i, t)
			if t%2 == 0 {
				v += (q.measures.At(i, 0) - q.measures.At(i, s.measures-1)) * float64(t+1) / 2
			}
			if s.confounds > 0 {
				v += 2 * q.confounds.At(i, 0)
			}
			q.traits.Set(i, t, v)
		}
	}
	if s.collinear {
		for i := range s.people {
			q.measures.Set(i, s.measures-1, q.measures.At(i, 0)-2*q.measures.At(i, 1))
		}
	}
	if s.constant {
		for i := range s.people {
			q.measures.Set(i, 2, 7.1)
		}
	}
	if s.missing {
		for i := range s.people {
			if st.IntN(10) == 0 {
				q.measures.Set(i, 0, math.NaN())
			}
			if st.IntN(20) == 0 {
				q.measures.Set(i, 3, math.NaN())
			}
		}
	}
	q.folds = &crossval.Folds{}
	for range s.repeats {
		q.folds.Repeats = append(q.folds.Repeats, inventRepeat(s, st))
	}
	q.penalties = []float64{0.05, 0.5, 3, 20, 150, 1000}
	return q
}

// inventRepeat draws folds of unequal size.
func inventRepeat(s shape, st *stream.Stream) crossval.Repeat {
	r := crossval.Repeat{Outer: make([]int, s.people), OuterCount: s.outer}
	draw := func(count int) int { // the first folds are larger
		return min(st.IntN(count), st.IntN(count))
	}
	for i := range r.Outer {
		r.Outer[i] = draw(s.outer)
		if i < 4*s.outer {
			r.Outer[i] = i % s.outer
		}
	}
	st.ShuffleTo(r.Outer)
	if s.cells {
		r.Cell = make([]int, s.people)
		for i := range r.Cell {
			r.Cell[i] = draw(s.inner)
		}
	}
	for o := range s.outer {
		inner, next := make([]int, s.people), 0
		for i := range inner {
			switch {
			case r.Outer[i] == o:
				inner[i] = -1
			case s.cells:
				inner[i] = r.Cell[i]
			default:
				if inner[i] = draw(s.inner); next < 3*s.inner {
					inner[i] = next % s.inner
				}
				next++
			}
		}
		r.Inner, r.InnerCount = append(r.Inner, inner), append(r.InnerCount, s.inner)
	}
	return r
}
