package energy

import "fmt"

// A Comparison sets runs side by side, as it is written to comparison.json. Its keys,
// their order and their meaning are fixed by the schema's number. Numbers are in the
// units of the baseline; energies and densities are at the load that the runs' scales
// refer to.
type Comparison struct {
	Schema       string                  `json:"schema"`
	Units        UnitLabels              `json:"units"`
	Runs         []ComparedRun           `json:"runs"`
	Baseline     int                     `json:"baseline"` // number of the run, from 1
	Control      Text                    `json:"control"`  // force | displacement | mixed
	Rows         []ComparisonRow         `json:"rows"`     // by run, region and quantity; the whole model comes last
	Hotspots     []HotspotMatch          `json:"hotspots"` // by run and rank in the baseline
	Findings     []Finding               `json:"findings"`
	Requirements []ComparisonRequirement `json:"requirements"`

	Title     string         `json:"-"`
	Review    Review         `json:"-"`
	Tolerance Number         `json:"-"` // within which hotspots match; None where nothing tells it
	index     map[rowKey]int // places in Rows
}

// ComparisonSchema names the form of a Comparison.
const ComparisonSchema = "strainledger/comparison/v1"

// A ComparedRun is one run of a comparison. Its number is its place in the list, from 1.
type ComparedRun struct {
	Title  Text    `json:"title"`
	Path   string  `json:"ledger"` // the file of the ledger, or of the study that was tallied
	Ledger *Ledger `json:"-"`
}

// A ComparisonRow is one number of one run beside that of the baseline.
type ComparisonRow struct {
	Run        int    `json:"run"`
	Region     Text   `json:"region"` // null: the whole model
	Quantity   string `json:"quantity"`
	Value      Number `json:"value"`
	Baseline   Number `json:"baseline"`
	Difference Number `json:"difference"` // value less baseline
	Relative   Number `json:"relative"`   // difference over baseline
	Resolved   *bool  `json:"resolved"`   // whether the difference is as large as the estimated errors; nil: not known
	Withheld   Text   `json:"withheld"`   // why there is no Relative
}

// A ComparisonRequirement is a requirement with its outcome for one run.
type ComparisonRequirement struct {
	Run int `json:"run"`
	RequirementResult
}

// CompareOptions says how runs are compared. The zero value of a field is its default.
type CompareOptions struct {
	Title    string
	Length   string   // the units of the baseline, where the options are held to be in them
	Stress   string   //
	Mass     string   //
	Baseline int      // number of the run, from 1; 0: the first
	Loading  *Loading // control of the comparison; scale of the runs that state none

	HotspotTolerance float64 // in the baseline's unit of length; 0: the baseline's, else 2 % of its diagonal

	Requirements []Requirement // also on change.KEY
	Acceptances  []Acceptance
	Review       Review
}

// diagonalShare is the share of the model's diagonal within which hotspots match where
// no tolerance is stated.
const diagonalShare = 0.02

// Compare sets runs beside one of them, the baseline. The runs' ledgers stay as they
// are; those of the result are in the baseline's units and at the load that the runs'
// scales refer to.
//
// What keeps runs from being compared (units, loads, materials, regions, how the model
// was read) is a finding, and the relative difference is withheld. Errors are of type
// *StudyError.
//
// Source: methods, section 17: the same units, load, materials and regions, else no
// percent; control decides which sign means stiffer.
func Compare(runs []ComparedRun, options *CompareOptions) (*Comparison, error) {
	if len(runs) < 2 {
		return nil, studyError("%d run to compare; give two ledgers or studies at least", len(runs))
	}
	number := max(options.Baseline, 1)
	if number > len(runs) {
		return nil, studyError("run %d is to be the baseline, and there are %d runs", number, len(runs))
	}
	baseline := runs[number-1].Ledger
	c := &comparing{
		options: options,
		to: &Comparison{
			Schema: ComparisonSchema, Units: baseline.Units, Baseline: number, Title: options.Title, Review: options.Review,
			Rows: []ComparisonRow{}, Hotspots: []HotspotMatch{}, Requirements: []ComparisonRequirement{},
			index: map[rowKey]int{},
		},
	}
	if err := c.check(runs); err != nil {
		return nil, err
	}
	c.to.Control = c.control(runs)
	c.convert(runs)
	for i := range c.to.Runs {
		c.findObstacles(i + 1)
		c.addRows(i + 1)
	}
	c.matchHotspots()
	c.findChanges()
	c.judge()
	c.to.Findings = c.allFindings()
	return c.to, nil
}

// comparing is a comparison in the making.
type comparing struct {
	options   *CompareOptions
	to        *Comparison
	obstacles []obstacles // of each run
	found     []*runFinding
	findings  findings // of all runs together
}

// baseline returns the ledger of the baseline.
func (c *comparing) baseline() *Ledger { return c.run(c.to.Baseline) }

// run returns the converted ledger of a run by its number.
func (c *comparing) run(number int) *Ledger { return c.to.Runs[number-1].Ledger }

// check refuses options that do not go with the runs.
func (c *comparing) check(runs []ComparedRun) error {
	for _, unit := range []struct {
		name, stated string
		baseline     Text
	}{
		{"length", c.options.Length, c.to.Units.Length},
		{"stress", c.options.Stress, c.to.Units.Stress},
		{"mass", c.options.Mass, c.to.Units.Mass},
	} {
		if unit.stated != "" && unit.stated != string(unit.baseline) {
			return studyError("the comparison's unit of %s is %s, the baseline's %s; bounds and tolerances are in the baseline's units",
				unit.name, unit.stated, statedUnit(unit.baseline))
		}
	}
	for _, requirement := range c.options.Requirements {
		if err := CheckComparedQuantity(requirement.Quantity); err != nil {
			return studyError("requirement %q: %w", requirement.Name, err)
		}
		if requirement.Region != "" && !hasRegion(runs, requirement.Region) {
			return studyError("requirement %q: no run has a region %q", requirement.Name, requirement.Region)
		}
	}
	return nil
}

func hasRegion(runs []ComparedRun, name string) bool {
	for i := range runs {
		if regionOf(runs[i].Ledger, name) != nil {
			return true
		}
	}
	return false
}

// control returns how the runs are loaded: as the comparison's options state it, else
// as all of the runs do. Where that is not known, no sign means stiffer.
func (c *comparing) control(runs []ComparedRun) Text {
	stated := Text("")
	if c.options.Loading != nil {
		stated = c.options.Loading.Control
	}
	first, agree := controlOf(runs[0].Ledger), true
	for i := range runs {
		control := controlOf(runs[i].Ledger)
		agree = agree && control == first
		if stated != "" && control != "" && control != stated {
			c.find("loads-differ", i+1, "the load is stated to be by %s, and in the comparison by %s, which is obeyed", control, stated)
		}
	}
	switch {
	case stated != "":
		return stated
	case agree && first != "":
		return first
	}
	c.findings.add("control-not-stated", 0, "not every run states the same control of its load: no sign of a difference means stiffer; state [loading] control")
	return ""
}

func controlOf(ledger *Ledger) Text {
	if ledger.Model.Loading == nil {
		return ""
	}
	return ledger.Model.Loading.Control
}

// convert puts the runs into the baseline's units and to one load.
func (c *comparing) convert(runs []ComparedRun) {
	for i := range runs {
		ledger := runs[i].Ledger
		scale := c.scaleOf(ledger)
		conversion, everything, masses := conversionTo(&c.to.Units, ledger, scale)
		converted := conversion.apply(ledger, c.to.Units)
		converted.Model.Loading = &Loading{Control: controlOf(ledger), Scale: scale}
		c.to.Runs = append(c.to.Runs, ComparedRun{Title: ledger.Title, Path: runs[i].Path, Ledger: converted})
		c.obstacles = append(c.obstacles, obstacles{everything: everything, masses: masses})
		from, to := &ledger.Units, &c.to.Units
		if everything == "" && (from.Length != to.Length || from.Stress != to.Stress || from.Mass != to.Mass && masses == "") {
			c.find("units-converted", i+1, "the units are %s; the numbers are converted into %s", unitNames(from), unitNames(to))
		}
	}
}

// scaleOf returns the load of a run over the load that runs are compared at.
func (c *comparing) scaleOf(ledger *Ledger) Number {
	if loading := ledger.Model.Loading; loading != nil && loading.Scale.Exists() {
		return loading.Scale
	}
	if loading := c.options.Loading; loading != nil && loading.Scale.Exists() {
		return loading.Scale
	}
	return 1
}

// unitNames joins the units of a ledger.
func unitNames(units *UnitLabels) string {
	names := string(units.Length) + " " + string(units.Stress)
	if units.Mass != "" {
		names += " " + string(units.Mass)
	}
	return names
}

// matchHotspots sets the hotspots of each run beside those of the baseline.
func (c *comparing) matchHotspots() {
	tolerance := c.tolerance()
	if c.to.Tolerance = tolerance; !tolerance.Exists() {
		c.findings.add("hotspots-not-matched", 0, "the baseline's ledger does not say how large the model is, so that hotspots are not matched; state [compare] tolerance")
		return
	}
	for i := range c.to.Runs {
		if i+1 != c.to.Baseline && c.obstacles[i].everything == "" {
			c.to.Hotspots = append(c.to.Hotspots, matchHotspots(c.baseline().Hotspots, c.run(i+1).Hotspots, i+1, float64(tolerance))...)
		}
	}
}

// tolerance returns the distance within which hotspots match.
func (c *comparing) tolerance() Number {
	model := &c.baseline().Model
	switch {
	case c.options.HotspotTolerance > 0:
		return Number(c.options.HotspotTolerance)
	case model.HotspotTolerance.Exists():
		return model.HotspotTolerance
	}
	return diagonalShare * model.Diagonal
}

// findChanges reports findings of severity error that stand in a run, and what is new
// or gone against the baseline: findings and acceptances, by their codes.
func (c *comparing) findChanges() {
	for i := range c.to.Runs {
		c.findErrors(i + 1)
		c.findNew(i + 1)
		c.findGone(i + 1)
	}
}

// findErrors reports the findings of severity error that a run does not accept. The
// comparison may.
func (c *comparing) findErrors(run int) {
	for _, finding := range distinct(c.run(run).Findings) {
		if finding.Severity != Error || finding.Accepted != "" {
			continue
		}
		found := c.find("error-stands", run, "%s: %s", finding.Code, finding.Message)
		for _, acceptance := range c.options.Acceptances {
			if acceptance.Code == finding.Code {
				found.accepted = Text(acceptance.Reason)
			}
		}
	}
}

func (c *comparing) findNew(run int) {
	old := c.baseline().Findings
	for _, finding := range distinct(c.run(run).Findings) {
		before := findingOf(old, finding.Code)
		switch {
		case before == nil && finding.Severity == Note:
			c.find("note-new", run, "%s: %s", finding.Code, finding.Message)
		case before == nil:
			c.find("finding-new", run, "%s %s: %s", finding.Severity, finding.Code, finding.Message)
		}
		if finding.Accepted != "" && (before == nil || before.Accepted == "") {
			c.find("acceptance-new", run, "accepts %s, the baseline does not: %s", finding.Code, finding.Accepted)
		}
	}
}

func (c *comparing) findGone(run int) {
	fresh := c.run(run).Findings
	for _, finding := range distinct(c.baseline().Findings) {
		after := findingOf(fresh, finding.Code)
		switch {
		case after == nil && finding.Accepted != "":
			c.find("finding-gone", run, "does not have %s, which the baseline has and accepts: %s", finding.Code, finding.Accepted)
		case after == nil:
			c.find("finding-gone", run, "does not have %s, which the baseline has", finding.Code)
		case finding.Accepted != "" && after.Accepted == "":
			c.find("acceptance-gone", run, "does not accept %s, the baseline does: %s", finding.Code, finding.Accepted)
		}
	}
}

// distinct returns the first finding of each code.
func distinct(list []Finding) []*Finding {
	var first []*Finding
	for i := range list {
		if findingOf(list[:i], list[i].Code) == nil {
			first = append(first, &list[i])
		}
	}
	return first
}

// findingOf returns the first finding of a code, or nil.
func findingOf(list []Finding, code string) *Finding {
	for i := range list {
		if list[i].Code == code {
			return &list[i]
		}
	}
	return nil
}

// sameEnergy is how far apart two energies may lie, as a part of them, and be held for
// equal: rounding of sums and of scales.
const sameEnergy = 1e-9

// Results returns the outcomes of the requirements, those of all runs in one list.
func (c *Comparison) Results() []RequirementResult {
	results := make([]RequirementResult, len(c.Requirements))
	for i := range results {
		results[i] = c.Requirements[i].RequirementResult
	}
	return results
}

// Stiffness says whether a run is stiffer than the baseline: above 0 stiffer, below 0
// softer, 0 as stiff, by the energy of the whole model. Under given forces the stiffer
// structure stores less, under given displacements more (methods, section 17). Where
// that cannot be said, why tells.
func (c *Comparison) Stiffness(run int) (sign int, why string) {
	row := c.Row(run, "", "energy")
	switch {
	case run == c.Baseline:
		return 0, "it is the baseline"
	case c.Control == "":
		return 0, "the control of the load is not stated"
	case c.Control == "mixed":
		return 0, "under forces and displacements together neither sign means stiffer"
	case row.Withheld != "":
		return 0, string(row.Withheld)
	case row.Resolved != nil && !*row.Resolved:
		return 0, "the difference is not resolved: it is smaller than the estimated errors"
	}
	switch {
	case row.Relative <= sameEnergy && row.Relative >= -sameEnergy:
		return 0, ""
	case c.isStiffer(row.Value, row.Baseline):
		return 1, ""
	}
	return -1, ""
}

// isStiffer reports whether storing the one energy is stiffer than storing the other.
func (c *Comparison) isStiffer(one, other Number) bool {
	if c.Control == "force" {
		return one < other-Number(sameEnergy*other)
	}
	return one > other+Number(sameEnergy*other)
}

// Ranks returns the place of each run in the order of stiffness, 1 for the stiffest; 0
// for runs that cannot be ranked. Runs of equal energy share a place. Differences that
// are not resolved count.
func (c *Comparison) Ranks() []int {
	ranks := make([]int, len(c.Runs))
	if c.Control != "force" && c.Control != "displacement" {
		return ranks
	}
	for i := range ranks {
		row := c.Row(i+1, "", "energy")
		if row.Withheld != "" {
			continue
		}
		ranks[i] = 1
		for j := range ranks {
			other := c.Row(j+1, "", "energy")
			if other.Withheld == "" && c.isStiffer(other.Value, row.Value) {
				ranks[i]++
			}
		}
	}
	return ranks
}

// rowKey names a row.
type rowKey struct {
	run      int
	region   Text
	quantity string
}

// Row returns one row, the region "" standing for the whole model; nil where there is
// none.
func (c *Comparison) Row(run int, region Text, quantity string) *ComparisonRow {
	i, isThere := c.index[rowKey{run, region, quantity}]
	if !isThere {
		return nil
	}
	return &c.Rows[i]
}

// CheckComparedQuantity returns an error when a requirement's quantity is none that a
// comparison can have: change.KEY with the key of a compared quantity, such a key
// itself, or what a ledger has.
func CheckComparedQuantity(quantity string) error {
	key, isChange := cutChange(quantity)
	if isCompared(key) {
		return nil
	}
	if isChange {
		return fmt.Errorf("quantity %q: a comparison has no number %q", quantity, key)
	}
	return CheckQuantity(quantity)
}
