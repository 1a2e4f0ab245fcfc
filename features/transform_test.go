package features_test

import (
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"kindwell/features"
)

var nan = math.NaN()

// near reports whether got and want agree to tol, with NaN equal to NaN.
func near(got, want, tol float64) bool {
	return got == want || math.IsNaN(got) && math.IsNaN(want) || math.Abs(got-want) <= tol
}

func allNear(got, want []float64, tol float64) bool {
	return slices.EqualFunc(got, want, func(g, w float64) bool { return near(g, w, tol) })
}

func TestColumnTransforms(t *testing.T) {
	inf := math.Inf(1)
	tests := []struct {
		name      string
		transform func([]float64) ([]float64, []features.CellError)
		values    []float64
		want      []float64
		refused   []int // rows
		reason    string
	}{
		{
			name: "log", transform: features.LogColumn,
			values: []float64{1, math.E, 0.5, nan},
			want:   []float64{0, 1, -math.Ln2, nan},
		},
		{
			name: "log refuses every bad cell", transform: features.LogColumn,
			values:  []float64{0, 2, -1, nan, 0},
			want:    []float64{nan, math.Ln2, nan, nan, nan},
			refused: []int{0, 2, 4}, reason: "log needs a value above 0",
		},
		{
			name: "log refuses infinity", transform: features.LogColumn,
			values: []float64{inf, -inf}, want: []float64{nan, nan},
			refused: []int{0, 1}, reason: "infinite",
		},
		{
			name: "logit", transform: features.LogitColumn,
			// ln(.2/.8) = -ln 4 and ln(.75/.25) = ln 3.
			values: []float64{0.5, 0.2, 0.75, nan},
			want:   []float64{0, -2 * math.Ln2, math.Log(3), nan},
		},
		{
			name: "logit refuses 0, 1 and beyond", transform: features.LogitColumn,
			values: []float64{0, 1, -0.1, 1.1, 0.5}, want: []float64{nan, nan, nan, nan, 0},
			refused: []int{0, 1, 2, 3}, reason: "between 0 and 1",
		},
		{
			name: "empty", transform: features.LogColumn,
			values: nil, want: []float64{},
		},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			before := slices.Clone(test.values)
			got, faults := test.transform(test.values)
			if !allNear(got, test.want, 1e-15) {
				t.Errorf("got %v, want %v", got, test.want)
			}
			if !allNear(test.values, before, 0) {
				t.Errorf("the argument became %v", test.values)
			}
			var rows []int
			for _, f := range faults {
				rows = append(rows, f.Row)
				if f.Column != 0 || f.Value != test.values[f.Row] {
					t.Errorf("fault %+v is not about the value %v", f, test.values[f.Row])
				}
				if !strings.Contains(f.Reason, test.reason) || !strings.Contains(f.Error(), f.Reason) {
					t.Errorf("fault says %q (%q), want %q", f.Error(), f.Reason, test.reason)
				}
			}
			if !slices.Equal(rows, test.refused) {
				t.Errorf("refused rows %v, want %v", rows, test.refused)
			}
		})
	}
}

func TestCellErrorText(t *testing.T) {
	cell := features.CellError{Row: 3, Column: 1, Value: -2.5, Reason: "why"}
	if got, want := cell.Error(), "features: row 3, column 1: -2.5: why"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	cell.Column = features.WholeRow
	if got, want := cell.Error(), "features: row 3: why"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

// The logit undoes the logistic function, and mirrors about one half.
func TestLogitInvertsLogistic(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-20, 20).Draw(t, "x")
		p, q := 1/(1+math.Exp(-x)), 1/(1+math.Exp(x))
		got, faults := features.LogitColumn([]float64{p, q})
		if faults != nil {
			t.Fatalf("refused: %v", faults)
		}
		// A share near 1 is known to 1.1e-16 only; its logit to that over 1-p.
		tol := 1e-14 + 2.3e-16/min(p, q)
		if !near(got[0], x, tol) || !near(got[1], -x, tol) {
			t.Errorf("logit of the logistic of %v is %v and %v", x, got[0], got[1])
		}
	})
}

func TestMeanBy(t *testing.T) {
	group := []int{2, 0, 2, 0, 3, 2}
	values := []float64{1, 4, 2, nan, nan, 6}
	got := features.MeanBy(group, 4, values)
	if want := []float64{4, nan, 3, nan}; !allNear(got, want, 0) {
		t.Errorf("got %v, want %v", got, want)
	}
}

func TestMeanByPanics(t *testing.T) {
	for name, f := range map[string]func(){
		"lengths": func() { features.MeanBy([]int{0}, 1, nil) },
		"above":   func() { features.MeanBy([]int{1}, 1, []float64{0}) },
		"below":   func() { features.MeanBy([]int{-1}, 1, []float64{0}) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if text, _ := recover().(string); !strings.HasPrefix(text, "features: ") {
					t.Errorf("panicked with %q", text)
				}
			}()
			f()
		})
	}
}
