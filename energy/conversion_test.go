package energy

import (
	"math"
	"reflect"
	"testing"
)

// The dimension of every number that is converted: powers of length, stress and mass,
// and of the load, by which energies are normalised. What is not listed stays.
var dimensions = map[string][4]float64{
	"volume": {3, 0, 0, 0}, "volume_past_limit": {3, 0, 0, 0}, "volume_without_limit": {3, 0, 0, 0}, "mass": {0, 0, 1, 0},
	"energy": {3, 1, 0, -2}, "energy_volumetric": {3, 1, 0, -2}, "energy_distortional": {3, 1, 0, -2},
	"energy_past_limit": {3, 1, 0, -2}, "energy_error": {3, 1, 0, -2}, "curve_energy": {3, 1, 0, 0},
	"mean_density": {0, 1, 0, -2}, "max_density": {0, 1, 0, -2}, "peak_density": {0, 1, 0, -2},
	"max_equivalent_stress": {0, 1, 0, 0},
	"max_density_at":        {1, 0, 0, 0}, "peak_density_at": {1, 0, 0, 0}, "max_utilisation_at": {1, 0, 0, 0},

	"hotspot.at": {1, 0, 0, 0}, "hotspot.density": {0, 1, 0, -2}, "hotspot.peak_density": {0, 1, 0, -2},
	"hotspot.energy": {3, 1, 0, -2}, "hotspot.volume": {3, 0, 0, 0}, "hotspot.equivalent_stress": {0, 1, 0, 0},
	"hotspot.mean_density": {0, 1, 0, -2}, "hotspot.energy_at": {1, 0, 0, 0},
	"hotspot.principal_1": {0, 1, 0, 0}, "hotspot.principal_2": {0, 1, 0, 0}, "hotspot.principal_3": {0, 1, 0, 0},
	"around.ball_radius": {1, 0, 0, 0}, "around.ball_volume": {3, 0, 0, 0}, "around.averaged_density": {0, 1, 0, -2},
	"around.control_radius": {1, 0, 0, 0}, "around.control_volume": {3, 0, 0, 0}, "around.control_density": {0, 1, 0, -2},
	"around.averaged_density_ratio": {0, 0, 0, -2},

	"material.youngs_modulus": {0, 1, 0, 0}, "material.proportional_limit": {0, 1, 0, 0},
	"material.proportional_limit_compression": {0, 1, 0, 0}, "material.density": {-3, 0, 1, 0}, "material.yield_stress": {0, 1, 0, 0},
	"material.control_radius": {1, 0, 0, 0}, "material.critical_density": {0, 1, 0, 0},
	"material.fracture_toughness": {0.5, 1, 0, 0}, "material.tensile_strength": {0, 1, 0, 0},
	"material.youngs_moduli": {0, 1, 0, 0}, "material.shear_moduli": {0, 1, 0, 0}, "material.stiffness": {0, 1, 0, 0},
	"estimate.stress": {0, 1, 0, 0},

	"balance.external_work": {3, 1, 0, -2}, "balance.stored": {3, 1, 0, -2}, "balance.elsewhere": {3, 1, 0, -2}, "part.energy": {3, 1, 0, -2},

	"model.diagonal": {1, 0, 0, 0}, "model.hotspot_tolerance": {1, 0, 0, 0},
}

// fill gives every number of a structure a value of its own.
func fill(structure reflect.Value, next *float64) {
	for i := range structure.NumField() {
		*next++
		switch field := structure.Field(i); field.Interface().(type) {
		case Number:
			field.SetFloat(*next)
		case *Vector:
			field.Set(reflect.ValueOf(&Vector{*next, -*next, *next / 2}))
		case *[3]float64:
			field.Set(reflect.ValueOf(&[3]float64{*next, 2 * *next, 3 * *next}))
		case *[6][6]float64:
			matrix := new([6][6]float64)
			for j := range 36 {
				matrix[j/6][j%6] = *next + float64(j)
			}
			field.Set(reflect.ValueOf(matrix))
		}
	}
}

// checkConverted compares each number of a structure with what its dimension demands.
func checkConverted(t *testing.T, prefix string, from, to any, factors [4]float64) {
	t.Helper()
	before, after := reflect.ValueOf(from), reflect.ValueOf(to)
	for i := range before.NumField() {
		key := prefix + before.Type().Field(i).Tag.Get("json")
		factor := 1.0
		for j, power := range dimensions[key] {
			factor *= math.Pow(factors[j], power)
		}
		switch value := before.Field(i).Interface().(type) {
		case Number:
			if got := after.Field(i).Float(); !within(got, float64(value)*factor, 1e-14) {
				t.Errorf("%s: %.17g, want %.17g", key, got, float64(value)*factor)
			}
		case *Vector:
			got := after.Field(i).Interface().(*Vector)
			for axis := range value {
				if !within(got[axis], value[axis]*factor, 1e-14) {
					t.Errorf("%s: %v, want %v times %.17g", key, *got, *value, factor)
				}
			}
		case *[3]float64:
			for j, got := range after.Field(i).Interface().(*[3]float64) {
				if !within(got, value[j]*factor, 1e-14) {
					t.Errorf("%s[%d]: %v, want %v times %.17g", key, j, got, value[j], factor)
				}
			}
		case *[6][6]float64:
			for j := range 36 {
				if got := after.Field(i).Interface().(*[6][6]float64)[j/6][j%6]; !within(got, value[j/6][j%6]*factor, 1e-14) {
					t.Errorf("%s[%d][%d]: %v, want %v times %.17g", key, j/6, j%6, got, value[j/6][j%6], factor)
				}
			}
		}
	}
}

// Inches, pounds per square inch and pounds become millimetres, megapascals and
// kilograms, and a load of 3 times the reference the reference.
func TestConversionOfEveryNumber(t *testing.T) {
	next := 0.0
	ledger := &Ledger{Units: labels("in", "psi", "lb"), Materials: make([]MaterialUsed, 2), Regions: make([]RegionAccount, 2), Hotspots: make([]Hotspot, 2)}
	fill(reflect.ValueOf(&ledger.Total).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Regions[1].Account).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Hotspots[1]).Elem(), &next)
	ledger.Hotspots[1].LocalEstimate = &LocalEstimate{Refused: "no"}
	fill(reflect.ValueOf(&ledger.Hotspots[1].LocalEstimate.Neuber).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Hotspots[1].LocalEstimate.EnergyDensity).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Hotspots[1].Surroundings).Elem(), &next)
	ledger.AtCentre = &AtCentre{At: Vector{1, -2, 3}}
	fill(reflect.ValueOf(&ledger.AtCentre.Surroundings).Elem(), &next)
	ledger.Balance = &Balance{Parts: make([]Elsewhere, 2)}
	fill(reflect.ValueOf(ledger.Balance).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Balance.Parts[1]).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Materials[1]).Elem(), &next)
	fill(reflect.ValueOf(&ledger.Model).Elem(), &next)
	units := labels("mm", "MPa", "kg")
	conversion, everything, masses := conversionTo(&units, ledger, 3)
	if everything != "" || masses != "" {
		t.Fatal(everything, masses)
	}
	got := conversion.apply(ledger, units)
	factors := [4]float64{25.4, 4.4482216152605 / (25.4 * 25.4), 0.45359237, 3} // N per mm² is MPa
	checkConverted(t, "", ledger.Total, got.Total, factors)
	checkConverted(t, "", ledger.Regions[1].Account, got.Regions[1].Account, factors)
	checkConverted(t, "hotspot.", ledger.Hotspots[1], got.Hotspots[1], factors)
	checkConverted(t, "around.", ledger.Hotspots[1].Surroundings, got.Hotspots[1].Surroundings, factors)
	checkConverted(t, "around.", ledger.AtCentre.Surroundings, got.AtCentre.Surroundings, factors)
	if at := got.AtCentre.At; !near(at, Vector{25.4, -50.8, 76.2}) {
		t.Errorf("the centre is %v", at)
	}
	before, after := ledger.Hotspots[1].LocalEstimate, got.Hotspots[1].LocalEstimate
	checkConverted(t, "estimate.", before.Neuber, after.Neuber, factors)
	checkConverted(t, "estimate.", before.EnergyDensity, after.EnergyDensity, factors)
	checkConverted(t, "balance.", *ledger.Balance, *got.Balance, factors)
	checkConverted(t, "part.", ledger.Balance.Parts[1], got.Balance.Parts[1], factors)
	checkConverted(t, "material.", ledger.Materials[1], got.Materials[1], factors)
	checkConverted(t, "model.", ledger.Model, got.Model, factors)
	if got.Units != units {
		t.Errorf("units %+v", got.Units)
	}
}

// U-04 (derived; the pound force and the inch are exact by definition): 1 lbf·in is
// 0.112984829 J, 1 lbf·in/in³ is 6894.757293 J/m³.
func TestConversionOfEnergy(t *testing.T) {
	for _, c := range []struct {
		from, to        UnitLabels
		energy, density float64
	}{
		{labels("in", "psi", ""), labels("m", "Pa", ""), 0.112984829, 6894.757293},
		{labels("in", "ksi", ""), labels("m", "Pa", ""), 112.984829, 6894757.293},
		{labels("mm", "MPa", ""), labels("m", "Pa", ""), 1e-3, 1e6},
		{labels("mm", "Pa", ""), labels("m", "Pa", ""), 1e-9, 1},
		{labels("cm", "kPa", ""), labels("m", "GPa", ""), 1e-12, 1e-6},
		{labels("ft", "psi", ""), labels("in", "psi", ""), 1728, 1},
	} {
		ledger := &Ledger{Units: c.from, Total: Account{Energy: 1, MaxDensity: 1}}
		conversion, _, _ := conversionTo(&c.to, ledger, 1)
		got := conversion.apply(ledger, c.to).Total
		if !within(float64(got.Energy), c.energy, 1e-8) || !within(float64(got.MaxDensity), c.density, 1e-9) {
			t.Errorf("%s %s to %s %s: energy %.10g, density %.10g, want %.9g and %.9g", c.from.Length, c.from.Stress, c.to.Length, c.to.Stress,
				got.Energy, got.MaxDensity, c.energy, c.density)
		}
	}
	for unit, kilograms := range map[string]float64{"kg": 1, "g": 1e-3, "t": 1000, "lb": 0.45359237} {
		if got := factorBetween(massInKilograms, unit, "kg"); got != kilograms {
			t.Errorf("%s: %v kg, want %v", unit, got, kilograms)
		}
		if got := factorBetween(massInKilograms, unit, unit); got != 1 {
			t.Errorf("%s to itself: %v", unit, got)
		}
	}
}
