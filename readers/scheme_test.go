package readers

import (
	"context"
	"errors"
	"os"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// The file is one that VTK 9.1 wrote: a quadrilateral and two tetrahedra, four points
// each, the values interpolated there from the nodal values 0, 0.5, 1 ...
func TestSchemes(t *testing.T) {
	data, err := os.ReadFile("../testdata/integration/dictionary-vtk.vtu")
	if err != nil {
		t.Fatal(err)
	}
	text := string(data)
	model, err := openBytes(data, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(model.Schemes) != 2 || model.Schemes[0].Type != mesh.Quad || model.Schemes[1].Type != mesh.Tetrahedron {
		t.Fatalf("schemes %+v", model.Schemes)
	}
	cursor := newTestCursor(t, model)
	var c mesh.Chunk
	if err := cursor.Cells(context.Background(), spanOf(0, 3), &mesh.Want{FieldValues: []string{"disp"}}, &c); err != nil {
		t.Fatal(err)
	}
	for i := range c.Count {
		scheme := model.Schemes[min(i, 1)]
		nodes := c.Nodes[c.Start[i]:c.Start[i+1]]
		if len(nodes) != scheme.Nodes || len(scheme.Weights) != 4 || len(scheme.Shapes) != 4*scheme.Nodes {
			t.Fatalf("scheme %+v", scheme)
		}
		var want []float64
		for point := range 4 {
			value := 0.0
			for k, node := range nodes {
				value += scheme.Shapes[point*scheme.Nodes+k] * float64(node) / 2
			}
			want = append(want, value)
		}
		// VTK writes shape functions with 16 digits
		if got := c.FieldValues[0][4*i : 4*i+4]; !slices.EqualFunc(got, want, func(a, b float64) bool { return a-b < 1e-14 && b-a < 1e-14 }) {
			t.Errorf("cell %d: %v, want %v", i, got, want)
		}
	}
	for _, test := range []struct{ old, new, need string }{
		{"0 4 8\n", "0 8 4\n", "cell 1: found that the values of \"disp\" begin at 8, need 4"},
		{`<CellType value="9"/>`, ``, "no element CellType"},
		{`<CellType value="9"/>`, `<CellType value="x"/>`, "need a count"},
		{`<CellType value="9"/>`, `<CellType value="265"/>`, "cell type 265"},
		{`<NumberOfNodes value="4"/>`, `<NumberOfNodes value="1001"/>`, "at most 1000"},
		{`<NumberOfNodes value="4"/>`, `<NumberOfNodes value="5"/>`, `array "ShapeFunctionWeights"`},
		{"6.2200846792814501e-01 1.66", "0,6 1.66", "decimal point"},
		{"<QuadratureWeights>\n", "<QuadratureWeights2></QuadratureWeights2><Other>", ""},
	} {
		if !strings.Contains(text, test.old) {
			t.Fatalf("no %q", test.old)
		}
		model, err := openBytes([]byte(strings.Replace(text, test.old, test.new, 1)), Options{})
		if err == nil {
			err = newTestCursor(t, model).Cells(context.Background(), spanOf(0, 3), &mesh.Want{FieldValues: []string{"disp"}}, &c)
		}
		if place := new(Error); !errors.As(err, &place) || !strings.Contains(err.Error(), test.need) {
			t.Errorf("%s: error %v, want %q", test.new, err, test.need)
		}
	}
}
