package report

import (
	"fmt"
	"slices"
	"strings"

	"strainledger/energy"
)

// verdictWords returns what was judged and what stands against the numbers. It never
// says that the part is good.
func verdictWords(requirements []energy.RequirementResult, findings []energy.Finding) string {
	words := "nothing was judged"
	if len(requirements) > 0 {
		words = metWords(requirements) + " stated requirements met"
	}
	errors, warnings, accepted := countFindings(findings)
	var counts []string
	if errors > 0 {
		counts = append(counts, countOf(errors, "error"))
	}
	if warnings > 0 {
		counts = append(counts, countOf(warnings, "warning"))
	}
	if accepted > 0 {
		counts = append(counts, countOf(accepted, "accepted finding"))
	}
	if len(counts) == 0 {
		return words
	}
	return words + "; " + strings.Join(counts, ", ")
}

// metWords returns how many of the requirements are met: "3 of 3".
func metWords(requirements []energy.RequirementResult) string {
	met := 0
	for _, requirement := range requirements {
		if requirement.Met {
			met++
		}
	}
	return fmt.Sprintf("%d of %d", met, len(requirements))
}

// countFindings counts the errors and warnings that stand, and those that are accepted.
func countFindings(findings []energy.Finding) (errors, warnings, accepted energy.Number) {
	for _, finding := range findings {
		switch {
		case finding.Severity == energy.Note:
		case finding.Accepted != "":
			accepted++
		case finding.Severity == energy.Error:
			errors++
		default:
			warnings++
		}
	}
	return errors, warnings, accepted
}

// verdictSection is the verdict with how its numbers were sampled, the state's time, the
// limits' sources, and the reasons for what is accepted.
func verdictSection(ledger *energy.Ledger) section {
	s := section{heading: "Verdict"}
	s.say(verdictWords(ledger.Requirements, ledger.Findings), verdictTone(ledger.Requirements, ledger.Findings))
	t := &table{columns: []column{{kind: word}, {kind: prose}}}
	t.add("sampled", samplingWords(ledger))
	t.add("state", timeWords(ledger.Sources))
	for _, limit := range limitWords(ledger) {
		t.add("limit", limit)
	}
	addAccepted(t, ledger.Findings)
	s.table = t
	return s
}

// addAccepted adds the reasons for what is accepted, each once.
func addAccepted(t *table, findings []energy.Finding) {
	seen := map[string]bool{}
	for _, finding := range findings {
		reason := finding.Code + ": " + string(finding.Accepted)
		if finding.Accepted != "" && !seen[reason] {
			seen[reason] = true
			t.add("accepted", reason)
		}
	}
}

func verdictTone(requirements []energy.RequirementResult, findings []energy.Finding) tone {
	worst := plainTone
	for _, requirement := range requirements {
		if !requirement.Met {
			worst = errorTone
		}
	}
	for _, finding := range findings {
		worst = max(worst, findingTone(&finding))
	}
	return worst
}

// samplingWords says where the stresses stand that the limit was held against.
func samplingWords(ledger *energy.Ledger) string {
	stress, strain := ledger.Fields.Stress, ledger.Fields.Strain
	switch {
	case energy.EnergySource(ledger.Model.EnergyFrom) == energy.FromDisplacement:
		return "once per cell, of the volume-mean stress"
	case stress != nil && strain != nil && stress.On != strain.On:
		return "stress " + placeWords(stress.On) + ", strain " + placeWords(strain.On)
	case stress != nil:
		return placeWords(stress.On)
	case strain != nil:
		return placeWords(strain.On)
	}
	return "not known: no field is named"
}

// timeWords says which state the files hold.
func timeWords(sources []energy.SourceFile) string {
	var times []string
	for _, source := range sources {
		if text := plain(source.Time); source.Time.Exists() && !slices.Contains(times, text) {
			times = append(times, text)
		}
	}
	switch len(times) {
	case 0:
		return "the files state no time"
	case 1:
		return "time " + times[0]
	}
	return "times " + strings.Join(times, ", ")
}

// limitWords says of each limit where it comes from.
func limitWords(ledger *energy.Ledger) []string {
	var words []string
	for i := range ledger.Materials {
		material := &ledger.Materials[i]
		if !material.ProportionalLimit.Exists() {
			continue
		}
		limit := withUnit(plain(material.ProportionalLimit), inStress, &ledger.Units)
		if compression := material.ProportionalLimitCompression; compression.Exists() {
			limit += ", in compression " + withUnit(plain(compression), inStress, &ledger.Units)
		}
		words = append(words, material.Name+": "+limit+", "+limitSource(material))
	}
	if len(words) == 0 {
		return []string{"none is stated"}
	}
	return words
}

// findingsSection lists the findings in the ledger's order, the gravest first.
func findingsSection(findings []energy.Finding, units *energy.UnitLabels) section {
	if len(findings) == 0 {
		return sentenceSection("Findings", "None.")
	}
	t := &table{columns: []column{
		{kind: word, heading: "severity"},
		{kind: word, heading: "finding"},
		numbers("cells", units),
		{kind: prose, heading: "what it means"},
	}}
	for _, finding := range findings {
		message := finding.Message
		if finding.Accepted != "" {
			message += " Accepted: " + string(finding.Accepted)
		}
		cells := ""
		if finding.Cells.Exists() {
			cells = grouped(finding.Cells)
		}
		t.add(finding.Severity, finding.Code, cells, message)
		t.mark(0, findingTone(&finding))
	}
	t.dropIdle()
	return newSection("Findings", t)
}

func findingTone(finding *energy.Finding) tone {
	switch {
	case finding.Accepted != "":
		return plainTone
	case finding.Severity == energy.Error:
		return errorTone
	case finding.Severity == energy.Warning:
		return warningTone
	}
	return plainTone
}

// requirementsSection lists the requirements in the study's order.
func requirementsSection(ledger *energy.Ledger) section {
	if len(ledger.Requirements) == 0 {
		return sentenceSection("Requirements", "None is stated.")
	}
	t := &table{columns: []column{
		{kind: word, heading: "outcome"},
		{kind: name, heading: "requirement"},
		{kind: name, heading: "quantity"},
		{kind: prose, heading: "value and bound"},
	}}
	for i := range ledger.Requirements {
		requirement := &ledger.Requirements[i]
		outcome, tone := outcomeWord(requirement)
		t.add(outcome, requirement.Name, requirementSubject(requirement), requirementBasis(requirement, &ledger.Units))
		t.mark(0, tone)
	}
	return newSection("Requirements", t)
}

func outcomeWord(requirement *energy.RequirementResult) (string, tone) {
	if requirement.Met {
		return "met", plainTone
	}
	return "not met", errorTone
}

// requirementSubject names what is judged: "energy of web".
func requirementSubject(requirement *energy.RequirementResult) string {
	return requirement.Quantity + " of " + regionName(requirement.Region)
}

// requirementBasis returns value and bound: "98.123 mJ, at most 120 mJ". A value
// that differs from its bound only beyond the usual digits is given in full.
func requirementBasis(requirement *energy.RequirementResult, units *energy.UnitLabels) string {
	kind := quantityOf(requirement.Quantity).kind
	var parts []string
	switch {
	case requirement.Value.Exists():
		parts = append(parts, withUnit(requirementValue(requirement, kind), kind, units))
	case requirement.Why == "":
		parts = append(parts, "not available")
	}
	if requirement.AtMost.Exists() {
		parts = append(parts, "at most "+withUnit(plain(requirement.AtMost), kind, units))
	}
	if requirement.AtLeast.Exists() {
		parts = append(parts, "at least "+withUnit(plain(requirement.AtLeast), kind, units))
	}
	basis := strings.Join(parts, ", ")
	if requirement.Why == "" {
		return basis
	}
	return strings.TrimPrefix(basis+": ", ": ") + string(requirement.Why)
}

// requirementValue prints the value as the bound is stated: shares as parts of 1.
func requirementValue(requirement *energy.RequirementResult, kind unitKind) string {
	value := requirement.Value
	if kind == inCounts {
		return plain(value)
	}
	text := significant(value)
	for _, bound := range []energy.Number{requirement.AtMost, requirement.AtLeast} {
		if value != bound && text == significant(bound) {
			return plain(value)
		}
	}
	return text
}
