package mesh

import "math"

// A Tabulation is a quadrature rule over a unit cell with the values and derivatives of
// the shape functions at its points. Weights are positive and points lie inside; the
// weights add up to the unit cell's measure. It is shared and must not be changed.
type Tabulation struct {
	Points      [][3]float64 // parametric coordinates
	Weights     []float64
	Values      []float64    // NodeCount for each point
	Derivatives [][3]float64 // by r, s, t; NodeCount for each point
}

// ProductRule returns the rule that integrates exactly the product of two fields, each
// interpolated from the nodes, over a cell of any geometry: the degree of the Jacobian
// determinant is dimension × p - d in a simplex of dimension d and functions of degree
// p, and each field adds p. It is nil where the shape does not interpolate.
//
// With rational weights nothing is polynomial, and [Shape.FineRule] comes closest.
func (s *Shape) ProductRule() *Tabulation { return s.product() }

// RingProductRule returns the rule for the product of two fields times the radius.
func (s *Shape) RingProductRule() *Tabulation { return s.ringProduct() }

// MeasureRule returns the rule for the Jacobian determinant alone.
func (s *Shape) MeasureRule() *Tabulation { return s.measure() }

// FineRule returns a rule for what is no polynomial: areas and lengths of curved cells
// in space, cells with rational weights. It has 12 points in each direction.
func (s *Shape) FineRule() *Tabulation { return s.fine() }

// fineDegree is the degree of FineRule: that of 12 points of Gauss and Legendre.
const fineDegree = 23

// integrandDegrees returns the degree in each simplex of the Jacobian determinant times
// so many fields.
func (s *Shape) integrandDegrees(fields int) (degrees [3]int) {
	if s.basis == nil {
		return degrees
	}
	for i, dimension := range s.basis.unit.simplices {
		degrees[i] = (s.Dimension+fields)*s.basis.degrees[i] - dimension
	}
	return degrees
}

// tabulate returns the rule that is exact to the degree in each simplex.
func (s *Shape) tabulate(degrees [3]int) *Tabulation {
	if s.basis == nil {
		return nil
	}
	t := &Tabulation{Points: [][3]float64{{}}, Weights: []float64{1}}
	axis := 0
	for i, dimension := range s.basis.unit.simplices {
		t.multiply(simplexRule(dimension, degrees[i]), axis)
		axis += dimension
	}
	s.tabulateAt(t)
	return t
}

// tabulateAt fills in the shape functions at the points.
func (s *Shape) tabulateAt(t *Tabulation) {
	n := s.NodeCount
	t.Values = make([]float64, n*len(t.Points))
	t.Derivatives = make([][3]float64, n*len(t.Points))
	for i, point := range t.Points {
		s.Values(point, t.Values[n*i:n*(i+1)])
		s.Derivatives(point, t.Derivatives[n*i:n*(i+1)])
	}
}

// multiply makes the product with a rule whose coordinates begin at the axis.
func (t *Tabulation) multiply(r rule, axis int) {
	var points [][3]float64
	var weights []float64
	for j := range r.weights {
		for i, point := range t.Points {
			copy(point[axis:], r.points[j][:r.dimension])
			points = append(points, point)
			weights = append(weights, t.Weights[i]*r.weights[j])
		}
	}
	t.Points, t.Weights = points, weights
}

// A rule holds points and weights over the unit simplex of a dimension.
type rule struct {
	dimension int
	points    [][3]float64
	weights   []float64
}

// simplexRule returns a rule that is exact for polynomials to the degree over the unit
// line, triangle or tetrahedron: the table's where it has one with fewer points, else a
// product of Gauss and Jacobi's rules on the cube that is folded into the simplex.
//
// Source: A. H. Stroud, Approximate Calculation of Multiple Integrals (1971), conical
// product rules.
func simplexRule(dimension, degree int) rule {
	n := max(degree, 0)/2 + 1
	folded := [...]int{1, n, n * n, n * n * n}[dimension]
	for i := range symmetricRules {
		symmetric := &symmetricRules[i]
		if symmetric.dimension == dimension && symmetric.degree >= degree {
			if r := symmetric.rule(); len(r.weights) < folded {
				return r
			}
			break
		}
	}
	r := rule{dimension: dimension, points: [][3]float64{{}}, weights: []float64{1}}
	// The last coordinate first: each further one shrinks those before it.
	for axis := dimension - 1; axis >= 0; axis-- {
		places, weights := gaussJacobi(n, dimension-1-axis)
		r.fold(axis, places, weights)
	}
	return r
}

// fold multiplies a rule with one along the axis towards which it shrinks to a point.
func (r *rule) fold(axis int, places, weights []float64) {
	var points [][3]float64
	var products []float64
	for j, place := range places {
		for i, point := range r.points {
			for k := axis + 1; k < r.dimension; k++ {
				point[k] *= 1 - place
			}
			point[axis] = place
			points = append(points, point)
			products = append(products, r.weights[i]*weights[j])
		}
	}
	r.points, r.weights = points, products
}

// gaussJacobi returns the n points and weights in rising order that integrate
// (1-x)^alpha f(x) over [0, 1] exactly for polynomials f to degree 2n-1. With alpha 0
// this is Gauss and Legendre's rule.
//
// Newton's method on the Jacobi polynomial P_n^(alpha,0), the roots found before
// divided out.
//
// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, 22.7.1,
// 22.8.1 and 25.4.33.
func gaussJacobi(n, alpha int) (places, weights []float64) {
	places, weights = make([]float64, n), make([]float64, n)
	for i := range n {
		x := -math.Cos(math.Pi * (float64(i) + 0.5) / float64(n))
		if i > 0 {
			x = (x + 2*places[i-1] - 1) / 2 // between the last root and the guess
		}
		for range 100 {
			value, slope := jacobi(n, alpha, x)
			found := 0.0
			for _, place := range places[:i] {
				found += 1 / (x - (2*place - 1))
			}
			step := value / (slope - float64(found*value))
			x -= step
			if math.Abs(step) < 1e-16 {
				break
			}
		}
		_, slope := jacobi(n, alpha, x)
		places[i] = (1 + x) / 2
		weights[i] = 1 / ((1 - float64(x*x)) * slope * slope)
	}
	return places, weights
}

// jacobi returns value and slope of P_n^(alpha,0) at x in (-1, 1), n > 0.
func jacobi(n, alpha int, x float64) (value, slope float64) {
	a := float64(alpha)
	before, value := 1.0, (a+float64((a+2)*x))/2
	for i := 2; i <= n; i++ {
		k := float64(i)
		c := 2*k + a
		one := (c - 1) * (float64(c*(c-2)*x) + float64(a*a))
		two := 2 * (k + a - 1) * (k - 1) * c
		before, value = value, (float64(one*value)-float64(two*before))/(2*k*(k+a)*(c-2))
	}
	k := float64(n)
	c := 2*k + a
	slope = float64(k*(a-float64(c*x))*value) + float64(2*(k+a)*k*before)
	return value, slope / (c * (1 - float64(x*x)))
}
