package energy

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strainledger/mesh"
)

// limitOf returns the limit of a region of one material.
func limitOf(t testing.TB, criterion Criterion, material Material) *limit {
	t.Helper()
	options := &Options{Materials: []Material{material}, Limit: LimitOptions{Criterion: criterion}}
	r := region{name: "web"}
	if err := r.setMaterial(&Region{Name: "web"}, options); err != nil {
		t.Fatal(err)
	}
	if err := r.setLimit(&Region{Name: "web"}, options); err != nil {
		t.Fatal(err)
	}
	return &r.limit
}

// material250 has E 200000, ν 0.3 and a limit of 250, as in F-01 to F-04.
func material250() Material {
	m := NewMaterial("steel")
	m.YoungsModulus, m.PoissonsRatio, m.ProportionalLimit, m.Source = 200000, 0.3, 250, "invented"
	return m
}

// The criteria (methods: Huber, von Mises, Hencky; Tresca; Rankine; Beltrami, all from
// memory) on the states of group F, of T-02 and T-04; their values are derived. Numbers
// beyond those rows: √(2E w) of F-01 from its w 0.4358, and ratios to the limit 250.
func TestCriteria(t *testing.T) {
	f01 := mesh.SymmetricTensor{400, 380, 360}
	f05 := mesh.SymmetricTensor{200, -50, 0, 80}
	f06 := mesh.SymmetricTensor{50, -20, 60, 40, 10, 30}
	f07 := mesh.SymmetricTensor{100, 100, 100, 100, 100, 100}
	f07b := mesh.SymmetricTensor{300, 280, 290}
	for _, c := range []struct {
		id                      string
		criterion               Criterion
		stress                  mesh.SymmetricTensor
		equivalent, utilisation float64
	}{
		{"F-01", VonMises, f01, 34.641016, 0.13856406},
		{"F-01", DistortionEnergy, f01, 34.641016, 0.0192},
		{"F-01", Tresca, f01, 40, 0.16},
		{"F-01", TotalEnergy, f01, math.Sqrt(2 * 200000 * 0.4358), math.Sqrt(2.78912)},
		{"F-01", MaxPrincipal, f01, 400, 1.6},
		{"F-03", TotalEnergy, mesh.SymmetricTensor{3: 155.043418}, 250, 1},
		{"F-03", VonMises, mesh.SymmetricTensor{4: 144.337567}, 250, 1},
		{"F-03", DistortionEnergy, mesh.SymmetricTensor{5: 144.337567}, 250, 1},
		{"F-03", Tresca, mesh.SymmetricTensor{3: 125}, 250, 1},
		{"F-04", TotalEnergy, mesh.SymmetricTensor{228.217732, 228.217732, 228.217732}, 250, 1},
		{"F-04", TotalEnergy, mesh.SymmetricTensor{-228.217732, -228.217732, -228.217732}, 250, 1},
		{"F-05", VonMises, f05, 267.768557, 267.768557 / 250},
		{"F-05", Tresca, f05, 296.816442, 296.816442 / 250},
		{"F-05", MaxPrincipal, f05, 223.408221, 223.408221 / 250},
		{"F-06", VonMises, f06, 116.189500, 116.189500 / 250},
		{"F-06", Tresca, f06, 134.097078, 134.097078 / 250},
		{"F-06", MaxPrincipal, f06, 95.824687, 95.824687 / 250},
		{"F-07", VonMises, f07, 300, 1.2},
		{"F-07", Tresca, f07, 300, 1.2},
		{"F-07", MaxPrincipal, f07, 300, 1.2},
		{"F-07b", VonMises, f07b, 17.320508, 17.320508 / 250},
		{"F-07b", Tresca, f07b, 20, 0.08},
		{"F-08", VonMises, mesh.SymmetricTensor{50, 50}, 50, 0.2},
		{"F-08", VonMises, mesh.SymmetricTensor{0, 100}, 100, 0.4},
		{"F-10", VonMises, stateT02, 205.548048, 0.82219219},
		{"F-10", DistortionEnergy, stateT02, 205.548048, 0.676},
		{"T-02", Tresca, stateT02, 233.385841, 233.385841 / 250},
		{"T-02", MaxPrincipal, stateT02, 137.561695, 137.561695 / 250},
		{"T-04", VonMises, mesh.SymmetricTensor{3: 80}, 138.564065, 138.564065 / 250},
		{"T-04", Tresca, mesh.SymmetricTensor{4: 80}, 160, 0.64},
		{"T-04", TotalEnergy, mesh.SymmetricTensor{5: 80}, 80 * math.Sqrt(2.6), 80 * math.Sqrt(2.6) / 250},
	} {
		l := limitOf(t, c.criterion, material250())
		equivalent := l.equivalent(&c.stress)
		if !within(equivalent, c.equivalent, 1e-7) {
			t.Errorf("%s, %s: equivalent stress %.10g, want %.10g", c.id, c.criterion, equivalent, c.equivalent)
		}
		if got := l.utilisation(equivalent); !within(got, c.utilisation, 1e-7) {
			t.Errorf("%s, %s: utilisation %.10g, want %.10g", c.id, c.criterion, got, c.utilisation)
		}
	}
}

// The total energy of T-02 depends on ν alone: √(2E w), w derived.
func TestTotalEnergyOfT02(t *testing.T) {
	m := aluminium() // E 70000, ν 0.33
	if got := limitOf(t, TotalEnergy, m).equivalent(&stateT02); !within(got, math.Sqrt(2*70000*0.27567857), 1e-7) {
		t.Errorf("equivalent stress %.10g", got)
	}
	m.PoissonsRatio = math.Nextafter(0.5, 0)
	if got := limitOf(t, TotalEnergy, m).equivalent(&mesh.SymmetricTensor{12.3, 12.3, 12.3}); !(got >= 0 && got < 1e-6) {
		t.Errorf("under pressure, next to incompressible: %g", got)
	}
}

// Which principal stress governs, with limits of 100 in tension and 400 in compression,
// with one limit, and with none.
func TestGoverningPrincipal(t *testing.T) {
	one, two, none := material250(), material250(), material250()
	one.ProportionalLimit = 100
	two.ProportionalLimit, two.ProportionalLimitCompression = 100, 400
	none.ProportionalLimit = math.NaN()
	for _, c := range []struct {
		name                    string
		material                Material
		stress                  mesh.SymmetricTensor
		equivalent, utilisation float64
	}{
		{"tension", two, mesh.SymmetricTensor{-300, 90}, 90, 0.9},
		{"compression", two, mesh.SymmetricTensor{50, 0, -300}, -300, 0.75},
		{"compression alone", two, mesh.SymmetricTensor{-5, -10, -20}, -20, 0.05},
		{"equal shares", two, mesh.SymmetricTensor{100, -400}, 100, 1},
		{"one limit, tension", one, mesh.SymmetricTensor{50, -49}, 50, 0.5},
		{"one limit, compression", one, mesh.SymmetricTensor{50, -51}, -51, 0.51},
		{"no limit, tension", none, mesh.SymmetricTensor{50, -49}, 50, math.NaN()},
		{"no limit, compression", none, mesh.SymmetricTensor{50, -51}, -51, math.NaN()},
		{"no limit, equal sizes", none, mesh.SymmetricTensor{50, -50}, 50, math.NaN()},
		{"no stress", two, mesh.SymmetricTensor{}, 0, 0},
	} {
		l := limitOf(t, MaxPrincipal, c.material)
		equivalent := l.equivalent(&c.stress)
		utilisation := l.utilisation(equivalent)
		if equivalent != c.equivalent || utilisation != c.utilisation && !(math.IsNaN(utilisation) && math.IsNaN(c.utilisation)) {
			t.Errorf("%s: %g, utilisation %g, want %g and %g", c.name, equivalent, utilisation, c.equivalent, c.utilisation)
		}
	}
	// The limit in compression is max-principal's alone.
	for _, criterion := range []Criterion{VonMises, Tresca, DistortionEnergy, TotalEnergy} {
		l := limitOf(t, criterion, two)
		if got := l.utilisation(l.equivalent(&mesh.SymmetricTensor{-100})); !within(got, 1, 1e-15) {
			t.Errorf("%s: utilisation %g in compression, want 1", criterion, got)
		}
	}
}

// The largest and the least of any equivalent stresses tell which governs all.
func TestGoverningOfMany(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := limit{
			criterion: MaxPrincipal, tension: rapid.Float64Range(1, 10).Draw(t, "tension"), compression: rapid.Float64Range(1, 10).Draw(t, "compression"),
		}
		values := rapid.SliceOfN(rapid.Float64Range(-10, 10), 1, 9).Draw(t, "stresses")
		got := l.governing(slices.Max(values), slices.Min(values))
		if !slices.Contains(values, got) {
			t.Fatalf("%g is none of %v", got, values)
		}
		for _, value := range values {
			if l.utilisation(value) > l.utilisation(got) {
				t.Fatalf("%g governs %v, but %g is utilised more", got, values, value)
			}
		}
	})
}

// Equivalent stresses do not depend on the axes in which the stress is written.
func TestCriteriaDoNotDependOnAxes(t *testing.T) {
	for _, criterion := range criteria {
		l := limitOf(t, criterion, material250())
		rapid.Check(t, func(t *rapid.T) {
			stress, axes := anyTensor(t, "stress"), anyAxes(t)
			turned := axes.ToMaterial(&stress)
			got, want := l.equivalent(&turned), l.equivalent(&stress)
			if criterion == MaxPrincipal && math.Abs(got+want) <= 1e-12 {
				return // equal in size: rounding decides which governs
			}
			// The components are at most 1; the root of a small difference of squares is
			// known to about 1e-8.
			if math.Abs(got-want) > 1e-12 && math.Abs(got*got-want*want) > 1e-14 {
				t.Fatalf("%s: %.17g, turned %.17g", criterion, want, got)
			}
		})
	}
}

// F-02 (derived): w_d over s²/6G is the square of von Mises' ratio to 1e-12, and hence
// the same decision, to the last digit.
func TestDistortionEnergyDecidesAsVonMises(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := material250()
		m.YoungsModulus = rapid.Float64Range(1, 1e6).Draw(t, "E")
		m.PoissonsRatio = rapid.Float64Range(-0.9, 0.49).Draw(t, "ν")
		m.ProportionalLimit = rapid.Float64Range(0.1, 3).Draw(t, "limit")
		stress := anyTensor(t, "stress")
		law, err := NewIsotropicLaw(m.YoungsModulus, m.PoissonsRatio)
		if err != nil {
			t.Fatal(err)
		}
		strain := law.Strain(&stress)
		w := Density(&stress, &strain)
		resilience := m.ProportionalLimit * m.ProportionalLimit / (6 * m.YoungsModulus / (2 * (1 + m.PoissonsRatio)))
		want := (w - VolumetricDensity(&stress, &strain)) / resilience

		byEnergy := limit{criterion: DistortionEnergy, tension: m.ProportionalLimit, compression: m.ProportionalLimit}
		byStress := limit{criterion: VonMises, tension: m.ProportionalLimit, compression: m.ProportionalLimit}
		got := byEnergy.utilisation(byEnergy.equivalent(&stress))
		ratio := byStress.utilisation(byStress.equivalent(&stress))
		if math.Abs(got-want) > 1e-12*w/resilience {
			t.Fatalf("w_d over its limit %.17g, want %.17g", got, want)
		}
		if !within(got, ratio*ratio, 1e-12) || (got > 1) != (ratio > 1) {
			t.Fatalf("utilisation %.17g by energy, %.17g by stress", got, ratio)
		}
	})
}

// A cell at its limit is not past it; the next larger stress is. Uniaxial stress has the
// same limit by every criterion.
func TestAtTheLimitIsNotPastIt(t *testing.T) {
	points, cell := brick(1, 1, 1)
	for _, criterion := range criteria {
		for axis := range 3 {
			for _, c := range []struct {
				stress float64
				past   Number
			}{
				{250, 0}, {math.Nextafter(250, 300), 1}, {-250, 0}, {-math.Nextafter(250, 300), 1},
			} {
				stress := make([]float64, 6)
				stress[axis] = c.stress
				m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", stress)}}}}
				ledger := tally(t, m, stressOptions(mesh.OnCell, criterion, material250()))
				if got := ledger.Total.CellsPastLimit; got != c.past || ledger.PastLimit.Cells != c.past {
					t.Errorf("%s, component %d at %.17g: %v cells past the limit (utilisation %.17g), want %v", criterion, axis, c.stress, got, ledger.Total.MaxUtilisation, c.past)
				}
			}
		}
	}
}

// stressOptions are those of a solid of which the stress alone is given.
func stressOptions(on mesh.Location, criterion Criterion, materials ...Material) Options {
	return Options{
		Length: "mm", Stress: "MPa", Idealisation: Solid, From: FromStress, Materials: materials,
		Fields: Fields{Stress: stated("stress", on, sixOrder)}, Limit: LimitOptions{Criterion: criterion},
	}
}

// Five regions, each judged by its own criterion, the first by the study's; T-02 in each.
func TestEachRegionByItsOwnCriterion(t *testing.T) {
	points, cells := row(5)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(5, stateT02[:]...)...), labels1("part", 0, 1, 2, 3, 4)}}}}
	brittle := aluminium()
	brittle.Name, brittle.ProportionalLimit, brittle.ProportionalLimitCompression = "brittle", 250, 150
	alloy := aluminium()
	alloy.ProportionalLimit = 250
	options := stressOptions(mesh.OnCell, Tresca, alloy, brittle)
	for i, criterion := range []Criterion{"", VonMises, MaxPrincipal, DistortionEnergy, TotalEnergy} {
		options.Regions = append(options.Regions, Region{Name: Number(i).String(), Array: "part", Values: []float64{float64(i)}, Material: "aluminium", Criterion: criterion})
	}
	options.Regions[2].Material = "brittle"
	ledger := tally(t, m, options)
	if ledger.Model.Criterion != "tresca" || ledger.PastLimit.Criterion != "tresca" {
		t.Errorf("the study's criterion is %q, %q", ledger.Model.Criterion, ledger.PastLimit.Criterion)
	}
	total := math.Sqrt(2 * 70000 * 0.27567857)
	for i, want := range []struct {
		criterion               string
		equivalent, utilisation float64
	}{
		{"tresca", 233.385841, 233.385841 / 250}, {"von-mises", 205.548048, 0.82219219}, {"max-principal", -95.824146, 95.824146 / 150},
		{"distortion-energy", 205.548048, 0.676}, {"total-energy", total, total / 250},
	} {
		r := ledger.Regions[i]
		if r.Criterion != want.criterion || !within(float64(r.MaxEquivalentStress), want.equivalent, 1e-7) || !within(float64(r.MaxUtilisation), want.utilisation, 1e-7) {
			t.Errorf("region %d: %s, %.10g, %.10g, want %+v", i, r.Criterion, r.MaxEquivalentStress, r.MaxUtilisation, want)
		}
	}
	if got := ledger.Total.MaxEquivalentStress; !within(float64(got), 233.385841, 1e-7) {
		t.Errorf("equivalent stress of the whole %v, want the largest", got)
	}
	factors := []float64{250 / 233.385841, 1.2162606, 150 / 95.824146, 1.2162606, 250 / total}
	for _, hotspot := range ledger.Hotspots {
		want := factors[hotspot.Cell]
		if !within(float64(hotspot.LoadFactor), want, 1e-7) || !within(float64(hotspot.StressMargin), want-1, 1e-6) {
			t.Errorf("hotspot in region %s: load factor %.9g, margin %.9g, want %.9g", hotspot.Region, hotspot.LoadFactor, hotspot.StressMargin, want)
		}
	}
	if len(ledger.Hotspots) != 5 {
		t.Errorf("%d hotspots", len(ledger.Hotspots))
	}
}

// A cell with values on points, or at integration points, has the value that governs over
// them, in tension or in compression; so has a cell with stress from the displacement, by the mean.
func TestGoverningOverPoints(t *testing.T) {
	points, cell := brick(1, 1, 1)
	brittle := material250()
	brittle.ProportionalLimit, brittle.ProportionalLimitCompression = 100, 400
	for _, c := range []struct {
		name                    string
		low, high               float64 // σ_xx at two of the points, 0 elsewhere
		equivalent, utilisation float64
	}{
		{"tension", -300, 90, 90, 0.9}, {"compression", -380, 90, -380, 0.95}, {"past in compression", -401, 90, -401, 1.0025},
	} {
		stress := uniform(8, 0, 0, 0, 0, 0, 0)
		stress[3], stress[6] = []float64{c.low, 0, 0, 0, 0, 0}, []float64{0, c.high, 0, 0, 0, 0}
		onPoints := stressOptions(mesh.OnPoint, MaxPrincipal, brittle)
		inCells := stressOptions(0, MaxPrincipal, brittle)
		inCells.Fields.Stress.Integration, inCells.Fields.Stress.Rule = true, "gauss 2x2x2"
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", slices.Concat(stress...))}}}}
		if got := tally(t, m, inCells).Total; got.MaxEquivalentStress != Number(c.equivalent) || !within(float64(got.MaxUtilisation), c.utilisation, 1e-15) {
			t.Errorf("%s, at integration points: %+v", c.name, got)
		}
		m.pieces[0].arrays = []memoryArray{pointArray("stress", stress...)}
		ledger := tally(t, m, onPoints)
		if got := ledger.Total; got.MaxEquivalentStress != Number(c.equivalent) || !within(float64(got.MaxUtilisation), c.utilisation, 1e-15) ||
			(got.CellsPastLimit == 1) != (c.utilisation > 1) {
			t.Errorf("%s: %+v", c.name, got)
		}
		if hotspot := ledger.Hotspots[0]; hotspot.EquivalentStress != Number(c.equivalent) || *hotspot.PastLimit != (c.utilisation > 1) {
			t.Errorf("%s: hotspot %+v", c.name, hotspot)
		}
	}
	u := make([][]float64, len(points))
	for i, p := range points {
		u[i] = []float64{-0.001 * p[0], 0.0003 * p[1], 0.0003 * p[2]}
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{pointArray("displacement", u...)}}}}
	got := tally(t, m, Options{Materials: []Material{brittle}, Limit: LimitOptions{Criterion: MaxPrincipal}}).Total
	if !within(float64(got.MaxEquivalentStress), -200, 1e-12) || !within(float64(got.MaxUtilisation), 0.5, 1e-12) {
		t.Errorf("from displacement: %v, utilisation %v, want -200 and 0.5", got.MaxEquivalentStress, got.MaxUtilisation)
	}
}

// The equivalent stress of accounts whose regions are judged by principal stresses: the
// one that governs within a region, and over all.
func TestGoverningEquivalentOfAccounts(t *testing.T) {
	points, cells := row(4)
	stress := [][]float64{{90, 0, 0, 0, 0, 0}, {-300, 0, 0, 0, 0, 0}, {60, 0, 0, 0, 0, 0}, {-380, 0, 0, 0, 0, 0}}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), labels1("part", 1, 1, 2, 2)}}}}
	brittle, bare := material250(), material250()
	brittle.ProportionalLimit, brittle.ProportionalLimitCompression = 100, 400
	bare.Name, bare.ProportionalLimit = "bare", math.NaN()
	regions := func(first, second string, criterion Criterion) []Region {
		return []Region{
			{Name: "a", Array: "part", Values: []float64{1}, Material: first},
			{Name: "b", Array: "part", Values: []float64{2}, Material: second, Criterion: criterion},
			{Name: "none", Array: "part", Values: []float64{3}, Material: first, Optional: true},
		}
	}
	stiff := brittle
	stiff.Name, stiff.ProportionalLimit, stiff.ProportionalLimitCompression = "stiff", 1000, 4000
	for _, c := range []struct {
		name        string
		regions     []Region
		a, b, total Number
	}{
		{"by utilisation within and over regions", regions("steel", "steel", ""), 90, -380, -380},
		{"the larger stress is utilised less", regions("steel", "stiff", ""), 90, -380, 90},
		{"a region without a limit goes by size, and so does the whole", regions("steel", "bare", ""), 90, -380, -380},
		{"another criterion", regions("steel", "stiff", VonMises), 90, 380, 380},
	} {
		for _, chunk := range []int{1, 0} {
			options := stressOptions(mesh.OnCell, MaxPrincipal, brittle, bare, stiff)
			options.Regions, options.ChunkCells, options.Workers = c.regions, chunk, 2
			ledger := tally(t, m, options)
			if a, b := ledger.Regions[0].MaxEquivalentStress, ledger.Regions[1].MaxEquivalentStress; a != c.a || b != c.b || ledger.Total.MaxEquivalentStress != c.total {
				t.Errorf("%s: %v, %v, in all %v; want %v, %v, %v", c.name, a, b, ledger.Total.MaxEquivalentStress, c.a, c.b, c.total)
			}
			if got := ledger.Regions[2].MaxEquivalentStress; got.Exists() {
				t.Errorf("%s: a region without cells has %v", c.name, got)
			}
		}
	}
}

// Of two regions that are utilised alike the tensile one speaks for the whole.
func TestEqualUtilisationIsTensile(t *testing.T) {
	points, cells := row(2)
	for _, stress := range [][][]float64{{{50, 0, 0, 0, 0, 0}, {-200, 0, 0, 0, 0, 0}}, {{-200, 0, 0, 0, 0, 0}, {50, 0, 0, 0, 0, 0}}} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), labels1("part", 1, 2)}}}}
		brittle := material250()
		brittle.ProportionalLimit, brittle.ProportionalLimitCompression = 100, 400
		if got := tally(t, m, stressOptions(mesh.OnCell, MaxPrincipal, brittle)).Total.MaxEquivalentStress; got != 50 {
			t.Errorf("%v: equivalent stress of the whole %v, want 50", stress, got)
		}
	}
}

func TestLoadFactor(t *testing.T) {
	for _, c := range []struct {
		name        string
		criterion   Criterion
		utilisation Number
		want        Number
	}{
		{"F-10", VonMises, 0.82219219, 1.2162606},
		{"F-10", DistortionEnergy, 0.676, 1.2162606},
		{"F-01", DistortionEnergy, 0.0192, 7.216878}, // margin 6.216878
		{"half", MaxPrincipal, 0.5, 2},
		{"past", TotalEnergy, 4, 0.25},
	} {
		if got := LoadFactor(c.criterion, c.utilisation); !within(float64(got), float64(c.want), 1e-7) {
			t.Errorf("%s, %s: %.9g, want %.9g", c.name, c.criterion, got, c.want)
		}
	}
	for _, utilisation := range []Number{None, 0} {
		if got := LoadFactor(VonMises, utilisation); got.Exists() {
			t.Errorf("utilisation %v: load factor %v, want none", utilisation, got)
		}
	}
}

// What a criterion needs and the region has not is refused.
func TestCriterionThatCannotBeComputed(t *testing.T) {
	graphite := NewMaterial("graphite")
	for _, c := range []struct {
		name     string
		criteria []Criterion
		region   region
		want     string // "": taken
	}{
		{"no criterion", []Criterion{"mises"}, region{}, `no criterion "mises"`},
		{"no law", []Criterion{TotalEnergy}, region{}, "needs a material with youngs_modulus"},
		{"no law, not needed", []Criterion{VonMises, Tresca, MaxPrincipal, DistortionEnergy}, region{}, ""},
		{"not isotropic", []Criterion{TotalEnergy, DistortionEnergy}, region{law: lamina(t), material: &graphite}, "needs an isotropic law"},
		{"not isotropic, not needed", []Criterion{VonMises, Tresca, MaxPrincipal}, region{law: lamina(t), material: &graphite}, ""},
	} {
		for _, criterion := range c.criteria {
			r := c.region
			err := r.setLimit(&Region{Criterion: criterion}, &Options{})
			var study *StudyError
			switch {
			case c.want == "" && err != nil, c.want != "" && (!errors.As(err, &study) || !strings.Contains(err.Error(), c.want)):
				t.Errorf("%s, %s: error %v, want %q", c.name, criterion, err, c.want)
			}
		}
	}
	points, cell := brick(1, 1, 1)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", make([]float64, 6)), cellArray("strain", make([]float64, 6))}}}}
	options := solidOptions(mesh.OnCell)
	options.Limit.Criterion = TotalEnergy
	if err := tallyError(t, m, options); !strings.Contains(err.Error(), `region "all": criterion "total-energy" needs a material`) {
		t.Errorf("error %v", err)
	}
}

// An isotropic law that was given as a stiffness has its Poisson's ratio.
func TestTotalEnergyByAStiffness(t *testing.T) {
	r := region{law: orthotropic(t, [3]float64{70000, 70000, 70000}, [3]float64{70000 / 2.66, 70000 / 2.66, 70000 / 2.66}, [3]float64{0.33, 0.33, 0.33})}
	if err := r.setLimit(&Region{Criterion: TotalEnergy}, &Options{}); err != nil {
		t.Fatal(err)
	}
	if got := r.limit.equivalent(&stateT02); !within(got, math.Sqrt(2*70000*0.27567857), 1e-7) {
		t.Errorf("equivalent stress %.10g", got)
	}
}

// Von Mises and Tresca are computed for any law, and the finding says what that is worth.
func TestCriterionUnsuited(t *testing.T) {
	graphite := NewMaterial("graphite")
	for criterion, want := range map[Criterion]bool{VonMises: true, Tresca: true, MaxPrincipal: false} {
		for _, law := range []*Law{lamina(t), isotropic(t, 1, 0.3), nil} {
			p := &plan{options: &Options{}, inputs: &inputs{}, from: FromStressStrain, regions: &regionMap{regions: []region{
				{name: "skin", law: law, material: &graphite, limit: limit{criterion: criterion}},
			}}}
			p.noteSettings()
			isFound := slices.ContainsFunc(p.findings.list, func(f Finding) bool {
				return f.Code == "criterion-unsuited" && f.Severity == Warning && strings.Contains(f.Message, `"skin"`)
			})
			if isGeneral := law != nil && !law.IsIsotropic(); isFound != (want && isGeneral) {
				t.Errorf("%s, general law %v: finding %v", criterion, isGeneral, isFound)
			}
		}
	}
	points, cell := brick(1, 1, 1)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", stateT02[:])}}}}
	graphite.YoungsModuli, graphite.ShearModuli, graphite.PoissonsRatios = &[3]float64{181000, 10300, 12000}, &[3]float64{7170, 3900, 6100}, &[3]float64{0.28, 0.41, 0.23}
	ledger := tally(t, m, stressOptions(mesh.OnCell, VonMises, graphite))
	if got := ledger.Total.MaxEquivalentStress; !within(float64(got), 205.548048, 1e-8) || !hasFinding(ledger, "criterion-unsuited") {
		t.Errorf("equivalent stress %v, findings %+v", got, ledger.Findings)
	}
	if err := tallyError(t, m, stressOptions(mesh.OnCell, DistortionEnergy, graphite)); !strings.Contains(err.Error(), `material "graphite" has none`) {
		t.Errorf("error %v", err)
	}
}

// More than 1 % of a region's volume past the limit calls for a nonlinear run; 1 % does
// not, nor does a file that comes from one.
func TestNonlinearRunAdvised(t *testing.T) {
	points, cells := row(200)
	stress := uniform(200, 1, 0, 0, 0, 0, 0)
	part := make([]float64, 200)
	for i := range part {
		part[i] = float64(i / 100)
	}
	for _, i := range []int{7, 150, 151} { // 1 % of the first region, 2 % of the second
		stress[i] = []float64{251, 0, 0, 0, 0, 0}
	}
	arrays := []memoryArray{cellArray("stress", stress...), labels1("part", part...)}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: arrays}}}
	var found []Finding
	for _, finding := range tally(t, m, stressOptions(mesh.OnCell, "", material250())).Findings {
		if finding.Code == "nonlinear-run-advised" {
			found = append(found, finding)
		}
	}
	if len(found) != 1 || found[0].Severity != Warning || found[0].Cells != 2 || !strings.Contains(found[0].Message, `region "part 1": 2 % of the volume`) {
		t.Errorf("findings %+v", found)
	}
	yielded := make([][]float64, 200)
	for i := range yielded {
		yielded[i] = []float64{float64(i / 199)}
	}
	m.pieces[0].arrays = append(arrays, cellArray("peeq", yielded...))
	options := stressOptions(mesh.OnCell, "", material250())
	options.Fields.EquivalentPlasticStrain = Field{Arrays: []string{"peeq"}, On: mesh.OnCell}
	if ledger := tally(t, m, options); hasFinding(ledger, "nonlinear-run-advised") || !hasFinding(ledger, "plastic-strain-present") {
		t.Errorf("with plastic strain: findings %+v", ledger.Findings)
	}
}

// The criteria cost what they compute: von Mises in the tally as much as by itself.
func BenchmarkEquivalentStress(b *testing.B) {
	for _, criterion := range criteria {
		b.Run(string(criterion), func(b *testing.B) {
			l := limitOf(b, criterion, material250())
			var total float64
			for b.Loop() {
				total += l.utilisation(l.equivalent(&stateT02))
			}
			if total == 0 {
				b.Fatal("the loop computed nothing")
			}
		})
	}
	b.Run("formula alone", func(b *testing.B) {
		var total float64
		for b.Loop() {
			total += VonMisesStress(&stateT02) / 250
		}
		if total == 0 {
			b.Fatal("the loop computed nothing")
		}
	})
}
