package readers

import (
	"math"
	"slices"

	"strainledger/mesh"
)

// A section is a run of cells of one piece that are stored in the same way. An
// unstructured grid has one, polygonal data have up to four.
type section struct {
	first, count int64 // cells of the piece
	connectivity *column
	offsets      *column   // where each cell ends in connectivity
	isLed        bool      // offsets begin with a 0 before the first cell's end
	list         *cellList // in place of connectivity and offsets
	hasStreams   bool      // polyhedra stand as face streams in place of their nodes
	types        *column   // nil: the rule tells the types
	rule         polygonRule
}

// chunkCells is the number of cells after which indexes keep a mark.
const chunkCells = 8192

// columns returns the columns that the section is made of.
func (s *section) columns() []*column {
	columns := []*column{s.types, s.offsets, s.connectivity}
	if s.list != nil {
		columns = append(columns, s.list.column)
	}
	return slices.DeleteFunc(columns, func(a *column) bool { return a == nil })
}

// cellError makes an error about one cell of a piece.
func (p *piece) cellError(a *column, cell int64, err error) error {
	err = &reason{kindOf(err), "cell " + formatCount(cell) + ": " + err.Error()}
	if a != nil {
		return a.fail(err)
	}
	return &Error{Path: p.file.path, Err: err}
}

// read appends the cells [low, high) of the section, counted in the section, to the
// cursor's buffers.
func (s *section) read(c *cursor, p *piece, low, high int64, noNodes bool) error {
	begin := len(c.types)
	if s.types != nil {
		if err := s.readTypes(c, p, low, high); err != nil || noNodes {
			return err
		}
	}
	types := c.types[begin:]
	if s.list != nil {
		return s.list.read(c, p, s, types, low, high)
	}
	first, err := s.readStarts(c, p, low, high)
	if err != nil {
		return err
	}
	switch {
	case s.types == nil && noNodes:
		return nil
	case s.hasStreams && slices.Contains(types, mesh.Polyhedron):
		return s.readStreams(c, p, types, first, low)
	}
	return s.readNodes(c, p, first, low, int(high-low))
}

// readTypes appends the types of the cells.
func (s *section) readTypes(c *cursor, p *piece, low, high int64) error {
	size := s.types.number.size()
	data, err := s.types.bytes(c, low*size, high*size)
	if err != nil {
		return err
	}
	if size == 1 {
		c.types = append(c.types, typeView(data)...)
		return nil
	}
	c.integers = grown(c.integers, int(high-low))
	s.types.number.integers(c.integers, data)
	for i, value := range c.integers {
		if value < 0 || value > math.MaxUint8 {
			return p.cellError(s.types, s.first+low+int64(i), malformed("found cell type %d, need one of VTK's", value))
		}
		c.types = append(c.types, mesh.CellType(value))
	}
	return nil
}

// readStarts appends where each cell of the section ends in the cursor's nodes, and
// the types where the rule tells them. It returns where the first cell begins in the
// section's connectivity; the cursor's integers hold that and the ends there.
func (s *section) readStarts(c *cursor, p *piece, low, high int64) (int64, error) {
	from := low - 1 // the end of the cell before
	if s.isLed {
		from = low
	}
	skip := max(0, -from) // there is none before the very first
	from += skip
	count := high - low + 1
	c.integers = grown(c.integers, int(count))
	size := s.offsets.number.size()
	data, err := s.offsets.bytes(c, from*size, (from+count-skip)*size)
	if err != nil {
		return 0, err
	}
	ends := c.integers
	ends[0] = 0
	s.offsets.number.integers(ends[skip:], data)
	first, origin := ends[0], int64(len(c.nodes))
	signs, previous := first, first
	for _, end := range ends[1:] {
		signs |= end - previous
		previous = end
		c.start = append(c.start, int32(origin+end-first))
	}
	if signs < 0 || origin+previous-first > math.MaxInt32 {
		return 0, s.startFault(p, ends, low)
	}
	if most := s.connectivity.most(); previous > most {
		return 0, p.cellError(s.offsets, s.first+high-1, malformed("found the end of the cell at %d, connectivity has room for %d entries", previous, most))
	}
	if s.types == nil {
		for i, end := range ends[1:] {
			c.types = append(c.types, s.rule.cellType(end-ends[i]))
		}
	}
	return first, nil
}

// startFault names the first cell whose end is before its beginning.
func (s *section) startFault(p *piece, ends []int64, low int64) error {
	if ends[0] < 0 {
		return p.cellError(s.offsets, s.first+low, malformed("found offset %d, need 0 or more", ends[0]))
	}
	for i, end := range ends[1:] {
		if end < ends[i] {
			return p.cellError(s.offsets, s.first+low+int64(i), malformed("found offset %d after %d, need offsets that do not fall", end, ends[i]))
		}
	}
	return p.cellError(s.offsets, s.first+low, unsupported("found %d entries in %d cells, need fewer than 2³¹", ends[len(ends)-1]-ends[0], len(ends)-1))
}

// readNodes appends the point numbers of the cells whose starts were appended last.
func (s *section) readNodes(c *cursor, p *piece, first, low int64, cells int) error {
	begin := len(c.nodes)
	end := int(c.start[len(c.start)-1])
	size := s.connectivity.number.size()
	data, err := s.connectivity.bytes(c, first*size, (first+int64(end-begin))*size)
	if err != nil {
		return err
	}
	c.nodes = extended(c.nodes, end-begin)
	if s.connectivity.number.nodes(c.nodes[begin:], data, p.pointCount) {
		return nil
	}
	ids := grown(c.list, end-begin)
	s.connectivity.number.integers(ids, data)
	starts := c.start[len(c.start)-1-cells:]
	for i := range cells {
		for _, id := range ids[int(starts[i])-begin : int(starts[i+1])-begin] {
			if id < 0 || id >= p.pointCount {
				return p.cellError(s.connectivity, s.first+low+int64(i), p.nodeFault(id))
			}
		}
	}
	return s.connectivity.fail(malformed("found a point number that is out of range"))
}

// nodeFault says which number is no point of the piece.
func (p *piece) nodeFault(id int64) error {
	if p.pointCount == 0 {
		return malformed("found point number %d in a piece without points", id)
	}
	return malformed("found point number %d, need 0 to %d", id, p.pointCount-1)
}

// readStreams appends nodes and faces of cells among which there are polyhedra, and
// sets their starts anew, for the nodes are fewer than the entries.
func (s *section) readStreams(c *cursor, p *piece, types []mesh.CellType, first, low int64) error {
	ends := c.integers
	entries, err := s.connectivity.wholes(c, first, ends[len(ends)-1])
	if err != nil {
		return err
	}
	c.beginFaces()
	c.start = c.start[:len(c.start)-len(types)]
	for i, cellType := range types {
		if err := c.addCell(cellType, entries[ends[i]-first:ends[i+1]-first], p); err != nil {
			return p.cellError(s.connectivity, s.first+low+int64(i), err)
		}
		if err := c.endFaces(); err != nil {
			return p.cellError(s.connectivity, s.first+low+int64(i), err)
		}
	}
	return nil
}

// addCell appends one cell whose entries are its nodes or, for a polyhedron, its face
// stream.
func (c *cursor) addCell(cellType mesh.CellType, entries []int64, p *piece) error {
	if cellType == mesh.Polyhedron {
		if err := c.stream(entries, p.pointCount, true); err != nil {
			return err
		}
	} else {
		for _, id := range entries {
			if id < 0 || id >= p.pointCount {
				return p.nodeFault(id)
			}
			c.nodes = append(c.nodes, int32(id))
		}
	}
	if len(c.nodes) > math.MaxInt32 {
		return unsupported("found more than 2³¹ entries in one chunk")
	}
	c.start = append(c.start, int32(len(c.nodes)))
	return nil
}

// grown returns a slice of n numbers; what it held is lost.
func grown(values []int64, n int) []int64 {
	if cap(values) < n {
		return make([]int64, n, n+n/4)
	}
	return values[:n]
}

// extended returns the slice with n more numbers.
func extended(values []int32, n int) []int32 {
	if cap(values) < len(values)+n {
		longer := make([]int32, len(values), len(values)+n+n/4)
		copy(longer, values)
		values = longer
	}
	return values[:len(values)+n]
}
