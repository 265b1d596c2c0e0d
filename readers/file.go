package readers

import (
	"bytes"
	"errors"
	"io"
	"os"

	"strainledger/mesh"
)

// A file is one file that headers or arrays are read from. Content is set where it
// is not opened by path: what was unpacked, and what came from standard input.
type file struct {
	path    string // as given, for messages
	disk    string // what the system opens
	size    int64
	bytes   int64  // of the file on disk, which may be compressed
	text    int64  // bytes at the beginning that are text, for line numbers in messages
	packing string // how the file is compressed as a whole: gzip, zstd or xz; "" not
	content io.ReaderAt
}

// source begins the description of the file.
func (f *file) source(format string, time float64) mesh.Source {
	if f.packing != "" {
		format += ", " + f.packing
	}
	return mesh.Source{Path: f.path, Format: format, Bytes: f.bytes, Time: time}
}

// fail makes an error at a byte offset of the file.
func (f *file) fail(offset int64, err error) error {
	return &Error{Path: f.path, Offset: offset, Err: err, file: f}
}

// handCount is how many files one worker keeps open. A walk reads the pieces in
// order, so that a few are enough whatever the number of pieces.
const handCount = 4

// A hand reads files for one worker.
type hand struct {
	owners [handCount]*file
	open   [handCount]*os.File
	next   int
}

// readAt fills to with the bytes from offset on; fewer are an error.
func (h *hand) readAt(f *file, to []byte, offset int64) error {
	if offset < 0 || offset > f.size || int64(len(to)) > f.size-offset {
		return f.fail(offset, truncated("%d bytes needed here, found %d", len(to), max(0, f.size-offset)))
	}
	content, err := h.content(f)
	if err != nil {
		return err
	}
	if n, err := content.ReadAt(to, offset); n < len(to) {
		if err == nil || errors.Is(err, io.EOF) {
			err = truncated("%d bytes needed here, found %d", len(to), n)
		}
		return f.fail(offset, err)
	}
	return nil
}

func (h *hand) content(f *file) (io.ReaderAt, error) {
	if f.content != nil {
		return f.content, nil
	}
	for i, owner := range h.owners {
		if owner == f {
			return h.open[i], nil
		}
	}
	opened, err := os.Open(f.disk)
	if err != nil {
		return nil, &Error{Path: f.path, Err: err}
	}
	if h.open[h.next] != nil {
		h.open[h.next].Close()
	}
	h.owners[h.next], h.open[h.next] = f, opened
	h.next = (h.next + 1) % handCount
	return opened, nil
}

func (h *hand) close() error {
	var first error
	for i, opened := range h.open {
		if opened != nil {
			if err := opened.Close(); err != nil && first == nil {
				first = err
			}
		}
		h.owners[i], h.open[i] = nil, nil
	}
	return first
}

// windowSize is what a window reads at once.
const windowSize = 64 << 10

// A window walks through a file front to back, some kilobytes at a time.
type window struct {
	hand   *hand
	file   *file
	buffer []byte
	first  int64 // offset of buffer[0] in the file
	at     int   // position in buffer
}

func newWindow(h *hand, f *file) *window {
	return &window{hand: h, file: f, buffer: make([]byte, 0, windowSize)}
}

// offset returns the place in the file.
func (w *window) offset() int64 { return w.first + int64(w.at) }

// rest returns the bytes in memory from here on; none at the end of the file.
func (w *window) rest() ([]byte, error) {
	if w.at == len(w.buffer) {
		if err := w.fill(w.offset()); err != nil {
			return nil, err
		}
	}
	return w.buffer[w.at:], nil
}

// more reads on behind the bytes in memory, which are moved to the front, and
// reports whether there was anything.
func (w *window) more() (bool, error) {
	kept := len(w.buffer) - w.at
	end := w.offset() + int64(kept)
	want := min(int64(max(windowSize, kept)), w.file.size-end)
	if want <= 0 {
		return false, nil
	}
	buffer := w.buffer
	if cap(buffer) < kept+int(want) {
		buffer = make([]byte, 0, kept+int(want))
	}
	buffer = buffer[:kept+int(want)]
	copy(buffer, w.buffer[w.at:])
	w.first, w.at, w.buffer = w.offset(), 0, buffer
	return true, w.hand.readAt(w.file, buffer[kept:], end)
}

func (w *window) fill(offset int64) error {
	count := min(windowSize, max(0, w.file.size-offset))
	w.buffer = w.buffer[:count]
	w.first, w.at = offset, 0
	return w.hand.readAt(w.file, w.buffer, offset)
}

// jump moves to an offset without looking at what lies between.
func (w *window) jump(offset int64) error {
	if offset >= w.first && offset <= w.first+int64(len(w.buffer)) {
		w.at = int(offset - w.first)
		return nil
	}
	return w.fill(offset)
}

// find moves to the next byte c and reports whether there is one.
func (w *window) find(c byte) (bool, error) {
	for {
		rest, err := w.rest()
		if err != nil || len(rest) == 0 {
			return false, err
		}
		if i := bytes.IndexByte(rest, c); i >= 0 {
			w.at += i
			return true, nil
		}
		w.at += len(rest)
	}
}

// blanks moves to the next byte that is no white space and returns it; false at
// the end of the file.
func (w *window) blanks() (byte, bool, error) {
	for {
		rest, err := w.rest()
		if err != nil || len(rest) == 0 {
			return 0, false, err
		}
		for i, c := range rest {
			if c > ' ' {
				w.at += i
				return c, true, nil
			}
		}
		w.at += len(rest)
	}
}

// fail makes an error at the window's place.
func (w *window) fail(err error) error { return w.file.fail(w.offset(), err) }

// lineBytes is how much text is gone through at most to find the line of a fault.
const lineBytes = 1 << 30

// located gives an error the line of its place, where the file is text there.
func (h *hand) located(err error) error {
	place, ok := err.(*Error)
	if !ok || place.file == nil || place.Line > 0 || place.Offset > min(place.file.text, lineBytes) {
		return err
	}
	line := 1
	buffer := make([]byte, windowSize)
	for offset := int64(0); offset < place.Offset; offset += windowSize {
		text := buffer[:min(windowSize, place.Offset-offset)]
		if h.readAt(place.file, text, offset) != nil {
			return err
		}
		line += bytes.Count(text, []byte{'\n'})
	}
	place.Line = line
	return err
}
