package crossval_test

import (
	"fmt"
	"slices"
	"testing"

	"kindwell/crossval"
	"kindwell/internal/stream"
)

// All arrangements come equally often: chi-square under its .9999 quantile
// (R: qchisq(.9999, M - 1)).
func TestDrawsAreUniform(t *testing.T) {
	const mean = 400
	for _, c := range []struct {
		name     string
		build    func(*cohort)
		count    int
		quantile float64
	}{
		{"two families of an MZ pair and a sibling", func(c *cohort) {
			c.add(3, pairAnd(mz))
			c.add(3, pairAnd(mz))
		}, 8, 29.88},
		{"three pairs of twins", func(c *cohort) {
			for range 3 {
				c.add(2, all(mz))
			}
		}, 48, 91.84},
		{"four siblings", func(c *cohort) { c.add(4, all(sibling)) }, 24, 57.07},
		{"three MZ pairs in one family", func(c *cohort) {
			c.add(6, func(i, j int) (int, int) {
				if i/2 == j/2 {
					return mz, mz
				}
				return sibling, sibling
			})
		}, 48, 91.84},
		{"two rings of five", func(c *cohort) {
			c.add(5, ring(5, sibling, sibling))
			c.add(5, ring(5, sibling, sibling))
		}, 200, 281.87},
	} {
		t.Run(c.name, func(t *testing.T) {
			var made cohort
			c.build(&made)
			e := made.exchange(t)
			if got := e.Count().Int64(); got != int64(c.count) {
				t.Fatalf("%d arrangements, want %d", got, c.count)
			}
			counts := make(map[string]float64)
			to := make([]int, made.people)
			s := stream.New(11, "test uniform")
			for range mean * c.count {
				e.DrawTo(to, s)
				counts[fmt.Sprint(to)]++
			}
			chi2 := float64(c.count-len(counts)) * mean
			for _, n := range counts {
				chi2 += (n - mean) * (n - mean) / mean
			}
			if len(counts) != c.count || chi2 > c.quantile {
				t.Errorf("%d of %d arrangements came, chi-square %.1f", len(counts), c.count, chi2)
			}
		})
	}
}

func TestSeriesIsTheSameInAnyOrder(t *testing.T) {
	var c cohort
	for range 20 {
		c.add(2, all(mz))
		c.add(3, pairAnd(dz))
	}
	e := c.exchange(t)
	series, err := e.Series(50, 3, "arrangements")
	if err != nil || series.Exhaustive() || series.Len() != 50 {
		t.Fatalf("%v, %d arrangements", err, series.Len())
	}
	inOrder := make([][]int, 50)
	for i := range inOrder {
		inOrder[i] = make([]int, c.people)
		series.At(i, inOrder[i])
	}
	longer, err := c.exchange(t).Series(99, 3, "arrangements")
	if err != nil {
		t.Fatal(err)
	}
	done := make(chan error)
	for w := range 4 {
		go func() {
			to := make([]int, c.people)
			for i := 49 - w; i >= 0; i -= 2 {
				if longer.At(i, to); !slices.Equal(to, inOrder[i]) {
					done <- fmt.Errorf("arrangement %d differs", i)
					return
				}
			}
			done <- nil
		}()
	}
	for range 4 {
		if err := <-done; err != nil {
			t.Error(err)
		}
	}
	// Arrangement i is what its stream draws.
	to := make([]int, c.people)
	e.DrawTo(to, stream.New(3, "arrangements", 17))
	if !slices.Equal(to, inOrder[17]) {
		t.Error("arrangement 17 is not that of stream 17")
	}
	if slices.Equal(inOrder[0], inOrder[1]) {
		t.Error("two arrangements are one")
	}
}

// At the number of arrangements the series turns from random to all.
func TestSeriesTurnsExhaustive(t *testing.T) {
	var c cohort
	c.add(4, all(sibling))
	e := c.exchange(t)
	for asked, want := range map[int]int{23: 23, 24: 23, 25: 23, 1000: 23, 5: 5} {
		series, err := e.Series(asked, 1, "test")
		if err != nil {
			t.Fatal(err)
		}
		if series.Len() != want || series.Exhaustive() != (asked >= 24) {
			t.Errorf("%d asked: %d, exhaustive %v", asked, series.Len(), series.Exhaustive())
		}
	}
}

func TestWrongCalls(t *testing.T) {
	var c cohort
	c.add(4, all(sibling))
	e := c.exchange(t)
	series, err := e.Series(3, 1, "test")
	if err != nil {
		t.Fatal(err)
	}
	to := make([]int, 4)
	mustPanic(t, func() { series.At(-1, to) })
	mustPanic(t, func() { series.At(3, to) })
	mustPanic(t, func() { series.At(0, to[:3]) })
	mustPanic(t, func() { e.DrawTo(make([]int, 5), stream.New(1, "test")) })
}

// Two sisters and a brother, whom a mark keeps apart: of the arrangements of
// three siblings two remain, the one observed and one other.
func ExampleExchange_Series() {
	family := crossval.Family{
		People:   []int{0, 1, 2},
		Relation: []int{0, 1, 1, 1, 0, 1, 1, 1, 0},
		Mark:     []int{1, 1, 2},
	}
	e, err := crossval.NewExchange(3, []crossval.Family{family})
	if err != nil {
		fmt.Println(err)
		return
	}
	series, err := e.Series(1000, 20260112, "arrangements")
	if err != nil {
		fmt.Println(err)
		return
	}
	to := make([]int, 3)
	for i := range series.Len() {
		series.At(i, to)
		fmt.Println(to)
	}
	// Output: [1 0 2]
}
