package mesh

import (
	"math"
	"slices"
)

// A symmetricRule is a rule over a triangle or tetrahedron that does not change when
// the corners are exchanged. All weights are positive and all points inside.
type symmetricRule struct {
	dimension, degree int
	orbits            []orbit
}

// An orbit is the set of points whose barycentric coordinates are the same numbers in
// any order. Their common weight is in units of the simplex's measure.
type orbit struct {
	weight      float64
	coordinates []float64
}

// symmetricRules lists the rules of each dimension in rising order of degree.
var symmetricRules = []symmetricRule{
	// Source: A. H. Stroud, Approximate Calculation of Multiple Integrals (1971),
	// T2:2-1 and T3:2-1.
	{2, 2, []orbit{{1. / 3, []float64{2. / 3, 1. / 6, 1. / 6}}}},
	{3, 2, []orbit{{1. / 4, []float64{1 - 3*tetraDegree2, tetraDegree2, tetraDegree2, tetraDegree2}}}},
}

// tetraDegree2 is (5 - √5)/20.
var tetraDegree2 = (5 - math.Sqrt(5)) / 20

// rule writes out the points of the orbits.
func (s *symmetricRule) rule() rule {
	r := rule{dimension: s.dimension}
	measure := [...]float64{1, 1, 1. / 2, 1. / 6}[s.dimension]
	for _, orbit := range s.orbits {
		coordinates := slices.Clone(orbit.coordinates)
		slices.Sort(coordinates)
		for more := true; more; more = nextPermutation(coordinates) {
			var point [3]float64
			copy(point[:], coordinates[1:])
			r.points = append(r.points, point)
			r.weights = append(r.weights, orbit.weight*measure)
		}
	}
	return r
}

// nextPermutation puts the values into the next order and reports whether there was one.
func nextPermutation(values []float64) bool {
	i := len(values) - 2
	for i >= 0 && values[i] >= values[i+1] {
		i--
	}
	if i < 0 {
		return false
	}
	j := len(values) - 1
	for values[j] <= values[i] {
		j--
	}
	values[i], values[j] = values[j], values[i]
	slices.Reverse(values[i+1:])
	return true
}
