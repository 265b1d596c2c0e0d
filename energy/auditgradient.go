package energy

import (
	"context"
	"math"

	"strainledger/mesh"
)

// followsGradient is the misfit against the displacement's gradient up to which a
// strain counts as that displacement's: averages of a fine solution and gradients of
// the exported mesh differ by some per cent, a wrong factor or order by far more.
const followsGradient = 0.5

// byGradient compares readings with the strain that the displacement's gradient gives,
// the strongest evidence of component order and shear convention, and returns those
// that the best does not beat. Where none follows the gradient, all are returned.
func (a *audit) byGradient(ctx context.Context, walk *mesh.Walk, list []measured) ([]measured, error) {
	if !a.inputs.strain.exists() || a.options.Idealisation == Axisymmetric {
		return list, nil
	}
	displacement := a.inputs.displacement
	sample, err := a.takeSample(ctx, walk, &displacement)
	if err != nil {
		return nil, err
	}
	best := math.Inf(1)
	for i := range list {
		list[i].value = a.gradientMisfit(&list[i].reading, sample)
		best = min(best, list[i].value)
	}
	if !(best < followsGradient) {
		return list, nil
	}
	return equallyGood(list), nil
}

// gradientMisfit measures how far a reading's total strain is from the displacement's
// gradient: normal and shear terms each as a share of their own size, so that few shear
// terms count as much as many normal ones.
func (a *audit) gradientMisfit(r *reading, sample []samplePlace) float64 {
	var rest, size [2]float64 // normal, shear
	for i := range sample {
		p := a.pairAt(r, &sample[i])
		inelastic := a.inelastic(r, &sample[i])
		for c := range p.strain {
			if !r.strain.Has(c) || c == 2 && a.options.Idealisation != Solid {
				continue
			}
			kind := 0
			if c >= 3 {
				kind = 1
			}
			difference := p.strain[c] + inelastic[c] - sample[i].gradient[c]
			rest[kind] += difference * difference
			size[kind] += sample[i].gradient[c] * sample[i].gradient[c]
		}
	}
	return math.Sqrt((rest[0]/max(size[0], 1e-300) + rest[1]/max(size[1], 1e-300)) / 2)
}
