package report

import (
	"cmp"
	"fmt"
	"io"
	"slices"
	"strconv"

	"strainledger/energy"
)

// ComparisonJSON writes the comparison in the form of [JSON].
func ComparisonJSON(w io.Writer, comparison *energy.Comparison) error {
	full := *comparison
	full.Runs = list(full.Runs)
	full.Rows = list(full.Rows)
	full.Hotspots = list(full.Hotspots)
	full.Findings = list(full.Findings)
	full.Requirements = list(full.Requirements)
	return writeJSON(w, &full)
}

// ComparisonCSV writes the comparison's rows in the form of the ledger's tables: one for
// each run, region and quantity.
func ComparisonCSV(w io.Writer, comparison *energy.Comparison) error {
	return writeRows(w, comparison.Rows)
}

// WriteComparisonFiles writes the comparison to the folder in every form:
// comparison.json, comparison.csv and requirements.xml, as [WriteFiles] writes a ledger.
func WriteComparisonFiles(dir string, comparison *energy.Comparison) error {
	of := func(write func(io.Writer, *energy.Comparison) error) func(io.Writer) error {
		return func(w io.Writer) error { return write(w, comparison) }
	}
	return writeFiles(dir, []reportFile{
		{"comparison.json", of(ComparisonJSON)},
		{"comparison.csv", of(ComparisonCSV)},
		{"requirements.xml", of(writeComparisonJUnit)},
	})
}

// writeComparisonJUnit writes one suite with a case for each requirement and run; the
// run is the case's class.
func writeComparisonJUnit(w io.Writer, comparison *energy.Comparison) error {
	suite := junitSuite{Name: comparisonTitle(comparison)}
	for i := range comparison.Requirements {
		requirement := &comparison.Requirements[i]
		class := fmt.Sprintf("run %d: %s", requirement.Run, runTitle(comparison, requirement.Run))
		suite.add(&requirement.RequirementResult, class, &comparison.Units)
	}
	return suite.write(w)
}

// ComparisonText writes the comparison for people, at most 100 columns wide.
func ComparisonText(w io.Writer, comparison *energy.Comparison, options TextOptions) error {
	return SummariseComparison(comparison).writeText(w, options)
}

// SummariseComparison returns the summary of a comparison.
func SummariseComparison(c *energy.Comparison) *Summary {
	results := c.Results()
	summary := &Summary{
		Title:   comparisonTitle(c),
		Verdict: verdictWords(results, c.Findings),
		Caution: energy.Caution,
		program: "Comparison of stored strain energy by strainledger",
		verdict: comparisonVerdictSection(c, results),
	}
	for _, s := range []section{
		runsSection(c), wholeSection(c, "Stored energy of the whole model", storedColumns), stiffnessSection(c),
		wholeSection(c, "Peaks and limits of the whole model", peakColumns),
		storedByRegionSection(c), peaksByRegionSection(c), matchesSection(c),
		findingsSection(c.Findings, &c.Units), comparisonRequirementsSection(c),
	} {
		if s.heading != "" {
			summary.sections = append(summary.sections, s)
		}
	}
	return summary
}

func comparisonTitle(c *energy.Comparison) string {
	return cmp.Or(c.Title, fmt.Sprintf("Comparison of %d runs", len(c.Runs)))
}

// runTitle returns the title of a run, else the path of its file.
func runTitle(c *energy.Comparison, run int) string {
	compared := &c.Runs[run-1]
	return cmp.Or(string(compared.Title), compared.Path)
}

// runsSection lists the runs, and what their own ledgers say of them.
func runsSection(c *energy.Comparison) section {
	t := &table{columns: []column{
		{kind: number, heading: "run"},
		{kind: name, heading: "title"},
		{kind: name, heading: "ledger or study"},
		numbers("cells", &c.Units),
		{kind: number, heading: "load"},
		{kind: word, heading: "own requirements met"},
		{kind: number, heading: "errors"},
		{kind: number, heading: "warnings"},
	}}
	hasLoads := false
	for i := range c.Runs {
		ledger := c.Runs[i].Ledger
		scale := ledger.Model.Loading.Scale
		hasLoads = hasLoads || scale != 1
		met := "none stated"
		if len(ledger.Requirements) > 0 {
			met = metWords(ledger.Requirements)
		}
		errors, warnings, _ := countFindings(ledger.Findings)
		t.add(
			strconv.Itoa(i+1), string(c.Runs[i].Title), c.Runs[i].Path, inCounts.text(energy.Number(ledger.Total.Cells)),
			plain(scale), met, grouped(errors), grouped(warnings),
		)
		if errors > 0 {
			t.mark(6, errorTone)
		}
	}
	if !hasLoads {
		const loads = 4
		t.drop(loads)
	}
	t.dropIdle()
	s := newSection("Runs", t)
	s.note(fmt.Sprintf("Run %d is the baseline. Units: %s.", c.Baseline, unitWords(&c.Units)))
	if hasLoads {
		s.note("Energies and densities are divided by the square of the load, which is that of the run over the load that runs are compared at.")
	}
	return s
}

// rowText returns the text of a row's number, missing where there is no row.
func rowText(row *energy.ComparisonRow, of func(*energy.ComparisonRow) energy.Number, kind unitKind) string {
	if row == nil {
		return missing
	}
	return kind.text(of(row))
}

func valueOf(row *energy.ComparisonRow) energy.Number { return row.Value }

// changeText returns the relative change of a row in percent, with its sign.
func changeText(row *energy.ComparisonRow) string {
	if row == nil {
		return missing
	}
	return signedPercent(row.Relative)
}

func signedPercent(n energy.Number) string {
	text := inShares.text(n)
	if n > 0 && text[0] != '<' && text[0] != '>' {
		return "+" + text
	}
	return text
}

// resolvedWord says whether a difference is as large as the estimated errors.
func resolvedWord(row *energy.ComparisonRow) string {
	switch {
	case row == nil || row.Resolved == nil:
		return missing
	case *row.Resolved:
		return "yes"
	}
	return "no"
}

// A comparedColumn is a column of numbers of one quantity, or of its changes.
type comparedColumn struct {
	key      string
	isChange bool
}

// comparedColumns returns the columns of a table.
func comparedColumns(columns []comparedColumn, units *energy.UnitLabels) []column {
	var made []column
	for _, c := range columns {
		if c.isChange {
			made = append(made, column{kind: number, heading: "change", unit: "%"})
		} else {
			made = append(made, numbers(c.key, units))
		}
	}
	return made
}

// comparedTexts returns the texts of one account of one run.
func comparedTexts(columns []comparedColumn, c *energy.Comparison, run int, region energy.Text) []string {
	var texts []string
	for _, column := range columns {
		row := c.Row(run, region, column.key)
		if column.isChange {
			texts = append(texts, changeText(row))
		} else {
			texts = append(texts, rowText(row, valueOf, quantityOf(column.key).kind))
		}
	}
	return texts
}

// Tables of runs side by side: what they store, and how near they are to their limits.
var (
	storedColumns = []comparedColumn{
		{"volume", false}, {"mass", false}, {"energy", false}, {"energy", true}, {"mean_density", false}, {"specific_energy", false}, {"error_estimate", false},
	}
	peakColumns = []comparedColumn{
		{"max_density", false}, {"max_density", true}, {"peak_density", false}, {"max_equivalent_stress", false},
		{"max_utilisation", false}, {"max_utilisation", true}, {"volume_share_past_limit", false}, {"energy_share_past_limit", false},
	}
)

// wholeSection sets the whole models beside each other.
func wholeSection(c *energy.Comparison, heading string, columns []comparedColumn) section {
	t := &table{columns: append([]column{{kind: number, heading: "run"}}, comparedColumns(columns, &c.Units)...)}
	for i := range c.Runs {
		t.add(append([]string{strconv.Itoa(i + 1)}, comparedTexts(columns, c, i+1, "")...)...)
		markUtilisation(t, columns, 1, c.Row(i+1, "", "max_utilisation"))
	}
	t.dropIdle()
	return newSection(heading, t)
}

// markUtilisation sets the tone of the utilisation in the last row, whose columns of
// numbers start at the given one.
func markUtilisation(t *table, columns []comparedColumn, start int, row *energy.ComparisonRow) {
	if at := slices.Index(columns, comparedColumn{"max_utilisation", false}); at >= 0 {
		t.mark(start+at, utilisationTone(row.Value))
	}
}

// stiffnessSection ranks the runs by what they store, where the control of the load says
// which sign means stiffer.
func stiffnessSection(c *energy.Comparison) section {
	switch c.Control {
	case "force", "displacement":
	case "mixed":
		return sentenceSection("Stiffness", "The structure is loaded by forces and displacements together: neither sign of a difference means stiffer.")
	default:
		return sentenceSection("Stiffness", "How the load is controlled is not stated: no sign of a difference means stiffer. State [loading] control.")
	}
	heading, rule := "Stiffness under given forces", "Under given forces the structure that stores less is stiffer."
	if c.Control == "displacement" {
		heading, rule = "Stiffness under given displacements", "Under given displacements the structure that stores more is stiffer."
	}
	t := &table{columns: []column{
		{kind: number, heading: "place"},
		{kind: number, heading: "run"},
		{kind: name, heading: "title"},
		numbers("energy", &c.Units),
		{kind: number, heading: "change", unit: "%"},
		{kind: prose, heading: "against the baseline"},
	}}
	ranks := c.Ranks()
	for _, i := range byRank(ranks) {
		row := c.Row(i+1, "", "energy")
		place := missing
		if ranks[i] > 0 {
			place = strconv.Itoa(ranks[i])
		}
		t.add(place, strconv.Itoa(i+1), runTitle(c, i+1), rowText(row, valueOf, inEnergy), changeText(row), stiffnessWords(c, i+1))
	}
	s := newSection(heading, t)
	s.note(rule)
	return s
}

// byRank returns the places of the list in the order of their ranks, those without one
// last.
func byRank(ranks []int) []int {
	order := make([]int, len(ranks))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int {
		if (ranks[a] == 0) != (ranks[b] == 0) {
			return cmp.Compare(ranks[b], ranks[a])
		}
		return cmp.Compare(ranks[a], ranks[b])
	})
	return order
}

func stiffnessWords(c *energy.Comparison, run int) string {
	sign, why := c.Stiffness(run)
	switch {
	case why != "":
		return why
	case sign > 0:
		return "stiffer"
	case sign < 0:
		return "softer"
	}
	return "as stiff"
}

// regionRowsShown is the number of rows of regions that a terminal lists.
const regionRowsShown = 60

// storedByRegionSection sets what the runs' regions store beside each other.
func storedByRegionSection(c *energy.Comparison) section {
	columns := []comparedColumn{
		{"volume", false}, {"energy", false}, {"energy", true}, {"energy_share", false}, {"mean_density", false}, {"error_estimate", false},
		{"stiffness_sensitivity", false},
	}
	t := regionTable(c, columns)
	const ofTotal = 5
	t.columns = slices.Insert(t.columns, ofTotal, column{kind: number, heading: "of old total", unit: "%"})
	t.columns = append(t.columns, column{kind: word, heading: "resolved"})
	i := 0
	eachRegion(c, func(run int, region energy.Text) {
		row := c.Row(run, region, "energy")
		t.rows[i] = slices.Insert(t.rows[i], ofTotal, phrase{text: ofOldTotal(c, row)})
		t.rows[i] = append(t.rows[i], phrase{text: resolvedWord(row)})
		i++
	})
	t.dropIdle()
	s := newSection("Stored energy by region", t)
	s.note("The change of a region's energy is given over the region's own in the baseline, and over the baseline's total.")
	if slices.ContainsFunc(t.columns, func(column column) bool { return column.heading == quantityOf("stiffness_sensitivity").name }) {
		s.note("Sensitivity: relative change of the total over that of the region's stiffness, to first order.")
	}
	return s
}

// peaksByRegionSection sets the peaks of the runs' regions beside each other.
func peaksByRegionSection(c *energy.Comparison) section {
	t := regionTable(c, peakColumns)
	t.dropIdle()
	return newSection("Peaks and limits by region", t)
}

// regionTable returns a table with a row for each region and run.
func regionTable(c *energy.Comparison, columns []comparedColumn) *table {
	head := []column{{kind: name, heading: "region"}, {kind: number, heading: "run"}}
	t := &table{terminalRows: regionRowsShown, columns: append(head, comparedColumns(columns, &c.Units)...)}
	eachRegion(c, func(run int, region energy.Text) {
		t.add(append([]string{string(region), strconv.Itoa(run)}, comparedTexts(columns, c, run, region)...)...)
		markUtilisation(t, columns, len(head), c.Row(run, region, "max_utilisation"))
	})
	return t
}

// eachRegion visits region by region the runs that are compared by it.
func eachRegion(c *energy.Comparison, visit func(run int, region energy.Text)) {
	for _, region := range regionsOf(c) {
		for i := range c.Runs {
			if c.Row(i+1, region, "energy") != nil {
				visit(i+1, region)
			}
		}
	}
}

// regionsOf returns the regions of the comparison in the order of their first rows.
func regionsOf(c *energy.Comparison) []energy.Text {
	var regions []energy.Text
	seen := map[energy.Text]bool{}
	for i := range c.Rows {
		if region := c.Rows[i].Region; region != "" && !seen[region] {
			seen[region] = true
			regions = append(regions, region)
		}
	}
	return regions
}

// ofOldTotal returns the difference of a region's energy over the baseline's total,
// where a percent is given at all.
func ofOldTotal(c *energy.Comparison, row *energy.ComparisonRow) string {
	if !row.Relative.Exists() {
		return missing
	}
	return signedPercent(shareOf(row.Difference, c.Row(row.Run, "", "energy").Baseline))
}

// matchesShown is the number of hotspots that a terminal lists.
const matchesShown = 40

// matchesSection sets the hotspots of the runs beside those of the baseline.
func matchesSection(c *energy.Comparison) section {
	if len(c.Hotspots) == 0 {
		return section{}
	}
	length := unitSigns.Replace(inLength.unit(&c.Units))
	t := &table{terminalRows: matchesShown, columns: []column{
		{kind: number, heading: "run"},
		{kind: name, heading: "region"},
		{kind: number, heading: "baseline rank"},
		{kind: number, heading: "rank"},
		{kind: word, heading: "state"},
		{kind: number, heading: "distance", unit: length},
		numbers("density", &c.Units),
		{kind: number, heading: "change", unit: "%"},
		numbers("utilisation", &c.Units),
	}}
	distance := coordinates([]*energy.Vector{{float64(c.Tolerance)}}) // rounding of a place is no move
	for _, match := range c.Hotspots {
		old, fresh := hotspotOfRank(c.Runs[c.Baseline-1].Ledger, match.BaselineRank), hotspotOfRank(c.Runs[match.Run-1].Ledger, match.Rank)
		shown, change := fresh, energy.None
		switch {
		case fresh == nil:
			shown = old
		case old != nil && c.Row(match.Run, energy.Text(fresh.Region), "max_density").Relative.Exists():
			change = shareOf(fresh.Density-old.Density, old.Density)
		}
		apart := missing
		if match.Distance.Exists() {
			apart = distance(float64(match.Distance))
		}
		t.add(
			strconv.Itoa(match.Run), shown.Region, inWords.text(match.BaselineRank), inWords.text(match.Rank), match.State,
			apart, inDensity.text(shown.Density), signedPercent(change), inRatios.text(shown.Utilisation),
		)
	}
	s := newSection("Hotspots against the baseline", t)
	s.note(fmt.Sprintf("Kept: within %s; moved: within %s. New and gone: without a partner in the other's list, which ends after so many ranks.",
		withUnit(brief(c.Tolerance/4), inLength, &c.Units), withUnit(brief(c.Tolerance), inLength, &c.Units)))
	return s
}

func hotspotOfRank(ledger *energy.Ledger, rank energy.Number) *energy.Hotspot {
	for i := range ledger.Hotspots {
		if energy.Number(ledger.Hotspots[i].Rank) == rank {
			return &ledger.Hotspots[i]
		}
	}
	return nil
}

// comparisonRequirementsSection lists the requirements, each run by run.
func comparisonRequirementsSection(c *energy.Comparison) section {
	if len(c.Requirements) == 0 {
		return sentenceSection("Requirements", "None is stated.")
	}
	t := &table{columns: []column{
		{kind: word, heading: "outcome"},
		{kind: number, heading: "run"},
		{kind: name, heading: "requirement"},
		{kind: name, heading: "quantity"},
		{kind: prose, heading: "value and bound"},
	}}
	for i := range c.Requirements {
		requirement := &c.Requirements[i].RequirementResult
		outcome, tone := outcomeWord(requirement)
		t.add(outcome, strconv.Itoa(c.Requirements[i].Run), requirement.Name, requirementSubject(requirement), requirementBasis(requirement, &c.Units))
		t.mark(0, tone)
	}
	return newSection("Requirements", t)
}

// comparisonVerdictSection is the verdict with what was accepted, and whose review it is.
func comparisonVerdictSection(c *energy.Comparison, results []energy.RequirementResult) section {
	s := section{heading: "Verdict"}
	s.say(verdictWords(results, c.Findings), verdictTone(results, c.Findings))
	t := &table{columns: []column{{kind: word}, {kind: prose}}}
	addAccepted(t, c.Findings)
	for _, entry := range [][2]string{
		{"document", c.Review.Document}, {"revision", c.Review.Revision}, {"prepared by", c.Review.PreparedBy}, {"checked by", c.Review.CheckedBy},
	} {
		if entry[1] != "" {
			t.add(entry[0], entry[1])
		}
	}
	if len(t.rows) > 0 {
		s.table = t
	}
	return s
}
