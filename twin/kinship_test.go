package twin

import (
	"fmt"
	"testing"
)

// Textbook values of the coefficients of the additive and the dominance
// covariance, Falconer & Mackay 1996, chapter 9 (r and u), for relatives in
// two large families; those of inbred people by hand from the parents:
// K(child, x) = (K(mother, x) + K(father, x)) / 2, K(child, child) = 1 + K(mother, father)/2.
func TestTextbookKin(t *testing.T) {
	child := func(id, mother, father string) Person { return Person{ID: id, Mother: mother, Father: father} }
	twin := func(id, mother, father, set string, z Zygosity) Person {
		return Person{ID: id, Mother: mother, Father: father, TwinSet: set, Zygosity: z}
	}
	people := []Person{
		// The children of a and b marry those of c and d, and others.
		child("ab1", "a", "b"), child("ab2", "a", "b"), child("ab3", "a", "b"), child("ab4", "a", "b"), child("ay", "a", "y"),
		child("cd1", "c", "d"), child("cd2", "c", "d"),
		child("dc1", "ab1", "cd1"), child("dc2", "ab2", "cd2"), // double first cousins
		child("k3", "ab3", "o3"), child("k4", "ab4", "o4"), // first cousins of these and of each other
		child("k3x", "k3", "o5"), child("k4x", "k4", "o6"), // second cousins
		child("hk", "ay", "o7"), // half first cousin
		// Identical sisters who marry identical brothers, and one a stranger.
		twin("s1", "e", "f", "S", Monozygotic), twin("s2", "e", "f", "S", Monozygotic),
		twin("r1", "g", "h", "R", Monozygotic), twin("r2", "g", "h", "R", Monozygotic),
		child("q1", "s1", "r1"), child("q2", "s2", "r2"), child("q3", "s2", "o8"), child("q4", "s1", "o9"),
		twin("z1", "e", "f", "Z", Dizygotic), twin("z2", "e", "f", "Z", Dizygotic),
		twin("u1", "e", "f", "U", ZygosityUnknown), twin("u2", "e", "f", "U", ZygosityUnknown),
		// Inbred people.
		child("b1", "i", "j"), child("b2", "i", "j"), child("in1", "b1", "b2"), // of full siblings
		child("in2", "k", "in3"), child("in3", "k", "l"), // of mother and son
		child("p1", "dc1", "o10"), child("in4", "k3", "hk"), // of half first cousins
		child("in5", "k3c", "k4c"), child("k3c", "ab3", "o3"), child("k4c", "ab4", "o4"), // of first cousins
	}
	p, _ := pedigree(t, people, Rules{})
	founder := map[string]int{} // parents by the id in the rows
	for i, who := range people {
		founder[who.Mother], founder[who.Father] = p.Mother(i), p.Father(i)
	}
	index := func(id string) int {
		if i, ok := founder[id]; ok {
			return i
		}
		return at(t, people, id)
	}
	for _, c := range []struct {
		a, b     string
		k, l     float64
		relation Relation
	}{
		{"ab1", "ab1", 1, 1, Unrelated},
		{"a", "ab1", .5, 0, ParentChild},
		{"a", "b", 0, 0, Spouse},
		{"ab1", "ab2", .5, .25, FullSibling},
		{"ab1", "ay", .25, 0, HalfSibling},
		{"a", "dc1", .25, 0, OtherKin},      // grandmother
		{"ab2", "dc1", .25, 0, OtherKin},    // aunt
		{"ay", "dc1", .125, 0, OtherKin},    // half-aunt
		{"k3", "k4", .125, 0, OtherKin},     // first cousins
		{"k3", "dc1", .125, 0, OtherKin},    // first cousins
		{"hk", "dc1", .0625, 0, OtherKin},   // half first cousins
		{"k3x", "k4", .0625, 0, OtherKin},   // once removed
		{"k3x", "k4x", .03125, 0, OtherKin}, // second cousins
		{"dc1", "dc2", .25, .0625, OtherKin},
		{"ab1", "cd1", 0, 0, Spouse},
		{"ab1", "cd2", 0, 0, Unrelated}, // sister-in-law
		{"s1", "s2", 1, 1, MZ},
		{"z1", "z2", .5, .25, DZSameSex},
		{"u1", "u2", .5, .25, UnknownZygosity},
		{"z1", "s1", .5, .25, FullSibling},
		{"s2", "q1", .5, 0, OtherKin},     // identical twin of the mother
		{"q3", "q4", .25, 0, OtherKin},    // children of identical twins, as half-siblings
		{"q1", "q2", .5, .25, OtherKin},   // children of two identical couples, as full siblings
		{"q1", "q4", .25, 0, HalfSibling}, // one mother
		{"s2", "r1", 0, 0, Unrelated},
		{"q2", "z1", .25, 0, OtherKin},
		{"in1", "in1", 1.25, 1, Unrelated},
		{"in1", "b1", .75, .125, ParentChild}, // l: (.5*.5 + .5*.5)/4
		{"in2", "in2", 1.25, 1, Unrelated},
		{"in2", "k", .75, 0, ParentChild},
		{"in4", "in4", 1.03125, 1, Unrelated},
		{"in5", "in5", 1.0625, 1, Unrelated},
		{"k3", "k3c", .5, .25, FullSibling},
		{"in2", "in1", 0, 0, Unrelated},
	} {
		i, j := index(c.a), index(c.b)
		if got := p.Kinship(i, j); got != c.k {
			t.Errorf("kinship of %s and %s is %v, want %v", c.a, c.b, got, c.k)
		}
		if got := p.Kinship(j, i); got != c.k {
			t.Errorf("kinship of %s and %s is %v, want %v", c.b, c.a, got, c.k)
		}
		if got := p.Dominance(i, j); got != c.l {
			t.Errorf("dominance of %s and %s is %v, want %v", c.a, c.b, got, c.l)
		}
		if got := p.Relation(i, j); got != c.relation {
			t.Errorf("%s and %s are %v, want %v", c.a, c.b, got, c.relation)
		}
	}
	if i, found := p.Inbred(); !found || people[i].ID != "in1" {
		t.Errorf("first inbred person: %d, %v", i, found)
	}
	plain, _ := pedigree(t, people[:14], Rules{})
	if i, found := plain.Inbred(); found || i != -1 {
		t.Errorf("inbred person %d where nobody is", i)
	}
}

// Thirty generations of brother and sister: inbreeding follows
// F = (1 + 2 F' + F”)/4 (Wright 1921), and the cost does not explode as the
// number of lines to an ancestor, 2^30, would.
func TestManyGenerationsOfSiblings(t *testing.T) {
	const generations = 30
	var people []Person
	want := []float64{0, 0}
	for g := 1; g <= generations; g++ {
		mother, father := fmt.Sprint("f", g-1), fmt.Sprint("m", g-1)
		people = append(people, Person{ID: fmt.Sprint("f", g), Mother: mother, Father: father},
			Person{ID: fmt.Sprint("m", g), Mother: mother, Father: father})
		if g > 1 {
			want = append(want, (1+2*want[g-1]+want[g-2])/4)
		}
	}
	p, _ := pedigree(t, people, Rules{})
	for g := 1; g <= generations; g++ {
		if got := p.Kinship(2*(g-1), 2*(g-1)) - 1; got-want[g] > 1e-14 || want[g]-got > 1e-14 {
			t.Errorf("inbreeding in generation %d is %v, want %v", g, got, want[g])
		}
	}
}
