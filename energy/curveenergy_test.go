package energy

import (
	"math"
	"math/rand/v2"
	"testing"

	"strainledger/mesh"
)

// withCurve is steel with the curve of M-05 (a digitised curve; derived), modulus and
// limit from it.
func withCurve(t testing.TB) Material {
	t.Helper()
	m := NewMaterial("curved")
	m.PoissonsRatio = 0.3
	m.SetCurve(&MaterialCurve{Path: "m05.csv", Analysis: analyse(t, readCurve(t, "m05-aluminium.csv", CurveReading{}), CurveOptions{})})
	return m
}

// A material with a curve takes modulus and limit from it (M-05), unless given.
func TestMaterialTakesItsCurve(t *testing.T) {
	m := withCurve(t)
	if !within(m.YoungsModulus, 70000, 1e-9) || !within(m.ProportionalLimit, 243.384615, 1e-8) || m.Source != "m05.csv, offset-0.01%" {
		t.Errorf("E %g, limit %g, source %q", m.YoungsModulus, m.ProportionalLimit, m.Source)
	}
	given := NewMaterial("given")
	given.YoungsModulus, given.ProportionalLimit, given.Source = 71000, 200, "stated"
	given.SetCurve(m.Curve)
	if given.YoungsModulus != 71000 || given.ProportionalLimit != 200 || given.Source != "stated" {
		t.Errorf("given values were overwritten: %+v", given)
	}
	if used := m.used(Solid); used.Curve != "m05.csv" || used.ProportionalLimitBy != "offset-0.01%" {
		t.Errorf("used %+v", used)
	}
}

// Below the limit the energy under the curve is ½ σ:ε; past it a linear run's cell is
// not credited with more than the curve holds; beyond the curve's end it is null. The
// same on cells, on points and from displacement.
func TestCurveEnergy(t *testing.T) {
	m := withCurve(t)
	law := isotropic(t, m.YoungsModulus, 0.3)
	for _, c := range []struct {
		name   string
		strain float64 // axial, uniaxial stress by the linear law
		check  func(linear, curve Number) bool
	}{
		{"below the limit", 0.002, func(linear, curve Number) bool { return within(float64(curve), float64(linear), 1e-12) }},
		{"past the limit", 0.01, func(linear, curve Number) bool { return curve.Exists() && curve < 0.8*linear && curve > 0.3*linear }},
		{"beyond the curve", 0.2, func(_, curve Number) bool { return !curve.Exists() }},
	} {
		stress := mesh.SymmetricTensor{c.strain * m.YoungsModulus}
		strain := law.Strain(&stress)
		random := rand.New(rand.NewPCG(1, 1))
		onPoints := distorted(t, mesh.Hexahedron, 8, random, func(x, y, z float64) Vector {
			return Vector{strain[0] * x, strain[1] * y, strain[2] * z}
		})
		displacement := onPoints.pieces[0].arrays
		var energies []float64
		for source, arrays := range map[EnergySource][]memoryArray{
			"cells": {cellArray("stress", stress[:]), cellArray("strain", strain[:])},
			"nodes": {pointArray("stress", uniform(8, stress[:]...)...), pointArray("strain", uniform(8, strain[:]...)...)},
			"moves": displacement,
		} {
			onPoints.pieces[0].arrays = arrays
			ledger := tally(t, onPoints, Options{Materials: []Material{m}})
			total := ledger.Total
			if !c.check(total.Energy, total.CurveEnergy) || ledger.Regions[0].CurveEnergy.Exists() != total.CurveEnergy.Exists() {
				t.Errorf("%s, %s: curve energy %v, linear %v", c.name, source, total.CurveEnergy, total.Energy)
			}
			energies = append(energies, float64(total.CurveEnergy/total.Volume))
		}
		for _, energy := range energies[1:] {
			if !math.IsNaN(energy) && !within(energy, energies[0], 1e-9) {
				t.Errorf("%s: densities under the curve %v", c.name, energies)
			}
		}
	}
}

// The strain that the curve was loaded to includes the plastic part: P-06 (derived), a
// perfectly plastic bar to 0.005, work 1.09375 with ν 0.5 for the part that changes the
// volume to vanish from the uniaxial value.
func TestCurveEnergyOfAPlasticBar(t *testing.T) {
	points, cell := brick(1, 1, 1)
	analysis := analyse(t, recordOf([]CurvePoint{{0, 0}, {0.0005, 100}, {0.001, 200}, {0.00125, 250}, {0.01, 250}}), CurveOptions{})
	m := NewMaterial("bar")
	m.PoissonsRatio, m.YoungsModulus = 0.3, 200000
	m.SetCurve(&MaterialCurve{Path: "bar", Analysis: analysis})
	elastic, plastic := mesh.SymmetricTensor{0.00125, -0.000375, -0.000375}, mesh.SymmetricTensor{0.00375, -0.001875, -0.001875}
	total := sum(&elastic, &plastic)
	mm := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", []float64{250, 0, 0, 0, 0, 0}), cellArray("strain", total[:]), cellArray("plastic strain", plastic[:])}}}}
	ledger := tally(t, mm, solidOptions(mesh.OnCell, m))
	if !within(float64(ledger.Total.CurveEnergy), 1.09375, 2e-3) || !within(float64(ledger.Total.Energy), 0.15625, 1e-9) {
		t.Errorf("work under the curve %.9g, want 1.09375; stored %.9g, want 0.15625", ledger.Total.CurveEnergy, ledger.Total.Energy)
	}
}
