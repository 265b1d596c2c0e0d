package energy

import (
	"fmt"
	"slices"
	"strings"

	"strainledger/mesh"
)

// A tensorInput reads one tensor field from a chunk.
type tensorInput struct {
	on      mesh.Location // 0: the field is not there
	layout  mesh.Layout
	columns []int // positions in Chunk.Values, PointValues or FieldValues; several hold one component each
	points  int   // integration points in a cell, their tuples in a row; 0: none

	order   mesh.Order
	orderBy decider
	shear   mesh.Shear
	shearBy decider
}

// A decider is who settled how an array is read.
type decider string

// The deciders, as the ledger names them.
const (
	byStudy   decider = "study"
	byAudit   decider = "audit" // from the numbers
	byFile    decider = "file"  // the array's own component names
	byDefault decider = "default"
)

func (in *tensorInput) exists() bool { return in.on != 0 }

// at returns the tensor of a cell, of a node where the field is on points, or of an
// integration point by its number in the cell.
func (in *tensorInput) at(chunk *mesh.Chunk, cell int, node int32) mesh.SymmetricTensor {
	if len(in.columns) > 1 {
		tuple := in.stored(chunk, cell, node)
		return in.layout.At(tuple[:])
	}
	values, index := in.values(chunk, cell, node)
	n := in.layout.Components
	return in.layout.At(values[in.columns[0]][index*n : index*n+n])
}

// values returns where the field's numbers are and the index of a place in them.
func (in *tensorInput) values(chunk *mesh.Chunk, cell int, node int32) ([][]float64, int) {
	return placeIn(chunk, in.on, in.points, cell, node)
}

// placeIn returns the numbers of a location and the index of a place in them.
func placeIn(chunk *mesh.Chunk, on mesh.Location, points, cell int, node int32) ([][]float64, int) {
	index := cell
	if points > 0 {
		index = cell*points + int(node)
	}
	switch on {
	case mesh.OnPoint:
		return chunk.PointValues, int(node)
	case mesh.OnField:
		return chunk.FieldValues, index
	}
	return chunk.Values, index
}

// stored returns the numbers of a place as the file has them.
func (in *tensorInput) stored(chunk *mesh.Chunk, cell int, node int32) (tuple [9]float64) {
	values, index := in.values(chunk, cell, node)
	if len(in.columns) == 1 {
		n := in.layout.Components
		copy(tuple[:], values[in.columns[0]][index*n:index*n+n])
		return tuple
	}
	for i, column := range in.columns {
		tuple[i] = values[column][index]
	}
	return tuple
}

// A scalarInput reads one field of single numbers from a chunk.
type scalarInput struct {
	on     mesh.Location // 0: the field is not there
	column int
	points int // as in a tensorInput
}

func (in *scalarInput) exists() bool { return in.on != 0 }

// at returns the number of a cell, of a node where the field is on points, or of an
// integration point by its number in the cell.
func (in *scalarInput) at(chunk *mesh.Chunk, cell int, node int32) float64 {
	values, index := placeIn(chunk, in.on, in.points, cell, node)
	return values[in.column][index]
}

// inputs are the fields that a tally reads.
type inputs struct {
	stress, strain, thermalStrain, plasticStrain tensorInput
	equivalentPlasticStrain, temperature         scalarInput
	thickness                                    scalarInput
	displacement                                 vectorInput     // read where the energy comes from it
	elementID                                    int             // column of Chunk.Labels, or -1
	rule                                         integrationRule // of integration points; nil: none
	nodalForce                                   nodalForces     // read for the balance

	strainIsElastic bool
	kindBy          decider // byFile: the strain's name tells
	rolesBy         decider // byDefault: the names do not tell stress from strain
	otherThermal    string  // an array that tells of thermal strain and is not read; "" none
	used            FieldsUsed
	want            mesh.Want
}

// isPerCell reports whether everything that the density needs is cell data.
func (in *inputs) isPerCell() bool {
	return in.rule == nil && in.stress.on != mesh.OnPoint && in.strain.on != mesh.OnPoint && in.thermalStrain.on != mesh.OnPoint &&
		in.plasticStrain.on != mesh.OnPoint && in.temperature.on != mesh.OnPoint
}

// wantColumn adds an array to what is read, once, and returns its column.
func wantColumn(list *[]string, name string) int {
	if i := slices.Index(*list, name); i >= 0 {
		return i
	}
	*list = append(*list, name)
	return len(*list) - 1
}

// A fieldFinder decides which arrays are taken for which fields.
type fieldFinder struct {
	options        *Options
	arrays         []mesh.Array // those that every piece with cells has
	findings       *findings
	in             *inputs
	described      map[string]int // Gauss points along each direction, by array
	schemes        mesh.Schemes   // that the files describe
	cells          int64
	hasIntegration bool      // there are results at integration points
	unnamed        [2]string // two arrays taken for stress and strain although their names say nothing
}

// commonArrays returns the point and cell arrays that every piece with cells has with
// the same number of components, in the order of the first such piece.
func commonArrays(model *mesh.Model) []mesh.Array {
	var common []mesh.Array
	isFirst := true
	for i := range model.Pieces {
		piece := &model.Pieces[i]
		if piece.CellCount == 0 {
			continue
		}
		if isFirst {
			common, isFirst = slices.Clone(piece.Arrays), false
			continue
		}
		common = slices.DeleteFunc(common, func(a mesh.Array) bool {
			other := piece.Find(a.On, a.Name)
			return other == nil || other.Components != a.Components
		})
	}
	return slices.DeleteFunc(common, func(a mesh.Array) bool { return !isNumeric(a) })
}

// findInputs resolves every field of the study and of the file. The energy's source
// is decided with them.
func findInputs(model *mesh.Model, options *Options, found *findings) (*inputs, EnergySource, error) {
	f := &fieldFinder{options: options, arrays: commonArrays(model), findings: found, in: &inputs{elementID: -1}}
	f.findIntegrationArrays(model)
	source, on, err := f.chooseSource()
	if err != nil {
		return nil, "", err
	}
	if err := f.findTensors(source, on); err != nil {
		return nil, "", err
	}
	if err := f.findOthers(source, on); err != nil {
		return nil, "", err
	}
	return f.in, source, nil
}

// candidates returns the arrays at a location whose names and component counts fit one
// of the roles.
func (f *fieldFinder) candidates(on mesh.Location, fits func(components int) bool, roles ...role) []mesh.Array {
	var list []mesh.Array
	for _, array := range f.arrays {
		if (on == 0 || array.On == on) && slices.Contains(roles, roleOf(array.Name)) && fits(array.Components) {
			list = append(list, array)
		}
	}
	return list
}

// allows reports whether the study leaves a location open for the field.
func (f *Field) allows(on mesh.Location) bool {
	return (f.On == 0 || f.On == on) && (!f.Integration || on == mesh.OnField)
}

// isTensor reports whether so many components can be a tensor in this idealisation.
func (f *fieldFinder) isTensor(components int) bool {
	switch f.options.Idealisation {
	case PlaneStress, PlaneStrain:
		return slices.Contains([]int{3, 4, 6, 9}, components)
	case Axisymmetric:
		return slices.Contains([]int{4, 6, 9}, components)
	}
	return components == 6 || components == 9
}

func isScalar(components int) bool { return components == 1 }

func isVector(components int) bool { return components == 2 || components == 3 }

// strainRoles are tried in this order: an elastic strain needs nothing subtracted.
var strainRoles = [][]role{{elasticStrainRole}, {strainRole}}

// has reports whether a tensor field is stated by the study or can be found at the
// location.
func (f *fieldFinder) has(field *Field, on mesh.Location, roles ...role) bool {
	switch {
	case field.Off:
		return false
	case field.IsStated():
		array := f.stated(field)
		return array == nil || array.On == on // a missing array is told later, by name
	}
	return field.allows(on) && len(f.candidates(on, f.isTensor, roles...)) > 0
}

// chooseSource returns the source of the energy and the location of its fields: what
// the study states, else the first whose inputs exist.
func (f *fieldFinder) chooseSource() (EnergySource, mesh.Location, error) {
	stress, strain := &f.options.Fields.Stress, &f.options.Fields.Strain
	from := f.options.From
	if stress.IsStated() && strain.IsStated() && (from == "" || from == FromStressStrain) {
		return FromStressStrain, 0, nil // also at two locations, because the study says so
	}
	for _, source := range []EnergySource{FromStressStrain, FromStress, FromStrain} {
		if from != "" && from != source {
			continue
		}
		for _, on := range f.locations() {
			hasStress := f.has(stress, on, stressRole)
			hasStrain := f.has(strain, on, strainRole, elasticStrainRole)
			if (hasStress || source == FromStrain) && (hasStrain || source == FromStress) {
				return source, on, nil
			}
		}
	}
	if from == "" || from == FromStressStrain {
		if on := f.takeUnnamed(); on != 0 {
			return FromStressStrain, on, nil
		}
	}
	if (from == "" || from == FromDisplacement) && f.hasDisplacement() {
		return FromDisplacement, mesh.OnPoint, nil
	}
	return "", 0, f.nothingFound(from)
}

// takeUnnamed takes two tensor arrays whose names say nothing for stress and strain,
// where they are the only two at a location and nothing is stated; which is which is
// left to the numbers. It returns their location, or 0.
func (f *fieldFinder) takeUnnamed() mesh.Location {
	fields := &f.options.Fields
	if fields.Stress.Off || fields.Strain.Off || fields.Stress.IsStated() || fields.Strain.IsStated() {
		return 0
	}
	for _, on := range f.locations() {
		list := f.candidates(on, f.isTensor, noRole)
		if len(list) == 2 && list[0].Components == list[1].Components {
			f.unnamed = [2]string{list[0].Name, list[1].Name}
			f.in.rolesBy = byDefault
			return on
		}
	}
	return 0
}

// hasDisplacement reports whether a displacement is stated by the study or can be
// found.
func (f *fieldFinder) hasDisplacement() bool {
	field := &f.options.Fields.Displacement
	if field.Off || field.IsStated() {
		return !field.Off
	}
	return len(f.candidates(mesh.OnPoint, isVector, displacementRole)) > 0
}

// nothingFound says which fields are missing and what the file has instead.
func (f *fieldFinder) nothingFound(from EnergySource) error {
	var have []string
	for _, array := range f.arrays {
		have = append(have, describe(array))
	}
	needed := "a stress or strain array"
	switch from {
	case FromDisplacement:
		return inputError("found no displacement on points; the file has %s; name it in [fields] displacement", orNoArrays(have))
	case FromStressStrain:
		needed = "a stress and a strain array at one location"
	case FromStress:
		needed = "a stress array"
	case FromStrain:
		needed = "a strain array"
	}
	components := "6 or 9 components"
	switch f.options.Idealisation {
	case PlaneStress, PlaneStrain:
		components = "3, 4, 6 or 9 components"
	case Axisymmetric:
		components = "4, 6 or 9 components, the hoop term among them"
	}
	return inputError("found no %s with %s; the file has %s; name the arrays in [fields]",
		strings.TrimPrefix(needed, "a "), components, orNoArrays(have))
}

// orNoArrays lists arrays for a message.
func orNoArrays(have []string) string {
	if len(have) == 0 {
		return "no arrays"
	}
	return strings.Join(have, ", ")
}

// describe names an array for a message.
func describe(array mesh.Array) string {
	return fmt.Sprintf("%q (%d on %s)", array.Name, array.Components, placesName(array.On))
}

// stated returns the array that the study names, nil when it is not in the file. The
// first of several component arrays stands for all.
func (f *fieldFinder) stated(field *Field) *mesh.Array {
	for _, on := range f.locations() {
		if field.On != 0 && field.On != on || field.Integration && on == mesh.OnPoint {
			continue
		}
		for i := range f.arrays {
			if f.arrays[i].On == on && f.arrays[i].Name == field.Arrays[0] {
				return &f.arrays[i]
			}
		}
	}
	return nil
}

// choose returns the array for a field: the stated one, or the only candidate at the
// location. Found nothing: a nil array and no error. why is the reason for the report.
func (f *fieldFinder) choose(key string, field *Field, on mesh.Location, fits func(int) bool, roles ...role) (*mesh.Array, string, error) {
	if field.Off {
		return nil, "", nil
	}
	if field.IsStated() {
		array := f.stated(field)
		if array == nil {
			return nil, "", f.missing(key, field)
		}
		if field.On == 0 && !field.Integration {
			f.noteSeveralLocations(key, array)
		}
		return array, "the study names it", nil
	}
	switch {
	case field.Integration:
		on = mesh.OnField
	case field.On != 0:
		on = field.On
	}
	list := f.candidates(on, fits, roles...)
	if f.unnamed[0] != "" && (key == "stress" || key == "strain") {
		list = f.candidates(on, fits, noRole)
		return &list[slices.Index([]string{"stress", "strain"}, key)], "one of the two tensor arrays of the file", nil
	}
	switch {
	case len(list) == 0:
		return nil, "", nil
	case len(list) > 1:
		names := make([]string, len(list))
		for i, array := range list {
			names[i] = describe(array)
		}
		return nil, "", inputError("the %s could be any of %s; name one in [fields] %s", plain(key), strings.Join(names, ", "), key)
	}
	for _, other := range f.locations() {
		if other != list[0].On && on != 0 && field.On == 0 && !field.Integration && len(f.candidates(other, fits, roles...)) > 0 {
			f.findings.add("several-locations", 0, "the %s is at several locations; taken on %s: state [fields] %s = { on = ... } for another", plain(key), placesName(list[0].On), key)
			break
		}
	}
	return &list[0], fmt.Sprintf("its name says %s and it has %d components", plain(key), list[0].Components), nil
}

// noteSeveralLocations reports a named array that stands on cells and on points.
func (f *fieldFinder) noteSeveralLocations(key string, array *mesh.Array) {
	for _, other := range f.arrays {
		if other.Name == array.Name && other.On != array.On {
			f.findings.add("several-locations", 0, "array %q is at several locations; taken on %s: state [fields] %s = { array = %q, on = ... } for another", array.Name, placesName(array.On), key, array.Name)
			return
		}
	}
}

// missing says that an array which the study names is not in the file.
func (f *fieldFinder) missing(key string, field *Field) error {
	var have []string
	for _, array := range f.arrays {
		if field.On == 0 || array.On == field.On {
			have = append(have, fmt.Sprintf("%q", array.Name))
		}
	}
	where := "cells or points"
	switch {
	case field.Integration:
		where = "integration points"
	case field.On != 0:
		where = placesName(field.On)
	}
	if len(have) == 0 {
		have = []string{"none"}
	}
	return inputError("[fields] %s: no array %q on %s; there are: %s", key, field.Arrays[0], where, strings.Join(have, ", "))
}

// plain is a field's key as words.
func plain(key string) string { return strings.ReplaceAll(key, "_", " ") }

// findTensors resolves stress, strain and what is subtracted from the strain.
func (f *fieldFinder) findTensors(source EnergySource, on mesh.Location) error {
	fields, in := &f.options.Fields, f.in
	if source == FromStressStrain || source == FromStress {
		if err := f.tensor("stress", &fields.Stress, on, &in.stress, &in.used.Stress, stressRole); err != nil {
			return err
		}
	}
	if source == FromStressStrain || source == FromStrain {
		for _, roles := range strainRoles {
			if err := f.tensor("strain", &fields.Strain, on, &in.strain, &in.used.Strain, roles...); err != nil {
				return err
			}
			if in.strain.exists() {
				break
			}
		}
		f.decideKind()
	}
	// An elastic strain without zz gets it in plane strain from what is subtracted.
	needsThermal := !in.strainIsElastic || f.options.Idealisation == PlaneStrain && !in.strain.layout.Has(2)
	if in.strain.exists() && needsThermal || source == FromDisplacement {
		where := in.strain.on
		if source == FromDisplacement {
			where = f.locationOf(f.isTensor, thermalStrainRole)
		}
		if err := f.tensor("thermal_strain", &fields.ThermalStrain, where, &in.thermalStrain, &in.used.ThermalStrain, thermalStrainRole); err != nil {
			return err
		}
	}
	// The plastic strain also tells which cells have yielded.
	switch {
	case source == FromDisplacement:
		on = f.locationOf(f.isTensor, plasticStrainRole)
	case on == 0:
		on = in.strain.on
	}
	if err := f.tensor("plastic_strain", &fields.PlasticStrain, on, &in.plasticStrain, &in.used.PlasticStrain, plasticStrainRole); err != nil {
		return err
	}
	if in.stress.exists() && in.strain.exists() && (in.stress.points > 0) != (in.strain.points > 0) {
		return inputError("stress is on %s and strain on %s: values at integration points cannot be multiplied with others", placesName(in.stress.on), placesName(in.strain.on))
	}
	if in.stress.exists() && in.strain.exists() && in.stress.on != in.strain.on {
		f.findings.add("mixed-locations", 0, "stress is on %s and strain on %s, as the study names them: their product mixes averages of different kinds", placesName(in.stress.on), placesName(in.strain.on))
	}
	return f.checkComponents(source)
}

// locationOf returns the first location at which a field can be found, cells where it
// cannot.
func (f *fieldFinder) locationOf(fits func(int) bool, roles ...role) mesh.Location {
	for _, on := range f.locations() {
		if len(f.candidates(on, fits, roles...)) > 0 {
			return on
		}
	}
	return mesh.OnCell
}

// decideKind settles whether the strain is the total or the elastic one, as far as the
// study and the array's name tell.
func (f *fieldFinder) decideKind() {
	in := f.in
	if in.used.Strain == nil {
		return
	}
	switch stated := f.options.Fields.Strain.Kind; {
	case stated != "":
		in.strainIsElastic, in.kindBy = stated == "elastic", byStudy
	case roleOf(in.used.Strain.Array) == elasticStrainRole:
		in.strainIsElastic, in.kindBy = true, byFile
	default:
		in.kindBy = byDefault
	}
}

// tensor resolves one tensor field and records how it was decided.
func (f *fieldFinder) tensor(key string, field *Field, on mesh.Location, to *tensorInput, used **FieldUsed, roles ...role) error {
	array, why, err := f.choose(key, field, on, f.isTensor, roles...)
	if err != nil || array == nil {
		return err
	}
	components := array.Components
	if len(field.Arrays) > 1 {
		if components, err = f.componentArrays(key, field, array.On); err != nil {
			return err
		}
	}
	points := 0
	if field.Integration || array.On == mesh.OnField {
		if points, components, err = f.settleRule(key, field, array); err != nil {
			return err
		}
	}
	order, orderBy, err := f.order(key, field, array, components)
	if err != nil {
		return err
	}
	shear, sign := mesh.TensorShear, 1.0
	if field.Shear != "" {
		if shear, err = mesh.ParseShear(field.Shear); err != nil {
			return studyError("[fields] %s: %w", key, err)
		}
	}
	signName := Text("")
	if key == "stress" {
		signName = "tension"
		if field.Compression {
			sign, signName = -1, "compression"
		}
	}
	layout, err := mesh.NewLayout(order, components, shear, sign)
	if err != nil {
		return inputError("[fields] %s: array %q: %w", key, array.Name, err)
	}
	*to = tensorInput{on: array.On, layout: layout, points: points, order: order, orderBy: orderBy, shear: shear, shearBy: byDefault}
	if field.Shear != "" || key == "stress" {
		to.shearBy = byStudy
	}
	names := []string{array.Name}
	if len(field.Arrays) > 1 {
		names = field.Arrays
	}
	for _, name := range names {
		to.columns = append(to.columns, f.column(array.On, name))
	}
	*used = &FieldUsed{Array: strings.Join(names, " "), On: usedOn(array.On, points), Sign: signName, DecidedBy: string(byStudy), Why: why}
	return nil
}

// usedOn names where the values of a field are.
func usedOn(on mesh.Location, points int) string {
	if points > 0 {
		on = mesh.OnField
	}
	return placeName(on)
}

// order returns the component order of an array and who decided it.
func (f *fieldFinder) order(key string, field *Field, array *mesh.Array, components int) (mesh.Order, decider, error) {
	if len(field.Order) > 0 {
		if len(field.Order) != components {
			return nil, "", inputError("[fields] %s: array %q has %d components, the order %q names %d", key, array.Name, components, field.Order, len(field.Order))
		}
		return field.Order, byStudy, nil
	}
	if len(array.ComponentNames) == components {
		if order, err := mesh.ParseOrder(strings.Join(array.ComponentNames, " "), f.options.AxisX); err == nil && len(order) == components {
			return order, byFile, nil
		}
	}
	order := mesh.DefaultOrder(components)
	if order == nil {
		return nil, "", inputError("[fields] %s: array %q has %d components, a tensor has 3, 4, 6 or 9; state its order", key, array.Name, components)
	}
	return order, byDefault, nil
}

// componentArrays checks the arrays of a tensor that is stored component by component
// and returns their number.
func (f *fieldFinder) componentArrays(key string, field *Field, on mesh.Location) (int, error) {
	if len(field.Arrays) > 9 {
		return 0, studyError("[fields] %s names %d arrays, a tensor has at most 9 components", key, len(field.Arrays))
	}
	for _, name := range field.Arrays {
		i := slices.IndexFunc(f.arrays, func(a mesh.Array) bool { return a.On == on && a.Name == name })
		if i < 0 {
			return 0, f.missing(key, &Field{Arrays: []string{name}, On: on})
		}
		if f.arrays[i].Components != 1 {
			return 0, inputError("[fields] %s: array %q has %d components, one of several component arrays must have 1", key, name, f.arrays[i].Components)
		}
	}
	return len(field.Arrays), nil
}

// column adds an array to what is read.
func (f *fieldFinder) column(on mesh.Location, name string) int {
	switch on {
	case mesh.OnPoint:
		return wantColumn(&f.in.want.PointValues, name)
	case mesh.OnField:
		return wantColumn(&f.in.want.FieldValues, name)
	}
	return wantColumn(&f.in.want.CellValues, name)
}

// neededComponents returns the places of a tensor that a file must have; the law
// completes the others.
func neededComponents(idealisation Idealisation) []int {
	switch idealisation {
	case Axisymmetric:
		return []int{0, 1, 2, 3}
	case Solid:
		return []int{0, 1, 2, 3, 4, 5}
	}
	return []int{0, 1, 3}
}

// checkComponents refuses tensors that lack components which no law can complete.
func (f *fieldFinder) checkComponents(source EnergySource) error {
	in := f.in
	needed := neededComponents(f.options.Idealisation)
	names := []string{"xx", "yy", "zz", "xy", "yz", "xz"}
	for _, field := range []struct {
		key   string
		input *tensorInput
	}{{"stress", &in.stress}, {"strain", &in.strain}, {"thermal_strain", &in.thermalStrain}, {"plastic_strain", &in.plasticStrain}} {
		if !field.input.exists() {
			continue
		}
		for _, i := range needed {
			if !field.input.layout.Has(i) && !(i >= 3 && strings.HasPrefix(field.key, "thermal")) {
				return inputError("the %s has no %s component, which a model of idealisation %q needs", plain(field.key), names[i], f.options.Idealisation)
			}
		}
	}
	if f.options.Idealisation != PlaneStrain || !in.strain.exists() || in.strain.layout.Has(2) {
		return nil
	}
	// Elastic ε_zz is then -(thermal + plastic), so that these must be known.
	if in.thermalStrain.exists() && !in.thermalStrain.layout.Has(2) {
		return inputError("the strain has no zz component, and neither has the thermal strain: in plane strain the elastic zz strain is then unknown")
	}
	if in.plasticStrain.exists() && !in.strainIsElastic && !in.plasticStrain.layout.Has(2) {
		return inputError("the strain has no zz component, and neither has the plastic strain: in plane strain the elastic zz strain is then unknown")
	}
	return nil
}

// findOthers resolves the fields of single numbers and the displacement.
func (f *fieldFinder) findOthers(source EnergySource, on mesh.Location) error {
	fields, in := &f.options.Fields, f.in
	if err := f.scalar("equivalent_plastic_strain", &fields.EquivalentPlasticStrain, on, &in.equivalentPlasticStrain, &in.used.EquivalentPlasticStrain, equivalentPlasticStrainRole); err != nil {
		return err
	}
	// An array of thermal strain wins over temperature with expansion.
	if (in.strain.exists() && !in.strainIsElastic || source == FromDisplacement) && !in.thermalStrain.exists() {
		if err := f.findTemperature(source); err != nil {
			return err
		}
	}
	f.noteOtherThermal()
	if err := f.findDisplacement(source); err != nil {
		return err
	}
	if err := f.findNodalForce(); err != nil {
		return err
	}
	if f.options.ThicknessArray != "" {
		thickness := &Field{Arrays: []string{f.options.ThicknessArray}, On: mesh.OnCell}
		array := f.stated(thickness)
		if array == nil || array.Components != 1 {
			return inputError("[model] thickness: no cell array %q with one component", f.options.ThicknessArray)
		}
		in.thickness = scalarInput{on: mesh.OnCell, column: f.column(mesh.OnCell, array.Name)}
	}
	return f.findElementID()
}

// noteOtherThermal looks for thermal strain that the energy does not need, because it
// comes from stress or from an elastic strain: the balance has to know of it.
func (f *fieldFinder) noteOtherThermal() {
	in, fields := f.in, &f.options.Fields
	if in.thermalStrain.exists() || in.temperature.exists() {
		return
	}
	var list []mesh.Array
	if !fields.ThermalStrain.Off {
		list = f.candidates(0, f.isTensor, thermalStrainRole)
	}
	if expands := func(m Material) bool { return Number(m.ThermalExpansion).Exists() }; !fields.Temperature.Off && slices.ContainsFunc(f.options.Materials, expands) {
		list = append(list, f.candidates(0, isScalar, temperatureRole)...)
	}
	if len(list) > 0 {
		in.otherThermal = list[0].Name
	}
}

// findDisplacement resolves the displacement: needed where the energy comes from it,
// else only named.
func (f *fieldFinder) findDisplacement(source EnergySource) error {
	field := &f.options.Fields.Displacement
	array, why, err := f.choose("displacement", field, mesh.OnPoint, isVector, displacementRole)
	if err != nil && source != FromDisplacement && !field.IsStated() {
		return nil // not used, so that several candidates do no harm
	}
	if err != nil || array == nil {
		return err
	}
	if f.in.displacement, err = f.vector("displacement", field, array); err != nil {
		return err
	}
	f.in.used.Displacement = &FieldUsed{
		Array: strings.Join(f.in.displacement.names, " "), On: array.On.String(), DecidedBy: decidedBy(field), Why: why,
	}
	if source != FromDisplacement {
		f.in.used.Displacement.Why += "; the energy does not use it"
		return nil
	}
	f.in.displacement = f.in.displacement.wantIn(&f.in.want.PointValues)
	return nil
}

// vector returns the input of a vector field on points, of one array or of several that
// hold one component each.
func (f *fieldFinder) vector(key string, field *Field, array *mesh.Array) (vectorInput, error) {
	in := vectorInput{names: []string{array.Name}, components: array.Components}
	components := array.Components
	if len(field.Arrays) > 1 {
		var err error
		if components, err = f.componentArrays(key, field, array.On); err != nil {
			return in, err
		}
		in.names = field.Arrays
	}
	if array.On != mesh.OnPoint || !isVector(components) {
		return in, inputError("[fields] %s: array %s is no vector on points", key, describe(*array))
	}
	return in, nil
}

// findTemperature resolves the temperature. One that the study does not name, and that
// some material has no reference for, is left alone beside a stress: the numbers then
// tell whether the strain carries a thermal part.
func (f *fieldFinder) findTemperature(source EnergySource) error {
	if !f.options.Fields.Temperature.IsStated() && source == FromStressStrain &&
		slices.ContainsFunc(f.options.Materials, func(m Material) bool {
			return Number(m.ThermalExpansion).Exists() && !Number(m.ReferenceTemperature).Exists()
		}) {
		return nil
	}
	if !slices.ContainsFunc(f.options.Materials, func(m Material) bool { return Number(m.ThermalExpansion).Exists() }) {
		if f.options.Fields.Temperature.IsStated() {
			return studyError("[fields] temperature is stated, but no material has a thermal_expansion")
		}
		return nil
	}
	field := &f.options.Fields.Temperature
	for _, on := range f.locations() {
		if err := f.scalar("temperature", field, on, &f.in.temperature, &f.in.used.Temperature, temperatureRole); err != nil || f.in.temperature.exists() {
			return err
		}
	}
	return nil
}

// findElementID resolves the file's own cell numbers.
func (f *fieldFinder) findElementID() error {
	field := &f.options.Fields.ElementID
	array, why, err := f.choose("element_id", field, mesh.OnCell, isScalar, elementIDRole)
	if err != nil && !field.IsStated() {
		return nil // numbers are a comfort; several candidates are no reason to stop
	}
	if err != nil || array == nil {
		return err
	}
	if array.Components != 1 {
		return inputError("[fields] element_id: array %q has %d components, want 1", array.Name, array.Components)
	}
	if array.On != mesh.OnCell {
		return inputError("[fields] element_id: array %q is on points, element numbers are on cells", array.Name)
	}
	if !field.IsStated() && !array.IsInteger() {
		return nil
	}
	f.in.elementID = wantColumn(&f.in.want.Labels, array.Name)
	f.in.used.ElementID = &FieldUsed{Array: array.Name, On: "cell", DecidedBy: decidedBy(field), Why: why}
	return nil
}

// scalar resolves one field of single numbers.
func (f *fieldFinder) scalar(key string, field *Field, on mesh.Location, to *scalarInput, used **FieldUsed, roles ...role) error {
	array, why, err := f.choose(key, field, on, isScalar, roles...)
	if err != nil || array == nil {
		return err
	}
	if array.Components != 1 {
		return inputError("[fields] %s: array %q has %d components, want 1", key, array.Name, array.Components)
	}
	points := 0
	if field.Integration || array.On == mesh.OnField {
		if points, _, err = f.settleRule(key, field, array); err != nil {
			return err
		}
	}
	*to = scalarInput{array.On, f.column(array.On, array.Name), points}
	*used = &FieldUsed{Array: array.Name, On: usedOn(array.On, points), DecidedBy: decidedBy(field), Why: why}
	return nil
}

// decidedBy tells a stated field from one that was found by its name.
func decidedBy(field *Field) string {
	if field.IsStated() {
		return string(byStudy)
	}
	return string(byDefault)
}
