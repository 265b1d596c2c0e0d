package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"strainledger/energy"
)

// analysed reads and analyses a file of testdata/curves.
func analysed(t *testing.T, name string, options energy.CurveOptions) *energy.CurveAnalysis {
	t.Helper()
	file, err := os.Open(filepath.Join("..", "testdata", "curves", name))
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	record, err := energy.ReadCurve(file, name, energy.CurveReading{})
	if err != nil {
		t.Fatal(err)
	}
	analysis, err := energy.AnalyseCurve(record, options)
	if err != nil {
		t.Fatal(err)
	}
	return analysis
}

// curves are analyses with and without all that a report can say.
func curves(t *testing.T) map[string]*energy.CurveAnalysis {
	hostile := analysed(t, "m08-toe.csv", energy.CurveOptions{YoungsModulus: 60000, Limit: "tangent-66.6%", Offsets: []float64{0.001}})
	hostile.Source.Path = "a folder/<script>\x1b[31m & \"" + strings.Repeat("long", 60) + ".csv"
	hostile.Units = energy.CurveUnits{}
	hostile.Source.Strain.Heading, hostile.Source.Stress.Unit = "]]>\n<b>", ""
	return map[string]*energy.CurveAnalysis{
		"curve-aluminium":   analysed(t, "m05-aluminium.csv", energy.CurveOptions{}),
		"curve-mild-steel":  analysed(t, "m09-mild-steel.csv", energy.CurveOptions{}),
		"curve-upper-yield": analysed(t, "upper-yield.csv", energy.CurveOptions{}),
		"curve-elastic":     analysed(t, "m07-noisy-modulus.csv", energy.CurveOptions{}),
		"curve-true":        analysed(t, "true-stress.csv", energy.CurveOptions{}),
		"curve-hostile":     hostile,
	}
}

func TestCurveFilesAgainstGolden(t *testing.T) {
	for name, analysis := range curves(t) {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			if err := WriteCurveFiles(dir, analysis); err != nil {
				t.Fatal(err)
			}
			entries, err := os.ReadDir(dir)
			if err != nil || len(entries) != 4 {
				t.Fatalf("%d files, %v", len(entries), err)
			}
			for _, file := range []string{"curve.json", "curve.csv", "curve.svg", "curve.txt"} {
				got, err := os.ReadFile(filepath.Join(dir, file))
				if err != nil {
					t.Fatal(err)
				}
				checkGolden(t, name+strings.TrimPrefix(file, "curve"), got)
			}
		})
	}
}

func TestCurveTextFitsThePage(t *testing.T) {
	for name, analysis := range curves(t) {
		t.Run(name, func(t *testing.T) {
			var plain, coloured strings.Builder
			if err := errors.Join(CurveText(&plain, analysis, TextOptions{}), CurveText(&coloured, analysis, TextOptions{Colour: true})); err != nil {
				t.Fatal(err)
			}
			checkPage(t, plain.String())
			if got := regexp.MustCompile("\x1b\\[[0-9]*m").ReplaceAllString(coloured.String(), ""); got != plain.String() {
				t.Error("without its codes the coloured text is another one")
			}
		})
	}
}

// The JSON holds the numbers of the analysis in full, null for what does not exist.
func TestCurveJSON(t *testing.T) {
	for name, analysis := range curves(t) {
		var text bytes.Buffer
		if err := CurveJSON(&text, analysis); err != nil {
			t.Fatal(err)
		}
		var back energy.CurveAnalysis
		if err := json.Unmarshal(text.Bytes(), &back); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if back.Schema != "strainledger/curve/v1" || back.Modulus.YoungsModulus != analysis.Modulus.YoungsModulus ||
			back.ProportionalLimit.Stress.Exists() != analysis.ProportionalLimit.Stress.Exists() || len(back.Findings) != len(analysis.Findings) {
			t.Errorf("%s: %+v", name, back)
		}
		if strings.Contains(text.String(), "NaN") || strings.Contains(text.String(), "Inf") {
			t.Errorf("%s: a number that is none", name)
		}
	}
}

// The rows of the CSV by M-05 and M-14 (derived).
func TestCurveCSV(t *testing.T) {
	var text bytes.Buffer
	if err := CurveCSV(&text, analysed(t, "m08-toe.csv", energy.CurveOptions{})); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(&text).ReadAll()
	if err != nil || len(rows) != 15 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	if got := strings.Join(rows[0], " "); got != "line strain stress corrected_strain plastic_strain energy_density true_strain true_stress" {
		t.Errorf("heading %q", got)
	}
	if rows[1][5] != "" {
		t.Errorf("the origin of the record lies before the elastic line's, its energy is %q", rows[1][5])
	}
	for _, c := range []struct {
		row, column int
		want        float64
	}{
		{5, 0, 6}, {5, 1, 0.0039}, {5, 2, 240}, {5, 3, 0.0035}, {5, 4, 0.0035 - 240./70000}, {5, 5, 0.315 + 0.1125},
		{5, 6, math.Log(1.0035)}, {5, 7, 240 * 1.0035}, {14, 5, 43.816}, {14, 6, math.Log(1.12)}, {14, 7, 448},
	} {
		got, err := strconv.ParseFloat(rows[c.row][c.column], 64)
		if err != nil || math.Abs(got-c.want) > 1e-11*c.want {
			t.Errorf("%s of row %d is %q, want %.12g", rows[0][c.column], c.row, rows[c.row][c.column], c.want)
		}
	}
	text.Reset()
	if err := CurveCSV(&text, analysed(t, "m09-mild-steel.csv", energy.CurveOptions{})); err != nil {
		t.Fatal(err)
	}
	rows, _ = csv.NewReader(&text).ReadAll()
	if rows[7][6] == "" || rows[8][6] != "" || rows[9][7] != "" {
		t.Errorf("true values at the ultimate stress %q, past it %q and %q: they end with it", rows[7][6], rows[8][6], rows[9][7])
	}
}

// A node is one element of a picture.
type node struct {
	XMLName    xml.Name
	Attributes []xml.Attr `xml:",any,attr"`
	Children   []node     `xml:",any"`
	Text       string     `xml:",chardata"`
}

func (n *node) walk(visit func(*node)) {
	visit(n)
	for i := range n.Children {
		n.Children[i].walk(visit)
	}
}

func picture(t *testing.T, analysis *energy.CurveAnalysis) *node {
	t.Helper()
	var text bytes.Buffer
	if err := CurveSVG(&text, analysis); err != nil {
		t.Fatal(err)
	}
	var root node
	if err := xml.Unmarshal(text.Bytes(), &root); err != nil {
		t.Fatal(err)
	}
	return &root
}

// Nothing in a picture comes from outside, or from the file's own text as markup.
func TestCurveSVGStandsAlone(t *testing.T) {
	for name, analysis := range curves(t) {
		known := map[string]bool{"svg": true, "title": true, "rect": true, "text": true, "tspan": true, "clipPath": true, "path": true, "g": true, "circle": true}
		picture(t, analysis).walk(func(n *node) {
			if !known[n.XMLName.Local] {
				t.Errorf("%s: element %s", name, n.XMLName.Local)
			}
			for _, attribute := range n.Attributes {
				if strings.Contains(attribute.Value, "://") && attribute.Name.Local != "xmlns" || strings.HasPrefix(attribute.Name.Local, "on") || attribute.Name.Local == "href" {
					t.Errorf("%s: attribute %s=%q", name, attribute.Name.Local, attribute.Value)
				}
				if strings.Contains(attribute.Value, "NaN") || strings.Contains(attribute.Value, "Inf") {
					t.Errorf("%s: attribute %s=%q", name, attribute.Name.Local, attribute.Value)
				}
			}
		})
	}
}

// numbersIn returns the numbers of a path.
func numbersIn(t *testing.T, path string) [][2]float64 {
	t.Helper()
	var points [][2]float64
	for _, pair := range regexp.MustCompile(`[ML](-?[0-9.]+) (-?[0-9.]+)`).FindAllStringSubmatch(path, -1) {
		x, xErr := strconv.ParseFloat(pair[1], 64)
		y, yErr := strconv.ParseFloat(pair[2], 64)
		if xErr != nil || yErr != nil {
			t.Fatal(pair)
		}
		points = append(points, [2]float64{x, y})
	}
	return points
}

// enclosed returns the area within a closed path.
func enclosed(points [][2]float64) float64 {
	twice := 0.0
	for i, p := range points {
		q := points[(i+1)%len(points)]
		twice += p[0]*q[1] - q[0]*p[1]
	}
	return math.Abs(twice) / 2
}

// The shaded areas, measured in the picture by its own ticks, are the moduli.
func TestShadedAreasAreTheModuli(t *testing.T) {
	for name, analysis := range curves(t) {
		plot := newCurvePlot(analysis)
		for _, panel := range plot.Panels {
			perStrain := scale(t, panel.Across)
			perStress := -scale(t, panel.Up)
			for what, shaded := range map[string]struct {
				path string
				want energy.Number
			}{"toughness": {panel.Toughness, analysis.Toughness.Area}, "resilience": {panel.Resilience, analysis.Resilience.Area}} {
				if shaded.path == "" {
					continue
				}
				// Coordinates have two decimals, and areas are hundreds of pixels wide.
				got := enclosed(numbersIn(t, shaded.path)) / (perStrain * perStress)
				if math.Abs(got-float64(shaded.want)) > 1e-3*float64(shaded.want) {
					t.Errorf("%s, %s: %s of %g is shaded, want %g", name, panel.Heading, what, got, float64(shaded.want))
				}
			}
		}
		if last := plot.Panels[len(plot.Panels)-1]; plot.Panels[0].Toughness == "" || (last.Resilience == "") == analysis.Resilience.Area.Exists() {
			t.Errorf("%s: toughness %q, resilience %q", name, plot.Panels[0].Toughness, last.Resilience)
		}
	}
}

// scale returns the pixels for one unit of an axis.
func scale(t *testing.T, ticks []plotTick) float64 {
	t.Helper()
	last := ticks[len(ticks)-1]
	value, err := strconv.ParseFloat(last.Text, 64)
	if err != nil || len(ticks) < 3 || ticks[0].Text != "0" {
		t.Fatalf("ticks %v", ticks)
	}
	return (last.At - ticks[0].At) / value
}

// Marks lie where their numbers say, their numbers within the axes and apart.
func TestMarksAreLegible(t *testing.T) {
	for name, analysis := range curves(t) {
		plot := newCurvePlot(analysis)
		seen := map[int]bool{}
		for _, panel := range plot.Panels {
			perStrain, perStress := scale(t, panel.Across), scale(t, panel.Up)
			for i, mark := range panel.Marks {
				seen[mark.Number] = true
				known := shownMarks(analysis)[mark.Number-1]
				x, y := panel.Left+perStrain*float64(known.strain), panel.Bottom()+perStress*float64(known.stress)
				if math.Abs(mark.X-x) > 1e-6 || math.Abs(mark.Y-y) > 1e-6 {
					t.Errorf("%s: mark %d at %g, %g, want %g, %g", name, mark.Number, mark.X, mark.Y, x, y)
				}
				if mark.LabelX < panel.Left || mark.LabelX > panel.Right() || mark.LabelY > panel.Bottom() || mark.LabelY < panel.Top-labelHeight {
					t.Errorf("%s: number %d lies outside the axes", name, mark.Number)
				}
				for _, other := range panel.Marks[:i] {
					if math.Abs(mark.LabelX-other.LabelX) < labelWidth && math.Abs(mark.LabelY-other.LabelY) < labelHeight {
						t.Errorf("%s: numbers %d and %d cover each other", name, mark.Number, other.Number)
					}
				}
			}
		}
		if len(seen) != len(plot.Marks) {
			t.Errorf("%s: %d marks are drawn, the key has %d", name, len(seen), len(plot.Marks))
		}
	}
}

// A long record is drawn with no more points than can be seen.
func TestLongRecordsAreThinned(t *testing.T) {
	var record energy.CurveRecord
	for i := range 200001 {
		strain := 1e-6 * float64(i)
		record.Points = append(record.Points, energy.CurvePoint{Strain: strain, Stress: 400 * (1 - math.Exp(-500*strain))})
		record.Lines = append(record.Lines, i+1)
	}
	analysis, err := energy.AnalyseCurve(&record, energy.CurveOptions{})
	if err != nil {
		t.Fatal(err)
	}
	var text bytes.Buffer
	if err := CurveSVG(&text, analysis); err != nil {
		t.Fatal(err)
	}
	if text.Len() > 100_000 {
		t.Errorf("%d bytes", text.Len())
	}
	panel := newCurvePlot(analysis).Panels[0]
	points := numbersIn(t, panel.Curve)
	last := points[len(points)-1]
	if math.Abs(last[0]-panel.x(0.2)) > 0.01 || math.Abs(last[1]-panel.y(400)) > 0.01 {
		t.Errorf("the drawn curve ends at %v", last)
	}
	for i, p := range points[1:] {
		if math.Hypot(p[0]-points[i][0], p[1]-points[i][1]) > 2 {
			t.Errorf("a gap between %v and %v", points[i], p)
		}
	}
}

// A report that cannot be written says so.
func TestCurveReportsThatCannotBeWritten(t *testing.T) {
	analysis := analysed(t, "m05-aluminium.csv", energy.CurveOptions{})
	for name, write := range map[string]func(io.Writer, *energy.CurveAnalysis) error{
		"JSON": CurveJSON, "CSV": CurveCSV, "SVG": CurveSVG,
		"text": func(w io.Writer, a *energy.CurveAnalysis) error { return CurveText(w, a, TextOptions{}) },
	} {
		reader, writer := io.Pipe()
		reader.Close()
		if err := write(writer, analysis); !errors.Is(err, io.ErrClosedPipe) {
			t.Errorf("%s: error %v", name, err)
		}
	}
	analysis.Toughness.Area = energy.Number(math.Inf(1))
	if err := WriteCurveFiles(t.TempDir(), analysis); err == nil || !strings.Contains(err.Error(), "curve.json") {
		t.Errorf("error %v of an infinite number, want one that names curve.json", err)
	}
}
