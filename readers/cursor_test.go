package readers

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

func spanOf(low, high int64) mesh.Span { return mesh.Span{Low: low, High: high} }

func justError(_ *mesh.Model, err error) error { return err }

func TestWants(t *testing.T) {
	data := tetrahedron(`<FieldData>
<DataArray type="Float64" Name="points of the rule" NumberOfComponents="2" NumberOfTuples="3" format="ascii">1 2 3 4 5 6</DataArray>
<DataArray type="Int8" Name="note" format="ascii">77 80 97 0</DataArray><DataArray type="Int8" Name="unit" format="ascii">77 80 97</DataArray>
</FieldData>`, `<CellData><DataArray type="Float64" Name="region" format="ascii">3</DataArray>
<DataArray type="Float64" Name="part" format="ascii">3.5</DataArray><DataArray type="Float64" Name="s" NumberOfComponents="2" format="ascii">1 2</DataArray>
<DataArray type="String" Name="words" format="ascii">77 0</DataArray><DataArray type="UInt8" Name="vtkGhostType" format="ascii">32</DataArray></CellData>`)
	model, err := openBytes([]byte(data), Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := newTestCursor(t, model)
	ctx := context.Background()
	var c mesh.Chunk
	want := &mesh.Want{CellValues: []string{"s", "part"}, Labels: []string{"region", "part"}, FieldValues: []string{"points of the rule"}}
	if err := cursor.Cells(ctx, spanOf(0, 1), want, &c); err != nil {
		t.Fatal(err)
	}
	if got := fmt.Sprint(c.Types, c.Start, c.Nodes, c.Hidden, c.Values, c.Labels, c.FieldValues); got !=
		fmt.Sprint([]mesh.CellType{10}, []int32{0, 4}, []int32{0, 1, 2, 3}, []uint8{32}, [][]float64{{1, 2}, {3.5}}, [][]int64{{3}, {mesh.NoLabel}}, [][]float64{{1, 2, 3, 4, 5, 6}}) {
		t.Errorf("chunk %s", got)
	}
	want.NoNodes = true
	if err := cursor.Cells(ctx, spanOf(0, 1), want, &c); err != nil {
		t.Fatal(err)
	}
	if c.Nodes != nil || c.Start != nil || c.Shapes != nil || c.Types[0] != 10 || c.Values[0][1] != 2 || c.Hidden[0] != 32 {
		t.Errorf("chunk without nodes %+v", c)
	}
	if model.Text("unit") != "MPa" || model.Text("note") != "" {
		t.Errorf("texts %q", model.Texts)
	}
	for _, test := range []struct {
		want *mesh.Want
		need string
	}{
		{&mesh.Want{CellValues: []string{"none"}}, `array "none": found no such cell array`},
		{&mesh.Want{Labels: []string{"none"}}, `array "none": found no such cell array`},
		{&mesh.Want{CellValues: []string{"words"}}, `array "words": found values of type String`},
		{&mesh.Want{Labels: []string{"s"}}, `array "s": found 2 components, need 1 for a label`},
		{&mesh.Want{FieldValues: []string{"unit 2"}}, `array "unit 2": found no such field array`},
	} {
		err := cursor.Cells(ctx, spanOf(0, 1), test.want, &c)
		if place := new(Error); !errors.As(err, &place) || !strings.Contains(err.Error(), test.need) {
			t.Errorf("error %v, want %q", err, test.need)
		}
	}
	if err := cursor.PointValues(ctx, 0, "s", 0, 4, nil); err == nil {
		t.Error("a cell array was read as a point array")
	}
}

// A caller that asks for what is not there has made a mistake.
func TestSpansBeyondThePiece(t *testing.T) {
	model, err := openBytes([]byte(legacyTetrahedron), Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := newTestCursor(t, model)
	ctx := context.Background()
	for name, call := range map[string]func(){
		"cells":  func() { cursor.Cells(ctx, spanOf(0, 2), &mesh.Want{}, &mesh.Chunk{}) },
		"order":  func() { cursor.Cells(ctx, spanOf(1, 0), &mesh.Want{}, &mesh.Chunk{}) },
		"points": func() { cursor.Points(ctx, 0, 3, 5, make([]float64, 6)) },
		"values": func() { cursor.PointValues(ctx, 0, "x", -1, 1, make([]float64, 6)) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			call()
		}()
	}
}

// The vertical edges of Lagrange hexahedra changed places in version 2.1.
func TestOldOrderOfHexahedra(t *testing.T) {
	for _, test := range []struct {
		degrees [3]int64
		third   int // first node of the third vertical edge
	}{{[3]int64{2, 2, 2}, 18}, {[3]int64{3, 3, 3}, 28}, {[3]int64{2, 3, 4}, 26}, {[3]int64{1, 1, 3}, 12}, {[3]int64{2, 2, 1}, -1}} {
		count := (test.degrees[0] + 1) * (test.degrees[1] + 1) * (test.degrees[2] + 1)
		c := newCursor(nil, nil, 0)
		c.types, c.start = []mesh.CellType{mesh.Tetrahedron, mesh.LagrangeHexahedron}, []int32{0, 4, 4 + int32(count)}
		want := []int32{100, 101, 102, 103}
		for i := range int32(count) {
			want = append(want, i)
		}
		c.nodes = slices.Clone(want)
		edge := int(test.degrees[2]) - 1
		if test.third > 0 {
			for k := range edge {
				a, b := 4+test.third+k, 4+test.third+edge+k
				want[a], want[b] = want[b], want[a]
			}
		}
		degrees := append([]int64{0, 0, 0}, test.degrees[:]...)
		if test.degrees[0] == test.degrees[1] && test.degrees[1] == test.degrees[2] {
			degrees = nil // the count tells
		}
		if c.reorder(degrees); !slices.Equal(c.nodes, want) {
			t.Errorf("degrees %v: nodes %v, want %v", test.degrees, c.nodes, want)
		}
	}
}

// A straight Lagrange hexahedron tells by its nodes in which order they stand. The
// version is obeyed; where only the other order fits, there is a remark.
func TestOrderThatFits(t *testing.T) {
	// lattice places of the nodes in today's order
	var places [][3]int
	for _, edge := range []string{
		"000 200 220 020 002 202 222 022", "100 210 120 010 102 212 122 012", "001 201 221 021",
		"011 211 101 121 110 112 111",
	} {
		for _, word := range strings.Fields(edge) {
			places = append(places, [3]int{int(word[0] - '0'), int(word[1] - '0'), int(word[2] - '0')})
		}
	}
	for _, test := range []struct {
		version   string
		isSwapped bool
		codes     []string
		x         float64 // of the node on the third vertical edge, which is at 2 if all fits
	}{
		{"1.0", true, nil, 2}, {"2.2", false, nil, 2},
		{"1.0", false, []string{"node-order"}, 0}, {"2.2", true, []string{"node-order"}, 0},
	} {
		w := newTestWriter(testCoding{form: "ascii"}, "UnstructuredGrid", test.version)
		w.printf("<UnstructuredGrid><Piece NumberOfPoints=\"27\" NumberOfCells=\"1\">\n")
		points, nodes := testArray{"Points", "Float64", 3, nil}, testArray{"connectivity", "Int32", 1, nil}
		for i, place := range places {
			if test.isSwapped && (i == 18 || i == 19) {
				place = places[37-i]
			}
			for axis := range 3 {
				points.values = append(points.values, float64(place[axis]))
			}
			nodes.values = append(nodes.values, float64(i))
		}
		w.element("Points", points)
		w.element("Cells", nodes, testArray{"offsets", "Int32", 1, []float64{27}}, testArray{"types", "UInt8", 1, []float64{72}})
		w.printf("</Piece></UnstructuredGrid>\n")
		model, got := read(t, string(w.bytes()))
		at := got.nodes[0][18]
		if x := got.points[3*at]; !slices.Equal(codes(model), test.codes) || x != test.x {
			t.Errorf("version %s, swapped %v: remarks %v, the node on the third vertical edge at x = %v", test.version, test.isSwapped, model.Remarks, x)
		}
	}
}

func TestRationalWeights(t *testing.T) {
	data := strings.Replace(tetrahedron("", `<PointData RationalWeights="w"><DataArray type="Float64" Name="w" format="ascii">1 2 3 4</DataArray></PointData>`), "", "", 1)
	model, err := openBytes([]byte(data), Options{})
	if err != nil || model.Pieces[0].RationalWeights != "w" {
		t.Errorf("weights %q, %v", model.Pieces[0].RationalWeights, err)
	}
}

func TestDegreesAreWhole(t *testing.T) {
	for _, degrees := range []string{"1.5 1 1", "-1 1 1", "1e9 1 1", "nan 1 1"} {
		data := strings.Replace(tetrahedron("", fmt.Sprintf(`<CellData HigherOrderDegrees="d"><DataArray type="Float64" Name="d" NumberOfComponents="3" format="ascii">%s</DataArray></CellData>`, degrees)),
			`"types" format="ascii">10`, `"types" format="ascii">71`, 1)
		if err := readError(data, Options{}); !errors.Is(err, ErrMalformed) || !strings.Contains(err.Error(), "cell 0: found the degree") {
			t.Errorf("degrees %s: %v", degrees, err)
		}
	}
}

func TestPolygonalRule(t *testing.T) {
	_, got := read(t, `<VTKFile type="PolyData" version="1.0"><PolyData><Piece NumberOfPoints="5" NumberOfVerts="2" NumberOfLines="2" NumberOfPolys="4" NumberOfStrips="1">
<Points><DataArray type="Float32" NumberOfComponents="3" format="ascii">0 0 0 1 0 0 1 1 0 0 1 0 2 2 0</DataArray></Points>
<Strips><DataArray type="Int32" Name="connectivity" format="ascii">0 1 3 2</DataArray><DataArray type="Int32" Name="offsets" format="ascii">4</DataArray></Strips>
<Verts><DataArray type="Int32" Name="connectivity" format="ascii">4 0 1</DataArray><DataArray type="Int32" Name="offsets" format="ascii">1 3</DataArray></Verts>
<Lines><DataArray type="Int32" Name="connectivity" format="ascii">0 1 0 1 2</DataArray><DataArray type="Int32" Name="offsets" format="ascii">2 5</DataArray></Lines>
<Polys><DataArray type="Int32" Name="connectivity" format="ascii">0 1 2 0 1 2 3 0 1 2 4 3</DataArray><DataArray type="Int32" Name="offsets" format="ascii">3 7 12 12</DataArray></Polys>
<CellData><DataArray type="Int32" Name="id" format="ascii">0 1 2 3 4 5 6 7 8</DataArray></CellData></Piece></PolyData></VTKFile>`)
	want := [][]int32{{4}, {0, 1}, {0, 1}, {0, 1, 2}, {0, 1, 2}, {0, 1, 2, 3}, {0, 1, 2, 4, 3}, {}, {0, 1, 3, 2}}
	if !slices.EqualFunc(got.nodes, want, slices.Equal) {
		t.Errorf("nodes %v, want %v", got.nodes, want)
	}
	if types := fmt.Sprint(got.types); types != "map[0:1 1:1 2:1 3:1 4:1 5:1 6:1 7:1 9:1]" {
		t.Errorf("types %s", types)
	}
	if length := got.measure["1"]; math.Abs(length-3) > 1e-15 {
		t.Errorf("length %v, want 3", length)
	}
}
