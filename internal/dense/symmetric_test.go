package dense

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

// Dsyrk has the bits of Dgemm in its triangle, leaves the other one alone, and
// agrees with gonum.
func TestDsyrkIsDgemm(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 2, 15, 48, 64, 65, 97, 130, 200, 301} {
		for _, ul := range triangles {
			for _, tA := range transposes {
				k := 1 + r.IntN(300)
				rows, columns := stored(tA, n, k)
				lda, ldc := columns+r.IntN(4), n+r.IntN(4)
				a, c := randomNumbers(rows*lda, r), randomNumbers(n*ldc, r)
				alpha, beta := pick(r, 1, -.6), pick(r, 0, 1, .5)

				other := blas.NoTrans
				if tA == blas.NoTrans {
					other = blas.Trans
				}
				p := call{tA: tA, tB: other, m: n, n: n, k: k, alpha: alpha, beta: beta,
					a: a, b: a, c: c, lda: lda, ldb: lda, ldc: ldc}
				want := slices.Clone(c)
				plain := slices.Clone(c)
				gonum.Implementation{}.Dsyrk(ul, tA, n, k, alpha, a, lda, beta, plain, ldc)
				for i, row := range p.rows(p.asPromised()) {
					for j, v := range row {
						if j >= i == (ul == blas.Upper) || i == j {
							want[i*ldc+j] = v
						}
					}
				}
				for _, v := range variants(t) {
					got := slices.Clone(c)
					v.Dsyrk(ul, tA, n, k, alpha, a, lda, beta, got, ldc)
					if at := firstDifference(got, want); at >= 0 {
						t.Fatalf("%s, %c%c, n=%d, k=%d: element (%d, %d) differs", v.name, ul, tA, n, k, at/ldc, at%ldc)
					}
				}
				for i := range n {
					for j := range n {
						if off := math.Abs(want[i*ldc+j] - plain[i*ldc+j]); !(off <= p.bound(i, j)) {
							t.Fatalf("%c%c, n=%d, k=%d: element (%d, %d) is %v from gonum's", ul, tA, n, k, i, j, off)
						}
					}
				}
			}
		}
	}
}

// rows returns the rows of C.
func (p call) rows(c []float64) [][]float64 {
	var rows [][]float64
	for i := range p.m {
		rows = append(rows, c[i*p.ldc:i*p.ldc+p.n])
	}
	return rows
}

func TestDsyrkWithoutTerms(t *testing.T) {
	nan := math.NaN()
	for _, v := range variants(t) {
		for _, ul := range triangles {
			c := []float64{1, 2, 3, 4}
			v.Dsyrk(ul, blas.Trans, 2, 0, 1, nil, 2, 2, c, 2)
			want := []float64{2, 4, 3, 8}
			if ul == blas.Lower {
				want = []float64{2, 2, 6, 8}
			}
			if !slices.Equal(c, want) {
				t.Errorf("%s, %c, k = 0: got %v, want %v", v.name, ul, c, want)
			}
			c = []float64{nan, 7, 7, nan}
			v.Dsyrk(ul, blas.NoTrans, 2, 1, 0, []float64{nan, nan}, 1, 0, c, 2)
			want = []float64{0, 0, 7, 0}
			if ul == blas.Lower {
				want = []float64{0, 7, 0, 0}
			}
			if !slices.Equal(c, want) {
				t.Errorf("%s, %c, alpha = beta = 0: got %v, want %v", v.name, ul, c, want)
			}
		}
	}
}

func TestCutTriangleCoversOnce(t *testing.T) {
	for _, kn := range kernels() {
		for _, ul := range triangles {
			for n := 1; n < 500; n += 23 {
				square := matrix{rows: n, columns: n, data: make([]float64, n*n), stride: n, only: ul}
				for _, b := range cutTriangle(ul, n, 1+n%9, kn) {
					part := square.part(b)
					for i := range b.rows {
						from, to := part.span(i)
						for j := from; j < to; j++ {
							part.data[i*n+j]++
						}
					}
				}
				for i := range n {
					for j := range n {
						want := 0.0
						if i == j || j > i == (ul == blas.Upper) {
							want = 1
						}
						if got := square.data[i*n+j]; got != want {
							t.Fatalf("%s, %c, n=%d: element (%d, %d) is covered %v times", kn.name, ul, n, i, j, got)
						}
					}
				}
			}
		}
	}
}

// What a part of a triangle says of itself is what its elements say.
func TestPartsOfTriangles(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 2000 {
		n := 1 + r.IntN(20)
		ul := pick(r, triangles...)
		b := block{row: r.IntN(n), column: r.IntN(n)}
		b.rows, b.columns = 1+r.IntN(n-b.row), 1+r.IntN(n-b.column)
		part := matrix{rows: n, columns: n, data: make([]float64, n*n), stride: n, only: ul}.part(b)
		belong := 0
		for i := range b.rows {
			from, to := part.span(i)
			for j := range b.columns {
				row, column := b.row+i, b.column+j
				in := row == column || column > row == (ul == blas.Upper)
				if in {
					belong++
				}
				if in != (from <= j && j < to) {
					t.Fatalf("%c, n=%d, %+v: row %d spans %d to %d", ul, n, b, i, from, to)
				}
			}
		}
		if part.empty() != (belong == 0) || part.whole() != (belong == b.rows*b.columns) {
			t.Fatalf("%c, n=%d, %+v: %d elements belong, empty %v, whole %v", ul, n, b, belong, part.empty(), part.whole())
		}
	}
}
