package predict

import (
	"fmt"

	"gonum.org/v1/gonum/mat"
)

// A Scaler puts one measure on a scale that is learnt from the people of a
// training set: it returns the values of the training people and of the other
// people on that scale, of the same lengths, and must not change its arguments.
// NaN, a missing value, stays NaN. It is called from several goroutines.
type Scaler func(training, others []float64) (trainingScaled, othersScaled []float64)

// scaled reports whether any measure has a scaler.
func (o Options) scaled() bool {
	for _, s := range o.Scalers {
		if s != nil {
			return true
		}
	}
	return false
}

// checkScalers says what is wrong with the scalers of p measures, or nil.
func (o Options) checkScalers(p int) error {
	if len(o.Scalers) != 0 && len(o.Scalers) != p {
		return fmt.Errorf("predict: %d scalers for %d measures", len(o.Scalers), p)
	}
	return nil
}

// rescaled is the Learner of measures with scalers.
type rescaled struct {
	from    Learner
	scalers []Scaler // per measure, or nil
}

func (r rescaled) Count() int { return r.from.Count() }

func (r rescaled) Learn(training []int) (*mat.Dense, error) {
	from, err := r.from.Learn(training)
	if err != nil {
		return nil, err
	}
	measures := mat.DenseCopyOf(from)
	n, p := measures.Dims()
	if p != len(r.scalers) {
		return measures, nil // refused by the caller
	}
	others := make([]int, 0, n-len(training))
	for person, next := 0, 0; person < n; person++ {
		if next < len(training) && training[next] == person {
			next++
		} else {
			others = append(others, person)
		}
	}
	for j, scaler := range r.scalers {
		if scaler == nil {
			continue
		}
		a, b := scaler(valuesOf(from, j, training), valuesOf(from, j, others))
		setValues(measures, j, training, a)
		setValues(measures, j, others, b)
	}
	return measures, nil
}

// valuesOf returns measure j of the given people.
func valuesOf(measures *mat.Dense, j int, people []int) []float64 {
	values := make([]float64, len(people))
	for i, person := range people {
		values[i] = measures.At(person, j)
	}
	return values
}

func setValues(measures *mat.Dense, j int, people []int, values []float64) {
	if len(values) != len(people) {
		panic(fmt.Sprintf("predict: a scaler returned %d values for %d people", len(values), len(people)))
	}
	for i, person := range people {
		measures.Set(person, j, values[i])
	}
}

// asTheyAre is the Learner of measures that learn nothing.
type asTheyAre struct{ measures *mat.Dense }

func (m asTheyAre) Count() int { _, p := m.measures.Dims(); return p }

func (m asTheyAre) Learn([]int) (*mat.Dense, error) { return m.measures, nil }
