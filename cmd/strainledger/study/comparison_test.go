package study

import (
	"errors"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"strainledger/energy"
)

// wholeComparison uses every key that the study of a comparison has.
const wholeComparison = `title = "Fillet radius"
[units]
length = "mm"
stress = "MPa"
mass = "kg"
[loading]
control = "force"
scale = 2
[compare]
tolerance = 7
[[require]]
name = "no softer"
quantity = "change.energy"
at_most = 0
[[require]]
quantity = "specific_energy"
region = "web"
at_least = 1.5
[[require]]
quantity = "hotspot.1.density"
at_most = 3
[[accept]]
code = "hooke-mismatch"
reason = "rubber"
[review]
document = "MB-8"
`

func TestReadComparison(t *testing.T) {
	none := energy.None
	want := &energy.CompareOptions{
		Title: "Fillet radius", Length: "mm", Stress: "MPa", Mass: "kg",
		Loading: &energy.Loading{Control: "force", Scale: 2}, HotspotTolerance: 7,
		Requirements: []energy.Requirement{
			{Name: "no softer", Quantity: "change.energy", AtMost: 0, AtLeast: none},
			{Name: "specific_energy of web >= 1.5", Quantity: "specific_energy", Region: "web", AtMost: none, AtLeast: 1.5},
			{Name: "hotspot.1.density <= 3", Quantity: "hotspot.1.density", AtMost: 3, AtLeast: none},
			{Name: "change.volume of a <= 0.1", Quantity: "change.volume", Region: "a", AtMost: 0.1, AtLeast: none},
		},
		Acceptances: []energy.Acceptance{{Code: "hooke-mismatch", Reason: "rubber"}},
		Review:      energy.Review{Document: "MB-8"},
	}
	flags := Flags{Requirements: []string{"change.volume of a <= 0.1"}}
	got, err := ReadComparison(write(t, t.TempDir(), "c.toml", wholeComparison), flags)
	if err != nil {
		t.Fatal(err)
	}
	if difference := cmp.Diff(want, got, sameNumbers); difference != "" {
		t.Errorf("want -, got +\n%s", difference)
	}

	got, err = ReadComparison("", flags)
	if err != nil {
		t.Fatal(err)
	}
	if difference := cmp.Diff(&energy.CompareOptions{Requirements: want.Requirements[3:]}, got, sameNumbers); difference != "" {
		t.Errorf("from flags alone: want -, got +\n%s", difference)
	}
}

func TestFaultsOfAComparison(t *testing.T) {
	for name, c := range map[string]struct {
		text string // § stands where the faults are
		want []string
	}{
		"tables of runs": {"[§input]\nfiles = [\"a\"]\n[§model]\nx = 1\n[[§material]]\n[§fields]\n[§energy]\n[[§region]]\n[§limit]\n[§hotspots]\n[§error]\n[[§case]]", []string{
			`"input" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"model" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"material" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"fields" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"energy" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"region" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"limit" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"hotspots" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"error" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
			`"case" has no meaning in the study of a comparison; it belongs into the studies of the runs`,
		}},
		"unknown key": {"[§loadings]", []string{`unknown key "loadings"; the nearest known key is "loading"`}},
		"quantities": {"[[require]]\n§quantity = \"change.enrgy\"\nat_most = 1\n[[require]]\n§quantity = \"specific_enrgy\"\nat_most = 1\n[[require]]\n§quantity = \"balance.gaps\"\nat_most = 1\n[[require]]\n§quantity = \"hotspot.1\"\nat_most = 1",
			[]string{
				`require.quantity is "change.enrgy", which runs are not compared by; the nearest is "change.energy"`,
				`require.quantity is "specific_enrgy", which is no number of an account; the nearest is "specific_energy"`,
				`require.quantity is "balance.gaps", which is no number of the balance; write balance.gap`,
				`require.quantity is "hotspot.1", which is no number of a hotspot; write hotspot.RANK.KEY, such as "hotspot.1.density"`,
			}},
		"no bound":       {"[[§require]]\nquantity = \"energy\"", []string{"[[require]] without a bound; add at_most or at_least"}},
		"accepted twice": {"[[accept]]\ncode = \"all-zero\"\nreason = \"a\"\n[[accept]]\n§code = \"all-zero\"\nreason = \"b\"", []string{`accept.code "all-zero" was given before (line 2); use another or remove one of the two`}},
		"no TOML":        {"title §= = 1", nil},
	} {
		t.Run(name, func(t *testing.T) {
			to := &faults{path: "c.toml"}
			parseComparison([]byte(strings.ReplaceAll(c.text, "§", "")), Flags{}, to)
			err := to.err()
			if c.want == nil {
				if err == nil {
					t.Error("no fault")
				}
				return
			}
			places := marks(c.text)
			if len(to.found) != len(c.want) {
				t.Fatalf("got %v", err)
			}
			for i, fault := range to.found {
				if fault.Message != c.want[i] || (place{line: fault.Line, column: fault.Column}) != places[i] {
					t.Errorf("got  %v\nwant %s at %+v", fault, c.want[i], places[i])
				}
			}
		})
	}
	_, err := ReadComparison("no.toml", Flags{})
	if found := (Faults{}); !errors.As(err, &found) || !strings.HasPrefix(err.Error(), "no.toml: cannot read the study file") {
		t.Errorf("got %v", err)
	}
}

// Runs may be named twice; globs go by their numbers.
func TestExpandRuns(t *testing.T) {
	folder := t.TempDir()
	for _, name := range []string{"r10.json", "r9.json", "r2.json"} {
		write(t, folder, name, "{}")
	}
	at := func(name string) string { return filepath.Join(folder, name) }
	got, err := ExpandRuns([]string{at("r9.json"), at("r*.json"), "-", at("no.json")})
	want := []string{at("r9.json"), at("r2.json"), at("r9.json"), at("r10.json"), "-", at("no.json")}
	if err != nil || !slices.Equal(got, want) {
		t.Errorf("got %q, %v\nwant %q", got, err, want)
	}
	if _, err := ExpandRuns([]string{at("x*.json")}); err == nil {
		t.Error("a pattern that matches nothing is taken")
	}
}
