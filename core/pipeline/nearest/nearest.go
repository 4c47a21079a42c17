// Package nearest finds the name that somebody most likely meant.
package nearest

import "strings"

// Name gives the candidate closest to what was written, or "" when none is
// close enough to be worth naming. A candidate that differs in case alone wins
// at once. Otherwise the distance counts inserted, dropped, changed and swapped
// neighbouring letters (the optimal string alignment distance), of which one in
// three letters may differ, and at least one. Ties go to the earlier candidate.
func Name(written string, candidates []string) string {
	for _, c := range candidates {
		if strings.EqualFold(c, written) {
			return c
		}
	}
	best, found := "", -1
	w := []rune(strings.ToLower(written))
	for _, c := range candidates {
		r := []rune(strings.ToLower(c))
		allowed := max(1, max(len(w), len(r))/3)
		if abs(len(w)-len(r)) > allowed || len(w) > longest || len(r) > longest {
			continue
		}
		d := distance(w, r)
		// A name of one or two letters would be near to every other one.
		if d <= allowed && d < max(len(w), len(r)) && (found < 0 || d < found) {
			best, found = c, d
		}
	}
	return best
}

// longest bounds the work on absurd input; nobody mistypes a name this long.
const longest = 100

func distance(a, b []rune) int {
	before := make([]int, len(b)+1)
	last := make([]int, len(b)+1)
	here := make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		here[0] = i
		for j := 1; j <= len(b); j++ {
			change := 1
			if a[i-1] == b[j-1] {
				change = 0
			}
			here[j] = min(last[j]+1, here[j-1]+1, last[j-1]+change)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				here[j] = min(here[j], before[j-2]+1)
			}
		}
		before, last, here = last, here, before
	}
	return last[len(b)]
}

func abs(x int) int {
	if x < 0 {
		return -x
	}
	return x
}
