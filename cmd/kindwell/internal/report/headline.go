package report

import (
	"cmp"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"kindwell/cmd/kindwell/internal/tidy"
)

// Found is what the headline of a run shows.
type Found struct {
	Title        string
	Folder       string // where the tables are
	People       int
	Families     int
	Metric       string // the one that is tested, or would be
	Scores       []tidy.PredictionScore
	Heritability []tidy.Heritability
	Covariates   []string // of the variance models
	Warnings     int
	Exclusions   int
}

// headlineRows is the most rows a part of the headline shows.
const headlineRows = 12

// Cautions stand under every headline and in the README.
const Cautions = `For research only; not for diagnosis, selection or any decision about a person.
Heritability describes a population in its environment: nothing of a single
person, of differences between groups, or of what could be changed.`

// Headline prints what predicts, what is heritable, and where the tables are.
func Headline(w io.Writer, f Found) error {
	var b strings.Builder
	if f.Title != "" {
		fmt.Fprintf(&b, "%s\n", f.Title)
	}
	fmt.Fprintf(&b, "%s in %s\n", people(f.People), families(f.Families))
	headlineScores(&b, f.Scores, f.Metric)
	headlineShares(&b, f.Heritability, f.Covariates)
	fmt.Fprintf(&b, "\nTables: %s", f.Folder)
	switch {
	case f.Warnings == 1:
		b.WriteString(" (1 warning in warnings.csv)")
	case f.Warnings > 1:
		fmt.Fprintf(&b, " (%d warnings in warnings.csv)", f.Warnings)
	}
	fmt.Fprintf(&b, "\n\n%s\n", Cautions)
	_, err := io.WriteString(w, b.String())
	return err
}

// headlineScores lists the scores by the metric that is tested, the clearest
// first.
func headlineScores(b *strings.Builder, scores []tidy.PredictionScore, metric string) {
	var rows []tidy.PredictionScore
	for _, s := range scores {
		if s.Metric == metric {
			rows = append(rows, s)
		}
	}
	if len(rows) == 0 {
		return
	}
	slices.SortStableFunc(rows, func(a, b tidy.PredictionScore) int {
		return cmp.Or(lastNaN(a.PFWER, b.PFWER), lastNaN(a.P, b.P), lastNaN(-a.Value, -b.Value))
	})
	fmt.Fprintf(b, "\nPredicted in people whose family was never seen (%s", rows[0].Metric)
	if rows[0].Permutations.Known {
		fmt.Fprintf(b, ", %d arrangements", rows[0].Permutations.Value)
	}
	b.WriteString(")\n")
	table := [][]string{{"trait", "from", rows[0].Metric, interval(rows[0].Confidence), "p", "p_fwer"}}
	for _, r := range rows[:min(len(rows), headlineRows)] {
		table = append(table, []string{r.Trait, r.Set, number(r.Value, 3), span(r.Low, r.High), chance(r.P), chance(r.PFWER)})
	}
	align(b, table, 2)
	more(b, len(rows), "prediction_scores.csv")
}

// headlineShares lists the variables, the most clearly heritable first.
func headlineShares(b *strings.Builder, rows []tidy.Heritability, covariates []string) {
	var left []string // not fitted, with the flag that says why
	rows = slices.DeleteFunc(slices.Clone(rows), func(r tidy.Heritability) bool {
		if math.IsNaN(r.E2) {
			left = append(left, fmt.Sprintf("%s (%s)", r.Variable, r.Flags))
		}
		return math.IsNaN(r.E2)
	})
	defer func() {
		if len(left) > 0 {
			fmt.Fprintf(b, "no estimates for %d: %s; see exclusions.csv and warnings.csv\n", len(left), strings.Join(left[:min(len(left), 4)], ", ")+etc(len(left), 4))
		}
	}()
	if len(rows) == 0 {
		if len(left) > 0 {
			b.WriteString("\nHeritable\n")
		}
		return
	}
	slices.SortStableFunc(rows, func(a, b tidy.Heritability) int {
		return cmp.Or(lastNaN(a.P, b.P), lastNaN(-a.A2, -b.A2))
	})
	fmt.Fprintf(b, "\nHeritable (model %s", rows[0].Model)
	if len(covariates) > 0 {
		fmt.Fprintf(b, ", covariates %s", strings.Join(covariates, ", "))
	}
	b.WriteString(")\n")
	table := [][]string{{"variable", "a2", interval(0), "c2", "p", "q", "r_mz", "r_dz_same_sex", "flags"}}
	for _, r := range rows[:min(len(rows), headlineRows)] {
		shared := number(r.C2, 2)
		if math.IsNaN(r.C2) && !math.IsNaN(r.D2) {
			table[0][3], shared = "d2", number(r.D2, 2)
		}
		table = append(table, []string{r.Variable, number(r.A2, 2), span(r.A2Low, r.A2High), shared, chance(r.P), chance(r.Q), number(r.RMZ, 2), number(r.RDZSame, 2), r.Flags})
	}
	align(b, table, 1)
	more(b, len(rows), "heritability.csv")
}

// etc ends a list of which the first few are shown.
func etc(n, shown int) string {
	if n > shown {
		return ", ..."
	}
	return ""
}

func more(b *strings.Builder, rows int, file string) {
	if rows > headlineRows {
		fmt.Fprintf(b, "and %d more in %s\n", rows-headlineRows, file)
	}
}

// lastNaN compares two numbers and puts a missing one last.
func lastNaN(a, b float64) int {
	switch {
	case math.IsNaN(a) && math.IsNaN(b):
		return 0
	case math.IsNaN(a):
		return 1
	case math.IsNaN(b):
		return -1
	}
	return cmp.Compare(a, b)
}

// interval is the heading of an interval.
func interval(confidence float64) string {
	if confidence == 0 || math.IsNaN(confidence) {
		return "interval"
	}
	return fmt.Sprintf("%.4g %%", 100*confidence)
}

func number(x float64, digits int) string {
	if math.IsNaN(x) {
		return "-"
	}
	return fmt.Sprintf("%.*f", digits, x)
}

func span(low, high float64) string {
	if math.IsNaN(low) || math.IsNaN(high) {
		return "-"
	}
	return fmt.Sprintf("%.2f to %.2f", low, high)
}

// chance prints a p value with two significant digits.
func chance(p float64) string {
	switch {
	case math.IsNaN(p):
		return "-"
	case p < 1e-4:
		return fmt.Sprintf("%.0e", p)
	case p < 0.1:
		return fmt.Sprintf("%.2g", p)
	}
	return fmt.Sprintf("%.2f", p)
}

// align writes a table, two spaces between columns: the first columns, and one
// named flags, to the left and the others to the right.
func align(b *strings.Builder, table [][]string, left int) {
	widths := make([]int, len(table[0]))
	for _, row := range table {
		for j, cell := range row {
			widths[j] = max(widths[j], len([]rune(cell)))
		}
	}
	for _, row := range table {
		var line strings.Builder
		for j, cell := range row {
			pad := strings.Repeat(" ", widths[j]-len([]rune(cell)))
			switch {
			case j < left || table[0][j] == "flags":
				line.WriteString(cell + pad)
			default:
				line.WriteString(pad + cell)
			}
			line.WriteString("  ")
		}
		b.WriteString(strings.TrimRight(line.String(), " ") + "\n")
	}
}
