package config

// Study is a whole study.yaml: what is read, what is computed, and where the
// results go. Load and Parse return it checked and with every default filled
// in. Tags are the declaration that loading, the JSON Schema, the manual page
// and AsRun share:
//
//	yaml        the key
//	jsonschema  bounds, list rules, `required`, fixed default (JSON Schema words)
//	otherwise   the default in words, where it follows from other keys
//	way         keys of one section with different ways exclude each other;
//	            an asterisk (way:"file*") asks for one of the ways
//	zero        what 0 means, where it is allowed below the minimum
//	unit        of the number
//	help        what the key means
//	later       in the layout, not available in this version; the value is the
//	            one that asks for nothing and is therefore accepted, or "yes"
//	advice      what to do about a value that is refused
type Study struct {
	Kindwell       int            `yaml:"kindwell" jsonschema:"required,enum=1" help:"layout of this file"`
	Title          string         `yaml:"title" help:"heading of the report"`
	Seed           uint64         `yaml:"seed" jsonschema:"required,minimum=0,maximum=9223372036854775807" help:"start of every random draw: the same seed gives the same results"`
	MissingCodes   []string       `yaml:"missing_codes" jsonschema:"uniqueItems=true" help:"cells that mean missing in every table, as written there, besides an empty cell, NA, n/a and NaN"`
	People         People         `yaml:"people" jsonschema:"required" help:"who is in the study and how they are related"`
	Measures       *Measures      `yaml:"measures" help:"brain-state measures: the predictors"`
	Traits         *Traits        `yaml:"traits" help:"outcomes to be predicted"`
	Questionnaires Questionnaires `yaml:"questionnaires" later:"{}" help:"questionnaire items made into scores"`
	Metastates     *Metastates    `yaml:"metastates" later:"yes" help:"groups of states"`
	Confounds      Confounds      `yaml:"confounds" help:"columns of people whose influence is taken out"`
	Missing        Missing        `yaml:"missing" jsonschema:"default=drop" help:"what is done with a missing measure"`
	PeopleOf       PeopleOf       `yaml:"people_of" jsonschema:"default=each" help:"which people a trait is analysed in"`
	Primary        [][2]string    `yaml:"primary" later:"[]" help:"pairs of set and trait to which corrections for multiple tests are confined"`
	Alternatives   []any          `yaml:"alternatives" later:"[]" help:"other choices under which the headline results are repeated"`
	Confidence     float64        `yaml:"confidence" jsonschema:"exclusiveMinimum=0,exclusiveMaximum=1,default=0.95" help:"coverage of every interval" advice:"write 0.95 for 95 %"`
	Associate      *Associate     `yaml:"associate" later:"yes" help:"associations of measures and traits"`
	Predict        *Predict       `yaml:"predict" help:"prediction of traits from sets of measures, in people who were not seen"`
	Heritability   *Heritability  `yaml:"heritability" help:"variance components from twins and families"`
	Output         Output         `yaml:"output" help:"where results go"`

	source *source // where each key stands; nil for a Study made in Go
}

// People says where the people table is and how relations that its ids leave
// open are decided.
type People struct {
	File           string         `yaml:"file" jsonschema:"required" help:"table of people, one row a person"`
	Columns        PeopleColumns  `yaml:"columns" help:"names of columns in the file, where they differ from ours"`
	Session        string         `yaml:"session" help:"column that tells apart several rows of one person"`
	UnknownParents UnknownParents `yaml:"unknown_parents" jsonschema:"default=full_siblings" help:"what people of one family label without parent ids are to each other"`
	UnknownParent  UnknownParent  `yaml:"unknown_parent" jsonschema:"default=same" help:"the other parent of two people who share one parent, where it is unknown for both"`
	RearedWith     RearedWith     `yaml:"reared_with" jsonschema:"default=mother" help:"who makes a childhood home, where no column reared_in says so"`
	DZTwins        DZTwins        `yaml:"dz_twins" jsonschema:"default=apart" help:"whether dizygotic twins may trade places with their siblings in arrangements"`
	StructureBy    []string       `yaml:"structure_by" jsonschema:"uniqueItems=true" help:"columns of people across whose values nobody is exchanged, such as site"`
}

// PeopleColumns maps our names of columns to the names in the people table;
// an empty field means that the column has our name or is not there.
type PeopleColumns struct {
	Person     string `yaml:"person" otherwise:"person" help:"identifier of a person, unique"`
	Family     string `yaml:"family" otherwise:"family" help:"family label"`
	Mother     string `yaml:"mother" otherwise:"mother" help:"identifier of the mother"`
	Father     string `yaml:"father" otherwise:"father" help:"identifier of the father"`
	TwinSet    string `yaml:"twin_set" otherwise:"twin_set" help:"label shared by the twins of one birth"`
	Zygosity   string `yaml:"zygosity" otherwise:"zygosity" help:"MZ or DZ, empty for others than twins"`
	MZSet      string `yaml:"mz_set" otherwise:"mz_set" help:"who is identical inside a set of three or more"`
	RearedIn   string `yaml:"reared_in" otherwise:"reared_in" help:"childhood home"`
	BirthOrder string `yaml:"birth_order" otherwise:"birth_order" help:"order of birth"`
	Sex        string `yaml:"sex" otherwise:"sex" help:"sex, which tells same-sex from opposite-sex twins"`
	Age        string `yaml:"age" otherwise:"age" help:"age in years, for checks of twins and parents"`
}

// PersonColumn maps the person column of a table of measures or traits; an
// empty field means that it is named person.
type PersonColumn struct {
	Person string `yaml:"person" otherwise:"person" help:"identifier of a person"`
}

// Measures says where the measures are, which of them are used together, and
// on what scale.
type Measures struct {
	File            string       `yaml:"file" way:"file*" help:"table of measures, one row a person, or a person and session"`
	Files           []string     `yaml:"files" way:"files*" jsonschema:"minItems=1,uniqueItems=true" help:"several such tables, joined by person and session"`
	Sequences       *Sequences   `yaml:"sequences" way:"sequences*" later:"yes" help:"state sequences from which the measures are made"`
	FoldFiles       any          `yaml:"fold_files" later:"{}" help:"one table of measures for each fold"`
	Columns         PersonColumn `yaml:"columns" help:"names of columns in the files, where they differ from ours"`
	Session         string       `yaml:"session" help:"column that tells apart several rows of one person"`
	StatesLearnedOn LearnedOn    `yaml:"states_learned_on" jsonschema:"required" help:"people whose recordings the states were learned on"`
	Sets            Sets         `yaml:"sets" otherwise:"everything: [\"*\"]" help:"named sets of measures; sets may overlap"`
	Transform       []Transform  `yaml:"transform" help:"scales of measures; a measure is matched by one rule at most"`
}

// Tables returns the measures files as written, in order.
func (m *Measures) Tables() []string { return tables(m.File, m.Files) }

// Set is one named set of measures.
type Set struct {
	Name     string   `yaml:",name"`
	Patterns []string `yaml:",value" jsonschema:"minItems=1,uniqueItems=true" help:"measure names, in which * stands for any characters"`
}

// Sets are the named sets of measures in the order of the file.
type Sets []Set

// Names returns the names of the sets in the order of the file.
func (s Sets) Names() []string {
	names := make([]string, len(s))
	for i := range s {
		names[i] = s[i].Name
	}
	return names
}

// Transform puts the measures that it matches on another scale.
type Transform struct {
	Match       []string `yaml:"match" jsonschema:"required,minItems=1,uniqueItems=true" help:"measure names, in which * stands for any characters"`
	As          Scale    `yaml:"as" jsonschema:"required" help:"scale"`
	Composition string   `yaml:"composition" help:"name of the whole whose parts are matched; needed for clr"`
	Zeros       float64  `yaml:"zeros" jsonschema:"exclusiveMinimum=0,maximum=0.1" otherwise:"zeros are refused" help:"what a part of zero is given before clr" unit:"share of the whole"` // 0: zeros are refused
}

// Traits says where the outcomes are and which of them are used.
type Traits struct {
	File    string       `yaml:"file" way:"file" help:"table of traits, one row a person, or a person and session"`
	Files   []string     `yaml:"files" way:"files" jsonschema:"minItems=1,uniqueItems=true" help:"several such tables, joined by person"`
	Columns PersonColumn `yaml:"columns" help:"names of columns in the files, where they differ from ours"`
	Session string       `yaml:"session" help:"column that tells apart several rows of one person"`
	Use     []string     `yaml:"use" jsonschema:"required,minItems=1,uniqueItems=true" help:"names of the traits: columns of these files or of people"`
	Binary  []string     `yaml:"binary" later:"[]" help:"traits of two classes"`
}

// Tables returns the trait files as written, in order; none when traits are
// columns of people.
func (t *Traits) Tables() []string { return tables(t.File, t.Files) }

func tables(file string, files []string) []string {
	if file != "" {
		return []string{file}
	}
	return append([]string(nil), files...)
}

// Confounds are columns of people whose influence is taken out.
type Confounds struct {
	Use        []string    `yaml:"use" jsonschema:"uniqueItems=true" help:"columns of people or of the trait tables, by our names where they are mapped; text columns become indicator columns"`
	Squares    []string    `yaml:"squares" jsonschema:"uniqueItems=true" help:"columns in use whose square is added"`
	Products   [][2]string `yaml:"products" jsonschema:"uniqueItems=true" help:"pairs of columns in use whose product is added"`
	RareLevels RareLevels  `yaml:"rare_levels" jsonschema:"default=refuse" help:"what is done with a level that folds cannot keep in every training set"`
}

// Predict asks for nested prediction of every trait from every set.
type Predict struct {
	Sets             []string    `yaml:"sets" jsonschema:"minItems=1,uniqueItems=true" otherwise:"all of measures.sets" help:"names of the sets of measures that predict"`
	Outer            Outer       `yaml:"outer" help:"who is held out"`
	Inner            Inner       `yaml:"inner" help:"folds inside the training people, which choose the penalty"`
	Penalties        Penalties   `yaml:"penalties" help:"penalties tried, spaced evenly in the logarithm"`
	Metric           Metric      `yaml:"metric" otherwise:"r_by_fold, or r2 with outer.leave_out" help:"score that is tested"`
	Permutations     int         `yaml:"permutations" jsonschema:"minimum=19,maximum=10000000,default=1000" zero:"no test" help:"rearrangements of the traits behind each p" advice:"fewer than 19 cannot give a p of 0.05"`
	Intervals        Intervals   `yaml:"intervals" jsonschema:"default=resampled" help:"intervals of scores"`
	Compare          [][2]string `yaml:"compare" later:"[]" help:"pairs of sets: the second minus the first"`
	NegativeControls bool        `yaml:"negative_controls" later:"false" help:"prediction of confounds and of a shuffled trait"`
	Subgroups        []any       `yaml:"subgroups" later:"[]" help:"people whose scores are shown apart"`
	LearningCurve    bool        `yaml:"learning_curve" later:"false" help:"scores with fewer families"`
	FixedPenalty     *float64    `yaml:"fixed_penalty" later:"yes" help:"one penalty in place of a choice"`
}

// Outer says who is held out: balanced folds of families, one family at a
// time, or folds from a table. Exactly one of Folds, LeaveOut and File is set.
type Outer struct {
	Folds    int      `yaml:"folds" way:"folds" jsonschema:"minimum=2,maximum=1000000,default=10" help:"folds of whole families, balanced in people"`
	Repeats  int      `yaml:"repeats" way:"folds" jsonschema:"minimum=1,maximum=10000,default=5" help:"partitions into such folds"`
	LeaveOut LeaveOut `yaml:"leave_out" way:"leave_out" help:"holds out one at a time, in place of folds"`
	File     string   `yaml:"file" way:"file" help:"table of given folds: repeat, fold, person, and people_group if there are several"`
	Stratify bool     `yaml:"stratify" later:"false" help:"folds balanced in the trait"`
}

// Inner says how training people are split to choose the penalty. Exactly
// one of Folds and File is set.
type Inner struct {
	Folds int    `yaml:"folds" way:"folds" jsonschema:"minimum=2,maximum=1000000,default=5" help:"folds of whole families, balanced in people"`
	File  string `yaml:"file" way:"file" help:"table of given folds: repeat, fold, inner_fold, person, and people_group if there are several"`
}

// Penalties is a grid spaced evenly in the logarithm. A penalty multiplies
// the sum of squared weights against the sum of squared errors.
type Penalties struct {
	Low   float64 `yaml:"low" jsonschema:"exclusiveMinimum=0,default=0.01" help:"least penalty"`
	High  float64 `yaml:"high" jsonschema:"exclusiveMinimum=0,default=1000000" help:"largest penalty"`
	Count int     `yaml:"count" jsonschema:"minimum=2,maximum=1000,default=25" help:"number of penalties, both ends included"`
}

// Heritability asks for variance components of the variables of some roles.
type Heritability struct {
	Of             []Role      `yaml:"of" jsonschema:"minItems=1,uniqueItems=true" otherwise:"measures and traits, as far as they are given" help:"variables that are fitted"`
	Full           Model       `yaml:"full" jsonschema:"enum=ACE,enum=ADE,enum=AE,enum=CE,default=ACE" help:"model of the headline, chosen before the data are seen"`
	Models         []Model     `yaml:"models" jsonschema:"minItems=1,uniqueItems=true" otherwise:"all of them" help:"models that are fitted; full is one of them"`
	Covariates     []string    `yaml:"covariates" jsonschema:"uniqueItems=true" otherwise:"confounds.use" help:"columns of people fitted as fixed effects, with those squares and products of confounds that are made of them alone"`
	Likelihood     Likelihood  `yaml:"likelihood" jsonschema:"default=ML" help:"likelihood that is maximised"`
	Permutations   int         `yaml:"permutations" later:"0" help:"rearrangements of zygosity labels"`
	Repeated       bool        `yaml:"repeated" later:"false" help:"split of E by sessions"`
	Pairs          [][2]string `yaml:"pairs" later:"[]" help:"pairs of variables for genetic correlations"`
	ExtraVariance  []string    `yaml:"extra_variance" later:"[]" help:"columns of people whose equal values add a component"`
	Liability      bool        `yaml:"liability" later:"false" help:"liability model of binary traits"`
	SexDifferences bool        `yaml:"sex_differences" later:"false" help:"components that differ by sex"`
	Bootstrap      int         `yaml:"bootstrap" later:"yes" help:"draws of families behind bootstrap intervals"`
}

// Output says where results go.
type Output struct {
	Folder          string `yaml:"folder" jsonschema:"default=results" help:"folder of the results"`
	IDs             IDs    `yaml:"ids" jsonschema:"default=keep" help:"how people are named in tables"`
	SpreadsheetSafe bool   `yaml:"spreadsheet_safe" later:"false" help:"an apostrophe before cells that a spreadsheet would run"`
}
