package report

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
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
// CSV with columns.csv, summary.md and requirements.xml. It creates the folder where it
// is missing, replaces files of these names, and leaves all others alone.
//
// The ledger has to list every cell past its limit (Options.ListAllPastLimit).
//
// Each file is written under another name, and they take their own names only when all
// are complete. An error names the file, and what was there before it is still there.
func WriteFiles(dir string, ledger *energy.Ledger) error {
	if err := checkAllPastLimit(ledger); err != nil {
		return err
	}
	return writeFiles(dir, reportFiles(ledger))
}

// writeFiles writes the files of a report, all of them or none.
func writeFiles(dir string, files []reportFile) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	drafts := make([]string, len(files))
	defer func() {
		for _, draft := range drafts {
			os.Remove(draft) // fails where the draft has become the file
		}
	}()
	for i, file := range files {
		drafts[i] = filepath.Join(dir, fmt.Sprintf(".%s.%08x", file.name, rand.Uint32()))
		if err := writeFile(drafts[i], file); err != nil {
			return fmt.Errorf("%s: %w", filepath.Join(dir, file.name), err)
		}
	}
	for i, file := range files {
		target := filepath.Join(dir, file.name)
		if err := os.Rename(drafts[i], target); err != nil {
			return fmt.Errorf("%s: %w", target, withoutPath(err))
		}
	}
	return nil
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

// writeFile creates the file, which must not exist.
func writeFile(path string, file reportFile) error {
	out, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return withoutPath(err)
	}
	buffer := bufio.NewWriter(out)
	err = file.write(buffer)
	if err == nil {
		err = buffer.Flush()
	}
	return withoutPath(errors.Join(err, out.Close()))
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
