package mesh

import "math"

// A square is a 3×3 matrix, row by row.
type square [3][3]float64

// PrincipalValues returns the eigenvalues of the tensor, largest first. NaN in gives
// NaN out.
func (t *SymmetricTensor) PrincipalValues() [3]float64 {
	a := t.square()
	a.diagonalise(nil)
	values := [3]float64{a[0][0], a[1][1], a[2][2]}
	sortFalling(&values, nil)
	return values
}

// PrincipalDirections returns the eigenvalues of the tensor, largest first, and beside
// each a unit vector along its axis. An axis has no sign: the component of largest size
// (of several, the first) is positive. Axes are at right angles; those of equal values
// are any such axes.
func (t *SymmetricTensor) PrincipalDirections() (values [3]float64, directions [3][3]float64) {
	a, axes := t.square(), square{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	a.diagonalise(&axes)
	values = [3]float64{a[0][0], a[1][1], a[2][2]}
	sortFalling(&values, &axes)
	for i := range axes {
		orient(&axes[i])
	}
	return values, axes
}

// square returns the tensor as a matrix.
func (t *SymmetricTensor) square() square {
	return square{{t[0], t[3], t[5]}, {t[3], t[1], t[4]}, {t[5], t[4], t[2]}}
}

// diagonalise turns a symmetric matrix until nothing is left beside its diagonal, which
// then holds the eigenvalues, and turns the rows of axes with it where they are given.
// Errors are a few times 1e-16 of the largest eigenvalue.
//
// Source: Jacobi 1846, in cyclic order, with the rotation of Rutishauser 1966 (from
// memory).
func (a *square) diagonalise(axes *square) {
	// Convergence is quadratic: five sweeps do for any matrix. NaN would never end.
	const most = 20
	for range most {
		if a[0][1] == 0 && a[1][2] == 0 && a[0][2] == 0 {
			return
		}
		a.rotate(0, 1, axes)
		a.rotate(1, 2, axes)
		a.rotate(0, 2, axes)
	}
}

// rotate makes the terms p, q of the matrix vanish by a rotation in that plane.
func (a *square) rotate(p, q int, axes *square) {
	beside := a[p][q]
	switch {
	case beside == 0:
		return
	case a[p][p]+beside == a[p][p] && a[q][q]+beside == a[q][q]:
		// Nothing that the diagonal terms could show.
		a[p][q], a[q][p] = 0, 0
		return
	}
	// The tangent t of the smaller of the two angles is a root of t² + 2θt - 1 = 0; it
	// is 0 where θ² is past the largest number.
	theta := (a[q][q] - a[p][p]) / (2 * beside)
	tangent := math.Copysign(1/(math.Abs(theta)+math.Sqrt(float64(theta*theta)+1)), theta)
	cosine := 1 / math.Sqrt(float64(tangent*tangent)+1)
	sine := tangent * cosine
	a[p][p] -= float64(tangent * beside)
	a[q][q] += float64(tangent * beside)
	a[p][q], a[q][p] = 0, 0
	r := 3 - p - q
	a[p][r], a[q][r] = float64(cosine*a[p][r])-float64(sine*a[q][r]), float64(sine*a[p][r])+float64(cosine*a[q][r])
	a[r][p], a[r][q] = a[p][r], a[q][r]
	if axes == nil {
		return
	}
	for i := range 3 {
		axes[p][i], axes[q][i] = float64(cosine*axes[p][i])-float64(sine*axes[q][i]), float64(sine*axes[p][i])+float64(cosine*axes[q][i])
	}
}

// sortFalling puts values in falling order, and the rows of axes with them where they
// are given.
func sortFalling(values *[3]float64, axes *square) {
	for _, pair := range [3][2]int{{0, 1}, {1, 2}, {0, 1}} {
		i, j := pair[0], pair[1]
		if values[i] >= values[j] {
			continue
		}
		values[i], values[j] = values[j], values[i]
		if axes != nil {
			axes[i], axes[j] = axes[j], axes[i]
		}
	}
}

// orient turns an axis so that its component of largest size is positive.
func orient(axis *[3]float64) {
	largest := 0
	for i := range axis {
		if math.Abs(axis[i]) > math.Abs(axis[largest]) {
			largest = i
		}
	}
	if axis[largest] < 0 {
		for i := range axis {
			axis[i] = 0 - axis[i] // never -0
		}
	}
}
