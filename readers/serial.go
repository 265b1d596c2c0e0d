package readers

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"strainledger/mesh"
)

// A pieceSet is the pieces of one data set: of one file, or of the files that a
// parallel file lists.
type pieceSet struct {
	block   int   // of the model
	pieces  []int // of the model
	lattice lattice
}

// newSet makes a set of pieces that is a block of the model.
func (o *opener) newSet(name string) *pieceSet {
	o.blockNames[name] = true
	o.model.Blocks = append(o.model.Blocks, name)
	return &pieceSet{block: len(o.model.Blocks) - 1}
}

// readSerial reads a data set whose pieces are all in this file.
func (o *opener) readSerial(x *xmlFile, at branch) error {
	source := x.file.source(x.format(), math.NaN())
	times, chosen, err := x.pickStep(o.options.Time)
	if err != nil {
		return placedAt(x.file, x.data, err)
	}
	o.model.Times = append(o.model.Times, times...)
	fields, err := o.fields(x, &source)
	if err != nil {
		return err
	}
	if len(times) > 0 {
		source.Time = chosen
	}
	if !math.IsNaN(at.time) {
		source.Time = at.time
	}
	set := at.set
	if set == nil {
		set = o.newSet(at.name)
	}
	from := len(o.pieces)
	for _, e := range x.data.children {
		if e.name != "Piece" {
			continue
		}
		p, err := x.piece(e)
		if err == nil {
			err = o.addPiece(p, &source, set)
		}
		if err == nil {
			err = o.addSchemes(x, e)
		}
		if err != nil {
			return placedAt(x.file, e, err)
		}
	}
	o.shareFields(o.pieces[from:], fields, source.Cells)
	o.model.Sources = append(o.model.Sources, source)
	if at.set == nil {
		return o.agree(set)
	}
	return nil
}

// piece reads the description of one piece.
func (x *xmlFile) piece(e *element) (*piece, error) {
	switch x.kind {
	case "UnstructuredGrid":
		return x.unstructured(e)
	case "PolyData":
		return x.polyData(e)
	}
	return x.structured(e)
}

// fields reads the description of the arrays of the data set as a whole.
func (o *opener) fields(x *xmlFile, source *mesh.Source) ([]*column, error) {
	var fields []*column
	for _, e := range append(x.data.child("FieldData").arrays(), x.root.child("FieldData").arrays()...) {
		if !x.isSelected(e) {
			continue
		}
		a, err := x.column(e, mesh.OnField)
		if err != nil {
			return nil, err
		}
		if err := x.countField(a, e); err != nil {
			return nil, err
		}
		a.Offsets = x.informationText(e, "QUADRATURE_OFFSET_ARRAY_NAME")
		if err := o.addField(a, source, x.strings(a)); err != nil {
			return nil, err
		}
		fields = append(fields, a)
	}
	return fields, nil
}

// countField sets the number of tuples of a field array, which the file declares or
// its values tell.
func (x *xmlFile) countField(a *column, e *element) error {
	text, ok := e.get("NumberOfTuples")
	if !ok {
		var err error
		a.Tuples, err = a.countTuples(x.cursor)
		return err
	}
	tuples, err := strconv.ParseInt(strings.TrimSpace(text), 10, 64)
	if err != nil || tuples < 0 {
		return placedAt(x.file, e, attributeError(e, "NumberOfTuples", text, "a count"))
	}
	return a.need(tuples, "tuples")
}

// addField takes a field array into the model, of one name the first, and the state's
// time and texts from it.
func (o *opener) addField(a *column, source *mesh.Source, strings []string) error {
	if !slices.ContainsFunc(source.Fields, func(other mesh.Array) bool { return other.Name == a.Name }) {
		source.Fields = append(source.Fields, o.list(a))
	}
	_, isKnown := o.fieldNames[a.Name]
	if !isKnown {
		o.fieldNames[a.Name] = len(o.model.Fields)
		o.model.Fields = append(o.model.Fields, a.Array)
	}
	if (a.Name == "TimeValue" || a.Name == "TIME") && a.Components == 1 && a.Tuples >= 1 && a.number.size() > 0 {
		values, err := a.values(o.cursor, 0, 1)
		if err != nil {
			return err
		}
		source.Time = values[0]
	}
	if isKnown {
		return nil
	}
	if a.number == int8Number || a.number == uint8Number {
		text, err := a.characters(o.cursor, o.limits)
		if err != nil {
			return err
		}
		strings = text
	}
	if strings != nil {
		o.model.Texts = append(o.model.Texts, mesh.Text{Name: a.Name, Strings: strings})
	}
	return nil
}

// shareFields gives the pieces of a file the field arrays that have some tuples for
// each of its cells: results at integration points. What further files hold of the same
// array adds to its tuples.
func (o *opener) shareFields(pieces []*piece, fields []*column, cells int64) {
	for _, a := range fields {
		if cells == 0 || a.number.size() == 0 || a.Tuples == 0 || a.Tuples%cells != 0 {
			continue
		}
		a.perCell = a.Tuples / cells
		for _, p := range pieces {
			p.fields = append(p.fields, a)
		}
		described := &o.model.Fields[o.fieldNames[a.Name]]
		if o.perCell[a.Name] == a.perCell && described.Components == a.Components {
			described.Tuples += a.Tuples
		} else if o.perCell[a.Name] == 0 {
			o.perCell[a.Name] = a.perCell
		}
	}
}
