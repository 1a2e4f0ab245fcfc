package study

import (
	"fmt"
	"slices"
	"strings"

	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/cmd/kindwell/internal/tidy"
)

// makeGroups finds the people of every trait and puts traits with the same
// people together, in the order of traits.use. A person needs the trait,
// every confound and every measure of any set that predicts.
func (p *Plan) makeGroups() {
	shared := p.missingShared()
	traits := p.Study.Traits.Use
	if p.Study.PeopleOf == config.PeopleOfCommon {
		rows := p.complete("prediction", joined(traits), shared, traits)
		p.groups = []group{{traits: slices.Clone(traits), rows: rows}}
		return
	}
	for _, trait := range traits {
		rows := p.complete("prediction", trait, shared, []string{trait})
		i := slices.IndexFunc(p.groups, func(g group) bool { return slices.Equal(g.rows, rows) })
		if i < 0 {
			p.groups = append(p.groups, group{rows: rows})
			i = len(p.groups) - 1
		}
		p.groups[i].traits = append(p.groups[i].traits, trait)
	}
}

// missingShared lists for every person what is missing among the things that
// every trait needs: confounds, and measures of the sets that predict.
func (p *Plan) missingShared() [][]string {
	c := p.Cohort
	missing := make([][]string, len(c.People))
	var needed []int
	for _, s := range p.predicting {
		needed = append(needed, s.measures...)
	}
	slices.Sort(needed)
	needed = slices.Compact(needed)
	for row := range c.People {
		for _, name := range p.Study.Confounds.Use {
			if c.Variables[name].Missing(row) {
				missing[row] = append(missing[row], name)
			}
		}
		var measures []string
		for _, j := range needed {
			if v := p.measures[j].values[row]; v != v {
				measures = append(measures, p.measures[j].name)
			}
		}
		switch {
		case len(measures) == len(needed) && len(needed) > 0:
			missing[row] = append(missing[row], "all measures")
		case len(measures) > 3:
			missing[row] = append(missing[row], fmt.Sprintf("%d measures (%s, ...)", len(measures), measures[0]))
		default:
			missing[row] = append(missing[row], measures...)
		}
	}
	return missing
}

// complete returns the people who have the named variables and miss nothing
// of what is shared; the others have a row each in the exclusions.
func (p *Plan) complete(analysis, about string, shared [][]string, names []string) []int {
	c := p.Cohort
	var rows []int
	for row, person := range c.People {
		var missing []string
		for _, name := range names {
			if c.Variables[name].Missing(row) {
				missing = append(missing, name)
			}
		}
		missing = append(missing, shared[row]...)
		if len(missing) == 0 {
			rows = append(rows, row)
			continue
		}
		p.exclusions = append(p.exclusions, tidy.Exclusion{
			Analysis: analysis, Variable: about, Person: person,
			Reason: "missing: " + strings.Join(missing, ", "),
		})
	}
	return rows
}

// chooseVariables lists the variables whose variance is divided, with their
// covariates, and those squares and products of the confounds that are made of
// covariates alone. A variable that holds words has no variance and is left out
// with a warning.
func (p *Plan) chooseVariables() {
	h := p.Study.Heritability
	covariates := confoundColumns(p.Study.Confounds).among(h.Covariates)
	seen := map[string]bool{}
	add := func(v variable) {
		if seen[v.name] {
			return
		}
		seen[v.name] = true
		v.covariates = covariates.without(v.name)
		p.variables = append(p.variables, v)
	}
	column := func(name, role string) {
		v := p.Cohort.Variables[name]
		if !v.Numeric {
			p.warn("heritability", name, fmt.Sprintf("%s holds words; its variance is not divided", name))
			return
		}
		add(variable{name: name, role: role, transform: config.ScaleNone, values: v.Values})
	}
	for _, role := range h.Of {
		switch role {
		case config.RoleMeasures:
			for _, m := range p.measures {
				add(variable{name: m.name, role: "measure", transform: m.scale, values: m.values, measure: m})
			}
		case config.RoleTraits:
			for _, name := range p.Study.Traits.Use {
				column(name, "trait")
			}
		case config.RoleConfounds:
			for _, name := range p.Study.Confounds.Use {
				column(name, "confound")
			}
		}
	}
	if given := p.Study.Confounds.Use; !sameNames(given, h.Covariates) && len(given) > 0 {
		p.warn("heritability", "covariates", fmt.Sprintf("covariates (%s) differ from confounds (%s): scores and heritabilities are about differently adjusted variables",
			orNone(h.Covariates), orNone(given)))
	}
}

func sameNames(a, b []string) bool {
	a, b = slices.Clone(a), slices.Clone(b)
	slices.Sort(a)
	slices.Sort(b)
	return slices.Equal(a, b)
}

// joined writes several names as one cell of a table.
func joined(names []string) string { return strings.Join(names, ";") }

func orNone(names []string) string {
	if len(names) == 0 {
		return "none"
	}
	return strings.Join(names, ", ")
}
