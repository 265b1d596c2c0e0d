package readers

import (
	"fmt"
	"math"
	"unsafe"

	"strainledger/mesh"
)

// A form is the way in which the bytes of an array are kept in its file.
type form uint8

const (
	plainForm  form = iota + 1 // one run of bytes
	blockForm                  // compressed blocks
	textForm                   // numbers in words
	emptyForm                  // no values
	stringForm                 // strings of a legacy file
)

// A column is one array of a file: what it holds and where it stands. It is shared
// by all workers.
type column struct {
	mesh.Array
	number    number
	bigEndian bool
	file      *file
	start     int64   // where its values begin in the file
	isLevel   bool    // ghost levels of old files: above 0 means duplicate
	isColour  bool    // text of 0 to 1 for bytes of 0 to 255
	perCell   int64   // of a field array: tuples for each cell of the file
	content   *column // of bits and strings: their bytes, in text one number for each bit
	payload
	slot int // position among the kept buffers of a cursor
}

// coding says how the file keeps the array.
func (a *column) coding() string {
	switch {
	case a.content != nil:
		return a.content.coding()
	case a.form == textForm, a.form == stringForm && !a.strings.isBinary:
		return "ascii"
	case a.form == blockForm:
		return [...]string{zlibBlocks: "zlib", lz4Blocks: "LZ4", lzmaBlocks: "LZMA"}[a.blocks.compressor]
	case a.form == plainForm && a.stored.isBase64:
		return "base64"
	case a.form == plainForm, a.form == stringForm:
		return "raw"
	}
	return ""
}

// A payload is where the values of an array are and how they are kept.
type payload struct {
	form    form
	length  int64       // bytes that are there, decoded; of text unknown
	stored  stored      // plainForm
	blocks  *blocks     // blockForm
	text    *index      // textForm
	strings *stringList // stringForm
}

// width returns the bytes of one tuple.
func (a *column) width() int64 { return a.number.size() * int64(a.Components) }

// fail puts the array's name and place to an error.
func (a *column) fail(err error) error {
	if place, ok := err.(*Error); ok {
		if place.Array == "" {
			place.Array = a.Name
		}
		return err
	}
	return &Error{Path: a.file.path, Offset: a.start, Array: a.Name, Err: err, file: a.file}
}

// need checks that the array holds as many tuples as its place demands, before
// anything is read from it or allocated for it.
func (a *column) need(tuples int64, what string) error {
	if a.width() > 0 && tuples > (1<<62)/a.width() {
		return a.fail(malformed("found %d %s, need fewer", tuples, what))
	}
	bytes := tuples * a.width()
	values := tuples * int64(a.Components)
	switch {
	case tuples > 0 && a.number == bitNumber:
		if err := a.needBits(tuples, what); err != nil {
			return err
		}
	case tuples == 0 || a.number.size() == 0:
	case a.form == textForm:
		if most := a.text.most(); values > most {
			return a.fail(truncated("%d %s with %s need %d values, found room for %d",
				tuples, what, counted(a.Components, "component"), values, most))
		}
	case bytes > a.length:
		return a.fail(truncated("%d %s with %s need %d bytes, found %d", tuples, what, counted(a.Components, "component"), bytes, a.length))
	}
	a.Tuples = tuples
	return nil
}

// needBits is need for bits.
func (a *column) needBits(tuples int64, what string) error {
	if tuples > (1<<62)/int64(a.Components) {
		return a.fail(malformed("found %d %s, need fewer", tuples, what))
	}
	room := int64(0)
	if a.content != nil {
		room = a.content.most()
		if a.content.form != textForm {
			room *= 8
		}
	}
	if bits := tuples * int64(a.Components); bits > room {
		return a.fail(truncated("%d %s with %s need %d bits, found room for %d", tuples, what, counted(a.Components, "component"), bits, room))
	}
	return nil
}

// most returns how many numbers the array has room for.
func (a *column) most() int64 {
	switch {
	case a.form == textForm:
		return a.text.most()
	case a.number.size() == 0:
		return 0
	}
	return a.length / a.number.size()
}

// A slot is what one worker keeps of a column: the bytes that it decoded last.
type slot struct {
	owner     *column
	low, high int64 // range of the column's bytes in memory
	buffer    []uint64
	data      []byte      // the buffer as bytes; data[0] is byte low
	stream    blockStream // large blocks
	words     words       // text: where reading goes on
	next      int64       // text: number of the word that comes next
	strings   stringPlace
	swapped   []byte
	floats    []float64
	labels    []int64
	near      []int64 // some values about the one that was asked for last
	nearLow   int64
}

// room makes a scratch buffer of n bytes from a kept one. What it held is lost.
func room(buffer *[]byte, n int) []byte {
	if cap(*buffer) < n {
		*buffer = make([]byte, n+n/4)
	}
	return (*buffer)[:n]
}

// growth is how much memory is taken at once on the word of a header alone.
const growth = 16 << 20

// reserve gives the slot room for n bytes and keeps the first kept ones.
func (s *slot) reserve(n int64, kept int64) {
	words := (n + 7) / 8
	if int64(len(s.buffer)) < words {
		buffer := make([]uint64, max(words+words/4, min(2*int64(len(s.buffer)), words+growth)))
		copy(buffer, s.buffer[:(kept+7)/8])
		s.buffer = buffer
	}
	s.data = unsafe.Slice((*byte)(unsafe.Pointer(unsafe.SliceData(s.buffer))), 8*len(s.buffer))[:n]
}

// bytes returns the bytes [low, high) of the array, little-endian, valid until the
// worker's next call for the same array. Blocks that the range shares with the one
// before are not decoded again.
func (a *column) bytes(c *cursor, low, high int64) ([]byte, error) {
	if low == high {
		return nil, nil
	}
	s := &c.slots[a.slot]
	if s.owner != a {
		s.owner, s.low, s.high, s.words.file, s.near = a, 0, 0, nil, s.near[:0]
	}
	if low < s.low || high > s.high {
		if err := a.load(c, s, low, high); err != nil {
			s.owner = nil
			return nil, a.fail(err)
		}
	}
	data := s.data[low-s.low : high-s.low]
	if a.bigEndian && a.form == blockForm { // a block may end inside a number, so what is kept stays as it is
		s.swapped = append(s.swapped[:0], data...)
		data = s.swapped
		swap(data, a.number.size())
	}
	return data, nil
}

// load brings the bytes [low, high) into memory, together with what comes with them.
func (a *column) load(c *cursor, s *slot, low, high int64) error {
	switch a.form {
	case plainForm:
		if high > a.length {
			return truncated("%d bytes needed, found %d", high, a.length)
		}
		s.reserve(high-low, 0)
		s.low, s.high = low, high
		if err := a.stored.read(c, s.data, low); err != nil {
			return err
		}
		if a.bigEndian {
			swap(s.data, a.number.size())
		}
		return nil
	case blockForm:
		return a.unpackBlocks(c, s, low, high)
	case textForm:
		return a.parse(c, s, low, high)
	case stringForm:
		s.reserve(high-low, 0)
		s.low, s.high = low, high
		return a.strings.read(&c.hand, &s.strings, s.data, low)
	}
	return truncated("found no values, need %d bytes", high)
}

// unpackBlocks decodes the blocks that cover [low, high) and are not yet in memory; of
// large blocks the range alone.
func (a *column) unpackBlocks(c *cursor, s *slot, low, high int64) error {
	if high > a.length {
		return truncated("%d bytes needed, found %d", high, a.length)
	}
	size := a.blocks.size
	isStream := size > streamSize && a.blocks.compressor != lz4Blocks
	start, end := low, high
	if !isStream {
		start, end = low/size*size, min((high+size-1)/size*size, a.length)
	}
	kept := int64(0)
	if start >= s.low && start < s.high {
		kept = s.high - start
		copy(s.data, s.data[start-s.low:s.high-s.low])
	}
	s.low = start
	for at := start + kept; ; {
		behind := min(end, at+growth)
		if !isStream {
			behind = min(end, (behind+size-1)/size*size)
		}
		s.reserve(behind-start, at-start)
		s.high = behind
		var err error
		if isStream {
			err = s.stream.read(c, a.blocks, s.data[at-start:], at)
		} else {
			err = a.blocks.decode(c, s.data[at-start:], (at+size-1)/size, (behind+size-1)/size)
		}
		if at = behind; err != nil || at == end {
			return err
		}
	}
}

// parse reads the words that hold [low, high).
func (a *column) parse(c *cursor, s *slot, low, high int64) error {
	size := a.number.size()
	if most := a.text.most(); high/size > most {
		return truncated("%d values needed, found room for %d", high/size, most)
	}
	first := low / size
	if s.words.file == nil || first < s.next || first > s.next+pageSize {
		page, before, found, err := a.text.page(&c.hand, room(&c.page, pageSize+1), first)
		if err != nil {
			return err
		}
		if !found {
			return a.file.fail(a.text.end, truncated("%d values needed, found %d", high/size, before))
		}
		s.words.hand = &c.hand
		if err := s.words.seek(a.text, page, before, first); err != nil {
			return err
		}
	} else if err := s.words.skip(first - s.next); err != nil {
		return err
	}
	s.reserve(high-low, 0)
	s.low, s.high = low, high
	s.next = high / size
	return s.words.numbers(a.number, s.data)
}

// values returns the tuples [low, high) as float64, valid until the worker's next
// call for the same array. Little-endian doubles are not copied.
func (a *column) values(c *cursor, low, high int64) ([]float64, error) {
	data, err := a.bytes(c, low*a.width(), high*a.width())
	if err != nil {
		return nil, err
	}
	if a.number == float64Number && littleHost && isAligned(data) {
		return floatView(data), nil
	}
	s := &c.slots[a.slot]
	count := int((high - low) * int64(a.Components))
	if cap(s.floats) < count {
		s.floats = make([]float64, count)
	}
	s.floats = s.floats[:count]
	a.widen(s.floats, data)
	return s.floats, nil
}

// widen writes numbers as float64, ghost levels as marks.
func (a *column) widen(to []float64, data []byte) {
	a.number.widen(to, data)
	if a.isLevel {
		for i, level := range to {
			to[i] = min(level, mesh.DuplicateCell)
		}
	}
	if a.isColour {
		for i, part := range to {
			to[i] = math.Floor(float64(255*part) + 0.5)
		}
	}
}

// valuesTo writes the tuples [low, high) as float64.
func (a *column) valuesTo(c *cursor, low, high int64, to []float64) error {
	components := int64(a.Components)
	to = to[:(high-low)*components]
	if a.form == plainForm && a.number == float64Number && littleHost && !a.bigEndian {
		if high*a.width() > a.length {
			return a.fail(truncated("%d bytes needed, found %d", high*a.width(), a.length))
		}
		err := a.stored.read(c, byteView(to), low*a.width()) // straight into place
		if err != nil {
			return a.fail(err)
		}
		return nil
	}
	const step = 32 << 10 // tuples that are decoded together
	for ; low < high; low += step {
		behind := min(low+step, high)
		data, err := a.bytes(c, low*a.width(), behind*a.width())
		if err != nil {
			return err
		}
		n := (behind - low) * components
		a.widen(to[:n], data)
		to = to[n:]
	}
	return nil
}

// wholes returns the values [low, high) of an array of whole numbers with one
// component, valid until the worker's next call for the same array.
func (a *column) wholes(c *cursor, low, high int64) ([]int64, error) {
	if most := int64(1) << 59; low > most || high > most {
		return nil, a.fail(truncated("value %d needed", high-1))
	}
	data, err := a.bytes(c, low*a.number.size(), high*a.number.size())
	if err != nil {
		return nil, err
	}
	s := &c.slots[a.slot]
	s.labels = grown(s.labels, int(high-low))
	a.number.integers(s.labels, data)
	return s.labels, nil
}

// nearStep is how many values near reads together.
const nearStep = 1024

// near is wholes for ranges that are short and close to each other.
func (a *column) near(c *cursor, low, high int64) ([]int64, error) {
	s := &c.slots[a.slot]
	if s.owner != a || low < s.nearLow || high > s.nearLow+int64(len(s.near)) {
		values, err := a.wholes(c, low, max(high, min(low+nearStep, a.Tuples)))
		if err != nil {
			return nil, err
		}
		s.near, s.nearLow = append(s.near[:0], values...), low
	}
	return s.near[low-s.nearLow : high-s.nearLow], nil
}

// countTuples returns how many tuples an array holds of which it is not declared.
func (a *column) countTuples(c *cursor) (int64, error) {
	switch {
	case a.form == textForm:
		_, words, _, err := a.text.page(&c.hand, room(&c.page, pageSize+1), math.MaxInt64)
		if err != nil {
			return 0, a.fail(err)
		}
		return words / int64(a.Components), nil
	case a.width() > 0:
		return a.length / a.width(), nil
	}
	return 0, nil
}

// labels returns the tuples [low, high), of one component, as whole numbers.
func (a *column) labels(c *cursor, low, high int64) ([]int64, error) {
	data, err := a.bytes(c, low*a.width(), high*a.width())
	if err != nil {
		return nil, err
	}
	s := &c.slots[a.slot]
	s.labels = grown(s.labels, int(high-low))
	a.number.label(s.labels, data)
	if a.isLevel {
		for i, level := range s.labels {
			s.labels[i] = min(level, mesh.DuplicateCell)
		}
	}
	return s.labels, nil
}

// describe says what the array is, for messages.
func (a *column) describe() string {
	return fmt.Sprintf("%s with %s", a.number, counted(a.Components, "component"))
}
