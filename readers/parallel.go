package readers

import (
	"fmt"
	"slices"
	"strings"

	"strainledger/mesh"
)

// readParallel reads a file that lists the pieces of one data set, each a file of its
// own. What it declares of arrays is not believed: the pieces say what there is.
func (o *opener) readParallel(x *xmlFile, at branch) error {
	source := mesh.Source{Path: x.file.path, Bytes: x.file.bytes, Time: at.time}
	if _, err := o.fields(x, &source); err != nil {
		return err
	}
	o.model.Sources = append(o.model.Sources, source)
	set := o.newSet(at.name)
	if at.set != nil {
		return placedAt(x.file, x.root, malformed("found a parallel file as a piece, need a serial one"))
	}
	for _, e := range x.data.children {
		if e.name != "Piece" {
			continue
		}
		reference := e.attribute("Source")
		if reference == "" {
			continue // a part without cells
		}
		f, err := o.follow(x.file, reference)
		if err != nil {
			return placedAt(x.file, e, err)
		}
		if o.isRepeated(f, at) {
			continue
		}
		inside := branch{name: at.name, set: set, stack: at.stack, time: at.time, kind: strings.TrimPrefix(x.kind, "P")}
		if err := o.read(f, inside); err != nil {
			return err
		}
	}
	return o.agree(set)
}

// isRepeated reports whether a file is in the model already, with a remark. A file
// that is being read is not repeated but refers to itself.
func (o *opener) isRepeated(f *file, at branch) bool {
	clean := cleanPath(f)
	if !o.taken[clean] || slices.Contains(at.stack, clean) {
		return false
	}
	o.remark("repeated-piece", fmt.Sprintf("%s is listed more than once and counted once", f.path))
	return true
}

// agree makes the pieces of a set hold the same arrays: one that a piece lacks is left
// out of all, with a remark. Pieces without points or cells need not hold theirs.
func (o *opener) agree(set *pieceSet) error {
	for _, on := range []mesh.Location{mesh.OnPoint, mesh.OnCell} {
		full := o.withTuples(set, on)
		holders := map[string][]*column{}
		var names []string
		for _, p := range full {
			for _, a := range p.arrays {
				if a.On == on {
					if holders[a.Name] == nil {
						names = append(names, a.Name)
					}
					holders[a.Name] = append(holders[a.Name], a)
				}
			}
		}
		for _, name := range names {
			if len(holders[name]) < len(full) {
				o.leaveOut(set, full, on, name)
				continue
			}
			for _, a := range holders[name][1:] {
				if first := holders[name][0]; a.Components != first.Components {
					return a.fail(malformed("found %d components here and %d in %s, need the same in all pieces", a.Components, first.Components, first.file.path))
				}
			}
		}
	}
	return nil
}

// withTuples returns the pieces of a set that have points or cells.
func (o *opener) withTuples(set *pieceSet, on mesh.Location) []*piece {
	var full []*piece
	for _, i := range set.pieces {
		p := o.pieces[i]
		if on == mesh.OnPoint && p.pointCount > 0 || on == mesh.OnCell && p.cellCount > 0 {
			full = append(full, p)
		}
	}
	return full
}

// leaveOut removes an array that is not in every piece.
func (o *opener) leaveOut(set *pieceSet, full []*piece, on mesh.Location, name string) {
	without := ""
	isNamed := func(a *column) bool { return a.On == on && a.Name == name }
	for _, p := range full {
		if !slices.ContainsFunc(p.arrays, isNamed) {
			without = p.file.path
			break
		}
	}
	for _, i := range set.pieces {
		p := o.pieces[i]
		p.arrays = slices.DeleteFunc(p.arrays, isNamed)
		if p.weights == name && on == mesh.OnPoint {
			p.weights = ""
		}
	}
	o.remark("array-not-everywhere", fmt.Sprintf("%s array %q is not in %s and is left out of the whole", on, name, without))
}
