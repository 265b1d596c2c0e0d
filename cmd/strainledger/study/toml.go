package study

import (
	"bytes"
	"errors"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// byteOrderMark is written at the start of UTF-8 files by some editors.
const byteOrderMark = "\ufeff"

// parse turns the text of a study file into a tree. It returns nil where the text is
// no TOML; keys given twice are faults that leave the tree whole.
func parse(data []byte, to *faults) *node {
	data = bytes.TrimPrefix(data, []byte(byteOrderMark))
	builder := builder{data: data, faults: to, root: &node{shape: isTable}, lineStarts: lineStarts(data)}
	if !utf8.Valid(data) {
		to.add(builder.placeOf(firstInvalid(data)), "not UTF-8; save the study file as UTF-8 text")
		return nil
	}
	builder.table = builder.root
	builder.parser.Reset(data)
	for builder.parser.NextExpression() {
		builder.expression(builder.parser.Expression())
	}
	if err := builder.parser.Error(); err != nil {
		builder.refuse(err)
		return nil
	}
	if len(to.found) > 0 {
		return builder.root
	}
	// The walk above knows places, the decoder knows the rest of the language: dates
	// that do not exist, numbers too large, tables opened in ways TOML forbids.
	if err := toml.Unmarshal(data, new(map[string]any)); err != nil {
		builder.refuse(err)
		return nil
	}
	return builder.root
}

// firstInvalid returns the offset of the first byte that is not UTF-8.
func firstInvalid(data []byte) int {
	offset := 0
	for offset < len(data) {
		r, size := utf8.DecodeRune(data[offset:])
		if r == utf8.RuneError && size == 1 {
			break
		}
		offset += size
	}
	return offset
}

// lineStarts returns the offset of every line.
func lineStarts(data []byte) []int {
	starts := []int{0}
	for i, b := range data {
		if b == '\n' {
			starts = append(starts, i+1)
		}
	}
	return starts
}

// A builder grows the tree, expression by expression.
type builder struct {
	data       []byte
	parser     unstable.Parser
	faults     *faults
	root       *node
	table      *node // the table that the last header opened
	lineStarts []int
}

// placeOf returns line and column of an offset, the column in characters. The parser
// may point into the middle of one.
func (b *builder) placeOf(offset int) place {
	for offset > 0 && offset < len(b.data) && !utf8.RuneStart(b.data[offset]) {
		offset--
	}
	low, high := 0, len(b.lineStarts)
	for high-low > 1 {
		if middle := (low + high) / 2; b.lineStarts[middle] <= offset {
			low = middle
		} else {
			high = middle
		}
	}
	start := b.lineStarts[low]
	return place{line: low + 1, column: utf8.RuneCount(b.data[start:offset]) + 1}
}

// refuse reports text that is not TOML.
func (b *builder) refuse(err error) {
	at, message := place{line: 1, column: 1}, strings.TrimPrefix(err.Error(), "toml: ")
	var syntax *unstable.ParserError
	var decode *toml.DecodeError
	switch {
	case errors.As(err, &syntax):
		at = b.placeOf(cap(b.data) - cap(syntax.Highlight))
	case errors.As(err, &decode):
		line, column := decode.Position()
		at = b.placeOf(min(b.lineStarts[min(line, len(b.lineStarts))-1]+column-1, len(b.data)))
	}
	b.faults.add(at, "this is not TOML: %s; mend the line, texts stand in quotes", message)
}

// expression adds one header or one line key = value to the tree.
func (b *builder) expression(expression *unstable.Node) {
	switch expression.Kind {
	case unstable.KeyValue:
		b.keyValue(b.table, expression)
	case unstable.Table, unstable.ArrayTable:
		path := b.keyPath(expression.Key())
		last := path[len(path)-1]
		parent := b.descend(b.root, path[:len(path)-1])
		if expression.Kind == unstable.Table {
			b.table = b.open(parent, last)
		} else {
			b.table = b.openNext(parent, last)
		}
	}
}

// keyPath returns an empty node for each part of a dotted key.
func (b *builder) keyPath(keys unstable.Iterator) []*node {
	var path []*node
	for keys.Next() {
		key := keys.Node()
		path = append(path, &node{name: string(key.Data), place: b.placeOf(int(key.Raw.Offset)), shape: isTable})
	}
	return path
}

// descend follows a path from a table, creating the tables that are missing. Where
// the path leads through something else, that is a fault, and a table that belongs
// to nothing is returned.
func (b *builder) descend(from *node, path []*node) *node {
	for _, part := range path {
		found := from.child(part.name)
		switch {
		case found == nil:
			from.put(part)
			from = part
		case found.shape == isTable:
			from = found
		case found.headed: // [[...]]: the path goes into its last table
			from = found.items[len(found.items)-1]
		default:
			b.faults.add(part.place, "%s is %s on line %d and cannot hold other keys; rename one of the two",
				quote(part.name), found, found.place.line)
			return &node{shape: isTable}
		}
	}
	return from
}

// open adds the table of a header [name].
func (b *builder) open(parent, table *node) *node {
	found := parent.child(table.name)
	switch {
	case found == nil:
		parent.put(table)
	case found.shape == isTable && !found.headed:
		table = found
	default:
		b.twice(table, found)
		if found.shape != isTable {
			return table
		}
		table = found
	}
	table.headed = true
	return table
}

// openNext adds one table of a header [[name]].
func (b *builder) openNext(parent, table *node) *node {
	list := parent.child(table.name)
	switch {
	case list == nil:
		list = &node{name: table.name, place: table.place, shape: isList, headed: true}
		parent.put(list)
	case list.shape != isList || !list.headed:
		b.twice(table, list)
		return table
	}
	list.items = append(list.items, table)
	return table
}

// keyValue adds one key = value to a table.
func (b *builder) keyValue(table *node, line *unstable.Node) {
	path := b.keyPath(line.Key())
	last := path[len(path)-1]
	table = b.descend(table, path[:len(path)-1])
	value := b.value(line.Value(), last.place)
	value.name = last.name
	if found := table.child(last.name); found != nil {
		b.twice(last, found)
		return
	}
	table.put(value)
}

func (b *builder) twice(again, first *node) {
	b.faults.add(again.place, "%s was given before, on line %d; remove one of the two", quote(again.name), first.place.line)
}

// value turns one value into a node that stands where its key stands; values of a
// list stand where they are written.
func (b *builder) value(value *unstable.Node, at place) *node {
	to := &node{place: at, text: string(value.Data)}
	switch value.Kind {
	case unstable.String:
		to.shape = isText
	case unstable.Bool:
		to.shape, to.truth = isTruth, to.text == "true"
	case unstable.Integer:
		to.shape, to.number = isWhole, wholeNumber(to.text)
	case unstable.Float:
		to.shape, to.number = isNumber, number(to.text)
	case unstable.Array:
		to.shape = isList
		for items := value.Children(); items.Next(); {
			item := items.Node()
			itemPlace := at
			if item.Raw.Length > 0 {
				itemPlace = b.placeOf(int(item.Raw.Offset))
			}
			to.items = append(to.items, b.value(item, itemPlace))
		}
	case unstable.InlineTable:
		to.shape = isTable
		for lines := value.Children(); lines.Next(); {
			b.keyValue(to, lines.Node())
		}
		to.headed = true // closed: no header adds to it
	default:
		to.shape = isDate
	}
	return to
}

// wholeNumber reads an integer as TOML writes it; NaN where it is too large, which
// the decoder refuses.
func wholeNumber(text string) float64 {
	value, err := strconv.ParseInt(strings.TrimPrefix(text, "+"), 0, 64)
	if err != nil {
		return math.NaN()
	}
	return float64(value)
}

// number reads a floating-point number as TOML writes it; NaN also for the signed nan
// that Go does not read, and for one too large, which the decoder refuses.
func number(text string) float64 {
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return math.NaN()
	}
	return value
}
