package mesh

import (
	"fmt"
	"strings"
	"testing"
)

// The order of the nodes of Lagrange cells, as positions on the lattice by r, s, t.
//
// Source: VTK's order since file version 2.1; TestShapeFunctionsFollowVTK compares more
// of it with VTK itself.
func TestLatticeOrder(t *testing.T) {
	for _, test := range []struct {
		unit    *unitCell
		degrees [3]int // of the simplices
		want    string
	}{
		{&line, [3]int{3}, "0 3 1 2"},
		{&triangle, [3]int{3}, "00 30 03 10 20 21 12 02 01 11"},
		{&triangle, [3]int{4}, "00 40 04 10 20 30 31 22 13 03 02 01 11 21 12"},
		{&triangle, [3]int{6}, "00 60 06 10 20 30 40 50 51 42 33 24 15 05 04 03 02 01 11 41 14 21 31 32 23 13 12 22"},
		{&quad, [3]int{3, 2}, "00 30 32 02 10 20 31 12 22 01 11 21"},
		{&tetrahedron, [3]int{3}, "000 300 030 003 100 200 210 120 020 010 001 002 201 102 021 012 101 111 011 110"},
		{&wedge, [3]int{3, 2}, "000 300 030 002 302 032 100 200 210 120 020 010 102 202 212 122 022 012 001 301 031 110 112 101 201 211 121 021 011 111"},
		{&hexahedron, [3]int{2, 3, 2}, "000 200 230 030 002 202 232 032 " +
			"100 210 220 130 010 020 102 212 222 132 012 022 001 201 231 031 " +
			"011 021 211 221 101 131 110 120 112 122 111 121"},
	} {
		var got []string
		for _, p := range test.unit.latticeNodes(test.degrees) {
			var word strings.Builder
			k := 0
			for i, dimension := range test.unit.simplices {
				sum := 0
				for _, exponent := range p[k : k+dimension+1] {
					sum += int(exponent)
				}
				if sum != test.degrees[i] {
					t.Errorf("degrees %v: exponents %v do not add up", test.degrees, p)
				}
				for _, exponent := range p[k+1 : k+dimension+1] {
					fmt.Fprint(&word, exponent)
				}
				k += dimension + 1
			}
			got = append(got, word.String())
		}
		if strings.Join(got, " ") != test.want {
			t.Errorf("degrees %v:\n%s, want\n%s", test.degrees, strings.Join(got, " "), test.want)
		}
	}
	// The faces of the tetrahedron of degree 4 and its inside.
	nodes := tetrahedron.latticeNodes([3]int{4})[22:]
	want := "101 201 102 121 112 211 011 012 021 110 120 210 111"
	var got []string
	for _, p := range nodes {
		got = append(got, fmt.Sprint(p[1])+fmt.Sprint(p[2])+fmt.Sprint(p[3]))
	}
	if strings.Join(got, " ") != want {
		t.Errorf("faces of degree 4: %v, want %s", got, want)
	}
}
