// Package mesh holds what was computed where: cells, their points, and the arrays
// that go with them, as a stream of chunks. It computes nothing but geometry.
//
// A [Model] is what the headers of one state's files tell. Its cells come through
// [Model.Each], some thousands at a time, with only those arrays that were asked
// for, so that a file may be far larger than memory.
package mesh

import (
	"context"
	"fmt"
)

// A Location says what the tuples of an array belong to.
type Location uint8

// The locations of arrays. A Field array belongs to the data set as a whole.
const (
	OnCell Location = iota + 1
	OnPoint
	OnField
)

func (l Location) String() string {
	switch l {
	case OnCell:
		return "cell"
	case OnPoint:
		return "point"
	case OnField:
		return "field"
	}
	return fmt.Sprintf("Location(%d)", uint8(l))
}

// An Array is the description of one array of a piece.
type Array struct {
	Name           string
	On             Location
	Type           string // VTK's name of the number type: Float64, Int32, String ...
	Components     int
	Tuples         int64
	ComponentNames []string // nil when the file names none
	Coding         string   // how the file keeps it: ascii, base64, raw, zlib, LZ4 or LZMA; "" unknown
	Attributes     []string // what the file marks it as: Scalars, Tensors, GlobalIds, HigherOrderDegrees ...
	Information    string   // what else the file says of it: its elements InformationKey as text
	Offsets        string   // of a field array at integration points: the cell array that says where each cell's tuples begin
	Bytes          int64    // length of its values as [Cursor.ReadArray] gives them
	ID             int      // the reader's number of the array, for [Cursor.ReadArray]
}

// IsInteger reports whether the array holds whole numbers by its type.
func (a Array) IsInteger() bool {
	switch a.Type {
	case "Int8", "UInt8", "Int16", "UInt16", "Int32", "UInt32", "Int64", "UInt64":
		return true
	}
	return false
}

// A Source is one file of the model. One that only names others (a parallel file, a
// collection) has no points and cells of its own and stands before them.
type Source struct {
	Path   string // as the caller or the referring file gave it
	Format string // form and version, and how the file is compressed as a whole
	Bytes  int64
	Points int64   // those on the border of two structured pieces counted once
	Cells  int64   // ghosts included
	Time   float64 // NaN when the file gives none
	Fields []Array // arrays of the file's data set as a whole
}

// A Piece is a run of cells that share one set of points.
type Piece struct {
	Source     int   // index into Model.Sources
	Block      int   // index into Model.Blocks
	FirstCell  int64 // number of its first cell in the source
	CellCount  int64
	PointCount int64
	Points     *Array  // how the coordinates are stored; nil where a grid tells them
	Arrays     []Array // point and cell arrays in file order
	OwnArrays  []Array // those that only the reader itself uses, for other pieces of the set lack them
	RunCells   int     // cells that are best read in one go; 0: no preference

	Grid *Grid // of a structured piece, else nil

	// RationalWeights names the point array that weighs the control points of
	// Bézier cells; "" when there is none.
	RationalWeights string
}

// Find returns the description of a point or cell array, or nil.
func (p *Piece) Find(on Location, name string) *Array {
	for i := range p.Arrays {
		if p.Arrays[i].On == on && p.Arrays[i].Name == name {
			return &p.Arrays[i]
		}
	}
	return nil
}

// A Remark is something about the files that their reader noticed and that does
// not stop the work.
type Remark struct {
	Code    string // a finding's code of the ledger
	Message string
	Cells   int64
}

// A Model is one state of one run: what the headers of its files tell.
type Model struct {
	Sources []Source
	Blocks  []string  // nested names joined by a slash; a plain file's is its base name
	Pieces  []Piece   // in file order, whatever the container
	Fields  []Array   // arrays of the data set as a whole, of one name once
	Texts   []Text    // field arrays that hold text
	Schemes Schemes   // of integration points, where the files describe them
	Times   []float64 // all states that the files hold, rising
	Remarks []Remark
	Open    func() Cursor // one for each worker
	Close   func() error  // lets go of temporary files, after the cursors; nil: there are none
}

// A Text is the content of a field array that holds text: strings, or small whole
// numbers that are the characters of one.
type Text struct {
	Name    string
	Strings []string
}

// Text returns the first string of a field array, "" when there is none.
func (m *Model) Text(name string) string {
	for _, text := range m.Texts {
		if text.Name == name && len(text.Strings) > 0 {
			return text.Strings[0]
		}
	}
	return ""
}

// CellCount returns the number of cells in all pieces, ghosts included.
func (m *Model) CellCount() int64 {
	var count int64
	for i := range m.Pieces {
		count += m.Pieces[i].CellCount
	}
	return count
}

// A Cursor is one worker's hands in the files: kept buffers and block tails.
type Cursor interface {
	// Points writes the coordinates of the points [low, high) of a piece,
	// x y z for each, to the slice, which has room for 3 × (high - low).
	Points(ctx context.Context, piece int, low, high int64, to []float64) error
	// PointValues writes the tuples [low, high) of a point array, widened to
	// float64, to the slice.
	PointValues(ctx context.Context, piece int, name string, low, high int64, to []float64) error
	// Cells fills the chunk with the cells of the span, but for where they stand
	// (Piece, Source, Block, First) and their points, which the walk adds. The chunk's
	// slices belong to the cursor and are valid until its next call of Cells. Node numbers have
	// been checked against the piece's point count, cell sizes against the shape.
	Cells(ctx context.Context, span Span, want *Want, to *Chunk) error
	// ReadArray fills to with the bytes of an array from byte at on, which is a
	// multiple of 8: numbers of the array's type, low byte first, tuple after tuple;
	// bits eight to a byte, the first one highest; strings with a zero behind each.
	ReadArray(ctx context.Context, array *Array, at int64, to []byte) error
	Close() error
}

// A Span is a range of cells of one piece: [Low, High) counted in the piece.
type Span struct {
	Piece     int
	Low, High int64
}

// Want names what is read beside the cells themselves. Nothing else is read.
type Want struct {
	CellValues  []string // cell arrays as numbers, in the order of Chunk.Values
	Labels      []string // cell arrays as whole numbers, in the order of Chunk.Labels
	FieldValues []string // field arrays with some tuples for each cell, in the order of Chunk.FieldValues
	PointValues []string // point arrays, in the order of Chunk.PointValues
	NoNodes     bool     // types, ghost marks and cell arrays, but neither nodes nor points
}

// Ghost and blanking bits of Chunk.Hidden, VTK's vtkGhostType for cells.
const (
	DuplicateCell = 1
	HiddenCell    = 32
)

// NoLabel stands in Chunk.Labels for a value that is no whole number.
const NoLabel = -1 << 63

// A Chunk is a short run of cells of one piece in memory.
type Chunk struct {
	Piece  int
	Source int
	Block  int
	First  int64 // number of its first cell in the source
	Count  int

	Types  []CellType
	Shapes []*Shape // what each type with its node count is; nil with Want.NoNodes
	Start  []int32  // Count+1 positions in Nodes
	Nodes  []int32  // positions in Points; checked
	Hidden []uint8  // ghost and blanking bits; nil when the file has none

	// Faces holds the face streams of polyhedra, for each the number of faces and
	// then for each face the number of its nodes and the nodes; FaceStart has
	// Count+1 positions in it. Both are nil without polyhedra.
	Faces     []int32
	FaceStart []int32

	// Points holds x y z of every point of the piece, PointValues the wanted point
	// arrays of the piece, tuple after tuple. RationalWeights has one number for
	// each point of the piece, or is nil (Bézier cells).
	Points          []float64
	PointValues     [][]float64
	RationalWeights []float64

	Values [][]float64 // Count tuples for each of Want.CellValues
	Labels [][]int64   // Count numbers for each of Want.Labels

	// FieldValues holds for each of Want.FieldValues the tuples of the chunk's cells,
	// those of one cell (its integration points) in a row.
	FieldValues [][]float64
}

// Cell sets the view to cell i of the chunk.
func (c *Chunk) Cell(i int, to *Cell) {
	to.Shape = c.Shapes[i]
	to.Points = c.Points
	to.Nodes = c.Nodes[c.Start[i]:c.Start[i+1]]
	to.RationalWeights = c.RationalWeights
	to.Faces = nil
	if c.FaceStart != nil {
		to.Faces = c.Faces[c.FaceStart[i]:c.FaceStart[i+1]]
	}
}

// Bounds returns the box that holds the nodes of all cells of the chunk.
func (c *Chunk) Bounds() Bounds {
	bounds := emptyBounds()
	for _, node := range c.Nodes {
		bounds.add(c.Points[3*int(node):][:3])
	}
	return bounds
}
