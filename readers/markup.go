package readers

import (
	"bytes"
	"strconv"
	"strings"
	"unicode/utf8"
)

// An element is one element of the header of an XML file. The values of arrays are
// not in it, only their place.
type element struct {
	name       string
	attributes []attribute
	children   []*element
	offset     int64
	start, end int64    // text behind the start tag, up to the next tag
	payload    *payload // of arrays in base64 inside the element
}

type attribute struct{ name, value string }

// get returns the value of an attribute and whether it is there.
func (e *element) get(name string) (string, bool) {
	for i := range e.attributes {
		if e.attributes[i].name == name {
			return e.attributes[i].value, true
		}
	}
	return "", false
}

// attribute returns the value of an attribute, "" when it is not there.
func (e *element) attribute(name string) string {
	value, _ := e.get(name)
	return value
}

// child returns the first child of the name, or nil.
func (e *element) child(name string) *element {
	if e != nil {
		for _, child := range e.children {
			if child.name == name {
				return child
			}
		}
	}
	return nil
}

// The cost of an element and of an attribute in memory beside their text, so that
// many tiny ones count against [Limits.Markup] too.
const (
	elementCost   = 144
	attributeCost = 32
)

// A markup reads the tags of an XML file. It knows neither entities beyond the five
// of XML nor document types: result files need none, and they are a danger.
type markup struct {
	window   *window
	limits   Limits
	used     int64
	isLatin1 bool
}

type tag struct {
	element *element
	isEnd   bool
	isEmpty bool
}

// next returns the next tag; nil at the end of the file.
func (m *markup) next() (*tag, error) {
	for {
		found, err := m.window.find('<')
		if err != nil || !found {
			return nil, err
		}
		text, err := m.until(">", 0)
		if err != nil {
			return nil, err
		}
		switch {
		case bytes.HasPrefix(text, []byte("<!--")):
			if text, err = m.until("-->", 4); err != nil {
				return nil, err
			}
		case bytes.HasPrefix(text, []byte("<!")):
			return nil, m.window.fail(unsupported("found %.20q, need elements alone; remove document types, entities and CDATA sections", text))
		case bytes.HasPrefix(text, []byte("<?")):
			m.isLatin1 = m.isLatin1 || strings.Contains(strings.ToLower(string(text)), "iso-8859-1")
		default:
			for isQuoted(text) { // the > belongs to an attribute
				if text, err = m.until(">", len(text)); err != nil {
					return nil, err
				}
			}
			return m.tag(text)
		}
		m.window.at += len(text)
	}
}

// until returns the text from here to the end of a mark that begins at from or
// behind it.
func (m *markup) until(mark string, from int) ([]byte, error) {
	for {
		text := m.window.buffer[m.window.at:]
		end := bytes.Index(text[min(from, len(text)):], []byte(mark))
		length := len(text)
		if end >= 0 {
			length = from + end + len(mark)
		}
		if int64(length) > m.limits.Text {
			return nil, m.window.fail(overLimit("found %.20q with more than %d bytes up to %q; need fewer than the limit for texts", text, m.limits.Text, mark))
		}
		if end >= 0 {
			return text[:length], nil
		}
		from = max(from, len(text)-len(mark)+1)
		if more, err := m.window.more(); err != nil {
			return nil, err
		} else if !more {
			return nil, m.window.fail(truncated("found no %q that ends %.20q", mark, text))
		}
	}
}

// isQuoted reports whether the end of a tag's text stands inside quotes.
func isQuoted(text []byte) bool {
	var quote byte
	for _, c := range text {
		switch {
		case quote == 0 && (c == '"' || c == '\''):
			quote = c
		case c == quote:
			quote = 0
		}
	}
	return quote != 0
}

// tag takes a tag apart and moves behind it.
func (m *markup) tag(text []byte) (*tag, error) {
	element := &element{offset: m.window.offset()}
	t := &tag{element: element}
	m.used += int64(len(text)) + elementCost
	body := text[1 : len(text)-1]
	if t.isEnd = bytes.HasPrefix(body, []byte("/")); t.isEnd {
		body = body[1:]
	}
	if t.isEmpty = bytes.HasSuffix(body, []byte("/")); t.isEmpty {
		body = body[:len(body)-1]
	}
	i := 0
	for i < len(body) && body[i] > ' ' {
		i++
	}
	element.name = string(body[:i])
	if err := m.attributes(element, body[i:]); err != nil {
		return nil, m.window.fail(err)
	}
	if m.used += attributeCost * int64(len(element.attributes)); m.used > m.limits.Markup {
		return nil, m.window.fail(overLimit("found more than %d bytes of elements; need less than the limit for markup", m.limits.Markup))
	}
	m.window.at += len(text)
	element.start = m.window.offset()
	return t, nil
}

func (m *markup) attributes(e *element, text []byte) error {
	for {
		text = bytes.TrimLeft(text, " \t\r\n")
		if len(text) == 0 {
			return nil
		}
		i := bytes.IndexByte(text, '=')
		if i < 0 {
			return malformed("element %.40q: found %.40q, need name=\"value\"", e.name, text)
		}
		name := string(bytes.TrimSpace(text[:i]))
		if strings.ContainsAny(name, " \t\r\n\"'") || name == "" {
			return malformed("element %.40q: found %.40q, need name=\"value\"", e.name, text)
		}
		text = bytes.TrimLeft(text[i+1:], " \t\r\n")
		if len(text) < 2 || text[0] != '"' && text[0] != '\'' {
			return malformed("element %.40q: attribute %.40q: found no quotes, need name=\"value\"", e.name, name)
		}
		end := bytes.IndexByte(text[1:], text[0])
		if end < 0 {
			return malformed("element %.40q: attribute %.40q: found no end of the quotes", e.name, name)
		}
		value, err := m.plain(text[1 : 1+end])
		if err != nil {
			return err
		}
		e.attributes = append(e.attributes, attribute{name, value})
		text = text[end+2:]
	}
}

var entities = map[string]string{"lt": "<", "gt": ">", "amp": "&", "quot": `"`, "apos": "'"}

// plain resolves character references and the five entities of XML.
func (m *markup) plain(text []byte) (string, error) {
	var plain strings.Builder
	for len(text) > 0 {
		i := bytes.IndexByte(text, '&')
		if i < 0 {
			i = len(text)
		}
		m.write(&plain, text[:i])
		if text = text[i:]; len(text) == 0 {
			break
		}
		end := bytes.IndexByte(text, ';')
		if end < 0 {
			return "", malformed("found %.20q, need &amp; for an ampersand", text)
		}
		name := string(text[1:end])
		if replacement, ok := entities[name]; ok {
			plain.WriteString(replacement)
		} else if character, ok := reference(name); ok {
			plain.WriteRune(character)
		} else {
			return "", malformed("found the entity %.40q, need one of the five of XML or a character reference", name)
		}
		text = text[end+1:]
	}
	return plain.String(), nil
}

// reference returns the character of #123 or #x7b.
func reference(name string) (rune, bool) {
	digits, isReference := strings.CutPrefix(name, "#")
	base := 10
	if hex, isHex := strings.CutPrefix(digits, "x"); isHex {
		digits, base = hex, 16
	}
	value, err := strconv.ParseUint(digits, base, 31)
	return rune(value), isReference && err == nil && value > 0 && utf8.ValidRune(rune(value))
}

func (m *markup) write(to *strings.Builder, text []byte) {
	if !m.isLatin1 {
		to.Write(text)
		return
	}
	for _, c := range text {
		to.WriteRune(rune(c))
	}
}

// attributeError makes an error about an attribute of an element.
func attributeError(e *element, name, value, need string) error {
	return malformed("element %s: found %s=%.60q, need %s", e.name, name, value, need)
}
