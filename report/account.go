package report

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"strainledger/energy"
)

// regionsSection is the account itself: a row for each region, and the total.
func regionsSection(ledger *energy.Ledger) section {
	units := &ledger.Units
	t := &table{columns: []column{
		{kind: name, heading: "region"},
		{kind: name, heading: "material"},
		numbers("cells", units),
		numbers("volume", units),
		numbers("energy", units),
		numbers("energy_share", units),
		numbers("max_density", units),
		numbers("max_equivalent_stress", units),
		numbers("max_utilisation", units),
		numbers("error_estimate", units),
	}}
	for i := range ledger.Regions {
		region := &ledger.Regions[i]
		addAccount(t, region.Name, cmp.Or(string(region.Material), "none"), &region.Account)
	}
	addAccount(t, "total", "", &ledger.Total)
	t.totals = 1
	if whole := ledger.Repeated; whole != nil {
		t.add(
			fmt.Sprintf("whole (%d parts)", whole.Repeats), "",
			"",
			inVolume.text(whole.Volume),
			inEnergy.text(whole.Energy),
			"", "", "", "", "",
		)
		t.totals++
	}
	if !wantsErrorEstimate(ledger.Findings) {
		t.drop(len(t.columns) - 1)
	}
	if !materialsDiffer(ledger.Regions) {
		t.drop(1)
	}
	s := newSection("Stored energy by region", t)
	if sentences := totalSentences(ledger); len(sentences) > 0 {
		s.note(strings.Join(sentences, " "))
	}
	return s
}

// materialsDiffer reports whether the regions are not all of one material.
func materialsDiffer(regions []energy.RegionAccount) bool {
	for i := range regions {
		if regions[i].Material != regions[0].Material {
			return true
		}
	}
	return false
}

// wantsErrorEstimate reports whether the study asks for the estimate: a finding then says
// how it was made, or why there is none.
func wantsErrorEstimate(findings []energy.Finding) bool {
	return slices.ContainsFunc(findings, func(found energy.Finding) bool {
		return found.Code == "error-estimated" || found.Code == "error-not-estimated"
	})
}

func addAccount(t *table, name, material string, account *energy.Account) {
	t.add(
		name,
		material,
		inCounts.text(energy.Number(account.Cells)),
		inVolume.text(account.Volume),
		inEnergy.text(account.Energy),
		inShares.text(account.EnergyShare),
		inDensity.text(account.MaxDensity),
		inStress.text(account.MaxEquivalentStress),
		inRatios.text(account.MaxUtilisation),
		inShares.text(account.ErrorEstimate),
	)
	t.mark(8, utilisationTone(account.MaxUtilisation))
}

func utilisationTone(utilisation energy.Number) tone {
	if utilisation > 1 {
		return errorTone
	}
	return plainTone
}

// totalSentences says of the total what the rows do not.
func totalSentences(ledger *energy.Ledger) []string {
	var sentences []string
	total, units := &ledger.Total, &ledger.Units
	if total.EnergyVolumetric.Exists() && total.EnergyDistortional.Exists() {
		sentences = append(sentences, fmt.Sprintf("Of the total, %s changes volume and %s changes shape.",
			measured("energy_volumetric", total.EnergyVolumetric, units),
			measured("energy_distortional", total.EnergyDistortional, units)))
	}
	if total.PeakDensity.Exists() && total.PeakDensity != total.MaxDensity {
		sentences = append(sentences, "Peak density "+measured("peak_density", total.PeakDensity, units)+placeWithin(total.PeakDensityAt, units)+".")
	}
	if total.MeanDensity.Exists() {
		sentences = append(sentences, "Mean density "+measured("mean_density", total.MeanDensity, units)+".")
	}
	if total.Mass.Exists() {
		sentences = append(sentences, "Mass "+measured("mass", total.Mass, units)+".")
	}
	if total.ErrorEstimate.Exists() {
		sentences = append(sentences, fmt.Sprintf("What the mesh leaves out is estimated at %s %% in the energy norm, an energy of %s.",
			measured("error_estimate", total.ErrorEstimate, units), measured("energy_error", total.EnergyError, units)))
	} else if wantsErrorEstimate(ledger.Findings) {
		sentences = append(sentences, "The error of the mesh is not available.")
	}
	return sentences
}

// placeWithin returns where something is, as it stands in a sentence; "" where that is
// not known.
func placeWithin(at *energy.Vector, units *energy.UnitLabels) string {
	if at == nil {
		return ""
	}
	coordinate := coordinates([]*energy.Vector{at})
	place := fmt.Sprintf(" at (%s, %s, %s)", coordinate(at[0]), coordinate(at[1]), coordinate(at[2]))
	return withUnit(place, inLength, units)
}

// excludedSection says what is in no account.
func excludedSection(ledger *energy.Ledger) section {
	if len(ledger.Excluded) == 0 {
		return sentenceSection("Left out", "Nothing: every cell is in the account.")
	}
	t := &table{columns: []column{
		{kind: word, heading: "reason"},
		numbers("cells", &ledger.Units),
		{kind: word, heading: "measure"},
		{kind: prose, heading: "what they are"},
	}}
	for _, exclusion := range ledger.Excluded {
		t.add(
			exclusion.Reason,
			inCounts.text(energy.Number(exclusion.Cells)),
			exclusionMeasure(&exclusion, &ledger.Units),
			exclusionWords(&exclusion),
		)
	}
	return newSection("Left out of every account", t)
}

func exclusionMeasure(exclusion *energy.Exclusion, units *energy.UnitLabels) string {
	kinds := [...]unitKind{inCounts, inLength, inArea, inVolume}
	if exclusion.Dimension < 1 || exclusion.Dimension >= len(kinds) || !exclusion.Measure.Exists() {
		return missing
	}
	return withUnit(significant(exclusion.Measure), kinds[exclusion.Dimension], units)
}

func exclusionWords(exclusion *energy.Exclusion) string {
	reason := exclusion.Reason
	switch reason {
	case "ghost":
		reason = "marked as duplicate or hidden in the file"
	case "not-finite":
		reason = "values that are not numbers"
	case "degenerate":
		reason = "no extent"
	case "other-dimension":
		reason = "not of the model's dimension"
	case "unsupported":
		reason = "of a type without a measure here"
	case "no-region":
		reason = "in no region"
	}
	shapes := [...]string{"points", "lines", "surfaces", "solids"}
	if exclusion.Dimension < 0 || exclusion.Dimension >= len(shapes) {
		return reason
	}
	return shapes[exclusion.Dimension] + ", " + reason
}
