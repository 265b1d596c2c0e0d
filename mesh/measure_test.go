package mesh

import (
	"math"
	"math/rand/v2"
	"slices"
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

// Every type on one curved map, X = (x + y²/8, y + xz/8, z + x²/8) of the nodes of the
// straight cell (the control points, for Bézier cells).
//
// Source: Gauss integration of the map with 12 points in each direction by a program
// of its own, over the cells that VTK 9.1 wrote to testdata/vtk-samples/cells.
func TestMeasuresOfCurvedCells(t *testing.T) {
	for _, test := range []struct {
		cellType CellType
		count    int
		degrees  [3]int
		want     float64
	}{
		{QuadraticLine, 3, [3]int{}, 1.0103211262967344},
		{QuadraticTriangle, 6, [3]int{}, 0.5025989355197255},
		{QuadraticQuad, 8, [3]int{}, 1.0105341307207123},
		{QuadraticTetrahedron, 10, [3]int{}, 0.16642795138888894},
		{QuadraticHexahedron, 20, [3]int{}, 0.9934895833333333},
		{QuadraticWedge, 15, [3]int{}, 0.4975260416666667},
		{QuadraticPyramid, 13, [3]int{}, 0.33242187500000003},
		{BiquadraticQuad, 9, [3]int{}, 1.0105341307207119},
		{TriquadraticHexahedron, 27, [3]int{}, 0.9934895833333333},
		{QuadraticLinearQuad, 6, [3]int{}, 1.010480910843106},
		{QuadraticLinearWedge, 12, [3]int{}, 0.4975260416666667},
		{BiquadraticWedge, 18, [3]int{}, 0.4975260416666666},
		{BiquadraticHexahedron, 24, [3]int{}, 0.993489583333333},
		{BiquadraticTriangle, 7, [3]int{}, 0.5025989355197253},
		{CubicLine, 4, [3]int{}, 1.0103211262967344},
		{LagrangeCurve, 2, [3]int{}, 1.0077822185373186},
		{LagrangeCurve, 3, [3]int{}, 1.0103211262967344},
		{LagrangeCurve, 4, [3]int{}, 1.0103211262967344},
		{LagrangeCurve, 5, [3]int{}, 1.0103211262967366},
		{LagrangeTriangle, 3, [3]int{}, 0.5039516694646917},
		{LagrangeTriangle, 6, [3]int{}, 0.5025989355197255},
		{LagrangeTriangle, 7, [3]int{}, 0.5025989355197253},
		{LagrangeTriangle, 10, [3]int{}, 0.5025989355197253},
		{LagrangeTriangle, 15, [3]int{}, 0.5025989355197256},
		{LagrangeTriangle, 28, [3]int{}, 0.502598935519543},
		{LagrangeQuad, 4, [3]int{}, 1.0079033389293834},
		{LagrangeQuad, 12, [3]int{3, 2, 1}, 1.0105341307207072},
		{LagrangeQuad, 16, [3]int{}, 1.0105341307206988},
		{LagrangeQuad, 25, [3]int{}, 1.010534130721038},
		{LagrangeTetrahedron, 4, [3]int{}, 0.16666666666666669},
		{LagrangeTetrahedron, 10, [3]int{}, 0.16642795138888894},
		{LagrangeTetrahedron, 15, [3]int{}, 0.1664279513888889},
		{LagrangeTetrahedron, 20, [3]int{}, 0.16642795138888883},
		{LagrangeTetrahedron, 56, [3]int{}, 0.166427951388883},
		{LagrangeHexahedron, 8, [3]int{}, 0.9931640625},
		{LagrangeHexahedron, 60, [3]int{2, 3, 4}, 0.9934895833345654},
		{LagrangeHexahedron, 64, [3]int{}, 0.9934895833326087},
		{LagrangeWedge, 6, [3]int{}, 0.4964192708333333},
		{LagrangeWedge, 18, [3]int{}, 0.4975260416666666},
		{LagrangeWedge, 21, [3]int{}, 0.4975260416666666},
		{LagrangeWedge, 30, [3]int{3, 3, 2}, 0.4975260416666662},
		{LagrangeWedge, 40, [3]int{}, 0.49752604166669195},
		{BezierCurve, 3, [3]int{}, 1.0084179557582882},
		{BezierCurve, 4, [3]int{}, 1.0089119511861722},
		{BezierTriangle, 6, [3]int{}, 0.5029471330830472},
		{BezierTriangle, 10, [3]int{}, 0.502757981935682},
		{BezierQuad, 9, [3]int{}, 1.0085596686634886},
		{BezierQuad, 16, [3]int{}, 1.0090707794629195},
		{BezierTetrahedron, 10, [3]int{}, 0.16646389431423617},
		{BezierTetrahedron, 20, [3]int{}, 0.1664331757973251},
		{BezierHexahedron, 27, [3]int{}, 0.9933268229166666},
		{BezierHexahedron, 64, [3]int{}, 0.9933810763888884},
		{BezierWedge, 18, [3]int{}, 0.49698079427083325},
		{BezierWedge, 40, [3]int{}, 0.4971643518518517},
	} {
		s, err := ShapeOf(test.cellType, test.count, test.degrees)
		if err != nil {
			t.Fatal(err)
		}
		var points [][3]float64
		for _, p := range straightNodes(s) {
			x, y, z := p[0], p[1], p[2]
			points = append(points, [3]float64{x + y*y/8, y + x*z/8, z + x*x/8})
		}
		c := testCell(t, test.cellType, test.degrees, points)
		// The nodes in the files are rounded, to about 1e-12 in those of degree 3 and more.
		if got := c.Measure(); !near(got, test.want, 2e-12) {
			t.Errorf("%s: measure %.17g, want %.17g", label(s), got, test.want)
		}
	}
}

// Contract of orientation: corners decide, values below 1e-12 of the largest count as
// zero, and a wedge is lawful in both orders.
func TestOrientation(t *testing.T) {
	mirrored := func(c *Cell) *Cell {
		for i := range c.Nodes {
			c.Points[3*i] *= -1
		}
		return c
	}
	for _, s := range interpolating(t) {
		if s.Dimension < 2 {
			continue
		}
		c := testCell(t, s.Type, s.Degrees, straightNodes(s))
		want := c.Measure()
		measure := c.Volume
		if s.Dimension == 2 {
			measure = c.PlaneArea
		}
		if got, orientation := measure(); !near(got, want, 1e-13) || orientation != Regular {
			t.Errorf("%s: %.17g (orientation %d), want %.17g", label(s), got, orientation, want)
		}
		mirrored(c)
		sign, expected := -1.0, Mirrored
		if s.row.unit == &wedge {
			sign, expected = 1, Regular
		}
		if got, orientation := measure(); !near(got, sign*want, 1e-13) || orientation != expected {
			t.Errorf("%s mirrored: %.17g (orientation %d), want %.17g (%d)", label(s), got, orientation, sign*want, expected)
		}
		if got := c.Measure(); !near(got, want, 1e-13) {
			t.Errorf("%s mirrored: measure %.17g, want %.17g", label(s), got, want)
		}
		if s.Dimension == 3 {
			rule := s.MeasureRule()
			elements := make([]float64, len(rule.Weights))
			c.VolumeElements(rule, elements)
			if got := elements[0]; got*sign <= 0 {
				t.Errorf("%s mirrored: volume element %g", label(s), got)
			}
		}
	}
}

// D-11: the hexahedron of Q-03 with two nodes exchanged on both faces.
func TestTangledHexahedron(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {2, 0, 0}, {2, 1.5, 0}, {0, 1, 0}, {0, 0, 1}, {2, 0, 1.2}, {2.5, 1.5, 2}, {0, 1.2, 1}}
	points[1], points[2], points[5], points[6] = points[2], points[1], points[6], points[5]
	c := testCell(t, Hexahedron, [3]int{}, points)
	volume, orientation := c.Volume()
	if orientation != Tangled || !near(volume, c.integratedDeterminant(), 1e-13) || c.Measure() != volume {
		t.Errorf("volume %.17g (orientation %d), measure %.17g", volume, orientation, c.Measure())
	}
	reversed := testCell(t, Hexahedron, [3]int{}, append(points[4:8:8], points[:4]...))
	volume, orientation = reversed.Volume()
	if orientation != Tangled || volume >= 0 != (c.integratedDeterminant() < 0) || reversed.Measure() != volume {
		t.Errorf("other way round: volume %.17g (orientation %d), measure %.17g", volume, orientation, reversed.Measure())
	}
}

func TestSmallDeterminantsCountAsZero(t *testing.T) {
	for _, test := range []struct {
		least, greatest float64
		want            Orientation
	}{
		{1, 2, Regular},
		{0, 2, Regular},
		{0, 0, Regular},
		{-1e-13, 1, Regular},
		{-1e-11, 1, Tangled},
		{-1, 1e-11, Tangled},
		{-1, 1e-13, Mirrored},
		{-2, 0, Mirrored},
		{-2, -1, Mirrored},
		{-1e-20, 1e-21, Tangled},
	} {
		if got := orientationOf(test.least, test.greatest); got != test.want {
			t.Errorf("determinants from %g to %g: %d, want %d", test.least, test.greatest, got, test.want)
		}
	}
}

// Centroids: of an affine cell that of the straight one; of a curved solid by the fine
// rule; and a half cylinder's shell.
func TestCentroids(t *testing.T) {
	random := rand.New(rand.NewPCG(27, 28))
	straight := map[*unitCell][3]float64{
		&line: {0.5}, &triangle: {1. / 3, 1. / 3}, &quad: {0.5, 0.5}, &pixel: {0.5, 0.5},
		&tetrahedron: {0.25, 0.25, 0.25}, &hexahedron: {0.5, 0.5, 0.5}, &voxel: {0.5, 0.5, 0.5},
		&wedge: {1. / 3, 1. / 3, 0.5}, &pyramid: {0.5, 0.5, 0.25},
	}
	for _, s := range interpolating(t) {
		c := testCell(t, s.Type, s.Degrees, straightNodes(s))
		got := c.Centroid()
		add(&got, -1, straight[s.row.unit])
		if math.Sqrt(dot(got, got)) > 1e-13 {
			t.Errorf("%s: centroid is off by %v", label(s), got)
		}
		if s.Dimension != 3 {
			continue
		}
		c = shaken(t, s, random, 0.05)
		want := c.momentsByFineRule()
		got = c.Centroid()
		add(&want, -1, got)
		if math.Sqrt(dot(want, want)) > 1e-12 {
			t.Errorf("%s: curved, centroid %v is off by %v", label(s), got, want)
		}
	}
	flat := testCell(t, Tetrahedron, [3]int{}, [][3]float64{{0, 0, 0}, {1, 0, 0}, {0, 1, 0}, {1, 1, 0}})
	if got := flat.Centroid(); got != [3]float64{0.5, 0.5, 0} {
		t.Errorf("centroid without volume: %v, want the mean of the points", got)
	}
	vertex := testCell(t, Vertex, [3]int{}, [][3]float64{{1, 2, 3}})
	if got := vertex.Centroid(); got != [3]float64{1, 2, 3} || vertex.Measure() != 0 {
		t.Errorf("vertex: centroid %v, measure %g", got, vertex.Measure())
	}
}

// momentsByFineRule returns the centroid of the volume with the rule of most points.
func (c *Cell) momentsByFineRule() (centroid [3]float64) {
	rule := c.Shape.FineRule()
	elements := make([]float64, len(rule.Weights))
	c.VolumeElements(rule, elements)
	whole := 0.0
	for i, element := range elements {
		whole += element
		add(&centroid, element, c.Place(rule, i))
	}
	return scaled(centroid, 1/whole)
}

// second-order plane cells on a curved map, as Q-08.
func TestProductRulesOfCurvedPlanes(t *testing.T) {
	for _, test := range []struct {
		cellType      CellType
		count         int
		area, product float64
	}{
		{QuadraticQuad, 8, 0.96, 3640139. / 252000000},
		{BiquadraticQuad, 9, 0.96, 3640139. / 252000000},
		{QuadraticTriangle, 6, 37. / 75, 326249. / 72000000},
	} {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		var points [][3]float64
		var f, g []float64
		for _, p := range s.NodeCoordinates() {
			x, y := p[0], p[1]
			points = append(points, [3]float64{x + y*y/5 + x*y/10, y + x*x/5 - x*y/10})
			f, g = append(f, 10+5*x*x+3*y*y+x*y), append(g, (1+x*x+2*y*y+x*y)/1000)
		}
		c := testCell(t, test.cellType, [3]int{}, points)
		if area, orientation := c.PlaneArea(); !near(area, test.area, 1e-14) || orientation != Regular {
			t.Errorf("%s: area %.17g (orientation %d), want %.17g", label(s), area, orientation, test.area)
		}
		rule := s.ProductRule()
		elements := make([]float64, len(rule.Weights))
		c.PlaneElements(rule, elements)
		if got := 0.5 * productOver(rule, elements, f, g); !near(got, test.product, 1e-14) {
			t.Errorf("%s: U = %.17g, want %.17g", label(s), got, test.product)
		}
	}
}

// The ring rule integrates the product of two fields times the radius: more points
// change nothing, and fewer do.
func TestRingProductRuleIsExact(t *testing.T) {
	random := rand.New(rand.NewPCG(29, 30))
	for _, s := range interpolating(t) {
		if s.Dimension != 2 {
			continue
		}
		c := shaken(t, s, random, 0.1/float64(max(1, s.Degrees[0]*s.Degrees[1])))
		f, g := make([]float64, s.NodeCount), make([]float64, s.NodeCount)
		for i := range f {
			f[i], g[i] = 1+random.Float64(), 1+random.Float64()
		}
		integral := func(rule *Tabulation) float64 {
			elements := make([]float64, len(rule.Weights))
			c.RingElements(rule, false, elements)
			return productOver(rule, elements, f, g)
		}
		want := integral(s.tabulate(s.integrandDegrees(6)))
		if got := integral(s.RingProductRule()); !near(got, want, 1e-12) {
			t.Errorf("%s: %.17g, with more points %.17g", label(s), got, want)
		}
		if got := integral(s.MeasureRule()); near(got, want, 1e-12) {
			t.Errorf("%s: the rule for the measure gives %.17g too", label(s), got)
		}
	}
}

// Exactness for every solid: the product of two fields with more points.
func TestProductRuleIsExact(t *testing.T) {
	random := rand.New(rand.NewPCG(31, 32))
	for _, s := range interpolating(t) {
		if s.Dimension != 3 || s.NodeCount > 64 {
			continue
		}
		c := shaken(t, s, random, 0.1/float64(max(1, s.Degrees[0]*s.Degrees[2])))
		f, g := make([]float64, s.NodeCount), make([]float64, s.NodeCount)
		for i := range f {
			f[i], g[i] = 1+random.Float64(), 1+random.Float64()
		}
		integral := func(rule *Tabulation) float64 {
			elements := make([]float64, len(rule.Weights))
			c.VolumeElements(rule, elements)
			return productOver(rule, elements, f, g)
		}
		want := integral(s.tabulate(s.integrandDegrees(3)))
		if got := integral(s.ProductRule()); !near(got, want, 1e-12) {
			t.Errorf("%s: %.17g, with more points %.17g", label(s), got, want)
		}
		if got := integral(s.MeasureRule()); near(got, want, 1e-12) {
			t.Errorf("%s: the rule for the measure gives %.17g too", label(s), got)
		}
	}
}

// Quadrilaterals in space: flat ones in closed form, others by quadrature; the bow tie
// and the warped one are none that the closed form would get right.
func TestAreasInSpace(t *testing.T) {
	for _, test := range []struct {
		name   string
		points [][3]float64
		isFlat bool
	}{
		{"flat", [][3]float64{{0, 0, 0}, {3, 0, 4}, {3, 2, 4}, {0, 1, 0}}, true},
		{"flat with a corner on an edge", [][3]float64{{0, 0, 0}, {3, 0, 4}, {6, 0, 8}, {0, 1, 0}}, true},
		{"dart", [][3]float64{{0, 0, 0}, {3, 0, 4}, {0.3, 0.2, 0.4}, {0, 1, 0}}, false},
		{"bow tie", [][3]float64{{0, 0, 0}, {3, 0, 4}, {0, 1, 0}, {3, 2, 4}}, false},
		{"warped", [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 1e-6}, {0, 1, 0}}, false},
		{"hyperbolic paraboloid", [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 1}, {0, 1, 0}}, false},
	} {
		for _, cellType := range []CellType{Quad, Pixel, LagrangeQuad, BezierQuad} {
			points := slices.Clone(test.points)
			if cellType == Pixel {
				points[2], points[3] = points[3], points[2]
			}
			c := testCell(t, cellType, [3]int{}, points)
			if _, isFlat := c.flatArea(); isFlat != test.isFlat {
				t.Errorf("%s: flat %v", test.name, isFlat)
			}
			rule := c.Shape.FineRule()
			want := 0.0
			for i, weight := range rule.Weights {
				want += weight * c.stretch(rule, i)
			}
			if got := c.Measure(); !near(got, want, 1e-14) {
				t.Errorf("%s: area %.17g, by quadrature %.17g", test.name, got, want)
			}
		}
	}
	// z = xy over the unit square: ∫∫ √(1 + x² + y²).
	// Source: a program of its own with 60 × 60 points.
	saddle := testCell(t, Quad, [3]int{}, [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 1}, {0, 1, 0}})
	if got, want := saddle.Measure(), 1.2807892752734014; !near(got, want, 1e-14) {
		t.Errorf("hyperbolic paraboloid: area %.17g, want %.17g", got, want)
	}
}

func BenchmarkHexahedronVolume(b *testing.B) {
	random := rand.New(rand.NewPCG(33, 34))
	s, err := ShapeOf(Hexahedron, 8, [3]int{})
	if err != nil {
		b.Fatal(err)
	}
	c := shaken(b, s, random, 0.1)
	total := 0.0
	b.ReportAllocs()
	for b.Loop() {
		volume, _ := c.Volume()
		total += volume
	}
	if total == 0 {
		b.Fatal("nothing was computed")
	}
}

func BenchmarkVolume(b *testing.B) {
	random := rand.New(rand.NewPCG(33, 34))
	for _, test := range []struct {
		cellType CellType
		count    int
	}{{Tetrahedron, 4}, {Wedge, 6}, {Pyramid, 5}, {QuadraticTetrahedron, 10}, {QuadraticHexahedron, 20}} {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			b.Fatal(err)
		}
		c := shaken(b, s, random, 0.1)
		b.Run(s.Name, func(b *testing.B) {
			total := 0.0
			for b.Loop() {
				volume, _ := c.Volume()
				total += volume
			}
			if total == 0 {
				b.Fatal("nothing was computed")
			}
		})
	}
}

// The volume elements of the rule for products of nodal fields.
func BenchmarkVolumeElements(b *testing.B) {
	random := rand.New(rand.NewPCG(35, 36))
	for _, test := range []struct {
		cellType CellType
		count    int
	}{{Tetrahedron, 4}, {QuadraticTetrahedron, 10}, {Hexahedron, 8}, {QuadraticHexahedron, 20}} {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			b.Fatal(err)
		}
		c := shaken(b, s, random, 0.02)
		rule := s.ProductRule()
		elements := make([]float64, len(rule.Weights))
		b.Run(s.Name, func(b *testing.B) {
			for b.Loop() {
				c.VolumeElements(rule, elements)
			}
			if elements[0] == 0 {
				b.Fatal("nothing was computed")
			}
		})
	}
}
