package energy

import (
	"bytes"
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"strainledger/mesh"
)

// A density grid is a plane mesh of unit squares, row by row from below, with a density
// each: a tension along x of twice as much at a strain of 1.
type densityGrid struct {
	columns   int
	densities []float64
}

// quad returns the corners of square number i of the grid.
func (g *densityGrid) quad(i int) []int32 {
	row, column := i/g.columns, i%g.columns
	corner := int32(row*(g.columns+1) + column)
	above := corner + int32(g.columns) + 1
	return []int32{corner, corner + 1, above + 1, above}
}

// points returns the points of the grid.
func (g *densityGrid) points() [][3]float64 {
	var points [][3]float64
	for row := range len(g.densities)/g.columns + 1 {
		for column := range g.columns + 1 {
			points = append(points, [3]float64{float64(column), float64(row), 0})
		}
	}
	return points
}

// mesh returns the grid with its cells in the given order, in pieces of so many cells,
// each with points of its own.
func (g *densityGrid) mesh(order []int, pieceCells int) *memoryMesh {
	m := &memoryMesh{}
	for part := range slices.Chunk(order, pieceCells) {
		piece := memoryPiece{points: g.points()}
		var stress, strain [][]float64
		for _, i := range part {
			piece.cells = append(piece.cells, memoryCell{mesh.Quad, g.quad(i)})
			stress, strain = append(stress, []float64{2 * g.densities[i], 0, 0, 0}), append(strain, []float64{1, 0, 0, 0})
		}
		piece.arrays = []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...)}
		m.pieces = append(m.pieces, piece)
	}
	return m
}

// inOrder returns 0 … count-1.
func inOrder(count int) []int {
	list := make([]int, count)
	for i := range list {
		list[i] = i
	}
	return list
}

func planeOptions(prominence float64) Options {
	return Options{
		Length: "mm", Stress: "MPa", Idealisation: PlaneStress, Thickness: 1, Materials: []Material{NewMaterial("sheet")},
		Fields:   Fields{Stress: stated("stress", mesh.OnCell, "xx yy zz xy"), Strain: stated("strain", mesh.OnCell, "xx yy zz xy")},
		Hotspots: HotspotOptions{Prominence: prominence, By: "density"},
	}
}

var gridH02 = &densityGrid{5, []float64{
	9, 8, 1, 1, 1,
	7, 1, 1, 1, 1,
	1, 1, 6, 1, 1,
	1, 1, 1, 5, 1,
	1, 1, 1, 1, 9,
}}

// H-02 (derived): peaks by prominence 0.2 on 5 × 5 cells. It does not matter how cells
// are numbered, nor that they lie in pieces with points of their own.
func TestHotspotsByProminence(t *testing.T) {
	reversed := inOrder(25)
	slices.Reverse(reversed)
	for name, m := range map[string]*memoryMesh{
		"in order":        gridH02.mesh(inOrder(25), 25),
		"in reverse":      gridH02.mesh(reversed, 25),
		"in pieces":       gridH02.mesh(inOrder(25), 4),
		"a piece a cell":  gridH02.mesh(inOrder(25), 1),
		"pieces, reverse": gridH02.mesh(reversed, 7),
	} {
		ledger := tally(t, m, planeOptions(0.2))
		if len(ledger.Hotspots) != 4 || hasFinding(ledger, "hotspot-pool") {
			t.Fatalf("%s: %d hotspots, findings %v", name, len(ledger.Hotspots), ledger.Findings)
		}
		// Of the equal peaks the one of the lower cell comes first.
		want := []struct {
			density, energy, share, volume, prominence float64
			at, energyAt                               Vector
		}{
			{9, 17, 0.26984127, 2, 1, Vector{0.5, 0.5}, Vector{(9*0.5 + 8*1.5) / 17, 0.5}},
			{9, 9, 0.14285714, 1, 8. / 9, Vector{4.5, 4.5}, Vector{4.5, 4.5}},
			{6, 6, 0.0952380952, 1, 5. / 6, Vector{2.5, 2.5}, Vector{2.5, 2.5}},
			{5, 5, 0.0793650794, 1, 4. / 5, Vector{3.5, 3.5}, Vector{3.5, 3.5}},
		}
		if m.pieces[0].cells[0].nodes[0] != 0 { // in reverse
			want[0].prominence, want[1].prominence = 8./9, 1
			want[0], want[1] = want[1], want[0]
		}
		for i, w := range want {
			got := &ledger.Hotspots[i]
			if got.Rank != i+1 || !near(*got.At, w.at) {
				t.Errorf("%s: hotspot %d: rank %d at %v, want %v", name, i+1, got.Rank, *got.At, w.at)
			}
			for key, number := range map[string]struct {
				got  Number
				want float64
			}{
				"density": {got.Density, w.density}, "energy": {got.Energy, w.energy}, "share": {got.EnergyShare, w.share},
				"region's share": {got.RegionShare, w.share}, "volume": {got.Volume, w.volume}, "cells": {got.Cells, w.volume},
				"prominence": {got.Prominence, w.prominence}, "mean density": {got.MeanDensity, w.energy / w.volume},
				"energy at x": {Number(got.EnergyAt[0]), w.energyAt[0]}, "energy at y": {Number(got.EnergyAt[1]), w.energyAt[1]},
			} {
				if !within(float64(number.got), number.want, 1e-7) {
					t.Errorf("%s: hotspot %d: %s %.9g, want %.9g", name, i+1, key, number.got, number.want)
				}
			}
		}
		if cells := ledger.HotspotCells; len(cells) != 5 || cells[0].Rank != 1 || cells[4].Rank != 4 {
			t.Errorf("%s: cells of the hotspots %v", name, cells)
		}
	}
}

// The share decides which peaks count, and which cells are a hotspot's: those at exactly
// (1 - share) of the peak belong to it, and a meeting there parts two peaks.
func TestProminenceDecides(t *testing.T) {
	for _, c := range []struct {
		name       string
		columns    int
		densities  []float64
		prominence float64
		want       string // density/cells/prominence of each
	}{
		{"a lone cell", 1, []float64{3}, 0.2, "3/1/1"},
		{"met at exactly the share", 3, []float64{10, 8, 10}, 0.2, "10/3/1 10/3/0.2"},
		{"met just above it", 3, []float64{10, 8.01, 10}, 0.2, "10/3/1"},
		{"met just below it", 3, []float64{10, 7.99, 10}, 0.2, "10/1/1 10/1/0.201"},
		{"the lower peak's own share counts", 3, []float64{10, 4.5, 5}, 0.2, "10/1/1"},
		{"and its own only", 3, []float64{10, 4, 5}, 0.2, "10/1/1 5/3/0.2"},
		{"a larger share", 5, []float64{10, 6, 8, 3, 5}, 0.5, "10/3/1"},
		{"a smaller share", 5, []float64{10, 6, 8, 3, 5}, 0.1, "10/1/1 8/1/0.25 5/1/0.4"},
		{"a plateau is one peak", 4, []float64{5, 5, 5, 1}, 0.2, "5/3/1"},
		{"diagonals do not touch", 2, []float64{5, 1, 1, 5}, 0.2, "5/1/1 5/1/0.8"},
		{"three meet at one cell", 3, []float64{1, 9, 1, 8, 6, 7, 1, 1, 1}, 0.125, "9/1/1 8/1/0.25 7/1/0.143"},
		{"no energy, no peak", 3, []float64{0, 0, 0}, 0.2, ""},
		{"the default is 0.2", 3, []float64{10, 8.01, 10}, 0, "10/3/1"},
	} {
		g := &densityGrid{c.columns, c.densities}
		ledger := tally(t, g.mesh(inOrder(len(c.densities)), len(c.densities)), planeOptions(c.prominence))
		got := ""
		for i := range ledger.Hotspots {
			h := &ledger.Hotspots[i]
			got += fmt.Sprintf(" %.4g/%g/%.3g", h.Density, h.Cells, h.Prominence)
		}
		if got = trimBlank(got); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

func trimBlank(text string) string {
	if text == "" {
		return text
	}
	return text[1:]
}

// A hotspot ends where its region ends, and where the mesh is cut: cells that share no
// points within a piece are no neighbours, also where the points have equal coordinates.
func TestHotspotsEndAtRegionsAndCracks(t *testing.T) {
	g := &densityGrid{4, []float64{4, 5, 5, 4}}
	m := g.mesh(inOrder(4), 4)
	if ledger := tally(t, m, planeOptions(0.2)); len(ledger.Hotspots) != 1 || ledger.Hotspots[0].Cells != 4 {
		t.Errorf("uncut: %+v", ledger.Hotspots)
	}
	options := planeOptions(0.2)
	options.Regions = []Region{{Name: "left", Box: &Box{Vector{0, 0, 0}, Vector{2, 1, 0}}}, {Name: "right", Rest: true}}
	ledger := tally(t, m, options)
	if len(ledger.Hotspots) != 2 || ledger.Hotspots[0].Region != "left" || ledger.Hotspots[1].Region != "right" || ledger.Hotspots[1].Cells != 2 {
		t.Fatalf("two regions: %+v", ledger.Hotspots)
	}
	if h := ledger.Hotspots[0]; h.RegionShare != 1 || h.EnergyShare != 0.5 || h.Prominence != 1 {
		t.Errorf("share of the region %g, of the whole %g, prominence %g", h.RegionShare, h.EnergyShare, h.Prominence)
	}
	piece := &m.pieces[0]
	piece.points = append(piece.points, piece.points[2], piece.points[7])
	piece.cells[2].nodes = slices.Clone(piece.cells[2].nodes)
	piece.cells[2].nodes[0], piece.cells[2].nodes[3] = 10, 11 // its left edge, which was points 2 and 7
	if ledger := tally(t, m, planeOptions(0.2)); len(ledger.Hotspots) != 2 || ledger.Hotspots[0].Cells != 2 {
		t.Errorf("cut: %+v", ledger.Hotspots)
	}
}

// The list is ordered by utilisation, density or energy; of equals the lower cell is
// first, and what has no such number is last.
func TestHotspotsAreOrdered(t *testing.T) {
	g := &densityGrid{7, []float64{9, 1, 4, 4, 4, 1, 8}}
	m := g.mesh(inOrder(7), 7)
	options := planeOptions(0.2)
	strong, weak := options.Materials[0], options.Materials[0]
	strong.Name, strong.ProportionalLimit, weak.Name, weak.ProportionalLimit = "strong", 20, "weak", 1
	options.Materials = append(options.Materials, strong, weak)
	options.Regions = []Region{
		{Name: "a", Box: &Box{Vector{0, 0, 0}, Vector{2, 1, 0}}, Material: "strong"},
		{Name: "b", Box: &Box{Vector{2, 0, 0}, Vector{6, 1, 0}}, Material: "weak"},
		{Name: "c", Rest: true, Material: "sheet"},
	}
	for by, want := range map[string]string{"density": "a c b ", "energy": "b a c ", "utilisation": "b a c ", "": "a c b "} {
		options.Hotspots.By = by
		got := ""
		for _, h := range tally(t, m, options).Hotspots {
			got += h.Region + " "
		}
		if got != want {
			t.Errorf("by %q: %q, want %q", by, got, want)
		}
	}
	options.Hotspots.By, options.Hotspots.Count = "energy", 1
	if list := tally(t, m, options).Hotspots; len(list) != 1 || list[0].Energy != 12 {
		t.Errorf("the first by energy: %+v", list)
	}
}

// Single cells instead of peaks, as the study may ask for.
func TestSingleCells(t *testing.T) {
	options := planeOptions(0)
	options.Hotspots.SingleCells, options.Hotspots.Count = true, 4
	ledger := tally(t, gridH02.mesh(inOrder(25), 25), options)
	var cells []int64
	for i := range ledger.Hotspots {
		h := &ledger.Hotspots[i]
		cells = append(cells, h.Cell)
		if h.Prominence.Exists() || h.Cells != 1 || h.Energy != h.Density {
			t.Errorf("hotspot %d: %+v", i+1, h)
		}
	}
	if want := []int64{0, 24, 1, 5}; !slices.Equal(cells, want) || hasFinding(ledger, "hotspot-pool") {
		t.Errorf("cells %v, want %v; findings %v", cells, want, ledger.Findings)
	}
}

// A pool that does not hold the model: only what is certain is listed, but for the
// densest cell of a region, and a finding says so. A larger pool changes no number.
func TestHotspotPool(t *testing.T) {
	m := gridH02.mesh(inOrder(25), 25)
	full := tally(t, m, planeOptions(0.2))
	for _, c := range []struct {
		pool, count, want int
		isCertain         bool // of the first
		isEnough          bool
	}{
		{1, 1, 1, false, false}, // 7.2 is below the 9 outside
		{2, 2, 1, false, false}, // below the 8
		{3, 2, 2, true, true},   // 7 is outside
		{4, 20, 2, true, false}, // 6 is outside
		{5, 20, 2, true, false}, // 5 is: (1 - 0.2)·6 is below it
		{6, 20, 4, true, false}, // 1 is
		{25, 20, 4, true, true},
		{0, 20, 4, true, true},
	} {
		options := planeOptions(0.2)
		options.Hotspots.Pool, options.Hotspots.Count = c.pool, c.count
		for _, chunk := range []int{1, 3, 100} {
			options.ChunkCells = chunk
			ledger := tally(t, m, options)
			if hasFinding(ledger, "hotspot-pool") == c.isEnough {
				t.Errorf("pool of %d, count %d: findings %v", c.pool, c.count, ledger.Findings)
			}
			if len(ledger.Hotspots) != c.want || ledger.Hotspots[0].Energy.Exists() != c.isCertain {
				t.Fatalf("pool of %d, chunks of %d: %+v", c.pool, chunk, ledger.Hotspots)
			}
			for i := range ledger.Hotspots {
				got, want := ledger.Hotspots[i], full.Hotspots[i]
				if !c.isCertain {
					want.Energy, want.EnergyShare, want.RegionShare, want.Volume, want.Cells, want.MeanDensity, want.EnergyAt = None, None, None, None, None, None, nil
				}
				if got.Prominence > want.Prominence {
					t.Errorf("pool of %d: prominence %g, want at most %g", c.pool, got.Prominence, want.Prominence)
				}
				got.Prominence, want.Prominence = 0, 0
				if asJSON(t, got) != asJSON(t, want) {
					t.Errorf("pool of %d: hotspot %d: %s, want %s", c.pool, i+1, asJSON(t, got), asJSON(t, want))
				}
			}
		}
	}
}

func asJSON(t *testing.T, value any) string {
	t.Helper()
	text, err := json.Marshal(value)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// A region of little density has its hotspots when they are ranked by utilisation: the
// pool keeps the first cells by that too.
func TestPoolByUtilisation(t *testing.T) {
	g := &densityGrid{100, make([]float64, 100)}
	for i := range g.densities {
		g.densities[i] = 50 + float64(i%2)
	}
	copy(g.densities[90:], []float64{1, 2, 1, 1, 1, 3, 1, 1, 1, 1})
	m := g.mesh(inOrder(100), 100)
	options := planeOptions(0.2)
	strong, weak := options.Materials[0], options.Materials[0]
	strong.Name, strong.ProportionalLimit, weak.Name, weak.ProportionalLimit = "strong", 1e6, "weak", 100
	options.Materials = []Material{strong, weak}
	options.Regions = []Region{{Name: "weak", Box: &Box{Vector{90, 0, 0}, Vector{100, 1, 0}}, Material: "weak"}, {Name: "strong", Rest: true, Material: "strong"}}
	options.Hotspots.Pool, options.Hotspots.Count, options.Hotspots.By = 5, 2, "utilisation"
	ledger := tally(t, m, options)
	if len(ledger.Hotspots) < 2 || ledger.Hotspots[0].Cell != 95 || ledger.Hotspots[1].Cell != 91 || ledger.Hotspots[0].Energy != 3 {
		t.Errorf("by utilisation: %+v", ledger.Hotspots)
	}
}

// Solid cells of every kind that meet at faces, in one piece and in two: a hexahedron, a
// wedge and a pyramid on it, a tetrahedron beside those; a quadratic cell on a linear
// one; a collapsed hexahedron; a polyhedron.
func TestNeighboursOfSolidCells(t *testing.T) {
	points := [][3]float64{
		{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {0, 0, 1}, {1, 0, 1}, {1, 1, 1}, {0, 1, 1}, // 0-7
		{0.5, 0.5, 2},            // 8: apex on the top
		{2, 0, 0.5}, {2, 1, 0.5}, // 9, 10: ridge of a wedge on the side x = 1
		{0, 3, 2},                                      // 11
		{0, 0, -1}, {1, 0, -1}, {1, 1, -1}, {0, 1, -1}, // 12-15: below
	}
	hexahedron := memoryCell{mesh.Hexahedron, []int32{0, 1, 2, 3, 4, 5, 6, 7}}
	pyramid := memoryCell{mesh.Pyramid, []int32{4, 5, 6, 7, 8}}
	wedge := memoryCell{mesh.Wedge, []int32{1, 9, 5, 2, 10, 6}}
	tetrahedron := memoryCell{mesh.Tetrahedron, []int32{7, 6, 8, 11}}
	below := memoryCell{mesh.Voxel, []int32{12, 13, 15, 14, 0, 1, 3, 2}}
	// As a hexahedron whose edge 4-5 and 7-6 above the side is one: a wedge in disguise.
	collapsed := memoryCell{mesh.Hexahedron, []int32{1, 9, 10, 2, 5, 5, 6, 6}}
	for _, c := range []struct {
		name  string
		cells []memoryCell
		want  string
	}{
		{"hexahedron and pyramid", []memoryCell{hexahedron, pyramid}, "2"},
		{"hexahedron and wedge", []memoryCell{hexahedron, wedge}, "2"},
		{"hexahedron and voxel", []memoryCell{hexahedron, below}, "2"},
		{"pyramid and tetrahedron", []memoryCell{pyramid, tetrahedron}, "2"},
		{"hexahedron and tetrahedron share an edge", []memoryCell{hexahedron, tetrahedron}, "1 1"},
		{"hexahedron and a collapsed one", []memoryCell{hexahedron, collapsed}, "2"},
		{"all in a row", []memoryCell{below, hexahedron, pyramid, tetrahedron}, "4"},
	} {
		for _, pieceCells := range []int{1, len(c.cells)} {
			m := &memoryMesh{}
			for part := range slices.Chunk(c.cells, pieceCells) {
				s, e := []float64{100, 0, 0, 0, 0, 0}, []float64{100. / 210000, -30. / 210000, -30. / 210000, 0, 0, 0}
				m.pieces = append(m.pieces, memoryPiece{points: points, cells: part, arrays: []memoryArray{
					cellArray("stress", uniform(len(part), s...)...), cellArray("strain", uniform(len(part), e...)...),
				}})
			}
			got := ""
			for _, h := range tally(t, m, solidOptions(mesh.OnCell, steel())).Hotspots {
				got += fmt.Sprintf(" %g", h.Cells)
			}
			if trimBlank(got) != c.want {
				t.Errorf("%s, %d cells a piece: hotspots of %s cells, want %s", c.name, pieceCells, got, c.want)
			}
		}
	}
}

// The principal stresses and directions at the peak; T-02 turned is in the tests of
// mesh.
func TestPrincipalStressAtThePeak(t *testing.T) {
	points, cell := brick(1, 1, 1)
	stress := []float64{50, 50, 10, 30, 0, 0} // 80 along x+y, 20 along x-y, 10 along z
	state := mesh.SymmetricTensor(stress)
	strain := isotropic(t, 210000, 0.3).Strain(&state)
	nodal := uniform(8, 0, 0, 0, 0, 0, 0)
	nodalStrain := uniform(8, 0, 0, 0, 0, 0, 0)
	nodal[3], nodalStrain[3] = stress, strain[:]
	for name, c := range map[string]struct {
		on     mesh.Location
		arrays []memoryArray
	}{
		"cells":  {mesh.OnCell, []memoryArray{cellArray("stress", stress), cellArray("strain", strain[:])}},
		"points": {mesh.OnPoint, []memoryArray{pointArray("stress", nodal...), pointArray("strain", nodalStrain...)}},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: c.arrays}}}
		h := tally(t, m, solidOptions(c.on, steel())).Hotspots[0]
		if !within(float64(h.Principal1), 80, 1e-14) || !within(float64(h.Principal2), 20, 1e-14) || !within(float64(h.Principal3), 10, 1e-14) {
			t.Errorf("%s: principal stresses %g, %g, %g", name, h.Principal1, h.Principal2, h.Principal3)
		}
		half := math.Sqrt(0.5)
		if !near(*h.Principal1Direction, Vector{half, half, 0}) || !near(*h.Principal2Direction, Vector{half, -half, 0}) || !near(*h.Principal3Direction, Vector{0, 0, 1}) {
			t.Errorf("%s: directions %v, %v, %v", name, *h.Principal1Direction, *h.Principal2Direction, *h.Principal3Direction)
		}
	}
}

// The pool keeps the first cells by density and by key, whatever the order in which it
// sees them, and knows the largest density outside; a plain sort says which these are.
func TestPoolKeepsTheFirst(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	points, nodes := brick(1, 1, 1)
	coordinates := make([]float64, 0, 24)
	for _, p := range points {
		coordinates = append(coordinates, p[:]...)
	}
	shape, err := mesh.ShapeOf(mesh.Hexahedron, 8, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	cell := mesh.Cell{Shape: shape, Points: coordinates, Nodes: nodes.nodes}
	for range 50 {
		cells := make([]record, 1+random.IntN(300))
		for i := range cells {
			cells[i] = record{density: float64(random.IntN(40)), key: float64(random.IntN(40)), place: place{cell: int64(i)}, region: int32(random.IntN(2))}
			if random.IntN(5) == 0 {
				cells[i].key = math.NaN()
			}
		}
		count := 1 + random.IntN(20)
		want := map[int64]bool{}
		for _, value := range []func(*record) float64{func(c *record) float64 { return c.density }, func(c *record) float64 { return c.key }} {
			sorted := slices.DeleteFunc(slices.Clone(cells), func(c record) bool { return math.IsNaN(value(&c)) })
			slices.SortFunc(sorted, func(a, b record) int {
				return compareRanked(rankedIndex{value: value(&a), place: a.place}, rankedIndex{value: value(&b), place: b.place})
			})
			for i := range min(count, len(sorted)) {
				want[sorted[i].place.cell] = true
			}
		}
		outside := []float64{math.Inf(-1), math.Inf(-1)}
		for i := range cells {
			if !want[cells[i].place.cell] {
				outside[cells[i].region] = max(outside[cells[i].region], cells[i].density)
			}
		}
		p := newPool(count, 10, 2, true)
		for _, i := range random.Perm(len(cells)) {
			c := &cells[i]
			if p.takes(c.density, c.key, c.place) {
				p.add(c.density, c.key, &cell, 0).record = *c
				if random.IntN(9) == 0 {
					p.raise()
				}
			} else {
				p.leave(c.region, c.density)
			}
		}
		p.trim()
		got := map[int64]bool{}
		for i := range p.cells {
			if !p.holds(i) {
				continue
			}
			got[p.cells[i].place.cell] = true
			var view mesh.Cell
			if p.cells[i].view(&view); !slices.Equal(view.Points, coordinates) {
				t.Fatalf("points %v", view.Points)
			}
		}
		if fmt.Sprint(got) != fmt.Sprint(want) || !slices.Equal(p.outside, outside) {
			t.Fatalf("of %d cells the first %d: kept %v, want %v; outside %v, want %v", len(cells), count, got, want, p.outside, outside)
		}
	}
}

// A pool smaller than the model, whatever the number of workers and the length of
// chunks: the same list.
func TestHotspotsDoNotDependOnTheSchedule(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	g := &densityGrid{60, make([]float64, 3000)}
	for i := range g.densities {
		g.densities[i] = float64(random.IntN(200)) // with ties
	}
	m := g.mesh(random.Perm(3000), 800)
	for _, by := range []string{"density", "energy", "utilisation"} {
		var first []byte
		for _, workers := range []int{1, 2, 8} {
			for _, chunk := range []int{7, 100, 8192} {
				options := planeOptions(0.1)
				options.Materials[0].ProportionalLimit = 1000
				options.Hotspots.Pool, options.Hotspots.Count, options.Hotspots.By = 1500, 50, by
				options.Workers, options.ChunkCells = workers, chunk
				ledger := tally(t, m, options)
				if len(ledger.Hotspots) != 50 {
					t.Fatalf("%d hotspots", len(ledger.Hotspots))
				}
				data := []byte(asJSON(t, ledger.Hotspots))
				if first == nil {
					first = data
				}
				if !bytes.Equal(first, data) {
					t.Fatalf("by %s, %d workers, chunks of %d: another list\n%s\n%s", by, workers, chunk, data, first)
				}
			}
		}
	}
}
