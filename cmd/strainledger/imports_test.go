package main

import (
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// mayImport says which of the project's packages each package may use. The command
// may use all of them.
var mayImport = map[string][]string{
	"mesh":                   {},
	"readers":                {"mesh"},
	"energy":                 {"mesh"},
	"report":                 {"energy", "mesh"},
	"cmd/strainledger/study": {"energy", "mesh"},
}

// Imports flow one way: a layering that nothing checks does not last.
func TestImportsFlowOneWay(t *testing.T) {
	for folder, allowed := range mayImport {
		files, err := filepath.Glob(filepath.Join("..", "..", folder, "*.go"))
		if err != nil || len(files) == 0 {
			t.Fatalf("no files in %s (%v)", folder, err)
		}
		for _, file := range files {
			if strings.HasSuffix(file, "_test.go") {
				continue
			}
			source, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			parsed, err := parser.ParseFile(token.NewFileSet(), file, source, parser.ImportsOnly)
			if err != nil {
				t.Fatal(err)
			}
			for _, imported := range parsed.Imports {
				path, _ := strconv.Unquote(imported.Path.Value)
				if name, own := strings.CutPrefix(path, "strainledger/"); own && !slices.Contains(allowed, name) {
					t.Errorf("%s imports %s, which %s may not use", file, path, folder)
				}
			}
		}
	}
}
