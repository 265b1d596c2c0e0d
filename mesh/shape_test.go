package mesh

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"testing"
)

// interpolating returns a shape of every type that interpolates, Lagrange and Bézier
// types in each degree and in some mixed ones.
func interpolating(t testing.TB) []*Shape {
	t.Helper()
	var all []*Shape
	add := func(number CellType, count int, degrees [3]int) {
		s, err := ShapeOf(number, count, degrees)
		if err != nil {
			t.Fatal(err)
		}
		if !s.Interpolates() {
			t.Fatalf("%s has no shape functions", label(s))
		}
		all = append(all, s)
	}
	for number := range 256 {
		row := cellTypeRows[number]
		switch {
		case row == nil || row.unit == nil:
		case row.least == row.most || row.middles != "":
			add(row.number, max(row.least, row.variant), [3]int{})
			if row.family == middles {
				continue
			}
			fallthrough // the variant of a Lagrange cell, then the others
		default:
			for degree := 1; degree <= MaxDegree; degree++ {
				if count := int(row.latticeCount(row.equalDegrees(degree))); row.checkCount(count) == nil {
					add(row.number, count, [3]int{})
				}
			}
		}
	}
	for _, first := range []CellType{LagrangeCurve, BezierCurve} {
		quad, hexahedron, wedge := first+2, first+4, first+5
		add(quad, 12, [3]int{3, 2, 1})
		add(quad, 10, [3]int{1, 4, 1})
		add(hexahedron, 60, [3]int{2, 3, 4})
		add(hexahedron, 28, [3]int{1, 6, 1})
		add(wedge, 30, [3]int{3, 3, 2})
		add(wedge, 21, [3]int{1, 1, 6})
	}
	return all
}

// linear returns the shapes of linear cells that have types of their own.
func linear(t testing.TB) (shapes []*Shape) {
	t.Helper()
	for _, s := range interpolating(t) {
		if s.NodeCount == s.CornerCount && s.Type < 20 {
			shapes = append(shapes, s)
		}
	}
	return shapes
}

// label names a shape in test output.
func label(s *Shape) string { return fmt.Sprintf("%d %s %d", s.Type, s.Name, s.NodeCount) }

// randomInside returns a random place inside the unit cell of a shape.
func randomInside(s *Shape, random *rand.Rand) (r [3]float64) {
	axis := 0
	for _, dimension := range s.basis.unit.simplices {
		for {
			sum := 0.0
			for i := range dimension {
				r[axis+i] = random.Float64()
				sum += r[axis+i]
			}
			if sum < 1 {
				break
			}
		}
		axis += dimension
	}
	return r
}

// The Kronecker property. Bézier functions have it at the corners alone.
func TestShapeFunctionsAreOneAtTheirNodes(t *testing.T) {
	for _, s := range interpolating(t) {
		values := make([]float64, s.NodeCount)
		nodes := s.NodeCoordinates()
		if s.row.family == bezier {
			nodes = nodes[:s.CornerCount]
		}
		for i, node := range nodes {
			s.Values(node, values)
			for j, got := range values {
				want := 0.0
				if i == j {
					want = 1
				}
				if math.Abs(got-want) > 1e-14 {
					t.Errorf("%s: function %d at node %d is %g, want %g", label(s), j, i, got, want)
				}
			}
		}
	}
}

func TestShapeFunctionsAddUpToOne(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for _, s := range interpolating(t) {
		values := make([]float64, s.NodeCount)
		derivatives := make([][3]float64, s.NodeCount)
		for range 5 {
			r := randomInside(s, random)
			s.Values(r, values)
			s.Derivatives(r, derivatives)
			sum, slope := 0.0, [3]float64{}
			for i := range values {
				sum += values[i]
				for axis := range slope {
					slope[axis] += derivatives[i][axis]
				}
			}
			if math.Abs(sum-1) > 1e-13 || math.Abs(slope[0])+math.Abs(slope[1])+math.Abs(slope[2]) > 1e-11 {
				t.Fatalf("%s at %v: values add up to %.17g, derivatives to %g", label(s), r, sum, slope)
			}
		}
	}
}

// Central differences of step h err by about h² times the third derivative, which is
// below 1e4 for all shapes here.
func TestDerivativesAreThoseOfTheValues(t *testing.T) {
	const h = 1e-5
	random := rand.New(rand.NewPCG(3, 4))
	for _, s := range interpolating(t) {
		before, behind := make([]float64, s.NodeCount), make([]float64, s.NodeCount)
		derivatives := make([][3]float64, s.NodeCount)
		for range 3 {
			r := randomInside(s, random)
			s.Derivatives(r, derivatives)
			for axis := range 3 {
				left, right := r, r
				left[axis] -= h
				right[axis] += h
				s.Values(left, before)
				s.Values(right, behind)
				for i := range derivatives {
					want := (behind[i] - before[i]) / (2 * h)
					if axis >= s.Dimension {
						want = 0
					}
					if got := derivatives[i][axis]; math.Abs(got-want) > 1e-6 {
						t.Fatalf("%s: derivative %d of function %d at %v is %.12g, want %.12g", label(s), axis, i, r, got, want)
					}
				}
			}
		}
	}
}

// Linear functions of the parametric coordinates are combinations of the functions of
// every shape but a pyramid: values at the nodes give the function between them. For a
// pyramid that holds of the coordinates of the straight cell.
func TestShapeFunctionsReproduceLinearFields(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for _, s := range interpolating(t) {
		field := func(r [3]float64) float64 {
			if s.row.unit.folded {
				r[0], r[1] = 0.5+(r[0]-0.5)*(1-r[2]), 0.5+(r[1]-0.5)*(1-r[2])
			}
			return 1 + 2*r[0] - 3*r[1] + 5*r[2]
		}
		values := make([]float64, s.NodeCount)
		for range 3 {
			r := randomInside(s, random)
			s.Values(r, values)
			got := 0.0
			for i, node := range s.NodeCoordinates() {
				got += values[i] * field(node)
			}
			if want := field(r); math.Abs(got-want) > 1e-12 {
				t.Errorf("%s at %v: %.17g, want %.17g", label(s), r, got, want)
			}
		}
	}
}

// The same functions in different words: Lagrange cells of degree 1 and 2 are the cells
// with types of their own.
func TestLagrangeCellsOfLowDegreeAreTheOthers(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 10))
	for _, pair := range []struct {
		count  int
		one    CellType
		others []CellType
	}{
		{2, Line, []CellType{LagrangeCurve, BezierCurve}},
		{3, Triangle, []CellType{LagrangeTriangle, BezierTriangle}},
		{4, Quad, []CellType{LagrangeQuad, BezierQuad}},
		{4, Tetrahedron, []CellType{LagrangeTetrahedron, BezierTetrahedron}},
		{8, Hexahedron, []CellType{LagrangeHexahedron, BezierHexahedron}},
		{6, Wedge, []CellType{LagrangeWedge, BezierWedge}},
		{3, QuadraticLine, []CellType{LagrangeCurve}},
		{4, CubicLine, []CellType{LagrangeCurve}},
		{6, QuadraticTriangle, []CellType{LagrangeTriangle}},
		{7, BiquadraticTriangle, []CellType{LagrangeTriangle}},
		{9, BiquadraticQuad, []CellType{LagrangeQuad}},
		{10, QuadraticTetrahedron, []CellType{LagrangeTetrahedron}},
		{18, BiquadraticWedge, []CellType{LagrangeWedge}},
		{27, TriquadraticHexahedron, []CellType{LagrangeHexahedron}},
	} {
		for _, other := range pair.others {
			s, err := ShapeOf(pair.one, pair.count, [3]int{})
			if err != nil {
				t.Fatal(err)
			}
			o, err := ShapeOf(other, pair.count, [3]int{})
			if err != nil {
				t.Fatal(err)
			}
			want, got := make([]float64, pair.count), make([]float64, pair.count)
			r := randomInside(s, random)
			s.Values(r, want)
			o.Values(r, got)
			for i := range want {
				if math.Abs(got[i]-want[i]) > 1e-14 {
					t.Errorf("%s: function %d at %v is %.17g, that of %s %.17g", label(o), i, r, got[i], label(s), want[i])
				}
			}
		}
	}
}

// Source: VTK 9.1, see the file.
func TestShapeFunctionsFollowVTK(t *testing.T) {
	data, err := os.ReadFile("../testdata/cells/shape-functions-vtk.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct {
		Functions []struct {
			Type    CellType
			Degrees [3]int
			At      [3]float64
			Values  []float64
		}
	}
	if err := json.Unmarshal(data, &file); err != nil {
		t.Fatal(err)
	}
	types := map[CellType]bool{}
	for _, want := range file.Functions {
		s, err := ShapeOf(want.Type, len(want.Values), want.Degrees)
		if err != nil {
			t.Fatal(err)
		}
		types[s.Type] = true
		got := make([]float64, s.NodeCount)
		s.Values(want.At, got)
		for i := range got {
			if math.Abs(got[i]-want.Values[i]) > 1e-14 {
				t.Errorf("%s: function %d at %v is %.17g, want %.17g", label(s), i, want.At, got[i], want.Values[i])
			}
		}
	}
	for _, s := range interpolating(t) {
		if !types[s.Type] && s.Type != QuadraticLinearWedge && s.Type != BiquadraticWedge {
			t.Errorf("%s is not compared", label(s))
		}
	}
}

func TestDegree(t *testing.T) {
	for _, c := range []struct {
		cellType CellType
		nodes    int
		want     int
	}{{Tetrahedron, 4, 1}, {Wedge, 6, 1}, {QuadraticHexahedron, 20, 2}, {BiquadraticWedge, 18, 2}, {QuadraticLinearQuad, 6, 2}, {LagrangeQuad, 16, 3}, {Polygon, 5, 0}} {
		shape, err := ShapeOf(c.cellType, c.nodes, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		if got := shape.Degree(); got != c.want {
			t.Errorf("%v: degree %d, want %d", c.cellType, got, c.want)
		}
	}
}
