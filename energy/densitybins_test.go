package energy

import (
	"math"
	"math/rand/v2"
	"testing"
)

// A density lies in the bin that its logarithm says. Only at a bin's very edge may the
// rounding of the logarithm say otherwise.
func TestBinsAreLogarithmic(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	var bins densityBins
	position := map[*bin]int{}
	for range 100_000 {
		density := math.Exp2(60*random.Float64() - 30)
		logarithm := binsPerOctave * math.Log2(density)
		if math.Abs(logarithm-math.Round(logarithm)) < 1e-9 {
			continue
		}
		want, into := int(math.Floor(logarithm)), bins.binOf(density)
		if was, isKnown := position[into]; isKnown && was != want {
			t.Fatalf("density %g of bin %d is in bin %d", density, want, was)
		}
		position[into] = want
	}
	if len(position) != 60*binsPerOctave {
		t.Errorf("%d bins, want %d", len(position), 60*binsPerOctave)
	}
	for _, density := range []float64{1, 2, 1. / 1024} { // exactly on an edge: the bin above it
		if position[bins.binOf(density)] != int(32*math.Log2(density)) || bins.binOf(density) == bins.binOf(math.Nextafter(density, 0)) {
			t.Errorf("density %g is in bin %d", density, position[bins.binOf(density)])
		}
	}
	for _, density := range []float64{0, -1, math.Copysign(0, -1), -math.MaxFloat64, math.SmallestNonzeroFloat64} {
		if bins.binOf(density) != &bins.rest {
			t.Errorf("density %g is not with those of 0 and below", density)
		}
	}
}

// Bins of parts join to those of the whole, in any order of the parts.
func TestBinsJoin(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	parts := make([]densityBins, 4)
	var whole densityBins
	var volumes, energies Sum
	for i := range 4000 {
		density := []float64{math.Exp2(float64(30*(i%4)) + 8*random.Float64())}
		if i%50 == 0 {
			density[0] = 0
		}
		volume, energy := []float64{1 + random.Float64()}, []float64{density[0] * 3}
		whole.addAll(density, volume, energy)
		volumes.AddAll(volume)
		energies.AddAll(energy)
		parts[i%4].addAll(density, volume, energy)
	}
	if volume, energy := whole.sums(); volume.Float64() != volumes.Float64() || energy.Float64() != energies.Float64() {
		t.Errorf("sums %g and %g, want %g and %g", volume.Float64(), energy.Float64(), volumes.Float64(), energies.Float64())
	}
	for _, order := range [][]int{{0, 1, 2, 3}, {3, 1, 0, 2}} {
		var joined densityBins
		for _, i := range order {
			joined.join(&parts[i])
		}
		got, want := joined.falling(), whole.falling()
		if len(got) != len(want) {
			t.Fatalf("parts joined as %v: %d bins, want %d", order, len(got), len(want))
		}
		for i := range got {
			if got[i].volume.float64() != want[i].volume.float64() || got[i].energy.float64() != want[i].energy.float64() {
				t.Errorf("parts joined as %v: bin %d differs", order, i)
			}
		}
	}
}

func BenchmarkDensityBins(b *testing.B) {
	density, volume, energy := make([]float64, 8192), make([]float64, 8192), make([]float64, 8192)
	random := rand.New(rand.NewPCG(1, 2))
	for i := range density {
		density[i], volume[i] = math.Pow(10, -4*random.Float64()), 1+random.Float64()
		energy[i] = density[i] * volume[i]
	}
	var bins densityBins
	for b.Loop() {
		bins.addAll(density, volume, energy)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(density)), "ns/cell")
	if len(bins.falling()) == 0 {
		b.Fatal("nothing was added")
	}
}
