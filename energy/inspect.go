package energy

import (
	"context"
	"encoding/binary"
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"math"
	"math/big"
	"slices"
	"strconv"

	"strainledger/mesh"
)

// InspectOptions says how closely files are looked at.
type InspectOptions struct {
	Ranges  bool // read every value: bounds, measures, ranges and sums
	Workers int  // 0: all processors
}

// Inspect says what the files of one model hold: from the headers, the cells' types
// and their ghost marks alone, or from every value. Its errors are the reader's.
func Inspect(ctx context.Context, model *mesh.Model, options InspectOptions) (*Inspection, error) {
	walk := mesh.NewWalk(model, options.Workers, 0)
	defer walk.Close()
	i := &inspector{model: model, walk: walk, arrays: allArrays(model)}
	i.parts = make([]*inspected, walk.Workers())
	var err error
	var bounds mesh.Bounds
	if options.Ranges {
		if bounds, err = walk.Bounds(ctx, &mesh.Want{}); err == nil {
			err = i.readValues(ctx)
		}
		if err == nil {
			err = i.readFields(ctx)
		}
	} else {
		err = i.readTypes(ctx)
	}
	if err != nil {
		return nil, err
	}
	total := i.total()
	file := i.describe(total)
	if options.Ranges {
		file.Bounds = boxOf(&bounds)
		file.Measure = &InspectedMeasure{
			Length: Number(total.measure[1].Float64()), Area: Number(total.measure[2].Float64()), Volume: Number(total.measure[3].Float64()),
		}
		i.fillRanges(file.Arrays, total)
	}
	var found findings
	if options.Ranges {
		if err := i.audit(ctx, file.Arrays, total, &found); err != nil {
			return nil, err
		}
	}
	for _, remark := range model.Remarks {
		found.add(remark.Code, remark.Cells, "%s", remark.Message)
	}
	if total.hidden > 0 {
		found.add("ghost-cells", total.hidden, "%d cells are marked as duplicates or hidden; they are in no count and no sum", total.hidden)
	}
	for _, reason := range slices.Sorted(maps.Keys(total.without)) {
		found.add("unsupported-cells", total.without[reason], "%d cells are in no measure: %s", total.without[reason], reason)
	}
	return &Inspection{Schema: InspectionSchema, Files: []InspectedFile{file}, Findings: found.sorted(nil)}, nil
}

// audit takes the arrays for what the tally would take them for without a study, and
// tests that against the numbers. What the tally would refuse for want of a study is no
// fault of the file: then the names alone speak, and the reason is given.
func (i *inspector) audit(ctx context.Context, arrays []InspectedArray, total *inspected, found *findings) error {
	options := &Options{Idealisation: PlaneStress, Thickness: 1}
	for cellType := range total.cells {
		if cellType.Dimension() == 3 {
			options = &Options{Idealisation: Solid}
		}
	}
	p, err := newPlan(ctx, i.walk, i.model, options)
	var study *StudyError
	var input *InputError
	switch {
	case errors.As(err, &study), errors.As(err, &input):
		for a := range arrays {
			if arrays[a].TakenFor != "" {
				arrays[a].Why = Text(fmt.Sprintf("by its name and %d components; not settled: %v", arrays[a].Components, err))
			}
		}
		return nil
	case err != nil:
		return err
	}
	for a := range arrays {
		arrays[a].TakenFor, arrays[a].Why = "", ""
		for _, field := range p.inputs.used.Taken() {
			if isUsedArray(field.FieldUsed, &arrays[a]) {
				arrays[a].TakenFor, arrays[a].Why = Text(field.Key), Text(field.Why)
			}
		}
	}
	for _, finding := range p.findings.list {
		if finding.Code != "units-not-stated" && finding.Code != "one-value-per-cell" {
			found.list = append(found.list, finding)
		}
	}
	return nil
}

// isUsedArray reports whether a field was taken from the array.
func isUsedArray(used *FieldUsed, array *InspectedArray) bool {
	on := used.On
	if on == "integration" {
		on = mesh.OnField.String()
	}
	return on == array.On && used.Array == array.Name
}

// An inspector reads one model.
type inspector struct {
	model  *mesh.Model
	walk   *mesh.Walk
	arrays []mesh.Array // point and cell arrays of any piece, then those of the set
	parts  []*inspected // by worker
}

// inspected is what one worker has seen.
type inspected struct {
	cells   map[mesh.CellType]int64
	blocks  []int64 // cells by block
	hidden  int64
	measure [4]Sum
	without map[string]int64 // cells without a measure, by the reason
	ranges  []arrayRange     // by array of the inspector
}

// arrayRange gathers the values of one array.
type arrayRange struct {
	tuples, finite int64
	min, max       []float64
	sum            []Sum
}

// allArrays returns every array of the model's pieces once, in the order in which
// they first occur.
func allArrays(model *mesh.Model) []mesh.Array {
	var list []mesh.Array
	for i := range model.Pieces {
		for _, array := range model.Pieces[i].Arrays {
			same := slices.IndexFunc(list, func(a mesh.Array) bool { return a.On == array.On && a.Name == array.Name })
			if same < 0 {
				list = append(list, array)
			} else {
				list[same].Tuples += array.Tuples
			}
		}
	}
	return append(list, model.Fields...)
}

func (i *inspector) newInspected() *inspected {
	part := &inspected{cells: map[mesh.CellType]int64{}, without: map[string]int64{}, blocks: make([]int64, len(i.model.Blocks)), ranges: make([]arrayRange, len(i.arrays))}
	for a := range part.ranges {
		n := i.arrays[a].Components
		part.ranges[a] = arrayRange{min: slices.Repeat([]float64{math.Inf(1)}, n), max: slices.Repeat([]float64{math.Inf(-1)}, n), sum: make([]Sum, n)}
	}
	return part
}

// total joins what the workers have seen.
func (i *inspector) total() *inspected {
	total := i.newInspected()
	for _, part := range i.parts {
		if part == nil {
			continue
		}
		for cellType, count := range part.cells {
			total.cells[cellType] += count
		}
		for block, count := range part.blocks {
			total.blocks[block] += count
		}
		total.hidden += part.hidden
		for reason, count := range part.without {
			total.without[reason] += count
		}
		for d := range total.measure {
			total.measure[d].Join(&part.measure[d])
		}
		for a := range total.ranges {
			total.ranges[a].join(&part.ranges[a])
		}
	}
	return total
}

func (r *arrayRange) join(other *arrayRange) {
	r.tuples += other.tuples
	r.finite += other.finite
	for c := range r.min {
		r.min[c], r.max[c] = min(r.min[c], other.min[c]), max(r.max[c], other.max[c])
		r.sum[c].Join(&other.sum[c])
	}
}

// add takes one tuple.
func (r *arrayRange) add(tuple []float64) {
	r.tuples++
	isWhole := true
	for c, value := range tuple {
		if value-value != 0 {
			isWhole = false
			continue
		}
		r.min[c], r.max[c] = min(r.min[c], value), max(r.max[c], value)
		r.sum[c].Add(value)
	}
	if isWhole {
		r.finite++
	}
}

// isNumeric reports whether an array holds numbers that can be read.
func isNumeric(array mesh.Array) bool { return array.Type != "String" && array.Type != "Bit" }

// isHidden reports whether a cell is marked as a duplicate or hidden.
func isHidden(chunk *mesh.Chunk, i int) bool {
	return chunk.Hidden != nil && chunk.Hidden[i]&(mesh.DuplicateCell|mesh.HiddenCell) != 0
}

// countCells counts the cells of a chunk by type and block.
func (p *inspected) countCells(chunk *mesh.Chunk) {
	for i, cellType := range chunk.Types {
		if isHidden(chunk, i) {
			p.hidden++
			continue
		}
		p.cells[cellType]++
		p.blocks[chunk.Block]++
	}
}

// readTypes reads types and ghost marks alone.
func (i *inspector) readTypes(ctx context.Context) error {
	return i.walk.Each(ctx, &mesh.Want{NoNodes: true}, nil, func(worker int) mesh.Visitor {
		part := i.newInspected()
		i.parts[worker] = part
		return func(chunk *mesh.Chunk) error {
			part.countCells(chunk)
			return nil
		}
	})
}

// readFields reads the arrays of the data set as a whole. Those of one name in several
// files are read in the order of the files, as far as the model counts their tuples.
func (i *inspector) readFields(ctx context.Context) error {
	cursor := i.model.Open()
	defer cursor.Close()
	for a, wanted := range i.arrays {
		if wanted.On != mesh.OnField || !isNumeric(wanted) {
			continue
		}
		to := &i.parts[0].ranges[a]
		for _, source := range i.model.Sources {
			for k := range source.Fields {
				array := &source.Fields[k]
				if array.Name != wanted.Name || array.Components != wanted.Components || to.tuples >= wanted.Tuples {
					continue
				}
				if err := addArray(ctx, cursor, array, to); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// addArray adds the tuples of an array as it is stored.
func addArray(ctx context.Context, cursor mesh.Cursor, array *mesh.Array, to *arrayRange) error {
	const step = 8192 // tuples; a multiple of 8, so that every step begins where it may
	if array.Tuples == 0 || array.Components == 0 {
		return nil
	}
	size := array.Bytes / array.Tuples
	buffer, tuple := make([]byte, step*size), make([]float64, array.Components)
	for low := int64(0); low < array.Tuples; low += step {
		bytes := buffer[:size*min(step, array.Tuples-low)]
		if err := cursor.ReadArray(ctx, array, low*size, bytes); err != nil {
			return err
		}
		for ; len(bytes) > 0; bytes = bytes[size:] {
			for c := range tuple {
				number := bytes[int64(c)*size/int64(array.Components):]
				tuple[c] = storedNumber(array.Type, number)
				// What the sum lacks of whole numbers that a double rounds.
				switch array.Type {
				case "Int64":
					whole := int64(binary.LittleEndian.Uint64(number))
					to.sum[c].Add(float64(whole >> 11 << 11))
					to.sum[c].Add(float64(whole & (1<<11 - 1)))
					to.sum[c].Add(-tuple[c])
				case "UInt64":
					whole := binary.LittleEndian.Uint64(number)
					to.sum[c].Add(float64(whole >> 11 << 11))
					to.sum[c].Add(float64(whole & (1<<11 - 1)))
					to.sum[c].Add(-tuple[c])
				}
			}
			to.add(tuple)
		}
	}
	return nil
}

// storedNumber returns the number of one of VTK's types at the beginning of bytes, low
// byte first; whole numbers beyond 2^53 are rounded.
func storedNumber(numberType string, bytes []byte) float64 {
	switch numberType {
	case "Float64":
		return math.Float64frombits(binary.LittleEndian.Uint64(bytes))
	case "Float32":
		return float64(math.Float32frombits(binary.LittleEndian.Uint32(bytes)))
	case "Int64":
		return float64(int64(binary.LittleEndian.Uint64(bytes)))
	case "UInt64":
		return float64(binary.LittleEndian.Uint64(bytes))
	case "Int32":
		return float64(int32(binary.LittleEndian.Uint32(bytes)))
	case "UInt32":
		return float64(binary.LittleEndian.Uint32(bytes))
	case "Int16":
		return float64(int16(binary.LittleEndian.Uint16(bytes)))
	case "UInt16":
		return float64(binary.LittleEndian.Uint16(bytes))
	case "Int8":
		return float64(int8(bytes[0]))
	case "UInt8":
		return float64(bytes[0])
	}
	return math.NaN()
}

// readValues reads everything. Pieces may have different arrays, so that each piece's
// cells are asked for its own; values of points are read in steps.
func (i *inspector) readValues(ctx context.Context) error {
	for worker := range i.parts {
		i.parts[worker] = i.newInspected()
	}
	for piece := range i.model.Pieces {
		if err := i.readCells(ctx, piece); err != nil {
			return err
		}
	}
	return i.readPoints(ctx)
}

// readCells reads the cells of one piece with all its cell arrays of numbers.
func (i *inspector) readCells(ctx context.Context, piece int) error {
	want := &mesh.Want{}
	var at []int
	for a, array := range i.arrays {
		if found := i.model.Pieces[piece].Find(mesh.OnCell, array.Name); array.On == mesh.OnCell && found != nil && isNumeric(array) {
			want.CellValues = append(want.CellValues, array.Name)
			at = append(at, a)
		}
	}
	return i.walk.Some(ctx, i.walk.Spans(piece), want, func(worker int) mesh.Visitor {
		part := i.parts[worker]
		var cell mesh.Cell
		return func(chunk *mesh.Chunk) error {
			part.countCells(chunk)
			for k := range chunk.Count {
				if isHidden(chunk, k) {
					continue
				}
				chunk.Cell(k, &cell)
				if !cell.Shape.Supported {
					part.without[cell.Shape.Reason]++
				} else if measure := cell.Measure(); measure-measure == 0 {
					part.measure[cell.Shape.Dimension].Add(measure)
				}
				for column, a := range at {
					n := i.arrays[a].Components
					part.ranges[a].add(chunk.Values[column][k*n : k*n+n])
				}
			}
			return nil
		}
	})
}

// pointStep is how many points are read at a time.
const pointStep = 1 << 15

// readPoints reads the point arrays, array by array.
func (i *inspector) readPoints(ctx context.Context) error {
	cursor := i.model.Open()
	defer cursor.Close()
	part := i.parts[0]
	for a, array := range i.arrays {
		if array.On != mesh.OnPoint || !isNumeric(array) {
			continue
		}
		room := make([]float64, pointStep*array.Components)
		for piece := range i.model.Pieces {
			if i.model.Pieces[piece].Find(mesh.OnPoint, array.Name) == nil {
				continue
			}
			count, grid := i.model.Pieces[piece].PointCount, i.model.Pieces[piece].Grid
			for low := int64(0); low < count; low += pointStep {
				high := min(low+pointStep, count)
				values := room[:int(high-low)*array.Components]
				if err := cursor.PointValues(ctx, piece, array.Name, low, high, values); err != nil {
					return err
				}
				for k, tuple := range slices.Collect(slices.Chunk(values, array.Components)) {
					if !grid.IsShared(low + int64(k)) {
						part.ranges[a].add(tuple)
					}
				}
			}
		}
	}
	return nil
}

// describe lays out what headers and types tell.
func (i *inspector) describe(total *inspected) InspectedFile {
	m := i.model
	file := InspectedFile{CellsByType: []InspectedType{}, Times: slices.Clone(m.Times), Blocks: []InspectedBlock{}, Arrays: []InspectedArray{}}
	if len(m.Sources) > 0 {
		file.Path, file.Format = m.Sources[0].Path, m.Sources[0].Format
	}
	for _, cellType := range slices.Sorted(maps.Keys(total.cells)) {
		file.Cells += total.cells[cellType]
		file.CellsByType = append(file.CellsByType, InspectedType{int(cellType), cellType.String(), total.cells[cellType]})
	}
	points := make([]int64, len(m.Blocks))
	for piece := range m.Pieces {
		points[m.Pieces[piece].Block] += m.Pieces[piece].PointCount
	}
	for _, source := range m.Sources {
		file.Points += source.Points
		file.Bytes += source.Bytes
	}
	for block, name := range m.Blocks {
		file.Blocks = append(file.Blocks, InspectedBlock{name, points[block], total.blocks[block]})
	}
	for _, array := range i.arrays {
		entry := InspectedArray{Name: array.Name, On: array.On.String(), Type: array.Type, Components: array.Components, Tuples: array.Tuples, Finite: None, Coding: Text(array.Coding)}
		entry.TakenFor, entry.Why = takenFor(array)
		file.Arrays = append(file.Arrays, entry)
	}
	if file.Times == nil {
		file.Times = []float64{}
	}
	return file
}

// boxOf turns bounds into the form of the ledger; nil without points.
func boxOf(bounds *mesh.Bounds) *Bounds {
	if bounds.IsEmpty() {
		return nil
	}
	l, h := bounds.Low, bounds.High
	return &Bounds{l[0], h[0], l[1], h[1], l[2], h[2]}
}

// fillRanges lays out the ranges of the arrays whose values were read.
func (i *inspector) fillRanges(to []InspectedArray, total *inspected) {
	for a := range to {
		if !isNumeric(i.arrays[a]) {
			continue
		}
		r := &total.ranges[a]
		to[a].Tuples = r.tuples
		to[a].Finite = Number(r.finite)
		for c := range r.min {
			least, greatest := Number(r.min[c]), Number(r.max[c])
			if least > greatest {
				least, greatest = None, None
			}
			to[a].Min, to[a].Max = append(to[a].Min, least), append(to[a].Max, greatest)
			to[a].Sum = append(to[a].Sum, sumText(&r.sum[c], i.arrays[a].IsInteger()))
		}
	}
}

// sumText writes a sum as a decimal number: of whole numbers exactly, else rounded
// once to a double and written in its shortest form.
func sumText(sum *Sum, isInteger bool) json.Number {
	if isInteger {
		exact, _ := sum.exact().Int(new(big.Int))
		return json.Number(exact.String())
	}
	value := sum.Float64()
	if value == 0 {
		return "0"
	}
	return json.Number(strconv.FormatFloat(value, 'g', -1, 64))
}

// takenFor tells from name and component count what an array may serve as.
func takenFor(array mesh.Array) (field, why Text) {
	keys := map[role]Text{
		stressRole: "stress", strainRole: "strain", elasticStrainRole: "strain", thermalStrainRole: "thermal_strain",
		plasticStrainRole: "plastic_strain", equivalentPlasticStrainRole: "equivalent_plastic_strain",
		displacementRole: "displacement", nodalForceRole: "nodal_force", reactionRole: "nodal_force", loadRole: "nodal_force",
		temperatureRole: "temperature", elementIDRole: "element_id",
	}
	fits, isMisplaced := isScalar, false
	found := roleOf(array.Name)
	switch found {
	case stressRole, strainRole, elasticStrainRole, thermalStrainRole, plasticStrainRole:
		fits = func(components int) bool { return mesh.DefaultOrder(components) != nil }
	case displacementRole, nodalForceRole, reactionRole, loadRole:
		fits, isMisplaced = isVector, array.On != mesh.OnPoint
	}
	if found == noRole || array.On == mesh.OnField || isMisplaced || !fits(array.Components) {
		return "", ""
	}
	components := " components"
	if array.Components == 1 {
		components = " component"
	}
	return keys[found], Text("by its name and " + strconv.Itoa(array.Components) + components + "; the values were not looked at")
}
