// Package predict says how well measures predict traits of people who were
// never seen: ridge regression with the confounds taken out inside every fold,
// a penalty chosen by inner folds, scores of held-out people, and the same
// procedure over rearranged traits.
//
// # Words
//
// People are rows, in one order in all matrices of an analysis. Measures
// (n x p) predict; traits (n x t) are predicted; confounds (n x c) are taken
// out of both, and a constant is always among them. Folds, from package
// crossval, say who is held out when: in every repeat each person is held out
// of one outer fold, and the training people of that fold are divided again
// into inner folds. A penalty is the multiplier of the sum of squared weights
// against the sum of squared errors.
//
// # One training set
//
// Measures and trait are regressed on the constant and the confounds over the
// training people; their residuals, the measures divided by their standard
// deviation (divisor n), enter
//
//	sum (y - X b)^2 + penalty * sum b^2 .
//
// The training coefficients, means and deviations are applied to the held-out
// people. A person's baseline is what the training coefficients make of her
// confounds; her target is trait less baseline; the prediction is of the
// target. Without confounds the target is the trait less its training mean. A
// measure that is constant in the training set, or of which the confounds
// leave less than 1e-10 of its deviation, has weight 0 there.
//
// A measure may be on a scale that is learnt from people (ranks, states found
// in recordings): Options.Scalers and NewLearnedDesign learn it from each
// training set anew.
//
// # The nested procedure
//
// For each outer fold the penalty with the least mean, over inner folds, of
// the fold's mean squared error of the target wins; of penalties within 1e-12
// of the least, relative to it, the largest. The fit is then made anew on all
// training people. NewDesign does what depends on no trait; Fit predicts
// traits; Null repeats Fit's procedure for every rearrangement of a trait's
// residuals and returns the chosen Metric. Ridge is the plain regression, on
// one set of people.
//
// # How it is fast
//
// Each training set is decomposed once, and serves every penalty, trait and
// rearrangement. Trait columns go through it in blocks of matrix products; the
// squared errors of all penalties together cost one p x p product a column by
// partial fractions (see type spectrum). Sums over the people of folds are
// made once a fold, or once a cell where inner folds are made of shared cells.
// With more measures than training people the n x n products of people take
// the place of those of measures. Learnt measures have no such sums in common:
// they go by the rows of people and cost more.
//
// Columns are independent and every sum has one order: results are the same,
// bit for bit, for any number of workers. Decompositions beyond 48 MB are made
// when needed and dropped, a run of outer folds at a time.
//
// # Missing values, errors, panics
//
// NaN and infinities are errors that name person and column (from 0), except
// for NaN in measures with Options.FillMissing. Everything that can come from
// data is an error; panics, prefixed "predict:", are faults of the calling
// code. Inputs are never changed.
//
// # Not here
//
// Files, names, printing, p-values and multiplicity (package crossval), and who
// may be exchanged with whom. Intervals are of the corrected resampled t only:
// pooled correlations, and designs that leave one family out, have none.
package predict
