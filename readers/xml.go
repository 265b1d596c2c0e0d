package readers

import (
	"fmt"
	"strconv"
	"strings"
)

// An xmlFile is the header of one file of VTK's XML family.
type xmlFile struct {
	file       *file
	root       *element // VTKFile
	data       *element // the element of the data set
	kind       string   // of data set: the root's type
	version    int      // 100 × major + minor
	bigEndian  bool
	wordSize   int64 // bytes of the length words before the arrays
	compressor compressor
	limits     Limits
	cursor     *cursor // for what is read while the header is looked at

	hasAppended    bool
	appended       int64 // offset of the first byte of the appended arrays
	appendedBase64 bool
	step           string // TimeStep of the arrays that are taken; "" takes all
}

// format names the form of the file.
func (x *xmlFile) format() string {
	return fmt.Sprintf("VTK XML %d.%d, %s", x.version/100, x.version%100, x.kind)
}

// readXML reads the header: all elements with their attributes, no values.
func readXML(f *file, c *cursor, limits Limits) (*xmlFile, error) {
	x := &xmlFile{file: f, cursor: c, limits: limits}
	f.text = f.size
	m := &markup{window: newWindow(&c.hand, f), limits: limits}
	if _, err := m.window.rest(); err != nil {
		return nil, err
	}
	var stack []*element
	for {
		t, err := m.next()
		if err != nil {
			return nil, err
		}
		if t == nil {
			break
		}
		e := t.element
		if len(stack) > 0 && stack[len(stack)-1].end == 0 {
			stack[len(stack)-1].end = e.offset
		}
		if t.isEnd {
			if len(stack) == 0 || stack[len(stack)-1].name != e.name {
				return nil, m.window.fail(malformed("found </%.40s>, need the end of another element", e.name))
			}
			if stack = stack[:len(stack)-1]; len(stack) == 0 {
				break
			}
			continue
		}
		if len(stack) == 0 {
			if err := x.begin(e); err != nil {
				return nil, placedAt(f, e, err)
			}
		} else {
			if e.name == "AppendedData" && len(stack) == 1 {
				return x, x.append(e, m.window)
			}
			parent := stack[len(stack)-1]
			parent.children = append(parent.children, e)
		}
		if t.isEmpty {
			e.end = e.start
			continue
		}
		if stack = append(stack, e); len(stack) > limits.Nesting {
			return nil, placedAt(f, e, overLimit("found elements nested %d deep; need at most the limit of %d", len(stack), limits.Nesting))
		}
		if isArray(e) && e.attribute("format") == "binary" && !has(e, "offset") {
			if err := x.skip(e, m.window); err != nil {
				return nil, placedAt(f, e, err)
			}
		}
	}
	if len(stack) > 0 {
		return nil, m.window.fail(truncated("element %s has no end", stack[len(stack)-1].name))
	}
	if x.root == nil {
		return nil, f.fail(0, malformed("found no element, need VTKFile"))
	}
	return x, nil
}

func isArray(e *element) bool { return e.name == "DataArray" || e.name == "Array" }

func has(e *element, name string) bool {
	_, ok := e.get(name)
	return ok
}

// placedAt puts the place of an element to an error that has none.
func placedAt(f *file, e *element, err error) error {
	if _, ok := err.(*Error); ok || err == nil {
		return err
	}
	return f.fail(e.offset, err)
}

// begin takes what the root element says.
func (x *xmlFile) begin(e *element) error {
	if e.name != "VTKFile" {
		return malformed("found the element %.40q, need VTKFile", e.name)
	}
	x.root = e
	x.kind = e.attribute("type")
	if x.kind == "" {
		return malformed("element VTKFile: found no attribute type, need the kind of data set")
	}
	switch order := e.attribute("byte_order"); order {
	case "", "LittleEndian":
	case "BigEndian":
		x.bigEndian = true
	default:
		return attributeError(e, "byte_order", order, "LittleEndian or BigEndian")
	}
	switch words := e.attribute("header_type"); words {
	case "", "UInt32":
		x.wordSize = 4
	case "UInt64":
		x.wordSize = 8
	default:
		return attributeError(e, "header_type", words, "UInt32 or UInt64")
	}
	x.version = versionNumber(e.attribute("version"), 100)
	var err error
	x.compressor, err = compressorNamed(e.attribute("compressor"))
	return err
}

// versionNumber returns 100 × major + minor, or the given number for what is none.
func versionNumber(text string, unknown int) int {
	major, minor, _ := strings.Cut(text, ".")
	m, err := strconv.Atoi(major)
	if err != nil || m < 0 || m > 1000 {
		return unknown
	}
	n, err := strconv.Atoi(minor)
	if err != nil || n < 0 || n > 99 {
		n = 0
	}
	return 100*m + n
}

// append takes the place of the appended arrays: behind the underscore, which is the
// first byte that is no white space.
func (x *xmlFile) append(e *element, w *window) error {
	switch encoding := e.attribute("encoding"); encoding {
	case "", "base64":
		x.appendedBase64 = true
	case "raw":
	default:
		return placedAt(x.file, e, attributeError(e, "encoding", encoding, "raw or base64"))
	}
	c, found, err := w.blanks()
	if err != nil {
		return err
	}
	x.hasAppended = true
	x.appended = w.offset()
	x.file.text = x.appended
	if found && c == '_' {
		x.appended++
	}
	return nil
}

// count returns an attribute that counts something.
func count(e *element, name string) (int64, error) {
	text, ok := e.get(name)
	if !ok {
		return 0, malformed("element %s: found no attribute %s, need a count", e.name, name)
	}
	value, err := strconv.ParseInt(strings.TrimSpace(text), 10, 64)
	if err != nil || value < 0 {
		return 0, attributeError(e, name, text, "a count")
	}
	return value, nil
}
