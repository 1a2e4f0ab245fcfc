package cohort

import (
	"path"
	"testing"

	"pgregory.net/rapid"
)

func TestMatch(t *testing.T) {
	names := []string{"occupancy_1", "occupancy_2", "dwell_1", "switching_rate_hz", "a*b", "axb", "Dwell_1", "état"}
	for _, c := range []struct {
		patterns  []string
		matched   []int
		unmatched []string
	}{
		{[]string{"*"}, []int{0, 1, 2, 3, 4, 5, 6, 7}, nil},
		{[]string{"dwell_*", "occupancy_*"}, []int{0, 1, 2}, nil},
		{[]string{"*_1", "dwell_?"}, []int{0, 2, 6}, nil},
		{[]string{"a*b"}, []int{4, 5}, nil},
		{[]string{"?tat", "nothing_*", "dwell"}, []int{7}, []string{"nothing_*", "dwell"}},
		{nil, nil, nil},
	} {
		matched, unmatched := Match(c.patterns, names)
		want(t, "matched", matched, c.matched)
		want(t, "unmatched", unmatched, c.unmatched)
	}
}

// Without brackets, backslashes and slashes our patterns are those of path.Match.
func TestMatchIsThatOfPaths(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		pattern := rapid.StringMatching(`[abü*?]{0,8}`).Draw(t, "pattern")
		name := rapid.StringMatching(`[abü]{0,10}`).Draw(t, "name")
		want, err := path.Match(pattern, name)
		if err != nil {
			t.Fatal(err)
		}
		if got := glob(pattern, name); got != want {
			t.Fatalf("glob(%q, %q) = %v", pattern, name, got)
		}
	})
}

func TestNearest(t *testing.T) {
	names := []string{"mother", "father", "twin_set", "birth_order", "sex"}
	for _, c := range []struct{ name, want string }{
		{"Mother", "mother"}, {"moter", "mother"}, {"mohter", "mother"}, {"twin set", "twin_set"}, {"Twin.Set", "twin_set"},
		{"birthorder", "birth_order"}, {"sx", "sex"}, {"site", ""}, {"", ""}, {"grandmother", ""},
	} {
		if got := nearest(c.name, names); got != c.want {
			t.Errorf("nearest(%q) = %q, want %q", c.name, got, c.want)
		}
	}
}

// The distance is a distance but for the limit, with known values.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{{"", "", 0}, {"a", "", 1}, {"ab", "ba", 1}, {"kitten", "sitting", 3}, {"ca", "abc", 3}, {"straße", "strasse", 2}} {
		if got := distance([]rune(c.a), []rune(c.b), 99); got != c.want {
			t.Errorf("%q to %q: %d, want %d", c.a, c.b, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		word := rapid.StringMatching(`[abc]{0,6}`)
		a, b := []rune(word.Draw(t, "a")), []rune(word.Draw(t, "b"))
		d := distance(a, b, 99)
		if d != distance(b, a, 99) || (d == 0) != (string(a) == string(b)) || d > max(len(a), len(b)) {
			t.Fatal(d)
		}
		if limited := distance(a, b, 3); limited != min(d, 3) {
			t.Fatal(limited, d)
		}
	})
}
