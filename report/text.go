package report

import (
	"io"
	"strings"
	"unicode/utf8"

	"strainledger/energy"
)

// textWidth is the number of columns of the text report.
const textWidth = 100

// TextOptions says how the text report is dressed.
type TextOptions struct {
	Colour bool // escape codes for headings, warnings and errors; they add no meaning
}

// Text writes the ledger as a short account for people, at most 100 columns wide. Long
// names are shortened in the middle; numbers never are.
func Text(w io.Writer, ledger *energy.Ledger, options TextOptions) error {
	return Summarise(ledger).writeText(w, options)
}

func (s *Summary) writeText(w io.Writer, options TextOptions) error {
	page := textPage{colour: options.Colour}
	page.wrapped(s.Title, "", bold)
	page.wrapped(s.program, "", "")
	for i := range s.sections {
		page.section(&s.sections[i])
	}
	page.section(&s.verdict)
	page.line("")
	page.wrapped(s.Caution, "", "")
	_, err := io.WriteString(w, page.text.String())
	return err
}

// Escape codes of terminals.
const (
	bold   = "\x1b[1m"
	yellow = "\x1b[33m"
	red    = "\x1b[31m"
	normal = "\x1b[0m"
)

// A textPage is the text report as it grows.
type textPage struct {
	text   strings.Builder
	colour bool
}

func (p *textPage) line(text string) {
	p.text.WriteString(strings.TrimRight(text, " "))
	p.text.WriteByte('\n')
}

// paint puts an escape code around a text whose width is settled.
func (p *textPage) paint(text, code string) string {
	shown := strings.TrimRight(text, " ")
	if !p.colour || code == "" || shown == "" {
		return text
	}
	return code + shown + normal + text[len(shown):]
}

func (t tone) code() string {
	switch t {
	case warningTone:
		return yellow
	case errorTone:
		return red
	}
	return ""
}

func (p *textPage) section(s *section) {
	p.line("")
	p.wrapped(s.heading, "", bold)
	p.sentences(s.lead)
	if s.table != nil {
		p.table(s.table)
	}
	p.sentences(s.notes)
}

func (p *textPage) sentences(sentences []phrase) {
	for _, sentence := range sentences {
		p.wrapped(sentence.text, indent, sentence.tone.code())
	}
}

func (p *textPage) wrapped(text, indent, code string) {
	for _, line := range wrap(printable(text), textWidth-len(indent)) {
		p.line(indent + p.paint(line, code))
	}
}

// wrap breaks a text at blanks into lines of at most width runes; a longer word is broken
// where the line ends.
func wrap(text string, width int) []string {
	var lines []string
	var line []rune
	for _, field := range strings.Fields(text) {
		word := []rune(field)
		if len(line) > 0 && len(line)+1+len(word) <= width {
			line = append(append(line, ' '), word...)
			continue
		}
		if len(line) > 0 {
			lines = append(lines, string(line))
		}
		for len(word) > width {
			lines = append(lines, string(word[:width]))
			word = word[width:]
		}
		line = append(line[:0], word...)
	}
	return append(lines, string(line))
}

// shorten replaces the middle of a text of more than width runes by an ellipsis.
func shorten(text string, width int) string {
	runes := []rune(text)
	if len(runes) <= width {
		return text
	}
	tail := (width - 1) / 2
	return string(runes[:width-1-tail]) + "…" + string(runes[len(runes)-tail:])
}

func runeCount(text string) int { return utf8.RuneCountInString(text) }
