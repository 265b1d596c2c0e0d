package readers

import (
	"encoding/base64"
	"encoding/binary"
	"errors"
	"fmt"
	"runtime"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// Lawful XML in every spelling reads to the same tetrahedron.
func TestXMLSpellings(t *testing.T) {
	plain := tetrahedron("", `<CellData><DataArray type="Float64" Name="a &lt;&#963; &amp; &quot;b&apos;&#x20;" format="ascii">7</DataArray></CellData>`)
	for name, text := range map[string]string{
		"plain":             plain,
		"declaration":       "\ufeff<?xml version=\"1.0\" encoding=\"utf-8\"?>\r\n" + plain,
		"comments":          "<!-- > --><!-- a <b> -->" + strings.ReplaceAll(plain, "<Cells>", "<!-- <Cells> --><Cells>\n<!---->"),
		"single quotes":     strings.ReplaceAll(plain, `"Float64"`, `'Float64'`),
		"blanks":            strings.ReplaceAll(strings.ReplaceAll(plain, `type="`, "\n\ttype = \""), "<Points>", "<Points  >"),
		"greater inside":    strings.ReplaceAll(plain, "<Points>", `<Points note="a > b" other='">'>`),
		"unknown elements":  strings.ReplaceAll(plain, "<Points>", "<Metadata><Inner x=\"1\"/></Metadata><Points>"),
		"after the end":     plain + "\nanything <",
		"information":       strings.ReplaceAll(plain, "7</DataArray>", `7 <InformationKey name="UNITS_LABEL" location="vtkDataArray">MPa</InformationKey></DataArray>`),
		"offsets lead":      strings.ReplaceAll(plain, `ascii">4</DataArray>`, `ascii">0 4</DataArray>`),
		"format by chance":  strings.ReplaceAll(plain, `format="ascii">4`, `format="text">4`),
		"components of 0":   strings.ReplaceAll(plain, `Name="offsets"`, `Name="offsets" NumberOfComponents="0"`),
		"version unknown":   strings.ReplaceAll(plain, `version="1.0"`, `version="latest"`),
		"pieces of nothing": strings.ReplaceAll(plain, "<Piece ", `<Piece NumberOfPoints="0" NumberOfCells="0"/><Piece `),
	} {
		_, got := read(t, text)
		a := got.arrays[arrayKey{mesh.OnCell, `a <σ & "b' `}]
		if got.cells != 1 || !slices.Equal(got.nodes[0], []int32{0, 1, 2, 3}) || a == nil || a.values[0] != 7 {
			t.Errorf("%s: %d cells %v, arrays %v", name, got.cells, got.nodes, got.arrays)
		}
	}
	latin := strings.Replace(tetrahedron("", `<CellData><DataArray type="Int8" Name="gr`+"\xf6\xdf"+`e" format="ascii">1</DataArray></CellData>`), "<VTK", `<?xml version="1.0" encoding="ISO-8859-1"?><VTK`, 1)
	if _, got := read(t, latin); got.arrays[arrayKey{mesh.OnCell, "größe"}] == nil {
		t.Errorf("arrays %v, want größe", got.arrays)
	}
}

func TestXMLErrors(t *testing.T) {
	plain := tetrahedron("", cellData("s=1"))
	swap := func(old, new string) string {
		if !strings.Contains(plain, old) {
			t.Fatalf("no %q", old)
		}
		return strings.Replace(plain, old, new, 1)
	}
	for _, test := range []struct {
		text string
		line int
		kind error
		need string
	}{
		{swap("<VTKFile", "<!DOCTYPE x>\n<VTKFile"), 1, ErrUnsupported, "document types"},
		{swap("<Cells>", "<![CDATA[x]]><Cells>"), 3, ErrUnsupported, "CDATA"},
		{swap(`Name="s"`, `Name="&s;"`), 6, ErrMalformed, `entity "s"`},
		{swap(`Name="s"`, `Name="&#0;"`), 6, ErrMalformed, "entity"},
		{swap(`Name="s"`, `Name="&"`), 6, ErrMalformed, "&amp;"},
		{swap(`Name="s"`, `Name=s`), 6, ErrMalformed, "quotes"},
		{swap(`Name="s"`, `Name`), 6, ErrMalformed, "need name=\"value\""},
		{swap(`Name="s"`, `Name="s`), 6, ErrMalformed, ""},
		{swap("</CellData>", "</PointData>"), 6, ErrMalformed, "need the end of another element"},
		{swap("</VTKFile>", ""), 6, ErrTruncated, "VTKFile has no end"},
		{"</VTKFile>", 1, ErrMalformed, "end of another element"}, {"<a/>", 1, ErrMalformed, "need VTKFile"}, {"<!-- x", 1, ErrTruncated, ""}, {"<!-- x > ", 1, ErrTruncated, "-->"},
		{swap(`type="UnstructuredGrid"`, ``), 1, ErrMalformed, "no attribute type"},
		{swap(`version="1.0"`, `header_type="UInt16"`), 1, ErrMalformed, "header_type"},
		{swap(`version="1.0"`, `compressor="zip"`), 1, ErrUnsupported, "compressor"},
		{swap(`NumberOfCells="1"`, `NumberOfCells="2305843009213693952"`), 1, ErrMalformed, "fewer cells"},
		{swap("<Points>", "<Points2>"), 0, ErrMalformed, ""},
		{strings.NewReplacer("<Points>", "<P>", "</Points>", "</P>").Replace(plain), 1, ErrMalformed, "no array in an element Points"},
		{strings.NewReplacer("<Cells>", "<C>", "</Cells>", "</C>").Replace(plain), 1, ErrMalformed, "no element Cells"},
		{swap(`Name="types"`, `Name="kinds"`), 3, ErrMalformed, `array "types": found no such array`},
		{swap(`type="UInt8"`, `type="Float32"`), 5, ErrMalformed, "need whole numbers"},
		{swap(`type="Float64" NumberOfComponents="3"`, `type="Float64" NumberOfComponents="2"`), 2, ErrMalformed, "need numbers with 3 components"},
		{swap(`format="ascii">1<`, `format="binary">*<`), 6, ErrMalformed, ""},
		{swap(`format="ascii">1<`, `format="binary">AAAA<`), 6, ErrMalformed, ""},
		{swap(`format="ascii">1</DataArray>`, `format="appended" offset="0"/>`), 6, ErrMalformed, "no element AppendedData"},
		{swap(`format="ascii">1<`, `format="ascii"><`), 6, ErrTruncated, "need 8 bytes, found 0"},
		{swap("</VTKFile>", `<AppendedData encoding="hex">_</AppendedData></VTKFile>`), 6, ErrMalformed, "raw or base64"},
		{swap("<Piece", `<FieldData><DataArray type="Int32" Name="f" NumberOfTuples="-1" format="ascii">1</DataArray></FieldData><Piece`), 1, ErrMalformed, "NumberOfTuples"},
		{swap("<Piece", `<FieldData><DataArray type="Int32" Name="f" NumberOfTuples="9" format="ascii">1</DataArray></FieldData><Piece`), 1, ErrTruncated, "9 tuples"},
		{swap(`<UnstructuredGrid>`, `<UnstructuredGrid TimeValues="0 a">`), 1, ErrMalformed, "TimeValues"},
		{swap(">0 1 2 3<", ">0 1 2 4<"), 3, ErrMalformed, "cell 0: found point number 4, need 0 to 3"},
		{swap(">0 1 2 3<", ">0 1 2<"), 4, ErrMalformed, "connectivity has room for 3 entries"},
		{swap(`ascii">4<`, `ascii">-4<`), 4, ErrMalformed, "cell 0: found offset -4 after 0"},
		{swap(`ascii">4<`, `ascii">9000000000<`), 0, ErrUnsupported, "fewer than 2³¹"},
		{swap(`ascii">10<`, `ascii">14<`), 0, ErrMalformed, "cell 0: pyramid"},
	} {
		err := readError(test.text, Options{})
		place := new(Error)
		if !errors.As(err, &place) || !errors.Is(err, test.kind) && test.need != "" || !strings.Contains(err.Error(), test.need) {
			t.Errorf("%.200q:\n  error %v, want %v with %q", test.text, err, test.kind, test.need)
			continue
		}
		if test.line != 0 && place.Line != test.line {
			t.Errorf("%v: line %d, want %d", err, place.Line, test.line)
		}
	}
}

// Lies of the length words of appended arrays are found before anything is allocated.
func TestLengthWords(t *testing.T) {
	words := func(values ...uint32) (data []byte) {
		for _, value := range values {
			data = binary.LittleEndian.AppendUint32(data, value)
		}
		return data
	}
	for _, test := range []struct {
		compressor string
		data       []byte
		need       string
	}{
		{"", words(8, 0, 0), ""},
		{"", words(7, 0, 0), "need 8 bytes, found 7"},
		{"", words(0xffffffff, 0, 0), "4294967295 bytes of values by the length word"},
		{"", words(8, 0), "8 bytes of values by the length word"},
		{"", nil, "bytes needed here"},
		{"ZLib", words(0), "need 8 bytes, found 0"},
		{"ZLib", words(0, 0, 0), "need 8 bytes, found 0"},
		{"ZLib", words(1, 8, 0), "need a table"}, {"ZLib", words(1, 8), "bytes needed here"},
		{"ZLib", words(0x7fffffff, 8, 0, 4), "need a table"},
		{"ZLib", words(1, 0, 0, 4, 0), "need positive sizes"},
		{"ZLib", words(1, 8, 9, 4, 0), "the last no larger"},
		{"ZLib", words(1, 8, 0, 400, 0), "400 compressed bytes by its header"},
		{"ZLib", words(1, 0xffffffff, 0, 4, 0), "said to hold 4294967295 bytes"},
		{"LZ4", words(1, 0xffffffff, 0, 4, 0), "limit of 1073741824"},
		{"LZ4", words(1, 100000, 0, 4, 0), "said to hold 100000 bytes"},
		{"LZMA", words(1, 1<<28, 0, 4, 0), "said to hold 268435456 bytes"},
		{"LZMA", words(1, 8, 0, 4, 0), "compressed block 0 of 1"},
		{"ZLib", words(1, 8, 0, 4, 0x9c78), "compressed block 0 of 1"},
	} {
		for _, encoding := range []string{"raw", "base64"} {
			data := string(test.data)
			if encoding == "base64" {
				data = base64.StdEncoding.EncodeToString(test.data)
				if test.compressor != "" && len(test.data) > 16 {
					data = base64.StdEncoding.EncodeToString(test.data[:16]) + base64.StdEncoding.EncodeToString(test.data[16:])
				}
			}
			text := strings.Replace(tetrahedron("", `<CellData><DataArray type="Float64" Name="s" format="appended" offset="0"/></CellData>`),
				"</VTKFile>", fmt.Sprintf(`<AppendedData encoding=%q>_%s`, encoding, data), 1)
			if test.compressor != "" {
				text = strings.Replace(text, "version=", fmt.Sprintf(`compressor="vtk%sDataCompressor" version=`, test.compressor), 1)
			}
			var before, after runtime.MemStats
			runtime.ReadMemStats(&before)
			err := readError(text, Options{})
			runtime.ReadMemStats(&after)
			isRight := err != nil && strings.Contains(err.Error(), test.need)
			if encoding == "base64" { // the room in base64 is known in steps of three bytes
				isRight = err != nil
			}
			if test.need == "" && err == nil {
				isRight = true
			}
			if !isRight {
				t.Errorf("%s %s % x: error %v, want %q", test.compressor, encoding, test.data, err, test.need)
			}
			if grown := after.TotalAlloc - before.TotalAlloc; grown > 20<<20 {
				t.Errorf("%s %s % x: %d bytes", test.compressor, encoding, test.data, grown)
			}
		}
	}
}

func TestLimits(t *testing.T) {
	grid := newTestGrid(300)
	packed := string(grid.file(testCoding{form: "raw", compressor: "zlib", blockSize: 1000}))
	deep := "<VTKFile type=\"x\">" + strings.Repeat("<a>", 50)
	many := strings.Replace(tetrahedron("", ""), "<Cells>", strings.Repeat("<a/>", 2000)+"<Cells>", 1)
	pieces := strings.Replace(tetrahedron("", ""), "<Piece ", strings.Repeat(`<Piece NumberOfPoints="0" NumberOfCells="0"/>`, 30)+"<Piece ", 1)
	long := tetrahedron("", cellData(strings.Repeat("n", 5000)+"=1"))
	for _, test := range []struct {
		name, text string
		limits     Limits // breaks
		wide       Limits // lets it through
	}{
		{"decoded", packed, Limits{Decoded: 20_000}, Limits{Decoded: 200_000}},
		{"points", packed, Limits{Points: 1000}, Limits{Points: 1508}},
		{"markup", many, Limits{Markup: 100_000}, Limits{Markup: 500_000}},
		{"pieces", pieces, Limits{Pieces: 30}, Limits{Pieces: 31}},
		{"text", long, Limits{Text: 4000}, Limits{Text: 6000}},
		{"legacy text", strings.Replace(legacyTetrahedron, "title", strings.Repeat("t", 200_000), 1), Limits{Text: 4000}, Limits{}},
		{"legacy word", legacyTetrahedron + "CELL_DATA 1\nSCALARS " + strings.Repeat("t", 200_000) + " int\n1\n", Limits{Text: 4000}, Limits{}},
		{"legacy points", legacyTetrahedron, Limits{Points: 3}, Limits{Points: 4}},
		{"grid points", image("0 9 0 9 0 9", "", "0 9 0 9 0 9"), Limits{Points: 999}, Limits{Points: 1000}},
	} {
		err := readError(test.text, Options{Limits: test.limits})
		if place := new(Error); !errors.As(err, &place) || !errors.Is(err, ErrLimit) {
			t.Errorf("%s: %v, want a limit", test.name, err)
		}
		if err := readError(test.text, Options{Limits: test.wide}); err != nil {
			t.Errorf("%s with wider limits: %v", test.name, err)
		}
	}
	if err := readError(deep, Options{}); !errors.Is(err, ErrLimit) || !strings.Contains(err.Error(), "33 deep") {
		t.Errorf("nesting: %v", err)
	}
	if err := readError(deep, Options{Limits: Limits{Nesting: 60}}); !errors.Is(err, ErrTruncated) {
		t.Errorf("nesting with a wider limit: %v", err)
	}
}

// Many arrays, pieces, times and attributes take time in proportion to their number.
func TestManyOfEverything(t *testing.T) {
	const n = 20_000
	var arrays, times strings.Builder
	for i := range n {
		fmt.Fprintf(&arrays, `<DataArray type="Int8" Name="n%d" TimeStep="0 1 2" format="ascii">1</DataArray>`, i)
		fmt.Fprintf(&times, " %d", i)
	}
	text := strings.Replace(tetrahedron("<FieldData>"+arrays.String()+"</FieldData>", "<CellData>"+arrays.String()+"</CellData>"),
		"<UnstructuredGrid>", `<UnstructuredGrid TimeValues="`+times.String()+`">`, 1)
	text = strings.Replace(text, `TimeStep="0 1 2" `, "", -1)
	model, err := openBytes([]byte(text), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(model.Pieces[0].Arrays) != n || len(model.Fields) != n || len(model.Times) != n {
		t.Errorf("%d arrays, %d fields, %d times", len(model.Pieces[0].Arrays), len(model.Fields), len(model.Times))
	}
}
