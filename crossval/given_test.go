package crossval_test

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
)

// Folds of our own, handed back as tables, are the same folds.
func TestGivenFoldsTakeBackDrawnOnes(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 6, 25)
		drawn, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 3, Inner: 3, Repeats: 2, Seed: rapid.Uint64().Draw(t, "seed")})
		if err != nil {
			t.Fatal(err)
		}
		var tables []crossval.Given
		for _, p := range drawn.Repeats {
			tables = append(tables, crossval.Given{Outer: p.Outer, Inner: p.Inner})
		}
		given, err := crossval.GivenFolds(family, tables, crossval.FoldOptions{})
		if err != nil {
			t.Fatal(err)
		}
		checkFolds(t, given, family)
		for r, p := range given.Repeats {
			want := drawn.Repeats[r]
			if !slices.Equal(p.Outer, want.Outer) || p.OuterCount != want.OuterCount || !slices.Equal(p.InnerCount, want.InnerCount) || p.Cell != nil {
				t.Fatalf("repeat %d differs", r)
			}
			for o := range p.Inner {
				if !slices.Equal(p.Inner[o], want.Inner[o]) {
					t.Fatalf("repeat %d, outer %d differs", r, o)
				}
			}
			tables[r].Outer[0], tables[r].Inner[0][0] = 77, 77
			if p.Outer[0] == 77 || p.Inner[0][0] == 77 {
				t.Fatal("the tables were not copied")
			}
		}
	})
}

// Sites given as outer folds, inner folds of our own inside them.
func TestGivenOuterFoldsOfAnySize(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 8, 30)
		labels := slices.Compact(slices.Sorted(slices.Values(family)))
		siteOf := make(map[int]int)
		sites := rapid.IntRange(2, 4).Draw(t, "sites")
		for at, label := range labels {
			siteOf[label] = at
			if at >= sites {
				siteOf[label] = rapid.IntRange(0, sites-1).Draw(t, "site")
			}
		}
		site := make([]int, len(family))
		for i, label := range family {
			site[i] = siteOf[label]
		}
		most := 0
		for s := range sites {
			count := 0
			for _, label := range labels {
				if siteOf[label] == s {
					count++
				}
			}
			most = max(most, count)
		}
		inner := rapid.IntRange(2, len(labels)/2).Draw(t, "inner")
		folds, err := crossval.GivenFolds(family, []crossval.Given{{Outer: site}}, crossval.FoldOptions{Inner: inner, Seed: 4})
		if len(labels)-most < inner {
			var few *crossval.CountError
			if !errors.As(err, &few) || few.Training >= inner {
				t.Fatalf("%d families left for %d inner folds: %v", len(labels)-most, inner, err)
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(folds.Repeats[0].Outer, site) || folds.Repeats[0].Cell == nil || folds.PerFamily {
			t.Fatal("outer folds differ, or inner ones are not cells")
		}
		checkFolds(t, folds, family)
	})
}

func TestGivenFoldsOfOneFamilyEach(t *testing.T) {
	family := []int{8, 8, 3, 4, 5}
	folds, err := crossval.GivenFolds(family, []crossval.Given{{Outer: []int{2, 2, 0, 1, 3}}}, crossval.FoldOptions{Inner: 2})
	if err != nil {
		t.Fatal(err)
	}
	if !folds.PerFamily {
		t.Error("every fold is one family, PerFamily is false")
	}
}

// Six families, two of them pairs, in two outer folds with two inner folds.
func someFolds() (family []int, table crossval.Given) {
	return []int{10, 10, 20, 20, 30, 40, 50, 60}, crossval.Given{
		Outer: []int{0, 0, 1, 1, 0, 1, 0, 1},
		Inner: [][]int{{-1, -1, 0, 0, -1, 1, -1, 1}, {0, 0, -1, -1, 1, -1, 1, -1}},
	}
}

func TestGivenFoldsSayWhatIsWrong(t *testing.T) {
	for _, c := range []struct {
		name  string
		spoil func(*crossval.Given)
		want  crossval.FoldError
		text  string
	}{
		{"person missing", func(g *crossval.Given) { g.Outer[4] = -1; g.Inner[0][4] = 0; g.Inner[1][4] = 1 },
			crossval.FoldError{Fault: crossval.PersonMissing, Outer: -1, Inner: -1, Person: 4, Other: -1, Family: 30},
			"crossval: repeat 0: person 4 (family 30) is in no outer fold"},
		{"family on two sides", func(g *crossval.Given) { g.Outer[1] = 1; g.Inner[0][1] = 0; g.Inner[1][1] = -1 },
			crossval.FoldError{Fault: crossval.FamilySplit, Outer: 1, Inner: -1, Person: 1, Other: 0, Family: 10},
			"crossval: repeat 0: family 10 is split: person 1 is in outer fold 1, person 0 is not"},
		{"person missing inside", func(g *crossval.Given) { g.Inner[1][6] = -1 },
			crossval.FoldError{Fault: crossval.PersonMissing, Outer: 1, Inner: 0, Person: 6, Other: -1, Family: 50},
			"crossval: repeat 0, outer fold 1 held out: person 6 (family 50) is in no inner fold"},
		{"family on two sides inside", func(g *crossval.Given) { g.Inner[0][3] = 1 },
			crossval.FoldError{Fault: crossval.FamilySplit, Outer: 0, Inner: 1, Person: 3, Other: 2, Family: 20},
			"crossval: repeat 0, outer fold 0 held out: family 20 is split: person 3 is in inner fold 1, person 2 is not"},
		{"gap inside", func(g *crossval.Given) { g.Inner[1][4], g.Inner[1][6] = 2, 2 },
			crossval.FoldError{Fault: crossval.FoldEmpty, Outer: 1, Inner: 1, Person: -1, Other: -1},
			"crossval: repeat 0, outer fold 1 held out: inner fold 1 is empty"},
		{"held out inside", func(g *crossval.Given) { g.Inner[0][4] = 1 },
			crossval.FoldError{Fault: crossval.HeldOutInside, Outer: 0, Inner: 1, Person: 4, Other: -1, Family: 30},
			"crossval: repeat 0, outer fold 0 held out: person 4 (family 30) is held out and in inner fold 1"},
		{"one inner fold", func(g *crossval.Given) { g.Inner[0] = []int{-1, -1, 0, 0, -1, 0, -1, 0} },
			crossval.FoldError{Fault: crossval.FoldsTooFew, Outer: 0, Inner: 0, Person: -1, Other: -1},
			"crossval: repeat 0, outer fold 0 held out: fewer than two inner folds"},
	} {
		family, table := someFolds()
		if _, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{}); err != nil {
			t.Fatal(err)
		}
		c.spoil(&table)
		_, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{})
		var got *crossval.FoldError
		if !errors.As(err, &got) || *got != c.want || err.Error() != c.text {
			t.Errorf("%s: got %v, %+v", c.name, err, got)
		}
	}
}

func TestGivenOuterFoldsSayWhatIsWrong(t *testing.T) {
	family, _ := someFolds()
	for _, c := range []struct {
		name  string
		outer []int
		want  crossval.FoldError
	}{
		{"gap", []int{0, 0, 2, 2, 0, 2, 0, 2}, crossval.FoldError{Fault: crossval.FoldEmpty, Outer: 1, Inner: -1, Person: -1, Other: -1}},
		{"gap at the start", []int{1, 1, 2, 2, 1, 2, 1, 2}, crossval.FoldError{Fault: crossval.FoldEmpty, Outer: 0, Inner: -1, Person: -1, Other: -1}},
		{"one fold", make([]int, 8), crossval.FoldError{Fault: crossval.FoldsTooFew, Outer: 0, Inner: -1, Person: -1, Other: -1}},
		{"negative number", []int{0, 0, 1, 1, 0, 1, -3, 1}, crossval.FoldError{Fault: crossval.PersonMissing, Outer: -3, Inner: -1, Person: 6, Other: -1, Family: 50}},
	} {
		_, err := crossval.GivenFolds(family, []crossval.Given{{Outer: c.outer}}, crossval.FoldOptions{Inner: 2})
		var got *crossval.FoldError
		if !errors.As(err, &got) || *got != c.want {
			t.Errorf("%s: got %v, %+v", c.name, err, got)
		}
	}
}

func TestFaultsAreReportedTogether(t *testing.T) {
	family := make([]int, 60)
	outer := make([]int, 60)
	for i := range family {
		family[i] = i
		outer[i] = i % 2
		if i < 30 {
			outer[i] = -1
		}
	}
	_, err := crossval.GivenFolds(family, []crossval.Given{{Outer: outer}}, crossval.FoldOptions{Inner: 2})
	if lines := strings.Split(err.Error(), "\n"); len(lines) != 20 || !strings.Contains(lines[19], "person 19 ") {
		t.Errorf("%d lines: %v", len(lines), err)
	}
}

func TestGivenFoldsKeepLevels(t *testing.T) {
	// Twelve families of one, even against odd, and inside them three by
	// three.
	const n = 12
	family := make([]int, n)
	table := crossval.Given{Outer: make([]int, n), Inner: [][]int{make([]int, n), make([]int, n)}}
	for i := range n {
		family[i] = i
		table.Outer[i] = i % 2
		table.Inner[i%2][i] = -1
		table.Inner[1-i%2][i] = i / 2 % 3
	}
	column := func(holders ...int) [][]int {
		level := make([]int, n)
		for _, i := range holders {
			level[i] = 1
		}
		return [][]int{make([]int, n), level}
	}
	var missing *crossval.LevelError
	isFault := func(folds *crossval.Folds, err error) bool {
		return folds == nil && errors.As(err, &missing) && missing.Column == 1 && missing.Level == 1 && missing.Tries == 0
	}
	evenOnly := column(0, 2, 4)
	if folds, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{Levels: evenOnly}); !isFault(folds, err) {
		t.Errorf("level in one outer fold: %v", err)
	}
	if folds, err := crossval.GivenFolds(family, []crossval.Given{{Outer: table.Outer}}, crossval.FoldOptions{Inner: 3, Levels: evenOnly}); !isFault(folds, err) {
		t.Errorf("level in one outer fold, inner folds of our own: %v", err)
	}
	if folds, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{Levels: column(0, 2, 1, 7)}); !isFault(folds, err) {
		t.Errorf("level in one inner fold: %v", err)
	}
	if _, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{Levels: column(0, 2, 1, 3)}); err != nil {
		t.Error(err)
	}
}

func TestGivenFoldsRefuseWrongLengths(t *testing.T) {
	family, table := someFolds()
	for name, spoil := range map[string]func(*crossval.Given){
		"outer":        func(g *crossval.Given) { g.Outer = g.Outer[:7] },
		"inner":        func(g *crossval.Given) { g.Inner = g.Inner[:1] },
		"inner people": func(g *crossval.Given) { g.Inner[1] = g.Inner[1][:7] },
	} {
		spoilt := crossval.Given{Outer: table.Outer, Inner: slices.Clone(table.Inner)}
		spoil(&spoilt)
		if _, err := crossval.GivenFolds(family, []crossval.Given{spoilt}, crossval.FoldOptions{}); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
	if _, err := crossval.GivenFolds(family, []crossval.Given{table}, crossval.FoldOptions{Inner: 2}); err == nil {
		t.Error("inner folds given and asked: no error")
	}
}

func TestValidateCellsAndFamilies(t *testing.T) {
	family := []int{1, 1, 2, 3, 4, 5}
	drawn := func() *crossval.Folds {
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2})
		if err != nil {
			t.Fatal(err)
		}
		return folds
	}
	var got *crossval.FoldError
	folds := drawn()
	folds.Repeats[0].Cell[3] = 1 - folds.Repeats[0].Cell[3]
	if err := folds.Validate(family); !errors.As(err, &got) || got.Fault != crossval.CellDiffers || got.Person != 3 || got.Family != 3 ||
		!strings.HasSuffix(got.Error(), "of person 3 (family 3) is not the person's cell") {
		t.Errorf("cell: %v", err)
	}
	folds = drawn()
	folds.PerFamily = true
	if err := folds.Validate(family); !errors.As(err, &got) || got.Fault != crossval.FamilyNotAlone || folds.Repeats[0].Outer[got.Person] != folds.Repeats[0].Outer[got.Other] ||
		!strings.Contains(got.Error(), " is to hold one family and holds person ") {
		t.Errorf("one family a fold: %v", err)
	}
	for name, spoil := range map[string]func(*crossval.Folds){
		"cells of others": func(f *crossval.Folds) { f.Repeats[0].Cell = f.Repeats[0].Cell[:3] },
		"no repeat":       func(f *crossval.Folds) { f.Repeats = nil },
		"counts":          func(f *crossval.Folds) { f.Repeats[0].InnerCount = nil },
	} {
		folds = drawn()
		spoil(folds)
		if folds.Validate(family) == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// A table that splits the second family.
func ExampleGivenFolds() {
	family := []int{1, 1, 2, 2, 3, 4}
	_, err := crossval.GivenFolds(family, []crossval.Given{{Outer: []int{0, 0, 1, 0, 0, 1}}}, crossval.FoldOptions{Inner: 2})
	var fault *crossval.FoldError
	if errors.As(err, &fault) {
		fmt.Println("family", fault.Family, "has person", fault.Other, "on one side and person", fault.Person, "on the other")
	}
	// Output: family 2 has person 2 on one side and person 3 on the other
}
