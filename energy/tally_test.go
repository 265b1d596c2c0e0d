package energy

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// tally accounts for a mesh in memory.
func tally(t testing.TB, m *memoryMesh, options Options) *Ledger {
	t.Helper()
	ledger, err := Tally(context.Background(), m.model(), &options, nil)
	if err != nil {
		t.Fatal(err)
	}
	return ledger
}

// tallyError returns the error of a tally that must fail.
func tallyError(t testing.TB, m *memoryMesh, options Options) error {
	t.Helper()
	ledger, err := Tally(context.Background(), m.model(), &options, nil)
	if err == nil {
		t.Fatalf("no error; energy %v", ledger.Total.Energy)
	}
	return err
}

// cellArray and pointArray make arrays of tuples.
func cellArray(name string, tuples ...[]float64) memoryArray {
	return memoryArray{name: name, on: mesh.OnCell, components: len(tuples[0]), values: slices.Concat(tuples...)}
}

func pointArray(name string, tuples ...[]float64) memoryArray {
	array := cellArray(name, tuples...)
	array.on = mesh.OnPoint
	return array
}

func labels1(name string, values ...float64) memoryArray {
	return memoryArray{name: name, on: mesh.OnCell, components: 1, isInteger: true, values: values}
}

// steel is a material with a limit and its source, so that it raises no note.
func steel() Material {
	m := NewMaterial("steel")
	m.YoungsModulus, m.PoissonsRatio, m.ProportionalLimit, m.Source = 210000, 0.3, 250, "invented"
	return m
}

func aluminium() Material {
	m := NewMaterial("aluminium")
	m.YoungsModulus, m.PoissonsRatio, m.ProportionalLimit, m.Source = 70000, 0.33, 150, "invented"
	return m
}

// stated describes a tensor field fully, so that no convention is left to a default.
func stated(array string, on mesh.Location, order string) Field {
	parsed, err := mesh.ParseOrder(order, false)
	if err != nil {
		panic(err)
	}
	return Field{Arrays: []string{array}, On: on, Order: parsed, Shear: "tensor"}
}

const sixOrder = "xx yy zz xy yz xz"

// solidOptions are those of a solid with stated stress and strain on cells or points.
func solidOptions(on mesh.Location, materials ...Material) Options {
	return Options{
		Length: "mm", Stress: "MPa", Idealisation: Solid, Materials: materials,
		Fields: Fields{Stress: stated("stress", on, sixOrder), Strain: stated("strain", on, sixOrder)},
	}
}

// brick is one hexahedron with the given edge lengths.
func brick(x, y, z float64) ([][3]float64, memoryCell) {
	points := [][3]float64{{0, 0, 0}, {x, 0, 0}, {x, y, 0}, {0, y, 0}, {0, 0, z}, {x, 0, z}, {x, y, z}, {0, y, z}}
	return points, memoryCell{mesh.Hexahedron, []int32{0, 1, 2, 3, 4, 5, 6, 7}}
}

// row is a row of unit cubes along x.
func row(count int) ([][3]float64, []memoryCell) {
	var points [][3]float64
	for i := range count + 1 {
		x := float64(i)
		points = append(points, [3]float64{x, 0, 0}, [3]float64{x, 1, 0}, [3]float64{x, 1, 1}, [3]float64{x, 0, 1})
	}
	var cells []memoryCell
	for i := range int32(count) {
		a, b := 4*i, 4*i+4
		cells = append(cells, memoryCell{mesh.Hexahedron, []int32{a, b, b + 1, a + 1, a + 3, b + 3, b + 2, a + 2}})
	}
	return points, cells
}

// S-01 (Timoshenko, Strength of Materials, from memory): a bar under P stores
// P²L/2EA. Also C-05 and C-07: two loads, and a load scaled by 1.2.
func TestBar(t *testing.T) {
	bar := func(force float64) *Ledger {
		points, cell := brick(500, 20, 10)
		stress := []float64{force / 200, 0, 0, 0, 0, 0}
		strain := []float64{stress[0] / 210000, -0.3 * stress[0] / 210000, -0.3 * stress[0] / 210000, 0, 0, 0}
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", stress), cellArray("strain", strain)}}}}
		return tally(t, m, solidOptions(mesh.OnCell, steel()))
	}
	ledger := bar(10000)
	if got := float64(ledger.Total.Energy); !within(got, 595.238095, 1e-9) {
		t.Errorf("S-01: energy %.9g, want 595.238095", got)
	}
	if got := float64(ledger.Total.Volume); got != 100000 {
		t.Errorf("volume %g, want 100000", got)
	}
	if got := float64(ledger.Total.EnergyDistortional / ledger.Total.Energy); !within(got, 2*1.3/3, 1e-12) {
		t.Errorf("distortional share %g, want 2(1+ν)/3 = %g", got, 2*1.3/3)
	}
	if got := float64(bar(4000).Total.Energy); !within(got, 95.238095, 1e-8) {
		t.Errorf("C-05: energy %.9g, want 95.238095", got)
	}
	if got := float64(bar(14000).Total.Energy); !within(got, 1166.666667, 1e-9) {
		t.Errorf("C-05: energy of both loads %.10g, want 1166.666667", got)
	}
	if got := float64(bar(12000).Total.Energy); !within(got, 595.238095*1.44, 1e-9) {
		t.Errorf("C-07: energy %.9g, want 1.44 times 595.238095", got)
	}
}

// T-02 (derived) as a cell of volume 1: every component and both conventions.
func TestOneCellInEveryConvention(t *testing.T) {
	s, e := stateT02, strainT2
	points, cell := brick(1, 1, 1)
	for _, c := range []struct {
		name, order, shear string
		stress, strain     []float64
	}{
		{"tensor shear", sixOrder, "tensor", s[:], e[:]},
		{"engineering shear", sixOrder, "engineering", s[:], []float64{e[0], e[1], e[2], 2 * e[3], 2 * e[4], 2 * e[5]}},
		{"Voigt", "xx yy zz yz xz xy", "tensor", []float64{s[0], s[1], s[2], s[4], s[5], s[3]}, []float64{e[0], e[1], e[2], e[4], e[5], e[3]}},
		{"nine, T-16", "xx xy xz yx yy yz zx zy zz", "tensor",
			[]float64{s[0], s[3], s[5], s[3], s[1], s[4], s[5], s[4], s[2]}, []float64{e[0], e[3], e[5], e[3], e[1], e[4], e[5], e[4], e[2]}},
	} {
		options := solidOptions(mesh.OnCell, aluminium())
		options.Fields.Stress = stated("stress", mesh.OnCell, c.order)
		options.Fields.Strain = stated("strain", mesh.OnCell, c.order)
		options.Fields.Strain.Shear = c.shear
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", c.stress), cellArray("strain", c.strain)}}}}
		for _, from := range []EnergySource{FromStressStrain, FromStress, FromStrain} {
			options.From = from
			total := tally(t, m, options).Total
			if !within(float64(total.Energy), 0.27567857, 1e-7) || !within(float64(total.EnergyVolumetric), 0.0080952381, 1e-7) ||
				!within(float64(total.EnergyDistortional), 0.26758333, 1e-7) || !within(float64(total.MaxEquivalentStress), 205.548048, 1e-8) {
				t.Errorf("%s, from %s: energy %.9g = %.9g + %.9g, von Mises %.9g", c.name, from,
					total.Energy, total.EnergyVolumetric, total.EnergyDistortional, total.MaxEquivalentStress)
			}
		}
	}
}

// The sign of stress may be that of soil mechanics: compression positive.
func TestCompressionPositive(t *testing.T) {
	points, cell := brick(1, 1, 1)
	minus := slices.Clone(stateT02[:])
	for i := range minus {
		minus[i] = -minus[i]
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", minus), cellArray("strain", strainT2[:])}}}}
	options := solidOptions(mesh.OnCell, aluminium())
	options.Fields.Stress.Compression = true
	ledger := tally(t, m, options)
	if got := float64(ledger.Total.Energy); !within(got, 0.27567857, 1e-7) {
		t.Errorf("energy %.9g, want 0.27567857", got)
	}
	if ledger.Fields.Stress.Sign != "compression" {
		t.Errorf("sign %q", ledger.Fields.Stress.Sign)
	}
	options.Fields.Stress.Compression = false
	if ledger := tally(t, m, options); !hasFinding(ledger, "negative-density") {
		t.Error("a negative density was not reported")
	}
}

func hasFinding(ledger *Ledger, code string) bool {
	return slices.ContainsFunc(ledger.Findings, func(f Finding) bool { return f.Code == code })
}

// near compares places up to the rounding of an integral.
func near(got, want Vector) bool {
	for i := range got {
		if math.Abs(got[i]-want[i]) > 1e-14*math.Max(1, math.Abs(want[i])) {
			return false
		}
	}
	return true
}

// uniform repeats a tuple.
func uniform(count int, tuple ...float64) [][]float64 {
	list := make([][]float64, count)
	for i := range list {
		list[i] = tuple
	}
	return list
}

// The product of two interpolated fields, Q-01, Q-03, Q-06, Q-07, Q-07b (exact
// rationals; derived): σ_xx = f and ε_xx = g at the nodes, all else zero.
func TestPointDataOnSolidCells(t *testing.T) {
	for _, c := range []struct {
		id     string
		cell   mesh.CellType
		points [][3]float64
		f, g   []float64
		scale  float64
		volume float64
		energy float64
	}{
		{"Q-01", mesh.Tetrahedron, [][3]float64{{0, 0, 0}, {3, 0, 0}, {0, 2.5, 0}, {0, 0, 2}}, []float64{10, 20, 30, 60}, []float64{1, 4, 2, 3}, 1e-3, 2.5, 0.095625},
		{"Q-03", mesh.Hexahedron, [][3]float64{{0, 0, 0}, {2, 0, 0}, {2, 1.5, 0}, {0, 1, 0}, {0, 0, 1}, {2, 0, 1.2}, {2.5, 1.5, 2}, {0, 1.2, 1}},
			[]float64{100, 120, 90, 80, 60, 150, 200, 110}, []float64{5, 6, 4.5, 4, 3, 7, 11, 5.5}, 1e-4, 3.5458333333333333, 0.129113575521},
		{"Q-06", mesh.Wedge, [][3]float64{{0, 0, 0}, {2, 0, 0}, {0, 2, 0}, {0, 0, 1.5}, {1.6, 0, 1}, {.2, 2.2, 2}},
			[]float64{50, 70, 90, 40, 60, 120}, []float64{2, 3, 4, 2, 3, 6}, 1e-4, 2.7966666666666667, 0.035659888889},
		{"Q-07", mesh.Pyramid, [][3]float64{{0, 0, 0}, {2, 0, 0}, {2.2, 1.8, 0}, {0, 2, 0}, {.8, .9, 1.5}},
			[]float64{30, 50, 80, 40, 100}, []float64{1, 2, 3, 2, 5}, 1e-4, 2, 0.01798375},
		{"Q-07b", mesh.Pyramid, [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}, {.5, .5, 1}},
			[]float64{10, 15, 18, 13, 16}, []float64{1, 1, 2, 2, 3.5}, 1e-3, 1. / 3, 293. / 60000},
	} {
		stress, strain := make([][]float64, len(c.f)), make([][]float64, len(c.f))
		var nodes []int32
		for i := range c.f {
			stress[i], strain[i] = []float64{c.f[i], 0, 0, 0, 0, 0}, []float64{c.g[i] * c.scale, 0, 0, 0, 0, 0}
			nodes = append(nodes, int32(i))
		}
		m := &memoryMesh{pieces: []memoryPiece{{points: c.points, cells: []memoryCell{{c.cell, nodes}}, arrays: []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...)}}}}
		total := tally(t, m, solidOptions(mesh.OnPoint)).Total
		if !within(float64(total.Volume), c.volume, 1e-12) || !within(float64(total.Energy), c.energy, 1e-10) {
			t.Errorf("%s: volume %.12g, want %.12g; energy %.12g, want %.12g", c.id, total.Volume, c.volume, total.Energy, c.energy)
		}
		if total.EnergyVolumetric.Exists() || total.MaxUtilisation.Exists() {
			t.Errorf("%s: a split or a utilisation without a material", c.id)
		}
		largest, at := 0.0, 0
		for i := range c.f {
			if w := c.f[i] * c.g[i] * c.scale / 2; w > largest {
				largest, at = w, i
			}
		}
		if !within(float64(total.PeakDensity), largest, 1e-12) || *total.PeakDensityAt != Vector(c.points[at]) {
			t.Errorf("%s: peak density %g at %v, want %g at %v", c.id, total.PeakDensity, *total.PeakDensityAt, largest, c.points[at])
		}
		if !within(float64(total.MaxDensity), c.energy/c.volume, 1e-10) {
			t.Errorf("%s: max density %g, want energy over volume", c.id, total.MaxDensity)
		}
	}
}

// Q-02 and Q-04 (derived) on plane cells of thickness 3, in both plane idealisations.
func TestPointDataOnPlaneCells(t *testing.T) {
	for _, c := range []struct {
		id     string
		cell   mesh.CellType
		points [][3]float64
		f, g   []float64
		area   float64
		energy float64 // ∫ ½ f g dA
	}{
		{"Q-02", mesh.Triangle, [][3]float64{{0, 0, 7}, {4, 0, 7}, {1, 3, 7}}, []float64{1, 2, 3}, []float64{2, 0, 1}, 6, 11.5 / 2},
		{"Q-04", mesh.Quad, [][3]float64{{0, 0, 0}, {4, 0, 0}, {3, 2, 0}, {0, 3, 0}}, []float64{10, 20, 40, 15}, []float64{1e-3, 2e-3, 3e-3, 2e-3}, 8.5, 0.175729166667},
	} {
		stress, strain := make([][]float64, len(c.f)), make([][]float64, len(c.f))
		var nodes []int32
		for i := range c.f {
			stress[i], strain[i] = []float64{0, c.f[i], 0, 0}, []float64{0, c.g[i], 0, 0}
			nodes = append(nodes, int32(i))
		}
		for _, idealisation := range []Idealisation{PlaneStress, PlaneStrain} {
			for name, turned := range map[string]bool{"as numbered": false, "clockwise": true} {
				cell := memoryCell{c.cell, slices.Clone(nodes)}
				if turned {
					slices.Reverse(cell.nodes[1:])
				}
				m := &memoryMesh{pieces: []memoryPiece{{points: c.points, cells: []memoryCell{cell}, arrays: []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...)}}}}
				ledger := tally(t, m, Options{
					Length: "mm", Stress: "MPa", Idealisation: idealisation, Thickness: 3,
					Fields: Fields{Stress: stated("stress", mesh.OnPoint, "xx yy zz xy"), Strain: stated("strain", mesh.OnPoint, "xx yy zz xy")},
				})
				if !within(float64(ledger.Total.Volume), 3*c.area, 1e-12) || !within(float64(ledger.Total.Energy), 3*c.energy, 1e-10) {
					t.Errorf("%s, %s, %s: volume %g, want %g; energy %.12g, want %.12g", c.id, idealisation, name, ledger.Total.Volume, 3*c.area, ledger.Total.Energy, 3*c.energy)
				}
				if turned != hasFinding(ledger, "mirrored-cells") {
					t.Errorf("%s, %s: finding mirrored-cells %v", c.id, name, !turned)
				}
			}
		}
	}
}

// T-09 (derived): u_r = 1e-4 r in a ring r 10..20 of height 5. The hoop term carries
// half of the density.
func TestAxisymmetricRing(t *testing.T) {
	points := [][3]float64{{10, 0, 0}, {20, 0, 0}, {20, 5, 0}, {10, 5, 0}}
	cells := []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}
	law := isotropic(t, 210000, 0.3)
	strain := mesh.SymmetricTensor{1e-4, 0, 1e-4}
	stress := law.Stress(&strain)
	tuples := func(t mesh.SymmetricTensor) []float64 { return []float64{t[0], t[1], t[2], t[3]} }
	for _, on := range []mesh.Location{mesh.OnCell, mesh.OnPoint} {
		count := 1
		if on == mesh.OnPoint {
			count = 4
		}
		piece := memoryPiece{points: points, cells: cells}
		for name, tuple := range map[string][]float64{"stress": tuples(stress), "strain": tuples(strain)} {
			array := cellArray(name, uniform(count, tuple...)...)
			array.on = on
			piece.arrays = append(piece.arrays, array)
		}
		options := Options{
			Length: "mm", Stress: "MPa", Idealisation: Axisymmetric, Materials: []Material{steel()},
			Fields: Fields{Stress: stated("stress", on, "rr zz tt rz"), Strain: stated("strain", on, "rr zz tt rz")},
		}
		total := tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, options).Total
		volume := math.Pi * (400 - 100) * 5
		if !within(float64(total.Volume), volume, 1e-12) {
			t.Errorf("on %ss: volume %.12g, want π(20² - 10²)5 = %.12g", on, total.Volume, volume)
		}
		if !within(float64(total.MaxDensity), 0.0040384615, 1e-7) || !within(float64(total.Energy), 0.004038461538461538*volume, 1e-10) {
			t.Errorf("on %ss: density %.9g, want 0.0040384615; energy %.9g", on, total.MaxDensity, total.Energy)
		}
		if at := *total.MaxDensityAt; !within(at[0], (8000-1000)*2/(3*300.), 1e-12) || !within(at[1], 2.5, 1e-14) {
			t.Errorf("on %ss: centroid %v, want the ring's: r = ⅔(r2³ - r1³)/(r2² - r1²)", on, at)
		}
		// w 0.1 everywhere: U 471.238898.
		if got := 0.1 * float64(total.Volume); !within(got, 471.238898, 1e-9) {
			t.Errorf("on %ss: 0.1 × volume %.9g, want 471.238898", on, got)
		}
		// The same ring about x.
		options.AxisX = true
		for i := range piece.points {
			piece.points = slices.Clone(piece.points)
			piece.points[i] = [3]float64{points[i][1], points[i][0], 0}
		}
		options.Fields.Stress.Order, options.Fields.Strain.Order = mesh.Order{"yy", "xx", "zz", "xy"}, mesh.Order{"yy", "xx", "zz", "xy"}
		if other := tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, options).Total; !within(float64(other.Energy), float64(total.Energy), 1e-12) {
			t.Errorf("on %ss: energy about x %.12g, about y %.12g", on, other.Energy, total.Energy)
		}
	}
}

// Field linear in r: ∫ ½ f g 2πr dA with f = g = r over r 1..2, height 1 is
// π/4 (2⁴ - 1⁴) (derived); the factor r raises the degree of the integrand.
func TestAxisymmetricProductIsExact(t *testing.T) {
	points := [][3]float64{{1, 0, 0}, {2, 0, 0}, {2, 1, 0}, {1, 1, 0}}
	tuples := [][]float64{{1, 0, 0, 0}, {2, 0, 0, 0}, {2, 0, 0, 0}, {1, 0, 0, 0}}
	for _, cells := range [][]memoryCell{
		{{mesh.Quad, []int32{0, 1, 2, 3}}},
		{{mesh.Triangle, []int32{0, 1, 2}}, {mesh.Triangle, []int32{0, 2, 3}}},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{pointArray("stress", tuples...), pointArray("strain", tuples...)}}}}
		got := tally(t, m, Options{Idealisation: Axisymmetric, Fields: Fields{Stress: stated("stress", mesh.OnPoint, "rr zz tt rz"), Strain: stated("strain", mesh.OnPoint, "rr zz tt rz")}}).Total.Energy
		if want := math.Pi / 4 * 15; !within(float64(got), want, 1e-13) {
			t.Errorf("%d cells: %.15g, want %.15g", len(cells), got, want)
		}
	}
}

// T-07, T-08 (derived): three components, the missing ones by the law; each source of
// energy gives the same, and so does the von Mises stress.
func TestMissingComponentsAreCompleted(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}}
	cells := []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}
	stress := []float64{100, -40, 30}
	for _, c := range []struct {
		id           string
		idealisation Idealisation
		strain       []float64
		density      float64
		state        mesh.SymmetricTensor
	}{
		{"T-07", PlaneStrain, []float64{5.076190476190476e-4, -3.590476190476190e-4, 3.714285714285714e-4 / 2}, 0.038133333, mesh.SymmetricTensor{100, -40, 18, 30}},
		{"T-08", PlaneStress, []float64{5.333333333333333e-4, -3.333333333333333e-4, 3.714285714285714e-4 / 2}, 0.038904762, mesh.SymmetricTensor{100, -40, 0, 30}},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress), cellArray("strain", c.strain)}}}}
		for _, from := range []EnergySource{FromStressStrain, FromStress, FromStrain} {
			options := Options{
				Idealisation: c.idealisation, Thickness: 1, Materials: []Material{steel()}, From: from,
				Fields: Fields{Stress: stated("stress", mesh.OnCell, "xx yy xy"), Strain: stated("strain", mesh.OnCell, "xx yy xy")},
			}
			total := tally(t, m, options).Total
			if !within(float64(total.Energy), c.density, 1e-7) {
				t.Errorf("%s from %s: density %.9g, want %.9g", c.id, from, total.Energy, c.density)
			}
			if want := VonMisesStress(&c.state); !within(float64(total.MaxEquivalentStress), want, 1e-12) {
				t.Errorf("%s from %s: von Mises %.12g, want %.12g", c.id, from, total.MaxEquivalentStress, want)
			}
			trace := c.state.Trace()
			if want := 0.4 * trace * trace / (6 * 210000); !within(float64(total.EnergyVolumetric), want, 1e-9) {
				t.Errorf("%s from %s: volumetric %.9g, want (1-2ν)(tr σ)²/6E = %.9g", c.id, from, total.EnergyVolumetric, want)
			}
		}
	}
}

// Thermal and plastic strain are each subtracted once: T-10 (constrained in all
// directions), T-10b (in two, in one), T-11 (free); derived.
func TestElasticStrain(t *testing.T) {
	const rise = 1.2e-3 // α ΔT
	heated := steel()
	heated.ThermalExpansion, heated.ReferenceTemperature = 1.2e-5, 20
	points, cell := brick(1, 1, 1)
	for _, c := range []struct {
		name          string
		stress, total []float64
		w             float64
	}{
		{"T-10", []float64{-630, -630, -630, 0, 0, 0}, []float64{0, 0, 0, 0, 0, 0}, 1.134},
		{"T-10b plate", []float64{-360, -360, 0, 0, 0, 0}, []float64{0, 0, rise + 0.6*360/210000, 0, 0, 0}, 0.432},
		{"T-10b bar", []float64{-252, 0, 0, 0, 0, 0}, []float64{0, rise + 0.3*252/210000, rise + 0.3*252/210000, 0, 0, 0}, 0.1512},
		{"T-11", []float64{0, 0, 0, 0, 0, 0}, []float64{rise, rise, rise, 0, 0, 0}, 0},
	} {
		arrays := []memoryArray{cellArray("stress", c.stress), cellArray("strain", c.total)}
		thermal := cellArray("thermal strain", []float64{rise, rise, rise, 0, 0, 0})
		temperature := cellArray("temperature", []float64{120})
		nodal := pointArray("temperature", uniform(8, 120)...)
		for name, extra := range map[string][]memoryArray{
			"thermal strain": {thermal}, "temperature": {temperature}, "nodal temperature": {nodal}, "both, the array wins": {thermal, cellArray("temperature", []float64{999})},
		} {
			m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: append(slices.Clone(arrays), extra...)}}}
			ledger := tally(t, m, solidOptions(mesh.OnCell, heated))
			if got := float64(ledger.Total.Energy); math.Abs(got-c.w) > 1e-12 {
				t.Errorf("%s by %s: energy %.12g, want %g", c.name, name, got, c.w)
			}
			if ledger.Fields.Strain.Kind != "total" {
				t.Errorf("%s: kind %q", c.name, ledger.Fields.Strain.Kind)
			}
		}
		// An elastic strain is taken as it is, whatever else is in the file.
		law := isotropic(t, 210000, 0.3)
		state := mesh.SymmetricTensor(c.stress)
		elastic := law.Strain(&state)
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", c.stress), cellArray("strain", elastic[:]), thermal}}}}
		options := solidOptions(mesh.OnCell, heated)
		options.Fields.Strain.Kind = "elastic"
		if got := float64(tally(t, m, options).Total.Energy); math.Abs(got-c.w) > 1e-12 {
			t.Errorf("%s, elastic: energy %.12g, want %g", c.name, got, c.w)
		}
	}
	heated.ReferenceTemperature = math.NaN()
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", make([]float64, 6)), cellArray("strain", make([]float64, 6)), cellArray("temperature", []float64{120})}}}}
	var study *StudyError
	stated := solidOptions(mesh.OnCell, heated)
	stated.Fields.Temperature.Arrays = []string{"temperature"}
	if err := tallyError(t, m, stated); !errors.As(err, &study) || !strings.Contains(err.Error(), "reference_temperature") {
		t.Errorf("without a reference temperature: %v", err)
	}
	// Not named, the temperature is left alone, and the offset that it would explain is
	// found from the numbers: T-10b plate.
	m.pieces[0].arrays[0] = cellArray("stress", []float64{-360, -360, 0, 0, 0, 0})
	m.pieces[0].arrays[1] = cellArray("strain", []float64{0, 0, rise + 0.6*360/210000, 0, 0, 0})
	ledger := tally(t, m, solidOptions(mesh.OnCell, heated))
	if !hasFinding(ledger, "total-strain-used") || !within(float64(ledger.Total.Energy), 0.432, 1e-12) {
		t.Errorf("energy %.12g, want 0.432; %+v", ledger.Total.Energy, ledger.Findings)
	}
}

// P-06 (derived): a perfectly plastic bar stores σ²/2E, not ½ σ ε_total; and its cell
// counts as yielded.
func TestPlasticStrainIsSubtracted(t *testing.T) {
	points, cell := brick(1, 1, 1)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", []float64{250, 0, 0, 0, 0, 0}),
		cellArray("strain", []float64{0.005, -0.00225, -0.00225, 0, 0, 0}), // ν 0.3 elastic, ½ plastic
		cellArray("plastic_strain", []float64{0.00375, -0.001875, -0.001875, 0, 0, 0}),
	}}}}
	material := steel()
	material.YoungsModulus = 200000
	options := solidOptions(mesh.OnCell, material)
	options.Requirements = []Requirement{{Name: "within the limit", Quantity: "max_utilisation", AtMost: 1.5, AtLeast: None}}
	ledger := tally(t, m, options)
	if got := float64(ledger.Total.Energy); !within(got, 0.15625, 1e-12) {
		t.Errorf("stored energy %.9g, want 0.15625 (½ σ ε_total would be 0.625)", got)
	}
	if ledger.Total.CellsYielded != 1 || !hasFinding(ledger, "plastic-strain-present") {
		t.Errorf("yielded cells %v", ledger.Total.CellsYielded)
	}
	if r := ledger.Requirements[0]; r.Met || r.Value != 1 || !strings.Contains(string(r.Why), "plastic strain") {
		t.Errorf("a requirement on the utilisation is met in spite of yielding: %+v", r)
	}
	options.Acceptances = []Acceptance{{"plastic-strain-present", "known"}}
	if ledger := tally(t, m, options); !ledger.Requirements[0].Met {
		t.Errorf("not met although accepted: %+v", ledger.Requirements[0])
	}
}

// D-08 (derived): a bar of two halves in series; each region has its own energy.
func TestRegionsByLabel(t *testing.T) {
	points, cells := row(2)
	strain := func(e, nu float64) []float64 { return []float64{70 / e, -nu * 70 / e, -nu * 70 / e, 0, 0, 0} }
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(2, 70, 0, 0, 0, 0, 0)...), cellArray("strain", strain(210000, 0.3), strain(70000, 0.33)), labels1("part", 7, 3)}}}}
	options := solidOptions(mesh.OnCell, steel(), aluminium())
	options.Regions = []Region{
		{Name: "stiff", Array: "part", Values: []float64{7}, Material: "steel"},
		{Name: "soft", Array: "part", Values: []float64{3, 4}, Material: "aluminium"},
	}
	ledger := tally(t, m, options)
	for i, want := range []float64{0.011666666666666667, 0.035} {
		region := ledger.Regions[i]
		if !within(float64(region.Energy), want, 1e-12) || region.Cells != 1 || !within(float64(region.EnergyShare), want/0.04666666666666667, 1e-12) {
			t.Errorf("region %s: %+v, want energy %g", region.Name, region.Account, want)
		}
	}
	if got := ledger.Total; !within(float64(got.Energy), 0.046666666666666667, 1e-12) || got.Cells != 2 || got.EnergyShare != 1 {
		t.Errorf("total %+v", got)
	}
	if len(ledger.Findings) != 1 || ledger.Findings[0].Code != "one-value-per-cell" {
		t.Errorf("findings %+v", ledger.Findings)
	}
}

func TestRegionSelection(t *testing.T) {
	points, cells := row(6)
	stress := cellArray("stress", uniform(6, 1, 0, 0, 0, 0, 0)...)
	strain := cellArray("strain", uniform(6, 2, 0, 0, 0, 0, 0)...)
	piece := memoryPiece{points: points, cells: cells, arrays: []memoryArray{stress, strain, labels1("part", 1, 1, 2, 2, 3, 3)}}
	two := memoryPiece{points: points, cells: cells[:2], arrays: []memoryArray{
		cellArray("stress", uniform(2, 1, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(2, 2, 0, 0, 0, 0, 0)...), labels1("part", 1, 3)}, block: 1}
	m := &memoryMesh{pieces: []memoryPiece{piece, two}, blocks: []string{"hull/web", "hull/flange"}}
	box := func(low, high float64) *Box { return &Box{Vector{low, 0, 0}, Vector{high, 1, 1}} }
	for _, c := range []struct {
		name     string
		regions  []Region
		want     string // cells by region
		none     int64
		overlaps bool
	}{
		{"by value", []Region{{Name: "a", Array: "part", Values: []float64{1, 3}}, {Name: "b", Array: "part", Values: []float64{2}}}, "6 2", 0, false},
		{"the rest stands first", []Region{{Name: "r", Rest: true}, {Name: "b", Array: "part", Values: []float64{2}}}, "6 2", 0, false},
		{"cells of no region", []Region{{Name: "b", Array: "part", Values: []float64{2}}}, "2", 6, false},
		{"the first claim wins", []Region{{Name: "a", Array: "part", Values: []float64{1, 2}}, {Name: "b", Array: "part", Values: []float64{2, 3}}}, "5 3", 0, true},
		{"block", []Region{{Name: "a", Block: "hull/web"}, {Name: "r", Rest: true}}, "6 2", 0, false},
		{"block pattern", []Region{{Name: "a", Block: "hull/*"}}, "8", 0, false},
		{"a star stays in its element", []Region{{Name: "a", Block: "*", Optional: true}, {Name: "r", Rest: true}}, "0 8", 0, false},
		{"box, bounds included", []Region{{Name: "a", Box: box(0.5, 2.5)}, {Name: "r", Rest: true}}, "5 3", 0, false},
		{"box and label", []Region{{Name: "a", Box: box(0, 2)}, {Name: "b", Array: "part", Values: []float64{1}}, {Name: "r", Rest: true}}, "4 0 4", 0, true},
	} {
		for i := range c.regions {
			c.regions[i].Optional = true
		}
		options := solidOptions(mesh.OnCell)
		options.Regions = c.regions
		ledger := tally(t, m, options)
		var got []string
		for _, region := range ledger.Regions {
			got = append(got, Number(region.Cells).String())
		}
		if strings.Join(got, " ") != c.want || hasFinding(ledger, "regions-overlap") != c.overlaps || hasFinding(ledger, "no-region") != (c.none > 0) {
			t.Errorf("%s: cells %v, want %s; findings %+v", c.name, got, c.want, ledger.Findings)
		}
		if c.none > 0 && (len(ledger.Excluded) != 1 || ledger.Excluded[0] != Exclusion{"no-region", 3, c.none, Number(c.none)}) {
			t.Errorf("%s: excluded %+v", c.name, ledger.Excluded)
		}
		if want := 8 - c.none; ledger.Total.Cells != want || float64(ledger.Total.Energy) != float64(want) {
			t.Errorf("%s: total %d cells, energy %v, want %d of each", c.name, ledger.Total.Cells, ledger.Total.Energy, want)
		}
	}
}

func TestRegionsWithoutAStudy(t *testing.T) {
	points, cells := row(4)
	arrays := func(extra ...memoryArray) []memoryArray {
		return append([]memoryArray{cellArray("stress", uniform(4, 1, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(4, 2, 0, 0, 0, 0, 0)...)}, extra...)
	}
	names := func(m *memoryMesh) string {
		ledger := tally(t, m, solidOptions(mesh.OnCell, steel()))
		var list []string
		for _, region := range ledger.Regions {
			list = append(list, region.Name)
		}
		return strings.Join(list, ", ")
	}
	one := func(extra ...memoryArray) *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: arrays(extra...)}}}
	}
	if got := names(one()); got != "all" {
		t.Errorf("nothing to go by: regions %s", got)
	}
	if got := names(one(labels1("PartNo", 5, -2, 5, 9))); got != "PartNo -2, PartNo 5, PartNo 9" {
		t.Errorf("by part: regions %s", got)
	}
	if got := names(one(labels1("part", 1, 2, 3, 4), labels1("mat_id", 1, 1, 2, 2))); got != "mat_id 1, mat_id 2" {
		t.Errorf("material comes first: regions %s", got)
	}
	if got := names(one(labels1("partition", 1, 2, 3, 4))); got != "all" {
		t.Errorf("a partition is no part: regions %s", got)
	}
	if got := names(one(cellArray("part", []float64{1}, []float64{2}, []float64{1}, []float64{1}))); got != "all" {
		t.Errorf("an array of floats: regions %s", got)
	}
	blocks := one()
	blocks.pieces = append(blocks.pieces, memoryPiece{points: points, cells: cells, arrays: arrays(), block: 1}, memoryPiece{block: 2})
	blocks.blocks = []string{"web", "flange", "empty"}
	if got := names(blocks); got != "web, flange" {
		t.Errorf("by block: regions %s", got)
	}
	var study *StudyError
	if err := tallyError(t, one(), solidOptions(mesh.OnCell, steel(), aluminium())); !errors.As(err, &study) {
		t.Errorf("two materials and no way to assign them: %v", err)
	}
}

// Every reason for which a cell is left out, and that the rest is computed.
func TestExcludedCells(t *testing.T) {
	points, cells := row(6)
	points = append(points, [3]float64{0, 5, 0})
	cells = append(cells,
		memoryCell{mesh.Line, []int32{0, 28}}, memoryCell{mesh.Quad, []int32{0, 1, 2, 3}}, memoryCell{mesh.Vertex, []int32{0}},
		memoryCell{mesh.Tetrahedron, []int32{0, 1, 2, 3}})
	stress, strain := uniform(10, 1, 0, 0, 0, 0, 0), uniform(10, 2, 0, 0, 0, 0, 0)
	stress[2] = []float64{1, 0, math.NaN(), 0, 0, 0}
	strain[3] = []float64{1, 0, 0, 0, 0, math.Inf(-1)}
	stress[4] = []float64{1e200, 0, 0, 0, 0, 0}
	strain[4] = []float64{1e200, 0, 0, 0, 0, 0}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...)},
		hidden: []uint8{mesh.DuplicateCell, mesh.HiddenCell, 0, 0, 0, 2 | 4 | 16, 0, 0, 0, 0}}}}
	ledger := tally(t, m, solidOptions(mesh.OnCell))
	want := []Exclusion{
		{"ghost", 3, 2, 2}, {"other-dimension", 0, 1, 0}, {"other-dimension", 1, 1, 5}, {"other-dimension", 2, 1, 1},
		{"degenerate", 3, 1, 0}, {"not-finite", 3, 3, 3},
	}
	for i, got := range ledger.Excluded {
		// Measures are integrals, rounded at the last digits.
		isNear := math.Abs(float64(got.Measure-want[i].Measure)) < 1e-14
		if got.Measure = want[i].Measure; len(ledger.Excluded) != len(want) || got != want[i] || !isNear {
			t.Errorf("excluded %+v, want %+v", ledger.Excluded, want)
			break
		}
	}
	if ledger.Total.Cells != 1 || ledger.Total.Energy != 1 {
		t.Errorf("total %d cells, energy %v, want 1 and 1", ledger.Total.Cells, ledger.Total.Energy)
	}
	for _, code := range []string{"ghost-cells", "not-finite", "degenerate-cells"} {
		if !hasFinding(ledger, code) {
			t.Errorf("no finding %s", code)
		}
	}
}

// D-11 (derived): Q-03 with nodes 1 and 2 exchanged on both faces is folded; a cell
// numbered inside out is only mirrored.
func TestMirroredAndTangledCells(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {2, 0, 0}, {2, 1.5, 0}, {0, 1, 0}, {0, 0, 1}, {2, 0, 1.2}, {2.5, 1.5, 2}, {0, 1.2, 1}}
	for _, c := range []struct {
		name   string
		nodes  []int32
		code   string
		volume float64
	}{
		{"as numbered", []int32{0, 1, 2, 3, 4, 5, 6, 7}, "", 3.5458333333333334},
		{"inside out", []int32{4, 5, 6, 7, 0, 1, 2, 3}, "mirrored-cells", 3.5458333333333334},
		{"folded", []int32{0, 2, 1, 3, 4, 6, 5, 7}, "tangled-cells", math.NaN()},
	} {
		for _, on := range []mesh.Location{mesh.OnCell, mesh.OnPoint} {
			count := 1
			if on == mesh.OnPoint {
				count = 8
			}
			stress, strain := cellArray("stress", uniform(count, 3, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(count, 2, 0, 0, 0, 0, 0)...)
			stress.on, strain.on = on, on
			m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{{mesh.Hexahedron, c.nodes}}, arrays: []memoryArray{stress, strain}}}}
			ledger := tally(t, m, solidOptions(on))
			if c.code != "" && !hasFinding(ledger, c.code) {
				t.Errorf("%s on %ss: no finding %s", c.name, on, c.code)
			}
			if hasFinding(ledger, "mirrored-cells") != (c.code == "mirrored-cells") || hasFinding(ledger, "tangled-cells") != (c.code == "tangled-cells") {
				t.Errorf("%s on %ss: findings %+v", c.name, on, ledger.Findings)
			}
			if !math.IsNaN(c.volume) && !within(float64(ledger.Total.Volume), c.volume, 1e-12) {
				t.Errorf("%s on %ss: volume %.12g, want %.12g", c.name, on, ledger.Total.Volume, c.volume)
			}
			if !within(float64(ledger.Total.Energy), 3*float64(ledger.Total.Volume), 1e-12) {
				t.Errorf("%s on %ss: energy %.12g of volume %.12g at density 3", c.name, on, ledger.Total.Energy, ledger.Total.Volume)
			}
		}
	}
}

// Cells past the limit: the count, the order of the list, and what they store.
func TestPastLimit(t *testing.T) {
	points, cells := row(5)
	stress := [][]float64{{200, 0, 0, 0, 0, 0}, {300, 0, 0, 0, 0, 0}, {-500, 0, 0, 0, 0, 0}, {300, 0, 0, 0, 0, 0}, {250, 0, 0, 0, 0, 0}}
	strain := make([][]float64, 5)
	law := isotropic(t, 210000, 0.3)
	for i := range stress {
		state := mesh.SymmetricTensor(stress[i])
		e := law.Strain(&state)
		strain[i] = e[:]
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...), labels1("element id", 11, 12, 13, 14, 15)}}}}
	options := solidOptions(mesh.OnCell, steel())
	options.Limit.List, options.ListAllPastLimit = 2, true
	options.Hotspots.Count, options.Hotspots.SingleCells = 3, true
	ledger := tally(t, m, options)
	total := ledger.Total
	if total.CellsPastLimit != 3 || total.VolumePastLimit != 3 || !within(float64(total.EnergyPastLimit), (2*300*300+500*500)/(2*210000.), 1e-12) {
		t.Errorf("past limit %v cells, volume %v, energy %v", total.CellsPastLimit, total.VolumePastLimit, total.EnergyPastLimit)
	}
	if total.MaxUtilisation != 2 || total.MaxUtilisationCell != 2 || !near(*total.MaxUtilisationAt, Vector{2.5, 0.5, 0.5}) {
		t.Errorf("max utilisation %v in cell %v at %v", total.MaxUtilisation, total.MaxUtilisationCell, total.MaxUtilisationAt)
	}
	order := func(list []RankedCell) (cells []int64) {
		for _, c := range list {
			cells = append(cells, c.Cell)
		}
		return cells
	}
	if got := order(ledger.PastLimit.Worst); !slices.Equal(got, []int64{2, 1}) {
		t.Errorf("worst cells %v, want 2 and then 1, the lower of two equal ones", got)
	}
	if got := order(ledger.AllPastLimit); !slices.Equal(got, []int64{2, 1, 3}) {
		t.Errorf("all past the limit %v, want 2 1 3", got)
	}
	if ledger.PastLimit.Worst[0].ElementID != 13 || ledger.PastLimit.Worst[0].Utilisation != 2 || ledger.PastLimit.Worst[0].EquivalentStress != 500 {
		t.Errorf("worst cell %+v", ledger.PastLimit.Worst[0])
	}
	for i, want := range []int64{2, 1, 3} {
		if got := ledger.Hotspots[i]; got.Cell != want || got.Rank != i+1 || got.PastLimit == nil || !*got.PastLimit || got.Prominence.Exists() {
			t.Errorf("hotspot %d: %+v, want cell %d", i+1, got, want)
		}
	}
	// A region without a limit takes the total's utilisation away, not the others'.
	options.Regions = []Region{{Name: "a", Box: &Box{Vector{0, 0, 0}, Vector{3, 1, 1}}, Material: "steel"}, {Name: "b", Rest: true, Material: "bare"}}
	options.Materials = append(options.Materials, NewMaterial("bare"))
	ledger = tally(t, m, options)
	if ledger.Total.CellsPastLimit.Exists() || ledger.Total.MaxUtilisation.Exists() || ledger.PastLimit.Cells.Exists() || ledger.Total.EnergyVolumetric.Exists() {
		t.Errorf("total in spite of a region without a limit: %+v", ledger.Total)
	}
	if ledger.Regions[0].CellsPastLimit != 2 || ledger.Regions[1].CellsPastLimit.Exists() || ledger.Total.VolumeWithoutLimit != 2 || ledger.Regions[0].VolumeWithoutLimit != 0 {
		t.Errorf("regions %+v", ledger.Regions)
	}
	if ledger.Hotspots[0].Cell != 2 || ledger.Hotspots[2].PastLimit != nil {
		t.Errorf("hotspots by density: %+v", ledger.Hotspots)
	}
}

// Whatever the number of workers and the length of chunks: the same bytes.
func TestLedgerDoesNotDependOnTheSchedule(t *testing.T) {
	points, cells := row(300)
	law := isotropic(t, 210000, 0.3)
	var stress, strain [][]float64
	var part []float64
	for i := range cells {
		s := mesh.SymmetricTensor{300 * math.Sin(float64(i%40)), 100 * math.Cos(float64(i)), float64(i % 7), 30, 1e-9 * float64(i), 1e6 / float64(1+i%11)}
		e := law.Strain(&s)
		stress, strain, part = append(stress, s[:]), append(strain, e[:]), append(part, float64(i/3%4))
	}
	piece := memoryPiece{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...), labels1("part", part...)}}
	m := &memoryMesh{pieces: []memoryPiece{piece, piece, piece}}
	var first []byte
	for _, workers := range []int{1, 2, 8} {
		for _, chunk := range []int{1, 7, 100, 8192} {
			options := solidOptions(mesh.OnCell, steel())
			options.Workers, options.ChunkCells, options.Hotspots.Count, options.Limit.List = workers, chunk, 17, 5
			data, err := json.Marshal(tally(t, m, options))
			if err != nil {
				t.Fatal(err)
			}
			if first == nil {
				first = data
			}
			if !bytes.Equal(first, data) {
				t.Fatalf("%d workers, chunks of %d: another ledger\n%s\n%s", workers, chunk, data, first)
			}
		}
	}
}

// Fields that are not named are found; where that is ambiguous or impossible, the
// error lists what there is.
func TestFindingFields(t *testing.T) {
	points, cell := brick(1, 1, 1)
	six := []float64{1, 0, 0, 0, 0, 0}
	piece := func(arrays ...memoryArray) *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: arrays}}}
	}
	nodal := func(name string) memoryArray { return pointArray(name, uniform(8, six...)...) }
	for _, c := range []struct {
		name  string
		mesh  *memoryMesh
		wants string // source, stress on, strain on
		codes string
	}{
		{"cells", piece(cellArray("Sigma", six), cellArray("total strain", six)), "stress-strain cell cell", ""},
		{"points", piece(nodal("Sigma"), nodal("eps")), "stress-strain point point", ""},
		{"both: cells", piece(nodal("stress"), nodal("strain"), cellArray("stress", six), cellArray("strain", six)), "stress-strain cell cell", "several-locations"},
		{"a pair beats a single", piece(nodal("stress"), nodal("strain"), cellArray("stress", six)), "stress-strain point point", ""},
		{"stress alone", piece(cellArray("stress", six)), "stress cell ", ""},
		{"strain alone", piece(cellArray("strain", six)), "strain  cell", ""},
		{"elastic before total", piece(cellArray("stress", six), cellArray("strain", six), cellArray("elastic strain", six)), "stress-strain cell cell", ""},
		{"vectors are no tensors", piece(cellArray("stress vector", six[:3]), cellArray("stress", six), cellArray("strain", six)), "stress-strain cell cell", ""},
	} {
		options := Options{Materials: []Material{steel()}}
		ledger := tally(t, c.mesh, options)
		var stress, strain string
		if ledger.Fields.Stress != nil {
			stress = ledger.Fields.Stress.On
		}
		if ledger.Fields.Strain != nil {
			strain = ledger.Fields.Strain.On
		}
		if got := ledger.Model.EnergyFrom + " " + stress + " " + strain; got != c.wants {
			t.Errorf("%s: %q, want %q", c.name, got, c.wants)
		}
		for _, code := range strings.Fields(c.codes) {
			if !hasFinding(ledger, code) {
				t.Errorf("%s: no finding %s", c.name, code)
			}
		}
		if !hasFinding(ledger, "units-not-stated") {
			t.Errorf("%s: units are not stated, and nothing says so", c.name)
		}
	}
	for _, c := range []struct {
		name    string
		mesh    *memoryMesh
		options Options
		parts   []string
	}{
		{"ambiguous", piece(cellArray("stress_a", six), cellArray("stress_b", six), cellArray("strain", six)), Options{}, []string{`"stress_a"`, `"stress_b"`, "[fields] stress"}},
		{"nothing", piece(cellArray("x", six), nodal("y")), Options{}, []string{`"x" (6 on cells)`, `"y" (6 on points)`}},
		{"no arrays", piece(), Options{}, []string{"no arrays"}},
		{"another location", piece(cellArray("stress", six), nodal("strain")), Options{From: FromStressStrain}, []string{"at one location"}},
		{"a name that is not there", piece(cellArray("stress", six), cellArray("strain", six)), Options{Fields: Fields{Stress: Field{Arrays: []string{"S11"}}}}, []string{`"S11"`, `"stress"`}},
		{"a wrong location", piece(cellArray("stress", six), cellArray("strain", six)), Options{Fields: Fields{Stress: Field{Arrays: []string{"stress"}, On: mesh.OnPoint}}}, []string{"points", "none"}},
		{"an order of another length", piece(cellArray("stress", six), cellArray("strain", six)), Options{Fields: Fields{Stress: stated("stress", mesh.OnCell, "xx yy xy")}}, []string{"6 components", "names 3"}},
		{"five components", piece(cellArray("stress", six[:5]), cellArray("strain", six)), Options{Fields: Fields{Stress: Field{Arrays: []string{"stress"}}}}, []string{"5 components"}},
		{"a solid without yz", piece(cellArray("stress", six[:4]), cellArray("strain", six)), Options{Fields: Fields{Stress: stated("stress", mesh.OnCell, "xx yy zz xy")}}, []string{"no yz"}},
	} {
		var input *InputError
		err := tallyError(t, c.mesh, c.options)
		if !errors.As(err, &input) {
			t.Errorf("%s: error %v is no input error", c.name, err)
		}
		for _, part := range c.parts {
			if !strings.Contains(err.Error(), part) {
				t.Errorf("%s: %q does not say %q", c.name, err, part)
			}
		}
	}
	mixed := Options{Fields: Fields{Stress: stated("stress", mesh.OnCell, sixOrder), Strain: stated("strain", mesh.OnPoint, sixOrder)}}
	ledger := tally(t, piece(cellArray("stress", six), nodal("strain")), mixed)
	if !hasFinding(ledger, "mixed-locations") || !within(float64(ledger.Total.Energy), 0.5, 1e-14) {
		t.Errorf("mixed by name: energy %v, findings %+v", ledger.Total.Energy, ledger.Findings)
	}
}

// A tensor may be stored as several arrays of one component.
func TestComponentArrays(t *testing.T) {
	points, cell := brick(1, 1, 1)
	var arrays []memoryArray
	stress, strain := Field{Order: mesh.OrderOf6, Shear: "tensor"}, Field{Order: mesh.OrderOf6, Shear: "tensor"}
	for i, name := range mesh.OrderOf6 {
		arrays = append(arrays, cellArray("s"+name, []float64{stateT02[i]}), cellArray("e"+name, []float64{strainT2[i]}))
		stress.Arrays, strain.Arrays = append(stress.Arrays, "s"+name), append(strain.Arrays, "e"+name)
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: arrays}}}
	options := Options{Fields: Fields{Stress: stress, Strain: strain}}
	ledger := tally(t, m, options)
	if got := float64(ledger.Total.Energy); !within(got, 0.27567857, 1e-7) || ledger.Fields.Stress.Array != "sxx syy szz sxy syz sxz" {
		t.Errorf("energy %.9g of %q", got, ledger.Fields.Stress.Array)
	}
	options.Fields.Stress.Arrays = append(slices.Clone(stress.Arrays[:5]), "nowhere")
	if err := tallyError(t, m, options); !strings.Contains(err.Error(), `"nowhere"`) {
		t.Error(err)
	}
}

// Component names that the file gives decide the order.
func TestComponentNamesOfTheFile(t *testing.T) {
	points, cell := brick(1, 1, 1)
	s, e := stateT02, strainT2
	stress := cellArray("stress", []float64{s[0], s[1], s[2], s[4], s[5], s[3]})
	strain := cellArray("strain", []float64{e[0], e[1], e[2], e[4], e[5], e[3]})
	stress.names = []string{"XX", "YY", "ZZ", "YZ", "XZ", "XY"}
	strain.names = stress.names
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{stress, strain}}}}
	ledger := tally(t, m, Options{})
	if got := float64(ledger.Total.Energy); !within(got, 0.27567857, 1e-7) || ledger.Fields.Stress.DecidedBy != "file" || ledger.Fields.Stress.Order != "xx yy zz yz xz xy" {
		t.Errorf("energy %.9g, stress %+v", got, *ledger.Fields.Stress)
	}
	stress.names = []string{"a", "b", "c", "d", "e", "f"}
	m.pieces[0].arrays[0] = stress
	if ledger := tally(t, m, Options{}); ledger.Fields.Stress.DecidedBy != "audit" {
		t.Errorf("names that are none: %+v", *ledger.Fields.Stress)
	}
}

func TestThickness(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {1, 0, 0}, {2, 0, 0}, {0, 1, 0}, {1, 1, 0}, {2, 1, 0}}
	cells := []memoryCell{{mesh.Quad, []int32{0, 1, 4, 3}}, {mesh.Quad, []int32{1, 2, 5, 4}}}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(2, 1, 0, 0)...), cellArray("strain", uniform(2, 2, 0, 0)...), cellArray("t", []float64{4}, []float64{7})}}}}
	fields := Fields{Stress: stated("stress", mesh.OnCell, "xx yy xy"), Strain: stated("strain", mesh.OnCell, "xx yy xy")}
	left := Region{Name: "left", Box: &Box{Vector{0, 0, -1}, Vector{1, 1, 1}}, Thickness: 10}
	for _, c := range []struct {
		name    string
		options Options
		volume  float64
		says    any
	}{
		{"number", Options{Idealisation: PlaneStress, Thickness: 3}, 6, Number(3)},
		{"array", Options{Idealisation: PlaneStress, ThicknessArray: "t"}, 11, "t"},
		{"by region", Options{Idealisation: PlaneStress, Thickness: 3, Regions: []Region{left, {Name: "rest", Rest: true}}}, 13, Number(3)},
		{"plane strain", Options{Idealisation: PlaneStrain, Materials: []Material{steel()}}, 2, Number(1)},
	} {
		c.options.Fields = fields
		ledger := tally(t, m, c.options)
		if float64(ledger.Total.Volume) != c.volume || float64(ledger.Total.Energy) != c.volume || ledger.Model.Thickness != c.says {
			t.Errorf("%s: volume %v, energy %v, thickness %v, want %g", c.name, ledger.Total.Volume, ledger.Total.Energy, ledger.Model.Thickness, c.volume)
		}
	}
	var study *StudyError
	if err := tallyError(t, m, Options{Idealisation: PlaneStress, Fields: fields}); !errors.As(err, &study) || !strings.Contains(err.Error(), "thickness") {
		t.Errorf("plane stress without a thickness: %v", err)
	}
	var input *InputError
	if err := tallyError(t, m, Options{Idealisation: PlaneStrain, Fields: fields}); !errors.As(err, &input) || !strings.Contains(err.Error(), "zz") {
		t.Errorf("plane strain without σ_zz and without a law: %v", err)
	}
	if err := tallyError(t, m, Options{Idealisation: Axisymmetric, Fields: fields}); !errors.As(err, &input) || !strings.Contains(err.Error(), "zz") {
		t.Errorf("axisymmetric without a hoop term: %v", err)
	}
}

func TestMeshesThatCannotBeAccountedFor(t *testing.T) {
	flat := [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}}
	quad := []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}
	arrays := []memoryArray{cellArray("stress", []float64{1, 0, 0, 0, 0, 0}), cellArray("strain", []float64{1, 0, 0, 0, 0, 0})}
	tilted := [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 1}, {0, 1, 1}}
	left := [][3]float64{{-1, 0, 0}, {1, 0, 0}, {1, 1, 0}, {-1, 1, 0}}
	fields := Fields{Stress: stated("stress", mesh.OnCell, sixOrder), Strain: stated("strain", mesh.OnCell, sixOrder)}
	for _, c := range []struct {
		name         string
		points       [][3]float64
		cells        []memoryCell
		idealisation Idealisation
		part         string
	}{
		{"surfaces as a solid", flat, quad, Solid, "idealisation"},
		{"out of the plane", tilted, quad, PlaneStrain, "x-y plane"},
		{"a negative radius", left, quad, Axisymmetric, "radius of -1"},
		{"no cells", flat, nil, Solid, "no"},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: c.points, cells: c.cells, arrays: arrays}}}
		var input *InputError
		if err := tallyError(t, m, Options{Idealisation: c.idealisation, Fields: fields}); !errors.As(err, &input) || !strings.Contains(err.Error(), c.part) {
			t.Errorf("%s: %v, want an input error with %q", c.name, err, c.part)
		}
	}
}

func TestMassAndRepeats(t *testing.T) {
	points, cells := row(2)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(2, 1, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(2, 2, 0, 0, 0, 0, 0)...), labels1("part", 1, 2)}}}}
	heavy, bare := steel(), aluminium()
	heavy.Density = 7.85
	options := solidOptions(mesh.OnCell, heavy, bare)
	options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}, Material: "steel"}, {Name: "b", Rest: true, Material: "aluminium"}}
	options.Repeats = 4
	ledger := tally(t, m, options)
	if ledger.Regions[0].Mass != 7.85 || ledger.Regions[1].Mass.Exists() || ledger.Total.Mass.Exists() {
		t.Errorf("masses %v %v %v, want 7.85 and none", ledger.Regions[0].Mass, ledger.Regions[1].Mass, ledger.Total.Mass)
	}
	if r := ledger.Repeated; r == nil || r.Repeats != 4 || r.Volume != 8 || r.Energy != 8 || r.Mass.Exists() {
		t.Errorf("repeated %+v", r)
	}
	options.Materials[1].Density = 2
	if got := tally(t, m, options); got.Total.Mass != 9.85 || got.Repeated.Mass != 39.4 {
		t.Errorf("mass %v, repeated %v, want 9.85 and 39.4", got.Total.Mass, got.Repeated.Mass)
	}
}

func TestRequirements(t *testing.T) {
	points, cells := row(2)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", []float64{1, 0, 0, 0, 0, 0}, []float64{3, 0, 0, 0, 0, 0}), cellArray("strain", uniform(2, 2, 0, 0, 0, 0, 0)...), labels1("part", 1, 2)}}}}
	options := solidOptions(mesh.OnCell)
	options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}}, {Name: "b", Rest: true}}
	for _, c := range []struct {
		requirement Requirement
		value       Number
		met         bool
		why         string
	}{
		{Requirement{Quantity: "energy", AtMost: 4, AtLeast: None}, 4, true, ""},
		{Requirement{Quantity: "energy", AtMost: 3.999, AtLeast: None}, 4, false, ""},
		{Requirement{Quantity: "energy", Region: "b", AtMost: None, AtLeast: 3}, 3, true, ""},
		{Requirement{Quantity: "energy", Region: "b", AtMost: None, AtLeast: 3.001}, 3, false, ""},
		{Requirement{Quantity: "cells", Region: "a", AtMost: 1, AtLeast: None}, 1, true, ""},
		{Requirement{Quantity: "max_utilisation", AtMost: 1, AtLeast: None}, None, false, "not available"},
		{Requirement{Quantity: "hotspot.1.density", AtMost: 3, AtLeast: None}, 3, true, ""},
		{Requirement{Quantity: "hotspot.2.density", AtMost: 3, AtLeast: None}, 1, true, ""},
		{Requirement{Quantity: "hotspot.1.density", Region: "a", AtMost: 3, AtLeast: None}, 1, true, ""},
		{Requirement{Quantity: "hotspot.9.density", AtMost: 3, AtLeast: None}, None, false, "no hotspot"},
		{Requirement{Quantity: "hotspot.1.energy", AtMost: 3, AtLeast: None}, 3, true, ""},
		{Requirement{Quantity: "hotspot.1.utilisation", AtMost: 1, AtLeast: None}, None, false, "not available"},
	} {
		c.requirement.Name = c.requirement.Quantity
		options.Requirements = []Requirement{c.requirement}
		got := tally(t, m, options).Requirements[0]
		if got.Met != c.met || got.Value != c.value && (got.Value.Exists() || c.value.Exists()) || !strings.Contains(string(got.Why), c.why) {
			t.Errorf("%+v: value %v, met %v, why %q", c.requirement, got.Value, got.Met, got.Why)
		}
	}
	for _, quantity := range []string{"energies", "hotspot.0.density", "hotspot.x.density", "hotspot.1", "hotspot.1.name", "name", "max_density_at"} {
		options.Requirements = []Requirement{{Name: "r", Quantity: quantity, AtMost: 1, AtLeast: None}}
		var study *StudyError
		if err := tallyError(t, m, options); !errors.As(err, &study) {
			t.Errorf("quantity %q: %v", quantity, err)
		}
	}
	options.Requirements = []Requirement{{Name: "r", Quantity: "energy", Region: "c", AtMost: 1, AtLeast: None}}
	if err := tallyError(t, m, options); !strings.Contains(err.Error(), `"c"`) {
		t.Errorf("a region that there is not: %v", err)
	}
}

func TestFindings(t *testing.T) {
	points, cells := row(1)
	zero, one := make([]float64, 6), []float64{1, 0, 0, 0, 0, 0}
	m := func(stress, strain []float64) *memoryMesh {
		return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{cellArray("stress", stress), cellArray("strain", strain)}}}}
	}
	for _, c := range [][2][]float64{{zero, zero}, {zero, one}, {one, zero}} {
		if !hasFinding(tally(t, m(c[0], c[1]), solidOptions(mesh.OnCell)), "all-zero") {
			t.Errorf("stress %v, strain %v: no finding all-zero", c[0], c[1])
		}
	}
	bare := steel()
	bare.Source = ""
	options := solidOptions(mesh.OnCell, bare)
	options.Acceptances = []Acceptance{{"limit-without-source", "a sample"}}
	ledger := tally(t, m(one, one), options)
	i := slices.IndexFunc(ledger.Findings, func(f Finding) bool { return f.Code == "limit-without-source" })
	if i < 0 || ledger.Findings[i].Accepted != "a sample" || ledger.Findings[i].Severity != Note {
		t.Errorf("findings %+v", ledger.Findings)
	}
	if hasFinding(ledger, "all-zero") || hasFinding(ledger, "negative-density") {
		t.Errorf("findings %+v", ledger.Findings)
	}
	if !IsErrorFinding("all-zero") || IsErrorFinding("ghost-cells") || IsErrorFinding("nothing") {
		t.Error("severities")
	}
}

func TestCancelledTally(t *testing.T) {
	points, cells := row(3)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", uniform(3, 1, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(3, 2, 0, 0, 0, 0, 0)...)}}}}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	options := solidOptions(mesh.OnCell)
	if _, err := Tally(ctx, m.model(), &options, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v, want cancelled", err)
	}
}
