package mesh

// latticeBasis returns the Lagrange or Bézier functions of the degrees in each simplex
// of the unit cell.
func latticeBasis(unit *unitCell, family family, degrees [3]int) *basis {
	b := &basis{unit: unit, factor: silvester, degrees: degrees, scale: 1, modes: unit.latticeNodes(degrees)}
	for _, p := range b.modes {
		b.places = append(b.places, unit.place(p))
	}
	if family == bezier {
		b.factor = bernstein
		for _, degree := range degrees {
			for m := 2; m <= degree; m++ {
				b.scale *= float64(m)
			}
		}
	}
	return b
}

// latticeNodes returns the nodes of the lattice of the degrees in each simplex, in VTK's
// order of the Lagrange and Bézier cells: corners, edges, faces, inside. The
// barycentric coordinates of a node are its exponents by the degree.
func (u *unitCell) latticeNodes(degrees [3]int) []power {
	var nodes []power
	if u.lattice == nil {
		for _, exponents := range simplexLattice(u.simplices[0], degrees[0]) {
			var p power
			copy(p[:], exponents)
			nodes = append(nodes, p)
		}
		return nodes
	}
	for _, part := range u.lattice {
		products := []power{{}}
		first := 0
		for i, dimension := range u.simplices {
			var longer []power
			for _, exponents := range simplexPart(dimension, degrees[i], part[i]) {
				for _, p := range products { // the first simplex runs fastest
					copy(p[first:], exponents)
					longer = append(longer, p)
				}
			}
			products = longer
			first += dimension + 1
		}
		nodes = append(nodes, products...)
	}
	return nodes
}

// simplexPart returns the nodes on one part of a line or a triangle: on a vertex, 0 to
// 2; inside an edge of the triangle, a from vertex 0 to 1, b from 1 to 2, c from 2 to
// 0; or inside, -, where a triangle's run in rows.
func simplexPart(dimension, degree int, part byte) [][]uint8 {
	switch {
	case part >= '0' && part <= '2':
		return [][]uint8{corner(dimension, degree, int(part-'0'))}
	case part >= 'a' && part <= 'c':
		from := int(part - 'a')
		return edge(dimension, degree, from, (from+1)%3)
	case dimension == 1:
		return edge(dimension, degree, 0, 1)
	}
	var nodes [][]uint8
	for j := 1; j < degree; j++ {
		for i := 1; i+j < degree; i++ {
			nodes = append(nodes, []uint8{uint8(degree - i - j), uint8(i), uint8(j)})
		}
	}
	return nodes
}

func corner(dimension, degree, vertex int) []uint8 {
	exponents := make([]uint8, dimension+1)
	exponents[vertex] = uint8(degree)
	return exponents
}

// edge returns the nodes inside an edge of a simplex, in order.
func edge(dimension, degree, from, to int) [][]uint8 {
	var nodes [][]uint8
	for i := 1; i < degree; i++ {
		exponents := make([]uint8, dimension+1)
		exponents[from], exponents[to] = uint8(degree-i), uint8(i)
		nodes = append(nodes, exponents)
	}
	return nodes
}

// simplexLattice returns the nodes of a triangle or a tetrahedron: corners, edges,
// faces, and the inside as a smaller simplex by the same rule.
func simplexLattice(dimension, degree int) [][]uint8 {
	if degree < 0 {
		return nil
	}
	if degree == 0 {
		return [][]uint8{make([]uint8, dimension+1)}
	}
	var nodes [][]uint8
	for vertex := range dimension + 1 {
		nodes = append(nodes, corner(dimension, degree, vertex))
	}
	for _, e := range [...][2]int{{0, 1}, {1, 2}, {2, 0}, {0, 3}, {1, 3}, {2, 3}} {
		if dimension == 3 || e[1] < 3 {
			nodes = append(nodes, edge(dimension, degree, e[0], e[1])...)
		}
	}
	if dimension == 3 {
		// Each face's inside is a triangle whose corners lie nearest to these.
		for _, face := range [...][3]int{{0, 1, 3}, {2, 3, 1}, {0, 3, 2}, {0, 2, 1}} {
			for _, inside := range simplexLattice(2, degree-3) {
				exponents := make([]uint8, 4)
				for i, vertex := range face {
					exponents[vertex] = inside[i] + 1
				}
				nodes = append(nodes, exponents)
			}
		}
	}
	for _, exponents := range simplexLattice(dimension, degree-dimension-1) {
		for i := range exponents {
			exponents[i]++
		}
		nodes = append(nodes, exponents)
	}
	return nodes
}
