package readers

import (
	"encoding/binary"
	"math"
	"math/bits"
	"unsafe"

	"strainledger/mesh"
)

// A number is one of VTK's number types.
type number uint8

const (
	int8Number number = iota + 1
	uint8Number
	int16Number
	uint16Number
	int32Number
	uint32Number
	int64Number
	uint64Number
	float32Number
	float64Number
	bitNumber    // eight to a byte, most significant first
	stringNumber // text
)

var numberNames = [...]string{"", "Int8", "UInt8", "Int16", "UInt16", "Int32", "UInt32", "Int64", "UInt64",
	"Float32", "Float64", "Bit", "String"}

var numberSizes = [...]int64{0, 1, 1, 2, 2, 4, 4, 8, 8, 4, 8, 0, 0}

func (n number) String() string { return numberNames[n] }

// size returns the bytes of one number; 0 for those that are not served.
func (n number) size() int64 { return numberSizes[n] }

func (n number) isFloat() bool { return n == float32Number || n == float64Number }

func (n number) isInteger() bool { return n >= int8Number && n <= uint64Number }

// numberNamed returns the type with VTK's name in XML files, or 0.
func numberNamed(name string) number {
	for n := int8Number; n <= stringNumber; n++ {
		if numberNames[n] == name {
			return n
		}
	}
	return 0
}

// littleHost reports whether this processor keeps the low byte first, so that
// arrays of little-endian files can be looked at as they are.
var littleHost = binary.NativeEndian.Uint16([]byte{1, 0}) == 1

// floats looks at the bytes as float64 in the host's order; they must be aligned.
func floatView(data []byte) []float64 {
	if len(data) == 0 {
		return nil
	}
	return unsafe.Slice((*float64)(unsafe.Pointer(unsafe.SliceData(data))), len(data)/8)
}

func typeView(data []byte) []mesh.CellType {
	if len(data) == 0 {
		return nil
	}
	return unsafe.Slice((*mesh.CellType)(unsafe.SliceData(data)), len(data))
}

// byteView looks at float64 as bytes.
func byteView(values []float64) []byte {
	if len(values) == 0 {
		return nil
	}
	return unsafe.Slice((*byte)(unsafe.Pointer(unsafe.SliceData(values))), 8*len(values))
}

func isAligned(data []byte) bool {
	return len(data) == 0 || uintptr(unsafe.Pointer(unsafe.SliceData(data)))%8 == 0
}

// swap reverses the bytes of each number, so that what follows is little-endian.
func swap(data []byte, size int64) {
	switch size {
	case 2:
		for ; len(data) >= 2; data = data[2:] {
			binary.LittleEndian.PutUint16(data, binary.BigEndian.Uint16(data))
		}
	case 4:
		for ; len(data) >= 4; data = data[4:] {
			binary.LittleEndian.PutUint32(data, binary.BigEndian.Uint32(data))
		}
	case 8:
		for ; len(data) >= 8; data = data[8:] {
			binary.LittleEndian.PutUint64(data, bits.ReverseBytes64(binary.LittleEndian.Uint64(data)))
		}
	}
}

// widen writes little-endian numbers as float64; data holds len(to) of them.
func (n number) widen(to []float64, data []byte) {
	switch n {
	case int8Number:
		for i := range to {
			to[i] = float64(int8(data[i]))
		}
	case uint8Number:
		for i := range to {
			to[i] = float64(data[i])
		}
	case int16Number:
		for i := range to {
			to[i] = float64(int16(binary.LittleEndian.Uint16(data[2*i:])))
		}
	case uint16Number:
		for i := range to {
			to[i] = float64(binary.LittleEndian.Uint16(data[2*i:]))
		}
	case int32Number:
		for i := range to {
			to[i] = float64(int32(binary.LittleEndian.Uint32(data[4*i:])))
		}
	case uint32Number:
		for i := range to {
			to[i] = float64(binary.LittleEndian.Uint32(data[4*i:]))
		}
	case int64Number:
		for i := range to {
			to[i] = float64(int64(binary.LittleEndian.Uint64(data[8*i:])))
		}
	case uint64Number:
		for i := range to {
			to[i] = float64(binary.LittleEndian.Uint64(data[8*i:]))
		}
	case float32Number:
		for i := range to {
			to[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(data[4*i:])))
		}
	case float64Number:
		for i := range to {
			to[i] = math.Float64frombits(binary.LittleEndian.Uint64(data[8*i:]))
		}
	}
}

// label writes little-endian numbers as whole numbers; what is none, or does not
// fit, becomes [mesh.NoLabel].
func (n number) label(to []int64, data []byte) {
	switch n {
	case uint64Number:
		for i := range to {
			to[i] = int64(binary.LittleEndian.Uint64(data[8*i:]))
			if to[i] < 0 {
				to[i] = mesh.NoLabel
			}
		}
	case float32Number:
		for i := range to {
			to[i] = wholeNumber(float64(math.Float32frombits(binary.LittleEndian.Uint32(data[4*i:]))))
		}
	case float64Number:
		for i := range to {
			to[i] = wholeNumber(math.Float64frombits(binary.LittleEndian.Uint64(data[8*i:])))
		}
	default:
		n.integers(to, data)
	}
}

func wholeNumber(value float64) int64 {
	if value != math.Trunc(value) || value < -1<<63 || value >= 1<<63 {
		return mesh.NoLabel
	}
	return int64(value)
}

// integers writes little-endian whole numbers; of UInt64 those above 2⁶³-1 come
// out negative.
func (n number) integers(to []int64, data []byte) {
	switch n {
	case int8Number:
		for i := range to {
			to[i] = int64(int8(data[i]))
		}
	case uint8Number:
		for i := range to {
			to[i] = int64(data[i])
		}
	case int16Number:
		for i := range to {
			to[i] = int64(int16(binary.LittleEndian.Uint16(data[2*i:])))
		}
	case uint16Number:
		for i := range to {
			to[i] = int64(binary.LittleEndian.Uint16(data[2*i:]))
		}
	case int32Number:
		for i := range to {
			to[i] = int64(int32(binary.LittleEndian.Uint32(data[4*i:])))
		}
	case uint32Number:
		for i := range to {
			to[i] = int64(binary.LittleEndian.Uint32(data[4*i:]))
		}
	case int64Number, uint64Number:
		for i := range to {
			to[i] = int64(binary.LittleEndian.Uint64(data[8*i:]))
		}
	}
}

// nodes narrows little-endian whole numbers to int32 and reports whether all are in
// [0, points), with points at most 2³¹-1. One pass: a number out of range shows as
// a set sign bit of (points - 1 - number) or of the number itself.
func (n number) nodes(to []int32, data []byte, points int64) bool {
	last := points - 1
	var signs int64
	switch n {
	case int64Number, uint64Number:
		data = data[:8*len(to)]
		for i := range to {
			id := int64(binary.LittleEndian.Uint64(data[8*i:]))
			signs |= id | (last - id)
			to[i] = int32(id)
		}
	case int32Number:
		data = data[:4*len(to)]
		for i := range to {
			id := int32(binary.LittleEndian.Uint32(data[4*i:]))
			signs |= int64(id) | (last - int64(id))
			to[i] = id
		}
	case uint32Number:
		for i := range to {
			id := int64(binary.LittleEndian.Uint32(data[4*i:]))
			signs |= last - id
			to[i] = int32(id)
		}
	default:
		var one [1]int64
		size := n.size()
		for i := range to {
			n.integers(one[:], data[int64(i)*size:])
			signs |= one[0] | (last - one[0])
			to[i] = int32(one[0])
		}
	}
	return signs >= 0
}
