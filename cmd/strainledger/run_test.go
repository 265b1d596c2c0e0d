package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"syscall"
	"testing"
	"time"

	"strainledger/cmd/strainledger/study"
	"strainledger/energy"
	"strainledger/readers"
)

// call runs the program and returns its exit code and what it printed.
func call(args ...string) (code int, stdout, stderr string) {
	var out, err bytes.Buffer
	code = run(args, strings.NewReader(""), &out, &err)
	return code, out.String(), err.String()
}

// inDemo makes a folder with the built-in studies the current one.
func inDemo(t *testing.T) {
	t.Helper()
	folder := t.TempDir()
	if err := writeDemo(folder); err != nil {
		t.Fatal(err)
	}
	t.Chdir(folder)
}

// readLedger reads a ledger from JSON.
func readLedger(t *testing.T, text string) *energy.Ledger {
	t.Helper()
	ledger := &energy.Ledger{}
	if err := json.Unmarshal([]byte(text), ledger); err != nil {
		t.Fatalf("%v in\n%s", err, text)
	}
	return ledger
}

// Calls that cannot be done: one line on stderr, nothing on stdout.
func TestWrongCalls(t *testing.T) {
	inDemo(t)
	for _, c := range []struct {
		args []string
		want string
	}{
		{nil, "no command given; see strainledger --help"},
		{[]string{"merge"}, `no command "merge"; there are compare, completion, curve, demo, inspect, tally, version; see strainledger --help`},
		{[]string{"--nothing"}, "unknown flag: --nothing; see strainledger --help"},
		{[]string{"help", "merge"}, `no command "merge"; there are compare, completion, curve, demo, inspect, tally, version; see strainledger --help`},
		{[]string{"help", "tally", "demo"}, "found 2 arguments, want one command at most; see strainledger help --help"},
		{[]string{"version", "x"}, `found the argument "x", want none; see strainledger version --help`},
		{[]string{"completion"}, "want one shell of bash, zsh, fish, powershell; see strainledger completion --help"},
		{[]string{"completion", "ksh"}, `no shell "ksh"; want one of bash, zsh, fish, powershell; see strainledger completion --help`},
		{[]string{"demo", "a", "b"}, "found 2 arguments, want one folder at most; see strainledger demo --help"},
		{[]string{"demo", "--workers", "-1"}, "--workers -1: want 0 for all processors, or a number of them; see strainledger demo --help"},
		{[]string{"inspect"}, "no files given; see strainledger inspect --help"},
		{[]string{"inspect", "a.vtu", "--color", "red"}, "--color red: want always, never or auto; see strainledger inspect --help"},
		{[]string{"inspect", "no*.vtu"}, `no file matches "no*.vtu"; mend the pattern or export the files first`},
		{[]string{"tally"}, "no study file and no result files given; see strainledger tally --help"},
		{[]string{"tally", "a.vtu", "--nothing"}, "unknown flag: --nothing; see strainledger tally --help"},
		{[]string{"tally", "a.vtu", "--workers", "two"}, `invalid argument "two" for "--workers" flag: must be an integer; see strainledger tally --help`},
		{[]string{"tally", "a.vtu", "--workers", "-1"}, "--workers -1: want 0 for all processors, or a number of them; see strainledger tally --help"},
		{[]string{"tally", "a.vtu", "--color", "red"}, "--color red: want always, never or auto; see strainledger tally --help"},
		{[]string{"tally", "a.vtu", "bracket-r2.toml"}, "bracket-r2.toml is a study file and has to be the first and only one; see strainledger tally --help"},
		{[]string{"tally", "bracket-r2.toml", "bracket-r5.toml"}, "bracket-r5.toml is a study file and has to be the first and only one; see strainledger tally --help"},
		{[]string{"tally", "bracket-r2.vtu", "bracket-r5.vtu"}, "2 files without a study: add --together (blocks of one model), --steps (states in load order) or --each (one run for each); see strainledger tally --help"},
		{[]string{"tally", "*.vtu"}, "3 files without a study: add --together (blocks of one model), --steps (states in load order) or --each (one run for each); see strainledger tally --help"},
		{[]string{"tally", "*.vtu", "--steps"}, "--steps is not built yet; tally each state on its own with --each; see strainledger tally --help"},
		{[]string{"tally", "*.vtu", "--each", "--together"}, "--together, --steps and --each exclude each other; keep one; see strainledger tally --help"},
		{[]string{"tally", "bracket-r2.vtu", "sub/bracket-r2.vtk", "--each", "--out", "o"},
			"the reports of bracket-r2.vtu and sub/bracket-r2.vtk would both go to o/bracket-r2; rename one, or tally them on their own; see strainledger tally --help"},
		{[]string{"compare"}, "no ledgers and no studies given; see strainledger compare --help"},
		{[]string{"compare", "a.json", "--baseline", "0"}, "--baseline 0: runs are counted from 1; see strainledger compare --help"},
		{[]string{"compare", "a.json", "--color", "red"}, "--color red: want always, never or auto; see strainledger compare --help"},
		{[]string{"compare", ".", "a.json"}, ". is a folder; name the ledger.json in it; see strainledger compare --help"},
		{[]string{"compare", "no*.json"}, `no file matches "no*.json"; mend the pattern or export the files first`},
		{[]string{"compare", "a.json", "--study", "no.toml"}, "no.toml: cannot read the study file: no such file or directory; give the path of a file that exists and can be read"},
		{[]string{"compare", "a.json", "--require", "change.energies <= 0"},
			`--require "change.energies <= 0": require.quantity is "change.energies", which runs are not compared by; the nearest is "change.energy"`},
		{[]string{"compare", "bracket-r2.toml"}, "1 run to compare; give two ledgers or studies at least"},
		{[]string{"compare", "bracket-r2.toml", "bracket-r5.toml", "--baseline", "3"}, "run 3 is to be the baseline, and there are 2 runs"},
		{[]string{"compare", "bracket-r2.toml", "bracket-r5.toml", "--require", "energy of web <= 1"}, `requirement "energy of web <= 1": no run has a region "web"`},
		{[]string{"tally", "no.toml"}, "no.toml: cannot read the study file: no such file or directory; give the path of a file that exists and can be read"},
		{[]string{"tally", "bracket-r2.vtu", "--units", "mm bar"}, `--units "mm bar": "bar" is no unit of length, stress or mass; the nearest is "Pa"`},
		{[]string{"tally", "bracket-r2.vtu", "bracket-r2.vtu", "--together"}, `the file "bracket-r2.vtu" is named twice; name it once`},
	} {
		t.Run(strings.Join(c.args, " "), func(t *testing.T) {
			code, stdout, stderr := call(c.args...)
			if want := "strainledger: " + c.want + "\n"; code != 2 || stdout != "" || stderr != want {
				t.Errorf("code %d, stdout %q, stderr\n%swant\n%s", code, stdout, stderr, want)
			}
		})
	}
}

// Every fault of a study stands on a line of its own.
func TestFaultsOfAStudy(t *testing.T) {
	inDemo(t)
	if err := os.WriteFile("s.toml", []byte("titel = 1\n[limit]\nlist = 0\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	code, stdout, stderr := call("tally", "s.toml", "bracket-r2.vtu")
	want := "strainledger: s.toml:1:1: unknown key \"titel\"; the nearest known key is \"title\"\n" +
		"strainledger: s.toml:3:1: limit.list is 0; it must be 1 or more\n"
	if code != 2 || stdout != "" || stderr != want {
		t.Errorf("code %d, stdout %q, stderr\n%swant\n%s", code, stdout, stderr, want)
	}
	if err := os.WriteFile("s.toml", nil, 0o666); err != nil {
		t.Fatal(err)
	}
	code, stdout, stderr = call("tally", "s.toml")
	want = "strainledger: s.toml: names no result files; add files to [input], or name them after the study file\n"
	if code != 2 || stdout != "" || stderr != want {
		t.Errorf("code %d, stdout %q, stderr\n%swant\n%s", code, stdout, stderr, want)
	}
}

func TestExitCodes(t *testing.T) {
	for name, c := range map[string]struct {
		err  error
		want int
	}{
		"none":           {nil, 0},
		"call":           {&callError{"x", errors.New("y")}, 2},
		"study":          {study.Faults{{Message: "x"}}, 2},
		"asked":          {fmt.Errorf("x: %w", &energy.StudyError{Err: errors.New("y")}), 2},
		"results":        {&placedError{"x", &energy.InputError{Err: errors.New("y")}}, 3},
		"file":           {&readers.Error{Path: "x", Err: readers.ErrTruncated}, 3},
		"other":          {io.ErrUnexpectedEOF, 3},
		"report":         {&reportError{os.ErrPermission}, 4},
		"interrupt":      {&interruption{os.Interrupt}, 130},
		"terminate":      {&interruption{syscall.SIGTERM}, 143},
		"by interrupt":   {&readers.Error{Path: "x", Err: context.Canceled}, 0},
		"wrapped report": {fmt.Errorf("x: %w", &reportError{os.ErrPermission}), 4},
	} {
		if got := exitCode(c.err); got != c.want {
			t.Errorf("%s: %d, want %d", name, got, c.want)
		}
	}
	p := &program{err: io.Discard}
	for _, code := range []int{0, 3, 1, 4, 2} {
		p.note(code)
	}
	if p.code != 4 {
		t.Errorf("the worst is %d, want 4", p.code)
	}
}

func TestVerdictCode(t *testing.T) {
	met, unmet := energy.RequirementResult{Met: true}, energy.RequirementResult{}
	finding := func(severity, accepted string) energy.Finding {
		return energy.Finding{Severity: severity, Accepted: energy.Text(accepted)}
	}
	for _, c := range []struct {
		ledger energy.Ledger
		want   int
	}{
		{energy.Ledger{}, 0},
		{energy.Ledger{Requirements: []energy.RequirementResult{met, met}}, 0},
		{energy.Ledger{Requirements: []energy.RequirementResult{met, unmet}}, 1},
		{energy.Ledger{Findings: []energy.Finding{finding(energy.Note, ""), finding(energy.Warning, "")}}, 0},
		{energy.Ledger{Findings: []energy.Finding{finding(energy.Note, ""), finding(energy.Error, "")}}, 1},
		{energy.Ledger{Findings: []energy.Finding{finding(energy.Error, "known")}}, 0},
		{energy.Ledger{Findings: []energy.Finding{finding(energy.Error, "known"), finding(energy.Error, "")}}, 1},
	} {
		if got := verdictCode(c.ledger.Requirements, c.ledger.Findings); got != c.want {
			t.Errorf("%+v: %d, want %d", c.ledger, got, c.want)
		}
	}
}

// The demo's energies: the sums of ½ σ:ε V of the full results in double precision,
// by the independent script that made the compact copies (testdata/demo/make_demo.py).
// Single precision of 1.2e-7 per number leaves less than 1e-8 in the sum.
func TestDemoEnergies(t *testing.T) {
	code, stdout, _ := call("demo", "--json")
	if code != 0 {
		t.Fatalf("exit code %d", code)
	}
	var ledgers []energy.Ledger
	if err := json.Unmarshal([]byte(stdout), &ledgers); err != nil {
		t.Fatal(err)
	}
	want := []struct {
		total, legs, corner, volume float64
		cells, past                 int64
		source, study               string
	}{
		{201.1641851799917, 98.93738625078876, 102.22679892920291, 17943.43725151047, 3404, 3, "bracket-r2.vtu", "bracket-r2.toml"},
		{185.17041981065609, 99.4782522611984, 85.6921675494577, 18041.26520371256, 3266, 0, "bracket-r5.vtu", "bracket-r5.toml"},
		{164.07143473914346, 99.26732454646839, 64.80411019267508, 18282.058458233, 3360, 0, "bracket-r9.vtu", "bracket-r9.toml"},
	}
	if len(ledgers) != len(want) {
		t.Fatalf("%d ledgers", len(ledgers))
	}
	for i, w := range want {
		l := &ledgers[i]
		if len(l.Regions) != 2 || l.Regions[0].Name != "legs" || l.Regions[1].Name != "corner" {
			t.Fatalf("regions %+v", l.Regions)
		}
		for name, pair := range map[string][2]float64{
			"energy":    {float64(l.Total.Energy), w.total},
			"of legs":   {float64(l.Regions[0].Energy), w.legs},
			"of corner": {float64(l.Regions[1].Energy), w.corner},
			"volume":    {float64(l.Total.Volume), w.volume},
		} {
			if math.Abs(pair[0]-pair[1]) > 1e-7*pair[1] {
				t.Errorf("%s: %s = %.10g, want %.10g", w.source, name, pair[0], pair[1])
			}
		}
		if l.Total.Cells != w.cells || int64(l.Total.CellsPastLimit) != w.past {
			t.Errorf("%s: %d cells, %v past the limit", w.source, l.Total.Cells, l.Total.CellsPastLimit)
		}
		if l.Sources[0].Path != w.source || l.Study.Path != w.study {
			t.Errorf("%s: paths %q and %q", w.source, l.Sources[0].Path, l.Study.Path)
		}
	}
}

// The ledger's Run and the hashes, which the account leaves to the command.
func TestLedgerOfTheRun(t *testing.T) {
	inDemo(t)
	before := time.Now().Add(-time.Second)
	code, stdout, _ := call("tally", "bracket-r2.toml", "--json", "--workers", "3")
	ledger := readLedger(t, stdout)
	started, err := time.Parse(time.RFC3339, ledger.Run.Started)
	if code != 0 || err != nil || started.Before(before.Truncate(time.Second)) || started.After(time.Now()) || !strings.HasSuffix(ledger.Run.Started, "Z") {
		t.Errorf("code %d, started %q, %v", code, ledger.Run.Started, err)
	}
	if ledger.Run.Workers != 3 || !(ledger.Run.Seconds > 0) || ledger.Run.Version == "" {
		t.Errorf("run %+v", ledger.Run)
	}
	if ledger.Study.Path != "bracket-r2.toml" || ledger.Study.SHA256 != "" || ledger.Sources[0].SHA256 != "" {
		t.Errorf("without --hash: %+v %+v", ledger.Study, ledger.Sources)
	}
	_, stdout, _ = call("tally", "bracket-r2.toml", "--json", "--hash")
	hashed := readLedger(t, stdout)
	for path, got := range map[string]energy.Text{"bracket-r2.toml": hashed.Study.SHA256, "bracket-r2.vtu": hashed.Sources[0].SHA256} {
		if want := embeddedSums[path]; string(got) != want {
			t.Errorf("%s: sha256 %s, want %s", path, got, want)
		}
	}
	// Nothing but run and hashes may differ.
	hashed.Run, hashed.Study.SHA256, hashed.Sources[0].SHA256 = ledger.Run, "", ""
	one, _ := json.Marshal(ledger)
	other, _ := json.Marshal(hashed)
	if !bytes.Equal(one, other) {
		t.Errorf("ledgers of one input differ")
	}
}

// embeddedSums are from sha256sum, to be renewed with the demo's files.
var embeddedSums = map[string]string{
	"bracket-r2.toml": "01d61c2a4baff68a5cd63546c9bec528f4112c5ce583c9423cd7c26cce43d445",
	"bracket-r2.vtu":  "30de346db23b6810863f10a98cb59e6fd8cd48dbca95a92926e367c39487b9e3",
}

// --out hashes the inputs without being asked.
func TestReportsHoldHashes(t *testing.T) {
	inDemo(t)
	code, stdout, _ := call("tally", "bracket-r2.toml", "--out", "reports")
	text, err := os.ReadFile("reports/ledger.json")
	if err != nil || code != 0 || stdout != "" {
		t.Fatalf("code %d, stdout %q: %v", code, stdout, err)
	}
	ledger := readLedger(t, string(text))
	if string(ledger.Study.SHA256) != embeddedSums["bracket-r2.toml"] || string(ledger.Sources[0].SHA256) != embeddedSums["bracket-r2.vtu"] {
		t.Errorf("%+v %+v", ledger.Study, ledger.Sources)
	}
}

func TestReadersOptions(t *testing.T) {
	seconds := 2.5
	for _, c := range []struct {
		time study.Time
		want readers.Time
	}{
		{study.Time{}, readers.Time{Choice: readers.Last}},
		{study.Time{First: true}, readers.Time{Choice: readers.First}},
		{study.Time{Value: &seconds}, readers.Time{Choice: readers.AtNumber, Number: 2.5}},
	} {
		if got := readersOptions(&study.Study{Time: c.time}); got.Time != c.want {
			t.Errorf("%+v: %+v, want %+v", c.time, got.Time, c.want)
		}
	}
}

// What comes through stdin gives the ledger of the same file, under the name "-".
func TestStandardInput(t *testing.T) {
	inDemo(t)
	data, err := os.ReadFile("bracket-r2.vtu")
	if err != nil {
		t.Fatal(err)
	}
	t.Setenv("TMPDIR", t.TempDir())
	var out, messages bytes.Buffer
	code := run([]string{"tally", "bracket-r2.toml", "-", "--json", "--hash"}, bytes.NewReader(data), &out, &messages)
	got := readLedger(t, out.String())
	_, stdout, _ := call("tally", "bracket-r2.toml", "--json", "--hash")
	want := readLedger(t, stdout)
	if code != 0 || got.Sources[0].Path != "-" || got.Sources[0].SHA256 != want.Sources[0].SHA256 || got.Total.Energy != want.Total.Energy || got.Total.Energy == 0 {
		t.Errorf("code %d, source %+v, energy %v, want %v: %s", code, got.Sources[0], got.Total.Energy, want.Total.Energy, messages.String())
	}
	code = run([]string{"tally", "-"}, strings.NewReader("rubbish"), &out, &messages)
	if code != 3 || !strings.HasPrefix(messages.String(), "strainledger: -:") {
		t.Errorf("code %d: %s", code, messages.String())
	}
	if left, _ := os.ReadDir(os.Getenv("TMPDIR")); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
}

// A signal ends a run that waits for its input: exit code by the signal, one line,
// nothing left.
func TestInterruption(t *testing.T) {
	for signal, want := range map[syscall.Signal]int{syscall.SIGINT: 130, syscall.SIGTERM: 143} {
		t.Run(signal.String(), func(t *testing.T) {
			folder := t.TempDir()
			t.Setenv("TMPDIR", folder)
			input, never := io.Pipe()
			defer never.Close()
			var out, messages bytes.Buffer
			code := make(chan int)
			go func() {
				code <- run([]string{"tally", "-", "--out", filepath.Join(folder, "out")}, input, &out, &messages)
			}()
			for { // until it waits for its input
				if kept, _ := filepath.Glob(filepath.Join(folder, "strainledger-*")); len(kept) > 0 {
					break
				}
				time.Sleep(time.Millisecond)
			}
			if err := syscall.Kill(os.Getpid(), signal); err != nil {
				t.Fatal(err)
			}
			select {
			case got := <-code:
				if got != want || out.Len() > 0 || messages.String() != "strainledger: interrupted; nothing half-written is left\n" {
					t.Errorf("code %d, stdout %q, stderr %q", got, out.String(), messages.String())
				}
			case <-time.After(10 * time.Second):
				t.Fatal("does not end")
			}
			if left, _ := os.ReadDir(folder); len(left) > 0 {
				t.Errorf("left behind: %v", left)
			}
		})
	}
}

// closedPipe is what a pipe is to its writer when nobody reads any more.
type closedPipe struct{}

func (closedPipe) Write([]byte) (int, error) {
	return 0, &os.PathError{Op: "write", Path: "|1", Err: syscall.EPIPE}
}

// fullDisk takes nothing.
type fullDisk struct{}

func (fullDisk) Write([]byte) (int, error) {
	return 0, &os.PathError{Op: "write", Path: "x", Err: syscall.ENOSPC}
}

func TestOutputThatCannotBeWritten(t *testing.T) {
	inDemo(t)
	for _, args := range [][]string{
		{"tally", "bracket-r2.toml"}, {"tally", "bracket-r2.toml", "--json", "--quiet"}, {"tally", "bracket-r2.toml", "--check"}, {"demo"},
		{"compare", "bracket-r2.toml", "bracket-r5.toml"}, {"compare", "bracket-r2.toml", "bracket-r5.toml", "--json", "--quiet"},
		{"inspect", "bracket-r2.vtu"}, {"version"}, {"completion", "bash"}, {"help"}, {"tally", "-h"},
	} {
		var messages bytes.Buffer
		if code := run(args, nil, closedPipe{}, &messages); code != 0 || messages.Len() > 0 {
			t.Errorf("closed pipe: %q: code %d, stderr %s", args, code, messages.String())
		}
		if code := run(args, nil, fullDisk{}, &messages); code != 4 || !strings.HasPrefix(messages.String(), "strainledger: standard output: ") {
			t.Errorf("full disk: %q: code %d, stderr %s", args, code, messages.String())
		}
	}
}

func TestHelp(t *testing.T) {
	_, root, _ := call("--help")
	for _, command := range []string{"", "tally", "compare", "inspect", "demo", "version", "completion", "help"} {
		code, stdout, stderr := call("help", command)
		if command == "" {
			code, stdout, stderr = call("help")
		}
		if code != 0 || stderr != "" || !strings.Contains(stdout, "\nExamples:\n  strainledger") && !strings.Contains(stdout, "\nExamples:\n  source") {
			t.Errorf("help %s: code %d, stderr %q, stdout\n%s", command, code, stderr, stdout)
		}
		if examples, usage := strings.Index(stdout, "\nExamples:"), strings.Index(stdout, "\nUsage:"); examples > usage {
			t.Errorf("help %s: usage before examples", command)
		}
		args := []string{"-h"}
		if command != "" {
			args = []string{command, "-h"}
		}
		if _, again, _ := call(args...); again != stdout {
			t.Errorf("%s: -h and help differ:\n%s\n%s", command, again, stdout)
		}
		inExamples := false
		for _, line := range strings.Split(stdout, "\n") {
			inExamples = line == "Examples:" || inExamples && line != ""
			if len(line) > 101 && !inExamples {
				t.Errorf("help %s: %d columns: %s", command, len(line), line)
			}
		}
		if command != "" && command != "help" && !regexp.MustCompile(`(?m)^  `+command+` `).MatchString(root) {
			t.Errorf("help does not list %s", command)
		}
	}
}

func TestVersion(t *testing.T) {
	_, stdout, _ := call("version", "--json")
	var got map[string]any
	if err := json.Unmarshal([]byte(stdout), &got); err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{"version", "commit", "modified", "go", "platform"} {
		if _, there := got[key]; !there {
			t.Errorf("no %s in %s", key, stdout)
		}
	}
	var text bytes.Buffer
	if err := writeVersion(&text, version{Version: "v0.3.0", Commit: "abc", Modified: true, Go: "go1.26", Platform: "linux/arm64"}, false); err != nil {
		t.Fatal(err)
	}
	if want := "strainledger v0.3.0\ncommit abc, modified\ngo1.26 linux/arm64\n"; text.String() != want {
		t.Errorf("got %q", text.String())
	}
}

func TestCompletion(t *testing.T) {
	for _, shell := range shells {
		if code, stdout, stderr := call("completion", shell); code != 0 || !strings.Contains(stdout, "strainledger") || stderr != "" {
			t.Errorf("%s: code %d, %d bytes, %s", shell, code, len(stdout), stderr)
		}
	}
	_, stdout, _ := call("__complete", "tally", "")
	if want := "toml\nvtu\nvtk\n:8\n"; stdout != want { // 8: complete to these extensions
		t.Errorf("got %q, want %q", stdout, want)
	}
}
