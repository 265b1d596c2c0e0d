package readers

import (
	"bufio"
	"io"

	"github.com/klauspost/compress/zlib"
	"github.com/therootcompany/xz"
)

// streamSize is the block size from which blocks are not held as a whole: some writers
// put an array of any size into one block. What is read goes forward, so that the
// decoder is kept where it stands.
const streamSize = 4 << 20

// A blockStream decodes one large block front to back.
type blockStream struct {
	blocks *blocks // nil: nothing is open
	block  int64
	at     int64 // bytes of the block that are decoded
	input  *bufio.Reader
	reader io.Reader
}

// read fills to with the bytes of the array from low on.
func (s *blockStream) read(c *cursor, b *blocks, to []byte, low int64) error {
	for len(to) > 0 {
		block := low / b.size
		at := low - block*b.size
		if s.blocks != b || s.block != block || s.at > at {
			if err := s.open(c, b, block); err != nil {
				return s.fail(b, block, err)
			}
		}
		if skipped, err := io.CopyN(io.Discard, s.reader, at-s.at); err != nil {
			return s.fail(b, block, shorter(err, s.at+skipped, b.length(block)))
		}
		part := to[:min(int64(len(to)), b.length(block)-at)]
		n, err := io.ReadFull(s.reader, part)
		if err != nil {
			return s.fail(b, block, shorter(err, at+int64(n), b.length(block)))
		}
		s.at = at + int64(n)
		to, low = to[n:], low+int64(n)
		if s.at == b.length(block) {
			if err := fillExactly(s.reader, nil); err != nil {
				return s.fail(b, block, err)
			}
			s.blocks = nil
		}
	}
	return nil
}

func (s *blockStream) fail(b *blocks, block int64, err error) error {
	s.blocks = nil
	if _, ok := err.(*Error); ok {
		return err
	}
	return b.body.file.fail(b.body.start, malformed("compressed block %d of %d: %v", block, b.count, err))
}

// shorter says that a block ends too early.
func shorter(err error, found, need int64) error {
	if err == io.EOF || err == io.ErrUnexpectedEOF {
		return malformed("found %d bytes, need %d", found, need)
	}
	return err
}

// open starts at the beginning of a block.
func (s *blockStream) open(c *cursor, b *blocks, block int64) error {
	if err := b.load(c); err != nil {
		return err
	}
	packed := &storedReader{c, &b.body, b.ends[block], b.ends[block+1]}
	if s.input == nil {
		s.input = bufio.NewReaderSize(packed, windowSize)
	} else {
		s.input.Reset(packed)
	}
	var err error
	if b.compressor == zlibBlocks {
		if resetter, ok := s.reader.(zlib.Resetter); ok {
			err = resetter.Reset(s.input, nil)
		} else {
			s.reader, err = zlib.NewReader(s.input)
		}
	} else {
		s.reader, err = xz.NewReader(s.input, lzmaDictionary)
	}
	if err == nil {
		s.blocks, s.block, s.at = b, block, 0
	}
	return err
}

// A storedReader reads a stretch of stored bytes front to back.
type storedReader struct {
	cursor   *cursor
	stored   *stored
	at, stop int64
}

func (r *storedReader) Read(to []byte) (int, error) {
	n := min(int64(len(to)), r.stop-r.at)
	if n == 0 {
		return 0, io.EOF
	}
	if err := r.stored.read(r.cursor, to[:n], r.at); err != nil {
		return 0, err
	}
	r.at += n
	return int(n), nil
}
