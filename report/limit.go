package report

import (
	"fmt"
	"strings"

	"strainledger/energy"
)

// pastLimitSection says how much is past the limit, and in which regions.
func pastLimitSection(ledger *energy.Ledger) section {
	s := section{heading: "Past the proportional limit (" + inPlainWords(ledger.PastLimit.Criterion) + ")"}
	t := &table{columns: []column{
		{kind: name, heading: "region"},
		{kind: number, heading: "cells"},
		{kind: number, heading: "share of its volume", unit: "%"},
		{kind: number, heading: "share of its energy", unit: "%"},
	}}
	var unjudged []string
	for i := range ledger.Regions {
		region := &ledger.Regions[i]
		switch {
		case !region.CellsPastLimit.Exists():
			unjudged = append(unjudged, region.Name)
		case region.CellsPastLimit > 0:
			t.add(
				region.Name,
				inCounts.text(region.CellsPastLimit),
				inShares.text(shareOf(region.VolumePastLimit, region.Volume)),
				inShares.text(shareOf(region.EnergyPastLimit, region.Energy)),
			)
		}
	}
	if len(unjudged) == len(ledger.Regions) {
		s.say("No region has a limit: no cell was compared with one.", plainTone)
	} else {
		s.say(pastLimitWords(ledger))
		if len(unjudged) > 0 {
			s.say(unjudgedWords(ledger, unjudged), plainTone)
		}
	}
	if margin := marginWords(ledger); margin != "" {
		s.say(margin, plainTone)
	}
	if others := otherCriteria(ledger); others != "" {
		s.say("Judged by another criterion: "+others+".", plainTone)
	}
	if yielded := ledger.Total.CellsYielded; yielded.Exists() {
		s.say("Cells with plastic strain in the file: "+grouped(yielded)+".", plainTone)
	}
	if len(t.rows) > 0 {
		s.table = t
	}
	return s
}

// marginWords says by how much the load of a linear run may grow, or has to shrink, until
// the first region that has a limit is at it; "" where the run was not linear.
func marginWords(ledger *energy.Ledger) string {
	if ledger.Total.CellsYielded > 0 {
		return ""
	}
	least, first := energy.None, ""
	for i := range ledger.Regions {
		region := &ledger.Regions[i]
		factor := energy.LoadFactor(energy.Criterion(region.Criterion), region.MaxUtilisation)
		if factor.Exists() && !(factor >= least) {
			least, first = factor, region.Name
		}
	}
	if !least.Exists() {
		return ""
	}
	words := "In a linear run the first limit is reached at the load times " + inRatios.text(least) + ", a stress margin of " + inRatios.text(least-1)
	if len(ledger.Regions) > 1 {
		words += ", in " + first
	}
	return words + "."
}

// otherCriteria names the regions whose criterion is not the study's.
func otherCriteria(ledger *energy.Ledger) string {
	var others []string
	for i := range ledger.Regions {
		if region := &ledger.Regions[i]; region.Criterion != ledger.PastLimit.Criterion {
			others = append(others, region.Name+" ("+inPlainWords(region.Criterion)+")")
		}
	}
	return listed(others)
}

func pastLimitWords(ledger *energy.Ledger) (string, tone) {
	past, isWhole := cellsPastLimit(ledger), ledger.PastLimit.Cells.Exists()
	switch {
	case past == 0 && isWhole:
		return "No cell is past its limit: the largest utilisation is " + inRatios.text(ledger.Total.MaxUtilisation) + ".", plainTone
	case past == 0:
		return "No cell is past its limit, in the regions that have one.", plainTone
	case !isWhole:
		return countOf(past, "cell") + " past the limit, in the regions that have one.", errorTone
	}
	return fmt.Sprintf("%s of %s past the limit: %s %% of the volume, %s %% of the energy.",
		grouped(past), countOf(energy.Number(ledger.Total.Cells), "cell"),
		inShares.text(shareOf(ledger.PastLimit.Volume, ledger.Total.Volume)),
		inShares.text(ledger.PastLimit.EnergyShare)), errorTone
}

func unjudgedWords(ledger *energy.Ledger, regions []string) string {
	words := "Without a limit: " + listed(regions)
	if share := shareOf(ledger.Total.VolumeWithoutLimit, ledger.Total.Volume); share.Exists() {
		words += ", " + inShares.text(share) + " % of the volume"
	}
	return words + ". So there are no figures for the whole model."
}

// listed joins the first names, and counts the others.
func listed(names []string) string {
	const shown = 5
	if len(names) <= shown {
		return strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s and %d more", strings.Join(names[:shown], ", "), len(names)-shown)
}

// shareOf returns part over whole, none where either is missing or the whole is 0.
func shareOf(part, whole energy.Number) energy.Number {
	if whole == 0 {
		return energy.None
	}
	return part / whole
}

// countOf returns "1 cell", "2 cells".
func countOf(n energy.Number, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return grouped(n) + " " + noun + "s"
}

// cellsPastLimit counts the cells past their limit in the regions that have one.
func cellsPastLimit(ledger *energy.Ledger) energy.Number {
	var count energy.Number
	for i := range ledger.Regions {
		if cells := ledger.Regions[i].CellsPastLimit; cells.Exists() {
			count += cells
		}
	}
	return count
}
