package report

import (
	"bytes"
	"compress/zlib"
	"context"
	"encoding/binary"
	"io"

	"strainledger/mesh"
)

const (
	// blockBytes is the length of the blocks before they are compressed: three of
	// VTK's usual 32 KiB, so that both begin together, and whole tuples of 3 and 6
	// doubles.
	blockBytes = 96 << 10
	// taskBytes is how much of an array a worker takes at once.
	taskBytes = 8 * blockBytes
	// compression is the level of zlib. On doubles of a solver the next one takes ten
	// times as long for a file 5 % smaller (measured); whole numbers shrink to a fifth
	// or less with either.
	compression = zlib.BestSpeed
)

// A blockTask is a stretch of an array that one worker compresses.
type blockTask struct {
	array     int
	low, high int64 // bytes
}

// blockTasks cuts arrays into tasks. An array without values has one too, for its
// length words.
func blockTasks(arrays []*vtuArray) []blockTask {
	var tasks []blockTask
	for i, a := range arrays {
		for low := int64(0); low == 0 || low < a.Bytes; low += taskBytes {
			tasks = append(tasks, blockTask{i, low, min(low+taskBytes, a.Bytes)})
		}
	}
	return tasks
}

// A packer compresses blocks for one worker.
type packer struct {
	cursor mesh.Cursor
	plain  []byte
	packed bytes.Buffer
	writer *zlib.Writer
	sizes  []uint64 // of the blocks in packed
}

// pack reads the bytes of a task and compresses them block by block.
func (p *packer) pack(ctx context.Context, a *vtuArray, task blockTask) error {
	p.packed.Reset()
	p.sizes = p.sizes[:0]
	if task.low == task.high {
		return nil
	}
	if p.plain == nil {
		p.plain = make([]byte, taskBytes)
	}
	plain := p.plain[:task.high-task.low]
	if err := a.read(ctx, p.cursor, task.low, plain); err != nil {
		return err
	}
	for len(plain) > 0 {
		block := plain[:min(blockBytes, len(plain))]
		before := p.packed.Len()
		if err := p.packBlock(block); err != nil {
			return err
		}
		p.sizes = append(p.sizes, uint64(p.packed.Len()-before))
		plain = plain[len(block):]
	}
	return nil
}

func (p *packer) packBlock(block []byte) error {
	if p.writer == nil {
		var err error
		if p.writer, err = zlib.NewWriterLevel(&p.packed, compression); err != nil {
			return err
		}
	}
	p.writer.Reset(&p.packed)
	if _, err := p.writer.Write(block); err != nil {
		return err
	}
	return p.writer.Close()
}

// appendArrays writes compressed arrays one behind the other from byte start of a file
// on, sets their offsets from there, and returns where the last one ends. Before the
// blocks of an array stand their number, the length of each before it was compressed,
// that of the last one where it is shorter, else 0, and the compressed lengths.
func appendArrays(ctx context.Context, to io.WriterAt, start int64, arrays []*vtuArray, offsets []int64, workers int, open func() mesh.Cursor) (end int64, err error) {
	tasks := blockTasks(arrays)
	packers := make([]packer, min(workers, len(tasks)))
	for i := range packers {
		packers[i].cursor = open()
		defer packers[i].cursor.Close()
	}
	const word = 8
	at := start
	var table []byte // length words of the array that is being written
	work := func(worker, task int) error {
		return packers[worker].pack(ctx, arrays[tasks[task].array], tasks[task])
	}
	finish := func(worker, task int) error {
		p, t := &packers[worker], tasks[task]
		length := arrays[t.array].Bytes
		if t.low == 0 {
			offsets[t.array] = at - start
			blocks := (length + blockBytes - 1) / blockBytes
			table = binary.LittleEndian.AppendUint64(table[:0], uint64(blocks))
			table = binary.LittleEndian.AppendUint64(table, blockBytes)
			table = binary.LittleEndian.AppendUint64(table, uint64(length%blockBytes))
			at += word * (3 + blocks)
		}
		for _, size := range p.sizes {
			table = binary.LittleEndian.AppendUint64(table, size)
		}
		if _, err := to.WriteAt(p.packed.Bytes(), at); err != nil {
			return err
		}
		at += int64(p.packed.Len())
		if t.high == length {
			_, err := to.WriteAt(table, start+offsets[t.array])
			return err
		}
		return nil
	}
	err = inTurn(ctx, workers, len(tasks), work, finish)
	return at, err
}
