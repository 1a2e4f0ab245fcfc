package crossval_test

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
)

// drawFamilies draws people in families of 1 to 8 under labels of any value,
// relatives apart from each other in the order of people.
func drawFamilies(t *rapid.T, least, most int) []int {
	sizes := rapid.SliceOfN(rapid.IntRange(1, 8), least, most).Draw(t, "sizes")
	var family []int
	for f, size := range sizes {
		for range size {
			family = append(family, 7*f-20)
		}
	}
	return rapid.Permutation(family).Draw(t, "family")
}

func sizesOf(family []int) map[int]int {
	size := make(map[int]int)
	for _, label := range family {
		size[label]++
	}
	return size
}

// checkFolds looks at folds pair by pair, apart from Validate.
func checkFolds(t *rapid.T, folds *crossval.Folds, family []int) {
	if err := folds.Validate(family); err != nil {
		t.Fatal(err)
	}
	for r, p := range folds.Repeats {
		outerSize := make([]int, p.OuterCount)
		for i := range family {
			outerSize[p.Outer[i]]++
			for j := range i {
				if family[i] != family[j] {
					continue
				}
				if p.Outer[i] != p.Outer[j] {
					t.Fatalf("repeat %d: relatives %d and %d in outer folds %d and %d", r, i, j, p.Outer[i], p.Outer[j])
				}
				for o := range p.OuterCount {
					if p.Inner[o][i] != p.Inner[o][j] {
						t.Fatalf("repeat %d, outer %d: relatives %d and %d in inner folds %d and %d", r, o, i, j, p.Inner[o][i], p.Inner[o][j])
					}
				}
			}
		}
		if slices.Min(outerSize) == 0 {
			t.Fatalf("repeat %d: empty outer fold in %v", r, outerSize)
		}
		for o := range p.OuterCount {
			innerSize := make([]int, p.InnerCount[o])
			for i, inner := range p.Inner[o] {
				if (inner == -1) != (p.Outer[i] == o) {
					t.Fatalf("repeat %d: person %d of outer fold %d has inner fold %d while %d is held out", r, i, p.Outer[i], inner, o)
				}
				if inner >= 0 {
					innerSize[inner]++
				}
				if inner >= 0 && p.Cell != nil && p.Cell[i] != inner {
					t.Fatalf("repeat %d: person %d has cell %d and inner fold %d", r, i, p.Cell[i], inner)
				}
			}
			if slices.Min(innerSize) == 0 {
				t.Fatalf("repeat %d, outer %d: empty inner fold in %v", r, o, innerSize)
			}
		}
	}
}

func TestBalancedFoldsProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 4, 40)
		families := len(sizesOf(family))
		opt := crossval.FoldOptions{
			Outer:   rapid.IntRange(2, min(families, 12)).Draw(t, "outer"),
			Inner:   rapid.IntRange(2, min(families/2, 6)).Draw(t, "inner"),
			Repeats: rapid.IntRange(0, 3).Draw(t, "repeats"),
			Seed:    rapid.Uint64().Draw(t, "seed"),
		}
		before := slices.Clone(family)
		folds, err := crossval.BalancedFolds(family, opt)
		if err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(family, before) {
			t.Fatal("families were changed")
		}
		if len(folds.Repeats) != max(1, opt.Repeats) || folds.PerFamily != (opt.Outer == families) {
			t.Fatalf("%d repeats, PerFamily %v", len(folds.Repeats), folds.PerFamily)
		}
		checkFolds(t, folds, family)

		// Emptiest first: no fold is ahead of another by more than its last
		// family, unless a fold was closed to leave enough to train on.
		largest := 0
		for _, size := range sizesOf(family) {
			largest = max(largest, size)
		}
		for _, p := range folds.Repeats {
			people := make([]int, opt.Outer)
			held := make([]map[int]bool, opt.Outer)
			for i, o := range p.Outer {
				people[o]++
				if held[o] == nil {
					held[o] = make(map[int]bool)
				}
				held[o][family[i]] = true
			}
			closed := slices.ContainsFunc(held, func(h map[int]bool) bool { return len(h) == families-opt.Inner })
			if spread := slices.Max(people) - slices.Min(people); spread > largest && !closed {
				t.Fatalf("folds of %v people with families of at most %d", people, largest)
			}
			for o := range opt.Outer {
				cell := make([]int, opt.Inner)
				for i := range family {
					if p.Outer[i] == o {
						cell[p.Cell[i]]++
					}
				}
				if spread := slices.Max(cell) - slices.Min(cell); spread > largest {
					t.Fatalf("cells of %v people in a fold with families of at most %d", cell, largest)
				}
			}
		}
	})
}

// Unrelated people fall into folds and cells that differ by one at most.
func TestBalancedFoldsOfSinglesAreEven(t *testing.T) {
	for _, n := range []int{100, 103, 1000} {
		family := make([]int, n)
		for i := range family {
			family[i] = i
		}
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 10, Inner: 5, Repeats: 2})
		if err != nil {
			t.Fatal(err)
		}
		for r, p := range folds.Repeats {
			even := func(what string, fold []int, count int) {
				size := make([]int, count)
				for _, f := range fold {
					if f >= 0 {
						size[f]++
					}
				}
				if slices.Max(size)-slices.Min(size) > 1 {
					t.Errorf("n = %d, repeat %d: %s %v", n, r, what, size)
				}
			}
			even("outer folds", p.Outer, 10)
			even("cells", p.Cell, 5)
		}
		if n == 100 && slices.Equal(folds.Repeats[0].Outer, folds.Repeats[1].Outer) {
			t.Error("both repeats are the same partition")
		}
	}
}

func TestBalancedFoldsAreNamedByTheirStream(t *testing.T) {
	family := make([]int, 60)
	for i := range family {
		family[i] = i / 2
	}
	draw := func(seed uint64, purpose string, repeats int) *crossval.Folds {
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 5, Inner: 3, Repeats: repeats, Seed: seed, Purpose: purpose})
		if err != nil {
			t.Fatal(err)
		}
		return folds
	}
	base := draw(1, "", 3)
	if !slices.Equal(base.Repeats[2].Cell, draw(1, "folds", 7).Repeats[2].Cell) {
		t.Error("the third of three repeats is not the third of seven")
	}
	if slices.Equal(base.Repeats[0].Outer, draw(2, "", 1).Repeats[0].Outer) {
		t.Error("another seed gives the same folds")
	}
	if slices.Equal(base.Repeats[0].Outer, draw(1, "curve", 1).Repeats[0].Outer) {
		t.Error("another purpose gives the same folds")
	}
}

// Every pair of families of one size comes into one fold equally often: 12
// pairs in 4 folds of 3 families share a fold with probability 2/11.
func TestBalancedFoldsMeetEquallyOften(t *testing.T) {
	family := make([]int, 24)
	for i := range family {
		family[i] = i / 2
	}
	const repeats = 3000
	folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 4, Inner: 2, Repeats: repeats, Seed: 5})
	if err != nil {
		t.Fatal(err)
	}
	const mean = repeats * 2. / 11
	chi2 := 0.0
	for f := range 12 {
		for g := range f {
			met := 0.0
			for _, p := range folds.Repeats {
				if p.Outer[2*f] == p.Outer[2*g] {
					met++
				}
			}
			chi2 += (met - mean) * (met - mean) / (mean * 9 / 11)
		}
	}
	// Each family meets exactly two others: 66 counts under 12 constraints, by
	// symmetry 66/54 times a chi-square with 54 degrees of freedom, whose
	// .9999 quantile is 101.42.
	if chi2*54/66 > 101.42 {
		t.Errorf("chi-square %.1f", chi2)
	}
}

func TestLevelsStayInEveryTrainingSet(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 12, 40)
		site := rapid.SliceOfN(rapid.IntRange(0, 3), len(family), len(family)).Draw(t, "site")
		opt := crossval.FoldOptions{Outer: 5, Inner: 3, Seed: rapid.Uint64().Draw(t, "seed"), Levels: [][]int{site}}
		folds, err := crossval.BalancedFolds(family, opt)
		var missing *crossval.LevelError
		if errors.As(err, &missing) {
			holders := make(map[int]bool)
			for _, i := range missing.People {
				if site[i] != missing.Level {
					t.Fatalf("person %d does not have level %d", i, missing.Level)
				}
				holders[family[i]] = true
			}
			if missing.Column != 0 || missing.Families != len(holders) || missing.Families >= 3 && missing.Tries != 100 {
				t.Fatalf("%+v", missing)
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		checkFolds(t, folds, family)
		levels := make(map[int]bool)
		for _, code := range site {
			levels[code] = true
		}
		for _, p := range folds.Repeats {
			for o := range p.OuterCount {
				for inner := range p.InnerCount[o] {
					seen := make(map[int]bool)
					for i, f := range p.Inner[o] {
						if f >= 0 && f != inner {
							seen[site[i]] = true
						}
					}
					if len(seen) != len(levels) {
						t.Fatalf("outer %d, inner %d trains on levels %v of %v", o, inner, seen, levels)
					}
				}
			}
		}
	})
}

// Three families hold the rare level. A draw without the demand breaks it in
// some seed; with the demand none does.
func TestRareLevelIsRedrawn(t *testing.T) {
	family := make([]int, 40)
	site := make([]int, 40)
	for i := range family {
		family[i] = i
	}
	site[3], site[17], site[30] = 9, 9, 9
	broken := 0
	for seed := range uint64(30) {
		opt := crossval.FoldOptions{Outer: 5, Inner: 4, Seed: seed}
		free, err := crossval.BalancedFolds(family, opt)
		if err != nil {
			t.Fatal(err)
		}
		opt.Levels = [][]int{make([]int, 40), site}
		kept, err := crossval.BalancedFolds(family, opt)
		if err != nil {
			t.Fatal(err)
		}
		apart := func(p crossval.Repeat) bool {
			distinct := func(v []int) bool { return v[3] != v[17] && v[3] != v[30] && v[17] != v[30] }
			return distinct(p.Outer) && distinct(p.Cell)
		}
		if !apart(free.Repeats[0]) {
			broken++
		} else if !slices.Equal(free.Repeats[0].Cell, kept.Repeats[0].Cell) {
			t.Errorf("seed %d: a draw that keeps the level was drawn again", seed)
		}
		if !apart(kept.Repeats[0]) {
			t.Errorf("seed %d: the level is missing from a training set", seed)
		}
	}
	if broken == 0 {
		t.Error("no seed tests the redraw")
	}
}

func TestLevelThatCannotBeKept(t *testing.T) {
	family := []int{5, 5, 6, 6, 7, 8, 9, 10, 11, 12}
	site := []int{1, 1, 1, 0, 0, 0, 0, 0, 0, 0}
	_, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 3, Inner: 2, Levels: [][]int{site}})
	var missing *crossval.LevelError
	if !errors.As(err, &missing) || missing.Column != 0 || missing.Level != 1 || missing.Families != 2 || !slices.Equal(missing.People, []int{0, 1, 2}) || missing.Tries != 0 {
		t.Fatalf("got %v", err)
	}
	if want := "crossval: repeat 0: level 1 of column 0 (3 people in 2 families) cannot be kept in every training set"; err.Error() != want {
		t.Errorf("got %q", err)
	}

	// Three families in two outer folds: some two of them share one, always.
	site = []int{1, 1, 1, 1, 1, 0, 0, 0, 0, 0}
	_, err = crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Levels: [][]int{site}})
	if !errors.As(err, &missing) || missing.Tries != 100 || missing.Families != 3 || !strings.HasSuffix(err.Error(), " cannot be kept in every training set in 100 draws") {
		t.Fatalf("got %v", err)
	}

	// Two families for three folds.
	class := []int{1, 1, 1, 0, 0, 0, 0, 0, 0, 0}
	_, err = crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 3, Inner: 2, Strata: class})
	if !errors.As(err, &missing) || missing.Column != -1 || err.Error() != "crossval: repeat 0: stratum 1 (3 people in 2 families) cannot be kept in every outer fold" {
		t.Fatalf("got %v", err)
	}
}

func TestStrataAreBalanced(t *testing.T) {
	for _, c := range []struct{ ones, zeros, outer, inner int }{
		{20, 180, 10, 5}, {23, 180, 10, 5}, {6, 6, 5, 2}, {12, 12, 2, 5}, {40, 40, 2, 10},
	} {
		n := c.ones + c.zeros
		family := make([]int, n)
		class := make([]int, n)
		for i := range family {
			family[i] = i
			if i < c.ones {
				class[i] = 1
			}
		}
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: c.outer, Inner: c.inner, Repeats: 10, Seed: 1, Strata: class})
		if err != nil {
			t.Fatal(err)
		}
		if err := folds.Validate(family); err != nil {
			t.Fatal(err)
		}
		even := func(what string, size []int, most int) {
			if spread := slices.Max(size) - slices.Min(size); spread > most {
				t.Errorf("%d ones and %d zeros: %s %v", c.ones, c.zeros, what, size)
			}
		}
		for _, p := range folds.Repeats {
			in, people := make([]int, c.outer), make([]int, c.outer)
			inCell, allCell := make([][]int, c.outer), make([][]int, c.outer)
			cell := make([]int, c.inner)
			for o := range inCell {
				inCell[o], allCell[o] = make([]int, c.inner), make([]int, c.inner)
			}
			for i, o := range p.Outer {
				in[o] += class[i]
				people[o]++
				inCell[o][p.Cell[i]] += class[i]
				allCell[o][p.Cell[i]]++
				cell[p.Cell[i]] += class[i]
			}
			even("ones of outer folds", in, 1)
			even("people of outer folds", people, 1)
			for o := range inCell {
				even("ones of cells in a fold", inCell[o], 1)
				even("people of cells in a fold", allCell[o], 1)
			}
			even("ones of cells over all folds", cell, 2)
		}
	}
}

// A class whose people are nearly all in one family is missing from the fold
// of the largest family: it would take a family that fits better elsewhere.
func TestStratumMissingFromAFold(t *testing.T) {
	var family, class []int
	add := func(label, zeros, ones int) {
		for i := range zeros + ones {
			family = append(family, label)
			class = append(class, min(1, max(0, i-zeros+1)))
		}
	}
	add(1, 60, 0)
	add(2, 0, 38)
	add(3, 10, 1)
	add(4, 10, 1)
	add(5, 1, 0)
	add(6, 1, 0)
	_, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Strata: class})
	var missing *crossval.LevelError
	if !errors.As(err, &missing) || missing.Column != -1 || missing.Level != 1 || missing.Families != 3 || missing.Tries != 100 {
		t.Errorf("got %v", err)
	}
}

// Families of both classes and unequal size: every fold has both.
func TestStrataInEveryOuterFold(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 10, 30)
		class := rapid.SliceOfN(rapid.IntRange(0, 1), len(family), len(family)).Draw(t, "class")
		folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 3, Inner: 2, Seed: 2, Strata: class})
		var missing *crossval.LevelError
		if errors.As(err, &missing) {
			if missing.Column != -1 {
				t.Fatal(err)
			}
			return
		}
		if err != nil {
			t.Fatal(err)
		}
		checkFolds(t, folds, family)
		all := slices.Compact(slices.Sorted(slices.Values(class)))
		for o := range 3 {
			var here []int
			for i, f := range folds.Repeats[0].Outer {
				if f == o {
					here = append(here, class[i])
				}
			}
			if slices.Sort(here); !slices.Equal(slices.Compact(here), all) {
				t.Fatalf("outer fold %d holds classes %v of %v", o, here, all)
			}
		}
	})
}

func TestLeaveOneFamilyOut(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		family := drawFamilies(t, 4, 25)
		size := sizesOf(family)
		inner := rapid.IntRange(2, min(len(size)/2, 5)).Draw(t, "inner")
		folds, err := crossval.LeaveOneFamilyOut(family, crossval.FoldOptions{Inner: inner, Seed: rapid.Uint64().Draw(t, "seed")})
		if err != nil {
			t.Fatal(err)
		}
		checkFolds(t, folds, family)
		p := folds.Repeats[0]
		if !folds.PerFamily || p.OuterCount != len(size) || len(folds.Repeats) != 1 {
			t.Fatalf("PerFamily %v, %d folds of %d families, %d repeats", folds.PerFamily, p.OuterCount, len(size), len(folds.Repeats))
		}
		next := 0
		for _, o := range p.Outer {
			if o > next {
				t.Fatal("families are not numbered by first appearance")
			}
			next = max(next, o+1)
		}
	})
}

func TestTooFewFamilies(t *testing.T) {
	family := []int{1, 1, 2, 2, 3, 4, 5}
	for _, c := range []struct {
		name string
		got  error
		want crossval.CountError
		text string
	}{
		{"outer", second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 6, Inner: 2})),
			crossval.CountError{Families: 5, Outer: 6, Inner: 2, Fold: -1}, "crossval: 6 outer folds asked of 5 families"},
		{"inner", second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 5, Inner: 3})),
			crossval.CountError{Families: 5, Outer: 5, Inner: 3, Fold: -1}, "crossval: 3 inner folds need 6 families or more, there are 5"},
		{"one family out", second(crossval.LeaveOneFamilyOut(family, crossval.FoldOptions{Inner: 3})),
			crossval.CountError{Families: 5, Inner: 3, Fold: -1}, "crossval: 3 inner folds need 6 families or more, there are 5"},
		{"given", second(crossval.GivenFolds(family, []crossval.Given{{Outer: []int{0, 0, 0, 0, 0, 0, 1}}}, crossval.FoldOptions{Inner: 2})),
			crossval.CountError{Families: 5, Inner: 2, Fold: 0, Training: 1}, "crossval: with outer fold 0 held out 1 families are left, too few for 2 inner folds"},
	} {
		var got *crossval.CountError
		if !errors.As(c.got, &got) || *got != c.want || got.Error() != c.text {
			t.Errorf("%s: got %v", c.name, c.got)
		}
	}
}

func second(_ *crossval.Folds, err error) error { return err }

func TestOptionsThatMakeNoSense(t *testing.T) {
	family := []int{1, 2, 3, 4, 5, 6}
	short := []int{0, 1}
	for name, err := range map[string]error{
		"one outer fold":          second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 1, Inner: 2})),
		"one inner fold":          second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 1})),
		"repeats below 0":         second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Repeats: -1})),
		"nobody":                  second(crossval.BalancedFolds(nil, crossval.FoldOptions{Outer: 2, Inner: 2})),
		"short levels":            second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Levels: [][]int{short}})),
		"short strata":            second(crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Strata: short})),
		"left out with Outer":     second(crossval.LeaveOneFamilyOut(family, crossval.FoldOptions{Outer: 2, Inner: 2})),
		"left out with strata":    second(crossval.LeaveOneFamilyOut(family, crossval.FoldOptions{Inner: 2, Strata: family})),
		"left out of nobody":      second(crossval.LeaveOneFamilyOut(nil, crossval.FoldOptions{Inner: 2})),
		"left out with one inner": second(crossval.LeaveOneFamilyOut(family, crossval.FoldOptions{Inner: 1})),
		"given with Outer":        second(crossval.GivenFolds(family, []crossval.Given{{Outer: family}}, crossval.FoldOptions{Outer: 2, Inner: 2})),
		"given without inner":     second(crossval.GivenFolds(family, []crossval.Given{{Outer: []int{0, 0, 0, 1, 1, 1}}}, crossval.FoldOptions{})),
		"no table":                second(crossval.GivenFolds(family, nil, crossval.FoldOptions{Inner: 2})),
		"short table":             second(crossval.GivenFolds(family, []crossval.Given{{Outer: short}}, crossval.FoldOptions{Inner: 2})),
		"left out, too much memory": second(crossval.LeaveOneFamilyOut(slices.Collect(func(yield func(int) bool) {
			for i := range 16385 {
				if !yield(i) {
					return
				}
			}
		}), crossval.FoldOptions{Inner: 2})),
	} {
		if err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// Five repeats of ten folds: nine people trained on for each held out.
func TestTestOverTrain(t *testing.T) {
	family := make([]int, 57)
	for i := range family {
		family[i] = i
	}
	folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 10, Inner: 2, Repeats: 5})
	if err != nil {
		t.Fatal(err)
	}
	if got := folds.TestOverTrain(); math.Abs(got-1./9) > 1e-15 {
		t.Errorf("got %v, want 1/9", got)
	}
	if folds.People() != 57 || folds.OuterFolds() != 50 {
		t.Errorf("%d people in %d folds", folds.People(), folds.OuterFolds())
	}
	if got := (&crossval.Folds{}).People(); got != 0 {
		t.Errorf("%d people in no folds", got)
	}
}

// Four pairs of twins and two families of one in two outer folds: pairs stay
// together, and inner folds are made of the people who are trained on.
func ExampleBalancedFolds() {
	family := []int{1, 1, 2, 2, 3, 3, 4, 4, 5, 6}
	folds, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 2, Inner: 2, Seed: 20260112})
	if err != nil {
		fmt.Println(err)
		return
	}
	p := folds.Repeats[0]
	fmt.Println("outer folds:      ", p.Outer)
	fmt.Println("inner, 0 held out:", p.Inner[0])
	fmt.Println("inner, 1 held out:", p.Inner[1])
	// Output:
	// outer folds:       [1 1 0 0 0 0 1 1 1 0]
	// inner, 0 held out: [0 0 -1 -1 -1 -1 1 1 1 -1]
	// inner, 1 held out: [-1 -1 0 0 1 1 -1 -1 -1 0]
}

func BenchmarkBalancedFolds(b *testing.B) {
	for _, families := range []int{500, 5000, 50000} {
		var family []int
		for f := range families {
			for range 1 + f%4 {
				family = append(family, f)
			}
		}
		b.Run(fmt.Sprint(families), func(b *testing.B) {
			for b.Loop() {
				if _, err := crossval.BalancedFolds(family, crossval.FoldOptions{Outer: 10, Inner: 5, Repeats: 5}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
