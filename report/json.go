package report

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"regexp"

	"strainledger/energy"
)

// JSON writes the ledger as one indented document with a final newline: keys in the
// struct's order, numbers in the shortest form that reads back, null for what does not
// exist, [] for an empty list, and places on one line. It writes nothing when the
// ledger cannot be written, which is when a number in it is infinite.
func JSON(w io.Writer, ledger *energy.Ledger) error {
	full := *ledger
	full.Sources = list(full.Sources)
	full.Materials = list(full.Materials)
	full.Regions = list(full.Regions)
	full.Hotspots = list(full.Hotspots)
	full.PastLimit.Worst = list(full.PastLimit.Worst)
	full.Excluded = list(full.Excluded)
	full.Findings = list(full.Findings)
	full.Requirements = list(full.Requirements)
	return writeJSON(w, &full)
}

// InspectionJSON writes the inspection in the form of [JSON].
func InspectionJSON(w io.Writer, inspection *energy.Inspection) error {
	full := *inspection
	full.Files = append([]energy.InspectedFile{}, full.Files...)
	for i := range full.Files {
		file := &full.Files[i]
		file.CellsByType = list(file.CellsByType)
		file.Times = list(file.Times)
		file.Blocks = list(file.Blocks)
		file.Arrays = list(file.Arrays)
	}
	full.Findings = list(full.Findings)
	return writeJSON(w, &full)
}

// list returns the list, empty instead of nil.
func list[T any](entries []T) []T {
	if entries == nil {
		return []T{}
	}
	return entries
}

// flatList matches an indented list of numbers. A text in JSON holds no line break, so
// that what matches is never within one.
var flatList = regexp.MustCompile(`\[\n\s+(?:null|[-+.eE0-9]+)(?:,\n\s+(?:null|[-+.eE0-9]+))*\n\s+\]`)

var betweenNumbers = regexp.MustCompile(`\n\s+`)

func writeJSON(w io.Writer, document any) error {
	var text bytes.Buffer
	encoder := json.NewEncoder(&text)
	encoder.SetEscapeHTML(false)
	encoder.SetIndent("", "  ")
	if err := encoder.Encode(document); err != nil {
		return fmt.Errorf("cannot be written as JSON: %w", err)
	}
	_, err := w.Write(flatList.ReplaceAllFunc(text.Bytes(), func(numbers []byte) []byte {
		flat := betweenNumbers.ReplaceAll(numbers, []byte(" "))
		flat = bytes.Replace(flat, []byte("[ "), []byte("["), 1)
		return bytes.Replace(flat, []byte(" ]"), []byte("]"), 1)
	}))
	return err
}
