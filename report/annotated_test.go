package report

import (
	"bytes"
	"context"
	"encoding/binary"
	"encoding/json"
	"flag"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"strainledger/energy"
	"strainledger/mesh"
	"strainledger/readers"
)

var keep = flag.String("keep", "", "folder in which the annotated samples are left, each in one of its own")

const samples = "../testdata/vtk-samples"

// sampleFiles lists the valid samples.
func sampleFiles(t testing.TB) []string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(samples, "index.json"))
	if err != nil {
		t.Fatal(err)
	}
	var index struct{ Files []struct{ File string } }
	if err := json.Unmarshal(data, &index); err != nil {
		t.Fatal(err)
	}
	var files []string
	for _, file := range index.Files {
		files = append(files, file.File)
	}
	if len(files) < 200 {
		t.Fatalf("%d samples, want more", len(files))
	}
	return files
}

func open(t testing.TB, path string) *mesh.Model {
	t.Helper()
	model, err := readers.Open(context.Background(), []string{path}, readers.Options{AllowOutside: true})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { model.Close() })
	return model
}

// annotate writes annotated results with made-up columns: at each cell its place among
// all cells, plus a part that tells the columns apart. The last cell of each file is a
// hotspot.
func annotate(t testing.TB, model *mesh.Model, folder string, workers int) string {
	t.Helper()
	a, err := NewAnnotation(folder, model, workers)
	if err != nil {
		t.Fatal(err)
	}
	defer a.Close()
	fillColumns(t, a)
	files := &drafts{}
	defer files.discard()
	if err := a.write(context.Background(), &energy.Ledger{Hotspots: lastCells(model)}, files); err != nil {
		t.Fatal(err)
	}
	if err := files.commit(); err != nil {
		t.Fatal(err)
	}
	return a.target()
}

func fillColumns(t testing.TB, a *Annotation) {
	t.Helper()
	to := a.Columns()
	for place := range a.model.CellCount() {
		for i, column := range []interface {
			WriteAt([]byte, int64) (int, error)
		}{to.Density, to.Energy, to.EquivalentStress, to.Utilisation} {
			value := binary.LittleEndian.AppendUint64(nil, math.Float64bits(madeUp(place, i)))
			if _, err := column.WriteAt(value, 8*place); err != nil {
				t.Fatal(err)
			}
		}
		region := binary.LittleEndian.AppendUint32(nil, uint32(madeUpRegion(place)))
		if _, err := to.Region.WriteAt(region, 4*place); err != nil {
			t.Fatal(err)
		}
	}
}

func madeUp(place int64, column int) float64 {
	if place%5 == 4 {
		return math.NaN()
	}
	return float64(place) + float64(column)/8
}

func madeUpRegion(place int64) int32 { return int32(place%3) - 1 }

// lastCells makes a hotspot of the last cell of each file, those of later files first.
func lastCells(model *mesh.Model) []energy.Hotspot {
	var list []energy.Hotspot
	for source := range slices.Backward(model.Sources) {
		if cells := model.Sources[source].Cells; cells > 0 {
			list = append(list, energy.Hotspot{Rank: len(list) + 1, Source: source, Cell: cells - 1})
		}
	}
	return list
}

// TestAnnotatedSamples writes every sample annotated and reads it back: every array is
// the same bit for bit, every cell has its nodes, marks and shape, and the added arrays
// hold what was given.
func TestAnnotatedSamples(t *testing.T) {
	for _, file := range sampleFiles(t) {
		t.Run(file, func(t *testing.T) {
			folder := t.TempDir()
			if *keep != "" {
				folder = filepath.Join(*keep, file)
			}
			given := open(t, filepath.Join(samples, file))
			target := annotate(t, given, folder, 2)
			compareModels(t, given, open(t, target))
			again := t.TempDir()
			for _, workers := range []int{1, 5} {
				annotate(t, given, again, workers)
				compareFolders(t, folder, again)
			}
		})
	}
}

// compareFolders demands that two folders hold the same files.
func compareFolders(t *testing.T, one, other string) {
	t.Helper()
	list := func(folder string) map[string][]byte {
		files := map[string][]byte{}
		err := filepath.WalkDir(folder, func(path string, entry fs.DirEntry, err error) error {
			if err != nil || entry.IsDir() {
				return err
			}
			name, _ := filepath.Rel(folder, path)
			files[name], err = os.ReadFile(path)
			return err
		})
		if err != nil {
			t.Fatal(err)
		}
		return files
	}
	a, b := list(one), list(other)
	if len(a) != len(b) || len(a) == 0 {
		t.Errorf("%d files and %d", len(a), len(b))
	}
	for name := range a {
		if !bytes.Equal(a[name], b[name]) {
			t.Errorf("%s differs with the number of workers", name)
		}
	}
}

// compareModels compares what was written with what it was written from.
func compareModels(t *testing.T, given, written *mesh.Model) {
	t.Helper()
	if len(given.Pieces) != len(written.Pieces) {
		t.Fatalf("%d pieces, want %d", len(written.Pieces), len(given.Pieces))
	}
	one, other := given.Open(), written.Open()
	defer one.Close()
	defer other.Close()
	var place int64
	for i := range given.Pieces {
		p := &pieces{t: t, given: given, written: written, one: one, other: other, number: i, place: place}
		p.compare()
		place += given.Pieces[i].CellCount
	}
	compareSources(t, given, written, one, other)
}

// pieces compares one piece.
type pieces struct {
	t              *testing.T
	given, written *mesh.Model
	one, other     mesh.Cursor
	number         int
	place          int64 // of its first cell
}

func (p *pieces) compare() {
	t, given, written := p.t, &p.given.Pieces[p.number], &p.written.Pieces[p.number]
	t.Helper()
	if given.PointCount != written.PointCount || given.CellCount != written.CellCount || given.FirstCell != written.FirstCell {
		t.Fatalf("piece %d is %+v, want %+v", p.number, written, given)
	}
	if a, b := p.given.Blocks[given.Block], p.written.Blocks[written.Block]; a != b && a != filepath.Base(p.given.Sources[0].Path) {
		t.Errorf("piece %d is in block %q, want %q", p.number, b, a)
	}
	p.compareCells()
	p.comparePoints()
	hidden := false
	for _, array := range slices.Concat(given.Arrays, given.OwnArrays) {
		if p.compareArray(array) {
			hidden = true
		}
	}
	want := len(given.Arrays) + len(given.OwnArrays) + 6
	if !hidden && find(written, mesh.OnCell, ghostArray) != nil && find(given, mesh.OnCell, ghostArray) == nil {
		want++ // of a grid that hides cells
		if given.Grid == nil {
			t.Errorf("piece %d got an array of marks", p.number)
		}
	}
	isEmpty := given.PointCount == 0 || given.CellCount == 0
	if got := len(written.Arrays) + len(written.OwnArrays); got != want && !isEmpty {
		t.Errorf("piece %d has %d arrays, want %d", p.number, got, want)
	}
	p.compareAdded()
}

// find returns the description of an array that is listed or the reader's own.
func find(piece *mesh.Piece, on mesh.Location, name string) *mesh.Array {
	for _, list := range [][]mesh.Array{piece.Arrays, piece.OwnArrays} {
		for i := range list {
			if list[i].On == on && list[i].Name == name {
				return &list[i]
			}
		}
	}
	return nil
}

func (p *pieces) cells(cursor mesh.Cursor) *mesh.Chunk {
	p.t.Helper()
	chunk := &mesh.Chunk{}
	span := mesh.Span{Piece: p.number, Low: 0, High: p.given.Pieces[p.number].CellCount}
	if err := cursor.Cells(context.Background(), span, &mesh.Want{}, chunk); err != nil {
		p.t.Fatal(err)
	}
	return chunk
}

func (p *pieces) compareCells() {
	t := p.t
	t.Helper()
	a, b := p.cells(p.one), p.cells(p.other)
	if !slices.Equal(a.Types, b.Types) || !slices.Equal(a.Start, b.Start) || !slices.Equal(a.Nodes, b.Nodes) || !slices.Equal(a.Shapes, b.Shapes) {
		t.Errorf("piece %d: cells %v %v %v, want %v %v %v", p.number, b.Types, b.Start, b.Nodes, a.Types, a.Start, a.Nodes)
	}
	if !slices.Equal(a.Faces, b.Faces) || !slices.Equal(a.FaceStart, b.FaceStart) {
		t.Errorf("piece %d: faces %v %v, want %v %v", p.number, b.Faces, b.FaceStart, a.Faces, a.FaceStart)
	}
	const out = mesh.DuplicateCell | mesh.HiddenCell
	for i := range a.Types {
		var one, other uint8
		if a.Hidden != nil {
			one = a.Hidden[i]
		}
		if b.Hidden != nil {
			other = b.Hidden[i]
		}
		if one&out != other&out {
			t.Errorf("piece %d: cell %d is marked %d, want %d", p.number, i, other, one)
		}
	}
}

func (p *pieces) comparePoints() {
	t, given, written := p.t, &p.given.Pieces[p.number], &p.written.Pieces[p.number]
	t.Helper()
	if given.RationalWeights != written.RationalWeights {
		t.Errorf("rational weights %q, want %q", written.RationalWeights, given.RationalWeights)
	}
	a, b := make([]float64, 3*given.PointCount), make([]float64, 3*given.PointCount)
	for _, points := range []struct {
		cursor mesh.Cursor
		to     []float64
	}{{p.one, a}, {p.other, b}} {
		if err := points.cursor.Points(context.Background(), p.number, 0, given.PointCount, points.to); err != nil {
			t.Fatal(err)
		}
	}
	if !sameBits(a, b) {
		t.Errorf("piece %d: points %v, want %v", p.number, b, a)
	}
	if given.PointCount == 0 {
		return
	}
	if written.Points.Name != "Points" || given.Points != nil && given.Points.Type != written.Points.Type {
		t.Errorf("points are %+v, want them as %+v", written.Points, given.Points)
	}
}

func sameBits(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) })
}

// compareArray reports whether the array is one of marks with more marks than before.
func (p *pieces) compareArray(given mesh.Array) bool {
	t := p.t
	t.Helper()
	written := find(&p.written.Pieces[p.number], given.On, given.Name)
	if written == nil {
		if given.Tuples > 0 {
			t.Errorf("piece %d: no %s array %q", p.number, given.On, given.Name)
		}
		return false
	}
	if given.Tuples == 0 { // what it has of the other pieces is their description
		given.ComponentNames, given.Attributes, given.Information = written.ComponentNames, written.Attributes, written.Information
	}
	compareDescription(t, *written, given)
	one, other := whole(t, p.one, &given), whole(t, p.other, written)
	if bytes.Equal(one, other) {
		return false
	}
	if given.Name == ghostArray && given.On == mesh.OnCell && p.given.Pieces[p.number].Grid != nil {
		if marks := p.cells(p.one).Hidden; bytes.Equal(marks, other) {
			return true
		}
	}
	t.Errorf("piece %d: %s array %q holds % x, want % x", p.number, given.On, given.Name, other, one)
	return false
}

func compareDescription(t *testing.T, written, given mesh.Array) {
	t.Helper()
	if written.Type != given.Type || written.Components != given.Components || written.Tuples != given.Tuples ||
		!slices.Equal(written.ComponentNames, given.ComponentNames) || !slices.Equal(written.Attributes, given.Attributes) || written.Information != given.Information {
		t.Errorf("array %+v, want %+v", written, given)
	}
}

func whole(t *testing.T, cursor mesh.Cursor, array *mesh.Array) []byte {
	t.Helper()
	data := make([]byte, array.Bytes)
	if err := cursor.ReadArray(context.Background(), array, 0, data); err != nil {
		t.Fatal(err)
	}
	return data
}

// compareAdded compares the added arrays with what was given for them.
func (p *pieces) compareAdded() {
	t, piece := p.t, &p.written.Pieces[p.number]
	t.Helper()
	if piece.CellCount == 0 {
		return
	}
	want := &mesh.Want{CellValues: []string{densityArray, energyArray, equivalentArray, utilisationArray, hotspotArray, regionArray}}
	chunk := &mesh.Chunk{}
	if err := p.other.Cells(context.Background(), mesh.Span{Piece: p.number, High: piece.CellCount}, want, chunk); err != nil {
		t.Fatal(err)
	}
	for i := range piece.CellCount {
		source := &p.given.Sources[p.given.Pieces[p.number].Source]
		rank := 0.0
		for _, hotspot := range lastCells(p.given) {
			if hotspot.Source == p.given.Pieces[p.number].Source && p.given.Pieces[p.number].FirstCell+i == source.Cells-1 {
				rank = float64(hotspot.Rank)
			}
		}
		place := p.place + i
		wants := []float64{madeUp(place, 0), madeUp(place, 1), madeUp(place, 2), madeUp(place, 3), rank, float64(madeUpRegion(place))}
		for k, value := range wants {
			if got := chunk.Values[k][i]; got != value && !(math.IsNaN(got) && math.IsNaN(value)) {
				t.Errorf("piece %d: %s of cell %d is %v, want %v", p.number, want.CellValues[k], i, got, value)
			}
		}
	}
	for k, name := range want.CellValues {
		if got, want := piece.Find(mesh.OnCell, name).Type, []string{"Float64", "Int32"}[k/4]; got != want {
			t.Errorf("%s is of type %s, want %s", name, got, want)
		}
	}
}

// compareSources compares the field arrays and the times of the files: those of parts
// with their parts, those of all files that name others with the container's.
func compareSources(t *testing.T, given, written *mesh.Model, one, other mesh.Cursor) {
	t.Helper()
	hasPieces := map[int]bool{}
	for i := range given.Pieces {
		a, b := given.Pieces[i].Source, written.Pieces[i].Source
		if hasPieces[a] {
			continue
		}
		hasPieces[a] = true
		if x, y := given.Sources[a].Time, written.Sources[b].Time; x != y && !math.IsNaN(x) {
			t.Errorf("%s: time %v, want %v", written.Sources[b].Path, y, x)
		}
		compareFields(t, written.Sources[b].Fields, given.Sources[a].Fields, one, other)
		extra := 0
		if !math.IsNaN(given.Sources[a].Time) && !slices.ContainsFunc(given.Sources[a].Fields, func(f mesh.Array) bool { return f.Name == "TimeValue" }) {
			extra = 1
		}
		if got, want := len(written.Sources[b].Fields), len(given.Sources[a].Fields)+extra; got != want {
			t.Errorf("%s: %d field arrays, want %d", written.Sources[b].Path, got, want)
		}
	}
	for i := range given.Sources {
		if !hasPieces[i] {
			compareFields(t, written.Sources[0].Fields, given.Sources[i].Fields, one, other)
		}
	}
}

func compareFields(t *testing.T, written, given []mesh.Array, one, other mesh.Cursor) {
	t.Helper()
	for i := range given {
		k := slices.IndexFunc(written, func(f mesh.Array) bool { return f.Name == given[i].Name })
		if k < 0 {
			t.Errorf("no field array %q", given[i].Name)
			continue
		}
		compareDescription(t, written[k], given[i])
		if a, b := whole(t, one, &given[i]), whole(t, other, &written[k]); !bytes.Equal(a, b) {
			t.Errorf("field array %q holds % x, want % x", given[i].Name, b, a)
		}
	}
}

// Every cell of a hotspot carries its rank, the lowest where hotspots share it; of one
// whose cells are not known the peak's does.
func TestEveryCellOfAHotspotIsMarked(t *testing.T) {
	got := hotspotCells(&energy.Ledger{
		Hotspots: []energy.Hotspot{{Rank: 1, Cell: 7}, {Rank: 2, Cell: 3}, {Rank: 3, Source: 1, Cell: 2}},
		HotspotCells: []energy.HotspotCell{
			{Cell: 7, Rank: 1}, {Cell: 8, Rank: 1}, {Cell: 4, Rank: 1},
			{Cell: 3, Rank: 2}, {Cell: 4, Rank: 2}, {Source: 1, Cell: 0, Rank: 2},
		},
	})
	want := []hotspotCell{{0, 3, 2}, {0, 4, 1}, {0, 7, 1}, {0, 8, 1}, {1, 0, 2}, {1, 2, 3}}
	if !slices.Equal(got, want) {
		t.Errorf("source, cell and rank %v, want %v", got, want)
	}
}
