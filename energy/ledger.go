package energy

import "slices"

// A Ledger is the account of one run, as it is written to ledger.json. Its keys, their
// order and their meaning are fixed by the schema's number; keys of parts that are not
// built yet are null. All numbers are in the consistent units of the study.
type Ledger struct {
	Schema       string              `json:"schema"`
	Title        Text                `json:"title"`
	Units        UnitLabels          `json:"units"`
	Model        ModelSummary        `json:"model"`
	Study        *StudyFile          `json:"study"`
	Sources      []SourceFile        `json:"source"`
	Fields       FieldsUsed          `json:"fields"`
	Materials    []MaterialUsed      `json:"materials"`
	Total        Account             `json:"total"`
	Repeated     *Repeated           `json:"repeated"`
	Regions      []RegionAccount     `json:"regions"`
	Hotspots     []Hotspot           `json:"hotspots"`
	AtCentre     *AtCentre           `json:"at_centre"` // nil where the study states none
	PastLimit    PastLimit           `json:"past_limit"`
	Excluded     []Exclusion         `json:"excluded"`
	Findings     []Finding           `json:"findings"`
	Balance      *Balance            `json:"balance"`
	Requirements []RequirementResult `json:"requirements"`
	Steps        *NotBuilt           `json:"steps"`
	Cases        *NotBuilt           `json:"cases"`
	Envelope     *NotBuilt           `json:"envelope"`
	Caution      string              `json:"caution"`
	Run          Run                 `json:"run"`

	// AllPastLimit lists every cell past its limit in the order of PastLimit.Worst,
	// when Options.ListAllPastLimit asked for it.
	AllPastLimit []RankedCell `json:"-"`
	// HotspotCells lists the cells of every hotspot, rank by rank, the peak first.
	HotspotCells []HotspotCell `json:"-"`
}

// LedgerSchema names the form of a Ledger.
const LedgerSchema = "strainledger/ledger/v1"

// Caution stands on every report.
const Caution = "A screening aid, not a design approval: the numbers describe the model that was given, " +
	"and local codes and a licensed engineer decide."

// NotBuilt is the type of keys whose subject is not built yet: always null.
type NotBuilt struct{}

// UnitLabels names the units of the ledger's numbers; null where the study does not
// state them.
type UnitLabels struct {
	Length        Text `json:"length"`
	Stress        Text `json:"stress"`
	Energy        Text `json:"energy"`
	EnergyDensity Text `json:"energy_density"`
	Mass          Text `json:"mass"`
}

// ModelSummary says how the model was read.
type ModelSummary struct {
	Idealisation string `json:"idealisation"`
	Thickness    any    `json:"thickness"` // number, name of a cell array, or null
	Axis         Text   `json:"axis"`
	Points       string `json:"points"`
	EnergyFrom   string `json:"energy_from"`
	Criterion    string `json:"criterion"`

	// What a comparison with other runs needs.
	Diagonal         Number   `json:"diagonal"`          // of the box that holds the points
	Loading          *Loading `json:"loading"`           // nil: nothing is stated
	HotspotTolerance Number   `json:"hotspot_tolerance"` // within which hotspots of two runs match, where stated
}

// A Loading says how the structure is loaded, as the study states it.
type Loading struct {
	Control Text   `json:"control"` // force | displacement | mixed
	Scale   Number `json:"scale"`   // the run's load over the load that runs are compared at
}

// StudyFile identifies the study that the run followed.
type StudyFile struct {
	Path   string `json:"path"`
	SHA256 Text   `json:"sha256"`
}

// SourceFile identifies one file of the model.
type SourceFile struct {
	Path   string `json:"path"`
	SHA256 Text   `json:"sha256"`
	Bytes  int64  `json:"bytes"`
	Points int64  `json:"points"`
	Cells  int64  `json:"cells"`
	Time   Number `json:"time"`
}

// FieldsUsed says which arrays were taken for what; nil where a field is not used.
type FieldsUsed struct {
	Stress                  *FieldUsed `json:"stress"`
	Strain                  *FieldUsed `json:"strain"`
	ThermalStrain           *FieldUsed `json:"thermal_strain"`
	PlasticStrain           *FieldUsed `json:"plastic_strain"`
	EquivalentPlasticStrain *FieldUsed `json:"equivalent_plastic_strain"`
	Displacement            *FieldUsed `json:"displacement"`
	Temperature             *FieldUsed `json:"temperature"`
	NodalForce              *FieldUsed `json:"nodal_force"`
	ElementID               *FieldUsed `json:"element_id"`
}

// A NamedField is a field with the array that was taken for it.
type NamedField struct {
	Key  string // in the study and the ledger
	Name string // for people
	*FieldUsed
}

// Taken lists the fields for which an array was taken, in the ledger's order.
func (f *FieldsUsed) Taken() []NamedField {
	fields := []NamedField{
		{"stress", "stress", f.Stress},
		{"strain", "strain", f.Strain},
		{"thermal_strain", "thermal strain", f.ThermalStrain},
		{"plastic_strain", "plastic strain", f.PlasticStrain},
		{"equivalent_plastic_strain", "equivalent plastic strain", f.EquivalentPlasticStrain},
		{"displacement", "displacement", f.Displacement},
		{"temperature", "temperature", f.Temperature},
		{"nodal_force", "nodal force", f.NodalForce},
		{"element_id", "element number", f.ElementID},
	}
	return slices.DeleteFunc(fields, func(field NamedField) bool { return field.FieldUsed == nil })
}

// FieldUsed is one array's part in the account. Order, Shear and Kind are empty where
// they have no meaning.
type FieldUsed struct {
	Array     string `json:"array"` // several scalar arrays: their names separated by blanks
	On        string `json:"on"`    // cell | point | integration
	Order     Text   `json:"order"`
	Shear     Text   `json:"shear"`
	Kind      Text   `json:"kind,omitempty"`
	Sign      Text   `json:"sign"`
	DecidedBy string `json:"decided_by"` // study | audit | file | default
	Why       string `json:"why"`
}

// MaterialUsed gives the values that were used for one material.
type MaterialUsed struct {
	Name                         string `json:"name"`
	Law                          string `json:"law"`
	YoungsModulus                Number `json:"youngs_modulus"`
	PoissonsRatio                Number `json:"poissons_ratio"`
	ProportionalLimit            Number `json:"proportional_limit"`
	ProportionalLimitCompression Number `json:"proportional_limit_compression"`
	Density                      Number `json:"density"`
	ThermalExpansion             Number `json:"thermal_expansion"`
	ReferenceTemperature         Number `json:"reference_temperature"`
	Source                       Text   `json:"source"`

	// What an anisotropic law has instead of one modulus and one ratio.
	YoungsModuli   *[3]float64    `json:"youngs_moduli"`
	ShearModuli    *[3]float64    `json:"shear_moduli"`
	PoissonsRatios *[3]float64    `json:"poissons_ratios"`
	Stiffness      *[6][6]float64 `json:"stiffness"`
	StiffnessOrder Text           `json:"stiffness_order"`
	Axes           any            `json:"axes"` // rows, the name of a cell array, or null

	Curve               Text `json:"curve"`
	ProportionalLimitBy Text `json:"proportional_limit_by"`

	YieldStress       Number `json:"yield_stress"`
	HardeningExponent Number `json:"hardening_exponent"`

	ControlRadius     Number `json:"control_radius"`
	CriticalDensity   Number `json:"critical_density"`
	FractureToughness Number `json:"fracture_toughness"`
	TensileStrength   Number `json:"tensile_strength"`
}

// A Vector is a place or a direction in the model's axes: x, y, z.
type Vector [3]float64

// An Account is what one region, or the whole model, stores. Cells counts the cells
// that entered the sums.
type Account struct {
	Cells                int64   `json:"cells"`
	Volume               Number  `json:"volume"`
	Mass                 Number  `json:"mass"`
	Energy               Number  `json:"energy"`
	EnergyShare          Number  `json:"energy_share"`
	EnergyVolumetric     Number  `json:"energy_volumetric"`
	EnergyDistortional   Number  `json:"energy_distortional"`
	MeanDensity          Number  `json:"mean_density"`
	MaxDensity           Number  `json:"max_density"`
	MaxDensityCell       Number  `json:"max_density_cell"`
	MaxDensitySource     Number  `json:"max_density_source"`
	MaxDensityAt         *Vector `json:"max_density_at"`
	PeakDensity          Number  `json:"peak_density"`
	PeakDensityAt        *Vector `json:"peak_density_at"`
	MaxEquivalentStress  Number  `json:"max_equivalent_stress"`
	MaxUtilisation       Number  `json:"max_utilisation"`
	MaxUtilisationCell   Number  `json:"max_utilisation_cell"`
	MaxUtilisationSource Number  `json:"max_utilisation_source"`
	MaxUtilisationAt     *Vector `json:"max_utilisation_at"`
	CellsPastLimit       Number  `json:"cells_past_limit"`
	VolumePastLimit      Number  `json:"volume_past_limit"`
	EnergyPastLimit      Number  `json:"energy_past_limit"`
	VolumeWithoutLimit   Number  `json:"volume_without_limit"`
	CellsYielded         Number  `json:"cells_yielded"`
	CurveEnergy          Number  `json:"curve_energy"`
	ErrorEstimate        Number  `json:"error_estimate"`
	EnergyError          Number  `json:"energy_error"`

	Concentration *Concentration `json:"concentration"` // nil where no energy is stored
}

// RegionAccount is the account of one region.
type RegionAccount struct {
	Name      string `json:"name"`
	Material  Text   `json:"material"`
	Criterion string `json:"criterion"`
	Account
}

// Repeated holds the totals of the whole of which the mesh is one of several equal
// parts.
type Repeated struct {
	Repeats int    `json:"repeats"`
	Volume  Number `json:"volume"`
	Mass    Number `json:"mass"`
	Energy  Number `json:"energy"`
}

// A Balance holds the work of the loads against the energy that is found. Gap is
// (external work - stored - elsewhere) / external work; it does not exist where the
// external work is 0 or not known, nor where the two are not equal by nature. Reasons
// says so, and what else keeps the two apart.
type Balance struct {
	ExternalWork Number      `json:"external_work"`
	Stored       Number      `json:"stored"`    // energy of the total
	Elsewhere    Number      `json:"elsewhere"` // sum of Parts
	Gap          Number      `json:"gap"`
	Reasons      []string    `json:"reasons"`
	Source       Text        `json:"source"` // where the external work comes from
	Parts        []Elsewhere `json:"parts"`
}

// A RankedCell is one cell in a list. Cell counts from 0 in its own source file,
// ghosts included; At is its volume centroid.
type RankedCell struct {
	Cell             int64   `json:"cell"`
	Source           int     `json:"source"`
	ElementID        Number  `json:"element_id"`
	Region           string  `json:"region"`
	At               *Vector `json:"at"`
	Density          Number  `json:"density"`
	EquivalentStress Number  `json:"equivalent_stress"`
	Utilisation      Number  `json:"utilisation"`
}

// A Hotspot is a place where energy gathers: the cells that are joined to a peak of
// density through faces, within its region, and that have at least 1 - prominence of the
// peak's density, the prominence being that of the study. Cell, At, Density and what is
// said of stress are those of the peak's cell.
//
// Energy, Volume, Cells and what follows from them are null where such cells may be
// outside the pool. Of a hotspot that is a single cell Prominence is null.
type Hotspot struct {
	Rank             int     `json:"rank"`
	Region           string  `json:"region"`
	Cell             int64   `json:"cell"`
	Source           int     `json:"source"`
	ElementID        Number  `json:"element_id"`
	At               *Vector `json:"at"`
	Density          Number  `json:"density"`
	PeakDensity      Number  `json:"peak_density"`
	Energy           Number  `json:"energy"`
	EnergyShare      Number  `json:"energy_share"`
	Volume           Number  `json:"volume"`
	Cells            Number  `json:"cells"`
	Prominence       Number  `json:"prominence"`
	EquivalentStress Number  `json:"equivalent_stress"`
	Utilisation      Number  `json:"utilisation"`
	PastLimit        *bool   `json:"past_limit"` // nil where the region has no limit
	Singular         Text    `json:"singular"`
	StressMargin     Number  `json:"stress_margin"`
	LoadFactor       Number  `json:"load_factor"`
	ErrorToTarget    Number  `json:"error_to_target"` // estimated error of the cell over the one that the target leaves it

	RegionShare         Number  `json:"region_share"` // of the region's energy
	MeanDensity         Number  `json:"mean_density"`
	EnergyAt            *Vector `json:"energy_at"`   // centroid of the energy
	Principal1          Number  `json:"principal_1"` // principal stresses, the largest first, where
	Principal1Direction *Vector `json:"principal_1_direction"`
	Principal2          Number  `json:"principal_2"` // the cell's density is largest
	Principal2Direction *Vector `json:"principal_2_direction"`
	Principal3          Number  `json:"principal_3"`
	Principal3Direction *Vector `json:"principal_3_direction"`

	Surroundings

	LocalEstimate *LocalEstimate `json:"local_estimate"`
}

// Surroundings says what lies about a place: the mean density of the ball of the study's
// radius about it, and of the ball of its material's control radius; and what the profile
// of density tells. Cells count that are of its material. Numbers are null where no radius
// is stated, or no quadrature point is inside.
type Surroundings struct {
	BallRadius           Number `json:"ball_radius"`
	BallVolume           Number `json:"ball_volume"` // of the cells' parts in it
	BallCells            Number `json:"ball_cells"`  // that have a part in it
	AveragedDensity      Number `json:"averaged_density"`
	Eigenvalue           Number `json:"eigenvalue"`        // λ of density ~ r^(2λ-2) about the place
	EigenvalueSpread     Number `json:"eigenvalue_spread"` // how far it moves with a third of its cells left out
	ControlRadius        Number `json:"control_radius"`
	ControlVolume        Number `json:"control_volume"`
	ControlDensity       Number `json:"control_density"`
	AveragedDensityRatio Number `json:"averaged_density_ratio"` // control density over the material's critical density
}

// AtCentre is what lies about the place that the study states. Cells of all materials
// count in its ball; its control radius is that of the material of the nearest cell, of
// which cells count there.
type AtCentre struct {
	At       Vector `json:"at"`
	Singular Text   `json:"singular"`
	Surroundings
}

// A HotspotCell is one cell of a hotspot.
type HotspotCell struct {
	Source int
	Cell   int64
	Rank   int
}

// PastLimit lists the cells whose utilisation is above 1. Cells, Volume and Energy are
// null unless every region has a limit.
type PastLimit struct {
	Criterion   string       `json:"criterion"`
	Cells       Number       `json:"cells"`
	Volume      Number       `json:"volume"`
	Energy      Number       `json:"energy"`
	EnergyShare Number       `json:"energy_share"`
	Worst       []RankedCell `json:"worst"` // by utilisation, falling
}

// An Exclusion counts cells that are in no account. Measure is their length, area or
// volume by dimension; null where they have none that can be told.
type Exclusion struct {
	Reason    string `json:"reason"` // ghost | not-finite | degenerate | other-dimension | unsupported | no-region
	Dimension int    `json:"dimension"`
	Cells     int64  `json:"cells"`
	Measure   Number `json:"measure"`
}

// A Finding is something that the reader of the numbers has to know.
type Finding struct {
	Code     string `json:"code"`
	Severity string `json:"severity"` // note | warning | error
	Message  string `json:"message"`
	Cells    Number `json:"cells"`
	Accepted Text   `json:"accepted"` // the study's reason for living with it
}

// The severities of findings.
const (
	Note    = "note"
	Warning = "warning"
	Error   = "error"
)

// RequirementResult is one requirement of the study with its outcome. Met is false
// also where the value is not available; Why then says so.
type RequirementResult struct {
	Name     string `json:"name"`
	Quantity string `json:"quantity"`
	Region   Text   `json:"region"`
	AtMost   Number `json:"at_most"`
	AtLeast  Number `json:"at_least"`
	Value    Number `json:"value"`
	Met      bool   `json:"met"`
	Why      Text   `json:"why"`
}

// Run holds what differs from run to run: no other part of a ledger does.
type Run struct {
	Version string `json:"version"`
	Started string `json:"started"` // RFC 3339, UTC
	Seconds Number `json:"seconds"`
	Workers int    `json:"workers"`
}
