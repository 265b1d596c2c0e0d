package mesh

import (
	"math"
	"math/rand/v2"
	"testing"
)

// weighted gives a Bézier cell random rational weights.
func weighted(c *Cell, random *rand.Rand) *Cell {
	c.RationalWeights = make([]float64, len(c.Points)/3)
	for i := range c.RationalWeights {
		c.RationalWeights[i] = 0.5 + random.Float64()
	}
	return c
}

// renumbered returns the same cell among other points, its nodes in falling order, so
// that a position in the cell is not taken for one in the piece.
func renumbered(c *Cell) *Cell {
	n := len(c.Nodes)
	r := &Cell{Shape: c.Shape, Points: make([]float64, 3*(n+2))}
	if c.RationalWeights != nil {
		r.RationalWeights = make([]float64, n+2)
	}
	for i := range r.Points {
		r.Points[i] = math.NaN()
	}
	for i := range n {
		to := n - i
		r.Nodes = append(r.Nodes, int32(to))
		copy(r.Points[3*to:], c.Points[3*i:3*i+3])
		if c.RationalWeights != nil {
			r.RationalWeights[to] = c.RationalWeights[i]
		}
	}
	return r
}

// testCells returns a shaken cell of every shape that interpolates, and for Bézier
// shapes another one with weights.
func testCells(t testing.TB, random *rand.Rand) (cells []*Cell) {
	t.Helper()
	for _, s := range interpolating(t) {
		c := affine(t, s, random)
		for i := range c.Points {
			if s.Dimension == 3 || i%3 < s.Dimension {
				c.Points[i] += 0.02 * random.Float64() / float64(max(1, s.Degrees[0]*s.Degrees[0]))
			}
		}
		if s.Dimension == 2 {
			for i := 2; i < len(c.Points); i += 3 {
				c.Points[i] = 0
			}
		}
		cells = append(cells, renumbered(c))
		if s.row.family == bezier {
			cells = append(cells, renumbered(weighted(c, random)))
		}
	}
	return cells
}

// The gradient of a linear field is its slope, whatever the cell, at every point.
func TestGradientsOfLinearFields(t *testing.T) {
	random := rand.New(rand.NewPCG(13, 14))
	for _, c := range testCells(t, random) {
		s := c.Shape
		if s.Dimension < 2 {
			continue
		}
		rule := s.MeasureRule()
		gradients := make([][3]float64, s.NodeCount)
		slope := [3]float64{2, -3, 5}
		if s.Dimension == 2 {
			slope[2] = 0
		}
		for point := range rule.Weights {
			determinant := c.Gradients(rule, point, gradients)
			if want := c.jacobianDeterminant(rule, point); !near(determinant, want, 1e-12) {
				t.Fatalf("%s: determinant %.17g, want %.17g", label(s), determinant, want)
			}
			var got [3]float64
			for i, g := range gradients {
				add(&got, 7+dot(slope, c.node(i)), g)
			}
			for axis := range got {
				if math.Abs(got[axis]-slope[axis]) > 1e-9 {
					t.Fatalf("%s: gradient %v at point %d, want %v", label(s), got, point, slope)
				}
			}
		}
	}
}

// A cell's derivatives of place by r, s, t are differences of places.
func TestJacobianIsThatOfThePlace(t *testing.T) {
	const h = 1e-5
	random := rand.New(rand.NewPCG(15, 16))
	for _, c := range testCells(t, random) {
		s := c.Shape
		r := randomInside(s, random)
		at := &Tabulation{Points: [][3]float64{r}}
		for axis := range s.Dimension {
			left, right := r, r
			left[axis] -= h
			right[axis] += h
			at.Points = append(at.Points, left, right)
		}
		s.tabulateAt(at)
		xr, yr, zr, xs, ys, zs, xt, yt, zt := c.jacobian(at, 0)
		columns := [][3]float64{{xr, yr, zr}, {xs, ys, zs}, {xt, yt, zt}}
		for axis := range s.Dimension {
			difference := c.Place(at, 2+2*axis)
			add(&difference, -1, c.Place(at, 1+2*axis))
			for i := range difference {
				if got, want := columns[axis][i], difference[i]/(2*h); math.Abs(got-want) > 1e-7 {
					t.Errorf("%s (rational %v): derivative %d of coordinate %d is %.12g, want %.12g", label(s), c.IsRational(), axis, i, got, want)
				}
			}
		}
	}
}

// The place is the sum of the nodes with the cell's values, which add up to 1.
func TestValuesGiveThePlace(t *testing.T) {
	random := rand.New(rand.NewPCG(17, 18))
	for _, c := range testCells(t, random) {
		rule := c.Shape.MeasureRule()
		room := make([]float64, c.Shape.NodeCount)
		for point := range rule.Weights {
			values := c.Values(rule, point, room)
			if isRoom := &values[0] == &room[0]; isRoom != c.IsRational() {
				t.Fatalf("%s: values in the room given: %v, rational: %v", label(c.Shape), isRoom, c.IsRational())
			}
			whole, place := 0.0, [3]float64{}
			for i, value := range values {
				whole += value
				add(&place, value, c.node(i))
			}
			add(&place, -1, c.Place(rule, point))
			if math.Abs(whole-1) > 1e-13 || math.Sqrt(dot(place, place)) > 1e-13 {
				t.Fatalf("%s (rational %v): values add up to %.17g, place off by %v", label(c.Shape), c.IsRational(), whole, place)
			}
		}
	}
}

// The elements at the points of a rule add up to the measure.
func TestElementsAddUpToTheMeasure(t *testing.T) {
	random := rand.New(rand.NewPCG(19, 20))
	for _, c := range testCells(t, random) {
		s := c.Shape
		if s.Dimension < 2 {
			continue
		}
		rule := c.productRule()
		elements := make([]float64, len(rule.Weights))
		sum := func() (sum float64) {
			for _, element := range elements {
				sum += element
			}
			return sum
		}
		check := func(what string, want float64) {
			if got := sum(); !near(got, want, 1e-12) {
				t.Errorf("%s (rational %v): %s elements add up to %.17g, want %.17g", label(s), c.IsRational(), what, got, want)
			}
		}
		if s.Dimension == 3 {
			c.VolumeElements(rule, elements)
			volume, _ := c.Volume()
			check("volume", volume)
			continue
		}
		c.PlaneElements(rule, elements)
		area, _ := c.PlaneArea()
		check("plane", area)
		for _, axisX := range []bool{false, true} {
			c.RingElements(rule, axisX, elements)
			volume, _, _ := c.RingVolume(axisX)
			check("ring", volume)
		}
	}
}

// No method allocates, whatever the shape; a polyhedron's leave working memory behind
// the first time.
func TestCellsDoNotAllocate(t *testing.T) {
	random := rand.New(rand.NewPCG(21, 22))
	cells := []*Cell{cubeOfFaces(nil)}
	seen := map[CellType]bool{}
	for _, c := range testCells(t, random) {
		if !seen[c.Shape.Type] {
			seen[c.Shape.Type] = true
			cells = append(cells, c)
		}
	}
	for _, s := range everyShape(t) {
		switch s.row.family {
		case prism:
			cells = append(cells, affine(t, s, random))
		case chain, strip, fan:
			points := make([][3]float64, s.NodeCount)
			for i := range points {
				points[i] = [3]float64{random.Float64(), random.Float64(), 0}
			}
			cells = append(cells, testCell(t, s.Type, [3]int{}, points))
		}
	}
	var sink float64
	for _, c := range cells {
		rule := c.Shape.ProductRule()
		var elements, room []float64
		var gradients [][3]float64
		if rule != nil {
			elements, room, gradients = make([]float64, len(rule.Weights)), make([]float64, c.Shape.NodeCount), make([][3]float64, c.Shape.NodeCount)
		}
		allocations := testing.AllocsPerRun(1, func() {
			sink += c.Measure() + c.Centroid()[0] + c.Middle()[1]
			if c.HasWarpedFaces() {
				sink++
			}
			switch c.Shape.Dimension {
			case 2:
				area, _ := c.PlaneArea()
				volume, _, _ := c.RingVolume(false)
				sink += area + volume + c.RingCentroid(false)[0]
				if rule != nil {
					c.PlaneElements(rule, elements)
					c.RingElements(rule, true, elements)
				}
			case 3:
				volume, _ := c.Volume()
				sink += volume
				if rule != nil {
					c.VolumeElements(rule, elements)
				}
			}
			if rule != nil && c.Shape.Dimension > 1 {
				sink += c.Gradients(rule, 0, gradients) + c.Place(rule, 0)[0] + c.Values(rule, 0, room)[0]
			}
		})
		if allocations > 0 {
			t.Errorf("%s: %g allocations", label(c.Shape), allocations)
		}
	}
	if sink == 0 {
		t.Error("nothing was computed")
	}
}
