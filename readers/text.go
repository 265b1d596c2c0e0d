package readers

import (
	"encoding/binary"
	"math/bits"
	"sync"
)

// pageSize is the stretch of text for which an index holds one entry.
const pageSize = 64 << 10

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
