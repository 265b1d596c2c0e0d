package energy

import (
	"context"
	"fmt"

	"strainledger/mesh"
)

// A memoryMesh is a whole small model in memory, for tests: it goes through the same
// walk as a file.
type memoryMesh struct {
	pieces []memoryPiece
	blocks []string
}

type memoryPiece struct {
	block  int
	points [][3]float64
	cells  []memoryCell
	arrays []memoryArray
	hidden []uint8
}

type memoryCell struct {
	cellType mesh.CellType
	nodes    []int32
}

// A memoryArray holds tuples of floats; whole numbers also serve as labels.
type memoryArray struct {
	name       string
	on         mesh.Location
	components int
	isInteger  bool
	values     []float64
	names      []string // component names
}

// model describes the mesh; several pieces are several blocks of one source.
func (m *memoryMesh) model() *mesh.Model {
	model := &mesh.Model{Sources: []mesh.Source{{Path: "memory"}}, Blocks: m.blocks}
	if model.Blocks == nil {
		model.Blocks = []string{"memory"}
	}
	var first int64
	for i := range m.pieces {
		piece := &m.pieces[i]
		described := mesh.Piece{
			Block: piece.block, FirstCell: first, CellCount: int64(len(piece.cells)), PointCount: int64(len(piece.points)),
		}
		for _, array := range piece.arrays {
			typeName := "Float64"
			if array.isInteger {
				typeName = "Int32"
			}
			described.Arrays = append(described.Arrays, mesh.Array{
				Name: array.name, On: array.on, Type: typeName, Components: array.components,
				Tuples: int64(len(array.values) / array.components), ComponentNames: array.names,
			})
		}
		model.Pieces = append(model.Pieces, described)
		first += described.CellCount
	}
	model.Sources[0].Cells = first
	model.Open = func() mesh.Cursor { return &memoryCursor{m, model} }
	return model
}

type memoryCursor struct {
	mesh  *memoryMesh
	model *mesh.Model
}

func (c *memoryCursor) Close() error { return nil }

func (c *memoryCursor) ReadArray(context.Context, *mesh.Array, int64, []byte) error {
	panic("no test reads arrays whole")
}

func (c *memoryCursor) Points(_ context.Context, piece int, low, high int64, to []float64) error {
	for i, point := range c.mesh.pieces[piece].points[low:high] {
		copy(to[3*i:], point[:])
	}
	return nil
}

func (c *memoryCursor) array(piece int, on mesh.Location, name string) (*memoryArray, error) {
	arrays := c.mesh.pieces[piece].arrays
	for i := range arrays {
		if arrays[i].on == on && arrays[i].name == name {
			return &arrays[i], nil
		}
	}
	return nil, fmt.Errorf("no array %q", name)
}

func (c *memoryCursor) PointValues(_ context.Context, piece int, name string, low, high int64, to []float64) error {
	array, err := c.array(piece, mesh.OnPoint, name)
	if err != nil {
		return err
	}
	n := int64(array.components)
	copy(to, array.values[low*n:high*n])
	return nil
}

func (c *memoryCursor) Cells(_ context.Context, span mesh.Span, want *mesh.Want, to *mesh.Chunk) error {
	piece := &c.mesh.pieces[span.Piece]
	*to = mesh.Chunk{Count: int(span.High - span.Low), Start: []int32{0}}
	if piece.hidden != nil {
		to.Hidden = piece.hidden[span.Low:span.High]
	}
	for _, cell := range piece.cells[span.Low:span.High] {
		shape, err := mesh.ShapeOf(cell.cellType, len(cell.nodes), [3]int{})
		if err != nil {
			return err
		}
		to.Types = append(to.Types, cell.cellType)
		to.Shapes = append(to.Shapes, shape)
		to.Nodes = append(to.Nodes, cell.nodes...)
		to.Start = append(to.Start, int32(len(to.Nodes)))
	}
	for _, name := range want.CellValues {
		array, err := c.array(span.Piece, mesh.OnCell, name)
		if err != nil {
			return err
		}
		n := int64(array.components)
		to.Values = append(to.Values, array.values[span.Low*n:span.High*n])
	}
	for _, name := range want.Labels {
		array, err := c.array(span.Piece, mesh.OnCell, name)
		if err != nil {
			return err
		}
		labels := make([]int64, 0, to.Count)
		for _, value := range array.values[span.Low:span.High] {
			labels = append(labels, int64(value))
		}
		to.Labels = append(to.Labels, labels)
	}
	return nil
}
