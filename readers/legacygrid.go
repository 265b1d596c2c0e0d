package readers

import (
	"strings"

	"strainledger/mesh"
)

// A legacyGrid is what a legacy file says of its lattice.
type legacyGrid struct {
	hasDimensions bool
	dimensions    [3]int64
	origin        [3]float64
	spacing       [3]float64
	hasSpacing    bool
	coordinates   [3]*column
	blanking      *column
}

// dimensions reads the number of points along each axis.
func (l *legacyFile) dimensions(string) error {
	for axis := range l.grid.dimensions {
		count, err := l.count("points along " + "xyz"[axis:axis+1])
		if err != nil {
			return err
		}
		l.grid.dimensions[axis] = min(count, 1<<40)
	}
	l.grid.hasDimensions = true
	return nil
}

func (l *legacyFile) origin(string) error { return l.numbers(l.grid.origin[:]) }

func (l *legacyFile) spacing(string) error {
	l.grid.hasSpacing = true
	return l.numbers(l.grid.spacing[:])
}

// numbers reads numbers as words.
func (l *legacyFile) numbers(to []float64) error {
	for i := range to {
		word, err := l.word()
		if err != nil {
			return err
		}
		if to[i], err = parseFloat(word); err != nil {
			return l.window.fail(err)
		}
	}
	return nil
}

// coordinates reads the coordinates along the axis of the keyword.
func (l *legacyFile) coordinates(keyword string) error {
	count, err := l.count("coordinates")
	if err != nil {
		return err
	}
	axis := strings.IndexByte("XYZ", keyword[0])
	l.grid.coordinates[axis], err = l.array(keyword, mesh.OnPoint, 1, count)
	return err
}

// blanking reads BLANKING n type: one number for each point, 0 where it is hidden.
func (l *legacyFile) blanking(string) error {
	count, err := l.count("blanking values")
	if err != nil {
		return err
	}
	l.grid.blanking, err = l.array("BLANKING", mesh.OnPoint, 1, count)
	return err
}

// closeGrid makes the lattice of a structured kind.
func (l *legacyFile) closeGrid() error {
	if !l.grid.hasDimensions {
		return l.window.fail(malformed("found no DIMENSIONS of the %s", l.kind))
	}
	var extent mesh.Extent
	for axis, points := range l.grid.dimensions {
		extent[2*axis+1] = points - 1
	}
	p := l.piece
	g, err := newGrid(extent, l.kind == "STRUCTURED_GRID", l.limits)
	if err != nil {
		return l.window.fail(err)
	}
	p.grid, p.cellCount = g, g.cellCount()
	if l.kind == "STRUCTURED_GRID" {
		if p.pointCount != g.pointCount() {
			return l.window.fail(malformed("found %d points, need %d by DIMENSIONS", p.pointCount, g.pointCount()))
		}
		return l.closeBlanking()
	}
	p.pointCount = g.pointCount()
	if l.kind == "RECTILINEAR_GRID" {
		for axis, a := range l.grid.coordinates {
			if a == nil || a.Tuples != g.points[axis] || a.number.size() == 0 {
				return l.window.fail(malformed("found no %d numbers of %c_COORDINATES as DIMENSIONS say", g.points[axis], "XYZ"[axis]))
			}
		}
		g.coordinates = l.grid.coordinates
	} else {
		g.origin, g.spacing = l.grid.origin, l.grid.spacing
		if !l.grid.hasSpacing {
			g.spacing = [3]float64{1, 1, 1}
		}
	}
	if err := g.checkArithmetic(l.file, l.limits); err != nil {
		return l.window.fail(err)
	}
	return nil
}

// closeBlanking takes the old way to hide points.
func (l *legacyFile) closeBlanking() error {
	a := l.grid.blanking
	if a == nil {
		return nil
	}
	if a.Tuples != l.piece.pointCount || !a.number.isInteger() {
		return a.fail(malformed("found %d values of type %s, need a whole number for each of %d points", a.Tuples, a.number, l.piece.pointCount))
	}
	l.piece.grid.hiddenPoints, l.piece.grid.hasVisible = a, true
	return nil
}
