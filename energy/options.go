package energy

import "strainledger/mesh"

// An Idealisation says what the cells of the mesh stand for.
type Idealisation string

// The idealisations. Plane and axisymmetric meshes lie in x-y.
const (
	Solid        Idealisation = "solid"
	PlaneStress  Idealisation = "plane-stress"
	PlaneStrain  Idealisation = "plane-strain"
	Axisymmetric Idealisation = "axisymmetric"
)

// A Source of energy says from which fields the density is computed.
type EnergySource string

// The sources of energy; the empty one is the first of these whose inputs exist.
const (
	FromStressStrain EnergySource = "stress-strain"
	FromStress       EnergySource = "stress"
	FromStrain       EnergySource = "strain"
	FromDisplacement EnergySource = "displacement"
)

// A Criterion turns a stress tensor into an equivalent stress and a utilisation.
type Criterion string

// The criteria.
const (
	VonMises         Criterion = "von-mises"
	Tresca           Criterion = "tresca"
	MaxPrincipal     Criterion = "max-principal"
	DistortionEnergy Criterion = "distortion-energy"
	TotalEnergy      Criterion = "total-energy"
)

// Options says how a model is tallied. The zero value of a field is its default.
type Options struct {
	Title        string
	Length       string // units of the files' numbers, "" where not stated: mm m cm in ft
	Stress       string // MPa Pa kPa GPa psi ksi
	Mass         string // kg g t lb
	Idealisation Idealisation

	Thickness      float64 // plane models; 0: not stated
	ThicknessArray string  // name of a cell array with the thickness instead
	AxisX          bool    // axisymmetric: the axis of symmetry is x, not y
	Deformed       bool    // the files' points are in the deformed position
	Repeats        int     // the mesh stands this often in the whole; 0: not stated

	From      EnergySource
	Fields    Fields
	Materials []Material
	Regions   []Region
	Limit     LimitOptions
	Hotspots  HotspotOptions
	Error     ErrorOptions
	Balance   BalanceOptions
	Elsewhere []Elsewhere

	Requirements []Requirement
	Acceptances  []Acceptance
	Review       Review

	Loading          *Loading // nil: nothing is stated
	HotspotTolerance float64  // distance within which hotspots of two runs match; 0: not stated

	Workers          int      // 0: all processors
	ChunkCells       int      // cells in a chunk; 0: the walk's default
	ListAllPastLimit bool     // keep every cell past its limit for Ledger.AllPastLimit
	Columns          *Columns // gets what is computed for each cell; nil: nothing
}

// Fields holds what the study states of each field.
type Fields struct {
	Stress                  Field
	Strain                  Field
	ThermalStrain           Field
	PlasticStrain           Field
	EquivalentPlasticStrain Field
	Displacement            Field
	Temperature             Field
	NodalForce              Field
	ElementID               Field
}

// A Field is what the study states of one field; the zero value states nothing, and
// the field is looked for in the file.
type Field struct {
	Off         bool     // not used and not looked for
	Arrays      []string // one array, or several that hold one component each
	On          mesh.Location
	Integration bool   // values at the integration points of Rule
	Rule        string // name of the integration rule
	Order       mesh.Order
	Shear       string // tensor | engineering | mandel; "" not stated
	Kind        string // strain: total | elastic; "" not stated
	Compression bool   // stress: compression is positive
}

// IsStated reports whether the study names the field's array.
func (f *Field) IsStated() bool { return len(f.Arrays) > 0 }

// A Region selects cells and gives them a material. One of Array, Block, Box and Rest
// is set.
type Region struct {
	Name     string
	Array    string    // cell array, with
	Values   []float64 // the values that select
	Block    string    // block name; slash path, * matches within one path element
	Box      *Box
	Rest     bool
	Material string // "" none

	Thickness float64   // 0: the model's
	Criterion Criterion // "": the study's
	Optional  bool      // may be without cells
}

// A Box is a range of space, bounds included.
type Box struct{ Low, High Vector }

// LimitOptions says how cells are judged against their material's limit.
type LimitOptions struct {
	Criterion Criterion // "": von Mises
	List      int       // cells named in the ledger; 0: 100
}

// HotspotOptions says which hotspots are listed.
type HotspotOptions struct {
	Count int    // 0: 20
	By    string // utilisation | density | energy; "": utilisation where every region has a limit, else density

	Prominence  float64 // share by which density falls around a peak, above 0 and below 1; 0: 0.2
	SingleCells bool    // list single cells, not the peaks of density
	Pool        int     // densest cells among which peaks are looked for; 0: 16,384
	Radius      float64 // of the balls over which density is averaged; 0: not stated
	Centre      *Vector // of one more such ball; nil: none
}

// ErrorOptions asks for an estimate of what the mesh leaves out.
type ErrorOptions struct {
	Estimate bool
	Target   float64  // relative error in the energy norm that is aimed at, above 0 and below 1; 0: 0.05
	Recovery Recovery // "": by averaging
}

// A Recovery is a way to a smooth stress at the nodes.
type Recovery string

// The ways to a smooth stress.
const (
	ByAveraging Recovery = "averaging"
	ByPatches   Recovery = "patches"
)

// BalanceOptions says what is known of the work of the loads; at most one of the two is
// set. Without either it comes from the file's nodal forces.
type BalanceOptions struct {
	ExternalWork *float64 // nil: not stated
	Loads        []Load
}

// A Load is the resultant of a load that grew in proportion with the displacement of
// where it acts, along which Displacement is measured: its work is ½ F·u.
type Load struct {
	Name         string
	Force        Vector
	Displacement Vector
}

// An Elsewhere is energy held by what the file has no cells for. It enters the balance
// only.
type Elsewhere struct {
	Name   string `json:"name"`
	Energy Number `json:"energy"`
	Source Text   `json:"source"` // where the number comes from
}

// A Requirement is a bound on one number of an account.
type Requirement struct {
	Name     string
	Quantity string
	Region   string // "": the whole model
	AtMost   Number
	AtLeast  Number
}

// An Acceptance names a finding of severity error that the study lives with.
type Acceptance struct {
	Code   string
	Reason string
}

// A Review holds what a study says of its own review; it is printed as given.
type Review struct {
	Document   string
	Revision   string
	PreparedBy string
	CheckedBy  string
}
