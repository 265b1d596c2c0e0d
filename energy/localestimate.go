package energy

import (
	"fmt"
	"math"
)

// A LocalEstimate is a band for the stress and the strain at a place past the limit, from
// the elastic stress that a linear run has there. It is an estimate for the first loading
// of a notch whose plastic zone is small and held by elastic material around it: Neuber's
// rule tends to overstate the strain, the equivalent energy density to understate it.
// Where Refused says why there is none its numbers do not exist.
type LocalEstimate struct {
	Neuber        LocalState `json:"neuber"`
	EnergyDensity LocalState `json:"energy_density"`
	Refused       Text       `json:"refused"`
}

// A LocalState is one end of the band.
type LocalState struct {
	Stress Number `json:"stress"`
	Strain Number `json:"strain"`
}

// generalYieldingShare is the share of a region's volume past the limit above which its
// yielding is no longer local. The usual bound, a nominal stress below 0.8 of the yield
// stress, cannot be told from one place (both common practice, no source).
const generalYieldingShare = 0.05

// localEstimate estimates the local state of a hotspot of the region, whose account and
// singular tag are settled. It is nil where the hotspot is not past its limit, or the
// material has neither a curve nor a yield stress.
func (r *region) localEstimate(account *Account, hotspot *Hotspot) *LocalEstimate {
	if hotspot.PastLimit == nil || !*hotspot.PastLimit || !r.material.hasPlasticity() {
		return nil
	}
	refuse := func(format string, arguments ...any) *LocalEstimate {
		none := LocalState{None, None}
		return &LocalEstimate{none, none, Text(fmt.Sprintf(format, arguments...))}
	}
	youngsModulus := r.material.YoungsModulus
	if r.law != nil {
		youngsModulus, _ = r.law.isotropicConstants()
	}
	switch past := account.VolumePastLimit / account.Volume; {
	case r.limit.criterion == MaxPrincipal:
		return refuse("criterion %s is for brittle material, which does not yield", MaxPrincipal)
	case math.IsNaN(youngsModulus):
		return refuse("it needs the Young's modulus of an isotropic law")
	case account.CellsYielded > 0:
		return refuse("there is plastic strain in the file: its stress is not that of a linear run")
	case hotspot.Singular == "singular":
		return refuse("the place is singular: its elastic stress depends on the mesh")
	case past > generalYieldingShare:
		return refuse("yielding is general: %.3g %% of the region's volume is past the limit, more than %g %%", 100*float64(past), 100*generalYieldingShare)
	}
	path, err := r.material.loadingPath(float64(hotspot.EquivalentStress), youngsModulus)
	if err != nil {
		return refuse("the curve of the material cannot be used: %v", err)
	}
	estimate, isReached := path.estimate(float64(hotspot.EquivalentStress), youngsModulus)
	if !isReached {
		return refuse("the curve of the material ends before the estimated strain is reached")
	}
	return estimate
}

// hasPlasticity reports whether the material says how it behaves past its limit.
func (m *Material) hasPlasticity() bool {
	return m != nil && (m.Curve != nil || Number(m.YieldStress).Exists())
}

// A loadingPath follows a stress-strain curve from no load by a parameter that rises
// along it from 0 to end.
type loadingPath struct {
	at  func(parameter float64) uniaxialState
	end float64
}

// A uniaxialState is a place on a stress-strain curve, with the work per volume done up
// to it, ∫ σ dε.
type uniaxialState struct{ stress, strain, work float64 }

// loadingPath returns the path of the material's curve; without one that of Ramberg and
// Osgood's law, and without an exponent that of an elastic, perfectly plastic material.
// The last two go as far as an elastic stress can ask for.
func (m *Material) loadingPath(elasticStress, youngsModulus float64) (*loadingPath, error) {
	switch {
	case m.Curve != nil:
		curve, err := m.Curve.Analysis.LawCurve()
		if err != nil {
			return nil, err
		}
		return curve.path(), nil
	case Number(m.HardeningExponent).Exists():
		law := RambergOsgood{YoungsModulus: youngsModulus, OffsetStress: m.YieldStress, Exponent: m.HardeningExponent}
		return &loadingPath{
			at: func(stress float64) uniaxialState {
				return uniaxialState{stress, law.Strain(stress), law.Energy(stress)}
			},
			end: 2 * elasticStress, // both estimates are at most the elastic stress
		}, nil
	}
	curve, err := perfectlyPlastic(youngsModulus, m.YieldStress, elasticStress*elasticStress/(youngsModulus*m.YieldStress))
	if err != nil {
		return nil, err
	}
	return curve.path(), nil
}

// perfectlyPlastic returns the curve of a material that yields at a constant stress, up
// to a strain by which it has yielded and as much elastic strain again.
func perfectlyPlastic(youngsModulus, yieldStress, strain float64) (*Curve, error) {
	elastic := yieldStress / youngsModulus
	return NewCurve([]CurvePoint{{}, {elastic, yieldStress}, {elastic + strain, yieldStress}})
}

// path follows the curve by its strain.
func (c *Curve) path() *loadingPath {
	return &loadingPath{
		at:  func(strain float64) uniaxialState { return uniaxialState{c.Stress(strain), strain, c.Area(strain)} },
		end: c.Last().Strain,
	}
}

// estimate returns the places on the path at which σε = s_e²/E (Neuber) and ∫ σ dε =
// s_e²/2E (equivalent strain energy density), s_e the elastic stress; false where the
// path ends before.
//
// Sources: Neuber, J. Appl. Mech. 28 (1961) 544-550; Molski and Glinka, Mater. Sci. Eng.
// 50 (1981) 93-100 (both from memory).
func (p *loadingPath) estimate(elasticStress, youngsModulus float64) (*LocalEstimate, bool) {
	work := ModulusOfResilience(elasticStress, youngsModulus)
	neuber, isNeuber := p.reach(func(s uniaxialState) float64 { return s.stress * s.strain }, 2*work)
	energyDensity, isEnergyDensity := p.reach(func(s uniaxialState) float64 { return s.work }, work)
	return &LocalEstimate{
		Neuber:        LocalState{Number(neuber.stress), Number(neuber.strain)},
		EnergyDensity: LocalState{Number(energyDensity.stress), Number(energyDensity.strain)},
	}, isNeuber && isEnergyDensity
}

// pathTolerance is the width, relative to its upper end, to which a bracket of the
// parameter is narrowed.
const pathTolerance = 1e-12

// reach returns the state at which a measure, 0 at no load, reaches a positive value, by
// bisection; false where it stays below.
func (p *loadingPath) reach(measure func(uniaxialState) float64, value float64) (uniaxialState, bool) {
	low, high := 0.0, p.end
	if !(measure(p.at(high)) >= value) {
		return uniaxialState{}, false
	}
	for high-low > pathTolerance*high {
		middle := low + (high-low)/2
		if measure(p.at(middle)) < value {
			low = middle
		} else {
			high = middle
		}
	}
	return p.at(high), true
}
