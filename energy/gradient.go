package energy

import (
	"math"

	"strainledger/mesh"
)

// A vectorInput reads a vector field on points: one array of two or three components, or
// two or three arrays of one.
type vectorInput struct {
	names      []string // none: the field is not there
	columns    []int    // positions in the point values that are read
	components int      // of each array
}

func (in *vectorInput) exists() bool { return len(in.names) > 0 }

// wantIn returns the field as it is read with the given list of arrays, to which it adds
// its own.
func (in vectorInput) wantIn(list *[]string) vectorInput {
	in.columns = nil
	for _, name := range in.names {
		in.columns = append(in.columns, wantColumn(list, name))
	}
	return in
}

// at returns the vector of a point; a third component that the file lacks is 0.
func (in *vectorInput) at(values [][]float64, point int) (v Vector) {
	if len(in.columns) == 1 {
		n := in.components
		copy(v[:], values[in.columns[0]][point*n:point*n+n])
		return v
	}
	for i, column := range in.columns {
		v[i] = values[column][point]
	}
	return v
}

// evaluateGradients fills the columns of a cell from the displacement of its nodes:
// strain by the gradients of the shape functions at each point of the rule, stress by
// the law. The limit is judged once per cell, by the mean stress over its volume,
// because stress from gradients is not to be trusted point by point.
func (w *worker) evaluateGradients(chunk *mesh.Chunk, i int, r *region, orientation mesh.Orientation) exclusionReason {
	shape := w.cell.Shape
	if !shape.Interpolates() {
		return unsupportedCell
	}
	w.growNodes(shape.NodeCount)
	w.isYielded[i] = false
	for k, node := range w.cell.Nodes {
		w.displacement[k] = w.inputs.displacement.at(chunk.PointValues, int(node))
		inelastic, isYielded := w.inelasticAt(chunk, i, node, r)
		w.strain[k] = inelastic
		w.isYielded[i] = w.isYielded[i] || isYielded
		if r.hencky != nil {
			w.plastic[k] = *w.plasticAt(chunk, i, node)
		}
	}
	rule := w.productRule()
	elements, factor := w.elementsOf(rule, chunk, i, r, orientation)
	var mean mesh.SymmetricTensor
	var energy, volumetric, curve, measure float64
	for q, element := range elements {
		values := w.cell.Values(rule, q, w.rational)
		strain := w.strainAt(rule, q, values)
		stress := w.stressOf(&strain)
		energy += float64(Density(&stress, &strain) * element)
		volumetric += float64(VolumetricDensity(&stress, &strain) * element)
		measure += element
		if r.hencky != nil {
			reached := w.reachedAt(&strain, values)
			curve += float64(r.hencky.Density(&reached) * element)
		}
		for c := range mean {
			mean[c] += float64(stress[c] * element)
		}
	}
	for c := range mean {
		mean[c] /= measure
	}
	w.noteNonZero(&mean, &mean)
	w.energy[i], w.volumetric[i], w.curve[i] = energy*factor, 0, curve*factor
	if w.law.IsIsotropic() {
		w.volumetric[i] = volumetric * factor
	}
	w.density[i] = w.energy[i] / w.measure[i]
	w.peak[i] = math.NaN() // the file gives no stress or strain at any place
	w.equivalent[i] = r.limit.equivalent(&mean)
	w.utilisation[i] = r.limit.utilisation(w.equivalent[i])
	w.tensor[i] = mean
	if !isFinite(w.energy[i], w.volumetric[i], w.equivalent[i], w.density[i]) {
		return notFinite
	}
	return notExcluded
}

// strainAt returns the elastic strain at one point of the rule: the symmetric part of
// the displacement's gradient, the hoop strain u_r/r of a ring, minus what is thermal
// or plastic there.
func (w *worker) strainAt(rule *mesh.Tabulation, q int, values []float64) (strain mesh.SymmetricTensor) {
	gradients := w.gradients[:w.cell.Shape.NodeCount]
	w.cell.Gradients(rule, q, gradients)
	strain = symmetricGradient(w.displacement[:len(gradients)], gradients)
	if w.options.Idealisation == Axisymmetric {
		radial := 0
		if w.options.AxisX {
			radial = 1
		}
		var u float64
		for k, value := range values {
			u += float64(value * w.displacement[k][radial])
		}
		strain[2] = u / w.cell.Place(rule, q)[radial]
	}
	w.noteStrain(&strain, nil)
	for k, value := range values {
		for c := range strain {
			strain[c] -= float64(value * w.strain[k][c])
		}
	}
	return strain
}

// symmetricGradient returns ½ (∇u + ∇uᵀ) from the displacement of a cell's nodes and the
// gradients of its shape functions at one place.
func symmetricGradient(displacement []Vector, gradients [][3]float64) (strain mesh.SymmetricTensor) {
	for k := range displacement {
		g, d := &gradients[k], &displacement[k]
		strain[0] += float64(d[0] * g[0])
		strain[1] += float64(d[1] * g[1])
		strain[2] += float64(d[2] * g[2])
		strain[3] += float64(0.5 * (float64(d[0]*g[1]) + float64(d[1]*g[0])))
		strain[4] += float64(0.5 * (float64(d[1]*g[2]) + float64(d[2]*g[1])))
		strain[5] += float64(0.5 * (float64(d[0]*g[2]) + float64(d[2]*g[0])))
	}
	return strain
}

// stressOf returns the stress of an elastic strain by the law, and completes the
// strain out of the plane in plane stress.
func (w *worker) stressOf(strain *mesh.SymmetricTensor) mesh.SymmetricTensor {
	if w.options.Idealisation != PlaneStress {
		return w.law.Stress(strain)
	}
	w.law.CompletePlaneStress(strain)
	stress := w.law.Stress(strain)
	stress[2], stress[4], stress[5] = 0, 0, 0 // but for rounding
	return stress
}
