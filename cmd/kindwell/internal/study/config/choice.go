package config

// Choice is one value of a key that takes one of several words.
type Choice struct {
	Name    string
	Meaning string
	Later   bool // in the layout, not available in this version
}

// chooser is a type of key whose values are words of a fixed list.
type chooser interface{ Choices() []Choice }

// UnknownParents says what people of one family label without parent ids are
// to each other.
type UnknownParents string

// The values of UnknownParents.
const (
	FullSiblings UnknownParents = "full_siblings"
	Unrelated    UnknownParents = "unrelated"
)

// Choices returns the allowed words.
func (UnknownParents) Choices() []Choice {
	return []Choice{
		{Name: string(FullSiblings), Meaning: "full siblings"},
		{Name: string(Unrelated), Meaning: "not related"},
	}
}

// UnknownParent says who the other parent of two people is who share one
// parent, where the other is unknown for both.
type UnknownParent string

// The values of UnknownParent.
const (
	SameParent  UnknownParent = "same"
	OtherParent UnknownParent = "other"
)

// Choices returns the allowed words.
func (UnknownParent) Choices() []Choice {
	return []Choice{
		{Name: string(SameParent), Meaning: "the same person, if the family label is the same or empty: full siblings"},
		{Name: string(OtherParent), Meaning: "two people: half-siblings"},
	}
}

// RearedWith says who makes a childhood home where no column does.
type RearedWith string

// The values of RearedWith.
const (
	RearedWithMother RearedWith = "mother"
	RearedWithBoth   RearedWith = "both"
)

// Choices returns the allowed words.
func (RearedWith) Choices() []Choice {
	return []Choice{
		{Name: string(RearedWithMother), Meaning: "people of one mother share a home"},
		{Name: string(RearedWithBoth), Meaning: "people of one mother and one father share a home"},
	}
}

// DZTwins says whether dizygotic twins may trade places with their siblings
// in arrangements.
type DZTwins string

// The values of DZTwins.
const (
	DZApart        DZTwins = "apart"
	DZWithSiblings DZTwins = "with_siblings"
)

// Choices returns the allowed words.
func (DZTwins) Choices() []Choice {
	return []Choice{
		{Name: string(DZApart), Meaning: "twins trade places with each other only"},
		{Name: string(DZWithSiblings), Meaning: "twins and their siblings trade places"},
	}
}

// LearnedOn says on whose recordings the brain states were learned.
type LearnedOn string

// The values of LearnedOn.
const (
	OtherPeople LearnedOn = "other_people"
	SamePeople  LearnedOn = "same_people"
	PerFold     LearnedOn = "per_fold"
	NoStates    LearnedOn = "no_states"
)

// Choices returns the allowed words.
func (LearnedOn) Choices() []Choice {
	return []Choice{
		{Name: string(OtherPeople), Meaning: "on people outside this study"},
		{Name: string(SamePeople), Meaning: "on people of this study: a leak that no fold can mend, and a warning says so"},
		{Name: string(PerFold), Meaning: "on the training people of each fold", Later: true},
		{Name: string(NoStates), Meaning: "the measures do not come from learned states"},
	}
}

// Scale is a scale of measures.
type Scale string

// The values of Scale.
const (
	ScaleNone       Scale = "none"
	ScaleLog        Scale = "log"
	ScaleLogit      Scale = "logit"
	ScaleCLR        Scale = "clr"
	ScaleILR        Scale = "ilr"
	ScaleRankNormal Scale = "rank_normal"
)

// Choices returns the allowed words.
func (Scale) Choices() []Choice {
	return []Choice{
		{Name: string(ScaleNone), Meaning: "as it is"},
		{Name: string(ScaleLog), Meaning: "natural logarithm; 0 or less is refused"},
		{Name: string(ScaleLogit), Meaning: "log odds; only values between 0 and 1"},
		{Name: string(ScaleCLR), Meaning: "centred log-ratio of all parts of one whole"},
		{Name: string(ScaleILR), Meaning: "isometric log-ratio of all parts of one whole", Later: true},
		{Name: string(ScaleRankNormal), Meaning: "normal quantile of the rank"},
	}
}

// Missing says what is done with a missing measure.
type Missing string

// The values of Missing.
const (
	MissingDrop         Missing = "drop"
	MissingTrainingMean Missing = "training_mean"
)

// Choices returns the allowed words.
func (Missing) Choices() []Choice {
	return []Choice{
		{Name: string(MissingDrop), Meaning: "the person is left out of the analyses that need it"},
		{Name: string(MissingTrainingMean), Meaning: "filled with the mean of each training set", Later: true},
	}
}

// PeopleOf says which people a trait is analysed in.
type PeopleOf string

// The values of PeopleOf.
const (
	PeopleOfEach   PeopleOf = "each"
	PeopleOfCommon PeopleOf = "common"
)

// Choices returns the allowed words.
func (PeopleOf) Choices() []Choice {
	return []Choice{
		{Name: string(PeopleOfEach), Meaning: "everyone who is complete for that trait"},
		{Name: string(PeopleOfCommon), Meaning: "everyone who is complete on all traits and measures"},
	}
}

// RareLevels says what is done with a level of a confound that folds cannot
// keep in every training set.
type RareLevels string

// The values of RareLevels.
const (
	RareRefuse RareLevels = "refuse"
	RareOther  RareLevels = "other"
)

// Choices returns the allowed words.
func (RareLevels) Choices() []Choice {
	return []Choice{
		{Name: string(RareRefuse), Meaning: "an error names the level and the people"},
		{Name: string(RareOther), Meaning: "rare levels are joined", Later: true},
	}
}

// LeaveOut says what is held out one at a time.
type LeaveOut string

// The values of LeaveOut; the empty one holds out folds.
const (
	LeaveOutFamily LeaveOut = "family"
	LeaveOutSite   LeaveOut = "site"
)

// Choices returns the allowed words.
func (LeaveOut) Choices() []Choice {
	return []Choice{
		{Name: string(LeaveOutFamily), Meaning: "one family"},
		{Name: string(LeaveOutSite), Meaning: "all families of one site", Later: true},
	}
}

// Metric is a score of predictions.
type Metric string

// The values of Metric.
const (
	MetricRByFold Metric = "r_by_fold"
	MetricR       Metric = "r"
	MetricRho     Metric = "rho"
	MetricR2      Metric = "r2"
	MetricAUC     Metric = "auc"
)

// Choices returns the allowed words.
func (Metric) Choices() []Choice {
	return []Choice{
		{Name: string(MetricRByFold), Meaning: "mean of the correlations inside the folds"},
		{Name: string(MetricR), Meaning: "correlation over all held-out people of a repeat"},
		{Name: string(MetricRho), Meaning: "rank correlation over all held-out people of a repeat"},
		{Name: string(MetricR2), Meaning: "1 - sum of squared errors / sum of squares about the training mean"},
		{Name: string(MetricAUC), Meaning: "area under the curve of a binary trait", Later: true},
	}
}

// Intervals says how intervals of scores are made.
type Intervals string

// The values of Intervals.
const (
	IntervalsResampled Intervals = "resampled"
	IntervalsFamilies  Intervals = "families"
)

// Choices returns the allowed words.
func (Intervals) Choices() []Choice {
	return []Choice{
		{Name: string(IntervalsResampled), Meaning: "resampled t interval of the scores of the folds (Nadeau & Bengio 2003)"},
		{Name: string(IntervalsFamilies), Meaning: "bootstrap of families, predictions as they are", Later: true},
	}
}

// Role is what a variable is in the study.
type Role string

// The values of Role.
const (
	RoleMeasures  Role = "measures"
	RoleTraits    Role = "traits"
	RoleConfounds Role = "confounds"
)

// Choices returns the allowed words.
func (Role) Choices() []Choice {
	return []Choice{
		{Name: string(RoleMeasures), Meaning: "all measures"},
		{Name: string(RoleTraits), Meaning: "all traits in use"},
		{Name: string(RoleConfounds), Meaning: "all numeric confounds in use"},
	}
}

// Model is a variance model, named by its components: A additive genetic, C
// shared home, D dominance, E everything else.
type Model string

// The values of Model.
const (
	ACE Model = "ACE"
	ADE Model = "ADE"
	AE  Model = "AE"
	CE  Model = "CE"
	E   Model = "E"
)

// Choices returns the allowed words.
func (Model) Choices() []Choice {
	return []Choice{
		{Name: string(ACE), Meaning: "additive genes, shared home, everything else"},
		{Name: string(ADE), Meaning: "additive genes, dominance, everything else"},
		{Name: string(AE), Meaning: "additive genes, everything else"},
		{Name: string(CE), Meaning: "shared home, everything else"},
		{Name: string(E), Meaning: "nothing that relatives share"},
	}
}

// Likelihood is what a variance model maximises.
type Likelihood string

// The values of Likelihood.
const (
	ML   Likelihood = "ML"
	REML Likelihood = "REML"
)

// Choices returns the allowed words.
func (Likelihood) Choices() []Choice {
	return []Choice{
		{Name: string(ML), Meaning: "maximum likelihood"},
		{Name: string(REML), Meaning: "restricted maximum likelihood", Later: true},
	}
}

// IDs says how people are named in result tables.
type IDs string

// The values of IDs.
const (
	IDsKeep       IDs = "keep"
	IDsPseudonyms IDs = "pseudonyms"
)

// Choices returns the allowed words.
func (IDs) Choices() []Choice {
	return []Choice{
		{Name: string(IDsKeep), Meaning: "by the identifiers of the people table"},
		{Name: string(IDsPseudonyms), Meaning: "by keyed codes, the key in a file of its own", Later: true},
	}
}

// CutVisits says what is done with visits cut by an end or a gap.
type CutVisits string

// The values of CutVisits.
const (
	CutVisitsDrop CutVisits = "drop"
	CutVisitsKeep CutVisits = "keep"
)

// Choices returns the allowed words.
func (CutVisits) Choices() []Choice {
	return []Choice{
		{Name: string(CutVisitsDrop), Meaning: "left out of dwell times"},
		{Name: string(CutVisitsKeep), Meaning: "taken as they are"},
	}
}

// ItemScore says how items of a questionnaire are joined.
type ItemScore string

// The values of ItemScore.
const (
	ScoreSum  ItemScore = "sum"
	ScoreMean ItemScore = "mean"
)

// Choices returns the allowed words.
func (ItemScore) Choices() []Choice {
	return []Choice{
		{Name: string(ScoreSum), Meaning: "sum, pro-rated below full"},
		{Name: string(ScoreMean), Meaning: "mean of the answered items"},
	}
}
