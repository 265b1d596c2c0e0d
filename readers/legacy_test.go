package readers

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// read opens a file that is in memory and gathers it.
func read(t *testing.T, data string) (*mesh.Model, *gathered) {
	t.Helper()
	model, err := openBytes([]byte(data), Options{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := gather(model, -1, 8192)
	if err != nil {
		t.Fatal(err)
	}
	return model, got
}

// readError returns the error of a file, whenever it shows.
func readError(data string, options Options) error {
	model, err := openBytes([]byte(data), options)
	if err == nil {
		_, err = gather(model, -1, 8192)
	}
	return err
}

// legacyTetrahedron is a file of one tetrahedron up to its point and cell data.
const legacyTetrahedron = `# vtk DataFile Version 3.0
title
ASCII
DATASET UNSTRUCTURED_GRID
POINTS 4 float
0 0 0 1 0 0 0 1 0 0 0 1
CELLS 1 5
4 0 1 2 3
CELL_TYPES 1
10
`

func TestLegacyAttributes(t *testing.T) {
	for _, test := range []struct {
		text   string
		on     mesh.Location
		name   string
		format string
		values []float64
	}{
		{"POINT_DATA 4\nSCALARS s float\nLOOKUP_TABLE default\n1 2 3 4\n", mesh.OnPoint, "s", "Float32", []float64{1, 2, 3, 4}},
		{"POINT_DATA 4\nSCALARS s float\n1 2 3 4\n", mesh.OnPoint, "s", "Float32", []float64{1, 2, 3, 4}},
		{"POINT_DATA 4\nSCALARS s int 2\n1 2 3 4 5 6 7 8\n", mesh.OnPoint, "s", "Int32", []float64{1, 2, 3, 4, 5, 6, 7, 8}},
		{"POINT_DATA 4\nscalars s double 1\nlookup_table t\n1 2 3 4\nLOOKUP_TABLE t 2\n0 0 0 1 1 1 1 1\n", mesh.OnPoint, "s", "Float64", []float64{1, 2, 3, 4}},
		{"CELL_DATA 1\nVECTORS v double\n1 2 3\n", mesh.OnCell, "v", "Float64", []float64{1, 2, 3}},
		{"CELL_DATA 1\nNORMALS v float\n0 0 1\n", mesh.OnCell, "v", "Float32", []float64{0, 0, 1}},
		{"CELL_DATA 1\nTENSORS v double\n1 2 3 4 5 6 7 8 9\n", mesh.OnCell, "v", "Float64", []float64{1, 2, 3, 4, 5, 6, 7, 8, 9}},
		{"CELL_DATA 1\nTENSORS6 v double\n1 2 3 4 5 6\n", mesh.OnCell, "v", "Float64", []float64{1, 2, 3, 4, 5, 6}},
		{"CELL_DATA 1\nCOLOR_SCALARS c 3\n0 0.5 1\n", mesh.OnCell, "c", "UInt8", []float64{0, 128, 255}},
		{"CELL_DATA 1\nTEXTURE_COORDINATES c 2 float\n0.5 1\n", mesh.OnCell, "c", "Float32", []float64{0.5, 1}},
		{"CELL_DATA 1\nGLOBAL_IDS g vtkIdType\n5000000000\n", mesh.OnCell, "g", "Int64", []float64{5000000000}},
		{"CELL_DATA 1\nFIELD f 2\nNULL_ARRAY a%20b 2 1 char\n-1 7\n", mesh.OnCell, "a b", "Int8", []float64{-1, 7}},
		{"CELL_DATA 1\nFIELD f 1\n100% 1 1 long\n-9\n", mesh.OnCell, "100%", "Int64", []float64{-9}},
		{"CELL_DATA 1\nSCALARS a int\n1\nPOINT_DATA 4\nSCALARS p int\n1 2 3 4\nCELL_DATA 1\nSCALARS b unsigned_short\n65535", mesh.OnCell, "b", "UInt16", []float64{65535}},
		{"CELL_DATA 1\nSCALARS a int\n1\nSCALARS a int\n2\n", mesh.OnCell, "a", "Int32", []float64{1}},
	} {
		_, got := read(t, legacyTetrahedron+test.text)
		a := got.arrays[arrayKey{test.on, test.name}]
		if a == nil || a.Type != test.format || !slices.Equal(a.values, test.values) {
			t.Errorf("%q: %+v, want %s %v", test.text, a, test.format, test.values)
		}
	}
}

func TestLegacyMetadata(t *testing.T) {
	model, got := read(t, legacyTetrahedron+`METADATA
INFORMATION 1
NAME UNITS_LABEL LOCATION vtkDataArray
DATA MPa

CELL_DATA 1
FIELD f 2
stress 2 1 float
1 2
METADATA
COMPONENT_NAMES
X%20X
YY
INFORMATION 0

t 1 1 int
7
`)
	if names := got.arrays[arrayKey{mesh.OnCell, "stress"}].ComponentNames; !slices.Equal(names, []string{"X X", "YY"}) {
		t.Errorf("component names %q", names)
	}
	if got.arrays[arrayKey{mesh.OnCell, "t"}] == nil || len(model.Pieces[0].Arrays) != 2 {
		t.Errorf("arrays %+v", model.Pieces[0].Arrays)
	}
}

// The type long has 8 bytes or, from some systems, 4: the next keyword tells.
func TestLegacyLong(t *testing.T) {
	for _, size := range []int{4, 8} {
		for _, word := range []string{"long", "unsigned_long"} {
			var file bytes.Buffer
			file.WriteString("# vtk DataFile Version 3.0\n\nBINARY\nDATASET UNSTRUCTURED_GRID\nPOINTS 1 float\n")
			binary.Write(&file, binary.BigEndian, [3]float32{1, 2, 3})
			file.WriteString("\nCELLS 1 2\n")
			binary.Write(&file, binary.BigEndian, [2]int32{1, 0})
			file.WriteString("\nCELL_TYPES 1\n")
			binary.Write(&file, binary.BigEndian, int32(1))
			fmt.Fprintf(&file, "\nCELL_DATA 1\nSCALARS n %s 2\nLOOKUP_TABLE default\n", word)
			if size == 4 {
				binary.Write(&file, binary.BigEndian, [2]int32{70000, 5})
			} else {
				binary.Write(&file, binary.BigEndian, [2]int64{70000, 5})
			}
			file.WriteString("\nSCALARS after float\nLOOKUP_TABLE default\n")
			binary.Write(&file, binary.BigEndian, float32(2.5))
			_, got := read(t, file.String())
			n, after := got.arrays[arrayKey{mesh.OnCell, "n"}], got.arrays[arrayKey{mesh.OnCell, "after"}]
			if n == nil || after == nil || !slices.Equal(n.values, []float64{70000, 5}) || after.values[0] != 2.5 {
				t.Errorf("%s of %d bytes: %+v, %+v", word, size, n, after)
			}
		}
	}
}

func TestLegacyGrids(t *testing.T) {
	model, got := read(t, `# vtk DataFile Version 1.0

ASCII
DATASET STRUCTURED_POINTS
DIMENSIONS 3 2 1
ORIGIN 10 20 30
ASPECT_RATIO 0.5 2 4
CELL_DATA 2
SCALARS s float
1 2
`)
	if want := []float64{10, 20, 30, 10.5, 20, 30, 11, 20, 30, 10, 22, 30, 10.5, 22, 30, 11, 22, 30}; !slices.Equal(got.points, want) {
		t.Errorf("points %v, want %v", got.points, want)
	}
	if !slices.EqualFunc(got.nodes, [][]int32{{0, 1, 3, 4}, {1, 2, 4, 5}}, slices.Equal) || got.types["8"] != 2 {
		t.Errorf("nodes %v of %v", got.nodes, got.types)
	}
	if model.Pieces[0].Grid.Extent != (mesh.Extent{0, 2, 0, 1, 0, 0}) {
		t.Errorf("extent %v", model.Pieces[0].Grid.Extent)
	}
	_, got = read(t, `# vtk DataFile Version 3.0

ASCII
DATASET RECTILINEAR_GRID
DIMENSIONS 2 1 3
X_COORDINATES 2 float
0 1
Y_COORDINATES 1 float
5
Z_COORDINATES 3 double
0 2 6
`)
	if want := []float64{0, 5, 0, 1, 5, 0, 0, 5, 2, 1, 5, 2, 0, 5, 6, 1, 5, 6}; !slices.Equal(got.points, want) {
		t.Errorf("points %v, want %v", got.points, want)
	}
	if math.Abs(got.measure["2"]-6) > 1e-14 {
		t.Errorf("area %v, want 6", got.measure["2"])
	}
	_, got = read(t, `# vtk DataFile Version 3.0

ASCII
DATASET STRUCTURED_GRID
DIMENSIONS 3 2 1
POINTS 6 float
0 0 0 1 0 0 2 0 0 0 1 0 1 1 0 2 1 0
BLANKING 6 unsigned_char
1 1 0 1 1 1
`)
	if !slices.EqualFunc(got.nodes, [][]int32{{0, 1, 4, 3}, {1, 2, 5, 4}}, slices.Equal) || got.types["9"] != 2 {
		t.Errorf("nodes %v of %v", got.nodes, got.types)
	}
	if !slices.Equal(got.hidden, []uint8{0, mesh.HiddenCell}) {
		t.Errorf("marks %v", got.hidden)
	}
}

func TestLegacyTimeAndTexts(t *testing.T) {
	model, _ := read(t, `# vtk DataFile Version 3.0

ASCII
FIELD FieldData 3
TIME 1 1 double
2.5
notes 1 2 string
first%20line

label 1 3 char
77 80 97
DATASET UNSTRUCTURED_GRID
POINTS 0 float
`)
	if model.Sources[0].Time != 2.5 || !slices.Equal(model.Times, []float64{2.5}) {
		t.Errorf("time %v, %v", model.Sources[0].Time, model.Times)
	}
	if model.Text("label") != "MPa" || model.Text("notes") != "first line" || len(model.Texts[0].Strings) != 2 || model.Text("none") != "" {
		t.Errorf("texts %q", model.Texts)
	}
}

// Ghost levels of old files become duplicates; those of new files are plain numbers.
func TestLegacyGhostLevels(t *testing.T) {
	text := legacyTetrahedron + "CELL_DATA 1\nSCALARS vtkGhostLevels unsigned_char\nLOOKUP_TABLE default\n2\n"
	_, got := read(t, text)
	if !slices.Equal(got.hidden, []uint8{mesh.DuplicateCell}) || got.arrays[arrayKey{mesh.OnCell, "vtkGhostType"}].values[0] != 1 {
		t.Errorf("marks %v, arrays %v", got.hidden, got.arrays)
	}
	_, got = read(t, strings.Replace(text, "3.0", "4.0", 1))
	if got.hidden != nil || got.arrays[arrayKey{mesh.OnCell, "vtkGhostLevels"}].values[0] != 2 {
		t.Errorf("marks %v, arrays %v", got.hidden, got.arrays)
	}
}

func TestLegacyErrors(t *testing.T) {
	for _, test := range []struct {
		text string
		line int
		kind error
		need string
	}{
		{"# vtk DataFile Version 3.0\nt\nTEXT\n", 3, ErrMalformed, "ASCII or BINARY"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET TABLE\n", 4, ErrUnsupported, "TABLE"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nPOINTS 3 float\n", 4, ErrMalformed, "DATASET"},
		{legacyTetrahedron + "CELL_DATA 2\n", 11, ErrMalformed, "need 1"},
		{legacyTetrahedron + "CELL_DATA 1\nSCALARS s quadruple\n1\n", 12, ErrUnsupported, "quadruple"},
		{legacyTetrahedron + "CELL_DATA 1\nSCALARS s float\n", 13, ErrTruncated, "need 1 values"},
		{legacyTetrahedron + "CELL_DATA 1\nSCALARS s float\n1,5\n", 13, ErrMalformed, "decimal point"},
		{legacyTetrahedron + "CELL_DATA 1\nSURPRISE s float\n1\n", 12, ErrMalformed, "SURPRISE"},
		{legacyTetrahedron + "CELL_DATA 1\nFIELD f 1\na 1 2 float\n1 2\n", 13, ErrMalformed, "found 2 tuples, need 1"},
		{legacyTetrahedron + "CELL_DATA 1\nFIELD f 1\na 0 1 float\n", 13, ErrMalformed, "0 components"},
		{legacyTetrahedron + "CELL_DATA 1\nVECTORS", 12, ErrTruncated, "no name"},
		{legacyTetrahedron + "POINT_DATA many\n", 11, ErrMalformed, "number of tuples"},
		{legacyTetrahedron + "CELLS 1 5\n4 0 1 2 3\n", 11, ErrMalformed, "twice"},
		{strings.Replace(legacyTetrahedron, "CELLS 1 5", "CELLS 6 5", 1), 7, ErrMalformed, "6 cells in 5 entries"},
		{strings.Replace(legacyTetrahedron, "4 0 1 2 3", "4 0 1 2 4", 1), 8, ErrMalformed, "cell 0: found point number 4, need 0 to 3"},
		{strings.Replace(legacyTetrahedron, "4 0 1 2 3", "5 0 1 2 3", 1), 8, ErrMalformed, "5 entries announced, 4 left"},
		{strings.Replace(legacyTetrahedron, "4 0 1 2 3", "-4 0 1 2 3", 1), 8, ErrMalformed, "-4 entries announced"},
		{strings.Replace(legacyTetrahedron, "4 0 1 2 3", "3 0 1 2 3", 1), 0, ErrMalformed, "tetrahedron"},
		{strings.Replace(legacyTetrahedron, "CELL_TYPES 1\n10", "CELL_TYPES 2\n10 10", 1), 10, ErrMalformed, "types of 2 cells, need 1"},
		{strings.Replace(legacyTetrahedron, "CELL_TYPES 1\n10", "", 1), 10, ErrMalformed, "no CELL_TYPES"},
		{strings.Replace(legacyTetrahedron, "CELLS 1 5\n4 0 1 2 3", "", 1), 0, ErrMalformed, "no CELLS"},
		{strings.Replace(legacyTetrahedron, "CELL_TYPES 1\n10", "CELL_TYPES 1\n300", 1), 0, ErrMalformed, "cell type 300"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_POINTS\nORIGIN 0 0 0\n", 6, ErrMalformed, "no DIMENSIONS"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_POINTS\nDIMENSIONS 2 2 x\n", 5, ErrMalformed, "points along z"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_POINTS\nDIMENSIONS 4000 4000 4000\n", 6, ErrLimit, "limit"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_POINTS\nDIMENSIONS 400 400 400\n", 6, ErrLimit, "without coordinates"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_POINTS\nDIMENSIONS 2 2 2\nSPACING 1 1,5 1\n", 6, ErrMalformed, "decimal point"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET STRUCTURED_GRID\nDIMENSIONS 2 2 2\nPOINTS 1 float\n0 0 0\n", 8, ErrMalformed, "found 1 points, need 8"},
		{"# vtk DataFile Version 3.0\nt\nASCII\nDATASET RECTILINEAR_GRID\nDIMENSIONS 2 2 2\nX_COORDINATES 2 float\n0 1\n", 8, ErrMalformed, "Y_COORDINATES"},
		{"# vtk DataFile Version 5.1\nt\nASCII\nDATASET UNSTRUCTURED_GRID\nCELLS 2 1\nCONNECTIVITY vtktypeint64\n0\n", 6, ErrMalformed, "need OFFSETS"},
		{"# vtk DataFile Version 5.1\nt\nASCII\nDATASET UNSTRUCTURED_GRID\nCELLS 2 1\nOFFSETS float\n0 1\n", 7, ErrMalformed, "whole numbers"},
	} {
		err := readError(test.text, Options{})
		place := new(Error)
		if !errors.As(err, &place) || !errors.Is(err, test.kind) || !strings.Contains(err.Error(), test.need) {
			t.Errorf("%q:\n  error %v, want %v with %q", test.text[max(0, len(test.text)-60):], err, test.kind, test.need)
			continue
		}
		if test.line != 0 && (place.Line < test.line-1 || place.Line > test.line) {
			t.Errorf("%v: line %d, want %d", err, place.Line, test.line)
		}
	}
}

func TestLegacyEmptyCells(t *testing.T) {
	text := strings.NewReplacer("CELLS 1 5\n", "CELLS 3 7\n0 ", "\nCELL_TYPES 1\n10", " 0\nCELL_TYPES 3\n0 10 0").Replace(legacyTetrahedron)
	_, got := read(t, text)
	if !slices.EqualFunc(got.nodes, [][]int32{{}, {0, 1, 2, 3}, {}}, slices.Equal) || got.types["0"] != 2 {
		t.Errorf("nodes %v of %v", got.nodes, got.types)
	}
}

func TestLegacyVersionWithoutNumber(t *testing.T) {
	_, got := read(t, strings.Replace(legacyTetrahedron, "3.0", "x", 1))
	if got.cells != 1 || math.Abs(got.measure["3"]-1./6) > 1e-15 {
		t.Errorf("%d cells of volume %v", got.cells, got.measure)
	}
}
