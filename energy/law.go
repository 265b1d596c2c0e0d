package energy

import (
	"fmt"
	"math"

	"strainledger/mesh"
)

// A Law is the linear elastic law of one material: isotropic, with Young's modulus E
// and Poisson's ratio ν, or any positive definite stiffness.
//
// Strains are elastic strains with tensor shear; all methods take and return tensors
// in the order xx yy zz xy yz xz, in the axes in which the law is given
// (NewIsotropicLaw, NewOrthotropicLaw, NewStiffnessLaw) or to which it was turned
// (InModelAxes).
type Law struct {
	youngsModulus float64
	poissonsRatio float64
	shearModulus  float64 // G = E / 2(1+ν)
	bulkModulus   float64 // K = E / 3(1-2ν)
	lame          float64 // λ = E ν / (1+ν)(1-2ν)

	general *stiffness // nil: the five numbers above; else they are not used
}

// NewIsotropicLaw returns the law of a stable isotropic material. Errors name the
// violated condition: E > 0, -1 < ν < 0.5.
func NewIsotropicLaw(youngsModulus, poissonsRatio float64) (*Law, error) {
	if !(youngsModulus > 0) {
		return nil, fmt.Errorf("the Young's modulus is %g, must be above 0", youngsModulus)
	}
	if !(poissonsRatio > -1 && poissonsRatio < 0.5) {
		return nil, fmt.Errorf("the Poisson's ratio is %g, must lie between -1 and 0.5", poissonsRatio)
	}
	e, nu := youngsModulus, poissonsRatio
	return &Law{
		youngsModulus: e,
		poissonsRatio: nu,
		shearModulus:  e / (2 * (1 + nu)),
		bulkModulus:   e / (3 * (1 - 2*nu)),
		lame:          e * nu / ((1 + nu) * (1 - 2*nu)),
	}, nil
}

// IsIsotropic reports whether there is a law that is the same in all directions, which
// the split into volumetric and distortional energy needs. A stiffness that is isotropic
// but for the rounding of typed numbers counts as isotropic.
func (l *Law) IsIsotropic() bool { return l != nil && (l.general == nil || l.general.isotropic) }

// isotropicConstants returns Young's modulus and Poisson's ratio, NaN unless the law is
// isotropic.
func (l *Law) isotropicConstants() (youngsModulus, poissonsRatio float64) {
	switch {
	case !l.IsIsotropic():
		return math.NaN(), math.NaN()
	case l.general == nil:
		return l.youngsModulus, l.poissonsRatio
	}
	compliance := &l.general.strain
	return 1 / compliance[0][0], -compliance[1][0] / compliance[0][0]
}

// Strain returns the elastic strain ε = S:σ of a stress.
func (l *Law) Strain(stress *mesh.SymmetricTensor) mesh.SymmetricTensor {
	if l.general != nil {
		return l.general.strain.apply(stress)
	}
	trace := stress.Trace()
	normal, shear := (1+l.poissonsRatio)/l.youngsModulus, 0.5/l.shearModulus
	volumetric := l.poissonsRatio / l.youngsModulus * trace
	return mesh.SymmetricTensor{
		float64(normal*stress[0]) - volumetric,
		float64(normal*stress[1]) - volumetric,
		float64(normal*stress[2]) - volumetric,
		shear * stress[3], shear * stress[4], shear * stress[5],
	}
}

// Stress returns the stress σ = C:ε of an elastic strain.
func (l *Law) Stress(strain *mesh.SymmetricTensor) mesh.SymmetricTensor {
	if l.general != nil {
		return l.general.stress.apply(strain)
	}
	double := 2 * l.shearModulus
	volumetric := l.lame * strain.Trace()
	return mesh.SymmetricTensor{
		float64(double*strain[0]) + volumetric,
		float64(double*strain[1]) + volumetric,
		float64(double*strain[2]) + volumetric,
		double * strain[3], double * strain[4], double * strain[5],
	}
}

// CompletePlaneStress sets the strains out of the plane, ε_zz, ε_yz and ε_xz, to what
// makes the stresses out of the plane vanish at the given in-plane elastic strain.
// Isotropic: ε_zz = -ν/(1-ν) (ε_xx + ε_yy).
func (l *Law) CompletePlaneStress(strain *mesh.SymmetricTensor) {
	if l.general != nil {
		l.general.stress.complete(strain, 0)
		return
	}
	strain[2] = -l.poissonsRatio / (1 - l.poissonsRatio) * (strain[0] + strain[1])
	strain[4], strain[5] = 0, 0
}

// CompletePlaneStrain sets the stresses out of the plane, σ_zz, σ_yz and σ_xz, to what
// belongs to the in-plane stress, an elastic strain ε_zz and no shear strain out of the
// plane. Isotropic: σ_zz = E ε_zz + ν (σ_xx + σ_yy).
func (l *Law) CompletePlaneStrain(stress *mesh.SymmetricTensor, strainZZ float64) {
	if l.general != nil {
		l.general.strain.complete(stress, strainZZ)
		return
	}
	stress[2] = float64(l.youngsModulus*strainZZ) + float64(l.poissonsRatio*(stress[0]+stress[1]))
	stress[4], stress[5] = 0, 0
}

// VolumetricDensity returns w_v = ⅙ tr σ tr ε, the share of ½ σ:ε that changes the
// volume; it has this meaning only for an isotropic law.
func VolumetricDensity(stress, strain *mesh.SymmetricTensor) float64 {
	return stress.Trace() * strain.Trace() / 6
}

// Density returns the elastic strain energy density w = ½ σ:ε at one point.
//
// Both tensors hold xx, yy, zz, xy, yz, xz, and shear strain is the tensor component
// ε_xy, half the engineering γ_xy. Each off-diagonal term stands for two entries of the
// 3×3 tensor, hence no ½ on the shear sum. With stress in MPa the result is in MPa,
// which is N·mm per mm³ (mJ/mm³).
//
// The ½ is the work of a straight path from no load. NaN in gives NaN out. A negative
// result means that σ and ε do not belong together; the caller reports it.
//
// Source: w = ∫ σ:dε with σ = C:ε; Timoshenko & Goodier, Theory of Elasticity (from
// memory).
func Density(stress, strain *mesh.SymmetricTensor) float64 {
	return 0.5 * mesh.Product(stress, strain)
}
