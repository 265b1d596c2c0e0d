package main

import (
	"fmt"
	"io"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// helpWidth is the number of columns of a help text, examples apart.
const helpWidth = 98

// helpText returns the help of a command: what it does, examples, how it is called,
// its commands and flags.
func helpText(command *cobra.Command) string {
	var text strings.Builder
	section := func(heading, body string) {
		if body != "" {
			fmt.Fprintf(&text, "\n%s:\n%s\n", heading, strings.TrimRight(body, "\n"))
		}
	}
	fmt.Fprintf(&text, "%s: %s\n", command.CommandPath(), command.Short)
	section("Examples", command.Example)
	if command.Long != "" {
		fmt.Fprintf(&text, "\n%s\n", command.Long)
	}
	if command.HasAvailableSubCommands() {
		section("Usage", "  "+command.CommandPath()+" COMMAND [FLAG...] [FILE...]")
		section("Commands", commandLines(command)+"\n  Each tells more: "+command.CommandPath()+" help COMMAND")
	} else {
		section("Usage", "  "+command.Root().Name()+" "+command.Use)
	}
	section("Flags", flagLines(command.LocalFlags()))
	return text.String()
}

// commandLines returns one entry for each command.
func commandLines(parent *cobra.Command) string {
	var entries [][2]string
	for _, command := range parent.Commands() {
		if command.IsAvailableCommand() {
			entries = append(entries, [2]string{command.Name(), command.Short})
		}
	}
	return columns(entries)
}

// flagLines returns one entry for each flag; a word in back quotes in its description
// names its value.
func flagLines(flags *pflag.FlagSet) string {
	var entries [][2]string
	flags.VisitAll(func(flag *pflag.Flag) {
		value, usage := pflag.UnquoteUsage(flag)
		name := "    --" + flag.Name
		if flag.Shorthand != "" {
			name = "-" + flag.Shorthand + ", --" + flag.Name
		}
		if flag.Value.Type() != "bool" {
			name += " " + value
		}
		entries = append(entries, [2]string{name, usage})
	})
	return columns(entries)
}

// columns sets entries in two columns; what the second does not hold goes on below.
func columns(entries [][2]string) string {
	width := 0
	for _, entry := range entries {
		width = max(width, len(entry[0]))
	}
	var text strings.Builder
	for _, entry := range entries {
		line := fmt.Sprintf("  %-*s ", width+1, entry[0])
		indent := len(line)
		for _, word := range strings.Fields(entry[1]) {
			if len(line)+1+len(word) > helpWidth {
				text.WriteString(line + "\n")
				line = strings.Repeat(" ", indent)
			}
			line += " " + word
		}
		text.WriteString(line + "\n")
	}
	return text.String()
}

// writeHelp prints the help of a command to stdout.
func (p *program) writeHelp(command *cobra.Command) error {
	command.InitDefaultHelpFlag()
	return p.print(func(w io.Writer) error {
		_, err := io.WriteString(w, helpText(command))
		return err
	})
}
