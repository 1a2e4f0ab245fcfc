package dense

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

// call is one product with everything that decides its result.
type call struct {
	tA, tB        blas.Transpose
	m, n, k       int
	alpha, beta   float64
	a, b, c       []float64
	lda, ldb, ldc int
}

// randomCall draws transposes, factors and strides wider than the matrices.
func randomCall(m, n, k int, r *rand.Rand) call {
	p := call{
		tA: pick(r, transposes...), tB: pick(r, transposes...), m: m, n: n, k: k,
		alpha: pick(r, 1, -1, .7), beta: pick(r, 0, 1, -.3),
	}
	aRows, aColumns := stored(p.tA, m, k)
	bRows, bColumns := stored(p.tB, k, n)
	p.lda, p.ldb, p.ldc = aColumns+r.IntN(5), bColumns+r.IntN(5), n+r.IntN(5)
	p.a = randomNumbers((aRows-1)*p.lda+aColumns, r)
	p.b = randomNumbers((bRows-1)*p.ldb+bColumns, r)
	p.c = randomNumbers((m-1)*p.ldc+n, r)
	return p
}

// by returns C, padding included, as computed by an implementation.
func (p call) by(im blas.Float64) []float64 {
	c := slices.Clone(p.c)
	im.Dgemm(p.tA, p.tB, p.m, p.n, p.k, p.alpha, p.a, p.lda, p.b, p.ldb, p.beta, c, p.ldc)
	return c
}

// asPromised computes C number by number as the package comment has it.
func (p call) asPromised() []float64 {
	c := slices.Clone(p.c)
	for i := range p.m {
		for j := range p.n {
			v := c[i*p.ldc+j]
			switch p.beta {
			case 0:
				v = 0
			case 1:
			default:
				v *= p.beta
			}
			for from := 0; from < p.k; from += 256 {
				s := 0.0
				for l := from; l < min(from+256, p.k); l++ {
					s = math.FMA(p.alpha*p.a[element(p.tA, p.lda, i, l)], p.b[element(p.tB, p.ldb, l, j)], s)
				}
				v += s
			}
			c[i*p.ldc+j] = v
		}
	}
	return c
}

// bound is how far apart two computations of element (i, j) in any order can
// be: (k+2) roundings each, on the sum of absolute terms (Higham 2002, Accuracy
// and stability of numerical algorithms, section 3.5).
func (p call) bound(i, j int) float64 {
	size := math.Abs(p.beta * p.c[i*p.ldc+j])
	for l := range p.k {
		size += math.Abs(p.alpha * p.a[element(p.tA, p.lda, i, l)] * p.b[element(p.tB, p.ldb, l, j)])
	}
	return 2 * float64(p.k+2) * 0x1p-53 * size
}

func randomShapes(r *rand.Rand) [][3]int {
	shapes := [][3]int{
		{1, 1, 1}, {1, 17, 3}, {17, 1, 3}, {12, 16, 256}, {13, 17, 257}, {6, 8, 512}, {7, 9, 513},
		{96, 33, 40}, {97, 33, 40}, {200, 530, 300}, {193, 16, 5}, {400, 24, 20}, {3, 1100, 2},
	}
	for range 60 {
		shapes = append(shapes, [3]int{1 + r.IntN(70), 1 + r.IntN(90), 1 + r.IntN(600)})
	}
	return shapes
}

// All kernels and thread counts give the promised bits, write nothing beside C
// and change neither A nor B.
func TestDgemmGivesThePromisedBits(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, s := range randomShapes(r) {
		p := randomCall(s[0], s[1], s[2], r)
		a, b, want := slices.Clone(p.a), slices.Clone(p.b), p.asPromised()
		for _, v := range variants(t) {
			if at := firstDifference(p.by(v), want); at >= 0 {
				t.Fatalf("%s, %d x %d x %d, %c%c: element (%d, %d) differs",
					v.name, p.m, p.n, p.k, p.tA, p.tB, at/p.ldc, at%p.ldc)
			}
		}
		if !slices.Equal(a, p.a) || !slices.Equal(b, p.b) {
			t.Fatalf("%d x %d x %d changed an argument", p.m, p.n, p.k)
		}
	}
}

func TestDgemmAgainstGonum(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for _, s := range randomShapes(r) {
		p := randomCall(s[0], s[1], s[2], r)
		got, want := p.by(Default()), p.by(gonum.Implementation{})
		for i := range p.m {
			for j := range p.n {
				at := i*p.ldc + j
				if off := math.Abs(got[at] - want[at]); !(off <= p.bound(i, j)) {
					t.Fatalf("%d x %d x %d: element (%d, %d) is %v, gonum %v", p.m, p.n, p.k, i, j, got[at], want[at])
				}
			}
		}
	}
}

// An element does not depend on what else the call computes: a product in
// blocks of columns, as arrangements come, has the bits of the whole.
func TestDgemmInBlocksIsTheWhole(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	p := randomCall(50, 331, 300, r)
	p.tB, p.ldb = blas.NoTrans, 331
	p.b = randomNumbers(300*331, r)
	for _, v := range variants(t) {
		whole, c := p.by(v), slices.Clone(p.c)
		for from := 0; from < p.n; from += 37 {
			v.Dgemm(p.tA, p.tB, p.m, min(37, p.n-from), p.k, p.alpha, p.a, p.lda, p.b[from:], p.ldb, p.beta, c[from:], p.ldc)
		}
		if at := firstDifference(c, whole); at >= 0 {
			t.Errorf("%s: element (%d, %d) differs", v.name, at/p.ldc, at%p.ldc)
		}
	}
}

// Rows of B that lie 4096 bytes apart are copied where others are read in place.
func TestDgemmWithCrowdedRows(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for _, n := range []int{512, 509} {
		p := randomCall(60, n, 270, r)
		p.tB, p.ldb = blas.NoTrans, 512
		p.b = randomNumbers(270*512, r)
		want := p.asPromised()
		for _, v := range variants(t) {
			if at := firstDifference(p.by(v), want); at >= 0 {
				t.Errorf("%s, n=%d: element (%d, %d) differs", v.name, n, at/p.ldc, at%p.ldc)
			}
		}
	}
}

func TestDgemmNotANumber(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	tests := []struct {
		name        string
		alpha, beta float64
		a, b, c     float64
		want        float64
	}{
		{"zero times NaN", 1, 1, 0, nan, 5, nan},
		{"NaN times zero", 1, 1, nan, 0, 5, nan},
		{"zero times infinity", 1, 1, 0, inf, 5, nan},
		{"beta 0 overwrites NaN", 1, 0, 2, 3, nan, 6},
		{"beta 0 overwrites infinity", 1, 0, 2, 3, inf, 6},
		{"beta keeps NaN", 1, .5, 2, 3, nan, nan},
		{"alpha 0 reads no factor", 0, 2, nan, inf, 5, 10},
		{"alpha 0 and beta 0", 0, 0, nan, nan, nan, 0},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			for _, v := range variants(t) {
				c := []float64{test.c}
				v.Dgemm(blas.NoTrans, blas.NoTrans, 1, 1, 1, test.alpha, []float64{test.a}, 1, []float64{test.b}, 1, test.beta, c, 1)
				if c[0] != test.want && !(math.IsNaN(c[0]) && math.IsNaN(test.want)) {
					t.Errorf("%s: got %v, want %v", v.name, c[0], test.want)
				}
			}
		})
	}
}

// NaN stays in the rows of A and columns of B that hold it.
func TestDgemmNotANumberSpreadsNoFurther(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	const m, n, k = 14, 35, 20
	a, b := randomNumbers(m*k, r), randomNumbers(k*n, r)
	a[3*k+5], b[7*n+33] = math.NaN(), math.NaN()
	for _, v := range variants(t) {
		c := make([]float64, m*n)
		v.Dgemm(blas.NoTrans, blas.NoTrans, m, n, k, 1, a, k, b, n, 0, c, n)
		for i := range m {
			for j := range n {
				if want := i == 3 || j == 33; math.IsNaN(c[i*n+j]) != want {
					t.Fatalf("%s: element (%d, %d) is %v", v.name, i, j, c[i*n+j])
				}
			}
		}
	}
}

// Sums that are no multiple of anything: no terms, one term more than a block.
func TestDgemmWithoutTerms(t *testing.T) {
	for _, v := range variants(t) {
		c := []float64{1, 2, 9, 3, 4}
		v.Dgemm(blas.NoTrans, blas.NoTrans, 2, 2, 0, 1, []float64{7}, 1, nil, 2, 3, c, 3)
		if want := []float64{3, 6, 9, 9, 12}; !slices.Equal(c, want) {
			t.Errorf("%s: got %v, want %v", v.name, c, want)
		}
		v.Dgemm(blas.NoTrans, blas.NoTrans, 0, 0, 5, 1, nil, 5, nil, 1, 0, nil, 1)
	}
}

func TestCutCoversOnce(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	for _, kn := range kernels() {
		for range 300 {
			whole := block{r.IntN(9), r.IntN(9), 1 + r.IntN(300), 1 + r.IntN(300)}
			threads := 1 + r.IntN(16)
			times := make([]int, whole.rows*whole.columns)
			for _, b := range cut(whole, threads, kn) {
				for i := range b.rows {
					for j := range b.columns {
						times[(b.row-whole.row+i)*whole.columns+b.column-whole.column+j]++
					}
				}
			}
			if slices.Min(times) != 1 || slices.Max(times) != 1 {
				t.Fatalf("%s on %d threads: %+v is covered %d to %d times", kn.name, threads, whole, slices.Min(times), slices.Max(times))
			}
		}
	}
}

// Large products keep every thread busy: no thread has more than an eighth
// above its even share.
func TestCutIsEven(t *testing.T) {
	for _, kn := range kernels() {
		for _, shape := range [][2]int{{12, 2000}, {50, 10000}, {1000, 1000}, {5000, 12}, {200, 2000}} {
			for _, threads := range []int{2, 3, 4, 8} {
				parts := cut(block{0, 0, shape[0], shape[1]}, threads, kn)
				largest := 0
				for _, b := range parts {
					largest = max(largest, b.rows*b.columns)
				}
				most := ceilDiv(len(parts), threads) * largest
				if even := shape[0] * shape[1] / threads; most > even+even/8 {
					t.Errorf("%s, %v on %d threads: %d parts, the busiest thread has %d of an even %d",
						kn.name, shape, threads, len(parts), most, even)
				}
			}
		}
	}
}
