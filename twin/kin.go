package twin

// Kin says who is related to whom, by index of a person. It is all that the
// variance models need to know of a pedigree; *Pedigree is the usual one.
//
// Every method is symmetric in its two people. Answers about two people of
// different families are never asked for.
type Kin interface {
	// Family is the label of the family of person i. People with different
	// labels are independent.
	Family(i int) int

	// Kinship is twice the kinship coefficient of persons i and j, their
	// expected share of genes in common by descent: 1 for identical twins, 0.5
	// for full siblings and for parent and child, 0.25 for half-siblings.
	// Kinship(i, i) is 1 plus the inbreeding coefficient of i.
	Kinship(i, j int) float64

	// SharedHome says whether persons i and j grew up in the same home. The
	// relation is an equivalence inside a family: whoever shares a home with j
	// shares it with everyone j shares it with. SharedHome(i, i) is true.
	SharedHome(i, j int) bool

	// Dominance is the probability that persons i and j have both genes of a
	// locus by common descent: 1 for oneself and an identical twin, 0.25 for
	// full siblings, 0 where one side only is shared.
	Dominance(i, j int) float64

	// Relation names how persons i and j belong together.
	Relation(i, j int) Relation
}
