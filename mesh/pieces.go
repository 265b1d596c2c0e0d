package mesh

import "math"

// Poly-lines, triangle strips and polygons are integrated piece by piece: over the
// lines of a poly-line, the triangles of a strip, and for a polygon over the triangles
// between its first corner and each edge. Those of a polygon count with the sign that
// they have against the whole, so that it may be concave. The edges of a quadratic
// polygon are curved, and the triangles have six nodes; two of them have two corners in
// one point, and the area between a curved edge and its chord.

// A piece is one of them: its nodes and the rule of its shape.
type piece struct {
	nodes [6][3]float64
	count int
	rule  *Tabulation
}

// pieceShape returns the shape of the pieces of a type, nil where it has none.
func pieceShape(row *cellTypeRow) *Shape {
	cellType, nodeCount := Line, 2
	switch {
	case row.family == chain:
	case row.number == QuadraticPolygon:
		cellType, nodeCount = QuadraticTriangle, 6
	case row.family == fan, row.family == strip:
		cellType, nodeCount = Triangle, 3
	default:
		return nil
	}
	s, _ := ShapeOf(cellType, nodeCount, [3]int{}) // all three are in the table
	return s
}

// pieceCount returns the number of pieces of the cell; 0 where it is of one piece.
func (c *Cell) pieceCount() int {
	switch c.Shape.row.family {
	case chain:
		return c.Shape.NodeCount - 1
	case strip:
		return c.Shape.NodeCount - 2
	case fan:
		return c.Shape.CornerCount
	}
	return 0
}

// piece sets the piece to number i of the cell.
func (c *Cell) piece(i int, to *piece) {
	s := c.Shape
	to.count, to.rule = s.piece.NodeCount, s.piece.ProductRule()
	switch s.row.family {
	case chain:
		to.nodes[0], to.nodes[1] = c.node(i), c.node(i+1)
	case strip: // every second triangle is turned
		to.nodes[0], to.nodes[1], to.nodes[2] = c.node(i+i%2), c.node(i+1-i%2), c.node(i+2)
	case fan:
		apex, from, behind := c.node(0), c.node(i), c.node((i+1)%s.CornerCount)
		to.nodes[0], to.nodes[1], to.nodes[2] = apex, from, behind
		if to.count == 6 {
			to.nodes[3], to.nodes[4], to.nodes[5] = between(apex, from), c.node(s.CornerCount+i), between(behind, apex)
		}
	}
}

// element returns a point of the rule and what belongs to it of a line as a vector
// along it, of a surface as a vector across it.
func (p *piece) element(point int) (place, vector [3]float64) {
	var byR, byS [3]float64
	for i, node := range p.nodes[:p.count] {
		k := p.count*point + i
		add(&place, p.rule.Values[k], node)
		add(&byR, p.rule.Derivatives[k][0], node)
		add(&byS, p.rule.Derivatives[k][1], node)
	}
	if p.count == 2 {
		return place, scaled(byR, p.rule.Weights[point])
	}
	return place, scaled(cross(byR, byS), p.rule.Weights[point])
}

// vector returns the sum of the elements.
func (p *piece) vector() (sum [3]float64) {
	for i := range p.rule.Weights {
		_, v := p.element(i)
		add(&sum, 1, v)
	}
	return sum
}

// pieceVector returns the sum of all elements of the cell: across a polygon, as long as
// its area.
func (c *Cell) pieceVector() (sum [3]float64) {
	var p piece
	for i := range c.pieceCount() {
		c.piece(i, &p)
		add(&sum, 1, p.vector())
	}
	return sum
}

// pieceMeasure returns the length or area in space.
func (c *Cell) pieceMeasure() float64 {
	if c.Shape.row.family == fan {
		return norm(c.pieceVector())
	}
	var p piece
	sum := 0.0
	for i := range c.pieceCount() {
		c.piece(i, &p)
		sum += norm(p.vector())
	}
	return sum
}

// pieceCentroid returns the centroid of the length or area in space.
func (c *Cell) pieceCentroid() [3]float64 {
	var across [3]float64
	if c.Shape.row.family == fan {
		across = c.pieceVector()
	}
	var p piece
	var first [3]float64
	whole := 0.0
	for i := range c.pieceCount() {
		c.piece(i, &p)
		for point := range p.rule.Weights {
			place, v := p.element(point)
			element := norm(v)
			if c.Shape.row.family == fan {
				element = dot(v, across)
			}
			whole += element
			add(&first, element, place)
		}
	}
	return c.centroidOf(first, whole)
}

// piecePlaneArea returns the signed area in x and y. The triangles of a strip have
// corners to judge; a polygon may turn either way at its corners.
func (c *Cell) piecePlaneArea() (area float64, orientation Orientation) {
	var p piece
	least, greatest := math.Inf(1), math.Inf(-1)
	for i := range c.pieceCount() {
		c.piece(i, &p)
		part := p.vector()[2]
		area += part
		least, greatest = min(least, part), max(greatest, part)
	}
	if c.Shape.row.family == fan {
		least, greatest = area, area
	}
	return area, orientationOf(least, greatest)
}

// pieceRing returns the integral of the radius over the signed area in x and y, and its
// first moments.
func (c *Cell) pieceRing(axisX bool) (whole float64, first [3]float64) {
	var p piece
	for i := range c.pieceCount() {
		c.piece(i, &p)
		for point := range p.rule.Weights {
			place, v := p.element(point)
			element := v[2] * radius(place, axisX)
			whole += element
			add(&first, element, place)
		}
	}
	return whole, first
}
