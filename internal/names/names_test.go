package names

import (
	"regexp"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestNearest(t *testing.T) {
	keys := []string{"sets", "outer", "inner", "penalties", "metric", "permutations", "intervals"}
	for _, c := range []struct {
		name       string
		candidates []string
		want       string
	}{
		{"penaltys", keys, "penalties"},
		{"penalty", keys, "penalties"},
		{"permuations", keys, "permutations"},
		{"Permutations", keys, "permutations"},
		{"ouetr", keys, "outer"},
		{"set", keys, "sets"},
		{"lamda", keys, ""},
		{"file", []string{"title"}, ""},
		{"", keys, ""},
		{"x", []string{"y", "z"}, ""},
		{"E", []string{"e"}, "e"},
		{"twin set", []string{"mz_set", "twin_set"}, "twin_set"},
		{"twin-set", []string{"mz_set", "twin_set"}, "twin_set"},
		{"ace", []string{"ADE", "ACE", "AE"}, "ACE"},
		{"occupancy_11", []string{"occupancy_1", "occupancy_2", "occupancy_12"}, "occupancy_1"},
		{"wellbieng", []string{"fatigue", "wellbeing"}, "wellbeing"},
		{"müdigkeit", []string{"mudigkeit"}, "mudigkeit"},
		{"anything", nil, ""},
	} {
		if got := Nearest(c.name, c.candidates); got != c.want {
			t.Errorf("Nearest(%q) = %q, want %q", c.name, got, c.want)
		}
	}
}

// TestDistance compares with the distances of Levenshtein (1966) and, for
// neighbours that changed places, Damerau (1964): counted by hand.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{
		{"", "", 0}, {"", "abc", 3}, {"abc", "", 3}, {"kitten", "sitting", 3}, {"flaw", "lawn", 2},
		{"ab", "ba", 1}, {"abcd", "acbd", 1}, {"ca", "abc", 3}, {"twins", "twins", 0},
	} {
		if got := distance([]rune(c.a), []rune(c.b)); got != c.want {
			t.Errorf("distance(%q, %q) = %d, want %d", c.a, c.b, got, c.want)
		}
	}
}

// TestDistanceIsSymmetricAndSmall checks what holds for any two words.
func TestDistanceIsSymmetricAndSmall(t *testing.T) {
	word := rapid.SliceOfN(rapid.SampledFrom([]rune("abc")), 0, 8)
	rapid.Check(t, func(t *rapid.T) {
		a, b := word.Draw(t, "a"), word.Draw(t, "b")
		d := distance(a, b)
		if d != distance(b, a) {
			t.Fatalf("not symmetric: %d, %d", d, distance(b, a))
		}
		if d < max(len(a), len(b))-min(len(a), len(b)) || d > max(len(a), len(b)) || (d == 0) != (string(a) == string(b)) {
			t.Fatalf("distance %d", d)
		}
	})
}

func TestMatch(t *testing.T) {
	for _, c := range []struct {
		pattern, name string
		want          bool
	}{
		{"*", "", true}, {"*", "dwell_1", true}, {"dwell_*", "dwell_1", true}, {"dwell_*", "dwell_", true},
		{"dwell_*", "Dwell_1", false}, {"*_1", "dwell_1", true}, {"*_1", "dwell_11", false}, {"a*a", "a", false},
		{"a*a", "aa", true}, {"*b*", "abc", true}, {"a*b*c", "abbc", true}, {"a*b*c", "ac", false},
		{"rate?", "rates", false}, {"[ab]", "a", false}, {"[ab]", "[ab]", true}, {"", "", true}, {"", "a", false},
	} {
		if got := Match(c.pattern, c.name); got != c.want {
			t.Errorf("Match(%q, %q) = %v", c.pattern, c.name, got)
		}
	}
}

// TestMatchAsExpression compares with a regular expression.
func TestMatchAsExpression(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		pattern := string(rapid.SliceOfN(rapid.SampledFrom([]rune("ab*.")), 0, 7).Draw(t, "pattern"))
		name := string(rapid.SliceOfN(rapid.SampledFrom([]rune("ab.")), 0, 9).Draw(t, "name"))
		expression := "^" + strings.ReplaceAll(regexp.QuoteMeta(pattern), `\*`, ".*") + "$"
		if got, want := Match(pattern, name), regexp.MustCompile(expression).MatchString(name); got != want {
			t.Fatalf("Match(%q, %q) = %v", pattern, name, got)
		}
	})
}
