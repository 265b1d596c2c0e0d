package report

import (
	"testing"

	"strainledger/energy"
)

// The load may grow until the first region is at its limit, by the criterion of each.
func TestMarginWords(t *testing.T) {
	region := func(name, criterion string, utilisation energy.Number) energy.RegionAccount {
		account := noAccount()
		account.MaxUtilisation = utilisation
		return energy.RegionAccount{Name: name, Criterion: criterion, Account: account}
	}
	web, pad := region("web", "von-mises", 0.5), region("pad", "distortion-energy", 0.36) // factors 2 and 1/0.6
	bare := region("bare", "von-mises", energy.None)
	for _, c := range []struct {
		name    string
		regions []energy.RegionAccount
		yielded energy.Number
		want    string
	}{
		{"one region", []energy.RegionAccount{web}, energy.None, "In a linear run the first limit is reached at the load times 2.0000, a stress margin of 1.0000."},
		{"the least of several", []energy.RegionAccount{web, bare, pad}, 0, "In a linear run the first limit is reached at the load times 1.6667, a stress margin of 0.66667, in pad."},
		{"the first of equals", []energy.RegionAccount{web, region("leg", "tresca", 0.5)}, 0, "In a linear run the first limit is reached at the load times 2.0000, a stress margin of 1.0000, in web."},
		{"past the limit", []energy.RegionAccount{region("web", "tresca", 1.25)}, 0, "In a linear run the first limit is reached at the load times 0.80000, a stress margin of -0.20000."},
		{"no limit", []energy.RegionAccount{bare}, 0, ""},
		{"no stress", []energy.RegionAccount{region("web", "von-mises", 0)}, 0, ""},
		{"plastic strain", []energy.RegionAccount{web}, 1, ""},
	} {
		ledger := &energy.Ledger{Regions: c.regions}
		ledger.Total.CellsYielded = c.yielded
		if got := marginWords(ledger); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func TestNoLocalEstimatesWithoutAny(t *testing.T) {
	if s := localEstimatesSection(unjudged()); s.heading != "" {
		t.Errorf("a section %q of no estimate", s.heading)
	}
}
