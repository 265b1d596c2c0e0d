package energy

import (
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strainledger/mesh"
)

// A rod is one part of a chain along x under uniform stress.
type rod struct {
	region       string
	length, area float64
	youngs       float64
	stress       float64
}

// chain tallies rods that stand in series, each a cell, a region and a material of its
// own.
func chain(t testing.TB, change func(*Options), rods ...rod) *Ledger {
	t.Helper()
	m, options := &memoryMesh{pieces: []memoryPiece{{}}}, solidOptions(mesh.OnCell)
	piece := &m.pieces[0]
	var stress, strain [][]float64
	var part []float64
	at := 0.0
	for i, r := range rods {
		points, cell := brick(r.length, r.area, 1)
		for j := range points {
			points[j][0] += at
		}
		for j := range cell.nodes {
			cell.nodes[j] += int32(8 * i)
		}
		at += r.length
		piece.points, piece.cells = append(piece.points, points...), append(piece.cells, cell)
		stress = append(stress, []float64{r.stress, 0, 0, 0, 0, 0})
		strain = append(strain, []float64{r.stress / r.youngs, 0, 0, 0, 0, 0})
		part = append(part, float64(i))
		material := NewMaterial("of " + r.region)
		material.YoungsModulus, material.PoissonsRatio, material.ProportionalLimit, material.Source = r.youngs, 0, 250, "invented"
		material.Density = 2
		options.Mass = "kg"
		options.Materials = append(options.Materials, material)
		options.Regions = append(options.Regions, Region{Name: r.region, Array: "part", Values: []float64{float64(i)}, Material: material.Name})
	}
	piece.arrays = []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...), labels1("part", part...)}
	if change != nil {
		change(&options)
	}
	return tally(t, m, options)
}

// loaded states how a chain is loaded.
func loaded(control Text, scale Number) func(*Options) {
	return func(o *Options) { o.Loading = &Loading{Control: control, Scale: scale} }
}

// compared compares ledgers; the first is the baseline.
func compared(t testing.TB, options CompareOptions, ledgers ...*Ledger) *Comparison {
	t.Helper()
	var runs []ComparedRun
	for i, ledger := range ledgers {
		runs = append(runs, ComparedRun{Path: fmt.Sprintf("run-%d.json", i+1), Ledger: ledger})
	}
	c, err := Compare(runs, &options)
	if err != nil {
		t.Fatal(err)
	}
	checkComparison(t, c)
	return c
}

// checkComparison holds the promises of every comparison.
func checkComparison(t testing.TB, c *Comparison) {
	t.Helper()
	for i := range c.Rows {
		row := &c.Rows[i]
		if row != c.Row(row.Run, row.Region, row.Quantity) {
			t.Errorf("row %d is not found by its name: %+v", i, row)
		}
		switch {
		case row.Relative.Exists() == (row.Withheld != ""):
			t.Errorf("relative %v and withheld %q", row.Relative, row.Withheld)
		case row.Difference.Exists() && row.Difference != row.Value-row.Baseline:
			t.Errorf("%+v: difference", row)
		case row.Relative.Exists() && !within(float64(row.Relative*row.Baseline), float64(row.Difference), 1e-12):
			t.Errorf("%+v: relative", row)
		case row.Run == c.Baseline && (row.Difference.Exists() && row.Difference != 0 || row.Resolved != nil):
			t.Errorf("%+v: the baseline differs from itself", row)
		}
	}
}

// checkRow compares the numbers of a row with what is wanted.
func checkRow(t testing.TB, c *Comparison, run int, region Text, quantity string, value, difference, relative float64) {
	t.Helper()
	row := c.Row(run, region, quantity)
	for name, pair := range map[string][2]float64{
		"value": {float64(row.Value), value}, "difference": {float64(row.Difference), difference}, "relative": {float64(row.Relative), relative},
	} {
		if !within(pair[0], pair[1], 1e-7) { // the digits printed in the check values
			t.Errorf("run %d, %s of %q: %s %.9g, want %.9g", run, quantity, region, name, pair[0], pair[1])
		}
	}
}

func checkStiffness(t testing.TB, c *Comparison, run, want int) {
	t.Helper()
	if got, why := c.Stiffness(run); got != want || why != "" {
		t.Errorf("run %d: stiffness %d (%s), want %d", run, got, why, want)
	}
}

// C-01 and C-02 (S-01: Timoshenko, Strength of Materials): a bar of 10 % more area
// stores less under the same force, more under the same displacement, and is stiffer
// both times.
func TestStifferBar(t *testing.T) {
	force := compared(t, CompareOptions{},
		chain(t, loaded("force", None), rod{"bar", 500, 200, 210000, 10000. / 200}),
		chain(t, loaded("force", None), rod{"bar", 500, 220, 210000, 10000. / 220}))
	checkRow(t, force, 2, "", "energy", 541.125541, 541.125541-595.238095, -0.0909090909)
	checkRow(t, force, 2, "bar", "energy", 541.125541, 541.125541-595.238095, -0.0909090909)
	checkRow(t, force, 2, "", "volume", 110000, 10000, 0.1)
	checkRow(t, force, 2, "", "mass", 220000, 20000, 0.1)
	checkRow(t, force, 2, "", "specific_energy", 541.125541/220000, 541.125541/220000-595.238095/200000, 1/1.21-1)
	checkRow(t, force, 2, "", "mean_density", 541.125541/110000, 541.125541/110000-595.238095/100000, 1/1.21-1)
	checkRow(t, force, 2, "", "max_equivalent_stress", 10000./220, 10000./220-50, -0.0909090909)
	checkRow(t, force, 2, "", "max_utilisation", 10000./220/250, (10000./220-50)/250, -0.0909090909)
	checkStiffness(t, force, 2, 1)
	if ranks := force.Ranks(); !slices.Equal(ranks, []int{2, 1}) || force.Control != "force" {
		t.Errorf("ranks %v, control %q", ranks, force.Control)
	}

	// 0.2 mm over 500 mm
	given := compared(t, CompareOptions{},
		chain(t, loaded("displacement", None), rod{"bar", 500, 200, 210000, 84}),
		chain(t, loaded("displacement", None), rod{"bar", 500, 220, 210000, 84}))
	checkRow(t, given, 2, "", "energy", 1848, 168, 0.1)
	checkStiffness(t, given, 2, 1)
	if ranks := given.Ranks(); !slices.Equal(ranks, []int{2, 1}) || given.Control != "displacement" {
		t.Errorf("ranks %v, control %q", ranks, given.Control)
	}

	softer := compared(t, CompareOptions{Baseline: 2},
		chain(t, loaded("force", None), rod{"bar", 500, 200, 210000, 10000. / 200}),
		chain(t, loaded("force", None), rod{"bar", 500, 220, 210000, 10000. / 220}))
	checkRow(t, softer, 1, "", "energy", 595.238095, 595.238095-541.125541, 0.1)
	checkStiffness(t, softer, 1, -1)
}

// springs are rods of 100 mm with E = 10000 MPa, so that areas of 10, 15 and 30 mm² make
// springs of 1000, 1500 and 3000 N/mm.
func springs(t testing.TB, change func(*Options), first, second, force float64) *Ledger {
	return chain(t, change, rod{"first", 100, first, 10000, force / first}, rod{"second", 100, second, 10000, force / second})
}

// C-03: springs of 1000 and 3000 N/mm in series, the first stiffened to 1500. C-03b: the
// same under an end displacement of 0.8 mm, that is 600 N and 800 N.
func TestSpringsInSeries(t *testing.T) {
	force := compared(t, CompareOptions{}, springs(t, loaded("force", None), 10, 30, 600), springs(t, loaded("force", None), 15, 30, 600))
	checkRow(t, force, 2, "first", "energy", 120, -60, -1./3)
	checkRow(t, force, 2, "second", "energy", 60, 0, 0)
	checkRow(t, force, 2, "", "energy", 180, -60, -0.25)
	checkRow(t, force, 2, "first", "energy_share", 2./3, 2./3-0.75, 2./3/0.75-1)
	checkStiffness(t, force, 2, 1)

	given := compared(t, CompareOptions{}, springs(t, loaded("displacement", None), 10, 30, 600), springs(t, loaded("displacement", None), 15, 30, 800))
	checkRow(t, given, 2, "first", "energy", 213.333333333, 33.333333333, 213.333333333/180-1)
	checkRow(t, given, 2, "second", "energy", 106.666666667, 46.666666667, 106.666666667/60-1)
	checkRow(t, given, 2, "", "energy", 320, 80, 1./3)
	checkStiffness(t, given, 2, 1)
}

// C-04: the first spring of C-03 stiffened by 1 %: predicted -1.8 mJ, in truth -1.782178.
func TestStiffnessSensitivity(t *testing.T) {
	c := compared(t, CompareOptions{}, springs(t, loaded("force", None), 10, 30, 600), springs(t, loaded("force", None), 10.1, 30, 600))
	base := c.Row(1, "", "energy").Value
	if got := float64(c.Row(1, "first", "stiffness_sensitivity").Value * 0.01 * base); !within(got, -1.8, 1e-9) {
		t.Errorf("predicted %.9g, want -1.8", got)
	}
	checkRow(t, c, 2, "", "energy", 238.2178218, -1.782178218, -1.782178218/240)
	for _, want := range []struct {
		control       Text
		first, second Number
	}{
		{"force", -0.75, -0.25}, {"displacement", 0.75, 0.25}, {"mixed", None, None}, {"", None, None},
	} {
		ledger := springs(t, loaded(want.control, None), 10, 30, 600)
		c := compared(t, CompareOptions{}, ledger, ledger)
		for region, value := range map[Text]Number{"first": want.first, "second": want.second} {
			if row := c.Row(2, region, "stiffness_sensitivity"); !cmp.Equal(row.Value, value, sameNumbers) {
				t.Errorf("control %q, %s: %v, want %v", want.control, region, row.Value, value)
			}
		}
		if c.Row(2, "", "stiffness_sensitivity") != nil {
			t.Error("the whole model has a sensitivity to itself")
		}
	}
}

// C-05 (S-01): two loads store 595.238095 and 95.238095 alone, and 476.190476 more when
// they act together: energies do not add, but go with the square of the load. C-07: a
// load of 1.2 times stores 1.44 times. Scales undo that.
func TestEnergyGoesWithTheSquareOfTheLoad(t *testing.T) {
	bar := func(force float64, scale Number) *Ledger {
		return chain(t, loaded("force", scale), rod{"bar", 500, 200, 210000, force / 200})
	}
	plain := compared(t, CompareOptions{}, bar(10000, None), bar(4000, None), bar(14000, None), bar(12000, None))
	checkRow(t, plain, 1, "", "energy", 595.238095, 0, 0)
	checkRow(t, plain, 2, "", "energy", 95.238095, 95.238095-595.238095, 0.16-1)
	checkRow(t, plain, 3, "", "energy", 1166.666667, 476.190476+95.238095, 0.96)
	checkRow(t, plain, 4, "", "energy", 857.142857, 857.142857-595.238095, 0.44)

	scaled := compared(t, CompareOptions{}, bar(10000, None), bar(4000, 0.4), bar(14000, 1.4), bar(12000, 1.2))
	for run := 2; run <= 4; run++ {
		for quantity, want := range map[string]float64{
			"energy": 595.238095, "mean_density": 0.00595238095, "max_density": 0.00595238095, "peak_density": 0.00595238095,
			"specific_energy": 0.002976190475, "energy_distortional": 595.238095 * 2 / 3, "energy_volumetric": 595.238095 / 3, // ν = 0
		} {
			row := scaled.Row(run, "", quantity)
			if !within(float64(row.Value), want, 1e-8) || math.Abs(float64(row.Relative)) > 1e-14 {
				t.Errorf("run %d: %s %v, relative %v, want %v and 0", run, quantity, row.Value, row.Relative, want)
			}
		}
		if hotspot := scaled.Runs[run-1].Ledger.Hotspots[0]; !within(float64(hotspot.Density), 0.00595238095, 1e-8) || !within(float64(hotspot.PeakDensity), 0.00595238095, 1e-8) {
			t.Errorf("run %d: hotspot %+v", run, hotspot)
		}
	}
	// What does not follow the load's square stays, without percent; what depends on no
	// load keeps its percent.
	stress := scaled.Row(4, "", "max_equivalent_stress")
	if stress.Value != 60 || stress.Difference != 10 || stress.Withheld != "the load is 1.2 times the reference, in the baseline 1 times" {
		t.Errorf("stress %+v", stress)
	}
	notNormalised := strings.Fields(`max_equivalent_stress max_utilisation cells_past_limit volume_past_limit volume_share_past_limit
		energy_past_limit energy_share_past_limit cells_yielded curve_energy`)
	for _, quantity := range ComparedQuantities() {
		if row := scaled.Row(4, "bar", quantity); (row.Withheld == stress.Withheld) != slices.Contains(notNormalised, quantity) {
			t.Errorf("%+v", row)
		}
	}
	checkRow(t, scaled, 4, "", "volume", 100000, 0, 0)
	checkStiffness(t, scaled, 4, 0)
	if ranks := scaled.Ranks(); !slices.Equal(ranks, []int{1, 1, 1, 1}) {
		t.Errorf("ranks %v of one structure", ranks)
	}
	checkFindings(t, scaled, []string{"loads-differ", "loads-differ", "loads-differ"})

	// The comparison's scale stands for the runs that state none.
	others := compared(t, CompareOptions{Loading: &Loading{Scale: 2}}, bar(10000, None), bar(4000, 0.4))
	if others.Row(1, "", "energy").Value != scaled.Row(1, "", "energy").Value/4 || others.Row(2, "", "energy").Value != scaled.Row(2, "", "energy").Value {
		t.Errorf("%+v %+v", others.Row(1, "", "energy"), others.Row(2, "", "energy"))
	}
}

// checkFindings compares the codes of the findings, in their order.
func checkFindings(t testing.TB, c *Comparison, want []string) {
	t.Helper()
	codes := []string{}
	for _, finding := range c.Findings {
		codes = append(codes, finding.Code)
	}
	if !slices.Equal(codes, want) {
		t.Errorf("findings %q, want %q\n%+v", codes, want, c.Findings)
	}
}

// Without a control, under a mixed one, and where runs do not agree, no sign means
// stiffer.
func TestControl(t *testing.T) {
	for _, c := range []struct {
		one, other Text
		stated     Text // of the comparison
		want       Text
		sign       int
		why        string
		findings   []string
	}{
		{"", "", "", "", 0, "the control of the load is not stated", []string{"control-not-stated"}},
		{"force", "", "", "", 0, "the control of the load is not stated", []string{"control-not-stated"}},
		{"", "force", "", "", 0, "the control of the load is not stated", []string{"control-not-stated"}},
		{"force", "displacement", "", "", 0, "the control of the load is not stated", []string{"loads-differ", "control-not-stated"}},
		{"mixed", "mixed", "", "mixed", 0, "under forces and displacements together neither sign means stiffer", []string{}},
		{"force", "force", "", "force", 1, "", []string{}},
		{"displacement", "displacement", "", "displacement", -1, "", []string{}},
		{"", "", "force", "force", 1, "", []string{}},
		{"", "", "displacement", "displacement", -1, "", []string{}},
		{"", "", "mixed", "mixed", 0, "under forces and displacements together neither sign means stiffer", []string{}},
		{"force", "", "force", "force", 1, "", []string{}},
		{"force", "force", "displacement", "displacement", -1, "", []string{"loads-differ"}},
		{"force", "displacement", "force", "force", 0, "the load is given by displacement, in the baseline by force", []string{"loads-differ", "loads-differ"}},
	} {
		var options CompareOptions
		if c.stated != "" {
			options.Loading = &Loading{Control: c.stated, Scale: None}
		}
		got := compared(t, options, springs(t, loaded(c.one, None), 10, 30, 600), springs(t, loaded(c.other, None), 15, 30, 600))
		sign, why := got.Stiffness(2)
		if got.Control != c.want || sign != c.sign || why != c.why {
			t.Errorf("%q, %q and %q: control %q, stiffness %d (%s)", c.one, c.other, c.stated, got.Control, sign, why)
		}
		checkFindings(t, got, c.findings)
		isRanked := c.want == "force" || c.want == "displacement"
		if ranks := got.Ranks(); (ranks[0] > 0) != isRanked || (ranks[1] > 0) != (isRanked && c.sign != 0) {
			t.Errorf("%q, %q and %q: ranks %v", c.one, c.other, c.stated, ranks)
		}
	}
	ledger := springs(t, loaded("force", None), 10, 30, 600)
	if sign, why := compared(t, CompareOptions{}, ledger, ledger).Stiffness(1); sign != 0 || why != "it is the baseline" {
		t.Errorf("baseline: %d, %q", sign, why)
	}
}

// Ranks under both controls; equal runs share a place.
func TestRanks(t *testing.T) {
	for control, want := range map[Text][]int{"force": {3, 1, 3, 2}, "displacement": {1, 4, 1, 3}} {
		c := compared(t, CompareOptions{Loading: &Loading{Control: control, Scale: None}},
			springs(t, nil, 10, 30, 600), springs(t, nil, 20, 30, 600), springs(t, nil, 10, 30, 600), springs(t, nil, 15, 30, 600))
		if got := c.Ranks(); !slices.Equal(got, want) {
			t.Errorf("%s: %v, want %v", control, got, want)
		}
	}
}

// A difference is resolved when it is as large as the errors of both together.
func TestResolved(t *testing.T) {
	run := func(value, errorOf Number) *Ledger {
		ledger := springs(t, loaded("force", None), 10, 30, 600)
		for _, account := range []*Account{&ledger.Total, &ledger.Regions[0].Account} {
			account.Energy, account.EnergyError = value, errorOf
			account.MeanDensity = value / account.Volume
		}
		return ledger
	}
	is := map[string]*bool{"yes": new(bool), "no": new(bool), "not known": nil}
	*is["yes"] = true
	for _, c := range []struct {
		value, one, other Number
		want              string
	}{
		{245, 3, 2, "yes"}, {244.875, 3, 2, "no"}, {235, 3, 2, "yes"}, {235.125, 3, 2, "no"},
		{240, 3, 2, "no"}, {245, 0, 0, "yes"}, {240, 0, 0, "yes"},
		{245, None, 2, "not known"}, {245, 3, None, "not known"},
	} {
		got := compared(t, CompareOptions{}, run(240, c.one), run(c.value, c.other))
		for _, region := range []Text{"", "first"} {
			for _, quantity := range []string{"energy", "mean_density", "specific_energy"} {
				if row := got.Row(2, region, quantity); !cmp.Equal(row.Resolved, is[c.want]) {
					t.Errorf("%v against 240, errors %v and %v: %+v, want %s", c.value, c.other, c.one, row, c.want)
				}
			}
		}
		if row := got.Row(2, "", "volume"); row.Resolved != nil {
			t.Errorf("%+v", row)
		}
		sign, why := got.Stiffness(2)
		if isOpen := strings.HasPrefix(why, "the difference is not resolved"); isOpen != (c.want == "no") || isOpen && sign != 0 {
			t.Errorf("%v: stiffness %d (%s)", c.value, sign, why)
		}
	}
	// The error is normalised for the load as the energy is.
	a, b := run(240, 3), run(4*245, 8)
	b.Model.Loading.Scale = 2
	if row := compared(t, CompareOptions{}, a, b).Row(2, "", "energy"); row.Value != 245 || !*row.Resolved {
		t.Errorf("%+v", row)
	}
}

// A number that is missing on one side, and a baseline of 0, have no percent.
func TestMissingNumbersHaveNoPercent(t *testing.T) {
	old, fresh := springs(t, nil, 10, 30, 600), springs(t, nil, 15, 30, 600)
	old.Total.Mass, fresh.Total.ErrorEstimate, old.Total.ErrorEstimate = None, None, 0.5
	fresh.Total.CellsPastLimit = 2
	c := compared(t, CompareOptions{}, old, fresh)
	for quantity, want := range map[string][5]any{
		"mass":             {fresh.Total.Mass, None, None, None, Text("mass is not available in the baseline")},
		"specific_energy":  {fresh.Total.Energy / fresh.Total.Mass, None, None, None, Text("specific_energy is not available in the baseline")},
		"error_estimate":   {None, Number(0.5), None, None, Text("error_estimate is not available")},
		"cells_past_limit": {Number(2), Number(0), Number(2), None, Text("cells_past_limit of the baseline is 0")},
		"curve_energy":     {None, None, None, None, Text("curve_energy is not available")},
	} {
		row := c.Row(2, "", quantity)
		got := [5]any{row.Value, row.Baseline, row.Difference, row.Relative, row.Withheld}
		if difference := cmp.Diff(want, got, sameNumbers); difference != "" {
			t.Errorf("%s: want -, got +\n%s", quantity, difference)
		}
	}
}

// Shares of what is past the limit are of the region's own volume and energy.
func TestSharesPastTheLimit(t *testing.T) {
	ledger := chain(t, nil, rod{"a", 1, 1, 10000, 300}, rod{"b", 3, 1, 10000, 100})
	c := compared(t, CompareOptions{}, ledger, ledger)
	for _, want := range []struct {
		region         Text
		volume, energy float64
	}{{"a", 1, 1}, {"b", 0, 0}, {"", 0.25, 0.75}} { // 4.5 mJ of 4.5 + 1.5
		volume, energy := c.Row(2, want.region, "volume_share_past_limit").Value, c.Row(2, want.region, "energy_share_past_limit").Value
		if !within(float64(volume), want.volume, 1e-12) || !within(float64(energy), want.energy, 1e-12) {
			t.Errorf("%q: %v of the volume, %v of the energy", want.region, volume, energy)
		}
	}
}

// Rows go by run, then region, then quantity, the whole model last, whatever runs have.
func TestOrderOfRows(t *testing.T) {
	old := chain(t, nil, rod{"a", 1, 1, 10000, 100}, rod{"b", 1, 1, 10000, 100})
	fresh := chain(t, nil, rod{"c", 1, 1, 10000, 100}, rod{"b", 1, 1, 10000, 100})
	c := compared(t, CompareOptions{}, old, fresh)
	var places []string
	for _, row := range c.Rows {
		if place := fmt.Sprintf("%d%s", row.Run, row.Region); !slices.Contains(places, place) {
			places = append(places, place)
		}
	}
	if want := []string{"1a", "1b", "1", "2a", "2b", "2c", "2"}; !slices.Equal(places, want) {
		t.Errorf("%q, want %q", places, want)
	}
	var keys []string
	for _, row := range c.Rows[:24] {
		keys = append(keys, row.Quantity)
	}
	want := strings.Fields(`cells volume mass energy energy_share energy_volumetric energy_distortional specific_energy mean_density
		max_density peak_density max_equivalent_stress max_utilisation cells_past_limit volume_past_limit volume_share_past_limit
		energy_past_limit energy_share_past_limit volume_without_limit cells_yielded curve_energy error_estimate energy_error
		stiffness_sensitivity`)
	if !slices.Equal(keys, want) || len(c.Rows) != 5*24+2*23 {
		t.Errorf("%d rows, quantities %q", len(c.Rows), keys)
	}
}

func TestCompareRefuses(t *testing.T) {
	ledger := springs(t, nil, 10, 30, 600)
	two := []ComparedRun{{Ledger: ledger}, {Ledger: ledger}}
	require := func(quantity, region string) CompareOptions {
		return CompareOptions{Requirements: []Requirement{{Name: "r", Quantity: quantity, Region: region}}}
	}
	for want, c := range map[string]struct {
		runs    []ComparedRun
		options CompareOptions
	}{
		"1 run to compare; give two ledgers or studies at least":                                                       {two[:1], CompareOptions{}},
		"run 3 is to be the baseline, and there are 2 runs":                                                            {two, CompareOptions{Baseline: 3}},
		"the comparison's unit of length is m, the baseline's mm; bounds and tolerances are in the baseline's units":   {two, CompareOptions{Length: "m"}},
		"the comparison's unit of stress is Pa, the baseline's MPa; bounds and tolerances are in the baseline's units": {two, CompareOptions{Stress: "Pa"}},
		"the comparison's unit of mass is t, the baseline's kg; bounds and tolerances are in the baseline's units":     {two, CompareOptions{Mass: "t"}},
		`requirement "r": no run has a region "third"`:                                                                 {two, require("energy", "third")},
		`requirement "r": quantity "change.energies": a comparison has no number "energies"`:                           {two, require("change.energies", "")},
		`requirement "r": quantity "change.hotspot.1.density": a comparison has no number "hotspot.1.density"`:         {two, require("change.hotspot.1.density", "")},
		`requirement "r": quantity "energies": an account has no number of that name`:                                  {two, require("energies", "")},
	} {
		_, err := Compare(c.runs, &c.options)
		if asked := new(StudyError); !errors.As(err, &asked) || err.Error() != want {
			t.Errorf("got  %v\nwant %s", err, want)
		}
	}
	if _, err := Compare(two, &CompareOptions{Baseline: 2, Length: "mm", Stress: "MPa", Mass: "kg"}); err != nil {
		t.Error(err)
	}
}

// The ledgers that are given stay as they are.
func TestCompareLeavesLedgersAlone(t *testing.T) {
	ledgers := []*Ledger{springs(t, loaded("force", 2), 10, 30, 600), springs(t, loaded("force", 3), 15, 30, 600)}
	ledgers[1].Units = labels("m", "Pa", "t")
	before := jsonText(t, ledgers)
	compared(t, CompareOptions{}, ledgers...)
	if after := jsonText(t, ledgers); after != before {
		t.Errorf("before\n%s\nafter\n%s", before, after)
	}
}

// Thirty runs: each beside the baseline, ranked.
func TestThirtyRuns(t *testing.T) {
	var ledgers []*Ledger
	for i := range 30 {
		ledgers = append(ledgers, springs(t, loaded("force", None), 10+float64(i), 30, 600))
	}
	c := compared(t, CompareOptions{Baseline: 7}, ledgers...)
	if len(c.Runs) != 30 || c.Baseline != 7 || len(c.Rows) != 30*(2*24+23) {
		t.Fatalf("%d runs, baseline %d, %d rows", len(c.Runs), c.Baseline, len(c.Rows))
	}
	for i, rank := range c.Ranks() {
		if rank != 30-i {
			t.Errorf("run %d has rank %d", i+1, rank)
		}
		want := 600*600/2.0/(1000+100*float64(i)) + 60
		base := 600*600/2.0/1600 + 60
		if i != 6 {
			checkRow(t, c, i+1, "", "energy", want, want-base, want/base-1)
		}
	}
}

func TestComparedRequirements(t *testing.T) {
	none := None
	bound := func(quantity, region string, least, most Number) Requirement {
		return Requirement{Name: quantity, Quantity: quantity, Region: region, AtLeast: least, AtMost: most}
	}
	old, fresh, other := springs(t, nil, 10, 30, 600), springs(t, nil, 15, 30, 600), chain(t, nil, rod{"first", 100, 10, 10000, 60})
	type result struct {
		Run   int
		Value Number
		Met   bool
		Why   Text
	}
	for _, c := range []struct {
		requirement Requirement
		want        []result
	}{
		{bound("change.energy", "", none, -0.2), []result{
			{2, -0.25, true, ""}, {3, none, false, `the regions are not the same: the run has no region "second"`}}},
		{bound("change.energy", "", none, -0.25), []result{{2, -0.25, true, ""}, {3, none, false, `the regions are not the same: the run has no region "second"`}}},
		{bound("change.energy", "first", none, -0.34), []result{{2, -1. / 3, false, ""}, {3, 0, false, ""}}},
		{bound("change.specific_energy", "first", -0.6, none), []result{{2, 120./3000/(180./2000) - 1, true, ""}, {3, 0, true, ""}}},
		{bound("change.energy", "second", none, 0), []result{{2, 0, true, ""}, {3, none, false, `the run has no region "second"`}}},
		{bound("change.curve_energy", "", none, 0), []result{
			{2, none, false, "curve_energy is not available"}, {3, none, false, `the regions are not the same: the run has no region "second"`}}},
		{bound("change.stiffness_sensitivity", "", none, 0), []result{
			{2, none, false, "stiffness_sensitivity is of regions alone; name one"}, {3, none, false, "stiffness_sensitivity is of regions alone; name one"}}},
		{bound("energy", "", none, 200), []result{{1, 240, false, ""}, {2, 180, true, ""}, {3, 180, true, ""}}},
		{bound("specific_energy", "first", 0.05, none), []result{{1, 0.09, true, ""}, {2, 0.04, false, ""}, {3, 0.09, true, ""}}},
		{bound("energy", "second", none, 100), []result{{1, 60, true, ""}, {2, 60, true, ""}, {3, none, false, "energy is not available"}}},
		{bound("error_estimate", "", none, 0.05), []result{
			{1, none, false, "error_estimate is not available"}, {2, none, false, "error_estimate is not available"}, {3, none, false, "error_estimate is not available"}}},
		{bound("hotspot.1.density", "", none, 0.1), []result{{1, 0.18, false, ""}, {2, 0.08, true, ""}, {3, 0.18, false, ""}}},
		{bound("hotspot.2.density", "first", none, 0.1), []result{
			{1, none, false, "there is no hotspot of rank 2"}, {2, none, false, "there is no hotspot of rank 2"}, {3, none, false, "there is no hotspot of rank 2"}}},
	} {
		got := []result{}
		for _, r := range compared(t, CompareOptions{Requirements: []Requirement{c.requirement}}, old, fresh, other).Requirements {
			if r.Name != c.requirement.Name || r.Region != Text(c.requirement.Region) || !cmp.Equal([]Number{r.AtLeast, r.AtMost}, []Number{c.requirement.AtLeast, c.requirement.AtMost}, exactNumbers) {
				t.Errorf("%+v", r)
			}
			got = append(got, result{r.Run, r.Value, r.Met, r.Why})
		}
		if difference := cmp.Diff(c.want, got, sameNumbers); difference != "" {
			t.Errorf("%s of %q: want -, got +\n%s", c.requirement.Quantity, c.requirement.Region, difference)
		}
	}
	// The balance is each run's own; its gap may be of either sign.
	old.Balance, fresh.Balance = &Balance{Gap: 0.01}, &Balance{Gap: -0.05}
	for i, r := range compared(t, CompareOptions{Requirements: []Requirement{bound("balance.gap", "", none, 0.02)}}, old, fresh, other).Requirements {
		if r.Met != (i == 0) || i == 1 && r.Value != -0.05 || i == 2 && r.Value.Exists() || (r.Why != "") != (i > 0) {
			t.Errorf("%+v", r)
		}
	}
	// Cells with plastic strain hide what the limit says, here as in a ledger.
	fresh.Total.CellsYielded = 1
	c := compared(t, CompareOptions{Requirements: []Requirement{bound("change.max_utilisation", "", none, 0.1), bound("cells_past_limit", "", none, 0)}}, old, fresh)
	for _, r := range c.Requirements {
		if r.Run == 2 && (r.Met || !strings.Contains(string(r.Why), "plastic strain")) || r.Run == 1 && !r.Met {
			t.Errorf("%+v", r)
		}
	}
}

// The tolerance for hotspots: the comparison's, else the baseline's, else 2 % of the
// baseline's diagonal.
func TestHotspotTolerance(t *testing.T) {
	old, fresh := springs(t, nil, 10, 30, 600), springs(t, nil, 15, 30, 600)
	if got, want := float64(compared(t, CompareOptions{}, old, fresh).Tolerance), 0.02*math.Sqrt(200*200+30*30+1); !within(got, want, 1e-14) {
		t.Errorf("by the diagonal: %v, want %v", got, want)
	}
	old.Model.HotspotTolerance, fresh.Model.HotspotTolerance = 3, 4
	if got := compared(t, CompareOptions{}, old, fresh).Tolerance; got != 3 {
		t.Errorf("by the baseline: %v", got)
	}
	if got := compared(t, CompareOptions{Baseline: 2}, old, fresh).Tolerance; got != 4 {
		t.Errorf("by the second: %v", got)
	}
	c := compared(t, CompareOptions{HotspotTolerance: 40}, old, fresh, old)
	if c.Tolerance != 40 || len(c.Hotspots) != 4 || c.Hotspots[0].Run != 2 || c.Hotspots[3].Run != 3 {
		t.Errorf("tolerance %v, hotspots %+v", c.Tolerance, c.Hotspots)
	}
	old.Model.HotspotTolerance, old.Model.Diagonal = None, None
	c = compared(t, CompareOptions{}, old, fresh)
	if c.Tolerance.Exists() || len(c.Hotspots) != 0 {
		t.Errorf("tolerance %v, hotspots %+v", c.Tolerance, c.Hotspots)
	}
	checkFindings(t, c, []string{"control-not-stated", "hotspots-not-matched"})
}

// What is new or gone against the baseline, by codes; what stands in a run, the baseline
// too.
func TestChangedFindings(t *testing.T) {
	find := func(code, accepted string) Finding {
		return Finding{Code: code, Severity: severities[code], Message: "as it is.", Accepted: Text(accepted)}
	}
	run := func(list ...Finding) *Ledger {
		ledger := springs(t, loaded("force", None), 10, 30, 600)
		ledger.Findings = list
		return ledger
	}
	for name, c := range map[string]struct {
		old, fresh *Ledger
		accepted   []Acceptance
		want       []string // severity code accepted: message
	}{
		"same": {run(find("ghost-cells", "")), run(find("ghost-cells", "")), nil, nil},
		"new": {run(), run(find("ghost-cells", ""), find("regions-overlap", "")), nil, []string{
			"warning finding-new: run 2: warning regions-overlap: as it is.", "note note-new: run 2: ghost-cells: as it is."}},
		"gone": {run(find("ghost-cells", ""), find("regions-overlap", "")), run(), nil, []string{
			"note finding-gone: run 2: does not have ghost-cells, which the baseline has",
			"note finding-gone: run 2: does not have regions-overlap, which the baseline has"}},
		"error in the run": {run(), run(find("hooke-mismatch", "")), nil, []string{
			"error error-stands: run 2: hooke-mismatch: as it is.", "warning finding-new: run 2: error hooke-mismatch: as it is."}},
		"error in the baseline": {run(find("hooke-mismatch", "")), run(), nil, []string{
			"error error-stands: run 1: hooke-mismatch: as it is.", "note finding-gone: run 2: does not have hooke-mismatch, which the baseline has"}},
		"error in both, twice": {run(find("hooke-mismatch", ""), find("hooke-mismatch", "")), run(find("hooke-mismatch", "")), nil, []string{
			"error error-stands: runs 1, 2: hooke-mismatch: as it is."}},
		"the comparison accepts": {run(find("hooke-mismatch", "")), run(find("hooke-mismatch", ""), find("all-zero", "")), []Acceptance{{"hooke-mismatch", "rubber"}}, []string{
			"error error-stands (rubber): runs 1, 2: hooke-mismatch: as it is.",
			"error error-stands: run 2: all-zero: as it is.", "warning finding-new: run 2: error all-zero: as it is."}},
		"both accept": {run(find("hooke-mismatch", "x")), run(find("hooke-mismatch", "y")), nil, nil},
		"acceptance new": {run(find("hooke-mismatch", "")), run(find("hooke-mismatch", "rubber")), nil, []string{
			"error error-stands: run 1: hooke-mismatch: as it is.", "note acceptance-new: run 2: accepts hooke-mismatch, the baseline does not: rubber"}},
		"accepted and new": {run(), run(find("hooke-mismatch", "rubber")), nil, []string{
			"warning finding-new: run 2: error hooke-mismatch: as it is.", "note acceptance-new: run 2: accepts hooke-mismatch, the baseline does not: rubber"}},
		"acceptance gone": {run(find("hooke-mismatch", "rubber")), run(find("hooke-mismatch", "")), nil, []string{
			"error error-stands: run 2: hooke-mismatch: as it is.", "warning acceptance-gone: run 2: does not accept hooke-mismatch, the baseline does: rubber"}},
		"accepted and gone": {run(find("hooke-mismatch", "rubber")), run(), nil, []string{
			"note finding-gone: run 2: does not have hooke-mismatch, which the baseline has and accepts: rubber"}},
	} {
		t.Run(name, func(t *testing.T) {
			var got []string
			for _, f := range compared(t, CompareOptions{Acceptances: c.accepted}, c.old, c.fresh).Findings {
				accepted := ""
				if f.Accepted != "" {
					accepted = " (" + string(f.Accepted) + ")"
				}
				got = append(got, f.Severity+" "+f.Code+accepted+": "+f.Message)
			}
			if difference := cmp.Diff(c.want, got); difference != "" {
				t.Errorf("want -, got +\n%s", difference)
			}
		})
	}
}

func TestRunNames(t *testing.T) {
	for want, runs := range map[string][]int{
		"run 3": {3}, "runs 1, 2": {1, 2}, "runs 1, 3": {1, 3}, "runs 1 to 3": {1, 2, 3}, "runs 1, 2, 4 to 7, 9": {1, 2, 4, 5, 6, 7, 9},
	} {
		if got := runNames(runs); got != want {
			t.Errorf("%v: %q, want %q", runs, got, want)
		}
	}
}
