package energy

import (
	"testing"

	"strainledger/mesh"

	"gonum.org/v1/gonum/mat"
)

// A cookMembrane is Cook's membrane (R. D. Cook 1974): a plate of corners (0,0), (48,44),
// (48,60), (0,44) in plane stress, E 1, ν 1/3, t 1, held on the left and pulled up on the
// right edge by a shear of 1 in all, uniform. It is solved here with n × n bilinear
// quadrilaterals, so that no number below comes from the program that is tested.
type cookMembrane struct {
	n            int
	points       [][3]float64
	quads        [][4]int32
	displacement []float64 // x y of each point
	energy       float64   // ½ F·u, which is U of the discrete solution
}

func cookMaterial() Material {
	m := NewMaterial("cook")
	m.YoungsModulus, m.PoissonsRatio = 1, 1./3
	return m
}

// cookStiffness takes xx, yy and engineering xy strain to stress.
var cookStiffness = [3][3]float64{{9. / 8, 3. / 8, 0}, {3. / 8, 9. / 8, 0}, {0, 0, 3. / 8}}

// The rules of 2 and 3 points on [-1, 1]: place and weight.
var (
	gauss2 = [][2]float64{{-0.5773502691896257, 1}, {0.5773502691896257, 1}}
	gauss3 = [][2]float64{{-0.7745966692414834, 5. / 9}, {0, 8. / 9}, {0.7745966692414834, 5. / 9}}
)

// newCookMembrane solves the membrane by the displacement method, its stiffness integrated
// by the product of the rule.
func newCookMembrane(t testing.TB, n int, rule [][2]float64) *cookMembrane {
	c := &cookMembrane{n: n}
	for j := range n + 1 {
		for i := range n + 1 {
			s, r := float64(i)/float64(n), float64(j)/float64(n)
			c.points = append(c.points, [3]float64{48 * s, 44*s + (44-28*s)*r})
		}
	}
	row := int32(n + 1)
	for j := range int32(n) {
		for i := range int32(n) {
			first := j*row + i
			c.quads = append(c.quads, [4]int32{first, first + 1, first + row + 1, first + row})
		}
	}
	size := 2 * len(c.points)
	stiffness := mat.NewSymBandDense(size, 2*(n+3), nil)
	for i := range c.quads {
		c.assemble(stiffness, i, rule)
	}
	force := mat.NewVecDense(size, nil)
	for j := range n + 1 {
		share := 1 / float64(n)
		if j == 0 || j == n {
			share /= 2
		}
		force.SetVec(2*(j*(n+1)+n)+1, share)
		for _, held := range []int{2 * j * (n + 1), 2*j*(n+1) + 1} {
			for other := max(0, held-2*(n+3)); other <= min(size-1, held+2*(n+3)); other++ {
				stiffness.SetSymBand(held, other, 0)
			}
			stiffness.SetSymBand(held, held, 1)
		}
	}
	var factors mat.BandCholesky
	var u mat.VecDense
	if !factors.Factorize(stiffness) || factors.SolveVecTo(&u, force) != nil {
		t.Fatal("the membrane cannot be solved")
	}
	c.displacement, c.energy = u.RawVector().Data, mat.Dot(force, &u)/2
	return c
}

// strainMatrix returns the matrix B of a quadrilateral at a place in [-1, 1]², and the
// Jacobian determinant there.
func (c *cookMembrane) strainMatrix(quad int, r, s float64) (b [3][8]float64, determinant float64) {
	dr := [4]float64{-(1 - s) / 4, (1 - s) / 4, (1 + s) / 4, -(1 + s) / 4}
	ds := [4]float64{-(1 - r) / 4, -(1 + r) / 4, (1 + r) / 4, (1 - r) / 4}
	var xr, yr, xs, ys float64
	for k, node := range c.quads[quad] {
		p := c.points[node]
		xr, yr, xs, ys = xr+dr[k]*p[0], yr+dr[k]*p[1], xs+ds[k]*p[0], ys+ds[k]*p[1]
	}
	determinant = xr*ys - xs*yr
	for k := range 4 {
		dx, dy := (dr[k]*ys-ds[k]*yr)/determinant, (ds[k]*xr-dr[k]*xs)/determinant
		b[0][2*k], b[1][2*k+1] = dx, dy
		b[2][2*k], b[2][2*k+1] = dy, dx
	}
	return b, determinant
}

func (c *cookMembrane) assemble(stiffness *mat.SymBandDense, quad int, rule [][2]float64) {
	for _, x := range rule {
		for _, y := range rule {
			b, determinant := c.strainMatrix(quad, x[0], y[0])
			for i := range 8 {
				for k := range 8 {
					row, column := int(2*c.quads[quad][i/2])+i%2, int(2*c.quads[quad][k/2])+k%2
					if row > column {
						continue
					}
					var sum float64
					for a := range 3 {
						for d := range 3 {
							sum += b[a][i] * cookStiffness[a][d] * b[d][k]
						}
					}
					stiffness.SetSymBand(row, column, stiffness.At(row, column)+sum*determinant*x[1]*y[1])
				}
			}
		}
	}
}

// stressAt returns xx, yy, xy of a quadrilateral at a place in [-1, 1]².
func (c *cookMembrane) stressAt(quad int, r, s float64) []float64 {
	b, _ := c.strainMatrix(quad, r, s)
	var strain [3]float64
	for k, node := range c.quads[quad] {
		for a := range strain {
			strain[a] += b[a][2*k]*c.displacement[2*node] + b[a][2*k+1]*c.displacement[2*node+1]
		}
	}
	stress := make([]float64, 3)
	for a := range stress {
		for d := range strain {
			stress[a] += cookStiffness[a][d] * strain[d]
		}
	}
	return stress
}

// corners of the reference square, in the order of a quadrilateral's nodes.
var corners = [4][2]float64{{-1, -1}, {1, -1}, {1, 1}, {-1, 1}}

// gaussian are the 2 × 2 points of Gauss, the first direction fastest.
var gaussian = [4][2]float64{{-0.5773502691896257, -0.5773502691896257}, {0.5773502691896257, -0.5773502691896257}, {-0.5773502691896257, 0.5773502691896257}, {0.5773502691896257, 0.5773502691896257}}

// piece returns the mesh with its displacement and further arrays.
func (c *cookMembrane) piece(arrays ...memoryArray) *memoryMesh {
	u := memoryArray{name: "displacement", on: mesh.OnPoint, components: 2, values: c.displacement}
	piece := memoryPiece{points: c.points, arrays: append(arrays, u)}
	for _, quad := range c.quads {
		piece.cells = append(piece.cells, memoryCell{mesh.Quad, quad[:]})
	}
	return &memoryMesh{pieces: []memoryPiece{piece}}
}

// centroidStress returns the stress at the middle of each cell.
func (c *cookMembrane) centroidStress() memoryArray {
	array := memoryArray{name: "stress", on: mesh.OnCell, components: 3}
	for quad := range c.quads {
		array.values = append(array.values, c.stressAt(quad, 0, 0)...)
	}
	return array
}

// gaussianStress returns the stress at the 2 × 2 points of each cell, in one long tuple.
func (c *cookMembrane) gaussianStress() memoryArray {
	array := memoryArray{name: "stress", on: mesh.OnCell, components: 12}
	for quad := range c.quads {
		for _, at := range gaussian {
			array.values = append(array.values, c.stressAt(quad, at[0], at[1])...)
		}
	}
	return array
}

// meanStress returns the mean of the stress at the 2 × 2 points of each cell.
func (c *cookMembrane) meanStress() memoryArray {
	array := memoryArray{name: "stress", on: mesh.OnCell, components: 3}
	for quad := range c.quads {
		mean := make([]float64, 3)
		for _, at := range gaussian {
			for a, value := range c.stressAt(quad, at[0], at[1]) {
				mean[a] += value / 4
			}
		}
		array.values = append(array.values, mean...)
	}
	return array
}

// nodalStress returns the plain mean of the corner values at each point.
func (c *cookMembrane) nodalStress() memoryArray {
	array := memoryArray{name: "stress", on: mesh.OnPoint, components: 3, values: make([]float64, 3*len(c.points))}
	count := make([]float64, len(c.points))
	for quad, nodes := range c.quads {
		for k, node := range nodes {
			count[node]++
			for a, value := range c.stressAt(quad, corners[k][0], corners[k][1]) {
				array.values[3*int(node)+a] += value
			}
		}
	}
	for i := range array.values {
		array.values[i] /= count[i/3]
	}
	return array
}

// cookOptions are those of every account of the membrane.
func cookOptions(from EnergySource) Options {
	return Options{Idealisation: PlaneStress, Thickness: 1, From: from, Materials: []Material{cookMaterial()}, Error: ErrorOptions{Estimate: true}}
}
