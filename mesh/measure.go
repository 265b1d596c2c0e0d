package mesh

import "math"

// Volume returns the volume of a solid cell, negative where it is mirrored, and its
// orientation. It is exact for every map of polynomials. A wedge is lawful in both
// orders: numbered the other way round it has a positive volume and is Regular.
func (c *Cell) Volume() (volume float64, orientation Orientation) {
	s := c.Shape
	switch {
	case s.form == tetrahedronForm && !c.IsRational():
		volume = c.tetrahedronVolume()
		return volume, orientationOf(volume, volume)
	case s.form == hexahedronForm && !c.IsRational():
		volume, least, greatest := c.hexahedronVolume(&s.order)
		return volume, orientationOf(least, greatest)
	case s.form == wedgeForm && !c.IsRational():
		volume, _, _ = c.hexahedronVolume(&s.order)
		orientation = c.wedgeOrientation()
	case s.form == pyramidForm:
		volume, _, _ = c.hexahedronVolume(&s.order)
		return volume, c.pyramidOrientation()
	default:
		volume = c.integratedDeterminant()
		orientation = c.cornerOrientation()
	}
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
	if form := c.Shape.form; (form == triangleForm || form == quadForm) && !c.IsRational() {
		area, least, greatest := c.planeArea()
		return area, orientationOf(least, greatest)
	}
	return c.integratedDeterminant(), c.cornerOrientation()
}

// RingVolume returns the volume ∫ 2πr dA of a plane cell turned about the y axis, or
// about the x axis, signed as PlaneArea; the smallest radius of its points; and its
// orientation.
func (c *Cell) RingVolume(axisX bool) (volume, smallestRadius float64, orientation Orientation) {
	smallestRadius = c.smallestRadius(axisX)
	t := c.productRule()
	for i, weight := range t.Weights {
		element := float64(weight * c.jacobianDeterminant(t, i))
		volume += float64(element * radius(c.Place(t, i), axisX))
	}
	_, orientation = c.PlaneArea()
	return 2 * math.Pi * volume, smallestRadius, orientation
}

func (c *Cell) smallestRadius(axisX bool) float64 {
	smallest := math.Inf(1)
	for i := range c.Nodes {
		x, y, z := c.point(i)
		smallest = min(smallest, radius([3]float64{x, y, z}, axisX))
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
// its sign, except where the cell is Tangled. Points have 0.
func (c *Cell) Measure() float64 {
	switch c.Shape.Dimension {
	case 0:
		return 0
	case 3:
		volume, orientation := c.Volume()
		if orientation == Tangled {
			return volume
		}
		return math.Abs(volume)
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
		return c.Shape.ProductRule()
	}
	return c.Shape.FineRule()
}

// Centroid returns the centroid of the length, area in space or volume of a cell; that
// of a cell without measure is the mean of its points.
func (c *Cell) Centroid() [3]float64 {
	if c.Shape.Dimension == 0 {
		return c.Middle()
	}
	t := c.spaceRule()
	var first [3]float64
	whole := 0.0
	for i, weight := range t.Weights {
		element := float64(weight * c.stretch(t, i))
		place := c.Place(t, i)
		whole += element
		for axis := range first {
			first[axis] += float64(element * place[axis])
		}
	}
	return c.centroidOf(first, whole)
}

// RingCentroid returns the centroid of the volume of a plane cell turned about the y
// axis, or about the x axis, in the plane of the cell.
func (c *Cell) RingCentroid(axisX bool) [3]float64 {
	t := c.productRule()
	var first [3]float64
	whole := 0.0
	for i, weight := range t.Weights {
		place := c.Place(t, i)
		element := float64(weight * c.jacobianDeterminant(t, i) * radius(place, axisX))
		whole += element
		for axis := range first {
			first[axis] += float64(element * place[axis])
		}
	}
	return c.centroidOf(first, whole)
}

// centroidOf divides the first moments by the measure, where that is possible.
func (c *Cell) centroidOf(first [3]float64, whole float64) [3]float64 {
	if whole == 0 {
		return c.Middle()
	}
	return [3]float64{first[0] / whole, first[1] / whole, first[2] / whole}
}
