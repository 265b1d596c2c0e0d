package report

import (
	"context"
	"encoding/xml"
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"

	"strainledger/energy"
)

func folder(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, entry := range entries {
		names = append(names, entry.Name())
	}
	return names
}

func TestWriteFilesCreatesTheFolder(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "new", "folder")
	if err := WriteFiles(context.Background(), dir, bracket(), nil); err != nil {
		t.Fatal(err)
	}
	want := []string{
		"columns.csv", "hotspots.csv", "ledger.json", "past-limit.csv", "regions.csv",
		"requirements.csv", "requirements.xml", "summary.md",
	}
	if got := folder(t, dir); !slices.Equal(got, want) {
		t.Errorf("the folder holds %q, want %q", got, want)
	}
}

func TestWriteFilesReplacesItsOwnAlone(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"ledger.json", "mine.txt"} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte("before"), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	if err := WriteFiles(context.Background(), dir, bracket(), nil); err != nil {
		t.Fatal(err)
	}
	mine, err := os.ReadFile(filepath.Join(dir, "mine.txt"))
	if err != nil || string(mine) != "before" {
		t.Errorf("mine.txt holds %q (%v)", mine, err)
	}
	ledger, err := os.ReadFile(filepath.Join(dir, "ledger.json"))
	if err != nil || string(ledger) != jsonOf(t, bracket()) {
		t.Errorf("ledger.json was not replaced (%v)", err)
	}
}

// What cannot be written leaves the folder as it was, and the error names the file.
func TestWriteFilesLeavesNothingHalfWritten(t *testing.T) {
	for _, test := range []struct {
		name    string
		prepare func(t *testing.T, dir string, ledger *energy.Ledger)
		want    string
	}{
		{"infinite number", func(_ *testing.T, _ string, ledger *energy.Ledger) {
			ledger.Regions[0].Energy = energy.Number(math.Inf(1))
		}, "ledger.json"},
		{"infinite number in a list that JSON leaves out", func(_ *testing.T, _ string, ledger *energy.Ledger) {
			ledger.AllPastLimit[5].Density = energy.Number(math.Inf(1))
			ledger.PastLimit.Worst = nil
		}, "past-limit.csv"},
		{"cells left out of the list", func(_ *testing.T, _ string, ledger *energy.Ledger) {
			ledger.AllPastLimit = ledger.AllPastLimit[1:]
		}, "past-limit.csv: the accounts count 6 cells past their limit, but 5 are listed"},
	} {
		t.Run(test.name, func(t *testing.T) {
			dir := t.TempDir()
			before := filepath.Join(dir, "regions.csv")
			if err := os.WriteFile(before, []byte("before"), 0o666); err != nil {
				t.Fatal(err)
			}
			ledger := bracket()
			test.prepare(t, dir, ledger)
			err := WriteFiles(context.Background(), dir, ledger, nil)
			if err == nil || !strings.Contains(err.Error(), test.want) {
				t.Errorf("the error is %v, want one with %q", err, test.want)
			}
			if got := folder(t, dir); !slices.Equal(got, []string{"regions.csv"}) {
				t.Errorf("the folder holds %q", got)
			}
			if text, err := os.ReadFile(before); err != nil || string(text) != "before" {
				t.Errorf("regions.csv holds %q (%v)", text, err)
			}
		})
	}
}

func TestWriteFilesNamesWhatStandsInTheWay(t *testing.T) {
	dir := t.TempDir()
	target := filepath.Join(dir, "regions.csv")
	if err := os.MkdirAll(filepath.Join(target, "inside"), 0o777); err != nil {
		t.Fatal(err)
	}
	err := WriteFiles(context.Background(), dir, bracket(), nil)
	if err == nil || !strings.HasPrefix(err.Error(), target+": ") {
		t.Errorf("the error is %v, want one that starts with %s", err, target)
	}
	for _, name := range folder(t, dir) {
		if strings.HasPrefix(name, ".") {
			t.Errorf("%s was left", name)
		}
	}

	file := filepath.Join(dir, "a file")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	if err := WriteFiles(context.Background(), file, bracket(), nil); !errors.Is(err, syscall.ENOTDIR) || !strings.Contains(err.Error(), file) {
		t.Errorf("the error is %v, want one that names %s", err, file)
	}
}

// A file that cannot be created names itself, not its draft.
func TestWriteFilesWhereNothingCanBeCreated(t *testing.T) {
	target := filepath.Join(t.TempDir(), "f", "missing", "ledger.json")
	err := (&drafts{}).write(target, func(to io.Writer) error { return JSON(to, bracket()) })
	if !errors.Is(err, syscall.ENOENT) || err.Error() != target+": "+syscall.ENOENT.Error() {
		t.Errorf("the error is %v, want the file and the reason alone", err)
	}
}

func TestJUnit(t *testing.T) {
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) {
			ledger := ledger()
			var text strings.Builder
			if err := writeJUnit(&text, ledger); err != nil {
				t.Fatal(err)
			}
			var got junitSuites
			if err := xml.Unmarshal([]byte(text.String()), &got); err != nil {
				t.Fatal(err)
			}
			var failures, faults int
			if len(got.Suite.Cases) != len(ledger.Requirements) {
				t.Fatalf("%d cases, want %d", len(got.Suite.Cases), len(ledger.Requirements))
			}
			for i, requirement := range ledger.Requirements {
				entry := got.Suite.Cases[i]
				isFault := !requirement.Value.Exists()
				if (entry.Error != nil) != isFault || (entry.Failure != nil) != (!requirement.Met && !isFault) {
					t.Errorf("case %d is %+v for %+v", i, entry, requirement)
				}
				if entry.Error != nil {
					faults++
				}
				if entry.Failure != nil {
					failures++
				}
			}
			suite := got.Suite
			if suite.Tests != len(ledger.Requirements) || suite.Failures != failures || suite.Errors != faults || suite.Time != 0 {
				t.Errorf("the suite counts %+v", suite)
			}
		})
	}
}

func TestJUnitOfTheBracket(t *testing.T) {
	var text strings.Builder
	if err := writeJUnit(&text, bracket()); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`<testsuite name="Mooring bracket, fillet R2" tests="4" failures="2" errors="1" skipped="0" time="0">`,
		`<failure message="cells_past_limit of the whole model: 6, at most 0" type="cells_past_limit">`,
		`<testcase name="corner stores little" classname="corner" time="0"></testcase>`,
	} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("no %s in\n%s", want, text.String())
		}
	}
}
