package tidy

import (
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"
)

// The layout that users' scripts rely on, written out a second time: tables
// and columns in order. P and I stand for the shared endings.
var layout = []struct{ table, columns string }{
	{"relations", "relation, pairs, families, sharing_home"},
	{"people_groups", "people_group, traits, n_people, n_families"},
	{"prediction_scores", "trait, set, role, subgroup, level, scale, metric, tested, n_people, n_families, value, se, I, null_mean, null_sd, P, constant_folds, ceiling, detectable"},
	{"predictions", "trait, set, repeat, fold, person, family, observed, baseline, target, predicted, class"},
	{"penalties", "trait, set, repeat, fold, penalty, inner_mse, at_end"},
	{"folds", "people_group, repeat, fold, person, family"},
	{"inner_folds", "people_group, repeat, fold, inner_fold, person, family"},
	{"weights", "trait, set, measure, weight, weight_sd, sign_agreement, pattern"},
	{"heritability", "variable, role, transform, scale, model, covariates, a2, a2_low, a2_high, a2_signed, a2_signed_low, a2_signed_high, d2, c2, e2, h2_broad, familial, familial_low, familial_high, P, p_permutation, lowest_aic, r_mz, r_dz_same_sex, r_dz_opposite_sex, r_sibling, n_people, n_families, n_mz_pairs, n_dz_same_sex, n_dz_opposite_sex, n_sibling_pairs, n_single_twins, detectable_a2, detectable_c2, flags"},
	{"variance_components", "variable, role, model, component, variance, share, low, high, at_bound, signed_variance, signed_share"},
	{"variance_models", "variable, role, model, log_likelihood, parameters, aic, bic, converged, evaluations, lowest_aic"},
	{"variance_tests", "variable, role, null_model, full_model, statistic, df, weight_0, weight_1, weight_2, p_mixture, method, p, p_permutation, p_fwer, q, permutations, log10_arrangements"},
	{"twin_correlations", "variable, role, relation, pairs, families, correlation, I"},
	{"fixed_effects", "variable, role, model, term, estimate, se"},
	{"exclusions", "analysis, variable, person, reason"},
	{"warnings", "analysis, about, message"},
}

func TestLayout(t *testing.T) {
	endings := strings.NewReplacer(
		" P,", " p, p_fwer, q, tail, permutations, log10_arrangements, families_fixed,",
		" I,", " low, high, interval_kind, confidence,")
	tables := Tables()
	if len(tables) != len(layout) {
		t.Fatalf("%d tables, want %d", len(tables), len(layout))
	}
	for i, want := range layout {
		got := tables[i]
		if got.Name != want.table {
			t.Errorf("table %d is %s, want %s", i, got.Name, want.table)
			continue
		}
		columns := strings.Split(strings.TrimSuffix(endings.Replace(want.columns+","), ","), ", ")
		if names := columnNames(got); !slices.Equal(names, columns) {
			t.Errorf("%s has columns\n%v, want\n%v", got.Name, names, columns)
		}
	}
}

// A column is described in full sentences, a number has a unit, a text or a
// truth value has none, and a category is a word.
func TestEveryColumnIsDescribed(t *testing.T) {
	word := regexp.MustCompile(`^[A-Za-z0-9_]+$`)
	column := regexp.MustCompile(`^[a-z][a-z0-9_]*$`)
	for _, table := range Tables() {
		if len(table.Title) < 5 || !strings.HasPrefix(table.Description, "One row is ") || !strings.HasSuffix(table.Description, ".") {
			t.Errorf("%s: title %q, description %q", table.Name, table.Title, table.Description)
		}
		for _, c := range table.Columns {
			at := table.Name + "." + c.Name
			if !column.MatchString(c.Name) {
				t.Errorf("%s: not a column name", at)
			}
			if len(c.Description) < 25 || !strings.HasSuffix(c.Description, ".") || strings.ContainsAny(c.Description, "\n|") {
				t.Errorf("%s: description is not a sentence: %q", at, c.Description)
			}
			if isNumber := c.Kind == Number || c.Kind == Integer || c.Kind == MaybeInteger; isNumber != (c.Unit != "") {
				t.Errorf("%s: kind %v with unit %q", at, c.Kind, c.Unit)
			}
			if c.Enum != nil && c.Kind != Text {
				t.Errorf("%s: categories on a column that is no text", at)
			}
			for _, value := range c.Enum {
				if !word.MatchString(value) {
					t.Errorf("%s: category %q", at, value)
				}
			}
			if c.Key && (c.Kind == Number || c.Kind == MaybeInteger || c.Kind == Boolean || c.Unfilled) {
				t.Errorf("%s: a key must be a text or a whole number that is always there", at)
			}
			if c.Unfilled && (c.Kind == Integer || c.Kind == Boolean) {
				t.Errorf("%s: unfilled, but its type cannot be missing", at)
			}
			if c.Unfilled != strings.HasSuffix(c.Description, unfilledNote) {
				t.Errorf("%s: unfilled %v, description %q", at, c.Unfilled, c.Description)
			}
			if c.Minimum != nil && c.Maximum != nil && *c.Minimum >= *c.Maximum {
				t.Errorf("%s: minimum %g, maximum %g", at, *c.Minimum, *c.Maximum)
			}
		}
	}
}

// Categories that stand in several tables are the same everywhere, and a word
// means one thing: a column of the same name has the same kind.
func TestSharedColumnsAgree(t *testing.T) {
	first := map[string]Column{}
	for _, table := range Tables() {
		for _, c := range table.Columns {
			before, ok := first[c.Name]
			if !ok {
				first[c.Name] = c
				continue
			}
			switch c.Name {
			case "role", "scale": // of a score, and of a variable
				continue
			case "lowest_aic": // the name of a model, and whether it is this one
				continue
			}
			if c.Kind != before.Kind || !slices.Equal(c.Enum, before.Enum) {
				t.Errorf("%s.%s differs from the column of that name before it", table.Name, c.Name)
			}
		}
	}
}

func TestPrimaryKeys(t *testing.T) {
	for name, want := range map[string][]string{
		"relations":         {"relation"},
		"predictions":       {"trait", "set", "repeat", "person"},
		"prediction_scores": nil,
		"inner_folds":       {"people_group", "repeat", "fold", "person"},
		"warnings":          nil,
	} {
		i := slices.IndexFunc(Tables(), func(t *Table) bool { return t.Name == name })
		if got := Tables()[i].PrimaryKey(); !slices.Equal(got, want) {
			t.Errorf("%s: key %v, want %v", name, got, want)
		}
	}
}

func TestBlank(t *testing.T) {
	row := Blank[PredictionScore]()
	for _, x := range []float64{row.Value, row.SE, row.Low, row.High, row.Confidence, row.NullMean, row.P, row.Q, row.PFWER, row.Log10Arrangements, row.Ceiling} {
		if !math.IsNaN(x) {
			t.Fatalf("a number of a blank row is %g", x)
		}
	}
	if row.Permutations.Known || row.ConstantFolds.Known || row.Trait != "" || row.People != 0 || row.Tested {
		t.Errorf("a blank row holds %+v", row)
	}
}

func TestUnknownRowPanics(t *testing.T) {
	defer func() {
		if got, want := recover(), "tidy: struct { A int } is not the row of a table"; got != want {
			t.Errorf("panic %v, want %q", got, want)
		}
	}()
	TableOf[struct{ A int }]()
}

func columnNames(t *Table) []string {
	names := make([]string, len(t.Columns))
	for i, c := range t.Columns {
		names[i] = c.Name
	}
	return names
}
