package energy

import (
	"fmt"
	"strings"
)

// A runFinding is a finding of one run or several that have it alike.
type runFinding struct {
	code, text string
	runs       []int
	accepted   Text
}

// find reports something of one run. What was found alike in another run is reported
// once, for both.
func (c *comparing) find(code string, run int, format string, arguments ...any) *runFinding {
	text := fmt.Sprintf(format, arguments...)
	for _, found := range c.found {
		if found.code == code && found.text == text {
			found.runs = append(found.runs, run)
			return found
		}
	}
	c.found = append(c.found, &runFinding{code: code, text: text, runs: []int{run}})
	return c.found[len(c.found)-1]
}

// allFindings returns what was found, in the order of a ledger's findings.
func (c *comparing) allFindings() []Finding {
	for _, found := range c.found {
		c.findings.add(found.code, 0, "%s: %s", runNames(found.runs), found.text)
		c.findings.list[len(c.findings.list)-1].Accepted = found.accepted
	}
	return c.findings.sorted(c.options.Acceptances)
}

// runNames names runs, whose numbers rise: run 3; runs 1, 2; runs 1 to 7, 9.
func runNames(runs []int) string {
	if len(runs) == 1 {
		return fmt.Sprintf("run %d", runs[0])
	}
	var parts []string
	for first := 0; first < len(runs); {
		last := first
		for last+1 < len(runs) && runs[last+1] == runs[last]+1 {
			last++
		}
		switch last - first {
		case 0:
			parts = append(parts, fmt.Sprint(runs[first]))
		case 1:
			parts = append(parts, fmt.Sprintf("%d, %d", runs[first], runs[last]))
		default:
			parts = append(parts, fmt.Sprintf("%d to %d", runs[first], runs[last]))
		}
		first = last + 1
	}
	return "runs " + strings.Join(parts, ", ")
}
