package energy

import "math"

// assign pairs each row of a matrix of costs with a column of its own so that the sum of
// the costs is least, and returns the column of each row. There are at least as many
// columns as rows; costs are finite. Of equal sums the same one is found each time.
//
// Rows are added one by one; each finds the shortest path of exchanges that leads to a
// free column, over costs that potentials keep from being negative. The work grows with
// rows² × columns.
//
// Source: the Hungarian method (H. W. Kuhn, Naval Research Logistics Quarterly 2, 1955;
// J. Munkres, Journal of SIAM 5, 1957) in its form by shortest augmenting paths
// (N. Tomizawa, Networks 1, 1971), from memory; against every assignment in
// TestAssignAgainstAllAssignments.
func assign(costs [][]float64) []int {
	a := newAssignment(costs)
	for row := range costs {
		a.add(row)
	}
	columns := make([]int, len(costs))
	for column, row := range a.rowOf[:a.columns] {
		if row >= 0 {
			columns[row] = column
		}
	}
	return columns
}

// An assignment grows by one row at a time. Its last column, beyond those of the matrix,
// is where the row that is being added starts.
type assignment struct {
	costs     [][]float64
	columns   int
	rowOf     []int     // the row that a column has, -1 for none
	ofRow     []float64 // potentials: costs less both potentials are never negative,
	ofColumn  []float64 // and 0 for the pairs that are made
	distance  []float64 // shortest path found to a column
	before    []int     // the column before it on that path
	isReached []bool    // whether there is no shorter one
}

func newAssignment(costs [][]float64) *assignment {
	columns := 0
	if len(costs) > 0 {
		columns = len(costs[0])
	}
	a := &assignment{
		costs: costs, columns: columns, rowOf: make([]int, columns+1),
		ofRow: make([]float64, len(costs)), ofColumn: make([]float64, columns+1),
		distance: make([]float64, columns+1), before: make([]int, columns+1), isReached: make([]bool, columns+1),
	}
	for column := range a.rowOf {
		a.rowOf[column] = -1
	}
	return a
}

// add pairs one more row, and exchanges the pairs on its shortest path.
func (a *assignment) add(row int) {
	start := a.columns
	a.rowOf[start] = row
	for column := range a.distance {
		a.distance[column], a.isReached[column] = math.Inf(1), false
	}
	at := start
	for a.rowOf[at] >= 0 {
		at = a.step(at)
	}
	for at != start {
		a.rowOf[at] = a.rowOf[a.before[at]]
		at = a.before[at]
	}
	a.rowOf[start] = -1
}

// step reaches the nearest column beyond those reached, the last of which is at, and
// shifts the potentials so that the path to it costs nothing.
func (a *assignment) step(at int) (nearest int) {
	a.isReached[at] = true
	row := a.rowOf[at]
	nearest = -1
	for column := range a.columns {
		if a.isReached[column] {
			continue
		}
		if reduced := a.costs[row][column] - a.ofRow[row] - a.ofColumn[column]; reduced < a.distance[column] {
			a.distance[column], a.before[column] = reduced, at
		}
		if nearest < 0 || a.distance[column] < a.distance[nearest] {
			nearest = column
		}
	}
	shift := a.distance[nearest]
	for column := range a.rowOf {
		if a.isReached[column] {
			a.ofRow[a.rowOf[column]] += shift
			a.ofColumn[column] -= shift
		} else {
			a.distance[column] -= shift
		}
	}
	return nearest
}
