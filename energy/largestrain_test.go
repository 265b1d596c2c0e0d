package energy

import (
	"math"
	"strings"
	"testing"

	"strainledger/mesh"
)

// strainOf is one cube with that strain, and a stress that belongs to it by the law.
func strainOf(t *testing.T, strain mesh.SymmetricTensor, more ...memoryArray) *memoryMesh {
	points, cells := row(1)
	stress := isotropic(t, 210000, 0.3).Stress(&strain)
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells,
		arrays: append([]memoryArray{cellArray("stress", stress[:]), cellArray("strain", strain[:])}, more...)}}}
}

// largeStrainOf returns the message of the finding, "" without one.
func largeStrainOf(t *testing.T, m *memoryMesh, options Options) string {
	t.Helper()
	ledger := tally(t, m, options)
	for _, finding := range ledger.Findings {
		if finding.Code == "large-strain" {
			if finding.Severity != Warning {
				t.Errorf("severity %s", finding.Severity)
			}
			return finding.Message
		}
	}
	return ""
}

// The principal strain counts, not a component and not the size of the tensor
// (thresholds: common practice, no source).
func TestLargePrincipalStrain(t *testing.T) {
	for _, c := range []struct {
		strain mesh.SymmetricTensor
		want   string // "" no finding
	}{
		{mesh.SymmetricTensor{0.0099}, ""},
		{mesh.SymmetricTensor{0.0099, 0.0099, 0.0099}, ""},
		{mesh.SymmetricTensor{0.0101}, "1.01 %"},
		{mesh.SymmetricTensor{0, -0.0102}, "1.02 %"},
		{mesh.SymmetricTensor{0, 0, 0.003, 0.0099, 0, 0}, ""},
		{mesh.SymmetricTensor{0, 0, 0.003, 0.0101, 0, 0}, "1.01 %"},
		{mesh.SymmetricTensor{0, 0.001, 0, 0, 0, 0.0103}, "1.03 %"},
		{mesh.SymmetricTensor{0.006, 0.006, 0, 0.006, 0, 0}, "1.2 %"},
		{mesh.SymmetricTensor{0, 0, 0, 0, -0.06, 0}, "6 %"},
	} {
		got := largeStrainOf(t, strainOf(t, c.strain), solidOptions(mesh.OnCell, steel()))
		if c.want == "" {
			if got != "" {
				t.Errorf("strain %v: %s", c.strain, got)
			}
			continue
		}
		if !strings.HasPrefix(got, "the largest principal strain is "+c.want+": ") {
			t.Errorf("strain %v: %q, want %s", c.strain, got, c.want)
		}
		if isGrave := c.strain[4] < -0.05; isGrave != strings.Contains(got, "work-conjugate") {
			t.Errorf("strain %v: %q", c.strain, got)
		}
	}
}

// The strain is the total one, by whatever way it is known, and every cell is looked at.
func TestLargeStrainIsTheTotalStrain(t *testing.T) {
	small := mesh.SymmetricTensor{0.0095, -0.00285, -0.00285}
	thermal := cellArray("thermal strain", []float64{0.004, 0.004, 0.004, 0, 0, 0})
	plastic := cellArray("plastic strain", []float64{0.003, -0.0015, -0.0015, 0, 0, 0})
	options := func(change func(*Options)) Options {
		o := solidOptions(mesh.OnCell, steel())
		if change != nil {
			change(&o)
		}
		return o
	}
	total := func(m *memoryMesh, by ...float64) *memoryMesh {
		values := m.pieces[0].arrays[1].values
		for i := range by {
			values[i] += by[i]
		}
		return m
	}
	elastic := func(o *Options) { o.Fields.Strain.Kind = "elastic" }
	for name, c := range map[string]struct {
		mesh    *memoryMesh
		options Options
		want    string
	}{
		"total with a thermal part":    {total(strainOf(t, small, thermal), 0.004, 0.004, 0.004), options(nil), "1.35 %"},
		"elastic with a plastic part":  {strainOf(t, small, plastic), options(elastic), "1.25 %"},
		"elastic alone":                {strainOf(t, small), options(elastic), ""},
		"by stress and law, small":     {strainOf(t, small), options(func(o *Options) { o.Fields.Strain = Field{Off: true} }), ""},
		"by stress and law":            {strainOf(t, mesh.SymmetricTensor{0.02, -0.006, -0.006}), options(func(o *Options) { o.Fields.Strain = Field{Off: true} }), "2 %"},
		"strain alone":                 {strainOf(t, mesh.SymmetricTensor{0.02, -0.006, -0.006}), options(func(o *Options) { o.Fields.Stress = Field{Off: true} }), "2 %"},
		"without law, not the elastic": {total(strainOf(t, small), 0.004, 0.004, 0.004), options(func(o *Options) { o.Materials = nil }), "1.35 %"},
	} {
		got := largeStrainOf(t, c.mesh, c.options)
		if (got == "") != (c.want == "") || !strings.Contains(got, c.want) {
			t.Errorf("%s: %q, want %q", name, got, c.want)
		}
	}
	// One cell of many, and one node of a cell.
	points, cells := row(1000)
	strain, stress := uniform(1000, 1e-3, 0, 0, 0, 0, 0), uniform(1000, 210, 0, 0, 0, 0, 0)
	strain[777], strain[778] = []float64{0.015, 0, 0, 0, 0, 0}, []float64{0, 0, 0.011, 0, 0, 0}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...)}}}}
	ledger := tally(t, m, solidOptions(mesh.OnCell))
	for _, finding := range ledger.Findings {
		if finding.Code == "large-strain" && (finding.Cells != 2 || !strings.Contains(finding.Message, "1.5 %")) {
			t.Errorf("finding %+v", finding)
		}
	}
	if !hasFinding(ledger, "large-strain") {
		t.Error("no finding")
	}
	points, cells = row(1)
	strain, stress = uniform(8, 1e-3, 0, 0, 0, 0, 0), uniform(8, 210, 0, 0, 0, 0, 0)
	strain[5] = []float64{0, 0.04, 0, 0, 0, 0}
	m = &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...)}}}}
	if got := largeStrainOf(t, m, solidOptions(mesh.OnPoint)); !strings.Contains(got, "4 %") {
		t.Errorf("one node: %q", got)
	}
}

// moved is a row of cubes without stress that moves by the field.
func moved(count int, field func(p [3]float64) Vector) *memoryMesh {
	points, cells := row(count)
	var u [][]float64
	for _, p := range points {
		d := field(p)
		u = append(u, d[:])
	}
	zero := uniform(count, 0, 0, 0, 0, 0, 0)
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", zero...), cellArray("strain", zero...), pointArray("displacement", u...),
	}}}}
}

// turnedBy rotates about an axis by so many degrees.
func turnedBy(axis int, degrees float64) func([3]float64) Vector {
	sine, cosine := math.Sincos(degrees * math.Pi / 180)
	return func(p [3]float64) (u Vector) {
		i, j := (axis+1)%3, (axis+2)%3
		u[i] = cosine*p[i] - sine*p[j] - p[i]
		u[j] = sine*p[i] + cosine*p[j] - p[j]
		return u
	}
}

// T-15 (derived): rigid rotations, which a strain of small displacements takes for strain.
func TestLargeRotation(t *testing.T) {
	options := solidOptions(mesh.OnCell, steel())
	for axis := range 3 {
		for degrees, want := range map[float64]string{0.99: "", -0.99: "", 1.01: "1.01 degrees", -1.01: "1.01 degrees", 5: "5 degrees", 10: "10 degrees", 120: "120 degrees"} {
			got := largeStrainOf(t, moved(1, turnedBy(axis, degrees)), options)
			if (got == "") != (want == "") || !strings.Contains(got, want) {
				t.Errorf("%g degrees about %d: %q", degrees, axis, got)
			}
		}
	}
	// det = 1, and 1 + tr ε is 1 + 2(cos θ - 1): -3.0384494 % at 10 degrees.
	got := largeStrainOf(t, moved(1, turnedBy(2, 10)), options)
	if !strings.Contains(got, "the volume ratio of cells is up to 3.04 % off 1 + tr ε") {
		t.Error(got)
	}
	if got := largeStrainOf(t, moved(1, turnedBy(2, 5.7)), options); strings.Contains(got, "volume") { // 0.989 %
		t.Error(got)
	}
	if got := largeStrainOf(t, moved(1, turnedBy(2, 5.8)), options); !strings.Contains(got, "up to 1.02 %") { // 1.024 %
		t.Error(got)
	}
	if got := largeStrainOf(t, moved(2000, turnedBy(2, 2)), options); !strings.HasPrefix(got, "cells turn by up to 2 degrees (in a sample of 512 cells): ") {
		t.Error(got)
	}
}

// The rotation beside a simple shear is its polar one, tan θ = γ/2 (derived), and one that
// every node of the plane agrees on.
func TestRotationAndVolumeOfGradients(t *testing.T) {
	for _, c := range []struct {
		gradient         [3][3]float64
		rotation, volume float64
	}{
		{[3][3]float64{}, 0, 0},
		{[3][3]float64{{0, 0.2, 0}}, math.Atan(0.1) * 180 / math.Pi, 0},
		{[3][3]float64{{0, 0, 0}, {0, 0, 0.2}}, math.Atan(0.1) * 180 / math.Pi, 0},
		{[3][3]float64{{0, 0, 0}, {0, 0, 0}, {0.2, 0, 0}}, math.Atan(0.1) * 180 / math.Pi, 0},
		{[3][3]float64{{0.5}, {0, -0.2}, {0, 0, 0.1}}, 0, math.Abs(1.5*0.8*1.1 - 1.4)},
		{[3][3]float64{{0.1, 0.2, 0}, {0.3, 0.1, 0}}, math.Atan2(0.1, 2.2) * 180 / math.Pi, math.Abs(1.1*1.1 - 0.06 - 1.2)},
		{[3][3]float64{{0, 0.1, 0.2}, {0.1, 0, 0.3}, {0.2, 0.3, 0}}, 0, math.Abs(2*0.1*0.2*0.3 - 0.01 - 0.04 - 0.09)},
	} {
		if got := rotationOf(&c.gradient); math.Abs(got-c.rotation) > 1e-13 {
			t.Errorf("%v: rotation %.15g, want %.15g", c.gradient, got, c.rotation)
		}
		if got := volumeMisfit(&c.gradient); math.Abs(got-c.volume) > 1e-15 {
			t.Errorf("%v: volume %.15g, want %.15g", c.gradient, got, c.volume)
		}
	}
}

// Displacement beside the model's diagonal, √102 of a row of ten cubes; and what is not
// looked at.
func TestLargeDisplacement(t *testing.T) {
	options := solidOptions(mesh.OnCell, steel())
	by := func(size float64) func([3]float64) Vector {
		return func([3]float64) Vector { return Vector{0, 0.6 * size * math.Sqrt(102), -0.8 * size * math.Sqrt(102)} }
	}
	if got := largeStrainOf(t, moved(10, by(0.0499)), options); got != "" {
		t.Error(got)
	}
	if got := largeStrainOf(t, moved(10, by(0.0501)), options); !strings.HasPrefix(got, "points move by up to 5.01 % of the model's diagonal: small strain") {
		t.Error(got)
	}
	m := moved(10, by(0.0501))
	m.pieces[0].arrays[2].values[3] = math.NaN() // of the first and second cell
	m.pieces[0].hidden = []uint8{0, 0, 1, 1, 1, 1, 1, 1, 1, 1}
	if got := largeStrainOf(t, m, options); !strings.HasPrefix(got, "points move by up to 5.01 %") {
		t.Error(got)
	}
	m.pieces[0].hidden = []uint8{0, 1, 1, 1, 1, 1, 1, 1, 1, 1}
	if got := largeStrainOf(t, m, options); got != "" {
		t.Error(got)
	}
	m = moved(10, by(1))
	m.pieces[0].arrays = m.pieces[0].arrays[:2]
	if got := largeStrainOf(t, m, options); got != "" {
		t.Error(got)
	}
}

// The gradient is the mean over the cell, in every idealisation.
func TestMotionOfPlanesAndRings(t *testing.T) {
	points := [][3]float64{{10, 0, 0}, {13, 0, 0}, {13, 2, 0}, {10, 2, 0}}
	cell := func(values ...[]float64) *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}, arrays: []memoryArray{pointArray("u", values...)}}}}
	}
	plane := Options{Idealisation: PlaneStrain, Materials: []Material{steel()}}
	// u = (0, 0.04 x): a simple shear of 0.04, rotation atan 0.02 = 1.1457628 degrees.
	got := largeStrainOf(t, cell([]float64{0, 0.4}, []float64{0, 0.52}, []float64{0, 0.52}, []float64{0, 0.4}), plane)
	if !strings.Contains(got, "cells turn by up to 1.15 degrees") || !strings.Contains(got, "principal strain is 2 %") {
		t.Error(got)
	}
	// u_r = 0.12 r, u_z = 0: hoop and radial strain 0.12, det 1.2544 beside 1.24.
	ring := Options{Idealisation: Axisymmetric, Materials: []Material{steel()}}
	got = largeStrainOf(t, cell([]float64{1.2, 0}, []float64{1.56, 0}, []float64{1.56, 0}, []float64{1.2, 0}), ring)
	if !strings.Contains(got, "volume ratio of cells is up to 1.44 % off") || !strings.Contains(got, "largest principal strain is 12 %") {
		t.Error(got)
	}
}

// The spans that are looked at: all of a small model, else sixteen spread over it, its ends
// among them, cut where pieces end.
func TestLookSpans(t *testing.T) {
	for _, counts := range [][]int64{{1}, {31}, {33}, {512}, {513}, {100000}, {10, 0, 500, 3}, {7, 600, 1}, {40, 100000, 40}} {
		model := &mesh.Model{}
		var cells int64
		for _, count := range counts {
			model.Pieces = append(model.Pieces, mesh.Piece{CellCount: count})
			cells += count
		}
		p := &plan{model: model}
		spans := p.lookSpans()
		seen := map[[2]int64]int{}
		for _, span := range spans {
			if span.Low < 0 || span.High > counts[span.Piece] {
				t.Errorf("%v: span %+v", counts, span)
			}
			for i := span.Low; i < span.High; i++ {
				seen[[2]int64{int64(span.Piece), i}]++
			}
		}
		want := min(cells, lookSpans*lookCells)
		if int64(len(seen)) < want*9/10 || int64(len(seen)) > want {
			t.Errorf("%v: %d cells, want %d", counts, len(seen), want)
		}
		last := len(counts) - 1
		if seen[[2]int64{0, 0}] == 0 || seen[[2]int64{int64(last), counts[last] - 1}] == 0 {
			t.Errorf("%v: the first or the last cell is missing in %v", counts, spans)
		}
	}
}
