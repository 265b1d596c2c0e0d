package mesh

// A unitCell is a product of simplices: of lines, a triangle, a tetrahedron. Its
// parametric coordinates r, s, t are those of the simplices in a row. Each simplex
// has one more barycentric coordinate than its dimension, the first of which is what
// the others lack to 1:
//
//	hexahedron 1-r, r, 1-s, s, 1-t, t    wedge 1-r-s, r, s, 1-t, t
//
// Each face of the cell is where one of them is zero. A pyramid is the hexahedron
// whose face t = 1 is folded into its apex.
type unitCell struct {
	simplices []int
	// corners names for each corner its vertex in each simplex. An apex has none in
	// the first two.
	corners []string
	// faces lists the corners of the faces, for a plane cell of the edges, in cyclic
	// order, outwards where the Jacobian determinant is positive.
	faces []string
	// lattice lists the parts of the cell in the order in which a lattice's nodes are
	// numbered, each by its part of each simplex; nil where the cell is one simplex
	// of two dimensions or more.
	lattice []string
	folded  bool // into an apex
}

var (
	line = unitCell{
		simplices: []int{1},
		corners:   []string{"0", "1"},
		lattice:   []string{"0", "1", "-"},
	}
	triangle = unitCell{
		simplices: []int{2},
		corners:   []string{"0", "1", "2"},
		faces:     []string{"01", "12", "20"},
	}
	quad = unitCell{
		simplices: []int{1, 1},
		corners:   []string{"00", "10", "11", "01"},
		faces:     []string{"01", "12", "23", "30"},
		lattice:   []string{"00", "10", "11", "01", "-0", "1-", "-1", "0-", "--"},
	}
	pixel = unitCell{
		simplices: []int{1, 1},
		corners:   []string{"00", "10", "01", "11"},
		faces:     []string{"01", "13", "32", "20"},
	}
	tetrahedron = unitCell{
		simplices: []int{3},
		corners:   []string{"0", "1", "2", "3"},
		faces:     []string{"021", "013", "123", "032"},
	}
	hexahedron = unitCell{
		simplices: []int{1, 1, 1},
		corners:   []string{"000", "100", "110", "010", "001", "101", "111", "011"},
		faces:     []string{"0473", "1265", "0154", "3762", "0321", "4567"},
		lattice: []string{
			"000", "100", "110", "010", "001", "101", "111", "011",
			"-00", "1-0", "-10", "0-0", "-01", "1-1", "-11", "0-1", "00-", "10-", "11-", "01-",
			"0--", "1--", "-0-", "-1-", "--0", "--1", "---",
		},
	}
	voxel = unitCell{
		simplices: []int{1, 1, 1},
		corners:   []string{"000", "100", "010", "110", "001", "101", "011", "111"},
		faces:     []string{"0462", "1375", "0154", "2673", "0231", "4576"},
	}
	wedge = unitCell{
		simplices: []int{2, 1},
		corners:   []string{"00", "10", "20", "01", "11", "21"},
		faces:     []string{"021", "345", "0143", "1254", "2035"},
		lattice: []string{
			"00", "10", "20", "01", "11", "21",
			"a0", "b0", "c0", "a1", "b1", "c1", "0-", "1-", "2-",
			"-0", "-1", "a-", "b-", "c-", "--",
		},
	}
	pyramid = unitCell{
		simplices: []int{1, 1, 1},
		corners:   []string{"000", "100", "110", "010", "  1"},
		faces:     []string{"0321", "014", "124", "234", "304"},
		folded:    true,
	}
)

// maxBarycentric is the largest number of barycentric coordinates of a unit cell.
const maxBarycentric = 6

// A power holds an exponent for each barycentric coordinate of a unit cell. It stands
// for the product of those powers, and for the place where that is largest.
type power [maxBarycentric]uint8

// A term is a multiple of such a product.
type term struct {
	factor float64
	power  power
}

// corner returns the power of the first degree that belongs to a corner.
func (u *unitCell) corner(number int) power {
	var p power
	first := 0
	for i, dimension := range u.simplices {
		if vertex := u.corners[number][i]; vertex != ' ' {
			p[first+int(vertex-'0')] = 1
		}
		first += dimension + 1
	}
	return p
}

// middle returns the function of the node in the middle of the corners listed, and the
// node's place. The function is the product of lowest degree that vanishes on all edges
// and faces that lack one of the corners.
func (u *unitCell) middle(corners string) ([3]float64, []term) {
	var p power
	for _, number := range corners {
		for k, exponent := range u.corner(int(number - '0')) {
			p[k] |= exponent
		}
	}
	if u.folded {
		return foldedMiddle(p)
	}
	return u.place(p), []term{{1, p}}
}

// foldedMiddle returns the function of a middle node of a pyramid and its place.
//
// Towards the apex a function must lose its dependence on r and s, for which it takes
// powers of 1-t. The second terms are those of VTK's functions, without which the cell
// would be a different one; between nodal values they matter, at the nodes they do not.
//
// Source: VTK 9.1's interpolation functions of types 27 and 37, to which the bases made
// of these functions are equal (TestShapeFunctionsFollowVTK).
func foldedMiddle(p power) ([3]float64, []term) {
	inR, inS, apex := p[0]+p[1] == 2, p[2]+p[3] == 2, p[5] == 1
	inside := power{1, 1, 1, 1, 1, 1}
	place := pyramid.place(p)
	switch {
	case inR && inS && apex:
		place[2] = 0.25
	case inR == inS: // middle of the base, or of an edge to the apex
	case apex: // middle of a triangle
		p[4], inside[4] = 2, 2
		return pyramid.place(p), []term{{1, p}, {-2, inside}}
	default: // middle of a base edge
		p[4] = 2
		return place, []term{{1, p}, {2, inside}}
	}
	return place, []term{{1, p}}
}

// barycentric returns the barycentric coordinates of a place.
func (u *unitCell) barycentric(r [3]float64) [maxBarycentric]float64 {
	var b [maxBarycentric]float64
	k, axis := 0, 0
	for _, dimension := range u.simplices {
		rest := 1.0
		for i := range dimension {
			b[k+1+i] = r[axis+i]
			rest -= r[axis+i]
		}
		b[k] = rest
		k += dimension + 1
		axis += dimension
	}
	return b
}

// gradient turns slopes by the barycentric coordinates into the gradient by r, s, t.
func (u *unitCell) gradient(slopes *[maxBarycentric]float64) (g [3]float64) {
	k, axis := 0, 0
	for _, dimension := range u.simplices {
		for i := range dimension {
			g[axis+i] = slopes[k+1+i] - slopes[k]
		}
		k += dimension + 1
		axis += dimension
	}
	return g
}

// place returns the parametric coordinates where the product of powers is largest.
func (u *unitCell) place(p power) (r [3]float64) {
	k, axis := 0, 0
	for _, dimension := range u.simplices {
		sum := 0
		for _, exponent := range p[k : k+dimension+1] {
			sum += int(exponent)
		}
		for i := range dimension {
			if sum > 0 {
				r[axis+i] = float64(p[k+1+i]) / float64(sum)
			}
		}
		k += dimension + 1
		axis += dimension
	}
	return r
}

// degrees returns the degree of a product of powers in each simplex.
func (u *unitCell) degrees(p power) (degrees [3]int) {
	k := 0
	for i, dimension := range u.simplices {
		for _, exponent := range p[k : k+dimension+1] {
			degrees[i] += int(exponent)
		}
		k += dimension + 1
	}
	return degrees
}
