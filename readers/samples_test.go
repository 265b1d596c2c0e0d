package readers

import (
	"context"
	"encoding/json"
	"maps"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"

	"strainledger/mesh"
)

const samples = "../testdata/vtk-samples"

// A sampleSet is what an index.json says of a data set.
type sampleSet struct {
	File        string
	Points      *int64
	Cells       *int64
	CellTypes   map[string]int64 `json:"cell_types"`
	PointFirst  []any            `json:"point_first"`
	PointLast   []any            `json:"point_last"`
	Bounds      []any
	PointArrays []sampleArray `json:"point_arrays"`
	CellArrays  []sampleArray `json:"cell_arrays"`
	FieldArrays []sampleArray `json:"field_arrays"`
}

type sampleArray struct {
	Name, Type       string
	Components       int
	Tuples           int64
	ComponentNames   []string `json:"component_names"`
	First, Last, Sum []any
}

func readIndex(t testing.TB, path string) []sampleSet {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	var index struct{ Files []sampleSet }
	if err := json.Unmarshal(data, &index); err != nil {
		t.Fatal(err)
	}
	return index.Files
}

// sampleNumbers reads numbers of the index, where NaN, infinities and large integers
// are strings.
func sampleNumbers(t *testing.T, values []any) []float64 {
	t.Helper()
	numbers := make([]float64, len(values))
	for i, value := range values {
		switch value := value.(type) {
		case float64:
			numbers[i] = value
		case string:
			number, err := strconv.ParseFloat(value, 64)
			if err != nil {
				t.Fatalf("index: %q is no number", value)
			}
			numbers[i] = number
		default:
			t.Fatalf("index: %v is no number", value)
		}
	}
	return numbers
}

// A gathered is a whole model in memory, for tests of small files.
type gathered struct {
	points []float64
	cells  int64
	types  map[string]int64
	nodes  [][]int32
	hidden []uint8
	arrays map[arrayKey]*gatheredArray
	order  []arrayKey
}

type arrayKey struct {
	on   mesh.Location
	name string
}

type gatheredArray struct {
	mesh.Array
	values []float64
}

// gather walks a model front to back in chunks of so many cells.
func gather(model *mesh.Model, chunk int64) (*gathered, error) {
	g := &gathered{types: map[string]int64{}, arrays: map[arrayKey]*gatheredArray{}}
	cursor := model.Open()
	defer cursor.Close()
	ctx := context.Background()
	for i := range model.Pieces {
		p := &model.Pieces[i]
		want := &mesh.Want{}
		for _, a := range p.Arrays {
			key := arrayKey{a.On, a.Name}
			if g.arrays[key] == nil {
				g.arrays[key] = &gatheredArray{Array: a}
				g.arrays[key].Tuples = 0
				g.order = append(g.order, key)
			}
			g.arrays[key].Tuples += a.Tuples
			switch {
			case a.Type == "Bit" || a.Type == "String":
			case a.On == mesh.OnPoint:
				values := make([]float64, p.PointCount*int64(a.Components))
				if err := cursor.PointValues(ctx, i, a.Name, 0, p.PointCount, values); err != nil {
					return nil, err
				}
				g.arrays[key].values = append(g.arrays[key].values, values...)
			case a.On == mesh.OnCell:
				want.CellValues = append(want.CellValues, a.Name)
			}
		}
		points := make([]float64, 3*p.PointCount)
		for low := int64(0); low < p.PointCount; low += chunk {
			high := min(low+chunk, p.PointCount)
			if err := cursor.Points(ctx, i, low, high, points[3*low:3*high]); err != nil {
				return nil, err
			}
		}
		g.points = append(g.points, points...)
		for low := int64(0); low < p.CellCount; low += chunk {
			var c mesh.Chunk
			if err := cursor.Cells(ctx, mesh.Span{Piece: i, Low: low, High: min(low+chunk, p.CellCount)}, want, &c); err != nil {
				return nil, err
			}
			g.add(&c, want)
		}
	}
	return g, nil
}

func (g *gathered) add(c *mesh.Chunk, want *mesh.Want) {
	for i, cellType := range c.Types {
		g.types[strconv.Itoa(int(cellType))]++
		g.nodes = append(g.nodes, slices.Clone(c.Nodes[c.Start[i]:c.Start[i+1]]))
	}
	g.cells += int64(c.Count)
	g.hidden = append(g.hidden, c.Hidden...)
	for i, name := range want.CellValues {
		a := g.arrays[arrayKey{mesh.OnCell, name}]
		a.values = append(a.values, c.Values[i]...)
	}
}

func TestSamples(t *testing.T) {
	for _, want := range readIndex(t, filepath.Join(samples, "index.json")) {
		t.Run(want.File, func(t *testing.T) {
			model, err := Open(context.Background(), []string{filepath.Join(samples, want.File)}, Options{})
			if err != nil {
				t.Fatal(err)
			}
			if want.Points == nil {
				return
			}
			got, err := gather(model, 3)
			if err != nil {
				t.Fatal(err)
			}
			checkSet(t, got, want)
		})
	}
}

func checkSet(t *testing.T, got *gathered, want sampleSet) {
	t.Helper()
	if int64(len(got.points)) != 3**want.Points || got.cells != *want.Cells {
		t.Fatalf("%d points and %d cells, want %d and %d", len(got.points)/3, got.cells, *want.Points, *want.Cells)
	}
	if !maps.Equal(got.types, want.CellTypes) {
		t.Errorf("cell types %v, want %v", got.types, want.CellTypes)
	}
	if len(want.PointFirst) > 0 {
		checkNumbers(t, "first point", got.points[:3], sampleNumbers(t, want.PointFirst))
		checkNumbers(t, "last point", got.points[len(got.points)-3:], sampleNumbers(t, want.PointLast))
	}
	checkArrays(t, got, mesh.OnPoint, want.PointArrays)
	checkArrays(t, got, mesh.OnCell, want.CellArrays)
}

func checkArrays(t *testing.T, got *gathered, on mesh.Location, wants []sampleArray) {
	t.Helper()
	for _, want := range wants {
		a := got.arrays[arrayKey{on, want.Name}]
		if a == nil {
			t.Errorf("no %s array %q", on, want.Name)
			continue
		}
		if a.Type != want.Type || a.Components != want.Components || a.Tuples != want.Tuples {
			t.Errorf("%q is %d tuples of %d %s, want %d of %d %s", a.Name, a.Tuples, a.Components, a.Type, want.Tuples, want.Components, want.Type)
			continue
		}
		if want.ComponentNames != nil && !slices.Equal(a.ComponentNames, want.ComponentNames) {
			t.Errorf("%q has components %q, want %q", a.Name, a.ComponentNames, want.ComponentNames)
		}
		if a.Type == "Bit" || a.Type == "String" || a.Tuples == 0 {
			continue
		}
		sums := make([]float64, a.Components)
		for i, value := range a.values {
			sums[i%a.Components] += value
		}
		checkNumbers(t, a.Name+" first", a.values[:a.Components], sampleNumbers(t, want.First))
		checkNumbers(t, a.Name+" last", a.values[len(a.values)-a.Components:], sampleNumbers(t, want.Last))
		checkNumbers(t, a.Name+" sum", sums, sampleNumbers(t, want.Sum))
	}
}

// checkNumbers compares with 1e-12 of the value: the index was written from sums in
// another order.
func checkNumbers(t *testing.T, what string, got, want []float64) {
	t.Helper()
	if len(got) != len(want) {
		t.Errorf("%s: %v, want %v", what, got, want)
		return
	}
	for i := range got {
		isEqual := got[i] == want[i] || math.IsNaN(got[i]) && math.IsNaN(want[i])
		if !isEqual && !(math.Abs(got[i]-want[i]) <= 1e-12*math.Abs(want[i])) {
			t.Errorf("%s: %v, want %v", what, got, want)
			return
		}
	}
}
