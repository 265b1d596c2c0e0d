package energy

import "encoding/json"

// An Inspection says what result files hold before any energy is computed. Its keys
// and their order are fixed by the schema's number.
type Inspection struct {
	Schema   string          `json:"schema"`
	Files    []InspectedFile `json:"files"` // one for each argument, not for each piece
	Findings []Finding       `json:"findings"`
}

// InspectionSchema names the form of an Inspection.
const InspectionSchema = "strainledger/inspection/v1"

// An InspectedFile is what one argument holds, its pieces and blocks included. Points,
// cells, their types and the measure leave out duplicate and hidden cells. Bounds and
// Measure are nil where the headers do not tell and the values were not read.
type InspectedFile struct {
	Path        string            `json:"path"`
	Format      string            `json:"format"`
	Points      int64             `json:"points"`
	Cells       int64             `json:"cells"`
	CellsByType []InspectedType   `json:"cells_by_type"`
	Bounds      *Bounds           `json:"bounds"`
	Times       []float64         `json:"times"` // all states, rising
	Blocks      []InspectedBlock  `json:"blocks"`
	Measure     *InspectedMeasure `json:"measure"`
	Arrays      []InspectedArray  `json:"arrays"` // of several states, the first's
	Bytes       int64             `json:"bytes"`  // on disk, with the files that it refers to
}

// Bounds is a range of space: xmin, xmax, ymin, ymax, zmin, zmax.
type Bounds [6]float64

// An InspectedType counts the cells of one type.
type InspectedType struct {
	Type  int    `json:"type"` // VTK's number
	Name  string `json:"name"`
	Cells int64  `json:"cells"`
}

// An InspectedBlock is one piece or block; nested names are joined by a slash.
type InspectedBlock struct {
	Name   string `json:"name"`
	Points int64  `json:"points"`
	Cells  int64  `json:"cells"`
}

// An InspectedMeasure sums the cells' lengths, areas and volumes, each over the cells
// of its dimension.
type InspectedMeasure struct {
	Length Number `json:"length"`
	Area   Number `json:"area"`
	Volume Number `json:"volume"`
}

// An InspectedArray is one array of a file. Finite counts the tuples whose components
// are all finite; Min, Max and Sum have one entry for each component, over its finite
// values. Finite is none, and the other three nil, where the values were not read.
type InspectedArray struct {
	Name       string   `json:"name"`
	On         string   `json:"on"`   // point | cell | field
	Type       string   `json:"type"` // VTK's name: Float64 ...
	Components int      `json:"components"`
	Tuples     int64    `json:"tuples"`
	TakenFor   Text     `json:"taken_for"` // the field of the study that it serves
	Why        Text     `json:"why"`
	Finite     Number   `json:"finite"`
	Min        []Number `json:"min"` // none for a component without finite values
	Max        []Number `json:"max"`

	// Sum holds decimal texts, never empty: those of whole-number arrays are exact,
	// beyond what a double can hold.
	Sum []json.Number `json:"sum"`

	Coding Text `json:"coding"` // how the file keeps it: ascii, base64, raw, zlib, LZ4, LZMA
}
