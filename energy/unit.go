package energy

import "math"

// lengthInMetres, stressInPascals and massInKilograms are exact by definition (inch
// 0.0254 m, pound 0.45359237 kg, pound force 4.4482216152605 N); the pound force per
// square inch is their quotient.
var (
	lengthInMetres  = map[string]float64{"mm": 1e-3, "m": 1, "cm": 1e-2, "in": 0.0254, "ft": 0.3048}
	stressInPascals = map[string]float64{
		"MPa": 1e6, "Pa": 1, "kPa": 1e3, "GPa": 1e9,
		"psi": 4.4482216152605 / (0.0254 * 0.0254), "ksi": 4448.2216152605 / (0.0254 * 0.0254),
	}
	massInKilograms = map[string]float64{"kg": 1, "g": 1e-3, "t": 1e3, "lb": 0.45359237}
)

// energyNames are the units of stress × length³ that have a name of their own.
var energyNames = map[[2]string]string{
	{"psi", "in"}: "lbf*in",
	{"ksi", "in"}: "kip*in",
}

// jouleNames are the powers of ten of a joule.
var jouleNames = map[int]string{-9: "nJ", -6: "uJ", -3: "mJ", 0: "J", 3: "kJ", 6: "MJ", 9: "GJ"}

// labels names the units that follow from those of length, stress and mass. All are
// empty where length or stress is not stated.
func labels(length, stress, mass string) UnitLabels {
	units := UnitLabels{Length: Text(length), Stress: Text(stress), Mass: Text(mass)}
	if length == "" || stress == "" {
		return units
	}
	units.Energy = Text(energyUnit(length, stress))
	units.EnergyDensity = units.Energy + "/" + Text(length) + "^3"
	return units
}

// energyUnit names stress × length³.
func energyUnit(length, stress string) string {
	if name, ok := energyNames[[2]string{stress, length}]; ok {
		return name
	}
	power := math.Log10(EnergyInJoules(length, stress))
	if name, ok := jouleNames[int(math.Round(power))]; ok && math.Abs(power-math.Round(power)) < 1e-9 {
		return name
	}
	return stress + "*" + length + "^3"
}

// EnergyInJoules returns how many joules one unit of stress × length³ is; NaN for
// units it does not know.
func EnergyInJoules(length, stress string) float64 {
	metres, hasLength := lengthInMetres[length]
	pascals, hasStress := stressInPascals[stress]
	if !hasLength || !hasStress {
		return math.NaN()
	}
	return pascals * metres * metres * metres
}

// factorBetween returns by what a number in one unit is multiplied to be in another; 1
// where neither is stated, NaN where one alone is, or is not in the table.
func factorBetween(table map[string]float64, from, to string) float64 {
	if from == to {
		return 1
	}
	one, hasOne := table[from]
	other, hasOther := table[to]
	if !hasOne || !hasOther {
		return math.NaN()
	}
	return one / other
}
