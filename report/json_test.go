package report

import (
	"encoding/json"
	"math"
	"reflect"
	"strings"
	"testing"

	"strainledger/energy"
)

func jsonOf(t *testing.T, ledger *energy.Ledger) string {
	t.Helper()
	var text strings.Builder
	if err := JSON(&text, ledger); err != nil {
		t.Fatal(err)
	}
	return text.String()
}

// Laying out the document changes nothing in it, whatever the names hold.
func TestJSONHoldsTheLedger(t *testing.T) {
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) {
			ledger := ledger()
			text := jsonOf(t, ledger)
			if !strings.HasSuffix(text, "}\n") || strings.HasSuffix(text, "\n\n") {
				t.Error("the document does not end with one line break")
			}
			plain, err := json.Marshal(ledger)
			if err != nil {
				t.Fatal(err)
			}
			var got, want any
			if err := json.Unmarshal([]byte(text), &got); err != nil {
				t.Fatal(err)
			}
			if err := json.Unmarshal(plain, &want); err != nil {
				t.Fatal(err)
			}
			fillLists(want.(map[string]any))
			if !reflect.DeepEqual(got, want) {
				t.Errorf("got %v\nwant %v", got, want)
			}
		})
	}
}

// fillLists replaces null by the empty list where the contract has a list.
func fillLists(ledger map[string]any) {
	for _, key := range []string{"source", "materials", "regions", "hotspots", "excluded", "findings", "requirements"} {
		if ledger[key] == nil {
			ledger[key] = []any{}
		}
	}
	if past := ledger["past_limit"].(map[string]any); past["worst"] == nil {
		past["worst"] = []any{}
	}
}

func TestJSONLayout(t *testing.T) {
	ledger := bracket()
	trap := "[\n        1,\n        2\n      ] <b> & \\"
	ledger.Title = energy.Text(trap)
	text := jsonOf(t, ledger)
	for _, want := range []string{
		"{\n  \"schema\": \"strainledger/ledger/v1\",\n  \"title\": \"[\\n        1,\\n        2\\n      ] <b> & \\\\\",\n  \"units\": {\n",
		"\n    \"max_density_at\": [8.5125, 9.875, 8.4375],\n",
		"\n  \"steps\": null,\n",
		"\n    \"cells_yielded\": null,\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %s in\n%s", want, text)
		}
	}
	if strings.Contains(jsonOf(t, bare()), "NaN") {
		t.Error("NaN was written")
	}
}

func TestJSONKeepsTheContractsOrder(t *testing.T) {
	decoder := json.NewDecoder(strings.NewReader(jsonOf(t, bracket())))
	if _, err := decoder.Token(); err != nil {
		t.Fatal(err)
	}
	for _, want := range strings.Fields(`schema title units model study source fields materials total repeated regions hotspots at_centre
		past_limit excluded findings balance requirements steps cases envelope caution run`) {
		key, err := decoder.Token()
		if err != nil || key != want {
			t.Fatalf("the key is %v (%v), want %s", key, err, want)
		}
		var value json.RawMessage
		if err := decoder.Decode(&value); err != nil {
			t.Fatal(err)
		}
	}
	if decoder.More() {
		t.Error("there are more keys than the contract has")
	}
}

func TestJSONWritesNothingOnError(t *testing.T) {
	ledger := bracket()
	ledger.Regions[1].Energy = energy.Number(math.Inf(1))
	var text strings.Builder
	if err := JSON(&text, ledger); err == nil || text.Len() > 0 {
		t.Errorf("error %v after %d bytes, want an error and no byte", err, text.Len())
	}
}

// The caller's ledger stays as it was.
func TestJSONLeavesTheLedgerAlone(t *testing.T) {
	ledger := &energy.Ledger{Run: energy.Run{Seconds: energy.None}}
	jsonOf(t, ledger)
	if ledger.Regions != nil || ledger.PastLimit.Worst != nil {
		t.Error("lists of the ledger were filled")
	}
}
