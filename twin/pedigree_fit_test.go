package twin

import (
	"testing"

	"gonum.org/v1/gonum/mat"
)

// A Pedigree says the same as the tests' own table of kin: log-likelihoods of
// every model agree on families with half-siblings and lost co-twins, and on
// Galton's with parents.
func TestFitsByPedigree(t *testing.T) {
	check := func(t *testing.T, table *Sample, pedigree *Pedigree, y []float64, x *mat.Dense, names []string) {
		t.Helper()
		s, err := NewSample(pedigree, table.people, y, x, names)
		if err != nil {
			t.Fatal(err)
		}
		if s.Families() != table.Families() || s.Structures() != table.Structures() {
			t.Errorf("%d families of %d structures, want %d of %d", s.Families(), s.Structures(), table.Families(), table.Structures())
		}
		for m := ModelE; m <= ModelADE; m++ {
			got, err := s.Fit(m, FitOptions{})
			want, wantErr := table.Fit(m, FitOptions{})
			if (err == nil) != (wantErr == nil) {
				t.Fatalf("%s: %v, want %v", m, err, wantErr)
			}
			if err == nil {
				near(t, m.String(), got.LogLik, want.LogLik, 1e-9)
			}
		}
	}
	t.Run("ace_small", func(t *testing.T) {
		table := readTable(t, "ace_small", "people.csv")
		value := map[string]record{}
		for _, r := range readTable(t, "ace_small", "dynamics.csv") {
			value[r["person"]] = r
		}
		var people []Person
		for _, r := range table {
			p := Person{ID: r["person"], Family: r["family"], Mother: r["mother"], Father: r["father"],
				TwinSet: r["twin_set"], RearedIn: r["family"], Sex: Female}
			if r["sex"] == "M" {
				p.Sex = Male
			}
			switch r["zygosity"] {
			case "MZ":
				p.Zygosity = Monozygotic
			case "DZ":
				p.Zygosity = Dizygotic
			}
			people = append(people, p)
		}
		pedigree, _, err := NewPedigree(people, Rules{})
		if err != nil {
			t.Fatal(err)
		}
		s := completeSample(t, "ace_small", "f001", false)
		y := make([]float64, len(s.people))
		for at, i := range s.people {
			y[at] = value[people[i].ID].number(t, "f001")
		}
		check(t, s, pedigree, y, nil, nil)
	})
	t.Run("galton", func(t *testing.T) {
		k, height, male := galtonFamilies(t)
		var people []Person
		for i := range height {
			p := Person{ID: name(i), Sex: Female}
			if male[i] == 1 {
				p.Sex = Male
			}
			if k.mother[i] >= 0 {
				p.Mother, p.Father = name(k.mother[i]), name(k.father[i])
			}
			people = append(people, p)
		}
		pedigree, _, err := NewPedigree(people, Rules{})
		if err != nil {
			t.Fatal(err)
		}
		x := mat.NewDense(len(height), 1, male)
		s, err := NewSample(k, everyone(len(height)), height, x, []string{"male"})
		if err != nil {
			t.Fatal(err)
		}
		check(t, s, pedigree, height, x, []string{"male"})
		byPedigree, err := NewSample(pedigree, everyone(len(height)), height, x, []string{"male"})
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range []Relation{ParentChild, Spouse, FullSibling} {
			got, want := mustCorrelate(t, byPedigree, r, confident), mustCorrelate(t, s, r, confident)
			near(t, r.String(), got.Value, want.Value, 1e-12)
			near(t, r.String()+" low", got.Low, want.Low, 1e-12)
			if got.Pairs != want.Pairs {
				t.Errorf("%s: %d pairs, want %d", r, got.Pairs, want.Pairs)
			}
		}
	})
}

func name(i int) string { return "person " + string(rune('A'+i%26)) + string(rune('0'+i/26)) }
