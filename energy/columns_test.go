package energy

import (
	"context"
	"encoding/binary"
	"errors"
	"math"
	"slices"
	"sync"
	"testing"

	"strainledger/mesh"
)

// A memoryColumn is a column in memory. Workers write to it at once.
type memoryColumn struct {
	lock sync.Mutex
	data []byte
}

func (c *memoryColumn) WriteAt(data []byte, at int64) (int, error) {
	c.lock.Lock()
	defer c.lock.Unlock()
	if behind := int(at) + len(data); behind > len(c.data) {
		c.data = append(c.data, make([]byte, behind-len(c.data))...)
	}
	return copy(c.data[at:], data), nil
}

func (c *memoryColumn) floats() (values []float64) {
	for at := 0; at < len(c.data); at += 8 {
		values = append(values, math.Float64frombits(binary.LittleEndian.Uint64(c.data[at:])))
	}
	return values
}

func (c *memoryColumn) integers() (values []int32) {
	for at := 0; at < len(c.data); at += 4 {
		values = append(values, int32(binary.LittleEndian.Uint32(c.data[at:])))
	}
	return values
}

// tallyColumns returns the columns of a tally.
func tallyColumns(t *testing.T, model *mesh.Model, options Options) (numbers map[string][]float64, regions []int32) {
	t.Helper()
	columns := [5]memoryColumn{}
	options.Columns = &Columns{Density: &columns[0], Energy: &columns[1], EquivalentStress: &columns[2], Utilisation: &columns[3], Region: &columns[4]}
	if _, err := Tally(context.Background(), model, &options, nil); err != nil {
		t.Fatal(err)
	}
	return map[string][]float64{
		"density": columns[0].floats(), "energy": columns[1].floats(),
		"equivalent stress": columns[2].floats(), "utilisation": columns[3].floats(),
	}, columns[4].integers()
}

func equalOrNaN(got, want []float64) bool {
	return slices.EqualFunc(got, want, func(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) })
}

// columnMesh has two pieces, each a source of its own where asked for: prisms 2 x 1 x 1
// in a row under uniaxial stress 0, 1, 2 ... and with strain a tenth of it, so that cell k
// has density k²/20. Cells 2 and 5 are left out: the one has no finite stress, the other
// is a ghost.
func columnMesh(hasTwoSources bool) *mesh.Model {
	var pieces []memoryPiece
	for piece, count := range []int{4, 3} {
		points, cells := row(count)
		for i := range points {
			points[i][0] *= 2
		}
		var stress, strain [][]float64
		var parts []float64
		for i := range count {
			k := float64(4*piece + i)
			stress = append(stress, []float64{k, 0, 0, 0, 0, 0})
			strain = append(strain, []float64{k / 10, 0, 0, 0, 0, 0})
			parts = append(parts, float64(i%2))
		}
		arrays := []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...), labels1("part", parts...)}
		pieces = append(pieces, memoryPiece{points: points, cells: cells, arrays: arrays})
	}
	pieces[0].arrays[0].values[12] = math.NaN()
	pieces[1].hidden = []uint8{0, mesh.DuplicateCell, 0}
	model := (&memoryMesh{pieces: pieces}).model()
	if !hasTwoSources {
		return model
	}
	model.Sources = append(model.Sources, mesh.Source{Path: "second", Cells: 3})
	model.Sources[0].Cells = 4
	model.Pieces[1].Source, model.Pieces[1].FirstCell = 1, 0
	return model
}

// Every column of every cell, by its definition: w = ½ σ ε, U = wV, σ, σ over the limit.
func TestColumns(t *testing.T) {
	limited := steel()
	limited.ProportionalLimit = 4
	options := solidOptions(mesh.OnCell, limited, NewMaterial("bare"))
	options.Regions = []Region{
		{Name: "even", Array: "part", Values: []float64{0}, Material: "steel"},
		{Name: "odd", Array: "part", Values: []float64{1}, Material: "bare"},
	}
	nan := math.NaN()
	want := map[string][]float64{
		"density":           {0, 1. / 20, nan, 9. / 20, 16. / 20, nan, 36. / 20},
		"energy":            {0, 2. / 20, nan, 18. / 20, 32. / 20, nan, 72. / 20},
		"equivalent stress": {0, 1, nan, 3, 4, nan, 6},
		"utilisation":       {0, nan, nan, nan, 1, nan, 1.5},
	}
	wantRegions := []int32{0, 1, -1, 1, 0, -1, 0}
	for _, chunk := range []int{1, 3, 0} {
		for _, hasTwoSources := range []bool{false, true} {
			options.ChunkCells, options.Workers = chunk, 1+3*(chunk%2)
			numbers, regions := tallyColumns(t, columnMesh(hasTwoSources), options)
			for name, values := range want {
				for i := range values {
					if got := numbers[name]; len(got) != len(values) || !within(got[i], values[i], 1e-15) && !equalOrNaN(got[i:i+1], values[i:i+1]) {
						t.Errorf("%s %v, want %v", name, got, values)
						break
					}
				}
			}
			if !slices.Equal(regions, wantRegions) {
				t.Errorf("regions %v, want %v", regions, wantRegions)
			}
		}
	}
}

// Where the energy cannot be told, its columns hold none.
func TestColumnsWithoutEnergy(t *testing.T) {
	stress, strain := randomStates(isotropic(t, 70000, 0.33), 20, 6)
	for i := range strain {
		for c := range 3 {
			strain[i][c] += 1.84e-3
		}
	}
	m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...))
	numbers, _ := tallyColumns(t, m.model(), Options{})
	for i := range 20 {
		if !math.IsNaN(numbers["density"][i]) || !math.IsNaN(numbers["energy"][i]) || math.IsNaN(numbers["equivalent stress"][i]) {
			t.Fatalf("cell %d has density %v, energy %v and equivalent stress %v", i, numbers["density"][i], numbers["energy"][i], numbers["equivalent stress"][i])
		}
	}
}

type fullColumn struct{}

var errFull = errors.New("no room")

func (fullColumn) WriteAt([]byte, int64) (int, error) { return 0, errFull }

func TestColumnThatCannotBeWritten(t *testing.T) {
	good, bad := &memoryColumn{}, fullColumn{}
	for i, columns := range []Columns{
		{bad, good, good, good, good}, {good, bad, good, good, good}, {good, good, bad, good, good},
		{good, good, good, bad, good}, {good, good, good, good, bad},
	} {
		options := solidOptions(mesh.OnCell)
		options.Columns = &columns
		_, err := Tally(context.Background(), columnMesh(true), &options, nil)
		if place := new(ColumnError); !errors.As(err, &place) || !errors.Is(err, errFull) || err.Error() != errFull.Error() {
			t.Errorf("column %d: %v", i, err)
		}
	}
}
