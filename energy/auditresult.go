package energy

import (
	"fmt"
	"math"
	"strings"

	"strainledger/mesh"
)

// apply takes a reading for the tally and records who decided it and why.
func (a *audit) apply(chosen *measured, list []measured) {
	in := a.inputs
	if chosen.isSwapped {
		in.stress, in.strain = in.strain, in.stress
		in.used.Stress.Array, in.used.Strain.Array = in.used.Strain.Array, in.used.Stress.Array
		chosen.isSwapped = false
	}
	if in.stress.exists() {
		in.stress.layout, in.stress.order = chosen.stress, chosen.stressOrder
		a.recordStress(chosen, list)
	}
	if in.strain.exists() {
		a.followStrain(&chosen.reading)
		in.strain.layout, in.strain.order, in.strain.shear = chosen.strain, chosen.strainOrder, chosen.shear
		in.strainIsElastic = chosen.isElastic
		a.recordStrain(chosen, list)
	}
}

// followStrain gives the thermal and plastic strain the layout of the strain.
func (a *audit) followStrain(r *reading) {
	in, fields := a.inputs, &a.options.Fields
	for _, field := range []struct {
		input  *tensorInput
		stated *Field
		used   *FieldUsed
	}{
		{&in.thermalStrain, &fields.ThermalStrain, in.used.ThermalStrain},
		{&in.plasticStrain, &fields.PlasticStrain, in.used.PlasticStrain},
	} {
		if !field.input.exists() {
			continue
		}
		field.input.layout = r.layoutLike(field.input, field.stated)
		order, shear := field.input.order, field.input.shear
		field.used.Why += "; order and shear as the study states"
		if len(field.stated.Order) == 0 && field.stated.Shear == "" && field.input.layout.Components == r.strain.Components {
			order, shear = r.strainOrder, r.shear
			field.used.Why = strings.TrimSuffix(field.used.Why, "; order and shear as the study states") + "; stored like the strain"
			field.used.DecidedBy = string(byAudit)
		}
		field.used.Order, field.used.Shear = Text(order.String()), Text(shear.String())
	}
}

// nextBest returns the least misfit of the readings that differ from the chosen one in
// one way, infinite when there are none.
func nextBest(chosen *measured, list []measured, differs func(*measured) bool) float64 {
	next := math.Inf(1)
	for i := range list {
		if differs(&list[i]) {
			next = min(next, list[i].value)
		}
	}
	return next
}

// recordStress records how the stress is read.
func (a *audit) recordStress(chosen *measured, list []measured) {
	in, used := a.inputs, a.inputs.used.Stress
	used.Order, used.DecidedBy = Text(chosen.stressOrder.String()), string(in.stress.orderBy)
	switch {
	case in.stress.orderBy == byStudy:
		used.Why += "; component order as stated"
	case in.stress.orderBy == byFile:
		used.Why += "; component order by the array's component names"
	case !in.strain.exists():
		used.Why += "; component order by default, there being no strain to test it"
		if !agree(equallyGood(list)) {
			a.findings.add("default-order", 0, "the component order of the stress is not stated, and there is no strain to test it; taken as %s, and the energy depends on it: state [fields] stress = { order = ... }", chosen.stressOrder)
		}
	default:
		used.DecidedBy = string(byAudit)
		next := nextBest(chosen, list, func(m *measured) bool { return m.stressOrder.String() != chosen.stressOrder.String() })
		used.Why += "; component order: " + a.verdict(chosen, next, "in the next best order")
		a.warnOrder("stress", chosen.stressOrder)
	}
}

// recordStrain records how the strain is read.
func (a *audit) recordStrain(chosen *measured, list []measured) {
	in, used := a.inputs, a.inputs.used.Strain
	used.Order, used.Shear, used.Kind, used.DecidedBy = Text(chosen.strainOrder.String()), Text(chosen.shear.String()), "total", string(byStudy)
	if chosen.isElastic {
		used.Kind = "elastic"
	}
	switch in.strain.orderBy {
	case byStudy:
		used.Why += "; component order as stated"
	case byFile:
		used.DecidedBy = string(byFile)
		used.Why += "; component order by the array's component names"
	default:
		used.DecidedBy = string(byAudit)
		next := nextBest(chosen, list, func(m *measured) bool { return m.strainOrder.String() != chosen.strainOrder.String() })
		used.Why += "; component order: " + a.verdict(chosen, next, "in the next best order")
		a.warnOrder("strain", chosen.strainOrder)
	}
	if in.strain.shearBy == byStudy {
		used.Why += "; " + chosen.shear.String() + " shear as stated"
	} else {
		a.recordShear(chosen, list)
	}
	if in.kindBy == byDefault && a.hasInelastic() {
		next := nextBest(chosen, list, func(m *measured) bool { return m.isElastic != chosen.isElastic })
		used.Why += fmt.Sprintf("; %s strain: %s", used.Kind, a.verdict(chosen, next, "otherwise"))
	}
}

// recordShear records how shear strain is read.
func (a *audit) recordShear(chosen *measured, list []measured) {
	used := a.inputs.used.Strain
	used.DecidedBy = string(byAudit)
	if chosen.shearContent < 1e-6 {
		used.Why += "; there is no shear strain to tell the convention by, nor does the energy depend on it"
		return
	}
	name, next := "", math.Inf(1)
	for _, other := range []mesh.Shear{mesh.TensorShear, mesh.EngineeringShear} {
		if other == chosen.shear {
			continue
		}
		name = other.String()
		next = nextBest(chosen, list, func(m *measured) bool { return m.shear == other })
		break
	}
	text := fmt.Sprintf("shear strain read as %s: %s", chosen.shear, a.verdict(chosen, next, "as "+name))
	used.Why += "; " + text
	if chosen.shear != mesh.TensorShear {
		a.findings.add("shear-convention", 0, "%s", text)
	}
}

// verdict says how well the chosen reading fits and how well the next best does.
func (a *audit) verdict(chosen *measured, next float64, otherwise string) string {
	by := "Hooke's law fits"
	if !a.inputs.stress.exists() {
		by = "the displacement's gradient fits"
	}
	text := fmt.Sprintf("%s to %.1g", by, chosen.value)
	if math.IsInf(next, 1) {
		return text
	}
	return fmt.Sprintf("%s that way, to %.1g %s", text, next, otherwise)
}

// warnOrder reports an order that is not the one to be expected.
func (a *audit) warnOrder(field string, order mesh.Order) {
	if order.String() != mesh.DefaultOrder(len(order)).String() {
		a.findings.add("component-order", 0, "the components of the %s are not in the usual order; read as %s, which Hooke's law tells from the numbers", field, order)
	}
}
