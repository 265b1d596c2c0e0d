package main

import (
	"io"
	"strings"

	"github.com/spf13/cobra"
)

// newRoot returns the command line of the program.
func newRoot(p *program) *cobra.Command {
	root := &cobra.Command{
		Use:   "strainledger",
		Short: "keep an account of the strain energy in finite-element results",
		Long: `Strainledger reads finite-element results from VTK files and keeps an account of
the strain energy they hold: how much each region stores, which cells are past the
proportional limit of their material, and where energy gathers.`,
		Example: `  strainledger demo
  strainledger inspect bracket.vtu
  strainledger tally bracket.vtu --units "mm MPa" --material "name=S355 youngs_modulus=210000 poissons_ratio=0.3 proportional_limit=330"
  strainledger tally bracket.toml --out reports`,
		SilenceErrors: true,
		SilenceUsage:  true,
		Args:          cobra.ArbitraryArgs,
		RunE: func(command *cobra.Command, args []string) error {
			if len(args) == 0 {
				return wrongCall(command, "no command given")
			}
			return unknownCommand(command, args[0])
		},
	}
	root.SetIn(p.in)
	root.SetOut(p.out)
	root.SetErr(p.err)
	root.SetHelpFunc(func(command *cobra.Command, _ []string) {
		if err := p.writeHelp(command); err != nil {
			p.fail(err)
		}
	})
	root.CompletionOptions.DisableDefaultCmd = true
	root.SetFlagErrorFunc(func(command *cobra.Command, err error) error { return &callError{command.CommandPath(), err} })
	root.SetHelpCommand(newHelp(p, root))
	root.AddCommand(newTally(p), newCompare(p), newInspect(p), newCurve(p), newDemo(p), newVersion(p), newCompletion(p, root))
	return root
}

// unknownCommand names the commands there are.
func unknownCommand(root *cobra.Command, name string) error {
	var known []string
	for _, command := range root.Commands() {
		if command.IsAvailableCommand() {
			known = append(known, command.Name())
		}
	}
	return wrongCall(root, "no command %q; there are %s", name, strings.Join(known, ", "))
}

// newHelp returns the command help.
func newHelp(p *program, root *cobra.Command) *cobra.Command {
	return &cobra.Command{
		Use:     "help [COMMAND]",
		Short:   "tell what a command does",
		Example: "  strainledger help tally",
		Args:    atMostOne("command"),
		RunE: func(_ *cobra.Command, args []string) error {
			if len(args) == 0 {
				return p.writeHelp(root)
			}
			for _, command := range root.Commands() {
				if command.Name() == args[0] && !command.Hidden {
					return p.writeHelp(command)
				}
			}
			return unknownCommand(root, args[0])
		},
	}
}

// shells are those that newCompletion writes for.
var shells = []string{"bash", "zsh", "fish", "powershell"}

// newCompletion returns the command completion.
func newCompletion(p *program, root *cobra.Command) *cobra.Command {
	return &cobra.Command{
		Use:   "completion SHELL",
		Short: "print the completion script of a shell: " + strings.Join(shells, ", "),
		Example: `  source <(strainledger completion bash)
  strainledger completion fish > ~/.config/fish/completions/strainledger.fish`,
		ValidArgs: shells,
		Args: func(command *cobra.Command, args []string) error {
			if len(args) != 1 {
				return wrongCall(command, "want one shell of %s", strings.Join(shells, ", "))
			}
			return nil
		},
		RunE: func(command *cobra.Command, args []string) error {
			write := map[string]func(io.Writer) error{
				"bash":       func(w io.Writer) error { return root.GenBashCompletionV2(w, true) },
				"zsh":        root.GenZshCompletion,
				"fish":       func(w io.Writer) error { return root.GenFishCompletion(w, true) },
				"powershell": root.GenPowerShellCompletionWithDesc,
			}[args[0]]
			if write != nil {
				return p.print(write)
			}
			return wrongCall(command, "no shell %q; want one of %s", args[0], strings.Join(shells, ", "))
		},
	}
}

// atMostOne refuses more than one argument.
func atMostOne(what string) cobra.PositionalArgs {
	return func(command *cobra.Command, args []string) error {
		if len(args) > 1 {
			return wrongCall(command, "found %d arguments, want one %s at most", len(args), what)
		}
		return nil
	}
}

// completeFiles lets the shell complete names of files that are read.
func completeFiles(extensions ...string) cobra.CompletionFunc {
	return func(*cobra.Command, []string, string) ([]cobra.Completion, cobra.ShellCompDirective) {
		return extensions, cobra.ShellCompDirectiveFilterFileExt
	}
}
