package energy

import (
	"math"

	"strainledger/mesh"
)

// VonMisesStress returns the von Mises equivalent stress √(3/2 s:s), s the deviator.
//
// Source: Huber 1904, von Mises 1913, Hencky 1924 (from memory).
func VonMisesStress(stress *mesh.SymmetricTensor) float64 {
	xy, yz, zx := stress[0]-stress[1], stress[1]-stress[2], stress[2]-stress[0]
	normal := float64(xy*xy) + float64(yz*yz) + float64(zx*zx)
	shear := float64(stress[3]*stress[3]) + float64(stress[4]*stress[4]) + float64(stress[5]*stress[5])
	return math.Sqrt(float64(0.5*normal) + float64(3*shear))
}
