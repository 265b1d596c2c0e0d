package mesh

// Rational Bézier cells: R_i = w_i B_i / Σ w_j B_j.
//
// Source: G. Farin, Curves and Surfaces for CAGD, chapter on rational Bézier curves;
// the derivatives by the quotient rule.

// Values returns the values of the cell's shape functions at a point of the rule: the
// rule's own, or, where the cell has rational weights, those worked out into the room
// given, which holds NodeCount numbers.
func (c *Cell) Values(t *Tabulation, point int, room []float64) []float64 {
	n := c.Shape.NodeCount
	values := t.Values[n*point : n*(point+1)]
	if !c.IsRational() {
		return values
	}
	whole := 0.0
	for i, value := range values {
		room[i] = value * c.weight(i)
		whole += room[i]
	}
	for i := range values {
		room[i] /= whole
	}
	return room[:n]
}

// rationalPlace returns the place where the Bernstein polynomials have these values.
func (c *Cell) rationalPlace(values []float64) [3]float64 {
	var sum [3]float64
	whole := 0.0
	for i, value := range values {
		value *= c.weight(i)
		whole += value
		add(&sum, value, c.node(i))
	}
	return scaled(sum, 1/whole)
}

// rationalJacobian returns the derivatives of the coordinates by r, s and t.
func (c *Cell) rationalJacobian(values []float64, derivatives [][3]float64) (xr, yr, zr, xs, ys, zs, xt, yt, zt float64) {
	place := c.rationalPlace(values)
	whole := 0.0
	var columns [3][3]float64
	for i, value := range values {
		x, y, z := c.point(i)
		weight := c.weight(i)
		whole += float64(value * weight)
		for axis := range columns {
			slope := derivatives[i][axis] * weight
			columns[axis][0] += float64(slope * (x - place[0]))
			columns[axis][1] += float64(slope * (y - place[1]))
			columns[axis][2] += float64(slope * (z - place[2]))
		}
	}
	r, s, t := &columns[0], &columns[1], &columns[2]
	return r[0] / whole, r[1] / whole, r[2] / whole, s[0] / whole, s[1] / whole, s[2] / whole, t[0] / whole, t[1] / whole, t[2] / whole
}

// rationalDerivatives writes the derivatives of the rational functions by r, s and t.
func (c *Cell) rationalDerivatives(values []float64, derivatives [][3]float64, to [][3]float64) {
	whole := 0.0
	var slope [3]float64
	for i, value := range values {
		weight := c.weight(i)
		whole += float64(value * weight)
		for axis := range slope {
			slope[axis] += float64(derivatives[i][axis] * weight)
		}
	}
	for i, value := range values {
		weight := c.weight(i) / whole
		for axis := range slope {
			to[i][axis] = weight * (derivatives[i][axis] - float64(value*slope[axis]/whole))
		}
	}
}
