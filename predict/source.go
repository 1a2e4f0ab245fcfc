package predict

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/blas/blas64"
	"gonum.org/v1/gonum/mat"
)

// mostMissing is the share of people without a measure above which filling it
// is refused.
const mostMissing = 0.2

// A Learner makes measures that are learnt from people: a scale fitted to
// their values, summaries of states found in their recordings. In a Design
// they are learnt from each training set anew and applied to the people held
// out of it.
type Learner interface {
	// Count is the number of measures.
	Count() int
	// Learn returns the measures of all people (n x p), learnt from the
	// training people, given in ascending order, and from no other. It may keep
	// neither argument nor result, is called from several goroutines at once,
	// perhaps more than once for the same people, and then answers the same.
	Learn(training []int) (*mat.Dense, error)
}

// measured are measures about 0 with mean square 1 over all people. A missing
// value is 0 and has a 1 in its measure's column of markers, behind the
// measures.
type measured struct {
	values   blas64.General
	markerOf []int     // per measure, its column of markers, from 0; -1 for none
	scale    []float64 // per measure, its deviation over all people, the unit here
	grain    []float64 // per measure, the deviation that the rounding of its values alone can make
}

// newMeasured has row i hold person order[i].
func newMeasured(measures *mat.Dense, order []int) (*measured, error) {
	n, p := measures.Dims()
	columns := standardColumns(measures)
	m := &measured{markerOf: make([]int, p), scale: columns.scale, grain: columns.grain}
	markers := 0
	for j := range p {
		missing := 0
		for i := range n {
			if math.IsNaN(measures.At(i, j)) {
				missing++
			}
		}
		if float64(missing) > mostMissing*float64(n) {
			return nil, fmt.Errorf("predict: measure %d is missing in %d of %d people; at most a fifth can be filled", j, missing, n)
		}
		m.markerOf[j] = -1
		if missing > 0 {
			m.markerOf[j] = markers
			markers++
		}
	}
	m.values = newTable(n, p+markers)
	for i, person := range order {
		to := row(m.values, i)
		for j, v := range row(columns.values, person) {
			if math.IsNaN(v) {
				v = 0
				to[p+m.markerOf[j]] = 1
			}
			to[j] = v
		}
	}
	return m, nil
}

// at returns measure j of row r.
func (m *measured) at(r, j int) (v float64, missing bool) {
	values := m.values.Data[r*m.values.Stride:]
	marker := m.markerOf[j]
	return values[j], marker >= 0 && values[len(m.markerOf)+marker] != 0
}

// sources are the columns, one row a person, that every training set works
// from: [basis of the confounds, measures, markers of missing values], or the
// basis alone where measures are learnt.
type sources struct {
	all      blas64.General
	k, p     int       // basis columns (the constant first), measures
	confound []int     // basis column j+1 is of confound[j]
	order    []int     // person of each row
	fixed    *measured // nil where measures are learnt
	learner  Learner
	missing  bool // learnt measures may be missing
}

// newSources puts basis and measures side by side.
func newSources(measures *mat.Dense, learner Learner, confounds *mat.Dense, people int, missing bool) (*sources, error) {
	basis, kept := confoundBasis(confounds, people)
	s := &sources{all: basis, k: basis.Cols, confound: kept, learner: learner, missing: missing, order: make([]int, people)}
	for i := range s.order {
		s.order[i] = i
	}
	if learner != nil {
		s.p = learner.Count()
		return s, nil
	}
	m, err := newMeasured(measures, s.order)
	if err != nil {
		return nil, err
	}
	s.p, s.fixed = len(m.markerOf), m
	s.all = newTable(people, s.k+m.values.Cols)
	for i := range people {
		to := row(s.all, i)
		copy(to, row(basis, i))
		copy(to[s.k:], row(m.values, i))
	}
	m.values = columnsOf(s.all, s.k, s.all.Cols)
	return s, nil
}

// inOrder returns the sources with rows in the order of a layout.
func (s *sources) inOrder(l *layout) *sources {
	ordered := *s
	ordered.order = l.order
	ordered.all = newTable(s.all.Rows, s.all.Cols)
	gatherTo(ordered.all, s.all, l.order)
	if s.fixed != nil {
		m := *s.fixed
		m.values = columnsOf(ordered.all, s.k, s.all.Cols)
		ordered.fixed = &m
	}
	return &ordered
}

// of returns the measures as the training people of a split have them.
func (s *sources) of(sp *split) (*measured, error) {
	if s.fixed != nil {
		return s.fixed, nil
	}
	where := func(err error) error {
		return fmt.Errorf("predict: measures learnt in %s: %w", place(sp.repeat, sp.outer, sp.inner), err)
	}
	training := make([]int, len(sp.train))
	for i, r := range sp.train {
		training[i] = s.order[r]
	}
	slices.Sort(training)
	measures, err := s.learner.Learn(training)
	if err != nil {
		return nil, where(err)
	}
	if n, p := measures.Dims(); n != len(s.order) || p != s.p {
		return nil, where(fmt.Errorf("%d people and %d measures, %d and %d are expected", n, p, len(s.order), s.p))
	}
	if err := checkFinite("measure", measures, s.missing); err != nil {
		return nil, where(err)
	}
	m, err := newMeasured(measures, s.order)
	if err != nil {
		return nil, where(err)
	}
	return m, nil
}
