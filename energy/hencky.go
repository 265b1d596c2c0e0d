package energy

import (
	"fmt"
	"math"

	"strainledger/mesh"
)

// A HenckyLaw gives the energy per volume under a stress-strain curve for any state of
// strain, by the deformation theory of plasticity: an estimate for monotonic,
// proportional loading, which knows no unloading.
//
// Source: Hencky 1924 (from memory).
type HenckyLaw struct {
	bulkModulus float64
	equivalent  *Curve // von Mises stress against equivalent strain
}

// strainRounding is what an equivalent strain may lie beyond the curve's last point by
// the rounding of its own computation.
const strainRounding = 1e-12

// NewHenckyLaw returns the law of a uniaxial curve that begins at (0, 0), with Young's
// modulus E and Poisson's ratio ν of its elastic part. The curve is converted by
// ε_eq = ε_p + σ/3G with the plastic strain ε_p = ε - σ/E; where noise makes ε_p negative
// it counts as 0, and points at which ε_eq does not rise are left out.
//
// Errors: what NewIsotropicLaw refuses, a curve that begins elsewhere.
func NewHenckyLaw(curve *Curve, youngsModulus, poissonsRatio float64) (*HenckyLaw, error) {
	law, err := NewIsotropicLaw(youngsModulus, poissonsRatio)
	if err != nil {
		return nil, err
	}
	if begin := curve.Point(0); begin != (CurvePoint{}) {
		return nil, fmt.Errorf("the curve begins at strain %g, stress %g, must begin at 0, 0", begin.Strain, begin.Stress)
	}
	points := []CurvePoint{{}}
	for i := 1; i < curve.Len(); i++ {
		p := curve.Point(i)
		plastic := math.Max(0, p.Strain-p.Stress/youngsModulus)
		if strain := plastic + p.Stress/(3*law.shearModulus); strain > points[len(points)-1].Strain {
			points = append(points, CurvePoint{strain, p.Stress})
		}
	}
	equivalent, err := NewCurve(points)
	if err != nil {
		return nil, err
	}
	return &HenckyLaw{law.bulkModulus, equivalent}, nil
}

// Density returns w = ½ K (tr ε)² + ∫ σ_eq dε_eq at the strain reached, whose shear is
// the tensor component: the total strain but for its thermal part. Below the limit it
// is ½ σ:ε. NaN where the equivalent strain √(2/3 e:e), e the deviator, lies beyond the
// curve's last point.
func (l *HenckyLaw) Density(strain *mesh.SymmetricTensor) float64 {
	trace, reached := strain.Trace(), EquivalentStrain(strain)
	if last := l.equivalent.Last().Strain; reached > last && reached <= last*(1+strainRounding) {
		reached = last
	}
	return float64(0.5*l.bulkModulus*trace*trace) + l.equivalent.Area(reached)
}

// EquivalentStrain returns √(2/3 e:e) of a strain with tensor shear, e its deviator. In
// uniaxial stress without volume change it is the axial strain; under Hooke's law it is
// the von Mises stress over 3G.
func EquivalentStrain(strain *mesh.SymmetricTensor) float64 {
	return VonMisesStress(strain) * (2. / 3)
}
