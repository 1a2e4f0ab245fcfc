package twin

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// CorrelationOptions are the choices of a correlation of relatives.
type CorrelationOptions struct {
	// Confidence of the interval, between 0 and 1, for instance 0.95.
	Confidence float64
	// Replicates is the number of bootstrap samples of families behind the
	// interval of an interclass correlation, 2000 when 0. Seed names their
	// stream. Intraclass correlations use neither.
	Replicates int
	Seed       uint64
}

// Correlation is how alike the people of one relation are.
type Correlation struct {
	Relation Relation
	// Pairs counts the pairs behind the correlation, Families those with such a
	// pair.
	Pairs, Families int
	// Value is the correlation, Low and High its interval.
	Value, Low, High float64
	Confidence       float64
	// Bootstrap says that the interval is the percentile bootstrap of families,
	// of an interclass correlation; else it is the profile likelihood's.
	Bootstrap bool
}

// siblings reports whether r is a relation among the children of a parent.
func siblings(r Relation) bool { return r >= MZ && r <= HalfSibling }

// Correlation estimates the correlation of a relation in the sample, after its
// covariates.
//
// Twins, siblings and half-siblings have no first and second one: their
// correlation is intraclass. It maximises the likelihood over everyone who has
// such a relative present, with one mean, one variance and the covariates
// inside the likelihood (McGue & Bouchard 1984, Behavior Genetics 14:325),
//
//	V = s2 (I + sum over relations of r_k B_k)
//
// where B_k is 1 for the pairs of relation k. Whole sibships enter, so that
// pairs of one sibship are not taken for independent, and relations of siblings
// other than the asked one have correlations of their own. Fraternal twins, twins
// of unknown zygosity and siblings that are found in too few families for that
// share one; other relations as rare are taken out with both of their people.
// Pairs and Families count what is left. The interval is the profile
// likelihood's.
//
// A parent and a child, or a mother and a father, differ in kind: their
// correlation is interclass. Over all pairs, parents (mothers) are regressed on
// the constant and their covariates and children (fathers) on theirs, and the
// residuals correlated. The interval holds the middle of the values from
// families drawn with replacement. The sample's Kin must have the methods of
// Lineage for these two relations.
//
// The errors are *TooFewError where fewer families have such a pair than there
// are fixed effects and two more, ErrNoVariance, and *NotConvergedError. The
// counts are filled in even then, and numbers that could not be found are NaN.
// Relations other than these panic.
func (s *Sample) Correlation(r Relation, opt CorrelationOptions) (*Correlation, error) {
	if !(opt.Confidence > 0 && opt.Confidence < 1) {
		panic("twin: confidence must lie between 0 and 1")
	}
	c := &Correlation{Relation: r, Confidence: opt.Confidence, Value: math.NaN(), Low: math.NaN(), High: math.NaN()}
	switch {
	case siblings(r):
		return c, s.intraclass(c)
	case r == ParentChild || r == Spouse:
		return c, s.interclass(c, opt)
	}
	panic("twin: no correlation of relation " + r.String())
}

func tooFewPairs(c *Correlation, need int) error {
	return &TooFewError{What: fmt.Sprintf("families with a pair of relation %s", c.Relation), Have: c.Families, Need: need}
}

func (s *Sample) familyOf(i int) int { return s.kin.Family(s.people[i]) }

func (s *Sample) relation(i, j int32) Relation { return s.kin.Relation(s.people[i], s.people[j]) }

// intraclass fills in the correlation of a relation among siblings.
func (s *Sample) intraclass(c *Correlation) error {
	who, as := s.withRelative(c)
	if need := s.columns.width + 1; c.Families < need {
		// With fewer, the fixed effects can fit every difference of a pair.
		return tooFewPairs(c, need)
	}
	columns, err := s.subset(who)
	if err != nil {
		return err
	}
	// Relations get a place each as they are met, the asked one the first.
	place := map[Relation]int{c.Relation: 0}
	l := newLayout(len(who), func(i int) int { return s.familyOf(int(who[i])) }, func(i, j int) entries {
		var e entries
		if i != j {
			if r := s.relation(who[i], who[j]); siblings(r) {
				at, ok := place[as[r]]
				if !ok {
					at = len(place)
					place[as[r]] = at
				}
				e[at] = 1
			}
		}
		return e
	})
	m := len(place)
	lik := newLikelihood(newMoments(l, columns.rows, columns.width), upTo(m), ML)
	search := newSearch(lik, []group{{upTo(m + 1), 1}}, false)
	least, ok := best(search, correlationStarts(m), leastSignedDistance)
	if !ok || !least.converged {
		return &NotConvergedError{What: "correlation of relation " + c.Relation.String()}
	}
	p := &profile{lik: lik, inside: []int{0}, outside: upTo(m + 1)[1:]}
	c.Value = least.shares[0]
	i, err := p.interval(least.shares, c.Confidence)
	if err != nil {
		return &NotConvergedError{What: "interval of the correlation of relation " + c.Relation.String()}
	}
	c.Low, c.High = i.Low, i.High
	return nil
}

// correlationStarts are the starts of a search over m correlations: none, some
// of the first, and some of all.
func correlationStarts(m int) [][]float64 {
	none, first, all := make([]float64, m+1), make([]float64, m+1), make([]float64, m+1)
	none[m] = 1
	first[0], first[m] = 0.5, 0.5
	for k := range m {
		all[k] = 0.2
	}
	all[m] = 1 - 0.2*float64(m)
	return [][]float64{none, first, all}
}

// withRelative lists the people of a sample who have a relative of the
// correlation's relation in it, and counts their pairs. Another relation among
// these people has a correlation of its own to be estimated beside, for which
// it must be found in a number of families. Where fraternal twins, twins of
// unknown zygosity or siblings are too rare, they share one correlation with
// each other or with the most frequent of these; where that does not help, and
// for the other relations, both people of such a pair are left out. Nothing here
// depends on the order of people. as names, for each relation, the one whose
// correlation it has.
func (s *Sample) withRelative(c *Correlation) (who []int32, as [relationCount]Relation) {
	out := make([]bool, len(s.people))
	least := s.columns.width + rareFamilies
	for {
		found := s.relationsAmong(c.Relation, out)
		for r := range as {
			as[r] = Relation(r)
		}
		var rare []Relation
		partner := Unrelated // the most frequent that has enough families
		for r := range found.families {
			switch n, rel := found.families[r], Relation(r); {
			case n == 0 || rel == c.Relation:
			case n < least:
				rare = append(rare, rel)
			case halfAlike(rel) && (partner == Unrelated || n > found.families[partner]):
				partner = rel
			}
		}
		var left []Relation // out of those that are rare
		var joined []Relation
		for _, r := range rare {
			if halfAlike(r) {
				joined = append(joined, r)
			} else {
				left = append(left, r)
			}
		}
		if partner == Unrelated && found.familiesWithAny(joined) < least {
			left, joined = append(left, joined...), nil
		}
		for _, r := range joined {
			if as[r] = partner; partner == Unrelated {
				as[r] = joined[0]
			}
		}
		if len(left) == 0 {
			c.Pairs, c.Families = found.pairs[c.Relation], found.families[c.Relation]
			for i, is := range found.in {
				if is {
					who = append(who, int32(i))
				}
			}
			return who, as
		}
		for _, pair := range found.list {
			if slices.Contains(left, pair.relation) {
				out[pair.i], out[pair.j] = true, true
			}
		}
	}
}

// halfAlike is true for relations of the children of one mother and father who
// are not known to be identical.
func halfAlike(r Relation) bool { return r >= DZSameSex && r <= FullSibling }

// relationsFound counts the sibling relations among some people.
type relationsFound struct {
	in              []bool // who has a relative of the asked relation
	families, pairs [relationCount]int
	list            []relatedPair
}

type relatedPair struct {
	i, j     int32
	family   int
	relation Relation
}

// familiesWithAny counts the families with a pair of any of these relations.
func (f *relationsFound) familiesWithAny(relations []Relation) int {
	last, n := -1, 0 // pairs are listed family by family
	for _, pair := range f.list {
		if pair.family != last && slices.Contains(relations, pair.relation) {
			last = pair.family
			n++
		}
	}
	return n
}

// relationsAmong counts the relations among those who have a relative of the
// asked relation, without the people in out.
func (s *Sample) relationsAmong(asked Relation, out []bool) *relationsFound {
	found := &relationsFound{in: make([]bool, len(s.people))}
	for number, members := range groupBy(len(s.people), s.familyOf) {
		s.eachPair(members, out, func(i, j int32, r Relation) {
			if r == asked {
				found.in[i], found.in[j] = true, true
			}
		})
		var here [relationCount]bool
		s.eachPair(members, out, func(i, j int32, r Relation) {
			if !found.in[i] || !found.in[j] || !siblings(r) {
				return
			}
			found.list = append(found.list, relatedPair{i, j, number, r})
			found.pairs[r]++
			if !here[r] {
				here[r] = true
				found.families[r]++
			}
		})
	}
	return found
}

// rareFamilies and the number of fixed effects are what a relation beside the
// asked one needs in families.
const rareFamilies = 5

// eachPair visits the pairs of members of a family that are not left out.
func (s *Sample) eachPair(members []int32, out []bool, visit func(i, j int32, r Relation)) {
	for b, j := range members {
		for _, i := range members[:b] {
			if !out[i] && !out[j] {
				visit(i, j, s.relation(i, j))
			}
		}
	}
}

// subset prepares the variable and covariates of some people of the sample
// anew. The sample's own columns serve as well as the values given: they are
// linear combinations of them.
func (s *Sample) subset(who []int32) (*columns, error) {
	w := s.columns.width
	y := make([]float64, len(who))
	var x *mat.Dense
	if w > 2 {
		x = mat.NewDense(len(who), w-2, nil)
	}
	for at, i := range who {
		row := s.columns.rows[int(i)*w : int(i+1)*w]
		y[at] = row[0]
		if x != nil {
			x.SetRow(at, row[2:])
		}
	}
	return newColumns(y, x, make([]string, w-2))
}

// percentiles returns the quantiles of values at (1 -/+ confidence)/2,
// interpolated between order statistics so that the least and the greatest
// value are the quantiles of 0 and 1. values are sorted.
func percentiles(values []float64, confidence float64) (low, high float64) {
	if len(values) == 0 {
		return math.NaN(), math.NaN()
	}
	slices.Sort(values)
	at := func(p float64) float64 {
		h := p * float64(len(values)-1)
		below := int(h)
		if below+1 >= len(values) {
			return values[len(values)-1]
		}
		return values[below] + (h-float64(below))*(values[below+1]-values[below])
	}
	return at((1 - confidence) / 2), at((1 + confidence) / 2)
}
