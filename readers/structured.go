package readers

import (
	"strconv"
	"strings"

	"strainledger/mesh"
)

// structured reads the description of one piece of an image, a rectilinear grid or a
// structured grid.
func (x *xmlFile) structured(e *element) (*piece, error) {
	extent, err := extentOf(e, "Extent")
	if err != nil {
		return nil, err
	}
	if whole, err := extentOf(x.data, "WholeExtent"); err != nil {
		return nil, err
	} else if common, ok := extent.Meet(whole); extent.Count() > 0 && (!ok || common != extent) {
		return nil, attributeError(e, "Extent", e.attribute("Extent"), "a part of the whole extent "+x.data.attribute("WholeExtent"))
	}
	g, err := newGrid(extent, x.kind == "StructuredGrid", x.limits)
	if err != nil {
		return nil, err
	}
	p := &piece{file: x.file, pointCount: g.pointCount(), cellCount: g.cellCount(), grid: g}
	switch x.kind {
	case "ImageData":
		err = x.imageOf(g)
	case "RectilinearGrid":
		err = x.coordinatesOf(g, e)
	default:
		err = x.pointsOf(p, e)
	}
	if err == nil && x.kind != "StructuredGrid" {
		err = g.checkArithmetic(x.file, x.limits)
	}
	if err != nil {
		return nil, err
	}
	return p, x.arraysOf(p, e)
}

// extentOf reads the six numbers of an extent.
func extentOf(e *element, name string) (mesh.Extent, error) {
	var extent mesh.Extent
	text, ok := e.get(name)
	if !ok {
		return extent, malformed("element %s: found no attribute %s, need six numbers", e.name, name)
	}
	words := strings.Fields(text)
	if len(words) != len(extent) {
		return extent, attributeError(e, name, text, "six numbers")
	}
	for i, word := range words {
		value, err := strconv.ParseInt(word, 10, 64)
		if err != nil {
			return extent, attributeError(e, name, text, "six whole numbers")
		}
		extent[i] = value
	}
	for axis := range 3 {
		const most = 1 << 40
		if low, high := extent[2*axis], extent[2*axis+1]; low < -most || high > most || high < low-1 {
			return extent, attributeError(e, name, text, "a lowest and a highest index along each axis")
		}
	}
	return extent, nil
}

// imageOf reads the place and the spacing of an image.
func (x *xmlFile) imageOf(g *grid) error {
	g.spacing = [3]float64{1, 1, 1}
	for _, part := range []struct {
		name string
		to   []float64
	}{{"Origin", g.origin[:]}, {"Spacing", g.spacing[:]}, {"Direction", g.direction[:]}} {
		text, ok := x.data.get(part.name)
		if !ok {
			continue
		}
		words := strings.Fields(text)
		if len(words) != len(part.to) {
			return attributeError(x.data, part.name, text, strconv.Itoa(len(part.to))+" numbers")
		}
		for i, word := range words {
			value, err := parseFloat(word)
			if err != nil {
				return attributeError(x.data, part.name, text, "numbers")
			}
			part.to[i] = value
		}
	}
	return nil
}

// coordinatesOf finds the coordinates of a rectilinear grid along its axes.
func (x *xmlFile) coordinatesOf(g *grid, e *element) error {
	if g.pointCount() == 0 {
		return nil
	}
	var arrays []*element
	for _, child := range e.child("Coordinates").arrays() {
		if x.isSelected(child) {
			arrays = append(arrays, child)
		}
	}
	if len(arrays) != 3 {
		return malformed("found %d arrays of coordinates, need 3", len(arrays))
	}
	for axis, child := range arrays {
		a, err := x.column(child, mesh.OnPoint)
		if err != nil {
			return err
		}
		if a.Name == "" {
			a.Name = "coordinates along " + "xyz"[axis:axis+1]
		}
		if a.Components != 1 || a.number.size() == 0 {
			return a.fail(malformed("found %s, need numbers with 1 component", a.describe()))
		}
		if err := a.need(g.points[axis], "coordinates"); err != nil {
			return err
		}
		g.coordinates[axis] = a
	}
	return nil
}
