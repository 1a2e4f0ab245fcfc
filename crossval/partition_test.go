package crossval

import "testing"

// A family of one of three As and one of thirty Bs, against a bin with an A
// and one with two Bs: 1/3^2 = .111 and 2/30^2 = .0022.
func TestCrowdingCountsSharesOfStrata(t *testing.T) {
	var family, stratum []int
	add := func(label, as, bs int) {
		for range as {
			family, stratum = append(family, label), append(stratum, 0)
		}
		for range bs {
			family, stratum = append(family, label), append(stratum, 1)
		}
	}
	add(1, 1, 1)
	add(2, 1, 0)
	add(3, 0, 2)
	add(4, 1, 27)
	b := newBins(newMakeup(newRoster(family), stratum, 2), 2)
	b.put(1, 0)
	b.put(2, 1)
	for bin, want := range []float64{1. / 9, 2. / 900} {
		if got := b.crowding(0, bin); got < want*(1-1e-15) || got > want*(1+1e-15) {
			t.Errorf("bin %d: %v, want %v", bin, got, want)
		}
	}
	b.put(3, 0)
	if got, want := b.crowding(0, 0), 2./9+27./900; got < want*(1-1e-15) || got > want*(1+1e-15) {
		t.Errorf("with a further family %v, want %v", got, want)
	}
}
