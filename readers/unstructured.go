package readers

import (
	"strainledger/mesh"
)

// unstructured reads the description of one piece of an unstructured grid.
func (x *xmlFile) unstructured(e *element) (*piece, error) {
	points, err := count(e, "NumberOfPoints")
	if err != nil {
		return nil, placedAt(x.file, e, err)
	}
	cells, err := count(e, "NumberOfCells")
	if err != nil {
		return nil, placedAt(x.file, e, err)
	}
	p := &piece{file: x.file, pointCount: points, cellCount: cells}
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
		return placedAt(x.file, e, overLimit("found %d points in one piece; need at most the limit of %d", p.pointCount, x.limits.Points))
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
	return placedAt(x.file, e, malformed("found %d points and no array in an element Points", p.pointCount))
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
			x.takeGhosts(p, a)
			if on == mesh.OnCell && a.Name == child.attribute("HigherOrderDegrees") && a.Components == 3 {
				p.degrees = a
			}
		}
		p.arrays = append(p.arrays, columns...)
	}
	return nil
}

// takeGhosts notes the array that marks ghost cells.
func (x *xmlFile) takeGhosts(p *piece, a *column) {
	isLevel := a.Name == "vtkGhostLevels" && x.version < 200
	if a.On == mesh.OnCell && a.Components == 1 && a.number.isInteger() && (isLevel || a.Name == "vtkGhostType") {
		p.ghosts, p.isLevel = a, isLevel
	}
}

// cellsOf finds the arrays that make up the cells.
func (x *xmlFile) cellsOf(p *piece, e *element) error {
	if p.cellCount == 0 {
		return nil
	}
	cells := e.child("Cells")
	if cells == nil {
		return placedAt(x.file, e, malformed("found %d cells and no element Cells", p.cellCount))
	}
	s := section{count: p.cellCount}
	var err error
	if s.types, err = x.cellColumn(cells, "types", p.cellCount); err != nil {
		return err
	}
	if s.offsets, err = x.cellColumn(cells, "offsets", p.cellCount); err != nil {
		return err
	}
	if s.connectivity, err = x.cellColumn(cells, "connectivity", 0); err != nil {
		return err
	}
	p.sections = []section{s}
	return nil
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
