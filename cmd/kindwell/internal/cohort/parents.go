package cohort

import "fmt"

// SharedParent is a parent without a row whom several family labels name: now
// and then a real one, more often a word or number that means unknown.
type SharedParent struct {
	Role             string // mother or father
	ID               string
	Children, Labels int
}

// manyLabels is the number of family labels from which a parent is doubtful.
const manyLabels = 3

// SharedParents lists the doubtful parents in the order of the table.
func (c *Cohort) SharedParents() []SharedParent {
	type key struct{ role, id string }
	labels := make(map[key]map[string]bool)
	children := make(map[key]int)
	var order []key
	for _, r := range c.Records {
		for _, k := range []key{{motherRole, r.Mother}, {fatherRole, r.Father}} {
			if _, hasRow := c.Index(k.id); k.id == "" || hasRow {
				continue
			}
			if labels[k] == nil {
				labels[k] = make(map[string]bool)
				order = append(order, k)
			}
			labels[k][r.Family] = true
			children[k]++
		}
	}
	var shared []SharedParent
	for _, k := range order {
		if n := len(labels[k]); n >= manyLabels {
			shared = append(shared, SharedParent{k.role, k.id, children[k], n})
		}
	}
	return shared
}

// String says what is doubtful and what to do, without the id.
func (s SharedParent) String() string {
	return fmt.Sprintf("is the %s of %d people under %d family labels, which makes them one family; if it means unknown, leave these cells empty (or name it under missing_codes, if it is a value in no other column)",
		s.Role, s.Children, s.Labels)
}
