// Package stream gives reproducible random numbers by name.
//
// Every random draw of a study comes from a stream that is named by the
// study's seed, a purpose ("arrangements", "folds") and the index of the piece
// of work (arrangement 731, repeat 2). A stream therefore holds the same
// numbers whoever draws them, in whatever order, on however many workers, and
// no piece of work can shift the numbers of another.
//
// The generator is ChaCha8, keyed by the SHA-256 of the name. Integers,
// uniform numbers and orders are the same on every machine and with every
// version of Go, since this package turns bits into numbers by its own rules;
// normal deviates agree across machines only to the accuracy of the logarithm.
package stream
