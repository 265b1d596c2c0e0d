package readers

import (
	"math"

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
	types        *column
}

// chunkCells is the number of cells after which indexes keep a mark.
const chunkCells = 8192

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
	types, err := s.cellTypes(c, p, low, high)
	if err != nil || noNodes {
		return err
	}
	if s.list != nil {
		return s.list.read(c, p, s, types, low, high)
	}
	first, err := s.starts(c, p, low, high)
	if err != nil {
		return err
	}
	return s.nodes(c, p, types, first, low)
}

// cellTypes appends the types of the cells and returns them.
func (s *section) cellTypes(c *cursor, p *piece, low, high int64) ([]mesh.CellType, error) {
	begin := len(c.types)
	data, err := s.types.bytes(c, low*s.types.number.size(), high*s.types.number.size())
	if err != nil {
		return nil, err
	}
	if s.types.number.size() == 1 {
		c.types = append(c.types, typeView(data)...)
		return c.types[begin:], nil
	}
	c.integers = grown(c.integers, int(high-low))
	s.types.number.integers(c.integers, data)
	for i, value := range c.integers {
		if value < 0 || value > math.MaxUint8 {
			return nil, p.cellError(s.types, s.first+low+int64(i), malformed("found cell type %d, need one of VTK's", value))
		}
		c.types = append(c.types, mesh.CellType(value))
	}
	return c.types[begin:], nil
}

// starts appends where each cell of the section ends in the cursor's nodes and
// returns where the first begins in the section's connectivity.
func (s *section) starts(c *cursor, p *piece, low, high int64) (int64, error) {
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
	signs := first
	previous := first
	for _, end := range ends[1:] {
		signs |= end - previous
		previous = end
		c.start = append(c.start, int32(origin+end-first))
	}
	if signs < 0 || origin+previous-first > math.MaxInt32 {
		return 0, s.startFault(p, ends, low)
	}
	if s.connectivity.form != textForm && previous*s.connectivity.number.size() > s.connectivity.length {
		return 0, p.cellError(s.offsets, s.first+high-1, malformed("found the end of the cell at %d, connectivity has %d entries",
			previous, s.connectivity.length/s.connectivity.number.size()))
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
		if end-ends[0] > math.MaxInt32 {
			break
		}
	}
	return p.cellError(s.offsets, s.first+low, unsupported("found %d entries in %d cells, need fewer than 2³¹", ends[len(ends)-1]-ends[0], len(ends)-1))
}

// nodes appends the point numbers of the cells whose ends have just been appended.
func (s *section) nodes(c *cursor, p *piece, types []mesh.CellType, first, low int64) error {
	begin := len(c.nodes)
	end := int(c.start[len(c.start)-1])
	c.nodes = extended(c.nodes, end-begin)
	size := s.connectivity.number.size()
	data, err := s.connectivity.bytes(c, first*size, (first+int64(end-begin))*size)
	if err != nil {
		return err
	}
	if s.connectivity.number.nodes(c.nodes[begin:], data, p.pointCount) {
		return nil
	}
	starts := c.start[len(c.start)-1-len(types):]
	for i := range types {
		for k := starts[i]; k < starts[i+1]; k++ {
			var id [1]int64
			s.connectivity.number.integers(id[:], data[(int64(k)-int64(begin))*size:])
			if id[0] < 0 || id[0] >= p.pointCount {
				return p.cellError(s.connectivity, s.first+low+int64(i), malformed("found point number %d, need 0 to %d", id[0], p.pointCount-1))
			}
		}
	}
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
