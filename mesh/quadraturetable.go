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

// symmetricRules lists the rules of each dimension in rising order of degree. Those of
// degree 2 are in closed form; the others were found by solving the moment equations of
// their orbits in 45 digits, which are 0 to the last.
//
// Sources: A. H. Stroud, Approximate Calculation of Multiple Integrals (1971), T2:2-1 and
// T3:2-1. The orbits of the triangle's degrees 4, 6 and 8 are those of D. A. Dunavant,
// Int. J. Numer. Methods Eng. 21 (1985) 1129-1148, of the tetrahedron's degree 7 those of
// F. D. Witherden, P. E. Vincent, Comput. Math. Appl. 69 (2015) 1232-1241 (from memory).
var symmetricRules = []symmetricRule{
	{2, 2, []orbit{{1. / 3, []float64{2. / 3, 1. / 6, 1. / 6}}}},
	{2, 4, []orbit{
		{0.1099517436553218708, []float64{0.8168475729804585139, 0.0915762135097707430, 0.0915762135097707430}},
		{0.2233815896780114718, []float64{0.1081030181680702335, 0.4459484909159648902, 0.4459484909159648902}},
	}},
	{2, 6, []orbit{
		{0.1167862757263793683, []float64{0.5014265096581791425, 0.2492867451709104287, 0.2492867451709104287}},
		{0.0508449063702068188, []float64{0.8738219710169955468, 0.0630890144915022266, 0.0630890144915022266}},
		{0.0828510756183735708, []float64{0.6365024991213986683, 0.3103524510337843934, 0.0531450498448169453}},
	}},
	{2, 8, []orbit{
		{0.1443156076777871721, []float64{1. / 3, 1. / 3, 1. / 3}},
		{0.0950916342672846193, []float64{0.0814148234145536942, 0.4592925882927231807, 0.4592925882927231807}},
		{0.1032173705347182446, []float64{0.6588613844964795740, 0.1705693077517602130, 0.1705693077517602130}},
		{0.0324584976231980793, []float64{0.8989055433659380867, 0.0505472283170309775, 0.0505472283170309775}},
		{0.0272303141744349927, []float64{0.0083947774099576052, 0.2631128296346381124, 0.7284923929554042443}},
	}},
	{3, 2, []orbit{{1. / 4, []float64{1 - 3*tetraDegree2, tetraDegree2, tetraDegree2, tetraDegree2}}}},
	{3, 5, []orbit{
		{0.1126879257180158495, []float64{0.0673422422100981716, 0.3108859192633006141, 0.3108859192633006141, 0.3108859192633006141}},
		{0.0734930431163619557, []float64{0.7217942490673263656, 0.0927352503108912207, 0.0927352503108912207, 0.0927352503108912207}},
		{0.0425460207770814655, []float64{0.0455037041256496494, 0.0455037041256496494, 0.4544962958743503645, 0.4544962958743503645}},
	}},
	{3, 7, []orbit{
		{0.0954852894641308458, []float64{1. / 4, 1. / 4, 1. / 4, 1. / 4}},
		{0.0423295812099670279, []float64{0.0528965506653916034, 0.3157011497782027942, 0.3157011497782027942, 0.3157011497782027942}},
		{0.0318969278328575800, []float64{0.4495101774016036500, 0.4495101774016036500, 0.0504898225983963708, 0.0504898225983963708}},
		{0.0081107708299033420, []float64{0.1466388138184849532, 0.8108302410985485098, 0.0212654725414832477, 0.0212654725414832477}},
		{0.0372071307283346198, []float64{0.0471607003609978842, 0.5751716375870000730, 0.1888338310260010422, 0.1888338310260010422}},
	}},
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
