package readers

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"testing"

	"strainledger/mesh"
)

// fuzzLimits keep what a file may claim small enough for thousands of files a second.
var fuzzLimits = Limits{Points: 1 << 14, GridPoints: 1 << 10, Decoded: 1 << 22, Block: 1 << 20}

// openBytes opens a file that is in memory.
func openBytes(data []byte, options Options) (*mesh.Model, error) {
	o := newOpener(context.Background(), options)
	o.root = "."
	f := &file{path: "fuzz", size: int64(len(data)), bytes: int64(len(data)), content: bytes.NewReader(data)}
	err := o.read(f, branch{name: "fuzz", time: math.NaN()})
	if err == nil {
		err = o.finish()
	}
	if err != nil {
		o.close()
		return nil, o.cursor.hand.located(err)
	}
	return o.model, nil
}

// samplesOf returns the samples that match a pattern; none are a failure.
func samplesOf(t testing.TB, pattern string) (files [][]byte) {
	t.Helper()
	paths, err := filepath.Glob(filepath.Join(samples, pattern))
	if err != nil || len(paths) == 0 {
		t.Fatalf("no files %s (%v)", pattern, err)
	}
	for _, path := range paths {
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		files = append(files, data)
	}
	return files
}

// checkPromises opens a file and reads it with chunks of several sizes. Either each
// reading fails with an error that has a place, or all give the same cells, which keep
// what the model promises.
func checkPromises(t *testing.T, data []byte) {
	t.Helper()
	if fault := brokenPromise(data); fault != "" {
		t.Fatalf("%s\nin %q", fault, data)
	}
}

func brokenPromise(data []byte) string {
	model, err := openBytes(data, Options{Limits: fuzzLimits})
	if err != nil {
		return placeFault(err)
	}
	defer model.Close()
	var first *gathered
	var firstErr error
	for i, chunk := range []int64{8192, 1, 7} {
		got, err := gather(model, -1, chunk)
		if err != nil {
			if fault := placeFault(err); fault != "" {
				return fault
			}
		}
		if i == 0 {
			first, firstErr = got, err
			continue
		}
		if (err == nil) != (firstErr == nil) {
			return fmt.Sprintf("chunks of %d give %v, of 8192 %v", chunk, err, firstErr)
		}
		if err == nil {
			if difference := compare(first, got); difference != "" {
				return fmt.Sprintf("chunks of %d: %s", chunk, difference)
			}
		}
	}
	if fault := storedFault(model); fault != "" || firstErr != nil {
		return fault
	}
	return modelFault(model, first)
}

// storedFault reads every array as it is stored, at once and in steps.
func storedFault(model *mesh.Model) string {
	var arrays []mesh.Array
	for i := range model.Pieces {
		piece := &model.Pieces[i]
		arrays = append(append(arrays, piece.Arrays...), piece.OwnArrays...)
		if piece.Points != nil {
			arrays = append(arrays, *piece.Points)
		}
	}
	for i := range model.Sources {
		arrays = append(arrays, model.Sources[i].Fields...)
	}
	for i := range arrays {
		whole, err := storedBytes(model, &arrays[i], max(8, arrays[i].Bytes))
		steps, stepsErr := storedBytes(model, &arrays[i], max(8, arrays[i].Bytes/20/8*8))
		switch {
		case (err == nil) != (stepsErr == nil):
			return fmt.Sprintf("array %q: at once %v, in steps %v", arrays[i].Name, err, stepsErr)
		case err != nil && placeFault(err) != "":
			return placeFault(err)
		case err == nil && !bytes.Equal(whole, steps):
			return fmt.Sprintf("array %q: in steps other bytes than at once", arrays[i].Name)
		}
	}
	return ""
}

func storedBytes(model *mesh.Model, array *mesh.Array, step int64) ([]byte, error) {
	cursor := model.Open()
	defer cursor.Close()
	data := make([]byte, array.Bytes)
	for at := int64(0); at < array.Bytes; at += step {
		if err := cursor.ReadArray(context.Background(), array, at, data[at:min(at+step, array.Bytes)]); err != nil {
			return nil, err
		}
	}
	return data, nil
}

func placeFault(err error) string {
	place := new(Error)
	if !errors.As(err, &place) || place.Path == "" || place.Err == nil || place.Error() == "" {
		return fmt.Sprintf("error without a place: %v", err)
	}
	return ""
}

// compare says in what two readings differ, bit by bit.
func compare(a, b *gathered) string {
	same := func(x, y float64) bool { return math.Float64bits(x) == math.Float64bits(y) }
	switch {
	case a.cells != b.cells:
		return fmt.Sprintf("%d and %d cells", a.cells, b.cells)
	case !slices.EqualFunc(a.points, b.points, same):
		return "points differ"
	case !slices.EqualFunc(a.nodes, b.nodes, slices.Equal):
		return "nodes differ"
	case !slices.Equal(a.hidden, b.hidden):
		return "marks differ"
	case !slices.Equal(facesOf(a), facesOf(b)):
		return "faces differ"
	}
	for key, array := range a.arrays {
		other := b.arrays[key]
		if !slices.EqualFunc(array.values, other.values, same) || !slices.Equal(array.labels, other.labels) {
			return fmt.Sprintf("array %q differs", key.name)
		}
	}
	return ""
}

// facesOf joins the faces: chunks without polyhedra have none.
func facesOf(g *gathered) (joined []int32) {
	for _, faces := range g.faces {
		joined = append(joined, faces...)
	}
	return joined
}

// modelFault compares what was read with what the model promises.
func modelFault(model *mesh.Model, got *gathered) string {
	if got.cells != model.CellCount() {
		return fmt.Sprintf("%d cells, promised %d", got.cells, model.CellCount())
	}
	points := int64(0)
	for _, source := range model.Sources {
		points += source.Points
	}
	if int64(len(got.points)) != 3*points {
		return fmt.Sprintf("%d coordinates, promised %d points", len(got.points), points)
	}
	most := int32(0)
	for _, piece := range model.Pieces {
		most = max(most, int32(piece.PointCount))
		if piece.Source >= len(model.Sources) || piece.Block >= len(model.Blocks) {
			return fmt.Sprintf("piece of source %d and block %d", piece.Source, piece.Block)
		}
	}
	for cell, nodes := range got.nodes {
		for _, node := range nodes {
			if node < 0 || node >= most {
				return fmt.Sprintf("cell %d has node %d of %d", cell, node, most)
			}
		}
	}
	for key, array := range got.arrays {
		if array.values != nil && int64(len(array.values)) != array.Tuples*int64(array.Components) {
			return fmt.Sprintf("array %q has %d values, promised %d tuples of %d", key.name, len(array.values), array.Tuples, array.Components)
		}
	}
	return ""
}

func addSeeds(f *testing.F, patterns ...string) {
	f.Helper()
	for _, pattern := range patterns {
		for _, data := range samplesOf(f, pattern) {
			f.Add(data)
			f.Add(data[:len(data)/2]) // a cut file is the commonest damage
		}
	}
}

func FuzzXML(f *testing.F) {
	addSeeds(f, "vtu-encodings/*-u32-le.vtu", "vtu-encodings/blocks-*.vtu", "special/*.vtu", "cells/poly*.vtu", "cells/type72*.vtu", "types/*.vtu", "malformed*/*.vtu")
	f.Fuzz(checkPromises)
}

func FuzzStructured(f *testing.F) {
	addSeeds(f, "xml-structured/*-ascii.vt?", "xml-structured/*-zlib.vt?", "xml-structured/image-*", "malformed*/*.vti")
	f.Fuzz(checkPromises)
}

func FuzzLegacy(f *testing.F) {
	addSeeds(f, "legacy/*.vtk", "types/*.vtk", "cells/linear*.vtk", "malformed*/*.vtk")
	f.Fuzz(checkPromises)
}
