package energy

import (
	"fmt"
	"math"
	"sort"
)

// A Curve is a uniaxial stress-strain curve: straight between its points and never
// extrapolated. Strain is a ratio and rises from point to point.
type Curve struct {
	strain, stress []float64
	area           []float64 // ∫ σ dε from the first point to each, by trapezoids
}

// A CurvePoint is one point of a stress-strain curve.
type CurvePoint struct {
	Strain float64 `json:"strain"`
	Stress float64 `json:"stress"`
}

// NewCurve returns the curve through the points; it keeps its own copy. Errors, with
// the number of the point from 1: fewer than two points, numbers that are not finite,
// strain that does not rise.
func NewCurve(points []CurvePoint) (*Curve, error) {
	if len(points) < 2 {
		return nil, fmt.Errorf("a curve needs at least 2 points, this has %d", len(points))
	}
	c := &Curve{
		strain: make([]float64, len(points)), stress: make([]float64, len(points)), area: make([]float64, len(points)),
	}
	for i, p := range points {
		c.strain[i], c.stress[i] = p.Strain, p.Stress
		if !isFinite(p.Strain, p.Stress) {
			return nil, fmt.Errorf("point %d of the curve is (%g, %g), must be finite", i+1, p.Strain, p.Stress)
		}
		if i == 0 {
			continue
		}
		if !(p.Strain > c.strain[i-1]) {
			return nil, fmt.Errorf("point %d of the curve has strain %g after %g: strain must rise", i+1, p.Strain, c.strain[i-1])
		}
		c.area[i] = c.area[i-1] + trapezoid(points[i-1], p)
	}
	return c, nil
}

// trapezoid returns the area under the straight line between two points.
func trapezoid(a, b CurvePoint) float64 {
	return (a.Stress/2 + b.Stress/2) * (b.Strain - a.Strain)
}

// Len returns the number of points.
func (c *Curve) Len() int { return len(c.strain) }

// Point returns point i, counted from 0.
func (c *Curve) Point(i int) CurvePoint { return CurvePoint{c.strain[i], c.stress[i]} }

// Last returns the last point.
func (c *Curve) Last() CurvePoint { return c.Point(c.Len() - 1) }

// segment returns the number of the point that ends the segment in which a strain
// lies, or -1 outside the curve.
func (c *Curve) segment(strain float64) int {
	if !(strain >= c.strain[0] && strain <= c.strain[c.Len()-1]) {
		return -1
	}
	return max(1, sort.SearchFloat64s(c.strain, strain))
}

// Stress returns the stress at a strain, NaN outside the curve.
func (c *Curve) Stress(strain float64) float64 {
	end := c.segment(strain)
	if end < 0 {
		return math.NaN()
	}
	if strain == c.strain[end] {
		return c.stress[end]
	}
	share := (strain - c.strain[end-1]) / (c.strain[end] - c.strain[end-1])
	return c.stress[end-1] + float64(share*(c.stress[end]-c.stress[end-1]))
}

// PlasticStrain returns what is left of a strain after unloading along the modulus,
// ε - σ(ε)/E; NaN outside the curve.
func (c *Curve) PlasticStrain(strain, youngsModulus float64) float64 {
	return strain - c.Stress(strain)/youngsModulus
}

// Area returns ∫ σ dε from the first point to a strain, exact for the straight
// segments; NaN outside the curve. It has the unit of stress, which is energy per
// volume.
func (c *Curve) Area(strain float64) float64 {
	end := c.segment(strain)
	if end < 0 {
		return math.NaN()
	}
	return c.area[end-1] + trapezoid(c.Point(end-1), CurvePoint{strain, c.Stress(strain)})
}

// True returns true strain ln(1+e) and true stress s(1+e) of an engineering point. It
// holds for uniform deformation at constant volume: up to the ultimate stress of a
// tensile test, not once the specimen necks.
func (p CurvePoint) True() CurvePoint {
	return CurvePoint{math.Log1p(p.Strain), p.Stress * (1 + p.Strain)}
}

// Engineering returns the engineering point of a true one, the inverse of True with
// the same limits.
func (p CurvePoint) Engineering() CurvePoint {
	strain := math.Expm1(p.Strain)
	return CurvePoint{strain, p.Stress / (1 + strain)}
}

// ModulusOfResilience returns the energy per volume that a material stores up to a
// stress on its elastic line, σ²/2E.
func ModulusOfResilience(stress, youngsModulus float64) float64 {
	return stress * stress / (2 * youngsModulus)
}
