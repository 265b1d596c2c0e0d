package mesh

import (
	"strings"
	"sync"
	"testing"
)

// Node counts and degrees of every family.
func TestShapeOf(t *testing.T) {
	for _, test := range []struct {
		cellType           CellType
		count              int
		degrees            [3]int
		dimension, corners int
		want               [3]int // degrees
		interpolates       bool
	}{
		{EmptyCell, 0, [3]int{}, 0, 0, [3]int{}, false},
		{Vertex, 1, [3]int{}, 0, 1, [3]int{}, false},
		{PolyVertex, 7, [3]int{}, 0, 7, [3]int{}, false},
		{PolyLine, 5, [3]int{}, 1, 5, [3]int{}, false},
		{TriangleStrip, 5, [3]int{}, 2, 5, [3]int{}, false},
		{Polygon, 5, [3]int{}, 2, 5, [3]int{}, false},
		{QuadraticPolygon, 10, [3]int{}, 2, 5, [3]int{}, false},
		{PentagonalPrism, 10, [3]int{}, 3, 10, [3]int{}, false},
		{HexagonalPrism, 12, [3]int{}, 3, 12, [3]int{}, false},
		{Polyhedron, 9, [3]int{}, 3, 9, [3]int{}, false},
		{Line, 2, [3]int{}, 1, 2, [3]int{}, true},
		{Pixel, 4, [3]int{2, 2, 2}, 2, 4, [3]int{}, true}, // degrees are none of its business
		{QuadraticWedge, 15, [3]int{}, 3, 6, [3]int{}, true},
		{QuadraticPyramid, 13, [3]int{}, 3, 5, [3]int{}, true},
		{CubicLine, 4, [3]int{}, 1, 2, [3]int{3}, true},
		{LagrangeCurve, 6, [3]int{}, 1, 2, [3]int{5}, true},
		{LagrangeTriangle, 10, [3]int{}, 2, 3, [3]int{3, 3}, true},
		{LagrangeTriangle, 7, [3]int{}, 2, 3, [3]int{}, true},
		{LagrangeQuad, 16, [3]int{}, 2, 4, [3]int{3, 3}, true},
		{LagrangeQuad, 12, [3]int{3, 2, 1}, 2, 4, [3]int{3, 2}, true},
		{LagrangeQuad, 12, [3]int{2, 3, 0}, 2, 4, [3]int{2, 3}, true},
		{LagrangeTetrahedron, 20, [3]int{}, 3, 4, [3]int{3, 3, 3}, true},
		{LagrangeTetrahedron, 15, [3]int{}, 3, 4, [3]int{}, true},
		{LagrangeHexahedron, 27, [3]int{}, 3, 8, [3]int{2, 2, 2}, true},
		{LagrangeHexahedron, 60, [3]int{2, 3, 4}, 3, 8, [3]int{2, 3, 4}, true},
		{LagrangeWedge, 40, [3]int{}, 3, 6, [3]int{3, 3, 3}, true},
		{LagrangeWedge, 30, [3]int{3, 3, 2}, 3, 6, [3]int{3, 3, 2}, true},
		{LagrangeWedge, 21, [3]int{}, 3, 6, [3]int{}, true},
		{LagrangeWedge, 21, [3]int{2, 2, 2}, 3, 6, [3]int{}, true},
		{LagrangeWedge, 21, [3]int{1, 1, 6}, 3, 6, [3]int{1, 1, 6}, true},
		{BezierWedge, 18, [3]int{}, 3, 6, [3]int{2, 2, 2}, true},
	} {
		s, err := ShapeOf(test.cellType, test.count, test.degrees)
		if err != nil {
			t.Error(err)
			continue
		}
		if s.Type != test.cellType || s.NodeCount != test.count || s.Dimension != test.dimension ||
			s.CornerCount != test.corners || s.Degrees != test.want ||
			s.Interpolates() != test.interpolates || !s.Supported || s.Reason != "" {
			t.Errorf("%s of degrees %v: got %d nodes, dimension %d, %d corners, degrees %v, interpolates %v, supported %v (%s)", label(s), test.degrees,
				s.NodeCount, s.Dimension, s.CornerCount, s.Degrees, s.Interpolates(), s.Supported, s.Reason)
		}
		if s.Interpolates() != (s.ProductRule() != nil) || s.Interpolates() != (s.NodeCoordinates() != nil) {
			t.Errorf("%s: rules and nodes for a shape without functions, or none for one with", label(s))
		}
	}
}

// One pointer for one shape, whether the degrees are counted or stated.
func TestEqualShapesAreOne(t *testing.T) {
	counted, err := ShapeOf(LagrangeHexahedron, 27, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	stated, err := ShapeOf(LagrangeHexahedron, 27, [3]int{2, 2, 2})
	if err != nil || stated != counted {
		t.Errorf("degrees stated: %v (%v), counted: %v", stated, err, counted)
	}
	other, err := ShapeOf(LagrangeHexahedron, 27, [3]int{8, 2, 0})
	if err == nil {
		t.Errorf("degrees 8, 2, 0 are taken for %v", other)
	}
	var group sync.WaitGroup
	found := make([]*Shape, 8)
	for i := range found {
		group.Go(func() { found[i], _ = ShapeOf(LagrangeHexahedron, 125, [3]int{}) })
	}
	group.Wait()
	for _, s := range found {
		if s == nil || s != found[0] {
			t.Fatalf("goroutines got different shapes: %v", found)
		}
	}
}

func TestShapeOfErrors(t *testing.T) {
	for _, test := range []struct {
		cellType CellType
		count    int
		degrees  [3]int
		want     string
	}{
		{17, 4, [3]int{}, "cell type 17 is none of VTK's"},
		{255, 4, [3]int{}, "cell type 255 is none of VTK's"},
		{Hexahedron, 7, [3]int{}, "hexahedron (cell type 12) has 7 nodes, needs 8"},
		{QuadraticTetrahedron, 4, [3]int{}, "quadratic tetrahedron (cell type 24) has 4 nodes, needs 10"},
		{EmptyCell, 1, [3]int{}, "empty cell (cell type 0) has 1 nodes, needs 0"},
		{Vertex, 0, [3]int{}, "vertex (cell type 1) has 0 nodes, needs 1"},
		{CubicLine, 3, [3]int{}, "cubic line (cell type 35) has 3 nodes, needs 4"},
		{PentagonalPrism, 12, [3]int{}, "pentagonal prism (cell type 15) has 12 nodes, needs 10"},
		{PolyLine, 1, [3]int{}, "poly-line (cell type 4) has 1 nodes, needs 2 or more"},
		{Polygon, 2, [3]int{}, "polygon (cell type 7) has 2 nodes, needs 3 or more"},
		{QuadraticPolygon, 7, [3]int{}, "quadratic polygon (cell type 36) has 7 nodes, needs an even number"},
		{Polyhedron, 3, [3]int{}, "polyhedron (cell type 42) has 3 nodes, needs 4 or more"},
		{LagrangeCurve, 1, [3]int{}, "Lagrange curve (cell type 68) has 1 nodes; degree 1 needs 2, degree 2 needs 3, and the file states no degrees"},
		{LagrangeTriangle, 8, [3]int{}, "Lagrange triangle (cell type 69) has 8 nodes; degree 2 needs 6, degree 3 needs 10, and the file states no degrees"},
		{LagrangeHexahedron, 0, [3]int{}, "Lagrange hexahedron (cell type 72) has 0 nodes; degree 1 needs 8, degree 2 needs 27, and the file states no degrees"},
		{LagrangeHexahedron, 60, [3]int{}, "Lagrange hexahedron (cell type 72) has 60 nodes; degree 2 needs 27, degree 3 needs 64, and the file states no degrees"},
		{LagrangeHexahedron, 59, [3]int{2, 3, 4}, "Lagrange hexahedron (cell type 72) of degrees [2 3 4] has 59 nodes, needs 60"},
		{LagrangeHexahedron, 8, [3]int{1, 0, 1}, "Lagrange hexahedron (cell type 72) has degree 0 in direction 1, needs 1 or more"},
		{LagrangeHexahedron, 8, [3]int{1 << 40, 1 << 40, 1 << 40}, "has 8 nodes, needs 1329227995"},
		{LagrangeWedge, 30, [3]int{3, 2, 2}, "Lagrange wedge (cell type 73) has degrees 3 and 2 in its triangle, needs equal ones"},
		{BezierTriangle, 7, [3]int{}, "Bézier triangle (cell type 76) has 7 nodes; degree 2 needs 6"},
		{BezierWedge, 21, [3]int{}, "Bézier wedge (cell type 80) has 21 nodes; degree 2 needs 18"},
	} {
		s, err := ShapeOf(test.cellType, test.count, test.degrees)
		if s != nil || err == nil || !strings.Contains(err.Error(), test.want) {
			t.Errorf("%d with %d nodes: %v, error %v, want %q", test.cellType, test.count, s, err, test.want)
		}
	}
}

// What is recognised and not computed says why, and has no measure.
func TestUnsupportedShapes(t *testing.T) {
	for _, test := range []struct {
		cellType  CellType
		count     int
		degrees   [3]int
		dimension int
		reason    string
	}{
		{ConvexPointSet, 8, [3]int{}, 3, "the hull of its points is not computed"},
		{LagrangePyramid, 5, [3]int{}, 3, "VTK reserves the number and defines no such cell"},
		{BezierPyramid, 5, [3]int{}, 3, "VTK reserves the number and defines no such cell"},
		{52, 4, [3]int{}, 2, "VTK defines no nodes for it in files"},
		{60, 3, [3]int{}, 1, "VTK defines no nodes for it in files"},
		{LagrangeCurve, 8, [3]int{}, 1, "its degree 7 is above 6"},
		{LagrangeHexahedron, 512, [3]int{}, 3, "its degree 7 is above 6"},
		{BezierQuad, 18, [3]int{1, 8, 1}, 2, "its degree 8 is above 6"},
	} {
		s, err := ShapeOf(test.cellType, test.count, test.degrees)
		if err != nil {
			t.Error(err)
			continue
		}
		if s.Supported || s.Reason != test.reason || s.Dimension != test.dimension || s.Interpolates() {
			t.Errorf("%s: supported %v (%s), dimension %d, interpolates %v", label(s), s.Supported, s.Reason, s.Dimension, s.Interpolates())
		}
		points := make([][3]float64, test.count)
		for i := range points {
			points[i] = [3]float64{float64(i), 1, 2}
		}
		c := testCell(t, test.cellType, test.degrees, points)
		if measure := c.Measure(); measure == measure {
			t.Errorf("%s: measure %g, want NaN", label(s), measure)
		}
		if volume, _ := c.Volume(); volume == volume {
			t.Errorf("%s: volume %g, want NaN", label(s), volume)
		}
		if area, _ := c.PlaneArea(); area == area {
			t.Errorf("%s: area %g, want NaN", label(s), area)
		}
		volume, smallest, _ := c.RingVolume(true)
		if volume == volume || smallest != 1 {
			t.Errorf("%s: ring volume %g with smallest radius %g, want NaN and 1", label(s), volume, smallest)
		}
		if centroid, middle := c.Centroid(), [3]float64{float64(test.count-1) / 2, 1, 2}; centroid != middle || c.RingCentroid(false) != middle {
			t.Errorf("%s: centroid %v, want the mean of the points %v", label(s), centroid, middle)
		}
	}
}

func TestCellTypeNames(t *testing.T) {
	if got := Hexahedron.String(); got != "hexahedron" {
		t.Errorf("type 12 is called %q", got)
	}
	if got := CellType(99).String(); got != "CellType(99)" {
		t.Errorf("type 99 is called %q", got)
	}
	names := map[string]CellType{}
	for i := range cellTypes {
		row := &cellTypes[i]
		if other, taken := names[row.name]; taken {
			t.Errorf("types %d and %d are both called %s", other, row.number, row.name)
		}
		names[row.name] = row.number
		if i > 0 && row.number <= cellTypes[i-1].number {
			t.Errorf("type %d stands behind %d", row.number, cellTypes[i-1].number)
		}
	}
}
