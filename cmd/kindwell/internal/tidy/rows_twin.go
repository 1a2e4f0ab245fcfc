package tidy

// Heritability is a row of heritability.csv.
type Heritability struct {
	Variable        string  `name:"variable" key:"primary" description:"The phenotype whose variance is divided: a measure, a trait or a confound."`
	Role            string  `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	Transform       string  `name:"transform" enum:"none log logit rank_normal clr ilr" description:"Transformation of the variable before the model; a share of variance belongs to this scale."`
	Scale           string  `name:"scale" enum:"observed liability" description:"observed when the shares are of the variance of the variable itself, liability when they are of a normal tendency behind a binary one."`
	Model           string  `name:"model" enum:"ACE ADE AE CE E" description:"The headline model, chosen before the data were seen: A additive genetic effects, C environment shared by people brought up in one home, D genetic dominance, E everything that makes identical twins differ."`
	Covariates      string  `name:"covariates" description:"Covariates of the mean fitted together with the variances, separated by semicolons; the shares are of the variance that remains."`
	A2              float64 `name:"a2" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance, in this population, that goes with additive genetic effects (narrow-sense heritability); to a machine learner, the weight of the kinship kernel. It says nothing of a single person or of differences between groups."`
	A2Low           float64 `name:"a2_low" unit:"1" minimum:"0" maximum:"1" description:"Lower limit of the profile-likelihood interval of a2, cut at 0."`
	A2High          float64 `name:"a2_high" unit:"1" minimum:"0" maximum:"1" description:"Upper limit of the profile-likelihood interval of a2, cut at 1."`
	A2Signed        float64 `name:"a2_signed" unit:"1" description:"The same share with variances allowed below 0: close to unbiased, while a2, which cannot be negative, is not; average this one over studies."`
	A2SignedLow     float64 `name:"a2_signed_low" unit:"1" description:"Lower limit of the profile-likelihood interval of a2_signed; may be below 0."`
	A2SignedHigh    float64 `name:"a2_signed_high" unit:"1" description:"Upper limit of the profile-likelihood interval of a2_signed; may be above 1."`
	D2              float64 `name:"d2" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance that goes with genetic dominance (interaction of the two alleles of a place on the genome); empty when the model has no D."`
	C2              float64 `name:"c2" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance that goes with the environment shared by people brought up in one home; empty when the model has no C."`
	E2              float64 `name:"e2" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance that makes even identical twins differ; it holds unshared environment and measurement error alike."`
	H2Broad         float64 `name:"h2_broad" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance that goes with genetic effects of either kind (broad-sense heritability), a2 + d2."`
	Familial        float64 `name:"familial" unit:"1" minimum:"0" maximum:"1" description:"Share of the variance that goes with anything relatives share, a2 + c2 + d2: it is pinned down much better than its parts."`
	FamilialLow     float64 `name:"familial_low" unit:"1" minimum:"0" maximum:"1" description:"Lower limit of the profile-likelihood interval of familial, cut at 0."`
	FamilialHigh    float64 `name:"familial_high" unit:"1" minimum:"0" maximum:"1" description:"Upper limit of the profile-likelihood interval of familial, cut at 1."`
	Test            `unfilled:"p_fwer permutations log10_arrangements families_fixed"`
	PPermutation    float64 `name:"p_permutation" unit:"1" minimum:"0" maximum:"1" unfilled:"true" description:"p value of the same test by exchange of zygosity labels among twin sets with the same sexes and relatives, which needs no normal distribution."`
	LowestAIC       string  `name:"lowest_aic" enum:"ACE ADE AE CE E" description:"Name of the model with the lowest AIC among those fitted; shown for comparison and used for no estimate in this row."`
	RMZ             float64 `name:"r_mz" unit:"1" description:"Intraclass correlation of identical twins; it would be a2 + d2 + c2."`
	RDZSame         float64 `name:"r_dz_same_sex" unit:"1" description:"Intraclass correlation of fraternal twins of the same sex; it would be a2/2 + d2/4 + c2."`
	RDZOpposite     float64 `name:"r_dz_opposite_sex" unit:"1" description:"Intraclass correlation of fraternal twins of opposite sex; a difference from same-sex pairs hints at effects that depend on sex."`
	RSibling        float64 `name:"r_sibling" unit:"1" description:"Intraclass correlation of full siblings who are not twins; a difference from fraternal twins hints at an environment that only twins share."`
	People          int     `name:"n_people" unit:"people" description:"Number of people with the variable and every covariate, whether they have relatives in the study or not."`
	Families        int     `name:"n_families" unit:"families" description:"Number of families (connected sets of relatives) these people belong to."`
	MZPairs         int     `name:"n_mz_pairs" unit:"pairs" description:"Number of pairs of identical twins complete in the variable."`
	DZSamePairs     int     `name:"n_dz_same_sex" unit:"pairs" description:"Number of pairs of fraternal twins of the same sex complete in the variable."`
	DZOppositePairs int     `name:"n_dz_opposite_sex" unit:"pairs" description:"Number of pairs of fraternal twins of opposite sex complete in the variable."`
	SiblingPairs    int     `name:"n_sibling_pairs" unit:"pairs" description:"Number of pairs of full siblings who are not twins of each other, complete in the variable."`
	SingleTwins     int     `name:"n_single_twins" unit:"people" description:"Number of twins whose co-twin lacks the variable or a covariate; they stay in and inform means and variances."`
	DetectableA2    float64 `name:"detectable_a2" unit:"1" minimum:"0" maximum:"1" description:"Smallest a2 that so many complete twin pairs show with a power of 0.8 in the one-sided test of A given C at .05, when there is no C; empty without pairs of both kinds."`
	DetectableC2    float64 `name:"detectable_c2" unit:"1" unfilled:"true" description:"Smallest c2 that a study of these families would find with a power of 0.8."`
	Flags           string  `name:"flags" description:"Words, separated by semicolons, for what a reader should know before using the row, for instance suggests_dominance (identical twins more than twice as alike as fraternal ones), same_in_twins (equal in nearly all pairs, so not fitted), two_values, not_fitted or not_converged."`
}

// VarianceComponent is a row of variance_components.csv.
type VarianceComponent struct {
	Variable       string  `name:"variable" key:"primary" description:"The phenotype whose variance is divided: a measure, a trait or a confound."`
	Role           string  `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	Model          string  `name:"model" key:"primary" enum:"ACE ADE AE CE E" description:"The model, named by its components."`
	Component      string  `name:"component" key:"primary" enum:"A C D E" description:"A additive genetic effects, C environment shared in one home, D genetic dominance, E what makes identical twins differ, measurement error included; each is the multiplier of a known matrix of relations between people."`
	Variance       float64 `name:"variance" unit:"squared unit of the variable" minimum:"0" description:"Maximum-likelihood estimate of the component, kept at 0 or above, on the transformed scale of the variable."`
	Share          float64 `name:"share" unit:"1" minimum:"0" maximum:"1" description:"The component divided by the sum of all components of the model."`
	Low            float64 `name:"low" unit:"1" minimum:"0" maximum:"1" description:"Lower limit of the profile-likelihood interval of the share, cut at 0."`
	High           float64 `name:"high" unit:"1" minimum:"0" maximum:"1" description:"Upper limit of the profile-likelihood interval of the share, cut at 1."`
	AtBound        bool    `name:"at_bound" description:"Whether the estimate lies at 0, the bound of a variance, so that the likelihood would rise beyond it."`
	SignedVariance float64 `name:"signed_variance" unit:"squared unit of the variable" description:"Estimate of the component when it may be below 0, with the other components free as well."`
	SignedShare    float64 `name:"signed_share" unit:"1" description:"Signed variance divided by the sum of the signed variances of the model; may lie outside 0 to 1."`
}

// VarianceModel is a row of variance_models.csv.
type VarianceModel struct {
	Variable      string  `name:"variable" key:"primary" description:"The phenotype whose variance is divided: a measure, a trait or a confound."`
	Role          string  `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	Model         string  `name:"model" key:"primary" enum:"ACE ADE AE CE E" description:"The model, named by its components (A additive genetic, C shared environment, D dominance, E unshared)."`
	LogLikelihood float64 `name:"log_likelihood" unit:"nat" description:"Natural logarithm of the likelihood of the raw data at its maximum, with the constant n ln(2 pi) included."`
	Parameters    int     `name:"parameters" unit:"parameters" description:"Number of free parameters: variance components, intercept and covariates."`
	AIC           float64 `name:"aic" unit:"nat" description:"Akaike's criterion, -2 log-likelihood + 2 parameters; lower is better, only differences within one variable mean something."`
	BIC           float64 `name:"bic" unit:"nat" description:"Schwarz's criterion, -2 log-likelihood + parameters x ln(families); lower is better."`
	Converged     bool    `name:"converged" description:"Whether the search for the maximum ended as it should; do not use the row when false."`
	Evaluations   int     `name:"evaluations" unit:"evaluations" description:"Number of times the likelihood was computed."`
	LowestAIC     bool    `name:"lowest_aic" description:"Whether this model has the lowest AIC of those fitted to the variable; used for no estimate."`
}

// VarianceTest is a row of variance_tests.csv.
type VarianceTest struct {
	Variable          string      `name:"variable" key:"primary" description:"The phenotype whose variance is divided: a measure, a trait or a confound."`
	Role              string      `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	NullModel         string      `name:"null_model" key:"primary" description:"The smaller model, true under the null hypothesis; CE against ACE asks whether A is needed beside C."`
	FullModel         string      `name:"full_model" key:"primary" description:"The larger model it is compared with."`
	Statistic         float64     `name:"statistic" unit:"1" description:"The test statistic: for the method signed_root the root of the likelihood ratio of unbounded models with the sign of the component, standard normal under the null; for the others twice the difference in log-likelihood."`
	DF                OptionalInt `name:"df" unit:"degrees of freedom" description:"Number of parameters the null model fixes."`
	Weight0           float64     `name:"weight_0" unit:"1" minimum:"0" maximum:"1" description:"Weight of the chi-square distribution with 0 degrees of freedom (always 0) in the null distribution of a ratio at the bound of a variance."`
	Weight1           float64     `name:"weight_1" unit:"1" minimum:"0" maximum:"1" description:"Weight of the chi-square distribution with 1 degree of freedom in that mixture."`
	Weight2           float64     `name:"weight_2" unit:"1" minimum:"0" maximum:"1" description:"Weight of the chi-square distribution with 2 degrees of freedom in that mixture."`
	PMixture          float64     `name:"p_mixture" unit:"1" minimum:"0" maximum:"1" description:"p value of the bounded likelihood ratio from the mixture of chi-square distributions (Self and Liang 1987); conservative when another component is at its bound too."`
	Method            string      `name:"method" description:"How p was made: signed_root (one-sided, normal distribution, unbounded models) or mixture (bounded models, the mixture of chi-square distributions that the weights give)."`
	P                 float64     `name:"p" unit:"1" minimum:"0" maximum:"1" description:"p value of the test by the stated method: probability of a statistic at least as large when the null model is true."`
	PPermutation      float64     `name:"p_permutation" unit:"1" minimum:"0" maximum:"1" unfilled:"true" description:"p value of the signed root by exchange of zygosity labels among twin sets with the same sexes and relatives."`
	PFWER             float64     `name:"p_fwer" unit:"1" minimum:"0" maximum:"1" unfilled:"true" description:"p_permutation corrected for all variables tested on the same people, by the largest statistic of each labelling."`
	Q                 float64     `name:"q" unit:"1" minimum:"0" maximum:"1" description:"Smallest false discovery rate at which this row would be called a finding among the same tests of all variables (Benjamini and Hochberg)."`
	Permutations      OptionalInt `name:"permutations" unit:"arrangements" unfilled:"true" description:"Number of exchanges of zygosity labels p_permutation rests on, without the observed labels."`
	Log10Arrangements float64     `name:"log10_arrangements" unit:"1" unfilled:"true" description:"Decimal logarithm of the number of ways in which the zygosity labels may be exchanged."`
}

// TwinCorrelation is a row of twin_correlations.csv.
type TwinCorrelation struct {
	Variable    string  `name:"variable" key:"primary" description:"The phenotype the relatives are compared in: a measure, a trait or a confound."`
	Role        string  `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	Relation    string  `name:"relation" key:"primary" enum:"mz dz_same_sex dz_opposite_sex unknown_zygosity full_sibling half_sibling parent_child spouse other_kin" description:"Kind of relation of the two people of a pair, for instance mz for identical twins and dz_same_sex for fraternal twins of the same sex."`
	Pairs       int     `name:"pairs" unit:"pairs" description:"Number of pairs that the correlation rests on: complete in the variable and the covariates, and not left out beside a relation too rare for a correlation of its own. Without a correlation, the number of complete pairs."`
	Families    int     `name:"families" unit:"families" description:"Number of families these pairs come from."`
	Correlation float64 `name:"correlation" unit:"1" description:"How alike these relatives are, after the covariates: intraclass correlation by maximum likelihood with one mean and one variance for relations whose two sides are alike, interclass correlation for parent and child and for spouses."`
	Interval
}

// FixedEffect is a row of fixed_effects.csv.
type FixedEffect struct {
	Variable string  `name:"variable" key:"primary" description:"The phenotype whose mean is modelled: a measure, a trait or a confound."`
	Role     string  `name:"role" key:"primary" enum:"measure trait confound" description:"What the variable is in the study: measure (a feature), trait (an outcome) or confound (a nuisance variable)."`
	Model    string  `name:"model" key:"primary" enum:"ACE ADE AE CE E" description:"The variance model the effect was estimated with."`
	Term     string  `name:"term" key:"primary" description:"The intercept, a covariate, its square, a product, or a level of a category."`
	Estimate float64 `name:"estimate" unit:"of the variable per unit of the term" description:"Change of the mean of the (transformed) variable for one unit of the term, by generalised least squares at the estimated variances; relatives are not counted as independent people."`
	SE       float64 `name:"se" unit:"of the variable per unit of the term" description:"Standard error of the estimate at the estimated variances."`
}
