package energy

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strainledger/mesh"
)

func orthotropic(t testing.TB, youngsModuli, shearModuli, poissonsRatios [3]float64) *Law {
	t.Helper()
	law, err := NewOrthotropicLaw(youngsModuli, shearModuli, poissonsRatios)
	if err != nil {
		t.Fatal(err)
	}
	return law
}

// turned returns axes turned by an angle about the z axis.
func turned(t testing.TB, degrees float64) *Axes {
	t.Helper()
	sine, cosine := math.Sincos(degrees * math.Pi / 180)
	axes, err := NewAxes([3]Vector{{cosine, sine, 0}, {-sine, cosine, 0}, {0, 0, 1}})
	if err != nil {
		t.Fatal(err)
	}
	return &axes
}

// lamina is the graphite/epoxy of T-05 (Tsai and Hahn, from memory). What T-05 does not
// give is chosen here, and in-plane stress does not ask for it: E_3, G_23, G_13, ν_23, ν_13.
func lamina(t testing.TB) *Law {
	return orthotropic(t, [3]float64{181000, 10300, 12000}, [3]float64{7170, 3900, 6100}, [3]float64{0.28, 0.41, 0.23})
}

// T-05 and T-06 (derived; lamina data of T-05 from Tsai and Hahn, from memory): density
// of an off-axis lamina, in model axes and in material axes.
func TestOffAxisLamina(t *testing.T) {
	for _, c := range []struct {
		id               string
		degrees, stress  float64
		s1, s2, s12      float64
		w, youngsModulus float64
	}{
		{"T-05", 30, 100, 75, 25, -43.301270, 0.17373107, 28780.115},
		{"T-06", 45, 60, 30, 30, -30, 0.10754475, 16737.219},
	} {
		axes, law := turned(t, c.degrees), lamina(t)
		stress := mesh.SymmetricTensor{c.stress}

		along := axes.ToMaterial(&stress)
		for i, want := range map[int]float64{0: c.s1, 1: c.s2, 3: c.s12} {
			if !within(along[i], want, 1e-8) {
				t.Errorf("%s: component %d in material axes is %.9g, want %.9g", c.id, i, along[i], want)
			}
		}
		strainAlong := law.Strain(&along)
		if got := Density(&along, &strainAlong); !within(got, c.w, 1e-7) {
			t.Errorf("%s: density in material axes %.9g, want %.9g", c.id, got, c.w)
		}

		strain := law.InModelAxes(axes).Strain(&stress)
		if got := Density(&stress, &strain); !within(got, c.w, 1e-7) {
			t.Errorf("%s: density in model axes %.9g, want %.9g", c.id, got, c.w)
		}
		if got := c.stress / strain[0]; !within(got, c.youngsModulus, 1e-7) {
			t.Errorf("%s: E_x %.9g, want %.9g", c.id, got, c.youngsModulus)
		}
		back := axes.ToModel(&strainAlong)
		for i := range back {
			if math.Abs(back[i]-strain[i]) > 1e-15 {
				t.Errorf("%s: strain %d is %.12g turned back, %.12g in model axes", c.id, i, back[i], strain[i])
			}
		}
	}
}

// ply is the stiffness of a carbon-epoxy ply in the order xx yy zz yz xz xy, made from
// E 135000, 10000, 10000, ν_12 = ν_13 = 0.3, ν_23 = 0.45, G_23 3400, G_13 = G_12 = 5000.
var (
	ply = [6][6]float64{
		{138354.03726708074, 5590.062111801242, 5590.062111801242},
		{5590.062111801242, 12765.046048404369, 5868.494324266438},
		{5590.062111801242, 5868.494324266438, 12765.046048404369},
		{3: 3400}, {4: 5000}, {5: 5000},
	}
	plyOrder = mesh.Order{"xx", "yy", "zz", "yz", "xz", "xy"}
)

// A block of this ply, solved by the finite element method (dolfinx 0.5.2, 27-node
// hexahedra): mean stress and strain of two cells, printed in full.
func TestStiffnessGivesTheStressOfASolver(t *testing.T) {
	law, err := NewStiffnessLaw(ply, plyOrder)
	if err != nil {
		t.Fatal(err)
	}
	for cell, c := range map[int][2]mesh.SymmetricTensor{
		0: {
			{153.06180854384647, 1.8868916659234742, 1.3666564122977514, 1.7138646634070314, -0.0941129323594044, 3.884082449357406},
			{0.0011265610675583707, -0.00021294772428071023, -0.00028838183605644, 0.00017138646634070318, -1.3840137111677118e-05, 0.0003884082449357406},
		},
		223: {
			{5.059900078530039, -0.17087847093321318, 0.7438887332464815, -0.8369652933891961, -0.09477240174211081, 3.4261446927699497},
			{3.620738518397079e-05, -6.180706248614638e-05, 7.083418211990932e-05, -8.369652933891967e-05, -1.3937117903251587e-05, 0.0003426144692769951},
		},
	} {
		stress, strain := law.Stress(&c[1]), law.Strain(&c[0])
		for i := range stress {
			// Means of a product's factors: both are sums over quadrature points.
			if math.Abs(stress[i]-c[0][i]) > 1e-11*160 {
				t.Errorf("cell %d: stress %d is %.14g, the solver's is %.14g", cell, i, stress[i], c[0][i])
			}
			if math.Abs(strain[i]-c[1][i]) > 1e-11*1e-3 {
				t.Errorf("cell %d: strain %d is %.14g, the solver's is %.14g", cell, i, strain[i], c[1][i])
			}
		}
	}
	// Pulled by 100 along x: w = p²/2E_1.
	stress := mesh.SymmetricTensor{100}
	strain := law.Strain(&stress)
	if got := Density(&stress, &strain); !within(got, 0.037037037037037035, 1e-13) {
		t.Errorf("density %.16g, want 1e4 / (2 · 135000)", got)
	}
}

// One ply by its moduli and by its stiffness, written in two orders and by either name
// of a shear term.
func TestOneLawHoweverGiven(t *testing.T) {
	want := orthotropic(t, [3]float64{135000, 10000, 10000}, [3]float64{5000, 3400, 5000}, [3]float64{0.3, 0.45, 0.3})
	first, err := NewStiffnessLaw(ply, plyOrder)
	if err != nil {
		t.Fatal(err)
	}
	var shuffled [6][6]float64 // zy xx yx zz zx yy
	from := [6]int{3, 0, 5, 2, 4, 1}
	for i := range shuffled {
		for j := range shuffled {
			shuffled[i][j] = ply[from[i]][from[j]]
		}
	}
	second, err := NewStiffnessLaw(shuffled, mesh.Order{"zy", "xx", "yx", "zz", "zx", "yy"})
	if err != nil {
		t.Fatal(err)
	}
	for _, law := range []*Law{first, second} {
		for i := range 6 {
			for j := range 6 {
				if got, want := law.general.stress[i][j], want.general.stress[i][j]; math.Abs(got-want) > 1e-12*138354 {
					t.Errorf("stress %d of strain %d is %.15g, want %.15g", i, j, got, want)
				}
				if got, want := law.general.strain[i][j], want.general.strain[i][j]; math.Abs(got-want) > 1e-12*1.5e-4 {
					t.Errorf("strain %d of stress %d is %.15g, want %.15g", i, j, got, want)
				}
			}
		}
	}
}

// The compliance in material axes, term by term (methods as in Jones, Mechanics of
// Composite Materials, from memory: e1 = s1/E1 - ν12 s2/E1 - ν13 s3/E1, g12 = t12/G12).
func TestOrthotropicCompliance(t *testing.T) {
	law := lamina(t)
	want := [6][6]float64{
		{1 / 181000., -0.28 / 181000, -0.23 / 181000},
		{-0.28 / 181000, 1 / 10300., -0.41 / 10300},
		{-0.23 / 181000, -0.41 / 10300, 1 / 12000.},
		{3: 0.5 / 7170}, {4: 0.5 / 3900}, {5: 0.5 / 6100},
	}
	for j := range 6 {
		var stress mesh.SymmetricTensor
		stress[j] = 1
		strain := law.Strain(&stress)
		for i := range 6 {
			if math.Abs(strain[i]-want[i][j]) > 1e-15*1e-4 {
				t.Errorf("strain %d of unit stress %d is %.15g, want %.15g", i, j, strain[i], want[i][j])
			}
		}
	}
}

// An isotropic law given as a stiffness or by three equal moduli is the isotropic law,
// and known to be one; an orthotropic one is not.
func TestIsotropyIsRecognised(t *testing.T) {
	plain := isotropic(t, 70000, 0.33)
	shear := 70000 / 2.66
	moduli := orthotropic(t, [3]float64{70000, 70000, 70000}, [3]float64{shear, shear, shear}, [3]float64{0.33, 0.33, 0.33})
	lame := 70000 * 0.33 / (1.33 * 0.34)
	var rows [6][6]float64
	for i := range rows {
		for j := range 3 {
			if i < 3 {
				rows[i][j] = lame
			}
		}
		rows[i][i] += shear
		if i < 3 {
			rows[i][i] += shear
		}
	}
	matrix, err := NewStiffnessLaw(rows, mesh.OrderOf6)
	if err != nil {
		t.Fatal(err)
	}
	for name, law := range map[string]*Law{"moduli": moduli, "stiffness": matrix, "turned": matrix.InModelAxes(turned(t, 20)), "plain": plain} {
		if !law.IsIsotropic() {
			t.Errorf("%s: not isotropic", name)
		}
		want, got := plain.Strain(&stateT02), law.Strain(&stateT02)
		for i := range got {
			if math.Abs(got[i]-want[i]) > 1e-17 {
				t.Errorf("%s: strain %d is %.15g, want %.15g", name, i, got[i], want[i])
			}
		}
	}
	if plain.InModelAxes(turned(t, 20)) != plain {
		t.Error("an isotropic law is not the same in all axes")
	}
	for i := range rows {
		changed := rows
		changed[i][i] *= 1 + 1e-5
		law, err := NewStiffnessLaw(changed, mesh.OrderOf6)
		if err != nil || law.IsIsotropic() {
			t.Errorf("isotropic with the diagonal term %d changed by 1e-5 (%v)", i, err)
		}
	}
	if lamina(t).IsIsotropic() {
		t.Error("a lamina is isotropic")
	}
}

// anyLaw draws a law with a random positive definite stiffness A Aᵀ + I of some size.
func anyLaw(t *rapid.T) *Law {
	random := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
	var a, rows [6][6]float64
	for i := range a {
		for j := range a {
			a[i][j] = random.NormFloat64()
		}
	}
	size := math.Exp(rapid.Float64Range(-10, 15).Draw(t, "size"))
	for i := range rows {
		for j := range rows {
			for k := range a {
				rows[i][j] += size * a[i][k] * a[j][k]
			}
		}
		rows[i][i] += size
	}
	law, err := NewStiffnessLaw(rows, mesh.OrderOf6)
	if err != nil {
		t.Fatal(err)
	}
	return law
}

func anyTensor(t *rapid.T, name string) mesh.SymmetricTensor {
	var tensor mesh.SymmetricTensor
	for i := range tensor {
		tensor[i] = rapid.Float64Range(-1, 1).Draw(t, name)
	}
	tensor[rapid.SampledFrom(inPlane[:]).Draw(t, "largest")] = 1 // sizes are compared with the in-plane part
	return tensor
}

// anyAxes draws axes by three turns.
func anyAxes(t *rapid.T) *Axes {
	axes := Axes{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	for i, j := range []int{1, 2, 0} {
		sine, cosine := math.Sincos(rapid.Float64Range(-4, 4).Draw(t, "angle"))
		for k := range 3 {
			p, q := axes[i][k], axes[j][k]
			axes[i][k], axes[j][k] = cosine*p+sine*q, cosine*q-sine*p
		}
	}
	made, err := NewAxes(axes)
	if err != nil {
		t.Fatal(err)
	}
	return &made
}

func distance(a, b mesh.SymmetricTensor) float64 {
	for i := range a {
		a[i] -= b[i]
	}
	return math.Sqrt(mesh.Product(&a, &a))
}

// For any stiffness: stress and strain are inverse, the law is symmetric (σ_a:ε_b =
// σ_b:ε_a), the density positive, and all of it the same in turned axes.
func TestAnyLaw(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law, axes := anyLaw(t), anyAxes(t)
		a, b := anyTensor(t, "a"), anyTensor(t, "b")

		// The matrices have condition numbers up to about 1e3 at these sizes.
		stressA, stressB := law.Stress(&a), law.Stress(&b)
		if back := law.Strain(&stressA); distance(back, a) > 1e-11 {
			t.Fatalf("strain %v after stress and back is %v", a, back)
		}
		length := func(t *mesh.SymmetricTensor) float64 { return math.Sqrt(mesh.Product(t, t)) }
		size := length(&stressA)*length(&b) + length(&stressB)*length(&a)
		if got, want := mesh.Product(&stressA, &b), mesh.Product(&stressB, &a); math.Abs(got-want) > 1e-12*size {
			t.Fatalf("σ_a:ε_b = %.16g, σ_b:ε_a = %.16g", got, want)
		}
		density := Density(&stressA, &a)
		if !(density > 0) {
			t.Fatalf("density %g", density)
		}

		turnedLaw, turnedStrain := law.InModelAxes(axes), axes.ToModel(&a)
		turnedStress := turnedLaw.Stress(&turnedStrain)
		if got := Density(&turnedStress, &turnedStrain); math.Abs(got-density) > 1e-12*length(&stressA)*length(&a) {
			t.Fatalf("density %.16g in turned axes, %.16g in the law's", got, density)
		}
		if want := axes.ToModel(&stressA); distance(turnedStress, want) > 1e-12*math.Sqrt(mesh.Product(&want, &want)) {
			t.Fatalf("stress %v in turned axes, want %v", turnedStress, want)
		}
		if back := axes.ToMaterial(&turnedStrain); distance(back, a) > 1e-14 {
			t.Fatalf("tensor %v after a turn and back is %v", a, back)
		}
		if back := turnedLaw.Strain(&turnedStress); distance(back, turnedStrain) > 1e-11 {
			t.Fatalf("strain %v after stress and back is %v in turned axes", turnedStrain, back)
		}
	})
}

// For any stiffness the completions give what they promise, and keep what is given.
func TestAnyLawInPlaneStates(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law := anyLaw(t)
		given := anyTensor(t, "strain")
		strain := given
		law.CompletePlaneStress(&strain)
		stress := law.Stress(&strain)
		size := math.Sqrt(mesh.Product(&stress, &stress))
		for _, i := range outOfPlane {
			if math.Abs(stress[i]) > 1e-10*size {
				t.Fatalf("plane stress: stress %d is %g, the largest %g", i, stress[i], size)
			}
		}
		inPlaneStress := anyTensor(t, "stress")
		stress = inPlaneStress
		law.CompletePlaneStrain(&stress, 0)
		zero := law.Strain(&stress)
		stress = inPlaneStress
		law.CompletePlaneStrain(&stress, 0.25*zero[0])
		one := law.Strain(&stress)
		size = math.Sqrt(mesh.Product(&zero, &zero))
		for _, i := range outOfPlane {
			want := 0.0
			if i == 2 {
				want = 0.25 * zero[0]
			}
			if math.Abs(zero[i]) > 1e-10*size || math.Abs(one[i]-want) > 1e-10*size {
				t.Fatalf("plane strain: strain %d is %g, %g with ε_zz %g; the largest %g", i, zero[i], one[i], 0.25*zero[0], size)
			}
		}
		for _, i := range inPlane {
			if strain[i] != given[i] || stress[i] != inPlaneStress[i] {
				t.Fatalf("component %d was changed", i)
			}
		}
	})
}

// The reduced stiffness of a lamina: Q_11 = E_1/(1 - ν_12 ν_21), Q_12 = ν_12 E_2/(1 -
// ν_12 ν_21), Q_22 = E_2/(1 - ν_12 ν_21), Q_66 = G_12 (Jones, from memory).
func TestReducedStiffnessOfALamina(t *testing.T) {
	law := lamina(t)
	strain := mesh.SymmetricTensor{1e-3, 2e-3, 0, 0.5e-3}
	law.CompletePlaneStress(&strain)
	stress := law.Stress(&strain)
	whole := 1 - 0.28*0.28*10300/181000
	for i, want := range map[int]float64{
		0: (181000*1e-3 + 0.28*10300*2e-3) / whole, 1: (0.28*10300*1e-3 + 10300*2e-3) / whole, 3: 7170 * 1e-3,
	} {
		if !within(stress[i], want, 1e-13) {
			t.Errorf("stress %d is %.15g, want %.15g", i, stress[i], want)
		}
	}
}

func TestOrthotropicLawNamesTheViolatedCondition(t *testing.T) {
	young, shear, poisson := [3]float64{135000, 10000, 9000}, [3]float64{5000, 3400, 4000}, [3]float64{0.3, 0.45, 0.25}
	orthotropic(t, young, shear, poisson)
	for _, c := range []struct {
		want   string
		change func(e, g, nu *[3]float64)
	}{
		{"Young's modulus E_x is 0, must be above 0", func(e, g, nu *[3]float64) { e[0] = 0 }},
		{"Young's modulus E_y is -1", func(e, g, nu *[3]float64) { e[1] = -1 }},
		{"Young's modulus E_z is +Inf", func(e, g, nu *[3]float64) { e[2] = math.Inf(1) }},
		{"shear modulus G_xy is NaN", func(e, g, nu *[3]float64) { g[0] = math.NaN() }},
		{"shear modulus G_yz is -3400", func(e, g, nu *[3]float64) { g[1] = -3400 }},
		{"shear modulus G_xz is 0", func(e, g, nu *[3]float64) { g[2] = 0 }},
		{"ν_xy is 3.7, its size must be below √(E_x/E_y) = 3.67", func(e, g, nu *[3]float64) { nu[0] = 3.7 }},
		{"ν_yz is -1.06, its size must be below √(E_y/E_z) = 1.05", func(e, g, nu *[3]float64) { nu[1] = -1.06 }},
		{"ν_xz is 3.9, its size must be below √(E_x/E_z) = 3.87", func(e, g, nu *[3]float64) { nu[2] = 3.9 }},
		{"ν_xz is NaN", func(e, g, nu *[3]float64) { nu[2] = math.NaN() }},
		// Each ratio lies within its bound: 0.8 < √1 twice and 0.5.
		{"1 - ν_xy ν_yx - ν_yz ν_zy - ν_zx ν_xz - 2 ν_yx ν_zy ν_xz is -1.17", func(e, g, nu *[3]float64) {
			*e, *nu = [3]float64{1000, 1000, 1000}, [3]float64{0.8, 0.8, 0.5}
		}},
	} {
		e, g, nu := young, shear, poisson
		c.change(&e, &g, &nu)
		if _, err := NewOrthotropicLaw(e, g, nu); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want %q", err, c.want)
		}
	}
}

func TestStiffnessLawNamesTheViolatedCondition(t *testing.T) {
	for _, c := range []struct {
		want   string
		order  mesh.Order
		change func(rows *[6][6]float64)
	}{
		{"not symmetric: the term yy, xx is 5591, the term xx, yy is 5590.06", plyOrder, func(r *[6][6]float64) { r[1][0] = 5591 }},
		{"not symmetric: the term xy, yz is NaN", plyOrder, func(r *[6][6]float64) { r[5][3], r[3][5] = math.NaN(), math.NaN() }},
		{"diagonal term of yz is 0, must be above 0", plyOrder, func(r *[6][6]float64) { r[3][3] = 0 }},
		{"diagonal term of zz is -12765", plyOrder, func(r *[6][6]float64) { r[2][2] = -12765 }},
		{"diagonal term of xy is +Inf", plyOrder, func(r *[6][6]float64) { r[5][5] = math.Inf(1) }},
		{"the size of the term xy, xz is 5000, must be below 5000", plyOrder, func(r *[6][6]float64) { r[5][4], r[4][5] = -5000, -5000 }},
		{"not positive definite: the least eigenvalue", plyOrder, func(r *[6][6]float64) {
			r[0][0], r[1][1], r[2][2] = 1, 1, 1
			r[0][1], r[1][0], r[0][2], r[2][0], r[1][2], r[2][1] = -0.6, -0.6, -0.6, -0.6, -0.6, -0.6
		}},
		{`stiffness order "xx yy zz xy yz" names 5 components, must name 6`, mesh.Order{"xx", "yy", "zz", "xy", "yz"}, nil},
		{`names yx twice`, mesh.Order{"xx", "yy", "zz", "xy", "yx", "xz"}, nil},
		{`"rr" is no component`, mesh.Order{"rr", "yy", "zz", "xy", "yz", "xz"}, nil},
	} {
		rows := ply
		if c.change != nil {
			c.change(&rows)
		}
		if _, err := NewStiffnessLaw(rows, c.order); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want %q", err, c.want)
		}
	}
	rounded := ply // as if typed with seven digits
	rounded[1][0] += 2e-3
	law, err := NewStiffnessLaw(rounded, plyOrder)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := law.general.stress[0][1], 5590.062111801242+1e-3; !within(got, want, 1e-15) || law.general.stress[1][0] != got {
		t.Errorf("mirrored terms that differ by rounding became %.15g and %.15g, want their mean %.15g", got, law.general.stress[1][0], want)
	}
}

func TestAxes(t *testing.T) {
	root := math.Sqrt(0.5)
	for _, c := range []struct {
		want string
		rows [3]Vector
	}{
		{"row 1, [1 1 0], has length 1.41", [3]Vector{{1, 1, 0}, {-root, root, 0}, {0, 0, 1}}},
		{"row 3, [0 0 0], has length 0", [3]Vector{{1, 0, 0}, {0, 1, 0}, {0, 0, 0}}},
		{"row 2, [0 0.999998 0]", [3]Vector{{1, 0, 0}, {0, 0.999998, 0}, {0, 0, 1}}},
		{"rows 1 and 2 are not at right angles", [3]Vector{{1, 0, 0}, {root, root, 0}, {0, 0, 1}}},
		{"rows 2 and 3 are not at right angles: their scalar product is 1,", [3]Vector{{1, 0, 0}, {0, 1, 0}, {0, 1, 0}}},
		{"row 1, [NaN 0 0]", [3]Vector{{math.NaN(), 0, 0}, {0, 1, 0}, {0, 0, 1}}},
	} {
		if _, err := NewAxes(c.rows); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want %q", err, c.want)
		}
	}
	// Six digits are enough, and are made exact: the law in model axes keeps its energy.
	axes, err := NewAxes([3]Vector{{0.866025, 0.5, 0}, {-0.5, 0.866025, 0}, {0, 0, 1}})
	if err != nil {
		t.Fatal(err)
	}
	for i := range axes {
		for j := range axes {
			want := 0.0
			if i == j {
				want = 1
			}
			if got := dot(axes[i], axes[j]); math.Abs(got-want) > 1e-15 {
				t.Errorf("rows %d and %d have the product %.17g", i, j, got)
			}
		}
	}
	// So are angles that are right but for the sixth digit: the first row stays.
	skewed, err := NewAxes([3]Vector{{1, 0, 0}, {5e-7, 1, 0}, {0, 5e-7, 1}})
	if want := (Axes{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}); err != nil || skewed != want {
		t.Errorf("axes %v (%v), want %v", skewed, err, want)
	}
	// A left-handed triple gives the same law.
	right, left := *turned(t, 30), *turned(t, 30)
	left[2] = Vector{0, 0, -1}
	strain, mirrored := lamina(t).InModelAxes(&right).Strain(&stateT02), lamina(t).InModelAxes(&left).Strain(&stateT02)
	if distance(strain, mirrored) > 1e-18 {
		t.Errorf("strain %v, with a reversed axis %v", strain, mirrored)
	}
	// Component by component: the axes 1, 2, 3 along y, z, x.
	axes = Axes{{0, 1, 0}, {0, 0, 1}, {1, 0, 0}}
	tensor := mesh.SymmetricTensor{1, 2, 3, 4, 5, 6}
	if got, want := axes.ToMaterial(&tensor), (mesh.SymmetricTensor{2, 3, 1, 5, 6, 4}); got != want {
		t.Errorf("in material axes %v, want %v", got, want)
	}
	if got, want := axes.ToModel(&tensor), (mesh.SymmetricTensor{3, 1, 2, 6, 4, 5}); got != want {
		t.Errorf("in model axes %v, want %v", got, want)
	}
}

func BenchmarkGeneralLaw(b *testing.B) {
	law := lamina(b)
	for b.Loop() {
		strain := law.Strain(&stateT02)
		if strain[0] == 0 {
			b.Fatal("no strain")
		}
	}
}
