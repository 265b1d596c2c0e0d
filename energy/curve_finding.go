package energy

import (
	"math"
	"strings"
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
	// noiseBand is the distance from the elastic line, in standard deviations, that some
	// of ten thousand points of a record reach by noise alone.
	noiseBand = 4
)

// find lists what the reader of the numbers has to know.
func (a *CurveAnalysis) find(window StressWindow) {
	found := &findings{}
	a.findInFit(found, window)
	a.findInUnits(found)
	a.findInLimits(found)
	if a.Source.IsTrue {
		found.add("true-converted", 0, "True stress and strain were converted to engineering ones, which holds up to the ultimate stress; %d points past it are left out.", a.Source.Omitted)
	}
	a.Findings = found.sorted(nil)
}

// findInLimits says what the curve does not show.
func (a *CurveAnalysis) findInLimits(found *findings) {
	if !a.ProportionalLimit.Stress.Exists() {
		found.add("no-proportional-limit", 0, "The curve shows no proportional limit by %s (%s): none is given, and no modulus of resilience.",
			a.ProportionalLimit.By, a.ProportionalLimit.Meaning)
	} else if a.Modulus.To.Strain > float64(a.ProportionalLimit.Strain) {
		found.add("window-past-limit", 0, "The modulus window ends at %.6g, past the proportional limit %.6g: choose a lower window.",
			a.Modulus.To.Stress, float64(a.ProportionalLimit.Stress))
	}
	if !a.OffsetYields[0].Stress.Exists() {
		found.add("no-offset-yield", 0, "The record ends before a plastic strain of 0.2 %%.")
	}
	if a.RambergOsgood == nil {
		found.add("no-ramberg-osgood", 0, "No Ramberg-Osgood law is fitted: between plastic strains of 0.01 %% and 0.2 %% the curve has no point, or its stress does not rise.")
	}
	var unresolved, noisy []string
	for _, limit := range a.ProportionalLimits {
		definition, err := ParseLimit(limit.By)
		if err != nil {
			continue
		}
		if isTangent := definition.kind == byTangent || definition.kind == byJohnson; isTangent && !limit.Stress.Exists() {
			unresolved = append(unresolved, limit.By)
		}
		if !a.isWithinNoise(definition, limit) {
			continue
		}
		if limit == a.ProportionalLimit {
			found.add("limit-within-noise", 0, "The points scatter by %.3g about the elastic line, so much that noise may decide the limit by %s: choose a larger one.",
				float64(a.Modulus.Scatter), limit.By)
			continue
		}
		noisy = append(noisy, limit.By)
	}
	if len(unresolved) > 0 {
		found.add("tangent-unresolved", 0, "No limit by %s: the curve ends before, or neighbouring points scatter as much within the modulus window.", strings.Join(unresolved, ", "))
	}
	if len(noisy) > 0 {
		found.add("limits-within-noise", 0, "The points scatter by %.3g about the elastic line, so much that noise may decide the limits by %s.",
			float64(a.Modulus.Scatter), strings.Join(noisy, ", "))
	}
	if math.Abs(float64(a.Modulus.Intercept)) > straightness*a.Modulus.To.Stress {
		found.add("toe", 0, "The elastic line meets zero stress at a strain of %.6g: offsets and areas count from there.", float64(a.Modulus.ToeStrain))
	}
}

// isWithinNoise reports whether the points scatter as far from the elastic line as the
// line of a definition lies from it at the limit.
func (a *CurveAnalysis) isWithinNoise(definition LimitDefinition, limit LimitRead) bool {
	distance := Number(math.Inf(1)) // in stress
	switch definition.kind {
	case byOffset:
		distance = Number(a.line.modulus * definition.share)
	case byDeviation:
		distance = limit.Stress * Number(definition.share)
	}
	return limit.Stress.Exists() && distance < noiseBand*a.Modulus.Scatter
}

// findInFit judges the modulus fit.
func (a *CurveAnalysis) findInFit(found *findings, window StressWindow) {
	m := &a.Modulus
	if m.Points < windowPoints {
		advice := "record more points below the limit"
		if window != (StressWindow{}) {
			advice = "widen the window or " + advice
		}
		found.add("few-points", 0, "Young's modulus rests on %d points, fewer than %d: %s.", m.Points, windowPoints, advice)
	}
	if m.Variation > greatestVariation {
		found.add("modulus-scatter", 0, "The coefficient of variation of Young's modulus is %.3g %%, above %d %%: the curve is not straight, or noisy, in the window.",
			float64(m.Variation), greatestVariation)
	}
	if ratio := float64(m.Fitted / m.Stated); math.Abs(ratio-1) > modulusDifference {
		cause := "the machine's own compliance, a wrong unit, or another material."
		for unit, factor := range strainUnits {
			if factor != 1 && math.Abs(ratio/factor-1) < 0.2 {
				cause = "is the strain in " + unit + "?"
			}
		}
		found.add("modulus-differs", 0, "The fitted modulus is %.4g of the stated one: %s", ratio, cause)
	}
}

// findInUnits judges units that nobody stated.
func (a *CurveAnalysis) findInUnits(found *findings) {
	if a.Units.Stress == "" {
		found.add("units-not-stated", 0, "Neither the file nor the call states the unit of stress: the numbers are in the file's, whatever it is.")
	} else if a.Source.Stress.DecidedBy == "default" {
		found.add("units-assumed", 0, "The file does not state the unit of stress: taken as %s.", a.Units.Stress)
	}
	stress := float64(a.ProportionalLimit.Stress)
	if !a.ProportionalLimit.Stress.Exists() {
		stress = a.Ultimate.Stress
	}
	if strain := stress / a.line.modulus; a.Source.Strain.DecidedBy == "default" && strain > greatestElasticStrain {
		found.add("strain-unit-suspect", 0, "Elastic strain reaches %.3g as a ratio, beyond most materials: strain may be in percent or microstrain, or the columns exchanged; state the unit.", strain)
	}
}
