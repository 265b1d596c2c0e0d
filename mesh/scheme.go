package mesh

import (
	"fmt"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// A Scheme says where the integration points of cells of one type lie, by the values of
// the cell's shape functions there.
type Scheme struct {
	Type    CellType
	Nodes   int
	Shapes  []float64 // for each point the value for each node
	Weights []float64 // of each point; all 0 where the file's writer did not know them
}

// Schemes has one scheme for each type of cell.
type Schemes []Scheme

// Points returns the number of points in a cell, 0 where the types differ in it.
func (s Schemes) Points() int {
	if len(s) == 0 || slices.ContainsFunc(s, func(other Scheme) bool { return len(other.Weights) != len(s[0].Weights) }) {
		return 0
	}
	return len(s[0].Weights)
}

// Tabulate returns the points and weights of a shape's cells. Weights are scaled to the
// measure of the unit cell. Where the file has none, they are those of the interpolatory
// rule: exact for the polynomials of which there are as many as points, which for Gauss
// points are Gauss's weights (P. J. Davis, P. Rabinowitz, Methods of Numerical
// Integration, 1984, section 2.1, from memory). Errors: a shape without scheme, points
// that are none of the shape, weights that the points do not determine.
func (s Schemes) Tabulate(shape *Shape) (*Tabulation, error) {
	for i := range s {
		scheme := &s[i]
		own, err := ShapeOf(scheme.Type, scheme.Nodes, [3]int{})
		if err != nil || own != shape {
			continue
		}
		return scheme.tabulate(shape)
	}
	return nil, fmt.Errorf("the file describes no integration points for a %s of %d nodes", shape.Name, shape.NodeCount)
}

func (s *Scheme) tabulate(shape *Shape) (*Tabulation, error) {
	if shape.basis == nil || shape.basis.unit.folded {
		return nil, fmt.Errorf("integration points of a %s cannot be told from its shape functions; use its values on cells or points", shape.Name)
	}
	const within = 1e-6 // shape functions may be written as float32 or with few digits
	t := &Tabulation{Weights: slices.Clone(s.Weights)}
	for q := range s.Weights {
		var point [3]float64
		for k, node := range shape.NodeCoordinates() {
			add(&point, s.Shapes[q*s.Nodes+k], node)
		}
		t.Points = append(t.Points, point)
	}
	shape.tabulateAt(t)
	for i, value := range t.Values {
		if difference := value - s.Shapes[i]; !(difference <= within && difference >= -within) {
			return nil, fmt.Errorf("the integration scheme's shape functions are not those of a %s: %g at point %d, need %g", shape.Name, s.Shapes[i], i/s.Nodes, value)
		}
	}
	var unit, sum float64
	for _, weight := range shape.MeasureRule().Weights {
		unit += weight
	}
	if !slices.ContainsFunc(t.Weights, func(weight float64) bool { return weight != 0 }) {
		t.Weights = shape.interpolatoryWeights(t.Points)
	}
	for _, weight := range t.Weights {
		sum += weight
	}
	if !(sum > 0) {
		return nil, fmt.Errorf("the file gives no weights for the %d integration points of a %s, and the points alone do not tell them; state rule = \"gauss 3x3\"", len(s.Weights), shape.Name)
	}
	for q := range t.Weights {
		t.Weights[q] *= unit / sum
	}
	return t, nil
}

// interpolatoryWeights returns the weights that integrate exactly all polynomials of some
// degree in each simplex of the unit cell; nil where no degree has as many as there are
// points, where the points lie badly, or where a weight would not be positive.
func (s *Shape) interpolatoryWeights(points [][3]float64) []float64 {
	n := len(points)
	for degree := 0; ; degree++ {
		powers := s.powers(degree)
		if len(powers) > n {
			return nil
		}
		if len(powers) < n {
			continue
		}
		exact := s.tabulate([3]int{degree, degree, degree})
		matrix, moments := mat.NewDense(n, n, nil), mat.NewVecDense(n, nil)
		for row, power := range powers {
			for q, point := range points {
				matrix.Set(row, q, powerProduct(power, point))
			}
			var moment float64
			for q, point := range exact.Points {
				moment += exact.Weights[q] * powerProduct(power, point)
			}
			moments.SetVec(row, moment)
		}
		var weights mat.VecDense
		if weights.SolveVec(matrix, moments) != nil || mat.Min(&weights) <= 0 {
			return nil
		}
		return weights.RawVector().Data
	}
}

// powers lists the exponents of the polynomials up to a degree in each simplex of the
// unit cell.
func (s *Shape) powers(degree int) [][3]int {
	all := [][3]int{{}}
	axis := 0
	for _, dimension := range s.basis.unit.simplices {
		var next [][3]int
		for _, power := range all {
			next = appendPowers(next, power, axis, dimension, degree)
		}
		all, axis = next, axis+dimension
	}
	return all
}

// appendPowers appends the exponents whose sum over the given axes is at most the degree.
func appendPowers(to [][3]int, power [3]int, axis, axes, degree int) [][3]int {
	if axes == 0 {
		return append(to, power)
	}
	for exponent := range degree + 1 {
		power[axis] = exponent
		to = appendPowers(to, power, axis+1, axes-1, degree-exponent)
	}
	return to
}

// powerProduct returns the product of the coordinates to their powers.
func powerProduct(power [3]int, point [3]float64) float64 {
	product := 1.0
	for axis, exponent := range power {
		for range exponent {
			product *= point[axis]
		}
	}
	return product
}
