package crossval_test

import (
	"fmt"
	"math"
	"testing"

	"kindwell/crossval"
)

// m = 99 values of which b reach the observed 1: p = (b+1)/(m+1) is .01, .02
// and .06 for b = 0, 1 and 5, and b = 0 of 999 is .001 (Phipson & Smyth 2010).
func TestPValueCounts(t *testing.T) {
	for _, c := range []struct {
		b, m int
		want float64
	}{{0, 99, .01}, {1, 99, .02}, {5, 99, .06}, {0, 999, .001}, {99, 99, 1}} {
		null := make([]float64, c.m)
		for i := range c.b {
			null[i] = 1.5
		}
		if got := crossval.PValue(1, null, crossval.Upper); got != c.want {
			t.Errorf("b = %d of %d: p = %v, want %v", c.b, c.m, got, c.want)
		}
	}
}

func TestPValueTails(t *testing.T) {
	null := []float64{-3, -1, -.5, 0, .5, 1, 2}
	for _, c := range []struct {
		observed float64
		tail     crossval.Tail
		want     float64
	}{
		{1, crossval.Upper, 3. / 8},
		{1, crossval.Lower, 7. / 8},
		{1, crossval.TwoSided, 5. / 8},
		{-1, crossval.Upper, 7. / 8},
		{-1, crossval.Lower, 3. / 8},
		{-1, crossval.TwoSided, 5. / 8},
		{math.Inf(1), crossval.Upper, 1. / 8},
		{math.Inf(-1), crossval.Upper, 1},
	} {
		if got := crossval.PValue(c.observed, null, c.tail); got != c.want {
			t.Errorf("%v %v: p = %v, want %v", c.observed, c.tail, got, c.want)
		}
	}
}

// .1+.2 is one rounding above .3: the same statistic summed in two orders.
func TestPValueTies(t *testing.T) {
	a, b := .1, .2
	for _, tail := range []crossval.Tail{crossval.Upper, crossval.Lower, crossval.TwoSided} {
		for _, sign := range []float64{1, -1} {
			if p := crossval.PValue(sign*(a+b), []float64{sign * .3}, tail); p != 1 {
				t.Errorf("%v, sign %v: a tie is not counted, p = %v", tail, sign, p)
			}
		}
	}
	if p := crossval.PValue(1, []float64{1 - 1e-11}, crossval.Upper); p != .5 {
		t.Errorf("a value 1e-11 below counts as a tie, p = %v", p)
	}
}

func TestPValueNaN(t *testing.T) {
	nan := math.NaN()
	if p := crossval.PValue(1, nil, crossval.Upper); !math.IsNaN(p) {
		t.Errorf("no arrangement: p = %v", p)
	}
	if p := crossval.PValue(nan, []float64{1}, crossval.Upper); !math.IsNaN(p) {
		t.Errorf("no statistic: p = %v", p)
	}
	for _, tail := range []crossval.Tail{crossval.Upper, crossval.Lower, crossval.TwoSided} {
		for _, observed := range []float64{1e9, -1e9, 0} {
			if p := crossval.PValue(observed, []float64{nan, nan, nan}, tail); p != 1 {
				t.Errorf("%v: NaN in null does not count, p = %v", tail, p)
			}
		}
	}
}

func TestTailNames(t *testing.T) {
	if got := fmt.Sprint(crossval.Upper, crossval.Lower, crossval.TwoSided); got != "upper lower two_sided" {
		t.Error(got)
	}
	mustPanic(t, func() { crossval.PValue(1, []float64{1}, crossval.Tail(7)) })
	mustPanic(t, func() { _ = crossval.Tail(7).String() })
}

// Two of nine arrangements reach the observed correlation, and so does the
// observed arrangement itself.
func ExamplePValue() {
	null := []float64{-.31, .02, .27, .11, -.08, .44, -.19, .25, .05}
	fmt.Println(crossval.PValue(.26, null, crossval.Upper))
	// Output: 0.3
}
