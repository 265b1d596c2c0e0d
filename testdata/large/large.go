// Package large writes result files of any size for tests of speed and memory: a
// bent block of hexahedra with stress and strain that belong together.
package large

import (
	"bufio"
	"bytes"
	"compress/zlib"
	"encoding/base64"
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"strconv"

	"github.com/pierrec/lz4/v4"
)

// A Material is what a region is made of: linear, isotropic.
type Material struct{ YoungsModulus, PoissonsRatio float64 }

// Materials holds the material of each region; moduli in MPa.
var Materials = [...]Material{{210000, 0.3}, {70000, 0.33}, {110000, 0.34}, {2500, 0.4}}

// BlockSize is the length of compressed blocks, which VTK's writers use too.
const BlockSize = 32 << 10

// Shape returns the cells along x, y and z of a block of about so many cells.
func Shape(cells int) (nx, ny, nz int) {
	nx = max(1, int(math.Round(math.Cbrt(float64(cells)))))
	return nx, nx, max(1, int(math.Round(float64(cells)/float64(nx*nx))))
}

// ArrayBytes returns the length of all arrays that Write writes, uncompressed.
func ArrayBytes(cells int) int64 {
	b := newBlock(cells)
	var sum int64
	for _, a := range b.arrays() {
		sum += a.bytes()
	}
	return sum
}

// Write writes an unstructured grid of about so many hexahedra as a .vtu file. Cell
// data are stress and strain (xx yy zz xy yz xz, tensor shear) and the number of the
// region, point data the displacement. The encodings:
//
//	raw     appended, raw bytes
//	zlib    appended, raw bytes in zlib blocks
//	lz4     appended, raw bytes in LZ4 blocks
//	base64  inside the elements, not compressed
//	ascii   inside the elements, as text
//
// Compressed arrays are held in memory until all lengths are known.
func Write(w io.Writer, cells int, encoding string) error {
	out := bufio.NewWriterSize(w, 1<<20)
	b := newBlock(cells)
	var err error
	switch encoding {
	case "raw", "zlib", "lz4":
		err = b.appended(out, encoding)
	case "base64", "ascii":
		err = b.inline(out, encoding)
	default:
		return fmt.Errorf("encoding %q, want raw, zlib, lz4, base64 or ascii", encoding)
	}
	if err != nil {
		return err
	}
	return out.Flush()
}

type block struct {
	nx, ny, nz    int
	cells, points int
}

func newBlock(cells int) *block {
	nx, ny, nz := Shape(cells)
	return &block{nx, ny, nz, nx * ny * nz, (nx + 1) * (ny + 1) * (nz + 1)}
}

// An array is generated tuple by tuple.
type array struct {
	element, attributes string
	format              string // number type
	tuples, components  int
	fill                func(i int, to []float64)
}

func (a *array) width() int {
	switch a.format {
	case "Float64", "Int64":
		return 8
	case "Int32":
		return 4
	}
	return 1
}

func (a *array) bytes() int64 { return int64(a.tuples) * int64(a.components) * int64(a.width()) }

func (b *block) arrays() []array {
	return []array{
		{"PointData", `Name="displacement" NumberOfComponents="3"`, "Float64", b.points, 3, b.displacement},
		{"CellData", `Name="stress" NumberOfComponents="6"`, "Float64", b.cells, 6, b.stress},
		{"CellData", `Name="strain" NumberOfComponents="6"`, "Float64", b.cells, 6, b.strain},
		{"CellData", `Name="region"`, "Int32", b.cells, 1, b.region},
		{"Points", `Name="Points" NumberOfComponents="3"`, "Float64", b.points, 3, b.point},
		{"Cells", `Name="connectivity"`, "Int64", b.cells, 8, b.nodes},
		{"Cells", `Name="offsets"`, "Int64", b.cells, 1, func(i int, to []float64) { to[0] = float64(8 * (i + 1)) }},
		{"Cells", `Name="types"`, "UInt8", b.cells, 1, func(_ int, to []float64) { to[0] = 12 }},
	}
}

// noise returns a number in [-1, 1] that depends on the index alone (splitmix64 of
// S. Vigna, public domain).
func noise(index int) float64 {
	z := uint64(index)*0x9e3779b97f4a7c15 + 0x9e3779b97f4a7c15
	z = (z ^ z>>30) * 0xbf58476d1ce4e5b9
	z = (z ^ z>>27) * 0x94d049bb133111eb
	return float64(int64(z^z>>31)) / (1 << 63)
}

func (b *block) point(i int, to []float64) {
	x, y, z := i%(b.nx+1), i/(b.nx+1)%(b.ny+1), i/((b.nx+1)*(b.ny+1))
	radius, angle := float64(2*b.nx+x), float64(y)/(1.5*float64(b.nx))
	to[0] = radius*math.Cos(angle) + 0.01*noise(3*i)
	to[1] = radius*math.Sin(angle) + 0.01*noise(3*i+1)
	to[2] = float64(z) + 0.01*noise(3*i+2)
}

func (b *block) displacement(i int, to []float64) {
	b.point(i, to)
	for c := range to {
		to[c] = 1e-3 * math.Sin(3*to[c]/float64(b.nx))
	}
}

func (b *block) nodes(i int, to []float64) {
	x, y, z := i%b.nx, i/b.nx%b.ny, i/(b.nx*b.ny)
	row, layer := b.nx+1, (b.nx+1)*(b.ny+1)
	first := z*layer + y*row + x
	for c, step := range [8]int{0, 1, row + 1, row, layer, layer + 1, layer + row + 1, layer + row} {
		to[c] = float64(first + step)
	}
}

func (b *block) region(i int, to []float64) {
	to[0] = float64(i % b.nx * len(Materials) / b.nx)
}

func (b *block) stress(i int, to []float64) {
	u := float64(i%b.nx) / float64(b.nx)
	v := float64(i/b.nx%b.ny) / float64(b.ny)
	w := float64(i/(b.nx*b.ny)) / float64(b.nz)
	for c := range to {
		amplitude := 150.0
		if c > 2 {
			amplitude = 60
		}
		f := float64(c)
		to[c] = amplitude * (math.Sin((2+f)*u+0.3*f)*math.Cos((1.5+0.7*f)*v) + 0.4*math.Sin(9*w+f)*u)
		to[c] *= 1 + 1e-3*noise(6*i+c)
	}
	to[0] += 900 * math.Exp(-((u-0.3)*(u-0.3)+(v-0.3)*(v-0.3)+(w-0.3)*(w-0.3))/0.002)
}

// strain is ε = ((1+ν) σ - ν tr σ 1) / E.
func (b *block) strain(i int, to []float64) {
	b.region(i, to)
	m := Materials[int(to[0])]
	b.stress(i, to)
	trace := to[0] + to[1] + to[2]
	for c := range to {
		to[c] *= (1 + m.PoissonsRatio) / m.YoungsModulus
		if c < 3 {
			to[c] -= m.PoissonsRatio / m.YoungsModulus * trace
		}
	}
}

// write writes the values little-endian.
func (a *array) write(w io.Writer) error {
	tuple := make([]float64, a.components)
	buffer := make([]byte, 0, BlockSize+256)
	for i := range a.tuples {
		a.fill(i, tuple)
		for _, value := range tuple {
			switch a.format {
			case "Float64":
				buffer = binary.LittleEndian.AppendUint64(buffer, math.Float64bits(value))
			case "Int64":
				buffer = binary.LittleEndian.AppendUint64(buffer, uint64(value))
			case "Int32":
				buffer = binary.LittleEndian.AppendUint32(buffer, uint32(value))
			default:
				buffer = append(buffer, byte(value))
			}
		}
		if len(buffer) >= BlockSize || i == a.tuples-1 {
			if _, err := w.Write(buffer); err != nil {
				return err
			}
			buffer = buffer[:0]
		}
	}
	return nil
}

// text writes the values as words.
func (a *array) text(w io.Writer) error {
	tuple := make([]float64, a.components)
	var line []byte
	for i := range a.tuples {
		a.fill(i, tuple)
		line = line[:0]
		for _, value := range tuple {
			if line = append(line, ' '); a.format == "Float64" {
				line = strconv.AppendFloat(line, value, 'g', -1, 64)
			} else {
				line = strconv.AppendInt(line, int64(value), 10)
			}
		}
		if _, err := w.Write(append(line, '\n')); err != nil {
			return err
		}
	}
	return nil
}

func (b *block) head(w io.Writer, compressor string) {
	fmt.Fprintf(w, `<VTKFile type="UnstructuredGrid" version="1.0" byte_order="LittleEndian" header_type="UInt64"%s>
<UnstructuredGrid><Piece NumberOfPoints="%d" NumberOfCells="%d">
`, compressor, b.points, b.cells)
}

// elements calls write for each array between the tags of its element.
func (b *block) elements(w io.Writer, write func(i int, a *array) error) error {
	open := ""
	for i, a := range b.arrays() {
		if a.element != open {
			if open != "" {
				fmt.Fprintf(w, "</%s>\n", open)
			}
			fmt.Fprintf(w, "<%s>\n", a.element)
			open = a.element
		}
		fmt.Fprintf(w, `<DataArray type="%s" %s`, a.format, a.attributes)
		if err := write(i, &a); err != nil {
			return err
		}
	}
	_, err := fmt.Fprintf(w, "</%s>\n</Piece></UnstructuredGrid>\n", open)
	return err
}

func (b *block) inline(w io.Writer, encoding string) error {
	b.head(w, "")
	err := b.elements(w, func(_ int, a *array) error {
		if encoding == "ascii" {
			fmt.Fprint(w, " format=\"ascii\">\n")
			if err := a.text(w); err != nil {
				return err
			}
		} else {
			fmt.Fprint(w, " format=\"binary\">\n")
			encoder := base64.NewEncoder(base64.StdEncoding, w)
			if err := binary.Write(encoder, binary.LittleEndian, a.bytes()); err != nil {
				return err
			}
			if err := a.write(encoder); err != nil {
				return err
			}
			encoder.Close()
		}
		_, err := fmt.Fprint(w, "\n</DataArray>\n")
		return err
	})
	if err == nil {
		_, err = fmt.Fprint(w, "</VTKFile>\n")
	}
	return err
}

func (b *block) appended(w io.Writer, encoding string) error {
	arrays := b.arrays()
	packed := make([][]byte, len(arrays))
	lengths := make([]int64, len(arrays))
	compressor := map[string]string{
		"zlib": ` compressor="vtkZLibDataCompressor"`, "lz4": ` compressor="vtkLZ4DataCompressor"`,
	}[encoding]
	for i := range arrays {
		lengths[i] = 8 + arrays[i].bytes()
		if encoding != "raw" {
			var err error
			if packed[i], err = arrays[i].compress(encoding); err != nil {
				return err
			}
			lengths[i] = int64(len(packed[i]))
		}
	}
	b.head(w, compressor)
	offset := int64(0)
	err := b.elements(w, func(i int, _ *array) error {
		_, err := fmt.Fprintf(w, " format=\"appended\" offset=\"%d\"/>\n", offset)
		offset += lengths[i]
		return err
	})
	if err != nil {
		return err
	}
	fmt.Fprint(w, `<AppendedData encoding="raw">_`)
	for i := range arrays {
		if encoding != "raw" {
			_, err = w.Write(packed[i])
		} else if err = binary.Write(w, binary.LittleEndian, arrays[i].bytes()); err == nil {
			err = arrays[i].write(w)
		}
		if err != nil {
			return err
		}
	}
	_, err = fmt.Fprint(w, "</AppendedData></VTKFile>\n")
	return err
}

// compress returns the length words and the blocks.
func (a *array) compress(encoding string) ([]byte, error) {
	blocks := &blockWriter{encoding: encoding}
	if err := a.write(blocks); err != nil {
		return nil, err
	}
	if err := blocks.flush(); err != nil {
		return nil, err
	}
	var head []byte
	for _, word := range append([]uint64{uint64(len(blocks.sizes)), BlockSize, uint64(a.bytes() % BlockSize)}, blocks.sizes...) {
		head = binary.LittleEndian.AppendUint64(head, word)
	}
	return append(head, blocks.packed.Bytes()...), nil
}

type blockWriter struct {
	encoding string
	pending  []byte
	packed   bytes.Buffer
	sizes    []uint64
	zlib     *zlib.Writer
}

func (w *blockWriter) Write(data []byte) (int, error) {
	w.pending = append(w.pending, data...)
	for len(w.pending) >= BlockSize {
		if err := w.block(w.pending[:BlockSize]); err != nil {
			return 0, err
		}
		w.pending = w.pending[:copy(w.pending, w.pending[BlockSize:])]
	}
	return len(data), nil
}

func (w *blockWriter) flush() error {
	if len(w.pending) == 0 {
		return nil
	}
	return w.block(w.pending)
}

func (w *blockWriter) block(data []byte) error {
	before := w.packed.Len()
	if w.encoding == "lz4" {
		room := make([]byte, lz4.CompressBlockBound(len(data)))
		n, err := lz4.CompressBlock(data, room, nil)
		if err != nil {
			return err
		}
		w.packed.Write(room[:n])
	} else {
		if w.zlib == nil {
			w.zlib, _ = zlib.NewWriterLevel(&w.packed, zlib.BestSpeed)
		}
		w.zlib.Reset(&w.packed)
		if _, err := w.zlib.Write(data); err != nil {
			return err
		}
		if err := w.zlib.Close(); err != nil {
			return err
		}
	}
	w.sizes = append(w.sizes, uint64(w.packed.Len()-before))
	return nil
}
