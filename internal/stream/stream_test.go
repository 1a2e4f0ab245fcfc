package stream

import (
	"math"
	"testing"
)

func TestSameNameSameNumbers(t *testing.T) {
	a, b := New(7, "folds", 3), New(7, "folds", 3)
	for i := range 100 {
		if x, y := a.Uint64(), b.Uint64(); x != y {
			t.Fatalf("draw %d differs: %d and %d", i, x, y)
		}
	}
}

func TestNamesDoNotCollide(t *testing.T) {
	streams := map[string]*Stream{
		"base":          New(7, "folds", 3),
		"seed":          New(8, "folds", 3),
		"purpose":       New(7, "fold", 3),
		"index":         New(7, "folds", 4),
		"no index":      New(7, "folds"),
		"more indices":  New(7, "folds", 3, 0),
		"index in name": New(7, "folds\x03\x00\x00\x00\x00\x00\x00\x00"),
	}
	seen := map[uint64]string{}
	for name, s := range streams {
		v := s.Uint64()
		if other, ok := seen[v]; ok {
			t.Errorf("%s and %s start alike", name, other)
		}
		seen[v] = name
	}
}

// The first draws of one stream, kept so that a change of the key or of the
// rules that make numbers from bits is noticed: it would change every result.
func TestNumbersDoNotMove(t *testing.T) {
	s := New(20260112, "arrangements", 731)
	perm := make([]int, 8)
	s.PermTo(perm)
	got := [3]float64{float64(perm[0]*10 + perm[7]), float64(s.IntN(1000)), math.Floor(s.Float64() * 1e6)}
	want := [3]float64{73, 396, 751054}
	if got != want {
		t.Errorf("got %v, want %v", got, want)
	}
}

func TestIntNIsUniform(t *testing.T) {
	const n, draws = 6, 60000
	counts := [n]int{}
	s := New(1, "uniform")
	for range draws {
		counts[s.IntN(n)]++
	}
	chi2 := 0.0
	for _, c := range counts {
		d := float64(c) - draws/n
		chi2 += d * d / (draws / n)
	}
	// 20.515 is the .999 quantile of chi-square with 5 degrees of freedom.
	if chi2 > 20.515 {
		t.Errorf("chi-square %v with counts %v", chi2, counts)
	}
}

func TestNormMoments(t *testing.T) {
	const n = 200000
	s := New(1, "normal")
	var m1, m2, m4 float64
	for range n {
		x := s.Norm()
		m1 += x
		m2 += x * x
		m4 += x * x * x * x
	}
	// Four standard errors: sd of the mean, variance and fourth moment of a
	// standard normal sample are 1, sqrt(2) and sqrt(96) over sqrt(n).
	root := 4 / math.Sqrt(n)
	if math.Abs(m1/n) > root || math.Abs(m2/n-1) > root*math.Sqrt2 || math.Abs(m4/n-3) > root*math.Sqrt(96) {
		t.Errorf("moments %v %v %v", m1/n, m2/n, m4/n)
	}
}

func TestPermToIsAnArrangement(t *testing.T) {
	dst := make([]int, 50)
	New(3, "perm").PermTo(dst)
	seen := make([]bool, 50)
	for _, v := range dst {
		if seen[v] {
			t.Fatalf("%d comes twice", v)
		}
		seen[v] = true
	}
}
