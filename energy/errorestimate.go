package energy

import (
	"context"
	"fmt"
	"math"
	"strings"

	"strainledger/mesh"
)

// defaultTarget is the relative error in the energy norm that is aimed at where the
// study states none: the worked target of Zienkiewicz & Zhu 1987 (from memory).
const defaultTarget = 0.05

// An errorEstimate holds what the mesh is estimated to leave out: how far the cells'
// stress σ_h is from a smooth stress σ*, in the energy norm,
//
//	‖e‖² = ∫ (σ* - σ_h) : S : (σ* - σ_h) dV,  ‖u_h‖² = ∫ σ_h : S : σ_h dV = 2 U_h
//	η = ‖e‖ / √(‖u_h‖² + ‖e‖²)
//
// σ* is interpolated from the nodes with the shape functions of the cell, and both
// integrals use its product rule, or the rule of its integration points. Every sum is
// exact, so that the estimate does not depend on the number of workers.
//
// Source: O. C. Zienkiewicz, J. Z. Zhu, Int. J. Numer. Methods Eng. 24 (1987) 337-357.
type errorEstimate struct {
	regions []regionError
	cells   map[place]float64 // ‖e‖² of the hotspots' cells
	patches patchCounts
	misfit  Sum // of the displacement's stress to the file's, both averaged over each cell, in the same norm
}

// A regionError gathers the error of one region.
type regionError struct {
	cells     int64
	error     Sum   // ‖e‖²
	norm      Sum   // ‖u_h‖²
	uncertain int64 // cells without an estimate
}

func (r *regionError) join(other *regionError) {
	r.cells += other.cells
	r.uncertain += other.uncertain
	r.error.Join(&other.error)
	r.norm.Join(&other.norm)
}

// relative returns η, and ‖e‖²/2: by as much the energy of the exact solution is
// estimated to lie from that of the mesh. Neither exists where a cell has no estimate.
func (r *regionError) relative() (relative, energy Number) {
	if r.cells == 0 || r.uncertain > 0 {
		return None, None
	}
	e, whole := r.error.Float64(), r.norm
	whole.Join(&r.error)
	if e == 0 {
		return 0, 0 // also where nothing is stored
	}
	return Number(math.Sqrt(e / whole.Float64())), Number(e / 2)
}

// estimateErrors makes the passes of the error estimate: one that recovers the smooth
// stress at the nodes, unless the file has it, and one that compares. It returns nil where
// no estimate is asked for, or none is possible.
func (p *plan) estimateErrors(ctx context.Context, walk *mesh.Walk, total *part) (*errorEstimate, error) {
	if p.sampling == notSampled {
		return nil, nil
	}
	estimate := &errorEstimate{regions: make([]regionError, len(p.regions.regions)), cells: map[place]float64{}}
	for i := range total.pool.cells { // the hotspots will be among them
		estimate.cells[total.pool.cells[i].place] = math.NaN()
	}
	var smooth *recovery
	if p.sampling != smoothInFile {
		var err error
		if smooth, err = p.recover(ctx, walk, total, &estimate.patches); err != nil {
			return nil, err
		}
	}
	return estimate, p.compareStress(ctx, walk, total.pool, smooth, estimate)
}

// recover makes the smooth stress at the nodes.
func (p *plan) recover(ctx context.Context, walk *mesh.Walk, total *part, counts *patchCounts) (*recovery, error) {
	nodes, err := numberNodes(ctx, walk, p.model)
	if err != nil {
		return nil, err
	}
	by := p
	if p.againstGradients && total.hasMiddleNodes {
		by = p.byGradients() // one value is too little where stress is linear or more within a cell
	}
	smooth := newRecovery(nodes, total.largestStress)
	smooth.isPerCell = by.sampling == sampledPerCell
	var patches *patches
	if p.options.Error.Recovery == ByPatches {
		if why := p.whyNoPatches(total); why != "" {
			p.findings.add("patches-not-used", 0, "the smooth stress comes from averaging instead of patches: %s", why)
		} else {
			patches = newPatches(p.dimension, nodes.count)
		}
	}
	err = walk.Each(ctx, &by.inputs.want, nil, func(int) mesh.Visitor {
		return newScatterer(by, total.pool, smooth, patches).visit
	})
	if err != nil {
		return nil, err
	}
	if patches != nil {
		*counts = patches.fit(smooth)
	}
	return smooth, nil
}

// compareStress holds the cells' stress against the smooth one. Its workers gather
// nothing, so that the pool stays as it is.
func (p *plan) compareStress(ctx context.Context, walk *mesh.Walk, pool *pool, smooth *recovery, estimate *errorEstimate) error {
	comparers := make([]*comparer, walk.Workers())
	want := &p.inputs.want
	if p.againstGradients {
		want = &p.byGradients().inputs.want
	}
	err := walk.Each(ctx, want, nil, func(number int) mesh.Visitor {
		comparers[number] = newComparer(p, pool, smooth, estimate.cells)
		return comparers[number].visit
	})
	if err != nil {
		return err
	}
	for _, c := range comparers {
		estimate.misfit.Join(&c.misfit)
		for i := range c.errors {
			estimate.regions[i].join(&c.errors[i])
		}
		for at, value := range c.found {
			estimate.cells[at] = value
		}
	}
	return nil
}

// A comparer computes the error of each cell, for one worker.
type comparer struct {
	*worker
	file   *worker // reads the stress of the file where σ_h comes from the displacement; else nil
	smooth *recovery
	wanted map[place]float64 // read only
	found  map[place]float64
	errors []regionError
	misfit Sum
	nodal  []mesh.SymmetricTensor // σ* at the nodes of the cell
}

func newComparer(p *plan, pool *pool, smooth *recovery, wanted map[place]float64) *comparer {
	c := &comparer{
		worker: newWorker(p, pool), smooth: smooth, wanted: wanted, found: map[place]float64{},
		errors: make([]regionError, len(p.regions.regions)),
	}
	if p.againstGradients {
		c.worker, c.file = newWorker(p.byGradients(), pool), c.worker
	}
	return c
}

func (c *comparer) visit(chunk *mesh.Chunk) error {
	c.assign(chunk)
	if c.file != nil {
		c.file.assign(chunk)
	}
	for i := range chunk.Count {
		state, err := c.stateOf(chunk, i)
		if err != nil {
			return err
		}
		if state != leftOut {
			c.compare(chunk, i, state)
		}
	}
	return nil
}

// stateOf evaluates a cell, by the file's stress first: the tally has it in an account by
// that.
func (c *comparer) stateOf(chunk *mesh.Chunk, i int) (accounted, error) {
	if c.file == nil {
		return c.evaluateSampled(chunk, i)
	}
	state, err := c.file.evaluateSampled(chunk, i)
	if err != nil || state != smoothable {
		return state, err
	}
	if state, err = c.evaluateSampled(chunk, i); state == leftOut {
		state = notSmooth
	}
	return state, err
}

// compare adds the error of a cell that has just been evaluated.
func (c *comparer) compare(chunk *mesh.Chunk, i int, state accounted) {
	sums := &c.errors[c.region[i]]
	sums.cells++
	if state == notSmooth {
		sums.uncertain++
		return
	}
	r := &c.regions.regions[c.region[i]]
	c.recall(chunk, i, r)
	rule, stress, measures := c.sampleStress(chunk, i, r)
	misfit := c.takeMean(chunk, i, r, stress, measures)
	found := c.compareCell(rule, stress, measures, c.nodal)
	if c.smooth == nil {
		_, measure := meanOf(stress, measures)
		misfit = c.complementary(&found.shift) / measure // of the file's own smooth stress
	}
	if !isFinite(found.difference, found.norm, misfit) {
		sums.uncertain++
		return
	}
	sums.error.Add(found.difference)
	sums.norm.Add(found.norm)
	c.misfit.Add(misfit)
	at := place{source: chunk.Source, cell: chunk.First + int64(i)}
	if _, isWanted := c.wanted[at]; isWanted {
		c.found[at] = found.difference
	}
}

// recall fills in the smooth stress at the nodes of the cell.
func (c *comparer) recall(chunk *mesh.Chunk, i int, r *region) {
	c.nodal = c.nodal[:0]
	for _, node := range c.cell.Nodes {
		if c.smooth == nil {
			c.nodal = append(c.nodal, c.file.stressAt(chunk, i, node, r))
		} else {
			c.nodal = append(c.nodal, c.smooth.at(chunk.Piece, node, c.region[i]))
		}
	}
}

// takeMean gives the stress of the displacement's gradients the one value that the file has
// for the cell as its mean, where the smooth stress comes from those: the gradients then
// tell how it varies within the cell. It returns the norm of what the two differ by, 0 in
// linear simplices, within which nothing varies: the value is all that counts there.
func (c *comparer) takeMean(chunk *mesh.Chunk, i int, r *region, stress []mesh.SymmetricTensor, measures []float64) (misfit float64) {
	if c.file == nil || c.smooth == nil {
		return 0
	}
	value := c.file.stressAt(chunk, i, c.cell.Nodes[0], r)
	mean, measure := meanOf(stress, measures)
	for k := range value {
		value[k] -= mean[k]
	}
	if c.smooth.isPerCell {
		for q := range stress {
			for k := range value {
				stress[q][k] += value[k]
			}
		}
	}
	if shape := c.cell.Shape; shape.NodeCount == shape.Dimension+1 {
		return 0
	}
	return c.complementary(&value) * measure
}

// fillErrors writes the estimate into the ledger, and what has to be known of it.
func (p *plan) fillErrors(ledger *Ledger, estimate *errorEstimate) {
	if estimate == nil || p.isForeignDisplacement(estimate) {
		return
	}
	var whole regionError
	var without []string
	for i := range estimate.regions {
		r := &estimate.regions[i]
		account := &ledger.Regions[i].Account
		account.ErrorEstimate, account.EnergyError = r.relative()
		if r.uncertain > 0 {
			without = append(without, ledger.Regions[i].Name)
		}
		whole.join(r)
	}
	ledger.Total.ErrorEstimate, ledger.Total.EnergyError = whole.relative()
	p.findings.add("error-estimated", 0, "%s", p.howEstimated(&estimate.patches))
	if whole.uncertain > 0 {
		p.findings.add("error-not-estimated", whole.uncertain, "%d cells in %s have no error estimate: no elastic law, or a shape that interpolates nothing", whole.uncertain, plural("region", without))
		return
	}
	p.fillHotspotErrors(ledger, estimate, &whole)
}

// plural names one or several things of a kind.
func plural(kind string, names []string) string {
	if len(names) > 1 {
		kind += "s"
	}
	return kind + " " + quoted(names)
}

// foreign is the misfit of the displacement's stress to the file's, as a share of ‖u_h‖²,
// from which on they are not of one solution: 0.7 in stress. A coarse mesh may bring half
// of that (common practice, no source).
const foreign = 0.5

// isForeignDisplacement reports whether the displacement is not that of the stress: in
// other units, scaled for a picture, or of another state.
func (p *plan) isForeignDisplacement(estimate *errorEstimate) bool {
	var norm Sum
	for i := range estimate.regions {
		norm.Join(&estimate.regions[i].norm)
	}
	misfit, whole := estimate.misfit.Float64(), norm.Float64()
	if misfit <= foreign*whole {
		return false
	}
	p.findings.add("error-not-estimated", 0, "the error of the mesh is not estimated: the displacement %s does not give the stress of the file (by the law its gradients are off by %.2g of it): look at its unit and scale and at the material, or state [fields] displacement = false",
		quoted(p.inputs.displacement.names), math.Sqrt(misfit/whole))
	return true
}

// howEstimated says what the estimate is and what it cannot see.
func (p *plan) howEstimated(patches *patchCounts) string {
	cells := "the stress of the displacement's gradients"
	switch {
	case p.againstGradients:
	case p.sampling == sampledPerCell:
		cells = "the one value of each cell (no displacement tells how stress varies within cells: it is the error of these values, in bilinear cells below and in quadratic ones above that of the solution)"
	case p.sampling == sampledAtIntegration:
		cells = "the stress at the integration points"
	}
	smooth := "averaged to the nodes within each region (plain mean of the cells at a node)"
	switch {
	case p.sampling == smoothInFile:
		smooth = "the file's own on points"
	case patches.fitted > 0:
		smooth = fmt.Sprintf("fitted to the patch of cells about each node within its region (%d nodes by their own patch, %d by their neighbours', %d by the mean of their cells)",
			patches.fitted, patches.borrowed, patches.averaged)
	}
	return fmt.Sprintf("error estimate in the energy norm: %s against a smooth stress, which is %s; it tells what the mesh leaves out, is blind to wrong loads, supports and materials, and misses what a distant singularity adds",
		cells, smooth)
}

// fillHotspotErrors writes to each hotspot its cell's error over the one that the target
// leaves to each cell when all are to have the same: ξ = ‖e‖_i / (target √((‖u_h‖² +
// ‖e‖²)/m)) with the m cells of the model (Zienkiewicz & Zhu 1987).
func (p *plan) fillHotspotErrors(ledger *Ledger, estimate *errorEstimate, whole *regionError) {
	target := p.options.Error.Target
	if target == 0 {
		target = defaultTarget
	}
	norm := whole.norm
	norm.Join(&whole.error)
	permitted := target * math.Sqrt(norm.Float64()/float64(whole.cells))
	var ranks []string
	for i := range ledger.Hotspots {
		h := &ledger.Hotspots[i]
		difference, isKnown := estimate.cells[place{source: h.Source, cell: h.Cell}]
		if !isKnown || permitted == 0 {
			continue
		}
		h.ErrorToTarget = Number(math.Sqrt(difference) / permitted)
		if h.ErrorToTarget > 1 {
			ranks = append(ranks, fmt.Sprint(h.Rank))
		}
	}
	if len(ranks) > 0 {
		p.findings.add("hotspot-mesh-too-coarse", int64(len(ranks)),
			"the mesh is too coarse at %d of %d hotspots (rank %s): the estimated error of their cells exceeds what a target of %g leaves to each cell; refine there before ranking",
			len(ranks), len(ledger.Hotspots), strings.Join(ranks, ", "), target)
	}
}
