package readers

import (
	"fmt"
	"math"
	"strings"

	"strainledger/mesh"
)

// A legacyFile is a file of VTK's legacy format while its header is read. After the
// title it is a stream of words; in binary files the values between them are
// big-endian and begin behind the end of the line.
type legacyFile struct {
	file          *file
	window        *window
	cursor        *cursor
	limits        Limits
	isBinary      bool
	version       int // 100 × major + minor
	kind          string
	piece         *piece
	sections      map[string]*section // by keyword
	types         *column
	grid          legacyGrid
	fields        []*column
	texts         map[*column][]string // strings of field arrays
	textBytes     int64
	keywordOfData string             // section of point or cell data that is read
	marked        map[arrayName]bool // attributes that are given, by location and attribute
	ends          bool               // no more words
}

// readLegacy reads a legacy file as one block.
func (o *opener) readLegacy(f *file, at branch) error {
	if at.kind != "" {
		return f.fail(0, malformed("found a legacy file as a piece, need an XML file of type %s", at.kind))
	}
	l := &legacyFile{
		file: f, window: newWindow(&o.cursor.hand, f), cursor: o.cursor, limits: o.limits,
		piece: &piece{file: f}, sections: map[string]*section{}, texts: map[*column][]string{}, marked: map[arrayName]bool{},
	}
	if err := l.read(); err != nil {
		return err
	}
	source := f.source(l.format(), math.NaN())
	for _, a := range l.fields {
		if err := o.addField(a, &source, l.texts[a]); err != nil {
			return err
		}
	}
	if !math.IsNaN(at.time) {
		source.Time = at.time
	}
	set := o.newSet(at.name)
	if err := o.addPiece(l.piece, &source, set); err != nil {
		return placed(f.path, err)
	}
	o.shareFields([]*piece{l.piece}, l.fields, source.Cells)
	o.model.Sources = append(o.model.Sources, source)
	return nil
}

// format names the form of the file.
func (l *legacyFile) format() string {
	coding := "ascii"
	if l.isBinary {
		coding = "binary"
	}
	return fmt.Sprintf("VTK legacy %d.%d, %s", l.version/100, l.version%100, coding)
}

// read reads the whole header.
func (l *legacyFile) read() error {
	if err := l.begin(); err != nil {
		return err
	}
	if err := l.readKind(); err != nil {
		return err
	}
	keyword, err := l.geometry()
	if err != nil {
		return err
	}
	if err := l.closeGeometry(); err != nil {
		return err
	}
	if keyword != "" {
		return l.attributes(keyword)
	}
	return nil
}

// readKind reads DATASET and its kind, before which FIELD may stand.
func (l *legacyFile) readKind() error {
	for {
		keyword, err := l.keyword()
		if err != nil {
			return err
		}
		switch keyword {
		case "FIELD":
			if err := l.field(mesh.OnField, -1); err != nil {
				return err
			}
			continue
		case "DATASET":
		default:
			return l.window.fail(malformed("found %.40q, need DATASET", keyword))
		}
		if l.kind, err = l.keyword(); err != nil {
			return err
		}
		if legacyKinds[l.kind] == nil {
			return l.window.fail(unsupported("found data set of kind %.40q, need UNSTRUCTURED_GRID, POLYDATA, STRUCTURED_GRID, RECTILINEAR_GRID or STRUCTURED_POINTS", l.kind))
		}
		return nil
	}
}

// begin reads the three lines before the words.
func (l *legacyFile) begin() error {
	line, err := l.line()
	if err != nil {
		return err
	}
	version, ok := strings.CutPrefix(line, "# vtk DataFile Version ")
	if !ok {
		return l.file.fail(0, malformed("found %.40q, need \"# vtk DataFile Version\" and a number", line))
	}
	l.version = versionNumber(strings.TrimSpace(version), 300)
	if _, err := l.line(); err != nil {
		return err
	}
	coding, err := l.keyword()
	if err != nil {
		return err
	}
	l.file.text = l.window.offset()
	switch coding {
	case "ASCII":
		l.file.text = l.file.size
	case "BINARY":
		l.isBinary = true
	default:
		return l.window.fail(malformed("found %.40q, need ASCII or BINARY", coding))
	}
	return nil
}

// legacyKinds lists the keywords that describe the geometry of each kind of data set.
var legacyKinds = map[string]map[string]func(*legacyFile, string) error{
	"UNSTRUCTURED_GRID": {
		"POINTS": (*legacyFile).points, "CELLS": (*legacyFile).cells, "CELL_TYPES": (*legacyFile).cellTypes,
	},
	"POLYDATA": {
		"POINTS": (*legacyFile).points, "VERTICES": (*legacyFile).cells, "LINES": (*legacyFile).cells,
		"POLYGONS": (*legacyFile).cells, "TRIANGLE_STRIPS": (*legacyFile).cells,
	},
	"STRUCTURED_GRID": {
		"DIMENSIONS": (*legacyFile).dimensions, "POINTS": (*legacyFile).points, "BLANKING": (*legacyFile).blanking,
	},
	"RECTILINEAR_GRID": {
		"DIMENSIONS": (*legacyFile).dimensions, "X_COORDINATES": (*legacyFile).coordinates,
		"Y_COORDINATES": (*legacyFile).coordinates, "Z_COORDINATES": (*legacyFile).coordinates,
	},
	"STRUCTURED_POINTS": {
		"DIMENSIONS": (*legacyFile).dimensions, "ORIGIN": (*legacyFile).origin,
		"SPACING": (*legacyFile).spacing, "ASPECT_RATIO": (*legacyFile).spacing,
	},
}

// geometry reads the sections before point and cell data, in any order, and returns
// the keyword with which those begin.
func (l *legacyFile) geometry() (string, error) {
	for {
		keyword, err := l.keyword()
		if err != nil || l.ends {
			return "", err
		}
		read := legacyKinds[l.kind][keyword]
		switch {
		case keyword == "POINT_DATA" || keyword == "CELL_DATA":
			return keyword, nil
		case keyword == "FIELD":
			err = l.field(mesh.OnField, -1)
		case keyword == "METADATA":
			err = l.metadata(nil)
		case read != nil:
			err = read(l, keyword)
		default:
			err = l.window.fail(malformed("found %.40q, need a keyword of %s, FIELD, POINT_DATA or CELL_DATA", keyword, l.kind))
		}
		if err != nil {
			return "", err
		}
	}
}

// closeGeometry compares the parts with each other and makes the cells.
func (l *legacyFile) closeGeometry() error {
	l.piece.isOldOrder = l.version < 501
	switch l.kind {
	case "UNSTRUCTURED_GRID":
		return l.closeUnstructured()
	case "POLYDATA":
		l.closePolygons()
		return nil
	}
	return l.closeGrid()
}

func (l *legacyFile) closeUnstructured() error {
	p := l.piece
	if len(l.sections) == 0 && l.types == nil {
		return nil
	}
	s := l.sections["CELLS"]
	switch {
	case s == nil && l.types.Tuples > 0:
		return l.types.fail(malformed("found types of %d cells and no CELLS", l.types.Tuples))
	case s == nil || l.types == nil && s.count == 0:
		return nil
	case l.types == nil:
		return l.file.fail(l.window.offset(), malformed("found %d cells and no CELL_TYPES", s.count))
	case l.types.Tuples != s.count:
		return l.types.fail(malformed("found types of %d cells, need %d", l.types.Tuples, s.count))
	}
	s.types, s.hasStreams = l.types, true
	p.sections, p.cellCount = []section{*s}, s.count
	return nil
}

// closePolygons orders the cells as they are numbered: by kind.
func (l *legacyFile) closePolygons() {
	for rule, keyword := range []string{"VERTICES", "LINES", "POLYGONS", "TRIANGLE_STRIPS"} {
		if s := l.sections[keyword]; s != nil {
			s.first, s.rule = l.piece.cellCount, polygonRule(rule)
			l.piece.sections = append(l.piece.sections, *s)
			l.piece.cellCount += s.count
		}
	}
}

// points reads POINTS n type.
func (l *legacyFile) points(string) error {
	count, err := l.count("points")
	if err != nil {
		return err
	}
	if count > l.limits.Points {
		return l.window.fail(overLimit("found %d points; need at most the limit of %d", count, l.limits.Points))
	}
	l.piece.pointCount = count
	l.piece.points, err = l.array("POINTS", mesh.OnPoint, 3, count)
	return err
}

// cells reads a list of cells in the layout of the file's version: before 5 a list
// with the node count before each cell's nodes, from 5 on two arrays.
func (l *legacyFile) cells(keyword string) error {
	cells, err := l.count("cells")
	if err != nil {
		return err
	}
	entries, err := l.count("entries")
	if err != nil {
		return err
	}
	if l.sections[keyword] != nil {
		return l.window.fail(malformed("found %s twice", keyword))
	}
	s := &section{count: cells}
	l.sections[keyword] = s
	if l.version >= 500 {
		return l.cellArrays(s, cells, entries)
	}
	if cells > entries {
		return l.window.fail(malformed("found %d cells in %d entries, need an entry for each cell and each node", cells, entries))
	}
	a, err := l.values(keyword, mesh.OnCell, int32Number, 1, entries)
	s.list = &cellList{column: a}
	return err
}

// cellArrays reads OFFSETS and CONNECTIVITY.
func (l *legacyFile) cellArrays(s *section, offsets, entries int64) error {
	if s.count = max(0, offsets-1); offsets == 0 {
		return nil
	}
	s.isLed = true
	for _, part := range []struct {
		name  string
		count int64
		to    **column
	}{{"OFFSETS", offsets, &s.offsets}, {"CONNECTIVITY", entries, &s.connectivity}} {
		keyword, err := l.keyword()
		if err != nil {
			return err
		}
		if keyword != part.name {
			return l.window.fail(malformed("found %.40q, need %s", keyword, part.name))
		}
		if *part.to, err = l.array(part.name, mesh.OnCell, 1, part.count); err != nil {
			return err
		}
		if !(*part.to).number.isInteger() {
			return (*part.to).fail(malformed("found values of type %s, need whole numbers", (*part.to).number))
		}
	}
	return nil
}

func (l *legacyFile) cellTypes(string) error {
	count, err := l.count("cell types")
	if err != nil {
		return err
	}
	l.types, err = l.values("CELL_TYPES", mesh.OnCell, int32Number, 1, count)
	return err
}
