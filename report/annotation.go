package report

import (
	"cmp"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"

	"strainledger/energy"
	"strainledger/mesh"
)

// The cell arrays that annotated results have beside those of the input.
const (
	densityArray     = "strain_energy_density"
	energyArray      = "strain_energy"
	equivalentArray  = "equivalent_stress"
	utilisationArray = "utilisation"
	hotspotArray     = "hotspot"
	regionArray      = "region"
)

// An Annotation gathers what a tally computes for each cell and writes it beside the
// input: every array of the input bit for bit, and cell arrays with the strain energy
// density, the strain energy, the equivalent stress, the utilisation, the rank of the
// hotspot (0: none) and the index of the region (-1: none). Cells in no account hold
// NaN. An input array that has the name of an added one is kept under that name with
// "_input" behind it.
//
// Whatever the form of the input, each of its files becomes an unstructured grid. A
// cell that the input hides by its points or because another piece holds it too is
// marked in vtkGhostType, where an unstructured grid has its only place for that.
type Annotation struct {
	folder  string
	made    []string // folders that were missing, outermost first
	model   *mesh.Model
	workers int

	density, energy, equivalent, utilisation, region *spool
}

// NewAnnotation prepares annotated results of a model in a folder, which it creates
// where it is missing. Close it after use. Files that are part of the input are refused
// as places to write to.
func NewAnnotation(folder string, model *mesh.Model, workers int) (*Annotation, error) {
	a := &Annotation{folder: folder, model: model, workers: workers}
	if err := a.checkInputs(); err != nil {
		return nil, err
	}
	if err := a.makeFolder(); err != nil {
		return nil, err
	}
	for _, file := range a.spools() {
		var err error
		if *file, err = newSpool(folder, a.target()); err != nil {
			a.Close()
			return nil, err
		}
	}
	return a, nil
}

func (a *Annotation) spools() []**spool {
	return []**spool{&a.density, &a.energy, &a.equivalent, &a.utilisation, &a.region}
}

// Columns returns where the tally of the model is to write.
func (a *Annotation) Columns() *energy.Columns {
	return &energy.Columns{
		Density: a.density, Energy: a.energy, EquivalentStress: a.equivalent, Utilisation: a.utilisation, Region: a.region,
	}
}

// Close removes the temporary files, and the folder where it was created in vain.
func (a *Annotation) Close() {
	for _, file := range a.spools() {
		if *file != nil {
			(*file).close()
		}
	}
	for _, folder := range slices.Backward(a.made) {
		os.Remove(folder) // fails where something is in it
	}
}

// makeFolder creates the folder and notes which ones were missing.
func (a *Annotation) makeFolder() error {
	for folder := filepath.Clean(a.folder); ; folder = filepath.Dir(folder) {
		if _, err := os.Stat(folder); !errors.Is(err, fs.ErrNotExist) {
			break
		}
		a.made = append([]string{folder}, a.made...)
	}
	return os.MkdirAll(a.folder, 0o777)
}

// checkInputs refuses to replace a file that is read.
func (a *Annotation) checkInputs() error {
	for _, path := range a.ownFiles() {
		there, err := os.Stat(path)
		if err != nil {
			continue
		}
		for i := range a.model.Sources {
			if source, err := os.Stat(a.model.Sources[i].Path); err == nil && os.SameFile(there, source) {
				return fmt.Errorf("%s: the file is one of the results that are read; name another folder for the reports", path)
			}
		}
	}
	return nil
}

// The names of the files. Of several files the container stands in the folder itself and
// the others in one below.
const annotatedName = "annotated"

var containerExtensions = []string{".vtu", ".pvtu", ".vtm"}

// partName returns the path of one of several files from the folder on, with slashes.
func partName(number int) string {
	return fmt.Sprintf("%s/%s_%d.vtu", annotatedName, annotatedName, number)
}

// ownFiles lists the files that may be replaced or removed: the containers, and as many
// parts as there are.
func (a *Annotation) ownFiles() []string {
	var paths []string
	for _, extension := range containerExtensions {
		paths = append(paths, filepath.Join(a.folder, annotatedName+extension))
	}
	for number := 0; ; number++ {
		path := filepath.Join(a.folder, filepath.FromSlash(partName(number)))
		if _, err := os.Lstat(path); err != nil && number >= len(a.model.Sources) {
			return paths
		}
		paths = append(paths, path)
	}
}

// removeFormer removes what an earlier tally has left under the names of annotated files
// and the latest one has not written.
func (a *Annotation) removeFormer() {
	written := map[string]bool{a.target(): true}
	if a.extension() != ".vtu" {
		for number := range parts(a.model) {
			written[filepath.Join(a.folder, filepath.FromSlash(partName(number)))] = true
		}
	}
	for _, path := range a.ownFiles() {
		if !written[path] {
			os.Remove(path)
		}
	}
	os.Remove(filepath.Join(a.folder, annotatedName)) // fails where files are in it
}

// An addedCells is what is written of the cells beside the input.
type addedCells struct {
	*Annotation
	cells *cellSpool
	marks []hotspotCell
	hides map[int]bool // blocks in which a grid hides cells
}

func newAddedCells(a *Annotation, cells *cellSpool, ledger *energy.Ledger) *addedCells {
	added := &addedCells{Annotation: a, cells: cells, marks: hotspotCells(ledger), hides: map[int]bool{}}
	for i := range cells.pieces {
		if cells.pieces[i].hasHidden {
			added.hides[a.model.Pieces[i].Block] = true
		}
	}
	return added
}

// A hotspotCell is one cell of a hotspot.
type hotspotCell struct {
	source int
	cell   int64
	rank   int32
}

// hotspotCells lists the cells of all hotspots by source and cell; of a cell in several
// the lowest rank. Of a hotspot whose cells are not all known there is the peak's.
func hotspotCells(ledger *energy.Ledger) []hotspotCell {
	var list []hotspotCell
	for _, hotspot := range ledger.Hotspots {
		list = append(list, hotspotCell{hotspot.Source, hotspot.Cell, int32(hotspot.Rank)})
	}
	for _, cell := range ledger.HotspotCells {
		list = append(list, hotspotCell{cell.Source, cell.Cell, int32(cell.Rank)})
	}
	slices.SortFunc(list, func(a, b hotspotCell) int {
		return cmp.Or(a.compare(&b), cmp.Compare(a.rank, b.rank))
	})
	return slices.CompactFunc(list, func(a, b hotspotCell) bool { return a.compare(&b) == 0 })
}

func (h *hotspotCell) compare(other *hotspotCell) int {
	return cmp.Or(cmp.Compare(h.source, other.source), cmp.Compare(h.cell, other.cell))
}

// hotspots returns the column of ranks for a piece.
func (a *addedCells) hotspots(piece *mesh.Piece) vtuArray {
	find := func(cell int64) int {
		at, _ := slices.BinarySearchFunc(a.marks, hotspotCell{source: piece.Source, cell: piece.FirstCell + cell},
			func(mark, want hotspotCell) int { return mark.compare(&want) })
		return at
	}
	const size = 4
	return vtuArray{
		Array: mesh.Array{Name: hotspotArray, Type: "Int32", Components: 1, Tuples: piece.CellCount, Bytes: size * piece.CellCount},
		read: func(_ context.Context, _ mesh.Cursor, at int64, to []byte) error {
			clear(to)
			first := at / size
			for _, mark := range a.marks[find(first):find(first+int64(len(to)/size))] {
				place := mark.cell - piece.FirstCell - first
				binary.LittleEndian.PutUint32(to[size*place:], uint32(mark.rank))
			}
			return nil
		},
	}
}

// added lists the added columns of a piece.
func (a *addedCells) added(number int) []vtuArray {
	piece, first := &a.model.Pieces[number], a.cells.pieces[number].firstCell
	return []vtuArray{
		spooled(a.density, 8*first, densityArray, "Float64", piece.CellCount),
		spooled(a.energy, 8*first, energyArray, "Float64", piece.CellCount),
		spooled(a.equivalent, 8*first, equivalentArray, "Float64", piece.CellCount),
		spooled(a.utilisation, 8*first, utilisationArray, "Float64", piece.CellCount),
		a.hotspots(piece),
		spooled(a.region, 4*first, regionArray, "Int32", piece.CellCount),
	}
}

// stored returns an array of the input as it is.
func stored(array mesh.Array) vtuArray {
	return vtuArray{array, func(ctx context.Context, cursor mesh.Cursor, at int64, to []byte) error {
		return cursor.ReadArray(ctx, &array, at, to)
	}}
}

// pointsOf returns the coordinates of a piece, those of a grid as Float64.
func pointsOf(piece *mesh.Piece, number int) vtuArray {
	if piece.Points != nil {
		points := stored(*piece.Points)
		points.Name = "Points"
		return points
	}
	const size = 3 * 8
	return vtuArray{
		Array: mesh.Array{Name: "Points", Type: "Float64", Components: 3, Tuples: piece.PointCount, Bytes: size * piece.PointCount},
		read: func(ctx context.Context, cursor mesh.Cursor, at int64, to []byte) error {
			values := make([]float64, len(to)/8)
			if err := cursor.Points(ctx, number, at/size, (at+int64(len(to)))/size, values); err != nil {
				return err
			}
			for i, value := range values {
				binary.LittleEndian.PutUint64(to[8*i:], math.Float64bits(value))
			}
			return nil
		},
	}
}

// timeOf returns the time of a source as a field array, where it is known by other means
// than such an array.
func timeOf(source *mesh.Source) []vtuArray {
	const name = "TimeValue"
	isNamed := func(a mesh.Array) bool { return a.Name == name }
	if math.IsNaN(source.Time) || slices.ContainsFunc(source.Fields, isNamed) {
		return nil
	}
	return []vtuArray{{
		Array: mesh.Array{Name: name, Type: "Float64", Components: 1, Tuples: 1, Bytes: 8},
		read: func(_ context.Context, _ mesh.Cursor, _ int64, to []byte) error {
			binary.LittleEndian.PutUint64(to, math.Float64bits(source.Time))
			return nil
		},
	}}
}
