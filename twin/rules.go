package twin

import (
	"fmt"
	"strings"
)

// Rules decide what ids leave open. The zero value holds the defaults. Every
// use of a rule is counted in a Note.
type Rules struct {
	// UnknownParents is about people with equal family labels and no parent
	// ids. Default AssumeFullSiblings.
	UnknownParents UnknownParents
	// UnknownParent is about children of one known parent whose other parent
	// is not known for any of them. Default AssumeSameParent.
	UnknownParent UnknownParent
	// RearedWith says who makes a childhood home where no RearedIn does.
	// Default WithMother.
	RearedWith RearedWith
}

// UnknownParents is a rule for people of one family label without parent ids.
type UnknownParents uint8

// What people of one family label without parent ids are to each other.
const (
	AssumeFullSiblings UnknownParents = iota
	AssumeUnrelated
)

// String returns the word of the configuration: "full_siblings" or
// "unrelated".
func (u UnknownParents) String() string {
	return [...]string{"full_siblings", "unrelated"}[u]
}

// UnknownParent is a rule for people who share one known parent while the
// other is not known.
type UnknownParent uint8

// Who the unknown parent is: the same one for all of them (full siblings), or
// another one for each (half-siblings).
const (
	AssumeSameParent UnknownParent = iota
	AssumeOtherParent
)

// String returns the word of the configuration: "same" or "other".
func (u UnknownParent) String() string { return [...]string{"same", "other"}[u] }

// RearedWith is a rule for childhood homes.
type RearedWith uint8

// Whose children grow up together: those of one mother, or only those of one
// mother and one father.
const (
	WithMother RearedWith = iota
	WithBoth
)

// String returns the word of the configuration: "mother" or "both".
func (r RearedWith) String() string { return [...]string{"mother", "both"}[r] }

// PersonError is a contradiction in the ids of one person.
type PersonError struct {
	// Person is the index of the row that is at fault.
	Person int
	// Field is the column at fault, by its name in a people table: person,
	// mother, father, twin_set, zygosity, mz_set or sex.
	Field string
	// Other is the index of the row that Person contradicts, -1 when there
	// is none.
	Other int
	// Message is a clause that says what is wrong, with ids in quotes and
	// without indices.
	Message string
}

// Error names the person by index and the field, then says what is wrong.
func (e *PersonError) Error() string {
	return fmt.Sprintf("person %d, %s: %s", e.Person, e.Field, e.Message)
}

// Note tells of something that is no error but that the analyst should know:
// the use of a rule, a doubtful id, labels that became one family.
type Note struct {
	// About is the rule or the column: unknown_parents, unknown_parent,
	// mother, father, twin_set, zygosity, sex, family or reared_in.
	About string
	// People are the indices of the people concerned, ascending.
	People []int
	// Message is a whole sentence with counts and the first few ids.
	Message string
}

// counted returns "1 person", "2 people" and the like.
func counted(n int, one, many string) string {
	if n == 1 {
		return "1 " + one
	}
	return fmt.Sprintf("%d %s", n, many)
}

// listed joins the first few names and says how many more there are.
func listed(names []string) string {
	const most = 5
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:most], ", "), len(names)-most)
}
