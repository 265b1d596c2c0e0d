package report

import (
	"strings"
	"testing"

	"strainledger/energy"
)

func TestIdealisationWords(t *testing.T) {
	units := &energy.UnitLabels{Length: "mm"}
	for _, test := range []struct {
		model energy.ModelSummary
		want  string
	}{
		{energy.ModelSummary{Idealisation: "solid", Points: "reference"}, "solid; points in their reference position"},
		{energy.ModelSummary{Idealisation: "plane-stress", Thickness: energy.Number(8)}, "plane stress, thickness 8 mm"},
		{energy.ModelSummary{Idealisation: "plane-stress", Thickness: "t"}, `plane stress, thickness by cell array "t"`},
		{energy.ModelSummary{Idealisation: "plane-strain", Thickness: energy.Number(1)}, "plane strain, thickness 1 mm (numbers are per unit thickness)"},
		{energy.ModelSummary{Idealisation: "axisymmetric", Axis: "y", Points: "deformed"}, "axisymmetric, about the axis y; points in their deformed position"},
	} {
		if got := idealisationWords(&test.model, units); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
}

func TestTermsInWords(t *testing.T) {
	for term, want := range map[energy.Criterion]string{
		energy.VonMises: "von Mises", energy.Tresca: "Tresca", energy.MaxPrincipal: "maximum principal stress",
		energy.DistortionEnergy: "distortion energy", energy.TotalEnergy: "total strain energy", "new": "new",
	} {
		if got := inPlainWords(string(term)); got != want {
			t.Errorf("%s is %q in words, want %q", term, got, want)
		}
	}
	for from, want := range map[energy.EnergySource]string{
		energy.FromStressStrain: "½ σ:ε from the stress and the strain of the file",
		energy.FromStress:       "½ σ:ε from the stress of the file, strain by the material's law",
		energy.FromStrain:       "½ σ:ε from the strain of the file, stress by the material's law",
		energy.FromDisplacement: "½ σ:ε from the displacement of the file, strain by its gradients, stress by the material's law",
	} {
		if got := energyWords(&energy.ModelSummary{EnergyFrom: string(from)}); got != want {
			t.Errorf("%s is %q in words, want %q", from, got, want)
		}
	}
}

func TestFieldWords(t *testing.T) {
	for _, test := range []struct {
		field energy.FieldUsed
		want  string
	}{
		{
			energy.FieldUsed{Array: "sig", On: "cell", Order: "xx yy zz xy yz xz", Sign: "tension", DecidedBy: "study"},
			`array "sig", per cell, xx yy zz xy yz xz; named in the study`,
		},
		{
			energy.FieldUsed{Array: "E", On: "integration", Order: "xx yy xy", Shear: "engineering", Kind: "elastic", DecidedBy: "audit", Why: "it fits"},
			`array "E", at integration points, xx yy xy, engineering shear, elastic strain; decided from the numbers (it fits)`,
		},
		{
			energy.FieldUsed{Array: "s", On: "point", Sign: "compression", DecidedBy: "default", Why: "alone"},
			`array "s", at points, compression positive; assumed (alone)`,
		},
		{energy.FieldUsed{Array: "u", On: "point", DecidedBy: "file"}, `array "u", at points; found in the file`},
	} {
		if got := fieldWords(&test.field); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
}

func TestUnitWords(t *testing.T) {
	for _, test := range []struct {
		units energy.UnitLabels
		want  string
	}{
		{energy.UnitLabels{}, "not stated: all numbers are in the consistent units of the files"},
		{
			energy.UnitLabels{Length: "in", Stress: "psi", Energy: "lbf*in", EnergyDensity: "lbf*in/in^3"},
			"length in, stress psi, energy lbf·in, energy density lbf·in/in³; not stated: mass",
		},
		{energy.UnitLabels{Length: "mm"}, "length mm; not stated: stress, energy, energy density, mass"},
		{
			energy.UnitLabels{Length: "m", Stress: "Pa", Energy: "J", EnergyDensity: "J/m^3", Mass: "kg"},
			"length m, stress Pa, energy J, energy density J/m³, mass kg",
		},
	} {
		if got := unitWords(&test.units); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
}

// Where some units are stated, the columns that lack theirs say so.
func TestColumnsWithoutTheirUnitSaySo(t *testing.T) {
	ledger := bracket()
	ledger.Units = energy.UnitLabels{Length: "mm"}
	text := textOf(t, ledger, TextOptions{})
	for _, want := range []string{
		"Stored energy by region\n",
		"mm³  not stated         %  not stated      not stated\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
}

func TestMaterialsShowBothLimits(t *testing.T) {
	ledger := bracket()
	iron := noMaterial("grey iron")
	iron.ProportionalLimit, iron.ProportionalLimitCompression = 120, 400
	ledger.Materials = append(ledger.Materials, iron, noMaterial("rubber"))
	text := textOf(t, ledger, TextOptions{})
	for _, want := range []string{
		"  aluminium  isotropic    70000       0.33           150            –  data sheet of the plate,\n",
		"  grey iron  isotropic        –          –           120          400  source not stated\n",
		"  rubber     isotropic        –          –             –            –  –\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
}

func TestExclusionsSayWhatTheyAre(t *testing.T) {
	units := &energy.UnitLabels{Length: "mm"}
	for _, test := range []struct {
		exclusion      energy.Exclusion
		measure, words string
	}{
		{energy.Exclusion{Reason: "ghost", Dimension: 3, Measure: 31.25}, "31.250 mm³", "solids, marked as duplicate or hidden in the file"},
		{energy.Exclusion{Reason: "not-finite", Dimension: 2, Measure: 1}, "1.0000 mm²", "surfaces, values that are not numbers"},
		{energy.Exclusion{Reason: "degenerate", Dimension: 1, Measure: 0}, "0 mm", "lines, no extent"},
		{energy.Exclusion{Reason: "other-dimension", Dimension: 0, Measure: energy.None}, "–", "points, not of the model's dimension"},
		{energy.Exclusion{Reason: "unsupported", Dimension: 3, Measure: energy.None}, "–", "solids, of a type without a measure here"},
		{energy.Exclusion{Reason: "no-region", Dimension: 3, Measure: 2}, "2.0000 mm³", "solids, in no region"},
		{energy.Exclusion{Reason: "new", Dimension: 4, Measure: 2}, "–", "new"},
	} {
		if got := exclusionMeasure(&test.exclusion, units); got != test.measure {
			t.Errorf("the measure is %q, want %q", got, test.measure)
		}
		if got := exclusionWords(&test.exclusion); got != test.words {
			t.Errorf("they are %q, want %q", got, test.words)
		}
	}
}
