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

// writeJUnit writes one suite for the run with one case for each requirement.
func writeJUnit(w io.Writer, ledger *energy.Ledger) error {
	suite := junitSuite{Name: titleOf(ledger)}
	for i := range ledger.Requirements {
		requirement := &ledger.Requirements[i]
		suite.add(requirement, regionName(requirement.Region), &ledger.Units)
	}
	return suite.write(w)
}

// add adds a case for a requirement: a failure, with value and bound, where it is not
// met, an error where its value is not available. Times are 0, so that the same input
// gives the same bytes.
func (s *junitSuite) add(requirement *energy.RequirementResult, class string, units *energy.UnitLabels) {
	entry := junitCase{Name: requirement.Name, Class: class}
	outcome := &junitOutcome{Message: requirementSubject(requirement) + ": " + requirementBasis(requirement, units), Type: requirement.Quantity}
	switch {
	case requirement.Met:
	case requirement.Value.Exists():
		entry.Failure = outcome
		s.Failures++
	default:
		entry.Error = outcome
		s.Errors++
	}
	s.Tests++
	s.Cases = append(s.Cases, entry)
}

func (s *junitSuite) write(w io.Writer) error {
	if _, err := io.WriteString(w, xml.Header); err != nil {
		return err
	}
	encoder := xml.NewEncoder(w)
	encoder.Indent("", "  ")
	if err := encoder.Encode(junitSuites{Suite: *s}); err != nil {
		return err
	}
	_, err := io.WriteString(w, "\n")
	return err
}
