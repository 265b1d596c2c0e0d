package study

import (
	"math"
	"slices"
)

// A form is what a value may be; forms add up where several are allowed.
type form uint16

const (
	aText   form = 1 << iota // any text
	aName                    // a text that is not empty
	aNumber                  // finite
	aWhole                   // a whole number
	aSwitch                  // true or false
	anOff                    // false alone
	names                    // list of texts that are not empty, at least one
	numbers                  // list of finite numbers, at least one
	corners                  // [[x, y, z], [x, y, z]]
	matrix                   // list of lists of numbers
	aTable                   // [key] or { ... }
	tables                   // [[key]], once for each
)

// A bound is the range of a number.
type bound struct {
	low, high float64
	open      bool // the ends do not belong to it
	words     string
}

var (
	anyNumber   = &bound{math.Inf(-1), math.Inf(1), true, "must be finite"}
	positive    = &bound{0, math.Inf(1), true, "must be above 0"}
	countable   = &bound{1, math.MaxInt32, false, "must be 1 or more"}
	contraction = &bound{-1, 0.5, true, "must be above -1 and below 0.5"} // positive definite isotropic law
	aboveOne    = &bound{1, math.Inf(1), true, "must be above 1"}
	share       = &bound{0, 1, true, "must be above 0 and below 1"}
	shareOrNone = &bound{-math.SmallestNonzeroFloat64, 1, true, "must be 0 or above, and below 1"}
)

// holds reports whether a number lies within the bound.
func (b *bound) holds(value float64) bool {
	if b.open {
		return value > b.low && value < b.high
	}
	return value >= b.low && value <= b.high
}

// A key is one entry of a study file. A key that is later, or a text that is, belongs
// to the study's fixed form but is not built: a study that uses it is refused.
type key struct {
	path   string // names joined by points, no numbers for the tables of a list
	form   form
	values []string // the texts it may be; nil: any
	bound  *bound   // of its numbers; nil: any finite
	needed bool     // its table is refused without it
	later  bool     // it and what is below it
	after  []string // those of values that come later
}

// The texts that keys may be.
var (
	lengths       = []string{"mm", "m", "cm", "in", "ft"}
	stresses      = []string{"MPa", "Pa", "kPa", "GPa", "psi", "ksi"}
	masses        = []string{"kg", "g", "t", "lb"}
	idealisations = []string{"solid", "plane-stress", "plane-strain", "axisymmetric"}
	criteria      = []string{"von-mises", "tresca", "max-principal", "distortion-energy", "total-energy"}
	findingCodes  = []string{
		"not-finite", "all-zero", "tangled-cells", "negative-density", "hooke-mismatch", "total-strain-used", "no-region",
		"mixed-locations", "study-contradicted",
		"shear-convention", "component-order", "default-order", "balance-gap", "point-data-across-regions", "large-strain",
		"units-suspect", "units-not-stated", "regions-overlap", "criterion-unsuited", "parts-not-accounted", "degenerate-cells",
		"plastic-strain-present", "nonlinear-run-advised", "several-locations", "outside-path", "repeated-piece", "hotspot-pool", "not-mergeable",
		"array-not-everywhere", "error-not-estimated", "hotspot-mesh-too-coarse",
		"error-estimated", "patches-not-used", "ghost-cells", "mirrored-cells", "limit-without-source", "one-value-per-cell",
	}
)

// keys is the whole form of a study file. To build what is later, take the word
// later, or the text from after, out of its row and read the key in options.go.
var keys = slices.Concat([]key{
	{path: "title", form: aText},

	{path: "units", form: aTable},
	{path: "units.length", form: aName, values: lengths},
	{path: "units.stress", form: aName, values: stresses},
	{path: "units.mass", form: aName, values: masses},

	{path: "input", form: aTable},
	{path: "input.files", form: names},
	{path: "input.steps", form: names, later: true},
	{path: "input.start", form: aName, values: []string{"as-given"}, later: true},
	{path: "input.time", form: aName | aNumber, values: []string{"last", "first", "all"}, after: []string{"all"}},

	{path: "model", form: aTable},
	{path: "model.idealisation", form: aName, values: idealisations},
	{path: "model.thickness", form: aName | aNumber, bound: positive},
	{path: "model.axis", form: aName, values: []string{"x", "y"}},
	{path: "model.points", form: aName, values: []string{"reference", "deformed"}},
	{path: "model.repeats", form: aWhole, bound: countable},

	{path: "energy", form: aTable},
	{path: "energy.from", form: aName, values: []string{"stress-strain", "stress", "strain", "displacement"}},

	{path: "fields", form: aTable},
},
	tensorKeys("stress", "tensor", "mandel"),
	tensorKeys("strain", "tensor", "engineering", "mandel"),
	[]key{{path: "fields.strain.kind", form: aName, values: []string{"total", "elastic"}}},
	tensorKeys("thermal_strain", "tensor", "engineering", "mandel"),
	tensorKeys("plastic_strain", "tensor", "engineering", "mandel"),
	fieldKeys("equivalent_plastic_strain", "cell", "point", "integration"),
	fieldKeys("displacement", "point"),
	[]key{{path: "fields.displacement.arrays", form: names}},
	fieldKeys("temperature", "cell", "point", "integration"),
	fieldKeys("nodal_force", "point"),
	[]key{{path: "fields.nodal_force.arrays", form: names}},
	fieldKeys("element_id", "cell"),
	[]key{
		{path: "material", form: tables},
		{path: "material.name", form: aName, needed: true},
		{path: "material.youngs_modulus", form: aNumber, bound: positive},
		{path: "material.poissons_ratio", form: aNumber, bound: contraction},
		{path: "material.proportional_limit", form: aNumber, bound: positive},
		{path: "material.source", form: aName},
		{path: "material.proportional_limit_compression", form: aNumber, bound: positive},
		{path: "material.density", form: aNumber, bound: positive},
		{path: "material.thermal_expansion", form: aNumber, bound: anyNumber},
		{path: "material.reference_temperature", form: aNumber, bound: anyNumber},
		{path: "material.youngs_moduli", form: numbers, bound: positive},
		{path: "material.shear_moduli", form: numbers, bound: positive},
		{path: "material.poissons_ratios", form: numbers},
		{path: "material.axes", form: matrix | aName},
		{path: "material.stiffness", form: matrix},
		{path: "material.stiffness_order", form: aName},
		{path: "material.curve", form: aName},
		{path: "material.proportional_limit_by", form: aName},
		{path: "material.yield_stress", form: aNumber, bound: positive},
		{path: "material.hardening_isotropic", form: aNumber, later: true},
		{path: "material.hardening_kinematic", form: aNumber, later: true},
		{path: "material.hardening_exponent", form: aNumber, bound: aboveOne},
		{path: "material.control_radius", form: aNumber, bound: positive},
		{path: "material.critical_density", form: aNumber, bound: positive},
		{path: "material.fracture_toughness", form: aNumber, bound: positive},
		{path: "material.tensile_strength", form: aNumber, bound: positive},

		{path: "region", form: tables},
		{path: "region.name", form: aName, needed: true},
		{path: "region.select", form: aTable, needed: true},
		{path: "region.select.array", form: aName},
		{path: "region.select.values", form: numbers},
		{path: "region.select.block", form: aName},
		{path: "region.select.box", form: corners},
		{path: "region.select.rest", form: aSwitch},
		{path: "region.material", form: aName},
		{path: "region.thickness", form: aNumber, bound: positive},
		{path: "region.criterion", form: aName, values: criteria},
		{path: "region.optional", form: aSwitch},

		{path: "limit", form: aTable},
		{path: "limit.criterion", form: aName, values: criteria},
		{path: "limit.list", form: aWhole, bound: countable},

		{path: "hotspots", form: aTable},
		{path: "hotspots.count", form: aWhole, bound: countable},
		{path: "hotspots.by", form: aName, values: []string{"utilisation", "density", "energy"}},
		{path: "hotspots.prominence", form: aNumber, bound: shareOrNone},
		{path: "hotspots.radius", form: aNumber, bound: positive},
		{path: "hotspots.centre", form: numbers},
		{path: "hotspots.pool", form: aWhole, bound: countable},

		{path: "error", form: aTable},
		{path: "error.estimate", form: aSwitch},
		{path: "error.target", form: aNumber, bound: share},
		{path: "error.recovery", form: aName, values: []string{"averaging", "patches"}},

		{path: "balance", form: aTable},
		{path: "balance.external_work", form: aNumber},
		{path: "balance.load", form: tables},
		{path: "balance.load.name", form: aName},
		{path: "balance.load.force", form: numbers, needed: true},
		{path: "balance.load.displacement", form: numbers, needed: true},

		{path: "elsewhere", form: tables},
		{path: "elsewhere.name", form: aName, needed: true},
		{path: "elsewhere.energy", form: aNumber, needed: true},
		{path: "elsewhere.source", form: aName},

		{path: "loading", form: aTable},
		{path: "loading.control", form: aName, values: []string{"force", "displacement", "mixed"}},
		{path: "loading.scale", form: aNumber, bound: positive},

		{path: "compare", form: aTable},
		{path: "compare.tolerance", form: aNumber, bound: positive},

		{path: "case", form: tables, later: true},
		{path: "case.name", form: aName, needed: true},
		{path: "case.files", form: names, needed: true},
		{path: "case.factor", form: aNumber},

		{path: "require", form: tables},
		{path: "require.name", form: aName},
		{path: "require.quantity", form: aName, needed: true},
		{path: "require.region", form: aName},
		{path: "require.at_most", form: aNumber},
		{path: "require.at_least", form: aNumber},

		{path: "accept", form: tables},
		{path: "accept.code", form: aName, values: findingCodes, needed: true},
		{path: "accept.reason", form: aName, needed: true},

		{path: "review", form: aTable},
		{path: "review.document", form: aText},
		{path: "review.revision", form: aText},
		{path: "review.prepared_by", form: aText},
		{path: "review.checked_by", form: aText},
	})

// fieldKeys returns the keys of a field: not used, an array's name, or a table. Only
// fields that may be given at integration points have a rule for them.
func fieldKeys(field string, locations ...string) []key {
	path := "fields." + field
	rows := []key{
		{path: path, form: anOff | aName | aTable},
		{path: path + ".array", form: aName},
		{path: path + ".on", form: aName, values: locations},
	}
	if slices.Contains(locations, "integration") {
		rows = append(rows, key{path: path + ".rule", form: aName})
	}
	return rows
}

// tensorKeys returns the keys of a tensor's field.
func tensorKeys(field string, shears ...string) []key {
	path := "fields." + field
	return append(fieldKeys(field, "cell", "point", "integration"),
		key{path: path + ".arrays", form: names},
		key{path: path + ".order", form: aName},
		key{path: path + ".shear", form: aName, values: shears},
		key{path: path + ".sign", form: aName, values: []string{"tension", "compression"}})
}

// findKey returns the key of that path, or nil.
func findKey(path string) *key {
	for i := range keys {
		if keys[i].path == path {
			return &keys[i]
		}
	}
	return nil
}

// keysBelow returns the last names of the keys of a table, "" being the whole study.
func keysBelow(path string) []string {
	var below []string
	for i := range keys {
		if parent, name, _ := cutLast(keys[i].path); parent == path {
			below = append(below, name)
		}
	}
	return below
}
