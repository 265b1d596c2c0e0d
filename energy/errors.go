package energy

import "fmt"

// A StudyError says that the call or the study asks for what cannot be done: an
// unknown region, a missing value.
type StudyError struct{ Err error }

func (e *StudyError) Error() string { return e.Err.Error() }

// Unwrap returns the reason.
func (e *StudyError) Unwrap() error { return e.Err }

// An InputError says that the results cannot be used: fields missing, or undecidable
// where the decision changes the energy.
type InputError struct{ Err error }

func (e *InputError) Error() string { return e.Err.Error() }

// Unwrap returns the reason.
func (e *InputError) Unwrap() error { return e.Err }

func studyError(format string, arguments ...any) error {
	return &StudyError{fmt.Errorf(format, arguments...)}
}

func inputError(format string, arguments ...any) error {
	return &InputError{fmt.Errorf(format, arguments...)}
}
