package dense

// Sizes of what is copied at a time. They decide speed and no bits.
const (
	// blockRows x blockDepth numbers of A fit the second cache.
	blockRows = 192
	// blockColumns x blockDepth numbers of B fit a thread's part of the third.
	blockColumns = 1024
	// largestTile is the number of sums of the largest tile of any kernel.
	largestTile = 12 * 16
)

// inPlace reports whether the columns of an operand are better read where they
// are than copied. They mostly are. But when rows lie a multiple of 4096 bytes
// apart, all terms of a strip fall on the same few lines of the first cache,
// and each of many panels of A would fetch them from the second.
func inPlace(b operand, rows, height int) bool {
	return !b.transposed && (b.stride%512 != 0 || rows <= 4*height)
}

// panels are rows of A in the order in which a kernel reads them: panel by
// panel, term by term, row by row. The rows are spread evenly, so that no panel
// is padded: the first tall panels have one row more than the others.
type panels struct {
	data              []float64
	depth             int
	count, tall, rows int // rows of a panel that is not tall
}

func (p panels) height(panel int) int {
	if panel < p.tall {
		return p.rows + 1
	}
	return p.rows
}

// strips are columns of B as wide as a tile: packed term by term, or, but for
// the last one when it is narrower, where they are.
type strips struct {
	data           []float64
	stride         int // between terms
	step           int // between strips
	columns, width int
	last           []float64 // packed last strip where the others are in place, or nil
}

func (r strips) count() int { return ceilDiv(r.columns, r.width) }

// at returns the start of a strip and the distance of its terms.
func (r strips) at(strip int) (*float64, int) {
	if r.last != nil && strip == r.count()-1 {
		return &r.last[0], r.width
	}
	return &r.data[strip*r.step], r.stride
}

// packRows copies alpha times the first rows and terms of an m x k operand.
func (s *scratch) packRows(a operand, depth, rows, height int, alpha float64) panels {
	count := ceilDiv(rows, height)
	p := panels{depth: depth, count: count, tall: rows % count, rows: rows / count}
	p.data = grow(&s.rows, rows*depth)
	done := 0
	for panel := range count {
		h := p.height(panel)
		dst := p.data[done*depth : (done+h)*depth]
		if a.transposed {
			packAcross(dst, a.data[done:], a.stride, depth, h, h)
		} else {
			packAlong(dst, a.data[done*a.stride:], a.stride, depth, h, h)
		}
		done += h
	}
	if alpha != 1 {
		for i := range p.data {
			p.data[i] *= alpha
		}
	}
	return p
}

// packColumns copies the first terms and columns of a k x n operand, or only
// the narrow last strip when the others are to be read in place.
func (s *scratch) packColumns(b operand, depth, columns, width int, inPlace bool) strips {
	full := columns / width
	if inPlace {
		r := strips{data: b.data, stride: b.stride, step: width, columns: columns, width: width}
		if narrow := columns - full*width; narrow > 0 {
			r.last = grow(&s.columns, width*depth)
			packAcross(r.last, b.data[full*width:], b.stride, depth, narrow, width)
		}
		return r
	}
	r := strips{stride: width, step: width * depth, columns: columns, width: width}
	r.data = grow(&s.columns, r.count()*r.step)
	for strip := range r.count() {
		dst := r.data[strip*r.step : (strip+1)*r.step]
		within := min(width, columns-strip*width)
		if b.transposed {
			packAlong(dst, b.data[strip*width*b.stride:], b.stride, depth, within, width)
		} else {
			packAcross(dst, b.data[strip*width:], b.stride, depth, within, width)
		}
	}
	return r
}

// packAcross packs vectors that lie side by side in memory, term l of all of
// them at src[l*stride:], into groups of so many numbers a term; numbers beyond
// the vectors are 0.
func packAcross(dst, src []float64, stride, depth, vectors, group int) {
	switch {
	case vectors == 16 && group == 16:
		for l := range depth {
			*(*[16]float64)(dst[l*16:]) = *(*[16]float64)(src[l*stride:])
		}
	case vectors == 8 && group == 8:
		for l := range depth {
			*(*[8]float64)(dst[l*8:]) = *(*[8]float64)(src[l*stride:])
		}
	default:
		for l := range depth {
			to := dst[l*group : (l+1)*group]
			clear(to[copy(to, src[l*stride:l*stride+vectors]):])
		}
	}
}

// packAlong packs vectors that lie one behind the other, vector i at
// src[i*stride:], as packAcross does. Four at a time read four streams and
// write whole stretches.
func packAlong(dst, src []float64, stride, depth, vectors, group int) {
	if vectors < group {
		clear(dst)
	}
	i := 0
	for ; i+4 <= vectors; i += 4 {
		v0 := src[i*stride:][:depth]
		v1 := src[(i+1)*stride:][:depth]
		v2 := src[(i+2)*stride:][:depth]
		v3 := src[(i+3)*stride:][:depth]
		at := i
		for l := range depth {
			to := dst[at : at+4 : at+4]
			to[0], to[1], to[2], to[3] = v0[l], v1[l], v2[l], v3[l]
			at += group
		}
	}
	for ; i < vectors; i++ {
		at := i
		for _, v := range src[i*stride:][:depth] {
			dst[at] = v
			at += group
		}
	}
}

// unpackAlong is packAlong backwards, for groups without room beyond the
// vectors.
func unpackAlong(dst, src []float64, stride, depth, vectors int) {
	i := 0
	for ; i+4 <= vectors; i += 4 {
		v0 := dst[i*stride:][:depth]
		v1 := dst[(i+1)*stride:][:depth]
		v2 := dst[(i+2)*stride:][:depth]
		v3 := dst[(i+3)*stride:][:depth]
		at := i
		for l := range depth {
			from := src[at : at+4 : at+4]
			v0[l], v1[l], v2[l], v3[l] = from[0], from[1], from[2], from[3]
			at += vectors
		}
	}
	for ; i < vectors; i++ {
		at := i
		v := dst[i*stride:][:depth]
		for l := range v {
			v[l] = src[at]
			at += vectors
		}
	}
}
