package study

import (
	"encoding/json"
	"slices"
	"strings"
	"testing"

	"strainledger/energy"
)

// The table's rows agree with each other: every key stands below a table, once, and
// the texts that come later are among those that may be.
func TestKeysAreOneTree(t *testing.T) {
	seen := map[string]bool{}
	for _, row := range keys {
		if seen[row.path] {
			t.Errorf("%s stands in the table twice", row.path)
		}
		seen[row.path] = true
		if parent, _, nested := cutLast(row.path); nested {
			table := findKey(parent)
			if table == nil || table.form&(aTable|tables) == 0 {
				t.Errorf("%s stands below %s, which is no table", row.path, parent)
			}
		}
		for _, value := range row.after {
			if !slices.Contains(row.values, value) {
				t.Errorf("%s: %q comes later and is not among %q", row.path, value, row.values)
			}
		}
		if row.form&(aTable|tables) != 0 && !row.later && len(keysBelow(row.path)) == 0 {
			t.Errorf("%s is a table without keys", row.path)
		}
	}
}

// Quantities are the JSON keys of an account that hold numbers.
func TestAccountNumbers(t *testing.T) {
	var account map[string]any
	text, err := json.Marshal(energy.Account{MaxDensityAt: &energy.Vector{}, PeakDensityAt: &energy.Vector{}, MaxUtilisationAt: &energy.Vector{}})
	if err != nil {
		t.Fatal(err)
	}
	if err := json.Unmarshal(text, &account); err != nil {
		t.Fatal(err)
	}
	var want []string
	for key, value := range account {
		if _, isNumber := value.(float64); isNumber {
			want = append(want, key)
		}
	}
	got := accountNumbers()
	slices.Sort(want)
	slices.Sort(got)
	if !slices.Equal(got, want) || !slices.Contains(got, "cells_past_limit") || !slices.Contains(got, "cells") {
		t.Errorf("got %q\nwant %q", got, want)
	}
}

// Edits counted by hand.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		from, to string
		want     int
	}{
		{"", "", 0}, {"", "abc", 3}, {"abc", "", 3}, {"abc", "abc", 0}, {"ABC", "abc", 0},
		{"abd", "abc", 1}, {"abcd", "abc", 1}, {"ab", "abc", 1},
		{"acb", "abc", 1}, {"lenght", "length", 1}, {"ca", "abc", 3}, // optimal string alignment, not the unrestricted measure
		{"kitten", "sitting", 3}, {"länge", "lange", 1},
		{strings.Repeat("x", 1000), "abc", 100},
	} {
		if got := distance(c.from, c.to); got != c.want {
			t.Errorf("distance(%q, %q) = %d, want %d", c.from, c.to, got, c.want)
		}
	}
}
