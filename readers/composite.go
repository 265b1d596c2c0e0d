package readers

import (
	"math"
	"strconv"
)

// readComposite reads a tree of files: multiblock data, a partitioned data set, or a
// collection of those. Each file is a block, named by the names on the way to it with
// slashes between; what has no name is called by its index.
func (o *opener) readComposite(x *xmlFile, at branch) error {
	source := x.file.source(x.format(), math.NaN())
	if _, err := o.fields(x, &source); err != nil {
		return err
	}
	if !math.IsNaN(at.time) {
		source.Time = at.time
	}
	o.model.Sources = append(o.model.Sources, source)
	if at.set != nil {
		return placedAt(x.file, x.root, malformed("found a composite file as a piece, need a serial one"))
	}
	if len(at.stack) == 1 { // names begin inside the file that the call names
		at.name = ""
	}
	at.time = source.Time
	return o.readBlocks(x, x.data, at)
}

// readBlocks reads the blocks inside an element.
func (o *opener) readBlocks(x *xmlFile, parent *element, at branch) error {
	position := 0
	for _, e := range parent.children {
		switch e.name {
		case "Block", "Piece", "Partitions", "DataSet":
		default:
			continue
		}
		name, err := blockName(e, position)
		if err != nil {
			return placedAt(x.file, e, err)
		}
		position++
		if e.name != "DataSet" {
			if err := o.readBlocks(x, e, at.below(name)); err != nil {
				return err
			}
			continue
		}
		reference := e.attribute("file")
		if reference == "" {
			continue // an empty block
		}
		f, err := o.follow(x.file, reference)
		if err != nil {
			return placedAt(x.file, e, err)
		}
		if o.isRepeated(f, at) {
			continue
		}
		if err := o.read(f, at.below(name)); err != nil {
			return err
		}
	}
	return nil
}

// blockName returns the name of a block, or its index in its parent.
func blockName(e *element, position int) (string, error) {
	index := strconv.Itoa(position)
	if text, ok := e.get("index"); ok {
		const most = 1 << 24
		value, err := strconv.Atoi(text)
		if err != nil || value < 0 || value > most {
			return "", attributeError(e, "index", text, "a number up to "+strconv.Itoa(most))
		}
		index = strconv.Itoa(value)
	}
	if name := e.attribute("name"); name != "" {
		return name, nil
	}
	return index, nil
}
