// Package readers turns result files into streams of cells: bytes to mesh, nothing
// computed.
//
// It reads VTK's open formats: the XML family with its parallel and composite files
// and collections, and the legacy format; each also compressed as a whole (gzip,
// Zstandard, xz). Files are told apart by their content, never by their names. [Open]
// reads headers alone; arrays come chunk by chunk through the model's cursors, and
// only those that are asked for.
//
// A file is never believed. Counts are compared with what the file can hold before
// anything is allocated for them, every point number and every cell is checked
// before it is handed out, and each fault ends in an [Error] that says where it is,
// what was found and what was needed.
package readers

import (
	"bytes"
	"context"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"

	"strainledger/mesh"
)

// Options says how files are read. The zero value holds the defaults.
type Options struct {
	Limits       Limits
	Time         Time
	AllowOutside bool      // follow references that leave the folder of the file that was named
	Stdin        io.Reader // what the path "-" stands for; nil: the process's own
}

// Open reads the headers of the files, which are blocks of one model, and returns
// what they hold. The path "-" is standard input. Close the model after use.
func Open(ctx context.Context, paths []string, options Options) (*mesh.Model, error) {
	o := newOpener(ctx, options)
	defer o.cursor.Close()
	for _, path := range paths {
		if err := o.add(path); err != nil {
			o.close()
			return nil, o.cursor.hand.located(placed(path, err))
		}
	}
	if err := o.finish(); err != nil {
		o.close()
		return nil, placed(paths[0], err)
	}
	return o.model, nil
}

// An opener gathers a model from files.
type opener struct {
	ctx        context.Context
	options    Options
	limits     Limits
	cursor     *cursor // reads what headers need
	model      *mesh.Model
	pieces     []*piece
	listed     []*column        // by mesh.Array.ID
	taken      map[string]bool  // files that are in the model, by clean path
	fieldNames map[string]int   // places of field arrays in the model
	perCell    map[string]int64 // tuples of field arrays for each cell
	blockNames map[string]bool  // names of blocks
	root       string           // folder of the file that the call names
	remarks    map[string]bool  // that were made
	spools     []spoolFile      // temporary files
	decoded    int64            // bytes that compressed content decodes to
}

func newOpener(ctx context.Context, options Options) *opener {
	return &opener{
		ctx: ctx, options: options, limits: options.Limits.withDefaults(), cursor: newCursor(nil, nil, 1),
		model: &mesh.Model{}, taken: map[string]bool{}, fieldNames: map[string]int{}, perCell: map[string]int64{}, blockNames: map[string]bool{}, remarks: map[string]bool{},
	}
}

// A branch is the place in the model at which a file is read.
type branch struct {
	name  string    // of the block, or what comes before the names of blocks
	set   *pieceSet // to which the pieces belong; nil: they make one of their own
	stack []string  // the files that led here, by clean path
	time  float64   // that a collection gives, or NaN
	kind  string    // the type of data set that must come; "" for any
}

// below returns the branch for something inside that has a name.
func (b branch) below(name string) branch {
	if b.name != "" {
		name = b.name + "/" + name
	}
	b.name = name
	return b
}

// add reads one file of the call.
func (o *opener) add(path string) error {
	if o.taken[filepath.Clean(path)] {
		return &reason{ErrReference, "the file is named twice; name each block once"}
	}
	f, err := o.openFile(path)
	if err != nil {
		return err
	}
	o.root = filepath.Dir(path)
	name := filepath.Base(path)
	if o.blockNames[name] {
		name = filepath.ToSlash(path)
	}
	return o.read(f, branch{name: name, time: math.NaN()})
}

// openFile finds a file of the call.
func (o *opener) openFile(path string) (*file, error) {
	if path == "-" {
		return o.spoolStdin()
	}
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, pathReason(err)
	case !info.Mode().IsRegular():
		return nil, unsupported("found no regular file, need one; name standard input as -")
	}
	return &file{path: path, disk: path, size: info.Size(), bytes: info.Size()}, nil
}

// headSize is how much of a file tells its form.
const headSize = 1024

// read reads a file of any form.
func (o *opener) read(f *file, at branch) error {
	if err := o.ctx.Err(); err != nil {
		return err
	}
	clean := filepath.Clean(f.path)
	if slices.Contains(at.stack, clean) {
		return f.fail(0, &reason{ErrReference, "the file refers to itself, directly or through others"})
	}
	at.stack = append(slices.Clone(at.stack), clean)
	if len(at.stack) > o.limits.Depth {
		return f.fail(0, overLimit("found files that refer to files more than %d deep", o.limits.Depth))
	}
	o.taken[clean] = true
	f, err := o.unpack(f)
	if err != nil {
		return err
	}
	head, err := o.head(f)
	if err != nil {
		return err
	}
	switch {
	case len(head) == 0:
		return f.fail(0, truncated("found an empty file"))
	case looksXML(head):
		return o.readXML(f, at)
	case bytes.HasPrefix(head, []byte("# vtk")):
		return o.readLegacy(f, at)
	case bytes.HasPrefix(head, []byte("\x89HDF\r\n\x1a\n")):
		return f.fail(0, unsupported("found an HDF5 file; write the results as .vtu, .vtm or legacy .vtk"))
	}
	return f.fail(0, unsupported("found neither XML nor \"# vtk DataFile Version\" at the beginning; need a VTK file"))
}

func (o *opener) head(f *file) ([]byte, error) {
	head := make([]byte, min(headSize, f.size))
	return head, o.cursor.hand.readAt(f, head, 0)
}

// looksXML reports whether a file begins as XML does.
func looksXML(head []byte) bool {
	head = bytes.TrimPrefix(head, []byte("\xef\xbb\xbf"))
	head = bytes.TrimLeft(head, " \t\r\n")
	return len(head) > 0 && head[0] == '<'
}

// readXML reads a file of the XML family by its type.
func (o *opener) readXML(f *file, at branch) error {
	x, err := readXML(f, o.cursor, o.limits)
	if err != nil {
		return err
	}
	if x.data = x.root.child(x.kind); x.data == nil {
		return placedAt(f, x.root, malformed("found type=%.40q and no element of that name", x.kind))
	}
	if at.kind != "" && x.kind != at.kind {
		return placedAt(f, x.root, malformed("found a piece of type %.40q, need %s", x.kind, at.kind))
	}
	switch x.kind {
	case "UnstructuredGrid", "PolyData", "ImageData", "RectilinearGrid", "StructuredGrid":
		return o.readSerial(x, at)
	case "PUnstructuredGrid", "PPolyData", "PImageData", "PRectilinearGrid", "PStructuredGrid":
		return o.readParallel(x, at)
	case "vtkMultiBlockDataSet", "vtkPartitionedDataSet", "vtkPartitionedDataSetCollection":
		return o.readComposite(x, at)
	case "Collection":
		return o.readCollection(x, at)
	}
	return placedAt(f, x.root, unsupported("found data set of type %.40q, need grids, polygonal data, or files that refer to such", x.kind))
}

// addPiece puts a piece into the model. Its source is the one that comes next.
func (o *opener) addPiece(p *piece, source *mesh.Source, set *pieceSet) error {
	if int64(len(o.pieces)) >= o.limits.Pieces {
		return overLimit("found more than %d pieces; need at most the limit", o.limits.Pieces)
	}
	p.firstCell = source.Cells
	if p.cellCount > maxCells-source.Cells {
		return malformed("found %d cells, need fewer", p.cellCount)
	}
	for _, a := range p.columns() {
		if a.form == blockForm {
			if o.decoded += a.length; o.decoded > o.limits.Decoded {
				return a.fail(overLimit("found compressed arrays of more than %d bytes; need at most the limit", o.limits.Decoded))
			}
		}
	}
	described := mesh.Piece{
		Source: len(o.model.Sources), Block: set.block, FirstCell: p.firstCell,
		CellCount: p.cellCount, PointCount: p.pointCount, RationalWeights: p.weights,
	}
	if p.grid != nil {
		if err := set.lattice.add(p.grid); err != nil {
			return err
		}
		described.Grid = &p.grid.Grid
	}
	o.checkOrder(p)
	source.Cells += p.cellCount
	source.Points += p.pointCount - described.Grid.SharedCount()
	set.pieces = append(set.pieces, len(o.pieces))
	o.model.Pieces = append(o.model.Pieces, described)
	o.pieces = append(o.pieces, p)
	return nil
}

// remark notes something that does not stop the work, once.
func (o *opener) remark(code, message string) {
	if o.remarks[message] {
		return
	}
	o.remarks[message] = true
	o.model.Remarks = append(o.model.Remarks, mesh.Remark{Code: code, Message: message})
}

// finish closes the gathering.
func (o *opener) finish() error {
	slots := 0
	for i, p := range o.pieces {
		slots = max(slots, p.numberSlots())
		o.model.Pieces[i].RunCells = p.runCells()
		o.describe(p, &o.model.Pieces[i])
	}
	for _, source := range o.model.Sources {
		if !math.IsNaN(source.Time) {
			o.model.Times = append(o.model.Times, source.Time)
		}
	}
	slices.Sort(o.model.Times)
	o.model.Times = slices.Compact(o.model.Times)
	if err := o.checkTime(); err != nil {
		return err
	}
	pieces, listed := o.pieces, o.listed
	o.model.Open = func() mesh.Cursor { return newCursor(pieces, listed, max(slots, 1)) }
	o.model.Close = o.close
	return nil
}

// describe puts a piece's arrays into its description.
func (o *opener) describe(p *piece, to *mesh.Piece) {
	for _, a := range p.arrays {
		to.Arrays = append(to.Arrays, o.list(a))
	}
	for _, a := range p.unlisted {
		to.OwnArrays = append(to.OwnArrays, o.list(a))
	}
	if p.points != nil {
		points := o.list(p.points)
		to.Points = &points
	}
}

// checkTime compares the time that was asked for with those of the files: some state
// must be at it, and no file may hold another alone.
func (o *opener) checkTime() error {
	if o.options.Time.Choice != AtNumber {
		return nil
	}
	if _, err := o.options.Time.pick(o.model.Times); err != nil {
		return err
	}
	for _, source := range o.model.Sources {
		if math.IsNaN(source.Time) {
			continue
		}
		if _, err := o.options.Time.pick([]float64{source.Time}); err != nil {
			return &Error{Path: source.Path, Err: err}
		}
	}
	return nil
}
