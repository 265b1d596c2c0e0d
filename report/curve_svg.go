package report

import (
	"fmt"
	"html/template"
	"io"
	"math"
	"strconv"
	"strings"

	"strainledger/energy"
)

// The picture of a curve, in pixels.
const (
	plotWidth   = 1000
	plotHeight  = 380 // of the axes
	plotTop     = 70
	plotLeft    = 70
	plotGap     = 90  // between two panels
	plotRight   = 20  // of the picture's width
	plotKeyTop  = 60  // from the axes to the key
	plotKeyLine = 22  // from line to line of the key
	plotStep    = 0.5 // shorter steps of the curve are not drawn
	plotTicks   = 7   // so many at most on an axis, beside the zero
	labelWidth  = 12  // of a mark's number
	labelHeight = 14
	titleRunes  = 60
)

// CurveSVG draws the test curve as one picture without outside parts: as a whole with
// the modulus of toughness shaded, and its elastic range with the modulus of resilience,
// the elastic line, the 0.2 % offset line and the marked points, which a key explains.
func CurveSVG(w io.Writer, analysis *energy.CurveAnalysis) error {
	return curvePicture.Execute(w, newCurvePlot(analysis))
}

// A curvePlot is what the template draws.
type curvePlot struct {
	Width, Height     int
	Title, Caution    string
	StrainAxis        string
	StressAxis        string
	Panels            []*plotPanel
	Swatches          []plotSwatch
	Marks             []plotKey
	KeyTop, CautionAt int
}

// A plotPanel is one pair of axes with what they show.
type plotPanel struct {
	Heading                        string
	Number                         int
	Left, Top, Width, Height       float64
	Toughness, Resilience          string // closed paths; "" none
	Curve, ElasticLine, OffsetLine string // open paths
	Across, Up                     []plotTick
	Marks                          []plotMark
	strainEnd, stressEnd           float64
}

type plotTick struct {
	At   float64
	Text string
}

// A plotMark is a numbered point and the place of its number.
type plotMark struct {
	Number         int
	X, Y           float64
	LabelX, LabelY float64
}

type plotSwatch struct {
	Class, Text string
	IsArea      bool
	X, Y        int
}

type plotKey struct {
	Number int
	Text   string
	X, Y   int
}

func newCurvePlot(analysis *energy.CurveAnalysis) *curvePlot {
	plot := &curvePlot{
		Width: plotWidth, Title: "Stress-strain curve " + shorten(curveName(analysis), titleRunes), Caution: analysis.Caution,
		StrainAxis: "strain", StressAxis: "stress", KeyTop: plotTop + plotHeight + plotKeyTop,
	}
	if unit := unitIfStated(analysis.Units.Stress); unit != "" {
		plot.StressAxis = "stress, " + unit
	}
	last, elastic := analysis.Last.Strain, elasticRange(analysis)
	if elastic > last/1.5 {
		plot.Panels = []*plotPanel{newPanel(analysis, "Whole record", last, plotWidth-plotLeft-plotRight)}
	} else {
		half := float64(plotWidth-plotLeft-plotRight-plotGap) / 2
		plot.Panels = []*plotPanel{newPanel(analysis, "Whole record", last, half), newPanel(analysis, "Elastic range", elastic, half)}
		plot.Panels[1].Left += half + plotGap
	}
	for i, panel := range plot.Panels {
		panel.Number = i
		panel.draw(analysis, i == len(plot.Panels)-1)
	}
	plot.addKey(analysis)
	return plot
}

// elasticRange returns the strain up to which the elastic range is drawn.
func elasticRange(analysis *energy.CurveAnalysis) float64 {
	end := 1.3 * analysis.Modulus.To.Strain
	for _, mark := range curveMarks(analysis) {
		if mark.isElastic && mark.strain.Exists() {
			end = max(end, 1.15*float64(mark.strain))
		}
	}
	return end
}

// newPanel returns axes that begin at zero and end a little past what they show.
func newPanel(analysis *energy.CurveAnalysis, heading string, strain, width float64) *plotPanel {
	highest := 0.0
	for _, p := range analysis.Points {
		if p.Strain <= strain || highest == 0 {
			highest = max(highest, p.Stress)
		}
	}
	return &plotPanel{
		Heading: heading, Left: plotLeft, Top: plotTop, Width: width, Height: plotHeight,
		strainEnd: 1.04 * strain, stressEnd: 1.12 * highest,
	}
}

func (p *plotPanel) x(strain float64) float64 { return p.Left + p.Width*strain/p.strainEnd }
func (p *plotPanel) y(stress float64) float64 { return p.Top + p.Height*(1-stress/p.stressEnd) }

// Right and Bottom are the ends of the axes.
func (p *plotPanel) Right() float64  { return p.Left + p.Width }
func (p *plotPanel) Bottom() float64 { return p.Top + p.Height }

// ticks returns round numbers from 0 to an end: steps of 1, 2 or 5 times a power of ten.
func ticks(end float64, place func(float64) float64) []plotTick {
	step := math.Pow(10, math.Floor(math.Log10(end/plotTicks)))
	for _, factor := range []float64{1, 2, 5, 10} {
		if end/(factor*step) <= plotTicks {
			step *= factor
			break
		}
	}
	var list []plotTick
	for i := 0; float64(i)*step <= end; i++ {
		value := float64(i) * step
		list = append(list, plotTick{place(value), tickText(value)})
	}
	return list
}

// tickText returns a round number without the digits that its rounding leaves.
func tickText(value float64) string {
	text := strconv.FormatFloat(value, 'g', 6, 64)
	if round, err := strconv.ParseFloat(text, 64); err == nil && (round == 0 || round >= 1e-5 && round < 1e6) {
		return strconv.FormatFloat(round, 'f', -1, 64)
	}
	return text
}

// draw lays out the panel: toughness and the points past the elastic range in the whole,
// the rest where there is room for it.
func (p *plotPanel) draw(analysis *energy.CurveAnalysis, isElastic bool) {
	p.Across, p.Up = ticks(p.strainEnd, p.x), ticks(p.stressEnd, p.y)
	var curve []energy.CurvePoint
	for i, point := range analysis.Points {
		curve = append(curve, point)
		if i > 0 && point.Strain > p.strainEnd {
			break
		}
	}
	p.Curve = p.path(curve)
	if p.Number == 0 {
		p.Toughness = p.area(analysis, analysis.Last.Strain)
	}
	if isElastic {
		origin, modulus := float64(analysis.Modulus.ToeStrain), float64(analysis.Modulus.YoungsModulus)
		if limit := analysis.ProportionalLimit; limit.Stress.Exists() {
			p.Resilience = p.area(analysis, float64(limit.Strain))
		}
		line := func(from float64) string {
			return p.path([]energy.CurvePoint{{Strain: from}, {Strain: from + p.stressEnd/modulus, Stress: p.stressEnd}})
		}
		p.ElasticLine, p.OffsetLine = line(origin), line(origin+analysis.OffsetYields[0].Offset)
	}
	p.mark(analysis, isElastic)
}

// path returns the path through points; steps too short to be seen are left out.
func (p *plotPanel) path(points []energy.CurvePoint) string {
	var path strings.Builder
	lastX, lastY := math.Inf(-1), math.Inf(-1)
	for i, point := range points {
		x, y := p.x(point.Strain), p.y(point.Stress)
		if i > 0 && i < len(points)-1 && math.Abs(x-lastX) < plotStep && math.Abs(y-lastY) < plotStep {
			continue
		}
		command := "L"
		if path.Len() == 0 {
			command = "M"
		}
		fmt.Fprintf(&path, "%s%.2f %.2f", command, x, y)
		lastX, lastY = x, y
	}
	return path.String()
}

// area returns the closed path under the corrected curve up to a measured strain.
func (p *plotPanel) area(analysis *energy.CurveAnalysis, end float64) string {
	origin := float64(analysis.Modulus.ToeStrain)
	curve := analysis.Corrected
	var points []energy.CurvePoint
	for i := range curve.Len() {
		point := curve.Point(i)
		point.Strain += origin
		if point.Strain >= end {
			break
		}
		points = append(points, point)
	}
	points = append(points,
		energy.CurvePoint{Strain: end, Stress: curve.Stress(min(end-origin, curve.Last().Strain))}, energy.CurvePoint{Strain: end})
	return p.path(points) + "Z"
}

// mark puts the numbered points into the panel, each number where it covers none
// before it.
func (p *plotPanel) mark(analysis *energy.CurveAnalysis, isElastic bool) {
	for i, mark := range shownMarks(analysis) {
		if mark.isElastic && !isElastic || !mark.isElastic && p.Number > 0 {
			continue
		}
		m := plotMark{Number: i + 1, X: p.x(float64(mark.strain)), Y: p.y(float64(mark.stress))}
		for _, place := range [][2]float64{{10, 18}, {-10, -10}, {12, -6}, {-14, 18}, {24, 18}, {-24, -10}, {26, -6}, {-28, 18}} {
			m.LabelX, m.LabelY = m.X+place[0], m.Y+place[1]
			if p.isFree(&m) {
				break
			}
		}
		p.Marks = append(p.Marks, m)
	}
}

func (p *plotPanel) isFree(m *plotMark) bool {
	if m.LabelX < p.Left+labelWidth || m.LabelX > p.Right()-labelWidth || m.LabelY > p.Bottom()-2 {
		return false
	}
	for _, other := range p.Marks {
		if math.Abs(m.LabelX-other.LabelX) < labelWidth && math.Abs(m.LabelY-other.LabelY) < labelHeight ||
			math.Abs(m.LabelX-other.X) < labelWidth && math.Abs(m.LabelY-labelHeight/3-other.Y) < labelHeight {
			return false
		}
	}
	return true
}

// shownMarks returns the marked points that exist.
func shownMarks(analysis *energy.CurveAnalysis) []curveMark {
	var marks []curveMark
	for _, mark := range curveMarks(analysis) {
		if mark.stress.Exists() {
			marks = append(marks, mark)
		}
	}
	return marks
}

// addKey explains lines, areas and numbers below the axes.
func (p *curvePlot) addKey(analysis *energy.CurveAnalysis) {
	stress, density := unitIfStated(analysis.Units.Stress), unitIfStated(analysis.Units.EnergyDensity)
	swatch := func(class, text string, isArea bool) {
		p.Swatches = append(p.Swatches, plotSwatch{class, text, isArea, plotLeft, p.KeyTop + plotKeyLine*len(p.Swatches)})
	}
	swatch("curve", "measured, engineering stress and strain", false)
	swatch("elastic", strings.TrimSpace("elastic line, E = "+brief(analysis.Modulus.YoungsModulus)+" "+stress), false)
	swatch("offset", "the same offset by a plastic strain of 0.2 %", false)
	if area := analysis.Resilience.Area; area.Exists() {
		swatch("resilience", strings.TrimSpace("modulus of resilience, "+brief(area)+" "+density), true)
	}
	swatch("toughness", strings.TrimSpace("modulus of toughness, "+brief(analysis.Toughness.Area)+" "+density), true)
	for i, mark := range shownMarks(analysis) {
		text := fmt.Sprintf("%s, %s at strain %s", mark.name, strings.TrimSpace(brief(mark.stress)+" "+stress), brief(mark.strain))
		if mark.name == "proportional limit" {
			text = strings.Replace(text, ",", " by "+analysis.ProportionalLimit.By+",", 1)
		}
		p.Marks = append(p.Marks, plotKey{i + 1, text, plotWidth * 45 / 100, p.KeyTop + plotKeyLine*i})
	}
	p.CautionAt = p.KeyTop + plotKeyLine*max(len(p.Swatches), len(p.Marks)) + plotKeyLine/2
	p.Height = p.CautionAt + plotKeyLine
}

var curvePicture = template.Must(template.New("curve").Funcs(template.FuncMap{
	"add":  func(a, b float64) float64 { return a + b },
	"px":   func(x float64) string { return strconv.FormatFloat(x, 'f', 2, 64) },
	"half": func(a, b float64) float64 { return (a + b) / 2 },
}).Parse(`<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {{.Width}} {{.Height}}" width="{{.Width}}" height="{{.Height}}" role="img" font-family="sans-serif" font-size="13" fill="#222">
<title>{{.Title}}</title>
<rect width="100%" height="100%" fill="#fff"/>
<text x="20" y="30" font-size="18" font-weight="bold">{{.Title}}</text>
{{- range .Panels}}
<clipPath id="axes{{.Number}}"><rect x="{{px .Left}}" y="{{px .Top}}" width="{{px .Width}}" height="{{px .Height}}"/></clipPath>
<text x="{{px .Left}}" y="{{px (add .Top -12)}}" font-weight="bold">{{.Heading}}</text>
{{- $p := .}}
{{- range .Across}}
<path d="M{{px .At}} {{px $p.Top}}V{{px $p.Bottom}}" stroke="#e3e3e3"/>
<text x="{{px .At}}" y="{{px (add $p.Bottom 18)}}" text-anchor="middle">{{.Text}}</text>
{{- end}}
{{- range .Up}}
<path d="M{{px $p.Left}} {{px .At}}H{{px $p.Right}}" stroke="#e3e3e3"/>
<text x="{{px (add $p.Left -8)}}" y="{{px (add .At 4)}}" text-anchor="end">{{.Text}}</text>
{{- end}}
<text x="{{px (half .Left .Right)}}" y="{{px (add .Bottom 38)}}" text-anchor="middle">{{$.StrainAxis}}</text>
<text transform="translate({{px (add .Left -54)}} {{px (half .Top .Bottom)}}) rotate(-90)" text-anchor="middle">{{$.StressAxis}}</text>
<g clip-path="url(#axes{{.Number}})" fill="none">
{{- if .Toughness}}
<path d="{{.Toughness}}" fill="#d6e4f2"/>
{{- end}}
{{- if .Resilience}}
<path d="{{.Resilience}}" fill="#f3b37a"/>
{{- end}}
{{- if .ElasticLine}}
<path d="{{.ElasticLine}}" stroke="#a34400" stroke-width="1.5" stroke-dasharray="7 4"/>
<path d="{{.OffsetLine}}" stroke="#a34400" stroke-width="1.5" stroke-dasharray="2 4"/>
{{- end}}
<path d="{{.Curve}}" stroke="#123f7a" stroke-width="2" stroke-linejoin="round"/>
</g>
<path d="M{{px .Left}} {{px .Top}}V{{px .Bottom}}H{{px .Right}}" fill="none" stroke="#222"/>
{{- range .Marks}}
<circle cx="{{px .X}}" cy="{{px .Y}}" r="4" fill="#fff" stroke="#222" stroke-width="1.5"/>
<text x="{{px .LabelX}}" y="{{px .LabelY}}" text-anchor="middle" font-weight="bold" stroke="#fff" stroke-width="3" paint-order="stroke">{{.Number}}</text>
{{- end}}
{{- end}}
{{- range .Swatches}}
{{- if .IsArea}}
<rect x="{{.X}}" y="{{.Y}}" width="28" height="12" transform="translate(0 -11)" {{if eq .Class "resilience"}}fill="#f3b37a"{{else}}fill="#d6e4f2"{{end}}/>
{{- else}}
<path d="M{{.X}} {{.Y}}h28" transform="translate(0 -5)" fill="none" {{if eq .Class "curve"}}stroke="#123f7a" stroke-width="2"{{else if eq .Class "elastic"}}stroke="#a34400" stroke-width="1.5" stroke-dasharray="7 4"{{else}}stroke="#a34400" stroke-width="1.5" stroke-dasharray="2 4"{{end}}/>
{{- end}}
<text x="{{.X}}" y="{{.Y}}" dx="38">{{.Text}}</text>
{{- end}}
{{- range .Marks}}
<text x="{{.X}}" y="{{.Y}}"><tspan font-weight="bold">{{.Number}}</tspan> {{.Text}}</text>
{{- end}}
<text x="20" y="{{.CautionAt}}" font-size="12">{{.Caution}}</text>
</svg>
`))
