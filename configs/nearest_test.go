package configs

import "testing"

// The distances are worked out by hand. "ca" to "abc" is the textbook pair that tells
// this distance (3) from the one that may edit a swapped pair again (2): from memory.
func TestSlips(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{
		{"", "", 0}, {"", "abc", 3}, {"abc", "", 3}, {"abc", "abc", 0}, {"abc", "abd", 1}, {"abc", "acb", 1}, {"abc", "ab", 1},
		{"kitten", "sitting", 3}, {"ca", "abc", 3}, {"scalling", "scaling", 1}, {"centre", "center", 1}, {"\u00fc", "u", 1},
	} {
		if got := slips([]rune(c.a), []rune(c.b)); got != c.want {
			t.Errorf("%q to %q: %d, want %d", c.a, c.b, got, c.want)
		}
	}
}

func TestNearest(t *testing.T) {
	stages := namesOf(sections)
	for _, c := range []struct {
		word  string
		known []string
		want  string
	}{
		{"retian", stages, "retain"}, {"standardise", stages, "standardize"}, {"reed", stages, "read"},
		{"Regress", stages, "regress"}, {"plot", stages, ""}, {"", stages, ""}, {"stand", stages, "standardize"},
		{"leave-out", []string{"files", "leave_out"}, "leave_out"}, {"unitsrow", []string{"units_row"}, "units_row"},
		{"centre", scalings, "center"}, {"unit_normal", scalings, "unit-normal"}, {"autoscale", scalings, ""},
		{"yes", []string{"true", "false"}, ""}, {"missing_components", []string{"missing"}, ""},
	} {
		if got := nearest(c.word, c.known); got != c.want {
			t.Errorf("%q: %q, want %q", c.word, got, c.want)
		}
	}
}
