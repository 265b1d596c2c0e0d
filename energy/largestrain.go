package energy

import (
	"context"
	"fmt"
	"math"
	"strings"
	"sync"

	"strainledger/mesh"
)

// From where on small strain is in doubt (common practice, no source).
const (
	largeStrain   = 0.01 // principal strain
	gravestStrain = 0.05 // principal strain that calls for another theory
	largeRotation = 1.0  // of a cell, degrees
	largeMotion   = 0.05 // displacement, as a share of the model's diagonal
	largeVolume   = 0.01 // det(I + ∇u) beside 1 + tr ε
)

const (
	// lookSpans and lookCells bound what is looked at of the displacement, so that the look
	// stays cheap beside the tally.
	lookSpans = 16
	lookCells = 32
)

// noteStrain looks at the total strain of one place of the current cell. The inelastic
// part is added to an elastic strain; nil where there is none.
func (w *worker) noteStrain(strain, inelastic *mesh.SymmetricTensor) {
	total := *strain
	if inelastic != nil && w.inputs.strainIsElastic {
		for i := range total {
			total[i] += inelastic[i]
		}
	}
	square := mesh.Product(&total, &total)
	raise(&w.part.strain, square)
	// No principal value is larger in size than the Frobenius norm.
	if square > largeStrain*largeStrain {
		principal := total.PrincipalValues()
		w.strained = max(w.strained, principal[0], -principal[2])
	}
}

// countStrained counts the current cell where its strain is large.
func (w *worker) countStrained() {
	if w.strained > largeStrain {
		w.part.strained++
		w.part.maxStrain = max(w.part.maxStrain, w.strained)
	}
}

// A motion is what a look at the displacement of some cells has shown.
type motion struct {
	cells    int64   // looked at
	rotation float64 // largest of a cell, degrees
	moved    float64 // largest displacement of a point
	volume   float64 // largest difference of det(I + ∇u) from 1 + tr ε
}

func (m *motion) join(other *motion) {
	m.cells += other.cells
	m.rotation = max(m.rotation, other.rotation)
	m.moved = max(m.moved, other.moved)
	m.volume = max(m.volume, other.volume)
}

// lookAtMotion looks at the displacement of some cells, where the file has one.
func (p *plan) lookAtMotion(ctx context.Context, walk *mesh.Walk) error {
	if !p.inputs.displacement.exists() {
		return nil
	}
	want := &mesh.Want{}
	displacement := p.inputs.displacement.wantIn(&want.PointValues)
	var lock sync.Mutex
	return walk.Few(ctx, p.lookSpans(), want, func(int) mesh.Visitor {
		l := &looker{plan: p, displacement: displacement}
		return func(chunk *mesh.Chunk) error {
			seen := l.look(chunk)
			lock.Lock()
			defer lock.Unlock()
			p.motion.join(&seen)
			return nil
		}
	})
}

// lookSpans spreads spans evenly over the cells of the model, its first and last cells
// among them; a small model is taken whole.
func (p *plan) lookSpans() []mesh.Span {
	cells := p.model.CellCount()
	var spans []mesh.Span
	for k := range int64(lookSpans) {
		low := k * lookCells
		if cells > lookSpans*lookCells {
			low = k * (cells - lookCells) / (lookSpans - 1)
		}
		high := min(low+lookCells, cells)
		var first int64 // cell of the model with which the piece begins
		for piece := range p.model.Pieces {
			count := p.model.Pieces[piece].CellCount
			if span := (mesh.Span{Piece: piece, Low: max(low-first, 0), High: min(high-first, count)}); span.Low < span.High {
				spans = append(spans, span)
			}
			first += count
		}
	}
	return spans
}

// A looker looks at the displacement of cells for one worker.
type looker struct {
	*plan
	displacement vectorInput
	cell         mesh.Cell
	moves        []Vector
	gradients    [][3]float64
}

func (l *looker) look(chunk *mesh.Chunk) (seen motion) {
	for i := range chunk.Count {
		shape := chunk.Shapes[i]
		if shape.Dimension != l.dimension || !shape.Interpolates() || isHidden(chunk, i) {
			continue
		}
		chunk.Cell(i, &l.cell)
		if len(l.moves) < shape.NodeCount {
			l.moves, l.gradients = make([]Vector, shape.NodeCount), make([][3]float64, shape.NodeCount)
		}
		one := motion{cells: 1}
		for k, node := range l.cell.Nodes {
			l.moves[k] = l.displacement.at(chunk.PointValues, int(node))
			one.moved = max(one.moved, l.moves[k].length())
		}
		gradient := l.gradient()
		one.rotation, one.volume = rotationOf(&gradient), volumeMisfit(&gradient)
		if isFinite(one.moved, one.rotation, one.volume) {
			seen.join(&one)
		}
	}
	return seen
}

// gradient returns the mean of ∂u_i/∂x_j over the current cell, row i, with the hoop
// strain of a ring at its middle.
func (l *looker) gradient() (mean [3][3]float64) {
	rule := l.cell.Shape.MeasureRule()
	gradients := l.gradients[:l.cell.Shape.NodeCount]
	var whole float64
	for q, weight := range rule.Weights {
		element := weight * l.cell.Gradients(rule, q, gradients)
		whole += element
		for k := range gradients {
			for row, u := range l.moves[k] {
				for column, slope := range gradients[k] {
					mean[row][column] += float64(u * slope * element)
				}
			}
		}
	}
	for row := range mean {
		for column := range mean[row] {
			mean[row][column] /= whole
		}
	}
	if l.options.Idealisation == Axisymmetric {
		radial := 0
		if l.options.AxisX {
			radial = 1
		}
		var moved float64
		for k := range gradients {
			moved += l.moves[k][radial] / float64(len(gradients))
		}
		mean[2][2] = moved / l.cell.Middle()[radial]
	}
	return mean
}

// rotationOf returns the angle of the rotation in I + ∇u, in degrees. It is exact for a
// rotation and in the plane; beside it strains count in their second order.
//
// Source: trace and axial vector of a rotation about an axis (Rodrigues; derived).
func rotationOf(gradient *[3][3]float64) float64 {
	axial := Vector{
		(gradient[2][1] - gradient[1][2]) / 2,
		(gradient[0][2] - gradient[2][0]) / 2,
		(gradient[1][0] - gradient[0][1]) / 2,
	}
	// The trace of a rotation is 1 + 2 cos.
	cosine := 1 + (gradient[0][0]+gradient[1][1]+gradient[2][2])/2
	return math.Atan2(axial.length(), cosine) * 180 / math.Pi
}

// volumeMisfit returns how far the volume ratio det(I + ∇u) is from the 1 + tr ε of small
// strain: the terms of second and third order.
func volumeMisfit(gradient *[3][3]float64) float64 {
	g := *gradient
	second := g[0][0]*g[1][1] - g[0][1]*g[1][0] + g[1][1]*g[2][2] - g[1][2]*g[2][1] + g[0][0]*g[2][2] - g[0][2]*g[2][0]
	third := g[0][0]*(g[1][1]*g[2][2]-g[1][2]*g[2][1]) - g[0][1]*(g[1][0]*g[2][2]-g[1][2]*g[2][0]) + g[0][2]*(g[1][0]*g[2][1]-g[1][1]*g[2][0])
	return math.Abs(second + third)
}

// findLargeStrain reports what small-strain theory does not bear.
func (p *plan) findLargeStrain(ledger *Ledger, total *part) {
	var large, seen []string
	say := func(list *[]string, isLarge bool, format string, arguments ...any) {
		if isLarge {
			*list = append(*list, fmt.Sprintf(format, arguments...))
		}
	}
	say(&large, total.strained > 0, "the largest principal strain is %.3g %%", 100*total.maxStrain)
	say(&seen, p.motion.rotation > largeRotation, "cells turn by up to %.3g degrees", p.motion.rotation)
	say(&seen, p.motion.moved > largeMotion*p.bounds.Diagonal(), "points move by up to %.3g %% of the model's diagonal", 100*p.motion.moved/p.bounds.Diagonal())
	say(&seen, p.motion.volume > largeVolume, "the volume ratio of cells is up to %.3g %% off 1 + tr ε", 100*p.motion.volume)
	if len(seen) > 0 && p.motion.cells < ledger.Total.Cells {
		seen[len(seen)-1] += fmt.Sprintf(" (in a sample of %d cells)", p.motion.cells)
	}
	if large = append(large, seen...); len(large) == 0 {
		return
	}
	consequence := "small strain and ½ σ:ε are in doubt"
	if total.maxStrain > gravestStrain {
		consequence = "the energy is not ½ σ:ε of small strain: use work-conjugate stress and strain per reference volume, or the solver's own density"
	}
	p.findings.add("large-strain", total.strained, "%s: %s; if that is not meant, look at the units of displacement, strain, stress and modulus, and at a scale on the displacement", strings.Join(large, ", "), consequence)
}
