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

	"point-data-across-regions": Warning,
	"regions-overlap":           Warning,
	"criterion-unsuited":        Warning,
	"parts-not-accounted":       Warning,
	"degenerate-cells":          Warning,

	"plastic-strain-present": Warning,
	"several-locations":      Warning,
	"outside-path":           Warning,
	"repeated-piece":         Warning,
	"array-not-everywhere":   Warning,
	"hotspot-pool":           Warning,

	"ghost-cells":          Note,
	"mirrored-cells":       Note,
	"limit-without-source": Note,
	"one-value-per-cell":   Note,
}

// IsErrorFinding reports whether a code is one of a finding of severity error, the
// only kind that a study can and need accept.
func IsErrorFinding(code string) bool { return severities[code] == Error }

// findings gathers what the reader of the numbers has to know.
type findings struct{ list []Finding }

// add appends a finding; cells 0 means that it does not concern single cells. A code
// that is not in the table is a mistake of the program.
func (f *findings) add(code string, cells int64, format string, arguments ...any) {
	severity, known := severities[code]
	if !known {
		panic("finding with the unknown code " + code)
	}
	finding := Finding{Code: code, Severity: severity, Message: fmt.Sprintf(format, arguments...), Cells: None}
	if cells > 0 {
		finding.Cells = Number(cells)
	}
	f.list = append(f.list, finding)
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
