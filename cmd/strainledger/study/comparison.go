package study

import (
	"slices"

	"strainledger/energy"
)

// comparisonTables are what the study of a comparison may hold. Everything else is of a
// run.
var comparisonTables = []string{"title", "units", "loading", "compare", "require", "accept", "review"}

// ReadComparison reads how runs are compared: from the file of that path, from the
// requirements of the flags over it, or from these alone where the path is empty. The
// error is of type Faults.
func ReadComparison(path string, flags Flags) (*energy.CompareOptions, error) {
	var data []byte
	if path != "" {
		var err error
		if data, err = readFile(path); err != nil {
			return nil, Faults{{Path: path, Message: err.Error()}}
		}
	}
	to := &faults{path: path}
	options := parseComparison(data, flags, to)
	return options, to.err()
}

// parseComparison reads the study of a comparison; nil where the text is no TOML.
func parseComparison(data []byte, flags Flags, to *faults) *energy.CompareOptions {
	root := parse(data, to)
	if root == nil {
		return nil
	}
	flags.add(root, to)
	root.keys = slices.DeleteFunc(root.keys, func(entry *node) bool {
		isOfRuns := findKey(entry.name) != nil && !slices.Contains(comparisonTables, entry.name)
		if isOfRuns {
			to.add(entry.place, "%s has no meaning in the study of a comparison; it belongs into the studies of the runs", quote(entry.name))
		}
		return isOfRuns
	})
	check(root, to)
	r := reading{root: root, faults: to, isComparison: true}
	r.units()
	r.loading()
	r.verdict()
	return &energy.CompareOptions{
		Title: r.to.Title, Length: r.to.Length, Stress: r.to.Stress, Mass: r.to.Mass,
		Loading: r.to.Loading, HotspotTolerance: r.to.HotspotTolerance,
		Requirements: r.to.Requirements, Acceptances: r.to.Acceptances, Review: r.to.Review,
	}
}

// ExpandRuns returns the files of the names of runs on the command line: a glob becomes
// the files it matches in natural order. A run may be named twice. The error is of type
// Faults.
func ExpandRuns(names []string) ([]string, error) {
	to := &faults{}
	var files []string
	for _, name := range names {
		files = append(files, match("", &node{shape: isText, text: name}, to)...)
	}
	return files, to.err()
}
