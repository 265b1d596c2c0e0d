package study

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"
)

// A Fault is one thing that is wrong with a study: where it stands, what was found
// and what to write instead.
type Fault struct {
	Path         string // the study file; "" for what the command line says
	Line, Column int    // from 1, columns in characters; 0 for the command line and for the file as a whole
	Flag         string // the flag as it was given; "" in a study file
	Message      string
}

// Error returns FILE:LINE:COLUMN: MESSAGE on one line, or FLAG: MESSAGE.
func (f Fault) Error() string {
	switch {
	case f.Flag != "":
		return f.Flag + ": " + f.Message
	case f.Line > 0:
		return fmt.Sprintf("%s:%d:%d: %s", printable(f.Path), f.Line, f.Column, f.Message)
	case f.Path != "":
		return printable(f.Path) + ": " + f.Message
	}
	return f.Message
}

// Faults holds everything that is wrong with a study, in the order of its lines; what
// the command line adds comes first.
type Faults []Fault

// Error returns one line for each fault.
func (f Faults) Error() string {
	lines := make([]string, len(f))
	for i := range f {
		lines[i] = f[i].Error()
	}
	return strings.Join(lines, "\n")
}

// A place is where a key or a value stands.
type place struct {
	line, column int
	flag         string
}

// faults collects what is found wrong.
type faults struct {
	path  string
	found Faults
}

func (f *faults) add(at place, format string, values ...any) {
	fault := Fault{Path: f.path, Line: at.line, Column: at.column, Flag: at.flag, Message: fmt.Sprintf(format, values...)}
	if fault.Flag != "" || fault.Line == 0 {
		fault.Path = ""
	}
	f.found = append(f.found, fault)
}

// err returns the faults in order, or nil without any.
func (f *faults) err() error {
	if len(f.found) == 0 {
		return nil
	}
	slices.SortStableFunc(f.found, func(a, b Fault) int {
		return cmp.Or(cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column))
	})
	return f.found
}

// printable returns a path as it is, quoted where a control character in it would
// break the line.
func printable(path string) string {
	if quoted := strconv.Quote(path); strings.Contains(quoted, `\`) && !strings.Contains(path, `\`) && !strings.Contains(path, `"`) {
		return quoted
	}
	return path
}

// quote returns a name in quotes, shortened where it is too long for a message.
func quote(name string) string {
	if runes := []rune(name); len(runes) > 60 {
		name = string(runes[:57]) + "..."
	}
	return strconv.Quote(name)
}
