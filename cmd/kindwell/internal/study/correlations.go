package study

import (
	"errors"
	"fmt"

	"kindwell/cmd/kindwell/internal/tidy"
	"kindwell/twin"
)

// addCorrelations makes the rows of twin_correlations.csv of one variable, and
// puts those of twins and siblings into its headline. Relations of too few
// families have their counts and no correlation. rows are all people with the
// variable; the sample lacks those among them whose zygosity is unknown.
func (p *Plan) addCorrelations(v *variable, rows []int, sample *twin.Sample, d *divided) {
	if sample.People() < len(rows) {
		covariates := designOf(p.Cohort, v.covariates, rows)
		whole, err := twin.NewSample(p.Cohort.Pedigree, rows, v.valuesOf(rows), covariates.matrix, covariates.names)
		if err != nil {
			d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: "no correlations of relatives: " + plain(err)})
			return
		}
		sample = whole
	}
	for _, count := range p.Cohort.Pedigree.PairCounts(rows) {
		if count.Relation == twin.OtherKin {
			continue
		}
		row := tidy.Blank[tidy.TwinCorrelation]()
		row.Variable, row.Role, row.Relation = v.name, v.role, count.Relation.String()
		row.Pairs, row.Families = count.Pairs, count.Families
		c, err := sample.Correlation(count.Relation, twin.CorrelationOptions{Confidence: p.Study.Confidence, Seed: p.Study.Seed})
		var few *twin.TooFewError
		switch {
		case errors.As(err, &few):
		case err != nil:
			d.warnings = append(d.warnings, tidy.Warning{Analysis: "heritability", About: v.name, Message: fmt.Sprintf("no %s", plain(err))})
		default:
			row.Pairs, row.Families = c.Pairs, c.Families
			row.Correlation, row.Low, row.High, row.Confidence = c.Value, c.Low, c.High, c.Confidence
			row.IntervalKind = "profile"
			if c.Bootstrap {
				row.IntervalKind = "bootstrap"
			}
			headlineCorrelation(&d.headline, c)
		}
		d.correlations = append(d.correlations, row)
	}
}

func headlineCorrelation(h *tidy.Heritability, c *twin.Correlation) {
	switch c.Relation {
	case twin.MZ:
		h.RMZ = c.Value
	case twin.DZSameSex:
		h.RDZSame = c.Value
	case twin.DZOppositeSex:
		h.RDZOpposite = c.Value
	case twin.FullSibling:
		h.RSibling = c.Value
	}
}
