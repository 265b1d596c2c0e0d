package energy

import (
	"fmt"
	"slices"
	"strings"
)

// A dependence says on what a compared quantity depends beside the structure.
type dependence int

const (
	onNothing dependence = iota // on the structure alone, or on no load
	onEnergy                    // on the square of the load, for which it is normalised
	onLoad                      // on the load in another way
	onLimit                     // on the load in another way, and on the criterion
)

// A comparedQuantity is one number that runs are compared by.
type comparedQuantity struct {
	key       string
	of        func(s *scope) Number // nil: the account's number of that key
	errorOf   func(s *scope) Number // its estimated error; nil: not estimated
	depends   dependence
	needsMass bool
}

// A scope is one account of one run.
type scope struct {
	account *Account
	isWhole bool // the account of the whole model
	control Text
}

// comparedQuantities lists what is compared, in the order of the rows.
var comparedQuantities = []comparedQuantity{
	{key: "cells"},
	{key: "volume"},
	{key: "mass", needsMass: true},
	{key: "energy", depends: onEnergy, errorOf: energyError},
	{key: "energy_share"},
	{key: "energy_volumetric", depends: onEnergy},
	{key: "energy_distortional", depends: onEnergy},
	{key: "specific_energy", depends: onEnergy, needsMass: true, of: specificEnergy,
		errorOf: func(s *scope) Number { return quotient(s.account.EnergyError, s.account.Mass) }},
	{key: "mean_density", depends: onEnergy,
		errorOf: func(s *scope) Number { return quotient(s.account.EnergyError, s.account.Volume) }},
	{key: "max_density", depends: onEnergy},
	{key: "peak_density", depends: onEnergy},
	{key: "max_equivalent_stress", depends: onLimit},
	{key: "max_utilisation", depends: onLimit},
	{key: "cells_past_limit", depends: onLimit},
	{key: "volume_past_limit", depends: onLimit},
	{key: "volume_share_past_limit", depends: onLimit,
		of: func(s *scope) Number { return quotient(s.account.VolumePastLimit, s.account.Volume) }},
	{key: "energy_past_limit", depends: onLimit},
	{key: "energy_share_past_limit", depends: onLimit,
		of: func(s *scope) Number { return quotient(s.account.EnergyPastLimit, s.account.Energy) }},
	{key: "volume_without_limit"},
	{key: "cells_yielded", depends: onLoad},
	{key: "curve_energy", depends: onLoad},
	{key: "error_estimate"},
	{key: "energy_error", depends: onEnergy},
	{key: "stiffness_sensitivity", of: stiffnessSensitivity},
}

func energyError(s *scope) Number { return s.account.EnergyError }

// specificEnergy returns the energy stored by a unit of mass.
func specificEnergy(s *scope) Number { return quotient(s.account.Energy, s.account.Mass) }

// stiffnessSensitivity returns the relative change of the model's energy over that of
// one region's stiffness, to first order: -U_r/U under given forces, +U_r/U under given
// displacements; None for the whole model and other loading.
//
// Source: methods, section 17 (self-adjoint); C-04.
func stiffnessSensitivity(s *scope) Number {
	switch {
	case s.isWhole:
		return None
	case s.control == "force":
		return -s.account.EnergyShare
	case s.control == "displacement":
		return s.account.EnergyShare
	}
	return None
}

// quotient returns a number over another, None where that is 0.
func quotient(part, whole Number) Number {
	if whole == 0 {
		return None
	}
	return part / whole
}

// value returns the quantity of an account; None without an account.
func (q *comparedQuantity) value(s *scope) Number {
	if s.account == nil {
		return None
	}
	if q.of != nil {
		return q.of(s)
	}
	number, _ := numberByKey(*s.account, q.key)
	return number
}

// ComparedQuantities returns the keys of what runs are compared by.
func ComparedQuantities() []string {
	keys := make([]string, len(comparedQuantities))
	for i := range keys {
		keys[i] = comparedQuantities[i].key
	}
	return keys
}

// isCompared reports whether runs are compared by the quantity of a key.
func isCompared(key string) bool {
	return slices.Contains(ComparedQuantities(), key)
}

// cutChange takes change. from the start of a requirement's quantity.
func cutChange(quantity string) (key string, isChange bool) {
	return strings.CutPrefix(quantity, "change.")
}

// addRows sets one run beside the baseline: region by region in the order of the
// baseline, then those that the run alone has, then the whole model.
func (c *comparing) addRows(run int) {
	ledger, baseline := c.run(run), c.baseline()
	names := make([]Text, 0, len(baseline.Regions)+1)
	for i := range baseline.Regions {
		names = append(names, Text(baseline.Regions[i].Name))
	}
	for i := range ledger.Regions {
		if regionOf(baseline, ledger.Regions[i].Name) == nil {
			names = append(names, Text(ledger.Regions[i].Name))
		}
	}
	for _, region := range append(names, "") {
		fresh, old := c.scopeOf(ledger, region), c.scopeOf(baseline, region)
		for i := range comparedQuantities {
			q := &comparedQuantities[i]
			if region == "" && q.key == "stiffness_sensitivity" {
				continue // the sum of the regions', which says nothing
			}
			c.to.index[rowKey{run, region, q.key}] = len(c.to.Rows)
			c.to.Rows = append(c.to.Rows, c.row(run, region, q, &fresh, &old))
		}
	}
}

// scopeOf returns the account of a region, the region "" standing for the whole model.
func (c *comparing) scopeOf(ledger *Ledger, region Text) scope {
	s := scope{control: c.to.Control}
	if region == "" {
		s.account, s.isWhole = &ledger.Total, true
	} else if found := regionOf(ledger, string(region)); found != nil {
		s.account = &found.Account
	}
	return s
}

// row compares one number.
func (c *comparing) row(run int, region Text, q *comparedQuantity, fresh, old *scope) ComparisonRow {
	row := ComparisonRow{
		Run: run, Region: region, Quantity: q.key, Value: q.value(fresh), Baseline: q.value(old), Difference: None, Relative: None,
	}
	obstacles := &c.obstacles[run-1]
	if units := obstacles.ofUnits(q); units != "" {
		row.Withheld = Text(units)
		return row
	}
	row.Difference = row.Value - row.Baseline
	row.Withheld = Text(obstacles.of(q, region))
	switch {
	case row.Withheld != "":
	case !row.Value.Exists():
		row.Withheld = Text(fmt.Sprintf("%s is not available", q.key))
	case !row.Baseline.Exists():
		row.Withheld = Text(fmt.Sprintf("%s is not available in the baseline", q.key))
	case row.Baseline == 0:
		row.Withheld = Text(fmt.Sprintf("%s of the baseline is 0", q.key))
	default:
		row.Relative = row.Difference / row.Baseline
	}
	if q.errorOf != nil && row.Difference.Exists() && run != c.to.Baseline {
		row.Resolved = resolved(row.Difference, q.errorOf(fresh), q.errorOf(old))
	}
	return row
}

// resolved reports whether a difference is as large as the errors of both numbers
// together; nil where one is not estimated.
func resolved(difference, one, other Number) *bool {
	errors := one + other
	if !errors.Exists() {
		return nil
	}
	is := !(difference < errors && -difference < errors)
	return &is
}

// judge holds the requirements against each run; those on a change against each run but
// the baseline.
func (c *comparing) judge() {
	for i := range c.options.Requirements {
		r := &c.options.Requirements[i]
		_, isChange := cutChange(r.Quantity)
		for j := range c.to.Runs {
			if run := j + 1; !isChange || run != c.to.Baseline {
				value, why := c.required(run, r)
				c.to.Requirements = append(c.to.Requirements, ComparisonRequirement{run, outcome(c.run(run), r, value, why)})
			}
		}
	}
}

// required finds a requirement's number for a run, or says why there is none.
func (c *comparing) required(run int, r *Requirement) (Number, string) {
	key, isChange := cutChange(r.Quantity)
	if !isCompared(key) {
		return valueOf(c.run(run), r)
	}
	row := c.to.Row(run, Text(r.Region), key)
	switch {
	case row == nil && r.Region == "":
		return None, fmt.Sprintf("%s is of regions alone; name one", key)
	case row == nil:
		return None, fmt.Sprintf("there is no region %q", r.Region)
	case isChange && !row.Relative.Exists():
		return None, string(row.Withheld)
	case isChange:
		return row.Relative, ""
	case !row.Value.Exists():
		return None, fmt.Sprintf("%s is not available", key)
	}
	return row.Value, ""
}
