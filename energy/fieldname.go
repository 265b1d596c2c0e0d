package energy

import (
	"slices"
	"strings"
	"unicode"
)

// A role is what an array may be taken for by its name.
type role int

const (
	noRole role = iota
	stressRole
	strainRole // total, or of a kind that the name does not tell
	elasticStrainRole
	thermalStrainRole
	plasticStrainRole
	equivalentPlasticStrainRole
	displacementRole
	nodalForceRole // loads, reactions or both
	reactionRole
	loadRole
	temperatureRole
	elementIDRole
)

// derivedWords mark quantities that are made from a tensor and are not the tensor, or
// that are a stress or strain of another kind than the current one.
var derivedWords = []string{
	"mises", "principal", "equiv", "effective", "tresca", "invariant", "deviator", "hydrostatic", "pressure",
	"norm", "magnitude", "error", "residual", "rate", "increment", "energy", "density", "initial", "back",
	"trace", "creep", "swelling", "intensity", "maximum", "minimum", "gradient",
}

// shortDerivedWords would be found inside other words, so they must stand alone.
var shortDerivedWords = []string{"max", "min", "mean", "von", "eq", "vm", "dev", "i1", "i2", "i3"}

// otherForces are words beside a force of what is none that acts on nodes from outside.
var otherForces = []string{"moment", "torque", "contact", "friction", "body", "section", "membrane", "shear", "normal", "axial", "damping", "inertia"}

// words splits a name at everything that is no letter or digit, and at the humps of
// camel case, in lower case.
func words(name string) []string {
	var list []string
	var word []rune
	previous := ' '
	flush := func() {
		if len(word) > 0 {
			list = append(list, string(word))
			word = word[:0]
		}
	}
	for _, letter := range name {
		switch {
		case !unicode.IsLetter(letter) && !unicode.IsDigit(letter):
			flush()
		case unicode.IsUpper(letter) && unicode.IsLower(previous):
			flush()
			fallthrough
		default:
			word = append(word, unicode.ToLower(letter))
		}
		previous = letter
	}
	flush()
	return list
}

// roleOf tells by its name what an array may be: plain words of the trade, in any
// case, joined or apart, with any prefix or suffix.
func roleOf(name string) role {
	list := words(name)
	joined := strings.Join(list, "")
	has := func(parts ...string) bool {
		return slices.ContainsFunc(parts, func(part string) bool { return strings.Contains(joined, part) })
	}
	alone := func(whole ...string) bool {
		return slices.ContainsFunc(whole, func(word string) bool { return slices.Contains(list, word) })
	}
	isStrain := has("strain", "epsilon") || alone("eps") || joined == "e"
	isStress := has("stress", "sigma") || alone("sig") || joined == "s"
	isForce := has("force", "load", "reaction")
	switch {
	case isStrain && isStress:
		return noRole
	case isStrain && has("plastic") && (has("equiv", "effective", "accumulated", "cumulative") || alone("eq")):
		return equivalentPlasticStrainRole
	case has(derivedWords...) || alone(shortDerivedWords...):
		return noRole
	case isStrain && has("thermal"):
		return thermalStrainRole
	case isStrain && has("plastic"):
		return plasticStrainRole
	case isStrain && has("elastic"):
		return elasticStrainRole
	case isStrain:
		return strainRole
	case isStress:
		return stressRole
	case has("displacement") || alone("disp") || joined == "u":
		return displacementRole
	case isForce && has(otherForces...):
		return noRole
	case isForce && has("reaction"):
		return reactionRole
	case has("externalforce", "appliedforce", "nodalload", "pointload", "appliedload", "externalload"):
		return loadRole
	case has("nodalforce", "nodeforce", "internalforce") || joined == "force" || joined == "forces":
		return nodalForceRole
	case has("temperature") || joined == "temp":
		return temperatureRole
	case has("element", "cell") && (alone("id", "ids", "number", "label") || has("elementid", "cellid")):
		return elementIDRole
	}
	return noRole
}
