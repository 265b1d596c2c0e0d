package energy

import (
	"bytes"
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// withLower adds cells to the first piece of a mesh, with a stress of that size in each,
// and returns the finding that it raises, nil for none.
func withLower(t *testing.T, m *memoryMesh, options Options, stress float64, cells ...memoryCell) *Finding {
	t.Helper()
	piece := &m.pieces[0]
	piece.cells = append(piece.cells, cells...)
	for i := range piece.arrays {
		array := &piece.arrays[i]
		for range cells {
			if array.on == mesh.OnCell {
				array.values = append(array.values, make([]float64, array.components-1)...)
				array.values = append(array.values, stress)
			}
		}
	}
	return lowerFinding(t, m, options)
}

func lowerFinding(t *testing.T, m *memoryMesh, options Options) *Finding {
	t.Helper()
	ledger := tally(t, m, options)
	i := slices.IndexFunc(ledger.Findings, func(f Finding) bool { return f.Code == "parts-not-accounted" })
	if i < 0 {
		return nil
	}
	return &ledger.Findings[i]
}

// bricks is two cubes in a row with a uniform stress, and four points more: the middle of
// a face, of an edge, and two far off.
func bricks() *memoryMesh {
	points, cells := row(2)
	points = append(points, [3]float64{0, 0.5, 0.5}, [3]float64{0, 0.5, 0}, [3]float64{5, 5, 5}, [3]float64{6, 5, 5})
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(2, 21, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(2, 1e-4, -3e-5, -3e-5, 0, 0, 0)...),
	}}}}
}

// Lines and surfaces that are edges and faces of solid cells are nothing more; others
// stand for parts that no account holds.
func TestPartsOfSolids(t *testing.T) {
	// Cube 1 has the points 0 (0,0,0), 4 (1,0,0), 5 (1,1,0), 1 (0,1,0), 3 (0,0,1), 7, 6, 2.
	for name, c := range map[string]struct {
		cells []memoryCell
		words string // of the finding; "" none
	}{
		"face":                         {[]memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}, ""},
		"face, turned and begun later": {[]memoryCell{{mesh.Quad, []int32{2, 1, 0, 3}}}, ""},
		"face between two cells":       {[]memoryCell{{mesh.Pixel, []int32{4, 5, 7, 6}}}, ""},
		"half of a face":               {[]memoryCell{{mesh.Triangle, []int32{0, 2, 3}}}, ""},
		"triangles of a face":          {[]memoryCell{{mesh.TriangleStrip, []int32{0, 1, 3, 2}}}, ""},
		"polygon":                      {[]memoryCell{{mesh.Polygon, []int32{3, 2, 1, 0}}}, ""},
		"edge":                         {[]memoryCell{{mesh.Line, []int32{0, 3}}, {mesh.Line, []int32{5, 4}}}, ""},
		"edges in a row":               {[]memoryCell{{mesh.PolyLine, []int32{1, 0, 4, 8}}}, ""},
		"quadratic line on an edge":    {[]memoryCell{{mesh.QuadraticLine, []int32{0, 1, 13}}}, ""},
		"point":                        {[]memoryCell{{mesh.Vertex, []int32{14}}}, ""},

		"diagonal of a face":            {[]memoryCell{{mesh.Line, []int32{0, 2}}}, "1 lines that are no edges of solid cells"},
		"diagonal of a cell":            {[]memoryCell{{mesh.Line, []int32{0, 6}}}, "1 lines that"},
		"from cell to cell":             {[]memoryCell{{mesh.Line, []int32{0, 8}}}, "1 lines that"},
		"to a point of no cell":         {[]memoryCell{{mesh.Line, []int32{0, 14}}}, "1 lines that"},
		"far off":                       {[]memoryCell{{mesh.Line, []int32{14, 15}}}, "1 lines that"},
		"the last of a row":             {[]memoryCell{{mesh.PolyLine, []int32{1, 0, 4, 9}}}, "1 lines that"},
		"the first of a row":            {[]memoryCell{{mesh.PolyLine, []int32{9, 0, 4}}}, "1 lines that"},
		"surface through a cell":        {[]memoryCell{{mesh.Quad, []int32{0, 4, 6, 2}}}, "1 surfaces that are no faces of solid cells"},
		"surface over two cells":        {[]memoryCell{{mesh.Quad, []int32{0, 8, 9, 1}}}, "1 surfaces that"},
		"triangle to the middle":        {[]memoryCell{{mesh.Triangle, []int32{0, 1, 12}}}, "1 surfaces that"},
		"the second triangle of a row":  {[]memoryCell{{mesh.TriangleStrip, []int32{0, 1, 3, 6}}}, "1 surfaces that"},
		"the first triangle of a row":   {[]memoryCell{{mesh.TriangleStrip, []int32{6, 1, 3, 0}}}, "1 surfaces that"},
		"several of them, and one face": {[]memoryCell{{mesh.Line, []int32{0, 2}}, {mesh.Quad, []int32{0, 1, 2, 3}}, {mesh.Line, []int32{1, 3}}, {mesh.Triangle, []int32{1, 4, 9}}}, "2 lines that are no edges of solid cells and 1 surfaces that are no faces of solid cells"},
	} {
		t.Run(name, func(t *testing.T) {
			found := withLower(t, bricks(), solidOptions(mesh.OnCell, steel()), 0, c.cells...)
			if c.words == "" {
				if found != nil {
					t.Errorf("finding %+v", found)
				}
				return
			}
			if found == nil || found.Severity != Warning || !strings.HasPrefix(found.Message, c.words) || strings.Contains(found.Message, "stress") {
				t.Fatalf("finding %+v, want %q", found, c.words)
			}
			if want := Number(strings.Count(c.words, "that") + strings.Count(c.words, "2 lines")); found.Cells != want {
				t.Errorf("%v cells, want %v", found.Cells, want)
			}
		})
	}
}

// Lines and surfaces on every kind of solid, by the edges and faces of VTK's cell types;
// on quadratic cells also between corners and middles.
func TestPartsOfEverySolid(t *testing.T) {
	for _, c := range []struct {
		cellType mesh.CellType
		count    int
		on, off  [][]int32
	}{
		{mesh.Tetrahedron, 4, [][]int32{{0, 1}, {2, 3}, {0, 3}, {0, 1, 2}, {1, 3, 2}}, nil},
		{mesh.Wedge, 6, [][]int32{{0, 1}, {3, 5}, {2, 5}, {0, 2, 1}, {0, 1, 4, 3}}, [][]int32{{0, 4}, {1, 5}, {0, 1, 5}}},
		{mesh.Pyramid, 5, [][]int32{{0, 1}, {3, 0}, {2, 4}, {0, 1, 2, 3}, {2, 3, 4}}, [][]int32{{0, 2}, {1, 3}, {0, 2, 4}}},
		{mesh.Hexahedron, 8, [][]int32{{0, 4}, {6, 7}, {0, 1, 5, 4}, {4, 5, 6}}, [][]int32{{0, 2}, {0, 6}, {4, 6}, {0, 1, 6}, {0, 2, 6}}},
		{mesh.QuadraticTetrahedron, 10, [][]int32{{0, 4}, {4, 1}, {3, 7}, {0, 4, 6}, {4, 5, 6}, {0, 1, 3}}, [][]int32{{4, 5}, {4, 9}, {0, 5}, {0, 1, 9}}},
		{mesh.QuadraticHexahedron, 20, [][]int32{{0, 8}, {8, 1}, {16, 4}, {0, 8, 11}, {8, 9, 10, 11}}, [][]int32{{8, 9}, {8, 10}, {16, 17}, {8, 9, 17}}},
	} {
		for _, list := range []struct {
			nodes [][]int32
			isOn  bool
		}{{c.on, true}, {c.off, false}} {
			for _, nodes := range list.nodes {
				shape, err := mesh.ShapeOf(c.cellType, c.count, [3]int{})
				if err != nil {
					t.Fatal(err)
				}
				piece := memoryPiece{points: shape.NodeCoordinates(), cells: []memoryCell{{cellType: c.cellType}}}
				for i := range c.count {
					piece.cells[0].nodes = append(piece.cells[0].nodes, int32(i))
				}
				if c.cellType == mesh.Pyramid {
					piece.points[4] = [3]float64{0.5, 0.5, 1}
				}
				piece.arrays = []memoryArray{cellArray("stress", []float64{21, 0, 0, 0, 0, 0}), cellArray("strain", []float64{1e-4, -3e-5, -3e-5, 0, 0, 0})}
				lower := memoryCell{map[int]mesh.CellType{2: mesh.Line, 3: mesh.Triangle, 4: mesh.Quad}[len(nodes)], nodes}
				found := withLower(t, &memoryMesh{pieces: []memoryPiece{piece}}, solidOptions(mesh.OnCell, steel()), 0, lower)
				if (found == nil) != list.isOn {
					t.Errorf("%v with a cell of the points %v: finding %+v", c.cellType, nodes, found)
				}
			}
		}
	}
}

// A polyhedron's faces are those that the file lists: here a tent of a square and four
// triangles.
func TestFacesOfPolyhedra(t *testing.T) {
	cell := mesh.Cell{Nodes: []int32{10, 11, 12, 13, 14}, Faces: []int32{5, 4, 10, 11, 12, 13, 3, 10, 11, 14, 3, 11, 12, 14, 3, 12, 13, 14, 3, 13, 10, 14}}
	want := [][]int32{{10, 11, 12, 13}, {10, 11, 14}, {11, 12, 14}, {12, 13, 14}, {13, 10, 14}}
	if got := facesOf(&cell, nil); !slices.EqualFunc(got, want, slices.Equal[[]int32]) {
		t.Errorf("faces %v, want %v", got, want)
	}
}

// In plane models lines have to be edges of plane cells.
func TestPartsOfPlanes(t *testing.T) {
	plane := func() *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {2, 0, 0}},
			cells:  []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}},
			arrays: []memoryArray{cellArray("stress", []float64{21, 0, 0}), cellArray("strain", []float64{1e-4, -3e-5, 0})}}}}
	}
	options := Options{Idealisation: PlaneStress, Thickness: 1, Materials: []Material{steel()}, Fields: Fields{
		Stress: stated("stress", mesh.OnCell, "xx yy xy"), Strain: stated("strain", mesh.OnCell, "xx yy xy"),
	}}
	for _, c := range []struct {
		nodes []int32
		isOn  bool
	}{{[]int32{0, 1}, true}, {[]int32{2, 1}, true}, {[]int32{3, 0}, true}, {[]int32{0, 2}, false}, {[]int32{1, 4}, false}, {[]int32{3, 1}, false}} {
		found := withLower(t, plane(), options, 0, memoryCell{mesh.Line, c.nodes})
		if (found == nil) != c.isOn || found != nil && !strings.HasPrefix(found.Message, "1 lines that are no edges of plane cells") {
			t.Errorf("line %v: finding %+v", c.nodes, found)
		}
	}
}

// Within a piece points are told by number, between pieces by their exact place.
func TestPartsOfSeveralPieces(t *testing.T) {
	skin := func(shift float64, cells ...memoryCell) memoryPiece {
		piece := memoryPiece{cells: cells, points: [][3]float64{{9, 9, 9}, {0, 0, 1}, {0, 1, 1}, {0, 1, 0}, {0, 0, shift}}}
		piece.arrays = []memoryArray{cellArray("stress", uniform(len(cells), 0, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(len(cells), 0, 0, 0, 0, 0, 0)...)}
		return piece
	}
	quad, line := memoryCell{mesh.Quad, []int32{1, 2, 3, 4}}, memoryCell{mesh.Line, []int32{1, 4}}
	diagonal := memoryCell{mesh.Line, []int32{2, 4}}
	options := solidOptions(mesh.OnCell, steel())
	options.Regions = []Region{{Name: "all", Rest: true}}
	for name, c := range map[string]struct {
		piece memoryPiece
		words string
	}{
		"face and edge":       {skin(0, quad, line), ""},
		"minus 0":             {skin(math.Copysign(0, -1), quad), ""},
		"not the exact place": {skin(1e-12, quad, line), "1 lines that are no edges of solid cells and 1 surfaces that"},
		"diagonal":            {skin(0, quad, diagonal), "1 lines that"},
	} {
		for _, isFirst := range []bool{false, true} {
			m := bricks()
			if m.pieces = append(m.pieces, c.piece); isFirst {
				m.pieces[0], m.pieces[1] = m.pieces[1], m.pieces[0]
			}
			found := lowerFinding(t, m, options)
			if (found == nil) != (c.words == "") || found != nil && !strings.HasPrefix(found.Message, c.words) {
				t.Errorf("%s: finding %+v", name, found)
			}
		}
	}
	// A skin with points of its own in the solid's piece is not joined to the solid.
	own := func(more ...memoryPiece) *memoryMesh {
		m := bricks()
		piece := &m.pieces[0]
		first := int32(len(piece.points))
		piece.points = append(piece.points, piece.points[0], piece.points[1], piece.points[2], piece.points[3])
		piece.cells = append(piece.cells, memoryCell{mesh.Quad, []int32{first, first + 1, first + 2, first + 3}})
		for i := range piece.arrays {
			piece.arrays[i].values = append(piece.arrays[i].values, make([]float64, 6)...)
		}
		m.pieces = append(m.pieces, more...)
		return m
	}
	for _, m := range []*memoryMesh{own(), own(bricks().pieces[0])} {
		found := lowerFinding(t, m, options)
		if isAlone := len(m.pieces) == 1; (found != nil) != isAlone {
			t.Errorf("%d pieces: finding %+v", len(m.pieces), found)
		}
	}
	apart := bricks().pieces[0]
	for i := range apart.points {
		apart.points[i][0] += 50
	}
	if lowerFinding(t, own(apart), options) == nil {
		t.Error("no finding where another piece is far off")
	}
}

// Faces of hidden cells do not count.
func TestPartsOfHiddenCells(t *testing.T) {
	m := bricks()
	m.pieces[0].hidden = []uint8{mesh.DuplicateCell, 0, 0}
	if found := withLower(t, m, solidOptions(mesh.OnCell, steel()), 0, memoryCell{mesh.Quad, []int32{0, 1, 2, 3}}); found == nil {
		t.Error("no finding")
	}
	m = bricks()
	m.pieces[0].hidden = []uint8{0, 0, mesh.DuplicateCell}
	if found := withLower(t, m, solidOptions(mesh.OnCell, steel()), 0, memoryCell{mesh.Line, []int32{0, 6}}); found != nil {
		t.Errorf("a hidden line: %+v", found)
	}
}

// A part that carries stress is an error, one of values that are none is not.
func TestPartsThatCarryStress(t *testing.T) {
	line, edge := memoryCell{mesh.Line, []int32{0, 6}}, memoryCell{mesh.Line, []int32{0, 1}}
	for _, c := range []struct {
		stress   float64
		cells    []memoryCell
		severity string
		words    string
	}{
		{0, []memoryCell{line}, Warning, "whose energy is in no account: state it in [[elsewhere]]"},
		{1e-9, []memoryCell{line}, Error, "although 1 of them carry stress: state it"},
		{math.NaN(), []memoryCell{line}, Warning, "in no account: state it"},
		{-5, []memoryCell{line, edge, line}, Error, "although 2 of them carry stress"},
		{-5, []memoryCell{edge}, "", ""},
	} {
		found := withLower(t, bricks(), solidOptions(mesh.OnCell, steel()), c.stress, c.cells...)
		if found == nil && c.severity != "" || found != nil && (found.Severity != c.severity || !strings.Contains(found.Message, c.words)) {
			t.Errorf("stress %g: finding %+v, want %s", c.stress, found, c.severity)
		}
	}
	// On points the stress at points that only the part has counts.
	for _, c := range []struct {
		nodes    []int32
		at       int
		severity string
	}{
		{[]int32{0, 14}, 14, Error}, {[]int32{0, 14}, 15, Warning}, {[]int32{14, 0}, 0, Warning}, {[]int32{0, 6}, 0, Warning},
		{[]int32{14, 15}, 15, Error},
	} {
		m := bricks()
		stress, strain := uniform(16, 0, 0, 0, 0, 0, 0), uniform(16, 0, 0, 0, 0, 0, 0)
		for i := range 12 {
			stress[i], strain[i] = []float64{21, 0, 0, 0, 0, 0}, []float64{1e-4, -3e-5, -3e-5, 0, 0, 0}
		}
		stress[c.at] = []float64{0, 0, 0, 0, 0, 3}
		m.pieces[0].arrays = []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...)}
		m.pieces[0].cells = append(m.pieces[0].cells, memoryCell{mesh.Line, c.nodes})
		if found := lowerFinding(t, m, solidOptions(mesh.OnPoint)); found == nil || found.Severity != c.severity {
			t.Errorf("line %v, stress at %d: finding %+v, want %s", c.nodes, c.at, found, c.severity)
		}
	}
	// Strain alone tells as well; a displacement does not tell.
	m := bricks()
	m.pieces[0].arrays = m.pieces[0].arrays[1:]
	options := Options{Materials: []Material{steel()}, From: FromStrain, Fields: Fields{Strain: stated("strain", mesh.OnCell, sixOrder)}}
	if found := withLower(t, m, options, 1e-9, line); found == nil || found.Severity != Error {
		t.Errorf("strain alone: finding %+v", found)
	}
	m = bricks()
	m.pieces[0].arrays = []memoryArray{pointArray("u", uniform(16, 1, 0, 0)...)}
	if found := withLower(t, m, Options{Materials: []Material{steel()}}, 0, line); found == nil || found.Severity != Warning {
		t.Errorf("displacement: finding %+v", found)
	}
}

// Of results at integration points any counts, also in a cell array that holds them in a
// row.
func TestPartsWithIntegrationPoints(t *testing.T) {
	line, err := mesh.ShapeOf(mesh.Line, 2, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	layout, err := mesh.NewLayout(mesh.OrderOf6, 6, mesh.TensorShear, 1)
	if err != nil {
		t.Fatal(err)
	}
	zero, one := make([]float64, 6), []float64{0, 0, 0, 0, 0, 4}
	values := slices.Concat(one, zero, zero, zero, zero, one) // of three cells at two points each
	for _, on := range []mesh.Location{mesh.OnField, mesh.OnCell} {
		chunk := &mesh.Chunk{Count: 3, Nodes: []int32{0, 1, 0, 1, 0, 1}, Start: []int32{0, 2, 4, 6}, Shapes: []*mesh.Shape{line, line, line}, Points: make([]float64, 6)}
		if chunk.FieldValues = [][]float64{values}; on == mesh.OnCell {
			chunk.FieldValues, chunk.Values = nil, chunk.FieldValues
		}
		w := &worker{part: &part{}, plan: &plan{dimension: 3, model: &mesh.Model{Pieces: make([]mesh.Piece, 1)}, inputs: &inputs{
			stress: tensorInput{on: on, layout: layout, columns: []int{0}, points: 2},
		}}}
		for i := range 3 {
			chunk.Cell(i, &w.cell)
			w.keepLower(chunk, i)
		}
		if c := w.part.lower.cells; len(c) != 3 || !c[0].hasStress || c[1].hasStress || !c[2].hasStress {
			t.Errorf("on %v: %+v", on, c)
		}
	}
}

// What is found does not depend on the schedule.
func TestPartsDoNotDependOnTheSchedule(t *testing.T) {
	points, cells := row(200)
	for i := range int32(200) {
		cells = append(cells, memoryCell{mesh.Quad, []int32{4 * i, 4*i + 1, 4*i + 2, 4*i + 3}})
		if i%3 == 0 {
			cells = append(cells, memoryCell{mesh.Line, []int32{4 * i, 4*i + 2}})
		}
	}
	arrays := []memoryArray{cellArray("stress", uniform(len(cells), 21, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(len(cells), 1e-4, -3e-5, -3e-5, 0, 0, 0)...)}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: arrays}, bricks().pieces[0]}}
	var first []byte
	for _, workers := range []int{1, 2, 8} {
		for _, chunk := range []int{1, 7, 8192} {
			options := solidOptions(mesh.OnCell, steel())
			options.Workers, options.ChunkCells = workers, chunk
			data, err := json.Marshal(tally(t, m, options).Findings)
			if err != nil {
				t.Fatal(err)
			}
			if first == nil {
				first = data
			}
			if !bytes.Equal(first, data) || !bytes.Contains(data, []byte("67 lines that are no edges of solid cells: bolts")) {
				t.Fatalf("%d workers, chunks of %d: %s", workers, chunk, data)
			}
		}
	}
}
