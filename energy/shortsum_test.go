package energy

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// A short sum is as exact as a long one, whatever the sizes of its terms, and however
// they were shared.
func TestShortSumIsExact(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOf(rapid.Custom(func(t *rapid.T) float64 {
			return math.Ldexp(rapid.Float64Range(-2, 2).Draw(t, "mantissa"), rapid.SampledFrom([]int{-1073, -40, 0, 1, 30, 33, 70, 1000}).Draw(t, "exponent"))
		})).Draw(t, "values")
		cut := rapid.IntRange(0, len(values)).Draw(t, "cut")
		var whole, left, right shortSum
		for i, value := range values {
			whole.add(value)
			if i < cut {
				left.add(value)
			} else {
				right.add(value)
			}
		}
		left.join(&right)
		if want := exactly(values); whole.float64() != want || left.float64() != want {
			t.Fatalf("whole %g, joined %g, want %g", whole.float64(), left.float64(), want)
		}
	})
}
