package energy

import "math"

// A peak is a cell of a pool that is denser than all that it is joined to until density
// has fallen by some share.
type peak struct {
	cell       int32
	prominence float64 // share by which density falls before a higher peak is met
	members    []int32 // the hotspot's cells; nil where the pool does not hold all
	around     surroundings
}

// peaks returns the peaks from which density falls by at least the given share before a
// higher one is met, the densest first. Of groups that meet, those with the lower peaks
// end there; such a peak counts if density at the meeting is at most (1 - share) times
// its own. A peak that meets no higher one has prominence 1.
//
// The pool does not hold the whole model. A peak is certain when (1 - share) times its
// density is not below any density outside the pool, in its region: then no way to a
// higher one can have been missed. Others are left out but for the densest cell of a
// region, which is a peak whatever lies around it; isHighest says which these are. Where
// density outside the pool is above that of the meeting, the prominence is what is
// certain of it: how far density falls to there.
//
// Source: H. Edelsbrunner, D. Letscher, A. Zomorodian, Topological persistence and
// simplification, 2002, for maxima (from memory).
func (p *pool) peaks(dimension int, share float64, isHighest func(*poolCell) bool) []peak {
	order := p.falling()
	adjacent := p.adjacency(dimension)
	meetings := p.meetings(order, adjacent)
	wet := make([]int32, len(p.cells))
	var list []peak
	for _, i := range order {
		c := &p.cells[i]
		threshold, meeting, outside := (1-share)*c.density, meetings[i], p.outside[c.region]
		// A cell that is no peak has a meeting that is not a number.
		if !(c.density > 0 && meeting <= threshold) {
			continue
		}
		found := peak{cell: i, prominence: 1}
		if !isHighest(c) {
			found.prominence = 1 - max(meeting, outside, 0)/c.density
		}
		if threshold >= outside {
			found.members = p.flood(adjacent, i, threshold, wet)
		} else if !isHighest(c) {
			continue
		}
		list = append(list, found)
	}
	return list
}

// meetings returns for each cell that begins a group the density at which it meets one
// with a higher peak, -Inf where there is none, and NaN for all other cells. Cells are
// visited in falling order and join the groups of their visited neighbours.
func (p *pool) meetings(order []int32, adjacent *neighbours) []float64 {
	position := make([]int32, len(p.cells)) // of each cell in the order
	group := make([]int32, len(order))      // by position: one before it in its group, itself at the peak
	density := make([]float64, len(p.cells))
	for at, i := range order {
		position[i], group[at], density[i] = int32(at), int32(at), math.NaN()
	}
	for at, i := range order {
		isJoined := false
		for _, neighbour := range adjacent.of(i) {
			if position[neighbour] > int32(at) {
				continue
			}
			mine, other := peakOf(group, int32(at)), peakOf(group, position[neighbour])
			if mine == other {
				continue
			}
			if isJoined {
				density[order[max(mine, other)]] = p.cells[i].density
			}
			group[max(mine, other)] = min(mine, other)
			isJoined = true
		}
		if !isJoined {
			density[i] = math.Inf(-1)
		}
	}
	return density
}

// peakOf returns the position of the peak of a group.
func peakOf(group []int32, at int32) int32 {
	for group[at] != at {
		group[at] = group[group[at]] // halve the way for the next time
		at = group[at]
	}
	return at
}

// flood returns the cells that are joined to one through neighbours whose density is at
// least the threshold, itself first. In wet each has the mark of the last flood that
// reached it.
func (p *pool) flood(adjacent *neighbours, from int32, threshold float64, wet []int32) []int32 {
	cells, mark := []int32{from}, from+1
	wet[from] = mark
	for next := 0; next < len(cells); next++ {
		for _, neighbour := range adjacent.of(cells[next]) {
			if wet[neighbour] != mark && p.densities[neighbour] >= threshold {
				wet[neighbour] = mark
				cells = append(cells, neighbour)
			}
		}
	}
	return cells
}
