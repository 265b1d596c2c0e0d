package readers

import (
	"bytes"
	"strconv"
	"strings"

	"strainledger/mesh"
)

// word returns the next word; at the end of the file "" and ends is set.
func (l *legacyFile) word() (string, error) {
	word, err := l.peek()
	l.ends = err == nil && word == ""
	l.window.at += len(word)
	return word, err
}

// peek returns the next word without passing it.
func (l *legacyFile) peek() (string, error) {
	if _, found, err := l.window.blanks(); err != nil || !found {
		return "", err
	}
	w := l.window
	for searched := 0; ; {
		text := w.buffer[w.at:]
		for searched < len(text) && text[searched] > ' ' {
			searched++
		}
		if int64(searched) > l.limits.Text {
			return "", w.fail(overLimit("found a word of more than %d bytes; need fewer than the limit for texts", l.limits.Text))
		}
		if searched < len(text) {
			return string(text[:searched]), nil
		}
		if more, err := w.more(); err != nil || !more {
			return string(text), err
		}
	}
}

// keyword returns the next word in capitals.
func (l *legacyFile) keyword() (string, error) {
	word, err := l.word()
	return strings.ToUpper(word), err
}

// name returns the next word as the name of an array.
func (l *legacyFile) name() (string, error) {
	word, err := l.word()
	if err == nil && l.ends {
		err = l.window.fail(truncated("found no name of an array"))
	}
	return decodePercent(word), err
}

// count returns the next word as a count.
func (l *legacyFile) count(what string) (int64, error) {
	word, err := l.word()
	if err != nil {
		return 0, err
	}
	value, err := strconv.ParseInt(word, 10, 64)
	switch {
	case l.ends:
		return 0, l.window.fail(truncated("found no number of %s", what))
	case err != nil || value < 0:
		return 0, l.window.fail(malformed("found %.40q, need a number of %s", word, what))
	}
	return value, nil
}

// line returns the rest of the line and moves behind it.
func (l *legacyFile) line() (string, error) {
	w := l.window
	if _, err := w.rest(); err != nil {
		return "", err
	}
	for searched := 0; ; {
		text := w.buffer[w.at:]
		length, isEnd := len(text), false
		if i := bytes.IndexByte(text[searched:], '\n'); i >= 0 {
			length, isEnd = searched+i, true
		}
		if int64(length) > l.limits.Text {
			return "", w.fail(overLimit("found a line of more than %d bytes; need fewer than the limit for texts", l.limits.Text))
		}
		if isEnd {
			w.at += length + 1
			return strings.TrimSuffix(string(text[:length]), "\r"), nil
		}
		searched = length
		if more, err := w.more(); err != nil {
			return "", err
		} else if !more {
			w.at += length
			return string(text), nil
		}
	}
}

// sameLine reports whether the next word stands in the line of the one before. The
// blanks between them are still in memory when peek has just been called.
func (l *legacyFile) sameLine() bool {
	w := l.window
	for i := w.at - 1; i >= 0 && w.buffer[i] <= ' '; i-- {
		if w.buffer[i] == '\n' {
			return false
		}
	}
	return true
}

// A legacyNumber is a number type of the legacy format. Long has 8 bytes or, from
// some systems, 4. The numbers that VTK keeps as its own integers take 4 bytes.
type legacyNumber struct {
	number number
	isLong bool
	isID   bool
}

var legacyNumbers = map[string]legacyNumber{
	"bit": {number: bitNumber}, "char": {number: int8Number}, "signed_char": {number: int8Number},
	"unsigned_char": {number: uint8Number}, "short": {number: int16Number}, "unsigned_short": {number: uint16Number},
	"int": {number: int32Number}, "unsigned_int": {number: uint32Number},
	"long": {number: int64Number, isLong: true}, "unsigned_long": {number: uint64Number, isLong: true},
	"vtktypeint8": {number: int8Number}, "vtktypeuint8": {number: uint8Number},
	"vtktypeint16": {number: int16Number}, "vtktypeuint16": {number: uint16Number},
	"vtktypeint32": {number: int32Number}, "vtktypeuint32": {number: uint32Number},
	"vtktypeint64": {number: int64Number}, "vtktypeuint64": {number: uint64Number},
	"vtktypefloat32": {number: float32Number}, "vtktypefloat64": {number: float64Number},
	"vtkidtype": {number: int32Number, isID: true}, "float": {number: float32Number}, "double": {number: float64Number},
	"string": {number: stringNumber}, "utf8_string": {number: stringNumber},
}

// numberType returns the next word as a number type.
func (l *legacyFile) numberType() (legacyNumber, error) {
	word, err := l.word()
	if err != nil {
		return legacyNumber{}, err
	}
	n, ok := legacyNumbers[strings.ToLower(word)]
	if !ok {
		return n, l.window.fail(unsupported("found the number type %.40q, need one of the legacy format (int, float, double ...)", word))
	}
	return n, nil
}

// array reads a type and passes over so many values of it.
func (l *legacyFile) array(name string, on mesh.Location, components, tuples int64) (*column, error) {
	n, err := l.numberType()
	if err != nil {
		return nil, err
	}
	a, err := l.typed(name, on, n, components, tuples)
	if err != nil {
		return nil, err
	}
	return a, l.trailing(a)
}

// typed passes over the values of an array. Where long may have two sizes, that is
// taken behind which a line ends or a keyword stands.
func (l *legacyFile) typed(name string, on mesh.Location, n legacyNumber, components, tuples int64) (*column, error) {
	if n.isID && !l.isBinary {
		n.number = int64Number
	}
	start := l.window.offset()
	a, err := l.values(name, on, n.number, components, tuples)
	if n.isLong && l.isBinary && tuples > 0 && (err != nil || !l.isBlockEnd()) {
		if err := l.window.jump(start); err != nil {
			return nil, err
		}
		short := int32Number
		if n.number == uint64Number {
			short = uint32Number
		}
		b, shortErr := l.values(name, on, short, components, tuples)
		if shortErr == nil && (err != nil || l.isBlockEnd()) {
			return b, nil
		}
		if err == nil {
			err = l.window.jump(a.start + a.length)
		}
	}
	if err == nil && n.isID {
		a.Type = int64Number.String()
	}
	return a, err
}

// isBlockEnd reports whether a block of values may end here: at the end of a line or of
// the file, or before a keyword.
func (l *legacyFile) isBlockEnd() bool {
	rest, err := l.window.rest()
	if err != nil || len(rest) == 0 {
		return err == nil
	}
	isLine := rest[0] == '\n' || rest[0] == '\r'
	word, err := l.peek()
	if err != nil {
		return false
	}
	isKeyword := legacyKeywords[strings.ToUpper(word)]
	for _, c := range []byte(word) {
		if c > '~' {
			return false
		}
	}
	return isLine && len(word) < 256 || isKeyword
}

// legacyKeywords are those that may follow an array of point or cell data.
var legacyKeywords = map[string]bool{
	"POINT_DATA": true, "CELL_DATA": true, "SCALARS": true, "VECTORS": true, "NORMALS": true, "TENSORS": true,
	"TENSORS6": true, "GLOBAL_IDS": true, "PEDIGREE_IDS": true, "EDGE_FLAGS": true, "TEXTURE_COORDINATES": true,
	"COLOR_SCALARS": true, "LOOKUP_TABLE": true, "FIELD": true, "METADATA": true,
}

// values passes over values and returns where they are.
func (l *legacyFile) values(name string, on mesh.Location, n number, components, tuples int64) (*column, error) {
	if components < 1 || components > 1<<31 || tuples > (1<<60)/components {
		return nil, l.window.fail(malformed("array %.40q: found %d tuples with %d components, need fewer", name, tuples, components))
	}
	a := &column{
		Array: mesh.Array{Name: name, On: on, Type: n.String(), Components: int(components), Tuples: tuples},
		file:  l.file, number: n, start: l.window.offset(), payload: payload{form: emptyForm},
	}
	count := tuples * components
	if count == 0 {
		return a, nil
	}
	switch {
	case n == stringNumber && l.isBinary:
		return a, l.binaryStrings(a, count)
	case n == stringNumber:
		return a, l.textStrings(a, count)
	case l.isBinary:
		return a, l.binaryValues(a, count)
	}
	return a, l.textValues(a, count)
}

// binaryValues passes over a run of bytes behind the end of the line.
func (l *legacyFile) binaryValues(a *column, count int64) error {
	if _, err := l.line(); err != nil {
		return err
	}
	bytes := count * a.number.size()
	if a.number == bitNumber {
		bytes = (count + 7) / 8
	}
	a.start = l.window.offset()
	if found := l.file.size - a.start; bytes > found {
		return a.fail(truncated("%d tuples with %s need %d bytes, found %d", a.Tuples, counted(a.Components, "component"), bytes, found))
	}
	plain := payload{form: plainForm, length: bytes, stored: stored{file: l.file, start: a.start}}
	if a.number == bitNumber {
		a.content = l.bytesOf(a, plain)
	} else {
		a.payload, a.bigEndian = plain, true
	}
	return l.window.jump(a.start + bytes)
}

// textValues passes over words and keeps the index that counting them makes.
func (l *legacyFile) textValues(a *column, count int64) error {
	if room := (l.file.size - a.start + 1) / 2; count > room {
		return a.fail(truncated("%d tuples with %s need %d values, found room for %d", a.Tuples, counted(a.Components, "component"), count, room))
	}
	text := newIndex(l.file, a.start, l.file.size, true)
	c := l.cursor
	page, before, found, err := text.page(&c.hand, room(&c.page, pageSize+1), count-1)
	if err != nil {
		return a.fail(err)
	}
	if !found {
		return a.fail(truncated("%d tuples with %s need %d values, found %d", a.Tuples, counted(a.Components, "component"), count, before))
	}
	words := &words{hand: &c.hand}
	if err := words.seek(text, page, before, count-1); err != nil {
		return a.fail(err)
	}
	if err := words.skip(1); err != nil {
		return a.fail(err)
	}
	text.end = words.offset
	if words := (payload{form: textForm, text: text}); a.number == bitNumber {
		a.content = l.bytesOf(a, words)
	} else {
		a.payload = words
	}
	return l.window.jump(words.offset)
}
