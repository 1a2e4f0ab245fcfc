package twin

import (
	"errors"
	"fmt"
	"strings"
)

// ErrNoVariance is returned when a variable is constant, or when its
// covariates explain all of it.
var ErrNoVariance = errors.New("the variable has no variance that its covariates leave over")

// ErrNoMaximum is returned when the likelihood grows without limit, as it does
// when relatives who share all of a component have equal values throughout.
var ErrNoMaximum = errors.New("the likelihood has no maximum: relatives have equal values throughout")

// NotFiniteError says that a value is missing or infinite where only complete
// people are allowed.
type NotFiniteError struct {
	Column string // name of the covariate, empty for the variable itself
	Row    int    // 0-based position among the rows given
}

func (e *NotFiniteError) Error() string {
	if e.Column == "" {
		return fmt.Sprintf("row %d: the variable is missing or infinite", e.Row)
	}
	return fmt.Sprintf("row %d: covariate %q is missing or infinite", e.Row, e.Column)
}

// TooFewError says that there is too little to estimate something from.
type TooFewError struct {
	What       string // what is counted, "families" for instance
	Have, Need int
}

func (e *TooFewError) Error() string {
	return fmt.Sprintf("%d %s, need at least %d", e.Have, e.What, e.Need)
}

// UnidentifiedError says that a sample cannot tell some components of a model
// apart: it holds no kind of pair that would, or the fixed effects take all
// that a component explains.
type UnidentifiedError struct {
	Model Model
	// Components are the ones that cannot be told apart; a single one cannot be
	// told from the fixed effects.
	Components []Component
}

func (e *UnidentifiedError) Error() string {
	names := make([]string, len(e.Components))
	for i, c := range e.Components {
		names[i] = c.String()
	}
	last := len(names) - 1
	if last == 0 {
		return fmt.Sprintf("model %s: the fixed effects leave nothing to tell %s by", e.Model, names[0])
	}
	return fmt.Sprintf("model %s: no pairs in this sample tell %s and %s apart",
		e.Model, strings.Join(names[:last], ", "), names[last])
}

// InbreedingError says that a model with dominance was asked of people whose
// parents are related.
type InbreedingError struct {
	Person int // index of the first such person, as given in rows
}

func (e *InbreedingError) Error() string {
	return fmt.Sprintf("person %d has related parents; dominance is not defined for inbred people", e.Person)
}

// NotConvergedError says that a maximum was not found. No number that rests
// on it is returned.
type NotConvergedError struct {
	What string // what was being maximised
}

func (e *NotConvergedError) Error() string {
	return e.What + ": the search for the maximum did not converge"
}
