package energy

import (
	"math"
	"testing"

	"strainledger/mesh"
)

// A sampledMesh is a block of cells of one type on a lattice, mapped to its place, with
// stress given at every node and the strain that the law makes of it.
type sampledMesh struct {
	cellType mesh.CellType
	counts   [3]int                           // cells along r, s, t; t 0 for plane meshes
	place    func(r, s, t float64) [3]float64 // of the unit cube or square
	stress   func(x, y, z float64) mesh.SymmetricTensor
	law      *Law
}

// memory builds the mesh: nodes at the lattice of the cell's own nodes, not shared, so
// that no point belongs to two cells.
func (m *sampledMesh) memory(t testing.TB) *memoryMesh {
	t.Helper()
	nodes := map[mesh.CellType]int{mesh.Hexahedron: 8, mesh.QuadraticHexahedron: 20, mesh.TriquadraticHexahedron: 27, mesh.Quad: 4, mesh.BiquadraticQuad: 9}
	shape, err := mesh.ShapeOf(m.cellType, nodes[m.cellType], [3]int{})
	if err != nil {
		t.Fatal(err)
	}
	piece := memoryPiece{}
	stress := memoryArray{name: "stress", on: mesh.OnPoint, components: 6}
	strain := memoryArray{name: "strain", on: mesh.OnPoint, components: 6}
	depth := max(m.counts[2], 1)
	for k := range depth {
		for j := range m.counts[1] {
			for i := range m.counts[0] {
				cell := memoryCell{cellType: m.cellType}
				for _, local := range shape.NodeCoordinates() {
					p := m.place((float64(i)+local[0])/float64(m.counts[0]), (float64(j)+local[1])/float64(m.counts[1]), (float64(k)+local[2])/float64(depth))
					cell.nodes = append(cell.nodes, int32(len(piece.points)))
					piece.points = append(piece.points, p)
					s := m.stress(p[0], p[1], p[2])
					e := m.law.Strain(&s)
					stress.values, strain.values = append(stress.values, s[:]...), append(strain.values, e[:]...)
				}
				piece.cells = append(piece.cells, cell)
			}
		}
	}
	piece.arrays = []memoryArray{stress, strain}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// energy tallies the mesh.
func (m *sampledMesh) energy(t testing.TB, idealisation Idealisation) float64 {
	t.Helper()
	material := NewMaterial("m")
	material.YoungsModulus, material.PoissonsRatio = m.law.youngsModulus, m.law.poissonsRatio
	options := solidOptions(mesh.OnPoint, material)
	options.Idealisation, options.Thickness = idealisation, 1
	if idealisation == Solid || idealisation == Axisymmetric {
		options.Thickness = 0
	}
	return float64(tally(t, m.memory(t), options).Total.Energy)
}

// box maps the unit cube to a beam: x along it, y and z about its axis.
func box(length, height, width float64) func(r, s, t float64) [3]float64 {
	return func(r, s, t float64) [3]float64 {
		return [3]float64{length * r, height * (s - 0.5), width * (t - 0.5)}
	}
}

// Beams and bars with fields that their cells hold exactly (Timoshenko, Strength of
// Materials, from memory).
func TestBeams(t *testing.T) {
	aluminium33 := isotropic(t, 70000, 0.33)
	const length, width, height = 400.0, 20.0, 40.0
	inertia := width * height * height * height / 12
	bend := func(moment func(x float64) float64) func(x, y, z float64) mesh.SymmetricTensor {
		return func(x, y, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{moment(x) * y / inertia} }
	}
	tip := func(x float64) float64 { return 1000 * (length - x) }
	for _, c := range []struct {
		id, what string
		mesh     sampledMesh
		want     float64
	}{
		{"S-02", "bar under self-weight", sampledMesh{mesh.Hexahedron, [3]int{1, 1, 1}, box(10000, 10, 10),
			func(x, _, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{7.85e-9 * 9810 * (10000 - x)} }, isotropic(t, 210000, 0.3)}, 0.47065945},
		{"S-03", "cantilever, bending", sampledMesh{mesh.Hexahedron, [3]int{1, 1, 1}, box(length, height, width), bend(tip), aluminium33}, 1428.571429},
		{"S-03", "cantilever, shear 6/5", sampledMesh{mesh.TriquadraticHexahedron, [3]int{1, 1, 1}, box(length, height, width),
			func(_, y, _ float64) mesh.SymmetricTensor {
				return mesh.SymmetricTensor{0, 0, 0, 1000 * (height*height/4 - y*y) / (2 * inertia)}
			}, aluminium33}, 11.4},
		{"S-03", "cantilever, both", sampledMesh{mesh.TriquadraticHexahedron, [3]int{2, 2, 1}, box(length, height, width),
			func(x, y, _ float64) mesh.SymmetricTensor {
				return mesh.SymmetricTensor{tip(x) * y / inertia, 0, 0, 1000 * (height*height/4 - y*y) / (2 * inertia)}
			}, aluminium33}, 1439.971429},
		{"S-04", "cantilever, uniform load", sampledMesh{mesh.QuadraticHexahedron, [3]int{1, 1, 1}, box(length, height, width),
			bend(func(x float64) float64 { return 2 * (length - x) * (length - x) / 2 }), aluminium33}, 137.142857},
		{"S-05", "simply supported, central force", sampledMesh{mesh.Hexahedron, [3]int{2, 1, 1}, box(length, height, width),
			bend(func(x float64) float64 { return 500 * min(x, length-x) }), aluminium33}, 89.2857143},
	} {
		if got := c.mesh.energy(t, Solid); !within(got, c.want, 1e-8) {
			t.Errorf("%s, %s: %.10g, want %.10g", c.id, c.what, got, c.want)
		}
	}
}

// S-22 and S-23 (derived): bending through the thickness needs cells through it, or a
// field that varies within them; a single mean loses it.
func TestBendingOfAStrip(t *testing.T) {
	law := isotropic(t, 70000, 0.33)
	face := func(_, y, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{100 * y} }
	strip := sampledMesh{mesh.Hexahedron, [3]int{1, 1, 1}, func(r, s, t float64) [3]float64 { return [3]float64{r, 2*s - 1, t} }, face, law}
	if got := strip.energy(t, Solid) / 2; !within(got, 0.023809524, 1e-8) {
		t.Errorf("S-22: mean density %.9g, want 0.023809524, a third of the face's", got)
	}
	strip.stress = func(_, y, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{50 + 100*y} }
	if got := strip.energy(t, Solid) / 2; !within(got, 0.041666667, 1e-8) {
		t.Errorf("S-23: mean density %.9g, want 0.041666667", got)
	}
}

// ring maps the unit square to a ring of radii a to b and height 1, for axisymmetric
// meshes: x is the radius.
func ring(a, b float64) func(r, s, t float64) [3]float64 {
	return func(r, s, _ float64) [3]float64 { return [3]float64{a * math.Pow(b/a, r), s, 0} }
}

// Lamé's cylinder, a 50, b 100, p 80 inside, steel (Timoshenko & Goodier, from memory;
// S-10 and S-11 derived): radial, axial and hoop stress are xx, yy and zz. 1/r² is no
// polynomial; 40 cells of second order leave 1e-7.
func TestThickCylinder(t *testing.T) {
	const a, b, p = 50.0, 100.0, 80.0
	law := isotropic(t, 210000, 0.3)
	lame := func(axial float64) func(x, y, z float64) mesh.SymmetricTensor {
		return func(r, _, _ float64) mesh.SymmetricTensor {
			k := p * a * a / (b*b - a*a)
			return mesh.SymmetricTensor{k * (1 - b*b/(r*r)), axial * k, k * (1 + b*b/(r*r))}
		}
	}
	for _, c := range []struct {
		id, ends string
		axial    float64 // in units of p a²/(b²-a²)
		want     float64
	}{
		{"S-09", "plane strain", 2 * 0.3, 456.378666}, {"S-10", "open ends", 0, 470.740233}, {"S-11", "closed ends", 1, 462.761585},
	} {
		m := sampledMesh{mesh.BiquadraticQuad, [3]int{40, 1, 0}, ring(a, b), lame(c.axial), law}
		if got := m.energy(t, Axisymmetric); !within(got, c.want, 1e-6) {
			t.Errorf("%s, %s: %.9g, want %.9g", c.id, c.ends, got, c.want)
		}
	}
	// S-11b: the bore, and the energy in the inner half of the wall.
	bore := lame(0.6)(a, 0, 0)
	if !within(bore[2], 133.333333, 1e-8) || !within(VonMisesStress(&bore), 185.059750, 1e-8) {
		t.Errorf("S-11b: hoop %.9g, von Mises %.9g at the bore", bore[2], VonMisesStress(&bore))
	}
	inner := sampledMesh{mesh.BiquadraticQuad, [3]int{40, 1, 0}, ring(a, (a+b)/2), lame(0.6), law}
	if got := inner.energy(t, Axisymmetric) / 456.378666; !within(got, 0.71127946, 1e-6) {
		t.Errorf("S-11b: share of the inner half %.9g, want 0.71127946", got)
	}
}

// S-12 (Timoshenko & Goodier, from memory): a thick sphere under internal pressure, a
// quarter of its meridian plane, mirrored. Polar cells of second order.
func TestThickSphere(t *testing.T) {
	const a, b, p = 50.0, 80.0, 100.0
	place := func(r, s, _ float64) [3]float64 {
		radius, angle := a*math.Pow(b/a, r), math.Pi/2*s
		return [3]float64{radius * math.Cos(angle), radius * math.Sin(angle), 0}
	}
	stress := func(x, y, _ float64) mesh.SymmetricTensor {
		r := math.Hypot(x, y)
		k := p * a * a * a / (b*b*b - a*a*a)
		radial, hoop := k*(1-b*b*b/(r*r*r)), k*(1+b*b*b/(2*r*r*r))
		c, s := x/r, y/r
		return mesh.SymmetricTensor{radial*c*c + hoop*s*s, radial*s*s + hoop*c*c, hoop, (radial - hoop) * c * s}
	}
	if inside := stress(a, 0, 0); !within(inside[2], 98.449612, 1e-8) {
		t.Errorf("S-12: hoop stress inside %.9g, want 98.449612", inside[2])
	}
	m := sampledMesh{mesh.BiquadraticQuad, [3]int{20, 20, 0}, place, stress, isotropic(t, 210000, 0.3)}
	// The arcs are parabolas and 1/r³ is interpolated: 9e-7 at this mesh.
	if got := 2 * m.energy(t, Axisymmetric); !within(got, 36994.0220, 1.5e-6) {
		t.Errorf("S-12: %.9g, want 36994.0220", got)
	}
}

// S-13, S-14 (Roark, from memory): the densities of thin shells.
func TestThinShells(t *testing.T) {
	law := isotropic(t, 210000, 0.3)
	for _, c := range []struct {
		id     string
		stress mesh.SymmetricTensor
		want   float64
	}{{"S-13", mesh.SymmetricTensor{100, 100}, 0.033333333}, {"S-14", mesh.SymmetricTensor{200, 100}, 0.090476190}} {
		strain := law.Strain(&c.stress)
		if got := Density(&c.stress, &strain); !within(got, c.want, 1e-7) {
			t.Errorf("%s: density %.9g, want %.9g", c.id, got, c.want)
		}
	}
}

// S-15 (Timoshenko & Goodier; field integrals derived): Kirsch's plate, hole a 10,
// 100 MPa along x far away; rings about the hole in plane stress. A quarter, four
// times; polar cells of second order leave 4e-7.
func TestPlateWithAHole(t *testing.T) {
	const a, far = 10.0, 100.0
	law := isotropic(t, 210000, 0.3)
	stress := func(x, y, _ float64) mesh.SymmetricTensor {
		r, angle := math.Hypot(x, y), math.Atan2(y, x)
		q := a * a / (r * r)
		radial := far/2*(1-q) + far/2*(1-4*q+3*q*q)*math.Cos(2*angle)
		hoop := far/2*(1+q) - far/2*(1+3*q*q)*math.Cos(2*angle)
		shear := -far / 2 * (1 + 2*q - 3*q*q) * math.Sin(2*angle)
		c, s := math.Cos(angle), math.Sin(angle)
		return mesh.SymmetricTensor{
			radial*c*c + hoop*s*s - 2*shear*c*s, radial*s*s + hoop*c*c + 2*shear*c*s, 0, (radial-hoop)*c*s + shear*(c*c-s*s),
		}
	}
	if top, side := stress(0, a, 0), stress(a, 0, 0); !within(top[0], 300, 1e-12) || !within(side[1], -100, 1e-12) {
		t.Errorf("S-15: %g and %g at the rim, want 300 and -100", top[0], side[1])
	}
	for outer, want := range map[float64]float64{3: 71.857083, 5: 193.343450, 10: 755.185677} {
		place := func(r, s, _ float64) [3]float64 {
			radius, angle := a*math.Pow(outer, r), math.Pi/2*s
			return [3]float64{radius * math.Cos(angle), radius * math.Sin(angle), 0}
		}
		m := sampledMesh{mesh.BiquadraticQuad, [3]int{24, 24, 0}, place, stress, law}
		if got := 4 * m.energy(t, PlaneStress); !within(got, want, 1e-6) {
			t.Errorf("S-15, to %g a: %.9g, want %.9g", outer, got, want)
		}
	}
}

// S-06 and S-07 (Timoshenko, from memory): solid and hollow shafts in torsion. The
// stress is linear, so that only the circle is approximated: by 27-node cells, whose
// arcs are parabolas, to 1.3e-6 with 48 of them.
func TestShafts(t *testing.T) {
	law := isotropic(t, 208000, 0.3) // G 80000
	for _, c := range []struct {
		id           string
		inner, outer float64
		want, tau    float64
	}{{"S-06", 0, 15, 1571.900673, 37.725616}, {"S-07", 10, 15, 1958.830069, 47.011922}} {
		polar := math.Pi / 2 * (math.Pow(c.outer, 4) - math.Pow(c.inner, 4))
		twist := 200e3 / polar
		place := func(r, s, t float64) [3]float64 {
			radius, angle := c.inner+(c.outer-c.inner)*r, 2*math.Pi*s
			return [3]float64{radius * math.Cos(angle), radius * math.Sin(angle), 500 * t}
		}
		stress := func(x, y, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{4: twist * x, 5: -twist * y} }
		if edge := stress(c.outer, 0, 0); !within(edge[4], c.tau, 1e-7) {
			t.Errorf("%s: shear stress at the edge %.9g, want %.9g", c.id, edge[4], c.tau)
		}
		m := sampledMesh{mesh.TriquadraticHexahedron, [3]int{1, 48, 1}, place, stress, law}
		if got := m.energy(t, Solid); !within(got, c.want, 2e-6) {
			t.Errorf("%s: %.10g, want %.10g", c.id, got, c.want)
		}
	}
}

// T-13 (derived): with an initial stress, the energy stored from the stress-free state
// is that of the total stress.
func TestInitialStress(t *testing.T) {
	law := isotropic(t, 210000, 0.3)
	total, initial := mesh.SymmetricTensor{160}, mesh.SymmetricTensor{100}
	m := sampledMesh{mesh.Hexahedron, [3]int{1, 1, 1}, box(1, 1, 1), func(_, _, _ float64) mesh.SymmetricTensor { return total }, law}
	if got := m.energy(t, Solid); !within(got, 0.060952381, 1e-8) {
		t.Errorf("stored %.9g, want 0.060952381", got)
	}
	m.stress = func(_, _, _ float64) mesh.SymmetricTensor { return initial }
	if got := 0.060952381 - m.energy(t, Solid); !within(got, 0.037142857, 1e-7) {
		t.Errorf("work of the added load %.9g, want 0.037142857", got)
	}
}

// B-08 (NAFEMS LE1; the area is exact): a quarter of the elliptic membrane.
func TestEllipticMembraneArea(t *testing.T) {
	place := func(r, s, _ float64) [3]float64 {
		angle := math.Pi / 2 * s
		return [3]float64{(2 + 1.25*r) * math.Cos(angle), (1 + 1.75*r) * math.Sin(angle), 0}
	}
	m := sampledMesh{mesh.BiquadraticQuad, [3]int{1, 24, 0}, place, func(_, _, _ float64) mesh.SymmetricTensor { return mesh.SymmetricTensor{1} }, isotropic(t, 210e3, 0.3)}
	options := solidOptions(mesh.OnPoint)
	options.Idealisation, options.Thickness = PlaneStress, 1
	// Parabolas for arcs of ellipses: 4e-8 with 24 cells.
	if got := float64(tally(t, m.memory(t), options).Total.Volume); !within(got, 5.44869976, 1e-6) {
		t.Errorf("area %.9g, want 5.44869976", got)
	}
}
