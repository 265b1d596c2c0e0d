package energy

import (
	"os"
	"path/filepath"
	"regexp"
	"testing"
)

// Every code that the package's source or its readers write is in the table, so that no
// file can meet the panic for a code that is not.
func TestEveryFindingHasASeverity(t *testing.T) {
	written := regexp.MustCompile(`(?:\.add\(|Code: +|remark\()"([a-z]+(?:-[a-z]+)+)"`)
	count := 0
	for _, pattern := range []string{"*.go", "../readers/*.go"} {
		files, err := filepath.Glob(pattern)
		if err != nil || len(files) == 0 {
			t.Fatal(pattern, err)
		}
		for _, file := range files {
			source, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			if filepath.Base(file) == "curve_finding.go" || regexp.MustCompile(`_test\.go$`).MatchString(file) {
				continue // a curve's findings carry their own severities
			}
			for _, match := range written.FindAllStringSubmatch(string(source), -1) {
				count++
				if severities[match[1]] == "" {
					t.Errorf("%s: the code %q has no severity", file, match[1])
				}
			}
		}
	}
	if count < 25 {
		t.Errorf("only %d codes were found in the source", count)
	}
}
