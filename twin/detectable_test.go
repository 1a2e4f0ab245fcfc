package twin

import (
	"math"
	"testing"
)

// Pairs in all (half of them MZ) for a power of .80 in the one-sided test at
// .05, from the closed form evaluated with R: non-centrality 6.1826 over that
// of a pair.
func TestDetectableA2(t *testing.T) {
	for _, c := range []struct{ a2, pairs float64 }{
		{.30, 939.3}, {.40, 465.7}, {.50, 251.7}, {.60, 140.4}, {.80, 40.8},
	} {
		half := int(math.Round(c.pairs / 2))
		if got := DetectableA2(half, half, .05, .80); math.Abs(got-c.a2) > .004 {
			t.Errorf("%v pairs: got %v, want %v", c.pairs, got, c.a2)
		}
	}
}

// 2000 pairs, half MZ, with correlations .50 and .35: fitting CE to the exact
// covariances gives 19.9335 (a common text-book set-up, Neale & Maes).
func TestPairNonCentrality(t *testing.T) {
	if got := pairNonCentrality(1000, 1000, .50, .35); math.Abs(got-19.9335) > 5e-5 {
		t.Errorf("got %v", got)
	}
}

func TestDetectableA2WithoutAnswer(t *testing.T) {
	if got := DetectableA2(0, 50, .05, .8); !math.IsNaN(got) {
		t.Errorf("no MZ pairs: got %v", got)
	}
	if got := DetectableA2(50, 0, .05, .8); !math.IsNaN(got) {
		t.Errorf("no DZ pairs: got %v", got)
	}
}

func TestSameInTwins(t *testing.T) {
	values := []float64{1, 1, 2, 2, 3, 4, math.NaN(), 5}
	pairs := [][2]int{{0, 1}, {2, 3}, {4, 5}, {6, 7}}
	if SameInTwins(values, pairs) {
		t.Error("two of three complete pairs are not 95 %")
	}
	if !SameInTwins(values, pairs[:2]) {
		t.Error("all pairs are equal")
	}
	if SameInTwins(values, pairs[3:]) {
		t.Error("no complete pair says nothing")
	}
}
