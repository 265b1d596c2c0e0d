package readers

import (
	"math"
	"slices"
	"sync"

	"strainledger/mesh"
)

// A polyhedron's faces are a stream of whole numbers: how many faces, and for each
// the number of its nodes and the nodes. Legacy files hold the stream in place of the
// nodes; XML files have it beside them, since version 2.3 in another layout.

// A face has at least three nodes and a polyhedron at least four faces.
const (
	leastNodes = 3
	leastFaces = 4
)

// stream appends the faces of one cell to the cursor's and, if asked, its nodes, each
// once in the order in which they occur.
func (c *cursor) stream(entries []int64, points int64, addNodes bool) error {
	if len(entries) == 0 || entries[0] < leastFaces || entries[0] > int64(len(entries)) {
		return malformed("found a face stream of %d entries that announces %d faces, need at least %d faces and their nodes",
			len(entries), first(entries), leastFaces)
	}
	begin := len(c.nodes)
	at := 1
	for face := range entries[0] {
		if at >= len(entries) {
			return malformed("found the end of the face stream after %d of %d faces", face, entries[0])
		}
		nodes := entries[at]
		if nodes < leastNodes || nodes > int64(len(entries)-at-1) {
			return malformed("found face %d with %d nodes and %d entries behind it, need at least %d nodes", face, nodes, len(entries)-at-1, leastNodes)
		}
		for _, id := range entries[at+1 : at+1+int(nodes)] {
			if id < 0 || id >= points {
				return malformed("found point number %d on face %d, need 0 to %d", id, face, points-1)
			}
			if addNodes {
				c.nodes = append(c.nodes, int32(id))
			}
		}
		at += 1 + int(nodes)
	}
	if at != len(entries) {
		return malformed("found %d entries behind the last face, need none", len(entries)-at)
	}
	for _, entry := range entries {
		c.faces = append(c.faces, int32(entry))
	}
	if addNodes {
		c.nodes = distinct(c.nodes, begin, c.seen)
	}
	return nil
}

func first(entries []int64) int64 {
	if len(entries) == 0 {
		return 0
	}
	return entries[0]
}

// distinct leaves out the numbers from begin on that have occurred there before.
func distinct(nodes []int32, begin int, seen map[int32]bool) []int32 {
	clear(seen)
	kept := begin
	for _, node := range nodes[begin:] {
		if !seen[node] {
			seen[node] = true
			nodes[kept] = node
			kept++
		}
	}
	return nodes[:kept]
}

// endFaces closes a cell in the cursor's face positions.
func (c *cursor) endFaces() error {
	if len(c.faces) > math.MaxInt32 || len(c.nodes) > math.MaxInt32 {
		return unsupported("found more than 2³¹ entries in one chunk")
	}
	c.faceStart = append(c.faceStart, int32(len(c.faces)))
	return nil
}

// beginFaces prepares the cursor's face positions for a chunk with polyhedra.
func (c *cursor) beginFaces() {
	c.faces, c.faceStart = c.faces[:0], append(c.faceStart[:0], 0)
	if c.seen == nil {
		c.seen = map[int32]bool{}
	}
}

// faceArrays are the arrays of an XML piece that hold the faces of polyhedra, in one
// of two layouts.
type faceArrays struct {
	faces, ends *column // streams, and where that of each cell ends; -1 without one

	connectivity, faceEnds *column // nodes of all faces, and where each face ends
	cellFaces, cellEnds    *column // faces of all cells, and where each cell's end

	lock  sync.Mutex
	marks []int64 // marks[i]: end of the last stream before cell i × chunkCells
}

// columns returns the columns that are there.
func (f *faceArrays) columns() []*column {
	if f == nil {
		return nil
	}
	columns := []*column{f.faces, f.ends, f.connectivity, f.faceEnds, f.cellFaces, f.cellEnds}
	return slices.DeleteFunc(columns, func(a *column) bool { return a == nil })
}

// read appends the faces of the cells [low, high) of a piece.
func (f *faceArrays) read(c *cursor, p *piece, types []mesh.CellType, low, high int64) error {
	c.beginFaces()
	switch {
	case f != nil && f.ends != nil && f.faces != nil:
		return f.readStreams(c, p, types, low, high)
	case f != nil && f.cellEnds != nil && f.cellFaces != nil && f.faceEnds != nil && f.connectivity != nil:
		return f.readFaces(c, p, types, low, high)
	}
	cell := low + int64(slices.Index(types, mesh.Polyhedron))
	return p.cellError(nil, cell, malformed("found a polyhedron and no arrays of faces"))
}

// readStreams reads faces and faceoffsets.
func (f *faceArrays) readStreams(c *cursor, p *piece, types []mesh.CellType, low, high int64) error {
	start, err := f.seek(c, low)
	if err != nil {
		return err
	}
	ends, err := f.ends.wholes(c, low, high)
	if err != nil {
		return err
	}
	for i, cellType := range types {
		end := ends[i]
		if cellType == mesh.Polyhedron {
			if end < start {
				return p.cellError(f.ends, low+int64(i), malformed("found the end of the faces at %d, need %d or more", end, start))
			}
			entries, err := f.faces.near(c, start, end)
			if err != nil {
				return p.cellError(f.faces, low+int64(i), reasonOf(err))
			}
			if err := c.stream(entries, p.pointCount, false); err != nil {
				return p.cellError(f.faces, low+int64(i), err)
			}
		}
		if end >= 0 {
			start = end
		}
		if err := c.endFaces(); err != nil {
			return p.cellError(f.faces, low+int64(i), err)
		}
	}
	return nil
}

// seek returns where the stream of a cell begins: at the last end before it.
func (f *faceArrays) seek(c *cursor, cell int64) (int64, error) {
	f.lock.Lock()
	defer f.lock.Unlock()
	if f.marks == nil {
		f.marks = []int64{0}
	}
	mark := min(cell/chunkCells, int64(len(f.marks)-1))
	place := f.marks[mark]
	for at := mark * chunkCells; at < cell; at += chunkCells {
		ends, err := f.ends.wholes(c, at, min(cell, at+chunkCells))
		if err != nil {
			return 0, err
		}
		for _, end := range ends {
			if end >= 0 {
				place = end
			}
		}
		if len(ends) == chunkCells && at+chunkCells == int64(len(f.marks))*chunkCells {
			f.marks = append(f.marks, place)
		}
	}
	return place, nil
}

// readFaces reads the layout of version 2.3, in which cells list numbers of faces.
func (f *faceArrays) readFaces(c *cursor, p *piece, types []mesh.CellType, low, high int64) error {
	from := max(0, low-1)
	ends, err := f.cellEnds.wholes(c, from, high)
	if err != nil {
		return err
	}
	start := int64(0)
	if low > 0 {
		start, ends = ends[0], ends[1:]
	}
	for i, end := range ends {
		if types[i] == mesh.Polyhedron {
			if start < 0 || end < start || end-start > math.MaxInt32 {
				return p.cellError(f.cellEnds, low+int64(i), malformed("found the end of the faces at %d, need %d or more", end, start))
			}
			if err := f.cell(c, p, start, end); err != nil {
				return p.cellError(f.cellFaces, low+int64(i), reasonOf(err))
			}
		}
		start = end
		if err := c.endFaces(); err != nil {
			return p.cellError(f.cellFaces, low+int64(i), err)
		}
	}
	return nil
}

// cell appends the stream of a cell whose faces are listed in [start, end).
func (f *faceArrays) cell(c *cursor, p *piece, start, end int64) error {
	numbers, err := f.cellFaces.near(c, start, end)
	if err != nil {
		return err
	}
	stream := append(c.list[:0], int64(len(numbers)))
	for _, face := range numbers {
		if face < 0 || face >= f.faceEnds.Tuples {
			return malformed("found face %d, need 0 to %d", face, f.faceEnds.Tuples-1)
		}
		ends, err := f.faceEnds.near(c, max(0, face-1), face+1)
		if err != nil {
			return err
		}
		begin := int64(0)
		if face > 0 {
			begin = ends[0]
		}
		behind := ends[len(ends)-1]
		if begin < 0 || behind < begin || behind-begin > math.MaxInt32 {
			return malformed("found the end of face %d at %d, need %d or more", face, behind, begin)
		}
		nodes, err := f.connectivity.near(c, begin, behind)
		if err != nil {
			return err
		}
		stream = append(append(stream, int64(len(nodes))), nodes...)
	}
	c.list = stream
	return c.stream(stream, p.pointCount, false)
}
