package report

import (
	"regexp"
	"strings"
	"testing"

	"strainledger/energy"
)

func TestVerdictCountsWhatStands(t *testing.T) {
	met, unmet := energy.RequirementResult{Met: true}, energy.RequirementResult{}
	note := energy.Finding{Severity: energy.Note}
	warning := energy.Finding{Severity: energy.Warning}
	fault := energy.Finding{Severity: energy.Error}
	accepted := energy.Finding{Severity: energy.Error, Accepted: "known"}
	type requirements = []energy.RequirementResult
	type findings = []energy.Finding
	for _, test := range []struct {
		requirements requirements
		findings     findings
		want         string
		tone         tone
	}{
		{nil, nil, "nothing was judged", plainTone},
		{nil, findings{note}, "nothing was judged", plainTone},
		{nil, findings{warning, fault, warning}, "nothing was judged; 1 error, 2 warnings", errorTone},
		{requirements{met, met, met}, findings{warning, note, warning}, "3 of 3 stated requirements met; 2 warnings", warningTone},
		{requirements{met}, nil, "1 of 1 stated requirements met", plainTone},
		{requirements{unmet, met}, findings{accepted}, "1 of 2 stated requirements met; 1 accepted finding", errorTone},
		{requirements{met}, findings{accepted, accepted}, "1 of 1 stated requirements met; 2 accepted findings", plainTone},
	} {
		ledger := &energy.Ledger{Requirements: test.requirements, Findings: test.findings}
		if got := Summarise(ledger).Verdict; got != test.want {
			t.Errorf("the verdict is %q, want %q", got, test.want)
		}
		if got := verdictTone(ledger.Requirements, ledger.Findings); got != test.tone {
			t.Errorf("the tone of %q is %d, want %d", test.want, got, test.tone)
		}
	}
}

func TestTheCautionStandsOnEveryReport(t *testing.T) {
	text := textOf(t, &energy.Ledger{}, TextOptions{})
	if !strings.HasSuffix(text, "\n\nA screening aid, not a design approval: the numbers describe the model that was given, and local\ncodes and a licensed engineer decide.\n") {
		t.Errorf("no caution at the end of\n%s", text)
	}
}

func TestNoFormCallsThePartGood(t *testing.T) {
	praise := regexp.MustCompile(`(?i)\b(pass|passed|passes|safe|ok|okay|fail|failed)\b`)
	for name, ledger := range ledgers {
		var page strings.Builder
		if err := writeMarkdown(&page, ledger()); err != nil {
			t.Fatal(err)
		}
		if word := praise.FindString(page.String() + textOf(t, ledger(), TextOptions{})); word != "" {
			t.Errorf("%s says %q", name, word)
		}
	}
}

func TestSamplingAndStateStandBesideTheVerdict(t *testing.T) {
	field := func(on string) *energy.FieldUsed { return &energy.FieldUsed{Array: "a", On: on} }
	for _, test := range []struct {
		from           energy.EnergySource
		stress, strain *energy.FieldUsed
		want           string
	}{
		{energy.FromStressStrain, field("cell"), field("cell"), "per cell"},
		{energy.FromStressStrain, field("point"), field("point"), "at points"},
		{energy.FromStressStrain, field("integration"), field("integration"), "at integration points"},
		{energy.FromStressStrain, field("cell"), field("point"), "stress per cell, strain at points"},
		{energy.FromStress, field("point"), nil, "at points"},
		{energy.FromStrain, nil, field("cell"), "per cell"},
		{energy.FromDisplacement, nil, nil, "once per cell, of the volume-mean stress"},
		{"", nil, nil, "not known: no field is named"},
	} {
		ledger := &energy.Ledger{
			Model:  energy.ModelSummary{EnergyFrom: string(test.from)},
			Fields: energy.FieldsUsed{Stress: test.stress, Strain: test.strain},
		}
		if got := samplingWords(ledger); got != test.want {
			t.Errorf("sampled %q, want %q", got, test.want)
		}
	}
	for _, test := range []struct {
		times []energy.Number
		want  string
	}{
		{nil, "the files state no time"},
		{[]energy.Number{energy.None, energy.None}, "the files state no time"},
		{[]energy.Number{1, energy.None, 1}, "time 1"},
		{[]energy.Number{0.5, 1}, "times 0.5, 1"},
	} {
		var sources []energy.SourceFile
		for _, time := range test.times {
			sources = append(sources, energy.SourceFile{Time: time})
		}
		if got := timeWords(sources); got != test.want {
			t.Errorf("state %q, want %q", got, test.want)
		}
	}
}

func TestLimitsAreGivenWithTheirSource(t *testing.T) {
	steel, rubber, iron := noMaterial("S355"), noMaterial("rubber"), noMaterial("iron")
	steel.ProportionalLimit, steel.Source = 330, "EN 10025-2, minimum"
	iron.ProportionalLimit, iron.ProportionalLimitCompression = 120, 400
	ledger := &energy.Ledger{
		Units:     energy.UnitLabels{Stress: "MPa"},
		Materials: []energy.MaterialUsed{steel, rubber, iron},
	}
	got := strings.Join(limitWords(ledger), "\n")
	want := "S355: 330 MPa, EN 10025-2, minimum\niron: 120 MPa, in compression 400 MPa, source not stated"
	if got != want {
		t.Errorf("limits are\n%s\nwant\n%s", got, want)
	}
}

func TestRequirementSentences(t *testing.T) {
	none := energy.None
	units := &energy.UnitLabels{Length: "mm", Stress: "MPa", Energy: "mJ", EnergyDensity: "mJ/mm^3"}
	for _, test := range []struct {
		requirement energy.RequirementResult
		want        string
	}{
		{
			energy.RequirementResult{Quantity: "energy", Region: "web", AtMost: 120, AtLeast: none, Value: 98.12345},
			"energy of web: 98.123 mJ, at most 120 mJ",
		},
		{
			energy.RequirementResult{Quantity: "max_utilisation", AtMost: 1, AtLeast: 0.5, Value: 1.0000001},
			"max_utilisation of the whole model: 1.0000001, at most 1, at least 0.5",
		},
		{
			energy.RequirementResult{Quantity: "energy_share", Region: "web", AtMost: 0.3, AtLeast: none, Value: 0.3},
			"energy_share of web: 0.30000, at most 0.3",
		},
		{
			energy.RequirementResult{Quantity: "cells_past_limit", AtMost: 0, AtLeast: none, Value: 1234567},
			"cells_past_limit of the whole model: 1234567, at most 0",
		},
		{
			energy.RequirementResult{Quantity: "hotspot.1.density", AtMost: none, AtLeast: 0.1, Value: 0.25},
			"hotspot.1.density of the whole model: 0.25000 mJ/mm³, at least 0.1 mJ/mm³",
		},
		{
			energy.RequirementResult{Quantity: "balance.gap", AtMost: 0.02, AtLeast: none, Value: none, Why: "no external work"},
			"balance.gap of the whole model: at most 0.02: no external work",
		},
		{
			energy.RequirementResult{Quantity: "something_new", AtMost: 1e-9, AtLeast: none, Value: 2.5},
			"something_new of the whole model: 2.5000, at most 1e-9",
		},
		{
			energy.RequirementResult{Quantity: "mass", AtMost: none, AtLeast: none, Value: none, Why: "no density"},
			"mass of the whole model: no density",
		},
		{
			energy.RequirementResult{Quantity: "mass", AtMost: 1, AtLeast: none, Value: none},
			"mass of the whole model: not available, at most 1",
		},
		{
			energy.RequirementResult{Quantity: "max_utilisation", AtMost: 1, AtLeast: none, Value: 0.5, Why: "3 cells have plastic strain"},
			"max_utilisation of the whole model: 0.50000, at most 1: 3 cells have plastic strain",
		},
	} {
		if got := requirementSubject(&test.requirement) + ": " + requirementBasis(&test.requirement, units); got != test.want {
			t.Errorf("got  %s\nwant %s", got, test.want)
		}
	}
}

func TestPastLimitSentences(t *testing.T) {
	ledger := bracket()
	for i := range 7 {
		region := energy.RegionAccount{Name: "pad " + string(rune('1'+i)), Criterion: "tresca", Account: noAccount()}
		ledger.Regions = append(ledger.Regions, region)
	}
	ledger.PastLimit.Cells = energy.None
	ledger.Total.VolumeWithoutLimit = ledger.Total.Volume / 4
	ledger.Total.CellsYielded = 12
	text := textOf(t, ledger, TextOptions{})
	for _, want := range []string{
		"  6 cells past the limit, in the regions that have one.\n",
		"  Without a limit: pad 1, pad 2, pad 3, pad 4, pad 5 and 2 more, 25.00 % of the volume. So there are\n  no figures for the whole model.\n",
		"  Judged by another criterion: pad 1 (Tresca), pad 2 (Tresca), pad 3 (Tresca), pad 4 (Tresca), pad 5\n  (Tresca) and 2 more.\n",
		"  Cells with plastic strain in the file: 12.\n",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	ledger.Regions[1].CellsPastLimit = 0
	if text := textOf(t, ledger, TextOptions{}); !strings.Contains(text, "  No cell is past its limit, in the regions that have one.\n") {
		t.Errorf("the regions with a limit are not told in\n%s", text)
	}
}
