package readers

import (
	"math"
	"strings"

	"strainledger/mesh"
)

// VTK's library describes integration points by information keys of arrays: a cell
// array carries a DICTIONARY with one definition for each cell type, and a field array
// the name of the cell array that says where the values of each cell begin.

// schemeLimit is the largest number of nodes, and of points, of a definition.
const schemeLimit = 1000

// informationKey returns an information key of an array, or nil.
func informationKey(e *element, name string) *element {
	for _, child := range e.children {
		if child.name == "InformationKey" && child.attribute("name") == name && child.attribute("location") == "vtkQuadratureSchemeDefinition" {
			return child
		}
	}
	return nil
}

// informationText returns the text of an information key, "" without it.
func (x *xmlFile) informationText(e *element, name string) string {
	key := informationKey(e, name)
	if key == nil {
		return ""
	}
	text, _ := x.textOf(key)
	return strings.TrimSpace(text)
}

// addSchemes takes the definitions of a piece's cell arrays into the model, of one cell
// type the first.
func (o *opener) addSchemes(x *xmlFile, piece *element) error {
	for _, array := range piece.child("CellData").arrays() {
		key := informationKey(array, "DICTIONARY")
		if key == nil {
			continue
		}
		for _, e := range key.children {
			if e.name != "vtkQuadratureSchemeDefinition" {
				continue
			}
			scheme, err := x.scheme(e)
			if err != nil {
				return err
			}
			isKnown := false
			for _, other := range o.model.Schemes {
				isKnown = isKnown || other.Type == scheme.Type
			}
			if !isKnown {
				o.model.Schemes = append(o.model.Schemes, *scheme)
			}
		}
	}
	return nil
}

// scheme reads the definition for one cell type.
func (x *xmlFile) scheme(e *element) (*mesh.Scheme, error) {
	var counts [3]int64
	for i, name := range []string{"CellType", "NumberOfNodes", "NumberOfQuadraturePoints"} {
		child := e.child(name)
		if child == nil {
			return nil, placedAt(x.file, e, malformed("element %s: found no element %s", e.name, name))
		}
		var err error
		if counts[i], err = count(child, "value"); err == nil && counts[i] > schemeLimit {
			err = attributeError(child, "value", child.attribute("value"), "at most 1000")
		}
		if err != nil {
			return nil, placedAt(x.file, child, err)
		}
	}
	if counts[0] > math.MaxUint8 {
		return nil, placedAt(x.file, e, malformed("found cell type %d, need one of VTK's", counts[0]))
	}
	scheme := &mesh.Scheme{Type: mesh.CellType(counts[0]), Nodes: int(counts[1])}
	var err error
	if scheme.Shapes, err = x.numbersIn(e, "ShapeFunctionWeights", counts[1]*counts[2]); err != nil {
		return nil, err
	}
	scheme.Weights, err = x.numbersIn(e, "QuadratureWeights", counts[2])
	return scheme, err
}

// numbersIn reads the numbers inside a child of an element.
func (x *xmlFile) numbersIn(e *element, name string, numbers int64) ([]float64, error) {
	child := e.child(name)
	if child == nil {
		return nil, placedAt(x.file, e, malformed("element %s: found no element %s", e.name, name))
	}
	a := &column{Array: mesh.Array{Name: name, Components: 1}, file: x.file, number: float64Number, start: child.start}
	a.payload = payload{form: textForm, text: newIndex(x.file, child.start, child.end, true)}
	values := make([]float64, numbers)
	return values, a.valuesTo(x.cursor, 0, numbers, values)
}
