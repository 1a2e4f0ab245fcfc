package twin

import (
	"math"
	"testing"

	"kindwell/internal/stream"
)

// tableKin is a Kin read from a table of ids, by rules of its own: the second
// route to what Pedigree says. Homes are families' children.
type tableKin struct {
	family, mother, father, twinSet []int // -1 for none
	mz, male                        []bool
	memo                            map[[2]int]float64
}

func (k *tableKin) add(family, mother, father, twinSet int, mz, male bool) int {
	k.family, k.mother, k.father = append(k.family, family), append(k.mother, mother), append(k.father, father)
	k.twinSet, k.mz, k.male = append(k.twinSet, twinSet), append(k.mz, mz), append(k.male, male)
	return len(k.family) - 1
}

func (k *tableKin) same(i, j int) bool {
	return i == j || k.twinSet[i] >= 0 && k.twinSet[i] == k.twinSet[j] && k.mz[i]
}

func (k *tableKin) Family(i int) int { return k.family[i] }
func (k *tableKin) Len() int         { return len(k.family) }
func (k *tableKin) Mother(i int) int { return k.mother[i] }
func (k *tableKin) Father(i int) int { return k.father[i] }

// Kinship goes up through the parents of the deeper person. Parents are in the
// table or have ids beyond it.
func (k *tableKin) Kinship(i, j int) float64 { return k.twiceKinship(i, j) }

// People beyond the table are founders.
func (k *tableKin) parents(i int) [2]int {
	if i >= len(k.family) {
		return [2]int{-1, -1}
	}
	return [2]int{k.mother[i], k.father[i]}
}

func (k *tableKin) twiceKinship(i, j int) float64 {
	switch {
	case i < 0 || j < 0:
		return 0
	case i == j || i < len(k.family) && j < len(k.family) && k.same(i, j):
		return 1
	}
	if k.memo == nil {
		k.memo = map[[2]int]float64{}
	}
	key := [2]int{min(i, j), max(i, j)}
	if v, ok := k.memo[key]; ok {
		return v
	}
	pi, pj := k.parents(i), k.parents(j)
	var v float64
	switch {
	case pi[0] < 0 && pj[0] < 0:
	case pj[0] < 0 || (pi[0] >= 0 && k.depth(i) > k.depth(j)):
		v = (k.twiceKinship(pi[0], j) + k.twiceKinship(pi[1], j)) / 2
	default:
		v = (k.twiceKinship(i, pj[0]) + k.twiceKinship(i, pj[1])) / 2
	}
	k.memo[key] = v
	return v
}

func (k *tableKin) depth(i int) int {
	p := k.parents(i)
	if p[0] < 0 {
		return 0
	}
	return 1 + max(k.depth(p[0]), k.depth(p[1]))
}

func (k *tableKin) SharedHome(i, j int) bool {
	return i == j || k.family[i] == k.family[j] && k.mother[i] >= 0 && k.mother[j] >= 0 && k.depth(i) == k.depth(j)
}

func (k *tableKin) Dominance(i, j int) float64 {
	if i == j {
		return 1
	}
	pi, pj := k.parents(i), k.parents(j)
	if k.same(i, j) {
		return 1
	}
	return (k.twiceKinship(pi[0], pj[0])*k.twiceKinship(pi[1], pj[1]) +
		k.twiceKinship(pi[0], pj[1])*k.twiceKinship(pi[1], pj[0])) / 4
}

func (k *tableKin) Relation(i, j int) Relation {
	twins := k.twinSet[i] >= 0 && k.twinSet[i] == k.twinSet[j]
	shared := 0
	for _, a := range k.parents(i) {
		for _, b := range k.parents(j) {
			if a >= 0 && a == b {
				shared++
			}
		}
	}
	isParent := func(i, j int) bool { p := k.parents(j); return p[0] == i || p[1] == i }
	switch {
	case i == j:
		return Unrelated
	case twins && k.mz[i]:
		return MZ
	case twins && k.male[i] == k.male[j]:
		return DZSameSex
	case twins:
		return DZOppositeSex
	case shared == 2:
		return FullSibling
	case shared == 1:
		return HalfSibling
	case isParent(i, j) || isParent(j, i):
		return ParentChild
	}
	for c := range k.family {
		if isParent(i, c) && isParent(j, c) {
			return Spouse
		}
	}
	if k.twiceKinship(i, j) > 0 {
		return OtherKin
	}
	return Unrelated
}

// founder returns the id of a parent outside the table. Room for n people is
// left before it.
func founder(n, i int) int { return n + i }

// sibships are families of so many children each. The first two are MZ twins
// ('m'), twins of both sexes ('d'), or siblings like the others ('s').
func sibships(kinds []byte, sizes []int) *tableKin {
	k := &tableKin{}
	n := 0
	for _, s := range sizes {
		n += s
	}
	for f, size := range sizes {
		for c := range size {
			set := -1
			if c < 2 && kinds[f] != 's' {
				set = f
			}
			k.add(f, founder(n, 2*f), founder(n, 2*f+1), set, kinds[f] == 'm' && set >= 0, c%2 == 1 && kinds[f] != 'm')
		}
	}
	return k
}

// everyone returns 0..n-1.
func everyone(n int) []int { return upTo(n) }

// exactPairs returns n values for each twin of a pair whose means are 0 and
// whose variances and covariance with divisor n are exactly as given (to
// rounding).
func exactPairs(t testing.TB, n int, var1, cov, var2 float64, seed uint64) (first, second []float64) {
	t.Helper()
	s := stream.New(seed, "exact pairs")
	u, v := make([]float64, n), make([]float64, n)
	for i := range n {
		u[i], v[i] = s.Norm(), s.Norm()
	}
	_, d := centre(u)
	for i := range u {
		u[i] /= d
	}
	centre(v)
	project(v, [][]float64{u})
	_, d = centre(v)
	for i := range v {
		v[i] /= d
	}
	first, second = make([]float64, n), make([]float64, n)
	b := cov / math.Sqrt(var1)
	rest := math.Sqrt(var2 - b*b)
	for i := range n {
		first[i] = math.Sqrt(var1) * u[i]
		second[i] = b*u[i] + rest*v[i]
	}
	return first, second
}

// twinPairs is a sample of MZ and DZ pairs with the given exact covariances
// {var1, cov, var2}, all means 0.
func twinPairs(t testing.TB, nMZ, nDZ int, mz, dz [3]float64) *Sample {
	t.Helper()
	var kinds []byte
	var sizes []int
	var y []float64
	for _, g := range []struct {
		kind byte
		n    int
		m    [3]float64
	}{{'m', nMZ, mz}, {'d', nDZ, dz}} {
		a, b := exactPairs(t, g.n, g.m[0], g.m[1], g.m[2], uint64(g.kind))
		for i := range g.n {
			kinds, sizes, y = append(kinds, g.kind), append(sizes, 2), append(y, a[i], b[i])
		}
	}
	k := sibships(kinds, sizes)
	s, err := NewSample(k, everyone(len(y)), y, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func mustFit(t testing.TB, s *Sample, m Model) *Fit {
	t.Helper()
	f, err := s.Fit(m, FitOptions{})
	if err != nil {
		t.Fatalf("model %s: %v", m, err)
	}
	if !f.Converged {
		t.Fatalf("model %s did not converge", m)
	}
	return f
}

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s: got %.12g, want %.12g within %g", what, got, want, tol)
	}
}
