package energy

import (
	"maps"
	"slices"
	"strings"
)

// strainUnits are the units of strain by the names that a study or a call uses.
var strainUnits = map[string]float64{"ratio": 1, "percent": 1e-2, "microstrain": 1e-6}

// strainNames and stressNames are the ways in which headings write units, in lower case
// and with the letter μ for both of the signs that look so.
var (
	strainNames = map[string]string{
		"": "", "ratio": "ratio", "-": "ratio", "1": "ratio", "mm/mm": "ratio", "m/m": "ratio", "in/in": "ratio", "in./in.": "ratio",
		"%": "percent", "percent": "percent", "pct": "percent",
		"microstrain": "microstrain", "μstrain": "microstrain", "ustrain": "microstrain", "με": "microstrain", "ue": "microstrain",
		"μm/m": "microstrain", "um/m": "microstrain", "μin/in": "microstrain", "1e-6": "microstrain", "10^-6": "microstrain",
	}
	stressNames = map[string]string{
		"":    "",
		"mpa": "MPa", "n/mm2": "MPa", "n/mm²": "MPa", "n/mm^2": "MPa", "mn/m2": "MPa", "mn/m²": "MPa", "mn/m^2": "MPa",
		"pa": "Pa", "n/m2": "Pa", "n/m²": "Pa", "n/m^2": "Pa",
		"kpa": "kPa", "kn/m2": "kPa", "kn/m²": "kPa", "kn/m^2": "kPa",
		"gpa": "GPa", "kn/mm2": "GPa", "kn/mm²": "GPa", "kn/mm^2": "GPa",
		"psi": "psi", "lbf/in2": "psi", "lbf/in²": "psi", "lbf/in^2": "psi",
		"ksi": "ksi", "kip/in2": "ksi", "kip/in²": "ksi", "kip/in^2": "ksi",
	}
)

// StrainUnits returns the names of the units of strain that a call may state.
func StrainUnits() []string { return slices.Sorted(maps.Keys(strainUnits)) }

// densityNames name energy per volume, which has the unit of stress.
var densityNames = map[string]string{
	"Pa": "J/m^3", "kPa": "kJ/m^3", "MPa": "MJ/m^3", "GPa": "GJ/m^3", "psi": "lbf*in/in^3", "ksi": "kip*in/in^3",
}

// unitKey returns a written unit as the tables above hold it.
func unitKey(text string) string {
	return strings.ReplaceAll(strings.ToLower(strings.TrimSpace(text)), "µ", "μ")
}

// A heading is what stands above a column: "Engineering strain (%)" has the name
// "engineering strain" and the unit "%".
type heading struct{ text, name, unit string }

// parseHeading splits a heading. A unit stands in brackets, the known ones anywhere,
// others at the end; or before or after a separator if it is known. A percent sign needs no separator, and microstrain is
// a name as well.
func parseHeading(text string) heading {
	text = strings.TrimSpace(text)
	lower := strings.ToLower(text)
	for _, brackets := range []string{"()", "[]"} {
		before, rest, isOpen := strings.Cut(lower, brackets[:1])
		unit, after, isClosed := strings.Cut(rest, brackets[1:])
		if isOpen && isClosed && (after == "" || isUnit(unit)) {
			return heading{text, strings.TrimSpace(before + after), unitKey(unit)}
		}
	}
	if whole := unitKey(lower); strainNames[whole] == "microstrain" {
		return heading{text, "strain", whole}
	}
	if name := strings.Trim(lower, "% "); len(name) < len(strings.TrimSpace(lower)) {
		return heading{text, name, "%"}
	}
	for i, letter := range lower {
		if !strings.ContainsRune(headingSeparators, letter) {
			continue
		}
		before, after := lower[:i], lower[i+1:]
		if isUnit(after) {
			return heading{text, strings.Trim(before, headingSeparators), unitKey(after)}
		}
		if isUnit(before) {
			return heading{text, strings.Trim(after, headingSeparators), unitKey(before)}
		}
	}
	return heading{text, lower, ""}
}

// headingSeparators may stand between a heading's name and its unit.
const headingSeparators = " _,/"

// isUnit reports whether a text is one of the ways to write a unit.
func isUnit(text string) bool {
	unit := unitKey(text)
	return strainNames[unit] != "" || stressNames[unit] != ""
}

// headingsOf returns the headings of a line's fields.
func headingsOf(fields []string) []heading {
	headings := make([]heading, len(fields))
	for i, field := range fields {
		headings[i] = parseHeading(field)
	}
	return headings
}

// is reports whether a call means this heading: by its whole text or without the unit.
func (h heading) is(stated string) bool {
	stated = strings.TrimSpace(stated)
	return strings.EqualFold(h.text, stated) || strings.EqualFold(h.name, stated)
}

// isTrue reports whether a column is said to hold true stress or strain.
func (h heading) isTrue() bool {
	return strings.Contains(h.name, "true") || strings.Contains(h.name, "logarithmic")
}

// serves reports whether a heading names the quantity: "strain" or "stress". Rates and
// parts of the strain do not serve.
func (h heading) serves(quantity string) bool {
	for _, word := range []string{"rate", "plastic", "elastic", "lateral", "transverse", "shear"} {
		if strings.Contains(h.name, word) {
			return false
		}
	}
	switch h.name {
	case "ε", "eps", "epsilon":
		return quantity == "strain"
	case "σ", "sigma":
		return quantity == "stress"
	}
	return strings.Contains(h.name, quantity) && strings.Contains(h.name, "strain") != strings.Contains(h.name, "stress")
}
