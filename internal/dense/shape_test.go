package dense

import (
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
	"pgregory.net/rapid"
)

// refusal returns what a call panics with, nil when it does not.
func refusal(call func()) (said any) {
	defer func() { said = recover() }()
	call()
	return nil
}

// Whatever is wrong with the arguments, ours says what gonum says.
func TestRefusesAsGonum(t *testing.T) {
	v := variants(t)[0]
	rapid.Check(t, func(t *rapid.T) {
		small := func(name string) int { return rapid.IntRange(-1, 4).Draw(t, name) }
		slice := func(name string) []float64 {
			return make([]float64, rapid.IntRange(0, 20).Draw(t, name))
		}
		transpose := func(name string) blas.Transpose {
			return rapid.SampledFrom([]blas.Transpose{blas.NoTrans, blas.Trans, blas.ConjTrans, 'x'}).Draw(t, name)
		}
		side := rapid.SampledFrom([]blas.Side{blas.Left, blas.Right, 'x'}).Draw(t, "side")
		ul := rapid.SampledFrom([]blas.Uplo{blas.Upper, blas.Lower, 'x'}).Draw(t, "uplo")
		d := rapid.SampledFrom([]blas.Diag{blas.Unit, blas.NonUnit, 'x'}).Draw(t, "diag")
		tA, tB := transpose("tA"), transpose("tB")
		m, n, k := small("m"), small("n"), small("k")
		lda, ldb, ldc := small("lda"), small("ldb"), small("ldc")
		a, b, c := slice("a"), slice("b"), slice("c")
		factor := rapid.SampledFrom([]float64{0, 1, 2})
		alpha, beta := factor.Draw(t, "alpha"), factor.Draw(t, "beta")
		for name, call := range map[string]func(im blas.Float64){
			"Dgemm": func(im blas.Float64) { im.Dgemm(tA, tB, m, n, k, alpha, a, lda, b, ldb, beta, c, ldc) },
			"Dsyrk": func(im blas.Float64) { im.Dsyrk(ul, tA, n, k, alpha, a, lda, beta, c, ldc) },
			"Dtrsm": func(im blas.Float64) { im.Dtrsm(side, ul, tA, d, m, n, alpha, a, lda, b, ldb) },
		} {
			got, want := refusal(func() { call(v) }), refusal(func() { call(gonum.Implementation{}) })
			if got != want {
				t.Errorf("%s says %v, gonum %v", name, got, want)
			}
		}
	})
}

// One case of every text, so that none is left to chance.
func TestRefusals(t *testing.T) {
	x := make([]float64, 100)
	tests := []struct {
		want string
		call func(im blas.Float64)
	}{
		{"blas: illegal transpose", func(im blas.Float64) { im.Dgemm('x', blas.Trans, 1, 1, 1, 1, x, 1, x, 1, 1, x, 1) }},
		{"blas: illegal transpose", func(im blas.Float64) { im.Dgemm(blas.Trans, 'x', 1, 1, 1, 1, x, 1, x, 1, 1, x, 1) }},
		{"blas: illegal transpose", func(im blas.Float64) { im.Dsyrk(blas.Upper, 'x', 1, 1, 1, x, 1, 1, x, 1) }},
		{"blas: illegal triangle", func(im blas.Float64) { im.Dsyrk('x', blas.Trans, 1, 1, 1, x, 1, 1, x, 1) }},
		{"blas: illegal side", func(im blas.Float64) { im.Dtrsm('x', blas.Upper, blas.Trans, blas.Unit, 1, 1, 1, x, 1, x, 1) }},
		{"blas: illegal diagonal", func(im blas.Float64) { im.Dtrsm(blas.Left, blas.Upper, blas.Trans, 'x', 1, 1, 1, x, 1, x, 1) }},
		{"blas: m < 0", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, -1, 1, 1, 1, x, 1, x, 1, 1, x, 1) }},
		{"blas: n < 0", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 1, -1, 1, 1, x, 1, x, 1, 1, x, 1) }},
		{"blas: k < 0", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 1, 1, -1, 1, x, 1, x, 1, 1, x, 1) }},
		{"blas: bad leading dimension of A", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 5, 1, 1, 1, x, 4, x, 1, 1, x, 1) }},
		{"blas: bad leading dimension of B", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 1, 1, 5, 1, x, 1, x, 4, 1, x, 1) }},
		{"blas: bad leading dimension of C", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 1, 5, 1, 1, x, 1, x, 1, 1, x, 4) }},
		{"blas: bad leading dimension of C", func(im blas.Float64) { im.Dgemm(blas.Trans, blas.Trans, 1, 0, 1, 1, x, 1, x, 1, 1, x, 0) }},
		{"blas: insufficient length of a", func(im blas.Float64) {
			im.Dgemm(blas.NoTrans, blas.NoTrans, 5, 1, 5, 1, x[:24], 5, x, 1, 1, x, 1)
		}},
		{"blas: insufficient length of b", func(im blas.Float64) {
			im.Dgemm(blas.NoTrans, blas.NoTrans, 1, 5, 5, 1, x, 5, x[:24], 5, 1, x, 5)
		}},
		{"blas: insufficient length of c", func(im blas.Float64) {
			im.Dgemm(blas.NoTrans, blas.NoTrans, 5, 5, 1, 1, x, 1, x, 5, 1, x[:24], 5)
		}},
		{"blas: insufficient length of a", func(im blas.Float64) { im.Dsyrk(blas.Upper, blas.Trans, 5, 5, 1, x[:24], 5, 1, x, 5) }},
		{"blas: insufficient length of c", func(im blas.Float64) { im.Dsyrk(blas.Upper, blas.Trans, 5, 5, 1, x, 5, 1, x[:24], 5) }},
		{"blas: insufficient length of a", func(im blas.Float64) {
			im.Dtrsm(blas.Left, blas.Upper, blas.Trans, blas.Unit, 5, 5, 1, x[:24], 5, x, 5)
		}},
		{"blas: insufficient length of b", func(im blas.Float64) {
			im.Dtrsm(blas.Right, blas.Upper, blas.Trans, blas.Unit, 5, 5, 1, x, 5, x[:24], 5)
		}},
	}
	for _, test := range tests {
		for _, v := range variants(t) {
			if got := refusal(func() { test.call(v) }); got != test.want {
				t.Errorf("%s says %v, want %q", v.name, got, test.want)
			}
		}
		if got := refusal(func() { test.call(gonum.Implementation{}) }); got != test.want {
			t.Errorf("gonum says %v, want %q", got, test.want)
		}
	}
}
