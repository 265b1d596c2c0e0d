package energy

import (
	"math"
	"testing"

	"strainledger/mesh"
)

// within reports whether two numbers agree within a relative tolerance. Check values
// are printed to 7 digits or more, hence 1e-6 where nothing else is said.
func within(got, want, tolerance float64) bool {
	return math.Abs(got-want) <= tolerance*math.Abs(want)
}

func isotropic(t testing.TB, youngsModulus, poissonsRatio float64) *Law {
	t.Helper()
	law, err := NewIsotropicLaw(youngsModulus, poissonsRatio)
	if err != nil {
		t.Fatal(err)
	}
	return law
}

// The state of T-02, order xx yy zz xy yz xz, with E 70000, ν 0.33.
var (
	stateT02 = mesh.SymmetricTensor{120, 60, -80, -30, 25, 45}
	strainT2 = mesh.SymmetricTensor{1.8085714285714285e-3, 6.685714285714286e-4, -1.9914285714285714e-3, -5.70e-4, 4.75e-4, 8.55e-4}
)

func TestDensityByLaw(t *testing.T) {
	for _, c := range []struct {
		id, source              string
		stress                  mesh.SymmetricTensor
		e, nu                   float64
		w, volumetric, vonMises float64
	}{
		{"T-01", "Timoshenko & Goodier, from memory", mesh.SymmetricTensor{100}, 210000, 0.3, 0.023809524, 0.0031746032, 100},
		{"T-02", "derived", stateT02, 70000, 0.33, 0.27567857, 0.0080952381, 205.548048},
		{"T-03", "Timoshenko & Goodier, from memory", mesh.SymmetricTensor{-150, -150, -150}, 210000, 0.3, 0.064285714, 0.064285714, 0},
		{"T-04", "Timoshenko & Goodier, from memory", mesh.SymmetricTensor{0, 0, 0, 80}, 210000, 0.3, 0.039619048, 0, 138.564065},
		{"T-07", "derived; plane strain, σ_zz from the law", mesh.SymmetricTensor{100, -40, 18, 30}, 210000, 0.3, 0.038133333, 78. * 78 * 0.4 / (6 * 210000), 0},
		{"T-08", "derived; plane stress", mesh.SymmetricTensor{100, -40, 0, 30}, 210000, 0.3, 0.038904762, 60. * 60 * 0.4 / (6 * 210000), 0},
		{"F-01", "derived", mesh.SymmetricTensor{400, 380, 360}, 200000, 0.3, 0.4358, 0.4332, 34.641016},
	} {
		law := isotropic(t, c.e, c.nu)
		strain := law.Strain(&c.stress)
		if got := Density(&c.stress, &strain); !within(got, c.w, 1e-6) {
			t.Errorf("%s (%s): density %.9g, want %.9g", c.id, c.source, got, c.w)
		}
		volumetric := VolumetricDensity(&c.stress, &strain)
		if !within(volumetric, c.volumetric, 1e-6) {
			t.Errorf("%s: volumetric density %.9g, want %.9g", c.id, volumetric, c.volumetric)
		}
		if got := VonMisesStress(&c.stress); c.vonMises != 0 && !within(got, c.vonMises, 1e-6) {
			t.Errorf("%s: von Mises stress %.9g, want %.9g", c.id, got, c.vonMises)
		}
		// F-02: w_d = σ_vM² / 6G, to 1e-12 (derived).
		shear := c.e / (2 * (1 + c.nu))
		vonMises := VonMisesStress(&c.stress)
		if got, want := Density(&c.stress, &strain)-volumetric, vonMises*vonMises/(6*shear); math.Abs(got-want) > 1e-12*c.w {
			t.Errorf("%s, F-02: distortional density %.15g, want %.15g", c.id, got, want)
		}
		back := law.Stress(&strain)
		for i := range back {
			if math.Abs(back[i]-c.stress[i]) > 1e-12*400 {
				t.Errorf("%s: stress %d is %g after strain and back, was %g", c.id, i, back[i], c.stress[i])
			}
		}
	}
}

// T-02 (derived): each strain component by itself, so that no two mistakes cancel.
func TestStrainOfLaw(t *testing.T) {
	got := isotropic(t, 70000, 0.33).Strain(&stateT02)
	for i := range got {
		if !within(got[i], strainT2[i], 1e-12) {
			t.Errorf("strain %d is %.12g, want %.12g", i, got[i], strainT2[i])
		}
	}
}

// T-02a, T-02b, T-02c (derived): the values that the commonest mistakes give must not
// come out.
func TestDensityIsNoneOfTheCommonMistakes(t *testing.T) {
	got := Density(&stateT02, &strainT2)
	if !within(got, 0.27567857, 1e-7) {
		t.Errorf("density %.9g, want 0.27567857", got)
	}
	for mistake, wrong := range map[string]float64{
		"tensor shear counted once": 0.20822857, "engineering shear in the tensor form": 0.41057857, "shear dropped": 0.14077857,
	} {
		if within(got, wrong, 0.1) {
			t.Errorf("%s: %g", mistake, got)
		}
	}
}

// T-07 and T-08 (derived): what the law completes out of the plane.
func TestLawCompletesOutOfPlane(t *testing.T) {
	law := isotropic(t, 210000, 0.3)
	for strainZZ, want := range map[float64]float64{0: 18, 1e-4: 18 + 21} {
		stress := mesh.SymmetricTensor{100, -40, 7, 30, 7, 7}
		law.CompletePlaneStrain(&stress, strainZZ)
		if !within(stress[2], want, 1e-14) || stress[4] != 0 || stress[5] != 0 {
			t.Errorf("T-07: σ_zz, σ_yz, σ_xz at ε_zz %g are %g, want %g, 0, 0", strainZZ, [3]float64{stress[2], stress[4], stress[5]}, want)
		}
	}
	strain := mesh.SymmetricTensor{5.3333333333333336e-4, -3.3333333333333335e-4, 7, 0.5 * 3.7142857142857143e-4, 7, 7}
	law.CompletePlaneStress(&strain)
	if !within(strain[2], -8.5714286e-5, 1e-7) || strain[4] != 0 || strain[5] != 0 {
		t.Errorf("T-08: ε_zz, ε_yz, ε_xz are %.9g, want -8.5714286e-5, 0, 0", [3]float64{strain[2], strain[4], strain[5]})
	}
	full := mesh.SymmetricTensor{100, -40, 18, 30}
	for i, want := range map[int]float64{0: 5.0761905e-4, 1: -3.5904762e-4, 3: 0.5 * 3.7142857e-4} {
		if got := law.Strain(&full); !within(got[i], want, 1e-7) {
			t.Errorf("T-07: strain %d is %.9g, want %.9g", i, got[i], want)
		}
	}
	if got := law.Strain(&full)[2]; math.Abs(got) > 1e-18 {
		t.Errorf("T-07: ε_zz is %g, want 0", got)
	}
}

// F-09 (derived): the density of a mean is below the mean of densities.
func TestDensityIsConvex(t *testing.T) {
	law := isotropic(t, 200000, 0.3)
	density := func(stress mesh.SymmetricTensor) float64 {
		strain := law.Strain(&stress)
		return Density(&stress, &strain)
	}
	if got := density(mesh.SymmetricTensor{50, 50}); !within(got, 0.00875, 1e-12) {
		t.Errorf("density of the mean %g, want 0.00875", got)
	}
	if got := (density(mesh.SymmetricTensor{100}) + density(mesh.SymmetricTensor{0, 100})) / 2; !within(got, 0.025, 1e-12) {
		t.Errorf("mean density %g, want 0.025", got)
	}
}

// T-15 (derived): a rigid rotation by a finite angle, read as a small strain, is given
// an energy that is not there.
func TestDensityOfARotationReadAsStrain(t *testing.T) {
	law := isotropic(t, 210000, 0.3)
	for degrees, want := range map[float64]float64{1: 0.0093679245, 5: 5.8478226, 10: 93.209457} {
		stretch := math.Cos(degrees*math.Pi/180) - 1
		strain := mesh.SymmetricTensor{stretch, stretch}
		stress := law.Stress(&strain)
		if got := Density(&stress, &strain); !within(got, want, 1e-6) {
			t.Errorf("%g degrees: %.9g, want %.9g", degrees, got, want)
		}
	}
}

func TestLawRefusesUnstableMaterials(t *testing.T) {
	for _, c := range [][2]float64{{0, 0.3}, {-1, 0.3}, {math.NaN(), 0.3}, {210000, 0.5}, {210000, -1}, {210000, math.NaN()}} {
		if _, err := NewIsotropicLaw(c[0], c[1]); err == nil {
			t.Errorf("E %g, ν %g was taken", c[0], c[1])
		}
	}
}

// U-01 to U-04 (derived; the pound force and the inch are exact by definition).
func TestUnits(t *testing.T) {
	for _, c := range []struct {
		length, stress string
		joules         float64
		energy         Text
	}{
		{"m", "Pa", 1, "J"}, {"mm", "MPa", 1e-3, "mJ"}, {"m", "MPa", 1e6, "MJ"}, {"mm", "Pa", 1e-9, "nJ"}, {"cm", "MPa", 1, "J"},
		{"in", "ksi", 112.98483, "kip*in"}, {"in", "psi", 0.112984829, "lbf*in"}, {"mm", "GPa", 1, "J"}, {"m", "kPa", 1e3, "kJ"},
		{"ft", "psi", 0.112984829 * 1728, "psi*ft^3"}, {"mm", "psi", 6894.757293e-9, "psi*mm^3"},
	} {
		if got := EnergyInJoules(c.length, c.stress); !within(got, c.joules, 1e-7) {
			t.Errorf("%s %s: %g J, want %g", c.length, c.stress, got, c.joules)
		}
		units := labels(c.length, c.stress, "kg")
		if units.Energy != c.energy || units.EnergyDensity != c.energy+"/"+Text(c.length)+"^3" || units.Mass != "kg" {
			t.Errorf("%s %s: %+v, want energy in %s", c.length, c.stress, units, c.energy)
		}
	}
	if units := labels("", "MPa", ""); units.Energy != "" || units.Stress != "MPa" {
		t.Errorf("without a length: %+v", units)
	}
}
