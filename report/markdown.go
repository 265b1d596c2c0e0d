package report

import (
	"fmt"
	"io"
	"strings"
	"unicode"

	"strainledger/energy"
)

// writeMarkdown writes the ledger as Markdown to paste into a review: the text report's
// content with the verdict first, names in full, and the sources' checksums.
func writeMarkdown(w io.Writer, ledger *energy.Ledger) error {
	summary := Summarise(ledger)
	var page strings.Builder
	fmt.Fprintf(&page, "# %s\n\n%s\n", escapeMarkdown(summary.Title), escapeMarkdown(summary.program))
	markdownSection(&page, &summary.verdict)
	for i := range summary.sections {
		markdownSection(&page, &summary.sections[i])
	}
	fmt.Fprintf(&page, "\n> %s\n", escapeMarkdown(summary.Caution))
	_, err := io.WriteString(w, page.String())
	return err
}

func markdownSection(page *strings.Builder, s *section) {
	fmt.Fprintf(page, "\n## %s\n", escapeMarkdown(s.heading))
	markdownSentences(page, s.lead)
	if s.table != nil {
		markdownTable(page, s.table)
	}
	markdownSentences(page, s.notes)
}

func markdownSentences(page *strings.Builder, sentences []phrase) {
	for _, sentence := range sentences {
		fmt.Fprintf(page, "\n%s\n", escapeMarkdown(sentence.text))
	}
}

// markdownTable writes a table, or a list of subjects where the table has no headings.
func markdownTable(page *strings.Builder, t *table) {
	page.WriteString("\n")
	if t.hasNoHeadings() {
		for _, row := range t.rows {
			fmt.Fprintf(page, "- **%s**: %s\n", escapeMarkdown(row[0].text), escapeMarkdown(row[1].text))
		}
		return
	}
	for _, column := range t.columns {
		heading := column.heading
		if column.unit != "" {
			heading += " (" + column.unit + ")"
		}
		fmt.Fprintf(page, "| %s ", escapeMarkdown(heading))
	}
	page.WriteString("|\n")
	for _, column := range t.columns {
		if column.kind == number {
			page.WriteString("| ---: ")
		} else {
			page.WriteString("| :--- ")
		}
	}
	page.WriteString("|\n")
	for i, row := range t.rows {
		isTotal := i >= len(t.rows)-t.totals
		for _, cell := range row {
			text := escapeMarkdown(cell.text)
			if isTotal && text != "" {
				text = "**" + text + "**"
			}
			fmt.Fprintf(page, "| %s ", text)
		}
		page.WriteString("|\n")
	}
}

// escapeMarkdown returns the text so that Markdown shows it as it is, in running text and
// in tables. An underscore within a word is no mark and stays, for legibility.
func escapeMarkdown(text string) string {
	runes := []rune(printable(text))
	var escaped strings.Builder
	for i, r := range runes {
		switch {
		case r == '<':
			escaped.WriteString("&lt;")
			continue
		case r == '&':
			escaped.WriteString("&amp;")
			continue
		case strings.ContainsRune("\\`*[]|~$#", r),
			r == '_' && !(i > 0 && i+1 < len(runes) && isWordRune(runes[i-1]) && isWordRune(runes[i+1])):
			escaped.WriteByte('\\')
		}
		escaped.WriteRune(r)
	}
	return escaped.String()
}

func isWordRune(r rune) bool { return unicode.IsLetter(r) || unicode.IsDigit(r) }
