package readers

import "strainledger/mesh"

// A polygonRule tells the types of the cells of polygonal data, which are stored by
// kind, from the number of their nodes.
type polygonRule uint8

const (
	vertices polygonRule = iota
	lines
	polygons
	strips
)

// cellType returns the type of a cell with so many nodes.
func (r polygonRule) cellType(nodes int64) mesh.CellType {
	switch {
	case nodes == 0:
		return mesh.EmptyCell
	case r == vertices && nodes == 1:
		return mesh.Vertex
	case r == vertices:
		return mesh.PolyVertex
	case r == lines && nodes == 2:
		return mesh.Line
	case r == lines:
		return mesh.PolyLine
	case r == polygons && nodes == 3:
		return mesh.Triangle
	case r == polygons && nodes == 4:
		return mesh.Quad
	case r == polygons:
		return mesh.Polygon
	}
	return mesh.TriangleStrip
}

// polyData reads the description of one piece of polygonal data. Its cells are
// numbered vertices, lines, polygons, strips, and so are the cell arrays.
func (x *xmlFile) polyData(e *element) (*piece, error) {
	points, err := count(e, "NumberOfPoints")
	if err != nil {
		return nil, err
	}
	p := &piece{file: x.file, pointCount: points}
	for _, kind := range []struct {
		rule          polygonRule
		attribute, in string
	}{
		{vertices, "NumberOfVerts", "Verts"}, {lines, "NumberOfLines", "Lines"},
		{polygons, "NumberOfPolys", "Polys"}, {strips, "NumberOfStrips", "Strips"},
	} {
		if !has(e, kind.attribute) {
			continue
		}
		cells, err := count(e, kind.attribute)
		if err != nil {
			return nil, err
		}
		if cells > maxCells-p.cellCount {
			return nil, attributeError(e, kind.attribute, e.attribute(kind.attribute), "fewer cells")
		}
		if cells == 0 {
			continue
		}
		arrays := e.child(kind.in)
		if arrays == nil {
			return nil, malformed("found %s=%d and no element %s", kind.attribute, cells, kind.in)
		}
		s := section{first: p.cellCount, count: cells, rule: kind.rule}
		if err := x.connect(&s, arrays, cells); err != nil {
			return nil, err
		}
		p.sections = append(p.sections, s)
		p.cellCount += cells
	}
	if err := x.pointsOf(p, e); err != nil {
		return nil, err
	}
	return p, x.arraysOf(p, e)
}

// maxCells keeps sums of cell counts from running over.
const maxCells = 1 << 60
