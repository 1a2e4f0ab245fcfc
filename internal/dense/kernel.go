package dense

// blockDepth is how many terms of a sum are added up before the sum is added
// to C. It is part of the promise of equal bits, so it is the same for every
// kernel and never chosen by the machine.
const blockDepth = 256

// tileFunc adds to a tile of C, whose rows are cStride numbers apart, the
// product of a panel of A and as many columns of B as the tile is wide. The
// panel of A holds, for each of depth >= 1 terms, one number a row. Row l of B
// starts l*bStride numbers after b.
type tileFunc func(depth int, a, b *float64, bStride int, c *float64, cStride int)

// kernel is one family of tile functions.
type kernel struct {
	name  string
	width int        // columns of a tile
	tiles []tileFunc // tiles[h-1] is for h rows
}

// height is the number of rows of the highest tile.
func (kn *kernel) height() int { return len(kn.tiles) }

// fastest returns the best kernel of this machine, or nil.
func fastest() *kernel {
	if able := kernels(); len(able) > 0 {
		return able[0]
	}
	return nil
}
