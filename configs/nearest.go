package configs

import (
	"fmt"
	"slices"
	"strings"
)

// suggest is the hint for a word that is not among the known ones.
func suggest(word string, known []string) string {
	if near := nearest(word, known); near != "" {
		return fmt.Sprintf("did you mean %q?", near)
	}
	if len(known) == 0 {
		return ""
	}
	return "known: " + strings.Join(known, ", ")
}

// nearest returns the known word most like word, or nothing when none is: about one slip
// in three letters is forgiven, and case, hyphens, underscores and blanks do not count.
// Among words equally like it one with the same first letter is nearer; the beginning of
// a word counts as one slip.
func nearest(word string, known []string) string {
	best, least := "", 2*min(3, 1+len(word)/4)+2
	a := alike(word)
	for _, k := range known {
		b := alike(k)
		if len(a) >= 3 && len(a) < len(b) && slices.Equal(a, b[:len(a)]) && least > 2 {
			best, least = k, 2
		}
		if 2*(len(a)-len(b)) >= least || 2*(len(b)-len(a)) >= least {
			continue // as many slips at least, and words of any length may come in
		}
		d := 2 * slips(a, b)
		if len(a) > 0 && len(b) > 0 && a[0] != b[0] {
			d++
		}
		if d < least {
			best, least = k, d
		}
	}
	return best
}

var joints = strings.NewReplacer("-", "", "_", "", " ", "")

func alike(s string) []rune { return []rune(joints.Replace(strings.ToLower(s))) }

// slips is how many letters were left out, added, changed or swapped with their neighbour
// (the optimal string alignment distance).
func slips(a, b []rune) int {
	before, above, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range a {
		before, above, row = above, row, before
		row[0] = i + 1
		for j := range b {
			change := above[j]
			if a[i] != b[j] {
				change++
			}
			row[j+1] = min(change, above[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && a[i] == b[j-1] && a[i-1] == b[j] {
				row[j+1] = min(row[j+1], before[j-1]+1)
			}
		}
	}
	return row[len(b)]
}
