package report

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	"strainledger/energy"
)

// flatJSON returns the keys of a struct's JSON form in their order, and the text of each
// value, as the CSV files have them. It goes by the JSON text alone.
func flatJSON(t *testing.T, row any) (keys, values []string) {
	t.Helper()
	text, err := json.Marshal(row)
	if err != nil {
		t.Fatal(err)
	}
	decoder := json.NewDecoder(bytes.NewReader(text))
	decoder.UseNumber()
	return flatObject(t, decoder)
}

// concentrationKeys are the columns of an account's concentration.
var concentrationKeys = []string{"top_1", "top_5", "top_10", "top_25", "gini", "effective_volume", "bin_width"}

func flatObject(t *testing.T, decoder *json.Decoder) (keys, values []string) {
	t.Helper()
	next := func() json.Token {
		token, err := decoder.Token()
		if err != nil {
			t.Fatal(err)
		}
		return token
	}
	var object func(prefix string)
	object = func(prefix string) {
		for decoder.More() {
			key := prefix + next().(string)
			isVector := key == "at" || strings.HasSuffix(key, "_at") || strings.HasSuffix(key, "_direction")
			switch value := next().(type) {
			case json.Delim:
				if value == '{' {
					object(key + "_")
					continue
				}
				if key == "concentration_curve" { // a list has no column
					for depth := 1; depth > 0; {
						switch next() {
						case json.Delim('['):
							depth++
						case json.Delim(']'):
							depth--
						}
					}
					continue
				}
				for _, axis := range []string{"x", "y", "z"} {
					keys, values = append(keys, key+"_"+axis), append(values, next().(json.Number).String())
				}
				next() // ]
			case nil:
				switch {
				case isVector:
					keys, values = append(keys, key+"_x", key+"_y", key+"_z"), append(values, "", "", "")
				case key == "local_estimate":
					for _, part := range strings.Fields("neuber_stress neuber_strain energy_density_stress energy_density_strain refused") {
						keys, values = append(keys, key+"_"+part), append(values, "")
					}
				case key == "concentration":
					for _, part := range concentrationKeys {
						keys, values = append(keys, key+"_"+part), append(values, "")
					}
				default:
					keys, values = append(keys, key), append(values, "")
				}
			case bool:
				keys, values = append(keys, key), append(values, map[bool]string{true: "true", false: "false"}[value])
			case json.Number:
				keys, values = append(keys, key), append(values, value.String())
			case string:
				keys, values = append(keys, key), append(values, value)
			}
		}
		next() // }
	}
	next() // {
	object("")
	return keys, values
}

func readCSV(t *testing.T, file csvFile, ledger *energy.Ledger) [][]string {
	t.Helper()
	var text bytes.Buffer
	if err := file.write(&text, ledger); err != nil {
		t.Fatal(err)
	}
	if bytes.Contains(text.Bytes(), []byte("\r")) || !bytes.HasSuffix(text.Bytes(), []byte("\n")) {
		t.Error("line ends are not LF")
	}
	records, err := csv.NewReader(&text).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return records
}

func TestCSVReadsBackAsTheLedger(t *testing.T) {
	for name, ledger := range ledgers {
		for _, file := range csvFiles {
			t.Run(name+"/"+file.name, func(t *testing.T) {
				ledger := ledger()
				records := readCSV(t, file, ledger)
				rows := reflect.ValueOf(file.rows(ledger))
				if len(records) != rows.Len()+1 {
					t.Fatalf("%d records, want a heading and %d rows", len(records), rows.Len())
				}
				for i := range rows.Len() {
					keys, values := flatJSON(t, rows.Index(i).Interface())
					if !slices.Equal(records[0], keys) {
						t.Fatalf("the heading is\n%q, want\n%q", records[0], keys)
					}
					if !slices.Equal(records[i+1], values) {
						t.Errorf("row %d is\n%q, want\n%q", i+1, records[i+1], values)
					}
				}
			})
		}
	}
}

func TestRegionsEndWithTheTotal(t *testing.T) {
	ledger := bracket()
	ledger.Regions[0].Name = totalName // a region may have any name
	records := readCSV(t, csvFiles[0], ledger)
	last := len(records[0]) - 1
	if records[0][last] != "kind" {
		t.Fatalf("the last column is %q, want kind", records[0][last])
	}
	for i, want := range []string{"kind", "region", "region", "total"} {
		if records[i][last] != want {
			t.Errorf("row %d is a %q, want %q", i, records[i][last], want)
		}
	}
	energyColumn := slices.Index(records[0], "energy")
	if total := records[3]; total[0] != "(total)" || total[energyColumn] != "201.16420518" {
		t.Errorf("the total's row is %q", total)
	}
}

// Every file has its heading, also without a row.
func TestCSVHeadingsWithoutRows(t *testing.T) {
	for _, test := range []struct{ file, want string }{
		{"hotspots.csv", "rank,region,cell,source,element_id,at_x,at_y,at_z,density,peak_density,energy,energy_share,volume,cells,prominence,equivalent_stress,utilisation,past_limit,singular,stress_margin,load_factor,error_to_target,region_share,mean_density,energy_at_x,energy_at_y,energy_at_z," +
			"principal_1,principal_1_direction_x,principal_1_direction_y,principal_1_direction_z,principal_2,principal_2_direction_x,principal_2_direction_y,principal_2_direction_z," +
			"principal_3,principal_3_direction_x,principal_3_direction_y,principal_3_direction_z," +
			"ball_radius,ball_volume,ball_cells,averaged_density,eigenvalue,eigenvalue_spread,control_radius,control_volume,control_density,averaged_density_ratio,local_estimate_neuber_stress,local_estimate_neuber_strain,local_estimate_energy_density_stress,local_estimate_energy_density_strain,local_estimate_refused\n"},
		{"past-limit.csv", "cell,source,element_id,region,at_x,at_y,at_z,density,equivalent_stress,utilisation\n"},
		{"requirements.csv", "name,quantity,region,at_most,at_least,value,met,why\n"},
	} {
		for _, file := range csvFiles {
			if file.name != test.file {
				continue
			}
			var text strings.Builder
			if err := file.write(&text, &energy.Ledger{}); err != nil {
				t.Fatal(err)
			}
			if text.String() != test.want {
				t.Errorf("%s is %q, want %q", file.name, text.String(), test.want)
			}
		}
	}
}

func TestCSVRefusesInfiniteNumbers(t *testing.T) {
	infinite := energy.Number(math.Inf(1))
	for _, spoil := range []func(*energy.Ledger){
		func(l *energy.Ledger) { l.Regions[0].Energy = infinite },
		func(l *energy.Ledger) { l.Total.MaxDensityAt[1] = math.Inf(-1) },
	} {
		ledger := bracket()
		spoil(ledger)
		if err := csvFiles[0].write(&strings.Builder{}, ledger); err == nil {
			t.Error("an infinite number was written")
		}
	}
}

func TestColumnsDescribeEveryColumn(t *testing.T) {
	ledger := bracket()
	var text bytes.Buffer
	if err := writeColumns(&text, ledger); err != nil {
		t.Fatal(err)
	}
	records, err := csv.NewReader(&text).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if want := []string{"name", "unit", "meaning", "file"}; !slices.Equal(records[0], want) {
		t.Fatalf("the heading is %q, want %q", records[0], want)
	}
	row := 1
	for _, file := range csvFiles {
		for _, column := range readCSV(t, file, ledger)[0] {
			if record := records[row]; record[0] != column || record[3] != file.name {
				t.Errorf("row %d describes %s of %s, want %s of %s", row, record[0], record[3], column, file.name)
			}
			if records[row][2] == "" {
				t.Errorf("%s of %s has no meaning", column, file.name)
			}
			row++
		}
	}
	if row != len(records) {
		t.Errorf("%d rows, want %d", len(records), row)
	}
}

func TestUnitsOfColumns(t *testing.T) {
	full := &energy.UnitLabels{Length: "mm", Stress: "MPa", Energy: "mJ", EnergyDensity: "mJ/mm^3", Mass: "kg"}
	for _, test := range []struct{ key, stated, unstated string }{
		{"name", "", ""},
		{"max_density_cell", "", ""},
		{"cells", "1", "1"},
		{"energy_share", "1", "1"},
		{"utilisation", "1", "1"},
		{"at", "mm", "not stated"},
		{"volume", "mm^3", "not stated"},
		{"volume_past_limit", "mm^3", "not stated"},
		{"mass", "kg", "not stated"},
		{"energy", "mJ", "not stated"},
		{"energy_past_limit", "mJ", "not stated"},
		{"max_density", "mJ/mm^3", "not stated"},
		{"peak_density", "mJ/mm^3", "not stated"},
		{"max_equivalent_stress", "MPa", "not stated"},
		{"local_estimate_neuber_stress", "MPa", "not stated"},
		{"local_estimate_energy_density_strain", "1", "1"},
		{"load_factor", "1", "1"},
		{"value", "that of the quantity", "that of the quantity"},
	} {
		kind := quantityOf(test.key).kind
		if got := kind.unit(full); got != test.stated {
			t.Errorf("the unit of %s is %q, want %q", test.key, got, test.stated)
		}
		if got := kind.unit(&energy.UnitLabels{}); got != test.unstated {
			t.Errorf("without units, the unit of %s is %q, want %q", test.key, got, test.unstated)
		}
	}
	if got := inArea.unit(full); got != "mm^2" {
		t.Errorf("the unit of an area is %q", got)
	}
}

func TestQuantitiesAreDefinedOnce(t *testing.T) {
	seen := map[string]bool{}
	for _, quantity := range quantities {
		if seen[quantity.key] {
			t.Errorf("%s is defined twice", quantity.key)
		}
		seen[quantity.key] = true
		if quantity.name == "" || !strings.HasSuffix(quantity.meaning, ".") {
			t.Errorf("%s has no name, or no sentence for its meaning", quantity.key)
		}
	}
}
