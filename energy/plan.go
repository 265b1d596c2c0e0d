package energy

import (
	"context"
	"slices"

	"strainledger/mesh"
)

// A plan is all that is decided before the first cell is evaluated.
type plan struct {
	model   *mesh.Model
	options *Options
	from    EnergySource
	inputs  *inputs
	regions *regionMap

	dimension    int // of the cells that carry energy
	by           string
	hotspotCount int
	listCount    int
	bounds       mesh.Bounds
	places       []int64  // of the first cell of each piece among all cells of the model
	border       pointSet // points that regions share, where fields are on points
	isUnknown    bool     // the energy cannot be told: inelastic strain and no law
	findings     findings

	hasOtherStrain bool        // the strain carries an inelastic part that no array explains
	motion         motion      // what a look at the displacement has shown
	lower          unaccounted // lower cells that are no faces or edges
	forces         *forceSums  // nil: no nodal forces
	sampling       sampling    // of the smooth stress of the error estimate

	againstGradients bool // it is held against the stress of the displacement, which the energy does not use
}

// A Plan says what a tally would do, for a look before the run.
type Plan struct {
	EnergyFrom EnergySource
	Fields     FieldsUsed
	Regions    []PlannedRegion
	Cells      int64
	Findings   []Finding
}

// A PlannedRegion is one region of a Plan.
type PlannedRegion struct {
	Name      string
	Material  string
	Criterion Criterion
	Limit     Number // in tension
}

// PlanTally decides everything that a tally would decide from the headers and the
// region labels, and computes no energy. Its errors are those of Tally for the same
// inputs, as far as headers tell.
func PlanTally(ctx context.Context, model *mesh.Model, options *Options) (*Plan, error) {
	walk := mesh.NewWalk(model, options.Workers, options.ChunkCells)
	defer walk.Close()
	p, err := newPlan(ctx, walk, model, options)
	if err != nil {
		return nil, err
	}
	result := &Plan{EnergyFrom: p.from, Fields: p.inputs.used, Cells: model.CellCount(), Findings: p.findings.sorted(options.Acceptances)}
	for i := range p.regions.regions {
		r := &p.regions.regions[i]
		planned := PlannedRegion{Name: r.name, Criterion: r.limit.criterion, Limit: Number(r.limit.tension)}
		if r.material != nil {
			planned.Material = r.material.Name
		}
		result.Regions = append(result.Regions, planned)
	}
	return result, nil
}

// newPlan decides fields, regions and lists.
func newPlan(ctx context.Context, walk *mesh.Walk, model *mesh.Model, options *Options) (*plan, error) {
	p := &plan{model: model, options: options, dimension: 2}
	if options.Idealisation == "" {
		options = withDefaults(options)
		p.options = options
	}
	if options.Idealisation == Solid {
		p.dimension = 3
	}
	for _, remark := range model.Remarks {
		p.findings.add(remark.Code, remark.Cells, "%s", remark.Message)
	}
	var err error
	if p.inputs, p.from, err = findInputs(model, options, &p.findings); err != nil {
		return nil, err
	}
	if p.regions, err = newRegionMap(ctx, walk, model, options, p.inputs); err != nil {
		return nil, err
	}
	if err := p.checkRegions(); err != nil {
		return nil, err
	}
	if err := p.checkRequirements(); err != nil {
		return nil, err
	}
	if err := p.audit(ctx, walk); err != nil {
		return nil, err
	}
	p.chooseLists()
	p.chooseSampling()
	p.places = firstPlaces(model)
	p.noteSettings()
	return p, nil
}

// withDefaults returns the options with the idealisation's default.
func withDefaults(options *Options) *Options {
	changed := *options
	changed.Idealisation = Solid
	return &changed
}

// checkRegions refuses regions that lack a value which their cells need.
func (p *plan) checkRegions() error {
	for i := range p.regions.regions {
		r := &p.regions.regions[i]
		if r.law == nil && p.from != FromStressStrain {
			return studyError("region %q: energy from %s alone needs a material with youngs_modulus and poissons_ratio", r.name, p.from)
		}
		if r.law == nil && p.options.Idealisation == PlaneStrain && p.inputs.stress.exists() && !p.inputs.stress.layout.Has(2) {
			return inputError("region %q: the stress has no zz component, which in plane strain comes from the material's law; give the region a material with youngs_modulus and poissons_ratio", r.name)
		}
		if p.options.Idealisation == PlaneStress && r.thickness == 0 && p.options.ThicknessArray == "" {
			return studyError("region %q: plane stress needs a thickness: state [model] thickness", r.name)
		}
		if p.inputs.temperature.exists() && r.material != nil &&
			Number(r.material.ThermalExpansion).Exists() && !Number(r.material.ReferenceTemperature).Exists() {
			return studyError("material %q: thermal strain comes from temperature, so that thermal_expansion needs a reference_temperature", r.material.Name)
		}
	}
	return nil
}

// checkRequirements refuses requirements on a region that there is not, or on no
// number.
func (p *plan) checkRequirements() error {
	for _, requirement := range p.options.Requirements {
		if err := CheckQuantity(requirement.Quantity); err != nil {
			return studyError("requirement %q: %w", requirement.Name, err)
		}
		if requirement.Region == "" {
			continue
		}
		names := make([]string, len(p.regions.regions))
		for i := range names {
			names[i] = p.regions.regions[i].name
		}
		if !slices.Contains(names, requirement.Region) {
			return studyError("requirement %q: no region %q; there are: %s", requirement.Name, requirement.Region, quoted(names))
		}
	}
	return nil
}

// hasLimits reports whether every region has a proportional limit.
func (p *plan) hasLimits() bool {
	for i := range p.regions.regions {
		if !p.regions.regions[i].limit.exists() {
			return false
		}
	}
	return true
}

// chooseLists settles the lengths and the order of the ranked lists.
func (p *plan) chooseLists() {
	p.hotspotCount, p.listCount = p.options.Hotspots.Count, p.options.Limit.List
	if p.hotspotCount == 0 {
		p.hotspotCount = 20
	}
	if p.listCount == 0 {
		p.listCount = 100
	}
	p.by = p.options.Hotspots.By
	if p.by == "" {
		p.by = "density"
		if p.hasLimits() {
			p.by = "utilisation"
		}
	}
}

// noteSettings reports what the study leaves open.
func (p *plan) noteSettings() {
	if p.options.Length == "" || p.options.Stress == "" {
		p.findings.add("units-not-stated", 0, "the study does not state the units of length and stress: the numbers are in the files' own units")
	}
	seen := map[string]bool{}
	for i := range p.regions.regions {
		m := p.regions.regions[i].material
		if m == nil || seen[m.Name] {
			continue
		}
		seen[m.Name] = true
		if Number(m.ProportionalLimit).Exists() && m.Source == "" {
			p.findings.add("limit-without-source", 0, "the proportional limit of material %q is given without its source", m.Name)
		}
	}
	for i := range p.regions.regions {
		r := &p.regions.regions[i]
		if c := r.limit.criterion; r.law != nil && !r.law.IsIsotropic() && (c == VonMises || c == Tresca) {
			p.findings.add("criterion-unsuited", 0, "region %q: criterion %s takes material %q for isotropic, which its law is not: read its equivalent stress with care, or judge by max-principal", r.name, c, r.material.Name)
		}
	}
	if p.from != FromDisplacement && p.inputs.isPerCell() {
		p.findings.add("one-value-per-cell", 0, "stress and strain are one value per cell: energy that varies within cells (bending) is not in the sum, which is a lower estimate for the solution")
	}
}
