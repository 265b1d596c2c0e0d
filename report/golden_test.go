package report

import (
	"bytes"
	"context"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"strainledger/energy"
)

var update = flag.Bool("update", false, "write the golden files anew")

const goldenFolder = "../testdata/golden/report"

// checkGolden compares what was written with the golden file.
func checkGolden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join(goldenFolder, name)
	if *update {
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, got, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("%s differs from what was written; -update writes it anew. Written:\n%s", path, got)
	}
}

var ledgers = map[string]func() *energy.Ledger{
	"bracket":   bracket,
	"unjudged":  unjudged,
	"unlimited": unlimited,
	"bare":      bare,
	"zero":      zero,
	"hostile":   hostile,
}

func textOf(t *testing.T, ledger *energy.Ledger, options TextOptions) string {
	t.Helper()
	var text strings.Builder
	if err := Text(&text, ledger, options); err != nil {
		t.Fatal(err)
	}
	return text.String()
}

func TestTextAgainstGolden(t *testing.T) {
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) {
			checkGolden(t, name+".txt", []byte(textOf(t, ledger(), TextOptions{})))
		})
	}
}

func TestFilesAgainstGolden(t *testing.T) {
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) {
			dir := t.TempDir()
			if err := WriteFiles(context.Background(), dir, ledger(), nil); err != nil {
				t.Fatal(err)
			}
			for _, file := range reportFiles(ledger()) {
				got, err := os.ReadFile(filepath.Join(dir, file.name))
				if err != nil {
					t.Fatal(err)
				}
				checkGolden(t, name+"-"+file.name, got)
			}
		})
	}
}
