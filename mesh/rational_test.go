package mesh

import (
	"math"
	"testing"
)

// A quarter circle is a rational Bézier curve of degree 2 with the middle weight √½,
// and a quarter disc such a triangle.
//
// Source: G. Farin, Curves and Surfaces for CAGD, conics as rational quadratics.
func TestRationalCellsAreRound(t *testing.T) {
	arc := testCell(t, BezierCurve, [3]int{}, [][3]float64{{1, 0}, {0, 1}, {1, 1}})
	arc.RationalWeights = []float64{1, 1, math.Sqrt(0.5)}
	if got := arc.Measure(); !near(got, math.Pi/2, 1e-14) {
		t.Errorf("length of a quarter circle is %.17g", got)
	}
	got := arc.Centroid() // 2/π in both directions
	if math.Abs(got[0]-2/math.Pi) > 1e-14 || math.Abs(got[1]-2/math.Pi) > 1e-14 {
		t.Errorf("centroid of a quarter circle is %v", got)
	}
	disc := testCell(t, BezierTriangle, [3]int{}, [][3]float64{{0, 0}, {1, 0}, {0, 1}, {0.5, 0}, {1, 1}, {0, 0.5}})
	disc.RationalWeights = []float64{1, 1, 1, 1, math.Sqrt(0.5), 1}
	area, orientation := disc.PlaneArea()
	if !near(area, math.Pi/4, 1e-12) || orientation != Regular || !near(disc.Measure(), math.Pi/4, 1e-12) {
		t.Errorf("quarter disc: area %.17g (orientation %d), measure %.17g", area, orientation, disc.Measure())
	}
	// Half a ball, and its centroid at 3/8 of the radius.
	volume, smallest, _ := disc.RingVolume(false)
	if !near(volume, 2*math.Pi/3, 1e-12) || smallest != 0 {
		t.Errorf("half a ball: volume %.17g, smallest radius %g", volume, smallest)
	}
	if got := disc.RingCentroid(false); !near(got[1], 3./8, 1e-12) {
		t.Errorf("half a ball: centroid %v", got)
	}
	if disc.RationalWeights = nil; near(disc.Measure(), math.Pi/4, 1e-3) {
		t.Errorf("without weights the disc is round too: %g", disc.Measure())
	}
	// Other types do not look at weights.
	line := testCell(t, LagrangeCurve, [3]int{}, [][3]float64{{1, 0}, {0, 1}, {1, 1}})
	plain := line.Measure()
	line.RationalWeights = []float64{1, 1, math.Sqrt(0.5)}
	if line.IsRational() || line.Measure() != plain {
		t.Errorf("a Lagrange curve takes the weights: %g and %g", line.Measure(), plain)
	}
}

// A quarter of a round bar: the disc along t.
func TestRationalWedgeIsRound(t *testing.T) {
	outline := [][3]float64{{0, 0}, {1, 0}, {0, 1}, {0.5, 0}, {1, 1}, {0, 0.5}}
	weights := []float64{1, 1, 1, 1, math.Sqrt(0.5), 1}
	s, err := ShapeOf(BezierWedge, 12, [3]int{2, 2, 1})
	if err != nil {
		t.Fatal(err)
	}
	order := []int{0, 1, 2, 0, 1, 2, 3, 4, 5, 3, 4, 5}
	levels := []float64{0, 0, 0, 3, 3, 3, 0, 0, 0, 3, 3, 3}
	for _, upwards := range []float64{1, -1} {
		c := &Cell{Shape: s}
		for i, from := range order {
			c.Points = append(c.Points, outline[from][0], outline[from][1], upwards*levels[i])
			c.Nodes = append(c.Nodes, int32(i))
			c.RationalWeights = append(c.RationalWeights, weights[from])
		}
		volume, orientation := c.Volume()
		if !near(volume, 3*math.Pi/4, 1e-12) || orientation != Regular {
			t.Errorf("quarter of a bar (%g): volume %.17g (orientation %d)", upwards, volume, orientation)
		}
		// The disc's centroid lies at 4/3π.
		if got := c.Centroid(); !near(got[0], 4/(3*math.Pi), 1e-12) || !near(got[1], 4/(3*math.Pi), 1e-12) || !near(got[2], upwards*1.5, 1e-12) {
			t.Errorf("quarter of a bar (%g): centroid %v", upwards, got)
		}
	}
}
