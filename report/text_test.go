package report

import (
	"encoding/json"
	"errors"
	"regexp"
	"strings"
	"testing"
	"unicode/utf8"

	"strainledger/energy"
)

// checkPage holds the promises of every text for a terminal.
func checkPage(t *testing.T, text string) {
	t.Helper()
	if !utf8.ValidString(text) {
		t.Error("the text is no UTF-8")
	}
	for i, line := range strings.Split(text, "\n") {
		if count := utf8.RuneCountInString(line); count > textWidth {
			t.Errorf("line %d has %d columns: %s", i+1, count, line)
		}
		if strings.TrimRight(line, " ") != line {
			t.Errorf("line %d ends with blanks: %q", i+1, line)
		}
		if strings.ContainsFunc(line, isUnprintable) {
			t.Errorf("line %d steers the terminal: %q", i+1, line)
		}
	}
}

func TestTextFitsThePage(t *testing.T) {
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) { checkPage(t, textOf(t, ledger(), TextOptions{})) })
	}
}

// Colour is put on after everything is in its place, and only where words say it too.
func TestColourAddsNothingButCodes(t *testing.T) {
	codes := regexp.MustCompile("\x1b\\[[0-9]*m")
	for name, ledger := range ledgers {
		t.Run(name, func(t *testing.T) {
			plain, coloured := textOf(t, ledger(), TextOptions{}), textOf(t, ledger(), TextOptions{Colour: true})
			if codes.ReplaceAllString(coloured, "") != plain {
				t.Error("without its codes the coloured text is another one")
			}
		})
	}
	coloured := textOf(t, bracket(), TextOptions{Colour: true})
	for _, want := range []string{
		bold + "Mooring bracket, fillet R2" + normal + "\n",
		"\n" + bold + "Findings" + normal + "\n",
		"\n  " + red + "error" + normal + "     hooke-mismatch",
		"\n  error     study-contradicted", // accepted
		"\n  " + yellow + "warning" + normal + "   parts-not-accounted",
		"\n  note      ghost-cells",
		"\n  " + red + "not met" + normal + "  stiff enough",
		"\n  met      corner stores little",
		"  " + red + "1.0925" + normal + "      0.91  " + red + "past" + normal + "\n",
	} {
		if !strings.Contains(coloured, want) {
			t.Errorf("no %q in\n%s", want, coloured)
		}
	}
}

// What people read is the same in both forms: each number of the text is in the Markdown.
func TestTextAndMarkdownAgree(t *testing.T) {
	numbers := regexp.MustCompile(`[-<>]?[0-9][0-9,]*(?:\.[0-9]+)?(?:e-?[0-9]+)?`)
	for _, name := range []string{"bracket", "unjudged", "unlimited", "bare", "zero"} {
		t.Run(name, func(t *testing.T) {
			ledger := ledgers[name]()
			var page strings.Builder
			if err := writeMarkdown(&page, ledger); err != nil {
				t.Fatal(err)
			}
			markdown := strings.ReplaceAll(page.String(), "&lt;", "<")
			for _, number := range numbers.FindAllString(textOf(t, ledger, TextOptions{}), -1) {
				if !strings.Contains(markdown, number) {
					t.Errorf("%s is in the text alone", number)
				}
			}
		})
	}
}

func TestWrap(t *testing.T) {
	for _, test := range []struct {
		text  string
		width int
		want  []string
	}{
		{"", 5, []string{""}},
		{"one two", 7, []string{"one two"}},
		{"one two", 6, []string{"one", "two"}},
		{"abcdefgh", 3, []string{"abc", "def", "gh"}},
		{"a abcdefgh b", 4, []string{"a", "abcd", "efgh", "b"}},
		{"a abcdef b", 4, []string{"a", "abcd", "ef b"}},
		{"äöü ß", 3, []string{"äöü", "ß"}},
	} {
		if got := wrap(test.text, test.width); strings.Join(got, "|") != strings.Join(test.want, "|") {
			t.Errorf("%q in %d columns is %q, want %q", test.text, test.width, got, test.want)
		}
	}
}

func TestShorten(t *testing.T) {
	for _, test := range []struct {
		text  string
		width int
		want  string
	}{
		{"corner", 6, "corner"},
		{"corner", 5, "co…er"},
		{"corner", 4, "co…r"},
		{"größte Länge", 8, "größ…nge"},
	} {
		if got := shorten(test.text, test.width); got != test.want {
			t.Errorf("%q in %d columns is %q, want %q", test.text, test.width, got, test.want)
		}
	}
}

func TestPrintable(t *testing.T) {
	for _, test := range []struct{ text, want string }{
		{"plain – 支架", "plain – 支架"},
		{"a\nb\tc\r", `a\nb\tc\r`},
		{"\x1b[31m", `\x1b[31m`},
		{"\u202eabc", `\u202eabc`},
		{"a\xffb", "a\uFFFDb"},
		{`it's "so"`, `it's "so"`},
		{"'\n", `'\n`},
	} {
		if got := printable(test.text); got != test.want {
			t.Errorf("%q is shown as %q, want %q", test.text, got, test.want)
		}
	}
}

func TestMarkdownEscapes(t *testing.T) {
	for _, test := range []struct{ text, want string }{
		{"max_density", "max_density"},
		{"_under_ a_", `\_under\_ a\_`},
		{"a|b", `a\|b`},
		{"<b>&amp;", "&lt;b>&amp;amp;"},
		{"*`[x](y)`*", "\\*\\`\\[x\\](y)\\`\\*"},
		{`a\b`, `a\\b`},
		{"1 $ ~ #2", `1 \$ \~ \#2`},
		{"two\nlines", `two\\nlines`},
	} {
		if got := escapeMarkdown(test.text); got != test.want {
			t.Errorf("%q is written %q, want %q", test.text, got, test.want)
		}
	}
}

// No name can add a column or a line to a table.
func TestMarkdownTablesKeepTheirShape(t *testing.T) {
	bar := regexp.MustCompile(`(?:^|[^\\])\|`)
	for name, ledger := range ledgers {
		var page strings.Builder
		if err := writeMarkdown(&page, ledger()); err != nil {
			t.Fatal(err)
		}
		columns := 0
		for _, line := range strings.Split(page.String(), "\n") {
			count := len(bar.FindAllString(line, -1))
			if strings.HasPrefix(line, "| ") && columns == 0 {
				columns = count
			}
			if strings.HasPrefix(line, "| ") != (columns > 0 && line != "") || line != "" && count != columns {
				t.Errorf("%s: a line with %d bars in a table with %d: %s", name, count, columns, line)
			}
			if line == "" {
				columns = 0
			}
		}
	}
}

type refusing struct{}

func (refusing) Write([]byte) (int, error) { return 0, errRefused }

var errRefused = errors.New("refused")

func TestWritersReportErrors(t *testing.T) {
	for name, write := range map[string]func() error{
		"Text":           func() error { return Text(refusing{}, bracket(), TextOptions{}) },
		"JSON":           func() error { return JSON(refusing{}, bracket()) },
		"Markdown":       func() error { return writeMarkdown(refusing{}, bracket()) },
		"JUnit":          func() error { return writeJUnit(refusing{}, bracket()) },
		"columns":        func() error { return writeColumns(refusing{}, bracket()) },
		"regions":        func() error { return csvFiles[0].write(refusing{}, bracket()) },
		"InspectionText": func() error { return InspectionText(refusing{}, inspected(), TextOptions{}) },
		"InspectionJSON": func() error { return InspectionJSON(refusing{}, inspected()) },
	} {
		if err := write(); !errors.Is(err, errRefused) {
			t.Errorf("%s returns %v", name, err)
		}
	}
}

// Whatever names and numbers a ledger holds, the text fits its page, the JSON reads
// back, and the CSV has one row for each region.
func FuzzNamesAndNumbers(f *testing.F) {
	f.Add("corner", 201.16420518, 0.5)
	f.Add("a \"quoted\", comma,\nbreak | pipe \x1b[31m\u202e\xff", -1.2345e-300, 1e300)
	f.Add(strings.Repeat("支架", 60), 0.0, 1.0000001)
	f.Fuzz(func(t *testing.T, name string, a, b float64) {
		ledger := bracket()
		finite := func(x float64) energy.Number {
			if x-x != 0 {
				return energy.None
			}
			return energy.Number(x)
		}
		text := energy.Text(name)
		ledger.Title, ledger.Materials[0].Name, ledger.Materials[0].Source = text, name, text
		ledger.Fields.Stress.Why, ledger.Findings[0].Message, ledger.Findings[0].Accepted = name, name, text
		ledger.Sources[0].Path, ledger.Requirements[0].Name = name, name
		ledger.Regions[0].Name, ledger.Regions[0].Energy, ledger.Regions[0].MaxUtilisation = name, finite(a), finite(b)
		ledger.Hotspots[0].Region, ledger.Hotspots[0].Density = name, finite(b)
		ledger.Requirements[0].Value, ledger.Requirements[0].AtMost = finite(a), finite(b)

		checkPage(t, textOf(t, ledger, TextOptions{}))
		if !json.Valid([]byte(jsonOf(t, ledger))) {
			t.Error("the JSON does not read back")
		}
		if records := readCSV(t, csvFiles[0], noReturns(ledger)); len(records) != 4 {
			t.Errorf("%d records, want 4", len(records))
		}
	})
}

// noReturns takes carriage returns from the name: a CSV keeps those that it is given.
func noReturns(ledger *energy.Ledger) *energy.Ledger {
	ledger.Regions[0].Name = strings.ReplaceAll(ledger.Regions[0].Name, "\r", "")
	return ledger
}

func TestPaintKeepsThePadding(t *testing.T) {
	page := textPage{colour: true}
	for _, test := range []struct{ text, code, want string }{
		{"1.09  ", red, red + "1.09" + normal + "  "},
		{"  ", red, "  "},
		{"1.09", "", "1.09"},
	} {
		if got := page.paint(test.text, test.code); got != test.want {
			t.Errorf("%q is painted %q, want %q", test.text, got, test.want)
		}
	}
}

func TestOnlyWhatIsPastTheLimitIsMarked(t *testing.T) {
	for utilisation, want := range map[energy.Number]tone{
		0.5: plainTone, 1: plainTone, 1.0000001: errorTone, energy.None: plainTone,
	} {
		if got := utilisationTone(utilisation); got != want {
			t.Errorf("the tone of %v is %d, want %d", utilisation, got, want)
		}
	}
}
