//go:build !noasm

package dense

import "golang.org/x/sys/cpu"

var (
	avx512 = kernel{"avx512", 16, []tileFunc{
		avx512Tile1x16, avx512Tile2x16, avx512Tile3x16, avx512Tile4x16,
		avx512Tile5x16, avx512Tile6x16, avx512Tile7x16, avx512Tile8x16,
		avx512Tile9x16, avx512Tile10x16, avx512Tile11x16, avx512Tile12x16,
	}}
	avx2 = kernel{"avx2", 8, []tileFunc{
		avx2Tile1x8, avx2Tile2x8, avx2Tile3x8, avx2Tile4x8, avx2Tile5x8, avx2Tile6x8,
	}}
)

// kernels lists what this processor can run, fastest first.
func kernels() []*kernel {
	var able []*kernel
	if cpu.X86.HasAVX512F && cpu.X86.HasFMA {
		able = append(able, &avx512)
	}
	if cpu.X86.HasAVX2 && cpu.X86.HasFMA {
		able = append(able, &avx2)
	}
	return able
}
