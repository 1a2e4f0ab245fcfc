package tidy

import (
	"reflect"
	"slices"
	"sync"
)

// Table is the declaration of one result table, read from its row struct.
type Table struct {
	Name        string   // file name without .csv, for instance "relations"
	Title       string   // a few words
	Description string   // what one row is, as a sentence
	Columns     []Column // in file order
	row         reflect.Type
}

// Path returns the name of the table's file in the results folder.
func (t *Table) Path() string { return t.Name + ".csv" }

// PrimaryKey returns the names of the columns that together tell one row from
// every other, nil when rows have no natural key.
func (t *Table) PrimaryKey() []string {
	var names []string
	for _, c := range t.Columns {
		if c.Key {
			names = append(names, c.Name)
		}
	}
	return names
}

// Tables returns the declarations of all result tables, in the order of the
// manual. The slice is the caller's; the declarations are shared and must not
// be changed.
func Tables() []*Table { return slices.Clone(declarations()) }

// declarations reads the row structs once.
var declarations = sync.OnceValue(func() []*Table {
	return []*Table{
		declare[Relation]("relations", "Relations", "One row is a kind of pair of relatives: how many such pairs the study has."),
		declare[PeopleGroup]("people_groups", "Groups of people", "One row is a group of traits that are complete in the same people and are analysed together."),
		declare[PredictionScore]("prediction_scores", "Prediction scores", "One row is a trait predicted from a set of measures and scored by one metric: how well people are predicted whose family the model has never seen."),
		declare[Prediction]("predictions", "Predictions", "One row is a person held out in one repeat: what was observed and what was predicted."),
		declare[Penalty]("penalties", "Penalties", "One row is an outer fold: the ridge penalty chosen inside its training people."),
		declare[Fold]("folds", "Folds", "One row is a person in one repeat: the outer fold in which that person is held out."),
		declare[InnerFold]("inner_folds", "Inner folds", "One row is a training person of an outer fold: the inner fold that holds the person while the penalty is chosen."),
		declare[Weight]("weights", "Weights", "One row is a measure of a set: its part in the prediction of a trait."),
		declare[Heritability]("heritability", "Heritability", "One row is a variable: the shares of its variance by the headline model, with intervals, test and twin correlations. p is that of A given C (unbounded CE against unbounded ACE) when the headline model is ACE or ADE, of AE against E when it is AE, and empty for CE; it can be small where a2 is 0, namely where the signed c2 is below 0 (see suggests_dominance)."),
		declare[VarianceComponent]("variance_components", "Variance components", "One row is a component of a variance model of a variable."),
		declare[VarianceModel]("variance_models", "Variance models", "One row is a variance model fitted to a variable: its likelihood and criteria."),
		declare[VarianceTest]("variance_tests", "Variance tests", "One row is a comparison of two variance models of a variable."),
		declare[TwinCorrelation]("twin_correlations", "Twin correlations", "One row is a variable and a relation: how alike such relatives are."),
		declare[FixedEffect]("fixed_effects", "Fixed effects", "One row is a term of the mean of a variable in a variance model."),
		declare[Exclusion]("exclusions", "Exclusions", "One row is a person, or a whole variable, left out of an analysis, with the reason."),
		declare[Warning]("warnings", "Warnings", "One row is a warning: something the reader of the results should know."),
	}
})

// TableOf returns the declaration of the table whose rows are of type T. It
// panics when T is not the row of a table.
func TableOf[T any]() *Table { return tableOf(reflect.TypeFor[T]()) }

func tableOf(row reflect.Type) *Table {
	for _, t := range declarations() {
		if t.row == row {
			return t
		}
	}
	panic("tidy: " + row.String() + " is not the row of a table")
}
