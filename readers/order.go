package readers

import (
	"fmt"
	"math"
	"slices"

	"strainledger/mesh"
)

// isHigherOrder reports whether cells of a type have degrees.
func isHigherOrder(cellType mesh.CellType) bool {
	return cellType >= mesh.HigherOrderHexahedron && cellType <= mesh.BezierPyramid
}

func isHigherOrderHexahedron(cellType mesh.CellType) bool {
	return cellType == mesh.LagrangeHexahedron || cellType == mesh.BezierHexahedron || cellType == mesh.HigherOrderHexahedron
}

// readDegrees reads the degrees of the cells of a span, three each; nil where no cell
// has any or the file does not state them.
func (c *cursor) readDegrees(p *piece, span mesh.Span) ([]int64, error) {
	if p.degrees == nil || !slices.ContainsFunc(c.types, isHigherOrder) {
		return nil, nil
	}
	values, err := p.degrees.values(c, span.Low, span.High)
	if err != nil {
		return nil, err
	}
	c.degrees = grown(c.degrees, len(values))
	for i, value := range values {
		const most = 1000
		if value != math.Trunc(value) || value < 0 || value > most {
			return nil, p.cellError(p.degrees, span.Low+int64(i/3), malformed("found the degree %v, need a whole number up to %d", value, most))
		}
		c.degrees[i] = int64(value)
	}
	return c.degrees, nil
}

// reorder brings the nodes of Lagrange and Bézier hexahedra from files of old versions
// into today's order: the vertical edges at corners 2 and 3 changed places in version
// 2.1 of XML files and 5.1 of legacy files.
func (c *cursor) reorder(degrees []int64) {
	for i, cellType := range c.types {
		if !isHigherOrderHexahedron(cellType) {
			continue
		}
		nodes := c.nodes[c.start[i]:c.start[i+1]]
		var own []int64
		if degrees != nil {
			own = degrees[3*i : 3*i+3]
		}
		first, each := verticalEdges(len(nodes), own)
		for k := first + 2*each; k < first+3*each; k++ {
			nodes[k], nodes[k+each] = nodes[k+each], nodes[k]
		}
	}
}

// verticalEdges returns where the nodes inside the four vertical edges of a Lagrange or
// Bézier hexahedron begin and how many each edge has; 0 where the count of its nodes
// does not fit, of which the shape's check says what is wrong.
func verticalEdges(nodes int, degrees []int64) (first, each int) {
	order := int(math.Round(math.Cbrt(float64(nodes)))) - 1
	p, q, r := order, order, order
	if degrees != nil && degrees[0] > 0 {
		p, q, r = int(degrees[0]), int(degrees[1]), int(degrees[2])
	}
	if r < 2 || (p+1)*(q+1)*(r+1) != nodes {
		return 0, 0
	}
	return 8 + 4*(p-1) + 4*(q-1), r - 1
}

// checkOrder looks at the first cell of a piece. If it is a Lagrange hexahedron of which
// the nodes lie on their edges in the order of the other versions alone, the file's
// writer has put a wrong version into it: the piece is read in the order that fits, with
// a remark. Faults are left to the reading of the cells.
func (o *opener) checkOrder(p *piece) {
	c := o.cursor
	span := mesh.Span{Low: 0, High: 1}
	if p.types() == nil || p.cellCount == 0 || p.points == nil {
		return
	}
	if first, err := p.types().wholes(c, 0, 1); err != nil || mesh.CellType(first[0]) != mesh.LagrangeHexahedron || c.topology(p, span, false) != nil {
		return
	}
	degrees, err := c.readDegrees(p, span)
	if err != nil {
		return
	}
	places := make([]float64, 3*len(c.nodes))
	for i, node := range c.nodes {
		if p.points.valuesTo(c, int64(node), int64(node)+1, places[3*i:]) != nil {
			return
		}
	}
	first, each := verticalEdges(len(c.nodes), degrees)
	isNew := fitsEdges(places, first, each, [4]int{0, 1, 2, 3})
	isOld := fitsEdges(places, first, each, [4]int{0, 1, 3, 2})
	if isNew != isOld && isOld != p.isOldOrder {
		o.remark("node-order", fmt.Sprintf("%s: Lagrange hexahedra are read with the order of nodes of the file's version, but the first one fits only the order of %s; if the version is wrong, correct it",
			p.file.path, map[bool]string{true: "versions before 2.1 (legacy 5.1)", false: "version 2.1 (legacy 5.1) and later"}[isOld]))
	}
}

// fitsEdges reports whether the nodes inside the vertical edges, which stand at the given
// corners, lie about where a straight edge has them: nearer than a third of its length.
func fitsEdges(places []float64, first, each int, corners [4]int) bool {
	for edge, corner := range corners {
		low, high := places[3*corner:][:3], places[3*(corner+4):][:3]
		for k := range each {
			node := places[3*(first+edge*each+k):][:3]
			part := float64(k+1) / float64(each+1)
			length, distance := 0.0, 0.0
			for axis := range 3 {
				length = math.Hypot(length, high[axis]-low[axis])
				distance = math.Hypot(distance, low[axis]+part*(high[axis]-low[axis])-node[axis])
			}
			if !(distance < length/3) {
				return false
			}
		}
	}
	return each > 0
}
