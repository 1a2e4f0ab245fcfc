package twin

import (
	"math"

	"kindwell/internal/stream"
)

// Lineage is what a Kin must know beyond itself to tell the sides of a relation
// apart; *Pedigree does.
type Lineage interface {
	// Len is the number of people who can be somebody's child here.
	Len() int
	// Mother and Father are indices of people, or of people beyond Len(), or
	// -1 when not known.
	Mother(i int) int
	Father(i int) int
}

// interclass fills in the correlation of parents with children, or of mothers
// with fathers.
func (s *Sample) interclass(c *Correlation, opt CorrelationOptions) error {
	lineage, ok := s.kin.(Lineage)
	if !ok {
		panic("twin: an interclass correlation needs a Kin with Len, Mother and Father")
	}
	first := s.firstSide(c.Relation, lineage)
	// Sums of cross-products of both sides, family by family.
	w := s.columns.width
	var families []*sides
	none := make([]bool, len(s.people))
	for _, members := range groupBy(len(s.people), s.familyOf) {
		var f *sides
		s.eachPair(members, none, func(i, j int32, r Relation) {
			if r != c.Relation {
				return
			}
			if f == nil {
				f = newSides(w)
				families = append(families, f)
			}
			a, b := int(i), int(j)
			if !first(a, b) {
				a, b = b, a
			}
			f.add(s.columns.rows[a*w:(a+1)*w], s.columns.rows[b*w:(b+1)*w])
			c.Pairs++
		})
	}
	if c.Families = len(families); c.Families < w+1 {
		return tooFewPairs(c, w+1)
	}
	total := newSides(w)
	for _, f := range families {
		total.merge(f)
	}
	c.Value = total.correlation()
	if math.IsNaN(c.Value) {
		return ErrNoVariance
	}
	c.Bootstrap = true
	replicates := opt.Replicates
	if replicates == 0 {
		replicates = 2000
	}
	var values []float64
	for r := range replicates {
		draw := stream.New(opt.Seed, "families for the correlation of "+c.Relation.String(), uint64(r))
		total.clear()
		for range families {
			total.merge(families[draw.IntN(len(families))])
		}
		// A draw in which one side does not vary has no correlation.
		if v := total.correlation(); !math.IsNaN(v) {
			values = append(values, v)
		}
	}
	c.Low, c.High = percentiles(values, opt.Confidence)
	return nil
}

// firstSide returns a function that says whether the first of two positions in
// the sample is the parent, or the mother.
func (s *Sample) firstSide(r Relation, lineage Lineage) func(a, b int) bool {
	if r == ParentChild {
		return func(a, b int) bool {
			child := s.people[b]
			return lineage.Mother(child) == s.people[a] || lineage.Father(child) == s.people[a]
		}
	}
	mothers := map[int]bool{}
	for i := range lineage.Len() {
		mothers[lineage.Mother(i)] = true
	}
	return func(a, _ int) bool { return mothers[s.people[a]] }
}

// sides holds sums of cross-products of [y X] over pairs: of the first side, of
// the second, and between them.
type sides struct {
	width int
	sums  []float64 // three width x width matrices
}

func newSides(width int) *sides { return &sides{width, make([]float64, 3*width*width)} }

func (s *sides) clear() { clear(s.sums) }

func (s *sides) merge(o *sides) {
	for i, v := range o.sums {
		s.sums[i] += v
	}
}

func (s *sides) add(first, second []float64) {
	at := 0
	for _, z := range [3][2][]float64{{first, first}, {second, second}, {first, second}} {
		for _, x := range z[0] {
			for _, y := range z[1] {
				s.sums[at] += x * y
				at++
			}
		}
	}
}

// correlation is that of the residuals of each side's y on its X, NaN when one
// side has none.
func (s *sides) correlation() float64 {
	w := s.width
	size := w * w
	first, v1 := residualOn(s.sums[:size], w)
	second, v2 := residualOn(s.sums[size:2*size], w)
	if !(v1 > 0 && v2 > 0) {
		return math.NaN()
	}
	var c float64
	between := s.sums[2*size:]
	for i, f := range first {
		for j, g := range second {
			c += f * between[i*w+j] * g
		}
	}
	return max(-1, min(1, c/math.Sqrt(v1*v2)))
}

// residualOn regresses y on X from the cross-products of [y X], w x w, and
// returns the residual as a combination of the columns, with its sum of squares.
// Columns that the ones before them explain get no coefficient.
func residualOn(sums []float64, w int) (combination []float64, ss float64) {
	m := append([]float64(nil), sums...)
	kept := make([]bool, w)
	for p := 1; p < w; p++ {
		d := m[p*w+p]
		if !(d > 1e-9*sums[p*w+p]) {
			continue
		}
		kept[p] = true
		for j := range w {
			m[p*w+j] /= d
		}
		for i := 1; i < w; i++ {
			if f := m[i*w+p]; i != p {
				for j := range w {
					m[i*w+j] -= f * m[p*w+j]
				}
			}
		}
	}
	// Column 0 of the kept rows now holds the slopes.
	combination = make([]float64, w)
	combination[0] = 1
	ss = sums[0]
	for p := 1; p < w; p++ {
		if kept[p] {
			combination[p] = -m[p*w]
			ss -= m[p*w] * sums[p*w]
		}
	}
	// A residual of rounding alone is none.
	if ss <= 1e-12*sums[0] {
		ss = 0
	}
	return combination, ss
}
