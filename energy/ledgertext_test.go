package energy

import (
	"encoding/json"
	"errors"
	"io"
	"math"
	"strings"
	"testing"
	"testing/iotest"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"strainledger/mesh"
)

// exactNumbers holds missing numbers for equal.
var exactNumbers = cmp.Comparer(func(a, b Number) bool { return a == b || !a.Exists() && !b.Exists() })

// fullLedger is the ledger of a bar of two parts, with lists and missing numbers.
func fullLedger(t testing.TB) *Ledger {
	points, cells := row(2)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: cells, arrays: []memoryArray{
		cellArray("stress", []float64{100, 0, 0, 0, 0, 0}, []float64{300, 0, 0, 0, 0, 0}),
		cellArray("strain", []float64{100. / 210000, -30. / 210000, -30. / 210000, 0, 0, 0}, []float64{300. / 210000, -90. / 210000, -90. / 210000, 0, 0, 0}),
		labels1("part", 1, 2)}}}}
	options := solidOptions(mesh.OnCell, steel())
	options.Regions = []Region{{Name: "a", Array: "part", Values: []float64{1}, Material: "steel"}, {Name: "b", Rest: true}}
	options.Requirements = []Requirement{{Name: "r", Quantity: "energy", AtMost: 1, AtLeast: None}}
	options.Repeats = 2
	options.Loading = &Loading{Control: "force", Scale: 1.5}
	options.HotspotTolerance = 0.25
	return tally(t, m, options)
}

func jsonText(t testing.TB, value any) string {
	t.Helper()
	text, err := json.MarshalIndent(value, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// The ledger's model says what comparisons need: the diagonal of two unit cubes in a
// row is √(2² + 1² + 1²).
func TestLedgerHoldsWhatComparisonsNeed(t *testing.T) {
	model := fullLedger(t).Model
	if model.Diagonal != Number(math.Sqrt(6)) || model.HotspotTolerance != 0.25 || *model.Loading != (Loading{"force", 1.5}) {
		t.Errorf("model %+v", model)
	}
	points, cell := brick(1, 1, 1)
	m := &memoryMesh{pieces: []memoryPiece{{points: points, cells: []memoryCell{cell}, arrays: []memoryArray{
		cellArray("stress", make([]float64, 6)), cellArray("strain", make([]float64, 6))}}}}
	if model := tally(t, m, solidOptions(mesh.OnCell)).Model; model.HotspotTolerance.Exists() || model.Loading != nil {
		t.Errorf("without a statement: model %+v", model)
	}
}

func TestReadLedgersReadsWhatWasWritten(t *testing.T) {
	ledger := fullLedger(t)
	thick := *ledger
	thick.Model.Thickness = Number(2.5)
	named := *ledger
	named.Model.Thickness = "thickness"
	for name, c := range map[string]struct {
		text string
		want []*Ledger
	}{
		"one":             {jsonText(t, ledger), []*Ledger{ledger}},
		"blanks before":   {"\r\n\t " + jsonText(t, ledger), []*Ledger{ledger}},
		"a list":          {jsonText(t, []*Ledger{ledger, &thick, &named}), []*Ledger{ledger, &thick, &named}},
		"escaped schema":  {strings.Replace(jsonText(t, ledger), "strainledger/ledger/v1", `strainledger\/ledger\/v1`, 1), []*Ledger{ledger}},
		"a later key":     {strings.Replace(jsonText(t, ledger), `"schema"`, `"later": {"x": [1]}, "schema"`, 1), []*Ledger{ledger}},
		"a number's name": {jsonText(t, &named), []*Ledger{&named}},
	} {
		t.Run(name, func(t *testing.T) {
			got, err := ReadLedgers(iotest.OneByteReader(strings.NewReader(c.text)))
			if err != nil {
				t.Fatal(err)
			}
			if difference := cmp.Diff(c.want, got, exactNumbers, cmpopts.IgnoreFields(Ledger{}, "AllPastLimit", "HotspotCells")); difference != "" {
				t.Errorf("want -, got +\n%s", difference)
			}
		})
	}
}

// A number whose key is missing does not exist, wherever it stands; so a ledger of
// before a key was added is read rightly.
func TestMissingKeysOfNumbersAreNone(t *testing.T) {
	text := jsonText(t, fullLedger(t))
	for _, key := range []string{"diagonal", "hotspot_tolerance", "loading", "error_estimate", "prominence", "mass", "density", "element_id"} {
		text = strings.ReplaceAll(text, `"`+key+`"`, `"other"`)
	}
	ledgers, err := ReadLedgers(strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	l := ledgers[0]
	for name, number := range map[string]Number{
		"diagonal": l.Model.Diagonal, "tolerance": l.Model.HotspotTolerance, "total": l.Total.ErrorEstimate,
		"embedded account": l.Regions[1].Mass, "list": l.Hotspots[0].Prominence, "material": l.Materials[0].Density, "ranked cell": l.PastLimit.Worst[0].ElementID,
	} {
		if number.Exists() {
			t.Errorf("%s: %v, want none", name, number)
		}
	}
	if l.Model.Loading != nil || l.Total.Energy != fullLedger(t).Total.Energy {
		t.Errorf("loading %v, energy %v", l.Model.Loading, l.Total.Energy)
	}
}

func TestReadLedgersRefuses(t *testing.T) {
	whole := jsonText(t, fullLedger(t))
	swap := func(old, new string) string {
		if !strings.Contains(whole, old) {
			t.Fatalf("no %s in %s", old, whole)
		}
		return strings.Replace(whole, old, new, 1)
	}
	for name, c := range map[string]struct{ text, want string }{
		"empty":          {" \n", "no ledger: it is empty"},
		"XML":            {"<VTKFile>", `no ledger: it starts with '<' where JSON starts with {; give a ledger.json that tally has written, or a study file`},
		"cut":            {whole[:len(whole)/2], "not whole JSON: unexpected end of JSON input"},
		"cut list":       {"[" + whole, "not whole JSON"},
		"empty list":     {"[]", "no ledger: the list is empty"},
		"list":           {"[1]", "ledger 1 of 1: the key"},
		"second of list": {"[" + whole + ",\n{}]", `ledger 2 of 2: no ledger: it has no schema, want "strainledger/ledger/v1"; give a ledger.json that tally has written`},
		"broken":         {swap(`"title": null`, `"title" null`), "line 3: not whole JSON: invalid character 'n' after object key"},
		"another schema": {swap("ledger/v1", "ledger/v2"), `no ledger: it has the schema "strainledger/ledger/v2", want "strainledger/ledger/v1"`},
		"a comparison":   {`{"schema": "strainledger/comparison/v1"}`, `it has the schema "strainledger/comparison/v1"`},
		"schema number":  {`{"schema": 1}`, `no ledger: it has the schema 1, want`},
		"text for a number": {swap(`"volume": 2`, `"volume": "2"`),
			`the key "total.volume" is a string, want a number`},
		"truth for a number":  {swap(`"volume": 2`, `"volume": true`), `the key "total.volume" is a boolean, want a number`},
		"list for a number":   {swap(`"volume": 2`, `"volume": [2]`), `the key "total.volume" is a list, want a number`},
		"object for a number": {swap(`"volume": 2`, `"volume": {}`), `the key "total.volume" is a object, want a number`},
		"number too large":    {swap(`"volume": 2`, `"volume": 1e999`), `the key "total.volume" is a number 1e999, want a number`},
		"number for a text":   {swap(`"title": null`, `"title": 3`), `the key "title" is a number, want a string`},
		"text for a list":     {swap(`"regions": [`, `"other": 1, "regions": "a", "x": [`), `the key "regions" is a string, want a list`},
		"null for an object":  {swap(`"total": {`, `"total": null, "other": {`), `the key "total" is null, want an object`},
		"null for a list":     {swap(`"regions": [`, `"regions": null, "other": [`), `the key "regions" is null, want a list`},
		"null for a count":    {swap(`"cells": 2`, `"cells": null`), `the key "source[0].cells" is null, want a number`},
		"no regions":          {swap(`"regions": [`, `"regions": [], "other": [`), "the ledger has no regions"},
		"list missing":        {swap(`"regions"`, `"other"`), `the key "regions" is missing: it is no whole ledger`},
		"object missing":      {swap(`"total": {`, `"other": {`), `the key "total" is missing: it is no whole ledger`},
		"text missing":        {swap(`"law"`, `"other"`), `the key "materials[0].law" is missing: it is no whole ledger`},
		"count missing":       {swap(`"cells": 2`, `"other": 2`), `the key "source[0].cells" is missing: it is no whole ledger`},
		"name missing":        {swap(`"name": "a"`, `"other": "a"`), `the key "regions[0].name" is missing: it is no whole ledger`},
		"short vector":        {swap(`"max_density_at": [`, `"max_density_at": [1, 2], "other": [`), `the key "total.max_density_at" has 2 numbers, want 3`},
		"long vector":         {swap(`"max_density_at": [`, `"max_density_at": [1, 2, 3, 4], "other": [`), `the key "total.max_density_at" has 4 numbers, want 3`},
		"null in a vector":    {swap(`"max_density_at": [`, `"max_density_at": [null, 1, 2], "other": [`), `the key "total.max_density_at[0]" is null, want a number`},
	} {
		t.Run(name, func(t *testing.T) {
			_, err := ReadLedgers(strings.NewReader(c.text))
			var input *InputError
			if !errors.As(err, &input) || !strings.Contains(err.Error(), c.want) {
				t.Errorf("got  %v\nwant %s", err, c.want)
			}
		})
	}
	if _, err := ReadLedgers(iotest.ErrReader(io.ErrClosedPipe)); !errors.Is(err, io.ErrClosedPipe) {
		t.Errorf("a reader that fails: %v", err)
	}
	if _, err := ReadLedgers(io.MultiReader(strings.NewReader("{"), iotest.ErrReader(io.ErrClosedPipe))); !errors.Is(err, io.ErrClosedPipe) {
		t.Errorf("a reader that fails later: %v", err)
	}
}

// Whatever the text, reading ends with a ledger or an error of its kind; a ledger can
// be written and is read again as it was.
func FuzzReadLedgers(f *testing.F) {
	whole := jsonText(f, fullLedger(f))
	for _, text := range []string{whole, whole[:len(whole)/3], "[" + whole + "]", "{}", "[]", "null", `{"schema":"strainledger/ledger/v1"}`} {
		f.Add([]byte(text))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		ledgers, err := ReadLedgers(strings.NewReader(string(data)))
		if err != nil {
			if input := new(InputError); !errors.As(err, &input) {
				t.Fatalf("%T: %v", err, err)
			}
			return
		}
		text := jsonText(t, ledgers)
		again, err := ReadLedgers(strings.NewReader(text))
		if err != nil {
			t.Fatalf("%v in\n%s", err, text)
		}
		if second := jsonText(t, again); second != text {
			t.Fatalf("written again:\n%s\nfirst:\n%s", second, text)
		}
	})
}
