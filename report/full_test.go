//go:build unix

package report

import (
	"context"
	"errors"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// withFileLimit does something while no file may grow beyond so many bytes.
func withFileLimit(t *testing.T, bytes uint64, do func()) {
	t.Helper()
	var before syscall.Rlimit
	if err := syscall.Getrlimit(syscall.RLIMIT_FSIZE, &before); err != nil {
		t.Fatal(err)
	}
	limited := before
	limited.Cur = bytes
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &limited); err != nil {
		t.Fatal(err)
	}
	defer syscall.Setrlimit(syscall.RLIMIT_FSIZE, &before)
	do()
}

// A file that does not fit is named, at whichever step it is noticed, and its draft goes.
// The limit holds for the whole process, so that the test runs in one of its own.
func TestFilesThatDoNotFit(t *testing.T) {
	const child = "STRAINLEDGER_TEST_FILES_THAT_DO_NOT_FIT"
	if os.Getenv(child) == "" {
		command := exec.Command(os.Args[0], "-test.run=^TestFilesThatDoNotFit$")
		command.Env = append(os.Environ(), child+"=1")
		if output, err := command.CombinedOutput(); err != nil {
			t.Errorf("%v\n%s", err, output)
		}
		return
	}
	out := t.TempDir()
	target := filepath.Join(out, "some.txt")
	for _, length := range []int{100, 10_000} { // noticed at the end; and before
		d := &drafts{}
		var err error
		withFileLimit(t, 50, func() {
			err = d.write(target, func(to io.Writer) error {
				_, err := io.WriteString(to, strings.Repeat("x", length))
				return err
			})
		})
		d.discard()
		if !errors.Is(err, syscall.EFBIG) || err.Error() != target+": file too large" {
			t.Errorf("%d bytes: the error is %v, want one that names %s", length, err, target)
		}
	}
	a, err := NewAnnotation(out, open(t, writeText(t, t.TempDir(), "good.vtu", triangles("", "", ""))), 2)
	if err != nil {
		t.Fatal(err)
	}
	fillColumns(t, a)
	target = filepath.Join(out, "annotated.vtu")
	for _, limit := range []uint64{1, 5, 20, 100, 200, 1000} { // types, nodes, ends, blocks, header
		d := &drafts{}
		withFileLimit(t, limit, func() { err = a.write(context.Background(), bracket(), d) })
		d.discard()
		if !errors.Is(err, syscall.EFBIG) || err.Error() != target+": file too large" {
			t.Errorf("at most %d bytes: the error is %v, want one that names %s", limit, err, target)
		}
	}
	a.Close()
	if entries, err := os.ReadDir(out); err != nil || len(entries) > 0 {
		t.Errorf("%v was left (%v)", entries, err)
	}
}
