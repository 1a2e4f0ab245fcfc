package twin

import (
	"errors"
	"fmt"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// drawCohort draws several small pedigrees, some of them twice, so that
// families of one structure are there to be exchanged.
func drawCohort(t *rapid.T) *Pedigree {
	var all []Person
	for f := range rapid.IntRange(1, 4).Draw(t, "pedigrees") {
		people := drawPeople(t)
		for c := range rapid.IntRange(1, 2).Draw(t, "copies") {
			mark := func(id string) string {
				if id == "" {
					return ""
				}
				return fmt.Sprintf("%s.%d.%d", id, f, c)
			}
			for _, who := range people {
				who.ID, who.Family, who.Mother, who.Father = mark(who.ID), mark(who.Family), mark(who.Mother), mark(who.Father)
				who.TwinSet, who.RearedIn = mark(who.TwinSet), mark(who.RearedIn)
				all = append(all, who)
			}
		}
	}
	p, _, err := NewPedigree(all, drawRules(t))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// asExchanged is the part of a relation that exchange has to keep beside kinship,
// home and parents: what kind of twins they are, whatever their sex.
func asExchanged(r Relation) Relation {
	switch r {
	case MZ, UnknownZygosity:
		return r
	case DZSameSex, DZOppositeSex:
		return DZSameSex
	}
	return Unrelated
}

// Every arrangement of any pedigree's people gives each pair of places a pair of
// people with the same relation, kinship and home, and the same one as parent.
func TestArrangementsKeepEveryPairOfAPedigree(t *testing.T) {
	moved := 0
	rapid.Check(t, func(t *rapid.T) {
		p := drawCohort(t)
		rows := rapid.Permutation(indices(p.Len())).Draw(t, "rows")
		rows = rows[:rapid.IntRange(1, len(rows)).Draw(t, "present")]
		x, err := crossval.NewExchange(len(rows), p.Blocks(rows, BlockOptions{}))
		if err != nil {
			t.Fatal(err)
		}
		to := make([]int, len(rows))
		for draw := range uint64(5) {
			x.DrawTo(to, stream.New(3, "exchange", draw))
			for i := range rows {
				if to[i] != i {
					moved++
				}
				for j := range i {
					a, b, c, d := rows[i], rows[j], rows[to[i]], rows[to[j]]
					if asExchanged(p.Relation(a, b)) != asExchanged(p.Relation(c, d)) || p.Kinship(a, b) != p.Kinship(c, d) ||
						p.SharedHome(a, b) != p.SharedHome(c, d) || (p.Mother(a) == b || p.Father(a) == b) != (p.Mother(c) == d || p.Father(c) == d) {
						t.Fatalf("places of %d and %d hold %d and %d: relation %s became %s", a, b, c, d, p.Relation(a, b), p.Relation(c, d))
					}
				}
			}
		}
	})
	if moved == 0 {
		t.Error("no arrangement moved anybody")
	}
}

// No two people who are kin, share a home or a label, or have a child together
// are on two sides of any split, outer or inner.
func TestFoldsKeepKinTogether(t *testing.T) {
	folded := 0
	rapid.Check(t, func(t *rapid.T) {
		p := drawCohort(t)
		rows := rapid.Permutation(indices(p.Len())).Draw(t, "rows")
		family := make([]int, len(rows))
		for i, row := range rows {
			family[i] = p.Family(row)
		}
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{
			Outer: rapid.IntRange(2, 4).Draw(t, "outer"), Inner: 2, Repeats: 2, Seed: rapid.Uint64().Draw(t, "seed"),
		})
		if errors.As(err, new(*crossval.CountError)) {
			return // too few families
		}
		if err != nil {
			t.Fatal(err)
		}
		folded++
		for _, r := range folds.Repeats {
			for i := range rows {
				for j := range i {
					a, b := rows[i], rows[j]
					if p.Relation(a, b) == Unrelated && p.Kinship(a, b) == 0 && !p.SharedHome(a, b) {
						continue
					}
					if r.Outer[i] != r.Outer[j] {
						t.Fatalf("%s of %d and %d across outer folds", p.Relation(a, b), a, b)
					}
					for o := range r.Inner {
						if r.Inner[o][i] != r.Inner[o][j] {
							t.Fatalf("%s of %d and %d across inner folds of %d", p.Relation(a, b), a, b, o)
						}
					}
				}
			}
		}
	})
	if folded == 0 {
		t.Error("no draw had families enough for folds")
	}
}
