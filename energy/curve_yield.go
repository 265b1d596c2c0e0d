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
	Lower      CurvePoint  `json:"lower"`       // least stress of the plateau
	PlateauEnd float64     `json:"plateau_end"` // strain at which the stress of the plateau's beginning is passed again
	lower      int         // number of the point Lower
}

// yieldPoint looks for a yield point: the first local maximum past the fit, before the
// 0.2 % plastic strain, that is not passed again for a while though the stress rises
// later. Nil: the curve bends steadily.
func (l *elasticLine) yieldPoint(points []CurvePoint) *YieldPoint {
	for i := l.last; i+1 < len(points); i++ {
		begin := points[i]
		if begin.Strain-l.origin-begin.Stress/l.modulus > offsetStrain {
			return nil
		}
		lower, end := i+1, i+1
		for end < len(points) && points[end].Stress <= begin.Stress {
			if points[end].Stress < points[lower].Stress {
				lower = end
			}
			end++
		}
		passed := points[len(points)-1].Strain
		if end < len(points) {
			passed = strainAt(points[end-1], points[end], begin.Stress)
		}
		if passed-begin.Strain < yieldSpan {
			continue
		}
		if !(points[lower+largestStress(points[lower:])].Stress > (1+yieldDrop)*points[lower].Stress) {
			return nil // it never rises again: this is the ultimate stress
		}
		yield := &YieldPoint{Lower: points[lower], PlateauEnd: passed, lower: lower}
		if points[lower].Stress <= (1-yieldDrop)*begin.Stress {
			yield.Upper = &begin
		}
		return yield
	}
	return nil
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
	return yield.lower + largestStress(points[yield.lower:])
}
