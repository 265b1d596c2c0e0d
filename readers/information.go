package readers

import (
	"encoding/xml"
	"strings"
	"unicode/utf8"
)

// information returns the information keys of an array as the text of their elements,
// "" without any and where they are longer than texts may be.
func (x *xmlFile) information(e *element) string {
	var text strings.Builder
	for _, child := range e.children {
		if child.name == "InformationKey" && !x.writeElement(&text, child) {
			return ""
		}
	}
	return text.String()
}

// writeElement writes an element with what is in it, and reports whether it could.
func (x *xmlFile) writeElement(to *strings.Builder, e *element) bool {
	to.WriteString("<" + e.name)
	for _, attribute := range e.attributes {
		to.WriteString(" " + attribute.name + `="`)
		xml.EscapeText(to, []byte(attribute.value)) // a Builder takes all
		to.WriteString(`"`)
	}
	to.WriteString(">")
	if len(e.children) == 0 {
		text, ok := x.textOf(e)
		if !ok {
			return false
		}
		to.WriteString(text)
	}
	for _, child := range e.children {
		if !x.writeElement(to, child) {
			return false
		}
	}
	to.WriteString("</" + e.name + ">\n")
	return int64(to.Len()) <= x.limits.Text
}

// textOf returns the text inside an element, and whether it is one that can be copied.
func (x *xmlFile) textOf(e *element) (string, bool) {
	if e.end-e.start > x.limits.Text {
		return "", false
	}
	text := make([]byte, e.end-e.start)
	if x.cursor.hand.readAt(x.file, text, e.start) != nil || strings.Contains(string(text), "<") {
		return "", false // a comment
	}
	if utf8.Valid(text) {
		return string(text), true
	}
	var latin1 strings.Builder
	for _, c := range text {
		latin1.WriteRune(rune(c))
	}
	return latin1.String(), true
}
