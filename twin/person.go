package twin

// Person is one row of a people table: the ids from which relations are read.
// Empty text means not known. Ids are compared as they are, without a change
// of case or space.
type Person struct {
	// ID names the person; no two people have the same.
	ID string
	// Family is the analyst's label of the family, empty for none.
	Family string
	// Mother and Father are ids of people, in the table or not.
	Mother, Father string
	// TwinSet is equal for the members of one pair, three or more born
	// together; empty for people who are no twins.
	TwinSet string
	// Zygosity is that of the person's twin set, ZygosityUnknown for people
	// who are no twins.
	Zygosity Zygosity
	// MZSet is equal for people of one twin set who are identical; needed
	// only in sets of three or more where some are and some are not.
	MZSet string
	// RearedIn is equal for people who grew up in one home.
	RearedIn string
	Sex      Sex
}

// Sex is the recorded sex, used to check parents and identical twins and to
// tell opposite-sex twins.
type Sex uint8

// The sexes; the zero value is not known.
const (
	SexUnknown Sex = iota
	Female
	Male
)

// String returns "female", "male" or "".
func (s Sex) String() string {
	switch s {
	case Female:
		return "female"
	case Male:
		return "male"
	}
	return ""
}

// Zygosity says whether twins come from one egg or two.
type Zygosity uint8

// The zygosities; the zero value is not known, or no twin.
const (
	ZygosityUnknown Zygosity = iota
	Monozygotic
	Dizygotic
)

// String returns "MZ", "DZ" or "".
func (z Zygosity) String() string {
	switch z {
	case Monozygotic:
		return "MZ"
	case Dizygotic:
		return "DZ"
	}
	return ""
}
