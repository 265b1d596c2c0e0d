package energy

import (
	"cmp"
	"math"
	"slices"

	"strainledger/mesh"
)

// A limit is what the cells of one region are held against: the proportional limit of
// its material by the region's criterion. A place has an equivalent stress σ and a
// utilisation, above 1 past the limit s; at the limit is not past it.
//
//	von-mises          σ = √(3/2 s:s), s the deviator          utilisation σ/s
//	tresca             σ = σ₁ - σ₃                             σ/s
//	max-principal      σ = σ₁ or σ₃, whichever governs         σ₁/s in tension, -σ₃/s in compression
//	distortion-energy  σ = √(6G w_d), the von Mises stress     w_d / (s²/6G) = (σ/s)²
//	total-energy       σ = √(2E w)                             σ/s, the root of w / (s²/2E)
//
// Energies are those of the stress by the law, which needs no strain of the file.
//
// Sources: Huber 1904, von Mises 1913, Hencky 1924; Tresca 1864; Rankine; Beltrami 1885
// (all from memory).
type limit struct {
	criterion     Criterion
	tension       float64 // proportional limit; NaN: none
	compression   float64 // of negative equivalent stress, which max-principal alone has
	poissonsRatio float64 // of an isotropic law, for total-energy
}

// criteria are the known ones.
var criteria = []Criterion{VonMises, Tresca, MaxPrincipal, DistortionEnergy, TotalEnergy}

// setLimit settles the region's criterion and limit. It refuses what the region's law
// cannot give: the energy criteria have their meaning by isotropic constants.
func (r *region) setLimit(rule *Region, options *Options) error {
	none := math.NaN()
	r.limit = limit{
		criterion: cmp.Or(rule.Criterion, options.Limit.Criterion, VonMises), tension: none, compression: none, poissonsRatio: none,
	}
	if !slices.Contains(criteria, r.limit.criterion) {
		return studyError("region %q: no criterion %q; there are: %v", r.name, r.limit.criterion, criteria)
	}
	if r.material != nil {
		r.limit.tension, r.limit.compression = r.material.ProportionalLimit, r.material.ProportionalLimit
		if stated := r.material.ProportionalLimitCompression; !math.IsNaN(stated) {
			r.limit.compression = stated
		}
	}
	switch isEnergy := r.limit.criterion == DistortionEnergy || r.limit.criterion == TotalEnergy; {
	case isEnergy && r.law != nil && !r.law.IsIsotropic():
		return studyError("region %q: criterion %q needs an isotropic law, and material %q has none: state max-principal, or von-mises with a warning",
			r.name, r.limit.criterion, r.material.Name)
	case r.limit.criterion != TotalEnergy:
		return nil
	case r.law == nil:
		return studyError("region %q: criterion %q needs a material with youngs_modulus and poissons_ratio; give them, or state another criterion",
			r.name, r.limit.criterion)
	}
	_, r.limit.poissonsRatio = r.law.isotropicConstants()
	return nil
}

// exists reports whether there is a limit, and so a utilisation.
func (l *limit) exists() bool { return !math.IsNaN(l.tension) }

// equivalent returns the equivalent stress of one place. It is negative only under
// max-principal, where compression governs.
func (l *limit) equivalent(stress *mesh.SymmetricTensor) float64 {
	switch l.criterion {
	case Tresca:
		principal := stress.PrincipalValues()
		return principal[0] - principal[2]
	case MaxPrincipal:
		principal := stress.PrincipalValues()
		return l.governing(principal[0], principal[2])
	case TotalEnergy:
		return totalEnergyStress(stress, l.poissonsRatio)
	}
	return VonMisesStress(stress)
}

// totalEnergyStress returns the stress √(2E w) of a uniaxial state with the same energy
// density: 2E w = Σ σ_ii² - 2ν Σ σ_ii σ_jj + 2(1+ν) Σ σ_ij².
//
// Source: Timoshenko & Goodier, Theory of Elasticity (from memory).
func totalEnergyStress(stress *mesh.SymmetricTensor, poissonsRatio float64) float64 {
	normal := float64(stress[0]*stress[0]) + float64(stress[1]*stress[1]) + float64(stress[2]*stress[2])
	mixed := float64(stress[0]*stress[1]) + float64(stress[1]*stress[2]) + float64(stress[2]*stress[0])
	shear := float64(stress[3]*stress[3]) + float64(stress[4]*stress[4]) + float64(stress[5]*stress[5])
	// Below 0 but by rounding under pressure, with ν next to ½.
	return math.Sqrt(max(0, normal-float64(2*poissonsRatio*mixed)+float64(2*(1+poissonsRatio)*shear)))
}

// utilisation returns that of an equivalent stress, NaN without a limit.
func (l *limit) utilisation(equivalent float64) float64 {
	if equivalent < 0 {
		return -equivalent / l.compression
	}
	ratio := equivalent / l.tension
	if l.criterion == DistortionEnergy {
		return ratio * ratio
	}
	return ratio
}

// governing returns the equivalent stress that speaks for several, of which the largest
// and the least are given: the one of larger utilisation, without a limit the one of
// larger size, of equals the tensile one. Where none is negative that is the largest.
func (l *limit) governing(largest, least float64) float64 {
	switch {
	case least >= 0:
		return largest
	case l.exists() && l.utilisation(least) > l.utilisation(largest), !l.exists() && -least > largest:
		return least
	}
	return largest
}

// LoadFactor returns the factor by which the load of a linear run may be multiplied until
// a utilisation by the criterion is 1: its inverse, and the root of that where
// utilisation is a ratio of energies. It is None where there is no utilisation or no
// stress. The stress margin is the load factor less 1.
func LoadFactor(criterion Criterion, utilisation Number) Number {
	switch {
	case !(utilisation > 0):
		return None
	case criterion == DistortionEnergy:
		return Number(1 / math.Sqrt(float64(utilisation)))
	}
	return 1 / utilisation
}

// VonMisesStress returns the von Mises equivalent stress √(3/2 s:s), s the deviator.
//
// Source: Huber 1904, von Mises 1913, Hencky 1924 (from memory).
func VonMisesStress(stress *mesh.SymmetricTensor) float64 {
	xy, yz, zx := stress[0]-stress[1], stress[1]-stress[2], stress[2]-stress[0]
	normal := float64(xy*xy) + float64(yz*yz) + float64(zx*zx)
	shear := float64(stress[3]*stress[3]) + float64(stress[4]*stress[4]) + float64(stress[5]*stress[5])
	return math.Sqrt(float64(0.5*normal) + float64(3*shear))
}
