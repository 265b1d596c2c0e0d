package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"regexp"
	"slices"
	"strings"
	"testing"

	"strainledger/energy"
)

// compare compares made-up ledgers; the first is the baseline.
func compare(t testing.TB, options energy.CompareOptions, ledgers ...*energy.Ledger) *energy.Comparison {
	t.Helper()
	var runs []energy.ComparedRun
	for i, ledger := range ledgers {
		runs = append(runs, energy.ComparedRun{Path: fmt.Sprintf("reports/run-%d/ledger.json", i+1), Ledger: ledger})
	}
	comparison, err := energy.Compare(runs, &options)
	if err != nil {
		t.Fatal(err)
	}
	return comparison
}

// series is the bracket beside others of its kind: stiffer, softer but not resolved, of
// another material, and in other units.
func series(t testing.TB) *energy.Comparison {
	estimated := func(ledger *energy.Ledger, title string, corner, energyError energy.Number) *energy.Ledger {
		ledger.Title = energy.Text(title)
		region := &ledger.Regions[1].Account
		ledger.Total.Energy += corner - region.Energy
		region.Energy = corner
		for _, account := range []*energy.Account{region, &ledger.Total} {
			account.EnergyShare, account.MeanDensity = account.Energy/ledger.Total.Energy, account.Energy/account.Volume
			account.EnergyError, account.ErrorEstimate = energyError, energy.Number(math.Sqrt(float64(energyError/account.Energy)))
		}
		ledger.Regions[0].EnergyShare = ledger.Regions[0].Energy / ledger.Total.Energy
		return ledger
	}
	old := estimated(bracket(), "Mooring bracket, fillet R2", 102.2267979, 1)
	stiffer := estimated(bracket(), "Mooring bracket, fillet R5", 85.6921675, 0.75)
	stiffer.Hotspots = slices.Clone(stiffer.Hotspots[1:])
	for i := range stiffer.Hotspots {
		place := *stiffer.Hotspots[i].At
		place[2] += 0.25 * float64(i)
		stiffer.Hotspots[i].At, stiffer.Hotspots[i].Rank = &place, i+1
		stiffer.Hotspots[i].Density *= 0.75
	}
	open := estimated(bracket(), "", 103.5, 2)
	open.Findings = slices.Clone(open.Findings[2:])
	steel := estimated(bracket(), "Mooring bracket, fillet R2, steel", 34, 1)
	for i := range steel.Regions {
		steel.Regions[i].Material = "steel"
	}
	steel.Materials[0].Name, steel.Materials[0].YoungsModulus = "steel", 210000
	metres := inMetres(estimated(bracket(), "Mooring bracket in SI units", 102.2267979, 1))
	for _, ledger := range []*energy.Ledger{old, stiffer, open, steel, metres} {
		ledger.Model.Loading = &energy.Loading{Control: "force", Scale: energy.None}
	}
	metres.Model.Loading.Scale = 1.25
	none := energy.None
	return compare(t, energy.CompareOptions{
		Title: "Fillets of the mooring bracket",
		Requirements: []energy.Requirement{
			{Name: "no softer", Quantity: "change.energy", AtMost: 0, AtLeast: none},
			{Name: "corner stores little", Quantity: "energy", Region: "corner", AtMost: 90, AtLeast: none},
			{Name: "little by mass", Quantity: "specific_energy", AtMost: 4000, AtLeast: none},
		},
		Acceptances: []energy.Acceptance{{Code: "hooke-mismatch", Reason: "exporter checked by hand, report 12"}},
		Review:      energy.Review{Document: "MB-7", Revision: "C", PreparedBy: "A. N.", CheckedBy: "B. M."},
	}, old, stiffer, open, steel, metres)
}

// inMetres turns mm, MPa and kg into m, Pa and kg.
func inMetres(ledger *energy.Ledger) *energy.Ledger {
	factors := map[unitKind]float64{inLength: 1e-3, inVolume: 1e-9, inEnergy: 1e-3, inDensity: 1e6, inStress: 1e6}
	turn := func(structure any) {
		value := reflect.ValueOf(structure).Elem()
		for i := range value.NumField() {
			factor := factors[quantityOf(value.Type().Field(i).Tag.Get("json")).kind]
			switch field := value.Field(i).Interface().(type) {
			case energy.Number:
				if factor != 0 {
					value.Field(i).SetFloat(float64(field) * factor)
				}
			case *energy.Vector:
				if field != nil {
					value.Field(i).Set(reflect.ValueOf(at(field[0]*1e-3, field[1]*1e-3, field[2]*1e-3)))
				}
			}
		}
	}
	turn(&ledger.Total)
	for i := range ledger.Regions {
		turn(&ledger.Regions[i].Account)
	}
	for i := range ledger.Hotspots {
		turn(&ledger.Hotspots[i])
	}
	turn(&ledger.Materials[0])
	ledger.Materials[0].Density *= 1e9 / 1e6 // a density of mass, which the key's other meaning is not
	ledger.Units = energy.UnitLabels{Length: "m", Stress: "Pa", Energy: "J", EnergyDensity: "J/m^3", Mass: "kg"}
	return ledger
}

// comparisons are what the tests lay out.
var comparisons = map[string]func(t testing.TB) *energy.Comparison{
	"series": series,
	"unstated": func(t testing.TB) *energy.Comparison {
		one, other := unlimited(), unlimited()
		other.Regions[0].Name = "cushion"
		return compare(t, energy.CompareOptions{}, one, other)
	},
	"mixed": func(t testing.TB) *energy.Comparison {
		return compare(t, energy.CompareOptions{Loading: &energy.Loading{Control: "mixed", Scale: energy.None}, HotspotTolerance: 0.5}, unjudged(), zero())
	},
	"displaced": func(t testing.TB) *energy.Comparison {
		return compare(t, energy.CompareOptions{Loading: &energy.Loading{Control: "displacement", Scale: energy.None}, Baseline: 2}, bracket(), unjudged(), bracket())
	},
	"bare": func(t testing.TB) *energy.Comparison { return compare(t, energy.CompareOptions{}, bare(), bare()) },
	"hostile": func(t testing.TB) *energy.Comparison {
		return compare(t, energy.CompareOptions{}, bracket(), hostile(), hostile())
	},
	"thirty": thirty,
}

// thirty are as many fillets.
func thirty(t testing.TB) *energy.Comparison {
	var ledgers []*energy.Ledger
	for i := range 30 {
		ledger := bracket()
		ledger.Title = energy.Text(fmt.Sprintf("Mooring bracket, fillet radius %d mm", i+2))
		region := &ledger.Regions[1].Account
		region.Energy -= energy.Number(i)
		ledger.Total.Energy -= energy.Number(i)
		ledgers = append(ledgers, ledger)
	}
	return compare(t, energy.CompareOptions{Loading: &energy.Loading{Control: "force", Scale: energy.None}, HotspotTolerance: 3}, ledgers...)
}

func comparisonText(t testing.TB, comparison *energy.Comparison, options TextOptions) string {
	t.Helper()
	var text strings.Builder
	if err := ComparisonText(&text, comparison, options); err != nil {
		t.Fatal(err)
	}
	return text.String()
}

func TestComparisonAgainstGolden(t *testing.T) {
	for name, make := range comparisons {
		t.Run(name, func(t *testing.T) {
			comparison := make(t)
			text := comparisonText(t, comparison, TextOptions{})
			checkPage(t, text)
			checkGolden(t, "comparison-"+name+".txt", []byte(text))
			dir := t.TempDir()
			if err := WriteComparisonFiles(dir, comparison); err != nil {
				t.Fatal(err)
			}
			if want := []string{"comparison.csv", "comparison.json", "requirements.xml"}; !slices.Equal(folder(t, dir), want) {
				t.Errorf("the folder holds %q, want %q", folder(t, dir), want)
			}
			if name != "series" && name != "unstated" { // rows by the hundred that show nothing else
				return
			}
			for _, file := range folder(t, dir) {
				got, err := os.ReadFile(filepath.Join(dir, file))
				if err != nil {
					t.Fatal(err)
				}
				checkGolden(t, "comparison-"+name+filepath.Ext(file), got)
			}
		})
	}
}

// Colour is put on after everything is in its place.
func TestColourOfComparisons(t *testing.T) {
	codes := regexp.MustCompile("\x1b\\[[0-9]*m")
	for name, make := range comparisons {
		comparison := make(t)
		coloured := comparisonText(t, comparison, TextOptions{Colour: true})
		if codes.ReplaceAllString(coloured, "") != comparisonText(t, comparison, TextOptions{}) {
			t.Errorf("%s: without its codes the coloured text is another one", name)
		}
	}
	coloured := comparisonText(t, series(t), TextOptions{Colour: true})
	for _, want := range []string{red + "1.0925" + normal, red + "not met" + normal, yellow + "warning" + normal} {
		if !strings.Contains(coloured, want) {
			t.Errorf("no %q in\n%s", want, coloured)
		}
	}
}

func TestComparisonJSONKeepsTheContractsOrder(t *testing.T) {
	var text bytes.Buffer
	if err := ComparisonJSON(&text, series(t)); err != nil {
		t.Fatal(err)
	}
	decoder := json.NewDecoder(&text)
	keysOf := func(text json.RawMessage) string {
		decoder := json.NewDecoder(bytes.NewReader(text))
		var keys []string
		for depth := 0; ; {
			token, err := decoder.Token()
			if err != nil {
				break
			}
			switch token {
			case json.Delim('{'), json.Delim('['):
				depth++
			case json.Delim('}'), json.Delim(']'):
				depth--
			default:
				if depth == 2 {
					keys = append(keys, fmt.Sprint(token))
					var value json.RawMessage
					if err := decoder.Decode(&value); err != nil {
						t.Fatal(err)
					}
				}
			}
		}
		return strings.Join(keys, " ")
	}
	want := map[string]string{
		"runs": "title ledger", "rows": "run region quantity value baseline difference relative resolved withheld",
		"hotspots": "baseline_rank run rank state distance", "findings": "code severity message cells accepted",
		"requirements": "run name quantity region at_most at_least value met why",
	}
	if _, err := decoder.Token(); err != nil {
		t.Fatal(err)
	}
	for _, key := range strings.Fields("schema units runs baseline control rows hotspots findings requirements") {
		token, err := decoder.Token()
		if err != nil || token != key {
			t.Fatalf("the key is %v (%v), want %s", token, err, key)
		}
		var value json.RawMessage
		if err := decoder.Decode(&value); err != nil {
			t.Fatal(err)
		}
		if keys := want[key]; keys != "" {
			var list []json.RawMessage
			if err := json.Unmarshal(value, &list); err != nil || len(list) == 0 {
				t.Fatalf("%s: %v, %d entries", key, err, len(list))
			}
			if got := keysOf(json.RawMessage("[" + string(list[0]) + "]")); got != keys {
				t.Errorf("keys of %s are %q, want %q", key, got, keys)
			}
		}
	}
	if decoder.More() {
		t.Error("there are more keys than the contract has")
	}
}

// Lists without entries are written as such.
func TestComparisonJSONOfNothing(t *testing.T) {
	var text strings.Builder
	if err := ComparisonJSON(&text, &energy.Comparison{Schema: energy.ComparisonSchema}); err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{"runs", "rows", "hotspots", "findings", "requirements"} {
		if !strings.Contains(text.String(), `"`+key+`": []`) {
			t.Errorf("no empty list %s in %s", key, text.String())
		}
	}
}

// The CSV holds the rows of the JSON.
func TestComparisonCSVReadsBackAsTheRows(t *testing.T) {
	for name, make := range comparisons {
		comparison := make(t)
		var text bytes.Buffer
		if err := ComparisonCSV(&text, comparison); err != nil {
			t.Fatal(err)
		}
		records, err := csv.NewReader(&text).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		if len(records) != len(comparison.Rows)+1 {
			t.Fatalf("%s: %d records for %d rows", name, len(records), len(comparison.Rows))
		}
		for i := range comparison.Rows {
			keys, values := flatJSON(t, comparison.Rows[i])
			if !slices.Equal(records[0], keys) || !slices.Equal(records[i+1], values) {
				t.Fatalf("%s: row %d is\n%q, want\n%q", name, i+1, records[i+1], values)
			}
		}
	}
}

func TestJUnitOfComparisons(t *testing.T) {
	comparison := series(t)
	var text strings.Builder
	if err := writeComparisonJUnit(&text, comparison); err != nil {
		t.Fatal(err)
	}
	var got junitSuites
	if err := xml.Unmarshal([]byte(text.String()), &got); err != nil {
		t.Fatal(err)
	}
	suite := got.Suite
	if suite.Name != "Fillets of the mooring bracket" || suite.Tests != 14 || len(suite.Cases) != 14 {
		t.Fatalf("%+v", suite)
	}
	var failures, faults int
	seen := map[[2]string]bool{}
	for i, requirement := range comparison.Requirements {
		entry := suite.Cases[i]
		if id := [2]string{entry.Class, entry.Name}; seen[id] {
			t.Errorf("the case %q stands twice", id)
		} else {
			seen[id] = true
		}
		isFault := !requirement.Value.Exists()
		if (entry.Error != nil) != isFault || (entry.Failure != nil) != (!requirement.Met && !isFault) {
			t.Errorf("case %d is %+v for %+v", i, entry, requirement)
		}
		if entry.Error != nil {
			faults++
		}
		if entry.Failure != nil {
			failures++
		}
	}
	if suite.Failures != failures || suite.Errors != faults || failures == 0 || faults == 0 {
		t.Errorf("the suite counts %+v", suite)
	}
	for _, want := range []string{
		`<testcase name="no softer" classname="run 2: Mooring bracket, fillet R5" time="0"></testcase>`,
		`classname="run 3: reports/run-3/ledger.json"`,
	} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("no %s in\n%s", want, text.String())
		}
	}
}

func TestWriteComparisonFilesLeavesNothingHalfWritten(t *testing.T) {
	comparison := series(t)
	comparison.Rows[3].Value = energy.Number(math.Inf(1))
	dir := t.TempDir()
	if err := WriteComparisonFiles(dir, comparison); err == nil || !strings.Contains(err.Error(), "comparison.json") {
		t.Errorf("the error is %v", err)
	}
	if got := folder(t, dir); len(got) > 0 {
		t.Errorf("the folder holds %q", got)
	}
}

// What the rows hold is what people read.
func TestNumbersOfTheComparedRegions(t *testing.T) {
	s := storedByRegionSection(series(t))
	// 16.5346304 of 102.2267979 and of 201.16420518
	want := []string{"corner", "2", "4204.3", "85.692", "-16.17", "-8.22"}
	for _, texts := range s.table.rows {
		if texts[0].text == "corner" && texts[1].text == "2" {
			var got []string
			for _, cell := range texts[:len(want)] {
				got = append(got, cell.text)
			}
			if !slices.Equal(got, want) {
				t.Errorf("%q, want %q", got, want)
			}
			return
		}
	}
	t.Errorf("no such row in %+v", s.table.rows)
}

func TestSignedPercent(t *testing.T) {
	for _, test := range []struct {
		number energy.Number
		want   string
	}{
		{0, "0"}, {0.5, "+50.00"}, {-0.5, "-50.00"}, {1e-9, "<0.01"}, {-1e-9, ">-0.01"}, {energy.None, missing}, {1, "+100.00"}, {2000, "+200000"}, {0.999999, ">99.99"},
	} {
		if got := signedPercent(test.number); got != test.want {
			t.Errorf("%v is %q, want %q", test.number, got, test.want)
		}
	}
}

func TestByRank(t *testing.T) {
	if got, want := byRank([]int{3, 0, 1, 0, 1}), []int{2, 4, 0, 1, 3}; !slices.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

func TestQuantitiesOfAComparison(t *testing.T) {
	full := &energy.UnitLabels{Length: "mm", Stress: "MPa", Energy: "mJ", EnergyDensity: "mJ/mm^3", Mass: "kg"}
	for key, want := range map[string]string{
		"specific_energy": "mJ/kg", "change.energy": "1", "volume_share_past_limit": "1", "stiffness_sensitivity": "1",
	} {
		if got := quantityOf(key).kind.unit(full); got != want {
			t.Errorf("the unit of %s is %q, want %q", key, got, want)
		}
	}
	if got := quantityOf("specific_energy").kind.unit(&energy.UnitLabels{Energy: "mJ"}); got != unitNotStated {
		t.Errorf("without a unit of mass: %q", got)
	}
	for _, key := range energy.ComparedQuantities() {
		if quantityOf(key).meaning == "" {
			t.Errorf("%s has no meaning", key)
		}
	}
}
