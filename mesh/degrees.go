package mesh

import "fmt"

// MaxDegree is the highest degree of Lagrange and Bézier cells that is computed, in
// each direction. For a hexahedron of that degree the product rule has 15 × 15 × 15
// points and its tabulation 37 MB.
const MaxDegree = 6

// latticeDegrees returns the degrees by r, s, t of a Lagrange or Bézier cell, and
// whether its nodes are a lattice: they are not in the one variant with other middles,
// for which the degrees are zero. The stated degrees count where the node count leaves
// a choice; where they are zero all are equal.
func (row *cellTypeRow) latticeDegrees(nodeCount int, stated [3]int) (degrees [3]int, isLattice bool, err error) {
	if len(row.unit.simplices) > 1 && stated != [3]int{} {
		degrees, err = row.statedDegrees(nodeCount, stated)
	} else {
		degrees, err = row.countedDegrees(nodeCount)
	}
	if err != nil && row.middles != "" && nodeCount == row.variant {
		return [3]int{}, false, nil
	}
	return degrees, true, err
}

// countedDegrees returns the equal degrees that so many nodes have.
func (row *cellTypeRow) countedDegrees(nodeCount int) ([3]int, error) {
	count := func(degree int) float64 { return row.latticeCount(row.equalDegrees(degree)) }
	degree := 1
	if row.unit == &line {
		degree = max(1, nodeCount-1)
	}
	for count(degree+1) <= float64(nodeCount) {
		degree++
	}
	if count(degree) == float64(nodeCount) {
		return row.equalDegrees(degree), nil
	}
	return [3]int{}, fmt.Errorf("%s (cell type %d) has %d nodes; degree %d needs %.0f, degree %d needs %.0f, and the file states no degrees",
		row.name, row.number, nodeCount, degree, count(degree), degree+1, count(degree+1))
}

// statedDegrees checks the degrees that the file states against the node count.
func (row *cellTypeRow) statedDegrees(nodeCount int, stated [3]int) ([3]int, error) {
	axis := 0
	for _, dimension := range row.unit.simplices {
		for i := axis; i < axis+dimension; i++ {
			if stated[i] < 1 {
				return stated, fmt.Errorf("%s (cell type %d) has degree %d in direction %d, needs 1 or more", row.name, row.number, stated[i], i)
			}
			if stated[i] != stated[axis] {
				return stated, fmt.Errorf("%s (cell type %d) has degrees %d and %d in its triangle, needs equal ones", row.name, row.number, stated[axis], stated[i])
			}
		}
		axis += dimension
	}
	for ; axis < 3; axis++ {
		stated[axis] = 0
	}
	if want := row.latticeCount(stated); want != float64(nodeCount) {
		return stated, fmt.Errorf("%s (cell type %d) of degrees %d has %d nodes, needs %.0f", row.name, row.number, stated[:row.dimension], nodeCount, want)
	}
	return stated, nil
}

// equalDegrees is the same degree in each direction of the cell.
func (row *cellTypeRow) equalDegrees(degree int) (degrees [3]int) {
	for axis := range row.dimension {
		degrees[axis] = degree
	}
	return degrees
}

// latticeCount returns the number of nodes of a lattice. It is a float64 because a file
// may state any degrees.
func (row *cellTypeRow) latticeCount(degrees [3]int) float64 {
	count := 1.0
	axis := 0
	for _, dimension := range row.unit.simplices {
		for i := range dimension {
			count *= float64(degrees[axis] + 1 + i)
			count /= float64(1 + i)
		}
		axis += dimension
	}
	return count
}

// simplexDegrees picks from the degrees by r, s, t those of the simplices.
func (u *unitCell) simplexDegrees(degrees [3]int) (picked [3]int) {
	axis := 0
	for i, dimension := range u.simplices {
		picked[i] = degrees[axis]
		axis += dimension
	}
	return picked
}
