package energy_test

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"strainledger/energy"
	"strainledger/mesh"
	"strainledger/readers"
	"strainledger/testdata/large"
)

// openLarge writes a result of a million hexahedra with cell data and opens it.
func openLarge(b *testing.B, encoding string) *mesh.Model {
	b.Helper()
	path := filepath.Join(b.TempDir(), "large.vtu")
	file, err := os.Create(path)
	if err != nil {
		b.Fatal(err)
	}
	if err := large.Write(file, 1_000_000, encoding); err != nil {
		b.Fatal(err)
	}
	if err := file.Close(); err != nil {
		b.Fatal(err)
	}
	model, err := readers.Open(context.Background(), []string{path}, readers.Options{})
	if err != nil {
		b.Fatal(err)
	}
	return model
}

// largeOptions leaves order and shear to the audit.
func largeOptions() *energy.Options {
	steel := energy.NewMaterial("steel")
	steel.YoungsModulus, steel.PoissonsRatio, steel.ProportionalLimit = 210000, 0.3, 400
	return &energy.Options{Length: "mm", Stress: "MPa", Idealisation: energy.Solid, Materials: []energy.Material{steel}}
}

// BenchmarkTally is the whole account of a million cells; BenchmarkPlan is the part of
// it before the first cell counts, the audit's sample included: it has to stay below a
// tenth.
func BenchmarkTally(b *testing.B) {
	for _, encoding := range []string{"raw", "zlib"} {
		b.Run(encoding, func(b *testing.B) {
			model := openLarge(b, encoding)
			b.SetBytes(large.ArrayBytes(1_000_000))
			for b.Loop() {
				ledger, err := energy.Tally(context.Background(), model, largeOptions(), nil)
				if err != nil || ledger.Total.Cells < 900_000 {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkPlan(b *testing.B) {
	for _, encoding := range []string{"raw", "zlib"} {
		b.Run(encoding, func(b *testing.B) {
			model := openLarge(b, encoding)
			for b.Loop() {
				if _, err := energy.PlanTally(context.Background(), model, largeOptions()); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
