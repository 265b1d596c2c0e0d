package mesh

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// A SymmetricTensor holds xx, yy, zz, xy, yz, xz in this order, which is VTK's.
// Shear terms of a strain are tensor components: ε_xy, half the engineering γ_xy.
type SymmetricTensor [6]float64

// componentNames are the six places of a SymmetricTensor.
var componentNames = [6]string{"xx", "yy", "zz", "xy", "yz", "xz"}

// mirrorNames are the same off-diagonal terms named the other way round.
var mirrorNames = map[string]int{"yx": 3, "zy": 4, "zx": 5}

// A Shear says what the off-diagonal numbers of a strain (or stress) array are.
type Shear uint8

// The shear conventions. Mandel's numbers are √2 times the tensor component, for
// stress and strain alike.
const (
	TensorShear Shear = iota
	EngineeringShear
	MandelShear
)

var shearNames = []string{"tensor", "engineering", "mandel"}

func (s Shear) String() string { return shearNames[s] }

// ParseShear returns the convention of a name: tensor, engineering or mandel.
func ParseShear(name string) (Shear, error) {
	if i := slices.Index(shearNames, name); i >= 0 {
		return Shear(i), nil
	}
	return 0, fmt.Errorf("shear convention %q: want tensor, engineering or mandel", name)
}

// factor is what a stored off-diagonal number is multiplied by to give the tensor
// component.
func (s Shear) factor() float64 {
	switch s {
	case EngineeringShear:
		return 0.5
	case MandelShear:
		return 1 / math.Sqrt2
	}
	return 1
}

// An Order is the list of components in which an array stores a tensor: lower-case
// names such as "xx yy zz xy yz xz". Nine-component orders name both off-diagonal
// terms.
type Order []string

// The orders that are assumed where nothing else is known: by component count.
var (
	OrderOf3 = Order{"xx", "yy", "xy"}
	OrderOf4 = Order{"xx", "yy", "zz", "xy"}
	OrderOf6 = Order(componentNames[:])
	OrderOf9 = Order{"xx", "xy", "xz", "yx", "yy", "yz", "zx", "zy", "zz"}
)

// DefaultOrder returns the order assumed for an array of so many components, or nil.
func DefaultOrder(components int) Order {
	switch components {
	case 3:
		return OrderOf3
	case 4:
		return OrderOf4
	case 6:
		return OrderOf6
	case 9:
		return OrderOf9
	}
	return nil
}

func (o Order) String() string { return strings.Join(o, " ") }

// ParseOrder reads a list such as "xx yy zz xy yz xz".
//
// Cylindrical names (rr, zz, tt, rz) are turned into the Cartesian ones that the
// same numbers have in a plane mesh whose axis of symmetry is y: r is x, the axial z
// is y and the hoop t is z; axisX exchanges x and y for an axis along x. They are
// taken as cylindrical wherever rr or tt occurs. Errors name the component.
func ParseOrder(text string, axisX bool) (Order, error) {
	words := strings.Fields(strings.ToLower(text))
	cylindrical := slices.Contains(words, "rr") || slices.Contains(words, "tt")
	seen := map[string]bool{}
	for i, word := range words {
		if cylindrical {
			word = fromCylindrical(word, axisX)
		}
		if seen[word] {
			return nil, fmt.Errorf("component order %q names %s twice", text, words[i])
		}
		seen[word] = true
		if slices.Index(componentNames[:], word) < 0 {
			if _, mirrored := mirrorNames[word]; !mirrored {
				return nil, fmt.Errorf("component order %q: %q is no component (want xx yy zz xy yz xz, or rr zz tt rz)", text, words[i])
			}
		}
		words[i] = word
	}
	if len(words) == 0 {
		return nil, fmt.Errorf("component order is empty")
	}
	return Order(words), nil
}

// fromCylindrical gives the Cartesian name of a component named by r, z and t.
func fromCylindrical(word string, axisX bool) string {
	radius, axis := "x", "y"
	if axisX {
		radius, axis = "y", "x"
	}
	letters := make([]string, 0, 2)
	for _, letter := range word {
		switch letter {
		case 'r':
			letters = append(letters, radius)
		case 'z':
			letters = append(letters, axis)
		case 't':
			letters = append(letters, "z")
		default:
			return word
		}
	}
	slices.Sort(letters)
	return strings.Join(letters, "")
}

// A Layout turns the stored numbers of one tensor array into SymmetricTensors: for
// each of the six places the positions of the numbers in a tuple and their factor.
type Layout struct {
	Components int // numbers in a stored tuple
	// first and second are positions in the tuple, or -1. With both set (nine
	// components) the mean of the two is taken.
	first, second [6]int
	factor        [6]float64
	identity      bool
}

// NewLayout returns the layout of an order and a shear convention; sign is -1 where
// the file counts compression as positive, else 1. Errors: an order longer than
// components.
func NewLayout(order Order, components int, shear Shear, sign float64) (Layout, error) {
	layout := Layout{Components: components, identity: shear == TensorShear && sign == 1 && slices.Equal(order, OrderOf6)}
	if len(order) > components {
		return Layout{}, fmt.Errorf("component order %q names %d components, the array has %d", order, len(order), components)
	}
	for place, name := range componentNames {
		layout.first[place] = slices.Index(order, name)
		layout.second[place] = -1
		layout.factor[place] = sign
		if place >= 3 {
			layout.factor[place] = sign * shear.factor()
		}
	}
	for name, place := range mirrorNames {
		position := slices.Index(order, name)
		switch {
		case position < 0:
		case layout.first[place] < 0:
			layout.first[place] = position
		default:
			layout.second[place] = position
			layout.factor[place] *= 0.5
		}
	}
	return layout, nil
}

// Has reports whether the array stores component i of a SymmetricTensor.
func (l *Layout) Has(i int) bool { return l.first[i] >= 0 }

// At returns the tensor of one stored tuple. Components that are not stored are 0.
func (l *Layout) At(tuple []float64) SymmetricTensor {
	if l.identity {
		return SymmetricTensor(tuple[:6])
	}
	var t SymmetricTensor
	for i := range t {
		if l.first[i] < 0 {
			continue
		}
		value := tuple[l.first[i]]
		if l.second[i] >= 0 {
			value += tuple[l.second[i]]
		}
		t[i] = value * l.factor[i]
	}
	return t
}

// Trace returns xx + yy + zz.
func (t *SymmetricTensor) Trace() float64 { return t[0] + t[1] + t[2] }

// Product returns the double contraction a:b. Each off-diagonal term stands for two
// entries of the 3×3 tensor.
func Product(a, b *SymmetricTensor) float64 {
	normal := float64(a[0]*b[0]) + float64(a[1]*b[1]) + float64(a[2]*b[2])
	shear := float64(a[3]*b[3]) + float64(a[4]*b[4]) + float64(a[5]*b[5])
	return normal + float64(2*shear)
}

// IsFinite reports whether no component is NaN or infinite.
func (t *SymmetricTensor) IsFinite() bool {
	// One sum: an infinity or a NaN in any place makes it so. Finite components
	// whose products overflow are caught where the energy is checked.
	return !math.IsNaN(t[0]*0 + t[1]*0 + t[2]*0 + t[3]*0 + t[4]*0 + t[5]*0)
}
