//go:build !linux

package mesh

// makeLarge returns a slice of count numbers, all zero.
func makeLarge(count int) []float64 { return make([]float64, count) }
