package main

import (
	"fmt"
	"io"
	"os"
	"slices"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
	"golang.org/x/term"

	"strainledger/report"
)

// commonOptions are the flags that mean the same in every command that reads results.
type commonOptions struct {
	json       bool
	quiet      bool
	verbose    bool
	colour     string // always | never | auto
	workers    int    // 0: all processors
	noProgress bool

	allowOutside bool // follow references that leave the folder of the file that makes them
}

func (o *commonOptions) declare(flags *pflag.FlagSet) {
	flags.BoolVar(&o.json, "json", false, "print the machine-readable result, and nothing else, to standard output")
	flags.BoolVar(&o.quiet, "quiet", false, "print errors alone")
	flags.BoolVarP(&o.verbose, "verbose", "v", false, "say which array was taken for what and why, and how long it took")
	flags.StringVar(&o.colour, "color", "auto", "colour in the text: `WHEN` is always, never or auto (a terminal)")
	flags.IntVar(&o.workers, "workers", 0, "use `N` processors; without it, all")
	flags.BoolVar(&o.noProgress, "no-progress", false, "show no progress on the terminal")
	flags.BoolVar(&o.allowOutside, "allow-outside", false, "follow references of a file to files outside its folder")
}

// colourChoices are what --color may be.
var colourChoices = []string{"always", "never", "auto"}

// check refuses values that a flag cannot have.
func (o *commonOptions) check(command *cobra.Command) error {
	switch {
	case !slices.Contains(colourChoices, o.colour):
		return wrongCall(command, "--color %s: want always, never or auto", o.colour)
	case o.workers < 0:
		return wrongCall(command, "--workers %d: want 0 for all processors, or a number of them", o.workers)
	}
	return nil
}

// wrongCall returns the error of a call that the command cannot do.
func wrongCall(command *cobra.Command, format string, values ...any) error {
	return &callError{command.CommandPath(), fmt.Errorf(format, values...)}
}

// textOptions says how text for stdout is dressed.
func (o *commonOptions) textOptions(out io.Writer) report.TextOptions {
	return report.TextOptions{Colour: useColour(o.colour, os.Getenv, isTerminal(out))}
}

// useColour decides on colour: the flag, then NO_COLOR, FORCE_COLOR and TERM as their
// conventions have it, then whether people look at it.
func useColour(choice string, environment func(string) string, terminal bool) bool {
	switch {
	case choice == "always":
		return true
	case choice == "never", environment("NO_COLOR") != "":
		return false
	case environment("FORCE_COLOR") != "":
		return true
	case environment("TERM") == "dumb":
		return false
	}
	return terminal
}

// isTerminal reports whether a stream ends in a terminal.
func isTerminal(stream any) bool {
	file, isFile := stream.(*os.File)
	return isFile && term.IsTerminal(int(file.Fd()))
}
