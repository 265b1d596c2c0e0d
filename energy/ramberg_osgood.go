package energy

import "math"

// offsetStrain is the plastic strain that defines the offset yield stress, 0.2 %.
const offsetStrain = 0.002

// RambergOsgood is the law e = s/E + 0.002 (s/s02)^n with the 0.2 % offset yield stress
// s02 and the exponent n.
//
// Source: the one-parameter form of MIL-HDBK-5 and MMPDS (from memory).
type RambergOsgood struct {
	YoungsModulus float64 `json:"youngs_modulus"`
	OffsetStress  float64 `json:"offset_stress"`
	Exponent      float64 `json:"exponent"`
}

// PlasticStrain returns 0.002 (s/s02)^n.
func (r RambergOsgood) PlasticStrain(stress float64) float64 {
	return offsetStrain * math.Pow(stress/r.OffsetStress, r.Exponent)
}

// Strain returns the strain at a stress.
func (r RambergOsgood) Strain(stress float64) float64 {
	return stress/r.YoungsModulus + r.PlasticStrain(stress)
}

// Energy returns the work per volume up to a stress, ∫ s de = s²/2E + n/(n+1) s e_p. The
// complementary energy is s e less this.
func (r RambergOsgood) Energy(stress float64) float64 {
	return ModulusOfResilience(stress, r.YoungsModulus) + r.Exponent/(r.Exponent+1)*stress*r.PlasticStrain(stress)
}

// exponentBetween returns the exponent of the law through the offset yield stress and
// one more point: n = ln(e_p/0.002) / ln(s/s02).
func exponentBetween(offsetStress, stress, plasticStrain float64) float64 {
	return math.Log(plasticStrain/offsetStrain) / math.Log(stress/offsetStress)
}

// exponentOfSecants returns the exponent of the original law e = s/E (1 + 3/7
// (s/s_0.7)^(n-1)) from the stresses at which the secant modulus is 0.7 E and 0.85 E:
// n = 1 + ln(17/7) / ln(s_0.7/s_0.85).
//
// Source: Ramberg and Osgood, NACA Technical Note 902, 1943 (from memory).
func exponentOfSecants(stress070, stress085 float64) float64 {
	return 1 + math.Log(17./7)/math.Log(stress070/stress085)
}

// A RambergOsgoodFit is the law fitted to a test curve between the plastic strains 0.01 %
// and 0.2 %, through the offset yield stress. It says nothing beyond its range.
type RambergOsgoodFit struct {
	RambergOsgood
	From           CurvePoint `json:"from"`
	To             CurvePoint `json:"to"`
	Points         int        `json:"points"` // both ends included
	RSquared       Number     `json:"r_squared"`
	WorstDeviation Number     `json:"worst_deviation"` // of the strain, as a share of it

	// The exponent by other published ways; null where the curve does not reach them.
	ExponentToUltimate Number `json:"exponent_to_ultimate"` // through offset yield and ultimate
	ExponentOfSecants  Number `json:"exponent_of_secants"`  // of the original form
}

// fitRambergOsgood fits the exponent by least squares of ln(e_p/0.002) on ln(s/s02), or
// returns nil where the curve has less than a point within the range or does not rise.
func (a *CurveAnalysis) fitRambergOsgood() *RambergOsgoodFit {
	from, hasFrom := a.line.meet(a.Points, a.line.modulus, a.line.origin+1e-4)
	to, hasTo := a.line.meet(a.Points, a.line.modulus, a.line.origin+offsetStrain)
	if !hasFrom || !hasTo || !(from.Stress > 0 && from.Stress < to.Stress) {
		return nil
	}
	fit := &RambergOsgoodFit{
		RambergOsgood: RambergOsgood{YoungsModulus: a.line.modulus, OffsetStress: to.Stress},
		From:          from, To: to, ExponentToUltimate: None, ExponentOfSecants: None,
	}
	used := []CurvePoint{from}
	for _, p := range a.Points {
		if p.Strain > from.Strain && p.Strain < to.Strain && a.plasticStrain(p) > 0 && p.Stress > 0 {
			used = append(used, p)
		}
	}
	used = append(used, to)
	if fit.Points = len(used); fit.Points < 3 {
		return nil
	}
	fit.fit(a, used)
	if ultimate := a.plasticStrain(a.Ultimate); ultimate > offsetStrain && a.Ultimate.Stress > to.Stress {
		fit.ExponentToUltimate = Number(exponentBetween(to.Stress, a.Ultimate.Stress, ultimate))
	}
	at070, has070 := a.line.meet(a.Points, 0.7*a.line.modulus, a.line.origin)
	at085, has085 := a.line.meet(a.Points, 0.85*a.line.modulus, a.line.origin)
	if has070 && has085 && at070.Stress > at085.Stress {
		fit.ExponentOfSecants = Number(exponentOfSecants(at070.Stress, at085.Stress))
	}
	return fit
}

// plasticStrain returns the strain of a measured point that is left after unloading.
func (a *CurveAnalysis) plasticStrain(p CurvePoint) float64 {
	return p.Strain - a.line.origin - p.Stress/a.line.modulus
}

// fit sets the exponent and its quality.
func (f *RambergOsgoodFit) fit(a *CurveAnalysis, used []CurvePoint) {
	var product, square, mean float64
	for _, p := range used {
		x, y := math.Log(p.Stress/f.OffsetStress), math.Log(a.plasticStrain(p)/offsetStrain)
		product += float64(x * y)
		square += float64(x * x)
		mean += y / float64(len(used))
	}
	f.Exponent = product / square
	var residual, total float64
	for _, p := range used {
		x, y := math.Log(p.Stress/f.OffsetStress), math.Log(a.plasticStrain(p)/offsetStrain)
		residual += float64((y - float64(f.Exponent*x)) * (y - float64(f.Exponent*x)))
		total += float64((y - mean) * (y - mean))
		strain := p.Strain - a.line.origin
		f.WorstDeviation = max(f.WorstDeviation, Number(math.Abs(f.Strain(p.Stress)-strain)/strain))
	}
	f.RSquared = Number(1 - residual/total)
}
