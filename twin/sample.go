package twin

import (
	"fmt"

	"gonum.org/v1/gonum/mat"
)

// Sample is one variable of a set of people with its covariates, ready for
// variance models. It is never changed once made, and safe for use by several
// goroutines at once.
type Sample struct {
	kin     Kin
	people  []int // as given in rows
	layout  *layout
	columns *columns
	moments *moments
	inbred  int // position of the first inbred person, -1 for none
}

// Places of the component matrices in a sample's layout.
const (
	placeA = int(A)
	placeC = int(C)
	placeD = int(D)
)

// NewSample prepares the people whose indices are in rows, each at most once
// and all complete. y holds their values in the same order, and covariates, nil
// for none, one row each and one column a name; the constant is added here.
//
// A covariate that is constant, or a linear combination of the constant and
// the covariates before it, has no coefficient of its own. It is left out, and
// the fixed effects of every fit say so.
//
// The errors are *NotFiniteError, *TooFewError for fewer than three families,
// and ErrNoVariance. Wrong lengths and people listed twice panic.
func NewSample(kin Kin, rows []int, y []float64, covariates *mat.Dense, names []string) (*Sample, error) {
	checkRows(rows, y)
	s := &Sample{kin: kin, people: append([]int(nil), rows...), inbred: -1}
	s.layout = newLayout(len(rows), func(i int) int { return kin.Family(rows[i]) }, func(i, j int) entries {
		var e entries
		a, b := rows[i], rows[j]
		e[placeA] = kin.Kinship(a, b)
		e[placeD] = kin.Dominance(a, b)
		if i == j {
			// The identity belongs to E.
			e[placeA]--
			e[placeD]--
			if e[placeA] > 0 && s.inbred < 0 {
				s.inbred = i
			}
		} else if kin.SharedHome(a, b) {
			e[placeC] = 1
		}
		return e
	})
	if s.layout.families < 3 {
		return nil, &TooFewError{What: "families", Have: s.layout.families, Need: 3}
	}
	return s.prepare(y, covariates, names)
}

// With returns a sample of the same people with another variable and other
// covariates, as NewSample would, at a fraction of its cost: what depends on
// the people alone is shared.
func (s *Sample) With(y []float64, covariates *mat.Dense, names []string) (*Sample, error) {
	checkRows(s.people, y)
	other := *s
	return other.prepare(y, covariates, names)
}

func (s *Sample) prepare(y []float64, covariates *mat.Dense, names []string) (*Sample, error) {
	c, err := newColumns(y, covariates, names)
	if err != nil {
		return nil, err
	}
	s.columns = c
	s.moments = newMoments(s.layout, c.rows, c.width)
	return s, nil
}

func checkRows(rows []int, y []float64) {
	if len(rows) != len(y) {
		panic(fmt.Sprintf("twin: %d rows and %d values", len(rows), len(y)))
	}
	seen := make(map[int]bool, len(rows))
	for _, r := range rows {
		if seen[r] {
			panic(fmt.Sprintf("twin: person %d is listed twice", r))
		}
		seen[r] = true
	}
}

// People is the number of people.
func (s *Sample) People() int { return len(s.people) }

// Families is the number of families.
func (s *Sample) Families() int { return s.layout.families }

// Structures is the number of different covariance matrices among the
// families, which is what one evaluation of the likelihood costs.
func (s *Sample) Structures() int { return len(s.layout.structures) }

// likelihood returns the likelihood of a model on the sample.
func (s *Sample) likelihood(m Model, criterion Criterion) *likelihood {
	var use []int
	for _, c := range m.components() {
		if c != E {
			use = append(use, int(c))
		}
	}
	return newLikelihood(s.moments, use, criterion)
}
