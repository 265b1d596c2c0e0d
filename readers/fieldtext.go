package readers

import "strings"

// characters returns the text of an array of small whole numbers that are the bytes of
// one; nil when they are none.
func (a *column) characters(c *cursor, limits Limits) ([]string, error) {
	if a.Components != 1 || a.Tuples < 2 || a.Tuples > limits.Text {
		return nil, nil
	}
	data, err := a.bytes(c, 0, a.Tuples)
	if err != nil {
		return nil, err
	}
	return textOf(data), nil
}

// textOf returns bytes as a text when all of them are printable.
func textOf(data []byte) []string {
	for _, b := range data {
		if b < ' ' && b != '\n' && b != '\r' && b != '\t' || b == 0x7f {
			return nil
		}
	}
	return []string{strings.ToValidUTF8(string(data), "\ufffd")}
}

// strings returns the strings of an array, nil when it holds none: each is its bytes
// and a zero.
func (x *xmlFile) strings(a *column) []string {
	if a.number != stringNumber || a.content.Tuples == 0 || a.content.Tuples > x.limits.Text {
		return nil
	}
	data, err := a.content.bytes(x.cursor, 0, a.content.Tuples)
	if err != nil {
		return nil
	}
	var found []string
	for _, text := range strings.Split(strings.TrimSuffix(string(data), "\x00"), "\x00") {
		found = append(found, strings.ToValidUTF8(text, "\ufffd"))
	}
	return found
}
