package readers

import (
	"strings"

	"strainledger/mesh"
)

// A stringList is the strings of a legacy file: one in each line with percent signs
// before codes, or each behind its length. What is read of it is their bytes with a
// zero behind each.
type stringList struct {
	file     *file
	start    int64
	isBinary bool
	limits   Limits
}

// A stringPlace is where the reading of a list has stopped.
type stringPlace struct {
	list   *stringList
	offset int64 // of a string in the file
	at     int64 // bytes of the strings before it
	lines  *legacyFile
}

// head reads the length before a string of a binary file: 1, 2, 4 or 8 bytes, which
// the top two bits of the first byte tell. It returns how many, and the length.
func (l *stringList) head(h *hand, offset int64) (size int64, length uint64, err error) {
	var head [8]byte
	if err := h.readAt(l.file, head[:1], offset); err != nil {
		return 0, 0, err
	}
	size = int64(8) >> (head[0] >> 6)
	head[0] = 0
	if err := h.readAt(l.file, head[8-size:], offset); err != nil {
		return 0, 0, err
	}
	head[8-size] &= 0x3f
	return size, word(head[:], 8, true), nil
}

// read fills to with the bytes from low on. The whole list has been gone through when
// the file was opened, so that there are as many.
func (l *stringList) read(h *hand, place *stringPlace, to []byte, low int64) error {
	if place.list != l || low < place.at {
		*place = stringPlace{list: l, offset: l.start, lines: place.lines}
	}
	for len(to) > 0 {
		taken, next, length, err := l.part(h, place, to, low-place.at)
		if err != nil {
			return err
		}
		to, low = to[taken:], low+int64(taken)
		if len(to) > 0 {
			place.offset, place.at = next, place.at+length
		}
	}
	return nil
}

// part writes what the string at the place holds from byte skip on, and its zero. It
// returns how many bytes that were, where the next string stands, and the string's
// length with its zero.
func (l *stringList) part(h *hand, place *stringPlace, to []byte, skip int64) (taken int, next, length int64, err error) {
	if !l.isBinary {
		line, next, err := l.line(h, place)
		if err != nil {
			return 0, 0, 0, err
		}
		line += "\x00"
		return copy(to, line[min(skip, int64(len(line))):]), next, int64(len(line)), nil
	}
	size, bytes, err := l.head(h, place.offset)
	if err != nil {
		return 0, 0, 0, err
	}
	body, length := place.offset+size, int64(bytes)+1
	if skip >= length {
		return 0, body + int64(bytes), length, nil
	}
	taken = int(min(int64(bytes)-skip, int64(len(to))))
	if err := h.readAt(l.file, to[:taken], body+skip); err != nil {
		return 0, 0, 0, err
	}
	if taken < len(to) {
		to[taken] = 0
		taken++
	}
	return taken, body + int64(bytes), length, nil
}

// line reads the line at the place and returns where the next begins.
func (l *stringList) line(h *hand, place *stringPlace) (string, int64, error) {
	if place.lines == nil || place.lines.file != l.file {
		place.lines = &legacyFile{file: l.file, window: newWindow(h, l.file), limits: l.limits}
	}
	if err := place.lines.window.jump(place.offset); err != nil {
		return "", 0, err
	}
	text, err := place.lines.line()
	return decodePercent(text), place.lines.window.offset(), err
}

// bytesOf returns the bytes of bits or strings as a column.
func (l *legacyFile) bytesOf(a *column, p payload) *column {
	return &column{
		Array: mesh.Array{Name: a.Name, On: a.On, Type: "UInt8", Components: 1, Tuples: p.length},
		file:  l.file, number: uint8Number, start: a.start, payload: p,
	}
}

// textStrings passes over one line for each string.
func (l *legacyFile) textStrings(a *column, count int64) error {
	if _, err := l.line(); err != nil {
		return err
	}
	if found := l.file.size - l.window.offset(); count > found+1 {
		return a.fail(truncated("%d strings needed, found %d bytes", count, found))
	}
	list := &stringList{file: l.file, start: l.window.offset(), limits: l.limits}
	length := int64(0)
	for range count {
		line, err := l.line()
		if err != nil {
			return err
		}
		text := decodePercent(line)
		length += int64(len(text)) + 1
		l.keepText(a, text)
	}
	a.content = l.bytesOf(a, payload{form: stringForm, length: length, strings: list})
	return nil
}

// keepText notes a string of a field array, of long ones the first.
func (l *legacyFile) keepText(a *column, text string) {
	if a.On == mesh.OnField && l.textBytes+int64(len(text)) <= l.limits.Text {
		l.textBytes += int64(len(text)) + 16
		l.texts[a] = append(l.texts[a], strings.ToValidUTF8(text, "\ufffd"))
	}
}

// binaryStrings passes over strings, each behind its length.
func (l *legacyFile) binaryStrings(a *column, count int64) error {
	if _, err := l.line(); err != nil {
		return err
	}
	offset := l.window.offset()
	if found := l.file.size - offset; count > found {
		return a.fail(truncated("%d strings needed, found %d bytes", count, found))
	}
	list := &stringList{file: l.file, start: offset, isBinary: true, limits: l.limits}
	total := int64(0)
	for i := range count {
		size, length, err := list.head(&l.cursor.hand, offset)
		if err != nil {
			return a.fail(err)
		}
		offset += size
		if found := l.file.size - offset; length > uint64(found) {
			return a.fail(truncated("string %d of %d has %d bytes by its length, found %d", i, count, length, found))
		}
		if a.On == mesh.OnField && int64(length) <= l.limits.Text {
			text := make([]byte, length)
			if err := l.cursor.hand.readAt(l.file, text, offset); err != nil {
				return a.fail(err)
			}
			l.keepText(a, string(text))
		}
		offset += int64(length)
		total += int64(length) + 1
	}
	a.content = l.bytesOf(a, payload{form: stringForm, length: total, strings: list})
	return l.window.jump(offset)
}
