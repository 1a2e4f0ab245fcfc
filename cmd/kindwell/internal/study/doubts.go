package study

import (
	"fmt"
	"math"
	"slices"
	"sort"
	"strings"

	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/twin"
)

// This file looks for what is likely a mistake in tables that break no rule,
// and says so in the warnings.

// doubt adds all warnings about doubtful input.
func (p *Plan) doubt() {
	if m := p.Study.Measures; m != nil && m.StatesLearnedOn == config.SamePeople {
		p.warn("measures", "states_learned_on", "the states were learned on people of this study (same_people): scores of people called unseen are too good by an amount that no fold can mend")
	}
	for _, name := range p.Cohort.Names {
		if v := p.Cohort.Variables[name]; v.Numeric {
			analysis := "traits"
			if v.File == p.Study.People.File {
				analysis = "people"
			}
			p.doubtCodes(analysis, name, v.Values)
		}
	}
	if t := p.Cohort.Measures; t != nil {
		rows, _ := t.Values.Dims()
		column := make([]float64, rows)
		for j, name := range t.Names {
			for i := range column {
				column[i] = t.Values.At(i, j)
			}
			p.doubtCodes("measures", name, column)
		}
	}
	p.doubtCategories()
	p.doubtParents()
	p.doubtSiblings()
}

// missingLike are numbers that tables often hold in place of a missing value.
var missingLike = []float64{-9, -99, -999, -9999, -1, 99, 999, 9999, -77, -88, 77, 88, 777, 888}

// farAway is how many interquartile ranges from the median of the others a
// number has to lie before it is taken for a code.
const farAway = 10

// fewValues is the number of other values below which nothing is far away.
const fewValues = 8

// doubtCodes warns of numbers that look like codes for missing values.
func (p *Plan) doubtCodes(analysis, name string, values []float64) {
	for _, code := range missingLike {
		count := 0
		for _, v := range values {
			if v == code {
				count++
			}
		}
		if count == 0 {
			continue
		}
		var others []float64
		for _, v := range values {
			if v != code && v == v {
				others = append(others, v)
			}
		}
		if len(others) < fewValues {
			continue
		}
		sort.Float64s(others)
		at := func(q float64) float64 { return others[int(q*float64(len(others)-1))] }
		if spread := at(0.75) - at(0.25); math.Abs(code-at(0.5)) > farAway*max(spread, 1e-12) {
			p.warn(analysis, name, fmt.Sprintf("%v stands in %d of its cells, far from all others; if it means missing, name it under missing_codes", code, count))
		}
	}
}

// doubtCategories warns of confounds whose few whole numbers look like codes
// of categories.
func (p *Plan) doubtCategories() {
	for _, name := range p.Study.Confounds.Use {
		v := p.Cohort.Variables[name]
		if v == nil || !v.Numeric {
			continue
		}
		seen := map[float64]bool{}
		whole := true
		for _, x := range v.Values {
			if x == x {
				seen[x] = true
				whole = whole && x == math.Trunc(x)
			}
		}
		if whole && len(seen) >= 3 && len(seen) <= 6 {
			p.warn("people", name, fmt.Sprintf("confound %s holds %d different whole numbers and is used as a number; if they are codes, begin each with a letter, and it becomes a category", name, len(seen)))
		}
	}
}

// doubtParents warns of a parent without a row whom families of several labels
// share: an unknown parent coded as 0 ties them all together.
func (p *Plan) doubtParents() {
	for _, shared := range p.Cohort.SharedParents() {
		p.warn("people", shared.Role, fmt.Sprintf("%q %s", shared.ID, shared))
	}
}

// doubtSiblings warns of many full siblings of equal age, who may be twins.
func (p *Plan) doubtSiblings() {
	age := p.Cohort.Variables["age"]
	if age == nil || !age.Numeric {
		return
	}
	equal, all := 0, 0
	for pair := range p.Cohort.Pedigree.Pairs(p.everyone()) {
		if pair.Relation != twin.FullSibling || age.Missing(pair.First) || age.Missing(pair.Second) {
			continue
		}
		all++
		if age.Values[pair.First] == age.Values[pair.Second] {
			equal++
		}
	}
	if equal >= 5 && equal*5 >= all {
		p.warn("people", "age", fmt.Sprintf("%d of %d pairs of full siblings are of the same age; if they are twins, the columns twin_set and zygosity have to say so", equal, all))
	}
}

// mostMissing names the things that most people lack among those that a group
// of people needs.
func (p *Plan) mostMissing(traits []string) string {
	type lack struct {
		name   string
		people int
	}
	var lacks []lack
	count := func(name string, missing func(row int) bool) {
		n := 0
		for row := range p.Cohort.People {
			if missing(row) {
				n++
			}
		}
		if n > 0 {
			lacks = append(lacks, lack{name, n})
		}
	}
	for _, name := range append(slices.Clone(traits), p.Study.Confounds.Use...) {
		count(name, p.Cohort.Variables[name].Missing)
	}
	seen := map[int]bool{}
	for _, s := range p.predicting {
		for _, j := range s.measures {
			if !seen[j] {
				seen[j] = true
				count(p.measures[j].name, func(row int) bool { return math.IsNaN(p.measures[j].values[row]) })
			}
		}
	}
	if shared := p.Cohort.SharedParents(); len(shared) > 0 {
		return fmt.Sprintf("%q %s", shared[0].ID, shared[0])
	}
	if len(lacks) == 0 {
		return "nothing is missing; there are too few families"
	}
	slices.SortStableFunc(lacks, func(a, b lack) int { return b.people - a.people })
	var words []string
	for _, l := range lacks[:min(len(lacks), 3)] {
		words = append(words, fmt.Sprintf("%s in %d", l.name, l.people))
	}
	return fmt.Sprintf("of %d people, missing are %s", len(p.Cohort.People), strings.Join(words, ", "))
}
