package mesh

import "fmt"

// A GaussRule is a product rule of Gauss and Legendre by which results at integration
// points are numbered: so many points along each parametric direction.
type GaussRule struct {
	Counts []int
	// FirstIsSlowest: the first parametric direction varies slowest from point to
	// point, instead of fastest.
	FirstIsSlowest bool
}

// Points returns the number of points of the rule.
func (r *GaussRule) Points() int {
	points := 1
	for _, count := range r.Counts {
		points *= count
	}
	return points
}

// Tabulate returns the rule over the unit cell of a shape, its points in the order in
// which results are numbered. Errors: a shape that is no line, quadrilateral or
// hexahedron, or of another dimension than the rule.
func (r *GaussRule) Tabulate(s *Shape) (*Tabulation, error) {
	if s.basis == nil || len(s.basis.unit.simplices) != s.Dimension {
		return nil, fmt.Errorf("a product rule of Gauss points does not fit a %s, only lines, quadrilaterals and hexahedra", s.Name)
	}
	if len(r.Counts) != s.Dimension {
		return nil, fmt.Errorf("the rule has %d directions, a %s has %d", len(r.Counts), s.Name, s.Dimension)
	}
	t := &Tabulation{}
	for number := range r.Points() {
		point, weight := [3]float64{}, 1.0
		for step := range r.Counts {
			axis := step
			if r.FirstIsSlowest {
				axis = len(r.Counts) - 1 - step
			}
			places, weights := gaussJacobi(r.Counts[axis], 0)
			point[axis], weight = places[number%r.Counts[axis]], weight*weights[number%r.Counts[axis]]
			number /= r.Counts[axis]
		}
		t.Points, t.Weights = append(t.Points, point), append(t.Weights, weight)
	}
	s.tabulateAt(t)
	return t, nil
}
