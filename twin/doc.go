// Package twin estimates how much of a variable's variance relatives share, and
// why: from twins, siblings, half-siblings, parents and wider pedigrees.
//
// A *Pedigree reads who is whose parent and twin and answers how any two people
// are related. A *Sample is one variable of some of these people, complete in it
// and in their covariates. Fit maximises the likelihood of
//
//	y ~ N(X beta, A K + C R + D L + E I)
//
// in which A, C, D and E are variances and the matrices hold, for each pair of
// people,
//
//	K  twice their kinship
//	R  1 if they grew up in one home, else 0
//	L  the probability that both genes of a locus are the same by descent
//	I  1 for oneself
//
// so that A is additive genetic variance, C the environment that people of one
// home share, D dominance, and E what is each person's own, errors of
// measurement included. A model is a set of these components. The share of a
// component in the total A + C + D + E is written in small letters: a2, c2, d2
// and e2.
//
// # What is estimated
//
// The likelihood is that of the raw data with its constant, n ln(2 pi)
// included; variances have divisor n, and fixed effects, an intercept and the
// covariates, are inside the likelihood (restricted likelihood on request).
// Everyone counts: twins without their twin, lone people and families of any
// size add what they hold. Covariates are centred, scaled and made orthogonal
// inside and reported on their own scale.
//
// Every fit holds two maxima. The bounded one keeps variances at 0 or above and
// is what shares, AIC and BIC are made of. The signed one lies anywhere that the
// covariance matrix of every family is positive definite: its a2 is free of the
// upward pull of the bound, and likelihood ratios between signed fits have their
// usual distribution. An Interval is the profile likelihood's; there are no
// standard errors of variances, which mean nothing at a bound. Test knows the
// null distribution of each comparison of models.
//
// Correlation estimates the likeness of one kind of relatives on its own:
// intraclass by maximum likelihood for relations whose two people are of one
// kind, such as twins and siblings, interclass for parent and child and for
// spouses.
//
// # How it is computed
//
// Families whose matrices agree, member by member, share one covariance matrix
// and are reduced to their cross-products. One evaluation of the likelihood
// costs the number of such structures, not of families. Total variance and fixed
// effects are profiled out; the shares are found by Newton's method with exact
// derivatives, from several starts, and a search that did not end at a maximum
// says so.
//
// # Conventions
//
// People are named by their index in the pedigree. Samples are given as rows,
// the indices of their people, with values, covariates and so on in the same
// order. Missing values have no place here: a row with one is an error. What can
// come from data is an error with a type; lengths that do not match, people
// listed twice and the like panic, prefixed "twin: ". Inputs are never changed.
// A *Sample may be used by several goroutines at once, and equal inputs give
// equal bits.
//
// # What is not covered
//
// Assortative mating, interaction of genes with environment, and inbreeding in
// models with dominance (an error). Which of C and D a sample of twins and
// siblings holds cannot be told: the larger one hides the other, and the signed
// c2 says which way it leans.
package twin
