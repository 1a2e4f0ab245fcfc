// Command generate_amd64 writes the tile kernels of package dense for amd64:
// one assembly function for every height of a tile, for AVX2 (8 columns) and
// for AVX-512 (16 columns).
//
// It is run by go generate in the parent folder and is a module of its own, so
// that its tools are no requirement of kindwell.
package main

import (
	"fmt"

	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

const (
	bytes = 8 // of a float64
	// unroll is how many terms of the sums one round of the main loop adds.
	unroll = 4
	// vectors is the width of a tile in vector registers.
	vectors = 2
)

// set is a vector instruction set as the kernels need it.
type set struct {
	name   string
	lanes  int // float64s in a vector
	height int // rows of the highest tile: all sums stay in registers
	vector func() reg.VecVirtual
	zero   func(v reg.VecVirtual)
}

func main() {
	sets := []set{
		{"avx2", 4, 6, YMM, func(v reg.VecVirtual) { VXORPD(v, v, v) }},
		{"avx512", 8, 12, ZMM, func(v reg.VecVirtual) { VPXORQ(v, v, v) }},
	}
	ConstraintExpr("amd64,!noasm")
	for _, s := range sets {
		for rows := 1; rows <= s.height; rows++ {
			tile(s, rows)
		}
	}
	Generate()
}

// tile writes C += A*B for a tile of so many rows. A is packed: depth groups
// of one number a row. A row of B has the tile's columns side by side and the
// next one is bStride numbers on; rows of C are cStride numbers apart.
//
// Every sum starts at zero and takes its terms in order, each by one fused
// multiply-add; the finished sum is added to C. Package dense promises this
// order, so a change here changes results.
func tile(s set, rows int) {
	columns := vectors * s.lanes
	name := fmt.Sprintf("%sTile%dx%d", s.name, rows, columns)
	TEXT(name, NOSPLIT, "func(depth int, a, b *float64, bStride int, c *float64, cStride int)")
	Doc(fmt.Sprintf("%s adds to a tile of C of height %d and width %d.", name, rows, columns))
	Pragma("noescape")

	depth := Load(Param("depth"), GP64())
	a := Load(Param("a"), GP64())
	b := Load(Param("b"), GP64())
	bStride := Load(Param("bStride"), GP64())
	c := Load(Param("c"), GP64())
	cStride := Load(Param("cStride"), GP64())
	SHLQ(Imm(3), bStride) // strides in bytes
	SHLQ(Imm(3), cStride)

	sums := make([][vectors]reg.VecVirtual, rows)
	for i := range sums {
		for j := range sums[i] {
			sums[i][j] = s.vector()
			s.zero(sums[i][j])
		}
	}
	// term adds one term to every sum; at is its distance from a's start.
	term := func(at int) {
		var right [vectors]reg.VecVirtual
		for j := range right {
			right[j] = s.vector()
			VMOVUPD(Mem{Base: b, Disp: j * s.lanes * bytes}, right[j])
		}
		ADDQ(bStride, b)
		for i := range rows {
			left := s.vector()
			VBROADCASTSD(Mem{Base: a, Disp: (at*rows + i) * bytes}, left)
			for j := range right {
				VFMADD231PD(right[j], left, sums[i][j])
			}
		}
	}

	// C is needed when the sums are done: ask for it now.
	ahead := GP64()
	MOVQ(c, ahead)
	for i := range rows {
		for j := range vectors {
			PREFETCHT0(Mem{Base: ahead, Disp: j * s.lanes * bytes})
		}
		if i < rows-1 {
			ADDQ(cStride, ahead)
		}
	}

	rounds := GP64()
	MOVQ(depth, rounds)
	SHRQ(Imm(2), rounds) // depth / unroll
	JZ(LabelRef("rest"))
	Label("round")
	for at := range unroll {
		term(at)
	}
	ADDQ(I32(unroll*rows*bytes), a)
	DECQ(rounds)
	JNZ(LabelRef("round"))

	Label("rest")
	ANDQ(Imm(unroll-1), depth)
	JZ(LabelRef("store"))
	Label("single")
	term(0)
	ADDQ(I32(rows*bytes), a)
	DECQ(depth)
	JNZ(LabelRef("single"))

	Label("store")
	for i := range rows {
		for j := range vectors {
			place := Mem{Base: c, Disp: j * s.lanes * bytes}
			VADDPD(place, sums[i][j], sums[i][j])
			VMOVUPD(sums[i][j], place)
		}
		if i < rows-1 {
			ADDQ(cStride, c)
		}
	}
	VZEROUPPER()
	RET()
}
