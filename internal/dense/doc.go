// Package dense is the linear algebra that the statistical packages call when
// speed decides: matrix products, symmetric products and triangular systems
// behind gonum's BLAS interface.
//
// Nothing here is registered for the whole process. A package asks for
// Default, or Single when its own goroutines already keep the processor busy,
// and calls level-3 routines with row-major slices; importing kindwell's
// packages therefore changes nothing for another program's gonum. All
// arguments, panics and their texts are gonum's. Routines other than Dgemm,
// Dsyrk and Dtrsm are gonum's own.
//
// # How
//
// C is cut into tiles whose sums fit the vector registers. The rows of A are
// copied into panels of one tile's height, the columns of B into panels of its
// width, and a kernel in assembly multiplies two panels (Goto & van de Geijn
// 2008, Anatomy of high-performance matrix multiplication). The kernel is
// chosen when the program runs: AVX-512 with tiles of 12 x 16, AVX2 with 6 x 8,
// NEON with 6 x 8. Where none applies, and with the build tag noasm, Default
// and Single are plain gonum.
//
// The assembly is generated (go generate) and committed.
//
// # Same bits
//
// With a kernel, element (i, j) of alpha*A*B + beta*C is
//
//	c = beta * c            unless beta is 1; 0 when beta is 0
//	s = 0, then s = fma(alpha*a_il, b_lj, s) for l = 0 to 255; c = c + s
//	the same for l = 256 to 511, and so on to k
//
// whichever kernel computes it. Its bits therefore depend on row i of A, column
// j of B, alpha, beta and c alone: not on the number of threads, not on the
// other rows and columns of the same call, not on the kernel. Dsyrk gives the
// bits of the triangle of the same Dgemm. Dtrsm works column by column (row by
// row on the right side), and its bits depend on that column, alpha and the
// triangle alone, on one type of processor. Plain gonum adds in another order:
// its results are the same for any number of threads, but not these.
//
// # Not a number
//
// A product of zero and NaN or infinity is NaN here, whichever factor is zero.
// Gonum leaves out terms in which A is zero and gets a number. Zero weights do
// not hide missing values: whoever calls with NaN in A or B gets NaN in the
// rows or columns that meet it, and Dtrsm likewise. As in gonum, beta = 0 overwrites C whatever it
// holds, alpha = 0 reads neither A nor B, and Dsyrk reads and writes one
// triangle of C only.
package dense
