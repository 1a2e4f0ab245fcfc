package crossval_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"kindwell/crossval"
)

// Reference: R, options(digits = 17),
//
//	p.adjust(c(.02, NA, .5, .001, .02, 1, .04, .001, NA, .9, .013, .3), "BH")
func TestBenjaminiHochbergReference(t *testing.T) {
	nan := math.NaN()
	p := []float64{.02, nan, .5, .001, .02, 1, .04, .001, nan, .9, .013, .3}
	before := slices.Clone(p)
	want := []float64{
		0.040000000000000001, nan, 0.625, 0.0050000000000000001, 0.040000000000000001, 1,
		0.066666666666666666, 0.0050000000000000001, nan, 1, 0.040000000000000001, 0.42857142857142855,
	}
	got := crossval.BenjaminiHochberg(p)
	for i := range want {
		if !same(got[i], want[i]) && math.Abs(got[i]-want[i]) > 1e-15 {
			t.Errorf("q[%d] = %.17g, want %.17g", i, got[i], want[i])
		}
		if !same(p[i], before[i]) {
			t.Errorf("p[%d] was changed", i)
		}
	}
	if got := crossval.BenjaminiHochberg([]float64{nan}); len(got) != 1 || !math.IsNaN(got[0]) {
		t.Errorf("only NaN: %v", got)
	}
}

// q by its definition, for every value apart.
func TestBenjaminiHochbergDefinition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := rapid.SliceOfN(rapid.Float64Range(0, 1), 1, 30).Draw(t, "p")
		got := crossval.BenjaminiHochberg(p)
		for i := range p {
			want := 1.0
			for _, level := range p {
				if level < p[i] {
					continue
				}
				found := 0 // tests called findings at this p
				for _, other := range p {
					if other <= level {
						found++
					}
				}
				want = min(want, float64(len(p))*level/float64(found))
			}
			if math.Abs(got[i]-want) > 1e-14 {
				t.Fatalf("q[%d] = %v, want %v for %v", i, got[i], want, p)
			}
		}
	})
}

func TestAcrossGroups(t *testing.T) {
	if got := crossval.AcrossGroups(.02, 3); got != .06 {
		t.Errorf("got %v, want .06", got)
	}
	if got := crossval.AcrossGroups(.4, 3); got != 1 {
		t.Errorf("got %v, want 1", got)
	}
	if got := crossval.AcrossGroups(math.NaN(), 3); !math.IsNaN(got) {
		t.Errorf("got %v, want NaN", got)
	}
	mustPanic(t, func() { crossval.AcrossGroups(.4, 0) })
}

// singleStep counts the largest statistic of every arrangement anew for every
// test.
func singleStep(observed []float64, null [][]float64, extremity func(float64) float64) []float64 {
	p := make([]float64, len(observed))
	for t := range observed {
		count := 1
		for i := range null[0] {
			largest := math.Inf(-1)
			for u := range null {
				largest = math.Max(largest, extremity(null[u][i]))
			}
			if largest >= extremity(observed[t]) {
				count++
			}
		}
		p[t] = float64(count) / float64(len(null[0])+1)
	}
	return p
}

var extremities = map[crossval.Tail]func(float64) float64{
	crossval.Upper:    func(v float64) float64 { return v },
	crossval.Lower:    func(v float64) float64 { return -v },
	crossval.TwoSided: math.Abs,
}

// drawTests draws statistics on a coarse grid, so that ties occur.
func drawTests(t *rapid.T) (observed []float64, null [][]float64) {
	tests := rapid.IntRange(1, 6).Draw(t, "tests")
	arrangements := rapid.IntRange(1, 12).Draw(t, "arrangements")
	grid := rapid.Custom(func(t *rapid.T) float64 { return float64(rapid.IntRange(-8, 8).Draw(t, "eighths")) / 8 })
	observed = rapid.SliceOfN(grid, tests, tests).Draw(t, "observed")
	null = rapid.SliceOfN(rapid.SliceOfN(grid, arrangements, arrangements), tests, tests).Draw(t, "null")
	return observed, null
}

func TestLargestStatisticIsSingleStep(t *testing.T) {
	for tail, extremity := range extremities {
		rapid.Check(t, func(t *rapid.T) {
			observed, null := drawTests(t)
			got := crossval.LargestStatistic(observed, null, tail)
			if want := singleStep(observed, null, extremity); !slices.Equal(got, want) {
				t.Fatalf("%v: got %v, want %v", tail, got, want)
			}
			for i := range got {
				if alone := crossval.PValue(observed[i], null[i], tail); got[i] < alone {
					t.Fatalf("p over all tests %v is below p of one %v", got[i], alone)
				}
			}
		})
	}
}

// One test alone has the p of PValue, with and without scale.
func TestLargestStatisticOfOneTest(t *testing.T) {
	for tail := range extremities {
		rapid.Check(t, func(t *rapid.T) {
			observed, null := drawTests(t)
			want := crossval.PValue(observed[0], null[0], tail)
			if got := crossval.LargestStatistic(observed[:1], null[:1], tail); got[0] != want {
				t.Fatalf("%v: got %v, want %v", tail, got[0], want)
			}
			if got := crossval.LargestStandardized(observed[:1], null[:1], tail); tail != crossval.TwoSided && got[0] != want {
				t.Fatalf("%v, standardised: got %v, want %v", tail, got[0], want)
			}
		})
	}
}

func TestLargestStandardizedIsSingleStepOfStandardScores(t *testing.T) {
	for tail, extremity := range extremities {
		rapid.Check(t, func(t *rapid.T) {
			observed, null := drawTests(t)
			var z []float64
			var zNull [][]float64
			var at []int
			want := make([]float64, len(observed))
			for u := range observed {
				values := append([]float64{observed[u]}, null[u]...)
				if slices.Min(values) == slices.Max(values) {
					want[u] = 1
					continue
				}
				n := float64(len(values))
				sum, squares := 0.0, 0.0
				for _, v := range values {
					sum += v
					squares += v * v
				}
				sd := math.Sqrt(squares/n - sum/n*sum/n)
				for i, v := range values {
					// On a grid, so that equal scores of different tests tie.
					values[i] = math.Round((v-sum/n)/sd*1e9) / 1e9
				}
				z, zNull, at = append(z, values[0]), append(zNull, values[1:]), append(at, u)
			}
			if len(z) > 0 {
				for k, p := range singleStep(z, zNull, extremity) {
					want[at[k]] = p
				}
			}
			if got := crossval.LargestStandardized(observed, null, tail); !slices.Equal(got, want) {
				t.Fatalf("%v: got %v, want %v", tail, got, want)
			}
		})
	}
}

// A change of unit or origin of one test changes nothing when standardised,
// and decides everything when not.
func TestLargestStandardizedForgetsUnits(t *testing.T) {
	observed := []float64{2, 500}
	null := [][]float64{{-1, 0, 1, .5}, {100, 520, 310, 250}}
	got := crossval.LargestStandardized(observed, null, crossval.Upper)
	scaled := crossval.LargestStandardized([]float64{2, .5}, [][]float64{{-1, 0, 1, .5}, {.1, .52, .31, .25}}, crossval.Upper)
	if !slices.Equal(got, scaled) || got[0] != .2 || got[1] != .4 {
		t.Errorf("got %v and %v, want [.2 .4]", got, scaled)
	}
	if plain := crossval.LargestStatistic(observed, null, crossval.Upper); plain[0] != 1 {
		t.Errorf("without scale the first test is hidden, p = %v", plain[0])
	}
}

func TestLargestStatisticDegenerate(t *testing.T) {
	nan := math.NaN()
	check := func(name string, got, want []float64) {
		t.Helper()
		if !slices.EqualFunc(got, want, same) {
			t.Errorf("%s: got %v, want %v", name, got, want)
		}
	}
	up := crossval.Upper
	check("no test", crossval.LargestStatistic(nil, nil, up), []float64{})
	check("no arrangement", crossval.LargestStatistic([]float64{1}, [][]float64{{}}, up), []float64{nan})
	check("no arrangement, standardised", crossval.LargestStandardized([]float64{1}, [][]float64{{}}, up), []float64{nan})
	check("observed NaN", crossval.LargestStatistic([]float64{nan, 1}, [][]float64{{9}, {0}}, up), []float64{nan, .5})
	check("NaN in null", crossval.LargestStatistic([]float64{5, 1}, [][]float64{{nan}, {0}}, up), []float64{1, 1})
	check("constant, standardised", crossval.LargestStandardized([]float64{3, 1}, [][]float64{{3}, {0}}, up), []float64{1, .5})
	check("NaN in null, standardised", crossval.LargestStandardized([]float64{5, 1}, [][]float64{{nan}, {0}}, up), []float64{nan, .5})
	check("observed NaN, standardised", crossval.LargestStandardized([]float64{nan, 1}, [][]float64{{3}, {0}}, up), []float64{nan, .5})
	mustPanic(t, func() { crossval.LargestStatistic([]float64{1}, nil, up) })
	mustPanic(t, func() { crossval.LargestStatistic([]float64{1, 2}, [][]float64{{1}, {1, 2}}, up) })
	mustPanic(t, func() { crossval.LargestStandardized([]float64{1, 2}, [][]float64{{1}, {1, 2}}, up) })
}

// Two traits under the same four arrangements: the second is beyond the
// largest of both in all of them, the first only beyond its own.
func ExampleLargestStatistic() {
	observed := []float64{.30, .55}
	null := [][]float64{
		{.10, -.20, .15, .05},
		{.40, .10, -.30, .45},
	}
	fmt.Println(crossval.LargestStatistic(observed, null, crossval.Upper))
	// Output: [0.6 0.2]
}

func ExampleBenjaminiHochberg() {
	fmt.Println(crossval.BenjaminiHochberg([]float64{.01, .30, .03, .02}))
	// Output: [0.04 0.3 0.04 0.04]
}
