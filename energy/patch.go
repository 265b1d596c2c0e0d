package energy

import (
	"fmt"
	"slices"

	"strainledger/mesh"
)

const (
	// mostPatchCells is the number of cells up to which patches are fitted: about 450 bytes
	// are held for each hexahedron (measured).
	mostPatchCells = 1_000_000
	// thinnest is how far the centroids of a patch must be from one line or plane: the
	// variance across it, in units of the patch's radius squared. Those about an inner
	// node of a regular mesh have 1/3 to 1/2 (common practice, no source).
	thinnest = 0.01
)

// patches hold what patch recovery fits to: the mean stress of each cell, at the cell's
// centroid, where that of linear cells is most exact.
//
// About each node a linear field is fitted by least squares through the centroids of the
// cells of one region that meet there, and evaluated at the node. A node whose cells are
// too few, or lie on one line or plane (on edges and faces of the body), takes the mean of
// what the patches of its cells' other nodes give there; one without such a neighbour
// keeps the mean of its cells.
//
// Source: O. C. Zienkiewicz, J. Z. Zhu, Int. J. Numer. Methods Eng. 33 (1992) 1331-1364
// (superconvergent patch recovery; from memory).
type patches struct {
	dimension int
	cells     []patchCell
	nodes     []int32  // of the cells, by number
	places    []Vector // of the nodes

	start   []int // where the cells of each node begin in meeting
	meeting []int32
}

// A patchCell is one cell's sample.
type patchCell struct {
	piece    int
	cell     int64 // of the source, which orders the cells of a piece
	region   int32
	low, end int // its nodes
	centroid Vector
	stress   mesh.SymmetricTensor
}

// patchCounts says how the nodes came to their stress.
type patchCounts struct{ fitted, borrowed, averaged int }

func newPatches(dimension, nodes int) *patches {
	return &patches{dimension: dimension, places: make([]Vector, nodes)}
}

// whyNoPatches says why patches cannot be fitted, "" where they can.
func (p *plan) whyNoPatches(total *part) string {
	switch {
	case p.sampling == smoothInFile:
		return "the smooth stress is the file's own on points"
	case total.hasMiddleNodes:
		return "the model has cells with nodes between their corners, and patches are fitted for linear cells"
	case p.model.CellCount() > mostPatchCells:
		return fmt.Sprintf("the model has %d cells, and patches are fitted up to %d", p.model.CellCount(), mostPatchCells)
	}
	return ""
}

// add keeps a cell whose nodes are given by number and by place.
func (p *patches) add(sample patchCell, numbers []int32, cell *mesh.Cell) {
	sample.low = len(p.nodes)
	p.nodes = append(p.nodes, numbers...)
	sample.end = len(p.nodes)
	p.cells = append(p.cells, sample)
	for k, number := range numbers {
		copy(p.places[number][:], cell.Points[3*cell.Nodes[k]:])
	}
}

// fit replaces the means of the recovery by what the patches give.
func (p *patches) fit(smooth *recovery) (counts patchCounts) {
	p.meet()
	for node := range p.places {
		for _, region := range p.regionsAt(node) {
			stress, isFitted := p.at(node, region, p.places[node])
			isBorrowed := false
			if !isFitted {
				stress, isBorrowed = p.borrow(node, region)
			}
			switch {
			case !(isFitted || isBorrowed) || !smooth.set(node, region, &stress):
				counts.averaged++
			case isFitted:
				counts.fitted++
			default:
				counts.borrowed++
			}
		}
	}
	return counts
}

// meet sorts the cells, which came in no order, and lists those of each node.
func (p *patches) meet() {
	slices.SortFunc(p.cells, func(a, b patchCell) int {
		if a.piece != b.piece {
			return a.piece - b.piece
		}
		return int(a.cell - b.cell)
	})
	p.start = make([]int, len(p.places)+1)
	for _, node := range p.nodes {
		p.start[node+1]++
	}
	for node := range p.places {
		p.start[node+1] += p.start[node]
	}
	p.meeting = make([]int32, len(p.nodes))
	next := slices.Clone(p.start)
	for i := range p.cells {
		for _, node := range p.nodes[p.cells[i].low:p.cells[i].end] {
			p.meeting[next[node]] = int32(i)
			next[node]++
		}
	}
}

// cellsAt returns the cells that meet at a node.
func (p *patches) cellsAt(node int) []int32 { return p.meeting[p.start[node]:p.start[node+1]] }

// regionsAt returns the regions whose cells meet at a node, rising.
func (p *patches) regionsAt(node int) []int32 {
	var regions []int32
	for _, i := range p.cellsAt(node) {
		if region := p.cells[i].region; !slices.Contains(regions, region) {
			regions = append(regions, region)
		}
	}
	slices.Sort(regions)
	return regions
}

// at fits the patch of a node and evaluates it at a place; false where the patch is too
// thin for a linear field.
func (p *patches) at(node int, region int32, place Vector) (stress mesh.SymmetricTensor, isFitted bool) {
	middle := p.places[node]
	var radius float64
	count := 0
	for _, i := range p.cellsAt(node) {
		if c := &p.cells[i]; c.region == region {
			arm := c.centroid.minus(&middle)
			radius = max(radius, arm.length())
			count++
		}
	}
	if count <= p.dimension || radius == 0 {
		return stress, false
	}
	var fit linearFit
	for _, i := range p.cellsAt(node) {
		if c := &p.cells[i]; c.region == region {
			fit.add(c.centroid.minus(&middle), radius, &c.stress)
		}
	}
	return fit.at(p.dimension, place.minus(&middle), radius)
}

// borrow returns the mean of what the patches of a node's neighbours give at it.
func (p *patches) borrow(node int, region int32) (mean mesh.SymmetricTensor, hasAny bool) {
	var neighbours []int32
	for _, i := range p.cellsAt(node) {
		if c := &p.cells[i]; c.region == region {
			neighbours = append(neighbours, p.nodes[c.low:c.end]...)
		}
	}
	slices.Sort(neighbours)
	count := 0.0
	for _, neighbour := range slices.Compact(neighbours) {
		stress, isFitted := p.at(int(neighbour), region, p.places[node])
		if int(neighbour) == node || !isFitted {
			continue
		}
		for c := range mean {
			mean[c] += stress[c]
		}
		count++
	}
	for c := range mean {
		mean[c] /= count
	}
	return mean, count > 0
}

// A linearFit adds up the least-squares equations of the six components of stress as
// linear functions 1, x, y, z of place.
type linearFit struct {
	matrix [4][4]float64
	right  [4]mesh.SymmetricTensor
	count  float64
}

// terms returns the functions at a place.
func terms(place Vector, radius float64) [4]float64 {
	return [4]float64{1, place[0] / radius, place[1] / radius, place[2] / radius}
}

// add adds a sample.
func (f *linearFit) add(place Vector, radius float64, stress *mesh.SymmetricTensor) {
	t := terms(place, radius)
	for i := range t {
		for k := range t {
			f.matrix[i][k] += float64(t[i] * t[k])
		}
		for c := range stress {
			f.right[i][c] += float64(t[i] * stress[c])
		}
	}
	f.count++
}

// at solves the equations (LDLᵀ, no pivots: the first unknown is the mean and the
// others are variances) and evaluates the field at a place; false where the samples are
// too close to a line or plane. In two dimensions z does not count.
func (f *linearFit) at(dimension int, place Vector, radius float64) (stress mesh.SymmetricTensor, isFitted bool) {
	n := dimension + 1
	m, b := f.matrix, f.right
	for i := range n {
		if !(m[i][i] > thinnest*f.count) {
			return stress, false
		}
		for row := i + 1; row < n; row++ {
			factor := m[row][i] / m[i][i]
			for k := i; k < n; k++ {
				m[row][k] -= float64(factor * m[i][k])
			}
			for c := range stress {
				b[row][c] -= float64(factor * b[i][c])
			}
		}
	}
	t := terms(place, radius)
	for c := range stress {
		for i := n - 1; i >= 0; i-- {
			for k := i + 1; k < n; k++ {
				b[i][c] -= float64(m[i][k] * b[k][c])
			}
			b[i][c] /= m[i][i]
			stress[c] += float64(b[i][c] * t[i])
		}
	}
	return stress, true
}

// minus returns the vector from other to v.
func (v *Vector) minus(other *Vector) Vector {
	return Vector{v[0] - other[0], v[1] - other[1], v[2] - other[2]}
}
