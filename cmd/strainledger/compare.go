package main

import (
	"context"
	"errors"
	"io"
	"os"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
	"strainledger/report"
)

// compareOptions are the flags of the command compare.
type compareOptions struct {
	commonOptions
	study.Flags
	study    string
	baseline int
	out      string
}

func (o *compareOptions) declare(flags *pflag.FlagSet) {
	o.commonOptions.declare(flags)
	flags.StringVar(&o.study, "study", "", "read requirements, tolerance and control of the comparison from the file `STUDY.toml`")
	flags.IntVar(&o.baseline, "baseline", 1, "compare with run `N`, counted from 1 in the order given")
	flags.StringArrayVar(&o.Requirements, "require", nil, "a `BOUND` that has to hold: \"change.energy of web <= 0.05\"; once for each bound")
	flags.StringVar(&o.out, "out", "", "write comparison.json, .csv and requirements.xml to the folder `DIR` instead of a text to standard output")
}

// newCompare returns the command compare.
func newCompare(p *program) *cobra.Command {
	options := &compareOptions{}
	command := &cobra.Command{
		Use:   "compare LEDGER_OR_STUDY... [FLAG...]",
		Short: "set design iterations side by side: energies, limits, hotspots, stiffness",
		Example: `  strainledger compare reports/r2/ledger.json reports/r5/ledger.json reports/r9/ledger.json
  strainledger compare bracket-r2.toml bracket-r5.toml --require "change.energy <= 0"
  strainledger compare iterations/*/ledger.json --baseline 4 --study iterations.toml --out reports
  strainledger tally r2.vtu r5.vtu r9.vtu --each --json | strainledger compare -`,
		Long: `Sets ledgers beside the first of them, the baseline. A study is tallied first. Numbers
are converted into the baseline's units. Where units, loads, materials, regions or the
way the model was read differ, a finding says so and no percent is given. Which sign
means stiffer depends on [loading] control, in the study of the comparison or in those
of all runs; without it nothing is called stiffer.

Exit codes: 0 done; 1 done, but a requirement is not met or a finding of severity
error stands in a run; 2 the call or a study is wrong; 3 a ledger or results cannot be
used; 4 a report could not be written.`,
		ValidArgsFunction: completeFiles("json", "toml"),
		RunE: func(command *cobra.Command, args []string) error {
			if err := options.check(command, args); err != nil {
				return err
			}
			return p.compare(command.Context(), args, options)
		},
	}
	options.declare(command.Flags())
	return command
}

// check refuses calls that name no runs, or none that can be the baseline.
func (o *compareOptions) check(command *cobra.Command, args []string) error {
	if err := o.commonOptions.check(command); err != nil {
		return err
	}
	switch {
	case len(args) == 0:
		return wrongCall(command, "no ledgers and no studies given")
	case o.baseline < 1:
		return wrongCall(command, "--baseline %d: runs are counted from 1", o.baseline)
	}
	for _, argument := range args {
		if information, err := os.Stat(argument); err == nil && information.IsDir() {
			return wrongCall(command, "%s is a folder; name the ledger.json in it", argument)
		}
	}
	return nil
}

// compare sets runs side by side. All that cannot be read is reported, and then nothing
// is compared.
func (p *program) compare(ctx context.Context, args []string, options *compareOptions) error {
	settings, err := study.ReadComparison(options.study, options.Flags)
	if err != nil {
		return err
	}
	settings.Baseline = options.baseline
	paths, err := study.ExpandRuns(args)
	if err != nil {
		return err
	}
	runs, err := p.comparedRuns(ctx, paths, options)
	if err != nil || runs == nil {
		return err
	}
	comparison, err := energy.Compare(runs, settings)
	if err != nil && options.study != "" {
		return &placedError{options.study, err}
	}
	if err != nil {
		return err
	}
	p.note(verdictCode(comparison.Results(), comparison.Findings))
	if err := p.writeComparison(comparison, options); err != nil {
		p.fail(err)
	}
	return p.printComparison(comparison, options)
}

// comparedRuns reads the ledgers, and tallies the studies; nil where one cannot be read.
func (p *program) comparedRuns(ctx context.Context, paths []string, options *compareOptions) ([]energy.ComparedRun, error) {
	opened := &results{in: p.in, allowOutside: options.allowOutside}
	defer opened.close()
	var runs []energy.ComparedRun
	isWhole := true
	for _, path := range paths {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		ledgers, err := p.ledgersOf(ctx, opened, path, options)
		if err != nil {
			p.fail(err)
			isWhole = false
		}
		for _, ledger := range ledgers {
			runs = append(runs, energy.ComparedRun{Path: path, Ledger: ledger})
		}
	}
	if !isWhole {
		return nil, nil
	}
	return runs, nil
}

// ledgersOf reads the ledgers of a file, or tallies a study.
func (p *program) ledgersOf(ctx context.Context, opened *results, path string, options *compareOptions) ([]*energy.Ledger, error) {
	if isStudy(path) {
		ledger, err := p.studyLedger(ctx, opened, path, options)
		if err != nil {
			return nil, err
		}
		return []*energy.Ledger{ledger}, nil
	}
	if path == study.Stdin {
		if err := opened.keep(ctx); err != nil {
			return nil, err
		}
	}
	ledgers, err := readLedgers(opened.disk(path))
	if err != nil {
		return nil, &placedError{path, err}
	}
	return ledgers, nil
}

// readLedgers reads the ledgers of a file. The error does not name it.
func readLedgers(path string) ([]*energy.Ledger, error) {
	file, err := os.Open(path)
	if err == nil {
		defer file.Close()
		var ledgers []*energy.Ledger
		if ledgers, err = energy.ReadLedgers(file); err == nil {
			return ledgers, nil
		}
	}
	if cause := new(os.PathError); errors.As(err, &cause) {
		err = cause.Err
	}
	return nil, err
}

// studyLedger tallies a study.
func (p *program) studyLedger(ctx context.Context, opened *results, path string, options *compareOptions) (*energy.Ledger, error) {
	read, err := study.Read(path, study.Flags{}, nil)
	if err != nil {
		return nil, err
	}
	if len(read.Files) == 0 {
		return nil, study.Faults{{Path: path, Message: "names no result files; add files to [input]"}}
	}
	a := &account{study: read, label: path + ": "}
	return p.account(ctx, opened, a, &tallyOptions{commonOptions: options.commonOptions})
}

// writeComparison writes the reports of a comparison to its folder.
func (p *program) writeComparison(comparison *energy.Comparison, options *compareOptions) error {
	if options.out == "" {
		return nil
	}
	if err := report.WriteComparisonFiles(options.out, comparison); err != nil {
		return &reportError{err}
	}
	if !options.quiet {
		p.message("%s; reports are in %s", report.SummariseComparison(comparison).Verdict, options.out)
	}
	return nil
}

// printComparison prints the text, or the findings where nobody wants it.
func (p *program) printComparison(comparison *energy.Comparison, options *compareOptions) error {
	if options.json || options.out != "" || options.quiet {
		p.findings(&account{}, &tallyOptions{commonOptions: options.commonOptions}, comparison.Findings)
	}
	switch {
	case options.json:
		return p.print(func(w io.Writer) error { return report.ComparisonJSON(w, comparison) })
	case options.out != "", options.quiet:
		return nil
	}
	return p.print(func(w io.Writer) error { return report.ComparisonText(w, comparison, options.textOptions(p.out)) })
}
