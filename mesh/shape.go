package mesh

import (
	"fmt"
	"slices"
	"sync"
)

// A Shape is a cell type with its number of nodes and, for Lagrange and Bézier cells,
// its degrees. Equal shapes are one: their pointers are equal. A Shape does not change
// and may be used by many goroutines.
type Shape struct {
	Type        CellType
	Name        string
	Dimension   int // 0 to 3
	NodeCount   int
	CornerCount int    // the corners are the first nodes
	Degrees     [3]int // by r, s, t of Lagrange and Bézier cells, else zero
	Supported   bool   // whether cells of this shape have a measure here
	Reason      string // why not

	row   *cellTypeRow
	basis *basis // nil where nothing is interpolated
	piece *Shape // what poly-lines, strips and polygons are made of
	form  closedForm
	order [8]uint8 // of the nodes in the closed form

	faces       func() [][]int
	faceCorners func() [][]int
	product     func() *Tabulation
	ringProduct func() *Tabulation
	moment      func() *Tabulation
	measure     func() *Tabulation
	fine        func() *Tabulation
	atCorners   func() *Tabulation
}

// shapes holds the shapes made so far.
var shapes = struct {
	sync.RWMutex
	byKey map[shapeKey]*Shape
}{byKey: map[shapeKey]*Shape{}}

type shapeKey struct {
	cellType  CellType
	nodeCount int
	degrees   [3]int
}

// ShapeOf returns the shape of a cell type with so many nodes. The degrees by r, s, t
// count for Lagrange and Bézier quadrilaterals, hexahedra and wedges; where they are
// zero they follow from the node count, as they do in all other cells. Cells that are
// recognised but not computed get a shape that is not Supported.
//
// Errors: a number that VTK does not assign, and a node count that the type cannot have.
func ShapeOf(cellType CellType, nodeCount int, degrees [3]int) (*Shape, error) {
	row := cellTypeRows[cellType]
	if row == nil {
		return nil, fmt.Errorf("cell type %d is none of VTK's", uint8(cellType))
	}
	key := shapeKey{cellType: cellType, nodeCount: nodeCount}
	isLattice := row.family == lagrange || row.family == bezier
	err := row.checkCount(nodeCount)
	if err == nil && isLattice {
		key.degrees, isLattice, err = row.latticeDegrees(nodeCount, degrees)
	}
	if err != nil {
		return nil, err
	}
	shapes.RLock()
	s := shapes.byKey[key]
	shapes.RUnlock()
	if s != nil {
		return s, nil
	}
	made := newShape(row, key, isLattice)
	shapes.Lock()
	defer shapes.Unlock()
	if s := shapes.byKey[key]; s != nil { // made by another in the meantime
		return s, nil
	}
	shapes.byKey[key] = made
	return made, nil
}

func newShape(row *cellTypeRow, key shapeKey, isLattice bool) *Shape {
	s := &Shape{
		Type:        row.number,
		Name:        row.name,
		Dimension:   row.dimension,
		NodeCount:   key.nodeCount,
		CornerCount: key.nodeCount,
		Degrees:     key.degrees,
		row:         row,
		Reason:      row.reason,
	}
	switch {
	case row.unit != nil:
		s.CornerCount = len(row.unit.corners)
	case row.number == QuadraticPolygon:
		s.CornerCount = key.nodeCount / 2
	}
	switch degree := max(key.degrees[0], key.degrees[1], key.degrees[2]); {
	case degree > MaxDegree:
		s.Reason = fmt.Sprintf("its degree %d is above %d", degree, MaxDegree)
	case isLattice:
		s.basis = latticeBasis(row.unit, row.family, row.unit.simplexDegrees(key.degrees))
	case row.unit != nil:
		s.basis = middleBasis(row.unit, row.middles)
	}
	s.Supported = s.Reason == ""
	s.piece = pieceShape(row)
	s.form, s.order = closedFormOf(s)
	s.faces = sync.OnceValue(s.findFaces)
	s.faceCorners = sync.OnceValue(s.findFaceCorners)
	s.product = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(2)) })
	s.ringProduct = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(3)) })
	s.moment = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(1)) })
	s.measure = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(0)) })
	s.fine = sync.OnceValue(func() *Tabulation { return s.tabulate([3]int{fineDegree, fineDegree, fineDegree}) })
	s.atCorners = sync.OnceValue(s.tabulateCorners)
	return s
}

// Interpolates reports whether the shape has functions that interpolate fields from
// its nodes. Polygons, polyhedra, strips, prisms and loose points have none.
func (s *Shape) Interpolates() bool { return s.basis != nil }

// Values writes the value of each node's shape function at a place in parametric
// coordinates. For a Bézier cell these are the Bernstein polynomials of its control
// points, without rational weights.
func (s *Shape) Values(r [3]float64, to []float64) {
	s.basis.values(r, to[:s.NodeCount])
}

// Derivatives writes the derivatives of the shape functions by r, s and t.
func (s *Shape) Derivatives(r [3]float64, to [][3]float64) {
	s.basis.derivatives(r, to[:s.NodeCount])
}

// NodeCoordinates returns the parametric coordinates of the nodes; nil where the shape
// does not interpolate. All lie in [0, 1]; those of a pyramid are on the cube whose face
// t = 1 is its apex.
func (s *Shape) NodeCoordinates() [][3]float64 {
	if s.basis == nil {
		return nil
	}
	return slices.Clone(s.basis.places)
}

// Faces returns the local numbers of the nodes on each face of a solid or edge of a
// plane cell: the corners in cyclic order, outwards where the Jacobian determinant is
// positive, then the others. It is nil for lines, for points, and for polyhedra, whose
// cells have their own.
func (s *Shape) Faces() [][]int { return s.faces() }

// FaceCorners returns the corners of each of Faces alone.
func (s *Shape) FaceCorners() [][]int { return s.faceCorners() }

func (s *Shape) findFaceCorners() [][]int {
	var faces [][]int
	switch n := s.CornerCount; s.row.family {
	case fan:
		for i := range n {
			faces = append(faces, []int{i, (i + 1) % n})
		}
	case strip: // along one side and back along the other
		faces = append(faces, []int{0, 1})
		for i := 1; i+2 < n; i += 2 {
			faces = append(faces, []int{i, i + 2})
		}
		if n%2 == 1 {
			faces = append(faces, []int{n - 2, n - 1})
		} else {
			faces = append(faces, []int{n - 1, n - 2})
		}
		for i := (n - 1) / 2 * 2; i >= 2; i -= 2 {
			faces = append(faces, []int{i, i - 2})
		}
	case prism:
		n /= 2
		bottom, top := []int{}, []int{}
		for i := range n {
			bottom, top = append(bottom, (n-i)%n), append(top, n+i)
			faces = append(faces, []int{i, (i + 1) % n, n + (i+1)%n, n + i})
		}
		faces = append(faces, bottom, top)
	default:
		if s.row.unit == nil {
			return nil
		}
		for _, corners := range s.row.unit.faces {
			var face []int
			for _, number := range corners {
				face = append(face, int(number-'0'))
			}
			faces = append(faces, face)
		}
	}
	return faces
}

// findFaces adds to the corners of each face the nodes between them.
func (s *Shape) findFaces() [][]int {
	if s.basis == nil && s.row.number != QuadraticPolygon {
		return s.faceCorners()
	}
	var faces [][]int
	for i, corners := range s.faceCorners() {
		face := slices.Clone(corners)
		if s.basis == nil {
			face = append(face, s.CornerCount+i)
		}
		for node := s.CornerCount; s.basis != nil && node < s.NodeCount; node++ {
			if s.onFace(node, corners) {
				face = append(face, node)
			}
		}
		faces = append(faces, face)
	}
	return faces
}

// onFace reports whether a node lies on the face of the corners: all barycentric
// coordinates that vanish at them vanish at the node too.
func (s *Shape) onFace(node int, corners []int) bool {
	unit := s.row.unit
	at := unit.barycentric(s.basis.places[node])
	var spanned [maxBarycentric]bool
	for _, corner := range corners {
		for k, exponent := range unit.corner(corner) {
			spanned[k] = spanned[k] || exponent > 0
		}
	}
	for k := range spanned {
		if !spanned[k] && at[k] > 1e-9 {
			return false
		}
	}
	return true
}

// tabulateCorners returns the shape functions at the corners, without the apex of a
// pyramid. It is no quadrature rule.
func (s *Shape) tabulateCorners() *Tabulation {
	t := &Tabulation{Points: slices.Clone(s.basis.places[:s.CornerCount])}
	if s.row.unit.folded {
		t.Points = t.Points[:s.CornerCount-1]
	}
	s.tabulateAt(t)
	return t
}
