package mesh

import (
	"math"
	"math/rand/v2"
	"testing"
)

// testCell returns a cell of the type with the points, in order.
func testCell(t testing.TB, cellType CellType, degrees [3]int, points [][3]float64) *Cell {
	t.Helper()
	s, err := ShapeOf(cellType, len(points), degrees)
	if err != nil {
		t.Fatal(err)
	}
	c := &Cell{Shape: s}
	for i, p := range points {
		c.Points = append(c.Points, p[:]...)
		c.Nodes = append(c.Nodes, int32(i))
	}
	return c
}

// shaken returns a cell whose nodes are moved from those of the unit cell by up to the
// amount in each direction of the shape.
func shaken(t testing.TB, s *Shape, random *rand.Rand, by float64) *Cell {
	t.Helper()
	var points [][3]float64
	for _, p := range s.NodeCoordinates() {
		for axis := range s.Dimension {
			p[axis] += by * (2*random.Float64() - 1)
		}
		points = append(points, p)
	}
	return testCell(t, s.Type, s.Degrees, points)
}

// near reports whether got is want within a relative tolerance.
func near(got, want, tolerance float64) bool {
	return math.Abs(got-want) <= tolerance*math.Abs(want)
}

// productOver integrates the product of two nodal fields over the elements of a rule.
func productOver(rule *Tabulation, elements, f, g []float64) float64 {
	sum := 0.0
	for i, element := range elements {
		first, second := 0.0, 0.0
		for j := range f {
			value := rule.Values[i*len(f)+j]
			first += value * f[j]
			second += value * g[j]
		}
		sum += element * first * second
	}
	return sum
}

// Checks and Q-07b: U = ½ ∫ f g dV with f and g given at the nodes. Exact
// values computed by independent integration; the tolerance is that of the digits given.
func TestProductRules(t *testing.T) {
	pyramid7b := [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {.5, .5, 1}}
	var f7b, g7b []float64
	for _, p := range pyramid7b {
		f7b = append(f7b, 10+5*p[0]+3*p[1]+2*p[2])
		g7b = append(g7b, 1+p[1]+2*p[2])
	}
	tests := []struct {
		id               string
		cellType         CellType
		points           [][3]float64
		f, g             []float64
		unit             float64 // of g
		measure, product float64
		tolerance        float64
	}{
		{"Q-01", Tetrahedron, [][3]float64{{0, 0, 0}, {3, 0, 0}, {0, 2.5, 0}, {0, 0, 2}},
			[]float64{10, 20, 30, 60}, []float64{1, 4, 2, 3}, 1e-3, 2.5, 0.095625, 1e-14},
		{"Q-02", Triangle, [][3]float64{{0, 0, 0}, {4, 0, 0}, {0, 3, 0}},
			[]float64{1, 2, 3}, []float64{2, 0, 1}, 2, 6, 11.5, 1e-14},
		{"Q-03", Hexahedron, [][3]float64{{0, 0, 0}, {2, 0, 0}, {2, 1.5, 0}, {0, 1, 0}, {0, 0, 1}, {2, 0, 1.2}, {2.5, 1.5, 2}, {0, 1.2, 1}},
			[]float64{100, 120, 90, 80, 60, 150, 200, 110}, []float64{5, 6, 4.5, 4, 3, 7, 11, 5.5}, 1e-4, 3.5458333333333333, 0.129113575521, 1e-11},
		{"Q-04", Quad, [][3]float64{{0, 0, 0}, {4, 0, 0}, {3, 2, 0}, {0, 3, 0}},
			[]float64{10, 20, 40, 15}, []float64{1, 2, 3, 2}, 1e-3, 8.5, 0.175729166667, 1e-11},
		{"Q-06", Wedge, [][3]float64{{0, 0, 0}, {2, 0, 0}, {0, 2, 0}, {0, 0, 1.5}, {1.6, 0, 1}, {.2, 2.2, 2}},
			[]float64{50, 70, 90, 40, 60, 120}, []float64{2, 3, 4, 2, 3, 6}, 1e-4, 2.7966666666666667, 0.035659888889, 1e-11},
		{"Q-07", Pyramid, [][3]float64{{0, 0, 0}, {2, 0, 0}, {2.2, 1.8, 0}, {0, 2, 0}, {.8, .9, 1.5}},
			[]float64{30, 50, 80, 40, 100}, []float64{1, 2, 3, 2, 5}, 1e-4, 2, 0.01798375, 1e-14},
		{"Q-07b", Pyramid, pyramid7b, f7b, g7b, 1e-3, 1. / 3, 293. / 60000, 1e-14},
	}
	for _, test := range tests {
		c := testCell(t, test.cellType, [3]int{}, test.points)
		rule := c.Shape.ProductRule()
		elements := make([]float64, len(rule.Weights))
		var measure float64
		var orientation Orientation
		if c.Shape.Dimension == 3 {
			measure, orientation = c.Volume()
			c.VolumeElements(rule, elements)
		} else {
			measure, orientation = c.PlaneArea()
			c.PlaneElements(rule, elements)
		}
		if !near(measure, test.measure, 1e-15) || orientation != Regular {
			t.Errorf("%s: measure %.17g, orientation %d, want %.17g, regular", test.id, measure, orientation, test.measure)
		}
		if got := 0.5 * test.unit * productOver(rule, elements, test.f, test.g); !near(got, test.product, test.tolerance) {
			t.Errorf("%s: U = %.17g, want %.17g", test.id, got, test.product)
		}
	}
}

// second-order cells on a curved map. The nodes are X(p) of the reference nodes p,
// the fields are functions of p too. Exact rationals by symbolic integration.
func TestProductRulesOfCurvedSolids(t *testing.T) {
	place := func(p [3]float64) [3]float64 {
		x, y, z := p[0], p[1], p[2]
		return [3]float64{x + y*y/5 + x*z/10, y + z*z/5 + x*y/10, z + x*x/5 + y*z/10}
	}
	first := func(p [3]float64) float64 {
		return 10 + 5*p[0]*p[0] + 3*p[1]*p[1] + 2*p[2]*p[2] + p[0]*p[2]
	}
	second := func(p [3]float64) float64 {
		return (1 + p[0]*p[0] + 2*p[1]*p[1] + p[2]*p[2] + p[1]*p[2]) / 1000
	}
	hexahedron, tetrahedron, wedge := 630826279./30240000000, 259931527./181440000000, 690133757./100800000000
	tests := []struct {
		cellType        CellType
		count           int
		volume, product float64
	}{
		{QuadraticHexahedron, 20, 1.12275, hexahedron},
		{BiquadraticHexahedron, 24, 1.12275, hexahedron},
		{TriquadraticHexahedron, 27, 1.12275, hexahedron},
		{QuadraticTetrahedron, 10, 0.17740833333333333, tetrahedron},
		{QuadraticWedge, 15, 0.54755833333333333, wedge},
		{BiquadraticWedge, 18, 0.54755833333333333, wedge},
	}
	for _, test := range tests {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		var points [][3]float64
		var f, g []float64
		for _, p := range s.NodeCoordinates() {
			points = append(points, place(p))
			f, g = append(f, first(p)), append(g, second(p))
		}
		c := testCell(t, test.cellType, [3]int{}, points)
		if volume, orientation := c.Volume(); !near(volume, test.volume, 1e-14) || orientation != Regular {
			t.Errorf("%s: volume %.17g (orientation %d), want %.17g", label(s), volume, orientation, test.volume)
		}
		rule := s.ProductRule()
		elements := make([]float64, len(rule.Weights))
		c.VolumeElements(rule, elements)
		if got := 0.5 * productOver(rule, elements, f, g); !near(got, test.product, 1e-14) {
			t.Errorf("%s: U = %.17g, want %.17g", label(s), got, test.product)
		}
	}
}

// The closed forms against the general loop, on cells that are shaken at random.
func TestClosedFormsAreTheIntegrals(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	for _, s := range linear(t) {
		if s.Dimension < 2 {
			continue
		}
		seen := [3]int{}
		for range 300 {
			c := shaken(t, s, random, 0.5)
			want, orientation := c.integratedDeterminant(), c.tabulatedOrientation()
			var got float64
			var found Orientation
			if s.Dimension == 3 {
				got, found = c.Volume()
				if s.row.unit == &wedge && orientation == Mirrored {
					want, orientation = -want, Regular
				}
			} else {
				got, found = c.PlaneArea()
			}
			if math.Abs(got-want) > 1e-14 || found != orientation {
				t.Fatalf("%s: %.17g (orientation %d), want %.17g (%d)", label(s), got, found, want, orientation)
			}
			seen[found]++
		}
		if seen[Regular] == 0 || seen[Tangled] == 0 && s.NodeCount > s.Dimension+1 {
			t.Errorf("%s: of the random cells %v are regular, mirrored, tangled", label(s), seen)
		}
	}
}
