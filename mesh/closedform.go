package mesh

import "math"

// A closedForm says which formula gives a linear cell's measure without quadrature.
type closedForm uint8

const (
	noClosedForm closedForm = iota
	lineForm
	triangleForm
	quadForm
	tetrahedronForm
	hexahedronForm
	wedgeForm
	pyramidForm
)

// closedFormOf returns the formula of a shape, and the order in which it takes the
// nodes: that of the quadrilateral for plane cells, of the hexahedron for solid ones. A
// wedge is a hexahedron with one face folded into an edge, a pyramid one with a face
// folded into a point; the maps are the same, and so are the volumes.
func closedFormOf(s *Shape) (closedForm, [8]uint8) {
	if s.basis == nil || s.NodeCount != s.CornerCount {
		return noClosedForm, [8]uint8{}
	}
	switch s.row.unit {
	case &line:
		return lineForm, [8]uint8{0, 1}
	case &triangle:
		return triangleForm, [8]uint8{0, 1, 2}
	case &quad:
		return quadForm, [8]uint8{0, 1, 2, 3}
	case &pixel:
		return quadForm, [8]uint8{0, 1, 3, 2}
	case &tetrahedron:
		return tetrahedronForm, [8]uint8{0, 1, 2, 3}
	case &hexahedron:
		return hexahedronForm, [8]uint8{0, 1, 2, 3, 4, 5, 6, 7}
	case &voxel:
		return hexahedronForm, [8]uint8{0, 1, 3, 2, 4, 5, 7, 6}
	case &wedge:
		return wedgeForm, [8]uint8{0, 1, 2, 2, 3, 4, 5, 5}
	}
	return pyramidForm, [8]uint8{0, 1, 2, 3, 4, 4, 4, 4}
}

// cornerDeterminant is the determinant of the vectors from one node to three others.
func (c *Cell) cornerDeterminant(at, first, second, third int) float64 {
	x, y, z := c.point(at)
	ax, ay, az := c.point(first)
	bx, by, bz := c.point(second)
	cx, cy, cz := c.point(third)
	return determinant(ax-x, ay-y, az-z, bx-x, by-y, bz-z, cx-x, cy-y, cz-z)
}

// wedgeOrientation judges the six corners of a linear wedge.
func (c *Cell) wedgeOrientation() Orientation {
	least, greatest := math.Inf(1), math.Inf(-1)
	for i := range 3 {
		next, last := (i+1)%3, (i+2)%3
		bottom := c.cornerDeterminant(i, next, last, i+3)
		top := c.cornerDeterminant(i+3, last+3, next+3, i)
		least, greatest = min(least, bottom, top), max(greatest, bottom, top)
	}
	return orientationOf(least, greatest)
}

// tetrahedronVolume returns a sixth of the determinant of three edges.
func (c *Cell) tetrahedronVolume() float64 {
	return c.cornerDeterminant(0, 1, 2, 3) / 6
}

// hexahedronVolume returns the volume of the trilinear map of eight nodes and the
// orientation of its corners, where those folded into one count as zero: of a pyramid's
// the four of the base decide.
//
// All in plain variables: written with small functions of vectors it takes twice as long.
//
// Source: J. Grandy, Efficient computation of volume of hexahedral cells, Lawrence
// Livermore National Laboratory UCRL-ID-128886 (1997), equation 17: three determinants
// of the vectors from two opposite corners.
func (c *Cell) hexahedronVolume() (volume float64, orientation Orientation) {
	order := &c.Shape.order
	x0, y0, z0 := c.point(int(order[0]))
	x1, y1, z1 := c.point(int(order[1]))
	x2, y2, z2 := c.point(int(order[2]))
	x3, y3, z3 := c.point(int(order[3]))
	x4, y4, z4 := c.point(int(order[4]))
	x5, y5, z5 := c.point(int(order[5]))
	x6, y6, z6 := c.point(int(order[6]))
	x7, y7, z7 := c.point(int(order[7]))

	// The edges: rAB along r from node A to node B, and so on.
	r01x, r01y, r01z := x1-x0, y1-y0, z1-z0
	r32x, r32y, r32z := x2-x3, y2-y3, z2-z3
	r45x, r45y, r45z := x5-x4, y5-y4, z5-z4
	r76x, r76y, r76z := x6-x7, y6-y7, z6-z7
	s03x, s03y, s03z := x3-x0, y3-y0, z3-z0
	s12x, s12y, s12z := x2-x1, y2-y1, z2-z1
	s47x, s47y, s47z := x7-x4, y7-y4, z7-z4
	s56x, s56y, s56z := x6-x5, y6-y5, z6-z5
	t04x, t04y, t04z := x4-x0, y4-y0, z4-z0
	t15x, t15y, t15z := x5-x1, y5-y1, z5-z1
	t26x, t26y, t26z := x6-x2, y6-y2, z6-z2
	t37x, t37y, t37z := x7-x3, y7-y3, z7-z3

	d0 := determinant(r01x, r01y, r01z, s03x, s03y, s03z, t04x, t04y, t04z)
	d1 := determinant(r01x, r01y, r01z, s12x, s12y, s12z, t15x, t15y, t15z)
	d2 := determinant(r32x, r32y, r32z, s12x, s12y, s12z, t26x, t26y, t26z)
	d3 := determinant(r32x, r32y, r32z, s03x, s03y, s03z, t37x, t37y, t37z)
	d4 := determinant(r45x, r45y, r45z, s47x, s47y, s47z, t04x, t04y, t04z)
	d5 := determinant(r45x, r45y, r45z, s56x, s56y, s56z, t15x, t15y, t15z)
	d6 := determinant(r76x, r76y, r76z, s56x, s56y, s56z, t26x, t26y, t26z)
	d7 := determinant(r76x, r76y, r76z, s47x, s47y, s47z, t37x, t37y, t37z)
	if !(d0 > 0 && d1 > 0 && d2 > 0 && d3 > 0 && d4 > 0 && d5 > 0 && d6 > 0 && d7 > 0) {
		orientation = orientationOf(min(d0, d1, d2, d3, d4, d5, d6, d7), max(d0, d1, d2, d3, d4, d5, d6, d7))
	}

	// From corner 6 and its three neighbours to the corners opposite them.
	ax, ay, az := x6-x1, y6-y1, z6-z1
	bx, by, bz := x7-x0, y7-y0, z7-z0
	cx, cy, cz := x6-x3, y6-y3, z6-z3
	ex, ey, ez := x5-x0, y5-y0, z5-z0
	fx, fy, fz := x6-x4, y6-y4, z6-z4
	gx, gy, gz := x2-x0, y2-y0, z2-z0
	volume = (determinant(ax+bx, ay+by, az+bz, cx, cy, cz, gx, gy, gz) +
		determinant(bx, by, bz, cx+ex, cy+ey, cz+ez, fx, fy, fz) +
		determinant(ax, ay, az, ex, ey, ez, fx+gx, fy+gy, fz+gz)) / 12
	return volume, orientation
}

// linearPlaneArea returns the signed area of a linear plane cell in x and y and the least and
// greatest Jacobian determinant at its corners.
func (c *Cell) linearPlaneArea() (area, least, greatest float64) {
	order := &c.Shape.order
	x0, y0, _ := c.point(int(order[0]))
	x1, y1, _ := c.point(int(order[1]))
	x2, y2, _ := c.point(int(order[2]))
	if c.Shape.form == triangleForm {
		d := float64((x1-x0)*(y2-y0)) - float64((x2-x0)*(y1-y0))
		return d / 2, d, d
	}
	x3, y3, _ := c.point(int(order[3]))
	d0 := float64((x1-x0)*(y3-y0)) - float64((x3-x0)*(y1-y0))
	d1 := float64((x1-x0)*(y2-y1)) - float64((x2-x1)*(y1-y0))
	d2 := float64((x2-x3)*(y2-y1)) - float64((x2-x1)*(y2-y3))
	d3 := float64((x2-x3)*(y3-y0)) - float64((x3-x0)*(y2-y3))
	area = (float64((x2-x0)*(y3-y1)) - float64((x3-x1)*(y2-y0))) / 2
	return area, min(min(d0, d1), min(d2, d3)), max(max(d0, d1), max(d2, d3))
}

// maxFlatWarp is the largest angle between an edge of a quadrilateral and its mean plane
// at which it counts as flat. The area differs by the square of it.
const maxFlatWarp = 1e-8

// flatArea returns the area of a convex flat quadrilateral in space, and whether the cell
// is one.
func (c *Cell) flatArea() (area float64, isFlat bool) {
	var p [4][3]float64
	for i := range p {
		p[i] = c.node(int(c.Shape.order[i]))
	}
	across := cross(minus(p[2], p[0]), minus(p[3], p[1]))
	size := norm(across)
	edge := minus(p[1], p[0])
	if !(size > 0 && math.Abs(dot(edge, across)) <= maxFlatWarp*norm(edge)*size) {
		return 0, false
	}
	for i := range p {
		next, last := minus(p[(i+1)%4], p[i]), minus(p[(i+3)%4], p[i])
		if !(dot(cross(next, last), across) >= 0) {
			return 0, false
		}
	}
	return size / 2, true
}
