package dense

import (
	"runtime"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/gonum"
)

//go:generate go -C generate_amd64 run . -out ../tiles_amd64.s -stubs ../tiles_amd64.go -pkg dense
//go:generate go -C generate_arm64 run . ../tiles_arm64.s ../tiles_arm64.go

// Default returns the implementation of BLAS that this machine runs fastest;
// large products use up to GOMAXPROCS goroutines. It is safe for use by
// several goroutines.
func Default() blas.Float64 { return shared }

// Single returns Default for callers that are parallel already: no routine
// with a kernel starts a goroutine, and the results have the same bits. Where
// no kernel applies it is gonum's own, which starts goroutines for large
// products all the same.
func Single() blas.Float64 { return alone }

// Kernel names what computes products on this machine: avx512, avx2, neon, or
// gonum where no kernel applies.
func Kernel() string {
	if best := fastest(); best != nil {
		return best.name
	}
	return "gonum"
}

// The processor does not change while the program runs: chosen once.
var shared, alone = choose(0), choose(1)

func choose(threads int) blas.Float64 {
	best := fastest()
	if best == nil {
		return gonum.Implementation{}
	}
	return implementation{kernel: best, threads: threads, workPerThread: workPerThread, smallWork: smallWork}
}

// implementation is gonum's BLAS with three routines of level 3 replaced.
type implementation struct {
	gonum.Implementation
	kernel        *kernel
	threads       int // at most so many goroutines; 0 is GOMAXPROCS
	workPerThread int // multiply-adds that make a goroutine worth starting
	smallWork     int // multiply-adds up to which numbers are computed one by one
}

var _ blas.Float64 = implementation{}

// workers returns how many goroutines a job of so many multiply-adds is worth.
func (im implementation) workers(work int) int {
	limit := im.threads
	if limit == 0 {
		limit = runtime.GOMAXPROCS(0)
	}
	return max(1, min(limit, work/im.workPerThread))
}
