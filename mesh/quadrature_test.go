package mesh

import (
	"fmt"
	"math"
	"testing"
)

func factorial(n int) float64 {
	f := 1.0
	for i := 2; i <= n; i++ {
		f *= float64(i)
	}
	return f
}

// monomials returns the exponents of r, s, t whose sum is the degree.
func monomials(dimension, degree int) (all [][3]int) {
	for i := 0; i <= degree; i++ {
		switch dimension {
		case 1:
			if i == degree {
				all = append(all, [3]int{i})
			}
		case 2:
			all = append(all, [3]int{i, degree - i})
		case 3:
			for j := 0; i+j <= degree; j++ {
				all = append(all, [3]int{i, j, degree - i - j})
			}
		}
	}
	return all
}

// integrate applies a rule to a monomial.
func (r *rule) integrate(m [3]int) float64 {
	sum := 0.0
	for i, p := range r.points {
		product := r.weights[i]
		for axis, exponent := range m {
			product *= math.Pow(p[axis], float64(exponent))
		}
		sum += product
	}
	return sum
}

// worst returns the largest relative error of a rule over the monomials of a degree:
// over the unit simplex ∫ rⁱ sʲ tᵏ = i! j! k! / (i+j+k+dimension)!.
func (r *rule) worst(degree int) (worst float64) {
	for _, m := range monomials(r.dimension, degree) {
		want := factorial(m[0]) * factorial(m[1]) * factorial(m[2]) / factorial(degree+r.dimension)
		worst = max(worst, math.Abs(r.integrate(m)/want-1))
	}
	return worst
}

func TestSimplexRulesAreExactToTheirDegreeAndNoFurther(t *testing.T) {
	check := func(name string, r rule, degree int) {
		t.Helper()
		for d := 0; d <= degree; d++ {
			if worst := r.worst(d); worst > 2e-14 {
				t.Errorf("%s: degree %d is off by %.2g", name, d, worst)
			}
		}
		if worst := r.worst(degree + 1); worst < 1e-12 {
			t.Errorf("%s: degree %d is exact too (%.2g)", name, degree+1, worst)
		}
		for i, p := range r.points {
			rest := 1 - p[0] - p[1] - p[2]
			if r.weights[i] <= 0 || p[0] <= 0 || r.dimension > 1 && p[1] <= 0 || r.dimension > 2 && p[2] <= 0 || rest <= 0 {
				t.Errorf("%s: point %v with weight %g is not inside or not positive", name, p, r.weights[i])
			}
		}
	}
	for i := range symmetricRules {
		s := &symmetricRules[i]
		check(fmt.Sprintf("table: dimension %d degree %d", s.dimension, s.degree), s.rule(), s.degree)
	}
	for dimension := 1; dimension <= 3; dimension++ {
		for degree := range 13 { // asked for each degree; exact to the odd one above or to the table's
			r := simplexRule(dimension, degree)
			exact := degree
			for r.worst(exact+1) < 1e-12 {
				exact++
			}
			check(fmt.Sprintf("dimension %d degree %d, %d points", dimension, degree, len(r.weights)), r, exact)
			if n := degree/2 + 1; len(r.weights) > [...]int{1, n, n * n, n * n * n}[dimension] {
				t.Errorf("dimension %d degree %d: %d points, a folded product has fewer", dimension, degree, len(r.weights))
			}
		}
	}
}

// The numbers of points that a common cell costs.
func TestPointCountsOfProductRules(t *testing.T) {
	for _, test := range []struct {
		cellType             CellType
		count                int
		product, ring, whole int
	}{
		{Line, 2, 2, 2, 1},
		{QuadraticLine, 3, 3, 4, 1},
		{Triangle, 3, 3, 4, 1},
		{QuadraticTriangle, 6, 12, 16, 3},
		{Quad, 4, 4, 9, 1},
		{QuadraticQuad, 8, 16, 25, 4},
		{Tetrahedron, 4, 4, 8, 1},
		{QuadraticTetrahedron, 10, 35, 125, 8},
		{Hexahedron, 8, 27, 27, 8},
		{QuadraticHexahedron, 20, 125, 216, 27},
		{Wedge, 6, 12, 18, 2},
		{QuadraticWedge, 15, 80, 216, 18},
		{Pyramid, 5, 27, 27, 8},
		{QuadraticPyramid, 13, 125, 216, 27},
	} {
		s, err := ShapeOf(test.cellType, test.count, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		got := [3]int{len(s.ProductRule().Weights), len(s.RingProductRule().Weights), len(s.MeasureRule().Weights)}
		if want := [3]int{test.product, test.ring, test.whole}; got != want {
			t.Errorf("%s: %v points for product, ring product and measure, want %v", label(s), got, want)
		}
	}
}

// n points of Gauss and Legendre integrate x^(2n-1) over [0, 1] exactly and x^2n
// not.
func TestGaussLegendre(t *testing.T) {
	for n := 1; n <= 25; n++ {
		places, weights := gaussJacobi(n, 0)
		integrate := func(exponent int) float64 {
			sum := 0.0
			for i := range places {
				sum += weights[i] * math.Pow(places[i], float64(exponent))
			}
			return sum * float64(exponent+1)
		}
		for exponent := range 2 * n {
			if got := integrate(exponent); math.Abs(got-1) > 1e-14 {
				t.Errorf("%d points: ∫ x^%d is off by %.2g", n, exponent, got-1)
			}
		}
		if got := integrate(2 * n); n <= 10 && math.Abs(got-1) < 1e-13 {
			t.Errorf("%d points: ∫ x^%d is exact too", n, 2*n)
		}
		for i := 1; i < n; i++ {
			if places[i] <= places[i-1] {
				t.Errorf("%d points: place %d is not above the one before", n, i)
			}
		}
	}
}

// monomials over the unit triangle, the unit tetrahedron and the pyramid with base
// [-1,1]² and apex (0,0,1).
func TestMonomialsOverSimplicesAndPyramid(t *testing.T) {
	for _, test := range []struct {
		dimension int
		monomial  [3]int
		want      float64
	}{
		{2, [3]int{2, 2}, 1. / 180},
		{2, [3]int{4, 0}, 1. / 30},
		{3, [3]int{1, 1, 1}, 1. / 720},
		{3, [3]int{2, 2, 0}, 1. / 1260},
		{3, [3]int{4, 0, 0}, 1. / 210},
	} {
		r := simplexRule(test.dimension, 4)
		if got := r.integrate(test.monomial); !near(got, test.want, 1e-14) {
			t.Errorf("∫ of exponents %v over dimension %d = %.17g, want %.17g", test.monomial, test.dimension, got, test.want)
		}
	}
	c := testCell(t, Pyramid, [3]int{}, [][3]float64{{-1, -1, 0}, {1, -1, 0}, {1, 1, 0}, {-1, 1, 0}, {0, 0, 1}})
	rule := c.Shape.FineRule()
	elements := make([]float64, len(rule.Weights))
	c.VolumeElements(rule, elements)
	for _, test := range []struct {
		monomial [3]int
		want     float64
	}{
		{[3]int{0, 0, 0}, 4. / 3},
		{[3]int{2, 0, 0}, 4. / 15},
		{[3]int{0, 0, 1}, 1. / 3},
		{[3]int{2, 2, 0}, 4. / 63},
		{[3]int{2, 0, 2}, 4. / 315},
		{[3]int{0, 0, 4}, 4. / 105},
	} {
		got := 0.0
		for i, element := range elements {
			place := c.Place(rule, i)
			for axis, exponent := range test.monomial {
				element *= math.Pow(place[axis], float64(exponent))
			}
			got += element
		}
		if !near(got, test.want, 1e-14) {
			t.Errorf("∫ of exponents %v over the pyramid = %.17g, want %.17g", test.monomial, got, test.want)
		}
	}
}
