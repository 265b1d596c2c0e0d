package mesh

import (
	"math"
	"math/rand/v2"
	"reflect"
	"testing"
)

// everyShape returns interpolating shapes and some of the families that do not.
func everyShape(t testing.TB) []*Shape {
	t.Helper()
	all := interpolating(t)
	for _, other := range []struct {
		cellType CellType
		counts   []int
	}{
		{PolyLine, []int{2, 5}},
		{TriangleStrip, []int{3, 4, 5, 6}},
		{Polygon, []int{3, 4, 7}},
		{QuadraticPolygon, []int{6, 10}},
		{PentagonalPrism, []int{10}},
		{HexagonalPrism, []int{12}},
	} {
		for _, count := range other.counts {
			s, err := ShapeOf(other.cellType, count, [3]int{})
			if err != nil {
				t.Fatal(err)
			}
			all = append(all, s)
		}
	}
	return all
}

// The boundary of a cell is closed: each edge of a solid's faces belongs to two of
// them, which list it in opposite directions, and each corner of a plane cell ends one
// edge and begins one.
func TestFacesAreClosed(t *testing.T) {
	for _, s := range everyShape(t) {
		faces := s.FaceCorners()
		if s.Dimension < 2 {
			if len(faces) > 0 || len(s.Faces()) > 0 {
				t.Errorf("%s has faces", label(s))
			}
			continue
		}
		count := map[[2]int]int{}
		for _, face := range faces {
			for i, corner := range face {
				next := face[(i+1)%len(face)]
				if s.Dimension == 2 {
					if i == 0 {
						count[[2]int{corner, 0}]++ // begins
						count[[2]int{next, 1}]++   // ends
					}
					continue
				}
				count[[2]int{corner, next}]++
			}
		}
		for edge, times := range count {
			back := [2]int{edge[1], edge[0]}
			if s.Dimension == 2 {
				back = [2]int{edge[0], 1 - edge[1]}
			}
			if times != 1 || count[back] != 1 {
				t.Errorf("%s: edge %v occurs %d times, backwards %d times", label(s), edge, times, count[back])
			}
		}
		corners := map[int]bool{}
		for _, face := range faces {
			for _, corner := range face {
				corners[corner] = true
			}
		}
		if len(corners) != s.CornerCount {
			t.Errorf("%s: the faces have %d of %d corners", label(s), len(corners), s.CornerCount)
		}
	}
}

// On an affine image of the unit cell the outward area vectors of flat faces add up to
// nothing, and with the places of the faces they give the volume: ∮ x·n dA = 3 V.
func TestFacesLookOutwards(t *testing.T) {
	random := rand.New(rand.NewPCG(11, 12))
	for _, s := range everyShape(t) {
		if s.Dimension != 3 {
			continue
		}
		c := affine(t, s, random)
		volume, _ := c.Volume()
		var sum [3]float64
		flux, area := 0.0, 0.0
		for _, face := range s.FaceCorners() {
			var vector [3]float64
			first := c.node(face[0])
			for i := 1; i+1 < len(face); i++ {
				a, b := c.node(face[i]), c.node(face[i+1])
				add(&a, -1, first)
				add(&b, -1, first)
				add(&vector, 0.5, cross(a, b))
			}
			add(&sum, 1, vector)
			flux += dot(vector, first)
			area += math.Sqrt(dot(vector, vector))
		}
		if gap := math.Sqrt(dot(sum, sum)); gap > 1e-14*area {
			t.Errorf("%s: the area vectors add up to %v", label(s), sum)
		}
		if !near(flux/3, volume, 1e-12) {
			t.Errorf("%s: ∮ x·n dA / 3 = %.17g, volume %.17g", label(s), flux/3, volume)
		}
	}
}

// affine returns a cell that is a random affine image of the straight unit cell, or of
// a regular prism, with a positive Jacobian determinant.
func affine(t testing.TB, s *Shape, random *rand.Rand) *Cell {
	t.Helper()
	var map3 [3][3]float64
	for dot(map3[0], cross(map3[1], map3[2])) < 0.1 {
		for i := range map3 {
			for j := range map3[i] {
				map3[i][j] = 2*random.Float64() - 1
			}
		}
	}
	var points [][3]float64
	for _, p := range straightNodes(s) {
		points = append(points, [3]float64{3 + dot(map3[0], p), dot(map3[1], p), dot(map3[2], p)})
	}
	return testCell(t, s.Type, s.Degrees, points)
}

// straightNodes returns the nodes of the straight cell: the parametric coordinates, but
// for a pyramid and for shapes that have none.
func straightNodes(s *Shape) (nodes [][3]float64) {
	if s.row.family == prism {
		n := s.NodeCount / 2
		for i := range s.NodeCount {
			angle := 2 * math.Pi * float64(i%n) / float64(n)
			nodes = append(nodes, [3]float64{math.Cos(angle), math.Sin(angle), float64(i / n)})
		}
		return nodes
	}
	for _, p := range s.NodeCoordinates() {
		if s.row.unit.folded {
			p[0], p[1] = 0.5+(p[0]-0.5)*(1-p[2]), 0.5+(p[1]-0.5)*(1-p[2])
		}
		nodes = append(nodes, p)
	}
	return nodes
}

// The nodes of each face are those in the plane (or on the line) of its corners.
func TestFacesHaveAllNodesBetweenTheirCorners(t *testing.T) {
	for _, s := range interpolating(t) {
		nodes := straightNodes(s)
		for f, face := range s.Faces() {
			corners := s.FaceCorners()[f]
			if !reflect.DeepEqual(face[:len(corners)], corners) {
				t.Errorf("%s: face %v does not begin with its corners %v", label(s), face, corners)
			}
			has := map[int]bool{}
			for _, node := range face {
				has[node] = true
			}
			if len(has) != len(face) {
				t.Errorf("%s: face %v has a node twice", label(s), face)
			}
			first := nodes[corners[0]]
			across, along := nodes[corners[1]], nodes[corners[len(corners)-1]]
			add(&across, -1, first)
			add(&along, -1, first)
			normal := cross(across, along)
			if s.Dimension == 2 {
				normal = cross(across, [3]float64{0, 0, 1})
			}
			for node, place := range nodes {
				add(&place, -1, first)
				if on := math.Abs(dot(place, normal)) < 1e-12; on != has[node] {
					t.Errorf("%s: node %d and face %v: on it %v, listed %v", label(s), node, corners, on, has[node])
				}
			}
		}
	}
}

func TestFacesOfPolygons(t *testing.T) {
	for _, test := range []struct {
		cellType CellType
		count    int
		want     [][]int
	}{
		{Polygon, 4, [][]int{{0, 1}, {1, 2}, {2, 3}, {3, 0}}},
		{QuadraticPolygon, 6, [][]int{{0, 1, 3}, {1, 2, 4}, {2, 0, 5}}},
		{TriangleStrip, 5, [][]int{{0, 1}, {1, 3}, {3, 4}, {4, 2}, {2, 0}}},
		{TriangleStrip, 4, [][]int{{0, 1}, {1, 3}, {3, 2}, {2, 0}}},
		{Pixel, 4, [][]int{{0, 1}, {1, 3}, {3, 2}, {2, 0}}},
		{QuadraticTriangle, 6, [][]int{{0, 1, 3}, {1, 2, 4}, {2, 0, 5}}},
	} {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		if got := s.Faces(); !reflect.DeepEqual(got, test.want) {
			t.Errorf("%s: faces %v, want %v", label(s), got, test.want)
		}
	}
}
