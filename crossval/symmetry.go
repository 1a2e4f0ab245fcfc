package crossval

import (
	"math/big"
	"slices"
)

// symmetries are all ways to move the members of a family that keep every
// relation and mark. Each is, in exactly one way, one choice from every stage,
// carried out one after the other, and then any order inside every set of
// peers.
type symmetries struct {
	size   int
	stages []stage
	peers  [][]int
}

// stage holds one way for each place that a member can come to while the
// members of the stages before stay where they are (a transversal of a
// stabiliser chain: Sims 1970), as permutations of the members. The first
// leaves all where they are.
type stage [][]int32

// newSymmetries finds them for a shape with its colouring. Peers, members any two of whom may change places
// with nobody else moving, are set aside first: they are most of what moves in
// families (the twins of a pair, the children of two parents), and what is
// left, with one member standing for each set, is small or rigid.
func newSymmetries(s *shape, c colouring, w *work) (*symmetries, error) {
	sets, err := s.peers(c, w)
	if err != nil {
		return nil, err
	}
	y := &symmetries{size: s.size}
	for _, set := range sets {
		if len(set) > 1 {
			y.peers = append(y.peers, set)
		}
	}
	if c.discrete() || len(sets) == 1 {
		return y, nil
	}
	left := s.standIns(sets)
	if c, err = left.colours(w); err != nil {
		return nil, err
	}
	chain, err := newPath(left, c).chain(w)
	if err != nil {
		return nil, err
	}
	for _, moves := range chain {
		if err := w.keep(len(moves) * s.size); err != nil {
			return nil, err
		}
		lifted := make(stage, len(moves))
		for m, move := range moves {
			lifted[m] = make([]int32, s.size)
			for from, to := range move {
				for at, member := range sets[from] {
					lifted[m][member] = int32(sets[to][at])
				}
			}
		}
		y.stages = append(y.stages, lifted)
	}
	return y, nil
}

// peers divides the members into sets within which any two may change places
// while all others stay, sets and members in ascending order.
func (s *shape) peers(c colouring, w *work) ([][]int, error) {
	var sets [][]int
	ofColour := make(map[uint64][]int) // colour -> its sets
member:
	for i := range s.size {
		for _, at := range ofColour[c.of[i]] {
			if err := w.spend(s.size); err != nil {
				return nil, err
			}
			if s.changePlaces(sets[at][0], i) {
				sets[at] = append(sets[at], i)
				continue member
			}
		}
		ofColour[c.of[i]] = append(ofColour[c.of[i]], len(sets))
		sets = append(sets, []int{i})
	}
	return sets, nil
}

// changePlaces says whether two members may change places while all others
// stay.
func (s *shape) changePlaces(a, b int) bool {
	at := func(i, j int) int { return s.relation[i*s.size+j] }
	if s.mark[a] != s.mark[b] || at(a, b) != at(b, a) {
		return false
	}
	for k := range s.size {
		if k != a && k != b && (at(a, k) != at(b, k) || at(k, a) != at(k, b)) {
			return false
		}
	}
	return true
}

// standIns returns the shape of the first members of the sets of peers, marked
// by their own mark, the size of the set and the relation inside it.
func (s *shape) standIns(sets [][]int) *shape {
	size := len(sets)
	relation := make([]int, size*size)
	mark := make([]int, size)
	type kind struct{ mark, size, inside int }
	number := make(map[kind]int)
	for a, set := range sets {
		for b, other := range sets {
			if a != b {
				relation[a*size+b] = s.relation[set[0]*s.size+other[0]]
			}
		}
		k := kind{mark: s.mark[set[0]], size: len(set)}
		if len(set) > 1 {
			k.inside = s.relation[set[0]*s.size+set[1]]
		}
		if _, seen := number[k]; !seen {
			number[k] = len(number)
		}
		mark[a] = number[k]
	}
	return newShape(size, relation, mark)
}

// chain returns, for every member of the base that can move while those before
// it stay, one symmetry of the path's shape for each place it can come to, the
// first of them moving nobody. Symmetries already found for later members are
// used to save searches: where one member can come to, so can all to whom
// these symmetries take it.
func (p *path) chain(w *work) ([]stage, error) {
	for !p.last().discrete() {
		if err := p.extend(w); err != nil {
			return nil, err
		}
	}
	var known [][]int // symmetries that leave base[:depth] where they are
	var chain []stage
	for depth := len(p.base) - 1; depth >= 0; depth-- {
		start := p.base[depth]
		colour := p.colours[depth].of
		reached := orbit(start, known, p.shape.size)
		refused := make([]bool, p.shape.size)
		for member := range p.shape.size {
			if colour[member] != colour[start] || reached[member] || refused[member] {
				continue
			}
			to, err := p.moving(depth, member, w)
			if err != nil {
				return nil, err
			}
			if to == nil {
				for also, yes := range orbit(member, known, p.shape.size) {
					refused[also] = refused[also] || yes
				}
				continue
			}
			known = append(known, to)
			reached = orbit(start, known, p.shape.size)
		}
		moves, err := transversal(start, known, p.shape.size, w)
		if err != nil {
			return nil, err
		}
		if len(moves) > 1 {
			chain = append(chain, moves)
		}
	}
	slices.Reverse(chain) // from the whole group down, as draws are made
	return chain, nil
}

// orbit says to whom a member can be taken by any sequence of moves.
func orbit(start int, moves [][]int, size int) []bool {
	reached := make([]bool, size)
	reached[start] = true
	queue := []int{start}
	for len(queue) > 0 {
		at := queue[0]
		queue = queue[1:]
		for _, move := range moves {
			if to := move[at]; !reached[to] {
				reached[to] = true
				queue = append(queue, to)
			}
		}
	}
	return reached
}

// transversal returns one product of moves for each member of the orbit of
// start, the identity first.
func transversal(start int, moves [][]int, size int, w *work) (stage, error) {
	identity := make([]int32, size)
	for i := range identity {
		identity[i] = int32(i)
	}
	seen := make([]bool, size)
	seen[start] = true
	products := stage{identity}
	for next := 0; next < len(products); next++ {
		for _, move := range moves {
			to := move[products[next][start]]
			if seen[to] {
				continue
			}
			seen[to] = true
			if err := w.keep(size); err != nil {
				return nil, err
			}
			product := make([]int32, size)
			for i, at := range products[next] {
				product[i] = int32(move[at])
			}
			products = append(products, product)
		}
	}
	return products, nil
}

// choices calls each with the number of ways of every choice that makes one
// symmetry, until it returns false.
func (y *symmetries) choices(each func(ways int) bool) bool {
	for _, moves := range y.stages {
		if !each(len(moves)) {
			return false
		}
	}
	for _, set := range y.peers {
		for ways := len(set); ways > 1; ways-- {
			if !each(ways) {
				return false
			}
		}
	}
	return true
}

// order is the number of symmetries.
func (y *symmetries) order() *big.Int {
	n := big.NewInt(1)
	for _, moves := range y.stages {
		n.Mul(n, big.NewInt(int64(len(moves))))
	}
	for _, set := range y.peers {
		n.Mul(n, new(big.Int).MulRange(1, int64(len(set))))
	}
	return n
}

// movable counts the members that some symmetry moves.
func (y *symmetries) movable() int {
	moved := make([]bool, y.size)
	for _, moves := range y.stages {
		for _, move := range moves {
			for from, to := range move {
				moved[from] = moved[from] || int(to) != from
			}
		}
	}
	count := 0
	for _, set := range y.peers {
		for _, member := range set {
			moved[member] = true
		}
	}
	for _, yes := range moved {
		if yes {
			count++
		}
	}
	return count
}

// chooser makes one of n choices after the other; choosing 0 always moves
// nobody.
type chooser interface{ IntN(n int) int }

// rearrange moves the values of a family, values[members[i]] being that of
// member i, by one symmetry.
func (y *symmetries) rearrange(values, members []int, choose chooser) {
	if len(y.stages) > 0 {
		var few [24]int
		before := few[:0]
		for _, moves := range y.stages {
			move := choose.IntN(len(moves))
			if move == 0 {
				continue
			}
			before = before[:0]
			for _, person := range members {
				before = append(before, values[person])
			}
			for i, from := range moves[move] {
				values[members[i]] = before[from]
			}
		}
	}
	for _, set := range y.peers {
		for i := len(set) - 1; i > 0; i-- {
			j := i - choose.IntN(i+1)
			a, b := members[set[i]], members[set[j]]
			values[a], values[b] = values[b], values[a]
		}
	}
}
