// Package invent makes up the Saltmere families: a cohort of people who never
// lived, with relations, brain-state dynamics and questionnaires whose causes
// are known.
//
// Everything is drawn from streams named by one seed. Each person has hidden
// drives (see truth.go): how much of the time goes to each of nine states, how
// long visits last, how fast the whole sequence moves, and what is private to
// a questionnaire. A drive is the sum of an additive genetic value, handed on
// from both parents with new variation in each child and shared by identical
// twins; a value of the home, shared by the children of one mother; and a
// value of one's own. Per session some noise comes on top; a state sequence of
// 200 s at 100 Hz is then run as a semi-Markov chain, and the dynamics table
// holds nothing but counts from these sequences. Questionnaires follow from
// drives, from age, sex and motion as they are recorded, and from chance.
//
// Numbers are rounded to a few decimals, so that every machine makes the same
// files although logarithms differ in their last bits.
package invent
