package energy

import (
	"math"
	"testing"
)

// N-04 (R0 = 2 e1 (K_c/s_t)², Lazzarin and Zambardi, from memory). Data: a of the PMMA
// series by Gómez and Elices (from memory), b of Seles et al. 2022, c a sample steel, d a
// sample like alumina. K is in MPa √m, R0 in mm.
func TestControlRadius(t *testing.T) {
	for _, c := range []struct {
		id                                      string
		toughness, strength, nu, strain, stress float64
	}{
		{"N-04a", 1.7, 128.4, 0.40, 0.0351527, 0},
		{"N-04b", 1.207, 59.76, 0.374, 0.0895641, 0.1258900},
		{"N-04c", 50, 1000, 0.3, 0.6724296, 0.8156691},
		{"N-04d", 7.6, 290, 0.22, 0.2160360, 0},
	} {
		for idealisation, want := range map[Idealisation]float64{PlaneStrain: c.strain, Solid: c.strain, Axisymmetric: c.strain, PlaneStress: c.stress} {
			if got := ControlRadius(c.toughness*math.Sqrt(1000), c.strength, c.nu, idealisation); want != 0 && !within(got, want, 1e-6) {
				t.Errorf("%s, %s: R0 %.8g, want %.8g", c.id, idealisation, got, want)
			}
		}
	}
}

// N-02 (computed by root finding and angular quadrature; e1 0.13449 at 0° and 0.117 at
// 135° are published, from memory): coefficients of the mean density for ν 0.3.
func TestNotchCoefficients(t *testing.T) {
	for _, c := range []struct {
		opening, lambda1, e1Strain, i1, e1Stress, lambda2, e2Strain, e2Stress float64
	}{
		{0, 0.500000, 0.134486, 0.84500, 0.163134, 0.500000, 0.341387, 0.370035},
		{15, 0.500179, 0.139967, 0.84310, 0.169600, 0.545254, 0.305902, 0.329064},
		{30, 0.501453, 0.144837, 0.83662, 0.174985, 0.598192, 0.272971, 0.291568},
		{45, 0.505010, 0.148516, 0.82469, 0.178614, 0.659702, 0.242774, 0.257632},
		{60, 0.512221, 0.150375, 0.80661, 0.179762, 0.730901, 0.215300, 0.227132},
		{90, 0.544484, 0.146233, 0.75041, 0.171999, 0.908529, 0.167930, 0.175389},
		{100, 0.562839, 0.142081, 0.72577, 0.166025, 0.980475, 0.154155, 0.160544},
		{110, 0.586279, 0.136512, 0.69843, 0.158397, 1.060215, 0.141272, 0.146740},
		{120, 0.615731, 0.129625, 0.66865, 0.149288, 1.148913, 0.129209, 0.133888},
		{135, 0.673583, 0.117222, 0.62014, 0.133424, 1.302086, 0.112499, 0.116196},
		{150, 0.751975, 0.103037, 0.56797, 0.115873, 1.485812, 0.097233, 0.100148},
		{160, 0.818696, 0.093001, 0.53155, 0.103756, 1.630525, 0.087727, 0.090211},
		{170, 0.900044, 0.082746, 0.49394, 0.091603, 1.798933, 0.078645, 0.080756},
	} {
		n := notchOf(c.opening)
		e1 := n.coefficient(t, opened, 0.3, PlaneStrain)
		for name, pair := range map[string][2]float64{
			"λ1": {n.lambda[opened], c.lambda1}, "e1 in plane strain": {e1, c.e1Strain}, "I1": {4 * n.lambda[opened] * n.gamma * e1, c.i1},
			"e1 in plane stress": {n.coefficient(t, opened, 0.3, PlaneStress), c.e1Stress},
			"λ2":                 {n.lambda[sheared], c.lambda2},
			"e2 in plane strain": {n.coefficient(t, sheared, 0.3, PlaneStrain), c.e2Strain},
			"e2 in plane stress": {n.coefficient(t, sheared, 0.3, PlaneStress), c.e2Stress},
		} {
			if !within(pair[0], pair[1], 1e-5) {
				t.Errorf("N-02, %g°: %s %.7f, want %.6f", c.opening, name, pair[0], pair[1])
			}
		}
	}
	for nu, want := range map[float64][3]float64{0.25: {0.149208, 0.158502, 0.123965}, 0.34: {0.121563, 0.135388, 0.111179}, 0.40: {0.100268, 0.117402, 0.101036}} {
		for i, opening := range []float64{0, 90, 135} {
			if got := notchOf(opening).coefficient(t, opened, nu, PlaneStrain); !within(got, want[i], 1e-5) {
				t.Errorf("N-02, %g°, ν %g: e1 %.7f, want %.6f", opening, nu, got, want[i])
			}
		}
	}
}

// N-03 (derived): the closed forms for a crack, against quadrature of its field, and the
// numbers for ν 0.3. N-11 (derived): e3 = (1+ν)/2πλ3.
func TestCrackCoefficients(t *testing.T) {
	crack := notchOf(0)
	for _, nu := range []float64{0, 0.2, 0.3, 0.45} {
		for _, idealisation := range []Idealisation{PlaneStrain, PlaneStress} {
			if got, want := crackCoefficient(nu, idealisation), crack.coefficient(t, opened, nu, idealisation); !within(got, want, 1e-10) {
				t.Errorf("e1 for ν %g in %s: %.12g, by quadrature %.12g", nu, idealisation, got, want)
			}
		}
	}
	for name, pair := range map[string][2]float64{
		"e1 in plane strain": {crackCoefficient(0.3, PlaneStrain), 0.134485927}, "e1 in plane stress": {crackCoefficient(0.3, PlaneStress), 0.163133817},
		"e2 in plane strain": {crack.coefficient(t, sheared, 0.3, PlaneStrain), 0.341387353}, "e2 in plane stress": {crack.coefficient(t, sheared, 0.3, PlaneStress), 0.370035243},
		"e3": {crack.coefficient(t, torn, 0.3, PlaneStrain), 0.413802852},
	} {
		if !within(pair[0], pair[1], 1e-8) {
			t.Errorf("N-03: %s %.10g, want %.9g", name, pair[0], pair[1])
		}
	}
	for opening, want := range map[float64][2]float64{0: {0.5, 0.4138029}, 90: {2. / 3, 0.3103521}, 135: {0.8, 0.2586268}} {
		n := notchOf(opening)
		if e3 := n.coefficient(t, torn, 0.3, Solid); !within(n.lambda[torn], want[0], 1e-14) || !within(e3, want[1], 1e-6) {
			t.Errorf("N-11, %g°: λ3 %g, e3 %.8g, want %v", opening, n.lambda[torn], e3, want)
		}
	}
}

// N-05 to N-08: mean and critical densities of notches. The program averages densities of
// cells instead of using K; these rows hold the fields that it is tested with.
func TestAveragedDensityOfNotches(t *testing.T) {
	mean := func(opening, k, radius, youngsModulus float64) float64 {
		n := notchOf(opening)
		return n.coefficient(t, opened, 0.3, PlaneStrain) * k * k * math.Pow(radius, 2*n.lambda[opened]-2) / youngsModulus
	}
	for id, pair := range map[string][2]float64{
		"N-05a": {mean(0, 1000, 0.28, 206000), 2.331588}, "N-05b": {mean(90, 500, 0.30, 210000), 0.5213455}, "N-05c": {mean(135, 300, 0.28, 206000), 0.1175704},
	} {
		if !within(pair[0], pair[1], 1e-5) {
			t.Errorf("%s: %.7g, want %.7g", id, pair[0], pair[1])
		}
	}
	// N-06 (derived), data of N-04b: W_c and R0 give the critical K of any notch.
	radius, critical := ControlRadius(1.207*math.Sqrt(1000), 59.76, 0.374, PlaneStrain), ModulusOfResilience(59.76, 3204.3)
	for opening, want := range map[float64]float64{0: 38.168691, 90: 39.750509, 135: 59.161968} {
		n := notchOf(opening)
		e1 := n.coefficient(t, opened, 0.374, PlaneStrain)
		if got := math.Sqrt(critical*3204.3/e1) * math.Pow(radius, 1-n.lambda[opened]); !within(got, want, 1e-6) {
			t.Errorf("N-06, %g°: critical K %.8g, want %.8g", opening, got, want)
		}
	}
	// N-07 (data of Kusch et al. 2021) and N-08 (data from memory, 0.28 mm of Berto et al.
	// 2017; tolerance 0.1 %).
	if got := ModulusOfResilience(75.7, 3000); !within(got, 0.95508, 1e-5) {
		t.Errorf("N-07: %g, want 0.95508", got)
	}
	n := notchOf(135)
	e1, lambda := n.coefficient(t, opened, 0.3, PlaneStrain), n.lambda[opened]
	range155 := ModulusOfResilience(155, 206000)
	welded := math.Pow(2*e1*(211./155)*(211./155), 1/(2*(1-lambda)))
	if !within(range155, 0.05831311, 1e-7) || !within(welded, 0.278871, 1e-3) || !within(mean(135, 211, welded, 206000), 0.05831, 1e-3) {
		t.Errorf("N-08: ΔW %.8g, R0 %.7g, mean %.5g", range155, welded, mean(135, 211, welded, 206000))
	}
}

// N-09 and N-10 (derived): how the peak density grows where the nearest point to the tip
// comes nearer, and the exponent that two meshes tell.
func TestGrowthOfTheSingularPeak(t *testing.T) {
	law := isotropic(t, 210000, 0.3)
	peak := func(opening, r float64) float64 {
		stress := notchOf(opening).stress(opened, r, 0.3, 0.3, PlaneStrain)
		strain := law.Strain(&stress)
		return Density(&stress, &strain)
	}
	for opening, want := range map[float64][2]float64{0: {2, 10}, 90: {1.8803908, 8.1476530}, 135: {1.5722527, 4.4960708}} {
		if half, tenth := peak(opening, 0.5)/peak(opening, 1), peak(opening, 0.1)/peak(opening, 1); !within(half, want[0], 1e-7) || !within(tenth, want[1], 1e-7) {
			t.Errorf("N-09, %g°: %.8g and %.8g, want %v", opening, half, tenth, want)
		}
	}
	if got := 1 + math.Log(18.80390799/10)/math.Log(0.5)/2; !within(got, notchOf(90).lambda[opened], 1e-7) || !within(got, 0.5444837, 1e-7) {
		t.Errorf("N-10: λ %.8g, want 0.5444837", got)
	}
}

// B-13 (derived): the re-entrant corner of the L-shape, by the constants of Szabó and
// Babuška (from memory): K1 3.252710294, densities in its sector and on its bisector.
func TestCornerOfTheLShape(t *testing.T) {
	corner := notchOf(90)
	const k = 3.252710294
	lambda, e1 := corner.lambda[opened], corner.coefficient(t, opened, 0.3, PlaneStrain)
	for radius, want := range map[float64]float64{0.5: 2.909274604, 0.1: 12.605762625} {
		if got := e1 * k * k * math.Pow(radius, 2*lambda-2); !within(got, want, 1e-8) {
			t.Errorf("mean density within %g: %.10g, want %.10g", radius, got, want)
		}
	}
	stress := corner.stress(opened, 0.1, 0, 0.3, PlaneStrain)
	strain := isotropic(t, 1, 0.3).Strain(&stress)
	if got := k * k * Density(&stress, &strain); !within(got, 5.485420113, 1e-8) {
		t.Errorf("density at 0.1 on the bisector: %.10g, want 5.485420113", got)
	}
}
