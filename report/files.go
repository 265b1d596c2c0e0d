package report

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"strainledger/energy"
)

// A reportFile is one file of a report and what writes it.
type reportFile struct {
	name  string
	write func(io.Writer) error
}

func reportFiles(ledger *energy.Ledger) []reportFile {
	of := func(write func(io.Writer, *energy.Ledger) error) func(io.Writer) error {
		return func(w io.Writer) error { return write(w, ledger) }
	}
	files := []reportFile{{"ledger.json", of(JSON)}}
	for _, file := range csvFiles {
		files = append(files, reportFile{file.name, of(file.write)})
	}
	return append(files,
		reportFile{"columns.csv", of(writeColumns)},
		reportFile{"summary.md", of(writeMarkdown)},
		reportFile{"requirements.xml", of(writeJUnit)})
}

// WriteFiles writes the ledger to the folder in every form: ledger.json, its tables as
// CSV with columns.csv, summary.md and requirements.xml, and the annotated results where
// there are any (nil: none). It creates the folder where it is missing, replaces files of
// these names, and leaves all others alone.
//
// The ledger has to list every cell past its limit (Options.ListAllPastLimit).
//
// Each file is written under another name, and they take their own names only when all
// are complete. An error names the file, and what was there before it is still there.
// Errors from reading the results, and ctx's, come as they are.
func WriteFiles(ctx context.Context, dir string, ledger *energy.Ledger, annotation *Annotation) error {
	if err := checkAllPastLimit(ledger); err != nil {
		return err
	}
	if annotation == nil {
		return writeFiles(dir, reportFiles(ledger))
	}
	err := writeFilesAnd(dir, reportFiles(ledger), func(files *drafts) error { return annotation.write(ctx, ledger, files) })
	if err == nil {
		annotation.removeFormer()
	}
	return err
}

// writeFiles writes the files of a report, all of them or none.
func writeFiles(dir string, files []reportFile) error {
	return writeFilesAnd(dir, files, func(*drafts) error { return nil })
}

// writeFilesAnd writes the files of a report and those that more adds, all of them or
// none.
func writeFilesAnd(dir string, files []reportFile, more func(*drafts) error) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	drafts := &drafts{}
	defer drafts.discard()
	for _, file := range files {
		if err := drafts.write(filepath.Join(dir, file.name), file.write); err != nil {
			return err
		}
	}
	if err := more(drafts); err != nil {
		return err
	}
	return drafts.commit()
}

// checkAllPastLimit guards against a list of the cells past their limit that is not the
// whole list.
func checkAllPastLimit(ledger *energy.Ledger) error {
	var count int64
	for i := range ledger.Regions {
		if cells := ledger.Regions[i].CellsPastLimit; cells.Exists() {
			count += int64(cells)
		}
	}
	if listed := int64(len(ledger.AllPastLimit)); listed != count {
		return fmt.Errorf("past-limit.csv: the accounts count %d cells past their limit, but %d are listed", count, listed)
	}
	return nil
}

// withoutPath returns why a file operation failed, without the name it was tried under.
func withoutPath(err error) error {
	if place := new(fs.PathError); errors.As(err, &place) {
		return place.Err
	}
	if place := new(os.LinkError); errors.As(err, &place) {
		return place.Err
	}
	return err
}
