package mesh

import (
	"math"
	"strings"
	"testing"
)

// The order of the points: the first direction fastest, or slowest; and Q-11 (exact to
// degree 2n-1 along each direction, not to 2n).
func TestGaussRule(t *testing.T) {
	quad, err := ShapeOf(Quad, 4, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	r := 0.5 - math.Sqrt(0.15) // Gauss-Legendre, 3 points on [0, 1]
	for slowest, want := range map[bool][][2]float64{
		false: {{r, 0.5 - math.Sqrt(1./12)}, {0.5, 0.5 - math.Sqrt(1./12)}, {1 - r, 0.5 - math.Sqrt(1./12)}, {r, 0.5 + math.Sqrt(1./12)}},
		true:  {{r, 0.5 - math.Sqrt(1./12)}, {r, 0.5 + math.Sqrt(1./12)}, {0.5, 0.5 - math.Sqrt(1./12)}, {0.5, 0.5 + math.Sqrt(1./12)}},
	} {
		rule := GaussRule{Counts: []int{3, 2}, FirstIsSlowest: slowest}
		table, err := rule.Tabulate(quad)
		if err != nil || rule.Points() != 6 || len(table.Weights) != 6 {
			t.Fatal(err, len(table.Weights))
		}
		for i, p := range want {
			if math.Abs(table.Points[i][0]-p[0]) > 1e-15 || math.Abs(table.Points[i][1]-p[1]) > 1e-15 {
				t.Errorf("slowest %v: point %d at %v, want %v", slowest, i, table.Points[i], p)
			}
		}
		var sum [3]float64 // ∫ 1, r⁵s³, r⁶
		for i, weight := range table.Weights {
			p := table.Points[i]
			sum[0] += weight
			sum[1] += weight * math.Pow(p[0], 5) * math.Pow(p[1], 3)
			sum[2] += weight * math.Pow(p[0], 6)
		}
		if math.Abs(sum[0]-1) > 1e-14 || math.Abs(sum[1]-1./24) > 1e-14 || math.Abs(sum[2]-1./7) < 1e-5 {
			t.Errorf("slowest %v: integrals %v", slowest, sum)
		}
		if got := table.Values[4*3+2] - table.Points[3][0]*table.Points[3][1]; math.Abs(got) > 1e-15 {
			t.Errorf("shape function of corner 2 at point 3 is off by %g", got)
		}
	}
	triangle, err := ShapeOf(Triangle, 3, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := (&GaussRule{Counts: []int{2, 2}}).Tabulate(triangle); err == nil || !strings.Contains(err.Error(), "triangle") {
		t.Errorf("a triangle: %v", err)
	}
	if _, err := (&GaussRule{Counts: []int{2, 2, 2}}).Tabulate(quad); err == nil || !strings.Contains(err.Error(), "3 directions") {
		t.Errorf("three directions: %v", err)
	}
}
