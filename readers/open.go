// Package readers turns result files into streams of cells: bytes to mesh, nothing
// computed.
//
// It reads VTK's open formats: the XML family and the legacy format. Files are told
// apart by their content, never by their names. [Open] reads headers alone; arrays
// come chunk by chunk through the model's cursors, and only those that are asked for.
//
// A file is never believed. Counts are compared with what the file can hold before
// anything is allocated for them, every point number and every cell is checked
// before it is handed out, and each fault ends in an [Error] that says where it is,
// what was found and what was needed.
package readers

import (
	"bytes"
	"context"
	"errors"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"

	"strainledger/mesh"
)

// Options says how files are read. The zero value holds the defaults.
type Options struct {
	Limits       Limits
	Time         Time
	AllowOutside bool // follow references that leave the folder of the file that makes them
}

// A Choice is a way to pick one state of several.
type Choice uint8

// The choices of a state.
const (
	Last Choice = iota
	First
	AtNumber
)

// A Time says which state is read. The zero value is the last.
type Time struct {
	Choice Choice
	Number float64 // for AtNumber; must agree with a state's time to 1e-9 of it
}

// pick returns the index of the state among the times, which rise.
func (t Time) pick(times []float64) (int, error) {
	switch {
	case t.Choice == First:
		return 0, nil
	case t.Choice == Last:
		return len(times) - 1, nil
	}
	for i, time := range times {
		if math.Abs(time-t.Number) <= 1e-9*math.Abs(t.Number) {
			return i, nil
		}
	}
	return 0, &reason{ErrTime, "found no state at time " + formatNumber(t.Number) + ", need one of " + formatNumbers(times)}
}

// An opener gathers a model from files.
type opener struct {
	options Options
	limits  Limits
	cursor  *cursor // reads what headers need
	model   *mesh.Model
	pieces  []*piece
	seen    map[string]bool // files named on the command line
}

// Open reads the headers of the files, which are blocks of one model, and returns
// what they hold.
func Open(ctx context.Context, paths []string, options Options) (*mesh.Model, error) {
	o := &opener{
		options: options, limits: options.Limits.withDefaults(), cursor: newCursor(nil, 1),
		model: &mesh.Model{}, seen: map[string]bool{},
	}
	defer o.cursor.Close()
	for _, path := range paths {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := o.add(path); err != nil {
			return nil, o.cursor.hand.located(placed(path, err))
		}
	}
	return o.finish(), nil
}

// add reads one file of the call.
func (o *opener) add(path string) error {
	clean := filepath.Clean(path)
	if o.seen[clean] {
		return &reason{ErrReference, "file is named twice"}
	}
	o.seen[clean] = true
	f, err := openFile(path)
	if err != nil {
		return err
	}
	name := filepath.Base(path)
	if slices.Contains(o.model.Blocks, name) {
		name = filepath.ToSlash(path)
	}
	return o.read(f, name)
}

// openFile finds out how long a file is.
func openFile(path string) (*file, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, errors.Unwrap(err)
	case !info.Mode().IsRegular():
		return nil, unsupported("found no regular file")
	}
	return &file{path: path, disk: path, size: info.Size()}, nil
}

// headSize is how much of a file tells its form.
const headSize = 1024

// read reads a file of any form as blocks below a name.
func (o *opener) read(f *file, name string) error {
	head := make([]byte, min(headSize, f.size))
	if err := o.cursor.hand.readAt(f, head, 0); err != nil {
		return err
	}
	switch {
	case len(head) == 0:
		return f.fail(0, truncated("found an empty file"))
	case looksXML(head):
		return o.readXML(f, name)
	case bytes.HasPrefix(head, []byte("# vtk")):
		return o.readLegacy(f, name)
	}
	return f.fail(0, unsupported("found neither XML nor \"# vtk DataFile Version\" at its beginning; need a VTK file"))
}

// readXML reads a file of the XML family.
func (o *opener) readXML(f *file, name string) error {
	x, err := readXML(f, o.cursor, o.limits)
	if err != nil {
		return err
	}
	if x.kind != "UnstructuredGrid" {
		return placedAt(f, x.root, unsupported("found data set of type %.40q", x.kind))
	}
	if x.data = x.root.child(x.kind); x.data == nil {
		return placedAt(f, x.root, malformed("found no element %s", x.kind))
	}
	return o.readSerial(x, name)
}

// readSerial reads a data set that is in one file.
func (o *opener) readSerial(x *xmlFile, name string) error {
	source := mesh.Source{Path: x.file.path, Bytes: x.file.size, Time: math.NaN()}
	if err := o.fields(x, &source); err != nil {
		return err
	}
	block := o.block(name)
	for _, e := range x.data.children {
		if e.name != "Piece" {
			continue
		}
		p, err := x.unstructured(e)
		if err != nil {
			return err
		}
		if err := o.addPiece(p, &source, block); err != nil {
			return placedAt(x.file, e, err)
		}
	}
	o.model.Sources = append(o.model.Sources, source)
	return nil
}

// block returns the index of a block, which is made when it is new.
func (o *opener) block(name string) int {
	o.model.Blocks = append(o.model.Blocks, name)
	return len(o.model.Blocks) - 1
}

// fields reads the arrays of the data set as a whole, and the time among them.
func (o *opener) fields(x *xmlFile, source *mesh.Source) error {
	for _, e := range append(x.data.child("FieldData").arrays(), x.root.child("FieldData").arrays()...) {
		a, err := x.column(e, mesh.OnField)
		if err != nil {
			return err
		}
		if tuples, ok := e.get("NumberOfTuples"); ok {
			a.Tuples, err = strconv.ParseInt(tuples, 10, 64)
			if err != nil || a.Tuples < 0 {
				return placedAt(x.file, e, attributeError(e, "NumberOfTuples", tuples, "a count"))
			}
			if err := a.need(a.Tuples, "tuples"); err != nil {
				return err
			}
		} else if a.width() > 0 {
			a.Tuples = a.length / a.width()
		}
		o.model.Fields = append(o.model.Fields, a.Array)
		if err := o.takeTime(a, source); err != nil {
			return err
		}
	}
	return nil
}

// takeTime notes the time of a state.
func (o *opener) takeTime(a *column, source *mesh.Source) error {
	if a.Name != "TimeValue" || a.Components != 1 || a.Tuples != 1 || a.number.size() == 0 {
		return nil
	}
	values, err := a.values(o.cursor, 0, 1)
	if err != nil {
		return err
	}
	source.Time = values[0]
	return nil
}

// addPiece puts a piece into the model.
func (o *opener) addPiece(p *piece, source *mesh.Source, block int) error {
	if int64(len(o.pieces)) >= o.limits.Pieces {
		return overLimit("found more than %d pieces; need at most the limit", o.limits.Pieces)
	}
	described := mesh.Piece{
		Source: len(o.model.Sources), Block: block, FirstCell: source.Cells,
		CellCount: p.cellCount, PointCount: p.pointCount, RunCells: p.runCells(),
	}
	for _, a := range p.arrays {
		described.Arrays = append(described.Arrays, a.Array)
	}
	source.Cells += p.cellCount
	source.Points += p.pointCount
	o.model.Pieces = append(o.model.Pieces, described)
	o.pieces = append(o.pieces, p)
	return nil
}

// finish closes the gathering.
func (o *opener) finish() *mesh.Model {
	slots := 0
	for _, p := range o.pieces {
		slots = max(slots, p.numberSlots())
	}
	for _, source := range o.model.Sources {
		if !math.IsNaN(source.Time) && !slices.Contains(o.model.Times, source.Time) {
			o.model.Times = append(o.model.Times, source.Time)
		}
	}
	slices.Sort(o.model.Times)
	pieces := o.pieces
	o.model.Open = func() mesh.Cursor { return newCursor(pieces, slots) }
	return o.model
}

// numberSlots gives each column of the piece its place among a cursor's buffers and
// returns their number.
func (p *piece) numberSlots() int {
	slots := 0
	for _, a := range p.columns() {
		a.slot = slots
		slots++
	}
	return slots
}

// columns returns all columns of the piece.
func (p *piece) columns() []*column {
	columns := slices.Clone(p.arrays)
	if p.points != nil {
		columns = append(columns, p.points)
	}
	for i := range p.sections {
		s := &p.sections[i]
		for _, a := range []*column{s.types, s.offsets, s.connectivity} {
			if a != nil {
				columns = append(columns, a)
			}
		}
		if s.list != nil {
			columns = append(columns, s.list.column)
		}
	}
	return columns
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
