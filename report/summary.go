// Package report lays out what package energy found: the ledger as JSON, CSV and JUnit
// XML for scripts, and as text and Markdown for people. It computes nothing but
// the ratios and counts that a sentence needs. Everything that people read comes from
// one [Summary], so that no two forms can disagree.
package report

import (
	"cmp"
	"fmt"
	"path/filepath"

	"strainledger/energy"
)

// A Summary is what every form for people prints of a ledger: the same words and the
// same figures in the same order.
type Summary struct {
	Title   string
	Verdict string // "3 of 3 stated requirements met; 2 warnings", or "nothing was judged"
	Caution string

	program  string // what made the account
	sections []section
	verdict  section // Verdict with what has to be read beside it
}

// A section is one part of a summary: sentences, a table, more sentences. Without a
// heading it has nothing to say and is left out.
type section struct {
	heading string
	lead    []phrase
	table   *table
	notes   []phrase
}

// newSection returns a section around a table. It says once where the table's units are
// not stated, and what the mark for missing numbers means.
func newSection(heading string, t *table) section {
	s := section{heading: heading, table: t}
	if t.hasNoUnits() {
		s.heading += " (units not stated)"
		for i := range t.columns {
			if t.columns[i].unit == unitNotStated {
				t.columns[i].unit = ""
			}
		}
	}
	if t.lacks() {
		s.note(missingMeans)
	}
	return s
}

// sentenceSection returns a section of one sentence.
func sentenceSection(heading, text string) section {
	s := section{heading: heading}
	s.say(text, plainTone)
	return s
}

// say adds a sentence before the table, note one after it.
func (s *section) say(text string, tone tone) { s.lead = append(s.lead, phrase{text, tone}) }
func (s *section) note(text string)           { s.notes = append(s.notes, phrase{text: text}) }

// Summarise returns the summary of a ledger.
func Summarise(ledger *energy.Ledger) *Summary {
	summary := &Summary{
		Title:   titleOf(ledger),
		Verdict: verdictWords(ledger.Requirements, ledger.Findings),
		Caution: cmp.Or(ledger.Caution, energy.Caution),
		program: programOf(ledger),
		verdict: verdictSection(ledger),
	}
	for _, s := range []section{
		sourcesSection(ledger), modelSection(ledger), materialsSection(ledger),
		regionsSection(ledger), excludedSection(ledger), balanceSection(ledger), concentrationSection(ledger),
		pastLimitSection(ledger), worstSection(ledger), hotspotsSection(ledger), surroundingsSection(ledger), localEstimatesSection(ledger),
		findingsSection(ledger.Findings, &ledger.Units), requirementsSection(ledger),
	} {
		if s.heading != "" {
			summary.sections = append(summary.sections, s)
		}
	}
	return summary
}

// titleOf returns the ledger's title, else the name of its first file.
func titleOf(ledger *energy.Ledger) string {
	switch {
	case ledger.Title != "":
		return string(ledger.Title)
	case len(ledger.Sources) > 0:
		title := filepath.Base(ledger.Sources[0].Path)
		if more := len(ledger.Sources) - 1; more > 0 {
			title += fmt.Sprintf(" and %d more", more)
		}
		return title
	}
	return "Without title"
}

func programOf(ledger *energy.Ledger) string {
	if ledger.Run.Version == "" {
		return "Account of stored strain energy by strainledger"
	}
	return "Account of stored strain energy by strainledger " + ledger.Run.Version
}

// inPlainWords returns the words for one of the ledger's terms, or the term itself.
func inPlainWords(term string) string {
	switch term {
	case string(energy.VonMises):
		return "von Mises"
	case string(energy.Tresca):
		return "Tresca"
	case string(energy.MaxPrincipal):
		return "maximum principal stress"
	case string(energy.DistortionEnergy):
		return "distortion energy"
	case string(energy.TotalEnergy):
		return "total strain energy"
	case string(energy.PlaneStress):
		return "plane stress"
	case string(energy.PlaneStrain):
		return "plane strain"
	}
	return term
}

// regionName returns the name of a requirement's region.
func regionName(region energy.Text) string {
	if region == "" {
		return "the whole model"
	}
	return string(region)
}
