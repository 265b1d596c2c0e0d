package main

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"hash"
	"io"
	"os"
	"strconv"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
	"strainledger/report"
)

// curveOptions are the flags of the command curve.
type curveOptions struct {
	commonOptions
	energy.CurveReading
	window  string
	limit   string
	offsets []string
	modulus float64
	hash    bool
	out     string
}

func (o *curveOptions) declare(flags *pflag.FlagSet) {
	o.commonOptions.declare(flags)
	flags.StringVar(&o.StrainColumn, "strain-column", "", "the `COLUMN` of strain: its heading, or its number from 1; without it, found by its heading")
	flags.StringVar(&o.StressColumn, "stress-column", "", "the `COLUMN` of stress, likewise")
	flags.StringVar(&o.StrainUnit, "strain-unit", "", "unit of the strains: `UNIT` is "+strings.Join(energy.StrainUnits(), ", ")+"; without it, the heading's, else ratio")
	flags.StringVar(&o.StressUnit, "stress-unit", "", "unit of the stresses: `UNIT` is MPa, Pa, kPa, GPa, psi or ksi; without it, the heading's")
	flags.BoolVar(&o.True, "true", false, "the file holds true stress and true strain, whatever its headings say")
	flags.StringVar(&o.window, "modulus-window", "", "fit the modulus to the stresses in `RANGE`: \"70..210\", or \"10%..40%\" of the offset yield stress, which is the default")
	flags.Float64Var(&o.modulus, "youngs-modulus", 0, "use `E`, in the unit of stress, in place of the fitted modulus, and compare the two")
	flags.StringVar(&o.limit, "proportional-limit-by", energy.DefaultLimit, "the `DEFINITION` of the proportional limit: offset-P%, deviation-P% or tangent-P% with a number P, or johnson")
	flags.StringArrayVar(&o.offsets, "offset-yield", nil, "also give the yield stress at the plastic strain `P%`, beside that at 0.2%; once for each")
	flags.BoolVar(&o.hash, "hash", false, "record the SHA-256 of the file; --out does so too")
	flags.StringVar(&o.out, "out", "", "write curve.txt, .json, .csv and .svg to the folder `DIR` instead of a text to standard output")
}

// newCurve returns the command curve.
func newCurve(p *program) *cobra.Command {
	options := &curveOptions{}
	command := &cobra.Command{
		Use:   "curve CURVE.csv [FLAG...]",
		Short: "read moduli, proportional limit and energies off a stress-strain test curve",
		Example: `  strainledger curve s355-tensile.csv
  strainledger curve s355-tensile.csv --out reports
  strainledger curve s355-tensile.csv --strain-column 4 --stress-column "Stress (MPa)" --strain-unit percent
  strainledger curve s355-tensile.csv --proportional-limit-by deviation-1% --modulus-window 50..150 --json`,
		Long: `Reads a table of strain and stress from a uniaxial test: columns parted by commas,
semicolons, tabs or blanks, with headings or by number, decimal point or comma. Fits
Young's modulus and gives the proportional limit by each published definition, yield
and ultimate stress, the moduli of resilience and toughness, and a Ramberg-Osgood law.

Strain has to rise from row to row: unloading loops are refused by their line.`,
		ValidArgsFunction: completeFiles("csv", "txt", "dat", "tsv"),
		RunE: func(command *cobra.Command, args []string) error {
			if err := options.check(command); err != nil {
				return err
			}
			if len(args) != 1 {
				return wrongCall(command, "found %d arguments, want the file of one curve", len(args))
			}
			analysed, err := options.analysis(command)
			if err != nil {
				return err
			}
			return p.curve(args[0], options, analysed)
		},
	}
	options.declare(command.Flags())
	return command
}

// analysis turns the flags into options.
func (o *curveOptions) analysis(command *cobra.Command) (energy.CurveOptions, error) {
	options := energy.CurveOptions{Limit: o.limit}
	if _, err := energy.ParseLimit(o.limit); err != nil {
		return options, wrongCall(command, "--proportional-limit-by: %w", err)
	}
	if o.window != "" {
		window, err := energy.ParseStressWindow(o.window)
		if err != nil {
			return options, wrongCall(command, "--modulus-window: %w", err)
		}
		options.Window = window
	}
	if command.Flags().Changed("youngs-modulus") {
		if options.YoungsModulus = o.modulus; !(o.modulus > 0) {
			return options, wrongCall(command, "--youngs-modulus %g: must be above 0", o.modulus)
		}
	}
	for _, text := range o.offsets {
		percent, err := strconv.ParseFloat(strings.TrimSuffix(text, "%"), 64)
		if err != nil {
			return options, wrongCall(command, "--offset-yield %q: want a percentage such as 0.1%%", text)
		}
		options.Offsets = append(options.Offsets, percent/100)
	}
	return options, nil
}

// curve analyses one test curve and writes its reports.
func (p *program) curve(path string, options *curveOptions, analysed energy.CurveOptions) error {
	analysis, err := p.analyseCurve(path, options, analysed)
	if err != nil {
		return err
	}
	if options.out != "" {
		if err := report.WriteCurveFiles(options.out, analysis); err != nil {
			return &reportError{err}
		}
		if !options.quiet {
			p.message("reports are in %s", options.out)
		}
	}
	isText := options.out == "" && !options.json && !options.quiet
	if isText {
		return p.print(func(w io.Writer) error { return report.CurveText(w, analysis, options.textOptions(p.out)) })
	}
	for _, finding := range analysis.Findings {
		if finding.Severity != energy.Note && !options.quiet {
			p.message("%s: %s: %s", finding.Severity, finding.Code, finding.Message)
		}
	}
	if options.json {
		return p.print(func(w io.Writer) error { return report.CurveJSON(w, analysis) })
	}
	return nil
}

// analyseCurve reads and analyses a file, or the standard input.
func (p *program) analyseCurve(path string, options *curveOptions, analysed energy.CurveOptions) (*energy.CurveAnalysis, error) {
	source := p.in
	if path != study.Stdin {
		file, err := os.Open(path)
		if err != nil {
			return nil, &energy.CurveError{Path: path, Err: errors.Unwrap(err)} // without a second path
		}
		defer file.Close()
		source = file
	}
	read := &fingerprint{Hash: sha256.New()}
	record, err := energy.ReadCurve(io.TeeReader(source, read), path, options.CurveReading)
	if err != nil {
		return nil, err
	}
	analysis, err := energy.AnalyseCurve(record, analysed)
	if err != nil {
		return nil, err
	}
	analysis.Source.Bytes = read.bytes
	if options.hash || options.out != "" {
		analysis.Source.SHA256 = energy.Text(hex.EncodeToString(read.Sum(nil)))
	}
	analysis.Version = energy.Text(readVersion().Version)
	return analysis, nil
}

// A fingerprint counts and hashes what is written to it.
type fingerprint struct {
	hash.Hash
	bytes int64
}

func (f *fingerprint) Write(data []byte) (int, error) {
	f.bytes += int64(len(data))
	return f.Hash.Write(data)
}
