package readers

import (
	"context"
	"fmt"
	"math"
	"slices"

	"strainledger/mesh"
)

// A piece is what a cursor needs to read one piece of a model.
type piece struct {
	file       *file
	cellCount  int64
	pointCount int64
	firstCell  int64   // number of its first cell in the file
	points     *column // x y z; nil where the grid tells them
	grid       *grid   // of structured data, else nil
	sections   []section
	faces      *faceArrays
	arrays     []*column // in the order of mesh.Piece.Arrays
	known      map[arrayName]bool
	unlisted   []*column // arrays that only the reader itself uses, for other pieces lack them
	fields     []*column // arrays of the data set that have tuples for its cells
	ghosts     *column   // ghost marks of cells
	degrees    *column   // of Lagrange and Bézier cells
	weights    string    // point array of rational weights
	isOldOrder bool      // Lagrange and Bézier hexahedra have their edges in the old order
}

// An arrayName tells arrays of one piece apart.
type arrayName struct {
	on   mesh.Location
	name string
}

// columns returns all columns of the piece.
func (p *piece) columns() []*column {
	// What all pieces of a file share comes first and so has the same place in each.
	columns := slices.Concat(p.fields, p.arrays, p.unlisted, p.faces.columns())
	for _, a := range p.arrays {
		if a.content != nil {
			columns = append(columns, a.content)
		}
	}
	if p.points != nil {
		columns = append(columns, p.points)
	}
	if p.grid != nil {
		columns = append(columns, p.grid.columns()...)
	}
	for i := range p.sections {
		columns = append(columns, p.sections[i].columns()...)
	}
	return columns
}

// numberSlots gives each column of the piece its place among a cursor's buffers and
// returns their number.
func (p *piece) numberSlots() int {
	columns := p.columns()
	for i, a := range columns {
		a.slot = i
	}
	return len(columns)
}

// runCells returns how many cells are best read in one go: enough that the blocks
// at the ends of a run, which two workers decode, do not matter.
func (p *piece) runCells() int {
	cells := int64(0)
	for _, a := range p.columns() {
		if a.form != blockForm || a.On != mesh.OnCell || p.cellCount == 0 {
			continue
		}
		const blocksInRun = 6
		perCell := max(1, a.length/p.cellCount)
		cells = max(cells, 4*chunkCells, blocksInRun*a.blocks.size/perCell)
	}
	return int(min(cells, p.cellCount))
}

// isOwn reports whether the reader itself uses an array: ghost marks, degrees and
// rational weights.
func (p *piece) isOwn(a *column) bool {
	return a == p.ghosts || a == p.degrees || p.grid != nil && a == p.grid.hiddenPoints ||
		a.On == mesh.OnPoint && a.Name == p.weights
}

// find returns a point or cell array of the piece.
func (p *piece) find(on mesh.Location, name string) (*column, error) {
	for _, list := range [2][]*column{p.arrays, p.unlisted} {
		for _, a := range list {
			if a.On != on || a.Name != name {
				continue
			}
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
	listed []*column // by mesh.Array.ID
	hand   hand
	slots  []slot

	text, page, decoded, packed []byte // scratch of the decoders, each with one user at a time

	types     []mesh.CellType
	shapes    []*mesh.Shape
	known     [256]knownShape // the last of each cell type
	start     []int32
	nodes     []int32
	hidden    []uint8
	faces     []int32
	faceStart []int32
	seen      map[int32]bool // nodes of one polyhedron
	degrees   []int64
	integers  []int64
	list      []int64 // entries of a cell list
	stopped   listPlace
	values    [][]float64
	labels    [][]int64
	fields    [][]float64
}

func newCursor(pieces []*piece, listed []*column, slots int) *cursor {
	return &cursor{pieces: pieces, listed: listed, slots: make([]slot, slots)}
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
	if p.points == nil {
		return c.hand.located(p.grid.pointsTo(c, low, high, to))
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
	to.Faces, to.FaceStart, to.Values, to.Labels, to.FieldValues = nil, nil, nil, nil, nil
	if err := c.topology(p, span, want.NoNodes); err != nil {
		return err
	}
	to.Types = c.types
	var err error
	if to.Hidden, err = c.marks(p, span); err != nil {
		return err
	}
	if !want.NoNodes {
		if err := c.finishNodes(p, span); err != nil {
			return err
		}
		to.Start, to.Nodes, to.Shapes = c.start, c.nodes, c.shapes
		if len(c.faces) > 0 {
			to.Faces, to.FaceStart = c.faces, c.faceStart
		}
	}
	return c.cellArrays(p, span, want, to)
}

// topology fills types, starts and nodes.
func (c *cursor) topology(p *piece, span mesh.Span, noNodes bool) error {
	c.types, c.nodes = c.types[:0], c.nodes[:0]
	c.faces, c.faceStart = c.faces[:0], c.faceStart[:0]
	c.start = append(c.start[:0], 0)
	if p.grid != nil {
		p.grid.read(c, span.Low, span.High, noNodes)
		return nil
	}
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

// marks returns the marks of cells that are not to be counted, nil without any.
func (c *cursor) marks(p *piece, span mesh.Span) ([]uint8, error) {
	var marks []uint8
	if p.ghosts != nil {
		labels, err := p.ghosts.labels(c, span.Low, span.High)
		if err != nil {
			return nil, err
		}
		c.hidden = c.hidden[:0]
		for _, label := range labels {
			c.hidden = append(c.hidden, uint8(label))
		}
		marks = c.hidden
	}
	if p.grid != nil {
		return p.grid.hide(c, span.Low, span.High, marks)
	}
	return marks, nil
}

// checkOffsets compares the places that the file gives for the tuples of each cell with
// those at which they are taken to be: one cell after the other, as many for each.
func (c *cursor) checkOffsets(p *piece, span mesh.Span, a *column) error {
	if a.Offsets == "" {
		return nil
	}
	offsets, err := p.find(mesh.OnCell, a.Offsets)
	if err != nil {
		return err
	}
	if offsets.Components != 1 {
		return offsets.fail(malformed("found %s, need 1", counted(offsets.Components, "component")))
	}
	places, err := offsets.labels(c, span.Low, span.High)
	if err != nil {
		return err
	}
	for i, place := range places {
		if want := (p.firstCell + span.Low + int64(i)) * a.perCell; place != want {
			return p.cellError(offsets, span.Low+int64(i), unsupported("found that the values of %q begin at %d, need %d: cell after cell, %d for each", a.Name, place, want, a.perCell))
		}
	}
	return nil
}

// finishNodes adds the faces of polyhedra, brings nodes into order and finds shapes.
func (c *cursor) finishNodes(p *piece, span mesh.Span) error {
	if p.faces != nil || len(c.faceStart) == 0 && slices.Contains(c.types, mesh.Polyhedron) {
		if err := p.faces.read(c, p, c.types, span.Low, span.High); err != nil {
			return err
		}
	}
	degrees, err := c.readDegrees(p, span)
	if err != nil {
		return err
	}
	if p.isOldOrder {
		c.reorder(degrees)
	}
	return c.findShapes(p, span, degrees)
}

// findShapes looks up what each cell is by its type, node count and degrees.
func (c *cursor) findShapes(p *piece, span mesh.Span, degrees []int64) error {
	if cap(c.shapes) < len(c.types) {
		c.shapes = make([]*mesh.Shape, len(c.types))
	}
	c.shapes = c.shapes[:len(c.types)]
	for i, cellType := range c.types {
		known, count := &c.known[cellType], c.start[i+1]-c.start[i]
		hasDegrees := degrees != nil && isHigherOrder(cellType)
		if known.shape == nil || known.nodes != count || hasDegrees {
			var own [3]int
			if hasDegrees {
				own = [3]int{int(degrees[3*i]), int(degrees[3*i+1]), int(degrees[3*i+2])}
			}
			shape, err := mesh.ShapeOf(cellType, int(count), own)
			if err != nil {
				return p.cellError(p.types(), span.Low+int64(i), malformed("%v", err))
			}
			*known = knownShape{shape, count}
			if hasDegrees {
				known.shape = nil // the next cell may differ
			}
			c.shapes[i] = shape
			continue
		}
		c.shapes[i] = known.shape
	}
	return nil
}

// types returns the column of cell types, nil where the kind of the data tells them.
func (p *piece) types() *column {
	if len(p.sections) == 0 {
		return nil
	}
	return p.sections[0].types
}

// A knownShape is a shape with the node count for which it was looked up.
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
	if len(want.FieldValues) == 0 {
		return nil
	}
	c.fields = c.fields[:0]
	for _, name := range want.FieldValues {
		values, err := c.fieldValues(p, span, name)
		if err != nil {
			return err
		}
		c.fields = append(c.fields, values)
	}
	to.FieldValues = c.fields
	return nil
}

// fieldValues returns the tuples of a field array that belong to the cells of a span.
// The array has as many for each cell of the file.
func (c *cursor) fieldValues(p *piece, span mesh.Span, name string) ([]float64, error) {
	for _, a := range p.fields {
		if a.Name == name {
			tuples := a.perCell
			if err := c.checkOffsets(p, span, a); err != nil {
				return nil, err
			}
			return a.values(c, (p.firstCell+span.Low)*tuples, (p.firstCell+span.High)*tuples)
		}
	}
	return nil, &Error{Path: p.file.path, Array: name, Err: malformed("found no such field array with tuples for each cell")}
}
