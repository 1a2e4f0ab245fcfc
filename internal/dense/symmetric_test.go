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

func TestCoverTriangleCoversOnce(t *testing.T) {
	for _, ul := range triangles {
		for n := 1; n < 400; n += 7 {
			diagonal, beside := coverTriangle(ul, n)
			times := make([]int, n*n)
			for _, b := range slices.Concat(diagonal, beside) {
				for i := range b.rows {
					for j := range b.columns {
						times[(b.row+i)*n+b.column+j]++
					}
				}
			}
			for _, b := range diagonal {
				if b.row != b.column || b.rows != b.columns || b.rows > diagonalMost {
					t.Fatalf("n=%d: %+v on the diagonal", n, b)
				}
			}
			for i := range n {
				line := inTriangle(ul, i, n)
				for j := range n {
					in := j >= line.column && j < line.column+line.columns
					if in && times[i*n+j] != 1 || times[i*n+j] > 1 {
						t.Fatalf("%c, n=%d: element (%d, %d) is covered %d times", ul, n, i, j, times[i*n+j])
					}
				}
			}
		}
	}
}
