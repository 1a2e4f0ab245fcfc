package predict

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"kindwell/internal/stream"
)

// NIST's certified residual standard deviation of Longley's regression, in
// NIST's units of Employed (thousands).
func TestResidualsLongley(t *testing.T) {
	x, y := longley(t)
	left, err := Residuals(y, x)
	if err != nil {
		t.Fatal(err)
	}
	squares := 0.0
	for i := range 16 {
		squares += left.At(i, 0) * left.At(i, 0)
	}
	if got, want := 1000*math.Sqrt(squares/9), 304.854073561965; math.Abs(got/want-1) > 1e-12 {
		t.Errorf("residual deviation %.15v, want %v", got, want)
	}
	share, err := ExplainedShare(y, x)
	if err != nil {
		t.Fatal(err)
	}
	if want := 0.995479004577296; math.Abs(share[0]-want) > 1e-14 { // certified R squared
		t.Errorf("explained share %.16v, want %v", share[0], want)
	}
}

// A polynomial of degree 10 on a narrow range, in the manner of NIST's Filip
// problem: columns so nearly dependent that looser programs drop one.
func TestResidualsOfNearlyDependentConfounds(t *testing.T) {
	n := 82
	c, y := mat.NewDense(n, 10, nil), mat.NewDense(n, 1, nil)
	for i := range n {
		x := -8.8 + 5.7*float64(i)/float64(n-1)
		v := 0.0
		for j := range 10 {
			c.Set(i, j, math.Pow(x, float64(j+1)))
			v += c.At(i, j) * math.Pow(-0.5, float64(j))
		}
		y.Set(i, 0, v+math.Cos(7*float64(i)))
	}
	got, err := Residuals(y, c)
	if err != nil {
		t.Fatal(err)
	}
	noise := mat.NewDense(n, 1, nil)
	orthogonal := mat.NewDense(n, 10, nil)
	for i := range n {
		noise.Set(i, 0, math.Cos(7*float64(i)))
		x := -1 + 2*float64(i)/float64(n-1)
		for j := range 10 {
			orthogonal.Set(i, j, math.Cos(float64(j+1)*math.Acos(x))) // Chebyshev: the same space, well conditioned
		}
	}
	want, err := Residuals(noise, orthogonal)
	if err != nil {
		t.Fatal(err)
	}
	for i := range n {
		if math.Abs(got.At(i, 0)-want.At(i, 0)) > 1e-5 {
			t.Errorf("person %d: %v, want %v", i, got.At(i, 0), want.At(i, 0))
		}
	}
}

// Residuals are orthogonal to the confounds, unchanged by another basis of
// them, by adding multiples of them to the trait, and by a second pass.
func TestResidualProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, c := rapid.IntRange(6, 30).Draw(t, "people"), rapid.IntRange(1, 4).Draw(t, "confounds")
		st := stream.New(rapid.Uint64().Draw(t, "seed"), "test")
		confounds, y := mat.NewDense(n, c, nil), mat.NewDense(n, 2, nil)
		for i := range n {
			for j := range c {
				confounds.Set(i, j, st.Norm()*math.Pow(10, float64(2*j-3))+100)
			}
			y.SetRow(i, []float64{st.Norm(), 5 + st.Norm()})
		}
		if c > 2 { // one that follows from the others
			for i := range n {
				confounds.Set(i, 1, 3-confounds.At(i, 0))
			}
		}
		left, err := Residuals(y, confounds)
		if err != nil {
			t.Fatal(err)
		}
		var products mat.Dense
		products.Mul(confounds.T(), left)
		for j := range c {
			for trait := range 2 {
				if length := mat.Norm(confounds.ColView(j), 2); math.Abs(products.At(j, trait)) > 1e-12*length*float64(n) {
					t.Fatalf("confound %d and residuals of trait %d have product %v", j, trait, products.At(j, trait))
				}
			}
		}
		moved := mat.DenseCopyOf(y)
		for i := range n {
			moved.Set(i, 0, y.At(i, 0)+7-0.3*confounds.At(i, 0))
		}
		again, err := Residuals(moved, confounds)
		if err != nil {
			t.Fatal(err)
		}
		twice, err := Residuals(left, confounds)
		if err != nil {
			t.Fatal(err)
		}
		for i := range n {
			if !near(again.At(i, 0), left.At(i, 0), 1e-10) || !near(twice.At(i, 1), left.At(i, 1), 1e-12) {
				t.Fatalf("person %d: %v, moved %v, twice %v", i, left.At(i, 0), again.At(i, 0), twice.At(i, 1))
			}
		}
	})
}

func TestResidualsOfATraitOfConfoundsAreExactlyZero(t *testing.T) {
	q := invent(shape{people: 40, measures: 1, confounds: 2, traits: 3, repeats: 1, outer: 2, inner: 2}, 1)
	for i := range 40 {
		q.traits.Set(i, 1, 4-2*q.confounds.At(i, 0)+1e3*q.confounds.At(i, 1))
		q.traits.Set(i, 2, 0.1+0.2) // constant
	}
	left, err := Residuals(q.traits, q.confounds)
	if err != nil {
		t.Fatal(err)
	}
	for i := range 40 {
		if left.At(i, 1) != 0 || left.At(i, 2) != 0 {
			t.Fatalf("person %d has residuals %v and %v", i, left.At(i, 1), left.At(i, 2))
		}
		if left.At(i, 0) == 0 {
			t.Fatalf("person %d has none in the other trait", i)
		}
	}
	shares, err := ExplainedShare(q.traits, q.confounds)
	if err != nil {
		t.Fatal(err)
	}
	if shares[1] != 1 || !math.IsNaN(shares[2]) || shares[0] <= 0 || shares[0] >= 1 {
		t.Errorf("explained shares %v", shares)
	}
}

// The report of the regression library and our own residuals must agree.
func TestExplainedShareBothWays(t *testing.T) {
	for _, n := range []int{9, 60, 500} {
		q := invent(shape{people: n, measures: 1, confounds: 3, traits: 4, repeats: 1, outer: 2, inner: 2}, uint64(n))
		if !reportable(n, 4, 3) {
			t.Fatalf("the report is not used for %d people", n)
		}
		shares, err := ExplainedShare(q.traits, q.confounds)
		if err != nil {
			t.Fatal(err)
		}
		left, err := Residuals(q.traits, q.confounds)
		if err != nil {
			t.Fatal(err)
		}
		for j, share := range shares {
			_, total, _ := aboutMean(mat.Col(nil, j, q.traits))
			_, residual, _ := aboutMean(mat.Col(nil, j, left))
			if want := 1 - residual/total; math.Abs(share-want) > 1e-12 {
				t.Errorf("%d people, trait %d: %v, want %v", n, j, share, want)
			}
		}
	}
	// Where the report would be too large our own takes its place.
	q := invent(shape{people: 300, measures: 1, confounds: 2, traits: 200, repeats: 1, outer: 2, inner: 2}, 1)
	for i := range 300 {
		q.traits.Set(i, 3, 5)
	}
	if reportable(300, 200, 2) {
		t.Fatal("the report is used")
	}
	many, err := ExplainedShare(q.traits, q.confounds)
	if err != nil {
		t.Fatal(err)
	}
	one, err := ExplainedShare(mat.DenseCopyOf(q.traits.Slice(0, 300, 17, 18)), q.confounds)
	if err != nil {
		t.Fatal(err)
	}
	if !math.IsNaN(many[3]) {
		t.Errorf("a constant trait has the share %v", many[3])
	}
	if math.Abs(many[17]-one[0]) > 1e-12 {
		t.Errorf("trait 17: %v among many, %v alone", many[17], one[0])
	}
	none, err := ExplainedShare(q.traits, nil)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(none[0]) > 1e-12 {
		t.Errorf("no confounds explain %v", none[0])
	}
}
