package report

import (
	"fmt"

	"strainledger/energy"
)

// concentrationSection says in a line for each region how unevenly its energy lies.
func concentrationSection(ledger *energy.Ledger) section {
	t := &table{columns: []column{
		{kind: name, heading: "region"},
		numbers("concentration_top_1", &ledger.Units),
		numbers("concentration_top_5", &ledger.Units),
		numbers("concentration_top_10", &ledger.Units),
		numbers("concentration_top_25", &ledger.Units),
		numbers("concentration_gini", &ledger.Units),
		numbers("concentration_effective_volume", &ledger.Units),
	}}
	width := energy.None
	add := func(name string, account *energy.Account) {
		c := account.Concentration
		if c == nil {
			return
		}
		width = c.BinWidth
		t.add(
			name,
			inShares.text(c.Top1),
			inShares.text(c.Top5),
			inShares.text(c.Top10),
			inShares.text(c.Top25),
			inRatios.text(c.Gini),
			inShares.text(c.EffectiveVolume),
		)
	}
	for i := range ledger.Regions {
		add(ledger.Regions[i].Name, &ledger.Regions[i].Account)
	}
	if add("total", &ledger.Total); len(t.rows) == 0 {
		return section{}
	}
	t.totals = 1
	s := newSection("Concentration: share of the energy in the densest part of the volume", t)
	s.note(fmt.Sprintf("The effective volume would hold the energy at one density. Densities are told apart to %s %%.", inShares.text(width)))
	return s
}
