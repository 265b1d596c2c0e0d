package readers

import (
	"context"
	"testing"

	"strainledger/mesh"
)

// Several workers share the indexes and tables of a file; each cell comes once and is
// the same for any number of workers.
func TestWorkersShareAFile(t *testing.T) {
	grid := newTestGrid(4000)
	for name, data := range map[string][]byte{
		"ascii":       grid.file(testCoding{form: "ascii"}),
		"wrapped":     grid.file(testCoding{form: "binary", wrap: 70}),
		"zlib":        grid.file(testCoding{form: "raw", compressor: "zlib", blockSize: 3000}),
		"legacy list": grid.legacy(t, false, "4.2"),
	} {
		t.Run(name, func(t *testing.T) {
			for _, workers := range []int{1, 3} {
				model, err := openBytes(data, Options{})
				if err != nil {
					t.Fatal(err)
				}
				stress := make([]float64, len(grid.stress))
				region := make([]int64, len(grid.region))
				points := make([]float64, 3*len(grid.region)) // of the first node of each cell
				walk := mesh.NewWalk(model, workers, 100)
				want := &mesh.Want{CellValues: []string{"stress"}, Labels: []string{"region"}}
				err = walk.Each(context.Background(), want, nil, func(int) mesh.Visitor {
					return func(c *mesh.Chunk) error {
						copy(stress[6*c.First:], c.Values[0])
						copy(region[c.First:], c.Labels[0])
						for i := range c.Count {
							copy(points[3*(c.First+int64(i)):], c.Points[3*c.Nodes[c.Start[i]]:][:3])
						}
						return nil
					}
				})
				if err != nil {
					t.Fatal(err)
				}
				if err := walk.Close(); err != nil {
					t.Error(err)
				}
				if at := firstDifference(stress, grid.stress); at >= 0 {
					t.Errorf("%d workers: stress %d is %v, want %v", workers, at, stress[at], grid.stress[at])
				}
				start := 0
				for i, label := range region {
					node := int(grid.connectivity[start])
					if float64(label) != grid.region[i] || firstDifference(points[3*i:3*i+3], grid.points[3*node:3*node+3]) >= 0 {
						t.Fatalf("%d workers: cell %d has region %d and begins at %v", workers, i, label, points[3*i:3*i+3])
					}
					start = int(grid.offsets[i])
				}
			}
		})
	}
}
