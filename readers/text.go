package readers

import (
	"encoding/binary"
	"errors"
	"math"
	"math/bits"
	"strconv"
	"strings"
	"sync"
	"unsafe"
)

// pageSize is the stretch of text for which an index holds one entry.
const pageSize = 64 << 10

// wordLimit is the longest word that is taken for a number. The longest exact
// decimal of a double has 767 digits.
const wordLimit = 2048

// An index finds the n-th item of a text without reading all before it. Items are
// words (numbers between white space) or, in wrapped base64, characters. It grows
// by one scan, as far as was asked.
type index struct {
	lock     sync.Mutex
	file     *file
	start    int64 // offset of the text in the file
	end      int64 // first byte behind it
	isWord   bool
	before   []int64 // before[i]: items that begin before page i
	complete bool    // all pages are counted; the last entry is the total
}

func newIndex(f *file, start, end int64, isWord bool) *index {
	return &index{file: f, start: start, end: end, isWord: isWord, before: []int64{0}}
}

// most returns how many words the text has room for: each takes two characters with
// the blank behind it.
func (x *index) most() int64 { return (x.end - x.start + 1) / 2 }

// page returns the page in which item n begins, and how many begin before the
// page. Without such an item n, the total is returned and false.
func (x *index) page(h *hand, scratch []byte, n int64) (page int64, before int64, found bool, err error) {
	x.lock.Lock()
	defer x.lock.Unlock()
	for !x.complete && x.before[len(x.before)-1] <= n {
		if err := x.grow(h, scratch); err != nil {
			return 0, 0, false, err
		}
	}
	last := len(x.before) - 1
	if x.before[last] <= n {
		return 0, x.before[last], false, nil
	}
	low, high := 0, last // before[low] <= n < before[high]
	for low+1 < high {
		if middle := (low + high) / 2; x.before[middle] <= n {
			low = middle
		} else {
			high = middle
		}
	}
	return int64(low), x.before[low], true, nil
}

// grow counts one more page.
func (x *index) grow(h *hand, scratch []byte) error {
	page := int64(len(x.before) - 1)
	start := x.start + page*pageSize
	stop := min(start+pageSize, x.end)
	if start >= stop {
		x.complete = true
		return nil
	}
	lead := min(page, 1) // one byte before the page tells whether a word is cut
	text := scratch[:stop-start+lead]
	if err := h.readAt(x.file, text, start-lead); err != nil {
		return err
	}
	inWord := lead == 1 && text[0] > ' '
	x.before = append(x.before, x.before[page]+x.count(text[lead:], inWord))
	return nil
}

func (x *index) count(text []byte, inWord bool) int64 {
	if x.isWord {
		return countWords(text, inWord)
	}
	var count int64
	for _, c := range text {
		if c > ' ' {
			count++
		}
	}
	return count
}

// countWords counts the words that begin in the text. Eight bytes at a time: the
// high bit of each byte of mask says that it belongs to a word.
func countWords(text []byte, inWord bool) int64 {
	const high = 0x8080808080808080
	var count int
	var carry uint64
	if inWord {
		carry = 0x80
	}
	for len(text) >= 8 {
		eight := binary.LittleEndian.Uint64(text)
		mask := (eight&^uint64(high) + 0x5f5f5f5f5f5f5f5f | eight) & high
		count += bits.OnesCount64(mask &^ (mask<<8 | carry))
		carry = mask >> 56
		text = text[8:]
	}
	inWord = carry != 0
	for _, c := range text {
		if c > ' ' && !inWord {
			count++
		}
		inWord = c > ' '
	}
	return int64(count)
}

// A words reads the words of a text one after the other.
type words struct {
	hand   *hand
	file   *file
	offset int64  // of text[0] in the file
	end    int64  // end of the text in the file
	text   []byte // what is in memory and not yet read
	buffer []byte
}

// seek moves to a word, given a page and the count of words before it.
func (w *words) seek(x *index, page, before, word int64) error {
	w.file, w.end = x.file, x.end
	w.offset = x.start + page*pageSize
	w.text = nil
	if page > 0 {
		w.offset--
		if err := w.refill(); err != nil {
			return err
		}
		if w.text[0] > ' ' { // the word that is cut by the page's edge belongs to the page before
			if err := w.skip(1); err != nil {
				return err
			}
		}
	}
	return w.skip(word - before)
}

func (w *words) skip(count int64) error {
	for ; count > 0; count-- {
		word, err := w.word()
		if err != nil {
			return err
		}
		w.drop(len(word))
	}
	return nil
}

func (w *words) drop(n int) {
	w.text = w.text[n:]
	w.offset += int64(n)
}

// word returns the next word without passing it; none at the end of the text. It
// is valid until the next call.
func (w *words) word() ([]byte, error) {
	for {
		i := 0
		for i < len(w.text) && w.text[i] <= ' ' {
			i++
		}
		w.drop(i)
		i = 0
		for i < len(w.text) && w.text[i] > ' ' {
			i++
		}
		if i < len(w.text) || w.offset+int64(len(w.text)) >= w.end {
			return w.text[:i], nil
		}
		if i >= pageSize {
			return nil, w.file.fail(w.offset, overLimit("found a word of more than %d bytes, need a number", i))
		}
		if err := w.refill(); err != nil {
			return nil, err
		}
	}
}

// refill reads on behind what is in memory.
func (w *words) refill() error {
	if w.buffer == nil {
		w.buffer = make([]byte, 2*pageSize)
	}
	kept := copy(w.buffer, w.text)
	stop := min(w.offset+int64(len(w.buffer)), w.end)
	w.text = w.buffer[:stop-w.offset]
	return w.hand.readAt(w.file, w.text[kept:], w.offset+int64(kept))
}

// numbers parses words into little-endian numbers of the type.
func (w *words) numbers(n number, to []byte) error {
	size := int(n.size())
	for len(to) > 0 {
		done := 0
		if n.isFloat() {
			done = w.floats(n, to)
		} else if n != bitNumber {
			done = w.integers(n, to)
		}
		if to = to[done*size:]; len(to) == 0 {
			return nil
		}
		word, err := w.word() // what the quick scan did not take
		if err != nil {
			return err
		}
		if len(word) == 0 {
			return w.file.fail(w.offset, truncated("%d more values needed here, found none", len(to)/size))
		}
		if err := n.parse(to, word); err != nil {
			return w.file.fail(w.offset, err)
		}
		to = to[size:]
		w.drop(len(word))
	}
	return nil
}

// powers holds the powers of ten that a double holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18,
	1e19, 1e20, 1e21, 1e22}

// floats takes words in memory while they are plain decimals. It returns how many it
// took and stops at the first of another kind, or that may go on behind the memory.
func (w *words) floats(n number, to []byte) int {
	text, size := w.text, int(n.size())
	taken, end := 0, 0
	for i := 0; taken < len(to)/size; taken++ {
		for i < len(text) && text[i] <= ' ' {
			i++
		}
		start := i
		value, i2, isExact := exactDecimal(text, i)
		i = i2
		if !isExact {
			for i < len(text) && isDecimal[text[i]] {
				i++
			}
			if i == start || i == len(text) || text[i] > ' ' || i-start > wordLimit {
				break
			}
			var err error
			if value, err = strconv.ParseFloat(unsafe.String(&text[start], i-start), 64); err != nil {
				break
			}
		}
		if n == float64Number {
			binary.LittleEndian.PutUint64(to[8*taken:], math.Float64bits(value))
		} else if narrow := float32(value); math.IsInf(float64(narrow), 0) {
			break
		} else {
			binary.LittleEndian.PutUint32(to[4*taken:], math.Float32bits(narrow))
		}
		end = i
	}
	w.drop(end)
	return taken
}

// isDecimal holds the characters of plain decimals.
var isDecimal = func() (set [256]bool) {
	for _, c := range []byte("0123456789+-.eE") {
		set[c] = true
	}
	return set
}()

// exactDecimal reads the number at text[i] if it ends before white space in the text
// and mantissa and power of ten are both exact in a double, so that one rounding gives
// the nearest double (W. D. Clinger, How to read floating point numbers accurately,
// 1990). It returns the value and the place where reading stopped.
func exactDecimal(text []byte, i int) (value float64, next int, isExact bool) {
	isNegative := i < len(text) && text[i] == '-'
	if isNegative || i < len(text) && text[i] == '+' {
		i++
	}
	var mantissa uint64
	first, exponent := i, 0
	for i < len(text) && text[i]-'0' <= 9 {
		mantissa = mantissa*10 + uint64(text[i]-'0')
		i++
	}
	digits := i - first
	if i < len(text) && text[i] == '.' {
		i++
		point := i
		if mantissa == 0 { // zeros before the first digit take no room in the mantissa
			for i < len(text) && text[i] == '0' {
				i++
			}
		}
		significant := i
		for i < len(text) && text[i]-'0' <= 9 {
			mantissa = mantissa*10 + uint64(text[i]-'0')
			i++
		}
		exponent = point - i
		if digits += i - significant; i == point && digits == 0 {
			return 0, i, false
		}
		if mantissa == 0 && digits == 0 {
			digits = 1 // nothing but zeros
		}
	}
	if digits == 0 || digits > 19 || mantissa >= 1<<53 {
		return 0, i, false
	}
	if i < len(text) && text[i]|0x20 == 'e' {
		i++
		isMinus := i < len(text) && text[i] == '-'
		if isMinus || i < len(text) && text[i] == '+' {
			i++
		}
		start, power := i, 0
		for i < len(text) && text[i]-'0' <= 9 && i-start < 4 {
			power = power*10 + int(text[i]-'0')
			i++
		}
		if i == start {
			return 0, i, false
		}
		if isMinus {
			power = -power
		}
		exponent += power
	}
	if i == len(text) || text[i] > ' ' || exponent < -22 || exponent > 22 {
		return 0, i, false
	}
	value = float64(mantissa)
	if exponent < 0 {
		value /= powers[-exponent]
	} else {
		value *= powers[exponent]
	}
	if isNegative {
		value = -value
	}
	return value, i, true
}

// integers takes words in memory while they are plain whole numbers of at most 18
// digits that fit the type, and returns how many it took.
func (w *words) integers(n number, to []byte) int {
	text, size := w.text, int(n.size())
	taken, end := 0, 0
	for i := 0; taken < len(to)/size; {
		for i < len(text) && text[i] <= ' ' {
			i++
		}
		isNegative := i < len(text) && text[i] == '-'
		if isNegative {
			i++
		}
		var value int64
		first := i
		for i < len(text) && text[i]-'0' <= 9 {
			value = value*10 + int64(text[i]-'0')
			i++
		}
		if i == first || i-first > 18 || i == len(text) || text[i] > ' ' {
			break
		}
		if isNegative {
			value = -value
		}
		if !n.put(to[taken*size:], value) {
			break
		}
		taken++
		end = i
	}
	w.drop(end)
	return taken
}

// put writes a whole number little-endian and reports whether the type holds it.
func (n number) put(to []byte, value int64) bool {
	switch n {
	case int8Number:
		to[0] = byte(value)
		return value == int64(int8(value))
	case uint8Number:
		to[0] = byte(value)
		return value == int64(uint8(value))
	case int16Number:
		binary.LittleEndian.PutUint16(to, uint16(value))
		return value == int64(int16(value))
	case uint16Number:
		binary.LittleEndian.PutUint16(to, uint16(value))
		return value == int64(uint16(value))
	case int32Number:
		binary.LittleEndian.PutUint32(to, uint32(value))
		return value == int64(int32(value))
	case uint32Number:
		binary.LittleEndian.PutUint32(to, uint32(value))
		return value == int64(uint32(value))
	case uint64Number:
		binary.LittleEndian.PutUint64(to, uint64(value))
		return value >= 0
	}
	binary.LittleEndian.PutUint64(to, uint64(value))
	return true
}

// parse writes any spelling of a number as the type's little-endian bytes.
func (n number) parse(to []byte, word []byte) error {
	if len(word) > wordLimit {
		return malformed("found a word of %d bytes, need a number", len(word))
	}
	text := unsafe.String(unsafe.SliceData(word), len(word))
	if n.isFloat() {
		value, err := parseFloat(text)
		if err != nil {
			return err
		}
		if n == float64Number {
			binary.LittleEndian.PutUint64(to, math.Float64bits(value))
			return nil
		}
		narrow := float32(value)
		if math.IsInf(float64(narrow), 0) && !math.IsInf(value, 0) {
			return malformed("found %q, need a value that fits %s", text, n)
		}
		binary.LittleEndian.PutUint32(to, math.Float32bits(narrow))
		return nil
	}
	if n == uint64Number {
		value, err := strconv.ParseUint(strings.TrimPrefix(text, "+"), 10, 64)
		if err == nil {
			binary.LittleEndian.PutUint64(to, value)
			return nil
		}
	}
	value, err := strconv.ParseInt(text, 10, 64)
	if err != nil && !errors.Is(err, strconv.ErrRange) {
		return malformed("found %q, need a whole number (%s)", text, n)
	}
	if err != nil || !n.put(to, value) {
		return malformed("found %s, need a value that fits %s; declare a wider type", text, n)
	}
	return nil
}

// parseFloat reads every spelling of a number that result files hold: decimals, with
// Fortran's D for the exponent, and the names of infinities and of not-a-number.
func parseFloat(text string) (float64, error) {
	body := strings.TrimLeft(text, "+-")
	isNegative := strings.HasPrefix(text, "-")
	if len(text)-len(body) > 1 {
		body = ""
	}
	switch strings.ToLower(body) {
	case "nan", "nan(ind)", "nan(snan)", "1.#qnan", "1.#ind", "1.#snan":
		return math.NaN(), nil
	case "inf", "infinity", "1.#inf":
		if isNegative {
			return math.Inf(-1), nil
		}
		return math.Inf(1), nil
	}
	if body == "" || strings.ContainsAny(body, "xX_pPiInN") {
		return 0, malformed("found %q, need a number", text)
	}
	value, err := strconv.ParseFloat(text, 64)
	if errors.Is(err, strconv.ErrSyntax) && strings.ContainsAny(body, "dD") {
		value, err = strconv.ParseFloat(strings.NewReplacer("d", "e", "D", "E").Replace(text), 64)
	}
	switch {
	case errors.Is(err, strconv.ErrRange):
		return 0, malformed("found %q, need a number below 1.8e308", text)
	case err != nil && strings.Contains(text, ","):
		return 0, malformed("found %q, need a number; write a decimal point in place of the comma", text)
	case err != nil:
		return 0, malformed("found %q, need a number", text)
	}
	return value, nil
}
