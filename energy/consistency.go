package energy

import "math"

const (
	// hookeTolerance is the misfit of Hooke's law from which on it is reported: typed
	// moduli and single precision stay below (methods: 1e-3; common practice, no
	// source).
	hookeTolerance = 1e-3
	// offsetTolerance is the share of a misfit that may be other than an offset of the
	// normal strains equal in all directions, for it to count as one.
	offsetTolerance = 1e-2
)

// check compares what has been settled with the numbers, and reports what does not
// agree: the study's own statements, the material's law, the units.
func (a *audit) check(chosen *measured) {
	if !chosen.isLoaded {
		return // nothing but zeros
	}
	isContradicted := a.checkStudy(chosen)
	if a.from != FromStressStrain {
		return
	}
	a.checkSymmetry()
	if math.IsNaN(chosen.byLaw) {
		a.checkOffsetWithoutLaw(chosen)
		return
	}
	if chosen.byLaw <= hookeTolerance {
		return
	}
	switch {
	case a.isOtherPlane(chosen):
		a.findings.add("hooke-mismatch", 0, "stress and strain differ by %.1g of the strain from the material's law, but fit it in %s: is [model] idealisation right? The energy is ½ σ:ε of what the file holds", chosen.byLaw, otherPlane[a.options.Idealisation])
	case a.isInelastic(chosen):
		a.useLaw(chosen)
	case isContradicted:
	case a.checkUnits(chosen):
	default:
		a.findings.add("hooke-mismatch", 0, "stress and strain do not belong together by the material's law: they differ by %.1g of the strain; are both of the same state, and is it the right material? The energy is ½ σ:ε of what the file holds", chosen.byLaw)
	}
}

// checkStudy reports statements of the study that another reading of the same numbers
// contradicts. The study is obeyed.
func (a *audit) checkStudy(chosen *measured) bool {
	in := a.inputs
	isStated := in.stress.orderBy == byStudy || in.strain.orderBy == byStudy || in.strain.shearBy == byStudy || in.kindBy == byStudy
	if a.from != FromStressStrain || !isStated || min(least(chosen.byLaw), least(chosen.byLawShape), chosen.byFit) < hookeTolerance {
		return false
	}
	list := a.measure(a.readings(true))
	best := &list[0]
	for i := range list {
		if list[i].value < best.value {
			best = &list[i]
		}
	}
	var stated *measured
	for i := range list {
		if list[i].key(true) == chosen.key(true) {
			stated = &list[i]
		}
	}
	if stated == nil || best.value > fits || stated.value < beats*best.value || agree([]measured{*stated, *best}) {
		return false
	}
	a.findings.add("study-contradicted", 0, "the study has the arrays read as: %s. Hooke's law fits to %.1g that way, and to %.1g as: %s. The study is obeyed; the energy would be %.4g times as large",
		stated.String(), stated.value, best.value, best.String(), best.energy/stated.energy)
	return true
}

// least takes NaN, a misfit that does not exist, for infinite.
func least(value float64) float64 {
	if math.IsNaN(value) {
		return math.Inf(1)
	}
	return value
}

// otherPlane names the idealisation that a plane one may be confused with.
var otherPlane = map[Idealisation]Idealisation{PlaneStress: PlaneStrain, PlaneStrain: PlaneStress}

// isOtherPlane reports whether the law fits in the other plane idealisation: its misfit
// looks like an offset of the normal strains, too.
func (a *audit) isOtherPlane(chosen *measured) bool {
	other, isPlane := otherPlane[a.options.Idealisation]
	if !isPlane || a.inputs.stress.layout.Has(2) {
		return false
	}
	components, normals := a.components(&chosen.reading)
	var rest, size float64
	for i := range a.sample {
		place := &a.sample[i]
		p := a.pairAt(&chosen.reading, place)
		law := place.law
		if other == PlaneStrain {
			law.CompletePlaneStrain(&p.stress, p.strain[2])
		} else {
			p.stress[2] = 0
		}
		predicted := law.Strain(&p.stress)
		square, _, _ := squares(&p.strain, components, normals)
		size += square
		for c := range predicted {
			predicted[c] = p.strain[c] - predicted[c]
		}
		square, _, _ = squares(&predicted, components, normals)
		rest += square
	}
	return share(rest, size) < hookeTolerance
}

// isInelastic reports whether the strain carries an inelastic part that no array
// explains: the misfit is an offset of the normal strains equal in all directions, or
// it stands only where there is plastic strain.
func (a *audit) isInelastic(chosen *measured) bool {
	components, normals := a.components(&chosen.reading)
	var all, deviator, plastic float64
	hasPlastic := false
	for i := range a.sample {
		place := &a.sample[i]
		p := a.pairAt(&chosen.reading, place)
		rest := a.rest(place.law, &p)
		square, shape, _ := squares(&rest, components, normals)
		all += square
		deviator += shape
		if place.isPlastic || place.plastic != [9]float64{} {
			hasPlastic = true
			plastic += square
		}
	}
	if normals > 1 && deviator <= offsetTolerance*offsetTolerance*all {
		return true
	}
	return hasPlastic && all-plastic <= offsetTolerance*offsetTolerance*all
}

// useLaw lets the energy come from stress by the law, because the strain is not the
// elastic one. What the study states of the energy's source is obeyed.
func (a *audit) useLaw(chosen *measured) {
	a.hasOtherStrain = true
	if a.options.From != "" {
		a.findings.add("study-contradicted", 0, "the strain carries a part that is not elastic and that no array explains (%.1g of it); the study states [energy] from = %q, so the energy is ½ σ:ε of the whole strain", chosen.byLaw, a.options.From)
		return
	}
	a.from = FromStress
	a.inputs.used.Strain.Why += "; not used: it carries a part that is not elastic"
	a.findings.add("total-strain-used", 0, "the strain carries a part that is not elastic and that no array explains (thermal or plastic; %.1g of the strain): the energy is ½ σ:S:σ, from stress by the law; name the thermal or plastic strain in [fields] to use the strain", chosen.byLaw)
}

// checkOffsetWithoutLaw looks for an offset of the normal strains where no law is
// given. The elastic energy is then unknown.
func (a *audit) checkOffsetWithoutLaw(chosen *measured) {
	if chosen.byFit <= hookeTolerance || chosen.byFitShape > offsetTolerance*chosen.byFit || a.options.From != "" {
		return
	}
	a.isUnknown, a.hasOtherStrain = true, true
	a.findings.add("total-strain-used", 0, "the strain carries an offset of its normal terms that is not elastic and that no array explains (%.1g of the strain), and without the material's law the elastic energy cannot be told: give the material, or name the thermal strain in [fields]", chosen.byFit)
}

// unitFactors are the ratios of stress units that get mixed up: powers of a thousand,
// and psi or ksi against MPa (1 ksi = 6.894757293168 MPa).
var unitFactors = []float64{1e9, 1e6, 1e3, 1e-3, 1e-6, 1e-9, 145.037737730, 1 / 145.037737730, 6.894757293168, 1 / 6.894757293168}

// checkUnits reports a law that fits but for one common factor: a slip of units where
// the factor is one of units, another material otherwise.
func (a *audit) checkUnits(chosen *measured) bool {
	components, _ := a.components(&chosen.reading)
	var cross, square, strainSquare float64
	for i := range a.sample {
		place := &a.sample[i]
		p := a.pairAt(&chosen.reading, place)
		rest := a.rest(place.law, &p)
		for _, c := range components {
			predicted := p.strain[c] - rest[c]
			cross += predicted * p.strain[c]
			square += predicted * predicted
			strainSquare += p.strain[c] * p.strain[c]
		}
	}
	factor := square / cross // stress by this much too large for the strain
	remaining := 1 - cross*cross/(square*strainSquare)
	if !(cross > 0) || remaining > offsetTolerance*offsetTolerance {
		return false
	}
	for _, unit := range unitFactors {
		if math.Abs(factor/unit-1) < 0.02 {
			a.findings.add("units-suspect", 0, "Hooke's law fits, but with moduli %.4g times those of the material: stress and material are in different units", factor)
			return true
		}
	}
	a.findings.add("hooke-mismatch", 0, "Hooke's law fits, but with moduli %.4g times those of the material: is it the right material? The energy is ½ σ:ε of what the file holds", factor)
	return true
}

// checkSymmetry reports nine-component tensors that are not symmetric.
func (a *audit) checkSymmetry() {
	in := a.inputs
	for _, field := range []struct {
		name   string
		input  *tensorInput
		stored func(*samplePlace) *[9]float64
	}{
		{"stress", &in.stress, func(p *samplePlace) *[9]float64 { return &p.stress }},
		{"strain", &in.strain, func(p *samplePlace) *[9]float64 { return &p.strain }},
	} {
		if !field.input.exists() || field.input.layout.Components != 9 || len(field.input.order) != 9 {
			continue
		}
		var difference, size float64
		for i := range a.sample {
			t := field.stored(&a.sample[i])
			for row := range 3 {
				for column := range 3 {
					value := t[3*row+column]
					size += value * value
					difference += (value - t[3*column+row]) * (value - t[3*column+row])
				}
			}
		}
		if asymmetry := share(difference, size); asymmetry > symmetryTolerance {
			a.findings.add("asymmetric-tensor", 0, "the nine-component %s is not symmetric (by %.3g of its size); its symmetric part is used: is it another tensor (first Piola-Kirchhoff stress, a gradient), or in another order?", field.name, asymmetry)
		}
	}
}

// symmetryTolerance is far above what single precision leaves (methods: 1e-6 is
// suspect).
const symmetryTolerance = 1e-6
