package readers

import (
	"encoding/binary"
	"errors"
	"math"
	"strconv"
	"strings"
	"unsafe"
)

// wordLimit is the longest word that is taken for a number. The longest exact
// decimal of a double has 767 digits.
const wordLimit = 2048

// powers holds the powers of ten that a double holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18,
	1e19, 1e20, 1e21, 1e22}

// floats takes words in memory while they are plain decimals. It returns how many it
// took and stops at the first of another kind, or that may go on behind the memory.
func (w *words) floats(n number, to []byte) int {
	text, size := w.text, int(n.size())
	taken, end := 0, 0
	for i := 0; taken < len(to)/size; taken++ {
		for i < len(text) && text[i] <= ' ' {
			i++
		}
		start := i
		value, i2, isExact := exactDecimal(text, i)
		i = i2
		if !isExact {
			for i < len(text) && isDecimal[text[i]] {
				i++
			}
			if i == start || i == len(text) || text[i] > ' ' || i-start > wordLimit {
				break
			}
			var err error
			if value, err = strconv.ParseFloat(unsafe.String(&text[start], i-start), 64); err != nil {
				break
			}
		}
		if n == float64Number {
			binary.LittleEndian.PutUint64(to[8*taken:], math.Float64bits(value))
		} else if narrow := float32(value); math.IsInf(float64(narrow), 0) {
			break
		} else {
			binary.LittleEndian.PutUint32(to[4*taken:], math.Float32bits(narrow))
		}
		end = i
	}
	w.drop(end)
	return taken
}

// isDecimal holds the characters of plain decimals.
var isDecimal = func() (set [256]bool) {
	for _, c := range []byte("0123456789+-.eE") {
		set[c] = true
	}
	return set
}()

// exactDecimal reads the number at text[i] if it ends before white space in the text
// and mantissa and power of ten are both exact in a double, so that one rounding gives
// the nearest double (W. D. Clinger, How to read floating point numbers accurately,
// 1990). It returns the value and the place where reading stopped.
func exactDecimal(text []byte, i int) (value float64, next int, isExact bool) {
	isNegative := i < len(text) && text[i] == '-'
	if isNegative || i < len(text) && text[i] == '+' {
		i++
	}
	var mantissa uint64
	first, exponent := i, 0
	for i < len(text) && text[i]-'0' <= 9 {
		mantissa = mantissa*10 + uint64(text[i]-'0')
		i++
	}
	digits := i - first
	if i < len(text) && text[i] == '.' {
		i++
		point := i
		if mantissa == 0 { // zeros before the first digit take no room in the mantissa
			for i < len(text) && text[i] == '0' {
				i++
			}
		}
		significant := i
		for i < len(text) && text[i]-'0' <= 9 {
			mantissa = mantissa*10 + uint64(text[i]-'0')
			i++
		}
		exponent = point - i
		if digits += i - significant; i == point && digits == 0 {
			return 0, i, false
		}
		if mantissa == 0 && digits == 0 {
			digits = 1 // nothing but zeros
		}
	}
	if digits == 0 || digits > 19 || mantissa >= 1<<53 {
		return 0, i, false
	}
	if i < len(text) && text[i]|0x20 == 'e' {
		i++
		isMinus := i < len(text) && text[i] == '-'
		if isMinus || i < len(text) && text[i] == '+' {
			i++
		}
		start, power := i, 0
		for i < len(text) && text[i]-'0' <= 9 && i-start < 4 {
			power = power*10 + int(text[i]-'0')
			i++
		}
		if i == start {
			return 0, i, false
		}
		if isMinus {
			power = -power
		}
		exponent += power
	}
	if i == len(text) || text[i] > ' ' || exponent < -22 || exponent > 22 {
		return 0, i, false
	}
	value = float64(mantissa)
	if exponent < 0 {
		value /= powers[-exponent]
	} else {
		value *= powers[exponent]
	}
	if isNegative {
		value = -value
	}
	return value, i, true
}

// integers takes words in memory while they are plain whole numbers of at most 18
// digits that fit the type, and returns how many it took.
func (w *words) integers(n number, to []byte) int {
	text, size := w.text, int(n.size())
	taken, end := 0, 0
	for i := 0; taken < len(to)/size; {
		for i < len(text) && text[i] <= ' ' {
			i++
		}
		isNegative := i < len(text) && text[i] == '-'
		if isNegative {
			i++
		}
		var value int64
		first := i
		for i < len(text) && text[i]-'0' <= 9 {
			value = value*10 + int64(text[i]-'0')
			i++
		}
		if i == first || i-first > 18 || i == len(text) || text[i] > ' ' {
			break
		}
		if isNegative {
			value = -value
		}
		if !n.put(to[taken*size:], value) {
			break
		}
		taken++
		end = i
	}
	w.drop(end)
	return taken
}

// put writes a whole number little-endian and reports whether the type holds it.
func (n number) put(to []byte, value int64) bool {
	switch n {
	case int8Number:
		to[0] = byte(value)
		return value == int64(int8(value))
	case uint8Number:
		to[0] = byte(value)
		return value == int64(uint8(value))
	case int16Number:
		binary.LittleEndian.PutUint16(to, uint16(value))
		return value == int64(int16(value))
	case uint16Number:
		binary.LittleEndian.PutUint16(to, uint16(value))
		return value == int64(uint16(value))
	case int32Number:
		binary.LittleEndian.PutUint32(to, uint32(value))
		return value == int64(int32(value))
	case uint32Number:
		binary.LittleEndian.PutUint32(to, uint32(value))
		return value == int64(uint32(value))
	case uint64Number:
		binary.LittleEndian.PutUint64(to, uint64(value))
		return value >= 0
	}
	binary.LittleEndian.PutUint64(to, uint64(value))
	return true
}

// parse writes any spelling of a number as the type's little-endian bytes.
func (n number) parse(to []byte, word []byte) error {
	if len(word) > wordLimit {
		return malformed("found a word of %d bytes, need a number", len(word))
	}
	text := unsafe.String(unsafe.SliceData(word), len(word))
	if n.isFloat() {
		value, err := parseFloat(text)
		if err != nil {
			return err
		}
		if n == float64Number {
			binary.LittleEndian.PutUint64(to, math.Float64bits(value))
			return nil
		}
		narrow := float32(value)
		if math.IsInf(float64(narrow), 0) && !math.IsInf(value, 0) {
			return malformed("found %q, need a value that fits %s", text, n)
		}
		binary.LittleEndian.PutUint32(to, math.Float32bits(narrow))
		return nil
	}
	if n == uint64Number {
		value, err := strconv.ParseUint(strings.TrimPrefix(text, "+"), 10, 64)
		if err == nil {
			binary.LittleEndian.PutUint64(to, value)
			return nil
		}
	}
	value, err := strconv.ParseInt(text, 10, 64)
	if err != nil && !errors.Is(err, strconv.ErrRange) {
		return malformed("found %q, need a whole number (%s)", text, n)
	}
	if err != nil || !n.put(to, value) {
		return malformed("found %s, need a value that fits %s; declare a wider type", text, n)
	}
	return nil
}

// parseFloat reads every spelling of a number that result files hold: decimals, with
// Fortran's D for the exponent, and the names of infinities and of not-a-number.
func parseFloat(text string) (float64, error) {
	body := strings.TrimLeft(text, "+-")
	isNegative := strings.HasPrefix(text, "-")
	if len(text)-len(body) > 1 {
		body = ""
	}
	switch strings.ToLower(body) {
	case "nan", "nan(ind)", "nan(snan)", "1.#qnan", "1.#ind", "1.#snan":
		return math.NaN(), nil
	case "inf", "infinity", "1.#inf":
		if isNegative {
			return math.Inf(-1), nil
		}
		return math.Inf(1), nil
	}
	if body == "" || strings.ContainsAny(body, "xX_pPiInN") {
		return 0, malformed("found %q, need a number", text)
	}
	value, err := strconv.ParseFloat(text, 64)
	if errors.Is(err, strconv.ErrSyntax) && strings.ContainsAny(body, "dD") {
		value, err = strconv.ParseFloat(strings.NewReplacer("d", "e", "D", "E").Replace(text), 64)
	}
	switch {
	case errors.Is(err, strconv.ErrRange):
		return 0, malformed("found %q, need a number below 1.8e308", text)
	case err != nil && strings.Contains(text, ","):
		return 0, malformed("found %q, need a number; write a decimal point in place of the comma", text)
	case err != nil:
		return 0, malformed("found %q, need a number", text)
	}
	return value, nil
}
