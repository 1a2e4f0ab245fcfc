// Package features turns recordings and raw columns into the measures of a
// person that the other packages analyse.
//
// # Vocabulary
//
// A measure is one number a person (and, before averaging, a session): the
// share of time in a state, a mean dwell time, a rate. A composition is a set
// of measures that are parts of one whole, such as the occupancies of all
// states. Matrices have one row a person or session and one column a measure
// or part; slices hold one column.
//
// # Order of work
//
// Each session's row is transformed by itself (LogColumn, LogitColumn, CLR,
// ILR). Then MeanBy averages the sessions of a person. Then ranks are turned
// into normal scores (RankNormalScores), since a rank is a property of the
// people compared and not of a session. Whoever predicts people who were not
// seen learns the scores from the training people alone (FitRankNormal) and
// applies them to the others (RankNormal.Apply). Filling of missing cells,
// confounds and standardising come after all of this and belong to the
// analysis.
//
// # Missing values
//
// NaN is the one missing value. It stays NaN in every transform, takes no
// rank, and is left out of means; a mean over nothing is NaN. A composition
// with a missing part is missing in all of its parts, since the whole is
// unknown.
//
// # Errors
//
// A value on which a transform is not defined is a CellError with its place;
// every such cell is returned, in row order, so that a file can be put right
// in one go, and its result is NaN. What depends on settings alone
// (CheckComposition) is an error that can be asked for before any data are
// read. Panics, with a message that starts "features: ", mean a mistake in the
// calling code: slices of different length, a setting that was not checked.
//
// Arguments are never changed.
package features
