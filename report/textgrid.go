package report

import (
	"fmt"
	"strings"
)

// How tables stand in the text report.
const (
	indent       = "  "
	gap          = 2  // columns between columns
	lowHeading   = 2  // lines of a heading where there is room
	highHeading  = 4  // and where there is none
	narrowName   = 8  // a shortened name keeps this many runes
	narrowProse  = 28 // wrapped text keeps this many
	widestSpread = 12 // wider columns of numbers are not aligned on the decimal point
)

// A textGrid is a table as a terminal shows it: texts that are printable, and the width
// of each column.
type textGrid struct {
	columns []column
	rows    [][]phrase
	widths  []int
}

// table writes the table in columns, or, where its numbers do not leave room for that,
// row by row.
func (p *textPage) table(t *table) {
	grid, hidden := newTextGrid(t)
	if grid.fit() {
		p.headings(grid)
		for i, row := range grid.rows {
			if t.totals > 0 && i == len(grid.rows)-t.totals {
				p.line(indent + strings.Repeat("─", grid.width()))
			}
			p.row(grid, row)
		}
	} else {
		p.records(grid)
	}
	if hidden > 0 {
		p.line(fmt.Sprintf("%s… and %d more", indent, hidden))
	}
}

// newTextGrid also returns how many rows a terminal is spared.
func newTextGrid(t *table) (grid *textGrid, hidden int) {
	grid = &textGrid{}
	rows := t.rows
	if t.terminalRows > 0 && len(rows) > t.terminalRows {
		rows, hidden = rows[:t.terminalRows], len(rows)-t.terminalRows
	}
	grid.rows = make([][]phrase, len(rows))
	for i, column := range t.columns {
		if column.filesOnly {
			continue
		}
		grid.columns = append(grid.columns, column)
		for r, row := range rows {
			grid.rows[r] = append(grid.rows[r], phrase{printable(row[i].text), row[i].tone})
		}
	}
	for i := range grid.columns {
		if grid.columns[i].kind == number {
			grid.alignPoints(i)
		}
	}
	return grid, hidden
}

// alignPoints pads the numbers of a column on the right so that their decimal points
// stand below each other, unless exponents or the spread of sizes make that hard to read.
func (g *textGrid) alignPoints(column int) {
	var before, after int
	for _, row := range g.rows {
		whole, fraction, _ := splitNumber(row[column].text)
		before, after = max(before, whole), max(after, fraction)
		if strings.Contains(row[column].text, "e") {
			return
		}
	}
	if before+after > widestSpread {
		return
	}
	for _, row := range g.rows {
		if _, fraction, isNumber := splitNumber(row[column].text); isNumber {
			row[column].text += strings.Repeat(" ", after-fraction)
		}
	}
}

// splitNumber counts the runes before the decimal point, and those from it on.
func splitNumber(text string) (whole, fraction int, isNumber bool) {
	if text == "" || text == missing {
		return 0, 0, false
	}
	point := strings.IndexByte(text, '.')
	if point < 0 {
		return len(text), 0, true
	}
	return point, len(text) - point, true
}

// fit sets the widths and reports whether the page is wide enough. What gives way first
// is wrapped text, then low headings, then the names.
func (g *textGrid) fit() bool {
	for height := lowHeading; height < highHeading; height++ {
		if g.measure(height); g.squeezeProse() <= 0 {
			return true
		}
	}
	g.measure(highHeading)
	return g.squeezeNames(g.squeezeProse())
}

// measure sets each width to what the column's texts take, below a heading of at most the
// given number of lines.
func (g *textGrid) measure(height int) {
	g.widths = make([]int, len(g.columns))
	for i, column := range g.columns {
		g.widths[i] = headingWidth(column, height)
		for _, row := range g.rows {
			width := runeCount(row[i].text)
			if column.kind == name || column.kind == prose {
				width = min(width, textWidth)
			}
			g.widths[i] = max(g.widths[i], width)
		}
	}
}

// headingWidth returns the least width for a heading of at most so many lines, or of as
// many as it has words. Headings of texts stand on one line while there is room.
func headingWidth(column column, height int) int {
	width := runeCount(column.unit)
	if column.kind != number && height < highHeading {
		return max(width, runeCount(column.heading))
	}
	for _, word := range strings.Fields(column.heading) {
		width = max(width, runeCount(word))
	}
	for width < runeCount(column.heading) && len(wrap(column.heading, width)) > height {
		width++
	}
	return width
}

// squeezeProse narrows the wrapped text and returns how much too wide the grid still is.
func (g *textGrid) squeezeProse() (excess int) {
	excess = g.width() - (textWidth - len(indent))
	last := len(g.columns) - 1
	if excess <= 0 || g.columns[last].kind != prose {
		return excess
	}
	spare := min(excess, max(0, g.widths[last]-narrowProse))
	g.widths[last] -= spare
	return excess - spare
}

// squeezeNames takes the excess from the widest names, and reports whether they had it.
func (g *textGrid) squeezeNames(excess int) bool {
	for ; excess > 0; excess-- {
		widest := -1
		for i, column := range g.columns {
			least := max(headingWidth(column, highHeading), narrowName)
			if column.kind == name && g.widths[i] > least && (widest < 0 || g.widths[i] > g.widths[widest]) {
				widest = i
			}
		}
		if widest < 0 {
			return false
		}
		g.widths[widest]--
	}
	return true
}

func (g *textGrid) width() int {
	total := gap * (len(g.widths) - 1)
	for _, width := range g.widths {
		total += width
	}
	return total
}

// headings writes the columns' headings, words stacked, and below them their units.
func (p *textPage) headings(g *textGrid) {
	height, hasUnits := 0, false
	stacks := make([][]string, len(g.columns))
	for i, column := range g.columns {
		if column.heading != "" {
			stacks[i] = wrap(column.heading, g.widths[i])
		}
		height = max(height, len(stacks[i]))
		hasUnits = hasUnits || column.unit != ""
	}
	for level := range height {
		row := make([]phrase, len(g.columns))
		for i, stack := range stacks {
			if above := height - len(stack); level >= above {
				row[i].text = stack[level-above]
			}
		}
		p.row(g, row)
	}
	if hasUnits {
		row := make([]phrase, len(g.columns))
		for i, column := range g.columns {
			row[i].text = column.unit
		}
		p.row(g, row)
	}
}

// row writes one row; wrapped text takes as many lines as it needs.
func (p *textPage) row(g *textGrid, row []phrase) {
	var line strings.Builder
	line.WriteString(indent)
	var below []string
	for i, column := range g.columns {
		if i > 0 {
			line.WriteString(strings.Repeat(" ", gap))
		}
		text := row[i].text
		switch column.kind {
		case name:
			text = shorten(text, g.widths[i])
		case prose:
			lines := wrap(text, g.widths[i])
			text, below = lines[0], lines[1:]
		}
		padding := strings.Repeat(" ", g.widths[i]-runeCount(text))
		text = p.paint(text, row[i].tone.code())
		if column.kind == number {
			line.WriteString(padding + text)
		} else {
			line.WriteString(text + padding)
		}
	}
	p.line(line.String())
	last := len(g.columns) - 1
	hanging := strings.Repeat(" ", len(indent)+g.width()-g.widths[last])
	for _, text := range below {
		p.line(hanging + p.paint(text, row[last].tone.code()))
	}
}

// records writes each row as a sentence of its own: heading, text, unit.
func (p *textPage) records(g *textGrid) {
	for _, row := range g.rows {
		var parts []string
		for i, column := range g.columns {
			text := strings.TrimSpace(row[i].text)
			if text == "" {
				continue
			}
			if column.kind == name {
				text = shorten(text, textWidth/3)
			}
			if column.unit != "" && text != missing {
				text += " " + column.unit
			}
			parts = append(parts, column.heading+" "+text)
		}
		for i, line := range wrap(strings.Join(parts, "; "), textWidth-2*len(indent)) {
			if i > 0 {
				line = indent + line
			}
			p.line(indent + line)
		}
	}
}
