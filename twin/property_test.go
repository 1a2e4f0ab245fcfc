package twin

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

// drawPeople draws a table without faults: parents among earlier people or
// outside the table or unknown, twin sets of two and three, labels, homes.
func drawPeople(t *rapid.T) []Person {
	n := rapid.IntRange(1, 14).Draw(t, "people")
	outside := rapid.Bool().Draw(t, "parents outside")
	homes := rapid.SampledFrom([]int{0, 0, 1, 3}).Draw(t, "homes")
	pick := func(name string, texts ...string) string { return rapid.SampledFrom(texts).Draw(t, name) }
	people := make([]Person, 0, n)
	real := make([]Person, 0, n) // with the parents that twins really have
	for i := range n {
		who := Person{ID: fmt.Sprint("p", i), Sex: Sex(rapid.IntRange(0, 2).Draw(t, "sex"))}
		who.Family = pick("label", "", "F", "F", "G", "H")
		if homes > 0 {
			who.RearedIn = []string{"", "h1", "h2"}[rapid.IntRange(0, homes-1).Draw(t, "home")]
		}
		mothers, fathers := []string{"", ""}, []string{"", ""}
		if outside {
			mothers, fathers = append(mothers, "m1", "m2"), append(fathers, "f1", "f2")
		}
		for _, q := range people {
			switch q.Sex {
			case Female:
				mothers = append(mothers, q.ID)
			case Male:
				fathers = append(fathers, q.ID)
			}
		}
		who.Mother, who.Father = pick("mother", mothers...), pick("father", fathers...)
		if i > 0 && rapid.IntRange(0, 2).Draw(t, "twin") == 0 {
			before := &people[i-1]
			who.Mother, who.Father = real[i-1].Mother, real[i-1].Father
			if before.TwinSet == "" {
				before.TwinSet = fmt.Sprint("T", i)
				before.Zygosity = Zygosity(rapid.IntRange(0, 2).Draw(t, "zygosity"))
			}
			who.TwinSet, who.Zygosity = before.TwinSet, before.Zygosity
			if who.Zygosity == Monozygotic {
				who.Sex = before.Sex
			}
		}
		real = append(real, who)
		if who.TwinSet != "" && rapid.Bool().Draw(t, "parents by the co-twin") {
			who.Mother, who.Father = "", ""
		}
		people = append(people, who)
	}
	return people
}

func drawRules(t *rapid.T) Rules {
	return Rules{
		UnknownParents: UnknownParents(rapid.IntRange(0, 1).Draw(t, "unknown parents")),
		UnknownParent:  UnknownParent(rapid.IntRange(0, 1).Draw(t, "unknown parent")),
		RearedWith:     RearedWith(rapid.IntRange(0, 1).Draw(t, "reared with")),
	}
}

// matrix fills a symmetric matrix over the people with a row.
func matrix(p *Pedigree, value func(i, j int) float64) *mat.SymDense {
	m := mat.NewSymDense(p.Len(), nil)
	for i := range p.Len() {
		for j := i; j < p.Len(); j++ {
			m.SetSym(i, j, value(i, j))
		}
	}
	return m
}

// leastEigenvalue must not be below zero by more than rounding.
func leastEigenvalue(t *rapid.T, m *mat.SymDense) float64 {
	var e mat.EigenSym
	if !e.Factorize(m, false) {
		t.Fatal("no eigenvalues")
	}
	return slices.Min(e.Values(nil))
}

func TestMatricesAreCovariances(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, _, err := NewPedigree(drawPeople(t), drawRules(t))
		if err != nil {
			t.Fatal(err)
		}
		home := func(i, j int) float64 {
			if p.SharedHome(i, j) != p.SharedHome(j, i) {
				t.Fatalf("home of %d and %d is not symmetric", i, j)
			}
			if p.SharedHome(i, j) {
				return 1
			}
			return 0
		}
		for i := range p.Len() {
			for j := range p.Len() {
				if p.Family(i) != p.Family(j) && (home(i, j) != 0 || p.Kinship(i, j) != 0) {
					t.Errorf("%d and %d of two families share a home or genes", i, j)
				}
				for k := range p.Len() {
					if home(i, j) == 1 && home(j, k) == 1 && home(i, k) == 0 {
						t.Errorf("homes of %d, %d and %d are no partition", i, j, k)
					}
				}
			}
		}
		if least := leastEigenvalue(t, matrix(p, home)); least < -1e-12 {
			t.Errorf("R has the eigenvalue %v", least)
		}
		if least := leastEigenvalue(t, matrix(p, p.Kinship)); least < -1e-12 {
			t.Errorf("K has the eigenvalue %v", least)
		}
		if _, inbred := p.Inbred(); inbred {
			return
		}
		if least := leastEigenvalue(t, matrix(p, p.Dominance)); least < -1e-12 {
			t.Errorf("L has the eigenvalue %v", least)
		}
	})
}

// tabular computes K of everybody, founders included, by the tabular method
// (Emik & Terrill 1949), one row at a time from the parents' rows; people who
// are identical have equal rows.
func tabular(p *Pedigree) [][]float64 {
	n := p.Len() + p.Founders()
	k := make([][]float64, n)
	for i := range k {
		k[i] = make([]float64, n)
	}
	var done []int
	isDone := make([]bool, n)
	ready := func(parent int) bool { return parent < 0 || isDone[parent] }
	entry := func(i, j int) float64 {
		if i < 0 || j < 0 {
			return 0
		}
		return k[i][j]
	}
	for len(done) < n {
		for i := range n {
			if isDone[i] || !ready(p.Mother(i)) || !ready(p.Father(i)) {
				continue
			}
			twin := slices.IndexFunc(done, func(j int) bool { return p.Relation(i, j) == MZ })
			for _, j := range done {
				v := (entry(p.Mother(i), j) + entry(p.Father(i), j)) / 2
				if twin >= 0 {
					v = k[done[twin]][j]
				}
				k[i][j], k[j][i] = v, v
			}
			k[i][i] = 1 + entry(p.Mother(i), p.Father(i))/2
			isDone[i] = true
			done = append(done, i)
		}
	}
	return k
}

func TestKinshipAgainstTabularMethod(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, _, err := NewPedigree(drawPeople(t), drawRules(t))
		if err != nil {
			t.Fatal(err)
		}
		k := tabular(p)
		for i := range k {
			for j := range k {
				if got := p.Kinship(i, j); math.Abs(got-k[i][j]) > 1e-15 {
					t.Errorf("kinship of %d and %d is %v, want %v", i, j, got, k[i][j])
				}
			}
		}
	})
}

// The coefficients that a relation fixes, whatever else the pedigree holds.
func TestRelationsAndCoefficientsAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, _, err := NewPedigree(drawPeople(t), drawRules(t))
		if err != nil {
			t.Fatal(err)
		}
		for i := range p.Len() {
			for j := range p.Len() {
				k, l := p.Kinship(i, j), p.Dominance(i, j)
				if i == j {
					if l != 1 || p.Relation(i, j) != Unrelated || !p.SharedHome(i, j) {
						t.Errorf("%d with themselves: l %v, %v", i, l, p.Relation(i, j))
					}
					continue
				}
				least, share := 0.0, 0.0
				switch p.Relation(i, j) {
				case MZ:
					least, share = 1, 1
				case DZSameSex, DZOppositeSex, UnknownZygosity, FullSibling:
					least, share = .5, .25
					if p.Sibship(i) != p.Sibship(j) || p.Sibship(i) < 0 {
						t.Errorf("%d and %d are %v of sibships %d and %d", i, j, p.Relation(i, j), p.Sibship(i), p.Sibship(j))
					}
				case HalfSibling:
					least = .25
				case ParentChild:
					least = .5
				case OtherKin:
					least = math.SmallestNonzeroFloat64
				case Unrelated:
					if k != 0 || l != 0 {
						t.Errorf("%d and %d are unrelated with k %v and l %v", i, j, k, l)
					}
				}
				if k < least || l < share {
					t.Errorf("%d and %d are %v with k %v and l %v", i, j, p.Relation(i, j), k, l)
				}
				if r := p.Relation(j, i); r != p.Relation(i, j) {
					t.Errorf("%d and %d are %v one way, %v the other", i, j, p.Relation(i, j), r)
				}
				if p.Relation(i, j) != Unrelated && p.Family(i) != p.Family(j) {
					t.Errorf("%d and %d are %v in two families", i, j, p.Relation(i, j))
				}
			}
		}
	})
}

// Rows in another order give the same relations, homes, families and notes.
func TestOrderOfRowsDoesNotMatter(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		people, rules := drawPeople(t), drawRules(t)
		place := rapid.Permutation(indices(len(people))).Draw(t, "order") // of person i in the other table
		moved := make([]Person, len(people))
		for i, to := range place {
			moved[to] = people[i]
		}
		p, notes, err := NewPedigree(people, rules)
		if err != nil {
			t.Fatal(err)
		}
		q, movedNotes, err := NewPedigree(moved, rules)
		if err != nil {
			t.Fatal(err)
		}
		if p.Families() != q.Families() || p.Founders() != q.Founders() {
			t.Errorf("%d and %d families, %d and %d founders", p.Families(), q.Families(), p.Founders(), q.Founders())
		}
		for i, a := range place {
			if p.Zygosity(i) != q.Zygosity(a) {
				t.Errorf("zygosity of %d: %v and %v", i, p.Zygosity(i), q.Zygosity(a))
			}
			for j, b := range place {
				if p.Relation(i, j) != q.Relation(a, b) || p.Kinship(i, j) != q.Kinship(a, b) ||
					p.Dominance(i, j) != q.Dominance(a, b) || p.SharedHome(i, j) != q.SharedHome(a, b) {
					t.Errorf("%d and %d are %v (%v), moved %v (%v)", i, j, p.Relation(i, j), p.Kinship(i, j), q.Relation(a, b), q.Kinship(a, b))
				}
				if (p.Family(i) == p.Family(j)) != (q.Family(a) == q.Family(b)) {
					t.Errorf("%d and %d: one family in one order only", i, j)
				}
				same := p.Sibship(i) >= 0 && p.Sibship(i) == p.Sibship(j)
				if moved := q.Sibship(a) >= 0 && q.Sibship(a) == q.Sibship(b); same != moved {
					t.Errorf("%d and %d: one sibship in one order only", i, j)
				}
			}
		}
		if len(notes) != len(movedNotes) {
			t.Fatalf("%d and %d notes", len(notes), len(movedNotes))
		}
		for k, n := range notes {
			there := make([]int, len(n.People))
			for l, i := range n.People {
				there[l] = place[i]
			}
			slices.Sort(there)
			if n.About != movedNotes[k].About || !slices.Equal(there, movedNotes[k].People) {
				t.Errorf("note %+v, moved %+v", n, movedNotes[k])
			}
		}
	})
}

func indices(n int) []int {
	all := make([]int, n)
	for i := range all {
		all[i] = i
	}
	return all
}
