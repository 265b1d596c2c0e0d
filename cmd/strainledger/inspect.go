package main

import (
	"context"
	"errors"
	"io"

	"github.com/spf13/cobra"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
	"strainledger/readers"
	"strainledger/report"
)

// newInspect returns the command inspect.
func newInspect(p *program) *cobra.Command {
	var (
		options commonOptions
		ranges  bool
	)
	command := &cobra.Command{
		Use:   "inspect FILE... [FLAG...]",
		Short: "say what result files hold: blocks, cells by type, arrays and their part",
		Example: `  strainledger inspect bracket.vtu
  strainledger inspect bracket.vtu --ranges
  strainledger inspect hull.vtu deck.vtu --json`,
		Long: `Reads the headers of result files and says what they hold. With --ranges the values
are read too. No energy is computed.`,
		ValidArgsFunction: completeFiles("vtu", "vtk"),
		RunE: func(command *cobra.Command, args []string) error {
			if err := options.check(command); err != nil {
				return err
			}
			if len(args) == 0 {
				return wrongCall(command, "no files given")
			}
			return p.inspect(command.Context(), args, &options, ranges)
		},
	}
	options.declare(command.Flags())
	command.Flags().BoolVar(&ranges, "ranges", false, "read the values too: ranges, sums, finite counts, measures")
	return command
}

// inspect looks into each file on its own. One that cannot be read does not keep the
// others from being shown.
func (p *program) inspect(ctx context.Context, args []string, options *commonOptions, ranges bool) error {
	named, err := study.Read("", study.Flags{}, args)
	if err != nil {
		return err
	}
	opened := &results{in: p.in, allowOutside: options.allowOutside}
	defer opened.close()
	inspection := &energy.Inspection{Schema: energy.InspectionSchema}
	for _, file := range named.Files {
		model, err := opened.open(ctx, []string{file}, readers.Options{})
		if err == nil {
			var one *energy.Inspection
			if one, err = energy.Inspect(ctx, model, energy.InspectOptions{Ranges: ranges, Workers: options.workers}); err == nil {
				inspection.Files = append(inspection.Files, one.Files...)
				inspection.Findings = append(inspection.Findings, one.Findings...)
				continue
			}
		}
		if errors.Is(err, context.Canceled) {
			return err
		}
		p.fail(err)
	}
	switch {
	case len(inspection.Files) == 0:
		return nil
	case options.json:
		return p.print(func(w io.Writer) error { return report.InspectionJSON(w, inspection) })
	case options.quiet:
		return nil
	}
	return p.print(func(w io.Writer) error { return report.InspectionText(w, inspection, options.textOptions(p.out)) })
}
