package report

import (
	"slices"
	"strconv"
	"strings"
	"unicode"

	"strainledger/energy"
)

// A tone says how grave a phrase is. It repeats what the words say: colour may be off.
type tone int

const (
	plainTone tone = iota
	warningTone
	errorTone
)

// A phrase is a text with its tone: a cell of a table, or a sentence.
type phrase struct {
	text string
	tone tone
}

// A columnKind says how a column is laid out.
type columnKind int

const (
	word   columnKind = iota // left, never shortened
	name                     // left, shortened in the middle where space is short
	number                   // right, or on the decimal point; never shortened
	prose                    // left, wrapped; the last column only
)

// A column is one column of a table. Its unit is "" where it has none.
type column struct {
	kind      columnKind
	heading   string
	unit      string
	filesOnly bool // too wide for a terminal
}

// numbers returns the column for the numbers of a ledger key, headed as people know it.
func numbers(key string, units *energy.UnitLabels) column {
	quantity := quantityOf(key)
	unit := unitSigns.Replace(quantity.kind.unit(units))
	switch quantity.kind {
	case inShares:
		unit = "%"
	case inCounts, inRatios:
		unit = ""
	}
	return column{kind: number, heading: quantity.name, unit: unit}
}

// A table holds rows of phrases, one for each column.
type table struct {
	columns      []column
	rows         [][]phrase
	totals       int // the last rows that sum up the others
	terminalRows int // rows that a terminal shows; 0: all
}

// add appends a row with a text for each column.
func (t *table) add(texts ...string) {
	row := make([]phrase, len(texts))
	for i, text := range texts {
		row[i].text = text
	}
	t.rows = append(t.rows, row)
}

// mark sets the tone of one cell of the last row.
func (t *table) mark(column int, tone tone) { t.rows[len(t.rows)-1][column].tone = tone }

// dropIdle removes the columns that say nothing in any row.
func (t *table) dropIdle() {
	for i := len(t.columns) - 1; i >= 0; i-- {
		if t.isIdle(i) {
			t.drop(i)
		}
	}
}

// drop removes a column.
func (t *table) drop(column int) {
	t.columns = slices.Delete(t.columns, column, column+1)
	for i := range t.rows {
		t.rows[i] = slices.Delete(t.rows[i], column, column+1)
	}
}

// hasNoHeadings reports whether the table is a list of subjects and what is said of them.
func (t *table) hasNoHeadings() bool { return t.columns[0].heading == "" }

func (t *table) isIdle(column int) bool {
	for _, row := range t.rows {
		if text := row[column].text; text != "" && text != missing {
			return false
		}
	}
	return true
}

// lacks reports whether the mark for a missing number stands in the table.
func (t *table) lacks() bool {
	for _, row := range t.rows {
		for _, cell := range row {
			if cell.text == missing {
				return true
			}
		}
	}
	return false
}

// hasNoUnits reports whether the table has columns that need a unit of the study, and
// the study states none of them.
func (t *table) hasNoUnits() bool {
	needed := false
	for _, column := range t.columns {
		switch column.unit {
		case "", "%":
		case unitNotStated:
			needed = true
		default:
			return false
		}
	}
	return needed
}

// printable escapes what would not show, or would steer a terminal: control characters,
// line breaks, marks of writing direction, bytes that are no UTF-8.
func printable(text string) string {
	text = strings.ToValidUTF8(text, "\uFFFD")
	if strings.IndexFunc(text, isUnprintable) < 0 {
		return text
	}
	var escaped strings.Builder
	for _, r := range text {
		if isUnprintable(r) {
			escaped.WriteString(strings.Trim(strconv.QuoteRuneToASCII(r), "'"))
		} else {
			escaped.WriteRune(r)
		}
	}
	return escaped.String()
}

func isUnprintable(r rune) bool { return !unicode.IsPrint(r) }
