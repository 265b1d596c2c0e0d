package report

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"strainledger/energy"
)

// InspectionText writes the inspection for people, at most 100 columns wide.
func InspectionText(w io.Writer, inspection *energy.Inspection, options TextOptions) error {
	page := textPage{colour: options.Colour}
	for i := range inspection.Files {
		if i > 0 {
			page.line("")
		}
		file := &inspection.Files[i]
		page.wrapped(file.Path, "", bold)
		for _, s := range inspectionSections(file) {
			page.section(&s)
		}
	}
	findings := findingsSection(inspection.Findings, &energy.UnitLabels{})
	page.section(&findings)
	_, err := io.WriteString(w, page.text.String())
	return err
}

func inspectionSections(file *energy.InspectedFile) []section {
	sections := []section{contentSection(file), typesSection(file.CellsByType)}
	if len(file.Blocks) > 0 {
		sections = append(sections, blocksSection(file.Blocks))
	}
	if len(file.Arrays) == 0 {
		return append(sections, sentenceSection("Arrays", "None."))
	}
	sections = append(sections, arraysSection(file.Arrays))
	if taken := takenForSection(file.Arrays); len(taken.table.rows) > 0 {
		sections = append(sections, taken)
	}
	return sections
}

func contentSection(file *energy.InspectedFile) section {
	t := &table{columns: []column{{kind: word}, {kind: prose}}}
	t.add("format", file.Format)
	t.add("bytes", grouped(energy.Number(file.Bytes)))
	t.add("points", grouped(energy.Number(file.Points)))
	t.add("cells", grouped(energy.Number(file.Cells)))
	t.add("times", statesWords(file.Times))
	if bounds := file.Bounds; bounds != nil {
		for i, axis := range []string{"x", "y", "z"} {
			t.add(axis, brief(energy.Number(bounds[2*i]))+" to "+brief(energy.Number(bounds[2*i+1])))
		}
	}
	if measure := file.Measure; measure != nil {
		t.add("length", brief(measure.Length))
		t.add("area", brief(measure.Area))
		t.add("volume", brief(measure.Volume))
	}
	return newSection("Content", t)
}

func statesWords(times []float64) string {
	switch len(times) {
	case 0:
		return "the file states no time"
	case 1:
		return plain(energy.Number(times[0]))
	}
	return fmt.Sprintf("%d states, %s to %s", len(times),
		plain(energy.Number(times[0])), plain(energy.Number(times[len(times)-1])))
}

func typesSection(types []energy.InspectedType) section {
	if len(types) == 0 {
		return sentenceSection("Cells by type", "No cells.")
	}
	t := &table{columns: []column{
		{kind: number, heading: "type"},
		{kind: name, heading: "name"},
		{kind: number, heading: "cells"},
	}}
	for _, entry := range types {
		t.add(fmt.Sprint(entry.Type), entry.Name, grouped(energy.Number(entry.Cells)))
	}
	return newSection("Cells by type", t)
}

func blocksSection(blocks []energy.InspectedBlock) section {
	t := &table{columns: []column{
		{kind: name, heading: "block"},
		{kind: number, heading: "points"},
		{kind: number, heading: "cells"},
	}}
	for _, block := range blocks {
		t.add(block.Name, grouped(energy.Number(block.Points)), grouped(energy.Number(block.Cells)))
	}
	return newSection("Blocks and pieces", t)
}

// arraysSection lists the arrays; lowest and highest are over all components.
func arraysSection(arrays []energy.InspectedArray) section {
	t := &table{columns: []column{
		{kind: name, heading: "array"},
		{kind: word, heading: "on"},
		{kind: word, heading: "type"},
		{kind: word, heading: "stored"},
		{kind: number, heading: "components"},
		{kind: number, heading: "tuples"},
		{kind: number, heading: "finite"},
		{kind: number, heading: "lowest"},
		{kind: number, heading: "highest"},
	}}
	for i := range arrays {
		array := &arrays[i]
		lowest, highest := rangeOf(array)
		t.add(
			array.Name,
			array.On,
			array.Type,
			string(array.Coding),
			grouped(energy.Number(array.Components)),
			grouped(energy.Number(array.Tuples)),
			inCounts.text(array.Finite),
			brief(lowest),
			brief(highest),
		)
	}
	hasRanges := slices.ContainsFunc(arrays, func(a energy.InspectedArray) bool { return a.Finite.Exists() })
	t.dropIdle()
	s := newSection("Arrays", t)
	if hasRanges {
		s.note("Lowest and highest are over all components.")
	} else {
		s.note("No values were read: --ranges reads them and gives their ranges.")
	}
	return s
}

// rangeOf returns the least and the largest finite value over all components.
func rangeOf(array *energy.InspectedArray) (lowest, highest energy.Number) {
	lowest, highest = energy.None, energy.None
	for _, value := range array.Min {
		if value.Exists() && !(lowest <= value) {
			lowest = value
		}
	}
	for _, value := range array.Max {
		if value.Exists() && !(highest >= value) {
			highest = value
		}
	}
	return lowest, highest
}

// takenForSection says for each array that serves a field, or could, why.
func takenForSection(arrays []energy.InspectedArray) section {
	t := &table{columns: []column{
		{kind: name, heading: "array"},
		{kind: word, heading: "taken for"},
		{kind: prose, heading: "why"},
	}}
	for i := range arrays {
		array := &arrays[i]
		if array.TakenFor == "" && array.Why == "" {
			continue
		}
		taken := fieldName(array.TakenFor)
		if taken == "" {
			taken = "nothing"
		}
		t.add(array.Name, taken, string(array.Why))
	}
	return newSection("What the arrays are taken for", t)
}

// fieldName returns a field's key in words.
func fieldName(key energy.Text) string { return strings.ReplaceAll(string(key), "_", " ") }
