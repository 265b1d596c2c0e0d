package energy

import (
	"math"

	"strainledger/mesh"
)

// An exclusionReason says why a cell is in no account. The order is that of the
// ledger.
type exclusionReason int

const (
	notExcluded exclusionReason = iota
	ghostCell
	otherDimension
	unsupportedCell
	noRegion
	degenerateCell
	notFinite
	exclusionReasons
)

var exclusionNames = [exclusionReasons]string{
	"", "ghost", "other-dimension", "unsupported", "no-region", "degenerate", "not-finite",
}

// An exclusion counts the cells left out for one reason, by their dimension.
type exclusion struct {
	cells   [4]int64
	measure [4]Sum
	unknown [4]int64 // cells whose measure cannot be told
}

// An account gathers what one region stores. Everything in it is order-free: exact
// sums, counts, and bests under a total order.
type account struct {
	cells, pastCells, yieldedCells int64

	bins                               densityBins // volume and energy
	volumetric, pastVolume, pastEnergy Sum
	curveEnergy                        Sum
	beyondCurve                        int64 // cells strained beyond the last point of their curve

	maxDensity, peak, maxUtilisation best
	maxEquivalent, minEquivalent     float64 // -Inf and Inf before the first cell

	outside float64 // largest density of a cell that the pool does not keep; -Inf: none
}

// newAccount returns the account of no cell.
func newAccount() account {
	return account{maxEquivalent: math.Inf(-1), minEquivalent: math.Inf(1), outside: math.Inf(-1)}
}

// join adds another account of the same region, or of another one for the total.
func (a *account) join(other *account) {
	a.cells += other.cells
	a.pastCells += other.pastCells
	a.yieldedCells += other.yieldedCells
	a.bins.join(&other.bins)
	a.volumetric.Join(&other.volumetric)
	a.curveEnergy.Join(&other.curveEnergy)
	a.beyondCurve += other.beyondCurve
	a.pastVolume.Join(&other.pastVolume)
	a.pastEnergy.Join(&other.pastEnergy)
	a.maxDensity.join(&other.maxDensity)
	a.peak.join(&other.peak)
	a.maxUtilisation.join(&other.maxUtilisation)
	a.maxEquivalent = max(a.maxEquivalent, other.maxEquivalent)
	a.minEquivalent = min(a.minEquivalent, other.minEquivalent)
	a.outside = max(a.outside, other.outside)
}

// A part is the account of some of a model's cells. Parts of one model join to the
// part of the whole, exactly.
type part struct {
	accounts []account
	excluded [exclusionReasons]exclusion

	mirrored, tangled, overlaps int64

	// negative counts the cells of negative density by the binary exponent of its
	// amount, because what is negligible is known only when the peak is.
	negative             [2048]int64
	hasStress, hasStrain bool // some value that is not 0 was seen

	pool     *pool         // common to all parts of a run, from which come
	hotspots []peak        // those of the list, by rank
	centre   *surroundings // what lies about the study's centre; nil: none
	boxes    []chunkBox    // of the chunks, where balls are looked into
	worst    ranking
	past     []candidate // every cell past its limit, where asked for

	lower     lowerCells
	strained  int64   // cells with a principal strain above largeStrain
	maxStrain float64 // the largest of them in size; 0: none

	hasMiddleNodes bool    // some of these cells have more nodes than corners
	largestStress  float64 // largest component at a node, of the stress that is to be recovered

	// The largest ε:ε of the total strain and of its thermal and plastic parts.
	strain, thermal, plastic float64
}

// newPart returns a part that has seen no cell.
func newPart(p *plan, pool *pool) *part {
	result := &part{pool: pool, accounts: make([]account, len(p.regions.regions))}
	for i := range result.accounts {
		result.accounts[i] = newAccount()
	}
	result.worst.count = p.listCount
	return result
}

// join adds another part of the same model, but for its pool, which is common to all.
func (p *part) join(other *part) {
	for i := range p.accounts {
		p.accounts[i].join(&other.accounts[i])
	}
	for reason := range p.excluded {
		mine, theirs := &p.excluded[reason], &other.excluded[reason]
		for dimension := range mine.cells {
			mine.cells[dimension] += theirs.cells[dimension]
			mine.unknown[dimension] += theirs.unknown[dimension]
			mine.measure[dimension].Join(&theirs.measure[dimension])
		}
	}
	p.mirrored += other.mirrored
	p.tangled += other.tangled
	p.overlaps += other.overlaps
	for i := range p.negative {
		p.negative[i] += other.negative[i]
	}
	p.hasStress = p.hasStress || other.hasStress
	p.hasStrain = p.hasStrain || other.hasStrain
	p.boxes = append(p.boxes, other.boxes...)
	p.worst.join(&other.worst)
	p.past = append(p.past, other.past...)
	p.lower.join(&other.lower)
	p.hasMiddleNodes = p.hasMiddleNodes || other.hasMiddleNodes
	raise(&p.largestStress, other.largestStress)
	raise(&p.strain, other.strain)
	raise(&p.thermal, other.thermal)
	raise(&p.plastic, other.plastic)
	p.strained += other.strained
	p.maxStrain = max(p.maxStrain, other.maxStrain)
}

// raise sets a largest value to a new one that is larger; NaN is not.
func raise(largest *float64, value float64) {
	if value > *largest {
		*largest = value
	}
}

// exclude counts a cell that is left out.
func (p *part) exclude(reason exclusionReason, cell *mesh.Cell) {
	dimension := cell.Shape.Dimension
	e := &p.excluded[reason]
	e.cells[dimension]++
	measure := math.NaN()
	if cell.Shape.Supported {
		measure = cell.Measure()
	}
	if math.IsNaN(measure) || math.IsInf(measure, 0) {
		e.unknown[dimension]++
		return
	}
	e.measure[dimension].Add(measure)
}
