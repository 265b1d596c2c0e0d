package energy

import (
	"math"
	"slices"

	"strainledger/mesh"
)

// A sampling says where the smooth stress of the error estimate comes from. It has to be
// the cells' own stress: what was averaged to the nodes before has lost the jumps that
// tell.
type sampling int

// The samplings.
const (
	notSampled           sampling = iota
	sampledPerCell                // from one value per cell
	sampledAtIntegration          // from values at the integration points of each cell
	sampledByGradients            // from the law and the gradients of the displacement
	smoothInFile                  // the file's own stress on points is taken for smooth
)

// chooseSampling settles whether and from what the error is estimated. The stress σ_h that
// is held against the smooth one is that of the displacement's gradients wherever the file
// has the displacement and no integration points: it is the stress of the solution, where
// one value per cell is only its mean.
func (p *plan) chooseSampling() {
	if !p.options.Error.Estimate {
		return
	}
	in := p.inputs
	hasGradients := in.displacement.exists() && p.knowsInelasticStrain()
	why := ""
	switch {
	case !slices.ContainsFunc(p.regions.regions, func(r region) bool { return r.law != nil }):
		why = "it needs an elastic law; give the regions a material with youngs_modulus and poissons_ratio"
	case p.isUnknown:
		why = "the elastic strain is not known"
	case p.from == FromDisplacement:
		p.sampling = sampledByGradients
	case in.rule != nil && in.source().points > 0:
		p.sampling = sampledAtIntegration
		if _, isGauss := in.rule.(*mesh.GaussRule); !isGauss {
			why = "the stress at the file's own integration points is not taken to the nodes; state their rule if it is a product of Gauss points"
		}
	case p.isStressPerCell():
		p.sampling, p.againstGradients = sampledPerCell, hasGradients
	case in.source().on != mesh.OnPoint:
		why = "stress and strain are at different places"
	case hasGradients:
		p.sampling, p.againstGradients = smoothInFile, true
	case in.displacement.exists():
		why = "the stress on points has one value for all cells that meet there, and the strain of the displacement has a part that is not elastic and not known; export the stress on cells or integration points"
	default:
		why = "the stress on points has one value for all cells that meet there, and the file has no displacement to tell the cells' own; export the stress on cells or integration points, or the displacement"
	}
	if why != "" {
		p.findings.add("error-not-estimated", 0, "the error of the mesh is not estimated: %s", why)
	}
}

// source returns the tensor field that the stress comes from.
func (in *inputs) source() *tensorInput {
	if in.stress.exists() {
		return &in.stress
	}
	return &in.strain
}

// isStressPerCell reports whether the stress, as it is completed, is one value per cell.
func (p *plan) isStressPerCell() bool {
	in := p.inputs
	isComplete := p.options.Idealisation != PlaneStrain || in.stress.layout.Has(2)
	return in.isPerCell() || in.rule == nil && in.stress.on == mesh.OnCell && isComplete
}

// knowsInelasticStrain reports whether the elastic part of the displacement's strain can
// be told.
func (p *plan) knowsInelasticStrain() bool {
	in := p.inputs
	return in.otherThermal == "" && !p.hasOtherStrain && (!in.equivalentPlasticStrain.exists() || in.plasticStrain.exists())
}

// byGradients returns the plan by which the stress comes from the displacement.
func (p *plan) byGradients() *plan {
	changed, in := *p, *p.inputs
	in.want.PointValues = slices.Clone(in.want.PointValues)
	in.displacement = in.displacement.wantIn(&in.want.PointValues)
	in.stress, in.strain = tensorInput{}, tensorInput{}
	changed.inputs, changed.from, changed.sampling = &in, FromDisplacement, sampledByGradients
	return &changed
}

// A nodeTable holds what takes the stress of a cell to its nodes.
type nodeTable struct {
	atNodes     *mesh.Tabulation // shape functions at the nodes; no rule
	extrapolate []float64        // from the integration points, for each node
}

// nodeTable returns the table of the current cell's shape.
func (w *worker) nodeTable(rule *mesh.Tabulation) *nodeTable {
	shape := w.cell.Shape
	if table := w.nodeTables[shape]; table != nil {
		return table
	}
	n := shape.NodeCount
	places := shape.NodeCoordinates()
	t := &mesh.Tabulation{Points: places, Values: make([]float64, n*n), Derivatives: make([][3]float64, n*n)}
	for k, at := range places {
		shape.Values(at, t.Values[n*k:n*k+n])
		shape.Derivatives(at, t.Derivatives[n*k:n*k+n])
	}
	table := &nodeTable{atNodes: t}
	if gauss, ok := w.inputs.rule.(*mesh.GaussRule); ok && rule != nil {
		table.extrapolate = extrapolation(gauss.Counts, shape.Degree(), rule, places)
	}
	if w.nodeTables == nil {
		w.nodeTables = map[*mesh.Shape]*nodeTable{}
	}
	w.nodeTables[shape] = table
	return table
}

// extrapolation returns, for each place and each point of a product rule of Gauss and
// Legendre, the factor that takes values at the points to the place: the polynomial in
// each direction of one degree less than the shape functions, of degree 1 at least, that
// is closest to the values. Legendre's polynomials are orthogonal under the rule, so that
// the polynomial is the sum of their products; on 2 points in each direction it is the
// one through them. A constant field is reproduced whatever the number of points.
//
// Source: E. Hinton, J. S. Campbell, Int. J. Numer. Methods Eng. 8 (1974) 461-480, local
// least-squares smoothing (from memory).
func extrapolation(counts []int, degree int, rule *mesh.Tabulation, places [][3]float64) []float64 {
	var sum float64
	for _, weight := range rule.Weights {
		sum += weight
	}
	factors := make([]float64, 0, len(places)*len(rule.Points))
	for _, place := range places {
		for q, point := range rule.Points {
			factor := rule.Weights[q] / sum
			for axis, count := range counts {
				kernel := 0.0
				for m := range 1 + min(count-1, max(1, degree-1)) {
					kernel += float64(2*m+1) * legendre(m, 2*place[axis]-1) * legendre(m, 2*point[axis]-1)
				}
				factor *= kernel
			}
			factors = append(factors, factor)
		}
	}
	return factors
}

// legendre returns Legendre's polynomial P_m(x) by Bonnet's recursion (Abramowitz &
// Stegun 22.7.10).
func legendre(m int, x float64) float64 {
	before, value := 0.0, 1.0
	for k := range m {
		before, value = value, (float64(float64(2*k+1)*x*value)-float64(float64(k)*before))/float64(k+1)
	}
	return value
}

// stressAtNodes returns the stress σ_h of cell i, which has just been evaluated, at its
// nodes: one value where there is one per cell. The shape interpolates. It is valid until
// the next call.
func (w *worker) stressAtNodes(chunk *mesh.Chunk, i int, r *region) []mesh.SymmetricTensor {
	w.nodeStress = w.nodeStress[:0]
	switch w.sampling {
	case sampledPerCell:
		w.nodeStress = append(w.nodeStress, w.stressAt(chunk, i, w.cell.Nodes[0], r))
	case sampledAtIntegration:
		w.extrapolateStress(chunk, i, r)
	default:
		table := w.nodeTable(nil).atNodes
		largest := 0.0
		for k := range table.Points {
			largest = max(largest, math.Abs(w.cell.Gradients(table, k, w.gradients)))
		}
		for k := range table.Points {
			w.nodeStress = append(w.nodeStress, w.gradientStressAt(table, k, largest, chunk, i, r))
		}
	}
	return w.nodeStress
}

// stressAt returns the stress at one place of a cell.
func (w *worker) stressAt(chunk *mesh.Chunk, i int, node int32, r *region) mesh.SymmetricTensor {
	var stress, strain mesh.SymmetricTensor
	w.at(chunk, i, node, r, &stress, &strain)
	return stress
}

// extrapolateStress takes the stress at the integration points to the nodes.
func (w *worker) extrapolateStress(chunk *mesh.Chunk, i int, r *region) {
	rule := w.rule
	factors := w.nodeTable(rule).extrapolate
	points := len(rule.Points)
	w.nodeStress = append(w.nodeStress, make([]mesh.SymmetricTensor, w.cell.Shape.NodeCount)...)
	for q := range points {
		w.placeValues = w.cell.Values(rule, q, w.rational)
		stress := w.stressAt(chunk, i, int32(q), r)
		for k := range w.nodeStress {
			for c := range stress {
				w.nodeStress[k][c] += float64(factors[k*points+q] * stress[c])
			}
		}
	}
	w.placeValues = nil
}

// flat is the Jacobian determinant at a node, as a share of the cell's largest, up to
// which the gradients there are noise: the apex of a pyramid, edges that were drawn
// together.
const flat = 1e-9

// gradientStressAt returns the stress of the displacement's gradients at a node, the
// cell's mean where they do not exist.
func (w *worker) gradientStressAt(table *mesh.Tabulation, k int, largest float64, chunk *mesh.Chunk, i int, r *region) mesh.SymmetricTensor {
	if math.Abs(w.cell.Gradients(table, k, w.gradients)) > flat*largest {
		n := w.cell.Shape.NodeCount
		strain := w.strainAt(table, k, table.Values[n*k:n*k+n])
		if stress := w.stressOf(&strain); stress.IsFinite() {
			return stress
		}
	}
	return w.meanStress(chunk, i, r)
}

// sampleStress returns the stress σ_h of cell i, which has just been evaluated, at the
// points of the rule that it is integrated by, and the measure of each point. They are
// valid until the next call.
func (w *worker) sampleStress(chunk *mesh.Chunk, i int, r *region) (rule *mesh.Tabulation, stress []mesh.SymmetricTensor, measures []float64) {
	rule = w.productRule()
	if w.sampling == sampledAtIntegration {
		rule = w.rule
	}
	w.pointStress = w.pointStress[:0]
	for q := range rule.Weights {
		values := w.cell.Values(rule, q, w.rational)
		switch {
		case w.sampling == sampledPerCell && q > 0:
			w.pointStress = append(w.pointStress, w.pointStress[0])
		case w.sampling == sampledPerCell:
			w.pointStress = append(w.pointStress, w.stressAt(chunk, i, w.cell.Nodes[0], r))
		case w.sampling == sampledAtIntegration:
			w.placeValues = values
			w.pointStress = append(w.pointStress, w.stressAt(chunk, i, int32(q), r))
			w.placeValues = nil
		default:
			strain := w.strainAt(rule, q, values)
			w.pointStress = append(w.pointStress, w.stressOf(&strain))
		}
	}
	measures, factor := w.elementsOf(rule, chunk, i, r, w.orientation)
	for q := range measures {
		measures[q] *= factor
	}
	return rule, w.pointStress, measures
}

// meanStress returns the stress σ_h of a cell, averaged over its measure.
func (w *worker) meanStress(chunk *mesh.Chunk, i int, r *region) mesh.SymmetricTensor {
	_, stress, measures := w.sampleStress(chunk, i, r)
	mean, _ := meanOf(stress, measures)
	return mean
}

// meanOf returns the mean of stresses weighted by their measures, and the sum of those.
func meanOf(stress []mesh.SymmetricTensor, measures []float64) (mean mesh.SymmetricTensor, whole float64) {
	for q, measure := range measures {
		whole += measure
		for c := range mean {
			mean[c] += float64(stress[q][c] * measure)
		}
	}
	for c := range mean {
		mean[c] /= whole
	}
	return mean, whole
}

// A comparedCell is what the error estimate finds of one cell.
type comparedCell struct {
	difference float64              // ∫ (σ* - σ_h):S:(σ* - σ_h) dV
	norm       float64              // ∫ σ_h:S:σ_h dV
	shift      mesh.SymmetricTensor // ∫ (σ* - σ_h) dV
}

// compareCell holds the stress σ_h of the current cell, at the points of a rule, against
// σ*, which is interpolated from the nodes.
func (w *worker) compareCell(rule *mesh.Tabulation, stress []mesh.SymmetricTensor, measures []float64, nodal []mesh.SymmetricTensor) (found comparedCell) {
	for q, measure := range measures {
		missing := interpolatedLess(w.cell.Values(rule, q, w.rational), nodal, &stress[q])
		found.norm += float64(w.complementary(&stress[q]) * measure)
		found.difference += float64(w.complementary(&missing) * measure)
		for c := range missing {
			found.shift[c] += float64(missing[c] * measure)
		}
	}
	return found
}

// interpolatedLess returns the interpolation of nodal stresses, less a stress.
func interpolatedLess(values []float64, nodal []mesh.SymmetricTensor, stress *mesh.SymmetricTensor) (result mesh.SymmetricTensor) {
	for c := range result {
		result[c] = -stress[c]
	}
	for k, value := range values {
		for c := range result {
			result[c] += float64(value * nodal[k][c])
		}
	}
	return result
}

// complementary returns σ:S:σ by the law of the current cell, twice the energy density.
func (w *worker) complementary(stress *mesh.SymmetricTensor) float64 {
	strain := w.law.Strain(stress)
	return mesh.Product(stress, &strain)
}

// isSampled reports whether the stress of the current cell can be recovered.
func (w *worker) isSampled() bool { return w.law != nil && w.cell.Shape.Interpolates() }

// noteStress remembers the largest stress at a node that is to be recovered.
func (w *worker) noteStress(chunk *mesh.Chunk, i int) {
	if w.sampling == notSampled || w.sampling == smoothInFile || !w.isSampled() {
		return
	}
	w.growNodes(w.cell.Shape.NodeCount)
	w.part.hasMiddleNodes = w.part.hasMiddleNodes || w.cell.Shape.NodeCount != w.cell.Shape.CornerCount
	for _, stress := range w.stressAtNodes(chunk, i, &w.regions.regions[w.region[i]]) {
		for _, component := range stress {
			if size := math.Abs(component); size <= math.MaxFloat64 {
				raise(&w.part.largestStress, size)
			}
		}
	}
}

// An accounted says what the passes of the error estimate do with a cell.
type accounted int

const (
	leftOut    accounted = iota // the cell is in no account
	notSmooth                   // it is, but its stress cannot be recovered
	smoothable                  // its stress can be recovered
)

// evaluateSampled evaluates cell i of a chunk whose regions are assigned.
func (w *worker) evaluateSampled(chunk *mesh.Chunk, i int) (accounted, error) {
	chunk.Cell(i, &w.cell)
	reason, err := w.evaluate(chunk, i)
	switch {
	case err != nil || reason != notExcluded:
		return leftOut, err
	case !w.isSampled():
		return notSmooth, nil
	}
	w.growNodes(w.cell.Shape.NodeCount)
	return smoothable, nil
}

// assign makes room for a chunk and finds the regions of its cells.
func (w *worker) assign(chunk *mesh.Chunk) {
	w.grow(chunk.Count)
	w.regions.assign(chunk, w.region)
}
