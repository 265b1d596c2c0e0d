package energy

import (
	"context"
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

func inspect(t testing.TB, m *memoryMesh, ranges bool) InspectedFile {
	t.Helper()
	file, _ := inspectAll(t, m, ranges)
	return file
}

func inspectAll(t testing.TB, m *memoryMesh, ranges bool) (InspectedFile, []Finding) {
	t.Helper()
	model := m.model()
	for i := range model.Pieces {
		model.Sources[0].Points += model.Pieces[i].PointCount
	}
	inspection, err := Inspect(context.Background(), model, InspectOptions{Ranges: ranges, Workers: 2})
	if err != nil {
		t.Fatal(err)
	}
	return inspection.Files[0], inspection.Findings
}

func hasCode(list []Finding, code string) bool {
	return slices.ContainsFunc(list, func(f Finding) bool { return f.Code == code })
}

// Counts, measures, ranges and exact sums; ghosts are in none of them.
func TestInspect(t *testing.T) {
	points, cells := row(4)
	cells = append(cells, memoryCell{mesh.Quad, []int32{0, 1, 2, 3}}, memoryCell{mesh.Line, []int32{0, 4}}, memoryCell{mesh.ConvexPointSet, []int32{0, 1, 2, 7}})
	m := &memoryMesh{blocks: []string{"hull"}, pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(7, 1, 0, 0, 0, 0, -2)...),
		labels1("id", 1<<52, 1<<52, 3, 4, 5, 6, 7),
		cellArray("w", []float64{1}, []float64{math.NaN()}, []float64{-3}, []float64{math.Inf(1)}, []float64{0.5}, []float64{0}, []float64{0}),
		pointArray("u", uniform(20, 0.1, -0.2, 0)...),
	}, hidden: []uint8{0, 0, 0, 0, 0, mesh.DuplicateCell, 0}}}}
	file, found := inspectAll(t, m, true)
	if file.Points != 20 || file.Cells != 6 || !slices.Equal(file.CellsByType, []InspectedType{{9, "quadrilateral", 1}, {12, "hexahedron", 4}, {41, "convex point set", 1}}) {
		t.Errorf("points %d, cells %d %v", file.Points, file.Cells, file.CellsByType)
	}
	if !slices.Equal(file.Blocks, []InspectedBlock{{"hull", 20, 6}}) || *file.Bounds != (Bounds{0, 4, 0, 1, 0, 1}) {
		t.Errorf("blocks %v, bounds %v", file.Blocks, file.Bounds)
	}
	if file.Measure.Length != 0 || !within(float64(file.Measure.Area), 1, 1e-14) || !within(float64(file.Measure.Volume), 4, 1e-14) {
		t.Errorf("measure %+v", file.Measure)
	}
	if !hasCode(found, "ghost-cells") || !hasCode(found, "unsupported-cells") {
		t.Errorf("findings %+v", found)
	}
	arrays := map[string]InspectedArray{}
	for _, array := range file.Arrays {
		arrays[array.Name] = array
	}
	if a := arrays["id"]; a.Sum[0] != "9007199254741011" || a.Min[0] != 3 || a.Max[0] != 1<<52 || a.Finite != 6 || a.Tuples != 6 {
		t.Errorf("id %+v, want the exact sum 2⁵³ + 19", a)
	}
	if a := arrays["w"]; a.Sum[0] != "-1.5" || a.Min[0] != -3 || a.Max[0] != 1 || a.Finite != 4 {
		t.Errorf("w %+v", a)
	}
	if a := arrays["u"]; a.On != "point" || a.Tuples != 20 || a.Sum[1] != "-4" || a.Max[0] != 0.1 || a.TakenFor != "displacement" {
		t.Errorf("u %+v", a)
	}
	if a := arrays["stress"]; a.TakenFor != "stress" || a.Min[5] != -2 {
		t.Errorf("stress %+v", a)
	}
	// Headers and types alone: no values, the same counts.
	brief, found := inspectAll(t, m, false)
	if brief.Cells != 6 || brief.Bounds != nil || brief.Measure != nil || brief.Arrays[0].Finite.Exists() || brief.Arrays[0].Min != nil ||
		brief.Arrays[0].TakenFor != "stress" || !hasCode(found, "ghost-cells") {
		t.Errorf("without ranges: %+v; %+v", brief, found)
	}
}

// With values the fields are audited, with what the tally would say.
func TestInspectAudits(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 21)
	m := rowMesh(20, cellArray("s", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("e", storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...))
	file, found := inspectAll(t, m, true)
	if file.Arrays[1].TakenFor != "strain" || !strings.Contains(string(file.Arrays[1].Why), "read as engineering") || !hasCode(found, "shear-convention") {
		t.Errorf("strain %+v; %+v", file.Arrays[1], found)
	}
	alone := rowMesh(20, cellArray("e", storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...))
	if file := inspect(t, alone, true); file.Arrays[0].TakenFor != "strain" || !strings.Contains(string(file.Arrays[0].Why), "not settled") {
		t.Errorf("strain alone: %+v", file.Arrays[0])
	}
}
