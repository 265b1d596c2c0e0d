package energy

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// Reference: the sum in arithmetic of 4,000 bits, rounded once.
func exactly(values []float64) float64 {
	total := new(big.Float).SetPrec(4000)
	for _, value := range values {
		total.Add(total, new(big.Float).SetPrec(4000).SetFloat64(value))
	}
	result, _ := total.Float64()
	return result
}

func TestSumOfHardCases(t *testing.T) {
	tiny := math.SmallestNonzeroFloat64
	for _, values := range [][]float64{
		{},
		{0, math.Copysign(0, -1)},
		{1, 1e100, 1, -1e100},
		{0.1, 0.2, 0.3, -0.6},
		{math.MaxFloat64, -math.MaxFloat64, tiny},
		{tiny, tiny, tiny, -2 * tiny},
		{math.MaxFloat64, 1, -math.MaxFloat64, -1},
		{0x1p-1022, -tiny}, // normal next to subnormal
		{1, 0x1p-53},       // tie, to even: 1
		{1 + 0x1p-52, 0x1p-53},
		{1, 0x1p-53, 0x1p-106},
		{-1e-300, 1e-300, -5e-324},
		{1e308, 1e308, -1e308},
	} {
		var sum Sum
		sum.AddAll(values)
		if got, want := sum.Float64(), exactly(values); got != want {
			t.Errorf("sum of %v = %g, want %g", values, got, want)
		}
	}
}

func TestSumDoesNotDependOnOrderOrSharing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		values := rapid.SliceOf(rapid.Custom(func(t *rapid.T) float64 {
			return math.Ldexp(rapid.Float64Range(-2, 2).Draw(t, "mantissa"), rapid.IntRange(-1073, 1000).Draw(t, "exponent"))
		})).Draw(t, "values")
		var whole, left, right Sum
		whole.AddAll(values)
		rand.New(rand.NewPCG(1, 2)).Shuffle(len(values), func(i, j int) { values[i], values[j] = values[j], values[i] })
		cut := rapid.IntRange(0, len(values)).Draw(t, "cut")
		left.AddAll(values[:cut])
		right.AddAll(values[cut:])
		left.Join(&right)
		want := exactly(values)
		if whole.Float64() != want || left.Float64() != want {
			t.Fatalf("whole %g, joined %g, want %g", whole.Float64(), left.Float64(), want)
		}
		left.Subtract(&right)
		if got, want := left.Float64(), exactly(values[:cut]); got != want {
			t.Fatalf("after subtraction %g, want %g", got, want)
		}
	})
}

func BenchmarkSum(b *testing.B) {
	values := make([]float64, 8192)
	random := rand.New(rand.NewPCG(1, 2))
	for i := range values {
		values[i] = math.Pow(10, 3*random.Float64())
	}
	var sum Sum
	for b.Loop() {
		sum.AddAll(values)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(values)), "ns/value")
	if sum.Float64() == 0 {
		b.Fatal("nothing was added")
	}
}
