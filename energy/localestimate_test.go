package energy

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strainledger/mesh"
)

// plastic is a material of Ramberg and Osgood, or with the exponent NaN a perfectly
// plastic one.
func plastic(youngsModulus, yieldStress, exponent float64) Material {
	m := NewMaterial("plastic")
	m.YoungsModulus, m.PoissonsRatio, m.YieldStress, m.HardeningExponent = youngsModulus, 0.3, yieldStress, exponent
	return m
}

// estimateOf returns the estimate of a material for an elastic stress.
func estimateOf(t testing.TB, m Material, elasticStress float64) *LocalEstimate {
	t.Helper()
	path, err := m.loadingPath(elasticStress, m.YoungsModulus)
	if err != nil {
		t.Fatal(err)
	}
	estimate, isReached := path.estimate(elasticStress, m.YoungsModulus)
	if !isReached {
		t.Fatalf("s_e %g: not reached", elasticStress)
	}
	return estimate
}

// P-01 to P-05b and P-09 (derived), with the digits printed there. P-03 is the cyclic form
// e = s/E + (s/K')^(1/n') with K' 1200, n' 0.2, whose stress at 0.2 % plastic strain is
// K' 0.002^n'.
func TestNeuberAndEnergyDensity(t *testing.T) {
	for _, c := range []struct {
		id                                                       string
		elastic, youngsModulus, yield, exponent                  float64
		neuberStress, neuberStrain, densityStress, densityStrain float64
	}{
		{"P-01", 600, 73100, 345, 10, 392.120835, 0.0125592934, 373.627191, 0.0095495520},
		{"P-02", 500, 206000, 250, 12, 261.167843, 0.0046467904, 249.743018, 0.0031878135},
		{"P-03", 750, 206000, 1200 * math.Pow(0.002, 0.2), 5, 410.175375, 0.0066571098, 380.362221, 0.0050459077},
		{"P-04", 900, 71000, 505, 20, 554.084664, 0.0205897247, 538.209460, 0.0147291463},
		{"P-05", 1400, 110000, 880, 25, 940.022991, 0.0189550490, 917.992180, 0.0140989578},
		{"P-05b", 1500, 200000, 1000, 15, 1066.077705, 0.0105527017, 1029.301562, 0.0082308991},
		{"P-09", 400, 200000, 250, math.NaN(), 250, 0.0032, 250, 0.002225},
	} {
		got := estimateOf(t, plastic(c.youngsModulus, c.yield, c.exponent), c.elastic)
		for name, pair := range map[string][2]float64{
			"Neuber's stress": {float64(got.Neuber.Stress), c.neuberStress}, "Neuber's strain": {float64(got.Neuber.Strain), c.neuberStrain},
			"stress by energy density": {float64(got.EnergyDensity.Stress), c.densityStress}, "strain by energy density": {float64(got.EnergyDensity.Strain), c.densityStrain},
		} {
			if !within(pair[0], pair[1], 2e-9) && math.Abs(pair[0]-pair[1]) > 6e-11 { // half of the last digit
				t.Errorf("%s: %s %.12g, want %.12g", c.id, name, pair[0], pair[1])
			}
		}
	}
}

// P-01e (derived): the energy of the estimates. The energy density method keeps that of
// the elastic stress, Neuber's rule does not; and P-01's slip, the complementary energy
// with 1/(n+1), must not come out.
func TestEnergyOfTheEstimates(t *testing.T) {
	law := RambergOsgood{YoungsModulus: 73100, OffsetStress: 345, Exponent: 10}
	got := estimateOf(t, plastic(73100, 345, 10), 600)
	elastic := ModulusOfResilience(600, 73100)
	for name, pair := range map[string][2]float64{
		"elastic": {elastic, 2.462380301}, "Neuber's": {law.Energy(float64(got.Neuber.Stress)), 3.616572102},
		"ratio": {law.Energy(float64(got.Neuber.Stress)) / elastic, 1.46873}, "energy density": {law.Energy(float64(got.EnergyDensity.Stress)), elastic},
	} {
		if !within(pair[0], pair[1], map[bool]float64{true: 5e-6, false: 1e-9}[name == "ratio"]) {
			t.Errorf("%s: %.10g, want %.10g", name, pair[0], pair[1])
		}
	}
	if math.Abs(float64(got.EnergyDensity.Stress)-447.370829) < 10 {
		t.Errorf("stress by energy density %g is that of the complementary energy", got.EnergyDensity.Stress)
	}
}

// P-06 (derived): the perfectly plastic curve has the work 1.09375 at 0.005 of strain.
func TestPerfectlyPlasticCurve(t *testing.T) {
	curve, err := perfectlyPlastic(200000, 250, 0.00375)
	if err != nil {
		t.Fatal(err)
	}
	if last := curve.Last(); !within(last.Strain, 0.005, 1e-12) || last.Stress != 250 {
		t.Errorf("the curve ends at %+v", last)
	}
	if work := curve.Area(curve.Last().Strain); !within(work, 1.09375, 1e-12) {
		t.Errorf("work %g, want 1.09375", work)
	}
}

// On a curve of two straight lines, E 200000 to 200 and then a tangent of 10000, both
// equations are quadratic (derived here): ε(190 + 10⁴ε) = s_e²/E, and 0.1 + 200x + ½ 10⁴x²
// = s_e²/2E with x = ε - 0.001.
func TestEstimateOnACurve(t *testing.T) {
	curve, err := NewCurve([]CurvePoint{{}, {0.001, 200}, {0.011, 300}, {0.021, 400}})
	if err != nil {
		t.Fatal(err)
	}
	for _, elastic := range []float64{250, 400, 700} {
		work := elastic * elastic / 400000
		neuber := (-190 + math.Sqrt(190*190+4e4*2*work)) / 2e4
		density := 0.001 + (-200+math.Sqrt(4e4+2e4*(work-0.1)))/1e4
		got, isReached := curve.path().estimate(elastic, 200000)
		if !isReached {
			t.Fatalf("s_e %g: not reached", elastic)
		}
		for name, pair := range map[string][2]float64{
			"Neuber's strain": {float64(got.Neuber.Strain), neuber}, "Neuber's stress": {float64(got.Neuber.Stress), 190 + 1e4*neuber},
			"strain by energy density": {float64(got.EnergyDensity.Strain), density}, "stress by energy density": {float64(got.EnergyDensity.Stress), 190 + 1e4*density},
		} {
			if !within(pair[0], pair[1], 1e-10) {
				t.Errorf("s_e %g: %s %.14g, want %.14g", elastic, name, pair[0], pair[1])
			}
		}
	}
	// At the curve's end Neuber's product is 8.4, the area 6.1: s_e 1296.1 and 1562.0.
	for elastic, want := range map[float64]bool{1296: true, 1297: false, 1562: false} {
		if _, isReached := curve.path().estimate(elastic, 200000); isReached != want {
			t.Errorf("s_e %g: reached %v, want %v", elastic, isReached, want)
		}
	}
	if _, isReached := curve.path().reach(func(s uniaxialState) float64 { return s.work }, curve.Area(0.021)); !isReached {
		t.Error("the last point itself is not reached")
	}
}

// Neuber's strain is not below that by energy density, both satisfy their equation, and
// in the elastic range both are the elastic state.
func TestEstimateProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		youngsModulus := rapid.Float64Range(1e3, 3e5).Draw(t, "E")
		yield := youngsModulus * rapid.Float64Range(5e-4, 1e-2).Draw(t, "yield over E")
		exponent := rapid.Float64Range(2, 60).Draw(t, "n")
		if rapid.Bool().Draw(t, "perfectly plastic") {
			exponent = math.NaN()
		}
		elastic := yield * rapid.Float64Range(0.1, 4).Draw(t, "s_e over yield")
		m := plastic(youngsModulus, yield, exponent)
		path, err := m.loadingPath(elastic, youngsModulus)
		if err != nil {
			t.Fatal(err)
		}
		got, isReached := path.estimate(elastic, youngsModulus)
		if !isReached {
			t.Fatal("not reached")
		}
		if product := float64(got.Neuber.Stress * got.Neuber.Strain); !within(product, elastic*elastic/youngsModulus, 1e-9) {
			t.Fatalf("σε is %g, want %g", product, elastic*elastic/youngsModulus)
		}
		if !(got.Neuber.Strain >= got.EnergyDensity.Strain*(1-1e-9)) || !(float64(got.Neuber.Stress) <= elastic*(1+1e-9)) {
			t.Fatalf("s_e %g: %+v", elastic, got)
		}
		if math.IsNaN(exponent) && elastic < yield && !(within(float64(got.Neuber.Stress), elastic, 1e-9) && within(float64(got.EnergyDensity.Strain), elastic/youngsModulus, 1e-9)) {
			t.Fatalf("elastic at %g: %+v", elastic, got)
		}
	})
}

// A hotspot past its limit carries the band; what it does not apply to has none, and
// where it would mislead the reason stands instead.
func TestLocalEstimateOfHotspots(t *testing.T) {
	points, cells := row(100)
	stress := uniform(100, 1, 0, 0, 0, 0, 0)
	stress[42] = []float64{600, 0, 0, 0, 0, 0}
	general := uniform(100, 1, 0, 0, 0, 0, 0)
	for i := range 6 {
		general[i] = []float64{600 - float64(i), 0, 0, 0, 0, 0}
	}
	local := uniform(100, 1, 0, 0, 0, 0, 0)
	copy(local, general[:5]) // 5 % is not general yet
	alloy := plastic(73100, 345, 10)
	alloy.ProportionalLimit, alloy.Source = 300, "invented"
	perfect := alloy
	perfect.HardeningExponent = math.NaN()
	bare := perfect
	bare.YieldStress = math.NaN()
	for _, c := range []struct {
		name      string
		material  Material
		criterion Criterion
		stress    [][]float64
		strain    float64 // Neuber's
		refused   string
		isNone    bool
	}{
		{"Ramberg and Osgood", alloy, VonMises, stress, 0.0125592934, "", false},
		{"another criterion", alloy, Tresca, stress, 0.0125592934, "", false},
		{"perfectly plastic", perfect, VonMises, stress, 600 * 600 / (73100 * 345.), "", false},
		{"no data", bare, VonMises, stress, 0, "", true},
		{"brittle", alloy, MaxPrincipal, stress, 0, "brittle", false},
		{"general yielding", alloy, VonMises, general, 0, "6 % of the region's volume is past the limit, more than 5 %", false},
		{"local yielding", alloy, VonMises, local, 0.0125592934, "", false},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", c.stress...)}}}}
		hotspots := tally(t, m, stressOptions(mesh.OnCell, c.criterion, c.material)).Hotspots
		got := hotspots[0].LocalEstimate
		switch {
		case c.isNone:
			if got != nil {
				t.Errorf("%s: %+v", c.name, got)
			}
		case got == nil:
			t.Errorf("%s: no estimate", c.name)
		case c.refused != "":
			if !strings.Contains(string(got.Refused), c.refused) || got.Neuber.Stress.Exists() || got.Neuber.Strain.Exists() ||
				got.EnergyDensity.Stress.Exists() || got.EnergyDensity.Strain.Exists() {
				t.Errorf("%s: %+v, want refused with %q", c.name, got, c.refused)
			}
		case got.Refused != "" || !within(float64(got.Neuber.Strain), c.strain, 1e-8):
			t.Errorf("%s: %+v, want Neuber's strain %g", c.name, got, c.strain)
		}
		for _, other := range hotspots {
			if !*other.PastLimit && other.LocalEstimate != nil {
				t.Errorf("%s: an estimate below the limit, %+v", c.name, other)
			}
		}
	}
	yielded := make([][]float64, 100)
	for i := range yielded {
		yielded[i] = []float64{float64(i / 99)}
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), cellArray("peeq", yielded...)}}}}
	options := stressOptions(mesh.OnCell, VonMises, alloy)
	options.Fields.EquivalentPlasticStrain = Field{Arrays: []string{"peeq"}, On: mesh.OnCell}
	if got := tally(t, m, options).Hotspots[0].LocalEstimate; got == nil || !strings.Contains(string(got.Refused), "plastic strain in the file") {
		t.Errorf("a plastic run: %+v", got)
	}
	materials := tally(t, m, stressOptions(mesh.OnCell, VonMises, alloy)).Materials
	if used := materials[0]; used.YieldStress != 345 || used.HardeningExponent != 10 {
		t.Errorf("values used: %+v", used)
	}
}

// What a hotspot needs beyond a tally of its own: the tag, laws, the end of a curve.
func TestLocalEstimateRefused(t *testing.T) {
	alloy, curved := plastic(73100, 345, 10), withCurve(t)
	loose := alloy
	loose.YoungsModulus = math.NaN()
	isotropicStiffness := orthotropic(t, [3]float64{73100, 73100, 73100}, [3]float64{73100 / 2.6, 73100 / 2.6, 73100 / 2.6}, [3]float64{0.3, 0.3, 0.3})
	past, within1 := true, false
	for _, c := range []struct {
		name    string
		region  region
		hotspot Hotspot
		refused string
		strain  float64
		isNone  bool
	}{
		{"regular", region{material: &alloy}, Hotspot{Singular: "regular"}, "", 0.0125592934, false},
		{"cannot tell", region{material: &alloy}, Hotspot{Singular: "cannot tell"}, "", 0.0125592934, false},
		{"singular", region{material: &alloy}, Hotspot{Singular: "singular"}, "singular", 0, false},
		{"modulus of the law", region{material: &loose, law: isotropicStiffness}, Hotspot{}, "", 0.0125592934, false},
		{"no modulus", region{material: &loose}, Hotspot{}, "Young's modulus", 0, false},
		{"not isotropic", region{material: &alloy, law: lamina(t)}, Hotspot{}, "isotropic law", 0, false},
		{"the curve ends", region{material: &curved}, Hotspot{EquivalentStress: 3000}, "ends before", 0, false},
		{"within the limit", region{material: &alloy}, Hotspot{PastLimit: &within1}, "", 0, true},
		{"no material", region{}, Hotspot{}, "", 0, true},
	} {
		if c.hotspot.PastLimit == nil {
			c.hotspot.PastLimit = &past
		}
		if c.hotspot.EquivalentStress == 0 {
			c.hotspot.EquivalentStress = 600
		}
		got := c.region.localEstimate(&Account{Volume: 1, VolumePastLimit: 0.01, CellsYielded: None}, &c.hotspot)
		switch {
		case c.isNone != (got == nil):
			t.Errorf("%s: %+v", c.name, got)
		case c.isNone:
		case !strings.Contains(string(got.Refused), c.refused) || (c.refused == "") != (got.Refused == ""):
			t.Errorf("%s: refused %q, want %q", c.name, got.Refused, c.refused)
		case c.refused == "" && !within(float64(got.Neuber.Strain), c.strain, 1e-8):
			t.Errorf("%s: %+v", c.name, got)
		}
	}
	r := region{material: &alloy}
	if got := r.localEstimate(&Account{}, &Hotspot{EquivalentStress: 600}); got != nil {
		t.Errorf("without a limit: %+v", got)
	}
}

// A material's curve is used before its constants: on M-05 (a digitised curve; derived),
// s_e 300 lies past the 0.01 % limit 243.38, and both ends of the band are on the curve.
func TestLocalEstimateOnAMaterialsCurve(t *testing.T) {
	m := withCurve(t)
	m.YieldStress, m.HardeningExponent = 1, 2
	got := estimateOf(t, m, 300)
	curve, err := m.Curve.Analysis.LawCurve()
	if err != nil {
		t.Fatal(err)
	}
	work := 300. * 300 / 140000
	if product := float64(got.Neuber.Stress * got.Neuber.Strain); !within(product, 2*work, 1e-9) {
		t.Errorf("Neuber's σε %.10g, want %.10g", product, 2*work)
	}
	if area := curve.Area(float64(got.EnergyDensity.Strain)); !within(area, work, 1e-9) {
		t.Errorf("area %.10g, want %.10g", area, work)
	}
	for _, state := range []LocalState{got.Neuber, got.EnergyDensity} {
		if want := curve.Stress(float64(state.Strain)); Number(want) != state.Stress || !(want > 243 && want < 300) {
			t.Errorf("stress %v at strain %v, on the curve %v", state.Stress, state.Strain, want)
		}
	}
}
