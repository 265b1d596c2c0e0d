package readers

import (
	"bytes"
	"encoding/binary"
	"errors"
	"io"
	"sync"

	"github.com/klauspost/compress/zlib"
	"github.com/pierrec/lz4/v4"
	"github.com/therootcompany/xz"
)

// A compressor is the way in which blocks of arrays are compressed.
type compressor uint8

const (
	zlibBlocks compressor = iota + 1
	lz4Blocks
	lzmaBlocks
)

// compressorNamed returns the compressor of a VTKFile element; 0 for none.
func compressorNamed(name string) (compressor, error) {
	switch name {
	case "":
		return 0, nil
	case "vtkZLibDataCompressor":
		return zlibBlocks, nil
	case "vtkLZ4DataCompressor":
		return lz4Blocks, nil
	case "vtkLZMADataCompressor":
		return lzmaBlocks, nil
	}
	return 0, unsupported("found compressor %q, need vtkZLibDataCompressor, vtkLZ4DataCompressor or vtkLZMADataCompressor", name)
}

// blocks is the table of an array's compressed blocks.
type blocks struct {
	compressor compressor
	size       int64  // bytes of a block, decoded
	last       int64  // bytes of the last block
	count      int64  // of blocks
	table      stored // the compressed sizes, one word each
	wordSize   int64
	bigEndian  bool
	body       stored // the blocks, one behind the other
	room       int64  // bytes in the file that the blocks may take

	lock sync.Mutex
	ends []int64 // ends[i]: bytes of the first i blocks in the file; read when first needed
}

// total returns the bytes of the array, decoded.
func (b *blocks) total() int64 {
	if b.count == 0 {
		return 0
	}
	return (b.count-1)*b.size + b.last
}

// length returns the decoded bytes of block i.
func (b *blocks) length(i int64) int64 {
	if i == b.count-1 {
		return b.last
	}
	return b.size
}

// check compares what the length words say with what the file can hold.
func (b *blocks) check(limits Limits) error {
	if b.size <= 0 || b.last <= 0 || b.last > b.size {
		return malformed("found compressed blocks of %d bytes and a last one of %d, need positive sizes and the last no larger", b.size, b.last)
	}
	if b.size > limits.Block && (b.compressor == lz4Blocks || b.size > limits.Decoded) {
		return overLimit("found compressed blocks of %d bytes; need at most the limit of %d for a block", b.size, limits.Block)
	}
	if b.count > limits.Decoded/b.size {
		return overLimit("found %d compressed blocks of %d bytes; need at most the limit of %d decoded bytes", b.count, b.size, limits.Decoded)
	}
	return b.plausible(b.total(), max(0, b.room))
}

// load reads the table. Its size has been checked against the file's.
func (b *blocks) load(c *cursor) error {
	b.lock.Lock()
	defer b.lock.Unlock()
	if b.ends != nil {
		return nil
	}
	words := make([]byte, b.count*b.wordSize)
	if err := b.table.read(c, words, 0); err != nil {
		return err
	}
	ends := make([]int64, b.count+1)
	for i := range b.count {
		size := word(words[i*b.wordSize:], b.wordSize, b.bigEndian)
		if size > uint64(b.room-ends[i]) {
			return b.table.file.fail(b.table.start, truncated("block %d of %d has %d compressed bytes by its header, found %d to the end", i, b.count, size, b.room-ends[i]))
		}
		if err := b.plausible(b.length(i), int64(size)); err != nil {
			return b.table.file.fail(b.table.start, err)
		}
		ends[i+1] = ends[i] + int64(size)
	}
	b.ends = ends
	return nil
}

// plausible refuses a block that cannot hold what it promises: deflate gives at most
// 1032 bytes for one (two bits for a copy of 258), LZ4 at most 255; LZMA, which has no
// such bound, a little less than 8,000 on zeros (measured).
func (b *blocks) plausible(length, size int64) error {
	ratio := int64(1032)
	switch b.compressor {
	case lz4Blocks:
		ratio = 255
	case lzmaBlocks:
		ratio = 1 << 14
	}
	if length/ratio > size {
		return malformed("%d compressed bytes are said to hold %d bytes, found room for at most %d", size, length, size*ratio)
	}
	return nil
}

// word reads a header word.
func word(data []byte, size int64, bigEndian bool) uint64 {
	switch {
	case size == 4 && bigEndian:
		return uint64(binary.BigEndian.Uint32(data))
	case size == 4:
		return uint64(binary.LittleEndian.Uint32(data))
	case bigEndian:
		return binary.BigEndian.Uint64(data)
	}
	return binary.LittleEndian.Uint64(data)
}

// decode fills to with the blocks [low, high).
func (b *blocks) decode(c *cursor, to []byte, low, high int64) error {
	if err := b.load(c); err != nil {
		return err
	}
	packed := room(&c.packed, int(b.ends[high]-b.ends[low]))
	if err := b.body.read(c, packed, b.ends[low]); err != nil {
		return err
	}
	for i := low; i < high; i++ {
		size, length := b.ends[i+1]-b.ends[i], b.length(i)
		if err := c.unpack(b.compressor, to[:length], packed[:size]); err != nil {
			return b.body.file.fail(b.body.start, malformed("compressed block %d of %d: %v", i, b.count, err))
		}
		to, packed = to[length:], packed[size:]
	}
	return nil
}

// lzmaDictionary is the largest dictionary that an LZMA block may ask for. VTK's
// writer asks for 8 MiB whatever the block's size.
const lzmaDictionary = 64 << 20

// An unpacker keeps what the decoders can use again.
type unpacker struct {
	packed bytes.Reader
	zlib   io.ReadCloser
	lzma   *xz.Reader
}

// unpack decodes one block, which must give exactly the bytes wanted.
func (u *unpacker) unpack(how compressor, to, packed []byte) error {
	u.packed.Reset(packed)
	switch how {
	case zlibBlocks:
		if u.zlib == nil {
			reader, err := zlib.NewReader(&u.packed)
			if err != nil {
				return err
			}
			u.zlib = reader
		} else if err := u.zlib.(zlib.Resetter).Reset(&u.packed, nil); err != nil {
			return err
		}
		return fillExactly(u.zlib, to)
	case lz4Blocks:
		n, err := lz4.UncompressBlock(packed, to)
		if err == nil && n != len(to) {
			err = malformed("found %d bytes, need %d", n, len(to))
		}
		return err
	case lzmaBlocks:
		var err error
		if u.lzma == nil {
			u.lzma, err = xz.NewReader(&u.packed, lzmaDictionary)
		} else {
			err = u.lzma.Reset(&u.packed)
		}
		if err != nil {
			return err
		}
		return fillExactly(u.lzma, to)
	}
	return errors.New("no compressor")
}

// fillExactly reads to the end of the stream, whose checksum is thereby checked.
func fillExactly(from io.Reader, to []byte) error {
	n, err := io.ReadFull(from, to)
	if err == io.ErrUnexpectedEOF || err == io.EOF {
		return malformed("found %d bytes, need %d", n, len(to))
	}
	if err != nil {
		return err
	}
	var surplus [1]byte
	for {
		n, err := from.Read(surplus[:])
		switch {
		case n > 0:
			return malformed("found more than %d bytes", len(to))
		case err == io.EOF:
			return nil
		case err != nil:
			return err
		}
	}
}
