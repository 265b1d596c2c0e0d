package report

import (
	"slices"
	"strings"

	"strainledger/energy"
)

// Ledgers of the mooring bracket of a small pontoon, as the tests lay them out. Their
// numbers are made up, apart from being consistent with each other.

func noAccount() energy.Account {
	none := energy.None
	return energy.Account{
		Volume: none, Mass: none, Energy: none, EnergyShare: none, EnergyVolumetric: none, EnergyDistortional: none,
		MeanDensity: none, MaxDensity: none, MaxDensityCell: none, MaxDensitySource: none, PeakDensity: none,
		MaxEquivalentStress: none, MaxUtilisation: none, MaxUtilisationCell: none, MaxUtilisationSource: none,
		CellsPastLimit: none, VolumePastLimit: none, EnergyPastLimit: none, VolumeWithoutLimit: none,
		CellsYielded: none, CurveEnergy: none, ErrorEstimate: none, EnergyError: none,
	}
}

func noMaterial(name string) energy.MaterialUsed {
	none := energy.None
	return energy.MaterialUsed{
		Name: name, Law: "isotropic", YoungsModulus: none, PoissonsRatio: none, ProportionalLimit: none,
		ProportionalLimitCompression: none, Density: none, ThermalExpansion: none, ReferenceTemperature: none,
		YieldStress: none, HardeningExponent: none,
		ControlRadius: none, CriticalDensity: none, FractureToughness: none, TensileStrength: none,
	}
}

func noSurroundings() energy.Surroundings {
	none := energy.None
	return energy.Surroundings{
		BallRadius: none, BallVolume: none, BallCells: none, AveragedDensity: none, Eigenvalue: none, EigenvalueSpread: none,
		ControlRadius: none, ControlVolume: none, ControlDensity: none, AveragedDensityRatio: none,
	}
}

func at(x, y, z float64) *energy.Vector { return &energy.Vector{x, y, z} }

func is(b bool) *bool { return &b }

// bracket has two regions, findings of every severity, and requirements of every outcome.
func bracket() *energy.Ledger {
	legs := noAccount()
	legs.Cells, legs.Volume, legs.Mass = 2345, 13739.120598670004, 0.03709562561640901
	legs.Energy, legs.EnergyShare = 98.93740728, 0.4918241964
	legs.EnergyVolumetric, legs.EnergyDistortional = 11.28512213, 87.65228515
	legs.MeanDensity, legs.MaxDensity, legs.MaxDensityCell, legs.MaxDensitySource = 0.00720114553, 0.08123456789, 118, 0
	legs.MaxDensityAt, legs.PeakDensity, legs.PeakDensityAt = at(3.25, 10.125, 47.5), 0.08123456789, at(3.25, 10.125, 47.5)
	legs.MaxEquivalentStress, legs.MaxUtilisation, legs.MaxUtilisationCell, legs.MaxUtilisationSource = 104.1912345, 0.69460823, 118, 0
	legs.MaxUtilisationAt = at(3.25, 10.125, 47.5)
	legs.CellsPastLimit, legs.VolumePastLimit, legs.EnergyPastLimit, legs.VolumeWithoutLimit = 0, 0, 0, 0

	corner := noAccount()
	corner.Cells, corner.Volume, corner.Mass = 1412, 4204.316652839771, 0.01135165496266738
	corner.Energy, corner.EnergyShare = 102.2267979, 0.5081758036
	corner.EnergyVolumetric, corner.EnergyDistortional = 12.91403321, 89.31276469
	corner.MeanDensity, corner.MaxDensity, corner.MaxDensityCell, corner.MaxDensitySource = 0.02431472379, 0.19691206189524355, 1707, 0
	corner.MaxDensityAt, corner.PeakDensity, corner.PeakDensityAt = at(8.5125, 9.875, 8.4375), 0.19691206189524355, at(8.5125, 9.875, 8.4375)
	corner.MaxEquivalentStress, corner.MaxUtilisation, corner.MaxUtilisationCell, corner.MaxUtilisationSource = 163.87654321, 1.0925102881, 1707, 0
	corner.MaxUtilisationAt = at(8.5125, 9.875, 8.4375)
	corner.CellsPastLimit, corner.VolumePastLimit, corner.EnergyPastLimit, corner.VolumeWithoutLimit = 6, 13.8125, 2.53125, 0

	legs.Concentration = concentration(0.0412345, 0.1523456, 0.2634567, 0.5312345, 0.4612345678, 0.6123456)
	corner.Concentration = concentration(0.0612345, 0.2223456, 0.3534567, 0.6212345, 0.5412345678, 0.5023456)
	total := corner
	total.Concentration = concentration(0.0712345, 0.2523456, 0.4034567, 0.6812345, 0.6012345678, 0.4123456)
	total.Cells, total.Volume, total.Mass = 3757, 17943.437251509775, 0.04844728057907639
	total.Energy, total.EnergyShare = 201.16420518, 1
	total.EnergyVolumetric, total.EnergyDistortional, total.MeanDensity = 24.19915534, 176.96504984, 0.01121101842

	aluminium := noMaterial("aluminium")
	aluminium.YoungsModulus, aluminium.PoissonsRatio, aluminium.ProportionalLimit = 70000, 0.33, 150
	aluminium.Density, aluminium.Source = 2.7e-6, "data sheet of the plate, lowest value"

	worst := []energy.RankedCell{
		{Cell: 1707, ElementID: energy.None, Region: "corner", At: at(8.5125, 9.875, 8.4375), Density: 0.19691206189524355, EquivalentStress: 163.87654321, Utilisation: 1.0925102881},
		{Cell: 1698, ElementID: energy.None, Region: "corner", At: at(8.475, 2.25, 8.5), Density: 0.1913, EquivalentStress: 161.5, Utilisation: 1.0766666667},
		{Cell: 2211, ElementID: energy.None, Region: "corner", At: at(8.25, 14.0625, 8.625), Density: 0.18801, EquivalentStress: 159.98, Utilisation: 1.0665333333},
		{Cell: 903, ElementID: energy.None, Region: "corner", At: at(9.125, 5.5, 8), Density: 0.18123, EquivalentStress: 157.2, Utilisation: 1.048},
		{Cell: 2212, ElementID: energy.None, Region: "corner", At: at(8.125, 15.25, 8.75), Density: 0.17654, EquivalentStress: 154.3, Utilisation: 1.0286666667},
		{Cell: 77, ElementID: energy.None, Region: "corner", At: at(8.0625, 0.75, 8.9375), Density: 0.16702, EquivalentStress: 150.0005, Utilisation: 1.0000033333},
	}
	hotspots := []energy.Hotspot{}
	for i, cell := range worst {
		hotspots = append(hotspots, hotspot(i+1, cell, is(true)))
	}
	first := &hotspots[0]
	first.Energy, first.EnergyShare, first.RegionShare, first.Volume, first.Cells = 1.8234567, 0.009064519, 0.017837365, 9.8765432, 5
	first.Prominence, first.MeanDensity, first.EnergyAt = 1, 0.18462498, at(8.5, 9.5, 8.45)
	first.BallRadius, first.BallVolume, first.BallCells, first.AveragedDensity = 3, 56.548667764616276, 41, 0.1012345678
	first.Singular, first.Eigenvalue, first.EigenvalueSpread = "cannot tell", 0.812345678, 0.1023456789
	first.ControlRadius, first.ControlVolume, first.ControlDensity, first.AveragedDensityRatio = 0.28, 0.0459, 0.188, 1.1698
	second := &hotspots[1]
	second.BallRadius, second.BallVolume, second.BallCells, second.AveragedDensity, second.Singular = 3, 60.25, 44, 0.0987654321, "regular"
	first.Principal1, first.Principal2, first.Principal3 = 170.25, 12.5, -3.125
	first.Principal1Direction, first.Principal2Direction, first.Principal3Direction = at(0.6, 0, 0.8), at(0, 1, 0), at(0.8, 0, -0.6)
	hotspots = append(hotspots, hotspot(7, energy.RankedCell{
		Cell: 118, ElementID: energy.None, Region: "legs", At: at(3.25, 10.125, 47.5),
		Density: 0.08123456789, EquivalentStress: 104.1912345, Utilisation: 0.69460823,
	}, is(false)))

	hotspots[0].LocalEstimate = &energy.LocalEstimate{
		Neuber:        energy.LocalState{Stress: 158.23456789, Strain: 0.0024246},
		EnergyDensity: energy.LocalState{Stress: 156.12345678, Strain: 0.0023654321},
	}
	none := energy.LocalState{Stress: energy.None, Strain: energy.None}
	hotspots[1].LocalEstimate = &energy.LocalEstimate{Neuber: none, EnergyDensity: none, Refused: "the place is singular: its elastic stress depends on the mesh"}

	centre := &energy.AtCentre{At: *at(8.5, 10, 8.5), Singular: "singular", Surroundings: noSurroundings()}
	centre.BallRadius, centre.BallVolume, centre.BallCells, centre.AveragedDensity = 3, 84.82, 52, 0.1112345678
	centre.Eigenvalue, centre.EigenvalueSpread = 0.5444837, 0.0123456

	return &energy.Ledger{
		Schema: energy.LedgerSchema,
		Title:  "Mooring bracket, fillet R2",
		Units:  energy.UnitLabels{Length: "mm", Stress: "MPa", Energy: "mJ", EnergyDensity: "mJ/mm^3", Mass: "kg"},
		Model: energy.ModelSummary{Idealisation: "solid", Points: "reference", EnergyFrom: "stress-strain", Criterion: "von-mises",
			Diagonal: 82.5, Loading: &energy.Loading{Control: "force", Scale: 1.5}, HotspotTolerance: 2},
		Study: &energy.StudyFile{Path: "bracket-r2.toml", SHA256: energy.Text(strings.Repeat("0f", 32))},
		Sources: []energy.SourceFile{
			{Path: "bracket-r2.vtu", SHA256: energy.Text(strings.Repeat("a7", 32)), Bytes: 214748, Points: 1034, Cells: 3769, Time: 1},
		},
		Fields: energy.FieldsUsed{
			Stress: &energy.FieldUsed{
				Array: "Stress", On: "cell", Order: "xx yy zz xy yz xz", Sign: "tension", DecidedBy: "audit",
				Why: "Hooke's law fits to 2.1e-8 in this order, to 0.18 in the next best",
			},
			Strain: &energy.FieldUsed{
				Array: "Strain", On: "cell", Order: "xx yy zz xy yz xz", Shear: "tensor", Kind: "total", Sign: "tension", DecidedBy: "audit",
				Why: "shear strain read as tensor: Hooke's law fits to 2.1e-8 that way, to 0.31 as engineering",
			},
			Displacement: &energy.FieldUsed{Array: "Displacement", On: "point", DecidedBy: "file", Why: "by its name and 3 components"},
		},
		Materials: []energy.MaterialUsed{aluminium},
		Total:     total,
		Repeated:  &energy.Repeated{Repeats: 2, Volume: 35886.87450301955, Mass: 0.09689456115815278, Energy: 402.32841036},
		Regions: []energy.RegionAccount{
			{Name: "legs", Material: "aluminium", Criterion: "von-mises", Account: legs},
			{Name: "corner", Material: "aluminium", Criterion: "von-mises", Account: corner},
		},
		Hotspots: hotspots,
		AtCentre: centre,
		PastLimit: energy.PastLimit{
			Criterion: "von-mises", Cells: 6, Volume: 13.8125, Energy: 2.53125, EnergyShare: 0.01258300474, Worst: worst[:6:6],
		},
		Excluded: []energy.Exclusion{
			{Reason: "ghost", Dimension: 3, Cells: 8, Measure: 31.25},
			{Reason: "other-dimension", Dimension: 2, Cells: 4, Measure: 96},
		},
		Findings: []energy.Finding{
			{Code: "hooke-mismatch", Severity: energy.Error, Cells: 14, Message: "Stress and strain of these cells do not belong together by Hooke's law. Look whether both are of the same state."},
			{Code: "study-contradicted", Severity: energy.Error, Cells: energy.None, Message: "The study says engineering shear, the numbers say tensor. The study was obeyed; correct it or the export.", Accepted: "exporter checked by hand, report 12"},
			{Code: "parts-not-accounted", Severity: energy.Warning, Cells: 4, Message: "Surface cells that are no faces of solid cells are in no account. Give them an account of their own, or state their energy under [[elsewhere]]."},
			{Code: "ghost-cells", Severity: energy.Note, Cells: 8, Message: "Cells marked as duplicates were left out."},
			{Code: "one-value-per-cell", Severity: energy.Note, Cells: energy.None, Message: "Each cell has one value: its energy is a lower estimate of what the solution held. Refine, or export values at integration points."},
		},
		Balance: &energy.Balance{
			ExternalWork: 225.71172963, Stored: 201.16420518, Elsewhere: 3.05, Gap: 0.095242742,
			Reasons: []string{"4 surfaces that are no faces of solid cells: what they hold is in no account"},
			Source:  "½ F·u of the nodal forces \"Reaction\"",
			Parts: []energy.Elsewhere{
				{Name: "bolts", Energy: 2.25, Source: "hand calculation 7"}, {Name: "rubber pad", Energy: 0.8},
			},
		},
		Requirements: []energy.RequirementResult{
			{Name: "corner stores little", Quantity: "energy", Region: "corner", AtMost: 120, AtLeast: energy.None, Value: 102.2267979, Met: true},
			{Name: "nothing past the limit", Quantity: "cells_past_limit", AtMost: 0, AtLeast: energy.None, Value: 6},
			{Name: "stiff enough", Quantity: "energy", AtMost: 201.1642, AtLeast: energy.None, Value: 201.16420518},
			{Name: "mesh is fine enough", Quantity: "error_estimate", AtMost: 0.05, AtLeast: energy.None, Value: energy.None, Why: "error_estimate of the whole model is not available"},
		},
		Caution:      energy.Caution,
		Run:          energy.Run{Version: "v0.1.0", Started: "2026-01-02T03:04:05Z", Seconds: 0.25, Workers: 2},
		AllPastLimit: worst,
	}
}

func hotspot(rank int, cell energy.RankedCell, isPast *bool) energy.Hotspot {
	none := energy.None
	factor := energy.LoadFactor(energy.VonMises, cell.Utilisation)
	return energy.Hotspot{
		Rank: rank, Region: cell.Region, Cell: cell.Cell, Source: cell.Source, ElementID: cell.ElementID, At: cell.At,
		Density: cell.Density, PeakDensity: cell.Density, Energy: none, EnergyShare: none, Volume: none, Cells: none,
		Prominence: none, EquivalentStress: cell.EquivalentStress, Utilisation: cell.Utilisation, PastLimit: isPast,
		StressMargin: factor - 1, LoadFactor: factor, ErrorToTarget: none,
		RegionShare: none, MeanDensity: none, Principal1: none, Principal2: none, Principal3: none, Surroundings: noSurroundings(),
	}
}

// concentration returns measures that lie between those of even and of concentrated
// energy.
func concentration(top1, top5, top10, top25, gini, effective energy.Number) *energy.Concentration {
	return &energy.Concentration{
		Top1: top1, Top5: top5, Top10: top10, Top25: top25, Gini: gini, EffectiveVolume: effective, BinWidth: 0.021897148654116678,
		Curve: [][2]float64{{0, 0}, {0.01, float64(top1)}, {0.1, float64(top10)}, {1, 1}},
	}
}

// unjudged is the bracket under its limit, with no requirement and no finding.
func unjudged() *energy.Ledger {
	ledger := bracket()
	ledger.Title = "Mooring bracket, fillet R9"
	ledger.Materials = slices.Clone(ledger.Materials)
	ledger.Materials[0].ControlRadius, ledger.Materials[0].CriticalDensity = 0.28, 0.160714285714
	for i := range ledger.Regions {
		account := &ledger.Regions[i].Account
		account.CellsPastLimit, account.VolumePastLimit, account.EnergyPastLimit = 0, 0, 0
	}
	corner := &ledger.Regions[1].Account
	corner.MaxEquivalentStress, corner.MaxUtilisation, corner.MaxDensity = 121.54368327, 0.8102912218, 0.11350219363
	ledger.Total.MaxEquivalentStress, ledger.Total.MaxUtilisation, ledger.Total.MaxDensity = 121.54368327, 0.8102912218, 0.11350219363
	ledger.Total.CellsPastLimit, ledger.Total.VolumePastLimit, ledger.Total.EnergyPastLimit = 0, 0, 0
	ledger.PastLimit = energy.PastLimit{Criterion: "von-mises"}
	ledger.AllPastLimit = nil
	ledger.Hotspots = ledger.Hotspots[6:]
	ledger.Hotspots[0].Rank = 1
	ledger.Materials[0].Source = ""
	ledger.Repeated, ledger.Excluded, ledger.Findings, ledger.Requirements, ledger.Balance = nil, nil, nil, nil, nil
	return ledger
}

// unlimited is a plane model in parts, in units that are not stated, read without a study:
// one region has no limit, and cells have numbers of their own.
func unlimited() *energy.Ledger {
	ledger := bracket()
	ledger.Title, ledger.Study, ledger.Repeated = "", nil, nil
	ledger.Units = energy.UnitLabels{}
	ledger.Model = energy.ModelSummary{Idealisation: "plane-strain", Thickness: energy.Number(1), Points: "deformed", EnergyFrom: "stress", Criterion: "tresca", Diagonal: 82.5, HotspotTolerance: energy.None}
	ledger.Fields = energy.FieldsUsed{
		Stress: &energy.FieldUsed{
			Array: "sx sy txy", On: "point", Order: "xx yy xy", Sign: "compression", DecidedBy: "default",
			Why: "three components are taken in this order",
		},
		ElementID: &energy.FieldUsed{Array: "element", On: "cell", DecidedBy: "file", Why: "whole numbers, all different"},
	}
	ledger.Sources = nil
	for _, part := range []string{"00", "01", "02", "03", "04", "05", "06", "07", "08", "09"} {
		ledger.Sources = append(ledger.Sources, energy.SourceFile{Path: "run/part-" + part + ".vtu", Bytes: 4096, Points: 123456, Cells: 120000, Time: energy.None})
	}
	ledger.PastLimit.Criterion = "tresca"
	ledger.Regions[1].Criterion = "tresca"
	pad := &ledger.Regions[0]
	pad.Name, pad.Material = "pad", ""
	pad.MaxUtilisation, pad.MaxUtilisationCell, pad.MaxUtilisationSource, pad.MaxUtilisationAt = energy.None, energy.None, energy.None, nil
	pad.CellsPastLimit, pad.VolumePastLimit, pad.EnergyPastLimit, pad.VolumeWithoutLimit = energy.None, energy.None, energy.None, pad.Volume
	total := &ledger.Total
	total.MaxUtilisation, total.MaxUtilisationCell, total.MaxUtilisationSource, total.MaxUtilisationAt = energy.None, energy.None, energy.None, nil
	total.CellsPastLimit, total.VolumePastLimit, total.EnergyPastLimit, total.VolumeWithoutLimit = energy.None, energy.None, energy.None, pad.Volume
	total.PeakDensity, total.PeakDensityAt = 0.2123456, at(8.5, 9.9, 0)
	total.Mass, total.EnergyVolumetric, total.EnergyDistortional = energy.None, energy.None, energy.None
	// η² (2U + ‖e‖²) = ‖e‖², with energy_error ‖e‖²/2.
	pad.ErrorEstimate, ledger.Regions[1].ErrorEstimate, total.ErrorEstimate = 0.04, 0.12, 0.09044126
	pad.EnergyError, ledger.Regions[1].EnergyError, total.EnergyError = 0.15855322, 1.49357593, 1.65897
	ledger.Hotspots[0].ErrorToTarget, ledger.Hotspots[1].ErrorToTarget = 3.456789, 0.5
	ledger.PastLimit.Cells, ledger.PastLimit.Volume, ledger.PastLimit.Energy, ledger.PastLimit.EnergyShare = energy.None, energy.None, energy.None, energy.None
	for i := range ledger.Hotspots {
		ledger.Hotspots[i].ElementID, ledger.Hotspots[i].Source = energy.Number(40000+i), i
		if ledger.Hotspots[i].Region == "legs" {
			ledger.Hotspots[i].Region, ledger.Hotspots[i].PastLimit, ledger.Hotspots[i].Utilisation = "pad", nil, energy.None
		}
	}
	ledger.Hotspots = append(ledger.Hotspots[6:], ledger.Hotspots[:6]...)
	for i := range ledger.Hotspots {
		ledger.Hotspots[i].Rank = i + 1
	}
	for i := range ledger.PastLimit.Worst {
		ledger.PastLimit.Worst[i].ElementID, ledger.PastLimit.Worst[i].Source = energy.Number(40000+i), i
	}
	ledger.Findings = []energy.Finding{
		{Code: "units-not-stated", Severity: energy.Warning, Cells: energy.None, Message: "The units of the files are not stated: state length and stress."},
		{Code: "error-estimated", Severity: energy.Note, Cells: energy.None, Message: "The stress of the displacement's gradients against a smooth stress."}}
	ledger.Requirements = nil
	return ledger
}

// bare has no materials, no limits, no judgement, and lacks every number that may lack.
func bare() *energy.Ledger {
	return &energy.Ledger{
		Schema: energy.LedgerSchema,
		Model:  energy.ModelSummary{Idealisation: "solid", Points: "reference", EnergyFrom: "stress-strain", Criterion: "von-mises", Diagonal: energy.None, HotspotTolerance: energy.None},
		Sources: []energy.SourceFile{
			{Path: "bracket.vtk", Time: energy.None},
		},
		Total: noAccount(),
		Regions: []energy.RegionAccount{
			{Name: "all", Criterion: "von-mises", Account: noAccount()},
		},
		Hotspots: []energy.Hotspot{hotspot(1, energy.RankedCell{
			Region: "all", ElementID: energy.None, Density: energy.None, EquivalentStress: energy.None, Utilisation: energy.None,
		}, nil)},
		PastLimit: energy.PastLimit{Criterion: "von-mises", Cells: energy.None, Volume: energy.None, Energy: energy.None, EnergyShare: energy.None},
		Balance: &energy.Balance{
			ExternalWork: energy.None, Stored: energy.None, Gap: energy.None,
			Reasons: []string{"the external work is not known", "the stored energy cannot be told"},
			Parts:   []energy.Elsewhere{},
		},
		Excluded: []energy.Exclusion{{Reason: "not-finite", Dimension: 3, Cells: 1, Measure: energy.None}},
		Requirements: []energy.RequirementResult{
			{Name: "some", Quantity: "balance.gap", AtMost: energy.None, AtLeast: energy.None, Value: energy.None, Why: "no external work is stated"},
		},
		Caution: energy.Caution,
		Run:     energy.Run{Seconds: energy.None},
	}
}

// zero is a bracket that carries nothing, beside a region that dwarfs it.
func zero() *energy.Ledger {
	ledger := unjudged()
	ledger.Title = "Mooring bracket, no load"
	ledger.Balance = &energy.Balance{Gap: energy.None, Reasons: []string{"the external work is 0"}, Source: "stated by the study", Parts: []energy.Elsewhere{}}
	for _, account := range []*energy.Account{&ledger.Regions[0].Account, &ledger.Regions[1].Account, &ledger.Total} {
		account.Energy, account.EnergyShare, account.EnergyVolumetric, account.EnergyDistortional = 0, energy.None, 0, 0
		account.MeanDensity, account.MaxDensity, account.PeakDensity, account.Concentration = 0, 0, 0, nil
		account.MaxEquivalentStress, account.MaxUtilisation = 0, 0
	}
	ledger.Regions[0].Volume, ledger.Regions[1].Volume, ledger.Total.Volume = 1.25e13, 3e-7, 1.25e13
	ledger.Hotspots = nil
	ledger.Findings = []energy.Finding{{Code: "all-zero", Severity: energy.Error, Cells: 3757, Message: "Stress and strain are 0 in every cell. Look whether the right state was exported."}}
	return ledger
}

// hostile has names that break careless forms, and numbers that need room.
func hostile() *energy.Ledger {
	ledger := bracket()
	long := strings.Repeat("Halterung für die Festmacherleine, ", 3) + "linke Seite 05"
	nasty := "a \"quoted\", comma,\nline break\ttab | pipe <b>&amp; *star* _under_ `tick` 支架 \x1b[31mred \u202eright to left \xff"
	ledger.Title = energy.Text(nasty)
	ledger.Units.Energy = "mJ"
	ledger.Study.Path = "in/" + strings.Repeat("folder/", 14) + "study.toml"
	ledger.Sources[0].Path = nasty + ".vtu"
	ledger.Sources = append(ledger.Sources, energy.SourceFile{Path: strings.Repeat("x", 120), Points: 9007199254740991, Cells: 9007199254740991, Bytes: 9007199254740991, Time: 1.23456789e-300})
	ledger.Fields.Stress.Array, ledger.Fields.Stress.Why = nasty, strings.Repeat("y", 150)
	ledger.Materials[0].Name, ledger.Materials[0].Source = long, energy.Text(nasty)
	ledger.Regions[0].Name, ledger.Regions[0].Material = nasty, energy.Text(long)
	ledger.Regions[1].Name, ledger.Regions[1].Material = long, energy.Text(long)
	ledger.Regions[1].Volume, ledger.Regions[1].Energy, ledger.Regions[1].MaxDensity = 1.2345678e300, -9.87654321e-300, -1.23456789e-100
	ledger.Regions[1].Cells = 9007199254740991
	for i := range ledger.PastLimit.Worst {
		worst := &ledger.PastLimit.Worst[i]
		worst.Region, worst.ElementID, worst.Cell = long, 9007199254740991, 9007199254740991
		worst.At, worst.Density = at(-1.23456789e-200, -1.23456789e250, -1.23456789e200), -1.23456789e-200
	}
	for i := range ledger.Hotspots {
		ledger.Hotspots[i].Region = nasty
	}
	ledger.Balance.Reasons = append(ledger.Balance.Reasons, nasty)
	ledger.Balance.Parts[0].Name, ledger.Balance.Parts[0].Source, ledger.Balance.Parts[1].Energy = long, energy.Text(nasty), -1.23456789e-300
	ledger.Findings[0].Message = nasty + " " + strings.Repeat("z", 130)
	ledger.Findings[3].Accepted = energy.Text(nasty)
	ledger.Requirements[0].Name, ledger.Requirements[0].Region = long, energy.Text(nasty)
	ledger.Requirements[3].Why = energy.Text(nasty)
	return ledger
}
