package report

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"

	"strainledger/energy"
	"strainledger/mesh"
)

// ghostArray is the cell array that marks cells which are not to be counted; the same
// name on points, and the older name below, mean something too.
const (
	ghostArray      = "vtkGhostType"
	ghostLevelArray = "vtkGhostLevels"
)

// A part is one file of the input with its pieces, and so one of the output.
type part struct {
	source int
	block  int
	pieces []int
}

// parts lists the files that have pieces.
func parts(model *mesh.Model) []part {
	var list []part
	for i := range model.Pieces {
		piece := &model.Pieces[i]
		if last := len(list) - 1; last >= 0 && list[last].source == piece.Source {
			list[last].pieces = append(list[last].pieces, i)
			continue
		}
		list = append(list, part{source: piece.Source, block: piece.Block, pieces: []int{i}})
	}
	return list
}

// write writes the annotated files as drafts.
func (a *Annotation) write(ctx context.Context, ledger *energy.Ledger, files *drafts) error {
	cells, err := spoolCells(ctx, a.model, a.workers, a.folder, a.target())
	if err != nil {
		return err
	}
	defer cells.close()
	added := newAddedCells(a, cells, ledger)
	list := parts(a.model)
	if a.extension() == ".vtu" {
		file := &vtuFile{version: plainVersion}
		if len(list) > 0 {
			file = added.file(list[0])
		} else {
			file.fields = added.containerFields()
		}
		return added.writePart(ctx, file, files, a.target())
	}
	var written []*vtuFile
	for number, part := range list {
		file := added.file(part)
		if err := added.writePart(ctx, file, files, filepath.Join(a.folder, filepath.FromSlash(partName(number)))); err != nil {
			return err
		}
		written = append(written, file)
	}
	return files.write(a.target(), func(to io.Writer) error {
		if a.extension() == ".pvtu" {
			return added.writeParallel(ctx, to, written)
		}
		return added.writeBlocks(ctx, to, list)
	})
}

// writePart writes one unstructured grid.
func (a *addedCells) writePart(ctx context.Context, file *vtuFile, files *drafts, target string) error {
	return files.create(target, func(to *os.File) error {
		return file.write(ctx, named{to, target}, a.workers, a.model.Open)
	})
}

// A named is a file whose errors say the name that it will have.
type named struct {
	file   *os.File
	target string
}

func (n named) WriteAt(data []byte, at int64) (int, error) {
	written, err := n.file.WriteAt(data, at)
	if err != nil {
		err = fmt.Errorf("%s: %w", n.target, withoutPath(err))
	}
	return written, err
}

// extension tells the form of the whole: of one file an unstructured grid; of several
// that make one block a parallel file; else a tree of blocks, which keeps their names.
// The block of a plain file has no name but the file's.
func (a *Annotation) extension() string {
	list := parts(a.model)
	isOneBlock := !slices.ContainsFunc(list, func(p part) bool { return p.block != list[0].block })
	switch {
	case len(list) == 0:
		return ".vtu"
	case !isOneBlock || a.model.Blocks[list[0].block] != filepath.Base(a.model.Sources[0].Path):
		return ".vtm"
	case len(list) > 1:
		return ".pvtu"
	}
	return ".vtu"
}

// target returns the path of the file that stands for the whole.
func (a *Annotation) target() string {
	return filepath.Join(a.folder, annotatedName+a.extension())
}

// file lays out one file.
func (a *addedCells) file(p part) *vtuFile {
	file := &vtuFile{version: plainVersion}
	source := &a.model.Sources[p.source]
	for _, field := range source.Fields {
		file.fields = append(file.fields, stored(field))
	}
	file.fields = append(file.fields, timeOf(source)...)
	for _, number := range p.pieces {
		file.pieces = append(file.pieces, a.piece(number))
		if a.cells.pieces[number].hasHigherOrder {
			file.version = laterVersion
		}
	}
	for _, array := range file.arrays() {
		if array.Name == ghostArray || array.Name == ghostLevelArray {
			file.version = laterVersion
		}
	}
	return file
}

// piece lays out one piece.
func (a *addedCells) piece(number int) vtuPiece {
	piece := &a.model.Pieces[number]
	result := vtuPiece{
		pointCount: piece.PointCount, cellCount: piece.CellCount,
		points: pointsOf(piece, number), cells: a.cells.arrays(number, piece.CellCount),
	}
	for _, array := range a.inputArrays(piece) {
		if array.On == mesh.OnPoint {
			result.pointData = append(result.pointData, stored(array))
		} else {
			result.cellData = append(result.cellData, stored(array))
		}
	}
	result.cellData = a.withHidden(result.cellData, number)
	added := a.added(number)
	keepNames(result.cellData, added)
	result.cellData = append(result.cellData, added...)
	return result
}

// inputArrays returns the point and cell arrays of a piece. One without points or cells
// gets those that all other pieces of its block have, without values.
func (a *addedCells) inputArrays(piece *mesh.Piece) []mesh.Array {
	var arrays []mesh.Array
	for _, on := range []mesh.Location{mesh.OnPoint, mesh.OnCell} {
		full := fullPiece(a.model, piece, on)
		list := full.Arrays
		if full == piece {
			list = slices.Concat(list, piece.OwnArrays)
		}
		for _, array := range list {
			if array.On != on {
				continue
			}
			if full != piece {
				array.Tuples, array.Bytes = 0, 0
			}
			arrays = append(arrays, array)
		}
	}
	return arrays
}

// fullPiece returns the piece where it has points or cells, else the first one of its
// block that has; the piece itself where none has.
func fullPiece(model *mesh.Model, piece *mesh.Piece, on mesh.Location) *mesh.Piece {
	isFull := func(p *mesh.Piece) bool {
		return on == mesh.OnPoint && p.PointCount > 0 || on == mesh.OnCell && p.CellCount > 0
	}
	if isFull(piece) {
		return piece
	}
	for i := range model.Pieces {
		if other := &model.Pieces[i]; other.Block == piece.Block && isFull(other) {
			return other
		}
	}
	return piece
}

// withHidden adds the marks of the cells that only a grid hides: to the array of marks
// where there is one, else as a new one in all pieces of the block.
func (a *addedCells) withHidden(arrays []vtuArray, number int) []vtuArray {
	piece, cells := &a.model.Pieces[number], &a.cells.pieces[number]
	marks := spooled(a.cells.hidden, cells.firstCell, ghostArray, "UInt8", piece.CellCount)
	at := slices.IndexFunc(arrays, func(array vtuArray) bool { return array.Name == ghostArray })
	switch {
	case at >= 0:
		if cells.hasHidden {
			marks.Attributes, marks.ComponentNames = arrays[at].Attributes, arrays[at].ComponentNames
			arrays[at] = marks
		}
		return arrays
	case !a.hides[piece.Block]:
		return arrays
	case !cells.hasHidden:
		marks.read = func(_ context.Context, _ mesh.Cursor, _ int64, to []byte) error {
			clear(to)
			return nil
		}
	}
	return append(arrays, marks)
}

// keepNames gives input arrays that have the name of an added one another name.
func keepNames(input, added []vtuArray) {
	taken := map[string]bool{}
	for _, list := range [][]vtuArray{input, added} {
		for i := range list {
			taken[list[i].Name] = true
		}
	}
	isAdded := map[string]bool{}
	for i := range added {
		isAdded[added[i].Name] = true
	}
	for i := range input {
		if !isAdded[input[i].Name] {
			continue
		}
		name := input[i].Name + "_input"
		for number := 2; taken[name]; number++ {
			name = fmt.Sprintf("%s_input%d", input[i].Name, number)
		}
		input[i].Name, taken[name] = name, true
	}
}

// containerFields lists the field arrays of the files that only name others; of one
// name the first.
func (a *addedCells) containerFields() []vtuArray {
	hasPieces := map[int]bool{}
	for i := range a.model.Pieces {
		hasPieces[a.model.Pieces[i].Source] = true
	}
	var fields []vtuArray
	for i := range a.model.Sources {
		if hasPieces[i] {
			continue
		}
		for _, field := range a.model.Sources[i].Fields {
			if !slices.ContainsFunc(fields, func(other vtuArray) bool { return other.Name == field.Name }) {
				fields = append(fields, stored(field))
			}
		}
	}
	return fields
}
