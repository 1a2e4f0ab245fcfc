package predict

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"
)

func longley(t testing.TB) (x, y *mat.Dense) {
	table := readTable(t, "longley", "longley.csv")
	return numbers(t, table, "GNP.deflator", "GNP", "Unemployed", "Armed.Forces", "Population", "Year"), numbers(t, table, "Employed")
}

// Weights by the closed form in R: testdata/longley/ridge.R.
func TestRidgeLongley(t *testing.T) {
	x, y := longley(t)
	r, err := NewRidge(x)
	if err != nil {
		t.Fatal(err)
	}
	table := readTable(t, "longley", "ridge.csv")
	for i, text := range table["penalty"] {
		f, err := r.Fit(y, number(t, text))
		if err != nil {
			t.Fatal(err)
		}
		want := number(t, table["weight"][i])
		if got := f.Weights.At(i%6, 0); math.Abs(got/want-1) > 1e-11 {
			t.Errorf("penalty %v, %s: %.14v, want %v", text, table["measure"][i], got, want)
		}
		if want := number(t, table["df"][i]); math.Abs(f.DegreesOfFreedom/want-1) > 1e-12 {
			t.Errorf("penalty %v: %.14v degrees of freedom, want %v", text, f.DegreesOfFreedom, want)
		}
		if math.Abs(f.Intercepts[0]-65.317) > 1e-12 { // mean of Employed
			t.Errorf("intercept %v", f.Intercepts[0])
		}
	}
}

// Others standardise with divisor n - 1. Their weights, here of the closed
// form in R 4.2.2, are ours at 16/15 of the penalty times sqrt(16/15).
func TestRidgeWithTheOtherDeviation(t *testing.T) {
	x, y := longley(t)
	r, err := NewRidge(x)
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		penalty float64
		weights []float64
		df      float64
	}{
		{0, []float64{0.1625409991, -3.560245098, -1.887832523, -0.7190428327, -0.3554853491, 8.708502846}, 6},
		{.01, []float64{-0.0202247878, -0.1096970232, -1.39358154, -0.6037232155, -1.032994708, 5.746590266}, 5.107199748},
		{.1, []float64{0.6819109547, 1.16280636, -1.095686938, -0.4529321208, 0.0911545167, 2.392721492}, 3.982785949},
		{1, []float64{0.9231436674, 1.114861446, -0.7513942145, -0.1913385335, 0.8197632855, 1.081749713}, 2.9106628},
		{10, []float64{0.7094925144, 0.7643653608, -0.0269673956, 0.2295304326, 0.6895534553, 0.7105079271}, 1.771652529},
	} {
		f, err := r.Fit(y, c.penalty*16/15)
		if err != nil {
			t.Fatal(err)
		}
		for j, want := range c.weights {
			// Half a unit of the tenth decimal or significant digit, as printed.
			tol := math.Max(6e-11, math.Abs(want)*6e-10)
			if got := f.Weights.At(j, 0) * math.Sqrt(16./15); math.Abs(got-want) > tol {
				t.Errorf("penalty %v, weight %d: %.12v, want %v", c.penalty, j, got, want)
			}
		}
		if math.Abs(f.DegreesOfFreedom-c.df) > 6e-10*c.df {
			t.Errorf("penalty %v: %.12v degrees of freedom, want %v", c.penalty, f.DegreesOfFreedom, c.df)
		}
	}
}

// NIST's certified coefficients of Longley in its own units.
func TestRidgeWithoutPenaltyIsLeastSquares(t *testing.T) {
	x, y := longley(t)
	for i := range 16 {
		for j, unit := range []float64{1, 1000, 10, 10, 1000, 1} {
			x.Set(i, j, x.At(i, j)*unit)
		}
		y.Set(i, 0, y.At(i, 0)*1000)
	}
	r, err := NewRidge(x)
	if err != nil {
		t.Fatal(err)
	}
	f, err := r.Fit(y, 0)
	if err != nil {
		t.Fatal(err)
	}
	certified := []float64{15.0618722713733, -0.358191792925910e-01, -2.02022980381683, -1.03322686717359, -0.511041056535807e-01, 1829.15146461355}
	for j, want := range certified {
		if got := f.Weights.At(j, 0) / r.sd[j]; math.Abs(got/want-1) > 1e-11 {
			t.Errorf("coefficient %d: %.14v, want %v", j, got, want)
		}
	}
	predicted, err := f.Predict(x)
	if err != nil {
		t.Fatal(err)
	}
	squares := 0.0
	for i := range 16 {
		squares += math.Pow(y.At(i, 0)-predicted.At(i, 0), 2)
	}
	if got, want := math.Sqrt(squares/9), 304.854073561965; math.Abs(got/want-1) > 1e-11 {
		t.Errorf("residual deviation %.14v, want %v", got, want)
	}
}

func TestRidgeAgainstNormalEquations(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, p := rapid.IntRange(2, 12).Draw(t, "people"), rapid.IntRange(1, 15).Draw(t, "measures")
		eighths := rapid.IntRange(-24, 24)
		x, y := mat.NewDense(n, p, nil), mat.NewDense(n, 1, nil)
		for i := range n {
			for j := range p {
				x.Set(i, j, float64(eighths.Draw(t, "x"))/8)
			}
			y.Set(i, 0, float64(eighths.Draw(t, "y"))/8)
		}
		penalty := math.Exp(rapid.Float64Range(-3, 6).Draw(t, "log penalty"))
		r, err := NewRidge(x)
		if err != nil {
			t.Fatal(err)
		}
		f, err := r.Fit(y, penalty)
		if err != nil {
			t.Fatal(err)
		}
		z, sd, mean := mat.NewDense(n, p, nil), deviations(x), mat.Sum(y)/float64(n)
		centred := mat.NewDense(n, 1, nil)
		for i := range n {
			centred.Set(i, 0, y.At(i, 0)-mean)
			for j := range p {
				if sd[j] > 0 {
					column := mat.Col(nil, j, x)
					m, _, _ := aboutMean(column)
					z.Set(i, j, (x.At(i, j)-m)/sd[j])
				}
			}
		}
		want := ridgeByNormalEquations(z, centred, penalty)
		for j := range p {
			if !near(f.Weights.At(j, 0), want.At(j, 0), 1e-9) {
				t.Fatalf("weight %d: %v, want %v", j, f.Weights.At(j, 0), want.At(j, 0))
			}
		}
	})
}

func TestRidgeErrors(t *testing.T) {
	dependent := mat.NewDense(4, 2, []float64{1, 2, 2, 4, 3, 6, 5, 10})
	y := mat.NewDense(4, 1, []float64{1, 2, 3, 5})
	if _, err := NewRidge(mat.NewDense(3, 1, []float64{1, math.NaN(), 2})); err == nil {
		t.Error("NaN passed")
	}
	if _, err := NewRidge(nil); err == nil {
		t.Error("no measures passed")
	}
	if _, err := NewRidge(mat.NewDense(1, 1, []float64{1})); err == nil {
		t.Error("one person passed")
	}
	r, err := NewRidge(dependent)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := r.Fit(y, 0); err == nil {
		t.Error("dependent measures without a penalty passed")
	}
	for _, penalty := range []float64{-1, math.NaN(), math.Inf(1)} {
		if _, err := r.Fit(y, penalty); err == nil {
			t.Errorf("penalty %v passed", penalty)
		}
	}
	if _, err := r.Fit(mat.NewDense(3, 1, nil), 1); err == nil {
		t.Error("another number of people passed")
	}
	f, err := r.Fit(y, 1)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.Predict(mat.NewDense(2, 3, nil)); err == nil {
		t.Error("another number of measures passed")
	}
}
