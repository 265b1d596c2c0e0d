package energy

import (
	"math"
	"slices"
)

// A singularTag says whether the density grows without bound towards a place as the mesh
// is refined.
type singularTag string

// The answers. One mesh cannot show more than that its numbers follow a power of the
// distance as far as they go, or that they level off.
const (
	isSingular singularTag = "singular"
	isRegular  singularTag = "regular"
	cannotTell singularTag = "cannot tell"
)

// A singularity is what one mesh tells of the density about a place. The eigenvalue λ is
// that of stress ~ r^(λ-1), so that density ~ r^(2λ-2); the spread is how far it moves when
// a third of the ring that it comes from is left out.
type singularity struct {
	tag                singularTag
	eigenvalue, spread float64 // NaN where there is no profile
}

// The profile is taken over a ring about the place, in cells: what lies nearer is left to
// the elements of the solver, what lies farther to other features of the body.
const (
	ringStart   = 2.0
	ringEnd     = 8.0
	ringShort   = 6.0 // a ring that ends before tells nothing
	ringCells   = 36  // nor one of fewer cells
	coreStart   = 1.2 // splits what is within the ring: the cells at the place, and the next
	angularRank = 3   // harmonics of the angle by which density may differ about the place
	sectors     = 24  // in which directions are counted that the outer half of the ring has cells in:
	fewSectors  = 6   // in fewer, a quarter of the way round, a law of distance and angle can be any
)

// The bounds between the answers. They were set on sampled fields: Williams' at openings
// of 0 to 150 degrees in modes I and II, with a stress along the crack of a fifth of its
// own at a cell's distance, on square, triangular, polar, graded and distorted cells, as
// values at centroids and as means; against blunt cracks, holes, and fields that level
// off as (r+b)^s, (r²+b²)^(s/2), exp(-r²/2b²) and exp(-r/b), with radii of 1 to 10 cells.
// None of these was called singular, but of 3000 fields of these kinds drawn at random one
// was, that levels off within a cell.
const (
	leastEigenvalue  = 0.49 // free faces allow no less than 0.5; blunt notches seem to have less
	singularBelow    = 0.9
	mostMisfit       = 0.12 // of the ring's density, root mean square
	mostSpread       = 0.05
	leastAtPlace     = 0.97 // density within the ring over what the power law goes on to;
	mostAtPlace      = 1.4  // the mean of a cell at the place lies above its value at the centroid
	mostBesidePlace  = 1.1
	leastBesidePlace = 0.97
	mostBend         = 0.012 // by which the eigenvalue of the ring's inner part may be above that of the outer
	evenSlope        = 0.04  // of ln density over ln r: no fall to speak of
	levelSlope       = 0.15  // the same within the ring, where density levels off
	levelBend        = 0.03  // the same bend, at least
	mostLevelBeside  = 1.05  // density beside the place over what the law goes on to
)

// A view is one way to look at a place: from an origin, along a front that density is
// taken not to change along. In a plane model the front stands on the plane.
type view struct {
	origin        Vector
	across, along Vector  // unit vectors that span the plane across the front
	size          float64 // of the cells at the origin
	front         Vector  // unit vector, and
	thickness     float64 // how far along it cells are looked at; 0: however far
}

// judgeSingularity looks at the cells about a place in every view and returns what the
// one shows in which a power law fits best, out to the radius.
func judgeSingularity(cells []nearCell, views []view, radius float64) singularity {
	best := singularity{cannotTell, math.NaN(), math.NaN()}
	var profile *profile
	least := infinity
	for i := range views {
		p := newProfile(cells, &views[i], radius)
		if p == nil {
			continue
		}
		p.fit()
		if misfit := p.misfit + (math.Abs(math.Log(p.atPlace()))+math.Abs(math.Log(p.besidePlace())))/4; misfit < least {
			least, profile = misfit, p
		}
	}
	if profile == nil {
		return best
	}
	for third := range profile.thirds {
		profile.thirds[third] = profile.withoutThird(third)
	}
	return singularity{profile.judge(), 1 + profile.slope/2, profile.spread()}
}

// A profile holds the cells about the origin of a view, with the power law w = g(θ) r^slope
// that fits best over the ring, g being a sum of harmonics.
type profile struct {
	points []profilePoint
	basis  [][]float64 // harmonics at each point, orthonormal over the ring
	end    float64     // of the ring, in cells

	slope, misfit float64
	thirds        [3]float64 // eigenvalues without one third of the ring
	law           []float64  // the fitted density of each point
	scaled        []float64  // room for densities over r^slope
}

// A profilePoint is a cell: the logarithm of its distance in cells, its angle, density
// and measure; and its weight in the ring, 0 within it.
type profilePoint struct {
	logarithm, angle, density, measure, weight float64
}

// newProfile returns the profile of a view, nil where too little of a ring is there.
func newProfile(cells []nearCell, v *view, radius float64) *profile {
	p := &profile{end: min(ringEnd, radius/v.size)}
	if !(p.end >= ringShort*(1-1e-9)) {
		return nil
	}
	ring, filled := 0, [sectors]bool{}
	for i := range cells {
		c := &cells[i]
		offset := c.at.minus(&v.origin)
		if v.thickness > 0 && math.Abs(dot(offset, v.front)) > v.thickness {
			continue
		}
		x, y := dot(offset, v.across), dot(offset, v.along)
		r := math.Hypot(x, y) / v.size
		if !(r > 0 && r <= p.end && c.density > 0) {
			continue
		}
		point := profilePoint{math.Log(r), math.Atan2(y, x), c.density, c.measure, 0}
		if r >= ringStart {
			point.weight = c.measure / r // as much for each ring of cells
			ring++
		}
		if r >= (ringStart+p.end)/2 {
			filled[int((point.angle/(2*math.Pi)+0.5)*sectors)%sectors] = true
		}
		p.points = append(p.points, point)
	}
	directions := 0
	for _, isFilled := range filled {
		if isFilled {
			directions++
		}
	}
	if ring < ringCells || directions < fewSectors {
		return nil
	}
	p.setBasis()
	return p
}

// setBasis makes the harmonics orthonormal over the ring by Gram and Schmidt's method.
// Those that the ring's cells do not tell apart from the others are left out.
func (p *profile) setBasis() {
	p.basis = p.basis[:0]
	for harmonic := range 2*angularRank + 1 {
		column := make([]float64, len(p.points))
		order := float64((harmonic + 1) / 2)
		for i := range p.points {
			if harmonic%2 == 0 {
				column[i] = math.Cos(order * p.points[i].angle)
			} else {
				column[i] = math.Sin(order * p.points[i].angle)
			}
		}
		whole := p.product(column, column)
		for _, other := range p.basis {
			share := p.product(column, other)
			for i := range column {
				column[i] -= share * other[i]
			}
		}
		rest := p.product(column, column)
		if rest <= 1e-6*whole {
			continue
		}
		for i := range column {
			column[i] /= math.Sqrt(rest)
		}
		p.basis = append(p.basis, column)
	}
}

// product returns the sum of products over the ring.
func (p *profile) product(a, b []float64) (sum float64) {
	for i := range p.points {
		sum += p.points[i].weight * a[i] * b[i]
	}
	return sum
}

// fit finds the slope of the least misfit, by golden section.
func (p *profile) fit() {
	const golden = 0.6180339887498949
	low, high := -3.0, 1.0
	left, right := high-golden*(high-low), low+golden*(high-low)
	atLeft, atRight := p.misfitOf(left), p.misfitOf(right)
	for high-low > 1e-4 {
		if atLeft < atRight {
			high, right, atRight = right, left, atLeft
			left = high - golden*(high-low)
			atLeft = p.misfitOf(left)
		} else {
			low, left, atLeft = left, right, atRight
			right = low + golden*(high-low)
			atRight = p.misfitOf(right)
		}
	}
	p.slope = (low + high) / 2
	p.misfit = p.misfitOf(p.slope)
}

// misfitOf returns the root of the mean square by which density differs from the best law
// of a slope, as a share of the mean density at the same distance, and sets the law.
func (p *profile) misfitOf(slope float64) float64 {
	if p.law == nil {
		p.law, p.scaled = make([]float64, len(p.points)), make([]float64, len(p.points))
	}
	var whole, sum, rest float64
	for i := range p.points {
		point := &p.points[i]
		p.scaled[i], p.law[i] = point.density*math.Exp(-slope*point.logarithm), 0
		whole += point.weight
		sum += point.weight * p.scaled[i]
		rest += point.weight * p.scaled[i] * p.scaled[i]
	}
	for _, column := range p.basis {
		share := p.product(p.scaled, column)
		rest -= share * share
		for i := range p.law {
			p.law[i] += share * column[i]
		}
	}
	for i := range p.law {
		p.law[i] *= math.Exp(slope * p.points[i].logarithm)
	}
	return math.Sqrt(max(0, rest)*whole) / sum
}

// within returns the energy within the ring between two distances, in cells, over what
// the law gives there, and the mean logarithm of the distance; NaN where there is no cell.
func (p *profile) within(low, high float64) (share, logarithm float64) {
	var energy, byLaw, moment float64
	for i := range p.points {
		point := &p.points[i]
		if r := math.Exp(point.logarithm); point.weight > 0 || r < low || r >= high {
			continue
		}
		energy += point.measure * point.density
		byLaw += point.measure * p.law[i]
		moment += point.measure * p.law[i] * point.logarithm
	}
	return energy / byLaw, moment / byLaw
}

// atPlace and besidePlace return how density within the ring compares with the law, 1
// where there is no cell. A law that is negative there fits badly indeed.
func (p *profile) atPlace() float64     { return p.compared(0, coreStart) }
func (p *profile) besidePlace() float64 { return p.compared(coreStart, ringStart) }

func (p *profile) compared(low, high float64) float64 {
	share, _ := p.within(low, high)
	switch {
	case math.IsNaN(share):
		return 1
	case share <= 0:
		return 0.1
	}
	return share
}

// slopeWithin returns the slope of ln density over ln r within the ring, at the same angle;
// NaN where it cannot be told.
func (p *profile) slopeWithin() float64 {
	inner, at := p.within(0, coreStart)
	outer, beside := p.within(coreStart, ringStart)
	return p.slope + math.Log(inner/outer)/(at-beside)
}

// spread returns how far the eigenvalue moves when a third of the ring is left out.
func (p *profile) spread() (largest float64) {
	for _, eigenvalue := range p.thirds {
		if moved := math.Abs(eigenvalue - 1 - p.slope/2); moved > largest {
			largest = moved
		}
	}
	return largest
}

// bend returns by how much the eigenvalue of the inner two thirds of the ring is above
// that of the outer two: above 0 where density levels off towards the place. Where the
// cells of a third are all that there is it is 0.
func (p *profile) bend() float64 {
	if bend := p.thirds[2] - p.thirds[0]; !math.IsNaN(bend) {
		return bend
	}
	return 0
}

// judge gives the answer.
func (p *profile) judge() singularTag {
	isBetween := func(value, low, high float64) bool { return value >= low && value <= high }
	eigenvalue, spread := 1+p.slope/2, p.spread()
	switch slope := p.slopeWithin(); {
	case p.misfit > mostMisfit:
		return cannotTell
	case isBetween(eigenvalue, leastEigenvalue, singularBelow-spread) && spread <= mostSpread && p.bend() <= mostBend &&
		isBetween(p.atPlace(), leastAtPlace, mostAtPlace) && isBetween(p.besidePlace(), leastBesidePlace, mostBesidePlace):
		return isSingular
	case math.Abs(slope) <= evenSlope && math.Abs(p.slope) <= evenSlope:
		return isRegular
	// Density falls the more steeply the farther it is from the place, and hardly at it.
	case math.Abs(slope) <= levelSlope && slope > p.slope/2 && p.bend() >= levelBend &&
		p.atPlace() <= 1 && p.besidePlace() <= mostLevelBeside:
		return isRegular
	}
	return cannotTell
}

// withoutThird returns the eigenvalue that the ring gives without one of its thirds, by
// the logarithm of the distance; NaN where too little is left.
func (p *profile) withoutThird(third int) float64 {
	start, end := math.Log(ringStart), math.Log(p.end)
	part := &profile{points: slices.Clone(p.points)}
	cells := 0
	for i := range part.points {
		point := &part.points[i]
		if min(2, int(3*(point.logarithm-start)/(end-start))) == third {
			point.weight = 0
		} else if point.weight > 0 {
			cells++
		}
	}
	if cells < ringCells/2 {
		return math.NaN()
	}
	part.setBasis()
	part.fit()
	return 1 + part.slope/2
}
