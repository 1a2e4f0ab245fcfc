package cohort

import "testing"

func TestMatch(t *testing.T) {
	names := []string{"occupancy_1", "occupancy_2", "dwell_1", "switching_rate_hz", "a*b", "axb", "Dwell_1", "état"}
	for _, c := range []struct {
		patterns  []string
		matched   []int
		unmatched []string
	}{
		{[]string{"*"}, []int{0, 1, 2, 3, 4, 5, 6, 7}, nil},
		{[]string{"dwell_*", "occupancy_*"}, []int{0, 1, 2}, nil},
		{[]string{"*_1", "*well_1"}, []int{0, 2, 6}, nil},
		{[]string{"a*b"}, []int{4, 5}, nil},
		{[]string{"*tat", "nothing_*", "dwell"}, []int{7}, []string{"nothing_*", "dwell"}},
		{nil, nil, nil},
	} {
		matched, unmatched := Match(c.patterns, names)
		want(t, "matched", matched, c.matched)
		want(t, "unmatched", unmatched, c.unmatched)
	}
}
