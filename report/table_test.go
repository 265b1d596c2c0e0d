package report

import (
	"strings"
	"testing"
)

func pageOf(t *table) string {
	page := textPage{}
	page.table(t)
	return page.text.String()
}

func TestTableLayout(t *testing.T) {
	wide := &table{columns: []column{
		{kind: name, heading: "region"},
		{kind: number, heading: "stored energy", unit: "mJ"},
		{kind: number, heading: "max density"},
		{kind: prose, heading: "what it means"},
	}}
	wide.add("leg", "9.5000", "1.2346e-9", "short")
	wide.add("corner", "123.45", missing, strings.Repeat("word ", 20))
	wide.add("total", "0", "", "")
	wide.totals = 1
	lines := strings.Split(pageOf(wide), "\n")
	for i, want := range []string{
		"            stored        max",
		"  region    energy    density  what it means",
		"                mJ",
		"  leg       9.5000  1.2346e-9  short",
		"  corner  123.45            –  word word word word word word word word word word word word word word",
		"                               word word word word word word",
		"  " + strings.Repeat("─", 98),
		"  total     0",
		"",
	} {
		if lines[i] != want {
			t.Errorf("line %d is\n%q, want\n%q", i, lines[i], want)
		}
	}
}
