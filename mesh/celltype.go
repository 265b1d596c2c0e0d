package mesh

import (
	"fmt"
	"math"
	"strings"
)

// A CellType is VTK's number of a cell type.
type CellType uint8

// VTK's numbers of the cell types that files hold.
const (
	EmptyCell              CellType = 0
	Vertex                 CellType = 1
	PolyVertex             CellType = 2
	Line                   CellType = 3
	PolyLine               CellType = 4
	Triangle               CellType = 5
	TriangleStrip          CellType = 6
	Polygon                CellType = 7
	Pixel                  CellType = 8
	Quad                   CellType = 9
	Tetrahedron            CellType = 10
	Voxel                  CellType = 11
	Hexahedron             CellType = 12
	Wedge                  CellType = 13
	Pyramid                CellType = 14
	PentagonalPrism        CellType = 15
	HexagonalPrism         CellType = 16
	QuadraticLine          CellType = 21
	QuadraticTriangle      CellType = 22
	QuadraticQuad          CellType = 23
	QuadraticTetrahedron   CellType = 24
	QuadraticHexahedron    CellType = 25
	QuadraticWedge         CellType = 26
	QuadraticPyramid       CellType = 27
	BiquadraticQuad        CellType = 28
	TriquadraticHexahedron CellType = 29
	QuadraticLinearQuad    CellType = 30
	QuadraticLinearWedge   CellType = 31
	BiquadraticWedge       CellType = 32
	BiquadraticHexahedron  CellType = 33
	BiquadraticTriangle    CellType = 34
	CubicLine              CellType = 35
	QuadraticPolygon       CellType = 36
	TriquadraticPyramid    CellType = 37
	ConvexPointSet         CellType = 41
	Polyhedron             CellType = 42
	HigherOrderHexahedron  CellType = 67
	LagrangeCurve          CellType = 68
	LagrangeTriangle       CellType = 69
	LagrangeQuad           CellType = 70
	LagrangeTetrahedron    CellType = 71
	LagrangeHexahedron     CellType = 72
	LagrangeWedge          CellType = 73
	LagrangePyramid        CellType = 74
	BezierCurve            CellType = 75
	BezierTriangle         CellType = 76
	BezierQuad             CellType = 77
	BezierTetrahedron      CellType = 78
	BezierHexahedron       CellType = 79
	BezierWedge            CellType = 80
	BezierPyramid          CellType = 81
)

// A family is the machine that knows a cell type's nodes, functions and measure.
type family uint8

const (
	middles     family = iota // corners and the middles of edges, faces and the cell
	lagrange                  // nodes on a lattice of any degree
	bezier                    // control points on a lattice of any degree
	loosePoints               // points, without measure
	chain                     // lines in a row
	strip                     // triangles in a row
	fan                       // plane polygon: triangles about a corner
	prism                     // two polygons joined by quadrilaterals
	polyhedral                // bounded by polygons that the file lists
	unsupported               // recognised, but without functions and measure
)

// A cellTypeRow says what a cell type is.
type cellTypeRow struct {
	number CellType
	name   string
	family family
	unit   *unitCell // of the families with shape functions
	// middles lists the nodes after the corners, each by the corners in whose middle
	// it lies. For Lagrange cells it is their one variant that is no lattice.
	middles string
	variant int // the node count of that variant; not written in the table

	dimension   int    // that of the unit cell is not written in the table
	least, most int    // node counts; that of corners and middles is not written
	reason      string // why the type is unsupported
}

// many is the largest node count of cells that may have any.
const many = math.MaxInt32

// Lists of middles.
const (
	triangleMiddles = "01 12 20"
	quadMiddles     = "01 12 23 30"
	tetraMiddles    = "01 12 20 03 13 23"
	hexaMiddles     = "01 12 23 30 45 56 67 74 04 15 26 37"
	wedgeMiddles    = "01 12 20 34 45 53 03 14 25"
	pyramidMiddles  = "01 12 23 30 04 14 24 34"
	hexaSides       = " 0347 1256 0145 2367"
	wedgeSides      = " 0134 1245 0235"
)

// Reasons not to compute a cell.
const (
	noHull     = "the hull of its points is not computed"
	noClass    = "VTK reserves the number and defines no such cell"
	notInFiles = "VTK defines no nodes for it in files"
)

// cellTypes is what the program knows about cell types.
//
// Source: VTK's list of cell types (vtkCellType.h) and the documentation of its cell
// classes, release 9.1.
var cellTypes = [...]cellTypeRow{
	{number: EmptyCell, name: "empty cell", family: loosePoints},
	{number: Vertex, name: "vertex", family: loosePoints, least: 1, most: 1},
	{number: PolyVertex, name: "poly-vertex", family: loosePoints, least: 1, most: many},
	{number: Line, name: "line", unit: &line},
	{number: PolyLine, name: "poly-line", family: chain, dimension: 1, least: 2, most: many},
	{number: Triangle, name: "triangle", unit: &triangle},
	{number: TriangleStrip, name: "triangle strip", family: strip, dimension: 2, least: 3, most: many},
	{number: Polygon, name: "polygon", family: fan, dimension: 2, least: 3, most: many},
	{number: Pixel, name: "pixel", unit: &pixel},
	{number: Quad, name: "quadrilateral", unit: &quad},
	{number: Tetrahedron, name: "tetrahedron", unit: &tetrahedron},
	{number: Voxel, name: "voxel", unit: &voxel},
	{number: Hexahedron, name: "hexahedron", unit: &hexahedron},
	{number: Wedge, name: "wedge", unit: &wedge},
	{number: Pyramid, name: "pyramid", unit: &pyramid},
	{number: PentagonalPrism, name: "pentagonal prism", family: prism, dimension: 3, least: 10, most: 10},
	{number: HexagonalPrism, name: "hexagonal prism", family: prism, dimension: 3, least: 12, most: 12},
	{number: QuadraticLine, name: "quadratic line", unit: &line, middles: "01"},
	{number: QuadraticTriangle, name: "quadratic triangle", unit: &triangle, middles: triangleMiddles},
	{number: QuadraticQuad, name: "quadratic quadrilateral", unit: &quad, middles: quadMiddles},
	{number: QuadraticTetrahedron, name: "quadratic tetrahedron", unit: &tetrahedron, middles: tetraMiddles},
	{number: QuadraticHexahedron, name: "quadratic hexahedron", unit: &hexahedron, middles: hexaMiddles},
	{number: QuadraticWedge, name: "quadratic wedge", unit: &wedge, middles: wedgeMiddles},
	{number: QuadraticPyramid, name: "quadratic pyramid", unit: &pyramid, middles: pyramidMiddles},
	{number: BiquadraticQuad, name: "biquadratic quadrilateral", unit: &quad, middles: quadMiddles + " 0123"},
	{number: TriquadraticHexahedron, name: "triquadratic hexahedron", unit: &hexahedron, middles: hexaMiddles + hexaSides + " 0123 4567 01234567"},
	{number: QuadraticLinearQuad, name: "quadratic-linear quadrilateral", unit: &quad, middles: "01 23"},
	{number: QuadraticLinearWedge, name: "quadratic-linear wedge", unit: &wedge, middles: "01 12 20 34 45 53"},
	{number: BiquadraticWedge, name: "biquadratic-quadratic wedge", unit: &wedge, middles: wedgeMiddles + wedgeSides},
	{number: BiquadraticHexahedron, name: "biquadratic-quadratic hexahedron", unit: &hexahedron, middles: hexaMiddles + hexaSides},
	{number: BiquadraticTriangle, name: "biquadratic triangle", unit: &triangle, middles: triangleMiddles + " 012"},
	{number: CubicLine, name: "cubic line", family: lagrange, unit: &line, least: 4, most: 4},
	{number: QuadraticPolygon, name: "quadratic polygon", family: fan, dimension: 2, least: 6, most: many},
	{number: TriquadraticPyramid, name: "triquadratic pyramid", unit: &pyramid, middles: pyramidMiddles + " 0123 014 124 234 034 01234"},
	{number: ConvexPointSet, name: "convex point set", family: unsupported, dimension: 3, most: many, reason: noHull},
	{number: Polyhedron, name: "polyhedron", family: polyhedral, dimension: 3, least: 4, most: many},
	{number: 51, name: "parametric curve", family: unsupported, dimension: 1, most: many, reason: notInFiles},
	{number: 52, name: "parametric surface", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 53, name: "parametric triangular surface", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 54, name: "parametric quadrilateral surface", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 55, name: "parametric tetrahedral region", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: 56, name: "parametric hexahedral region", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: 60, name: "higher-order edge", family: unsupported, dimension: 1, most: many, reason: notInFiles},
	{number: 61, name: "higher-order triangle", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 62, name: "higher-order quadrilateral", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 63, name: "higher-order polygon", family: unsupported, dimension: 2, most: many, reason: notInFiles},
	{number: 64, name: "higher-order tetrahedron", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: 65, name: "higher-order wedge", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: 66, name: "higher-order pyramid", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: 67, name: "higher-order hexahedron", family: unsupported, dimension: 3, most: many, reason: notInFiles},
	{number: LagrangeCurve, name: "Lagrange curve", family: lagrange, unit: &line, most: many},
	{number: LagrangeTriangle, name: "Lagrange triangle", family: lagrange, unit: &triangle, middles: triangleMiddles + " 012", most: many},
	{number: LagrangeQuad, name: "Lagrange quadrilateral", family: lagrange, unit: &quad, most: many},
	{number: LagrangeTetrahedron, name: "Lagrange tetrahedron", family: lagrange, unit: &tetrahedron, middles: tetraMiddles + " 012 013 123 023 0123", most: many},
	{number: LagrangeHexahedron, name: "Lagrange hexahedron", family: lagrange, unit: &hexahedron, most: many},
	{number: LagrangeWedge, name: "Lagrange wedge", family: lagrange, unit: &wedge, middles: wedgeMiddles + " 012 345" + wedgeSides + " 012345", most: many},
	{number: LagrangePyramid, name: "Lagrange pyramid", family: unsupported, dimension: 3, most: many, reason: noClass},
	{number: BezierCurve, name: "Bézier curve", family: bezier, unit: &line, most: many},
	{number: BezierTriangle, name: "Bézier triangle", family: bezier, unit: &triangle, most: many},
	{number: BezierQuad, name: "Bézier quadrilateral", family: bezier, unit: &quad, most: many},
	{number: BezierTetrahedron, name: "Bézier tetrahedron", family: bezier, unit: &tetrahedron, most: many},
	{number: BezierHexahedron, name: "Bézier hexahedron", family: bezier, unit: &hexahedron, most: many},
	{number: BezierWedge, name: "Bézier wedge", family: bezier, unit: &wedge, most: many},
	{number: BezierPyramid, name: "Bézier pyramid", family: unsupported, dimension: 3, most: many, reason: noClass},
}

// cellTypeRows finds the row of a type; nil for a number that VTK does not assign.
var cellTypeRows = func() (rows [256]*cellTypeRow) {
	for i := range cellTypes {
		row := &cellTypes[i]
		rows[row.number] = row
		if row.unit == nil {
			continue
		}
		for _, dimension := range row.unit.simplices {
			row.dimension += dimension
		}
		count := len(row.unit.corners) + len(strings.Fields(row.middles))
		switch {
		case row.family == middles:
			row.least, row.most = count, count
		case row.middles != "":
			row.variant = count
		}
	}
	return rows
}()

// Dimension returns the dimension of the cells of the type, -1 for a number that VTK
// does not assign.
func (t CellType) Dimension() int {
	if row := cellTypeRows[t]; row != nil {
		return row.dimension
	}
	return -1
}

func (t CellType) String() string {
	if row := cellTypeRows[t]; row != nil {
		return row.name
	}
	return fmt.Sprintf("CellType(%d)", uint8(t))
}

// checkCount reports a node count that no cell of the type has.
func (row *cellTypeRow) checkCount(nodeCount int) error {
	switch {
	case row.least == row.most && nodeCount != row.least:
		return fmt.Errorf("%s (cell type %d) has %d nodes, needs %d", row.name, row.number, nodeCount, row.least)
	case nodeCount < row.least || nodeCount > row.most:
		return fmt.Errorf("%s (cell type %d) has %d nodes, needs %d or more", row.name, row.number, nodeCount, row.least)
	case row.number == QuadraticPolygon && nodeCount%2 == 1:
		return fmt.Errorf("%s (cell type %d) has %d nodes, needs an even number", row.name, row.number, nodeCount)
	}
	return nil
}
