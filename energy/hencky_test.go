package energy

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"strainledger/mesh"
)

func hencky(t testing.TB, curve *Curve, youngsModulus, poissonsRatio float64) *HenckyLaw {
	t.Helper()
	law, err := NewHenckyLaw(curve, youngsModulus, poissonsRatio)
	if err != nil {
		t.Fatal(err)
	}
	return law
}

// lawCurve returns the curve of M-05 as a law uses it: its limit is 243.384615 MPa.
func lawCurve(t testing.TB, options CurveOptions) *Curve {
	t.Helper()
	curve, err := analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), options).LawCurve()
	if err != nil {
		t.Fatal(err)
	}
	return curve
}

// uniaxialStrain returns the strain of a bar at a point of its curve: the lateral strain
// is -ν of the elastic part and -½ of the plastic one.
func uniaxialStrain(p CurvePoint, youngsModulus, poissonsRatio float64) mesh.SymmetricTensor {
	elastic := p.Stress / youngsModulus
	lateral := -float64(poissonsRatio*elastic) - (p.Strain-elastic)/2
	return mesh.SymmetricTensor{p.Strain, lateral, lateral}
}

// Below the limit the law's density is ½ σ:ε of Hooke's law, for any strain.
func TestHenckyIsHookeBelowTheLimit(t *testing.T) {
	const youngsModulus = 70000
	curve := lawCurve(t, CurveOptions{})
	rapid.Check(t, func(t *rapid.T) {
		poissonsRatio := rapid.Float64Range(-0.5, 0.49).Draw(t, "ν")
		law, lawErr := NewHenckyLaw(curve, youngsModulus, poissonsRatio)
		hooke, hookeErr := NewIsotropicLaw(youngsModulus, poissonsRatio)
		if lawErr != nil || hookeErr != nil {
			t.Fatal(lawErr, hookeErr)
		}
		strain := anyTensor(t, "strain")
		stress := hooke.Stress(&strain)
		scale := rapid.Float64Range(0.01, 0.999999).Draw(t, "share of the limit") * 243.384615 / VonMisesStress(&stress)
		if math.IsInf(scale, 0) || scale > 1 {
			t.Skip("next to no distortion")
		}
		for i := range strain {
			strain[i] *= scale
			stress[i] *= scale
		}
		if got, want := law.Density(&strain), Density(&stress, &strain); !within(got, want, 1e-12) {
			t.Fatalf("density %.16g, want %.16g", got, want)
		}
	})
}

// A bar pulled along its curve stores the area under it: to every point, and not beyond
// the last.
func TestHenckyOfABarIsTheAreaUnderItsCurve(t *testing.T) {
	for _, poissonsRatio := range []float64{0, 0.3, 0.49} {
		curve := lawCurve(t, CurveOptions{})
		law := hencky(t, curve, 70000, poissonsRatio)
		for i := 1; i < curve.Len(); i++ {
			p := curve.Point(i)
			strain := uniaxialStrain(p, 70000, poissonsRatio)
			if got, want := law.Density(&strain), curve.Area(p.Strain); !within(got, want, 1e-12) {
				t.Errorf("ν %g: density at stress %g is %.15g, want %.15g", poissonsRatio, p.Stress, got, want)
			}
		}
		beyond := curve.Last()
		beyond.Strain *= 1 + 1e-9
		strain := uniaxialStrain(beyond, 70000, poissonsRatio)
		if got := law.Density(&strain); !math.IsNaN(got) {
			t.Errorf("ν %g: density %g beyond the last point, want NaN", poissonsRatio, got)
		}
	}
	// The whole curve stores M-05's toughness, 43.816 (derived), and what the limit's
	// plastic strain at constant stress adds over the measured bend.
	curve := lawCurve(t, CurveOptions{})
	added := 243.384615*243.384615/140000 + 1e-4*243.384615 - 0.44609172
	if got := curve.Area(0.12); !within(got, 43.816+added, 1e-9) || added > 0.0014 {
		t.Errorf("area %.12g, want %.12g", got, 43.816+added)
	}
}

// P-06 (derived): an elastic-perfectly plastic bar, drawn to 0.005.
func TestHenckyOfAPerfectlyPlasticBar(t *testing.T) {
	law := hencky(t, curveOf(t, []CurvePoint{{0, 0}, {250. / 200000, 250}, {0.02, 250}}), 200000, 0.3)
	strain := uniaxialStrain(CurvePoint{0.005, 250}, 200000, 0.3)
	expect(t, 1e-12, []expectation{{"P-06 work", law.Density(&strain), 1.09375}})
	// Pure shear beyond the limit: σ_eq = √3 τ stays at 250 and ε_eq = γ/√3.
	shear := mesh.SymmetricTensor{0, 0, 0, 0.005}
	equivalent, elastic := 0.01/math.Sqrt(3), 250*2.6/(3*200000)
	expect(t, 1e-12, []expectation{{"shear", law.Density(&shear), 250 * (equivalent - elastic/2)}})
	// Volume change is elastic whatever the curve: ½ K (tr ε)².
	volume := mesh.SymmetricTensor{0.01, 0.01, 0.01}
	expect(t, 1e-12, []expectation{{"volume", law.Density(&volume), 0.5 * 200000 / (3 * 0.4) * 0.03 * 0.03}})
}

// Rounding of the equivalent strain does not carry a state beyond the last point; more
// does.
func TestHenckyAtTheLastPoint(t *testing.T) {
	law := hencky(t, curveOf(t, []CurvePoint{{0, 0}, {250. / 200000, 250}, {0.02, 250}}), 200000, 0.3)
	last := law.equivalent.Last().Strain
	want := law.equivalent.Area(last)
	for beyond, isWithin := range map[float64]bool{-1e-9: true, 5e-13: true, 2e-12: false} {
		shear := mesh.SymmetricTensor{0, 0, 0, last * (1 + beyond) * math.Sqrt(3) / 2}
		if got := law.Density(&shear); isWithin != within(got, want, 2e-9) || isWithin == math.IsNaN(got) {
			t.Errorf("%g beyond the last point: density %.12g, of %.12g there", beyond, got, want)
		}
	}
}

func TestEquivalentStrain(t *testing.T) {
	for _, c := range []struct {
		strain mesh.SymmetricTensor
		want   float64
	}{
		{mesh.SymmetricTensor{1, -0.5, -0.5}, 1},
		{mesh.SymmetricTensor{1, 1, 1}, 0},
		{mesh.SymmetricTensor{1, -0.3, -0.3}, 2. / 3 * 1.3}, // σ/3G of a bar, ν 0.3
		{mesh.SymmetricTensor{0, 0, 0, 0.5}, 1 / math.Sqrt(3)},
		{mesh.SymmetricTensor{0, 0, 0, 0, 0.5}, 1 / math.Sqrt(3)},
		{mesh.SymmetricTensor{0, 0, 0, 0, 0, 0.5}, 1 / math.Sqrt(3)},
	} {
		if got := EquivalentStrain(&c.strain); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("%v: %.16g, want %.16g", c.strain, got, c.want)
		}
	}
}

// A noisy curve, one with a toe and one by another definition of the limit: elastic to
// the limit, then through the measured points.
func TestLawCurve(t *testing.T) {
	a := analyse(t, readCurve(t, "m08-toe.csv", CurveReading{}), CurveOptions{Limit: "deviation-5%"})
	curve, err := a.LawCurve()
	if err != nil {
		t.Fatal(err)
	}
	limit := 252.941176
	expect(t, 1e-8, []expectation{
		{"limit", curve.Point(1).Stress, limit}, {"its elastic strain", curve.Point(1).Strain, limit / 70000},
		{"its strain", curve.Point(2).Strain, 1.05 * limit / 70000}, {"limit again", curve.Point(2).Stress, limit},
		{"next point", curve.Point(3).Strain, 0.0040}, {"next stress", curve.Point(3).Stress, 262},
		{"last", curve.Last().Strain, 0.12}, {"points", float64(curve.Len()), 12},
	})
	// Without a limit: the elastic line as far as the record goes.
	elastic := analyse(t, readCurve(t, "m07-noisy-modulus.csv", CurveReading{}), CurveOptions{})
	curve, err = elastic.LawCurve()
	if err != nil {
		t.Fatal(err)
	}
	last := 0.0012 + 0.08/69885.714285714
	expect(t, 1e-9, []expectation{{"points", float64(curve.Len()), 2}, {"last", curve.Last().Strain, last}, {"stress", curve.Last().Stress, 69885.714285714 * last}})
}

func TestHenckyLawRefuses(t *testing.T) {
	curve := curveOf(t, []CurvePoint{{0, 0}, {1e-3, 200}})
	if _, err := NewHenckyLaw(curve, 200000, 0.5); err == nil {
		t.Error("a Poisson's ratio of 0.5 was taken")
	}
	if _, err := NewHenckyLaw(curve, -1, 0.3); err == nil {
		t.Error("a negative modulus was taken")
	}
	if _, err := NewHenckyLaw(curveOf(t, []CurvePoint{{0, 1}, {1e-3, 200}}), 200000, 0.3); err == nil {
		t.Error("a curve that begins at a stress of 1 was taken")
	}
	// Noise steeper than the elastic line does not turn the equivalent strain back.
	law := hencky(t, curveOf(t, []CurvePoint{{0, 0}, {1e-3, 200}, {2e-3, 210}, {2e-3 + 1e-9, 205}, {2e-3 + 2e-9, 211}, {3e-3, 220}}), 200000, 0.3)
	for i := 1; i < law.equivalent.Len(); i++ {
		if law.equivalent.Point(i).Strain <= law.equivalent.Point(i-1).Strain {
			t.Errorf("equivalent strain falls at point %d", i)
		}
	}
}
