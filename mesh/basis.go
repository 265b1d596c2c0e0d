package mesh

import "strings"

// A factor is the kind of polynomial in one barycentric coordinate b of which products
// make shape functions.
type factor uint8

const (
	monomial  factor = iota // b^m
	silvester               // the polynomial of degree m in b that is 0 at 0, 1/p ... (m-1)/p and 1 at m/p
	bernstein               // b^m / m!
)

// A basis holds the shape functions of a cell. Each is a combination of modes, and a
// mode is the product of one factor for each barycentric coordinate.
//
// Silvester's factors give the Lagrange functions of every product of simplices, for a
// line as for a wedge, Bernstein's (with the factorials of the degrees) the Bézier ones.
//
// Sources: P. Silvester, High-order polynomial triangular finite elements for potential
// problems, Int. J. Engng Sci. 7 (1969) 849-861; G. Farin, Curves and Surfaces for CAGD
// (Bernstein polynomials over simplices).
type basis struct {
	unit    *unitCell
	factor  factor
	degrees [3]int // in each simplex of the unit cell
	places  [][3]float64
	modes   []power
	scale   float64 // of every mode
	// combination has for each function the multiples of the modes; nil where
	// function i is mode i.
	combination [][]float64
}

// middleBasis returns the nodal basis of the corners of a cell and the middles listed.
//
// The functions are made one after the other so that each vanishes at the nodes before
// its own; then, from the last to the first, each is freed of its values at the nodes
// behind. What comes out is the only basis of their space that is 1 at its own node and
// 0 at all others. Serendipity cells and bubbles need nothing else.
func middleBasis(unit *unitCell, middles string) *basis {
	b := &basis{unit: unit, scale: 1}
	var functions [][]term
	for i := range unit.corners {
		p := unit.corner(i)
		b.places = append(b.places, unit.place(p))
		functions = append(functions, []term{{1, p}})
	}
	for _, corners := range strings.Fields(middles) {
		place, terms := unit.middle(corners)
		b.places = append(b.places, place)
		functions = append(functions, terms)
	}
	number := map[power]int{}
	for _, terms := range functions {
		for _, term := range terms {
			if _, known := number[term.power]; known {
				continue
			}
			number[term.power] = len(b.modes)
			b.modes = append(b.modes, term.power)
			for i, degree := range unit.degrees(term.power) {
				b.degrees[i] = max(b.degrees[i], degree)
			}
		}
	}
	b.combination = make([][]float64, len(functions))
	for i, terms := range functions {
		row := make([]float64, len(b.modes))
		for _, term := range terms {
			row[number[term.power]] = term.factor
		}
		b.combination[i] = row
		peak := b.combined(row, b.places[i])
		for m := range row {
			row[m] /= peak
		}
	}
	for i := len(functions) - 1; i >= 0; i-- {
		row := b.combination[i]
		made := append([]float64(nil), row...)
		for j := i + 1; j < len(functions); j++ {
			value := b.combined(made, b.places[j])
			for m, c := range b.combination[j] {
				row[m] -= float64(value * c)
			}
		}
	}
	return b
}

// combined returns the value of a combination of the modes.
func (b *basis) combined(row []float64, at [3]float64) float64 {
	var modes [maxModes]float64
	b.modeValues(at, modes[:len(b.modes)])
	sum := 0.0
	for m, c := range row {
		sum += float64(c * modes[m])
	}
	return sum
}

// maxModes is the largest number of modes of a basis with combinations: those of the
// 27-node hexahedron.
const maxModes = 27

// factorTable holds value and slope of the factors of all exponents at one place.
type factorTable [maxBarycentric][MaxDegree + 1]struct{ value, slope float64 }

// factors fills the table.
func (b *basis) factors(at [3]float64, to *factorTable) {
	coordinates := b.unit.barycentric(at)
	k := 0
	for i, dimension := range b.unit.simplices {
		degree := b.degrees[i]
		for range dimension + 1 {
			entry := &to[k]
			entry[0].value = 1
			for m := 1; m <= degree; m++ {
				// The m-th factor is the one before it times a linear function of b.
				slope, root := 1.0, 0.0
				switch b.factor {
				case silvester:
					slope, root = float64(degree)/float64(m), float64(m-1)/float64(m)
				case bernstein:
					slope = 1 / float64(m)
				}
				linear := float64(slope*coordinates[k]) - root
				entry[m].value = entry[m-1].value * linear
				entry[m].slope = float64(entry[m-1].slope*linear) + float64(entry[m-1].value*slope)
			}
			k++
		}
	}
}

// modeValues writes the value of each mode.
func (b *basis) modeValues(at [3]float64, to []float64) {
	var table factorTable
	b.factors(at, &table)
	for i := range b.modes {
		value := b.scale
		for k, exponent := range b.modes[i] {
			if exponent > 0 {
				value *= table[k][exponent].value
			}
		}
		to[i] = value
	}
}

// modeGradients writes the gradient of each mode by r, s, t.
func (b *basis) modeGradients(at [3]float64, to [][3]float64) {
	var table factorTable
	b.factors(at, &table)
	for i := range b.modes {
		var slopes [maxBarycentric]float64
		for k, exponent := range b.modes[i] {
			if exponent == 0 {
				continue
			}
			slope := b.scale * table[k][exponent].slope
			for other, e := range b.modes[i] {
				if other != k && e > 0 {
					slope *= table[other][e].value
				}
			}
			slopes[k] = slope
		}
		to[i] = b.unit.gradient(&slopes)
	}
}

// values writes the value of each shape function.
func (b *basis) values(at [3]float64, to []float64) {
	if b.combination == nil {
		b.modeValues(at, to)
		return
	}
	var modes [maxModes]float64
	b.modeValues(at, modes[:len(b.modes)])
	for i, row := range b.combination {
		sum := 0.0
		for m, c := range row {
			sum += float64(c * modes[m])
		}
		to[i] = sum
	}
}

// derivatives writes the derivatives of each shape function by r, s, t.
func (b *basis) derivatives(at [3]float64, to [][3]float64) {
	if b.combination == nil {
		b.modeGradients(at, to)
		return
	}
	var modes [maxModes][3]float64
	b.modeGradients(at, modes[:len(b.modes)])
	for i, row := range b.combination {
		var sum [3]float64
		for m, c := range row {
			for axis := range sum {
				sum[axis] += float64(c * modes[m][axis])
			}
		}
		to[i] = sum
	}
}
