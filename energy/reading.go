package energy

import (
	"fmt"
	"math"

	"strainledger/mesh"
)

// A reading is one way to take the stored numbers of stress and strain: component
// orders, the strain's shear convention, whether the strain is the elastic one, and
// which of the two arrays is which.
type reading struct {
	stressOrder, strainOrder mesh.Order
	shear                    mesh.Shear
	isElastic                bool
	isSwapped                bool

	stress, strain mesh.Layout
}

// String describes the reading for a list of candidates.
func (r *reading) String() string {
	text := ""
	if len(r.stressOrder) > 0 {
		text += fmt.Sprintf("stress %s, ", r.stressOrder)
	}
	if len(r.strainOrder) > 0 {
		kind := "total"
		if r.isElastic {
			kind = "elastic"
		}
		text += fmt.Sprintf("strain %s with %s shear, %s", r.strainOrder, r.shear, kind)
	}
	if r.isSwapped {
		text += ", the two arrays exchanged"
	}
	return text
}

// A pair is stress and elastic strain at one place, by one reading.
type pair struct{ stress, strain mesh.SymmetricTensor }

// pairAt reads one place.
func (a *audit) pairAt(r *reading, place *samplePlace) pair {
	in := a.inputs
	stored, storedStrain := &place.stress, &place.strain
	if r.isSwapped {
		stored, storedStrain = storedStrain, stored
	}
	var p pair
	if in.stress.exists() {
		p.stress = r.stress.At(stored[:])
	}
	if !in.strain.exists() {
		return p
	}
	p.strain = r.strain.At(storedStrain[:])
	inelastic := a.inelastic(r, place)
	for c := range p.strain {
		if !r.isElastic {
			p.strain[c] -= inelastic[c]
		}
	}
	if a.options.Idealisation == PlaneStrain && !r.strain.Has(2) {
		p.strain[2] = -inelastic[2] // the total is 0
	}
	return p
}

// completePair computes by the law what the file has no array of.
func (a *audit) completePair(region *region, p *pair) {
	switch a.from {
	case FromStress:
		if a.options.Idealisation == PlaneStrain && !a.inputs.stress.layout.Has(2) {
			region.law.CompletePlaneStrain(&p.stress, 0)
		}
		p.strain = region.law.Strain(&p.stress)
	case FromStrain:
		if a.options.Idealisation == PlaneStress {
			region.law.CompletePlaneStress(&p.strain)
		}
		p.stress = region.law.Stress(&p.strain)
	}
}

// inelastic returns the thermal and plastic strain that the file tells of at a place,
// in the strain's own layout.
func (a *audit) inelastic(r *reading, place *samplePlace) (t mesh.SymmetricTensor) {
	in := a.inputs
	for _, field := range []struct {
		input  *tensorInput
		stated *Field
		stored *[9]float64
	}{
		{&in.thermalStrain, &a.options.Fields.ThermalStrain, &place.thermal},
		{&in.plasticStrain, &a.options.Fields.PlasticStrain, &place.plastic},
	} {
		if !field.input.exists() {
			continue
		}
		layout := r.layoutLike(field.input, field.stated)
		part := layout.At(field.stored[:])
		for c := range t {
			t[c] += part[c]
		}
	}
	for c := range 3 {
		t[c] += place.expansion
	}
	return t
}

// layoutLike returns the layout of a thermal or plastic strain: what the study states
// of it, else the strain's own, since one writer writes both.
func (r *reading) layoutLike(input *tensorInput, stated *Field) mesh.Layout {
	if len(stated.Order) > 0 || stated.Shear != "" || input.layout.Components != r.strain.Components {
		return input.layout
	}
	return r.strain
}

// A misfit says how badly Hooke's law holds between stress and strain, as a share of
// the strain itself.
type misfit struct {
	byLaw        float64 // ε - S:σ by the materials' laws; NaN where a region has none
	byLawShape   float64 // the same without its mean normal part
	byFit        float64 // ε - (a σ + b tr σ I) with the best a and b in each region
	byFitShape   float64 // the same without mean normal parts
	energy       float64 // Σ ½ σ:ε
	size         float64 // Σ ½ |σ| |ε|
	isLoaded     bool    // some stress or strain is not zero
	shearContent float64 // of the strain: shear against all
}

// sums of squares of one region for a fit ε = a σ + b tr σ I.
type fitSums struct {
	ss, st, tt, se, te, ee float64 // full: a and b
	dd, de, cc             float64 // deviators: a alone
}

// components returns which places of a tensor can be compared: those that both arrays
// store and that the idealisation does not leave to the writer's whim.
func (a *audit) components(r *reading) (list []int, normals int) {
	for c := range 6 {
		isIn := a.inputs.stress.exists() && a.inputs.strain.exists() && r.stress.Has(c) && r.strain.Has(c)
		if c == 2 && a.options.Idealisation == PlaneStress {
			isIn = false // a plane-stress file may store ε_zz = 0
		}
		if isIn {
			list = append(list, c)
			if c < 3 {
				normals++
			}
		}
	}
	return list, normals
}

// misfitOf measures a reading on the sample.
func (a *audit) misfitOf(r *reading, sample []samplePlace) misfit {
	components, normals := a.components(r)
	sums := make([]fitSums, len(a.regions.regions))
	result := misfit{}
	var law, lawShape, size, shape, shear float64
	hasLaw := true
	for i := range sample {
		place := &sample[i]
		p := a.pairAt(r, place)
		region := &a.regions.regions[place.region]
		a.completePair(region, &p)
		w := 0.5 * mesh.Product(&p.stress, &p.strain)
		result.energy += w
		norms := math.Sqrt(mesh.Product(&p.stress, &p.stress)) * math.Sqrt(mesh.Product(&p.strain, &p.strain))
		result.size += 0.5 * norms
		result.isLoaded = result.isLoaded || p.stress != mesh.SymmetricTensor{} || p.strain != mesh.SymmetricTensor{}
		sums[place.region].add(&p, components, normals)
		square, deviator, shearSquare := squares(&p.strain, components, normals)
		size += square
		shape += deviator
		shear += shearSquare
		if region.law == nil {
			hasLaw = false
			continue
		}
		rest := a.rest(region, &p)
		square, deviator, _ = squares(&rest, components, normals)
		law += square
		lawShape += deviator
	}
	result.byLaw, result.byLawShape = share(law, size), share(lawShape, shape)
	if !hasLaw {
		result.byLaw, result.byLawShape = math.NaN(), math.NaN()
	}
	result.byFit, result.byFitShape = a.fit(r, sample, sums, components, normals, size, shape)
	result.shearContent = share(shear, size)
	return result
}

// share returns the root of a ratio of squares, 0 for nothing of nothing.
func share(part, whole float64) float64 {
	if part == 0 {
		return 0
	}
	return math.Sqrt(part / whole)
}

// rest returns ε - S:σ at one place.
func (a *audit) rest(region *region, p *pair) mesh.SymmetricTensor {
	stress := p.stress
	if a.options.Idealisation == PlaneStrain && !a.inputs.stress.layout.Has(2) {
		region.law.CompletePlaneStrain(&stress, p.strain[2])
	}
	rest := region.law.Strain(&stress)
	for c := range rest {
		rest[c] = p.strain[c] - rest[c]
	}
	return rest
}

// squares returns |t|², the same without the mean normal part, and the share of shear,
// over the components that count.
func squares(t *mesh.SymmetricTensor, components []int, normals int) (all, deviator, shear float64) {
	mean := meanNormal(t, components, normals)
	for _, c := range components {
		if c >= 3 {
			shear += 2 * t[c] * t[c]
			continue
		}
		all += t[c] * t[c]
		deviator += (t[c] - mean) * (t[c] - mean)
	}
	return all + shear, deviator + shear, shear
}

// meanNormal returns the mean of the normal components that count.
func meanNormal(t *mesh.SymmetricTensor, components []int, normals int) (mean float64) {
	for _, c := range components {
		if c < 3 {
			mean += t[c] / float64(normals)
		}
	}
	return mean
}

// add takes one place into the normal equations of the fit.
func (s *fitSums) add(p *pair, components []int, normals int) {
	stressMean, strainMean := meanNormal(&p.stress, components, normals), meanNormal(&p.strain, components, normals)
	trace := stressMean * float64(normals)
	for _, c := range components {
		stress, strain, weight := p.stress[c], p.strain[c], 1.0
		if c >= 3 {
			weight = 2
		}
		s.ss += weight * stress * stress
		s.se += weight * stress * strain
		s.ee += weight * strain * strain
		if c < 3 {
			s.st += stress * trace
			s.tt += trace * trace
			s.te += trace * strain
			stress, strain = stress-stressMean, strain-strainMean
		}
		s.dd += weight * stress * stress
		s.de += weight * stress * strain
		s.cc += weight * strain * strain
	}
}

// solve returns the best a and b of ε = a σ + b tr σ I, and the best a for the
// deviators alone.
func (s *fitSums) solve() (a, b, shape float64) {
	if determinant := s.ss*s.tt - s.st*s.st; determinant > 1e-12*s.ss*s.tt {
		a = (s.se*s.tt - s.te*s.st) / determinant
		b = (s.te*s.ss - s.se*s.st) / determinant
	} else if s.ss > 0 {
		a = s.se / s.ss
	}
	if s.dd > 0 {
		shape = s.de / s.dd
	}
	return a, b, shape
}

// fit measures how well each region's best isotropic law fits; the second pass over the
// places keeps the digits that the sums of squares would lose.
func (a *audit) fit(r *reading, sample []samplePlace, sums []fitSums, components []int, normals int, size, shapeSize float64) (full, shape float64) {
	var fullRest, shapeRest float64
	type constants struct{ a, b, shape float64 }
	fitted := make([]constants, len(sums))
	for i := range sums {
		fitted[i].a, fitted[i].b, fitted[i].shape = sums[i].solve()
		// Not a stable solid: no fit.
		if fitted[i].a < 0 || fitted[i].shape < 0 {
			fitted[i] = constants{}
		}
	}
	for i := range sample {
		p := a.pairAt(r, &sample[i])
		f := &fitted[sample[i].region]
		stressMean, strainMean := meanNormal(&p.stress, components, normals), meanNormal(&p.strain, components, normals)
		for _, c := range components {
			weight, spherical := 2.0, 0.0
			stress, strain := p.stress[c], p.strain[c]
			if c < 3 {
				weight, spherical = 1, f.b*stressMean*float64(normals)
			}
			rest := strain - f.a*stress - spherical
			fullRest += weight * rest * rest
			if c < 3 {
				stress, strain = stress-stressMean, strain-strainMean
			}
			rest = strain - f.shape*stress
			shapeRest += weight * rest * rest
		}
	}
	return share(fullRest, size), share(shapeRest, shapeSize)
}
