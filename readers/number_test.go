package readers

import (
	"bytes"
	"encoding/base64"
	"encoding/binary"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"strainledger/mesh"
)

func TestNumberNames(t *testing.T) {
	for n := int8Number; n <= stringNumber; n++ {
		if numberNamed(n.String()) != n {
			t.Errorf("%s is not found", n)
		}
		isWhole := mesh.Array{Type: n.String()}.IsInteger()
		if isWhole != n.isInteger() {
			t.Errorf("%s is whole: %v", n, isWhole)
		}
	}
	if numberNamed("") != 0 || numberNamed("float64") != 0 {
		t.Error("a number type was found that VTK does not have")
	}
}

func TestWidenAndLabel(t *testing.T) {
	for _, test := range []struct {
		number number
		data   []byte
		value  float64
		label  int64
	}{
		{int8Number, []byte{0xfe}, -2, -2},
		{uint8Number, []byte{0xfe}, 254, 254},
		{int16Number, []byte{0xfe, 0xff}, -2, -2},
		{uint16Number, []byte{0xfe, 0xff}, 65534, 65534},
		{int32Number, []byte{0xfe, 0xff, 0xff, 0xff}, -2, -2},
		{uint32Number, []byte{0xfe, 0xff, 0xff, 0xff}, 4294967294, 4294967294},
		{int64Number, binary.LittleEndian.AppendUint64(nil, 1<<63), -1 << 63, -1 << 63},
		{uint64Number, binary.LittleEndian.AppendUint64(nil, 1<<63), 1 << 63, mesh.NoLabel},
		{uint64Number, binary.LittleEndian.AppendUint64(nil, 7), 7, 7},
		{float32Number, binary.LittleEndian.AppendUint32(nil, math.Float32bits(1.5)), 1.5, mesh.NoLabel},
		{float32Number, binary.LittleEndian.AppendUint32(nil, math.Float32bits(-3)), -3, -3},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(1e15)), 1e15, 1e15},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(0.1)), 0.1, mesh.NoLabel},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(1<<63)), 1 << 63, mesh.NoLabel},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(1<<62)), 1 << 62, 1 << 62},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(-1<<62)), -1 << 62, -1 << 62},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(1e19)), 1e19, mesh.NoLabel},
		{float64Number, binary.LittleEndian.AppendUint64(nil, math.Float64bits(math.Inf(-1))), math.Inf(-1), mesh.NoLabel},
	} {
		var value [2]float64
		var label [2]int64
		test.number.widen(value[:], append(bytes.Clone(test.data), test.data...))
		test.number.label(label[:], append(bytes.Clone(test.data), test.data...))
		if value != [2]float64{test.value, test.value} || label != [2]int64{test.label, test.label} {
			t.Errorf("%s % x: %v and %v, want %v and %v", test.number, test.data, value, label, test.value, test.label)
		}
	}
	var label [1]int64
	float64Number.label(label[:], binary.LittleEndian.AppendUint64(nil, math.Float64bits(math.NaN())))
	if label[0] != mesh.NoLabel {
		t.Errorf("NaN is label %d", label[0])
	}
}

// Node numbers at and beyond both ends are told apart in every type.
func TestNodes(t *testing.T) {
	const points = 100
	for _, n := range []number{int8Number, uint8Number, int16Number, uint16Number, int32Number, uint32Number, int64Number, uint64Number} {
		for _, test := range []struct {
			id   int64
			isIn bool
		}{{0, true}, {99, true}, {100, false}, {127, false}, {-1, false}, {math.MinInt64, false}, {math.MaxInt64, false}, {1 << 32, false}} {
			data := make([]byte, n.size())
			if !n.put(data, test.id) {
				continue // the type does not hold it
			}
			all := append(make([]byte, n.size()), data...)
			var to [2]int32
			if got := n.nodes(to[:], all, points); got != test.isIn || test.isIn && int64(to[1]) != test.id {
				t.Errorf("%s %d of %d points: %v, %v", n, test.id, points, got, to)
			}
		}
	}
	var none [1]int32
	if uint64Number.nodes(none[:], bytes.Repeat([]byte{0xff}, 8), points) {
		t.Error("2⁶⁴-1 was taken for a point")
	}
}

func TestSwap(t *testing.T) {
	for size, want := range map[int64][]byte{
		1: {1, 2, 3, 4, 5, 6, 7, 8}, 2: {2, 1, 4, 3, 6, 5, 8, 7}, 4: {4, 3, 2, 1, 8, 7, 6, 5}, 8: {8, 7, 6, 5, 4, 3, 2, 1},
	} {
		data := []byte{1, 2, 3, 4, 5, 6, 7, 8}
		if swap(data, size); !slices.Equal(data, want) {
			t.Errorf("size %d: %v, want %v", size, data, want)
		}
	}
}

func TestDecodeBase64(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 10))
	for length := 1; length < 200; length++ {
		want := make([]byte, length)
		for i := range want {
			want[i] = byte(random.Uint32())
		}
		text := []byte(base64.StdEncoding.EncodeToString(want))
		if int64(len(text)) != encodedLength(int64(length)) {
			t.Fatalf("%d bytes are %d characters, want %d", length, len(text), encodedLength(int64(length)))
		}
		got := make([]byte, len(text))
		n, fault := decodeBase64(got, text)
		if fault >= 0 || !bytes.Equal(got[:n], want) {
			t.Fatalf("%d bytes: fault %d", length, fault)
		}
		at := random.IntN(len(text))
		text[at] = "*-_ \x00\n\xff"[random.IntN(7)]
		if _, fault = decodeBase64(got, text); fault < 0 || fault > at || fault < at-3 {
			t.Errorf("a fault at %d of %d was found at %d", at, len(text), fault)
		}
	}
	if _, fault := decodeBase64(make([]byte, 10), []byte("AA==AAAA")); fault != 0 {
		t.Errorf("padding in the middle was found at %d", fault)
	}
}
