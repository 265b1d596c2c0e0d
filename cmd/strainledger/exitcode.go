package main

import (
	"context"
	"errors"
	"syscall"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
)

// The exit codes. A call ends with the worst of what happened, which is the largest.
const (
	codeDone       = 0   // every requirement met, no finding of severity error unaccepted
	codeNotMet     = 1   // done; a requirement is not met or such a finding stands
	codeWrongCall  = 2   // the call or the study is wrong
	codeUnusable   = 3   // the results cannot be used
	codeNotWritten = 4   // a report could not be written
	codeInterrupt  = 130 // SIGINT
	codeTerminate  = 143 // SIGTERM
)

// A callError says that the command line asks for what cannot be done.
type callError struct {
	command string // whose help tells more
	err     error
}

func (e *callError) Error() string {
	return e.err.Error() + "; see " + e.command + " --help"
}

func (e *callError) Unwrap() error { return e.err }

// A reportError says that a report could not be written.
type reportError struct{ err error }

func (e *reportError) Error() string { return e.err.Error() }

func (e *reportError) Unwrap() error { return e.err }

// exitCode returns the code of an error by its type. Errors that have no type of
// their own come from reading: the results cannot be used.
func exitCode(err error) int {
	var (
		interrupted *interruption
		call        *callError
		faults      study.Faults
		asked       *energy.StudyError
		unwritten   *reportError
		column      *energy.ColumnError
	)
	switch {
	case err == nil:
		return codeDone
	case errors.As(err, &interrupted):
		if interrupted.signal == syscall.SIGTERM {
			return codeTerminate
		}
		return codeInterrupt
	case errors.Is(err, context.Canceled): // the interruption's own code follows
		return codeDone
	case errors.As(err, &call), errors.As(err, &faults), errors.As(err, &asked):
		return codeWrongCall
	case errors.As(err, &unwritten), errors.As(err, &column):
		return codeNotWritten
	}
	return codeUnusable
}

// verdictCode returns the code of a run or a comparison that was done.
func verdictCode(requirements []energy.RequirementResult, findings []energy.Finding) int {
	for _, requirement := range requirements {
		if !requirement.Met {
			return codeNotMet
		}
	}
	for _, finding := range findings {
		if finding.Severity == energy.Error && finding.Accepted == "" {
			return codeNotMet
		}
	}
	return codeDone
}
