package twin

import (
	"fmt"
	"testing"

	"kindwell/internal/stream"
)

// registry invents families like those of a twin registry: pairs, siblings,
// some mothers with a row, one label a family.
func registry(n int) []Person {
	s := stream.New(1, "registry")
	people := make([]Person, 0, n+6)
	for f := 0; len(people) < n; f++ {
		label := fmt.Sprint("F", f)
		mother, father := label+"m", label+"f"
		add := func(who Person) {
			who.ID, who.Family = fmt.Sprint("P", len(people)), label
			people = append(people, who)
		}
		switch s.IntN(4) {
		case 0:
			people = append(people, Person{ID: mother, Family: label, Sex: Female})
		case 1:
			father = ""
		}
		if kind := s.IntN(3); kind > 0 {
			pair := Person{Mother: mother, Father: father, TwinSet: label, Zygosity: Zygosity(kind), Sex: Male}
			add(pair)
			add(pair)
		}
		for range 1 + s.IntN(3) {
			add(Person{Mother: mother, Father: father, Sex: Female})
		}
	}
	return people[:n]
}

func BenchmarkNewPedigree(b *testing.B) {
	for _, n := range []int{1000, 100_000} {
		people := registry(n)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, _, err := NewPedigree(people, Rules{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// All pairs inside families, as the variance models ask for them.
func BenchmarkKinOfFamilies(b *testing.B) {
	p, _, err := NewPedigree(registry(100_000), Rules{})
	if err != nil {
		b.Fatal(err)
	}
	b.ReportAllocs()
	pairs := 0
	for b.Loop() {
		sum := 0.0
		for f := range p.Families() {
			members := p.Members(f)
			for k, i := range members {
				for _, j := range members[:k] {
					sum += p.Kinship(i, j) + p.Dominance(i, j)
					pairs++
				}
			}
		}
		if sum == 0 {
			b.Fatal("nobody is related")
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(pairs), "ns/pair")
}

func BenchmarkBlocks(b *testing.B) {
	p, _, err := NewPedigree(registry(100_000), Rules{})
	if err != nil {
		b.Fatal(err)
	}
	rows := indices(p.Len())
	b.ReportAllocs()
	for b.Loop() {
		p.Blocks(rows, BlockOptions{})
	}
}
