package report

import (
	"fmt"
	"io"
	"strings"

	"strainledger/energy"
)

// CurveJSON writes the analysis of a test curve in the form of [JSON].
func CurveJSON(w io.Writer, analysis *energy.CurveAnalysis) error { return writeJSON(w, analysis) }

// CurveCSV writes the points of a test curve with what belongs to each, in the form of
// the ledger's tables: strain as a ratio, stress and energy per volume in the unit of
// stress.
func CurveCSV(w io.Writer, analysis *energy.CurveAnalysis) error {
	return writeRows(w, analysis.Rows())
}

// WriteCurveFiles writes the analysis of a test curve to the folder in every form:
// curve.json, curve.csv, curve.svg and curve.txt, as [WriteFiles] writes a ledger.
func WriteCurveFiles(dir string, analysis *energy.CurveAnalysis) error {
	of := func(write func(io.Writer, *energy.CurveAnalysis) error) func(io.Writer) error {
		return func(w io.Writer) error { return write(w, analysis) }
	}
	return writeFiles(dir, []reportFile{
		{"curve.json", of(CurveJSON)},
		{"curve.csv", of(CurveCSV)},
		{"curve.svg", of(CurveSVG)},
		{"curve.txt", func(w io.Writer) error { return CurveText(w, analysis, TextOptions{}) }},
	})
}

// CurveText writes the analysis of a test curve for people, at most 100 columns wide.
func CurveText(w io.Writer, analysis *energy.CurveAnalysis, options TextOptions) error {
	page := textPage{colour: options.Colour}
	page.wrapped("Stress-strain curve "+analysis.Source.Path, "", bold)
	for _, s := range []section{
		curveSourceSection(analysis), curveModulusSection(analysis), curveStressSection(analysis), curveEnergySection(analysis),
		curveLimitsSection(analysis), rambergOsgoodSection(analysis.RambergOsgood),
		findingsSection(analysis.Findings, &energy.UnitLabels{}),
	} {
		page.section(&s)
	}
	page.line("")
	page.wrapped(analysis.Caution, "", "")
	_, err := io.WriteString(w, page.text.String())
	return err
}

// stressOf and densityOf head the columns of a curve's stresses and energies.
func stressOf(analysis *energy.CurveAnalysis, heading string) column {
	return column{kind: number, heading: heading, unit: stated(analysis.Units.Stress)}
}

func densityOf(analysis *energy.CurveAnalysis, heading string) column {
	return column{kind: number, heading: heading, unit: unitSigns.Replace(stated(analysis.Units.EnergyDensity))}
}

func curveSourceSection(analysis *energy.CurveAnalysis) section {
	source := &analysis.Source
	t := &table{columns: []column{{kind: word}, {kind: prose}}}
	t.add("points", grouped(energy.Number(source.Points)))
	t.add("strain", columnWords(&source.Strain))
	t.add("stress", columnWords(&source.Stress))
	kind := "engineering"
	if source.IsTrue {
		kind = "true, converted to engineering"
	}
	t.add("kind", kind)
	return newSection("How it was read", t)
}

// columnWords says what a column was taken for and why.
func columnWords(read *energy.ColumnRead) string {
	words := fmt.Sprintf("column %d", read.Column)
	if read.Heading != "" {
		words += fmt.Sprintf(" %q", string(read.Heading))
	}
	if read.Unit == "" {
		return words + ", of a unit that nobody states"
	}
	words += ", " + string(read.Unit)
	switch read.DecidedBy {
	case "file":
		return words + " as the file says"
	case "call":
		return words + " as the call says"
	}
	return words + " by default"
}

func curveModulusSection(analysis *energy.CurveAnalysis) section {
	m := &analysis.Modulus
	t := &table{columns: []column{{kind: word}, {kind: number}, {kind: word}, {kind: prose}}}
	unit := unitIfStated(analysis.Units.Stress)
	window := fmt.Sprintf("fitted to %d points from %s to %s %s", m.Points, brief(energy.Number(m.From.Stress)), brief(energy.Number(m.To.Stress)), unit)
	if m.Stated.Exists() {
		t.add("Young's modulus", brief(m.YoungsModulus), unit, "as stated")
		t.add("fitted modulus", brief(m.Fitted), unit, window)
	} else {
		t.add("Young's modulus", brief(m.YoungsModulus), unit, window)
	}
	t.add("r²", ratio(m.RSquared), "", "of the fit")
	t.add("V1", brief(unlessRounding(m.Variation, roundingVariation)), "%", "coefficient of variation of the slope")
	t.add("origin", brief(unlessRounding(m.ToeStrain, roundingStrain)), "", "strain at which the elastic line meets zero stress")
	return newSection("Elastic line", t)
}

// unitIfStated returns the label as people write it, "" where nobody states it.
func unitIfStated(label energy.Text) string { return unitSigns.Replace(string(label)) }

func curveStressSection(analysis *energy.CurveAnalysis) section {
	t := &table{columns: []column{{kind: word}, stressOf(analysis, "stress"), {kind: number, heading: "strain"}, {kind: prose, heading: "read"}}}
	for _, mark := range curveMarks(analysis) {
		t.add(mark.name, brief(mark.stress), brief(mark.strain), mark.how)
	}
	s := newSection("Stresses", t)
	if yield := analysis.YieldPoint; yield != nil && yield.PlateauEnd.Exists() {
		s.note(fmt.Sprintf("The yield plateau ends at a strain of %s.", brief(yield.PlateauEnd)))
	}
	return s
}

// A curveMark is a point of the curve that has a name.
type curveMark struct {
	name, how      string
	strain, stress energy.Number
	isElastic      bool // it belongs to the picture's elastic range
}

// curveMarks returns the marked points, those that do not exist included.
func curveMarks(analysis *energy.CurveAnalysis) []curveMark {
	limit := analysis.ProportionalLimit
	marks := []curveMark{{"proportional limit", "by " + limit.By + ": " + limit.Meaning, limit.Strain, limit.Stress, true}}
	for _, yield := range analysis.OffsetYields {
		marks = append(marks, curveMark{fmt.Sprintf("offset yield %s %%", plain(energy.Number(100*yield.Offset))), "", yield.Strain, yield.Stress, true})
	}
	if yield := analysis.YieldPoint; yield != nil {
		if yield.Upper != nil {
			marks = append(marks, pointMark("upper yield", "first local maximum", *yield.Upper, true))
		}
		marks = append(marks, pointMark("lower yield", "least stress of the plateau", yield.Lower, false))
	}
	return append(marks, pointMark("ultimate", "largest engineering stress", analysis.Ultimate, false), pointMark("last point", "", analysis.Last, false))
}

func pointMark(name, how string, p energy.CurvePoint, isElastic bool) curveMark {
	return curveMark{name, how, energy.Number(p.Strain), energy.Number(p.Stress), isElastic}
}

func curveEnergySection(analysis *energy.CurveAnalysis) section {
	t := &table{columns: []column{{kind: word}, densityOf(analysis, "energy per volume"), {kind: prose, heading: "how"}}}
	resilience, toughness := &analysis.Resilience, &analysis.Toughness
	t.add("modulus of resilience", brief(resilience.Triangle), "σ²/2E at the proportional limit")
	t.add("", brief(resilience.Area), "under the measured curve up to the limit")
	t.add("modulus of toughness", brief(toughness.Area), "under the measured curve up to its last point")
	t.add("", brief(toughness.Recoverable), "of it recoverable on unloading from there")
	t.add("rules of thumb", brief(toughness.DuctileEstimate), "ductile: mean of yield and ultimate stress, times last strain")
	t.add("", brief(toughness.BrittleEstimate), "brittle: 2/3 of ultimate stress, times last strain")
	return newSection("Energy", t)
}

func curveLimitsSection(analysis *energy.CurveAnalysis) section {
	t := &table{columns: []column{{kind: word, heading: "definition"}, stressOf(analysis, "stress"), {kind: number, heading: "strain"}, {kind: prose, heading: "meaning"}}}
	for _, limit := range analysis.ProportionalLimits {
		t.add(limit.By, brief(limit.Stress), brief(limit.Strain), limit.Meaning)
	}
	return newSection("Proportional limit by each definition", t)
}

func rambergOsgoodSection(fit *energy.RambergOsgoodFit) section {
	const heading = "Ramberg-Osgood law, e = s/E + 0.002 (s/s02)^n"
	if fit == nil {
		return sentenceSection(heading, "Not fitted.")
	}
	t := &table{columns: []column{{kind: word}, {kind: number}, {kind: prose}}}
	t.add("n, fitted", brief(energy.Number(fit.Exponent)), fmt.Sprintf("fitted to %d points from %s to %s, where it holds", fit.Points,
		brief(energy.Number(fit.From.Stress)), brief(energy.Number(fit.To.Stress))))
	t.add("r²", ratio(fit.RSquared), "of the fit, in logarithms")
	t.add("worst", percent(fit.WorstDeviation)+" %", "deviation of its strain within the range")
	t.add("n, two points", brief(fit.ExponentToUltimate), "from offset yield and ultimate alone")
	t.add("n, secants", brief(fit.ExponentOfSecants), "of the form e = s/E (1 + 3/7 (s/s07)^(n-1)), from the secants 0.7 E and 0.85 E")
	return newSection(heading, t)
}

// curveName returns the name of the curve's file without its folder.
func curveName(analysis *energy.CurveAnalysis) string {
	path := analysis.Source.Path
	return printable(path[strings.LastIndexAny(path, `/\`)+1:])
}

// roundingStrain and roundingVariation bound what the rounding of sums leaves of an
// origin and of a coefficient of variation that are 0.
const (
	roundingStrain    = 1e-15
	roundingVariation = 1e-10
)

// unlessRounding returns 0 for what is no more than rounding.
func unlessRounding(n energy.Number, bound energy.Number) energy.Number {
	if n > -bound && n < bound {
		return 0
	}
	return n
}
