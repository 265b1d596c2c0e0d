package energy

import (
	"math"
	"slices"
	"strings"
	"testing"

	"strainledger/mesh"
)

// ballOptions are those of a grid whose balls have a radius.
func ballOptions(radius float64) Options {
	options := planeOptions(0.2)
	options.Hotspots.Radius = radius
	return options
}

// A density that is the same everywhere is the mean of any ball. The ball's volume is that
// of a disc of the thickness, as far as the mesh goes: whole, half at an edge, a quarter at
// a corner.
func TestBallOfEvenDensity(t *testing.T) {
	even := make([]float64, 400)
	for i := range even {
		even[i] = 3
	}
	m := (&densityGrid{20, even}).mesh(inOrder(400), 150)
	for _, c := range []struct {
		centre Vector
		radius float64
		share  float64
	}{
		{Vector{10, 10, 0}, 4.3, 1}, {Vector{9.5, 8.25, 0}, 6, 1}, {Vector{0, 10, 7}, 5, 0.5}, {Vector{20, 0, 0}, 5, 0.25},
		{Vector{10.1, 10.2, 0}, 0.7, 1}, {Vector{10, 10, 0}, 40, 400 / (math.Pi * 1600)},
	} {
		options := ballOptions(c.radius)
		options.Hotspots.Centre, options.Thickness = &c.centre, 2
		got := tally(t, m, options).AtCentre
		if got.At != c.centre || got.BallRadius != Number(c.radius) || !within(float64(got.AveragedDensity), 3, 1e-14) {
			t.Errorf("at %v within %g: %+v", c.centre, c.radius, got)
		}
		// The rest is what 12 × 12 points in each cut cell leave.
		if want := 2 * c.share * math.Pi * c.radius * c.radius; !within(float64(got.BallVolume), want, 0.01) {
			t.Errorf("at %v within %g: volume %g, want %g", c.centre, c.radius, got.BallVolume, want)
		}
	}
	options := ballOptions(1)
	options.Hotspots.Centre = &Vector{30, 30, 0}
	if got := tally(t, m, options).AtCentre; got.AveragedDensity.Exists() || got.BallVolume != 0 || got.BallCells != 0 {
		t.Errorf("a ball outside the mesh: %+v", got)
	}
}

// The mean is that of energy over volume, not of the cells' densities.
func TestBallOfUnevenDensity(t *testing.T) {
	m := (&densityGrid{4, []float64{1, 9, 2, 1, 3, 1, 1, 1}}).mesh(inOrder(8), 8)
	options := ballOptions(1.0001) // the nodes of no cell but the upper halves of the middle ones
	options.Hotspots.Centre = &Vector{2, 1, 0}
	got := tally(t, m, options).AtCentre
	// Four quarters of a disc, in cells of density 9, 2, 1, 1.
	if !within(float64(got.AveragedDensity), (9+2+1+1)/4., 1e-12) || !within(float64(got.BallVolume), math.Pi, 0.01) || got.BallCells != 4 {
		t.Errorf("%+v", got)
	}
	// The first hotspot's ball is about the centroid of its peak's cell.
	first := &tally(t, m, ballOptions(0.45)).Hotspots[0]
	if first.AveragedDensity != 9 || first.BallCells != 1 || !within(float64(first.BallVolume), math.Pi*0.45*0.45, 0.02) {
		t.Errorf("within the peak's cell: %+v", first)
	}
	// The whole mesh: energy 19 in 8.
	first = &tally(t, m, ballOptions(10)).Hotspots[0]
	if !within(float64(first.AveragedDensity), 19./8, 1e-14) || first.BallVolume != 8 {
		t.Errorf("the whole mesh: %+v", first)
	}
}

// A ball about a hotspot holds cells of its material alone, one about the study's centre
// all.
func TestBallsKeepToTheMaterial(t *testing.T) {
	m := (&densityGrid{2, []float64{4, 4, 4, 4, 1, 1}}).mesh(inOrder(6), 6)
	options := ballOptions(5)
	other := options.Materials[0]
	other.Name = "other"
	options.Materials = append(options.Materials, other)
	options.Regions = []Region{
		{Name: "low", Box: &Box{Vector{0, 0, 0}, Vector{2, 1, 0}}, Material: "sheet"},
		{Name: "middle", Box: &Box{Vector{0, 1, 0}, Vector{2, 2, 0}}, Material: "sheet"},
		{Name: "top", Rest: true, Material: "other"},
	}
	options.Hotspots.Centre = &Vector{1, 1, 0}
	ledger := tally(t, m, options)
	for i, want := range []float64{4, 4, 1} { // two regions of one material, one of the other
		if got := ledger.Hotspots[i]; float64(got.AveragedDensity) != want || got.BallVolume != []Number{4, 4, 2}[i] {
			t.Errorf("hotspot %d: %g over %g, want %g", i+1, got.AveragedDensity, got.BallVolume, want)
		}
	}
	if got := ledger.AtCentre; got.AveragedDensity != 3 || got.BallVolume != 6 {
		t.Errorf("about the centre: %+v", got)
	}
}

// A ball in space, and a ring: the volume of the section times the way of its centroid
// (Pappus).
func TestBallsInSpaceAndRings(t *testing.T) {
	var piece memoryPiece
	const n = 8
	at := func(x, y, z int) int32 { return int32(x + (n+1)*(y+(n+1)*z)) }
	for z := range n + 1 {
		for y := range n + 1 {
			for x := range n + 1 {
				piece.points = append(piece.points, [3]float64{float64(x), float64(y), float64(z)})
			}
		}
	}
	for i := range n * n * n {
		x, y, z := i%n, i/n%n, i/n/n
		piece.cells = append(piece.cells, memoryCell{mesh.Hexahedron, []int32{
			at(x, y, z), at(x+1, y, z), at(x+1, y+1, z), at(x, y+1, z), at(x, y, z+1), at(x+1, y, z+1), at(x+1, y+1, z+1), at(x, y+1, z+1),
		}})
	}
	tension := []float64{100, 0, 0, 0, 0, 0}
	strain := []float64{100. / 210000, -30. / 210000, -30. / 210000, 0, 0, 0}
	piece.arrays = []memoryArray{cellArray("stress", uniform(n*n*n, tension...)...), cellArray("strain", uniform(n*n*n, strain...)...)}
	solid := solidOptions(mesh.OnCell, steel())
	solid.Hotspots.Radius, solid.Hotspots.Centre = 3, &Vector{4, 4, 4}
	got := tally(t, &memoryMesh{pieces: []memoryPiece{piece}}, solid).AtCentre
	if want := 4. / 3 * math.Pi * 27; !within(float64(got.BallVolume), want, 0.02) || !within(float64(got.AveragedDensity), 100*100/(2*210000.), 1e-12) {
		t.Errorf("in space: %+v, want a volume of %g", got, want)
	}
	even := make([]float64, 100)
	for i := range even {
		even[i] = 1
	}
	for _, axisX := range []bool{false, true} {
		m := (&densityGrid{10, even}).mesh(inOrder(100), 100)
		for i := range m.pieces[0].points {
			m.pieces[0].points[i][0] += 2
		}
		ring := ballOptions(2.5)
		ring.Idealisation, ring.Thickness, ring.AxisX = Axisymmetric, 0, axisX
		ring.Hotspots.Centre = &Vector{7, 4, 0}
		got := tally(t, m, ring).AtCentre
		radius := 7.
		if axisX {
			radius = 4
		}
		if want := 2 * math.Pi * radius * math.Pi * 2.5 * 2.5; !within(float64(got.BallVolume), want, 0.005) || !within(float64(got.AveragedDensity), 1, 1e-14) {
			t.Errorf("ring about x %v: %+v, want a volume of %g", axisX, got, want)
		}
	}
}

// Where the fields vary within cells, so does the density that is averaged: on points, at
// integration points, and from the displacement. σ = x and ε = y make w = xy/2, whose mean
// over a disc is that of its centre.
func TestBallsAcrossCells(t *testing.T) {
	const n = 12
	g := &densityGrid{n, make([]float64, n*n)}
	m := g.mesh(inOrder(n*n), n*n)
	piece := &m.pieces[0]
	var stress, strain [][]float64
	for _, p := range piece.points {
		stress, strain = append(stress, []float64{p[0], 0, 0, 0}), append(strain, []float64{p[1], 0, 0, 0})
	}
	options := ballOptions(3.3)
	options.Fields = Fields{Stress: stated("stress", mesh.OnPoint, "xx yy zz xy"), Strain: stated("strain", mesh.OnPoint, "xx yy zz xy")}
	options.Hotspots.Centre = &Vector{5.2, 6.1, 0}
	piece.arrays = []memoryArray{pointArray("stress", stress...), pointArray("strain", strain...)}
	if got := tally(t, m, options).AtCentre; !within(float64(got.AveragedDensity), 5.2*6.1/2, 2e-3) {
		t.Errorf("on points: %g, want %g", got.AveragedDensity, 5.2*6.1/2)
	}
	// Four points a cell are few at the rim of the disc.
	var atPoints, strainAtPoints []float64
	for i := range n * n {
		for _, q := range [][2]float64{{0, 0}, {1, 0}, {0, 1}, {1, 1}} {
			const gauss = 0.57735026918962576
			x, y := float64(i%n)+0.5+(q[0]-0.5)*gauss, float64(i/n)+0.5+(q[1]-0.5)*gauss
			atPoints, strainAtPoints = append(atPoints, x, 0, 0, 0), append(strainAtPoints, y, 0, 0, 0)
		}
	}
	piece.arrays = []memoryArray{
		{name: "stress", on: mesh.OnCell, components: 16, values: atPoints}, {name: "strain", on: mesh.OnCell, components: 16, values: strainAtPoints},
	}
	options.Fields.Stress, options.Fields.Strain = stated("stress", mesh.OnCell, "xx yy zz xy"), stated("strain", mesh.OnCell, "xx yy zz xy")
	for _, field := range []*Field{&options.Fields.Stress, &options.Fields.Strain} {
		field.Integration, field.Rule = true, "gauss 2x2"
	}
	if got := tally(t, m, options).AtCentre; !within(float64(got.AveragedDensity), 5.2*6.1/2, 2e-2) {
		t.Errorf("at integration points: %g, want %g", got.AveragedDensity, 5.2*6.1/2)
	}
	// u_x = x²/2 has the strain x, at the points of quadratic cells: w = E x²/2 under plane
	// strain with ν = 0, whose mean over a disc is E (x² + R²/4)/2.
	quadratic := &memoryMesh{pieces: []memoryPiece{{}}}
	var displacement [][]float64
	for i := range n * n {
		x, y := float64(i%n), float64(i/n)
		for _, p := range [][2]float64{{0, 0}, {1, 0}, {1, 1}, {0, 1}, {0.5, 0}, {1, 0.5}, {0.5, 1}, {0, 0.5}} {
			at := [3]float64{x + p[0], y + p[1], 0}
			quadratic.pieces[0].points = append(quadratic.pieces[0].points, at)
			displacement = append(displacement, []float64{at[0] * at[0] / 2, 0, 0})
		}
		first := int32(8 * i)
		quadratic.pieces[0].cells = append(quadratic.pieces[0].cells, memoryCell{mesh.QuadraticQuad, []int32{first, first + 1, first + 2, first + 3, first + 4, first + 5, first + 6, first + 7}})
	}
	quadratic.pieces[0].arrays = []memoryArray{pointArray("displacement", displacement...)}
	elastic := NewMaterial("elastic")
	elastic.YoungsModulus, elastic.PoissonsRatio = 2, 0
	options = Options{Idealisation: PlaneStrain, Materials: []Material{elastic}, Hotspots: options.Hotspots}
	if got, want := tally(t, quadratic, options).AtCentre, 5.2*5.2+3.3*3.3/4; !within(float64(got.AveragedDensity), want, 2e-3) {
		t.Errorf("from the displacement: %g, want %g", got.AveragedDensity, want)
	}
}

// A cell without shape functions is in a ball when its centroid is.
func TestPolygonsInABall(t *testing.T) {
	m := (&densityGrid{4, []float64{1, 2, 3, 4}}).mesh(inOrder(4), 4)
	for i := range m.pieces[0].cells {
		m.pieces[0].cells[i].cellType = mesh.Polygon
	}
	options := ballOptions(1)
	options.Hotspots.Centre = &Vector{1, 0.5, 0}
	if got := tally(t, m, options).AtCentre; got.BallVolume != 2 || got.AveragedDensity != 1.5 || got.BallCells != 2 {
		t.Errorf("%+v", got)
	}
}

// Neither the number of workers nor the length of chunks, nor which chunks are read
// again, is seen in the numbers.
func TestBallsDoNotDependOnTheSchedule(t *testing.T) {
	g := &densityGrid{30, make([]float64, 900)}
	for i := range g.densities {
		x, y := float64(i%30)-7.3, float64(i/30)-11.6
		g.densities[i] = 1/math.Hypot(x, y) + 0.5/math.Hypot(x-15, y-3)
	}
	m := g.mesh(inOrder(900), 250)
	first := ""
	for _, workers := range []int{1, 2, 8} {
		for _, chunk := range []int{7, 100, 8192} {
			options := ballOptions(6.5)
			options.Workers, options.ChunkCells, options.Hotspots.Centre = workers, chunk, &Vector{7.3, 11.6, 0}
			ledger := tally(t, m, options)
			got := asJSON(t, ledger.Hotspots) + asJSON(t, ledger.AtCentre)
			if first == "" {
				first = got
			}
			if got != first {
				t.Fatalf("%d workers, chunks of %d: %s, want %s", workers, chunk, got, first)
			}
		}
	}
}

// brittle is a material with a control radius, by the data of N-04b (Seles et al. 2022):
// K_c 1.207 MPa √m, s_t 59.76 MPa, ν 0.374.
func brittle() Material {
	m := NewMaterial("resin")
	m.YoungsModulus, m.PoissonsRatio = 3204.3, 0.374
	m.FractureToughness, m.TensileStrength = 1.207*math.Sqrt(1000), 59.76
	return m
}

// The averaged-density ratio: N-04b for the control radius in plane stress and strain,
// W_c = s_t²/2E; stated values win.
func TestAveragedDensityRatio(t *testing.T) {
	m := (&densityGrid{3, []float64{1, 5, 1, 1, 1, 1}}).mesh(inOrder(6), 6)
	options := planeOptions(0.2)
	options.Materials = []Material{brittle()}
	critical := 59.76 * 59.76 / (2 * 3204.3)
	ledger := tally(t, m, options)
	first := ledger.Hotspots[0]
	for name, c := range map[string]struct {
		got  Number
		want float64
	}{
		"control radius": {first.ControlRadius, 0.1258900}, "control density": {first.ControlDensity, 5},
		"ratio": {first.AveragedDensityRatio, 5 / critical}, "control volume": {first.ControlVolume, math.Pi * 0.12589 * 0.12589},
		"radius of the material": {ledger.Materials[0].ControlRadius, 0.1258900}, "critical density of the material": {ledger.Materials[0].CriticalDensity, critical},
		"toughness of the material": {ledger.Materials[0].FractureToughness, 1.207 * math.Sqrt(1000)}, "strength of the material": {ledger.Materials[0].TensileStrength, 59.76},
	} {
		// The volume is by some points of one cell.
		if tolerance := map[bool]float64{true: 0.3, false: 1e-6}[name == "control volume"]; !within(float64(c.got), c.want, tolerance) {
			t.Errorf("%s: %.8g, want %.8g", name, c.got, c.want)
		}
	}
	if first.BallRadius.Exists() || first.AveragedDensity.Exists() || first.Singular != "" || ledger.AtCentre != nil {
		t.Errorf("without a radius: %+v", first)
	}
	if !hasFinding(ledger, "averaged-density") {
		t.Error("nothing is said of what the ratio stands on")
	}
	options.Materials[0].ControlRadius, options.Materials[0].CriticalDensity = 10, 0.5
	options.Hotspots.Radius, options.Hotspots.Centre = 0.3, &Vector{0.5, 0.5, 0}
	ledger = tally(t, m, options)
	first = ledger.Hotspots[0]
	if first.ControlRadius != 10 || !within(float64(first.ControlDensity), 10./6, 1e-14) || !within(float64(first.AveragedDensityRatio), 10./6/0.5, 1e-14) || !within(float64(first.AveragedDensity), 5, 1e-14) {
		t.Errorf("stated: %+v", first)
	}
	if centre := ledger.AtCentre; !within(float64(centre.AveragedDensity), 1, 1e-14) || !within(float64(centre.ControlDensity), 10./6, 1e-14) || !within(float64(centre.AveragedDensityRatio), 10./6/0.5, 1e-14) {
		t.Errorf("about the centre: %+v", centre)
	}
	// A radius alone gives the mean, and no ratio.
	plain := NewMaterial("plain")
	plain.ControlRadius = 10
	options.Materials = []Material{plain}
	ledger = tally(t, m, options)
	if first = ledger.Hotspots[0]; !first.ControlDensity.Exists() || first.AveragedDensityRatio.Exists() || hasFinding(ledger, "averaged-density") {
		t.Errorf("without a critical density: %+v", first)
	}
	options.Requirements = []Requirement{{Name: "r", Quantity: "hotspot.1.control_density", AtMost: 2, AtLeast: None}}
	if got := tally(t, m, options).Requirements[0]; !got.Met || !within(float64(got.Value), 10./6, 1e-14) {
		t.Errorf("requirement %+v", got)
	}
}

// The centre's control radius is that of the material there.
func TestControlRadiusAtTheCentre(t *testing.T) {
	m := (&densityGrid{4, []float64{2, 2, 6, 6}}).mesh(inOrder(4), 4)
	options := ballOptions(1)
	one, other := NewMaterial("one"), NewMaterial("other")
	one.ControlRadius, one.CriticalDensity, other.ControlRadius, other.CriticalDensity = 3, 4, 5, 12
	options.Materials = []Material{one, other, NewMaterial("third")}
	options.Regions = []Region{
		{Name: "left", Box: &Box{Vector{0, 0, 0}, Vector{2, 1, 0}}, Material: "one"},
		{Name: "right", Box: &Box{Vector{2, 0, 0}, Vector{3, 1, 0}}, Material: "other"},
		{Name: "end", Rest: true, Material: "third"},
	}
	for x, want := range map[float64][2]Number{0.6: {3, 0.5}, 2.4: {5, 0.5}, 3.5: {None, None}} {
		options.Hotspots.Centre = &Vector{x, 0.5, 0}
		got := tally(t, m, options).AtCentre
		if asJSON(t, [2]Number{got.ControlRadius, got.AveragedDensityRatio}) != asJSON(t, want) {
			t.Errorf("at x = %g: radius %g, ratio %g, want %v", x, got.ControlRadius, got.AveragedDensityRatio, want)
		}
	}
}

// The frame of a cell is its corners and edges, each once.
func TestCellFrames(t *testing.T) {
	for _, c := range []struct {
		cellType       mesh.CellType
		nodes, corners int
		edges          int
		views          int // of a cell of that dimension
	}{
		{mesh.Triangle, 3, 3, 3, 6}, {mesh.Quad, 4, 4, 4, 8}, {mesh.Pixel, 4, 4, 4, 8}, {mesh.QuadraticQuad, 8, 4, 4, 8},
		{mesh.Tetrahedron, 4, 4, 6, 12}, {mesh.Hexahedron, 8, 8, 12, 24}, {mesh.Voxel, 8, 8, 12, 24}, {mesh.Wedge, 6, 6, 9, 18}, {mesh.Pyramid, 5, 5, 8, 16},
	} {
		shape, err := mesh.ShapeOf(c.cellType, c.nodes, [3]int{})
		if err != nil {
			t.Fatal(err)
		}
		cell := mesh.Cell{Shape: shape}
		for i, at := range shape.NodeCoordinates() {
			if c.cellType == mesh.Pyramid && i == 4 {
				at = [3]float64{0.5, 0.5, 1}
			}
			cell.Points = append(cell.Points, at[:]...)
			cell.Nodes = append(cell.Nodes, int32(i))
		}
		frame := newCellFrame(&cell)
		views := frame.views(shape.Dimension, nil)
		if len(frame.corners) != c.corners || len(frame.edges) != c.edges || len(views) != c.views {
			t.Errorf("%s: %d corners, %d edges, %d views", shape.Name, len(frame.corners), len(frame.edges), len(views))
		}
		for _, v := range views {
			if !within(dot(v.across, v.across), 1, 1e-14) || !within(dot(v.along, v.along), 1, 1e-14) || !within(dot(v.front, v.front), 1, 1e-14) ||
				math.Abs(dot(v.across, v.along)) > 1e-14 || math.Abs(dot(v.across, v.front)) > 1e-14 || math.Abs(dot(v.along, v.front)) > 1e-14 {
				t.Errorf("%s: axes %v, %v, %v", shape.Name, v.across, v.along, v.front)
			}
			if c.cellType == mesh.Hexahedron && (v.size != 1 || v.thickness != 4) || c.cellType == mesh.Quad && (v.size != 1 || v.thickness != 0) {
				t.Errorf("%s: size %g, thickness %g", shape.Name, v.size, v.thickness)
			}
		}
		tip := Vector{0.9, 0.9, 0}
		for _, v := range frame.views(shape.Dimension, &tip) {
			if v.origin != tip {
				t.Errorf("%s: origin %v, want the tip", shape.Name, v.origin)
			}
		}
	}
}

// Of more cells than are kept the nearest stay, and the profile reaches as far as they do.
func TestNearCellsAreCut(t *testing.T) {
	var near nearCells
	shape, err := mesh.ShapeOf(mesh.Triangle, 3, [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	cell := &mesh.Cell{Shape: shape, Points: make([]float64, 9), Nodes: []int32{0, 1, 2}}
	const cells = 3*mostNear + 7
	for i := range cells {
		number := (i * 4099) % cells // every number once
		near.add(nearCell{place: place{cell: int64(number)}, distance: float64(number / 2)}, cell)
	}
	near.trim()
	if len(near.list) != mostNear || near.reach(1e9) != math.Sqrt((mostNear-1)/2) || near.nearest.place.cell != 0 {
		t.Fatalf("%d cells, reach %g", len(near.list), near.reach(1e9))
	}
	if !slices.IsSortedFunc(near.list, compareNear) || near.list[mostNear-1].place.cell != mostNear-1 {
		t.Errorf("the last is %+v", near.list[mostNear-1])
	}
	few := nearCells{}
	few.add(nearCell{}, cell)
	if few.trim(); few.reach(2.5) != 2.5 {
		t.Errorf("of few cells the reach is %g", few.reach(2.5))
	}
}

// A local estimate is refused where the place is singular, which is known before it is
// made.
func TestLocalEstimateAtASingularPlace(t *testing.T) {
	s := cellSampling{reach: 11}
	options := s.options(8)
	options.Materials[0].YoungsModulus, options.Materials[0].PoissonsRatio = 1, 0
	options.Materials[0].ProportionalLimit, options.Materials[0].YieldStress = 1e-3, 1e-3
	ledger := tally(t, s.memory(sharpNotch(t, 90, 0), 0), options)
	if first := ledger.Hotspots[0]; first.Singular != "singular" || first.LocalEstimate == nil || !strings.Contains(string(first.LocalEstimate.Refused), "singular") {
		t.Errorf("%s, estimate %+v", first.Singular, first.LocalEstimate)
	}
}
