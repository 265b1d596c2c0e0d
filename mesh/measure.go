package mesh

import "math"

// Volume returns the volume of a solid cell, negative where it is mirrored, and its
// orientation. It is exact for every map of polynomials. A wedge is lawful in both
// orders: numbered the other way round it has a positive volume and is Regular. So has
// a polyhedron, NaN where its faces do not close; so have cells that are not Supported.
func (c *Cell) Volume() (volume float64, orientation Orientation) {
	s := c.Shape
	switch {
	case !s.Supported:
		return math.NaN(), Regular
	case s.row.family == polyhedral:
		volume, _ = c.faceMoments()
		return volume, Regular
	case s.row.family == prism:
		volume, _ = c.faceMoments()
		return volume, c.prismOrientation()
	}
	form := s.form
	if c.IsRational() {
		form = noClosedForm
	}
	switch form {
	case tetrahedronForm:
		volume = c.tetrahedronVolume()
		return volume, orientationOf(volume, volume)
	case hexahedronForm, pyramidForm:
		return c.hexahedronVolume()
	case wedgeForm:
		volume, _ = c.hexahedronVolume()
	default:
		volume = c.integratedDeterminant()
	}
	orientation = c.cornerOrientation()
	if s.row.unit == &wedge && orientation == Mirrored {
		return -volume, Regular
	}
	return volume, orientation
}

// measureRule is the rule for the cell's measure.
func (c *Cell) measureRule() *Tabulation {
	if c.IsRational() {
		return c.Shape.FineRule()
	}
	return c.Shape.MeasureRule()
}

// integratedDeterminant returns the integral of the Jacobian determinant.
func (c *Cell) integratedDeterminant() float64 {
	t := c.measureRule()
	sum := 0.0
	for i, weight := range t.Weights {
		sum += float64(weight * c.jacobianDeterminant(t, i))
	}
	return sum
}

// PlaneArea returns the signed area of a plane cell in x and y, positive where it turns
// from x to y, and its orientation.
func (c *Cell) PlaneArea() (area float64, orientation Orientation) {
	switch {
	case !c.Shape.Supported:
		return math.NaN(), Regular
	case c.pieceCount() > 0:
		return c.piecePlaneArea()
	}
	if form := c.Shape.form; (form == triangleForm || form == quadForm) && !c.IsRational() {
		area, least, greatest := c.linearPlaneArea()
		return area, orientationOf(least, greatest)
	}
	return c.integratedDeterminant(), c.cornerOrientation()
}

// RingVolume returns the volume ∫ 2πr dA of a plane cell turned about the y axis, or
// about the x axis, signed as PlaneArea; the smallest radius of its points; and its
// orientation.
func (c *Cell) RingVolume(axisX bool) (volume, smallestRadius float64, orientation Orientation) {
	smallestRadius = c.smallestRadius(axisX)
	volume, orientation = c.PlaneArea()
	switch {
	case !c.Shape.Supported:
		return volume, smallestRadius, orientation
	case c.pieceCount() > 0:
		volume, _ = c.pieceRing(axisX)
	default:
		t := c.productRule()
		volume = 0
		for i, weight := range t.Weights {
			element := weight * c.jacobianDeterminant(t, i)
			volume += float64(element * radius(c.Place(t, i), axisX))
		}
	}
	return 2 * math.Pi * volume, smallestRadius, orientation
}

func (c *Cell) smallestRadius(axisX bool) float64 {
	smallest := math.Inf(1)
	for i := range c.Nodes {
		smallest = min(smallest, radius(c.node(i), axisX))
	}
	return smallest
}

// productRule is the rule for the Jacobian determinant times two coordinates.
func (c *Cell) productRule() *Tabulation {
	if c.IsRational() {
		return c.Shape.FineRule()
	}
	return c.Shape.ProductRule()
}

// Measure returns the length, area in space or volume of a cell. A volume is without
// its sign, except where the cell is Tangled. Points have 0; cells that are not
// Supported have NaN.
func (c *Cell) Measure() float64 {
	switch {
	case c.Shape.Dimension == 0:
		return 0
	case !c.Shape.Supported:
		return math.NaN()
	case c.pieceCount() > 0:
		return c.pieceMeasure()
	case c.Shape.Dimension == 3:
		volume, orientation := c.Volume()
		if orientation == Tangled {
			return volume
		}
		return math.Abs(volume)
	case c.Shape.form == quadForm && !c.IsRational():
		if area, isFlat := c.flatArea(); isFlat {
			return area
		}
	}
	t := c.spaceRule()
	sum := 0.0
	for i, weight := range t.Weights {
		sum += float64(weight * c.stretch(t, i))
	}
	return sum
}

// spaceRule is the rule for lengths, areas in space and volumes times a coordinate.
// Those of lines and triangles are constant, those of other cells in space are no
// polynomials.
func (c *Cell) spaceRule() *Tabulation {
	switch {
	case c.IsRational():
		return c.Shape.FineRule()
	case c.Shape.Dimension == 3, c.Shape.form == lineForm, c.Shape.form == triangleForm:
		return c.Shape.moment()
	}
	return c.Shape.FineRule()
}

// Centroid returns the centroid of the length, area in space or volume of a cell; that
// of a cell without measure, or not Supported, is the mean of its points.
func (c *Cell) Centroid() [3]float64 {
	switch family := c.Shape.row.family; {
	case family == polyhedral, family == prism:
		volume, first := c.faceMoments()
		return c.centroidFromMiddle(first, volume)
	case c.pieceCount() > 0:
		return c.pieceCentroid()
	case c.Shape.basis == nil:
		return c.Middle()
	}
	t := c.spaceRule()
	var first [3]float64
	whole := 0.0
	for i, weight := range t.Weights {
		element := weight * c.stretch(t, i)
		whole += element
		add(&first, element, c.Place(t, i))
	}
	return c.centroidOf(first, whole)
}

// RingCentroid returns the centroid of the volume of a plane cell turned about the y
// axis, or about the x axis, in the plane of the cell.
func (c *Cell) RingCentroid(axisX bool) [3]float64 {
	if c.Shape.basis == nil {
		whole, first := c.pieceRing(axisX)
		return c.centroidOf(first, whole)
	}
	t := c.productRule()
	var first [3]float64
	whole := 0.0
	for i, weight := range t.Weights {
		place := c.Place(t, i)
		element := weight * c.jacobianDeterminant(t, i) * radius(place, axisX)
		whole += element
		add(&first, element, place)
	}
	return c.centroidOf(first, whole)
}

// centroidOf divides the first moments by the measure, where that is possible.
func (c *Cell) centroidOf(first [3]float64, whole float64) [3]float64 {
	if whole == 0 || math.IsNaN(whole) {
		return c.Middle()
	}
	return scaled(first, 1/whole)
}

// centroidFromMiddle is centroidOf for first moments about the cell's middle.
func (c *Cell) centroidFromMiddle(first [3]float64, whole float64) [3]float64 {
	centroid := c.Middle()
	if whole != 0 && !math.IsNaN(whole) {
		add(&centroid, 1/whole, first)
	}
	return centroid
}
