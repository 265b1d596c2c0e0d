package energy

import (
	"bufio"
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"
)

// A CurveError says what in the file of a test curve cannot be used. Line counts from
// 1; 0 where no line is to blame.
type CurveError struct {
	Path string
	Line int
	Err  error
}

func (e *CurveError) Error() string {
	if e.Line == 0 {
		return fmt.Sprintf("%s: %v", e.Path, e.Err)
	}
	return fmt.Sprintf("%s:%d: %v", e.Path, e.Line, e.Err)
}

// Unwrap returns the reason.
func (e *CurveError) Unwrap() error { return e.Err }

// CurveReading says how the file of a test curve is to be read. The zero value of a
// field leaves it to the file.
type CurveReading struct {
	StrainColumn string // heading, or number from 1
	StressColumn string
	StrainUnit   string // ratio | percent | microstrain; "": the heading's, else ratio
	StressUnit   string // MPa | Pa | kPa | GPa | psi | ksi; "": the heading's, else Stress
	True         bool   // true stress and strain, whatever the headings say
	Stress       string // unit that the curve is wanted in; "": the file's own
}

// A CurveRecord is the record of one uniaxial test: engineering stress against
// engineering strain, a ratio, which rises from point to point.
type CurveRecord struct {
	Path       string
	Points     []CurvePoint
	Lines      []int  // the line of each point
	StressUnit string // of Points; "" not known

	Strain, Stress ColumnRead
	IsTrue         bool // the file holds true stress and strain, which were converted
	Omitted        int  // points of a true curve past the ultimate stress, left out
}

// ColumnRead says what a column was taken for and why.
type ColumnRead struct {
	Column    int    `json:"column"` // from 1
	Heading   Text   `json:"heading"`
	Unit      Text   `json:"unit"`
	DecidedBy string `json:"decided_by"` // call | file | default: the unit's origin
}

const (
	// maxCurveLine bounds a line, in bytes: no row of a table is longer.
	maxCurveLine = 1 << 20
	// maxCurveNumber bounds a number, so that no product of two of them is infinite.
	maxCurveNumber = 1e100
)

// ReadCurve reads the record of a uniaxial test from a table in text form: UTF-8, or
// Latin-1 where it is not valid UTF-8; columns parted by tabs, semicolons, commas or
// blanks; fields may stand in quotes; decimal point, or decimal comma where commas do
// not part the columns. Lines above the headings, empty lines and lines that begin with
// #, ! or // are passed over; headings may themselves stand in such a line, and units
// in the line below them.
//
// Without headings a table of two columns is strain and stress, in this order. What is
// stated in the reading is obeyed. True curves are converted to engineering ones up to
// the ultimate stress.
//
// Strain must rise from row to row: unloading loops and repeated readings are refused.
// Errors are *CurveError, with the line where one is to blame, and *StudyError for a
// reading that cannot be.
func ReadCurve(source io.Reader, path string, reading CurveReading) (*CurveRecord, error) {
	if err := reading.check(); err != nil {
		return nil, err
	}
	lines, err := readLines(source, path)
	if err != nil {
		return nil, err
	}
	table, err := findTable(lines, &reading)
	if err != nil {
		return nil, withPath(err, path)
	}
	test, err := table.read(lines, &reading)
	if err != nil {
		return nil, withPath(err, path)
	}
	test.Path = path
	return test, nil
}

// check returns what of the reading cannot be, as a *StudyError.
func (r *CurveReading) check() error {
	if _, ok := strainUnits[r.StrainUnit]; !ok && r.StrainUnit != "" {
		return studyError("strain unit %q: want one of %s", r.StrainUnit, strings.Join(StrainUnits(), ", "))
	}
	for _, unit := range []string{r.StressUnit, r.Stress} {
		if _, ok := stressInPascals[unit]; !ok && unit != "" {
			return studyError("stress unit %q: want MPa, Pa, kPa, GPa, psi or ksi", unit)
		}
	}
	for _, column := range []string{r.StrainColumn, r.StressColumn} {
		if number, err := strconv.Atoi(column); err == nil && number < 1 {
			return studyError("column %d: columns are counted from 1", number)
		}
	}
	if r.StrainColumn == r.StressColumn && r.StrainColumn != "" {
		return studyError("column %s is to be both strain and stress", r.StrainColumn)
	}
	return nil
}

func withPath(err error, path string) error {
	var place *CurveError
	if errors.As(err, &place) {
		place.Path = path
	}
	return err
}

// lineError is a CurveError whose path is filled in later.
func lineError(line int, format string, arguments ...any) error {
	return &CurveError{Line: line, Err: fmt.Errorf(format, arguments...)}
}

// A textLine is one line that is not empty.
type textLine struct {
	number    int
	text      string
	isComment bool // the mark is cut off
}

// readLines reads all lines but the empty ones.
func readLines(source io.Reader, path string) ([]textLine, error) {
	var lines []textLine
	scanner := bufio.NewScanner(source)
	scanner.Buffer(nil, maxCurveLine)
	number := 0
	for scanner.Scan() {
		number++
		text := scanner.Bytes()
		if number == 1 {
			if bytes.HasPrefix(text, []byte("\xff\xfe")) || bytes.HasPrefix(text, []byte("\xfe\xff")) {
				return nil, &CurveError{path, number, errors.New("the text is UTF-16; save it as UTF-8")}
			}
			text = bytes.TrimPrefix(text, []byte("\ufeff"))
		}
		if bytes.IndexByte(text, 0) >= 0 {
			return nil, &CurveError{path, number, errors.New("a zero byte: this is no text file; export the curve as CSV")}
		}
		line := textLine{number: number, text: strings.TrimRight(decode(text), " \r")}
		for _, mark := range []string{"#", "!", "//"} {
			if rest, found := strings.CutPrefix(strings.TrimLeft(line.text, " \t"), mark); found {
				line.text, line.isComment = strings.TrimLeft(rest, "#! "), true
				break
			}
		}
		if strings.Trim(line.text, " \t;,\"") != "" {
			lines = append(lines, line)
		}
	}
	if err := scanner.Err(); errors.Is(err, bufio.ErrTooLong) {
		return nil, &CurveError{path, number + 1, fmt.Errorf("longer than %d bytes: this is no table of a curve", maxCurveLine)}
	} else if err != nil {
		if place := new(fs.PathError); errors.As(err, &place) {
			err = place.Err // which has no second path
		}
		return nil, &CurveError{path, 0, err}
	}
	return lines, nil
}

// decode returns text that is not valid UTF-8 as Latin-1, where test machines write µ
// and ² as one byte.
func decode(text []byte) string {
	if utf8.Valid(text) {
		return string(text)
	}
	runes := make([]rune, len(text))
	for i, b := range text {
		runes[i] = rune(b)
	}
	return string(runes)
}

// split returns the fields of a line, trimmed, without the empty ones at its end. The
// delimiter ' ' stands for runs of blanks.
func split(text string, delimiter rune) []string {
	var fields []string
	if delimiter == ' ' {
		for _, field := range strings.Fields(text) {
			if len(fields) > 0 && (field[0] == '(' || field[0] == '[') {
				fields[len(fields)-1] += " " + field // a heading's unit
				continue
			}
			fields = append(fields, field)
		}
		return fields
	}
	start, isQuoted := 0, false
	for i, letter := range text {
		switch {
		case letter == '"':
			isQuoted = !isQuoted
		case letter == delimiter && !isQuoted:
			fields = append(fields, text[start:i])
			start = i + 1
		}
	}
	fields = append(fields, text[start:])
	for i, field := range fields {
		fields[i] = strings.Trim(strings.TrimSpace(field), "\"")
	}
	for len(fields) > 0 && fields[len(fields)-1] == "" {
		fields = fields[:len(fields)-1]
	}
	return fields
}

// parseNumber reads a decimal number with a point or a comma.
func parseNumber(field string) (float64, error) {
	text := field
	if strings.Count(field, ",") == 1 {
		text = strings.Replace(field, ",", ".", 1)
	}
	if strings.Trim(text, "0123456789+-.eE") != "" { // no hexadecimal numbers, no words
		return 0, fmt.Errorf("%q is no number", field)
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, fmt.Errorf("%q is no number", field)
	}
	if math.Abs(value) > maxCurveNumber {
		return 0, fmt.Errorf("%q is too large, must be below %g", field, maxCurveNumber)
	}
	return value, nil
}

// read turns the lines of the table into a test.
func (t *table) read(lines []textLine, reading *CurveReading) (*CurveRecord, error) {
	test := &CurveRecord{StressUnit: string(t.stress.Unit), IsTrue: t.isTrue, Strain: t.strain.ColumnRead, Stress: t.stress.ColumnRead}
	strainFactor, stressFactor := strainUnits[string(t.strain.Unit)], 1.0
	if reading.Stress != "" {
		test.StressUnit = reading.Stress
		stressFactor = stressInPascals[string(t.stress.Unit)] / stressInPascals[reading.Stress]
	}
	for _, line := range lines[t.first:] {
		if line.isComment {
			continue
		}
		p, err := t.point(line)
		if err != nil {
			return nil, err
		}
		p.Strain *= strainFactor
		p.Stress *= stressFactor
		if t.isTrue {
			p = p.Engineering()
		}
		if !isFinite(p.Strain, p.Stress) {
			return nil, lineError(line.number, "strain %g, stress %g: must be finite", p.Strain, p.Stress)
		}
		if n := len(test.Points); n > 0 && !(p.Strain > test.Points[n-1].Strain) {
			return nil, notRising(test, p, line.number)
		}
		test.Points = append(test.Points, p)
		test.Lines = append(test.Lines, line.number)
	}
	if t.isTrue {
		test.cutAtUltimate()
	}
	if len(test.Points) < 2 {
		return nil, &CurveError{Err: fmt.Errorf("a curve needs at least 2 points, found %d", len(test.Points))}
	}
	return test, nil
}

// point returns strain and stress of a line, in the file's units.
func (t *table) point(line textLine) (CurvePoint, error) {
	fields := split(line.text, t.delimiter)
	if len(fields) > t.width {
		return CurvePoint{}, lineError(line.number, "%d fields in a table of %d columns (decimal commas need semicolons, tabs or quotes)", len(fields), t.width)
	}
	var values [2]float64
	for i, c := range []*column{&t.strain, &t.stress} {
		if c.index >= len(fields) || fields[c.index] == "" {
			return CurvePoint{}, lineError(line.number, "column %d, the %s, is empty", c.index+1, c.quantity)
		}
		field := fields[c.index]
		value, err := parseNumber(field)
		if err != nil {
			return CurvePoint{}, lineError(line.number, "%s in column %d: %w", c.quantity, c.index+1, err)
		}
		values[i] = value
		switch {
		case strings.Contains(field, ",") && t.commaLine == 0:
			t.commaLine = line.number
		case strings.Contains(field, ".") && t.pointLine == 0:
			t.pointLine = line.number
		}
	}
	if t.pointLine > 0 && t.commaLine > 0 {
		return CurvePoint{}, lineError(line.number, "a decimal point in line %d and a decimal comma in line %d: use one of them, and no marks between thousands", t.pointLine, t.commaLine)
	}
	return CurvePoint{values[0], values[1]}, nil
}

// notRising says why a strain that does not rise is refused.
func notRising(test *CurveRecord, p CurvePoint, line int) error {
	n := len(test.Points)
	before := test.Points[n-1]
	if p.Strain == before.Strain {
		return lineError(line, "strain %g repeats that of line %d: strain must rise; leave one of the two", p.Strain, test.Lines[n-1])
	}
	if p.Strain < 0 && n == 1 {
		return lineError(line, "strain falls from %g to %g: a compression test is to be given with positive strain and stress", before.Strain, p.Strain)
	}
	return lineError(line, "strain falls from %g in line %d to %g: strain must rise; leave out the unloading loop, or sort out the noise of the record",
		before.Strain, test.Lines[n-1], p.Strain)
}

// cutAtUltimate leaves out what follows the largest engineering stress: there the
// conversion from true values no longer holds.
func (t *CurveRecord) cutAtUltimate() {
	ultimate := largestStress(t.Points)
	t.Omitted = len(t.Points) - 1 - ultimate
	t.Points, t.Lines = t.Points[:ultimate+1], t.Lines[:ultimate+1]
}

// largestStress returns the number of the first point with the largest stress.
func largestStress(points []CurvePoint) int {
	best, largest := 0, math.Inf(-1)
	for i, p := range points {
		if p.Stress > largest {
			best, largest = i, p.Stress
		}
	}
	return best
}
