package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"reflect"
	"strconv"
	"strings"

	"strainledger/energy"
)

// totalName stands in the column name of the total's row in regions.csv. The column
// kind tells it from a region of that name.
const totalName = "(total)"

// The rows of the CSV files. Their columns are the JSON keys of the structs' fields.
type (
	regionRow struct {
		energy.RegionAccount
		Kind string `json:"kind"`
	}
	csvFile struct {
		name string
		rows func(*energy.Ledger) any // a slice of structs
	}
)

// csvFiles lists the files of the ledger's tables; columns.csv describes their columns.
var csvFiles = []csvFile{
	{"regions.csv", func(l *energy.Ledger) any { return regionRows(l) }},
	{"hotspots.csv", func(l *energy.Ledger) any { return l.Hotspots }},
	{"past-limit.csv", func(l *energy.Ledger) any { return l.AllPastLimit }},
	{"requirements.csv", func(l *energy.Ledger) any { return l.Requirements }},
}

func regionRows(ledger *energy.Ledger) []regionRow {
	rows := make([]regionRow, 0, len(ledger.Regions)+1)
	for _, region := range ledger.Regions {
		rows = append(rows, regionRow{region, "region"})
	}
	return append(rows, regionRow{energy.RegionAccount{Name: totalName, Account: ledger.Total}, "total"})
}

func (f csvFile) write(w io.Writer, ledger *energy.Ledger) error { return writeRows(w, f.rows(ledger)) }

// writeRows writes a slice of structs after a heading, as RFC 4180 has it but with LF
// line ends: no unit in a name, an empty cell for what does not exist, numbers as in
// JSON.
func writeRows(w io.Writer, list any) error {
	writer := csv.NewWriter(w)
	rows := reflect.ValueOf(list)
	if err := writer.Write(csvHeading(rows.Type().Elem())); err != nil {
		return err
	}
	for i := range rows.Len() {
		cells, err := csvCells(nil, rows.Index(i))
		if err != nil {
			return err
		}
		if err := writer.Write(cells); err != nil {
			return err
		}
	}
	writer.Flush()
	return writer.Error()
}

// writeColumns writes columns.csv: for each column of each file its name, unit and
// meaning.
func writeColumns(w io.Writer, ledger *energy.Ledger) error {
	writer := csv.NewWriter(w)
	records := [][]string{{"name", "unit", "meaning", "file"}}
	for _, file := range csvFiles {
		for _, name := range csvHeading(reflect.TypeOf(file.rows(ledger)).Elem()) {
			quantity := quantityOf(withoutAxis(name))
			records = append(records, []string{name, quantity.kind.unit(&ledger.Units), quantity.meaning, file.name})
		}
	}
	return writer.WriteAll(records)
}

func withoutAxis(column string) string {
	for _, axis := range axes {
		column = strings.TrimSuffix(column, axis)
	}
	return column
}

// axes ends the names of a vector's three columns.
var axes = [3]string{"_x", "_y", "_z"}

var (
	vectorType = reflect.TypeFor[*energy.Vector]()
	laterType  = reflect.TypeFor[*energy.NotBuilt]()
)

// csvHeading returns the columns of a struct: its JSON keys, embedded structs' in their
// place, those of other structs behind their own key, a vector's with _x, _y and _z, and
// none for what is not built yet.
func csvHeading(row reflect.Type) []string {
	var names []string
	for i := range row.NumField() {
		field := row.Field(i)
		key, _, _ := strings.Cut(field.Tag.Get("json"), ",")
		switch {
		case field.Anonymous:
			names = append(names, csvHeading(field.Type)...)
		case field.Type == laterType, field.Type.Kind() == reflect.Slice:
		case field.Type == vectorType:
			for _, axis := range axes {
				names = append(names, key+axis)
			}
		case structOf(field.Type) != nil:
			for _, name := range csvHeading(structOf(field.Type)) {
				names = append(names, key+"_"+name)
			}
		default:
			names = append(names, key)
		}
	}
	return names
}

// structOf returns the type of a struct or of what points to one, else nil.
func structOf(t reflect.Type) reflect.Type {
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	if t.Kind() != reflect.Struct {
		return nil
	}
	return t
}

// csvCells appends the row's cells in the order of csvHeading.
func csvCells(cells []string, row reflect.Value) ([]string, error) {
	for i := range row.NumField() {
		switch value := row.Field(i).Interface().(type) {
		case *energy.NotBuilt:
		case *energy.Vector:
			if value == nil {
				cells = append(cells, "", "", "")
				continue
			}
			for _, x := range value {
				text, err := csvNumber(energy.Number(x))
				if err != nil {
					return nil, err
				}
				cells = append(cells, text)
			}
		case energy.Number:
			text, err := csvNumber(value)
			if err != nil {
				return nil, err
			}
			cells = append(cells, text)
		case string:
			cells = append(cells, strings.ToValidUTF8(value, "\uFFFD"))
		case energy.Text:
			cells = append(cells, strings.ToValidUTF8(string(value), "\uFFFD"))
		case int, int64, bool:
			cells = append(cells, fmt.Sprint(value))
		case *bool:
			if value == nil {
				cells = append(cells, "")
			} else {
				cells = append(cells, strconv.FormatBool(*value))
			}
		default:
			part := row.Field(i)
			switch {
			case part.Kind() == reflect.Slice:
				continue
			case part.Kind() == reflect.Pointer && part.IsNil():
				cells = append(cells, make([]string, len(csvHeading(part.Type().Elem())))...)
				continue
			}
			var err error
			if cells, err = csvCells(cells, reflect.Indirect(part)); err != nil {
				return nil, err
			}
		}
	}
	return cells, nil
}

func csvNumber(n energy.Number) (string, error) {
	if !n.Exists() {
		return "", nil
	}
	text, err := n.MarshalJSON()
	return string(text), err
}
