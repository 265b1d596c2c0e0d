package energy

import (
	"context"
	"math"

	"strainledger/mesh"
)

// surroundings holds what was found about a place; the zero value that nothing was looked
// for.
type surroundings struct {
	ball, control   *ball // nil: no radius is stated
	criticalDensity float64
	singularity
}

// looksAround reports whether density is averaged over balls.
func (p *plan) looksAround() bool {
	if p.options.Hotspots.Radius > 0 {
		return true
	}
	for i := range p.regions.regions {
		if m := p.regions.regions[i].material; m != nil && m.controlRadius(p.options.Idealisation) > 0 {
			return true
		}
	}
	return false
}

// lookAround averages the density about the hotspots and about the study's centre, and
// judges what its profile tells.
func (p *plan) lookAround(ctx context.Context, walk *mesh.Walk, total *part) error {
	if !p.looksAround() {
		return nil
	}
	radius := p.options.Hotspots.Radius
	var balls []*ball
	add := func(b *ball) *ball {
		balls = append(balls, b)
		return b
	}
	for i := range total.hotspots {
		found := &total.hotspots[i]
		at := total.pool.centroid(found.cell, p.options)
		material := p.regions.regions[total.pool.cells[found.cell].region].material
		if radius > 0 {
			found.around.ball = add(&ball{centre: at, radius: radius, material: material, near: &nearCells{}})
		}
		if control := material.controlRadius(p.options.Idealisation); control > 0 {
			found.around.control = add(&ball{centre: at, radius: control, material: material})
			found.around.criticalDensity = material.criticalDensity()
		}
	}
	centre := p.centre()
	var ofMaterial map[*Material]*ball
	if centre != nil {
		total.centre = &surroundings{ball: add(&ball{centre: *centre, radius: radius, isAll: true, near: &nearCells{}})}
		ofMaterial = map[*Material]*ball{}
		for i := range p.options.Materials {
			m := &p.options.Materials[i]
			if control := m.controlRadius(p.options.Idealisation); control > 0 {
				ofMaterial[m] = add(&ball{centre: *centre, radius: control, material: m})
			}
		}
	}
	if err := p.fillBalls(ctx, walk, total, balls); err != nil {
		return err
	}
	for i := range total.hotspots {
		total.hotspots[i].around.judge(p.dimension, nil)
	}
	if centre != nil {
		total.centre.judge(p.dimension, centre)
		if near := total.centre.ball.near; len(near.list) > 0 {
			material := p.regions.regions[near.nearest.region].material
			total.centre.control, total.centre.criticalDensity = ofMaterial[material], material.criticalDensity()
		}
	}
	p.noteAveraging(total)
	return nil
}

// centre returns the study's centre, in a plane model on the plane of the mesh; nil where
// none is stated.
func (p *plan) centre() *Vector {
	stated := p.options.Hotspots.Centre
	if stated == nil || p.options.Idealisation == Solid {
		return stated
	}
	return &Vector{stated[0], stated[1], p.bounds.Low[2]}
}

// judge looks at the profile of the ball; tip is the origin where it is stated.
func (s *surroundings) judge(dimension int, tip *Vector) {
	if s.ball == nil {
		return
	}
	near := s.ball.near
	s.singularity = judgeSingularity(near.list, near.frame.views(dimension, tip), near.reach(s.ball.radius))
}

// lay lays out the numbers.
func (s *surroundings) lay() Surroundings {
	result := Surroundings{
		BallRadius: None, BallVolume: None, BallCells: None, AveragedDensity: None, Eigenvalue: None, EigenvalueSpread: None,
		ControlRadius: None, ControlVolume: None, ControlDensity: None, AveragedDensityRatio: None,
	}
	if s.ball != nil {
		result.BallRadius, result.BallVolume = Number(s.ball.radius), Number(s.ball.volume.Float64())
		result.BallCells, result.AveragedDensity = Number(s.ball.cells), Number(s.ball.density())
		result.Eigenvalue, result.EigenvalueSpread = Number(s.eigenvalue), Number(s.spread)
	}
	if s.control != nil {
		result.ControlRadius, result.ControlVolume = Number(s.control.radius), Number(s.control.volume.Float64())
		result.ControlDensity = Number(s.control.density())
		result.AveragedDensityRatio = result.ControlDensity / Number(s.criticalDensity)
	}
	return result
}

// noteAveraging says what the ratio of densities stands on, where there is one.
func (p *plan) noteAveraging(total *part) {
	has := func(s *surroundings) bool { return s.control != nil && s.control.density()/s.criticalDensity > 0 }
	count := 0
	for i := range total.hotspots {
		if has(&total.hotspots[i].around) {
			count++
		}
	}
	if count == 0 && (total.centre == nil || !has(total.centre)) {
		return
	}
	p.findings.add("averaged-density", 0, "the averaged-density ratio is that of brittle fracture, or of fatigue at many cycles, from notches in an isotropic body: linear up to failure with a plastic zone far below the control radius, the radius far below the notch's depth and the ligament, radius and critical density from the same tests; it does not hold for ductile collapse, nor with the strength of a smooth bar that yields before it breaks. It is taken over a ball about the centroid of the peak's cell, or about the stated centre, as far as the body fills it, not over a sector about a notch's tip; in space the ball takes the place of a thickness")
}

// controlRadius returns the radius of the ball over which density is averaged, NaN where
// the material gives none.
func (m *Material) controlRadius(idealisation Idealisation) float64 {
	switch {
	case m == nil:
		return math.NaN()
	case Number(m.ControlRadius).Exists():
		return m.ControlRadius
	}
	return ControlRadius(m.FractureToughness, m.TensileStrength, m.PoissonsRatio, idealisation)
}

// criticalDensity returns the mean density at which the material breaks: as given, else
// what a smooth bar holds at its tensile strength. NaN where neither is given.
func (m *Material) criticalDensity() float64 {
	switch {
	case m == nil:
		return math.NaN()
	case Number(m.CriticalDensity).Exists():
		return m.CriticalDensity
	}
	return ModulusOfResilience(m.TensileStrength, m.YoungsModulus)
}
