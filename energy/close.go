package energy

import (
	"cmp"
	"math"
	"slices"

	"strainledger/mesh"
)

// close lays out the ledger of a part that has seen every cell, with the estimate of its
// error, nil where there is none.
func (p *plan) close(total *part, estimate *errorEstimate) (*Ledger, error) {
	if err := p.checkCells(total); err != nil {
		return nil, err
	}
	ledger := &Ledger{
		Schema: LedgerSchema, Title: Text(p.options.Title), Caution: Caution,
		Units: labels(p.options.Length, p.options.Stress, p.options.Mass),
		Model: p.summary(), Sources: p.sources(), Fields: p.inputs.used, Materials: p.materials(),
		Excluded: excluded(total),
	}
	p.fillAccounts(ledger, total)
	p.fillLists(ledger, total)
	p.fillErrors(ledger, estimate)
	p.findInResult(ledger, total)
	ledger.Balance = p.balance(ledger, total)
	if p.isUnknown {
		ledger.withoutEnergy()
	}
	ledger.Findings = p.findings.sorted(p.options.Acceptances)
	ledger.Requirements = judge(ledger, p.options.Requirements)
	return ledger, nil
}

// checkCells refuses a model without a cell that can carry energy, and regions that
// selected nothing.
func (p *plan) checkCells(total *part) error {
	var cells int64
	for i := range total.accounts {
		cells += total.accounts[i].cells
	}
	if cells == 0 {
		return inputError("no cell can be accounted for: %s", whyNoCell(total, p.dimension))
	}
	for i := range p.regions.regions {
		r := &p.regions.regions[i]
		if total.accounts[i].cells == 0 && !r.optional {
			return inputError("region %q has no cells; state optional = true if that is meant", r.name)
		}
	}
	return nil
}

// whyNoCell says what became of the cells of a model in which none counts.
func whyNoCell(total *part, dimension int) string {
	names := []string{"points", "lines", "surfaces", "solids"}
	for reason := range total.excluded {
		for d, count := range total.excluded[reason].cells {
			if count == 0 {
				continue
			}
			if exclusionReason(reason) == otherDimension {
				return "the model is one of " + names[dimension] + ", the file has " + names[d] + ": state [model] idealisation"
			}
			return "all are excluded as " + exclusionNames[reason]
		}
	}
	return "the files have no cells"
}

// summary says how the model was read.
func (p *plan) summary() ModelSummary {
	o := p.options
	summary := ModelSummary{
		Idealisation: string(o.Idealisation), Points: "reference", EnergyFrom: string(p.from), Criterion: string(p.criterion()),
		Diagonal: None, Loading: o.Loading, HotspotTolerance: None,
	}
	if !p.bounds.IsEmpty() {
		summary.Diagonal = Number(p.bounds.Diagonal())
	}
	if o.HotspotTolerance > 0 {
		summary.HotspotTolerance = Number(o.HotspotTolerance)
	}
	if o.Deformed {
		summary.Points = "deformed"
	}
	switch {
	case o.Idealisation != PlaneStress && o.Idealisation != PlaneStrain:
	case o.ThicknessArray != "":
		summary.Thickness = o.ThicknessArray
	case o.Thickness != 0:
		summary.Thickness = Number(o.Thickness)
	case o.Idealisation == PlaneStrain:
		summary.Thickness = Number(1)
	}
	if o.Idealisation == Axisymmetric {
		summary.Axis = "y"
		if o.AxisX {
			summary.Axis = "x"
		}
	}
	return summary
}

// criterion returns the criterion of the study.
func (p *plan) criterion() Criterion { return cmp.Or(p.options.Limit.Criterion, VonMises) }

// sources lists the files of the model.
func (p *plan) sources() []SourceFile {
	list := make([]SourceFile, len(p.model.Sources))
	for i, source := range p.model.Sources {
		list[i] = SourceFile{Path: source.Path, Bytes: source.Bytes, Points: source.Points, Cells: source.Cells, Time: Number(source.Time)}
	}
	return list
}

// materials lists the values of the materials that regions use, in study order.
func (p *plan) materials() []MaterialUsed {
	list := []MaterialUsed{}
	for i := range p.options.Materials {
		m := &p.options.Materials[i]
		isUsed := slices.ContainsFunc(p.regions.regions, func(r region) bool { return r.material == m })
		if isUsed {
			list = append(list, m.used(p.options.Idealisation))
		}
	}
	return list
}

// excluded lists the cells left out, by reason and dimension.
func excluded(total *part) []Exclusion {
	list := []Exclusion{}
	for reason := notExcluded + 1; reason < exclusionReasons; reason++ {
		e := &total.excluded[reason]
		for dimension, count := range e.cells {
			if count == 0 {
				continue
			}
			measure := Number(e.measure[dimension].Float64())
			if e.unknown[dimension] > 0 {
				measure = None
			}
			list = append(list, Exclusion{Reason: exclusionNames[reason], Dimension: dimension, Cells: count, Measure: measure})
		}
	}
	return list
}

// fillAccounts lays out the accounts of the regions and of the whole.
func (p *plan) fillAccounts(ledger *Ledger, total *part) {
	whole := wholeAccount(total)
	hasLaws, hasDensities, hasCurves := true, true, true
	ledger.Regions = make([]RegionAccount, len(p.regions.regions))
	var mass Sum
	for i := range p.regions.regions {
		r := &p.regions.regions[i]
		account := p.layOut(&total.accounts[i], r.law.IsIsotropic(), r.limit.exists())
		account.VolumeWithoutLimit = 0
		if !r.limit.exists() {
			account.VolumeWithoutLimit = account.Volume
		}
		if account.Cells > 0 {
			account.MaxEquivalentStress = Number(r.limit.governing(total.accounts[i].maxEquivalent, total.accounts[i].minEquivalent))
		}
		account.CurveEnergy = curveEnergy(&total.accounts[i], r.hencky != nil)
		hasCurves = hasCurves && (r.hencky != nil || account.Cells == 0)
		entry := RegionAccount{Name: r.name, Criterion: string(r.limit.criterion), Account: account}
		if r.material != nil {
			entry.Material = Text(r.material.Name)
		}
		if r.material != nil && !math.IsNaN(r.material.Density) {
			entry.Mass = Number(r.material.Density) * account.Volume
			mass.Add(float64(entry.Mass))
		} else if total.accounts[i].cells > 0 {
			hasDensities = false
		}
		if total.accounts[i].cells > 0 {
			hasLaws = hasLaws && r.law.IsIsotropic()
		}
		ledger.Regions[i] = entry
	}
	ledger.Total = p.layOut(whole, hasLaws, p.hasLimits())
	ledger.Total.MaxEquivalentStress = p.governingEquivalent(ledger.Regions)
	ledger.Total.CurveEnergy = curveEnergy(whole, hasCurves)
	if hasDensities {
		ledger.Total.Mass = Number(mass.Float64())
	}
	ledger.Total.VolumeWithoutLimit = p.volumeWithoutLimit(total)
	p.fillShares(ledger)
	if p.options.Repeats > 0 {
		n := Number(p.options.Repeats)
		ledger.Repeated = &Repeated{
			Repeats: p.options.Repeats, Volume: n * ledger.Total.Volume, Mass: n * ledger.Total.Mass, Energy: n * ledger.Total.Energy,
		}
	}
}

// wholeAccount returns the account of all regions together.
func wholeAccount(total *part) *account {
	whole := newAccount()
	for i := range total.accounts {
		whole.join(&total.accounts[i])
	}
	return &whole
}

// governingEquivalent returns the equivalent stress that speaks for the whole model: the
// region's with the largest utilisation where all are judged by max-principal and have a
// limit, as it is within such a region; else the one of largest size. Of equals it is
// the tensile one.
func (p *plan) governingEquivalent(regions []RegionAccount) Number {
	isByUtilisation := p.hasLimits()
	for i := range p.regions.regions {
		isByUtilisation = isByUtilisation && p.regions.regions[i].limit.criterion == MaxPrincipal
	}
	governing, largest := None, math.Inf(-1)
	for i := range regions {
		equivalent := regions[i].MaxEquivalentStress
		size := math.Abs(float64(equivalent))
		if isByUtilisation {
			size = float64(regions[i].MaxUtilisation)
		}
		if size > largest || size == largest && equivalent > governing {
			governing, largest = equivalent, size
		}
	}
	return governing
}

// curveEnergy returns the energy under the curves, none where a cell is strained beyond
// the end of its curve.
func curveEnergy(a *account, hasCurve bool) Number {
	if !hasCurve || a.beyondCurve > 0 {
		return None
	}
	return Number(a.curveEnergy.Float64())
}

// volumeWithoutLimit returns the volume of the regions that have no limit.
func (p *plan) volumeWithoutLimit(total *part) Number {
	var volume Sum
	for i := range p.regions.regions {
		if !p.regions.regions[i].limit.exists() {
			ofRegion, _ := total.accounts[i].bins.sums()
			volume.Join(&ofRegion)
		}
	}
	return Number(volume.Float64())
}

// layOut turns one account into the ledger's form. Without an isotropic law there is no
// split, without a limit no utilisation.
func (p *plan) layOut(a *account, isIsotropic, hasLimit bool) Account {
	volume, energy := a.bins.sums()
	account := Account{
		Cells: a.cells, Volume: Number(volume.Float64()), Mass: None, Energy: Number(energy.Float64()), EnergyShare: None,
		EnergyVolumetric: None, EnergyDistortional: None, MeanDensity: None,
		MaxDensity: a.maxDensity.number(), PeakDensity: a.peak.number(), MaxEquivalentStress: None,
		MaxUtilisation: None, MaxUtilisationCell: None, MaxUtilisationSource: None,
		CellsPastLimit: None, VolumePastLimit: None, EnergyPastLimit: None, CellsYielded: None,
		CurveEnergy: None, ErrorEstimate: None, EnergyError: None,
		Concentration: a.bins.concentration(),
	}
	account.MaxDensityCell, account.MaxDensitySource, account.MaxDensityAt = a.maxDensity.where()
	_, _, account.PeakDensityAt = a.peak.where()
	if account.Volume != 0 {
		account.MeanDensity = account.Energy / account.Volume
	}
	if isIsotropic {
		distortional := energy
		distortional.Subtract(&a.volumetric)
		account.EnergyVolumetric = Number(a.volumetric.Float64())
		account.EnergyDistortional = Number(distortional.Float64())
	}
	if hasLimit {
		account.MaxUtilisation = a.maxUtilisation.number()
		account.MaxUtilisationCell, account.MaxUtilisationSource, account.MaxUtilisationAt = a.maxUtilisation.where()
		account.CellsPastLimit = Number(a.pastCells)
		account.VolumePastLimit = Number(a.pastVolume.Float64())
		account.EnergyPastLimit = Number(a.pastEnergy.Float64())
	}
	if p.inputs.plasticStrain.exists() || p.inputs.equivalentPlasticStrain.exists() {
		account.CellsYielded = Number(a.yieldedCells)
	}
	return account
}

// fillShares divides the regions' energies by the total.
func (p *plan) fillShares(ledger *Ledger) {
	total := ledger.Total.Energy
	if total == 0 {
		return
	}
	ledger.Total.EnergyShare = 1
	for i := range ledger.Regions {
		ledger.Regions[i].EnergyShare = ledger.Regions[i].Energy / total
	}
}

// fillLists lays out the hotspots and the cells past their limit.
func (p *plan) fillLists(ledger *Ledger, total *part) {
	p.fillHotspots(ledger, total)
	ledger.PastLimit = PastLimit{
		Criterion: string(p.criterion()), Cells: ledger.Total.CellsPastLimit,
		Volume: ledger.Total.VolumePastLimit, Energy: ledger.Total.EnergyPastLimit, EnergyShare: None,
		Worst: []RankedCell{},
	}
	if ledger.Total.Energy != 0 {
		ledger.PastLimit.EnergyShare = ledger.PastLimit.Energy / ledger.Total.Energy
	}
	total.worst.trim()
	for _, c := range total.worst.list {
		ledger.PastLimit.Worst = append(ledger.PastLimit.Worst, p.rankedCell(&c))
	}
	slices.SortFunc(total.past, compare)
	for i := range total.past {
		ledger.AllPastLimit = append(ledger.AllPastLimit, p.rankedCell(&total.past[i]))
	}
}

// rankedCell lays out one cell past its limit.
func (p *plan) rankedCell(c *candidate) RankedCell {
	at := c.at
	return RankedCell{
		Cell: c.place.cell, Source: c.place.source, ElementID: elementID(&c.record), Region: p.regions.regions[c.region].name,
		At: &at, Density: Number(c.density), EquivalentStress: Number(c.equivalent), Utilisation: Number(c.limitShare),
	}
}

// elementID returns the file's own number of a cell.
func elementID(c *record) Number {
	if c.elementID == mesh.NoLabel {
		return None
	}
	return Number(c.elementID)
}

// withoutEnergy takes every energy out of a ledger whose stress is known and whose
// elastic strain is not: they do not exist.
func (l *Ledger) withoutEnergy() {
	accounts := []*Account{&l.Total}
	for i := range l.Regions {
		accounts = append(accounts, &l.Regions[i].Account)
	}
	for _, a := range accounts {
		a.Energy, a.EnergyShare, a.MeanDensity, a.EnergyPastLimit = None, None, None, None
		a.MaxDensity, a.MaxDensityCell, a.MaxDensitySource, a.MaxDensityAt = None, None, None, nil
		a.PeakDensity, a.PeakDensityAt, a.CurveEnergy, a.Concentration = None, nil, None, nil
	}
	if l.Repeated != nil {
		l.Repeated.Energy = None
	}
	l.PastLimit.Energy, l.PastLimit.EnergyShare = None, None
	for i := range l.Hotspots {
		h := &l.Hotspots[i]
		h.Density, h.PeakDensity, h.MeanDensity = None, None, None
		h.Energy, h.EnergyShare, h.RegionShare, h.Prominence, h.EnergyAt = None, None, None, None, nil
	}
	for _, list := range [][]RankedCell{l.PastLimit.Worst, l.AllPastLimit} {
		for i := range list {
			list[i].Density = None
		}
	}
}

// findInResult reports what the evaluated cells have shown.
func (p *plan) findInResult(ledger *Ledger, total *part) {
	f := &p.findings
	count := func(reason exclusionReason) (cells int64) {
		for _, n := range total.excluded[reason].cells {
			cells += n
		}
		return cells
	}
	if n := count(ghostCell); n > 0 {
		f.add("ghost-cells", n, "%d cells are marked as duplicates or hidden and are left out", n)
	}
	if n := count(notFinite); n > 0 {
		f.add("not-finite", n, "%d cells have values that are not finite and are left out: the sums lack their energy", n)
	}
	if n := count(noRegion); n > 0 {
		f.add("no-region", n, "%d cells belong to no region and are left out: add a region, or one with select = { rest = true }", n)
	}
	if n := count(degenerateCell); n > 0 {
		f.add("degenerate-cells", n, "%d cells have no measure worth the name and are left out", n)
	}
	if n := count(unsupportedCell); n > 0 {
		f.add("unsupported-cells", n, "%d cells cannot be computed here and are left out: cells without a measure (convex point sets), or polygons and polyhedra whose stress or strain is on points", n)
	}
	if n := total.overlaps; n > 0 {
		f.add("regions-overlap", n, "%d cells are claimed by more than one region; each is counted in the first", n)
	}
	if n := total.mirrored; n > 0 {
		f.add("mirrored-cells", n, "%d cells are numbered inside out; each counts with its absolute volume", n)
	}
	if n := total.tangled; n > 0 {
		f.add("tangled-cells", n, "%d cells are folded (their corner Jacobians differ in sign) and count with their signed volume: mend the mesh or its node order", n)
	}
	p.findNegative(ledger, total)
	p.findZero(total)
	p.findPastLimit(ledger)
	p.findLargeStrain(ledger, total)
	if n := ledger.Total.CellsYielded; n > 0 {
		f.add("plastic-strain-present", int64(n), "%d cells have plastic strain: the elastic energy stored is not the work done, and the limit's utilisation does not describe them", int64(n))
	}
}

// nonlinearShare is the share of a region's volume past the limit above which the totals
// of a linear run are in doubt (common practice, no source).
const nonlinearShare = 0.01

// findPastLimit advises a nonlinear run for each region of which too much is past the
// limit. Where the file has plastic strain the run was one.
func (p *plan) findPastLimit(ledger *Ledger) {
	for i := range ledger.Regions {
		r := &ledger.Regions[i]
		if r.CellsYielded > 0 || !(r.VolumePastLimit > nonlinearShare*r.Volume) {
			continue
		}
		p.findings.add("nonlinear-run-advised", int64(r.CellsPastLimit),
			"region %q: %.3g %% of the volume is past the limit, and stress there is more than the material bears, so that the region's linear energy is in doubt: make a nonlinear run",
			r.Name, 100*float64(r.VolumePastLimit/r.Volume))
	}
}

// findNegative reports cells of negative density beyond rounding: more than about 1e-9
// of the peak (methods: negative density is an input error; threshold common practice,
// no source). The amounts are known by their binary exponent only.
func (p *plan) findNegative(ledger *Ledger, total *part) {
	if p.isUnknown {
		return
	}
	threshold := 1e-9 * math.Abs(float64(ledger.Total.MaxDensity))
	first := int(math.Float64bits(threshold)>>52&0x7ff) + 1
	var cells int64
	for exponent := first; exponent < len(total.negative); exponent++ {
		cells += total.negative[exponent]
	}
	if cells > 0 {
		p.findings.add("negative-density", cells, "%d cells have a negative strain energy density: stress and strain do not belong together (component order, load step, or a strain that is not the elastic one)", cells)
	}
}

// findZero reports fields without a single value that is not zero.
func (p *plan) findZero(total *part) {
	switch {
	case !total.hasStress && !total.hasStrain:
		p.findings.add("all-zero", 0, "every stress and strain is zero: there is no energy to account for; was the right state exported?")
	case !total.hasStress:
		p.findings.add("all-zero", 0, "every stress is zero: the energy is zero by that; was the right array exported?")
	case !total.hasStrain:
		p.findings.add("all-zero", 0, "every elastic strain is zero: the energy is zero by that; was the right array exported?")
	}
}
