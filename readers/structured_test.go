package readers

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// image returns an image of the extents, whose cells and points carry their place.
func image(whole string, spacing string, extents ...string) string {
	text := fmt.Sprintf("<VTKFile type=\"ImageData\" version=\"1.0\">\n<ImageData WholeExtent=%q %s>\n", whole, spacing)
	for _, extent := range extents {
		text += fmt.Sprintf("<Piece Extent=%q></Piece>\n", extent)
	}
	return text + "</ImageData>\n</VTKFile>\n"
}

func TestImagePoints(t *testing.T) {
	for _, test := range []struct {
		spacing string
		want    []float64
	}{
		{`Origin="1 2 3" Spacing="0.5 2 4"`, []float64{2, 0, 3, 2.5, 0, 3, 2, 2, 3, 2.5, 2, 3}},
		{``, []float64{2, -1, 0, 3, -1, 0, 2, 0, 0, 3, 0, 0}},
		// a turn by 90 degrees about z: x becomes y, y becomes -x
		{`Origin="1 2 3" Spacing="0.5 2 4" Direction="0 -1 0 1 0 0 0 0 1"`, []float64{3, 3, 3, 3, 3.5, 3, 1, 3, 3, 1, 3.5, 3}},
	} {
		_, got := read(t, image("2 3 -1 0 0 0", test.spacing, "2 3 -1 0 0 0"))
		if !slices.Equal(got.points, test.want) {
			t.Errorf("%s: points %v, want %v", test.spacing, got.points, test.want)
		}
	}
}

// Nodes of structured cells in every set of directions that have cells.
func TestStructuredCells(t *testing.T) {
	for _, test := range []struct {
		extent mesh.Extent
		image  mesh.CellType
		curved mesh.CellType
		pixel  []int64 // nodes of the last cell of an image
		quad   []int64 // the same of a structured grid
	}{
		{mesh.Extent{0, 0, 0, 0, 0, 0}, 1, 1, []int64{0}, []int64{0}},
		{mesh.Extent{0, 2, 0, 0, 0, 0}, 3, 3, []int64{1, 2}, []int64{1, 2}},
		{mesh.Extent{0, 0, 0, 2, 0, 0}, 3, 3, []int64{1, 2}, []int64{1, 2}},
		{mesh.Extent{5, 5, 5, 5, 5, 7}, 3, 3, []int64{1, 2}, []int64{1, 2}},
		{mesh.Extent{0, 2, 0, 1, 0, 0}, 8, 9, []int64{1, 2, 4, 5}, []int64{1, 2, 5, 4}},
		{mesh.Extent{0, 2, 0, 0, 0, 1}, 8, 9, []int64{1, 2, 4, 5}, []int64{1, 2, 5, 4}},
		{mesh.Extent{0, 0, 0, 1, 0, 2}, 8, 9, []int64{2, 3, 4, 5}, []int64{2, 3, 5, 4}},
		{mesh.Extent{0, 2, 0, 1, 0, 1}, 11, 12, []int64{1, 2, 4, 5, 7, 8, 10, 11}, []int64{1, 2, 5, 4, 7, 8, 11, 10}},
	} {
		for _, isCurvilinear := range []bool{false, true} {
			cellType, nodes := test.image, test.pixel
			if isCurvilinear {
				cellType, nodes = test.curved, test.quad
			}
			g, err := newGrid(test.extent, isCurvilinear, Limits{}.withDefaults())
			if err != nil {
				t.Fatal(err)
			}
			c := newCursor(nil, nil, 0)
			c.start = []int32{0}
			g.read(c, g.cellCount()-1, g.cellCount(), false)
			var got []int64
			for _, node := range c.nodes {
				got = append(got, int64(node))
			}
			if c.types[0] != cellType || !slices.Equal(got, nodes) {
				t.Errorf("%v: type %d with nodes %v, want %d with %v", test.extent, c.types[0], got, cellType, nodes)
			}
		}
	}
}

// Pieces that overlap by a layer of cells: the layer counts once, so do its points.
func TestOverlappingPieces(t *testing.T) {
	model, got := read(t, image("0 6 0 1 0 0", "", "0 3 0 1 0 0", "2 6 0 1 0 0"))
	if !slices.Equal(got.hidden, []uint8{mesh.DuplicateCell, 0, 0, 0}) {
		t.Errorf("marks %v", got.hidden)
	}
	if model.Sources[0].Points != 14 || len(got.points) != 3*14 || model.Pieces[1].Grid.SharedCount() != 4 {
		t.Errorf("%d points, %d read, %d shared", model.Sources[0].Points, len(got.points)/3, model.Pieces[1].Grid.SharedCount())
	}
	if math.Abs(got.visible["2"]-6) > 1e-14 {
		t.Errorf("area %v, want 6", got.visible["2"])
	}
}

func TestStructuredErrors(t *testing.T) {
	many := make([]string, 70)
	for i := range many {
		many[i] = "0 1 0 1 0 1"
	}
	for _, test := range []struct {
		text string
		kind error
		need string
	}{
		{image("0 1 0 1 0 1", "", "0 2 0 1 0 1"), ErrMalformed, "a part of the whole extent"},
		{image("0 1 0 1 0 1", "", "0 1 0 1"), ErrMalformed, "six numbers"},
		{image("0 1 0 1 0 1", "", "0 1 0 1 0 x"), ErrMalformed, "six whole numbers"},
		{image("0 1 0 1 0 1", "", "0 1 0 1 1 -2"), ErrMalformed, "lowest and a highest"},
		{image("0 1 0 1 0 1", `Origin="0 0"`, "0 1 0 1 0 1"), ErrMalformed, "3 numbers"},
		{image("0 1 0 1 0 1", `Spacing="0 0 z"`, "0 1 0 1 0 1"), ErrMalformed, "need numbers"},
		{image("0 1 0 1 0 1", "", many...), ErrMalformed, "shares points"},
		{strings.Replace(image("0 1 0 1 0 1", "", "0 1 0 1 0 1"), "WholeExtent", "Extent", 1), ErrMalformed, "no attribute WholeExtent"},
		{`<VTKFile type="RectilinearGrid"><RectilinearGrid WholeExtent="0 1 0 0 0 0"><Piece Extent="0 1 0 0 0 0"><Coordinates/></Piece></RectilinearGrid></VTKFile>`,
			ErrMalformed, "0 arrays of coordinates"},
		{`<VTKFile type="StructuredGrid"><StructuredGrid WholeExtent="0 1 0 0 0 0"><Piece Extent="0 1 0 0 0 0"/></StructuredGrid></VTKFile>`,
			ErrMalformed, "no array in an element Points"},
	} {
		if err := readError(test.text, Options{}); !errors.Is(err, test.kind) || !strings.Contains(err.Error(), test.need) {
			t.Errorf("%.120q: error %v, want %q", test.text, err, test.need)
		}
	}
}

// A few words of text may claim any number of points; none of them takes memory.
func TestHugeImageTakesNoMemory(t *testing.T) {
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	for _, extent := range []string{"0 9999 0 9999 0 9999", "0 400 0 400 0 400", "0 2147483646 0 0 0 0"} {
		if err := readError(image(extent, "", extent), Options{}); !errors.Is(err, ErrLimit) {
			t.Errorf("extent %s: %v", extent, err)
		}
	}
	// allowed, it is described, and read where it is asked for
	model, err := openBytes([]byte(image("0 200 0 200 0 200", "", "0 200 0 200 0 200")), Options{Limits: Limits{GridPoints: 1 << 24}})
	if err != nil {
		t.Fatal(err)
	}
	var c mesh.Chunk
	cursor := newTestCursor(t, model)
	last := model.Pieces[0].CellCount
	if err := cursor.Cells(context.Background(), mesh.Span{Low: last - 1, High: last}, &mesh.Want{}, &c); err != nil {
		t.Fatal(err)
	}
	if want := int32(201*201*201 - 1); c.Nodes[7] != want {
		t.Errorf("last node %d, want %d", c.Nodes[7], want)
	}
	var point [3]float64
	if err := cursor.Points(context.Background(), 0, int64(c.Nodes[7]), int64(c.Nodes[7])+1, point[:]); err != nil || point != [3]float64{200, 200, 200} {
		t.Errorf("last point %v, %v", point, err)
	}
	runtime.ReadMemStats(&after)
	if grown := after.TotalAlloc - before.TotalAlloc; grown > 4<<20 {
		t.Errorf("%d bytes", grown)
	}
}

func TestHiddenCellsAndPoints(t *testing.T) {
	_, got := read(t, `<VTKFile type="ImageData" version="2.0"><ImageData WholeExtent="0 3 0 1 0 0"><Piece Extent="0 3 0 1 0 0">
<PointData><DataArray type="UInt8" Name="vtkGhostType" format="ascii">0 0 0 3 0 0 0 0</DataArray></PointData>
<CellData><DataArray type="UInt8" Name="vtkGhostType" format="ascii">32 1 4</DataArray></CellData>
</Piece></ImageData></VTKFile>`)
	if want := []uint8{mesh.HiddenCell, mesh.DuplicateCell, 4 | mesh.HiddenCell}; !slices.Equal(got.hidden, want) {
		t.Errorf("marks %v, want %v", got.hidden, want)
	}
}
