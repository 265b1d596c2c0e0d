package energy

import (
	"fmt"
	"math"

	"strainledger/mesh"
)

// Axes are the directions of a material's axes 1, 2, 3 in the model's axes, as rows of
// an orthonormal matrix.
type Axes [3]Vector

// axesTolerance is how far typed directions may be from orthonormal: numbers of seven
// digits pass, a direction that was not made a unit vector does not.
const axesTolerance = 1e-6

// NewAxes returns the axes of three directions that are unit vectors at right angles
// within 1e-6, made exactly so: the first keeps its direction, the second its plane.
// A left-handed triple is taken; reversing an axis changes no elastic law. Errors name
// the rows.
func NewAxes(rows [3]Vector) (Axes, error) {
	for i := range rows {
		if length := math.Sqrt(dot(rows[i], rows[i])); !(math.Abs(length-1) <= axesTolerance) {
			return Axes{}, fmt.Errorf("axes: row %d, %v, has length %g, must be a unit vector within %g", i+1, rows[i], length, axesTolerance)
		}
		for j := range i {
			if cosine := dot(rows[i], rows[j]); !(math.Abs(cosine) <= axesTolerance) {
				return Axes{}, fmt.Errorf("axes: rows %d and %d are not at right angles: their scalar product is %g, must be 0 within %g", j+1, i+1, cosine, axesTolerance)
			}
		}
	}
	axes := Axes(rows)
	for i := range axes {
		for j := range i {
			along := dot(axes[i], axes[j])
			for k := range axes[i] {
				axes[i][k] -= float64(along * axes[j][k])
			}
		}
		length := math.Sqrt(dot(axes[i], axes[i]))
		for k := range axes[i] {
			axes[i][k] /= length
		}
	}
	return axes, nil
}

func dot(a, b Vector) float64 {
	return float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
}

// ToMaterial returns the components along the axes of a tensor given in model axes:
// σ'_ij = a_ip a_jq σ_pq, for stress and for strain with tensor shear.
func (a *Axes) ToMaterial(t *mesh.SymmetricTensor) mesh.SymmetricTensor {
	return project(a[0], a[1], a[2], t)
}

// ToModel returns the components in model axes of a tensor given along the axes.
func (a *Axes) ToModel(t *mesh.SymmetricTensor) mesh.SymmetricTensor {
	return project(
		Vector{a[0][0], a[1][0], a[2][0]},
		Vector{a[0][1], a[1][1], a[2][1]},
		Vector{a[0][2], a[1][2], a[2][2]}, t)
}

// project returns the components of a tensor along three directions.
func project(x, y, z Vector, t *mesh.SymmetricTensor) mesh.SymmetricTensor {
	tx, ty, tz := times(t, x), times(t, y), times(t, z)
	return mesh.SymmetricTensor{dot(x, tx), dot(y, ty), dot(z, tz), dot(x, ty), dot(y, tz), dot(x, tz)}
}

// times returns the product of a tensor and a direction.
func times(t *mesh.SymmetricTensor, v Vector) Vector {
	return Vector{
		dot(Vector{t[0], t[3], t[5]}, v),
		dot(Vector{t[3], t[1], t[4]}, v),
		dot(Vector{t[5], t[4], t[2]}, v),
	}
}
