package report

import (
	"fmt"

	"strainledger/energy"
)

// surroundingsSection says what lies about the hotspots that are shown and about the
// study's centre: the averaged density, whether the place is singular, and how the density
// within the control radius compares with what the material bears.
func surroundingsSection(ledger *energy.Ledger) section {
	units := &ledger.Units
	t := &table{columns: []column{
		{kind: word, heading: "rank"},
		{kind: name, heading: "region"},
		numbers("averaged_density", units),
		{kind: word, heading: quantityOf("singular").name},
		numbers("eigenvalue", units),
		numbers("eigenvalue_spread", units),
		numbers("control_radius", units),
		numbers("control_density", units),
		numbers("averaged_density_ratio", units),
	}}
	radius := energy.None
	add := func(rank, region string, singular energy.Text, s *energy.Surroundings) {
		if !s.BallRadius.Exists() && !s.ControlRadius.Exists() {
			return
		}
		radius = s.BallRadius
		t.add(
			rank,
			region,
			inDensity.text(s.AveragedDensity),
			string(singular),
			inRatios.text(s.Eigenvalue),
			inRatios.text(s.EigenvalueSpread),
			plain(s.ControlRadius),
			inDensity.text(s.ControlDensity),
			inRatios.text(s.AveragedDensityRatio),
		)
		t.mark(8, utilisationTone(s.AveragedDensityRatio))
	}
	for i := range ledger.Hotspots[:min(cellsShown, len(ledger.Hotspots))] {
		hotspot := &ledger.Hotspots[i]
		add(fmt.Sprint(hotspot.Rank), hotspot.Region, hotspot.Singular, &hotspot.Surroundings)
	}
	if centre := ledger.AtCentre; centre != nil {
		add("centre", "", centre.Singular, &centre.Surroundings)
	}
	if len(t.rows) == 0 {
		return section{}
	}
	t.dropIdle()
	heading := "About the hotspots"
	if radius.Exists() {
		heading += ", within " + withUnit(plain(radius), inLength, units)
	}
	s := newSection(heading, t)
	if radius.Exists() {
		s.note("One mesh tells of a singular place only where density follows one power of the distance over six cells or more; the eigenvalue is then that of stress ~ r^(λ-1).")
	}
	return s
}
