package readers

import (
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"github.com/pierrec/lz4/v4"

	"strainledger/mesh"
)

// A testArray is an array of a file that a test writes.
type testArray struct {
	name, format string // number type
	components   int
	values       []float64
}

// A testCoding is a way to write arrays into an XML file.
type testCoding struct {
	form       string // ascii, binary, appended (base64) or raw
	compressor string // "", zlib or lz4
	bigEndian  bool
	header64   bool
	blockSize  int
	wrap       int  // characters in a line of base64; 0: one line
	isSplit    bool // the length word in a run of base64 of its own
}

func (c testCoding) name() string {
	return fmt.Sprintf("%s %s %v %v %d %d %v", c.form, c.compressor, c.bigEndian, c.header64, c.blockSize, c.wrap, c.isSplit)
}

func (c testCoding) order() binary.AppendByteOrder {
	if c.bigEndian {
		return binary.BigEndian
	}
	return binary.LittleEndian
}

// data returns the array's bytes.
func (c testCoding) data(a testArray) (data []byte) {
	order := c.order()
	for _, value := range a.values {
		switch a.format {
		case "Int8", "UInt8":
			data = append(data, byte(int64(value)))
		case "Int16", "UInt16":
			data = order.AppendUint16(data, uint16(int64(value)))
		case "Int32", "UInt32":
			data = order.AppendUint32(data, uint32(int64(value)))
		case "Int64", "UInt64":
			data = order.AppendUint64(data, uint64(int64(value)))
		case "Float32":
			data = order.AppendUint32(data, math.Float32bits(float32(value)))
		case "Float64":
			data = order.AppendUint64(data, math.Float64bits(value))
		}
	}
	return data
}

func (c testCoding) words(values ...int) (data []byte) {
	for _, value := range values {
		if c.header64 {
			data = c.order().AppendUint64(data, uint64(value))
		} else {
			data = c.order().AppendUint32(data, uint32(value))
		}
	}
	return data
}

// binary returns the length words and what they stand before, each a run of base64 of
// its own; without the first both are in one.
func (c testCoding) binary(a testArray) (head, body []byte) {
	data := c.data(a)
	if c.compressor == "" {
		if c.isSplit {
			return c.words(len(data)), data
		}
		return nil, append(c.words(len(data)), data...)
	}
	words := []int{(len(data) + c.blockSize - 1) / c.blockSize, c.blockSize, len(data) % c.blockSize}
	for ; len(data) > 0; data = data[min(c.blockSize, len(data)):] {
		block := data[:min(c.blockSize, len(data))]
		before := len(body)
		if c.compressor == "zlib" {
			var packed bytes.Buffer
			w := zlib.NewWriter(&packed)
			w.Write(block)
			w.Close()
			body = append(body, packed.Bytes()...)
		} else {
			room := make([]byte, lz4.CompressBlockBound(len(block)))
			n, err := lz4.CompressBlock(block, room, nil)
			if err != nil {
				panic(err)
			}
			body = append(body, room[:n]...)
		}
		words = append(words, len(body)-before)
	}
	return c.words(words...), body
}

func (c testCoding) text(a testArray) string {
	var text strings.Builder
	for i, value := range a.values {
		word := strconv.FormatInt(int64(value), 10)
		if strings.HasPrefix(a.format, "Float") {
			word = strconv.FormatFloat(value, 'g', -1, 64)
		}
		text.WriteString(word)
		text.WriteString([]string{" ", "  ", "\t", "\n", "\r\n "}[i%5])
	}
	return text.String()
}

func (c testCoding) base64(a testArray) string {
	head, body := c.binary(a)
	text := base64.StdEncoding.EncodeToString(head) + base64.StdEncoding.EncodeToString(body)
	if c.wrap == 0 {
		return text
	}
	var wrapped strings.Builder
	for ; len(text) > 0; text = text[min(c.wrap, len(text)):] {
		wrapped.WriteString(text[:min(c.wrap, len(text))] + "\n    ")
	}
	return wrapped.String()
}

// A testWriter writes an XML file.
type testWriter struct {
	coding   testCoding
	text     bytes.Buffer
	appended bytes.Buffer
}

// newTestWriter begins a file of a type.
func newTestWriter(coding testCoding, kind, version string) *testWriter {
	w := &testWriter{coding: coding}
	order, header, compressor := "LittleEndian", "UInt32", ""
	if coding.bigEndian {
		order = "BigEndian"
	}
	if coding.header64 {
		header = "UInt64"
	}
	switch coding.compressor {
	case "zlib":
		compressor = ` compressor="vtkZLibDataCompressor"`
	case "lz4":
		compressor = ` compressor="vtkLZ4DataCompressor"`
	}
	w.printf("<VTKFile type=%q version=%q byte_order=%q header_type=%q%s>\n", kind, version, order, header, compressor)
	return w
}

func (w *testWriter) printf(format string, values ...any) { fmt.Fprintf(&w.text, format, values...) }

// element writes arrays inside an element.
func (w *testWriter) element(name string, arrays ...testArray) {
	w.printf("<%s>\n", name)
	for _, a := range arrays {
		w.printf(`<DataArray type=%q Name=%q NumberOfComponents="%d"`, a.format, a.name, max(1, a.components))
		switch w.coding.form {
		case "ascii":
			w.printf(" format=\"ascii\">\n%s</DataArray>\n", w.coding.text(a))
		case "binary":
			w.printf(" format=\"binary\">\n  %s\n</DataArray>\n", w.coding.base64(a))
		case "appended":
			w.printf(" format=\"appended\" offset=\"%d\"/>\n", w.appended.Len())
			w.appended.WriteString(w.coding.base64(a))
		default:
			w.printf(" format=\"appended\" offset=\"%d\"/>\n", w.appended.Len())
			head, body := w.coding.binary(a)
			w.appended.Write(append(head, body...))
		}
	}
	w.printf("</%s>\n", name)
}

// bytes ends the file.
func (w *testWriter) bytes() []byte {
	if w.appended.Len() > 0 {
		encoding := "base64"
		if w.coding.form == "raw" {
			encoding = "raw"
		}
		w.printf("<AppendedData encoding=%q>\n   _", encoding)
		w.text.Write(w.appended.Bytes())
		w.printf("\n</AppendedData>\n")
	}
	w.printf("</VTKFile>\n")
	return w.text.Bytes()
}

// A testGrid is an unstructured grid of tetrahedra, hexahedra and triangles in turn.
type testGrid struct {
	points, connectivity, offsets, types []float64
	stress, region, temperature          []float64
}

func newTestGrid(cells int) *testGrid {
	random := rand.New(rand.NewPCG(3, 4))
	g := &testGrid{}
	points := 5*cells + 8
	for range 3 * points {
		g.points = append(g.points, random.NormFloat64())
	}
	for range points {
		g.temperature = append(g.temperature, float64(float32(20+random.Float64())))
	}
	for i := range cells {
		cellType, nodes := [3]int{10, 12, 5}[i%3], [3]int{4, 8, 3}[i%3]
		for range nodes {
			g.connectivity = append(g.connectivity, float64(random.IntN(points)))
		}
		g.types = append(g.types, float64(cellType))
		g.offsets = append(g.offsets, float64(len(g.connectivity)))
		for range 6 {
			g.stress = append(g.stress, math.Ldexp(random.Float64()-0.5, random.IntN(60)-30))
		}
		g.region = append(g.region, float64(i/5-3))
	}
	return g
}

// file writes the grid as a .vtu file.
func (g *testGrid) file(coding testCoding) []byte {
	w := newTestWriter(coding, "UnstructuredGrid", "1.0")
	w.printf("<UnstructuredGrid><Piece NumberOfPoints=\"%d\" NumberOfCells=\"%d\">\n", len(g.points)/3, len(g.types))
	w.element("PointData", testArray{"temperature", "Float32", 1, g.temperature})
	w.element("CellData", testArray{"stress", "Float64", 6, g.stress}, testArray{"region", "Int16", 1, g.region})
	w.element("Points", testArray{"Points", "Float64", 3, g.points})
	w.element("Cells", testArray{"connectivity", "Int32", 1, g.connectivity}, testArray{"offsets", "Int64", 1, g.offsets},
		testArray{"types", "UInt8", 1, g.types})
	w.printf("</Piece></UnstructuredGrid>\n")
	return w.bytes()
}

// check compares what was read with the grid, bit by bit.
func (g *testGrid) check(t *testing.T, got *gathered) {
	t.Helper()
	var nodes []float64
	for _, cell := range got.nodes {
		for _, node := range cell {
			nodes = append(nodes, float64(node))
		}
	}
	for _, part := range []struct {
		name      string
		got, want []float64
	}{
		{"points", got.points, g.points}, {"connectivity", nodes, g.connectivity},
		{"stress", got.arrays[arrayKey{mesh.OnCell, "stress"}].values, g.stress},
		{"region", got.arrays[arrayKey{mesh.OnCell, "region"}].values, g.region},
		{"temperature", got.arrays[arrayKey{mesh.OnPoint, "temperature"}].values, g.temperature},
	} {
		if len(part.got) != len(part.want) || firstDifference(part.got, part.want) >= 0 {
			t.Errorf("%s differ at %d; %d values, want %d", part.name, firstDifference(part.got, part.want), len(part.got), len(part.want))
		}
	}
	if len(got.nodes) != len(g.types) {
		t.Errorf("%d cells, want %d", len(got.nodes), len(g.types))
	}
}

// firstDifference returns the place of the first difference in bits, or -1.
func firstDifference(a, b []float64) int {
	for i := range min(len(a), len(b)) {
		if math.Float64bits(a[i]) != math.Float64bits(b[i]) {
			return i
		}
	}
	return -1
}
