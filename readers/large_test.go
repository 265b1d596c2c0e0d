package readers

import (
	"context"
	"os"
	"path/filepath"
	"testing"

	"strainledger/mesh"
	"strainledger/testdata/large"
)

// writeLarge writes a generated result file and returns its path.
func writeLarge(t testing.TB, cells int, encoding string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), encoding+".vtu")
	file, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	if err := large.Write(file, cells, encoding); err != nil {
		t.Fatal(err)
	}
	if err := file.Close(); err != nil {
		t.Fatal(err)
	}
	return path
}

// pass reads a whole model as a tally would and returns sums that depend on every
// value.
func pass(t testing.TB, path string, chunk int64) (sums [4]float64) {
	t.Helper()
	ctx := context.Background()
	model, err := Open(ctx, []string{path}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	cursor := model.Open()
	defer cursor.Close()
	want := &mesh.Want{CellValues: []string{"stress", "strain"}, Labels: []string{"region"}}
	for i, p := range model.Pieces {
		points := make([]float64, 3*p.PointCount)
		if err := cursor.Points(ctx, i, 0, p.PointCount, points); err != nil {
			t.Fatal(err)
		}
		for _, x := range points {
			sums[0] += x
		}
		var c mesh.Chunk
		for low := int64(0); low < p.CellCount; low += chunk {
			span := mesh.Span{Piece: i, Low: low, High: min(low+chunk, p.CellCount)}
			if err := cursor.Cells(ctx, span, want, &c); err != nil {
				t.Fatal(err)
			}
			for i, node := range c.Nodes {
				sums[1] += float64(node) * float64(i%8+1)
			}
			for k, value := range c.Values[0] {
				sums[2] += value * c.Values[1][k]
			}
			for _, label := range c.Labels[0] {
				sums[3] += float64(label)
			}
		}
	}
	return sums
}

func BenchmarkPass(b *testing.B) {
	const cells = 200_000
	for _, encoding := range []string{"raw", "zlib", "lz4", "base64", "ascii"} {
		b.Run(encoding, func(b *testing.B) {
			path := writeLarge(b, cells, encoding)
			b.SetBytes(large.ArrayBytes(cells))
			b.ReportAllocs()
			for b.Loop() {
				pass(b, path, 8192)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/cells, "ns/cell")
		})
	}
}
