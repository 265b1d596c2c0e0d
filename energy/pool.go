package energy

import (
	"cmp"
	"math"
	"slices"
	"sync"

	"strainledger/mesh"
)

// A pool keeps the dense part of a model, in which its hotspots are looked for: the
// first count cells by density, and where hotspots are ranked by something else also
// the first count by that (the key). What it keeps in the end depends on no order of
// cells. All workers share one pool, for what it holds of a cell takes some room.
type pool struct {
	count     int
	isByKey   bool // the key is something else than the density
	byDensity sieve
	byKey     sieve

	lock      sync.Mutex
	cells     []poolCell
	densities []float64 // of cells, and
	keys      []float64 // their keys; NaN where there is no cell
	free      []int32   // places in cells that hold none
	room      int       // cells that are held before those that do not stay are dropped
	scratch   []float64 // for finding the last that stays
	slabs     slabs     // of what the cells hold

	// outside holds for each region the largest density of a cell that the pool does
	// not keep, -Inf where there is none.
	outside []float64
}

// A poolCell is one cell of a pool with what its geometry takes.
type poolCell struct {
	record
	stress  mesh.SymmetricTensor // where the density of the cell is largest
	shape   *mesh.Shape
	piece   int32
	numbers []int32   // of the nodes in their piece
	points  []float64 // x y z of each node
	*geometry
}

// A geometry is what only few kinds of cells have.
type geometry struct {
	faces   []int32   // of a polyhedron, as [mesh.Cell] has them, but by the place in numbers
	weights []float64 // rational weight of each node, or nil
}

// A floor is the last of the first count cells by one value, as far as it is known.
type floor struct {
	value float64
	place place
}

// noFloor lets every number pass, closedFloor none.
var (
	noFloor     = floor{math.Inf(-1), place{source: math.MaxInt}}
	closedFloor = floor{math.Inf(1), place{source: -1}}
)

// takes reports whether a value is not below the floor.
func (f *floor) takes(value float64, p place) bool {
	return value > f.value || value == f.value && p.before(f.place)
}

// A sieve lets the first cells by one value pass. It counts them by the leading bits of
// the value, 16 levels to an octave: by these counts the floor rises as soon as enough are
// above it, long before the pool is full.
type sieve struct {
	floor
	counts [1 << 15]int32
	top    int // the highest level that is not empty
}

// add counts a value that has passed. Those that are not above 0 raise no floor.
func (s *sieve) add(value float64) {
	if value > 0 {
		level := int(math.Float64bits(value) >> 48)
		s.counts[level]++
		s.top = max(s.top, level)
	}
}

// raise lifts the floor to the highest level that count values are not below.
func (s *sieve) raise(count int) {
	lowest := 0
	if s.value > 0 {
		lowest = int(math.Float64bits(s.value) >> 48)
	}
	sum := 0
	for level := s.top; level > lowest; level-- {
		if sum += int(s.counts[level]); sum >= count {
			s.floor = noFloor
			s.value = math.Float64frombits(uint64(level) << 48)
			return
		}
	}
}

// slabs are large pieces of memory that small lists are cut from: a pool holds too many
// of them to be allocated one by one.
type slabs struct {
	freeNumbers []int32
	freePoints  []float64
}

const slabLength = 1 << 15

// numbers returns an empty list with room for so many.
func (s *slabs) numbers(count int) []int32 {
	if len(s.freeNumbers) < count {
		s.freeNumbers = make([]int32, max(count, slabLength))
	}
	list := s.freeNumbers[:0:count]
	s.freeNumbers = s.freeNumbers[count:]
	return list
}

// points returns an empty list with room for so many coordinates.
func (s *slabs) points(count int) []float64 {
	if len(s.freePoints) < count {
		s.freePoints = make([]float64, max(count, slabLength))
	}
	list := s.freePoints[:0:count]
	s.freePoints = s.freePoints[count:]
	return list
}

// mostHeld is how many cells are held before those that do not stay are dropped: a
// quarter more than can stay. A larger part takes memory, a smaller one time.
func mostHeld(count int, isByKey bool) int {
	if isByKey {
		count *= 2
	}
	return count + max(16, count/4)
}

// newPool returns an empty pool for a model of so many cells and regions.
func newPool(count int, cells int64, regions int, isByKey bool) *pool {
	p := &pool{count: count, isByKey: isByKey, room: mostHeld(count, isByKey), outside: make([]float64, regions)}
	room := min(cells, int64(p.room))
	p.cells, p.densities, p.keys = make([]poolCell, 0, room), make([]float64, 0, room), make([]float64, 0, room)
	p.byDensity.floor, p.byKey.floor = noFloor, closedFloor
	if isByKey {
		p.byKey.floor = noFloor
	}
	for i := range p.outside {
		p.outside[i] = math.Inf(-1)
	}
	return p
}

// takes reports whether a cell could be among those that are kept.
func (p *pool) takes(density, key float64, at place) bool {
	return p.byDensity.takes(density, at) || p.byKey.takes(key, at)
}

// add adds a cell that takes has let through, and returns it for its record and stress to
// be set.
func (p *pool) add(density, key float64, cell *mesh.Cell, piece int) *poolCell {
	if len(p.cells)-len(p.free) >= p.room {
		p.trim()
	}
	n := len(cell.Nodes)
	if len(p.free) == 0 {
		p.free = append(p.free, int32(len(p.cells)))
		p.cells = append(p.cells, poolCell{numbers: p.slabs.numbers(n), points: p.slabs.points(3 * n)})
		p.densities, p.keys = append(p.densities, 0), append(p.keys, 0)
	}
	last := len(p.free) - 1
	i := p.free[last]
	p.free = p.free[:last]
	p.densities[i], p.keys[i] = density, key
	p.byDensity.add(density)
	p.byKey.add(key)
	to := &p.cells[i]
	to.shape, to.piece, to.geometry = cell.Shape, int32(piece), nil
	to.numbers = append(to.numbers[:0], cell.Nodes...)
	to.points = slices.Grow(to.points[:0], 3*n)[:3*n]
	for k, node := range cell.Nodes {
		// Single assignments take half the time of a copy.
		from, point := cell.Points[3*node:][:3], to.points[3*k:][:3]
		point[0], point[1], point[2] = from[0], from[1], from[2]
	}
	if len(cell.Faces) > 0 || cell.IsRational() {
		to.geometry = newGeometry(cell)
	}
	return to
}

// newGeometry returns what the cell has beside its nodes.
func newGeometry(cell *mesh.Cell) *geometry {
	g := &geometry{}
	if len(cell.Faces) > 0 {
		g.faces = localFaces(cell)
	}
	if cell.IsRational() {
		for _, node := range cell.Nodes {
			g.weights = append(g.weights, cell.RationalWeights[node])
		}
	}
	return g
}

// localFaces returns a polyhedron's faces with its nodes counted from 0.
func localFaces(cell *mesh.Cell) []int32 {
	faces := slices.Clone(cell.Faces)
	for at := 1; at < len(faces); at += 1 + int(faces[at]) {
		for k := range faces[at] {
			node := &faces[at+1+int(k)]
			*node = int32(slices.Index(cell.Nodes, *node))
		}
	}
	return faces
}

// raise lifts the floors to what the cells added so far allow.
func (p *pool) raise() {
	p.byDensity.raise(p.count)
	if p.isByKey {
		p.byKey.raise(p.count)
	}
}

// leave notes a cell that the pool does not keep.
func (p *pool) leave(region int32, density float64) {
	if density > p.outside[region] {
		p.outside[region] = density
	}
}

// trim drops the cells that do not stay.
func (p *pool) trim() {
	stays := make([]bool, len(p.cells))
	p.byDensity.floor = p.markFirst(p.densities, stays)
	if p.isByKey {
		p.byKey.floor = p.markFirst(p.keys, stays)
	}
	for i := range p.cells {
		if c := &p.cells[i]; !stays[i] && p.holds(i) {
			p.leave(c.region, c.density)
			p.densities[i], p.keys[i] = math.NaN(), math.NaN()
			p.free = append(p.free, int32(i))
		}
	}
}

// holds reports whether there is a cell at a place of the list.
func (p *pool) holds(i int) bool { return p.densities[i] == p.densities[i] }

// markFirst marks the first count cells by a value and returns the last of them, or the
// floor that lets everything pass where there are fewer. Values that are not a number are
// not among them.
func (p *pool) markFirst(values []float64, stays []bool) floor {
	list := p.scratch[:0]
	for _, value := range values {
		if value == value {
			list = append(list, value)
		}
	}
	p.scratch = list
	least, isFull := math.Inf(-1), len(list) >= p.count
	if isFull {
		least = largest(list, p.count)
	}
	// Of those that are equal to the last one, the first by place.
	var equal []rankedIndex
	larger := 0
	for i, value := range values {
		switch {
		case value > least:
			stays[i] = true
			larger++
		case value == least:
			equal = append(equal, rankedIndex{value, p.cells[i].place, int32(i)})
		}
	}
	slices.SortFunc(equal, compareRanked)
	for k := range equal {
		if k < p.count-larger {
			stays[equal[k].index] = true
		}
	}
	if !isFull {
		return noFloor
	}
	return floor{least, equal[p.count-larger-1].place}
}

// largest returns the value that stands at the place count when the list, which it
// changes, is in falling order.
//
// Source: C. A. R. Hoare, Algorithm 65: Find, 1961, with the middle of three as pivot.
func largest(list []float64, count int) float64 {
	low, high, at := 0, len(list)-1, count-1
	for low < high {
		a, b, c := list[low], list[low+(high-low)/2], list[high]
		pivot := max(min(a, b), min(max(a, b), c))
		i, j := low, high
		for i <= j {
			for list[i] > pivot {
				i++
			}
			for list[j] < pivot {
				j--
			}
			if i <= j {
				list[i], list[j] = list[j], list[i]
				i++
				j--
			}
		}
		switch {
		case at <= j:
			high = j
		case at >= i:
			low = i
		default:
			return list[at]
		}
	}
	return list[at]
}

// A rankedIndex is a value of something in a list, and where it stands.
type rankedIndex struct {
	value float64
	place place
	index int32
}

// before is the order of ranked lists: larger value, then lower source, then lower cell.
func (a *rankedIndex) before(b *rankedIndex) bool {
	return a.value > b.value || a.value == b.value && a.place.before(b.place)
}

func compareRanked(a, b rankedIndex) int {
	switch {
	case a.before(&b):
		return -1
	case b.before(&a):
		return 1
	}
	return 0
}

// view sets the cell to the geometry of a cell of the pool.
func (c *poolCell) view(to *mesh.Cell) {
	for k := len(to.Nodes); k < len(c.numbers); k++ {
		to.Nodes = append(to.Nodes, int32(k))
	}
	to.Shape, to.Nodes, to.Points, to.Faces, to.RationalWeights = c.shape, to.Nodes[:len(c.numbers)], c.points, nil, nil
	if c.geometry != nil {
		to.Faces, to.RationalWeights = c.faces, c.weights
	}
}

// isDense reports whether a cell at a place of the list is among those of which it is
// known what lies between them: one that has less density than a cell of its region
// outside the pool is not.
func (p *pool) isDense(i int) bool { return p.densities[i] >= p.outside[p.cells[i].region] }

// falling returns the dense cells in falling order of density.
func (p *pool) falling() []int32 {
	order := make([]int32, 0, len(p.cells))
	for i := range p.cells {
		if p.isDense(i) {
			order = append(order, int32(i))
		}
	}
	slices.SortFunc(order, func(a, b int32) int {
		if first, second := p.densities[a], p.densities[b]; first != second {
			return cmp.Compare(second, first)
		}
		if p.cells[a].place.before(p.cells[b].place) {
			return -1
		}
		return 1
	})
	return order
}
