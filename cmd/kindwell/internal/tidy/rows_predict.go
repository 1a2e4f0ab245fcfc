package tidy

// PredictionScore is a row of prediction_scores.csv.
type PredictionScore struct {
	Trait    string  `name:"trait" description:"The outcome that is predicted: a phenotype to a geneticist, a target to a machine learner."`
	Set      string  `name:"set" description:"Name of the set of measures (features) it is predicted from, as in the configuration."`
	Role     string  `name:"role" enum:"study negative_control subgroup" description:"Why the row is there: study for the traits of the study, negative_control for a confound or a shuffled trait put through the same procedure, subgroup for the same predictions scored in some of the people."`
	Subgroup string  `name:"subgroup" unfilled:"true" description:"Part of the people the score is taken over, for the role subgroup."`
	Level    string  `name:"level" enum:"all within_sibships between_sibships within_mz_pairs" description:"Which differences between people count: all of them, those between the members of a sibship (full siblings and twins of one mother and father), those between the means of sibships, or those between identical twins."`
	Scale    string  `name:"scale" enum:"residual raw" description:"What is compared: residual is the trait without what the confounds predict (regression coefficients from the training people) against its prediction from the measures; raw is the trait as it is against confounds and measures together."`
	Metric   string  `name:"metric" enum:"r r_by_fold rho r2 mae rmse auc balanced_accuracy calibration_slope calibration_intercept r2_confounds r2_full r2_added" description:"The score: r is Pearson's and rho Spearman's correlation over all held-out people of a repeat; r_by_fold the mean of the folds' own r; r2 is 1 - SSE/SST about the training mean, not the square of r, and is negative when the training mean predicts better; mae and rmse are the mean absolute and the root mean squared error; auc is the area under the ROC curve; r2_confounds, r2_full and r2_added belong to the confounds alone, to both, and to the difference."`
	Tested   bool    `name:"tested" description:"Whether this metric is the one that was tested by rearrangement; the others are shown without a p value."`
	People   int     `name:"n_people" unit:"people" description:"Number of people (samples) in the analysis; each is held out once a repeat."`
	Families int     `name:"n_families" unit:"families" description:"Number of families these people belong to; all relatives are held out together."`
	Value    float64 `name:"value" unit:"of the metric" description:"The score of people whose whole family the fitted model has never seen, averaged over folds and repeats; mae and rmse are in the unit of the trait, calibration_intercept too, the others have none."`
	SE       float64 `name:"se" unit:"of the metric" description:"Standard error of the value over folds, corrected for the overlap of training sets (Nadeau and Bengio 2003)."`
	Interval
	NullMean float64 `name:"null_mean" unit:"of the metric" description:"Mean of the score over rearrangements of the trait among exchangeable people: what the whole procedure reaches when measures and trait are unrelated."`
	NullSD   float64 `name:"null_sd" unit:"of the metric" description:"Standard deviation (divisor m - 1) of the score over these rearrangements."`
	Test
	ConstantFolds OptionalInt `name:"constant_folds" unit:"folds" description:"Number of held-out folds, over all repeats, in which everyone was predicted the same value, so that a correlation was counted as 0: strong penalties do this to traits that cannot be predicted."`
	Ceiling       float64     `name:"ceiling" unit:"1" unfilled:"true" description:"Largest correlation the reliabilities of trait and measures would allow: the root of their product."`
	Detectable    float64     `name:"detectable" unit:"of the metric" unfilled:"true" description:"Smallest true value that a study of this many people would find with a power of 0.8."`
}

// Prediction is a row of predictions.csv.
type Prediction struct {
	Trait     string      `name:"trait" key:"primary" description:"The outcome that is predicted: a phenotype to a geneticist, a target to a machine learner."`
	Set       string      `name:"set" key:"primary" description:"Name of the set of measures (features) it is predicted from."`
	Repeat    int         `name:"repeat" unit:"number" key:"primary" description:"Number, from 1, of the partition of the families into outer folds."`
	Fold      int         `name:"fold" unit:"number" description:"Number, from 1, of the outer fold the person was held out in."`
	Person    string      `name:"person" key:"primary" description:"Identifier of the person, as in the input tables."`
	Family    string      `name:"family" description:"Identifier of the person's family, the connected set of relatives that is held out together."`
	Observed  float64     `name:"observed" unit:"of the trait" description:"The trait as it was measured."`
	Baseline  float64     `name:"baseline" unit:"of the trait" description:"What the confounds alone predict for this person, with the regression coefficients of the training people; without confounds the training mean."`
	Target    float64     `name:"target" unit:"of the trait" description:"Observed minus baseline: the part of the trait the measures are asked to predict."`
	Predicted float64     `name:"predicted" unit:"of the trait" description:"Prediction of the target from the person's measures, by a model that has never seen the person or a relative; baseline plus predicted is the prediction of the trait itself."`
	Class     OptionalInt `name:"class" unit:"0 or 1" unfilled:"true" description:"Predicted class of a binary trait."`
}

// Penalty is a row of penalties.csv.
type Penalty struct {
	Trait    string  `name:"trait" key:"primary" description:"The outcome that is predicted."`
	Set      string  `name:"set" key:"primary" description:"Name of the set of measures (features) it is predicted from."`
	Repeat   int     `name:"repeat" unit:"number" key:"primary" description:"Number, from 1, of the partition of the families into outer folds."`
	Fold     int     `name:"fold" unit:"number" key:"primary" description:"Number, from 1, of the outer fold that was held out."`
	Penalty  float64 `name:"penalty" unit:"1" description:"The ridge penalty chosen inside the training people: the multiplier of the sum of squared weights against the sum (not the mean) of squared errors, with measures scaled to a standard deviation of 1; as a variance model it is the ratio of the residual variance to the variance of one measure's effect."`
	InnerMSE float64 `name:"inner_mse" unit:"squared unit of the trait" description:"Mean over inner folds of the mean squared error of the target at the chosen penalty: an optimistic number, since the penalty was chosen for it."`
	AtEnd    string  `name:"at_end" enum:"low high" description:"low or high when the choice is the first or the last penalty of the grid, so that a better one may lie outside; empty inside. high is the normal answer for a trait that cannot be predicted."`
}

// Fold is a row of folds.csv.
type Fold struct {
	PeopleGroup int    `name:"people_group" unit:"number" key:"primary" description:"Number of the group of traits with the same people (people_groups.csv) the folds belong to."`
	Repeat      int    `name:"repeat" unit:"number" key:"primary" description:"Number, from 1, of the partition of the families."`
	Fold        int    `name:"fold" unit:"number" description:"Number, from 1, of the outer fold in which the person is held out for testing."`
	Person      string `name:"person" key:"primary" description:"Identifier of the person, as in the input tables."`
	Family      string `name:"family" description:"Identifier of the person's family (connected set of relatives), which lies in one fold as a whole."`
}

// InnerFold is a row of inner_folds.csv.
type InnerFold struct {
	PeopleGroup int    `name:"people_group" unit:"number" key:"primary" description:"Number of the group of traits with the same people (people_groups.csv) the folds belong to."`
	Repeat      int    `name:"repeat" unit:"number" key:"primary" description:"Number, from 1, of the partition of the families."`
	Fold        int    `name:"fold" unit:"number" key:"primary" description:"Number, from 1, of the outer fold that is held out; its people have no row here."`
	InnerFold   int    `name:"inner_fold" unit:"number" description:"Number, from 1, of the inner fold: the part of the training people in which the person serves to choose the penalty (a validation fold)."`
	Person      string `name:"person" key:"primary" description:"Identifier of the person, as in the input tables."`
	Family      string `name:"family" description:"Identifier of the person's family (connected set of relatives), which lies in one inner fold as a whole."`
}

// Weight is a row of weights.csv.
type Weight struct {
	Trait         string  `name:"trait" key:"primary" description:"The outcome that is predicted."`
	Set           string  `name:"set" key:"primary" description:"Name of the set of measures (features)."`
	Measure       string  `name:"measure" key:"primary" description:"The measure (feature) the weight belongs to."`
	Weight        float64 `name:"weight" unit:"of the trait" description:"Mean over the outer folds' models of the ridge coefficient: change of the prediction for one training standard deviation of the measure, the others held fixed. Measures of one composition are given as log-ratio weights that add to 0. It shows how the model predicts, not which measure matters."`
	WeightSD      float64 `name:"weight_sd" unit:"of the trait" description:"Standard deviation of the coefficient over the outer folds' models; their training people overlap, so it is a measure of stability and not a standard error."`
	SignAgreement float64 `name:"sign_agreement" unit:"1" minimum:"0" maximum:"1" description:"Share of the outer folds' models whose coefficient has the sign of the mean."`
	Pattern       float64 `name:"pattern" unit:"of the trait x of the measure" description:"Covariance, in the training people, of the measure after the confounds (in its own unit) with the prediction, averaged over models; divide by the standard deviation of a measure to compare measures. It says which measures go along with the prediction, the reading that weights do not give (Haufe et al. 2014)."`
}
