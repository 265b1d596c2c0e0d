package readers

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"
)

// A cube of unit size as a polyhedron, beside it a tetrahedron and another cube.
const cubePoints = `0 0 0 1 0 0 1 1 0 0 1 0 0 0 1 1 0 1 1 1 1 0 1 1 2 0 0 2 1 0 2 0 1 2 1 1`

var (
	cubeStream   = []int32{6, 4, 0, 3, 2, 1, 4, 4, 5, 6, 7, 4, 0, 1, 5, 4, 4, 1, 2, 6, 5, 4, 2, 3, 7, 6, 4, 3, 0, 4, 7}
	secondStream = []int32{6, 4, 1, 2, 9, 8, 4, 5, 10, 11, 6, 4, 1, 8, 10, 5, 4, 8, 9, 11, 10, 4, 9, 2, 6, 11, 4, 1, 5, 6, 2}
)

func join(values []int32) string { return strings.Trim(fmt.Sprint(values), "[]") }

func polyhedraFile(version, cells string) string {
	return fmt.Sprintf(`<VTKFile type="UnstructuredGrid" version="%s"><UnstructuredGrid><Piece NumberOfPoints="12" NumberOfCells="3">
<Points><DataArray type="Float64" NumberOfComponents="3" format="ascii">%s</DataArray></Points>
<Cells><DataArray type="Int64" Name="connectivity" format="ascii">0 1 2 3 4 5 6 7 0 1 2 4 1 2 5 6 8 9 10 11</DataArray>
<DataArray type="Int64" Name="offsets" format="ascii">8 12 20</DataArray>
<DataArray type="UInt8" Name="types" format="ascii">42 10 42</DataArray>
%s</Cells></Piece></UnstructuredGrid></VTKFile>`, version, cubePoints, cells)
}

func streamsFile(faces, ends string) string {
	return polyhedraFile("1.0", fmt.Sprintf(`<DataArray type="Int64" Name="faces" format="ascii">%s</DataArray>
<DataArray type="Int64" Name="faceoffsets" format="ascii">%s</DataArray>`, faces, ends))
}

// facesFile lists twelve faces in the layout of version 2.3; the sixth is used by both.
func facesFile(ofCells, ends string) string {
	var nodes, faceEnds []int32
	for _, stream := range [][]int32{cubeStream, secondStream} {
		for at := 1; at < len(stream); at += 5 {
			nodes = append(nodes, stream[at+1:at+5]...)
			faceEnds = append(faceEnds, int32(len(nodes)))
		}
	}
	return polyhedraFile("2.3", fmt.Sprintf(`<DataArray type="Int64" Name="face_connectivity" format="ascii">%s</DataArray>
<DataArray type="Int64" Name="face_offsets" format="ascii">%s</DataArray>
<DataArray type="Int64" Name="polyhedron_to_faces" format="ascii">%s</DataArray>
<DataArray type="Int64" Name="polyhedron_offsets" format="ascii">%s</DataArray>`, join(nodes), join(faceEnds), ofCells, ends))
}

func legacyPolyhedra(version string) string {
	text := "# vtk DataFile Version " + version + "\n\nASCII\nDATASET UNSTRUCTURED_GRID\nPOINTS 12 double\n" + cubePoints + "\n"
	first, second := len(cubeStream), len(secondStream)
	if version < "5" {
		text += fmt.Sprintf("CELLS 3 %d\n%d %s\n4 0 1 2 4\n%d %s\n", first+second+7, first, join(cubeStream), second, join(secondStream))
	} else {
		text += fmt.Sprintf("CELLS 4 %d\nOFFSETS vtktypeint64\n0 %d %d %d\nCONNECTIVITY vtktypeint64\n%s 0 1 2 4 %s\n",
			first+second+4, first, first+4, first+second+4, join(cubeStream), join(secondStream))
	}
	return text + "CELL_TYPES 3\n42 10 42\n"
}

func TestPolyhedraInEveryLayout(t *testing.T) {
	streams := join(cubeStream) + " " + join(secondStream)
	for name, text := range map[string]string{
		"faces": streamsFile(streams, "31 -1 62"), "face_offsets": facesFile("0 1 2 3 4 5 6 7 8 9 10 11", "6 6 12"),
		"legacy 4.2": legacyPolyhedra("4.2"), "legacy 5.1": legacyPolyhedra("5.1"),
	} {
		for _, chunk := range []int64{8192, 1, 2} {
			model, err := openBytes([]byte(text), Options{})
			if err != nil {
				t.Fatal(err)
			}
			got, err := gather(model, -1, chunk)
			if err != nil {
				t.Fatalf("%s: %v", name, err)
			}
			if faces := facesOf(got); !slices.Equal(faces, append(slices.Clone(cubeStream), secondStream...)) {
				t.Errorf("%s by %d: faces %v", name, chunk, faces)
			}
			first, second := slices.Sorted(slices.Values(got.nodes[0])), slices.Sorted(slices.Values(got.nodes[2]))
			if !slices.Equal(first, []int32{0, 1, 2, 3, 4, 5, 6, 7}) || !slices.Equal(second, []int32{1, 2, 5, 6, 8, 9, 10, 11}) {
				t.Errorf("%s by %d: nodes %v", name, chunk, got.nodes)
			}
			if want := 2 + 1./6; got.measure["3"] < want*(1-1e-14) || got.measure["3"] > want*(1+1e-14) {
				t.Errorf("%s by %d: volume %v, want %v", name, chunk, got.measure["3"], want)
			}
		}
	}
}

func TestPolyhedronErrors(t *testing.T) {
	streams := join(cubeStream) + " " + join(secondStream)
	for _, test := range []struct{ text, need string }{
		{polyhedraFile("1.0", ""), "cell 0: found a polyhedron and no arrays of faces"},
		{streamsFile(streams, "31 -1 61"), "cell 2: found face 5 with 4 nodes and 3 entries"},
		{streamsFile(streams, "31 -1 63"), "cell 2: 1 more values needed here, found none"},
		{streamsFile(streams+" 0", "31 -1 63"), "cell 2: found 1 entries behind the last face"},
		{streamsFile(streams, "31 -1 -1"), "cell 2: found the end of the faces at -1"},
		{streamsFile(streams, "-1 -1 62"), "cell 0: found the end of the faces at -1"},
		{streamsFile("3"+streams[1:], "31 -1 62"), "cell 0: found a face stream of 31 entries that announces 3 faces"},
		{streamsFile(strings.Replace(streams, "4 0 3 2 1", "2 0 3 2 1", 1), "31 -1 62"), "cell 0: found face 0 with 2 nodes"},
		{streamsFile(strings.Replace(streams, "4 0 3 2 1", "4 0 3 2 12", 1), "31 -1 62"), "cell 0: found point number 12 on face 0, need 0 to 11"},
		{facesFile("0 1 2 3 4 5 6 7 8 9 10 12", "6 6 12"), "cell 2: found face 12, need 0 to 11"},
		{facesFile("0 1 2 3 4 5 6 7 8 9 10 11", "6 6 13"), "cell 2: 1 more values needed here, found none"},
		{facesFile("0 1 2 3 4 5 6 7 8 9 10 11", "6 6 5"), "cell 2: found the end of the faces at 5"},
		{facesFile("0 1 2 3 4 5 6 7 8 9 10 11", "3 6 12"), "cell 0: found a face stream"},
		{strings.Replace(legacyPolyhedra("4.2"), "6 4 0 3 2 1", "6 4 0 3 2 -1", 1), "cell 0: found point number -1 on face 0"},
		{strings.Replace(legacyPolyhedra("5.1"), "6 4 1 2 9 8", "7 4 1 2 9 8", 1), "cell 2: found the end of the face stream after 6 of 7 faces"},
	} {
		if err := readError(test.text, Options{}); !errors.Is(err, ErrMalformed) && !errors.Is(err, ErrTruncated) || !strings.Contains(err.Error(), test.need) {
			t.Errorf("error %v, want %q", err, test.need)
		}
	}
}
