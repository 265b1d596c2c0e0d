package readers

import (
	"context"
	"testing"

	"strainledger/mesh"
)

// codings returns every way to write arrays, with blocks that do not end at words.
func codings() (all []testCoding) {
	all = append(all, testCoding{form: "ascii"})
	for _, form := range []string{"binary", "appended", "raw"} {
		for _, bigEndian := range []bool{false, true} {
			for _, header64 := range []bool{false, true} {
				plain := testCoding{form: form, bigEndian: bigEndian, header64: header64}
				all = append(all, plain)
				if form != "raw" {
					split := plain
					split.isSplit = true
					all = append(all, split)
				}
				for _, compressor := range []string{"zlib", "lz4"} {
					for _, blockSize := range []int{64, 1001, 32768} {
						packed := plain
						packed.compressor, packed.blockSize = compressor, blockSize
						all = append(all, packed)
					}
				}
			}
		}
	}
	for _, c := range all {
		if c.form == "binary" && (c.blockSize == 0 || c.blockSize == 1001) {
			c.wrap = 61
			all = append(all, c)
		}
	}
	return all
}

// The same grid reads to the same bits from every coding, whatever the chunk.
func TestCodingsGiveTheSameBits(t *testing.T) {
	grid := newTestGrid(150)
	for _, coding := range codings() {
		t.Run(coding.name(), func(t *testing.T) {
			data := grid.file(coding)
			for _, chunk := range []int64{8192, 37, 1} {
				model, err := openBytes(data, Options{})
				if err != nil {
					t.Fatal(err)
				}
				got, err := gather(model, -1, chunk)
				if err != nil {
					t.Fatal(err)
				}
				grid.check(t, got)
				if p := model.Pieces[0]; coding.blockSize > 0 && p.RunCells == 0 || coding.blockSize == 0 && p.RunCells != 0 {
					t.Errorf("runs of %d cells", p.RunCells)
				}
			}
		})
	}
}

// Cells are the same whatever was read before: in falling order, some twice.
func TestSpansInAnyOrder(t *testing.T) {
	grid := newTestGrid(3000)
	for _, coding := range []testCoding{
		{form: "ascii"}, {form: "raw"}, {form: "binary", wrap: 50},
		{form: "raw", compressor: "zlib", blockSize: 1001}, {form: "appended", compressor: "lz4", blockSize: 4096, bigEndian: true},
	} {
		t.Run(coding.name(), func(t *testing.T) {
			model, err := openBytes(grid.file(coding), Options{})
			if err != nil {
				t.Fatal(err)
			}
			checkSpans(t, model, grid)
		})
	}
	t.Run("legacy list", func(t *testing.T) {
		model, err := openBytes(grid.legacy(t, true, "4.2"), Options{})
		if err != nil {
			t.Fatal(err)
		}
		checkSpans(t, model, grid)
	})
}

func checkSpans(t *testing.T, model *mesh.Model, grid *testGrid) {
	t.Helper()
	cursor := model.Open()
	defer cursor.Close()
	want := &mesh.Want{CellValues: []string{"stress"}, Labels: []string{"region"}}
	for _, low := range []int64{2900, 2000, 2003, 2003, 10, 0, 700, 1500, 1400, 2990} {
		var c mesh.Chunk
		high := min(low+97, 3000)
		if err := cursor.Cells(context.Background(), mesh.Span{Low: low, High: high}, want, &c); err != nil {
			t.Fatal(err)
		}
		first := int64(0)
		if low > 0 {
			first = int64(grid.offsets[low-1])
		}
		for i, node := range c.Nodes {
			if float64(node) != grid.connectivity[first+int64(i)] {
				t.Fatalf("span from %d: node %d is %d, want %v", low, i, node, grid.connectivity[first+int64(i)])
			}
		}
		for i, value := range c.Values[0] {
			if value != grid.stress[6*low+int64(i)] {
				t.Fatalf("span from %d: value %d is %v, want %v", low, i, value, grid.stress[6*low+int64(i)])
			}
		}
		for i, label := range c.Labels[0] {
			if float64(label) != grid.region[low+int64(i)] {
				t.Fatalf("span from %d: label %d is %d, want %v", low, i, label, grid.region[low+int64(i)])
			}
		}
	}
}

// Several large blocks, read in falling order and across their edges.
func TestSpansOfLargeBlocks(t *testing.T) {
	const size = streamSize + 8
	values := make([]float64, 2*size/8+1000)
	for i := range values {
		values[i] = float64(i % 1000)
	}
	coding := testCoding{form: "raw", compressor: "zlib", blockSize: size}
	w := newTestWriter(coding, "ImageData", "1.0")
	w.printf("<ImageData WholeExtent=\"0 %d 0 0 0 0\"><Piece Extent=\"0 %d 0 0 0 0\">\n", len(values)-1, len(values)-1)
	w.element("PointData", testArray{"v", "Float64", 1, values})
	w.printf("</Piece></ImageData>\n")
	model, err := openBytes(w.bytes(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := newTestCursor(t, model)
	edge := int64(size / 8)
	for _, low := range []int64{2*edge - 5, edge - 500, 0, 1, edge - 1, edge, 2 * edge, 3, edge + 7, 2*edge + 990} {
		got := make([]float64, min(1000, int64(len(values))-low))
		if err := cursor.PointValues(context.Background(), 0, "v", low, low+int64(len(got)), got); err != nil {
			t.Fatal(err)
		}
		if at := firstDifference(got, values[low:]); at >= 0 {
			t.Errorf("from %d: value %d is %v, want %v", low, at, got[at], values[low+int64(at)])
		}
	}
}

// A block that holds a whole array is not held in memory; what is read of it is the
// same.
func TestLargeBlocksAreStreamed(t *testing.T) {
	grid := newTestGrid(100_000)
	data := grid.file(testCoding{form: "raw", compressor: "zlib", blockSize: 1 << 30, bigEndian: true})
	model, err := openBytes(data, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if model.Pieces[0].RunCells != 100_000 {
		t.Errorf("runs of %d cells, want all in one", model.Pieces[0].RunCells)
	}
	got, err := gather(model, -1, 8192)
	if err != nil {
		t.Fatal(err)
	}
	grid.check(t, got)

	cursor := newTestCursor(t, model)
	var c mesh.Chunk
	for low := int64(0); low < 100_000; low += 10_000 {
		span := mesh.Span{Low: low, High: low + 10_000}
		if err := cursor.Cells(context.Background(), span, &mesh.Want{CellValues: []string{"stress"}}, &c); err != nil {
			t.Fatal(err)
		}
	}
	held := 0
	for i := range cursor.slots {
		held += 8 * len(cursor.slots[i].buffer)
	}
	if arrays := 100_000 * (48 + 20 + 8 + 1); held > arrays/5 {
		t.Errorf("%d bytes held of %d", held, arrays)
	}
	damaged := append([]byte(nil), data...)
	damaged[len(damaged)-len(damaged)/3] ^= 0x10
	if model, err = openBytes(damaged, Options{}); err != nil {
		t.Fatal(err)
	}
	if _, err = gather(model, -1, 8192); err == nil {
		t.Error("a damaged block was taken")
	}
}

func newTestCursor(t *testing.T, model *mesh.Model) *cursor {
	t.Helper()
	c := model.Open().(*cursor)
	t.Cleanup(func() { c.Close() })
	return c
}

// A second pass over a file allocates nothing.
func TestChunksWithoutAllocation(t *testing.T) {
	grid := newTestGrid(3000)
	for _, coding := range []testCoding{{form: "raw"}, {form: "raw", compressor: "zlib", blockSize: 4096}, {form: "binary"}} {
		t.Run(coding.name(), func(t *testing.T) {
			model, err := openBytes(grid.file(coding), Options{})
			if err != nil {
				t.Fatal(err)
			}
			cursor := newTestCursor(t, model)
			want := &mesh.Want{CellValues: []string{"stress"}, Labels: []string{"region"}}
			var c mesh.Chunk
			ctx := context.Background()
			walk := func() {
				for low := int64(0); low < 3000; low += 1000 {
					if err := cursor.Cells(ctx, mesh.Span{Low: low, High: low + 1000}, want, &c); err != nil {
						t.Fatal(err)
					}
				}
			}
			walk()
			if n := testing.AllocsPerRun(5, walk); n > 0 && coding.compressor == "" {
				t.Errorf("%v allocations", n)
			} else if n > 400 { // the decoder's own
				t.Errorf("%v allocations", n)
			}
		})
	}
}
