package energy

import (
	"bytes"
	"encoding/json"
	"math"
	"reflect"
	"strconv"
)

// A Number is a result that may not exist. NaN stands for "does not exist" and is
// written as null, so that a missing number can never be taken for 0. Counts that may
// be missing are Numbers too.
type Number float64

// None is the Number that does not exist.
var None = Number(math.NaN())

// Exists reports whether there is such a number.
func (n Number) Exists() bool { return !math.IsNaN(float64(n)) }

// MarshalJSON writes the shortest text that reads back to the same number, null for
// none. An infinite number is an error of the program, not a result.
func (n Number) MarshalJSON() ([]byte, error) {
	if !n.Exists() {
		return []byte("null"), nil
	}
	if n == 0 {
		return []byte("0"), nil // never -0
	}
	return json.Marshal(float64(n))
}

// UnmarshalJSON reads what MarshalJSON wrote.
func (n *Number) UnmarshalJSON(data []byte) error {
	if string(data) == "null" {
		*n = None
		return nil
	}
	value, err := strconv.ParseFloat(string(data), 64)
	if err != nil {
		return &json.UnmarshalTypeError{Value: jsonKind(data), Type: reflect.TypeFor[Number]()}
	}
	*n = Number(value)
	return nil
}

// jsonKind returns JSON's word for a value that is no number in range.
func jsonKind(data []byte) string {
	switch data[0] {
	case '"':
		return "string"
	case 't', 'f':
		return "boolean"
	case '[':
		return "list"
	case '{':
		return "object"
	}
	return "number " + string(data)
}

// A Text is a string that may not exist: empty is written as null.
type Text string

// MarshalJSON writes null for an empty text, and leaves it to the encoder around it
// whether <, > and & are escaped.
func (t Text) MarshalJSON() ([]byte, error) {
	if t == "" {
		return []byte("null"), nil
	}
	var text bytes.Buffer
	encoder := json.NewEncoder(&text)
	encoder.SetEscapeHTML(false)
	err := encoder.Encode(string(t))
	return text.Bytes(), err
}

// String returns the number as it is written in a file, "null" for none.
func (n Number) String() string {
	text, err := n.MarshalJSON()
	if err != nil {
		return strconv.FormatFloat(float64(n), 'g', -1, 64)
	}
	return string(text)
}
