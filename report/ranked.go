package report

import (
	"fmt"
	"slices"

	"strainledger/energy"
)

// cellsShown is the number of cells that the lists for people name.
const cellsShown = 5

// worstSection names the cells that are furthest past the limit.
func worstSection(ledger *energy.Ledger) section {
	worst := ledger.PastLimit.Worst
	if len(worst) == 0 {
		return section{}
	}
	worst = worst[:min(cellsShown, len(worst))]
	ranks := make([]int, len(worst))
	for i := range ranks {
		ranks[i] = i + 1
	}
	heading := fmt.Sprintf("Furthest past the limit: %d of %s", len(worst), grouped(cellsPastLimit(ledger)))
	t := rankedTable(ledger, ranks, worst)
	t.dropIdle()
	return newSection(heading, t)
}

// hotspotsSection names the first hotspots.
func hotspotsSection(ledger *energy.Ledger) section {
	if len(ledger.Hotspots) == 0 {
		return section{}
	}
	hotspots := ledger.Hotspots[:min(cellsShown, len(ledger.Hotspots))]
	var ranks []int
	var cells []energy.RankedCell
	for _, hotspot := range hotspots {
		ranks = append(ranks, hotspot.Rank)
		cells = append(cells, energy.RankedCell{
			Cell: hotspot.Cell, Source: hotspot.Source, ElementID: hotspot.ElementID, Region: hotspot.Region,
			At: hotspot.At, Density: hotspot.Density,
			EquivalentStress: hotspot.EquivalentStress, Utilisation: hotspot.Utilisation,
		})
	}
	t := rankedTable(ledger, ranks, cells)
	t.columns = append(t.columns,
		numbers("energy_share", &ledger.Units),
		column{kind: word, heading: quantityOf("past_limit").name},
	)
	for i, hotspot := range hotspots {
		text, tone := pastLimitWord(hotspot.PastLimit)
		t.rows[i] = append(t.rows[i], phrase{text: inShares.text(hotspot.EnergyShare)}, phrase{text, tone})
	}
	t.dropIdle()
	return newSection(fmt.Sprintf("Hotspots: first %d of %d", len(hotspots), len(ledger.Hotspots)), t)
}

func pastLimitWord(isPast *bool) (string, tone) {
	switch {
	case isPast == nil:
		return "none", plainTone
	case *isPast:
		return "past", errorTone
	}
	return "within", plainTone
}

// rankedTable lists cells with their place. Cells go by the file's own element number
// where it has one, else by their position in the source; which one, where there are
// several.
func rankedTable(ledger *energy.Ledger, ranks []int, cells []energy.RankedCell) *table {
	units := &ledger.Units
	length := inLength.unit(units)
	hasNumbers := !slices.ContainsFunc(cells, func(cell energy.RankedCell) bool { return !cell.ElementID.Exists() })
	identity := quantityOf("cell").name
	if hasNumbers {
		identity = quantityOf("element_id").name
	}
	t := &table{columns: []column{
		{kind: number, heading: "rank"},
		{kind: name, heading: "region"},
		{kind: number, heading: "source"},
		{kind: number, heading: identity},
		{kind: number, heading: "x", unit: length},
		{kind: number, heading: "y", unit: length},
		{kind: number, heading: "z", unit: length},
		numbers("density", units),
		numbers("equivalent_stress", units),
		numbers("utilisation", units),
	}}
	places := make([]*energy.Vector, len(cells))
	for i := range cells {
		places[i] = cells[i].At
	}
	coordinate := coordinates(places)
	for i := range cells {
		cell := &cells[i]
		x, y, z := missing, missing, missing
		if at := cell.At; at != nil {
			x, y, z = coordinate(at[0]), coordinate(at[1]), coordinate(at[2])
		}
		number := fmt.Sprint(cell.Cell)
		if hasNumbers {
			number = inWords.text(cell.ElementID)
		}
		source := ""
		if len(ledger.Sources) > 1 {
			source = fmt.Sprint(cell.Source)
		}
		t.add(
			fmt.Sprint(ranks[i]),
			cell.Region,
			source,
			number,
			x, y, z,
			inDensity.text(cell.Density),
			inStress.text(cell.EquivalentStress),
			inRatios.text(cell.Utilisation),
		)
		t.mark(9, utilisationTone(cell.Utilisation))
	}
	return t
}
