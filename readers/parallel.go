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
	source := x.file.source(x.format(), at.time)
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
		isOwn := map[string]bool{}
		var names []string
		for _, p := range full {
			for _, a := range p.arrays {
				if a.On != on {
					continue
				}
				if holders[a.Name] == nil {
					names = append(names, a.Name)
				}
				holders[a.Name] = append(holders[a.Name], a)
				isOwn[a.Name] = isOwn[a.Name] || p.isOwn(a)
			}
		}
		partial := map[string]bool{}
		for _, name := range names {
			if len(holders[name]) == len(full) {
				if err := sameComponents(holders[name]); err != nil {
					return err
				}
				continue
			}
			partial[name] = true
			if !isOwn[name] { // ghost marks and the like are missing where there are none
				o.remarkPartial(full, on, name)
			}
		}
		if len(partial) > 0 {
			o.leaveOut(set, on, partial)
		}
	}
	return nil
}

// sameComponents refuses arrays of one name with different numbers of components.
func sameComponents(arrays []*column) error {
	first := arrays[0]
	for _, a := range arrays {
		if a.Components != first.Components {
			return a.fail(malformed("found %s here and %d in %s, need the same in all pieces",
				counted(a.Components, "component"), first.Components, first.file.path))
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

// remarkPartial says which array is not in which piece.
func (o *opener) remarkPartial(full []*piece, on mesh.Location, name string) {
	for _, p := range full {
		if !p.known[arrayName{on, name}] {
			o.remark("array-not-everywhere", fmt.Sprintf("%s array %q is not in %s and is left out of the whole", on, name, p.file.path))
			return
		}
	}
}

// leaveOut removes arrays from all pieces of a set.
func (o *opener) leaveOut(set *pieceSet, on mesh.Location, names map[string]bool) {
	for _, i := range set.pieces {
		p := o.pieces[i]
		isPartial := func(a *column) bool { return a.On == on && names[a.Name] }
		for _, a := range p.arrays {
			if isPartial(a) && p.isOwn(a) {
				p.unlisted = append(p.unlisted, a)
			}
		}
		p.arrays = slices.DeleteFunc(p.arrays, isPartial)
	}
}
