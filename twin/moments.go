package twin

// moments are the cross-products of a sample's columns, summed over the blocks
// of a structure and over the pairs of an orbit. They are all that a
// likelihood needs of the data, so that its cost does not grow with the number
// of families.
type moments struct {
	*layout
	columns int         // y, the constant, covariates
	rows    []float64   // people x columns
	sums    [][]float64 // per structure: orbits x packed(columns); nil where rows take less room
}

// packed is the number of entries of the upper triangle of a p x p matrix.
func packed(p int) int { return p * (p + 1) / 2 }

// newMoments sums the cross-products of rows, people x columns, row by row.
func newMoments(l *layout, rows []float64, columns int) *moments {
	m := &moments{layout: l, columns: columns, rows: rows, sums: make([][]float64, len(l.structures))}
	for i, s := range l.structures {
		if s.orbits*(columns+1) <= 2*len(s.members) {
			m.sums[i] = make([]float64, s.orbits*packed(columns))
			m.sumTo(m.sums[i], s)
		}
	}
	return m
}

// of returns the sums of structure i. Where they are not kept they are
// summed into scratch.
func (m *moments) of(i int, scratch []float64) []float64 {
	if m.sums[i] != nil {
		return m.sums[i]
	}
	s := m.structures[i]
	sums := scratch[:s.orbits*packed(m.columns)]
	clear(sums)
	m.sumTo(sums, s)
	return sums
}

// scratch returns room for the sums of any structure whose sums are not kept.
func (m *moments) scratch() []float64 {
	most := 0
	for i, s := range m.structures {
		if m.sums[i] == nil {
			most = max(most, s.orbits*packed(m.columns))
		}
	}
	return make([]float64, most)
}

// sumTo adds to dst, for each orbit, the symmetric cross-products of all its
// ordered pairs of members, upper triangles row by row.
func (m *moments) sumTo(dst []float64, s *structure) {
	p, k := m.columns, s.size
	w := packed(p)
	for b := range s.blocks() {
		people := s.block(b)
		for i := range k {
			zi := m.rows[int(people[i])*p : int(people[i]+1)*p]
			for j := i; j < k; j++ {
				zj := m.rows[int(people[j])*p : int(people[j]+1)*p]
				sum := dst[int(s.orbit[i*k+j])*w:]
				at := 0
				for a, x := range zi {
					y := zj[a]
					if i == j {
						for _, v := range zj[a:] {
							sum[at] += x * v
							at++
						}
						continue
					}
					for c, v := range zj[a:] {
						sum[at] += x*v + y*zi[a+c]
						at++
					}
				}
			}
		}
	}
}
