package mesh

import "fmt"

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
	loosePoints family = iota + 1 // points, without measure
	chain                         // lines in a row
	strip                         // triangles in a row
	fan                           // plane polygon: triangles about a point
	middles                       // corners and the middles of edges, faces and the cell
	lagrange                      // nodes on a lattice of any degree
	bezier                        // control points on a lattice of any degree
	prism                         // two polygons joined by quadrilaterals
	polyhedron                    // bounded by polygons that the file lists
	unsupported                   // recognised, but without functions and measure
)

// A cellTypeRow says what a cell type is.
type cellTypeRow struct {
	number    CellType
	name      string
	dimension int
	family    family
	unit      *unitCell // nil where the family has no unit cell
	// middles lists the nodes after the corners, each by the corners in whose middle
	// it lies. For Lagrange cells it is their one variant that is no lattice.
	middles string
	// least is the smallest node count of a family whose cells have any, the node
	// count of a family whose cells have one.
	least int
}

const (
	lineMiddle       = "01"
	triangleMiddles  = "01 12 20"
	quadMiddles      = "01 12 23 30"
	tetraMiddles     = "01 12 20 03 13 23"
	hexaMiddles      = "01 12 23 30 45 56 67 74 04 15 26 37"
	hexaSideMiddles  = hexaMiddles + " 0347 1256 0145 2367"
	wedgeEndMiddles  = "01 12 20 34 45 53"
	wedgeMiddles     = wedgeEndMiddles + " 03 14 25"
	wedgeSideMiddles = " 0134 1245 0235"
	pyramidMiddles   = "01 12 23 30 04 14 24 34"
)

// cellTypes is everything the program knows about cell types.
//
// Source: VTK file formats and VTK's cell classes (vtkCellType.h).
var cellTypes = [...]cellTypeRow{
	{EmptyCell, "empty cell", 0, loosePoints, nil, "", 0},
	{Vertex, "vertex", 0, loosePoints, nil, "", 1},
	{PolyVertex, "poly-vertex", 0, loosePoints, nil, "", 1},
	{Line, "line", 1, middles, &line, "", 0},
	{PolyLine, "poly-line", 1, chain, nil, "", 2},
	{Triangle, "triangle", 2, middles, &triangle, "", 0},
	{TriangleStrip, "triangle strip", 2, strip, nil, "", 3},
	{Polygon, "polygon", 2, fan, nil, "", 3},
	{Pixel, "pixel", 2, middles, &pixel, "", 0},
	{Quad, "quadrilateral", 2, middles, &quad, "", 0},
	{Tetrahedron, "tetrahedron", 3, middles, &tetrahedron, "", 0},
	{Voxel, "voxel", 3, middles, &voxel, "", 0},
	{Hexahedron, "hexahedron", 3, middles, &hexahedron, "", 0},
	{Wedge, "wedge", 3, middles, &wedge, "", 0},
	{Pyramid, "pyramid", 3, middles, &pyramid, "", 0},
	{PentagonalPrism, "pentagonal prism", 3, prism, nil, "", 10},
	{HexagonalPrism, "hexagonal prism", 3, prism, nil, "", 12},
	{QuadraticLine, "quadratic line", 1, middles, &line, lineMiddle, 0},
	{QuadraticTriangle, "quadratic triangle", 2, middles, &triangle, triangleMiddles, 0},
	{QuadraticQuad, "quadratic quadrilateral", 2, middles, &quad, quadMiddles, 0},
	{QuadraticTetrahedron, "quadratic tetrahedron", 3, middles, &tetrahedron, tetraMiddles, 0},
	{QuadraticHexahedron, "quadratic hexahedron", 3, middles, &hexahedron, hexaMiddles, 0},
	{QuadraticWedge, "quadratic wedge", 3, middles, &wedge, wedgeMiddles, 0},
	{QuadraticPyramid, "quadratic pyramid", 3, middles, &pyramid, pyramidMiddles, 0},
	{BiquadraticQuad, "biquadratic quadrilateral", 2, middles, &quad, quadMiddles + " 0123", 0},
	{TriquadraticHexahedron, "triquadratic hexahedron", 3, middles, &hexahedron, hexaSideMiddles + " 0123 4567 01234567", 0},
	{QuadraticLinearQuad, "quadratic-linear quadrilateral", 2, middles, &quad, "01 23", 0},
	{QuadraticLinearWedge, "quadratic-linear wedge", 3, middles, &wedge, wedgeEndMiddles, 0},
	{BiquadraticWedge, "biquadratic-quadratic wedge", 3, middles, &wedge, wedgeMiddles + wedgeSideMiddles, 0},
	{BiquadraticHexahedron, "biquadratic-quadratic hexahedron", 3, middles, &hexahedron, hexaSideMiddles, 0},
	{BiquadraticTriangle, "biquadratic triangle", 2, middles, &triangle, triangleMiddles + " 012", 0},
}

// cellTypeRows finds the row of a type; nil for a number that VTK does not assign.
var cellTypeRows = func() (rows [256]*cellTypeRow) {
	for i := range cellTypes {
		rows[cellTypes[i].number] = &cellTypes[i]
	}
	return rows
}()

func (t CellType) String() string {
	if row := cellTypeRows[t]; row != nil {
		return row.name
	}
	return fmt.Sprintf("CellType(%d)", uint8(t))
}
