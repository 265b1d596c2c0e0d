package energy

import (
	"math"
)

// CurveSchema names the form of a CurveAnalysis.
const CurveSchema = "strainledger/curve/v1"

// CurveOptions says how a test curve is analysed. The zero value of a field is its
// default.
type CurveOptions struct {
	Window        StressWindow // of the modulus fit
	YoungsModulus float64      // stated, in the curve's unit: used in place of the fit's; 0: not stated
	Limit         string       // name of the definition of the proportional limit; "": DefaultLimit
	Offsets       []float64    // plastic strains, as ratios, of further offset yield stresses
}

// A CurveAnalysis is what a test curve says of its material. Strains are ratios as
// measured, the toe included; stresses are in the unit of the curve, energies per
// original volume in the same.
type CurveAnalysis struct {
	Schema             string            `json:"schema"`
	Source             CurveSource       `json:"source"`
	Units              CurveUnits        `json:"units"`
	Modulus            CurveModulus      `json:"modulus"`
	ProportionalLimit  LimitRead         `json:"proportional_limit"` // by the chosen definition
	ProportionalLimits []LimitRead       `json:"proportional_limits"`
	OffsetYields       []OffsetYield     `json:"offset_yields"` // 0.2 % first
	YieldPoint         *YieldPoint       `json:"yield_point"`
	Ultimate           CurvePoint        `json:"ultimate"`
	Last               CurvePoint        `json:"last"` // fracture, where the record goes so far
	Resilience         Resilience        `json:"resilience"`
	Toughness          Toughness         `json:"toughness"`
	RambergOsgood      *RambergOsgoodFit `json:"ramberg_osgood"`
	Findings           []Finding         `json:"findings"`
	Caution            string            `json:"caution"`
	Version            Text              `json:"version"` // of the program

	Points    []CurvePoint `json:"-"` // as measured
	Lines     []int        `json:"-"` // the line of each point in the file
	Corrected *Curve       `json:"-"` // toe-corrected: begins at (0, 0) and follows the fit up to its window

	line elasticLine
}

// CurveSource says what the curve was read from.
type CurveSource struct {
	Path    string     `json:"path"`
	SHA256  Text       `json:"sha256"` // null where the file was not hashed
	Bytes   int64      `json:"bytes"`
	Points  int        `json:"points"`
	Strain  ColumnRead `json:"strain"`
	Stress  ColumnRead `json:"stress"`
	IsTrue  bool       `json:"true"`    // true stress and strain, converted to engineering ones
	Omitted int        `json:"omitted"` // points of a true curve past the ultimate stress
}

// CurveUnits names the units; null where the file and the call do not state them.
type CurveUnits struct {
	Stress        Text `json:"stress"`
	EnergyDensity Text `json:"energy_density"`
}

// CurveModulus is Young's modulus and the quality of its fit.
type CurveModulus struct {
	YoungsModulus Number     `json:"youngs_modulus"` // the one used: stated, else fitted
	Fitted        Number     `json:"fitted"`
	Stated        Number     `json:"stated"`
	Intercept     Number     `json:"intercept"`  // of the fit, at zero strain
	ToeStrain     Number     `json:"toe_strain"` // where the line meets zero stress
	RSquared      Number     `json:"r_squared"`
	Variation     Number     `json:"coefficient_of_variation"` // V1, in percent; null for two points
	Scatter       Number     `json:"scatter"`                  // standard deviation of the points from the line, in stress
	Points        int        `json:"points"`
	From          CurvePoint `json:"from"` // first and last point of the window
	To            CurvePoint `json:"to"`
}

// A LimitRead is a proportional limit by one definition; null where the curve does not
// show it.
type LimitRead struct {
	By      string `json:"by"`
	Meaning string `json:"meaning"`
	Strain  Number `json:"strain"`
	Stress  Number `json:"stress"`
}

// An OffsetYield is the stress at a plastic strain; null where the curve does not reach
// it.
type OffsetYield struct {
	Offset float64 `json:"offset"`
	Strain Number  `json:"strain"`
	Stress Number  `json:"stress"`
}

// Resilience is the modulus of resilience: the energy per volume up to the chosen
// proportional limit.
type Resilience struct {
	Triangle Number `json:"triangle"` // σ²/2E
	Area     Number `json:"area"`     // under the measured curve
}

// Toughness is the modulus of toughness: the energy per volume up to the last point,
// which after necking depends on the gauge length. The estimates are rules of thumb
// (from memory) to check a record by.
type Toughness struct {
	Area            Number `json:"area"`
	Recoverable     Number `json:"recoverable"`      // of it, on unloading from the last point: σ²/2E
	DuctileEstimate Number `json:"ductile_estimate"` // (yield + ultimate)/2 × last strain
	BrittleEstimate Number `json:"brittle_estimate"` // 2/3 ultimate × last strain
}

// AnalyseCurve reads moduli, limits and energies off a test curve. Errors: a
// *StudyError for options that cannot be, a *CurveError for a curve without an elastic
// line.
func AnalyseCurve(test *CurveRecord, options CurveOptions) (*CurveAnalysis, error) {
	limit, err := options.check()
	if err != nil {
		return nil, err
	}
	a := &CurveAnalysis{
		Schema: CurveSchema, Caution: Caution,
		Source: CurveSource{Path: test.Path, Points: len(test.Points), Strain: test.Strain, Stress: test.Stress, IsTrue: test.IsTrue, Omitted: test.Omitted},
		Units:  CurveUnits{Stress: Text(test.StressUnit), EnergyDensity: Text(densityNames[test.StressUnit])},
		Points: test.Points, Lines: test.Lines, Last: test.Points[len(test.Points)-1],
	}
	fit, err := fitModulus(test.Points, &options)
	if err != nil {
		return nil, &CurveError{Path: test.Path, Err: err}
	}
	a.setModulus(&fit, options.YoungsModulus)
	if a.Corrected, err = a.correct(); err != nil {
		return nil, &CurveError{Path: test.Path, Err: err}
	}
	a.readLimits(limit, options.Offsets)
	a.readEnergies()
	a.find(options.Window)
	return a, nil
}

// check returns the definition of the limit, or what of the options cannot be.
func (o *CurveOptions) check() (LimitDefinition, error) {
	name := o.Limit
	if name == "" {
		name = DefaultLimit
	}
	limit, err := ParseLimit(name)
	if err != nil {
		return limit, &StudyError{err}
	}
	if !(o.YoungsModulus >= 0) || math.IsInf(o.YoungsModulus, 0) {
		return limit, studyError("Young's modulus is %g, must be above 0", o.YoungsModulus)
	}
	for _, offset := range o.Offsets {
		if !(offset > 0 && offset < 1) {
			return limit, studyError("offset %g %%: must lie between 0 and 100 %%", 100*offset)
		}
	}
	return limit, nil
}

// fitModulus fits the modulus in the stated window, or in the default one.
func fitModulus(points []CurvePoint, options *CurveOptions) (lineFit, error) {
	w := options.Window
	if w != (StressWindow{}) && !w.IsShare {
		return fitWindow(points, w.Low, w.High)
	}
	fit, reference, err := fitByRepetition(points, options.YoungsModulus)
	if err == nil && w.IsShare {
		return fitWindow(points, w.Low*reference, w.High*reference)
	}
	return fit, err
}

// fitByRepetition fits the modulus in the default window, which is a share of the
// offset yield stress, which hangs on the modulus: from the stress at a strain of 0.2 %,
// which is no higher, until it settles. The offset yield stress comes with it; the
// largest stress where the curve does not reach it.
func fitByRepetition(points []CurvePoint, stated float64) (fit lineFit, reference float64, err error) {
	largest := points[largestStress(points)].Stress
	reference = largest
	for _, p := range points {
		if p.Strain >= points[0].Strain+offsetStrain {
			reference = p.Stress
			break
		}
	}
	for range 50 { // a few are enough; on a noisy record it may go to and fro
		if fit, err = fitDefault(points, reference); err != nil {
			return fit, reference, err
		}
		line, next := fit.line(stated), largest
		if yield, ok := line.meet(points, line.modulus, line.origin+offsetStrain); ok {
			next = yield.Stress
		}
		if next == reference {
			break
		}
		reference = next
	}
	return fit, reference, nil
}

// line returns the elastic line of a fit: through the fit's mean with the stated
// modulus, where there is one.
func (f *lineFit) line(stated float64) elasticLine {
	modulus := f.slope
	if stated > 0 {
		modulus = stated
	}
	return elasticLine{modulus, f.meanStrain - f.meanStress/modulus, f.first, f.last}
}

func (a *CurveAnalysis) setModulus(fit *lineFit, stated float64) {
	a.line = fit.line(stated)
	a.Modulus = CurveModulus{
		YoungsModulus: Number(a.line.modulus), Fitted: Number(fit.slope), Stated: None,
		Intercept: Number(fit.intercept), ToeStrain: Number(a.line.origin), RSquared: Number(fit.rSquared), Variation: Number(fit.variation), Scatter: Number(fit.scatter),
		Points: fit.last - fit.first + 1, From: a.Points[fit.first], To: a.Points[fit.last],
	}
	if stated > 0 {
		a.Modulus.Stated = Number(stated)
	}
}

// correct returns the toe-corrected curve: strain from the elastic line's origin, and
// the line itself in place of what lies before its window.
func (a *CurveAnalysis) correct() (*Curve, error) {
	points := []CurvePoint{{}}
	for _, p := range a.Points[a.line.first:] {
		if p.Strain -= a.line.origin; p.Strain > 0 {
			points = append(points, p)
		}
	}
	return NewCurve(points)
}

// readLimits reads the stresses off the curve.
func (a *CurveAnalysis) readLimits(limit LimitDefinition, offsets []float64) {
	a.ProportionalLimit = a.readLimit(limit)
	isListed := false
	for _, name := range publishedLimits {
		definition, err := ParseLimit(name)
		if err != nil {
			panic(err) // a mistake in the table
		}
		a.ProportionalLimits = append(a.ProportionalLimits, a.readLimit(definition))
		isListed = isListed || definition == limit
	}
	if !isListed {
		a.ProportionalLimits = append(a.ProportionalLimits, a.ProportionalLimit)
	}
	for _, offset := range append([]float64{offsetStrain}, offsets...) {
		yield := OffsetYield{Offset: offset, Strain: None, Stress: None}
		if p, ok := a.line.meet(a.Points, a.line.modulus, a.line.origin+offset); ok {
			yield.Strain, yield.Stress = Number(p.Strain), Number(p.Stress)
		}
		a.OffsetYields = append(a.OffsetYields, yield)
	}
	a.YieldPoint = a.line.yieldPoint(a.Points)
	a.Ultimate = a.Points[ultimate(a.Points, a.YieldPoint)]
	a.RambergOsgood = a.fitRambergOsgood()
}

func (a *CurveAnalysis) readLimit(definition LimitDefinition) LimitRead {
	read := LimitRead{By: definition.String(), Meaning: definition.Meaning(), Strain: None, Stress: None}
	if p, ok := a.line.limit(a.Points, definition); ok {
		read.Strain, read.Stress = Number(p.Strain), Number(p.Stress)
	}
	return read
}

// readEnergies reads the energies off the corrected curve.
func (a *CurveAnalysis) readEnergies() {
	modulus, origin := a.line.modulus, a.line.origin
	limit := a.ProportionalLimit
	a.Resilience = Resilience{
		Triangle: Number(ModulusOfResilience(float64(limit.Stress), modulus)),
		Area:     Number(a.Corrected.Area(float64(limit.Strain) - origin)),
	}
	last := a.Corrected.Last()
	a.Toughness = Toughness{
		Area:            Number(a.Corrected.Area(last.Strain)),
		Recoverable:     Number(ModulusOfResilience(last.Stress, modulus)),
		DuctileEstimate: (a.OffsetYields[0].Stress + Number(a.Ultimate.Stress)) / 2 * Number(last.Strain),
		BrittleEstimate: Number(2. / 3 * a.Ultimate.Stress * last.Strain),
	}
}

// LawCurve returns the curve as a law of the material uses it: the elastic line up to
// the proportional limit, there the plastic strain that the limit's definition allows,
// at constant stress, and then the measured points, all without the toe. Without a
// proportional limit it is the elastic line as far as the record goes.
func (a *CurveAnalysis) LawCurve() (*Curve, error) {
	points := []CurvePoint{{}}
	add := func(p CurvePoint) {
		if p.Strain > points[len(points)-1].Strain {
			points = append(points, p)
		}
	}
	limit := a.ProportionalLimit
	if !limit.Stress.Exists() {
		last := a.Corrected.Last()
		add(CurvePoint{last.Strain, a.line.modulus * last.Strain})
		return NewCurve(points)
	}
	add(CurvePoint{float64(limit.Stress) / a.line.modulus, float64(limit.Stress)})
	knee := CurvePoint{float64(limit.Strain) - a.line.origin, float64(limit.Stress)}
	add(knee)
	for i := range a.Corrected.Len() {
		if p := a.Corrected.Point(i); p.Strain > knee.Strain {
			add(p)
		}
	}
	return NewCurve(points)
}

// A CurveRow is one point of the record with what belongs to it. Past the ultimate
// stress there are no true values, before the elastic line's origin is no energy.
type CurveRow struct {
	Line            int64  `json:"line"` // of the file
	Strain          Number `json:"strain"`
	Stress          Number `json:"stress"`
	CorrectedStrain Number `json:"corrected_strain"` // from the elastic line's origin
	PlasticStrain   Number `json:"plastic_strain"`
	EnergyDensity   Number `json:"energy_density"` // under the corrected curve
	TrueStrain      Number `json:"true_strain"`
	TrueStress      Number `json:"true_stress"`
}

// Rows returns the record point by point.
func (a *CurveAnalysis) Rows() []CurveRow {
	rows := make([]CurveRow, len(a.Points))
	for i, p := range a.Points {
		corrected := CurvePoint{p.Strain - a.line.origin, p.Stress}
		rows[i] = CurveRow{
			Line: int64(a.Lines[i]), Strain: Number(p.Strain), Stress: Number(p.Stress),
			CorrectedStrain: Number(corrected.Strain), PlasticStrain: Number(a.plasticStrain(p)),
			EnergyDensity: Number(a.Corrected.Area(corrected.Strain)), TrueStrain: None, TrueStress: None,
		}
		if p.Strain <= a.Ultimate.Strain {
			truth := corrected.True()
			rows[i].TrueStrain, rows[i].TrueStress = Number(truth.Strain), Number(truth.Stress)
		}
	}
	return rows
}
