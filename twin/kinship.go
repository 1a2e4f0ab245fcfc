package twin

// Kinship is K of the variance model: twice the coefficient of kinship of two
// people, the share of their genomes that is equal by descent. It is 1 for a
// person and themselves or an identical twin (1 + F with inbreeding F), 0.5
// for full siblings, fraternal twins, twins of unknown zygosity, parent and
// child, 0.25 for half-siblings and the children of identical twins, 0.125 for
// first cousins, 0 for people without known common ancestors. Identical twins
// are one genome throughout.
//
// It is the sum over the common ancestors k of both, themselves included, of
//
//	t_ik t_jk d_k,   d_k = 1 - (K_mm [mother known] + K_ff [father known]) / 4
//
// where t_ik adds (1/2)^generations over all lines from i to k, and d_k is the
// share of k's own sampling of the parents' genes: K = T D T' (Henderson
// 1976). The cost grows with the number of ancestors of i and j only.
func (p *Pedigree) Kinship(i, j int) float64 {
	if p.family[i] != p.family[j] {
		return 0
	}
	return p.kinship(p.genome[i], p.genome[j])
}

// Dominance is L of the variance model, the share of dominance deviations in
// common: 1 for a person and themselves or an identical twin, and otherwise
//
//	(K_mm' K_ff' + K_mf' K_fm') / 4
//
// over the mothers m, m' and fathers f, f' of the two (Cockerham 1954; exact
// without inbreeding): 0.25 for full siblings and fraternal twins, 0.0625 for
// double first cousins, 0 where a parent is not known.
func (p *Pedigree) Dominance(i, j int) float64 {
	if p.genome[i] == p.genome[j] {
		return 1
	}
	if p.family[i] != p.family[j] {
		return 0
	}
	m, f, m2, f2 := p.mother[i], p.father[i], p.mother[j], p.father[j]
	if m == none || f == none || m2 == none || f2 == none {
		return 0
	}
	m, f, m2, f2 = p.genome[m], p.genome[f], p.genome[m2], p.genome[f2]
	return (p.kinship(m, m2)*p.kinship(f, f2) + p.kinship(m, f2)*p.kinship(f, m2)) / 4
}

// line is a genome among the ancestors of two, with the sum of (1/2)^generations
// over all lines to it from the first and from the second.
type line struct {
	genome, depth int32
	first, second float64
}

// kinship is Kinship of two genomes. It climbs the pedigree from both at once,
// deepest genome first, so that each ancestor is met when all lines to it are.
func (p *Pedigree) kinship(a, b int32) float64 {
	if a == b {
		return 1 + p.inbred(a)
	}
	if p.depth[a] == 0 && p.depth[b] == 0 {
		return 0
	}
	var room [16]line
	front := append(room[:0], line{a, p.depth[a], 1, 0}) // shallowest first
	front = p.climb(front, b, 0, 1)
	sum := 0.0
	for len(front) > 0 {
		l := front[len(front)-1]
		front = front[:len(front)-1]
		mother, father := p.mother[l.genome], p.father[l.genome]
		sampling := 1.0
		if mother != none {
			mother = p.genome[mother]
			sampling -= (1 + p.inbred(mother)) / 4
			front = p.climb(front, mother, l.first/2, l.second/2)
		}
		if father != none {
			father = p.genome[father]
			sampling -= (1 + p.inbred(father)) / 4
			front = p.climb(front, father, l.first/2, l.second/2)
		}
		sum += l.first * l.second * sampling
	}
	return sum
}

// climb adds lines to a genome, in the place that keeps the front sorted by
// depth, then by genome.
func (p *Pedigree) climb(front []line, genome int32, first, second float64) []line {
	depth := p.depth[genome]
	at := len(front)
	for at > 0 && (front[at-1].depth > depth || front[at-1].depth == depth && front[at-1].genome > genome) {
		at--
	}
	if at > 0 && front[at-1].genome == genome {
		front[at-1].first += first
		front[at-1].second += second
		return front
	}
	front = append(front, line{})
	copy(front[at+1:], front[at:])
	front[at] = line{genome, depth, first, second}
	return front
}

// inbred is the coefficient of inbreeding of a genome, half the kinship value
// of its parents.
func (p *Pedigree) inbred(genome int32) float64 {
	if p.inbreeding == nil {
		return 0
	}
	return p.inbreeding[genome]
}

// findInbreeding goes from founders down, since a genome's coefficient needs
// those of its ancestors.
func (p *Pedigree) findInbreeding() {
	for _, i := range p.byDepth() {
		if p.mother[i] == none || p.father[i] == none || p.genome[i] != i {
			continue
		}
		f := p.kinship(p.genome[p.mother[i]], p.genome[p.father[i]]) / 2
		if f == 0 {
			continue
		}
		if p.inbreeding == nil {
			p.inbreeding = make([]float64, len(p.genome))
		}
		p.inbreeding[i] = f
	}
}

// byDepth lists the people below the founders, parents before children.
func (p *Pedigree) byDepth() []int32 {
	var start []int
	for _, d := range p.depth {
		for len(start) < int(d)+2 {
			start = append(start, 0)
		}
		start[d+1]++
	}
	for d := 1; d < len(start); d++ {
		start[d] += start[d-1]
	}
	order := make([]int32, len(p.depth))
	founders := 0
	if len(start) > 1 {
		founders = start[1]
	}
	for i, d := range p.depth {
		order[start[d]] = int32(i)
		start[d]++
	}
	return order[founders:]
}
