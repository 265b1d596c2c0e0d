package mesh

import (
	"math"
	"testing"
)

// Polygons, strips and poly-lines in closed form. The outlines lie in a plane of space
// that is turned out of x-y for Measure and Centroid.
func TestPieces(t *testing.T) {
	for _, test := range []struct {
		name     string
		cellType CellType
		points   [][3]float64
		measure  float64
		centroid [2]float64
	}{
		{"poly-line", PolyLine, [][3]float64{{0, 0}, {3, 0}, {3, 4}, {0, 8}}, 12, [2]float64{(3*1.5 + 4*3 + 5*1.5) / 12., (4*2 + 5*6) / 12.}},
		{"strip", TriangleStrip, [][3]float64{{0, 0}, {1, 0}, {0, 1}, {1, 1}, {0, 2}}, 1.5, [2]float64{4. / 9, 7. / 9}},
		{"pentagon", Polygon, [][3]float64{{0, 0}, {1, 0}, {2, 1}, {1, 2}, {0, 2}}, 3, [2]float64{(2*0.5 + 4./3) / 3, 1}},
		{"angle", Polygon, [][3]float64{{0, 0}, {4, 0}, {4, 1}, {1, 1}, {1, 3}, {0, 3}}, 6, [2]float64{1.5, 1}},
		// A trapezium of area 3 with a parabola of area 2/3·2·¼ on three sides.
		{"quadratic polygon", QuadraticPolygon, [][3]float64{{0, 0}, {2, 0}, {2, 2}, {0, 1}, {1, -0.25}, {2.25, 1}, {1, 1.75}, {0, 0.5}}, 4,
			[2]float64{(10./3 + 1./3 + (2+0.1)/3 + 1./3) / 4, (7./3 - 0.1/3 + 1./3 + (1.5+0.1)/3) / 4}},
	} {
		c := testCell(t, test.cellType, [3]int{}, test.points)
		if c.Shape.Dimension == 2 {
			checkPlane(t, test.name, c, test.measure, test.centroid)
		}
		for i := range c.Nodes { // turn about the y axis and shift
			x := c.Points[3*i]
			c.Points[3*i], c.Points[3*i+2] = 1+0.6*x, 0.8*x
		}
		if got := c.Measure(); !near(got, test.measure, 1e-14) {
			t.Errorf("%s: measure %.17g, want %.17g", test.name, got, test.measure)
		}
		got, want := c.Centroid(), [3]float64{1 + 0.6*test.centroid[0], test.centroid[1], 0.8 * test.centroid[0]}
		for axis := range got {
			if math.Abs(got[axis]-want[axis]) > 1e-14 {
				t.Errorf("%s: centroid %v, want %v", test.name, got, want)
			}
		}
	}
}

// checkPlane compares area and ring volume with those of a plane figure: by Pappus, the
// volume is the area times the way of its centroid. Mirrored, it has the opposite sign.
func checkPlane(t *testing.T, name string, c *Cell, want float64, centroid [2]float64) {
	t.Helper()
	for _, sign := range []float64{1, -1} {
		area, orientation := c.PlaneArea()
		if !near(area, sign*want, 1e-14) || (orientation == Mirrored) != (sign < 0) || orientation == Tangled {
			t.Errorf("%s: area %.17g (orientation %d), want %.17g", name, area, orientation, sign*want)
		}
		for axis, axisX := range []bool{false, true} {
			volume, smallest, orientation := c.RingVolume(axisX)
			pappus := sign * 2 * math.Pi * centroid[axis] * want
			if !near(volume, pappus, 1e-14) || (orientation == Mirrored) != (sign < 0) || orientation == Tangled {
				t.Errorf("%s: ring volume %.17g (orientation %d, axis x %v), want %.17g", name, volume, orientation, axisX, pappus)
			}
			least := math.Inf(1)
			for i := range c.Nodes {
				least = min(least, c.Points[3*i+axis])
			}
			if smallest != least {
				t.Errorf("%s: smallest radius %g (axis x %v), want %g", name, smallest, axisX, least)
			}
		}
		// Turned the other way round: the nodes of the reflection, so that x stays.
		for i := range c.Nodes {
			c.Points[3*i+1] *= -1
		}
		centroid[1] *= -1
	}
}

// The centroid of a ring's volume about the y axis has the radius ∫ r² dA / ∫ r dA.
func TestRingCentroids(t *testing.T) {
	const h = 2.0
	r0, r1 := 1.0, 3.0
	radius := (r1*r1*r1 - r0*r0*r0) / 3 / ((r1*r1 - r0*r0) / 2)
	corners := [][3]float64{{r0, 5, 0}, {r1, 5, 0}, {r1, 5 + h, 0}, {r0, 5 + h, 0}}
	middles := [][3]float64{{2, 5, 0}, {r1, 6, 0}, {2, 7, 0}, {r0, 6, 0}}
	for _, test := range []struct {
		cellType CellType
		points   [][3]float64
	}{
		{Quad, corners},
		{Polygon, corners},
		{QuadraticQuad, append(append([][3]float64{}, corners...), middles...)},
		{QuadraticPolygon, append(append([][3]float64{}, corners...), middles...)},
		{TriangleStrip, [][3]float64{corners[0], corners[1], corners[3], corners[2]}},
		{Pixel, [][3]float64{corners[0], corners[1], corners[3], corners[2]}},
	} {
		c := testCell(t, test.cellType, [3]int{}, test.points)
		got, want := c.RingCentroid(false), [3]float64{radius, 6, 0}
		for axis := range got {
			if math.Abs(got[axis]-want[axis]) > 1e-14 {
				t.Errorf("%s: centroid of the ring %v, want %v", label(c.Shape), got, want)
			}
		}
		for i := range c.Nodes { // the same about the x axis
			c.Points[3*i], c.Points[3*i+1] = c.Points[3*i+1], c.Points[3*i]
		}
		got, want = c.RingCentroid(true), [3]float64{6, radius, 0}
		for axis := range got {
			if math.Abs(got[axis]-want[axis]) > 1e-14 {
				t.Errorf("%s: centroid of the ring about x %v, want %v", label(c.Shape), got, want)
			}
		}
	}
}

// A strip whose triangles turn differently is tangled, a concave polygon is not.
func TestOrientationOfPieces(t *testing.T) {
	bent := testCell(t, TriangleStrip, [3]int{}, [][3]float64{{0, 0}, {1, 0}, {0, 1}, {0.5, 0}})
	if area, orientation := bent.PlaneArea(); orientation != Tangled || !near(area, 0.25, 1e-15) {
		t.Errorf("strip that turns back: area %g, orientation %d", area, orientation)
	}
	concave := testCell(t, Polygon, [3]int{}, [][3]float64{{0, 0}, {4, 0}, {1, 1}, {0, 4}})
	if area, orientation := concave.PlaneArea(); orientation != Regular || !near(area, 4, 1e-15) {
		t.Errorf("concave polygon: area %g, orientation %d", area, orientation)
	}
}
