package readers

import (
	"bytes"
	"context"
	"encoding/binary"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"strainledger/mesh"
)

// readWhole returns the bytes of an array, read in steps of so many.
func readWhole(t *testing.T, cursor mesh.Cursor, array *mesh.Array, step int64) []byte {
	t.Helper()
	data := make([]byte, array.Bytes)
	for at := int64(0); at < array.Bytes; at += step {
		if err := cursor.ReadArray(context.Background(), array, at, data[at:min(at+step, array.Bytes)]); err != nil {
			t.Fatal(err)
		}
	}
	return data
}

// valuesOf takes the bytes of an array apart by its type: numbers in decimal, strings.
func valuesOf(array *mesh.Array, data []byte) []string {
	count := array.Tuples * int64(array.Components)
	var values []string
	switch array.Type {
	case "String":
		return strings.Split(strings.TrimSuffix(string(data), "\x00"), "\x00")
	case "Bit":
		for i := range count {
			values = append(values, strconv.Itoa(int(data[i/8]>>(7-i%8)&1)))
		}
		return values
	}
	size := int64(len(data)) / max(count, 1)
	for i := range count {
		one := data[i*size : (i+1)*size]
		word := binary.LittleEndian.Uint64(append(bytes.Clone(one), make([]byte, 8-size)...))
		shift := 64 - 8*size
		switch array.Type[:3] {
		case "Flo":
			value := math.Float64frombits(word)
			if size == 4 {
				value = float64(math.Float32frombits(uint32(word)))
			}
			values = append(values, strconv.FormatFloat(value, 'g', -1, 64))
		case "UIn":
			values = append(values, strconv.FormatUint(word, 10))
		default:
			values = append(values, strconv.FormatInt(int64(word<<shift)>>shift, 10))
		}
	}
	return values
}

// TestReadArray compares the first and the last tuple of every array of every sample,
// as they are stored, with the index: to the last digit of large integers, to 1e-12 of
// floating-point numbers, whose text in the index is shorter.
func TestReadArray(t *testing.T) {
	compared := map[string]int{}
	for _, want := range readIndex(t, filepath.Join(samples, "index.json")) {
		if want.Blocks != nil || want.Steps != nil || want.Entries != nil {
			continue
		}
		t.Run(want.File, func(t *testing.T) {
			model := openSample(t, want.File, Options{})
			cursor := model.Open()
			defer cursor.Close()
			for on, arrays := range map[mesh.Location][]sampleArray{mesh.OnPoint: want.PointArrays, mesh.OnCell: want.CellArrays} {
				for _, array := range arrays {
					checkStored(t, model, cursor, on, array)
					compared[array.Type]++
				}
			}
			for _, array := range want.FieldArrays {
				fields := model.Sources[0].Fields
				i := slices.IndexFunc(fields, func(a mesh.Array) bool { return a.Name == array.Name })
				if i < 0 {
					t.Errorf("no field array %q", array.Name)
					continue
				}
				values := valuesOf(&fields[i], readWhole(t, cursor, &fields[i], 8))
				checkEnds(t, &fields[i], values, values, array)
			}
		})
	}
	for _, number := range numberNames[1:] {
		if compared[number] == 0 {
			t.Errorf("no array of type %s was compared", number)
		}
	}
}

// checkStored compares an array of the first and the last piece that hold any.
func checkStored(t *testing.T, model *mesh.Model, cursor mesh.Cursor, on mesh.Location, want sampleArray) {
	t.Helper()
	var first, last []string
	var described *mesh.Array
	for i := range model.Pieces {
		array := model.Pieces[i].Find(on, want.Name)
		if array == nil || array.Tuples == 0 {
			continue
		}
		data := readWhole(t, cursor, array, array.Bytes)
		if steps := readWhole(t, cursor, array, 8); !bytes.Equal(steps, data) {
			t.Errorf("%s %q: % x in steps of 8 bytes, % x at once", on, want.Name, steps, data)
		}
		last, described = valuesOf(array, data), array
		if first == nil {
			first = last
		}
	}
	if described != nil {
		checkEnds(t, described, first, last, want)
	}
}

// checkEnds compares the first and last tuple.
func checkEnds(t *testing.T, array *mesh.Array, first, last []string, want sampleArray) {
	t.Helper()
	if want.Tuples == 0 {
		return
	}
	n := array.Components
	for _, end := range []struct {
		got  []string
		want []any
	}{{first[:n], want.First}, {last[len(last)-n:], want.Last}} {
		for i, value := range end.want {
			if !isSameValue(end.got[i], value) {
				t.Errorf("%q of type %s: %s, want %v", array.Name, array.Type, end.got, end.want)
			}
		}
	}
}

func isSameValue(got string, want any) bool {
	text, ok := want.(string)
	if ok && got == text {
		return true
	}
	number, isNumber := want.(float64)
	if ok {
		parsed, err := strconv.ParseFloat(text, 64)
		if err != nil || !math.IsNaN(parsed) && !math.IsInf(parsed, 0) {
			return false
		}
		number, isNumber = parsed, true
	}
	value, err := strconv.ParseFloat(got, 64)
	return err == nil && isNumber &&
		(value == number || math.IsNaN(value) && math.IsNaN(number) || math.Abs(value-number) <= 1e-12*math.Abs(number))
}

// Bits that no float64 or int64 of the program could carry: payloads and signs of NaN,
// the sign of zero, denormals, integers beyond 2⁵³ and 2⁶³; in either byte order.
func TestReadArrayKeepsEveryBit(t *testing.T) {
	words := []uint64{0x7ff0000000000001, 0xfff8dead0000beef, 0x8000000000000000, 1, 0x7ff8000000000000, 0xffffffffffffffff, 1<<53 + 1}
	for _, number := range []string{"Float64", "Int64", "UInt64", "Float32", "UInt16"} {
		for _, order := range []binary.AppendByteOrder{binary.LittleEndian, binary.BigEndian} {
			size := numberNamed(number).size()
			count := 8 * int64(len(words)) / size
			var little, stored []byte
			for _, word := range words {
				little = binary.LittleEndian.AppendUint64(little, word)
			}
			for at := int64(0); at < int64(len(little)); at += size {
				one := bytes.Clone(little[at : at+size])
				if order.String() == "BigEndian" {
					slices.Reverse(one)
				}
				stored = append(stored, one...)
			}
			text := `<VTKFile type="UnstructuredGrid" version="1.0" byte_order="` + order.String() + `" header_type="UInt64"><UnstructuredGrid>
<Piece NumberOfPoints="` + formatCount(count) + `" NumberOfCells="0"><PointData><DataArray type="` + number + `" Name="v" format="appended" offset="0"/></PointData>
<Points><DataArray type="Int8" NumberOfComponents="3" format="ascii">` + strings.Repeat("0 0 0 ", int(count)) + `</DataArray></Points></Piece></UnstructuredGrid>
<AppendedData encoding="raw">_` + string(order.AppendUint64(nil, uint64(len(stored)))) + string(stored)
			model, err := openBytes([]byte(text), Options{})
			if err != nil {
				t.Fatal(err)
			}
			cursor := model.Open()
			if got := readWhole(t, cursor, model.Pieces[0].Find(mesh.OnPoint, "v"), 16); !bytes.Equal(got, little) {
				t.Errorf("%s, %s: % x, want % x", number, order, got, little)
			}
			cursor.Close()
		}
	}
}

// What an array lacks is an error with its name, and asking for what it has not a fault
// of the caller.
func TestReadArrayFaults(t *testing.T) {
	file := func(array string) string {
		return `<VTKFile type="UnstructuredGrid"><UnstructuredGrid><Piece NumberOfPoints="9" NumberOfCells="0"><PointData>` + array + `</PointData>
<Points><DataArray type="Int8" NumberOfComponents="3" format="ascii">` + strings.Repeat("0 ", 27) + `</DataArray></Points></Piece></UnstructuredGrid></VTKFile>`
	}
	for _, c := range []struct{ array, want string }{
		{`<DataArray type="Bit" Name="few" format="ascii">1 0 1</DataArray>`, `array "few": 9 points with 1 component need 9 bits, found room for 3`},
		{`<DataArray type="Bit" Name="few" format="binary">AQAAAP8=</DataArray>`, `array "few": 9 points with 1 component need 9 bits, found room for 8`},
		{`<DataArray type="Bit" Name="none"/>`, `array "none": 9 points with 1 component need 9 bits, found room for 0`},
		{`<Array type="String" Name="cut" format="binary">/wAAAGFi</Array>`, `array "cut": 255 bytes`},
	} {
		_, err := openBytes([]byte(file(c.array)), Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v, want %s", c.array, err, c.want)
		}
	}
	model, err := openBytes([]byte(file(`<DataArray type="Bit" Name="few" format="ascii">1 1 0 1 x 1 1 1 1</DataArray>`)), Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := model.Open()
	defer cursor.Close()
	array := &model.Pieces[0].Arrays[0]
	if err := cursor.ReadArray(context.Background(), array, 0, make([]byte, 2)); err == nil || !strings.Contains(err.Error(), `array "few"`) {
		t.Errorf("error %v, want one that names the array", err)
	}
	cancelled, cancel := context.WithCancel(context.Background())
	cancel()
	if err := cursor.ReadArray(cancelled, array, 0, make([]byte, 1)); err != context.Canceled {
		t.Errorf("error %v", err)
	}
	for _, at := range []int64{-8, 4, 8} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("byte %d was read", at)
				}
			}()
			cursor.ReadArray(context.Background(), array, at, make([]byte, 2))
		}()
	}
}

// What is stored in another way than it is described, at every place and in any order of
// reading: bits and colours as text, old ghost levels, strings.
func TestReadArrayConverts(t *testing.T) {
	var bits, colours, ascii, lines, binaries strings.Builder
	var packed []byte
	for i := range 200 {
		if i%8 == 0 {
			packed = append(packed, 0)
		}
		bit := i * i / 3 % 2
		packed[i/8] |= byte(bit) << (7 - i%8)
		ascii.WriteString(strconv.Itoa(bit) + " ")
	}
	var wantStrings []byte
	for i := range 30 {
		text := strings.Repeat("é ", i%11)
		lines.WriteString(strings.NewReplacer(" ", "%20", "é", "%C3%A9").Replace(text) + "\n")
		binaries.WriteString(string([]byte{byte(0xc0 | len(text))}) + text)
		wantStrings = append(wantStrings, text+"\x00"...)
	}
	bits.WriteString("# vtk DataFile Version 3.0\nx\nASCII\nDATASET POLYDATA\nPOINTS 200 char\n" + strings.Repeat("0 0 0 ", 200) + "\nPOINT_DATA 200\nSCALARS v bit\n" + ascii.String())
	colours.WriteString("# vtk DataFile Version 3.0\nx\nASCII\nDATASET POLYDATA\nPOINTS 10 char\n" + strings.Repeat("0 0 0 ", 10) + "\nPOINT_DATA 10\nCOLOR_SCALARS v 1\n0 1 0.5 0.25 2 -3 0.001 0.002 0.998 0.999")
	words := func(coding, values string) string {
		return "# vtk DataFile Version 3.0\nx\n" + coding + "\nDATASET POLYDATA\nFIELD f 1\nv 1 30 string\n" + values
	}
	levels := `<VTKFile type="UnstructuredGrid" version="0.1"><UnstructuredGrid><Piece NumberOfPoints="10" NumberOfCells="0">
<PointData><DataArray type="Int16" Name="vtkGhostLevels" format="ascii">0 1 2 300 0 7 0 0 0 2</DataArray></PointData>
<Points><DataArray type="Int8" NumberOfComponents="3" format="ascii">` + strings.Repeat("0 ", 30) + `</DataArray></Points></Piece></UnstructuredGrid></VTKFile>`
	for name, c := range map[string]struct {
		text string
		want []byte
	}{
		"bits":           {bits.String(), packed},
		"colours":        {colours.String(), []byte{0, 255, 128, 64, 255, 0, 0, 1, 254, 255}},
		"levels":         {levels, []byte{0, 0, 1, 0, 1, 0, 1, 0, 0, 0, 1, 0, 0, 0, 0, 0, 0, 0, 1, 0}},
		"strings":        {words("ASCII", lines.String()), wantStrings},
		"binary strings": {words("BINARY", binaries.String()), wantStrings},
	} {
		model, err := openBytes([]byte(c.text), Options{})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		array := &slices.Concat(model.Sources[0].Fields, model.Pieces[0].Arrays)[0]
		if array.Bytes != int64(len(c.want)) {
			t.Errorf("%s: %d bytes, want %d", name, array.Bytes, len(c.want))
			continue
		}
		cursor := model.Open()
		for low := array.Bytes / 8 * 8; low >= 0; low -= 8 { // back to front, each stretch from there on
			for high := low; high <= array.Bytes; high++ {
				if array.Type == "Int16" && high%2 == 1 {
					continue
				}
				data := make([]byte, high-low)
				if err := cursor.ReadArray(context.Background(), array, low, data); err != nil || !bytes.Equal(data, c.want[low:high]) {
					t.Fatalf("%s: bytes [%d, %d) are % x (%v), want % x", name, low, high, data, err, c.want[low:high])
				}
			}
		}
		cursor.Close()
	}
}

// Of the arrays of one keyword the first of points and the first of cells has its
// attribute.
func TestAttributesOfKeywords(t *testing.T) {
	model, err := openBytes([]byte(`# vtk DataFile Version 3.0
x
ASCII
DATASET POLYDATA
POINTS 1 char
0 0 0
VERTICES 1 2
1 0
POINT_DATA 1
SCALARS a char
1
SCALARS b char
2
VECTORS c char
1 2 3
CELL_DATA 1
SCALARS d char
3
TENSORS e char
1 2 3 4 5 6 7 8 9
TENSORS6 f char
1 2 3 4 5 6
GLOBAL_IDS g vtkIdType
9
FIELD x 1
h 1 1 char
4
`), Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]string{"a": "Scalars", "b": "", "c": "Vectors", "d": "Scalars", "e": "Tensors", "f": "", "g": "GlobalIds", "h": ""}
	for _, array := range model.Pieces[0].Arrays {
		if got := strings.Join(array.Attributes, " "); got != want[array.Name] {
			t.Errorf("array %s is marked %q, want %q", array.Name, got, want[array.Name])
		}
	}
	if got := len(model.Pieces[0].Arrays); got != len(want) {
		t.Errorf("%d arrays, want %d", got, len(want))
	}
}
