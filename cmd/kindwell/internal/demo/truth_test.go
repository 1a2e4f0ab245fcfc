package demo

import (
	"fmt"
	"io/fs"
	"math"
	"strconv"
	"strings"
	"testing"

	"kindwell/testdata/saltmere"
)

// The counts that the README gives, counted from ids.
func TestWhoIsThere(t *testing.T) {
	readme, err := fs.ReadFile(saltmere.Files(), "README.md")
	if err != nil {
		t.Fatal(err)
	}
	people := invented(t, 1).people
	count, families, twinSets := map[string]int{}, map[string]bool{}, map[string]int{}
	parents := map[string]bool{}
	for i := range people.rows {
		families[people.text(i, "family")] = true
		if set := people.text(i, "twin_set"); set != "" {
			twinSets[set]++
		}
		for j := range i {
			if people.text(i, "family") != people.text(j, "family") {
				if m := people.text(i, "mother"); m != "" && m == people.text(j, "mother") {
					t.Errorf("rows %d and %d share a mother across families", i, j)
				}
				continue
			}
			kind := relation(people, i, j)
			count[kind]++
			if kind == "parent and child" {
				for _, k := range []int{i, j} {
					if people.text(k, "mother") == "" {
						parents[people.text(k, "person")] = true
					}
				}
			}
		}
	}
	for _, kind := range []string{"identical twins", "fraternal twins, same sex", "fraternal twins, opposite sex",
		"twins of unknown zygosity", "full siblings who are no twins of each other", "half-siblings", "parent and child"} {
		if row := fmt.Sprintf("| %s | %d |", kind, count[kind]); !strings.Contains(string(readme), row) {
			t.Errorf("the README has no row %q", row)
		}
	}
	alone := 0
	for _, n := range twinSets {
		if n == 1 {
			alone++
		}
		if n > 2 {
			t.Errorf("a twin set of %d", n)
		}
	}
	for _, line := range []string{
		fmt.Sprintf("%d people of %d families", len(people.rows), len(families)),
		fmt.Sprintf("%d parents have rows", len(parents)),
	} {
		if !strings.Contains(strings.ReplaceAll(string(readme), "\n", " "), line) {
			t.Errorf("the README does not say %q", line)
		}
	}
	if alone != 7 {
		t.Errorf("%d twins without a co-twin's row, want 7", alone)
	}
}

// relation names how two people of one family are related.
func relation(people *table, i, j int) string {
	same := func(column string) bool {
		return people.text(i, column) != "" && people.text(i, column) == people.text(j, column)
	}
	for _, pair := range [][2]int{{i, j}, {j, i}} {
		child, parent := pair[0], people.text(pair[1], "person")
		if people.text(child, "mother") == parent || people.text(child, "father") == parent {
			return "parent and child"
		}
	}
	switch {
	case same("twin_set"):
		switch {
		case people.text(i, "zygosity") == "":
			return "twins of unknown zygosity"
		case people.text(i, "zygosity") == "MZ":
			return "identical twins"
		case people.text(i, "sex") == people.text(j, "sex"):
			return "fraternal twins, same sex"
		}
		return "fraternal twins, opposite sex"
	case same("mother") && same("father"):
		return "full siblings who are no twins of each other"
	case same("mother") || same("father"):
		return "half-siblings"
	case people.text(i, "mother") == "" && people.text(j, "mother") == "" && math.Abs(people.number(i, "age")-people.number(j, "age")) < 5 && people.number(i, "age") < 45:
		return "full siblings who are no twins of each other" // known by their family label only
	}
	return "other"
}

// No age contradicts a relation.
func TestAges(t *testing.T) {
	people := invented(t, 1).people
	for i := range people.rows {
		for j := range i {
			if people.text(i, "family") != people.text(j, "family") {
				continue
			}
			gap := math.Abs(people.number(i, "age") - people.number(j, "age"))
			switch kind := relation(people, i, j); kind {
			case "parent and child":
				if gap < 18.9 || gap > 55 {
					t.Errorf("rows %d and %d: a parent %.1f years older", i, j, gap)
				}
			case "full siblings who are no twins of each other", "half-siblings":
				if gap < 1.1 {
					t.Errorf("rows %d and %d: siblings %.1f years apart", i, j, gap)
				}
			case "other":
			default:
				if gap != 0 {
					t.Errorf("rows %d and %d: twins %.1f years apart", i, j, gap)
				}
				if kind == "identical twins" && people.text(i, "sex") != people.text(j, "sex") {
					t.Errorf("rows %d and %d: identical twins of different sex", i, j)
				}
			}
		}
	}
}

// The dynamics hang together as counts from one sequence must.
func TestDynamicsHangTogether(t *testing.T) {
	dynamics := invented(t, 1).dynamics
	zeros := 0
	for r := range dynamics.rows {
		hundredThousandths, visits := 0, 0.0
		for s := 1; s <= 9; s++ {
			state := strconv.Itoa(s)
			whole, fraction, _ := strings.Cut(dynamics.text(r, "occupancy_"+state), ".")
			n, err := strconv.Atoi(whole + fraction)
			if err != nil || len(fraction) != 5 {
				t.Fatalf("row %d: occupancy %s", r, dynamics.text(r, "occupancy_"+state))
			}
			hundredThousandths += n
			dwell := dynamics.number(r, "dwell_mean_s_"+state)
			if n == 0 {
				zeros++
				if !math.IsNaN(dwell) || !math.IsNaN(dynamics.number(r, "interval_mean_s_"+state)) {
					t.Errorf("row %d: times of a state that was never visited", r)
				}
			}
			if dwell < 0.02 {
				t.Errorf("row %d: a mean visit of %g s is shorter than the shortest", r, dwell)
			}
			if n > 0 && !math.IsNaN(dwell) {
				visits += float64(n) / 1e5 * 200 / dwell
			}
		}
		if hundredThousandths != 100000 {
			t.Errorf("row %d: occupancies add up to %d hundred-thousandths", r, hundredThousandths)
		}
		// Visits cut by the ends make the two routes differ a little.
		if rate := dynamics.number(r, "switching_rate_hz"); math.Abs(visits/200-rate) > 0.03*rate {
			t.Errorf("row %d: %.3f changes a second, but occupancy and dwell ask for %.3f", r, rate, visits/200)
		}
	}
	if zeros == 0 {
		t.Error("no state was ever missed: the demo does not show what zeros is for")
	}
}

// What the README says of twins and correlations holds in a cohort eight
// times as large (about 650 and 720 pairs, 4800 people), within 3.5 standard
// errors, and in the demo itself.
func TestPlantedTruth(t *testing.T) {
	for _, size := range []int{1, 8} {
		t.Run(fmt.Sprintf("times %d", size), func(t *testing.T) {
			c := invented(t, size)
			for _, want := range []struct {
				name   string
				mz, dz float64 // as in the README
			}{
				{"occupancy_3", 0.60, 0.30}, {"occupancy_6", 0.53, 0.48}, {"occupancy_8", 0.07, 0.04},
				{"dwell_mean_s_5", 0.42, 0.21}, {"motion", 0.46, 0.24}, {"sociability", 0.64, 0.32}, {"sleep_quality", 0, 0},
			} {
				y := c.without(want.name, "age", "man")
				for zygosity, r := range map[string]float64{"MZ": want.mz, "DZ": want.dz} {
					got, pairs := c.twins(y, zygosity)
					if se := (1 - r*r) / math.Sqrt(float64(pairs)); math.Abs(got-r) > 3.5*se+0.01 {
						t.Errorf("%s: %s correlation %.3f in %d pairs, want %.2f", want.name, zygosity, got, pairs, r)
					}
				}
			}
			for _, want := range []struct {
				trait, measure string
				r              float64 // without age, sex and motion; as in the README
			}{
				{"fatigue", "occupancy_3", 0.36}, {"fatigue", "dwell_mean_s_5", 0.23},
				{"wellbeing", "dwell_mean_s_2", 0.24}, {"wellbeing", "dwell_mean_s_7", -0.24}, {"wellbeing", "occupancy_3", 0},
				{"vigilance", "switching_rate_hz", 0}, {"vigilance", "dwell_mean_s_1", 0},
				{"sociability", "occupancy_3", 0}, {"sociability", "switching_rate_hz", 0},
				{"sleep_quality", "occupancy_3", 0}, {"sleep_quality", "dwell_mean_s_2", 0},
			} {
				got := correlation(c.without(want.trait, "age", "man", "motion"), c.without(want.measure, "age", "man", "motion"))
				if se := 1 / math.Sqrt(float64(len(c.people.rows))); math.Abs(got-want.r) > 3.5*se+0.01 {
					t.Errorf("%s and %s correlate %.3f, want %.2f", want.trait, want.measure, got, want.r)
				}
			}
			raw := correlation(c.values["vigilance"], c.values["switching_rate_hz"])
			if se := 1 / math.Sqrt(float64(len(c.people.rows))); math.Abs(raw+0.21) > 3.5*se+0.01 {
				t.Errorf("with age and motion in, vigilance and switching correlate %.3f, want -0.21", raw)
			}
		})
	}
}

// In the demo itself genes show where they were planted and only there.
func TestDemoShowsItsTruth(t *testing.T) {
	c := invented(t, 1)
	difference := func(name string) float64 {
		y := c.without(name, "age", "man")
		mz, _ := c.twins(y, "MZ")
		dz, _ := c.twins(y, "DZ")
		return mz - dz
	}
	if genes, home := difference("occupancy_3"), difference("occupancy_6"); genes < 0.2 || home > 0.15 {
		t.Errorf("identical minus fraternal twins: %.2f in state 3, %.2f in state 6", genes, home)
	}
	if d := difference("sociability"); d < 0.2 {
		t.Errorf("sociability: identical minus fraternal twins %.2f", d)
	}
}
