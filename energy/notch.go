package energy

import "math"

// ControlRadius returns the radius R0 of the volume over which the strain energy density
// at a notch is averaged, for a brittle material: a crack at the fracture toughness K_c
// then has the mean density s_t²/2E in it, at which a smooth bar of tensile strength s_t
// breaks: R0 = 2 e1 (K_c/s_t)². The toughness is in units of stress times the root of the
// model's length, and the radius in that length.
//
// Source: Lazzarin and Zambardi, International Journal of Fracture 112 (2001) 275-298
// (from memory).
func ControlRadius(toughness, strength, poissonsRatio float64, idealisation Idealisation) float64 {
	ratio := toughness / strength
	return 2 * crackCoefficient(poissonsRatio, idealisation) * ratio * ratio
}

// crackCoefficient returns e1, by which the mean density about the tip of a crack opened
// with the stress intensity K is e1 K²/(E R): (5-3ν)/8π in plane stress, else, for the
// plane strain of a thick body, (1+ν)(5-8ν)/8π.
func crackCoefficient(poissonsRatio float64, idealisation Idealisation) float64 {
	if idealisation == PlaneStress {
		return (5 - 3*poissonsRatio) / (8 * math.Pi)
	}
	return (1 + poissonsRatio) * (5 - 8*poissonsRatio) / (8 * math.Pi)
}
