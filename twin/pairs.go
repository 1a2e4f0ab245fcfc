package twin

import "iter"

// Pair is two people of one family by index, First before Second in the rows
// that were asked for.
type Pair struct {
	First, Second int
	Relation      Relation
}

// PairCount says how often a relation is found.
type PairCount struct {
	Relation    Relation
	Pairs       int
	Families    int // with at least one such pair
	SharingHome int // pairs who grew up in one home
}

// Pairs gives every pair of related people among rows, which are distinct
// indices of people with a row: by family in order of appearance, within a
// family in the order of rows. Unrelated people are left out. It panics on
// other rows.
func (p *Pedigree) Pairs(rows []int) iter.Seq[Pair] {
	p.checkPeople("Pairs", rows)
	return func(yield func(Pair) bool) {
		for _, places := range p.placesByFamily(rows) {
			for b, second := range places {
				for _, first := range places[:b] {
					pair := Pair{First: rows[first], Second: rows[second]}
					pair.Relation = p.Relation(pair.First, pair.Second)
					if pair.Relation != Unrelated && !yield(pair) {
						return
					}
				}
			}
		}
	}
}

// PairCounts counts the pairs of related people among rows by relation, in the
// order of the relations, without those that do not occur.
func (p *Pedigree) PairCounts(rows []int) []PairCount {
	var counts [relationCount]PairCount
	var last [relationCount]int // one more than the last family counted
	for pair := range p.Pairs(rows) {
		c := &counts[pair.Relation]
		c.Relation = pair.Relation
		c.Pairs++
		if f := p.Family(pair.First) + 1; last[pair.Relation] != f {
			last[pair.Relation] = f
			c.Families++
		}
		if p.SharedHome(pair.First, pair.Second) {
			c.SharingHome++
		}
	}
	var found []PairCount
	for _, c := range counts {
		if c.Pairs > 0 {
			found = append(found, c)
		}
	}
	return found
}

// placesByFamily splits 0..len(rows)-1 by the family of the person there, by
// first appearance.
func (p *Pedigree) placesByFamily(rows []int) [][]int {
	number := make([]int32, p.Families()) // one more than the family's place
	var sizes []int
	for _, i := range rows {
		f := p.family[i]
		if number[f] == 0 {
			sizes = append(sizes, 0)
			number[f] = int32(len(sizes))
		}
		sizes[number[f]-1]++
	}
	all := make([]int, len(rows))
	places := make([][]int, len(sizes))
	for k, from := 0, 0; k < len(sizes); k++ {
		places[k] = all[from : from : from+sizes[k]]
		from += sizes[k]
	}
	for place, i := range rows {
		k := number[p.family[i]] - 1
		places[k] = append(places[k], place)
	}
	return places
}
