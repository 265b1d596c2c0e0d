package energy

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"strainledger/mesh"
)

// pulledBar is the bar of S-01 under P = 10000: 500 × 20 × 10, E 210000, fixed at x = 0,
// as one cell with stress and strain, displacement, and the given force at its ends.
func pulledBar(forces string, left, right Vector) *memoryMesh {
	points, cell := brick(500, 20, 10)
	stress := []float64{50, 0, 0, 0, 0, 0}
	strain := []float64{50. / 210000, -0.3 * 50 / 210000, -0.3 * 50 / 210000, 0, 0, 0}
	var u, f [][]float64
	for _, p := range points {
		u = append(u, []float64{strain[0] * p[0], strain[1] * p[1], strain[2] * p[2]})
		at := left
		if p[0] > 0 {
			at = right
		}
		f = append(f, []float64{at[0] / 4, at[1] / 4, at[2] / 4})
	}
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", stress), cellArray("strain", strain), pointArray("displacement", u...), pointArray(forces, f...),
	}}}}
}

// balanceOf tallies a mesh that has a balance.
func balanceOf(t testing.TB, m *memoryMesh, options Options) *Balance {
	t.Helper()
	b := tally(t, m, options).Balance
	if b == nil {
		t.Fatal("no balance")
	}
	return b
}

// wantReasons demands so many reasons, each with the words given.
func wantReasons(t testing.TB, b *Balance, words ...string) {
	t.Helper()
	if len(b.Reasons) != len(words) {
		t.Errorf("reasons %q, want %d", b.Reasons, len(words))
		return
	}
	for i, word := range words {
		if !strings.Contains(b.Reasons[i], word) {
			t.Errorf("reason %q, want %q", b.Reasons[i], word)
		}
	}
}

// S-01 (Timoshenko, Strength of Materials, from memory): the load's work is P²L/2EA, and
// all of it is stored.
func TestBarIsInBalance(t *testing.T) {
	ledger := tally(t, pulledBar("ReactionForce", Vector{-10000}, Vector{10000}), solidOptions(mesh.OnCell, steel()))
	b := ledger.Balance
	if !within(float64(b.ExternalWork), 595.238095, 1e-9) || b.Stored != ledger.Total.Energy || b.Elsewhere != 0 || math.Abs(float64(b.Gap)) > 1e-14 {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b)
	used := ledger.Fields.NodalForce
	if want := (FieldUsed{Array: "ReactionForce", On: "point", DecidedBy: "default", Why: "its name says reaction and it has 3 components"}); *used != want {
		t.Errorf("field %+v", used)
	}
	if b.Source != `½ F·u of the nodal forces "ReactionForce"` || hasFinding(ledger, "balance-gap") {
		t.Errorf("source %q, findings %+v", b.Source, ledger.Findings)
	}
	text, err := json.Marshal(&Balance{ExternalWork: 4, Stored: 3, Elsewhere: 0, Gap: 0.25, Reasons: []string{}, Parts: []Elsewhere{{Name: "bolt", Energy: 1}}})
	if want := `{"external_work":4,"stored":3,"elsewhere":0,"gap":0.25,"reasons":[],"source":null,"parts":[{"name":"bolt","energy":1,"source":null}]}`; err != nil || string(text) != want {
		t.Errorf("%s (%v), want %s", text, err, want)
	}
}

// C-02 (derived): the same bar pulled by 0.2 mm, half the reaction's work: 1680, and 10 %
// more with 10 % more area.
func TestPrescribedDisplacementIsInBalance(t *testing.T) {
	b := balanceOf(t, pulledBar("f", Vector{}, Vector{}), func() Options {
		o := solidOptions(mesh.OnCell, steel())
		o.Balance.Loads = []Load{{Name: "reaction", Force: Vector{16800, 5, 0}, Displacement: Vector{0.2, 0, 7}}}
		return o
	}())
	if b.ExternalWork != 1680 || b.Source != "½ F·u of the loads that the study states" {
		t.Errorf("external work %v, want 1680", b.ExternalWork)
	}
}

// S-03 (Timoshenko, from memory): a cantilever's tip force of 1000 works along 2.8799429;
// two loads add up.
func TestStatedLoads(t *testing.T) {
	options := solidOptions(mesh.OnCell, steel())
	options.Balance.Loads = []Load{{Force: Vector{0, 1000, 0}, Displacement: Vector{0, 2.8799429, 0}}}
	if got := float64(balanceOf(t, pulledBar("f", Vector{}, Vector{}), options).ExternalWork); !within(got, 1439.971429, 1e-7) {
		t.Errorf("external work %.10g, want 1439.971429", got)
	}
	options.Balance.Loads = append(options.Balance.Loads, Load{Force: Vector{3, 0, -4}, Displacement: Vector{5, 1, 0.5}})
	if got := float64(balanceOf(t, pulledBar("f", Vector{}, Vector{}), options).ExternalWork); !within(got, 1439.97145+6.5, 1e-12) {
		t.Errorf("external work %.12g, want 1446.47145", got)
	}
}

// Any deformation of any cell under the forces that hold it: these are the derivatives of
// the energy by the displacements, taken by differences, which are exact for a
// quadratic form. Clapeyron's theorem and Euler's on homogeneous functions (derived).
func TestForcesOfAnyDeformation(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	for cellType, count := range map[mesh.CellType]int{mesh.Tetrahedron: 4, mesh.Hexahedron: 8, mesh.QuadraticTetrahedron: 10, mesh.Quad: 4, mesh.QuadraticTriangle: 6} {
		m := distorted(t, cellType, count, random, func(x, y, z float64) Vector {
			return Vector{1e-3 * random.NormFloat64(), 1e-3 * random.NormFloat64(), 1e-3 * random.NormFloat64()}
		})
		options := Options{Materials: []Material{steel()}}
		dimension := 3
		if cellType.Dimension() == 2 {
			options.Idealisation, options.Thickness, dimension = PlaneStress, 2.5, 2
		}
		piece := &m.pieces[0]
		u := piece.arrays[0].values
		force := memoryArray{name: "nodal force", on: mesh.OnPoint, components: 3, values: make([]float64, len(u))}
		for i := range u {
			if i%3 >= dimension {
				u[i] = 0
				continue
			}
			const step = 1e-3
			was := u[i]
			u[i] = was + step
			above := tally(t, m, options).Total.Energy
			u[i] = was - step
			force.values[i] = float64(above-tally(t, m, options).Total.Energy) / (2 * step)
			u[i] = was
		}
		piece.arrays = append(piece.arrays, force)
		ledger := tally(t, m, options)
		// Differences of energies lose some digits.
		if b := ledger.Balance; !(math.Abs(float64(b.Gap)) < 1e-10) || len(b.Reasons) != 0 || b.ExternalWork <= 0 {
			t.Errorf("%v: balance %+v", cellType, b)
		}
		for i := range force.values {
			force.values[i] = -force.values[i]
		}
		turned := tally(t, m, options)
		if turned.Balance.ExternalWork != ledger.Balance.ExternalWork || !strings.Contains(turned.Fields.NodalForce.Why, "opposite sign") ||
			strings.Contains(ledger.Fields.NodalForce.Why, "opposite sign") {
			t.Errorf("%v: forces with the opposite sign: work %v, %q", cellType, turned.Balance.ExternalWork, turned.Fields.NodalForce.Why)
		}
	}
}

// Forces that are not all that act on the body tell nothing, and why; those that are the
// loads by their name are taken.
func TestForcesThatAreNotAll(t *testing.T) {
	at := func(x float64) Vector { return Vector{x} }
	for _, c := range []struct {
		name        string
		left, right Vector
		work        Number
		reason      string
	}{
		{"reactions", at(-10000), Vector{}, None, "not in equilibrium (their resultant is 1 of their sizes)"},
		{"nodal_force", Vector{}, at(10000), None, "not in equilibrium"},
		{"nodal_force", at(-10000), Vector{9900, 0, 0}, None, "not in equilibrium (their resultant is 0.005 of"},
		{"nodal_force", Vector{-10000, 0, 30}, Vector{10000, 0, -30}, None, "not in equilibrium"}, // a couple of 15000 alone is left
		{"external force", Vector{}, at(10000), 595.2380952380952, "are the loads by their name"},
		{"forces", Vector{}, Vector{}, None, "every nodal force"},
		{"reaction", Vector{0, 100, 0}, Vector{0, 100, 0}, None, "not in equilibrium"},
	} {
		b := balanceOf(t, pulledBar(c.name, c.left, c.right), solidOptions(mesh.OnCell, steel()))
		if c.work.Exists() != b.ExternalWork.Exists() || c.work.Exists() && !within(float64(b.ExternalWork), float64(c.work), 1e-12) || b.Gap.Exists() != c.work.Exists() {
			t.Errorf("%s %v %v: balance %+v", c.name, c.left, c.right, b)
		}
		wantReasons(t, b, c.reason)
	}
	// What rounding leaves of balance is balance: 5e-4 of the sizes.
	if b := balanceOf(t, pulledBar("forces", at(-10000), at(10010)), solidOptions(mesh.OnCell, steel())); !b.ExternalWork.Exists() {
		t.Errorf("balance %+v", b)
	}
	// In equilibrium, and at supports that do not move.
	m := pulledBar("reactions", Vector{}, Vector{})
	m.pieces[0].arrays[2].values[3] = 0 // the point at x = 500, y = 0, z = 0 is held, too
	m.pieces[0].arrays[3].values[0], m.pieces[0].arrays[3].values[3] = -50, 50
	wantReasons(t, balanceOf(t, m, solidOptions(mesh.OnCell, steel())), "do no work")
}

// Which arrays are taken, and why none is.
func TestFindingNodalForces(t *testing.T) {
	eighth := func(m *memoryMesh, name string, left, right Vector) {
		m.pieces[0].arrays = append(m.pieces[0].arrays, pulledBar(name, left, right).pieces[0].arrays[3])
	}
	loads, reactions := Vector{10000}, Vector{-10000}
	for name, c := range map[string]struct {
		mesh   func() *memoryMesh
		change func(*Options)
		array  string // of the field; "" none
		work   Number
		reason string
		isNil  bool
	}{
		"loads and reactions add up": {mesh: func() *memoryMesh {
			m := pulledBar("reaction_force", reactions, Vector{})
			eighth(m, "AppliedForce", Vector{}, loads)
			return m
		}, array: "AppliedForce reaction_force", work: 595.2380952380952},
		"all forces before loads": {mesh: func() *memoryMesh {
			m := pulledBar("NodalForce", reactions, loads)
			eighth(m, "AppliedForce", Vector{}, Vector{7})
			return m
		}, array: "NodalForce", work: 595.2380952380952},
		"several": {mesh: func() *memoryMesh {
			m := pulledBar("reaction force a", reactions, loads)
			eighth(m, "reaction force b", reactions, loads)
			return m
		}, work: None, reason: `could be any of "reaction force a", "reaction force b"; name what belongs together in [fields] nodal_force`},
		"named": {mesh: func() *memoryMesh { return pulledBar("p", reactions, loads) },
			change: func(o *Options) { o.Fields.NodalForce.Arrays = []string{"p"} }, array: "p", work: 595.2380952380952},
		"two named": {mesh: func() *memoryMesh {
			m := pulledBar("p", reactions, Vector{})
			eighth(m, "q", Vector{}, loads)
			return m
		}, change: func(o *Options) { o.Fields.NodalForce.Arrays = []string{"p", "q"} }, array: "p q", work: 595.2380952380952},
		"component by component": {mesh: func() *memoryMesh {
			m := pulledBar("p", reactions, loads)
			for axis, name := range []string{"px", "py"} {
				one := memoryArray{name: name, on: mesh.OnPoint, components: 1}
				for i := range 8 {
					one.values = append(one.values, m.pieces[0].arrays[3].values[3*i+axis])
				}
				m.pieces[0].arrays = append(m.pieces[0].arrays, one)
			}
			return m
		}, change: func(o *Options) { o.Fields.NodalForce.Arrays = []string{"px", "py"} }, array: "px py", work: 595.2380952380952},
		"not used": {mesh: func() *memoryMesh { return pulledBar("forces", reactions, loads) },
			change: func(o *Options) { o.Fields.NodalForce.Off = true }, isNil: true},
		"named beside a stated work": {mesh: func() *memoryMesh { return pulledBar("p", reactions, loads) }, change: func(o *Options) {
			o.Fields.NodalForce.Arrays, o.Balance.ExternalWork = []string{"p"}, new(float64)
			*o.Balance.ExternalWork = 600
		}, array: "p", work: 600},
		"found beside a stated work": {mesh: func() *memoryMesh { return pulledBar("forces", reactions, loads) }, change: func(o *Options) {
			o.Balance.ExternalWork = new(float64)
			*o.Balance.ExternalWork = 600
		}, work: 600},
		"without displacement": {mesh: func() *memoryMesh {
			m := pulledBar("forces", reactions, loads)
			m.pieces[0].arrays = append(m.pieces[0].arrays[:2], m.pieces[0].arrays[3])
			return m
		}, array: "forces", work: None, reason: `the file has the nodal forces "forces" and no displacement`},
		"none": {mesh: func() *memoryMesh { return pulledBar("contact force", reactions, loads) }, isNil: true},
	} {
		t.Run(name, func(t *testing.T) {
			options := solidOptions(mesh.OnCell, steel())
			if c.change != nil {
				c.change(&options)
			}
			ledger := tally(t, c.mesh(), options)
			used := ledger.Fields.NodalForce
			if used == nil && c.array != "" || used != nil && used.Array != c.array {
				t.Errorf("field %+v, want %q", used, c.array)
			}
			b := ledger.Balance
			if (b == nil) != c.isNil {
				t.Fatalf("balance %+v", b)
			}
			if b == nil {
				return
			}
			if b.ExternalWork.Exists() != c.work.Exists() || c.work.Exists() && !within(float64(b.ExternalWork), float64(c.work), 1e-12) {
				t.Errorf("external work %v, want %v", b.ExternalWork, c.work)
			}
			if c.reason == "" {
				wantReasons(t, b)
			} else {
				wantReasons(t, b, c.reason)
			}
			if isSpare := c.array != "" && c.work == 600; isSpare != (used != nil && strings.Contains(used.Why, "not used: the study states the work of the loads")) {
				t.Errorf("field %+v", used)
			}
		})
	}
	for _, c := range []struct {
		field Field
		want  string
	}{
		{Field{Arrays: []string{"q"}}, `[fields] nodal_force: no array "q" on cells or points`},
		{Field{Arrays: []string{"p", "q"}}, `[fields] nodal_force: no array "q"`},
		{Field{Arrays: []string{"stress"}}, `[fields] nodal_force: array "stress" (6 on cells) is no vector on points`},
		{Field{Arrays: []string{"p", "stress"}}, `[fields] nodal_force: array "stress" (6 on cells) is no vector on points`},
	} {
		options := solidOptions(mesh.OnCell, steel())
		options.Fields.NodalForce = c.field
		if err := tallyError(t, pulledBar("p", reactions, loads), options); !strings.Contains(err.Error(), c.want) {
			t.Errorf("%v: %v, want %q", c.field.Arrays, err, c.want)
		}
	}
}

// A file's marks, borders of pieces, and points that are not finite: each physical point
// counts once.
func TestEachPointCountsOnce(t *testing.T) {
	bar := func() *memoryMesh { return pulledBar("forces", Vector{-10000}, Vector{10000}) }
	// pieces cuts the bar's points at x = 500 off into a second piece, with a cell each.
	pieces := func(share float64) *memoryMesh {
		m := bar()
		second := pulledBar("forces", Vector{}, Vector{10000 * share}).pieces[0]
		for i, p := range second.points {
			if p[0] > 0 {
				m.pieces[0].arrays[3].values[3*i] *= share
				continue
			}
			second.points[i][0] = 1000 // a cell beyond, unloaded
			for _, array := range second.arrays[:2] {
				clear(array.values)
			}
		}
		m.pieces = append(m.pieces, second)
		return m
	}
	marked := func() *memoryMesh {
		m := pieces(1)
		ghosts := memoryArray{name: "vtkGhostType", on: mesh.OnPoint, components: 1, isInteger: true, values: make([]float64, 8)}
		first := ghosts
		first.values = make([]float64, 8)
		for i := range 8 {
			ghosts.values[i] = float64(1 + i%2) // duplicate or hidden
			m.pieces[1].arrays[2].values[3*i] *= 1.5
		}
		m.pieces[0].arrays, m.pieces[1].arrays = append(m.pieces[0].arrays, first), append(m.pieces[1].arrays, ghosts)
		return m
	}
	for name, m := range map[string]*memoryMesh{
		"one piece":                            bar(),
		"points of two pieces, written twice":  pieces(1),
		"points of two pieces, half in either": pieces(0.5),
		"marked by the file":                   marked(),
	} {
		for _, workers := range []int{1, 3} {
			options := solidOptions(mesh.OnCell, steel())
			options.Workers = workers
			options.Regions = []Region{{Name: "all", Rest: true}}
			b := balanceOf(t, m, options)
			if !within(float64(b.ExternalWork), 595.238095, 1e-9) {
				t.Errorf("%s: balance %+v", name, b)
			}
		}
	}
	// Points of one piece count as written, also twice in one place.
	m := bar()
	piece := &m.pieces[0]
	for i := range 8 {
		piece.points = append(piece.points, piece.points[i])
		for k := 2; k < 4; k++ {
			piece.arrays[k].values = append(piece.arrays[k].values, piece.arrays[k].values[3*i:3*i+3]...)
		}
	}
	if b := balanceOf(t, m, solidOptions(mesh.OnCell, steel())); !within(float64(b.ExternalWork), 2*595.238095, 1e-9) {
		t.Errorf("doubled points: balance %+v", b)
	}
	// What is not finite is left out, and said.
	m = bar()
	m.pieces[0].arrays[3].values = append(m.pieces[0].arrays[3].values, math.NaN(), 0, 0, 1, math.Inf(1), 0)
	m.pieces[0].arrays[2].values = append(m.pieces[0].arrays[2].values, 0, 0, 0, 1, 1, 1)
	m.pieces[0].points = append(m.pieces[0].points, [3]float64{1, 1, 1}, [3]float64{1, 1, 1})
	b := balanceOf(t, m, solidOptions(mesh.OnCell, steel()))
	wantReasons(t, b, "2 points have a nodal force or displacement that is not finite")
	if !within(float64(b.ExternalWork), 595.238095, 1e-9) {
		t.Errorf("balance %+v", b)
	}
}

// Border points of structured pieces count in the first.
func TestBorderPointsOfGridsCountOnce(t *testing.T) {
	m := pulledBar("forces", Vector{-10000}, Vector{10000})
	m.pieces = append(m.pieces, pulledBar("forces", Vector{-10000}, Vector{10000}).pieces[0])
	model := m.model()
	model.Pieces[1].Grid = &mesh.Grid{Extent: mesh.Extent{0, 1, 0, 1, 0, 1}, Earlier: []mesh.Extent{{0, 1, 0, 1, 0, 1}}}
	walk := mesh.NewWalk(model, 1, 0)
	p := &plan{model: model, options: &Options{}, inputs: &inputs{
		displacement: vectorInput{names: []string{"displacement"}, components: 3},
		nodalForce:   nodalForces{fields: []vectorInput{{names: []string{"forces"}, components: 3}}},
	}}
	for _, isShifted := range []bool{false, true} {
		if isShifted { // so that the copies are not the same to the last bit
			m.pieces[1].arrays[2].values[3] *= 2
		}
		once, written, err := p.sumForces(t.Context(), walk)
		if err != nil {
			t.Fatal(err)
		}
		for _, sums := range []*forceSums{once, written} {
			if got := sums.work.Float64() / 2; !within(got, 595.238095, 1e-9) {
				t.Errorf("work %.9g, want 595.238095", got)
			}
		}
	}
}

// stretched is one cube of stress and strain along x whose energy is ½ σε, with further
// arrays.
func stretched(stress, strain float64, more ...memoryArray) *memoryMesh {
	points, cells := row(1)
	arrays := append([]memoryArray{cellArray("stress", []float64{stress, 0, 0, 0, 0, 0}), cellArray("strain", []float64{strain, 0, 0, 0, 0, 0})}, more...)
	return &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: arrays}}}
}

// withWork states the external work.
func withWork(options Options, work float64) Options {
	options.Balance.ExternalWork = &work
	return options
}

// The gap from which on it is reported, by how the energy was sampled. S-16 (contact
// mechanics, from memory): for a growing contact ½ F·d is a trap, 6.4155749 where
// 5.1324599 are stored.
func TestBalanceGap(t *testing.T) {
	onCells := solidOptions(mesh.OnCell)
	byDisplacement := Options{Materials: []Material{steel()}}
	bar := pulledBar("unused", Vector{}, Vector{})
	for _, c := range []struct {
		name     string
		mesh     *memoryMesh
		options  Options
		stored   float64
		work     float64
		severity string // of balance-gap; "" none
	}{
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100, ""},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 0.8501, ""},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 0.8499, Warning},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 1.1499, ""},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 1.1501, Warning},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 0.5001, Warning},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, 100 / 0.4999, Error},
		{"cell data", stretched(2e6, 1e-4), onCells, 100, -100, Error},
		{"displacement", bar, byDisplacement, 595.2380952380952, 595.2380952380952 / 0.9801, ""},
		{"displacement", bar, byDisplacement, 595.2380952380952, 595.2380952380952 / 0.9799, Warning},
		{"S-16, 2/5 F d", stretched(1.02649198e5, 1e-4), onCells, 5.1324599, 5.1324599, ""},
		{"S-16, 1/2 F d", stretched(1.02649198e5, 1e-4), onCells, 5.1324599, 6.4155749, Warning},
	} {
		if strings.HasPrefix(c.name, "displacement") {
			c.mesh = &memoryMesh{pieces: []memoryPiece{{points: bar.pieces[0].points, cells: bar.pieces[0].cells, arrays: bar.pieces[0].arrays[2:3]}}}
		}
		ledger := tally(t, c.mesh, withWork(c.options, c.work))
		b := ledger.Balance
		if !within(float64(b.Stored), c.stored, 1e-12) || float64(b.ExternalWork) != c.work || !within(float64(1-b.Gap), c.stored/c.work, 1e-12) {
			t.Errorf("%s: balance %+v", c.name, b)
		}
		severity := ""
		for _, finding := range ledger.Findings {
			if finding.Code == "balance-gap" {
				severity = finding.Severity
			}
		}
		if severity != c.severity {
			t.Errorf("%s, gap %.4g: severity %q, want %q", c.name, float64(b.Gap), severity, c.severity)
		}
	}
	if text := messageOf(tally(t, stretched(2e6, 1e-4), withWork(onCells, 250)), "balance-gap"); !strings.Contains(text, "work of the loads is 250 and the energy found 100, a gap of 60 %; look for energy in what has no cells") {
		t.Error(text)
	}
	if text := messageOf(tally(t, stretched(2e6, 1e-4), withWork(onCells, 50)), "balance-gap"); !strings.Contains(text, "a gap of -100 %; look for a load or a moved support") {
		t.Error(text)
	}
	// A finding of severity error can be accepted, and stands else.
	options := withWork(onCells, 250)
	options.Acceptances = []Acceptance{{"balance-gap", "springs"}}
	ledger := tally(t, stretched(2e6, 1e-4), options)
	for _, finding := range ledger.Findings {
		if finding.Code == "balance-gap" && finding.Accepted != "springs" {
			t.Errorf("finding %+v", finding)
		}
	}
	if !IsErrorFinding("balance-gap") || !IsErrorFinding("parts-not-accounted") || IsErrorFinding("large-strain") {
		t.Error("severities")
	}
}

// Results at integration points follow the solution as a displacement does.
func TestSampledClosely(t *testing.T) {
	at := func(on string) *FieldUsed { return &FieldUsed{On: on} }
	for _, c := range []struct {
		from EnergySource
		used FieldsUsed
		want bool
	}{
		{FromDisplacement, FieldsUsed{}, true},
		{FromStressStrain, FieldsUsed{Stress: at("integration"), Strain: at("integration")}, true},
		{FromStrain, FieldsUsed{Strain: at("integration")}, true},
		{FromStressStrain, FieldsUsed{Stress: at("cell"), Strain: at("cell")}, false},
		{FromStress, FieldsUsed{Stress: at("point")}, false},
	} {
		p := &plan{from: c.from, inputs: &inputs{used: c.used}}
		if p.isSampledClosely() != c.want {
			t.Errorf("from %s of %+v: %v", c.from, c.used, !c.want)
		}
	}
}

// Forces for one radian: the ring stores 2π times their work.
func TestGapOfARadian(t *testing.T) {
	points := [][3]float64{{10, 0, 0}, {20, 0, 0}, {20, 5, 0}, {10, 5, 0}}
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}, arrays: []memoryArray{
		cellArray("stress", []float64{1, 0, 0, 0}), cellArray("strain", []float64{2, 0, 0, 0}),
	}}}}
	options := Options{Idealisation: Axisymmetric, Length: "mm", Stress: "MPa", Fields: Fields{
		Stress: stated("stress", mesh.OnCell, "xx yy zz xy"), Strain: stated("strain", mesh.OnCell, "xx yy zz xy"),
	}}
	if text := messageOf(tally(t, m, withWork(options, 15*10*5)), "balance-gap"); !strings.Contains(text, "look for forces for one radian") {
		t.Error(text)
	}
	if text := messageOf(tally(t, m, withWork(options, 15*10*5*2)), "balance-gap"); strings.Contains(text, "radian") {
		t.Error(text)
	}
}

// Of a ring the forces along the axis alone have to balance.
func TestForcesOnARing(t *testing.T) {
	for _, axisX := range []bool{false, true} {
		radial, axial := 0, 1
		points := [][3]float64{{10, 0, 0}, {20, 0, 0}, {20, 5, 0}, {10, 5, 0}}
		if axisX {
			radial, axial = 1, 0
			points = [][3]float64{{0, 10, 0}, {5, 10, 0}, {5, 20, 0}, {0, 20, 0}}
		}
		for _, c := range []struct {
			up   float64
			want bool
		}{{0, true}, {1e-3, true}, {0.1, false}} {
			var u, f [][]float64
			for range 4 {
				move, force := make([]float64, 3), make([]float64, 3)
				move[radial], force[radial] = 1e-3, 100
				u, f = append(u, move), append(f, force)
			}
			f[2][axial], f[3][axial] = c.up*100, 0
			m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{{mesh.Quad, []int32{0, 1, 2, 3}}}, arrays: []memoryArray{
				pointArray("displacement", u...), pointArray("nodal force", f...),
			}}}}
			options := Options{Idealisation: Axisymmetric, AxisX: axisX, Materials: []Material{steel()}}
			b := balanceOf(t, m, options)
			if b.ExternalWork.Exists() != c.want || c.want && !within(float64(b.ExternalWork), 0.2, 1e-12) {
				t.Errorf("axis x %v, %g along it: balance %+v", axisX, c.up, b)
			}
		}
	}
}

// What is held elsewhere enters the balance and nothing else, and repeats do not.
func TestElsewhere(t *testing.T) {
	options := withWork(solidOptions(mesh.OnCell), 125)
	options.Elsewhere = []Elsewhere{{"bolts", 20, "hand calculation 7"}, {"spring", 4, ""}}
	options.Repeats = 4
	ledger := tally(t, stretched(2e6, 1e-4), options)
	b := ledger.Balance
	if b.Elsewhere != 24 || b.Stored != 100 || !within(float64(b.Gap), 1./125, 1e-14) || ledger.Total.Energy != 100 || ledger.Repeated.Energy != 400 {
		t.Errorf("balance %+v, total %v", b, ledger.Total.Energy)
	}
	if len(b.Parts) != 2 || b.Parts[0] != options.Elsewhere[0] || b.Parts[1] != options.Elsewhere[1] || b.Source != "stated by the study" {
		t.Errorf("parts %+v", b.Parts)
	}
	options.Balance.ExternalWork = nil
	b = balanceOf(t, stretched(2e6, 1e-4), options)
	if b.Elsewhere != 24 || b.ExternalWork.Exists() || b.Gap.Exists() || b.Source != "" {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b, "the external work is not known: the file has no nodal forces")
	options.Elsewhere = nil
	if b := tally(t, stretched(2e6, 1e-4), options).Balance; b != nil {
		t.Errorf("balance %+v where nothing is known of the external work", b)
	}
}

// Work and energy that are not equal by nature: no gap, and why.
func TestUnequalByNature(t *testing.T) {
	warm := steel()
	warm.ThermalExpansion, warm.ReferenceTemperature = 1e-5, 20
	law := isotropic(t, 210000, 0.3)
	e := law.Strain(&mesh.SymmetricTensor{210})
	elastic := cellArray("strain", e[:])
	heated := func(more ...memoryArray) *memoryMesh {
		m := stretched(210, 0, more...)
		m.pieces[0].arrays[1] = elastic
		return m
	}
	total := func(offset float64, more ...memoryArray) *memoryMesh {
		m := heated(more...)
		sum := []float64{e[0] + offset, e[1] + offset, e[2] + offset, 0, 0, 0}
		m.pieces[0].arrays[1] = cellArray("strain", sum)
		return m
	}
	plastic := func(size float64) *memoryMesh {
		m := heated(cellArray("plastic strain", []float64{size, -size / 2, -size / 2, 0, 0, 0}))
		m.pieces[0].arrays[1] = cellArray("strain", []float64{e[0] + size, e[1] - size/2, e[2] - size/2, 0, 0, 0})
		return m
	}
	scalar := func(name string, value float64) memoryArray { return cellArray(name, []float64{value}) }
	isElastic := func(o *Options) { o.Fields.Strain.Kind = "elastic" }
	for name, c := range map[string]struct {
		mesh    *memoryMesh
		change  func(*Options)
		reasons []string
	}{
		"elastic":                           {heated(), nil, nil},
		"thermal strain":                    {total(1e-3, cellArray("thermal strain", []float64{1e-3, 1e-3, 1e-3, 0, 0, 0})), nil, []string{"thermal strain"}},
		"thermal strain of 0":               {heated(cellArray("thermal strain", make([]float64, 6))), nil, nil},
		"temperature":                       {total(1e-3, scalar("temperature", 120)), nil, []string{"thermal strain"}},
		"temperature at its reference":      {heated(scalar("temperature", 20)), nil, nil},
		"temperature, elastic strain":       {heated(scalar("temperature", 120)), isElastic, []string{"thermal strain"}},
		"thermal strain beside elastic":     {heated(cellArray("thermal strain", []float64{1e-3, 1e-3, 1e-3, 0, 0, 0})), isElastic, []string{"thermal strain"}},
		"temperature that is not used":      {heated(scalar("temperature", 120)), func(o *Options) { isElastic(o); o.Fields.Temperature.Off = true }, nil},
		"plastic strain":                    {plastic(1e-3), nil, []string{"plastic strain"}},
		"plastic strain that is rounding":   {plastic(1e-13), nil, nil},
		"equivalent plastic strain":         {heated(scalar("equivalent plastic strain", 1e-3)), isElastic, []string{"plastic strain"}},
		"offset that no array explains":     {total(1e-3), nil, []string{"a part that is not elastic and that no array explains"}},
		"the same, obeyed":                  {total(1e-3), func(o *Options) { o.From = FromStressStrain }, []string{"a part that is not elastic and that no array explains"}},
		"deformed points, which may matter": {heated(), func(o *Options) { o.Deformed = true }, []string{"+the points are in the deformed position"}},
	} {
		t.Run(name, func(t *testing.T) {
			options := withWork(solidOptions(mesh.OnCell, warm), 0.105)
			if c.change != nil {
				c.change(&options)
			}
			ledger := tally(t, c.mesh, options)
			b := ledger.Balance
			isEqual := len(c.reasons) == 0 || strings.HasPrefix(c.reasons[0], "+")
			if b.ExternalWork != 0.105 || b.Gap.Exists() != isEqual || isEqual && math.Abs(float64(b.Gap)) > 1e-9 {
				t.Errorf("balance %+v", b)
			}
			for i := range c.reasons {
				c.reasons[i] = strings.TrimPrefix(c.reasons[i], "+")
			}
			wantReasons(t, b, c.reasons...)
			// ½ F·u is no external work then.
			options.Balance = BalanceOptions{Loads: []Load{{Force: Vector{2.1}, Displacement: Vector{0.1}}}}
			b = balanceOf(t, c.mesh, options)
			if b.ExternalWork.Exists() != isEqual {
				t.Errorf("stated loads: balance %+v", b)
			}
			if !isEqual {
				wantReasons(t, b, append(c.reasons, "½ F·u is then not the external work")...)
			}
		})
	}
}

// Without the material's law an offset of the strain leaves the stored energy unknown;
// without external work there is nothing to divide by.
func TestBalanceWithoutNumbers(t *testing.T) {
	var stress, strain [][]float64
	law := isotropic(t, 210000, 0.3)
	random := rand.New(rand.NewPCG(5, 6))
	for range 20 {
		s := mesh.SymmetricTensor{100 * random.NormFloat64(), 100 * random.NormFloat64(), 100 * random.NormFloat64(), 50 * random.NormFloat64(), 30 * random.NormFloat64(), 1}
		e := law.Strain(&s)
		e[0], e[1], e[2] = e[0]+1e-3, e[1]+1e-3, e[2]+1e-3
		stress, strain = append(stress, s[:]), append(strain, e[:])
	}
	m := rowMesh(20, cellArray("stress", stress...), cellArray("strain", strain...))
	b := balanceOf(t, m, withWork(solidOptions(mesh.OnCell), 7))
	if b.ExternalWork != 7 || b.Stored.Exists() || b.Gap.Exists() {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b, "a part that is not elastic", "the stored energy cannot be told")

	b = balanceOf(t, stretched(2e6, 1e-4), withWork(solidOptions(mesh.OnCell), 0))
	if b.ExternalWork != 0 || b.Stored != 100 || b.Gap.Exists() {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b, "the external work is 0")
}

// Nothing loaded and nothing stored: the external work is 0.
func TestUnloadedBodyInBalance(t *testing.T) {
	m := pulledBar("forces", Vector{}, Vector{})
	clear(m.pieces[0].arrays[0].values)
	clear(m.pieces[0].arrays[1].values)
	b := balanceOf(t, m, solidOptions(mesh.OnCell, steel()))
	if b.ExternalWork != 0 || b.Stored != 0 || b.Gap.Exists() {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b, "the external work is 0")
}

// Cells in no account are reasons for a gap.
func TestReasonsOfTheMesh(t *testing.T) {
	m := stretched(2e6, 1e-4)
	piece := &m.pieces[0]
	piece.points = append(piece.points, [3]float64{9, 9, 9})
	piece.cells = append(piece.cells, memoryCell{mesh.Tetrahedron, []int32{0, 1, 2, 3}}, memoryCell{mesh.Line, []int32{0, 8}})
	for i := range piece.arrays {
		piece.arrays[i].values = append(piece.arrays[i].values, make([]float64, 12)...)
	}
	b := balanceOf(t, m, withWork(solidOptions(mesh.OnCell), 125))
	if !within(float64(b.Gap), 0.2, 1e-12) {
		t.Errorf("balance %+v", b)
	}
	wantReasons(t, b, "1 lines that are no edges of solid cells: what they hold is in no account", "1 cells are left out as degenerate")
}

// A requirement on the gap bounds its size, whichever sign it has.
func TestRequirementsOnTheBalance(t *testing.T) {
	for _, c := range []struct {
		work        float64
		quantity    string
		most, least Number
		value       Number
		met         bool
		why         string
	}{
		{100 / 0.99, "balance.gap", 0.0101, None, 0.01, true, ""},
		{100 / 0.99, "balance.gap", 0.0099, None, 0.01, false, ""},
		{100 / 1.01, "balance.gap", 0.0101, None, -0.01, true, ""},
		{100 / 1.01, "balance.gap", 0.0099, None, -0.01, false, "bounds the size of the gap"},
		{100 / 1.01, "balance.gap", None, -0.0101, -0.01, true, ""},
		{100 / 1.01, "balance.gap", None, -0.0099, -0.01, false, ""},
		{100, "balance.stored", 100, None, 100, true, ""},
		{100, "balance.external_work", 99, None, 100, false, ""},
		{0, "balance.gap", 0.02, None, None, false, "gap of the balance is not available: the external work is 0"},
	} {
		options := withWork(solidOptions(mesh.OnCell), c.work)
		options.Requirements = []Requirement{{Name: "r", Quantity: c.quantity, AtMost: c.most, AtLeast: c.least}}
		got := tally(t, stretched(2e6, 1e-4), options).Requirements[0]
		isSame := !c.value.Exists() && !got.Value.Exists() || within(float64(got.Value), float64(c.value), 1e-12)
		if !isSame || got.Met != c.met || !strings.Contains(string(got.Why), c.why) || c.why == "" && got.Why != "" {
			t.Errorf("%+v: value %v, met %v, why %q", c, got.Value, got.Met, got.Why)
		}
	}
	options := solidOptions(mesh.OnCell)
	options.Requirements = []Requirement{{Name: "r", Quantity: "balance.gap", AtMost: 1, AtLeast: None}}
	if got := tally(t, stretched(2e6, 1e-4), options).Requirements[0]; got.Met || !strings.Contains(string(got.Why), "nothing is known of the external work") {
		t.Errorf("no balance: %+v", got)
	}
	for _, quantity := range []string{"balance.", "balance.reasons", "balance.source", "balance.gaps"} {
		if CheckQuantity(quantity) == nil {
			t.Errorf("%s is taken for a number", quantity)
		}
	}
}
