package twin

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// reading is the state of NewPedigree while it goes through the ids.
type reading struct {
	people []Person
	rules  Rules
	faults []*PersonError
	notes  []Note

	ids            []string // of people, then of founders; "" for those of a rule
	mother, father []int32
	named          []role // how each is named as a parent
	twinSet        []int32
	twins          [][]int32 // members of each twin set
	zygosity       []Zygosity
	identical      []int32 // lowest index of identical people, by person
	label          []int32 // number of the family label, none when empty
	labels         []string
	homes          []string
}

// role is how somebody is named as a parent, and by whom first.
type role struct{ asMother, asFather, both int32 }

func (r *reading) fault(person int32, field string, other int32, format string, args ...any) {
	r.faults = append(r.faults, &PersonError{
		Person: int(person), Field: field, Other: int(other), Message: fmt.Sprintf(format, args...),
	})
}

func (r *reading) note(about string, people []int32, format string, args ...any) {
	if len(people) == 0 {
		return
	}
	slices.Sort(people)
	all := make([]int, len(people))
	for k, i := range people {
		all[k] = int(i)
	}
	r.notes = append(r.notes, Note{About: about, People: all, Message: fmt.Sprintf(format, args...)})
}

func (r *reading) sortFaults() {
	slices.SortStableFunc(r.faults, func(a, b *PersonError) int { return cmp.Compare(a.Person, b.Person) })
}

// names lists the ids of people for a message.
func (r *reading) names(people []int32) string {
	const enough = 6 // one more than listed shows, to save work on long lists
	names := make([]string, len(people))
	for k, i := range people {
		if k < enough {
			names[k] = r.ids[i]
		}
	}
	return listed(names)
}

// readIDs gives every person and every parent an index, and finds the faults
// of single rows and of parents' roles.
func (r *reading) readIDs() {
	n := len(r.people)
	index := make(map[string]int32, n+n/2)
	r.ids = make([]string, n, n+n/2)
	for i := range r.people {
		id := r.people[i].ID
		r.ids[i] = id
		if id == "" {
			r.fault(int32(i), "person", none, "the id is empty")
			continue
		}
		if first, ok := index[id]; ok {
			r.fault(int32(i), "person", first, "the id %q is not unique", id)
			continue
		}
		index[id] = int32(i)
	}

	r.mother, r.father = make([]int32, n, n+n/2), make([]int32, n, n+n/2)
	parent := func(i int, field, id string) int32 {
		if id == "" {
			return none
		}
		if id == r.people[i].ID {
			r.fault(int32(i), field, none, "%q is named as their own %s", id, field)
			return none
		}
		k, ok := index[id]
		if !ok {
			k = int32(len(r.ids))
			index[id] = k
			r.ids = append(r.ids, id)
		}
		return k
	}
	for i := range r.people {
		who := &r.people[i]
		r.mother[i] = parent(i, "mother", who.Mother)
		r.father[i] = parent(i, "father", who.Father)
		if who.TwinSet == "" && who.Zygosity != ZygosityUnknown {
			r.fault(int32(i), "zygosity", none, "%q is %s without a twin set", who.ID, who.Zygosity)
		}
		if who.TwinSet == "" && who.MZSet != "" {
			r.fault(int32(i), "mz_set", none, "%q has the mz_set %q without a twin set", who.ID, who.MZSet)
		}
	}
	for range len(r.ids) - n {
		r.mother, r.father = append(r.mother, none), append(r.father, none)
	}
	r.readRoles()

	r.label = make([]int32, n)
	seen := make(map[string]int32)
	for i := range r.people {
		r.label[i], r.labels = numbered(seen, r.labels, r.people[i].Family)
	}
}

// numbered gives a text its number by first appearance, none for the empty one.
func numbered(seen map[string]int32, texts []string, text string) (int32, []string) {
	if text == "" {
		return none, texts
	}
	k, ok := seen[text]
	if !ok {
		k = int32(len(texts))
		seen[text] = k
		texts = append(texts, text)
	}
	return k, texts
}

// readRoles finds parents who are named as a mother and as a father.
func (r *reading) readRoles() {
	r.named = make([]role, len(r.ids))
	for k := range r.named {
		r.named[k] = role{none, none, none}
	}
	for i := range r.people {
		for _, link := range [...]struct {
			parent int32
			field  string
		}{{r.mother[i], "mother"}, {r.father[i], "father"}} {
			if link.parent == none {
				continue
			}
			as := &r.named[link.parent]
			mine, other, otherField := &as.asMother, &as.asFather, "father"
			if link.field == "father" {
				mine, other, otherField = &as.asFather, &as.asMother, "mother"
			}
			if *mine == none {
				*mine = int32(i)
			}
			if *other != none && as.both == none {
				as.both = int32(i)
				r.fault(int32(i), link.field, *other, "%q is the %s of %q and the %s of %q; nobody is both",
					r.ids[link.parent], link.field, r.ids[i], otherField, r.ids[*other])
			}
		}
	}
}

// checkAncestors finds people who descend from themselves.
func (r *reading) checkAncestors() {
	_, loops := depths(r.mother, r.father)
	for _, loop := range loops {
		least := slices.Index(loop, slices.Min(loop))
		loop = append(slices.Clone(loop[least:]), loop[:least]...)
		i, next := loop[0], loop[1%len(loop)]
		field := "mother"
		if r.father[i] == next {
			field = "father"
		}
		names := make([]string, 0, len(loop)+1)
		for _, k := range append(loop, i) {
			names = append(names, fmt.Sprintf("%q", r.ids[k]))
		}
		if len(names) > 8 {
			names = slices.Concat(names[:4], []string{"..."}, names[len(names)-3:])
		}
		r.fault(i, field, next, "%s is their own ancestor; child to parent: %s", names[0], strings.Join(names, ", "))
	}
}

// depths returns for everyone the number of generations to the farthest
// founder, and every loop of child to parent that it meets; the depths of
// people who are in a loop, or descend from one, mean nothing.
func depths(mother, father []int32) (depth []int32, loops [][]int32) {
	const (
		fresh = -1
		open  = -2
	)
	depth = make([]int32, len(mother))
	for i := range depth {
		depth[i] = fresh
	}
	type visit struct {
		person, deepest int32
		parents         int // already looked at
	}
	var path []visit
	enter := func(i int32) {
		depth[i] = open
		path = append(path, visit{person: i, deepest: -1})
	}
	for start := range depth {
		if depth[start] != fresh {
			continue
		}
		enter(int32(start))
		for len(path) > 0 {
			v := &path[len(path)-1]
			if v.parents == 2 {
				depth[v.person] = v.deepest + 1
				path = path[:len(path)-1]
				continue
			}
			parent := [2]int32{mother[v.person], father[v.person]}[v.parents]
			switch {
			case parent == none, v.parents == 1 && parent == mother[v.person]:
				v.parents++
			case depth[parent] == fresh:
				enter(parent)
			case depth[parent] == open:
				v.parents++
				loop := []int32{}
				for k := slices.IndexFunc(path, func(v visit) bool { return v.person == parent }); k < len(path); k++ {
					loop = append(loop, path[k].person)
				}
				loops = append(loops, loop)
			default:
				v.parents++
				v.deepest = max(v.deepest, depth[parent])
			}
		}
	}
	return depth, loops
}

// noteParentsSex tells of mothers recorded male and fathers recorded female.
func (r *reading) noteParentsSex() {
	var mothers, fathers []int32
	for i := range r.people {
		as := r.named[i]
		if as.asMother != none && r.people[i].Sex == Male {
			mothers = append(mothers, int32(i))
		}
		if as.asFather != none && r.people[i].Sex == Female {
			fathers = append(fathers, int32(i))
		}
	}
	r.note("mother", mothers, "%s of children recorded as male: %s.",
		counted(len(mothers), "mother", "mothers"), r.names(mothers))
	r.note("father", fathers, "%s of children recorded as female: %s.",
		counted(len(fathers), "father", "fathers"), r.names(fathers))
}
