package mesh

import "math"

// A Cell is a view of one cell of a chunk, for one worker. Its methods allocate nothing,
// but for working memory that polyhedra leave in it, and do their arithmetic always in
// the same order.
type Cell struct {
	Shape *Shape
	// Points holds x y z of each point of the piece, Nodes the positions of the
	// cell's own in it.
	Points []float64
	Nodes  []int32
	// Faces is a polyhedron's: the number of faces, then for each the number of its
	// nodes and the nodes, as positions in Points.
	Faces []int32
	// RationalWeights has one number for each point of the piece, or is nil. Only
	// Bézier cells look at it.
	RationalWeights []float64

	faces faceList // working memory
}

// An Orientation tells what the Jacobian determinants at a cell's corners have in
// common. Values below 1e-12 of the largest count as zero and as neither sign.
type Orientation uint8

// The orientations.
const (
	Regular  Orientation = iota
	Mirrored             // none is positive
	Tangled              // the signs differ
)

// orientationOf judges the least and the greatest determinant at the corners.
func orientationOf(least, greatest float64) Orientation {
	zero := 1e-12 * max(-least, greatest)
	switch {
	case least >= -zero:
		return Regular
	case greatest <= zero:
		return Mirrored
	}
	return Tangled
}

// point returns the coordinates of a node.
func (c *Cell) point(node int) (x, y, z float64) {
	p := c.Points[3*int(c.Nodes[node]):][:3]
	return p[0], p[1], p[2]
}

// node returns the coordinates of a node as a vector.
func (c *Cell) node(node int) [3]float64 {
	x, y, z := c.point(node)
	return [3]float64{x, y, z}
}

// Middle returns the mean of the cell's points.
func (c *Cell) Middle() (middle [3]float64) {
	for i := range c.Nodes {
		add(&middle, 1, c.node(i))
	}
	return scaled(middle, 1/float64(len(c.Nodes)))
}

// IsRational reports whether the cell's shape functions carry weights of its own.
func (c *Cell) IsRational() bool {
	return c.RationalWeights != nil && c.Shape.row.family == bezier
}

// weight returns the rational weight of a node.
func (c *Cell) weight(node int) float64 { return c.RationalWeights[c.Nodes[node]] }

// Place returns where a point of the rule lies in the cell.
func (c *Cell) Place(t *Tabulation, point int) (place [3]float64) {
	n := c.Shape.NodeCount
	values := t.Values[n*point : n*(point+1)]
	if c.IsRational() {
		return c.rationalPlace(values)
	}
	for i, value := range values {
		add(&place, value, c.node(i))
	}
	return place
}

// jacobian returns the derivatives of the coordinates by r, s and t at a point of the
// rule.
func (c *Cell) jacobian(t *Tabulation, point int) (xr, yr, zr, xs, ys, zs, xt, yt, zt float64) {
	n := c.Shape.NodeCount
	derivatives := t.Derivatives[n*point : n*(point+1)]
	if c.IsRational() {
		return c.rationalJacobian(t.Values[n*point:n*(point+1)], derivatives)
	}
	for i := range derivatives {
		d := &derivatives[i]
		x, y, z := c.point(i)
		xr += float64(d[0] * x)
		yr += float64(d[0] * y)
		zr += float64(d[0] * z)
		xs += float64(d[1] * x)
		ys += float64(d[1] * y)
		zs += float64(d[1] * z)
		xt += float64(d[2] * x)
		yt += float64(d[2] * y)
		zt += float64(d[2] * z)
	}
	return
}

// determinant is that of three vectors.
func determinant(ax, ay, az, bx, by, bz, cx, cy, cz float64) float64 {
	return float64(ax*(float64(by*cz)-float64(bz*cy))) -
		float64(ay*(float64(bx*cz)-float64(bz*cx))) +
		float64(az*(float64(bx*cy)-float64(by*cx)))
}

// jacobianDeterminant returns that of a solid cell, or of a plane one in x and y.
func (c *Cell) jacobianDeterminant(t *Tabulation, point int) float64 {
	xr, yr, zr, xs, ys, zs, xt, yt, zt := c.jacobian(t, point)
	if c.Shape.Dimension == 2 {
		return float64(xr*ys) - float64(xs*yr)
	}
	return determinant(xr, yr, zr, xs, ys, zs, xt, yt, zt)
}

// stretch returns the length or area in space per parametric length or area, for a
// solid the Jacobian determinant.
func (c *Cell) stretch(t *Tabulation, point int) float64 {
	xr, yr, zr, xs, ys, zs, xt, yt, zt := c.jacobian(t, point)
	switch c.Shape.Dimension {
	case 1:
		return norm([3]float64{xr, yr, zr})
	case 2:
		return norm(cross([3]float64{xr, yr, zr}, [3]float64{xs, ys, zs}))
	}
	return determinant(xr, yr, zr, xs, ys, zs, xt, yt, zt)
}

// cornerOrientation judges the Jacobian determinants at the corners. The apex of a
// pyramid, where it vanishes, is not among them.
func (c *Cell) cornerOrientation() Orientation {
	if c.Shape.form == wedgeForm && !c.IsRational() {
		return c.wedgeOrientation()
	}
	return c.tabulatedOrientation()
}

// tabulatedOrientation judges the corners of a cell of any shape that interpolates.
func (c *Cell) tabulatedOrientation() Orientation {
	t := c.Shape.atCorners()
	least, greatest := math.Inf(1), math.Inf(-1)
	for i := range t.Points {
		d := c.jacobianDeterminant(t, i)
		least, greatest = min(least, d), max(greatest, d)
	}
	return orientationOf(least, greatest)
}

// sense returns -1 for a wedge that is numbered the other way round, else 1. Both ways
// are lawful.
func (c *Cell) sense() float64 {
	if c.Shape.row.unit == &wedge && c.cornerOrientation() == Mirrored {
		return -1
	}
	return 1
}

// VolumeElements writes the weight times the signed Jacobian determinant at each point
// of the rule, for a solid cell. They add up to the signed volume of [Cell.Volume]; a
// lawful wedge of either order has positive ones.
func (c *Cell) VolumeElements(t *Tabulation, to []float64) {
	sense := c.sense()
	for i, weight := range t.Weights {
		to[i] = float64(weight*c.jacobianDeterminant(t, i)) * sense
	}
}

// PlaneElements writes the weight times the signed Jacobian determinant at each point
// of the rule, for a plane cell in x and y.
func (c *Cell) PlaneElements(t *Tabulation, to []float64) {
	for i, weight := range t.Weights {
		to[i] = weight * c.jacobianDeterminant(t, i)
	}
}

// RingElements writes PlaneElements times 2πr: a plane cell turned about the y axis, or
// about the x axis.
func (c *Cell) RingElements(t *Tabulation, axisX bool, to []float64) {
	c.PlaneElements(t, to)
	for i := range t.Weights {
		to[i] *= 2 * math.Pi * radius(c.Place(t, i), axisX)
	}
}

// radius is x where the axis of symmetry is y, and y where it is x.
func radius(place [3]float64, axisX bool) float64 {
	if axisX {
		return place[1]
	}
	return place[0]
}

// Gradients writes the derivatives of the shape functions by x, y and z at a point of
// the rule, for a plane cell in x and y (z: 0) or a solid one. It returns the Jacobian
// determinant of the parametric coordinates as they are; it is negative in a mirrored
// cell and in a wedge that is numbered the other way round, where the derivatives are
// true nevertheless. Where it is 0 they are infinite or not a number.
func (c *Cell) Gradients(t *Tabulation, point int, to [][3]float64) (jacobianDeterminant float64) {
	xr, yr, zr, xs, ys, zs, xt, yt, zt := c.jacobian(t, point)
	if c.Shape.Dimension == 2 {
		zr, zs, xt, yt, zt = 0, 0, 0, 0, 1
	}
	d := determinant(xr, yr, zr, xs, ys, zs, xt, yt, zt)
	// The rows of the inverse are r, s, t by x, y, z.
	rx, ry, rz := (float64(ys*zt)-float64(zs*yt))/d, (float64(zs*xt)-float64(xs*zt))/d, (float64(xs*yt)-float64(ys*xt))/d
	sx, sy, sz := (float64(yt*zr)-float64(zt*yr))/d, (float64(zt*xr)-float64(xt*zr))/d, (float64(xt*yr)-float64(yt*xr))/d
	tx, ty, tz := (float64(yr*zs)-float64(zr*ys))/d, (float64(zr*xs)-float64(xr*zs))/d, (float64(xr*ys)-float64(yr*xs))/d
	n := c.Shape.NodeCount
	derivatives := t.Derivatives[n*point : n*(point+1)]
	if c.IsRational() {
		c.rationalDerivatives(t.Values[n*point:n*(point+1)], derivatives, to)
		derivatives = to
	}
	for i := range n {
		nr, ns, nt := derivatives[i][0], derivatives[i][1], derivatives[i][2]
		to[i] = [3]float64{
			float64(nr*rx) + float64(ns*sx) + float64(nt*tx),
			float64(nr*ry) + float64(ns*sy) + float64(nt*ty),
			float64(nr*rz) + float64(ns*sz) + float64(nt*tz),
		}
	}
	return d
}

// Bounds returns the box that holds the cell's nodes.
func (c *Cell) Bounds() Bounds {
	bounds := emptyBounds()
	for _, node := range c.Nodes {
		bounds.add(c.Points[3*int(node):][:3])
	}
	return bounds
}
