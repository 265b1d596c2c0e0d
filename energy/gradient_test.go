package energy

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"strainledger/mesh"
)

// distorted returns one cell of the type with its nodes moved at random, the centre of
// a patch; and the displacement of each node by the field.
func distorted(t testing.TB, cellType mesh.CellType, count int, random *rand.Rand, field func(x, y, z float64) Vector) *memoryMesh {
	shape, err := mesh.ShapeOf(cellType, count, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	piece := memoryPiece{cells: []memoryCell{{cellType: cellType}}}
	u := memoryArray{name: "u", on: mesh.OnPoint, components: 3}
	for i, p := range shape.NodeCoordinates() {
		for axis := range shape.Dimension {
			p[axis] = 3*p[axis] + 0.12*random.Float64()
		}
		d := field(p[0], p[1], p[2])
		piece.points = append(piece.points, p)
		piece.cells[0].nodes = append(piece.cells[0].nodes, int32(i))
		u.values = append(u.values, d[:]...)
	}
	piece.arrays = []memoryArray{u}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// B-02 (MacNeal & Harder 1985; fields from memory): on a cell of any shape the linear
// field gives w 3.6 everywhere, tolerance 1e-9.
func TestPatchOfSolidsFromDisplacement(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	material := NewMaterial("m")
	material.YoungsModulus, material.PoissonsRatio, material.ProportionalLimit = 1e6, 0.25, 1e9
	for cellType, count := range map[mesh.CellType]int{
		mesh.Tetrahedron: 4, mesh.Hexahedron: 8, mesh.Wedge: 6, mesh.Pyramid: 5, mesh.QuadraticTetrahedron: 10, mesh.QuadraticHexahedron: 20,
		mesh.TriquadraticHexahedron: 27, mesh.QuadraticWedge: 15, mesh.BiquadraticWedge: 18, mesh.QuadraticPyramid: 13,
	} {
		m := distorted(t, cellType, count, random, func(x, y, z float64) Vector {
			return Vector{1e-3 * (2*x + y + z) / 2, 1e-3 * (x + 2*y + z) / 2, 1e-3 * (x + y + 2*z) / 2}
		})
		ledger := tally(t, m, Options{Materials: []Material{material}})
		total := ledger.Total
		if ledger.Model.EnergyFrom != "displacement" || !within(float64(total.MaxDensity), 3.6, 1e-9) || !within(float64(total.Energy), 3.6*float64(total.Volume), 1e-9) {
			t.Errorf("%v: from %s, density %.12g, want 3.6", cellType, ledger.Model.EnergyFrom, total.MaxDensity)
		}
		// Normals 2000, shears 400.
		if want := math.Sqrt(3 * 3 * 400 * 400); !within(float64(total.MaxEquivalentStress), want, 1e-9) {
			t.Errorf("%v: von Mises stress %.12g, want %.12g", cellType, total.MaxEquivalentStress, want)
		}
		if want := 6000. * 6000 * 0.5 / 6e6; !within(float64(total.EnergyVolumetric/total.Volume), want, 1e-9) {
			t.Errorf("%v: volumetric density %.12g, want %.12g", cellType, total.EnergyVolumetric/total.Volume, want)
		}
		if total.PeakDensity.Exists() || ledger.Hotspots[0].PeakDensity.Exists() {
			t.Errorf("%v: a peak density %v, although the file gives no stress or strain anywhere", cellType, total.PeakDensity)
		}
	}
}

// B-01 (MacNeal & Harder 1985; fields from memory): the membrane patch, w 1.5333333;
// and the same strain in plane strain by the law.
func TestPatchOfPlanesFromDisplacement(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	material := NewMaterial("m")
	material.YoungsModulus, material.PoissonsRatio = 1e6, 0.25
	planeStrain := func() float64 {
		strain := mesh.SymmetricTensor{1e-3, 1e-3, 0, 0.5e-3}
		stress := isotropic(t, 1e6, 0.25).Stress(&strain)
		return Density(&stress, &strain)
	}()
	for cellType, count := range map[mesh.CellType]int{
		mesh.Triangle: 3, mesh.Quad: 4, mesh.QuadraticTriangle: 6, mesh.QuadraticQuad: 8, mesh.BiquadraticQuad: 9,
	} {
		m := distorted(t, cellType, count, random, func(x, y, _ float64) Vector { return Vector{1e-3 * (x + y/2), 1e-3 * (y + x/2)} })
		for idealisation, want := range map[Idealisation]float64{PlaneStress: 1.5333333333333334, PlaneStrain: planeStrain} {
			total := tally(t, m, Options{Idealisation: idealisation, Thickness: 0.001, Materials: []Material{material}}).Total
			if !within(float64(total.MaxDensity), want, 1e-9) || !within(float64(total.Energy), want*float64(total.Volume), 1e-9) {
				t.Errorf("%v, %s: density %.12g, want %.12g", cellType, idealisation, total.MaxDensity, want)
			}
		}
	}
}

// T-09 (derived): u_r = 1e-4 r about either axis; half of the density is the hoop's.
func TestRingFromDisplacement(t *testing.T) {
	points := [][3]float64{{10, 0, 0}, {20, 0, 0}, {21, 5, 0}, {10, 5, 0}}
	for _, axisX := range []bool{false, true} {
		piece := memoryPiece{cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}}
		u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 2}
		for _, p := range points {
			d := []float64{1e-4 * p[0], 0}
			if axisX {
				p[0], p[1] = p[1], p[0]
				d[0], d[1] = d[1], d[0]
			}
			piece.points = append(piece.points, p)
			u.values = append(u.values, d...)
		}
		piece.arrays = []memoryArray{u}
		total := tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, Options{Idealisation: Axisymmetric, AxisX: axisX, Materials: []Material{steel()}}).Total
		if !within(float64(total.MaxDensity), 0.0040384615, 1e-7) || !within(float64(total.Energy/total.Volume), 0.0040384615, 1e-7) {
			t.Errorf("axis x %v: density %.9g, want 0.0040384615", axisX, total.MaxDensity)
		}
	}
}

// T-10, T-11 (derived) from displacement: the thermal strain is subtracted at the
// points of the rule, from an array on points or from the temperature.
func TestThermalStrainFromDisplacement(t *testing.T) {
	heated := steel()
	heated.ThermalExpansion, heated.ReferenceTemperature = 1.2e-5, 20
	random := rand.New(rand.NewPCG(5, 6))
	for want, stretch := range map[float64]float64{1.134: 0, 0: 1.2e-3} {
		for _, extra := range []memoryArray{
			pointArray("temperature", uniform(8, 120)...), cellArray("temperature", []float64{120}),
			pointArray("thermal strain", uniform(8, 1.2e-3, 1.2e-3, 1.2e-3, 0, 0, 0)...),
		} {
			m := distorted(t, mesh.Hexahedron, 8, random, func(x, y, z float64) Vector { return Vector{stretch * x, stretch * y, stretch * z} })
			m.pieces[0].arrays = append(m.pieces[0].arrays, extra)
			if got := float64(tally(t, m, Options{Materials: []Material{heated}}).Total.MaxDensity); math.Abs(got-want) > 1e-12 {
				t.Errorf("stretch %g by %s on %ss: density %.12g, want %g", stretch, extra.name, extra.on, got, want)
			}
		}
	}
}

func TestDisplacementThatCannotBeUsed(t *testing.T) {
	points, cell := brick(1, 1, 1)
	piece := func(arrays ...memoryArray) *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: arrays}}}
	}
	for want, err := range map[string]error{
		"no displacement on points":        tallyError(t, piece(cellArray("u", []float64{1, 2, 3})), Options{From: FromDisplacement}),
		"is no vector on points":           tallyError(t, piece(cellArray("u", []float64{1, 2, 3})), Options{From: FromDisplacement, Fields: Fields{Displacement: Field{Arrays: []string{"u"}}}}),
		"needs a material":                 tallyError(t, piece(pointArray("u", uniform(8, 1, 2, 3)...)), Options{From: FromDisplacement}),
		`no array "v"`:                     tallyError(t, piece(pointArray("u", uniform(8, 1, 2, 3)...)), Options{From: FromDisplacement, Fields: Fields{Displacement: Field{Arrays: []string{"v"}}}}),
		"the displacement could be any of": tallyError(t, piece(pointArray("u", uniform(8, 1, 2, 3)...), pointArray("disp", uniform(8, 1, 2, 3)...)), Options{From: FromDisplacement}),
	} {
		if !strings.Contains(err.Error(), want) {
			t.Errorf("error %v, want one with %q", err, want)
		}
	}
}

// A displacement that is stored component by component is the same displacement; in a
// plane two are enough.
func TestDisplacementByComponents(t *testing.T) {
	random := rand.New(rand.NewPCG(7, 8))
	for cellType, options := range map[mesh.CellType]Options{
		mesh.Hexahedron: {Materials: []Material{steel()}},
		mesh.Quad:       {Idealisation: PlaneStrain, Materials: []Material{steel()}},
	} {
		count := map[mesh.CellType]int{mesh.Hexahedron: 8, mesh.Quad: 4}[cellType]
		m := distorted(t, cellType, count, random, func(x, y, z float64) Vector {
			return Vector{1e-3 * (x + 2*y), 1e-3 * (y*x - z), 1e-3 * float64(cellType.Dimension()-2) * (3*z - y)}
		})
		want := tally(t, m, options).Total.Energy
		piece := &m.pieces[0]
		u := piece.arrays[0].values
		piece.arrays = nil
		names := []string{"move x", "move y", "move z"}[:cellType.Dimension()]
		for axis, name := range names {
			one := memoryArray{name: name, on: mesh.OnPoint, components: 1}
			for i := range count {
				one.values = append(one.values, u[3*i+axis])
			}
			piece.arrays = append(piece.arrays, one)
		}
		options.Fields.Displacement.Arrays = names
		ledger := tally(t, m, options)
		if ledger.Total.Energy != want || want == 0 || ledger.Fields.Displacement.Array != strings.Join(names, " ") {
			t.Errorf("%v: energy %v by %+v, want %v", cellType, ledger.Total.Energy, ledger.Fields.Displacement, want)
		}
	}
}

// A displacement that the study names has to be one also where the energy does not need
// it: other things do.
func TestDisplacementIsChecked(t *testing.T) {
	options := solidOptions(mesh.OnCell, steel())
	options.Fields.Displacement.Arrays = []string{"strain"}
	if err := tallyError(t, pulledBar("f", Vector{}, Vector{}), options); !strings.Contains(err.Error(), `array "strain" (6 on cells) is no vector on points`) {
		t.Error(err)
	}
}
