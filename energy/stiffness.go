package energy

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"strainledger/mesh"
)

// A tensorMap takes one symmetric tensor to another: both in the order xx yy zz xy yz
// xz with tensor shear, so that a column that belongs to shear is twice the one of a
// stiffness in engineering shear.
type tensorMap [6][6]float64

// outOfPlane and inPlane are the places of a SymmetricTensor out of the plane x-y and
// in it.
var (
	outOfPlane = [3]int{2, 4, 5}
	inPlane    = [3]int{0, 1, 3}
)

// A stiffness is a linear elastic law that need not be isotropic: σ = C:ε and its
// inverse.
type stiffness struct {
	stress    tensorMap // of a strain
	strain    tensorMap // of a stress
	isotropic bool
}

const (
	// asymmetryTolerance is the difference of two mirrored terms that typed numbers of
	// seven digits may have, in units of the root of their diagonal terms' product,
	// which bounds either in a positive definite matrix.
	asymmetryTolerance = 1e-6
	// definiteTolerance is the least eigenvalue of a matrix scaled to a unit diagonal.
	// Its largest is at most 6, so that four digits of the inverse are left; below it
	// rounding decides even the sign.
	definiteTolerance = 1e-12
	// isotropyTolerance is how far, relative to the largest term, a typed stiffness may
	// be from its isotropic part and still count as isotropic.
	isotropyTolerance = 1e-6
)

// NewOrthotropicLaw returns, in its material axes, the law of an orthotropic material:
// Young's moduli E_x E_y E_z, shear moduli G_xy G_yz G_xz and Poisson's ratios ν_xy
// ν_yz ν_xz, where ν_xy = -ε_yy/ε_xx under a stress along x (ν_xy/E_x = ν_yx/E_y).
//
// Errors name the violated condition of stability: moduli above 0, |ν_xy| < √(E_x/E_y)
// and so on, and 1 - ν_xy ν_yx - ν_yz ν_zy - ν_zx ν_xz - 2 ν_yx ν_zy ν_xz > 0.
//
// Source: Jones, Mechanics of Composite Materials (from memory).
func NewOrthotropicLaw(youngsModuli, shearModuli, poissonsRatios [3]float64) (*Law, error) {
	for i, axis := range []string{"x", "y", "z"} {
		if !(youngsModuli[i] > 0) || math.IsInf(youngsModuli[i], 0) {
			return nil, fmt.Errorf("the Young's modulus E_%s is %g, must be above 0 and finite", axis, youngsModuli[i])
		}
	}
	planes := [3][2]int{{0, 1}, {1, 2}, {0, 2}} // xy yz xz
	product, triple := 0.0, 2.0
	for i, plane := range []string{"xy", "yz", "xz"} {
		if !(shearModuli[i] > 0) || math.IsInf(shearModuli[i], 0) {
			return nil, fmt.Errorf("shear modulus G_%s is %g, must be above 0 and finite", plane, shearModuli[i])
		}
		ratio := youngsModuli[planes[i][0]] / youngsModuli[planes[i][1]]
		if !(math.Abs(poissonsRatios[i]) < math.Sqrt(ratio)) {
			return nil, fmt.Errorf("the Poisson's ratio ν_%s is %g, its size must be below √(E_%c/E_%c) = %g",
				plane, poissonsRatios[i], plane[0], plane[1], math.Sqrt(ratio))
		}
		product += poissonsRatios[i] * poissonsRatios[i] / ratio // ν_xy ν_yx = ν_xy² E_y/E_x
	}
	// ν_yx ν_zy ν_xz = ν_xy ν_yz ν_xz E_z/E_x, for E_y/E_x times E_z/E_y.
	triple *= poissonsRatios[0] * poissonsRatios[1] * poissonsRatios[2] * youngsModuli[2] / youngsModuli[0]
	if determinant := 1 - product - triple; !(determinant > definiteTolerance) {
		return nil, fmt.Errorf("the Poisson's ratios: 1 - ν_xy ν_yx - ν_yz ν_zy - ν_zx ν_xz - 2 ν_yx ν_zy ν_xz is %g, must be above 0", determinant)
	}
	compliance := mat.NewSymDense(6, nil)
	for i := range 3 {
		compliance.SetSym(i, i, 1/youngsModuli[i])
		compliance.SetSym(planes[i][0], planes[i][1], -poissonsRatios[i]/youngsModuli[planes[i][0]])
		compliance.SetSym(3+i, 3+i, 1/shearModuli[i])
	}
	stiffnessMatrix, err := invert(compliance)
	if err != nil {
		return nil, fmt.Errorf("moduli and Poisson's ratios: %w", err)
	}
	return newGeneralLaw(stiffnessMatrix, compliance), nil
}

// NewStiffnessLaw returns the law of a 6×6 stiffness in engineering shear, its rows and
// columns in the given order of six components, of which yx may stand for xy and so on.
// Errors name the violated condition: six different components, finite numbers,
// symmetry within 1e-6, positive definiteness.
func NewStiffnessLaw(rows [6][6]float64, order mesh.Order) (*Law, error) {
	place, err := placesOf(order)
	if err != nil {
		return nil, err
	}
	matrix := mat.NewSymDense(6, nil)
	for i := range 6 {
		if !(rows[i][i] > 0) || math.IsInf(rows[i][i], 0) {
			return nil, fmt.Errorf("stiffness: the diagonal term of %s is %g, must be above 0 and finite", order[i], rows[i][i])
		}
		for j := range i {
			bound := math.Sqrt(rows[i][i]) * math.Sqrt(rows[j][j])
			if !(math.Abs(rows[i][j]-rows[j][i]) <= asymmetryTolerance*bound) {
				return nil, fmt.Errorf("stiffness is not symmetric: the term %s, %s is %g, the term %s, %s is %g; they must be equal",
					order[i], order[j], rows[i][j], order[j], order[i], rows[j][i])
			}
			if !(math.Abs(rows[i][j]) < bound) {
				return nil, fmt.Errorf("stiffness is not positive definite: the size of the term %s, %s is %g, must be below %g, the root of the product of the diagonal terms",
					order[i], order[j], math.Abs(rows[i][j]), bound)
			}
			matrix.SetSym(place[i], place[j], rows[i][j]/2+rows[j][i]/2)
		}
		matrix.SetSym(place[i], place[i], rows[i][i])
	}
	compliance, err := invert(matrix)
	if err != nil {
		return nil, fmt.Errorf("stiffness %w", err)
	}
	return newGeneralLaw(matrix, compliance), nil
}

// placesOf returns the place in a SymmetricTensor of each of six components.
func placesOf(order mesh.Order) ([6]int, error) {
	var place [6]int
	if len(order) != len(place) {
		return place, fmt.Errorf("stiffness order %q names %d components, must name 6", order, len(order))
	}
	for i, name := range order {
		place[i] = slices.IndexFunc(mesh.OrderOf6, func(known string) bool {
			return name == known || name == known[1:]+known[:1]
		})
		if place[i] < 0 {
			return place, fmt.Errorf("stiffness order %q: %q is no component (want xx yy zz xy yz xz)", order, name)
		}
		if slices.Contains(place[:i], place[i]) {
			return place, fmt.Errorf("stiffness order %q names %s twice", order, name)
		}
	}
	return place, nil
}

// invert returns the inverse of a symmetric matrix with a positive diagonal. The error
// says that it is not positive definite, and by how much: a stable material stores
// energy under every strain.
func invert(matrix *mat.SymDense) (*mat.SymDense, error) {
	scale := make([]float64, 6)
	for i := range scale {
		scale[i] = 1 / math.Sqrt(matrix.At(i, i))
	}
	scaled := mat.NewSymDense(6, nil)
	for i := range scale {
		for j := range i {
			scaled.SetSym(i, j, scale[i]*matrix.At(i, j)*scale[j])
		}
		scaled.SetSym(i, i, 1)
	}
	var eigen mat.EigenSym
	var cholesky mat.Cholesky
	// Above the tolerance Cholesky's factors exist; both are asked all the same.
	isFactored := eigen.Factorize(scaled, false) && cholesky.Factorize(scaled)
	if least := slices.Min(eigen.Values(nil)); !(least > definiteTolerance) || !isFactored {
		return nil, fmt.Errorf("is not positive definite: the least eigenvalue of the matrix scaled to a diagonal of ones is %.3g, must be above 0", least)
	}
	var inverse mat.SymDense
	if err := cholesky.InverseTo(&inverse); err != nil {
		return nil, fmt.Errorf("is not positive definite: %w", err)
	}
	for i := range scale {
		for j := range i + 1 {
			inverse.SetSym(i, j, scale[i]*inverse.At(i, j)*scale[j])
		}
	}
	return &inverse, nil
}

// newGeneralLaw returns the law of a stiffness and its inverse, both in engineering
// shear and in the order xx yy zz xy yz xz.
func newGeneralLaw(matrix, compliance *mat.SymDense) *Law {
	law := &stiffness{}
	for i := range 6 {
		for j := range 6 {
			law.stress[i][j] = matrix.At(i, j)
			law.strain[i][j] = compliance.At(i, j)
			if j >= 3 {
				law.stress[i][j] *= 2 // γ = 2 ε
			}
			if i >= 3 {
				law.strain[i][j] *= 0.5 // ε = γ / 2
			}
		}
	}
	law.isotropic = law.stress.isIsotropic()
	return &Law{general: law}
}

// InModelAxes returns the law, given in material axes, in model axes.
func (l *Law) InModelAxes(axes *Axes) *Law {
	if l.general == nil {
		return l
	}
	return &Law{general: &stiffness{
		stress:    l.general.stress.toModel(axes),
		strain:    l.general.strain.toModel(axes),
		isotropic: l.general.isotropic,
	}}
}

// toModel returns a map of tensors along the axes as a map of tensors in model axes.
func (m *tensorMap) toModel(axes *Axes) tensorMap {
	var turned tensorMap
	for j := range turned {
		unit := mesh.SymmetricTensor{}
		unit[j] = 1
		along := axes.ToMaterial(&unit)
		image := m.apply(&along)
		column := axes.ToModel(&image)
		for i := range column {
			turned[i][j] = column[i]
		}
	}
	return turned
}

// apply returns the image of a tensor.
func (m *tensorMap) apply(t *mesh.SymmetricTensor) mesh.SymmetricTensor {
	var image mesh.SymmetricTensor
	for i := range m {
		row := &m[i]
		image[i] = float64(row[0]*t[0]) + float64(row[1]*t[1]) + float64(row[2]*t[2]) +
			float64(row[3]*t[3]) + float64(row[4]*t[4]) + float64(row[5]*t[5])
	}
	return image
}

// complete sets the components zz, yz, xz of a tensor to what gives its image the
// component zz and no shear out of the plane, at the given in-plane components.
func (m *tensorMap) complete(t *mesh.SymmetricTensor, zz float64) {
	var matrix [3][3]float64
	right := [3]float64{zz, 0, 0}
	for i, row := range outOfPlane {
		for j, column := range outOfPlane {
			matrix[i][j] = m[row][column]
			right[i] -= float64(m[row][inPlane[j]] * t[inPlane[j]])
		}
	}
	solution := solve(&matrix, right)
	for i, component := range outOfPlane {
		t[component] = solution[i]
	}
}

// solve returns the solution of three linear equations by Cramer's rule. The matrix is
// a principal part of a positive definite one, hence never singular.
func solve(matrix *[3][3]float64, right [3]float64) [3]float64 {
	a, b, c := Vector(matrix[0]), Vector(matrix[1]), Vector(matrix[2])
	bc, ca, ab := cross(b, c), cross(c, a), cross(a, b)
	determinant := dot(a, bc)
	var solution [3]float64
	for i := range solution {
		solution[i] = (float64(right[0]*bc[i]) + float64(right[1]*ca[i]) + float64(right[2]*ab[i])) / determinant
	}
	return solution
}

func cross(a, b Vector) Vector {
	return Vector{
		float64(a[1]*b[2]) - float64(a[2]*b[1]),
		float64(a[2]*b[0]) - float64(a[0]*b[2]),
		float64(a[0]*b[1]) - float64(a[1]*b[0]),
	}
}

// isIsotropic reports whether a map from strain to stress is λ tr ε I + 2μ ε, λ and μ
// the means of the terms that are equal in such a map.
func (m *tensorMap) isIsotropic() bool {
	lame := (m[0][1] + m[1][2] + m[0][2]) / 3
	double := (m[3][3] + m[4][4] + m[5][5]) / 3
	largest := lame + double
	for i := range m {
		for j := range m[i] {
			want := 0.0
			if i < 3 && j < 3 {
				want = lame
			}
			if i == j {
				want += double
			}
			if !(math.Abs(m[i][j]-want) <= isotropyTolerance*largest) {
				return false
			}
		}
	}
	return true
}
