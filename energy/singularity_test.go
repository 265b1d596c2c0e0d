package energy

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"strainledger/mesh"
)

// A planeField is a density over the part of a plane that a body fills. Its hottest place,
// the tip of a notch or the root of a fillet, is the origin; the body lies towards +x.
type planeField struct {
	density func(x, y float64) float64
	isBody  func(x, y float64) bool
}

// sharpNotch is the leading term of Williams' fields at a notch: mode I, with a share of
// mode II at a distance of 1.
func sharpNotch(t testing.TB, opening, sheared1 float64) planeField {
	n, law := notchOf(opening), isotropic(t, 1, 0.3)
	return planeField{
		density: func(x, y float64) float64 {
			r, theta := math.Hypot(x, y), math.Atan2(y, x)
			stress := n.stress(opened, r, theta, 0.3, PlaneStrain)
			if sheared1 != 0 {
				other := n.stress(sheared, r, theta, 0.3, PlaneStrain)
				for c := range stress {
					stress[c] += sheared1 * other[c]
				}
			}
			strain := law.Strain(&stress)
			return Density(&stress, &strain)
		},
		isBody: func(x, y float64) bool { return math.Abs(math.Atan2(y, x)) < n.gamma },
	}
}

// bluntCrack is a crack whose tip has a radius, the body beyond a parabola.
//
// Source: Creager and Paris, International Journal of Fracture Mechanics 3 (1967) 247-252
// (from memory).
func bluntCrack(t testing.TB, radius float64) planeField {
	law := isotropic(t, 1, 0.3)
	polar := func(x, y float64) (r, theta float64) { return math.Hypot(x+radius/2, y), math.Atan2(y, x+radius/2) }
	return planeField{
		density: func(x, y float64) float64 {
			r, theta := polar(x, y)
			s, c, s3, c3 := math.Sin(theta/2), math.Cos(theta/2), math.Sin(3*theta/2), math.Cos(3*theta/2)
			q, k := radius/(2*r), 1/math.Sqrt(r)
			stress := mesh.SymmetricTensor{k * (c*(1-s*s3) - q*c3), k * (c*(1+s*s3) + q*c3), 0, k * (s*c*c3 - q*s3)}
			stress[2] = 0.3 * (stress[0] + stress[1])
			strain := law.Strain(&stress)
			return Density(&stress, &strain)
		},
		isBody: func(x, y float64) bool {
			r, theta := polar(x, y)
			return r > radius/(1+math.Cos(theta))
		},
	}
}

// roundHole is a hole in a plate that is pulled along y.
//
// Source: Kirsch 1898 (closed form, as in any textbook of elasticity).
func roundHole(t testing.TB, radius float64) planeField {
	law := isotropic(t, 1, 0.3)
	return planeField{
		density: func(x, y float64) float64 {
			r, theta := math.Hypot(x+radius, y), math.Atan2(y, x+radius)
			q, c, s := radius*radius/(r*r), -math.Cos(2*theta), -math.Sin(2*theta)
			stress := mesh.SymmetricTensor{((1 - q) + (1-4*q+3*q*q)*c) / 2, ((1 + q) - (1+3*q*q)*c) / 2, 0, -(1 + 2*q - 3*q*q) * s / 2}
			strain := law.Strain(&stress)
			return Density(&stress, &strain)
		},
		isBody: func(x, y float64) bool { return math.Hypot(x+radius, y) > radius },
	}
}

// fallingField falls with the distance from the tip of a notch of an opening.
func fallingField(opening float64, fall func(r float64) float64) planeField {
	gamma := math.Pi * (1 - opening/360)
	return planeField{
		density: func(x, y float64) float64 { return fall(math.Hypot(x, y)) },
		isBody:  func(x, y float64) bool { return math.Abs(math.Atan2(y, x)) < gamma },
	}
}

// A sampling says by which cells a field is sampled: about 1 in size, as far as reach from
// the origin.
type cellSampling struct {
	name      string
	turn      float64    // of the body against the cells, in degrees
	offset    [2]float64 // of a node from the origin
	jitter    float64    // of the nodes
	triangles bool
	means     bool // over each cell, not the value at its centroid
	sectors   int  // not 0: cells in sectors about the origin
	growth    float64
	layers    int // not 0: hexahedra
	reach     int
}

// cells returns the corners of the cells, as numbers of points, and the points.
func (s *cellSampling) cells(gamma float64) (cells [][]int32, points [][2]float64) {
	if s.sectors > 0 {
		return s.polar(gamma)
	}
	random := rand.New(rand.NewPCG(1, 2))
	side := 2*s.reach + 1
	for i := range side * side {
		x, y := float64(i%side-s.reach)+s.offset[0], float64(i/side-s.reach)+s.offset[1]
		if x != 0 || y != 0 {
			x, y = x+s.jitter*(random.Float64()-0.5), y+s.jitter*(random.Float64()-0.5)
		}
		points = append(points, [2]float64{x, y})
	}
	for i := range side * side {
		if i%side == side-1 || i/side == side-1 {
			continue
		}
		a, b, c, d := int32(i), int32(i+1), int32(i+1+side), int32(i+side)
		if s.triangles {
			cells = append(cells, []int32{a, b, c}, []int32{a, c, d})
		} else {
			cells = append(cells, []int32{a, b, c, d})
		}
	}
	return cells, points
}

func (s *cellSampling) polar(gamma float64) (cells [][]int32, points [][2]float64) {
	points = [][2]float64{{0, 0}}
	row := int32(s.sectors + 1)
	for r, step := 1.0, 1.0; r < float64(s.reach); {
		for k := range row {
			theta := gamma * (2*float64(k)/float64(s.sectors) - 1)
			points = append(points, [2]float64{r * math.Cos(theta), r * math.Sin(theta)})
		}
		step *= max(s.growth, 1)
		r += step
	}
	rings := (int32(len(points)) - 1) / row
	for ring := range rings {
		for k := range row - 1 {
			outer := 1 + ring*row + k
			if ring == 0 {
				cells = append(cells, []int32{0, outer, outer + 1})
			} else {
				cells = append(cells, []int32{outer - row, outer, outer + 1, outer - row + 1})
			}
		}
	}
	return cells, points
}

// memory samples the field. Points lie in the turned plane, densities are those of the
// field's own.
func (s *cellSampling) memory(field planeField, gamma float64) *memoryMesh {
	sine, cosine := math.Sincos(s.turn * math.Pi / 180)
	at := func(p [2]float64) (x, y float64) { return p[0]*cosine - p[1]*sine, p[0]*sine + p[1]*cosine }
	corners, plane := s.cells(gamma)
	layers := max(s.layers, 1)
	var piece memoryPiece
	for layer := range layers + 1 {
		for _, p := range plane {
			piece.points = append(piece.points, [3]float64{p[0], p[1], float64(layer)})
		}
	}
	if s.layers == 0 {
		piece.points = piece.points[:len(plane)]
	}
	var stress, strain [][]float64
	for _, cell := range corners {
		density := s.sample(field, cell, plane, at)
		if math.IsNaN(density) {
			continue
		}
		for layer := range int32(layers) {
			nodes := cell
			cellType := map[int]mesh.CellType{3: mesh.Triangle, 4: mesh.Quad}[len(cell)]
			if s.layers > 0 {
				cellType = map[int]mesh.CellType{3: mesh.Wedge, 4: mesh.Hexahedron}[len(cell)]
				nodes = nil
				for _, level := range []int32{layer, layer + 1} {
					for _, node := range cell {
						nodes = append(nodes, node+level*int32(len(plane)))
					}
				}
			}
			piece.cells = append(piece.cells, memoryCell{cellType, nodes})
			tension := []float64{math.Sqrt(2 * density), 0, 0, 0, 0, 0} // of a material with E 1, ν 0
			stress, strain = append(stress, tension), append(strain, tension)
		}
	}
	piece.arrays = []memoryArray{cellArray("stress", stress...), cellArray("strain", strain...)}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// sample returns the density of a cell, NaN outside the body.
func (s *cellSampling) sample(field planeField, cell []int32, points [][2]float64, at func([2]float64) (x, y float64)) float64 {
	inside := func(share [4]float64) (x, y float64) {
		var p [2]float64
		for k, node := range cell {
			p[0] += share[k] * points[node][0]
			p[1] += share[k] * points[node][1]
		}
		return at(p)
	}
	part := 1 / float64(len(cell))
	x, y := inside([4]float64{part, part, part, part})
	if !field.isBody(x, y) {
		return math.NaN()
	}
	if !s.means || len(cell) == 3 {
		return field.density(x, y)
	}
	const steps = 8
	sum, count := 0.0, 0.0
	for i := range steps * steps {
		r, q := (float64(i%steps)+0.5)/steps, (float64(i/steps)+0.5)/steps
		if x, y := inside([4]float64{(1 - r) * (1 - q), r * (1 - q), r * q, (1 - r) * q}); field.isBody(x, y) {
			sum, count = sum+field.density(x, y), count+1
		}
	}
	return sum / count
}

// options are those of a tally of the sampled field.
func (s *cellSampling) options(radius float64) Options {
	options := planeOptions(0.2)
	options.Fields = Fields{Stress: stated("stress", mesh.OnCell, sixOrder), Strain: stated("strain", mesh.OnCell, sixOrder)}
	if s.layers > 0 {
		options.Idealisation, options.Thickness = Solid, 0
	}
	options.Hotspots.Radius, options.Hotspots.Count = radius, 1
	return options
}

// first returns the first hotspot of the sampled field.
func (s *cellSampling) first(t testing.TB, field planeField, opening, radius float64) *Hotspot {
	t.Helper()
	return &tally(t, s.memory(field, math.Pi*(1-opening/360)), s.options(radius)).Hotspots[0]
}

// samplings are the cells that fields are sampled by.
var samplings = []cellSampling{
	{name: "squares"},
	{name: "turned squares", turn: 23},
	{name: "means of squares", means: true},
	{name: "means of turned squares", turn: 67, means: true},
	{name: "distorted cells", turn: 11, jitter: 0.3},
	{name: "triangles", triangles: true},
	{name: "distorted triangles", turn: 40, jitter: 0.3, triangles: true},
	{name: "hexahedra", layers: 3},
	{name: "one layer of turned hexahedra", layers: 1, turn: 35},
	{name: "wedges", layers: 2, triangles: true},
	{name: "many hexahedra", layers: 9, turn: 15},
}

// Where five cells or more lie in the ring beyond two cells, a sharp notch is singular,
// whatever the cells, and its eigenvalue is Williams' (N-01).
func TestSharpNotchesAreSingular(t *testing.T) {
	about := append(samplings[:len(samplings):len(samplings)],
		cellSampling{name: "sectors", sectors: 24}, cellSampling{name: "few sectors", sectors: 10},
		cellSampling{name: "growing sectors", sectors: 30, growth: 1.15},
		cellSampling{name: "a node on an edge", offset: [2]float64{0, 0.5}})
	for _, opening := range []float64{0, 30, 60, 90, 120, 135, 150} {
		field, want := sharpNotch(t, opening, 0), notchOf(opening).lambda[opened]
		for _, s := range about {
			for _, radius := range []float64{7.75, 10} { // 7 cells and what the centroid is beside the tip
				if radius > 8 && s.name != "squares" {
					continue
				}
				s.reach = int(radius) + 2
				got := s.first(t, field, opening, radius)
				// Where cells grow by 15 % from ring to ring, the one at the tip may lie too far
				// below the law for an answer, with the eigenvalue right all the same.
				isTold := got.Singular == "singular" || got.Singular == "cannot tell" && s.growth > 0
				if !isTold || !(math.Abs(float64(got.Eigenvalue)-want) < 0.01) || !(got.EigenvalueSpread < 0.02) {
					t.Errorf("%g°, %s, within %g: %s, λ %.4f ± %.4f, want %.4f", opening, s.name, radius, got.Singular, got.Eigenvalue, got.EigenvalueSpread, want)
				}
			}
		}
		// Faces along the cells: an L-shape, a crack.
		s := cellSampling{turn: opening / 2, reach: 10}
		if got := s.first(t, field, opening, 7.75); got.Singular != "singular" || math.Abs(float64(got.Eigenvalue)-want) > 0.005 {
			t.Errorf("%g° along the cells: %s, λ %.4f, want %.4f", opening, got.Singular, got.Eigenvalue, want)
		}
	}
}

// Two modes together make no pure power law: then a notch may be called singular or not,
// and never regular.
func TestSharpNotchesAreNeverRegular(t *testing.T) {
	tags := map[Text]int{}
	for _, opening := range []float64{0, 60, 90, 100} {
		for _, share := range []float64{0.2, 0.5, 2} {
			field := sharpNotch(t, opening, share)
			for _, s := range samplings[:5] {
				s.reach = 12
				for _, radius := range []float64{3, 7, 9} {
					tags[s.first(t, field, opening, radius).Singular]++
				}
			}
		}
	}
	if tags["regular"] > 0 || tags["singular"] < 50 || len(tags) > 2 {
		t.Errorf("answers %v", tags)
	}
}

// Smooth places are never singular, however few cells their radius has: blunt cracks,
// holes, and densities that level off.
func TestSmoothPlacesAreNeverSingular(t *testing.T) {
	number := 0
	for _, radius := range []float64{1, 1.2, 1.5, 2, 3, 5, 10} {
		for _, c := range []struct {
			name  string
			field planeField
		}{
			{"blunt crack", bluntCrack(t, radius)},
			{"hole", roundHole(t, radius)},
			{"shifted", fallingField(90, func(r float64) float64 { return math.Pow(r+radius/2, -0.911) })},
			{"shifted 150", fallingField(150, func(r float64) float64 { return math.Pow(r+radius/2, -0.496) })},
			{"rounded", fallingField(0, func(r float64) float64 { return 1 / math.Hypot(r, radius/2) })},
			{"bell", fallingField(135, func(r float64) float64 { return 0.1 + math.Exp(-r*r/(2*radius*radius)) })},
			{"exponential", fallingField(90, func(r float64) float64 { return 0.1 + math.Exp(-r/radius) })},
		} {
			for _, offset := range [][2]float64{{}, {0.3, 0.5}} {
				// In turn, and all of them where it is hardest to tell.
				about := samplings[number%len(samplings):][:1]
				if number++; radius == 1 || c.name == "blunt crack" || c.name == "hole" {
					about = samplings
				}
				for _, s := range about {
					s.offset, s.reach = offset, 12
					if got := s.first(t, c.field, 0, 9); got.Singular == "singular" || got.Singular == "" {
						t.Errorf("%s of radius %g, %s, node at %v: %q, λ %.4f ± %.4f", c.name, radius, s.name, offset, got.Singular, got.Eigenvalue, got.EigenvalueSpread)
					}
				}
			}
		}
	}
}

// Density that hardly changes is regular, and so is a peak that levels off over some
// cells; the answer is not that for every smooth place.
func TestLevelPlacesAreRegular(t *testing.T) {
	for name, field := range map[string]planeField{
		"even":           fallingField(0, func(float64) float64 { return 2 }),
		"nearly even":    fallingField(180, func(r float64) float64 { return 2 - 0.001*r }),
		"a broad peak":   fallingField(0, func(r float64) float64 { return 0.1 + math.Exp(-r*r/288) }),
		"a broad fillet": fallingField(180, func(r float64) float64 { return 1 / math.Hypot(r, 12) }),
	} {
		for _, s := range []cellSampling{samplings[0], samplings[4], samplings[7]} {
			s.reach = 12
			if got := s.first(t, field, 180, 9); got.Singular != "regular" {
				t.Errorf("%s, %s: %s, λ %.4f ± %.4f", name, s.name, got.Singular, got.Eigenvalue, got.EigenvalueSpread)
			}
		}
	}
}

// Too little of a ring tells nothing, and gives no eigenvalue.
func TestShortRingsCannotTell(t *testing.T) {
	s := cellSampling{reach: 10}
	for _, radius := range []float64{0.3, 2, 5.9} {
		if got := s.first(t, sharpNotch(t, 90, 0), 90, radius); got.Singular != "cannot tell" || got.Eigenvalue.Exists() || got.EigenvalueSpread.Exists() {
			t.Errorf("within %g: %s, λ %g ± %g", radius, got.Singular, got.Eigenvalue, got.EigenvalueSpread)
		}
	}
	// A body of one row of cells has no ring.
	row := &densityGrid{12, []float64{9, 5, 4, 3, 2, 1, 1, 1, 1, 1, 1, 1}}
	if got := tally(t, row.mesh(inOrder(12), 12), ballOptions(9)).Hotspots[0]; got.Singular != "cannot tell" {
		t.Errorf("a row of cells: %s", got.Singular)
	}
}

// About the study's centre the tip is known.
func TestSingularAtTheCentre(t *testing.T) {
	for _, s := range []cellSampling{samplings[0], samplings[6], samplings[7]} {
		s.reach = 10
		options := s.options(7)
		options.Hotspots.Centre = &Vector{0, 0, 1}
		got := tally(t, s.memory(sharpNotch(t, 135, 0), 0), options).AtCentre
		if got.Singular != "singular" || math.Abs(float64(got.Eigenvalue)-0.67358343) > 0.005 {
			t.Errorf("%s: at the tip %s, λ %.4f", s.name, got.Singular, got.Eigenvalue)
		}
		options.Hotspots.Centre = &Vector{1.1, 0.2, 1}
		if got := tally(t, s.memory(sharpNotch(t, 135, 0), 0), options).AtCentre; got.Singular == "singular" {
			t.Errorf("%s: a cell beside the tip it is %s, λ %.4f", s.name, got.Singular, got.Eigenvalue)
		}
	}
}

// The least-squares fit itself: a power law times harmonics of the angle is met exactly,
// and the cells within the ring are compared with what it goes on to.
func TestPowerLawIsMet(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	for _, slope := range []float64{-1, -0.911, -0.3, 0, 0.4} {
		var cells []nearCell
		for i := range 300 {
			r, theta := 0.3+7.5*random.Float64(), 2*math.Pi*random.Float64()
			c := nearCell{place: place{cell: int64(i)}, at: Vector{r * math.Cos(theta), r * math.Sin(theta)}, measure: 0.5 + random.Float64()}
			c.density = math.Pow(r, slope) * (3 + math.Cos(theta) - 0.5*math.Sin(2*theta) + 0.25*math.Cos(3*theta))
			if r < coreStart {
				c.density *= 0.9
			} else if r < ringStart {
				c.density *= 1.2
			}
			cells = append(cells, c)
		}
		v := planeView(Vector{}, 1)
		p := newProfile(cells, &v, 9)
		p.fit()
		for third := range p.thirds {
			p.thirds[third] = p.withoutThird(third)
		}
		for name, c := range map[string][2]float64{
			"slope": {p.slope, slope}, "misfit": {p.misfit, 0}, "at the place": {p.atPlace(), 0.9}, "beside it": {p.besidePlace(), 1.2}, "spread": {p.spread(), 0}, "end": {p.end, 8},
		} {
			if math.Abs(c[0]-c[1]) > 1e-3 {
				t.Errorf("slope %g: %s %.6f, want %g", slope, name, c[0], c[1])
			}
		}
	}
}

func BenchmarkJudgeSingularity(b *testing.B) {
	for _, layers := range []int{0, 12} {
		b.Run(fmt.Sprintf("%d layers", layers), func(b *testing.B) {
			s := cellSampling{reach: 10, layers: layers}
			m := s.memory(sharpNotch(b, 90, 0), 0)
			options := s.options(9)
			for b.Loop() {
				if got := tally(b, m, options).Hotspots[0].Singular; got != "singular" {
					b.Fatal(got)
				}
			}
		})
	}
}
