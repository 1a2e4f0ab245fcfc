package dense

import (
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"runtime"
	"strings"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

var (
	transposes = []blas.Transpose{blas.NoTrans, blas.Trans, blas.ConjTrans}
	triangles  = []blas.Uplo{blas.Upper, blas.Lower}
)

// variant is one way of computing that must give the same bits as all others.
type variant struct {
	name string
	blas.Float64
}

// variants are the kernels of this machine on 1, 2, 3 and 8 threads, even for
// products that would not be worth a thread, and number by number.
func variants(t *testing.T) []variant {
	t.Helper()
	var all []variant
	for _, kn := range kernels() {
		for _, threads := range []int{1, 2, 3, 8} {
			all = append(all, variant{
				fmt.Sprintf("%s on %d", kn.name, threads),
				implementation{kernel: kn, threads: threads, workPerThread: 1},
			})
		}
	}
	if all == nil {
		t.Skip("no kernel applies: products are gonum's")
	}
	return append(all, variant{"number by number", implementation{kernel: fastest(), workPerThread: 1, smallWork: math.MaxInt}})
}

func randomNumbers(n int, r *rand.Rand) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = r.NormFloat64()
	}
	return x
}

// element returns where element (i, j) of an operand stands.
func element(t blas.Transpose, stride, i, j int) int {
	if t == blas.NoTrans {
		return i*stride + j
	}
	return j*stride + i
}

func pick[T any](r *rand.Rand, from ...T) T { return from[r.IntN(len(from))] }

// firstDifference reports the first difference in the bits of two slices, -1 when there is none.
func firstDifference(a, b []float64) int {
	for i := range a {
		if math.Float64bits(a[i]) != math.Float64bits(b[i]) {
			return i
		}
	}
	return -1
}

func TestDefaultTakesTheFastestKernel(t *testing.T) {
	if fastest() == nil {
		if _, plain := Default().(gonum.Implementation); !plain || Kernel() != "gonum" {
			t.Errorf("no kernel, but Default is %T and Kernel %q", Default(), Kernel())
		}
		return
	}
	all, one := Default().(implementation), Single().(implementation)
	if all.kernel != kernels()[0] || one.kernel != all.kernel || Kernel() != all.kernel.name {
		t.Errorf("Default uses %s, Single %s, Kernel says %q, the fastest is %s",
			all.kernel.name, one.kernel.name, Kernel(), kernels()[0].name)
	}
	const large = 1 << 30
	if got := all.workers(large); got != runtime.GOMAXPROCS(0) {
		t.Errorf("Default uses %d threads of %d", got, runtime.GOMAXPROCS(0))
	}
	if got := all.workers(200 * 200 * 200 / 2); got != 1 {
		t.Errorf("Default starts %d threads for a small product", got)
	}
	if got := one.workers(large); got != 1 {
		t.Errorf("Single uses %d threads", got)
	}
}

// A processor without AVX-512, or without AVX2 too, is played by GODEBUG in a
// process of its own.
func TestKernelFollowsTheProcessor(t *testing.T) {
	const asked = "KINDWELL_TEST_PRINT_KERNEL"
	if os.Getenv(asked) != "" {
		fmt.Printf("kernel=%s;", Kernel())
		return
	}
	if runtime.GOARCH != "amd64" || len(kernels()) < 2 {
		t.Skip("this machine has no second kernel")
	}
	program, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	for setting, want := range map[string]string{
		"cpu.avx512f=off":              "avx2",
		"cpu.avx512f=off,cpu.avx2=off": "gonum",
		"cpu.fma=off":                  "gonum",
	} {
		run := exec.Command(program, "-test.run=^TestKernelFollowsTheProcessor$", "-test.v")
		run.Env = append(os.Environ(), "GODEBUG="+setting, asked+"=1")
		out, err := run.CombinedOutput()
		if err != nil || !strings.Contains(string(out), "kernel="+want+";") {
			t.Errorf("%s: want %s, got %v:\n%s", setting, want, err, out)
		}
	}
}
