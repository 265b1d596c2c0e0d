package energy

import (
	"math"
	"sync"

	"strainledger/mesh"
)

const (
	// stressBits is the length of the largest stress as a whole number: what is added up
	// at a node is exact to 2^-42 of it, 2.3e-13.
	stressBits = 42
	// spareBits is how much longer a stress may be that pass 1 has not seen: values at
	// nodes where it saw the mean of cells, or the fit of a patch.
	spareBits = 5
	// mostCells is how many cells of one region may meet at a node; the sums hold more.
	mostCells = 1 << 15
	unclaimed = -1
)

// A recovery gathers the stress of cells at their nodes, for each region apart: across a
// border of regions stress may jump, and an average would mix what is of two materials.
//
// Stresses are whole numbers of a power of two, because adding those is exact in any
// order. The first region that claims a node has its sums in nodes, 56 bytes for each
// node; those of further regions are in a table beside it.
//
// A node's stress is the plain mean of the cells that meet there, not weighted by their
// volumes: every cell's value is an estimate of the same number, and whole numbers of one
// unit would lose the cells that are small beside others.
type recovery struct {
	numbers *nodeNumbers
	unit    float64 // of the sums, a power of two

	isPerCell bool // from one value per cell

	lock   sync.Mutex
	nodes  []nodeSum
	others map[nodeRegion]*nodeSum
}

// A nodeSum adds up the stress that a region's cells have at a node.
type nodeSum struct {
	stress [6]int64
	cells  int32
	region int32
}

type nodeRegion struct {
	node   int
	region int32
}

// newRecovery returns a recovery for stresses up to the largest component.
func newRecovery(numbers *nodeNumbers, largest float64) *recovery {
	r := &recovery{numbers: numbers, unit: 1, nodes: make([]nodeSum, numbers.count), others: map[nodeRegion]*nodeSum{}}
	if largest > 0 {
		_, exponent := math.Frexp(largest)
		r.unit = math.Ldexp(1, max(exponent-stressBits, -1022))
	}
	for i := range r.nodes {
		r.nodes[i].region = unclaimed
	}
	return r
}

// fixed returns a stress in whole units, at most 2^spareBits times the largest.
func (r *recovery) fixed(stress *mesh.SymmetricTensor) (units [6]int64) {
	const most = 1 << (stressBits + spareBits)
	for c := range units {
		units[c] = int64(math.RoundToEven(min(max(stress[c]/r.unit, -most), most)))
	}
	return units
}

// sum returns the sum of a region at a node, a new one where there is none. The caller
// holds the lock.
func (r *recovery) sum(node int, region int32) *nodeSum {
	first := &r.nodes[node]
	if first.region == unclaimed {
		first.region = region
	}
	if first.region == region {
		return first
	}
	key := nodeRegion{node, region}
	other := r.others[key]
	if other == nil {
		other = &nodeSum{region: region}
		r.others[key] = other
	}
	return other
}

// add adds the stress of one cell.
func (s *nodeSum) add(units *[6]int64) {
	if s.cells == mostCells {
		return // no mesh has so many; the sums would not hold them
	}
	for c := range units {
		s.stress[c] += units[c]
	}
	s.cells++
}

// set replaces the mean of a region at a node; false where the stress is far from all
// that was seen, as from a patch that is no patch.
func (r *recovery) set(node int, region int32, stress *mesh.SymmetricTensor) bool {
	for _, component := range stress {
		if !(math.Abs(component) <= r.unit*(1<<(stressBits+spareBits))) {
			return false
		}
	}
	s := r.find(node, region)
	s.stress, s.cells = r.fixed(stress), 1
	return true
}

// find returns the sum of a region at a node, nil where there is none.
func (r *recovery) find(node int, region int32) *nodeSum {
	if first := &r.nodes[node]; first.region == region {
		return first
	}
	return r.others[nodeRegion{node, region}]
}

// at returns the smooth stress of a region at a point of a piece where it has a cell.
func (r *recovery) at(piece int, point int32, region int32) (stress mesh.SymmetricTensor) {
	s := r.find(r.numbers.at(piece, point), region)
	for c := range stress {
		stress[c] = float64(s.stress[c]) / float64(s.cells) * r.unit
	}
	return stress
}

// A scatterer takes the stress of cells to their nodes, for one worker: a whole chunk
// under one lock.
type scatterer struct {
	*worker
	smooth  *recovery
	patches *patches // nil: averaging

	cells  []int32 // of the chunk, those that are sampled
	start  []int32 // where the values of each begin
	values [][6]int64

	samples []patchCell // of the chunk's cells, where patches are fitted
	numbers []int32     // of a cell's nodes
}

func newScatterer(p *plan, pool *pool, smooth *recovery, patches *patches) *scatterer {
	return &scatterer{worker: newWorker(p, pool), smooth: smooth, patches: patches}
}

func (s *scatterer) visit(chunk *mesh.Chunk) error {
	s.cells, s.start, s.values, s.samples = s.cells[:0], append(s.start[:0], 0), s.values[:0], s.samples[:0]
	s.assign(chunk)
	for i := range chunk.Count {
		state, err := s.evaluateSampled(chunk, i)
		if err != nil {
			return err
		}
		if state == smoothable {
			s.keep(chunk, i)
		}
	}
	s.smooth.lock.Lock()
	defer s.smooth.lock.Unlock()
	for n, i := range s.cells {
		chunk.Cell(int(i), &s.cell)
		s.scatter(chunk.Piece, s.region[i], s.values[s.start[n]:s.start[n+1]])
		if s.patches != nil {
			s.patches.add(s.samples[n], s.numbers, &s.cell)
		}
	}
	return nil
}

// scatter adds the stress of the current cell at each of its nodes. The caller holds the
// lock.
func (s *scatterer) scatter(piece int, region int32, values [][6]int64) {
	s.numbers = s.numbers[:0]
	for k, point := range s.cell.Nodes {
		value := &values[0]
		if len(values) > 1 {
			value = &values[k]
		}
		number := s.smooth.numbers.at(piece, point)
		s.smooth.sum(number, region).add(value)
		s.numbers = append(s.numbers, int32(number))
	}
}

// keep notes the stress of a cell that has just been evaluated.
func (s *scatterer) keep(chunk *mesh.Chunk, i int) {
	region := &s.regions.regions[s.region[i]]
	for _, stress := range s.stressAtNodes(chunk, i, region) {
		s.values = append(s.values, s.smooth.fixed(&stress))
	}
	s.cells, s.start = append(s.cells, int32(i)), append(s.start, int32(len(s.values)))
	if s.patches != nil {
		s.samples = append(s.samples, patchCell{
			piece: chunk.Piece, cell: chunk.First + int64(i), region: s.region[i],
			centroid: centroid(&s.cell, s.options), stress: s.meanStress(chunk, i, region),
		})
	}
}
