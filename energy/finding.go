package energy

import (
	"fmt"
	"slices"
)

// severities gives every finding's code its severity. The codes are part of the
// ledger's form.
var severities = map[string]string{
	"not-finite":         Error,
	"all-zero":           Error,
	"tangled-cells":      Error,
	"negative-density":   Error,
	"hooke-mismatch":     Error,
	"total-strain-used":  Error,
	"no-region":          Error,
	"mixed-locations":    Error,
	"study-contradicted": Error,
	"shear-convention":   Warning,
	"component-order":    Warning,
	"default-order":      Warning,
	"units-not-stated":   Warning,
	"units-suspect":      Warning,
	"asymmetric-tensor":  Warning,
	"unsupported-cells":  Warning,
	"balance-gap":        Warning,
	"large-strain":       Warning,

	"point-data-across-regions": Warning,
	"regions-overlap":           Warning,
	"criterion-unsuited":        Warning,
	"parts-not-accounted":       Warning,
	"degenerate-cells":          Warning,

	"nonlinear-run-advised":  Warning,
	"plastic-strain-present": Warning,
	"several-locations":      Warning,
	"outside-path":           Warning,
	"repeated-piece":         Warning,
	"array-not-everywhere":   Warning,
	"node-order":             Warning,
	"hotspot-pool":           Warning,
	"averaged-density":       Note,

	"error-not-estimated":     Warning,
	"hotspot-mesh-too-coarse": Warning,

	"error-estimated":      Note,
	"patches-not-used":     Note,
	"ghost-cells":          Note,
	"mirrored-cells":       Note,
	"limit-without-source": Note,
	"one-value-per-cell":   Note,

	// Of a test curve.
	"few-points":            Warning,
	"limit-within-noise":    Warning,
	"modulus-differs":       Warning,
	"modulus-scatter":       Warning,
	"no-proportional-limit": Warning,
	"strain-unit-suspect":   Warning,
	"window-past-limit":     Warning,
	"limits-within-noise":   Note,
	"no-offset-yield":       Note,
	"no-ramberg-osgood":     Note,
	"tangent-unresolved":    Note,
	"toe":                   Note,
	"true-converted":        Note,
	"units-assumed":         Note,

	// Of a comparison.
	"error-stands":         Error,
	"units-differ":         Warning,
	"models-differ":        Warning,
	"loads-differ":         Warning,
	"criteria-differ":      Warning,
	"regions-differ":       Warning,
	"materials-differ":     Warning,
	"finding-new":          Warning,
	"acceptance-gone":      Warning,
	"acceptance-new":       Note,
	"control-not-stated":   Note,
	"finding-gone":         Note,
	"hotspots-not-matched": Note,
	"note-new":             Note,
	"units-converted":      Note,
}

// graveCodes are those whose findings are errors instead where the case is grave.
var graveCodes = map[string]bool{"balance-gap": true, "parts-not-accounted": true}

// IsErrorFinding reports whether findings of a code are of severity error, or may be, the
// only kind that a study can and need accept.
func IsErrorFinding(code string) bool { return severities[code] == Error || graveCodes[code] }

// findings gathers what the reader of the numbers has to know.
type findings struct{ list []Finding }

// add appends a finding; cells 0 means that it does not concern single cells. A code
// that is not in the table is a mistake of the program.
func (f *findings) add(code string, cells int64, format string, arguments ...any) {
	severity, known := severities[code]
	if !known {
		panic("finding with the unknown code " + code)
	}
	f.append(severity, code, cells, format, arguments...)
}

// addGraded appends a finding whose severity depends on how grave the case is.
func (f *findings) addGraded(isGrave bool, code string, cells int64, format string, arguments ...any) {
	if !graveCodes[code] {
		panic("finding with the code " + code + ", which has one severity only")
	}
	severity := severities[code]
	if isGrave {
		severity = Error
	}
	f.append(severity, code, cells, format, arguments...)
}

func (f *findings) append(severity, code string, cells int64, format string, arguments ...any) {
	finding := Finding{Code: code, Severity: severity, Message: fmt.Sprintf(format, arguments...), Cells: None}
	if cells > 0 {
		finding.Cells = Number(cells)
	}
	f.list = append(f.list, finding)
}

// has reports whether there is a finding of that code.
func (f *findings) has(code string) bool {
	return slices.ContainsFunc(f.list, func(found Finding) bool { return found.Code == code })
}

// sorted returns the findings, errors first, in the order of their codes, with the
// study's reasons for living with them.
func (f *findings) sorted(acceptances []Acceptance) []Finding {
	rank := map[string]int{Error: 0, Warning: 1, Note: 2}
	list := slices.Clone(f.list)
	slices.SortStableFunc(list, func(a, b Finding) int {
		if byRank := rank[a.Severity] - rank[b.Severity]; byRank != 0 {
			return byRank
		}
		switch {
		case a.Code < b.Code:
			return -1
		case a.Code > b.Code:
			return 1
		}
		return 0
	})
	for i := range list {
		for _, acceptance := range acceptances {
			if acceptance.Code == list[i].Code {
				list[i].Accepted = Text(acceptance.Reason)
			}
		}
	}
	if list == nil {
		list = []Finding{}
	}
	return list
}
