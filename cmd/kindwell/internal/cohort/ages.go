package cohort

import (
	"fmt"
	"math"
)

const (
	// leastParentAge is how many years a parent is older than a child at least.
	leastParentAge = 12
	// birthdayYears is how far the ages of twins can lie apart when they were
	// not asked on the same day and ages are whole years.
	birthdayYears = 1
)

// checkAges warns of every pair of people whose ages contradict how they are
// related: parents who are no older than a child, or hardly, and twins of
// different age. Years are the unit.
func (l *loader) checkAges(p *peopleTable, ages []float64) {
	l.checkParentAges(p, ages)
	l.checkTwinAges(p, ages)
}

// agesOf gives the ages of two people in the first session that both have, or,
// in a table without sessions, of their rows; ok is false when there are none.
func (p *peopleTable) agesOf(ages []float64, i, j int) (a, b float64, ok bool) {
	for _, r := range p.rows.of(i) {
		for _, s := range p.rows.of(j) {
			if p.rows.label != nil && p.rows.label[r] != p.rows.label[s] {
				continue
			}
			if a, b = ages[r], ages[s]; !math.IsNaN(a) && !math.IsNaN(b) {
				return a, b, true
			}
		}
	}
	return 0, 0, false
}

func (l *loader) checkParentAges(p *peopleTable, ages []float64) {
	c := l.cohort
	for child, who := range c.Records {
		for _, link := range []struct{ word, id string }{{"mother", who.Mother}, {"father", who.Father}} {
			parent, ok := c.index[link.id]
			if !ok || link.id == "" {
				continue
			}
			young, old, ok := p.agesOf(ages, child, parent)
			if !ok || old-young >= leastParentAge {
				continue
			}
			what := fmt.Sprintf("the %s is less than %d years older than the child", link.word, leastParentAge)
			switch {
			case old < young:
				what = "the child is older than the " + link.word
			case old == young:
				what = "the child is as old as the " + link.word
			}
			l.warn("people", p.column[ageRole], fmt.Sprintf("%s, child on row %d (age %s), %s on row %d (age %s): %s",
				p.file, c.Lines[child], formatNumber(young), link.word, c.Lines[parent], formatNumber(old), what))
		}
	}
}

// checkTwinAges has a warning for every twin set that no birthday between two
// days can explain, and one for all others whose ages differ.
func (l *loader) checkTwinAges(p *peopleTable, ages []float64) {
	c := l.cohort
	sets := make(map[string][]int)
	var order []string
	for i, who := range c.Records {
		if who.TwinSet == "" {
			continue
		}
		if sets[who.TwinSet] == nil {
			order = append(order, who.TwinSet)
		}
		sets[who.TwinSet] = append(sets[who.TwinSet], i)
	}
	var slight []int
	for _, set := range order {
		widest, first, second := 0.0, 0, 0
		var a, b float64
		for k, i := range sets[set] {
			for _, j := range sets[set][k+1:] {
				x, y, ok := p.agesOf(ages, i, j)
				if ok && math.Abs(x-y) > widest {
					widest, first, second, a, b = math.Abs(x-y), i, j, x, y
				}
			}
		}
		switch {
		case widest > birthdayYears:
			l.warn("people", p.column[ageRole], fmt.Sprintf("%s, rows %d and %d: twins of different age (%s and %s)",
				p.file, c.Lines[first], c.Lines[second], formatNumber(a), formatNumber(b)))
		case widest > 0:
			slight = append(slight, c.Lines[first])
		}
	}
	if len(slight) > 0 {
		l.warn("people", p.column[ageRole], fmt.Sprintf("%s, %s: %s whose ages differ by a year at most (asked on different days?)",
			p.file, lineList(slight), plural(len(slight), "twin set", "twin sets")))
	}
}
