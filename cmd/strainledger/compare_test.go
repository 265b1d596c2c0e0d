package main

import (
	"bytes"
	"encoding/json"
	"flag"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"strainledger/energy"
)

var update = flag.Bool("update", false, "write the golden files anew")

// bracketComparison is the study of the comparison of the built-in brackets.
const bracketComparison = `title = "Fillet radius of the mooring bracket"
[loading]
control = "force"
[compare]
tolerance = 7.0
[[require]]
name = "no softer than the first"
quantity = "change.energy"
at_most = 0.0
[[require]]
name = "the corner stores little"
quantity = "energy"
region = "corner"
at_most = 90.0
`

// readComparison reads a comparison from JSON.
func readComparison(t *testing.T, text string) *energy.Comparison {
	t.Helper()
	comparison := &energy.Comparison{}
	if err := json.Unmarshal([]byte(text), comparison); err != nil {
		t.Fatalf("%v in\n%s", err, text)
	}
	return comparison
}

// rowOf finds a row of a comparison that was read from JSON.
func rowOf(t *testing.T, comparison *energy.Comparison, run int, region energy.Text, quantity string) *energy.ComparisonRow {
	t.Helper()
	for i := range comparison.Rows {
		if row := &comparison.Rows[i]; row.Run == run && row.Region == region && row.Quantity == quantity {
			return row
		}
	}
	t.Fatalf("no row %d %s %s", run, region, quantity)
	return nil
}

// writeText writes a file of a test.
func writeText(t *testing.T, path, text string) {
	t.Helper()
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

// The built-in brackets in every form, from their studies.
func TestComparedDemoAgainstGolden(t *testing.T) {
	golden, err := filepath.Abs("../../testdata/golden/compare")
	if err != nil {
		t.Fatal(err)
	}
	inDemo(t)
	writeText(t, "brackets.toml", bracketComparison)
	studies := []string{"bracket-r2.toml", "bracket-r5.toml", "bracket-r9.toml", "--study", "brackets.toml"}
	code, stdout, stderr := call(append([]string{"compare"}, studies...)...)
	if code != 1 || stderr != "" {
		t.Errorf("code %d, stderr %s", code, stderr)
	}
	written := map[string]string{"comparison.txt": stdout}
	code, stdout, stderr = call(append([]string{"compare", "--out", "reports", "--json"}, studies...)...)
	if want := "strainledger: 4 of 5 stated requirements met; reports are in reports\n"; code != 1 || stderr != want {
		t.Errorf("code %d, stderr %q, want %q", code, stderr, want)
	}
	for _, name := range []string{"comparison.json", "comparison.csv", "requirements.xml"} {
		text, err := os.ReadFile(filepath.Join("reports", name))
		if err != nil {
			t.Fatal(err)
		}
		written[name] = string(text)
	}
	if stdout != written["comparison.json"] {
		t.Error("--json prints another comparison than --out writes")
	}
	for name, got := range written {
		path := filepath.Join(golden, name)
		if *update {
			if err := os.MkdirAll(golden, 0o777); err != nil {
				t.Fatal(err)
			}
			writeText(t, path, got)
		}
		want, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		if got != string(want) {
			t.Errorf("%s differs from what was written; -update writes it anew. Written:\n%s", path, got)
		}
	}
}

// The changes of energy and the peaks are those of the full results in double precision,
// by an independent script (testdata/demo/make_demo.py). Single precision of 1.2e-7 per
// number leaves less than 1e-8 in the sums, and 1e-6 in a single cell.
func TestComparedDemoEnergies(t *testing.T) {
	inDemo(t)
	writeText(t, "brackets.toml", bracketComparison)
	_, stdout, _ := call("compare", "bracket-r2.toml", "bracket-r5.toml", "bracket-r9.toml", "--study", "brackets.toml", "--json")
	comparison := readComparison(t, stdout)
	for i, want := range []struct{ change, peak float64 }{
		{0, 0.19691206189524355}, {-0.07950602814822727, 0.13570532828843251}, {-0.1843904291793268, 0.11350219363237464},
	} {
		energyRow, peakRow := rowOf(t, comparison, i+1, "", "energy"), rowOf(t, comparison, i+1, "", "max_density")
		if math.Abs(float64(energyRow.Relative)-want.change) > 2e-8 || math.Abs(float64(peakRow.Value)-want.peak) > 1e-6*want.peak {
			t.Errorf("run %d: change %.12g, peak %.12g, want %+v", i+1, energyRow.Relative, peakRow.Value, want)
		}
	}
	_, stdout, _ = call("compare", "bracket-r2.toml", "bracket-r5.toml", "bracket-r9.toml", "--study", "brackets.toml")
	stiffness := stdout[strings.Index(stdout, "\nStiffness under given forces\n"):]
	var order []string
	for _, line := range strings.Split(stiffness, "\n")[4:7] {
		order = append(order, strings.Fields(line)[1])
	}
	if !slices.Equal(order, []string{"3", "2", "1"}) {
		t.Errorf("the runs from stiff to soft are %q in\n%s", order, stiffness)
	}
}

// Within the tolerance that moves with the fillet, the first hotspot of each bracket has
// one of its region in each of the others, across three meshes. The assignment as a
// whole may still leave it without: it is the sum of distances that is least.
func TestFirstHotspotsOfTheDemoHavePartners(t *testing.T) {
	inDemo(t)
	var runs [][]energy.Hotspot
	for _, radius := range []string{"r2", "r5", "r9"} {
		text, err := os.ReadFile("bracket-" + radius + ".toml")
		if err != nil {
			t.Fatal(err)
		}
		writeText(t, radius+".toml", strings.Replace(string(text), "count = 5", "count = 20", 1))
		_, stdout, _ := call("tally", radius+".toml", "--json")
		var ledger energy.Ledger
		if err := json.Unmarshal([]byte(stdout), &ledger); err != nil {
			t.Fatal(err)
		}
		runs = append(runs, ledger.Hotspots)
	}
	const tolerance = 7.0
	for i, run := range runs {
		for j, other := range runs {
			first := run[0]
			hasPartner := slices.ContainsFunc(other, func(h energy.Hotspot) bool {
				x, y, z := h.At[0]-first.At[0], h.At[1]-first.At[1], h.At[2]-first.At[2]
				return h.Region == first.Region && math.Sqrt(x*x+y*y+z*z) <= tolerance
			})
			if i != j && !hasPartner {
				t.Errorf("the first hotspot of run %d, at %v, has no partner in run %d", i+1, *first.At, j+1)
			}
		}
	}
}

// A ledger, a list of ledgers through the standard input, and the study give the same
// comparison.
func TestRunsFromStudiesAndLedgers(t *testing.T) {
	inDemo(t)
	_, ledger, _ := call("tally", "bracket-r2.toml", "--json")
	writeText(t, "r2.json", ledger)
	_, other, _ := call("tally", "bracket-r5.toml", "--json")
	withoutPaths := func(text string) string {
		comparison := readComparison(t, text)
		for i := range comparison.Runs {
			comparison.Runs[i].Path = ""
		}
		plain, err := json.Marshal(comparison)
		if err != nil {
			t.Fatal(err)
		}
		return string(plain)
	}
	t.Setenv("TMPDIR", t.TempDir())
	_, want, _ := call("compare", "bracket-r2.toml", "bracket-r5.toml", "--json", "--quiet")
	list := "[\n" + ledger + ",\n" + other + "]\n"
	for name, c := range map[string]struct {
		args  []string
		stdin string
	}{
		"ledger and study": {[]string{"r2.json", "bracket-r5.toml"}, ""},
		"study and stdin":  {[]string{"bracket-r2.toml", "-"}, other},
		"list in stdin":    {[]string{"-"}, list},
	} {
		var out, messages bytes.Buffer
		code := run(append([]string{"compare", "--json", "--quiet"}, c.args...), strings.NewReader(c.stdin), &out, &messages)
		if code != 0 || messages.Len() > 0 || withoutPaths(out.String()) != withoutPaths(want) {
			t.Errorf("%s: code %d, %s, another comparison", name, code, messages.String())
		}
	}
	if left, _ := os.ReadDir(os.Getenv("TMPDIR")); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
	// A run beside itself.
	code, same, _ := call("compare", "r2.json", "r2.json", "--json", "--quiet")
	for _, row := range readComparison(t, same).Rows {
		if code != 0 || row.Difference.Exists() && row.Difference != 0 {
			t.Errorf("%+v", row)
		}
	}
}

// A run's own study says how it is loaded and within what its hotspots match, in the
// ledger too.
func TestLoadingOfTheRuns(t *testing.T) {
	inDemo(t)
	for _, radius := range []string{"r2", "r5"} {
		text, err := os.ReadFile("bracket-" + radius + ".toml")
		if err != nil {
			t.Fatal(err)
		}
		writeText(t, radius+".toml", string(text)+"\n[loading]\ncontrol = \"displacement\"\nscale = 2\n[compare]\ntolerance = 7\n")
	}
	_, ledger, _ := call("tally", "r2.toml", "--json")
	writeText(t, "r2.json", ledger)
	_, plain, _ := call("compare", "bracket-r2.toml", "bracket-r5.toml", "--json", "--quiet")
	for _, first := range []string{"r2.toml", "r2.json"} {
		_, stdout, _ := call("compare", first, "r5.toml", "--json", "--quiet")
		got := readComparison(t, stdout)
		value, want := rowOf(t, got, 2, "", "energy").Value, rowOf(t, readComparison(t, plain), 2, "", "energy").Value/4
		if got.Control != "displacement" || value != want {
			t.Errorf("%s: control %q, energy %v, want %v", first, got.Control, value, want)
		}
		matched := slices.ContainsFunc(got.Hotspots, func(m energy.HotspotMatch) bool { return m.Distance > 2 && m.State == energy.Moved })
		if !matched {
			t.Errorf("%s: the tolerance of the baseline is not used: %+v", first, got.Hotspots)
		}
	}
}

// Errors of the runs name their file; nothing is compared then.
func TestRunsThatCannotBeCompared(t *testing.T) {
	inDemo(t)
	writeText(t, "empty.toml", "")
	writeText(t, "units.toml", "units.length = \"m\"")
	writeText(t, "broken.json", "{\"schema\": \"strainledger/ledger/v1\",\n \"title\"")
	for _, c := range []struct {
		args []string
		code int
		want string
	}{
		{[]string{"no.json", "broken.json", "bracket-r2.vtu"}, 3, "no.json: no such file or directory\n" +
			"broken.json: line 2: not whole JSON: unexpected end of JSON input\n" +
			"bracket-r2.vtu: no ledger: it starts with '<' where JSON starts with {; give a ledger.json that tally has written, or a study file\n"},
		{[]string{"bracket-r2.toml", "empty.toml"}, 2, "empty.toml: names no result files; add files to [input]\n"},
		{[]string{"bracket-r2.toml", "no.toml"}, 2, "no.toml: cannot read the study file: no such file or directory; give the path of a file that exists and can be read\n"},
		{[]string{"bracket-r2.toml", "bracket-r5.toml", "--study", "units.toml"}, 2,
			"units.toml: the comparison's unit of length is m, the baseline's mm; bounds and tolerances are in the baseline's units\n"},
		{[]string{"bracket-r2.toml", "bracket-r5.toml", "--out", "broken.json/x"}, 4, "mkdir broken.json: not a directory\n"},
	} {
		code, stdout, stderr := call(append([]string{"compare", "--quiet"}, c.args...)...)
		if want := "strainledger: " + strings.ReplaceAll(strings.TrimSuffix(c.want, "\n"), "\n", "\nstrainledger: ") + "\n"; code != c.code || stdout != "" || stderr != want {
			t.Errorf("%q: code %d, stdout %q, stderr\n%swant\n%s", c.args, code, stdout, stderr, want)
		}
	}
}
