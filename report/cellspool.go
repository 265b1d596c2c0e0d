package report

import (
	"bytes"
	"context"
	"encoding/binary"
	"io"

	"strainledger/mesh"
)

// A cellSpool holds the cells of a model in the form of an unstructured grid, whatever
// they are in its files: lists, grids, polygons, the old order of edges. How long the
// lists of nodes are is known only when all cells have been seen.
type cellSpool struct {
	pieces []spooledPiece

	types    *spool // UInt8 for each cell
	ends     *spool // Int64 for each cell: where its nodes end among those of its piece
	nodes    *spool // Int32
	hidden   *spool // UInt8 for each cell of a structured piece: marks of those not to be counted
	faces    *spool // Int32: the face streams of polyhedra
	faceEnds *spool // Int64 for each cell of a piece with polyhedra: where its stream ends; -1 without one
}

// A spooledPiece is where the cells of one piece are.
type spooledPiece struct {
	firstCell            int64 // among all cells of the model
	firstNode, nodeCount int64
	firstFace, faceCount int64 // entries of face streams
	hasFaces             bool
	hasHidden            bool // a cell that only the grid hides
	hasHigherOrder       bool // Lagrange or Bézier hexahedra
}

// spools lists the files.
func (s *cellSpool) spools() []**spool {
	return []**spool{&s.types, &s.ends, &s.nodes, &s.hidden, &s.faces, &s.faceEnds}
}

// close lets go of the files.
func (s *cellSpool) close() {
	for _, file := range s.spools() {
		if *file != nil {
			(*file).close()
		}
	}
}

// A cellBatch is the cells of one span, as one worker reads them.
type cellBatch struct {
	cursor   mesh.Cursor
	chunk    mesh.Chunk
	types    []byte
	ends     []int64 // of nodes, from the batch's first
	nodes    []byte
	hidden   []byte
	faces    []byte
	faceEnds []int64 // of entries, from the batch's first; -1 without a stream
	bytes    []byte
}

const (
	// spoolChunk is how many cells are read together, spoolSpan how many at most by one
	// worker in a row.
	spoolChunk = 8 << 10
	spoolSpan  = 128 << 10
)

// spoolCells reads the cells of a model with several workers into files in a folder.
func spoolCells(ctx context.Context, model *mesh.Model, workers int, folder, target string) (*cellSpool, error) {
	s := &cellSpool{pieces: make([]spooledPiece, len(model.Pieces))}
	var err error
	for _, file := range s.spools() {
		if *file, err = newSpool(folder, target); err != nil {
			s.close()
			return nil, err
		}
	}
	spans := cellSpans(model)
	batches := make([]cellBatch, min(workers, len(spans)))
	for i := range batches {
		batches[i].cursor = model.Open()
		defer batches[i].cursor.Close()
	}
	for i := 1; i < len(s.pieces); i++ {
		s.pieces[i].firstCell = s.pieces[i-1].firstCell + model.Pieces[i-1].CellCount
	}
	err = inTurn(ctx, workers, len(spans), func(worker, task int) error {
		return batches[worker].read(ctx, spans[task])
	}, func(worker, task int) error {
		return s.add(&batches[worker], spans[task], model.Pieces[spans[task].Piece].Grid != nil)
	})
	if err != nil {
		s.close()
		return nil, err
	}
	return s, nil
}

// cellSpans cuts the pieces into spans that are best read in one go.
func cellSpans(model *mesh.Model) []mesh.Span {
	var spans []mesh.Span
	for i := range model.Pieces {
		piece := &model.Pieces[i]
		step := int64(min(max(piece.RunCells, 4*spoolChunk), spoolSpan))
		for low := int64(0); low < piece.CellCount; low += step {
			spans = append(spans, mesh.Span{Piece: i, Low: low, High: min(low+step, piece.CellCount)})
		}
	}
	return spans
}

// read gathers the cells of a span.
func (b *cellBatch) read(ctx context.Context, span mesh.Span) error {
	b.types, b.ends, b.nodes, b.hidden, b.faces, b.faceEnds = b.types[:0], b.ends[:0], b.nodes[:0], b.hidden[:0], b.faces[:0], b.faceEnds[:0]
	for low := span.Low; low < span.High; low += spoolChunk {
		part := mesh.Span{Piece: span.Piece, Low: low, High: min(low+spoolChunk, span.High)}
		if err := b.cursor.Cells(ctx, part, &mesh.Want{}, &b.chunk); err != nil {
			return err
		}
		b.addChunk()
	}
	return nil
}

// addChunk takes the cells of the chunk.
func (b *cellBatch) addChunk() {
	chunk := &b.chunk
	before := int64(len(b.nodes) / 4)
	for i, cellType := range chunk.Types {
		b.types = append(b.types, byte(cellType))
		b.ends = append(b.ends, before+int64(chunk.Start[i+1]))
	}
	b.nodes = appendInt32(b.nodes, chunk.Nodes[:chunk.Start[chunk.Count]])
	if chunk.Hidden != nil {
		b.hidden = append(b.hidden, chunk.Hidden...)
	} else {
		b.hidden = append(b.hidden, make([]byte, chunk.Count)...)
	}
	before = int64(len(b.faces) / 4)
	for i := range chunk.Types {
		end := int64(-1)
		if chunk.FaceStart != nil && chunk.Types[i] == mesh.Polyhedron {
			end = before + int64(chunk.FaceStart[i+1])
		}
		b.faceEnds = append(b.faceEnds, end)
	}
	b.faces = appendInt32(b.faces, chunk.Faces)
}

func appendInt32(to []byte, values []int32) []byte {
	for _, value := range values {
		to = binary.LittleEndian.AppendUint32(to, uint32(value))
	}
	return to
}

// add writes the cells of a span behind those before it.
func (s *cellSpool) add(b *cellBatch, span mesh.Span, isGrid bool) error {
	piece := &s.pieces[span.Piece]
	if span.Low == 0 {
		piece.firstNode, piece.firstFace = s.nodes.size/4, s.faces.size/4
	}
	for _, cellType := range b.types {
		switch mesh.CellType(cellType) {
		case mesh.HigherOrderHexahedron, mesh.LagrangeHexahedron, mesh.BezierHexahedron:
			piece.hasHigherOrder = true
		}
	}
	first := piece.firstCell + span.Low
	if _, err := s.types.WriteAt(b.types, first); err != nil {
		return err
	}
	if err := s.writeEnds(s.ends, b, b.ends, piece.nodeCount, first); err != nil {
		return err
	}
	if err := s.nodes.append(b.nodes); err != nil {
		return err
	}
	piece.nodeCount += int64(len(b.nodes) / 4)
	if isGrid {
		piece.hasHidden = piece.hasHidden || len(bytes.Trim(b.hidden, "\x00")) > 0
		if _, err := s.hidden.WriteAt(b.hidden, first); err != nil {
			return err
		}
	}
	return s.addFaces(b, piece, span)
}

// addFaces writes the face streams of a span. Cells before the first polyhedron of a
// piece get their -1 when it comes.
func (s *cellSpool) addFaces(b *cellBatch, piece *spooledPiece, span mesh.Span) error {
	if len(b.faces) == 0 && !piece.hasFaces {
		return nil
	}
	if !piece.hasFaces {
		piece.hasFaces = true
		none := bytes.Repeat([]byte{0xff}, 8*spoolChunk)
		for cell := int64(0); cell < span.Low; cell += spoolChunk {
			count := min(spoolChunk, span.Low-cell)
			if _, err := s.faceEnds.WriteAt(none[:8*count], 8*(piece.firstCell+cell)); err != nil {
				return err
			}
		}
	}
	if err := s.writeEnds(s.faceEnds, b, b.faceEnds, piece.faceCount, piece.firstCell+span.Low); err != nil {
		return err
	}
	piece.faceCount += int64(len(b.faces) / 4)
	return s.faces.append(b.faces)
}

// writeEnds writes positions that count from the beginning of a span, the entries of
// the piece before it added.
func (s *cellSpool) writeEnds(to *spool, b *cellBatch, ends []int64, before, cell int64) error {
	b.bytes = b.bytes[:0]
	for _, end := range ends {
		if end >= 0 {
			end += before
		}
		b.bytes = binary.LittleEndian.AppendUint64(b.bytes, uint64(end))
	}
	_, err := to.WriteAt(b.bytes, 8*cell)
	return err
}

// arrays returns the arrays that make up the cells of a piece.
func (s *cellSpool) arrays(number int, cellCount int64) []vtuArray {
	piece := &s.pieces[number]
	arrays := []vtuArray{
		spooled(s.nodes, 4*piece.firstNode, "connectivity", "Int32", piece.nodeCount),
		spooled(s.ends, 8*piece.firstCell, "offsets", "Int64", cellCount),
		spooled(s.types, piece.firstCell, "types", "UInt8", cellCount),
	}
	if piece.hasFaces {
		arrays = append(arrays,
			spooled(s.faces, 4*piece.firstFace, "faces", "Int32", piece.faceCount),
			spooled(s.faceEnds, 8*piece.firstCell, "faceoffsets", "Int64", cellCount))
	}
	return arrays
}

// spooled returns an array of one component whose values stand in a file from a place
// on.
func spooled(file io.ReaderAt, place int64, name, number string, tuples int64) vtuArray {
	return vtuArray{
		Array: mesh.Array{Name: name, Type: number, Components: 1, Tuples: tuples, Bytes: tuples * numberBytes[number]},
		read: func(_ context.Context, _ mesh.Cursor, at int64, to []byte) error {
			_, err := file.ReadAt(to, place+at)
			return err
		},
	}
}

// numberBytes is the length of the number types of the arrays that are added.
var numberBytes = map[string]int64{"UInt8": 1, "Int32": 4, "Int64": 8, "Float64": 8}
