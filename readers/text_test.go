package readers

import (
	"bytes"
	"encoding/binary"
	"errors"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"
)

// parseWords parses a text as an array of so many numbers.
func parseWords(text string, n number, count int) ([]byte, error) {
	f := &file{path: "text", size: int64(len(text)), content: strings.NewReader(text)}
	c := newCursor(nil, nil, 1)
	a := &column{file: f, number: n}
	a.Components = 1
	a.payload = payload{form: textForm, text: newIndex(f, 0, f.size, true)}
	return a.bytes(c, 0, int64(count)*n.size())
}

func TestFloatSpellings(t *testing.T) {
	for _, test := range []struct {
		word string
		want float64
	}{
		{"0", 0}, {"-0", math.Copysign(0, -1)}, {"-0.0e5", math.Copysign(0, -1)}, {"+1.5", 1.5}, {"1.", 1}, {".5", 0.5}, {"-.5", -0.5},
		{"1e3", 1000}, {"1E+03", 1000}, {"1e-3", 0.001}, {"1.0D+03", 1000}, {"2d-2", 0.02},
		{"9007199254740993", 9007199254740992}, {"9007199254740991", 9007199254740991}, {"0.1", 0.1},
		{"0.00000000000000000000001", 1e-23}, {"123456789012345678901234567890", 123456789012345678901234567890},
		{"1e22", 1e22}, {"1e23", 1e23}, {"1e-22", 1e-22}, {"1e-23", 1e-23}, {"5e-324", 5e-324}, {"1e-400", 0},
		{"1.7976931348623157e308", math.MaxFloat64}, {"000012.50", 12.5},
		{"nan", math.NaN()}, {"NaN", math.NaN()}, {"-nan", math.NaN()}, {"nan(ind)", math.NaN()}, {"-nan(ind)", math.NaN()},
		{"1.#QNAN", math.NaN()}, {"-1.#IND", math.NaN()},
		{"inf", math.Inf(1)}, {"-inf", math.Inf(-1)}, {"+Infinity", math.Inf(1)}, {"-INFINITY", math.Inf(-1)}, {"-1.#INF", math.Inf(-1)},
	} {
		for _, text := range []string{test.word, " " + test.word + "\n", "7 " + test.word + " 8"} {
			count := len(strings.Fields(text))
			data, err := parseWords(text, float64Number, count)
			if err != nil {
				t.Errorf("%q: %v", text, err)
				continue
			}
			got := floatView(data)[count/2]
			if math.Float64bits(got) != math.Float64bits(test.want) && !(math.IsNaN(got) && math.IsNaN(test.want)) {
				t.Errorf("%q is %v, want %v", text, got, test.want)
			}
		}
	}
}

func TestWordsThatAreNoNumbers(t *testing.T) {
	for _, test := range []struct {
		word   string
		number number
		need   string
	}{
		{"1,5", float64Number, "decimal point"}, {"1.5.5", float64Number, "need a number"}, {"0x10", float64Number, "need a number"},
		{"1e400", float64Number, "below 1.8e308"}, {"--1", float64Number, "need a number"}, {"e5", float64Number, "need a number"},
		{"1e", float64Number, "need a number"}, {"1_000", float64Number, "need a number"}, {"-", float64Number, "need a number"},
		{".", float64Number, "need a number"}, {"abc", float64Number, "need a number"}, {"1.0-103", float64Number, "need a number"},
		{"1e39", float32Number, "fits Float32"}, {"1.5", int32Number, "whole number"}, {"300", uint8Number, "fits UInt8"},
		{"-1", uint8Number, "fits UInt8"}, {"-129", int8Number, "fits Int8"}, {"128", int8Number, "fits Int8"},
		{"32768", int16Number, "fits Int16"}, {"65536", uint16Number, "fits UInt16"}, {"2147483648", int32Number, "fits Int32"},
		{"4294967296", uint32Number, "fits UInt32"}, {"9223372036854775808", int64Number, "fits Int64"},
		{"18446744073709551616", uint64Number, "fits UInt64"}, {"-1", uint64Number, "fits UInt64"}, {"7x", int64Number, "whole number"},
	} {
		_, err := parseWords("1 "+test.word+" 2", test.number, 3)
		if err == nil || !strings.Contains(err.Error(), test.need) || !strings.Contains(err.Error(), strings.Trim(test.word, `"`)) {
			t.Errorf("%q as %s: error %v, want one with %q", test.word, test.number, err, test.need)
		}
		if !errors.Is(err, ErrMalformed) {
			t.Errorf("%q: %v is not malformed", test.word, err)
		}
	}
	if _, err := parseWords("1 2", float64Number, 3); !errors.Is(err, ErrTruncated) {
		t.Errorf("three of two words: %v", err)
	}
	if _, err := parseWords(strings.Repeat("1", 200_000), float64Number, 1); !errors.Is(err, ErrLimit) {
		t.Errorf("a word of 200,000 digits: %.100v", err)
	}
}

func TestIntegerLimits(t *testing.T) {
	for _, test := range []struct {
		number number
		words  string
		want   []byte
	}{
		{int8Number, "-128 127", []byte{0x80, 0x7f}},
		{uint8Number, "0 255", []byte{0, 0xff}},
		{int16Number, "-32768 32767", []byte{0, 0x80, 0xff, 0x7f}},
		{uint16Number, "1 65535", []byte{1, 0, 0xff, 0xff}},
		{int32Number, "-2147483648 +7", []byte{0, 0, 0, 0x80, 7, 0, 0, 0}},
		{uint32Number, "258 4294967295", []byte{2, 1, 0, 0, 0xff, 0xff, 0xff, 0xff}},
		{int64Number, "-9223372036854775808", []byte{0, 0, 0, 0, 0, 0, 0, 0x80}},
		{uint64Number, "18446744073709551615", bytes.Repeat([]byte{0xff}, 8)},
	} {
		got, err := parseWords(test.words, test.number, len(strings.Fields(test.words)))
		if err != nil || !bytes.Equal(got, test.want) {
			t.Errorf("%s as %s: % x, %v, want % x", test.words, test.number, got, err, test.want)
		}
	}
}

// randomDecimal writes a number in one of many ways.
func randomDecimal(random *rand.Rand) string {
	switch random.IntN(5) {
	case 0:
		return strconv.FormatFloat(math.Float64frombits(random.Uint64()), 'g', -1, 64)
	case 1:
		return strconv.FormatFloat(random.NormFloat64(), 'f', random.IntN(25), 64)
	case 2:
		return strconv.FormatFloat(random.NormFloat64(), 'e', random.IntN(20), 64)
	case 3:
		return strconv.FormatUint(random.Uint64N(1<<60), 10) + "e" + strconv.Itoa(random.IntN(60)-30)
	}
	return "0." + strings.Repeat("0", random.IntN(30)) + strconv.Itoa(random.IntN(1e9))
}

// Every way to write a number gives strconv's bits, wherever pages and buffers end.
func TestFloatsEqualStrconv(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	var text strings.Builder
	var want []float64
	for text.Len() < 5*pageSize {
		word := randomDecimal(random)
		value, err := strconv.ParseFloat(word, 64)
		if err != nil {
			continue
		}
		want = append(want, value)
		text.WriteString(word + strings.Repeat(" ", 1+random.IntN(3)))
	}
	f := &file{path: "text", size: int64(text.Len()), content: strings.NewReader(text.String())}
	for range 200 { // ranges that begin and end anywhere
		low := random.IntN(len(want))
		high := low + random.IntN(min(5000, len(want)-low)+1)
		a := &column{file: f, number: float64Number}
		a.Components = 1
		a.payload = payload{form: textForm, text: newIndex(f, 0, f.size, true)}
		data, err := a.bytes(newCursor(nil, nil, 1), int64(low)*8, int64(high)*8)
		if err != nil {
			t.Fatal(err)
		}
		for i := range high - low {
			bits := binary.LittleEndian.Uint64(data[8*i:])
			if bits != math.Float64bits(want[low+i]) && !math.IsNaN(want[low+i]) {
				t.Fatalf("value %d is %v, want %v", low+i, math.Float64frombits(bits), want[low+i])
			}
		}
	}
}

func FuzzDecimal(f *testing.F) {
	for _, word := range []string{"0", "1.5", "-12.25e-3", "9007199254740993", "1e22", "0.000001234567890123456789", "1e-400"} {
		f.Add(word)
	}
	f.Fuzz(func(t *testing.T, word string) {
		got, next, isExact := exactDecimal([]byte(word+" "), 0)
		if !isExact {
			return
		}
		want, err := strconv.ParseFloat(word[:next], 64)
		if err != nil || math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%q is %v, want %v (%v)", word[:next], got, want, err)
		}
	})
}

// Counting eight bytes at a time agrees with counting one by one.
func TestCountWords(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for range 2000 {
		text := make([]byte, random.IntN(40))
		for i := range text {
			text[i] = " \n\t\x00\x1fa!\x7f\x80\xff"[random.IntN(10)]
		}
		inWord := random.IntN(2) == 0
		want, before := int64(0), inWord
		for _, c := range text {
			if c > ' ' && !before {
				want++
			}
			before = c > ' '
		}
		if got := countWords(text, inWord); got != want {
			t.Fatalf("%q after a word %v: %d words, want %d", text, inWord, got, want)
		}
	}
}
