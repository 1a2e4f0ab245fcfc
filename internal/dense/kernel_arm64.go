//go:build !noasm

package dense

var neon = kernel{"neon", 8, []tileFunc{
	neonTile1x8, neonTile2x8, neonTile3x8, neonTile4x8, neonTile5x8, neonTile6x8,
}}

// kernels lists what this processor can run: every 64-bit ARM has NEON.
func kernels() []*kernel { return []*kernel{&neon} }
