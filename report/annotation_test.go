package report

import (
	"bytes"
	"context"
	"encoding/binary"
	"errors"
	"fmt"
	"io/fs"
	"math/rand/v2"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"syscall"
	"testing"

	"strainledger/energy"
	"strainledger/mesh"
	"strainledger/readers"
)

// writeText writes a file below a folder and returns its path.
func writeText(t testing.TB, folder, name, text string) string {
	t.Helper()
	path := filepath.Join(folder, name)
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// triangles is the file of an unstructured grid with two triangles, and more elements in
// field data, point data and cell data.
func triangles(fields, points, cells string) string {
	return fmt.Sprintf(`<VTKFile type="UnstructuredGrid" version="2.2"><UnstructuredGrid><FieldData>%s</FieldData>
<Piece NumberOfPoints="4" NumberOfCells="2"><PointData>%s</PointData><CellData>%s</CellData>
<Points><DataArray type="Float64" NumberOfComponents="3" format="ascii">0 0 0 1 0 0 0 1 0 1 1 0</DataArray></Points>
<Cells><DataArray type="Int64" Name="connectivity" format="ascii">0 1 2 1 3 2</DataArray>
<DataArray type="Int64" Name="offsets" format="ascii">3 6</DataArray>
<DataArray type="UInt8" Name="types" format="ascii">5 5</DataArray></Cells>
</Piece></UnstructuredGrid></VTKFile>`, fields, points, cells)
}

func ascii(number, name, values string) string {
	return fmt.Sprintf(`<DataArray type=%q Name=%q format="ascii">%s</DataArray>`, number, name, values)
}

// names lists the cell arrays of the first piece.
func names(model *mesh.Model) (list []string) {
	for _, array := range model.Pieces[0].Arrays {
		if array.On == mesh.OnCell {
			list = append(list, array.Name)
		}
	}
	return list
}

// Arrays of the input that have the name of an added one stay, under another name,
// however often results are annotated.
func TestNamesOfAddedArrays(t *testing.T) {
	folder := t.TempDir()
	path := writeText(t, folder, "in.vtu", triangles("", ascii("Int8", "region", "1 2 3 4"),
		ascii("Int64", "region", "9007199254740993 -1")+ascii("Float32", "utilisation_input", "0.5 1.5")+ascii("Float32", "utilisation", "2 3")))
	added := []string{densityArray, energyArray, equivalentArray, utilisationArray, hotspotArray, regionArray}
	once := open(t, annotate(t, open(t, path), filepath.Join(folder, "once"), 1))
	if want := append([]string{"region_input", "utilisation_input", "utilisation_input2"}, added...); !slices.Equal(names(once), want) {
		t.Errorf("cell arrays %q, want %q", names(once), want)
	}
	cursor := once.Open()
	defer cursor.Close()
	if got := whole(t, cursor, once.Pieces[0].Find(mesh.OnCell, "region_input")); !bytes.Equal(got, []byte{1, 0, 0, 0, 0, 0, 32, 0, 255, 255, 255, 255, 255, 255, 255, 255}) {
		t.Errorf("region_input holds % x", got)
	}
	if once.Pieces[0].Find(mesh.OnPoint, "region") == nil {
		t.Error("the point array of that name is gone")
	}
	twice := open(t, annotate(t, once, filepath.Join(folder, "twice"), 1))
	want := []string{"region_input", "utilisation_input", "utilisation_input2", densityArray + "_input", energyArray + "_input",
		equivalentArray + "_input", "utilisation_input3", hotspotArray + "_input", "region_input2"}
	if want = append(want, added...); !slices.Equal(names(twice), want) {
		t.Errorf("cell arrays %q, want %q", names(twice), want)
	}
}

// Parts of one whole that differ: one alone has ghost marks, an array has two number
// types, one part has no cells, and one has strings. The whole declares what is alike.
func TestPartsThatDiffer(t *testing.T) {
	folder := t.TempDir()
	mark := func(values string) string { return ascii("UInt8", "vtkGhostType", values) }
	text := `<Array type="String" Name="names" format="ascii">97 0 0</Array>`
	writeText(t, folder, "a.vtu", triangles("", ascii("Float32", "u", "1 2 3 4"), mark("0 1")+ascii("Int16", "part", "1 2")+text))
	writeText(t, folder, "b.vtu", triangles("", ascii("Float64", "u", "1 2 3 4"), ascii("Int16", "part", "3 4")+text))
	writeText(t, folder, "c.vtu", `<VTKFile type="UnstructuredGrid"><UnstructuredGrid><Piece NumberOfPoints="0" NumberOfCells="0"/></UnstructuredGrid></VTKFile>`)
	path := writeText(t, folder, "in.pvtu", `<VTKFile type="PUnstructuredGrid"><PUnstructuredGrid>
<FieldData><Array type="String" Name="remark" NumberOfTuples="2" format="ascii">103 0 -61 -68 0</Array>`+ascii("Int8", "few", "-1 2 3")+`</FieldData>
<Piece Source="a.vtu"/><Piece Source="b.vtu"/><Piece Source="c.vtu"/></PUnstructuredGrid></VTKFile>`)
	given := open(t, path)
	target := annotate(t, given, filepath.Join(folder, "out"), 2)
	if filepath.Base(target) != "annotated.pvtu" {
		t.Fatalf("wrote %s", target)
	}
	written := open(t, target)
	compareModels(t, given, written)
	container, err := os.ReadFile(target)
	if err != nil {
		t.Fatal(err)
	}
	declared := string(container)
	for _, want := range []string{
		`<PDataArray type="Int16" Name="part" NumberOfComponents="1"/>`, `<PArray type="String" Name="names" NumberOfComponents="1"/>`,
		`<PDataArray type="Float64" Name="strain_energy_density" NumberOfComponents="1"/>`, `<PDataArray type="Int32" Name="region"`,
		`<PPoints>` + "\n" + `<PDataArray type="Float64" Name="Points" NumberOfComponents="3"/>`, `version="2.2"`,
		`<Piece Source="annotated/annotated_2.vtu"/>`,
	} {
		if !strings.Contains(declared, want) {
			t.Errorf("no %s in\n%s", want, declared)
		}
	}
	for _, refused := range []string{`Name="u"`, `Name="vtkGhostType"`} {
		if strings.Contains(declared, refused) {
			t.Errorf("%s in\n%s", refused, declared)
		}
	}
	// The part without cells has every array that is declared.
	empty := open(t, filepath.Join(folder, "out", "annotated", "annotated_2.vtu"))
	if got := len(empty.Pieces[0].Arrays); got != 9 { // u, part, names and six added ones
		t.Errorf("%d arrays without tuples, want 9: %+v", got, empty.Pieces[0].Arrays)
	}
}

// Pieces of a grid that overlap: what an earlier one holds too is marked in the later one,
// and both have the marks. Points that hide cells do so without an array of marks too.
func TestCellsHiddenByGrids(t *testing.T) {
	folder := t.TempDir()
	image := func(extent, points, cells string) string {
		return fmt.Sprintf(`<VTKFile type="ImageData" version="2.2"><ImageData WholeExtent="%s" Origin="0 0 0" Spacing="1 1 1"><Piece Extent="%[1]s">
<PointData>%s</PointData><CellData>%s</CellData></Piece></ImageData></VTKFile>`, extent, points, cells)
	}
	writeText(t, folder, "a.vti", image("0 2 0 1 0 0", "", ascii("Int32", "id", "1 2")))
	writeText(t, folder, "b.vti", image("1 4 0 1 0 0", "", ascii("Int32", "id", "3 4 5")))
	parts := writeText(t, folder, "in.pvti", `<VTKFile type="PImageData"><PImageData WholeExtent="0 4 0 1 0 0" Origin="0 0 0" Spacing="1 1 1">
<Piece Extent="0 2 0 1 0 0" Source="a.vti"/><Piece Extent="1 4 0 1 0 0" Source="b.vti"/></PImageData></VTKFile>`)
	points := writeText(t, folder, "points.vti", image("0 2 0 1 0 0", ascii("UInt8", "vtkGhostType", "0 0 2 0 0 0"), ""))
	marked := func(text string) string {
		return strings.Replace(text, "<CellData>", `<CellData Scalars="vtkGhostType">`, 1)
	}
	both := writeText(t, folder, "both.vti", marked(image("0 2 0 1 0 0", ascii("UInt8", "vtkGhostType", "0 0 2 0 0 0"), ascii("UInt8", "vtkGhostType", "5 2"))))
	for path, want := range map[string][]string{parts: {"00 00", "01 00 00"}, points: {"00 20"}, both: {"05 22"}} {
		given := open(t, path)
		written := open(t, annotate(t, given, path+"-out", 2))
		compareModels(t, given, written)
		cursor := written.Open()
		for i := range written.Pieces {
			array := written.Pieces[i].Find(mesh.OnCell, ghostArray)
			if array == nil || array.Type != "UInt8" {
				t.Fatalf("%s: marks %+v", path, array)
			}
			if got := fmt.Sprintf("% x", whole(t, cursor, array)); got != want[i] {
				t.Errorf("%s: marks %s, want %s", path, got, want[i])
			}
		}
		cursor.Close()
	}
}

// What arrays say of integration points is kept, and so is what they are.
func TestInformationIsKept(t *testing.T) {
	given := open(t, "../testdata/integration/dictionary-vtk.vtu")
	written := open(t, annotate(t, given, t.TempDir(), 2))
	compareModels(t, given, written)
	if len(given.Schemes) == 0 || !reflect.DeepEqual(written.Schemes, given.Schemes) {
		t.Errorf("schemes %+v, want %+v", written.Schemes, given.Schemes)
	}
	if !reflect.DeepEqual(fieldNames(written), fieldNames(given)) {
		t.Errorf("fields %q, want %q", fieldNames(written), fieldNames(given))
	}
	information := `<InformationKey name="UNITS_LABEL" location="vtkDataArray">N &lt; mm²</InformationKey>`
	path := writeText(t, t.TempDir(), "in.vtu", triangles(`<DataArray type="Int32" Name="f" format="ascii">1 2`+information+`</DataArray>`,
		"", `<DataArray type="Int32" Name="c" format="ascii">1 2`+information+`<InformationKey name="a&amp;b" location="&#34;"><Value index="0">3</Value></InformationKey></DataArray>`))
	given = open(t, path)
	written = open(t, annotate(t, given, t.TempDir(), 2))
	if got := written.Sources[0].Fields[0].Information; got != information+"\n" {
		t.Errorf("field: %s", got)
	}
	want := information + "\n" + `<InformationKey name="a&amp;b" location="&#34;"><Value index="0">3</Value>` + "\n</InformationKey>\n"
	if got := written.Pieces[0].Arrays[0].Information; got != want {
		t.Errorf("cell array: %s, want %s", got, want)
	}
}

func fieldNames(model *mesh.Model) (names []string) {
	for _, field := range model.Fields {
		names = append(names, field.Name)
	}
	return names
}

// Several wholes of several parts make a tree; several files of one block are pieces.
func TestTreeOfBlocks(t *testing.T) {
	folder := t.TempDir()
	for _, name := range []string{"a.vtu", "b.vtu", "sub/a.vtu", "sub/b.vtu"} {
		writeText(t, folder, name, triangles(ascii("Float64", "TimeValue", "7"), "", ""))
	}
	whole := func(field string) string {
		return `<VTKFile type="PUnstructuredGrid"><PUnstructuredGrid><FieldData>` + field + `</FieldData><Piece Source="a.vtu"/><Piece Source="b.vtu"/></PUnstructuredGrid></VTKFile>`
	}
	paths := []string{
		writeText(t, folder, "hull.pvtu", whole(ascii("Int32", "cycle", "12"))),
		writeText(t, folder, "sub/deck.pvtu", whole(ascii("Int32", "cycle", "13")+ascii("Int32", "other", "14"))),
	}
	single := writeText(t, folder, "one&only.vtu", triangles("", "", ""))
	given, err := readers.Open(context.Background(), append(paths, single), readers.Options{})
	if err != nil {
		t.Fatal(err)
	}
	target := annotate(t, given, filepath.Join(folder, "out"), 2)
	got, err := os.ReadFile(target)
	if err != nil {
		t.Fatal(err)
	}
	want := `<VTKFile type="vtkMultiBlockDataSet" version="1.0" byte_order="LittleEndian" header_type="UInt64">
<vtkMultiBlockDataSet>
<Piece index="0" name="hull.pvtu">
<DataSet index="0" file="annotated/annotated_0.vtu"/>
<DataSet index="1" file="annotated/annotated_1.vtu"/>
</Piece>
<Piece index="1" name="deck.pvtu">
<DataSet index="0" file="annotated/annotated_2.vtu"/>
<DataSet index="1" file="annotated/annotated_3.vtu"/>
</Piece>
<DataSet index="2" name="one&amp;only.vtu" file="annotated/annotated_4.vtu"/>
</vtkMultiBlockDataSet>
<FieldData>
<DataArray type="Int32" Name="cycle" NumberOfComponents="1" NumberOfTuples="1" format="binary">
BAAAAAAAAAAMAAAA
</DataArray>
<DataArray type="Int32" Name="other" NumberOfComponents="1" NumberOfTuples="1" format="binary">
BAAAAAAAAAAOAAAA
</DataArray>
</FieldData>
</VTKFile>
`
	if string(got) != want {
		t.Errorf("wrote\n%s\nwant\n%s", got, want)
	}
	if written := open(t, target); len(written.Pieces) != 5 || written.Sources[1].Time != 7 {
		t.Errorf("%d pieces, time %v", len(written.Pieces), written.Sources[1].Time)
	}
}

// Spans, blocks and tasks end where they end: grids and mixed cells of more than one
// span, among which polyhedra come late, and arrays of lengths about the steps.
func TestManyCells(t *testing.T) {
	folder := t.TempDir()
	// In the second span and in two chunks of the fourth; in the third.
	first, firstEnds := mixedPiece([]int{6*spoolChunk + 5, 12*spoolChunk + 1, 13*spoolChunk + 2})
	second, secondEnds := mixedPiece([]int{8*spoolChunk + 7})
	mixed := `<VTKFile type="UnstructuredGrid" version="1.0"><UnstructuredGrid>` + first + second + `</UnstructuredGrid></VTKFile>`
	random := rand.New(rand.NewPCG(1, 2))
	var values strings.Builder
	for range 40 * 40 * 41 {
		values.WriteString(fmt.Sprint(random.Float64(), " "))
	}
	hidden := ascii("UInt8", "vtkGhostType", "2 "+strings.Repeat("0 ", 41*41*42-1)) // the first cell alone
	grid := fmt.Sprintf(`<VTKFile type="ImageData" version="0.1"><ImageData WholeExtent="-1 39 0 40 0 41" Origin="1 2 3" Spacing=".5 .25 .125">
<Piece Extent="-1 39 0 40 0 41"><PointData>%s</PointData><CellData>%s</CellData></Piece></ImageData></VTKFile>`, hidden, ascii("Float64", "v", values.String()))
	for _, path := range []string{
		writeText(t, folder, "mixed.vtu", mixed),
		writeText(t, folder, "grid.vti", grid),
	} {
		given := open(t, path)
		one, several := filepath.Join(folder, path+"-1"), filepath.Join(folder, path+"-4")
		compareModels(t, given, open(t, annotate(t, given, one, 1)))
		annotate(t, given, several, 4)
		compareFolders(t, one, several)
	}
	checkFaceEnds(t, open(t, filepath.Join(folder, "mixed.vtu")), []string{firstEnds, secondEnds})
}

// mixedPiece returns a piece of points and lines among which the given cells are
// polyhedra, and where the face streams end. The streams begin with another face each.
func mixedPiece(polyhedra []int) (piece, faceEnds string) {
	const cells = 5*4*spoolChunk + 3
	sides := []string{"3 0 2 1 ", "3 0 1 3 ", "3 1 2 3 ", "3 0 3 2 "}
	var connectivity, offsets, types, faces, ends, labels strings.Builder
	place, end := 0, 0
	for i := range cells {
		labels.WriteString(fmt.Sprint(i, " "))
		if slices.Contains(polyhedra, i) {
			place, end = place+4, end+17
			connectivity.WriteString("0 1 2 3 ")
			turn := (end/17 + len(polyhedra)) % len(sides)
			faces.WriteString("4 " + strings.Join(slices.Concat(sides[turn:], sides[:turn]), ""))
			types.WriteString("42 ")
			ends.WriteString(fmt.Sprint(end, " "))
		} else {
			n := 1 + i%2
			place += n
			connectivity.WriteString([]string{"3 ", "3 1 "}[n-1])
			types.WriteString([]string{"1 ", "3 "}[n-1])
			ends.WriteString("-1 ")
		}
		offsets.WriteString(fmt.Sprint(place, " "))
	}
	piece = fmt.Sprintf(`<Piece NumberOfPoints="4" NumberOfCells="%d"><CellData>%s</CellData>
<Points><DataArray type="Int16" NumberOfComponents="3" format="ascii">0 0 0 1 0 0 0 1 0 0 0 1</DataArray></Points>
<Cells>%s%s%s%s%s</Cells></Piece>`, cells, ascii("Int32", "id", labels.String()),
		ascii("Int32", "connectivity", connectivity.String()), ascii("Int32", "offsets", offsets.String()), ascii("UInt8", "types", types.String()),
		ascii("Int32", "faces", faces.String()), ascii("Int32", "faceoffsets", ends.String()))
	return piece, ends.String()
}

// checkFaceEnds compares the ends of face streams with those of the file: -1 for cells
// that are no polyhedra, also for those before the first one.
func checkFaceEnds(t *testing.T, model *mesh.Model, want []string) {
	t.Helper()
	cells, err := spoolCells(context.Background(), model, 3, t.TempDir(), "target")
	if err != nil {
		t.Fatal(err)
	}
	defer cells.close()
	for number := range model.Pieces {
		array := cells.arrays(number, model.Pieces[number].CellCount)[4]
		data := make([]byte, array.Bytes)
		if err := array.read(context.Background(), nil, 0, data); err != nil {
			t.Fatal(err)
		}
		for i, word := range strings.Fields(want[number]) {
			if got := fmt.Sprint(int64(binary.LittleEndian.Uint64(data[8*i:]))); got != word {
				t.Fatalf("piece %d, cell %d: faces end at %s, want %s", number, i, got, word)
			}
		}
	}
}

// A piece without cells gets the arrays of its own block, and a lone block of a tree keeps
// its name.
func TestBlocksOfATree(t *testing.T) {
	folder := t.TempDir()
	empty := `<UnstructuredGrid><Piece NumberOfPoints="0" NumberOfCells="0"/>`
	writeText(t, folder, "a.vtu", triangles("", "", ascii("Int8", "x", "1 2")))
	writeText(t, folder, "b.vtu", strings.Replace(triangles("", "", ascii("Int8", "y", "1 2")), "<UnstructuredGrid>", empty, 1))
	tree := func(sets string) string {
		return `<VTKFile type="vtkMultiBlockDataSet" version="1.0"><vtkMultiBlockDataSet>` + sets + `</vtkMultiBlockDataSet></VTKFile>`
	}
	both := open(t, writeText(t, folder, "both.vtm", tree(`<DataSet index="0" name="steel" file="a.vtu"/><DataSet index="1" name="skin" file="b.vtu"/>`)))
	written := open(t, annotate(t, both, filepath.Join(folder, "both"), 1))
	compareModels(t, both, written)
	if written.Pieces[1].Find(mesh.OnCell, "x") != nil || written.Pieces[1].Find(mesh.OnCell, "y") == nil {
		t.Errorf("the piece without cells has %+v", written.Pieces[1].Arrays)
	}
	lone := open(t, writeText(t, folder, "lone.vtm", tree(`<DataSet index="0" name="steel" file="a.vtu"/>`)))
	if written := open(t, annotate(t, lone, filepath.Join(folder, "lone"), 1)); !slices.Equal(written.Blocks, []string{"steel"}) {
		t.Errorf("blocks %q", written.Blocks)
	}
}

// An array of a later file that only has the name of old ghost levels stays what it is.
func TestGhostLevelsThatAreNone(t *testing.T) {
	given := open(t, writeText(t, t.TempDir(), "in.vtu", triangles("", "", ascii("UInt8", "vtkGhostLevels", "0 2"))))
	written := open(t, annotate(t, given, t.TempDir(), 1))
	compareModels(t, given, written)
	if names(written)[0] != "vtkGhostLevels" {
		t.Errorf("arrays %q", names(written))
	}
}

// Arrays whose length is at, just below and just above that of blocks and of tasks.
func TestLengthsOfArrays(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	file := &vtuFile{version: plainVersion, pieces: []vtuPiece{{points: pointsOf(&mesh.Piece{}, 0)}}}
	var contents [][]byte
	for i, length := range []int{0, 1, 8, blockBytes - 1, blockBytes, blockBytes + 1, taskBytes - 1, taskBytes, taskBytes + 1, 2*taskBytes + blockBytes + 8} {
		content := make([]byte, length)
		for k := range content {
			content[k] = byte(random.IntN(7)) // so that they shrink
		}
		contents = append(contents, content)
		file.fields = append(file.fields, vtuArray{
			Array: mesh.Array{Name: fmt.Sprint("array ", i), Type: "UInt8", Components: 1, Tuples: int64(length), Bytes: int64(length)},
			read: func(_ context.Context, _ mesh.Cursor, at int64, to []byte) error {
				if copy(to, content[at:]) < len(to) {
					return errors.New("read behind the end")
				}
				return nil
			},
		})
	}
	var first []byte
	for _, workers := range []int{1, 2, 7} {
		path := filepath.Join(t.TempDir(), "lengths.vtu")
		out, err := os.Create(path)
		if err != nil {
			t.Fatal(err)
		}
		if err := errors.Join(file.write(context.Background(), out, workers, noCursor), out.Close()); err != nil {
			t.Fatal(err)
		}
		model := open(t, path)
		cursor := model.Open()
		for i, content := range contents {
			if got := whole(t, cursor, &model.Sources[0].Fields[i]); !bytes.Equal(got, content) {
				t.Errorf("array of %d bytes came back as one of %d", len(content), len(got))
			}
		}
		cursor.Close()
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = data
		}
		if !bytes.Equal(data, first) {
			t.Errorf("%d workers write other bytes", workers)
		}
	}
	if len(first) > 3*taskBytes {
		t.Errorf("%d bytes: nothing was compressed", len(first))
	}
}

type idleCursor struct{ mesh.Cursor }

func (idleCursor) Close() error { return nil }

func noCursor() mesh.Cursor { return idleCursor{} }

// Of a cell in several hotspots the lowest rank counts, and a cell has its rank wherever
// its piece is cut.
func TestHotspotColumn(t *testing.T) {
	ledger := &energy.Ledger{Hotspots: []energy.Hotspot{
		{Rank: 4, Source: 1, Cell: 12}, {Rank: 2, Source: 0, Cell: 11}, {Rank: 3, Source: 1, Cell: 10}, {Rank: 1, Source: 1, Cell: 12},
		{Rank: 5, Source: 1, Cell: 19}, {Rank: 6, Source: 1, Cell: 20}, {Rank: 7, Source: 1, Cell: 9},
	}}
	added := &addedCells{marks: hotspotCells(ledger)}
	column := added.hotspots(&mesh.Piece{Source: 1, FirstCell: 10, CellCount: 10})
	if column.Bytes != 40 || column.Tuples != 10 {
		t.Errorf("the column is %+v", column.Array)
	}
	want := []uint32{3, 0, 1, 0, 0, 0, 0, 0, 0, 5}
	for low := range 10 {
		for high := low; high <= 10; high++ {
			data := bytes.Repeat([]byte{0xff}, 4*(high-low))
			if err := column.read(context.Background(), nil, int64(4*low), data); err != nil {
				t.Fatal(err)
			}
			for i := range high - low {
				if got := binary.LittleEndian.Uint32(data[4*i:]); got != want[low+i] {
					t.Fatalf("cell %d of [%d, %d) has rank %d, want %d", low+i, low, high, got, want[low+i])
				}
			}
		}
	}
}

func TestEscape(t *testing.T) {
	for text, want := range map[string]string{
		`a<b>&"c'`:            `a&lt;b&gt;&amp;&quot;c'`,
		"σ_xx é":              "σ_xx é",
		"a\tb\nc\rd":          "a&#9;b&#10;c&#13;d",
		"\x00\x1f\x7f":        "%00%1F\x7f",
		"a\xffb":              "a%FFb",
		"\ufffd\ufffe\uffff.": "\ufffd%EF%BF%BE%EF%BF%BF.",
	} {
		if got := escape(text); got != want {
			t.Errorf("%q becomes %q, want %q", text, got, want)
		}
	}
}

// Results are not replaced while they are read, by whatever name they go.
func TestInputsAreNotReplaced(t *testing.T) {
	folder := t.TempDir()
	for _, name := range []string{"annotated.vtu", "annotated.vtm", "annotated/annotated_0.vtu", "annotated/annotated_1.vtu"} {
		path := writeText(t, folder, name, triangles("", "", ""))
		link := filepath.Join(t.TempDir(), "link.vtu")
		if err := os.Symlink(path, link); err != nil {
			t.Fatal(err)
		}
		for _, source := range []string{path, link} {
			_, err := NewAnnotation(folder, open(t, source), 1)
			if err == nil || !strings.HasPrefix(err.Error(), path+": the file is one of the results that are read") {
				t.Errorf("the error is %v, want one that names %s", err, path)
			}
		}
		os.Remove(path)
	}
	path := writeText(t, folder, "annotated.txt", triangles("", "", ""))
	compareModels(t, open(t, path), open(t, annotate(t, open(t, path), folder, 1)))
}

// What stops the writing leaves nothing behind, and the folder with what was in it.
func TestAnnotationThatFails(t *testing.T) {
	inputs := t.TempDir()
	broken := writeText(t, inputs, "broken.vtu", triangles("", "", ascii("Float64", "v", "1 two")))
	cancelled, cancel := context.WithCancel(context.Background())
	cancel()
	for _, c := range []struct {
		name, path string
		ctx        context.Context
		want       error
		named      string
	}{
		{"an array cannot be read", broken, context.Background(), readers.ErrMalformed, broken},
		{"cancelled", writeText(t, inputs, "good.vtu", triangles("", "", "")), cancelled, context.Canceled, ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			out := filepath.Join(t.TempDir(), "a", "b")
			a, err := NewAnnotation(out, open(t, c.path), 2)
			if err != nil {
				t.Fatal(err)
			}
			fillColumns(t, a)
			err = WriteFiles(c.ctx, out, bracket(), a)
			if !errors.Is(err, c.want) || !strings.HasPrefix(err.Error(), c.named) {
				t.Errorf("the error is %v, want %v that begins with %q", err, c.want, c.named)
			}
			a.Close()
			if _, err := os.Stat(filepath.Dir(out)); !errors.Is(err, fs.ErrNotExist) {
				t.Errorf("the folder was left (%v)", err)
			}
		})
	}
}

// What stands in the way of the file is named, and stays.
func TestAnnotationWithAFolderInTheWay(t *testing.T) {
	out := t.TempDir()
	a, err := NewAnnotation(out, open(t, writeText(t, t.TempDir(), "good.vtu", triangles("", "", ""))), 2)
	if err != nil {
		t.Fatal(err)
	}
	defer a.Close()
	fillColumns(t, a)
	inside := writeText(t, out, "annotated.vtu/mine.txt", "mine")
	if err := WriteFiles(context.Background(), out, bracket(), a); err == nil || !strings.HasPrefix(err.Error(), filepath.Dir(inside)+": ") {
		t.Errorf("the error is %v, want one that names %s", err, filepath.Dir(inside))
	}
	if _, err := os.Stat(inside); err != nil {
		t.Error(err)
	}
	for _, name := range folder(t, out) {
		if strings.HasPrefix(name, ".") {
			t.Errorf("%s was left", name)
		}
	}
}

// A folder that cannot be made or written to is named.
func TestAnnotationWithoutAFolder(t *testing.T) {
	folder := t.TempDir()
	path := writeText(t, folder, "good.vtu", triangles("", "", ""))
	if _, err := NewAnnotation(filepath.Join(path, "out"), open(t, path), 1); !errors.Is(err, syscall.ENOTDIR) || !strings.Contains(err.Error(), path) {
		t.Errorf("the error is %v, want one that names %s", err, path)
	}
	a, err := NewAnnotation(filepath.Join(folder, "out"), open(t, path), 1)
	if err != nil {
		t.Fatal(err)
	}
	defer a.Close()
	os.Remove(a.folder)
	target := filepath.Join(a.folder, "annotated.vtu")
	if err := a.write(context.Background(), bracket(), &drafts{}); err == nil || err.Error() != target+": no such file or directory" {
		t.Errorf("the error is %v, want one that names %s", err, target)
	}
}

// What an earlier tally has left goes, whatever form it had; other files stay.
func TestFormerFiles(t *testing.T) {
	out, inputs := t.TempDir(), t.TempDir()
	for _, name := range []string{"annotated.vtm", "annotated.pvtu", "annotated/annotated_0.vtu", "annotated/annotated_1.vtu", "annotated/annotated_3.vtu", "annotated.txt"} {
		writeText(t, out, name, "former")
	}
	a, err := NewAnnotation(out, open(t, writeText(t, inputs, "good.vtu", triangles("", "", ""))), 1)
	if err != nil {
		t.Fatal(err)
	}
	defer a.Close()
	fillColumns(t, a)
	if err := WriteFiles(context.Background(), out, bracket(), a); err != nil {
		t.Fatal(err)
	}
	want := []string{
		"annotated", "annotated.txt", "annotated.vtu", "columns.csv", "hotspots.csv", "ledger.json", "past-limit.csv", "regions.csv",
		"requirements.csv", "requirements.xml", "summary.md",
	}
	if got := folder(t, out); !slices.Equal(got, want) {
		t.Errorf("the folder holds %q, want %q", got, want)
	}
	if got := folder(t, filepath.Join(out, "annotated")); !slices.Equal(got, []string{"annotated_3.vtu"}) { // not one of a row
		t.Errorf("the folder of parts holds %q", got)
	}
}

// An attribute of point or cell data names one array, also where a file gives it twice.
func TestMarksGivenTwice(t *testing.T) {
	text := triangles("", "", ascii("Int8", "a", "1 2")+`</CellData><CellData Scalars="b">`+ascii("Int8", "b", "3 4"))
	text = strings.Replace(text, "<CellData>", `<CellData Scalars="a">`, 1)
	written := open(t, annotate(t, open(t, writeText(t, t.TempDir(), "in.vtu", text)), t.TempDir(), 1))
	for name, want := range map[string][]string{"a": {"Scalars"}, "b": nil} {
		if array := written.Pieces[0].Find(mesh.OnCell, name); array == nil || !slices.Equal(array.Attributes, want) {
			t.Errorf("array %s is %+v, want the attributes %q", name, array, want)
		}
	}
	header, err := os.ReadFile(filepath.Join(filepath.Dir(written.Sources[0].Path), "annotated.vtu"))
	if err != nil || bytes.Count(header, []byte("Scalars=")) != 1 {
		t.Errorf("%d attributes Scalars (%v), want 1", bytes.Count(header, []byte("Scalars=")), err)
	}
}
