package report

import (
	"strings"

	"strainledger/energy"
)

// A unitKind says in what a quantity is measured.
type unitKind int

const (
	inWords   unitKind = iota // a text, or a number that names something: no unit
	inCounts                  // whole numbers
	inShares                  // parts of 1; printed for people in percent
	inRatios                  // pure numbers, 1 where value and limit are equal
	inOwnUnit                 // the unit of another quantity, which the row names
	inLength                  // this and the rest: the study's units
	inArea
	inVolume
	inMass
	inEnergy
	inDensity // energy per volume
	inStress
	inSpecificEnergy // energy per mass
)

// A quantity is one number or text of the ledger: the key it has there, its name
// for people, and its meaning in one sentence.
type quantity struct {
	key     string
	name    string
	kind    unitKind
	meaning string
}

// quantities holds every column of the CSV files and every number that people are
// shown, once. One meaning serves all the rows in which a key occurs.
var quantities = []quantity{
	{"name", "name", inWords, "Name of the region or of the requirement; " + totalName + " in the total's row of regions.csv."},
	{"material", "material", inWords, "Name of the region's material; empty where it has none."},
	{"criterion", "criterion", inWords, "Criterion that turns stress into equivalent stress and utilisation."},
	{"kind", "kind", inWords, "What the row of regions.csv holds: region, or total for the last row, the sum of all regions."},

	{"cells", "cells", inCounts, "Cells that the row's numbers are taken over."},
	{"volume", "volume", inVolume, "Measure over which energy is integrated: thickness times area in plane models, 2 pi r dA in axisymmetric ones."},
	{"mass", "mass", inMass, "Volume times the density of the material."},
	{"energy", "energy", inEnergy, "Stored elastic strain energy, the integral of half stress times elastic strain over the volume."},
	{"energy_share", "share of energy", inShares, "Energy over the energy of the whole model."},
	{"energy_volumetric", "volumetric energy", inEnergy, "Part of the energy that changes volume; empty unless the law is isotropic."},
	{"energy_distortional", "distortional energy", inEnergy, "Part of the energy that changes shape; empty unless the law is isotropic."},
	{"mean_density", "mean density", inDensity, "Energy over volume."},
	{"max_density", "max density", inDensity, "Largest energy over volume of one cell."},
	{"max_density_cell", "cell of max density", inWords, "Cell with the largest energy over volume: its position in its own source file, from 0, ghosts counted."},
	{"max_density_source", "source of max density", inWords, "Source file of that cell: its position in the ledger's list of sources, from 0."},
	{"max_density_at", "place of max density", inLength, "Volume centroid of that cell."},
	{"peak_density", "peak density", inDensity, "Largest energy density at the places where the file gives its values."},
	{"peak_density_at", "place of peak density", inLength, "Place of the peak density."},
	{"max_equivalent_stress", "max equivalent stress", inStress, "Equivalent stress by the criterion that governs over all places where the file gives its values: the largest, by max-principal that of the largest utilisation, in compression negative."},
	{"max_utilisation", "utilisation", inRatios, "Largest utilisation of one cell; above 1 the cell is past its material's proportional limit."},
	{"max_utilisation_cell", "cell of max utilisation", inWords, "Cell with the largest utilisation: its position in its own source file, from 0, ghosts counted."},
	{"max_utilisation_source", "source of max utilisation", inWords, "Source file of that cell: its position in the ledger's list of sources, from 0."},
	{"max_utilisation_at", "place of max utilisation", inLength, "Volume centroid of that cell."},
	{"cells_past_limit", "cells past the limit", inCounts, "Cells whose utilisation is above 1; empty where a limit is missing."},
	{"volume_past_limit", "volume past the limit", inVolume, "Volume of the cells whose utilisation is above 1."},
	{"energy_past_limit", "energy past the limit", inEnergy, "Energy of the cells whose utilisation is above 1."},
	{"volume_without_limit", "volume without a limit", inVolume, "Volume of the cells whose material has no proportional limit."},
	{"cells_yielded", "cells with plastic strain", inCounts, "Cells whose plastic strain in the file is not zero; empty where the file has none."},
	{"curve_energy", "energy by the curve", inEnergy, "Energy by the material's stress-strain curve at the strain reached, an estimate for monotonic loading."},
	{"error_estimate", "estimated error", inShares, "Estimated error of the mesh in the energy norm, as a part of that norm; empty where it was not asked for or is not available."},
	{"energy_error", "estimated error of the energy", inEnergy, "Energy of the estimated error of the stress: by as much the exact solution's energy is estimated to lie from that of the mesh."},

	{"specific_energy", "specific energy", inSpecificEnergy, "Energy over mass."},
	{"volume_share_past_limit", "volume past the limit", inShares, "Volume of the cells whose utilisation is above 1, over the volume."},
	{"energy_share_past_limit", "energy past the limit", inShares, "Energy of the cells whose utilisation is above 1, over the energy."},
	{"stiffness_sensitivity", "sensitivity", inRatios, "Relative change of the whole model's energy over that of the region's stiffness, to first order."},
	{"concentration_top_1", "densest 1 %", inShares, "Share of the energy in the densest 1 % of the volume."},
	{"concentration_top_5", "densest 5 %", inShares, "Share of the energy in the densest 5 % of the volume."},
	{"concentration_top_10", "densest 10 %", inShares, "Share of the energy in the densest 10 % of the volume."},
	{"concentration_top_25", "densest 25 %", inShares, "Share of the energy in the densest 25 % of the volume."},
	{"concentration_gini", "Gini index", inRatios, "Gini index of the energy in the volume: 0 where density is the same everywhere, 1 where all is in one point."},
	{"concentration_effective_volume", "effective volume", inShares, "Share of the volume that would hold the energy at one density, the square of the energy over the volume times the integral of density squared."},
	{"concentration_bin_width", "width of a bin", inShares, "Width of the bins of density that the numbers on concentration are taken from, as a part of the density: their error."},

	{"rank", "rank", inWords, "Place in the list of hotspots, from 1."},
	{"region", "region", inWords, "Name of the region; empty for the whole model."},
	{"cell", "cell", inWords, "Position of the cell in its own source file, from 0, ghosts counted."},
	{"source", "source", inWords, "Source file of the cell: its position in the ledger's list of sources, from 0."},
	{"element_id", "element", inWords, "The file's own number of the cell; empty where it gives none."},
	{"at", "place", inLength, "Volume centroid of the cell."},
	{"density", "density", inDensity, "Energy of the cell over its volume."},
	{"prominence", "prominence", inShares, "Share by which density falls around the peak before a higher one is met, at least; empty where the hotspot is a single cell."},
	{"equivalent_stress", "equivalent stress", inStress, "Equivalent stress of the cell by the criterion: the largest, by max-principal the one that governs, in compression negative."},
	{"utilisation", "utilisation", inRatios, "Largest utilisation of the cell; above 1 it is past its material's proportional limit."},
	{"past_limit", "limit", inWords, "Whether the utilisation is above 1; empty where the region has no limit."},
	{"stress_margin", "stress margin", inRatios, "Limit over equivalent stress, less 1: the load factor less 1."},
	{"load_factor", "load factor", inRatios, "Factor by which the load of a linear run may be multiplied until the cell is at its limit."},
	{"error_to_target", "error over target", inRatios, "Estimated error of the cell over what the study's target leaves to each cell; above 1 the mesh is too coarse there; empty without an estimate."},
	{"local_estimate_neuber_stress", "local stress by Neuber", inStress, "Estimated stress by Neuber's rule and the material's curve; empty where there is no estimate."},
	{"local_estimate_neuber_strain", "local strain by Neuber", inRatios, "Estimated strain by Neuber's rule, which tends to overstate it."},
	{"local_estimate_energy_density_stress", "local stress by energy density", inStress, "Estimated stress by the equivalent strain energy density and the material's curve; empty where there is no estimate."},
	{"local_estimate_energy_density_strain", "local strain by energy density", inRatios, "Estimated strain by the equivalent strain energy density, which tends to understate it."},
	{"local_estimate_refused", "no local estimate", inWords, "Why there is no estimate; empty where there is one, or the cell is not past its limit, or its material has no curve and no yield stress."},
	{"region_share", "share of region", inShares, "Energy over the energy of the region."},
	{"energy_at", "centroid of the energy", inLength, "Centroid of the energy of the hotspot's cells."},
	{"principal_1", "largest principal stress", inStress, "Largest principal stress of the peak's cell, where its density is largest."},
	{"principal_1_direction", "its direction", inWords, "Unit vector along the largest principal stress."},
	{"principal_2", "middle principal stress", inStress, "Middle principal stress at the same place."},
	{"principal_2_direction", "its direction", inWords, "Unit vector along the middle principal stress."},
	{"principal_3", "least principal stress", inStress, "Least principal stress at the same place."},
	{"principal_3_direction", "its direction", inWords, "Unit vector along the least principal stress."},
	{"ball_radius", "radius of the ball", inLength, "Radius about the place within which density is averaged, as the study states it."},
	{"ball_volume", "volume in the ball", inVolume, "Volume of the cells' parts in the ball."},
	{"ball_cells", "cells in the ball", inCounts, "Cells that have a part in the ball."},
	{"averaged_density", "averaged density", inDensity, "Energy over volume of the cells' parts in the ball, by their quadrature points; cells of other materials are left out."},
	{"eigenvalue", "eigenvalue", inRatios, "Eigenvalue of the singular stress about the place, one more than half the slope of the logarithm of density over that of the distance."},
	{"eigenvalue_spread", "its spread", inRatios, "How far the eigenvalue moves when a third of the cells that it comes from is left out."},
	{"control_radius", "control radius", inLength, "Radius within which the density of a brittle material is averaged."},
	{"control_volume", "control volume", inVolume, "Volume of the cells' parts within the control radius."},
	{"control_density", "control density", inDensity, "Density averaged over the control volume."},
	{"averaged_density_ratio", "density ratio", inRatios, "Control density over the critical density of the material; above 1 a brittle material breaks."},
	{"critical_density", "critical density", inDensity, "Density, averaged over the control volume, at which a brittle material breaks."},
	{"singular", "singular", inWords, "Whether the stress grows without bound as the mesh is refined: singular, regular or cannot tell."},

	{"quantity", "quantity", inWords, "The number that is judged, by its key in the ledger."},
	{"at_most", "at most", inOwnUnit, "Upper bound that the requirement states."},
	{"at_least", "at least", inOwnUnit, "Lower bound that the requirement states."},
	{"value", "value", inOwnUnit, "The number that was found; empty where it is not available."},
	{"met", "met", inWords, "Whether the value exists and keeps the bound."},
	{"why", "why", inWords, "Reason where the requirement is not met for another cause than its bound."},

	{"points", "points", inCounts, "Points of the file."},
	{"youngs_modulus", "Young's modulus", inStress, "Young's modulus of the material."},
	{"poissons_ratio", "Poisson's ratio", inRatios, "Poisson's ratio of the material."},
	{"proportional_limit", "proportional limit", inStress, "Stress up to which the material is taken to be linear."},
	{"proportional_limit_compression", "limit in compression", inStress, "Compressive stress up to which the material is taken to be linear."},
	{"external_work", "external work", inEnergy, "Work that the loads have done from the unloaded state."},
	{"stored", "stored energy", inEnergy, "Energy of the accounts, as the balance takes it."},
	{"elsewhere", "energy elsewhere", inEnergy, "Energy that the study states for what the file has no cells for."},
	{"gap", "balance gap", inShares, "Part of the external work that is found neither in the accounts nor elsewhere; below 0 where more is found."},
}

// quantityOf returns the quantity of a ledger key, which may stand behind a path, as in
// hotspot.1.density. A change of one against a baseline is a share of it. A key that is
// not known is a number without a unit.
func quantityOf(key string) quantity {
	if of, isChange := strings.CutPrefix(key, "change."); isChange {
		return quantity{key: key, name: "change of " + quantityOf(of).name, kind: inShares}
	}
	last := key[strings.LastIndexByte(key, '.')+1:]
	for i := range quantities {
		if quantities[i].key == last {
			return quantities[i]
		}
	}
	return quantity{key: key, name: key, kind: inRatios}
}

// unitSigns turns a unit's label, which is plain ASCII, into what people write.
var unitSigns = strings.NewReplacer("^2", "²", "^3", "³", "*", "·", "uJ", "µJ")

// unitNotStated stands where the study names no unit.
const unitNotStated = "not stated"

// unit returns the label of the kind's unit: "" for words, "1" for counts, shares and
// ratios, unitNotStated where the study does not state what is needed.
func (k unitKind) unit(units *energy.UnitLabels) string {
	switch k {
	case inWords:
		return ""
	case inCounts, inShares, inRatios:
		return "1"
	case inOwnUnit:
		return "that of the quantity"
	case inLength:
		return stated(units.Length)
	case inArea:
		return power(units.Length, "^2")
	case inVolume:
		return power(units.Length, "^3")
	case inMass:
		return stated(units.Mass)
	case inEnergy:
		return stated(units.Energy)
	case inDensity:
		return stated(units.EnergyDensity)
	case inStress:
		return stated(units.Stress)
	case inSpecificEnergy:
		return quotientUnit(units.Energy, units.Mass)
	}
	panic("report: no such kind of unit")
}

func stated(label energy.Text) string {
	if label == "" {
		return unitNotStated
	}
	return string(label)
}

func power(label energy.Text, exponent string) string {
	if label == "" {
		return unitNotStated
	}
	return string(label) + exponent
}

func quotientUnit(above, below energy.Text) string {
	if above == "" || below == "" {
		return unitNotStated
	}
	return string(above + "/" + below)
}

// measured returns a number with its unit, as it stands in a sentence.
func measured(key string, n energy.Number, units *energy.UnitLabels) string {
	kind := quantityOf(key).kind
	return withUnit(kind.text(n), kind, units)
}

func withUnit(text string, kind unitKind, units *energy.UnitLabels) string {
	switch unit := kind.unit(units); unit {
	case "", "1", unitNotStated:
		return text
	default:
		return text + " " + unitSigns.Replace(unit)
	}
}
