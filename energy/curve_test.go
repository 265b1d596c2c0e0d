package energy

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// readCurve reads a file of testdata/curves.
func readCurve(t testing.TB, name string, reading CurveReading) *CurveRecord {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "testdata", "curves", name))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	test, err := ReadCurve(file, name, reading)
	if err != nil {
		t.Fatal(err)
	}
	return test
}

func analyse(t testing.TB, test *CurveRecord, options CurveOptions) *CurveAnalysis {
	t.Helper()
	analysis, err := AnalyseCurve(test, options)
	if err != nil {
		t.Fatal(err)
	}
	return analysis
}

// recordOf returns the record of points that no file holds.
func recordOf(points []CurvePoint) *CurveRecord {
	test := &CurveRecord{Path: "points", Points: points, StressUnit: "MPa"}
	for i := range points {
		test.Lines = append(test.Lines, i+1)
	}
	return test
}

// sample returns a law's curve at equal steps of stress, from 0.
func sample(law RambergOsgood, last float64, steps int) []CurvePoint {
	points := make([]CurvePoint, steps+1)
	for i := range points {
		stress := last * float64(i) / float64(steps)
		points[i] = CurvePoint{law.Strain(stress), stress}
	}
	return points
}

func curveOf(t testing.TB, points []CurvePoint) *Curve {
	t.Helper()
	curve, err := NewCurve(points)
	if err != nil {
		t.Fatal(err)
	}
	return curve
}

// lawM03 is the law of M-03, M-06 and P-01.
var lawM03 = RambergOsgood{YoungsModulus: 73100, OffsetStress: 345, Exponent: 10}

// An expectation is a number by name and what it has to be.
type expectation struct {
	id        string
	got, want float64
}

// expect compares numbers, each within a relative tolerance.
func expect(t *testing.T, tolerance float64, wants []expectation) {
	t.Helper()
	for _, w := range wants {
		if !within(w.got, w.want, tolerance) {
			t.Errorf("%s: %.12g, want %.12g", w.id, w.got, w.want)
		}
	}
}

// M-01 and M-02: modulus of resilience σ²/2E. Yield stress in ksi and modulus in 10³ ksi
// are from memory of MIL-HDBK-5J and ASTM tables; the results are arithmetic.
func TestModulusOfResilience(t *testing.T) {
	for _, c := range []struct {
		id                     string
		yield, modulus         float64 // ksi, Msi
		poundInches, megajoule float64
	}{
		{"M-01a 2024-T3", 47, 10.5, 105.190476, 0.72526277},
		{"M-01b 6061-T6", 36, 9.9, 65.454545, 0.45129319},
		{"M-01c 7075-T6", 70, 10.3, 237.864078, 1.64001501},
		{"M-01d Ti-6Al-4V", 120, 16.0, 450.0, 3.10264065},
		{"M-01e 4130", 75, 29.0, 96.9827586, 0.66867255},
		{"M-01f 4340", 217, 29.0, 811.879310, 5.59771056},
		{"M-01g 17-4PH", 170, 28.5, 507.017544, 3.49576276},
		{"M-02 A36", 36, 29.0, 22.3448276, 0.15406216},
	} {
		psi := ModulusOfResilience(c.yield*1e3, c.modulus*1e6)
		expect(t, 1e-8, []expectation{{c.id + " in lbf in/in³", psi, c.poundInches}})
		// The check's factor 6894.757 has seven digits.
		expect(t, 1e-7, []expectation{{c.id + " in MJ/m³", psi * stressInPascals["psi"] / stressInPascals["MPa"], c.megajoule}})
	}
	// M-15: PMMA by the means of published tests (Seles et al. 2022); arithmetic.
	expect(t, 1e-7, []expectation{{"M-15", ModulusOfResilience(59.76, 3204.3), 0.55726018}})
}

// M-03 (derived): work, complementary work and recoverable energy of a Ramberg-Osgood
// law; M-12 (derived): its resilience at the 0.01 % limit.
func TestRambergOsgoodEnergy(t *testing.T) {
	work, strain := lawM03.Energy(400), lawM03.Strain(400)
	expect(t, 1e-9, []expectation{
		{"M-03 W", work, 4.286710110},
		{"M-03 W*", 400*strain - work, 1.413623131},
		{"M-03 s e", 400 * strain, 5.700333241},
		{"M-03 recoverable", ModulusOfResilience(400, 73100), 1.094391245},
	})
	// M-12: resilience by the offset yield stress overstates that by the 0.01 % limit.
	a := analyse(t, recordOf(sample(lawM03, 400, 20000)), CurveOptions{YoungsModulus: 73100, Window: StressWindow{Low: 1, High: 20}})
	ratio := ModulusOfResilience(float64(a.OffsetYields[0].Stress), 73100) / float64(a.Resilience.Triangle)
	expect(t, 1e-6, []expectation{{"M-12 ratio", ratio, 1.820564}, {"M-12 energy", float64(a.Resilience.Triangle), 0.44718252}})
	// The area is larger by the plastic work: n/(n+1) of σ ε_p.
	expect(t, 1e-6, []expectation{{"area", float64(a.Resilience.Area), 0.44718252 + 10./11*255.691385*1e-4}})
}

// M-04 (derived): the 0.01 % offset limit over the offset yield stress is 0.05^(1/n),
// read off sampled curves.
func TestOffsetLimitOverOffsetYield(t *testing.T) {
	for exponent, ratio := range map[float64]float64{
		6: 0.606962, 8: 0.687656, 10: 0.741134, 12: 0.779078, 15: 0.818964, 20: 0.860892, 25: 0.887072, 31: 0.907886, 50: 0.941845,
	} {
		law := RambergOsgood{YoungsModulus: 73100, OffsetStress: 345, Exponent: exponent}
		a := analyse(t, recordOf(sample(law, 380, 20000)), CurveOptions{YoungsModulus: 73100, Window: StressWindow{Low: 1, High: 10}})
		expect(t, 1e-6, []expectation{{"M-04", float64(a.ProportionalLimit.Stress / a.OffsetYields[0].Stress), ratio}})
		// The exponent comes back from the fit; the chords of the samples are 2e-2 MPa long.
		expect(t, 1e-6, []expectation{{"M-04 exponent", a.RambergOsgood.Exponent, exponent}})
	}
}

// limitsOf returns the proportional limits of an analysis by definition.
func limitsOf(a *CurveAnalysis) map[string]LimitRead {
	limits := map[string]LimitRead{}
	for _, limit := range a.ProportionalLimits {
		limits[limit.By] = limit
	}
	return limits
}

// M-05 (derived): a digitised curve, with the modulus fitted on 70 to 210 and in the
// default window.
func TestDigitisedCurve(t *testing.T) {
	for name, options := range map[string]CurveOptions{
		"70..210": {Window: StressWindow{Low: 70, High: 210}},
		"default": {},
		"stated":  {Window: StressWindow{Low: 70, High: 210}, YoungsModulus: 70000},
	} {
		t.Run(name, func(t *testing.T) {
			a := analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), options)
			limits := limitsOf(a)
			expect(t, 1e-8, []expectation{
				{"E", float64(a.Modulus.YoungsModulus), 70000},
				{"0.2 % stress", float64(a.OffsetYields[0].Stress), 301.538462},
				{"0.2 % strain", float64(a.OffsetYields[0].Strain), 0.0063076923},
				{"0.01 % stress", float64(limits["offset-0.01%"].Stress), 243.384615},
				{"0.01 % strain", float64(limits["offset-0.01%"].Strain), 0.0035769231},
				{"0.005 %", float64(limits["offset-0.005%"].Stress), 231.0},
				{"0.002 %", float64(limits["offset-0.002%"].Stress), 218.4}, // derived: E (ε - 2e-5) on 210..240
				{"1 % deviation", float64(limits["deviation-1%"].Stress), 223.404255},
				{"5 % deviation", float64(limits["deviation-5%"].Stress), 252.941176},
				{"tangent", float64(limits["tangent-95%"].Stress), 210}, // the next segment has 60000 = 0.857 E
				{"Johnson", float64(limits["johnson"].Stress), 240},     // the next segment has 44000 = 0.629 E
				{"area", float64(a.Resilience.Area), 0.44609172},
				{"triangle", float64(a.Resilience.Triangle), 0.42311479},
				{"toughness", float64(a.Toughness.Area), 43.816},
				{"recoverable", float64(a.Toughness.Recoverable), 8. / 7}, // 1.1428571
				{"ultimate", a.Ultimate.Stress, 400},
				{"last strain", a.Last.Strain, 0.12},
			})
			if a.ProportionalLimit.By != "offset-0.01%" || a.ProportionalLimit != limits["offset-0.01%"] || len(a.ProportionalLimits) != 7 {
				t.Errorf("the limit is %+v, want the one by a plastic strain of 0.01 %%", a.ProportionalLimit)
			}
			if math.Abs(float64(a.Modulus.ToeStrain)) > 1e-15 || math.Abs(float64(a.Modulus.Intercept)) > 1e-10 || !within(float64(a.Modulus.RSquared), 1, 1e-14) {
				t.Errorf("toe %g, intercept %g, r² %g", a.Modulus.ToeStrain, a.Modulus.Intercept, a.Modulus.RSquared)
			}
			if a.YieldPoint != nil {
				t.Errorf("a yield point %+v on a curve without one", a.YieldPoint)
			}
		})
	}
}

// M-06 and M-06b (derived): five definitions on one law, sampled finely.
func TestFiveLimitsOfOneCurve(t *testing.T) {
	for _, c := range []struct {
		id                                          string
		law                                         RambergOsgood
		tangent, onePercent, offset, fivePercent, j float64
	}{
		{"M-06", lawM03, 211.862670, 227.523921, 255.691385, 272.076103, 272.076103},
		{"M-06b", RambergOsgood{206000, 250, 12}, 145.834042, 157.180420, 194.769452, 181.945439, 178.954604},
	} {
		const steps = 400000
		a := analyse(t, recordOf(sample(c.law, 1.1*c.law.OffsetStress, steps)), CurveOptions{YoungsModulus: c.law.YoungsModulus, Window: StressWindow{Low: 1, High: 10}})
		limits := limitsOf(a)
		expect(t, 1e-7, []expectation{
			{c.id + " 1 %", float64(limits["deviation-1%"].Stress), c.onePercent},
			{c.id + " 0.01 %", float64(limits["offset-0.01%"].Stress), c.offset},
			{c.id + " 5 %", float64(limits["deviation-5%"].Stress), c.fivePercent},
		})
		// The tangent changes at the points only: they are found to within one step.
		step := 1.1 * c.law.OffsetStress / steps
		for name, want := range map[string]float64{"tangent-95%": c.tangent, "johnson": c.j} {
			if got := float64(limits[name].Stress); math.Abs(got-want) > step {
				t.Errorf("%s %s: %.9g, want %.9g within %.2g", c.id, name, got, want, step)
			}
		}
	}
}

// M-07 (derived; the form of V1 is that of ASTM E111, from memory): a noisy modulus, in
// a stated window and in the default one.
func TestNoisyModulus(t *testing.T) {
	for _, window := range []StressWindow{{}, {Low: 0, High: 100}} {
		a := analyse(t, readCurve(t, "m07-noisy-modulus.csv", CurveReading{}), CurveOptions{Window: window})
		expect(t, 1e-9, []expectation{
			{"slope", float64(a.Modulus.Fitted), 69885.7143},
			{"r²", float64(a.Modulus.RSquared), 0.9999675754},
		})
		expect(t, 1e-8, []expectation{{"intercept", float64(a.Modulus.Intercept), 0.08}, {"V1", float64(a.Modulus.Variation), 0.28471767}})
		expect(t, 1e-9, []expectation{{"scatter", float64(a.Modulus.Scatter), math.Sqrt(0.1108571428571429 / 4)}})
		expect(t, 1e-8, []expectation{{"toe", float64(a.Modulus.ToeStrain), -0.08 / 69885.714285714}})
		if showsFinding(a, "toe") {
			t.Error("an intercept of 0.08 is no toe")
		}
		if a.Modulus.Points != 6 {
			t.Errorf("%d points in the window, want all 6", a.Modulus.Points)
		}
	}
}

// M-08 (derived): a toe of 4e-4 moves the line's origin and nothing else.
func TestToe(t *testing.T) {
	for _, window := range []StressWindow{{}, {Low: 70, High: 210}} {
		a := analyse(t, readCurve(t, "m08-toe.csv", CurveReading{}), CurveOptions{Window: window})
		limits := limitsOf(a)
		expect(t, 1e-8, []expectation{
			{"toe", float64(a.Modulus.ToeStrain), 4e-4},
			{"E", float64(a.Modulus.YoungsModulus), 70000},
			{"0.2 % stress", float64(a.OffsetYields[0].Stress), 301.538462},
			{"0.2 % strain", float64(a.OffsetYields[0].Strain), 0.0067076923},
			{"0.01 % stress", float64(limits["offset-0.01%"].Stress), 243.384615},
			{"0.01 % strain", float64(limits["offset-0.01%"].Strain), 0.0039769231},
			{"1 % deviation", float64(limits["deviation-1%"].Stress), 223.404255},
			{"area without the toe", float64(a.Resilience.Area), 0.44609172},
			{"toughness without the toe", float64(a.Toughness.Area), 43.816},
		})
		if !(a.Modulus.Variation < 1e-9 && a.Modulus.Scatter < 1e-9) {
			t.Errorf("V1 %g, scatter %g of three points on a line", a.Modulus.Variation, a.Modulus.Scatter)
		}
		if !showsFinding(a, "toe") {
			t.Error("the toe is not said")
		}
		whole := analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), CurveOptions{Window: StressWindow{Low: 70, High: 210}})
		expect(t, 1e-9, []expectation{
			{"n", a.RambergOsgood.Exponent, whole.RambergOsgood.Exponent},
			{"worst", float64(a.RambergOsgood.WorstDeviation), float64(whole.RambergOsgood.WorstDeviation)},
			{"n to ultimate", float64(a.RambergOsgood.ExponentToUltimate), float64(whole.RambergOsgood.ExponentToUltimate)},
			{"n of secants", float64(a.RambergOsgood.ExponentOfSecants), float64(whole.RambergOsgood.ExponentOfSecants)},
		})
	}
}

// M-09 (derived): mild steel with a yield plateau.
func TestMildSteel(t *testing.T) {
	a := analyse(t, readCurve(t, "m09-mild-steel.csv", CurveReading{}), CurveOptions{})
	expect(t, 1e-9, []expectation{
		{"E", float64(a.Modulus.YoungsModulus), 200000},
		{"toughness", float64(a.Toughness.Area), 109.09375},
		{"resilience", float64(a.Resilience.Triangle), 0.15625},
		{"area to the limit", float64(a.Resilience.Area), 0.15625 + 250*1e-4},
		{"(yield + ultimate)/2 e_f", float64(a.Toughness.DuctileEstimate), 100.5},
		{"2/3 ultimate e_f", float64(a.Toughness.BrittleEstimate), 84.0},
		{"ultimate", a.Ultimate.Stress, 420},
		{"ultimate strain", a.Ultimate.Strain, 0.20},
		{"lower yield", a.YieldPoint.Lower.Stress, 250},
		{"end of the plateau", float64(a.YieldPoint.PlateauEnd), 0.02},
	})
	if a.YieldPoint.Upper != nil {
		t.Errorf("upper yield %v on a curve that bends into its plateau", *a.YieldPoint.Upper)
	}
	if !showsFinding(a, "few-points") {
		t.Error("a modulus from two points is not said")
	}
	if a.Modulus.Variation.Exists() {
		t.Errorf("a coefficient of variation %g of two points", a.Modulus.Variation)
	}
	if a.RambergOsgood != nil {
		t.Errorf("a yield plateau was fitted by %+v", a.RambergOsgood)
	}
}

// An upper yield point is the first local maximum, and no ultimate stress.
func TestUpperYield(t *testing.T) {
	a := analyse(t, readCurve(t, "upper-yield.csv", CurveReading{}), CurveOptions{})
	if a.YieldPoint == nil || a.YieldPoint.Upper == nil {
		t.Fatalf("yield point %+v", a.YieldPoint)
	}
	expect(t, 1e-12, []expectation{
		{"upper", a.YieldPoint.Upper.Stress, 310},
		{"upper strain", a.YieldPoint.Upper.Strain, 0.001512195},
		{"lower", a.YieldPoint.Lower.Stress, 283},
		{"lower strain", a.YieldPoint.Lower.Strain, 0.0036},
		{"end", float64(a.YieldPoint.PlateauEnd), 0.02 + 0.005*20/22},
		{"ultimate", a.Ultimate.Stress, 430},
	})
	expect(t, 1e-5, []expectation{{"E", float64(a.Modulus.YoungsModulus), 205000}}) // strains of seven digits
	// With less hardening the upper yield point is the largest stress, and still not the ultimate.
	var flat []CurvePoint
	for _, p := range a.Points {
		flat = append(flat, CurvePoint{p.Strain, math.Min(p.Stress, 310)})
	}
	for i := range flat[33:] {
		flat[33+i].Stress = math.Min(flat[33+i].Stress, 295)
	}
	flat[len(flat)-1].Stress = 250 // it breaks below its lower yield point
	b := analyse(t, recordOf(flat), CurveOptions{})
	expect(t, 1e-12, []expectation{{"upper", b.YieldPoint.Upper.Stress, 310}, {"lower", b.YieldPoint.Lower.Stress, 283}, {"ultimate", b.Ultimate.Stress, 295}})
	if b.YieldPoint.PlateauEnd.Exists() {
		t.Errorf("the plateau ends at %g, though its stress is never passed again", float64(b.YieldPoint.PlateauEnd))
	}
}

// A fall of stress after the 0.2 % plastic strain, before hardening goes on, is no yield
// point; one just before is.
func TestYieldPointComesBeforeTheOffsetYield(t *testing.T) {
	for plastic, isYield := range map[float64]bool{0.0019: true, 0.0021: false, 0.05: false} {
		const toe = 0.0005
		peak := CurvePoint{toe + 0.003 + plastic, 300}
		points := []CurvePoint{{toe, 0}, {toe + 0.001, 100}, {toe + 0.002, 200}, {toe + 0.0025, 250}, peak}
		for _, after := range []CurvePoint{{0.001, 290}, {0.002, 295}, {0.01, 310}, {0.02, 305}} {
			points = append(points, CurvePoint{peak.Strain + after.Strain, after.Stress})
		}
		a := analyse(t, recordOf(points), CurveOptions{})
		if got := a.YieldPoint != nil; got != isYield {
			t.Errorf("plastic strain %g: yield point %+v", plastic, a.YieldPoint)
		}
		if isYield && (*a.YieldPoint.Upper != peak || a.YieldPoint.Lower.Stress != 290 || !within(float64(a.YieldPoint.PlateauEnd), peak.Strain+0.002+0.008*5/15, 1e-12)) {
			t.Errorf("yield point %+v", a.YieldPoint)
		}
		if a.Ultimate.Stress != 310 {
			t.Errorf("ultimate %v", a.Ultimate)
		}
	}
	// After the ultimate stress it falls for good: what rises again by less than 0.5 % is noise.
	for rise, isYield := range map[float64]bool{1.4: false, 1.5: true} {
		points := []CurvePoint{{0, 0}, {0.001, 100}, {0.002, 200}, {0.003, 300}, {0.005, 290}, {0.007, 290 + rise}, {0.01, 250}}
		a := analyse(t, recordOf(points), CurveOptions{})
		if got := a.YieldPoint != nil; got != isYield {
			t.Errorf("a rise by %g: yield point %+v", rise, a.YieldPoint)
		}
		if want := 300.; !isYield && a.Ultimate.Stress != want {
			t.Errorf("ultimate %v", a.Ultimate)
		}
	}
	// A fall that is made good within 0.05 % strain is noise; one below 0.5 % is no upper
	// yield point, though a plateau.
	for _, c := range []struct {
		low, back float64
		isYield   bool
		isUpper   bool
	}{{290, 0.0004, false, false}, {290, 0.0006, true, true}, {299, 0.0006, true, false}, {298.4, 0.0006, true, true}} {
		points := []CurvePoint{{0, 0}, {0.001, 100}, {0.002, 200}, {0.003, 300}, {0.003 + c.back/2, c.low}, {0.003 + c.back, 300}, {0.01, 320}}
		yield := analyse(t, recordOf(points), CurveOptions{}).YieldPoint
		if (yield != nil) != c.isYield || yield != nil && (yield.Upper != nil) != c.isUpper {
			t.Errorf("%+v: yield point %+v", c, yield)
		}
	}
}

// The search for a line from within a window that reaches beyond it, and the edges of
// what counts as met.
func TestMeetingALine(t *testing.T) {
	points := readCurve(t, "m05-aluminium.csv", CurveReading{}).Points
	line := elasticLine{modulus: 70000, first: 5, last: 10}
	if p, ok := line.meet(points, 70000, 0.002); !ok || !within(p.Stress, 301.538462, 1e-8) {
		t.Errorf("from a window beyond the line: %v, %v", p, ok)
	}
	line.first = 8
	if p, ok := line.meet(points, 70000, 0.002); ok {
		t.Errorf("from a window with no point before the line: %v", p)
	}
	// Numbers without rounding: a last point on the line is a meeting.
	bend := []CurvePoint{{0, 0}, {1, 1024}, {1.25, 1024}, {2.25, 1536}}
	line = elasticLine{modulus: 1024, first: 0, last: 1}
	if p, ok := line.meet(bend[:3], 1024, 0.25); !ok || p != bend[2] {
		t.Errorf("at the last point: %v, %v", p, ok)
	}
	if p, ok := line.meet(bend, 1024, 0.25); !ok || p != bend[2] {
		t.Errorf("at a point: %v, %v", p, ok)
	}
	// A tangent has to be below the least one.
	rising := []CurvePoint{{0, 0}, {1, 1024}, {2, 1536}, {3, 1600}}
	for least, want := range map[float64]CurvePoint{512: rising[2], 513: rising[1], 1024: rising[1]} {
		if p, ok := line.tangent(rising, least); !ok || p != want {
			t.Errorf("tangent below %g: %v, %v, want %v", least, p, ok, want)
		}
	}
	if p, ok := line.tangent(rising, 64); ok {
		t.Errorf("tangent below 64: %v", p)
	}
}

// M-10 (derived) and M-10b (NACA form, from memory): the exponent from two points.
func TestExponentFromTwoPoints(t *testing.T) {
	expect(t, 1e-7, []expectation{
		{"M-10", exponentBetween(345, 450, 0.10), 14.723283},
		{"M-10b", exponentOfSecants(350, 320), 10.901594},
	})
	// On a sampled law all ways agree with it; the original form is another curve, of the
	// same exponent.
	a := analyse(t, recordOf(sample(lawM03, 460, 40000)), CurveOptions{YoungsModulus: 73100, Window: StressWindow{Low: 1, High: 20}})
	expect(t, 1e-6, []expectation{
		{"to ultimate", float64(a.RambergOsgood.ExponentToUltimate), 10},
		{"of secants", float64(a.RambergOsgood.ExponentOfSecants), 10},
		{"offset stress", a.RambergOsgood.OffsetStress, 345},
		{"from", a.RambergOsgood.From.Stress, 255.691385},
		{"to", a.RambergOsgood.To.Stress, 345},
		{"r²", float64(a.RambergOsgood.RSquared), 1},
	})
	if !(a.RambergOsgood.WorstDeviation < 1e-6) {
		t.Errorf("worst deviation %g", a.RambergOsgood.WorstDeviation)
	}
}

// The fit of M-05's curve, by hand: points between plastic strains 1e-4 and 2e-3 are
// (262, 2.5714e-4), (276, 5.5714e-4), (294, 1.3e-3) and the two ends.
func TestRambergOsgoodFitOfADigitisedCurve(t *testing.T) {
	fit := analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), CurveOptions{}).RambergOsgood
	var product, square, worst float64
	points := [][2]float64{
		{3.1640e3 / 13, 1e-4}, {262, 0.004 - 262./70000}, {276, 0.0045 - 276./70000}, {294, 0.0055 - 294./70000}, {3920. / 13, 2e-3},
	}
	for _, p := range points {
		x, y := math.Log(p[0]*13/3920), math.Log(p[1]/2e-3)
		product, square = product+x*y, square+x*x
	}
	n := product / square
	var residual, total, mean float64
	for _, p := range points {
		mean += math.Log(p[1]/2e-3) / 5
	}
	for _, p := range points {
		x, y := math.Log(p[0]*13/3920), math.Log(p[1]/2e-3)
		residual, total = residual+(y-n*x)*(y-n*x), total+(y-mean)*(y-mean)
		worst = math.Max(worst, math.Abs(2e-3*math.Exp(n*x)-p[1])/(p[1]+p[0]/70000))
	}
	expect(t, 1e-9, []expectation{
		{"n", fit.Exponent, n}, {"r²", float64(fit.RSquared), 1 - residual/total}, {"worst", float64(fit.WorstDeviation), worst}, {"points", float64(fit.Points), 5},
	})
	if n < 12 || n > 15 || residual/total > 0.05 {
		t.Errorf("n %g, r² %g", n, 1-residual/total)
	}
}

// What a Ramberg-Osgood law is not fitted to, and what of it does not exist.
func TestRambergOsgoodFitHasItsLimits(t *testing.T) {
	elastic := []CurvePoint{{0, 0}, {0.0005, 50}, {0.001, 100}, {0.0015, 150}, {0.002, 200}}
	analysed := func(more ...CurvePoint) *RambergOsgoodFit {
		return analyse(t, recordOf(append(slices.Clone(elastic), more...)), CurveOptions{}).RambergOsgood
	}
	if fit := analysed(CurvePoint{0.0022, 200}, CurvePoint{0.003, 200}, CurvePoint{0.0035, 200}, CurvePoint{0.01, 200}, CurvePoint{0.02, 250}); fit != nil {
		t.Errorf("a plateau was fitted by %+v", fit)
	}
	if fit := analysed(CurvePoint{0.005, 300}); fit != nil {
		t.Errorf("no point between the ends was fitted by %+v", fit)
	}
	if fit := analysed(CurvePoint{0.003, 240}, CurvePoint{0.006, 300}); fit == nil || fit.Points != 3 {
		t.Errorf("one point between the ends: %+v, want a fit", fit)
	}
	// The largest stress comes before the offset yield: no exponent from the two.
	if fit := analysed(CurvePoint{0.003, 250}, CurvePoint{0.0045, 305}, CurvePoint{0.0052, 300}); fit == nil || fit.ExponentToUltimate.Exists() {
		t.Errorf("ultimate before the offset yield: %+v", fit)
	}
	// At 0.2 % plastic strain the secant modulus is 0.83 E: 0.7 E is not reached.
	strong := analyse(t, recordOf(sample(RambergOsgood{73100, 700, 10}, 705, 500)), CurveOptions{}).RambergOsgood
	if strong == nil || strong.ExponentOfSecants.Exists() {
		t.Errorf("without a secant of 0.7 E: %+v", strong)
	}
}

// hollomon returns the curve σ = 530 ε^0.26 of M-11 up to a strain, in steps that are
// finer where the curve is steep.
func hollomon(last float64, steps int) []CurvePoint {
	points := make([]CurvePoint, steps+1)
	for i := range points {
		strain := last * math.Pow(float64(i)/float64(steps), 3)
		points[i] = CurvePoint{strain, 530 * math.Pow(strain, 0.26)}
	}
	return points
}

// M-11 and M-13 (derived): areas of a power law, in true and in engineering terms.
func TestAreaIsTheSameInTrueAndEngineeringTerms(t *testing.T) {
	points := hollomon(0.2, 4000)
	area := curveOf(t, points)
	expect(t, 1e-8, []expectation{
		{"M-11 stress", area.Last().Stress, 348.773652},
	})
	// The trapezoids of 4000 steps are short by 2e-7 of the area.
	expect(t, 1e-6, []expectation{
		{"M-11 to 0.2", area.Area(0.2), 55.3608971},
		{"M-11 to necking", curveOf(t, hollomon(0.26, 4000)).Area(0.26), 77.0498403},
	})
	for i := range points {
		points[i] = points[i].Engineering()
	}
	engineering := curveOf(t, points)
	expect(t, 1e-6, []expectation{
		{"M-13", engineering.Area(engineering.Last().Strain), 55.3608971},
		{"M-13 strain", engineering.Last().Strain, math.Exp(0.2) - 1},
	})
	// M-11: the largest engineering stress, at a true strain of n; beyond, the true
	// record is left out.
	var text strings.Builder
	text.WriteString("true strain,true stress\n")
	for i := range 401 {
		strain := 0.4 * float64(i) / 400
		fmt.Fprintf(&text, "%v,%v\n", strain, 530*math.Pow(strain, 0.26))
	}
	test, err := ReadCurve(strings.NewReader(text.String()), "hollomon", CurveReading{})
	if err != nil {
		t.Fatal(err)
	}
	expect(t, 1e-8, []expectation{{"M-11 ultimate", test.Points[len(test.Points)-1].Stress, 287.907100}})
	if !test.IsTrue || test.Omitted != 140 || len(test.Points) != 261 {
		t.Errorf("true %v, %d points and %d left out, want 261 and 140", test.IsTrue, len(test.Points), test.Omitted)
	}
}

// M-14 (derived): engineering to true, and back.
func TestEngineeringToTrue(t *testing.T) {
	for _, c := range [][2]CurvePoint{
		{{0.10, 360}, {0.0953101798, 396}},
		{{0.20, 420}, {0.1823215568, 504}},
	} {
		truth := c[0].True()
		back := truth.Engineering()
		expect(t, 1e-9, []expectation{{"M-14 strain", truth.Strain, c[1].Strain}, {"M-14 stress", truth.Stress, c[1].Stress}})
		expect(t, 1e-14, []expectation{{"strain back", back.Strain, c[0].Strain}, {"stress back", back.Stress, c[0].Stress}})
	}
}

// P-07 (derived): trapezoids on the curve of M-03 in equal steps of stress; the error
// falls to a quarter with half the step.
func TestTrapezoidsConverge(t *testing.T) {
	for _, c := range []struct {
		steps         int
		area, percent float64
	}{
		{5, 4.175056628, -2.6046}, {10, 4.257794848, -0.6745}, {20, 4.279416272, -0.1702}, {40, 4.284882548, -0.0426}, {80, 4.286252962, -0.0107},
	} {
		curve := curveOf(t, sample(lawM03, 400, c.steps))
		area := curve.Area(curve.Last().Strain)
		expect(t, 1e-9, []expectation{{"P-07", area, c.area}})
		if percent := 100 * (area/4.286710110 - 1); math.Abs(percent-c.percent) > 5e-5 {
			t.Errorf("P-07, %d steps: error %.5f %%, want %.4f %%", c.steps, percent, c.percent)
		}
	}
}

// Steels of different grade share one modulus: at 20,000 psi all show the same strain,
// about 6.9e-4 for 29e6 psi, while their yield points differ (common practice, no
// source).
func TestSteelsShareOneModulus(t *testing.T) {
	for name, yield := range map[string]float64{"steel-a36.csv": 36000, "steel-4130.csv": 75000, "steel-4340.csv": 217000} {
		a := analyse(t, readCurve(t, name, CurveReading{}), CurveOptions{})
		expect(t, 1e-6, []expectation{
			{name + " modulus", float64(a.Modulus.YoungsModulus), 29e6},
			{name + " yield", float64(a.OffsetYields[0].Stress), yield},
			{name + " stress", a.Corrected.Stress(20000 / 29e6), 20000},
		})
		if got := 20000 / float64(a.Modulus.YoungsModulus); math.Abs(got-6.9e-4) > 0.05e-4 {
			t.Errorf("%s: strain at 20,000 psi is %.3g, want about 6.9e-4", name, got)
		}
		if a.Units.Stress != "psi" || a.Units.EnergyDensity != "lbf*in/in^3" {
			t.Errorf("%s: units %+v", name, a.Units)
		}
	}
}

// The values of a curve: between points, at points, outside.
func TestCurve(t *testing.T) {
	curve := curveOf(t, []CurvePoint{{0, 0}, {1, 10}, {3, 14}, {4, 8}})
	for _, c := range []struct{ strain, stress, area, plastic float64 }{
		{0, 0, 0, 0}, {0.5, 5, 1.25, 0}, {1, 10, 5, 0}, {2, 12, 16, 0.8}, {3, 14, 29, 1.6}, {3.5, 11, 35.25, 2.4}, {4, 8, 40, 3.2},
	} {
		if got := curve.Stress(c.strain); got != c.stress {
			t.Errorf("stress at %g is %g, want %g", c.strain, got, c.stress)
		}
		if got := curve.Area(c.strain); got != c.area {
			t.Errorf("area to %g is %g, want %g", c.strain, got, c.area)
		}
		if got := curve.PlasticStrain(c.strain, 10); math.Abs(got-c.plastic) > 1e-15 {
			t.Errorf("plastic strain at %g is %g, want %g", c.strain, got, c.plastic)
		}
	}
	for _, strain := range []float64{-1e-300, math.Nextafter(4, 5), math.NaN(), math.Inf(1)} {
		for name, got := range map[string]float64{"stress": curve.Stress(strain), "area": curve.Area(strain), "plastic strain": curve.PlasticStrain(strain, 10)} {
			if !math.IsNaN(got) {
				t.Errorf("%s at %g is %g, want NaN", name, strain, got)
			}
		}
	}
	for _, points := range [][]CurvePoint{
		nil, {{0, 0}}, {{0, 0}, {0, 1}}, {{0, 0}, {1, 1}, {0.5, 2}}, {{0, 0}, {1, math.NaN()}}, {{0, 0}, {math.Inf(1), 1}}, {{math.NaN(), 0}, {1, 1}},
	} {
		if _, err := NewCurve(points); err == nil {
			t.Errorf("the points %v were taken", points)
		}
	}
	for want, points := range map[string][]CurvePoint{
		"point 2 of the curve is (1, NaN)":                {{0, 0}, {1, math.NaN()}},
		"point 3 of the curve has strain 0.5 after 1: st": {{0, 0}, {1, 1}, {0.5, 2}},
	} {
		if _, err := NewCurve(points); !strings.HasPrefix(err.Error(), want) {
			t.Errorf("error %q, want %q", err, want)
		}
	}
}

// A curve does not share its points with the caller.
func TestCurveKeepsItsOwnPoints(t *testing.T) {
	points := []CurvePoint{{0, 0}, {1, 10}}
	curve := curveOf(t, points)
	points[1].Stress = 5
	if curve.Last().Stress != 10 {
		t.Error("the curve changed with the caller's points")
	}
}

// The analysis is the same in other units, and shifted strain changes it by the shift.
func TestAnalysisDoesNotDependOnUnits(t *testing.T) {
	base := analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), CurveOptions{})
	rapid.Check(t, func(t *rapid.T) {
		factor := math.Exp(rapid.Float64Range(-10, 10).Draw(t, "log of the unit"))
		shift := rapid.Float64Range(-0.001, 0.001).Draw(t, "shift")
		var points []CurvePoint
		for _, p := range base.Points {
			points = append(points, CurvePoint{p.Strain + shift, p.Stress * factor})
		}
		a, err := AnalyseCurve(recordOf(points), CurveOptions{})
		if err != nil {
			t.Fatal(err)
		}
		for name, pair := range map[string][2]float64{
			"modulus":    {float64(a.Modulus.YoungsModulus), float64(base.Modulus.YoungsModulus) * factor},
			"limit":      {float64(a.ProportionalLimit.Stress), float64(base.ProportionalLimit.Stress) * factor},
			"strain":     {float64(a.ProportionalLimit.Strain) - shift, float64(base.ProportionalLimit.Strain)},
			"resilience": {float64(a.Resilience.Area), float64(base.Resilience.Area) * factor},
			"toughness":  {float64(a.Toughness.Area), float64(base.Toughness.Area) * factor},
			"exponent":   {a.RambergOsgood.Exponent, base.RambergOsgood.Exponent},
		} {
			// A shifted strain loses three digits of the smallest differences.
			if !within(pair[0], pair[1], 1e-9) {
				t.Fatalf("%s %.15g, want %.15g", name, pair[0], pair[1])
			}
		}
	})
}

func showsFinding(a *CurveAnalysis, code string) bool {
	for _, finding := range a.Findings {
		if finding.Code == code {
			return true
		}
	}
	return false
}

// Every finding of the analysis, raised by a curve that needs it, and by none that does
// not.
func TestCurveFindings(t *testing.T) {
	steel := RambergOsgood{YoungsModulus: 210000, OffsetStress: 355, Exponent: 20}
	good := func() *CurveRecord {
		test := recordOf(sample(steel, 400, 200))
		test.Strain.DecidedBy, test.Stress.DecidedBy = "file", "file"
		return test
	}
	byDefault := func() *CurveRecord { test := good(); test.Strain.DecidedBy = "default"; return test }
	scaled := func(factor float64) *CurveRecord {
		test := byDefault()
		for i := range test.Points {
			test.Points[i].Strain *= factor
		}
		return test
	}
	if a := analyse(t, good(), CurveOptions{YoungsModulus: 205000}); len(a.Findings) != 0 {
		t.Errorf("findings on a good curve: %+v", a.Findings)
	}
	if a := analyse(t, byDefault(), CurveOptions{}); len(a.Findings) != 0 {
		t.Errorf("findings on a good curve without a stated strain unit: %+v", a.Findings)
	}
	for _, c := range []struct {
		code    string
		test    *CurveRecord
		options CurveOptions
		message string
	}{
		{"few-points", recordOf(sample(steel, 400, 12)), CurveOptions{Window: StressWindow{Low: 60, High: 140}}, "rests on 3 points"},
		{"modulus-scatter", recordOf([]CurvePoint{{0, 0}, {.001, 60}, {.002, 150}, {.003, 200}, {.004, 290}, {.005, 340}}), CurveOptions{Window: StressWindow{High: 400}}, "coefficient of variation"},
		{"modulus-differs", good(), CurveOptions{YoungsModulus: 190000}, "1.105 of the stated one"},
		{"modulus-differs", scaled(100), CurveOptions{YoungsModulus: 210000}, "is the strain in percent?"},
		{"modulus-differs", scaled(1e6), CurveOptions{YoungsModulus: 210000}, "is the strain in microstrain?"},
		{"strain-unit-suspect", scaled(100), CurveOptions{}, "as a ratio"},
		{"strain-unit-suspect", scaled(1e6), CurveOptions{}, "as a ratio"},
		{"no-proportional-limit", recordOf(sample(steel, 200, 50)), CurveOptions{}, "by offset-0.01%"},
		{"no-offset-yield", recordOf(sample(steel, 300, 50)), CurveOptions{}, "0.2 %"},
		{"no-ramberg-osgood", recordOf(sample(steel, 300, 50)), CurveOptions{}, "no point"},
		{"window-past-limit", good(), CurveOptions{Window: StressWindow{Low: 100, High: 350}}, "past the proportional limit"},
		{"units-not-stated", &CurveRecord{Points: good().Points, Lines: good().Lines}, CurveOptions{}, "unit of stress"},
		{"units-assumed", func() *CurveRecord { test := good(); test.Stress.DecidedBy = "default"; return test }(), CurveOptions{}, "taken as MPa"},
		{"tangent-unresolved", recordOf([]CurvePoint{{0, 0}, {.0010, 70}, {.0011, 73}, {.0020, 140}, {.0021, 147}, {.003, 210}, {.01, 240}}), CurveOptions{Window: StressWindow{Low: 0, High: 210}}, "scatter"},
		{"limit-within-noise", noisy(2.2), CurveOptions{}, "by offset-0.01%: choose a larger one"},
		{"limits-within-noise", noisy(0.8), CurveOptions{}, "limits by offset-0.002%, deviation-1%."},
	} {
		a := analyse(t, c.test, c.options)
		found := false
		for _, finding := range a.Findings {
			found = found || finding.Code == c.code && strings.Contains(finding.Message, c.message)
		}
		if !found {
			t.Errorf("%s with %q is not among %+v", c.code, c.message, a.Findings)
		}
	}
}

// noisy returns a record of lawM03 in 2000 readings with noise of a standard deviation.
func noisy(deviation float64) *CurveRecord {
	random := rand.New(rand.NewPCG(1, 2))
	points := sample(lawM03, 420, 2000)
	for i := range points {
		points[i].Stress += deviation * random.NormFloat64()
	}
	return recordOf(points)
}

// Noise of a tenth of a percent of the strength leaves the modulus and the larger
// offsets as they are; what it reaches is said.
func TestNoisyRecord(t *testing.T) {
	a := analyse(t, noisy(0.3), CurveOptions{})
	expect(t, 0.003, []expectation{{"E", float64(a.Modulus.Fitted), 73100}, {"0.2 %", float64(a.OffsetYields[0].Stress), 345}})
	expect(t, 0.02, []expectation{{"limit", float64(a.ProportionalLimit.Stress), 255.691385}, {"n", a.RambergOsgood.Exponent, 10}})
	expect(t, 0.1, []expectation{{"scatter", float64(a.Modulus.Scatter), 0.3}})
	if a.YieldPoint != nil {
		t.Errorf("noise was taken for a yield point, %+v", a.YieldPoint)
	}
	if showsFinding(a, "limit-within-noise") {
		t.Errorf("findings %+v", a.Findings)
	}
}

// What does not exist is NaN, which is written as null, and never 0.
func TestAnalysisOfAnElasticRecord(t *testing.T) {
	a := analyse(t, recordOf(sample(RambergOsgood{210000, 355, 20}, 150, 30)), CurveOptions{})
	for name, number := range map[string]Number{
		"limit": a.ProportionalLimit.Stress, "limit strain": a.ProportionalLimit.Strain, "resilience": a.Resilience.Triangle, "area": a.Resilience.Area,
		"offset yield": a.OffsetYields[0].Stress, "ductile estimate": a.Toughness.DuctileEstimate, "stated": a.Modulus.Stated,
	} {
		if number.Exists() {
			t.Errorf("%s is %g, want none", name, float64(number))
		}
	}
	expect(t, 1e-6, []expectation{{"area", float64(a.Toughness.Area), 150. * 150 / 420000}, {"E", float64(a.Modulus.Fitted), 210000}})
}

func TestCurveOptionsAreChecked(t *testing.T) {
	test := readCurve(t, "m05-aluminium.csv", CurveReading{})
	for want, options := range map[string]CurveOptions{
		`proportional limit by "offset"`: {Limit: "offset"},
		`by "offset-0.01"`:               {Limit: "offset-0.01"},
		`by "offset-0%"`:                 {Limit: "offset-0%"},
		`by "deviation-NaN%"`:            {Limit: "deviation-NaN%"},
		`by "tangent-100%"`:              {Limit: "tangent-100%"},
		`by "yield-1%"`:                  {Limit: "yield-1%"},
		"Young's modulus is -1":          {YoungsModulus: -1},
		"Young's modulus is NaN":         {YoungsModulus: math.NaN()},
		"offset 0 %":                     {Offsets: []float64{0}},
		"offset 100 %":                   {Offsets: []float64{0.001, 1}},
	} {
		_, err := AnalyseCurve(test, options)
		var study *StudyError
		if !errors.As(err, &study) || !strings.Contains(err.Error(), want) {
			t.Errorf("error %v, want a study error with %q", err, want)
		}
	}
	for want, options := range map[string]CurveOptions{
		"holds 1 points":            {Window: StressWindow{Low: 60, High: 100}},
		"holds 0 points":            {Window: StressWindow{Low: 71, High: 100}},
		"window from 90.461":        {Window: StressWindow{Low: 0.3, High: 0.35, IsShare: true}},
		"500 to 600 holds 0 points": {Window: StressWindow{Low: 500, High: 600}},
	} {
		_, err := AnalyseCurve(test, options)
		var place *CurveError
		if !errors.As(err, &place) || !strings.Contains(err.Error(), want) || place.Path != "m05-aluminium.csv" {
			t.Errorf("error %v, want a curve error with %q", err, want)
		}
	}
	_, err := AnalyseCurve(recordOf([]CurvePoint{{1, 0.3}, {2, 0.2}, {3, 0.1}}), CurveOptions{})
	if err == nil || !strings.Contains(err.Error(), "are the columns exchanged?") {
		t.Errorf("error %v of a falling curve", err)
	}
	a := analyse(t, test, CurveOptions{Limit: "offset-0.1%", Offsets: []float64{0.001, 0.005}, Window: StressWindow{Low: 0.1, High: 0.7, IsShare: true}})
	if a.ProportionalLimit.By != "offset-0.1%" || len(a.ProportionalLimits) != 8 || a.ProportionalLimits[7] != a.ProportionalLimit {
		t.Errorf("limit %+v among %d", a.ProportionalLimit, len(a.ProportionalLimits))
	}
	// Derived: the line 70000 (ε - 0.001) passes 31 below 276 and 21 above 294.
	expect(t, 1e-9, []expectation{
		{"0.1 %", float64(a.OffsetYields[1].Stress), 276 + 18*31./52}, {"0.1 % again", float64(a.ProportionalLimit.Stress), 276 + 18*31./52},
		{"0.5 %", float64(a.OffsetYields[2].Stress), 318.18181818181819},
	})
	if a.Modulus.From.Stress != 70 || a.Modulus.To.Stress != 210 {
		t.Errorf("10 to 70 %% of the offset yield stress are %g to %g, want 70 to 210", a.Modulus.From.Stress, a.Modulus.To.Stress)
	}
}

// How far off its line a point may lie to continue it: by 1 % of the larger stress in
// units of √(1 + 1/K + (ε - mean)²/Σ(ε - mean)²), for three points and one more √(10/3).
func TestLineContinues(t *testing.T) {
	points := []CurvePoint{{-9, 0}, {0, 0}, {1, 100}, {2, 200}}
	fit := fitLine(points, 1, 3)
	for _, c := range []struct {
		strain, off float64
		want        bool
	}{{3, 5.5, true}, {3, 5.7, false}, {3, -5.3, true}, {3, -5.5, false}, {-1, 3.6, true}, {-1, 3.7, false}, {-1, -3.6, true}, {-1, -3.7, false}} {
		if got := fit.continues(CurvePoint{c.strain, 100*c.strain + c.off}, points); got != c.want {
			t.Errorf("%g off at %g: %v", c.off, c.strain, got)
		}
	}
}

// The default window holds what lies between 10 and 40 % of the offset yield stress,
// 35.5 to 142, and grows only where these are fewer than five points: past 260, where
// the plastic strain is 0.3 % of the elastic one, before 286, where it is 2 %.
func TestDefaultWindow(t *testing.T) {
	law := RambergOsgood{YoungsModulus: 210000, OffsetStress: 355, Exponent: 20}
	for step, want := range map[float64][2]float64{22: {44, 132}, 26: {0, 260}, 142: {0, 284}} {
		var points []CurvePoint
		for stress := 0.; stress < 400; stress += step {
			points = append(points, CurvePoint{law.Strain(stress), stress})
		}
		a := analyse(t, recordOf(points), CurveOptions{})
		if a.Modulus.From.Stress != want[0] || a.Modulus.To.Stress != want[1] {
			t.Errorf("steps of %g: window from %g to %g (%d points), want %g to %g", step, a.Modulus.From.Stress, a.Modulus.To.Stress, a.Modulus.Points, want[0], want[1])
		}
	}
}

// Two points have no scatter, whatever rounding leaves.
func TestTwoPointsHaveNoScatter(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	for range 100 {
		points := []CurvePoint{{0, 0}, {random.Float64(), random.Float64()}, {1 + random.Float64(), 1 + random.Float64()}}
		if fit := fitLine(points, 1, 2); !math.IsNaN(fit.variation) || !math.IsNaN(fit.scatter) {
			t.Fatalf("V1 %g, scatter %g of %v", fit.variation, fit.scatter, points[1:])
		}
	}
}

// A window's bounds count as in it, but for the rounding of another unit.
func TestWindowBounds(t *testing.T) {
	points := readCurve(t, "m05-aluminium.csv", CurveReading{}).Points
	for _, c := range []struct {
		low, high   float64
		first, last int
	}{
		{70, 210, 1, 3}, {70 * (1 + 1e-13), 210 * (1 - 1e-13), 1, 3}, {70 * (1 + 1e-11), 210 * (1 - 1e-11), 2, 2},
		{0, 400, 0, 13}, {400, 500, 13, 13}, {401, 500, 14, 13}, {0, 1e9, 0, 13}, {71, 100, 2, 1},
	} {
		if first, last := window(points, c.low, c.high); first != c.first || last != c.last {
			t.Errorf("%g to %g: points %d to %d, want %d to %d", c.low, c.high, first, last, c.first, c.last)
		}
	}
	// Past the ultimate stress no point counts.
	falling := []CurvePoint{{0, 0}, {1, 100}, {2, 80}, {3, 60}}
	if first, last := window(falling, 50, 100); first != 1 || last != 1 {
		t.Errorf("points %d to %d, want 1 alone", first, last)
	}
}

func TestParseStressWindow(t *testing.T) {
	for text, want := range map[string]StressWindow{
		"70..210": {70, 210, false}, "10%..40%": {0.1, 0.4, true}, " 0 .. 1e2 ": {0, 100, false},
	} {
		if got, err := ParseStressWindow(text); err != nil || got != want {
			t.Errorf("%q: %+v, %v, want %+v", text, got, err, want)
		}
	}
	for _, text := range []string{"", "70", "70-210", "210..70", "70..70", "-1..5", "10%..40", "10..40%", "a..b", "x..5", "5..x", "5..", "..5", "1..Inf", "NaN..1", "1..2..3"} {
		if got, err := ParseStressWindow(text); err == nil || !strings.Contains(err.Error(), "modulus window") {
			t.Errorf("%q was read as %+v (%v)", text, got, err)
		}
	}
}
