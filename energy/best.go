package energy

import (
	"slices"

	"strainledger/mesh"
)

// A place orders what has equal values: lower source first, then lower cell, then
// lower node of the cell. With the value it makes a total order, so that a largest
// value does not depend on the order in which cells were seen.
type place struct {
	source int
	cell   int64
	node   int32
}

func (p place) before(other place) bool {
	switch {
	case p.source != other.source:
		return p.source < other.source
	case p.cell != other.cell:
		return p.cell < other.cell
	}
	return p.node < other.node
}

// A best is the largest value seen and where it is. The zero value has seen none.
type best struct {
	isSet bool
	value float64
	place place
	at    Vector
}

// takes reports whether a value at a place is better than the best so far.
func (b *best) takes(value float64, p place) bool {
	return !b.isSet || value > b.value || value == b.value && p.before(b.place)
}

// join takes the other best where it is better.
func (b *best) join(other *best) {
	if other.isSet && b.takes(other.value, other.place) {
		*b = *other
	}
}

// number returns the value, None when there is none.
func (b *best) number() Number {
	if !b.isSet {
		return None
	}
	return Number(b.value)
}

// where returns the cell, its source and the coordinates.
func (b *best) where() (cell, source Number, at *Vector) {
	if !b.isSet {
		return None, None, nil
	}
	at = new(Vector)
	*at = b.at
	return Number(b.place.cell), Number(b.place.source), at
}

// A candidate is one cell that may enter a ranked list, with all that the list says
// of it.
type candidate struct {
	record
	at Vector
}

// A record is what a list says of a cell, but for where it is. Key is the value that the
// cell is ranked by.
type record struct {
	key   float64
	place place

	region     int32
	elementID  int64
	measure    float64
	energy     float64
	density    float64
	peak       float64
	equivalent float64
	limitShare float64 // utilisation, NaN without a limit
}

// compare orders candidates: larger key, then lower source, then lower cell.
func compare(a, b candidate) int {
	switch {
	case a.key != b.key:
		if a.key > b.key {
			return -1
		}
		return 1
	case a.place == b.place:
		return 0
	case a.place.before(b.place):
		return -1
	}
	return 1
}

// A ranking keeps the first count candidates of any number. It holds up to twice as
// many and sorts when full, so that most candidates cost one comparison.
type ranking struct {
	count int
	list  []candidate
	floor candidate // with a full list, the last of the first count
	full  bool
}

// takes reports whether a key at a place could be among the first.
func (r *ranking) takes(key float64, p place) bool {
	return r.count > 0 && (!r.full || key > r.floor.key || key == r.floor.key && p.before(r.floor.place))
}

// add adds a candidate that takes has let through.
func (r *ranking) add(c candidate) {
	r.list = append(r.list, c)
	if len(r.list) >= 2*r.count {
		r.trim()
	}
}

// trim sorts the list and cuts it to count.
func (r *ranking) trim() {
	slices.SortFunc(r.list, compare)
	if len(r.list) >= r.count && r.count > 0 {
		r.list = r.list[:r.count]
		r.floor, r.full = r.list[r.count-1], true
	}
}

// join adds the candidates of another ranking.
func (r *ranking) join(other *ranking) {
	for _, c := range other.list {
		if r.takes(c.key, c.place) {
			r.add(c)
		}
	}
	r.trim()
}

// centroid returns the centroid of a cell's measure.
func centroid(cell *mesh.Cell, options *Options) Vector {
	if options.Idealisation == Axisymmetric {
		return cell.RingCentroid(options.AxisX)
	}
	return cell.Centroid()
}
