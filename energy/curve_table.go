package energy

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// A table says where in a file the columns stand.
type table struct {
	delimiter      rune // ' ' stands for runs of blanks
	strain, stress column
	width          int // columns in the headings, or in the first row without headings
	first          int // number of the first line of data
	isTrue         bool

	pointLine, commaLine int // the first lines with a decimal point, with a decimal comma
}

// A column is one of the two wanted.
type column struct {
	ColumnRead
	quantity string // strain | stress
	index    int    // from 0; -1 not found
	stated   string // heading or number; "" to be found
}

// findTable finds delimiter, headings and first line of data: by the first delimiter
// with which the wanted columns are found.
func findTable(lines []textLine, reading *CurveReading) (*table, error) {
	var first error
	for _, delimiter := range []rune{'\t', ';', ',', ' '} {
		t := newTable(delimiter, reading)
		found, err := t.findHeadings(lines, reading)
		if !found && err == nil {
			found, err = t.findNumbers(lines, reading)
		}
		if found {
			return t, err
		}
		if first == nil {
			first = err
		}
	}
	if first == nil {
		first = &CurveError{Err: errors.New("no table of strain and stress: want headings that name them, or two columns of numbers")}
	}
	return nil, first
}

// newTable returns a table of which only the columns stated by number are known.
func newTable(delimiter rune, reading *CurveReading) *table {
	t := &table{
		delimiter: delimiter,
		strain:    column{quantity: "strain", index: -1, stated: reading.StrainColumn},
		stress:    column{quantity: "stress", index: -1, stated: reading.StressColumn},
	}
	for _, c := range []*column{&t.strain, &t.stress} {
		if number, err := strconv.Atoi(c.stated); err == nil {
			c.index = number - 1
		}
	}
	return t
}

// isNumbered reports whether both columns are known by number.
func (t *table) isNumbered() bool { return t.strain.index >= 0 && t.stress.index >= 0 }

// findHeadings looks for the line that names the columns without a number, and for the
// units, there or below. It returns found with an error about headings that it found.
func (t *table) findHeadings(lines []textLine, reading *CurveReading) (bool, error) {
	if t.isNumbered() {
		return false, nil
	}
	for i, line := range lines {
		fields := split(line.text, t.delimiter)
		if len(fields) < 2 || t.isData(fields) {
			continue
		}
		headings := headingsOf(fields)
		strain, stress := t.strain, t.stress
		err := errors.Join(strain.choose(headings, reading.True), stress.choose(headings, reading.True))
		if strain.index < 0 || stress.index < 0 || strain.index == stress.index {
			continue
		}
		if err != nil {
			return true, lineError(line.number, "%w", err)
		}
		t.strain, t.stress, t.first, t.width = strain, stress, i+1, len(headings)
		if t.first < len(lines) && t.takeUnits(headings, split(lines[t.first].text, t.delimiter)) {
			t.first++
		}
		return true, t.settle(line.number, headings, reading)
	}
	return false, nil
}

// choose finds the column by its stated heading, or by what the headings name. Of
// several those are preferred that are true, or not, as wanted. With headings that fit
// more than once the column is the first of them, with an error.
func (c *column) choose(headings []heading, wantTrue bool) error {
	if c.index >= 0 {
		return nil
	}
	var fitting []int
	for i, h := range headings {
		if c.stated == "" && h.serves(c.quantity) || c.stated != "" && h.is(c.stated) {
			fitting = append(fitting, i)
		}
	}
	asWanted := slices.DeleteFunc(slices.Clone(fitting), func(i int) bool { return headings[i].isTrue() != wantTrue })
	if len(asWanted) > 0 {
		fitting = asWanted
	}
	if len(fitting) == 0 {
		return nil
	}
	c.index = fitting[0]
	if len(fitting) > 1 {
		return fmt.Errorf("%q and %q could both be the %s: state the heading or the number of one",
			headings[fitting[0]].text, headings[fitting[1]].text, c.quantity)
	}
	return nil
}

// takeUnits puts the units of the line below into the headings, where that line holds
// units in both columns and nothing else there.
func (t *table) takeUnits(headings []heading, below []string) bool {
	units := map[int]string{}
	for _, c := range []*column{&t.strain, &t.stress} {
		if c.index >= len(below) || c.index >= len(headings) {
			return false
		}
		unit := unitKey(strings.Trim(below[c.index], "()[] "))
		if _, err := parseNumber(unit); err == nil {
			return false
		}
		if c.unitNames()[unit] == "" {
			return false
		}
		units[c.index] = unit
	}
	for index, unit := range units {
		headings[index].unit = unit
	}
	return true
}

// unitNames returns the units that the column may have, by the ways to write them.
func (c *column) unitNames() map[string]string {
	if c.quantity == "strain" {
		return strainNames
	}
	return stressNames
}

// settle records what the columns are: headings, whether they are true, and each unit
// from the call, else from the headings, else by default.
func (t *table) settle(line int, headings []heading, reading *CurveReading) error {
	var isTrue [2]bool
	for i, c := range []*column{&t.strain, &t.stress} {
		var h heading
		if c.index < len(headings) {
			h = headings[c.index]
		}
		isTrue[i] = h.isTrue()
		stated, otherwise := reading.StrainUnit, "ratio"
		if c == &t.stress {
			stated, otherwise = reading.StressUnit, reading.Stress
		}
		unit, known := c.unitNames()[h.unit]
		c.ColumnRead = ColumnRead{Column: c.index + 1, Heading: Text(h.text)}
		switch {
		case stated != "":
			c.Unit, c.DecidedBy = Text(stated), "call"
		case !known:
			return lineError(line, "column %q: the unit %q is not known: state the unit of the %s", h.text, h.unit, c.quantity)
		case unit != "":
			c.Unit, c.DecidedBy = Text(unit), "file"
		default:
			c.Unit, c.DecidedBy = Text(otherwise), "default"
		}
	}
	t.isTrue = reading.True || isTrue[0]
	if !reading.True && isTrue[0] != isTrue[1] {
		return lineError(line, "%q and %q do not go together: one is true, one is not; state the columns", t.strain.Heading, t.stress.Heading)
	}
	return nil
}

// findNumbers looks for the first line of numbers: in the numbered columns, or in two
// columns and no more.
func (t *table) findNumbers(lines []textLine, reading *CurveReading) (bool, error) {
	for i, line := range lines {
		fields := split(line.text, t.delimiter)
		if line.isComment || len(fields) < 2 || !t.isData(fields) {
			continue
		}
		if !t.isNumbered() {
			if named := t.strain.stated + t.stress.stated; named != "" {
				return false, lineError(line.number, "the numbers begin, and no line above has a column %q", named)
			}
			if len(fields) > 2 {
				return false, lineError(line.number, "%d columns, and no headings that name strain and stress: state the numbers of the two columns", len(fields))
			}
			t.strain.index, t.stress.index = 0, 1
		}
		t.first, t.width = i, len(fields)
		return true, t.settle(line.number, t.headingsAbove(lines), reading)
	}
	return false, nil
}

// headingsAbove returns what stands above the first line of data, for its units: headings
// in another language, or headings and a line of units.
func (t *table) headingsAbove(lines []textLine) []heading {
	headings, units := make([]heading, t.width), []string(nil)
	if at := t.first - 2; at >= 0 && !lines[at].isComment {
		copy(headings, headingsOf(split(lines[at].text, t.delimiter)))
	}
	if at := t.first - 1; at >= 0 && !lines[at].isComment {
		units = split(lines[at].text, t.delimiter)
	}
	if t.takeUnits(headings, units) {
		return headings
	}
	return headingsOf(units)
}

// isData reports whether a line holds numbers in the columns that count.
func (t *table) isData(fields []string) bool {
	if t.isNumbered() {
		if max(t.strain.index, t.stress.index) >= len(fields) {
			return false
		}
		fields = []string{fields[t.strain.index], fields[t.stress.index]}
	}
	for _, field := range fields {
		if _, err := parseNumber(field); err != nil {
			return false
		}
	}
	return true
}
