// Package energy keeps the account of elastic strain energy: laws, densities, their
// integrals over cells and regions, limits, and what has to be known of the input
// before its numbers are trusted.
//
// A tally decides fields, regions and lists first (plan), then evaluates every cell
// once (worker) into sums that do not depend on any order (part), and at last lays
// out what is not additive: shares, means, ranks and findings (Ledger).
package energy

import (
	"context"
	"sync/atomic"

	"strainledger/mesh"
)

// Tally accounts for the energy of one model. done, if not nil, counts the cells as
// they are evaluated. The hash of the sources and the Run of the ledger are left to
// the caller.
//
// Errors: *StudyError where the options ask for what is not there, *InputError where
// the results cannot be used, the reader's errors, and ctx's.
func Tally(ctx context.Context, model *mesh.Model, options *Options, done *atomic.Int64) (*Ledger, error) {
	walk := mesh.NewWalk(model, options.Workers, options.ChunkCells)
	defer walk.Close()
	p, err := newPlan(ctx, walk, model, options)
	if err != nil {
		return nil, err
	}
	if p.bounds, err = walk.Bounds(ctx, &p.inputs.want); err != nil {
		return nil, err
	}
	if err := p.checkPlane(); err != nil {
		return nil, err
	}
	if err := p.lookAtMotion(ctx, walk); err != nil {
		return nil, err
	}
	total := newPart(p, p.newPool())
	workers := make([]*worker, walk.Workers())
	err = walk.Each(ctx, &p.inputs.want, done, func(number int) mesh.Visitor {
		workers[number] = newWorker(p, total.pool)
		return workers[number].visit
	})
	if err != nil {
		return nil, err
	}
	for _, w := range workers {
		total.join(w.part)
	}
	p.chooseHotspots(total)
	if err := p.lookAround(ctx, walk, total); err != nil {
		return nil, err
	}
	if err := p.findUnaccounted(ctx, walk, total); err != nil {
		return nil, err
	}
	if err := p.weigh(ctx, walk); err != nil {
		return nil, err
	}
	estimate, err := p.estimateErrors(ctx, walk, total)
	if err != nil {
		return nil, err
	}
	return p.close(total, estimate)
}

// checkPlane refuses a plane or axisymmetric mesh that does not lie in x-y.
func (p *plan) checkPlane() error {
	if p.options.Idealisation == Solid || p.bounds.IsEmpty() {
		return nil
	}
	low, high := p.bounds.Low[2], p.bounds.High[2]
	// A writer may leave rounding in z.
	if high-low > 1e-9*p.bounds.Diagonal() {
		return inputError("the points' z runs from %g to %g: a mesh of idealisation %q lies in the x-y plane", low, high, p.options.Idealisation)
	}
	return nil
}
