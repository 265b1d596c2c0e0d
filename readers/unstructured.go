package readers

import (
	"strainledger/mesh"
)

// unstructured reads the description of one piece of an unstructured grid.
func (x *xmlFile) unstructured(e *element) (*piece, error) {
	points, err := count(e, "NumberOfPoints")
	if err != nil {
		return nil, err
	}
	cells, err := count(e, "NumberOfCells")
	if err != nil {
		return nil, err
	}
	if cells > maxCells {
		return nil, attributeError(e, "NumberOfCells", e.attribute("NumberOfCells"), "fewer cells")
	}
	p := &piece{file: x.file, pointCount: points, cellCount: cells, isOldOrder: x.version < 201}
	if err := x.pointsOf(p, e); err != nil {
		return nil, err
	}
	if err := x.arraysOf(p, e); err != nil {
		return nil, err
	}
	return p, x.cellsOf(p, e)
}

// pointsOf finds the coordinates, three to a point.
func (x *xmlFile) pointsOf(p *piece, e *element) error {
	if p.pointCount == 0 {
		return nil
	}
	if p.pointCount > x.limits.Points {
		return overLimit("found %d points in one piece; need at most the limit of %d", p.pointCount, x.limits.Points)
	}
	for _, child := range e.child("Points").arrays() {
		if !x.isSelected(child) {
			continue
		}
		a, err := x.column(child, mesh.OnPoint)
		if err != nil {
			return err
		}
		if a.Name == "" {
			a.Name = "Points"
		}
		if a.Components != 3 || !a.number.isFloat() && !a.number.isInteger() {
			return a.fail(malformed("found points as %s, need numbers with 3 components", a.describe()))
		}
		p.points = a
		return a.need(p.pointCount, "points")
	}
	return malformed("found %d points and no array in an element Points", p.pointCount)
}

// arraysOf finds point and cell arrays.
func (x *xmlFile) arraysOf(p *piece, e *element) error {
	for _, child := range e.children {
		on, tuples := mesh.OnPoint, p.pointCount
		switch child.name {
		case "PointData":
		case "CellData":
			on, tuples = mesh.OnCell, p.cellCount
		default:
			continue
		}
		columns, err := x.columns(child, on, tuples)
		if err != nil {
			return err
		}
		for _, a := range columns {
			if !p.keep(a, x.version < 200) {
				continue
			}
			for _, attribute := range attributes {
				if name, ok := child.get(attribute); ok && name == a.Name {
					a.Attributes = append(a.Attributes, attribute)
				}
			}
			if on == mesh.OnCell && a.Name == child.attribute("HigherOrderDegrees") && a.Components == 3 {
				p.degrees = a
			}
			if on == mesh.OnPoint && a.Name == child.attribute("RationalWeights") && a.Components == 1 {
				p.weights = a.Name
			}
		}
	}
	return nil
}

// keep takes a point or cell array into the piece, of one name the first, and notes
// those that mark ghosts. It reports whether it took the array.
func (p *piece) keep(a *column, hasLevels bool) bool {
	key := arrayName{a.On, a.Name}
	if p.known[key] {
		return false
	}
	if p.known == nil {
		p.known = map[arrayName]bool{}
	}
	p.known[key] = true
	if a.Name == "vtkGhostLevels" && hasLevels {
		a.Name, a.isLevel = "vtkGhostType", true
	}
	if a.Name == "vtkGhostType" && a.Components == 1 && a.number.isInteger() {
		switch {
		case a.On == mesh.OnCell:
			p.ghosts = a
		case p.grid != nil && !a.isLevel:
			p.grid.hiddenPoints = a
		}
	}
	p.arrays = append(p.arrays, a)
	return true
}

// cellsOf finds the arrays that make up the cells.
func (x *xmlFile) cellsOf(p *piece, e *element) error {
	if p.cellCount == 0 {
		return nil
	}
	cells := e.child("Cells")
	if cells == nil {
		return malformed("found %d cells and no element Cells", p.cellCount)
	}
	s := section{count: p.cellCount}
	var err error
	if s.types, err = x.cellColumn(cells, "types", p.cellCount); err != nil {
		return err
	}
	if err := x.connect(&s, cells, p.cellCount); err != nil {
		return err
	}
	p.sections = []section{s}
	return x.facesOf(p, cells)
}

// connect finds the two arrays that tell the nodes of cells.
func (x *xmlFile) connect(s *section, cells *element, count int64) error {
	var err error
	if s.offsets, err = x.cellColumn(cells, "offsets", count); err != nil {
		return err
	}
	if s.connectivity, err = x.cellColumn(cells, "connectivity", 0); err != nil {
		return err
	}
	s.isLed, err = x.isLed(s, count)
	return err
}

// isLed reports whether offsets tell where cells begin and not where they end: there
// is one more than cells, the first is 0 and the last is the length of connectivity.
func (x *xmlFile) isLed(s *section, count int64) (bool, error) {
	offsets, err := s.offsets.countTuples(x.cursor)
	if err != nil || offsets != count+1 {
		return false, err
	}
	first, err := s.offsets.wholes(x.cursor, 0, 1)
	if err != nil || first[0] != 0 {
		return false, err
	}
	last, err := s.offsets.wholes(x.cursor, count, count+1)
	if err != nil {
		return false, err
	}
	entries, err := s.connectivity.countTuples(x.cursor)
	return err == nil && last[0] == entries, err
}

// facesOf finds the faces of polyhedra in either layout.
func (x *xmlFile) facesOf(p *piece, cells *element) error {
	f := &faceArrays{}
	for _, part := range []struct {
		name   string
		tuples int64
		to     **column
	}{
		{"faces", 0, &f.faces}, {"faceoffsets", p.cellCount, &f.ends},
		{"face_connectivity", 0, &f.connectivity}, {"face_offsets", 0, &f.faceEnds},
		{"polyhedron_to_faces", 0, &f.cellFaces}, {"polyhedron_offsets", p.cellCount, &f.cellEnds},
	} {
		if !x.hasArray(cells, part.name) {
			continue
		}
		a, err := x.cellColumn(cells, part.name, part.tuples)
		if err != nil {
			return err
		}
		if part.tuples == 0 {
			if a.Tuples, err = a.countTuples(x.cursor); err != nil {
				return err
			}
		} else if a.form == emptyForm { // no polyhedra
			return nil
		}
		*part.to = a
		p.faces = f
	}
	return nil
}

func (x *xmlFile) hasArray(e *element, name string) bool {
	for _, child := range e.arrays() {
		if child.attribute("Name") == name && x.isSelected(child) {
			return true
		}
	}
	return false
}

// cellColumn finds one of the arrays of whole numbers that make up cells.
func (x *xmlFile) cellColumn(cells *element, name string, tuples int64) (*column, error) {
	for _, child := range cells.arrays() {
		if child.attribute("Name") != name || !x.isSelected(child) {
			continue
		}
		a, err := x.column(child, mesh.OnCell)
		if err != nil {
			return nil, err
		}
		if !a.number.isInteger() || a.Components != 1 {
			return nil, a.fail(malformed("found %s, need whole numbers with 1 component", a.describe()))
		}
		a.Name = name
		return a, a.need(tuples, "cells")
	}
	return nil, &Error{Path: x.file.path, Offset: cells.offset, Array: name, Err: malformed("found no such array in the element Cells"), file: x.file}
}

// arrays returns the array elements inside an element, which may be nil.
func (e *element) arrays() []*element {
	var arrays []*element
	if e != nil {
		for _, child := range e.children {
			if isArray(child) {
				arrays = append(arrays, child)
			}
		}
	}
	return arrays
}
