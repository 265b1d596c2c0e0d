package energy

import (
	"fmt"
	"strconv"
	"strings"
)

// A LimitDefinition is one of the published ways to read a proportional limit off a
// curve, with its number. The limit is never a sharp property of a material: every
// value is printed with the definition's name.
type LimitDefinition struct {
	kind  string
	share float64 // plastic strain, share of deviation, share of the modulus
}

const (
	byOffset    = "offset"    // a plastic strain: the curve meets the line of slope E through (share, 0)
	byDeviation = "deviation" // the strain exceeds σ/E by a share of it
	byTangent   = "tangent"   // the tangent modulus falls below a share of E
	byJohnson   = "johnson"   // the same with 2/3: the strain rises half as fast again with stress
)

// DefaultLimit is the definition that is used where none is stated: a plastic strain of
// 0.01 %, as in MIL-HDBK-5 and MMPDS (from memory).
const DefaultLimit = "offset-0.01%"

// publishedLimits are the definitions that every analysis gives: offsets of MMPDS and of
// precision elastic limits, deviations and the tangent of common practice, Johnson's
// apparent elastic limit (all from memory).
var publishedLimits = []string{
	DefaultLimit, "offset-0.005%", "offset-0.002%", "deviation-1%", "deviation-5%", "tangent-95%", byJohnson,
}

// ParseLimit returns the definition of a name: offset-0.01%, deviation-1%, tangent-95%,
// with any number, or johnson.
func ParseLimit(name string) (LimitDefinition, error) {
	if name == byJohnson {
		return LimitDefinition{byJohnson, 2. / 3}, nil
	}
	kind, number, _ := strings.Cut(name, "-")
	text, hasPercent := strings.CutSuffix(number, "%")
	percent, err := strconv.ParseFloat(text, 64)
	isKnown := kind == byOffset || kind == byDeviation || kind == byTangent
	if !isKnown || !hasPercent || err != nil || !(percent > 0 && percent < 100) {
		return LimitDefinition{}, fmt.Errorf("proportional limit by %q: want one of %s; the percentage may be another between 0 and 100",
			name, strings.Join(publishedLimits, ", "))
	}
	return LimitDefinition{kind, percent / 100}, nil
}

// String returns the definition's name.
func (d LimitDefinition) String() string {
	if d.kind == byJohnson {
		return d.kind
	}
	return fmt.Sprintf("%s-%.12g%%", d.kind, 100*d.share)
}

// Meaning returns the definition in words.
func (d LimitDefinition) Meaning() string {
	switch d.kind {
	case byOffset:
		return fmt.Sprintf("plastic strain of %.12g %%", 100*d.share)
	case byDeviation:
		return fmt.Sprintf("strain exceeds stress over modulus by %.12g %%", 100*d.share)
	case byTangent:
		return fmt.Sprintf("tangent modulus falls below %.12g %% of Young's modulus", 100*d.share)
	}
	return "tangent modulus falls below 2/3 of Young's modulus (Johnson's apparent elastic limit)"
}

// An elasticLine is the line σ = E (ε - origin) that stands for elastic behaviour, fitted
// to points first to last of a test.
type elasticLine struct {
	modulus, origin float64
	first, last     int
}

// limit returns the point of a definition. It returns false where the curve does not
// reach it, and where the fit's own scatter is as large as what the definition looks
// for.
func (l *elasticLine) limit(points []CurvePoint, d LimitDefinition) (CurvePoint, bool) {
	switch d.kind {
	case byOffset:
		return l.meet(points, l.modulus, l.origin+d.share)
	case byDeviation:
		return l.meet(points, l.modulus/(1+d.share), l.origin)
	}
	return l.tangent(points, d.share*l.modulus)
}

// meet returns the first point past the fit at which the curve falls to the line of a
// slope through (origin, 0), exact on its straight segment. Where the window of the fit
// reaches beyond that line, the search begins at its last point on the near side.
func (l *elasticLine) meet(points []CurvePoint, slope, origin float64) (CurvePoint, bool) {
	above := func(i int) float64 { return points[i].Stress - float64(slope*(points[i].Strain-origin)) }
	start := l.last
	for start > l.first && above(start) <= 0 {
		start--
	}
	if above(start) <= 0 {
		return CurvePoint{}, false
	}
	for i := start + 1; i < len(points); i++ {
		end := above(i)
		if end > 0 {
			continue
		}
		begin := above(i - 1)
		share := begin / (begin - end)
		a, b := points[i-1], points[i]
		return CurvePoint{
			a.Strain + float64(share*(b.Strain-a.Strain)),
			a.Stress + float64(share*(b.Stress-a.Stress)),
		}, true
	}
	return CurvePoint{}, false
}

// tangent returns the first point past the fit at which the curve's slope falls below
// a least one. Where a segment within the fit does so already, noise would decide, and
// it returns false.
func (l *elasticLine) tangent(points []CurvePoint, least float64) (CurvePoint, bool) {
	for i := l.first; i < len(points)-1; i++ {
		if slope(points, i) < least {
			return points[i], i >= l.last
		}
	}
	return CurvePoint{}, false
}
