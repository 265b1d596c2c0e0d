package energy

import (
	"encoding/json"
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"strainledger/mesh"
)

// norm returns ‖e‖ of an account.
func norm(a *Account) float64 { return math.Sqrt(2 * float64(a.EnergyError)) }

// stressAtGauss names an array of 2 × 2 integration points in a long tuple.
func stressAtGauss() Field {
	return Field{Arrays: []string{"stress"}, On: mesh.OnCell, Integration: true, Rule: "gauss 2x2"}
}

// B-05a (own solution; agrees with a published column, from memory), tolerance 0.1 %: full
// integration of the stiffness, and 11.0351 by 2 × 2 points at n 8, whose solution the
// other checks start from. The program finds its ½ F·u again from the displacement.
func TestCookMembrane(t *testing.T) {
	for n, want := range map[int][2]float64{2: {11.80, 5.8785}, 4: {18.29, 9.1320}, 8: {22.08, 11.0344}, 16: {23.43, 11.7276}, 32: {23.82, 11.9361}} {
		full := newCookMembrane(t, n, gauss3)
		if middle := full.displacement[2*(n+n/2*(n+1))+1]; !within(middle, want[0], 1e-3) || !within(full.energy, want[1], 1e-3) {
			t.Errorf("n %d: v(48,52) %.5g and U %.6g, want %.5g and %.6g", n, middle, full.energy, want[0], want[1])
		}
		c := newCookMembrane(t, n, gauss2)
		if n == 8 && !within(c.energy, 11.0351, 1e-5) {
			t.Errorf("U %.6g by 2 × 2 points, want 11.0351", c.energy)
		}
		if got := float64(tally(t, c.piece(), cookOptions(FromDisplacement)).Total.Energy); !within(got, c.energy, 1e-11) {
			t.Errorf("n %d: energy %.12g from the displacement, want %.12g", n, got, c.energy)
		}
	}
}

// B-06 (own solution), tolerance 0.1 %.
func TestEnergyOfAveragedStress(t *testing.T) {
	for n, want := range map[int]float64{4: 7.7089, 8: 10.2126, 16: 11.4351, 32: 11.8450} {
		c := newCookMembrane(t, n, gauss2)
		if got := tally(t, c.piece(c.nodalStress()), cookOptions(FromStress)).Total.Energy; !within(float64(got), want, 1e-3) {
			t.Errorf("n %d: energy %.6g, want %.6g", n, got, want)
		}
	}
}

// B-07 (own solution), tolerance 0.1 %.
func TestEnergyOfOneValuePerCell(t *testing.T) {
	for n, want := range map[int][2]float64{4: {7.1171, 6.9877}, 8: {10.1443, 10.1066}, 16: {11.4466, 11.4370}} {
		c := newCookMembrane(t, n, gauss2)
		for i, array := range []memoryArray{c.centroidStress(), c.meanStress()} {
			if got := float64(tally(t, c.piece(array), cookOptions(FromStress)).Total.Energy); !within(got, want[i], 1e-3) {
				t.Errorf("n %d: energy %.6g from %d, want %.6g", n, got, i, want[i])
			}
		}
	}
}

// Z-02, Z-02b and the true η of Z-03 (own solution), tolerance 0.5 %: ‖e‖ from corner-evaluated
// stresses and from centroid stresses, over the true √(2 (12.0208 - U_h)).
func TestErrorOfCookMembrane(t *testing.T) {
	for n, want := range map[int]struct{ trueEta, eta, corners, centroids float64 }{
		4:  {0.4898, 0.4153, 0.8126, 0.8553},
		8:  {0.2864, 0.2598, 0.9002, 0.9495},
		16: {0.1562, 0.1437, 0.9184, 0.9719},
		32: {0.0839, 0.0766, 0.9123, 0.9733},
	} {
		c := newCookMembrane(t, n, gauss2)
		exact := math.Sqrt(2 * (12.0208 - c.energy))
		if eta := math.Sqrt(1 - c.energy/12.0208); !within(eta, want.trueEta, 5e-3) {
			t.Errorf("n %d: true eta %.4f, want %.4f", n, eta, want.trueEta)
		}
		corners := &tally(t, c.piece(), cookOptions(FromDisplacement)).Total
		if got := norm(corners) / exact; !within(got, want.corners, 5e-3) || !within(float64(corners.ErrorEstimate), want.eta, 5e-3) {
			t.Errorf("n %d: effectivity %.4f and eta %.4f, want %.4f and %.4f", n, got, corners.ErrorEstimate, want.corners, want.eta)
		}
		centroids := &tally(t, c.piece(c.centroidStress()), cookOptions(FromStress)).Total
		if got := norm(centroids) / exact; !within(got, want.centroids, 5e-3) {
			t.Errorf("n %d: effectivity %.4f from cell data, want %.4f", n, got, want.centroids)
		}
		// The file's own average of corner values is the same smooth stress.
		inFile := &tally(t, c.piece(c.nodalStress()), cookOptions(FromStress)).Total
		if !within(float64(inFile.EnergyError), float64(corners.EnergyError), 1e-11) {
			t.Errorf("n %d: energy error %.15g with averaged nodal stress, %.15g without", n, inFile.EnergyError, corners.EnergyError)
		}
		// Bilinear extrapolation from 2 × 2 points misses what is no bilinear stress, little.
		options := cookOptions(FromStress)
		options.Fields.Stress = stressAtGauss()
		points := &tally(t, c.piece(c.gaussianStress()), options).Total
		if got := norm(points) / exact; !within(got, want.corners, 2e-2) {
			t.Errorf("n %d: effectivity %.4f from integration points, want about %.4f", n, got, want.corners)
		}
	}
}

// Under refinement ‖e‖ falls as h where the solution is smooth, and as h^λ with a singular
// corner (methods, section 14): Cook's corner at (0,44), clamped beside free and 137° wide,
// holds it near 0.9 on these meshes, as the true error (Z-02).
func TestErrorFallsWithTheMesh(t *testing.T) {
	for _, recovery := range []Recovery{ByAveraging, ByPatches} {
		var before float64
		for _, n := range []int{8, 16, 32} {
			options := cookOptions(FromDisplacement)
			options.Error.Recovery = recovery
			now := float64(tally(t, newCookMembrane(t, n, gauss2).piece(), options).Total.ErrorEstimate)
			if rate := math.Log2(before / now); before > 0 && (rate < 0.8 || rate > 1) {
				t.Errorf("%s, n %d: the estimate falls as h^%.3f", recovery, n, rate)
			}
			before = now
		}
	}
}

// loadedBar is a bar of unit size under a unit body force, fixed at 0, of equal bricks:
// u = x - x²/2 at the nodes, which is exact; stress 1 - x at the middle of each.
func loadedBar(count int) *memoryMesh {
	piece := memoryPiece{}
	u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 3}
	stress := memoryArray{name: "stress", on: mesh.OnCell, components: 6}
	h := 1 / float64(count)
	for i := range count + 1 {
		x := h * float64(i)
		for _, corner := range [][2]float64{{0, 0}, {1, 0}, {1, 1}, {0, 1}} {
			piece.points = append(piece.points, [3]float64{x, corner[0], corner[1]})
			u.values = append(u.values, x-x*x/2, 0, 0)
		}
		if i < count {
			first := int32(4 * i)
			piece.cells = append(piece.cells, memoryCell{mesh.Hexahedron, []int32{first, first + 4, first + 5, first + 1, first + 3, first + 7, first + 6, first + 2}})
			stress.values = append(stress.values, 1-h*(float64(i)+0.5), 0, 0, 0, 0, 0)
		}
	}
	piece.arrays = []memoryArray{u, stress}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// springy is a material of E 1 and ν 0.
func springy() Material {
	m := NewMaterial("springy")
	m.YoungsModulus, m.PoissonsRatio = 1, 0
	return m
}

// Z-01: ‖e‖² = h²/12, effectivity exactly 1, η = h/2, U_h = 1/6 - h²/24; from cell data with
// and without the displacement, and from displacement alone.
func TestErrorOfLoadedBar(t *testing.T) {
	for _, count := range []int{2, 5, 10, 20} {
		h := 1 / float64(count)
		for name, options := range map[string]Options{
			"cells and displacement": {From: FromStress},
			"cells":                  {From: FromStress, Fields: Fields{Displacement: Field{Off: true}}},
			"displacement":           {From: FromDisplacement},
		} {
			options.Materials, options.Error.Estimate = []Material{springy()}, true
			total := &tally(t, loadedBar(count), options).Total
			if !within(float64(total.Energy), 1./6-h*h/24, 1e-12) || !within(float64(total.EnergyError), h*h/24, 1e-11) || !within(float64(total.ErrorEstimate), h/2, 1e-11) {
				t.Errorf("%d cells, %s: U %.15g, energy error %.15g, eta %.15g, want eta %.15g", count, name, total.Energy, total.EnergyError, total.ErrorEstimate, h/2)
			}
			if !within(float64(total.EnergyError+total.Energy), 1./6, 1e-12) {
				t.Errorf("%d cells, %s: U_h and its error make %.15g, want 1/6", count, name, total.Energy+total.EnergyError)
			}
		}
	}
}

// Z-04 (derived): a uniform field has no error, whatever the cell; the strain of rigid
// turning and of the linear patch.
func TestNoErrorOfUniformStress(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for cellType, count := range map[mesh.CellType]int{
		mesh.Tetrahedron: 4, mesh.Hexahedron: 8, mesh.Wedge: 6, mesh.Pyramid: 5, mesh.QuadraticTetrahedron: 10, mesh.QuadraticHexahedron: 20,
		mesh.TriquadraticHexahedron: 27, mesh.QuadraticWedge: 15, mesh.QuadraticPyramid: 13,
	} {
		m := distorted(t, cellType, count, random, func(x, y, z float64) Vector {
			return Vector{1e-3 * (2*x + y + z) / 2, 1e-3 * (x + 2*y + z) / 2, 1e-3 * (x + y + 2*z) / 2}
		})
		m.pieces[0].arrays = append(m.pieces[0].arrays, cellArray("stress", []float64{2000, 2000, 2000, 400, 400, 400}))
		material := NewMaterial("m")
		material.YoungsModulus, material.PoissonsRatio = 1e6, 0.25
		for _, from := range []EnergySource{FromDisplacement, FromStress} {
			for _, recovery := range []Recovery{ByAveraging, ByPatches} {
				total := &tally(t, m, Options{From: from, Materials: []Material{material}, Error: ErrorOptions{Estimate: true, Recovery: recovery}}).Total
				if !(total.ErrorEstimate < 1e-11) {
					t.Errorf("%v from %s by %s: eta %g, want 0", cellType, from, recovery, total.ErrorEstimate)
				}
			}
		}
	}
}

// Across a border of materials stress may jump without an error: each region has its own
// smooth stress, also at the points that they share. E and stress 1 and 3 under one strain.
func TestErrorStaysWithinRegions(t *testing.T) {
	points, cells := row(6)
	stress := memoryArray{name: "stress", on: mesh.OnCell, components: 6}
	for i := range cells {
		stress.values = append(stress.values, []float64{1, 3}[i/3], 0, 0, 0, 0, 0)
	}
	stiff := springy()
	stiff.Name, stiff.YoungsModulus = "stiff", 3
	options := Options{From: FromStress, Materials: []Material{springy(), stiff}, Error: ErrorOptions{Estimate: true}}
	for number, want := range map[int]bool{1: false, 2: true} {
		options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}, Material: "springy"}, {Name: "b", Rest: true, Material: "stiff"}}
		part := labels1("part", 1, 1, 1, 2, 2, 2)
		if number == 1 { // all in one region: the jump is an error
			part = labels1("part", 1, 1, 1, 1, 1, 1)
			options.Regions = options.Regions[:1]
		}
		total := &tally(t, &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{stress, part}}}}, options).Total
		if isNone := total.ErrorEstimate < 1e-12; isNone != want {
			t.Errorf("%d regions: eta %g", number, total.ErrorEstimate)
		}
	}
}

// A mesh in two pieces, which share no point number but stand together, has the error of
// the mesh in one.
func TestErrorAcrossPieces(t *testing.T) {
	whole := loadedBar(6)
	options := Options{From: FromDisplacement, Materials: []Material{springy()}, Error: ErrorOptions{Estimate: true}}
	options.Regions = []Region{{Name: "all", Rest: true, Material: "springy"}}
	want := tally(t, whole, options).Total
	p := &whole.pieces[0]
	cut := &memoryMesh{}
	for i, points := range [][2]int{{0, 16}, {12, 28}} {
		piece := memoryPiece{points: p.points[points[0]:points[1]], arrays: []memoryArray{
			{name: "displacement", on: mesh.OnPoint, components: 3, values: p.arrays[0].values[3*points[0] : 3*points[1]]},
		}}
		for _, cell := range p.cells[3*i : 3*i+3] {
			moved := memoryCell{cellType: cell.cellType}
			for _, node := range cell.nodes {
				moved.nodes = append(moved.nodes, node-int32(points[0]))
			}
			piece.cells = append(piece.cells, moved)
		}
		cut.pieces = append(cut.pieces, piece)
	}
	if got := tally(t, cut, options).Total; got.ErrorEstimate != want.ErrorEstimate || got.EnergyError != want.EnergyError {
		t.Errorf("eta %.17g in two pieces, %.17g in one", got.ErrorEstimate, want.ErrorEstimate)
	}
}

// The same bytes for any number of workers and any chunks, by averaging and by patches.
func TestErrorDoesNotDependOnTheSchedule(t *testing.T) {
	c := newCookMembrane(t, 16, gauss2)
	for _, recovery := range []Recovery{ByAveraging, ByPatches} {
		for _, from := range []EnergySource{FromDisplacement, FromStress} {
			var first string
			for _, schedule := range [][2]int{{1, 0}, {2, 7}, {3, 1}, {8, 10}} {
				options := cookOptions(from)
				options.Regions = []Region{{Name: "left", Box: &Box{Low: Vector{-1, -1, -1}, High: Vector{24, 99, 1}}, Material: "cook"}, {Name: "right", Rest: true, Material: "cook"}}
				options.Error.Recovery, options.Workers, options.ChunkCells = recovery, schedule[0], schedule[1]
				text, err := json.Marshal(tally(t, c.piece(c.centroidStress()), options))
				if err != nil {
					t.Fatal(err)
				}
				if first == "" {
					first = string(text)
				} else if string(text) != first {
					t.Fatalf("%s from %s: another ledger with %d workers and chunks of %d", recovery, from, schedule[0], schedule[1])
				}
			}
		}
	}
}

// linearBlock is a cube of n³ bricks whose stress is a linear function of place, given by
// its value at the middle of each.
func linearBlock(n int) *memoryMesh {
	piece := memoryPiece{}
	h := 1 / float64(n)
	for k := range n + 1 {
		for j := range n + 1 {
			for i := range n + 1 {
				piece.points = append(piece.points, [3]float64{h * float64(i), h * float64(j), h * float64(k)})
			}
		}
	}
	stress := memoryArray{name: "stress", on: mesh.OnCell, components: 6}
	at := func(i, j, k int) int32 { return int32(i + (n+1)*(j+(n+1)*k)) }
	for k := range n {
		for j := range n {
			for i := range n {
				piece.cells = append(piece.cells, memoryCell{mesh.Hexahedron, []int32{
					at(i, j, k), at(i+1, j, k), at(i+1, j+1, k), at(i, j+1, k), at(i, j, k+1), at(i+1, j, k+1), at(i+1, j+1, k+1), at(i, j+1, k+1)}})
				x, y, z := h*(float64(i)+0.5), h*(float64(j)+0.5), h*(float64(k)+0.5)
				stress.values = append(stress.values, 1-x, y, 2*z, x+y, 3*z-y, 1)
			}
		}
	}
	piece.arrays = []memoryArray{stress}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// Where stress is linear patches give it exactly at every node that a patch reaches, the
// mean does not at the ends. The smooth stress is then 1 - x, and ‖e‖² that of the true
// solution.
func TestPatchesOfLinearStress(t *testing.T) {
	const n = 4
	m := linearBlock(n)
	ledger := tally(t, m, Options{From: FromStress, Materials: []Material{springy()}, Error: ErrorOptions{Estimate: true, Recovery: ByPatches}})
	// ν 0: e:S:e = Σ normal² + 2 Σ shear². A component of slope g along an axis leaves
	// g² h²/12 in each cell: normals 1 + 1 + 4, shears 2 (1 + 1) + 2 (9 + 1).
	if want := (6. + 4 + 20) / (12 * n * n) / 2; !within(float64(ledger.Total.EnergyError), want, 1e-11) {
		t.Errorf("energy error %.15g, want %.15g", ledger.Total.EnergyError, want)
	}
	if message := messageOf(ledger, "error-estimated"); !strings.Contains(message, "(27 nodes by their own patch, 98 by their neighbours', 0 by the mean of their cells)") {
		t.Errorf("finding %q", message)
	}
}

// A field that is a polynomial of the extrapolation's degree is found at the nodes again,
// in either order of the points; a single point gives its value everywhere.
func TestExtrapolationFromIntegrationPoints(t *testing.T) {
	for _, c := range []struct {
		cellType mesh.CellType
		nodes    int
		rule     string
		field    func(r [3]float64) float64
	}{
		{mesh.Quad, 4, "gauss 1x1", func([3]float64) float64 { return 7 }},
		{mesh.Quad, 4, "gauss 2x2", func(r [3]float64) float64 { return 1 + 2*r[0] - 3*r[1] + 5*r[0]*r[1] }},
		{mesh.Quad, 4, "gauss 2x3 slow", func(r [3]float64) float64 { return 1 + 2*r[0] - 3*r[1] + 5*r[0]*r[1] }},
		{mesh.QuadraticQuad, 8, "gauss 3x3", func(r [3]float64) float64 { return 1 + 2*r[0] - 3*r[1] + 5*r[0]*r[1] }},
		{mesh.LagrangeQuad, 16, "gauss 3x3 slow", func(r [3]float64) float64 { return 1 + r[0]*r[0] - 2*r[0]*r[1]*r[1] }},
		{mesh.Hexahedron, 8, "gauss 2x2x2 slow", func(r [3]float64) float64 { return r[0] - r[1]*r[2] + 4*r[0]*r[1]*r[2] + 2 }},
		{mesh.TriquadraticHexahedron, 27, "gauss 3x2x3", func(r [3]float64) float64 { return r[0] - r[1]*r[2] + 4*r[0]*r[1]*r[2] + 2 }},
	} {
		shape, err := mesh.ShapeOf(c.cellType, c.nodes, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		rule, err := ParseRule(c.rule)
		if err != nil {
			t.Fatal(err)
		}
		table, err := rule.Tabulate(shape)
		if err != nil {
			t.Fatal(err)
		}
		factors := extrapolation(rule.Counts, shape.Degree(), table, shape.NodeCoordinates())
		for k, place := range shape.NodeCoordinates() {
			var got float64
			for q, point := range table.Points {
				got += factors[k*len(table.Points)+q] * c.field(point)
			}
			if want := c.field(place); math.Abs(got-want) > 1e-12 {
				t.Errorf("%v, %s, node %d: %.15g, want %.15g", c.cellType, c.rule, k, got, want)
			}
		}
	}
}

// A ring under u_r = c r has uniform stress, also where it reaches the axis.
func TestNoErrorOnTheAxis(t *testing.T) {
	for _, axisX := range []bool{false, true} {
		piece := memoryPiece{cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}, {mesh.Quad, []int32{1, 4, 5, 2}}}}
		if axisX {
			piece.cells = []memoryCell{{mesh.Quad, []int32{3, 2, 1, 0}}, {mesh.Quad, []int32{2, 5, 4, 1}}}
		}
		u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 2}
		for _, p := range [][3]float64{{0, 0, 0}, {10, 0, 0}, {10, 5, 0}, {0, 5, 0}, {20, 1, 0}, {20, 6, 0}} {
			d := []float64{1e-4 * p[0], 0}
			if axisX {
				p[0], p[1] = p[1], p[0]
				d[0], d[1] = d[1], d[0]
			}
			piece.points, u.values = append(piece.points, p), append(u.values, d...)
		}
		piece.arrays = []memoryArray{u}
		total := &tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, Options{Idealisation: Axisymmetric, AxisX: axisX, Materials: []Material{steel()}, Error: ErrorOptions{Estimate: true}}).Total
		if !(total.ErrorEstimate < 1e-11) {
			t.Errorf("axis x %v: eta %g, want 0", axisX, total.ErrorEstimate)
		}
	}
}

func TestErrorThatIsNotAvailable(t *testing.T) {
	c := newCookMembrane(t, 4, gauss2)
	noLaw := NewMaterial("cook")
	strain := memoryArray{name: "strain", on: mesh.OnPoint, components: 3, values: c.nodalStress().values}
	strain.values = append([]float64(nil), strain.values...)
	for i := 0; i < len(strain.values); i += 3 {
		x, y, xy := strain.values[i], strain.values[i+1], strain.values[i+2]
		strain.values[i], strain.values[i+1], strain.values[i+2] = x-y/3, y-x/3, xy*4/3
	}
	scaled := memoryArray{name: "u", on: mesh.OnPoint, components: 2}
	for _, value := range c.displacement {
		scaled.values = append(scaled.values, 1000*value)
	}
	for want, account := range map[string]struct {
		m      *memoryMesh
		change func(*Options)
	}{
		"it needs an elastic law": {c.piece(c.nodalStress(), strain), func(o *Options) { o.Materials = []Material{noLaw}; o.From = FromStressStrain }},
		"one value for all cells that meet there, and the file has no displacement": {c.piece(c.nodalStress()), func(o *Options) { o.Fields.Displacement.Off = true }},
		"a part that is not elastic and not known":                                  {c.piece(c.nodalStress(), pointArray("equivalent plastic strain", uniform(len(c.points), 0)...)), func(*Options) {}},
		`the displacement "u" does not give the stress of the file`:                 {c.piece(c.centroidStress(), scaled), func(o *Options) { o.Fields.Displacement.Arrays = []string{"u"} }},
	} {
		options := cookOptions(FromStress)
		options.Requirements = []Requirement{{Name: "fine", Quantity: "error_estimate", AtMost: 0.5, AtLeast: None}}
		account.change(&options)
		ledger := tally(t, account.m, options)
		if ledger.Total.ErrorEstimate.Exists() || ledger.Total.EnergyError.Exists() || ledger.Hotspots[0].ErrorToTarget.Exists() {
			t.Errorf("%s: eta %v", want, ledger.Total.ErrorEstimate)
		}
		if message := messageOf(ledger, "error-not-estimated"); !strings.Contains(message, want) {
			t.Errorf("finding %q, want %q", message, want)
		}
		if r := ledger.Requirements[0]; r.Met || !strings.Contains(string(r.Why), "not available") {
			t.Errorf("%s: requirement %+v", want, r)
		}
	}
}

// A region without a law has no estimate, nor has the total; the other one has.
func TestErrorOfOneRegion(t *testing.T) {
	m := loadedBar(6)
	values := m.pieces[0].arrays[1].values
	strain := memoryArray{name: "strain", on: mesh.OnCell, components: 6, values: values}
	m.pieces[0].arrays = append(m.pieces[0].arrays, strain, labels1("part", 1, 1, 1, 2, 2, 2))
	options := Options{Materials: []Material{springy(), NewMaterial("unknown")}, Error: ErrorOptions{Estimate: true}, Regions: []Region{
		{Name: "a", Array: "part", Values: []float64{1}, Material: "springy"}, {Name: "b", Rest: true, Material: "unknown"}}}
	ledger := tally(t, m, options)
	if a, b := &ledger.Regions[0], &ledger.Regions[1]; !a.ErrorEstimate.Exists() || b.ErrorEstimate.Exists() || ledger.Total.ErrorEstimate.Exists() {
		t.Errorf("eta %v, %v, total %v", a.ErrorEstimate, b.ErrorEstimate, ledger.Total.ErrorEstimate)
	}
	if message := messageOf(ledger, "error-not-estimated"); !strings.HasPrefix(message, `3 cells in region "b" have no error estimate`) {
		t.Errorf("finding %q", message)
	}
}

// The requirement counts; ξ follows from ‖e‖² of the cell: here all cells have the same,
// h³/12, so that ξ = η/target. The three inner cells have that; the end cells, whose node
// takes the cell's value, a quarter of the square on one half.
func TestErrorToTarget(t *testing.T) {
	options := Options{Hotspots: HotspotOptions{SingleCells: true}, From: FromDisplacement, Materials: []Material{springy()}, Error: ErrorOptions{Estimate: true, Target: 0.2}}
	options.Requirements = []Requirement{{Name: "fine", Quantity: "error_estimate", AtMost: 0.1 + 1e-9, AtLeast: None}, {Name: "finer", Quantity: "error_estimate", AtMost: 0.09, AtLeast: None}}
	ledger := tally(t, loadedBar(5), options)
	if !ledger.Requirements[0].Met || ledger.Requirements[1].Met {
		t.Errorf("requirements %+v", ledger.Requirements)
	}
	// σ* - σ_h over an end cell runs from 0 to h/2: ∫ = h (h/2)²/3 = h³/12 too.
	for _, h := range ledger.Hotspots {
		if !within(float64(h.ErrorToTarget), 0.1/0.2, 1e-10) {
			t.Errorf("cell %d: error over target %.12g, want 0.5", h.Cell, h.ErrorToTarget)
		}
	}
	if hasFinding(ledger, "hotspot-mesh-too-coarse") {
		t.Error("a finding although the target is met")
	}
	options.Error.Target = 0 // 0.05
	ledger = tally(t, loadedBar(5), options)
	if h := ledger.Hotspots[0]; !within(float64(h.ErrorToTarget), 2, 1e-10) || !strings.Contains(messageOf(ledger, "hotspot-mesh-too-coarse"), "5 of 5 hotspots (rank 1, 2, 3, 4, 5)") {
		t.Errorf("error over target %.12g, %q", h.ErrorToTarget, messageOf(ledger, "hotspot-mesh-too-coarse"))
	}
}

// Patches that are asked for and cannot be fitted are said so.
func TestPatchesNotUsed(t *testing.T) {
	random := rand.New(rand.NewPCG(9, 10))
	m := distorted(t, mesh.QuadraticHexahedron, 20, random, func(x, y, z float64) Vector { return Vector{1e-3 * x * y, 1e-3 * z * z, 0} })
	ledger := tally(t, m, Options{Materials: []Material{steel()}, Error: ErrorOptions{Estimate: true, Recovery: ByPatches}})
	if message := messageOf(ledger, "patches-not-used"); !strings.Contains(message, "nodes between their corners") {
		t.Errorf("finding %q", message)
	}
	c := newCookMembrane(t, 8, gauss2)
	options := cookOptions(FromStress)
	options.Error.Recovery = ByPatches
	ledger = tally(t, c.piece(c.nodalStress()), options)
	if hasFinding(ledger, "patches-not-used") || !ledger.Total.ErrorEstimate.Exists() {
		t.Errorf("findings %v", ledger.Findings)
	}
}

// Quadratic cells with one value each: the smooth stress then comes from the gradients,
// and bending, whose stress is linear, has no error.
func TestNoErrorOfBendingInQuadraticCells(t *testing.T) {
	shape, err := mesh.ShapeOf(mesh.QuadraticQuad, 8, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	piece := memoryPiece{}
	numbers := map[string]int32{}
	u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 2}
	stress := memoryArray{name: "stress", on: mesh.OnCell, components: 3}
	for i := range 3 {
		for j := range 2 {
			cell := memoryCell{cellType: mesh.QuadraticQuad}
			for _, r := range shape.NodeCoordinates() {
				x, y := float64(i)+r[0], float64(j)+r[1]-1
				key := fmt.Sprint(x, y)
				if _, isKnown := numbers[key]; !isKnown {
					numbers[key] = int32(len(piece.points))
					piece.points = append(piece.points, [3]float64{x, y})
					u.values = append(u.values, 1e-3*x*y, -0.5e-3*x*x) // σ_xx = E 1e-3 y with ν 0
				}
				cell.nodes = append(cell.nodes, numbers[key])
			}
			piece.cells = append(piece.cells, cell)
			stress.values = append(stress.values, 1e-3*(float64(j)-0.5), 0, 0)
		}
	}
	piece.arrays = []memoryArray{u, stress}
	options := Options{Idealisation: PlaneStress, Thickness: 1, From: FromStress, Materials: []Material{springy()}, Error: ErrorOptions{Estimate: true}}
	total := &tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, options).Total
	if !(total.ErrorEstimate < 1e-11) {
		t.Errorf("eta %g, want 0", total.ErrorEstimate)
	}
}

// The cells' own values are the mean of σ_h, whatever else the displacement holds: a strain
// that is uniform over each cell does not count, nor does anything in linear triangles.
func TestMeanOfTheCellComesFromTheFile(t *testing.T) {
	c := newCookMembrane(t, 8, gauss2)
	for _, isSplit := range []bool{false, true} {
		estimate := func(change func(u []float64), off bool) Number {
			m := c.piece(c.centroidStress())
			arrays := m.pieces[0].arrays
			if isSplit { // two triangles with the value of their quadrilateral
				m.pieces[0].cells = nil
				stress := memoryArray{name: "stress", on: mesh.OnCell, components: 3}
				for i, q := range c.quads {
					m.pieces[0].cells = append(m.pieces[0].cells, memoryCell{mesh.Triangle, []int32{q[0], q[1], q[2]}}, memoryCell{mesh.Triangle, []int32{q[0], q[2], q[3]}})
					value := arrays[0].values[3*i : 3*i+3]
					stress.values = append(append(stress.values, value...), value...)
				}
				arrays[0] = stress
			}
			arrays[1].values = append([]float64(nil), arrays[1].values...)
			change(arrays[1].values)
			options := cookOptions(FromStress)
			options.Fields.Displacement.Off = off
			return tally(t, m, options).Total.EnergyError
		}
		plain := estimate(func([]float64) {}, false)
		stretched := estimate(func(u []float64) {
			for i, p := range c.points {
				u[2*i], u[2*i+1] = u[2*i]+0.02*p[0], u[2*i+1]-0.03*p[0]-0.01*p[1]
			}
		}, false)
		if !within(float64(stretched), float64(plain), 1e-9) {
			t.Errorf("split %v: energy error %.12g with a uniform strain more, %.12g without", isSplit, stretched, plain)
		}
		alone := estimate(func([]float64) {}, true)
		if isSame := within(float64(alone), float64(plain), 1e-9); isSame != isSplit {
			t.Errorf("split %v: energy error %.12g without the displacement, %.12g with it", isSplit, alone, plain)
		}
	}
}

// Legendre's polynomials against their closed forms.
func TestLegendre(t *testing.T) {
	for _, x := range []float64{-1, -0.3, 0, 0.7, 1} {
		for m, want := range []float64{1, x, (3*x*x - 1) / 2, (5*x*x*x - 3*x) / 2} {
			if got := legendre(m, x); math.Abs(got-want) > 1e-15 {
				t.Errorf("P_%d(%g) = %g, want %g", m, x, got, want)
			}
		}
	}
}

// The time of a tally with the estimate, for a million cells: hexahedra, which have 27
// points to compare at.
func BenchmarkErrorEstimate(b *testing.B) {
	const n = 20
	m := linearBlock(n)
	for i := range m.pieces[0].points {
		p := m.pieces[0].points[i]
		if i == 0 {
			m.pieces[0].arrays = append(m.pieces[0].arrays, memoryArray{name: "displacement", on: mesh.OnPoint, components: 3})
		}
		u := &m.pieces[0].arrays[1]
		u.values = append(u.values, 1e-3*p[0]*p[1], 1e-3*p[1], 1e-3*p[2]*p[0])
	}
	for name, options := range map[string]Options{
		"none":         {From: FromStress},
		"cells":        {From: FromStress, Fields: Fields{Displacement: Field{Off: true}}, Error: ErrorOptions{Estimate: true}},
		"patches":      {From: FromStress, Fields: Fields{Displacement: Field{Off: true}}, Error: ErrorOptions{Estimate: true, Recovery: ByPatches}},
		"gradients":    {From: FromStress, Error: ErrorOptions{Estimate: true}},
		"displacement": {From: FromDisplacement, Error: ErrorOptions{Estimate: true}},
	} {
		b.Run(name, func(b *testing.B) {
			options.Materials, options.Workers = []Material{springy()}, 1
			var cells int64
			for b.Loop() {
				cells += tally(b, m, options).Total.Cells
			}
			b.ReportMetric(b.Elapsed().Seconds()/float64(cells)*1e6, "s/Mcell")
		})
	}
}
