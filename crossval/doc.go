// Package crossval says, for people who come in families, who is held out and
// who may be exchanged, and turns what comes of it into p-values and intervals.
//
// # Words
//
// People are numbered 0..n-1, the rows of an analysis. A family is a set of
// people who are connected by relations; it is given as a label a person where
// only membership matters (folds), and as a Family, a matrix of integer codes,
// where it matters who is what to whom (arrangements). What a code means is the
// caller's affair: equal codes are the same relation.
//
// An outer fold is a set of people on whom a model is tested that was trained
// on all others; an inner fold is the same inside those others, where the
// model's penalty is chosen. A repeat is one partition of all people into outer
// folds. An arrangement hands the values of people to places: to[place] is the
// person whose value comes to that place.
//
// # Folds
//
// BalancedFolds draws folds balanced in people, LeaveOneFamilyOut holds out
// one family at a time, GivenFolds takes folds from tables (a site as a fold,
// say). All return Folds that keep these rules, which Folds.Validate checks:
//
//   - every person is in one outer fold of every repeat, and in one inner fold
//     of every outer fold that does not hold it;
//   - no family is on two sides of any split, outer or inner;
//   - no outer and no inner fold is empty.
//
// Folds look at no trait unless FoldOptions.Strata asks for it, and every level
// of the columns in FoldOptions.Levels is in every training set.
//
// Own folds are cells: one partition of the families into outer x inner cells
// a repeat, inner fold i of an outer fold being cell i of every other one. A sum
// over a cell (of cross-products, say) is then a term of every training set
// that holds it.
//
// # Arrangements
//
// A permutation test may exchange people only if that leaves their joint
// distribution as it is under the null hypothesis. For related people these are
// the arrangements that keep the relation of every pair, in both directions:
// families that are alike change places as wholes, and members move inside by
// the symmetries of their family (Winkler et al. 2015, who describe them by
// nested blocks; here they are found as the automorphisms of the matrices of
// relations). A person's mark, a site for example, keeps its value among places
// with the same mark. NewExchange finds the whole set; it is counted exactly,
// drawn from uniformly, and written out in full where it is small
// (Exchange.Series). A series has no arrangements when only one is allowed:
// ErrOneArrangement.
//
// # p-values and intervals
//
// PValue is (b + 1) / (m + 1) for one test; LargestStatistic holds the chance of
// any false finding over many, LargestStandardized where their statistics have
// different scales, AcrossGroups over groups of people whose arrangements are
// drawn apart; BenjaminiHochberg holds the false discovery rate. A value within
// 1e-12 of the observed, relative to it, counts as reaching it. ResampledT is
// the interval of a mean over held-out folds.
//
// NaN as an observed statistic gives NaN; NaN among the values under the null
// counts as beyond every value, so that what could not be computed never makes
// a p-value smaller. Functions say where they differ.
//
// # Reproducibility
//
// Every draw comes from a stream named by seed, purpose and index: partition 3
// or arrangement 731 is the same whoever asks for it, in any order, on any
// number of workers. Folds, Exchange and Series are not changed after they are
// made and may be shared. Inputs are never changed.
//
// # Errors
//
// What can be wrong in data is an error: *CountError (too few families),
// *LevelError (a level that cannot be everywhere), *FoldError (a fault in given
// folds, with its person), *StructureError (a family whose symmetries are
// beyond search). Slices of the wrong length that only a mistake in a program
// makes are a panic where the function says so.
//
// # Not here
//
// Relations are made from pedigrees by package twin, models are fitted and
// scored by package predict. Missing values are the caller's: people are those
// of the analysis.
package crossval
