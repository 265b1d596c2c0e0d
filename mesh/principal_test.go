package mesh

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// Principal values of the states of T-02, F-05 to F-07 and D-03 (derived: roots of the
// characteristic polynomial), with the digits printed there.
func TestPrincipalValues(t *testing.T) {
	for _, c := range []struct {
		id     string
		stress SymmetricTensor
		want   [3]float64
	}{
		{"T-02", stressT02, [3]float64{137.561695, 58.262450, -95.824146}},
		{"D-03", SymmetricTensor{120, 60, -80, 25, 45, -30}, [3]float64{130, 69.113019, -99.113019}},
		{"F-05", SymmetricTensor{200, -50, 0, 80}, [3]float64{223.408221, 0, -73.408221}},
		{"F-06", SymmetricTensor{50, -20, 60, 40, 10, 30}, [3]float64{95.824687, 32.447703, -38.272391}},
		{"F-07", SymmetricTensor{100, 100, 100, 100, 100, 100}, [3]float64{300, 0, 0}},
		{"F-07b", SymmetricTensor{300, 280, 290}, [3]float64{300, 290, 280}},
		{"zero", SymmetricTensor{}, [3]float64{}},
		{"xy alone", SymmetricTensor{3: 7}, [3]float64{7, 0, -7}},
		{"yz alone", SymmetricTensor{4: 7}, [3]float64{7, 0, -7}},
		{"xz alone", SymmetricTensor{5: 7}, [3]float64{7, 0, -7}},
		{"xz beside a spread diagonal", SymmetricTensor{3, 10, 11, 0, 0, 3}, [3]float64{12, 10, 2}},
		{"a shear of rounding size", SymmetricTensor{1, 2, 3, 1e-30}, [3]float64{3, 2, 1}},
		{"large numbers", SymmetricTensor{1e300, -1e300, 0, 1e300}, [3]float64{math.Sqrt2 * 1e300, 0, -math.Sqrt2 * 1e300}},
		{"small numbers", SymmetricTensor{0, 0, 0, 0, 1e-310}, [3]float64{1e-310, 0, -1e-310}},
	} {
		got := c.stress.PrincipalValues()
		size := max(math.Abs(c.want[0]), math.Abs(c.want[2]))
		for i, want := range c.want {
			if !(math.Abs(got[i]-want) <= 1e-8*size) {
				t.Errorf("%s: value %d is %.10g, want %.10g", c.id, i, got[i], want)
			}
		}
	}
}

func TestPrincipalValuesOfNaN(t *testing.T) {
	for i := range 6 {
		stress := SymmetricTensor{1, 2, 3, 4, 5, 6}
		stress[i] = math.NaN()
		values := stress.PrincipalValues()
		if !math.IsNaN(values[0] + values[1] + values[2]) {
			t.Errorf("component %d is NaN: %v", i, values)
		}
	}
}

// anyTensor draws a tensor; integers bring equal values and zeros.
func anyTensor() *rapid.Generator[SymmetricTensor] {
	return rapid.Custom(func(t *rapid.T) SymmetricTensor {
		var tensor SymmetricTensor
		isWhole := rapid.Bool().Draw(t, "whole")
		for i := range tensor {
			if isWhole {
				tensor[i] = float64(rapid.IntRange(-3, 3).Draw(t, "component"))
			} else {
				tensor[i] = rapid.Float64Range(-1e3, 1e3).Draw(t, "component")
			}
		}
		return tensor
	})
}

// largest returns the size of a tensor's largest component.
func largest(tensor *SymmetricTensor) (size float64) {
	for _, component := range tensor {
		size = max(size, math.Abs(component))
	}
	return size
}

// The values are in order and have the tensor's three invariants: the trace, the sum of
// the principal minors, the determinant.
func TestPrincipalInvariants(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anyTensor().Draw(t, "tensor")
		v := s.PrincipalValues()
		size := largest(&s)
		if !(v[0] >= v[1] && v[1] >= v[2]) {
			t.Fatalf("values %v are not in falling order", v)
		}
		minors := s[0]*s[1] + s[1]*s[2] + s[2]*s[0] - s[3]*s[3] - s[4]*s[4] - s[5]*s[5]
		determinant := s[0]*(s[1]*s[2]-s[4]*s[4]) - s[3]*(s[3]*s[2]-s[4]*s[5]) + s[5]*(s[3]*s[4]-s[1]*s[5])
		for _, c := range []struct {
			name      string
			got, want float64
			degree    float64
		}{
			{"trace", v[0] + v[1] + v[2], s.Trace(), 1},
			{"minors", v[0]*v[1] + v[1]*v[2] + v[2]*v[0], minors, 2},
			{"determinant", v[0] * v[1] * v[2], determinant, 3},
		} {
			// An error of 1e-15 of the largest value, some 30 times over.
			if !(math.Abs(c.got-c.want) <= 1e-13*math.Pow(size, c.degree)) {
				t.Fatalf("%s %.17g, want %.17g", c.name, c.got, c.want)
			}
		}
	})
}

// Each direction is an eigenvector of its value: T·n = s n; the three are at right
// angles, of length 1, and point where they are said to.
func TestPrincipalDirections(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := anyTensor().Draw(t, "tensor")
		values, directions := s.PrincipalDirections()
		if values != s.PrincipalValues() {
			t.Fatalf("values %v, without directions %v", values, s.PrincipalValues())
		}
		rows := [3][3]float64{{s[0], s[3], s[5]}, {s[3], s[1], s[4]}, {s[5], s[4], s[2]}}
		size := largest(&s)
		for i, n := range directions {
			for j, row := range rows {
				image := row[0]*n[0] + row[1]*n[1] + row[2]*n[2]
				if !(math.Abs(image-values[i]*n[j]) <= 1e-13*size) {
					t.Fatalf("direction %d: component %d of T·n is %g, want %g", i, j, image, values[i]*n[j])
				}
			}
			for j, m := range directions {
				want := 0.0
				if i == j {
					want = 1
				}
				if got := n[0]*m[0] + n[1]*m[1] + n[2]*m[2]; !(math.Abs(got-want) <= 1e-14) {
					t.Fatalf("directions %d and %d: product %g, want %g", i, j, got, want)
				}
			}
			for j := range n {
				if k := (j + 1) % 3; n[j] < 0 && -n[j] > math.Abs(n[k]) && -n[j] > math.Abs(n[(j+2)%3]) {
					t.Fatalf("direction %d is %v: its largest component is negative", i, n)
				}
			}
		}
	})
}

// Uniaxial tension along a line in space has that line as its first direction.
func TestFirstPrincipalDirection(t *testing.T) {
	for _, n := range [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}, {2. / 7, 3. / 7, 6. / 7}, {6. / 7, -2. / 7, 3. / 7}, {-2. / 3, 2. / 3, 1. / 3}} {
		stress := SymmetricTensor{n[0] * n[0], n[1] * n[1], n[2] * n[2], n[0] * n[1], n[1] * n[2], n[0] * n[2]}
		values, directions := stress.PrincipalDirections()
		// Of two components of largest size rounding decides which is positive.
		sign := math.Copysign(1, n[0]*directions[0][0]+n[1]*directions[0][1]+n[2]*directions[0][2])
		for i := range n {
			if math.Abs(sign*directions[0][i]-n[i]) > 1e-15 {
				t.Errorf("direction %v, want %v", directions[0], n)
			}
		}
		if math.Abs(values[0]-1) > 1e-15 || math.Abs(values[1]) > 1e-15 || math.Abs(values[2]) > 1e-15 {
			t.Errorf("values %v, want 1 0 0", values)
		}
	}
}

func BenchmarkPrincipalValues(b *testing.B) {
	stress := [4]SymmetricTensor{stressT02, {50, -20, 60, 40, 10, 30}, {200, -50, 0, 80}, {100, 1, 2, -3, 0.5, 7}}
	var total float64
	for b.Loop() {
		for i := range stress {
			total += stress[i].PrincipalValues()[0]
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(stress)), "ns/tensor")
	if total == 0 {
		b.Fatal("the loop computed nothing")
	}
}
