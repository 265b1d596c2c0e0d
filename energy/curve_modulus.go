package energy

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

const (
	// windowLow and windowHigh bound the default window of the modulus fit, as shares of
	// the 0.2 % offset yield stress (common practice, no source).
	windowLow, windowHigh = 0.1, 0.4
	// windowPoints is the number of points that a fit should have (common practice, no
	// source).
	windowPoints = 5
	// straightness is how far a point may lie off the line of a window that grows, as a
	// share of its stress: the smallest deviation by which a proportional limit is
	// defined.
	straightness = 0.01
)

// A StressWindow bounds the stresses between which the modulus is fitted. The zero
// value leaves the choice to the curve.
type StressWindow struct {
	Low, High float64
	IsShare   bool // of the 0.2 % offset yield stress; else in the unit of the curve
}

// ParseStressWindow reads "70..210", in the curve's unit of stress, or "10%..40%" of the
// 0.2 % offset yield stress.
func ParseStressWindow(text string) (StressWindow, error) {
	low, high, ok := strings.Cut(text, "..")
	low, lowIsShare := strings.CutSuffix(strings.TrimSpace(low), "%")
	high, highIsShare := strings.CutSuffix(strings.TrimSpace(high), "%")
	window := StressWindow{IsShare: lowIsShare}
	var lowErr, highErr error
	window.Low, lowErr = strconv.ParseFloat(low, 64)
	window.High, highErr = strconv.ParseFloat(high, 64)
	if !ok || lowErr != nil || highErr != nil || lowIsShare != highIsShare || !isFinite(window.Low, window.High) {
		return StressWindow{}, fmt.Errorf("modulus window %q: want two stresses such as 70..210, or shares of the offset yield stress such as 10%%..40%%", text)
	}
	if !(window.Low >= 0 && window.Low < window.High) {
		return StressWindow{}, fmt.Errorf("modulus window %q: must rise from 0 or above", text)
	}
	if window.IsShare {
		window.Low /= 100
		window.High /= 100
	}
	return window, nil
}

// A lineFit is the least-squares line σ = intercept + slope ε through points first to
// last of a test.
type lineFit struct {
	first, last                    int
	slope, intercept               float64
	meanStrain, meanStress, spread float64 // spread = Σ (ε - mean)²
	rSquared                       float64 // 1 - SSE/SST
	variation                      float64 // V1 of the slope, in percent; NaN for two points
	scatter                        float64 // √(SSE/(K - 2)), the points' standard deviation from the line; NaN for two points
}

// fitLine fits stress on strain, with an intercept. Its quality is
//
//	r² = 1 - SSE/SST and V1 = 100 √((1/r² - 1)/(K - 2)) %
//
// for K points: V1 is the standard error of the slope over the slope.
//
// Source: V1 as in ASTM E111 (from memory).
func fitLine(points []CurvePoint, first, last int) lineFit {
	f := lineFit{first: first, last: last}
	count := float64(last - first + 1)
	for _, p := range points[first : last+1] {
		f.meanStrain += p.Strain / count
		f.meanStress += p.Stress / count
	}
	var product, total float64
	for _, p := range points[first : last+1] {
		x, y := p.Strain-f.meanStrain, p.Stress-f.meanStress
		f.spread += float64(x * x)
		product += float64(x * y)
		total += float64(y * y)
	}
	f.slope = product / f.spread
	f.intercept = f.meanStress - float64(f.slope*f.meanStrain)
	residual := 0.0
	for _, p := range points[first : last+1] {
		r := f.residual(p)
		residual += float64(r * r)
	}
	f.rSquared = 1 - residual/total
	f.variation = 100 * math.Sqrt(residual/((total-residual)*(count-2))) // 1/r² - 1 = SSE/(SST - SSE)
	f.scatter = math.Sqrt(residual / (count - 2))
	if last-first < 2 {
		f.variation, f.scatter = math.NaN(), math.NaN()
	}
	return f
}

// residual returns the stress of a point less that of the line.
func (f *lineFit) residual(p CurvePoint) float64 {
	return (p.Stress - f.meanStress) - float64(f.slope*(p.Strain-f.meanStrain))
}

// continues reports whether a point outside the window lies on the line. A line through
// few points foretells others badly: the residual is measured in its own uncertainty,
// √(1 + 1/K + (ε - mean)²/Σ(ε - mean)²), the textbook's error of prediction.
func (f *lineFit) continues(p CurvePoint, points []CurvePoint) bool {
	away := p.Strain - f.meanStrain
	uncertainty := math.Sqrt(1 + 1/float64(f.last-f.first+1) + away*away/f.spread)
	return math.Abs(f.residual(p)) <= uncertainty*straightness*math.Max(p.Stress, points[f.last].Stress)
}

// window returns the numbers of the points from the first with at least the low stress
// to the last before the high stress is passed; last < first when there is none.
func window(points []CurvePoint, low, high float64) (first, last int) {
	// Bounds converted from another unit may be off by rounding.
	low -= 1e-12 * math.Abs(low)
	high += 1e-12 * math.Abs(high)
	ultimate := largestStress(points)
	for first <= ultimate && points[first].Stress < low {
		first++
	}
	last = first - 1
	for last < ultimate && points[last+1].Stress <= high {
		last++
	}
	return first, last
}

// fitWindow fits the modulus in a stated window.
func fitWindow(points []CurvePoint, low, high float64) (lineFit, error) {
	first, last := window(points, low, high)
	if last-first < 1 {
		return lineFit{}, fmt.Errorf("the modulus window from %g to %g holds %d points of the curve, needs at least 2", low, high, last-first+1)
	}
	f := fitLine(points, first, last)
	return f, f.check()
}

// check returns an error where stress does not rise with strain.
func (f *lineFit) check() error {
	if !(f.slope > 0 && !math.IsInf(f.slope, 0)) {
		return fmt.Errorf("the slope of the curve is %g in the modulus window, must be above 0: are the columns exchanged?", f.slope)
	}
	return nil
}

// fitDefault fits the modulus in the default window below a reference stress. A window
// with too few points grows along the curve, from its lower end, as far as the points
// stay on a line; where it holds fewer than two, it starts with the steeper of the two
// segments beside it, since toe and yield both lower the slope.
func fitDefault(points []CurvePoint, reference float64) (lineFit, error) {
	first, last := window(points, windowLow*reference, windowHigh*reference)
	if last <= first {
		last = first + 1
		if first > 0 && (last == len(points) || slope(points, first-1) > slope(points, first)) {
			first, last = first-1, first
		}
	}
	f := fitLine(points, first, last)
	if err := f.check(); err != nil || last-first+1 >= windowPoints {
		return f, err
	}
	ultimate := largestStress(points)
	for f.last < ultimate && f.continues(points[f.last+1], points) {
		f = fitLine(points, f.first, f.last+1)
	}
	for f.first > 0 && f.continues(points[f.first-1], points) {
		f = fitLine(points, f.first-1, f.last)
	}
	return f, f.check()
}

// slope returns the slope of the segment that begins at point i.
func slope(points []CurvePoint, i int) float64 {
	return (points[i+1].Stress - points[i].Stress) / (points[i+1].Strain - points[i].Strain)
}
