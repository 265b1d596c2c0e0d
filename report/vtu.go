package report

import (
	"context"
	"fmt"
	"io"
	"math"
	"strings"
	"unicode/utf8"

	"strainledger/mesh"
)

// A vtuArray is an array of a file that is written, and how its bytes are had: the
// function fills a slice from byte at on, with the cursor of the worker that calls it.
type vtuArray struct {
	mesh.Array
	read func(ctx context.Context, cursor mesh.Cursor, at int64, to []byte) error
}

// A vtuPiece is a piece of an unstructured grid.
type vtuPiece struct {
	pointCount, cellCount int64
	pointData, cellData   []vtuArray
	points                vtuArray
	cells                 []vtuArray // connectivity, offsets, types and, of polyhedra, faces and faceoffsets
}

// A vtuFile is an unstructured grid as it is written: VTK's XML format with appended
// raw arrays in zlib blocks. The words before arrays are UInt64, and the low byte of
// everything stands first.
type vtuFile struct {
	version string
	fields  []vtuArray
	pieces  []vtuPiece
}

// The versions of files. Lagrange and Bézier hexahedra in today's order of edges, and
// ghost marks by today's name, need the second; other readers know the first alone.
const (
	plainVersion = "1.0"
	laterVersion = "2.2"
)

// arrays lists all arrays in the order in which they are appended.
func (f *vtuFile) arrays() []*vtuArray {
	var arrays []*vtuArray
	add := func(list []vtuArray) {
		for i := range list {
			arrays = append(arrays, &list[i])
		}
	}
	add(f.fields)
	for i := range f.pieces {
		piece := &f.pieces[i]
		add(piece.pointData)
		add(piece.cellData)
		arrays = append(arrays, &piece.points)
		add(piece.cells)
	}
	return arrays
}

// write writes the file with several workers, each with a cursor of its own. The bytes
// do not depend on their number.
func (f *vtuFile) write(ctx context.Context, to io.WriterAt, workers int, open func() mesh.Cursor) error {
	arrays := f.arrays()
	offsets := make([]int64, len(arrays))
	for i := range offsets {
		offsets[i] = math.MaxInt64 // takes the most room
	}
	// Offsets are known when all arrays are written. White space stands where the
	// header turns out shorter, before the underscore that begins the arrays.
	room := len(f.header(offsets))
	end, err := appendArrays(ctx, to, int64(room)+1, arrays, offsets, workers, open)
	if err != nil {
		return err
	}
	header := f.header(offsets)
	header += strings.Repeat(" ", room-len(header)) + "_"
	if _, err := to.WriteAt([]byte(header), 0); err != nil {
		return err
	}
	_, err = to.WriteAt([]byte("\n</AppendedData>\n</VTKFile>\n"), end)
	return err
}

// header returns the file's text before the arrays.
func (f *vtuFile) header(offsets []int64) string {
	var text strings.Builder
	text.WriteString(vtkFile("UnstructuredGrid", f.version, ` compressor="vtkZLibDataCompressor"`) + "<UnstructuredGrid>\n")
	element := func(name, attributes string, list []vtuArray) {
		fmt.Fprintf(&text, "<%s%s>\n", name, attributes)
		for i := range list {
			list[i].element(&text, name == "FieldData", offsets[0])
			offsets = offsets[1:]
		}
		fmt.Fprintf(&text, "</%s>\n", name)
	}
	if len(f.fields) > 0 {
		element("FieldData", "", f.fields)
	}
	for i := range f.pieces {
		piece := &f.pieces[i]
		fmt.Fprintf(&text, "<Piece NumberOfPoints=\"%d\" NumberOfCells=\"%d\">\n", piece.pointCount, piece.cellCount)
		element("PointData", marks(piece.pointData), piece.pointData)
		element("CellData", marks(piece.cellData), piece.cellData)
		element("Points", "", []vtuArray{piece.points})
		element("Cells", "", piece.cells)
		text.WriteString("</Piece>\n")
	}
	text.WriteString("</UnstructuredGrid>\n<AppendedData encoding=\"raw\">\n")
	return text.String()
}

// element writes the element of an array, which of a field says how many tuples it has.
func (a *vtuArray) element(to *strings.Builder, isField bool, offset int64) {
	name := "DataArray"
	if a.Type == "String" {
		name = "Array"
	}
	tuples := ""
	if isField {
		tuples = fmt.Sprintf(" NumberOfTuples=\"%d\"", a.Tuples)
	}
	fmt.Fprintf(to, "<%s%s%s format=\"appended\" offset=\"%d\"", name, describe(&a.Array), tuples, offset)
	if a.Information == "" {
		to.WriteString("/>\n")
		return
	}
	fmt.Fprintf(to, ">\n%s</%s>\n", a.Information, name)
}

// vtkFile returns the beginning of a file with its root element.
func vtkFile(kind, version, more string) string {
	return fmt.Sprintf("<VTKFile type=%q version=%q byte_order=\"LittleEndian\" header_type=\"UInt64\"%s>\n", kind, version, more)
}

// describe returns the attributes of an array's element: type, name and components.
func describe(a *mesh.Array) string {
	var text strings.Builder
	fmt.Fprintf(&text, " type=%q Name=\"%s\" NumberOfComponents=\"%d\"", a.Type, escape(a.Name), a.Components)
	for i, name := range a.ComponentNames {
		if name != "" {
			fmt.Fprintf(&text, " ComponentName%d=\"%s\"", i, escape(name))
		}
	}
	return text.String()
}

// marks returns the attributes of point or cell data that name arrays: Scalars, Tensors,
// GlobalIds ... Of several arrays with one mark it is the first.
func marks(arrays []vtuArray) string {
	var text strings.Builder
	given := map[string]bool{}
	for i := range arrays {
		for _, attribute := range arrays[i].Attributes {
			if !given[attribute] {
				given[attribute] = true
				fmt.Fprintf(&text, " %s=\"%s\"", attribute, escape(arrays[i].Name))
			}
		}
	}
	return text.String()
}

// escape writes text into an attribute. What XML has no room for, control characters
// and bytes that are no UTF-8, becomes a percent sign and two hexadecimal digits.
func escape(text string) string {
	var escaped strings.Builder
	for i := 0; i < len(text); {
		character, size := utf8.DecodeRuneInString(text[i:])
		switch {
		case character == '<':
			escaped.WriteString("&lt;")
		case character == '>':
			escaped.WriteString("&gt;")
		case character == '&':
			escaped.WriteString("&amp;")
		case character == '"':
			escaped.WriteString("&quot;")
		case character == '\t' || character == '\n' || character == '\r':
			fmt.Fprintf(&escaped, "&#%d;", character)
		case character < ' ' || character == utf8.RuneError && size == 1:
			fmt.Fprintf(&escaped, "%%%02X", text[i])
		case character == 0xfffe || character == 0xffff:
			fmt.Fprintf(&escaped, "%%%02X%%%02X%%%02X", text[i], text[i+1], text[i+2])
		default:
			escaped.WriteString(text[i : i+size])
		}
		i += size
	}
	return escaped.String()
}
