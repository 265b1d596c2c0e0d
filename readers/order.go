package readers

import (
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
		order := int64(math.Round(math.Cbrt(float64(len(nodes))))) - 1
		p, q, r := order, order, order
		if degrees != nil && degrees[3*i] > 0 {
			p, q, r = degrees[3*i], degrees[3*i+1], degrees[3*i+2]
		}
		if r < 2 || (p+1)*(q+1)*(r+1) != int64(len(nodes)) {
			continue // the shape's check says what is wrong
		}
		third := 8 + 4*(p-1) + 4*(q-1) + 2*(r-1)
		for k := third; k < third+r-1; k++ {
			nodes[k], nodes[k+r-1] = nodes[k+r-1], nodes[k]
		}
	}
}
