package config

// The sections of this file belong to the layout; keys that hold them are
// refused in this version.

// Sequences says where state sequences are and how measures are made of them.
type Sequences struct {
	Index     string    `yaml:"index" jsonschema:"required" help:"table of sequences: person, session, file"`
	RateHz    float64   `yaml:"rate_hz" jsonschema:"exclusiveMinimum=0" unit:"Hz" help:"sampling rate, where the index has no such column"`
	CutVisits CutVisits `yaml:"cut_visits" jsonschema:"default=drop" help:"visits cut by an end or a gap"`
	Events    string    `yaml:"events" help:"table of events"`
	WindowsS  []float64 `yaml:"windows_s" unit:"s" help:"windows of the Fano factor"`
}

// Metastates says how states are grouped.
type Metastates struct {
	Groups  string `yaml:"groups" help:"table of state and group, in place of learnt groups"`
	PerFold bool   `yaml:"per_fold" help:"learn the groups in each training set"`
}

// Questionnaire makes items into one score.
type Questionnaire struct {
	Name     string     `yaml:",name"`
	File     string     `yaml:"file" help:"table of items, one row a person"`
	Items    []string   `yaml:"items" jsonschema:"required,minItems=2,uniqueItems=true" help:"columns of the items"`
	Reversed []string   `yaml:"reversed" jsonschema:"uniqueItems=true" help:"items that count in the other direction"`
	Range    [2]float64 `yaml:"range" help:"least and largest response"`
	Score    ItemScore  `yaml:"score" jsonschema:"default=sum" help:"how items are joined"`
	Least    int        `yaml:"least_answered" jsonschema:"minimum=1" help:"least number of answered items"`
}

// Questionnaires are the questionnaires in the order of the file.
type Questionnaires []Questionnaire

// Associate asks for associations of every measure with every trait.
type Associate struct {
	Permutations int  `yaml:"permutations" jsonschema:"minimum=0,default=10000" help:"rearrangements behind each p"`
	Bootstrap    int  `yaml:"bootstrap" jsonschema:"minimum=0,default=2000" help:"draws of families behind each interval"`
	Ranks        bool `yaml:"ranks" help:"correlations of ranks"`
}
