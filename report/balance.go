package report

import (
	"cmp"
	"fmt"

	"strainledger/energy"
)

// balanceSection holds the work of the loads against the energy that was found: a row for
// each, what the study states elsewhere one by one, and why the two may differ.
func balanceSection(ledger *energy.Ledger) section {
	balance := ledger.Balance
	if balance == nil {
		return section{}
	}
	t := &table{columns: []column{
		{kind: name, heading: "work and energy"},
		numbers("energy", &ledger.Units),
		{kind: prose, heading: "source"},
	}}
	t.add("external work", inEnergy.text(balance.ExternalWork), cmp.Or(string(balance.Source), "not known"))
	t.add("stored in the accounts", inEnergy.text(balance.Stored), "total of the regions")
	for _, part := range balance.Parts {
		t.add(part.Name, inEnergy.text(part.Energy), cmp.Or(string(part.Source), "stated by the study"))
	}
	s := newSection("Balance of work and energy", t)
	gap := "not available"
	if balance.Gap.Exists() {
		gap = fmt.Sprintf("%s %% of the external work", inShares.text(balance.Gap))
	}
	s.note("Gap: " + gap + ".")
	for _, reason := range balance.Reasons {
		s.note("Reason: " + reason + ".")
	}
	return s
}
