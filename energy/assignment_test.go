package energy

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// leastSum returns the least sum over every assignment of rows to columns of their own.
func leastSum(costs [][]float64, taken []bool) float64 {
	if len(costs) == 0 {
		return 0
	}
	least := math.Inf(1)
	for column, cost := range costs[0] {
		if !taken[column] {
			taken[column] = true
			least = min(least, cost+leastSum(costs[1:], taken))
			taken[column] = false
		}
	}
	return least
}

// Whole costs are summed exactly, so that the sums have to be equal. Small ones make
// many ties.
func TestAssignAgainstAllAssignments(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rows := rapid.IntRange(0, 6).Draw(t, "rows")
		columns := rapid.IntRange(max(rows, 1), 7).Draw(t, "columns")
		largest := rapid.SampledFrom([]int{2, 10, 1000000}).Draw(t, "largest")
		costs := make([][]float64, rows)
		for i := range costs {
			costs[i] = make([]float64, columns)
			for j := range costs[i] {
				costs[i][j] = float64(rapid.IntRange(-largest, largest).Draw(t, "cost"))
			}
		}
		found := assign(costs)
		if len(found) != rows {
			t.Fatalf("%d columns for %d rows", len(found), rows)
		}
		sum := 0.0
		for i, j := range found {
			if slices.Contains(found[:i], j) {
				t.Fatalf("column %d is given twice: %v", j, found)
			}
			sum += costs[i][j]
		}
		if want := leastSum(costs, make([]bool, columns)); sum != want {
			t.Fatalf("sum %g of %v, want %g for %v", sum, found, want, costs)
		}
	})
}

func TestAssignSmallCases(t *testing.T) {
	for _, c := range []struct {
		costs [][]float64
		want  []int
	}{
		{nil, []int{}},
		{[][]float64{{5}}, []int{0}},
		{[][]float64{{2, 1}}, []int{1}},
		{[][]float64{{1, 2}, {1, 3}}, []int{1, 0}},                     // 2 + 1, where the nearest first gives 1 + 3
		{[][]float64{{1, 2, 9}, {2, 4, 9}, {3, 6, 9}}, []int{1, 0, 2}}, // 2 + 2 + 9 = 13
	} {
		if got := assign(c.costs); !slices.Equal(got, c.want) {
			t.Errorf("%v: %v, want %v", c.costs, got, c.want)
		}
	}
}
