package mesh

import (
	"fmt"
	"slices"
	"strings"
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
	form  closedForm
	order [8]uint8 // of the nodes in the closed form

	faces       func() [][]int
	faceCorners func() [][]int
	product     func() *Tabulation
	ringProduct func() *Tabulation
	measure     func() *Tabulation
	fine        func() *Tabulation
	atCorners   func() *Tabulation
}

// shapes holds the shapes made so far by their key.
var shapes sync.Map

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
	if err := row.checkCount(nodeCount); err != nil {
		return nil, err
	}
	key := shapeKey{cellType, nodeCount, degrees}
	if known, ok := shapes.Load(key); ok {
		return known.(*Shape), nil
	}
	known, _ := shapes.LoadOrStore(key, newShape(row, nodeCount, degrees))
	return known.(*Shape), nil
}

// checkCount reports a node count that cells of the type cannot have.
func (row *cellTypeRow) checkCount(nodeCount int) error {
	switch row.family {
	case middles:
		if want := len(row.unit.corners) + len(strings.Fields(row.middles)); nodeCount != want {
			return fmt.Errorf("%s (cell type %d) has %d nodes, needs %d", row.name, row.number, nodeCount, want)
		}
	}
	return nil
}

func newShape(row *cellTypeRow, nodeCount int, degrees [3]int) *Shape {
	s := &Shape{
		Type:        row.number,
		Name:        row.name,
		Dimension:   row.dimension,
		NodeCount:   nodeCount,
		CornerCount: nodeCount,
		Degrees:     degrees,
		Supported:   true,
		row:         row,
	}
	if row.unit != nil {
		s.CornerCount = len(row.unit.corners)
	}
	if row.family == middles {
		s.basis = middleBasis(row.unit, row.middles)
	}
	s.form, s.order = closedFormOf(s)
	s.faces = sync.OnceValue(s.findFaces)
	s.faceCorners = sync.OnceValue(s.findFaceCorners)
	s.product = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(2)) })
	s.ringProduct = sync.OnceValue(func() *Tabulation { return s.tabulate(s.integrandDegrees(3)) })
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
	if s.row.unit == nil {
		return nil
	}
	var faces [][]int
	for _, corners := range s.row.unit.faces {
		var face []int
		for _, number := range corners {
			face = append(face, int(number-'0'))
		}
		faces = append(faces, face)
	}
	return faces
}

// findFaces adds to the corners of each face the nodes between them.
func (s *Shape) findFaces() [][]int {
	faces := make([][]int, 0, len(s.faceCorners()))
	for _, corners := range s.faceCorners() {
		face := slices.Clone(corners)
		for node := s.CornerCount; node < s.NodeCount; node++ {
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
