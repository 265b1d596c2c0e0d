package readers

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"os"

	"github.com/klauspost/compress/gzip"
	"github.com/klauspost/compress/zstd"
	"github.com/therootcompany/xz"
)

// What cannot be read at any place, standard input and files that are compressed as a
// whole, is copied to a temporary file.

// zstdWindow is the largest window that a Zstandard file may ask for.
const zstdWindow = 128 << 20

// unpack returns a file that is compressed as a whole unpacked, others as they are.
func (o *opener) unpack(f *file) (*file, error) {
	head, err := o.head(f)
	if err != nil {
		return nil, err
	}
	packed := io.NewSectionReader(handReader{&o.cursor.hand, f}, 0, f.size)
	var plain io.Reader
	packing := ""
	switch {
	case bytes.HasPrefix(head, []byte{0x1f, 0x8b}):
		packing = "gzip"
		plain, err = gzip.NewReader(packed)
	case bytes.HasPrefix(head, []byte{0x28, 0xb5, 0x2f, 0xfd}):
		packing = "zstd"
		var decoder *zstd.Decoder
		decoder, err = zstd.NewReader(packed, zstd.WithDecoderConcurrency(1), zstd.WithDecoderMaxWindow(zstdWindow))
		if err == nil {
			defer decoder.Close()
		}
		plain = decoder
	case bytes.HasPrefix(head, []byte{0xfd, '7', 'z', 'X', 'Z', 0}):
		packing = "xz"
		plain, err = xz.NewReader(packed, lzmaDictionary)
	default:
		return f, nil
	}
	if err != nil {
		return nil, f.fail(0, malformed("file is compressed: %v", err))
	}
	unpacked, err := o.spool(plain, f.path)
	if unpacked != nil {
		unpacked.bytes, unpacked.packing = f.size, packing
	}
	return unpacked, err
}

// handReader reads a file as the header's readers do.
type handReader struct {
	hand *hand
	file *file
}

func (r handReader) ReadAt(to []byte, offset int64) (int, error) {
	n := min(int64(len(to)), r.file.size-offset)
	if n <= 0 {
		return 0, io.EOF
	}
	if err := r.hand.readAt(r.file, to[:n], offset); err != nil {
		return 0, err
	}
	if int(n) < len(to) {
		return int(n), io.EOF
	}
	return int(n), nil
}

// A spoolFile is a temporary file.
type spoolFile struct {
	*os.File
	isRemoved bool
}

// spoolStdin copies standard input.
func (o *opener) spoolStdin() (*file, error) {
	var input io.Reader = os.Stdin
	if o.options.Stdin != nil {
		input = o.options.Stdin
	}
	// A read may wait for ever, but nobody waits for it when the call is cancelled.
	reader, writer := io.Pipe()
	go func() {
		_, err := io.Copy(writer, input)
		writer.CloseWithError(err)
	}()
	stop := context.AfterFunc(o.ctx, func() { writer.CloseWithError(o.ctx.Err()) })
	defer stop()
	defer reader.Close()
	return o.spool(reader, "-")
}

// spool copies a stream to a temporary file.
func (o *opener) spool(from io.Reader, path string) (*file, error) {
	spool, err := os.CreateTemp("", "strainledger-*")
	if err != nil {
		return nil, &Error{Path: path, Err: fmt.Errorf("temporary copy: %w", err)}
	}
	// Where the system can, the name goes at once, so that nothing is left behind
	// however the program ends.
	o.spools = append(o.spools, spoolFile{spool, os.Remove(spool.Name()) == nil})
	size, err := io.Copy(spool, &stoppingReader{o: o, from: from, left: o.limits.Decoded - o.decoded})
	if err != nil {
		if place := new(Error); errors.As(err, &place) || o.ctx.Err() != nil {
			return nil, err
		}
		var kind *reason
		if !errors.As(err, &kind) {
			err = malformed("copy after %d bytes: %v", size, err)
		}
		return nil, &Error{Path: path, Err: err}
	}
	o.decoded += size
	return &file{path: path, disk: spool.Name(), size: size, bytes: size, content: spool}, nil
}

// A stoppingReader ends a copy that is cancelled or grows too large.
type stoppingReader struct {
	o    *opener
	from io.Reader
	left int64
}

func (r *stoppingReader) Read(to []byte) (int, error) {
	if err := r.o.ctx.Err(); err != nil {
		return 0, err
	}
	n, err := r.from.Read(to)
	if r.left -= int64(n); r.left < 0 {
		return 0, overLimit("found more than %d bytes decoded; need at most the limit", r.o.limits.Decoded)
	}
	return n, err
}

// close lets go of the temporary files.
func (o *opener) close() error {
	var first error
	for _, spool := range o.spools {
		err := spool.Close()
		if !spool.isRemoved {
			err = errors.Join(err, os.Remove(spool.Name()))
		}
		if first == nil {
			first = err
		}
	}
	o.spools = nil
	return first
}
