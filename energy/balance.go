package energy

import (
	"cmp"
	"context"
	"fmt"
	"math"

	"strainledger/mesh"
)

const (
	// The gap from which on it is reported: energy from displacement or values at
	// integration points follows the solution, values per cell or at points lose what
	// varies between them. (Common practice, no source; measured on one membrane: 8 %
	// with 8×8 linear cells, 2.4 % with 16×16.)
	closeGap = 0.02
	wideGap  = 0.15
	// graveGap is the gap that no loss of sampling explains.
	graveGap = 0.5
)

// weigh brings what the file's nodal forces say of the external work.
func (p *plan) weigh(ctx context.Context, walk *mesh.Walk) error {
	if !p.hasNodalForces() {
		return nil
	}
	once, written, err := p.sumForces(ctx, walk)
	if err == nil {
		p.forces = p.chooseForces(once, written)
	}
	return err
}

// balance holds the work of the loads against the energy stored in the accounts and
// elsewhere; nil where nothing is known of that work. For a linear elastic body loaded
// from zero the two are equal.
//
// Source: Clapeyron's theorem (Lamé 1852, from memory).
func (p *plan) balance(ledger *Ledger, total *part) *Balance {
	unequal := p.unequalByNature(total)
	b := &Balance{
		ExternalWork: None, Stored: ledger.Total.Energy, Elsewhere: p.elsewhere(), Gap: None,
		Reasons: append([]string{}, unequal...), Parts: append([]Elsewhere{}, p.options.Elsewhere...),
	}
	if p.isUnknown {
		b.Stored = None
	}
	if !p.fillExternalWork(b, len(unequal) > 0) {
		return nil
	}
	switch {
	case !b.Stored.Exists():
		b.Reasons = append(b.Reasons, "the stored energy cannot be told")
	case b.ExternalWork == 0:
		b.Reasons = append(b.Reasons, "the external work is 0")
	case len(unequal) == 0:
		b.Gap = (b.ExternalWork - b.Stored - b.Elsewhere) / b.ExternalWork
	}
	b.Reasons = append(b.Reasons, p.otherReasons(total)...)
	p.findGap(b)
	return b
}

// elsewhere adds up the energy that the study states beside the file's.
func (p *plan) elsewhere() Number {
	var sum Sum
	for _, part := range p.options.Elsewhere {
		sum.Add(float64(part.Energy))
	}
	return Number(sum.Float64())
}

// fillExternalWork writes the external work and where it comes from, and reports whether
// anything is known of it. What the study states is taken as it is; ½ F·u is the work of
// loads that have grown in proportion with the displacement, and of those only.
func (p *plan) fillExternalWork(b *Balance, isUnequal bool) bool {
	stated := &p.options.Balance
	isForce := len(stated.Loads) > 0 || p.hasNodalForces()
	switch {
	case stated.ExternalWork != nil:
		b.Source, b.ExternalWork = "stated by the study", Number(*stated.ExternalWork)
	case isForce && isUnequal:
		b.Reasons = append(b.Reasons, "½ F·u is then not the external work: state [balance] external_work")
	case len(stated.Loads) > 0:
		b.Source, b.ExternalWork = "½ F·u of the loads that the study states", workOfLoads(stated.Loads)
	case p.hasNodalForces():
		work, reasons := p.workOf(p.forces, b.Stored)
		if b.ExternalWork = work; work.Exists() {
			b.Source = Text("½ F·u of the nodal forces " + p.inputs.nodalForce.names())
		}
		b.Reasons = append(b.Reasons, reasons...)
	case p.inputs.nodalForce.problem != "":
		b.Reasons = append(b.Reasons, p.inputs.nodalForce.problem)
	case len(b.Parts) > 0:
		b.Reasons = append(b.Reasons, "the external work is not known: the file has no nodal forces; state [balance] external_work")
	default:
		return false
	}
	return true
}

// workOfLoads returns ½ Σ F·u of stated resultants.
func workOfLoads(loads []Load) Number {
	var sum Sum
	for i := range loads {
		for axis, force := range loads[i].Force {
			sum.Add(force * loads[i].Displacement[axis])
		}
	}
	return Number(sum.Float64() / 2)
}

// negligible is the plastic or thermal strain, as a share of the total one, up to which
// it is rounding: the plastic strain of a solver at first yield, a temperature rise
// that is none.
const negligible = 1e-9

// unequalByNature lists what keeps external work and stored energy apart without any
// mistake and by an amount that is not known, as far as the file shows it.
func (p *plan) unequalByNature(total *part) []string {
	var reasons []string
	if p.inputs.otherThermal != "" || total.thermal > negligible*negligible*total.strain {
		reasons = append(reasons, "thermal strain: what it makes the body store is not the work of loads")
	}
	if total.plastic > negligible*negligible*total.strain {
		reasons = append(reasons, "plastic strain: part of the work is dissipated, and force and displacement do not grow in proportion")
	}
	if p.hasOtherStrain {
		reasons = append(reasons, "the strain carries a part that is not elastic and that no array explains")
	}
	return reasons
}

// otherReasons lists what else the file shows that may keep the two apart: large
// deformation, of which the gap itself tells whether the solver has followed it, and
// cells in no account.
func (p *plan) otherReasons(total *part) []string {
	var reasons []string
	if p.findings.has("large-strain") {
		reasons = append(reasons, "large deformation: if the solver follows it, force and displacement do not grow in proportion, and ½ σ:ε of small strain is not what is stored")
	}
	if p.options.Deformed {
		reasons = append(reasons, "the points are in the deformed position: the measure of cells is that under load")
	}
	if p.lower.count > 0 {
		reasons = append(reasons, p.lower.words()+": what they hold is in no account")
	}
	for reason := unsupportedCell; reason < exclusionReasons; reason++ {
		if n := total.excluded[reason].cells[p.dimension]; n > 0 {
			reasons = append(reasons, fmt.Sprintf("%d cells are left out as %s: what they hold is in no account", n, exclusionNames[reason]))
		}
	}
	return reasons
}

// isSampledClosely reports whether the energy follows the solution inside cells.
func (p *plan) isSampledClosely() bool {
	used := cmp.Or(p.inputs.used.Stress, p.inputs.used.Strain)
	return p.from == FromDisplacement || used != nil && used.On == "integration"
}

// findGap reports a gap that is too large for how the energy was sampled.
func (p *plan) findGap(b *Balance) {
	limit := wideGap
	if p.isSampledClosely() {
		limit = closeGap
	}
	size := math.Abs(float64(b.Gap))
	if !(size > limit) {
		return
	}
	found := b.Stored + b.Elsewhere
	text := fmt.Sprintf("the work of the loads is %.6g and the energy found %.6g, a gap of %.3g %%", float64(b.ExternalWork), float64(found), 100*float64(b.Gap))
	causes := "energy in what has no cells (springs, bolts, contact, rigid links: state it in [[elsewhere]]), loads that did not grow in proportion with the displacement (growing contact, follower forces), motion or damping, hourglass control, or values averaged over too coarse a mesh"
	if b.Gap < 0 {
		causes = "a load or a moved support whose work is missing, a wrong thickness or unit, stress and forces of different states, or loads that did not grow in proportion with the displacement"
	}
	if p.options.Idealisation == Axisymmetric && math.Abs(float64(found/b.ExternalWork)/(2*math.Pi)-1) < limit {
		causes = "forces for one radian, where the accounts are for the whole ring: multiply the external work by 2π"
	}
	p.findings.addGraded(size > graveGap, "balance-gap", 0, "%s; look for %s", text, causes)
}
