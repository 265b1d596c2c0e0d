package mesh

import "math"

// Vectors where speed does not matter: arrays are kept in memory, not in registers.

// between returns the middle of two places.
func between(a, b [3]float64) [3]float64 {
	return [3]float64{(a[0] + b[0]) / 2, (a[1] + b[1]) / 2, (a[2] + b[2]) / 2}
}

// minus returns a - b.
func minus(a, b [3]float64) [3]float64 {
	return [3]float64{a[0] - b[0], a[1] - b[1], a[2] - b[2]}
}

// scaled returns a multiple.
func scaled(a [3]float64, by float64) [3]float64 {
	return [3]float64{a[0] * by, a[1] * by, a[2] * by}
}

// add adds a multiple of a vector to another.
func add(to *[3]float64, factor float64, a [3]float64) {
	for axis := range to {
		to[axis] += float64(factor * a[axis])
	}
}

// dot returns the scalar product.
func dot(a, b [3]float64) float64 {
	return float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
}

// cross returns the vector product.
func cross(a, b [3]float64) [3]float64 {
	return [3]float64{
		float64(a[1]*b[2]) - float64(a[2]*b[1]),
		float64(a[2]*b[0]) - float64(a[0]*b[2]),
		float64(a[0]*b[1]) - float64(a[1]*b[0]),
	}
}

// norm returns the length.
func norm(a [3]float64) float64 { return math.Sqrt(dot(a, a)) }
