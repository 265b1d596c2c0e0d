package energy

import (
	"math"
	"testing"

	"strainledger/mesh"
)

// binsOf gathers cells of the given densities and volumes.
func binsOf(densities, volumes []float64) *densityBins {
	energies := make([]float64, len(densities))
	for i := range energies {
		energies[i] = densities[i] * volumes[i]
	}
	var bins densityBins
	bins.addAll(densities, volumes, energies)
	return &bins
}

// H-01 and H-01b (derived): the energy-volume curve of a few cells. Each density has a
// bin of its own, so that nothing is lost to bins.
func TestConcentrationOfFewCells(t *testing.T) {
	uneven := binsOf([]float64{8, 1, 4, 1, 2}, []float64{1, 4, 1, 2, 2}).concentration()
	for name, c := range map[string]struct{ got, want float64 }{
		"H-01 top 1 %":  {float64(uneven.Top1), 0.03636364},
		"H-01 top 5 %":  {float64(uneven.Top5), 0.18181818},
		"H-01 top 10 %": {float64(uneven.Top10), 0.36363636},
		"H-01 top 20 %": {float64(topShare(uneven.Curve, 0.2)), 0.54545455},
		// By hand: after 8 and 4 come 5 % of the volume at density 2.
		"H-01 top 25 %":         {float64(uneven.Top25), 13. / 22},
		"H-01 Gini":             {float64(uneven.Gini), 0.41818182},
		"H-01 effective volume": {float64(uneven.EffectiveVolume), 0.51489362},
		"width of a bin":        {float64(uneven.BinWidth), 0.0218971487},
	} {
		if !within(c.got, c.want, 1e-8/c.want) {
			t.Errorf("%s: %.9g, want %.9g", name, c.got, c.want)
		}
	}
	even := binsOf([]float64{3, 3, 3, 3, 3}, []float64{1, 2, 3, 4, 5}).concentration()
	if !within(float64(even.Top10), 0.1, 1e-15) || math.Abs(float64(even.Gini)) > 1e-15 || even.EffectiveVolume != 1 {
		t.Errorf("H-01b: top 10 %% %g, Gini %g, effective volume %g; want 0.1, 0, 1", even.Top10, even.Gini, even.EffectiveVolume)
	}
	if want := [][2]float64{{0, 0}, {1, 1}}; len(even.Curve) != 2 || even.Curve[0] != want[0] || even.Curve[1] != want[1] {
		t.Errorf("H-01b: curve %v, want %v", even.Curve, want)
	}
}

// H-04, H-05 and H-06: fields whose curve has a closed form, cut into many cells.
// Tolerances are those of the check values, for 32 bins an octave.
func TestConcentrationOfFields(t *testing.T) {
	const cells = 100_000
	quadratic := func() *densityBins { // w = x² on [0, 1]
		densities, volumes := make([]float64, cells), make([]float64, cells)
		for i := range densities {
			low, high := float64(i)/cells, float64(i+1)/cells
			volumes[i] = high - low
			densities[i] = (high*high*high - low*low*low) / 3 / volumes[i]
		}
		return binsOf(densities, volumes)
	}
	bending := func() *densityBins { // w ~ x² y² on [0, 1] × [0, 1]
		const side = 1000
		densities, volumes := make([]float64, side*side), make([]float64, side*side)
		for i := range densities {
			x, y := (float64(i/side)+0.5)/side, (float64(i%side)+0.5)/side
			densities[i], volumes[i] = x*x*y*y, 1
		}
		return binsOf(densities, volumes)
	}
	corner := func(lambda float64) func() *densityBins { // w ~ r^(2λ-2) in a sector
		return func() *densityBins {
			densities, volumes := make([]float64, cells), make([]float64, cells)
			for i := range densities {
				low, high := float64(i)/cells, float64(i+1)/cells
				volumes[i] = (high*high - low*low) / 2
				densities[i] = (math.Pow(high, 2*lambda) - math.Pow(low, 2*lambda)) / (2 * lambda) / volumes[i]
			}
			return binsOf(densities, volumes)
		}
	}
	unknown := float64(None)
	for _, c := range []struct {
		name                                         string
		bins                                         func() *densityBins
		top1, top10, top20, gini, effective, allowed float64
	}{
		{"H-04", quadratic, unknown, 0.271, unknown, 0.5, 5. / 9, 3e-4},
		{"H-05", bending, 0.0742, 0.4736, 0.7072, 0.6875, 0.30864198, 1e-3},
		{"H-06, 0.5", corner(0.5), 0.1, unknown, unknown, 1. / 3, unknown, 1e-3},
		{"H-06, 0.544484", corner(0.544484), 0.08147653, unknown, unknown, 0.29493108, unknown, 1e-3},
		{"H-06, 0.673583", corner(0.673583), 0.04496071, unknown, unknown, 0.19504051, unknown, 1e-3},
	} {
		got := c.bins().concentration()
		for _, number := range []struct {
			name      string
			got, want float64
		}{
			{"top 1 %", float64(got.Top1), c.top1}, {"top 10 %", float64(got.Top10), c.top10},
			{"top 20 %", float64(topShare(got.Curve, 0.2)), c.top20},
			{"Gini", float64(got.Gini), c.gini}, {"effective volume", float64(got.EffectiveVolume), c.effective},
		} {
			if !math.IsNaN(number.want) && math.Abs(number.got-number.want) > c.allowed {
				t.Errorf("%s: %s %.6g, want %.6g", c.name, number.name, number.got, number.want)
			}
		}
		checkCurve(t, c.name, got)
	}
}

// checkCurve holds the curve against what it promises: it rises from [0, 0] to [1, 1]
// and bends down, it has few points, and the numbers beside it can be read off it.
func checkCurve(t *testing.T, name string, c *Concentration) {
	t.Helper()
	last := len(c.Curve) - 1
	if c.Curve[0] != [2]float64{0, 0} || c.Curve[last] != [2]float64{1, 1} {
		t.Errorf("%s: the curve goes from %v to %v", name, c.Curve[0], c.Curve[last])
	}
	if last > 200 {
		t.Errorf("%s: the curve has %d points", name, last+1)
	}
	area, slope := 0.0, math.Inf(1)
	for i := 1; i <= last; i++ {
		width, rise := c.Curve[i][0]-c.Curve[i-1][0], c.Curve[i][1]-c.Curve[i-1][1]
		if !(width > 0) || !(rise > 0) || rise/width > slope*(1+1e-9) {
			t.Errorf("%s: point %d of the curve: %v after %v", name, i, c.Curve[i], c.Curve[i-1])
		}
		slope = rise / width
		area += width * (c.Curve[i][1] + c.Curve[i-1][1]) / 2
	}
	if math.Abs(2*area-1-float64(c.Gini)) > 2*curveTolerance {
		t.Errorf("%s: the area below the curve gives a Gini index of %g, want %g", name, 2*area-1, c.Gini)
	}
	for volume, share := range map[float64]Number{0.01: c.Top1, 0.05: c.Top5, 0.1: c.Top10, 0.25: c.Top25} {
		if got := topShare(c.Curve, volume); math.Abs(float64(got-share)) > curveTolerance {
			t.Errorf("%s: at %g the curve has %g, want %g", name, volume, got, share)
		}
	}
}

// The ledger has the measures for each region and for the whole, which is one set of
// cells and not a mean of the regions.
func TestConcentrationInTheLedger(t *testing.T) {
	densities, lengths := []float64{8, 1, 4, 1, 2}, []float64{1, 4, 1, 2, 2}
	m := barsOf(densities, lengths, []float64{1, 1, 1, 2, 2})
	options := solidOptions(mesh.OnCell, steel())
	options.Regions = []Region{
		{Name: "first", Array: "part", Values: []float64{1}},
		{Name: "second", Array: "part", Values: []float64{2}},
		{Name: "none", Array: "part", Values: []float64{3}, Optional: true},
	}
	ledger := tally(t, m, options)
	whole := binsOf(densities, lengths).concentration()
	for name, c := range map[string]struct{ got, want Number }{
		"Gini of the whole":             {ledger.Total.Concentration.Gini, whole.Gini},
		"effective volume of the whole": {ledger.Total.Concentration.EffectiveVolume, whole.EffectiveVolume},
		"top 10 % of the whole":         {ledger.Total.Concentration.Top10, 0.36363636363636},
		// 4 units of volume of 6 hold density 1: (8+4+4)²/(6·(64+16+4)) = 256/504.
		"effective volume of the first": {ledger.Regions[0].Concentration.EffectiveVolume, 256. / 504},
		// 2 at 1 and 2 at 2: the densest quarter is 1 of 4 at density 2, 2 of 6.
		"top 25 % of the second": {ledger.Regions[1].Concentration.Top25, 1. / 3},
	} {
		if !within(float64(c.got), float64(c.want), 1e-12) {
			t.Errorf("%s: %.12g, want %.12g", name, c.got, c.want)
		}
	}
	if ledger.Regions[2].Concentration != nil {
		t.Error("a region without cells has a concentration")
	}
}

// barsOf is a row of unit-square bars of the given lengths, each under the tension along
// x that gives it its density, with a label each. They do not touch each other.
func barsOf(densities, lengths, parts []float64) *memoryMesh {
	var piece memoryPiece
	var stress, strain [][]float64
	for i, density := range densities {
		points, cell := brick(lengths[i], 1, 1)
		for k := range points {
			points[k][1] += 2 * float64(i)
		}
		for k := range cell.nodes {
			cell.nodes[k] += int32(8 * i)
		}
		piece.points = append(piece.points, points...)
		piece.cells = append(piece.cells, cell)
		tension := math.Sqrt(2 * 210000 * density)
		stress = append(stress, []float64{tension, 0, 0, 0, 0, 0})
		strain = append(strain, []float64{tension / 210000, -0.3 * tension / 210000, -0.3 * tension / 210000, 0, 0, 0})
	}
	piece.arrays = []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...), labels1("part", parts...)}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// Without energy there is nothing to be concentrated; densities of 0 and below share a
// bin, and count as volume.
func TestConcentrationWithoutDensity(t *testing.T) {
	if got := binsOf([]float64{0, 0}, []float64{1, 2}).concentration(); got != nil {
		t.Errorf("of no energy: %+v", got)
	}
	if got := new(densityBins).concentration(); got != nil {
		t.Errorf("of no cells: %+v", got)
	}
	half := binsOf([]float64{2, 0, -0.5, math.SmallestNonzeroFloat64}, []float64{2, 1, 1, 0}).concentration()
	// 4 in the first half of the volume, -0.5 in the second.
	if !within(float64(half.Top25), 2/3.5, 1e-15) || half.Curve[1] != [2]float64{0.5, 4 / 3.5} {
		t.Errorf("top 25 %% %g, curve %v", half.Top25, half.Curve)
	}
}
