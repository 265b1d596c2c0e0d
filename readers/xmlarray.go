package readers

import (
	"bytes"
	"math"
	"strconv"
	"strings"

	"strainledger/mesh"
)

// skip jumps over values in base64, whose length their own first bytes tell, so that
// they need not be looked at. Where no tag follows there, the text is searched for
// one: somebody has wrapped it into lines.
func (x *xmlFile) skip(e *element, w *window) error {
	if _, _, err := w.blanks(); err != nil {
		return err
	}
	start := w.offset()
	p, length, err := x.binary(start, x.file.size, true, nil)
	if err == nil && p.form == blockForm {
		if err = p.blocks.load(x.cursor); err == nil {
			length += encodedLength(p.blocks.ends[p.blocks.count])
		}
	}
	if err == nil && length <= x.file.size-start {
		if err := w.jump(start + length); err != nil {
			return err
		}
		isEnd, err := w.ends(e.name)
		if err != nil {
			return err
		}
		if isEnd {
			e.payload = p
			return nil
		}
	}
	if err := w.jump(start); err != nil {
		return err
	}
	if found, err := w.find('<'); err != nil || !found {
		return placedAt(x.file, e, truncated("values of the array have no end"))
	}
	end := w.offset()
	e.payload, _, err = x.binary(start, end, true, newIndex(x.file, start, end, false))
	if place, ok := err.(*Error); ok && place.Array == "" {
		place.Array = e.attribute("Name")
	}
	return err
}

// ends reports whether the end tag of an element or the start of an information key
// comes next.
func (w *window) ends(name string) (bool, error) {
	if _, _, err := w.blanks(); err != nil {
		return false, err
	}
	for _, mark := range []string{"</" + name, "<InformationKey"} {
		if len(w.buffer)-w.at < len(mark) {
			if _, err := w.more(); err != nil {
				return false, err
			}
		}
		if bytes.HasPrefix(w.buffer[w.at:], []byte(mark)) {
			return true, nil
		}
	}
	return false, nil
}

// binary takes apart the length words of an array in binary form that begins at
// start and ends before stop. It also returns the length in characters, of compressed
// blocks that of their table alone.
func (x *xmlFile) binary(start, stop int64, isBase64 bool, wrapped *index) (*payload, int64, error) {
	run := stored{file: x.file, start: start, isBase64: isBase64, wrapped: wrapped}
	available := stop - start
	if isBase64 {
		available = available / 4 * 3
	}
	words := make([]byte, 3*x.wordSize)
	if err := run.read(x.cursor, words[:x.wordSize], 0); err != nil {
		return nil, 0, err
	}
	first := word(words, x.wordSize, x.bigEndian)
	if x.compressor == 0 {
		return x.plain(run, first, available)
	}
	if first == 0 {
		return &payload{form: emptyForm}, encodedLength(3 * x.wordSize), nil
	}
	if err := run.read(x.cursor, words, 0); err != nil {
		return nil, 0, err
	}
	if first > uint64(max(0, available/x.wordSize-3)) {
		return nil, 0, x.file.fail(start, truncated("%d compressed blocks need a table of as many words, found %d bytes", first, available))
	}
	b := &blocks{
		compressor: x.compressor, wordSize: x.wordSize, bigEndian: x.bigEndian, count: int64(first),
		size:  int64(word(words[x.wordSize:], x.wordSize, x.bigEndian)),
		last:  int64(word(words[2*x.wordSize:], x.wordSize, x.bigEndian)),
		table: run, body: run,
	}
	if b.last == 0 {
		b.last = b.size
	}
	head := (3 + b.count) * x.wordSize
	b.table.shift = 3 * x.wordSize
	b.room = available - head
	length := head
	if isBase64 {
		length = encodedLength(head)
		b.body.before = length
	} else {
		b.body.shift = head
	}
	if err := b.check(x.limits); err != nil {
		return nil, 0, x.file.fail(start, err)
	}
	return &payload{form: blockForm, length: b.total(), blocks: b}, length, nil
}

// plain takes apart an array that is not compressed. Its length word stands in one
// run of base64 with the values, or in one of its own, which its padding tells.
func (x *xmlFile) plain(run stored, length uint64, available int64) (*payload, int64, error) {
	if length > math.MaxInt64 || int64(length) > available-x.wordSize+2 {
		return nil, 0, x.file.fail(run.start, truncated("%d bytes of values by the length word, found at most %d to the end", length, max(0, available-x.wordSize)))
	}
	p := &payload{form: plainForm, length: int64(length), stored: run}
	p.stored.shift = x.wordSize
	if !run.isBase64 {
		return p, x.wordSize + p.length, nil
	}
	alone := encodedLength(x.wordSize)
	if p.length > 0 {
		text, err := run.characters(x.cursor, 0, int(alone))
		if err != nil {
			return nil, 0, err
		}
		padding := x.wordSize%3 ^ 3 // one for 8 bytes, two for 4
		if text[alone-1] == '=' && (padding == 1 || text[alone-2] == '=') {
			p.stored.before, p.stored.shift = alone, 0
			return p, alone + encodedLength(p.length), nil
		}
	}
	return p, encodedLength(x.wordSize + p.length), nil
}

// column returns the description of an array element.
func (x *xmlFile) column(e *element, on mesh.Location) (*column, error) {
	a := &column{
		Array: mesh.Array{Name: e.attribute("Name"), On: on, Components: 1},
		file:  x.file, start: e.start,
	}
	err := x.fill(a, e)
	if err != nil {
		if place, ok := err.(*Error); ok {
			if place.Array == "" {
				place.Array = a.Name
			}
			return nil, err
		}
		return nil, &Error{Path: x.file.path, Offset: e.offset, Array: a.Name, Err: err, file: x.file}
	}
	return a, nil
}

func (x *xmlFile) fill(a *column, e *element) error {
	a.Type = e.attribute("type")
	if a.number = numberNamed(a.Type); a.number == 0 {
		return unsupported("found the number type %.40q, need Int8 to UInt64, Float32, Float64, Bit or String", a.Type)
	}
	if text, ok := e.get("NumberOfComponents"); ok {
		components, err := strconv.ParseInt(strings.TrimSpace(text), 10, 32)
		if err != nil || components < 0 {
			return attributeError(e, "NumberOfComponents", text, "a whole number")
		}
		a.Components = max(1, int(components))
	}
	a.ComponentNames = componentNames(e, a.Components)
	a.Information = x.information(e)
	if a.number == bitNumber || a.number == stringNumber {
		return x.placeContent(a, e)
	}
	return x.place(a, e)
}

// placeContent finds the bytes of bits and strings.
func (x *xmlFile) placeContent(a *column, e *element) error {
	a.form = emptyForm
	number := uint8Number
	if a.number == stringNumber {
		number = int8Number // as text, bytes above 127 are negative
	}
	a.content = &column{
		Array: mesh.Array{Name: a.Name, On: a.On, Type: number.String(), Components: 1},
		file:  a.file, number: number, start: a.start,
	}
	err := x.place(a.content, e)
	if err == nil && a.number == stringNumber {
		a.content.Tuples, err = a.content.countTuples(x.cursor)
	}
	return err
}

// place finds the values of an array.
func (x *xmlFile) place(a *column, e *element) error {
	text, isAppended := e.get("offset")
	switch {
	case isAppended || e.attribute("format") == "appended":
		offset, err := strconv.ParseInt(strings.TrimSpace(text), 10, 64)
		if err != nil || offset < 0 {
			return attributeError(e, "offset", text, "bytes from the start of the appended data")
		}
		if !x.hasAppended {
			return malformed("values are appended, found no element AppendedData")
		}
		if offset > x.file.size-x.appended {
			return truncated("values begin at byte %d of the appended data, found %d bytes", offset, x.file.size-x.appended)
		}
		p, _, err := x.binary(x.appended+offset, x.file.size, x.appendedBase64, nil)
		if err != nil {
			return err
		}
		a.payload, a.bigEndian, a.start = *p, x.bigEndian, x.appended+offset
	case e.payload != nil:
		a.payload, a.bigEndian = *e.payload, x.bigEndian
	case e.start == e.end:
		a.form = emptyForm
	default:
		a.payload = payload{form: textForm, text: newIndex(x.file, e.start, e.end, true)}
	}
	return nil
}

// componentNames returns the names of components, nil when there are none.
func componentNames(e *element, components int) []string {
	var names []string
	for _, attribute := range e.attributes {
		digits, ok := strings.CutPrefix(attribute.name, "ComponentName")
		i, err := strconv.Atoi(digits)
		if !ok || err != nil || i < 0 || i >= components || i > 1000 {
			continue
		}
		for len(names) <= i {
			names = append(names, "")
		}
		names[i] = attribute.value
	}
	for names != nil && len(names) < min(components, 1000) {
		names = append(names, "")
	}
	return names
}

// isSelected reports whether the array belongs to the state that is read.
func (x *xmlFile) isSelected(e *element) bool {
	steps, ok := e.get("TimeStep")
	if !ok || x.step == "" {
		return true
	}
	for _, step := range strings.Fields(steps) {
		if step == x.step {
			return true
		}
	}
	return false
}

// columns returns the arrays of an element, which must hold so many tuples each.
func (x *xmlFile) columns(e *element, on mesh.Location, tuples int64) ([]*column, error) {
	var columns []*column
	for i, child := range e.arrays() {
		if !x.isSelected(child) {
			continue
		}
		a, err := x.column(child, on)
		if err != nil {
			return nil, err
		}
		if !has(child, "Name") {
			a.Name = "array " + strconv.Itoa(i)
		}
		if err := a.need(tuples, on.String()+"s"); err != nil {
			return nil, err
		}
		columns = append(columns, a)
	}
	return columns, nil
}
