package readers

import (
	"bytes"
	"context"
	"encoding/binary"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"strainledger/mesh"
)

// readWhole returns the bytes of an array, read in steps of so many.
func readWhole(t *testing.T, cursor mesh.Cursor, array *mesh.Array, step int64) []byte {
	t.Helper()
	data := make([]byte, array.Bytes)
	for at := int64(0); at < array.Bytes; at += step {
		if err := cursor.ReadArray(context.Background(), array, at, data[at:min(at+step, array.Bytes)]); err != nil {
			t.Fatal(err)
		}
	}
	return data
}

// valuesOf takes the bytes of an array apart by its type: numbers in decimal, strings.
func valuesOf(array *mesh.Array, data []byte) []string {
	count := array.Tuples * int64(array.Components)
	var values []string
	switch array.Type {
	case "String":
		return strings.Split(strings.TrimSuffix(string(data), "\x00"), "\x00")
	case "Bit":
		for i := range count {
			values = append(values, strconv.Itoa(int(data[i/8]>>(7-i%8)&1)))
		}
		return values
	}
	size := int64(len(data)) / max(count, 1)
	for i := range count {
		one := data[i*size : (i+1)*size]
		word := binary.LittleEndian.Uint64(append(bytes.Clone(one), make([]byte, 8-size)...))
		shift := 64 - 8*size
		switch array.Type[:3] {
		case "Flo":
			value := math.Float64frombits(word)
			if size == 4 {
				value = float64(math.Float32frombits(uint32(word)))
			}
			values = append(values, strconv.FormatFloat(value, 'g', -1, 64))
		case "UIn":
			values = append(values, strconv.FormatUint(word, 10))
		default:
			values = append(values, strconv.FormatInt(int64(word<<shift)>>shift, 10))
		}
	}
	return values
}

// TestReadArray compares the first and the last tuple of every array of every sample,
// as they are stored, with the index: to the last digit of large integers, to 1e-12 of
// floating-point numbers, whose text in the index is shorter.
func TestReadArray(t *testing.T) {
	compared := map[string]int{}
	for _, want := range readIndex(t, filepath.Join(samples, "index.json")) {
		if want.Blocks != nil || want.Steps != nil || want.Entries != nil {
			continue
		}
		t.Run(want.File, func(t *testing.T) {
			model := openSample(t, want.File, Options{})
			cursor := model.Open()
			defer cursor.Close()
			for on, arrays := range map[mesh.Location][]sampleArray{mesh.OnPoint: want.PointArrays, mesh.OnCell: want.CellArrays} {
				for _, array := range arrays {
					checkStored(t, model, cursor, on, array)
					compared[array.Type]++
				}
			}
			for _, array := range want.FieldArrays {
				fields := model.Sources[0].Fields
				i := slices.IndexFunc(fields, func(a mesh.Array) bool { return a.Name == array.Name })
				if i < 0 {
					t.Errorf("no field array %q", array.Name)
					continue
				}
				values := valuesOf(&fields[i], readWhole(t, cursor, &fields[i], 8))
				checkEnds(t, &fields[i], values, values, array)
			}
		})
	}
	for _, number := range numberNames[1:] {
		if compared[number] == 0 {
			t.Errorf("no array of type %s was compared", number)
		}
	}
}

// checkStored compares an array of the first and the last piece that hold any.
func checkStored(t *testing.T, model *mesh.Model, cursor mesh.Cursor, on mesh.Location, want sampleArray) {
	t.Helper()
	var first, last []string
	var described *mesh.Array
	for i := range model.Pieces {
		array := model.Pieces[i].Find(on, want.Name)
		if array == nil || array.Tuples == 0 {
			continue
		}
		data := readWhole(t, cursor, array, array.Bytes)
		if steps := readWhole(t, cursor, array, 8); !bytes.Equal(steps, data) {
			t.Errorf("%s %q: % x in steps of 8 bytes, % x at once", on, want.Name, steps, data)
		}
		last, described = valuesOf(array, data), array
		if first == nil {
			first = last
		}
	}
	if described != nil {
		checkEnds(t, described, first, last, want)
	}
}

// checkEnds compares the first and last tuple.
func checkEnds(t *testing.T, array *mesh.Array, first, last []string, want sampleArray) {
	t.Helper()
	if want.Tuples == 0 {
		return
	}
	n := array.Components
	for _, end := range []struct {
		got  []string
		want []any
	}{{first[:n], want.First}, {last[len(last)-n:], want.Last}} {
		for i, value := range end.want {
			if !isSameValue(end.got[i], value) {
				t.Errorf("%q of type %s: %s, want %v", array.Name, array.Type, end.got, end.want)
			}
		}
	}
}

func isSameValue(got string, want any) bool {
	text, ok := want.(string)
	if ok && got == text {
		return true
	}
	number, isNumber := want.(float64)
	if ok {
		parsed, err := strconv.ParseFloat(text, 64)
		if err != nil || !math.IsNaN(parsed) && !math.IsInf(parsed, 0) {
			return false
		}
		number, isNumber = parsed, true
	}
	value, err := strconv.ParseFloat(got, 64)
	return err == nil && isNumber &&
		(value == number || math.IsNaN(value) && math.IsNaN(number) || math.Abs(value-number) <= 1e-12*math.Abs(number))
}
