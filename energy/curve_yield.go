package energy

const (
	// yieldDrop is the fall of stress, and the rise after it, that tells a yield point
	// from noise and from necking; yieldSpan is the strain over which the stress does not
	// come back. Source: ISO 6892-1, which asks for a fall of at least 0.5 % and a region
	// of at least 0.05 % strain (from memory).
	yieldDrop = 0.005
	yieldSpan = 0.0005
)

// A YieldPoint is what a curve with discontinuous yielding shows.
type YieldPoint struct {
	Upper      *CurvePoint `json:"upper"`       // first local maximum; null where the curve bends into the plateau without one
	Lower      CurvePoint  `json:"lower"`       // least stress before the ultimate one
	PlateauEnd Number      `json:"plateau_end"` // strain at which the stress of the plateau's beginning is passed again
	ultimate   int         // number of the point with the largest stress of the hardening
}

// yieldPoint looks for a yield point: the first local maximum past the fit, before the
// 0.2 % plastic strain, that is not passed again for a while, and from which the curve
// falls and rises again. Nil: the curve bends steadily.
func (l *elasticLine) yieldPoint(points []CurvePoint) *YieldPoint {
	for i := l.last; i+1 < len(points); i++ {
		begin := points[i]
		if begin.Strain-l.origin-begin.Stress/l.modulus > offsetStrain {
			return nil
		}
		passed := passedAgain(points, i)
		if float64(passed)-begin.Strain < yieldSpan {
			continue
		}
		hardens := risesFrom(points, i+1)
		if hardens < 0 {
			return nil // it falls for good: this is the ultimate stress
		}
		yield := &YieldPoint{PlateauEnd: passed, ultimate: hardens + largestStress(points[hardens:])}
		yield.Lower = points[i+1]
		for _, p := range points[i+1 : yield.ultimate] {
			if p.Stress < yield.Lower.Stress {
				yield.Lower = p
			}
		}
		if yield.Lower.Stress <= (1-yieldDrop)*begin.Stress {
			yield.Upper = &begin
		}
		return yield
	}
	return nil
}

// passedAgain returns the strain at which the curve passes the stress of a point again,
// its own where the next point is higher; none where it never does.
func passedAgain(points []CurvePoint, i int) Number {
	for end := i + 1; end < len(points); end++ {
		if points[end].Stress > points[i].Stress {
			return Number(strainAt(points[end-1], points[end], points[i].Stress))
		}
	}
	return None
}

// risesFrom returns the number of the first point that is a good deal higher than some
// point before it, from a point on; -1 where there is none.
func risesFrom(points []CurvePoint, first int) int {
	least := points[first].Stress
	for i := first + 1; i < len(points); i++ {
		if points[i].Stress > (1+yieldDrop)*least {
			return i
		}
		least = min(least, points[i].Stress)
	}
	return -1
}

// strainAt returns the strain at which a segment reaches a stress.
func strainAt(a, b CurvePoint, stress float64) float64 {
	return a.Strain + float64((stress-a.Stress)/(b.Stress-a.Stress)*(b.Strain-a.Strain))
}

// ultimate returns the number of the point with the largest stress: of that to which
// the curve hardens, where there is a yield point.
func ultimate(points []CurvePoint, yield *YieldPoint) int {
	if yield == nil {
		return largestStress(points)
	}
	return yield.ultimate
}
