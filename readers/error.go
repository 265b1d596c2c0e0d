package readers

import (
	"errors"
	"fmt"
	"strings"
)

// The reasons that stand behind an [Error]; errors.Is finds them.
var (
	ErrTruncated   = errors.New("file ends too early")
	ErrMalformed   = errors.New("malformed")
	ErrUnsupported = errors.New("not read here")
	ErrLimit       = errors.New("above a limit")
	ErrReference   = errors.New("reference that cannot be followed")
	ErrTime        = errors.New("no such state")
)

// An Error says where reading a file failed and why.
type Error struct {
	Path   string // as the caller or the referring file gave it
	Line   int    // 1-based; 0 in binary data
	Offset int64  // bytes from the start of the file
	Array  string // array being read; "" outside arrays
	Err    error  // the reason: what was found, what was needed, the mend

	file *file // for finding the line
}

// Error returns the place and the reason in one line.
func (e *Error) Error() string {
	var text strings.Builder
	text.WriteString(e.Path)
	switch {
	case e.Line > 0:
		fmt.Fprintf(&text, ":%d", e.Line)
	case e.Offset > 0:
		fmt.Fprintf(&text, ": byte %d", e.Offset)
	}
	if e.Array != "" {
		fmt.Fprintf(&text, ": array %q", e.Array)
	}
	text.WriteString(": ")
	text.WriteString(e.Err.Error())
	return text.String()
}

// Unwrap returns the reason.
func (e *Error) Unwrap() error { return e.Err }

// A reason is a sentence about a fault with the kind of the fault behind it.
type reason struct {
	kind error
	text string
}

func (r *reason) Error() string { return r.text }
func (r *reason) Unwrap() error { return r.kind }

func malformed(format string, values ...any) error {
	return &reason{ErrMalformed, fmt.Sprintf(format, values...)}
}

func truncated(format string, values ...any) error {
	return &reason{ErrTruncated, fmt.Sprintf(format, values...) + ": file ends too early"}
}

func unsupported(format string, values ...any) error {
	return &reason{ErrUnsupported, fmt.Sprintf(format, values...)}
}

func overLimit(format string, values ...any) error {
	return &reason{ErrLimit, fmt.Sprintf(format, values...)}
}

// placed puts a file's path before an error that has no place yet.
func placed(path string, err error) error {
	var place *Error
	if err == nil || errors.As(err, &place) {
		return err
	}
	return &Error{Path: path, Err: err}
}

// reasonOf returns the reason behind an error's place, or the error itself.
func reasonOf(err error) error {
	if place, ok := err.(*Error); ok {
		return place.Err
	}
	return err
}
