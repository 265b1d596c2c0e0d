package energy

import (
	"math"

	"strainledger/mesh"
)

// A worker evaluates chunks: it turns the arrays of a chunk into columns, one number
// for each cell, and adds the columns to its part.
type worker struct {
	*plan
	part *part
	cell mesh.Cell

	law       *Law    // of the current cell, in model axes; nil: none
	isPerCell bool    // everything that the density needs is cell data
	smallest  float64 // measure up to which a cell is degenerate

	orientation mesh.Orientation // of the current cell
	nodeTables  map[*mesh.Shape]*nodeTable
	nodeStress  []mesh.SymmetricTensor // stress of the current cell at its nodes, and
	pointStress []mesh.SymmetricTensor // at the points that it is integrated by, for the error estimate

	region      []int32 // -1: in no account
	measure     []float64
	energy      []float64
	volumetric  []float64
	density     []float64
	peak        []float64 // largest ½ σ:ε over the places where the file gives values
	peakNode    []int32   // the node of that place, 0 for cell data
	equivalent  []float64
	utilisation []float64 // NaN without a limit
	isYielded   []bool
	curve       []float64 // energy under the material's curve; NaN beyond its end

	strained float64                // largest size of a principal strain of the current cell, where above largeStrain
	tensor   []mesh.SymmetricTensor // stress where the peak density is
	ranked   []float64              // the column that hotspots are ranked by

	offered          []int32 // cells of the chunk that the pool may keep
	byDensity, byKey floor   // the pool's, as they were after the last chunk

	// The places of the current cell: its nodes, or one place for cell data.
	stress, strain []mesh.SymmetricTensor
	plastic        []mesh.SymmetricTensor
	displacement   []Vector
	gradients      [][3]float64
	elements       []float64
	rational       []float64        // room for the shape functions of Bézier cells
	rule           *mesh.Tabulation // of integration points, for
	ruleShape      *mesh.Shape
	placeValues    []float64 // shape functions at the current integration point; nil elsewhere

	bytes []byte // of one column
}

func newWorker(p *plan, pool *pool) *worker {
	return &worker{
		plan: p, part: newPart(p, pool), isPerCell: p.inputs.isPerCell(),
		smallest: 1e-12 * math.Pow(p.bounds.Diagonal(), float64(p.dimension)), byDensity: pool.byDensity.floor, byKey: pool.byKey.floor,
	}
}

// visit takes one chunk.
func (w *worker) visit(chunk *mesh.Chunk) error {
	w.grow(chunk.Count)
	w.part.overlaps += w.regions.assign(chunk, w.region)
	for i := range chunk.Count {
		chunk.Cell(i, &w.cell)
		reason, err := w.evaluate(chunk, i)
		if err != nil {
			return err
		}
		if reason != notExcluded {
			w.part.exclude(reason, &w.cell)
			if reason == otherDimension {
				w.keepLower(chunk, i)
			}
			w.region[i] = -1
			continue
		}
		w.noteStress(chunk, i)
	}
	w.gather(chunk)
	w.fillPool(chunk)
	if w.looksAround() {
		low := chunk.First - w.model.Pieces[chunk.Piece].FirstCell
		w.part.boxes = append(w.part.boxes, chunkBox{mesh.Span{Piece: chunk.Piece, Low: low, High: low + int64(chunk.Count)}, chunk.Bounds()})
	}
	if w.options.Columns != nil {
		return w.writeColumns(chunk)
	}
	return nil
}

// grow makes room for a chunk's columns.
func (w *worker) grow(count int) {
	if len(w.region) >= count {
		return
	}
	w.region, w.peakNode, w.isYielded = make([]int32, count), make([]int32, count), make([]bool, count)
	w.tensor = make([]mesh.SymmetricTensor, count)
	for _, column := range []*[]float64{&w.measure, &w.energy, &w.volumetric, &w.density, &w.peak, &w.equivalent, &w.utilisation, &w.curve} {
		*column = make([]float64, count)
	}
	switch w.by {
	case "utilisation":
		w.ranked = w.utilisation
	case "energy":
		w.ranked = w.energy
	default:
		w.ranked = w.density
	}
}

// evaluate fills the columns of one cell, or returns why it is left out.
func (w *worker) evaluate(chunk *mesh.Chunk, i int) (exclusionReason, error) {
	switch {
	case chunk.Hidden != nil && chunk.Hidden[i]&(mesh.DuplicateCell|mesh.HiddenCell) != 0:
		return ghostCell, nil
	case w.cell.Shape.Dimension != w.dimension:
		return otherDimension, nil
	case !w.cell.Shape.Supported:
		return unsupportedCell, nil
	case w.region[i] < 0:
		return noRegion, nil
	}
	r := &w.regions.regions[w.region[i]]
	orientation, reason, err := w.measureCell(chunk, i, r)
	w.orientation = orientation
	if reason == notExcluded && err == nil {
		if w.law, err = r.lawAt(chunk, i); err != nil {
			err = inputError("%s: %w", w.model.Sources[chunk.Source].Path, err)
		}
	}
	if err != nil || reason != notExcluded {
		return reason, err
	}
	w.strained = 0
	switch {
	case w.from == FromDisplacement:
		reason = w.evaluateGradients(chunk, i, r, orientation)
	case w.isPerCell:
		reason = w.evaluateCell(chunk, i, r)
	case w.inputs.rule != nil:
		reason, err = w.evaluatePoints(chunk, i, r, orientation)
	default:
		reason = w.evaluateNodes(chunk, i, r, orientation)
	}
	if err != nil {
		return 0, err
	}
	if reason == notExcluded {
		w.countStrained()
		switch orientation {
		case mesh.Mirrored:
			w.part.mirrored++
		case mesh.Tangled:
			w.part.tangled++
		}
	}
	return reason, nil
}

// measureCell computes the measure that energy is integrated over: the volume, the
// area times the thickness, or the ring's volume 2πr dA.
func (w *worker) measureCell(chunk *mesh.Chunk, i int, r *region) (mesh.Orientation, exclusionReason, error) {
	var measure, flat float64 // flat: what is compared with the model's size
	var orientation mesh.Orientation
	switch w.options.Idealisation {
	case Solid:
		measure, orientation = w.cell.Volume()
		flat = measure
	case Axisymmetric:
		var smallest float64
		measure, smallest, orientation = w.cell.RingVolume(w.options.AxisX)
		if smallest < -1e-12*w.bounds.Diagonal() {
			return 0, 0, inputError("%s: cell %d reaches a radius of %g: an axisymmetric mesh lies on one side of its axis; state [model] axis if it is the other one",
				w.model.Sources[chunk.Source].Path, chunk.First+int64(i), smallest)
		}
		flat, _ = w.cell.PlaneArea()
	default:
		measure, orientation = w.cell.PlaneArea()
		flat = measure
		measure *= w.thickness(chunk, i, r)
	}
	if orientation == mesh.Mirrored {
		measure = -measure
	}
	w.measure[i] = measure
	switch {
	case !isFinite(measure):
		return 0, notFinite, nil
	case math.Abs(flat) <= w.smallest:
		return 0, degenerateCell, nil
	}
	return orientation, notExcluded, nil
}

// thickness returns the thickness of a plane cell.
func (w *worker) thickness(chunk *mesh.Chunk, i int, r *region) float64 {
	switch {
	case w.inputs.thickness.exists():
		return w.inputs.thickness.at(chunk, i, 0)
	case r.thickness != 0:
		return r.thickness
	}
	return 1 // plane strain: per unit thickness
}

// evaluateCell fills the columns of a cell from one value per cell.
func (w *worker) evaluateCell(chunk *mesh.Chunk, i int, r *region) exclusionReason {
	var stress, strain mesh.SymmetricTensor
	isYielded := w.at(chunk, i, 0, r, &stress, &strain)
	density := Density(&stress, &strain)
	w.energy[i] = density * w.measure[i]
	w.volumetric[i] = 0
	if w.law.IsIsotropic() {
		w.volumetric[i] = VolumetricDensity(&stress, &strain) * w.measure[i]
	}
	w.density[i], w.peak[i], w.peakNode[i] = density, density, 0
	w.isYielded[i], w.tensor[i] = isYielded, stress
	if r.hencky != nil {
		reached := sum(&strain, w.plasticAt(chunk, i, 0))
		w.curve[i] = r.hencky.Density(&reached) * w.measure[i]
	}
	w.equivalent[i] = r.limit.equivalent(&stress)
	w.utilisation[i] = r.limit.utilisation(w.equivalent[i])
	if !isFinite(w.energy[i], w.volumetric[i], w.equivalent[i]) || !stress.IsFinite() || !strain.IsFinite() {
		return notFinite
	}
	return notExcluded
}

// evaluateNodes fills the columns of a cell whose fields, or some of them, are on its
// points: stress and strain are each interpolated with the cell's shape functions,
// multiplied, and integrated.
func (w *worker) evaluateNodes(chunk *mesh.Chunk, i int, r *region, orientation mesh.Orientation) exclusionReason {
	shape := w.cell.Shape
	if !shape.Interpolates() {
		return unsupportedCell
	}
	w.growNodes(shape.NodeCount)
	w.isYielded[i] = false
	w.peak[i] = -infinity
	largest, least := -infinity, infinity
	for k, node := range w.cell.Nodes {
		stress, strain := &w.stress[k], &w.strain[k]
		if w.at(chunk, i, node, r, stress, strain) {
			w.isYielded[i] = true
		}
		if r.hencky != nil {
			w.plastic[k] = *w.plasticAt(chunk, i, node)
		}
		if !stress.IsFinite() || !strain.IsFinite() {
			return notFinite
		}
		if density := Density(stress, strain); density > w.peak[i] {
			w.peak[i], w.peakNode[i], w.tensor[i] = density, int32(k), *stress
		}
		equivalent := r.limit.equivalent(stress)
		largest, least = max(largest, equivalent), min(least, equivalent)
	}
	w.equivalent[i] = r.limit.governing(largest, least)
	w.utilisation[i] = r.limit.utilisation(w.equivalent[i])
	w.integrate(chunk, i, r, orientation)
	w.density[i] = w.energy[i] / w.measure[i]
	if !isFinite(w.energy[i], w.volumetric[i], w.equivalent[i], w.density[i]) {
		return notFinite
	}
	return notExcluded
}

// growNodes makes room for the nodes of a cell.
func (w *worker) growNodes(count int) {
	if len(w.stress) >= count {
		return
	}
	w.stress, w.strain, w.plastic = make([]mesh.SymmetricTensor, count), make([]mesh.SymmetricTensor, count), make([]mesh.SymmetricTensor, count)
	w.displacement, w.gradients, w.rational = make([]Vector, count), make([][3]float64, count), make([]float64, count)
}

// productRule returns the rule that integrates the product of two interpolated fields.
func (w *worker) productRule() *mesh.Tabulation {
	if w.cell.IsRational() { // nothing is polynomial there
		return w.cell.Shape.FineRule()
	}
	if w.options.Idealisation == Axisymmetric {
		return w.cell.Shape.RingProductRule()
	}
	return w.cell.Shape.ProductRule()
}

// elementsOf returns the measure that belongs to each point of the rule, and the
// factor (thickness, sign of a mirrored cell) that is common to all.
func (w *worker) elementsOf(rule *mesh.Tabulation, chunk *mesh.Chunk, i int, r *region, orientation mesh.Orientation) (elements []float64, factor float64) {
	if len(w.elements) < len(rule.Weights) {
		w.elements = make([]float64, len(rule.Weights))
	}
	elements, factor = w.elements[:len(rule.Weights)], 1
	switch w.options.Idealisation {
	case Solid:
		w.cell.VolumeElements(rule, elements)
	case Axisymmetric:
		w.cell.RingElements(rule, w.options.AxisX, elements)
	default:
		w.cell.PlaneElements(rule, elements)
		factor = w.thickness(chunk, i, r)
	}
	if orientation == mesh.Mirrored {
		factor = -factor
	}
	return elements, factor
}

// integrate computes ∫ ½ σ:ε dV and its volumetric share from the nodal tensors.
func (w *worker) integrate(chunk *mesh.Chunk, i int, r *region, orientation mesh.Orientation) {
	rule := w.productRule()
	elements, factor := w.elementsOf(rule, chunk, i, r, orientation)
	var energy, volumetric, curve float64
	for q, element := range elements {
		values := w.cell.Values(rule, q, w.rational)
		var stress, strain mesh.SymmetricTensor
		w.interpolate(values, &stress, &strain)
		energy += float64(Density(&stress, &strain) * element)
		volumetric += float64(VolumetricDensity(&stress, &strain) * element)
		if r.hencky != nil {
			reached := w.reachedAt(&strain, values)
			curve += float64(r.hencky.Density(&reached) * element)
		}
	}
	w.curve[i] = curve * factor
	w.energy[i] = energy * factor
	w.volumetric[i] = 0
	if w.law.IsIsotropic() {
		w.volumetric[i] = volumetric * factor
	}
}

// interpolate adds to stress and elastic strain their nodal values times those of the
// shape functions.
func (w *worker) interpolate(values []float64, stress, strain *mesh.SymmetricTensor) {
	for k, value := range values {
		s, e := &w.stress[k], &w.strain[k]
		for c := range stress {
			stress[c] += float64(value * s[c])
			strain[c] += float64(value * e[c])
		}
	}
}

// at evaluates stress and elastic strain at one place of a cell, the node where fields
// are on points, with every component completed, and reports whether there is plastic
// strain.
func (w *worker) at(chunk *mesh.Chunk, cell int, node int32, r *region, stress, strain *mesh.SymmetricTensor) (isYielded bool) {
	in := w.inputs
	inelastic, isYielded := w.inelasticAt(chunk, cell, node, r)
	if in.strain.exists() {
		*strain = in.strain.at(chunk, cell, node)
		w.noteStrain(strain, &inelastic)
		switch {
		case !in.strainIsElastic:
			for i := range strain {
				strain[i] -= inelastic[i]
			}
		case w.options.Idealisation == PlaneStrain && !in.strain.layout.Has(2):
			strain[2] = -inelastic[2] // the total is 0
		}
	}
	if in.stress.exists() {
		*stress = in.stress.at(chunk, cell, node)
	}
	w.complete(stress, strain)
	if !in.strain.exists() {
		w.noteStrain(strain, nil)
	}
	w.noteNonZero(stress, strain)
	return isYielded
}

// plasticAt returns the plastic strain at one place, zero where the file has none.
func (w *worker) plasticAt(chunk *mesh.Chunk, cell int, node int32) *mesh.SymmetricTensor {
	var plastic mesh.SymmetricTensor
	if w.inputs.plasticStrain.exists() {
		plastic = w.inputs.plasticStrain.at(chunk, cell, node)
	}
	return &plastic
}

// reachedAt returns the strain that the curve was loaded to at a point of the rule:
// the elastic strain and the interpolated plastic one, without the thermal.
func (w *worker) reachedAt(elastic *mesh.SymmetricTensor, values []float64) mesh.SymmetricTensor {
	reached := *elastic
	for k, value := range values {
		for c := range reached {
			reached[c] += float64(value * w.plastic[k][c])
		}
	}
	return reached
}

// sum adds two tensors.
func sum(a, b *mesh.SymmetricTensor) mesh.SymmetricTensor {
	result := *a
	for c := range result {
		result[c] += b[c]
	}
	return result
}

// noteNonZero remembers that there was a value which is not zero.
func (w *worker) noteNonZero(stress, strain *mesh.SymmetricTensor) {
	if !w.part.hasStress {
		w.part.hasStress = *stress != mesh.SymmetricTensor{}
	}
	if !w.part.hasStrain {
		w.part.hasStrain = *strain != mesh.SymmetricTensor{}
	}
}

// inelasticAt returns the thermal and plastic strain at one place, and whether there
// is any plastic strain. An array of thermal strain wins over temperature.
func (w *worker) inelasticAt(chunk *mesh.Chunk, cell int, node int32, r *region) (inelastic mesh.SymmetricTensor, isYielded bool) {
	in := w.inputs
	if in.plasticStrain.exists() {
		inelastic = in.plasticStrain.at(chunk, cell, node)
		isYielded = inelastic != mesh.SymmetricTensor{}
		raise(&w.part.plastic, mesh.Product(&inelastic, &inelastic))
	}
	if in.equivalentPlasticStrain.exists() {
		equivalent := in.equivalentPlasticStrain.at(chunk, cell, node)
		isYielded = isYielded || equivalent != 0
		raise(&w.part.plastic, equivalent*equivalent)
	}
	switch {
	case in.thermalStrain.exists():
		thermal := in.thermalStrain.at(chunk, cell, node)
		raise(&w.part.thermal, mesh.Product(&thermal, &thermal))
		for i := range thermal {
			inelastic[i] += thermal[i]
		}
	case in.temperature.exists() && r.material != nil && !math.IsNaN(r.material.ThermalExpansion):
		rise := w.temperatureAt(chunk, cell, node) - r.material.ReferenceTemperature
		expansion := float64(r.material.ThermalExpansion * rise)
		raise(&w.part.thermal, 3*expansion*expansion)
		for i := range 3 {
			inelastic[i] += expansion
		}
	}
	return inelastic, isYielded
}

// temperatureAt returns the temperature at one place; at an integration point that of
// the nodes is interpolated.
func (w *worker) temperatureAt(chunk *mesh.Chunk, cell int, node int32) float64 {
	in := &w.inputs.temperature
	if w.placeValues == nil || in.on != mesh.OnPoint {
		return in.at(chunk, cell, node)
	}
	var temperature float64
	for k, value := range w.placeValues {
		temperature += float64(value * in.at(chunk, cell, w.cell.Nodes[k]))
	}
	return temperature
}

// complete fills in what the file lacks, by the law: the other tensor where there is
// only one, and the components out of the plane.
func (w *worker) complete(stress, strain *mesh.SymmetricTensor) {
	in := w.inputs
	switch w.from {
	case FromStressStrain:
		if w.options.Idealisation == PlaneStrain && !in.stress.layout.Has(2) {
			w.law.CompletePlaneStrain(stress, strain[2])
		}
		if w.options.Idealisation == PlaneStress && !in.strain.layout.Has(2) && w.law != nil {
			strain[2] = w.law.Strain(stress)[2]
		}
	case FromStress:
		if w.options.Idealisation == PlaneStrain && !in.stress.layout.Has(2) {
			w.law.CompletePlaneStrain(stress, 0)
		}
		*strain = w.law.Strain(stress)
	case FromStrain:
		*stress = w.stressOf(strain)
	}
}

var infinity = math.Inf(1)

// isFinite reports whether all values are finite.
func isFinite(values ...float64) bool {
	for _, value := range values {
		if value-value != 0 {
			return false
		}
	}
	return true
}

// gather adds the columns of a chunk to the accounts, run by run of one region.
func (w *worker) gather(chunk *mesh.Chunk) {
	for low := 0; low < chunk.Count; {
		number := w.region[low]
		high := low + 1
		for high < chunk.Count && w.region[high] == number {
			high++
		}
		if number >= 0 {
			w.gatherRun(chunk, int(number), low, high)
		}
		low = high
	}
}

// gatherRun adds the cells [low, high), all of one region.
func (w *worker) gatherRun(chunk *mesh.Chunk, number, low, high int) {
	a := &w.part.accounts[number]
	a.cells += int64(high - low)
	a.volumetric.AddAll(w.volumetric[low:high])
	if w.regions.regions[number].hencky != nil {
		w.gatherCurve(a, low, high)
	}
	a.bins.addAll(w.density[low:high], w.measure[low:high], w.energy[low:high])
	for i := low; i < high; i++ {
		p := place{source: chunk.Source, cell: chunk.First + int64(i)}
		if w.isYielded[i] {
			a.yieldedCells++
		}
		if density := w.density[i]; density < 0 {
			w.part.negative[math.Float64bits(density)>>52&0x7ff]++
		}
		a.maxEquivalent, a.minEquivalent = max(a.maxEquivalent, w.equivalent[i]), min(a.minEquivalent, w.equivalent[i])
		if a.maxDensity.takes(w.density[i], p) {
			a.maxDensity = best{true, w.density[i], p, w.centroidOf(chunk, i)}
		}
		if at := (place{p.source, p.cell, w.peakNode[i]}); !math.IsNaN(w.peak[i]) && a.peak.takes(w.peak[i], at) {
			a.peak = best{true, w.peak[i], at, w.peakPlace(chunk, i)}
		}
		w.rank(chunk, i, p, a)
	}
}

// gatherCurve adds the energies under the curve of the cells [low, high).
func (w *worker) gatherCurve(a *account, low, high int) {
	for _, energy := range w.curve[low:high] {
		if math.IsNaN(energy) {
			a.beyondCurve++
			continue
		}
		a.curveEnergy.Add(energy)
	}
}

// rank offers a cell to the lists and counts it where it is past its limit.
func (w *worker) rank(chunk *mesh.Chunk, i int, p place, a *account) {
	utilisation := w.utilisation[i]
	if !math.IsNaN(utilisation) {
		if a.maxUtilisation.takes(utilisation, p) {
			a.maxUtilisation = best{true, utilisation, p, w.centroidOf(chunk, i)}
		}
		if utilisation > 1 {
			a.pastCells++
			a.pastVolume.Add(w.measure[i])
			a.pastEnergy.Add(w.energy[i])
			if w.options.ListAllPastLimit {
				w.part.past = append(w.part.past, w.candidate(chunk, i, p, utilisation))
			}
			if w.part.worst.takes(utilisation, p) {
				w.part.worst.add(w.candidate(chunk, i, p, utilisation))
			}
		}
	}
	density, key := w.density[i], w.ranked[i]
	if w.byDensity.takes(density, p) || w.byKey.takes(key, p) {
		w.offered = append(w.offered, int32(i))
	} else {
		a.outside = max(a.outside, density)
	}
}

// fillPool hands the pool the cells of the chunk that it may keep.
func (w *worker) fillPool(chunk *mesh.Chunk) {
	if len(w.offered) == 0 {
		return
	}
	pool := w.part.pool
	pool.lock.Lock()
	defer pool.lock.Unlock()
	for _, i := range w.offered {
		p := place{source: chunk.Source, cell: chunk.First + int64(i)}
		if !pool.takes(w.density[i], w.ranked[i], p) {
			pool.leave(w.region[i], w.density[i])
			continue
		}
		chunk.Cell(int(i), &w.cell)
		to := pool.add(w.density[i], w.ranked[i], &w.cell, chunk.Piece)
		to.record, to.stress = w.record(chunk, int(i), p, w.ranked[i]), w.tensor[i]
	}
	w.offered = w.offered[:0]
	pool.raise()
	w.byDensity, w.byKey = pool.byDensity.floor, pool.byKey.floor
}

// centroidOf returns the centroid of cell i of the chunk.
func (w *worker) centroidOf(chunk *mesh.Chunk, i int) Vector {
	chunk.Cell(i, &w.cell)
	return centroid(&w.cell, w.options)
}

// peakPlace returns where the peak density of cell i was seen.
func (w *worker) peakPlace(chunk *mesh.Chunk, i int) Vector {
	if w.isPerCell {
		return w.centroidOf(chunk, i)
	}
	if w.inputs.rule != nil {
		chunk.Cell(i, &w.cell)
		rule, err := w.integrationRule(w.cell.Shape)
		if err != nil {
			panic(err) // the same rule served the same cell a moment ago
		}
		return w.cell.Place(rule, int(w.peakNode[i]))
	}
	node := chunk.Nodes[int(chunk.Start[i])+int(w.peakNode[i])]
	return Vector(chunk.Points[3*node : 3*node+3])
}

// candidate returns what the lists say of cell i.
func (w *worker) candidate(chunk *mesh.Chunk, i int, p place, key float64) candidate {
	return candidate{w.record(chunk, i, p, key), w.centroidOf(chunk, i)}
}

// record returns what the lists say of cell i, but for where it is.
func (w *worker) record(chunk *mesh.Chunk, i int, p place, key float64) record {
	c := record{
		key: key, place: p, region: w.region[i], elementID: mesh.NoLabel,
		measure: w.measure[i], energy: w.energy[i], density: w.density[i], peak: w.peak[i],
		equivalent: w.equivalent[i], limitShare: w.utilisation[i],
	}
	if w.inputs.elementID >= 0 {
		c.elementID = chunk.Labels[w.inputs.elementID][i]
	}
	return c
}
