package report

import (
	"encoding/json"
	"strings"
	"testing"
	"unicode/utf8"

	"strainledger/energy"
)

// inspected has a file whose values were read and one of which only the headers were.
func inspected() *energy.Inspection {
	none := energy.None
	return &energy.Inspection{
		Schema: energy.InspectionSchema,
		Files: []energy.InspectedFile{
			{
				Path: "bracket-r2.vtu", Format: "VTK XML unstructured grid", Points: 1034, Cells: 3769,
				CellsByType: []energy.InspectedType{{Type: 5, Name: "triangle", Cells: 12}, {Type: 10, Name: "tetrahedron", Cells: 3757}},
				Bounds:      &energy.Bounds{0, 60, -0.125, 20, 0, 1e-12},
				Times:       []float64{0, 0.5, 1},
				Blocks:      []energy.InspectedBlock{{Name: "bracket", Points: 1034, Cells: 3769}},
				Measure:     &energy.InspectedMeasure{Length: 0, Area: 96, Volume: 17943.437251509775},
				Arrays: []energy.InspectedArray{
					{
						Name: "Zone", On: "cell", Type: "Int64", Components: 1, Tuples: 3769, Finite: 3769,
						Min: []energy.Number{1}, Max: []energy.Number{2},
						Sum: []json.Number{"9223372036854775809"},
					},
					{
						Name: "Stress", On: "cell", Type: "Float64", Components: 2, Tuples: 3769, TakenFor: "stress",
						Why: "by its name and 6 components", Finite: 3768,
						Min: []energy.Number{-3.25, none}, Max: []energy.Number{104.5, none},
						Sum: []json.Number{"1.5", "0"},
					},
					{Name: "T", On: "point", Type: "Float32", Components: 1, Tuples: 1034, Why: "temperature or time: name it to have it used", Finite: 1034,
						Min: []energy.Number{20}, Max: []energy.Number{20}, Sum: []json.Number{"20680"}},
				},
			},
			{
				Path: strings.Repeat("long-name/", 12) + "a\nb.vtk", Format: "VTK legacy", CellsByType: nil,
				Arrays: []energy.InspectedArray{
					{Name: strings.Repeat("Spannung ", 14), On: "point", Type: "Float64", Components: 6, Tuples: 12345678, TakenFor: "thermal_strain", Why: energy.Text(strings.Repeat("w", 120)), Finite: none},
				},
			},
			{Path: "nothing.vtk", Format: "VTK legacy", Times: []float64{2.5}},
		},
		Findings: []energy.Finding{{Code: "ghost-cells", Severity: energy.Note, Cells: 4, Message: "4 cells are duplicates of other pieces' cells."}},
	}
}

func TestInspectionAgainstGolden(t *testing.T) {
	var text, document strings.Builder
	if err := InspectionText(&text, inspected(), TextOptions{}); err != nil {
		t.Fatal(err)
	}
	if err := InspectionJSON(&document, inspected()); err != nil {
		t.Fatal(err)
	}
	checkGolden(t, "inspection.txt", []byte(text.String()))
	checkGolden(t, "inspection.json", []byte(document.String()))
	for _, line := range strings.Split(text.String(), "\n") {
		if count := utf8.RuneCountInString(line); count > textWidth {
			t.Errorf("%d columns: %s", count, line)
		}
	}
}

// A sum of whole numbers stays exact beyond 2^53, and what was not read is null.
func TestInspectionJSONKeepsWhatDoublesCannot(t *testing.T) {
	var document strings.Builder
	if err := InspectionJSON(&document, inspected()); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`"sum": [9223372036854775809]`,
		`"min": [-3.25, null]`,
		`"bounds": [0, 60, -0.125, 20, 0, 1e-12]`,
		`"times": []`,
		`"blocks": []`,
		`"measure": null`,
		`"finite": null`,
		`"taken_for": "thermal_strain"`,
	} {
		if !strings.Contains(document.String(), want) {
			t.Errorf("no %s in %s", want, document.String())
		}
	}
}

func TestRangeIsOverAllComponents(t *testing.T) {
	none := energy.None
	for _, test := range []struct {
		lows, highs     []energy.Number
		lowest, highest string
	}{
		{nil, nil, "–", "–"},
		{[]energy.Number{none}, []energy.Number{none}, "–", "–"},
		{[]energy.Number{2, none, -3, 1}, []energy.Number{4, none, 5, 3}, "-3", "5"},
		{[]energy.Number{none, 0}, []energy.Number{none, -0.5}, "0", "-0.5"},
	} {
		lowest, highest := rangeOf(&energy.InspectedArray{Min: test.lows, Max: test.highs})
		if brief(lowest) != test.lowest || brief(highest) != test.highest {
			t.Errorf("%v and %v span %s to %s, want %s to %s", test.lows, test.highs, brief(lowest), brief(highest), test.lowest, test.highest)
		}
	}
}
