package mesh

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// fixedShapes returns the shape of every type whose node count is fixed and that
// interpolates.
func fixedShapes(t testing.TB) []*Shape {
	t.Helper()
	var all []*Shape
	for number := range 256 {
		row := cellTypeRows[number]
		if row == nil || row.family != middles {
			continue
		}
		for count := range 30 {
			if s, err := ShapeOf(row.number, count, [3]int{}); err == nil {
				all = append(all, s)
			}
		}
	}
	return all
}

// interpolating returns shapes of every kind that interpolates.
func interpolating(t testing.TB) []*Shape { return fixedShapes(t) }

// label names a shape in test output.
func label(s *Shape) string { return fmt.Sprintf("%d %s %d", s.Type, s.Name, s.NodeCount) }

// randomInside returns a random place inside the unit cell of a shape.
func randomInside(s *Shape, random *rand.Rand) (r [3]float64) {
	axis := 0
	for _, dimension := range s.basis.unit.simplices {
		for {
			sum := 0.0
			for i := range dimension {
				r[axis+i] = random.Float64()
				sum += r[axis+i]
			}
			if sum < 1 {
				break
			}
		}
		axis += dimension
	}
	return r
}

func TestShapeFunctionsAreOneAtTheirNodes(t *testing.T) {
	for _, s := range interpolating(t) {
		values := make([]float64, s.NodeCount)
		for i, node := range s.NodeCoordinates() {
			s.Values(node, values)
			for j, got := range values {
				want := 0.0
				if i == j {
					want = 1
				}
				if math.Abs(got-want) > 1e-14 {
					t.Errorf("%s: function %d at node %d is %g, want %g", label(s), j, i, got, want)
				}
			}
		}
	}
}

func TestShapeFunctionsAddUpToOne(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for _, s := range interpolating(t) {
		values := make([]float64, s.NodeCount)
		derivatives := make([][3]float64, s.NodeCount)
		for range 20 {
			r := randomInside(s, random)
			s.Values(r, values)
			s.Derivatives(r, derivatives)
			sum, slope := 0.0, [3]float64{}
			for i := range values {
				sum += values[i]
				for axis := range slope {
					slope[axis] += derivatives[i][axis]
				}
			}
			if math.Abs(sum-1) > 1e-13 || math.Abs(slope[0])+math.Abs(slope[1])+math.Abs(slope[2]) > 1e-11 {
				t.Fatalf("%s at %v: values add up to %.17g, derivatives to %g", label(s), r, sum, slope)
			}
		}
	}
}

// Central differences of step h err by h² times the third derivative, which is below
// 1e3 for all shapes here.
func TestDerivativesAreThoseOfTheValues(t *testing.T) {
	const h = 1e-5
	random := rand.New(rand.NewPCG(3, 4))
	for _, s := range interpolating(t) {
		before, behind := make([]float64, s.NodeCount), make([]float64, s.NodeCount)
		derivatives := make([][3]float64, s.NodeCount)
		for range 10 {
			r := randomInside(s, random)
			s.Derivatives(r, derivatives)
			for axis := range 3 {
				left, right := r, r
				left[axis] -= h
				right[axis] += h
				s.Values(left, before)
				s.Values(right, behind)
				for i := range derivatives {
					want := (behind[i] - before[i]) / (2 * h)
					if axis >= s.Dimension {
						want = 0
					}
					if got := derivatives[i][axis]; math.Abs(got-want) > 1e-6 {
						t.Fatalf("%s: derivative %d of function %d at %v is %.12g, want %.12g", label(s), axis, i, r, got, want)
					}
				}
			}
		}
	}
}
