package readers

import (
	"slices"
	"sync"

	"strainledger/mesh"
)

// A cellList is the legacy format's list of cells before version 5: for each cell the
// number of its entries and then the entries. Where a cell begins only a scan can
// tell; marks keeps the place of every 8,192nd cell, as far as was asked.
type cellList struct {
	column *column

	lock  sync.Mutex
	marks []int64 // marks[i]: position of cell i × chunkCells in the list
}

// listStep is how many entries are looked at together.
const listStep = 32 << 10

// A listWalk goes through a cell list cell by cell.
type listWalk struct {
	list   *cellList
	cursor *cursor
	piece  *piece
	place  int64   // position in the list
	buffer []int64 // entries in memory from there on
}

// next returns the entries of a cell, which are valid until the next call.
func (w *listWalk) next(cell int64) ([]int64, error) {
	if len(w.buffer) == 0 {
		if err := w.load(cell, 1); err != nil {
			return nil, err
		}
	}
	count := w.buffer[0]
	if count < 0 {
		return nil, w.piece.cellError(w.list.column, cell, malformed("found %d entries announced, need 0 or more", count))
	}
	if count >= int64(len(w.buffer)) {
		if err := w.load(cell, count+1); err != nil {
			return nil, err
		}
	}
	entries := w.buffer[1 : count+1]
	w.buffer = w.buffer[count+1:]
	w.place += count + 1
	return entries, nil
}

// load brings at least so many entries into memory.
func (w *listWalk) load(cell, need int64) error {
	column := w.list.column
	if left := column.Tuples - w.place; need > left {
		return w.piece.cellError(column, cell, malformed("found %d entries announced, %d left in the list", need-1, max(0, left-1)))
	}
	behind := min(w.place+max(need, listStep), column.Tuples)
	size := column.number.size()
	data, err := column.bytes(w.cursor, w.place*size, behind*size)
	if err != nil {
		return err
	}
	w.cursor.list = grown(w.cursor.list, int(behind-w.place))
	column.number.integers(w.cursor.list, data)
	w.buffer = w.cursor.list
	return nil
}

// seek moves to a cell.
func (w *listWalk) seek(cell int64) error {
	w.list.lock.Lock()
	defer w.list.lock.Unlock()
	if w.list.marks == nil {
		w.list.marks = []int64{0}
	}
	mark := min(cell/chunkCells, int64(len(w.list.marks)-1))
	w.place, w.buffer = w.list.marks[mark], nil
	for at := mark * chunkCells; at < cell; {
		if _, err := w.next(at); err != nil {
			return err
		}
		if at++; at == int64(len(w.list.marks))*chunkCells {
			w.list.marks = append(w.list.marks, w.place)
		}
	}
	return nil
}

// listPlace is where a cursor has stopped reading a list.
type listPlace struct {
	list        *cellList
	cell, place int64
}

// read appends the cells [low, high) of a section, with their types where the
// section's rule tells them.
func (l *cellList) read(c *cursor, p *piece, s *section, types []mesh.CellType, low, high int64) error {
	walk := listWalk{list: l, cursor: c, piece: p, place: c.stopped.place}
	if c.stopped.list != l || c.stopped.cell != low {
		if err := walk.seek(low); err != nil {
			return err
		}
	}
	hasFaces := slices.Contains(types, mesh.Polyhedron)
	if hasFaces {
		c.beginFaces()
	}
	for cell := low; cell < high; cell++ {
		entries, err := walk.next(cell)
		if err != nil {
			return err
		}
		var cellType mesh.CellType
		if s.types != nil {
			cellType = types[cell-low]
		} else {
			cellType = s.rule.cellType(int64(len(entries)))
			c.types = append(c.types, cellType)
		}
		err = c.addCell(cellType, entries, p)
		if err == nil && hasFaces {
			err = c.endFaces()
		}
		if err != nil {
			return p.cellError(l.column, s.first+cell, err)
		}
	}
	c.stopped = listPlace{l, high, walk.place}
	return nil
}
