package energy

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"strainledger/mesh"
)

const (
	// beats is the factor by which the best reading must fit better than another one
	// for the other to be dismissed.
	beats = 5
	// fits is the misfit below which a reading counts as one that describes the data
	// (rounding to single precision leaves about 1e-6, typed moduli up to 1e-3).
	fits = 1e-2
	// noise is the misfit below which readings are equally good: what single
	// precision leaves.
	noise = 1e-6
	// energyTolerance is how far the energies of two readings may be apart before it
	// matters which is taken.
	energyTolerance = 1e-6
	// screened is the number of places on which all readings are tried; the ones that
	// are left are tried on the whole sample.
	screened = 200
)

// An audit finds out from the numbers how the arrays are to be read, where neither the
// study nor the file says, and whether what is said agrees with the numbers.
type audit struct {
	*plan
	sample []samplePlace
}

// A measured reading is one with its misfit.
type measured struct {
	reading
	misfit
	value float64 // the misfit that the readings are compared by
}

// audit settles component orders, shear convention and kind of strain, and reports what
// does not agree. Fields that the study and the file settle are only looked at.
func (p *plan) audit(ctx context.Context, walk *mesh.Walk) error {
	if p.from == FromDisplacement {
		return nil
	}
	if err := p.lookAtBorder(ctx, walk); err != nil {
		return err
	}
	sample, err := p.takeSample(ctx, walk, nil)
	if err != nil {
		return err
	}
	a := &audit{plan: p, sample: sample}
	list := a.measure(a.readings(false))
	good := equallyGood(list)
	if !agree(good) && p.inputs.displacement.exists() {
		if good, err = a.byGradient(ctx, walk, good); err != nil {
			return err
		}
	}
	isUnloaded := a.isUnloaded(&good[0].reading)
	if !agree(good) && p.from != FromStress && !isUnloaded {
		return a.undecidable(good)
	}
	chosen := good[0]
	if isUnloaded {
		chosen = list[0]
	}
	chosen.misfit = a.misfitOf(&chosen.reading, a.sample)
	a.apply(&chosen, list)
	if !isUnloaded {
		a.check(&chosen)
	}
	return nil
}

// unloaded is the elastic strain, as a share of the strain in the file, below which it
// is the rounding of a difference: a body that was unloaded and keeps its plastic or
// thermal strain.
const unloaded = 1e-9

// isUnloaded reports whether the stress is nothing beside the strain. Then there is
// nothing to tell conventions by, and next to no energy that depends on them.
func (a *audit) isUnloaded(r *reading) bool {
	if a.from != FromStressStrain {
		return false
	}
	var elastic, stored float64
	for i := range a.sample {
		law := a.regions.regions[a.sample[i].region].law
		if law == nil {
			return false
		}
		p := a.pairAt(r, &a.sample[i])
		strain := law.Strain(&p.stress)
		elastic += mesh.Product(&strain, &strain)
		raw := r.strain.At(a.sample[i].strain[:])
		stored += mesh.Product(&raw, &raw)
	}
	return elastic <= unloaded*unloaded*stored
}

// lookAtBorder finds the points that regions share, where fields are on points.
func (p *plan) lookAtBorder(ctx context.Context, walk *mesh.Walk) error {
	if p.inputs.isPerCell() || p.inputs.rule != nil || len(p.regions.regions) < 2 {
		return nil
	}
	border, count, err := p.findBorder(ctx, walk)
	if err != nil {
		return err
	}
	p.border = border
	if count > 0 && p.hasSeveralMaterials() {
		p.findings.add("point-data-across-regions", 0, "%d points on the border of regions of different materials have one value for both sides: averages across the border move energy between the regions; export cell or integration-point data", count)
	}
	return nil
}

// hasSeveralMaterials reports whether not all regions are of one material.
func (p *plan) hasSeveralMaterials() bool {
	for i := range p.regions.regions {
		if p.regions.regions[i].material != p.regions.regions[0].material {
			return true
		}
	}
	return false
}

// candidateOrders are the component orders that occur in result files, by the number
// of components; the first is what is taken where nothing tells.
var candidateOrders = map[int][]mesh.Order{
	3: {mesh.OrderOf3, {"xx", "xy", "yy"}},
	4: {mesh.OrderOf4, {"xx", "xy", "yx", "yy"}, {"xx", "zz", "yy", "xy"}},
	6: {
		mesh.OrderOf6,
		{"xx", "yy", "zz", "yz", "xz", "xy"},
		{"xx", "yy", "zz", "xy", "xz", "yz"},
		{"xx", "xy", "xz", "yy", "yz", "zz"},
		{"xx", "xy", "yy", "xz", "yz", "zz"},
	},
	9: {mesh.OrderOf9},
}

// ordersOf returns the orders in which a field may be stored. With isFree the study's
// own statement is only the first of them.
func (a *audit) ordersOf(in *tensorInput, isFree bool) []mesh.Order {
	if !in.exists() {
		return []mesh.Order{nil}
	}
	if in.orderBy != byDefault && !isFree {
		return []mesh.Order{in.order}
	}
	orders := []mesh.Order{in.order}
	for _, order := range candidateOrders[in.layout.Components] {
		if order.String() != in.order.String() && a.suits(order) {
			orders = append(orders, order)
		}
	}
	return orders
}

// suits reports whether an order has the components that the idealisation needs.
func (a *audit) suits(order mesh.Order) bool {
	layout, err := mesh.NewLayout(order, len(order), mesh.TensorShear, 1)
	if err != nil {
		return false
	}
	for _, c := range neededComponents(a.options.Idealisation) {
		if !layout.Has(c) {
			return false
		}
	}
	return true
}

// readings lists the ways to take the arrays, the one that is taken by default first.
// Ways that pair the same numbers with the same weights are one.
func (a *audit) readings(isFree bool) []reading {
	in := a.inputs
	shears := []mesh.Shear{in.strain.shear}
	if in.strain.exists() && (in.strain.shearBy == byDefault || isFree) {
		shears = []mesh.Shear{mesh.TensorShear, mesh.EngineeringShear, mesh.MandelShear}
		if in.strain.shear != mesh.TensorShear {
			shears = []mesh.Shear{in.strain.shear, mesh.TensorShear}
		}
	}
	kinds := []bool{in.strainIsElastic}
	if (in.kindBy == byDefault || isFree) && a.hasInelastic() {
		kinds = append(kinds, !in.strainIsElastic)
	}
	swaps := []bool{false}
	if in.rolesBy == byDefault {
		swaps = a.swaps()
	}
	var list []reading
	seen := map[string]bool{}
	for _, swapped := range swaps {
		for _, kind := range kinds {
			for _, shear := range shears {
				for _, stressOrder := range a.ordersOf(&in.stress, isFree) {
					for _, strainOrder := range a.ordersOf(&in.strain, isFree) {
						r := reading{stressOrder: stressOrder, strainOrder: strainOrder, shear: shear, isElastic: kind, isSwapped: swapped}
						if key := r.key(a.namesMatter()); !seen[key] && a.lay(&r) {
							seen[key] = true
							list = append(list, r)
						}
					}
				}
			}
		}
	}
	return list
}

// swaps returns whether the two arrays whose names say nothing may be exchanged: the
// materials' moduli tell; without them the larger numbers are taken for the stress, as
// they are in any unit but that of the modulus itself.
func (a *audit) swaps() []bool {
	for i := range a.regions.regions {
		if a.regions.regions[i].law != nil {
			return []bool{false, true}
		}
	}
	var stress, strain float64
	for i := range a.sample {
		for c := range a.sample[i].stress {
			stress += a.sample[i].stress[c] * a.sample[i].stress[c]
			strain += a.sample[i].strain[c] * a.sample[i].strain[c]
		}
	}
	return []bool{strain > stress}
}

// namesMatter reports whether it can be seen which shear term is which: an isotropic
// law, the energy and the von Mises stress do not tell, an anisotropic law does, and so
// does the displacement beside a strain alone.
func (a *audit) namesMatter() bool {
	for i := range a.regions.regions {
		if law := a.regions.regions[i].law; law != nil && !law.IsIsotropic() {
			return true
		}
	}
	return !a.inputs.stress.exists()
}

// key names what a reading does to the numbers: which are paired, which are normal
// terms, and, where that matters, which shear term is which.
func (r *reading) key(namesMatter bool) string {
	text := fmt.Sprintf("%v %v %v", r.shear, r.isElastic, r.isSwapped)
	if namesMatter {
		return fmt.Sprint(text, r.stressOrder, r.strainOrder)
	}
	for position, name := range r.stressOrder {
		partner := -1
		for i, other := range r.strainOrder {
			if other == name {
				partner = i
			}
		}
		text += fmt.Sprintf(" %d-%d%v", position, partner, name[0] == name[1])
	}
	return text
}

// lay makes the layouts of a reading; false where there are none such.
func (a *audit) lay(r *reading) bool {
	in := a.inputs
	sign := 1.0
	if a.options.Fields.Stress.Compression {
		sign = -1
	}
	var err error
	if in.stress.exists() {
		if r.stress, err = mesh.NewLayout(r.stressOrder, in.stress.layout.Components, in.stress.shear, sign); err != nil {
			return false
		}
	}
	if in.strain.exists() {
		if r.strain, err = mesh.NewLayout(r.strainOrder, in.strain.layout.Components, r.shear, 1); err != nil {
			return false
		}
	}
	return true
}

// hasInelastic reports whether the file tells of thermal or plastic strain.
func (a *audit) hasInelastic() bool {
	in := a.inputs
	return in.thermalStrain.exists() || in.plasticStrain.exists() || in.temperature.exists()
}

// measure tries the readings on part of the sample, and those that are left on all of
// it, for the few places may lack what tells them apart. The misfit that counts is the first of: by the materials' laws, by the laws but
// for a mean normal part, by fitted laws, by fitted laws but for a mean normal part;
// the first by which some reading fits.
func (a *audit) measure(readings []reading) []measured {
	few := a.sample
	if len(few) > screened {
		few = make([]samplePlace, 0, screened)
		for i := range screened {
			few = append(few, a.sample[i*len(a.sample)/screened])
		}
	}
	list := make([]measured, len(readings))
	for i := range readings {
		list[i] = measured{reading: readings[i], misfit: a.misfitOf(&readings[i], few)}
	}
	rate(list)
	if len(few) == len(a.sample) || len(list) < 2 {
		return list
	}
	left := equallyGood(list)
	for i := range list {
		if slices.ContainsFunc(left, func(m measured) bool { return m.key(true) == list[i].key(true) }) {
			list[i].misfit = a.misfitOf(&list[i].reading, a.sample)
		}
	}
	rate(list)
	return list
}

// rate chooses the misfit by which the readings are compared.
func rate(list []measured) {
	kinds := []func(*measured) float64{
		func(m *measured) float64 { return m.byLaw },
		func(m *measured) float64 { return m.byLawShape },
		func(m *measured) float64 { return m.byFit },
		func(m *measured) float64 { return m.byFitShape },
	}
	chosen := kinds[2]
	for _, kind := range kinds {
		isFit := false
		for i := range list {
			isFit = isFit || kind(&list[i]) < fits
		}
		if isFit {
			chosen = kind
			break
		}
	}
	for i := range list {
		list[i].value = chosen(&list[i])
	}
}

// equallyGood returns the readings that the best one does not beat, in their order.
func equallyGood(list []measured) []measured {
	best := math.Inf(1)
	for i := range list {
		best = min(best, list[i].value)
	}
	var good []measured
	for i := range list {
		if !(list[i].value > max(beats*best, noise)) {
			good = append(good, list[i])
		}
	}
	return good
}

// agree reports whether it does not matter to the energy which of the readings is taken.
func agree(list []measured) bool {
	for i := range list {
		if math.Abs(list[i].energy-list[0].energy) > energyTolerance*max(list[i].size, list[0].size) {
			return false
		}
	}
	return true
}

// mostListed is how many readings a message lists.
const mostListed = 6

// undecidable says which readings are left and how far their energies are apart.
func (a *audit) undecidable(good []measured) error {
	var lines []string
	for i := range good {
		if i == mostListed {
			lines = append(lines, fmt.Sprintf("and %d more", len(good)-i))
			break
		}
		ratio := good[i].energy / good[0].energy
		lines = append(lines, fmt.Sprintf("%s (%.4g times the energy of the first)", good[i].String(), ratio))
	}
	reason := "nothing in the file tells"
	if a.from == FromStressStrain {
		reason = fmt.Sprintf("Hooke's law fits them equally well (to %.1g)", good[0].value)
		if good[0].value > 0.1 {
			reason = fmt.Sprintf("Hooke's law fits none of them (the best to %.1g)", good[0].value)
		}
	}
	return inputError("how the arrays are stored cannot be decided, and the energy depends on it; %s: %s; state order, shear and kind in [fields]", reason, strings.Join(lines, "; "))
}
