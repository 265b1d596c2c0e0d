package main

import (
	"context"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"strainledger/cmd/strainledger/study"
)

// tallyOptions are the flags of the command tally.
type tallyOptions struct {
	commonOptions
	study.Flags
	together bool
	steps    bool
	each     bool
	check    bool
	hash     bool
	out      string
}

func (o *tallyOptions) declare(flags *pflag.FlagSet) {
	o.commonOptions.declare(flags)
	flags.StringVar(&o.Units, "units", "", "`UNITS` of the numbers in the files: \"mm MPa\", with a unit of mass if needed")
	flags.StringArrayVar(&o.Materials, "material", nil, "a material by its `KEYS` in a study: \"name=S355 youngs_modulus=210000\"; once for each material")
	flags.StringVar(&o.Idealisation, "idealisation", "", "what cells stand for: `KIND` is solid, plane-stress, plane-strain or axisymmetric")
	flags.StringVar(&o.Thickness, "thickness", "", "thickness of plane models: `T` is a number, or the name of a cell array")
	flags.StringArrayVar(&o.Requirements, "require", nil, "a `BOUND` that has to hold: \"energy of web <= 120\"; once for each bound")
	flags.BoolVar(&o.together, "together", false, "several files are blocks of one model")
	flags.BoolVar(&o.steps, "steps", false, "several files are states in load order")
	flags.BoolVar(&o.each, "each", false, "several files are runs of their own; reports go to DIR/NAME")
	flags.BoolVar(&o.check, "check", false, "validate study and files, print the plan, compute nothing")
	flags.BoolVar(&o.hash, "hash", false, "record the SHA-256 of study and files; --out does so too")
	flags.StringVar(&o.out, "out", "", "write all reports to the folder `DIR` instead of a text to standard output")
}

// newTally returns the command tally.
func newTally(p *program) *cobra.Command {
	options := &tallyOptions{}
	command := &cobra.Command{
		Use:   "tally [STUDY.toml] [FILE...] [FLAG...]",
		Short: "account for the strain energy of one run: regions, limits, hotspots, requirements",
		Example: `  strainledger tally bracket.toml
  strainledger tally bracket.toml --check
  strainledger tally bracket.toml iteration-7.vtu --out reports
  strainledger tally bracket.vtu --json --units "mm MPa" --material "name=S355 youngs_modulus=210000 poissons_ratio=0.3"
  strainledger tally hull.vtu deck.vtu --together
  strainledger tally r2.vtu r5.vtu r9.vtu --each --out reports`,
		Long: `Reads the results of one run, computes the strain energy of every cell and accounts
for it by region. Files beside a study take the place of those it names.

Exit codes: 0 done; 1 done, but a requirement is not met or a finding of severity
error stands; 2 the call or the study is wrong; 3 the results cannot be used; 4 a
report could not be written.`,
		ValidArgsFunction: completeFiles("toml", "vtu", "vtk"),
		RunE: func(command *cobra.Command, args []string) error {
			return p.tally(command.Context(), command, options, args)
		},
	}
	options.declare(command.Flags())
	return command
}

// tally does one run, or one for each file.
func (p *program) tally(ctx context.Context, command *cobra.Command, options *tallyOptions, args []string) error {
	path, files, err := options.split(command, args)
	if err != nil {
		return err
	}
	read, err := study.Read(path, options.Flags, files)
	if err != nil {
		return err
	}
	if len(read.Files) == 0 {
		return study.Faults{{Path: path, Message: "names no result files; add files to [input], or name them after the study file"}}
	}
	if err := options.checkSeveral(command, path, read.Files); err != nil {
		return err
	}
	accounts := []*account{{study: read, out: options.out, text: options.out == ""}}
	if options.each {
		if accounts, err = eachFile(command, read, options.out); err != nil {
			return err
		}
	}
	return p.tallyAll(ctx, accounts, options)
}

// split tells the study file from the result files.
func (o *tallyOptions) split(command *cobra.Command, args []string) (path string, files []string, err error) {
	if err := o.commonOptions.check(command); err != nil {
		return "", nil, err
	}
	if len(args) == 0 {
		return "", nil, wrongCall(command, "no study file and no result files given")
	}
	files = args
	if isStudy(args[0]) {
		path, files = args[0], args[1:]
	}
	for _, file := range files {
		if isStudy(file) {
			return "", nil, wrongCall(command, "%s is a study file and has to be the first and only one", file)
		}
	}
	return path, files, nil
}

// isStudy reports whether an argument names a study file.
func isStudy(argument string) bool { return strings.EqualFold(filepath.Ext(argument), ".toml") }

// checkSeveral refuses several files of which nobody said what they are to each other.
func (o *tallyOptions) checkSeveral(command *cobra.Command, path string, files []string) error {
	chosen := 0
	for _, choice := range []bool{o.together, o.steps, o.each} {
		if choice {
			chosen++
		}
	}
	switch {
	case chosen > 1:
		return wrongCall(command, "--together, --steps and --each exclude each other; keep one")
	case o.steps:
		return wrongCall(command, "--steps is not built yet; tally each state on its own with --each")
	case path == "" && len(files) > 1 && chosen == 0:
		return wrongCall(command, "%d files without a study: add --together (blocks of one model), --steps (states in load order) or --each (one run for each)", len(files))
	}
	return nil
}

// eachFile returns one run for each file. Each has a folder of its own for its
// reports, named after the file without its extension.
func eachFile(command *cobra.Command, read *study.Study, out string) ([]*account, error) {
	var accounts []*account
	first := map[string]string{}
	for _, file := range read.Files {
		one := *read
		one.Files = []string{file}
		folder := ""
		if out != "" {
			folder = filepath.Join(out, reportName(file))
			if other, taken := first[folder]; taken {
				return nil, wrongCall(command, "the reports of %s and %s would both go to %s; rename one, or tally them on their own", other, file, folder)
			}
			first[folder] = file
		}
		accounts = append(accounts, &account{study: &one, out: folder, text: out == "", label: file + ": "})
	}
	return accounts, nil
}

// reportName returns the name of the folder for the reports of a file.
func reportName(file string) string {
	if file == study.Stdin {
		return "stdin"
	}
	base := filepath.Base(file)
	if name := strings.TrimSuffix(base, filepath.Ext(base)); name != "" {
		return name
	}
	return base
}
