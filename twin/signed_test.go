package twin

import (
	"errors"
	"math"
	"testing"

	"kindwell/internal/stream"
)

// pairsAndOneFamily invents 100 identical and 100 fraternal pairs and one
// family of two parents and so many children, whose structure no other family
// has: with a2 = 0 and c2 = .3.
func pairsAndOneFamily(seed uint64, children int) (*tableKin, []float64) {
	draw := stream.New(seed, "pairs and one family")
	kin := &tableKin{}
	var y []float64
	const room = 1 << 20
	for n := range 200 {
		kin.add(n, room+2*n, room+2*n+1, n, n < 100, false)
		kin.add(n, room+2*n, room+2*n+1, n, n < 100, false)
		home := math.Sqrt(.3) * draw.Norm()
		y = append(y, home+math.Sqrt(.7)*draw.Norm(), home+math.Sqrt(.7)*draw.Norm())
	}
	mother := kin.add(200, -1, -1, -1, false, false)
	father := kin.add(200, -1, -1, -1, false, true)
	y = append(y, draw.Norm(), draw.Norm())
	home := math.Sqrt(.3) * draw.Norm()
	for range children {
		kin.add(200, mother, father, -1, false, false)
		y = append(y, home+math.Sqrt(.7)*draw.Norm())
	}
	return kin, y
}

// Without bounds the likelihood can rise for ever where one family's matrix goes
// singular and the mean takes what it no longer allows. Such heights are no
// maximum: where no bounded share is held at 0, the signed ones are the bounded
// ones, and the root of the test is small when the bounded ratio is.
func TestSignedIsTheBoundedMaximumInside(t *testing.T) {
	inside, edge := 0, 0
	for seed := range uint64(120) {
		kin, y := pairsAndOneFamily(seed, 6)
		s, err := NewSample(kin, upTo(len(y)), y, nil, nil)
		if err != nil {
			t.Fatal(err)
		}
		ce, err := s.Fit(ModelCE, FitOptions{})
		if err != nil {
			t.Fatal(err)
		}
		ace, err := s.Fit(ModelACE, FitOptions{})
		if err != nil {
			t.Fatal(err)
		}
		test, err := s.Test(ce, ace)
		if err != nil {
			t.Fatal(err)
		}
		if !ace.SignedConverged {
			edge++
			if test.Method != MixtureMethod || test.P != test.PMixture {
				t.Errorf("seed %d: without an unbounded maximum the test is %+v", seed, test)
			}
			if _, err := s.Interval(ace, SignedA, .95); !errors.As(err, new(*NotConvergedError)) {
				t.Errorf("seed %d: an interval of nothing: %v", seed, err)
			}
			continue
		}
		atBound := false
		for _, e := range ace.Components {
			atBound = atBound || e.AtBound
			if math.Abs(e.SignedShare) > 1.2 {
				t.Errorf("seed %d: signed share %v", seed, e.SignedShare)
			}
		}
		if atBound {
			continue
		}
		inside++
		for _, e := range ace.Components {
			if math.Abs(e.SignedShare-e.Share) > 1e-7 {
				t.Errorf("seed %d: %s is %v, signed %v", seed, e.Component, e.Share, e.SignedShare)
			}
		}
		if root := test.Statistic; math.Abs(root*root-test.Ratio) > 1e-6*(1+test.Ratio) {
			t.Errorf("seed %d: root %v of ratio %v", seed, root, test.Ratio)
		}
	}
	if inside < 30 {
		t.Errorf("only %d fits lie inside the bounds", inside)
	}
	t.Logf("%d inside, %d without an unbounded maximum", inside, edge)
}
