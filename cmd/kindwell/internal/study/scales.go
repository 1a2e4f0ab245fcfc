package study

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"kindwell/cmd/kindwell/internal/cohort"
	"kindwell/cmd/kindwell/internal/study/config"
	"kindwell/features"
)

// measure is one measure on its scale, a number a person.
type measure struct {
	name        string
	scale       config.Scale
	composition string // the whole it is a part of, or empty
	// values are the means over sessions, NaN where missing. Ranks are not
	// taken yet: they belong to the people compared.
	values []float64
}

// ranked returns the values of some people, with ranks taken among them when
// the scale asks for it.
func (m *measure) ranked(rows []int) []float64 {
	values := pick(m.values, rows)
	if m.scale == config.ScaleRankNormal {
		return features.RankNormalScores(values)
	}
	return values
}

// scaleMeasures puts every measure on its scale, session by session, and
// averages the sessions of a person.
func (p *Plan) scaleMeasures(faults *faults) {
	tables := p.Cohort.Measures
	if tables == nil {
		return
	}
	rules := p.matchRules(faults)
	scaled := make([][]float64, len(tables.Names))
	for j, name := range tables.Names {
		m := &measure{name: name, scale: config.ScaleNone}
		if r := rules[j]; r >= 0 {
			m.scale = p.Study.Measures.Transform[r].As
			m.composition = p.Study.Measures.Transform[r].Composition
		}
		p.measures = append(p.measures, m)
		scaled[j] = mat.Col(nil, j, tables.Values)
		var refused []features.CellError
		switch m.scale {
		case config.ScaleLog:
			scaled[j], refused = features.LogColumn(scaled[j])
		case config.ScaleLogit:
			scaled[j], refused = features.LogitColumn(scaled[j])
		}
		for _, e := range refused {
			faults.cell(tables, j, e, string(m.scale))
		}
	}
	for r, rule := range p.Study.Measures.Transform {
		if rule.As == config.ScaleCLR {
			p.scaleWhole(r, rules, scaled, faults)
		}
	}
	people := make([]int, len(tables.Rows))
	for i, row := range tables.Rows {
		people[i] = row.Person
	}
	for j, m := range p.measures {
		m.values = features.MeanBy(people, len(p.Cohort.People), scaled[j])
	}
}

// matchRules returns for each measure the transform that matches it, or -1.
func (p *Plan) matchRules(faults *faults) []int {
	names := p.Cohort.Measures.Names
	rules := make([]int, len(names))
	for j := range rules {
		rules[j] = -1
	}
	for r, rule := range p.Study.Measures.Transform {
		for i, pattern := range rule.Match {
			path := fmt.Sprintf("measures.transform[%d].match[%d]", r, i)
			for _, j := range p.matchOne(pattern, path, faults) {
				if rules[j] >= 0 && rules[j] != r {
					faults.study(p.Study, path, fmt.Sprintf("%q matches measure %q, which transform %d matches too", pattern, names[j], rules[j]+1),
						"let each measure be matched by one transform")
				}
				rules[j] = r
			}
		}
	}
	return rules
}

// matchOne returns the measures that a pattern matches; none is a fault.
func (p *Plan) matchOne(pattern, path string, faults *faults) []int {
	names := p.Cohort.Measures.Names
	matched, _ := cohort.Match([]string{pattern}, names)
	if len(matched) == 0 {
		faults.name(p.Study, path, fmt.Sprintf("%q matches no column of the measures", pattern), pattern, p.measureColumns())
	}
	return matched
}

// measureColumns are all columns of the measures tables, looked at or not.
func (p *Plan) measureColumns() []string {
	var all []string
	for _, file := range p.Study.Measures.Tables() {
		names, err := cohort.ReadNames(p.Study.Path("."), file)
		if err != nil {
			return p.Cohort.Measures.Names
		}
		for _, name := range names {
			if name != p.Study.Measures.Session && name != "person" && name != p.Study.Measures.Columns.Person {
				all = append(all, name)
			}
		}
	}
	return all
}

// closure is how far the parts of a whole may miss it before it is said.
const closure = 0.02

// scaleWhole turns the parts matched by rule r into centred log-ratios.
func (p *Plan) scaleWhole(r int, rules []int, scaled [][]float64, faults *faults) {
	tables, rule := p.Cohort.Measures, p.Study.Measures.Transform[r]
	var parts []int
	for j := range rules {
		if rules[j] == r {
			parts = append(parts, j)
		}
	}
	path := fmt.Sprintf("measures.transform[%d]", r)
	if err := features.CheckComposition(len(parts), rule.Zeros); err != nil {
		if len(parts) > 0 {
			faults.study(p.Study, path, fmt.Sprintf("composition %q: %s", rule.Composition, plain(err)), "match all parts of one whole")
		}
		return
	}
	if len(tables.Rows) == 0 {
		return
	}
	whole := mat.NewDense(len(tables.Rows), len(parts), nil)
	for k, j := range parts {
		whole.SetCol(k, mat.Col(nil, j, tables.Values))
	}
	p.noteClosure(rule.Composition, whole)
	ratios, replaced, refused := features.CLR(whole, rule.Zeros)
	for _, e := range refused {
		if e.Column == features.WholeRow {
			faults.cell(tables, parts[0], features.CellError{Row: e.Row, Value: math.NaN(), Reason: e.Reason}, "composition "+rule.Composition)
			continue
		}
		faults.cell(tables, parts[e.Column], e, "composition "+rule.Composition)
	}
	if replaced > 0 {
		cells := len(tables.Rows) * len(parts)
		p.warn("measures", rule.Composition, fmt.Sprintf("%d of %d parts (%.1f %%) are zero and were replaced by the share %v before log-ratios; results may depend on that share",
			replaced, cells, 100*float64(replaced)/float64(cells), rule.Zeros))
	}
	for k, j := range parts {
		scaled[j] = mat.Col(nil, k, ratios)
	}
}

// noteClosure warns when the parts of a whole do not add to 1 or 100.
func (p *Plan) noteClosure(name string, whole *mat.Dense) {
	n, d := whole.Dims()
	low, high, off := math.Inf(1), math.Inf(-1), 0
	for i := range n {
		sum := 0.0
		for j := range d {
			sum += whole.At(i, j)
		}
		if math.IsNaN(sum) {
			continue
		}
		low, high = min(low, sum), max(high, sum)
		if math.Abs(sum-1) > closure && math.Abs(sum-100) > 100*closure {
			off++
		}
	}
	if off > 0 {
		p.warn("measures", name, fmt.Sprintf("the parts add to 1 (or 100) in all but %d of %d rows (from %.4g to %.4g); log-ratios close each row to 1, so a part that is not matched is lost without notice",
			off, n, low, high))
	}
}

// resolveSets finds the measures of every set.
func (p *Plan) resolveSets(faults *faults) {
	if p.Cohort.Measures == nil {
		return
	}
	for _, s := range p.Study.Measures.Sets {
		set := measureSet{name: s.Name}
		for i, pattern := range s.Patterns {
			path := fmt.Sprintf("measures.sets.%s[%d]", s.Name, i)
			for _, j := range p.matchOne(pattern, path, faults) {
				if !slices.Contains(set.measures, j) {
					set.measures = append(set.measures, j)
				}
			}
		}
		slices.Sort(set.measures)
		p.sets = append(p.sets, set)
	}
}

// measureSet is a named set of measures, by index.
type measureSet struct {
	name     string
	measures []int
}
