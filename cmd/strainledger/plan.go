package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"strings"

	"strainledger/energy"
)

// A plannedRun is what tally --check says: what a tally of the same inputs would do.
type plannedRun struct {
	Study    string              `json:"study"` // "" without one
	Files    []plannedFile       `json:"files"`
	From     energy.EnergySource `json:"energy_from"`
	Fields   energy.FieldsUsed   `json:"fields"`
	Regions  []plannedRegion     `json:"regions"`
	Findings []energy.Finding    `json:"findings"` // those that are known before anything is computed
	Reports  string              `json:"reports"`  // folder; "" for a text on stdout
}

type plannedFile struct {
	Path   string        `json:"path"`
	Points int64         `json:"points"`
	Cells  int64         `json:"cells"`
	Time   energy.Number `json:"time"`
}

type plannedRegion struct {
	Name      string           `json:"name"`
	Material  energy.Text      `json:"material"`
	Limit     energy.Number    `json:"proportional_limit"`
	Criterion energy.Criterion `json:"criterion"`
}

// plan prints what an account would do.
func (p *program) plan(ctx context.Context, opened *results, a *account, options *tallyOptions) error {
	settings := a.study.Options
	settings.Workers = options.workers
	model, err := opened.open(ctx, a.study.Files, readersOptions(a.study))
	if err != nil {
		return err
	}
	planned, err := energy.PlanTally(ctx, model, &settings)
	if err != nil {
		return atFiles(err, a.study)
	}
	run := plannedRun{
		Study: a.study.Path, Files: []plannedFile{}, From: planned.EnergyFrom, Fields: planned.Fields,
		Regions: []plannedRegion{}, Findings: planned.Findings, Reports: a.out,
	}
	for _, source := range model.Sources {
		run.Files = append(run.Files, plannedFile{source.Path, source.Points, source.Cells, energy.Number(source.Time)})
	}
	for _, region := range planned.Regions {
		run.Regions = append(run.Regions, plannedRegion{region.Name, energy.Text(region.Material), region.Limit, region.Criterion})
	}
	switch {
	case options.json:
		return p.print(func(w io.Writer) error {
			encoder := json.NewEncoder(w)
			encoder.SetIndent("", "  ")
			encoder.SetEscapeHTML(false)
			return encoder.Encode(&run)
		})
	case options.quiet:
		return nil
	}
	return p.print(func(w io.Writer) error {
		_, err := io.WriteString(w, run.text())
		return err
	})
}

// text returns the plan for people.
func (r *plannedRun) text() string {
	var text strings.Builder
	line := func(format string, values ...any) { fmt.Fprintf(&text, format+"\n", values...) }
	line("Plan; nothing was computed")
	if r.Study != "" {
		line("study    %s", r.Study)
	}
	for _, file := range r.Files {
		state := ""
		if file.Time.Exists() {
			state = fmt.Sprintf(", state at %g", float64(file.Time))
		}
		line("file     %s: %d points, %d cells%s", file.Path, file.Points, file.Cells, state)
	}
	line("energy   from %s", r.From)
	for _, field := range r.Fields.Taken() {
		line("field    %s", fieldSentence(&field))
	}
	for _, region := range r.Regions {
		material, limit := "no material", "no limit"
		if region.Material != "" {
			material = string(region.Material)
		}
		if region.Limit.Exists() {
			limit = fmt.Sprintf("proportional limit %g by %s", float64(region.Limit), region.Criterion)
		}
		line("region   %s: %s, %s", region.Name, material, limit)
	}
	for _, finding := range r.Findings {
		line("finding  %s: %s: %s", finding.Severity, finding.Code, finding.Message)
	}
	if r.Reports != "" {
		line("reports  in %s", r.Reports)
	} else {
		line("reports  a text to standard output")
	}
	return text.String()
}

// fieldSentence says which array was taken for the field, how it is read, and why.
func fieldSentence(f *energy.NamedField) string {
	place := f.On
	if place == "integration" {
		place = "integration point"
	}
	parts := []string{fmt.Sprintf("%s: array %q, one value for each %s", f.Name, f.Array, place)}
	for _, part := range []struct {
		words string
		value energy.Text
	}{{"order", f.Order}, {"shear", f.Shear}, {"kind", f.Kind}, {"positive in", f.Sign}} {
		if part.value != "" {
			parts = append(parts, part.words+" "+string(part.value))
		}
	}
	if f.DecidedBy == "default" {
		parts = append(parts, "decided by default")
	} else {
		parts = append(parts, "decided by the "+f.DecidedBy)
	}
	if f.Why != "" {
		parts = append(parts, f.Why)
	}
	return strings.Join(parts, ", ")
}
