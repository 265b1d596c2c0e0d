package energy

import (
	"fmt"
	"math"
)

const (
	// greatestVariation is the coefficient of variation V1, in percent, up to which a fit
	// counts as good (common practice, no source).
	greatestVariation = 2
	// modulusDifference is how far a fitted modulus may be off the stated one before the
	// testing machine's own compliance is suspected (common practice, no source).
	modulusDifference = 0.05
	// greatestElasticStrain is a strain at the end of elastic behaviour that no metal and
	// few plastics reach (common practice, no source).
	greatestElasticStrain = 0.05
)

func (a *CurveAnalysis) add(severity, code, format string, arguments ...any) {
	a.Findings = append(a.Findings, CurveFinding{code, severity, fmt.Sprintf(format, arguments...)})
}

// find lists what the reader of the numbers has to know, warnings first.
func (a *CurveAnalysis) find(window StressWindow) {
	a.findInFit(window)
	a.findInUnits()
	if !a.ProportionalLimit.Stress.Exists() {
		a.add(Warning, "no-proportional-limit", "The curve shows no proportional limit by %s (%s): none is given, and no modulus of resilience.",
			a.ProportionalLimit.By, a.ProportionalLimit.Meaning)
	} else if a.Modulus.To.Strain > float64(a.ProportionalLimit.Strain) {
		a.add(Warning, "window-past-limit", "The modulus window ends at %.6g, past the proportional limit %.6g: choose a lower window.",
			a.Modulus.To.Stress, float64(a.ProportionalLimit.Stress))
	}
	if !a.OffsetYields[0].Stress.Exists() {
		a.add(Note, "no-offset-yield", "The record ends before a plastic strain of 0.2 %%.")
	}
	if a.RambergOsgood == nil {
		a.add(Note, "no-ramberg-osgood", "No Ramberg-Osgood law is fitted: between plastic strains of 0.01 %% and 0.2 %% the curve has no point, or its stress does not rise.")
	}
	for _, limit := range a.ProportionalLimits {
		definition, err := ParseLimit(limit.By)
		if err == nil && !limit.Stress.Exists() && (definition.kind == byTangent || definition.kind == byJohnson) {
			a.add(Note, "tangent-unresolved", "No limit by %s: the curve ends before, or neighbouring points scatter as much within the modulus window.", limit.By)
		}
	}
	if a.Source.IsTrue {
		a.add(Note, "true-converted", "True stress and strain were converted to engineering ones, which holds up to the ultimate stress; %d points past it are left out.", a.Source.Omitted)
	}
	if math.Abs(float64(a.Modulus.Intercept)) > straightness*a.Modulus.To.Stress {
		a.add(Note, "toe", "The elastic line meets zero stress at a strain of %.6g: offsets and areas count from there.", float64(a.Modulus.ToeStrain))
	}
}

// findInFit judges the modulus fit.
func (a *CurveAnalysis) findInFit(window StressWindow) {
	m := &a.Modulus
	if m.Points < windowPoints {
		advice := "record more points below the limit"
		if window != (StressWindow{}) {
			advice = "widen the window or " + advice
		}
		a.add(Warning, "few-points", "Young's modulus rests on %d points, fewer than %d: %s.", m.Points, windowPoints, advice)
	}
	if m.Variation > greatestVariation {
		a.add(Warning, "modulus-scatter", "The coefficient of variation of Young's modulus is %.3g %%, above %d %%: the curve is not straight, or noisy, in the window.",
			float64(m.Variation), greatestVariation)
	}
	if ratio := float64(m.Fitted / m.Stated); math.Abs(ratio-1) > modulusDifference {
		cause := "the machine's own compliance, a wrong unit, or another material."
		for unit, factor := range strainUnits {
			if factor != 1 && math.Abs(ratio/factor-1) < 0.2 {
				cause = "is the strain in " + unit + "?"
			}
		}
		a.add(Warning, "modulus-differs", "The fitted modulus is %.4g of the stated one: %s", ratio, cause)
	}
}

// findInUnits judges units that nobody stated.
func (a *CurveAnalysis) findInUnits() {
	if a.Units.Stress == "" {
		a.add(Warning, "units-not-stated", "Neither the file nor the call states the unit of stress: the numbers are in the file's, whatever it is.")
	} else if a.Source.Stress.DecidedBy == "default" {
		a.add(Note, "units-assumed", "The file does not state the unit of stress: taken as %s.", a.Units.Stress)
	}
	stress := float64(a.ProportionalLimit.Stress)
	if !a.ProportionalLimit.Stress.Exists() {
		stress = a.Ultimate.Stress
	}
	if strain := stress / a.line.modulus; a.Source.Strain.DecidedBy == "default" && strain > greatestElasticStrain {
		a.add(Warning, "strain-unit-suspect", "Elastic strain reaches %.3g as a ratio, beyond most materials: strain may be in percent or microstrain, or the columns exchanged; state the unit.", strain)
	}
}
