package energy

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"strainledger/mesh"
)

// randomStates returns stresses with shear, and the elastic strains of a law.
func randomStates(law *Law, count int, seed uint64) (stress, strain []mesh.SymmetricTensor) {
	random := rand.New(rand.NewPCG(seed, 7))
	for range count {
		var s mesh.SymmetricTensor
		for i := range s {
			s[i] = 100 * (2*random.Float64() - 1)
		}
		stress, strain = append(stress, s), append(strain, law.Strain(&s))
	}
	return stress, strain
}

// stored writes tensors the way a file would: in an order, with a shear convention.
func storedAs(tensors []mesh.SymmetricTensor, order mesh.Order, shear mesh.Shear) [][]float64 {
	factor := map[mesh.Shear]float64{mesh.TensorShear: 1, mesh.EngineeringShear: 2, mesh.MandelShear: math.Sqrt2}[shear]
	places := map[string]int{"xx": 0, "yy": 1, "zz": 2, "xy": 3, "yx": 3, "yz": 4, "zy": 4, "xz": 5, "zx": 5}
	var tuples [][]float64
	for _, t := range tensors {
		var tuple []float64
		for _, name := range order {
			value := t[places[name]]
			if places[name] >= 3 {
				value *= factor
			}
			tuple = append(tuple, value)
		}
		tuples = append(tuples, tuple)
	}
	return tuples
}

// rowMesh is a row of unit cubes with cell data.
func rowMesh(count int, arrays ...memoryArray) *memoryMesh {
	points, cells := row(count)
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: arrays}}}
}

// energyOf sums ½ σ:ε over unit cells.
func energyOf(stress, strain []mesh.SymmetricTensor) (sum float64) {
	for i := range stress {
		sum += Density(&stress[i], &strain[i])
	}
	return sum
}

// D-01 and D-02 (derived): the fit recovers E and ν, and the shear ratio tells the
// convention.
func TestFitRecoversTheLaw(t *testing.T) {
	stress, strain := randomStates(isotropic(t, 70000, 0.33), 50, 1)
	var sums fitSums
	for i := range stress {
		sums.add(&pair{stress[i], strain[i]}, []int{0, 1, 2, 3, 4, 5}, 3)
	}
	a, b, shape := sums.solve()
	if e, nu := 1/(a+b), -b/(a+b); !within(e, 70000, 1e-10) || !within(nu, 0.33, 1e-10) || !within(shape, a, 1e-10) {
		t.Errorf("E %.10g, ν %.10g, want 70000 and 0.33", e, nu)
	}
}

// Every order and convention of the stress and the strain, found from the numbers; with
// the material's law and without. The tuples of 6 that deceive a program which does not
// look: D-04, D-05, D-05b (derived).
func TestAuditFindsOrderAndShear(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 60, 2)
	want := energyOf(stress, strain)
	for _, stressOrder := range candidateOrders[6] {
		for _, strainOrder := range candidateOrders[6] {
			for _, shear := range []mesh.Shear{mesh.TensorShear, mesh.EngineeringShear} {
				for _, materials := range [][]Material{nil, {aluminium()}} {
					m := rowMesh(60, cellArray("stress", storedAs(stress, stressOrder, mesh.TensorShear)...), cellArray("strain", storedAs(strain, strainOrder, shear)...))
					ledger := tally(t, m, Options{Length: "mm", Stress: "MPa", Materials: materials})
					name := stressOrder.String() + " | " + strainOrder.String() + " " + shear.String()
					if !within(float64(ledger.Total.Energy), want, 1e-9) {
						t.Errorf("%s: energy %g, want %g", name, ledger.Total.Energy, want)
					}
					used := ledger.Fields.Strain
					if used.DecidedBy != "audit" || used.Shear != Text(shear.String()) || ledger.Fields.Stress.DecidedBy != "audit" {
						t.Errorf("%s: strain %+v", name, *used)
					}
					if hasFinding(ledger, "shear-convention") != (shear != mesh.TensorShear) {
						t.Errorf("%s: findings %+v", name, ledger.Findings)
					}
					if !strings.Contains(used.Why, "shear strain read as "+shear.String()+": Hooke's law fits to") {
						t.Errorf("%s: why %q", name, used.Why)
					}
				}
			}
		}
	}
}

// A property: one elastic state in any order, convention, axes, unit and place gives
// one energy.
func TestOneEnergyWhateverTheConventions(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		law, err := NewIsotropicLaw(rapid.Float64Range(1e3, 4e5).Draw(t, "E"), rapid.Float64Range(0.1, 0.45).Draw(t, "nu"))
		if err != nil {
			t.Fatal(err)
		}
		stress, strain := randomStates(law, 30, rapid.Uint64().Draw(t, "seed"))
		want := energyOf(stress, strain)
		// One rotation of all axes.
		axes := anyAxes(t)
		for i := range stress {
			stress[i], strain[i] = axes.ToModel(&stress[i]), axes.ToModel(&strain[i])
		}
		// One unit of stress.
		unit := rapid.SampledFrom([]float64{1, 1e6, 1e-3, 145.037737730}).Draw(t, "unit")
		material := NewMaterial("m")
		material.YoungsModulus, material.PoissonsRatio = law.youngsModulus*unit, law.poissonsRatio
		for i := range stress {
			for c := range stress[i] {
				stress[i][c] *= unit
			}
		}
		stressOrder := rapid.SampledFrom(append(slices.Clone(candidateOrders[6]), mesh.OrderOf9)).Draw(t, "stress order")
		strainOrder := rapid.SampledFrom(append(slices.Clone(candidateOrders[6]), mesh.OrderOf9)).Draw(t, "strain order")
		shear := rapid.SampledFrom([]mesh.Shear{mesh.TensorShear, mesh.EngineeringShear}).Draw(t, "shear")
		m := rowMesh(30, cellArray("stress", storedAs(stress, stressOrder, mesh.TensorShear)...), cellArray("strain", storedAs(strain, strainOrder, shear)...))
		options := Options{}
		if rapid.Bool().Draw(t, "with material") {
			options.Materials = []Material{material}
		}
		ledger, err := Tally(t.Context(), m.model(), &options, nil)
		if err != nil {
			t.Fatal(err)
		}
		if got := float64(ledger.Total.Energy) / unit; !within(got, want, 1e-9) {
			t.Fatalf("energy %g, want %g (%s, %s %s)", got, want, stressOrder, strainOrder, shear)
		}
	})
}

// D-03 (derived): the same permutation of the three shear terms in both arrays cannot
// be found by Hooke's law, and changes neither energy nor von Mises stress.
func TestCommonPermutationOfShearTerms(t *testing.T) {
	points, cell := brick(1, 1, 1)
	order := mesh.Order{"xx", "yy", "zz", "yz", "xz", "xy"}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", storedAs([]mesh.SymmetricTensor{stateT02}, order, mesh.TensorShear)...),
		cellArray("strain", storedAs([]mesh.SymmetricTensor{strainT2}, order, mesh.TensorShear)...)}}}}
	total := tally(t, m, Options{Materials: []Material{aluminium()}}).Total
	if !within(float64(total.Energy), 0.27567857, 1e-7) || !within(float64(total.MaxEquivalentStress), 205.548048, 1e-8) {
		t.Errorf("energy %.9g, von Mises %.9g", total.Energy, total.MaxEquivalentStress)
	}
}

// What nothing tells is refused, with the candidates: strain alone with shear in it.
// Without shear, or in an order that the file names, there is nothing to refuse.
func TestStrainAloneIsUndecidable(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	_, strain := randomStates(law, 20, 3)
	m := rowMesh(20, cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...))
	options := Options{Materials: []Material{aluminium()}}
	var input *InputError
	err := tallyError(t, m, options)
	if !errors.As(err, &input) || !strings.Contains(err.Error(), "tensor shear") || !strings.Contains(err.Error(), "engineering shear") {
		t.Errorf("error %v", err)
	}
	options.Fields.Strain = Field{Arrays: []string{"strain"}, Order: mesh.OrderOf6, Shear: "engineering"}
	ledger := tally(t, m, options)
	stress := make([]mesh.SymmetricTensor, len(strain))
	for i := range strain {
		stress[i] = law.Stress(&strain[i])
	}
	if !within(float64(ledger.Total.Energy), energyOf(stress, strain), 1e-12) {
		t.Errorf("stated: energy %g", ledger.Total.Energy)
	}
	for i := range strain {
		strain[i][3], strain[i][4], strain[i][5] = 0, 0, 0
	}
	noShear := rowMesh(20, cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...))
	options.Fields.Strain = Field{Arrays: []string{"strain"}, Order: mesh.OrderOf6}
	if ledger := tally(t, noShear, options); !strings.Contains(ledger.Fields.Strain.Why, "no shear strain") {
		t.Errorf("why %q", ledger.Fields.Strain.Why)
	}
}

// Strain alone, but with the displacement: its gradient tells order and convention,
// also Mandel's, and the units of neither matter.
func TestDisplacementTellsTheConvention(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	points, cells := row(20)
	u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 3}
	for range points {
		u.values = append(u.values, 1e-3*random.Float64(), 1e-3*random.Float64(), 1e-3*random.Float64())
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{u}}}}
	// The strain of each cell is the mean of its gradient: let the program's own tally
	// from displacement be the judge of the energy.
	strain := meanStrains(t, m)
	law := isotropic(t, 70000, 0.33)
	stress := make([]mesh.SymmetricTensor, len(strain))
	for i := range strain {
		stress[i] = law.Stress(&strain[i])
	}
	want := energyOf(stress, strain)
	for _, shear := range []mesh.Shear{mesh.TensorShear, mesh.EngineeringShear, mesh.MandelShear} {
		for _, order := range candidateOrders[6] {
			m.pieces[0].arrays = []memoryArray{u, cellArray("strain", storedAs(strain, order, shear)...)}
			ledger := tally(t, m, Options{Materials: []Material{aluminium()}})
			if ledger.Model.EnergyFrom != "strain" || !within(float64(ledger.Total.Energy), want, 1e-9) {
				t.Errorf("%s %s: from %s, energy %g, want %g", order, shear, ledger.Model.EnergyFrom, ledger.Total.Energy, want)
			}
			if ledger.Fields.Strain.Shear != Text(shear.String()) || !strings.Contains(ledger.Fields.Strain.Why, "gradient") {
				t.Errorf("%s %s: %+v", order, shear, *ledger.Fields.Strain)
			}
		}
	}
}

// meanStrains returns the mean displacement gradient of each cell by finite volumes of
// 2×2×2 midpoint boxes: a trilinear field's mean gradient is the mean over its corners'
// differences along each axis, for unit cubes exactly.
func meanStrains(t *testing.T, m *memoryMesh) []mesh.SymmetricTensor {
	t.Helper()
	piece := &m.pieces[0]
	u := piece.arrays[0].values
	var strains []mesh.SymmetricTensor
	for _, cell := range piece.cells {
		var gradient [3][3]float64 // component, axis
		for k, node := range cell.nodes {
			corner := [3]float64{-1, -1, -1}
			if k%4 == 1 || k%4 == 2 {
				corner[0] = 1
			}
			// In this row z runs where the cell's second parameter does, and y where
			// the first ring does; the coordinates tell.
			p := piece.points[node]
			base := piece.points[cell.nodes[0]]
			for axis := range 3 {
				corner[axis] = -1
				if p[axis] > base[axis] {
					corner[axis] = 1
				}
				for component := range 3 {
					gradient[component][axis] += u[3*int(node)+component] * corner[axis] / 4
				}
			}
		}
		g := gradient
		strains = append(strains, mesh.SymmetricTensor{g[0][0], g[1][1], g[2][2], (g[0][1] + g[1][0]) / 2, (g[1][2] + g[2][1]) / 2, (g[0][2] + g[2][0]) / 2})
	}
	return strains
}

// Which of two arrays is the stress, where their names do not say.
func TestAuditFindsWhichIsStress(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 4)
	want := energyOf(stress, strain)
	for _, names := range [][2]string{{"a", "b"}, {"b", "a"}} {
		arrays := []memoryArray{cellArray(names[0], storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray(names[1], storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...)}
		slices.SortFunc(arrays, func(a, b memoryArray) int { return strings.Compare(a.name, b.name) })
		for _, materials := range [][]Material{nil, {aluminium()}} {
			ledger := tally(t, rowMesh(20, arrays...), Options{Materials: materials})
			if ledger.Fields.Stress.Array != names[0] || ledger.Fields.Strain.Array != names[1] || !within(float64(ledger.Total.Energy), want, 1e-9) {
				t.Errorf("%v: stress %q, strain %q, energy %g, want %g", names, ledger.Fields.Stress.Array, ledger.Fields.Strain.Array, ledger.Total.Energy, want)
			}
		}
	}
}

// Total or elastic strain, where an array tells of the thermal part: whichever fits.
func TestAuditFindsTheKindOfStrain(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 5)
	want := energyOf(stress, strain)
	thermal := make([]mesh.SymmetricTensor, len(strain))
	total := slices.Clone(strain)
	for i := range total {
		expansion := 2.3e-5 * float64(10+i)
		for c := range 3 {
			thermal[i][c] = expansion
			total[i][c] += expansion
		}
	}
	for kind, stored := range map[Text][]mesh.SymmetricTensor{"total": total, "elastic": strain} {
		m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...),
			cellArray("strain", storedAs(stored, mesh.OrderOf6, mesh.EngineeringShear)...),
			cellArray("thermal strain", storedAs(thermal, mesh.OrderOf6, mesh.EngineeringShear)...))
		ledger := tally(t, m, Options{Materials: []Material{aluminium()}})
		if ledger.Fields.Strain.Kind != kind || !within(float64(ledger.Total.Energy), want, 1e-9) || hasFinding(ledger, "hooke-mismatch") {
			t.Errorf("%s: read as %s, energy %g, want %g; %+v", kind, ledger.Fields.Strain.Kind, ledger.Total.Energy, want, ledger.Findings)
		}
	}
}

// D-06 (derived): a thermal part that no array explains. The energy is ½ σ:S:σ; without
// a law it is not told; where the study states the source it is obeyed.
func TestTotalStrainThatNoArrayExplains(t *testing.T) {
	points, cell := brick(1, 1, 1)
	strain := strainT2
	for c := range 3 {
		strain[c] += 2.3e-5 * 80
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", stateT02[:]), cellArray("strain", strain[:])}}}}
	options := solidOptions(mesh.OnCell, aluminium())
	ledger := tally(t, m, options)
	if !hasFinding(ledger, "total-strain-used") || ledger.Model.EnergyFrom != "stress" || !within(float64(ledger.Total.Energy), 0.27567857, 1e-7) {
		t.Errorf("from %s, energy %.9g; %+v", ledger.Model.EnergyFrom, ledger.Total.Energy, ledger.Findings)
	}
	options.From = FromStressStrain
	ledger = tally(t, m, options)
	if !hasFinding(ledger, "study-contradicted") || hasFinding(ledger, "total-strain-used") || !within(float64(ledger.Total.Energy), 0.36767857, 1e-7) {
		t.Errorf("stated: energy %.9g, want 0.36767857; %+v", ledger.Total.Energy, ledger.Findings)
	}
	// Without the law: the energy does not exist, rather than being wrong.
	law := isotropic(t, 70000, 0.33)
	stress, strains := randomStates(law, 20, 6)
	for i := range strains {
		for c := range 3 {
			strains[i][c] += 1.84e-3
		}
	}
	many := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strains, mesh.OrderOf6, mesh.TensorShear)...))
	ledger = tally(t, many, Options{})
	if total := ledger.Total; !hasFinding(ledger, "total-strain-used") || total.Energy.Exists() || total.MaxDensity.Exists() || total.MeanDensity.Exists() ||
		total.EnergyShare.Exists() || ledger.Regions[0].Energy.Exists() || ledger.Hotspots[0].Density.Exists() || !total.MaxEquivalentStress.Exists() {
		t.Errorf("without a law: %+v; %+v", ledger.Total, ledger.Findings)
	}
}

// A plastic part that no array explains, where an equivalent plastic strain shows that
// there is one.
func TestPlasticStrainThatNoArrayExplains(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 8)
	want := energyOf(stress, strain)
	equivalent := cellArray("equivalent plastic strain", uniform(20, 0)...)
	for i := 10; i < 13; i++ {
		strain[i][0] += 0.002
		strain[i][1] -= 0.001
		strain[i][2] -= 0.001
		equivalent.values[i] = 0.002
	}
	m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...), equivalent)
	options := solidOptions(mesh.OnCell, aluminium())
	ledger := tally(t, m, options)
	if !hasFinding(ledger, "total-strain-used") || !within(float64(ledger.Total.Energy), want, 1e-9) || ledger.Total.CellsYielded != 3 {
		t.Errorf("energy %g, want %g; yielded %v; %+v", ledger.Total.Energy, want, ledger.Total.CellsYielded, ledger.Findings)
	}
}

// A misfit of any other kind leaves ½ σ:ε as it is, and says so; one of a common factor
// says which.
func TestHookeMismatch(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 9)
	other, _ := randomStates(law, 20, 10)
	tallyOf := func(stress []mesh.SymmetricTensor, material Material) *Ledger {
		m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...))
		return tally(t, m, solidOptions(mesh.OnCell, material))
	}
	mixed := slices.Clone(stress)
	copy(mixed[5:8], other[5:8])
	ledger := tallyOf(mixed, aluminium())
	if !hasFinding(ledger, "hooke-mismatch") || !within(float64(ledger.Total.Energy), energyOf(mixed, strain), 1e-12) {
		t.Errorf("energy %g, want %g; %+v", ledger.Total.Energy, energyOf(mixed, strain), ledger.Findings)
	}
	stiff := aluminium()
	stiff.YoungsModulus = 210000
	if ledger := tallyOf(stress, stiff); !hasFinding(ledger, "hooke-mismatch") || !strings.Contains(messageOf(ledger, "hooke-mismatch"), "0.3333 times") {
		t.Errorf("another modulus: %+v", ledger.Findings)
	}
	pascal := aluminium()
	pascal.YoungsModulus = 70000e6
	if ledger := tallyOf(stress, pascal); !hasFinding(ledger, "units-suspect") || hasFinding(ledger, "hooke-mismatch") {
		t.Errorf("another unit: %+v", ledger.Findings)
	}
	psi := aluminium()
	psi.YoungsModulus = 70000 * 145.037737730
	if ledger := tallyOf(stress, psi); !hasFinding(ledger, "units-suspect") {
		t.Errorf("psi: %+v", ledger.Findings)
	}
	// Single precision is no mismatch.
	rounded := slices.Clone(stress)
	for i := range rounded {
		for c := range rounded[i] {
			rounded[i][c] = float64(float32(rounded[i][c]))
		}
	}
	limitless := aluminium()
	limitless.ProportionalLimit = math.NaN()
	if ledger := tallyOf(rounded, limitless); len(ledger.Findings) != 1 {
		t.Errorf("single precision: %+v", ledger.Findings)
	}
}

func messageOf(ledger *Ledger, code string) string {
	for _, finding := range ledger.Findings {
		if finding.Code == code {
			return finding.Message
		}
	}
	return ""
}

// D-09 (derived): plane strain read as plane stress misses by 5 %.
func TestWrongPlaneType(t *testing.T) {
	points := [][3]float64{{0, 0, 0}, {1, 0, 0}, {1, 1, 0}, {0, 1, 0}}
	for id, c := range map[string]struct {
		strain []float64
		right  Idealisation
	}{
		"T-07": {[]float64{5.076190476190476e-4, -3.590476190476190e-4, 3.714285714285714e-4 / 2}, PlaneStrain},
		"T-08": {[]float64{5.333333333333333e-4, -3.333333333333333e-4, 3.714285714285714e-4 / 2}, PlaneStress},
	} {
		m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}, arrays: []memoryArray{cellArray("stress", []float64{100, -40, 30}), cellArray("strain", c.strain)}}}}
		for _, idealisation := range []Idealisation{PlaneStrain, PlaneStress} {
			ledger := tally(t, m, Options{Idealisation: idealisation, Thickness: 1, Materials: []Material{steel()},
				Fields: Fields{Stress: stated("stress", mesh.OnCell, "xx yy xy"), Strain: stated("strain", mesh.OnCell, "xx yy xy")}})
			if hasFinding(ledger, "hooke-mismatch") != (idealisation != c.right) {
				t.Errorf("%s as %s: %+v", id, idealisation, ledger.Findings)
			}
		}
	}
}

// What the study states is obeyed; where the numbers say otherwise, that is said.
func TestStudyContradicted(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 11)
	m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...))
	for _, materials := range [][]Material{nil, {aluminium()}} {
		options := solidOptions(mesh.OnCell, materials...)
		ledger := tally(t, m, options) // states tensor shear
		if !hasFinding(ledger, "study-contradicted") || ledger.Fields.Strain.Shear != "tensor" || ledger.Fields.Strain.DecidedBy != "study" {
			t.Errorf("%+v; %+v", *ledger.Fields.Strain, ledger.Findings)
		}
		options.Fields.Strain.Shear = "engineering"
		if ledger := tally(t, m, options); hasFinding(ledger, "study-contradicted") || !within(float64(ledger.Total.Energy), energyOf(stress, strain), 1e-12) {
			t.Errorf("rightly stated: energy %g, %+v", ledger.Total.Energy, ledger.Findings)
		}
		options.Fields.Stress.Order = mesh.Order{"xx", "xy", "xz", "yy", "yz", "zz"}
		if ledger := tally(t, m, options); !hasFinding(ledger, "study-contradicted") {
			t.Errorf("a wrong order: %+v", ledger.Findings)
		}
	}
}

// D-08 (derived): nodal averages across materials conserve the sum and move energy
// between the regions; that is said, and is no mismatch of Hooke's law.
func TestPointDataAcrossRegions(t *testing.T) {
	points, cells := row(20)
	var stress, strain [][]float64
	for i := range points {
		x := i / 4
		e := 70 / 210000.
		switch {
		case x == 10:
			e = (70/210000. + 70/70000.) / 2
		case x > 10:
			e = 70 / 70000.
		}
		stress, strain = append(stress, []float64{70, 0, 0, 0, 0, 0}), append(strain, []float64{e, 0, 0, 0, 0, 0})
	}
	part := labels1("part", slices.Repeat([]float64{1}, 20)...)
	for i := 10; i < 20; i++ {
		part.values[i] = 2
	}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...), part}}}}
	first, second := steel(), aluminium()
	first.PoissonsRatio, second.PoissonsRatio = 0, 0
	options := solidOptions(mesh.OnPoint, first, second)
	options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}, Material: "steel"}, {Name: "b", Array: "part", Values: []float64{2}, Material: "aluminium"}}
	for _, workers := range []int{1, 4} {
		options.Workers, options.ChunkCells = workers, 3
		ledger := tally(t, m, options)
		if !hasFinding(ledger, "point-data-across-regions") || hasFinding(ledger, "hooke-mismatch") || !strings.Contains(messageOf(ledger, "point-data-across-regions"), "4 points") {
			t.Errorf("findings %+v", ledger.Findings)
		}
		// Of the two cells at the border, exact 0.011666667 and 0.035: 0.0175 and
		// 0.029166667, +50 % and -16.67 %, with the sum unchanged.
		if a, b := float64(ledger.Regions[0].Energy), float64(ledger.Regions[1].Energy); !within(a, 9*0.011666666666666667+0.0175, 1e-12) || !within(b, 9*0.035+0.029166666666666667, 1e-12) {
			t.Errorf("energies %.12g and %.12g", a, b)
		}
	}
}

// D-10 (derived): an asymmetric nine-component tensor is said to be one.
func TestAsymmetricTensor(t *testing.T) {
	points, cell := brick(1, 1, 1)
	s, e := stateT02, strainT2
	stress := []float64{s[0], s[3], s[5], -s[3], s[1], s[4], s[5], s[4], s[2]}
	strain := []float64{e[0], e[3], e[5], e[3], e[1], e[4], e[5], e[4], e[2]}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{cellArray("stress", stress), cellArray("strain", strain)}}}}
	options := solidOptions(mesh.OnCell, aluminium())
	options.Fields.Stress.Order, options.Fields.Strain.Order = mesh.OrderOf9, mesh.OrderOf9
	ledger := tally(t, m, options)
	if message := messageOf(ledger, "asymmetric-tensor"); !strings.Contains(message, "stress is not symmetric (by 0.478 of its size)") {
		t.Errorf("findings %+v", ledger.Findings)
	}
	m.pieces[0].arrays[0].values[3] = s[3]
	if ledger := tally(t, m, options); hasFinding(ledger, "asymmetric-tensor") {
		t.Errorf("symmetric: %+v", ledger.Findings)
	}
}

// Stress in material axes beside strain in model axes: nothing fits, so that nothing is
// decided where the energy depends on it; stated, it is a contradiction or a mismatch.
func TestStressInMaterialAxes(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	stress, strain := randomStates(law, 20, 12)
	axes, err := NewAxes([3]Vector{{math.Sqrt(3) / 2, 0.5, 0}, {-0.5, math.Sqrt(3) / 2, 0}, {0, 0, 1}})
	if err != nil {
		t.Fatal(err)
	}
	for i := range stress {
		stress[i] = axes.ToMaterial(&stress[i])
	}
	m := rowMesh(20, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...))
	var input *InputError
	if err := tallyError(t, m, Options{Materials: []Material{aluminium()}}); !errors.As(err, &input) {
		t.Errorf("error %v", err)
	}
	if ledger := tally(t, m, solidOptions(mesh.OnCell, aluminium())); !hasFinding(ledger, "hooke-mismatch") {
		t.Errorf("stated: %+v", ledger.Findings)
	}
}

// An orthotropic law in its axes: the audit tests against that law, not an isotropic one.
func TestAuditWithAnisotropicLaw(t *testing.T) {
	material := NewMaterial("lamina")
	material.YoungsModuli, material.ShearModuli, material.PoissonsRatios = &[3]float64{181000, 10300, 10300}, &[3]float64{7170, 3900, 7170}, &[3]float64{0.28, 0.3, 0.28}
	material.Axes = &[3]Vector{{0.6, 0.8, 0}, {-0.8, 0.6, 0}, {0, 0, 1}}
	law, err := material.Law()
	if err != nil {
		t.Fatal(err)
	}
	stress, strain := randomStates(law, 40, 13)
	order := mesh.Order{"xx", "yy", "zz", "xy", "xz", "yz"}
	m := rowMesh(40, cellArray("stress", storedAs(stress, order, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.EngineeringShear)...))
	ledger := tally(t, m, Options{Materials: []Material{material}})
	if !within(float64(ledger.Total.Energy), energyOf(stress, strain), 1e-9) || hasFinding(ledger, "hooke-mismatch") || ledger.Total.EnergyVolumetric.Exists() {
		t.Errorf("energy %g, want %g; %+v", ledger.Total.Energy, energyOf(stress, strain), ledger.Findings)
	}
	if ledger.Materials[0].Law != "orthotropic" || ledger.Materials[0].YoungsModuli == nil {
		t.Errorf("material %+v", ledger.Materials[0])
	}
	// The strain alone of that material, and its stress alone.
	for from, field := range map[EnergySource]string{FromStress: "stress", FromStrain: "strain"} {
		options := solidOptions(mesh.OnCell, material)
		options.From = from
		options.Fields.Stress.Order = order
		options.Fields.Strain.Shear = "engineering"
		if got := float64(tally(t, m, options).Total.Energy); !within(got, energyOf(stress, strain), 1e-9) {
			t.Errorf("from %s: energy %g, want %g", field, got, energyOf(stress, strain))
		}
	}
}

// An unloaded body keeps its plastic strain: the elastic one is rounding, there is
// nothing to decide, and nothing to report.
func TestUnloadedBody(t *testing.T) {
	strain := slices.Repeat([]mesh.SymmetricTensor{{2e-3, -1e-3, -1e-3, 5e-4}}, 10)
	stress := slices.Repeat([]mesh.SymmetricTensor{{1e-12, 0, -3e-13, 2e-13}}, 10)
	m := rowMesh(10, cellArray("stress", storedAs(stress, mesh.OrderOf6, mesh.TensorShear)...), cellArray("strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...),
		cellArray("plastic strain", storedAs(strain, mesh.OrderOf6, mesh.TensorShear)...))
	ledger := tally(t, m, Options{Materials: []Material{aluminium()}})
	if math.Abs(float64(ledger.Total.Energy)) > 1e-25 || hasFinding(ledger, "hooke-mismatch") || hasFinding(ledger, "total-strain-used") {
		t.Errorf("energy %g; %+v", ledger.Total.Energy, ledger.Findings)
	}
}

// The audit sees every region, however small, and always the same cells.
func TestSampleSpans(t *testing.T) {
	points, cells := row(2)
	count := 40000
	part := labels1("part", slices.Repeat([]float64{1}, count)...)
	part.values[31111] = 2
	big := memoryPiece{points: points, cells: slices.Repeat(cells[:1], count), arrays: []memoryArray{
		cellArray("stress", uniform(count, 1, 0, 0, 0, 0, 0)...), cellArray("strain", uniform(count, 2, 0, 0, 0, 0, 0)...), part}}
	m := &memoryMesh{pieces: []memoryPiece{big}}
	options := solidOptions(mesh.OnCell)
	options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}}, {Name: "b", Array: "part", Values: []float64{2}}}
	var first []samplePlace
	for _, workers := range []int{1, 3} {
		walk := mesh.NewWalk(m.model(), workers, 1000)
		p, err := newPlan(t.Context(), walk, m.model(), &options)
		if err != nil {
			t.Fatal(err)
		}
		sample, err := p.takeSample(t.Context(), walk, nil)
		if err != nil {
			t.Fatal(err)
		}
		seen := map[int32]int{}
		for _, place := range sample {
			seen[place.region]++
		}
		if len(sample) > samplePlaces*5/4 || len(sample) < samplePlaces/2 || seen[1] != 1 {
			t.Errorf("%d places, by region %v", len(sample), seen)
		}
		if first == nil {
			first = sample
		}
		if !slices.Equal(first, sample) {
			t.Error("another sample with other workers")
		}
		walk.Close()
	}
}
