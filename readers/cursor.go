package readers

import (
	"context"
	"fmt"
	"math"

	"strainledger/mesh"
)

// A piece is what a cursor needs to read one piece of a model.
type piece struct {
	file       *file
	cellCount  int64
	pointCount int64
	points     *column // x y z
	sections   []section
	arrays     []*column // in the order of mesh.Piece.Arrays
	ghosts     *column   // ghost marks of cells
	isLevel    bool      // the ghost marks are levels: above 0 means duplicate
	degrees    *column   // orders of Lagrange and Bézier cells
}

// find returns a point or cell array of the piece.
func (p *piece) find(on mesh.Location, name string) (*column, error) {
	for _, a := range p.arrays {
		if a.On == on && a.Name == name {
			if a.number.size() == 0 {
				return nil, a.fail(unsupported("found values of type %s, need numbers", a.number))
			}
			return a, nil
		}
	}
	return nil, &Error{Path: p.file.path, Array: name, Err: malformed("found no such %s array", on)}
}

// A cursor reads pieces for one worker. It keeps its buffers from call to call.
type cursor struct {
	unpacker
	pieces []*piece
	hand   hand
	slots  []slot

	text, page, decoded, packed []byte // scratch of the decoders, each with one user at a time

	types    []mesh.CellType
	shapes   []*mesh.Shape
	known    [256]knownShape // the last of each cell type
	start    []int32
	nodes    []int32
	hidden   []uint8
	integers []int64
	list     []int64 // entries of a cell list
	stopped  listPlace
	values   [][]float64
	labels   [][]int64
}

func newCursor(pieces []*piece, slots int) *cursor {
	return &cursor{pieces: pieces, slots: make([]slot, slots)}
}

// Close lets go of the files.
func (c *cursor) Close() error { return c.hand.close() }

// Points writes the coordinates of the points [low, high) of a piece.
func (c *cursor) Points(ctx context.Context, piece int, low, high int64, to []float64) error {
	p := c.pieces[piece]
	if low < 0 || low > high || high > p.pointCount {
		panic(fmt.Sprintf("points [%d, %d) asked of a piece with %d", low, high, p.pointCount))
	}
	if err := ctx.Err(); err != nil || low == high {
		return err
	}
	return c.hand.located(p.points.valuesTo(c, low, high, to))
}

// PointValues writes the tuples [low, high) of a point array.
func (c *cursor) PointValues(ctx context.Context, piece int, name string, low, high int64, to []float64) error {
	p := c.pieces[piece]
	if low < 0 || low > high || high > p.pointCount {
		panic(fmt.Sprintf("points [%d, %d) asked of a piece with %d", low, high, p.pointCount))
	}
	a, err := p.find(mesh.OnPoint, name)
	if err != nil || low == high {
		return err
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	return c.hand.located(a.valuesTo(c, low, high, to))
}

// Cells fills the chunk with the cells of the span and what is wanted of them.
func (c *cursor) Cells(ctx context.Context, span mesh.Span, want *mesh.Want, to *mesh.Chunk) error {
	p := c.pieces[span.Piece]
	if span.Low < 0 || span.Low > span.High || span.High > p.cellCount || span.High-span.Low > math.MaxInt32 {
		panic(fmt.Sprintf("cells [%d, %d) asked of a piece with %d", span.Low, span.High, p.cellCount))
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	return c.hand.located(c.fill(p, span, want, to))
}

func (c *cursor) fill(p *piece, span mesh.Span, want *mesh.Want, to *mesh.Chunk) error {
	to.Count = int(span.High - span.Low)
	to.Types, to.Shapes, to.Start, to.Nodes, to.Hidden = nil, nil, nil, nil, nil
	to.Faces, to.FaceStart, to.Values, to.Labels = nil, nil, nil, nil
	if err := c.topology(p, span, want.NoNodes); err != nil {
		return err
	}
	to.Types = c.types
	if err := c.ghosts(p, span, to); err != nil {
		return err
	}
	if want.NoNodes {
		return c.cellArrays(p, span, want, to)
	}
	to.Start, to.Nodes = c.start, c.nodes
	if err := c.findShapes(p, span); err != nil {
		return err
	}
	to.Shapes = c.shapes
	return c.cellArrays(p, span, want, to)
}

// topology fills types, starts and nodes.
func (c *cursor) topology(p *piece, span mesh.Span, noNodes bool) error {
	c.types, c.nodes = c.types[:0], c.nodes[:0]
	c.start = append(c.start[:0], 0)
	for i := range p.sections {
		s := &p.sections[i]
		low, high := max(span.Low, s.first)-s.first, min(span.High, s.first+s.count)-s.first
		if low >= high {
			continue
		}
		if err := s.read(c, p, low, high, noNodes); err != nil {
			return err
		}
	}
	return nil
}

// ghosts fills the marks of cells that are not to be counted.
func (c *cursor) ghosts(p *piece, span mesh.Span, to *mesh.Chunk) error {
	if p.ghosts == nil {
		return nil
	}
	marks, err := p.ghosts.labels(c, span.Low, span.High)
	if err != nil {
		return err
	}
	c.hidden = c.hidden[:0]
	for _, mark := range marks {
		if p.isLevel {
			mark = min(mark, 1) // a level above 0 is a duplicate
		}
		c.hidden = append(c.hidden, uint8(mark))
	}
	to.Hidden = c.hidden
	return nil
}

// findShapes looks up what each cell is by its type and node count.
func (c *cursor) findShapes(p *piece, span mesh.Span) error {
	if cap(c.shapes) < len(c.types) {
		c.shapes = make([]*mesh.Shape, len(c.types))
	}
	c.shapes = c.shapes[:len(c.types)]
	for i, cellType := range c.types {
		known, count := &c.known[cellType], c.start[i+1]-c.start[i]
		if known.shape == nil || known.nodes != count {
			shape, err := mesh.ShapeOf(cellType, int(count), [3]int{})
			if err != nil {
				return p.cellError(nil, span.Low+int64(i), malformed("%v", err))
			}
			*known = knownShape{shape, count}
		}
		c.shapes[i] = known.shape
	}
	return nil
}

type knownShape struct {
	shape *mesh.Shape
	nodes int32
}

// cellArrays fills the wanted values and labels.
func (c *cursor) cellArrays(p *piece, span mesh.Span, want *mesh.Want, to *mesh.Chunk) error {
	c.values, c.labels = c.values[:0], c.labels[:0]
	for _, name := range want.CellValues {
		a, err := p.find(mesh.OnCell, name)
		if err != nil {
			return err
		}
		values, err := a.values(c, span.Low, span.High)
		if err != nil {
			return err
		}
		c.values = append(c.values, values)
	}
	for _, name := range want.Labels {
		a, err := p.find(mesh.OnCell, name)
		if err != nil {
			return err
		}
		if a.Components != 1 {
			return a.fail(malformed("found %d components, need 1 for a label", a.Components))
		}
		labels, err := a.labels(c, span.Low, span.High)
		if err != nil {
			return err
		}
		c.labels = append(c.labels, labels)
	}
	to.Values, to.Labels = c.values, c.labels
	return nil
}
