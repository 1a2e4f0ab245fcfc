package tidy

// Test is the shared ending of rows that carry a test (P in the manual).
type Test struct {
	P                 float64     `name:"p" unit:"1" minimum:"0" maximum:"1" description:"Probability of a statistic at least as far out as this one when the null hypothesis of the row is true, not corrected for the number of rows; from rearrangements it is (b + 1) / (m + 1), so it is never 0."`
	PFWER             float64     `name:"p_fwer" unit:"1" minimum:"0" maximum:"1" description:"Probability, when no effect exists in any row tested together with this one, that the largest of their statistics is at least as far out as this one: a p value corrected for multiple testing (family-wise error rate, single step)."`
	Q                 float64     `name:"q" unit:"1" minimum:"0" maximum:"1" description:"Smallest false discovery rate (expected share of false findings among the findings) at which this row would be called a finding, by the procedure of Benjamini and Hochberg."`
	Tail              string      `name:"tail" enum:"upper lower two_sided" description:"Direction of the test: upper counts statistics that are as large or larger, lower as small or smaller, two_sided both."`
	Permutations      OptionalInt `name:"permutations" unit:"arrangements" description:"Number of rearrangements the p value rests on, without the observed one; it differs from the number asked for when the families allow fewer and all of them were used."`
	Log10Arrangements float64     `name:"log10_arrangements" unit:"1" description:"Decimal logarithm of the number of rearrangements the families allow, the observed one included: how much room there is for a permutation test that keeps every relation as it is."`
	FamiliesFixed     OptionalInt `name:"families_fixed" unit:"families" description:"Number of families whose members every allowed rearrangement leaves in their places, because no other family has the same structure and no two members may be exchanged: they add no information to the permutation test."`
}

// Interval is the shared ending of rows that carry an interval (I in the
// manual).
type Interval struct {
	Low          float64 `name:"low" unit:"as the value" description:"Lower limit of the interval of the value before it in the row, in the unit of that value."`
	High         float64 `name:"high" unit:"as the value" description:"Upper limit of the interval of the value before it in the row, in the unit of that value."`
	IntervalKind string  `name:"interval_kind" enum:"resampled_t conditional profile bootstrap" description:"How the interval was made: resampled_t is a t interval over fold scores corrected for overlapping training sets (Nadeau and Bengio 2003), conditional a bootstrap of held-out families that leaves out the spread of training and is too narrow, profile a profile-likelihood interval, bootstrap a percentile bootstrap of families."`
	Confidence   float64 `name:"confidence" unit:"1" minimum:"0" maximum:"1" description:"Share of studies like this one whose interval would cover the true value if the assumptions hold, for instance 0.95."`
}

// Relation is a row of relations.csv.
type Relation struct {
	Relation    string `name:"relation" key:"primary" enum:"mz dz_same_sex dz_opposite_sex unknown_zygosity full_sibling half_sibling parent_child spouse other_kin" description:"Kind of relation of two people, read from the ids of parents and twins: mz are identical (monozygotic) twins, who share all genes; dz fraternal twins, who share half of them on average, as full siblings and parent and child do; half-siblings share a quarter."`
	Pairs       int    `name:"pairs" unit:"pairs" description:"Number of pairs of people in the study with this relation; a person is in as many pairs as there are such relatives in the study."`
	Families    int    `name:"families" unit:"families" description:"Number of families (connected sets of relatives, which are never split between training and testing) that hold at least one such pair."`
	SharingHome int    `name:"sharing_home" unit:"pairs" description:"Number of these pairs that count as brought up in one home, so that the shared environment C makes them alike in the variance models."`
}

// PeopleGroup is a row of people_groups.csv.
type PeopleGroup struct {
	PeopleGroup int    `name:"people_group" unit:"number" key:"primary" description:"Number, from 1, of a group of traits that are complete in exactly the same people; these traits share folds, matrix decompositions and rearrangements."`
	Traits      string `name:"traits" description:"Names of the traits (outcomes to be predicted) of the group, separated by semicolons."`
	People      int    `name:"n_people" unit:"people" description:"Number of people (samples) who are complete in these traits, in every confound and in every measure that predicts them."`
	Families    int    `name:"n_families" unit:"families" description:"Number of families these people belong to: the number of independent units, and the most folds that can be made."`
}

// Exclusion is a row of exclusions.csv.
type Exclusion struct {
	Analysis string `name:"analysis" description:"Part of the study that went on without the person, for instance predict or heritability."`
	Variable string `name:"variable" description:"Trait, measure or confound whose analysis leaves the person out; empty when the person is left out of the whole part."`
	Person   string `name:"person" description:"Identifier of the person, as in the input tables; empty when the variable as a whole is left out of the analysis."`
	Reason   string `name:"reason" description:"Why the person or the variable is left out, naming the missing value or the rule."`
}

// Warning is a row of warnings.csv.
type Warning struct {
	Analysis string `name:"analysis" description:"Part of the study the warning comes from, for instance people, predict or heritability."`
	About    string `name:"about" description:"What the warning is about: a variable, a family, a file or a cell; empty when it is about the whole part."`
	Message  string `name:"message" description:"The warning as a sentence, with the counts and limits that led to it."`
}
