package report

import (
	"encoding/xml"
	"io"

	"strainledger/energy"
)

// The JUnit XML form of the requirements, for the tools that collect test results.
type (
	junitSuites struct {
		XMLName xml.Name   `xml:"testsuites"`
		Suite   junitSuite `xml:"testsuite"`
	}
	junitSuite struct {
		Name     string      `xml:"name,attr"`
		Tests    int         `xml:"tests,attr"`
		Failures int         `xml:"failures,attr"`
		Errors   int         `xml:"errors,attr"`
		Skipped  int         `xml:"skipped,attr"`
		Time     int         `xml:"time,attr"`
		Cases    []junitCase `xml:"testcase"`
	}
	junitCase struct {
		Name    string        `xml:"name,attr"`
		Class   string        `xml:"classname,attr"`
		Time    int           `xml:"time,attr"`
		Failure *junitOutcome `xml:"failure"`
		Error   *junitOutcome `xml:"error"`
	}
	junitOutcome struct {
		Message string `xml:"message,attr"`
		Type    string `xml:"type,attr"`
	}
)

// writeJUnit writes one suite for the run with one case for each requirement: a failure,
// with value and bound, where it is not met, an error where its value is not available.
// Times are 0, so that the same input gives the same bytes.
func writeJUnit(w io.Writer, ledger *energy.Ledger) error {
	suite := junitSuite{Name: titleOf(ledger), Tests: len(ledger.Requirements)}
	for i := range ledger.Requirements {
		requirement := &ledger.Requirements[i]
		entry := junitCase{Name: requirement.Name, Class: regionName(requirement.Region)}
		outcome := &junitOutcome{Message: requirementSubject(requirement) + ": " + requirementBasis(requirement, &ledger.Units), Type: requirement.Quantity}
		switch {
		case requirement.Met:
		case requirement.Value.Exists():
			entry.Failure = outcome
			suite.Failures++
		default:
			entry.Error = outcome
			suite.Errors++
		}
		suite.Cases = append(suite.Cases, entry)
	}
	if _, err := io.WriteString(w, xml.Header); err != nil {
		return err
	}
	encoder := xml.NewEncoder(w)
	encoder.Indent("", "  ")
	if err := encoder.Encode(junitSuites{Suite: suite}); err != nil {
		return err
	}
	_, err := io.WriteString(w, "\n")
	return err
}
