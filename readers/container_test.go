package readers

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// tetrahedron is a .vtu file of one tetrahedron with further elements in its piece.
func tetrahedron(fields, inside string) string {
	return `<VTKFile type="UnstructuredGrid" version="1.0"><UnstructuredGrid>` + fields + `<Piece NumberOfPoints="4" NumberOfCells="1">
<Points><DataArray type="Float64" NumberOfComponents="3" format="ascii">0 0 0 1 0 0 0 1 0 0 0 1</DataArray></Points>
<Cells><DataArray type="Int64" Name="connectivity" format="ascii">0 1 2 3</DataArray>
<DataArray type="Int64" Name="offsets" format="ascii">4</DataArray>
<DataArray type="UInt8" Name="types" format="ascii">10</DataArray></Cells>
` + inside + `</Piece></UnstructuredGrid></VTKFile>`
}

func cellData(arrays ...string) string {
	text := "<CellData>"
	for _, array := range arrays {
		name, value, _ := strings.Cut(array, "=")
		text += fmt.Sprintf(`<DataArray type="Float64" Name=%q NumberOfComponents="%d" format="ascii">%s</DataArray>`, name, len(strings.Fields(value)), value)
	}
	return text + "</CellData>"
}

func parallel(kind string, sources ...string) string {
	text := fmt.Sprintf("<VTKFile type=%q><%s>", kind, kind)
	for _, source := range sources {
		text += fmt.Sprintf("\n<Piece Source=%q/>", source)
	}
	return text + fmt.Sprintf("\n</%s></VTKFile>", kind)
}

const emptyGrid = `<VTKFile type="UnstructuredGrid"><UnstructuredGrid><Piece NumberOfPoints="0" NumberOfCells="0"/></UnstructuredGrid></VTKFile>`

// writeFiles writes files into a folder of their own and returns it.
func writeFiles(t *testing.T, files map[string]string) string {
	t.Helper()
	folder := t.TempDir()
	for name, text := range files {
		path := filepath.Join(folder, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return folder
}

func codes(model *mesh.Model) (codes []string) {
	for _, remark := range model.Remarks {
		codes = append(codes, remark.Code)
	}
	return codes
}

func TestContainers(t *testing.T) {
	grid := tetrahedron("", cellData("s=1"))
	files := map[string]string{
		"plain.vtu": grid, "a/one.vtu": grid, "a/two.vtu": tetrahedron("", cellData("s=2", "t=3")), "a/empty.vtu": emptyGrid,
		"a/three.vtu":   tetrahedron("", cellData("s=1", "t=3", "w=1")),
		"pair.pvtu":     parallel("PUnstructuredGrid", "a/one.vtu", "", "a/empty.vtu", "a/two.vtu"),
		"windows.pvtu":  parallel("PUnstructuredGrid", `a\one.vtu`),
		"repeated.pvtu": parallel("PUnstructuredGrid", "a/one.vtu", "./a/one.vtu", "a/../a/one.vtu"),
		"sub/up.pvtu":   parallel("PUnstructuredGrid", "../a/one.vtu", "two.vtu"), "sub/two.vtu": grid, "sub/one.vtu": grid,
		"away.pvtu": parallel("PUnstructuredGrid", "/no-such-folder/plain.vtu"),
		"tree.vtm": `<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet>
<DataSet index="0" name="solid" file="a/one.vtu"/><Block index="1"><DataSet index="4" file="a/two.vtu"/><DataSet index="5"/></Block>
<Block index="2" name="more"><Block name="deep"><DataSet name="x" file="sub/inner.vtm"/></Block></Block>
<DataSet index="7" name="again" file="a/one.vtu"/></vtkMultiBlockDataSet></VTKFile>`,
		"sub/inner.vtm": `<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet><DataSet file="../pair2.pvtu"/></vtkMultiBlockDataSet></VTKFile>`,
		"pair2.pvtu":    parallel("PUnstructuredGrid", "a/three.vtu"),
		"parts.vtpc":    `<VTKFile type="vtkPartitionedDataSetCollection"><vtkPartitionedDataSetCollection><Partitions index="0" name="p"><DataSet index="3" file="plain.vtu"/></Partitions></vtkPartitionedDataSetCollection></VTKFile>`,
	}
	folder := writeFiles(t, files)
	for _, test := range []struct {
		name    string
		blocks  []string
		cells   int
		sources int
		arrays  []string // of the last piece
		codes   []string
	}{
		{"plain.vtu", []string{"plain.vtu"}, 1, 1, []string{"s"}, nil},
		{"pair.pvtu", []string{"pair.pvtu"}, 2, 4, []string{"s"}, []string{"array-not-everywhere"}},
		{"windows.pvtu", []string{"windows.pvtu"}, 1, 2, []string{"s"}, nil},
		{"repeated.pvtu", []string{"repeated.pvtu"}, 1, 2, []string{"s"}, []string{"repeated-piece"}},
		{"sub/up.pvtu", []string{"up.pvtu"}, 2, 3, []string{"s"}, []string{"outside-path"}},
		{"away.pvtu", []string{"away.pvtu"}, 1, 2, []string{"s"}, []string{"outside-path"}},
		{"tree.vtm", []string{"solid", "1/4", "more/deep/x/0"}, 3, 6, []string{"s", "t", "w"}, []string{"repeated-piece"}},
		{"parts.vtpc", []string{"p/3"}, 1, 2, []string{"s"}, nil},
	} {
		model, err := Open(context.Background(), []string{filepath.Join(folder, test.name)}, Options{})
		if err != nil {
			t.Errorf("%s: %v", test.name, err)
			continue
		}
		got, err := gather(model, -1, 8192)
		if err != nil {
			t.Errorf("%s: %v", test.name, err)
			continue
		}
		var arrays []string
		for _, a := range model.Pieces[len(model.Pieces)-1].Arrays {
			arrays = append(arrays, a.Name)
		}
		if !slices.Equal(model.Blocks, test.blocks) || int(got.cells) != test.cells || len(model.Sources) != test.sources {
			t.Errorf("%s: blocks %q, %d cells, %d sources; want %q, %d, %d", test.name, model.Blocks, got.cells, len(model.Sources), test.blocks, test.cells, test.sources)
		}
		if !slices.Equal(arrays, test.arrays) || !slices.Equal(codes(model), test.codes) {
			t.Errorf("%s: arrays %q, remarks %+v; want %q, %q", test.name, arrays, model.Remarks, test.arrays, test.codes)
		}
		if first := model.Sources[0]; test.sources > 1 && (first.Cells != 0 || first.Points != 0) {
			t.Errorf("%s: the file that lists others has %+v", test.name, first)
		}
	}
}

func TestSeveralFilesAreBlocks(t *testing.T) {
	grid := tetrahedron("", "")
	folder := writeFiles(t, map[string]string{"a/x.vtu": grid, "b/x.vtu": grid, "y.vtk": legacyTetrahedron})
	path := func(name string) string { return filepath.Join(folder, name) }
	model, err := Open(context.Background(), []string{path("a/x.vtu"), path("b/x.vtu"), path("y.vtk")}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"x.vtu", filepath.ToSlash(path("b/x.vtu")), "y.vtk"}; !slices.Equal(model.Blocks, want) {
		t.Errorf("blocks %q, want %q", model.Blocks, want)
	}
	for i, piece := range model.Pieces {
		if piece.Source != i || piece.Block != i || piece.FirstCell != 0 {
			t.Errorf("piece %d is %+v", i, piece)
		}
	}
	_, err = Open(context.Background(), []string{path("a/x.vtu"), path("a/../a/x.vtu")}, Options{})
	if !errors.Is(err, ErrReference) {
		t.Errorf("a file named twice: %v", err)
	}
}

func TestContainerErrors(t *testing.T) {
	grid := tetrahedron("", cellData("s=1 2"))
	files := map[string]string{
		"one.vtu": grid, "wide.vtu": tetrahedron("", cellData("s=1 2 3")), "y.vtk": legacyTetrahedron,
		"self.pvtu": parallel("PUnstructuredGrid", "self.pvtu"), "kind.pvtu": parallel("PPolyData", "one.vtu"),
		"legacy.pvtu": parallel("PUnstructuredGrid", "y.vtk"), "missing.pvtu": parallel("PUnstructuredGrid", "none.vtu"),
		"folder.pvtu": parallel("PUnstructuredGrid", "folder"), "folder/x": "", "width.pvtu": parallel("PUnstructuredGrid", "one.vtu", "wide.vtu"),
		"sub/away.pvtu": parallel("PUnstructuredGrid", "../one.vtu"),
		"a.vtm":         `<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet><DataSet file="b.vtm"/></vtkMultiBlockDataSet></VTKFile>`,
		"b.vtm":         `<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet><DataSet file="a.vtm"/></vtkMultiBlockDataSet></VTKFile>`,
		"index.vtm":     `<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet><DataSet index="-1" file="one.vtu"/></vtkMultiBlockDataSet></VTKFile>`,
		"table.vtm":     `<VTKFile type="vtkTable"><vtkTable/></VTKFile>`, "hdf.vtu": "\x89HDF\r\n\x1a\n0000", "text.vtu": "solid x",
		"none.vtm":  `<VTKFile type="vtkMultiBlockDataSet"></VTKFile>`,
		"empty.pvd": `<VTKFile type="Collection"><Collection></Collection></VTKFile>`,
		"time.pvd":  `<VTKFile type="Collection"><Collection><DataSet timestep="x" file="one.vtu"/></Collection></VTKFile>`,
		"file.pvd":  `<VTKFile type="Collection"><Collection><DataSet timestep="1"/></Collection></VTKFile>`,
	}
	for i := range 9 {
		files[fmt.Sprintf("deep%d.vtm", i)] = fmt.Sprintf(`<VTKFile type="vtkMultiBlockDataSet"><vtkMultiBlockDataSet><DataSet file="deep%d.vtm"/></vtkMultiBlockDataSet></VTKFile>`, i+1)
	}
	folder := writeFiles(t, files)
	for _, test := range []struct {
		name, need string
		kind       error
	}{
		{"self.pvtu", "refers to itself", ErrReference}, {"a.vtm", "refers to itself", ErrReference},
		{"kind.pvtu", "need PolyData", ErrMalformed}, {"legacy.pvtu", "need an XML file", ErrMalformed},
		{"missing.pvtu", "none.vtu", ErrReference}, {"folder.pvtu", "no regular file", ErrReference}, {"folder", "no regular file", ErrUnsupported},
		{"width.pvtu", "found 3 components here and 2", ErrMalformed}, {"sub/away.pvtu", "outside the folder", ErrReference},
		{"index.vtm", "index=\"-1\"", ErrMalformed}, {"table.vtm", "vtkTable", ErrUnsupported}, {"hdf.vtu", "HDF5", ErrUnsupported},
		{"text.vtu", "neither XML nor", ErrUnsupported}, {"none.vtm", "no element of that name", ErrMalformed}, {"deep0.vtm", "more than 8 deep", ErrLimit},
		{"empty.pvd", "no DataSet", ErrMalformed}, {"time.pvd", "timestep=\"x\"", ErrMalformed}, {"file.pvd", "no name of a file", ErrMalformed},
		{"nowhere.vtu", "no such file", os.ErrNotExist},
	} {
		_, err := Open(context.Background(), []string{filepath.Join(folder, test.name)}, Options{})
		place := new(Error)
		isKind := errors.Is(err, test.kind) || test.kind == os.ErrNotExist
		if !errors.As(err, &place) || !isKind || !strings.Contains(err.Error(), test.need) {
			t.Errorf("%s: error %v, want %v with %q", test.name, err, test.kind, test.need)
		}
	}
	model, err := Open(context.Background(), []string{filepath.Join(folder, "sub/away.pvtu")}, Options{AllowOutside: true})
	if err != nil || model.CellCount() != 1 || !slices.Equal(codes(model), []string{"outside-path"}) {
		t.Errorf("allowed outside: %v", err)
	}
	if _, err := Open(context.Background(), []string{filepath.Join(folder, "deep0.vtm")}, Options{Limits: Limits{Depth: 20}}); !errors.Is(err, ErrReference) {
		t.Errorf("nine files deep with a limit of 20: %v", err)
	}
}

func TestTimes(t *testing.T) {
	at := func(time string) string {
		return tetrahedron(`<FieldData><DataArray type="Float64" Name="TimeValue" NumberOfTuples="1" format="ascii">`+time+`</DataArray></FieldData>`, "")
	}
	steps := tetrahedron("", `<CellData>
<DataArray type="Float64" Name="s" TimeStep="0 2" format="ascii">1</DataArray><DataArray type="Float64" Name="s" TimeStep="1" format="ascii">2</DataArray>
<DataArray type="Float64" Name="fixed" format="ascii">9</DataArray></CellData>`)
	steps = strings.Replace(steps, "<UnstructuredGrid>", "<UnstructuredGrid TimeValues=\"\n0\n 0.5  \n2 \">", 1)
	folder := writeFiles(t, map[string]string{
		"one.vtu": at("1.5"), "two.vtu": at("7"), "none.vtu": tetrahedron("", ""), "steps.vtu": steps,
		"series.pvd": `<VTKFile type="Collection"><Collection>
<DataSet timestep="3" part="0" file="two.vtu"/><DataSet timestep="1" part="0" file="one.vtu"/><DataSet file="none.vtu"/></Collection></VTKFile>`,
		"parts.pvd": `<VTKFile type="Collection"><Collection><DataSet timestep="1" part="0" file="one.vtu"/>
<DataSet timestep="1" part="1" group="g" file="two.vtu"/><DataSet timestep="1" name="n" file="none.vtu"/><DataSet timestep="1" part="0" file="steps.vtu"/></Collection></VTKFile>`,
	})
	number := func(value float64) Time { return Time{Choice: AtNumber, Number: value} }
	for _, test := range []struct {
		name   string
		time   Time
		times  []float64
		chosen float64
		blocks []string
		s      float64 // value of the array s
	}{
		{"one.vtu", Time{}, []float64{1.5}, 1.5, []string{"one.vtu"}, 0},
		{"one.vtu", number(1.5 * (1 + 1e-10)), []float64{1.5}, 1.5, []string{"one.vtu"}, 0},
		{"none.vtu", Time{}, nil, math.NaN(), []string{"none.vtu"}, 0},
		{"series.pvd", Time{}, []float64{0, 1, 3}, 3, []string{"series.pvd"}, 0},
		{"series.pvd", Time{Choice: First}, []float64{0, 1, 3}, 0, []string{"series.pvd"}, 0},
		{"series.pvd", number(1), []float64{0, 1, 3}, 1, []string{"series.pvd"}, 0},
		{"series.pvd", number(0), []float64{0, 1, 3}, 0, []string{"series.pvd"}, 0},
		{"steps.vtu", Time{}, []float64{0, 0.5, 2}, 2, []string{"steps.vtu"}, 1},
		{"steps.vtu", number(0.5), []float64{0, 0.5, 2}, 0.5, []string{"steps.vtu"}, 2},
		{"steps.vtu", Time{Choice: First}, []float64{0, 0.5, 2}, 0, []string{"steps.vtu"}, 1},
	} {
		model, err := Open(context.Background(), []string{filepath.Join(folder, test.name)}, Options{Time: test.time})
		if err != nil {
			t.Errorf("%s at %+v: %v", test.name, test.time, err)
			continue
		}
		got, err := gather(model, -1, 8192)
		if err != nil {
			t.Fatal(err)
		}
		chosen := model.Sources[len(model.Sources)-1].Time
		if !slices.Equal(model.Times, test.times) || chosen != test.chosen && !math.IsNaN(test.chosen) || !slices.Equal(model.Blocks, test.blocks) {
			t.Errorf("%s at %+v: times %v, %v, blocks %q", test.name, test.time, model.Times, chosen, model.Blocks)
		}
		if s := got.arrays[arrayKey{mesh.OnCell, "s"}]; test.s != 0 && s.values[0] != test.s {
			t.Errorf("%s at %+v: s is %v, want %v", test.name, test.time, s.values, test.s)
		}
	}
	model, err := Open(context.Background(), []string{filepath.Join(folder, "parts.pvd")}, Options{})
	if want := []string{"0", "g/1", "n", "0-3"}; err != nil || !slices.Equal(model.Blocks, want) {
		t.Errorf("parts: blocks %q, %v, want %q", model.Blocks, err, want)
	}
	for name, need := range map[string]string{
		"series.pvd": "need one of 0, 1, 3", "steps.vtu": "need one of 0, 0.5, 2", "one.vtu": "need one of 1.5", "none.vtu": "the files state no time",
	} {
		_, err := Open(context.Background(), []string{filepath.Join(folder, name)}, Options{Time: number(1.25)})
		if !errors.Is(err, ErrTime) || !strings.Contains(err.Error(), need) || !strings.Contains(err.Error(), "1.25") {
			t.Errorf("%s: %v, want %q", name, err, need)
		}
	}
}

// A block at another time than the one asked for is no part of that state.
func TestBlocksOfOneTime(t *testing.T) {
	at := func(time string) string {
		return tetrahedron(`<FieldData><DataArray type="Float64" Name="TimeValue" NumberOfTuples="1" format="ascii">`+time+`</DataArray></FieldData>`, "")
	}
	folder := writeFiles(t, map[string]string{"a.vtu": at("1"), "b.vtu": at("2"), "c.vtu": at("1")})
	open := func(names ...string) error {
		for i, name := range names {
			names[i] = filepath.Join(folder, name)
		}
		return justError(Open(context.Background(), names, Options{Time: Time{Choice: AtNumber, Number: 1}}))
	}
	if err := open("a.vtu", "c.vtu"); err != nil {
		t.Error(err)
	}
	if err := open("a.vtu", "b.vtu"); !errors.Is(err, ErrTime) || !strings.Contains(err.Error(), "b.vtu: found no state at time 1, need one of 2") {
		t.Error(err)
	}
}

// Results at integration points lie in the field data of each piece's file.
func TestFieldsOfPieces(t *testing.T) {
	fields := func(value int) string {
		return fmt.Sprintf(`<FieldData><DataArray type="Float64" Name="TimeValue" NumberOfTuples="1" format="ascii">%d</DataArray>
<DataArray type="Float64" Name="ip" NumberOfComponents="2" NumberOfTuples="6" format="ascii">%d 1 2 3 4 5 6 7 8 9 10 11</DataArray></FieldData>`, value, value)
	}
	two := func(value int) string {
		grid := tetrahedron(fields(value), "")
		piece := grid[strings.Index(grid, "<Piece"):strings.Index(grid, "</UnstructuredGrid>")]
		return strings.Replace(grid, "</UnstructuredGrid>", piece+"</UnstructuredGrid>", 1)
	}
	folder := writeFiles(t, map[string]string{"a.vtu": two(7), "b.vtu": two(9), "all.pvtu": parallel("PUnstructuredGrid", "a.vtu", "b.vtu")})
	model, err := Open(context.Background(), []string{filepath.Join(folder, "all.pvtu")}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(model.Fields) != 2 || model.Fields[0].Tuples != 1 || model.Fields[1].Tuples != 12 {
		t.Errorf("fields %+v", model.Fields)
	}
	if !slices.Equal(model.Times, []float64{7, 9}) || model.Sources[1].Time != 7 || model.Sources[2].Time != 9 {
		t.Errorf("times %v of %+v", model.Times, model.Sources)
	}
	cursor := newTestCursor(t, model)
	for piece, want := range [][]float64{{7, 1, 2, 3, 4, 5}, {6, 7, 8, 9, 10, 11}, {9, 1, 2, 3, 4, 5}, {6, 7, 8, 9, 10, 11}} {
		var c mesh.Chunk
		span := mesh.Span{Piece: piece, Low: 0, High: 1}
		if err := cursor.Cells(context.Background(), span, &mesh.Want{FieldValues: []string{"ip"}}, &c); err != nil {
			t.Fatal(err)
		}
		if !slices.Equal(c.FieldValues[0], want) {
			t.Errorf("piece %d: %v, want %v", piece, c.FieldValues[0], want)
		}
		if model.Pieces[piece].FirstCell != int64(piece%2) {
			t.Errorf("piece %d begins at cell %d", piece, model.Pieces[piece].FirstCell)
		}
	}
}

// Ghost marks that only some pieces need stay in use where they are.
func TestGhostsInSomePieces(t *testing.T) {
	marked := strings.Replace(cellData("s=2", "vtkGhostType=1"), `"Float64" Name="vtkGhostType"`, `"UInt8" Name="vtkGhostType"`, 1)
	folder := writeFiles(t, map[string]string{
		"a.vtu": tetrahedron("", cellData("s=1")), "b.vtu": tetrahedron("", marked), "all.pvtu": parallel("PUnstructuredGrid", "a.vtu", "b.vtu"),
	})
	model, err := Open(context.Background(), []string{filepath.Join(folder, "all.pvtu")}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := gather(model, -1, 8192)
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(got.hidden, []uint8{1}) || len(model.Remarks) != 0 || len(model.Pieces[1].Arrays) != 1 {
		t.Errorf("marks %v, remarks %v, arrays %v", got.hidden, model.Remarks, model.Pieces[1].Arrays)
	}
}
