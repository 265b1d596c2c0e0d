package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
	"strainledger/mesh"
	"strainledger/readers"
	"strainledger/report"
)

// An account is one run to be tallied: what it reads, and where its reports go.
type account struct {
	study *study.Study
	out   string // folder; "" for none
	text  bool   // a text to stdout, also beside reports
	label string // put before messages where there are several accounts
	brief bool   // paths in the ledger lose their folder, which is a temporary one
}

// tallyAll tallies one account after the other. An account that fails does not keep
// the others from being done.
func (p *program) tallyAll(ctx context.Context, accounts []*account, options *tallyOptions) error {
	opened := &results{in: p.in, allowOutside: options.allowOutside}
	defer opened.close()
	var ledgers []*energy.Ledger
	for i, a := range accounts {
		if ctx.Err() != nil {
			return ctx.Err()
		}
		if options.check {
			if err := p.plan(ctx, opened, a, options); err != nil {
				p.fail(err)
			}
			continue
		}
		ledger, err := p.account(ctx, opened, a, options)
		if err != nil {
			p.fail(err)
			continue
		}
		p.note(verdictCode(ledger.Requirements, ledger.Findings))
		if options.json {
			ledgers = append(ledgers, ledger)
		}
		if err := p.printText(ledger, a, options, i > 0); err != nil {
			p.fail(err)
		}
	}
	return p.printJSON(ledgers, len(accounts))
}

// account tallies one account and writes its reports.
func (p *program) account(ctx context.Context, opened *results, a *account, options *tallyOptions) (*energy.Ledger, error) {
	started := time.Now()
	settings := a.study.Options
	settings.Workers = options.workers
	settings.ListAllPastLimit = a.out != ""
	model, err := opened.open(ctx, a.study.Files, readersOptions(a.study))
	if err != nil {
		return nil, err
	}
	p.detail(a, options, "headers of %d cells read in %.3f s", model.CellCount(), time.Since(started).Seconds())
	workers := workerCount(options.workers)
	var annotation *report.Annotation
	if a.out != "" {
		if annotation, err = report.NewAnnotation(a.out, model, workers); err != nil {
			return nil, &reportError{err}
		}
		defer annotation.Close()
		settings.Columns = annotation.Columns()
	}
	ledger, err := p.tallyModel(ctx, model, &settings, options)
	if err != nil {
		return nil, atFiles(err, a.study)
	}
	p.detail(a, options, "energy of %d cells computed after %.3f s", ledger.Total.Cells, time.Since(started).Seconds())
	hash := options.hash || a.out != ""
	if hash {
		if err := hashSources(ctx, ledger.Sources, workers, opened.disk); err != nil {
			return nil, err
		}
		p.detail(a, options, "files hashed after %.3f s", time.Since(started).Seconds())
	}
	if a.study.Path != "" {
		ledger.Study = &energy.StudyFile{Path: a.study.Path}
		if hash {
			ledger.Study.SHA256 = energy.Text(a.study.SHA256)
		}
	}
	if a.brief {
		forgetFolder(ledger)
	}
	ledger.Run = energy.Run{
		Version: readVersion().Version,
		Started: started.UTC().Format(time.RFC3339),
		Seconds: energy.Number(time.Since(started).Seconds()),
		Workers: workers,
	}
	p.fieldDetails(a, options, &ledger.Fields)
	return ledger, p.writeFiles(ctx, ledger, annotation, a, options)
}

// tallyModel computes the ledger, with a bar where somebody watches.
func (p *program) tallyModel(ctx context.Context, model *mesh.Model, settings *energy.Options, options *tallyOptions) (*energy.Ledger, error) {
	if options.noProgress || options.quiet || !isTerminal(p.err) {
		return energy.Tally(ctx, model, settings, nil)
	}
	bar := startProgress(p.err, model.CellCount(), progressDelay, progressInterval)
	defer bar.end()
	return energy.Tally(ctx, model, settings, &bar.done)
}

// writeFiles writes the reports of an account to its folder.
func (p *program) writeFiles(ctx context.Context, ledger *energy.Ledger, annotation *report.Annotation, a *account, options *tallyOptions) error {
	if a.out == "" {
		return nil
	}
	started := time.Now()
	err := report.WriteFiles(ctx, a.out, ledger, annotation)
	if place := new(readers.Error); errors.As(err, &place) {
		return err // the results were read once more
	}
	if err != nil {
		return &reportError{err}
	}
	p.detail(a, options, "reports written in %.3f s", time.Since(started).Seconds())
	if !options.quiet {
		p.message("%s; reports are in %s", report.Summarise(ledger).Verdict, a.out)
	}
	return nil
}

// printText prints the text report, or the findings where nobody wants it.
func (p *program) printText(ledger *energy.Ledger, a *account, options *tallyOptions, isNext bool) error {
	if !a.text || options.json || options.quiet {
		p.findings(a, options, ledger.Findings)
		return nil
	}
	return p.print(func(w io.Writer) error {
		if isNext {
			if _, err := io.WriteString(w, "\n"); err != nil {
				return err
			}
		}
		return report.Text(w, ledger, options.textOptions(p.out))
	})
}

// printJSON prints the ledger, or a list of them where several files were tallied
// each on its own. Nothing is printed where nothing was done.
func (p *program) printJSON(ledgers []*energy.Ledger, accounts int) error {
	if len(ledgers) == 0 {
		return nil
	}
	return p.print(func(w io.Writer) error {
		if accounts == 1 {
			return report.JSON(w, ledgers[0])
		}
		before := "[\n"
		for _, ledger := range ledgers {
			if _, err := io.WriteString(w, before); err != nil {
				return err
			}
			if err := report.JSON(w, ledger); err != nil {
				return err
			}
			before = ",\n"
		}
		_, err := io.WriteString(w, "]\n")
		return err
	})
}

// findings prints the findings that a reader of the numbers should not miss, where no
// text report says them.
func (p *program) findings(a *account, options *tallyOptions, findings []energy.Finding) {
	if options.quiet {
		return
	}
	for _, finding := range findings {
		if finding.Severity != energy.Note {
			p.message("%s%s: %s: %s", a.label, finding.Severity, finding.Code, finding.Message)
		}
	}
}

// detail prints what -v asks for.
func (p *program) detail(a *account, options *tallyOptions, format string, values ...any) {
	if options.verbose && !options.quiet {
		p.message("%s%s", a.label, fmt.Sprintf(format, values...))
	}
}

// fieldDetails says which array was taken for what and why.
func (p *program) fieldDetails(a *account, options *tallyOptions, fields *energy.FieldsUsed) {
	for _, field := range fields.Taken() {
		p.detail(a, options, "%s", fieldSentence(&field))
	}
}

// forgetFolder takes the folder out of the paths of a ledger.
func forgetFolder(ledger *energy.Ledger) {
	for i := range ledger.Sources {
		ledger.Sources[i].Path = filepath.Base(ledger.Sources[i].Path)
	}
	if ledger.Study != nil {
		ledger.Study.Path = filepath.Base(ledger.Study.Path)
	}
}

// readersOptions returns how a study's files are read.
func readersOptions(s *study.Study) readers.Options {
	switch {
	case s.Time.Value != nil:
		return readers.Options{Time: readers.Time{Choice: readers.AtNumber, Number: *s.Time.Value}}
	case s.Time.First:
		return readers.Options{Time: readers.Time{Choice: readers.First}}
	}
	return readers.Options{}
}

// workerCount returns the number of workers that a flag's value stands for.
func workerCount(stated int) int {
	if stated > 0 {
		return stated
	}
	return runtime.GOMAXPROCS(0)
}

// atFiles puts the study or the files before an error that names no file.
func atFiles(err error, s *study.Study) error {
	var (
		input *energy.InputError
		asked *energy.StudyError
	)
	switch {
	case errors.As(err, &asked) && s.Path != "":
		return &placedError{s.Path, err}
	case errors.As(err, &input):
		return &placedError{strings.Join(s.Files, ", "), err}
	}
	return err
}

// A placedError puts a file's name before an error.
type placedError struct {
	path string
	err  error
}

func (e *placedError) Error() string { return e.path + ": " + e.err.Error() }

func (e *placedError) Unwrap() error { return e.err }
