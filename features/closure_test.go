package features_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"kindwell/features"
)

func TestLogRatioReferences(t *testing.T) {
	tests := []struct {
		name     string
		parts    []float64
		zeros    float64
		clr, ilr []float64
		replaced int
		tol      float64
	}{
		{
			// By hand: ln of .2, .3, .5 minus their mean -1.168853; ilr:
			// sqrt(2/3) ln(.2/sqrt(.15)), sqrt(1/2) ln(.3/.5).
			name: "three parts", parts: []float64{.2, .3, .5},
			clr: []float64{-.440585, -.035120, .475705}, ilr: []float64{-.539605, -.361208}, tol: 5e-7,
		},
		{
			name: "counts of the same shares", parts: []float64{40, 60, 100},
			clr: []float64{-.440585, -.035120, .475705}, ilr: []float64{-.539605, -.361208}, tol: 5e-7,
		},
		{
			// By hand: (0, .5, .5) becomes (.01, .495, .495), and
			// ln(49.5) = 3.901972669...; thirds of it.
			name: "one zero", parts: []float64{0, 3, 3}, zeros: .01, replaced: 1,
			clr: []float64{-2 * 3.9019726695746448 / 3, 3.9019726695746448 / 3, 3.9019726695746448 / 3},
			ilr: []float64{-3.9019726695746448 * math.Sqrt(2./3), 0}, tol: 1e-14,
		},
		{
			// By hand: (0, 0, 1) becomes (.1, .1, .8), and ln 8 = 3 ln 2.
			name: "two zeros", parts: []float64{0, 0, 7}, zeros: .1, replaced: 2,
			clr: []float64{-math.Ln2, -math.Ln2, 2 * math.Ln2},
			ilr: []float64{-math.Sqrt(2./3) * 1.5 * math.Ln2, -math.Sqrt(.5) * 3 * math.Ln2}, tol: 1e-14,
		},
		{
			name: "the zeros share is not used without zeros", parts: []float64{1, 1}, zeros: .1,
			clr: []float64{0, 0}, ilr: []float64{0}, tol: 0,
		},
		{
			// ln(1e-300) - ln(1e300) is -600 ln 10.
			name: "parts far apart", parts: []float64{1e-300, 1e300},
			clr: []float64{-300 * math.Ln10, 300 * math.Ln10}, ilr: []float64{-600 * math.Ln10 * math.Sqrt(.5)}, tol: 1e-12,
		},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			parts := mat.NewDense(1, len(test.parts), slices.Clone(test.parts))
			for _, kind := range []struct {
				name      string
				transform func(*mat.Dense, float64) (*mat.Dense, int, []features.CellError)
				want      []float64
			}{{"clr", features.CLR, test.clr}, {"ilr", features.ILR, test.ilr}} {
				out, replaced, faults := kind.transform(parts, test.zeros)
				if got := out.RawRowView(0); !allNear(got, kind.want, test.tol) {
					t.Errorf("%s: got %v, want %v", kind.name, got, kind.want)
				}
				if replaced != test.replaced || faults != nil {
					t.Errorf("%s: replaced %d (want %d), faults %v", kind.name, replaced, test.replaced, faults)
				}
			}
			if !slices.Equal(parts.RawRowView(0), test.parts) {
				t.Errorf("the argument became %v", parts.RawRowView(0))
			}
		})
	}
}

func TestRefusedCompositions(t *testing.T) {
	inf := math.Inf(1)
	parts := mat.NewDense(8, 3, []float64{
		.2, .3, .5, // good
		nan, 0, 1, // missing; its zero is nobody's fault
		0, 0, 1, // two zeros
		0, 0, 0, // adds to 0
		-1, 2, 0, // a negative part and a zero
		nan, -1, 1, // missing and negative
		1, inf, 1,
		nan, nan, nan,
	})
	type place struct{ row, column int }
	tests := []struct {
		name     string
		zeros    float64
		replaced int
		want     []place
	}{
		{"zeros refused", 0, 0, []place{{2, 0}, {2, 1}, {3, features.WholeRow}, {4, 0}, {4, 2}, {5, 1}, {6, 1}}},
		{"zeros replaced", .001, 2, []place{{3, features.WholeRow}, {4, 0}, {5, 1}, {6, 1}}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			out, replaced, faults := features.CLR(parts, test.zeros)
			var got []place
			for _, f := range faults {
				got = append(got, place{f.Row, f.Column})
				if f.Column != features.WholeRow && f.Value != parts.At(f.Row, f.Column) {
					t.Errorf("%+v is not about the value %v", f, parts.At(f.Row, f.Column))
				}
			}
			if !slices.Equal(got, test.want) {
				t.Errorf("refused %v, want %v", got, test.want)
			}
			if replaced != test.replaced {
				t.Errorf("replaced %d zeros, want %d", replaced, test.replaced)
			}
			for i := range 8 {
				good := i == 0 || i == 2 && test.zeros > 0
				for j, v := range out.RawRowView(i) {
					if math.IsNaN(v) == good {
						t.Errorf("row %d, column %d is %v", i, j, v)
					}
				}
			}
		})
	}
}

func TestRefusalReasons(t *testing.T) {
	parts := mat.NewDense(4, 2, []float64{0, 1, 0, 0, -1, 1, math.Inf(1), 1})
	_, _, faults := features.ILR(parts, 0)
	want := []string{"no replacement for zeros is stated", "all parts", "never negative", "infinite"}
	if len(faults) != len(want) {
		t.Fatalf("faults %v", faults)
	}
	for i, f := range faults {
		if f.Row != i || !strings.Contains(f.Reason, want[i]) {
			t.Errorf("%+v does not say %q", f, want[i])
		}
	}
}

func TestCheckComposition(t *testing.T) {
	for _, good := range []struct {
		parts int
		zeros float64
	}{{2, 0}, {2, .49}, {8, .0005}, {10, .0999}} {
		if err := features.CheckComposition(good.parts, good.zeros); err != nil {
			t.Errorf("%+v: %v", good, err)
		}
	}
	for _, bad := range []struct {
		parts int
		zeros float64
		text  string
	}{
		{1, 0, "two parts"}, {0, 0, "two parts"}, {3, -.1, "above 0"}, {3, nan, "above 0"},
		{2, .5, "below 1/2"}, {3, math.Inf(1), "below 1/3"},
	} {
		err := features.CheckComposition(bad.parts, bad.zeros)
		if err == nil || !strings.Contains(err.Error(), bad.text) {
			t.Errorf("%+v: got %v", bad, err)
		}
		if bad.parts == 0 {
			continue
		}
		func() {
			defer func() {
				if got := recover(); got != err.Error() {
					t.Errorf("%+v: CLR panicked with %v", bad, got)
				}
			}()
			features.CLR(mat.NewDense(1, bad.parts, nil), bad.zeros)
		}()
	}
}

// composition draws positive parts, some of them zero when zeros is set.
func composition(t *rapid.T, zeros bool) []float64 {
	d := rapid.IntRange(2, 9).Draw(t, "parts")
	parts := make([]float64, d)
	for j := range parts {
		parts[j] = math.Exp(rapid.Float64Range(-12, 12).Draw(t, "log part"))
		if zeros && j > 0 && rapid.Bool().Draw(t, "zero") {
			parts[j] = 0
		}
	}
	return parts
}

func clrOf(parts []float64, zeros float64) []float64 {
	out, _, _ := features.CLR(mat.NewDense(1, len(parts), slices.Clone(parts)), zeros)
	return out.RawRowView(0)
}

func ilrOf(parts []float64, zeros float64) []float64 {
	out, _, _ := features.ILR(mat.NewDense(1, len(parts), slices.Clone(parts)), zeros)
	return out.RawRowView(0)
}

// Rows add to 0, do not depend on the scale of the parts, and follow the
// parts into another order.
func TestCLRInvariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := composition(t, true)
		const zeros = .01
		clr := clrOf(parts, zeros)
		sum := 0.0
		for _, v := range clr {
			sum += v
		}
		if !near(sum, 0, 1e-13) {
			t.Errorf("the row adds to %v", sum)
		}
		scale := math.Exp(rapid.Float64Range(-300, 300).Draw(t, "log scale"))
		order := rapid.Permutation(indices(len(parts))).Draw(t, "order")
		scaled, moved := make([]float64, len(parts)), make([]float64, len(parts))
		for j, from := range order {
			scaled[j], moved[j] = scale*parts[j], parts[from]
		}
		if got := clrOf(scaled, zeros); !allNear(got, clr, 1e-12) {
			t.Errorf("times %v: %v, want %v", scale, got, clr)
		}
		for j, v := range clrOf(moved, zeros) {
			if !near(v, clr[order[j]], 1e-13) {
				t.Errorf("in order %v part %d is %v, want %v", order, j, v, clr[order[j]])
			}
		}
	})
}

// A second route: replace, close and only then take logarithms.
func TestCLRBySteps(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		parts := composition(t, true)
		zeros := rapid.Float64Range(1e-6, .1).Draw(t, "zeros")
		total, count := 0.0, 0.0
		for _, v := range parts {
			total += v
			if v == 0 {
				count++
			}
		}
		shares, product, sum := make([]float64, len(parts)), 1.0, 0.0
		for j, v := range parts {
			shares[j] = v / total * (1 - count*zeros)
			if v == 0 {
				shares[j] = zeros
			}
			product *= shares[j]
			sum += shares[j]
		}
		if !near(sum, 1, 1e-14) {
			t.Fatalf("shares add to %v", sum)
		}
		geometric := math.Pow(product, 1/float64(len(parts)))
		for j, v := range clrOf(parts, zeros) {
			if want := math.Log(shares[j] / geometric); !near(v, want, 1e-12) {
				t.Errorf("part %d: %v, want %v", j, v, want)
			}
		}
	})
}

// ILR turns CLR without stretching: inner products of rows are the same.
func TestILRIsIsometric(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := composition(t, false)
		y := make([]float64, len(x))
		for j := range y {
			y[j] = math.Exp(rapid.Float64Range(-12, 12).Draw(t, "log part"))
		}
		want, got := dot(clrOf(x, 0), clrOf(y, 0)), dot(ilrOf(x, 0), ilrOf(y, 0))
		if !near(got, want, 1e-11) {
			t.Errorf("ilr gives %v, clr %v", got, want)
		}
	})
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i := range a {
		sum += a[i] * b[i]
	}
	return sum
}

func indices(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}
