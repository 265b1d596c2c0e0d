package energy

import (
	"math"
	"strings"
	"testing"
)

// relativeOf lists which accounts of a run have a relative change of their energy, the
// whole model as "".
func relativeOf(c *Comparison, run int, quantity string) map[Text]bool {
	has := map[Text]bool{}
	for i := range c.Rows {
		if row := &c.Rows[i]; row.Run == run && row.Quantity == quantity {
			has[row.Region] = row.Relative.Exists()
		}
	}
	return has
}

// What differs is reported, numbers and differences stand, and the percent is withheld
// with the reason: of everything, or of a region and of the whole.
func TestObstacles(t *testing.T) {
	same := func() *Ledger { return springs(t, loaded("force", None), 10, 30, 600) }
	const all = "energy volume max_utilisation"
	for name, c := range map[string]struct {
		change               func(l *Ledger)
		code                 string
		reason               string // of the whole model's energy, or of what is withheld
		first, second, whole string // which of all keep their percent
	}{
		"nothing":            {func(l *Ledger) {}, "", "", all, all, all},
		"title and path":     {func(l *Ledger) { l.Title = "x"; l.Sources[0].Path = "y" }, "", "", all, all, all},
		"source of a limit":  {func(l *Ledger) { l.Materials[0].Source = "y" }, "", "", all, all, all},
		"rounding of a unit": {func(l *Ledger) { l.Materials[0].YoungsModulus *= 1 + 9e-7 }, "", "", all, all, all},

		"idealisation": {func(l *Ledger) { l.Model.Idealisation = "plane-strain" }, "models-differ",
			"the models were not read alike: idealisation plane-strain against solid", "", "", ""},
		"axis":        {func(l *Ledger) { l.Model.Axis = "x" }, "models-differ", "the models were not read alike: axis x against none", "", "", ""},
		"points":      {func(l *Ledger) { l.Model.Points = "deformed" }, "models-differ", "the models were not read alike: points deformed against reference", "", "", ""},
		"energy from": {func(l *Ledger) { l.Model.EnergyFrom = "stress" }, "models-differ", "the models were not read alike: energy from stress against stress-strain", "", "", ""},
		"stress at points": {func(l *Ledger) { l.Fields.Stress = &FieldUsed{On: "point"} }, "models-differ",
			"the models were not read alike: stress on point against cell", "", "", ""},
		"no strain": {func(l *Ledger) { l.Fields.Strain = nil }, "models-differ", "the models were not read alike: strain on none against cell", "", "", ""},
		"repeats":   {func(l *Ledger) { l.Repeated = &Repeated{Repeats: 4} }, "models-differ", "the models were not read alike: repeats 4 against 1", "", "", ""},
		"two ways": {func(l *Ledger) { l.Model.Points, l.Model.EnergyFrom = "deformed", "stress" }, "models-differ",
			"the models were not read alike: points deformed against reference, energy from stress against stress-strain", "", "", ""},
		"one repeat": {func(l *Ledger) { l.Repeated = &Repeated{Repeats: 1} }, "", "", all, all, all},

		"modulus": {func(l *Ledger) { l.Materials[0].YoungsModulus = 11000 }, "materials-differ",
			`the materials of region "first" differ: youngs_modulus 11000 against 10000`, "", all, ""},
		"modulus beyond rounding": {func(l *Ledger) { l.Materials[0].YoungsModulus = 10000.02 }, "materials-differ",
			`the materials of region "first" differ: youngs_modulus 10000.02 against 10000`, "", all, ""},
		"Poisson's ratio": {func(l *Ledger) { l.Materials[1].PoissonsRatio = 0.25 }, "materials-differ",
			`the materials of region "second" differ: poissons_ratio 0.25 against 0`, all, "", ""},
		"limit": {func(l *Ledger) { l.Materials[1].ProportionalLimit = None }, "materials-differ",
			`the materials of region "second" differ: proportional_limit null against 250`, all, "", ""},
		"density": {func(l *Ledger) { l.Materials[0].Density = 3 }, "materials-differ",
			`the materials of region "first" differ: density 3 against 2`, "", all, ""},
		"axes": {func(l *Ledger) { l.Materials[0].Axes = [3]Vector{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}} }, "materials-differ",
			`the materials of region "first" differ: axes [[1 0 0] [0 1 0] [0 0 1]] against null`, "", all, ""},
		"moduli": {func(l *Ledger) { l.Materials[0].YoungsModuli = &[3]float64{1, 2, 3} }, "materials-differ",
			`the materials of region "first" differ: youngs_moduli [1 2 3] against null`, "", all, ""},
		"curve": {func(l *Ledger) { l.Materials[0].Curve = "steel.csv" }, "materials-differ",
			`the materials of region "first" differ: curve steel.csv against null`, "", all, ""},
		"name and law": {func(l *Ledger) {
			l.Materials[0].Name, l.Materials[0].Law, l.Regions[0].Material = "wood", "none", "wood"
		}, "materials-differ",
			`the materials of region "first" differ: name wood against of first, law none against isotropic`, "", all, ""},
		"no material": {func(l *Ledger) { l.Regions[0].Material = "" }, "materials-differ",
			`the materials of region "first" differ: none against of first`, "", all, ""},

		"region gone": {func(l *Ledger) { l.Regions = l.Regions[:1] }, "regions-differ",
			`the regions are not the same: the run has no region "second"`, all, "", ""},
		"region renamed": {func(l *Ledger) { l.Regions[1].Name = "other" }, "regions-differ",
			`the regions are not the same: the run has no region "second", the baseline has no region "other"`, all, "", ""},

		"criterion": {func(l *Ledger) { l.Regions[0].Criterion = "tresca" }, "criteria-differ",
			`the criterion of region "first" is tresca, in the baseline von-mises`, "energy volume", all, "energy volume"},
		"scale": {func(l *Ledger) { l.Model.Loading = &Loading{"force", 2} }, "loads-differ",
			"the load is 2 times the reference, in the baseline 1 times", "energy volume", "energy volume", "energy volume"},
		"control": {func(l *Ledger) { l.Model.Loading = &Loading{"displacement", None} }, "loads-differ",
			"the load is given by displacement, in the baseline by force", "", "", ""},
	} {
		t.Run(name, func(t *testing.T) {
			old, fresh := same(), same()
			c.change(fresh)
			got := compared(t, CompareOptions{Loading: &Loading{"force", None}}, old, fresh)
			for region, kept := range map[Text]string{"first": c.first, "second": c.second, "": c.whole} {
				for _, quantity := range strings.Fields(all) {
					row := got.Row(2, region, quantity)
					if want := strings.Contains(kept, quantity); row.Relative.Exists() != want {
						t.Errorf("%q: %+v, want a percent: %v", region, row, want)
					}
					isThere := region != "second" || len(fresh.Regions) == 2 && fresh.Regions[1].Name == "second"
					if row.Baseline.Exists() && row.Difference.Exists() != isThere {
						t.Errorf("%q: %+v", region, row)
					}
				}
			}
			if c.reason != "" {
				if row := got.Row(2, "", "max_utilisation"); row.Withheld != Text(c.reason) {
					t.Errorf("withheld %q\nwant     %q", row.Withheld, c.reason)
				}
			}
			count := 0
			for _, finding := range got.Findings {
				if finding.Code == c.code && finding.Severity == Warning && strings.HasPrefix(finding.Message, "run 2: ") {
					count++
				} else if finding.Code != "loads-differ" {
					t.Errorf("finding %+v", finding)
				}
			}
			if count == 0 && c.code != "" {
				t.Errorf("no finding %s in %+v", c.code, got.Findings)
			}
			// The other way round it is withheld too.
			back := compared(t, CompareOptions{Baseline: 2, Loading: &Loading{"force", None}}, old, fresh)
			if got.Row(2, "", "max_utilisation").Relative.Exists() != back.Row(1, "", "max_utilisation").Relative.Exists() {
				t.Error("exchanging baseline and run changes what is withheld")
			}
		})
	}
}

// A region that the run alone has is shown with its numbers.
func TestRegionOfTheRunAlone(t *testing.T) {
	old, fresh := springs(t, nil, 10, 30, 600), springs(t, nil, 10, 30, 600)
	fresh.Regions[1].Name = "other"
	c := compared(t, CompareOptions{}, old, fresh)
	if row := c.Row(2, "other", "energy"); row.Value != 60 || row.Baseline.Exists() || row.Withheld != `the baseline has no region "other"` {
		t.Errorf("%+v", row)
	}
	if row := c.Row(2, "second", "energy"); row.Value.Exists() || row.Baseline != 60 || row.Withheld != `the run has no region "second"` {
		t.Errorf("%+v", row)
	}
	if has := relativeOf(c, 2, "energy"); !has["first"] || has["second"] || has["other"] || has[""] || len(has) != 4 {
		t.Errorf("relative %v", has)
	}
}

// U-01 (S-01 in SI units), and units on one side alone.
func TestUnitsOfRuns(t *testing.T) {
	si := chain(t, func(o *Options) {
		o.Length, o.Stress, o.Mass = "m", "Pa", "g"
		o.Loading = &Loading{"force", None}
		o.Materials[0].ProportionalLimit = 250e6
		o.Materials[0].Density = 2e12 // 2 kg/mm³ in g/m³
	}, rod{"bar", 0.5, 0.0002, 210e9, 50e6})
	plain := chain(t, loaded("force", None), rod{"bar", 500, 200, 210000, 50})
	if got := float64(si.Total.Energy); !within(got, 0.595238095, 1e-9) {
		t.Fatalf("U-01: %.9g J, want 0.595238095", got)
	}
	c := compared(t, CompareOptions{}, plain, si)
	checkFindings(t, c, []string{"units-converted"})
	if want := "run 2: the units are m Pa g; the numbers are converted into mm MPa kg"; c.Findings[0].Message != want || c.Units != labels("mm", "MPa", "kg") {
		t.Errorf("%+v, units %+v", c.Findings[0], c.Units)
	}
	// A difference of rounding alone.
	for quantity, want := range map[string]float64{"energy": 595.238095, "volume": 1e5, "mass": 2e5, "mean_density": 0.00595238095, "max_equivalent_stress": 50, "max_utilisation": 0.2, "specific_energy": 0.002976190475} {
		row := c.Row(2, "bar", quantity)
		if !within(float64(row.Value), want, 1e-8) || math.Abs(float64(row.Relative)) > 1e-14 {
			t.Errorf("%+v, want %v", row, want)
		}
	}
	// And back, in the units of the other.
	c = compared(t, CompareOptions{Baseline: 2}, plain, si)
	if row := c.Row(1, "", "energy"); !within(float64(row.Value), 0.595238095, 1e-8) || math.Abs(float64(row.Relative)) > 1e-14 {
		t.Errorf("%+v", row)
	}

	for name, change := range map[string]func(u *UnitLabels){
		"length":  func(u *UnitLabels) { u.Length = "" },
		"stress":  func(u *UnitLabels) { u.Stress = "" },
		"unknown": func(u *UnitLabels) { u.Length = "fathom" },
	} {
		fresh := springs(t, loaded("force", None), 10, 30, 600)
		change(&fresh.Units)
		c := compared(t, CompareOptions{}, springs(t, loaded("force", None), 10, 30, 600), fresh)
		row := c.Row(2, "", "energy")
		if row.Value != 240 || row.Baseline != 240 || row.Difference.Exists() || !strings.HasPrefix(string(row.Withheld), "the unit of ") || len(c.Hotspots) > 0 {
			t.Errorf("%s: %+v", name, row)
		}
		checkFindings(t, c, []string{"units-differ"})
	}
	// Without a unit of mass on one side masses alone cannot be compared.
	fresh := springs(t, loaded("force", None), 10, 30, 600)
	fresh.Units.Mass = ""
	c = compared(t, CompareOptions{}, springs(t, loaded("force", None), 10, 30, 600), fresh)
	for quantity, isKept := range map[string]bool{"mass": false, "specific_energy": false, "energy": true, "volume": true} {
		row := c.Row(2, "", quantity)
		if row.Difference.Exists() != isKept || row.Relative.Exists() != isKept || !row.Value.Exists() {
			t.Errorf("%+v", row)
		}
	}
	checkFindings(t, c, []string{"units-differ"})
	// Where nobody states units, numbers are compared as they are.
	bare := springs(t, loaded("force", None), 10, 30, 600)
	bare.Units = UnitLabels{}
	checkFindings(t, compared(t, CompareOptions{}, bare, bare), []string{})
}

func TestMaterialDifference(t *testing.T) {
	material := func(moduli ...float64) *MaterialUsed {
		m := &MaterialUsed{Name: "wood", Density: None}
		if moduli != nil {
			m.YoungsModuli = (*[3]float64)(moduli)
		}
		return m
	}
	for _, c := range []struct {
		fresh, old *MaterialUsed
		want       string
	}{
		{nil, nil, ""},
		{material(), nil, "wood against none"},
		{nil, material(), "none against wood"},
		{material(), material(), ""},
		{material(1, 2, 3), material(1, 2, 3), ""},
		{material(1, 2, 3), material(1, 2, 3.000001), ""},
		{material(1, 2, 3), material(1, 2, 3.1), "youngs_moduli [1 2 3] against [1 2 3.1]"},
		{material(1, 2, 3), material(), "youngs_moduli [1 2 3] against null"},
	} {
		if got := materialDifference(c.fresh, c.old); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}
