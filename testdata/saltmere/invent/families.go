package invent

import (
	"fmt"
	"math"

	"kindwell/internal/stream"
)

// person is one of the invented people, or a parent without a row.
type person struct {
	id, family     string
	mother, father int    // indices of the parents, -1 for founders
	hideParents    bool   // the table does not tell the parents
	twinSet        string // label, empty for others than twins
	zygosity       string // as recorded: MZ, DZ or empty
	identicalTo    int    // index of the identical twin drawn before, or -1
	male           bool
	tenths         int  // age in tenths of a year
	home           int  // number of the home
	row            bool // in people.csv
	recorded       bool // in dynamics.csv
}

// kind is a kind of family: so many with these children. Full siblings have
// both parents of the twins or of each other; half-siblings one of them.
type kind struct {
	count    int
	zygosity string // of the twins; empty: no twins
	opposite bool   // the twins are a girl and a boy
	siblings int    // full siblings beside the twins
	half     int    // half-siblings
	byFather bool   // they share the father, not the mother
	hidden   bool   // no parent ids in the table
	lost     lost   // what happened to the second twin
	unknown  bool   // zygosity not recorded
}

type lost int

const (
	nobody      lost = iota
	noRow            // the second twin was never seen
	notRecorded      // the second twin has a row and no recordings
)

// kinds is the make-up of the cohort.
func kinds() []kind {
	return []kind{
		{count: 52, zygosity: "MZ"},
		{count: 22, zygosity: "MZ", siblings: 1},
		{count: 4, zygosity: "MZ", siblings: 2},
		{count: 35, zygosity: "DZ"},
		{count: 3, zygosity: "DZ", unknown: true},
		{count: 15, zygosity: "DZ", siblings: 1},
		{count: 24, zygosity: "DZ", opposite: true},
		{count: 9, zygosity: "DZ", opposite: true, siblings: 1},
		{count: 4, zygosity: "DZ", half: 1},
		{count: 14, siblings: 2},
		{count: 9, siblings: 3},
		{count: 5, siblings: 2, hidden: true},
		{count: 8, siblings: 1, half: 1},
		{count: 6, siblings: 2, half: 1},
		{count: 8, siblings: 1, half: 1, byFather: true},
		{count: 5, siblings: 2, half: 1, byFather: true},
		{count: 32, siblings: 1, hidden: true},
		{count: 4, zygosity: "MZ", lost: noRow},
		{count: 3, zygosity: "DZ", lost: noRow},
		{count: 3, zygosity: "MZ", lost: notRecorded},
		{count: 3, zygosity: "DZ", lost: notRecorded},
	}
}

// Every so many families whose parents are told, parents have rows of their
// own: in turn the mother, both, the mother, the father.
const parentsEvery = 10

// cohort grows family by family.
type cohort struct {
	people   []person
	families int
	homes    int
	draw     *stream.Stream
}

// newCohort lays out all families, the list of kinds so many times over: who
// is there, how they are related, how old they are. Families of all kinds are
// mixed.
func newCohort(seed uint64, times int) *cohort {
	c := &cohort{draw: stream.New(seed, "saltmere families")}
	var list []kind
	for _, k := range kinds() {
		for range k.count * times {
			list = append(list, k)
		}
	}
	order := make([]int, len(list))
	c.draw.PermTo(order)
	told := 0
	for _, i := range order {
		withMother, withFather := false, false
		if !list[i].hidden {
			if told++; told%parentsEvery == 0 {
				turn := told / parentsEvery % 4
				withMother, withFather = turn != 0, turn%2 == 0
			}
		}
		c.addFamily(list[i], withMother, withFather)
	}
	number := 0
	for i := range c.people {
		if p := &c.people[i]; p.row {
			number++
			p.id = fmt.Sprintf("S%03d", number)
		}
	}
	return c
}

// addFamily adds one family: parents first, then children.
func (c *cohort) addFamily(k kind, withMother, withFather bool) {
	c.families++
	label := fmt.Sprintf("F%03d", c.families)
	mother := c.addFounder(label, "m", withMother)
	father := c.addFounder(label, "f", withFather)
	home := c.newHome()
	halfMother, halfFather, halfHome := mother, father, home
	if k.half > 0 {
		if k.byFather {
			halfMother, halfHome = c.addFounder(label, "m2", false), c.newHome()
		} else {
			halfFather = c.addFounder(label, "f2", false)
		}
	}
	first := len(c.people)
	ages, half := c.birthAges(k)
	child := person{family: label, mother: mother, father: father, hideParents: k.hidden, identicalTo: -1, home: home, row: true, recorded: true}
	if k.zygosity != "" {
		c.addTwins(k, child, label, ages[0])
		ages = ages[1:]
	}
	for _, age := range ages {
		child.male, child.tenths = c.coin(), age
		c.people = append(c.people, child)
	}
	child.mother, child.father, child.home = halfMother, halfFather, halfHome
	for _, age := range half {
		child.male, child.tenths = c.coin(), age
		c.people = append(c.people, child)
	}
	oldest := 0
	for _, p := range c.people[first:] {
		oldest = max(oldest, p.tenths)
	}
	c.people[mother].tenths = oldest + 190 + c.draw.IntN(120)
	c.people[father].tenths = oldest + 200 + c.draw.IntN(170)
}

// addTwins adds the two twins of a family, of whom the second may be lost.
func (c *cohort) addTwins(k kind, child person, label string, age int) {
	child.tenths, child.twinSet = age, "T"+label[1:]
	if !k.unknown {
		child.zygosity = k.zygosity
	}
	child.male = c.coin()
	c.people = append(c.people, child)
	if k.zygosity == "MZ" {
		child.identicalTo = len(c.people) - 1
	}
	child.male = child.male != k.opposite
	child.row = k.lost != noRow
	child.recorded = k.lost == nobody
	c.people = append(c.people, child)
}

// addFounder adds a parent, with a row or without.
func (c *cohort) addFounder(label, role string, row bool) int {
	c.people = append(c.people, person{
		id: label + role, family: label, mother: -1, father: -1, identicalTo: -1,
		male: role[0] == 'f', home: c.newHome(), row: row, recorded: row,
	})
	return len(c.people) - 1
}

// birthAges returns the ages, in tenths of a year, of the full children (the
// twins' first) and of the half-siblings, who were all born before or all
// after. Births lie 1.2 to 4 years apart, and the youngest is 18 or older.
func (c *cohort) birthAges(k kind) (full, half []int) {
	births := k.siblings
	if k.zygosity != "" {
		births++
	}
	ages := make([]int, births+k.half)
	age := 180 + c.draw.IntN(110)
	for i := range ages {
		ages[i] = age
		age += 12 + c.draw.IntN(29)
	}
	full, half = ages[:births], ages[births:]
	if k.half > 0 && c.coin() {
		half, full = ages[:k.half], ages[k.half:]
	}
	c.draw.ShuffleTo(full)
	return full, half
}

func (c *cohort) newHome() int {
	c.homes++
	return c.homes - 1
}

func (c *cohort) coin() bool { return c.draw.IntN(2) == 1 }

// drivesOf draws the drives of all people: genes from parents to children,
// homes, and everyone's own part.
func (c *cohort) drivesOf(seed uint64) [][drives]float64 {
	truth := planted()
	homes := make([][drives]float64, c.homes)
	for h := range homes {
		s := stream.New(seed, "saltmere homes", uint64(h))
		for i := range drives {
			homes[h][i] = math.Sqrt(truth[i].c) * s.Norm()
		}
	}
	genes := make([][drives]float64, len(c.people))
	all := make([][drives]float64, len(c.people))
	for j, p := range c.people {
		s := stream.New(seed, "saltmere people", uint64(j))
		for i := range drives {
			fresh, own := s.Norm(), s.Norm()
			switch {
			case p.identicalTo >= 0:
				genes[j][i] = genes[p.identicalTo][i]
			case p.mother >= 0:
				genes[j][i] = (genes[p.mother][i]+genes[p.father][i])/2 + math.Sqrt(truth[i].a/2)*fresh
			default:
				genes[j][i] = math.Sqrt(truth[i].a) * fresh
			}
			all[j][i] = genes[j][i] + homes[p.home][i] + math.Sqrt(1-truth[i].a-truth[i].c)*own
		}
	}
	return all
}
