package report

import (
	"fmt"

	"strainledger/energy"
)

// localEstimatesSection gives the band of local stress and strain of the hotspots that
// are shown, or why there is none.
func localEstimatesSection(ledger *energy.Ledger) section {
	units := &ledger.Units
	t := &table{columns: []column{
		{kind: number, heading: "rank"},
		{kind: name, heading: "region"},
		{kind: number, heading: "elastic stress", unit: inStress.unit(units)},
		numbers("local_estimate_neuber_stress", units),
		numbers("local_estimate_neuber_strain", units),
		numbers("local_estimate_energy_density_stress", units),
		numbers("local_estimate_energy_density_strain", units),
		{kind: prose, heading: quantityOf("local_estimate_refused").name},
	}}
	for _, hotspot := range ledger.Hotspots[:min(cellsShown, len(ledger.Hotspots))] {
		estimate := hotspot.LocalEstimate
		if estimate == nil {
			continue
		}
		t.add(
			fmt.Sprint(hotspot.Rank),
			hotspot.Region,
			inStress.text(hotspot.EquivalentStress),
			inStress.text(estimate.Neuber.Stress),
			inRatios.text(estimate.Neuber.Strain),
			inStress.text(estimate.EnergyDensity.Stress),
			inRatios.text(estimate.EnergyDensity.Strain),
			string(estimate.Refused),
		)
	}
	if len(t.rows) == 0 {
		return section{}
	}
	t.dropIdle()
	s := newSection("Local stress and strain past the limit, estimated", t)
	s.note("Estimates for the first loading, from the elastic stress of the linear run and the curve of the material: Neuber's rule tends to overstate the strain, the equivalent energy density to understate it.")
	return s
}
