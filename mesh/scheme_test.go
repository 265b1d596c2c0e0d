package mesh

import (
	"math"
	"strings"
	"testing"
)

// schemeOf describes a rule as a file would.
func schemeOf(cellType CellType, shape *Shape, t *Tabulation, weights []float64) Schemes {
	return Schemes{{Type: cellType, Nodes: shape.NodeCount, Shapes: t.Values, Weights: weights}}
}

// Points of Gauss and of the symmetric rules of triangles and tetrahedra (A. H. Stroud,
// Approximate Calculation of Multiple Integrals, 1971, T2:2-1 and T3:2-1, from memory)
// have one set of weights, whether the file gives them or not.
func TestSchemesTellWeights(t *testing.T) {
	const a, b = 0.58541019662496845, 0.13819660112501052 // (5 + 3√5)/20, (5 - √5)/20
	triangle := [][3]float64{{1. / 6, 1. / 6}, {2. / 3, 1. / 6}, {1. / 6, 2. / 3}}
	var wedge [][3]float64
	for _, z := range []float64{0.5 - math.Sqrt(1./12), 0.5 + math.Sqrt(1./12)} {
		for _, p := range triangle {
			wedge = append(wedge, [3]float64{p[0], p[1], z})
		}
	}
	for _, c := range []struct {
		cellType CellType
		nodes    int
		gauss    []int
		points   [][3]float64
	}{
		{Quad, 4, []int{1, 1}, nil},
		{Quad, 4, []int{2, 2}, nil},
		{QuadraticQuad, 8, []int{3, 3}, nil},
		{Hexahedron, 8, []int{2, 2, 2}, nil},
		{QuadraticHexahedron, 20, []int{3, 3, 3}, nil},
		{Triangle, 3, nil, triangle},
		{QuadraticTriangle, 6, nil, triangle},
		{Tetrahedron, 4, nil, [][3]float64{{b, b, b}, {a, b, b}, {b, a, b}, {b, b, a}}},
		{Wedge, 6, nil, wedge},
	} {
		shape, err := ShapeOf(c.cellType, c.nodes, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		want := &Tabulation{Points: c.points}
		if c.gauss != nil {
			if want, err = (&GaussRule{Counts: c.gauss}).Tabulate(shape); err != nil {
				t.Fatal(err)
			}
		} else {
			shape.tabulateAt(want)
			var unit float64
			for _, weight := range shape.MeasureRule().Weights {
				unit += weight
			}
			for range c.points {
				want.Weights = append(want.Weights, unit/float64(len(c.points)))
			}
		}
		scaled := make([]float64, len(want.Weights)) // as over the cell from -1 to 1
		for q, weight := range want.Weights {
			scaled[q] = 8 * weight
		}
		for name, weights := range map[string][]float64{"none": make([]float64, len(want.Weights)), "given": scaled} {
			got, err := schemeOf(c.cellType, shape, want, weights).Tabulate(shape)
			if err != nil {
				t.Errorf("%v, weights %s: %v", c.cellType, name, err)
				continue
			}
			for q := range want.Weights {
				// The linear system for 27 weights is solved to some 1e-14.
				if math.Abs(got.Weights[q]-want.Weights[q]) > 1e-12*want.Weights[q] {
					t.Errorf("%v, weights %s: weight %d is %.16g, want %.16g", c.cellType, name, q, got.Weights[q], want.Weights[q])
				}
				for axis := range 3 {
					if math.Abs(got.Points[q][axis]-want.Points[q][axis]) > 1e-14 {
						t.Errorf("%v: point %d is %v, want %v", c.cellType, q, got.Points[q], want.Points[q])
					}
				}
			}
		}
	}
}

func TestSchemesThatTellNothing(t *testing.T) {
	quad, err := ShapeOf(Quad, 4, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	pyramid, err := ShapeOf(Pyramid, 5, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	tabulated := func(shape *Shape, points ...[3]float64) *Tabulation {
		table := &Tabulation{Points: points}
		shape.tabulateAt(table)
		return table
	}
	off := tabulated(quad, [3]float64{0.5, 0.5})
	off.Values[0] += 0.01
	for _, c := range []struct {
		cellType CellType
		shape    *Shape
		table    *Tabulation
		weights  []float64
		want     string
	}{
		{Quad, quad, tabulated(quad, [3]float64{0.2, 0.2}, [3]float64{0.8, 0.2}, [3]float64{0.5, 0.9}), make([]float64, 3), "no weights"},
		{Quad, quad, tabulated(quad, [3]float64{0.2, 0.2}, [3]float64{0.2, 0.2}, [3]float64{0.8, 0.8}, [3]float64{0.2, 0.8}), make([]float64, 4), "no weights"},
		{Pyramid, pyramid, tabulated(pyramid, [3]float64{0.5, 0.5, 0.2}), make([]float64, 1), "cannot be told"},
		{Quad, quad, off, []float64{1}, "shape functions are not those of a quadrilateral"},
		{Triangle, quad, tabulated(quad, [3]float64{0.5, 0.5}), []float64{1}, "describes no integration points for a quadrilateral"},
	} {
		if _, err := schemeOf(c.cellType, c.shape, c.table, c.weights).Tabulate(c.shape); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v: error %v, want %q", c.cellType, err, c.want)
		}
	}
	if points := (Schemes{{Weights: []float64{1}}, {Weights: []float64{1, 1}}}).Points(); points != 0 {
		t.Errorf("different types with 1 and 2 points: %d, want 0", points)
	}
}
