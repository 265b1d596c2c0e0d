package study

import (
	"slices"
	"strings"
)

// nearest returns the name that takes the fewest single-letter edits to reach; of
// equals the first. names must not be empty.
func nearest(name string, names []string) string {
	return slices.MinFunc(names, func(a, b string) int { return distance(name, a) - distance(name, b) })
}

// distance counts the edits between two names, letter case left aside: a letter
// added, dropped or changed, or two neighbours exchanged.
//
// Source: optimal string alignment, the restricted form of Damerau's measure
// (F. J. Damerau, Communications of the ACM 7(3), 1964) by the table of
// R. A. Wagner and M. J. Fischer (Journal of the ACM 21(1), 1974).
func distance(from, to string) int {
	a, b := []rune(strings.ToLower(from)), []rune(strings.ToLower(to))
	if len(a) > 100 {
		a = a[:100] // no key is as long; the order of the candidates is decided by then
	}
	before, last, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range a {
		before, last, row = last, row, before
		row[0] = i + 1
		for j := range b {
			changed := last[j]
			if a[i] != b[j] {
				changed++
			}
			row[j+1] = min(changed, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && a[i] == b[j-1] && a[i-1] == b[j] {
				row[j+1] = min(row[j+1], before[j-1]+1)
			}
		}
	}
	return row[len(b)]
}
