package dense

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

// reportSpeed prints what b.N runs of so many multiply-adds amount to.
func reportSpeed(b *testing.B, multiplyAdds float64) {
	b.ReportMetric(2*multiplyAdds*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFLOP/s")
	b.ReportMetric(0, "ns/op")
}

// contenders are the kernels of this machine on one and on all threads, and
// gonum.
func contenders() map[string]blas.Float64 {
	all := map[string]blas.Float64{"gonum": gonum.Implementation{}}
	for _, kn := range kernels() {
		all[kn.name+"/1"] = implementation{kernel: kn, threads: 1, workPerThread: workPerThread}
		all[kn.name+"/all"] = implementation{kernel: kn, workPerThread: workPerThread}
	}
	return all
}

func BenchmarkDgemm(b *testing.B) {
	shapes := []struct {
		tA, tB  blas.Transpose
		m, n, k int
	}{
		{blas.NoTrans, blas.NoTrans, 12, 2000, 1000},
		{blas.NoTrans, blas.NoTrans, 12, 10000, 1000},
		{blas.NoTrans, blas.NoTrans, 50, 2000, 1000},
		{blas.NoTrans, blas.NoTrans, 50, 10000, 1000},
		{blas.NoTrans, blas.NoTrans, 200, 2000, 1000},
		{blas.NoTrans, blas.NoTrans, 200, 10000, 1000},
		{blas.NoTrans, blas.NoTrans, 1000, 1000, 1000},
		{blas.NoTrans, blas.NoTrans, 200, 200, 200},
		{blas.NoTrans, blas.NoTrans, 64, 64, 64},
		{blas.NoTrans, blas.NoTrans, 54, 128, 100},
		{blas.Trans, blas.NoTrans, 50, 2000, 1000},
		{blas.NoTrans, blas.Trans, 50, 2000, 1000},
		{blas.NoTrans, blas.Trans, 1000, 1000, 1000},
	}
	for _, s := range shapes {
		for name, im := range contenders() {
			b.Run(fmt.Sprintf("%c%c/%dx%dx%d/%s", s.tA, s.tB, s.m, s.n, s.k, name), func(b *testing.B) {
				r := rand.New(rand.NewPCG(1, 2))
				x, y := randomNumbers(s.m*s.k, r), randomNumbers(s.k*s.n, r)
				z := make([]float64, s.m*s.n)
				_, lda := stored(s.tA, s.m, s.k)
				_, ldb := stored(s.tB, s.k, s.n)
				for b.Loop() {
					im.Dgemm(s.tA, s.tB, s.m, s.n, s.k, 1, x, lda, y, ldb, 0, z, s.n)
				}
				reportSpeed(b, float64(s.m)*float64(s.n)*float64(s.k))
			})
		}
	}
}

func BenchmarkDsyrk(b *testing.B) {
	for _, s := range []struct {
		tA   blas.Transpose
		n, k int
	}{
		{blas.NoTrans, 200, 200}, {blas.NoTrans, 1000, 1000},
		{blas.Trans, 50, 1000}, {blas.Trans, 1000, 1000},
	} {
		for name, im := range contenders() {
			b.Run(fmt.Sprintf("%c/%dx%d/%s", s.tA, s.n, s.k, name), func(b *testing.B) {
				x := randomNumbers(s.n*s.k, rand.New(rand.NewPCG(1, 2)))
				z := make([]float64, s.n*s.n)
				_, lda := stored(s.tA, s.n, s.k)
				for b.Loop() {
					im.Dsyrk(blas.Upper, s.tA, s.n, s.k, 1, x, lda, 0, z, s.n)
				}
				reportSpeed(b, float64(s.n)*float64(s.n+1)/2*float64(s.k))
			})
		}
	}
}

func BenchmarkDtrsm(b *testing.B) {
	for _, s := range []struct {
		side blas.Side
		m, n int
	}{
		{blas.Left, 50, 1000}, {blas.Left, 200, 200}, {blas.Left, 1000, 1000},
		{blas.Right, 1000, 50}, {blas.Right, 1000, 1000},
	} {
		for name, im := range contenders() {
			b.Run(fmt.Sprintf("%c/%dx%d/%s", s.side, s.m, s.n, name), func(b *testing.B) {
				size := s.m
				if s.side == blas.Right {
					size = s.n
				}
				r := rand.New(rand.NewPCG(1, 2))
				a := randomTriangle(size, size, r)
				x := randomNumbers(s.m*s.n, r)
				for b.Loop() {
					im.Dtrsm(s.side, blas.Upper, blas.Trans, blas.NonUnit, s.m, s.n, 1, a, size, x, s.n)
				}
				reportSpeed(b, float64(s.m)*float64(s.n)*float64(size+1)/2)
			})
		}
	}
}
