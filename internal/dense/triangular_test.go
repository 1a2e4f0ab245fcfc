package dense

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

// randomTriangle returns a square matrix both of whose triangles are well
// conditioned, with unit diagonal or with its own.
func randomTriangle(n, stride int, r *rand.Rand) []float64 {
	a := randomNumbers(n*stride, r)
	for i := range a {
		a[i] /= float64(n)
	}
	for i := range n {
		a[i*stride+i] = 1 + r.Float64()
	}
	return a
}

// system is one triangular system.
type system struct {
	side     blas.Side
	ul       blas.Uplo
	tA       blas.Transpose
	d        blas.Diag
	m, n     int
	alpha    float64
	a, b     []float64
	lda, ldb int
}

func (s system) by(im blas.Float64) []float64 {
	x := slices.Clone(s.b)
	im.Dtrsm(s.side, s.ul, s.tA, s.d, s.m, s.n, s.alpha, s.a, s.lda, x, s.ldb)
	return x
}

// coefficient returns element (i, j) of op(A).
func (s system) coefficient(i, j int) float64 {
	if s.tA != blas.NoTrans {
		i, j = j, i
	}
	switch {
	case i == j && s.d == blas.Unit:
		return 1
	case (j > i) != (s.ul == blas.Upper) && i != j:
		return 0
	}
	return s.a[i*s.lda+j]
}

// residual returns the largest |op(A) X - alpha B| relative to |op(A)| |X|.
func (s system) residual(x []float64) float64 {
	worst := 0.0
	for i := range s.m {
		for j := range s.n {
			sum, size := -s.alpha*s.b[i*s.ldb+j], 0.0
			add := func(a, x float64) { sum += a * x; size += math.Abs(a * x) }
			if s.side == blas.Left {
				for l := range s.m {
					add(s.coefficient(i, l), x[l*s.ldb+j])
				}
			} else {
				for l := range s.n {
					add(s.coefficient(l, j), x[i*s.ldb+l])
				}
			}
			if off := math.Abs(sum) / size; off > worst || math.IsNaN(off) {
				worst = off
			}
		}
	}
	return worst
}

func eachSystem(m, n int, r *rand.Rand, do func(s system)) {
	for _, side := range []blas.Side{blas.Left, blas.Right} {
		for _, ul := range triangles {
			for _, tA := range transposes {
				for _, d := range []blas.Diag{blas.NonUnit, blas.Unit} {
					size := m
					if side == blas.Right {
						size = n
					}
					s := system{side: side, ul: ul, tA: tA, d: d, m: m, n: n, alpha: pick(r, 1, .7),
						lda: size + r.IntN(3), ldb: n + r.IntN(3)}
					s.a, s.b = randomTriangle(size, s.lda, r), randomNumbers(m*s.ldb, r)
					do(s)
				}
			}
		}
	}
}

// Every case solves its system, keeps its triangle and whatever lies beside B,
// agrees with gonum, and has the same bits for all kernels and thread counts.
func TestDtrsm(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, shape := range [][2]int{{1, 1}, {24, 25}, {25, 24}, {50, 33}, {33, 130}, {130, 40}, {500, 20}} {
		eachSystem(shape[0], shape[1], r, func(s system) {
			a := slices.Clone(s.a)
			plain := s.by(gonum.Implementation{})
			var first []float64
			for _, v := range variants(t) {
				x := s.by(v)
				if first == nil {
					first = x
					// A backward stable solver leaves at most size roundings
					// a number (Higham 2002, section 8.1).
					if got, most := s.residual(x), float64(max(s.m, s.n)+2)*0x1p-52; !(got <= most) {
						t.Fatalf("%c%c%c%c %v: residual %g above %g", s.side, s.ul, s.tA, s.d, shape, got, most)
					}
				}
				if at := firstDifference(x, first); at >= 0 {
					t.Fatalf("%s, %c%c%c%c %v: element (%d, %d) differs", v.name, s.side, s.ul, s.tA, s.d, shape, at/s.ldb, at%s.ldb)
				}
			}
			for i, v := range first {
				within := i%s.ldb < s.n
				if within && !(math.Abs(v-plain[i]) <= 1e-13*(1+math.Abs(plain[i]))) || !within && v != s.b[i] {
					t.Fatalf("%c%c%c%c %v: element (%d, %d) is %v, gonum %v", s.side, s.ul, s.tA, s.d, shape, i/s.ldb, i%s.ldb, v, plain[i])
				}
			}
			if !slices.Equal(a, s.a) {
				t.Fatalf("%c%c%c%c %v changed A", s.side, s.ul, s.tA, s.d, shape)
			}
		})
	}
}

// The other triangle, and a unit diagonal, may hold anything.
func TestDtrsmReadsOneTriangle(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	eachSystem(60, 70, r, func(s system) {
		want := s.by(variants(t)[0])
		for i := range len(s.a) / s.lda {
			for j := range s.lda {
				if i == j && s.d == blas.Unit || i != j && (j > i) != (s.ul == blas.Upper) {
					s.a[i*s.lda+j] = math.NaN()
				}
			}
		}
		for _, v := range variants(t) {
			if at := firstDifference(s.by(v), want); at >= 0 {
				t.Fatalf("%s, %c%c%c%c: element (%d, %d) differs", v.name, s.side, s.ul, s.tA, s.d, at/s.ldb, at%s.ldb)
			}
		}
	})
}

// A system does not depend on the others that are solved with it.
func TestDtrsmOneByOneIsTheWhole(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	eachSystem(61, 61, r, func(s system) {
		v := variants(t)[0]
		whole, x := s.by(v), slices.Clone(s.b)
		for i := range 61 {
			if s.side == blas.Left {
				v.Dtrsm(s.side, s.ul, s.tA, s.d, s.m, 1, s.alpha, s.a, s.lda, x[i:], s.ldb)
			} else {
				v.Dtrsm(s.side, s.ul, s.tA, s.d, 1, s.n, s.alpha, s.a, s.lda, x[i*s.ldb:], s.ldb)
			}
		}
		if at := firstDifference(x, whole); at >= 0 {
			t.Fatalf("%c%c%c%c: element (%d, %d) differs", s.side, s.ul, s.tA, s.d, at/s.ldb, at%s.ldb)
		}
	})
}

func TestDtrsmAlphaZero(t *testing.T) {
	for _, v := range variants(t) {
		b := []float64{math.NaN(), 1, 5, math.Inf(1), 2}
		v.Dtrsm(blas.Left, blas.Upper, blas.NoTrans, blas.NonUnit, 2, 2, 0, make([]float64, 4), 2, b, 3)
		if want := []float64{0, 0, 5, 0, 0}; !slices.Equal(b, want) {
			t.Errorf("%s: got %v, want %v", v.name, b, want)
		}
	}
}
