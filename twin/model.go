package twin

import "fmt"

// Component is one source of variance.
type Component uint8

// The components in the order in which they are listed everywhere.
const (
	// A is additive genetic variance: relatives share it in proportion to
	// twice their kinship.
	A Component = iota
	// C is shared environment: people of one childhood home share it whole.
	C
	// D is dominance variance: relatives share it in proportion to the
	// probability that both genes of a locus are the same by descent.
	D
	// E is what no two people share, unshared environment and measurement
	// error.
	E
)

var componentNames = [...]string{A: "A", C: "C", D: "D", E: "E"}

// String returns the letter of the component.
func (c Component) String() string {
	if int(c) < len(componentNames) {
		return componentNames[c]
	}
	return fmt.Sprintf("Component(%d)", uint8(c))
}

// Model is a set of components; E belongs to every one.
type Model uint8

// The models. C and D are never together: twins and siblings cannot tell them
// apart, see ModelADE.
const (
	// ModelE says that relatives are no more alike than strangers.
	ModelE Model = iota
	// ModelAE says that additive genes alone make relatives alike.
	ModelAE
	// ModelCE says that the home alone makes relatives alike.
	ModelCE
	// ModelDE is dominance without additive variance: no sensible account of
	// a trait, but the null hypothesis of A given D.
	ModelDE
	// ModelACE is the classical model of twins.
	ModelACE
	// ModelADE has dominance in the place of the home. Without bounds and on
	// twins and full siblings reared together it is ModelACE in other words,
	// A' = A + 1.5 D and C' = -D/2 (Martin et al. 1978).
	ModelADE
)

var models = [...]struct {
	name       string
	components []Component
}{
	ModelE:   {"E", []Component{E}},
	ModelAE:  {"AE", []Component{A, E}},
	ModelCE:  {"CE", []Component{C, E}},
	ModelDE:  {"DE", []Component{D, E}},
	ModelACE: {"ACE", []Component{A, C, E}},
	ModelADE: {"ADE", []Component{A, D, E}},
}

// String returns the letters of the model's components.
func (m Model) String() string {
	if int(m) < len(models) {
		return models[m].name
	}
	return fmt.Sprintf("Model(%d)", uint8(m))
}

// Components returns the components of the model in their usual order, E last.
func (m Model) Components() []Component {
	return append([]Component(nil), m.components()...)
}

// components is Components without the copy. It panics on a model that is not
// one of the constants.
func (m Model) components() []Component {
	if int(m) >= len(models) {
		panic("twin: no such model: " + m.String())
	}
	return models[m].components
}

// position returns where c stands among the model's components, -1 when it is
// not one of them.
func (m Model) position(c Component) int {
	for i, own := range m.components() {
		if own == c {
			return i
		}
	}
	return -1
}

// Has reports whether c is a component of the model.
func (m Model) Has(c Component) bool { return m.position(c) >= 0 }

// ParseModel returns the model of that name, for instance "ACE".
func ParseModel(name string) (Model, error) {
	for m := range models {
		if models[m].name == name {
			return Model(m), nil
		}
	}
	return 0, fmt.Errorf("no model %q; the models are E, AE, CE, DE, ACE and ADE", name)
}

// Criterion is the likelihood that is maximised.
type Criterion uint8

const (
	// ML is the full likelihood of the data, fixed effects included. It is the
	// default, and the only one whose values may be compared between models
	// with different covariates.
	ML Criterion = iota
	// REML is the likelihood of what is left after the fixed effects
	// (Patterson & Thompson 1971): variances of small samples without the
	// downward pull of estimated means.
	REML
)

// String returns "ML" or "REML".
func (c Criterion) String() string {
	if c == REML {
		return "REML"
	}
	return "ML"
}
