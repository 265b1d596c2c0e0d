package energy

import (
	"math"
	"math/bits"
	"slices"
)

// neighbours holds for each cell of a pool those that share a face with it, within one
// region: those of cell i are list[start[i]:start[i+1]].
type neighbours struct {
	start []int32
	list  []int32
}

func (n *neighbours) of(cell int32) []int32 { return n.list[n.start[cell]:n.start[cell+1]] }

// A matcher finds the dense cells of a pool that have equal faces. A face of a solid
// cell, or an edge of a plane one, is the set of its corners.
//
// It is a hash table whose buckets go by the lowest corner, for cells that are near each
// other in the pool have corners of near numbers: most of what is looked up is in the
// cache still.
type matcher struct {
	pool      *pool
	dimension int
	isApart   bool    // cells of different pieces are matched, not those of one
	buckets   []int32 // the face seen last, by its place in faces, from 1; 0: none
	faces     []seenFace
	mine      []int32 // corners of the face at hand
	theirs    []int32 // and of one that may be equal
	pairs     [][2]int32
}

// A seenFace is a face of a cell, by its number. Before is the place of the one in the
// same bucket that was seen before it.
type seenFace struct {
	cell, number, before int32
	mix                  uint32 // of its corners
}

// adjacency finds the neighbours among the dense cells, all of the given dimension.
// Within a piece faces are equal by the numbers of their corners, so that a crack between
// points of equal coordinates stays open; those of two pieces, in which a common point
// has two numbers, by the exact coordinates. The pool's cells lose the numbers of their
// nodes where there are several pieces.
func (p *pool) adjacency(dimension int) *neighbours {
	m := &matcher{pool: p, dimension: dimension}
	faces, pieces := 0, map[int32]bool{}
	for i := range p.cells {
		if c := &p.cells[i]; p.isDense(i) {
			faces += c.faceCount()
			pieces[c.piece] = true
		}
	}
	m.buckets = make([]int32, 1<<bits.Len(uint(faces)))
	m.faces = make([]seenFace, 0, faces)
	m.match()
	if len(pieces) > 1 {
		p.numberByPlace()
		m.isApart = true
		clear(m.buckets)
		m.faces = m.faces[:0]
		m.match()
	}
	return m.neighbours()
}

// numberByPlace numbers the nodes of the dense cells anew, so that those with equal
// coordinates have equal numbers.
func (p *pool) numberByPlace() {
	numberOf := map[Vector]int32{}
	for i := range p.cells {
		if !p.isDense(i) {
			continue
		}
		c := &p.cells[i]
		for k := range c.numbers {
			at := Vector(c.points[3*k:][:3])
			number, isKnown := numberOf[at] // 0 and -0 are equal as keys
			if !isKnown {
				number = int32(len(numberOf))
				numberOf[at] = number
			}
			c.numbers[k] = number
		}
	}
}

// match finds the pairs of cells that have equal faces.
func (m *matcher) match() {
	for i := range m.pool.cells {
		if !m.pool.isDense(i) {
			continue
		}
		for number := range m.pool.cells[i].faceCount() {
			m.addFace(int32(i), int32(number))
		}
	}
}

// addFace pairs a cell with those seen before that have its face of a number. A face of
// a collapsed cell may have no extent, and no neighbour then.
func (m *matcher) addFace(cell, number int32) {
	c := &m.pool.cells[cell]
	m.mine = c.appendCorners(m.mine[:0], number)
	if len(m.mine) < m.dimension {
		return
	}
	mix, lowest := m.mix()
	if !m.isApart { // numbers of different pieces have nothing in common
		lowest += c.piece * 0x61c88647
	}
	bucket := &m.buckets[uint32(lowest)&uint32(len(m.buckets)-1)]
	for before := *bucket; before != 0; before = m.faces[before-1].before {
		if seen := &m.faces[before-1]; seen.mix == mix && m.isSame(c, seen) {
			m.pairs = append(m.pairs, [2]int32{cell, seen.cell})
		}
	}
	m.faces = append(m.faces, seenFace{cell, number, *bucket, mix})
	*bucket = int32(len(m.faces))
}

// mix returns a mix of the corners of the face at hand that does not depend on their
// order, and the lowest corner.
func (m *matcher) mix() (mix uint32, lowest int32) {
	lowest = math.MaxInt32
	for _, corner := range m.mine {
		// The multiplier is the fraction of the golden ratio.
		product := uint64(corner+1) * 0x9e3779b97f4a7c15
		mix += uint32(product >> 32)
		lowest = min(lowest, corner)
	}
	return mix, lowest
}

// isSame reports whether a face seen before is the one at hand, of cell c.
func (m *matcher) isSame(c *poolCell, seen *seenFace) bool {
	other := &m.pool.cells[seen.cell]
	if c.region != other.region || (c.piece == other.piece) == m.isApart {
		return false
	}
	m.theirs = other.appendCorners(m.theirs[:0], seen.number)
	if len(m.theirs) != len(m.mine) {
		return false
	}
	for _, corner := range m.theirs {
		if !slices.Contains(m.mine, corner) {
			return false
		}
	}
	return true
}

// faceCount returns the number of faces of the cell.
func (c *poolCell) faceCount() int {
	if c.geometry != nil && len(c.faces) > 0 {
		return int(c.faces[0])
	}
	return len(c.shape.FaceCorners())
}

// appendCorners appends the numbers of the corners of one face, each once: a collapsed
// cell lists some twice.
func (c *poolCell) appendCorners(to []int32, face int32) []int32 {
	if c.geometry != nil && len(c.faces) > 0 {
		at := int32(1)
		for range face {
			at += 1 + c.faces[at]
		}
		for _, node := range c.faces[at+1:][:c.faces[at]] {
			to = appendNew(to, c.numbers[node])
		}
		return to
	}
	for _, node := range c.shape.FaceCorners()[face] {
		to = appendNew(to, c.numbers[node])
	}
	return to
}

// appendNew appends a number that is not in the list.
func appendNew(list []int32, number int32) []int32 {
	if slices.Contains(list, number) {
		return list
	}
	return append(list, number)
}

// neighbours lays out the pairs cell by cell.
func (m *matcher) neighbours() *neighbours {
	cells := len(m.pool.cells)
	n := &neighbours{start: make([]int32, cells+1), list: make([]int32, 2*len(m.pairs))}
	for _, pair := range m.pairs {
		n.start[pair[0]+1]++
		n.start[pair[1]+1]++
	}
	for i := range cells {
		n.start[i+1] += n.start[i]
	}
	next := slices.Clone(n.start)
	for _, pair := range m.pairs {
		for side, cell := range pair {
			n.list[next[cell]] = pair[1-side]
			next[cell]++
		}
	}
	return n
}
